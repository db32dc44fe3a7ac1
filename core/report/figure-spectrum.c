/* The spectrum's panel and the residual ribbon: reading, tail, bands, their sum. */
#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "figure-private.h"

static void
clip_to (cairo_t *cr, const BtBox *box)
{
  cairo_rectangle (cr, box->x, box->y, box->width, box->height);
  cairo_clip (cr);
}

static void
hatch (BtFigure *figure, cairo_t *cr, double x0, double x1, const BtBox *box)
{
  const double step = figure->view.font_pt * 0.7;

  cairo_save (cr);
  cairo_rectangle (cr, x0, box->y, x1 - x0, box->height);
  cairo_clip (cr);
  bt_colour_set (cr, figure->palette->tail, 0.45);
  cairo_set_line_width (cr, 1);
  for (double x = x0 - box->height; x < x1; x += step)
    {
      cairo_move_to (cr, x, box->y + box->height);
      cairo_rel_line_to (cr, box->height, -box->height);
    }
  cairo_stroke (cr);
  cairo_restore (cr);
}

static void
veil (BtFigure *figure, cairo_t *cr, double low_ev, double high_ev, const BtBox *box)
{
  double x0 = fmax (bt_figure_x_from_ev (figure, low_ev), box->x), x1 = fmin (bt_figure_x_from_ev (figure, high_ev), box->x + box->width);

  if (!(x1 > x0))
    return;
  bt_colour_set (cr, figure->palette->veil, 1);
  cairo_rectangle (cr, x0, box->y, x1 - x0, box->height);
  cairo_fill (cr);
}

void
bt_figure_draw_veils (BtFigure *figure, cairo_t *cr, const BtBox *box)
{
  gsize n;
  const BtRange *saturated = bt_spectrum_get_saturated (bt_film_get_spectrum (figure->film), &n);

  if (figure->tally != NULL && figure->tally->n > 0)
    {
      veil (figure, cr, -1, figure->tally->range.low_ev, box);
      veil (figure, cr, figure->tally->range.high_ev, 100, box);
    }
  for (gsize i = 0; i < n; i++)
    veil (figure, cr, saturated[i].low_ev, saturated[i].high_ev, box);
  for (guint i = 0; figure->recipe != NULL && i < figure->recipe->excluded->len; i++)
    {
      const BtRange *range = &g_array_index (figure->recipe->excluded, BtRange, i);

      veil (figure, cr, range->low_ev, range->high_ev, box);
      hatch (figure, cr, fmax (bt_figure_x_from_ev (figure, range->low_ev), box->x),
             fmin (bt_figure_x_from_ev (figure, range->high_ev), box->x + box->width), box);
    }
}

typedef double (*PointY) (BtFigure *figure, gsize i);

static double
reading_y (BtFigure *figure, gsize i)
{
  return bt_figure_y_from_absorbance (figure, figure->curve->absorbance[i]);
}

static double
residual_y (BtFigure *figure, gsize i)
{
  return bt_figure_residual_y (figure, (figure->tally->absorbance[i] - figure->tally->fit[i]) / figure->tally->noise[i]);
}

/* First of n ascending energies that is not below. */
static gsize
first_from (const double *energy_ev, gsize n, double from_ev)
{
  gsize low = 0, high = n;

  while (low < high)
    {
      gsize middle = (low + high) / 2;

      if (energy_ev[middle] < from_ev)
        low = middle + 1;
      else
        high = middle;
    }
  return low;
}

/* Where the line from point i - 1 to point i crosses the edge of the view. */
static void
line_to_edge (BtFigure *figure, cairo_t *cr, const double *energy_ev, gsize i, double edge_ev, PointY y_of)
{
  double t = (edge_ev - energy_ev[i - 1]) / (energy_ev[i] - energy_ev[i - 1]), y = y_of (figure, i - 1);

  cairo_line_to (cr, bt_figure_x_from_ev (figure, edge_ev), y + t * (y_of (figure, i) - y));
}

/* The line through the points in view and on to its edges, however few they are. Where many points fall on half a unit only the first, lowest,
 * highest and last are drawn. */
