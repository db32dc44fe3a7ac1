/* A file that was read: bytes, name, notes, checksum. */
#include "spectrum-private.h"

struct BtSource
{
  GBytes *bytes;
  char *name, *sha256;
  GHashTable *notes;
  gsize hashed;
};

BtSource *
bt_source_new (GBytes *bytes, const char *name)
{
  BtSource *source = g_atomic_rc_box_new0 (BtSource);

  source->bytes = g_bytes_ref (bytes);
  source->name = g_strdup (name);
  source->notes = g_hash_table_new_full (g_str_hash, g_str_equal, g_free, g_free);
  return source;
}

BtSource *
bt_source_ref (BtSource *source)
{
  return g_atomic_rc_box_acquire (source);
}

static void
source_clear (void *data)
{
  BtSource *source = data;

  g_bytes_unref (source->bytes);
  g_free (source->name);
  g_free (source->sha256);
  g_hash_table_unref (source->notes);
}

void
bt_source_unref (BtSource *source)
{
  g_atomic_rc_box_release_full (source, source_clear);
}

const char *
bt_source_get_name (BtSource *source)
{
  return source->name;
}

GBytes *
bt_source_get_bytes (BtSource *source)
{
  return source->bytes;
}

const char *
bt_source_get_sha256 (BtSource *source)
{
  /* Hashing takes longer than reading. */
  if (g_once_init_enter (&source->hashed))
    {
      source->sha256 = g_compute_checksum_for_bytes (G_CHECKSUM_SHA256, source->bytes);
      g_once_init_leave (&source->hashed, 1);
    }
  return source->sha256;
}

/* Keys compare without case, and an underscore is a space. */
char *
bt_source_fold_key (const char *key)
{
  char *folded = g_utf8_strdown (key, -1);

  g_strdelimit (folded, "_", ' ');
  return g_strstrip (folded);
}

void
bt_source_add_note (BtSource *source, const char *key, const char *value)
{
  char *folded = bt_source_fold_key (key);

  if (*folded == '\0' || g_hash_table_contains (source->notes, folded))
    g_free (folded);
  else
    g_hash_table_insert (source->notes, folded, g_strstrip (g_strdup (value)));
}

GHashTable *
bt_source_get_notes (BtSource *source)
{
  return source->notes;
}
