#include "desk-history.h"

struct _DeskHistory {
  GObject parent;
  GPtrArray *done, *undone;
};

G_DEFINE_TYPE (DeskHistory, desk_history, G_TYPE_OBJECT)

enum { CHANGED, WENT_TO, N_SIGNALS };
static guint signals[N_SIGNALS];

static void
desk_history_finalize (GObject *object)
{
  DeskHistory *self = DESK_HISTORY (object);
  g_ptr_array_unref (self->done);
  g_ptr_array_unref (self->undone);
  G_OBJECT_CLASS (desk_history_parent_class)->finalize (object);
}

static void
desk_history_class_init (DeskHistoryClass *class)
{
  GType type = G_TYPE_FROM_CLASS (class);
  G_OBJECT_CLASS (class)->finalize = desk_history_finalize;
  signals[CHANGED] = g_signal_new ("changed", type, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
  signals[WENT_TO] = g_signal_new ("went-to", type, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 1, DESK_TYPE_FILM);
}

static void
desk_history_init (DeskHistory *self)
{
  self->done = g_ptr_array_new_with_free_func (g_object_unref);
  self->undone = g_ptr_array_new_with_free_func (g_object_unref);
}

DeskHistory *
desk_history_new (void)
{
  return g_object_new (DESK_TYPE_HISTORY, NULL);
}

void
desk_history_run (DeskHistory *self, DeskCommand *command)
{
  g_ptr_array_set_size (self->undone, 0);
  g_ptr_array_add (self->done, command);
  desk_command_run (command);
  g_signal_emit (self, signals[CHANGED], 0);
}

static void
move_last (DeskHistory *self, GPtrArray *from, GPtrArray *to, void (*act) (DeskCommand *))
{
  if (from->len == 0)
    return;
  DeskCommand *command = g_ptr_array_steal_index (from, from->len - 1);
  g_ptr_array_add (to, command);
  act (command);
  g_signal_emit (self, signals[WENT_TO], 0, desk_command_get_film (command));
  g_signal_emit (self, signals[CHANGED], 0);
}

void
desk_history_undo (DeskHistory *self)
{
  move_last (self, self->done, self->undone, desk_command_undo);
}

void
desk_history_redo (DeskHistory *self)
{
  move_last (self, self->undone, self->done, desk_command_run);
}

static const char *
last_name (GPtrArray *commands)
{
  return commands->len ? desk_command_get_name (commands->pdata[commands->len - 1]) : NULL;
}

const char *
desk_history_get_undo_name (DeskHistory *self)
{
  return last_name (self->done);
}

const char *
desk_history_get_redo_name (DeskHistory *self)
{
  return last_name (self->undone);
}

void
desk_history_edit (DeskHistory *self, DeskFilm *film, const char *name, BtFilm *bt_film, const BtRecipe *recipe,
                   gboolean same_tally)
{
  DeskEdition *now = desk_film_get_edition (film);
  if (!bt_film && (!recipe || bt_recipe_equal (recipe, desk_edition_get_recipe (now))))
    {
      desk_film_preview (film, NULL);
      return;
    }
  g_autoptr (DeskEdition) next = desk_edition_new (bt_film ? bt_film : desk_edition_get_film (now),
                                                   recipe ? recipe : desk_edition_get_recipe (now));
  if (same_tally)
    desk_edition_set_tally (next, desk_edition_get_tally (now));
  desk_history_run (self, desk_command_edit_new (name, film, next));
}
