#include "desk-theme.h"

BtTheme
desk_theme_of (GtkWidget *widget)
{
  GdkRGBA text;
  GtkStyleContext *style = gtk_widget_get_style_context (widget);
  gtk_style_context_get_color (style, gtk_style_context_get_state (style), &text);
  /* Light text stands on a dark ground. */
  return 0.299 * text.red + 0.587 * text.green + 0.114 * text.blue > 0.5 ? BT_THEME_DARK : BT_THEME_LIGHT;
}

double
desk_theme_figure_font_pt (GtkWidget *widget)
{
  PangoContext *context = gtk_widget_get_pango_context (widget);
  const PangoFontDescription *font = pango_context_get_font_description (context);
  double size = pango_font_description_get_size (font) / (double) PANGO_SCALE;
  double dpi = pango_cairo_context_get_resolution (context);
  /* The figure's point is a pixel here. */
  double pixels = pango_font_description_get_size_is_absolute (font) ? size : size * (dpi > 0 ? dpi : 96) / 72;
  return 0.83 * pixels;
}

void
desk_theme_set_dark (gboolean dark)
{
  g_object_set (gtk_settings_get_default (), "gtk-application-prefer-dark-theme", dark, NULL);
}

gboolean
desk_theme_get_dark (void)
{
  gboolean dark;
  g_object_get (gtk_settings_get_default (), "gtk-application-prefer-dark-theme", &dark, NULL);
  return dark;
}
