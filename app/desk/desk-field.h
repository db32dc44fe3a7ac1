/* Field: one number or text of a film or its recipe that the user may edit, by whatever means: how it is written, how it is
 * read, what the edit is called. */
#pragma once

#include <bandtally/bandtally.h>

#include "desk-parse.h"

G_BEGIN_DECLS

typedef enum {
  DESK_FIELD_NONE,
  DESK_FIELD_LABEL,
  DESK_FIELD_LOT,
  DESK_FIELD_SUBSTRATE,
  DESK_FIELD_NOTES,
  DESK_FIELD_THICKNESS,
  DESK_FIELD_THICKNESS_U,
  DESK_FIELD_SHEET_RESISTANCE,
  DESK_FIELD_SHEET_RESISTANCE_U, /* the last one of the film's own */
  DESK_FIELD_DIAMETER_MEAN,
  DESK_FIELD_DIAMETER_SPREAD,
  DESK_FIELD_SHIFT,
  DESK_FIELD_RANGE_LOW,
  DESK_FIELD_RANGE_HIGH,
  DESK_FIELD_MEAN_LOW,
  DESK_FIELD_MEAN_HIGH,
  DESK_FIELD_MAX_ABSORBANCE,
  DESK_FIELD_REFLECTANCE,
  DESK_FIELD_REFLECTANCE_U,
  DESK_FIELD_SUBSTRATE_INDEX,
  DESK_FIELD_RATIO,
  DESK_FIELD_RATIO_U,
  DESK_FIELD_RATIO_SOURCE,
  DESK_FIELD_LEVEL,
  DESK_FIELD_LIMIT,
  DESK_FIELD_WAVELENGTHS,
  DESK_FIELD_STEPS,
  DESK_FIELD_PHOTOMETRIC_U,
  DESK_FIELD_WAVELENGTH_U,
  DESK_FIELD_STRAY_LIGHT,
  DESK_FIELD_EXCLUDED,  /* one more range to leave out: "0.95 to 1.05 eV" */
  DESK_FIELD_MAX_BANDS, /* of a group */
  DESK_FIELD_BAND       /* a number of a band: typing it holds it */
} DeskFieldId;

typedef struct { DeskFieldId id; BtGroup group; guint index; BtBandField band; } DeskField;

/* What is edited: copies that the caller owns, with the outcome so far (nullable) for what had been left to the data. */
typedef struct { BtFilm *film; BtRecipe *recipe; const BtTally *tally; } DeskSubject;

/* Translated name of the field: "Thickness". (transfer full) */
char *desk_field_title (const DeskField *field);
/* Translated name of the edit: "Set thickness". (transfer full) */
char *desk_field_command_name (const DeskField *field);
/* The unit that a number without one is in. */
DeskUnit desk_field_unit (const DeskField *field);
/* Text to start editing from. (transfer full) */
char *desk_field_text (const DeskField *field, const DeskSubject *subject);
/* What an empty entry means, translated; NULL where it may not be empty. */
const char *desk_field_empty_hint (const DeskField *field);
/* Changes @subject by what was typed; FALSE with a sentence in @error, @subject may then be half changed and is thrown away. */
gboolean desk_field_apply (const DeskField *field, const char *text, DeskSubject *subject, GError **error);
/* Whether the field belongs to the film, not to its recipe. */
gboolean desk_field_is_of_film (const DeskField *field);
/* Whether the outcome depends on the field at all. */
gboolean desk_field_is_text (const DeskField *field);
/* (nullable) */
const BtBand *desk_tally_find_band (const BtTally *tally, BtGroup group, guint index);

G_END_DECLS
