/* Recipe: how a film is analysed. */
#ifndef BANDTALLY_RECIPE_H
#define BANDTALLY_RECIPE_H

#include <bandtally/film.h>
#include <bandtally/instrument.h>
#include <bandtally/model.h>

G_BEGIN_DECLS

#define BT_TYPE_RECIPE (bt_recipe_get_type ())
#define BT_RECIPE_ERROR (bt_recipe_error_quark ())
typedef enum { BT_RECIPE_ERROR_READ, BT_RECIPE_ERROR_FIELD } BtRecipeError;
GQuark bt_recipe_error_quark (void);

/* Most Gaussians that a group may get. */
#define BT_RECIPE_MAX_BANDS 4

typedef enum { BT_BAND_CENTRE, BT_BAND_FWHM, BT_BAND_HEIGHT } BtBandField;
/**
 * BtHeld:
 *
 * A number of the @index-th band (from low energy) of @group that the user holds; the fit leaves it alone. eV, or absorbance for
 * a height.
 */
typedef struct { BtGroup group; guint index; BtBandField field; double value; } BtHeld;

/**
 * BtStepCorrection:
 * @BT_STEP_LEFT: curves and readings keep the steps of the detector; the fit takes them into account all the same
 * @BT_STEP_TO_VISIBLE: the side of longer wavelengths is moved onto that of shorter ones
 * @BT_STEP_TO_INFRARED: the side of shorter wavelengths is moved onto that of longer ones
 */
typedef enum { BT_STEP_LEFT, BT_STEP_TO_VISIBLE, BT_STEP_TO_INFRARED, BT_N_STEP_CORRECTIONS } BtStepCorrection;
/* "none", "visible", "infrared": in files. */
const char *bt_step_correction_name (BtStepCorrection correction);
gboolean bt_step_correction_from_name (const char *name, BtStepCorrection *correction);

/**
 * BtRecipe:
 * @name: what it is called
 * @light_path: how the reading became the film's own absorbance
 * @range: energies fitted, eV; 0 for an end means: as far as the data and the band plan go
 * @tails: one bit a #BtTailKind: the tails to be fitted
 * @window: diameters; mean 0 means: propose from the data
 * @shift_ev: red shift of films, eV
 * @max_bands: most Gaussians by group; 0 leaves the group out
 * @strength_ratio: S22 area per carbon over M11 area per carbon, with @strength_ratio_u and a sentence naming its source
 * @level: confidence level of intervals
 * @limit: least semiconducting fraction to be accepted; NAN: not judged
 * @wavelengths_nm: (element-type double): wavelengths of interest
 * @mean_low_nm, @mean_high_nm: range of the mean absorption coefficient
 * @max_absorbance: photometric limit; readings above are left out
 * @steps_nm: (element-type double): wavelengths at which the instrument changes detector, grating or lamp: a step there is measured however small
 * @step_correction: what becomes of steps in curves and readings
 * @photometric_u: standard uncertainty of an absorbance beyond its noise, from a check of the instrument; 0: unknown, left out
 * @wavelength_u_nm: standard uncertainty of the wavelength scale; 0: unknown, left out
 * @stray_light: share of the light that reaches the detector without passing the film, 0 to 1; 0: unknown
 * @excluded: (element-type BtRange): energies left out of the fit
 * @held: (element-type BtHeld): what the user holds
 *
 * Boxed; all fields may be changed by its owner.
 */
typedef struct {
  char *name;
  BtLightPath light_path;
  BtRange range;
  guint tails;
  BtDiameterWindow window;
  double shift_ev;
  guint max_bands[BT_N_GROUPS];
  double strength_ratio, strength_ratio_u;
  char *strength_ratio_source;
  double level, limit;
  GArray *wavelengths_nm;
  double mean_low_nm, mean_high_nm;
  double max_absorbance;
  GArray *steps_nm;
  BtStepCorrection step_correction;
  double photometric_u, wavelength_u_nm, stray_light;
  GArray *excluded;
  GArray *held;
} BtRecipe;

GType bt_recipe_get_type (void);
/* The default recipe: all tails, diameters proposed from the data, k = 1.0 with u 0.2, level 0.95, no limit; 550, 650, 980 and
 * 1550 nm; mean over 600-1100 nm. */
BtRecipe *bt_recipe_new (void);
BtRecipe *bt_recipe_copy (const BtRecipe *recipe);
void bt_recipe_free (BtRecipe *recipe);
gboolean bt_recipe_equal (const BtRecipe *a, const BtRecipe *b);

/* Sets or replaces the number held; releases it with bt_recipe_release(). */
void bt_recipe_hold (BtRecipe *recipe, BtGroup group, guint index, BtBandField field, double value);
void bt_recipe_release (BtRecipe *recipe, BtGroup group, guint index, BtBandField field);
const BtHeld *bt_recipe_get_held (const BtRecipe *recipe, BtGroup group, guint index, BtBandField field);

/* Takes the standard uncertainty that a check of the instrument found: of a wavelength from holmium, of an absorbance from dichromate. Leaves @recipe as
 * it is, and returns %FALSE, where the check found nothing. */
gboolean bt_recipe_take_check (BtRecipe *recipe, const BtInstrumentCheck *check);

/* JSON, a member a field; every member may be left out. Errors name the member. */
BtRecipe *bt_recipe_new_from_json (const char *text, gssize length, GError **error);
BtRecipe *bt_recipe_new_from_file (const char *path, GError **error);
char *bt_recipe_to_json (const BtRecipe *recipe);
/* FALSE with @error naming the field where a value makes no sense. */
gboolean bt_recipe_check (const BtRecipe *recipe, GError **error);

G_END_DECLS

#endif
