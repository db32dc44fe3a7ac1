/* The window's actions that edit the film on the bench. */
#include <glib/gi18n.h>
#include <string.h>

#include "desk-recipe.h"
#include "desk-window-private.h"

static BtRecipe *
own_recipe (DeskWindow *self)
{
  return bt_recipe_copy (desk_edition_get_recipe (desk_film_get_edition (self->film)));
}

static void
edit_recipe (DeskWindow *self, const char *name, const BtRecipe *recipe)
{
  g_autoptr (GError) error = NULL;
  if (bt_recipe_check (recipe, &error))
    desk_history_edit (self->history, self->film, name, NULL, recipe, FALSE);
  else
    desk_window_say (self, GTK_MESSAGE_WARNING, error->message);
}

static const char *
field_command (BtBandField field, gboolean hold)
{
  switch (field)
    {
    case BT_BAND_CENTRE:
      return hold ? _("Hold centre of %s") : _("Release centre of %s");
    case BT_BAND_FWHM:
      return hold ? _("Hold width of %s") : _("Release width of %s");
    case BT_BAND_HEIGHT:
      break;
    }
  return hold ? _("Hold height of %s") : _("Release height of %s");
}

static void
hold_or_release (DeskWindow *self, GVariant *parameter, gboolean hold)
{
  const char *group_name;
  guint32 index;
  gint32 number;
  BtGroup group;
  g_variant_get (parameter, "(&sui)", &group_name, &index, &number);
  if (!self->film || !bt_group_from_name (group_name, &group) || number < 0 || number > BT_BAND_HEIGHT)
    return;
  BtBandField field = (BtBandField) number;
  const BtBand *band = desk_tally_find_band (desk_film_get_tally (self->film), group, index);
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  g_autofree char *name = g_strdup_printf (field_command (field, hold), bt_group_name (group));
  if (!hold)
    bt_recipe_release (recipe, group, index, field);
  else if (band)
    bt_recipe_hold (recipe, group, index, field,
                    field == BT_BAND_CENTRE ? band->centre_ev : field == BT_BAND_FWHM ? band->fwhm_ev : band->height);
  edit_recipe (self, name, recipe);
}

static void
act_hold (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  hold_or_release (window, parameter, TRUE);
}

static void
act_release (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  hold_or_release (window, parameter, FALSE);
}

static void
act_release_all (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  if (!self->film)
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  g_array_set_size (recipe->held, 0);
  edit_recipe (self, _("Release all numbers"), recipe);
}

static void
act_max_bands (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  const char *group_name;
  guint32 most;
  BtGroup group;
  g_variant_get (parameter, "(&su)", &group_name, &most);
  if (!self->film || !bt_group_from_name (group_name, &group) || most > BT_RECIPE_MAX_BANDS)
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  g_autofree char *name = g_strdup_printf (_("Set number of %s bands"), bt_group_name (group));
  recipe->max_bands[group] = most;
  desk_recipe_release_from (recipe, group, most);
  edit_recipe (self, name, recipe);
}

static void
act_include_range (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  guint index = g_variant_get_uint32 (parameter);
  if (!self->film || index >= desk_film_get_recipe (self->film)->excluded->len)
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  g_array_remove_index (recipe->excluded, index);
  edit_recipe (self, _("Fit a range again"), recipe);
}

static void
act_include_all (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  if (!self->film)
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  g_array_set_size (recipe->excluded, 0);
  edit_recipe (self, _("Fit all ranges again"), recipe);
}

static void
act_propose_window (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  if (!self->film)
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  recipe->window.mean_nm = recipe->window.spread_nm = 0;
  edit_recipe (self, _("Propose diameters from the data"), recipe);
}

static void
act_light_path (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  BtLightPathKind kind;
  if (!self->film || !bt_light_path_from_name (g_variant_get_string (parameter, NULL), &kind))
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  recipe->light_path.kind = kind;
  edit_recipe (self, _("Choose light path"), recipe);
}

static void
act_step_correction (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  BtStepCorrection correction;
  if (!self->film || !bt_step_correction_from_name (g_variant_get_string (parameter, NULL), &correction))
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  recipe->step_correction = correction;
  edit_recipe (self, _("Choose correction of detector steps"), recipe);
}

