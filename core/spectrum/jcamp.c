/* Reads spectra from JCAMP-DX. */
#include "jcamp-private.h"

#include <string.h>

#include <glib/gi18n-lib.h>

/* More ordinates than bytes in the whole file, and as many again, are a count gone wrong. */
#define ORDINATES_ANYWAY 100000

typedef struct {
  const BtText *text;
  const BtReadOptions *options;
  BtSource *source;
  GPtrArray *spectra;
  GHashTable *labels;           /* of the block: plain label to value */
  guint line;                   /* of the line that is being read */
  gsize n_left;                 /* ordinates that the file may still hold */
} Jcamp;

/* A table as it is read. */
typedef struct {
  GArray *x, *y;                /* of double */
  guint line;                   /* where it begins */
  guint n;                      /* of its points; set when it is read */
  guint n_x_failed, x_failed_line;
  BtAsdf asdf;
} Table;

gboolean
bt_jcamp_is (const BtText *text)
{
  const char *at = text->at;

  while (at < text->end && g_ascii_isspace (*at))
    at++;
  return text->end - at > 8 && (g_ascii_strncasecmp (at, "##TITLE", 7) == 0 || g_ascii_strncasecmp (at, "##JCAMP", 7) == 0);
}

/* (transfer full): labels compare without case, blanks, dashes, slashes and underscores. */
static char *
plain_label (const char *at, const char *end)
{
  GString *plain = g_string_new (NULL);

  for (; at < end; at++)
    if (strchr (" -/_\t", *at) == NULL)
      g_string_append_c (plain, g_ascii_toupper (*at));
  return g_string_free (plain, FALSE);
}

static const char *
without_comment (const char *at, const char *end)
{
  for (const char *c = at; c + 1 < end; c++)
    if (c[0] == '$' && c[1] == '$')
      return c;
  return end;
}

static const char *
label (const Jcamp *jcamp, const char *name)
{
  return g_hash_table_lookup (jcamp->labels, name);
}

/* NAN where the block does not say. */
static double
number (const Jcamp *jcamp, const char *name)
{
  const char *text = label (jcamp, name);
  double value;

  return text != NULL && bt_text_scan_number (text, text + strlen (text), '.', &value) != NULL ? value : (double) NAN;
}

static double
factor (const Jcamp *jcamp, const char *name)
{
  const double value = number (jcamp, name);

  return isnan (value) || !(fabs (value) > 0) ? 1 : value;
}

/* An integer times a factor such as 0.001: dividing by 1000 gives the double nearest to the decimal, multiplying not always. */
static double
scaled (double value, double by)
{
  static const double powers[] = { 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12 };

  for (gsize i = 0; by < 0.5 && by > 0 && i < G_N_ELEMENTS (powers); i++)
    if (!(fabs (1 / powers[i] - by) > 0))
      return value / powers[i];
  return value * by;
}

double
bt_jcamp_abscissa (double first, double last, gsize n, gsize i)
{
  const double steps = (double) n - 1;

  if (n < 2)
    return first;
  /* Integers are exact up to 2^53, so one rounding is left. */
  for (double scale = 1; scale <= 1e6; scale *= 10)
    {
      const double low = round (first * scale), high = round (last * scale);

      if (!(fabs (low / scale - first) > 0) && !(fabs (high / scale - last) > 0))
        {
          if (fmax (fabs (low), fabs (high)) * steps < 4e15 && steps * scale < 4e15)
            return (low * (steps - (double) i) + high * (double) i) / (steps * scale);
          break;
        }
    }
  return (first * (steps - (double) i) + last * (double) i) / steps;
}

/* Reads the next line; FALSE at the end of the text or of the table (a labelled record begins). */
static gboolean
next_table_line (Jcamp *jcamp, const char **at, const char **line, const char **line_end)
{
  const char *next;

  while (*at < jcamp->text->end)
    {
      *line = *at;
      *line_end = bt_text_line_end (*at, jcamp->text->end, &next);
      while (*line < *line_end && (**line == ' ' || **line == '\t'))
        (*line)++;
      if (*line_end - *line >= 2 && (*line)[0] == '#' && (*line)[1] == '#')
        return FALSE;
      *at = next;
      jcamp->line++;
      *line_end = without_comment (*line, *line_end);
      if (*line_end > *line)
        return TRUE;
    }
  return FALSE;
}

