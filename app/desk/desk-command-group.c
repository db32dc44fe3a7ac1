/* Several commands as one. */
#include "desk-command.h"

#define DESK_TYPE_COMMAND_GROUP (desk_command_group_get_type ())
G_DECLARE_FINAL_TYPE (DeskCommandGroup, desk_command_group, DESK, COMMAND_GROUP, DeskCommand)

struct _DeskCommandGroup {
  DeskCommand parent;
  DeskFilm *film;
  GPtrArray *commands;
};

G_DEFINE_TYPE (DeskCommandGroup, desk_command_group, DESK_TYPE_COMMAND)

static void
group_run (DeskCommand *command)
{
  DeskCommandGroup *self = DESK_COMMAND_GROUP (command);
  for (guint i = 0; i < self->commands->len; i++)
    desk_command_run (self->commands->pdata[i]);
}

static void
group_undo (DeskCommand *command)
{
  DeskCommandGroup *self = DESK_COMMAND_GROUP (command);
  for (guint i = self->commands->len; i > 0; i--)
    desk_command_undo (self->commands->pdata[i - 1]);
}

static DeskFilm *
group_get_film (DeskCommand *command)
{
  return DESK_COMMAND_GROUP (command)->film;
}

static void
desk_command_group_finalize (GObject *object)
{
  DeskCommandGroup *self = DESK_COMMAND_GROUP (object);
  g_object_unref (self->film);
  g_ptr_array_unref (self->commands);
  G_OBJECT_CLASS (desk_command_group_parent_class)->finalize (object);
}

static void
desk_command_group_class_init (DeskCommandGroupClass *class)
{
  G_OBJECT_CLASS (class)->finalize = desk_command_group_finalize;
  DESK_COMMAND_CLASS (class)->run = group_run;
  DESK_COMMAND_CLASS (class)->undo = group_undo;
  DESK_COMMAND_CLASS (class)->get_film = group_get_film;
}

static void
desk_command_group_init (DeskCommandGroup *self)
{
  self->commands = g_ptr_array_new_with_free_func (g_object_unref);
}

DeskCommand *
desk_command_group_new (const char *name, DeskFilm *film, GPtrArray *commands)
{
  DeskCommandGroup *self = g_object_new (DESK_TYPE_COMMAND_GROUP, NULL);
  desk_command_set_name (DESK_COMMAND (self), name);
  self->film = g_object_ref (film);
  for (guint i = 0; i < commands->len; i++)
    g_ptr_array_add (self->commands, commands->pdata[i]);
  return DESK_COMMAND (self);
}
