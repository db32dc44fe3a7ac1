/* The bench's context menu: on a band, and on the plot. Its entries are the window's actions. */
#include <glib/gi18n.h>
#include <math.h>

#include "desk-bench-private.h"
#include "desk-recipe.h"

static void
append_band_number (GMenu *menu, const BtRecipe *recipe, const BtBand *band, BtBandField field, const char *hold,
                    const char *release)
{
  gboolean held = bt_recipe_get_held (recipe, band->group, band->index, field) != NULL;
  g_autoptr (GMenuItem) item = g_menu_item_new (held ? release : hold, NULL);
  g_menu_item_set_action_and_target (item, held ? "win.release" : "win.hold", "(sui)", bt_group_name (band->group), band->index,
                                     (gint32) field);
  g_menu_append_item (menu, item);
}

static void
append_band (GMenu *menu, DeskBench *self, const BtBand *band)
{
  const BtRecipe *recipe = desk_film_get_recipe (self->film);
  const char *group = bt_group_name (band->group);
  guint n = desk_film_get_tally (self->film)->groups[band->group].n_bands;
  g_autoptr (GMenu) section = g_menu_new ();
  g_autofree char *title = g_strdup_printf (_("%s, band %u"), group, band->index + 1);
  append_band_number (section, recipe, band, BT_BAND_CENTRE, _("Hold centre"), _("Let the fit find the centre"));
  append_band_number (section, recipe, band, BT_BAND_FWHM, _("Hold width"), _("Let the fit find the width"));
  append_band_number (section, recipe, band, BT_BAND_HEIGHT, _("Hold height"), _("Let the fit find the height"));
  if (MAX (n, recipe->max_bands[band->group]) < BT_RECIPE_MAX_BANDS)
    {
      g_autofree char *more = g_strdup_printf (_("Allow one more %s band"), group);
      g_autoptr (GMenuItem) item = g_menu_item_new (more, NULL);
      g_menu_item_set_action_and_target (item, "win.max-bands", "(su)", group, recipe->max_bands[band->group] + 1);
      g_menu_append_item (section, item);
    }
  if (n > 0)
    {
      g_autofree char *fewer = n > 1 ? g_strdup_printf (_("One %s band fewer"), group) : g_strdup_printf (_("Leave %s out"), group);
      g_autoptr (GMenuItem) item = g_menu_item_new (fewer, NULL);
      g_menu_item_set_action_and_target (item, "win.max-bands", "(su)", group, n - 1);
      g_menu_append_item (section, item);
    }
  g_menu_append_section (menu, title, G_MENU_MODEL (section));
}

static void
append_plot (GMenu *menu, DeskBench *self, double energy_ev)
{
  const BtRecipe *recipe = desk_film_get_recipe (self->film);
  g_autoptr (GMenu) section = g_menu_new ();
  int excluded = isnan (energy_ev) ? -1 : desk_recipe_find_excluded (recipe, energy_ev);
  g_menu_append (section, _("Mark a range to leave out"), "win.mark");
  if (excluded >= 0)
    {
      g_autofree char *action = g_strdup_printf ("win.include-range(uint32 %d)", excluded);
      g_menu_append (section, _("Fit this range again"), action);
    }
  if (recipe->excluded->len)
    g_menu_append (section, _("Fit all ranges again"), "win.include-all");
  if (recipe->held->len)
    g_menu_append (section, _("Let the fit find all numbers"), "win.release-all");
  if (recipe->window.mean_nm > 0)
    g_menu_append (section, _("Propose the diameters from the data"), "win.propose-window");
  g_menu_append_section (menu, NULL, G_MENU_MODEL (section));
  g_autoptr (GMenu) view = g_menu_new ();
  g_menu_append (view, _("Show all"), "win.zoom-all");
  g_menu_append (view, _("Save figure…"), "win.save-figure");
  g_menu_append_section (menu, NULL, G_MENU_MODEL (view));
}

void
desk_bench_popup (DeskBench *self, const GdkEvent *event, const BtBand *band, double energy_ev)
{
  g_autoptr (GMenu) model = g_menu_new ();
  if (band)
    append_band (model, self, band);
  append_plot (model, self, energy_ev);
  GtkWidget *menu = gtk_menu_new_from_model (G_MENU_MODEL (model));
  gtk_menu_attach_to_widget (GTK_MENU (menu), GTK_WIDGET (self), NULL);
  g_signal_connect (menu, "selection-done", G_CALLBACK (gtk_widget_destroy), NULL);
  if (event)
    gtk_menu_popup_at_pointer (GTK_MENU (menu), event);
  else
    gtk_menu_popup_at_widget (GTK_MENU (menu), self->area, GDK_GRAVITY_CENTER, GDK_GRAVITY_NORTH_WEST, NULL);
}