static void
path_of_points (BtFigure *figure, cairo_t *cr, const double *energy_ev, gsize n, PointY y_of)
{
  const gsize from = first_from (energy_ev, n, figure->view.low_ev), to = first_from (energy_ev, n, figure->view.high_ev);

  cairo_new_path (cr);
  if (from > 0 && from < n)
    line_to_edge (figure, cr, energy_ev, from, figure->view.low_ev, y_of);
  for (gsize i = from; i < to;)
    {
      double x = bt_figure_x_from_ev (figure, energy_ev[i]), column = floor (2 * x), low, high, last;

      last = low = high = y_of (figure, i);
      cairo_line_to (cr, x, last);
      for (i++; i < to && floor (2 * bt_figure_x_from_ev (figure, energy_ev[i])) <= column; i++)
        {
          last = y_of (figure, i);
          low = fmin (low, last);
          high = fmax (high, last);
        }
      if (high - low > 0.5)
        {
          cairo_line_to (cr, x, low);
          cairo_line_to (cr, x, high);
          cairo_line_to (cr, x, last);
        }
    }
  if (to > 0 && to < n)
    line_to_edge (figure, cr, energy_ev, to, figure->view.high_ev, y_of);
}

/* The points themselves, where they stand far enough apart to be seen. */
static void
draw_points (BtFigure *figure, cairo_t *cr, const double *energy_ev, gsize n, PointY y_of)
{
  const gsize from = first_from (energy_ev, n, figure->view.low_ev), to = first_from (energy_ev, n, figure->view.high_ev);
  const double radius = 0.2 * figure->view.font_pt;

  if (to == from || figure->panels[BT_PANEL_SPECTRUM].width / (double) (to - from) < 5 * radius)
    return;
  for (gsize i = from; i < to; i++)
    {
      cairo_new_sub_path (cr);
      cairo_arc (cr, bt_figure_x_from_ev (figure, energy_ev[i]), y_of (figure, i), radius, 0, 2 * G_PI);
    }
  cairo_fill (cr);
}

static void
draw_reading (BtFigure *figure, cairo_t *cr)
{
  const BtCurve *curve = figure->curve;

  path_of_points (figure, cr, curve->energy_ev, curve->n, reading_y);
  bt_colour_set (cr, figure->palette->data, 1);
  cairo_set_line_width (cr, fmax (0.7, figure->view.font_pt * 0.12));
  cairo_set_line_join (cr, CAIRO_LINE_JOIN_BEVEL);
  cairo_stroke (cr);
  draw_points (figure, cr, curve->energy_ev, curve->n, reading_y);
}

typedef struct { gsize n; double *energy_ev, *x, *tail, *sum, *band; } Grid;

/* A column every 1.5 units over the fitted range that is in view. */
static void
grid_init (BtFigure *figure, Grid *grid)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  double x0 = fmax (box->x, bt_figure_x_from_ev (figure, figure->tally->energy_ev[0]));
  double x1 = fmin (box->x + box->width, bt_figure_x_from_ev (figure, figure->tally->energy_ev[figure->tally->n - 1]));

  grid->n = x1 > x0 ? (gsize) ((x1 - x0) / 1.5) + 2 : 0;
  grid->energy_ev = g_new (double, MAX (grid->n, 1));
  grid->x = g_new (double, MAX (grid->n, 1));
  grid->tail = g_new (double, MAX (grid->n, 1));
  grid->sum = g_new (double, MAX (grid->n, 1));
  grid->band = g_new (double, MAX (grid->n, 1));
  for (gsize i = 0; i < grid->n; i++)
    {
      grid->x[i] = x0 + (x1 - x0) * (double) i / (double) (grid->n - 1);
      grid->energy_ev[i] = CLAMP (bt_figure_ev_from_x (figure, grid->x[i]), figure->tally->energy_ev[0],
                                  figure->tally->energy_ev[figure->tally->n - 1]);
      grid->tail[i] = bt_figure_fitted_at (figure, figure->tally->tail_curve, grid->energy_ev[i]);
      grid->sum[i] = grid->tail[i];
    }
}

static void
grid_clear (Grid *grid)
{
  g_free (grid->energy_ev);
  g_free (grid->x);
  g_free (grid->tail);
  g_free (grid->sum);
  g_free (grid->band);
}

static void
path_of (BtFigure *figure, cairo_t *cr, const Grid *grid, const double *base, const double *add)
{
  for (gsize i = 0; i < grid->n; i++)
    cairo_line_to (cr, grid->x[i], bt_figure_y_from_absorbance (figure, base[i] + (add != NULL ? add[i] : 0)));
}

static void
draw_tail (BtFigure *figure, cairo_t *cr, const Grid *grid)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];

  path_of (figure, cr, grid, grid->tail, NULL);
  cairo_line_to (cr, grid->x[grid->n - 1], box->y + box->height);
  cairo_line_to (cr, grid->x[0], box->y + box->height);
  cairo_close_path (cr);
  bt_colour_set (cr, figure->palette->tail, 0.14);
  cairo_fill (cr);
}

