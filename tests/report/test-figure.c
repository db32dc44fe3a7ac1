/* The figure: its mappings, its ticks, and that all of it is drawn and none of it beyond its edges, at every size. */
#include <math.h>
#include <string.h>

#include <glib/gstdio.h>

#include <bandtally/bandtally.h>

#include "figure-private.h"
#include "ticks.h"

static BtFilm *film;
static BtTally *tally;

static void
prepare (void)
{
  BtForecast forecast;
  BtRecipe *recipe = bt_recipe_new ();
  BtRange excluded = { 1.50, 1.56 };
  BtSpectrum *spectrum;
  g_autoptr (GError) error = NULL;
  g_autofree double *x = NULL, *y = NULL;
  gsize n;

  bt_forecast_init (&forecast);
  forecast.step_nm = 2;
  n = bt_forecast_n_points (&forecast);
  x = g_new (double, n);
  y = g_new (double, n);
  g_assert_true (bt_forecast_compute (&forecast, x, y, &error));
  spectrum = bt_spectrum_new (x, y, n, BT_X_NM, BT_Y_ABSORBANCE, "Test 1", &error);
  g_assert_no_error (error);
  film = bt_film_new (spectrum);
  bt_film_set_thickness (film, 100, 5);
  recipe->window = (BtDiameterWindow){ 1.4, 0.1 };
  g_array_append_val (recipe->excluded, excluded);
  tally = bt_tally_film (film, recipe, BT_EFFORT_FULL, NULL, NULL, NULL, NULL, &error);
  g_assert_no_error (error);
  bt_recipe_free (recipe);
  g_object_unref (spectrum);
}

/* Energies shown, from all to less than the distance of two points. 1.00010 and 1.0005 lie between two points of a 2 nm reading. */
static const struct { double low_ev, high_ev; } views[] = {
  { 0, 0 }, { 0.45, 6.2 }, { 0.5, 0.9 }, { 1.0, 1.012 }, { 1.0002, 1.0012 }, { 1.0001, 1.0005 }, { 2.4, 4.1 },
};
static const struct { double width, height, font_pt; } sizes[] = {
  { 500, 350, 9 }, { 500, 350, 11 }, { 1000, 650, 11 }, { 1000, 650, 18 }, { 3000, 2000, 11 }, { 3000, 2000, 33 },
};

static void
test_mappings (void)
{
  BtFigure *figure = bt_figure_new (film, tally, NULL, NULL);

  for (int quantity = BT_QUANTITY_ABSORBANCE; quantity <= BT_QUANTITY_ALPHA; quantity++)
    for (gsize v = 0; v < G_N_ELEMENTS (views); v++)
      {
        BtFigureView view, shown;
        double x[BT_N_PANELS], y[BT_N_PANELS], w[BT_N_PANELS], h[BT_N_PANELS];

        bt_figure_view_init (&view);
        view.quantity = (BtQuantity)quantity;
        view.low_ev = views[v].low_ev;
        view.high_ev = views[v].high_ev;
        bt_figure_draw (figure, NULL, 800, 600, &view);
        bt_figure_get_shown (figure, &shown);
        for (int p = 0; p < BT_N_PANELS; p++)
          {
            bt_figure_get_panel (figure, (BtPanel)p, &x[p], &y[p], &w[p], &h[p]);
            /* One energy axis for all, one below the other. */
            g_assert_cmpfloat (x[p], ==, x[0]);
            g_assert_cmpfloat (w[p], ==, w[0]);
            g_assert_true (p == 0 || y[p] > y[p - 1] + h[p - 1]);
          }
        g_assert_cmpfloat_with_epsilon (bt_figure_x_from_ev (figure, shown.low_ev), x[0], 1e-6);
        g_assert_cmpfloat_with_epsilon (bt_figure_x_from_ev (figure, shown.high_ev), x[0] + w[0], 1e-6);
        g_assert_cmpfloat_with_epsilon (bt_figure_y_from_diameter (figure, shown.low_nm), y[2] + h[2], 1e-6);
        g_assert_cmpfloat_with_epsilon (bt_figure_y_from_diameter (figure, shown.high_nm), y[2], 1e-6);
        for (double t = -0.2; t < 1.3; t += 0.1)
          {
            double px = x[0] + t * w[0], py = y[0] + t * h[0], pd = y[2] + t * h[2];

            g_assert_cmpfloat_with_epsilon (bt_figure_x_from_ev (figure, bt_figure_ev_from_x (figure, px)), px, 1e-6);
            g_assert_cmpfloat_with_epsilon (bt_figure_y_from_absorbance (figure, bt_figure_absorbance_from_y (figure, py)), py, 1e-6);
            g_assert_cmpfloat_with_epsilon (bt_figure_y_from_diameter (figure, bt_figure_diameter_from_y (figure, pd)), pd, 1e-6);
          }
      }
  bt_figure_free (figure);
}

