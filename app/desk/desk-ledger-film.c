/* The ledger's sections on the film, its light path, and what it reads at the wavelengths of interest. */
#include <glib/gi18n.h>
#include <math.h>

#include "desk-ledger.h"
#include "desk-text.h"

static void
text_field (DeskSection *section, DeskFieldId id, const char *text)
{
  DeskLine *line = desk_section_field (section, (DeskField){ .id = id });
  desk_line_set_value (line, "%s", text && *text ? text : _("add"));
}

void
desk_ledger_fill_film (DeskSection *section, const DeskAccount *account)
{
  BtSpectrum *spectrum = bt_film_get_spectrum (account->film);
  const char *file = bt_spectrum_get_file (spectrum);
  const char *sha256 = bt_spectrum_get_sha256 (spectrum);
  text_field (section, DESK_FIELD_LABEL, bt_film_get_label (account->film));
  text_field (section, DESK_FIELD_LOT, bt_film_get_lot (account->film));
  text_field (section, DESK_FIELD_NOTES, bt_film_get_notes (account->film));
  if (file)
    {
      g_autofree char *base = g_path_get_basename (file);
      DeskLine *line = desk_section_line (section, _("File"), "file");
      desk_line_set_value (line, "%s", base);
      desk_line_set_detail (line, bt_spectrum_get_reading (spectrum));
      gtk_widget_set_tooltip_text (GTK_WIDGET (line), file);
    }
  if (sha256)
    {
      DeskLine *line = desk_section_line (section, _("SHA-256"), "sha256");
      desk_line_set_value (line, "%.12s…", sha256);
      gtk_widget_set_tooltip_text (GTK_WIDGET (line), sha256);
    }
}

/* A spectrum that belongs to the film, chosen from a file. */
static void
fill_spectrum (DeskSection *section, const char *name, const char *key, BtSpectrum *spectrum, const char *set_action, const char *remove_name,
               const char *remove_action)
{
  DeskLine *line = desk_section_line (section, name, "%s", key);
  const char *file = spectrum ? bt_spectrum_get_file (spectrum) : NULL;
  g_autofree char *base = file ? g_path_get_basename (file) : NULL;
  desk_line_set_action (line, set_action);
  desk_line_set_value (line, "%s", base ? base : spectrum ? bt_spectrum_get_title (spectrum) : _("choose a file…"));
  desk_line_set_side (line, spectrum ? "edit-clear-symbolic" : NULL, remove_name, remove_action);
}

/* A number whose absence is 0. */
static void
fill_number (DeskSection *section, DeskFieldId id, double value, double factor, const char *unit)
{
  DeskLine *line = desk_section_field (section, (DeskField){ .id = id });
  if (value > 0)
    desk_line_set_value (line, "%.4g%s", value * factor, unit);
  else
    desk_line_set_value (line, "%s", _("add"));
}

static const char *
light_path_title (BtLightPathKind kind)
{
  switch (kind)
    {
    case BT_LIGHT_PATH_BLANK_RATIO:
      return _("against the blank");
    case BT_LIGHT_PATH_REFLECTION:
      return _("reflection of a slab taken off");
    case BT_LIGHT_PATH_THIN_FILM:
    case BT_N_LIGHT_PATHS:
      break;
    }
  return _("thin conducting film");
}

static void
fill_light_path (DeskSection *section, BtFilm *film, const BtRecipe *recipe)
{
  g_autoptr (GMenu) choices = g_menu_new ();
  for (BtLightPathKind kind = 0; kind < BT_N_LIGHT_PATHS; kind++)
    {
      g_autoptr (GMenuItem) item = g_menu_item_new (light_path_title (kind), NULL);
      g_menu_item_set_action_and_target (item, "win.light-path", "s", bt_light_path_name (kind));
      g_menu_append_item (choices, item);
    }
  DeskLine *line = desk_section_line (section, _("Taken"), "light path");
  desk_line_set_choices (line, G_MENU_MODEL (choices));
  desk_line_set_value (line, "%s", light_path_title (recipe->light_path.kind));
  if (recipe->light_path.kind == BT_LIGHT_PATH_BLANK_RATIO)
    return;
  line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_SUBSTRATE_INDEX });
  if (recipe->light_path.substrate_index > 0)
    desk_line_set_value (line, "%g", recipe->light_path.substrate_index);
  else
    desk_line_set_value (line, "%s", _("published"));
  if (recipe->light_path.kind != BT_LIGHT_PATH_REFLECTION)
    return;
  fill_spectrum (section, _("Measured reflectance"), "reflectance", bt_film_get_reflectance (film), "win.set-reflectance",
                 _("Take the reflectance without a measurement"), "win.remove-reflectance");
  if (!bt_film_get_reflectance (film))
    {
      line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_REFLECTANCE });
      if (isnan (recipe->light_path.reflectance))
        desk_line_set_value (line, "%s", _("from the index"));
      else
        desk_line_set_value (line, "%g", recipe->light_path.reflectance);
    }
  fill_number (section, DESK_FIELD_REFLECTANCE_U, recipe->light_path.reflectance_u, 1, "");
}

