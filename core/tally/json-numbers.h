/* Numbers in JSON text with the fewest digits that read back as the same double. Private to the core. */
#ifndef BANDTALLY_JSON_NUMBERS_H
#define BANDTALLY_JSON_NUMBERS_H

#include <glib.h>

/* (transfer full): @json (transfer full) with every number outside strings rewritten: 0.95 instead of 0.94999999999999996. */
char *bt_json_shorten_numbers (char *json);

#endif
