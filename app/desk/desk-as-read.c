#include "desk-as-read.h"

#include <glib/gi18n.h>

#define MOST_LINES 200
#define MARGIN 12

static gboolean
on_key (GtkWidget *widget, GdkEventKey *event, gpointer data)
{
  if (event->keyval != GDK_KEY_Escape)
    return GDK_EVENT_PROPAGATE;
  gtk_window_close (GTK_WINDOW (widget));
  return GDK_EVENT_STOP;
}

/* The reading in a sentence, and every flag of it. */
static GtkWidget *
build_reading (BtSpectrum *spectrum)
{
  GString *text = g_string_new (bt_spectrum_get_reading (spectrum));
  const GPtrArray *flags = bt_spectrum_get_flags (spectrum);
  GtkWidget *label;
  for (guint i = 0; i < flags->len; i++)
    g_string_append_printf (text, "\n• %s", ((const BtFlag *) g_ptr_array_index (flags, i))->text);
  label = gtk_label_new (text->str);
  g_string_free (text, TRUE);
  gtk_label_set_line_wrap (GTK_LABEL (label), TRUE);
  gtk_label_set_selectable (GTK_LABEL (label), TRUE);
  gtk_label_set_xalign (GTK_LABEL (label), 0);
  gtk_label_set_max_width_chars (GTK_LABEL (label), 80);
  return label;
}

static GtkWidget *
build_lines (const char *path)
{
  GtkWidget *view = gtk_text_view_new (), *scroller = gtk_scrolled_window_new (NULL, NULL);
  g_autoptr (GError) error = NULL;
  g_auto (GStrv) lines = path != NULL ? bt_spectrum_first_lines (path, MOST_LINES, &error) : NULL;
  GString *text = g_string_new (NULL);
  for (guint i = 0; lines != NULL && lines[i] != NULL; i++)
    g_string_append_printf (text, "%5u  %s\n", i + 1, lines[i]);
  if (lines == NULL)
    g_string_append (text, error != NULL ? error->message : _("This film did not come from a file."));
  gtk_text_buffer_set_text (gtk_text_view_get_buffer (GTK_TEXT_VIEW (view)), text->str, -1);
  g_string_free (text, TRUE);
  gtk_text_view_set_editable (GTK_TEXT_VIEW (view), FALSE);
  gtk_text_view_set_cursor_visible (GTK_TEXT_VIEW (view), FALSE);
  gtk_text_view_set_monospace (GTK_TEXT_VIEW (view), TRUE);
  gtk_text_view_set_left_margin (GTK_TEXT_VIEW (view), 6);
  atk_object_set_name (gtk_widget_get_accessible (view), _("First lines of the file"));
  gtk_scrolled_window_set_shadow_type (GTK_SCROLLED_WINDOW (scroller), GTK_SHADOW_IN);
  gtk_container_add (GTK_CONTAINER (scroller), view);
  gtk_widget_set_vexpand (scroller, TRUE);
  return scroller;
}

void
desk_as_read_show (GtkWindow *parent, BtFilm *film)
{
  BtSpectrum *spectrum = bt_film_get_spectrum (film);
  GtkWidget *window = gtk_window_new (GTK_WINDOW_TOPLEVEL), *header = gtk_header_bar_new ();
  GtkWidget *box = gtk_box_new (GTK_ORIENTATION_VERTICAL, MARGIN), *lines = build_lines (bt_spectrum_get_file (spectrum));
  gtk_header_bar_set_title (GTK_HEADER_BAR (header), _("As read"));
  gtk_header_bar_set_subtitle (GTK_HEADER_BAR (header), bt_film_get_label (film));
  gtk_header_bar_set_show_close_button (GTK_HEADER_BAR (header), TRUE);
  gtk_window_set_titlebar (GTK_WINDOW (window), header);
  gtk_window_set_title (GTK_WINDOW (window), _("As read"));
  gtk_window_set_transient_for (GTK_WINDOW (window), parent);
  gtk_window_set_destroy_with_parent (GTK_WINDOW (window), TRUE);
  gtk_window_set_default_size (GTK_WINDOW (window), 680, 520);
  gtk_container_set_border_width (GTK_CONTAINER (box), MARGIN);
  gtk_container_add (GTK_CONTAINER (box), build_reading (spectrum));
  gtk_container_add (GTK_CONTAINER (box), lines);
  gtk_container_add (GTK_CONTAINER (window), box);
  g_signal_connect (window, "key-press-event", G_CALLBACK (on_key), NULL);
  gtk_widget_show_all (window);
  /* Otherwise the label takes the focus and shows all of itself as selected. */
  gtk_widget_child_focus (lines, GTK_DIR_TAB_FORWARD);
}