/* (X++(Y..Y)): returns where the next record begins, NULL with @error set. */
static const char *
read_ordinates (Jcamp *jcamp, const char *at, Table *table, GError **error)
{
  const double first_x = number (jcamp, "FIRSTX"), last_x = number (jcamp, "LASTX"), n_points = number (jcamp, "NPOINTS");
  const double x_factor = factor (jcamp, "XFACTOR"), y_factor = factor (jcamp, "YFACTOR");
  double step = n_points > 1 ? (last_x - first_x) / (n_points - 1) : number (jcamp, "DELTAX");
  const char *line, *end;

  while (next_table_line (jcamp, &at, &line, &end))
    {
      const gsize before = table->asdf.ordinates->len;
      double x;
      gboolean repeats;

      if (!bt_asdf_line (&table->asdf, line, end, jcamp->line, &x, &repeats, error))
        return NULL;
      /* A line that repeats an ordinate begins with the abscissa of that one; some writers give the one behind it. */
      if (fabs (x * x_factor - first_x - step * (double) before) > 0.6 * fabs (step)
          && !(repeats && fabs (x * x_factor - first_x - step * ((double) before - 1)) <= 0.6 * fabs (step)) && table->n_x_failed++ == 0)
        table->x_failed_line = jcamp->line;
    }
  if (table->y->len > 0 && (isnan (step) || isnan (first_x)))
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT,
                   _ ("line %u: a table of equal steps needs FIRSTX, LASTX and NPOINTS above it; export the spectrum again."), table->line);
      return NULL;
    }
  g_array_set_size (table->x, table->y->len);
  for (guint i = 0; i < table->y->len; i++)
    {
      double *x = &g_array_index (table->x, double, i), *y = &g_array_index (table->y, double, i);

      /* By the ends, so that no rounding adds up. */
      *x = n_points > 1 ? bt_jcamp_abscissa (first_x, last_x, (gsize) n_points, i) : first_x + step * i;
      *y = scaled (*y, y_factor);
    }
  return at;
}

/* (XY..XY): pairs split by blanks or semicolons, their members by a comma or blanks. */
static const char *
read_pairs (Jcamp *jcamp, const char *at, Table *table, GError **error)
{
  const double factors[2] = { factor (jcamp, "XFACTOR"), factor (jcamp, "YFACTOR") };
  const char *line, *end;
  guint member = 0;

  while (next_table_line (jcamp, &at, &line, &end))
    while (line < end)
      {
        double value;
        const char *behind;

        if (strchr (" \t,;", *line) != NULL)
          {
            line++;
            continue;
          }
        behind = *line == '?' ? line + 1 : bt_text_scan_number (line, end, '.', &value);
        if (behind == NULL)
          {
            g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT,
                         _ ("line %u: the table holds a sign that no number has; export the spectrum again."), jcamp->line);
            return NULL;
          }
        if (member == 0 && table->x->len >= jcamp->n_left)
          {
            g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES,
                         _ ("line %u: it holds more than 10 million points; split it, or export fewer."), jcamp->line);
            return NULL;
          }
        value = *line == '?' ? (double) NAN : scaled (value, factors[member]);
        g_array_append_val (member == 0 ? table->x : table->y, value);
        member = 1 - member;
        line = behind;
      }
  if (member == 1)
    g_array_set_size (table->x, table->y->len);
  return at;
}

/* XUNITS of other measurements; any others may be a wavelength in strange words. */
static gboolean
refuse_abscissa (const Jcamp *jcamp, const Table *table, GError **error)
{
  static const char *const others[] = { "SECOND", "MINUTE", "HZ", "HERTZ", "PPM", "M/Z", "M / Z", "DEGREE", "KELVIN", "VOLT", "MILLIVOLT", "MASS", "TIME" };
  const char *words = label (jcamp, "XUNITS");
  gboolean refused = words != NULL && bt_text_foreign (words) != NULL;

  for (gsize i = 0; words != NULL && i < G_N_ELEMENTS (others); i++)
    refused = refused || g_ascii_strncasecmp (words, others[i], strlen (others[i])) == 0;
  if (refused)
    g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_UNITS,
                 _ ("line %u: XUNITS is %s, which is not read; export the spectrum against wavelength in NANOMETERS or MICROMETERS or against 1/CM."),
                 table->line, words);
  return refused;
}

