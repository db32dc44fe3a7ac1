/* The bench's handles, and the edits made with them. */
#include <glib/gi18n.h>
#include <math.h>

#include "desk-bench-private.h"
#include "desk-field.h"
#include "desk-recipe.h"

/* Pixels from a handle's middle within which a press takes hold of it. */
#define REACH 11
/* Milliseconds after which a row of nudges becomes one command. */
#define NUDGES_REST_MS 600

#define CENTRE_STEP_EV 0.001
#define FWHM_STEP_EV 0.002
#define DIAMETER_STEP_NM 0.005
#define SPREAD_STEP_NM 0.005
/* Share of the height by which one key press moves a crown. */
#define HEIGHT_STEP 0.02
#define LEAST_FWHM_EV 0.005
#define LEAST_SPREAD_NM 0.01

static double
foot_of (BtFigure *figure, double energy_ev)
{
  double foot = bt_figure_tail_at (figure, energy_ev);
  return isnan (foot) ? 0 : foot;
}

double
desk_bench_hand_foot (DeskBench *self, double energy_ev)
{
  /* Beyond the fitted range there is no tail: its end stands for it. */
  BtTally *tally = desk_film_get_tally (self->film);
  double inside = tally ? CLAMP (energy_ev, tally->range.low_ev + 1e-6, tally->range.high_ev - 1e-6) : energy_ev;
  return foot_of (self->drag.figure, inside);
}

static double
value_at (const BtBand *band, double energy_ev)
{
  double value;
  bt_band_eval (band, &energy_ev, 1, &value);
  return value;
}

double
desk_band_peak (const BtBand *band)
{
  return value_at (band, band->centre_ev);
}

/* The height that puts a band's top there. */
static double
height_for_peak (const BtBand *band, double peak)
{
  BtBand unit = *band;
  unit.height = 1;
  return peak / desk_band_peak (&unit);
}

const BtBand *
desk_bench_band_of (DeskBench *self, DeskHandle *handle)
{
  if (!self->film || desk_handle_is_beam (handle))
    return NULL;
  return desk_tally_find_band (desk_film_get_tally (self->film), desk_handle_get_group (handle),
                               desk_handle_get_index (handle));
}

void
desk_bench_select_band (DeskBench *self, BtGroup group, guint index)
{
  BtTally *tally = self->film ? desk_film_get_tally (self->film) : NULL;
  int selected = -1;
  for (guint i = 0; tally && i < tally->bands->len; i++)
    {
      const BtBand *band = &g_array_index (tally->bands, BtBand, i);
      if (band->group == group && band->index == index)
        selected = (int) i;
    }
  if (selected == self->view.selected_band)
    return;
  self->view.selected_band = selected;
  desk_bench_view_changed (self);
}

static void on_nudge (DeskHandle *handle, int dx, int dy, DeskBench *self);
static void on_set_value (DeskHandle *handle, double value, DeskBench *self);

static gboolean
on_handle_focus (DeskHandle *handle, GdkEventFocus *event, DeskBench *self)
{
  if (event->in && !desk_handle_is_beam (handle))
    desk_bench_select_band (self, desk_handle_get_group (handle), desk_handle_get_index (handle));
  else if (!event->in)
    desk_bench_commit_nudges (self);
  return GDK_EVENT_PROPAGATE;
}

static DeskHandle *
take_handle (DeskBench *self, GPtrArray *old, DeskHandleKind kind, BtGroup group, guint index)
{
  DeskHandle *handle;
  for (guint i = 0; i < old->len; i++)
    if (desk_handle_is (old->pdata[i], kind, group, index))
      {
        handle = g_ptr_array_steal_index (old, i);
        g_ptr_array_add (self->handles, handle);
        return handle;
      }
  GtkWidget *widget = desk_handle_new (kind, group, index);
  gtk_overlay_add_overlay (GTK_OVERLAY (self->overlay), widget);
  gtk_overlay_set_overlay_pass_through (GTK_OVERLAY (self->overlay), widget, TRUE);
  /* Both flanks are one number: one of them in the focus chain is enough. */
  gtk_widget_set_can_focus (widget, kind != DESK_HANDLE_FLANK_LOW && kind != DESK_HANDLE_BEAM_LOW);
  g_signal_connect (widget, "nudge", G_CALLBACK (on_nudge), self);
  g_signal_connect (widget, "set-value", G_CALLBACK (on_set_value), self);
  g_signal_connect (widget, "focus-in-event", G_CALLBACK (on_handle_focus), self);
  g_signal_connect (widget, "focus-out-event", G_CALLBACK (on_handle_focus), self);
  g_ptr_array_add (self->handles, widget);
  return DESK_HANDLE (widget);
}

