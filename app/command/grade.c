/* bandtally-cli grade: films in; a table, JSON, CSV and a report out. */
#include <float.h>
#include <glib/gi18n.h>
#include <math.h>
#include <stdio.h>
#include <sys/stat.h>

#include "batch.h"

#define MOST_JOBS 256

/* As given. Strings are parsed by hand so that a wrong one is answered by a sentence that says what is wanted. */
typedef struct
{
  char **files;
  char *blank, *recipe, *json, *csv, *report;
  char *thickness_nm, *thickness_readings_nm, *thickness_u_nm, *diameter_nm, *diameter_spread_nm;
  char *strength_ratio, *strength_ratio_u, *limit, *level, *wavelengths_nm;
  char *light_path, *reflectance, *reflectance_u, *reflectance_file, *substrate, *substrate_index;
  char *sheet_resistance_ohm, *sheet_resistance_u_ohm;
  char *detector_changes_nm, *detector_correction, *photometric_u, *wavelength_u_nm, *stray_light;
  char *x_unit, *y_unit, *jobs, *paper;
} Options;

static void
options_clear (Options *options)
{
  char **strings[] = { &options->blank,
                       &options->recipe,
                       &options->json,
                       &options->csv,
                       &options->report,
                       &options->thickness_nm,
                       &options->thickness_readings_nm,
                       &options->thickness_u_nm,
                       &options->diameter_nm,
                       &options->diameter_spread_nm,
                       &options->strength_ratio,
                       &options->strength_ratio_u,
                       &options->limit,
                       &options->level,
                       &options->wavelengths_nm,
                       &options->x_unit,
                       &options->y_unit,
                       &options->jobs,
                       &options->paper,
                       &options->light_path,
                       &options->reflectance,
                       &options->substrate,
                       &options->substrate_index,
                       &options->reflectance_u,
                       &options->reflectance_file,
                       &options->sheet_resistance_ohm,
                       &options->sheet_resistance_u_ohm,
                       &options->detector_changes_nm,
                       &options->detector_correction,
                       &options->photometric_u,
                       &options->wavelength_u_nm,
                       &options->stray_light };

  for (gsize i = 0; i < G_N_ELEMENTS (strings); i++)
    g_clear_pointer (strings[i], g_free);
  g_clear_pointer (&options->files, g_strfreev);
}

