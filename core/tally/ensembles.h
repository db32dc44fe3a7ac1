/* Ensemble fits of a film, one a tail. Private to core/tally. */
#ifndef BANDTALLY_ENSEMBLES_H
#define BANDTALLY_ENSEMBLES_H

#include "../model/ensemble.h"
#include "select.h"

/**
 * BtEnsembles:
 * @data: what was fitted: the prepared points, averaged further
 * @fits: by tail as in the recipe's order; NULL where none could be made
 * @structure: what the best of them leaves, absorbance
 */
typedef struct {
  BtFilmData data;
  double *energy_ev, *absorbance, *noise, *sigma, *per_length;
  BtEnsembleFit *fits[BT_N_TAILS];
  guint n_tails;
  double structure;
} BtEnsembles;

/* (transfer full) (nullable): the ensemble model with each tail, starting from the best group fit of that tail; NULL where the population cannot be
 * determined (S22 or M11 out of range) or the user cancelled. */
BtEnsembles *bt_ensembles_fit (const BtPrepared *prepared, GPtrArray *const group_fits[], guint n_tails, GCancellable *cancellable);
void bt_ensembles_free (BtEnsembles *ensembles);
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtEnsembles, bt_ensembles_free)

#endif
