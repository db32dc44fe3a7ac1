/* Tables of a report: columns as wide as what stands in them, and no wider than the page. */
#include "report-private.h"

#include <math.h>

#include "palette.h"

#define GAP 10.0
#define ROW_SPACE 2.6
#define CHIP 5.5
#define BAR_WIDTH 48.0

typedef struct
{
  BtFace face;
  char *text;
  int group;
  double bar;
  PangoLayout *layout;
} Cell;

struct _BtGrid
{
  guint n_columns;
  BtColumnKind *kinds;
  double first_width; /* least, of the first column */
  GArray *cells;
};

typedef struct
{
  BtBlock base;
  BtGrid *grid;
  gboolean head;
  double width;
  double *x, *widths; /* by column */
  double *heights;    /* by row, the head's first */
  double *baselines;  /* by row: all of its cells stand on one line, whatever their size */
} GridBlock;

static void
clear_cell (gpointer data)
{
  Cell *cell = data;

  g_free (cell->text);
  g_clear_object (&cell->layout);
}

BtGrid *
bt_grid_new (guint n_columns, const BtColumnKind *kinds)
{
  BtGrid *grid = g_new0 (BtGrid, 1);

  grid->n_columns = n_columns;
  grid->kinds = g_memdup2 (kinds, n_columns * sizeof *kinds);
  grid->cells = g_array_new (FALSE, FALSE, sizeof (Cell));
  g_array_set_clear_func (grid->cells, clear_cell);
  return grid;
}

void
bt_grid_set_first_width (BtGrid *grid, double width)
{
  grid->first_width = width;
}

void
bt_grid_take_chip (BtGrid *grid, BtFace face, char *text, int group)
{
  Cell cell = { face, text, group, NAN, NULL };

  g_array_append_val (grid->cells, cell);
}

void
bt_grid_take (BtGrid *grid, BtFace face, char *text)
{
  bt_grid_take_chip (grid, face, text, -1);
}

void
bt_grid_take_bar (BtGrid *grid, double share)
{
  Cell cell = { BT_FACE_BODY, NULL, -1, share, NULL };

  g_array_append_val (grid->cells, cell);
}

void
bt_grid_take_pair (BtGrid *grid, const char *label, char *value)
{
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (label));
  bt_grid_take (grid, BT_FACE_BODY, value);
}

void
bt_grid_free (BtGrid *grid)
{
  g_array_unref (grid->cells);
  g_free (grid->kinds);
  g_free (grid);
}

static Cell *
cell_at (const BtGrid *grid, guint row, guint column)
{
  return &g_array_index (grid->cells, Cell, row * grid->n_columns + column);
}

static double
lead (const Cell *cell)
{
  return cell->group >= 0 ? CHIP + 4 : 0;
}

/* Widths of a column unbroken, and broken at every space. */
static void
measure_column (const BtGrid *grid, guint n_rows, guint column, double *natural, double *least)
{
  *natural = column == 0 ? grid->first_width : 0;
  if (grid->kinds[column] == BT_COLUMN_BAR)
    *natural = BAR_WIDTH;
  *least = *natural;
  for (guint row = 0; row < n_rows; row++)
    {
      Cell *cell = cell_at (grid, row, column);

      if (cell->text == NULL)
        continue;
      pango_layout_set_width (cell->layout, -1);
      *natural = fmax (*natural, bt_layout_width_pt (cell->layout) + lead (cell));
      pango_layout_set_wrap (cell->layout, PANGO_WRAP_WORD);
      pango_layout_set_width (cell->layout, 0);
      *least = fmax (*least, bt_layout_width_pt (cell->layout) + lead (cell));
      pango_layout_set_wrap (cell->layout, PANGO_WRAP_WORD_CHAR);
    }
}

/* Narrow columns keep their width and the wide ones are cut to one level, so that numbers stay whole and sentences are broken.
 */
static void
level_out (const double *natural, const double *least, guint n, double room, double *widths)
{
  double low = 0, high = room;

  for (int step = 0; step < 40; step++)
    {
      double level = (low + high) / 2, sum = 0;

      for (guint c = 0; c < n; c++)
        sum += widths[c] = fmin (natural[c], fmax (least[c], level));
      if (sum > room)
        high = level;
      else
        low = level;
    }
  for (guint c = 0; c < n; c++)
    widths[c] = fmin (natural[c], fmax (least[c], low));
}

static void
share_out (GridBlock *self, guint n_rows, gboolean spread)
{
  const BtGrid *grid = self->grid;
  const guint n = grid->n_columns;
  const double room = self->width - GAP * (n - 1);
  g_autofree double *natural = g_new (double, n), *least = g_new (double, n);
  double all = 0, all_least = 0, x = 0, gap = GAP;

  for (guint c = 0; c < n; c++)
    {
      measure_column (grid, n_rows, c, &natural[c], &least[c]);
      all += natural[c];
      all_least += least[c];
    }
  self->base.least = all_least + GAP * (n - 1);
  for (guint c = 0; c < n; c++)
    self->widths[c] = all <= room ? natural[c] : room * least[c] / all_least;
  if (all > room && all_least < room)
    level_out (natural, least, n, room, self->widths);
  if (all <= room && spread && n > 1)
    gap += (room - all) / (n - 1);
  for (guint c = 0; c < n; c++)
    {
      self->x[c] = x;
      x += self->widths[c] + gap;
    }
}

