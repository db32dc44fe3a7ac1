/* bandtally-cli energies: reference energies of a tube or of a range of diameters. */
#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

#include "command.h"

/* Tubes within this many spreads of the mean are listed. */
#define SPREADS 2

typedef struct
{
  char **tubes;
  char *diameter_nm, *diameter_spread_nm, *set, *shift_mev;
  gboolean csv, nm;
} Options;

/* A column of the list: a transition of one branch. */
typedef struct
{
  BtGroup group;
  int branch;
  const char *name;
} Transition;
static const Transition transitions[] = {
  { BT_S11, 0, "S11" }, { BT_S22, 0, "S22" },  { BT_S33, 0, "S33" }, { BT_S44, 0, "S44" },
  { BT_M11, 0, "M11" }, { BT_M11, 1, "M11+" }, { BT_M22, 0, "M22" }, { BT_M22, 1, "M22+" },
};

static void
options_clear (Options *options)
{
  g_clear_pointer (&options->tubes, g_strfreev);
  g_free (options->diameter_nm);
  g_free (options->diameter_spread_nm);
  g_free (options->set);
  g_free (options->shift_mev);
}

static gboolean
parse_options (Options *options, int *argc, char ***argv, int *status)
{
  const GOptionEntry entries[] = {
    { "tube", 0, 0, G_OPTION_ARG_STRING_ARRAY, &options->tubes, N_ ("a tube; may be given several times"), "N,M" },
    { "diameter-nm", 0, 0, G_OPTION_ARG_STRING, &options->diameter_nm, N_ ("mean of a diameter window"), "X" },
    { "diameter-spread-nm", 0, 0, G_OPTION_ARG_STRING, &options->diameter_spread_nm, N_ ("its standard deviation (0.1)"), "X" },
    { "set", 0, 0, G_OPTION_ARG_STRING, &options->set, N_ ("empirical (default), scaling or tight-binding"), N_ ("SET") },
    { "shift-mev", 0, 0, G_OPTION_ARG_STRING, &options->shift_mev, N_ ("red shift to be taken off (0), in meV"), "X" },
    { "nm", 0, 0, G_OPTION_ARG_NONE, &options->nm, N_ ("list wavelengths in nm instead of energies in eV"), NULL },
    { "csv", 0, 0, G_OPTION_ARG_NONE, &options->csv, N_ ("write comma-separated values"), NULL },
    { NULL },
  };

  return command_parse ("energies", NULL, _ ("Lists reference energies of single tubes, in eV."), entries,
                        _ ("A diameter window lists the tubes within two spreads of its mean. “+” marks the upper branch of "
                           "metallic tubes."),
                        argc, argv, status);
}

static gboolean
parse_set (const char *text, BtReferenceSet *set, GError **error)
{
  static const char *const names[] = { "empirical", "scaling", "tight-binding" };
  static const BtReferenceSet sets[] = { BT_REFERENCE_EMPIRICAL, BT_REFERENCE_SCALING, BT_REFERENCE_TIGHT_BINDING };

  for (gsize i = 0; i < G_N_ELEMENTS (names); i++)
    if (text == NULL || g_ascii_strcasecmp (text, names[i]) == 0)
      {
        *set = sets[i];
        return TRUE;
      }
  return bad_value ("--set", _ ("empirical, scaling or tight-binding"), text, error);
}

static gboolean
parse_tube (const char *text, BtTube *tube, GError **error)
{
  const char *wanted = _ ("two whole numbers N,M with N from 1 to 100 and M from 0 to N");
  double n, m;

  if (!parse_pair ("--tube", text, 0, 100, wanted, &n, &m, error))
    return FALSE;
  if (n != floor (n) || m != floor (m) || n < 1 || m > n)
    return bad_value ("--tube", wanted, text, error);
  *tube = (BtTube){ (int) n, (int) m };
  return TRUE;
}

/* (transfer full) (element-type BtTube): what was asked for. */
static GArray *
chosen_tubes (const Options *options, GError **error)
{
  double mean_nm = NAN, spread_nm = 0.1;
  const NumberOption numbers[] = {
    { "--diameter-nm", options->diameter_nm, &mean_nm, 0.4, 5, N_ ("a diameter from 0.4 to 5 (nm)") },
    { "--diameter-spread-nm", options->diameter_spread_nm, &spread_nm, 0.005, 2, N_ ("a number from 0.005 to 2 (nm)") },
  };
  GArray *tubes;

  if (!parse_numbers (numbers, G_N_ELEMENTS (numbers), error))
    return NULL;
  if (options->tubes == NULL && isnan (mean_nm))
    {
      g_set_error_literal (error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED,
                           _ ("Give a tube (--tube N,M) or a diameter (--diameter-nm X)."));
      return NULL;
    }
  if (!isnan (mean_nm))
    tubes = bt_tubes_in_diameter (mean_nm - SPREADS * spread_nm, mean_nm + SPREADS * spread_nm);
  else
    tubes = g_array_new (FALSE, FALSE, sizeof (BtTube));
  for (char **text = options->tubes; text != NULL && *text != NULL; text++)
    {
      BtTube tube;

      if (!parse_tube (*text, &tube, error))
        {
          g_array_unref (tubes);
          return NULL;
        }
      g_array_append_val (tubes, tube);
    }
  return tubes;
}

static const char *
kind_name (BtTubeKind kind)
{
  return kind == BT_TUBE_METALLIC ? "metallic" : kind == BT_TUBE_MOD1 ? "mod 1" : "mod 2";
}

