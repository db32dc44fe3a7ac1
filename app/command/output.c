/* Writing of results. A file is either complete or as it was before. */
#include <errno.h>
#include <glib/gi18n.h>
#include <glib/gstdio.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/ioctl.h>
#include <sys/stat.h>
#include <unistd.h>

#include "command.h"

gboolean
is_standard_output (const char *path)
{
  return path != NULL && g_str_equal (path, "-");
}

static gboolean
cannot_write (const char *path, const char *reason, GError **error)
{
  char *name = g_filename_display_name (path);

  g_set_error (error, G_FILE_ERROR, G_FILE_ERROR_FAILED, _ ("“%s” cannot be written: %s. Name a place that can be."), name,
               reason);
  g_free (name);
  return FALSE;
}

/* A pipe or a device is written to; only a regular file may be replaced by a new one. */
static gboolean
is_special (const char *path)
{
  struct stat status;

  return stat (path, &status) == 0 && !S_ISREG (status.st_mode) && !S_ISDIR (status.st_mode);
}

/* (transfer full): where the file really is: a link is followed, not replaced. */
static char *
resolved (const char *path)
{
  char *real = realpath (path, NULL);
  char *copy = g_strdup (real != NULL ? real : path);

  free (real);
  return copy;
}

gboolean
output_check (const char *path, GError **error)
{
  char *real, *folder;
  gboolean possible = FALSE;

  if (path == NULL || is_standard_output (path))
    return TRUE;
  if (path[0] == '\0')
    return cannot_write (path, _ ("its name is empty"), error);
  real = resolved (path);
  folder = g_path_get_dirname (real);
  if (g_file_test (real, G_FILE_TEST_IS_DIR))
    cannot_write (path, _ ("it is a folder"), error);
  else if (!g_file_test (folder, G_FILE_TEST_EXISTS))
    cannot_write (path, _ ("its folder does not exist"), error);
  else if (!g_file_test (folder, G_FILE_TEST_IS_DIR))
    cannot_write (path, _ ("what should be its folder is a file"), error);
  else if (g_access (real, F_OK) == 0 && g_access (real, W_OK) != 0)
    cannot_write (path, g_strerror (errno), error);
  else if (!is_special (real) && g_access (folder, W_OK | X_OK) != 0)
    cannot_write (path, g_strerror (errno), error);
  else
    possible = TRUE;
  g_free (folder);
  g_free (real);
  return possible;
}

static gboolean
write_stream (FILE *stream, const char *text, gsize length, const char *path, GError **error)
{
  if (fwrite (text, 1, length, stream) == length && fflush (stream) == 0)
    return TRUE;
  return cannot_write (path, g_strerror (errno), error);
}

gboolean
output_write (const char *path, const char *text, gssize length, GError **error)
{
  gsize size = length < 0 ? strlen (text) : (gsize) length;
  char *real;
  gboolean written;
  GError *reason = NULL;

  if (is_standard_output (path))
    return write_stream (stdout, text, size, _ ("standard output"), error);
  if (!output_check (path, error))
    return FALSE;
  if (is_special (path))
    {
      FILE *stream = g_fopen (path, "wb");

      if (stream == NULL)
        return cannot_write (path, g_strerror (errno), error);
      written = write_stream (stream, text, size, path, error);
      fclose (stream);
      return written;
    }
  real = resolved (path);
  written = g_file_set_contents (real, text, (gssize) size, &reason);
  if (!written)
    cannot_write (path, reason->message, error);
  g_clear_error (&reason);
  g_free (real);
  return written;
}

gboolean
output_write_report (const char *path, BtReport *report, GError **error)
{
  char *name = NULL, *contents = NULL;
  gsize length = 0;
  gboolean written;
  int file;

  if (!output_check (path, error))
    return FALSE;
  file = g_file_open_tmp ("bandtally-XXXXXX.pdf", &name, error);
  if (file < 0)
    return FALSE;
  close (file);
  written = bt_report_write_pdf (report, name, error) && g_file_get_contents (name, &contents, &length, error)
            && output_write (path, contents, (gssize) length, error);
  g_unlink (name);
  g_free (contents);
  g_free (name);
  return written;
}

int
output_columns (void)
{
  struct winsize size;

  if (!isatty (STDOUT_FILENO))
    return 0;
  if (ioctl (STDOUT_FILENO, TIOCGWINSZ, &size) != 0 || size.ws_col == 0)
    return 80;
  return MAX (size.ws_col, 40);
}
