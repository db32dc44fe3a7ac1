/* The tally against the outside: a measured film, forecast films whose fraction is known, and what must hold for any film. */
#include <bandtally/bandtally.h>

#include <math.h>
#include <string.h>

static BtFilm *
forecast_film (const BtForecast *forecast)
{
  gsize n = bt_forecast_n_points (forecast);
  g_autofree double *x = g_new (double, n), *y = g_new (double, n);
  g_autoptr (BtSpectrum) spectrum = NULL;
  g_autoptr (GError) error = NULL;

  bt_forecast_compute (forecast, x, y, &error);
  g_assert_no_error (error);
  spectrum = bt_spectrum_new (x, y, n, BT_X_NM, BT_Y_ABSORBANCE, "forecast", &error);
  g_assert_no_error (error);
  return bt_film_new (spectrum);
}

static BtTally *
tally_of (BtFilm *film, const BtRecipe *recipe)
{
  g_autoptr (GError) error = NULL;
  BtTally *tally = bt_tally_film (film, recipe, BT_EFFORT_FULL, NULL, NULL, NULL, NULL, &error);

  g_assert_no_error (error);
  return tally;
}

static BtTally *
plain_tally (const BtForecast *forecast)
{
  g_autoptr (BtFilm) film = forecast_film (forecast);
  BtRecipe *recipe = bt_recipe_new ();
  BtTally *tally = tally_of (film, recipe);

  bt_recipe_free (recipe);
  return tally;
}

/* The measured, unsorted film of Ermolaev et al., Appl. Phys. Lett. 116, 231103 (2020) (CC0 1.0, in films/). Centres read off the curve's second
 * derivative: S11 0.616, S22 1.046, M11 1.616 eV, to about 0.02 eV. Unsorted tubes are two thirds semiconducting by counting of (n,m). */
static void
test_measured_film (void)
{
  g_autofree char *path = g_test_build_filename (G_TEST_DIST, "films", "unsorted-film-2020.csv", NULL);
  g_autoptr (GError) error = NULL;
  g_autoptr (BtSpectrum) spectrum = bt_spectrum_new_from_file (path, &error);
  g_autoptr (BtFilm) film = NULL;
  BtRecipe *recipe = bt_recipe_new ();
  BtTally *tally;

  g_assert_no_error (error);
  g_assert_cmpint (bt_spectrum_get_y_unit (spectrum), ==, BT_Y_ALPHA_PER_CM);
  film = bt_film_new (spectrum);
  tally = tally_of (film, recipe);
  g_test_message ("S11 %.4f S22 %.4f M11 %.4f eV, fraction %.3f (%.3f to %.3f)", tally->groups[BT_S11].centre_ev,
                  tally->groups[BT_S22].centre_ev, tally->groups[BT_M11].centre_ev, tally->fraction.value, tally->fraction.low,
                  tally->fraction.high);
  g_assert_cmpfloat_with_epsilon (tally->groups[BT_S11].centre_ev, 0.616, 0.03);
  g_assert_cmpfloat_with_epsilon (tally->groups[BT_S22].centre_ev, 1.046, 0.03);
  g_assert_cmpfloat_with_epsilon (tally->groups[BT_M11].centre_ev, 1.616, 0.03);
  g_assert_cmpfloat (tally->fraction.low, <, 2.0 / 3);
  g_assert_cmpfloat (tally->fraction.high, >, 2.0 / 3);
  /* Without a thickness the file's own absorption coefficient is passed on: its row at 550 nm says 97377.948 1/cm. */
  g_assert_cmpfloat_with_epsilon (g_array_index (tally->readings, BtReading, 0).wavelength_nm, 550, 1e-12);
  g_assert_cmpfloat_with_epsilon (g_array_index (tally->readings, BtReading, 0).alpha.value, 97377.948, 0.01);
  bt_tally_unref (tally);
  bt_recipe_free (recipe);
}

