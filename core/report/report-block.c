/* Blocks of a report's page: text, headings, drawings, two columns. */
#include "report-private.h"

#include <math.h>

#include "palette.h"

static const double greys[] = { [BT_SHADE_INK] = 0.0, [BT_SHADE_GREY] = 0.33, [BT_SHADE_HAIR] = 0.72 };

/* Sizes in pt; letter spacing in pt. */
static const struct
{
  const char *family;
  double size;
  PangoWeight weight;
  double spacing;
  BtShade shade;
} faces[BT_N_FACES] = {
  [BT_FACE_BODY] = { "Sans", 7.5, PANGO_WEIGHT_NORMAL, 0, BT_SHADE_INK },
  [BT_FACE_STRONG] = { "Sans", 7.5, PANGO_WEIGHT_BOLD, 0, BT_SHADE_INK },
  [BT_FACE_NOTE] = { "Sans", 6.5, PANGO_WEIGHT_NORMAL, 0, BT_SHADE_GREY },
  [BT_FACE_HEADING] = { "Sans", 6.5, PANGO_WEIGHT_BOLD, 0.7, BT_SHADE_GREY },
  [BT_FACE_TITLE] = { "Sans", 17, PANGO_WEIGHT_BOLD, 0, BT_SHADE_INK },
  [BT_FACE_ANSWER] = { "Sans", 14, PANGO_WEIGHT_BOLD, 0, BT_SHADE_INK },
  [BT_FACE_HASH] = { "Monospace", 7, PANGO_WEIGHT_NORMAL, 0, BT_SHADE_INK },
};

void
bt_shade_set (cairo_t *cr, BtShade shade)
{
  cairo_set_source_rgb (cr, greys[shade], greys[shade], greys[shade]);
}

PangoContext *
bt_report_context_new (void)
{
  PangoContext *context = pango_font_map_create_context (pango_cairo_font_map_get_default ());
  cairo_font_options_t *options = cairo_font_options_create ();

  /* Neither the screen's resolution nor its hinting may move a word: preview and paper are the same pages. */
  cairo_font_options_set_hint_style (options, CAIRO_HINT_STYLE_NONE);
  cairo_font_options_set_hint_metrics (options, CAIRO_HINT_METRICS_OFF);
  cairo_font_options_set_antialias (options, CAIRO_ANTIALIAS_GRAY);
  pango_cairo_context_set_font_options (context, options);
  cairo_font_options_destroy (options);
  pango_cairo_context_set_resolution (context, 72);
  pango_context_set_round_glyph_positions (context, FALSE);
  return context;
}

/* (transfer full): valid text in which no line ends between a number and its unit. */
static char *
tied (const char *text)
{
  static GRegex *regex;
  g_autofree char *valid = g_utf8_make_valid (text != NULL ? text : "", -1);

  if (g_once_init_enter (&regex))
    g_once_init_leave (&regex, g_regex_new ("(?<=[0-9)]) (?=(%|nm|eV|1/cm)(?![A-Za-z0-9]))", G_REGEX_OPTIMIZE, 0, NULL));
  return g_regex_replace_literal (regex, valid, -1, 0, "\u00a0", 0, NULL);
}

PangoLayout *
bt_report_layout_new (PangoContext *context, BtFace face, const char *text, double width_pt)
{
  PangoLayout *layout = pango_layout_new (context);
  PangoFontDescription *font = pango_font_description_new ();
  g_autofree char *valid = tied (text);

  pango_font_description_set_family_static (font, faces[face].family);
  pango_font_description_set_weight (font, faces[face].weight);
  pango_font_description_set_size (font, (int)lround (faces[face].size * PANGO_SCALE));
  pango_layout_set_font_description (layout, font);
  pango_font_description_free (font);
  if (faces[face].spacing > 0)
    {
      PangoAttrList *list = pango_attr_list_new ();

      pango_attr_list_insert (list, pango_attr_letter_spacing_new ((int)lround (faces[face].spacing * PANGO_SCALE)));
      pango_layout_set_attributes (layout, list);
      pango_attr_list_unref (list);
    }
  pango_layout_set_wrap (layout, PANGO_WRAP_WORD_CHAR);
  if (width_pt > 0)
    pango_layout_set_width (layout, (int)ceil (width_pt * PANGO_SCALE));
  pango_layout_set_line_spacing (layout, 1.12f);
  pango_layout_set_text (layout, valid, -1);
  g_object_set_data (G_OBJECT (layout), "shade", GINT_TO_POINTER (faces[face].shade));
  return layout;
}

