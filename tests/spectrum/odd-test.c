/* Files that lack something, hold several spectra, or are no spectra: what is read of them, or the sentence that refuses them. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include <glib/gstdio.h>

#include "flag-codes.h"

/* Points as "x y x y", separated by blanks; of several spectra one string each. */
typedef struct {
  const char *name, *text;
  const char *points[3];
  const char *titles[3];    /* (nullable) */
  BtXUnit x_unit;
  BtYUnit y_unit;
  guint n_used;             /* points on the core's axes of the first spectrum; 0: as many as were read */
  const char *flags;        /* of the first spectrum */
  guint line;               /* where the first table begins; 0: whatever */
} Odd;

#define TEN "900 0.91 910 0.82 920 0.73 930 0.64 940 0.55 950 0.46 960 0.37 970 0.28 980 0.19 990 0.11"
#define ROWS(s, d) "900" s "0" d "91\n910" s "0" d "82\n920" s "0" d "73\n930" s "0" d "64\n940" s "0" d "55\n950" s "0" d "46\n" \
                   "960" s "0" d "37\n970" s "0" d "28\n980" s "0" d "19\n990" s "0" d "11\n"

static const Odd odds[] = {
  { "missing: empty", "nm,A\n" ROWS (",", ".") "995,\n1000,0.1\n", { TEN " 995 nan 1000 0.1" }, .n_used = 11, .flags = "missing-values" },
  { "missing: dash", "nm;A\n" ROWS (";", ".") "995;-\n1000;0.1\n", { TEN " 995 nan 1000 0.1" }, .n_used = 11, .flags = "missing-values" },
  { "missing: NaN", "nm A\n" ROWS (" ", ".") "995 NaN\n1000 0.1\n", { TEN " 995 nan 1000 0.1" }, .n_used = 11, .flags = "missing-values" },
  { "missing: stars", "nm A\n995 ****\n" ROWS (" ", "."), { "995 nan " TEN }, .n_used = 10, .flags = "missing-values" },
  { "missing: OVER", "nm\tA\n895\tOVER\n" ROWS ("\t", "."), { "895 nan " TEN }, .n_used = 10, .flags = "missing-values" },
  { "missing: #N/A", "nm,A\n895,#N/A\n896,#DIV/0!\n" ROWS (",", "."), { "895 nan 896 nan " TEN }, .n_used = 10, .flags = "missing-values" },
  { "missing: 1.#INF", "nm,A\n895,1.#INF\n" ROWS (",", "."), { "895 nan " TEN }, .n_used = 10, .flags = "missing-values" },
  { "missing with decimal comma", "nm;A\n895;---\n" ROWS (";", ","), { "895 nan " TEN }, .n_used = 10, .flags = "missing-values" },
  { "infinite", "nm,A\n895,1e999\n896,Inf\n" ROWS (",", "."), { "895 nan 896 nan " TEN }, .n_used = 10, .flags = "missing-values" },
  { "duplicates averaged", "nm,A\n" ROWS (",", ".") "990,0.13\n", { TEN " 990 0.13" }, .n_used = 10, .flags = "duplicate-x" },
  { "uneven, out of order", "nm,A\n1003.5,0.3\n" ROWS (",", ".") "902.25,0.5\n", { "1003.5 0.3 " TEN " 902.25 0.5" } },
  { "padded with zeros", "nm,A\n" ROWS (",", ".") "991,0.10\n992,0.09\n993,0.08\n994,0.07\n995,0.06\n996,0.05\n997,0.04\n998,0.03\n999,0.02\n1000,0.01\n0,0\n",
    { TEN " 991 0.1 992 0.09 993 0.08 994 0.07 995 0.06 996 0.05 997 0.04 998 0.03 999 0.02 1000 0.01 0 0" }, .n_used = 20, .flags = "bad-x" },
  { "a line of words among the rows", "nm,A\n895,0.95\n896,0.94\n897,0.93\nlamp changed\n" ROWS (",", "."),
    { "895 0.95 896 0.94 897 0.93 " TEN }, .flags = "lines-skipped" },
  { "a comment among the rows", "nm,A\n895,0.95\n# lamp changed\n" ROWS (",", "."), { "895 0.95 " TEN } },
  { "no light", "nm,%T\n895,0.0\n896,-0.1\n" "900,10\n901,11\n902,12\n903,13\n904,14\n905,15\n906,16\n907,17.5\n",
    { "895 0 896 -0.1 900 10 901 11 902 12 903 13 904 14 905 15 906 16 907 17.5" }, .y_unit = BT_Y_TRANSMITTANCE_PERCENT, .n_used = 8,
    .flags = "dark" },
  { "per cent in doubt", "nm,%T\n" ROWS (",", "."), { TEN }, .y_unit = BT_Y_TRANSMITTANCE_PERCENT, .flags = "percent-doubtful" },
  { "negative absorbance", "nm,A\n" ROWS (",", ".") "1000,-0.02\n", { TEN " 1000 -0.02" }, .flags = "negative-absorbance" },
  { "true minus sign", "nm,A\n" ROWS (",", ".") "1000,\342\210\2220.02\n", { TEN " 1000 -0.02" }, .flags = "negative-absorbance" },
  { "Fortran exponents", "nm A\n 9.0D+02 9.1D-01\n 9.1D+02 8.2D-01\n 9.2d2 .73d0\n" "930 0.64\n940 0.55\n950 0.46\n960 0.37\n970 0.28\n980 0.19\n990 0.11\n", { TEN } },
  { "one x and three y, tab", "Wavelength (nm)\tFilm 1 Abs\tFilm 2 Abs\tFilm 3 Abs\n"
    "900\t0.1\t0.2\t0.3\n910\t0.2\t0.3\t0.4\n920\t0.3\t0.4\t0.5\n930\t0.4\t0.5\t0.6\n940\t0.5\t0.6\t0.7\n950\t0.6\t0.7\t0.8\n960\t0.7\t0.8\t0.9\n"
    "970\t0.8\t0.9\t1.1\n",
    { "900 0.1 910 0.2 920 0.3 930 0.4 940 0.5 950 0.6 960 0.7 970 0.8", "900 0.2 910 0.3 920 0.4 930 0.5 940 0.6 950 0.7 960 0.8 970 0.9",
      "900 0.3 910 0.4 920 0.5 930 0.6 940 0.7 950 0.8 960 0.9 970 1.1" }, { "Film 1 Abs", "Film 2 Abs", "Film 3 Abs" } },
  { "pairs", "Film 1,,Film 2,\nWavelength (nm),Abs,Wavelength (nm),Abs\n"
    "900,0.1,800,0.2\n910,0.2,805,0.3\n920,0.3,810,0.4\n930,0.4,815,0.5\n940,0.5,820,0.6\n950,0.6,825,0.7\n960,0.7,830,0.8\n970,0.8,835,0.9\n,,840,1.0\n",
    { "900 0.1 910 0.2 920 0.3 930 0.4 940 0.5 950 0.6 960 0.7 970 0.8", "800 0.2 805 0.3 810 0.4 815 0.5 820 0.6 825 0.7 830 0.8 835 0.9 840 1.0" },
    { "Film 1", "Film 2" } },
  { "pairs without headers",
    "900;0.1;800;0.22\n910;0.2;805;0.3\n920;0.3;810;0.4\n930;0.44;815;0.5\n940;0.5;820;0.6\n950;0.6;825;0.7\n960;0.7;830;0.8\n970;0.8;835;0.9\n",
    { "900 0.1 910 0.2 920 0.3 930 0.44 940 0.5 950 0.6 960 0.7 970 0.8", "800 0.22 805 0.3 810 0.4 815 0.5 820 0.6 825 0.7 830 0.8 835 0.9" },
    { "column 2", "column 4" }, .y_unit = BT_Y_TRANSMITTANCE, .flags = "units-inferred" },
  { "one below the other", "Film: A1\nnm,A\n" ROWS (",", ".") "\nFilm: A2\nnm,A\n" ROWS (",", "."), { TEN, TEN }, { "A1", "A2" } },
  { "one below the other, no headers", "nm A\n" ROWS (" ", ".") "\n" ROWS (" ", "."), { TEN, TEN } },
  { "line ends in quoted headers", "\"Wavelength\n(nm)\",\"Film \"\"A\"\"\nabsorbance\",\"Film B\n\nabsorbance\"\n"
    "900,0.1,0.2\n910,0.2,0.3\n920,0.3,0.4\n930,0.4,0.5\n940,0.5,0.6\n950,0.6,0.7\n960,0.7,0.8\n970,0.8,0.9\n",
    { "900 0.1 910 0.2 920 0.3 930 0.4 940 0.5 950 0.6 960 0.7 970 0.8", "900 0.2 910 0.3 920 0.4 930 0.5 940 0.6 950 0.7 960 0.8 970 0.9" },
    { "Film \"A\" absorbance", "Film B absorbance" }, .line = 6 },
  { "line ends in a quoted header, semicolons, CR LF", "\"Wellenzahl\r\n(cm-1)\";\"Transmission\r\n(%)\"\r\n" "9000;90,5\r\n9010;90,4\r\n9020;90,3\r\n9030;90,2\r\n"
    "9040;90,1\r\n9050;90,0\r\n9060;89,9\r\n9070;89,8\r\n", { "9000 90.5 9010 90.4 9020 90.3 9030 90.2 9040 90.1 9050 90 9060 89.9 9070 89.8" },
    .x_unit = BT_X_PER_CM, .y_unit = BT_Y_TRANSMITTANCE_PERCENT, .line = 4 },
  { "numbers in a quoted field over lines", "\"Remarks: before\n1,2\n3,4\nafter\"\n\"nm\",\"A\"\n" ROWS (",", "."), { TEN }, .line = 6 },
  { "line ends in the remarks of rows", "nm,A,remark\n900,0.91,\"lamp\nwarm\"\n910,0.82,\n920,0.73,\"all\n999,9\nwell\"\n930,0.64,\n940,0.55,\n950,0.46,\n960,0.37,\n"
    "970,0.28,\n980,0.19,\n990,0.11,\n", { TEN }, .line = 2 },
  { "a quote that nothing closes", "Operator: \"me\n\"wafer 5\nnm,A\n" ROWS (",", "."), { TEN }, .line = 4 },
  { "a quote that opens behind words", "wafer of 5\" by\nnm,A\n" ROWS (",", ".") "cut from 6\"\n", { TEN }, .line = 3 },
  { "one film short of points", "nm,F1,F2\n900,0.91,\n910,0.82,1\n920,0.73,\n930,0.64,\n940,0.55,\n950,0.46,\n960,0.37,\n970,0.28,\n980,0.19,\n990,0.11,\n",
    { TEN }, .titles = { "F1" }, .flags = "units-inferred" },
};

