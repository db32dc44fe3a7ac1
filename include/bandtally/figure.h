/* The figure: spectrum, residual ribbon and Kataura plot on one energy axis. The same code draws it in the window, on paper and
 * in a file. */
#ifndef BANDTALLY_FIGURE_H
#define BANDTALLY_FIGURE_H

#include <cairo.h>
#include <bandtally/tally.h>

G_BEGIN_DECLS

typedef enum { BT_QUANTITY_ABSORBANCE, BT_QUANTITY_ALPHA } BtQuantity;
typedef enum { BT_THEME_LIGHT, BT_THEME_DARK, BT_THEME_PRINT } BtTheme;
typedef enum { BT_PANEL_SPECTRUM, BT_PANEL_RESIDUAL, BT_PANEL_KATAURA, BT_N_PANELS } BtPanel;

/**
 * BtFigureView:
 * @low_ev, @high_ev: energies shown; 0 and 0: all
 * @low_value, @high_value: of the spectrum's axis in the quantity shown; NAN: as the data need
 * @low_nm, @high_nm: diameters shown; 0 and 0: as the window needs
 * @quantity: absorbance, or absorption coefficient (falls back to absorbance without a thickness)
 * @font_pt: size of the tick labels
 * @selected_band: index into the tally's bands that is lit, or -1
 * @cursor_ev: crosshair through all panels; NAN: none
 * @show_tubes, @show_residual: which panels
 *
 * What of it is shown, and how.
 */
typedef struct {
  double low_ev, high_ev, low_value, high_value, low_nm, high_nm;
  BtQuantity quantity;
  BtTheme theme;
  double font_pt;
  int selected_band;
  double cursor_ev;
  gboolean show_residual, show_tubes;
} BtFigureView;
void bt_figure_view_init (BtFigureView *view);

typedef struct _BtFigure BtFigure;
/**
 * bt_figure_new:
 * @tally: (nullable): without one the film's reading alone is drawn
 * @plan: (nullable): where bands are expected (the diameter beam); the tally's own where %NULL
 * @recipe: (nullable): for excluded ranges; the tally's own where %NULL
 *
 * Prepares a figure; keeps a reference of film and tally, copies the rest.
 */
BtFigure *bt_figure_new (BtFilm *film, BtTally *tally, const BtBandPlan *plan, const BtRecipe *recipe);
void bt_figure_free (BtFigure *figure);
/* Lays out for this size and draws. Units of the surface (px or pt). @cr may be NULL: lays out only. */
void bt_figure_draw (BtFigure *figure, cairo_t *cr, double width, double height, const BtFigureView *view);

/* After bt_figure_draw(): where things are. */
void bt_figure_get_panel (BtFigure *figure, BtPanel panel, double *x, double *y, double *width, double *height);
double bt_figure_x_from_ev (BtFigure *figure, double energy_ev);
double bt_figure_ev_from_x (BtFigure *figure, double x);
double bt_figure_y_from_absorbance (BtFigure *figure, double absorbance);
double bt_figure_absorbance_from_y (BtFigure *figure, double y);
double bt_figure_y_from_diameter (BtFigure *figure, double diameter_nm);
double bt_figure_diameter_from_y (BtFigure *figure, double y);
/* What the axes now show (the view with its "all" resolved). */
void bt_figure_get_shown (BtFigure *figure, BtFigureView *shown);
/* Absorbance of the film at an energy (NAN where it was not measured); of the whole fit and of its tail, also beyond the fitted points (NAN
 * without a fit). */
double bt_figure_film_at (BtFigure *figure, double energy_ev);
double bt_figure_fit_at (BtFigure *figure, double energy_ev);
double bt_figure_tail_at (BtFigure *figure, double energy_ev);

/* The rack's strip: one film's curve in small. */
void bt_strip_draw (cairo_t *cr, double width, double height, BtFilm *film, const BtTally *tally, BtTheme theme);
/* The rack's bar: fraction with its interval, 0 to 1, and the limit as a mark. */
void bt_fraction_bar_draw (cairo_t *cr, double width, double height, const BtTally *tally, BtTheme theme);

/* Writes a figure to .svg, .pdf or .png by its ending; width and height in pt (png: at 192 dpi). */
gboolean bt_figure_save (BtFigure *figure, const char *path, double width_pt, double height_pt, const BtFigureView *view,
                         GError **error);

G_END_DECLS

#endif