/* Things that the recipe does not know of: scatter of abundances, jitter of energies, wings and sidebands, four kinds of tail. */
static void
mess (BtForecast *forecast, guint i)
{
  static const double fractions[] = { 0.5, 2.0 / 3, 0.8, 0.9, 0.95, 0.98, 0.99, 0.999 };
  static const BtTail tails[] = { { BT_TAIL_PLASMON, 0.7, { 4.5, 1.2 }, 0.01 }, { BT_TAIL_POWER, 0.3, { 1.3, 0 }, 0.01 },
                                  { BT_TAIL_EXPONENTIAL, 0.3, { 1.4e-3, 0 }, 0.01 }, { BT_TAIL_PLASMON, 1.1, { 4.8, 1.5 }, 0 } };

  bt_forecast_init (forecast);
  forecast->fraction = fractions[i % G_N_ELEMENTS (fractions)];
  forecast->abundance_scatter = 0.35;
  forecast->jitter_ev = 0.006;
  forecast->lorentzian = 0.05 * (i % 7);
  forecast->sideband = 0.02 + 0.02 * (i % 4);
  forecast->tail = tails[(i / 3) % G_N_ELEMENTS (tails)];
  forecast->seed = 9000 + i;
}

/* Intervals hold the true fraction about as often as they say, and are of use. */
static void
test_recovery (void)
{
  const guint n = 60;
  guint covered = 0, clear = 0;
  double half_width = 0, bias = 0;
  BtRecipe *recipe = bt_recipe_new ();

  /* The forecast's strength ratio is 1 exactly: its uncertainty must not help. */
  recipe->strength_ratio_u = 0;
  for (guint i = 0; i < n; i++)
    {
      static const double diameters[] = { 1.4, 1.0, 1.6 };
      BtForecast forecast;
      g_autoptr (BtFilm) film = NULL;
      BtTally *tally;

      mess (&forecast, i);
      forecast.window.mean_nm = diameters[i % 3];
      forecast.window.spread_nm = 0.075 * forecast.window.mean_nm;
      film = forecast_film (&forecast);
      tally = tally_of (film, recipe);
      g_assert_cmpint (tally->fraction.bound, !=, BT_BOUND_NONE);
      if (forecast.fraction >= tally->fraction.low && forecast.fraction <= tally->fraction.high)
        covered++;
      else
        g_test_message ("film %u: true %.3f, stated %.3f (%.3f to %.3f)", i, forecast.fraction, tally->fraction.value, tally->fraction.low,
                        tally->fraction.high);
      if (i % 3 != 1)
        {
          half_width += (tally->fraction.high - tally->fraction.low) / 2;
          bias += tally->fraction.value - forecast.fraction;
          clear++;
        }
      bt_tally_unref (tally);
    }
  bt_recipe_free (recipe);
  g_test_message ("%u of %u intervals hold the truth; large diameters: mean half width %.3f, bias %.3f", covered, n, half_width / clear,
                  bias / clear);
  /* 95 % of 60 is 57; with p = 0.95 fewer than 53 happen once in a hundred times (binomial). */
  g_assert_cmpuint (covered, >=, 53);
  /* An interval that holds everything would be worth nothing. */
  g_assert_cmpfloat (half_width / clear, <, 0.12);
  g_assert_cmpfloat (fabs (bias / clear), <, 0.03);
}

