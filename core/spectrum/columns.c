/* Which columns of a table are spectra, and in which units. */
#include "text-private.h"

#include <string.h>

#include <glib/gi18n-lib.h>

#define MAX_HEADER_LINES 3

/* Splits a header's line into @n_columns fields by whatever sign does it; FALSE where none does. */
static gboolean
split_header (const char *line, const char *end, char delimiter, gsize n_columns, BtField *fields)
{
  const char signs[] = { delimiter, '\t', ';', ',', '|' };
  gsize n = 0;

  for (gsize s = 0; s < sizeof signs; s++)
    {
      if (signs[s] == ' ')
        continue;
      n = bt_text_fields (line, end, signs[s], fields, n_columns + 2);
      while (n > n_columns && fields[n - 1].n == 0)
        n--;
      if (n == n_columns)
        return TRUE;
    }
  /* Runs of two and more blanks. */
  n = 0;
  for (const char *at = line; at < end && n <= n_columns;)
    {
      const char *start;

      while (at < end && (*at == ' ' || *at == '\t'))
        at++;
      start = at;
      while (at < end && *at != '\t' && !(*at == ' ' && (at + 1 == end || at[1] == ' ')))
        at++;
      if (at > start)
        fields[n++] = (BtField){ start, (gsize) (at - start) };
    }
  if (n == n_columns)
    return TRUE;
  /* Single words, a unit in brackets belonging to the word before it. */
  n = bt_text_fields (line, end, ' ', fields, n_columns + 8);
  for (gsize i = 1; i < n; i++)
    if (*fields[i].text == '(' || *fields[i].text == '[' || *fields[i].text == '/')
      {
        fields[i - 1].n = (gsize) (fields[i].text + fields[i].n - fields[i - 1].text);
        memmove (fields + i, fields + i + 1, sizeof *fields * (n - i - 1));
        n--;
        i--;
      }
  return n == n_columns;
}

/* Whether a line split as the table is one of headers; "Operator;Name" has two fields as well. */
static gboolean
is_header (const BtField *fields, gsize n, gboolean nearest)
{
  g_autofree char *first = bt_text_words (fields[0].text, fields[0].n), *second = bt_text_words (fields[1].text, fields[1].n);
  BtXUnit x_unit;
  BtYUnit y_unit;

  if (*first == '\0' || bt_text_is_only_unit (first) || bt_text_x_unit (first, &x_unit) || bt_text_is_wavelength (first)
      || bt_text_foreign (first) != NULL)
    return TRUE;
  if (nearest && (bt_text_y_unit (second, &y_unit) || bt_text_foreign (second) != NULL || bt_text_y_unit (first, &y_unit)))
    return TRUE;
  for (gsize i = 2; i < n; i++)
    if (fields[i].n > 0)
      return TRUE;
  return FALSE;
}

static gboolean
has_letters (const char *at, const char *end)
{
  for (; at < end; at++)
    if (g_ascii_isalpha (*at) || (guint8) *at >= 0x80 || *at == '%')
      return TRUE;
  return FALSE;
}