/* An absorbance of 1 in 100 nm is ln 10 / 1e-5 cm (Beer and Lambert): the axis of alpha must stand there. */
static void
test_alpha (void)
{
  BtFigure *figure = bt_figure_new (film, tally, NULL, NULL);
  BtFigureView view;
  double x, y, w, h;

  bt_figure_view_init (&view);
  view.quantity = BT_QUANTITY_ALPHA;
  view.low_value = 0;
  view.high_value = 2.302585092994046e5;
  bt_figure_draw (figure, NULL, 800, 600, &view);
  bt_figure_get_panel (figure, BT_PANEL_SPECTRUM, &x, &y, &w, &h);
  g_assert_cmpfloat_with_epsilon (bt_figure_absorbance_from_y (figure, y), 1, 1e-9);
  g_assert_cmpfloat_with_epsilon (bt_figure_y_from_absorbance (figure, 0.5), y + h / 2, 1e-6);
  bt_figure_free (figure);
}

static void
test_step (void)
{
  /* 1, 2 or 5 times a power of ten, the smallest that keeps the distance. */
  static const struct { double low, high, length, gap, step; int decimals; } rows[] = {
    { 0, 1, 100, 10, 0.1, 1 }, { 0, 1, 100, 11, 0.2, 1 }, { 0, 1, 100, 21, 0.5, 1 }, { 0, 1, 100, 51, 1, 0 },
    { 0.5, 2.5, 100, 10, 0.2, 1 }, { 0, 7e5, 350, 60, 2e5, 0 }, { 1, 1.001, 200, 50, 5e-4, 4 }, { 1, 1, 100, 10, 0, 0 },
    { 2, 1, 100, 10, 0, 0 }, { 0, NAN, 100, 10, 0, 0 },
  };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      int decimals = -1;
      double step = bt_ticks_step (rows[i].low, rows[i].high, rows[i].length, rows[i].gap, &decimals);

      g_assert_cmpfloat_with_epsilon (step, rows[i].step, 1e-12 * fmax (1, rows[i].step));
      g_assert_cmpint (decimals, ==, rows[i].decimals);
    }
}

/* No two labels nearer than a third of a font size, none cut, and each saying where it stands. */
static void
check_labels (BtFigure *figure, const BtTick *ticks, gsize n, gboolean wavelengths, double font_pt)
{
  guint labels = 0;

  g_assert_cmpuint (n, >, 0);
  for (gsize i = 0; i < n; i++)
    {
      double at = g_ascii_strtod (ticks[i].label, NULL), places = 0;
      const char *point = strchr (ticks[i].label, '.');

      if (ticks[i].label[0] == '\0')
        continue;
      labels++;
      places = point != NULL ? (double) strlen (point + 1) : 0;
      g_assert_cmpfloat (ticks[i].x - ticks[i].width / 2, >=, 0);
      g_assert_cmpfloat (ticks[i].x + ticks[i].width / 2, <=, figure->width);
      /* The digits shown are the place exactly, not rounded to it. */
      g_assert_cmpfloat_with_epsilon (bt_figure_x_from_ev (figure, wavelengths ? bt_ev_from_nm (at) : at), ticks[i].x, 0.01);
      g_assert_cmpfloat (places, <, 8);
      for (gsize k = 0; k < i; k++)
        if (ticks[k].label[0] != '\0')
          g_assert_cmpfloat (fabs (ticks[i].x - ticks[k].x), >=, (ticks[i].width + ticks[k].width) / 2 + font_pt / 3);
    }
  g_assert_cmpuint (labels, >=, 2);
}

