/* Noise, steps, saturation, spikes and sampling, on invented spectra of which the truth is known. */
#include <bandtally/spectrum.h>

#include <math.h>

#define LOW_NM 350
#define HIGH_NM 1850

/* What an invented spectrum is made of. Absorbance is tail and bands times @scale. */
typedef struct {
  const char *name;
  double spacing_nm, noise, scale;
  double step_nm[3], step[3];   /* added to the absorbance at longer waves; 0 for none */
  double edge_nm;               /* a band edge of 0.1, this wide: steep, but no step; 0 for none */
  double spike_nm, spike;
  double ceiling, stray;        /* cut off there; or bent towards -log10 (stray); 0 for none */
  const char *flags;
} Made;

static double
normal (GRand *random)
{
  return sqrt (-2 * log (1 - g_rand_double (random))) * cos (2 * G_PI * g_rand_double (random));
}

static double
gaussian (double e, double centre, double fwhm)
{
  return exp (-4 * M_LN2 * (e - centre) * (e - centre) / (fwhm * fwhm));
}

static double
truth (const Made *made, double nm)
{
  const double e = bt_ev_from_nm (nm), tail = 0.8 / (1 + pow ((e - 4.5) / 1.4, 2));
  double a = made->scale * (tail + 0.3 * gaussian (e, 0.72, 0.12) + 0.2 * gaussian (e, 1.25, 0.12) + 0.05 * gaussian (e, 1.85, 0.15));

  if (made->edge_nm > 0)
    a += 0.1 / (1 + exp ((nm - 1100) / (made->edge_nm / 4)));
  return a;
}

static BtSpectrum *
make (const Made *made, guint32 seed, gsize *n)
{
  g_autoptr (GRand) random = g_rand_new_with_seed (seed);
  g_autoptr (GError) error = NULL;
  g_autofree double *x = NULL, *y = NULL;
  BtSpectrum *spectrum;

  *n = (gsize) ((HIGH_NM - LOW_NM) / made->spacing_nm) + 1;
  x = g_new (double, *n);
  y = g_new (double, *n);
  for (gsize i = 0; i < *n; i++)
    {
      double t;

      x[i] = LOW_NM + made->spacing_nm * (double) i;
      y[i] = truth (made, x[i]);
      if (made->stray > 0)
        y[i] = -log10 ((pow (10, -y[i]) + made->stray) / (1 + made->stray));
      for (guint k = 0; k < 3; k++)
        if (made->step_nm[k] > 0 && x[i] > made->step_nm[k])
          y[i] += made->step[k];
      /* A detector's noise is the same in transmittance wherever it is. */
      t = pow (10, -y[i]) + made->noise * BT_LN10 * normal (random);
      y[i] = t > 1e-6 ? -log10 (t) : 6;
      if (fabs (x[i] - made->spike_nm) < made->spacing_nm / 2)
        y[i] += made->spike;
      if (made->ceiling > 0)
        y[i] = fmin (y[i], made->ceiling);
      y[i] = round (y[i] * 1e5) / 1e5;
    }
  spectrum = bt_spectrum_new (x, y, *n, BT_X_NM, BT_Y_ABSORBANCE, made->name, &error);
  g_assert_no_error (error);
  return spectrum;
}

