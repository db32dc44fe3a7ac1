/* Text in columns for a terminal. */
#ifndef BANDTALLY_COLUMNS_PRIVATE_H
#define BANDTALLY_COLUMNS_PRIVATE_H

#include <glib.h>

G_BEGIN_DECLS

#define BT_COLUMNS_MAX 24

typedef struct
{
  guint n_columns;
  gboolean right[BT_COLUMNS_MAX];
  GPtrArray *cells; /* row by row */
} BtColumns;

BtColumns *bt_columns_new (guint n_columns);
void bt_columns_free (BtColumns *columns);
/* Whether a column is set flush right, as numbers are. */
void bt_columns_set_right (BtColumns *columns, guint column, gboolean right);
/* Adds the next cell; takes @text (NULL: empty). */
void bt_columns_take (BtColumns *columns, char *text);
/* Width of the first @n_columns columns, gaps included. */
int bt_columns_width (const BtColumns *columns, guint n_columns);
/* Appends the rows' first @n_columns columns, each line with this many spaces before it. */
void bt_columns_append (const BtColumns *columns, guint n_columns, int indent, GString *out);

/* Places that a text takes on a terminal. */
int bt_text_width (const char *text);
/* Appends a paragraph broken at spaces to lines of at most @columns places (0: unbroken); the first line starts with @lead, the
 * others with as many spaces. */
void bt_text_append_wrapped (GString *out, const char *lead, const char *text, int columns);

G_END_DECLS

#endif