static gboolean
parse_options (Options *options, int *argc, char ***argv, int *status)
{
  const GOptionEntry entries[] = {
    { "thickness-nm", 0, 0, G_OPTION_ARG_STRING, &options->thickness_nm,
      N_ ("thickness of the films; without it the files' own"), "X" },
    { "thickness-readings-nm", 0, 0, G_OPTION_ARG_STRING, &options->thickness_readings_nm,
      N_ ("readings across the film: their mean and its standard uncertainty are taken"), "X,X,…" },
    { "thickness-u-nm", 0, 0, G_OPTION_ARG_STRING, &options->thickness_u_nm, N_ ("its standard uncertainty"), "X" },
    { "blank", 0, 0, G_OPTION_ARG_FILENAME, &options->blank, N_ ("spectrum of the substrate alone, taken off every film"),
      "FILE" },
    { "substrate", 0, 0, G_OPTION_ARG_STRING, &options->substrate, N_ ("what the films lie on; without it the files' own"),
      N_ ("NAME") },
    { "light-path", 0, 0, G_OPTION_ARG_STRING, &options->light_path, N_ ("blank-ratio (default), reflection or thin-film"),
      N_ ("PATH") },
    { "reflectance", 0, 0, G_OPTION_ARG_STRING, &options->reflectance, N_ ("of one face, for the light path reflection"), "X" },
    { "reflectance-u", 0, 0, G_OPTION_ARG_STRING, &options->reflectance_u, N_ ("standard uncertainty of the reflectance"), "X" },
    { "reflectance-file", 0, 0, G_OPTION_ARG_FILENAME, &options->reflectance_file,
      N_ ("measured reflectance of film and substrate, for the light path reflection"), "FILE" },
    { "sheet-resistance-ohm", 0, 0, G_OPTION_ARG_STRING, &options->sheet_resistance_ohm,
      N_ ("dc sheet resistance, for the figures of a transparent conductor"), "X" },
    { "sheet-resistance-u-ohm", 0, 0, G_OPTION_ARG_STRING, &options->sheet_resistance_u_ohm, N_ ("its standard uncertainty"), "X" },
    { "detector-changes-nm", 0, 0, G_OPTION_ARG_STRING, &options->detector_changes_nm,
      N_ ("where the instrument changes detector: a step there is measured however small"), "X,X,…" },
    { "detector-correction", 0, 0, G_OPTION_ARG_STRING, &options->detector_correction,
      N_ ("side that is kept where a step is taken off: none (default), visible or infrared"), N_ ("SIDE") },
    { "photometric-u", 0, 0, G_OPTION_ARG_STRING, &options->photometric_u,
      N_ ("standard uncertainty of an absorbance from a check of the instrument"), "X" },
    { "wavelength-u-nm", 0, 0, G_OPTION_ARG_STRING, &options->wavelength_u_nm, N_ ("standard uncertainty of the wavelength scale"), "X" },
    { "stray-light", 0, 0, G_OPTION_ARG_STRING, &options->stray_light, N_ ("share of stray light, 0 to 0.5"), "X" },
    { "substrate-index", 0, 0, G_OPTION_ARG_STRING, &options->substrate_index,
      N_ ("refractive index of a substrate without a known one"), "X" },
    { "diameter-nm", 0, 0, G_OPTION_ARG_STRING, &options->diameter_nm, N_ ("mean diameter; without it proposed from the data"),
      "X" },
    { "diameter-spread-nm", 0, 0, G_OPTION_ARG_STRING, &options->diameter_spread_nm,
      N_ ("standard deviation of the diameters (0.1)"), "X" },
    { "strength-ratio", 0, 0, G_OPTION_ARG_STRING, &options->strength_ratio,
      N_ ("S22 area per carbon over M11 area per carbon"), "X" },
    { "strength-ratio-u", 0, 0, G_OPTION_ARG_STRING, &options->strength_ratio_u, N_ ("its standard uncertainty"), "X" },
    { "limit", 0, 0, G_OPTION_ARG_STRING, &options->limit, N_ ("least semiconducting fraction to be accepted, 0 to 1"), "X" },
    { "level", 0, 0, G_OPTION_ARG_STRING, &options->level, N_ ("confidence level of intervals (0.95)"), "X" },
    { "wavelengths-nm", 0, 0, G_OPTION_ARG_STRING, &options->wavelengths_nm, N_ ("wavelengths of interest (550,650,980,1550)"),
      "X,X,…" },
    { "recipe", 0, 0, G_OPTION_ARG_FILENAME, &options->recipe, N_ ("recipe; other options override what it says"), "FILE" },
    { "x-unit", 0, 0, G_OPTION_ARG_STRING, &options->x_unit, N_ ("unit of the first column: nm, um, 1/cm, eV"), N_ ("UNIT") },
    { "y-unit", 0, 0, G_OPTION_ARG_STRING, &options->y_unit, N_ ("what was read: absorbance, transmittance, transmittance%, …"),
      N_ ("UNIT") },
    { "json", 0, 0, G_OPTION_ARG_FILENAME, &options->json, N_ ("write everything as JSON; - is standard output"), "FILE" },
    { "csv", 0, 0, G_OPTION_ARG_FILENAME, &options->csv, N_ ("write one record a film; - is standard output"), "FILE" },
    { "report", 0, 0, G_OPTION_ARG_FILENAME, &options->report, N_ ("write a report of all films as PDF; - is standard output"),
      "FILE.pdf" },
    { "paper", 0, 0, G_OPTION_ARG_STRING, &options->paper, N_ ("paper of the report: a4 (default) or letter"), N_ ("PAPER") },
    { "jobs", 'j', 0, G_OPTION_ARG_STRING, &options->jobs, N_ ("films graded at the same time (as many as processors)"), "N" },
    { G_OPTION_REMAINING, 0, 0, G_OPTION_ARG_FILENAME_ARRAY, &options->files, NULL, NULL },
    { NULL },
  };

  return command_parse ("grade", _ ("FILE…"), _ ("Grades films from their spectra."), entries,
                        _ ("A readable table goes to standard output unless one of the outputs does.\n"
                           "Exit status: 0 all films graded, 1 some could not be, 2 wrong usage."),
                        argc, argv, status);
}

static gboolean
usage (GError **error, const char *sentence)
{
  g_set_error_literal (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, sentence);
  return FALSE;
}

