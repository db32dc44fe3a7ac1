/* Writes spectra as JCAMP-DX 4.24: R. S. McDonald and P. A. Wilks, Appl. Spectrosc. 42, 151 (1988). */
#include <math.h>
#include <string.h>

#include "jcamp-private.h"

/* The standard's longest line. */
#define LINE_LENGTH 80
/* Integers beyond are not exact as double. */
#define MOST_INTEGER 9007199254740992.0

/* The shortest plain decimal that reads back as @value; FALSE where there is none of up to 12 places. */
static gboolean
plain_decimal (double value, char *buffer, int size)
{
  for (int places = 0; places <= 12; places++)
    {
      char format[8];

      g_snprintf (format, sizeof format, "%%.%df", places);
      g_ascii_formatd (buffer, size, format, value);
      if (!(fabs (g_ascii_strtod (buffer, NULL) - value) > 0))
        return fabs (value) < 1e15;
    }
  return FALSE;
}

/* The shortest number in any form that reads back as @value. */
static void
any_number (double value, char *buffer, int size)
{
  if (plain_decimal (value, buffer, size))
    return;
  for (int digits = 6; digits <= 17; digits++)
    {
      char format[8];

      g_snprintf (format, sizeof format, "%%.%dg", digits);
      g_ascii_formatd (buffer, size, format, value);
      if (!(fabs (g_ascii_strtod (buffer, NULL) - value) > 0))
        return;
    }
}

/* Whether the abscissas are what a reader makes of the first, the last and the number of points. */
static gboolean
is_even (const double *x, gsize n)
{
  char buffer[G_ASCII_DTOSTR_BUF_SIZE];

  for (gsize i = 0; i < n; i++)
    if (fabs (bt_jcamp_abscissa (x[0], x[n - 1], n, i) - x[i]) > 0 || !plain_decimal (x[i], buffer, sizeof buffer))
      return FALSE;
  return TRUE;
}

/* The smallest power of ten that makes integers of all readings, or 0. */
static double
integer_scale (const double *y, gsize n)
{
  double scale = 1;

  for (int places = 0; places <= 12; places++, scale *= 10)
    {
      gsize i = 0;

      while (i < n && fabs (y[i] * scale) < MOST_INTEGER / 4 && !(fabs (round (y[i] * scale) / scale - y[i]) > 0))
        i++;
      if (i == n)
        return scale;
    }
  return 0;
}

/* Pseudo-digit, then the other digits. @zero, @positive and @negative: the characters for 0, +1 and -1. */
static void
append_packed (GString *out, double value, char zero, char positive, char negative)
{
  char digits[32];

  g_snprintf (digits, sizeof digits, "%.0f", fabs (value));
  if (digits[0] == '0')
    g_string_append_c (out, zero);
  else
    g_string_append_c (out, (char) ((value < 0 ? negative : positive) + (digits[0] - '1')));
  g_string_append (out, digits + 1);
}

static void
append_duplicates (GString *out, gsize count)
{
  char digits[32];

  if (count < 2)
    return;
  g_snprintf (digits, sizeof digits, "%" G_GSIZE_FORMAT, count);
  g_string_append_c (out, digits[0] == '9' ? 's' : (char) ('S' + (digits[0] - '1')));
  g_string_append (out, digits + 1);
}

/* Every line but the first repeats the last ordinate of the line before; one more line closes the table with the last ordinate. */
static void
append_differences (GString *out, const double *x, const double *y, gsize n, double scale)
{
  gsize i = 0;

  for (;;)
    {
      const gsize start = out->len;
      char abscissa[G_ASCII_DTOSTR_BUF_SIZE];
      double last = round (y[i] * scale);

      plain_decimal (x[i], abscissa, sizeof abscissa);
      g_string_append (out, abscissa);
      append_packed (out, last, '@', 'A', 'a');
      i++;
      /* No difference and count together are longer than 40 characters. */
      while (i < n && out->len - start < LINE_LENGTH - 40)
        {
          const double step = round (y[i] * scale) - last;
          gsize count = 1;

          while (i + count < n && !(fabs (round (y[i + count] * scale) - round (y[i + count - 1] * scale) - step) > 0))
            count++;
          append_packed (out, step, '%', 'J', 'j');
          append_duplicates (out, count);
          i += count;
          last = round (y[i - 1] * scale);
        }
      g_string_append (out, "\r\n");
      if (i >= n)
        {
          /* Where the line held a single ordinate and no difference, nothing is left to check. */
          if (out->str[start] != '\0' && n > 1)
            {
              plain_decimal (x[n - 1], abscissa, sizeof abscissa);
              g_string_append (out, abscissa);
              append_packed (out, last, '@', 'A', 'a');
              g_string_append (out, "\r\n");
            }
          return;
        }
      i--;
    }
}

