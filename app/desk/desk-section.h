/* Section of the ledger: a heading and lines. Filling it again reuses the lines of the same key, so that nothing jumps and an
 * open line stays open. */
#pragma once

#include "desk-line.h"

G_BEGIN_DECLS

#define DESK_TYPE_SECTION (desk_section_get_type ())
G_DECLARE_FINAL_TYPE (DeskSection, desk_section, DESK, SECTION, GtkBox)

/* Signal "line-added" (DeskLine *). */
DeskSection *desk_section_new (const char *title);
void desk_section_begin (DeskSection *self);
/* The line of this key, at the next place, as it was filled before or new. */
DeskLine *desk_section_line (DeskSection *self, const char *name, const char *key_format, ...) G_GNUC_PRINTF (3, 4);
/* The same for editing a field, with its own name. */
DeskLine *desk_section_field (DeskSection *self, DeskField field);
/* A sentence; (nullable) icon. */
void desk_section_sentence (DeskSection *self, const char *icon, const char *sentence);
/* A heading of lesser rank. */
void desk_section_subheading (DeskSection *self, const char *text);
/* Keeps the lines that were not asked for, as they were: their numbers are on the way. */
void desk_section_keep_rest (DeskSection *self);
/* Drops the lines that were not asked for since desk_section_begin(). */
void desk_section_end (DeskSection *self);
void desk_section_close_lines (DeskSection *self);

G_END_DECLS