static gboolean
same_file (const char *a, const char *b)
{
  struct stat one, other;

  if (a == NULL || b == NULL || is_standard_output (a) || is_standard_output (b))
    return FALSE;
  if (g_str_equal (a, b))
    return TRUE;
  return stat (a, &one) == 0 && stat (b, &other) == 0 && one.st_dev == other.st_dev && one.st_ino == other.st_ino
         && S_ISREG (one.st_mode);
}

/* Outputs must not meet each other, nor overwrite what was measured. */
static gboolean
check_outputs (const Options *options, GError **error)
{
  const char *outputs[] = { options->json, options->csv, options->report };
  int n_standard = 0;

  for (gsize i = 0; i < G_N_ELEMENTS (outputs); i++)
    {
      n_standard += is_standard_output (outputs[i]);
      for (gsize j = 0; j < i; j++)
        if (same_file (outputs[i], outputs[j]))
          return usage (error, _ ("--json, --csv and --report must name different files."));
      for (char **file = options->files; *file != NULL; file++)
        if (same_file (outputs[i], *file))
          {
            g_set_error (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED,
                         _ ("“%s” is to be graded and to be written; name another file for the output."), *file);
            return FALSE;
          }
      if (same_file (outputs[i], options->recipe) || same_file (outputs[i], options->blank) || same_file (outputs[i], options->reflectance_file))
        return usage (error, _ ("An output would overwrite the recipe, the blank or the reflectance; name another file for it."));
    }
  if (n_standard > 1)
    return usage (error, _ ("Only one of --json, --csv and --report can go to standard output."));
  return TRUE;
}

static gboolean
parse_recipe_numbers (const Options *options, BtRecipe *recipe, GError **error)
{
  const NumberOption numbers[] = {
    { "--diameter-nm", options->diameter_nm, &recipe->window.mean_nm, 0.4, 5, N_ ("a diameter from 0.4 to 5 (nm)") },
    { "--diameter-spread-nm", options->diameter_spread_nm, &recipe->window.spread_nm, 0.005, 2,
      N_ ("a number from 0.005 to 2 (nm)") },
    { "--strength-ratio", options->strength_ratio, &recipe->strength_ratio, 0.01, 100, N_ ("a number from 0.01 to 100") },
    { "--strength-ratio-u", options->strength_ratio_u, &recipe->strength_ratio_u, 0, 100, N_ ("a number from 0 to 100") },
    { "--reflectance", options->reflectance, &recipe->light_path.reflectance, 0, 0.9, N_ ("a reflectance from 0 to 0.9") },
    { "--reflectance-u", options->reflectance_u, &recipe->light_path.reflectance_u, 0, 0.5, N_ ("a number from 0 to 0.5") },
    { "--photometric-u", options->photometric_u, &recipe->photometric_u, 0, 1, N_ ("a number from 0 to 1") },
    { "--wavelength-u-nm", options->wavelength_u_nm, &recipe->wavelength_u_nm, 0, 50, N_ ("a number from 0 to 50 (nm)") },
    { "--stray-light", options->stray_light, &recipe->stray_light, 0, 0.499, N_ ("a share from 0 to 0.5 (0.0005 for 0.05 %)") },
    { "--substrate-index", options->substrate_index, &recipe->light_path.substrate_index, 1, 6, N_ ("an index from 1 to 6") },
    { "--limit", options->limit, &recipe->limit, 0, 1, N_ ("a share from 0 to 1 (0.9 for 90 %)") },
    { "--level", options->level, &recipe->level, 0.5, 0.9999, N_ ("a level from 0.5 to 0.9999 (0.95 for 95 %)") },
  };

  if (!parse_numbers (numbers, G_N_ELEMENTS (numbers), error))
    return FALSE;
  if (options->diameter_spread_nm != NULL && recipe->window.mean_nm <= 0)
    return usage (error, _ ("--diameter-spread-nm needs a mean diameter: give --diameter-nm too."));
  if (options->diameter_nm != NULL && recipe->window.spread_nm <= 0)
    recipe->window.spread_nm = 0.1;
  if (options->strength_ratio != NULL || options->strength_ratio_u != NULL)
    {
      g_free (recipe->strength_ratio_source);
      recipe->strength_ratio_source = g_strdup (_ ("stated on the command line"));
    }
  return TRUE;
}

static gboolean
parse_light_path (const char *text, BtRecipe *recipe, GError **error)
{
  char *name;
  gboolean known;

  if (text == NULL)
    return TRUE;
  /* "thin film" in files, "thin-film" where a blank would have to be quoted. */
  name = g_strdelimit (g_ascii_strdown (text, -1), "-", ' ');
  known = bt_light_path_from_name (name, &recipe->light_path.kind);
  g_free (name);
  return known || bad_value ("--light-path", _ ("blank-ratio, reflection or thin-film"), text, error);
}

