/* Conversions between the axes that instruments write and the core's energy axis. */
#include <bandtally/units.h>

double
bt_energy_ev_from_x (double x, BtXUnit unit)
{
  switch (unit)
    {
    case BT_X_NM: return BT_HC_EV_NM / x;
    case BT_X_UM: return BT_HC_EV_NM / (x * 1e3);
    case BT_X_PER_CM: return x * (BT_HC_EV_NM * 1e-7);
    case BT_X_EV: return x;
    default: g_return_val_if_reached (0);
    }
}

double
bt_x_from_energy_ev (double energy_ev, BtXUnit unit)
{
  switch (unit)
    {
    case BT_X_NM: return BT_HC_EV_NM / energy_ev;
    case BT_X_UM: return BT_HC_EV_NM / energy_ev * 1e-3;
    case BT_X_PER_CM: return energy_ev / (BT_HC_EV_NM * 1e-7);
    case BT_X_EV: return energy_ev;
    default: g_return_val_if_reached (0);
    }
}

const char *
bt_x_unit_name (BtXUnit unit)
{
  static const char *const names[] = { "nm", "um", "1/cm", "eV" };

  return names[unit];
}

const char *
bt_y_unit_name (BtYUnit unit)
{
  static const char *const names[] = { "absorbance", "transmittance", "transmittance %", "reflectance", "reflectance %",
                                       "alpha 1/cm" };

  return names[unit];
}
