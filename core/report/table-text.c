/* Tallies as text to read at a terminal. */
#include <glib/gi18n-lib.h>
#include <math.h>

#include <bandtally/bandtally.h>

#include "columns-private.h"

/* Films named with a flag before the rest are counted. */
#define MOST_FILMS_NAMED 6

static char *
per_cent (double share)
{
  return g_strdup_printf ("%.1f %%", share * 100);
}

static char *
fraction_text (const BtFraction *fraction)
{
  char *low, *text;

  switch (fraction->bound)
    {
    case BT_BOUND_TWO_SIDED:
      return g_strdup_printf ("%.1f ± %.1f %%", fraction->value * 100, fraction->u * 100);
    case BT_BOUND_LOWER:
      low = per_cent (fraction->low);
      text = g_strdup_printf (_ ("at least %s"), low);
      g_free (low);
      return text;
    case BT_BOUND_NONE:
      return g_strdup ("-");
    default:
      g_return_val_if_reached (NULL);
    }
}

static char *
interval_text (const BtFraction *fraction)
{
  char *low, *high, *text;

  if (fraction->bound == BT_BOUND_NONE)
    return g_strdup ("-");
  low = g_strdup_printf ("%.1f", fraction->low * 100);
  high = per_cent (fraction->bound == BT_BOUND_LOWER ? 1 : fraction->high);
  text = g_strdup_printf (_ ("%s to %s"), low, high);
  g_free (low);
  g_free (high);
  return text;
}

static char *
diameter_text (const BtTally *tally)
{
  if (isnan (tally->diameter.mean_nm))
    return g_strdup ("-");
  return g_strdup_printf ("%.2f ± %.2f", tally->diameter.mean_nm, tally->diameter.spread_nm);
}

static char *
wavelength_text (double wavelength_nm)
{
  return g_strdup_printf ("%.6g", wavelength_nm);
}

/* (transfer full): the film's file, as a whole or its last part. */
static char *
file_name (BtFilm *film, gboolean whole)
{
  const char *file = bt_spectrum_get_file (bt_film_get_spectrum (film));

  if (file == NULL)
    return g_strdup (bt_film_get_label (film) != NULL ? bt_film_get_label (film) : "");
  return whole ? g_filename_display_name (file) : g_filename_display_basename (file);
}

/* Where a file holds several films, each goes by its label too. */
static void
tell_apart (char **names, GPtrArray *films, GHashTable *counts)
{
  for (guint i = 0; i < films->len; i++)
    {
      const char *label = bt_film_get_label (g_ptr_array_index (films, i));
      char *name = names[i];

      if (GPOINTER_TO_UINT (g_hash_table_lookup (counts, name)) > 1 && label != NULL && label[0] != '\0'
          && !g_str_equal (label, name))
        {
          names[i] = g_strdup_printf ("%s: %s", name, label);
          g_free (name);
        }
    }
}

/* What films are called in a list: the last part of the file's name, or the whole where two files would be called the same. */
static char **
film_names (GPtrArray *films)
{
  GHashTable *files = g_hash_table_new_full (g_str_hash, g_str_equal, g_free, g_free);
  GHashTable *counts = g_hash_table_new_full (g_str_hash, g_str_equal, g_free, NULL);
  char **names = g_new0 (char *, films->len + 1);
  gboolean whole = FALSE;

  for (guint i = 0; i < films->len; i++)
    {
      char *base = file_name (g_ptr_array_index (films, i), FALSE), *all = file_name (g_ptr_array_index (films, i), TRUE);
      const char *before = g_hash_table_lookup (files, base);

      whole |= before != NULL && !g_str_equal (before, all);
      g_hash_table_replace (files, base, all);
    }
  for (guint i = 0; i < films->len; i++)
    {
      guint count;

      names[i] = file_name (g_ptr_array_index (films, i), whole);
      count = GPOINTER_TO_UINT (g_hash_table_lookup (counts, names[i]));
      g_hash_table_replace (counts, g_strdup (names[i]), GUINT_TO_POINTER (count + 1));
    }
  tell_apart (names, films, counts);
  g_hash_table_unref (counts);
  g_hash_table_unref (files);
  return names;
}