static void
draw_tail_line (BtFigure *figure, cairo_t *cr, const Grid *grid)
{
  static const double dashes[] = { 5, 3 };

  path_of (figure, cr, grid, grid->tail, NULL);
  bt_colour_set (cr, figure->palette->tail, 1);
  cairo_set_line_width (cr, fmax (0.7, figure->view.font_pt * 0.1));
  cairo_set_dash (cr, dashes, 2, 0);
  cairo_stroke (cr);
  cairo_set_dash (cr, NULL, 0, 0);
}

/* A band's outline where it stands off the tail: drawn all along, the last band's colour would hide the tail's line. */
static void
outline_of (BtFigure *figure, cairo_t *cr, const Grid *grid, double height)
{
  gboolean drawing = FALSE;

  for (gsize i = 0; i < grid->n; i++)
    {
      double y = bt_figure_y_from_absorbance (figure, grid->tail[i] + grid->band[i]);
      gboolean stands_off = fabs (grid->band[i]) > 0.015 * fabs (height);

      if (stands_off && drawing)
        cairo_line_to (cr, grid->x[i], y);
      else if (stands_off)
        cairo_move_to (cr, grid->x[i], y);
      drawing = stands_off;
    }
}

static void
draw_bands (BtFigure *figure, cairo_t *cr, Grid *grid)
{
  for (guint b = 0; b < figure->tally->bands->len; b++)
    {
      const BtBand *band = &g_array_index (figure->tally->bands, BtBand, b);
      const gboolean selected = (int) b == figure->view.selected_band;
      BtColour colour = figure->palette->group[band->group];

      bt_band_eval (band, grid->energy_ev, grid->n, grid->band);
      for (gsize i = 0; i < grid->n; i++)
        grid->sum[i] += grid->band[i];
      path_of (figure, cr, grid, grid->tail, grid->band);
      for (gsize i = grid->n; i-- > 0;)
        cairo_line_to (cr, grid->x[i], bt_figure_y_from_absorbance (figure, grid->tail[i]));
      cairo_close_path (cr);
      bt_colour_set (cr, colour, selected ? 0.5 : 0.28);
      cairo_fill (cr);
      outline_of (figure, cr, grid, band->height);
      bt_colour_set (cr, colour, 0.95);
      cairo_set_line_width (cr, (selected ? 0.2 : 0.11) * figure->view.font_pt);
      cairo_stroke (cr);
    }
}

static void
draw_sum (BtFigure *figure, cairo_t *cr, const Grid *grid)
{
  path_of (figure, cr, grid, grid->sum, NULL);
  bt_colour_set (cr, figure->palette->fit, 0.95);
  cairo_set_line_width (cr, fmax (0.7, figure->view.font_pt * 0.11));
  cairo_stroke (cr);
}

/* Brackets at the panel's foot: where the plan expects each group. */
static void
draw_expected (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  const double font = figure->view.font_pt, line = 0.34 * font;

  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      const BtBandWindow *window = &figure->plan.bands[g];
      double low = bt_figure_x_from_ev (figure, window->centre_ev - window->fwhm_ev / 2);
      double high = bt_figure_x_from_ev (figure, window->centre_ev + window->fwhm_ev / 2);
      double y = box->y + box->height - 0.35 * font - line * g;

      bt_colour_set (cr, figure->palette->group[g], 0.9);
      cairo_set_line_width (cr, 0.17 * font);
      cairo_move_to (cr, low, y);
      cairo_line_to (cr, high, y);
      cairo_stroke (cr);
    }
}

/* The highest point of reading and fit between two places. */
static double
highest_between (BtFigure *figure, double x0, double x1)
{
  double top = -INFINITY;

  for (double x = x0; x <= x1; x += 2)
    {
      double e = bt_figure_ev_from_x (figure, x);

      /* fmax passes over NAN, which stands for "not there". */
      top = fmax (top, fmax (bt_figure_fit_at (figure, e), bt_figure_film_at (figure, e)));
    }
  return top;
}

