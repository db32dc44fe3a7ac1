/* A film on paper, from its title to the signature. */
#include <glib/gi18n-lib.h>
#include <math.h>
#include <string.h>

#include "palette.h"
#include "report-private.h"

/* 95 mm. */
#define FIGURE_HEIGHT (95 / 25.4 * 72)
/* Space between the two columns. */
#define GUTTER 24.0
/* Of the labels in the title block. */
#define LABEL_WIDTH 38.0

static const BtColumnKind pair_kinds[] = { BT_COLUMN_LEFT, BT_COLUMN_LEFT };

char *
bt_report_film_name (BtFilm *film)
{
  const char *label = bt_film_get_label (film), *lot = bt_film_get_lot (film);
  const char *file = bt_spectrum_get_file (bt_film_get_spectrum (film));
  g_autofree char *name = label != NULL && label[0] != '\0' ? g_strdup (label)
                          : file != NULL                    ? g_filename_display_basename (file)
                                                            : g_strdup (_ ("Film without a name"));

  /* Translators: a film, and the lot it belongs to. */
  return lot != NULL && lot[0] != '\0' ? g_strdup_printf (_ ("%s, lot %s"), name, lot) : g_strdup (name);
}

static char *
thickness_text (BtFilm *film)
{
  const double thickness = bt_film_get_thickness_nm (film), u = bt_film_get_thickness_u_nm (film);
  g_autofree char *number = NULL;

  if (!(thickness > 0))
    return g_strdup (_ ("not known"));
  number = bt_format_uncertain (thickness, u);
  return g_strdup_printf (u > 0 ? _ ("%s nm") : _ ("%s nm, uncertainty not known"), number);
}

static char *
points_text (BtSpectrum *spectrum)
{
  gsize n;
  const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, &n);
  g_autofree char *range = bt_report_range_text ((BtRange){ energy_ev[0], energy_ev[n - 1] });

  return g_strdup_printf (ngettext ("%u point, %s", "%u points, %s", (gulong)n), (guint)n, range);
}

static void
take_if (BtGrid *grid, const char *label, const char *value)
{
  if (value != NULL && value[0] != '\0')
    bt_grid_take_pair (grid, label, g_strdup (value));
}

static char *
diameters_text (const BtTally *tally)
{
  g_autofree char *mean = bt_format_uncertain (tally->diameter.mean_nm, tally->diameter_u_nm);

  return g_strdup_printf (_ ("mean %s nm, spread %.2f nm"), mean, tally->diameter.spread_nm);
}

/* What was measured on the left, what it was made of and when this was written on the right. */
static BtBlock *
facts_new (PangoContext *context, BtFilm *film, const BtTally *tally, const char *date, double width)
{
  BtSpectrum *spectrum = bt_film_get_spectrum (film);
  const char *path = bt_spectrum_get_file (spectrum);
  const double left = floor (0.56 * (width - GUTTER));
  g_autofree char *file = path != NULL ? g_filename_display_basename (path) : NULL;
  BtGrid *measured = bt_grid_new (2, pair_kinds), *made = bt_grid_new (2, pair_kinds);
  BtFlow *lefts = bt_flow_new (), *rights = bt_flow_new ();

  bt_grid_set_first_width (measured, LABEL_WIDTH);
  take_if (measured, _ ("File"), file);
  bt_grid_take_pair (measured, _ ("Data"), points_text (spectrum));
  bt_grid_take_pair (measured, _ ("Report"), g_strdup_printf (_ ("%s, by Bandtally %s"), date, bt_version ()));
  bt_grid_take_pair (made, _ ("Thickness"), thickness_text (film));
  take_if (made, _ ("Substrate"), bt_film_get_substrate (film));
  if (!isnan (tally->diameter.mean_nm))
    bt_grid_take_pair (made, _ ("Diameters"), diameters_text (tally));
  bt_flow_add (lefts, bt_block_new_grid (context, measured, FALSE, FALSE, left), 0);
  bt_flow_add (rights, bt_block_new_grid (context, made, FALSE, FALSE, width - left - GUTTER), 0);
  return bt_block_new_pair (lefts, rights, left + GUTTER);
}