void
bt_text_headers (const BtRows *rows, const BtTable *table, BtColumns *columns)
{
  g_autofree BtField *fields = g_new (BtField, columns->n_columns + 8);
  g_autoptr (GArray) lines = g_array_new (FALSE, FALSE, sizeof (BtField));
  gsize used = 0;

  for (const char *at = table->above, *next; at < table->top; at = next)
    {
      guint n_lines;
      BtField line = { at, (gsize) (bt_text_record_end (at, table->top, &next, &n_lines) - at) };

      g_array_append_val (lines, line);
    }
  for (guint i = lines->len; i-- > 0 && used < MAX_HEADER_LINES;)
    {
      const BtField line = g_array_index (lines, BtField, i);
      const char *at = line.text, *end = line.text + line.n;

      while (at < end && (*at == '#' || *at == '!' || *at == ' ' || (*at == '%' && at + 1 < end && (at[1] == ' ' || at[1] == '%'))))
        at++;
      if (at == end)
        continue;
      if (!has_letters (at, end) || memchr (at, '=', (gsize) (end - at)) != NULL
          || !split_header (at, end, rows->dialect.delimiter, columns->n_columns, fields)
          || !is_header (fields, columns->n_columns, used == 0))
        {
          columns->caption = g_strstrip (bt_text_words (at, (gsize) (end - at)));
          break;
        }
      columns->parts[used] = g_new0 (char *, columns->n_columns + 1);
      for (gsize c = 0; c < columns->n_columns; c++)
        columns->parts[used][c] = bt_text_words (fields[c].text, fields[c].n);
      used++;
    }
  columns->headers = g_new0 (char *, columns->n_columns + 1);
  for (gsize c = 0; c < columns->n_columns; c++)
    {
      GString *words = g_string_new (NULL);

      for (gsize p = used; p-- > 0;)
        g_string_append_printf (words, "%s%s", words->len > 0 ? " " : "", columns->parts[p][c]);
      columns->headers[c] = g_strstrip (g_string_free (words, FALSE));
    }
}

/* Numbers in each column, in one pass over the rows. */
static gsize *
count_numbers (const BtRows *rows, const BtTable *table, gsize n_columns)
{
  gsize *counts = g_new0 (gsize, n_columns);

  if (table->plain && table->least == table->most)
    {
      for (gsize c = 0; c < n_columns; c++)
        counts[c] = table->n_rows;
      return counts;
    }
  for (gsize r = table->first_row; r < table->first_row + table->n_rows; r++)
    {
      const BtRow row = rows->rows[r];
      const double *values = rows->values + row.start;

      for (gsize c = 0; c < row.n; c++)
        counts[c] += isnan (values[c]) ? 0 : 1;
    }
  return counts;
}

/* Whether a column only counts its rows, or its numbers lie one step apart throughout. */
static gboolean
is_even (const BtRows *rows, const BtTable *table, gsize column, double *first, double *step)
{
  double before = (double) NAN;
  gsize count = 0;

  *step = (double) NAN;
  for (gsize r = table->first_row; r < table->first_row + table->n_rows; r++)
    {
      double value = bt_rows_value (rows, r, column);

      if (isnan (value))
        continue;
      if (count == 0)
        *first = value;
      else if (count == 1)
        *step = value - before;
      else if (!(fabs (value - before - *step) <= 1e-3 * fabs (*step)))
        return FALSE;
      before = value;
      count++;
    }
  return count >= 3 && fabs (*step) > 0;
}

static gboolean
is_counter (const BtRows *rows, const BtTable *table, gsize column)
{
  double first, step;

  return is_even (rows, table, column, &first, &step) && fabs (step - 1) < 1e-9 && (fabs (first) < 1e-9 || fabs (first - 1) < 1e-9);
}

static gboolean
same_column (const BtRows *rows, const BtTable *table, gsize a, gsize b)
{
  gsize same = 0;

  for (gsize r = table->first_row; r < table->first_row + table->n_rows; r++)
    {
      double va = bt_rows_value (rows, r, a), vb = bt_rows_value (rows, r, b);

      same += fabs (va - vb) <= 1e-6 * fabs (va) ? 1 : 0;
    }
  return 2 * same > table->n_rows;
}

static gboolean
names_x (const BtColumns *columns, gsize c)
{
  BtXUnit unit;
  BtYUnit y_unit;

  return c < columns->n_columns && !bt_text_y_unit (columns->headers[c], &y_unit)
         && (bt_text_x_unit (columns->headers[c], &unit) || bt_text_is_wavelength (columns->headers[c]));
}

static gboolean
y_unit_of (const BtColumns *columns, gsize c, BtYUnit *unit)
{
  if (bt_text_y_unit (columns->headers[c], unit))
    return TRUE;
  for (gsize p = 0; p < MAX_HEADER_LINES && columns->parts[p] != NULL; p++)
    if (bt_text_y_unit (columns->parts[p][c], unit))
      return TRUE;
  return FALSE;
}

