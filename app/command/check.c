/* bandtally-cli check-instrument: published standards against what an instrument read. */
#include <glib/gi18n.h>
#include <string.h>

#include "command.h"

typedef struct
{
  char **files;
  char *standard, *concentration, *x_unit, *y_unit, *output, *pdf, *paper, *recipe, *write_recipe;
} Options;

static void
options_clear (Options *options)
{
  g_strfreev (options->files);
  g_free (options->standard);
  g_free (options->concentration);
  g_free (options->x_unit);
  g_free (options->y_unit);
  g_free (options->output);
  g_free (options->pdf);
  g_free (options->paper);
  g_free (options->recipe);
  g_free (options->write_recipe);
}

static gboolean
parse_options (Options *options, int *argc, char ***argv, int *status)
{
  const GOptionEntry entries[] = {
    { "standard", 0, 0, G_OPTION_ARG_STRING, &options->standard,
      N_ ("holmium (holmium oxide in perchloric acid, default) or dichromate (potassium dichromate)"), N_ ("STANDARD") },
    { "concentration-mg-l", 0, 0, G_OPTION_ARG_STRING, &options->concentration, N_ ("of dichromate: 20, 40, 60 (default), 80 or 100"), "X" },
    { "x-unit", 0, 0, G_OPTION_ARG_STRING, &options->x_unit, N_ ("unit of the first column: nm, um, 1/cm, eV"), N_ ("UNIT") },
    { "y-unit", 0, 0, G_OPTION_ARG_STRING, &options->y_unit, N_ ("what was read: absorbance, transmittance, transmittance%, …"), N_ ("UNIT") },
    { "output", 'o', 0, G_OPTION_ARG_FILENAME, &options->output, N_ ("file to be written; - is standard output (default)"), "FILE" },
    { "pdf", 0, 0, G_OPTION_ARG_FILENAME, &options->pdf, N_ ("write the result as a page to be signed"), "FILE" },
    { "paper", 0, 0, G_OPTION_ARG_STRING, &options->paper, N_ ("paper of the page: a4 (default) or letter"), N_ ("PAPER") },
    { "write-recipe", 0, 0, G_OPTION_ARG_FILENAME, &options->write_recipe,
      N_ ("write a recipe that carries the uncertainty found, of wavelengths or of absorbances"), "FILE" },
    { "recipe", 'r', 0, G_OPTION_ARG_FILENAME, &options->recipe, N_ ("recipe that --write-recipe starts from; the default recipe where it is left out"), "FILE" },
    { G_OPTION_REMAINING, 0, 0, G_OPTION_ARG_FILENAME_ARRAY, &options->files, NULL, NULL },
    { NULL },
  };

  return command_parse ("check-instrument", _ ("FILE"), _ ("Compares the scan of a standard with its published wavelengths or absorbances."), entries,
                        _ ("Exit status: 0 within the published tolerances, 1 outside or not read, 2 wrong usage."), argc, argv, status);
}

typedef struct
{
  BtStandard standard;
  double concentration_mg_l;
  BtReadOptions reading;
  BtPaper paper;
} Settings;

static gboolean
write_page (const char *path, BtPaper paper, const BtInstrumentCheck *check, BtSpectrum *spectrum, GError **error)
{
  BtReport *report = bt_report_new (paper);
  gboolean written;

  bt_report_add_check (report, check, spectrum);
  written = output_write_report (path, report, error);
  bt_report_free (report);
  return written;
}

static gboolean
write_recipe (const char *path, BtRecipe *recipe, const BtInstrumentCheck *check, GError **error)
{
  g_autofree char *text = NULL;

  if (!bt_recipe_take_check (recipe, check))
    {
      g_set_error (error, G_IO_ERROR, G_IO_ERROR_FAILED, _ ("%s: not written, for nothing of the standard was found; check its name and the range of the scan."),
                   path);
      return FALSE;
    }
  text = bt_recipe_to_json (recipe);
  return output_write (path, text, -1, error);
}

