/* Messy files: every row is a form in which laboratories keep spectra, with the exact points, units and flags expected of it. */
#include <bandtally/spectrum.h>

#include <math.h>
#include <string.h>

#define N_POINTS 60

/* The invented spectrum that all forms hold: falling towards long waves, with a bump. */
static double
wavelength_nm (guint i)
{
  return 900 + 5.0 * i;
}

static double
absorbance (guint i)
{
  return 0.9 - 0.01 * i + 0.15 * exp (-pow ((i - 30.0) / 6, 2));
}

typedef struct {
  const char *name;
  const char *head;         /* what stands above the table */
  const char *row;          /* X and Y stand for the numbers, I for the row's number, from 1 */
  const char *tail;
  const char *eol;          /* "\n" where NULL */
  const char *encoding;     /* UTF-8 where NULL; a leading '+' puts a byte order mark in front */
  char decimal;             /* '.' where 0 */
  gboolean backwards;
  BtXUnit x_unit;
  BtYUnit y_unit;
  const char *x_format, *y_format;
  const char *flags;        /* codes with blanks between, sorted; "" where NULL */
  const char *reading;      /* (nullable) part of what the file was taken for */
  const char *title;        /* (nullable) */
} Form;

#define NM .x_unit = BT_X_NM
#define UM .x_unit = BT_X_UM
#define CM .x_unit = BT_X_PER_CM
#define EV .x_unit = BT_X_EV
#define A .y_unit = BT_Y_ABSORBANCE
#define T .y_unit = BT_Y_TRANSMITTANCE
#define PT .y_unit = BT_Y_TRANSMITTANCE_PERCENT
#define ALPHA .y_unit = BT_Y_ALPHA_PER_CM

