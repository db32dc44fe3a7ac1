/* bandtally-cli forecast: the spectrum that a given population of tubes would have. */
#include <float.h>
#include <glib/gi18n.h>
#include <math.h>

#include "command.h"

typedef struct
{
  char *film, *lot, *output, *tail, *range_nm, *seed;
  char *fraction, *diameter_nm, *diameter_spread_nm, *thickness_nm, *thickness_u_nm, *tail_height, *noise, *step_at_nm,
      *step_size, *bleach, *ceiling, *step_nm, *shift_mev, *strength_ratio, *scatter, *jitter_mev, *sideband, *lorentzian,
      *s22_absorbance;
} Options;

static void
options_clear (Options *options)
{
  /* Strings only. */
  char **strings = (char **) options;

  for (gsize i = 0; i < sizeof *options / sizeof *strings; i++)
    g_free (strings[i]);
}

static gboolean
parse_options (Options *options, int *argc, char ***argv, int *status)
{
#define STRING(name, field, text, argument)                                                                                    \
  {                                                                                                                            \
    name, 0, 0, G_OPTION_ARG_STRING, &options->field, text, argument                                                           \
  }
  const GOptionEntry entries[] = {
    STRING ("film", film, N_ ("what the film is called"), N_ ("NAME")),
    STRING ("lot", lot, N_ ("what the lot is called"), N_ ("NAME")),
    STRING ("fraction", fraction, N_ ("semiconducting share of the carbon, 0 to 1"), "X"),
    STRING ("diameter-nm", diameter_nm, N_ ("mean diameter"), "X"),
    STRING ("diameter-spread-nm", diameter_spread_nm, N_ ("standard deviation of the diameters"), "X"),
    STRING ("thickness-nm", thickness_nm, N_ ("thickness; the absorbance goes with it"), "X"),
    STRING ("thickness-u-nm", thickness_u_nm, N_ ("its standard uncertainty, stated in the file"), "X"),
    STRING ("s22-absorbance", s22_absorbance, N_ ("height of S22 for 100 nm of a wholly semiconducting film"), "X"),
    STRING ("strength-ratio", strength_ratio, N_ ("S22 area per carbon over M11 area per carbon"), "X"),
    STRING ("shift-mev", shift_mev, N_ ("red shift of the film, in meV"), "X"),
    STRING ("scatter", scatter, N_ ("relative scatter of the tubes' abundances"), "X"),
    STRING ("jitter-mev", jitter_mev, N_ ("scatter of the transition energies, in meV"), "X"),
    STRING ("sideband", sideband, N_ ("share of S11 and S22 in a phonon sideband, 0 to 1"), "X"),
    STRING ("lorentzian", lorentzian, N_ ("share of each line that is Lorentzian, 0 to 1"), "X"),
    STRING ("tail", tail, N_ ("plasmon, power or exponential"), N_ ("TAIL")),
    STRING ("tail-height", tail_height, N_ ("height of the tail, in absorbance"), "X"),
    STRING ("noise", noise, N_ ("standard deviation of the absorbance"), "X"),
    STRING ("step-at-nm", step_at_nm, N_ ("wavelength of a detector step"), "X"),
    STRING ("step-size", step_size, N_ ("its size, in absorbance"), "X"),
    STRING ("bleach", bleach, N_ ("share of S11 lost to doping, 0 to 1"), "X"),
    STRING ("ceiling", ceiling, N_ ("highest absorbance that the instrument can read"), "X"),
    STRING ("range-nm", range_nm, N_ ("wavelengths (300,2500)"), "LO,HI"),
    STRING ("step-nm", step_nm, N_ ("from point to point"), "X"),
    STRING ("seed", seed, N_ ("of the random numbers; the same seed gives the same file"), "N"),
    { "output", 'o', 0, G_OPTION_ARG_FILENAME, &options->output, N_ ("file to be written; - is standard output (default)"),
      "FILE" },
    { NULL },
  };
#undef STRING

  return command_parse ("forecast", NULL,
                        _ ("Writes the spectrum that a given population of tubes, a tail, noise and faults would have."),
                        entries, _ ("The data are invented, and the file says so."), argc, argv, status);
}

static gboolean
set_tail (const char *name, BtForecast *forecast, GError **error)
{
  BtTailKind kind;

  if (name == NULL)
    return TRUE;
  if (!bt_tail_from_name (name, &kind))
    return bad_value ("--tail", _ ("plasmon, power or exponential"), name, error);
  bt_forecast_set_tail (forecast, kind);
  return TRUE;
}

