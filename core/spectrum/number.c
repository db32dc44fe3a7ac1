/* Numbers from text, whatever the locale. */
#include "text-private.h"

#include <math.h>
#include <string.h>

static const double powers[] = { 1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,  1e8,  1e9,  1e10, 1e11,
                                 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22 };

/* Up to 15 digits are an exact integer, powers of ten up to 10^22 are exact too: one rounding, so the same value as strtod (Clinger, PLDI
 * 1990). FALSE where the number is not that simple. */
static gboolean
parse_simple (const char *text, gsize n, char decimal, double *value)
{
  const char *end = text + n;
  gboolean negative = FALSE, point = FALSE;
  guint64 digits = 0;
  int count = 0, places = 0;

  if (text < end && (*text == '-' || *text == '+'))
    negative = *text++ == '-';
  for (; text < end; text++)
    {
      if (*text == decimal && !point)
        point = TRUE;
      else if (*text >= '0' && *text <= '9')
        {
          digits = digits * 10 + (guint64) (*text - '0');
          places += point ? 1 : 0;
          if (++count > 15)
            return FALSE;
        }
      else
        return FALSE;
    }
  if (count == 0)
    return FALSE;
  *value = (double) digits / powers[places];
  if (negative)
    *value = -*value;
  return TRUE;
}

gboolean
bt_text_number (const char *text, gsize n, char decimal, double *value)
{
  char buffer[64], *end;

  if (parse_simple (text, n, decimal, value))
    return TRUE;
  if (n == 0 || n >= sizeof buffer || !(g_ascii_isdigit (text[n - 1]) || text[n - 1] == decimal))
    return FALSE;
  memcpy (buffer, text, n);
  buffer[n] = '\0';
  if (decimal == ',')
    {
      if (strchr (buffer, '.') != NULL)
        return FALSE;
      g_strdelimit (buffer, ",", '.');
    }
  /* Fortran writes D for the exponent. */
  g_strdelimit (buffer, "dD", 'e');
  if (strspn (buffer, "+-.0123456789eE") != n)
    return FALSE;
  *value = g_ascii_strtod (buffer, &end);
  return end == buffer + n && isfinite (*value);
}

gboolean
bt_text_is_missing (const char *text, gsize n)
{
  static const char *const words[] = { "", "-", "--", "---", "nan", "NaN", "NAN", "#N/A", "N/A", "n/a", "OVER", "over", "OVR", "inf", "Inf", "-inf",
                                       "#NUM!", "#VALUE!", "NULL", "null" };

  for (gsize i = 0; i < G_N_ELEMENTS (words); i++)
    if (strlen (words[i]) == n && memcmp (words[i], text, n) == 0)
      return TRUE;
  return n > 0 && strspn (text, "*") >= n;
}
