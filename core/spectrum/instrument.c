/* Instrument check: published wavelengths and absorbances against what was read. */
#include <bandtally/instrument.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "bt-instrument-resource.h"
#include "reference-table.h"

/* How far from its published position a band is looked for, nm: twice the widest tolerance. */
#define SEARCH_NM 6.0
/* Half width of the parabola through a band's top, nm. Bands of the solution are a few nm wide. */
#define TOP_NM 1.6

typedef struct { BtStandard standard; double concentration, wavelength, absorbance, low, high; char *source; } Row;

static GArray *rows;

static double
number_or_nan (const char *text)
{
  return text[0] == '\0' ? NAN : g_ascii_strtod (text, NULL);
}

static void
read_row (char **fields)
{
  Row row;

  row.standard = g_str_equal (fields[0], "holmium") ? BT_STANDARD_HOLMIUM : BT_STANDARD_DICHROMATE;
  row.concentration = number_or_nan (fields[1]);
  row.wavelength = number_or_nan (fields[2]);
  row.absorbance = number_or_nan (fields[3]);
  row.low = number_or_nan (fields[4]);
  row.high = number_or_nan (fields[5]);
  row.source = g_strdup (fields[6]);
  g_array_append_val (rows, row);
}

static int
by_wavelength (gconstpointer a, gconstpointer b)
{
  const Row *left = a, *right = b;

  return left->wavelength < right->wavelength ? -1 : left->wavelength > right->wavelength;
}

static void
read_table (void)
{
  static gsize done = 0;

  if (g_once_init_enter (&done))
    {
      rows = g_array_new (FALSE, FALSE, sizeof (Row));
      bt_reference_table_read (bt_instrument_get_resource (), "/org/bandtally/instrument/instrument.csv", 7, read_row);
      g_array_sort (rows, by_wavelength);
      g_once_init_leave (&done, 1);
    }
}

const double *
bt_instrument_concentrations (void)
{
  static const double known[] = { 20, 40, 60, 80, 100, 0 };

  return known;
}

/* Vertex of the least-squares parabola through the points within TOP_NM of @near; NAN where it is no maximum. */
static double
top_of (BtSpectrum *spectrum, double near_nm, double *u)
{
  gsize n;
  const double *energy = bt_spectrum_get_energy_ev (spectrum, &n), *a = bt_spectrum_get_absorbance (spectrum, NULL);
  const double *noise = bt_spectrum_get_noise (spectrum, NULL);
  double s[5] = { 0 }, t[3] = { 0 }, sigma = 0, d, b, c, det;
  gsize count = 0;

  for (gsize i = 0; i < n; i++)
    {
      double x = bt_nm_from_ev (energy[i]) - near_nm, p = 1;

      if (fabs (x) > TOP_NM)
        continue;
      for (int k = 0; k < 5; k++, p *= x)
        {
          s[k] += p;
          if (k < 3)
            t[k] += p * a[i];
        }
      sigma += noise[i];
      count++;
    }
  if (count < 4)
    return NAN;
  sigma /= (double) count;
  det = s[0] * (s[2] * s[4] - s[3] * s[3]) - s[1] * (s[1] * s[4] - s[3] * s[2]) + s[2] * (s[1] * s[3] - s[2] * s[2]);
  b = (s[0] * (t[1] * s[4] - s[3] * t[2]) - t[0] * (s[1] * s[4] - s[3] * s[2]) + s[2] * (s[1] * t[2] - t[1] * s[2])) / det;
  c = (s[0] * (s[2] * t[2] - t[1] * s[3]) - s[1] * (s[1] * t[2] - t[1] * s[2]) + t[0] * (s[1] * s[3] - s[2] * s[2])) / det;
  if (!(c < 0))
    return NAN;
  d = -b / (2 * c);
  /* First order: u(vertex) = u(b) / (2 |c|), the slope's own uncertainty from the noise about the middle of the points. */
  *u = sigma / sqrt (s[2]) / (2 * fabs (c));
  return fabs (d) <= TOP_NM ? near_nm + d : NAN;
}

/* The highest local maximum within reach; NAN where there is none inside the range. */
static double
find_band (BtSpectrum *spectrum, double published_nm, double *u)
{
  gsize n;
  const double *energy = bt_spectrum_get_energy_ev (spectrum, &n), *a = bt_spectrum_get_absorbance (spectrum, NULL);
  double best = NAN, top = -INFINITY;

  for (gsize i = 1; i + 1 < n; i++)
    if (fabs (bt_nm_from_ev (energy[i]) - published_nm) < SEARCH_NM && a[i] > a[i - 1] && a[i] >= a[i + 1] && a[i] > top)
      {
        top = a[i];
        best = bt_nm_from_ev (energy[i]);
      }
  return isnan (best) ? NAN : top_of (spectrum, best, u);
}