static double
baseline (const Cell *cell)
{
  return (double)pango_layout_get_baseline (cell->layout) / PANGO_SCALE;
}

static void
set_cells (GridBlock *self, guint n_rows)
{
  const BtGrid *grid = self->grid;

  for (guint row = 0; row < n_rows; row++)
    for (guint c = 0; c < grid->n_columns; c++)
      {
        Cell *cell = cell_at (grid, row, c);

        if (cell->text == NULL)
          {
            self->heights[row] = fmax (self->heights[row], 9 + ROW_SPACE);
            continue;
          }
        /* A pango unit more, so that what was measured is not broken by rounding. */
        pango_layout_set_width (cell->layout, (int)ceil ((self->widths[c] - lead (cell)) * PANGO_SCALE) + 1);
        if (grid->kinds[c] == BT_COLUMN_RIGHT)
          pango_layout_set_alignment (cell->layout, PANGO_ALIGN_RIGHT);
        self->baselines[row] = fmax (self->baselines[row], baseline (cell));
      }
  for (guint row = 0; row < n_rows; row++)
    for (guint c = 0; c < grid->n_columns; c++)
      {
        const Cell *cell = cell_at (grid, row, c);

        if (cell->text != NULL)
          self->heights[row] = fmax (self->heights[row],
                                     self->baselines[row] - baseline (cell) + bt_layout_height_pt (cell->layout) + ROW_SPACE);
      }
}

/* Where rows start under a repeated head. */
static double
head_height (const GridBlock *self)
{
  return self->head ? self->heights[0] + 2.5 : 0;
}

static double
grid_height (const BtBlock *block, guint first, guint end)
{
  const GridBlock *self = (const GridBlock *)block;
  double height = head_height (self);

  for (guint i = first; i < end; i++)
    height += self->heights[i + (self->head ? 1 : 0)];
  return height;
}

static void
draw_bar (cairo_t *cr, double share, double width, double height)
{
  const BtPalette *palette = bt_palette_get (BT_THEME_PRINT);

  bt_colour_set (cr, palette->beam, 1);
  cairo_rectangle (cr, 0, (height - ROW_SPACE) / 2 - 2, fmax (0.4, width * CLAMP (share, 0, 1)), 4.5);
  cairo_fill (cr);
}

static void
draw_row (const GridBlock *self, cairo_t *cr, guint row, double y)
{
  for (guint c = 0; c < self->grid->n_columns; c++)
    {
      const Cell *cell = cell_at (self->grid, row, c);

      cairo_save (cr);
      cairo_translate (cr, self->x[c], y + ROW_SPACE / 2);
      if (!isnan (cell->bar))
        draw_bar (cr, cell->bar, self->widths[c], self->heights[row]);
      if (cell->text != NULL)
        {
          if (cell->group >= 0)
            {
              bt_colour_set (cr, bt_palette_get (BT_THEME_PRINT)->group[cell->group], 1);
              cairo_rectangle (cr, 0, self->baselines[row] - CHIP, CHIP, CHIP);
              cairo_fill (cr);
            }
          bt_layout_show (cr, cell->layout, lead (cell), self->baselines[row] - baseline (cell));
        }
      cairo_restore (cr);
    }
}

static void
grid_draw (const BtBlock *block, cairo_t *cr, guint first, guint end)
{
  const GridBlock *self = (const GridBlock *)block;
  double y = head_height (self);

  if (self->head)
    {
      draw_row (self, cr, 0, 0);
      bt_shade_set (cr, BT_SHADE_HAIR);
      cairo_set_line_width (cr, 0.5);
      cairo_move_to (cr, 0, self->heights[0] + 0.75);
      cairo_rel_line_to (cr, self->width, 0);
      cairo_stroke (cr);
    }
  for (guint i = first; i < end; i++)
    {
      guint row = i + (self->head ? 1 : 0);

      draw_row (self, cr, row, y);
      y += self->heights[row];
    }
}

static void
grid_block_free (BtBlock *block)
{
  GridBlock *self = (GridBlock *)block;

  bt_grid_free (self->grid);
  g_free (self->x);
  g_free (self->widths);
  g_free (self->heights);
  g_free (self->baselines);
  g_free (self);
}

BtBlock *
bt_block_new_grid (PangoContext *context, BtGrid *grid, gboolean head, gboolean spread, double width)
{
  GridBlock *self = g_new0 (GridBlock, 1);
  guint n_rows = grid->cells->len / grid->n_columns;

  g_assert (grid->cells->len % grid->n_columns == 0 && n_rows > (head ? 1u : 0u));
  for (guint i = 0; i < grid->cells->len; i++)
    {
      Cell *cell = &g_array_index (grid->cells, Cell, i);

      if (cell->text != NULL)
        cell->layout = bt_report_layout_new (context, cell->face, cell->text, 0);
    }
  self->base
      = (BtBlock){ .n_items = n_rows - (head ? 1 : 0), .height = grid_height, .draw = grid_draw, .free = grid_block_free };
  self->grid = grid;
  self->head = head;
  self->width = width;
  self->x = g_new0 (double, grid->n_columns);
  self->widths = g_new0 (double, grid->n_columns);
  self->heights = g_new0 (double, n_rows);
  self->baselines = g_new0 (double, n_rows);
  share_out (self, n_rows, spread);
  set_cells (self, n_rows);
  return &self->base;
}
