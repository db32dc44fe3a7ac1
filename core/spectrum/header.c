/* Units, from a header's words or else from the values. */
#include "text-private.h"

#include <math.h>
#include <string.h>

/* Lower case, with what only decorates taken out. */
static char *
plain_words (const char *words)
{
  g_autofree char *lower = g_utf8_strdown (words, -1);
  GString *plain = g_string_new (lower);

  g_string_replace (plain, "\302\265", "u", 0);         /* micro sign */
  g_string_replace (plain, "\316\274", "u", 0);         /* Greek mu */
  g_string_replace (plain, "\316\261", "alpha", 0);     /* Greek alpha */
  g_string_replace (plain, "\342\201\273\302\271", "-1", 0); /* superscript -1 */
  g_string_replace (plain, "\342\210\222", "-", 0);     /* minus sign */
  g_string_replace (plain, "^", "", 0);
  g_string_replace (plain, "_", " ", 0);
  return g_string_free (plain, FALSE);
}

/* Whether @word stands in @text with no letter on either side. */
static gboolean
has_word (const char *text, const char *word)
{
  const gsize n = strlen (word);

  for (const char *at = strstr (text, word); at != NULL; at = strstr (at + 1, word))
    if ((at == text || !g_ascii_isalpha (at[-1])) && !g_ascii_isalpha (at[n]))
      return TRUE;
  return FALSE;
}

gboolean
bt_text_x_unit (const char *words, BtXUnit *unit)
{
  static const struct { const char *word; BtXUnit unit; } known[] = {
    { "cm-1", BT_X_PER_CM }, { "1/cm", BT_X_PER_CM }, { "per cm", BT_X_PER_CM }, { "wavenumber", BT_X_PER_CM }, { "wavenumbers", BT_X_PER_CM },
    { "wellenzahl", BT_X_PER_CM }, { "ev", BT_X_EV }, { "energy", BT_X_EV }, { "energie", BT_X_EV }, { "um", BT_X_UM }, { "micron", BT_X_UM },
    { "microns", BT_X_UM }, { "micrometer", BT_X_UM }, { "micrometers", BT_X_UM }, { "micrometre", BT_X_UM }, { "nm", BT_X_NM },
    { "nanometer", BT_X_NM }, { "nanometers", BT_X_NM }, { "nanometre", BT_X_NM }, { "nanometres", BT_X_NM },
  };
  g_autofree char *plain = plain_words (words);

  for (gsize i = 0; i < G_N_ELEMENTS (known); i++)
    if (has_word (plain, known[i].word))
      {
        *unit = known[i].unit;
        return TRUE;
      }
  return FALSE;
}

gboolean
bt_text_y_unit (const char *words, BtYUnit *unit)
{
  g_autofree char *plain = plain_words (words);
  gboolean percent = strchr (plain, '%') != NULL || has_word (plain, "percent") || has_word (plain, "per cent");

  if (has_word (plain, "alpha") || strstr (plain, "absorption coeff") != NULL)
    *unit = BT_Y_ALPHA_PER_CM;
  else if (strstr (plain, "absorb") != NULL || strstr (plain, "extinktion") != NULL || has_word (plain, "abs") || has_word (plain, "a")
           || has_word (plain, "od") || has_word (plain, "optical density") || has_word (plain, "au"))
    *unit = BT_Y_ABSORBANCE;
  else if (strstr (plain, "transm") != NULL || has_word (plain, "t"))
    *unit = percent ? BT_Y_TRANSMITTANCE_PERCENT : BT_Y_TRANSMITTANCE;
  else if (strstr (plain, "reflec") != NULL || strstr (plain, "reflex") != NULL || has_word (plain, "r"))
    *unit = percent ? BT_Y_REFLECTANCE_PERCENT : BT_Y_REFLECTANCE;
  else
    return FALSE;
  return TRUE;
}

/* Covariance of x and y: its sign tells which end is the higher. */
static double
covariance (const double *x, const double *y, gsize n)
{
  double mean_x = 0, mean_y = 0, sum = 0;
  gsize count = 0;

  for (gsize i = 0; i < n; i++)
    if (isfinite (x[i]) && isfinite (y[i]))
      {
        mean_x += x[i];
        mean_y += y[i];
        count++;
      }
  if (count == 0)
    return 0;
  mean_x /= (double) count;
  mean_y /= (double) count;
  for (gsize i = 0; i < n; i++)
    if (isfinite (x[i]) && isfinite (y[i]))
      sum += (x[i] - mean_x) * (y[i] - mean_y);
  return sum;
}

static void
range_of (const double *x, gsize n, double *low, double *high)
{
  *low = INFINITY;
  *high = -INFINITY;
  for (gsize i = 0; i < n; i++)
    if (isfinite (x[i]))
      {
        *low = fmin (*low, x[i]);
        *high = fmax (*high, x[i]);
      }
}

BtXUnit
bt_values_x_unit (const double *x, const double *y, gsize n)
{
  double low, high;

  range_of (x, n, &low, &high);
  if (high > 5000)
    return BT_X_PER_CM;
  if (high > 40)
    return BT_X_NM;
  /* Micrometres and electronvolts look alike; a nanotube film's absorbance rises towards high energy, its transmittance falls. */
  if (y != NULL)
    {
      double y_low, y_high, sign = covariance (x, y, n);

      range_of (y, n, &y_low, &y_high);
      if (y_high > 6 && y_high <= 110)
        sign = -sign;
      return sign > 0 ? BT_X_EV : BT_X_UM;
    }
  return BT_X_EV;
}

BtYUnit
bt_values_y_unit (const double *x, const double *y, gsize n, BtXUnit x_unit)
{
  double low, high, sign = covariance (x, y, n);

  range_of (y, n, &low, &high);
  if (x_unit == BT_X_NM || x_unit == BT_X_UM)
    sign = -sign;
  if (high > 200)
    return BT_Y_ALPHA_PER_CM;
  if (high > 8)
    return BT_Y_TRANSMITTANCE_PERCENT;
  /* Between 0 and 1 both are possible: absorbance rises towards high energy. */
  if (low >= 0 && high <= 1.02 && sign < 0)
    return BT_Y_TRANSMITTANCE;
  return BT_Y_ABSORBANCE;
}