static const char *
step_correction_title (BtStepCorrection correction)
{
  switch (correction)
    {
    case BT_STEP_TO_VISIBLE:
      return _("taken off, visible side kept");
    case BT_STEP_TO_INFRARED:
      return _("taken off, infrared side kept");
    case BT_STEP_LEFT:
    case BT_N_STEP_CORRECTIONS:
      break;
    }
  return _("left as they are");
}

/* What is known of the instrument. */
static void
fill_instrument (DeskSection *section, const BtRecipe *recipe)
{
  GString *list = g_string_new (NULL);
  g_autoptr (GMenu) choices = g_menu_new ();
  desk_section_subheading (section, _("Instrument"));
  DeskLine *line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_MAX_ABSORBANCE });
  desk_line_set_value (line, "%g", recipe->max_absorbance);
  for (guint i = 0; i < recipe->steps_nm->len; i++)
    g_string_append_printf (list, "%s%g", i ? "; " : "", g_array_index (recipe->steps_nm, double, i));
  line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_STEPS });
  desk_line_set_value (line, list->len ? "%s\u00a0nm" : "%s", list->len ? list->str : _("as found"));
  g_string_free (list, TRUE);
  for (BtStepCorrection correction = 0; correction < BT_N_STEP_CORRECTIONS; correction++)
    {
      g_autoptr (GMenuItem) item = g_menu_item_new (step_correction_title (correction), NULL);
      g_menu_item_set_action_and_target (item, "win.step-correction", "s", bt_step_correction_name (correction));
      g_menu_append_item (choices, item);
    }
  line = desk_section_line (section, _("Detector steps"), "step correction");
  desk_line_set_choices (line, G_MENU_MODEL (choices));
  desk_line_set_value (line, "%s", step_correction_title (recipe->step_correction));
  fill_number (section, DESK_FIELD_PHOTOMETRIC_U, recipe->photometric_u, 1, "");
  fill_number (section, DESK_FIELD_WAVELENGTH_U, recipe->wavelength_u_nm, 1, "\u00a0nm");
  fill_number (section, DESK_FIELD_STRAY_LIGHT, recipe->stray_light, 100, "\u00a0%");
}

void
desk_ledger_fill_path (DeskSection *section, const DeskAccount *account)
{
  double thickness = bt_film_get_thickness_nm (account->film);
  g_autofree char *readings = NULL;
  gsize n;
  DeskLine *line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_THICKNESS });
  if (thickness > 0)
    desk_line_set_value (line, "%.5g\u00a0nm", thickness);
  else
    desk_line_set_value (line, "%s", _("add"));
  bt_film_get_thickness_readings (account->film, &n);
  if (n > 1)
    readings = g_strdup_printf (_("mean of %u readings, standard uncertainty s/√n"), (guint) n);
  desk_line_set_detail (line, thickness > 0 ? readings : _("Without it there is no absorption coefficient."));
  fill_number (section, DESK_FIELD_THICKNESS_U, bt_film_get_thickness_u_nm (account->film), 1, "\u00a0nm");
  fill_number (section, DESK_FIELD_SHEET_RESISTANCE, bt_film_get_sheet_resistance_ohm (account->film), 1, "\u00a0Ω");
  if (bt_film_get_sheet_resistance_ohm (account->film) > 0)
    fill_number (section, DESK_FIELD_SHEET_RESISTANCE_U, bt_film_get_sheet_resistance_u_ohm (account->film), 1, "\u00a0Ω");
  text_field (section, DESK_FIELD_SUBSTRATE, bt_film_get_substrate (account->film));
  fill_spectrum (section, _("Blank"), "blank", bt_film_get_blank (account->film), "win.set-blank", _("Measure without the blank"), "win.remove-blank");
  fill_light_path (section, account->film, account->recipe);
  if (account->tally && account->tally->curve && account->tally->curve->path)
    desk_section_sentence (section, NULL, account->tally->curve->path);
  fill_instrument (section, account->recipe);
}