static void
check_points (BtSpectrum *spectrum, const char *points)
{
  g_auto (GStrv) numbers = g_strsplit (points, " ", -1);
  gsize n;
  const double *x = bt_spectrum_get_raw_x (spectrum, &n), *y = bt_spectrum_get_raw_y (spectrum, NULL);

  g_assert_cmpuint (2 * n, ==, g_strv_length (numbers));
  for (gsize i = 0; i < n && 2 * n == g_strv_length (numbers); i++)
    {
      const double expected = g_ascii_strtod (numbers[2 * i + 1], NULL);

      g_assert_cmpfloat (x[i], ==, g_ascii_strtod (numbers[2 * i], NULL));
      if (isnan (expected))
        g_assert_true (isnan (y[i]));
      else
        g_assert_cmpfloat (y[i], ==, expected);
    }
}

static void
test_odd (gconstpointer data)
{
  const Odd *odd = data;
  g_autoptr (GBytes) bytes = g_bytes_new_static (odd->text, strlen (odd->text));
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, odd->name, NULL, &error);
  guint n = 0;

  while (n < 3 && odd->points[n] != NULL)
    n++;
  g_assert_no_error (error);
  if (spectra == NULL)
    return;
  g_assert_cmpuint (spectra->len, ==, n);
  for (guint i = 0; i < MIN (n, spectra->len); i++)
    {
      BtSpectrum *spectrum = g_ptr_array_index (spectra, i);
      g_autofree char *codes = flag_codes (spectrum);

      g_test_message ("%s", bt_spectrum_get_reading (spectrum));
      check_points (spectrum, odd->points[i]);
      g_assert_cmpint (bt_spectrum_get_x_unit (spectrum), ==, odd->x_unit);
      g_assert_cmpint (bt_spectrum_get_y_unit (spectrum), ==, odd->y_unit);
      if (odd->titles[i] != NULL)
        g_assert_cmpstr (bt_spectrum_get_title (spectrum), ==, odd->titles[i]);
      if (i == 0)
        g_assert_cmpstr (codes, ==, odd->flags != NULL ? odd->flags : "");
      if (i == 0 && odd->line > 0)
        {
          g_autofree char *from = g_strdup_printf ("from line %u on", odd->line);

          g_assert_nonnull (strstr (bt_spectrum_get_reading (spectrum), from));
        }
      if (i == 0 && odd->n_used > 0)
        g_assert_cmpuint (bt_spectrum_get_n_points (spectrum), ==, odd->n_used);
    }
}

