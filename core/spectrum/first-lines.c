/* The beginning of a file as it is. */
#include "text-private.h"

#include <string.h>

#include <glib/gi18n-lib.h>

/* No preamble worth showing is longer. */
#define MOST_BYTES 65536
#define MOST_CHARACTERS 160

/* (nullable): the first bytes of a file. An even number, so that no character of UTF-16 is cut. */
static GBytes *
read_beginning (const char *path, GError **error)
{
  g_autoptr (GFile) file = g_file_new_for_path (path);
  g_autoptr (GFileInputStream) stream = g_file_read (file, NULL, error);
  g_autofree char *buffer = NULL;
  gsize size;

  if (stream == NULL)
    return NULL;
  buffer = g_malloc (MOST_BYTES);
  if (!g_input_stream_read_all (G_INPUT_STREAM (stream), buffer, MOST_BYTES, &size, NULL, error))
    return NULL;
  /* A cut in the middle of a UTF-8 character would make the whole look like another encoding: end with a whole line. */
  if (size == MOST_BYTES && memchr (buffer, 0, size) == NULL)
    while (size > 0 && buffer[size - 1] != '\n' && buffer[size - 1] != '\r')
      size--;
  return g_bytes_new (buffer, size);
}

static char *
cut_line (const char *at, const char *end)
{
  g_autofree char *line = g_strndup (at, (gsize) (end - at));

  if (g_utf8_strlen (line, -1) <= MOST_CHARACTERS)
    return g_steal_pointer (&line);
  *g_utf8_offset_to_pointer (line, MOST_CHARACTERS) = '\0';
  return g_strconcat (line, "…", NULL);
}

char **
bt_spectrum_first_lines (const char *path, guint n, GError **error)
{
  g_autoptr (GBytes) bytes = read_beginning (path, error);
  g_autoptr (GPtrArray) lines = g_ptr_array_new_with_free_func (g_free);
  BtText text;

  if (bytes == NULL || !bt_text_decode (bytes, &text, error))
    return NULL;
  for (const char *at = text.at, *next; at < text.end && lines->len < n; at = next)
    {
      const char *end = bt_text_line_end (at, text.end, &next);

      g_ptr_array_add (lines, cut_line (at, end));
    }
  bt_text_clear (&text);
  g_ptr_array_add (lines, NULL);
  return (char **) g_ptr_array_free (g_steal_pointer (&lines), FALSE);
}