static void
fill_line (BtCheckLine *line, BtSpectrum *spectrum, const Row *row)
{
  gsize n;
  const double *energy = bt_spectrum_get_energy_ev (spectrum, &n);

  *line = (BtCheckLine){ row->wavelength, row->standard == BT_STANDARD_HOLMIUM ? row->wavelength : row->absorbance, NAN, NAN, row->low, row->high,
                         BT_CHECK_NOT_MEASURED, row->source };
  if (row->wavelength < bt_nm_from_ev (energy[n - 1]) || row->wavelength > bt_nm_from_ev (energy[0]))
    return;
  if (row->standard == BT_STANDARD_HOLMIUM)
    line->found = find_band (spectrum, row->wavelength, &line->found_u);
  else
    {
      line->found = bt_spectrum_absorbance_at (spectrum, bt_ev_from_nm (row->wavelength));
      line->found_u = bt_spectrum_get_noise (spectrum, NULL)[n / 2];
    }
  if (isnan (line->low))
    line->state = isnan (line->found) ? BT_CHECK_NOT_MEASURED : BT_CHECK_NOT_JUDGED;
  else if (isnan (line->found))
    /* A band that has to be there and is not. */
    line->state = BT_CHECK_FAILED;
  else
    line->state = line->found >= line->low && line->found <= line->high ? BT_CHECK_PASSED : BT_CHECK_FAILED;
}

static void
sum_up (BtInstrumentCheck *check)
{
  double sum = 0, squares = 0;
  guint count = 0;

  check->state = BT_CHECK_NOT_JUDGED;
  for (guint i = 0; i < check->lines->len; i++)
    {
      const BtCheckLine *line = &g_array_index (check->lines, BtCheckLine, i);

      if (line->state == BT_CHECK_FAILED)
        check->state = BT_CHECK_FAILED;
      else if (line->state == BT_CHECK_PASSED && check->state != BT_CHECK_FAILED)
        check->state = BT_CHECK_PASSED;
      if (!isnan (line->found))
        {
          sum += line->found - line->published;
          squares += (line->found - line->published) * (line->found - line->published);
          count++;
        }
    }
  check->deviation = count > 0 ? sum / count : NAN;
  check->deviation_u = count > 0 ? sqrt (squares / count) : NAN;
}

BtInstrumentCheck *
bt_instrument_check (BtSpectrum *spectrum, BtStandard standard, double concentration_mg_l, GError **error)
{
  BtInstrumentCheck *check = g_new0 (BtInstrumentCheck, 1);
  guint measured = 0;

  read_table ();
  check->standard = standard;
  check->concentration_mg_l = standard == BT_STANDARD_DICHROMATE ? concentration_mg_l : NAN;
  check->lines = g_array_new (FALSE, TRUE, sizeof (BtCheckLine));
  for (guint i = 0; i < rows->len; i++)
    {
      const Row *row = &g_array_index (rows, Row, i);
      BtCheckLine line;

      if (row->standard != standard || (standard == BT_STANDARD_DICHROMATE && fabs (row->concentration - concentration_mg_l) > 1e-6))
        continue;
      fill_line (&line, spectrum, row);
      measured += line.state != BT_CHECK_NOT_MEASURED ? 1 : 0;
      g_array_append_val (check->lines, line);
    }
  if (check->lines->len == 0)
    g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES,
                 _ ("there are no published values for %g mg/L dichromate; known are 20, 40, 60, 80 and 100 mg/L."), concentration_mg_l);
  else if (measured == 0)
    g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES,
                 _ ("none of the standard's wavelengths was measured; scan it from about 230 to 650 nm."));
  if (check->lines->len == 0 || measured == 0)
    {
      bt_instrument_check_free (check);
      return NULL;
    }
  sum_up (check);
  return check;
}

BtInstrumentCheck *
bt_instrument_check_copy (const BtInstrumentCheck *check)
{
  BtInstrumentCheck *copy = g_new (BtInstrumentCheck, 1);

  *copy = *check;
  /* Sources belong to the table, which stays. */
  copy->lines = g_array_copy (check->lines);
  return copy;
}