static const Form forms[] = {
  /* Separators and decimals */
  { "comma", "wavelength (nm),absorbance\n", "X,Y", NM, A, .reading = "separated by commas, decimal point" },
  { "semicolon", "wavelength (nm);absorbance\n", "X;Y", NM, A, .reading = "semicolons" },
  { "tab", "wavelength (nm)\tabsorbance\n", "X\tY", NM, A, .reading = "tabs" },
  { "bar", "wavelength (nm)|absorbance\n", "X|Y", NM, A, .reading = "bars" },
  { "one blank", "nm A\n", "X Y", NM, A, .reading = "blanks" },
  { "runs of blanks", "  nm        A\n", "   X      Y", NM, A },
  { "blanks behind", "nm  A\n", "X  Y   ", NM, A },
  { "tabs and blanks", "nm\tA\n", " X \t Y ", NM, A },
  { "comma and blank", "nm, A\n", "X, Y", NM, A, .reading = "commas" },
  { "decimal comma, semicolon", "nm;A\n", "X;Y", .decimal = ',', NM, A, .x_format = "%.1f", .reading = "decimal comma" },
  { "decimal comma, tab", "nm\tA\n", "X\tY", .decimal = ',', NM, A, .x_format = "%.1f" },
  { "decimal comma, blanks", "nm A\n", "X   Y", .decimal = ',', NM, A, .x_format = "%.1f" },
  { "decimal comma only in y", "nm;A\n", "X;Y", .decimal = ',', NM, A },
  { "decimal comma, blanks, whole x", "nm A\n", "X Y", .decimal = ',', NM, A },
  { "decimal comma in quotes between commas", "\"nm\",\"A\"\n", "\"X\",\"Y\"", .decimal = ',', NM, A, .x_format = "%.1f" },
  { "quoted", "\"wavelength, nm\",\"absorbance\"\n", "\"X\",\"Y\"", NM, A },
  { "delimiter at the end", "nm,A,\n", "X,Y,", NM, A },
  { "two delimiters at the end", "nm;A;;\n", "X;Y;;", NM, A },
  { "delimiter in front", ",nm,A\n", ",X,Y", NM, A, .reading = "columns 2 and 3 of 3" },
  /* Line ends and encodings */
  { "CR LF", "nm,A\r\n", "X,Y", .eol = "\r\n", NM, A },
  { "CR", "nm,A\r", "X,Y", .eol = "\r", NM, A },
  { "empty lines between", "nm,A\n\n", "X,Y", .eol = "\n\n", NM, A },
  { "no line end at the end", "nm,A\n", "X,Y", .tail = "\b", NM, A },
  { "UTF-8 with a mark", "nm,A\n", "X,Y", .encoding = "+UTF-8", NM, A },
  { "UTF-16 LE", "nm\tA\n", "X\tY", .encoding = "+UTF-16LE", NM, A, .reading = "UTF-16" },
  { "UTF-16 BE", "nm\tA\r\n", "X\tY", .eol = "\r\n", .encoding = "+UTF-16BE", NM, A, .reading = "UTF-16" },
  { "UTF-16 without a mark", "nm\tA\n", "X\tY", .encoding = "UTF-16LE", NM, A },
  { "Latin-1", "Wellenl\303\244nge (nm);Absorbance\n", "X;Y", .encoding = "ISO-8859-1", NM, A, .reading = "Latin-1" },
  { "Latin-1 micro", "\302\265m;A\n", "X;Y", .encoding = "ISO-8859-1", UM, A },
  { "end mark of old systems", "nm,A\n", "X,Y", .tail = "\032", NM, A },
  /* Preambles, footers, comments */
  { "no header", "", "X,Y", NM, A, .flags = "units-inferred", .reading = "x in nm (from the values), y is absorbance (from the values)" },
  { "comments", "# made up\n# film = F1\n# nm,A\n", "X,Y", NM, A },
  { "comments with %", "% made up\n% wavelength_nm absorbance\n", "X Y", NM, A },
  { "keys and values", "Operator;nobody\nPoints;60\nRange;900;1195\nnm;A\n", "X;Y", NM, A },
  { "preamble of numbers", "60 1\n900 1195\nnm A\n", "X Y", NM, A },
  { "padded preamble of a spreadsheet", "Report,,\nOperator,nobody,\n,,\nWavelength (nm),Absorbance,\n", "X,Y,", NM, A },
  { "footer", "nm,A\n", "X,Y", .tail = "\nend of data\nchecksum 1234 5678\n", NM, A },
  { "footer of keys", "nm,A\n", "X,Y", .tail = "slit: 2 nm\nfilm: F2\n", NM, A },
  { "quantity and unit on two lines", "Wavelength,Absorbance\nnm,\n", "X,Y", NM, A },
  { "sample, quantity and unit on three lines", ",Film 7\nWavelength,Absorbance\nnm,A\n", "X,Y", NM, A, .title = "Film 7" },
  { "header of names", "Wavelength (nm),Film A3\n", "X,Y", NM, A, .flags = "units-inferred", .title = "Film A3" },
  { "header with its own separator", "wavelength (nm), absorbance\n", "X Y", NM, A },
  { "header in a preamble's keys", "x unit: nm\ny unit: absorbance\n\n", "X Y", NM, A },
  { "rows counted", "No;nm;A\n", "I;X;Y", NM, A, .reading = "columns 2 and 3 of 3" },
  { "rows counted, no header", "", "I X Y", NM, A, .flags = "units-inferred" },
  { "two x columns", "wavelength_nm,energy_ev,absorbance\n", "X,1.5,Y", NM, A, .reading = "columns 1 and 3" },
  { "y before x", "A,nm\n", "Y,X", NM, A, .reading = "columns 2 and 1" },
  { "columns that are no readings", "wavelength_nm,n,k,absorbance\n", "X,1.5,0.3,Y", NM, A, .reading = "Left out: column 2 \"n\", 3 \"k\"" },
  { "reflectance beside it", "nm,%R,A\n", "X,12.5,Y", NM, A, .reading = "Left out: column 2 \"%R\"" },
  /* Units and quantities */
  { "wavelength without a unit", "Wavelength,Absorbance\n", "X,Y", NM, A, .flags = "units-inferred" },
  { "um", "Wavelength (um),Abs\n", "X,Y", UM, A, .x_format = "%.4f" },
  { "Greek mu", "\316\273 (\316\274m),Abs.\n", "X,Y", UM, A, .x_format = "%.4f" },
  { "microns", "microns\tOD\n", "X\tY", UM, A, .x_format = "%.4f" },
  { "wavelength without a unit, in um", "Wavelength,Absorbance\n", "X,Y", UM, A, .x_format = "%.4f", .flags = "units-inferred" },
  { "cm-1", "Wavenumber (cm-1),Absorbance\n", "X,Y", CM, A, .x_format = "%.3f" },
  { "1/cm", "1/cm A\n", "X Y", CM, A, .x_format = "%.3f" },
  { "cm^-1 backwards", "cm^-1;A\n", "X;Y", .backwards = TRUE, CM, A, .x_format = "%.3f" },
  { "superscript -1", "Wavenumber / cm\342\201\273\302\271;Absorbance\n", "X;Y", CM, A, .x_format = "%.3f" },
  { "cm-1 from the values", "", "X Y", CM, A, .x_format = "%.3f", .flags = "units-inferred" },
  { "eV", "Energy (eV),Absorbance (a.u.)\n", "X,Y", EV, A, .x_format = "%.6f" },
  { "photon energy", "photon energy\tabsorbance\n", "X\tY", EV, A, .x_format = "%.6f" },
  { "eV from the values", "", "X Y", EV, A, .x_format = "%.6f", .flags = "units-inferred" },
  { "T from 0 to 1", "nm,T\n", "X,Y", NM, T },
  { "transmittance", "nm;Transmittance\n", "X;Y", NM, T },
  { "%T", "nm,%T\n", "X,Y", NM, PT },
  { "T (%)", "nm,T (%)\n", "X,Y", NM, PT },
  { "% Transmission", "Wavelength nm., % Transmission\n", "X,Y", NM, PT },
  { "T over per cent", "nm,T\n", "X,Y", NM, PT },
  { "per cent signs", "nm,T\n", "X,Y%", NM, PT },
  { "per cent from the values", "nm,film\n", "X,Y", NM, PT, .flags = "units-inferred", .title = "film" },
  { "T from the values", "", "X,Y", NM, T, .flags = "units-inferred" },
  { "alpha", "nm,alpha (1/cm)\n", "X,Y", NM, ALPHA, .y_format = "%.1f" },
  { "alpha in Greek", "nm,\316\261 / cm\342\201\273\302\271\n", "X,Y", NM, ALPHA, .y_format = "%.1f" },
  { "absorption coefficient", "wavelength_nm,absorption coefficient\n", "X,Y", NM, ALPHA, .y_format = "%.6e" },
  { "alpha from the values", "", "X\tY", NM, ALPHA, .y_format = "%.1f", .flags = "units-inferred" },
  { "log (1/T)", "nm;log(1/T)\n", "X;Y", NM, A },
  /* Numbers */
  { "exponents", "nm,A\n", "X,Y", NM, A, .x_format = "%.3e", .y_format = "%.5E" },
  { "many digits", "nm,A\n", "X,Y", NM, A, .x_format = "%.17f", .y_format = "%.20f" },
  { "plus signs", "nm,A\n", "+X,+Y", NM, A },
  { "backwards", "nm,A\n", "X,Y", .backwards = TRUE, NM, A },
};

