/* The figure as an object: what it shows, how it is laid out, and where things are. */
#include <bandtally/figure.h>

#include <math.h>
#include <string.h>

#include "figure-private.h"
#include "ticks.h"

void
bt_figure_view_init (BtFigureView *view)
{
  *view = (BtFigureView){ .low_value = NAN, .high_value = NAN, .font_pt = 11, .selected_band = -1, .cursor_ev = NAN,
                          .show_residual = TRUE, .show_tubes = TRUE };
}

BtFigure *
bt_figure_new (BtFilm *film, BtTally *tally, const BtBandPlan *plan, const BtRecipe *recipe)
{
  BtFigure *figure = g_new0 (BtFigure, 1);

  figure->film = g_object_ref (film);
  if (tally != NULL)
    figure->tally = bt_tally_ref (tally);
  else
    figure->own_curve = bt_film_light_path (film, recipe != NULL ? &recipe->light_path : NULL, NULL);
  figure->curve = tally != NULL ? tally->curve : figure->own_curve;
  figure->has_plan = plan != NULL || tally != NULL;
  if (figure->has_plan)
    figure->plan = plan != NULL ? *plan : tally->plan;
  if (recipe != NULL || tally != NULL)
    figure->recipe = bt_recipe_copy (recipe != NULL ? recipe : tally->recipe);
  figure->alpha_factor = bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM
                           ? BT_LN10
                           : bt_alpha_per_cm (1, bt_film_get_thickness_nm (film));
  figure->font = pango_font_description_from_string ("Sans");
  figure->context = pango_font_map_create_context (pango_cairo_font_map_get_default ());
  /* At 72 dpi a point is a unit of the surface; sizes in points let Pango scale superscripts. */
  pango_cairo_context_set_resolution (figure->context, 72);
  bt_figure_view_init (&figure->view);
  figure->palette = bt_palette_get (BT_THEME_LIGHT);
  return figure;
}

void
bt_figure_free (BtFigure *figure)
{
  if (figure == NULL)
    return;
  g_object_unref (figure->film);
  bt_tally_unref (figure->tally);
  bt_curve_free (figure->own_curve);
  bt_recipe_free (figure->recipe);
  pango_font_description_free (figure->font);
  g_object_unref (figure->context);
  g_free (figure);
}

/* Energies: where the bands are, with a little more, when everything may be shown; the ultraviolet beyond belongs to the tail. */
static void
resolve_energies (BtFigure *figure)
{
  BtFigureView *view = &figure->view;
  const BtCurve *curve = figure->curve;

  if (view->high_ev > view->low_ev && view->low_ev >= 0)
    return;
  view->low_ev = curve->energy_ev[0];
  view->high_ev = curve->energy_ev[curve->n - 1];
  if (figure->tally != NULL && figure->tally->n > 0)
    {
      double span = figure->tally->range.high_ev - figure->tally->range.low_ev;

      view->low_ev = fmax (view->low_ev, figure->tally->range.low_ev - 0.04 * span);
      view->high_ev = fmin (view->high_ev, figure->tally->range.high_ev + 0.12 * span);
    }
}

static void
resolve_values (BtFigure *figure)
{
  BtFigureView *view = &figure->view;
  double low = 0, high = 0, factor;

  figure->is_alpha = view->quantity == BT_QUANTITY_ALPHA && isfinite (figure->alpha_factor);
  factor = figure->is_alpha ? figure->alpha_factor : 1;
  for (gsize i = 0; i < figure->curve->n; i++)
    if (figure->curve->energy_ev[i] >= view->low_ev && figure->curve->energy_ev[i] <= view->high_ev)
      {
        low = fmin (low, figure->curve->absorbance[i]);
        high = fmax (high, figure->curve->absorbance[i]);
      }
  if (!(high > low))
    high = low + 1;
  if (!(view->high_value > view->low_value))
    {
      view->low_value = low < -0.01 * high ? factor * 1.1 * low : 0;
      view->high_value = factor * (high + 0.1 * (high - low));
    }
  figure->power = figure->is_alpha ? (int) floor (log10 (fmax (fabs (view->high_value), fabs (view->low_value)))) : 0;
  if (figure->power < 3)
    figure->power = 0;
  figure->factor = factor / pow (10, figure->power);
}

