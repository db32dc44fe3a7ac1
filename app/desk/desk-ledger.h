/* Ledger: the account of the film on the bench. */
#pragma once

#include <gtk/gtk.h>

#include "desk-history.h"
#include "desk-section.h"

G_BEGIN_DECLS

#define DESK_TYPE_LEDGER (desk_ledger_get_type ())
G_DECLARE_FINAL_TYPE (DeskLedger, desk_ledger, DESK, LEDGER, GtkScrolledWindow)

GtkWidget *desk_ledger_new (DeskHistory *history);
/* (nullable) */
void desk_ledger_set_film (DeskLedger *self, DeskFilm *film);
/* Opens a line for editing and brings it into view. */
void desk_ledger_open_field (DeskLedger *self, DeskField field);

/* What the sections are filled from. @tally may be NULL. */
typedef struct {
  DeskFilm *desk_film;
  BtFilm *film;
  const BtRecipe *recipe;
  BtTally *tally;
} DeskAccount;

void desk_ledger_fill_film (DeskSection *section, const DeskAccount *account);
void desk_ledger_fill_path (DeskSection *section, const DeskAccount *account);
void desk_ledger_fill_tail (DeskSection *section, const DeskAccount *account);
void desk_ledger_fill_bands (DeskSection *section, const DeskAccount *account);
void desk_ledger_fill_fraction (DeskSection *section, const DeskAccount *account);
void desk_ledger_fill_readings (DeskSection *section, const DeskAccount *account);
void desk_ledger_fill_flags (DeskSection *section, const DeskAccount *account);
void desk_ledger_fill_verdict (DeskSection *section, const DeskAccount *account);

G_END_DECLS
