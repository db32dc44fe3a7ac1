/* Times fits of sums of bands: one fit, many random starts, many resamples. A measurement, not a test.
 *
 *   fit DIR [--only NAME] [--starts 500] [--tries 16] [--resamples 1000]
 *
 * DIR holds NAME.csv (energy_ev,absorbance,sigma) and NAME.start.json (start, low, high, truth: height, centre, FWHM of each
 * band, then height and FWHM of a Lorentzian tail at 4.6 eV and an offset). Prints one JSON line a measurement. */
#include <bandtally/fit.h>

#include <json-glib/json-glib.h>
#include <math.h>
#include <stdio.h>
#include <string.h>

#define MAX_P 128

typedef struct
{
  const char *name;
  gsize n, p;
  double *e, *y, *sigma;
  double start[MAX_P], low[MAX_P], high[MAX_P], truth[MAX_P], chi2_at_truth;
} Work;

static char *only;
static int n_starts, n_tries = 16, n_resamples;
static gboolean quiet_single;

static void
numbers (JsonObject *object, const char *name, double *out, gsize *n)
{
  JsonArray *array = json_object_get_array_member (object, name);

  *n = json_array_get_length (array);
  g_assert_cmpuint (*n, <=, MAX_P);
  for (guint i = 0; i < *n; i++)
    out[i] = json_array_get_double_element (array, i);
}

static gboolean
load (const char *dir, const char *name, Work *work)
{
  g_autofree char *csv = g_strdup_printf ("%s/%s.csv", dir, name), *json = g_strdup_printf ("%s/%s.start.json", dir, name),
                  *text = NULL;
  g_autoptr (JsonParser) parser = json_parser_new ();
  g_autoptr (GError) error = NULL;
  g_auto (GStrv) lines = NULL;
  JsonObject *object;

  if (!g_file_get_contents (csv, &text, NULL, &error) || !json_parser_load_from_file (parser, json, &error))
    {
      g_printerr ("%s\n", error->message);
      return FALSE;
    }
  work->name = name;
  lines = g_strsplit (text, "\n", -1);
  work->n = 0;
  work->e = g_new (double, g_strv_length (lines));
  work->y = g_new (double, g_strv_length (lines));
  work->sigma = g_new (double, g_strv_length (lines));
  for (gsize i = 1; lines[i] != NULL; i++)
    {
      char *at = lines[i];

      if (*at == 0)
        continue;
      work->e[work->n] = g_ascii_strtod (at, &at);
      work->y[work->n] = g_ascii_strtod (at + 1, &at);
      work->sigma[work->n++] = g_ascii_strtod (at + 1, &at);
    }
  object = json_node_get_object (json_parser_get_root (parser));
  numbers (object, "start", work->start, &work->p);
  numbers (object, "low", work->low, &work->p);
  numbers (object, "high", work->high, &work->p);
  numbers (object, "truth", work->truth, &work->p);
  work->chi2_at_truth = json_object_get_double_member (object, "chi2_at_truth");
  return TRUE;
}

/* The problem's parameters are the workload's and, before the tail's width, its centre, which is held. */
static BtFit *
build (const Work *work, guint *number)
{
  BtFit *fit = bt_fit_new (work->e, work->y, work->sigma, work->n);
  const gsize bands = (work->p - 3) / 3;
  guint tail, offset;

  for (gsize b = 0; b < bands; b++)
    {
      guint first = bt_fit_add_shape (fit, BT_SHAPE_GAUSSIAN, work->start + 3 * b + 1, 2);

      for (guint k = 0; k < 3; k++)
        number[3 * b + k] = first + k;
    }
  tail = bt_fit_add_shape (fit, BT_SHAPE_LORENTZIAN, NULL, 0);
  bt_fit_set_start (fit, tail + 1, 4.6);
  bt_fit_set_fixed (fit, tail + 1, TRUE);
  offset = bt_fit_add_shape (fit, BT_SHAPE_CONSTANT, NULL, 0);
  number[3 * bands] = tail;
  number[3 * bands + 1] = tail + 2;
  number[3 * bands + 2] = offset;
  for (gsize j = 0; j < work->p; j++)
    {
      bt_fit_set_bounds (fit, number[j], work->low[j], work->high[j]);
      bt_fit_set_start (fit, number[j], work->start[j]);
    }
  return fit;
}