#undef NM
#undef UM
#undef CM
#undef EV
#undef A
#undef T
#undef PT
#undef ALPHA

static double
y_of (guint i, BtYUnit unit)
{
  switch (unit)
    {
    case BT_Y_TRANSMITTANCE: return pow (10, -absorbance (i));
    case BT_Y_TRANSMITTANCE_PERCENT: return 100 * pow (10, -absorbance (i));
    case BT_Y_ALPHA_PER_CM: return 2e5 * absorbance (i);
    case BT_Y_ABSORBANCE:
    case BT_Y_REFLECTANCE:
    case BT_Y_REFLECTANCE_PERCENT:
    default: return absorbance (i);
    }
}

static void
format_numbers (const Form *form, guint i, char *x, char *y)
{
  const guint k = form->backwards ? N_POINTS - 1 - i : i;

  g_ascii_formatd (x, G_ASCII_DTOSTR_BUF_SIZE, form->x_format != NULL ? form->x_format : "%.5g",
                   bt_x_from_energy_ev (bt_ev_from_nm (wavelength_nm (k)), form->x_unit));
  g_ascii_formatd (y, G_ASCII_DTOSTR_BUF_SIZE, form->y_format != NULL ? form->y_format : "%.5f", y_of (k, form->y_unit));
}

