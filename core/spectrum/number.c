/* Numbers from text, whatever the locale. */
#include "text-private.h"

#include <math.h>
#include <string.h>

/* Every power of ten that a double holds exactly. */
static const double powers[] = { 1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,  1e8,  1e9,  1e10, 1e11,
                                 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22 };

static inline gboolean
is_digit (char c)
{
  return (guint8) (c - '0') < 10;
}

/* Every integer up to this is exact. */
#define EXACT G_GUINT64_CONSTANT (9007199254740992)

/* The long way, for numbers of many digits or far powers. */
static gboolean
convert_slowly (const char *text, gsize n, char decimal, double *value)
{
  char buffer[64], *copy = n < sizeof buffer ? buffer : g_malloc (n + 1), *end;
  gboolean whole;

  memcpy (copy, text, n);
  copy[n] = '\0';
  for (gsize i = 0; i < n; i++)
    if (copy[i] == decimal)
      copy[i] = '.';
    else if (copy[i] == 'd' || copy[i] == 'D')
      copy[i] = 'e';
  *value = g_ascii_strtod (copy, &end);
  whole = end == copy + n;
  if (copy != buffer)
    g_free (copy);
  /* Beyond every double: no reading. */
  if (!isfinite (*value))
    *value = (double) NAN;
  return whole;
}

/* The exponent behind a mantissa, E or (Fortran) D: returns where it ends, NULL where the letter has no digits behind it. */
static inline const char *
scan_exponent (const char *at, const char *end, int *exponent)
{
  gboolean negative = FALSE;

  at++;
  if (at < end && (*at == '-' || *at == '+'))
    negative = *at++ == '-';
  if (at == end || !is_digit (*at))
    return NULL;
  for (*exponent = 0; at < end && is_digit (*at); at++)
    *exponent = MIN (*exponent * 10 + (*at - '0'), 100000);
  if (negative)
    *exponent = -*exponent;
  return at;
}

/* Eight digits at once: neighbours are joined to pairs, pairs to fours, fours to the eight. FALSE where there are fewer. */
static inline gboolean
scan_eight (const char *at, guint64 *number)
{
  guint64 eight;

  memcpy (&eight, at, 8);
  eight = GUINT64_FROM_LE (eight) ^ G_GUINT64_CONSTANT (0x3030303030303030);
  /* Bytes of 0 to 9 keep their upper half empty, and so do they with 6 added. */
  if (((eight | (eight + G_GUINT64_CONSTANT (0x0606060606060606))) & G_GUINT64_CONSTANT (0xf0f0f0f0f0f0f0f0)) != 0)
    return FALSE;
  eight = (eight * 10 + (eight >> 8)) & G_GUINT64_CONSTANT (0x00ff00ff00ff00ff);
  eight = (eight * 100 + (eight >> 16)) & G_GUINT64_CONSTANT (0x0000ffff0000ffff);
  *number = (eight * 10000 + (eight >> 32)) & G_GUINT64_CONSTANT (0xffffffff);
  return TRUE;
}

/* Digits of the number at @at without the zeros it begins with. */
static gsize
count_digits (const char *at, const char *end, char decimal)
{
  gsize count = 0;

  for (; at < end && (is_digit (*at) || *at == decimal); at++)
    if (*at != decimal && (count > 0 || *at != '0'))
      count++;
  return count;
}

/* FALSE where the long way is needed. An integer below 2^53 and a power of ten up to 10^22 are exact, so there is one rounding and the value is that of
 * strtod (Clinger, PLDI 1990). */
static inline gboolean
convert (guint64 digits, int power, double *value)
{
  if (digits > EXACT || power < -22 || power > 22)
    return bt_text_round_decimal (digits, power, value);
  *value = power < 0 ? (double) digits / powers[-power] : (double) digits * powers[power];
  return TRUE;
}

/* Any number. */
static const char *
scan_any (const char *at, const char *end, char decimal, double *value)
{
  const char *start;
  gboolean negative = FALSE;
  guint64 digits = 0;
  gsize count;
  int power = 0;

  if (at < end && (*at == '-' || *at == '+'))
    negative = *at++ == '-';
  start = at;
  for (; at < end && is_digit (*at); at++)
    digits = digits * 10 + (guint64) (*at - '0');
  count = (gsize) (at - start);
  if (at < end && *at == decimal)
    {
      const char *point = ++at;

      for (; at < end && is_digit (*at); at++)
        digits = digits * 10 + (guint64) (*at - '0');
      count += (gsize) (at - point);
      power = -(int) MIN (at - point, 100000);
      /* A comma with nothing behind it ends the number and is none of its signs. */
      if (at == point && decimal == ',')
        at--;
    }
  if (count == 0)
    return NULL;
  if (at < end && ((*at | 0x20) == 'e' || (*at | 0x20) == 'd'))
    {
      int exponent;

      at = scan_exponent (at, end, &exponent);
      if (at == NULL)
        return NULL;
      power += exponent;
    }
  if (G_UNLIKELY (count > 19))
    count = count_digits (start, at, decimal);
  if (!(count <= 19 && convert (digits, power, value)) && !convert_slowly (start, (gsize) (at - start), decimal, value))
    return NULL;
  if (negative)
    *value = -*value;
  return at;
}