void
bt_instrument_check_free (BtInstrumentCheck *check)
{
  if (check == NULL)
    return;
  g_array_unref (check->lines);
  g_free (check);
}

const char *
bt_check_state_title (BtCheckState state)
{
  switch (state)
    {
    case BT_CHECK_PASSED: return _ ("within");
    case BT_CHECK_FAILED: return _ ("OUTSIDE");
    case BT_CHECK_NOT_JUDGED: return _ ("not judged");
    case BT_CHECK_NOT_MEASURED:
    default: return _ ("not measured");
    }
}

const char *
bt_instrument_check_outcome (const BtInstrumentCheck *check)
{
  switch (check->state)
    {
    case BT_CHECK_PASSED: return _ ("Every judged value is within its published tolerance.");
    case BT_CHECK_FAILED: return _ ("At least one value is outside its tolerance: have the instrument seen to.");
    case BT_CHECK_NOT_JUDGED:
    case BT_CHECK_NOT_MEASURED:
    default: return _ ("Nothing could be judged in the range measured.");
    }
}

char *
bt_instrument_check_summary (const BtInstrumentCheck *check)
{
  const char *sentence = check->standard == BT_STANDARD_HOLMIUM ? _ ("Mean deviation %+.2f nm; standard uncertainty of a wavelength from it %.2f nm.")
                                                                : _ ("Mean deviation %+.4f; standard uncertainty of an absorbance from it %.4f.");
  g_autofree char *deviation = g_strdup_printf (sentence, check->deviation, check->deviation_u);

  return isnan (check->deviation) ? g_strdup (bt_instrument_check_outcome (check))
                                  : g_strdup_printf ("%s\n%s", bt_instrument_check_outcome (check), deviation);
}

const char *
bt_instrument_check_caution (void)
{
  return _ ("Potassium dichromate is toxic and carcinogenic, perchloric acid corrosive: use sealed cells and follow your laboratory's rules.");
}

static void
append_line (GString *text, const BtCheckLine *line, int digits)
{
  g_autofree char *found = isnan (line->found) ? g_strdup ("-") : g_strdup_printf ("%.*f", digits, line->found);
  g_autofree char *deviation = isnan (line->found) ? g_strdup ("-") : g_strdup_printf ("%+.*f", digits, line->found - line->published);
  g_autofree char *limits = isnan (line->low) ? g_strdup ("-") : g_strdup_printf ("%.*f .. %.*f", digits, line->low, digits, line->high);

  g_string_append_printf (text, "%9.2f  %9.*f  %9s  %9s  %18s  %-12s  %s\n", line->wavelength_nm, digits, line->published, found, deviation, limits,
                          bt_check_state_title (line->state), line->source);
}

char *
bt_instrument_check_to_text (const BtInstrumentCheck *check, BtSpectrum *spectrum, gint64 unix_s)
{
  GString *text = g_string_new (NULL);
  g_autoptr (GDateTime) date = g_date_time_new_from_unix_local (unix_s);
  g_autofree char *when = date != NULL ? g_date_time_format (date, "%Y-%m-%d %H:%M") : g_strdup ("");
  g_autofree char *summary = bt_instrument_check_summary (check);
  const gboolean holmium = check->standard == BT_STANDARD_HOLMIUM;

  g_string_append_printf (text, "%s\n", holmium ? _ ("Wavelength check with holmium oxide in perchloric acid") : _ ("Absorbance check with potassium dichromate"));
  g_string_append_printf (text, _ ("Date: %s\nFile: %s\nSHA-256: %s\n"), when, bt_spectrum_get_file (spectrum) != NULL ? bt_spectrum_get_file (spectrum) : "-",
                          bt_spectrum_get_sha256 (spectrum) != NULL ? bt_spectrum_get_sha256 (spectrum) : "-");
  if (!holmium)
    g_string_append_printf (text, _ ("Concentration: %g mg/L, 10 mm\n"), check->concentration_mg_l);
  g_string_append (text, "\n");
  g_string_append_printf (text, "%9s  %9s  %9s  %9s  %18s  %-12s  %s\n", _ ("nm"), _ ("published"), _ ("found"), _ ("deviation"), _ ("tolerance"), _ ("state"),
                          _ ("source"));
  for (guint i = 0; i < check->lines->len; i++)
    append_line (text, &g_array_index (check->lines, BtCheckLine, i), holmium ? 2 : 4);
  g_string_append_printf (text, "\n%s\n%s\n", summary, bt_instrument_check_caution ());
  return g_string_free (text, FALSE);
}
