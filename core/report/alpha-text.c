/* What stands behind an absorption coefficient, in words. */
#include <math.h>

#include <bandtally/table.h>
#include <glib/gi18n-lib.h>

char *
bt_alpha_parts_text (const BtAlpha *alpha)
{
  GString *text = g_string_new (NULL);
  gboolean said[BT_N_PARTS] = { FALSE };

  for (guint n = 0; n < BT_N_PARTS; n++)
    {
      guint largest = BT_N_PARTS;
      g_autofree char *share = NULL;

      for (guint k = 0; k < BT_N_PARTS; k++)
        if (!said[k] && alpha->parts[k] > 0 && (largest == BT_N_PARTS || alpha->parts[k] > alpha->parts[largest]))
          largest = k;
      if (largest == BT_N_PARTS)
        break;
      said[largest] = TRUE;
      share = bt_format_number (100 * alpha->parts[largest] / fabs (alpha->value), 2, TRUE);
      /* Translators: a source of uncertainty and its share of the value. */
      g_string_append_printf (text, _ ("%s%s %s %%"), text->len > 0 ? ", " : "", bt_part_title ((BtPart) largest), share);
    }
  return g_string_free (text, FALSE);
}

char *
bt_alpha_interval_text (const BtAlpha *alpha)
{
  g_autofree char *low = NULL, *high = NULL;

  if (isnan (alpha->low))
    return NULL;
  low = bt_format_number (alpha->low, 4, TRUE);
  high = bt_format_number (alpha->high, 4, TRUE);
  return g_strdup_printf (_ ("%s to %s"), low, high);
}

char *
bt_sheet_text (const BtReading *reading)
{
  g_autofree char *siemens = NULL, *universal = NULL;

  if (isnan (reading->sheet_conductance_s))
    return NULL;
  siemens = bt_format_uncertain (reading->sheet_conductance_s, reading->sheet_conductance_u_s);
  universal = bt_format_uncertain (reading->sheet_conductance_s / BT_UNIVERSAL_CONDUCTANCE_S,
                                   reading->sheet_conductance_u_s / BT_UNIVERSAL_CONDUCTANCE_S);
  /* Translators: an optical sheet conductance in siemens and in its universal unit. */
  return g_strdup_printf (_ ("%s S, %s e²⁠/⁠4ħ"), siemens, universal);
}

char *
bt_conductor_text (const BtConductor *conductor)
{
  g_autofree char *transmittance = NULL, *ratio = NULL, *merit = NULL;

  if (isnan (conductor->ratio))
    return NULL;
  transmittance = bt_format_uncertain (conductor->transmittance, conductor->transmittance_u);
  ratio = bt_format_uncertain (conductor->ratio, conductor->ratio_u);
  merit = bt_format_uncertain (conductor->haacke_s, conductor->haacke_u_s);
  return g_strdup_printf (_ ("Transparent conductor at %d nm, film over blank T = %s: ratio of dc to optical conductivity %s; figure of merit T¹⁰/R %s S "
                             "(Haacke)"),
                          BT_CONDUCTOR_NM, transmittance, ratio, merit);
}
