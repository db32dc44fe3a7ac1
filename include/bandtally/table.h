/* Tallies as text: JSON, CSV, and a table to read. */
#ifndef BANDTALLY_TABLE_H
#define BANDTALLY_TABLE_H

#include <bandtally/tally.h>

G_BEGIN_DECLS

/* Films and their tallies (same length). (transfer full): one JSON object { "bandtally": version, "films": [...] }. Numbers are
 * written so that reading them back gives the same double; what could not be had is null. */
char *bt_tallies_to_json (GPtrArray *films, GPtrArray *tallies);
/* (transfer full): RFC 4180, one header record and one record a film. */
char *bt_tallies_to_csv (GPtrArray *films, GPtrArray *tallies);
/* (transfer full): translated text for a terminal of this many columns. */
char *bt_tallies_to_text (GPtrArray *films, GPtrArray *tallies, int columns);

/* (transfer full): "0.661(26)", "1.52e5(3)": a value with its standard uncertainty in brackets, two digits; "-" for NAN. */
char *bt_format_uncertain (double value, double u);
/* (transfer full): value with @digits significant digits in the window's locale where @localised, else with a point. */
char *bt_format_number (double value, int digits, gboolean localised);

G_END_DECLS

#endif
