/* A spectrum: the numbers as read, and the same on the core's axes. Immutable once made. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "faults-private.h"
#include "spectrum-private.h"

struct _BtSpectrum
{
  GObject parent_instance;

  gsize n_raw;
  double *raw_x, *raw_y;
  BtXUnit x_unit;
  BtYUnit y_unit;
  gsize n;
  double *energy_ev, *absorbance, *noise;
  char *title, *reading;
  BtSource *source;             /* NULL where made from arrays */
  GPtrArray *flags;
  GArray *steps, *saturated;
  gsize judged;                 /* noise, steps, saturation and their flags are there */
};

G_DEFINE_FINAL_TYPE (BtSpectrum, bt_spectrum, G_TYPE_OBJECT)
G_DEFINE_QUARK (bt-spectrum-error-quark, bt_spectrum_error)

static void
bt_spectrum_finalize (GObject *object)
{
  BtSpectrum *self = BT_SPECTRUM (object);

  g_free (self->raw_x);
  g_free (self->raw_y);
  g_free (self->energy_ev);
  g_free (self->absorbance);
  g_free (self->noise);
  g_free (self->title);
  g_free (self->reading);
  g_clear_pointer (&self->source, bt_source_unref);
  g_ptr_array_unref (self->flags);
  g_array_unref (self->steps);
  g_array_unref (self->saturated);
  G_OBJECT_CLASS (bt_spectrum_parent_class)->finalize (object);
}

static void
bt_spectrum_class_init (BtSpectrumClass *klass)
{
  G_OBJECT_CLASS (klass)->finalize = bt_spectrum_finalize;
}

static void
bt_spectrum_init (BtSpectrum *self)
{
  self->flags = bt_flags_new ();
  self->steps = g_array_new (FALSE, TRUE, sizeof (BtStep));
  self->saturated = g_array_new (FALSE, TRUE, sizeof (BtRange));
}

/* Absorbances beyond this on most points are another unit. */
#define MOST_ABSORBANCE 12

typedef struct { double energy, absorbance; } Point;

static int
by_energy (const void *a, const void *b)
{
  const Point *p = a, *q = b;

  return p->energy < q->energy ? -1 : p->energy > q->energy;
}

static void
reverse (double *values, gsize n)
{
  for (gsize i = 0; i < n / 2; i++)
    {
      const double value = values[i];

      values[i] = values[n - 1 - i];
      values[n - 1 - i] = value;
    }
}

/* Most files are in order already, one way or the other. */
static void
sort_points (double *energy, double *absorbance, gsize n)
{
  gsize ascends = 1, descends = 1;
  g_autofree Point *points = NULL;

  while (ascends < n && energy[ascends] >= energy[ascends - 1])
    ascends++;
  if (ascends >= n)
    return;
  while (descends < n && energy[descends] <= energy[descends - 1])
    descends++;
  if (descends >= n)
    {
      reverse (energy, n);
      reverse (absorbance, n);
      return;
    }
  points = g_new (Point, n);
  for (gsize i = 0; i < n; i++)
    points[i] = (Point){ energy[i], absorbance[i] };
  qsort (points, n, sizeof *points, by_energy);
  for (gsize i = 0; i < n; i++)
    {
      energy[i] = points[i].energy;
      absorbance[i] = points[i].absorbance;
    }
}

/* FALSE where the reading has no absorbance (a transmittance of 0 or less). */
static gboolean
absorbance_of (double y, BtYUnit unit, double *absorbance)
{
  switch (unit)
    {
    case BT_Y_TRANSMITTANCE:
    case BT_Y_TRANSMITTANCE_PERCENT:
      if (unit == BT_Y_TRANSMITTANCE_PERCENT)
        y /= 100;
      *absorbance = -log10 (y);
      return y > 0;
    case BT_Y_ALPHA_PER_CM:
      *absorbance = y / BT_LN10;
      return TRUE;
    case BT_Y_REFLECTANCE_PERCENT:
      *absorbance = y / 100;
      return TRUE;
    case BT_Y_ABSORBANCE:
    case BT_Y_REFLECTANCE:
    default:
      *absorbance = y;
      return TRUE;
    }
}