static void
add_title (BtFlow *flow, PangoContext *context, BtFilm *film, const BtTally *tally, const char *date, double width)
{
  BtSpectrum *spectrum = bt_film_get_spectrum (film);
  const char *hash = bt_spectrum_get_sha256 (spectrum);
  g_autofree char *name = bt_report_film_name (film);
  BtGrid *grid;

  bt_flow_add (flow, bt_block_new_text (context, BT_FACE_TITLE, name, width), 0);
  if (bt_spectrum_get_note (spectrum, "invented data") != NULL)
    bt_flow_add (
        flow, bt_block_new_text (context, BT_FACE_STRONG, _ ("Invented data: the file says that no film was measured."), width),
        2);
  bt_flow_add (flow, facts_new (context, film, tally, date, width), 5);
  if (hash == NULL)
    return;
  grid = bt_grid_new (2, pair_kinds);
  bt_grid_set_first_width (grid, LABEL_WIDTH);
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("SHA-256")));
  bt_grid_take (grid, BT_FACE_HASH, g_strdup (hash));
  bt_flow_add (flow, bt_block_new_grid (context, grid, FALSE, FALSE, width), 0);
}

/* The verdict's sign: told apart by its shape as well as by its colour. */
void
bt_report_draw_sign (cairo_t *cr, double width, double height, gpointer data)
{
  static const double colours[][3] = { [BT_VERDICT_NOT_JUDGED] = { 0.33, 0.33, 0.33 },
                                       [BT_VERDICT_ACCEPTED] = { 0.0, 0.42, 0.30 },
                                       [BT_VERDICT_REFUSED] = { 0.70, 0.20, 0.0 },
                                       [BT_VERDICT_UNDECIDED] = { 0.48, 0.37, 0.0 } };
  const BtVerdict verdict = (BtVerdict)GPOINTER_TO_INT (data);
  const double r = fmin (width, height) / 2 - 1;

  cairo_translate (cr, r + 1, height / 2);
  cairo_set_source_rgb (cr, colours[verdict][0], colours[verdict][1], colours[verdict][2]);
  cairo_set_line_width (cr, 1.8);
  cairo_set_line_cap (cr, CAIRO_LINE_CAP_ROUND);
  cairo_set_line_join (cr, CAIRO_LINE_JOIN_ROUND);
  switch (verdict)
    {
    case BT_VERDICT_ACCEPTED: /* a disc with a tick */
      cairo_arc (cr, 0, 0, r, 0, 2 * G_PI);
      cairo_fill (cr);
      cairo_set_source_rgb (cr, 1, 1, 1);
      cairo_move_to (cr, -0.45 * r, 0.05 * r);
      cairo_line_to (cr, -0.1 * r, 0.4 * r);
      cairo_line_to (cr, 0.48 * r, -0.35 * r);
      break;
    case BT_VERDICT_REFUSED: /* a square with a cross */
      cairo_rectangle (cr, -0.9 * r, -0.9 * r, 1.8 * r, 1.8 * r);
      cairo_fill (cr);
      cairo_set_source_rgb (cr, 1, 1, 1);
      cairo_move_to (cr, -0.4 * r, -0.4 * r);
      cairo_line_to (cr, 0.4 * r, 0.4 * r);
      cairo_move_to (cr, 0.4 * r, -0.4 * r);
      cairo_line_to (cr, -0.4 * r, 0.4 * r);
      break;
    case BT_VERDICT_UNDECIDED: /* a lozenge, half filled */
      cairo_move_to (cr, 0, -r);
      cairo_line_to (cr, -r, 0);
      cairo_line_to (cr, 0, r);
      cairo_close_path (cr);
      cairo_fill (cr);
      cairo_move_to (cr, 0, -r);
      cairo_line_to (cr, r, 0);
      cairo_line_to (cr, 0, r);
      cairo_close_path (cr);
      break;
    case BT_VERDICT_NOT_JUDGED: /* an empty ring with a dash */
    default:
      cairo_arc (cr, 0, 0, r - 0.9, 0, 2 * G_PI);
      cairo_move_to (cr, -0.4 * r, 0);
      cairo_line_to (cr, 0.4 * r, 0);
      break;
    }
  cairo_stroke (cr);
}

