/* The curve of a standard over wavelength, with what was found on it. */
#include <glib/gi18n-lib.h>
#include <math.h>

#include "palette.h"
#include "report-check-private.h"
#include "ticks.h"

#define HEIGHT 150.0
/* Room for the numbers. */
#define LEFT 30.0
#define BOTTOM 24.0
#define TOP 8.0
/* Shown on either side of the outermost wavelengths of the standard, nm. */
#define BEYOND_NM 15.0

typedef struct
{
  PangoContext *context;
  gsize n;
  double *nm, *absorbance; /* owned, of length n, by falling wavelength */
  GArray *marks;           /* BtCheckLine, those that were found */
  double low_nm, high_nm, top;
} Curve;

static void
curve_free (gpointer data)
{
  Curve *curve = data;

  g_object_unref (curve->context);
  g_free (curve->nm);
  g_free (curve->absorbance);
  g_array_unref (curve->marks);
  g_free (curve);
}

static double
x_of (const Curve *curve, double width, double nm)
{
  return LEFT + (width - LEFT - 1) * (nm - curve->low_nm) / (curve->high_nm - curve->low_nm);
}

static double
y_of (const Curve *curve, double height, double absorbance)
{
  return height - BOTTOM - (height - BOTTOM - TOP) * CLAMP (absorbance / curve->top, 0, 1);
}

/* Between the points; NAN outside them. */
static double
value_at (const Curve *curve, double nm)
{
  for (gsize i = 0; i + 1 < curve->n; i++)
    if (curve->nm[i] >= nm && curve->nm[i + 1] <= nm && curve->nm[i] > curve->nm[i + 1])
      return curve->absorbance[i]
             + (curve->absorbance[i + 1] - curve->absorbance[i]) * (nm - curve->nm[i]) / (curve->nm[i + 1] - curve->nm[i]);
  return NAN;
}

static void
draw_axes (const Curve *curve, cairo_t *cr, double width, double height)
{
  int decimals;
  double step = bt_ticks_step (curve->low_nm, curve->high_nm, width, 50, &decimals);
  g_autoptr (PangoLayout) name = bt_report_layout_new (curve->context, BT_FACE_NOTE, _ ("wavelength, nm"), 0);
  g_autoptr (PangoLayout) value = bt_report_layout_new (curve->context, BT_FACE_NOTE, _ ("absorbance"), 0);

  cairo_set_line_width (cr, 0.5);
  for (double nm = ceil (curve->low_nm / step) * step; step > 0 && nm <= curve->high_nm; nm += step)
    {
      g_autofree char *text = g_strdup_printf ("%.*f", decimals, nm);
      g_autoptr (PangoLayout) label = bt_report_layout_new (curve->context, BT_FACE_NOTE, text, 0);
      const double x = x_of (curve, width, nm), wide = bt_layout_width_pt (label);

      bt_shade_set (cr, BT_SHADE_HAIR);
      cairo_move_to (cr, x, height - BOTTOM);
      cairo_rel_line_to (cr, 0, 3);
      cairo_stroke (cr);
      bt_layout_show (cr, label, CLAMP (x - wide / 2, 0, width - wide), height - BOTTOM + 4);
    }
  bt_layout_show (cr, name, LEFT + (width - LEFT - bt_layout_width_pt (name)) / 2, height - bt_layout_height_pt (name));
  step = bt_ticks_step (0, curve->top, height - BOTTOM - TOP, 24, &decimals);
  for (int i = 0; step > 0 && i * step <= curve->top; i++)
    {
      g_autofree char *text = g_strdup_printf ("%.*f", decimals, i * step);
      g_autoptr (PangoLayout) label = bt_report_layout_new (curve->context, BT_FACE_NOTE, text, 0);
      const double y = y_of (curve, height, i * step);

      bt_shade_set (cr, BT_SHADE_HAIR);
      cairo_move_to (cr, LEFT - 3, y);
      cairo_line_to (cr, width - 1, y);
      cairo_stroke (cr);
      bt_layout_show (cr, label, LEFT - 5 - bt_layout_width_pt (label), y - bt_layout_height_pt (label) / 2);
    }
  cairo_save (cr);
  cairo_translate (cr, 0, TOP + (height - BOTTOM - TOP + bt_layout_width_pt (value)) / 2);
  cairo_rotate (cr, -G_PI_2);
  bt_layout_show (cr, value, 0, 0);
  cairo_restore (cr);
}

