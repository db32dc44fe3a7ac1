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
    check_spectrum (g_ptr_array_index (spectra, i));
  return 0;
}
