/* What the window's own files share: building and titles (desk-window.c), actions on the film (desk-window-edit.c), opening
 * (desk-open.c), saving (desk-save.c), printing (desk-print.c). */
#pragma once

#include "desk-bench.h"
#include "desk-fitter.h"
#include "desk-history.h"
#include "desk-ledger.h"
#include "desk-notice.h"
#include "desk-rack.h"
#include "desk-window.h"

struct _DeskWindow {
  GtkApplicationWindow parent;
  DeskHistory *history;
  DeskFitter *fitter;
  GListStore *films;
  DeskFilm *film; /* on the bench; nullable */
  GtkWidget *header, *undo_button, *redo_button, *menu_button, *notice_place, *pages, *panes, *rack_place, *right_panes, *bench_place, *quantity_alpha,
      *quantity_absorbance, *mark_button;
  GtkWidget *notice, *rack, *bench, *ledger;
  GtkPrintSettings *print_settings;
  GtkPageSetup *page_setup;
  char *folder; /* where files were last chosen; NULL: where the program was started */
};

void desk_window_say (DeskWindow *self, GtkMessageType type, const char *sentence);
void desk_window_update_actions (DeskWindow *self);
void desk_window_set_enabled (DeskWindow *self, const char *action, gboolean enabled);

/* The report's paper that is nearer in shape to the printer's. */
BtPaper desk_paper_of (GtkPageSetup *setup);

/* Lets a file dialog begin where the last one ended. */
void desk_window_begin_in_folder (DeskWindow *self, GtkFileChooser *chooser);
void desk_window_keep_folder (DeskWindow *self, GtkFileChooser *chooser);

/* Each adds the actions of its file. */
void desk_window_add_view_actions (DeskWindow *self);
void desk_window_add_edit_actions (DeskWindow *self);
void desk_window_add_open_actions (DeskWindow *self);
void desk_window_add_reflectance_actions (DeskWindow *self);
void desk_window_add_save_actions (DeskWindow *self);
void desk_window_add_print_actions (DeskWindow *self);
void desk_window_add_check_actions (DeskWindow *self);
void desk_window_accept_drops (DeskWindow *self);