/* Within or not judged: a ring; outside: a cross. Its wavelength or value stands in the table. */
static void
draw_mark (const Curve *curve, cairo_t *cr, double width, double height, const BtCheckLine *line, gboolean holmium)
{
  const double nm = holmium ? line->found : line->wavelength_nm, at = holmium ? value_at (curve, nm) : line->found;
  const double x = x_of (curve, width, nm), y = y_of (curve, height, at), r = 2.6;

  if (isnan (at))
    return;
  bt_shade_set (cr, line->state == BT_CHECK_NOT_JUDGED ? BT_SHADE_GREY : BT_SHADE_INK);
  cairo_set_line_width (cr, line->state == BT_CHECK_NOT_JUDGED ? 0.7 : 1.2);
  if (line->state == BT_CHECK_FAILED)
    {
      cairo_move_to (cr, x - r, y - r);
      cairo_line_to (cr, x + r, y + r);
      cairo_move_to (cr, x + r, y - r);
      cairo_line_to (cr, x - r, y + r);
    }
  else
    cairo_arc (cr, x, y, r, 0, 2 * G_PI);
  cairo_stroke (cr);
}

static void
draw_curve (cairo_t *cr, double width, double height, gpointer data)
{
  const Curve *curve = data;

  draw_axes (curve, cr, width, height);
  cairo_save (cr);
  cairo_rectangle (cr, LEFT, TOP - 1, width - LEFT, height - BOTTOM - TOP + 2);
  cairo_clip (cr);
  for (gsize i = 0; i < curve->n; i++)
    cairo_line_to (cr, x_of (curve, width, curve->nm[i]), y_of (curve, height, curve->absorbance[i]));
  bt_colour_set (cr, bt_palette_get (BT_THEME_PRINT)->data, 1);
  cairo_set_line_width (cr, 0.9);
  cairo_set_line_join (cr, CAIRO_LINE_JOIN_BEVEL);
  cairo_stroke (cr);
  cairo_restore (cr);
  for (guint i = 0; i < curve->marks->len; i++)
    {
      const BtCheckLine *line = &g_array_index (curve->marks, BtCheckLine, i);

      /* A published position lies in nm, an absorbance far below. */
      draw_mark (curve, cr, width, height, line, line->published == line->wavelength_nm);
    }
}

BtBlock *
bt_report_check_figure_new (PangoContext *context, const BtInstrumentCheck *check, BtSpectrum *spectrum, double width)
{
  Curve *curve = g_new0 (Curve, 1);
  const GArray *lines = check->lines;
  const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, &curve->n), *absorbance = bt_spectrum_get_absorbance (spectrum, NULL);
  double low = INFINITY, high = -INFINITY;

  curve->context = g_object_ref (context);
  curve->nm = g_new (double, curve->n);
  curve->absorbance = g_memdup2 (absorbance, curve->n * sizeof (double));
  curve->marks = g_array_new (FALSE, FALSE, sizeof (BtCheckLine));
  for (guint i = 0; i < lines->len; i++)
    {
      const BtCheckLine *line = &g_array_index (lines, BtCheckLine, i);

      if (line->state == BT_CHECK_NOT_MEASURED)
        continue;
      low = fmin (low, line->wavelength_nm);
      high = fmax (high, line->wavelength_nm);
      if (!isnan (line->found))
        g_array_append_val (curve->marks, *line);
    }
  for (gsize i = 0; i < curve->n; i++)
    curve->nm[i] = bt_nm_from_ev (energy_ev[i]);
  curve->low_nm = fmax (low - BEYOND_NM, curve->nm[curve->n - 1]);
  curve->high_nm = fmin (high + BEYOND_NM, curve->nm[0]);
  for (gsize i = 0; i < curve->n; i++)
    if (curve->nm[i] >= curve->low_nm && curve->nm[i] <= curve->high_nm)
      curve->top = fmax (curve->top, absorbance[i]);
  curve->top = curve->top > 0 ? 1.08 * curve->top : 1;
  return bt_block_new_drawing (width, HEIGHT, draw_curve, curve, curve_free);
}
