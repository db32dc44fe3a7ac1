#include "desk-ledger.h"

#include <glib/gi18n.h>

typedef void (*FillFunc) (DeskSection *, const DeskAccount *);

static const struct { const char *title; FillFunc fill; } parts[] = {
  { N_ ("Film"), desk_ledger_fill_film },         { N_ ("Light path"), desk_ledger_fill_path },
  { N_ ("Tail"), desk_ledger_fill_tail },         { N_ ("Bands"), desk_ledger_fill_bands },
  { N_ ("Fraction"), desk_ledger_fill_fraction }, { N_ ("Readings"), desk_ledger_fill_readings },
  { N_ ("Flags"), desk_ledger_fill_flags },       { N_ ("Verdict"), desk_ledger_fill_verdict },
};

struct _DeskLedger {
  GtkScrolledWindow parent;
  DeskHistory *history;
  DeskFilm *film;
  GtkWidget *box;
  DeskSection *sections[G_N_ELEMENTS (parts)];
  guint idle;
};

G_DEFINE_TYPE (DeskLedger, desk_ledger, GTK_TYPE_SCROLLED_WINDOW)

static void
fill (DeskLedger *self)
{
  DeskAccount account = { self->film };
  if (self->film)
    {
      account.film = desk_film_get_film (self->film);
      account.recipe = desk_film_get_recipe (self->film);
      account.tally = desk_film_get_tally (self->film);
    }
  for (guint i = 0; i < G_N_ELEMENTS (parts); i++)
    {
      desk_section_begin (self->sections[i]);
      if (self->film)
        parts[i].fill (self->sections[i], &account);
      desk_section_end (self->sections[i]);
    }
}

static gboolean
fill_now (gpointer data)
{
  DeskLedger *self = data;
  self->idle = 0;
  fill (self);
  return G_SOURCE_REMOVE;
}

/* Several changes in one turn of the main loop are one refill; it also keeps a line alive while its own edit is under way. */
static void
fill_soon (DeskLedger *self)
{
  if (!self->idle)
    self->idle = g_idle_add_full (G_PRIORITY_HIGH_IDLE, fill_now, self, NULL);
}

static char *
on_open (DeskLine *line, DeskLedger *self)
{
  if (!self->film)
    return NULL;
  g_autoptr (BtRecipe) recipe = bt_recipe_copy (desk_film_get_recipe (self->film));
  DeskSubject subject = { desk_film_get_film (self->film), recipe, desk_film_get_tally (self->film) };
  return desk_field_text (desk_line_get_field (line), &subject);
}

static char *
on_apply (DeskLine *line, const char *text, DeskLedger *self)
{
  if (!self->film)
    return NULL;
  const DeskField *field = desk_line_get_field (line);
  g_autofree char *before = on_open (line, self);
  if (g_strcmp0 (before, text) == 0)
    return NULL;
  g_autoptr (BtFilm) film = bt_film_copy (desk_film_get_film (self->film));
  g_autoptr (BtRecipe) recipe = bt_recipe_copy (desk_edition_get_recipe (desk_film_get_edition (self->film)));
  g_autoptr (GError) error = NULL;
  g_autofree char *name = desk_field_command_name (field);
  DeskSubject subject = { film, recipe, desk_film_get_tally (self->film) };
  if (!desk_field_apply (field, text, &subject, &error))
    return g_strdup (error->message);
  gboolean of_film = desk_field_is_of_film (field);
  desk_history_edit (self->history, self->film, name, of_film ? film : NULL, recipe, desk_field_is_text (field));
  return NULL;
}

static void
on_line_added (DeskSection *section, DeskLine *line, DeskLedger *self)
{
  g_signal_connect (line, "open", G_CALLBACK (on_open), self);
  g_signal_connect (line, "apply", G_CALLBACK (on_apply), self);
}

void
desk_ledger_set_film (DeskLedger *self, DeskFilm *film)
{
  if (film == self->film)
    return;
  if (self->film)
    g_signal_handlers_disconnect_by_data (self->film, self);
  g_set_object (&self->film, film);
  for (guint i = 0; i < G_N_ELEMENTS (parts); i++)
    desk_section_close_lines (self->sections[i]);
  if (film)
    {
      g_signal_connect_swapped (film, "edited", G_CALLBACK (fill_soon), self);
      g_signal_connect_swapped (film, "tallied", G_CALLBACK (fill_soon), self);
      g_signal_connect_swapped (film, "state-changed", G_CALLBACK (fill_soon), self);
    }
  fill (self);
}

static DeskLine *
find_line (GtkWidget *widget, const DeskField *field)
{
  DeskLine *found = NULL;
  if (DESK_IS_LINE (widget))
    {
      const DeskField *own = desk_line_get_field (DESK_LINE (widget));
      return own->id == field->id && own->group == field->group && own->index == field->index && own->band == field->band
                 ? DESK_LINE (widget)
                 : NULL;
    }
  if (!GTK_IS_CONTAINER (widget))
    return NULL;
  g_autoptr (GList) children = gtk_container_get_children (GTK_CONTAINER (widget));
  for (GList *l = children; l && !found; l = l->next)
    found = find_line (l->data, field);
  return found;
}

void
desk_ledger_open_field (DeskLedger *self, DeskField field)
{
  DeskLine *line = find_line (self->box, &field);
  if (line)
    desk_line_open (line); /* the focus scrolls it into view */
}

static void
desk_ledger_dispose (GObject *object)
{
  DeskLedger *self = DESK_LEDGER (object);
  g_clear_handle_id (&self->idle, g_source_remove);
  if (self->film)
    g_signal_handlers_disconnect_by_data (self->film, self);
  g_clear_object (&self->film);
  g_clear_object (&self->history);
  G_OBJECT_CLASS (desk_ledger_parent_class)->dispose (object);
}

static void
desk_ledger_class_init (DeskLedgerClass *class)
{
  G_OBJECT_CLASS (class)->dispose = desk_ledger_dispose;
  gtk_widget_class_set_css_name (GTK_WIDGET_CLASS (class), "ledger");
}

static void
desk_ledger_init (DeskLedger *self)
{
  self->box = gtk_box_new (GTK_ORIENTATION_VERTICAL, 0);
  gtk_style_context_add_class (gtk_widget_get_style_context (self->box), "desk-account");
  for (guint i = 0; i < G_N_ELEMENTS (parts); i++)
    {
      self->sections[i] = desk_section_new (_(parts[i].title));
      g_signal_connect (self->sections[i], "line-added", G_CALLBACK (on_line_added), self);
      gtk_container_add (GTK_CONTAINER (self->box), GTK_WIDGET (self->sections[i]));
    }
  gtk_container_add (GTK_CONTAINER (self), self->box);
  gtk_container_set_focus_vadjustment (GTK_CONTAINER (self->box),
                                       gtk_scrolled_window_get_vadjustment (GTK_SCROLLED_WINDOW (self)));
  gtk_widget_show_all (self->box);
}

GtkWidget *
desk_ledger_new (DeskHistory *history)
{
  DeskLedger *self
      = g_object_new (DESK_TYPE_LEDGER, "hscrollbar-policy", GTK_POLICY_NEVER, "width-request", 300, "visible", TRUE, NULL);
  self->history = g_object_ref (history);
  atk_object_set_name (gtk_widget_get_accessible (GTK_WIDGET (self)), _("Ledger"));
  return GTK_WIDGET (self);
}