static gboolean
decide_units (const Jcamp *jcamp, const Table *table, BtXUnit *x_unit, BtYUnit *y_unit, gboolean *inferred, GError **error)
{
  const char *x_words = label (jcamp, "XUNITS"), *y_words = label (jcamp, "YUNITS");
  const double *x = (const double *) (void *) table->x->data, *y = (const double *) (void *) table->y->data;
  double high = 0;

  *inferred = FALSE;
  if (jcamp->options != NULL && jcamp->options->x_unit >= 0)
    *x_unit = (BtXUnit) jcamp->options->x_unit;
  else if (x_words == NULL || !bt_text_x_unit (x_words, x_unit))
    {
      if (refuse_abscissa (jcamp, table, error))
        return FALSE;
      *x_unit = bt_values_x_unit (x, y, table->y->len, FALSE);
      *inferred = TRUE;
    }
  if (jcamp->options != NULL && jcamp->options->y_unit >= 0)
    *y_unit = (BtYUnit) jcamp->options->y_unit;
  else if (y_words == NULL || !bt_text_y_unit (y_words, y_unit))
    {
      if (y_words != NULL && (bt_text_foreign (y_words) != NULL || g_ascii_strncasecmp (y_words, "kubelka", 7) == 0))
        {
          g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_UNITS,
                       _ ("line %u: YUNITS is %s, from which no absorbance follows; choose a file of absorbance or transmittance."), table->line,
                       y_words);
          return FALSE;
        }
      *y_unit = bt_values_y_unit (x, y, table->y->len, *x_unit);
      *inferred = TRUE;
    }
  for (guint i = 0; i < table->y->len; i++)
    high = y[i] > high ? y[i] : high;
  if (*y_unit == BT_Y_TRANSMITTANCE && high > 2 && !(jcamp->options != NULL && jcamp->options->y_unit >= 0))
    *y_unit = BT_Y_TRANSMITTANCE_PERCENT;
  if (bt_read_options_reflectance (jcamp->options))
    {
      if (high > 1.5)
        *y_unit = BT_Y_REFLECTANCE_PERCENT;
      return TRUE;
    }
  if (*y_unit == BT_Y_REFLECTANCE || *y_unit == BT_Y_REFLECTANCE_PERCENT)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_UNITS,
                   _ ("line %u: it holds a reflectance, from which no absorbance follows; choose a file of absorbance or transmittance."),
                   table->line);
      return FALSE;
    }
  return TRUE;
}

/* Data classes of the standards that are no single spectrum. */
static gboolean
refuse_class (const char *name, guint line, GError **error)
{
  static const struct { const char *name, *title; } classes[] = {
    { "NTUPLES", "NTUPLES" },   { "PEAKTABLE", "PEAK TABLE" }, { "PEAKASSIGNMENTS", "PEAK ASSIGNMENTS" }, { "ASSIGNMENTS", "ASSIGNMENTS" },
    { "RADATA", "RADATA" },     { "DATATABLE", "DATA TABLE" },
  };

  for (gsize i = 0; i < G_N_ELEMENTS (classes); i++)
    if (g_str_equal (name, classes[i].name))
      {
        g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT,
                     _ ("line %u: the data are of the class %s, which is not read; export the spectrum as XYDATA or XYPOINTS."), line, classes[i].title);
        return TRUE;
      }
  return FALSE;
}