/* Fills the axes with what can be used, in file order; returns the number of points and counts what cannot. */
static gsize
usable_points (BtSpectrum *self, guint *n_missing, guint *n_dark, guint *n_bad_x)
{
  const gboolean inverse = self->x_unit == BT_X_NM || self->x_unit == BT_X_UM;
  const double factor = bt_energy_ev_from_x (1, self->x_unit);
  gsize n = 0;

  for (gsize i = 0; i < self->n_raw; i++)
    {
      double x = self->raw_x[i], a;

      if (!isfinite (x) || !isfinite (self->raw_y[i]))
        (*n_missing)++;
      else if (!(x > 0))
        (*n_bad_x)++;
      else if (!absorbance_of (self->raw_y[i], self->y_unit, &a))
        (*n_dark)++;
      else
        {
          self->energy_ev[n] = inverse ? factor / x : factor * x;
          self->absorbance[n++] = a;
        }
    }
  return n;
}

/* Averages points of equal energy; returns how many are left. */
static gsize
merge_equal (double *energy, double *absorbance, gsize n, guint *n_merged)
{
  gsize out = 1;

  /* Hardly any file has them. */
  while (out < n && energy[out] - energy[out - 1] > 1e-12 * energy[out])
    out++;
  if (out >= n)
    return n;
  out = 0;
  for (gsize i = 0; i < n;)
    {
      const double first = energy[i];
      double sum = 0;
      gsize k = i;

      for (; k < n && energy[k] - first <= 1e-12 * first; k++)
        sum += absorbance[k];
      *n_merged += (guint) (k - i - 1);
      energy[out] = first;
      absorbance[out++] = sum / (double) (k - i);
      i = k;
    }
  return out;
}

static void
flag_counts (BtSpectrum *self, guint n_missing, guint n_dark, guint n_bad_x, guint n_merged)
{
  if (n_bad_x > 0)
    bt_spectrum_add_flag (self, bt_flag_new ("bad-x", g_dngettext (GETTEXT_PACKAGE, "%u point has a wavelength or energy of 0 or less and was left out; "
                                                                   "look at the file if you expected another.",
                                                                   "%u points have a wavelength or energy of 0 or less and were left out; look at the "
                                                                   "file if you expected others.", n_bad_x), n_bad_x));
  if (n_missing > 0)
    bt_spectrum_add_flag (self, bt_flag_new ("missing-values", g_dngettext (GETTEXT_PACKAGE, "%u point has no value and was left out; look at the "
                                                                            "file if you expected one.",
                                                                            "%u points have no value and were left out; look at the file if you "
                                                                            "expected them.", n_missing), n_missing));
  if (n_dark > 0)
    bt_spectrum_add_flag (self, bt_flag_new ("dark", g_dngettext (GETTEXT_PACKAGE, "%u point has a transmittance of 0 or less and was left out; the "
                                                                  "film is too dark there for the instrument.",
                                                                  "%u points have a transmittance of 0 or less and were left out; the film is too "
                                                                  "dark there for the instrument.", n_dark), n_dark));
  if (n_merged > 0)
    bt_spectrum_add_flag (self, bt_flag_new ("duplicate-x", g_dngettext (GETTEXT_PACKAGE, "%u point repeats a wavelength and was averaged with the "
                                                                         "other reading there.",
                                                                         "%u points repeat a wavelength and were averaged with the other readings "
                                                                         "there.", n_merged), n_merged));
}

static gboolean
refuse (GError **error, int code, const char *text)
{
  g_set_error_literal (error, BT_SPECTRUM_ERROR, code, text);
  return FALSE;
}

