#include "desk-parse.h"

#include <bandtally/bandtally.h>
#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

G_DEFINE_QUARK (desk-parse-error-quark, desk_parse_error)

typedef struct { const char *name; double factor; int x_unit; } UnitName;

/* x_unit >= 0: read as a spectral abscissa of that BtXUnit, so that wavelengths and energies may stand for each other. */
static const UnitName share_units[] = { { "", 1, -1 }, { "%", 0.01, -1 }, { NULL } };
static const UnitName plain_units[] = { { "", 1, -1 }, { NULL } };
static const UnitName length_units[] = { { "", 1, -1 },        { "nm", 1, -1 }, { "um", 1e3, -1 }, { "µm", 1e3, -1 },
                                         { "μm", 1e3, -1 }, { NULL } };
static const UnitName ohm_units[] = { { "", 1, -1 },     { "ohm", 1, -1 },      { "\316\251", 1, -1 },    { "\342\204\246", 1, -1 }, /* both signs of ohm */
                                      { "kohm", 1e3, -1 }, { "k\316\251", 1e3, -1 }, { "k\342\204\246", 1e3, -1 }, { NULL } };
static const UnitName width_units[] = { { "", 1, -1 }, { "ev", 1, -1 }, { "mev", 1e-3, -1 }, { NULL } };
static const UnitName energy_units[]
    = { { "", 1, BT_X_EV },   { "ev", 1, BT_X_EV },      { "mev", 1e-3, BT_X_EV },    { "nm", 1, BT_X_NM },         { "um", 1, BT_X_UM },
        { "µm", 1, BT_X_UM }, { "μm", 1, BT_X_UM }, { "1/cm", 1, BT_X_PER_CM }, { "cm-1", 1, BT_X_PER_CM }, { NULL } };
static const UnitName wavelength_units[]
    = { { "", 1, BT_X_NM },   { "nm", 1, BT_X_NM },      { "ev", 1, BT_X_EV },        { "mev", 1e-3, BT_X_EV },     { "um", 1, BT_X_UM },
        { "µm", 1, BT_X_UM }, { "μm", 1, BT_X_UM }, { "1/cm", 1, BT_X_PER_CM }, { "cm-1", 1, BT_X_PER_CM }, { NULL } };

static const UnitName *
units_of (DeskUnit unit)
{
  switch (unit)
    {
    case DESK_UNIT_SHARE:
      return share_units;
    case DESK_UNIT_NM:
      return length_units;
    case DESK_UNIT_EV:
      return energy_units;
    case DESK_UNIT_EV_WIDTH:
      return width_units;
    case DESK_UNIT_WAVELENGTH:
      return wavelength_units;
    case DESK_UNIT_OHM:
      return ohm_units;
    case DESK_UNIT_NONE:
      break;
    }
  return plain_units;
}

const char *
desk_unit_name (DeskUnit unit)
{
  switch (unit)
    {
    case DESK_UNIT_NM:
    case DESK_UNIT_WAVELENGTH:
      return "nm";
    case DESK_UNIT_EV:
    case DESK_UNIT_EV_WIDTH:
      return "eV";
    case DESK_UNIT_OHM:
      return "Ω";
    case DESK_UNIT_NONE:
    case DESK_UNIT_SHARE:
      break;
    }
  return "";
}

/* Plain ASCII: spaces trimmed, the minus sign and one decimal comma made ASCII. NULL where the signs are ambiguous. */
static char *
normalise (const char *text)
{
  g_autofree char *copy = g_strstrip (g_strdup (text));
  g_auto (GStrv) parts = g_strsplit (copy, "\342\210\222", -1); /* U+2212 */
  char *plain = g_strjoinv ("-", parts);
  char *comma = strchr (plain, ',');
  if (comma && (strchr (plain, '.') || strchr (comma + 1, ',')))
    {
      g_free (plain);
      return NULL;
    }
  if (comma)
    *comma = '.';
  return plain;
}

/* A number in ASCII, with the place value of its last digit. */
static gboolean
read_number (const char **text, double *value, double *last_place)
{
  const char *start = *text;
  if (!g_ascii_isdigit (*start) && !strchr ("+-.", *start))
    return FALSE;
  char *end;
  *value = g_ascii_strtod (start, &end);
  /* Hexadecimal is for programs. */
  if (end == start || !isfinite (*value) || strspn (start, "0123456789.+-eE") < (gsize) (end - start))
    return FALSE;
  int decimals = 0, exponent = 0;
  gboolean after_point = FALSE;
  for (const char *p = start; p < end; p++)
    {
      if (*p == '.')
        after_point = TRUE;
      else if (*p == 'e' || *p == 'E')
        {
          exponent = atoi (p + 1);
          break;
        }
      else
        decimals += after_point && g_ascii_isdigit (*p);
    }
  *last_place = pow (10, exponent - decimals);
  *text = end;
  return TRUE;
}

