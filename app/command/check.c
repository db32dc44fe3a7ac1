/* bandtally-cli check-instrument: published standards against what an instrument read. */
#include <glib/gi18n.h>
#include <string.h>

#include "command.h"

typedef struct
{
  char **files;
  char *standard, *concentration, *x_unit, *y_unit, *output;
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
    { G_OPTION_REMAINING, 0, 0, G_OPTION_ARG_FILENAME_ARRAY, &options->files, NULL, NULL },
    { NULL },
  };

  return command_parse ("check-instrument", _ ("FILE"), _ ("Compares the scan of a standard with its published wavelengths or absorbances."), entries,
                        _ ("Exit status: 0 within the published tolerances, 1 outside or not read, 2 wrong usage."), argc, argv, status);
}

/* Reads, checks and writes; the error names the file. */
static int
check_file (const Options *options, BtStandard standard, double concentration_mg_l, const BtReadOptions *reading, GError **error)
{
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_file (options->files[0], reading, error);
  BtInstrumentCheck *check;
  g_autofree char *text = NULL;
  int status;

  if (spectra == NULL)
    return STATUS_SOME_FAILED;
  check = bt_instrument_check (g_ptr_array_index (spectra, 0), standard, concentration_mg_l, error);
  if (check == NULL)
    {
      g_prefix_error (error, "%s: ", options->files[0]);
      return STATUS_SOME_FAILED;
    }
  text = bt_instrument_check_to_text (check, g_ptr_array_index (spectra, 0), g_get_real_time () / G_USEC_PER_SEC);
  status = check->state == BT_CHECK_PASSED ? STATUS_DONE : STATUS_SOME_FAILED;
  bt_instrument_check_free (check);
  if (!output_write (options->output != NULL ? options->output : "-", text, -1, error))
    return STATUS_SOME_FAILED;
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

int
check_command (int argc, char **argv)
{
  Options options = { 0 };
  BtReadOptions reading = BT_READ_OPTIONS_INIT;
  BtStandard standard;
  double concentration_mg_l;
  GError *error = NULL;
  int status;

  if (parse_options (&options, &argc, &argv, &status))
    {
      if (!parse_standard (&options, &standard, &concentration_mg_l, &error)
          || !parse_units (options.x_unit, options.y_unit, &reading, &error))
        status = command_usage_error ("check-instrument", error);
      else
        {
          status = check_file (&options, standard, concentration_mg_l, &reading, &error);
          if (error != NULL)
            {
              complain (error->message);
              g_error_free (error);
            }
        }
    }
  options_clear (&options);
  return status;
}
