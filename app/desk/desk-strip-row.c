#include "desk-strip-row.h"

#include <glib/gi18n.h>

#include "desk-text.h"
#include "desk-theme.h"

#define STRIP_HEIGHT 46
#define BAR_HEIGHT 12

struct _DeskStripRow {
  GtkListBoxRow parent;
  DeskFilm *film;
  GtkWidget *label, *spinner, *strip, *bar, *fraction, *icon, *verdict;
};

G_DEFINE_TYPE (DeskStripRow, desk_strip_row, GTK_TYPE_LIST_BOX_ROW)

static gboolean
draw_strip (GtkWidget *area, cairo_t *cr, DeskStripRow *self)
{
  bt_strip_draw (cr, gtk_widget_get_allocated_width (area), gtk_widget_get_allocated_height (area),
                 desk_film_get_film (self->film), desk_film_get_tally (self->film), desk_theme_of (area));
  return TRUE;
}

static gboolean
draw_bar (GtkWidget *area, cairo_t *cr, DeskStripRow *self)
{
  BtTally *tally = desk_film_get_tally (self->film);
  if (tally)
    bt_fraction_bar_draw (cr, gtk_widget_get_allocated_width (area), gtk_widget_get_allocated_height (area), tally,
                          desk_theme_of (area));
  return TRUE;
}

/* "66.1 %", "≥ 93.0 %", "no fraction". */
static char *
fraction_text (DeskStripRow *self, const BtTally *tally)
{
  if (!tally)
    return g_strdup (desk_film_get_state (self->film) == DESK_FILM_FAILED ? _("no result") : "…");
  switch (tally->fraction.bound)
    {
    case BT_BOUND_TWO_SIDED:
      return desk_text_percent (tally->fraction.value, 1);
    case BT_BOUND_LOWER:
      return g_strdup_printf ("≥\u00a0%.1f\u00a0%%", tally->fraction.low * 100);
    case BT_BOUND_NONE:
      break;
    }
  return g_strdup (_("no fraction"));
}

static void
update (DeskStripRow *self)
{
  BtTally *tally = desk_film_get_tally (self->film);
  DeskFilmState state = desk_film_get_state (self->film);
  g_autofree char *title = desk_film_dup_title (self->film);
  g_autofree char *fraction = fraction_text (self, tally);
  const char *verdict = state == DESK_FILM_FAILED && !tally ? _("failed") : tally ? bt_verdict_title (tally->verdict) : _("fitting");
  g_autofree char *answer = tally ? bt_tally_answer (tally) : g_strdup (verdict);
  g_autofree char *name = g_strdup_printf ("%s: %s, %s", title, answer, verdict);

  gtk_label_set_text (GTK_LABEL (self->label), title);
  gtk_label_set_text (GTK_LABEL (self->fraction), fraction);
  gtk_label_set_text (GTK_LABEL (self->verdict), verdict);
  gtk_image_set_from_icon_name (GTK_IMAGE (self->icon),
                                tally                       ? desk_verdict_icon (tally->verdict)
                                : state == DESK_FILM_FAILED ? "dialog-error-symbolic"
                                                            : "content-loading-symbolic",
                                GTK_ICON_SIZE_MENU);
  g_object_set (self->spinner, "active", state == DESK_FILM_FITTING, NULL);
  gtk_widget_set_opacity (self->spinner, state == DESK_FILM_FITTING ? 1 : 0);
  gtk_widget_set_tooltip_text (GTK_WIDGET (self), desk_film_get_error (self->film) ? desk_film_get_error (self->film) : answer);
  atk_object_set_name (gtk_widget_get_accessible (GTK_WIDGET (self)), name);
  atk_object_set_description (gtk_widget_get_accessible (GTK_WIDGET (self)),
                              state == DESK_FILM_FITTING ? _("The fit is under way") : "");
  gtk_widget_queue_draw (GTK_WIDGET (self));
  gtk_list_box_row_changed (GTK_LIST_BOX_ROW (self));
}

static void
desk_strip_row_dispose (GObject *object)
{
  DeskStripRow *self = DESK_STRIP_ROW (object);
  if (self->film)
    g_signal_handlers_disconnect_by_data (self->film, self);
  g_clear_object (&self->film);
  G_OBJECT_CLASS (desk_strip_row_parent_class)->dispose (object);
}

static void
desk_strip_row_class_init (DeskStripRowClass *class)
{
  GtkWidgetClass *widget_class = GTK_WIDGET_CLASS (class);
  G_OBJECT_CLASS (class)->dispose = desk_strip_row_dispose;
  gtk_widget_class_set_template_from_resource (widget_class, "/org/bandtally/Bandtally/desk-strip-row.ui");
  gtk_widget_class_bind_template_child (widget_class, DeskStripRow, label);
  gtk_widget_class_bind_template_child (widget_class, DeskStripRow, spinner);
  gtk_widget_class_bind_template_child (widget_class, DeskStripRow, strip);
  gtk_widget_class_bind_template_child (widget_class, DeskStripRow, bar);
  gtk_widget_class_bind_template_child (widget_class, DeskStripRow, fraction);
  gtk_widget_class_bind_template_child (widget_class, DeskStripRow, icon);
  gtk_widget_class_bind_template_child (widget_class, DeskStripRow, verdict);
}

static void
desk_strip_row_init (DeskStripRow *self)
{
  gtk_widget_init_template (GTK_WIDGET (self));
  gtk_widget_set_size_request (self->strip, -1, STRIP_HEIGHT);
  gtk_widget_set_size_request (self->bar, -1, BAR_HEIGHT);
  g_signal_connect (self->strip, "draw", G_CALLBACK (draw_strip), self);
  g_signal_connect (self->bar, "draw", G_CALLBACK (draw_bar), self);
}

GtkWidget *
desk_strip_row_new (DeskFilm *film)
{
  DeskStripRow *self = g_object_new (DESK_TYPE_STRIP_ROW, NULL);
  self->film = g_object_ref (film);
  g_signal_connect_swapped (film, "edited", G_CALLBACK (update), self);
  g_signal_connect_swapped (film, "tallied", G_CALLBACK (update), self);
  g_signal_connect_swapped (film, "state-changed", G_CALLBACK (update), self);
  update (self);
  return GTK_WIDGET (self);
}

DeskFilm *
desk_strip_row_get_film (DeskStripRow *self)
{
  return self->film;
}