typedef struct
{
  BtTally *tally;
  PangoContext *context;
} Scale;

static void
scale_free (gpointer data)
{
  Scale *scale = data;

  bt_tally_unref (scale->tally);
  g_object_unref (scale->context);
  g_free (scale);
}

/* The fraction from 0 to 100 %. */
static void
draw_scale (cairo_t *cr, double width, double height, gpointer data)
{
  const Scale *scale = data;

  bt_fraction_bar_draw (cr, width, 12, scale->tally, BT_THEME_PRINT);
  for (int tick = 0; tick <= 100; tick += 10)
    {
      g_autofree char *text = tick == 100 ? g_strdup ("100 %") : g_strdup_printf ("%d", tick);
      g_autoptr (PangoLayout) label = bt_report_layout_new (scale->context, BT_FACE_NOTE, text, 0);
      const double x = width * tick / 100, wide = bt_layout_width_pt (label);

      bt_layout_show (cr, label, CLAMP (x - wide / 2, 0, width - wide), 13);
    }
}

static char *
standing_text (const BtTally *tally)
{
  GString *text = g_string_new (NULL);

  if (!isnan (tally->recipe->limit))
    g_string_append_printf (text, _ ("Limit: at least %.1f %%. "), 100 * tally->recipe->limit);
  if (tally->flags->len > 0)
    g_string_append_printf (text, ngettext ("%u flag, below.", "%u flags, below.", tally->flags->len), tally->flags->len);
  else
    g_string_append (text, _ ("No flags."));
  return g_string_free (text, FALSE);
}

/* A short remark in brackets stays on one line. */
static char *
tie_brackets (const char *text)
{
  GString *tied = g_string_new (NULL);

  for (const char *p = text, *close; *p != '\0'; p++)
    if (*p == '(' && (close = strchr (p, ')')) != NULL && close - p < 30)
      {
        for (; p < close; p++)
          if (*p == ' ')
            g_string_append (tied, "\u00a0");
          else
            g_string_append_c (tied, *p);
        g_string_append_c (tied, ')');
      }
    else
      g_string_append_c (tied, *p);
  return g_string_free (tied, FALSE);
}

static void
add_answer (BtFlow *flow, PangoContext *context, BtTally *tally, double width)
{
  const double left = floor (0.66 * width), right_x = left + GUTTER, right = width - right_x, sign = 20;
  g_autofree char *plain = bt_tally_answer (tally), *answer = tie_brackets (plain), *standing = standing_text (tally);
  BtFlow *answers = bt_flow_new (), *verdicts = bt_flow_new (), *signs = bt_flow_new (), *words = bt_flow_new ();
  Scale *scale;

  bt_flow_add (answers, bt_block_new_text (context, BT_FACE_ANSWER, answer, left), 0);
  bt_flow_add (signs, bt_block_new_drawing (sign, sign, bt_report_draw_sign, GINT_TO_POINTER (tally->verdict), NULL), 0);
  bt_flow_add (words, bt_block_new_text (context, BT_FACE_ANSWER, bt_verdict_title (tally->verdict), right - sign - 7), 0);
  bt_flow_add (verdicts, bt_block_new_pair (signs, words, sign + 7), 0);
  bt_flow_add (verdicts, bt_block_new_text (context, BT_FACE_NOTE, standing, right), 4);
  bt_flow_add (flow, bt_block_new_heading (context, _ ("Semiconducting fraction and verdict"), width), 10);
  bt_flow_add (flow, bt_block_new_pair (answers, verdicts, right_x), 4);
  if (tally->fraction.bound == BT_BOUND_NONE)
    return;
  scale = g_new (Scale, 1);
  *scale = (Scale){ bt_tally_ref (tally), g_object_ref (context) };
  bt_flow_add (flow, bt_block_new_drawing (width, 23, draw_scale, scale, scale_free), 6);
}

static void
draw_figure (cairo_t *cr, double width, double height, gpointer data)
{
  BtFigureView view;

  bt_figure_view_init (&view);
  view.theme = BT_THEME_PRINT;
  view.quantity = BT_QUANTITY_ALPHA;
  view.font_pt = 7;
  bt_figure_draw (data, cr, width, height, &view);
}

