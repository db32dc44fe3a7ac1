/* Units against values from outside: the SI's defining constants, and conversions worked out by hand from them. */
#include <bandtally/units.h>

#include <math.h>

/* SI Brochure, 9th edition (2019): h, c and e are exact (from memory), so h c / e is one rounding away from them. */
static void
test_constants (void)
{
  g_assert_cmpfloat_with_epsilon (BT_HC_EV_NM, 6.62607015e-34 * 299792458 / 1.602176634e-19 * 1e9, 1e-9);
  g_assert_cmpfloat_with_epsilon (BT_HC_EV_NM, 1239.841984332, 1e-9);   /* worked out in long decimals */
  g_assert_cmpfloat_with_epsilon (1e7 / BT_HC_EV_NM, 8065.543937, 1e-6); /* 1/cm per eV, the same */
  g_assert_cmpfloat_with_epsilon (BT_LN10, log (10), 1e-15);
  g_assert_cmpfloat_with_epsilon (BT_GAUSSIAN_AREA, sqrt (G_PI / (4 * G_LN2)), 1e-15);
}

static void
test_conversions (void)
{
  static const struct { BtXUnit unit; double x, energy_ev; } rows[] = {
    { BT_X_PER_CM, 7750, 0.960877538 }, { BT_X_PER_CM, 11750, 1.45681433 }, { BT_X_NM, 550, 2.25425815 }, { BT_X_UM, 0.55, 2.25425815 },
    { BT_X_NM, 1290.322580645, 0.960877538 }, { BT_X_NM, 851.063829787, 1.45681433 }, { BT_X_EV, 1.5, 1.5 }, { BT_X_UM, 1.2398419843, 1 },
  };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      g_assert_cmpfloat_with_epsilon (bt_energy_ev_from_x (rows[i].x, rows[i].unit), rows[i].energy_ev, 5e-9);
      g_assert_cmpfloat_with_epsilon (bt_x_from_energy_ev (rows[i].energy_ev, rows[i].unit) / rows[i].x, 1, 5e-9);
    }
}

/* There and back without loss, over all that spectrophotometers reach. */
static void
test_round_trip (void)
{
  for (int unit = BT_X_NM; unit <= BT_X_EV; unit++)
    for (double energy_ev = 0.05; energy_ev < 12; energy_ev *= 1.07)
      g_assert_cmpfloat_with_epsilon (bt_energy_ev_from_x (bt_x_from_energy_ev (energy_ev, (BtXUnit) unit), (BtXUnit) unit) / energy_ev, 1, 4e-16);
  g_assert_cmpfloat_with_epsilon (bt_nm_from_ev (bt_ev_from_nm (1234.5)), 1234.5, 1e-12);
}

static void
test_names (void)
{
  static const char *const x_names[] = { "nm", "um", "1/cm", "eV" };
  static const char *const y_names[] = { "absorbance", "transmittance", "transmittance %", "reflectance", "reflectance %", "alpha 1/cm" };

  for (int unit = 0; unit < (int) G_N_ELEMENTS (x_names); unit++)
    g_assert_cmpstr (bt_x_unit_name ((BtXUnit) unit), ==, x_names[unit]);
  for (int unit = 0; unit < (int) G_N_ELEMENTS (y_names); unit++)
    g_assert_cmpstr (bt_y_unit_name ((BtYUnit) unit), ==, y_names[unit]);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/units/constants", test_constants);
  g_test_add_func ("/units/conversions", test_conversions);
  g_test_add_func ("/units/round-trip", test_round_trip);
  g_test_add_func ("/units/names", test_names);
  return g_test_run ();
}