/* The page and the recipe, where they were asked for. */
static gboolean
write_more (const Options *options, const Settings *settings, const BtInstrumentCheck *check, BtSpectrum *spectrum, BtRecipe *recipe, GError **error)
{
  if (options->pdf != NULL && !write_page (options->pdf, settings->paper, check, spectrum, error))
    return FALSE;
  return recipe == NULL || write_recipe (options->write_recipe, recipe, check, error);
}

/* Reads, checks and writes; the error names the file. */
static int
check_file (const Options *options, const Settings *settings, BtRecipe *recipe, GError **error)
{
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_file (options->files[0], &settings->reading, error);
  BtSpectrum *spectrum;
  BtInstrumentCheck *check;
  g_autofree char *text = NULL;
  int status;

  if (spectra == NULL)
    return STATUS_SOME_FAILED;
  spectrum = g_ptr_array_index (spectra, 0);
  check = bt_instrument_check (spectrum, settings->standard, settings->concentration_mg_l, error);
  if (check == NULL)
    {
      g_prefix_error (error, "%s: ", options->files[0]);
      return STATUS_SOME_FAILED;
    }
  text = bt_instrument_check_to_text (check, spectrum, g_get_real_time () / G_USEC_PER_SEC);
  status = check->state == BT_CHECK_PASSED ? STATUS_DONE : STATUS_SOME_FAILED;
  if (!output_write (options->output != NULL ? options->output : "-", text, -1, error)
      || !write_more (options, settings, check, spectrum, recipe, error))
    status = STATUS_SOME_FAILED;
  bt_instrument_check_free (check);
  return status;
}

static gboolean
parse_standard (const Options *options, BtStandard *standard, double *concentration_mg_l, GError **error)
{
  const NumberOption numbers[] = { { "--concentration-mg-l", options->concentration, concentration_mg_l, 1, 1000, N_ ("20, 40, 60, 80 or 100") } };

  *standard = BT_STANDARD_HOLMIUM;
  *concentration_mg_l = 60;
  if (options->standard != NULL && g_str_equal (options->standard, "dichromate"))
    *standard = BT_STANDARD_DICHROMATE;
  else if (options->standard != NULL && !g_str_equal (options->standard, "holmium"))
    return bad_value ("--standard", _ ("holmium or dichromate"), options->standard, error);
  if (options->files == NULL || options->files[1] != NULL)
    {
      g_set_error_literal (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, _ ("Name one file: the scan of the standard."));
      return FALSE;
    }
  return parse_numbers (numbers, G_N_ELEMENTS (numbers), error);
}

/* The recipe to be written, as it is before; NULL without an error where none was asked for. */
static BtRecipe *
start_recipe (const Options *options, GError **error)
{
  if (options->write_recipe == NULL)
    {
      if (options->recipe != NULL)
        g_set_error_literal (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, _ ("--recipe is what --write-recipe starts from: name the file to be written too."));
      return NULL;
    }
  return options->recipe != NULL ? bt_recipe_new_from_file (options->recipe, error) : bt_recipe_new ();
}

static gboolean
parse_settings (const Options *options, Settings *settings, GError **error)
{
  return parse_standard (options, &settings->standard, &settings->concentration_mg_l, error)
         && parse_units (options->x_unit, options->y_unit, &settings->reading, error) && parse_paper (options->paper, &settings->paper, error)
         && output_check (options->output, error) && output_check (options->pdf, error) && output_check (options->write_recipe, error);
}

int
check_command (int argc, char **argv)
{
  Options options = { 0 };
  Settings settings = { .reading = BT_READ_OPTIONS_INIT };
  GError *error = NULL;
  int status;

  if (parse_options (&options, &argc, &argv, &status))
    {
      BtRecipe *recipe = NULL;

      if (parse_settings (&options, &settings, &error))
        recipe = start_recipe (&options, &error);
      if (error != NULL)
        status = command_usage_error ("check-instrument", error);
      else
        {
          status = check_file (&options, &settings, recipe, &error);
          if (error != NULL)
            {
              complain (error->message);
              g_error_free (error);
            }
        }
      if (recipe != NULL)
        bt_recipe_free (recipe);
    }
  options_clear (&options);
  return status;
}