static double
median (double *value, gsize n)
{
  for (gsize i = 1; i < n; i++)
    for (gsize j = i; j > 0 && value[j - 1] > value[j]; j--)
      {
        double swap = value[j];

        value[j] = value[j - 1];
        value[j - 1] = swap;
      }
  return value[n / 2];
}

static void
time_one (const Work *work)
{
  guint number[MAX_P];
  g_autoptr (BtFit) fit = build (work, number);
  const BtFitOptions options = { .starts = 1, .sigma_known = TRUE };
  const BtFitOptions to_the_end = { .starts = 1, .sigma_known = TRUE, .tolerance = 1e-20 };
  double took[101], off = 0;
  BtFitResult *result = NULL, *tight;

  for (gsize i = 0; i < G_N_ELEMENTS (took); i++)
    {
      gint64 before = g_get_monotonic_time ();

      g_clear_pointer (&result, bt_fit_result_unref);
      result = bt_fit_solve (fit, &options, NULL, NULL);
      took[i] = (double)(g_get_monotonic_time () - before) / 1e3;
      if (i >= 9 && took[i] > 20)
        {
          printf ("{\"workload\": \"%s\", \"what\": \"one fit\", \"median_ms\": %.4f", work->name, median (took, i + 1));
          break;
        }
      if (i + 1 == G_N_ELEMENTS (took))
        printf ("{\"workload\": \"%s\", \"what\": \"one fit\", \"median_ms\": %.4f", work->name, median (took, i + 1));
    }
  /* How far a fit of the usual tolerance is from one that goes on to the last digit, in uncertainties. */
  tight = bt_fit_solve (fit, &to_the_end, NULL, NULL);
  for (guint k = 0; k < result->n_parameters; k++)
    if (result->u[k] > 0)
      off = MAX (off, fabs (result->x[k] - tight->x[k]) / result->u[k]);
  printf (", \"chi2\": %.4f, \"chi2_at_truth\": %.4f, \"iterations\": %u, \"worst_off_u\": %.1e, \"condition\": %.1e, "
          "\"orthogonal\": %s, "
          "\"converged\": %s}\n",
          result->chi2, work->chi2_at_truth, result->iterations, off, result->condition, result->by_qr ? "true" : "false",
          result->state == BT_SOLVE_CONVERGED ? "true" : "false");
  bt_fit_result_unref (result);
  bt_fit_result_unref (tight);
}

/* Heights by 0.4 to 1.6, centres by 0.05 eV, widths by 0.6 to 1.6 of the truth. */
static void
count_starts (const Work *work)
{
  guint number[MAX_P], reached = 0, strictly = 0, made = 0;
  g_autoptr (BtFit) fit = build (work, number);
  g_autoptr (GRand) random = g_rand_new_with_seed (1);
  const gsize bands = (work->p - 3) / 3;
  g_autofree double *chi2 = g_new (double, n_starts);
  double best = INFINITY;
  gint64 before = g_get_monotonic_time ();

  for (int i = 0; i < n_starts; i++)
    {
      const BtFitOptions options = { .starts = (guint)n_tries, .seed = 1, .good_enough = 1.15, .sigma_known = TRUE };
      BtFitResult *result;

      for (gsize j = 0; j < work->p; j++)
        {
          double value = work->truth[j];

          if (j < 3 * bands)
            value = j % 3 == 0   ? value * g_rand_double_range (random, 0.4, 1.6)
                    : j % 3 == 1 ? value + g_rand_double_range (random, -0.05, 0.05)
                                 : value * g_rand_double_range (random, 0.6, 1.6);
          bt_fit_set_start (fit, number[j], CLAMP (value, work->low[j] + 1e-6, work->high[j] - 1e-6));
        }
      result = bt_fit_solve (fit, &options, NULL, NULL);
      chi2[i] = result->chi2;
      best = MIN (best, chi2[i]);
      reached += chi2[i] < 1.01 * work->chi2_at_truth;
      made += result->n_starts;
      bt_fit_result_unref (result);
    }
  for (int i = 0; i < n_starts; i++)
    strictly += chi2[i] < best + 0.5;
  printf ("{\"workload\": \"%s\", \"what\": \"random starts\", \"starts\": %d, \"tries_each\": %d, \"tries_made\": %u, "
          "\"reached\": %u, "
          "\"strictly\": %u, \"mean_ms\": %.3f}\n",
          work->name, n_starts, n_tries, made, reached, strictly, (double)(g_get_monotonic_time () - before) / 1e3 / n_starts);
}

