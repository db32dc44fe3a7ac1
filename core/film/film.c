/* A film and what is known of it beside its spectrum. */
#include <bandtally/film.h>

#include <math.h>
#include <string.h>

struct _BtFilm
{
  GObject parent_instance;

  BtSpectrum *spectrum, *blank, *reflectance;
  char *label, *lot, *substrate, *notes;
  double thickness_nm, thickness_u_nm;
  GArray *thickness_readings;
  double sheet_resistance_ohm, sheet_resistance_u_ohm;
};

G_DEFINE_FINAL_TYPE (BtFilm, bt_film, G_TYPE_OBJECT)

enum { PROP_0, PROP_LABEL, PROP_LOT, PROP_SUBSTRATE, PROP_NOTES, PROP_THICKNESS_NM, PROP_THICKNESS_U_NM, PROP_BLANK, PROP_REFLECTANCE,
  PROP_SHEET_RESISTANCE_OHM, PROP_SHEET_RESISTANCE_U_OHM, N_PROPS };
static GParamSpec *properties[N_PROPS];

static void
bt_film_finalize (GObject *object)
{
  BtFilm *self = BT_FILM (object);

  g_clear_object (&self->spectrum);
  g_clear_object (&self->blank);
  g_clear_object (&self->reflectance);
  g_array_unref (self->thickness_readings);
  g_free (self->label);
  g_free (self->lot);
  g_free (self->substrate);
  g_free (self->notes);
  G_OBJECT_CLASS (bt_film_parent_class)->finalize (object);
}

static void
bt_film_get_property (GObject *object, guint id, GValue *value, GParamSpec *pspec)
{
  BtFilm *self = BT_FILM (object);

  switch (id)
    {
    case PROP_LABEL: g_value_set_string (value, self->label); break;
    case PROP_LOT: g_value_set_string (value, self->lot); break;
    case PROP_SUBSTRATE: g_value_set_string (value, self->substrate); break;
    case PROP_NOTES: g_value_set_string (value, self->notes); break;
    case PROP_THICKNESS_NM: g_value_set_double (value, self->thickness_nm); break;
    case PROP_THICKNESS_U_NM: g_value_set_double (value, self->thickness_u_nm); break;
    case PROP_BLANK: g_value_set_object (value, self->blank); break;
    case PROP_REFLECTANCE: g_value_set_object (value, self->reflectance); break;
    case PROP_SHEET_RESISTANCE_OHM: g_value_set_double (value, self->sheet_resistance_ohm); break;
    case PROP_SHEET_RESISTANCE_U_OHM: g_value_set_double (value, self->sheet_resistance_u_ohm); break;
    default: G_OBJECT_WARN_INVALID_PROPERTY_ID (object, id, pspec);
    }
}

static void
bt_film_set_property (GObject *object, guint id, const GValue *value, GParamSpec *pspec)
{
  BtFilm *self = BT_FILM (object);

  switch (id)
    {
    case PROP_LABEL: bt_film_set_label (self, g_value_get_string (value)); break;
    case PROP_LOT: bt_film_set_lot (self, g_value_get_string (value)); break;
    case PROP_SUBSTRATE: bt_film_set_substrate (self, g_value_get_string (value)); break;
    case PROP_NOTES: bt_film_set_notes (self, g_value_get_string (value)); break;
    case PROP_THICKNESS_NM: bt_film_set_thickness (self, g_value_get_double (value), self->thickness_u_nm); break;
    case PROP_THICKNESS_U_NM: bt_film_set_thickness (self, self->thickness_nm, g_value_get_double (value)); break;
    case PROP_BLANK: bt_film_set_blank (self, g_value_get_object (value)); break;
    case PROP_REFLECTANCE: bt_film_set_reflectance (self, g_value_get_object (value)); break;
    case PROP_SHEET_RESISTANCE_OHM: bt_film_set_sheet_resistance (self, g_value_get_double (value), self->sheet_resistance_u_ohm); break;
    case PROP_SHEET_RESISTANCE_U_OHM: bt_film_set_sheet_resistance (self, self->sheet_resistance_ohm, g_value_get_double (value)); break;
    default: G_OBJECT_WARN_INVALID_PROPERTY_ID (object, id, pspec);
    }
}

