/* Reading of options, and what is said when they are wrong. */
#include <glib/gi18n.h>
#include <math.h>

#include "command.h"

void
complain (const char *sentence)
{
  g_printerr ("bandtally-cli: %s\n", sentence);
}

int
command_usage_error (const char *name, GError *error)
{
  complain (error->message);
  g_printerr (_ ("“bandtally-cli %s --help” lists the options."), name);
  g_printerr ("\n");
  g_error_free (error);
  return STATUS_USAGE;
}

gboolean
command_parse (const char *name, const char *parameters, const char *summary, const GOptionEntry *entries, const char *more,
               int *argc, char ***argv, int *status)
{
  gboolean version = FALSE;
  const GOptionEntry common[] = {
    { "version", 'V', 0, G_OPTION_ARG_NONE, &version, N_ ("show the version"), NULL },
    { NULL },
  };
  char *program = g_strdup_printf ("bandtally-cli %s", name);
  GOptionContext *context = g_option_context_new (parameters);
  GError *error = NULL;
  gboolean parsed;

  g_set_prgname (program);
  g_option_context_set_summary (context, summary);
  g_option_context_set_description (context, more);
  g_option_context_add_main_entries (context, entries, GETTEXT_PACKAGE);
  g_option_context_add_main_entries (context, common, GETTEXT_PACKAGE);
  parsed = g_option_context_parse (context, argc, argv, &error);
  g_set_prgname ("bandtally-cli");
  g_option_context_free (context);
  g_free (program);
  if (!parsed)
    {
      *status = command_usage_error (name, error);
      return FALSE;
    }
  if (version)
    {
      g_print ("bandtally-cli %s\n", bt_version ());
      *status = STATUS_DONE;
      return FALSE;
    }
  return TRUE;
}

gboolean
bad_value (const char *option, const char *wanted, const char *text, GError **error)
{
  g_set_error (error, G_OPTION_ERROR, G_OPTION_ERROR_BAD_VALUE,
               /* Translators: an option's name, what it wants, what it was given. */
               _ ("%s wants %s, not “%s”."), option, wanted, text);
  return FALSE;
}

/* Numbers are written with a point whatever the locale: a command line must mean the same everywhere. */
static gboolean
read_number (const char *text, double low, double high, double *value)
{
  char *end;
  double read;

  if (text[0] == '\0' || g_ascii_isspace (text[0]))
    return FALSE;
  read = g_ascii_strtod (text, &end);
  if (*end != '\0' || !isfinite (read) || read < low || read > high)
    return FALSE;
  *value = read;
  return TRUE;
}

gboolean
parse_numbers (const NumberOption *options, gsize n, GError **error)
{
  for (gsize i = 0; i < n; i++)
    if (options[i].text != NULL && !read_number (options[i].text, options[i].low, options[i].high, options[i].value))
      return bad_value (options[i].option, _ (options[i].wanted), options[i].text, error);
  return TRUE;
}

GArray *
parse_list (const char *option, const char *text, double low, double high, const char *wanted, GError **error)
{
  GArray *values = g_array_new (FALSE, FALSE, sizeof (double));
  char **parts = g_strsplit (text, ",", -1);
  gboolean valid = parts[0] != NULL;

  for (char **part = parts; *part != NULL && valid; part++)
    {
      double value;

      valid = read_number (g_strstrip (*part), low, high, &value);
      if (valid)
        g_array_append_val (values, value);
    }
  g_strfreev (parts);
  if (valid)
    return values;
  g_array_unref (values);
  bad_value (option, wanted, text, error);
  return NULL;
}

gboolean
parse_pair (const char *option, const char *text, double low, double high, const char *wanted, double *first, double *second,
            GError **error)
{
  GArray *values = parse_list (option, text, low, high, wanted, error);

  if (values == NULL)
    return FALSE;
  if (values->len != 2)
    {
      g_array_unref (values);
      return bad_value (option, wanted, text, error);
    }
  *first = g_array_index (values, double, 0);
  *second = g_array_index (values, double, 1);
  g_array_unref (values);
  return TRUE;
}

/* Whether two names are the same but for case and spaces: "transmittance %" need not be quoted. */
static gboolean
same_name (const char *a, const char *b)
{
  for (;; a++, b++)
    {
      while (*a == ' ')
        a++;
      while (*b == ' ')
        b++;
      if (g_ascii_tolower (*a) != g_ascii_tolower (*b))
        return FALSE;
      if (*a == '\0')
        return TRUE;
    }
}

gboolean
parse_units (const char *x_unit, const char *y_unit, BtReadOptions *options, GError **error)
{
  static const BtXUnit x_units[] = { BT_X_NM, BT_X_UM, BT_X_PER_CM, BT_X_EV };
  static const BtYUnit y_units[] = { BT_Y_ABSORBANCE,  BT_Y_TRANSMITTANCE,       BT_Y_TRANSMITTANCE_PERCENT,
                                     BT_Y_REFLECTANCE, BT_Y_REFLECTANCE_PERCENT, BT_Y_ALPHA_PER_CM };

  for (gsize i = 0; x_unit != NULL && i < G_N_ELEMENTS (x_units); i++)
    if (same_name (x_unit, bt_x_unit_name (x_units[i])))
      options->x_unit = (int) x_units[i];
  if (x_unit != NULL && options->x_unit < 0)
    return bad_value ("--x-unit", _ ("nm, um, 1/cm or eV"), x_unit, error);
  for (gsize i = 0; y_unit != NULL && i < G_N_ELEMENTS (y_units); i++)
    if (same_name (y_unit, bt_y_unit_name (y_units[i])))
      options->y_unit = (int) y_units[i];
  if (y_unit != NULL && options->y_unit < 0)
    return bad_value ("--y-unit", _ ("absorbance, transmittance, transmittance%, reflectance, reflectance% or “alpha 1/cm”"),
                      y_unit, error);
  return TRUE;
}
