/* Single-walled carbon nanotubes: (n,m) geometry and reference energies of their transitions. */
#ifndef BANDTALLY_TUBE_H
#define BANDTALLY_TUBE_H

#include <glib-object.h>
#include <bandtally/units.h>

G_BEGIN_DECLS

/* Transitions, in the order in which a large tube shows them from low to high energy. */
typedef enum { BT_S11, BT_S22, BT_M11, BT_S33, BT_S44, BT_M22, BT_N_GROUPS } BtGroup;
typedef enum { BT_TUBE_METALLIC, BT_TUBE_MOD1, BT_TUBE_MOD2 } BtTubeKind;

/**
 * BtReferenceSet:
 * @BT_REFERENCE_EMPIRICAL: S11 and S22 of single tubes in suspension by the empirical relation of Bachilo et al., Science 298,
 *   2361 (2002), and Weisman and Bachilo, Nano Lett. 3, 1235 (2003); other transitions by the scaling law
 * @BT_REFERENCE_SCALING: all transitions by the scaling law of Araujo et al., Phys. Rev. Lett. 98, 067401 (2007)
 * @BT_REFERENCE_TIGHT_BINDING: 2 p a_cc g0 / d, g0 = 2.9 eV
 */
typedef enum { BT_REFERENCE_EMPIRICAL, BT_REFERENCE_SCALING, BT_REFERENCE_TIGHT_BINDING } BtReferenceSet;

/* A tube n >= m >= 0. */
typedef struct { int n, m; } BtTube;

/* Carbon bond length 0.144 nm (the optical literature's convention). */
double bt_tube_diameter_nm (BtTube tube);
/* Degrees: 0 zigzag, 30 armchair. */
double bt_tube_chiral_angle_deg (BtTube tube);
BtTubeKind bt_tube_kind (BtTube tube);
/* 2 n + m */
int bt_tube_family (BtTube tube);
/* Whether tubes of this kind have this transition. */
gboolean bt_group_is_metallic (BtGroup group);
/* "S11" ... ; never translated. */
const char *bt_group_name (BtGroup group);
/* FALSE where @name is no group; case-insensitive. */
gboolean bt_group_from_name (const char *name, BtGroup *group);

/**
 * bt_tube_energy_ev:
 * @branch: 0; 1 is the upper branch that metallic tubes other than armchair have beside the lower one
 *
 * Returns: transition energy in eV of a single tube as the set gives it (no film shift), or NAN where the tube has no such
 *   transition or branch
 */
double bt_tube_energy_ev (BtTube tube, BtGroup group, int branch, BtReferenceSet set);
/* The same for a diameter, without the chirality term: the centre of the group. eV. */
double bt_group_energy_ev (double diameter_nm, BtGroup group, BtReferenceSet set);
const char *bt_reference_set_source (BtReferenceSet set);

/* (transfer full) (element-type BtTube): all tubes with low <= diameter <= high, by diameter. Free with g_array_unref(). */
GArray *bt_tubes_in_diameter (double low_nm, double high_nm);

/* One transition of one tube; @energy_ev with the film's red shift taken off. */
typedef struct { BtTube tube; BtGroup group; int branch; double energy_ev; } BtTubeLine;
/* (transfer full) (element-type BtTubeLine): at most @most transitions of tubes with low <= diameter <= high, nearest to @energy_ev
 * first; by the empirical set. Free with g_array_unref(). */
GArray *bt_tube_lines_near (double energy_ev, double low_nm, double high_nm, double shift_ev, guint most);

G_END_DECLS

#endif
