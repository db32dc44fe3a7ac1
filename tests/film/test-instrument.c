/* The instrument check on made-up scans of standards whose positions and values are the published ones, shifted on purpose. */
#include <bandtally/bandtally.h>

#include <math.h>
#include <string.h>

/* Bands of 3 nm at the control positions of Ph. Eur. 2.2.25 (older edition) on a falling ground, every band @shift_nm too far. */
static BtSpectrum *
holmium_scan (double shift_nm)
{
  static const double bands[] = { 241.15, 287.15, 361.5, 536.3 };
  double x[901], y[901];
  g_autoptr (GError) error = NULL;
  BtSpectrum *spectrum;

  for (int i = 0; i <= 900; i++)
    {
      x[i] = 230 + 0.5 * i;
      y[i] = 0.1 + 0.2 * exp (-(x[i] - 230) / 150);
      for (gsize b = 0; b < G_N_ELEMENTS (bands); b++)
        {
          double u = (x[i] - bands[b] - shift_nm) / 3;

          y[i] += 0.4 * exp (-2.772588722239781 * u * u);
        }
    }
  spectrum = bt_spectrum_new (x, y, 901, BT_X_NM, BT_Y_ABSORBANCE, "holmium", &error);
  g_assert_no_error (error);
  return spectrum;
}

static void
test_holmium (void)
{
  static const struct { double shift; BtCheckState state; } rows[] = { { 0, BT_CHECK_PASSED }, { 0.4, BT_CHECK_PASSED }, { 1.6, BT_CHECK_FAILED } };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      g_autoptr (BtSpectrum) spectrum = holmium_scan (rows[i].shift);
      g_autoptr (GError) error = NULL;
      BtInstrumentCheck *check = bt_instrument_check (spectrum, BT_STANDARD_HOLMIUM, 0, &error);
      g_autofree char *text = NULL;
      guint found = 0;

      g_assert_no_error (error);
      g_assert_cmpint (check->state, ==, rows[i].state);
      for (guint l = 0; l < check->lines->len; l++)
        {
          const BtCheckLine *line = &g_array_index (check->lines, BtCheckLine, l);

          if (isnan (line->low) || isnan (line->found))
            continue;
          g_assert_cmpfloat_with_epsilon (line->found - line->published, rows[i].shift, 0.05);
          found++;
        }
      g_assert_cmpuint (found, ==, 4);
      text = bt_instrument_check_to_text (check, spectrum, 0);
      g_assert_nonnull (strstr (text, rows[i].state == BT_CHECK_FAILED ? "OUTSIDE" : "within"));
      bt_instrument_check_free (check);
    }
}

/* Dichromate 60 mg/L: 0.743, 0.865, 0.290, 0.643 at 235, 257, 313, 350 nm (nominal values made from NIST SRM 935a). */
static BtSpectrum *
dichromate_scan (double factor)
{
  static const double at[] = { 225, 235, 257, 313, 350, 400 }, value[] = { 0.70, 0.743, 0.865, 0.290, 0.643, 0.2 };
  double x[351], y[351];
  g_autoptr (GError) error = NULL;
  BtSpectrum *spectrum;

  for (int i = 0; i <= 350; i++)
    {
      int k = 0;

      x[i] = 225 + 0.5 * i;
      while (k < 4 && x[i] > at[k + 1])
        k++;
      y[i] = factor * (value[k] + (value[k + 1] - value[k]) * (x[i] - at[k]) / (at[k + 1] - at[k]));
    }
  spectrum = bt_spectrum_new (x, y, 351, BT_X_NM, BT_Y_ABSORBANCE, "dichromate", &error);
  g_assert_no_error (error);
  return spectrum;
}

static void
test_dichromate (void)
{
  g_autoptr (BtSpectrum) good = dichromate_scan (1.005), bad = dichromate_scan (1.03);
  g_autoptr (GError) error = NULL;
  BtInstrumentCheck *check = bt_instrument_check (good, BT_STANDARD_DICHROMATE, 60, &error);

  g_assert_no_error (error);
  g_assert_cmpuint (check->lines->len, ==, 4);
  g_assert_cmpint (check->state, ==, BT_CHECK_PASSED);
  g_assert_cmpfloat_with_epsilon (check->deviation, 0.005 * (0.743 + 0.865 + 0.290 + 0.643) / 4, 1e-4);
  bt_instrument_check_free (check);
  check = bt_instrument_check (bad, BT_STANDARD_DICHROMATE, 60, &error);
  g_assert_no_error (error);
  g_assert_cmpint (check->state, ==, BT_CHECK_FAILED);
  bt_instrument_check_free (check);
  g_assert_null (bt_instrument_check (good, BT_STANDARD_DICHROMATE, 55, &error));
  g_assert_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES);
}

/* A film is no standard: nothing is found where its bands would have to be. */
static void
test_out_of_range (void)
{
  double x[100], y[100];
  g_autoptr (BtSpectrum) spectrum = NULL;
  g_autoptr (GError) error = NULL;

  for (int i = 0; i < 100; i++)
    {
      x[i] = 700 + 10 * i;
      y[i] = 0.1 + 1e-4 * i;
    }
  spectrum = bt_spectrum_new (x, y, 100, BT_X_NM, BT_Y_ABSORBANCE, "film", &error);
  g_assert_no_error (error);
  g_assert_null (bt_instrument_check (spectrum, BT_STANDARD_HOLMIUM, 0, &error));
  g_assert_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/instrument/holmium", test_holmium);
  g_test_add_func ("/instrument/dichromate", test_dichromate);
  g_test_add_func ("/instrument/out-of-range", test_out_of_range);
  return g_test_run ();
}
