/* Reference energies of single tubes, from the tables in data/reference. */
#include <bandtally/tube.h>

#include <math.h>
#include <string.h>

#include <gio/gio.h>

#include "bt-reference-resource.h"

/* Scaling law, Araujo et al., Phys. Rev. Lett. 98, 067401 (2007): constants common to all transitions, stated in scaling.csv too. */
#define LAW_A 1.049
#define LAW_B 0.456
#define LAW_C 0.812
#define LAW_EXTRA 0.305
/* Simple tight binding: 2 p a_cc g0 / d with g0 in eV (optics) and a_cc in nm. */
#define TIGHT_BINDING_G0 2.9
#define CARBON_BOND_NM 0.144

typedef struct { double a, b, mod1, mod2; } Empirical;
typedef struct { double p, lower, upper; } Scaling;

static Empirical empirical[BT_N_GROUPS];
static Scaling scaling[BT_N_GROUPS];

/* Numbers of each row of a table whose first column is a group: row (group, numbers). */
static void
read_table (const char *path, void (*row) (BtGroup group, const double *numbers))
{
  g_autoptr (GBytes) bytes = g_resource_lookup_data (bt_reference_get_resource (), path, G_RESOURCE_LOOKUP_FLAGS_NONE, NULL);
  g_auto (GStrv) lines = NULL;

  g_assert (bytes != NULL);
  lines = g_strsplit (g_bytes_get_data (bytes, NULL), "\n", -1);
  for (gsize i = 0; lines[i] != NULL; i++)
    {
      g_auto (GStrv) fields = g_strsplit (lines[i], ",", 6);
      double numbers[5] = { 0 };
      BtGroup group;

      if (fields[0] == NULL || !bt_group_from_name (fields[0], &group))
        continue;
      for (gsize k = 1; fields[k] != NULL && k <= 5; k++)
        numbers[k - 1] = g_ascii_strtod (fields[k], NULL);
      row (group, numbers);
    }
}

static void
empirical_row (BtGroup group, const double *numbers)
{
  empirical[group] = (Empirical){ numbers[0], numbers[1], numbers[2], numbers[3] };
}

static void
scaling_row (BtGroup group, const double *numbers)
{
  scaling[group] = (Scaling){ numbers[0], numbers[1], numbers[2] };
}

static void
read_tables (void)
{
  static gsize done = 0;

  if (g_once_init_enter (&done))
    {
      read_table ("/org/bandtally/reference/empirical.csv", empirical_row);
      read_table ("/org/bandtally/reference/scaling.csv", scaling_row);
      g_once_init_leave (&done, 1);
    }
}

static double
per_cm_to_ev (double per_cm)
{
  return bt_energy_ev_from_x (per_cm, BT_X_PER_CM);
}

static double
law (double diameter_nm, double p)
{
  double k = p / diameter_nm;

  return LAW_A * k * (1 + LAW_B * log10 (LAW_C / k)) + (p > 3 ? LAW_EXTRA / diameter_nm : 0);
}

double
bt_group_energy_ev (double diameter_nm, BtGroup group, BtReferenceSet set)
{
  g_return_val_if_fail (group < BT_N_GROUPS && diameter_nm > 0, NAN);
  read_tables ();
  if (set == BT_REFERENCE_TIGHT_BINDING)
    return 2 * scaling[group].p * CARBON_BOND_NM * TIGHT_BINDING_G0 / diameter_nm;
  if (set == BT_REFERENCE_EMPIRICAL && empirical[group].b > 0)
    return per_cm_to_ev (1e7 / (empirical[group].a + empirical[group].b * diameter_nm));
  return law (diameter_nm, scaling[group].p);
}

/* Whether a semiconducting tube takes the lower branch: type 1 for S11, S33, type 2 for S22, S44. */
static gboolean
takes_lower_branch (BtTubeKind kind, BtGroup group)
{
  gboolean odd = group == BT_S11 || group == BT_S33;

  return (kind == BT_TUBE_MOD1) == odd;
}

double
bt_tube_energy_ev (BtTube tube, BtGroup group, int branch, BtReferenceSet set)
{
  const double d = bt_tube_diameter_nm (tube), angle = bt_tube_chiral_angle_deg (tube) * G_PI / 180;
  const BtTubeKind kind = bt_tube_kind (tube);
  const gboolean metallic = bt_group_is_metallic (group);
  const double curvature = cos (3 * angle) / (d * d);
  double centre;
  gboolean lower;

  g_return_val_if_fail (group < BT_N_GROUPS, NAN);
  if (metallic != (kind == BT_TUBE_METALLIC) || branch < 0 || branch > 1)
    return NAN;
  if (branch == 1 && (!metallic || tube.n == tube.m || set == BT_REFERENCE_TIGHT_BINDING))
    return NAN;
  centre = bt_group_energy_ev (d, group, set);
  if (set == BT_REFERENCE_TIGHT_BINDING)
    return centre;
  if (set == BT_REFERENCE_EMPIRICAL && empirical[group].b > 0)
    return centre + per_cm_to_ev (kind == BT_TUBE_MOD1 ? empirical[group].mod1 : empirical[group].mod2) * curvature;
  /* cos(3 theta) is 0 for armchair tubes: their branches coincide. */
  lower = metallic ? branch == 0 : takes_lower_branch (kind, group);
  return centre + (lower ? scaling[group].lower : scaling[group].upper) * curvature;
}

const char *
bt_reference_set_source (BtReferenceSet set)
{
  static const char *const sources[] = {
    "Bachilo et al., Science 298, 2361 (2002); Weisman and Bachilo, Nano Lett. 3, 1235 (2003); other than S11 and S22: Araujo et al., "
    "Phys. Rev. Lett. 98, 067401 (2007)",
    "Araujo et al., Phys. Rev. Lett. 98, 067401 (2007)",
    "simple tight binding, g0 = 2.9 eV",
  };

  g_return_val_if_fail (set < G_N_ELEMENTS (sources), "");
  return sources[set];
}