static const Made rows[] = {
  { "clean", 1, 5e-4, 1 },
  { "clean, fine", 0.5, 2e-4, 1 },
  { "clean, coarse", 2, 1e-3, 1 },
  { "almost without noise", 1, 1e-6, 1 },
  { "one step", 1, 5e-4, 1, { 860.5 }, { 0.015 }, .flags = "detector-step" },
  { "one step down", 1, 5e-4, 1, { 860.5 }, { -0.015 }, .flags = "detector-step" },
  { "step on a band's flank", 1, 2e-4, 1, { 1040.5 }, { 0.01 }, .flags = "detector-step" },
  { "step on a band's crown", 1, 2e-4, 1, { 992.5 }, { 0.01 }, .flags = "detector-step" },
  { "three steps", 1, 2e-4, 1, { 430.5, 860.5, 1500.5 }, { 0.015, -0.02, 0.015 }, .flags = "detector-step" },
  { "step, fine", 0.5, 5e-4, 1, { 800.25 }, { 0.01 }, .flags = "detector-step" },
  { "step, coarse", 5, 2e-4, 1, { 862.5 }, { 0.02 }, .flags = "detector-step" },
  { "step lost in noise", 1, 5e-3, 1, { 860.5 }, { 0.002 } },
  { "band edge 30 nm wide", 1, 5e-4, 1, .edge_nm = 30 },
  { "band edge 30 nm wide, little noise", 1, 2e-5, 1, .edge_nm = 30 },
  { "spike", 1, 5e-4, 1, .spike_nm = 1000, .spike = 0.03, .flags = "spikes" },
  { "spike down", 1, 5e-4, 1, .spike_nm = 656, .spike = -0.05, .flags = "spikes" },
  { "cut off", 1, 1e-4, 4.5, .ceiling = 2, .flags = "saturated" },
  { "stray light", 1, 5e-4, 5, .stray = 3e-3, .flags = "saturated" },
  { "dark", 1, 1e-3, 5, .flags = "saturated" },
  { "too coarse", 40, 1e-4, 1, .flags = "sampling-coarse" },
};

static char *
flag_codes (BtSpectrum *spectrum)
{
  const GPtrArray *flags = bt_spectrum_get_flags (spectrum);
  GString *codes = g_string_new (NULL);

  for (guint i = 0; i < flags->len; i++)
    {
      const char *code = ((const BtFlag *) g_ptr_array_index (flags, i))->code;

      if (i == 0 || !g_str_equal (code, ((const BtFlag *) g_ptr_array_index (flags, i - 1))->code))
        g_string_append_printf (codes, "%s%s", i > 0 ? " " : "", code);
    }
  return g_string_free (codes, FALSE);
}

static void
check_steps (const Made *made, BtSpectrum *spectrum)
{
  gsize n;
  const BtStep *steps = bt_spectrum_get_steps (spectrum, &n);
  guint expected = 0;

  if (made->flags == NULL || !g_str_equal (made->flags, "detector-step"))
    {
      g_assert_cmpuint (n, ==, 0);
      return;
    }
  for (guint k = 0; k < 3; k++)
    expected += made->step_nm[k] > 0 ? 1 : 0;
  g_assert_cmpuint (n, ==, expected);
  for (gsize i = 0; i < n; i++)
    {
      /* By energy, so from long waves on; what is added at long waves is taken off above the step's energy. */
      const guint k = expected - 1 - (guint) i;

      g_test_message ("at %.1f nm: %.5f +- %.5f", bt_nm_from_ev (steps[i].energy_ev), -steps[i].size, steps[i].size_u);
      g_assert_cmpfloat_with_epsilon (bt_nm_from_ev (steps[i].energy_ev), made->step_nm[k], made->spacing_nm);
      g_assert_cmpfloat_with_epsilon (-steps[i].size, made->step[k], 3.5 * steps[i].size_u);
      g_assert_cmpfloat (6 * steps[i].size_u, <, fabs (steps[i].size));
    }
}

static void
test_flags (gconstpointer data)
{
  const Made *made = data;

  for (guint32 seed = 1; seed <= 10; seed++)
    {
      gsize n;
      g_autoptr (BtSpectrum) spectrum = make (made, seed, &n);
      g_autofree char *codes = flag_codes (spectrum);

      g_assert_cmpstr (codes, ==, made->flags != NULL ? made->flags : "");
      check_steps (made, spectrum);
    }
}

