/* File bytes to UTF-8 lines. */
#include "text-private.h"

#include <string.h>

#include <glib/gi18n-lib.h>

static gboolean
has_bytes (const guint8 *data, gsize size, const char *mark, gsize n)
{
  return size >= n && memcmp (data, mark, n) == 0;
}

char *
bt_text_decode (const guint8 *data, gsize size, const char **encoding, GError **error)
{
  if (has_bytes (data, size, "\xff\xfe", 2) || has_bytes (data, size, "\xfe\xff", 2))
    {
      char *text = g_convert ((const char *) data + 2, (gssize) (size - 2), "UTF-8", data[0] == 0xff ? "UTF-16LE" : "UTF-16BE", NULL, NULL, NULL);

      *encoding = "UTF-16";
      if (text == NULL)
        g_set_error_literal (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT, _ ("it begins as UTF-16 text but is damaged; export it again."));
      return text;
    }
  if (has_bytes (data, size, "\xef\xbb\xbf", 3))
    {
      data += 3;
      size -= 3;
    }
  if (memchr (data, 0, MIN (size, 1u << 16)) != NULL)
    {
      g_set_error_literal (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT,
                           _ ("it is a binary file, not text; export the spectrum from the instrument's program as text (CSV)."));
      return NULL;
    }
  if (g_utf8_validate ((const char *) data, (gssize) size, NULL))
    {
      *encoding = "UTF-8";
      return g_strndup ((const char *) data, size);
    }
  *encoding = "Latin-1";
  return g_convert ((const char *) data, (gssize) size, "UTF-8", "ISO-8859-1", NULL, NULL, error);
}

/* Lines end with LF, CR LF or CR. */
GArray *
bt_text_split (char *text)
{
  GArray *lines = g_array_new (FALSE, FALSE, sizeof (char *));

  while (*text != '\0')
    {
      char *end = text + strcspn (text, "\r\n");

      g_array_append_val (lines, text);
      if (*end == '\r' && end[1] == '\n')
        *end++ = '\0';
      if (*end != '\0')
        *end++ = '\0';
      text = end;
    }
  return lines;
}
