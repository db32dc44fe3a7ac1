/* Numbers in every form that files have, at random: what is read equals g_ascii_strtod() to the last bit, whichever signs split them. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <string.h>

#define N 5000

static guint64
random_digits (GRand *random, int n)
{
  guint64 digits = 1 + (guint64) g_rand_int_range (random, 0, 9);

  while (--n > 0)
    digits = digits * 10 + (guint64) g_rand_int_range (random, 0, 10);
  return digits;
}

/* Any double between 10^@low and 10^@high, with either sign. */
static double
random_double (GRand *random, int low, int high)
{
  const double value = g_rand_double_range (random, 1, 10) * pow (10, g_rand_int_range (random, low, high));

  return g_rand_boolean (random) ? value : -value;
}

typedef char *(*Write) (GRand *random);

static char *
formatted (const char *format, double value)
{
  char text[400];

  return g_strdup (g_ascii_formatd (text, sizeof text, format, value));
}

static char *plain_six (GRand *random) { return formatted ("%.6f", random_double (random, -3, 3)); }
static char *plain_long (GRand *random) { return formatted ("%.17f", random_double (random, -2, 2)); }
static char *longer_than_19 (GRand *random) { return formatted ("%.25f", random_double (random, -6, 6)); }
static char *shortest (GRand *random) { return formatted ("%.17g", random_double (random, -12, 12)); }
static char *every_double (GRand *random) { return formatted ("%.17g", random_double (random, -320, 308)); }
static char *exponent_six (GRand *random) { return formatted ("%.6e", random_double (random, -30, 30)); }
static char *exponent_sixteen (GRand *random) { return formatted ("%.16E", random_double (random, -40, 40)); }
static char *whole (GRand *random) { return g_strdup_printf ("%" G_GUINT64_FORMAT, random_digits (random, g_rand_int_range (random, 1, 20))); }

static char *
any_digits_and_power (GRand *random)
{
  return g_strdup_printf ("%" G_GUINT64_FORMAT "%c%+d", random_digits (random, g_rand_int_range (random, 1, 20)), g_rand_boolean (random) ? 'e' : 'E',
                          g_rand_int_range (random, -80, 81));
}

/* A point at any place, and zeros in front. */
static char *
any_point (GRand *random)
{
  g_autofree char *digits = g_strdup_printf ("%" G_GUINT64_FORMAT, random_digits (random, g_rand_int_range (random, 1, 20)));
  const int place = g_rand_int_range (random, 0, (int) strlen (digits) + 1);

  return g_strdup_printf ("%s%.*s.%s", g_rand_boolean (random) ? "000" : "", place, digits, digits + place);
}

/* Half way between two doubles, and one beside it: the rounding hangs on the last digit. */
static char *
half_way (GRand *random)
{
  const int shift = g_rand_int_range (random, 0, 10);
  const guint64 mantissa = (G_GUINT64_CONSTANT (1) << 52) + (guint64) g_rand_double_range (random, 0, 4503599627370495.0);

  return g_strdup_printf ("%" G_GUINT64_FORMAT, (((mantissa << 1) + 1) << shift) + (guint64) g_rand_int_range (random, -1, 2));
}

/* Just under and over powers of two, where the mantissa runs over. */
static char *
by_powers_of_two (GRand *random)
{
  const double power = ldexp (1, g_rand_int_range (random, -100, 100));

  return formatted ("%.18e", g_rand_boolean (random) ? nextafter (power, 0) : power);
}

static const struct { const char *name; Write write; } forms[] = {
  { "six decimals", plain_six }, { "seventeen decimals", plain_long }, { "more than nineteen digits", longer_than_19 }, { "seventeen digits", shortest },
  { "the whole range", every_double }, { "exponent, six decimals", exponent_six }, { "exponent, sixteen decimals", exponent_sixteen },
  { "whole numbers", whole }, { "any digits, any power", any_digits_and_power }, { "any point", any_point }, { "half way", half_way },
  { "by powers of two", by_powers_of_two },
};

/* Between the columns, between the lines, and the decimal sign. */
static const struct { const char *between, *end; char decimal; } dialects[] = {
  { ",", "\n", '.' }, { ";", "\r\n", ',' }, { "\t", "\n", '.' }, { "   ", "\n", '.' }, { " \t  ", "\r", ',' }, { " ; ", " \n", '.' },
};

static void
check_bits (const char *text, double found)
{
  const double expected = g_ascii_strtod (text, NULL);

  if (memcmp (&expected, &found, sizeof found) == 0 || (!isfinite (expected) && isnan (found)))
    return;
  g_test_message ("%s: found %.17g, expected %.17g", text, found, expected);
  g_test_fail ();
}

static void
test_form (gconstpointer data)
{
  const guint form = GPOINTER_TO_UINT (data);

  for (guint d = 0; d < G_N_ELEMENTS (dialects); d++)
    {
      GRand *random = g_rand_new_with_seed (100 * form + d);
      GString *text = g_string_new (NULL);
      g_autoptr (GPtrArray) numbers = g_ptr_array_new_with_free_func (g_free), spectra = NULL;
      g_autoptr (GBytes) bytes = NULL;
      g_autoptr (GError) error = NULL;
      const double *y;
      gsize n;

      g_string_printf (text, "nm%salpha (1/cm)%s", dialects[d].between, dialects[d].end);
      for (guint i = 0; i < N; i++)
        {
          char *number = forms[form].write (random);
          g_autofree char *written = g_strdelimit (g_strdup (number), ".", dialects[d].decimal);

          /* A comma with nothing behind it is no decimal sign. */
          if (dialects[d].decimal == ',' && g_str_has_suffix (written, ","))
            written[strlen (written) - 1] = '\0';
          g_ptr_array_add (numbers, number);
          g_string_append_printf (text, "%u%c5%s%s%s", 300 + i, dialects[d].decimal, dialects[d].between, written, dialects[d].end);
        }
      bytes = g_string_free_to_bytes (text);
      spectra = bt_spectrum_read_bytes (bytes, "numbers", NULL, &error);
      g_assert_no_error (error);
      y = bt_spectrum_get_raw_y (g_ptr_array_index (spectra, 0), &n);
      g_assert_cmpuint (n, ==, N);
      for (guint i = 0; i < N; i++)
        check_bits (g_ptr_array_index (numbers, i), y[i]);
      g_rand_free (random);
    }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  for (guint i = 0; i < G_N_ELEMENTS (forms); i++)
    {
      g_autofree char *path = g_strdup_printf ("/spectrum/number/%s", forms[i].name);

      g_test_add_data_func (path, GUINT_TO_POINTER (i), test_form);
    }
  return g_test_run ();
}
