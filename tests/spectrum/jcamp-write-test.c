/* JCAMP-DX written and read again: the same numbers to the last bit, in lines that keep the standard's rules. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <string.h>

static double
smooth (double nm)
{
  return 0.5 + 0.3 * sin (nm / 120) + 0.1 * cos (nm / 31);
}

typedef struct {
  const char *name;
  double first, step;       /* of the abscissa, as decimals */
  guint n;
  int x_places, y_places;   /* decimals kept; 17: every bit */
  BtXUnit x_unit;
  BtYUnit y_unit;
  double factor;            /* of the readings */
  const char *form_affn, *form_difdup;
} Row;

#define EVEN "(X++(Y..Y))"
#define PAIRS "(XY..XY)"

static const Row rows[] = {
  { "absorbance", 350, 1, 1401, 0, 4, BT_X_NM, BT_Y_ABSORBANCE, 1, EVEN, EVEN },
  { "six places", 350, 0.5, 2801, 1, 6, BT_X_NM, BT_Y_ABSORBANCE, 1, EVEN, EVEN },
  { "steps of a tenth", 350.3, 0.1, 1000, 1, 5, BT_X_NM, BT_Y_ABSORBANCE, 1, EVEN, EVEN },
  { "downwards", 1500, -0.2, 3000, 1, 5, BT_X_NM, BT_Y_ABSORBANCE, 1, EVEN, EVEN },
  { "per cent", 350, 2, 500, 0, 3, BT_X_NM, BT_Y_TRANSMITTANCE_PERCENT, 60, EVEN, EVEN },
  { "transmittance", 350, 2, 500, 0, 5, BT_X_NM, BT_Y_TRANSMITTANCE, 0.6, EVEN, EVEN },
  { "alpha", 350, 2, 500, 0, 0, BT_X_NM, BT_Y_ALPHA_PER_CM, 1e5, EVEN, EVEN },
  { "micrometres", 0.35, 0.002, 600, 3, 4, BT_X_UM, BT_Y_ABSORBANCE, 1, EVEN, EVEN },
  { "wavenumbers", 5000, 2, 900, 0, 4, BT_X_PER_CM, BT_Y_ABSORBANCE, 1, EVEN, EVEN },
  { "every bit of the readings", 350, 1, 300, 0, 17, BT_X_NM, BT_Y_ABSORBANCE, 1, EVEN, EVEN },
  { "every bit of both", 350, 1.2345678901234567, 300, 17, 17, BT_X_NM, BT_Y_ABSORBANCE, 1, PAIRS, PAIRS },
  { "few digits, long runs", 350, 1, 1401, 0, 1, BT_X_NM, BT_Y_ABSORBANCE, 1, EVEN, EVEN },
  { "below zero", 350, 1, 400, 0, 4, BT_X_NM, BT_Y_ABSORBANCE, -0.1, EVEN, EVEN },
};

static double
rounded (double value, int places)
{
  return places == 17 ? value : round (value * pow (10, places)) / pow (10, places);
}

static BtSpectrum *
make (const Row *row, gboolean holes)
{
  g_autofree double *x = g_new (double, row->n), *y = g_new (double, row->n);
  g_autoptr (GError) error = NULL;
  BtSpectrum *spectrum;

  for (guint i = 0; i < row->n; i++)
    {
      x[i] = rounded (row->first + row->step * i, row->x_places);
      y[i] = holes && i % 50 == 7 ? (double) NAN : rounded (row->factor * smooth (350 + 1400.0 * i / row->n), row->y_places);
    }
  spectrum = bt_spectrum_new (x, y, row->n, row->x_unit, row->y_unit, "film 1", &error);
  g_assert_no_error (error);
  return spectrum;
}

static BtSpectrum *
read_again (const char *text)
{
  g_autoptr (GBytes) bytes = g_bytes_new (text, strlen (text));
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, "film.jdx", NULL, &error);

  g_assert_no_error (error);
  g_assert_cmpuint (spectra->len, ==, 1);
  return g_object_ref (g_ptr_array_index (spectra, 0));
}

