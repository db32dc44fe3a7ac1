/* Stands in until core/report has pages: one page that says so. */
#include <bandtally/report.h>

void
bt_paper_size_pt (BtPaper paper, double *width_pt, double *height_pt)
{
  *width_pt = paper == BT_PAPER_LETTER ? 612 : 595.28;
  *height_pt = paper == BT_PAPER_LETTER ? 792 : 841.89;
}

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

int
bt_report_n_pages (BtReport *report)
{
  return 1;
}

void
bt_report_draw_page (BtReport *report, int page, cairo_t *cr)
{
}

gboolean
bt_report_write_pdf (BtReport *report, const char *path, GError **error)
{
  g_set_error_literal (error, G_FILE_ERROR, G_FILE_ERROR_NOSYS, "Reports cannot be written yet.");
  return FALSE;
}
