/* bandtally-cli: grades films at the command line. */
#include <glib/gi18n.h>
#include <stdio.h>
#include <string.h>

#include "../locale.h"
#include "command.h"

typedef struct
{
  const char *name;
  const char *summary;
  int (*run) (int argc, char **argv);
} Command;

static const Command commands[] = {
  { "grade", N_ ("grade films: fraction, uncertainty, verdict; as a table, JSON, CSV or a report"), grade_command },
  { "inspect", N_ ("say what was read from files, and what is odd about it"), inspect_command },
  { "energies", N_ ("list reference energies of a tube or of a range of diameters"), energies_command },
  { "forecast", N_ ("write the spectrum that a given population of tubes would have"), forecast_command },
  { "check-instrument", N_ ("compare an instrument with published standards of wavelength or absorbance"), check_command },
};

static void
print_help (FILE *stream)
{
  GString *text = g_string_new (NULL);

  g_string_append_printf (text, "%s\n  bandtally-cli %s\n\n", _ ("Usage:"), _ ("COMMAND [OPTION…] …"));
  g_string_append_printf (text, "%s\n\n%s\n",
                          _ ("Grades films of single-walled carbon nanotubes from their UV-Vis-NIR spectra."), _ ("Commands:"));
  for (gsize i = 0; i < G_N_ELEMENTS (commands); i++)
    g_string_append_printf (text, "  %-18s %s\n", commands[i].name, _ (commands[i].summary));
  g_string_append_printf (text, "\n%s\n  %-18s %s\n  %-18s %s\n\n%s\n", _ ("Options:"), "--help",
                          _ ("show this, or the help of a command"), "--version", _ ("show the version"),
                          _ ("“bandtally-cli COMMAND --help” lists the options of a command."));
  if (stream == stdout)
    g_print ("%s", text->str);
  else
    g_printerr ("%s", text->str);
  g_string_free (text, TRUE);
}

static const Command *
find_command (const char *name)
{
  for (gsize i = 0; i < G_N_ELEMENTS (commands); i++)
    if (g_str_equal (name, commands[i].name))
      return &commands[i];
  return NULL;
}

static gboolean
is_one_of (const char *text, const char *a, const char *b)
{
  return g_str_equal (text, a) || g_str_equal (text, b);
}

int
main (int argc, char **argv)
{
  const Command *command;

  app_init_locale ();
  g_set_prgname ("bandtally-cli");
  if (argc < 2)
    {
      print_help (stderr);
      return STATUS_USAGE;
    }
  if (is_one_of (argv[1], "--version", "-V"))
    {
      g_print ("bandtally-cli %s\n", bt_version ());
      return STATUS_DONE;
    }
  if (is_one_of (argv[1], "--help", "-h") || (g_str_equal (argv[1], "help") && argc == 2))
    {
      print_help (stdout);
      return STATUS_DONE;
    }
  command = find_command (argv[1]);
  if (command == NULL)
    {
      char *sentence = g_strdup_printf (_ ("There is no command “%s”; “bandtally-cli --help” lists the commands."), argv[1]);

      complain (sentence);
      g_free (sentence);
      return STATUS_USAGE;
    }
  memmove (argv + 1, argv + 2, (size_t) (argc - 1) * sizeof *argv);
  return command->run (argc - 1, argv);
}
