#include "desk-line.h"

#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

struct _DeskLine {
  GtkGrid parent;
  GtkWidget *icon, *check, *name, *stack, *label, *button, *button_label, *entry, *side, *side_image, *bar, *detail, *error;
  DeskField field;
  char *action, *check_action;
  GMenuModel *choices;
  gulong toggled_handler;
};

G_DEFINE_TYPE (DeskLine, desk_line, GTK_TYPE_GRID)

enum { OPEN, APPLY, N_SIGNALS };
static guint signals[N_SIGNALS];

static void
name_accessibly (GtkWidget *widget, const char *name)
{
  atk_object_set_name (gtk_widget_get_accessible (widget), name);
}

static void
show_error (DeskLine *self, const char *sentence)
{
  GtkStyleContext *style = gtk_widget_get_style_context (self->entry);
  gtk_label_set_text (GTK_LABEL (self->error), sentence ? sentence : "");
  gtk_widget_set_visible (self->error, sentence != NULL);
  if (sentence)
    gtk_style_context_add_class (style, "error");
  else
    gtk_style_context_remove_class (style, "error");
}

gboolean
desk_line_is_open (DeskLine *self)
{
  return gtk_stack_get_visible_child (GTK_STACK (self->stack)) == self->entry;
}

void
desk_line_close (DeskLine *self)
{
  if (!desk_line_is_open (self))
    return;
  gboolean had_focus = gtk_widget_is_focus (self->entry);
  show_error (self, NULL);
  gtk_stack_set_visible_child (GTK_STACK (self->stack), self->button);
  if (had_focus)
    gtk_widget_grab_focus (self->button);
}

void
desk_line_open (DeskLine *self)
{
  g_autofree char *text = NULL;
  if (self->action || self->choices || self->field.id == DESK_FIELD_NONE || desk_line_is_open (self))
    return;
  g_signal_emit (self, signals[OPEN], 0, &text);
  gtk_entry_set_text (GTK_ENTRY (self->entry), text ? text : "");
  gtk_entry_set_placeholder_text (GTK_ENTRY (self->entry), desk_field_empty_hint (&self->field));
  gtk_stack_set_visible_child (GTK_STACK (self->stack), self->entry);
  gtk_widget_grab_focus (self->entry);
}

/* TRUE where the text was taken. */
static gboolean
apply (DeskLine *self)
{
  g_autofree char *sentence = NULL;
  g_autofree char *text = g_strdup (gtk_entry_get_text (GTK_ENTRY (self->entry)));
  g_object_ref (self); /* the ledger may drop the line for what the edit does */
  g_signal_emit (self, signals[APPLY], 0, text, &sentence);
  if (sentence)
    show_error (self, sentence);
  else
    desk_line_close (self);
  gboolean taken = sentence == NULL;
  g_object_unref (self);
  return taken;
}

static void
run_action (DeskLine *self, const char *detailed)
{
  g_autofree char *name = NULL;
  g_autoptr (GVariant) target = NULL;
  GtkWidget *top = gtk_widget_get_toplevel (GTK_WIDGET (self));
  if (!g_action_parse_detailed_name (detailed, &name, &target, NULL))
    g_return_if_reached ();
  if (G_IS_ACTION_GROUP (top))
    g_action_group_activate_action (G_ACTION_GROUP (top), strchr (name, '.') + 1, target);
}

static gboolean
destroy_now (gpointer widget)
{
  gtk_widget_destroy (widget);
  return G_SOURCE_REMOVE;
}

/* The choice made in a popover is acted on after it has closed. */
static void
destroy_soon (GtkWidget *popover, gpointer data)
{
  g_idle_add_full (G_PRIORITY_LOW, destroy_now, g_object_ref (popover), g_object_unref);
}

static void
on_clicked (GtkButton *button, DeskLine *self)
{
  if (self->choices)
    {
      GtkWidget *popover = gtk_popover_new_from_model (GTK_WIDGET (button), self->choices);
      g_signal_connect (popover, "closed", G_CALLBACK (destroy_soon), NULL);
      gtk_popover_popup (GTK_POPOVER (popover));
    }
  else if (self->action)
    run_action (self, self->action);
  else
    desk_line_open (self);
}