/* x and y columns that take turns: the headers say so, or the values. */
static gboolean
in_pairs (const BtRows *rows, const BtTable *table, const BtColumns *columns, gsize x)
{
  const gsize n = columns->n_columns - x;
  double first, step;

  if (n < 4 || n % 2 != 0)
    return FALSE;
  if (names_x (columns, x) && names_x (columns, x + 2) && !names_x (columns, x + 1))
    return TRUE;
  if (same_column (rows, table, x, x + 2) && !same_column (rows, table, x, x + 1))
    return TRUE;
  for (gsize c = x; c < columns->n_columns; c++)
    if (is_even (rows, table, c, &first, &step) != ((c - x) % 2 == 0))
      return FALSE;
  return TRUE;
}

/* (nullable): what a preamble says under any of the usual keys. */
static const char *
note_of (GHashTable *notes, const char *const *keys)
{
  const char *value = NULL;

  for (; *keys != NULL && value == NULL; keys++)
    value = g_hash_table_lookup (notes, *keys);
  return value;
}

static double *
column_of (const BtRows *rows, const BtTable *table, gsize column)
{
  double *out = g_new (double, table->n_rows);

  for (gsize r = 0; r < table->n_rows; r++)
    out[r] = bt_rows_value (rows, table->first_row + r, column);
  return out;
}

/* Whether a reflectance is in per cent: by its header, by its values' signs, or by its size. */
static gboolean
reads_percent (const BtRows *rows, const BtTable *table, const BtColumns *columns, gsize c)
{
  g_autofree double *y = NULL;
  BtYUnit unit;
  double high = 0;

  if (rows->percent || (y_unit_of (columns, c, &unit) && (unit == BT_Y_REFLECTANCE_PERCENT || unit == BT_Y_TRANSMITTANCE_PERCENT)))
    return TRUE;
  y = column_of (rows, table, c);
  for (gsize i = 0; i < table->n_rows; i++)
    high = y[i] > high ? y[i] : high;
  return high > 1.5;
}

static void
decide_units (const BtRows *rows, const BtTable *table, const BtColumns *columns, GHashTable *notes, const BtReadOptions *options,
              BtChoice *choice)
{
  static const char *const x_keys[] = { "x unit", "x units", "xunit", "xunits", "x axis", "x-axis", "x label", "xlabel", "abscissa",
                                        "wavelength unit", "x data unit", NULL };
  static const char *const y_keys[] = { "y unit", "y units", "yunit", "yunits", "y axis", "y-axis", "y label", "ylabel", "ordinate",
                                        "ordinate mode", "data mode", "mode", "measurement mode", "photometric mode", "y data unit",
                                        "y axis mode", NULL };
  const char *x_note = note_of (notes, x_keys), *y_note = note_of (notes, y_keys);
  g_autofree double *x = NULL, *y = NULL;
  double high = 0;

  choice->x_origin = choice->y_origin = BT_ORIGIN_HEADER;
  if (options != NULL && options->x_unit >= 0)
    {
      choice->x_unit = (BtXUnit) options->x_unit;
      choice->x_origin = BT_ORIGIN_SAID;
    }
  else if (!bt_text_x_unit (columns->headers[choice->x], &choice->x_unit) && (x_note == NULL || !bt_text_x_unit (x_note, &choice->x_unit)))
    choice->x_origin = BT_ORIGIN_VALUES;
  if (options != NULL && options->y_unit >= 0)
    {
      choice->y_unit = (BtYUnit) options->y_unit;
      choice->y_origin = BT_ORIGIN_SAID;
      if (bt_read_options_reflectance (options) && reads_percent (rows, table, columns, choice->y))
        choice->y_unit = BT_Y_REFLECTANCE_PERCENT;
    }
  else if (!y_unit_of (columns, choice->y, &choice->y_unit) && (y_note == NULL || !bt_text_y_unit (y_note, &choice->y_unit)))
    choice->y_origin = BT_ORIGIN_VALUES;
  if (choice->x_origin != BT_ORIGIN_VALUES
      && (choice->y_origin == BT_ORIGIN_SAID
          || (choice->y_origin == BT_ORIGIN_HEADER && choice->y_unit != BT_Y_TRANSMITTANCE && choice->y_unit != BT_Y_REFLECTANCE)))
    return;
  x = column_of (rows, table, choice->x);
  y = column_of (rows, table, choice->y);
  if (choice->x_origin == BT_ORIGIN_VALUES)
    choice->x_unit = bt_values_x_unit (x, y, table->n_rows, bt_text_is_wavelength (columns->headers[choice->x]));
  if (choice->y_origin == BT_ORIGIN_VALUES)
    choice->y_unit = rows->percent ? BT_Y_TRANSMITTANCE_PERCENT : bt_values_y_unit (x, y, table->n_rows, choice->x_unit);
  if (choice->y_origin != BT_ORIGIN_HEADER)
    return;
  /* "T" is written over fractions and over per cent. */
  for (gsize i = 0; i < table->n_rows; i++)
    high = y[i] > high ? y[i] : high;
  if (rows->percent || high > 2)
    {
      if (choice->y_unit == BT_Y_TRANSMITTANCE)
        choice->y_unit = BT_Y_TRANSMITTANCE_PERCENT;
      else if (choice->y_unit == BT_Y_REFLECTANCE)
        choice->y_unit = BT_Y_REFLECTANCE_PERCENT;
    }
}

