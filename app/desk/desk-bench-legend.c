/* The line above the figure: what the crosshair reads, or what can be done here. */
#include <glib/gi18n.h>
#include <math.h>

#include "desk-bench-private.h"
#include "desk-text.h"

#define TUBES_NAMED 4
/* Tubes farther than this many spreads from the mean diameter are too rare to be named. */
#define SPREADS_NAMED 3

/* A reading in the quantity shown. */
static char *
reading (DeskBench *self, double absorbance)
{
  double thickness = bt_film_get_thickness_nm (desk_film_get_film (self->film));
  if (isnan (absorbance))
    return g_strdup ("–");
  if (self->view.quantity == BT_QUANTITY_ALPHA && thickness > 0)
    return desk_text_number (bt_alpha_per_cm (absorbance, thickness), 4, "cm⁻¹");
  return desk_text_number (absorbance, 4, NULL);
}

static void
show_values (DeskBench *self)
{
  double energy = self->cursor_ev;
  g_autofree char *film = reading (self, bt_figure_film_at (self->figure, energy));
  g_autofree char *fit = reading (self, bt_figure_fit_at (self->figure, energy));
  g_autofree char *tail = reading (self, bt_figure_tail_at (self->figure, energy));
  GString *text = g_string_new (NULL);
  g_string_printf (text, _("%.4f\u00a0eV   %.1f\u00a0nm   film %s"), energy, bt_nm_from_ev (energy), film);
  if (!isnan (bt_figure_fit_at (self->figure, energy)))
    g_string_append_printf (text, _("   fit %s   tail %s"), fit, tail);
  gtk_label_set_text (GTK_LABEL (self->values), text->str);
  g_string_free (text, TRUE);
}

/* What is in the hand. */
static void
show_edit (DeskBench *self)
{
  const BtBand *band = &self->drag.band;
  const BtDiameterWindow *window = &self->drag.recipe->window;
  g_autofree char *text = NULL;
  switch (desk_handle_get_kind (self->drag.handle))
    {
    case DESK_HANDLE_CROWN:
      text = g_strdup_printf (_("%s   centre %.4f\u00a0eV (%.1f\u00a0nm)   height %.4f"), bt_group_name (band->group), band->centre_ev,
                              bt_nm_from_ev (band->centre_ev), band->height);
      break;
    case DESK_HANDLE_FLANK_LOW:
    case DESK_HANDLE_FLANK_HIGH:
      text = g_strdup_printf (_("%s   FWHM %.4f\u00a0eV"), bt_group_name (band->group), band->fwhm_ev);
      break;
    default:
      text = g_strdup_printf (_("Diameters   mean %.3f\u00a0nm   spread %.3f\u00a0nm"), window->mean_nm, window->spread_nm);
      break;
    }
  gtk_label_set_text (GTK_LABEL (self->values), text);
}

static void
show_tubes (DeskBench *self)
{
  GString *text = g_string_new (NULL);
  if (self->pointer_in && desk_bench_in_panel (self, BT_PANEL_KATAURA, self->pointer_x, self->pointer_y))
    g_string_append_printf (text, _("Diameter %.3f\u00a0nm   "), bt_figure_diameter_from_y (self->figure, self->pointer_y));
  if (self->has_plan)
    {
      const BtDiameterWindow *window = &self->plan.window;
      double reach_nm = SPREADS_NAMED * window->spread_nm;
      g_autoptr (GArray) near = bt_tube_lines_near (self->cursor_ev, window->mean_nm - reach_nm, window->mean_nm + reach_nm,
                                                    self->plan.shift_ev, TUBES_NAMED);
      for (guint i = 0; i < near->len; i++)
        {
          const BtTubeLine *line = &g_array_index (near, BtTubeLine, i);
          g_string_append_printf (text, "%s(%d,%d)\u00a0%s\u00a0%.3f\u00a0eV", i ? "   " : _("Nearest tubes: "), line->tube.n,
                                  line->tube.m, bt_group_name (line->group), line->energy_ev);
        }
    }
  gtk_label_set_text (GTK_LABEL (self->tubes), text->str);
  g_string_free (text, TRUE);
}

void
desk_bench_update_legend (DeskBench *self)
{
  if (self->drag.kind == DESK_DRAG_HANDLE && self->drag.moved)
    show_edit (self);
  else if (self->mark_mode && self->drag.kind == DESK_DRAG_NONE && !self->pointer_in)
    {
      gtk_label_set_text (GTK_LABEL (self->values), _("Drag over the energies that the fit shall leave out."));
      gtk_label_set_text (GTK_LABEL (self->tubes), "");
    }
  else if (self->figure && !isnan (self->cursor_ev))
    {
      show_values (self);
      show_tubes (self);
    }
  else
    {
      gtk_label_set_text (GTK_LABEL (self->values), 
                          _("Point to read. Drag a crown, a flank or the beam to correct."));
      gtk_label_set_text (GTK_LABEL (self->tubes), 
                          _("Wheel: zoom. Shift and drag: zoom in. Alt and drag: leave out."));
    }
}
