/* The Kataura plot under the spectrum: tubes as marks at their transitions, the diameter window as a beam. */
#include <math.h>

#include "figure-private.h"

static void
band_of (BtFigure *figure, cairo_t *cr, double spreads, double alpha)
{
  const BtBox *box = &figure->panels[BT_PANEL_KATAURA];
  double top = bt_figure_y_from_diameter (figure, figure->plan.window.mean_nm + spreads * figure->plan.window.spread_nm);
  double bottom = bt_figure_y_from_diameter (figure, figure->plan.window.mean_nm - spreads * figure->plan.window.spread_nm);

  bt_colour_set (cr, figure->palette->beam, alpha);
  cairo_rectangle (cr, box->x, top, box->width, bottom - top);
  cairo_fill (cr);
}

static void
draw_beam (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_KATAURA];

  band_of (figure, cr, 2, 0.13);
  band_of (figure, cr, 1, 0.17);
  bt_colour_set (cr, figure->palette->beam, 1);
  cairo_set_line_width (cr, 0.12 * figure->view.font_pt);
  cairo_move_to (cr, box->x, bt_figure_y_from_diameter (figure, figure->plan.window.mean_nm));
  cairo_rel_line_to (cr, box->width, 0);
  cairo_stroke (cr);
}

/* Circles for semiconducting tubes, open diamonds for metallic ones: the shape tells, not only the colour. */
static void
draw_mark (cairo_t *cr, double x, double y, double size, gboolean metallic)
{
  if (metallic)
    {
      cairo_move_to (cr, x, y - size);
      cairo_line_to (cr, x + size, y);
      cairo_line_to (cr, x, y + size);
      cairo_line_to (cr, x - size, y);
      cairo_close_path (cr);
      cairo_stroke (cr);
    }
  else
    {
      cairo_arc (cr, x, y, 0.8 * size, 0, 2 * G_PI);
      cairo_fill (cr);
    }
}

static void
draw_tubes (BtFigure *figure, cairo_t *cr)
{
  g_autoptr (GArray) tubes = bt_tubes_in_diameter (figure->view.low_nm, figure->view.high_nm);
  const BtBox *box = &figure->panels[BT_PANEL_KATAURA];
  const double size = CLAMP (0.3 * figure->view.font_pt, 1.6, 6);

  cairo_set_line_width (cr, 0.09 * figure->view.font_pt);
  for (guint t = 0; t < tubes->len; t++)
    {
      BtTube tube = g_array_index (tubes, BtTube, t);
      double d = bt_tube_diameter_nm (tube), y = bt_figure_y_from_diameter (figure, d);
      double z = (d - figure->plan.window.mean_nm) / figure->plan.window.spread_nm;
      /* Tubes outside the beam stay visible as the map they are. */
      double alpha = 0.3 + 0.7 * exp (-z * z / 4);

      for (guint g = 0; g < BT_N_GROUPS; g++)
        for (int branch = 0; branch < 2; branch++)
          {
            double e = bt_tube_energy_ev (tube, (BtGroup) g, branch, BT_REFERENCE_EMPIRICAL), x;

            if (isnan (e))
              continue;
            x = bt_figure_x_from_ev (figure, e - figure->plan.shift_ev);
            if (x < box->x - size || x > box->x + box->width + size)
              continue;
            bt_colour_set (cr, figure->palette->group[g], alpha);
            draw_mark (cr, x, y, size, bt_group_is_metallic ((BtGroup) g));
          }
    }
}

/* From each band's centre down to the tubes that make it. */
static void
draw_guides (BtFigure *figure, cairo_t *cr)
{
  static const double dashes[] = { 2, 3 };
  const BtBox *box = &figure->panels[BT_PANEL_KATAURA];

  cairo_set_dash (cr, dashes, 2, 0);
  cairo_set_line_width (cr, 0.08 * figure->view.font_pt);
  for (guint b = 0; b < figure->tally->bands->len; b++)
    {
      const BtBand *band = &g_array_index (figure->tally->bands, BtBand, b);

      bt_colour_set (cr, figure->palette->group[band->group], (int) b == figure->view.selected_band ? 1 : 0.7);
      cairo_move_to (cr, bt_figure_x_from_ev (figure, band->centre_ev), box->y);
      cairo_rel_line_to (cr, 0, box->height);
      cairo_stroke (cr);
    }
  cairo_set_dash (cr, NULL, 0, 0);
}

void
bt_figure_draw_kataura (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_KATAURA];

  cairo_save (cr);
  cairo_rectangle (cr, box->x, box->y, box->width, box->height);
  cairo_clip (cr);
  bt_figure_draw_veils (figure, cr, box);
  if (figure->has_plan)
    {
      draw_beam (figure, cr);
      if (figure->tally != NULL)
        draw_guides (figure, cr);
      draw_tubes (figure, cr);
    }
  cairo_restore (cr);
}