typedef struct { const char *name, *text; gssize size; BtSpectrumError code; const char *parts[3]; } Refused;

static const Refused refused[] = {
  { "empty", "", 0, BT_SPECTRUM_ERROR_EMPTY, { "empty" } },
  { "binary", "\211PNG\r\n\032\n\0\0\0\rIHDR\0\0\1\0", 24, BT_SPECTRUM_ERROR_FORMAT, { "binary", "export" } },
  { "damaged UTF-16", "\377\376a\0\0\330b", 7, BT_SPECTRUM_ERROR_FORMAT, { "UTF-16", "damaged" } },
  { "words", "This is a letter.\nNo numbers in it.\n", -1, BT_SPECTRUM_ERROR_FORMAT, { "no table" } },
  { "header only", "nm,A\n", -1, BT_SPECTRUM_ERROR_FORMAT, { "no table" } },
  { "one column", "900\n901\n902\n903\n904\n905\n906\n907\n908\n", -1, BT_SPECTRUM_ERROR_FORMAT, { "one column" } },
  { "three points", "nm,A\n900,0.1\n901,0.2\n902,0.3\n", -1, BT_SPECTRUM_ERROR_VALUES, { "3 usable points", "line 2", "8" } },
  { "all missing", "nm,A\n900,NaN\n901,NaN\n902,NaN\n903,NaN\n904,NaN\n905,NaN\n906,NaN\n907,NaN\n", -1, BT_SPECTRUM_ERROR_VALUES, { "missing" } },
  { "constant x", "nm,A\n900,0.1\n900,0.2\n900,0.3\n900,0.4\n900,0.5\n900,0.6\n900,0.7\n900,0.8\n900,0.9\n", -1, BT_SPECTRUM_ERROR_VALUES,
    { "only 1 value", "line 2" } },
  { "constant y", "nm,A\n900,0.5\n901,0.5\n902,0.5\n903,0.5\n904,0.5\n905,0.5\n906,0.5\n907,0.5\n", -1, BT_SPECTRUM_ERROR_VALUES,
    { "same value, 0.5", "line 2" } },
  { "micrometres said to be nm", "wavelength (nm),A\n0.3,0.9\n0.4,0.8\n0.5,0.7\n0.6,0.6\n0.7,0.5\n0.8,0.4\n0.9,0.3\n2.5,0.1\n", -1,
    BT_SPECTRUM_ERROR_UNITS, { "0.3 to 2.5 nm", "line 2", "another unit" } },
  { "nanometres said to be eV", "eV,A\n300,0.9\n400,0.8\n500,0.7\n600,0.6\n700,0.5\n800,0.4\n900,0.3\n2500,0.1\n", -1,
    BT_SPECTRUM_ERROR_UNITS, { "300 to 2500 eV", "another unit" } },
  { "negative wavelengths", "nm,A\n-900,0.1\n-901,0.2\n-902,0.3\n-903,0.4\n-904,0.5\n-905,0.6\n-906,0.7\n-907,0.8\n", -1, BT_SPECTRUM_ERROR_UNITS,
    { "8 points", "0 or less" } },
  { "per cent said to be absorbance", "nm,Absorbance\n900,91\n901,92\n902,93\n903,92\n904,91\n905,90\n906,89\n907,88\n", -1, BT_SPECTRUM_ERROR_UNITS,
    { "absorbance of up to 93", "per cent" } },
  { "meV", "Energy (meV),A\n900,0.1\n901,0.2\n902,0.3\n903,0.4\n904,0.5\n905,0.6\n906,0.7\n907,0.8\n", -1, BT_SPECTRUM_ERROR_UNITS, { "meV", "mev" } },
  { "counts", "nm,Intensity (counts)\n900,1001\n901,1002\n902,1003\n903,1004\n904,1005\n905,1006\n906,1007\n907,1008\n", -1,
    BT_SPECTRUM_ERROR_UNITS, { "counts" } },
  { "reflectance", "nm,%R\n900,1\n901,2\n902,3\n903,4\n904,5\n905,6\n906,7\n907,8\n", -1, BT_SPECTRUM_ERROR_UNITS, { "reflectance", "line 2" } },
  { "alpha per um", "nm,alpha (1/um)\n900,1\n901,2\n902,3\n903,4\n904,5\n905,6\n906,7\n907,8\n", -1, BT_SPECTRUM_ERROR_UNITS, { "1/um" } },
};

