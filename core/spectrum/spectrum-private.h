/* What readers set on a spectrum before it is handed out. Private to core/spectrum. */
#ifndef BANDTALLY_SPECTRUM_PRIVATE_H
#define BANDTALLY_SPECTRUM_PRIVATE_H

#include <bandtally/spectrum.h>

/* A file beyond these limits is refused. */
#define BT_MAX_FILE_BYTES (200u << 20)
#define BT_MAX_POINTS 10000000
#define BT_MAX_SPECTRA 10000

/* A file that was read, shared by its spectra: its bytes, its name, the notes in its preamble. Its checksum is made when asked for. */
typedef struct BtSource BtSource;
/* (transfer full): one reference. */
G_GNUC_INTERNAL BtSource *bt_source_new (GBytes *bytes, const char *name);
G_GNUC_INTERNAL BtSource *bt_source_ref (BtSource *source);
G_GNUC_INTERNAL void bt_source_unref (BtSource *source);
/* The first statement under a key stays. Only before the source is shared. */
G_GNUC_INTERNAL void bt_source_add_note (BtSource *source, const char *key, const char *value);
/* (transfer none): keys in lower case, with blanks for underscores. */
G_GNUC_INTERNAL GHashTable *bt_source_get_notes (BtSource *source);
G_GNUC_INTERNAL const char *bt_source_get_name (BtSource *source);
G_GNUC_INTERNAL GBytes *bt_source_get_bytes (BtSource *source);
G_GNUC_INTERNAL const char *bt_source_get_sha256 (BtSource *source);
/* (transfer full): as keys are kept. */
G_GNUC_INTERNAL char *bt_source_fold_key (const char *key);

/* As bt_spectrum_new(), but takes the arrays. */
G_GNUC_INTERNAL BtSpectrum *bt_spectrum_new_take (double *x, double *y, gsize n, BtXUnit x_unit, BtYUnit y_unit, const char *title, GError **error);
G_GNUC_INTERNAL void bt_spectrum_set_origin (BtSpectrum *self, BtSource *source, const char *reading);
/* (transfer full) of @flag. */
G_GNUC_INTERNAL void bt_spectrum_add_flag (BtSpectrum *self, BtFlag *flag);

#endif