/* (transfer full): a spectrum's name in the words over it, "" where they say only quantities and units. The line farthest from the table
 * that holds a name wins; of a pair the x column may carry it. */
static char *
title_of (const BtColumns *columns, gsize x, gsize y, gboolean pairs)
{
  for (gsize p = MAX_HEADER_LINES; p-- > 0;)
    if (columns->parts[p] != NULL)
      {
        if (!bt_text_is_only_unit (columns->parts[p][y]))
          return g_strdup (columns->parts[p][y]);
        if (pairs && !bt_text_is_only_unit (columns->parts[p][x]))
          return g_strdup (columns->parts[p][x]);
      }
  return g_strdup ("");
}

static void
choose (const BtRows *rows, const BtTable *table, BtColumns *columns, GHashTable *notes, const BtReadOptions *options, gsize x, gsize y,
        gboolean pairs)
{
  BtChoice choice = { .x = x, .y = y, .title = title_of (columns, x, y, pairs) };

  decide_units (rows, table, columns, notes, options, &choice);
  g_array_append_val (columns->choices, choice);
}

static void
leave_out (BtColumns *columns, gsize c)
{
  g_autofree char *before = columns->left_out;

  if (before == NULL)
    columns->left_out = g_strdup_printf ("%u \"%s\"", (guint) c + 1, columns->headers[c]);
  else if (strlen (before) < 200)
    columns->left_out = g_strdup_printf ("%s, %u \"%s\"", before, (guint) c + 1, columns->headers[c]);
  else
    columns->left_out = g_steal_pointer (&before);
}

static gboolean
refuse_foreign (const BtColumns *columns, gsize c, GError **error)
{
  const char *foreign = bt_text_foreign (columns->headers[c]);

  if (foreign == NULL)
    return FALSE;
  g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_UNITS,
               _ ("the header \"%s\" says %s, which is not read; export wavelength in nm or um, wavenumber in 1/cm or energy in eV, and "
                  "absorbance, transmittance or an absorption coefficient in 1/cm."),
               columns->headers[c], foreign);
  return TRUE;
}

