/* Reads spectra from delimited text. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "spectrum-private.h"
#include "text-private.h"

/* Columns of a file that make one spectrum, and what is known of them. */
typedef struct { gsize x, y; BtXUnit x_unit; BtYUnit y_unit; gboolean x_stated, y_stated, x_said, y_said; char *title; } Choice;

typedef struct {
  const char *name;
  const char *encoding;
  GArray *lines;
  BtDialect dialect;
  gsize first, last;       /* rows lie from line first up to, not including, last */
  gsize n_columns, n_rows, n_skipped;
  double *values;          /* n_rows x n_columns; NAN for missing */
  char **headers;          /* n_columns; never NULL */
} Table;

static void
table_clear (Table *table)
{
  g_clear_pointer (&table->lines, g_array_unref);
  g_free (table->values);
  g_strfreev (table->headers);
}

static const char *
line_of (const Table *table, gsize i)
{
  return g_array_index (table->lines, const char *, i);
}

static gboolean
is_comment (const char *line)
{
  line += strspn (line, " \t\"");
  return *line == '#' || *line == '%' || *line == ';' || (*line == '/' && line[1] == '/') || *line == '!';
}

static gboolean
fail (GError **error, BtSpectrumError code, const char *text)
{
  g_set_error_literal (error, BT_SPECTRUM_ERROR, code, text);
  return FALSE;
}

/* A file with numbers but no second column is worth its own sentence. */
static gboolean
only_one_column (const Table *table)
{
  gsize numbers = 0;

  for (gsize i = 0; i < table->lines->len; i++)
    {
      g_autofree char *line = g_strstrip (g_strdup (line_of (table, i)));
      double value;

      if (bt_text_number (line, strlen (line), '.', &value))
        numbers++;
    }
  return numbers >= 3;
}

static gboolean
find_rows (Table *table, GError **error)
{
  gsize columns = 0;
  BtField fields[BT_MAX_COLUMNS];

  if (!bt_text_sniff ((char *const *) (void *) table->lines->data, table->lines->len, &table->dialect))
    return fail (error, BT_SPECTRUM_ERROR_FORMAT,
                 only_one_column (table)
                   ? _ ("it has only one column of numbers; a spectrum needs two, wavelength (or energy) and reading.")
                   : _ ("there is no table of numbers in it; export the spectrum as text with one wavelength and one reading a line."));
  table->first = table->lines->len;
  table->last = 0;
  for (gsize i = 0; i < table->lines->len; i++)
    if (!is_comment (line_of (table, i)) && bt_text_is_row (line_of (table, i), table->dialect))
      {
        gsize n = bt_text_fields (line_of (table, i), table->dialect.delimiter, fields, BT_MAX_COLUMNS);

        table->first = MIN (table->first, i);
        table->last = i + 1;
        table->n_rows++;
        columns = MAX (columns, n);
      }
    else if (table->n_rows > 0 && line_of (table, i)[0] != '\0' && !is_comment (line_of (table, i)))
      table->n_skipped++;
  table->n_columns = columns;
  return TRUE;
}

static void
fill_values (Table *table)
{
  gsize row = 0;
  BtField fields[BT_MAX_COLUMNS];

  table->values = g_new (double, table->n_rows * table->n_columns);
  for (gsize i = table->first; i < table->last; i++)
    {
      gsize n;

      if (is_comment (line_of (table, i)) || !bt_text_is_row (line_of (table, i), table->dialect))
        continue;
      n = bt_text_fields (line_of (table, i), table->dialect.delimiter, fields, BT_MAX_COLUMNS);
      for (gsize c = 0; c < table->n_columns; c++)
        {
          double *value = &table->values[row * table->n_columns + c];

          if (c >= n || !bt_text_number (fields[c].text, fields[c].n, table->dialect.decimal, value))
            *value = NAN;
        }
      row++;
    }
}

