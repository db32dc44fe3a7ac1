/* What readers set on a spectrum before it is handed out. Private to core/spectrum. */
#ifndef BANDTALLY_SPECTRUM_PRIVATE_H
#define BANDTALLY_SPECTRUM_PRIVATE_H

#include <bandtally/spectrum.h>

void bt_spectrum_set_origin (BtSpectrum *self, const char *file, const char *sha256, const char *reading);
void bt_spectrum_add_note (BtSpectrum *self, const char *key, const char *value);
/* (transfer full): takes @flag. */
void bt_spectrum_add_flag (BtSpectrum *self, BtFlag *flag);

#endif
