/* File bytes to UTF-8 text, and text to lines. */
#include "text-private.h"

#include <string.h>

#include <glib/gi18n-lib.h>

static gboolean
has_bytes (const char *data, gsize size, const char *mark, gsize n)
{
  return size >= n && memcmp (data, mark, n) == 0;
}

/* UTF-16 without a mark: every other byte of plain text is 0. */
static const char *
bare_utf16 (const char *data, gsize size)
{
  gsize zeros[2] = { 0, 0 };
  const gsize n = MIN (size, 512) & ~(gsize) 1;

  for (gsize i = 0; i < n; i++)
    zeros[i % 2] += data[i] == 0 ? 1 : 0;
  if (n < 16 || size % 2 != 0)
    return NULL;
  if (zeros[0] == 0 && zeros[1] > n * 4 / 10)
    return "UTF-16LE";
  return zeros[1] == 0 && zeros[0] > n * 4 / 10 ? "UTF-16BE" : NULL;
}

static gboolean
convert (BtText *text, const char *data, gsize size, const char *from, GError **error)
{
  gsize written;

  text->owned = g_convert (data, (gssize) size, "UTF-8", from, NULL, &written, NULL);
  if (text->owned == NULL)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT, _ ("it begins as %s text but is damaged; export it again."),
                   text->encoding);
      return FALSE;
    }
  text->at = text->owned;
  text->end = text->owned + written;
  return TRUE;
}

/* Eight bytes at a time; most files are plain. */
static gboolean
is_ascii (const char *data, gsize size)
{
  guint64 all = 0, eight;

  for (; size >= 8; data += 8, size -= 8)
    {
      memcpy (&eight, data, 8);
      all |= eight;
    }
  for (; size > 0; data++, size--)
    all |= (guint8) *data;
  return (all & G_GUINT64_CONSTANT (0x8080808080808080)) == 0;
}

gboolean
bt_text_decode (GBytes *bytes, BtText *text, GError **error)
{
  gsize size;
  const char *data = g_bytes_get_data (bytes, &size), *from;

  *text = (BtText){ .encoding = "UTF-16" };
  if (has_bytes (data, size, "\xff\xfe", 2) || has_bytes (data, size, "\xfe\xff", 2))
    return convert (text, data + 2, size - 2, *data == '\xff' ? "UTF-16LE" : "UTF-16BE", error);
  from = bare_utf16 (data, size);
  if (from != NULL)
    return convert (text, data, size, from, error);
  if (has_bytes (data, size, "\xef\xbb\xbf", 3))
    {
      data += 3;
      size -= 3;
    }
  /* Padding, and the end mark of old systems. */
  while (size > 0 && (data[size - 1] == '\0' || data[size - 1] == '\x1a'))
    size--;
  if (size > 0 && memchr (data, 0, size) != NULL)
    {
      g_set_error_literal (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT,
                           _ ("it is a binary file, not text; export the spectrum from the instrument's program as text (CSV)."));
      return FALSE;
    }
  text->at = data;
  text->end = data + size;
  text->encoding = "UTF-8";
  if (is_ascii (data, size) || g_utf8_validate_len (data, size, NULL))
    return TRUE;
  text->encoding = "Latin-1";
  return convert (text, data, size, "ISO-8859-1", error);
}

void
bt_text_clear (BtText *text)
{
  g_clear_pointer (&text->owned, g_free);
}

const char *
bt_text_line_end (const char *at, const char *end, const char **next)
{
  while (at < end && *at != '\n' && *at != '\r')
    at++;
  *next = at < end ? at + 1 : end;
  if (at + 1 < end && at[0] == '\r' && at[1] == '\n')
    *next = at + 2;
  return at;
}
