/* The report as a document: films in, pages out, on screen and as PDF. */
#include <bandtally/report.h>

#include <cairo-pdf.h>
#include <gio/gio.h>
#include <glib/gi18n-lib.h>

#include "report-check-private.h"

#define MARGIN_X 48.0
#define MARGIN_TOP 40.0
#define MARGIN_BOTTOM 36.0
/* Height of the footer with the space above it. */
#define FOOTER 22.0

/* A film with its tally, or a check with its spectrum. */
typedef struct
{
  BtFilm *film;
  BtTally *tally;
  BtInstrumentCheck *check;
  BtSpectrum *spectrum;
  BtFlow *flow;
  BtPages *pages;
} Entry;

struct _BtReport
{
  double width, height;
  PangoContext *context;
  GArray *entries;
  gboolean has_date;
  gint64 date;
};

void
bt_paper_size_pt (BtPaper paper, double *width_pt, double *height_pt)
{
  /* ISO 216 A4, 210 mm by 297 mm; ANSI/ASME Y14.1 A, 8.5 in by 11 in. */
  *width_pt = paper == BT_PAPER_LETTER ? 612 : 210 / 25.4 * 72;
  *height_pt = paper == BT_PAPER_LETTER ? 792 : 297 / 25.4 * 72;
}

static void
forget_pages (Entry *entry)
{
  g_clear_pointer (&entry->pages, bt_pages_free);
  g_clear_pointer (&entry->flow, g_ptr_array_unref);
}

static void
clear_entry (gpointer data)
{
  Entry *entry = data;

  forget_pages (entry);
  g_clear_object (&entry->film);
  g_clear_pointer (&entry->tally, bt_tally_unref);
  g_clear_pointer (&entry->check, bt_instrument_check_free);
  g_clear_object (&entry->spectrum);
}

/* (transfer full) */
static char *
entry_name (const Entry *entry)
{
  return entry->film != NULL ? bt_report_film_name (entry->film) : bt_report_check_name (entry->check);
}

BtReport *
bt_report_new (BtPaper paper)
{
  BtReport *report = g_new0 (BtReport, 1);
  const char *epoch = g_getenv ("SOURCE_DATE_EPOCH");
  guint64 seconds;

  bt_paper_size_pt (paper, &report->width, &report->height);
  report->context = bt_report_context_new ();
  report->entries = g_array_new (FALSE, FALSE, sizeof (Entry));
  g_array_set_clear_func (report->entries, clear_entry);
  report->has_date = epoch != NULL && g_ascii_string_to_unsigned (epoch, 10, 0, G_MAXINT32, &seconds, NULL);
  report->date = report->has_date ? (gint64)seconds : g_get_real_time () / G_USEC_PER_SEC;
  return report;
}

void
bt_report_free (BtReport *report)
{
  if (report == NULL)
    return;
  g_array_unref (report->entries);
  g_object_unref (report->context);
  g_free (report);
}

void
bt_report_add (BtReport *report, BtFilm *film, BtTally *tally)
{
  /* As it is now: what is changed afterwards does not change the page. */
  Entry entry = { .film = bt_film_copy (film), .tally = bt_tally_ref (tally) };

  g_array_append_val (report->entries, entry);
}

void
bt_report_add_check (BtReport *report, const BtInstrumentCheck *check, BtSpectrum *spectrum)
{
  Entry entry = { .check = bt_instrument_check_copy (check), .spectrum = g_object_ref (spectrum) };

  g_array_append_val (report->entries, entry);
}

void
bt_report_set_date (BtReport *report, gint64 unix_s)
{
  report->has_date = TRUE;
  report->date = unix_s;
  for (guint i = 0; i < report->entries->len; i++)
    forget_pages (&g_array_index (report->entries, Entry, i));
}

/* (transfer full): a date that was set is told in UTC, so that it reads the same everywhere. */
static char *
date_text (const BtReport *report, gboolean for_file)
{
  g_autoptr (GDateTime) date
      = report->has_date ? g_date_time_new_from_unix_utc (report->date) : g_date_time_new_from_unix_local (report->date);

  if (date == NULL)
    return g_strdup ("");
  if (for_file)
    return g_date_time_format (date, report->has_date ? "%Y-%m-%dT%H:%M:%SZ" : "%Y-%m-%dT%H:%M:%S%:z");
  return g_date_time_format (date, report->has_date ? "%Y-%m-%d %H:%M UTC" : "%Y-%m-%d %H:%M (UTC%:z)");
}

static Entry *
laid_out (BtReport *report, guint index)
{
  Entry *entry = &g_array_index (report->entries, Entry, index);

  if (entry->pages == NULL)
    {
      const double width = report->width - 2 * MARGIN_X, height = report->height - MARGIN_TOP - MARGIN_BOTTOM - FOOTER;
      g_autofree char *date = date_text (report, FALSE);

      entry->flow = entry->film != NULL ? bt_report_film_flow (report->context, entry->film, entry->tally, date, width, height)
                                        : bt_report_check_flow (report->context, entry->check, entry->spectrum, date, width);
      entry->pages = bt_pages_new (entry->flow, height);
    }
  return entry;
}