/* Thickness cancels exactly in the fraction; alpha takes its uncertainty. */
static void
test_thickness_cancels (void)
{
  BtForecast forecast;
  g_autoptr (BtFilm) film = NULL;
  BtRecipe *recipe = bt_recipe_new ();
  BtTally *without, *with;
  const BtReading *reading;

  bt_forecast_init (&forecast);
  film = forecast_film (&forecast);
  without = tally_of (film, recipe);
  bt_film_set_thickness (film, 50, 2.5);
  with = tally_of (film, recipe);
  g_assert_cmpfloat (with->fraction.value, ==, without->fraction.value);
  g_assert_cmpfloat (with->fraction.u, ==, without->fraction.u);
  g_assert_true (isnan (g_array_index (without->readings, BtReading, 0).alpha.value));
  g_assert_nonnull (bt_flags_find (without->flags, "no-thickness"));
  g_assert_null (bt_flags_find (with->flags, "no-thickness"));
  reading = &g_array_index (with->readings, BtReading, 0);
  /* Beer and Lambert: alpha = ln(10) A / t; the relative uncertainty is at least the thickness's 5 %. */
  g_assert_cmpfloat_with_epsilon (reading->alpha.value, reading->absorbance * log (10) / 50e-7, 1e-6 * reading->alpha.value);
  g_assert_cmpfloat_with_epsilon (reading->alpha.u / reading->alpha.value, 0.05, 0.002);
  bt_tally_unref (without);
  bt_tally_unref (with);
  bt_recipe_free (recipe);
}

/* Bookkeeping that holds for any film: weights add up, areas add up, the budget adds up, only M11 may be negative. */
static void
test_adds_up (void)
{
  for (guint i = 0; i < 6; i++)
    {
      BtForecast forecast;
      BtTally *tally;
      double weight = 0, variance = 0, sums[BT_N_GROUPS] = { 0 };

      mess (&forecast, i + 2);
      tally = plain_tally (&forecast);
      for (guint t = 0; t < tally->n_tails; t++)
        weight += tally->tails[t].weight;
      g_assert_cmpfloat_with_epsilon (weight, 1, 1e-12);
      for (guint b = 0; b < tally->budget->len; b++)
        variance += pow (g_array_index (tally->budget, BtBudgetLine, b).u, 2);
      g_assert_cmpfloat_with_epsilon (tally->fraction.u, sqrt (variance), 1e-9);
      for (guint b = 0; b < tally->bands->len; b++)
        {
          const BtBand *band = &g_array_index (tally->bands, BtBand, b);

          sums[band->group] += band->area;
          g_assert_true (band->area >= 0 || band->group == BT_M11);
          g_assert_cmpfloat (band->centre_ev, >=, tally->plan.bands[band->group].low_ev - 1e-9);
          g_assert_cmpfloat (band->centre_ev, <=, tally->plan.bands[band->group].high_ev + 1e-9);
        }
      for (gsize k = 0; k < tally->n; k += 37)
        {
          double sum = tally->tail_curve[k], value;

          for (guint b = 0; b < tally->bands->len; b++)
            {
              bt_band_eval (&g_array_index (tally->bands, BtBand, b), &tally->energy_ev[k], 1, &value);
              sum += value;
            }
          g_assert_cmpfloat_with_epsilon (sum, tally->fit[k], 1e-10);
        }
      g_assert_true (tally->fraction.low >= 0 && tally->fraction.high <= 1 && tally->fraction.low <= tally->fraction.high);
      bt_tally_unref (tally);
    }
}

/* The same film gives the same numbers to the last bit, also from two threads at once. */
static gpointer
tally_thread (gpointer data)
{
  return plain_tally (data);
}

static void
test_repeatable (void)
{
  BtForecast forecast;
  GThread *threads[2];
  BtTally *tallies[3];

  mess (&forecast, 4);
  for (int i = 0; i < 2; i++)
    threads[i] = g_thread_new ("tally", tally_thread, &forecast);
  tallies[2] = plain_tally (&forecast);
  for (int i = 0; i < 2; i++)
    tallies[i] = g_thread_join (threads[i]);
  for (int i = 0; i < 2; i++)
    {
      g_assert_cmpfloat (tallies[i]->fraction.value, ==, tallies[2]->fraction.value);
      g_assert_cmpfloat (tallies[i]->fraction.low, ==, tallies[2]->fraction.low);
      g_assert_cmpfloat (tallies[i]->groups[BT_M11].area, ==, tallies[2]->groups[BT_M11].area);
    }
  for (int i = 0; i < 3; i++)
    bt_tally_unref (tallies[i]);
}

