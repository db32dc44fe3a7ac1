/* Delimited text: decoding, numbers, dialects, headers. Private to core/spectrum. */
#ifndef BANDTALLY_TEXT_PRIVATE_H
#define BANDTALLY_TEXT_PRIVATE_H

#include <bandtally/spectrum.h>

/* (transfer full): UTF-8 text of a file; @encoding is set to a static name. NULL with @error set for what is no text. */
char *bt_text_decode (const guint8 *data, gsize size, const char **encoding, GError **error);
/* (transfer full) (element-type utf8): the lines of @text, which is cut up in place and must outlive them. */
GArray *bt_text_split (char *text);

/* A finite number in exactly @n characters, with this decimal sign. */
gboolean bt_text_number (const char *text, gsize n, char decimal, double *value);
/* Empty, "-", "NaN", "OVER", "****" and their like: a reading that is not there. */
gboolean bt_text_is_missing (const char *text, gsize n);

#define BT_MAX_COLUMNS 512
/* A field of a line: not terminated, blanks and quotes around it taken off. */
typedef struct { const char *text; gsize n; } BtField;
/* @delimiter: ',', ';', tab, or ' ' for runs of blanks; @decimal: '.' or ','. */
typedef struct { char delimiter, decimal; } BtDialect;

/* Splits a line (RFC 4180 quotes); at most @max fields; returns their number. */
gsize bt_text_fields (const char *line, char delimiter, BtField *fields, gsize max);
/* Whether the line is a row of the table: its first field a number and another one a number or missing. */
gboolean bt_text_is_row (const char *line, BtDialect dialect);
/* The dialect in which most lines about the middle of the file are rows with one number of fields. FALSE where none is. */
gboolean bt_text_sniff (char *const *lines, gsize n, BtDialect *dialect);

/* What a header's words say; FALSE where they say nothing known. */
gboolean bt_text_x_unit (const char *words, BtXUnit *unit);
gboolean bt_text_y_unit (const char *words, BtYUnit *unit);
/* What the values say. @y (nullable). */
BtXUnit bt_values_x_unit (const double *x, const double *y, gsize n);
BtYUnit bt_values_y_unit (const double *x, const double *y, gsize n, BtXUnit x_unit);

#endif
