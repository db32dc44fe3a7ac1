#include "desk-section.h"

/* How lines look whose numbers are of an earlier fit. */
#define AWAITED_OPACITY 0.45

struct _DeskSection {
  GtkBox parent;
  GtkWidget *title, *box;
  GHashTable *lines; /* key -> widget */
  GHashTable *touched;
  int next;
};

G_DEFINE_TYPE (DeskSection, desk_section, GTK_TYPE_BOX)

static guint line_added;

static void
desk_section_finalize (GObject *object)
{
  DeskSection *self = DESK_SECTION (object);
  g_hash_table_unref (self->lines);
  g_hash_table_unref (self->touched);
  G_OBJECT_CLASS (desk_section_parent_class)->finalize (object);
}

static void
desk_section_class_init (DeskSectionClass *class)
{
  G_OBJECT_CLASS (class)->finalize = desk_section_finalize;
  line_added = g_signal_new ("line-added", G_TYPE_FROM_CLASS (class), G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 1,
                             DESK_TYPE_LINE);
}

static void
desk_section_init (DeskSection *self)
{
  gtk_orientable_set_orientation (GTK_ORIENTABLE (self), GTK_ORIENTATION_VERTICAL);
  gtk_style_context_add_class (gtk_widget_get_style_context (GTK_WIDGET (self)), "desk-section");
  self->lines = g_hash_table_new_full (g_str_hash, g_str_equal, g_free, NULL);
  self->touched = g_hash_table_new (NULL, NULL);
  self->title = gtk_label_new (NULL);
  gtk_label_set_xalign (GTK_LABEL (self->title), 0);
  gtk_style_context_add_class (gtk_widget_get_style_context (self->title), "desk-heading");
  atk_object_set_role (gtk_widget_get_accessible (self->title), ATK_ROLE_HEADING);
  self->box = gtk_box_new (GTK_ORIENTATION_VERTICAL, 0);
  gtk_container_add (GTK_CONTAINER (self), self->title);
  gtk_container_add (GTK_CONTAINER (self), self->box);
  gtk_widget_show_all (GTK_WIDGET (self));
}

DeskSection *
desk_section_new (const char *title)
{
  DeskSection *self = g_object_new (DESK_TYPE_SECTION, NULL);
  gtk_label_set_text (GTK_LABEL (self->title), title);
  atk_object_set_name (gtk_widget_get_accessible (GTK_WIDGET (self)), title);
  return self;
}

void
desk_section_begin (DeskSection *self)
{
  g_hash_table_remove_all (self->touched);
  self->next = 0;
}

static void
place (DeskSection *self, GtkWidget *line)
{
  g_hash_table_add (self->touched, line);
  gtk_box_reorder_child (GTK_BOX (self->box), line, self->next++);
}

DeskLine *
desk_section_line (DeskSection *self, const char *name, const char *key_format, ...)
{
  va_list args;
  va_start (args, key_format);
  g_autofree char *key = g_strdup_vprintf (key_format, args);
  va_end (args);
  DeskLine *line = g_hash_table_lookup (self->lines, key);
  if (!line)
    {
      line = desk_line_new ();
      gtk_container_add (GTK_CONTAINER (self->box), GTK_WIDGET (line));
      g_hash_table_insert (self->lines, g_steal_pointer (&key), line);
      g_signal_emit (self, line_added, 0, line);
    }
  desk_line_set_name (line, name);
  gtk_widget_set_opacity (GTK_WIDGET (line), 1);
  place (self, GTK_WIDGET (line));
  return line;
}

DeskLine *
desk_section_field (DeskSection *self, DeskField field)
{
  g_autofree char *title = desk_field_title (&field);
  DeskLine *line = desk_section_line (self, title, "field %d %d %u %d", field.id, field.group, field.index, field.band);
  desk_line_set_field (line, field);
  return line;
}

void
desk_section_sentence (DeskSection *self, const char *icon, const char *sentence)
{
  DeskLine *line = desk_section_line (self, sentence, "sentence %d", self->next);
  desk_line_set_icon (line, icon);
  desk_line_set_sentence (line, sentence);
}

void
desk_section_subheading (DeskSection *self, const char *text)
{
  g_autofree char *key = g_strdup_printf ("subheading %s", text);
  GtkWidget *label = g_hash_table_lookup (self->lines, key);
  if (!label)
    {
      label = gtk_label_new (text);
      gtk_label_set_xalign (GTK_LABEL (label), 0);
      gtk_style_context_add_class (gtk_widget_get_style_context (label), "desk-subheading");
      gtk_container_add (GTK_CONTAINER (self->box), label);
      gtk_widget_show (label);
      g_hash_table_insert (self->lines, g_steal_pointer (&key), label);
    }
  gtk_widget_set_opacity (label, 1);
  place (self, label);
}

void
desk_section_keep_rest (DeskSection *self)
{
  g_autoptr (GList) children = gtk_container_get_children (GTK_CONTAINER (self->box));
  for (GList *l = children; l; l = l->next)
    if (!g_hash_table_contains (self->touched, l->data))
      {
        gtk_widget_set_opacity (l->data, AWAITED_OPACITY);
        place (self, l->data);
      }
}

void
desk_section_end (DeskSection *self)
{
  GHashTableIter iter;
  gpointer line;
  g_hash_table_iter_init (&iter, self->lines);
  while (g_hash_table_iter_next (&iter, NULL, &line))
    if (!g_hash_table_contains (self->touched, line))
      {
        g_hash_table_iter_remove (&iter);
        gtk_widget_destroy (line);
      }
  gtk_widget_set_visible (GTK_WIDGET (self), self->next > 0);
}

void
desk_section_close_lines (DeskSection *self)
{
  GHashTableIter iter;
  gpointer line;
  g_hash_table_iter_init (&iter, self->lines);
  while (g_hash_table_iter_next (&iter, NULL, &line))
    if (DESK_IS_LINE (line))
      desk_line_close (line);
}
