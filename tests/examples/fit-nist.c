/* A fit in 30 lines: y = b1 (1 - exp (-b2 x)), NIST's problem Misra1a. cc fit-nist.c $(pkg-config --cflags --libs bandtally) -lm */
#include <bandtally/fit.h>
#include <math.h>

static void
saturation (const double *q, const double *x, gsize n, double *f, double *const *df, gpointer data)
{
  for (gsize i = 0; i < n; i++)
    f[i] = 1 - exp (-q[0] * x[i]);
  for (gsize i = 0; df != NULL && i < n; i++)
    df[0][i] = x[i] * exp (-q[0] * x[i]);
}

int
main (void)
{
  const double x[] = { 77.6, 114.9, 141.1, 190.8, 239.9, 289.0, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760.0 };
  const double y[] = { 10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.40, 75.47, 81.78 };
  g_autoptr (BtFit) fit = bt_fit_new (x, y, NULL, G_N_ELEMENTS (x));
  guint b1 = bt_fit_add_function (fit, saturation, 1, NULL, NULL), b2 = b1 + 1;

  bt_fit_set_start (fit, b1, 500);
  bt_fit_set_start (fit, b2, 0.0001);
  g_autoptr (BtFitResult) result = bt_fit_solve (fit, NULL, NULL, NULL);
  g_print ("b1 = %.8g +- %.4g\nb2 = %.8g +- %.4g\n", result->x[b1], result->u[b1], result->x[b2], result->u[b2]);
}
