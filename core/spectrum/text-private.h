/* Delimited text: decoding, numbers, dialects, tables, headers. Private to core/spectrum. */
#ifndef BANDTALLY_TEXT_PRIVATE_H
#define BANDTALLY_TEXT_PRIVATE_H

#include <math.h>

#include <bandtally/spectrum.h>

/* A file's text in UTF-8: from @at up to, not including, @end; not terminated. @encoding is a static name. */
typedef struct { const char *at, *end, *encoding; char *owned; } BtText;
/* Points into @bytes where these are UTF-8 already, so they must outlive @text. FALSE with @error set for what is no text. */
G_GNUC_INTERNAL gboolean bt_text_decode (GBytes *bytes, BtText *text, GError **error);
G_GNUC_INTERNAL void bt_text_clear (BtText *text);
/* The end of the line that begins at @at (LF, CR LF or CR); @next is set to the beginning of the line behind it. */
G_GNUC_INTERNAL const char *bt_text_line_end (const char *at, const char *end, const char **next);

/* The number at the very beginning of @at, with this decimal sign: returns where it ends, NULL where there is none.
 * NAN where it is too large for a double. */
G_GNUC_INTERNAL const char *bt_text_scan_number (const char *at, const char *end, char decimal, double *value);
/* @digits times 10^@power, rounded once and half to even, as strtod does. FALSE where that is not decided, or not a normal number. */
G_GNUC_INTERNAL gboolean bt_text_round_decimal (guint64 digits, int power, double *value);
/* A number in exactly @n characters; also takes what only whole fields may have: a true minus sign, a per cent sign behind. */
G_GNUC_INTERNAL gboolean bt_text_number (const char *text, gsize n, char decimal, double *value);
/* Empty, "-", "NaN", "OVER", "****" and their like: a reading that is not there. */
G_GNUC_INTERNAL gboolean bt_text_is_missing (const char *text, gsize n);

/* Columns beyond these are passed over. */
#define BT_MAX_COLUMNS 4096
/* A field of a line: not terminated, blanks and quotes around it taken off. */
typedef struct { const char *text; gsize n; } BtField;
/* @delimiter: ',', ';', '|', tab, or ' ' for runs of blanks; @decimal: '.' or ','. */
typedef struct { char delimiter, decimal; } BtDialect;
typedef enum { BT_ROW_NONE, BT_ROW_WITH_TEXT, BT_ROW_STRICT } BtRowKind;

/* As bt_text_line_end(), but a field in quotes may hold line ends (RFC 4180). @lines is set to the lines that the record takes. A quote that is not
 * closed as the rules say ends nothing: then it is the line's end. */
G_GNUC_INTERNAL const char *bt_text_record_end (const char *at, const char *end, const char **next, guint *lines);
/* (transfer full): a field's words in one line; quotes that are doubled because they stand between quotes are single. */
G_GNUC_INTERNAL char *bt_text_words (const char *text, gsize n);
/* Splits a line (RFC 4180 quotes); at most @max fields; returns their number. An empty last field counts. */
G_GNUC_INTERNAL gsize bt_text_fields (const char *line, const char *end, char delimiter, BtField *fields, gsize max);
/* Splits a line and judges it as a row of a table: its first field that is not empty is a number, another one a number or missing. */
G_GNUC_INTERNAL BtRowKind bt_text_row (const char *line, const char *end, BtDialect dialect, BtField *fields, gsize *n);
/* Most lines are plain numbers between delimiters; they are read in one pass. Returns where the line ends, NULL where it is anything else, or holds more
 * than @room numbers. A line end must stand somewhere from @at on, before @end. */
G_GNUC_INTERNAL const char *bt_text_scan_row (const char *at, const char *end, BtDialect dialect, double *numbers, gsize room, gsize *n);
/* The dialect in which most lines are rows with one number of fields: judged by some lines, or by all where @all. FALSE where none is. */
G_GNUC_INTERNAL gboolean bt_text_sniff (const BtText *text, gboolean all, BtDialect *dialect);

