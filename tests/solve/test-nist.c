/* The solver against certified answers: NIST Statistical Reference Datasets, nonlinear regression (files in nist-strd/, each with its
 * model, starts and certified values). Derivatives come from the complex step (Squire and Trapp, SIAM Rev. 40, 110 (1998)). */
#include <bandtally/solve.h>

#include <complex.h>
#include <math.h>
#include <string.h>

#define MAX_B 9
typedef double complex C;
typedef C (*Model) (const C *b, double x);

static C
gauss (const C *b, double x)
{
  return b[0] * cexp (-b[1] * x) + b[2] * cexp (-(x - b[3]) * (x - b[3]) / (b[4] * b[4]))
         + b[5] * cexp (-(x - b[6]) * (x - b[6]) / (b[7] * b[7]));
}

static C
eckerle (const C *b, double x)
{
  C z = (x - b[2]) / b[1];

  return b[0] / b[1] * cexp (-0.5 * z * z);
}

static C
lanczos (const C *b, double x)
{
  return b[0] * cexp (-b[1] * x) + b[2] * cexp (-b[3] * x) + b[4] * cexp (-b[5] * x);
}

static C
misra1a (const C *b, double x)
{
  return b[0] * (1 - cexp (-b[1] * x));
}

static C
cubic_ratio (const C *b, double x)
{
  return (b[0] + x * (b[1] + x * (b[2] + x * b[3]))) / (1 + x * (b[4] + x * (b[5] + x * b[6])));
}

static C
kirby (const C *b, double x)
{
  return (b[0] + x * (b[1] + x * b[2])) / (1 + x * (b[3] + x * b[4]));
}

static C
mgh17 (const C *b, double x)
{
  return b[0] + b[1] * cexp (-x * b[3]) + b[2] * cexp (-x * b[4]);
}

static C
chwirut (const C *b, double x)
{
  return cexp (-b[0] * x) / (b[1] + b[2] * x);
}

static C
danwood (const C *b, double x)
{
  return b[0] * cpow (x, b[1]);
}

typedef struct { const char *name; Model model; int starts; } Set;
/* @starts: bit 0 the far start, bit 1 the near one. */
static const Set sets[] = {
  { "Gauss1", gauss, 3 },      { "Gauss2", gauss, 3 },       { "Gauss3", gauss, 3 },    { "Eckerle4", eckerle, 2 },
  { "Lanczos3", lanczos, 3 },  { "Misra1a", misra1a, 3 },    { "Thurber", cubic_ratio, 3 }, { "MGH17", mgh17, 2 },
  { "Chwirut2", chwirut, 3 },  { "DanWood", danwood, 3 },    { "Kirby2", kirby, 3 },    { "Hahn1", cubic_ratio, 2 },
};

typedef struct {
  Model model;
  gsize n, p;
  double x[400], y[400];
  double start[2][MAX_B], certified[MAX_B], sd[MAX_B], rss;
} Data;

static void
residuals (const double *b, double *residual, double *jacobian, gpointer user_data)
{
  const Data *data = user_data;
  C z[MAX_B];

  for (gsize j = 0; j < data->p; j++)
    z[j] = b[j];
  for (gsize i = 0; i < data->n; i++)
    {
      residual[i] = creal (data->model (z, data->x[i])) - data->y[i];
      for (gsize j = 0; jacobian != NULL && j < data->p; j++)
        {
          const double h = 1e-40;

          z[j] += I * h;
          jacobian[i * data->p + j] = cimag (data->model (z, data->x[i])) / h;
          z[j] = b[j];
        }
    }
}

static void
load (const Set *set, Data *data)
{
  g_autofree char *file = g_strconcat (set->name, ".dat", NULL);
  g_autofree char *path = g_test_build_filename (G_TEST_DIST, "nist-strd", file, NULL);
  g_autofree char *text = NULL;
  g_auto (GStrv) lines = NULL;
  g_autoptr (GError) error = NULL;

  memset (data, 0, sizeof *data);
  data->model = set->model;
  g_file_get_contents (path, &text, NULL, &error);
  g_assert_no_error (error);
  lines = g_strsplit (text, "\n", -1);
  for (gsize i = 40; lines[i] != NULL && i < 60; i++)
    {
      char *at = strchr (lines[i], '=');
      const char *rss = strstr (lines[i], "Residual Sum of Squares:");

      if (rss != NULL)
        data->rss = g_ascii_strtod (strchr (rss, ':') + 1, NULL);
      else if (at != NULL && g_strstrip (lines[i])[0] == 'b' && data->p < MAX_B)
        {
          at = strchr (lines[i], '=') + 1;
          data->start[0][data->p] = g_ascii_strtod (at, &at);
          data->start[1][data->p] = g_ascii_strtod (at, &at);
          data->certified[data->p] = g_ascii_strtod (at, &at);
          data->sd[data->p] = g_ascii_strtod (at, &at);
          data->p++;
        }
    }
  for (gsize i = 60; lines[i] != NULL; i++)
    {
      char *end;
      double y = g_ascii_strtod (lines[i], &end);

      if (end == lines[i])
        continue;
      data->y[data->n] = y;
      data->x[data->n++] = g_ascii_strtod (end, NULL);
    }
  g_assert_cmpuint (data->n, >, data->p);
  g_assert_cmpuint (data->p, >, 1);
}

static void
test_set (gconstpointer user_data)
{
  const Set *set = user_data;
  g_autofree Data *data = g_new (Data, 1);

  load (set, data);
  for (int s = 0; s < 2; s++)
    {
      double b[MAX_B], covariance[MAX_B * MAX_B], digits = 20, sd_digits = 20;
      BtProblem problem = { .n_points = data->n, .n_parameters = data->p, .model = residuals, .data = data, .max_iterations = 5000,
                            .tolerance = 1e-14 };
      BtSolution solution = { .x = b, .covariance = covariance };

      if (!(set->starts & (1 << s)))
        continue;
      memcpy (b, data->start[s], sizeof b);
      bt_least_squares (&problem, &solution);
      for (gsize j = 0; j < data->p; j++)
        {
          double sd = sqrt (covariance[j * data->p + j] * solution.chi2 / (double) (data->n - data->p));

          digits = fmin (digits, -log10 (fabs (b[j] - data->certified[j]) / fabs (data->certified[j]) + 1e-16));
          sd_digits = fmin (sd_digits, -log10 (fabs (sd - data->sd[j]) / data->sd[j] + 1e-16));
        }
      g_test_message ("%s start %d: %.1f digits of the parameters, %.1f of their standard deviations, %d iterations", set->name, s + 1,
                      digits, sd_digits, solution.iterations);
      g_assert_cmpint (solution.state, ==, BT_SOLVE_CONVERGED);
      g_assert_cmpfloat (digits, >, 6);
      g_assert_cmpfloat (sd_digits, >, 4);
      g_assert_cmpfloat (fabs (solution.chi2 / data->rss - 1), <, 1e-7);
    }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  for (gsize i = 0; i < G_N_ELEMENTS (sets); i++)
    {
      g_autofree char *path = g_strconcat ("/solve/nist/", sets[i].name, NULL);

      g_test_add_data_func (path, &sets[i], test_set);
    }
  return g_test_run ();
}
