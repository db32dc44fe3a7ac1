#include "desk-command.h"

#define DESK_TYPE_COMMAND_EDIT (desk_command_edit_get_type ())
G_DECLARE_FINAL_TYPE (DeskCommandEdit, desk_command_edit, DESK, COMMAND_EDIT, DeskCommand)

struct _DeskCommandEdit {
  DeskCommand parent;
  DeskFilm *film;
  DeskEdition *before, *after;
};

G_DEFINE_TYPE (DeskCommandEdit, desk_command_edit, DESK_TYPE_COMMAND)

static void
edit_run (DeskCommand *command)
{
  DeskCommandEdit *self = DESK_COMMAND_EDIT (command);
  desk_film_set_edition (self->film, self->after);
}

static void
edit_undo (DeskCommand *command)
{
  DeskCommandEdit *self = DESK_COMMAND_EDIT (command);
  desk_film_set_edition (self->film, self->before);
}

static DeskFilm *
edit_get_film (DeskCommand *command)
{
  return DESK_COMMAND_EDIT (command)->film;
}

static void
desk_command_edit_finalize (GObject *object)
{
  DeskCommandEdit *self = DESK_COMMAND_EDIT (object);
  g_object_unref (self->film);
  desk_edition_unref (self->before);
  desk_edition_unref (self->after);
  G_OBJECT_CLASS (desk_command_edit_parent_class)->finalize (object);
}

static void
desk_command_edit_class_init (DeskCommandEditClass *class)
{
  G_OBJECT_CLASS (class)->finalize = desk_command_edit_finalize;
  DESK_COMMAND_CLASS (class)->run = edit_run;
  DESK_COMMAND_CLASS (class)->undo = edit_undo;
  DESK_COMMAND_CLASS (class)->get_film = edit_get_film;
}

static void
desk_command_edit_init (DeskCommandEdit *self)
{
}

DeskCommand *
desk_command_edit_new (const char *name, DeskFilm *film, DeskEdition *edition)
{
  DeskCommandEdit *self = g_object_new (DESK_TYPE_COMMAND_EDIT, NULL);
  desk_command_set_name (DESK_COMMAND (self), name);
  self->film = g_object_ref (film);
  self->before = desk_edition_ref (desk_film_get_edition (film));
  self->after = desk_edition_ref (edition);
  return DESK_COMMAND (self);
}
