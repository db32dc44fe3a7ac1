/* JCAMP-DX: the standard's own encoding examples, its checks, and files that break its rules. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <string.h>

#include "flag-codes.h"

/* A block with @n points from 400 on, one nanometre apart, and the table @data. */
static char *
block (const char *title, guint n, const char *labels, const char *form, const char *data)
{
  return g_strdup_printf ("##TITLE= %s\n##JCAMP-DX= 4.24 $$ made up\n##DATA TYPE= UV/VIS SPECTRUM\n##ORIGIN= nowhere\n##OWNER= nobody\n"
                          "##XUNITS= NANOMETERS\n##YUNITS= ABSORBANCE\n##FIRSTX= 400\n##LASTX= %u\n##NPOINTS= %u\n##XFACTOR= 1\n##YFACTOR= 1\n%s"
                          "%s\n%s##END=\n",
                          title, 400 + n - 1, n, labels, form, data);
}

static GPtrArray *
read_text (const char *text, GError **error)
{
  g_autoptr (GBytes) bytes = g_bytes_new (text, strlen (text));

  return bt_spectrum_read_bytes (bytes, "film.jdx", NULL, error);
}

static void
check_ordinates (BtSpectrum *spectrum, const char *expected)
{
  g_auto (GStrv) numbers = g_strsplit (expected, " ", -1);
  gsize n;
  const double *y = bt_spectrum_get_raw_y (spectrum, &n);

  g_assert_cmpuint (n, ==, g_strv_length (numbers));
  for (gsize i = 0; i < n && i < g_strv_length (numbers); i++)
    if (g_str_equal (numbers[i], "nan"))
      g_assert_true (isnan (y[i]));
    else
      g_assert_cmpfloat (y[i], ==, g_ascii_strtod (numbers[i], NULL));
}

typedef struct { const char *name, *form, *data, *ordinates, *flags; guint n; } Row;

#define XYDATA "##XYDATA= (X++(Y..Y))"
#define TEN "1 2 3 3 2 1 0 -1 -2 -3"

/* One spectrum ten times in ten forms: McDonald and Wilks, Appl. Spectrosc. 42, 151 (1988), Table VIIb. SQZDUP and the rows behind it follow from the
 * standard's rules. */