/* Each group's name over its highest crown; a name that would cover another moves up. */
static void
draw_names (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  BtBox taken[BT_N_GROUPS];
  guint n_taken = 0;

  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      const BtBand *crown = NULL;
      double top, w, h, x, y;
      g_autofree char *markup = NULL;
      g_autoptr (PangoLayout) layout = NULL;

      for (guint b = 0; b < figure->tally->bands->len; b++)
        {
          const BtBand *band = &g_array_index (figure->tally->bands, BtBand, b);

          if (band->group == g && (crown == NULL || band->height > crown->height))
            crown = band;
        }
      if (crown == NULL)
        continue;
      if (isnan (bt_figure_fit_at (figure, crown->centre_ev)))
        continue;
      x = bt_figure_x_from_ev (figure, crown->centre_ev);
      if (x < box->x || x > box->x + box->width)
        continue;
      markup = g_strdup_printf ("<b>%s</b>", bt_group_name ((BtGroup) g));
      layout = bt_figure_text (figure, cr, markup, 1);
      bt_layout_size (layout, &w, &h);
      x = CLAMP (x - w / 2, box->x + 2, box->x + box->width - w - 2);
      top = highest_between (figure, x - 2, x + w + 2);
      y = fmax (bt_figure_y_from_absorbance (figure, top) - h - 0.3 * figure->view.font_pt, box->y + 1);
      for (guint k = 0; k < n_taken; k++)
        if (x < taken[k].x + taken[k].width + 3 && x + w + 3 > taken[k].x && y < taken[k].y + taken[k].height && y + h > taken[k].y)
          y = fmax (box->y + 1, taken[k].y - h);
      taken[n_taken++] = (BtBox){ x, y, w, h };
      bt_colour_set (cr, figure->palette->ink, 1);
      cairo_move_to (cr, x, y);
      pango_cairo_show_layout (cr, layout);
    }
}

static void
draw_steps (BtFigure *figure, cairo_t *cr)
{
  static const double dashes[] = { 1.5, 3 };
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  gsize n;
  const BtStep *steps = bt_spectrum_get_steps (bt_film_get_spectrum (figure->film), &n);

  bt_colour_set (cr, figure->palette->ink, 0.8);
  cairo_set_line_width (cr, 1);
  cairo_set_dash (cr, dashes, 2, 0);
  for (gsize i = 0; i < n; i++)
    {
      double x = bt_figure_x_from_ev (figure, steps[i].energy_ev);

      cairo_move_to (cr, x, box->y);
      cairo_rel_line_to (cr, 0, box->height);
    }
  cairo_stroke (cr);
  cairo_set_dash (cr, NULL, 0, 0);
}

void
bt_figure_draw_spectrum (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  gboolean fitted = figure->tally != NULL && figure->tally->n > 1;

  cairo_save (cr);
  clip_to (cr, box);
  bt_figure_draw_veils (figure, cr, box);
  if (fitted)
    {
      Grid grid;

      grid_init (figure, &grid);
      if (grid.n > 1)
        {
          draw_tail (figure, cr, &grid);
          draw_bands (figure, cr, &grid);
          draw_tail_line (figure, cr, &grid);
        }
      draw_reading (figure, cr);
      if (grid.n > 1)
        draw_sum (figure, cr, &grid);
      grid_clear (&grid);
    }
  else
    draw_reading (figure, cr);
  draw_steps (figure, cr);
  if (figure->has_plan)
    draw_expected (figure, cr);
  if (fitted)
    draw_names (figure, cr);
  cairo_restore (cr);
}

void
bt_figure_draw_residual (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_RESIDUAL];
  const double zero = bt_figure_residual_y (figure, 0), two = bt_figure_residual_y (figure, 2);

  cairo_save (cr);
  clip_to (cr, box);
  bt_figure_draw_veils (figure, cr, box);
  bt_colour_set (cr, figure->palette->beam, 0.18);
  cairo_rectangle (cr, box->x, two, box->width, 2 * (zero - two));
  cairo_fill (cr);
  bt_colour_set (cr, figure->palette->soft, 1);
  cairo_set_line_width (cr, 1);
  cairo_move_to (cr, box->x, zero);
  cairo_rel_line_to (cr, box->width, 0);
  cairo_stroke (cr);
  if (figure->tally != NULL && figure->tally->n > 1)
    {
      const BtTally *tally = figure->tally;

      path_of_points (figure, cr, tally->energy_ev, tally->n, residual_y);
      bt_colour_set (cr, figure->palette->data, 0.9);
      cairo_set_line_width (cr, fmax (0.6, figure->view.font_pt * 0.08));
      cairo_set_line_join (cr, CAIRO_LINE_JOIN_BEVEL);
      cairo_stroke (cr);
      draw_points (figure, cr, tally->energy_ev, tally->n, residual_y);
    }
  cairo_restore (cr);
}
