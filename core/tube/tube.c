/* (n,m) geometry and names. */
#include <bandtally/tube.h>

#include <math.h>

/* nm; the value that the optical literature's empirical relations were fitted with (graphite's is 0.142 nm). */
#define CARBON_BOND_NM 0.144

static const char *const group_names[BT_N_GROUPS] = { "S11", "S22", "M11", "S33", "S44", "M22" };

double
bt_tube_diameter_nm (BtTube tube)
{
  const double n = tube.n, m = tube.m;

  return sqrt (3.0) * CARBON_BOND_NM * sqrt (n * n + n * m + m * m) / G_PI;
}

double
bt_tube_chiral_angle_deg (BtTube tube)
{
  return atan2 (sqrt (3.0) * tube.m, 2.0 * tube.n + tube.m) * 180 / G_PI;
}

BtTubeKind
bt_tube_kind (BtTube tube)
{
  static const BtTubeKind kinds[] = { BT_TUBE_METALLIC, BT_TUBE_MOD1, BT_TUBE_MOD2 };

  return kinds[(tube.n - tube.m) % 3];
}

int
bt_tube_family (BtTube tube)
{
  return 2 * tube.n + tube.m;
}

gboolean
bt_group_is_metallic (BtGroup group)
{
  return group == BT_M11 || group == BT_M22;
}

const char *
bt_group_name (BtGroup group)
{
  g_return_val_if_fail (group < BT_N_GROUPS, "");
  return group_names[group];
}

gboolean
bt_group_from_name (const char *name, BtGroup *group)
{
  for (guint g = 0; g < BT_N_GROUPS; g++)
    if (g_ascii_strcasecmp (name, group_names[g]) == 0)
      {
        *group = (BtGroup) g;
        return TRUE;
      }
  return FALSE;
}

static int
by_diameter (gconstpointer a, gconstpointer b)
{
  const BtTube *left = a, *right = b;
  double x = bt_tube_diameter_nm (*left), y = bt_tube_diameter_nm (*right);

  return x < y ? -1 : x > y ? 1 : left->n - right->n;
}

GArray *
bt_tubes_in_diameter (double low_nm, double high_nm)
{
  GArray *tubes = g_array_new (FALSE, FALSE, sizeof (BtTube));

  for (int n = 1; bt_tube_diameter_nm ((BtTube){ n, 0 }) <= high_nm; n++)
    for (int m = 0; m <= n; m++)
      {
        BtTube tube = { n, m };
        double d = bt_tube_diameter_nm (tube);

        if (d >= low_nm && d <= high_nm)
          g_array_append_val (tubes, tube);
      }
  g_array_sort (tubes, by_diameter);
  return tubes;
}