/* The commonest numbers, with as few questions as will do: a processor foretells their answers from line to line. A line end stands behind @at, before
 * @end, so that no loop has to look for the end. */
static inline __attribute__ ((always_inline)) const char *
scan_number (const char *at, const char *end, char decimal, double *value)
{
  const char *const begin = at;
  const gboolean negative = *at == '-';
  const char *const start = at += negative;
  gssize most = 19;
  guint64 digits = 0, eight;
  int power = 0;

  for (; is_digit (*at); at++)
    digits = digits * 10 + (guint64) (*at - '0');
  if (at == start)
    return scan_any (begin, end, decimal, value);
  if (*at == decimal)
    {
      const char *point = ++at;

      while (end - at >= 8 && scan_eight (at, &eight))
        {
          digits = digits * 100000000 + eight;
          at += 8;
        }
      for (; is_digit (*at); at++)
        digits = digits * 10 + (guint64) (*at - '0');
      if (at == point)
        return scan_any (begin, end, decimal, value);
      power = (int) (at - point);
      most++;
    }
  if (at - start > most)
    return scan_any (begin, end, decimal, value);
  if ((*at | 0x20) == 'e' || (*at | 0x20) == 'd')
    {
      const gboolean signed_ = at[1] == '-' || at[1] == '+', below = at[1] == '-';
      int exponent;

      if (is_digit (at[1 + signed_]) && is_digit (at[2 + signed_]) && !is_digit (at[3 + signed_]))
        {
          exponent = (at[1 + signed_] - '0') * 10 + (at[2 + signed_] - '0');
          power += below ? exponent : -exponent;
          at += 3 + signed_;
        }
      else
        {
          at = scan_exponent (at, end, &exponent);
          if (at == NULL)
            return NULL;
          power -= exponent;
        }
    }
  if (digits <= EXACT && (guint) power < G_N_ELEMENTS (powers))
    *value = (double) digits / powers[power];
  else if (!convert (digits, -power, value))
    return scan_any (begin, end, decimal, value);
  if (negative)
    *value = -*value;
  return at;
}

const char *
bt_text_scan_number (const char *at, const char *end, char decimal, double *value)
{
  return scan_any (at, end, decimal, value);
}

/* @blanks: whether blanks split the numbers; made twice, for either answer. */
static inline __attribute__ ((always_inline)) const char *
scan_row (const char *at, const char *end, BtDialect dialect, gboolean blanks, double *numbers, gsize room, gsize *n)
{
  for (gsize count = 0; count < room;)
    {
      const char *behind;

      while (*at == ' ' || (blanks && *at == '\t'))
        at++;
      at = behind = scan_number (at, end, dialect.decimal, &numbers[count++]);
      if (at == NULL)
        return NULL;
      while (blanks && end - at >= 4 && memcmp (at, "    ", 4) == 0)
        at += 4;
      while (*at == ' ' || (blanks && *at == '\t'))
        at++;
      if (*at == '\n' || *at == '\r')
        {
          *n = count;
          return count >= 2 ? at : NULL;
        }
      if (blanks ? at == behind : *at++ != dialect.delimiter)
        return NULL;
    }
  return NULL;
}

const char *
bt_text_scan_row (const char *at, const char *end, BtDialect dialect, double *numbers, gsize room, gsize *n)
{
  return dialect.delimiter == ' ' ? scan_row (at, end, dialect, TRUE, numbers, room, n) : scan_row (at, end, dialect, FALSE, numbers, room, n);
}

gboolean
bt_text_number (const char *text, gsize n, char decimal, double *value)
{
  const char *end = text + n;
  gboolean negative = FALSE;

  if (n > 3 && memcmp (text, "\342\210\222", 3) == 0)
    {
      text += 3;
      negative = TRUE;
      if (!is_digit (*text) && *text != decimal)
        return FALSE;
    }
  while (end > text && (end[-1] == '%' || end[-1] == ' '))
    end--;
  if (bt_text_scan_number (text, end, decimal, value) != end)
    return FALSE;
  if (negative)
    *value = -*value;
  return TRUE;
}

gboolean
bt_text_is_missing (const char *text, gsize n)
{
  static const char *const words[] = { "nan",  "n/a", "#n/a", "na",   "over",    "ovr",   "overflow", "ovfl", "inf",   "+inf", "-inf",
                                       "-nan", "#nv", "#num!", "#value!", "#div/0!", "null", "none",  "sat",  "under", "1.#ind", "1.#inf",
                                       "-1.#ind", "1.#qnan", "-1.#inf", "?", "." };

  if (n == 0)
    return TRUE;
  for (gsize i = 0; i < G_N_ELEMENTS (words); i++)
    if (strlen (words[i]) == n && g_ascii_strncasecmp (words[i], text, n) == 0)
      return TRUE;
  for (gsize i = 0; i < n; i++)
    if (text[i] != text[0])
      return FALSE;
  return text[0] == '*' || text[0] == '-' || text[0] == '#';
}