static void
bt_film_class_init (BtFilmClass *klass)
{
  GObjectClass *object_class = G_OBJECT_CLASS (klass);
  const GParamFlags flags = G_PARAM_READWRITE | G_PARAM_EXPLICIT_NOTIFY | G_PARAM_STATIC_STRINGS;

  object_class->finalize = bt_film_finalize;
  object_class->get_property = bt_film_get_property;
  object_class->set_property = bt_film_set_property;
  properties[PROP_LABEL] = g_param_spec_string ("label", NULL, NULL, "", flags);
  properties[PROP_LOT] = g_param_spec_string ("lot", NULL, NULL, "", flags);
  properties[PROP_SUBSTRATE] = g_param_spec_string ("substrate", NULL, NULL, "", flags);
  properties[PROP_NOTES] = g_param_spec_string ("notes", NULL, NULL, "", flags);
  properties[PROP_THICKNESS_NM] = g_param_spec_double ("thickness-nm", NULL, NULL, 0, 1e9, 0, flags);
  properties[PROP_THICKNESS_U_NM] = g_param_spec_double ("thickness-u-nm", NULL, NULL, 0, 1e9, 0, flags);
  properties[PROP_BLANK] = g_param_spec_object ("blank", NULL, NULL, BT_TYPE_SPECTRUM, flags);
  properties[PROP_REFLECTANCE] = g_param_spec_object ("reflectance", NULL, NULL, BT_TYPE_SPECTRUM, flags);
  properties[PROP_SHEET_RESISTANCE_OHM] = g_param_spec_double ("sheet-resistance-ohm", NULL, NULL, 0, 1e15, 0, flags);
  properties[PROP_SHEET_RESISTANCE_U_OHM] = g_param_spec_double ("sheet-resistance-u-ohm", NULL, NULL, 0, 1e15, 0, flags);
  g_object_class_install_properties (object_class, N_PROPS, properties);
}

static void
bt_film_init (BtFilm *self)
{
  self->label = g_strdup ("");
  self->lot = g_strdup ("");
  self->substrate = g_strdup ("");
  self->notes = g_strdup ("");
  self->thickness_readings = g_array_new (FALSE, FALSE, sizeof (double));
}

static double
note_number (BtSpectrum *spectrum, const char *key)
{
  const char *text = bt_spectrum_get_note (spectrum, key);
  double value;
  g_autofree char *point = NULL;

  if (text == NULL)
    return 0;
  point = g_strdelimit (g_strdup (text), ",", '.');
  value = g_ascii_strtod (point, NULL);
  return value > 0 && value < 1e9 ? value : 0;
}

/* Several numbers divided by anything but digits, a sign, a point or an exponent; a comma is a decimal comma only where blanks or semicolons divide. */
static void
take_readings (BtFilm *self, const char *text)
{
  g_autoptr (GArray) readings = g_array_new (FALSE, FALSE, sizeof (double));
  g_auto (GStrv) parts = NULL;

  if (text == NULL)
    return;
  parts = g_strsplit_set (text, strpbrk (text, "; \t") != NULL && strstr (text, ", ") == NULL ? "; \t" : ",; \t", -1);
  for (char **part = parts; *part != NULL; part++)
    {
      double value = g_ascii_strtod (g_strdelimit (*part, ",", '.'), NULL);

      if (value > 0 && value < 1e9)
        g_array_append_val (readings, value);
    }
  if (readings->len > 0)
    bt_film_set_thickness_readings (self, (const double *) (void *) readings->data, readings->len);
}

