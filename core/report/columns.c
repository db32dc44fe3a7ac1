/* Text in columns for a terminal. */
#include "columns-private.h"

#include <bandtally/table.h>

#define GAP 2

BtColumns *
bt_columns_new (guint n_columns)
{
  BtColumns *columns = g_new0 (BtColumns, 1);

  g_return_val_if_fail (n_columns > 0 && n_columns <= BT_COLUMNS_MAX, NULL);
  columns->n_columns = n_columns;
  columns->cells = g_ptr_array_new_with_free_func (g_free);
  return columns;
}

void
bt_columns_free (BtColumns *columns)
{
  g_ptr_array_unref (columns->cells);
  g_free (columns);
}

void
bt_columns_set_right (BtColumns *columns, guint column, gboolean right)
{
  columns->right[column] = right;
}

void
bt_columns_take (BtColumns *columns, char *text)
{
  g_ptr_array_add (columns->cells, text != NULL ? text : g_strdup (""));
}

int
bt_text_width (const char *text)
{
  int width = 0;

  for (const char *p = text; *p != '\0'; p = g_utf8_next_char (p))
    {
      gunichar c = g_utf8_get_char (p);

      if (!g_unichar_iszerowidth (c))
        width += g_unichar_iswide (c) ? 2 : 1;
    }
  return width;
}

static int
column_width (const BtColumns *columns, guint column)
{
  int width = 0;

  for (guint i = column; i < columns->cells->len; i += columns->n_columns)
    width = MAX (width, bt_text_width (g_ptr_array_index (columns->cells, i)));
  return width;
}

int
bt_columns_width (const BtColumns *columns, guint n_columns)
{
  int width = 0;

  for (guint i = 0; i < n_columns; i++)
    width += column_width (columns, i) + (i > 0 ? GAP : 0);
  return width;
}

static void
append_spaces (GString *out, int n)
{
  for (int i = 0; i < n; i++)
    g_string_append_c (out, ' ');
}

void
bt_columns_append (const BtColumns *columns, guint n_columns, int indent, GString *out)
{
  int widths[BT_COLUMNS_MAX];

  for (guint i = 0; i < n_columns; i++)
    widths[i] = column_width (columns, i);
  for (guint row = 0; row + columns->n_columns <= columns->cells->len; row += columns->n_columns)
    {
      append_spaces (out, indent);
      for (guint i = 0; i < n_columns; i++)
        {
          const char *cell = g_ptr_array_index (columns->cells, row + i);
          int space = widths[i] - bt_text_width (cell);

          append_spaces (out, (i > 0 ? GAP : 0) + (columns->right[i] ? space : 0));
          g_string_append (out, cell);
          if (!columns->right[i] && i + 1 < n_columns)
            append_spaces (out, space);
        }
      while (out->len > 0 && out->str[out->len - 1] == ' ')
        g_string_truncate (out, out->len - 1);
      g_string_append_c (out, '\n');
    }
}

void
bt_text_append_wrapped (GString *out, const char *lead, const char *text, int columns)
{
  int indent = bt_text_width (lead);
  int used = indent;
  gboolean at_start = TRUE;
  char **words = g_strsplit (text, " ", -1);

  g_string_append (out, lead);
  for (char **word = words; *word != NULL; word++)
    {
      int width = bt_text_width (*word);

      if (!at_start && columns > 0 && used + 1 + width > columns)
        {
          g_string_append_c (out, '\n');
          append_spaces (out, indent);
          used = indent;
          at_start = TRUE;
        }
      if (!at_start)
        g_string_append_c (out, ' ');
      g_string_append (out, *word);
      used += width + (at_start ? 0 : 1);
      at_start = FALSE;
    }
  g_string_append_c (out, '\n');
  g_strfreev (words);
}

char *
bt_wrap_text (const char *lead, const char *text, int columns)
{
  GString *out = g_string_new (NULL);

  bt_text_append_wrapped (out, lead, text, columns);
  return g_string_free (out, FALSE);
}
