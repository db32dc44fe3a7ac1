/* A film and what is known of it beside its spectrum. */
#include <bandtally/film.h>

#include <string.h>

struct _BtFilm
{
  GObject parent_instance;

  BtSpectrum *spectrum, *blank;
  char *label, *lot, *substrate, *notes;
  double thickness_nm, thickness_u_nm;
};

G_DEFINE_FINAL_TYPE (BtFilm, bt_film, G_TYPE_OBJECT)

enum { PROP_0, PROP_LABEL, PROP_LOT, PROP_SUBSTRATE, PROP_NOTES, PROP_THICKNESS_NM, PROP_THICKNESS_U_NM, PROP_BLANK, N_PROPS };
static GParamSpec *properties[N_PROPS];

static void
bt_film_finalize (GObject *object)
{
  BtFilm *self = BT_FILM (object);

  g_clear_object (&self->spectrum);
  g_clear_object (&self->blank);
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
  g_object_class_install_properties (object_class, N_PROPS, properties);
}

static void
bt_film_init (BtFilm *self)
{
  self->label = g_strdup ("");
  self->lot = g_strdup ("");
  self->substrate = g_strdup ("");
  self->notes = g_strdup ("");
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
  return self;
}

BtFilm *
bt_film_copy (BtFilm *self)
{
  BtFilm *copy;

  g_return_val_if_fail (BT_IS_FILM (self), NULL);
  copy = bt_film_new (self->spectrum);
  bt_film_set_label (copy, self->label);
  bt_film_set_lot (copy, self->lot);
  bt_film_set_substrate (copy, self->substrate);
  bt_film_set_notes (copy, self->notes);
  bt_film_set_thickness (copy, self->thickness_nm, self->thickness_u_nm);
  bt_film_set_blank (copy, self->blank);
  return copy;
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
  if (changed)
    g_object_notify_by_pspec (G_OBJECT (self), properties[PROP_THICKNESS_NM]);
  if (u_changed)
    g_object_notify_by_pspec (G_OBJECT (self), properties[PROP_THICKNESS_U_NM]);
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
