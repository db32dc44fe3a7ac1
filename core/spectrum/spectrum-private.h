/* What readers set on a spectrum before it is handed out. Private to core/spectrum. */
#ifndef BANDTALLY_SPECTRUM_PRIVATE_H
#define BANDTALLY_SPECTRUM_PRIVATE_H

#include <bandtally/spectrum.h>

/* A file that was read, shared by its spectra: its bytes, its name, the notes in its preamble. Its checksum is made when asked for. */
typedef struct BtSource BtSource;
/* (transfer full): one reference. */
BtSource *bt_source_new (GBytes *bytes, const char *name);
BtSource *bt_source_ref (BtSource *source);
void bt_source_unref (BtSource *source);
/* The first statement under a key stays. Only before the source is shared. */
void bt_source_add_note (BtSource *source, const char *key, const char *value);
/* (transfer none): keys in lower case, with blanks for underscores. */
GHashTable *bt_source_get_notes (BtSource *source);
const char *bt_source_get_name (BtSource *source);
GBytes *bt_source_get_bytes (BtSource *source);
const char *bt_source_get_sha256 (BtSource *source);
/* (transfer full): as keys are kept. */
char *bt_source_fold_key (const char *key);

void bt_spectrum_set_origin (BtSpectrum *self, BtSource *source, const char *reading);
/* (transfer full) of @flag. */
void bt_spectrum_add_flag (BtSpectrum *self, BtFlag *flag);

#endif