/* Wavelengths that the user gives in place of the recipe's. */
static gboolean
replace_list (const char *option, const char *text, GArray **list, GError **error)
{
  GArray *wavelengths_nm;

  if (text == NULL)
    return TRUE;
  wavelengths_nm = parse_list (option, text, 100, 20000, _ ("wavelengths from 100 to 20000 (nm) between commas"), error);
  if (wavelengths_nm == NULL)
    return FALSE;
  g_array_unref (*list);
  *list = wavelengths_nm;
  return TRUE;
}

static gboolean
parse_detector (const Options *options, BtRecipe *recipe, GError **error)
{
  if (options->detector_correction != NULL && !bt_step_correction_from_name (options->detector_correction, &recipe->step_correction))
    return bad_value ("--detector-correction", _ ("none, visible or infrared"), options->detector_correction, error);
  return replace_list ("--detector-changes-nm", options->detector_changes_nm, &recipe->steps_nm, error);
}

/* (transfer full): the recipe of the file, or the default one, with the options' own values. */
static BtRecipe *
make_recipe (const Options *options, GError **error)
{
  BtRecipe *recipe = options->recipe != NULL ? bt_recipe_new_from_file (options->recipe, error) : bt_recipe_new ();

  if (recipe == NULL)
    return NULL;
  /* A measured reflectance is of use on one light path only. */
  if (options->reflectance_file != NULL)
    recipe->light_path.kind = BT_LIGHT_PATH_REFLECTION;
  if (!replace_list ("--wavelengths-nm", options->wavelengths_nm, &recipe->wavelengths_nm, error) || !parse_detector (options, recipe, error)
      || !parse_recipe_numbers (options, recipe, error) || !parse_light_path (options->light_path, recipe, error)
      || !bt_recipe_check (recipe, error))
    {
      bt_recipe_free (recipe);
      return NULL;
    }
  return recipe;
}

static gboolean
make_settings (const Options *options, BatchSettings *settings, GError **error)
{
  double jobs = g_get_num_processors (), thickness_nm = NAN;
  const NumberOption numbers[] = {
    { "--thickness-u-nm", options->thickness_u_nm, &settings->thickness_u_nm, 0, 1e9, N_ ("a number not below 0 (nm)") },
    { "--thickness-nm", options->thickness_nm, &thickness_nm, DBL_MIN, 1e9, N_ ("a number above 0 (nm)") },
    { "--sheet-resistance-ohm", options->sheet_resistance_ohm, &settings->sheet_resistance_ohm, DBL_MIN, 1e15, N_ ("a number above 0 (ohm)") },
    { "--sheet-resistance-u-ohm", options->sheet_resistance_u_ohm, &settings->sheet_resistance_u_ohm, 0, 1e15,
      N_ ("a number not below 0 (ohm)") },
    { "--jobs", options->jobs, &jobs, 1, MOST_JOBS, N_ ("a whole number from 1 to 256") },
  };

  settings->thickness_u_nm = settings->sheet_resistance_ohm = settings->sheet_resistance_u_ohm = NAN;
  settings->substrate = options->substrate;
  settings->reading = (BtReadOptions)BT_READ_OPTIONS_INIT;
  if (!parse_numbers (numbers, G_N_ELEMENTS (numbers), error)
      || !parse_units (options->x_unit, options->y_unit, &settings->reading, error))
    return FALSE;
  if (jobs != floor (jobs))
    return bad_value ("--jobs", _ ("a whole number from 1 to 256"), options->jobs, error);
  settings->jobs = (int)MIN (jobs, MOST_JOBS);
  if (!isnan (thickness_nm))
    {
      settings->thicknesses_nm = g_array_new (FALSE, FALSE, sizeof (double));
      g_array_append_val (settings->thicknesses_nm, thickness_nm);
    }
  if (options->thickness_readings_nm != NULL && options->thickness_nm != NULL)
    return usage (error, _ ("Give either --thickness-nm or --thickness-readings-nm, not both."));
  if (options->thickness_readings_nm != NULL)
    {
      settings->thicknesses_nm = parse_list ("--thickness-readings-nm", options->thickness_readings_nm, DBL_MIN, 1e9,
                                             _ ("thicknesses above 0 (nm) between commas"), error);
      if (settings->thicknesses_nm == NULL)
        return FALSE;
    }
  if (options->blank != NULL && (settings->blank = bt_spectrum_new_from_file (options->blank, error)) == NULL)
    return FALSE;
  return options->reflectance_file == NULL || (settings->reflectance = bt_reflectance_new_from_file (options->reflectance_file, error)) != NULL;
}

