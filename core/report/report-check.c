/* The check of an instrument on one page: what was published, what was found, and whether it is within. */
#include <glib/gi18n-lib.h>
#include <math.h>

#include "report-check-private.h"

/* Space between the two columns, and of the labels in the title block. */
#define GUTTER 24.0
#define LABEL_WIDTH 38.0

static const BtColumnKind pair_kinds[] = { BT_COLUMN_LEFT, BT_COLUMN_LEFT };

char *
bt_report_check_name (const BtInstrumentCheck *check)
{
  return g_strdup (check->standard == BT_STANDARD_HOLMIUM ? _ ("Wavelength check with holmium oxide")
                                                          : _ ("Absorbance check with potassium dichromate"));
}

static char *
standard_text (const BtInstrumentCheck *check)
{
  if (check->standard == BT_STANDARD_HOLMIUM)
    return g_strdup (_ ("holmium oxide in perchloric acid"));
  return g_strdup_printf (_ ("potassium dichromate in 0.001 M perchloric acid, %g mg/L, light path 10 mm"), check->concentration_mg_l);
}

static void
add_title (BtFlow *flow, PangoContext *context, const BtInstrumentCheck *check, BtSpectrum *spectrum, const char *date, double width)
{
  const char *path = bt_spectrum_get_file (spectrum), *hash = bt_spectrum_get_sha256 (spectrum);
  g_autofree char *name = bt_report_check_name (check);
  BtGrid *grid = bt_grid_new (2, pair_kinds);
  gsize n;
  const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, &n);
  g_autofree char *range = bt_report_range_text ((BtRange){ energy_ev[0], energy_ev[n - 1] });

  bt_flow_add (flow, bt_block_new_text (context, BT_FACE_TITLE, name, width), 0);
  if (bt_spectrum_get_note (spectrum, "invented data") != NULL)
    bt_flow_add (flow, bt_block_new_text (context, BT_FACE_STRONG, _ ("Invented data: the file says that nothing was measured."), width), 2);
  bt_grid_set_first_width (grid, LABEL_WIDTH);
  bt_grid_take_pair (grid, _ ("Standard"), standard_text (check));
  if (path != NULL)
    bt_grid_take_pair (grid, _ ("File"), g_filename_display_basename (path));
  bt_grid_take_pair (grid, _ ("Data"), g_strdup_printf (ngettext ("%u point, %s", "%u points, %s", (gulong)n), (guint)n, range));
  bt_grid_take_pair (grid, _ ("Check"), g_strdup_printf (_ ("%s, by Bandtally %s"), date, bt_version ()));
  bt_flow_add (flow, bt_block_new_grid (context, grid, FALSE, FALSE, width), 5);
  if (hash == NULL)
    return;
  grid = bt_grid_new (2, pair_kinds);
  bt_grid_set_first_width (grid, LABEL_WIDTH);
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("SHA-256")));
  bt_grid_take (grid, BT_FACE_HASH, g_strdup (hash));
  bt_flow_add (flow, bt_block_new_grid (context, grid, FALSE, FALSE, width), 0);
}

static void
add_outcome (BtFlow *flow, PangoContext *context, const BtInstrumentCheck *check, double width)
{
  static const BtVerdict signs[] = { [BT_CHECK_PASSED] = BT_VERDICT_ACCEPTED, [BT_CHECK_FAILED] = BT_VERDICT_REFUSED,
                                     [BT_CHECK_NOT_JUDGED] = BT_VERDICT_NOT_JUDGED, [BT_CHECK_NOT_MEASURED] = BT_VERDICT_NOT_JUDGED };
  const double sign = 20;
  const gboolean holmium = check->standard == BT_STANDARD_HOLMIUM;
  g_autofree char *deviation = NULL;
  BtFlow *left = bt_flow_new (), *right = bt_flow_new ();

  deviation = g_strdup_printf (holmium ? _ ("Mean deviation %+.2f nm; standard uncertainty that a wavelength has from it: %.2f nm.")
                                       : _ ("Mean deviation %+.4f; standard uncertainty that an absorbance has from it: %.4f."),
                               check->deviation, check->deviation_u);
  bt_flow_add (left, bt_block_new_drawing (sign, sign, bt_report_draw_sign, GINT_TO_POINTER (signs[check->state]), NULL), 0);
  bt_flow_add (right, bt_block_new_text (context, BT_FACE_ANSWER, bt_instrument_check_outcome (check), width - sign - 7), 0);
  bt_flow_add (right, bt_block_new_text (context, BT_FACE_BODY, deviation, width - sign - 7), 3);
  bt_flow_add (flow, bt_block_new_heading (context, _ ("Outcome"), width), 12);
  bt_flow_add (flow, bt_block_new_pair (left, right, sign + 7), 5);
}

