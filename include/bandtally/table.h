/* Tallies as text: JSON, CSV, and a table to read. */
#ifndef BANDTALLY_TABLE_H
#define BANDTALLY_TABLE_H

#include <bandtally/tally.h>

G_BEGIN_DECLS

/* A file that could not be graded, and the whole sentence that says why. */
typedef struct { char *file; char *reason; } BtFailure;
BtFailure *bt_failure_new (const char *file, const char *reason);
void bt_failure_free (BtFailure *failure);

/**
 * bt_tallies_to_json_with_failures:
 * @films: (element-type BtFilm)
 * @tallies: (element-type BtTally): as many as @films
 * @failures: (nullable) (element-type BtFailure): files that are not among @films
 *
 * Numbers are written so that reading them back gives the same double; what could not be had is null.
 *
 * Returns: (transfer full): one JSON object { "bandtally": version, "films": [...], "failed": [...] }, UTF-8, ending in a line
 *   feed
 */
char *bt_tallies_to_json_with_failures (GPtrArray *films, GPtrArray *tallies, GPtrArray *failures);
char *bt_tallies_to_json (GPtrArray *films, GPtrArray *tallies);
/* (transfer full): RFC 4180, one header record and one record a film; an empty field is a value that could not be had. The
 * columns at wavelengths are those of all tallies together. */
char *bt_tallies_to_csv (GPtrArray *films, GPtrArray *tallies);
/* (transfer full): translated text for a terminal of this many columns; 0 for as many as it takes. A single film gets its whole
 * account, several get a line each and their flags below. */
char *bt_tallies_to_text (GPtrArray *films, GPtrArray *tallies, int columns);

/* (transfer full): a paragraph broken at spaces to lines of at most @columns places (0: unbroken), ending in a line feed; the first
 * line starts with @lead, the others with as many spaces. */
char *bt_wrap_text (const char *lead, const char *text, int columns);

/* (transfer full): "0.661(26)", "24560(120)", "1.523(31)e7": a value with its standard uncertainty in brackets, two digits that
 * count in the value's last places; the value alone where @u is 0 or not finite; "-" for NAN. With the locale's decimal mark:
 * for people, never for files. */
char *bt_format_uncertain (double value, double u);
/* (transfer full): value with @digits significant digits in the window's locale where @localised, else with a point. "-" for
 * NAN; with an exponent ("1.52e-7") below 0.0001 and from a million up. */
char *bt_format_number (double value, int digits, gboolean localised);
/* (transfer full): the fewest digits, with a point, that read back as the same double: for files. */
char *bt_format_exact (double value);

/* (transfer full): what an absorption coefficient's uncertainty is made of, largest first, translated: "thickness 4.2 %, noise of the reading 0.02 %". */
char *bt_alpha_parts_text (const BtAlpha *alpha);
/* (transfer full) (nullable): "91000 to 104000", the Monte Carlo interval in 1/cm; NULL where none was drawn. */
char *bt_alpha_interval_text (const BtAlpha *alpha);
/* (transfer full) (nullable): optical sheet conductance in S and in e^2 / (4 hbar); NULL where the light path gives none. */
char *bt_sheet_text (const BtReading *reading);
/* (transfer full) (nullable): one translated sentence; NULL where nothing is known of it. */
char *bt_conductor_text (const BtConductor *conductor);

G_END_DECLS

#endif