static void
place (DeskBench *self, DeskHandle *handle, BtPanel panel, double x, double y)
{
  gboolean inside = isfinite (x) && isfinite (y) && desk_bench_in_panel (self, panel, x, y);
  if (inside)
    desk_handle_set_place (handle, x, y);
  gtk_widget_set_visible (GTK_WIDGET (handle), inside);
}

static void
place_band (DeskBench *self, GPtrArray *old, const BtBand *band, gboolean lit)
{
  const BtRecipe *recipe = desk_film_get_recipe (self->film);
  const BtBandWindow *window = &self->plan.bands[band->group];
  static const DeskHandleKind flanks[] = { DESK_HANDLE_FLANK_LOW, DESK_HANDLE_FLANK_HIGH };
  double low_ev, high_ev;
  desk_bench_full_range (self, &low_ev, &high_ev);
  gboolean held_centre = bt_recipe_get_held (recipe, band->group, band->index, BT_BAND_CENTRE) != NULL;
  gboolean held_height = bt_recipe_get_held (recipe, band->group, band->index, BT_BAND_HEIGHT) != NULL;
  gboolean held_fwhm = bt_recipe_get_held (recipe, band->group, band->index, BT_BAND_FWHM) != NULL;

  DeskHandle *crown = take_handle (self, old, DESK_HANDLE_CROWN, band->group, band->index);
  desk_handle_set_value (crown, band->centre_ev, low_ev, high_ev, CENTRE_STEP_EV);
  desk_handle_set_held (crown, held_centre || held_height);
  desk_handle_set_shown (crown, TRUE);
  place (self, crown, BT_PANEL_SPECTRUM, bt_figure_x_from_ev (self->figure, band->centre_ev),
         bt_figure_y_from_absorbance (self->figure, foot_of (self->figure, band->centre_ev) + desk_band_peak (band)));
  for (guint i = 0; i < G_N_ELEMENTS (flanks); i++)
    {
      double energy = band->centre_ev + (i ? 0.5 : -0.5) * band->fwhm_ev;
      DeskHandle *flank = take_handle (self, old, flanks[i], band->group, band->index);
      desk_handle_set_value (flank, band->fwhm_ev, LEAST_FWHM_EV, MAX (window->fwhm_high_ev * 2, band->fwhm_ev * 2),
                             FWHM_STEP_EV);
      desk_handle_set_held (flank, held_fwhm);
      desk_handle_set_shown (flank, lit);
      place (self, flank, BT_PANEL_SPECTRUM, bt_figure_x_from_ev (self->figure, energy),
             bt_figure_y_from_absorbance (self->figure, foot_of (self->figure, energy) + value_at (band, energy)));
    }
}

static void
place_beam (DeskBench *self, GPtrArray *old)
{
  static const DeskHandleKind kinds[] = { DESK_HANDLE_BEAM_LOW, DESK_HANDLE_BEAM, DESK_HANDLE_BEAM_HIGH };
  const BtDiameterWindow *window = &self->plan.window;
  double px, py, width, height;
  gboolean held = desk_film_get_recipe (self->film)->window.mean_nm > 0;
  bt_figure_get_panel (self->figure, BT_PANEL_KATAURA, &px, &py, &width, &height);
  for (int i = 0; i < 3; i++)
    {
      DeskHandle *handle = take_handle (self, old, kinds[i], 0, 0);
      double diameter = window->mean_nm + (i - 1) * window->spread_nm;
      if (kinds[i] == DESK_HANDLE_BEAM)
        desk_handle_set_value (handle, window->mean_nm, 0.5, 3, DIAMETER_STEP_NM);
      else
        desk_handle_set_value (handle, window->spread_nm, LEAST_SPREAD_NM, 0.6, SPREAD_STEP_NM);
      desk_handle_set_held (handle, held);
      desk_handle_set_shown (handle, TRUE);
      /* Side by side, so that a narrow beam does not pile its handles up. */
      place (self, handle, BT_PANEL_KATAURA, px + width - (kinds[i] == DESK_HANDLE_BEAM ? 20 : 50),
             bt_figure_y_from_diameter (self->figure, diameter));
    }
}

