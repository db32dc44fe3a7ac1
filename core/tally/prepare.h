/* What a tally fits: the film's own absorbance in the recipe's range, with weights. Private to core/tally. */
#ifndef BANDTALLY_PREPARE_H
#define BANDTALLY_PREPARE_H

#include <bandtally/fringe.h>
#include <bandtally/tally.h>

#include "../model/film-model.h"

/* Unmodelled structure of a film (lines that no smooth population has, sidebands) is alike over about half a line's width: its
 * correlation length, eV. Common practice gives widths of 0.08 to 0.15 eV in films. */
#define BT_STRUCTURE_LENGTH_EV 0.05

/**
 * BtPrepared:
 * @data: what is fitted; its arrays belong to this
 * @noise: standard uncertainty of each point from the reading's noise
 * @per_length: points within one correlation length of the structure, at each point (at least 1)
 * @structure: amplitude of unmodelled structure, absorbance
 * @least_structure: no reading is linear, and no model true, to better than this (0.4 % of the mean absorbance: photometers are good to 0.2 to
 *   0.7 %, Burke and Mavrodineanu, J. Res. NBS 80A, 631 (1976))
 * @n_effective: independent points, from @noise, @structure and @per_length
 * @n_in_group: most bands by group: the recipe's, 0 where the group is out of range
 */
typedef struct {
  BtCurve *curve;
  BtFilmData data;
  double *energy_ev, *absorbance, *noise, *sigma, *per_length;
  double structure, least_structure, n_effective;
  BtRange range;
  BtBandPlan plan;
  gboolean window_proposed, window_found;
  BtDiameterWindow alternative; /* mean 0: none */
  guint n_in_group[BT_N_GROUPS];
  guint n_over_limit, n_saturated;
  gboolean has_fringe;
  BtFringe fringe;
} BtPrepared;

/* @previous (nullable): its window is taken where the recipe leaves the window to be proposed. */
BtPrepared *bt_prepare (BtFilm *film, const BtRecipe *recipe, const BtTally *previous, GError **error);
void bt_prepared_free (BtPrepared *prepared);
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtPrepared, bt_prepared_free)
/* Sets the amplitude of the structure and with it sigma and n_effective:
 * sigma^2 = noise^2 + per_length structure^2, so that points closer than the correlation length share what one of them is worth. */
void bt_prepared_set_structure (BtPrepared *prepared, double structure);

#endif
