/* A figure as a file: SVG, PDF or PNG by the name's ending. */
#include <bandtally/figure.h>

#include <math.h>

#include <cairo-pdf.h>
#include <cairo-svg.h>
#include <gio/gio.h>
#include <glib/gi18n-lib.h>

#define PNG_DPI 192.0

static cairo_status_t
append (void *closure, const unsigned char *data, unsigned int length)
{
  g_byte_array_append (closure, data, length);
  return CAIRO_STATUS_SUCCESS;
}

gboolean
bt_figure_save (BtFigure *figure, const char *path, double width_pt, double height_pt, const BtFigureView *view, GError **error)
{
  g_autoptr (GByteArray) bytes = g_byte_array_new ();
  g_autofree char *lower = g_ascii_strdown (path, -1);
  const gboolean png = g_str_has_suffix (lower, ".png");
  const double scale = png ? PNG_DPI / 72 : 1;
  cairo_surface_t *surface;
  cairo_status_t status;
  cairo_t *cr;

  if (g_str_has_suffix (lower, ".svg"))
    surface = cairo_svg_surface_create_for_stream (append, bytes, width_pt, height_pt);
  else if (g_str_has_suffix (lower, ".pdf"))
    surface = cairo_pdf_surface_create_for_stream (append, bytes, width_pt, height_pt);
  else if (png)
    surface = cairo_image_surface_create (CAIRO_FORMAT_RGB24, (int) ceil (width_pt * scale), (int) ceil (height_pt * scale));
  else
    {
      g_set_error (error, G_IO_ERROR, G_IO_ERROR_NOT_SUPPORTED, _ ("%s: a figure is saved as .svg, .pdf or .png; choose a name that ends so."), path);
      return FALSE;
    }
  cr = cairo_create (surface);
  cairo_scale (cr, scale, scale);
  bt_figure_draw (figure, cr, width_pt, height_pt, view);
  cairo_destroy (cr);
  if (png)
    cairo_surface_write_to_png_stream (surface, append, bytes);
  cairo_surface_finish (surface);
  status = cairo_surface_status (surface);
  cairo_surface_destroy (surface);
  if (status != CAIRO_STATUS_SUCCESS)
    {
      g_set_error (error, G_IO_ERROR, G_IO_ERROR_FAILED, _ ("%s: the figure could not be drawn: %s."), path, cairo_status_to_string (status));
      return FALSE;
    }
  return g_file_set_contents (path, (const char *) bytes->data, (gssize) bytes->len, error);
}