/* Joins, column by column, the up to three lines above the table that have as many fields. */
static void
fill_headers (Table *table)
{
  g_autofree GString **words = g_new (GString *, table->n_columns);
  gsize used = 0;
  BtField fields[BT_MAX_COLUMNS];

  for (gsize c = 0; c < table->n_columns; c++)
    words[c] = g_string_new (NULL);
  for (gsize i = table->first; i-- > 0 && used < 3;)
    {
      const char *line = line_of (table, i);
      gsize n;

      line += strspn (line, "#%! \t");
      if (*line == '\0')
        continue;
      n = bt_text_fields (line, table->dialect.delimiter, fields, BT_MAX_COLUMNS);
      if (n < 2 || (table->dialect.delimiter != ' ' && n != table->n_columns) || (table->dialect.delimiter == ' ' && n < table->n_columns)
          || strchr (line, '=') != NULL)
        break;
      for (gsize c = 0; c < table->n_columns; c++)
        {
          g_autofree char *word = g_strndup (fields[c].text, fields[c].n);

          g_string_prepend (words[c], " ");
          g_string_prepend (words[c], word);
        }
      used++;
    }
  table->headers = g_new0 (char *, table->n_columns + 1);
  for (gsize c = 0; c < table->n_columns; c++)
    table->headers[c] = g_strstrip (g_string_free (words[c], FALSE));
}

static gsize
numbers_in (const Table *table, gsize column)
{
  gsize count = 0;

  for (gsize r = 0; r < table->n_rows; r++)
    count += isfinite (table->values[r * table->n_columns + column]) ? 1 : 0;
  return count;
}

static double *
column_of (const Table *table, gsize column)
{
  double *out = g_new (double, table->n_rows);

  for (gsize r = 0; r < table->n_rows; r++)
    out[r] = table->values[r * table->n_columns + column];
  return out;
}

/* Whether a column only counts its rows. */
static gboolean
is_counter (const Table *table, gsize column)
{
  double first = table->values[column];

  if (!(fabs (first) < 0.5 || fabs (first - 1) < 0.5) || table->n_columns < 3)
    return FALSE;
  for (gsize r = 0; r < table->n_rows; r++)
    if (fabs (table->values[r * table->n_columns + column] - first - (double) r) > 1e-9)
      return FALSE;
  return TRUE;
}

static gboolean
same_column (const Table *table, gsize a, gsize b)
{
  gsize same = 0;

  for (gsize r = 0; r < table->n_rows; r++)
    same += fabs (table->values[r * table->n_columns + a] - table->values[r * table->n_columns + b])
                <= 1e-6 * fabs (table->values[r * table->n_columns + a])
              ? 1 : 0;
  return 2 * same > table->n_rows;
}

static void
choose_column (const Table *table, gsize x, gsize y, const BtReadOptions *options, GArray *choices)
{
  Choice choice = { .x = x, .y = y };
  g_autofree double *xs = column_of (table, x), *ys = column_of (table, y);

  choice.x_said = options != NULL && options->x_unit >= 0;
  choice.y_said = options != NULL && options->y_unit >= 0;
  choice.x_stated = bt_text_x_unit (table->headers[x], &choice.x_unit);
  choice.y_stated = bt_text_y_unit (table->headers[y], &choice.y_unit);
  if (choice.x_said)
    choice.x_unit = (BtXUnit) options->x_unit;
  else if (!choice.x_stated)
    choice.x_unit = bt_values_x_unit (xs, ys, table->n_rows);
  if (choice.y_said)
    choice.y_unit = (BtYUnit) options->y_unit;
  else if (!choice.y_stated)
    choice.y_unit = bt_values_y_unit (xs, ys, table->n_rows, choice.x_unit);
  g_array_append_val (choices, choice);
}

/* Which columns make spectra: one x with every y, or pairs of x and y. Columns that a header names as something else (n, k, ...) are left out
 * where others are named. */
