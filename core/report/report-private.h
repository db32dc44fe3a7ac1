/* What a report's pages are made of: blocks that know their height, and the flow that puts them on pages. Private to
 * core/report. */
#ifndef BANDTALLY_REPORT_PRIVATE_H
#define BANDTALLY_REPORT_PRIVATE_H

#include <pango/pangocairo.h>

#include <bandtally/bandtally.h>

G_BEGIN_DECLS

typedef enum
{
  BT_FACE_BODY,
  BT_FACE_STRONG,
  BT_FACE_NOTE,
  BT_FACE_HEADING,
  BT_FACE_TITLE,
  BT_FACE_ANSWER,
  BT_FACE_HASH,
  BT_N_FACES
} BtFace;
/* From dark to light; every one of them readable on paper but HAIR, which is for lines. */
typedef enum
{
  BT_SHADE_INK,
  BT_SHADE_GREY,
  BT_SHADE_HAIR
} BtShade;

void bt_shade_set (cairo_t *cr, BtShade shade);
/* For layouts in points whose glyphs stand where they stand on every surface. */
PangoContext *bt_report_context_new (void);
/* (transfer full): @width_pt 0 or less: one line a paragraph. */
PangoLayout *bt_report_layout_new (PangoContext *context, BtFace face, const char *text, double width_pt);
double bt_layout_width_pt (PangoLayout *layout);
double bt_layout_height_pt (PangoLayout *layout);
/* With its top left corner at @x, @y, in the face's own shade. */
void bt_layout_show (cairo_t *cr, PangoLayout *layout, double x, double y);

/**
 * BtBlock:
 * @n_items: parts that a page's end may separate (lines, rows); at least 1
 * @least: width below which words or numbers would be broken
 * @above: space above it, not at a page's top
 * @keep: is not parted from the start of the next block
 * @bottom: stands at the foot of its page
 *
 * A piece of a page, as wide as it was made.
 */
typedef struct _BtBlock BtBlock;
struct _BtBlock
{
  guint n_items;
  double least;
  double above;
  gboolean keep, bottom;
  /* Height of the items from @first up to, not with, @end, with what is repeated above them. */
  double (*height) (const BtBlock *block, guint first, guint end);
  void (*draw) (const BtBlock *block, cairo_t *cr, guint first, guint end);
  void (*free) (BtBlock *block);
};
void bt_block_free (BtBlock *block);
double bt_block_height (const BtBlock *block);

BtBlock *bt_block_new_text (PangoContext *context, BtFace face, const char *text, double width);
/* A hairline with capitals below it. */
BtBlock *bt_block_new_heading (PangoContext *context, const char *text, double width);

/* Draws into @width by @height from the origin. */
typedef void (*BtDrawFunc) (cairo_t *cr, double width, double height, gpointer data);
BtBlock *bt_block_new_drawing (double width, double height, BtDrawFunc draw, gpointer data, GDestroyNotify destroy);

/* Blocks, one under the other (element-type BtBlock). */
typedef GPtrArray BtFlow;
BtFlow *bt_flow_new (void);
/* Takes @block, with this space above it; returns it. */
BtBlock *bt_flow_add (BtFlow *flow, BtBlock *block, double above);
double bt_flow_height (const BtFlow *flow);
/* Of its blocks the greatest. */
double bt_flow_least (const BtFlow *flow);
/* Both beside each other; takes both. */
BtBlock *bt_block_new_pair (BtFlow *left, BtFlow *right, double right_x);

/* A table: cells of text, some with a square in a group's colour before it, and columns of bars. */
typedef enum
{
  BT_COLUMN_LEFT,
  BT_COLUMN_RIGHT,
  BT_COLUMN_BAR
} BtColumnKind;
typedef struct _BtGrid BtGrid;
/* @kinds: (array length=n_columns). */
BtGrid *bt_grid_new (guint n_columns, const BtColumnKind *kinds);
void bt_grid_free (BtGrid *grid);
/* So that tables below each other have their second columns in one line. */
void bt_grid_set_first_width (BtGrid *grid, double width);
/* The next cell, row by row; takes @text. */
void bt_grid_take (BtGrid *grid, BtFace face, char *text);
void bt_grid_take_chip (BtGrid *grid, BtFace face, char *text, int group);
void bt_grid_take_bar (BtGrid *grid, double share);
/* Takes @grid. @head: the first row is a head, repeated on every page; @spread: as wide as @width also where less would do. */
BtBlock *bt_block_new_grid (PangoContext *context, BtGrid *grid, gboolean head, gboolean spread, double width);

/* A flow parted into pages of a height; @flow has to live as long. */
typedef struct _BtPages BtPages;
BtPages *bt_pages_new (BtFlow *flow, double height);
void bt_pages_free (BtPages *pages);
int bt_pages_n (const BtPages *pages);
/* The page's content from the origin down. */
void bt_pages_draw (const BtPages *pages, int page, cairo_t *cr);

/* Everything about a film, for pages this wide and high. */
BtFlow *bt_report_film_flow (PangoContext *context, BtFilm *film, BtTally *tally, const char *date, double width,
                             double height);
/* The sign of a verdict (as pointer in @data), and three lines to write on. */
void bt_report_draw_sign (cairo_t *cr, double width, double height, gpointer data);
/* Cautions, and lines to sign on, at the foot of the page; @cautions ends with NULL. */
void bt_report_add_close (BtFlow *flow, PangoContext *context, const char *const *cautions, double width);
/* Parts of it, each appended to @flow. */
void bt_report_add_bands (BtFlow *flow, PangoContext *context, BtFilm *film, const BtTally *tally, double width);
void bt_report_add_budget (BtFlow *flow, PangoContext *context, const BtTally *tally, double width);
void bt_report_add_tails (BtFlow *flow, PangoContext *context, const BtTally *tally, double width);
void bt_report_add_readings (BtFlow *flow, PangoContext *context, const BtTally *tally, double width);
void bt_report_add_recipe (BtFlow *flow, PangoContext *context, const BtTally *tally, double width);
/* A label and what it stands for; takes @value. */
void bt_grid_take_pair (BtGrid *grid, const char *label, char *value);
/* (transfer full): "400 to 2480 nm, 0.50 to 3.10 eV" */
char *bt_report_range_text (BtRange range);
/* (transfer full): "film (lot)": what a film is called on the edge of a page. */
char *bt_report_film_name (BtFilm *film);

G_END_DECLS

#endif
