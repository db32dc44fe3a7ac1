/* Coverage study: how often the 95 % interval holds the true fraction, by kind of film. Films come from the forward model, always with things that
 * the recipe does not know: abundances that scatter by 35 % about the distribution, energies that jitter by 6 meV a tube, Lorentzian wings, phonon
 * sidebands, five kinds of tail, one of them a sum; diameters are proposed from the data. The strength ratio is known exactly, so that its uncertainty cannot help.
 *
 *   meson test -C BUILD --benchmark intervals --verbose        (or run the program; arguments set the films a class, 30 by default, and the first seed)
 *
 * Fixed seeds: the same table each time. What it does not cover: blanks, reflection, uneven films, polymer bands, aligned tubes. */
#include <bandtally/bandtally.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

typedef struct { const char *name; double diameter_nm, high_nm, step, bleach, thickness_nm; } Class;
static const Class classes[] = {
  { "0.9 nm", 0.9, 2500, 0, 0, 100 },         { "1.0 nm", 1.0, 2500, 0, 0, 100 },        { "1.2 nm", 1.2, 2500, 0, 0, 100 },
  { "1.4 nm", 1.4, 2500, 0, 0, 100 },         { "1.6 nm", 1.6, 2500, 0, 0, 100 },        { "1.8 nm", 1.8, 2500, 0, 0, 100 },
  { "1.4 nm, to 1100 nm", 1.4, 1100, 0, 0, 100 }, { "1.4 nm, detector step", 1.4, 2500, 0.01, 0, 100 },
  { "1.4 nm, doped", 1.4, 2500, 0, 0.8, 100 }, { "1.4 nm, 20 nm thin", 1.4, 2500, 0, 0, 20 },
};

/* @covered, @n; sums for bias; half widths to be sorted. */
typedef struct { guint n, covered, bounds; double bias, squares, *half_width, seconds; } Outcome;

/* The second argument: films that nothing was ever tuned on. */
static guint64 first_seed = 77000;

static void
make_forecast (BtForecast *forecast, const Class *kind, guint i)
{
  static const double fractions[] = { 0.5, 2.0 / 3, 0.8, 0.9, 0.95, 0.98, 0.99, 0.999 };
  const BtTail tails[] = { { BT_TAIL_PLASMON, 0.6 + 0.1 * (i % 6), { 4.5 + 0.1 * (i % 5), 1.0 + 0.15 * (i % 5) }, 0.01 },
                           { BT_TAIL_POWER, 0.3, { 1.0 + 0.1 * (i % 7), 0 }, 0.01 },
                           { BT_TAIL_EXPONENTIAL, 0.3, { 1e-3 + 2e-4 * (i % 5), 0 }, 0.01 },
                           { BT_TAIL_PLASMON, 1.2, { 4.9, 1.6 }, 0.0 },
                           { BT_TAIL_PLASMON, 0.5, { 4.6, 1.2 }, 0.005 } };
  /* What scatters or is graphitic, on top of the plasmon. */
  const BtTail more[] = { { BT_TAIL_POWER, 0.08, { 2.5, 0 }, 0 }, { BT_TAIL_EXPONENTIAL, 0.1, { 1e-3, 0 }, 0 } };
  const guint kind_of_tail = (i / 2) % G_N_ELEMENTS (tails);

  bt_forecast_init (forecast);
  forecast->window = (BtDiameterWindow){ kind->diameter_nm, 0.075 * kind->diameter_nm };
  forecast->fraction = fractions[i % G_N_ELEMENTS (fractions)];
  forecast->abundance_scatter = 0.35;
  forecast->jitter_ev = 0.006;
  forecast->lorentzian = 0.1 + 0.05 * (i % 5);
  forecast->sideband = 0.03 + 0.02 * (i % 4);
  forecast->tail = tails[kind_of_tail];
  if (kind_of_tail == G_N_ELEMENTS (tails) - 1)
    forecast->more_tail = more[i % 2];
  forecast->high_nm = kind->high_nm;
  forecast->step_at_nm = kind->step > 0 ? 860 : 0;
  forecast->step_size = kind->step;
  forecast->bleach = kind->bleach;
  forecast->thickness_nm = kind->thickness_nm;
  forecast->seed = first_seed + i;
}

