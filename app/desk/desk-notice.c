#include "desk-notice.h"

#include <glib/gi18n.h>

/* More lines than this scroll. */
#define LINES_SEEN 4
#define LINES_SEEN_PX 90 /* half a line more, which tells that there are more */

struct _DeskNotice {
  GtkInfoBar parent;
  GtkWidget *lines, *scroller;
};

G_DEFINE_TYPE (DeskNotice, desk_notice, GTK_TYPE_INFO_BAR)

static void
on_response (GtkInfoBar *bar, int response, gpointer data)
{
  desk_notice_clear (DESK_NOTICE (bar));
}

static void
desk_notice_class_init (DeskNoticeClass *class)
{
}

static void
desk_notice_init (DeskNotice *self)
{
  self->lines = gtk_box_new (GTK_ORIENTATION_VERTICAL, 3);
  self->scroller = gtk_scrolled_window_new (NULL, NULL);
  gtk_scrolled_window_set_policy (GTK_SCROLLED_WINDOW (self->scroller), GTK_POLICY_NEVER, GTK_POLICY_NEVER);
  gtk_container_add (GTK_CONTAINER (self->scroller), self->lines);
  gtk_box_pack_start (GTK_BOX (gtk_info_bar_get_content_area (GTK_INFO_BAR (self))), self->scroller, TRUE, TRUE, 0);
  gtk_widget_show_all (self->scroller);
  gtk_info_bar_set_revealed (GTK_INFO_BAR (self), FALSE);
  gtk_widget_set_no_show_all (GTK_WIDGET (self), TRUE);
  g_signal_connect (self, "response", G_CALLBACK (on_response), NULL);
}

static void
name_close_button (GtkWidget *child, gpointer data)
{
  if (GTK_IS_BUTTON (child))
    atk_object_set_name (gtk_widget_get_accessible (child), _("Close the message"));
  else if (GTK_IS_CONTAINER (child))
    gtk_container_forall (GTK_CONTAINER (child), name_close_button, NULL);
}

GtkWidget *
desk_notice_new (void)
{
  GtkWidget *self = g_object_new (DESK_TYPE_NOTICE, "show-close-button", TRUE, NULL);
  name_close_button (self, NULL);
  return self;
}

void
desk_notice_say (DeskNotice *self, GtkMessageType type, const char *sentence)
{
  GtkWidget *label = gtk_label_new (sentence);
  gtk_label_set_line_wrap (GTK_LABEL (label), TRUE);
  gtk_label_set_line_wrap_mode (GTK_LABEL (label), PANGO_WRAP_WORD_CHAR);
  gtk_label_set_xalign (GTK_LABEL (label), 0);
  gtk_label_set_selectable (GTK_LABEL (label), TRUE);
  gtk_widget_set_can_focus (label, FALSE);
  gtk_container_add (GTK_CONTAINER (self->lines), label);
  gtk_widget_show (label);
  g_autoptr (GList) all = gtk_container_get_children (GTK_CONTAINER (self->lines));
  gboolean many = g_list_length (all) > LINES_SEEN;
  gtk_scrolled_window_set_policy (GTK_SCROLLED_WINDOW (self->scroller), GTK_POLICY_NEVER,
                                  many ? GTK_POLICY_AUTOMATIC : GTK_POLICY_NEVER);
  gtk_widget_set_size_request (self->scroller, -1, many ? LINES_SEEN_PX : -1);
  /* The gravest of the lines gives the bar its colour. */
  if (!gtk_widget_get_visible (GTK_WIDGET (self)) || type == GTK_MESSAGE_ERROR)
    gtk_info_bar_set_message_type (GTK_INFO_BAR (self), type);
  gtk_widget_show (GTK_WIDGET (self));
  gtk_info_bar_set_revealed (GTK_INFO_BAR (self), TRUE);
}

void
desk_notice_clear (DeskNotice *self)
{
  gtk_info_bar_set_revealed (GTK_INFO_BAR (self), FALSE);
  gtk_widget_hide (GTK_WIDGET (self));
  g_autoptr (GList) children = gtk_container_get_children (GTK_CONTAINER (self->lines));
  for (GList *l = children; l; l = l->next)
    gtk_widget_destroy (l->data);
}
