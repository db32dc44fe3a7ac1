/* Which bands a film needs: fits of one tail with more and more bands, judged by an information criterion. Private to core/tally. */
#ifndef BANDTALLY_SELECT_H
#define BANDTALLY_SELECT_H

#include "prepare.h"

/* AICc of a fit with the effective number of points (Burnham and Anderson 2002): n ln (chi2 / n) + 2 K + 2 K (K + 1) / (n - K - 1), where K
 * counts sigma and only what priors leave open of each parameter. */
double bt_fit_aicc (const BtFilmFit *fit, double n_effective);
/* Free parameters less what priors decide of them. */
double bt_fit_parameters (const BtFilmFit *fit);

/* (transfer full) (element-type BtFilmFit): every fit made for @tail, the best first; aic is AICc. NULL with @error set where cancelled
 * or where no fit could be made. */
GPtrArray *bt_select_bands (const BtPrepared *prepared, const BtRecipe *recipe, BtTailKind tail, GCancellable *cancellable,
                            GError **error);
/* One fit with these numbers of bands, from @start where given. */
BtFilmFit *bt_fit_bands (const BtPrepared *prepared, const BtRecipe *recipe, BtTailKind tail, const guint n_in_group[BT_N_GROUPS],
                         const BtFilmFit *start, GCancellable *cancellable);
/* Amplitude of the structure that a fit leaves, corrected for what its parameters soaked up; absorbance. */
double bt_fit_structure (const BtFilmFit *fit, const BtPrepared *prepared);

#endif
