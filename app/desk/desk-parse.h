/* Numbers as people type them: "120(6) nm", "0,8 eV", "1550 nm", "85 %". */
#pragma once

#include <glib.h>

G_BEGIN_DECLS

typedef enum {
  DESK_UNIT_NONE,
  DESK_UNIT_SHARE,      /* 0 to 1, or in % */
  DESK_UNIT_NM,         /* a length */
  DESK_UNIT_EV,         /* an energy; a wavelength is converted */
  DESK_UNIT_EV_WIDTH,   /* a difference of energies: eV and meV only */
  DESK_UNIT_WAVELENGTH, /* nm; an energy is converted */
  DESK_UNIT_OHM         /* a resistance */
} DeskUnit;

#define DESK_PARSE_ERROR (desk_parse_error_quark ())
GQuark desk_parse_error_quark (void);

/* Reads one quantity. @u (nullable): its stated uncertainty, NAN where none is stated. FALSE with a sentence in @error. */
gboolean desk_parse_quantity (const char *text, DeskUnit unit, double *value, double *u, GError **error);
/* Reads several, separated by semicolons, spaces, or commas followed by a space. (transfer full) (element-type double). */
GArray *desk_parse_quantities (const char *text, DeskUnit unit, GError **error);
/* "nm", "eV", "" */
const char *desk_unit_name (DeskUnit unit);

G_END_DECLS