static void
append_heading (GString *out, const char *heading)
{
  g_string_append_printf (out, "\n%s\n", heading);
}

static void
append_groups (GString *out, BtFilm *film, const BtTally *tally)
{
  gboolean alpha = bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM;
  BtColumns *columns = bt_columns_new (6);

  for (guint i = 2; i < 6; i++)
    bt_columns_set_right (columns, i, TRUE);
  bt_columns_take (columns, g_strdup (_ ("Group")));
  bt_columns_take (columns, g_strdup (_ ("Bands")));
  bt_columns_take (columns, g_strdup (_ ("Centre eV")));
  bt_columns_take (columns, g_strdup (_ ("Centre nm")));
  bt_columns_take (columns, g_strdup (_ ("FWHM eV")));
  bt_columns_take (columns, g_strdup (alpha ? _ ("Area, eV/cm (decadic)") : _ ("Area, absorbance eV")));
  bt_columns_set_right (columns, 1, TRUE);
  for (int group = 0; group < BT_N_GROUPS; group++)
    {
      const BtGroupTally *sum = &tally->groups[group];

      if (sum->n_bands == 0)
        continue;
      bt_columns_take (columns, g_strdup (bt_group_name ((BtGroup) group)));
      bt_columns_take (columns, g_strdup_printf ("%u", sum->n_bands));
      bt_columns_take (columns, bt_format_uncertain (sum->centre_ev, sum->centre_u_ev));
      bt_columns_take (columns, bt_format_number (bt_nm_from_ev (sum->centre_ev), 4, TRUE));
      bt_columns_take (columns, bt_format_uncertain (sum->fwhm_ev, sum->fwhm_u_ev));
      bt_columns_take (columns, bt_format_uncertain (sum->area, sum->area_u));
    }
  append_heading (out, _ ("Bands, summed by group"));
  bt_columns_append (columns, 6, 2, out);
  bt_columns_free (columns);
}

static void
append_tails (GString *out, const BtTally *tally)
{
  const gboolean two = tally->models[BT_MODEL_ENSEMBLE].weight > 0;
  const guint n = two ? 5 : 3;
  BtColumns *columns = bt_columns_new (n);

  for (guint c = 1; c < n; c++)
    bt_columns_set_right (columns, c, TRUE);
  bt_columns_take (columns, g_strdup (_ ("Tail")));
  bt_columns_take (columns, g_strdup (two ? _ ("Groups: weight") : _ ("Weight")));
  bt_columns_take (columns, g_strdup (_ ("Fraction")));
  if (two)
    {
      bt_columns_take (columns, g_strdup (_ ("Ensemble: weight")));
      bt_columns_take (columns, g_strdup (_ ("Fraction")));
    }
  for (guint i = 0; i < tally->n_tails; i++)
    {
      const BtTailTally *tail = &tally->tails[i], *ensemble = &tally->ensembles[i];

      bt_columns_take (columns, g_strdup (bt_tail_title (tail->kind)));
      bt_columns_take (columns, g_strdup_printf ("%.3f", tail->weight));
      bt_columns_take (columns, bt_format_uncertain (tail->fraction, tail->fraction_u));
      if (two)
        {
          bt_columns_take (columns, g_strdup_printf ("%.3f", ensemble->weight));
          bt_columns_take (columns, bt_format_uncertain (ensemble->fraction, ensemble->fraction_u));
        }
    }
  if (two)
    {
      bt_columns_take (columns, g_strdup (_ ("the model's own weight")));
      for (guint m = 0; m < BT_N_MODELS; m++)
        {
          bt_columns_take (columns, g_strdup_printf ("%.3f", tally->models[m].weight));
          bt_columns_take (columns, bt_format_uncertain (tally->models[m].fraction, tally->models[m].fraction_u));
        }
    }
  append_heading (out, two ? _ ("Models and tails") : _ ("Tails"));
  bt_columns_append (columns, n, 2, out);
  bt_columns_free (columns);
  if (!isnan (tally->tail_share_at_s22))
    {
      char *share = per_cent (tally->tail_share_at_s22);
      char *line = g_strdup_printf (_ ("At S22 the tail is %s of the absorbance."), share);

      g_string_append_printf (out, "  %s\n", line);
      g_free (line);
      g_free (share);
    }
}