static const Row rows[] = {
  { "FIX", XYDATA, "400 1 2 3 3 2 1 0 -1 -2 -3\n", TEN, "negative-absorbance" },
  { "PAC", XYDATA, "400 1+2+3+3+2+1+0-1-2-3\n", TEN, "negative-absorbance" },
  { "SQZ", XYDATA, "400 1BCCBA@abc\n", TEN, "negative-absorbance" },
  { "DIF", XYDATA, "400 1JJ%jjjjjj\n409 c\n", TEN, "negative-absorbance" },
  { "DIFDUP", XYDATA, "400 1JT%jX\n409 c\n", TEN, "negative-absorbance" },
  { "SQZDUP", XYDATA, "400 1BCTBA@abc\n", TEN, "negative-absorbance" },
  { "abscissa at once before squeezed", XYDATA, "400ABCCBA@abc\n", TEN, "negative-absorbance" },
  { "two lines with a check", XYDATA, "400AJJ%j\n404B%jjjjj\n410c\n", "1 2 3 3 2 2 1 0 -1 -2 -3", "negative-absorbance", 11 },
  { "two lines, the abscissa behind the check", XYDATA, "400AJJ%j\n405B%jjjjj\n410c\n", "1 2 3 3 2 2 1 0 -1 -2 -3", "negative-absorbance", 11 },
  { "comments and blank lines", "##XYDATA=(X++(Y..Y)) $$ as measured", "400 1 2 3 $$ begin\n\n403 3 2 1 0 -1 -2 -3\n", TEN, "negative-absorbance" },
  { "CR LF and small letters", "##xydata= (x++(y..y))\r", "400 1 2 3 3 2\r\n405 1 0 -1 -2 -3\r\n", TEN, "negative-absorbance" },
  { "label in another spelling", "##XY-DATA= (X++(Y..Y))", "400 1 2 3 3 2 1 0 -1 -2 -3\n", TEN, "negative-absorbance" },
  { "missing ordinate", XYDATA, "400 1 2 3 ? 2 1 0 -1 -2 -3\n", "1 2 3 nan 2 1 0 -1 -2 -3", "missing-values negative-absorbance" },
  /* AFFN: E the only letter, a power of ten where digits or a sign follow at once */
  { "AFFN", XYDATA, "400 1.23 4.5E0 4.5E-2, 7.89E-1 6.00 1 2 3 4 5\n", "1.23 4.5 0.045 0.789 6 1 2 3 4 5", "" },
  { "pairs", "##XYPOINTS= (XY..XY)", "400,1; 401,2; 402,3\n403,3 404,2 405,1\n406 0;407 -1;408,-2;409,-3\n", TEN, "negative-absorbance" },
  { "pairs called XYDATA", "##XYDATA= (XY..XY)", "400,1 401,2 402,3 403,3 404,2 405,1 406,0 407,-1 408,-2 409,-3\n", TEN, "negative-absorbance" },
  { "check fails", XYDATA, "400AJJ%j\n404A%jjjjj\n410d\n", "1 2 3 3 1 1 0 -1 -2 -3 -4", "jcamp-check negative-absorbance", 11 },
  { "a line is missing", XYDATA, "400 1 2 3 3 2\n408 -2 -3 4\n", "1 2 3 3 2 -2 -3 4", "jcamp-abscissa jcamp-points negative-absorbance" },
  { "fewer points than stated", XYDATA, "400 1 2 3 3 2 1 0 -1 -2\n", "1 2 3 3 2 1 0 -1 -2", "jcamp-points negative-absorbance" },
};

static void
test_row (gconstpointer data)
{
  const Row *row = data;
  g_autofree char *text = block ("film", row->n > 0 ? row->n : 10, "", row->form, row->data);
  g_autofree char *codes = NULL;
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = read_text (text, &error);
  const double *x;

  g_assert_no_error (error);
  if (spectra == NULL)
    return;
  g_assert_cmpuint (spectra->len, ==, 1);
  codes = flag_codes (g_ptr_array_index (spectra, 0));
  check_ordinates (g_ptr_array_index (spectra, 0), row->ordinates);
  g_assert_cmpstr (codes, ==, row->flags);
  x = bt_spectrum_get_raw_x (g_ptr_array_index (spectra, 0), NULL);
  for (guint i = 0; i < 8; i++)
    g_assert_cmpfloat (x[i], ==, 400 + i);
  g_assert_cmpstr (bt_spectrum_get_title (g_ptr_array_index (spectra, 0)), ==, "film");
  g_test_message ("%s", bt_spectrum_get_reading (g_ptr_array_index (spectra, 0)));
}

