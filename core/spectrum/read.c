/* Reads spectra from files. */
#include <bandtally/spectrum.h>

#include <errno.h>
#include <fcntl.h>
#include <math.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include <glib/gi18n-lib.h>
#include <glib/gstdio.h>

#include "jcamp-private.h"
#include "spectrum-private.h"
#include "text-private.h"

/* A preamble's line that is longer is no statement. */
#define MAX_NOTE_BYTES 400
#define MAX_NOTES 500

static gboolean
fail (GError **error, BtSpectrumError code, const char *text)
{
  g_set_error_literal (error, BT_SPECTRUM_ERROR, code, text);
  return FALSE;
}

/* A file with numbers but no second column is worth its own sentence. */
static gboolean
only_one_column (const BtText *text)
{
  gsize numbers = 0;

  for (const char *at = text->at, *next; at < text->end; at = next)
    {
      const char *end = bt_text_line_end (at, text->end, &next);
      BtField field;
      double value;

      bt_text_fields (at, end, ';', &field, 1);
      if (end > at && (bt_text_number (field.text, field.n, '.', &value) || bt_text_number (field.text, field.n, ',', &value)))
        numbers++;
    }
  return numbers >= 3;
}

/* "# key = value", "key: value", or two fields of text. */
static void
take_note (BtSource *source, const char *at, const char *end, char delimiter)
{
  const char *sign;
  BtField fields[3];
  gsize n;

  while (at < end && strchr ("#%! \t\"", *at) != NULL)
    at++;
  if (end - at > MAX_NOTE_BYTES || at == end)
    return;
  sign = memchr (at, '=', (gsize) (end - at));
  if (sign == NULL)
    sign = memchr (at, ':', (gsize) (end - at));
  if (sign != NULL && sign > at)
    {
      g_autofree char *key = bt_text_words (at, (gsize) (sign - at)), *value = bt_text_words (sign + 1, (gsize) (end - sign - 1));

      /* In "key: value;;;" of a spreadsheet the signs at the end are no part of it. */
      for (gsize i = strlen (value); i > 0 && delimiter != ' ' && (value[i - 1] == delimiter || value[i - 1] == '"'); i--)
        value[i - 1] = '\0';
      for (char *c = value; delimiter != ' ' && *c == delimiter; c++)
        *c = ' ';
      bt_source_add_note (source, key, value);
      return;
    }
  if (delimiter == ' ')
    return;
  n = bt_text_fields (at, end, delimiter, fields, 3);
  if (n >= 2 && (n == 2 || fields[2].n == 0))
    {
      g_autofree char *key = g_strndup (fields[0].text, fields[0].n), *value = bt_text_words (fields[1].text, fields[1].n);

      bt_source_add_note (source, key, value);
    }
}

static void
take_notes (BtSource *source, const char *at, const char *end, char delimiter)
{
  guint lines;

  for (const char *next; at < end && g_hash_table_size (bt_source_get_notes (source)) < MAX_NOTES; at = next)
    take_note (source, at, bt_text_record_end (at, end, &next, &lines), delimiter);
}

static const char *
delimiter_title (BtDialect dialect)
{
  switch (dialect.delimiter)
    {
    case ',': return _ ("commas");
    case ';': return _ ("semicolons");
    case '|': return _ ("bars");
    case '\t': return _ ("tabs");
    default: return _ ("blanks");
    }
}

static const char *
origin_title (BtOrigin origin)
{
  switch (origin)
    {
    case BT_ORIGIN_SAID: return _ ("as you said");
    case BT_ORIGIN_HEADER: return _ ("from the header");
    case BT_ORIGIN_VALUES:
    default: return _ ("from the values");
    }
}

static char *
describe (const BtText *text, const BtRows *rows, const BtTable *table, const BtColumns *columns, const BtChoice *choice)
{
  GString *out = g_string_new (NULL);

  g_string_printf (out, _ ("Text (%s), %u rows from line %u on, columns %u and %u of %u separated by %s, decimal %s; x in %s (%s), y is %s (%s)."),
                   text->encoding, (guint) table->n_rows, table->first_line, (guint) choice->x + 1, (guint) choice->y + 1,
                   (guint) columns->n_columns, delimiter_title (rows->dialect),
                   rows->dialect.decimal == ',' ? _ ("comma") : _ ("point"), bt_x_unit_name (choice->x_unit),
                   origin_title (choice->x_origin), bt_y_unit_name (choice->y_unit), origin_title (choice->y_origin));
  if (columns->left_out != NULL)
    {
      g_string_append_c (out, ' ');
      g_string_append_printf (out, _ ("Left out: column %s."), columns->left_out);
    }
  return g_string_free (out, FALSE);
}