static void
append_ordinates (GString *out, const double *x, const double *y, gsize n)
{
  char number[G_ASCII_DTOSTR_BUF_SIZE];
  gsize start = out->len;

  for (gsize i = 0; i < n; i++)
    {
      if (out->len > start && out->len - start > LINE_LENGTH - 28)
        {
          g_string_append (out, "\r\n");
          start = out->len;
        }
      if (out->len == start)
        {
          plain_decimal (x[i], number, sizeof number);
          g_string_append (out, number);
        }
      if (isfinite (y[i]))
        any_number (y[i], number, sizeof number);
      else
        strcpy (number, "?");
      g_string_append_printf (out, " %s", number);
    }
  g_string_append (out, "\r\n");
}

static void
append_pairs (GString *out, const double *x, const double *y, gsize n)
{
  for (gsize i = 0; i < n; i++)
    {
      char abscissa[G_ASCII_DTOSTR_BUF_SIZE], ordinate[G_ASCII_DTOSTR_BUF_SIZE] = "?";

      any_number (x[i], abscissa, sizeof abscissa);
      if (isfinite (y[i]))
        any_number (y[i], ordinate, sizeof ordinate);
      g_string_append_printf (out, "%s, %s\r\n", abscissa, ordinate);
    }
}

/* The standard's characters are those of ASCII, and a line ends a value. */
static void
append_text (GString *out, const char *label, const char *text)
{
  g_autofree char *ascii = g_str_to_ascii (text, "C");

  for (char *c = ascii; *c != '\0'; c++)
    if (!g_ascii_isprint (*c))
      *c = ' ';
  /* What would begin a comment. */
  for (char *c = strstr (ascii, "$$"); c != NULL; c = strstr (c, "$$"))
    *c = ' ';
  g_string_append_printf (out, "##%s= %s\r\n", label, ascii);
}

static void
append_value (GString *out, const char *label, double value)
{
  char number[G_ASCII_DTOSTR_BUF_SIZE];

  any_number (value, number, sizeof number);
  g_string_append_printf (out, "##%s= %s\r\n", label, number);
}

static void
append_limits (GString *out, const char *axis, const double *values, gsize n)
{
  double low = INFINITY, high = -INFINITY;
  g_autofree char *max = g_strconcat ("MAX", axis, NULL), *min = g_strconcat ("MIN", axis, NULL);

  for (gsize i = 0; i < n; i++)
    if (isfinite (values[i]))
      {
        low = fmin (low, values[i]);
        high = fmax (high, values[i]);
      }
  append_value (out, max, high);
  append_value (out, min, low);
}

/* The standard wants a title: where the spectrum has none it is the film's name, or the file's. */
static void
append_title (GString *out, BtSpectrum *self)
{
  const char *title = bt_spectrum_get_title (self), *film = bt_spectrum_get_note (self, "film"), *file = bt_spectrum_get_file (self);
  g_autofree char *name = file != NULL ? g_filename_display_basename (file) : g_strdup ("spectrum");

  append_text (out, "TITLE", title != NULL && title[0] != '\0' ? title : film != NULL && film[0] != '\0' ? film : name);
}

/* What the program itself reads from preambles. */
static void
append_notes (GString *out, BtSpectrum *self)
{
  static const char *const keys[] = { "film", "lot", "substrate", "thickness nm", "thickness u nm" };

  for (gsize i = 0; i < G_N_ELEMENTS (keys); i++)
    if (bt_spectrum_get_note (self, keys[i]) != NULL)
      {
        g_autofree char *label = g_strconcat ("$", keys[i], NULL);

        append_text (out, label, bt_spectrum_get_note (self, keys[i]));
      }
}

