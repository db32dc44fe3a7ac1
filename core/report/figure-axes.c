/* Axes: ticks at round numbers, labels that never crowd, frames. */
#include <math.h>

#include <glib/gi18n-lib.h>

#include "figure-private.h"
#include "ticks.h"

#define TICK 0.42 /* length of a tick, in font sizes */

PangoLayout *
bt_figure_text (BtFigure *figure, cairo_t *cr, const char *markup, double scale)
{
  PangoLayout *layout;

  if (cr != NULL)
    layout = pango_cairo_create_layout (cr);
  else
    {
      PangoContext *context = pango_font_map_create_context (pango_cairo_font_map_get_default ());

      layout = pango_layout_new (context);
      g_object_unref (context);
    }
  /* At 72 dpi a point is a unit of the surface; sizes in points let Pango scale superscripts. */
  pango_cairo_context_set_resolution (pango_layout_get_context (layout), 72);
  pango_font_description_set_size (figure->font, (int) (figure->view.font_pt * scale * PANGO_SCALE));
  pango_layout_set_font_description (layout, figure->font);
  pango_layout_set_markup (layout, markup, -1);
  return layout;
}

void
bt_layout_size (PangoLayout *layout, double *width, double *height)
{
  int w, h;

  pango_layout_get_size (layout, &w, &h);
  *width = (double) w / PANGO_SCALE;
  *height = (double) h / PANGO_SCALE;
}

static void
text_size (BtFigure *figure, const char *text, double *width, double *height)
{
  g_autoptr (PangoLayout) layout = bt_figure_text (figure, NULL, text, 1);

  bt_layout_size (layout, width, height);
}

/* Draws text with this share of its width left of x and of its height above y. */
static void
draw_text (BtFigure *figure, cairo_t *cr, const char *markup, double x, double y, double across, double down)
{
  g_autoptr (PangoLayout) layout = bt_figure_text (figure, cr, markup, 1);
  double w, h;

  bt_layout_size (layout, &w, &h);
  cairo_move_to (cr, x - across * w, y - down * h);
  pango_cairo_show_layout (cr, layout);
}

/* A power of ten in superscript digits: plain characters look the same in every font and renderer. */
static char *
superscript (int power)
{
  static const char *const digits[] = { "⁰", "¹", "²", "³", "⁴", "⁵", "⁶", "⁷", "⁸", "⁹" };
  g_autofree char *plain = g_strdup_printf ("%d", power);
  GString *text = g_string_new (NULL);

  for (const char *p = plain; *p != '\0'; p++)
    g_string_append (text, *p == '-' ? "⁻" : digits[*p - '0']);
  return g_string_free (text, FALSE);
}

static char *
value_title (const BtFigure *figure)
{
  g_autofree char *power = NULL;

  if (!figure->is_alpha)
    return bt_spectrum_get_y_unit (bt_film_get_spectrum (figure->film)) == BT_Y_ALPHA_PER_CM
             ? g_strdup (_ ("Absorbance per length / cm⁻¹"))
             : g_strdup (_ ("Absorbance"));
  if (figure->power == 0)
    return g_strdup (_ ("Absorption coefficient / cm⁻¹"));
  power = superscript (figure->power);
  return g_strdup_printf (_ ("Absorption coefficient / 10%s cm⁻¹"), power);
}

/* Step of the value axis, and the widest label that it makes. */
static double
value_step (BtFigure *figure, double length, int *decimals, double *label_width)
{
  double scale = pow (10, -figure->power), low = figure->view.low_value * scale, high = figure->view.high_value * scale, w, h, step;

  text_size (figure, "0", &w, &h);
  step = bt_ticks_step (low, high, length, 2.2 * h, decimals);
  *label_width = 0;
  for (double v = ceil (low / step) * step; step > 0 && v <= high * 1.0001; v += step)
    {
      g_autofree char *label = g_strdup_printf ("%.*f", *decimals, v);

      text_size (figure, label, &w, &h);
      *label_width = fmax (*label_width, w);
    }
  return step;
}