void
desk_bench_sync_handles (DeskBench *self)
{
  BtTally *tally = self->film ? desk_film_get_tally (self->film) : NULL;
  g_autoptr (GPtrArray) old = self->handles;
  self->handles = g_ptr_array_new ();
  if (self->figure && gtk_widget_get_allocated_width (self->area) > 1)
    {
      for (guint i = 0; tally && i < tally->bands->len; i++)
        place_band (self, old, &g_array_index (tally->bands, BtBand, i), (int) i == self->view.selected_band);
      if (self->has_plan && self->view.show_tubes)
        place_beam (self, old);
    }
  for (guint i = 0; i < old->len; i++)
    {
      if (old->pdata[i] == self->drag.handle)
        desk_bench_cancel_edit (self);
      if (old->pdata[i] == self->nudged)
        desk_bench_commit_nudges (self);
      gtk_widget_destroy (old->pdata[i]);
    }
  gtk_widget_queue_resize_no_redraw (self->overlay);
}

DeskHandle *
desk_bench_handle_at (DeskBench *self, double x, double y)
{
  DeskHandle *nearest = NULL;
  double best = REACH;
  for (guint i = 0; i < self->handles->len; i++)
    {
      double hx, hy;
      DeskHandle *handle = self->handles->pdata[i];
      if (!gtk_widget_get_visible (GTK_WIDGET (handle)))
        continue;
      desk_handle_get_place (handle, &hx, &hy);
      double distance = hypot (x - hx, y - hy);
      /* A crown goes before the flanks of another band. */
      if (desk_handle_get_kind (handle) == DESK_HANDLE_CROWN)
        distance *= 0.7;
      if (distance < best)
        {
          best = distance;
          nearest = handle;
        }
    }
  return nearest;
}

const BtBand *
desk_bench_band_at (DeskBench *self, double x, double y)
{
  BtTally *tally = self->film ? desk_film_get_tally (self->film) : NULL;
  if (!tally || !self->figure || !desk_bench_in_panel (self, BT_PANEL_SPECTRUM, x, y))
    return NULL;
  double energy = bt_figure_ev_from_x (self->figure, x);
  const BtBand *highest = NULL;
  double best = 0;
  for (guint i = 0; i < tally->bands->len; i++)
    {
      const BtBand *band = &g_array_index (tally->bands, BtBand, i);
      double value = value_at (band, energy);
      if (value > best && value > 0.05 * band->height)
        {
          best = value;
          highest = band;
        }
    }
  return highest;
}

/* The recipe under the hand starts from the edition's. */
static BtRecipe *
own_recipe (DeskBench *self)
{
  BtRecipe *recipe = bt_recipe_copy (desk_edition_get_recipe (desk_film_get_edition (self->film)));
  return recipe;
}

static void
own_window (DeskBench *self, BtRecipe *recipe)
{
  if (!(recipe->window.mean_nm > 0))
    recipe->window = self->plan.window;
}

static void
hold (DeskBench *self, BtBandField field)
{
  const BtBand *band = &self->drag.band;
  double value = field == BT_BAND_CENTRE ? band->centre_ev : field == BT_BAND_FWHM ? band->fwhm_ev : band->height;
  bt_recipe_hold (self->drag.recipe, band->group, band->index, field, value);
}

/* The axes stand still while something is in the hand, whatever the refit would make of them. */
static void
hold_axes (DeskBench *self)
{
  BtFigureView shown;
  self->drag.view = self->view;
  bt_figure_get_shown (self->figure, &shown);
  self->view.low_ev = shown.low_ev;
  self->view.high_ev = shown.high_ev;
  self->view.low_value = shown.low_value;
  self->view.high_value = shown.high_value;
  self->view.low_nm = shown.low_nm;
  self->view.high_nm = shown.high_nm;
}

static void
free_axes (DeskBench *self)
{
  const BtFigureView *chosen = &self->drag.view;
  self->view.low_ev = chosen->low_ev;
  self->view.high_ev = chosen->high_ev;
  self->view.low_value = chosen->low_value;
  self->view.high_value = chosen->high_value;
  self->view.low_nm = chosen->low_nm;
  self->view.high_nm = chosen->high_nm;
}

