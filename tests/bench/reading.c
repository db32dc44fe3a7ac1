/* Measures how fast spectra are read, against a bare strtod loop over the same bytes: the reading alone, and with noise, steps, spikes and fringes
 * judged. The number of points may be given. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

#define RUNS 300

static double
seconds (void)
{
  struct timespec now;

  clock_gettime (CLOCK_PROCESS_CPUTIME_ID, &now);
  return (double) now.tv_sec + 1e-9 * (double) now.tv_nsec;
}

static double
time_strtod (char *at)
{
  double start = seconds ();
  volatile double sum = 0;

  while (*at != '\0')
    {
      sum += strtod (at, &at);
      at++;
    }
  return seconds () - start;
}

static double
time_reading (GBytes *bytes, gboolean judged)
{
  double start = seconds ();
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, "bench", NULL, &error);

  if (spectra == NULL)
    g_error ("%s", error->message);
  if (judged)
    bt_spectrum_get_flags (g_ptr_array_index (spectra, 0));
  return seconds () - start;
}

static void
measure (const char *what, const char *row, const char *between, guint n_points)
{
  GString *text = g_string_new ("# film = made up\nwavelength_nm,absorbance\n");
  gsize preamble = text->len;
  double best[3] = { INFINITY, INFINITY, INFINITY };
  g_autoptr (GBytes) bytes = NULL;

  for (guint i = 0; i < n_points; i++)
    {
      char x[G_ASCII_DTOSTR_BUF_SIZE], y[G_ASCII_DTOSTR_BUF_SIZE];

      g_ascii_formatd (x, sizeof x, "%.1f", 300 + 2000.0 * i / n_points);
      g_ascii_formatd (y, sizeof y, row, 0.4 + 0.2 * sin (0.01 * i) + 1e-4 * sin (7919.0 * i));
      g_string_append_printf (text, "%s%s%s\n", x, between, y);
    }
  bytes = g_bytes_new (text->str, text->len);
  for (guint run = 0; run < RUNS; run++)
    {
      best[0] = fmin (best[0], time_strtod (text->str + preamble));
      best[1] = fmin (best[1], time_reading (bytes, FALSE));
      best[2] = fmin (best[2], time_reading (bytes, TRUE));
    }
  printf ("%-22s %u points, %" G_GSIZE_FORMAT " bytes: strtod %.0f files/s; read %.0f (%.2f times as fast); read and judged %.0f (%.2f)\n", what, n_points,
          text->len, 1 / best[0], 1 / best[1], best[0] / best[1], 1 / best[2], best[0] / best[2]);
  g_string_free (text, TRUE);
}

int
main (int argc, char **argv)
{
  guint n_points = argc > 1 ? (guint) CLAMP (atoi (argv[1]), 100, 1000000) : 4000;

  measure ("six decimals", "%.6f", ",", n_points);
  measure ("exponents", "%.6e", ",", n_points);
  measure ("seventeen digits", "%.17g", ",", n_points);
  measure ("runs of blanks", "%.6f", "    ", n_points);
  return 0;
}