/* How well each model follows the film, and the population that the ensemble sees. */
static void
append_models (GString *out, const BtTally *tally)
{
  const BtModelTally *groups = &tally->models[BT_MODEL_GROUPS], *ensemble = &tally->models[BT_MODEL_ENSEMBLE];
  char *mean;

  if (!(ensemble->weight > 0))
    return;
  g_string_append (out, "  ");
  g_string_append_printf (out, _ ("Residual: %.3g times the noise by groups of bands, %.3g times by the ensemble."), groups->misfit, ensemble->misfit);
  mean = bt_format_uncertain (ensemble->diameter.mean_nm, ensemble->diameter_u_nm);
  g_string_append (out, "\n  ");
  g_string_append_printf (out, _ ("The ensemble's diameters: mean %s nm, spread %.3f nm."), mean, ensemble->diameter.spread_nm);
  g_string_append_c (out, '\n');
  g_free (mean);
}

static void
append_budget (GString *out, const BtTally *tally)
{
  BtColumns *columns;

  if (tally->budget->len == 0)
    return;
  columns = bt_columns_new (2);
  bt_columns_set_right (columns, 1, TRUE);
  for (guint i = 0; i < tally->budget->len; i++)
    {
      const BtBudgetLine *line = &g_array_index (tally->budget, BtBudgetLine, i);

      bt_columns_take (columns, g_strdup (line->title));
      bt_columns_take (columns, g_strdup_printf ("%.4f", line->u));
    }
  append_heading (out, _ ("Where the fraction's standard uncertainty comes from"));
  bt_columns_append (columns, 2, 2, out);
  bt_columns_free (columns);
}

static void
append_mean_alpha (GString *out, const BtTally *tally)
{
  char *low, *high, *alpha, *line;

  if (isnan (tally->mean_alpha.value))
    return;
  low = wavelength_text (bt_nm_from_ev (tally->mean_range.high_ev));
  high = wavelength_text (bt_nm_from_ev (tally->mean_range.low_ev));
  alpha = bt_format_uncertain (tally->mean_alpha.value, tally->mean_alpha.u);
  line = g_strdup_printf (_ ("Mean absorption coefficient from %s to %s nm: %s 1/cm"), low, high, alpha);
  g_string_append_printf (out, "  %s\n", line);
  g_free (line);
  g_free (alpha);
  g_free (high);
  g_free (low);
}

/* Where each absorption coefficient's uncertainty comes from, and what the draws make of it. */
static void
append_alpha (GString *out, const BtTally *tally)
{
  BtColumns *columns = bt_columns_new (3);
  guint n = 0;

  bt_columns_set_right (columns, 0, TRUE);
  bt_columns_set_right (columns, 1, TRUE);
  bt_columns_take (columns, g_strdup (_ ("Wavelength nm")));
  bt_columns_take (columns, g_strdup_printf (_ ("%.4g %% interval 1/cm"), 100 * tally->recipe->level));
  bt_columns_take (columns, g_strdup (_ ("Standard uncertainty from")));
  for (guint i = 0; i < tally->readings->len; i++)
    {
      const BtReading *reading = &g_array_index (tally->readings, BtReading, i);
      char *interval;

      if (isnan (reading->alpha.value))
        continue;
      interval = bt_alpha_interval_text (&reading->alpha);
      bt_columns_take (columns, wavelength_text (reading->wavelength_nm));
      bt_columns_take (columns, interval != NULL ? interval : g_strdup ("-"));
      bt_columns_take (columns, bt_alpha_parts_text (&reading->alpha));
      n++;
    }
  if (n > 0)
    {
      append_heading (out, _ ("Where the absorption coefficient's uncertainty comes from (interval by Monte Carlo)"));
      bt_columns_append (columns, 3, 2, out);
    }
  bt_columns_free (columns);
}

