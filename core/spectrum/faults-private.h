/* Faults of a reading: noise, steps, saturation. Pure functions over the core's axes. Private to core/spectrum. */
#ifndef BANDTALLY_FAULTS_PRIVATE_H
#define BANDTALLY_FAULTS_PRIVATE_H

#include <bandtally/fringe.h>
#include <bandtally/spectrum.h>

/* Sorts @values. */
G_GNUC_INTERNAL double bt_faults_median (double *values, gsize n);
/* (transfer full): standard uncertainty of each of @n points. */
G_GNUC_INTERNAL double *bt_faults_noise (const double *energy_ev, const double *absorbance, gsize n);
/* Number of single points that stand out; their noise is raised to as much, so that no fit follows them. @largest is one's excess. */
G_GNUC_INTERNAL guint bt_faults_find_spikes (const double *energy_ev, const double *absorbance, double *noise, gsize n,
                                             double *largest_at_ev, double *largest);
/* Appends BtRange. */
G_GNUC_INTERNAL void bt_faults_find_saturated (const double *energy_ev, const double *absorbance, const double *noise, gsize n, GArray *saturated);
/* Appends BtStep, by energy. */
G_GNUC_INTERNAL void bt_faults_find_steps (const double *energy_ev, const double *absorbance, const double *noise, gsize n, const GArray *saturated,
                           GArray *steps);

/* The step in the gap nearest to @at_ev, however small. FALSE where too few points lie on one of its sides. */
G_GNUC_INTERNAL gboolean bt_faults_measure_step (const double *energy_ev, const double *absorbance, const double *noise, gsize n, double at_ev,
                                                 BtStep *step);

/* The strongest fringe: see bt_spectrum_find_fringe(). */
G_GNUC_INTERNAL gboolean bt_faults_find_fringe (const double *energy_ev, const double *absorbance, const double *noise, gsize n,
                                                BtFringe *fringe);

#endif
