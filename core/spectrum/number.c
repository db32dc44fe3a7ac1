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
static const char *
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

const char *
bt_text_scan_number (const char *at, const char *end, char decimal, double *value)
{
  const char *start = at, *digits_at;
  gboolean negative = FALSE;
  guint64 digits = 0;
  gsize count;
  int power = 0;

  if (at < end && (*at == '-' || *at == '+'))
    negative = *at++ == '-';
  digits_at = at;
  for (; at < end && is_digit (*at); at++)
    digits = digits * 10 + (guint64) (*at - '0');
  count = (gsize) (at - digits_at);
  if (at < end && *at == decimal)
    {
      digits_at = ++at;
      for (; at < end && is_digit (*at); at++)
        digits = digits * 10 + (guint64) (*at - '0');
      count += (gsize) (at - digits_at);
      /* A comma with nothing behind it ends the number and is none of its signs. */
      if (at == digits_at && decimal == ',')
        at--;
      power = -(int) MIN (at - digits_at, 100000);
      if (power > 0)
        power = 0;
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
  /* An integer below 2^53 and a power of ten up to 10^22 are exact, so there is one rounding and the value is that of strtod (Clinger,
   * PLDI 1990). */
  if (count <= 19 && digits <= G_GUINT64_CONSTANT (9007199254740992) && power >= -22 && power <= 22)
    *value = power < 0 ? (double) digits / powers[-power] : (double) digits * powers[power];
  else
    {
      if (*start == '-' || *start == '+')
        start++;
      if (!convert_slowly (start, (gsize) (at - start), decimal, value))
        return NULL;
    }
  if (negative)
    *value = -*value;
  return at;
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
