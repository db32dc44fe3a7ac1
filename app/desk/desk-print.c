/* Printing: the report's own pages, on paper, in the preview, or in a file. */
#include <glib/gi18n.h>

#include "desk-preview.h"
#include "desk-window-private.h"

typedef struct {
  DeskWindow *window;
  char *title;
  BtFilm *film;
  BtTally *tally;
  BtReport *report;
  double scale; /* from the report's points to the context's */
} Printing;

static void
printing_free (gpointer data, GClosure *closure)
{
  Printing *printing = data;
  g_free (printing->title);
  g_object_unref (printing->film);
  bt_tally_unref (printing->tally);
  g_clear_pointer (&printing->report, bt_report_free);
  g_object_unref (printing->window);
  g_free (printing);
}

/* The report knows two papers; any other gets the pages of the one that is nearer in shape, scaled. */
BtPaper
desk_paper_of (GtkPageSetup *setup)
{
  GtkPaperSize *size = gtk_page_setup_get_paper_size (setup);
  double width = gtk_paper_size_get_width (size, GTK_UNIT_POINTS), height = gtk_paper_size_get_height (size, GTK_UNIT_POINTS);
  double a4_width, a4_height, letter_width, letter_height;
  bt_paper_size_pt (BT_PAPER_A4, &a4_width, &a4_height);
  bt_paper_size_pt (BT_PAPER_LETTER, &letter_width, &letter_height);
  double shape = MAX (width, height) / MIN (width, height);
  double between = (a4_height / a4_width + letter_height / letter_width) / 2;
  return shape < between ? BT_PAPER_LETTER : BT_PAPER_A4;
}

static BtReport *
new_report (Printing *printing, GtkPageSetup *setup)
{
  BtReport *report = bt_report_new (desk_paper_of (setup));
  bt_report_add (report, printing->film, printing->tally);
  return report;
}

static void
on_begin (GtkPrintOperation *operation, GtkPrintContext *context, Printing *printing)
{
  GtkPageSetup *setup = gtk_print_context_get_page_setup (context);
  double width, height;
  bt_paper_size_pt (desk_paper_of (setup), &width, &height);
  printing->scale = MIN (gtk_print_context_get_width (context) / width, gtk_print_context_get_height (context) / height);
  g_clear_pointer (&printing->report, bt_report_free);
  printing->report = new_report (printing, setup);
  gtk_print_operation_set_n_pages (operation, bt_report_n_pages (printing->report));
}

static void
on_draw (GtkPrintOperation *operation, GtkPrintContext *context, int page, Printing *printing)
{
  cairo_t *cr = gtk_print_context_get_cairo_context (context);
  cairo_scale (cr, printing->scale, printing->scale);
  bt_report_draw_page (printing->report, page, cr);
}

static void
on_done (GtkPrintOperation *operation, GtkPrintOperationResult result, Printing *printing)
{
  DeskWindow *self = printing->window;
  g_autoptr (GError) error = NULL;
  if (result == GTK_PRINT_OPERATION_RESULT_ERROR)
    {
      gtk_print_operation_get_error (operation, &error);
      g_autofree char *sentence = g_strdup_printf (_("The report could not be printed: %s"), error->message);
      desk_window_say (self, GTK_MESSAGE_ERROR, sentence);
    }
  else if (result == GTK_PRINT_OPERATION_RESULT_APPLY)
    {
      g_set_object (&self->print_settings, gtk_print_operation_get_print_settings (operation));
      g_set_object (&self->page_setup, gtk_print_operation_get_default_page_setup (operation));
    }
}

static void print (DeskWindow *self, GtkPrintOperationAction action, const char *path);

static void
on_print_from_preview (GtkWidget *preview, DeskWindow *self)
{
  gtk_window_close (GTK_WINDOW (preview));
  print (self, GTK_PRINT_OPERATION_ACTION_PRINT_DIALOG, NULL);
}

static void
on_preview_closed (GtkWidget *window, GtkPrintOperationPreview *preview)
{
  gtk_print_operation_preview_end_preview (preview);
  g_object_unref (preview);
}

/* In a window of our own: no other program has to be there. */
static gboolean
on_preview (GtkPrintOperation *operation, GtkPrintOperationPreview *preview, GtkPrintContext *context, GtkWindow *parent,
            Printing *printing)
{
  GtkPageSetup *setup = gtk_print_context_get_page_setup (context);
  GtkWidget *window
      = desk_preview_new (GTK_WINDOW (printing->window), printing->title, new_report (printing, setup), desk_paper_of (setup));
  /* The context needs a surface, though nothing of it is drawn on. */
  cairo_surface_t *surface = cairo_recording_surface_create (CAIRO_CONTENT_COLOR, NULL);
  cairo_t *cr = cairo_create (surface);
  gtk_print_context_set_cairo_context (context, cr, 72, 72);
  cairo_destroy (cr);
  cairo_surface_destroy (surface);
  g_signal_connect (window, "print", G_CALLBACK (on_print_from_preview), printing->window);
  g_signal_connect (window, "destroy", G_CALLBACK (on_preview_closed), g_object_ref (preview));
  return TRUE;
}

static void
print (DeskWindow *self, GtkPrintOperationAction action, const char *path)
{
  BtTally *tally = self->film ? desk_film_get_tally (self->film) : NULL;
  if (!tally)
    return;
  g_autoptr (GError) error = NULL;
  g_autoptr (GtkPrintOperation) operation = gtk_print_operation_new ();
  Printing *printing = g_new0 (Printing, 1);
  printing->window = g_object_ref (self);
  printing->title = desk_film_dup_title (self->film);
  printing->film = g_object_ref (desk_film_get_film (self->film));
  printing->tally = bt_tally_ref (tally);
  gtk_print_operation_set_job_name (operation, printing->title);
  gtk_print_operation_set_unit (operation, GTK_UNIT_POINTS);
  gtk_print_operation_set_use_full_page (operation, TRUE);
  gtk_print_operation_set_embed_page_setup (operation, TRUE);
  gtk_print_operation_set_allow_async (operation, TRUE);
  if (self->print_settings)
    gtk_print_operation_set_print_settings (operation, self->print_settings);
  if (self->page_setup)
    gtk_print_operation_set_default_page_setup (operation, self->page_setup);
  if (path)
    gtk_print_operation_set_export_filename (operation, path);
  g_signal_connect (operation, "begin-print", G_CALLBACK (on_begin), printing);
  g_signal_connect (operation, "draw-page", G_CALLBACK (on_draw), printing);
  g_signal_connect (operation, "preview", G_CALLBACK (on_preview), printing);
  g_signal_connect_data (operation, "done", G_CALLBACK (on_done), printing, printing_free, 0);
  if (gtk_print_operation_run (operation, action, GTK_WINDOW (self), &error) == GTK_PRINT_OPERATION_RESULT_ERROR)
    {
      g_autofree char *sentence = g_strdup_printf (_("The report could not be printed: %s"), error->message);
      desk_window_say (self, GTK_MESSAGE_ERROR, sentence);
    }
}

static void
act_print (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  print (window, GTK_PRINT_OPERATION_ACTION_PRINT_DIALOG, NULL);
}

static void
act_preview (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  print (window, GTK_PRINT_OPERATION_ACTION_PREVIEW, NULL);
}

void
desk_window_add_print_actions (DeskWindow *self)
{
  static const GActionEntry entries[] = {
    { .name = "print", .activate = act_print },
    { .name = "print-preview", .activate = act_preview },
  };
  g_action_map_add_action_entries (G_ACTION_MAP (self), entries, G_N_ELEMENTS (entries), self);
}