static void
resolve_diameters (BtFigure *figure)
{
  BtFigureView *view = &figure->view;
  double reach;

  if (view->high_nm > view->low_nm && view->low_nm >= 0)
    return;
  if (!figure->has_plan)
    {
      view->low_nm = 0.6;
      view->high_nm = 2;
      return;
    }
  reach = fmax (4.5 * figure->plan.window.spread_nm, 0.35);
  view->low_nm = fmax (0.4, figure->plan.window.mean_nm - reach);
  view->high_nm = figure->plan.window.mean_nm + reach;
}

/* A scale that holds nearly all of the residual, at least three times the noise. */
static void
resolve_residual (BtFigure *figure)
{
  double largest = 0;

  figure->residual_top = 3;
  if (figure->tally == NULL)
    return;
  for (gsize i = 0; i < figure->tally->n; i++)
    largest = fmax (largest, fabs (figure->tally->absorbance[i] - figure->tally->fit[i]) / figure->tally->noise[i]);
  figure->residual_top = fmax (3, 1.1 * largest);
}

static void
place_panels (BtFigure *figure)
{
  double left, right, top, bottom, gap = 0.9 * figure->view.font_pt, y, height, shares[BT_N_PANELS] = { 0.60, 0.13, 0.27 };
  double sum = 0, gaps = 0;

  if (!figure->view.show_residual)
    shares[BT_PANEL_RESIDUAL] = 0;
  if (!figure->view.show_tubes)
    shares[BT_PANEL_KATAURA] = 0;
  for (int p = 0; p < BT_N_PANELS; p++)
    {
      sum += shares[p];
      gaps += p > 0 && shares[p] > 0 ? gap : 0;
    }
  bt_figure_margins (figure, &left, &right, &top, &bottom);
  height = fmax (figure->height - top - bottom - gaps, 10);
  y = top;
  for (int p = 0; p < BT_N_PANELS; p++)
    {
      figure->panels[p] = (BtBox){ left, y, fmax (figure->width - left - right, 10), height * shares[p] / sum };
      if (shares[p] > 0)
        y += figure->panels[p].height + gap;
    }
}

static void
draw_cursor (BtFigure *figure, cairo_t *cr)
{
  double x = bt_figure_x_from_ev (figure, figure->view.cursor_ev);

  if (!isfinite (x) || x < figure->panels[0].x || x > figure->panels[0].x + figure->panels[0].width)
    return;
  bt_colour_set (cr, figure->palette->ink, 0.55);
  cairo_set_line_width (cr, 1);
  for (int p = 0; p < BT_N_PANELS; p++)
    if (figure->panels[p].height > 0)
      {
        cairo_move_to (cr, floor (x) + 0.5, figure->panels[p].y);
        cairo_rel_line_to (cr, 0, figure->panels[p].height);
      }
  cairo_stroke (cr);
}

void
bt_figure_draw (BtFigure *figure, cairo_t *cr, double width, double height, const BtFigureView *view)
{
  figure->view = *view;
  figure->width = width;
  figure->height = height;
  figure->palette = bt_palette_get (view->theme);
  resolve_energies (figure);
  resolve_values (figure);
  resolve_diameters (figure);
  resolve_residual (figure);
  place_panels (figure);
  if (cr == NULL)
    return;
  cairo_save (cr);
  cairo_rectangle (cr, 0, 0, width, height);
  cairo_clip (cr);
  bt_colour_set (cr, figure->palette->ground, 1);
  cairo_paint (cr);
  bt_figure_draw_spectrum (figure, cr);
  if (figure->view.show_residual)
    bt_figure_draw_residual (figure, cr);
  if (figure->view.show_tubes)
    bt_figure_draw_kataura (figure, cr);
  draw_cursor (figure, cr);
  bt_figure_draw_axes (figure, cr);
  cairo_restore (cr);
}

void
bt_figure_get_panel (BtFigure *figure, BtPanel panel, double *x, double *y, double *width, double *height)
{
  *x = figure->panels[panel].x;
  *y = figure->panels[panel].y;
  *width = figure->panels[panel].width;
  *height = figure->panels[panel].height;
}

void
bt_figure_get_shown (BtFigure *figure, BtFigureView *shown)
{
  *shown = figure->view;
}