/* What the user holds stays; a held centre moves the fraction; QUICK follows from where the fit stood. */
static void
test_held (void)
{
  BtForecast forecast;
  g_autoptr (BtFilm) film = NULL;
  g_autoptr (GError) error = NULL;
  BtRecipe *recipe = bt_recipe_new ();
  BtTally *free_tally, *held, *quick;
  double wanted;
  gboolean found = FALSE;

  bt_forecast_init (&forecast);
  film = forecast_film (&forecast);
  free_tally = tally_of (film, recipe);
  wanted = free_tally->groups[BT_M11].centre_ev + 0.06;
  bt_recipe_hold (recipe, BT_M11, 0, BT_BAND_CENTRE, wanted);
  held = tally_of (film, recipe);
  quick = bt_tally_film (film, recipe, BT_EFFORT_QUICK, held, NULL, NULL, NULL, &error);
  g_assert_no_error (error);
  for (guint b = 0; b < held->bands->len; b++)
    {
      const BtBand *band = &g_array_index (held->bands, BtBand, b);

      if (band->group == BT_M11 && band->index == 0)
        {
          found = TRUE;
          g_assert_cmpfloat (band->centre_ev, ==, wanted);
          g_assert_cmpuint (band->held & (1u << BT_BAND_CENTRE), !=, 0);
          g_assert_cmpfloat (band->centre_u_ev, ==, 0);
        }
    }
  g_assert_true (found);
  g_assert_cmpfloat (fabs (held->fraction.value - free_tally->fraction.value), >, 1e-4);
  g_assert_cmpuint (quick->n_tails, ==, 1);
  g_assert_cmpfloat_with_epsilon (quick->tails[0].fraction, held->tails[held->best].fraction, 0.02);
  bt_tally_unref (free_tally);
  bt_tally_unref (held);
  bt_tally_unref (quick);
  bt_recipe_free (recipe);
}

/* A film whose metallic tubes are too few to be seen gets a bound, never 100 %; and a limit gets a verdict by a stated rule. */
static void
test_bound_and_verdict (void)
{
  static const struct { double fraction, limit; BtVerdict verdict; } rows[] = {
    { 0.5, 0.9, BT_VERDICT_REFUSED }, { 0.999, 0.6, BT_VERDICT_ACCEPTED }, { 0.9, 0.905, BT_VERDICT_UNDECIDED } };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      BtForecast forecast;
      g_autoptr (BtFilm) film = NULL;
      BtRecipe *recipe = bt_recipe_new ();
      BtTally *tally;
      g_autofree char *answer = NULL;

      bt_forecast_init (&forecast);
      forecast.fraction = rows[i].fraction;
      film = forecast_film (&forecast);
      recipe->limit = rows[i].limit;
      tally = tally_of (film, recipe);
      answer = bt_tally_answer (tally);
      g_test_message ("%.3f against %.3f: %s, %s (%.3f)", rows[i].fraction, rows[i].limit, answer, bt_verdict_name (tally->verdict),
                      tally->conformance);
      g_assert_cmpint (tally->verdict, ==, rows[i].verdict);
      g_assert_true (strstr (tally->decision_rule, "JCGM 106") != NULL);
      if (rows[i].fraction > 0.998)
        {
          g_assert_cmpint (tally->fraction.bound, ==, BT_BOUND_LOWER);
          g_assert_cmpfloat (tally->fraction.low, <, 1);
        }
      bt_tally_unref (tally);
      bt_recipe_free (recipe);
    }
}