/* Where a reflectance is wanted and columns say that they hold one, only those. */
static gboolean
choose_reflectance (const BtRows *rows, const BtTable *table, BtColumns *columns, GHashTable *notes, const BtReadOptions *options, gsize x,
                    const gsize *counts, gsize enough)
{
  gboolean any = FALSE;
  BtYUnit unit;

  for (gsize c = 0; c < columns->n_columns; c++)
    if (c != x && counts[c] >= enough && y_unit_of (columns, c, &unit) && (unit == BT_Y_REFLECTANCE || unit == BT_Y_REFLECTANCE_PERCENT))
      {
        choose (rows, table, columns, notes, options, x, c, FALSE);
        any = TRUE;
      }
  for (gsize c = 0; c < columns->n_columns && any; c++)
    if (c != x && counts[c] > 0 && !(y_unit_of (columns, c, &unit) && (unit == BT_Y_REFLECTANCE || unit == BT_Y_REFLECTANCE_PERCENT)))
      leave_out (columns, c);
  return any;
}

gboolean
bt_text_columns (const BtRows *rows, const BtTable *table, GHashTable *notes, const BtReadOptions *options, BtColumns *columns,
                 GError **error)
{
  g_autofree gsize *counts = NULL;
  /* Reading all rows for each column stays in proportion to the numbers there are. */
  const gsize enough = MAX (MIN (table->n_rows, BT_SPECTRUM_MIN_POINTS), table->n_rows / 64);
  gboolean named = FALSE, pairs;
  gsize x = 0, candidates = 0;
  BtYUnit unit;

  columns->choices = g_array_new (FALSE, TRUE, sizeof (BtChoice));
  columns->n_columns = table->most;
  counts = count_numbers (rows, table, columns->n_columns);
  bt_text_headers (rows, table, columns);
  while (x + 1 < columns->n_columns && counts[x] < enough)
    x++;
  if (columns->n_columns > x + 2 && !names_x (columns, x) && is_counter (rows, table, x))
    x++;
  for (gsize c = x; c < columns->n_columns; c++)
    if (names_x (columns, c) && counts[c] >= enough)
      {
        x = c;
        break;
      }
  if (refuse_foreign (columns, x, options != NULL && options->x_unit >= 0 ? NULL : error) && !(options != NULL && options->x_unit >= 0))
    return FALSE;
  pairs = in_pairs (rows, table, columns, x);
  if (pairs)
    {
      for (gsize c = x; c + 1 < columns->n_columns; c += 2)
        if (counts[c] >= enough && counts[c + 1] >= enough)
          choose (rows, table, columns, notes, options, c, c + 1, TRUE);
        else
          leave_out (columns, c + 1);
      return TRUE;
    }
  if (bt_read_options_reflectance (options) && choose_reflectance (rows, table, columns, notes, options, x, counts, enough))
    return TRUE;
  for (gsize c = 0; c < columns->n_columns; c++)
    if (c != x && !names_x (columns, c) && (c > x || columns->headers[c][0] != '\0'))
      {
        candidates++;
        named = named || (y_unit_of (columns, c, &unit) && counts[c] > 0);
      }
  for (gsize c = 0; c < columns->n_columns; c++)
    {
      const gboolean known = y_unit_of (columns, c, &unit);

      if (c == x || (c < x && !known))
        continue;
      /* Reflectance beside others is no film of its own. */
      if (names_x (columns, c) || (candidates > 1 && counts[c] < enough) || (named && !known)
          || (candidates > 1 && known && (unit == BT_Y_REFLECTANCE || unit == BT_Y_REFLECTANCE_PERCENT))
          || (candidates > 1 && bt_text_foreign (columns->headers[c]) != NULL))
        {
          if (counts[c] > 0)
            leave_out (columns, c);
          continue;
        }
      if (!(options != NULL && options->y_unit >= 0) && refuse_foreign (columns, c, error))
        return FALSE;
      choose (rows, table, columns, notes, options, x, c, FALSE);
    }
  return TRUE;
}

void
bt_columns_clear (BtColumns *columns)
{
  g_strfreev (columns->headers);
  for (gsize p = 0; p < MAX_HEADER_LINES; p++)
    g_strfreev (columns->parts[p]);
  for (guint i = 0; columns->choices != NULL && i < columns->choices->len; i++)
    g_free (g_array_index (columns->choices, BtChoice, i).title);
  g_clear_pointer (&columns->choices, g_array_unref);
  g_free (columns->left_out);
  g_free (columns->caption);
}