void
bt_figure_margins (BtFigure *figure, double *left, double *right, double *top, double *bottom)
{
  const double font = figure->view.font_pt;
  double w, h, residual, label;
  int decimals;
  g_autofree char *largest = g_strdup_printf ("−%.0f", figure->residual_top);

  text_size (figure, "1500", &w, &h);
  text_size (figure, largest, &residual, &h);
  value_step (figure, fmax (figure->height * 0.5, 20), &decimals, &label);
  *left = fmax (label, residual) + h * 1.35 + font * (0.9 + TICK);
  *right = font * 1.1;
  *top = 2 * h + font * (0.5 + TICK);
  *bottom = 2 * h + font * (0.5 + TICK);
}

static void
tick_line (cairo_t *cr, double x, double y, double dx, double dy)
{
  cairo_move_to (cr, x, y);
  cairo_rel_line_to (cr, dx, dy);
}

/* Lowest panel that is shown. */
static const BtBox *
floor_panel (const BtFigure *figure)
{
  for (int p = BT_N_PANELS; p-- > 0;)
    if (figure->panels[p].height > 0)
      return &figure->panels[p];
  return &figure->panels[0];
}

static void
draw_energy_axis (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = floor_panel (figure);
  const double font = figure->view.font_pt, base = box->y + box->height, tick = font * TICK;
  double w, h, step, minor;
  int decimals;

  text_size (figure, "0.00", &w, &h);
  step = bt_ticks_step (figure->view.low_ev, figure->view.high_ev, box->width, 1.7 * w, &decimals);
  minor = step / 5;
  if (!(step > 0))
    return;
  for (double k = ceil (figure->view.low_ev / minor); k * minor <= figure->view.high_ev; k++)
    {
      double x = bt_figure_x_from_ev (figure, k * minor);

      tick_line (cr, x, base, 0, fmod (fabs (k) + 0.5, 5) < 1 ? tick : tick / 2);
    }
  cairo_stroke (cr);
  for (double k = ceil (figure->view.low_ev / step); k * step <= figure->view.high_ev; k++)
    {
      g_autofree char *label = g_strdup_printf ("%.*f", decimals, k * step);

      draw_text (figure, cr, label, bt_figure_x_from_ev (figure, k * step), base + tick + 0.15 * font, 0.5, 0);
    }
  draw_text (figure, cr, _ ("Energy / eV"), box->x + box->width / 2, figure->height - 0.15 * font, 0.5, 1);
}

/* Labels go to the roundest wavelengths that find room; the rest of the hundreds get ticks. */
static void
draw_wavelength_axis (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  const double font = figure->view.font_pt, tick = font * TICK;
  double values[256], placed[256][2];
  gsize n_placed = 0, n = bt_ticks_wavelengths (bt_nm_from_ev (figure->view.high_ev), bt_nm_from_ev (fmax (figure->view.low_ev, 0.05)), values,
                                                G_N_ELEMENTS (values));

  for (gsize i = 0; i < n; i++)
    {
      g_autofree char *label = g_strdup_printf ("%.0f", values[i]);
      double x = bt_figure_x_from_ev (figure, bt_ev_from_nm (values[i])), w, h;
      gboolean free_place = TRUE, near_other = FALSE;

      text_size (figure, label, &w, &h);
      for (gsize k = 0; k < n_placed; k++)
        {
          free_place = free_place && (x + w * 0.95 < placed[k][0] || x - w * 0.95 > placed[k][1]);
          near_other = near_other || fabs (x - (placed[k][0] + placed[k][1]) / 2) < 0.35 * font;
        }
      if (free_place && n_placed < G_N_ELEMENTS (placed))
        {
          draw_text (figure, cr, label, x, box->y - tick - 0.1 * font, 0.5, 1);
          placed[n_placed][0] = x - w / 2;
          placed[n_placed++][1] = x + w / 2;
          tick_line (cr, x, box->y, 0, -tick);
        }
      else if (!near_other && fmod (values[i], 100) < 0.5)
        tick_line (cr, x, box->y, 0, -tick / 2);
    }
  cairo_stroke (cr);
  draw_text (figure, cr, _ ("Wavelength / nm"), box->x + box->width / 2, 0.1 * font, 0.5, 0);
}

