/* A figure's inside, shared by the files that draw its panels. Private to core/report. */
#ifndef BANDTALLY_FIGURE_PRIVATE_H
#define BANDTALLY_FIGURE_PRIVATE_H

#include <pango/pangocairo.h>

#include <bandtally/figure.h>

#include "palette.h"

typedef struct { double x, y, width, height; } BtBox;

struct _BtFigure
{
  BtFilm *film;
  BtTally *tally;      /* nullable */
  BtCurve *own_curve;  /* where there is no tally */
  const BtCurve *curve;
  BtBandPlan plan;
  gboolean has_plan;
  BtRecipe *recipe;    /* nullable */
  double alpha_factor; /* per cm for absorbance 1; NAN where no thickness is known */

  /* After layout. */
  BtFigureView view;   /* with every "all" resolved */
  gboolean is_alpha;
  double factor;       /* shown value for absorbance 1, power of ten taken out */
  int power;           /* of ten, on the axis label */
  double residual_top; /* units of the noise */
  BtBox panels[BT_N_PANELS];
  double width, height;
  const BtPalette *palette;
  PangoFontDescription *font;
  PangoContext *context; /* for all text, drawn or only measured */
};

/* A tick of the energy or the wavelength axis. @label: empty at a minor tick, and where the label would be cut; @width: of the label. */
typedef struct { double x, width; gboolean minor; char label[24]; } BtTick;
/* Fill @ticks with at most @max, of labels that stand clear of each other and inside the figure. After layout. */
gsize bt_figure_energy_ticks (BtFigure *figure, BtTick *ticks, gsize max);
gsize bt_figure_wavelength_ticks (BtFigure *figure, BtTick *ticks, gsize max);

/* Axes, ticks, labels and frames of all panels. */
void bt_figure_draw_axes (BtFigure *figure, cairo_t *cr);
void bt_figure_draw_spectrum (BtFigure *figure, cairo_t *cr);
void bt_figure_draw_residual (BtFigure *figure, cairo_t *cr);
void bt_figure_draw_kataura (BtFigure *figure, cairo_t *cr);
/* Grey over energies that are not fitted, hatching over excluded ones, in a panel. */
void bt_figure_draw_veils (BtFigure *figure, cairo_t *cr, const BtBox *box);

/* Space that axis labels need, by font and range. */
void bt_figure_margins (BtFigure *figure, double *left, double *right, double *top, double *bottom);
/* (transfer full): a layout in the figure's font, @scale times its size; @cr nullable. */
PangoLayout *bt_figure_text (BtFigure *figure, cairo_t *cr, const char *markup, double scale);
void bt_layout_size (PangoLayout *layout, double *width, double *height);
double bt_figure_value_y (BtFigure *figure, double value);
double bt_figure_residual_y (BtFigure *figure, double sigmas);
/* Linear interpolation in an array over the tally's fitted points; NAN outside. */
double bt_figure_fitted_at (BtFigure *figure, const double *values, double energy_ev);

#endif
