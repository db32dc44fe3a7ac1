/* Numbers as text: for people rounded to what is known of them, for files exact. */
#include <langinfo.h>
#include <math.h>
#include <string.h>

#include <bandtally/table.h>

/* Numbers from 10^-4 up to 10^6 are written out; the rest with an exponent. */
#define FIXED_LOW -4
#define FIXED_HIGH 5

/* floor (log10 |value|) after rounding to this many significant digits; 0 for 0. */
static int
decimal_exponent (double value, int digits)
{
  char format[16], text[64];

  if (value == 0)
    return 0;
  g_snprintf (format, sizeof format, "%%.%de", CLAMP (digits, 1, 17) - 1);
  g_ascii_formatd (text, sizeof text, format, value);
  return (int) g_ascii_strtoll (strchr (text, 'e') + 1, NULL, 10);
}

/* @value with @decimals places after a point. */
static char *
fixed (double value, int decimals)
{
  char format[16];
  char *text = g_malloc (400);

  g_snprintf (format, sizeof format, "%%.%df", CLAMP (decimals, 0, 20));
  g_ascii_formatd (text, 400, format, value);
  /* A value that rounds to nothing has no sign. */
  if (text[0] == '-' && strspn (text + 1, "0.") == strlen (text + 1))
    memmove (text, text + 1, strlen (text));
  return text;
}

static char *
localise (char *text)
{
  const char *radix = nl_langinfo (RADIXCHAR);
  char *point = strchr (text, '.');
  char *localised;

  if (point == NULL || radix[0] == '\0' || g_str_equal (radix, "."))
    return text;
  *point = '\0';
  localised = g_strconcat (text, radix, point + 1, NULL);
  g_free (text);
  return localised;
}

char *
bt_format_number (double value, int digits, gboolean localised)
{
  int exponent;
  char *text;

  g_return_val_if_fail (digits > 0, NULL);
  if (isnan (value))
    return g_strdup ("-");
  if (isinf (value))
    return g_strdup (value > 0 ? "inf" : "-inf");
  exponent = decimal_exponent (value, digits);
  if (value == 0)
    text = g_strdup ("0");
  else if (exponent >= FIXED_LOW && exponent <= FIXED_HIGH)
    {
      double unit = pow (10, exponent - digits + 1);

      text = exponent >= digits ? fixed (round (value / unit) * unit, 0) : fixed (value, digits - 1 - exponent);
    }
  else
    {
      char *mantissa = fixed (value / pow (10, exponent), digits - 1);

      text = g_strdup_printf ("%se%d", mantissa, exponent);
      g_free (mantissa);
    }
  return localised ? localise (text) : text;
}

char *
bt_format_uncertain (double value, double u)
{
  int u_exponent, exponent, last;
  long u_digits;
  char *mantissa, *text;

  if (!isfinite (value) || !isfinite (u) || u <= 0)
    return bt_format_number (value, 4, TRUE);
  /* Below a double's own resolution there are no digits to show. */
  if (u < 1e-14 * fabs (value))
    return bt_format_number (value, 15, TRUE);
  /* Two digits of u; the value ends at the same place. */
  u_exponent = decimal_exponent (u, 2);
  last = u_exponent - 1;
  u_digits = lround (u / pow (10, last));
  exponent = MAX (u_exponent, decimal_exponent (value, MAX (1, decimal_exponent (value, 17) - last + 1)));
  if (exponent >= FIXED_LOW && exponent <= FIXED_HIGH)
    {
      /* 24560(120): zeros before the point stand in the value and in the bracket alike. */
      double unit = last > 0 ? pow (10, last) : 1;

      mantissa = last > 0 ? fixed (round (value / unit) * unit, 0) : fixed (value, -last);
      text = g_strdup_printf ("%s(%.0f)", mantissa, (double) u_digits * unit);
    }
  else
    {
      mantissa = fixed (value / pow (10, exponent), exponent - last);
      text = g_strdup_printf ("%s(%ld)e%d", mantissa, u_digits, exponent);
    }
  g_free (mantissa);
  return localise (text);
}

char *
bt_format_exact (double value)
{
  char *text = g_malloc (G_ASCII_DTOSTR_BUF_SIZE);

  for (int digits = 15; digits <= 17; digits++)
    {
      char format[16];

      g_snprintf (format, sizeof format, "%%.%dg", digits);
      g_ascii_formatd (text, G_ASCII_DTOSTR_BUF_SIZE, format, value);
      if (g_ascii_strtod (text, NULL) == value)
        break;
    }
  return text;
}
