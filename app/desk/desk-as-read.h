/* As read: what a film's file was taken for, beside its first lines as they are. */
#pragma once

#include <gtk/gtk.h>

#include "desk-film.h"

G_BEGIN_DECLS

/* Shows the window over @parent; it goes away with Escape. */
void desk_as_read_show (GtkWindow *parent, BtFilm *film);

G_END_DECLS
