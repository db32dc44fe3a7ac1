/* Command: what a user did, as an object that can do it, undo it and name it. */
#pragma once

#include "desk-film.h"

G_BEGIN_DECLS

#define DESK_TYPE_COMMAND (desk_command_get_type ())
G_DECLARE_DERIVABLE_TYPE (DeskCommand, desk_command, DESK, COMMAND, GObject)

struct _DeskCommandClass {
  GObjectClass parent;
  void (*run) (DeskCommand *self);
  void (*undo) (DeskCommand *self);
  DeskFilm *(*get_film) (DeskCommand *self);
};

/* Does it, for the first time or again. */
void desk_command_run (DeskCommand *self);
void desk_command_undo (DeskCommand *self);
/* Translated, for the menu: "Set thickness". */
const char *desk_command_get_name (DeskCommand *self);
void desk_command_set_name (DeskCommand *self, const char *name);
/* (nullable): the film to look at after it. */
DeskFilm *desk_command_get_film (DeskCommand *self);

/* Gives @film another edition: every edit of a film or of its recipe. */
DeskCommand *desk_command_edit_new (const char *name, DeskFilm *film, DeskEdition *edition);
/* Puts films (element-type DeskFilm) on the rack, or takes them off. */
DeskCommand *desk_command_open_new (GListStore *rack, GPtrArray *films);
DeskCommand *desk_command_close_new (GListStore *rack, GPtrArray *films);
/* Takes over @commands (element-type DeskCommand), which were not run yet; @film is the one to look at. */
DeskCommand *desk_command_group_new (const char *name, DeskFilm *film, GPtrArray *commands);

G_END_DECLS
