/* What the files of BtFit share: the problem, its points as the pass wants them, and the free parameters behind all parameters.
 */
#ifndef BANDTALLY_FIT_PRIVATE_H
#define BANDTALLY_FIT_PRIVATE_H

#include <bandtally/fit.h>

#include "lm-private.h"

#define BT_FIT_MAX_NONLINEAR 12

typedef struct
{
  BtFitFunc func; /* NULL: @shape */
  BtShape shape;
  gpointer data;
  GDestroyNotify destroy;
  guint first, n_nonlinear; /* the amplitude's number; how many follow it */
  guint n_derivatives;      /* of those how many may be free: not the references of a shape */
} BtFitPart;

typedef struct
{
  double start, low, high, prior_mean, prior_u, step_limit;
  double factor, offset;
  int to; /* -1: not tied */
  gboolean fixed;
} BtFitParameter;

struct _BtFit
{
  GObject parent_instance;
  gsize n;
  double *x, *y, *sigma;
  gboolean *masked;
  GArray *parts;      /* BtFitPart */
  GArray *parameters; /* BtFitParameter */
  BtFitProgressFunc progress;
  gpointer progress_data;
  GDestroyNotify progress_destroy;
};

static inline void
bt_fit_tell (const BtFit *self, double share)
{
  if (self->progress != NULL)
    self->progress (share, self->progress_data);
}

static inline const BtFitPart *
bt_fit_part (const BtFit *self, guint i)
{
  return &g_array_index (self->parts, BtFitPart, i);
}

static inline BtFitParameter *
bt_fit_parameter (const BtFit *self, guint i)
{
  return &g_array_index (self->parameters, BtFitParameter, i);
}

/* The points in use in ascending order of x, in blocks; the last block is filled up with points of weight 0. */
typedef struct
{
  gsize n, n_blocks;
  gsize *order;      /* n; which of the problem's points each is */
  double *x, *y, *w; /* n_blocks x BT_BLOCK; w = 1 / (sigma weight) */
  double weight;     /* 1 / sigma where all are the same: products are then scaled once, at the end; otherwise 1 */
  gboolean uniform;
} BtFitPoints;

BtFitPoints *bt_fit_points_new (const BtFit *self);
void bt_fit_points_free (BtFitPoints *points);

/* full[j] = factor[j] * z[index[j]] + offset[j]; index -1: offset[j] alone. */
typedef struct
{
  guint n_full, n_free;
  int *index;
  double *factor, *offset;
  guint *root, *n_users; /* of each free one: its own number; how many depend on it */
  double *low, *high;    /* n_free */
  double *limit;         /* n_full; INFINITY for none */
} BtFitMap;

BtFitMap *bt_fit_map_new (const BtFit *self);
void bt_fit_map_free (BtFitMap *map);
void bt_fit_map_expand (const BtFitMap *map, const double *z, double *full);
void bt_fit_map_reduce (const BtFitMap *map, const double *full, double *z);

/* One worker's room: everything that a solve touches and does not share. */
typedef struct
{
  const BtFit *fit;
  const BtFitPoints *points;
  const BtFitMap *map;
  const double *y; /* in the order of the points; a resample's own */
  const BtKernel *kernel;
  BtLm lm;
  double *full, *columns, *scratch, *rows, *append_work, *scale, *ahead, *residual, *down, *up;
  double *low_of_part, *high_of_part; /* where each part is not negligible */
  guint *index, *slot;                /* of each column its free parameter, and the reverse */
} BtFitWork;

BtFitWork *bt_fit_work_new (const BtFit *fit, const BtFitPoints *points, const BtFitMap *map);
void bt_fit_work_free (BtFitWork *work);
/* The pass itself, as BtLm wants it; @data is a BtFitWork. */
void bt_fit_pass (gpointer data, const double *z, gboolean orthogonal, double above, BtLmSystem *system);
/* Fills the columns of a block, the residual last; returns how many there are. Without derivatives the residual is alone. For
 * where the last pass or bt_fit_residuals() was. */
guint bt_fit_fill_block (BtFitWork *work, gsize block, gboolean derived);
void bt_fit_limits (gpointer data, const double *z, double *down, double *up);
/* Narrows the largest steps of a shape's nonlinear parameters; both arrays start at what the user set. */
void bt_fit_shape_limits (BtShape shape, const double *q, double *down, double *up);
void bt_fit_curvature (gpointer data, const double *z, const double *v, double *out);
/* (model - y) * w at @z, in the order of the points and filled up to whole blocks. */
void bt_fit_residuals (BtFitWork *work, const double *z, double *residual);

/* Minimises from @z with the options' limits. */
BtSolveState bt_fit_run (BtFitWork *work, const BtFitOptions *options, GCancellable *cancellable, double *z);

BtFitResult *bt_fit_result_new (BtFitWork *work, const BtFitOptions *options, const double *z);

G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtFitPoints, bt_fit_points_free)
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtFitMap, bt_fit_map_free)
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtFitWork, bt_fit_work_free)

#endif