static void
test_labels (void)
{
  BtFigure *figure = bt_figure_new (film, tally, NULL, NULL);

  for (gsize v = 0; v < G_N_ELEMENTS (views); v++)
    for (gsize s = 0; s < G_N_ELEMENTS (sizes); s++)
      {
        BtFigureView view;
        BtTick ticks[768];

        bt_figure_view_init (&view);
        view.low_ev = views[v].low_ev;
        view.high_ev = views[v].high_ev;
        view.font_pt = sizes[s].font_pt;
        g_test_message ("%g to %g eV at %g x %g, %g pt", views[v].low_ev, views[v].high_ev, sizes[s].width, sizes[s].height, sizes[s].font_pt);
        bt_figure_draw (figure, NULL, sizes[s].width, sizes[s].height, &view);
        check_labels (figure, ticks, bt_figure_energy_ticks (figure, ticks, G_N_ELEMENTS (ticks)), FALSE, view.font_pt);
        check_labels (figure, ticks, bt_figure_wavelength_ticks (figure, ticks, G_N_ELEMENTS (ticks)), TRUE, view.font_pt);
      }
  bt_figure_free (figure);
}

static void
test_round_wavelengths (void)
{
  BtRoundNm values[768];
  gsize n = bt_ticks_wavelengths (300, 2500, values, G_N_ELEMENTS (values));

  g_assert_cmpuint (n, >=, 23);
  g_assert_cmpfloat (values[0].nm, ==, 1000);
  g_assert_cmpfloat (values[1].nm, ==, 2000);
  g_assert_cmpfloat (values[2].nm, ==, 500);
  for (gsize i = 0; i < n; i++)
    {
      g_assert_cmpfloat (values[i].nm, >=, 300);
      g_assert_cmpfloat (values[i].nm, <=, 2500);
      g_assert_cmpfloat (fmod (values[i].nm, values[i].round_nm), ==, 0);
      g_assert_cmpfloat (values[i].round_nm, <=, i > 0 ? values[i - 1].round_nm : 1000);
      for (gsize k = 0; k < i; k++)
        g_assert_cmpfloat (values[i].nm, !=, values[k].nm);
    }
  g_assert_cmpuint (bt_ticks_wavelengths (300, 2500, values, 5), ==, 5);
  g_assert_cmpuint (bt_ticks_wavelengths (500, 500, values, 5), ==, 0);
  g_assert_cmpuint (bt_ticks_wavelengths (-1, 500, values, 5), ==, 0);
}

/* What is drawn lies inside; ink_extents would show a text that hangs over, as the recording has no edge of its own. */
static void
check_ink (BtFigure *figure, double width, double height, const BtFigureView *view)
{
  cairo_surface_t *surface = cairo_recording_surface_create (CAIRO_CONTENT_COLOR_ALPHA, NULL);
  cairo_t *cr = cairo_create (surface);
  double x, y, w, h;

  bt_figure_draw (figure, cr, width, height, view);
  g_assert_cmpint (cairo_status (cr), ==, CAIRO_STATUS_SUCCESS);
  cairo_destroy (cr);
  cairo_surface_destroy (surface);

  /* Axes again, without the figure's own clip. */
  surface = cairo_recording_surface_create (CAIRO_CONTENT_COLOR_ALPHA, NULL);
  cr = cairo_create (surface);
  bt_figure_draw_axes (figure, cr);
  g_assert_cmpint (cairo_status (cr), ==, CAIRO_STATUS_SUCCESS);
  cairo_destroy (cr);
  cairo_recording_surface_ink_extents (surface, &x, &y, &w, &h);
  cairo_surface_destroy (surface);
  g_assert_cmpfloat (x, >=, 0);
  g_assert_cmpfloat (y, >=, 0);
  g_assert_cmpfloat (x + w, <=, width);
  g_assert_cmpfloat (y + h, <=, height);
  g_assert_cmpfloat (w, >, 0.8 * width);
  g_assert_cmpfloat (h, >, 0.8 * height);
}

static void
test_ink (void)
{
  for (int fitted = 0; fitted < 2; fitted++)
    {
      BtFigure *figure = bt_figure_new (film, fitted ? tally : NULL, NULL, NULL);

      for (gsize v = 0; v < G_N_ELEMENTS (views); v++)
        for (gsize s = 0; s < G_N_ELEMENTS (sizes); s++)
          {
            BtFigureView view;

            bt_figure_view_init (&view);
            view.low_ev = views[v].low_ev;
            view.high_ev = views[v].high_ev;
            view.font_pt = sizes[s].font_pt;
            view.theme = (BtTheme)(v % 3);
            view.quantity = v % 2 ? BT_QUANTITY_ALPHA : BT_QUANTITY_ABSORBANCE;
            view.cursor_ev = 1.0003;
            view.selected_band = (int) v - 1;
            g_test_message ("%g to %g eV at %g x %g, %g pt", view.low_ev, view.high_ev, sizes[s].width, sizes[s].height, view.font_pt);
            check_ink (figure, sizes[s].width, sizes[s].height, &view);
            view.show_residual = v % 2;
            view.show_tubes = FALSE;
            check_ink (figure, sizes[s].width, sizes[s].height, &view);
          }
      bt_figure_free (figure);
    }
}