static double
value_of (BtTube tube, const Transition *transition, BtReferenceSet set, double shift_ev, gboolean nm)
{
  double energy_ev = bt_tube_energy_ev (tube, transition->group, transition->branch, set) - shift_ev;

  return nm ? bt_nm_from_ev (energy_ev) : energy_ev;
}

/* Columns that no tube fills are left out of the text; the CSV always has all. */
static gboolean
is_filled (const GArray *tubes, const Transition *transition, BtReferenceSet set)
{
  for (guint i = 0; i < tubes->len; i++)
    if (!isnan (bt_tube_energy_ev (g_array_index (tubes, BtTube, i), transition->group, transition->branch, set)))
      return TRUE;
  return FALSE;
}

/* Takes the blanks off the end of a line and prints it. */
static void
print_line (GString *line)
{
  while (line->len > 0 && line->str[line->len - 1] == ' ')
    g_string_truncate (line, line->len - 1);
  g_print ("%s\n", line->str);
  g_string_truncate (line, 0);
}

static void
print_text (const GArray *tubes, BtReferenceSet set, double shift_ev, gboolean nm)
{
  GString *line = g_string_new (NULL);
  char *source = bt_wrap_text ("", bt_reference_set_source (set), output_columns ());

  g_print ("%s\n", source);
  g_free (source);
  g_string_append_printf (line, "%8s  %11s  %7s  %-8s  %4s", "(n,m)", _ ("diameter nm"), _ ("angle °"), _ ("kind"), "2n+m");
  for (gsize k = 0; k < G_N_ELEMENTS (transitions); k++)
    if (is_filled (tubes, &transitions[k], set))
      g_string_append_printf (line, "  %7s", transitions[k].name);
  print_line (line);
  for (guint i = 0; i < tubes->len; i++)
    {
      BtTube tube = g_array_index (tubes, BtTube, i);
      char *name = g_strdup_printf ("(%d,%d)", tube.n, tube.m);

      g_string_append_printf (line, "%8s  %11.4f  %7.2f  %-8s  %4d", name, bt_tube_diameter_nm (tube),
                              bt_tube_chiral_angle_deg (tube), kind_name (bt_tube_kind (tube)), bt_tube_family (tube));
      g_free (name);
      for (gsize k = 0; k < G_N_ELEMENTS (transitions); k++)
        if (is_filled (tubes, &transitions[k], set))
          {
            double value = value_of (tube, &transitions[k], set, shift_ev, nm);

            if (isnan (value))
              g_string_append_printf (line, "  %7s", "");
            else
              g_string_append_printf (line, "  %7.*f", nm ? 1 : 4, value);
          }
      print_line (line);
    }
  g_string_free (line, TRUE);
}

static void
print_csv (const GArray *tubes, BtReferenceSet set, double shift_ev, gboolean nm)
{
  g_print ("n,m,diameter_nm,angle_deg,kind,family");
  for (gsize k = 0; k < G_N_ELEMENTS (transitions); k++)
    g_print (",%s_%s", transitions[k].name, nm ? "nm" : "ev");
  g_print ("\r\n");
  for (guint i = 0; i < tubes->len; i++)
    {
      BtTube tube = g_array_index (tubes, BtTube, i);
      char a[G_ASCII_DTOSTR_BUF_SIZE], b[G_ASCII_DTOSTR_BUF_SIZE];

      g_print ("%d,%d,%s,%s,%s,%d", tube.n, tube.m, g_ascii_formatd (a, sizeof a, "%.6f", bt_tube_diameter_nm (tube)),
               g_ascii_formatd (b, sizeof b, "%.4f", bt_tube_chiral_angle_deg (tube)), kind_name (bt_tube_kind (tube)),
               bt_tube_family (tube));
      for (gsize k = 0; k < G_N_ELEMENTS (transitions); k++)
        {
          double value = value_of (tube, &transitions[k], set, shift_ev, nm);

          g_print (",%s", isnan (value) ? "" : g_ascii_formatd (a, sizeof a, nm ? "%.3f" : "%.6f", value));
        }
      g_print ("\r\n");
    }
}

int
energies_command (int argc, char **argv)
{
  Options options = { NULL };
  BtReferenceSet set = BT_REFERENCE_EMPIRICAL;
  double shift_mev = 0;
  GArray *tubes = NULL;
  GError *error = NULL;
  int status;

  if (!parse_options (&options, &argc, &argv, &status))
    {
      options_clear (&options);
      return status;
    }
  if (argc > 1)
    g_set_error (&error, G_OPTION_ERROR, G_OPTION_ERROR_FAILED, _ ("“%s” is not an option; tubes are given by --tube N,M."),
                 argv[1]);
  else
    {
      const NumberOption shift
          = { "--shift-mev", options.shift_mev, &shift_mev, -500, 500, N_ ("a number from -500 to 500 (meV)") };

      if (parse_set (options.set, &set, &error) && parse_numbers (&shift, 1, &error))
        tubes = chosen_tubes (&options, &error);
    }
  if (tubes == NULL)
    status = command_usage_error ("energies", error);
  else if (tubes->len == 0)
    {
      complain (_ ("No tube has a diameter in this window."));
      status = STATUS_SOME_FAILED;
    }
  else
    {
      (options.csv ? print_csv : print_text) (tubes, set, shift_mev / 1000, options.nm);
      status = STATUS_DONE;
    }
  g_clear_pointer (&tubes, g_array_unref);
  options_clear (&options);
  return status;
}