static void
act_toggle_tail (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  BtTailKind kind;
  if (!self->film || !bt_tail_from_name (g_variant_get_string (parameter, NULL), &kind))
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  recipe->tails ^= 1u << kind;
  edit_recipe (self, recipe->tails >> kind & 1 ? _("Use tail") : _("Leave tail out"), recipe);
  /* A tail that could not be left out: its box must show it again. */
  g_signal_emit_by_name (self->film, "edited");
}

static void
act_set_thickness (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_ledger_open_field (DESK_LEDGER (DESK_WINDOW (window)->ledger), (DeskField){ .id = DESK_FIELD_THICKNESS });
}

static void
act_set_limit (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_ledger_open_field (DESK_LEDGER (DESK_WINDOW (window)->ledger), (DeskField){ .id = DESK_FIELD_LIMIT });
}

static void
act_remove_blank (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  if (!self->film)
    return;
  g_autoptr (BtFilm) film = bt_film_copy (desk_film_get_film (self->film));
  bt_film_set_blank (film, NULL);
  desk_history_edit (self->history, self->film, _("Remove blank"), film, NULL, FALSE);
}

static void
act_close_film (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  g_autoptr (GPtrArray) films = g_ptr_array_new_with_free_func (g_object_unref);
  g_ptr_array_add (films, g_object_ref (self->film));
  desk_history_run (self->history, desk_command_close_new (self->films, films));
}

/* Every film gets the recipe of the one on the bench, but for what is held of its own bands and ranges left out. */
static void
act_recipe_to_all (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  g_autoptr (GPtrArray) commands = g_ptr_array_new ();
  guint n = g_list_model_get_n_items (G_LIST_MODEL (self->films));
  for (guint i = 0; i < n; i++)
    {
      g_autoptr (DeskFilm) film = g_list_model_get_item (G_LIST_MODEL (self->films), i);
      const BtRecipe *own = desk_edition_get_recipe (desk_film_get_edition (film));
      if (film == self->film)
        continue;
      g_autoptr (BtRecipe) recipe = own_recipe (self);
      g_array_unref (recipe->held);
      g_array_unref (recipe->excluded);
      recipe->held = g_array_copy (own->held);
      recipe->excluded = g_array_copy (own->excluded);
      if (bt_recipe_equal (own, recipe))
        continue;
      g_autoptr (DeskEdition) edition = desk_edition_new (desk_film_get_film (film), recipe);
      g_ptr_array_add (commands, desk_command_edit_new (NULL, film, edition));
    }
  if (commands->len)
    desk_history_run (self->history, desk_command_group_new (_("Give all films this recipe"), self->film, commands));
}

void
desk_window_add_edit_actions (DeskWindow *self)
{
  static const GActionEntry entries[] = {
    { .name = "hold", .parameter_type = "(sui)", .activate = act_hold },
    { .name = "release", .parameter_type = "(sui)", .activate = act_release },
    { .name = "release-all", .activate = act_release_all },
    { .name = "max-bands", .parameter_type = "(su)", .activate = act_max_bands },
    { .name = "include-range", .parameter_type = "u", .activate = act_include_range },
    { .name = "include-all", .activate = act_include_all },
    { .name = "propose-window", .activate = act_propose_window },
    { .name = "light-path", .parameter_type = "s", .activate = act_light_path },
    { .name = "step-correction", .parameter_type = "s", .activate = act_step_correction },
    { .name = "toggle-tail", .parameter_type = "s", .activate = act_toggle_tail },
    { .name = "set-thickness", .activate = act_set_thickness },
    { .name = "set-limit", .activate = act_set_limit },
    { .name = "remove-blank", .activate = act_remove_blank },
    { .name = "close-film", .activate = act_close_film },
    { .name = "recipe-to-all", .activate = act_recipe_to_all },
  };
  g_action_map_add_action_entries (G_ACTION_MAP (self), entries, G_N_ELEMENTS (entries), self);
  g_autoptr (GPropertyAction) mark = g_property_action_new ("mark", self->bench, "mark-mode");
  g_action_map_add_action (G_ACTION_MAP (self), G_ACTION (mark));
}