/* (nullable): the interval that was drawn, where the uncertainty comes from, and the sheet conductance. */
static char *
reasoning_text (const BtReading *reading, double level)
{
  g_autofree char *interval = bt_alpha_interval_text (&reading->alpha), *sheet = bt_sheet_text (reading);
  g_autofree char *parts = isnan (reading->alpha.value) ? NULL : bt_alpha_parts_text (&reading->alpha);
  GString *text = g_string_new (NULL);
  if (interval)
    g_string_append_printf (text, _("%.4g %% interval %s cm⁻¹"), 100 * level, interval);
  if (parts && *parts)
    {
      g_string_append (text, text->len ? "; " : "");
      g_string_append_printf (text, _("uncertainty from %s"), parts);
    }
  if (sheet)
    {
      g_string_append (text, text->len ? "; " : "");
      g_string_append_printf (text, _("sheet conductance %s"), sheet);
    }
  return g_string_free (text, text->len == 0);
}

static void
fill_reading (DeskSection *section, guint i, const BtReading *reading, double level)
{
  g_autofree char *name = g_strdup_printf (_("%g nm"), reading->wavelength_nm);
  g_autofree char *alpha = desk_text_uncertain (reading->alpha.value, reading->alpha.u, "cm⁻¹");
  g_autofree char *absorbance = desk_text_uncertain (reading->absorbance, reading->absorbance_u, NULL);
  g_autofree char *absorptance = desk_text_percent (reading->absorptance, 1);
  DeskLine *line = desk_section_line (section, name, "reading %u", i);
  if (isnan (reading->absorbance))
    {
      desk_line_set_value (line, "%s", _("out of range"));
      desk_line_set_detail (line, NULL);
      return;
    }
  g_autofree char *detail = isnan (reading->alpha.value)
                                ? g_strdup_printf (_("absorptance %s"), absorptance)
                                : g_strdup_printf (_("absorbance %s, absorptance %s"), absorbance, absorptance);
  g_autofree char *more = reasoning_text (reading, level);
  if (more)
    {
      char *both = g_strconcat (detail, "; ", more, NULL);
      g_free (detail);
      detail = both;
    }
  desk_line_set_value (line, "%s", isnan (reading->alpha.value) ? absorbance : alpha);
  desk_line_set_detail (line, detail);
}

void
desk_ledger_fill_readings (DeskSection *section, const DeskAccount *account)
{
  const BtRecipe *recipe = account->recipe;
  const BtTally *tally = account->tally;
  gboolean has_alpha = bt_film_get_thickness_nm (account->film) > 0;
  desk_section_subheading (section, has_alpha ? _("Absorption coefficient, base e") : _("Absorbance"));
  for (guint i = 0; tally && i < tally->readings->len; i++)
    fill_reading (section, i, &g_array_index (tally->readings, BtReading, i), recipe->level);

  GString *list = g_string_new (NULL);
  for (guint i = 0; i < recipe->wavelengths_nm->len; i++)
    g_string_append_printf (list, "%s%g", i ? "; " : "", g_array_index (recipe->wavelengths_nm, double, i));
  DeskLine *line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_WAVELENGTHS });
  desk_line_set_value (line, list->len ? "%s\u00a0nm" : "%s", list->len ? list->str : _("add"));
  g_string_free (list, TRUE);

  if (tally)
    {
      g_autofree char *mean = desk_text_uncertain (tally->mean_alpha.value, tally->mean_alpha.u, "cm⁻¹");
      line = desk_section_line (section, _("Mean absorption coefficient"), "mean");
      desk_line_set_value (line, "%s", has_alpha ? mean : _("needs the thickness"));
      g_autofree char *covered = NULL;
      if (!isnan (tally->mean_alpha.value))
        covered = g_strdup_printf (_("over %.0f to %.0f nm, as far as the data go"), bt_nm_from_ev (tally->mean_range.high_ev),
                                   bt_nm_from_ev (tally->mean_range.low_ev));
      desk_line_set_detail (line, covered);
      if (has_alpha && tally->curve && tally->curve->alpha)
        desk_section_sentence (section, NULL, tally->curve->alpha);
      g_autofree char *conductor = bt_conductor_text (&tally->conductor);
      if (conductor)
        desk_section_sentence (section, NULL, conductor);
    }
  line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_MEAN_LOW });
  desk_line_set_value (line, "%g\u00a0nm", recipe->mean_low_nm);
  line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_MEAN_HIGH });
  desk_line_set_value (line, "%g\u00a0nm", recipe->mean_high_nm);
}