gboolean
parse_paper (const char *text, BtPaper *paper, GError **error)
{
  *paper = BT_PAPER_A4;
  if (text == NULL || g_ascii_strcasecmp (text, "a4") == 0)
    return TRUE;
  *paper = BT_PAPER_LETTER;
  return g_ascii_strcasecmp (text, "letter") == 0 || bad_value ("--paper", _ ("a4 or letter"), text, error);
}

/* Says what went wrong; takes @error. */
static gboolean
complain_error (GError *error)
{
  complain (error->message);
  g_error_free (error);
  return FALSE;
}

static gboolean
write_report (const char *path, const BatchResult *result, BtPaper paper)
{
  GError *error = NULL;
  BtReport *report;
  gboolean written;

  if (result->films->len == 0)
    {
      complain (_ ("No report was written: no film could be graded."));
      return FALSE;
    }
  report = bt_report_new (paper);
  for (guint i = 0; i < result->films->len; i++)
    bt_report_add (report, g_ptr_array_index (result->films, i), g_ptr_array_index (result->tallies, i));
  written = output_write_report (path, report, &error);
  bt_report_free (report);
  return written || complain_error (error);
}

static gboolean
write_text (const char *path, char *text)
{
  GError *error = NULL;
  gboolean written = output_write (path, text, -1, &error);

  g_free (text);
  return written || complain_error (error);
}

/* Whether an output can be written is asked before the grading, which may take a night: the user learns of it at once. */
static gboolean
check_place (char **path)
{
  GError *error = NULL;

  if (output_check (*path, &error))
    return TRUE;
  g_clear_pointer (path, g_free);
  return complain_error (error);
}

/* The table comes last: whoever reads it may stop reading (| head), and the files must be there by then. */
static gboolean
write_outputs (const Options *options, const BatchResult *result, BtPaper paper)
{
  gboolean written = TRUE;

  if (options->csv != NULL)
    written &= write_text (options->csv, bt_tallies_to_csv (result->films, result->tallies));
  if (options->json != NULL)
    written &= write_text (options->json, bt_tallies_to_json_with_failures (result->films, result->tallies, result->failures));
  if (options->report != NULL)
    written &= write_report (options->report, result, paper);
  if (!is_standard_output (options->csv) && !is_standard_output (options->json) && !is_standard_output (options->report))
    {
      char *text = bt_tallies_to_text (result->films, result->tallies, output_columns ());

      g_print ("%s", text);
      g_free (text);
      if (fflush (stdout) != 0 || ferror (stdout))
        {
          complain (_ ("The table could not be written to standard output."));
          written = FALSE;
        }
    }
  return written;
}

static int
grade (Options *options, const BatchSettings *settings, BtPaper paper)
{
  BatchResult result;
  gboolean complete;

  complete = check_place (&options->json) & check_place (&options->csv) & check_place (&options->report);
  batch_grade (options->files, settings, &result);
  complete &= write_outputs (options, &result, paper);
  complete &= result.failures->len == 0;
  batch_result_clear (&result);
  return complete ? STATUS_DONE : STATUS_SOME_FAILED;
}

int
grade_command (int argc, char **argv)
{
  Options options = { NULL };
  BatchSettings settings = { NULL };
  BtRecipe *recipe = NULL;
  BtPaper paper;
  GError *error = NULL;
  int status;

  if (!parse_options (&options, &argc, &argv, &status))
    {
      options_clear (&options);
      return status;
    }
  if (options.files == NULL)
    usage (&error, _ ("No film was named: give at least one file."));
  else if (check_outputs (&options, &error) && parse_paper (options.paper, &paper, &error))
    recipe = make_recipe (&options, &error);
  if (recipe != NULL && make_settings (&options, &settings, &error))
    {
      settings.recipe = recipe;
      status = grade (&options, &settings, paper);
    }
  else
    status = command_usage_error ("grade", error);
  g_clear_pointer (&recipe, bt_recipe_free);
  g_clear_object (&settings.blank);
  g_clear_object (&settings.reflectance);
  g_clear_pointer (&settings.thicknesses_nm, g_array_unref);
  options_clear (&options);
  return status;
}