static void
assert_same (const double *a, const double *b, gsize n)
{
  for (gsize i = 0; i < n; i++)
    if (isnan (a[i]))
      g_assert_true (isnan (b[i]));
    else
      g_assert_cmpfloat (a[i], ==, b[i]);
}

static void
check_text (const char *text, const char *form)
{
  g_auto (GStrv) lines = g_strsplit (text, "\r\n", -1);
  gsize n = g_strv_length (lines);

  g_assert_true (g_str_has_prefix (text, "##TITLE= "));
  g_assert_cmpstr (lines[n - 2], ==, "##END=");
  g_assert_cmpstr (lines[n - 1], ==, "");
  g_assert_nonnull (strstr (text, form));
  for (gsize i = 0; i < n; i++)
    {
      g_assert_cmpuint (strlen (lines[i]), <=, 80);
      g_assert_true (g_str_is_ascii (lines[i]) && strpbrk (lines[i], "\r\n\t") == NULL);
    }
}

static void
test_row (gconstpointer data)
{
  const Row *row = data;

  for (int form = BT_JCAMP_AFFN; form <= BT_JCAMP_DIFDUP; form++)
    for (int holes = 0; holes < 2; holes++)
      {
        g_autoptr (BtSpectrum) spectrum = make (row, holes == 1);
        g_autofree char *text = bt_spectrum_to_jcamp (spectrum, (BtJcampForm) form);
        g_autoptr (BtSpectrum) again = read_again (text);
        gsize n, n_again;
        const double *x = bt_spectrum_get_raw_x (spectrum, &n);

        check_text (text, form == BT_JCAMP_AFFN ? row->form_affn : row->form_difdup);
        bt_spectrum_get_raw_x (again, &n_again);
        g_assert_cmpuint (n_again, ==, n);
        if (n_again != n)
          continue;
        assert_same (x, bt_spectrum_get_raw_x (again, NULL), n);
        assert_same (bt_spectrum_get_raw_y (spectrum, NULL), bt_spectrum_get_raw_y (again, NULL), n);
        g_assert_cmpint (bt_spectrum_get_x_unit (again), ==, row->x_unit);
        g_assert_cmpint (bt_spectrum_get_y_unit (again), ==, row->y_unit);
        g_assert_cmpstr (bt_spectrum_get_title (again), ==, "film 1");
        for (guint i = 0; i < bt_spectrum_get_flags (again)->len; i++)
          g_assert_false (g_str_has_prefix (((const BtFlag *) g_ptr_array_index (bt_spectrum_get_flags (again), i))->code, "jcamp"));
        g_assert_null (bt_flags_find (bt_spectrum_get_flags (again), "units-inferred"));
      }
}

/* Differences save space, or they would not be worth their rules. */
static void
test_size (void)
{
  g_autoptr (BtSpectrum) spectrum = make (&rows[1], FALSE);
  g_autofree char *affn = bt_spectrum_to_jcamp (spectrum, BT_JCAMP_AFFN), *difdup = bt_spectrum_to_jcamp (spectrum, BT_JCAMP_DIFDUP);

  g_test_message ("%u and %u bytes", (guint) strlen (affn), (guint) strlen (difdup));
  g_assert_cmpuint (2 * strlen (difdup), <, strlen (affn));
}

/* Electronvolts, which the standard does not know, become wavenumbers: the energies stay. */
static void
test_energies (void)
{
  static const Row row = { "eV", 0.6, 0.005, 400, 3, 4, BT_X_EV, BT_Y_ABSORBANCE, 1, PAIRS, PAIRS };
  g_autoptr (BtSpectrum) spectrum = make (&row, FALSE);
  g_autofree char *text = bt_spectrum_to_jcamp (spectrum, BT_JCAMP_DIFDUP);
  g_autoptr (BtSpectrum) again = read_again (text);
  gsize n;
  const double *a = bt_spectrum_get_energy_ev (spectrum, &n), *b = bt_spectrum_get_energy_ev (again, NULL);

  check_text (text, PAIRS);
  g_assert_cmpint (bt_spectrum_get_x_unit (again), ==, BT_X_PER_CM);
  for (gsize i = 0; i < n; i++)
    g_assert_cmpfloat_with_epsilon (a[i] / b[i], 1, 5e-16);
}