static gboolean
fill_axes (BtSpectrum *self, GError **error)
{
  guint n_missing = 0, n_dark = 0, n_bad_x = 0, n_merged = 0;
  gsize n, n_beyond = 0;
  double low = INFINITY, high = -INFINITY;

  self->energy_ev = g_new (double, MAX (self->n_raw, 1));
  self->absorbance = g_new (double, MAX (self->n_raw, 1));
  n = usable_points (self, &n_missing, &n_dark, &n_bad_x);
  /* A few rows of zeros pad some files. */
  if (n_bad_x * 20 > n)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_UNITS,
                   g_dngettext (GETTEXT_PACKAGE,
                                "%u point has a wavelength or energy of 0 or less, which cannot be; export the spectrum against wavelength or energy.",
                                "%u points have a wavelength or energy of 0 or less, which cannot be; export the spectrum against wavelength or "
                                "energy.", n_bad_x),
                   n_bad_x);
      return FALSE;
    }
  sort_points (self->energy_ev, self->absorbance, n);
  self->n = n = merge_equal (self->energy_ev, self->absorbance, n, &n_merged);
  if (n < BT_SPECTRUM_MIN_POINTS && n_merged > n)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES,
                   g_dngettext (GETTEXT_PACKAGE, "its first column holds only %u value, again and again; a spectrum needs a wavelength for each reading.",
                                "its first column holds only %u values, again and again; a spectrum needs a wavelength for each reading.", (gulong) n),
                   (guint) n);
      return FALSE;
    }
  if (n == 0 && n_missing > 0)
    return refuse (error, BT_SPECTRUM_ERROR_VALUES, _ ("every reading in it is missing (NaN or the like); export the spectrum again."));
  if (n < BT_SPECTRUM_MIN_POINTS)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES,
                   g_dngettext (GETTEXT_PACKAGE, "there is only %u usable point; a spectrum needs at least %d.",
                                "there are only %u usable points; a spectrum needs at least %d.", (gulong) n),
                   (guint) n, BT_SPECTRUM_MIN_POINTS);
      return FALSE;
    }
  if (self->energy_ev[0] < 0.01 || self->energy_ev[n - 1] > 30)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_UNITS,
                   _ ("%.4g to %.4g %s would be %.3g to %.3g eV, which no spectrophotometer measures; state another unit."),
                   fmin (bt_x_from_energy_ev (self->energy_ev[0], self->x_unit), bt_x_from_energy_ev (self->energy_ev[n - 1], self->x_unit)),
                   fmax (bt_x_from_energy_ev (self->energy_ev[0], self->x_unit), bt_x_from_energy_ev (self->energy_ev[n - 1], self->x_unit)),
                   bt_x_unit_name (self->x_unit), self->energy_ev[0], self->energy_ev[n - 1]);
      return FALSE;
    }
  for (gsize i = 0; i < n; i++)
    {
      const double absorbance = self->absorbance[i];

      low = absorbance < low ? absorbance : low;
      high = absorbance > high ? absorbance : high;
      n_beyond += absorbance > MOST_ABSORBANCE ? 1 : 0;
    }
  if (!(high > low))
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES,
                   _ ("every reading has the same value, %.6g; this is no measurement of a film. Choose the column or file of the reading."),
                   self->raw_y[0]);
      return FALSE;
    }
  if (2 * n_beyond > n && self->y_unit == BT_Y_ABSORBANCE)
    {
      g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_UNITS,
                   _ ("an absorbance of up to %.4g is beyond every instrument; if it is a transmittance in per cent, state the unit."), high);
      return FALSE;
    }
  flag_counts (self, n_missing, n_dark, n_bad_x, n_merged);
  return TRUE;
}

/* Bands of films are hardly narrower than 0.1 eV; a band wants at least five points within its width. */
#define COARSE_EV 0.02
#define BANDS_END_EV 2.5

static void
flag_sampling (BtSpectrum *self)
{
  gsize n = 0;
  double spacing;

  while (n + 1 < self->n && self->energy_ev[n + 1] < BANDS_END_EV)
    n++;
  if (n < 3)
    return;
  spacing = (self->energy_ev[n] - self->energy_ev[0]) / (double) n;
  if (spacing > COARSE_EV)
    bt_spectrum_add_flag (self, bt_flag_new ("sampling-coarse", _ ("The points lie %.0f meV apart on average, so bands narrower than %.0f meV are not "
                                                                   "resolved. Measure at a smaller interval."),
                                             1e3 * spacing, 5e3 * spacing));
}