/* What a thin conducting film is besides. */
static void
append_sheet (GString *out, const BtTally *tally)
{
  char *conductor = bt_conductor_text (&tally->conductor);

  for (guint i = 0; i < tally->readings->len; i++)
    {
      const BtReading *reading = &g_array_index (tally->readings, BtReading, i);
      char *sheet = bt_sheet_text (reading);

      if (sheet == NULL)
        continue;
      /* Translators: a wavelength and the sheet conductance there. */
      g_string_append_printf (out, "  ");
      g_string_append_printf (out, _ ("Sheet conductance at %.6g nm: %s"), reading->wavelength_nm, sheet);
      g_string_append_c (out, '\n');
      g_free (sheet);
    }
  if (conductor != NULL)
    g_string_append_printf (out, "  %s\n", conductor);
  g_free (conductor);
}

static void
append_readings (GString *out, const BtTally *tally, int width)
{
  BtColumns *columns;

  if (tally->readings->len == 0)
    return;
  columns = bt_columns_new (4);
  for (guint i = 0; i < 4; i++)
    bt_columns_set_right (columns, i, TRUE);
  bt_columns_take (columns, g_strdup (_ ("Wavelength nm")));
  bt_columns_take (columns, g_strdup (_ ("Absorption coefficient 1/cm")));
  bt_columns_take (columns, g_strdup (_ ("Absorbance")));
  bt_columns_take (columns, g_strdup (_ ("Absorptance")));
  for (guint i = 0; i < tally->readings->len; i++)
    {
      const BtReading *reading = &g_array_index (tally->readings, BtReading, i);

      bt_columns_take (columns, wavelength_text (reading->wavelength_nm));
      bt_columns_take (columns, bt_format_uncertain (reading->alpha.value, reading->alpha.u));
      bt_columns_take (columns, bt_format_uncertain (reading->absorbance, reading->absorbance_u));
      bt_columns_take (columns, bt_format_uncertain (reading->absorptance, reading->absorptance_u));
    }
  append_heading (out, _ ("Light taken up"));
  bt_columns_append (columns, 4, 2, out);
  bt_columns_free (columns);
  append_mean_alpha (out, tally);
  append_sheet (out, tally);
  if (tally->curve != NULL && tally->curve->alpha != NULL)
    {
      char *wrapped = bt_wrap_text ("  ", tally->curve->alpha, width);

      g_string_append (out, wrapped);
      g_free (wrapped);
    }
  append_alpha (out, tally);
}

static void
append_flags (GString *out, const BtTally *tally, int width)
{
  if (tally->flags->len == 0)
    return;
  append_heading (out, _ ("Flags"));
  for (guint i = 0; i < tally->flags->len; i++)
    bt_text_append_wrapped (out, "  - ", ((const BtFlag *) g_ptr_array_index (tally->flags, i))->text, width);
}

/* One film: its whole account. */
static void
append_account (GString *out, BtFilm *film, const BtTally *tally, int width)
{
  BtSpectrum *spectrum = bt_film_get_spectrum (film);
  const char *file = bt_spectrum_get_file (spectrum);
  char *name = file != NULL ? g_filename_display_name (file) : g_strdup ("");
  char *answer = bt_tally_answer (tally);
  char *diameter = diameter_text (tally);

  g_string_append_printf (out, "%s\n", name);
  bt_text_append_wrapped (out, "  ", bt_spectrum_get_reading (spectrum), width);
  if (tally->curve != NULL && tally->curve->path != NULL)
    bt_text_append_wrapped (out, "  ", tally->curve->path, width);
  g_string_append_c (out, '\n');
  bt_text_append_wrapped (out, "  ", answer, width);
  g_string_append_printf (out, "  %s: %s\n", _ ("Verdict"), bt_verdict_title (tally->verdict));
  if (tally->decision_rule != NULL)
    bt_text_append_wrapped (out, "  ", tally->decision_rule, width);
  g_string_append_printf (out, "  %s: %s\n", _ ("Diameters, nm (mean ± spread)"), diameter);
  append_groups (out, film, tally);
  append_tails (out, tally);
  append_models (out, tally);
  append_budget (out, tally);
  append_readings (out, tally, width);
  append_flags (out, tally, width);
  g_free (diameter);
  g_free (answer);
  g_free (name);
}

