/* Reference energies of single tubes, from the tables in data/reference. */
#include <bandtally/tube.h>

#include <math.h>
#include <string.h>

#include <gio/gio.h>

#include "bt-reference-resource.h"

typedef struct { double a, b, mod1, mod2; } Empirical;
typedef struct { double p, lower, upper; } Scaling;

static Empirical empirical[BT_N_GROUPS];
static Scaling scaling[BT_N_GROUPS];
static struct { double scaling_a, scaling_b, scaling_c, scaling_extra, tight_binding_g0, tight_binding_a_cc; } constants;

/* Hands each row of a table to @row: the name in its first column and the numbers after it. */
static void
read_table (const char *file, void (*row) (const char *name, const double *numbers))
{
  g_autofree char *path = g_build_path ("/", "/org/bandtally/reference", file, NULL);
  g_autoptr (GBytes) bytes = g_resource_lookup_data (bt_reference_get_resource (), path, G_RESOURCE_LOOKUP_FLAGS_NONE, NULL);
  g_auto (GStrv) lines = NULL;

  g_assert (bytes != NULL);
  lines = g_strsplit (g_bytes_get_data (bytes, NULL), "\n", -1);
  for (gsize i = 0; lines[i] != NULL; i++)
    {
      g_auto (GStrv) fields = g_strsplit (lines[i], ",", 6);
      double numbers[5] = { 0 };

      if (fields[0] == NULL || fields[0][0] == '#')
        continue;
      for (gsize k = 1; fields[k] != NULL && k <= 5; k++)
        numbers[k - 1] = g_ascii_strtod (fields[k], NULL);
      row (fields[0], numbers);
    }
}

static void
empirical_row (const char *name, const double *numbers)
{
  BtGroup group;

  if (bt_group_from_name (name, &group))
    empirical[group] = (Empirical){ numbers[0], numbers[1], numbers[2], numbers[3] };
}

static void
scaling_row (const char *name, const double *numbers)
{
  BtGroup group;

  if (bt_group_from_name (name, &group))
    scaling[group] = (Scaling){ numbers[0], numbers[1], numbers[2] };
}

static void
constants_row (const char *name, const double *numbers)
{
  const struct { const char *name; double *value; } known[] = {
    { "scaling_a", &constants.scaling_a },
    { "scaling_b", &constants.scaling_b },
    { "scaling_c", &constants.scaling_c },
    { "scaling_extra", &constants.scaling_extra },
    { "tight_binding_g0", &constants.tight_binding_g0 },
    { "tight_binding_a_cc", &constants.tight_binding_a_cc },
  };

  for (gsize i = 0; i < G_N_ELEMENTS (known); i++)
    if (g_str_equal (name, known[i].name))
      *known[i].value = numbers[0];
}

static void
read_tables (void)
{
  static gsize done = 0;

  if (g_once_init_enter (&done))
    {
      read_table ("constants.csv", constants_row);
      read_table ("empirical.csv", empirical_row);
      read_table ("scaling.csv", scaling_row);
      g_once_init_leave (&done, 1);
    }
}

static double
per_cm_to_ev (double per_cm)
{
  return bt_energy_ev_from_x (per_cm, BT_X_PER_CM);
}

/* Araujo et al., Phys. Rev. Lett. 98, 067401 (2007), without the chirality term; p = 6 (M22) extrapolates it. */
static double
law (double diameter_nm, double p)
{
  double k = p / diameter_nm;

  return constants.scaling_a * k * (1 + constants.scaling_b * log10 (constants.scaling_c / k))
         + (p > 3 ? constants.scaling_extra / diameter_nm : 0);
}

double
bt_group_energy_ev (double diameter_nm, BtGroup group, BtReferenceSet set)
{
  g_return_val_if_fail (group < BT_N_GROUPS && diameter_nm > 0, NAN);
  read_tables ();
  if (set == BT_REFERENCE_TIGHT_BINDING)
    return 2 * scaling[group].p * constants.tight_binding_a_cc * constants.tight_binding_g0 / diameter_nm;
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
