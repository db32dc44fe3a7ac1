/* The codes of a spectrum's flags, as tests compare them. */
#pragma once

#include <bandtally/spectrum.h>

/* (transfer full): "code code ...", in order. */
static inline char *
flag_codes (BtSpectrum *spectrum)
{
  const GPtrArray *flags = bt_spectrum_get_flags (spectrum);
  GString *codes = g_string_new (NULL);

  for (guint i = 0; i < flags->len; i++)
    g_string_append_printf (codes, "%s%s", i > 0 ? " " : "", ((const BtFlag *) g_ptr_array_index (flags, i))->code);
  return g_string_free (codes, FALSE);
}