/* A fringe that the axis is too coarse for looks like a row of steps: steps no larger than a few of its amplitudes are none. */
static void
forget_fringe_steps (BtSpectrum *self)
{
  BtFringe fringe;

  if (self->steps->len == 0 || !bt_faults_find_fringe (self->energy_ev, self->absorbance, self->noise, self->n, &fringe))
    return;
  for (guint i = self->steps->len; i-- > 0;)
    if (fabs (g_array_index (self->steps, BtStep, i).size) < 4 * fringe.amplitude)
      g_array_remove_index (self->steps, i);
}

static void
find_faults (BtSpectrum *self)
{
  double lowest = INFINITY, spike_ev, spike;
  guint n_spikes;

  self->noise = bt_faults_noise (self->energy_ev, self->absorbance, self->n);
  bt_faults_find_saturated (self->energy_ev, self->absorbance, self->noise, self->n, self->saturated);
  bt_faults_find_steps (self->energy_ev, self->absorbance, self->noise, self->n, self->saturated, self->steps);
  forget_fringe_steps (self);
  n_spikes = bt_faults_find_spikes (self->energy_ev, self->absorbance, self->noise, self->n, &spike_ev, &spike);
  if (n_spikes > 0)
    bt_spectrum_add_flag (self, bt_flag_new ("spikes", g_dngettext (GETTEXT_PACKAGE,
                                                                    "%u point stands out alone (by %+.3g at %.1f nm): a lamp's flicker or a change of "
                                                                    "source. It has next to no weight in the fit; measure again to be rid of it.",
                                                                    "%u points stand out alone (most by %+.3g at %.1f nm): a lamp's flicker or a "
                                                                    "change of source. They have next to no weight in the fit; measure again to be rid "
                                                                    "of them.", n_spikes),
                                             n_spikes, spike, bt_nm_from_ev (spike_ev)));
  flag_sampling (self);
  for (gsize i = 0; i < self->n; i++)
    lowest = fmin (lowest, self->absorbance[i]);
  if (lowest < -0.005 && self->y_unit != BT_Y_ALPHA_PER_CM)
    bt_spectrum_add_flag (self, bt_flag_new ("negative-absorbance", _ ("The absorbance falls to %.3f: the baseline or the blank does not belong to "
                                                                       "this film. Measure the baseline again, or use the right blank."),
                                             lowest));
  for (guint i = 0; i < self->steps->len; i++)
    {
      const BtStep *step = &g_array_index (self->steps, BtStep, i);

      if (fabs (step->slope) > 5 * step->slope_u && fabs (step->slope) > 0.05)
        bt_spectrum_add_flag (self, bt_flag_new ("detector-step", _ ("The reading jumps by %+.4f and changes its slope by %+.3f a 100 meV at %.0f nm: a change of "
                                                                     "detector or grating. The fit takes the jump into account; check that the film was flat "
                                                                     "and fully in the beam."),
                                                 -step->size, -0.1 * step->slope, bt_nm_from_ev (step->energy_ev)));
      else
        bt_spectrum_add_flag (self, bt_flag_new ("detector-step", _ ("The reading jumps by %+.4f at %.0f nm: a change of detector or grating. The fit "
                                                                     "takes it into account; check that the film was flat and fully in the beam."),
                                                 -step->size, bt_nm_from_ev (step->energy_ev)));
    }
  for (guint i = 0; i < self->saturated->len; i++)
    {
      const BtRange *range = &g_array_index (self->saturated, BtRange, i);

      bt_spectrum_add_flag (self, bt_flag_new ("saturated", _ ("From %.0f to %.0f nm the film is darker than the instrument can read; that range is left "
                                                               "out. Measure a thinner film to have it."),
                                               bt_nm_from_ev (range->high_ev), bt_nm_from_ev (range->low_ev)));
    }
}

/* Judging takes longer than reading, so it waits until somebody asks; from outside the spectrum never changes. */
static void
judge (BtSpectrum *self)
{
  if (g_once_init_enter (&self->judged))
    {
      find_faults (self);
      g_once_init_leave (&self->judged, 1);
    }
}

BtSpectrum *
bt_spectrum_new_take (double *x, double *y, gsize n, BtXUnit x_unit, BtYUnit y_unit, const char *title, GError **error)
{
  g_autoptr (BtSpectrum) self = g_object_new (BT_TYPE_SPECTRUM, NULL);

  self->n_raw = n;
  self->raw_x = x;
  self->raw_y = y;
  self->x_unit = x_unit;
  self->y_unit = y_unit;
  self->title = g_strdup (title != NULL ? title : "");
  return fill_axes (self, error) ? g_steal_pointer (&self) : NULL;
}