static void
on_activate (GtkEntry *entry, DeskLine *self)
{
  apply (self);
}

static gboolean
on_key (GtkWidget *entry, GdkEventKey *event, DeskLine *self)
{
  if (event->keyval != GDK_KEY_Escape)
    return GDK_EVENT_PROPAGATE;
  desk_line_close (self);
  return GDK_EVENT_STOP;
}

static gboolean
on_focus_out (GtkWidget *entry, GdkEventFocus *event, DeskLine *self)
{
  /* Leaving the line keeps what was typed; what cannot be read stays open with its sentence. Another window coming to the front is
   * no leaving. */
  GtkWidget *top = gtk_widget_get_toplevel (entry);
  if (desk_line_is_open (self) && GTK_IS_WINDOW (top) && gtk_window_is_active (GTK_WINDOW (top))
      && gtk_window_get_focus (GTK_WINDOW (top)) != entry)
    apply (self);
  return GDK_EVENT_PROPAGATE;
}

static void
on_changed (GtkEditable *entry, DeskLine *self)
{
  show_error (self, NULL);
}

static void
on_toggled (GtkToggleButton *check, DeskLine *self)
{
  run_action (self, self->check_action);
}

static void
desk_line_finalize (GObject *object)
{
  DeskLine *self = DESK_LINE (object);
  g_free (self->action);
  g_free (self->check_action);
  g_clear_object (&self->choices);
  G_OBJECT_CLASS (desk_line_parent_class)->finalize (object);
}

static gboolean
first_answer (GSignalInvocationHint *hint, GValue *sum, const GValue *answer, gpointer data)
{
  g_value_copy (answer, sum);
  return FALSE;
}

static void
desk_line_class_init (DeskLineClass *class)
{
  GType type = G_TYPE_FROM_CLASS (class);
  G_OBJECT_CLASS (class)->finalize = desk_line_finalize;
  signals[OPEN] = g_signal_new ("open", type, G_SIGNAL_RUN_LAST, 0, first_answer, NULL, NULL, G_TYPE_STRING, 0);
  signals[APPLY]
      = g_signal_new ("apply", type, G_SIGNAL_RUN_LAST, 0, first_answer, NULL, NULL, G_TYPE_STRING, 1, G_TYPE_STRING);
}

static GtkWidget *
wrapping_label (const char *class, float xalign)
{
  GtkWidget *label = gtk_label_new (NULL);
  gtk_label_set_line_wrap (GTK_LABEL (label), TRUE);
  gtk_label_set_line_wrap_mode (GTK_LABEL (label), PANGO_WRAP_WORD_CHAR);
  gtk_label_set_xalign (GTK_LABEL (label), xalign);
  if (class)
    gtk_style_context_add_class (gtk_widget_get_style_context (label), class);
  return label;
}

static void
build_value (DeskLine *self)
{
  self->label = wrapping_label ("desk-value", 1);
  gtk_label_set_selectable (GTK_LABEL (self->label), TRUE);
  gtk_widget_set_can_focus (self->label, FALSE);
  self->button_label = wrapping_label ("desk-value", 1);
  self->button = gtk_button_new ();
  gtk_container_add (GTK_CONTAINER (self->button), self->button_label);
  gtk_button_set_relief (GTK_BUTTON (self->button), GTK_RELIEF_NONE);
  gtk_widget_set_valign (self->button, GTK_ALIGN_CENTER);
  gtk_style_context_add_class (gtk_widget_get_style_context (self->button), "desk-edit");
  self->entry = gtk_entry_new ();
  gtk_entry_set_width_chars (GTK_ENTRY (self->entry), 15);
  gtk_entry_set_alignment (GTK_ENTRY (self->entry), 1);
  gtk_style_context_add_class (gtk_widget_get_style_context (self->entry), "desk-entry");

  self->stack = gtk_stack_new ();
  gtk_stack_set_hhomogeneous (GTK_STACK (self->stack), FALSE);
  gtk_stack_set_vhomogeneous (GTK_STACK (self->stack), FALSE);
  gtk_container_add (GTK_CONTAINER (self->stack), self->label);
  gtk_container_add (GTK_CONTAINER (self->stack), self->button);
  gtk_container_add (GTK_CONTAINER (self->stack), self->entry);
  gtk_widget_set_halign (self->stack, GTK_ALIGN_END);
  gtk_widget_set_valign (self->stack, GTK_ALIGN_BASELINE);

  g_signal_connect (self->button, "clicked", G_CALLBACK (on_clicked), self);
  g_signal_connect (self->entry, "activate", G_CALLBACK (on_activate), self);
  g_signal_connect (self->entry, "key-press-event", G_CALLBACK (on_key), self);
  g_signal_connect (self->entry, "focus-out-event", G_CALLBACK (on_focus_out), self);
  g_signal_connect (self->entry, "changed", G_CALLBACK (on_changed), self);
}

