/* The ledger's sections on tails and bands. */
#include <glib/gi18n.h>
#include <math.h>

#include "desk-ledger.h"
#include "desk-text.h"

static const BtTailTally *
find_tail (const BtTally *tally, BtTailKind kind)
{
  for (guint i = 0; tally && i < tally->n_tails; i++)
    if (tally->tails[i].kind == kind)
      return &tally->tails[i];
  return NULL;
}

static void
fill_range (DeskSection *section, const DeskAccount *account, DeskFieldId id, double stated, double taken)
{
  DeskLine *line = desk_section_field (section, (DeskField){ .id = id });
  double shown = stated > 0 ? stated : taken;
  if (isnan (shown))
    desk_line_set_value (line, "%s", _("automatic"));
  else
    desk_line_set_value (line, "%.3f\u00a0eV (%.0f\u00a0nm)", shown, bt_nm_from_ev (shown));
  desk_line_set_detail (line, stated > 0 || isnan (shown) ? NULL : _("as far as the data and the band plan go"));
}

static void
fill_excluded (DeskSection *section, const BtRecipe *recipe)
{
  for (guint i = 0; i < recipe->excluded->len; i++)
    {
      const BtRange *range = &g_array_index (recipe->excluded, BtRange, i);
      g_autofree char *action = g_strdup_printf ("win.include-range(uint32 %u)", i);
      DeskLine *line = desk_section_line (section, _("Left out"), "excluded %u", i);
      desk_line_set_value (line, _("%.3f to %.3f\u00a0eV"), range->low_ev, range->high_ev);
      desk_line_set_side (line, "edit-clear-symbolic", _("Fit this range again"), action);
    }
  desk_line_set_value (desk_section_field (section, (DeskField){ .id = DESK_FIELD_EXCLUDED }), "%s", _("add a range"));
}

/* (nullable): what the ensemble says with a tail of the groups. */
static char *
ensemble_text (const BtTally *tally, const BtTailTally *tail)
{
  const BtTailTally *ensemble = &tally->ensembles[tail - tally->tails];
  g_autofree char *fraction = desk_text_uncertain (ensemble->fraction, ensemble->fraction_u, NULL);
  g_autofree char *weight = desk_text_percent (ensemble->weight, 0);
  if (isnan (ensemble->fraction))
    return NULL;
  return g_strdup_printf (_("ensemble: weight %s, fraction %s, misfit %.2f × noise"), weight, fraction, ensemble->misfit);
}

void
desk_ledger_fill_tail (DeskSection *section, const DeskAccount *account)
{
  const BtTally *tally = account->tally;
  for (BtTailKind kind = 0; kind < BT_N_TAILS; kind++)
    {
      gboolean wanted = (account->recipe->tails >> kind) & 1;
      const BtTailTally *tail = wanted ? find_tail (tally, kind) : NULL;
      DeskLine *line = desk_section_line (section, bt_tail_title (kind), "tail %d", kind);
      g_autofree char *action = g_strdup_printf ("win.toggle-tail('%s')", bt_tail_name (kind));
      desk_line_set_check_action (line, wanted, action);
      if (tail)
        {
          g_autofree char *weight = desk_text_percent (tail->weight, tail->weight > 0.0005 && tail->weight < 0.9995 ? 1 : 0);
          g_autofree char *fraction = desk_text_uncertain (tail->fraction, tail->fraction_u, NULL);
          g_autofree char *groups = g_strdup_printf (_("fraction %s, misfit %.2f × noise"), fraction, tail->misfit);
          g_autofree char *ensemble = ensemble_text (tally, tail);
          g_autofree char *detail = ensemble ? g_strconcat (groups, "\n", ensemble, NULL) : g_strdup (groups);
          if (tally->n_tails == 1 && desk_film_is_previewing (account->desk_film))
            desk_line_set_value (line, "%s", _("followed now"));
          else
            desk_line_set_value (line, _("weight %s"), weight);
          desk_line_set_detail (line, detail);
        }
      else
        {
          desk_line_set_value (line, "%s", wanted ? "–" : _("not used"));
          /* A quick fit is of one tail; the others' lines keep their place. */
          desk_line_set_detail (line, wanted && tally ? _("waits for the whole fit") : NULL);
        }
    }
  if (tally)
    {
      g_autofree char *share = desk_text_percent (tally->tail_share_at_s22, 1);
      desk_line_set_value (desk_section_line (section, _("Tail's share at S22"), "share"), "%s", share);
    }
  fill_range (section, account, DESK_FIELD_RANGE_LOW, account->recipe->range.low_ev, tally ? tally->range.low_ev : NAN);
  fill_range (section, account, DESK_FIELD_RANGE_HIGH, account->recipe->range.high_ev, tally ? tally->range.high_ev : NAN);
  fill_excluded (section, account->recipe);
}