/* Told apart by its sign and its word. */
static char *
state_text (BtCheckState state)
{
  static const char *const signs[]
      = { [BT_CHECK_PASSED] = "✓", [BT_CHECK_FAILED] = "✗", [BT_CHECK_NOT_JUDGED] = "–", [BT_CHECK_NOT_MEASURED] = "–" };

  return g_strdup_printf ("%s %s", signs[state], bt_check_state_title (state));
}

static char *
number_text (double value, const char *format, int digits)
{
  return isnan (value) ? g_strdup ("–") : g_strdup_printf (format, digits, value);
}

/* A noise below what the digits show is not told as nothing. */
static char *
noise_text (const BtCheckLine *line, int digits)
{
  if (isnan (line->found))
    return g_strdup ("–");
  if (line->found_u < 0.5 * pow (10, -digits))
    return g_strdup_printf ("< %.*f", digits, pow (10, -digits));
  return g_strdup_printf ("%.*f", digits, line->found_u);
}

static void
take_line (BtGrid *grid, const BtCheckLine *line, gboolean holmium)
{
  const int digits = holmium ? 2 : 3;
  const BtFace face = line->state == BT_CHECK_FAILED ? BT_FACE_STRONG : BT_FACE_BODY;

  if (!holmium)
    bt_grid_take (grid, face, g_strdup_printf ("%.0f nm", line->wavelength_nm));
  bt_grid_take (grid, face, number_text (line->published, "%.*f", digits));
  bt_grid_take (grid, face, number_text (line->found, "%.*f", digits));
  bt_grid_take (grid, face, noise_text (line, digits + 1));
  bt_grid_take (grid, face, number_text (line->found - line->published, "%+.*f", digits));
  bt_grid_take (grid, face, isnan (line->low) ? g_strdup ("–") : g_strdup_printf (_ ("%.*f to %.*f"), digits, line->low, digits, line->high));
  bt_grid_take (grid, face, state_text (line->state));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (line->source));
}

static void
add_lines (BtFlow *flow, PangoContext *context, const BtInstrumentCheck *check, double width)
{
  static const BtColumnKind kinds[] = { BT_COLUMN_LEFT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT,
                                        BT_COLUMN_RIGHT, BT_COLUMN_RIGHT, BT_COLUMN_LEFT, BT_COLUMN_LEFT };
  const gboolean holmium = check->standard == BT_STANDARD_HOLMIUM;
  const guint first = holmium ? 1 : 0;
  const char *const heads[] = { _ ("Wavelength"), holmium ? _ ("Published, nm") : _ ("Published"), _ ("Found"), _ ("Uncertainty"),
                                _ ("Deviation"),  _ ("Tolerance"),    _ ("State"),  _ ("Source") };
  BtGrid *grid = bt_grid_new (8 - first, kinds + first);

  for (guint i = first; i < 8; i++)
    bt_grid_take (grid, BT_FACE_NOTE, g_strdup (heads[i]));
  for (guint i = 0; i < check->lines->len; i++)
    take_line (grid, &g_array_index (check->lines, BtCheckLine, i), holmium);
  bt_flow_add (flow, bt_block_new_heading (context, holmium ? _ ("Positions of bands") : _ ("Absorbances"), width), 12);
  bt_flow_add (flow, bt_block_new_grid (context, grid, TRUE, TRUE, width), 4);
  bt_flow_add (flow,
               bt_block_new_text (context, BT_FACE_NOTE,
                                  holmium ? _ ("Found: the top of a parabola through the points about the highest maximum near the published position. "
                                               "Uncertainty: standard uncertainty from the noise. Lines without a tolerance are shown and not judged.")
                                          : _ ("Found: the absorbance read at the wavelength. Uncertainty: standard uncertainty from the noise. "
                                               "Tolerance: 0.010, or a hundredth of it above absorbance 1 (common practice)."),
                                  width),
               4);
}

BtFlow *
bt_report_check_flow (PangoContext *context, const BtInstrumentCheck *check, BtSpectrum *spectrum, const char *date, double width)
{
  const char *const cautions[]
      = { check->standard == BT_STANDARD_HOLMIUM
              ? _ ("Perchloric acid is corrosive and strongly oxidizing: use the standard in its sealed cell, and do not open it.")
              : _ ("Potassium dichromate is toxic, carcinogenic and an oxidizer; perchloric acid is corrosive: use sealed cells, and collect the waste."),
          _ ("Do not look into the light of an ultraviolet lamp. Your laboratory's rules come before this page."),
          _ ("This check is a measurement aid; it does not replace the instrument's calibration."), NULL };
  BtFlow *flow = bt_flow_new ();

  add_title (flow, context, check, spectrum, date, width);
  add_outcome (flow, context, check, width);
  bt_flow_add (flow, bt_report_check_figure_new (context, check, spectrum, width), 10);
  add_lines (flow, context, check, width);
  bt_report_add_close (flow, context, cautions, width);
  return flow;
}
