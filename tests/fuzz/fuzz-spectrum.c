/* Whatever the bytes of a file: spectra that hold what their header promises, or one sentence that names the file. Text and JCAMP-DX are told apart by
 * the reader itself, so one target does for both, each with seeds of its own. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <string.h>

#include "fuzz.h"

static void
check_flags (const GPtrArray *flags)
{
  for (guint i = 0; i < flags->len; i++)
    {
      const BtFlag *flag = g_ptr_array_index (flags, i);

      g_assert_true (flag->code[0] != '\0' && flag->text[0] != '\0' && g_utf8_validate (flag->text, -1, NULL));
    }
}

static void
check_spectrum (BtSpectrum *spectrum)
{
  gsize n, n_raw, n_steps, n_ranges;
  const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, &n), *absorbance = bt_spectrum_get_absorbance (spectrum, NULL);
  const double *noise = bt_spectrum_get_noise (spectrum, NULL);
  const BtStep *steps = bt_spectrum_get_steps (spectrum, &n_steps);
  const BtRange *ranges = bt_spectrum_get_saturated (spectrum, &n_ranges);

  bt_spectrum_get_raw_x (spectrum, &n_raw);
  g_assert_true (n >= BT_SPECTRUM_MIN_POINTS && n <= n_raw);
  for (gsize i = 0; i < n; i++)
    {
      g_assert_true (isfinite (energy_ev[i]) && isfinite (absorbance[i]) && isfinite (noise[i]) && noise[i] > 0);
      g_assert_true (i == 0 || energy_ev[i] > energy_ev[i - 1]);
    }
  for (gsize i = 0; i < n_steps; i++)
    g_assert_true (isfinite (steps[i].size) && isfinite (steps[i].size_u) && steps[i].energy_ev > energy_ev[0] && steps[i].energy_ev < energy_ev[n - 1]);
  for (gsize i = 0; i < n_ranges; i++)
    g_assert_true (ranges[i].low_ev <= ranges[i].high_ev);
  g_assert_true (g_utf8_validate (bt_spectrum_get_title (spectrum), -1, NULL));
  g_assert_true (bt_spectrum_get_reading (spectrum) != NULL && g_utf8_validate (bt_spectrum_get_reading (spectrum), -1, NULL));
  check_flags (bt_spectrum_get_flags (spectrum));
}

/* Written as JCAMP-DX it reads back to the last bit; energies are written in another unit. */
static void
check_round_trip (BtSpectrum *spectrum, BtJcampForm form)
{
  const BtReadOptions options = { -1, (int) bt_spectrum_get_y_unit (spectrum) };
  g_autofree char *text = bt_spectrum_to_jcamp (spectrum, form);
  g_autoptr (GBytes) bytes = g_bytes_new (text, strlen (text));
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) again = bt_spectrum_read_bytes (bytes, "again", &options, &error);
  gsize n, n_again, k = 0;
  const double *x = bt_spectrum_get_raw_x (spectrum, &n), *y = bt_spectrum_get_raw_y (spectrum, NULL), *x_again, *y_again;

  g_assert_no_error (error);
  g_assert_cmpuint (again->len, ==, 1);
  x_again = bt_spectrum_get_raw_x (g_ptr_array_index (again, 0), &n_again);
  y_again = bt_spectrum_get_raw_y (g_ptr_array_index (again, 0), NULL);
  for (gsize i = 0; i < n; i++)
    if (isfinite (x[i]))
      {
        g_assert_cmpuint (k, <, n_again);
        if (bt_spectrum_get_x_unit (spectrum) != BT_X_EV)
          g_assert_cmpfloat (x[i], ==, x_again[k]);
        g_assert_true (isfinite (y[i]) ? !(fabs (y[i] - y_again[k]) > 0) : !isfinite (y_again[k]));
        k++;
      }
  g_assert_cmpuint (k, ==, n_again);
}

int
LLVMFuzzerTestOneInput (const uint8_t *data, size_t size)
{
  g_autoptr (GBytes) bytes = g_bytes_new (data, size);
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, "fuzzed", NULL, &error);

  g_assert_true ((spectra != NULL) == (error == NULL));
  if (spectra == NULL)
    {
      g_assert_true (error->domain == BT_SPECTRUM_ERROR && g_str_has_prefix (error->message, "fuzzed: ") && g_utf8_validate (error->message, -1, NULL));
      return 0;
    }
  g_assert_cmpuint (spectra->len, >, 0);
  for (guint i = 0; i < spectra->len; i++)
    {
      check_spectrum (g_ptr_array_index (spectra, i));
      check_round_trip (g_ptr_array_index (spectra, i), BT_JCAMP_AFFN);
      check_round_trip (g_ptr_array_index (spectra, i), BT_JCAMP_DIFDUP);
    }
  return 0;
}