static GBytes *
make_file (const Form *form)
{
  GString *text = g_string_new (form->head);
  const char *encoding = form->encoding != NULL ? form->encoding : "UTF-8";
  const char *eol = form->eol != NULL ? form->eol : "\n";
  char *bytes;
  gsize size;

  if (*encoding == '+')
    {
      g_string_prepend (text, "\357\273\277");
      encoding++;
    }
  for (guint i = 0; i < N_POINTS; i++)
    {
      char x[G_ASCII_DTOSTR_BUF_SIZE], y[G_ASCII_DTOSTR_BUF_SIZE];

      format_numbers (form, i, x, y);
      if (form->decimal != 0)
        {
          g_strdelimit (x, ".", form->decimal);
          g_strdelimit (y, ".", form->decimal);
        }
      for (const char *c = form->row; *c != '\0'; c++)
        if (*c == 'X')
          g_string_append (text, x);
        else if (*c == 'Y')
          g_string_append (text, y);
        else if (*c == 'I')
          g_string_append_printf (text, "%u", i + 1);
        else
          g_string_append_c (text, *c);
      g_string_append (text, eol);
    }
  if (form->tail != NULL && *form->tail == '\b')
    g_string_truncate (text, text->len - strlen (eol));
  else if (form->tail != NULL)
    g_string_append (text, form->tail);
  bytes = g_convert (text->str, (gssize) text->len, encoding, "UTF-8", NULL, &size, NULL);
  g_assert_nonnull (bytes);
  g_string_free (text, TRUE);
  return g_bytes_new_take (bytes, size);
}

static int
compare_codes (const void *a, const void *b)
{
  return strcmp (*(const char *const *) a, *(const char *const *) b);
}

static char *
flag_codes (BtSpectrum *spectrum)
{
  const GPtrArray *flags = bt_spectrum_get_flags (spectrum);
  g_autoptr (GPtrArray) codes = g_ptr_array_new ();

  for (guint i = 0; i < flags->len; i++)
    {
      const BtFlag *flag = g_ptr_array_index (flags, i);

      g_assert_true (g_str_has_suffix (flag->text, "."));
      g_ptr_array_add (codes, flag->code);
    }
  g_ptr_array_sort (codes, compare_codes);
  g_ptr_array_add (codes, NULL);
  return g_strjoinv (" ", (char **) codes->pdata);
}

static BtSpectrum *
only_spectrum (GBytes *bytes, const char *name)
{
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, name, NULL, &error);

  g_assert_no_error (error);
  if (spectra == NULL)
    return NULL;
  g_assert_cmpuint (spectra->len, ==, 1);
  return g_object_ref (g_ptr_array_index (spectra, 0));
}

