/* The window's actions on what is seen, not on what is. */
#include <glib/gi18n.h>

#include "desk-window-private.h"

static void
act_undo (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_history_undo (DESK_WINDOW (window)->history);
}

static void
act_redo (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_history_redo (DESK_WINDOW (window)->history);
}

static void
act_zoom_in (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_bench_zoom (DESK_BENCH (DESK_WINDOW (window)->bench), 1.25);
}

static void
act_zoom_out (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_bench_zoom (DESK_BENCH (DESK_WINDOW (window)->bench), 0.8);
}

static void
act_zoom_all (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_bench_zoom_all (DESK_BENCH (DESK_WINDOW (window)->bench));
}

static void
change_quantity (GSimpleAction *action, GVariant *state, gpointer window)
{
  gboolean alpha = g_str_equal (g_variant_get_string (state, NULL), "alpha");
  g_simple_action_set_state (action, state);
  desk_bench_set_quantity (DESK_BENCH (DESK_WINDOW (window)->bench), alpha ? BT_QUANTITY_ALPHA : BT_QUANTITY_ABSORBANCE);
}

static void
act_toggle_quantity (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  g_autoptr (GVariant) state = g_action_group_get_action_state (G_ACTION_GROUP (window), "quantity");
  gboolean alpha = g_str_equal (g_variant_get_string (state, NULL), "alpha");
  g_action_group_change_action_state (G_ACTION_GROUP (window), "quantity", g_variant_new_string (alpha ? "absorbance" : "alpha"));
}

static void
act_next_film (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_rack_step (DESK_RACK (DESK_WINDOW (window)->rack), 1);
}

static void
act_previous_film (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_rack_step (DESK_RACK (DESK_WINDOW (window)->rack), -1);
}

/* From rack to bench to ledger and round. */
static void
act_next_part (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  GtkWidget *parts[] = { self->rack, self->bench, self->ledger };
  GtkWidget *focus = gtk_window_get_focus (GTK_WINDOW (self));
  guint next = 0;
  for (guint i = 0; focus && i < G_N_ELEMENTS (parts); i++)
    if (focus == parts[i] || gtk_widget_is_ancestor (focus, parts[i]))
      next = (i + 1) % G_N_ELEMENTS (parts);
  gtk_widget_child_focus (parts[next], GTK_DIR_TAB_FORWARD);
}

static void
act_menu (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  gtk_button_clicked (GTK_BUTTON (DESK_WINDOW (window)->menu_button));
}

static void
act_cancel_fits (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_fitter_cancel_all (DESK_WINDOW (window)->fitter);
}

static void
act_refit (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_film_refit (DESK_WINDOW (window)->film);
}

void
desk_window_add_view_actions (DeskWindow *self)
{
  static const GActionEntry entries[] = {
    { .name = "undo", .activate = act_undo },
    { .name = "redo", .activate = act_redo },
    { .name = "zoom-in", .activate = act_zoom_in },
    { .name = "zoom-out", .activate = act_zoom_out },
    { .name = "zoom-all", .activate = act_zoom_all },
    { .name = "quantity", .parameter_type = "s", .state = "'alpha'", .change_state = change_quantity },
    { .name = "toggle-quantity", .activate = act_toggle_quantity },
    { .name = "next-film", .activate = act_next_film },
    { .name = "previous-film", .activate = act_previous_film },
    { .name = "next-part", .activate = act_next_part },
    { .name = "menu", .activate = act_menu },
    { .name = "cancel-fits", .activate = act_cancel_fits },
    { .name = "refit", .activate = act_refit },
  };
  g_action_map_add_action_entries (G_ACTION_MAP (self), entries, G_N_ELEMENTS (entries), self);
}
