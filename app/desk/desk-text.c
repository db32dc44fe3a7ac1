#include "desk-text.h"

#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

static const char *const superscripts[] = { "⁰", "¹", "²", "³", "⁴", "⁵", "⁶", "⁷", "⁸", "⁹" };

/* "1.52(3)e5" as it is printed in a journal, with its unit. */
static char *
typeset (const char *plain, const char *unit)
{
  GString *text = g_string_new (NULL);
  const char *e = strchr (plain, 'e');
  g_string_append_len (text, plain, e ? (gssize) (e - plain) : (gssize) strlen (plain));
  if (e)
    {
      g_string_append (text, " × 10");
      for (const char *p = e + 1; *p; p++)
        if (*p == '-')
          g_string_append (text, "⁻");
        else if (g_ascii_isdigit (*p))
          g_string_append (text, superscripts[*p - '0']);
    }
  if (unit && *unit)
    g_string_append_printf (text, "\u00a0%s", unit);
  return g_string_free (text, FALSE);
}

char *
desk_text_uncertain (double value, double u, const char *unit)
{
  if (isnan (value))
    return g_strdup ("–");
  g_autofree char *plain = bt_format_uncertain (value, u);
  return typeset (plain, unit);
}

char *
desk_text_number (double value, int digits, const char *unit)
{
  if (isnan (value))
    return g_strdup ("–");
  g_autofree char *plain = bt_format_number (value, digits, TRUE);
  return typeset (plain, unit);
}

char *
desk_text_percent (double share, int decimals)
{
  return isnan (share) ? g_strdup ("–") : g_strdup_printf ("%.*f\u00a0%%", decimals, share * 100);
}

char *
desk_text_interval (const BtFraction *fraction)
{
  switch (fraction->bound)
    {
    case BT_BOUND_TWO_SIDED:
      return g_strdup_printf (_("%.1f to %.1f\u00a0%%"), fraction->low * 100, fraction->high * 100);
    case BT_BOUND_LOWER:
      return g_strdup_printf (_("at least %.1f\u00a0%%"), fraction->low * 100);
    case BT_BOUND_NONE:
      break;
    }
  return NULL;
}

const char *
desk_verdict_icon (BtVerdict verdict)
{
  switch (verdict)
    {
    case BT_VERDICT_ACCEPTED:
      return "bandtally-accepted-symbolic";
    case BT_VERDICT_REFUSED:
      return "bandtally-refused-symbolic";
    case BT_VERDICT_UNDECIDED:
      return "bandtally-undecided-symbolic";
    case BT_VERDICT_NOT_JUDGED:
      break;
    }
  return "bandtally-not-judged-symbolic";
}