/* Pixels of nearly this colour in a column. */
static guint
count_dark (cairo_surface_t *surface, int column, int top, int bottom)
{
  const unsigned char *data = cairo_image_surface_get_data (surface);
  int stride = cairo_image_surface_get_stride (surface);
  guint n = 0;

  for (int y = top; y < bottom; y++)
    {
      const guint32 pixel = *(const guint32 *) (data + y * stride + 4 * column);

      n += (pixel >> 16 & 255) < 110 && (pixel >> 8 & 255) < 110 && (pixel & 255) < 110;
    }
  return n;
}

/* However far one looks in, the reading crosses the whole panel. */
static void
test_deep_zoom (void)
{
  BtFigure *figure = bt_figure_new (film, NULL, NULL, NULL);

  for (gsize v = 0; v < G_N_ELEMENTS (views); v++)
    {
      BtFigureView view;
      cairo_surface_t *surface = cairo_image_surface_create (CAIRO_FORMAT_RGB24, 800, 600);
      cairo_t *cr = cairo_create (surface);
      double x, y, w, h;

      bt_figure_view_init (&view);
      view.low_ev = views[v].low_ev;
      view.high_ev = views[v].high_ev;
      view.show_residual = view.show_tubes = FALSE;
      bt_figure_draw (figure, cr, 800, 600, &view);
      cairo_surface_flush (surface);
      bt_figure_get_panel (figure, BT_PANEL_SPECTRUM, &x, &y, &w, &h);
      for (int column = (int) x + 3; column < (int) (x + w) - 3; column++)
        {
          double e = bt_figure_ev_from_x (figure, column + 0.5), at = bt_figure_y_from_absorbance (figure, bt_figure_film_at (figure, e));

          if (isfinite (at) && at > y + 4 && at < y + h - 4)
            {
              g_test_message ("%g eV", e);
              g_assert_cmpuint (count_dark (surface, column, (int) y + 3, (int) (y + h) - 3), >, 0);
            }
        }
      cairo_destroy (cr);
      cairo_surface_destroy (surface);
    }
  bt_figure_free (figure);
}

/* Contrast of text by WCAG 2.1 (W3C 2018), 1.4.3: at least 4.5 to 1. */
static double
luminance (BtColour c)
{
  const double parts[] = { c.r, c.g, c.b }, weights[] = { 0.2126, 0.7152, 0.0722 };
  double sum = 0;

  for (int i = 0; i < 3; i++)
    sum += weights[i] * (parts[i] <= 0.03928 ? parts[i] / 12.92 : pow ((parts[i] + 0.055) / 1.055, 2.4));
  return sum;
}

static void
test_contrast (void)
{
  for (int theme = BT_THEME_LIGHT; theme <= BT_THEME_PRINT; theme++)
    {
      const BtPalette *palette = bt_palette_get ((BtTheme)theme);
      const BtColour grounds[] = { palette->ground, palette->veil };

      for (gsize i = 0; i < G_N_ELEMENTS (grounds); i++)
        {
          double a = luminance (palette->ink), b = luminance (grounds[i]);

          g_assert_cmpfloat ((fmax (a, b) + 0.05) / (fmin (a, b) + 0.05), >=, 4.5);
        }
    }
}

static void
ignore_text (GMarkupParseContext *context, const char *text, gsize length, gpointer data, GError **error)
{
}