static guint
most_readings (GPtrArray *tallies)
{
  guint most = 0;

  for (guint i = 0; i < tallies->len; i++)
    most = MAX (most, ((const BtTally *) g_ptr_array_index (tallies, i))->readings->len);
  return MIN (most, BT_COLUMNS_MAX - 6);
}

/* Whether some film has an absorption coefficient; else the absorbance is shown. */
static gboolean
any_alpha (GPtrArray *tallies)
{
  for (guint i = 0; i < tallies->len; i++)
    {
      const BtTally *tally = g_ptr_array_index (tallies, i);

      for (guint j = 0; j < tally->readings->len; j++)
        if (!isnan (g_array_index (tally->readings, BtReading, j).alpha.value))
          return TRUE;
    }
  return FALSE;
}

static void
take_header (BtColumns *columns, const BtTally *first, guint n_readings, gboolean alpha)
{
  bt_columns_take (columns, g_strdup (_ ("Film")));
  bt_columns_take (columns, g_strdup (_ ("Semiconducting")));
  bt_columns_take (columns, g_strdup_printf (_ ("%.4g %% interval"), first->recipe->level * 100));
  bt_columns_take (columns, g_strdup (_ ("Verdict")));
  bt_columns_take (columns, g_strdup (_ ("Flags")));
  bt_columns_take (columns, g_strdup (_ ("Diameters nm")));
  for (guint i = 0; i < n_readings; i++)
    {
      char *wavelength = i < first->readings->len
                             ? wavelength_text (g_array_index (first->readings, BtReading, i).wavelength_nm)
                             : g_strdup ("");

      /* Translators: absorption coefficient, or absorbance, at a wavelength, as a column's head. */
      bt_columns_take (columns, g_strdup_printf (alpha ? _ ("1/cm at %s nm") : _ ("A at %s nm"), wavelength));
      g_free (wavelength);
    }
  for (guint i = 1; i < columns->n_columns; i++)
    bt_columns_set_right (columns, i, i != 3);
}

static void
take_line (BtColumns *columns, const char *name, const BtTally *tally, guint n_readings, gboolean alpha)
{
  bt_columns_take (columns, g_strdup (name));
  bt_columns_take (columns, fraction_text (&tally->fraction));
  bt_columns_take (columns, interval_text (&tally->fraction));
  bt_columns_take (columns, g_strdup (bt_verdict_title (tally->verdict)));
  bt_columns_take (columns, tally->flags->len > 0 ? g_strdup_printf ("%u", tally->flags->len) : g_strdup (""));
  bt_columns_take (columns, diameter_text (tally));
  for (guint i = 0; i < n_readings; i++)
    if (i < tally->readings->len)
      {
        const BtReading *reading = &g_array_index (tally->readings, BtReading, i);

        bt_columns_take (columns, alpha ? bt_format_uncertain (reading->alpha.value, reading->alpha.u)
                                        : bt_format_uncertain (reading->absorbance, reading->absorbance_u));
      }
    else
      bt_columns_take (columns, NULL);
}

/* A kind of flag, the films that bear it, and whether it says the same of all of them. */
typedef struct
{
  const BtFlag *first;
  GArray *films;
  gboolean same;
} FlagLine;

static void
flag_line_free (FlagLine *line)
{
  g_array_unref (line->films);
  g_free (line);
}