static gboolean
set_numbers (const Options *options, BtForecast *forecast, GError **error)
{
  double shift_mev = forecast->shift_ev * 1000, jitter_mev = forecast->jitter_ev * 1000;
  const char *share = N_ ("a share from 0 to 1");
  const char *above = N_ ("a number above 0");
  const char *not_below = N_ ("a number not below 0");
  const NumberOption numbers[] = {
    { "--fraction", options->fraction, &forecast->fraction, 0, 1, share },
    { "--diameter-nm", options->diameter_nm, &forecast->window.mean_nm, 0.4, 5, N_ ("a diameter from 0.4 to 5 (nm)") },
    { "--diameter-spread-nm", options->diameter_spread_nm, &forecast->window.spread_nm, 0.005, 2,
      N_ ("a number from 0.005 to 2 (nm)") },
    { "--thickness-nm", options->thickness_nm, &forecast->thickness_nm, DBL_MIN, 1e9, above },
    { "--thickness-u-nm", options->thickness_u_nm, &forecast->thickness_u_nm, 0, 1e9, not_below },
    { "--s22-absorbance", options->s22_absorbance, &forecast->s22_absorbance, 0, 100, not_below },
    { "--strength-ratio", options->strength_ratio, &forecast->strength_ratio, 0.01, 100, N_ ("a number from 0.01 to 100") },
    { "--shift-mev", options->shift_mev, &shift_mev, -500, 500, N_ ("a number from -500 to 500 (meV)") },
    { "--scatter", options->scatter, &forecast->abundance_scatter, 0, 10, not_below },
    { "--jitter-mev", options->jitter_mev, &jitter_mev, 0, 500, not_below },
    { "--sideband", options->sideband, &forecast->sideband, 0, 1, share },
    { "--lorentzian", options->lorentzian, &forecast->lorentzian, 0, 1, share },
    { "--tail-height", options->tail_height, &forecast->tail.height, 0, 100, not_below },
    { "--noise", options->noise, &forecast->noise, 0, 10, not_below },
    { "--step-at-nm", options->step_at_nm, &forecast->step_at_nm, 0, 1e5, not_below },
    { "--step-size", options->step_size, &forecast->step_size, -10, 10, N_ ("a number from -10 to 10") },
    { "--bleach", options->bleach, &forecast->bleach, 0, 1, share },
    { "--ceiling", options->ceiling, &forecast->ceiling, 0, 100, not_below },
    { "--step-nm", options->step_nm, &forecast->step_nm, 0.01, 1000, N_ ("a number from 0.01 to 1000 (nm)") },
  };

  if (!parse_numbers (numbers, G_N_ELEMENTS (numbers), error))
    return FALSE;
  forecast->shift_ev = shift_mev / 1000;
  forecast->jitter_ev = jitter_mev / 1000;
  return TRUE;
}

static gboolean
set_range_and_seed (const Options *options, BtForecast *forecast, GError **error)
{
  guint64 seed;

  if (options->range_nm != NULL)
    {
      const char *wanted = _ ("two wavelengths LO,HI from 100 to 100000 (nm), the lower first");

      if (!parse_pair ("--range-nm", options->range_nm, 100, 1e5, wanted, &forecast->low_nm, &forecast->high_nm, error))
        return FALSE;
      if (forecast->low_nm >= forecast->high_nm)
        return bad_value ("--range-nm", wanted, options->range_nm, error);
    }
  if (options->seed == NULL)
    return TRUE;
  if (!g_ascii_string_to_unsigned (options->seed, 10, 0, G_MAXUINT64, &seed, NULL))
    return bad_value ("--seed", _ ("a whole number not below 0"), options->seed, error);
  forecast->seed = seed;
  return TRUE;
}

int
forecast_command (int argc, char **argv)
{
  Options options = { NULL };
  BtForecast forecast;
  GError *error = NULL;
  char *text = NULL;
  int status;

  if (!parse_options (&options, &argc, &argv, &status))
    {
      options_clear (&options);
      return status;
    }
  bt_forecast_init (&forecast);
  if (argc > 1)
    g_set_error (&error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED,
                 _ ("“%s” is not an option; a file to be written is given by --output."), argv[1]);
  else if (set_tail (options.tail, &forecast, &error) && set_numbers (&options, &forecast, &error)
           && set_range_and_seed (&options, &forecast, &error))
    text = bt_forecast_to_text (&forecast, options.film, options.lot, &error);
  if (text == NULL)
    status = command_usage_error ("forecast", error);
  else if (output_write (options.output != NULL ? options.output : "-", text, -1, &error))
    status = STATUS_DONE;
  else
    {
      complain (error->message);
      g_error_free (error);
      status = STATUS_SOME_FAILED;
    }
  g_free (text);
  options_clear (&options);
  return status;
}
