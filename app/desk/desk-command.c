#include "desk-command.h"

typedef struct { char *name; } DeskCommandPrivate;

G_DEFINE_ABSTRACT_TYPE_WITH_PRIVATE (DeskCommand, desk_command, G_TYPE_OBJECT)

static void
desk_command_finalize (GObject *object)
{
  DeskCommandPrivate *priv = desk_command_get_instance_private (DESK_COMMAND (object));
  g_free (priv->name);
  G_OBJECT_CLASS (desk_command_parent_class)->finalize (object);
}

static void
desk_command_class_init (DeskCommandClass *class)
{
  G_OBJECT_CLASS (class)->finalize = desk_command_finalize;
}

static void
desk_command_init (DeskCommand *self)
{
}

void
desk_command_run (DeskCommand *self)
{
  DESK_COMMAND_GET_CLASS (self)->run (self);
}

void
desk_command_undo (DeskCommand *self)
{
  DESK_COMMAND_GET_CLASS (self)->undo (self);
}

const char *
desk_command_get_name (DeskCommand *self)
{
  DeskCommandPrivate *priv = desk_command_get_instance_private (self);
  return priv->name;
}

void
desk_command_set_name (DeskCommand *self, const char *name)
{
  DeskCommandPrivate *priv = desk_command_get_instance_private (self);
  g_free (priv->name);
  priv->name = g_strdup (name);
}

DeskFilm *
desk_command_get_film (DeskCommand *self)
{
  DeskCommandClass *class = DESK_COMMAND_GET_CLASS (self);
  return class->get_film ? class->get_film (self) : NULL;
}
