/* Report: a film's tally on paper. The print preview and the PDF are the same pages. */
#ifndef BANDTALLY_REPORT_H
#define BANDTALLY_REPORT_H

#include <cairo.h>
#include <bandtally/instrument.h>
#include <bandtally/tally.h>

G_BEGIN_DECLS

typedef enum { BT_PAPER_A4, BT_PAPER_LETTER } BtPaper;
void bt_paper_size_pt (BtPaper paper, double *width_pt, double *height_pt);

typedef struct _BtReport BtReport;
/* Films may be added; each takes one or two pages. */
BtReport *bt_report_new (BtPaper paper);
void bt_report_free (BtReport *report);
void bt_report_add (BtReport *report, BtFilm *film, BtTally *tally);
/* The page of a check of the instrument: what was published and what was found on @spectrum. Copies @check, keeps @spectrum. */
void bt_report_add_check (BtReport *report, const BtInstrumentCheck *check, BtSpectrum *spectrum);
/* Seconds since 1970 that the report bears; without it SOURCE_DATE_EPOCH, or now. */
void bt_report_set_date (BtReport *report, gint64 unix_s);
int bt_report_n_pages (BtReport *report);
/* Draws page 0 .. n-1 in points, origin at the paper's top left corner. */
void bt_report_draw_page (BtReport *report, int page, cairo_t *cr);
gboolean bt_report_write_pdf (BtReport *report, const char *path, GError **error);

G_END_DECLS

#endif
