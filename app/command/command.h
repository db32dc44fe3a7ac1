/* What the commands of bandtally-cli share. */
#ifndef BANDTALLY_COMMAND_H
#define BANDTALLY_COMMAND_H

#include <bandtally/bandtally.h>
#include <gio/gio.h>

G_BEGIN_DECLS

/* Exit statuses: all done; some file could not be; wrong usage. */
enum
{
  STATUS_DONE = 0,
  STATUS_SOME_FAILED = 1,
  STATUS_USAGE = 2
};

/* One function a command; argv[0] is the program's name, the command's own name taken out. Return an exit status. */
int grade_command (int argc, char **argv);
int inspect_command (int argc, char **argv);
int energies_command (int argc, char **argv);
int forecast_command (int argc, char **argv);
int check_command (int argc, char **argv);

/**
 * command_parse:
 * @name: of the command
 * @parameters: what follows the options, for the usage line
 * @summary: translated sentence
 * @entries: options
 * @more: (nullable): translated, below the options
 * @status: (out): exit status where %FALSE is returned
 *
 * Parses the options, --help and --version among them.
 *
 * Returns: whether to go on
 */
gboolean command_parse (const char *name, const char *parameters, const char *summary, const GOptionEntry *entries,
                        const char *more, int *argc, char ***argv, int *status);
/* Says a sentence and where the help is on standard error; returns STATUS_USAGE. Takes @error. */
int command_usage_error (const char *name, GError *error);

/**
 * NumberOption:
 * @option: "--limit"
 * @text: what the user gave, or %NULL
 * @value: (out): set where the user gave it
 * @wanted: untranslated phrase for what is wanted: "a number above 0"
 */
typedef struct
{
  const char *option;
  const char *text;
  double *value;
  double low, high;
  const char *wanted;
} NumberOption;
/* Errors name the option, what it wants and what was given. */
gboolean parse_numbers (const NumberOption *options, gsize n, GError **error);
/* (transfer full) (element-type double): numbers between commas. */
GArray *parse_list (const char *option, const char *text, double low, double high, const char *wanted, GError **error);
/* Two numbers "LO,HI". */
gboolean parse_pair (const char *option, const char *text, double low, double high, const char *wanted, double *first,
                     double *second, GError **error);
/* "--x-unit", "--y-unit"; NULL leaves what is there. */
gboolean parse_units (const char *x_unit, const char *y_unit, BtReadOptions *options, GError **error);
/* "--paper"; NULL is A4. */
gboolean parse_paper (const char *text, BtPaper *paper, GError **error);
/* %FALSE and an error that names @option, @wanted (translated) and @text. */
gboolean bad_value (const char *option, const char *wanted, const char *text, GError **error);

/* "-": standard output. */
gboolean is_standard_output (const char *path);
/* Whether @path could be written, as far as one can tell before; the error names it. NULL can. */
gboolean output_check (const char *path, GError **error);
/* Writes a whole file or, for "-", standard output. What was there before stays until the new is complete. */
gboolean output_write (const char *path, const char *text, gssize length, GError **error);
gboolean output_write_report (const char *path, BtReport *report, GError **error);
/* Columns of standard output's terminal; 0 where it is none. */
int output_columns (void);
/* "bandtally-cli: sentence" on standard error. */
void complain (const char *sentence);

G_END_DECLS

#endif