/* The DIFDUP example of 53 ordinates as corrected by Baumbach et al., Pure Appl. Chem. 73, 1765 (2001); its x step is 1.928808. */
static void
test_published (void)
{
  static const char text[]
    = "##TITLE= example\n##JCAMP-DX= 4.24\n##DATA TYPE= INFRARED SPECTRUM\n##XUNITS= 1/CM\n##YUNITS= ABSORBANCE\n##FIRSTX= 599.860\n##LASTX= 700.158\n"
      "##NPOINTS= 53\n##XFACTOR= 1.0\n##YFACTOR= 0.01\n##FIRSTY= 0\n##XYDATA= (X++(Y..Y))\n"
      "599.860@VKT%TLkj%J%KLJ%njKjL%kL%jJULJ%kLK1%lLMNPNPRLJ0QTOJ1P\n700.158A28\n##END=\n";
  static const int ordinates[53] = { 0,  0,  0,  0,  2,  4,  4,  4,  7,  5,  4,  4,  5,  5,  7,  10, 11, 11, 6,  5,  7,  6,  9,  9,  7,   10,  10,
                                     9,  10, 11, 12, 15, 16, 16, 14, 17, 38, 38, 35, 38, 42, 47, 54, 59, 66, 75, 78, 88, 96, 104, 110, 121, 128 };
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = read_text (text, &error);
  g_autofree char *codes = NULL;
  const double *x, *y;
  gsize n;

  g_assert_no_error (error);
  x = bt_spectrum_get_raw_x (g_ptr_array_index (spectra, 0), &n);
  y = bt_spectrum_get_raw_y (g_ptr_array_index (spectra, 0), NULL);
  g_assert_cmpuint (n, ==, 53);
  for (guint i = 0; i < 53; i++)
    {
      g_assert_cmpfloat (y[i], ==, ordinates[i] / 100.0);
      g_assert_cmpfloat_with_epsilon (x[i], 599.860 + 1.928808 * i, 1e-4);
    }
  g_assert_cmpfloat (x[52], ==, 700.158);
  g_assert_cmpint (bt_spectrum_get_x_unit (g_ptr_array_index (spectra, 0)), ==, BT_X_PER_CM);
  codes = flag_codes (g_ptr_array_index (spectra, 0));
  g_assert_null (strstr (codes, "jcamp"));
}

typedef struct { const char *name, *form, *data, *part; BtSpectrumError code; } Refused;

static const Refused refused[] = {
  { "two counts in a row", XYDATA, "400 1VZ\n", "line 14: a count", BT_SPECTRUM_ERROR_FORMAT },
  { "a difference first", XYDATA, "400 jjj\n", "line 14: the ordinates of a line may not begin", BT_SPECTRUM_ERROR_FORMAT },
  { "a count first", XYDATA, "400 T1\n", "line 14: a count", BT_SPECTRUM_ERROR_FORMAT },
  { "a sign of no number", XYDATA, "400 1 2 3\n403 1 ! 3\n", "line 15: the table holds a sign", BT_SPECTRUM_ERROR_FORMAT },
  { "no abscissa", XYDATA, "@ABC\n", "line 14: a line of the table begins", BT_SPECTRUM_ERROR_FORMAT },
  { "a count without end", XYDATA, "400 1Z9999999999999\n", "line 14: it holds more points", BT_SPECTRUM_ERROR_FORMAT },
  { "empty table", XYDATA, "", "empty", BT_SPECTRUM_ERROR_VALUES },
  { "three points", XYDATA, "400 1 2 3\n", "3 usable points", BT_SPECTRUM_ERROR_VALUES },
  { "points without end", "##NPOINTS= 1E12\n" XYDATA, "400 1 2 3 4 5 6 7 8 9 10\n", "line 15: NPOINTS above the table states 1e+12 points, and 10 million",
    BT_SPECTRUM_ERROR_VALUES },
  { "a few points too many", "##NPOINTS= 10000001\n" XYDATA, "400 1 2 3 4 5 6 7 8 9 10\n", "states 10000001 points", BT_SPECTRUM_ERROR_VALUES },
  { "pairs without end", "##NPOINTS= 20000000\n##XYPOINTS= (XY..XY)", "400,1 401,2\n", "line 15: NPOINTS", BT_SPECTRUM_ERROR_VALUES },
  { "no table", "##COMMENTS= none", "", "without a spectrum", BT_SPECTRUM_ERROR_FORMAT },
  { "peaks", "##PEAK TABLE= (XY..XY)", "400,1 401,2\n", "line 13: the data are of the class PEAK TABLE", BT_SPECTRUM_ERROR_FORMAT },
  { "n-tuples", "##DATA CLASS= NTUPLES\n##NTUPLES= UV SPECTRUM\n##VAR_NAME= WAVELENGTH, ABSORBANCE\n##PAGE= N=1\n##DATA TABLE= (X++(Y..Y)), XYDATA",
    "400 1 2 3\n", "line 14: the data are of the class NTUPLES", BT_SPECTRUM_ERROR_FORMAT },
  { "interferogram", "##RADATA= (R++(A..A))", "0 1 2 3\n", "line 13: the data are of the class RADATA", BT_SPECTRUM_ERROR_FORMAT },
  { "against time", "##XUNITS= SECONDS\n" XYDATA, "400 1 2 3 4 5 6 7 8 9 10\n", "line 15: XUNITS is SECONDS", BT_SPECTRUM_ERROR_UNITS },
  { "against frequency", "##XUNITS= HZ\n" XYDATA, "400 1 2 3 4 5 6 7 8 9 10\n", "XUNITS is HZ", BT_SPECTRUM_ERROR_UNITS },
  { "against mass", "##XUNITS= M/Z\n##XYPOINTS= (XY..XY)", "400,1 401,2\n", "XUNITS is M/Z", BT_SPECTRUM_ERROR_UNITS },
  { "reflectance", "##YUNITS= REFLECTANCE\n" XYDATA, "400 1 2 3 3 2 1 0 -1 -2 -3\n", "reflectance", BT_SPECTRUM_ERROR_UNITS },
  { "Kubelka-Munk", "##YUNITS= KUBELKA-MUNK\n" XYDATA, "400 1 2 3 3 2 1 0 -1 -2 -3\n", "KUBELKA-MUNK", BT_SPECTRUM_ERROR_UNITS },
};

