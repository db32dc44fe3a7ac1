/* History: the commands done at this desk, and those undone. */
#pragma once

#include "desk-command.h"

G_BEGIN_DECLS

#define DESK_TYPE_HISTORY (desk_history_get_type ())
G_DECLARE_FINAL_TYPE (DeskHistory, desk_history, DESK, HISTORY, GObject)

/* Signals: "changed"; "went-to" (DeskFilm *, nullable): the film that was just acted on by undo or redo. */
DeskHistory *desk_history_new (void);
/* Runs @command (transfer full) and keeps it; what had been undone is forgotten. */
void desk_history_run (DeskHistory *self, DeskCommand *command);
void desk_history_undo (DeskHistory *self);
void desk_history_redo (DeskHistory *self);
/* (nullable): name of what would be undone or redone. */
const char *desk_history_get_undo_name (DeskHistory *self);
const char *desk_history_get_redo_name (DeskHistory *self);

/* Edits @film through a command: @bt_film (nullable) and @recipe (nullable) replace the film's own; %TRUE for @same_tally where
 * neither touches the outcome. Does nothing where nothing differs. */
void desk_history_edit (DeskHistory *self, DeskFilm *film, const char *name, BtFilm *bt_film, const BtRecipe *recipe,
                        gboolean same_tally);

G_END_DECLS
