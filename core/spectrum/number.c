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

#ifdef __SIZEOF_INT128__
/* Numbers written with every bit: @digits, above 2^53, over 10^@places, up to 19. Integer division to at least 54 bits, what is left over told apart
 * from nothing, so that the one rounding (half to even) is that of strtod. */
static double
divide_exactly (guint64 digits, int places)
{
  static const guint64 tens[] = { 1u, 10u, 100u, 1000u, 10000u, 100000u, 1000000u, 10000000u, 100000000u, 1000000000u,
                                  G_GUINT64_CONSTANT (10000000000), G_GUINT64_CONSTANT (100000000000), G_GUINT64_CONSTANT (1000000000000),
                                  G_GUINT64_CONSTANT (10000000000000), G_GUINT64_CONSTANT (100000000000000), G_GUINT64_CONSTANT (1000000000000000),
                                  G_GUINT64_CONSTANT (10000000000000000), G_GUINT64_CONSTANT (100000000000000000),
                                  G_GUINT64_CONSTANT (1000000000000000000), G_GUINT64_CONSTANT (10000000000000000000) };
  const unsigned __int128 numerator = (unsigned __int128) digits << 64, quotient = numerator / tens[places];
  const gboolean exact = quotient * tens[places] == numerator;
  const guint64 upper = (guint64) (quotient >> 64);
  const int length = upper != 0 ? 128 - __builtin_clzll (upper) : 64 - __builtin_clzll ((guint64) quotient), shift = length - 53;
  const unsigned __int128 half = (unsigned __int128) 1 << (shift - 1), rest = quotient & ((half << 1) - 1);
  guint64 mantissa = (guint64) (quotient >> shift);

  if (rest > half || (rest == half && (!exact || (mantissa & 1) != 0)))
    mantissa++;
  return ldexp ((double) mantissa, shift - 64);
}
#endif

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
#ifdef __SIZEOF_INT128__
  else if (count <= 19 && digits > G_GUINT64_CONSTANT (9007199254740992) && power >= -19 && power <= 0)
    *value = divide_exactly (digits, -power);
#endif
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