static void
desk_line_init (DeskLine *self)
{
  GtkGrid *grid = GTK_GRID (self);
  gtk_grid_set_column_spacing (grid, 6);
  gtk_style_context_add_class (gtk_widget_get_style_context (GTK_WIDGET (self)), "desk-line");
  self->icon = gtk_image_new ();
  gtk_widget_set_valign (self->icon, GTK_ALIGN_START);
  self->check = gtk_check_button_new ();
  self->name = wrapping_label ("desk-name", 0);
  gtk_widget_set_hexpand (self->name, TRUE);
  gtk_widget_set_valign (self->name, GTK_ALIGN_BASELINE);
  build_value (self);
  self->side = gtk_button_new ();
  self->side_image = gtk_image_new ();
  gtk_container_add (GTK_CONTAINER (self->side), self->side_image);
  gtk_button_set_relief (GTK_BUTTON (self->side), GTK_RELIEF_NONE);
  gtk_widget_set_valign (self->side, GTK_ALIGN_CENTER);
  gtk_style_context_add_class (gtk_widget_get_style_context (self->side), "desk-side");
  self->bar = gtk_level_bar_new_for_interval (0, 1);
  gtk_widget_set_valign (self->bar, GTK_ALIGN_CENTER);
  gtk_style_context_add_class (gtk_widget_get_style_context (self->bar), "desk-bar");
  self->detail = wrapping_label ("desk-detail", 0);
  self->error = wrapping_label ("desk-error", 0);

  gtk_grid_attach (grid, self->icon, 0, 0, 1, 1);
  gtk_grid_attach (grid, self->check, 1, 0, 1, 1);
  gtk_grid_attach (grid, self->name, 2, 0, 1, 1);
  gtk_grid_attach (grid, self->stack, 3, 0, 1, 1);
  gtk_grid_attach (grid, self->side, 4, 0, 1, 1);
  gtk_grid_attach (grid, self->bar, 2, 1, 2, 1);
  gtk_grid_attach (grid, self->detail, 2, 2, 2, 1);
  gtk_grid_attach (grid, self->error, 2, 3, 2, 1);
  gtk_widget_show_all (GTK_WIDGET (self));
  GtkWidget *optional[] = { self->icon, self->check, self->side, self->bar, self->detail, self->error };
  for (guint i = 0; i < G_N_ELEMENTS (optional); i++)
    gtk_widget_hide (optional[i]);
  self->toggled_handler = g_signal_connect (self->check, "toggled", G_CALLBACK (on_toggled), self);
}

DeskLine *
desk_line_new (void)
{
  return g_object_new (DESK_TYPE_LINE, NULL);
}

static void
update_names (DeskLine *self)
{
  const char *name = gtk_label_get_text (GTK_LABEL (self->name));
  const char *value = gtk_label_get_text (GTK_LABEL (self->label));
  g_autofree char *both = g_strdup_printf ("%s: %s", name, value);
  name_accessibly (self->button, both);
  name_accessibly (self->entry, name);
  name_accessibly (self->label, both);
  name_accessibly (self->check, name);
  name_accessibly (self->bar, name);
}