static void
test_refused (gconstpointer data)
{
  const Refused *row = data;
  g_autofree char *text = block ("film", 10, "", row->form, row->data);
  g_autoptr (GError) error = NULL;

  g_assert_null (read_text (text, &error));
  g_assert_error (error, BT_SPECTRUM_ERROR, (int) row->code);
  g_test_message ("%s", error->message);
  g_assert_true (g_str_has_prefix (error->message, "film.jdx: ") && g_str_has_suffix (error->message, "."));
  g_assert_nonnull (strstr (error->message, row->part));
}

/* Several spectra in one file, in their own units; one broken block does not lose the others. */
static void
test_linked (void)
{
  g_autofree char *first = block ("first", 10, "##THICKNESS NM= 55\n", XYDATA, "400 1 2 3 4 5 6 7 8 9 10\n"),
                  *second = block ("second", 10, "##YUNITS= TRANSMITTANCE\n", XYDATA, "400 11 12 13 14 15 16 17 18 19 20\n"),
                  *broken = block ("broken", 10, "", XYDATA, "400 jj\n"),
                  *text = g_strconcat ("##TITLE= both\n##JCAMP-DX= 5.01\n##DATA TYPE= LINK\n##BLOCKS= 3\n", first, broken, second, "##END=\n", NULL);
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = read_text (text, &error);

  g_assert_no_error (error);
  g_assert_cmpuint (spectra->len, ==, 2);
  g_assert_cmpstr (bt_spectrum_get_title (g_ptr_array_index (spectra, 0)), ==, "first");
  g_assert_cmpstr (bt_spectrum_get_title (g_ptr_array_index (spectra, 1)), ==, "second");
  g_assert_cmpint (bt_spectrum_get_y_unit (g_ptr_array_index (spectra, 0)), ==, BT_Y_ABSORBANCE);
  g_assert_cmpint (bt_spectrum_get_y_unit (g_ptr_array_index (spectra, 1)), ==, BT_Y_TRANSMITTANCE_PERCENT);
  g_assert_cmpstr (bt_spectrum_get_note (g_ptr_array_index (spectra, 0), "thickness nm"), ==, "55");
  /* What is left out is said, with its line. */
  for (guint i = 0; i < spectra->len; i++)
    {
      const BtFlag *flag = bt_flags_find (bt_spectrum_get_flags (g_ptr_array_index (spectra, i)), "jcamp-block");

      g_assert_nonnull (flag);
      if (flag != NULL)
        g_assert_nonnull (strstr (flag->text, "line 34: "));
    }
}