/* The two columns without the rows that have no x. Returns their number. */
static gsize
take_points (const BtRows *rows, const BtTable *table, const BtChoice *choice, double *x, double *y)
{
  gsize n = 0;

  for (gsize r = table->first_row; r < table->first_row + table->n_rows; r++)
    {
      x[n] = bt_rows_value (rows, r, choice->x);
      y[n] = bt_rows_value (rows, r, choice->y);
      if (!isnan (x[n]))
        n++;
    }
  return n;
}

static void
flag_reading (BtSpectrum *spectrum, const BtTable *table, const BtChoice *choice, double y_high)
{
  const char *x_name = bt_x_unit_name (choice->x_unit), *y_name = bt_y_unit_name (choice->y_unit);
  const gboolean x_known = choice->x_origin != BT_ORIGIN_VALUES, y_known = choice->y_origin != BT_ORIGIN_VALUES;

  if (!x_known && !y_known)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("units-inferred", _ ("The file does not say its units; from the values they are %s and %s. State "
                                                                      "them if that is wrong."),
                                                 x_name, y_name));
  else if (!x_known)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("units-inferred", _ ("The file does not say the unit of its wavelength or energy; from the values it "
                                                                      "is %s. State it if that is wrong."),
                                                 x_name));
  else if (!y_known)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("units-inferred", _ ("The file does not say what was read; from the values it is %s. State it if that "
                                                                      "is wrong."),
                                                 y_name));
  if (choice->y_origin == BT_ORIGIN_HEADER && choice->y_unit == BT_Y_TRANSMITTANCE_PERCENT && y_high <= 1.2)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("percent-doubtful", _ ("The header says per cent, but no transmittance is above %.3g; if they are "
                                                                        "fractions of 1, state the unit \"transmittance\"."),
                                                 y_high));
  if (table->n_skipped > 0)
    bt_spectrum_add_flag (spectrum, bt_flag_new ("lines-skipped", g_dngettext (GETTEXT_PACKAGE, "%u line among the numbers is no row of the table "
                                                                               "and was passed over; look at the file if it should be one.",
                                                                               "%u lines among the numbers are no rows of the table and were "
                                                                               "passed over; look at the file if they should be.",
                                                                               table->n_skipped),
                                                 table->n_skipped));
}

static BtSpectrum *
make_spectrum (const BtText *text, const BtRows *rows, const BtTable *table, const BtColumns *columns, const BtChoice *choice,
               const char *title, BtSource *source, GError **error)
{
  double *x, *y, high = -INFINITY;
  g_autofree char *reading = NULL;
  BtSpectrum *spectrum;
  gsize n;

  if ((choice->y_unit == BT_Y_REFLECTANCE || choice->y_unit == BT_Y_REFLECTANCE_PERCENT) && choice->y_origin != BT_ORIGIN_SAID)
    {
      fail (error, BT_SPECTRUM_ERROR_UNITS,
            _ ("it holds a reflectance, from which no absorbance follows; choose a file of absorbance or transmittance."));
      return NULL;
    }
  x = g_new (double, table->n_rows + 1);
  y = g_new (double, table->n_rows + 1);
  n = take_points (rows, table, choice, x, y);
  for (gsize i = 0; i < n && choice->y_unit == BT_Y_TRANSMITTANCE_PERCENT; i++)
    high = y[i] > high ? y[i] : high;
  spectrum = bt_spectrum_new_take (x, y, n, choice->x_unit, choice->y_unit, title, error);
  if (spectrum == NULL)
    return NULL;
  reading = describe (text, rows, table, columns, choice);
  bt_spectrum_set_origin (spectrum, source, reading);
  flag_reading (spectrum, table, choice, high);
  return spectrum;
}

/* (transfer full): a name for a spectrum among several of its file. */
static char *
title_among_several (const BtColumns *columns, const BtChoice *choice, gsize n_tables)
{
  if (choice->title[0] != '\0')
    return g_strdup (choice->title);
  if (n_tables > 1 && columns->caption != NULL && columns->choices->len == 1)
    {
      const char *value = strpbrk (columns->caption, "=:;,\t");

      return g_strstrip (g_strdup (value != NULL ? value + 1 : columns->caption));
    }
  return g_strdup_printf (_ ("column %u"), (guint) choice->y + 1);
}

