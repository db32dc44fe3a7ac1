/* bandtally-cli inspect: what was read from files, and what is odd about it. */
#include <glib/gi18n.h>
#include <math.h>
#include <stdlib.h>
#include <sys/stat.h>

#include "command.h"

/* Lines of a file that --lines shows. */
#define FIRST_LINES 12

typedef struct
{
  char **files;
  char *points, *jcamp, *jcamp_form, *spectrum, *x_unit, *y_unit;
  gboolean lines;
} Options;

/* @only: number of the one spectrum wanted, 0 for all. */
typedef struct
{
  BtReadOptions reading;
  guint only;
  BtJcampForm form;
} Request;

static void
options_clear (Options *options)
{
  g_clear_pointer (&options->files, g_strfreev);
  g_free (options->points);
  g_free (options->jcamp);
  g_free (options->jcamp_form);
  g_free (options->spectrum);
  g_free (options->x_unit);
  g_free (options->y_unit);
}

static gboolean
parse_options (Options *options, int *argc, char ***argv, int *status)
{
  const GOptionEntry entries[] = {
    { "lines", 0, 0, G_OPTION_ARG_NONE, &options->lines, N_ ("show the file's first lines as they are"), NULL },
    { "points", 0, 0, G_OPTION_ARG_FILENAME, &options->points, N_ ("write the points as they were read; - is standard output"),
      "FILE" },
    { "jcamp", 0, 0, G_OPTION_ARG_FILENAME, &options->jcamp, N_ ("write what was read as JCAMP-DX; - is standard output"), "FILE" },
    { "jcamp-form", 0, 0, G_OPTION_ARG_STRING, &options->jcamp_form,
      N_ ("how its ordinates are written: difdup (squeezed, the default) or affn (plain numbers)"), N_ ("FORM") },
    { "spectrum", 0, 0, G_OPTION_ARG_STRING, &options->spectrum, N_ ("only the N-th spectrum of a file that holds several"),
      "N" },
    { "x-unit", 0, 0, G_OPTION_ARG_STRING, &options->x_unit, N_ ("unit of the first column: nm, um, 1/cm, eV"), N_ ("UNIT") },
    { "y-unit", 0, 0, G_OPTION_ARG_STRING, &options->y_unit, N_ ("what was read: absorbance, transmittance, transmittance%, …"),
      N_ ("UNIT") },
    { G_OPTION_REMAINING, 0, 0, G_OPTION_ARG_FILENAME_ARRAY, &options->files, NULL, NULL },
    { NULL },
  };

  return command_parse ("inspect", _ ("FILE…"), _ ("Says what was read from files, and what is odd about it."), entries, NULL,
                        argc, argv, status);
}

static void print_line (const char *name, const char *format, ...) G_GNUC_PRINTF (2, 3);
static void
print_line (const char *name, const char *format, ...)
{
  va_list arguments;
  char *text, *lead, *lines;
  /* printf's widths count bytes; names are UTF-8. */
  int space = MAX (0, 12 - (int) g_utf8_strlen (name, -1));

  va_start (arguments, format);
  text = g_strdup_vprintf (format, arguments);
  va_end (arguments);
  lead = g_strdup_printf ("  %s%*s  ", name, space, "");
  lines = bt_wrap_text (lead, text, output_columns ());
  g_print ("%s", lines);
  g_free (lines);
  g_free (lead);
  g_free (text);
}

static int
compare_doubles (const void *a, const void *b)
{
  double x = *(const double *)a, y = *(const double *)b;

  return (x > y) - (x < y);
}

static double
median (const double *values, gsize n)
{
  double *sorted = g_memdup2 (values, n * sizeof *values);
  double middle;

  qsort (sorted, n, sizeof *sorted, compare_doubles);
  middle = n % 2 == 1 ? sorted[n / 2] : (sorted[n / 2 - 1] + sorted[n / 2]) / 2;
  g_free (sorted);
  return middle;
}

static void
print_noise (BtSpectrum *spectrum)
{
  gsize n;
  const double *noise = bt_spectrum_get_noise (spectrum, &n);
  char *typical = bt_format_number (median (noise, n), 2, TRUE);

  if (bt_spectrum_get_y_unit (spectrum) == BT_Y_ALPHA_PER_CM)
    print_line (_ ("Noise"), _ ("%s 1/cm (standard deviation of alpha / ln 10, median)"), typical);
  else
    print_line (_ ("Noise"), _ ("%s (standard deviation of the absorbance, median)"), typical);
  g_free (typical);
}