/* (element-type FlagLine) */
static GPtrArray *
gather_flags (GPtrArray *tallies)
{
  GPtrArray *lines = g_ptr_array_new_with_free_func ((GDestroyNotify) flag_line_free);
  GHashTable *index = g_hash_table_new (g_str_hash, g_str_equal);

  for (guint i = 0; i < tallies->len; i++)
    {
      const BtTally *tally = g_ptr_array_index (tallies, i);

      for (guint j = 0; j < tally->flags->len; j++)
        {
          const BtFlag *flag = g_ptr_array_index (tally->flags, j);
          FlagLine *line = g_hash_table_lookup (index, flag->code);

          if (line == NULL)
            {
              line = g_new (FlagLine, 1);
              *line = (FlagLine){ flag, g_array_new (FALSE, FALSE, sizeof (guint)), TRUE };
              g_hash_table_insert (index, flag->code, line);
              g_ptr_array_add (lines, line);
            }
          line->same &= g_str_equal (line->first->text, flag->text);
          g_array_append_val (line->films, i);
        }
    }
  g_hash_table_unref (index);
  return lines;
}

static char *
name_films (const GArray *films, char **names, guint n_all)
{
  GString *text;

  if (films->len == n_all)
    return g_strdup (_ ("All films"));
  text = g_string_new (NULL);
  for (guint i = 0; i < MIN (films->len, MOST_FILMS_NAMED); i++)
    g_string_append_printf (text, "%s%s", i > 0 ? ", " : "", names[g_array_index (films, guint, i)]);
  if (films->len > MOST_FILMS_NAMED)
    g_string_append_printf (text, ngettext (" and %u more", " and %u more", films->len - MOST_FILMS_NAMED),
                            films->len - MOST_FILMS_NAMED);
  return g_string_free (text, FALSE);
}

static void
append_all_flags (GString *out, GPtrArray *tallies, char **names, int width)
{
  GPtrArray *lines = gather_flags (tallies);

  if (lines->len > 0)
    append_heading (out, _ ("Flags"));
  for (guint i = 0; i < lines->len; i++)
    {
      const FlagLine *line = g_ptr_array_index (lines, i);
      char *films = name_films (line->films, names, tallies->len);
      /* Translators: the films that bear a flag, and the flag's sentence. */
      char *text = line->same ? g_strdup_printf (_ ("%s: %s"), films, line->first->text)
                              : g_strdup_printf (_ ("%s; for %s: %s"), films, names[g_array_index (line->films, guint, 0)],
                                                 line->first->text);

      bt_text_append_wrapped (out, "  - ", text, width);
      g_free (text);
      g_free (films);
    }
  g_ptr_array_unref (lines);
}

static void
append_list (GString *out, GPtrArray *films, GPtrArray *tallies, int width)
{
  char **names = film_names (films);
  guint n_readings = most_readings (tallies);
  BtColumns *columns = bt_columns_new (6 + n_readings);
  guint shown = columns->n_columns;
  gboolean alpha = any_alpha (tallies);

  take_header (columns, g_ptr_array_index (tallies, 0), n_readings, alpha);
  for (guint i = 0; i < films->len; i++)
    take_line (columns, names[i], g_ptr_array_index (tallies, i), n_readings, alpha);
  /* The last columns are left out where the terminal is too narrow; the first five are always there. */
  while (width > 0 && shown > 5 && bt_columns_width (columns, shown) > width)
    shown--;
  bt_columns_append (columns, shown, 0, out);
  append_all_flags (out, tallies, names, width);
  bt_columns_free (columns);
  g_strfreev (names);
}

char *
bt_tallies_to_text (GPtrArray *films, GPtrArray *tallies, int columns)
{
  GString *out = g_string_new (NULL);

  g_return_val_if_fail (films->len == tallies->len, NULL);
  if (films->len == 1)
    append_account (out, g_ptr_array_index (films, 0), g_ptr_array_index (tallies, 0), columns);
  else if (films->len > 1)
    append_list (out, films, tallies, columns);
  return g_string_free (out, FALSE);
}
