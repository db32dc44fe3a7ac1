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

  /* One context for all: finding fonts anew for each label would take longer than all the rest. */
  if (cr != NULL)
    pango_cairo_update_context (cr, figure->context);
  layout = pango_layout_new (figure->context);
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

/* Whether a label centred at x stays inside the figure. */
static gboolean
inside (const BtFigure *figure, double x, double width)
{
  return x - width / 2 >= 0 && x + width / 2 <= figure->width;
}

/* Step of the energy axis at which the labels, as long as the step makes them, stand apart. */
static double
energy_step (BtFigure *figure, double length, int *decimals)
{
  const double low = figure->view.low_ev, high = figure->view.high_ev;
  double step = 0, w, h, gap = 2 * figure->view.font_pt;

  for (int attempt = 0; attempt < 8; attempt++)
    {
      g_autofree char *label = NULL;

      step = bt_ticks_step (low, high, length, gap, decimals);
      label = g_strdup_printf ("%.*f", *decimals, high);
      text_size (figure, label, &w, &h);
      if (!(step > 0) || step / (high - low) * length >= w + 1.6 * figure->view.font_pt)
        break;
      gap = w + 1.6 * figure->view.font_pt;
    }
  return step;
}

gsize
bt_figure_energy_ticks (BtFigure *figure, BtTick *ticks, gsize max)
{
  const double low = figure->view.low_ev, high = figure->view.high_ev;
  const double length = figure->panels[BT_PANEL_SPECTRUM].width;
  int decimals, parts;
  double step = energy_step (figure, length, &decimals), minor, h;
  gsize n = 0;

  if (!(step > 0))
    return 0;
  /* A step of 2 has halves, one of 1 or 5 fifths. */
  parts = step / pow (10, floor (log10 (step * 1.001))) > 1.5 && step / pow (10, floor (log10 (step * 1.001))) < 3 ? 4 : 5;
  minor = step / parts;
  for (double k = ceil (low / minor - 1e-6); k * minor <= high + 1e-6 * minor && n < max; k++)
    {
      BtTick *tick = &ticks[n++];

      *tick = (BtTick){ .x = bt_figure_x_from_ev (figure, k * minor), .minor = fmod (fabs (k) + 0.5, parts) >= 1 };
      if (tick->minor)
        continue;
      g_snprintf (tick->label, sizeof tick->label, "%.*f", decimals, k * minor);
      text_size (figure, tick->label, &tick->width, &h);
      if (!inside (figure, tick->x, tick->width))
        tick->label[0] = '\0';
    }
  return n;
}

static void
draw_energy_axis (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = floor_panel (figure);
  const double font = figure->view.font_pt, base = box->y + box->height, length = font * TICK;
  BtTick ticks[512];
  gsize n = bt_figure_energy_ticks (figure, ticks, G_N_ELEMENTS (ticks));

  for (gsize i = 0; i < n; i++)
    tick_line (cr, ticks[i].x, base, 0, ticks[i].minor ? length / 2 : length);
  cairo_stroke (cr);
  for (gsize i = 0; i < n; i++)
    if (ticks[i].label[0] != '\0')
      draw_text (figure, cr, ticks[i].label, ticks[i].x, base + length + 0.15 * font, 0.5, 0);
  draw_text (figure, cr, _ ("Energy / eV"), box->x + box->width / 2, figure->height - 0.15 * font, 0.5, 1);
}

/* Whether a label of this width at x stands clear of those placed. */
static gboolean
is_free (const BtTick *ticks, gsize n, double x, double width, double gap)
{
  for (gsize i = 0; i < n; i++)
    if (!ticks[i].minor && fabs (x - ticks[i].x) < (width + ticks[i].width) / 2 + gap)
      return FALSE;
  return TRUE;
}

/* Wavelengths crowd to the left. The roundest come first; a less round one gets a label only where its neighbours of the same roundness would
 * have room beside it, so that labels are never odd ones out, and otherwise a minor tick where those stand apart. */
gsize
bt_figure_wavelength_ticks (BtFigure *figure, BtTick *ticks, gsize max)
{
  const double font = figure->view.font_pt, gap = 0.8 * font;
  BtRoundNm values[768];
  gsize n = 0, n_values = bt_ticks_wavelengths (bt_nm_from_ev (figure->view.high_ev), bt_nm_from_ev (fmax (figure->view.low_ev, 0.05)), values,
                                                G_N_ELEMENTS (values));

  for (gsize i = 0; i < n_values && n < max; i++)
    {
      BtTick tick = { .x = bt_figure_x_from_ev (figure, bt_ev_from_nm (values[i].nm)), .minor = TRUE };
      double room = tick.x - bt_figure_x_from_ev (figure, bt_ev_from_nm (values[i].nm + values[i].round_nm)), h;

      if (room < 0.55 * font)
        continue;
      if (room > 2 * font)
        {
          g_snprintf (tick.label, sizeof tick.label, "%.*f", values[i].decimals, values[i].nm);
          text_size (figure, tick.label, &tick.width, &h);
          /* The very roundest are landmarks of their own and need no room for neighbours. */
          tick.minor = (values[i].round_nm < 500 && room < tick.width + gap) || !inside (figure, tick.x, tick.width) || !is_free (ticks, n, tick.x, tick.width, gap);
        }
      if (tick.minor)
        tick.label[0] = '\0';
      ticks[n++] = tick;
    }
  return n;
}

static void
draw_wavelength_axis (BtFigure *figure, cairo_t *cr)
{
  const BtBox *box = &figure->panels[BT_PANEL_SPECTRUM];
  const double font = figure->view.font_pt, length = font * TICK;
  BtTick ticks[768];
  gsize n = bt_figure_wavelength_ticks (figure, ticks, G_N_ELEMENTS (ticks));

  for (gsize i = 0; i < n; i++)
    tick_line (cr, ticks[i].x, box->y, 0, ticks[i].minor ? -length / 2 : -length);
  cairo_stroke (cr);
  for (gsize i = 0; i < n; i++)
    if (!ticks[i].minor)
      draw_text (figure, cr, ticks[i].label, ticks[i].x, box->y - length - 0.1 * font, 0.5, 1);
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