BtSpectrum *
bt_spectrum_new (const double *x, const double *y, gsize n, BtXUnit x_unit, BtYUnit y_unit, const char *title, GError **error)
{
  return bt_spectrum_new_take (g_memdup2 (x, sizeof (double) * n), g_memdup2 (y, sizeof (double) * n), n, x_unit, y_unit, title, error);
}

void
bt_spectrum_set_origin (BtSpectrum *self, BtSource *source, const char *reading)
{
  self->source = bt_source_ref (source);
  g_free (self->reading);
  self->reading = g_strdup (reading);
}

void
bt_spectrum_add_flag (BtSpectrum *self, BtFlag *flag)
{
  g_ptr_array_add (self->flags, flag);
}

const char *
bt_spectrum_get_note (BtSpectrum *self, const char *key)
{
  g_autofree char *folded = bt_source_fold_key (key);

  return self->source != NULL ? g_hash_table_lookup (bt_source_get_notes (self->source), folded) : NULL;
}

gsize
bt_spectrum_get_n_points (BtSpectrum *self)
{
  return self->n;
}

const double *
bt_spectrum_get_energy_ev (BtSpectrum *self, gsize *n)
{
  if (n != NULL)
    *n = self->n;
  return self->energy_ev;
}

const double *
bt_spectrum_get_absorbance (BtSpectrum *self, gsize *n)
{
  if (n != NULL)
    *n = self->n;
  return self->absorbance;
}

const double *
bt_spectrum_get_noise (BtSpectrum *self, gsize *n)
{
  if (n != NULL)
    *n = self->n;
  judge (self);
  return self->noise;
}

double
bt_spectrum_absorbance_at (BtSpectrum *self, double energy_ev)
{
  gsize low = 0, high = self->n - 1;
  double t;

  if (!(energy_ev >= self->energy_ev[0] && energy_ev <= self->energy_ev[high]))
    return NAN;
  while (high - low > 1)
    {
      gsize middle = (low + high) / 2;

      if (self->energy_ev[middle] <= energy_ev)
        low = middle;
      else
        high = middle;
    }
  t = (energy_ev - self->energy_ev[low]) / (self->energy_ev[high] - self->energy_ev[low]);
  return (1 - t) * self->absorbance[low] + t * self->absorbance[high];
}

const double *
bt_spectrum_get_raw_x (BtSpectrum *self, gsize *n)
{
  if (n != NULL)
    *n = self->n_raw;
  return self->raw_x;
}

const double *
bt_spectrum_get_raw_y (BtSpectrum *self, gsize *n)
{
  if (n != NULL)
    *n = self->n_raw;
  return self->raw_y;
}

BtXUnit
bt_spectrum_get_x_unit (BtSpectrum *self)
{
  return self->x_unit;
}

BtYUnit
bt_spectrum_get_y_unit (BtSpectrum *self)
{
  return self->y_unit;
}

const char *
bt_spectrum_get_title (BtSpectrum *self)
{
  return self->title;
}

const char *
bt_spectrum_get_file (BtSpectrum *self)
{
  return self->source != NULL ? bt_source_get_name (self->source) : NULL;
}

const char *
bt_spectrum_get_sha256 (BtSpectrum *self)
{
  return self->source != NULL ? bt_source_get_sha256 (self->source) : NULL;
}

const char *
bt_spectrum_get_reading (BtSpectrum *self)
{
  return self->reading != NULL ? self->reading : "";
}

const GPtrArray *
bt_spectrum_get_flags (BtSpectrum *self)
{
  judge (self);
  return self->flags;
}

const BtStep *
bt_spectrum_get_steps (BtSpectrum *self, gsize *n)
{
  judge (self);
  *n = self->steps->len;
  return (const BtStep *) (void *) self->steps->data;
}

const BtRange *
bt_spectrum_get_saturated (BtSpectrum *self, gsize *n)
{
  judge (self);
  *n = self->saturated->len;
  return (const BtRange *) (void *) self->saturated->data;
}
