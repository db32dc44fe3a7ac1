/* Bandtally's core: from a spectrum to a graded film. Include this; link libbandtally. */
#ifndef BANDTALLY_H
#define BANDTALLY_H

#include <bandtally/units.h>
#include <bandtally/flag.h>
#include <bandtally/spectrum.h>
#include <bandtally/fringe.h>
#include <bandtally/instrument.h>
#include <bandtally/tube.h>
#include <bandtally/band_plan.h>
#include <bandtally/film.h>
#include <bandtally/shape.h>
#include <bandtally/solve.h>
#include <bandtally/fit.h>
#include <bandtally/model.h>
#include <bandtally/forecast.h>
#include <bandtally/recipe.h>
#include <bandtally/tally.h>
#include <bandtally/figure.h>
#include <bandtally/report.h>
#include <bandtally/table.h>

G_BEGIN_DECLS

/* "0.1.0" */
const char *bt_version (void);

G_END_DECLS

#endif