static GArray *
choose_columns (const Table *table, const BtReadOptions *options)
{
  GArray *choices = g_array_new (FALSE, TRUE, sizeof (Choice));
  const gsize x = is_counter (table, 0) ? 1 : 0, enough = MAX (table->n_rows / 4, 1);
  gboolean pairs, named = FALSE;
  BtXUnit x_unit;
  BtYUnit y_unit;

  pairs = (table->n_columns - x) % 2 == 0 && table->n_columns - x >= 4
          && (same_column (table, x, x + 2)
              || (bt_text_x_unit (table->headers[x], &x_unit) && bt_text_x_unit (table->headers[x + 2], &x_unit)));
  if (pairs)
    {
      for (gsize c = x; c + 1 < table->n_columns; c += 2)
        if (numbers_in (table, c) >= enough && numbers_in (table, c + 1) >= enough)
          choose_column (table, c, c + 1, options, choices);
      return choices;
    }
  for (gsize c = x + 1; c < table->n_columns; c++)
    named = named || bt_text_y_unit (table->headers[c], &y_unit);
  for (gsize c = x + 1; c < table->n_columns; c++)
    {
      /* Reflectance beside others is no film of its own. */
      gboolean known = bt_text_y_unit (table->headers[c], &y_unit);

      if (numbers_in (table, c) < enough && table->n_columns > x + 2)
        continue;
      if (named && (!known || ((y_unit == BT_Y_REFLECTANCE || y_unit == BT_Y_REFLECTANCE_PERCENT) && table->n_columns > x + 2)))
        continue;
      choose_column (table, x, c, options, choices);
    }
  return choices;
}

/* "# key = value", "key: value", or two fields of text: kept as notes. */
static void
take_notes (const Table *table, BtSpectrum *spectrum)
{
  for (gsize i = 0; i < table->first; i++)
    {
      const char *line = line_of (table, i), *at;
      BtField fields[3];

      line += strspn (line, "#%! \t");
      at = strchr (line, '=');
      if (at == NULL)
        at = strchr (line, ':');
      if (at != NULL && at > line)
        {
          g_autofree char *key = g_strndup (line, (gsize) (at - line)), *value = g_strdup (at + 1);

          bt_spectrum_add_note (spectrum, key, value);
        }
      else if (table->dialect.delimiter != ' ' && bt_text_fields (line, table->dialect.delimiter, fields, 3) == 2)
        {
          g_autofree char *key = g_strndup (fields[0].text, fields[0].n), *value = g_strndup (fields[1].text, fields[1].n);

          bt_spectrum_add_note (spectrum, key, value);
        }
    }
}

static const char *
delimiter_title (BtDialect dialect)
{
  switch (dialect.delimiter)
    {
    case ',': return _ ("commas");
    case ';': return _ ("semicolons");
    case '\t': return _ ("tabs");
    default: return _ ("blanks");
    }
}

static const char *
origin_title (gboolean said, gboolean stated)
{
  return said ? _ ("as you said") : stated ? _ ("from the header") : _ ("from the values");
}

static char *
describe (const Table *table, const Choice *choice)
{
  return g_strdup_printf (_ ("Text (%s), %u rows from line %u on, columns %u and %u of %u separated by %s, decimal %s; x in %s (%s), y is %s (%s)."),
                          table->encoding, (guint) table->n_rows, (guint) table->first + 1, (guint) choice->x + 1, (guint) choice->y + 1,
                          (guint) table->n_columns, delimiter_title (table->dialect), table->dialect.decimal == ',' ? _ ("comma") : _ ("point"),
                          bt_x_unit_name (choice->x_unit), origin_title (choice->x_said, choice->x_stated), bt_y_unit_name (choice->y_unit),
                          origin_title (choice->y_said, choice->y_stated));
}

static BtSpectrum *
make_spectrum (const Table *table, const Choice *choice, gboolean several, const char *sha256, GError **error)
{
  g_autofree double *x = column_of (table, choice->x), *y = column_of (table, choice->y);
  g_autofree char *reading = describe (table, choice);
  const char *header = table->headers[choice->y];
  BtSpectrum *spectrum;

  if (choice->y_unit == BT_Y_REFLECTANCE || choice->y_unit == BT_Y_REFLECTANCE_PERCENT)
    {
      fail (error, BT_SPECTRUM_ERROR_UNITS, _ ("it holds a reflectance, from which no absorbance follows; choose a file of absorbance or transmittance."));
      return NULL;
    }
  spectrum = bt_spectrum_new (x, y, table->n_rows, choice->x_unit, choice->y_unit, several ? header : NULL, error);
  if (spectrum == NULL)
    return NULL;
  bt_spectrum_set_origin (spectrum, table->name, sha256, reading);
  take_notes (table, spectrum);
  if ((!choice->x_stated && !choice->x_said) || (!choice->y_stated && !choice->y_said))
    bt_spectrum_add_flag (spectrum, bt_flag_new ("units-inferred", _ ("The file does not say its units; they were taken from the values (x in %s, y is "
                                                                      "%s). State them if that is wrong."),
                                                 bt_x_unit_name (choice->x_unit), bt_y_unit_name (choice->y_unit)));
  if (table->n_skipped > 0)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("lines-skipped", g_dngettext (GETTEXT_PACKAGE, "%u line among or after the numbers is no row of the table "
                                                                               "and was passed over.",
                                                                               "%u lines among or after the numbers are no rows of the table and were "
                                                                               "passed over.", (gulong) table->n_skipped),
                                                 (guint) table->n_skipped));
  return spectrum;
}

