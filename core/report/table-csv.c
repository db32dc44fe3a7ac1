/* Tallies as comma-separated values, for spreadsheets: RFC 4180, a decimal point, one record a film. */
#include <math.h>
#include <string.h>

#include <bandtally/bandtally.h>

static void
put_text (GString *out, const char *text)
{
  gboolean first = out->len == 0 || out->str[out->len - 1] == '\n';
  gboolean empty = text == NULL || text[0] == '\0';

  if (!first)
    g_string_append_c (out, ',');
  if (empty)
    {
      /* Else the field after it would take itself for the first. */
      if (first)
        g_string_append (out, "\"\"");
      return;
    }
  if (strpbrk (text, ",\"\r\n") == NULL)
    {
      g_string_append (out, text);
      return;
    }
  g_string_append_c (out, '"');
  for (const char *p = text; *p != '\0'; p++)
    {
      if (*p == '"')
        g_string_append_c (out, '"');
      g_string_append_c (out, *p);
    }
  g_string_append_c (out, '"');
}

static void
put_number (GString *out, double value)
{
  char text[G_ASCII_DTOSTR_BUF_SIZE];

  put_text (out, isfinite (value) ? g_ascii_dtostr (text, sizeof text, value) : NULL);
}

static void put_name (GString *out, const char *format, ...) G_GNUC_PRINTF (2, 3);
static void
put_name (GString *out, const char *format, ...)
{
  va_list arguments;
  char *name;

  va_start (arguments, format);
  name = g_strdup_vprintf (format, arguments);
  va_end (arguments);
  put_text (out, name);
  g_free (name);
}

/* (element-type double): every wavelength that some tally has, in the order in which they come. */
static GArray *
all_wavelengths (GPtrArray *tallies)
{
  GArray *all = g_array_new (FALSE, FALSE, sizeof (double));

  for (guint i = 0; i < tallies->len; i++)
    {
      const BtTally *tally = g_ptr_array_index (tallies, i);

      for (guint j = 0; j < tally->readings->len; j++)
        {
          double wavelength_nm = g_array_index (tally->readings, BtReading, j).wavelength_nm;
          gboolean known = FALSE;

          for (guint k = 0; k < all->len && !known; k++)
            known = g_array_index (all, double, k) == wavelength_nm;
          if (!known)
            g_array_append_val (all, wavelength_nm);
        }
    }
  return all;
}

static const BtReading *
reading_at (const BtTally *tally, double wavelength_nm)
{
  for (guint i = 0; i < tally->readings->len; i++)
    if (g_array_index (tally->readings, BtReading, i).wavelength_nm == wavelength_nm)
      return &g_array_index (tally->readings, BtReading, i);
  return NULL;
}

static void
put_header (GString *out, const GArray *wavelengths_nm)
{
  static const char *const first[] = {
    "file",
    "sha256",
    "film",
    "lot",
    "points",
    "low_nm",
    "high_nm",
    "thickness_nm",
    "thickness_u_nm",
    "fraction",
    "fraction_u",
    "fraction_low",
    "fraction_high",
    "level",
    "bound",
    "limit",
    "verdict",
    "diameter_mean_nm",
    "diameter_spread_nm",
    "tail",
    "tail_weight",
    "tail_share_at_s22",
  };

  for (gsize i = 0; i < G_N_ELEMENTS (first); i++)
    put_text (out, first[i]);
  for (int group = 0; group < BT_N_GROUPS; group++)
    {
      const char *name = bt_group_name ((BtGroup) group);

      put_name (out, "%s_area", name);
      put_name (out, "%s_area_u", name);
      put_name (out, "%s_centre_ev", name);
      put_name (out, "%s_fwhm_ev", name);
    }
  put_text (out, "mean_alpha_per_cm");
  put_text (out, "mean_alpha_u_per_cm");
  put_text (out, "dc_to_optical_550nm");
  put_text (out, "dc_to_optical_550nm_u");
  for (guint i = 0; i < wavelengths_nm->len; i++)
    {
      char nm[G_ASCII_DTOSTR_BUF_SIZE];

      g_ascii_formatd (nm, sizeof nm, "%.10g", g_array_index (wavelengths_nm, double, i));
      put_name (out, "alpha_%snm_per_cm", nm);
      put_name (out, "alpha_%snm_u_per_cm", nm);
      put_name (out, "alpha_%snm_low_per_cm", nm);
      put_name (out, "alpha_%snm_high_per_cm", nm);
      put_name (out, "absorbance_%snm", nm);
      put_name (out, "absorptance_%snm", nm);
    }
  put_text (out, "flags");
  g_string_append (out, "\r\n");
}