/* A title with signs that mean something, and the notes of the file. */
static void
test_words (void)
{
  GString *file = g_string_new ("# film = \303\204 ## one $$ two\n# lot = L 3\n# thickness_nm = 55\n# thickness_u_nm = 2.5\n# substrate = fused silica\nnm,A\n");
  g_autoptr (GBytes) bytes = NULL;
  g_autoptr (GPtrArray) spectra = NULL;
  g_autoptr (BtSpectrum) again = NULL;
  g_autoptr (GError) error = NULL;
  g_autofree char *text = NULL;

  for (guint i = 0; i < 20; i++)
    g_string_append_printf (file, "%u,0.%u\n", 900 + i, 900 - 3 * i);
  bytes = g_string_free_to_bytes (file);
  spectra = bt_spectrum_read_bytes (bytes, "words.csv", NULL, &error);
  g_assert_no_error (error);
  text = bt_spectrum_to_jcamp (g_ptr_array_index (spectra, 0), BT_JCAMP_DIFDUP);
  check_text (text, EVEN);
  again = read_again (text);
  g_assert_cmpstr (bt_spectrum_get_note (again, "thickness nm"), ==, "55");
  g_assert_cmpstr (bt_spectrum_get_note (again, "Thickness_u_nm"), ==, "2.5");
  g_assert_cmpstr (bt_spectrum_get_note (again, "lot"), ==, "L 3");
  g_assert_cmpstr (bt_spectrum_get_note (again, "substrate"), ==, "fused silica");
  g_assert_nonnull (bt_spectrum_get_note (again, "film"));
  g_assert_true (g_str_has_suffix (bt_spectrum_get_note (again, "film"), "two"));
}

/* Several spectra are the blocks of one file. */
static void
test_several (void)
{
  g_autoptr (GPtrArray) spectra = g_ptr_array_new_with_free_func (g_object_unref), again = NULL;
  g_autoptr (GBytes) bytes = NULL;
  g_autoptr (GError) error = NULL;
  g_autofree char *text = NULL;

  for (guint i = 0; i < 3; i++)
    g_ptr_array_add (spectra, make (&rows[4 * i], FALSE));
  text = bt_spectra_to_jcamp (spectra, "a lot", BT_JCAMP_DIFDUP);
  check_text (text, "##DATA TYPE= LINK");
  g_assert_nonnull (strstr (text, "##BLOCKS= 4\r\n"));
  bytes = g_bytes_new (text, strlen (text));
  again = bt_spectrum_read_bytes (bytes, "lot.jdx", NULL, &error);
  g_assert_no_error (error);
  g_assert_cmpuint (again->len, ==, 3);
  for (guint i = 0; i < MIN (3, again->len); i++)
    {
      BtSpectrum *a = g_ptr_array_index (spectra, i), *b = g_ptr_array_index (again, i);
      gsize n, n_again;
      const double *x = bt_spectrum_get_raw_x (a, &n), *x_again = bt_spectrum_get_raw_x (b, &n_again);

      g_assert_cmpuint (n_again, ==, n);
      g_assert_cmpint (bt_spectrum_get_y_unit (b), ==, bt_spectrum_get_y_unit (a));
      g_assert_cmpstr (bt_spectrum_get_title (b), ==, "film 1");
      assert_same (x, x_again, MIN (n, n_again));
      assert_same (bt_spectrum_get_raw_y (a, NULL), bt_spectrum_get_raw_y (b, NULL), MIN (n, n_again));
    }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  for (guint i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      g_autofree char *path = g_strdup_printf ("/spectrum/jcamp-write/%s", rows[i].name);

      g_test_add_data_func (path, &rows[i], test_row);
    }
  g_test_add_func ("/spectrum/jcamp-write/size", test_size);
  g_test_add_func ("/spectrum/jcamp-write/energies", test_energies);
  g_test_add_func ("/spectrum/jcamp-write/words", test_words);
  g_test_add_func ("/spectrum/jcamp-write/several", test_several);
  return g_test_run ();
}