static void
take_note (BtSpectrum *spectrum, const char *key, char **field)
{
  const char *text = bt_spectrum_get_note (spectrum, key);

  if (text != NULL)
    {
      g_free (*field);
      *field = g_strdup (text);
    }
}

BtFilm *
bt_film_new (BtSpectrum *spectrum)
{
  BtFilm *self;

  g_return_val_if_fail (BT_IS_SPECTRUM (spectrum), NULL);
  self = g_object_new (BT_TYPE_FILM, NULL);
  self->spectrum = g_object_ref (spectrum);
  if (bt_spectrum_get_title (spectrum)[0] != '\0')
    {
      g_free (self->label);
      self->label = g_strdup (bt_spectrum_get_title (spectrum));
    }
  else if (bt_spectrum_get_file (spectrum) != NULL)
    {
      g_free (self->label);
      self->label = g_path_get_basename (bt_spectrum_get_file (spectrum));
    }
  take_note (spectrum, "film", &self->label);
  take_note (spectrum, "lot", &self->lot);
  take_note (spectrum, "substrate", &self->substrate);
  self->thickness_nm = note_number (spectrum, "thickness nm");
  self->thickness_u_nm = note_number (spectrum, "thickness u nm");
  take_readings (self, bt_spectrum_get_note (spectrum, "thickness readings nm"));
  self->sheet_resistance_ohm = note_number (spectrum, "sheet resistance ohm");
  self->sheet_resistance_u_ohm = note_number (spectrum, "sheet resistance u ohm");
  return self;
}

BtFilm *
bt_film_copy_with_spectrum (BtFilm *self, BtSpectrum *spectrum)
{
  BtFilm *copy;

  g_return_val_if_fail (BT_IS_FILM (self), NULL);
  copy = bt_film_new (spectrum);
  bt_film_set_label (copy, self->label);
  bt_film_set_lot (copy, self->lot);
  bt_film_set_substrate (copy, self->substrate);
  bt_film_set_notes (copy, self->notes);
  bt_film_set_thickness (copy, self->thickness_nm, self->thickness_u_nm);
  g_array_set_size (copy->thickness_readings, 0);
  g_array_append_vals (copy->thickness_readings, self->thickness_readings->data, self->thickness_readings->len);
  bt_film_set_sheet_resistance (copy, self->sheet_resistance_ohm, self->sheet_resistance_u_ohm);
  bt_film_set_reflectance (copy, self->reflectance);
  bt_film_set_blank (copy, self->blank);
  return copy;
}

BtFilm *
bt_film_copy (BtFilm *self)
{
  g_return_val_if_fail (BT_IS_FILM (self), NULL);
  return bt_film_copy_with_spectrum (self, self->spectrum);
}

BtSpectrum *
bt_film_get_spectrum (BtFilm *self)
{
  return self->spectrum;
}

static void
set_text (BtFilm *self, char **field, const char *text, guint property)
{
  if (text == NULL)
    text = "";
  if (g_str_equal (*field, text))
    return;
  g_free (*field);
  *field = g_strdup (text);
  g_object_notify_by_pspec (G_OBJECT (self), properties[property]);
}

const char *
bt_film_get_label (BtFilm *self)
{
  return self->label;
}

void
bt_film_set_label (BtFilm *self, const char *label)
{
  set_text (self, &self->label, label, PROP_LABEL);
}

const char *
bt_film_get_lot (BtFilm *self)
{
  return self->lot;
}

void
bt_film_set_lot (BtFilm *self, const char *lot)
{
  set_text (self, &self->lot, lot, PROP_LOT);
}

const char *
bt_film_get_substrate (BtFilm *self)
{
  return self->substrate;
}

void
bt_film_set_substrate (BtFilm *self, const char *substrate)
{
  set_text (self, &self->substrate, substrate, PROP_SUBSTRATE);
}

const char *
bt_film_get_notes (BtFilm *self)
{
  return self->notes;
}