/* Peaks beside a spectrum are left out, and that is said. */
static void
test_peaks_beside (void)
{
  g_autofree char *first = block ("first", 10, "", XYDATA, "400 1 2 3 4 5 6 7 8 9 10\n"), *peaks = block ("peaks", 2, "", "##PEAK TABLE= (XY..XY)", "400,1 401,2\n"),
                  *text = g_strconcat ("##TITLE= both\n##JCAMP-DX= 5.01\n##DATA TYPE= LINK\n##BLOCKS= 3\n", first, peaks, "##END=\n", NULL);
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = read_text (text, &error);
  const BtFlag *flag;

  g_assert_no_error (error);
  g_assert_cmpuint (spectra->len, ==, 1);
  flag = bt_flags_find (bt_spectrum_get_flags (g_ptr_array_index (spectra, 0)), "jcamp-block");
  g_assert_nonnull (flag);
  g_assert_nonnull (strstr (flag->text, "line 32: the data are of the class PEAK TABLE"));
}

/* Counts of repetitions cannot make more of a file than a spectrum has, nor can many of them: 300 blocks that would be 90000 ordinates each. */
static void
test_inflated (void)
{
  GString *text = g_string_new ("##TITLE= many\n##JCAMP-DX= 4.24\n##DATA TYPE= LINK\n##BLOCKS= 300\n");
  g_autoptr (GPtrArray) spectra = NULL;
  gsize n_all = 0;

  for (guint i = 0; i < 300; i++)
    {
      g_autofree char *one = block ("one", 10, "", XYDATA, "400ABZ9990\n");

      g_string_append (text, one);
    }
  spectra = read_text (text->str, NULL);
  for (guint i = 0; spectra != NULL && i < spectra->len; i++)
    {
      gsize n;

      bt_spectrum_get_raw_y (g_ptr_array_index (spectra, i), &n);
      n_all += n;
    }
  g_assert_cmpuint (n_all, >, 80000);
  g_assert_cmpuint (n_all, <=, 100000 + text->len);
  g_string_free (text, TRUE);
}

/* Whatever the bytes: a spectrum or a sentence. */
static void
test_mutilated (void)
{
  g_autofree char *whole = block ("film", 11, "", XYDATA, "400AJJ%j\n404B%jjjjj\n410c\n");
  const gsize size = strlen (whole), table = (gsize) (strstr (whole, "##XYDATA") - whole);
  g_autoptr (GRand) random = g_rand_new_with_seed (3);

  for (guint i = 0; i < 20000; i++)
    {
      g_autofree char *copy = g_strdup (whole);
      g_autoptr (GError) error = NULL;
      g_autoptr (GPtrArray) spectra = NULL;

      for (guint k = 0; k < 4; k++)
        copy[g_rand_int_range (random, i % 2 ? (gint32) table : 8, (gint32) size)] = "0123456789+-.,;?@AJjSsZz%E# =\n$("[g_rand_int_range (random, 0, 32)];
      spectra = read_text (copy, &error);
      g_assert_true ((spectra != NULL) == (error == NULL));
    }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  for (guint i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      g_autofree char *path = g_strdup_printf ("/spectrum/jcamp/%s", rows[i].name);

      g_test_add_data_func (path, &rows[i], test_row);
    }
  for (guint i = 0; i < G_N_ELEMENTS (refused); i++)
    {
      g_autofree char *path = g_strdup_printf ("/spectrum/jcamp-refused/%s", refused[i].name);

      g_test_add_data_func (path, &refused[i], test_refused);
    }
  g_test_add_func ("/spectrum/jcamp-published", test_published);
  g_test_add_func ("/spectrum/jcamp-linked", test_linked);
  g_test_add_func ("/spectrum/jcamp-peaks-beside", test_peaks_beside);
  g_test_add_func ("/spectrum/jcamp-inflated", test_inflated);
  g_test_add_func ("/spectrum/jcamp-mutilated", test_mutilated);
  return g_test_run ();
}
