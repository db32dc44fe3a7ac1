/* Small drawings for the rack: a film's curve, and its fraction as a bar. */
#include <bandtally/figure.h>

#include <math.h>

#include "palette.h"

void
bt_strip_draw (cairo_t *cr, double width, double height, BtFilm *film, const BtTally *tally, BtTheme theme)
{
  const BtPalette *palette = bt_palette_get (theme);
  BtSpectrum *spectrum = bt_film_get_spectrum (film);
  gsize n;
  const double *energy = bt_spectrum_get_energy_ev (spectrum, &n), *absorbance = bt_spectrum_get_absorbance (spectrum, &n);
  const double low_ev = energy[0], high_ev = fmin (energy[n - 1], tally != NULL && tally->n > 0 ? tally->range.high_ev + 0.3 : 3.2);
  double low = 0, high = 0, last_x = -INFINITY;

  for (gsize i = 0; i < n && energy[i] <= high_ev; i++)
    {
      low = fmin (low, absorbance[i]);
      high = fmax (high, absorbance[i]);
    }
  if (!(high > low) || !(high_ev > low_ev))
    return;
  if (tally != NULL && tally->n > 1)
    {
      for (gsize i = 0; i < tally->n; i++)
        cairo_line_to (cr, width * (tally->energy_ev[i] - low_ev) / (high_ev - low_ev),
                       height - 1 - (height - 2) * (tally->tail_curve[i] - low) / (high - low));
      cairo_line_to (cr, width * (tally->energy_ev[tally->n - 1] - low_ev) / (high_ev - low_ev), height);
      cairo_line_to (cr, width * (tally->energy_ev[0] - low_ev) / (high_ev - low_ev), height);
      cairo_close_path (cr);
      bt_colour_set (cr, palette->tail, 0.25);
      cairo_fill (cr);
    }
  for (gsize i = 0; i < n && energy[i] <= high_ev; i++)
    {
      double x = width * (energy[i] - low_ev) / (high_ev - low_ev);

      if (x - last_x < 0.4)
        continue;
      cairo_line_to (cr, x, height - 1 - (height - 2) * (absorbance[i] - low) / (high - low));
      last_x = x;
    }
  bt_colour_set (cr, palette->data, 1);
  cairo_set_line_width (cr, 1.2);
  cairo_set_line_join (cr, CAIRO_LINE_JOIN_BEVEL);
  cairo_stroke (cr);
}

void
bt_fraction_bar_draw (cairo_t *cr, double width, double height, const BtTally *tally, BtTheme theme)
{
  const BtPalette *palette = bt_palette_get (theme);
  const double middle = height / 2, thick = fmax (2, height * 0.28);
  const BtFraction *fraction = tally != NULL ? &tally->fraction : NULL;

  bt_colour_set (cr, palette->soft, 1);
  cairo_rectangle (cr, 0, middle - 1, width, 2);
  cairo_fill (cr);
  if (fraction == NULL || fraction->bound == BT_BOUND_NONE)
    return;
  bt_colour_set (cr, palette->group[BT_S22], 0.55);
  cairo_rectangle (cr, width * fraction->low, middle - thick, fmax (2, width * (fraction->high - fraction->low)), 2 * thick);
  cairo_fill (cr);
  if (fraction->bound == BT_BOUND_TWO_SIDED)
    {
      bt_colour_set (cr, palette->ink, 1);
      cairo_rectangle (cr, CLAMP (width * fraction->value - 1, 0, width - 2), middle - thick, 2, 2 * thick);
      cairo_fill (cr);
    }
  else
    {
      /* An arrow's head at the bound: from here upwards. */
      bt_colour_set (cr, palette->ink, 1);
      cairo_move_to (cr, width * fraction->low, middle - thick);
      cairo_rel_line_to (cr, thick, thick);
      cairo_rel_line_to (cr, -thick, thick);
      cairo_close_path (cr);
      cairo_fill (cr);
    }
  if (!isnan (tally->recipe->limit))
    {
      bt_colour_set (cr, palette->ink, 1);
      cairo_set_line_width (cr, 1);
      cairo_move_to (cr, floor (width * tally->recipe->limit) + 0.5, 0);
      cairo_rel_line_to (cr, 0, height);
      cairo_stroke (cr);
    }
}
