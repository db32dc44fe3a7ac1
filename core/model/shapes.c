/* Line shapes and tails as pure functions over arrays. */
#include <bandtally/model.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "shapes-private.h"

#define LN16 2.772588722239781 /* 4 ln 2 */

static const struct { const char *name; const char *title; const char *short_title; } tails[BT_N_TAILS] = {
  [BT_TAIL_PLASMON] = { "plasmon", N_ ("π-plasmon Lorentzian"), N_ ("π-plasmon") },
  [BT_TAIL_POWER] = { "power", N_ ("power law in wavelength"), N_ ("power law") },
  [BT_TAIL_EXPONENTIAL] = { "exponential", N_ ("exponential in wavelength"), N_ ("exponential") },
};

const char *
bt_tail_name (BtTailKind kind)
{
  g_return_val_if_fail (kind < BT_N_TAILS, NULL);
  return tails[kind].name;
}

const char *
bt_tail_title (BtTailKind kind)
{
  g_return_val_if_fail (kind < BT_N_TAILS, NULL);
  return _ (tails[kind].title);
}

const char *
bt_tail_short_title (BtTailKind kind)
{
  g_return_val_if_fail (kind < BT_N_TAILS, NULL);
  return _ (tails[kind].short_title);
}

gboolean
bt_tail_from_name (const char *name, BtTailKind *kind)
{
  for (guint i = 0; i < BT_N_TAILS; i++)
    if (g_ascii_strcasecmp (name, tails[i].name) == 0)
      {
        *kind = (BtTailKind) i;
        return TRUE;
      }
  return FALSE;
}

void
bt_gaussian_eval (const double *energy_ev, gsize n, double centre_ev, double fwhm_ev, double *out)
{
  for (gsize i = 0; i < n; i++)
    {
      double u = (energy_ev[i] - centre_ev) / fwhm_ev;

      out[i] = exp (-LN16 * u * u);
    }
}

void
bt_lorentzian_eval (const double *energy_ev, gsize n, double centre_ev, double fwhm_ev, double *out)
{
  for (gsize i = 0; i < n; i++)
    {
      double u = 2 * (energy_ev[i] - centre_ev) / fwhm_ev;

      out[i] = 1 / (1 + u * u);
    }
}

/* Unit-height tail and its derivatives by the shape parameters at one energy. */
static inline double
tail_at (BtTailKind kind, const double *shape, double energy_ev, double *d0, double *d1)
{
  switch (kind)
    {
    case BT_TAIL_PLASMON:
      {
        double u = (energy_ev - shape[0]) / shape[1], q = 1 / (1 + u * u);

        *d0 = 2 * u * q * q / shape[1];
        *d1 = 2 * u * u * q * q / shape[1];
        return q;
      }
    case BT_TAIL_POWER:
      {
        double l = log (BT_HC_EV_NM / energy_ev / BT_TAIL_REFERENCE_NM), q = exp (-shape[0] * l);

        *d0 = -l * q;
        *d1 = 0;
        return q;
      }
    case BT_TAIL_EXPONENTIAL:
      {
        double l = BT_HC_EV_NM / energy_ev - BT_TAIL_REFERENCE_NM, q = exp (-shape[0] * l);

        *d0 = -l * q;
        *d1 = 0;
        return q;
      }
    case BT_N_TAILS:
    default:
      *d0 = *d1 = 0;
      return 0;
    }
}

guint
bt_tail_n_shape (BtTailKind kind)
{
  return kind == BT_TAIL_PLASMON ? 2 : 1;
}

void
bt_tail_shape_eval (BtTailKind kind, const double *shape, const double *energy_ev, gsize n, double *value, double *d0, double *d1)
{
  double a, b;

  for (gsize i = 0; i < n; i++)
    {
      value[i] = tail_at (kind, shape, energy_ev[i], &a, &b);
      if (d0 != NULL)
        d0[i] = a;
      if (d1 != NULL)
        d1[i] = b;
    }
}

void
bt_tail_eval (const BtTail *tail, const double *energy_ev, gsize n, double *out)
{
  bt_tail_shape_eval (tail->kind, tail->shape, energy_ev, n, out, NULL, NULL);
  for (gsize i = 0; i < n; i++)
    out[i] = tail->offset + tail->height * out[i];
}