static void
run_film (const Class *kind, guint i, Outcome *outcome)
{
  BtForecast forecast;
  gsize n;
  g_autofree double *x = NULL, *y = NULL;
  g_autoptr (BtSpectrum) spectrum = NULL;
  g_autoptr (BtFilm) film = NULL;
  g_autoptr (GError) error = NULL;
  BtRecipe *recipe = bt_recipe_new ();
  BtTally *tally;
  gint64 start;

  make_forecast (&forecast, kind, i);
  n = bt_forecast_n_points (&forecast);
  x = g_new (double, n);
  y = g_new (double, n);
  if (!bt_forecast_compute (&forecast, x, y, &error))
    g_error ("%s", error->message);
  spectrum = bt_spectrum_new (x, y, n, BT_X_NM, BT_Y_ABSORBANCE, "film", &error);
  film = bt_film_new (spectrum);
  recipe->strength_ratio_u = 0;
  start = g_get_monotonic_time ();
  tally = bt_tally_film (film, recipe, BT_EFFORT_FULL, NULL, NULL, NULL, NULL, &error);
  outcome->seconds += (double) (g_get_monotonic_time () - start) * 1e-6;
  if (tally == NULL)
    g_error ("%s", error->message);
  /* A film without a fraction counts as not covered. */
  if (tally->fraction.bound != BT_BOUND_NONE)
    {
      outcome->covered += forecast.fraction >= tally->fraction.low && forecast.fraction <= tally->fraction.high ? 1 : 0;
      outcome->bounds += tally->fraction.bound == BT_BOUND_LOWER ? 1 : 0;
      outcome->bias += tally->fraction.value - forecast.fraction;
      outcome->squares += pow (tally->fraction.value - forecast.fraction, 2);
      outcome->half_width[outcome->n] = (tally->fraction.high - tally->fraction.low) / 2;
    }
  else
    outcome->half_width[outcome->n] = 0.5;
  outcome->n++;
  bt_tally_unref (tally);
  bt_recipe_free (recipe);
}

static int
by_size (const void *a, const void *b)
{
  double x = *(const double *) a, y = *(const double *) b;

  return x < y ? -1 : x > y;
}

int
main (int argc, char **argv)
{
  const guint films = argc > 1 ? (guint) atoi (argv[1]) : 30;
  guint all = 0, covered = 0;

  if (argc > 2)
    first_seed = g_ascii_strtoull (argv[2], NULL, 10);

  g_return_val_if_fail (films > 0 && films <= 10000, 2);
  printf ("%-24s %6s %8s %8s %8s %12s %8s %8s\n", "class", "films", "covered", "bias", "rms", "half width", "bounds", "s/film");
  for (gsize c = 0; c < G_N_ELEMENTS (classes); c++)
    {
      Outcome outcome = { .half_width = g_new0 (double, films) };

      for (guint i = 0; i < films; i++)
        run_film (&classes[c], i, &outcome);
      qsort (outcome.half_width, films, sizeof (double), by_size);
      printf ("%-24s %6u %7.1f%% %+8.3f %8.3f %12.3f %8u %8.2f\n", classes[c].name, films, 100.0 * outcome.covered / films, outcome.bias / films,
              sqrt (outcome.squares / films), outcome.half_width[films / 2], outcome.bounds, outcome.seconds / films);
      fflush (stdout);
      all += films;
      covered += outcome.covered;
      g_free (outcome.half_width);
    }
  printf ("%-24s %6u %7.1f%%\n", "all", all, 100.0 * covered / all);
  return 0;
}