static void
test_save (void)
{
  static const struct { const char *name, *start; int length; } kinds[] = {
    { "figure.svg", "<?xml", 5 }, { "figure.pdf", "%PDF-", 5 }, { "figure.PNG", "\x89PNG\r\n\x1a\n", 8 },
  };
  static const GMarkupParser parser = { .text = ignore_text };
  g_autoptr (GError) error = NULL;
  g_autofree char *folder = g_dir_make_tmp ("bandtally-XXXXXX", &error), *wrong = g_build_filename (folder, "figure.doc", NULL);
  BtFigure *figure = bt_figure_new (film, tally, NULL, NULL);
  BtFigureView view;

  g_assert_no_error (error);
  bt_figure_view_init (&view);
  view.theme = BT_THEME_PRINT;
  for (gsize i = 0; i < G_N_ELEMENTS (kinds); i++)
    {
      g_autofree char *path = g_build_filename (folder, kinds[i].name, NULL), *text = NULL;
      gsize length;

      g_assert_true (bt_figure_save (figure, path, 500, 350, &view, &error));
      g_assert_no_error (error);
      g_assert_true (g_file_get_contents (path, &text, &length, &error));
      g_assert_cmpuint (length, >, 5000);
      g_assert_cmpmem (text, kinds[i].length, kinds[i].start, kinds[i].length);
      if (g_str_has_suffix (path, ".svg"))
        {
          GMarkupParseContext *context = g_markup_parse_context_new (&parser, 0, NULL, NULL);

          g_assert_true (g_markup_parse_context_parse (context, text, (gssize) length, &error));
          g_assert_true (g_markup_parse_context_end_parse (context, &error));
          g_assert_null (strstr (text, "nan"));
          g_markup_parse_context_free (context);
        }
      if (g_str_has_suffix (path, ".PNG"))
        {
          cairo_surface_t *surface = cairo_image_surface_create_from_png (path);

          /* 500 pt at 192 dpi */
          g_assert_cmpint (cairo_image_surface_get_width (surface), ==, 1334);
          g_assert_cmpint (cairo_image_surface_get_height (surface), ==, 934);
          cairo_surface_destroy (surface);
        }
      g_remove (path);
    }
  g_assert_false (bt_figure_save (figure, wrong, 500, 350, &view, &error));
  g_assert_nonnull (strstr (error->message, "figure.doc"));
  g_clear_error (&error);
  g_rmdir (folder);
  /* The folder is gone. */
  g_free (wrong);
  wrong = g_build_filename (folder, "figure.svg", NULL);
  g_assert_false (bt_figure_save (figure, wrong, 500, 350, &view, &error));
  g_assert_nonnull (strstr (error->message, folder));
  bt_figure_free (figure);
}

/* Strip and bar stay in their boxes and leave ink. */
static void
test_small (void)
{
  for (int fitted = 0; fitted < 2; fitted++)
    for (int what = 0; what < 2; what++)
      {
        cairo_surface_t *surface = cairo_recording_surface_create (CAIRO_CONTENT_COLOR_ALPHA, NULL);
        cairo_t *cr = cairo_create (surface);
        double x, y, w, h;

        if (what == 0)
          bt_strip_draw (cr, 160, 40, film, fitted ? tally : NULL, BT_THEME_DARK);
        else
          bt_fraction_bar_draw (cr, 160, 12, fitted ? tally : NULL, BT_THEME_DARK);
        g_assert_cmpint (cairo_status (cr), ==, CAIRO_STATUS_SUCCESS);
        cairo_destroy (cr);
        cairo_recording_surface_ink_extents (surface, &x, &y, &w, &h);
        cairo_surface_destroy (surface);
        g_assert_cmpfloat (w, >, 150);
        g_assert_cmpfloat (x, >=, -1);
        g_assert_cmpfloat (y, >=, -1);
        g_assert_cmpfloat (x + w, <=, 161);
        g_assert_cmpfloat (y + h, <=, what == 0 ? 41 : 13);
      }
}

int
main (int argc, char **argv)
{
  int result;

  g_test_init (&argc, &argv, NULL);
  prepare ();
  g_test_add_func ("/figure/mappings", test_mappings);
  g_test_add_func ("/figure/alpha", test_alpha);
  g_test_add_func ("/figure/step", test_step);
  g_test_add_func ("/figure/round-wavelengths", test_round_wavelengths);
  g_test_add_func ("/figure/labels", test_labels);
  g_test_add_func ("/figure/ink", test_ink);
  g_test_add_func ("/figure/deep-zoom", test_deep_zoom);
  g_test_add_func ("/figure/contrast", test_contrast);
  g_test_add_func ("/figure/save", test_save);
  g_test_add_func ("/figure/small", test_small);
  result = g_test_run ();
  bt_tally_unref (tally);
  g_object_unref (film);
  return result;
}