static void
check_sentence (const GError *error, const char *name, BtSpectrumError code, const char *const *parts)
{
  g_assert_error (error, BT_SPECTRUM_ERROR, (int) code);
  if (error == NULL)
    return;
  g_test_message ("%s", error->message);
  g_assert_true (g_str_has_suffix (error->message, "."));
  g_assert_nonnull (strstr (error->message, name));
  for (guint i = 0; i < 3 && parts[i] != NULL; i++)
    if (strstr (error->message, parts[i]) == NULL)
      {
        g_test_message ("it does not say \"%s\"", parts[i]);
        g_test_fail ();
      }
}

static void
test_refused (gconstpointer data)
{
  const Refused *row = data;
  g_autoptr (GBytes) bytes = g_bytes_new_static (row->text, row->size >= 0 ? (gsize) row->size : strlen (row->text));
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, row->name, NULL, &error);

  g_assert_null (spectra);
  check_sentence (error, row->name, row->code, row->parts);
}

static void
test_places (void)
{
  static const char *const folder_parts[3] = { "folder" }, *const gone_parts[3] = { "no such file" }, *const denied_parts[3] = { "permission" },
                           *const device_parts[3] = { "device" };
  g_autofree char *folder = g_dir_make_tmp ("bandtally-XXXXXX", NULL), *gone = g_build_filename (folder, "gone.csv", NULL),
                  *denied = g_build_filename (folder, "denied.csv", NULL);
  GError *error = NULL;

  g_assert_null (bt_spectrum_read_file (folder, NULL, &error));
  check_sentence (error, folder, BT_SPECTRUM_ERROR_OPEN, folder_parts);
  g_clear_error (&error);
  g_assert_null (bt_spectrum_read_file (gone, NULL, &error));
  check_sentence (error, "gone.csv", BT_SPECTRUM_ERROR_OPEN, gone_parts);
  g_clear_error (&error);
  g_assert_null (bt_spectrum_read_file ("/dev/zero", NULL, &error));
  check_sentence (error, "/dev/zero", BT_SPECTRUM_ERROR_OPEN, device_parts);
  g_clear_error (&error);
  g_assert_true (g_file_set_contents (denied, "nm,A\n", -1, NULL));
  g_chmod (denied, 0);
  /* Whoever may read everything cannot be refused. */
  if (g_access (denied, R_OK) != 0)
    {
      g_assert_null (bt_spectrum_read_file (denied, NULL, &error));
      check_sentence (error, "denied.csv", BT_SPECTRUM_ERROR_OPEN, denied_parts);
      g_clear_error (&error);
    }
  g_remove (denied);
  g_rmdir (folder);
}