double
bt_figure_x_from_ev (BtFigure *figure, double energy_ev)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];

  return box->x + box->width * (energy_ev - figure->view.low_ev) / (figure->view.high_ev - figure->view.low_ev);
}

double
bt_figure_ev_from_x (BtFigure *figure, double x)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];

  return figure->view.low_ev + (x - box->x) / box->width * (figure->view.high_ev - figure->view.low_ev);
}

double
bt_figure_value_y (BtFigure *figure, double value)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];

  return box->y + box->height * (1 - (value - figure->view.low_value) / (figure->view.high_value - figure->view.low_value));
}

double
bt_figure_y_from_absorbance (BtFigure *figure, double absorbance)
{
  return bt_figure_value_y (figure, absorbance * (figure->is_alpha ? figure->alpha_factor : 1));
}

double
bt_figure_absorbance_from_y (BtFigure *figure, double y)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  double value = figure->view.low_value + (1 - (y - box->y) / box->height) * (figure->view.high_value - figure->view.low_value);

  return value / (figure->is_alpha ? figure->alpha_factor : 1);
}

double
bt_figure_y_from_diameter (BtFigure *figure, double diameter_nm)
{
  const BtBox *box = &figure->panels[BT_PANEL_KATAURA];

  return box->y + box->height * (1 - (diameter_nm - figure->view.low_nm) / (figure->view.high_nm - figure->view.low_nm));
}

double
bt_figure_diameter_from_y (BtFigure *figure, double y)
{
  const BtBox *box = &figure->panels[BT_PANEL_KATAURA];

  return figure->view.low_nm + (1 - (y - box->y) / box->height) * (figure->view.high_nm - figure->view.low_nm);
}

double
bt_figure_residual_y (BtFigure *figure, double sigmas)
{
  const BtBox *box = &figure->panels[BT_PANEL_RESIDUAL];

  return box->y + box->height * 0.5 * (1 - sigmas / figure->residual_top);
}

static double
interpolate (const double *x, const double *y, gsize n, double at)
{
  gsize low = 0, high = n - 1;
  double t;

  if (n < 2 || !(at >= x[0] && at <= x[n - 1]))
    return NAN;
  while (high - low > 1)
    {
      gsize middle = (low + high) / 2;

      if (x[middle] <= at)
        low = middle;
      else
        high = middle;
    }
  t = (at - x[low]) / (x[high] - x[low]);
  return y[low] + t * (y[high] - y[low]);
}

double
bt_figure_fitted_at (BtFigure *figure, const double *values, double energy_ev)
{
  return figure->tally == NULL || figure->tally->n < 2 ? NAN : interpolate (figure->tally->energy_ev, values, figure->tally->n, energy_ev);
}

double
bt_figure_film_at (BtFigure *figure, double energy_ev)
{
  return interpolate (figure->curve->energy_ev, figure->curve->absorbance, figure->curve->n, energy_ev);
}

/* The tail beyond the fitted points, by its own formula; a detector step's part is known only between them. */
static double
tail_beyond (BtFigure *figure, double energy_ev)
{
  double value;

  if (figure->tally == NULL || figure->tally->n < 2 || !(energy_ev > 0))
    return NAN;
  bt_tail_eval (&figure->tally->tails[figure->tally->best].tail, &energy_ev, 1, &value);
  return value;
}

double
bt_figure_tail_at (BtFigure *figure, double energy_ev)
{
  double value = figure->tally != NULL ? bt_figure_fitted_at (figure, figure->tally->tail_curve, energy_ev) : NAN;

  return isnan (value) ? tail_beyond (figure, energy_ev) : value;
}

double
bt_figure_fit_at (BtFigure *figure, double energy_ev)
{
  double value = figure->tally != NULL ? bt_figure_fitted_at (figure, figure->tally->fit, energy_ev) : NAN, band;

  if (!isnan (value) || figure->tally == NULL || figure->tally->n < 2)
    return value;
  value = tail_beyond (figure, energy_ev);
  for (guint b = 0; b < figure->tally->bands->len; b++)
    {
      bt_band_eval (&g_array_index (figure->tally->bands, BtBand, b), &energy_ev, 1, &band);
      value += band;
    }
  return value;
}
