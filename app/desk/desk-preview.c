#include "desk-preview.h"

#include <glib/gi18n.h>

/* A point of paper in pixels, to begin with: a page fits beside the window's frame on a small screen. */
#define SCALE 1.1
#define MARGIN 16

struct _DeskPreview {
  GtkWindow parent;
  BtReport *report;
};

G_DEFINE_TYPE (DeskPreview, desk_preview, GTK_TYPE_WINDOW)

static guint print_signal;

static gboolean
draw_page (GtkWidget *area, cairo_t *cr, DeskPreview *self)
{
  int page = GPOINTER_TO_INT (g_object_get_data (G_OBJECT (area), "page"));
  cairo_set_source_rgb (cr, 1, 1, 1);
  cairo_paint (cr);
  cairo_scale (cr, SCALE, SCALE);
  bt_report_draw_page (self->report, page, cr);
  return TRUE;
}

static void
on_print (GtkButton *button, DeskPreview *self)
{
  g_signal_emit (self, print_signal, 0);
}

static gboolean
on_key (GtkWidget *widget, GdkEventKey *event, gpointer data)
{
  if (event->keyval != GDK_KEY_Escape)
    return GDK_EVENT_PROPAGATE;
  gtk_window_close (GTK_WINDOW (widget));
  return GDK_EVENT_STOP;
}

static void
desk_preview_finalize (GObject *object)
{
  g_clear_pointer (&DESK_PREVIEW (object)->report, bt_report_free);
  G_OBJECT_CLASS (desk_preview_parent_class)->finalize (object);
}

static void
desk_preview_class_init (DeskPreviewClass *class)
{
  G_OBJECT_CLASS (class)->finalize = desk_preview_finalize;
  print_signal = g_signal_new ("print", G_TYPE_FROM_CLASS (class), G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
}

static void
desk_preview_init (DeskPreview *self)
{
}

static GtkWidget *
build_page (DeskPreview *self, int page, double width_pt, double height_pt)
{
  GtkWidget *area = gtk_drawing_area_new ();
  g_autofree char *name = g_strdup_printf (_("Page %d"), page + 1);
  g_object_set_data (G_OBJECT (area), "page", GINT_TO_POINTER (page));
  gtk_widget_set_size_request (area, (int) (width_pt * SCALE), (int) (height_pt * SCALE));
  gtk_widget_set_halign (area, GTK_ALIGN_CENTER);
  gtk_style_context_add_class (gtk_widget_get_style_context (area), "desk-page");
  atk_object_set_name (gtk_widget_get_accessible (area), name);
  g_signal_connect (area, "draw", G_CALLBACK (draw_page), self);
  return area;
}

GtkWidget *
desk_preview_new (GtkWindow *parent, const char *title, BtReport *report, BtPaper paper)
{
  double width_pt, height_pt;
  DeskPreview *self = g_object_new (DESK_TYPE_PREVIEW, "transient-for", parent, "destroy-with-parent", TRUE, NULL);
  GtkWidget *header = gtk_header_bar_new (), *button = gtk_button_new_with_mnemonic (_("_Print…"));
  GtkWidget *scroller = gtk_scrolled_window_new (NULL, NULL), *box = gtk_box_new (GTK_ORIENTATION_VERTICAL, MARGIN);
  self->report = report;
  bt_paper_size_pt (paper, &width_pt, &height_pt);
  gtk_header_bar_set_title (GTK_HEADER_BAR (header), _("Print preview"));
  gtk_header_bar_set_subtitle (GTK_HEADER_BAR (header), title);
  gtk_header_bar_set_show_close_button (GTK_HEADER_BAR (header), TRUE);
  gtk_header_bar_pack_start (GTK_HEADER_BAR (header), button);
  gtk_window_set_titlebar (GTK_WINDOW (self), header);
  gtk_window_set_title (GTK_WINDOW (self), _("Print preview"));
  gtk_container_set_border_width (GTK_CONTAINER (box), MARGIN);
  for (int page = 0; page < bt_report_n_pages (report); page++)
    gtk_container_add (GTK_CONTAINER (box), build_page (self, page, width_pt, height_pt));
  gtk_container_add (GTK_CONTAINER (scroller), box);
  gtk_container_add (GTK_CONTAINER (self), scroller);
  gtk_window_set_default_size (GTK_WINDOW (self), (int) (width_pt * SCALE) + 4 * MARGIN, 720);
  g_signal_connect (button, "clicked", G_CALLBACK (on_print), self);
  g_signal_connect (self, "key-press-event", G_CALLBACK (on_key), NULL);
  gtk_widget_show_all (GTK_WIDGET (self));
  return GTK_WIDGET (self);
}
