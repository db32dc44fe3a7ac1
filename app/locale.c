/* Language and number formats of the programs, and where their data are. */
#include "locale.h"

#include <gio/gio.h>
#include <glib/gi18n.h>
#include <langinfo.h>
#include <locale.h>
#include <string.h>

#include "bt-config.h"

/* Whether this very program lies in the build folder: a program that is installed must not look there, even where the folder
 * still exists. */
static gboolean
runs_from_build (void)
{
  char *program = g_file_read_link ("/proc/self/exe", NULL);
  char *build = g_path_get_dirname (BT_BUILD_LOCALE_DIR);
  gsize length = strlen (build);
  gboolean inside = program != NULL && strncmp (program, build, length) == 0 && program[length] == G_DIR_SEPARATOR;

  g_free (build);
  g_free (program);
  return inside;
}

void
app_init_locale (void)
{
  setlocale (LC_ALL, "");
  /* Without a locale, as on a bare machine, the terminal still shows UTF-8: better than "?" for every sign beyond ASCII. */
  if (g_str_equal (nl_langinfo (CODESET), "ANSI_X3.4-1968"))
    setlocale (LC_CTYPE, "C.UTF-8");
  bindtextdomain (GETTEXT_PACKAGE, runs_from_build () ? BT_BUILD_LOCALE_DIR : BT_LOCALE_DIR);
  bind_textdomain_codeset (GETTEXT_PACKAGE, "UTF-8");
  textdomain (GETTEXT_PACKAGE);
}

const char *
app_data_dir (void)
{
  return runs_from_build () ? BT_SOURCE_DATA_DIR : BT_DATA_DIR;
}
