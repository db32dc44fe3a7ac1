#!/usr/bin/python3
"""A small window at the screen's lower right corner from which the files named on the command line can be dragged, all at once."""
import sys

import gi

gi.require_version("Gdk", "3.0")
gi.require_version("Gtk", "3.0")
from gi.repository import Gdk, Gio, Gtk  # noqa: E402

window = Gtk.Window(title="Drag from here")
box = Gtk.EventBox()
box.add(Gtk.Label(label="files"))
box.drag_source_set(Gdk.ModifierType.BUTTON1_MASK, [], Gdk.DragAction.COPY)
box.drag_source_add_uri_targets()
box.connect("drag-data-get", lambda widget, context, data, info, when: data.set_uris([Gio.File.new_for_path(path).get_uri() for path in sys.argv[1:]]))
window.add(box)
window.set_default_size(160, 90)
window.connect("destroy", Gtk.main_quit)
window.show_all()
window.set_keep_above(True)
screen = window.get_screen()
window.move(screen.get_width() - 200, screen.get_height() - 140)
print("ready", flush=True)
Gtk.main()
