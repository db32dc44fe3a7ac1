/* One reading along a light path: the formulas that the curve, its uncertainty and the draws share. Private to core/film. */
#ifndef BANDTALLY_POINT_H
#define BANDTALLY_POINT_H

#include <bandtally/film.h>

/**
 * BtPoint:
 * @film, @blank: absorbances as read; @blank 0 without one
 * @reflectance: of one face or, where @measured, of film and substrate together
 * @index: of the substrate; NAN where it is not known or not needed
 */
typedef struct {
  BtLightPathKind kind;
  double film, blank, reflectance, index;
  gboolean measured;
} BtPoint;

/* The film's own absorbance; NAN where no film gives such a reading. */
G_GNUC_INTERNAL double bt_point_absorbance (const BtPoint *point);
/* Its derivatives by the film's reading, the blank's, and the reflectance. */
G_GNUC_INTERNAL void bt_point_slopes (const BtPoint *point, double *by_film, double *by_blank, double *by_reflectance);
/* What is read at an energy. FALSE where blank or measured reflectance do not reach. @u: (nullable) (array length=3): noise of film, blank and
 * measured reflectance. */
G_GNUC_INTERNAL gboolean bt_point_at (BtPoint *point, BtFilm *film, const BtLightPath *how, double energy_ev, double film_absorbance, double *u);

#endif
