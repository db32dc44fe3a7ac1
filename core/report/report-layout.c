/* The flow of blocks onto pages. */
#include "report-private.h"

#include <math.h>

/* A block, or some of its items, at a place on a page. */
typedef struct
{
  const BtBlock *block;
  double y;
  guint first, end;
} Placed;

struct _BtPages
{
  double height;
  GPtrArray *pages; /* (element-type GArray of Placed) */
  double y;         /* where the next block goes */
};

/* A hair's breadth that rounding may cost. */
#define SLACK 0.01

static GArray *
last_page (BtPages *pages)
{
  return g_ptr_array_index (pages->pages, pages->pages->len - 1);
}

static void
turn (BtPages *pages)
{
  g_ptr_array_add (pages->pages, g_array_new (FALSE, FALSE, sizeof (Placed)));
  pages->y = 0;
}

static void
place (BtPages *pages, const BtBlock *block, double y, guint first, guint end)
{
  Placed placed = { block, y, first, end };

  g_array_append_val (last_page (pages), placed);
  pages->y = y + block->height (block, first, end);
}

/* Items of @block from @first on that fit into @room. */
static guint
fitting (const BtBlock *block, guint first, double room)
{
  guint end = first;

  while (end < block->n_items && block->height (block, first, end + 1) <= room + SLACK)
    end++;
  return end;
}

/* Height that @block needs so that it may start on a page: with what it must not be parted from, and no line alone. */
static double
least_height (const BtFlow *flow, guint index)
{
  const BtBlock *block = g_ptr_array_index (flow, index);

  if (block->keep && index + 1 < flow->len)
    return bt_block_height (block) + ((const BtBlock *)g_ptr_array_index (flow, index + 1))->above
           + least_height (flow, index + 1);
  /* Few lines stay together; of many, two at least stand on either side. */
  return block->height (block, 0, block->n_items <= 3 ? block->n_items : 2);
}

static void
add_block (BtPages *pages, const BtFlow *flow, guint index)
{
  const BtBlock *block = g_ptr_array_index (flow, index);
  gboolean top = last_page (pages)->len == 0;
  double y = pages->y + (top ? 0 : block->above);

  if (!top && y + least_height (flow, index) > pages->height + SLACK)
    {
      turn (pages);
      y = 0;
    }
  if (block->bottom && block->height (block, 0, block->n_items) <= pages->height)
    {
      y = fmax (y, pages->height - bt_block_height (block));
      place (pages, block, y, 0, block->n_items);
      return;
    }
  for (guint first = 0; first < block->n_items;)
    {
      guint end = fitting (block, first, pages->height - y);

      if (end < block->n_items && end + 1 == block->n_items && end > first + 2)
        end--;
      /* What is higher than a whole page goes onto one all the same. */
      if (end == first && y == 0)
        end = first + 1;
      if (end > first)
        place (pages, block, y, first, end);
      first = end;
      if (first < block->n_items)
        turn (pages);
      y = 0;
    }
}

BtPages *
bt_pages_new (BtFlow *flow, double height)
{
  BtPages *pages = g_new0 (BtPages, 1);

  pages->height = height;
  pages->pages = g_ptr_array_new_with_free_func ((GDestroyNotify)g_array_unref);
  turn (pages);
  for (guint i = 0; i < flow->len; i++)
    add_block (pages, flow, i);
  return pages;
}

void
bt_pages_free (BtPages *pages)
{
  if (pages == NULL)
    return;
  g_ptr_array_unref (pages->pages);
  g_free (pages);
}

int
bt_pages_n (const BtPages *pages)
{
  return (int)pages->pages->len;
}

void
bt_pages_draw (const BtPages *pages, int page, cairo_t *cr)
{
  const GArray *placed = g_ptr_array_index (pages->pages, page);

  for (guint i = 0; i < placed->len; i++)
    {
      const Placed *at = &g_array_index (placed, Placed, i);

      cairo_save (cr);
      cairo_translate (cr, 0, at->y);
      at->block->draw (at->block, cr, at->first, at->end);
      cairo_restore (cr);
    }
}