double
bt_layout_width_pt (PangoLayout *layout)
{
  PangoRectangle logical;

  pango_layout_get_extents (layout, NULL, &logical);
  return (double)logical.width / PANGO_SCALE;
}

double
bt_layout_height_pt (PangoLayout *layout)
{
  PangoRectangle logical;

  pango_layout_get_extents (layout, NULL, &logical);
  return (double)logical.height / PANGO_SCALE;
}

void
bt_layout_show (cairo_t *cr, PangoLayout *layout, double x, double y)
{
  bt_shade_set (cr, (BtShade)GPOINTER_TO_INT (g_object_get_data (G_OBJECT (layout), "shade")));
  cairo_move_to (cr, x, y);
  pango_cairo_show_layout (cr, layout);
  /* No line of what is drawn next starts here. */
  cairo_new_path (cr);
}

void
bt_block_free (BtBlock *block)
{
  if (block != NULL)
    block->free (block);
}

double
bt_block_height (const BtBlock *block)
{
  return block->height (block, 0, block->n_items);
}

/* Text: an item a line. */
typedef struct
{
  BtBlock base;
  PangoLayout *layout;
  double top; /* of the text below the hairline of a heading */
  double width;
} TextBlock;

/* Top and bottom of a line in the layout. */
static void
line_range (PangoLayout *layout, guint line, double *top, double *bottom)
{
  PangoLayoutIter *iter = pango_layout_get_iter (layout);
  int y0, y1;

  for (guint i = 0; i < line && pango_layout_iter_next_line (iter); i++)
    ;
  pango_layout_iter_get_line_yrange (iter, &y0, &y1);
  *top = (double)y0 / PANGO_SCALE;
  *bottom = (double)y1 / PANGO_SCALE;
  pango_layout_iter_free (iter);
}

static double
text_height (const BtBlock *block, guint first, guint end)
{
  const TextBlock *self = (const TextBlock *)block;
  double top, bottom, unused;

  line_range (self->layout, first, &top, &unused);
  line_range (self->layout, end - 1, &unused, &bottom);
  return bottom - top + self->top;
}

static void
text_draw (const BtBlock *block, cairo_t *cr, guint first, guint end)
{
  const TextBlock *self = (const TextBlock *)block;
  double top, unused;

  if (self->top > 0)
    {
      bt_shade_set (cr, BT_SHADE_HAIR);
      cairo_set_line_width (cr, 0.5);
      cairo_move_to (cr, 0, 0.25);
      cairo_rel_line_to (cr, self->width, 0);
      cairo_stroke (cr);
    }
  if (first == 0 && end == block->n_items)
    {
      bt_layout_show (cr, self->layout, 0, self->top);
      return;
    }
  line_range (self->layout, first, &top, &unused);
  cairo_save (cr);
  cairo_rectangle (cr, -1, 0, self->width + 2, text_height (block, first, end));
  cairo_clip (cr);
  bt_layout_show (cr, self->layout, 0, self->top - top);
  cairo_restore (cr);
}

static void
text_free (BtBlock *block)
{
  g_object_unref (((TextBlock *)block)->layout);
  g_free (block);
}

BtBlock *
bt_block_new_text (PangoContext *context, BtFace face, const char *text, double width)
{
  TextBlock *self = g_new0 (TextBlock, 1);

  self->layout = bt_report_layout_new (context, face, text, width);
  self->width = width;
  self->base = (BtBlock){
    .n_items = (guint)pango_layout_get_line_count (self->layout), .height = text_height, .draw = text_draw, .free = text_free
  };
  return &self->base;
}

