/* Tables of published values that are compiled into the library. Private to the core. */
#ifndef BANDTALLY_REFERENCE_TABLE_H
#define BANDTALLY_REFERENCE_TABLE_H

#include <gio/gio.h>

/* Calls @row with the @n_fields fields of every row of a comma-separated table in @resource; comments (#) and shorter lines are passed over. The
 * last field is the source, its quotes taken off; it may hold commas. */
void bt_reference_table_read (GResource *resource, const char *path, guint n_fields, void (*row) (char **fields));

#endif