static void
test_form (gconstpointer data)
{
  const Form *form = data;
  g_autoptr (GBytes) bytes = make_file (form);
  g_autoptr (BtSpectrum) spectrum = only_spectrum (bytes, form->name);
  g_autofree char *codes = NULL, *sha256 = g_compute_checksum_for_bytes (G_CHECKSUM_SHA256, bytes);
  gsize n, n_used;
  const double *x, *y, *energy_ev, *used;

  if (spectrum == NULL)
    return;
  codes = flag_codes (spectrum);
  x = bt_spectrum_get_raw_x (spectrum, &n);
  y = bt_spectrum_get_raw_y (spectrum, NULL);
  energy_ev = bt_spectrum_get_energy_ev (spectrum, &n_used);
  used = bt_spectrum_get_absorbance (spectrum, NULL);
  g_test_message ("%s", bt_spectrum_get_reading (spectrum));
  g_assert_cmpuint (n, ==, N_POINTS);
  g_assert_cmpuint (n_used, ==, N_POINTS);
  for (guint i = 0; i < n; i++)
    {
      char x_text[G_ASCII_DTOSTR_BUF_SIZE], y_text[G_ASCII_DTOSTR_BUF_SIZE];

      format_numbers (form, i, x_text, y_text);
      g_assert_cmpfloat (x[i], ==, g_ascii_strtod (x_text, NULL));
      g_assert_cmpfloat (y[i], ==, g_ascii_strtod (y_text, NULL));
    }
  g_assert_cmpint (bt_spectrum_get_x_unit (spectrum), ==, form->x_unit);
  g_assert_cmpint (bt_spectrum_get_y_unit (spectrum), ==, form->y_unit);
  g_assert_cmpstr (codes, ==, form->flags != NULL ? form->flags : "");
  g_assert_cmpstr (bt_spectrum_get_title (spectrum), ==, form->title != NULL ? form->title : "");
  if (form->reading != NULL && strstr (bt_spectrum_get_reading (spectrum), form->reading) == NULL)
    {
      g_test_message ("it does not say \"%s\"", form->reading);
      g_test_fail ();
    }
  g_assert_cmpstr (bt_spectrum_get_sha256 (spectrum), ==, sha256);
  /* On the core's axes: energies ascend, absorbance is decadic; five digits were written. */
  for (guint i = 0; i < n_used; i++)
    {
      const guint k = N_POINTS - 1 - i;
      const double a = form->y_unit == BT_Y_ALPHA_PER_CM ? 2e5 * absorbance (k) / BT_LN10 : absorbance (k);

      g_assert_cmpfloat_with_epsilon (energy_ev[i], bt_ev_from_nm (wavelength_nm (k)), 1e-4 * energy_ev[i]);
      g_assert_cmpfloat_with_epsilon (used[i], a, 1e-4 * a);
    }
}

/* What the user states comes before what the file says. */
static void
test_stated_units (void)
{
  static const Form form = { "stated", "nm,A\n", "X,Y", .x_unit = BT_X_UM, .y_unit = BT_Y_TRANSMITTANCE, .x_format = "%.4f" };
  const BtReadOptions options = { BT_X_UM, BT_Y_TRANSMITTANCE };
  g_autoptr (GBytes) bytes = make_file (&form);
  g_autoptr (GError) error = NULL;
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, "stated.csv", &options, &error);

  g_assert_no_error (error);
  g_assert_cmpint (bt_spectrum_get_x_unit (g_ptr_array_index (spectra, 0)), ==, BT_X_UM);
  g_assert_cmpint (bt_spectrum_get_y_unit (g_ptr_array_index (spectra, 0)), ==, BT_Y_TRANSMITTANCE);
  g_assert_nonnull (strstr (bt_spectrum_get_reading (g_ptr_array_index (spectra, 0)), "as you said"));
}

/* Statements in preamble and footer. */
static void
test_notes (void)
{
  g_autoptr (GBytes) bytes = NULL;
  g_autoptr (BtSpectrum) spectrum = NULL;
  static const Form form = { "notes", "# Film = F 12\n# thickness_nm = 55\nLot: L 3\nSubstrate;fused silica\n\nnm;A\n", "X;Y",
                             .tail = "Thickness u nm = 3\n" };

  bytes = make_file (&form);
  spectrum = only_spectrum (bytes, "notes.csv");
  g_assert_cmpstr (bt_spectrum_get_note (spectrum, "film"), ==, "F 12");
  g_assert_cmpstr (bt_spectrum_get_note (spectrum, "Thickness nm"), ==, "55");
  g_assert_cmpstr (bt_spectrum_get_note (spectrum, "THICKNESS_U_NM"), ==, "3");
  g_assert_cmpstr (bt_spectrum_get_note (spectrum, "lot"), ==, "L 3");
  g_assert_cmpstr (bt_spectrum_get_note (spectrum, "substrate"), ==, "fused silica");
  g_assert_null (bt_spectrum_get_note (spectrum, "blank"));
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  for (guint i = 0; i < G_N_ELEMENTS (forms); i++)
    {
      g_autofree char *path = g_strdup_printf ("/spectrum/form/%s", forms[i].name);

      for (char *c = path + strlen ("/spectrum/form/"); *c != '\0'; c++)
        if (*c == '/' || *c == '%')
          *c = '.';
      g_test_add_data_func (path, &forms[i], test_form);
    }
  g_test_add_func ("/spectrum/stated-units", test_stated_units);
  g_test_add_func ("/spectrum/notes", test_notes);
  return g_test_run ();
}