/* Faults that the tally has to say. */
static void
test_flags (void)
{
  static const struct { const char *code; double low_nm, high_nm, bleach, step; gboolean fraction; } rows[] = {
    { "s11-bleached", 300, 2500, 0.85, 0, TRUE },
    { "detector-step", 300, 2500, 0, 0.012, TRUE },
    { "no-s11", 300, 1100, 0, 0, TRUE },
    { "no-s22", 300, 800, 0, 0, FALSE },
    { "no-m11", 900, 2500, 0, 0, FALSE },
  };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      BtForecast forecast;
      g_autoptr (BtFilm) film = NULL;
      BtRecipe *recipe = bt_recipe_new ();
      BtTally *tally;

      bt_forecast_init (&forecast);
      forecast.low_nm = rows[i].low_nm;
      forecast.high_nm = rows[i].high_nm;
      forecast.bleach = rows[i].bleach;
      if (rows[i].step > 0)
        {
          forecast.step_at_nm = 860;
          forecast.step_size = rows[i].step;
        }
      film = forecast_film (&forecast);
      recipe->window = forecast.window;
      tally = tally_of (film, recipe);
      g_test_message ("%s", rows[i].code);
      g_assert_nonnull (bt_flags_find (tally->flags, rows[i].code));
      g_assert_cmpint (tally->fraction.bound != BT_BOUND_NONE, ==, rows[i].fraction);
      bt_tally_unref (tally);
      bt_recipe_free (recipe);
    }
  {
    BtForecast forecast;
    BtTally *tally;

    bt_forecast_init (&forecast);
    tally = plain_tally (&forecast);
    for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
      g_assert_null (bt_flags_find (tally->flags, rows[i].code));
    bt_tally_unref (tally);
  }
}

/* A step of the detector is fitted: its size comes out, and the fraction hardly feels it. */
static void
test_step (void)
{
  BtForecast forecast;
  BtTally *with, *without;
  gboolean listed = FALSE;

  bt_forecast_init (&forecast);
  forecast.abundance_scatter = 0.2;
  without = plain_tally (&forecast);
  forecast.step_at_nm = 860;
  forecast.step_size = 0.012;
  with = plain_tally (&forecast);
  for (guint b = 0; b < with->budget->len; b++)
    listed = listed || g_str_equal (g_array_index (with->budget, BtBudgetLine, b).source, "detector step");
  g_assert_true (listed);
  g_assert_cmpfloat_with_epsilon (with->fraction.value, without->fraction.value, 2 * with->fraction.u);
  bt_tally_unref (with);
  bt_tally_unref (without);
}

/* Taking a step off, either way, leaves the fraction and moves the readings of one side by the step; a stated change is in the budget even where there is
 * none to see. */
static void
test_step_taken_off (void)
{
  BtForecast forecast;
  BtTally *left, *moved[2];
  BtRecipe *recipe = bt_recipe_new ();
  g_autoptr (BtFilm) film = NULL;
  g_autoptr (GError) error = NULL;
  const double at_nm = 860.5;

  bt_forecast_init (&forecast);
  forecast.step_at_nm = 860;
  forecast.step_size = 0.012;
  film = forecast_film (&forecast);
  recipe->tails = 1u << BT_TAIL_PLASMON;
  g_array_append_val (recipe->steps_nm, at_nm);
  left = bt_tally_film (film, recipe, BT_EFFORT_FULL, NULL, NULL, NULL, NULL, &error);
  g_assert_no_error (error);
  for (int k = 0; k < 2; k++)
    {
      const BtReading *before, *after;

      recipe->step_correction = k == 0 ? BT_STEP_TO_VISIBLE : BT_STEP_TO_INFRARED;
      moved[k] = bt_tally_film (film, recipe, BT_EFFORT_FULL, NULL, NULL, NULL, NULL, &error);
      g_assert_no_error (error);
      g_assert_nonnull (bt_flags_find (moved[k]->flags, "detector-step-corrected"));
      g_assert_cmpfloat_with_epsilon (moved[k]->fraction.value, left->fraction.value, left->fraction.u);
      /* 550 nm on the visible side, 1550 nm on the other. */
      before = &g_array_index (left->readings, BtReading, k == 0 ? 3 : 0);
      after = &g_array_index (moved[k]->readings, BtReading, k == 0 ? 3 : 0);
      g_assert_cmpfloat_with_epsilon (after->absorbance - before->absorbance, k == 0 ? -0.012 : 0.012, 0.002);
      g_assert_cmpfloat (after->absorbance_u, >, before->absorbance_u);
      before = &g_array_index (left->readings, BtReading, k == 0 ? 0 : 3);
      after = &g_array_index (moved[k]->readings, BtReading, k == 0 ? 0 : 3);
      g_assert_cmpfloat_with_epsilon (after->absorbance, before->absorbance, 1e-12);
      bt_tally_unref (moved[k]);
    }
  bt_tally_unref (left);
  bt_recipe_free (recipe);
}

