/* Reads the tables of data/reference from the library's own resources. */
#include "reference-table.h"

void
bt_reference_table_read (GResource *resource, const char *path, guint n_fields, void (*row) (char **fields))
{
  g_autoptr (GBytes) bytes = g_resource_lookup_data (resource, path, G_RESOURCE_LOOKUP_FLAGS_NONE, NULL);
  g_auto (GStrv) lines = NULL;

  g_assert (bytes != NULL);
  lines = g_strsplit (g_bytes_get_data (bytes, NULL), "\n", -1);
  for (gsize i = 0; lines[i] != NULL; i++)
    {
      g_auto (GStrv) fields = g_strsplit (lines[i], ",", (int) n_fields);

      if (lines[i][0] == '#' || g_strv_length (fields) < n_fields)
        continue;
      g_strstrip (g_strdelimit (fields[n_fields - 1], "\"", ' '));
      row (fields);
    }
}