static void
fill_band_number (DeskSection *section, const BtRecipe *recipe, const BtBand *band, BtBandField number, double value, double u,
                  const char *unit)
{
  DeskLine *line = desk_section_field (section, (DeskField){ DESK_FIELD_BAND, band->group, band->index, number });
  gboolean held = bt_recipe_get_held (recipe, band->group, band->index, number) != NULL;
  g_autofree char *text = desk_text_uncertain (value, held ? 0 : u, unit);
  if (number == BT_BAND_CENTRE)
    desk_line_set_value (line, _("%s (%.0f\u00a0nm)"), text, bt_nm_from_ev (value));
  else
    desk_line_set_value (line, "%s", text);
  g_autofree char *action
      = g_strdup_printf ("win.release(('%s',uint32 %u,%d))", bt_group_name (band->group), band->index, number);
  desk_line_set_side (line, held ? "bandtally-held-symbolic" : NULL, _("Held: press to let the fit find it"), action);
  desk_line_set_detail (line, NULL);
}

static void
fill_band (DeskSection *section, const DeskAccount *account, const BtBand *band)
{
  g_autofree char *heading = account->tally->groups[band->group].n_bands > 1
                                 ? g_strdup_printf (_("%s, band %u"), bt_group_name (band->group), band->index + 1)
                                 : g_strdup (bt_group_name (band->group));
  desk_section_subheading (section, heading);
  fill_band_number (section, account->recipe, band, BT_BAND_CENTRE, band->centre_ev, band->centre_u_ev, "eV");
  fill_band_number (section, account->recipe, band, BT_BAND_FWHM, band->fwhm_ev, band->fwhm_u_ev, "eV");
  fill_band_number (section, account->recipe, band, BT_BAND_HEIGHT, band->height, band->height_u, NULL);
  g_autofree char *area = desk_text_uncertain (band->area, band->area_u, "eV");
  DeskLine *line = desk_section_line (section, _("Area"), "area %d %u", band->group, band->index);
  desk_line_set_value (line, "%s", area);
  desk_line_set_detail (line, band->at_bound ? _("The fit pressed this band against a bound of the band plan.") : NULL);
}

static void
fill_diameters (DeskSection *section, const DeskAccount *account)
{
  const BtTally *tally = account->tally;
  gboolean own = account->recipe->window.mean_nm > 0;
  BtDiameterWindow window = own ? account->recipe->window : tally ? tally->plan.window : (BtDiameterWindow){ NAN, NAN };
  DeskLine *line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_DIAMETER_MEAN });
  desk_line_set_value (line, isnan (window.mean_nm) ? "–" : "%.3f\u00a0nm", window.mean_nm);
  desk_line_set_side (line, own ? "bandtally-held-symbolic" : NULL, _("Held: press to propose it from the data"),
                      "win.propose-window");
  desk_line_set_detail (line, own ? NULL : _("proposed from the data"));
  line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_DIAMETER_SPREAD });
  desk_line_set_value (line, isnan (window.spread_nm) ? "–" : "%.3f\u00a0nm", window.spread_nm);
  line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_SHIFT });
  desk_line_set_value (line, "%.3f\u00a0eV", account->recipe->shift_ev);
  if (!tally)
    return;
  g_autofree char *mean = desk_text_uncertain (tally->diameter.mean_nm, tally->diameter_u_nm, "nm");
  g_autofree char *spread = desk_text_number (tally->diameter.spread_nm, 2, "nm");
  desk_line_set_value (desk_section_line (section, _("Mean diameter found"), "found mean"), "%s", mean);
  desk_line_set_value (desk_section_line (section, _("Spread found"), "found spread"), "%s", spread);
}

void
desk_ledger_fill_bands (DeskSection *section, const DeskAccount *account)
{
  const BtTally *tally = account->tally;
  desk_section_subheading (section, _("Diameters"));
  fill_diameters (section, account);
  for (guint i = 0; tally && i < tally->bands->len; i++)
    fill_band (section, account, &g_array_index (tally->bands, BtBand, i));
  desk_section_subheading (section, _("How many"));
  for (BtGroup group = 0; group < BT_N_GROUPS; group++)
    {
      DeskLine *line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_MAX_BANDS, .group = group });
      guint most = account->recipe->max_bands[group];
      guint n = tally ? tally->groups[group].n_bands : 0;
      if (most == 0)
        desk_line_set_value (line, "%s", _("left out"));
      else if (tally && n == 0)
        desk_line_set_value (line, _("out of range"));
      else
        desk_line_set_value (line, _("%u of at most %u"), n, most);
    }
}