/* A fringe of a 66 um optical path (75.8 1/cm between maxima, 1 / (2 n d)) is found, said and fitted, and takes nothing from the bands. */
static void
test_fringe (void)
{
  BtForecast forecast;
  gsize n;
  g_autofree double *x = NULL, *y = NULL;
  g_autoptr (BtSpectrum) plain_spectrum = NULL, fringed_spectrum = NULL;
  g_autoptr (BtFilm) plain_film = NULL, fringed_film = NULL;
  g_autoptr (GError) error = NULL;
  BtRecipe *recipe = bt_recipe_new ();
  BtTally *plain, *fringed;
  BtFringe fringe;

  bt_forecast_init (&forecast);
  forecast.abundance_scatter = 0.3;
  n = bt_forecast_n_points (&forecast);
  x = g_new (double, n);
  y = g_new (double, n);
  g_assert_true (bt_forecast_compute (&forecast, x, y, &error));
  plain_spectrum = bt_spectrum_new (x, y, n, BT_X_NM, BT_Y_ABSORBANCE, "plain", &error);
  for (gsize i = 0; i < n; i++)
    y[i] += 0.003 * cos (2 * G_PI * (1e7 / x[i]) * 2 * 66e-4 + 0.7);
  fringed_spectrum = bt_spectrum_new (x, y, n, BT_X_NM, BT_Y_ABSORBANCE, "fringed", &error);
  g_assert_false (bt_spectrum_find_fringe (plain_spectrum, &fringe));
  g_assert_true (bt_spectrum_find_fringe (fringed_spectrum, &fringe));
  g_assert_cmpfloat_with_epsilon (fringe.spacing_per_cm, 1 / (2 * 66e-4), 0.2);
  g_assert_cmpfloat_with_epsilon (fringe.optical_thickness_um, 66, 0.2);
  g_assert_cmpfloat_with_epsilon (fringe.amplitude, 0.003, 3e-4);
  plain_film = bt_film_new (plain_spectrum);
  fringed_film = bt_film_new (fringed_spectrum);
  plain = tally_of (plain_film, recipe);
  fringed = tally_of (fringed_film, recipe);
  g_assert_null (bt_flags_find (plain->flags, "fringe"));
  g_assert_nonnull (bt_flags_find (fringed->flags, "fringe"));
  g_assert_cmpfloat_with_epsilon (fringed->fraction.value, plain->fraction.value, plain->fraction.u);
  g_assert_cmpfloat_with_epsilon (fringed->groups[BT_S22].area, plain->groups[BT_S22].area, plain->groups[BT_S22].area_u);
  bt_tally_unref (plain);
  bt_tally_unref (fringed);
  bt_recipe_free (recipe);
}