/* What the table and the labels above it say differently. */
static void
flag_checks (const Jcamp *jcamp, const Table *table, BtSpectrum *spectrum)
{
  const double n_points = number (jcamp, "NPOINTS"), first_y = number (jcamp, "FIRSTY"), y = bt_spectrum_get_raw_y (spectrum, NULL)[0];

  if (table->asdf.n_failed > 0)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("jcamp-check", _ ("In %u lines, first in line %u, the repeated reading is not that of the line before: "
                                                                   "the file was damaged or edited. Export it again."),
                                                 table->asdf.n_failed, table->asdf.failed_line));
  if (table->n_x_failed > 0)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("jcamp-abscissa", _ ("In %u lines, first in line %u, the abscissa is not where equal steps lead: lines "
                                                                      "may be missing. Export the file again."),
                                                 table->n_x_failed, table->x_failed_line));
  if (!isnan (n_points) && fabs (n_points - table->n) > 0.5)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("jcamp-points", _ ("The file states %.0f points and holds %u: part of it may be missing. Export it "
                                                                    "again."),
                                                 n_points, table->n));
  if (!isnan (first_y) && fabs (first_y - y) > 1e-3 * fabs (y) + 2 * fabs (factor (jcamp, "YFACTOR")))
    bt_spectrum_add_flag (spectrum, bt_flag_new ("jcamp-first", _ ("The file states %.6g as its first reading and holds %.6g: a factor may be wrong. "
                                                                   "Export it again."),
                                                 first_y, y));
}

static gboolean
make_spectrum (Jcamp *jcamp, Table *table, const char *form, GError **error)
{
  const char *title = label (jcamp, "TITLE");
  g_autofree char *reading = NULL;
  g_autoptr (GError) reason = NULL;
  BtSpectrum *spectrum;
  BtXUnit x_unit;
  BtYUnit y_unit;
  gboolean inferred;

  if (!decide_units (jcamp, table, &x_unit, &y_unit, &inferred, error))
    return FALSE;
  /* A table may be most of the memory there is: it is handed on, not copied. */
  spectrum = bt_spectrum_new_take ((double *) (void *) g_array_steal (table->x, NULL), (double *) (void *) g_array_steal (table->y, NULL), table->n,
                                   x_unit, y_unit, title, &reason);
  if (spectrum == NULL)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, reason->code, _ ("line %u on: %s"), table->line, reason->message);
      return FALSE;
    }
  reading = g_strdup_printf (_ ("JCAMP-DX %s, %u points from line %u on in the form %s; x in %s, y is %s (%s)."),
                             label (jcamp, "JCAMPDX") != NULL ? label (jcamp, "JCAMPDX") : "?", table->n, table->line, form,
                             bt_x_unit_name (x_unit), bt_y_unit_name (y_unit), inferred ? _ ("from the values") : _ ("from the labels"));
  bt_spectrum_set_origin (spectrum, jcamp->source, reading);
  if (inferred)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("units-inferred", _ ("The file does not say its units; from the values they are %s and %s. State them "
                                                                      "if that is wrong."),
                                                 bt_x_unit_name (x_unit), bt_y_unit_name (y_unit)));
  flag_checks (jcamp, table, spectrum);
  g_ptr_array_add (jcamp->spectra, spectrum);
  return TRUE;
}

static const char *
read_table (Jcamp *jcamp, const char *at, gboolean pairs, GError **error)
{
  Table table = { .x = g_array_new (FALSE, FALSE, sizeof (double)), .y = g_array_new (FALSE, FALSE, sizeof (double)), .line = jcamp->line + 1 };

  table.asdf = (BtAsdf){ .ordinates = table.y, .most = jcamp->n_left };
  if (number (jcamp, "NPOINTS") > BT_MAX_POINTS)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES,
                   _ ("line %u: NPOINTS above the table states %.10g points, and 10 million at most are read; export the spectrum again, or fewer points."),
                   table.line, number (jcamp, "NPOINTS"));
      at = NULL;
    }
  else
    at = pairs ? read_pairs (jcamp, at, &table, error) : read_ordinates (jcamp, at, &table, error);
  table.n = table.y->len;
  jcamp->n_left -= MIN (table.n, jcamp->n_left);
  if (at != NULL && table.n == 0)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES, _ ("line %u: the table is empty; export the spectrum again."), table.line);
      at = NULL;
    }
  if (at != NULL && !make_spectrum (jcamp, &table, pairs ? "(XY..XY)" : "(X++(Y..Y))", error))
    at = NULL;
  g_array_unref (table.x);
  g_array_unref (table.y);
  return at;
}