/* "(6)", "(0.6)", "± 6", "+- 6", "+/- 6" after the number. */
static gboolean
read_uncertainty (const char **text, double last_place, double *u)
{
  static const char *const signs[] = { "±", "+/-", "+-" };
  const char *p = *text;
  double place;
  *u = NAN;
  if (*p == '(')
    {
      const char *start = ++p;
      if (!read_number (&p, u, &place) || *p != ')' || *u < 0)
        return FALSE;
      if (!memchr (start, '.', (gsize) (p - start)))
        *u *= last_place;
      *text = p + 1;
      return TRUE;
    }
  while (*p == ' ')
    p++;
  for (guint i = 0; i < G_N_ELEMENTS (signs); i++)
    if (g_str_has_prefix (p, signs[i]))
      {
        p += strlen (signs[i]);
        while (*p == ' ')
          p++;
        if (!read_number (&p, u, &place) || *u < 0)
          return FALSE;
        *text = p;
        return TRUE;
      }
  return TRUE;
}

static gboolean
convert (DeskUnit unit, const char *name, double *value, double *u)
{
  g_autofree char *lower = g_ascii_strdown (name, -1);
  for (const UnitName *entry = units_of (unit); entry->name; entry++)
    {
      if (strcmp (entry->name, lower) != 0)
        continue;
      /* Divided, so that 95 % is 0.95 to the last digit. */
      double x = entry->factor < 1 ? *value / round (1 / entry->factor) : *value * entry->factor;
      *u *= entry->factor;
      if (entry->x_unit >= 0)
        {
          double ev = bt_energy_ev_from_x (x, (BtXUnit) entry->x_unit);
          x = unit == DESK_UNIT_WAVELENGTH ? bt_nm_from_ev (ev) : ev;
        }
      *value = x;
      return TRUE;
    }
  return FALSE;
}

static char *
list_units (DeskUnit unit)
{
  switch (unit)
    {
    case DESK_UNIT_NM:
      return g_strdup ("nm, µm");
    case DESK_UNIT_EV:
    case DESK_UNIT_WAVELENGTH:
      return g_strdup ("eV, meV, nm, µm, 1/cm");
    case DESK_UNIT_EV_WIDTH:
      return g_strdup ("eV, meV");
    case DESK_UNIT_SHARE:
      return g_strdup ("%");
    case DESK_UNIT_OHM:
      return g_strdup ("Ω, kΩ");
    case DESK_UNIT_NONE:
      break;
    }
  return NULL;
}

gboolean
desk_parse_quantity (const char *text, DeskUnit unit, double *value, double *u, GError **error)
{
  double uncertainty, last_place;
  g_autofree char *plain = normalise (text);
  if (!plain)
    {
      g_set_error (error, DESK_PARSE_ERROR, 0, _("“%s” has more than one decimal sign: write 1234.5 or 1234,5."), text);
      return FALSE;
    }
  const char *p = plain;
  if (!read_number (&p, value, &last_place))
    {
      g_set_error (error, DESK_PARSE_ERROR, 0, _("“%s” is not a number: write, for example, 120 or 0.8."), text);
      return FALSE;
    }
  if (!read_uncertainty (&p, last_place, &uncertainty))
    {
      g_set_error (error, DESK_PARSE_ERROR, 0, _("The uncertainty in “%s” cannot be read: write 120(6) or 120 ± 6."), text);
      return FALSE;
    }
  g_autofree char *name = g_strstrip (g_strdup (p));
  if (!convert (unit, name, value, &uncertainty))
    {
      g_autofree char *known = list_units (unit);
      if (known)
        g_set_error (error, DESK_PARSE_ERROR, 0, _("“%s” is not a unit that fits here: use %s."), name, known);
      else
        g_set_error (error, DESK_PARSE_ERROR, 0, _("“%s” does not belong here: this number has no unit."), name);
      return FALSE;
    }
  if (!isfinite (*value))
    {
      g_set_error (error, DESK_PARSE_ERROR, 0, _("“%s” is out of reach: write a number above zero."), text);
      return FALSE;
    }
  if (u)
    *u = uncertainty;
  return TRUE;
}

GArray *
desk_parse_quantities (const char *text, DeskUnit unit, GError **error)
{
  g_autoptr (GArray) values = g_array_new (FALSE, FALSE, sizeof (double));
  /* A comma between digits is a decimal comma only where semicolons or spaces separate. */
  gboolean spaced = strpbrk (text, "; ") != NULL;
  g_autoptr (GRegex) separator = g_regex_new (spaced ? ",?\\s*;\\s*|,?\\s+(?=[-+.0-9])" : ",", 0, 0, NULL);
  g_auto (GStrv) words = g_regex_split (separator, text, 0);
  for (char **word = words; *word; word++)
    {
      double value;
      if (!*g_strstrip (*word))
        continue;
      if (!desk_parse_quantity (*word, unit, &value, NULL, error))
        return NULL;
      g_array_append_val (values, value);
    }
  return g_steal_pointer (&values);
}