/* Whether more columns are chosen than a file may hold spectra, or points, in all. */
static gboolean
refuse_many (const GPtrArray *spectra, const BtColumns *columns, const BtTable *table, gsize *n_points, GError **error)
{
  *n_points += columns->choices->len * table->n_rows;
  if (*n_points > BT_MAX_POINTS)
    return !fail (error, BT_SPECTRUM_ERROR_VALUES, _ ("it holds more than 10 million points; split it, or export fewer."));
  if (spectra->len + columns->choices->len <= BT_MAX_SPECTRA)
    return FALSE;
  g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT, _ ("it holds more than %d spectra; split it."), BT_MAX_SPECTRA);
  return TRUE;
}

/* FALSE where nothing of the file may be read. */
static gboolean
add_spectra (const BtText *text, const BtRows *rows, const BtTable *table, const BtReadOptions *options, BtSource *source,
             GPtrArray *spectra, gsize *n_points, GError **error)
{
  BtColumns columns = { 0 };
  gboolean refused = FALSE;

  if (bt_text_columns (rows, table, bt_source_get_notes (source), options, &columns, error))
    refused = refuse_many (spectra, &columns, table, n_points, error);
  if (!refused && error != NULL && *error == NULL)
    for (guint i = 0; i < columns.choices->len; i++)
      {
        const BtChoice *choice = &g_array_index (columns.choices, BtChoice, i);
        g_autofree char *title = rows->tables->len > 1 || columns.choices->len > 1
                                   ? title_among_several (&columns, choice, rows->tables->len)
                                   : g_strdup (choice->title);
        g_autoptr (GError) reason = NULL;
        BtSpectrum *spectrum = make_spectrum (text, rows, table, &columns, choice, title, source, &reason);

        if (spectrum != NULL)
          g_ptr_array_add (spectra, spectrum);
        else if (*error == NULL)
          g_propagate_error (error, g_steal_pointer (&reason));
      }
  bt_columns_clear (&columns);
  return !refused;
}

static gboolean
read_text (const BtText *text, const BtReadOptions *options, BtSource *source, GPtrArray *spectra, GError **error)
{
  /* A point takes two numbers, or one more where several share their x. */
  BtRows rows = { .most = 2 * BT_MAX_POINTS };
  g_autoptr (GError) reason = NULL;
  gsize n_points = 0;
  guint line = 0;
  gboolean refused = FALSE;

  if (bt_text_rows (text, &rows) && rows.too_many)
    refused = !fail (&reason, BT_SPECTRUM_ERROR_VALUES, _ ("it holds more than 10 million points; split it, or export fewer."));
  else if (rows.n_rows > 0)
    {
      line = g_array_index (rows.tables, BtTable, 0).first_line;
      take_notes (source, text->at, g_array_index (rows.tables, BtTable, 0).top, rows.dialect.delimiter);
      take_notes (source, rows.below, text->end, rows.dialect.delimiter);
      for (guint i = 0; i < rows.tables->len && !refused; i++)
        {
          g_autoptr (GError) table_reason = NULL;

          refused = !add_spectra (text, &rows, &g_array_index (rows.tables, BtTable, i), options, source, spectra, &n_points, &table_reason);
          if (refused)
            g_clear_error (&reason);
          if (table_reason != NULL && reason == NULL)
            {
              line = g_array_index (rows.tables, BtTable, i).first_line;
              reason = g_steal_pointer (&table_reason);
            }
        }
    }
  bt_rows_clear (&rows);
  if (refused)
    g_propagate_error (error, g_steal_pointer (&reason));
  if (refused || spectra->len > 0)
    return !refused;
  if (reason != NULL)
    g_set_error (error, BT_SPECTRUM_ERROR, reason->code, _ ("line %u on: %s"), line, reason->message);
  else if (line > 0)
    fail (error, BT_SPECTRUM_ERROR_VALUES, _ ("every reading in it is missing (NaN or the like); export the spectrum again."));
  else
    fail (error, BT_SPECTRUM_ERROR_FORMAT,
          only_one_column (text) ? _ ("it has only one column of numbers; a spectrum needs two, wavelength (or energy) and reading.")
                                 : _ ("there is no table of numbers in it; export the spectrum as text with one wavelength and one reading a line."));
  return FALSE;
}