/* (transfer full): the finite abscissas in the unit written, and their readings. Returns their number. */
static gsize
take_points (BtSpectrum *self, double **x, double **y)
{
  gsize n_raw, n = 0;
  const double *raw_x = bt_spectrum_get_raw_x (self, &n_raw), *raw_y = bt_spectrum_get_raw_y (self, NULL);

  *x = g_new (double, n_raw);
  *y = g_new (double, n_raw);
  for (gsize i = 0; i < n_raw; i++)
    if (isfinite (raw_x[i]))
      {
        /* The standard knows no electronvolts. */
        (*x)[n] = bt_spectrum_get_x_unit (self) == BT_X_EV ? bt_x_from_energy_ev (raw_x[i], BT_X_PER_CM) : raw_x[i];
        (*y)[n++] = raw_y[i];
      }
  return n;
}

char *
bt_spectrum_to_jcamp (BtSpectrum *self, BtJcampForm form)
{
  static const char *const x_names[] = { "NANOMETERS", "MICROMETERS", "1/CM", "1/CM" };
  static const char *const y_names[] = { "ABSORBANCE", "TRANSMITTANCE", "% TRANSMITTANCE", "REFLECTANCE", "% REFLECTANCE", "ALPHA 1/CM" };
  GString *out = g_string_new (NULL);
  g_autofree double *x = NULL, *y = NULL;
  gboolean even;
  double scale = 0;
  gsize n;

  g_return_val_if_fail (BT_IS_SPECTRUM (self), NULL);
  n = take_points (self, &x, &y);
  even = is_even (x, n);
  if (even && form == BT_JCAMP_DIFDUP)
    scale = integer_scale (y, n);
  append_title (out, self);
  g_string_append (out, "##JCAMP-DX= 4.24\r\n##DATA TYPE= UV/VIS SPECTRUM\r\n##ORIGIN= Bandtally\r\n##OWNER= as in the file it was read from\r\n");
  g_string_append_printf (out, "##XUNITS= %s\r\n##YUNITS= %s\r\n", x_names[bt_spectrum_get_x_unit (self)], y_names[bt_spectrum_get_y_unit (self)]);
  append_notes (out, self);
  append_value (out, "FIRSTX", x[0]);
  append_value (out, "LASTX", x[n - 1]);
  append_limits (out, "X", x, n);
  append_limits (out, "Y", y, n);
  g_string_append (out, "##XFACTOR= 1\r\n");
  append_value (out, "YFACTOR", scale > 0 ? 1 / scale : 1);
  g_string_append_printf (out, "##NPOINTS= %" G_GSIZE_FORMAT "\r\n", n);
  if (isfinite (y[0]))
    append_value (out, "FIRSTY", y[0]);
  g_string_append (out, even ? "##XYDATA= (X++(Y..Y))\r\n" : "##XYPOINTS= (XY..XY)\r\n");
  if (!even)
    append_pairs (out, x, y, n);
  else if (scale > 0)
    append_differences (out, x, y, n, scale);
  else
    append_ordinates (out, x, y, n);
  g_string_append (out, "##END=\r\n");
  return g_string_free (out, FALSE);
}

char *
bt_spectra_to_jcamp (GPtrArray *spectra, const char *title, BtJcampForm form)
{
  GString *out;

  g_return_val_if_fail (spectra != NULL && spectra->len > 0, NULL);
  if (spectra->len == 1)
    return bt_spectrum_to_jcamp (g_ptr_array_index (spectra, 0), form);
  out = g_string_new (NULL);
  append_text (out, "TITLE", title);
  /* The block that holds the others counts as one. */
  g_string_append_printf (out, "##JCAMP-DX= 4.24\r\n##DATA TYPE= LINK\r\n##BLOCKS= %u\r\n", spectra->len + 1);
  for (guint i = 0; i < spectra->len; i++)
    {
      g_autofree char *block = bt_spectrum_to_jcamp (g_ptr_array_index (spectra, i), form);

      g_string_append (out, block);
    }
  g_string_append (out, "##END=\r\n");
  return g_string_free (out, FALSE);
}