static void
print_steps (BtSpectrum *spectrum)
{
  gsize n;
  const BtStep *steps = bt_spectrum_get_steps (spectrum, &n);

  if (n == 0)
    print_line (_ ("Steps"), "%s", _ ("none found"));
  for (gsize i = 0; i < n; i++)
    {
      /* The size is told as the curve is mostly looked at, towards longer waves. */
      char *size = bt_format_uncertain (-steps[i].size, steps[i].size_u);

      print_line (_ ("Steps"), _ ("at %.1f nm (%.3f eV): %s in absorbance, towards longer waves"),
                  bt_nm_from_ev (steps[i].energy_ev), steps[i].energy_ev, size);
      g_free (size);
    }
}

static void
print_saturated (BtSpectrum *spectrum)
{
  gsize n;
  const BtRange *ranges = bt_spectrum_get_saturated (spectrum, &n);

  if (n == 0)
    print_line (_ ("Saturated"), "%s", _ ("nowhere"));
  for (gsize i = 0; i < n; i++)
    print_line (_ ("Saturated"), _ ("%.1f to %.1f nm"), bt_nm_from_ev (ranges[i].high_ev), bt_nm_from_ev (ranges[i].low_ev));
}

/* The file's beginning as it is, beside what was made of it. */
static void
print_beginning (const char *file)
{
  char **lines = bt_spectrum_first_lines (file, FIRST_LINES, NULL);

  for (guint i = 0; lines != NULL && lines[i] != NULL; i++)
    g_print ("  %5u | %s\n", i + 1, lines[i]);
  g_strfreev (lines);
}

static void
print_spectrum (BtSpectrum *spectrum, const char *file)
{
  gsize n, n_raw;
  const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, &n);
  const GPtrArray *flags = bt_spectrum_get_flags (spectrum);
  const char *title = bt_spectrum_get_title (spectrum);
  char *name = g_filename_display_name (file);
  char *reading;

  bt_spectrum_get_raw_x (spectrum, &n_raw);
  reading = bt_wrap_text ("  ", bt_spectrum_get_reading (spectrum), output_columns ());
  g_print ("%s\n%s", name, reading);
  g_free (reading);
  if (title != NULL && title[0] != '\0')
    print_line (_ ("Title"), "%s", title);
  print_line (_ ("Points"), _ ("%zu read, %zu used"), n_raw, n);
  print_line (_ ("Range"), _ ("%.1f to %.1f nm (%.3f to %.3f eV)"), bt_nm_from_ev (energy_ev[n - 1]),
              bt_nm_from_ev (energy_ev[0]), energy_ev[0], energy_ev[n - 1]);
  print_line (_ ("Units"), "%s, %s", bt_x_unit_name (bt_spectrum_get_x_unit (spectrum)),
              bt_y_unit_name (bt_spectrum_get_y_unit (spectrum)));
  print_noise (spectrum);
  print_steps (spectrum);
  print_saturated (spectrum);
  if (bt_spectrum_get_sha256 (spectrum) != NULL)
    print_line ("SHA-256", "%s", bt_spectrum_get_sha256 (spectrum));
  for (guint i = 0; flags != NULL && i < flags->len; i++)
    print_line (_ ("Flag"), "%s", ((const BtFlag *) g_ptr_array_index (flags, i))->text);
  g_free (name);
}

/* The file's own numbers in the file's own order and units. */
static gboolean
write_points (BtSpectrum *spectrum, const char *path, GError **error)
{
  gsize n;
  const double *x = bt_spectrum_get_raw_x (spectrum, &n);
  const double *y = bt_spectrum_get_raw_y (spectrum, NULL);
  GString *text = g_string_new (NULL);
  gboolean written;

  g_string_append_printf (text, "%s,%s\r\n", bt_x_unit_name (bt_spectrum_get_x_unit (spectrum)),
                          bt_y_unit_name (bt_spectrum_get_y_unit (spectrum)));
  for (gsize i = 0; i < n; i++)
    {
      char *a = bt_format_exact (x[i]), *b = bt_format_exact (y[i]);

      g_string_append_printf (text, "%s,%s\r\n", a, b);
      g_free (a);
      g_free (b);
    }
  written = output_write (path, text->str, (gssize) text->len, error);
  g_string_free (text, TRUE);
  return written;
}

/* One spectrum, or all of a file as the blocks of one; @file names the whole. */
static gboolean
write_jcamp (GPtrArray *spectra, guint only, const char *file, BtJcampForm form, const char *path, GError **error)
{
  char *name = g_filename_display_basename (file);
  char *text = only > 0 ? bt_spectrum_to_jcamp (g_ptr_array_index (spectra, only - 1), form) : bt_spectra_to_jcamp (spectra, name, form);
  gboolean written = output_write (path, text, -1, error);

  g_free (text);
  g_free (name);
  return written;
}