void
desk_bench_begin_edit (DeskBench *self, DeskHandle *handle)
{
  const BtBand *band = desk_bench_band_of (self, handle);
  desk_bench_commit_nudges (self);
  g_clear_pointer (&self->drag.recipe, bt_recipe_free);
  self->drag.kind = DESK_DRAG_HANDLE;
  self->drag.handle = handle;
  self->drag.recipe = own_recipe (self);
  g_clear_pointer (&self->drag.figure, bt_figure_free);
  self->drag.figure = desk_bench_dup_figure (self);
  self->drag.moved = FALSE;
  hold_axes (self);
  if (band)
    {
      self->drag.band = *band;
      desk_bench_select_band (self, band->group, band->index);
    }
}

static double
least_height (const BtBand *band)
{
  return band->group == BT_M11 ? -INFINITY : 0;
}

static void
follow (DeskBench *self)
{
  desk_film_preview (self->film, self->drag.recipe);
  gtk_widget_queue_draw (self->area);
  desk_bench_update_legend (self);
}

void
desk_bench_move_to (DeskBench *self, double x, double y)
{
  BtBand *band = &self->drag.band;
  double energy = bt_figure_ev_from_x (self->figure, x);
  double diameter = bt_figure_diameter_from_y (self->figure, y);
  switch (desk_handle_get_kind (self->drag.handle))
    {
    case DESK_HANDLE_CROWN:
      band->centre_ev = energy;
      band->height
          = height_for_peak (band, bt_figure_absorbance_from_y (self->figure, y) - desk_bench_hand_foot (self, energy));
      band->height = MAX (band->height, least_height (band));
      hold (self, BT_BAND_CENTRE);
      hold (self, BT_BAND_HEIGHT);
      break;
    case DESK_HANDLE_FLANK_LOW:
    case DESK_HANDLE_FLANK_HIGH:
      band->fwhm_ev = MAX (2 * fabs (energy - band->centre_ev), LEAST_FWHM_EV);
      hold (self, BT_BAND_FWHM);
      break;
    case DESK_HANDLE_BEAM:
      own_window (self, self->drag.recipe);
      self->drag.recipe->window.mean_nm = CLAMP (diameter, 0.5, 3);
      break;
    case DESK_HANDLE_BEAM_LOW:
    case DESK_HANDLE_BEAM_HIGH:
      own_window (self, self->drag.recipe);
      self->drag.recipe->window.spread_nm = MAX (fabs (diameter - self->drag.recipe->window.mean_nm), LEAST_SPREAD_NM);
      break;
    }
  follow (self);
}

static char *
edit_name (DeskHandle *handle)
{
  const char *group = bt_group_name (desk_handle_get_group (handle));
  switch (desk_handle_get_kind (handle))
    {
    case DESK_HANDLE_CROWN:
      return g_strdup_printf (_("Move %s"), group);
    case DESK_HANDLE_FLANK_LOW:
    case DESK_HANDLE_FLANK_HIGH:
      return g_strdup_printf (_("Set width of %s"), group);
    case DESK_HANDLE_BEAM:
      return g_strdup (_("Set mean diameter"));
    case DESK_HANDLE_BEAM_LOW:
    case DESK_HANDLE_BEAM_HIGH:
      return g_strdup (_("Set diameter spread"));
    }
  return NULL;
}

static void
end_edit (DeskBench *self)
{
  free_axes (self);
  self->drag.kind = DESK_DRAG_NONE;
  self->drag.handle = NULL;
  g_clear_pointer (&self->drag.recipe, bt_recipe_free);
  g_clear_pointer (&self->drag.figure, bt_figure_free);
}

void
desk_bench_commit_edit (DeskBench *self)
{
  if (self->drag.kind != DESK_DRAG_HANDLE)
    return;
  g_autoptr (BtRecipe) recipe = g_steal_pointer (&self->drag.recipe);
  g_autofree char *name = edit_name (self->drag.handle);
  gboolean moved = self->drag.moved;
  end_edit (self);
  if (moved)
    desk_history_edit (self->history, self->film, name, NULL, recipe, FALSE);
}

