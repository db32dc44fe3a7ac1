/* The ledger's sections on the fraction and where its uncertainty comes from, the flags, and the verdict. */
#include <glib/gi18n.h>
#include <math.h>

#include "desk-ledger.h"
#include "desk-text.h"

static void
fill_budget (DeskSection *section, const BtTally *tally)
{
  double largest = 0;
  for (guint i = 0; i < tally->budget->len; i++)
    largest = MAX (largest, g_array_index (tally->budget, BtBudgetLine, i).u);
  if (!(largest > 0))
    return;
  desk_section_subheading (section, _("Where the uncertainty comes from"));
  for (guint i = 0; i < tally->budget->len; i++)
    {
      const BtBudgetLine *entry = &g_array_index (tally->budget, BtBudgetLine, i);
      DeskLine *line = desk_section_line (section, entry->title, "budget %s", entry->source);
      g_autofree char *u = desk_text_number (entry->u, 2, NULL);
      desk_line_set_value (line, "%s", u);
      desk_line_set_share (line, entry->u / largest);
    }
}

static void
fill_outcome (DeskSection *section, const BtTally *tally)
{
  const BtFraction *fraction = &tally->fraction;
  DeskLine *line = desk_section_line (section, _("Semiconducting fraction"), "fraction");
  g_autofree char *value = desk_text_uncertain (fraction->value, fraction->u, NULL);
  g_autofree char *interval = desk_text_interval (fraction);
  desk_line_set_value (line, "%s", fraction->bound == BT_BOUND_LOWER && interval ? interval : value);
  if (interval)
    {
      g_autofree char *level = desk_text_percent (fraction->level, 0);
      line = desk_section_line (section, _("Interval"), "interval");
      desk_line_set_value (line, "%s", interval);
      g_autofree char *detail = g_strdup_printf (_("at %s confidence"), level);
      desk_line_set_detail (line, detail);
    }
  for (BtGroup group = BT_S22; group <= BT_M11; group++)
    {
      g_autofree char *name = g_strdup_printf (_("Area of %s"), bt_group_name (group));
      g_autofree char *area = desk_text_uncertain (tally->groups[group].area, tally->groups[group].area_u, "eV");
      desk_line_set_value (desk_section_line (section, name, "area %d", group), "%s", area);
    }
  if (!isnan (tally->s22_m11_correlation))
    desk_line_set_value (desk_section_line (section, _("Correlation of the two areas"), "correlation"), "%.2f",
                         tally->s22_m11_correlation);
  if (!isnan (tally->m11_detection))
    {
      g_autofree char *detection = desk_text_number (tally->m11_detection, 2, "eV");
      desk_line_set_value (desk_section_line (section, _("Detection limit of M11"), "detection"), "%s", detection);
    }
}

/* What each model says and how much it counts. */
static void
fill_models (DeskSection *section, const BtTally *tally)
{
  if (!(tally->models[BT_MODEL_ENSEMBLE].weight > 0))
    return;
  desk_section_subheading (section, _("Models"));
  for (BtModelKind kind = 0; kind < BT_N_MODELS; kind++)
    {
      const BtModelTally *model = &tally->models[kind];
      DeskLine *line = desk_section_line (section, bt_model_title (kind), "model %d", kind);
      g_autofree char *fraction = desk_text_uncertain (model->fraction, model->fraction_u, NULL);
      g_autofree char *weight = desk_text_percent (model->weight, model->weight > 0.0005 && model->weight < 0.9995 ? 1 : 0);
      g_autofree char *detail = g_strdup_printf (_("weight %s, misfit %.2f × noise"), weight, model->misfit);
      if (kind == BT_MODEL_ENSEMBLE)
        {
          g_autofree char *mean = desk_text_uncertain (model->diameter.mean_nm, model->diameter_u_nm, "nm");
          g_autofree char *spread = desk_text_number (model->diameter.spread_nm, 2, "nm");
          g_autofree char *population = g_strdup_printf (_("diameters %s, spread %s"), mean, spread);
          char *both = g_strconcat (detail, "\n", population, NULL);
          g_free (detail);
          detail = both;
        }
      desk_line_set_value (line, "%s", fraction);
      desk_line_set_detail (line, detail);
    }
}

void
desk_ledger_fill_fraction (DeskSection *section, const DeskAccount *account)
{
  const BtRecipe *recipe = account->recipe;
  if (account->tally)
    {
      fill_outcome (section, account->tally);
      fill_models (section, account->tally);
    }
  DeskLine *line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_RATIO });
  desk_line_set_value (line, "%g", recipe->strength_ratio);
  line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_RATIO_U });
  desk_line_set_value (line, "%g", recipe->strength_ratio_u);
  desk_line_set_detail (line, recipe->strength_ratio_source);
  line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_LEVEL });
  desk_line_set_value (line, "%g\u00a0%%", recipe->level * 100);
  if (account->tally && account->tally->budget->len)
    fill_budget (section, account->tally);
  else if (desk_film_is_previewing (account->desk_film))
    desk_section_keep_rest (section);
}

void
desk_ledger_fill_flags (DeskSection *section, const DeskAccount *account)
{
  const GPtrArray *flags = account->tally ? account->tally->flags
                                          : bt_spectrum_get_flags (bt_film_get_spectrum (account->film));
  const char *error = desk_film_get_error (account->desk_film);
  if (error)
    desk_section_sentence (section, "dialog-error-symbolic", error);
  for (guint i = 0; flags && i < flags->len; i++)
    desk_section_sentence (section, "bandtally-flag-symbolic", ((const BtFlag *) flags->pdata[i])->text);
  if (!error && (!flags || flags->len == 0))
    desk_section_sentence (section, NULL, _("None."));
}

void
desk_ledger_fill_verdict (DeskSection *section, const DeskAccount *account)
{
  const BtTally *tally = account->tally;
  if (tally)
    {
      DeskLine *line = desk_section_line (section, bt_verdict_title (tally->verdict), "verdict");
      desk_line_set_icon (line, desk_verdict_icon (tally->verdict));
      desk_line_set_value (line, "%s", "");
      desk_line_set_detail (line, tally->decision_rule);
    }
  DeskLine *line = desk_section_field (section, (DeskField){ .id = DESK_FIELD_LIMIT });
  if (isnan (account->recipe->limit))
    desk_line_set_value (line, "%s", _("add"));
  else
    desk_line_set_value (line, "%g\u00a0%%", account->recipe->limit * 100);
  if (!tally || isnan (tally->acceptance_limit))
    return;
  g_autofree char *acceptance = desk_text_percent (tally->acceptance_limit, 1);
  g_autofree char *refusal = desk_text_percent (tally->refusal_limit, 1);
  desk_line_set_value (desk_section_line (section, _("Accepted from"), "acceptance"), "%s", acceptance);
  desk_line_set_value (desk_section_line (section, _("Refused below"), "refusal"), "%s", refusal);
}