static void
time_resamples (const Work *work)
{
  guint number[MAX_P];
  g_autoptr (BtFit) fit = build (work, number);
  const BtFitOptions options = { .starts = 1, .sigma_known = TRUE };
  BtFitResult *best = bt_fit_solve (fit, &options, NULL, NULL);
  const gsize size = (gsize)n_resamples * best->n_parameters;
  g_autofree double *out = g_new (double, size), *other = g_new (double, size);

  for (int refit = 1; refit >= 0; refit--)
    {
      double took[2];

      for (guint threads = 1; threads <= 2; threads++)
        {
          gint64 before = g_get_monotonic_time ();

          bt_fit_resample (fit, best, BT_RESAMPLE_NOISE, 0, (guint)n_resamples, refit, 1, threads, threads == 1 ? out : other,
                           NULL, NULL);
          took[threads - 1] = (double)(g_get_monotonic_time () - before) / 1e3;
        }
      printf ("{\"workload\": \"%s\", \"what\": \"%s\", \"resamples\": %d, \"ms_1_thread\": %.2f, \"ms_2_threads\": %.2f, "
              "\"same_bits\": %s}\n",
              work->name, refit ? "refits" : "fixed Jacobian", n_resamples, took[0], took[1],
              memcmp (out, other, sizeof (double) * size) == 0 ? "true" : "false");
    }
  bt_fit_result_unref (best);
}

int
main (int argc, char **argv)
{
  static const char *const names[] = { "film-4", "film-12", "film-20" };
  static const GOptionEntry entries[]
      = { { "only", 0, 0, G_OPTION_ARG_STRING, &only, "one workload", "NAME" },
          { "starts", 0, 0, G_OPTION_ARG_INT, &n_starts, "random starts", "N" },
          { "tries", 0, 0, G_OPTION_ARG_INT, &n_tries, "tries from each start", "N" },
          { "resamples", 0, 0, G_OPTION_ARG_INT, &n_resamples, "resamples", "N" },
          { "no-single", 0, 0, G_OPTION_ARG_NONE, &quiet_single, "leave the single fit out", NULL },
          { NULL } };
  g_autoptr (GOptionContext) context = g_option_context_new ("DIR");
  g_autoptr (GError) error = NULL;

  g_option_context_add_main_entries (context, entries, NULL);
  if (!g_option_context_parse (context, &argc, &argv, &error) || argc != 2)
    {
      g_printerr ("%s\n", error != NULL ? error->message : "fit DIR: one folder of workloads");
      return 2;
    }
  for (gsize i = 0; i < G_N_ELEMENTS (names); i++)
    {
      Work work;

      if (only != NULL && strcmp (only, names[i]) != 0)
        continue;
      if (!load (argv[1], names[i], &work))
        return 1;
      if (!quiet_single)
        time_one (&work);
      if (n_starts > 0)
        count_starts (&work);
      if (n_resamples > 0)
        time_resamples (&work);
      fflush (stdout);
      g_free (work.e);
      g_free (work.y);
      g_free (work.sigma);
    }
  return 0;
}