BtBlock *
bt_block_new_heading (PangoContext *context, const char *text, double width)
{
  g_autofree char *capitals = g_utf8_strup (text, -1);
  BtBlock *block = bt_block_new_text (context, BT_FACE_HEADING, capitals, width);

  ((TextBlock *)block)->top = 4;
  block->keep = TRUE;
  return block;
}

typedef struct
{
  BtBlock base;
  double width, height;
  BtDrawFunc draw;
  gpointer data;
  GDestroyNotify destroy;
} DrawingBlock;

static double
drawing_height (const BtBlock *block, guint first, guint end)
{
  return ((const DrawingBlock *)block)->height;
}

static void
drawing_draw (const BtBlock *block, cairo_t *cr, guint first, guint end)
{
  const DrawingBlock *self = (const DrawingBlock *)block;

  self->draw (cr, self->width, self->height, self->data);
}

static void
drawing_free (BtBlock *block)
{
  DrawingBlock *self = (DrawingBlock *)block;

  if (self->destroy != NULL)
    self->destroy (self->data);
  g_free (self);
}

BtBlock *
bt_block_new_drawing (double width, double height, BtDrawFunc draw, gpointer data, GDestroyNotify destroy)
{
  DrawingBlock *self = g_new0 (DrawingBlock, 1);

  *self = (DrawingBlock){
    { .n_items = 1, .height = drawing_height, .draw = drawing_draw, .free = drawing_free }, width, height, draw, data, destroy
  };
  return &self->base;
}

BtFlow *
bt_flow_new (void)
{
  return g_ptr_array_new_with_free_func ((GDestroyNotify)bt_block_free);
}

BtBlock *
bt_flow_add (BtFlow *flow, BtBlock *block, double above)
{
  block->above = above;
  g_ptr_array_add (flow, block);
  return block;
}

double
bt_flow_height (const BtFlow *flow)
{
  double height = 0;

  for (guint i = 0; i < flow->len; i++)
    {
      const BtBlock *block = g_ptr_array_index (flow, i);

      height += bt_block_height (block) + (i > 0 ? block->above : 0);
    }
  return height;
}

double
bt_flow_least (const BtFlow *flow)
{
  double least = 0;

  for (guint i = 0; i < flow->len; i++)
    least = fmax (least, ((const BtBlock *)g_ptr_array_index (flow, i))->least);
  return least;
}

typedef struct
{
  BtBlock base;
  BtFlow *left, *right;
  double right_x;
} PairBlock;

static double
pair_height (const BtBlock *block, guint first, guint end)
{
  const PairBlock *self = (const PairBlock *)block;

  return fmax (bt_flow_height (self->left), bt_flow_height (self->right));
}

static void
draw_flow (cairo_t *cr, const BtFlow *flow, double x)
{
  cairo_save (cr);
  cairo_translate (cr, x, 0);
  for (guint i = 0; i < flow->len; i++)
    {
      const BtBlock *block = g_ptr_array_index (flow, i);

      cairo_translate (cr, 0, i > 0 ? block->above : 0);
      cairo_save (cr);
      block->draw (block, cr, 0, block->n_items);
      cairo_restore (cr);
      cairo_translate (cr, 0, bt_block_height (block));
    }
  cairo_restore (cr);
}

static void
pair_draw (const BtBlock *block, cairo_t *cr, guint first, guint end)
{
  const PairBlock *self = (const PairBlock *)block;

  draw_flow (cr, self->left, 0);
  draw_flow (cr, self->right, self->right_x);
}

static void
pair_free (BtBlock *block)
{
  PairBlock *self = (PairBlock *)block;

  g_ptr_array_unref (self->left);
  g_ptr_array_unref (self->right);
  g_free (self);
}

BtBlock *
bt_block_new_pair (BtFlow *left, BtFlow *right, double right_x)
{
  PairBlock *self = g_new0 (PairBlock, 1);

  *self = (PairBlock){ { .n_items = 1, .height = pair_height, .draw = pair_draw, .free = pair_free }, left, right, right_x };
  return &self->base;
}
