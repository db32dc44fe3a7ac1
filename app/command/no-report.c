/* Stands in until core/report has pages: says that there is no report yet. */
#include <bandtally/report.h>

BtReport *
bt_report_new (BtPaper paper)
{
  return NULL;
}

void
bt_report_free (BtReport *report)
{
}

void
bt_report_add (BtReport *report, BtFilm *film, BtTally *tally)
{
}

gboolean
bt_report_write_pdf (BtReport *report, const char *path, GError **error)
{
  g_set_error_literal (error, G_FILE_ERROR, G_FILE_ERROR_NOSYS, "Reports cannot be written yet.");
  return FALSE;
}