static void
put_reading (GString *out, BtFilm *film)
{
  BtSpectrum *spectrum = bt_film_get_spectrum (film);
  const char *file = bt_spectrum_get_file (spectrum);
  char *name = file != NULL ? g_filename_display_name (file) : g_strdup ("");
  gsize n;
  const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, &n);

  put_text (out, name);
  put_text (out, bt_spectrum_get_sha256 (spectrum));
  put_text (out, bt_film_get_label (film));
  put_text (out, bt_film_get_lot (film));
  put_number (out, (double) n);
  put_number (out, bt_nm_from_ev (energy_ev[n - 1]));
  put_number (out, bt_nm_from_ev (energy_ev[0]));
  put_number (out, bt_film_get_thickness_nm (film) > 0 ? bt_film_get_thickness_nm (film) : NAN);
  put_number (out, bt_film_get_thickness_nm (film) > 0 ? bt_film_get_thickness_u_nm (film) : NAN);
  g_free (name);
}

static void
put_result (GString *out, const BtTally *tally)
{
  const BtFraction *fraction = &tally->fraction;
  gboolean tailed = tally->n_tails > 0;

  put_number (out, fraction->value);
  put_number (out, fraction->u);
  put_number (out, fraction->low);
  put_number (out, fraction->high);
  put_number (out, fraction->level);
  put_text (out, fraction->bound == BT_BOUND_LOWER ? "lower" : fraction->bound == BT_BOUND_TWO_SIDED ? "two-sided" : NULL);
  put_number (out, tally->recipe->limit);
  put_text (out, bt_verdict_name (tally->verdict));
  put_number (out, tally->diameter.mean_nm);
  put_number (out, tally->diameter.spread_nm);
  put_text (out, tailed ? bt_tail_name (tally->tails[tally->best].kind) : NULL);
  put_number (out, tailed ? tally->tails[tally->best].weight : NAN);
  put_number (out, tally->tail_share_at_s22);
  for (int group = 0; group < BT_N_GROUPS; group++)
    {
      const BtGroupTally *sum = &tally->groups[group];

      put_number (out, sum->n_bands > 0 ? sum->area : NAN);
      put_number (out, sum->n_bands > 0 ? sum->area_u : NAN);
      put_number (out, sum->n_bands > 0 ? sum->centre_ev : NAN);
      put_number (out, sum->n_bands > 0 ? sum->fwhm_ev : NAN);
    }
}

static void
put_record (GString *out, BtFilm *film, const BtTally *tally, const GArray *wavelengths_nm)
{
  GString *codes = g_string_new (NULL);

  put_reading (out, film);
  put_result (out, tally);
  put_number (out, tally->mean_alpha.value);
  put_number (out, tally->mean_alpha.u);
  put_number (out, tally->conductor.ratio);
  put_number (out, tally->conductor.ratio_u);
  for (guint i = 0; i < wavelengths_nm->len; i++)
    {
      const BtReading *reading = reading_at (tally, g_array_index (wavelengths_nm, double, i));

      put_number (out, reading != NULL ? reading->alpha.value : NAN);
      put_number (out, reading != NULL ? reading->alpha.u : NAN);
      put_number (out, reading != NULL ? reading->alpha.low : NAN);
      put_number (out, reading != NULL ? reading->alpha.high : NAN);
      put_number (out, reading != NULL ? reading->absorbance : NAN);
      put_number (out, reading != NULL ? reading->absorptance : NAN);
    }
  for (guint i = 0; i < tally->flags->len; i++)
    g_string_append_printf (codes, "%s%s", i > 0 ? " " : "", ((const BtFlag *) g_ptr_array_index (tally->flags, i))->code);
  put_text (out, codes->str);
  g_string_append (out, "\r\n");
  g_string_free (codes, TRUE);
}

char *
bt_tallies_to_csv (GPtrArray *films, GPtrArray *tallies)
{
  GString *out = g_string_new (NULL);
  GArray *wavelengths_nm;

  g_return_val_if_fail (films->len == tallies->len, NULL);
  wavelengths_nm = all_wavelengths (tallies);
  put_header (out, wavelengths_nm);
  for (guint i = 0; i < films->len; i++)
    put_record (out, g_ptr_array_index (films, i), g_ptr_array_index (tallies, i), wavelengths_nm);
  g_array_unref (wavelengths_nm);
  return g_string_free (out, FALSE);
}
