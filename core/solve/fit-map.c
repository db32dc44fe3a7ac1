/* From the parameters a user speaks of to those that are free: ties followed to their end, fixed ones held, bounds carried
 * over. */
#include "fit-private.h"

#include <math.h>

/* full = factor * root + offset, along the chain of ties. */
static guint
follow (const BtFit *self, guint j, double *factor, double *offset)
{
  *factor = 1;
  *offset = 0;
  while (!bt_fit_parameter (self, j)->fixed && bt_fit_parameter (self, j)->to >= 0)
    {
      const BtFitParameter *tied = bt_fit_parameter (self, j);

      *offset += *factor * tied->offset;
      *factor *= tied->factor;
      j = (guint)tied->to;
    }
  return j;
}

static void
narrow (const BtFitMap *map, const BtFitParameter *parameter, guint j)
{
  const int z = map->index[j];
  double low = (parameter->low - map->offset[j]) / map->factor[j], high = (parameter->high - map->offset[j]) / map->factor[j];

  if (map->factor[j] < 0)
    {
      double swap = low;

      low = high;
      high = swap;
    }
  map->low[z] = fmax (map->low[z], low);
  map->high[z] = fmin (map->high[z], high);
}

BtFitMap *
bt_fit_map_new (const BtFit *self)
{
  BtFitMap *map = g_new0 (BtFitMap, 1);
  const guint n = self->parameters->len;
  g_autofree int *free_of = g_new (int, n);

  map->n_full = n;
  map->index = g_new (int, n);
  map->factor = g_new (double, n);
  map->offset = g_new (double, n);
  map->limit = g_new (double, n);
  map->root = g_new (guint, n + 1);
  map->n_users = g_new0 (guint, n + 1);
  map->low = g_new (double, n + 1);
  map->high = g_new (double, n + 1);
  for (guint j = 0; j < n; j++)
    {
      const BtFitParameter *parameter = bt_fit_parameter (self, j);

      free_of[j] = -1;
      map->limit[j] = parameter->step_limit;
      if (parameter->fixed || parameter->to >= 0 || parameter->low >= parameter->high)
        continue;
      map->low[map->n_free] = -INFINITY;
      map->high[map->n_free] = INFINITY;
      map->root[map->n_free] = j;
      free_of[j] = (int)map->n_free++;
    }
  for (guint j = 0; j < n; j++)
    {
      guint root = follow (self, j, &map->factor[j], &map->offset[j]);

      map->index[j] = map->factor[j] != 0 ? free_of[root] : -1;
      if (map->index[j] < 0)
        {
          const BtFitParameter *held = bt_fit_parameter (self, root);

          map->offset[j] += map->factor[j] * (held->fixed ? held->start : fmin (fmax (held->start, held->low), held->high));
          continue;
        }
      map->n_users[map->index[j]]++;
      narrow (map, bt_fit_parameter (self, j), j);
    }
  /* Bounds that tied parameters do not allow together: held in their middle. */
  for (guint z = 0; z < map->n_free; z++)
    if (map->low[z] > map->high[z])
      map->low[z] = map->high[z] = (map->low[z] + map->high[z]) / 2;
  return map;
}

void
bt_fit_map_free (BtFitMap *map)
{
  g_free (map->index);
  g_free (map->factor);
  g_free (map->offset);
  g_free (map->limit);
  g_free (map->root);
  g_free (map->n_users);
  g_free (map->low);
  g_free (map->high);
  g_free (map);
}

void
bt_fit_map_expand (const BtFitMap *map, const double *z, double *full)
{
  for (guint j = 0; j < map->n_full; j++)
    full[j] = map->index[j] < 0 ? map->offset[j] : map->factor[j] * z[map->index[j]] + map->offset[j];
}

void
bt_fit_map_reduce (const BtFitMap *map, const double *full, double *z)
{
  for (guint k = 0; k < map->n_free; k++)
    z[k] = full[map->root[k]];
}