void
bt_film_set_notes (BtFilm *self, const char *notes)
{
  set_text (self, &self->notes, notes, PROP_NOTES);
}

double
bt_film_get_thickness_nm (BtFilm *self)
{
  return self->thickness_nm;
}

double
bt_film_get_thickness_u_nm (BtFilm *self)
{
  return self->thickness_u_nm;
}

void
bt_film_set_thickness (BtFilm *self, double thickness_nm, double thickness_u_nm)
{
  gboolean changed = thickness_nm < self->thickness_nm || thickness_nm > self->thickness_nm;
  gboolean u_changed = thickness_u_nm < self->thickness_u_nm || thickness_u_nm > self->thickness_u_nm;

  g_return_if_fail (thickness_nm >= 0 && thickness_u_nm >= 0);
  self->thickness_nm = thickness_nm;
  self->thickness_u_nm = thickness_u_nm;
  g_array_set_size (self->thickness_readings, 0);
  if (changed)
    g_object_notify_by_pspec (G_OBJECT (self), properties[PROP_THICKNESS_NM]);
  if (u_changed)
    g_object_notify_by_pspec (G_OBJECT (self), properties[PROP_THICKNESS_U_NM]);
}

void
bt_film_set_thickness_readings (BtFilm *self, const double *nm, gsize n)
{
  double mean = 0, squares = 0;

  g_return_if_fail (n == 0 || nm != NULL);
  for (gsize i = 0; i < n; i++)
    mean += nm[i] / (double) n;
  for (gsize i = 0; i < n; i++)
    squares += (nm[i] - mean) * (nm[i] - mean);
  bt_film_set_thickness (self, mean, n > 1 ? sqrt (squares / (double) (n - 1) / (double) n) : 0);
  if (n > 0)
    g_array_append_vals (self->thickness_readings, nm, (guint) n);
}

const double *
bt_film_get_thickness_readings (BtFilm *self, gsize *n)
{
  if (n != NULL)
    *n = self->thickness_readings->len;
  return self->thickness_readings->len > 0 ? (const double *) (void *) self->thickness_readings->data : NULL;
}

double
bt_film_get_sheet_resistance_ohm (BtFilm *self)
{
  return self->sheet_resistance_ohm;
}

double
bt_film_get_sheet_resistance_u_ohm (BtFilm *self)
{
  return self->sheet_resistance_u_ohm;
}

void
bt_film_set_sheet_resistance (BtFilm *self, double ohm, double u_ohm)
{
  gboolean changed = ohm < self->sheet_resistance_ohm || ohm > self->sheet_resistance_ohm;
  gboolean u_changed = u_ohm < self->sheet_resistance_u_ohm || u_ohm > self->sheet_resistance_u_ohm;

  g_return_if_fail (ohm >= 0 && u_ohm >= 0);
  self->sheet_resistance_ohm = ohm;
  self->sheet_resistance_u_ohm = u_ohm;
  if (changed)
    g_object_notify_by_pspec (G_OBJECT (self), properties[PROP_SHEET_RESISTANCE_OHM]);
  if (u_changed)
    g_object_notify_by_pspec (G_OBJECT (self), properties[PROP_SHEET_RESISTANCE_U_OHM]);
}

BtSpectrum *
bt_film_get_reflectance (BtFilm *self)
{
  return self->reflectance;
}

void
bt_film_set_reflectance (BtFilm *self, BtSpectrum *reflectance)
{
  if (g_set_object (&self->reflectance, reflectance))
    g_object_notify_by_pspec (G_OBJECT (self), properties[PROP_REFLECTANCE]);
}

BtSpectrum *
bt_film_get_blank (BtFilm *self)
{
  return self->blank;
}

void
bt_film_set_blank (BtFilm *self, BtSpectrum *blank)
{
  if (g_set_object (&self->blank, blank))
    g_object_notify_by_pspec (G_OBJECT (self), properties[PROP_BLANK]);
}