void
desk_bench_cancel_edit (DeskBench *self)
{
  if (self->drag.kind != DESK_DRAG_HANDLE)
    return;
  g_clear_handle_id (&self->commit_timer, g_source_remove);
  self->nudged = NULL;
  end_edit (self);
  if (self->film)
    desk_film_preview (self->film, NULL);
}

void
desk_bench_commit_nudges (DeskBench *self)
{
  if (!self->nudged)
    return;
  g_clear_handle_id (&self->commit_timer, g_source_remove);
  self->nudged = NULL;
  desk_bench_commit_edit (self);
}

static gboolean
nudges_rest (gpointer data)
{
  DeskBench *self = data;
  self->commit_timer = 0;
  desk_bench_commit_nudges (self);
  return G_SOURCE_REMOVE;
}

static void
apply_nudge (DeskBench *self, DeskHandle *handle, int dx, int dy)
{
  BtBand *band = &self->drag.band;
  BtRecipe *recipe = self->drag.recipe;
  switch (desk_handle_get_kind (handle))
    {
    case DESK_HANDLE_CROWN:
      if (dx)
        {
          band->centre_ev += dx * CENTRE_STEP_EV;
          hold (self, BT_BAND_CENTRE);
        }
      if (dy)
        {
          double step = HEIGHT_STEP * MAX (fabs (band->height), 1e-4);
          band->height = MAX (band->height + dy * step, least_height (band));
          hold (self, BT_BAND_HEIGHT);
        }
      break;
    case DESK_HANDLE_FLANK_LOW:
    case DESK_HANDLE_FLANK_HIGH:
      band->fwhm_ev = MAX (band->fwhm_ev + (dx + dy) * FWHM_STEP_EV, LEAST_FWHM_EV);
      hold (self, BT_BAND_FWHM);
      break;
    case DESK_HANDLE_BEAM:
      own_window (self, recipe);
      recipe->window.mean_nm = CLAMP (recipe->window.mean_nm + (dx + dy) * DIAMETER_STEP_NM, 0.5, 3);
      break;
    case DESK_HANDLE_BEAM_LOW:
    case DESK_HANDLE_BEAM_HIGH:
      own_window (self, recipe);
      recipe->window.spread_nm = MAX (recipe->window.spread_nm + (dx + dy) * SPREAD_STEP_NM, LEAST_SPREAD_NM);
      break;
    }
}

static void
on_nudge (DeskHandle *handle, int dx, int dy, DeskBench *self)
{
  if (self->drag.kind != DESK_DRAG_NONE && self->nudged != handle)
    return; /* the pointer has something in hand */
  if (self->nudged != handle)
    {
      desk_bench_begin_edit (self, handle);
      self->nudged = handle;
    }
  self->drag.moved = TRUE;
  apply_nudge (self, handle, dx, dy);
  follow (self);
  g_clear_handle_id (&self->commit_timer, g_source_remove);
  self->commit_timer = g_timeout_add (NUDGES_REST_MS, nudges_rest, self);
}

static void
on_set_value (DeskHandle *handle, double value, DeskBench *self)
{
  if (!self->film || self->drag.kind != DESK_DRAG_NONE)
    return;
  desk_bench_begin_edit (self, handle);
  BtRecipe *recipe = self->drag.recipe;
  self->drag.moved = TRUE;
  switch (desk_handle_get_kind (handle))
    {
    case DESK_HANDLE_CROWN:
      self->drag.band.centre_ev = value;
      hold (self, BT_BAND_CENTRE);
      break;
    case DESK_HANDLE_FLANK_LOW:
    case DESK_HANDLE_FLANK_HIGH:
      self->drag.band.fwhm_ev = value;
      hold (self, BT_BAND_FWHM);
      break;
    case DESK_HANDLE_BEAM:
      own_window (self, recipe);
      recipe->window.mean_nm = value;
      break;
    case DESK_HANDLE_BEAM_LOW:
    case DESK_HANDLE_BEAM_HIGH:
      own_window (self, recipe);
      recipe->window.spread_nm = value;
      break;
    }
  desk_bench_commit_edit (self);
}

void
desk_bench_exclude (DeskBench *self, double from_ev, double to_ev)
{
  if (!self->film)
    return;
  g_autoptr (BtRecipe) recipe = own_recipe (self);
  desk_recipe_exclude (recipe, from_ev, to_ev);
  desk_history_edit (self->history, self->film, _("Leave a range out"), NULL, recipe, FALSE);
}