/* The text is read as a table whose second column is @expected, to the last bit. Takes @text. */
static void
check_readings (GString *text, const GArray *expected)
{
  g_autoptr (GBytes) bytes = g_string_free_to_bytes (text);
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, "numbers.csv", NULL, NULL);
  const double *y;
  gsize n;

  g_assert_nonnull (spectra);
  y = bt_spectrum_get_raw_y (g_ptr_array_index (spectra, 0), &n);
  g_assert_cmpuint (n, ==, expected->len);
  for (gsize i = 0; i < n; i++)
    if (memcmp (&y[i], &g_array_index (expected, double, i), sizeof *y) != 0)
      g_assert_cmpfloat (y[i], ==, g_array_index (expected, double, i));
}

/* Numbers by the short way are those of the C library, to the last bit. */
static void
test_numbers (void)
{
  g_autoptr (GRand) random = g_rand_new_with_seed (7);
  GString *text = g_string_new ("nm,A\n");
  g_autoptr (GArray) expected = g_array_new (FALSE, FALSE, sizeof (double));

  for (guint i = 0; i < 20000; i++)
    {
      char number[64], format[16];
      double value;

      g_snprintf (format, sizeof format, "%%.%d%c", g_rand_int_range (random, 0, 22), "efg"[g_rand_int_range (random, 0, 3)]);
      g_ascii_formatd (number, sizeof number, format, ldexp (g_rand_double (random) - 0.3, g_rand_int_range (random, -60, 3)));
      value = g_ascii_strtod (number, NULL);
      g_string_append_printf (text, "%u,%s\n", 300 + i, number);
      g_array_append_val (expected, value);
    }
  check_readings (text, expected);
}

