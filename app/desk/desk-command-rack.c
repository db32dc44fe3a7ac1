/* Films put on the rack and taken off it. */
#include <glib/gi18n.h>

#include "desk-command.h"

#define DESK_TYPE_COMMAND_RACK (desk_command_rack_get_type ())
G_DECLARE_FINAL_TYPE (DeskCommandRack, desk_command_rack, DESK, COMMAND_RACK, DeskCommand)

struct _DeskCommandRack {
  DeskCommand parent;
  GListStore *rack;
  GPtrArray *films;
  gboolean opens;
};

G_DEFINE_TYPE (DeskCommandRack, desk_command_rack, DESK_TYPE_COMMAND)

static void
put_on (DeskCommandRack *self)
{
  g_list_store_splice (self->rack, g_list_model_get_n_items (G_LIST_MODEL (self->rack)), 0, self->films->pdata,
                       self->films->len);
}

static void
take_off (DeskCommandRack *self)
{
  for (guint i = 0; i < self->films->len; i++)
    {
      guint position;
      if (g_list_store_find (self->rack, self->films->pdata[i], &position))
        g_list_store_remove (self->rack, position);
    }
}

static void
rack_run (DeskCommand *command)
{
  DeskCommandRack *self = DESK_COMMAND_RACK (command);
  (self->opens ? put_on : take_off) (self);
}

static void
rack_undo (DeskCommand *command)
{
  DeskCommandRack *self = DESK_COMMAND_RACK (command);
  (self->opens ? take_off : put_on) (self);
}

static DeskFilm *
rack_get_film (DeskCommand *command)
{
  DeskCommandRack *self = DESK_COMMAND_RACK (command);
  return self->films->len ? self->films->pdata[0] : NULL;
}

static void
desk_command_rack_finalize (GObject *object)
{
  DeskCommandRack *self = DESK_COMMAND_RACK (object);
  g_object_unref (self->rack);
  g_ptr_array_unref (self->films);
  G_OBJECT_CLASS (desk_command_rack_parent_class)->finalize (object);
}

static void
desk_command_rack_class_init (DeskCommandRackClass *class)
{
  G_OBJECT_CLASS (class)->finalize = desk_command_rack_finalize;
  DESK_COMMAND_CLASS (class)->run = rack_run;
  DESK_COMMAND_CLASS (class)->undo = rack_undo;
  DESK_COMMAND_CLASS (class)->get_film = rack_get_film;
}

static void
desk_command_rack_init (DeskCommandRack *self)
{
}

static DeskCommand *
rack_new (const char *name, GListStore *rack, GPtrArray *films, gboolean opens)
{
  DeskCommandRack *self = g_object_new (DESK_TYPE_COMMAND_RACK, NULL);
  desk_command_set_name (DESK_COMMAND (self), name);
  self->rack = g_object_ref (rack);
  self->films = g_ptr_array_ref (films);
  self->opens = opens;
  return DESK_COMMAND (self);
}

DeskCommand *
desk_command_open_new (GListStore *rack, GPtrArray *films)
{
  g_autofree char *name = g_strdup_printf (ngettext ("Open %u film", "Open %u films", films->len), films->len);
  return rack_new (name, rack, films, TRUE);
}

DeskCommand *
desk_command_close_new (GListStore *rack, GPtrArray *films)
{
  g_autofree char *name = g_strdup_printf (ngettext ("Take %u film off", "Take %u films off", films->len), films->len);
  return rack_new (name, rack, films, FALSE);
}