static void
add_figure (BtFlow *flow, PangoContext *context, BtFilm *film, BtTally *tally, double width)
{
  if (tally->curve == NULL || tally->curve->n < 2)
    {
      bt_flow_add (
          flow, bt_block_new_text (context, BT_FACE_BODY, _ ("There is no figure: the light path left no points."), width), 8);
      return;
    }
  bt_flow_add (flow,
               bt_block_new_drawing (width, FIGURE_HEIGHT, draw_figure, bt_figure_new (film, tally, NULL, NULL),
                                     (GDestroyNotify)bt_figure_free),
               6);
}

typedef void (*AddFunc) (BtFlow *flow, PangoContext *context, const BtTally *tally, double width);

/* Both beside each other, the left one with this share of the width; NULL where either would be too long, or have to break a
 * number. */
static BtBlock *
beside_new (PangoContext *context, const BtTally *tally, AddFunc left_func, AddFunc right_func, double share, double width,
            double height)
{
  const double left_width = floor (share * (width - GUTTER)), right_width = width - GUTTER - left_width;
  BtFlow *left = bt_flow_new (), *right = bt_flow_new ();

  left_func (left, context, tally, left_width);
  right_func (right, context, tally, right_width);
  if (bt_flow_least (left) <= left_width && bt_flow_least (right) <= right_width
      && fmax (bt_flow_height (left), bt_flow_height (right)) < 0.6 * height)
    return bt_block_new_pair (left, right, left_width + GUTTER);
  g_ptr_array_unref (left);
  g_ptr_array_unref (right);
  return NULL;
}

/* Beside each other at the first share of the width that does for both; else one below the other. */
static void
add_beside (BtFlow *flow, PangoContext *context, const BtTally *tally, AddFunc left_func, AddFunc right_func, double share,
            double width, double height)
{
  const double shares[] = { share, 0.54, 0.58, 0.62 };

  for (gsize i = 0; i < G_N_ELEMENTS (shares); i++)
    {
      BtBlock *block = beside_new (context, tally, left_func, right_func, shares[i], width, height);

      if (block != NULL)
        {
          bt_flow_add (flow, block, 11);
          return;
        }
    }
  left_func (flow, context, tally, width);
  right_func (flow, context, tally, width);
}

/* The blank by its file and that file's fingerprint. */
static char *
blank_text (BtFilm *film)
{
  BtSpectrum *blank = bt_film_get_blank (film);
  const char *path = blank != NULL ? bt_spectrum_get_file (blank) : NULL, *hash;
  g_autofree char *file = path != NULL ? g_filename_display_basename (path) : NULL;

  if (blank == NULL)
    return g_strdup (_ ("none"));
  hash = bt_spectrum_get_sha256 (blank);
  if (file == NULL)
    return g_strdup (_ ("without a file"));
  return hash != NULL ? g_strdup_printf (_ ("%s, SHA-256 %s"), file, hash) : g_strdup (file);
}

static void
add_sentences (BtFlow *flow, PangoContext *context, const BtTally *tally, BtFilm *film, double width)
{
  const char *notes = bt_film_get_notes (film);
  BtGrid *grid;

  if (tally->flags->len > 0)
    bt_flow_add (flow, bt_block_new_heading (context, _ ("Flags"), width), 11);
  for (guint i = 0; i < tally->flags->len; i++)
    {
      grid = bt_grid_new (2, pair_kinds);
      bt_grid_take (grid, BT_FACE_STRONG, g_strdup_printf ("%u", i + 1));
      bt_grid_take (grid, BT_FACE_BODY, g_strdup (((const BtFlag *)g_ptr_array_index (tally->flags, i))->text));
      bt_flow_add (flow, bt_block_new_grid (context, grid, FALSE, FALSE, width), i == 0 ? 4 : 0);
    }
  if (notes != NULL && notes[0] != '\0')
    {
      bt_flow_add (flow, bt_block_new_heading (context, _ ("Notes"), width), 11);
      bt_flow_add (flow, bt_block_new_text (context, BT_FACE_BODY, notes, width), 4);
    }
  bt_flow_add (flow, bt_block_new_heading (context, _ ("From the file to the film's absorbance"), width), 11);
  grid = bt_grid_new (2, pair_kinds);
  take_if (grid, _ ("Light path"), tally->curve != NULL ? tally->curve->path : NULL);
  take_if (grid, _ ("File taken for"), bt_spectrum_get_reading (bt_film_get_spectrum (film)));
  bt_grid_take_pair (grid, _ ("Blank"), blank_text (film));
  bt_flow_add (flow, bt_block_new_grid (context, grid, FALSE, FALSE, width), 4);
  bt_flow_add (flow, bt_block_new_heading (context, _ ("Decision rule"), width), 11);
  bt_flow_add (flow, bt_block_new_text (context, BT_FACE_BODY, tally->decision_rule, width), 4);
}

