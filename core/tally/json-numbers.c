/* The generator writes 17 digits whether they are needed or not; people read these files. */
#include "json-numbers.h"

#include <string.h>

static void
append_shortest (GString *text, const char *number, gsize n)
{
  g_autofree char *token = g_strndup (number, n);
  double value;
  char buffer[G_ASCII_DTOSTR_BUF_SIZE];

  /* Whole numbers stand as they are, also those that stand for counts. */
  if (strpbrk (token, ".eE") == NULL)
    {
      g_string_append (text, token);
      return;
    }
  value = g_ascii_strtod (token, NULL);
  for (int digits = 15; digits <= 17; digits++)
    {
      char format[8];

      g_snprintf (format, sizeof format, "%%.%dg", digits);
      g_ascii_formatd (buffer, sizeof buffer, format, value);
      if (!(g_ascii_strtod (buffer, NULL) < value) && !(g_ascii_strtod (buffer, NULL) > value))
        break;
    }
  g_string_append (text, buffer);
  /* Stays a number with a fraction for readers that tell the two apart. */
  if (strpbrk (buffer, ".eEn") == NULL)
    g_string_append (text, ".0");
}

char *
bt_json_shorten_numbers (char *json)
{
  GString *text = g_string_sized_new (strlen (json));
  gboolean in_string = FALSE;

  for (const char *p = json; *p != '\0';)
    {
      gsize n = in_string ? 0 : strspn (p, "+-.0123456789eE");

      /* "e" alone begins no number; true, false and null hold one. */
      if (n > 0 && (g_ascii_isdigit (*p) || *p == '-'))
        {
          append_shortest (text, p, n);
          p += n;
          continue;
        }
      if (*p == '\\' && in_string && p[1] != '\0')
        g_string_append_c (text, *p++);
      else if (*p == '"')
        in_string = !in_string;
      g_string_append_c (text, *p++);
    }
  g_free (json);
  return g_string_free (text, FALSE);
}