/* The estimate follows the noise that was put in: u_A = u_T / (T ln 10). */
static void
test_noise (void)
{
  static const Made made[] = { { "1e-4", 1, 1e-4, 1 }, { "1e-3", 1, 1e-3, 1 }, { "fine", 0.25, 3e-4, 1 }, { "dark", 1, 2e-4, 2 } };

  for (guint m = 0; m < G_N_ELEMENTS (made); m++)
    {
      double ratio = 0;
      gsize n;
      g_autoptr (BtSpectrum) spectrum = make (&made[m], 5, &n);
      const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, NULL), *noise = bt_spectrum_get_noise (spectrum, NULL);

      for (gsize i = 0; i < n; i++)
        {
          const double u = made[m].noise * pow (10, truth (&made[m], bt_nm_from_ev (energy_ev[i])));

          /* A median of 61: within a factor of two everywhere. */
          g_assert_cmpfloat (noise[i], >, 0.5 * u);
          g_assert_cmpfloat (noise[i], <, 2 * u);
          ratio += noise[i] / u / (double) n;
        }
      g_test_message ("%s: mean ratio %.3f", made[m].name, ratio);
      g_assert_cmpfloat_with_epsilon (ratio, 1, 0.08);
    }
}

/* Readings written with few digits have at least the noise of their last digit, digit / sqrt (12). */
static void
test_digits (void)
{
  double x[200], y[200];
  g_autoptr (BtSpectrum) spectrum = NULL;
  const double *noise;

  for (guint i = 0; i < 200; i++)
    {
      x[i] = 500 + i;
      y[i] = round (100 * (0.5 - 0.001 * i)) / 100;
    }
  spectrum = bt_spectrum_new (x, y, 200, BT_X_NM, BT_Y_ABSORBANCE, "digits", NULL);
  noise = bt_spectrum_get_noise (spectrum, NULL);
  for (guint i = 0; i < 200; i++)
    g_assert_cmpfloat (noise[i], >=, 0.01 / sqrt (12) * 0.999);
}

/* A spike has as much uncertainty as it stands out, and its neighbours keep theirs. */
static void
test_spike_weight (void)
{
  static const Made made = { "spike", 1, 5e-4, 1, .spike_nm = 1000, .spike = 0.03 };
  gsize n;
  g_autoptr (BtSpectrum) spectrum = make (&made, 3, &n);
  const double *noise = bt_spectrum_get_noise (spectrum, NULL);
  const gsize at = n - 1 - (1000 - LOW_NM);

  g_assert_cmpfloat_with_epsilon (noise[at], 0.03, 0.004);
  g_assert_cmpfloat (noise[at - 1], <, 0.002);
  g_assert_cmpfloat (noise[at + 1], <, 0.002);
}

/* What is cut off is left out with everything down to a decade below, and nothing else. */
static void
test_saturated_range (void)
{
  static const Made made = { "cut off", 1, 1e-4, 4.5, .ceiling = 2 };
  gsize n, n_ranges;
  g_autoptr (BtSpectrum) spectrum = make (&made, 3, &n);
  const BtRange *ranges = bt_spectrum_get_saturated (spectrum, &n_ranges);

  g_assert_cmpuint (n_ranges, ==, 1);
  if (n_ranges != 1)
    return;
  for (double nm = LOW_NM; nm <= HIGH_NM; nm++)
    {
      const gboolean inside = bt_ev_from_nm (nm) >= ranges[0].low_ev && bt_ev_from_nm (nm) <= ranges[0].high_ev;

      if (truth (&made, nm) > 1.99)
        g_assert_true (inside);
      if (inside)
        g_assert_cmpfloat (truth (&made, nm), >, 0.95);
    }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  for (guint i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      g_autofree char *path = g_strdup_printf ("/spectrum/faults/%s", rows[i].name);

      g_test_add_data_func (path, &rows[i], test_flags);
    }
  g_test_add_func ("/spectrum/noise", test_noise);
  g_test_add_func ("/spectrum/digits", test_digits);
  g_test_add_func ("/spectrum/spike-weight", test_spike_weight);
  g_test_add_func ("/spectrum/saturated-range", test_saturated_range);
  return g_test_run ();
}