/* A featureless curve and one with too few points in range: no crash, no invented fraction. */
static void
test_featureless (void)
{
  double x[200], y[200];
  g_autoptr (BtSpectrum) spectrum = NULL;
  g_autoptr (BtFilm) film = NULL;
  g_autoptr (GError) error = NULL;
  BtRecipe *recipe = bt_recipe_new ();
  BtTally *tally;

  for (int i = 0; i < 200; i++)
    {
      x[i] = 300 + 10 * i;
      y[i] = 0.4 * pow (x[i] / 500, -1.2) + 1e-4 * ((i * 7919) % 13 - 6);
    }
  spectrum = bt_spectrum_new (x, y, 200, BT_X_NM, BT_Y_ABSORBANCE, "smooth", &error);
  g_assert_no_error (error);
  film = bt_film_new (spectrum);
  tally = tally_of (film, recipe);
  g_assert_cmpint (tally->fraction.bound, ==, BT_BOUND_NONE);
  g_assert_nonnull (bt_flags_find (tally->flags, "no-bands"));
  g_assert_nonnull (bt_flags_find (tally->flags, "window-guessed"));
  bt_tally_unref (tally);
  recipe->range = (BtRange){ 1.2, 1.25 };
  tally = tally_of (film, recipe);
  g_assert_cmpint (tally->fraction.bound, ==, BT_BOUND_NONE);
  bt_tally_unref (tally);
  bt_recipe_free (recipe);
}

static void
test_cancel (void)
{
  BtForecast forecast;
  g_autoptr (BtFilm) film = NULL;
  g_autoptr (GCancellable) cancellable = g_cancellable_new ();
  g_autoptr (GError) error = NULL;
  BtRecipe *recipe = bt_recipe_new ();

  bt_forecast_init (&forecast);
  film = forecast_film (&forecast);
  g_cancellable_cancel (cancellable);
  g_assert_null (bt_tally_film (film, recipe, BT_EFFORT_FULL, NULL, NULL, NULL, cancellable, &error));
  g_assert_error (error, BT_TALLY_ERROR, BT_TALLY_ERROR_CANCELLED);
  bt_recipe_free (recipe);
}

/* k enters as stated: f = (A_S / k) / (A_S / k + A_M), and its uncertainty as f (1 - f) u(k) / k. */
static void
test_strength_ratio (void)
{
  BtForecast forecast;
  g_autoptr (BtFilm) film = NULL;
  BtRecipe *recipe = bt_recipe_new ();
  BtTally *one, *two;
  double f, u = 0;

  bt_forecast_init (&forecast);
  forecast.fraction = 0.5;
  film = forecast_film (&forecast);
  one = tally_of (film, recipe);
  recipe->strength_ratio = 1.5;
  recipe->strength_ratio_u = 0.15;
  two = tally_of (film, recipe);
  f = one->fraction.value;
  g_assert_cmpfloat_with_epsilon (two->fraction.value, f / (f + 1.5 * (1 - f)), 1e-9);
  for (guint b = 0; b < two->budget->len; b++)
    if (g_str_equal (g_array_index (two->budget, BtBudgetLine, b).source, "strength ratio"))
      u = g_array_index (two->budget, BtBudgetLine, b).u;
  f = two->fraction.value;
  g_assert_cmpfloat_with_epsilon (u, f * (1 - f) * 0.1, 1e-9);
  bt_tally_unref (one);
  bt_tally_unref (two);
  bt_recipe_free (recipe);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/tally/measured-film", test_measured_film);
  g_test_add_func ("/tally/recovery", test_recovery);
  g_test_add_func ("/tally/thickness-cancels", test_thickness_cancels);
  g_test_add_func ("/tally/adds-up", test_adds_up);
  g_test_add_func ("/tally/repeatable", test_repeatable);
  g_test_add_func ("/tally/held", test_held);
  g_test_add_func ("/tally/bound-and-verdict", test_bound_and_verdict);
  g_test_add_func ("/tally/flags", test_flags);
  g_test_add_func ("/tally/step", test_step);
  g_test_add_func ("/tally/step-taken-off", test_step_taken_off);
  g_test_add_func ("/tally/fringe", test_fringe);
  g_test_add_func ("/tally/featureless", test_featureless);
  g_test_add_func ("/tally/cancel", test_cancel);
  g_test_add_func ("/tally/strength-ratio", test_strength_ratio);
  return g_test_run ();
}