static gboolean
refuse_size (GError **error)
{
  return fail (error, BT_SPECTRUM_ERROR_FORMAT, _ ("it is larger than 200 MB, which no spectrum is; export this film's spectrum alone."));
}

GPtrArray *
bt_spectrum_read_bytes (GBytes *bytes, const char *name, const BtReadOptions *options, GError **error)
{
  g_autoptr (GPtrArray) spectra = g_ptr_array_new_with_free_func (g_object_unref);
  BtSource *source = bt_source_new (bytes, name);
  const gsize size = g_bytes_get_size (bytes);
  BtText text = { 0 };
  g_autofree char *display_name = g_filename_display_name (name);
  GError *reason = NULL;

  if (size == 0)
    fail (&reason, BT_SPECTRUM_ERROR_EMPTY, _ ("the file is empty; export the spectrum again."));
  else if (size > BT_MAX_FILE_BYTES)
    refuse_size (&reason);
  else if (bt_text_decode (bytes, &text, &reason))
    {
      if (bt_jcamp_is (&text))
        bt_jcamp_read (&text, options, source, spectra, &reason);
      else
        read_text (&text, options, source, spectra, &reason);
    }
  bt_text_clear (&text);
  bt_source_unref (source);
  if (reason == NULL)
    return g_steal_pointer (&spectra);
  g_prefix_error (&reason, "%s: ", display_name);
  g_propagate_error (error, reason);
  return NULL;
}

/* What comes through a pipe has no size beforehand: reading ends where there is more than a file may hold. (nullable) with errno set. */
static GBytes *
read_pipe (const char *path)
{
  g_autoptr (GByteArray) bytes = g_byte_array_new ();
  guint8 block[1 << 16];
  const int file = g_open (path, O_RDONLY | O_CLOEXEC, 0);
  gssize n = -1;

  while (file >= 0 && bytes->len <= BT_MAX_FILE_BYTES && ((n = read (file, block, sizeof block)) > 0 || (n < 0 && errno == EINTR)))
    if (n > 0)
      g_byte_array_append (bytes, block, (guint) n);
  if (file >= 0)
    {
      const int reason = errno;

      close (file);
      errno = reason;
    }
  return n < 0 ? NULL : g_byte_array_free_to_bytes (g_steal_pointer (&bytes));
}

GPtrArray *
bt_spectrum_read_file (const char *path, const BtReadOptions *options, GError **error)
{
  g_autofree char *text = NULL, *name = g_filename_display_name (path);
  g_autoptr (GBytes) bytes = NULL;
  g_autoptr (GError) reason = NULL;
  struct stat info = { 0 };
  gsize size;

  if (stat (path, &info) == 0 && !S_ISREG (info.st_mode) && !S_ISFIFO (info.st_mode))
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_OPEN,
                   S_ISDIR (info.st_mode) ? _ ("%s: this is a folder; name the files in it.") : _ ("%s: this is a device, not a file; name a file."),
                   name);
      return NULL;
    }
  if (info.st_size > BT_MAX_FILE_BYTES)
    {
      refuse_size (error);
      g_prefix_error (error, "%s: ", name);
      return NULL;
    }
  if (S_ISFIFO (info.st_mode) && (bytes = read_pipe (path)) != NULL)
    return bt_spectrum_read_bytes (bytes, path, options, error);
  if (!g_file_get_contents (path, &text, &size, &reason))
    {
      if (g_error_matches (reason, G_FILE_ERROR, G_FILE_ERROR_NOENT))
        g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_OPEN, _ ("%s: there is no such file; look whether it was moved or renamed."), name);
      else if (g_error_matches (reason, G_FILE_ERROR, G_FILE_ERROR_ACCES))
        g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_OPEN, _ ("%s: you may not read this file; ask its owner for permission."), name);
      else
        g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_OPEN, _ ("%s: it cannot be read: %s."), name, reason->message);
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

BtSpectrum *
bt_reflectance_new_from_file (const char *path, GError **error)
{
  const BtReadOptions options = { -1, BT_Y_REFLECTANCE };
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_file (path, &options, error);

  return spectra != NULL ? g_object_ref (g_ptr_array_index (spectra, 0)) : NULL;
}