static GPtrArray *
spectra_of (Table *table, const BtReadOptions *options, const char *sha256, GError **error)
{
  g_autoptr (GPtrArray) spectra = g_ptr_array_new_with_free_func (g_object_unref);
  g_autoptr (GArray) choices = NULL;
  g_autoptr (GError) first = NULL;

  if (!find_rows (table, error))
    return NULL;
  fill_values (table);
  fill_headers (table);
  choices = choose_columns (table, options);
  for (guint i = 0; i < choices->len; i++)
    {
      BtSpectrum *spectrum
        = make_spectrum (table, &g_array_index (choices, Choice, i), choices->len > 1, sha256, first == NULL ? &first : NULL);

      if (spectrum != NULL)
        g_ptr_array_add (spectra, spectrum);
    }
  if (spectra->len > 0)
    return g_steal_pointer (&spectra);
  if (first != NULL)
    g_set_error (error, BT_SPECTRUM_ERROR, first->code, _ ("line %u on: %s"), (guint) table->first + 1, first->message);
  else
    fail (error, BT_SPECTRUM_ERROR_VALUES, _ ("every reading in it is missing (NaN or the like); export the spectrum again."));
  return NULL;
}

GPtrArray *
bt_spectrum_read_bytes (GBytes *bytes, const char *name, const BtReadOptions *options, GError **error)
{
  gsize size;
  const guint8 *data = g_bytes_get_data (bytes, &size);
  g_autofree char *sha256 = g_compute_checksum_for_bytes (G_CHECKSUM_SHA256, bytes), *text = NULL;
  Table table = { .name = name };
  GPtrArray *spectra = NULL;
  GError *reason = NULL;

  if (size == 0)
    fail (&reason, BT_SPECTRUM_ERROR_EMPTY, _ ("the file is empty; export the spectrum again."));
  else
    text = bt_text_decode (data, size, &table.encoding, &reason);
  if (text != NULL)
    {
      table.lines = bt_text_split (text);
      spectra = spectra_of (&table, options, sha256, &reason);
    }
  table_clear (&table);
  if (spectra == NULL)
    {
      g_prefix_error (&reason, "%s: ", name);
      g_propagate_error (error, reason);
    }
  return spectra;
}

GPtrArray *
bt_spectrum_read_file (const char *path, const BtReadOptions *options, GError **error)
{
  g_autofree char *text = NULL;
  g_autoptr (GBytes) bytes = NULL;
  g_autoptr (GError) reason = NULL;
  gsize size;

  if (g_file_test (path, G_FILE_TEST_IS_DIR))
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_OPEN, _ ("%s: this is a folder; name the files in it."), path);
      return NULL;
    }
  if (!g_file_get_contents (path, &text, &size, &reason))
    {
      if (g_error_matches (reason, G_FILE_ERROR, G_FILE_ERROR_NOENT))
        g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_OPEN, _ ("%s: there is no such file; was it moved or renamed?"), path);
      else if (g_error_matches (reason, G_FILE_ERROR, G_FILE_ERROR_ACCES))
        g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_OPEN, _ ("%s: you may not read this file; ask its owner for permission."), path);
      else
        g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_OPEN, _ ("%s: it cannot be read: %s."), path, reason->message);
      return NULL;
    }
  bytes = g_bytes_new_take (g_steal_pointer (&text), size);
  return bt_spectrum_read_bytes (bytes, path, options, error);
}

BtSpectrum *
bt_spectrum_new_from_file (const char *path, GError **error)
{
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_file (path, NULL, error);

  return spectra != NULL ? g_object_ref (g_ptr_array_index (spectra, 0)) : NULL;
}