static void
draw_side_title (BtFigure *figure, cairo_t *cr, const BtBox *box, const char *markup)
{
  g_autoptr (PangoLayout) layout = bt_figure_text (figure, cr, markup, 1);
  double w, h;

  bt_layout_size (layout, &w, &h);
  /* A title longer than its panel is drawn smaller, never cut. */
  if (w > box->height)
    {
      double scale = fmax (box->height / w, 0.45);

      g_clear_object (&layout);
      layout = bt_figure_text (figure, cr, markup, scale);
      bt_layout_size (layout, &w, &h);
      if (w > box->height * 1.02)
        return;
    }
  cairo_save (cr);
  cairo_move_to (cr, 0.15 * figure->view.font_pt, box->y + (box->height + w) / 2);
  cairo_rotate (cr, -G_PI / 2);
  pango_cairo_show_layout (cr, layout);
  cairo_restore (cr);
}

static void
draw_value_axis (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  const double font = figure->view.font_pt, tick = font * TICK, scale = pow (10, -figure->power);
  double label_width, step, low = figure->view.low_value * scale, high = figure->view.high_value * scale;
  int decimals;
  g_autofree char *title = value_title (figure);

  step = value_step (figure, box->height, &decimals, &label_width);
  for (double k = ceil (low / step); step > 0 && k * step <= high; k++)
    {
      double y = bt_figure_value_y (figure, k * step / scale), v = fabs (k) < 0.5 ? 0 : k * step;
      g_autofree char *label = g_strdup_printf ("%.*f", decimals, v);

      tick_line (cr, box->x, y, -tick, 0);
      draw_text (figure, cr, label, box->x - tick - 0.25 * font, y, 1, 0.5);
    }
  cairo_stroke (cr);
  draw_side_title (figure, cr, box, title);
}

static void
draw_residual_axis (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_RESIDUAL];
  const double font = figure->view.font_pt, tick = font * TICK;
  double w, h, step;

  text_size (figure, "0", &w, &h);
  /* Three labels: zero and the roundest number on either side that fits. */
  step = bt_ticks_step (0, figure->residual_top, 1, 0.4, NULL);
  for (double k = -1; k <= 1; k++)
    {
      double y = bt_figure_residual_y (figure, k * step);
      g_autofree char *label = g_strdup_printf ("%s%.0f", k < 0 ? "−" : "", fabs (k * step));

      tick_line (cr, box->x, y, -tick, 0);
      /* Zero gives way where the panel is too low for three. */
      if (fabs (k) > 0.5 || bt_figure_residual_y (figure, -step) - y > 1.05 * h)
        draw_text (figure, cr, label, box->x - tick - 0.25 * font, y, 1, 0.5);
    }
  cairo_stroke (cr);
  draw_side_title (figure, cr, box, _ ("Residual / u"));
}

static void
draw_diameter_axis (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_KATAURA];
  const double font = figure->view.font_pt, tick = font * TICK;
  double w, h, step;
  int decimals;

  text_size (figure, "0", &w, &h);
  step = bt_ticks_step (figure->view.low_nm, figure->view.high_nm, box->height, 1.8 * h, &decimals);
  for (double k = ceil (figure->view.low_nm / step); step > 0 && k * step <= figure->view.high_nm; k++)
    {
      double y = bt_figure_y_from_diameter (figure, k * step);
      g_autofree char *label = g_strdup_printf ("%.*f", decimals, k * step);

      tick_line (cr, box->x, y, -tick, 0);
      /* The last label would reach into the energy axis' own. */
      if (y + h / 2 < box->y + box->height + 0.2 * h)
        draw_text (figure, cr, label, box->x - tick - 0.25 * font, y, 1, 0.5);
    }
  cairo_stroke (cr);
  draw_side_title (figure, cr, box, _ ("Diameter / nm"));
}

void
bt_figure_draw_axes (BtFigure *figure, cairo_t *cr)
{
  cairo_set_line_width (cr, fmax (0.6, figure->view.font_pt / 14));
  bt_colour_set (cr, figure->palette->ink, 1);
  for (int p = 0; p < BT_N_PANELS; p++)
    if (figure->panels[p].height > 0)
      {
        cairo_rectangle (cr, figure->panels[p].x, figure->panels[p].y, figure->panels[p].width, figure->panels[p].height);
        cairo_stroke (cr);
      }
  draw_energy_axis (figure, cr);
  draw_wavelength_axis (figure, cr);
  draw_value_axis (figure, cr);
  if (figure->view.show_residual)
    draw_residual_axis (figure, cr);
  if (figure->view.show_tubes)
    draw_diameter_axis (figure, cr);
}