int
bt_report_n_pages (BtReport *report)
{
  int n = 0;

  for (guint i = 0; i < report->entries->len; i++)
    n += bt_pages_n (laid_out (report, i)->pages);
  return n;
}

/* The right part is never broken; the left gives way to it. */
static void
draw_footer (BtReport *report, cairo_t *cr, const Entry *entry, int film_page, int page)
{
  const double y = report->height - MARGIN_BOTTOM - 9, width = report->width - 2 * MARGIN_X;
  g_autofree char *film = entry_name (entry);
  g_autofree char *number = report->entries->len > 1
                                ? g_strdup_printf (_ ("page %d of %d, sheet %d of %d"), film_page + 1,
                                                   bt_pages_n (entry->pages), page + 1, bt_report_n_pages (report))
                                : g_strdup_printf (_ ("page %d of %d"), film_page + 1, bt_pages_n (entry->pages));
  g_autofree char *right = g_strdup_printf ("Bandtally %s · %s", bt_version (), number);
  g_autoptr (PangoLayout) at_right = bt_report_layout_new (report->context, BT_FACE_NOTE, right, 0);
  g_autoptr (PangoLayout) at_left
      = bt_report_layout_new (report->context, BT_FACE_NOTE, film, width - bt_layout_width_pt (at_right) - 12);

  pango_layout_set_height (at_left, -1);
  pango_layout_set_ellipsize (at_left, PANGO_ELLIPSIZE_END);
  bt_shade_set (cr, BT_SHADE_HAIR);
  cairo_set_line_width (cr, 0.5);
  cairo_move_to (cr, MARGIN_X, y - 4);
  cairo_rel_line_to (cr, width, 0);
  cairo_stroke (cr);
  bt_layout_show (cr, at_left, MARGIN_X, y);
  bt_layout_show (cr, at_right, report->width - MARGIN_X - bt_layout_width_pt (at_right), y);
}

void
bt_report_draw_page (BtReport *report, int page, cairo_t *cr)
{
  int before = 0;

  for (guint i = 0; i < report->entries->len; i++)
    {
      const Entry *entry = laid_out (report, i);
      int n = bt_pages_n (entry->pages);

      if (page >= before && page < before + n)
        {
          cairo_save (cr);
          cairo_translate (cr, MARGIN_X, MARGIN_TOP);
          bt_pages_draw (entry->pages, page - before, cr);
          cairo_restore (cr);
          draw_footer (report, cr, entry, page - before, page);
          return;
        }
      before += n;
    }
  g_return_if_reached ();
}

static cairo_status_t
append (void *closure, const unsigned char *data, unsigned int length)
{
  g_byte_array_append (closure, data, length);
  return CAIRO_STATUS_SUCCESS;
}

static void
describe (BtReport *report, cairo_surface_t *surface)
{
  g_autofree char *date = date_text (report, TRUE), *creator = g_strdup_printf ("Bandtally %s", bt_version ());
  g_autofree char *film = entry_name (&g_array_index (report->entries, Entry, 0));
  g_autofree char *title
      = report->entries->len > 1 ? g_strdup_printf (
            ngettext ("%s and %u film more", "%s and %u films more", report->entries->len - 1), film, report->entries->len - 1)
                                 : g_strdup (film);

  cairo_pdf_surface_set_metadata (surface, CAIRO_PDF_METADATA_TITLE, title);
  cairo_pdf_surface_set_metadata (surface, CAIRO_PDF_METADATA_CREATOR, creator);
  cairo_pdf_surface_set_metadata (surface, CAIRO_PDF_METADATA_CREATE_DATE, date);
}

gboolean
bt_report_write_pdf (BtReport *report, const char *path, GError **error)
{
  g_autofree char *name = g_filename_display_name (path);
  g_autoptr (GByteArray) bytes = g_byte_array_new ();
  g_autoptr (GError) reason = NULL;
  cairo_surface_t *surface;
  cairo_status_t status;
  cairo_t *cr;

  if (report->entries->len == 0)
    {
      g_set_error (error, G_IO_ERROR, G_IO_ERROR_FAILED, _ ("%s: the report has no films; add one and write it again."), name);
      return FALSE;
    }
  surface = cairo_pdf_surface_create_for_stream (append, bytes, report->width, report->height);
  describe (report, surface);
  cr = cairo_create (surface);
  for (int page = 0; page < bt_report_n_pages (report); page++)
    {
      bt_report_draw_page (report, page, cr);
      cairo_show_page (cr);
    }
  status = cairo_status (cr);
  cairo_destroy (cr);
  cairo_surface_finish (surface);
  if (status == CAIRO_STATUS_SUCCESS)
    status = cairo_surface_status (surface);
  cairo_surface_destroy (surface);
  if (status != CAIRO_STATUS_SUCCESS)
    {
      g_set_error (error, G_IO_ERROR, G_IO_ERROR_FAILED, _ ("%s: the report could not be drawn: %s."), name,
                   cairo_status_to_string (status));
      return FALSE;
    }
  if (!g_file_set_contents (path, (const char *)bytes->data, (gssize)bytes->len, &reason))
    {
      g_set_error (error, reason->domain, reason->code,
                   _ ("%s: the report could not be written there: %s. Choose a folder that exists and that you may write to."),
                   name, reason->message);
      return FALSE;
    }
  return TRUE;
}
