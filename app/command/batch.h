/* Grading of many files on several threads. */
#ifndef BANDTALLY_BATCH_H
#define BANDTALLY_BATCH_H

#include "command.h"

G_BEGIN_DECLS

/**
 * BatchSettings:
 * @recipe: for all films
 * @reading: what the user states about the files
 * @blank: (nullable): for all films
 * @substrate: (nullable): for all films; NULL: as the files say
 * @reflectance: (nullable): measured, for all films
 * @thicknesses_nm: (nullable) (element-type double): readings of a film's thickness, for all films; NULL: as the files say
 * @thickness_u_nm: NAN: as the files say, or from the readings
 * @sheet_resistance_ohm, @sheet_resistance_u_ohm: for all films; NAN: as the files say
 * @jobs: threads
 */
typedef struct
{
  const BtRecipe *recipe;
  BtReadOptions reading;
  BtSpectrum *blank, *reflectance;
  const char *substrate;
  GArray *thicknesses_nm;
  double thickness_u_nm, sheet_resistance_ohm, sheet_resistance_u_ohm;
  int jobs;
} BatchSettings;

/**
 * BatchResult:
 * @films: (element-type BtFilm): films that were graded, in the order of the files
 * @tallies: (element-type BtTally): as many
 * @failures: (element-type BtFailure): files that were not, in their order
 */
typedef struct
{
  GPtrArray *films, *tallies, *failures;
} BatchResult;

/* Grades every spectrum in the files. The outcome does not depend on the number of threads. Names failures on standard error as
 * they come, in the files' order, and shows progress there where it is a terminal. An interrupt (Ctrl+C) ends the batch early:
 * what is graded is kept, the rest are failures. */
void batch_grade (char **files, const BatchSettings *settings, BatchResult *result);
void batch_result_clear (BatchResult *result);

G_END_DECLS

#endif
