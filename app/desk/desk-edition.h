/* Edition: a film and its recipe as they stood at one moment, with the tally that followed from them. An edition never changes
 * once it is made: an edit makes the next one, undo goes back to the one before, and a fit in another thread may keep one. */
#pragma once

#include <bandtally/bandtally.h>

G_BEGIN_DECLS

typedef struct _DeskEdition DeskEdition;

/* Keeps a reference of @film, which nobody may change from then on, and a copy of @recipe. */
DeskEdition *desk_edition_new (BtFilm *film, const BtRecipe *recipe);
DeskEdition *desk_edition_ref (DeskEdition *self);
void desk_edition_unref (DeskEdition *self);
BtFilm *desk_edition_get_film (DeskEdition *self);
const BtRecipe *desk_edition_get_recipe (DeskEdition *self);
/* (nullable): once the whole fit is done. Main thread only. */
BtTally *desk_edition_get_tally (DeskEdition *self);
void desk_edition_set_tally (DeskEdition *self, BtTally *tally);

G_DEFINE_AUTOPTR_CLEANUP_FUNC (DeskEdition, desk_edition_unref)
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtRecipe, bt_recipe_free)
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtTally, bt_tally_unref)
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtFigure, bt_figure_free)
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtReport, bt_report_free)

G_END_DECLS
