/* Runs a fuzz target without libFuzzer: over its seeds as they are, and over a stated number of random changes of them, the same ones each time. Prints
 * TAP. Arguments: number of changes, folders of seeds. */
#include <glib.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "fuzz.h"

static int
by_name (const void *a, const void *b)
{
  return strcmp (*(const char *const *) a, *(const char *const *) b);
}

static GPtrArray *
read_seeds (const char *folder)
{
  GPtrArray *seeds = g_ptr_array_new_with_free_func ((GDestroyNotify) g_bytes_unref);
  g_autoptr (GDir) dir = g_dir_open (folder, 0, NULL);
  g_autoptr (GPtrArray) names = g_ptr_array_new_with_free_func (g_free);
  const char *name;

  while (dir != NULL && (name = g_dir_read_name (dir)) != NULL)
    g_ptr_array_add (names, g_build_filename (folder, name, NULL));
  /* Folders list their files in any order. */
  g_ptr_array_sort (names, by_name);
  for (guint i = 0; i < names->len; i++)
    {
      char *text;
      gsize size;

      if (g_file_get_contents (g_ptr_array_index (names, i), &text, &size, NULL))
        g_ptr_array_add (seeds, g_bytes_new_take (text, size));
    }
  return seeds;
}

/* A few changes: bytes set, pieces left out, doubled, or taken from another seed. */
static GByteArray *
change (GRand *random, const GPtrArray *seeds)
{
  static const char bytes[] = ",;\t .-+eE0123456789\n\r\"#$=%@AaJjSs?*()\0\xff\xc3{}[]:";
  GBytes *seed = g_ptr_array_index (seeds, (guint) g_rand_int_range (random, 0, (int) seeds->len));
  GByteArray *out = g_byte_array_new ();
  int n_changes = g_rand_int_range (random, 1, 9);

  g_byte_array_append (out, g_bytes_get_data (seed, NULL), (guint) g_bytes_get_size (seed));
  while (n_changes-- > 0 && out->len > 2)
    {
      guint at = (guint) g_rand_int_range (random, 0, (int) out->len), n = (guint) g_rand_int_range (random, 1, 65);

      n = MIN (n, out->len - at);
      switch (g_rand_int_range (random, 0, 4))
        {
        case 0:
          g_byte_array_remove_range (out, at, n);
          break;
        case 1:
          {
            g_autofree guint8 *piece = g_memdup2 (out->data + at, n);

            g_byte_array_append (out, piece, n);
            break;
          }
        case 2:
          {
            gsize size;
            const guint8 *other = g_bytes_get_data (g_ptr_array_index (seeds, (guint) g_rand_int_range (random, 0, (int) seeds->len)), &size);

            if (size > at)
              memcpy (out->data + at, other + at, MIN (n, size - at));
            break;
          }
        default:
          out->data[at] = (guint8) bytes[g_rand_int_range (random, 0, (int) sizeof bytes)];
        }
    }
  return out;
}

int
main (int argc, char **argv)
{
  const int n_changes = argc > 1 ? atoi (argv[1]) : 0;

  g_log_set_always_fatal ((GLogLevelFlags) (G_LOG_FATAL_MASK | G_LOG_LEVEL_CRITICAL | G_LOG_LEVEL_WARNING));
  printf ("1..%d\n", 2 * (argc - 2));
  for (int a = 2; a < argc; a++)
    {
      g_autoptr (GPtrArray) seeds = read_seeds (argv[a]);
      g_autoptr (GRand) random = g_rand_new_with_seed (7);
      g_autofree char *name = g_path_get_basename (argv[a]);

      for (guint i = 0; i < seeds->len; i++)
        {
          gsize size;
          const guint8 *data = g_bytes_get_data (g_ptr_array_index (seeds, i), &size);

          LLVMFuzzerTestOneInput (data, size);
        }
      printf ("%s %d - %s: %u seeds as they are\n", seeds->len > 0 ? "ok" : "not ok", 2 * a - 3, name, seeds->len);
      fflush (stdout);
      for (int i = 0; i < n_changes && seeds->len > 0; i++)
        {
          g_autoptr (GByteArray) changed = change (random, seeds);

          LLVMFuzzerTestOneInput (changed->data, changed->len);
        }
      printf ("%s %d - %s: %d changes of them\n", seeds->len > 0 ? "ok" : "not ok", 2 * a - 2, name, n_changes);
      fflush (stdout);
    }
  return 0;
}