/* Whatever the bytes: a spectrum or a sentence. */
static void
test_mutilated (void)
{
  static const char whole[] = "# film = x\nnm;A;B\n" ROWS (";0.5;", ".") "end: 1\n";
  g_autoptr (GRand) random = g_rand_new_with_seed (11);

  for (guint i = 0; i < 20000; i++)
    {
      g_autofree char *copy = g_memdup2 (whole, sizeof whole - 1);
      const guint n_changes = (guint) g_rand_int_range (random, 1, 12);
      g_autoptr (GBytes) bytes = NULL;
      g_autoptr (GPtrArray) spectra = NULL;
      g_autoptr (GError) error = NULL;

      for (guint k = 0; k < n_changes; k++)
        copy[g_rand_int_range (random, 0, sizeof whole - 1)] = ";,.\n\t \"#-+e90NaN%\r\377\302"[g_rand_int_range (random, 0, 22)];
      bytes = g_bytes_new (copy, (gsize) g_rand_int_range (random, 0, sizeof whole));
      spectra = bt_spectrum_read_bytes (bytes, "mutilated", NULL, &error);
      g_assert_true ((spectra != NULL) == (error == NULL));
      for (guint k = 0; spectra != NULL && k < spectra->len; k++)
        {
          gsize n;
          const double *noise = bt_spectrum_get_noise (g_ptr_array_index (spectra, k), &n);

          g_assert_cmpuint (n, >=, BT_SPECTRUM_MIN_POINTS);
          for (gsize p = 0; p < n; p++)
            g_assert_true (noise[p] > 0 && isfinite (noise[p]));
        }
    }
}

/* Decimals in the middle between two doubles, where rounding goes to the even one, and next to it: as strtod has them. */
static void
test_halves (void)
{
  static const char *const ends[] = { ".5", ".50", ".500", ".501", ".499", "", ".25", ".75" };
  g_autoptr (GRand) random = g_rand_new_with_seed (8);
  GString *text = g_string_new ("nm,alpha (1/cm)\n");
  g_autoptr (GArray) expected = g_array_new (FALSE, FALSE, sizeof (double));

  for (guint i = 0; i < 8000; i++)
    {
      /* Halves lie in the middle above 2^52, odd integers above 2^53, and so on. */
      guint64 whole = (G_GUINT64_CONSTANT (1) << g_rand_int_range (random, 52, 56)) + g_rand_int (random);
      g_autofree char *number = g_strdup_printf ("%s%" G_GUINT64_FORMAT "%s", i % 3 == 0 ? "-" : "", whole, ends[i % G_N_ELEMENTS (ends)]);
      double value = g_ascii_strtod (number, NULL);

      g_string_append_printf (text, "%u,%s\n", 300 + i, number);
      g_array_append_val (expected, value);
    }
  check_readings (text, expected);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  for (guint i = 0; i < G_N_ELEMENTS (odds); i++)
    {
      g_autofree char *path = g_strdup_printf ("/spectrum/odd/%s", odds[i].name);

      g_strdelimit (path + strlen ("/spectrum/odd/"), "/", '.');
      g_test_add_data_func (path, &odds[i], test_odd);
    }
  for (guint i = 0; i < G_N_ELEMENTS (refused); i++)
    {
      g_autofree char *path = g_strdup_printf ("/spectrum/refused/%s", refused[i].name);

      g_test_add_data_func (path, &refused[i], test_refused);
    }
  g_test_add_func ("/spectrum/places", test_places);
  g_test_add_func ("/spectrum/numbers", test_numbers);
  g_test_add_func ("/spectrum/halves", test_halves);
  g_test_add_func ("/spectrum/mutilated", test_mutilated);
  return g_test_run ();
}