/* A labelled record that is no table: its value, with the lines that continue it. */
static const char *
read_value (Jcamp *jcamp, const char *at, const char *end, const char *name, const char *spelling, const char *next)
{
  GString *value = g_string_new_len (at, without_comment (at, end) - at);
  const char *line;

  at = next;
  while (next_table_line (jcamp, &at, &line, &end))
    if (value->len < 2000)
      {
        g_string_append_c (value, ' ');
        g_string_append_len (value, line, end - line);
      }
  g_hash_table_insert (jcamp->labels, g_strdup (name), g_strstrip (g_strdup (value->str)));
  bt_source_add_note (jcamp->source, *spelling == '$' ? spelling + 1 : spelling, value->str);
  g_string_free (value, TRUE);
  return at;
}

gboolean
bt_jcamp_read (const BtText *text, const BtReadOptions *options, BtSource *source, GPtrArray *spectra, GError **error)
{
  Jcamp jcamp = { .text = text, .options = options, .source = source, .spectra = spectra,
                  .labels = g_hash_table_new_full (g_str_hash, g_str_equal, g_free, g_free),
                  .n_left = MIN (ORDINATES_ANYWAY + (gsize) (text->end - text->at), BT_MAX_POINTS) };
  g_autoptr (GError) reason = NULL;

  for (const char *at = text->at, *next; at != NULL && at < text->end;)
    {
      const char *end = bt_text_line_end (at, text->end, &next), *sign;
      g_autofree char *name = NULL;

      while (at < end && (*at == ' ' || *at == '\t'))
        at++;
      jcamp.line++;
      sign = end - at > 2 && at[0] == '#' && at[1] == '#' ? memchr (at, '=', (gsize) (end - at)) : NULL;
      if (sign == NULL)
        {
          at = next;
          continue;
        }
      name = plain_label (at + 2, sign);
      if (g_str_equal (name, "TITLE"))
        g_hash_table_remove_all (jcamp.labels);
      if (spectra->len > BT_MAX_SPECTRA)
        {
          g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT, _ ("it holds more than %d spectra; split it."), BT_MAX_SPECTRA);
          g_hash_table_unref (jcamp.labels);
          return FALSE;
        }
      if (g_str_equal (name, "XYDATA") || g_str_equal (name, "XYPOINTS"))
        {
          g_autoptr (GError) table_reason = NULL;
          const char *form = sign + 1;
          const guint line = jcamp.line;

          while (form < end && *form != '(')
            form++;
          /* Tables are often called XYDATA that hold pairs. */
          at = read_table (&jcamp, next, g_str_equal (name, "XYPOINTS") || (end - form > 3 && g_ascii_strncasecmp (form, "(XY", 3) == 0),
                           &table_reason);
          if (at == NULL)
            {
              at = next;
              jcamp.line = line;
              if (reason == NULL)
                reason = g_steal_pointer (&table_reason);
            }
        }
      else
        {
          /* Notes keep their blanks, as those of other files do. */
          g_autofree char *spelling = g_strstrip (g_strndup (at + 2, (gsize) (sign - at - 2)));

          if (reason == NULL)
            refuse_class (name, jcamp.line, &reason);
          at = read_value (&jcamp, sign + 1, end, name, spelling, next);
        }
    }
  g_hash_table_unref (jcamp.labels);
  for (guint i = 0; i < spectra->len && reason != NULL; i++)
    bt_spectrum_add_flag (g_ptr_array_index (spectra, i),
                          bt_flag_new ("jcamp-block", _ ("Another spectrum of this file could not be read: %s"), reason->message));
  if (spectra->len > 0)
    return TRUE;
  if (reason != NULL)
    g_propagate_error (error, g_steal_pointer (&reason));
  else
    g_set_error_literal (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT,
                         _ ("it is JCAMP-DX without a spectrum in XYDATA or XYPOINTS; export the spectrum itself."));
  return FALSE;
}
