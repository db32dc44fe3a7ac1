/* What the words over a column say: units, quantities, titles. */
#include "text-private.h"

#include <string.h>

/* Lower case, with what only decorates taken out. */
static char *
plain_words (const char *words)
{
  g_autofree char *lower = g_utf8_strdown (words, -1);
  GString *plain = g_string_new (lower);

  g_string_replace (plain, "\302\265", "u", 0);             /* micro sign */
  g_string_replace (plain, "\316\274", "u", 0);             /* Greek mu */
  g_string_replace (plain, "\316\261", "alpha", 0);         /* Greek alpha */
  g_string_replace (plain, "\316\273", "lambda", 0);        /* Greek lambda */
  g_string_replace (plain, "\342\201\273\302\271", "-1", 0); /* superscript -1 */
  g_string_replace (plain, "\302\257\302\271", "-1", 0);    /* the same with a macron, in Latin-1 */
  g_string_replace (plain, "-\302\271", "-1", 0);
  g_string_replace (plain, "\342\210\222", "-", 0);         /* minus sign */
  g_string_replace (plain, "\342\200\223", "-", 0);         /* en dash */
  g_string_replace (plain, "\303\245", "angstrom", 0);
  g_string_replace (plain, "^", "", 0);
  g_string_replace (plain, "**", "", 0);
  g_string_replace (plain, "_", " ", 0);
  g_string_replace (plain, "{", "", 0);
  g_string_replace (plain, "}", "", 0);
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

static gboolean
has_any (const char *text, const char *const *words)
{
  for (; *words != NULL; words++)
    if (has_word (text, *words))
      return TRUE;
  return FALSE;
}

gboolean
bt_text_x_unit (const char *words, BtXUnit *unit)
{
  static const struct { const char *word; BtXUnit unit; } known[] = {
    { "cm-1", BT_X_PER_CM }, { "cm -1", BT_X_PER_CM }, { "1/cm", BT_X_PER_CM }, { "per cm", BT_X_PER_CM }, { "/cm", BT_X_PER_CM },
    { "wavenumber", BT_X_PER_CM }, { "wavenumbers", BT_X_PER_CM }, { "wave number", BT_X_PER_CM }, { "wellenzahl", BT_X_PER_CM },
    { "kayser", BT_X_PER_CM }, { "ev", BT_X_EV }, { "electronvolt", BT_X_EV }, { "electron volts", BT_X_EV }, { "um", BT_X_UM },
    { "micron", BT_X_UM }, { "microns", BT_X_UM }, { "micrometer", BT_X_UM }, { "micrometers", BT_X_UM }, { "micrometre", BT_X_UM },
    { "micrometres", BT_X_UM }, { "mikrometer", BT_X_UM }, { "nm", BT_X_NM }, { "nanometer", BT_X_NM }, { "nanometers", BT_X_NM },
    { "nanometre", BT_X_NM }, { "nanometres", BT_X_NM }, { "energy", BT_X_EV }, { "energie", BT_X_EV },
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
bt_text_is_wavelength (const char *words)
{
  static const char *const known[] = { "wavelength", "wavelengths", "wave length", "wl", "wellenl\303\244nge", "wellenlaenge", "lambda",
                                       "wvl", "longueur d'onde", "longitud de onda", "lunghezza d'onda", NULL };
  g_autofree char *plain = plain_words (words);

  return has_any (plain, known);
}

gboolean
bt_text_y_unit (const char *words, BtYUnit *unit)
{
  static const char *const absorbance[] = { "abs", "od", "optical density", "au", "extinction", "absorption", "absorptie", NULL };
  g_autofree char *plain = plain_words (words);
  const gboolean percent = strchr (plain, '%') != NULL || has_word (plain, "percent") || has_word (plain, "per cent")
                           || has_word (plain, "pct");
  /* Single letters name films as often as quantities: they count only where no other word stands. */
  const gboolean alone = bt_text_is_only_unit (words);

  if (has_word (plain, "alpha") || strstr (plain, "absorption coeff") != NULL || strstr (plain, "absorptionskoeff") != NULL)
    *unit = BT_Y_ALPHA_PER_CM;
  else if (strstr (plain, "absorb") != NULL || strstr (plain, "extinktion") != NULL || has_word (plain, "log(1/t)")
           || has_word (plain, "log10(1/t)") || has_word (plain, "-log(t)") || has_word (plain, "-log10(t)") || has_word (plain, "-lg t"))
    *unit = BT_Y_ABSORBANCE;
  else if (strstr (plain, "transm") != NULL || has_word (plain, "trans") || (alone && has_word (plain, "t")))
    *unit = percent ? BT_Y_TRANSMITTANCE_PERCENT : BT_Y_TRANSMITTANCE;
  else if (strstr (plain, "reflec") != NULL || strstr (plain, "reflex") != NULL || has_word (plain, "refl") || (alone && has_word (plain, "r")))
    *unit = percent ? BT_Y_REFLECTANCE_PERCENT : BT_Y_REFLECTANCE;
  else if (!percent && (has_any (plain, absorbance) || (alone && (has_word (plain, "a") || has_word (plain, "e")))))
    *unit = BT_Y_ABSORBANCE;
  else
    return FALSE;
  return TRUE;
}

const char *
bt_text_foreign (const char *words)
{
  static const char *const known[] = { "mev", "kev", "angstrom", "angstroms", "thz", "ghz", "hz", "kj/mol", "rad/s", "mabs", "mod", "mau",
                                       "counts", "intensity", "cps", "absorptance", "raman shift", "a/cm", NULL };
  g_autofree char *plain = plain_words (words);
  BtYUnit unit;

  for (const char *const *word = known; *word != NULL; word++)
    if (has_word (plain, *word))
      return *word;
  /* Of absorption coefficients only those per cm are read. */
  if (bt_text_y_unit (words, &unit) && unit == BT_Y_ALPHA_PER_CM)
    {
      static const char *const lengths[] = { "1/m", "m-1", "1/um", "um-1", "1/nm", "nm-1", "1/mm", "mm-1", "per m", "per um", "per nm", NULL };

      for (const char *const *word = lengths; *word != NULL; word++)
        if (has_word (plain, *word))
          return *word;
    }
  return NULL;
}

gboolean
bt_text_is_only_unit (const char *words)
{
  static const char *const plainly[] = { "wavelength", "wavelengths", "wave", "length", "wl", "wavenumber", "wavenumbers", "number", "photon",
    "energy", "lambda", "nm", "um", "cm", "ev", "micron", "microns", "nanometer", "nanometers", "nanometre", "nanometres", "per", "a", "t", "r",
    "e", "u", "x", "y", "au", "abs", "arb", "unit", "units", "od", "absorbance", "absorbances", "absorption", "coefficient", "coeff", "optical",
    "density", "extinction", "extinktion", "transmittance", "transmission", "transmittanz", "trans", "reflectance", "reflection", "refl",
    "percent", "alpha", "log", "wellenl", "nge", "wellenzahl", "energie", "data", "value", "values", "m", "mode", "column", "the", "of", "in",
    NULL };
  g_autofree char *plain = plain_words (words);
  g_auto (GStrv) tokens = NULL;

  for (char *at = plain; *at != '\0'; at++)
    if (!g_ascii_isalpha (*at) && (guint8) *at < 0x80 && !g_ascii_isdigit (*at))
      *at = ' ';
  tokens = g_strsplit_set (plain, " \303\244", -1);
  for (char **token = tokens; *token != NULL; token++)
    if (**token != '\0' && !g_str_equal (*token, "1") && !g_str_equal (*token, "10") && !g_strv_contains (plainly, *token))
      return FALSE;
  return TRUE;
}