void
desk_line_set_name (DeskLine *self, const char *name)
{
  gtk_label_set_text (GTK_LABEL (self->name), name);
  update_names (self);
}

void
desk_line_set_value (DeskLine *self, const char *format, ...)
{
  va_list args;
  va_start (args, format);
  g_autofree char *value = g_strdup_vprintf (format, args);
  va_end (args);
  gtk_label_set_text (GTK_LABEL (self->label), value);
  gtk_label_set_text (GTK_LABEL (self->button_label), value);
  update_names (self);
}

void
desk_line_set_detail (DeskLine *self, const char *detail)
{
  gtk_label_set_text (GTK_LABEL (self->detail), detail ? detail : "");
  gtk_widget_set_visible (self->detail, detail && *detail);
}

static void
make_pressable (DeskLine *self)
{
  gtk_widget_set_tooltip_text (self->button, self->action || self->choices ? NULL : _("Press to edit"));
  if (!desk_line_is_open (self))
    gtk_stack_set_visible_child (GTK_STACK (self->stack), self->button);
}

void
desk_line_set_field (DeskLine *self, DeskField field)
{
  self->field = field;
  if (desk_field_is_text (&field))
    gtk_entry_set_width_chars (GTK_ENTRY (self->entry), 22);
  make_pressable (self);
}

const DeskField *
desk_line_get_field (DeskLine *self)
{
  return &self->field;
}

void
desk_line_set_action (DeskLine *self, const char *detailed_action)
{
  g_free (self->action);
  self->action = g_strdup (detailed_action);
  make_pressable (self);
}

void
desk_line_set_choices (DeskLine *self, GMenuModel *choices)
{
  g_set_object (&self->choices, choices);
  make_pressable (self);
}

void
desk_line_set_side (DeskLine *self, const char *icon, const char *name, const char *detailed_action)
{
  gtk_widget_set_visible (self->side, icon != NULL);
  if (!icon)
    return;
  gtk_image_set_from_icon_name (GTK_IMAGE (self->side_image), icon, GTK_ICON_SIZE_MENU);
  g_autofree char *action = NULL;
  g_autoptr (GVariant) target = NULL;
  if (!g_action_parse_detailed_name (detailed_action, &action, &target, NULL))
    g_return_if_reached ();
  /* The target first: GTK complains of an action without one in between. */
  gtk_actionable_set_action_target_value (GTK_ACTIONABLE (self->side), target);
  gtk_actionable_set_action_name (GTK_ACTIONABLE (self->side), action);
  gtk_widget_set_tooltip_text (self->side, name);
  name_accessibly (self->side, name);
}

void
desk_line_set_share (DeskLine *self, double share)
{
  gtk_widget_set_visible (self->bar, !isnan (share));
  if (!isnan (share))
    gtk_level_bar_set_value (GTK_LEVEL_BAR (self->bar), CLAMP (share, 0, 1));
}

void
desk_line_set_check_action (DeskLine *self, gboolean active, const char *detailed_action)
{
  g_free (self->check_action);
  self->check_action = g_strdup (detailed_action);
  g_signal_handler_block (self->check, self->toggled_handler);
  gtk_toggle_button_set_active (GTK_TOGGLE_BUTTON (self->check), active);
  g_signal_handler_unblock (self->check, self->toggled_handler);
  gtk_widget_show (self->check);
}

void
desk_line_set_icon (DeskLine *self, const char *icon)
{
  gtk_widget_set_visible (self->icon, icon != NULL);
  if (icon)
    gtk_image_set_from_icon_name (GTK_IMAGE (self->icon), icon, GTK_ICON_SIZE_MENU);
}

void
desk_line_set_sentence (DeskLine *self, const char *sentence)
{
  gtk_label_set_text (GTK_LABEL (self->name), sentence);
  gtk_label_set_selectable (GTK_LABEL (self->name), TRUE);
  gtk_widget_set_can_focus (self->name, FALSE);
  gtk_widget_hide (self->stack);
  name_accessibly (self->name, sentence);
}