typedef struct
{
  PangoLayout *labels[3];
} Signature;

static void
signature_free (gpointer data)
{
  Signature *signature = data;

  for (int i = 0; i < 3; i++)
    g_object_unref (signature->labels[i]);
  g_free (signature);
}

/* Three lines to write on: wide, narrow, wide. */
static void
draw_signature (cairo_t *cr, double width, double height, gpointer data)
{
  static const double starts[] = { 0, 0.40, 0.62 }, ends[] = { 0.37, 0.59, 1 };
  const Signature *signature = data;

  cairo_set_line_width (cr, 0.5);
  for (int i = 0; i < 3; i++)
    {
      bt_shade_set (cr, BT_SHADE_INK);
      cairo_move_to (cr, width * starts[i], 34);
      cairo_line_to (cr, width * ends[i], 34);
      cairo_stroke (cr);
      bt_layout_show (cr, signature->labels[i], width * starts[i], 36);
    }
}

static BtBlock *
signature_new (PangoContext *context, double width)
{
  static const double widths[] = { 0.37, 0.19, 0.38 };
  const char *labels[] = { _ ("Name"), _ ("Date"), _ ("Signature") };
  Signature *signature = g_new (Signature, 1);
  double tallest = 0;

  for (int i = 0; i < 3; i++)
    {
      signature->labels[i] = bt_report_layout_new (context, BT_FACE_NOTE, labels[i], widths[i] * width);
      tallest = fmax (tallest, bt_layout_height_pt (signature->labels[i]));
    }
  return bt_block_new_drawing (width, 36 + tallest, draw_signature, signature, signature_free);
}

void
bt_report_add_close (BtFlow *flow, PangoContext *context, const char *const *cautions, double width)
{
  BtFlow *close = bt_flow_new ();

  bt_flow_add (close, bt_block_new_heading (context, _ ("Cautions"), width), 0);
  for (gsize i = 0; cautions[i] != NULL; i++)
    bt_flow_add (close, bt_block_new_text (context, BT_FACE_BODY, cautions[i], width), i == 0 ? 4 : 1);
  bt_flow_add (close, signature_new (context, width), 4);
  bt_flow_add (flow, bt_block_new_pair (close, bt_flow_new (), width), 14)->bottom = TRUE;
}

BtFlow *
bt_report_film_flow (PangoContext *context, BtFilm *film, BtTally *tally, const char *date, double width, double height)
{
  const char *const cautions[] = { _ ("Follow your laboratory's rules for nanomaterials, solvents and ultraviolet lamps."),
                                   _ ("A tally is a measurement aid, not a certificate."), NULL };
  BtFlow *flow = bt_flow_new ();

  add_title (flow, context, film, tally, date, width);
  add_answer (flow, context, tally, width);
  add_figure (flow, context, film, tally, width);
  bt_report_add_bands (flow, context, film, tally, width);
  add_beside (flow, context, tally, bt_report_add_budget, bt_report_add_tails, 0.56, width, height);
  add_sentences (flow, context, tally, film, width);
  add_beside (flow, context, tally, bt_report_add_readings, bt_report_add_recipe, 0.5, width, height);
  bt_report_add_close (flow, context, cautions, width);
  return flow;
}
