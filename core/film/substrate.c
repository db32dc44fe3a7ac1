/* Substrates with a published dispersion, from data/reference/substrates.csv. */
#include <bandtally/film.h>

#include <math.h>

#include <gio/gio.h>

#include "../spectrum/reference-table.h"
#include "bt-substrate-resource.h"

typedef struct { char *name; double b[3], c[3], from_um, to_um; char *source; } Substrate;

static GArray *substrates;
static GPtrArray *names;

static void
read_row (char **fields)
{
  Substrate row;

  row.name = g_strdup (fields[0]);
  for (int i = 0; i < 3; i++)
    {
      row.b[i] = g_ascii_strtod (fields[1 + i], NULL);
      row.c[i] = g_ascii_strtod (fields[4 + i], NULL);
    }
  row.from_um = g_ascii_strtod (fields[7], NULL);
  row.to_um = g_ascii_strtod (fields[8], NULL);
  row.source = g_strdup (fields[9]);
  g_array_append_val (substrates, row);
  g_ptr_array_add (names, row.name);
}

static void
read_table (void)
{
  static gsize done = 0;

  if (g_once_init_enter (&done))
    {
      substrates = g_array_new (FALSE, FALSE, sizeof (Substrate));
      names = g_ptr_array_new ();
      bt_reference_table_read (bt_substrate_get_resource (), "/org/bandtally/substrate/substrates.csv", 10, read_row);
      g_ptr_array_add (names, NULL);
      g_once_init_leave (&done, 1);
    }
}

static const Substrate *
find (const char *name)
{
  read_table ();
  for (guint i = 0; name != NULL && i < substrates->len; i++)
    if (g_ascii_strcasecmp (g_array_index (substrates, Substrate, i).name, name) == 0)
      return &g_array_index (substrates, Substrate, i);
  return NULL;
}

double
bt_substrate_index (const char *name, double wavelength_nm)
{
  const Substrate *substrate = find (name);
  double l = wavelength_nm * 1e-3, square = 1;

  if (substrate == NULL || !(l >= substrate->from_um && l <= substrate->to_um))
    return NAN;
  for (int i = 0; i < 3; i++)
    square += substrate->b[i] * l * l / (l * l - substrate->c[i]);
  return sqrt (square);
}

const char *
bt_substrate_source (const char *name)
{
  const Substrate *substrate = find (name);

  return substrate != NULL ? substrate->source : NULL;
}

const char *const *
bt_substrate_names (void)
{
  read_table ();
  return (const char *const *) names->pdata;
}