/* Whether standard output is taken for points. */
static gboolean
is_quiet (const Options *options)
{
  return is_standard_output (options->points) || is_standard_output (options->jcamp);
}

static gboolean
inspect_file (const char *file, const Options *options, const Request *request, GError **error)
{
  const guint only = request->only;
  GPtrArray *spectra = bt_spectrum_read_file (file, &request->reading, error);
  gboolean done = TRUE;

  if (spectra == NULL)
    return FALSE;
  if (only > spectra->len)
    {
      g_set_error (error, G_OPTION_ERROR, G_OPTION_ERROR_BAD_VALUE,
                   ngettext ("%s holds %u spectrum; there is no number %u.", "%s holds %u spectra; there is no number %u.",
                             spectra->len),
                   file, spectra->len, only);
      done = FALSE;
    }
  for (guint i = 0; done && i < spectra->len; i++)
    if (only == 0 || only == i + 1)
      {
        BtSpectrum *spectrum = g_ptr_array_index (spectra, i);

        if (!is_quiet (options))
          {
            print_spectrum (spectrum, file);
            if (options->lines)
              print_beginning (file);
          }
        if (options->points != NULL)
          {
            done = write_points (spectrum, options->points, error);
            break;
          }
      }
  if (done && options->jcamp != NULL)
    done = write_jcamp (spectra, only, file, request->form, options->jcamp, error);
  g_ptr_array_unref (spectra);
  return done;
}

static int
inspect (const Options *options, const Request *request)
{
  int status = STATUS_DONE;

  for (char **file = options->files; *file != NULL; file++)
    {
      GError *error = NULL;

      if (file != options->files && !is_quiet (options))
        g_print ("\n");
      if (!inspect_file (*file, options, request, &error))
        {
          complain (error->message);
          g_error_free (error);
          status = STATUS_SOME_FAILED;
        }
    }
  return status;
}

static gboolean
is_same_file (const char *a, const char *b)
{
  struct stat one, other;

  return g_str_equal (a, b) || (stat (a, &one) == 0 && stat (b, &other) == 0 && one.st_dev == other.st_dev && one.st_ino == other.st_ino);
}

/* What is written takes one file, and may not take its place. */
static void
check_written (const Options *options, const char *option, const char *path, GError **error)
{
  if (path == NULL || *error != NULL)
    return;
  if (options->files[1] != NULL)
    g_set_error (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, _ ("%s takes one file at a time."), option);
  else if (is_same_file (path, options->files[0]))
    g_set_error (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, _ ("%s would overwrite the file that is read; name another."), option);
}

static void
check_options (const Options *options, Request *request, GError **error)
{
  double only = 0;
  const NumberOption number = { "--spectrum", options->spectrum, &only, 1, 1e6, N_ ("a whole number from 1 up") };

  if (options->files == NULL)
    {
      g_set_error_literal (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, _ ("No file was named: give at least one."));
      return;
    }
  check_written (options, "--points", options->points, error);
  check_written (options, "--jcamp", options->jcamp, error);
  if (*error == NULL && options->points != NULL && options->jcamp != NULL && is_same_file (options->points, options->jcamp))
    g_set_error_literal (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, _ ("--points and --jcamp need a place each."));
  if (*error == NULL && options->jcamp_form != NULL && options->jcamp == NULL)
    g_set_error_literal (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, _ ("--jcamp-form says how --jcamp writes; give --jcamp too."));
  if (*error != NULL)
    return;
  if (options->jcamp_form != NULL && g_str_equal (options->jcamp_form, "affn"))
    request->form = BT_JCAMP_AFFN;
  else if (options->jcamp_form != NULL && !g_str_equal (options->jcamp_form, "difdup"))
    bad_value ("--jcamp-form", _ ("difdup or affn"), options->jcamp_form, error);
  if (*error == NULL && parse_numbers (&number, 1, error) && only != floor (only))
    bad_value (number.option, _ (number.wanted), options->spectrum, error);
  if (*error == NULL)
    parse_units (options->x_unit, options->y_unit, &request->reading, error);
  request->only = (guint) only;
}

int
inspect_command (int argc, char **argv)
{
  Options options = { NULL };
  Request request = { BT_READ_OPTIONS_INIT, 0, BT_JCAMP_DIFDUP };
  GError *error = NULL;
  int status;

  if (parse_options (&options, &argc, &argv, &status))
    {
      check_options (&options, &request, &error);
      status = error != NULL ? command_usage_error ("inspect", error) : inspect (&options, &request);
    }
  options_clear (&options);
  return status;
}