/* A run of rows that belong together. Lines count from 1. */
typedef struct {
  const char *above, *top;      /* text between the table before it and its first row */
  gsize first_row, n_rows;      /* in BtRows.rows */
  guint first_line, last_line;
  guint n_skipped;              /* lines among its rows that are no rows */
  guint32 least, most;          /* fields of its rows; all of them are numbers where both are equal and @plain */
  gboolean plain;
} BtTable;
/* No file holds more numbers than bytes. */
typedef struct { guint32 start, n; } BtRow;
typedef struct {
  double *values;               /* row behind row; NAN for missing */
  BtRow *rows;
  gsize n_values, n_rows, values_room, rows_room;
  guint last_line;              /* of the last row */
  GArray *tables;               /* of BtTable: those with enough rows, or else the longest one */
  const char *below;            /* text behind the last row */
  BtDialect dialect;
  gboolean percent;             /* readings carry a per cent sign */
  gboolean too_many;            /* there are more numbers than @most; they were not read to the end */
  gsize most;
} BtRows;
/* @rows->most is set. FALSE where there is not a single row. Free with bt_rows_clear() in both cases. */
G_GNUC_INTERNAL gboolean bt_text_rows (const BtText *text, BtRows *rows);
G_GNUC_INTERNAL void bt_rows_clear (BtRows *rows);
static inline double
bt_rows_value (const BtRows *rows, gsize row, gsize column)
{
  const BtRow *r = &rows->rows[row];

  return column < r->n ? rows->values[r->start + column] : (double) NAN;
}

/* Whether the user wants the reflectance of a file. */
static inline gboolean
bt_read_options_reflectance (const BtReadOptions *options)
{
  return options != NULL && (options->y_unit == BT_Y_REFLECTANCE || options->y_unit == BT_Y_REFLECTANCE_PERCENT);
}

typedef enum { BT_ORIGIN_SAID, BT_ORIGIN_HEADER, BT_ORIGIN_VALUES } BtOrigin;
/* Columns of a table that make one spectrum, and how their units are known. @title is owned, and "" where there is none. */
typedef struct { gsize x, y; BtXUnit x_unit; BtYUnit y_unit; BtOrigin x_origin, y_origin; char *title; } BtChoice;
typedef struct {
  gsize n_columns;
  char **headers;               /* n_columns, never NULL: the words over each column */
  char **parts[3];              /* (nullable) the same line by line, the nearest to the table first */
  GArray *choices;              /* of BtChoice */
  char *caption;                /* (nullable) the first line above the table that is no header */
  char *left_out;               /* (nullable) the columns that were left out, by number and header */
} BtColumns;
/* Which columns of a table are spectra. FALSE with @error set where none can be. Free with bt_columns_clear() in both cases. */
G_GNUC_INTERNAL gboolean bt_text_columns (const BtRows *rows, const BtTable *table, GHashTable *notes, const BtReadOptions *options,
                          BtColumns *columns, GError **error);
G_GNUC_INTERNAL void bt_columns_clear (BtColumns *columns);
/* Fills in the words over each of a table's columns; columns->n_columns is set. */
G_GNUC_INTERNAL void bt_text_headers (const BtRows *rows, const BtTable *table, BtColumns *columns);

/* What a header's words say; FALSE where they say nothing known. */
G_GNUC_INTERNAL gboolean bt_text_x_unit (const char *words, BtXUnit *unit);
G_GNUC_INTERNAL gboolean bt_text_y_unit (const char *words, BtYUnit *unit);
G_GNUC_INTERNAL gboolean bt_text_is_wavelength (const char *words);
/* (nullable): the unit or quantity, in a header, that is known but cannot be graded ("meV", "counts"). */
G_GNUC_INTERNAL const char *bt_text_foreign (const char *words);
/* Whether the words name no quantity at all beside units and quantities that are read: then they are no title. */
G_GNUC_INTERNAL gboolean bt_text_is_only_unit (const char *words);
/* What the values say. */
G_GNUC_INTERNAL BtXUnit bt_values_x_unit (const double *x, const double *y, gsize n, gboolean wavelength);
G_GNUC_INTERNAL BtYUnit bt_values_y_unit (const double *x, const double *y, gsize n, BtXUnit x_unit);

#endif
