/* A check's lines as a table: what was published, found and tolerated, and the state as a sign with a word. */
#include <glib/gi18n.h>
#include <math.h>

#include "desk-check.h"
#include "desk-text.h"

enum { COLUMN_WAVELENGTH, COLUMN_PUBLISHED, COLUMN_FOUND, COLUMN_DEVIATION, COLUMN_TOLERANCE, COLUMN_ICON, COLUMN_STATE, COLUMN_SOURCE, N_COLUMNS };

const char *
desk_check_icon (BtCheckState state)
{
  switch (state)
    {
    case BT_CHECK_PASSED:
      return desk_verdict_icon (BT_VERDICT_ACCEPTED);
    case BT_CHECK_FAILED:
      return desk_verdict_icon (BT_VERDICT_REFUSED);
    case BT_CHECK_NOT_JUDGED:
    case BT_CHECK_NOT_MEASURED:
      break;
    }
  return desk_verdict_icon (BT_VERDICT_NOT_JUDGED);
}

static void
add_column (GtkTreeView *view, const char *title, int column, float align)
{
  GtkTreeViewColumn *made = gtk_tree_view_column_new ();
  if (column == COLUMN_STATE)
    {
      GtkCellRenderer *icon = gtk_cell_renderer_pixbuf_new ();
      gtk_tree_view_column_pack_start (made, icon, FALSE);
      gtk_tree_view_column_set_attributes (made, icon, "icon-name", COLUMN_ICON, NULL);
    }
  GtkCellRenderer *text = gtk_cell_renderer_text_new ();
  g_object_set (text, "xalign", align, NULL);
  gtk_tree_view_column_pack_start (made, text, TRUE);
  gtk_tree_view_column_set_attributes (made, text, "text", column, NULL);
  gtk_tree_view_column_set_title (made, title);
  gtk_tree_view_column_set_alignment (made, align);
  gtk_tree_view_column_set_resizable (made, TRUE);
  gtk_tree_view_append_column (view, made);
}

GtkWidget *
desk_check_table_new (void)
{
  g_autoptr (GtkListStore) store = gtk_list_store_new (N_COLUMNS, G_TYPE_STRING, G_TYPE_STRING, G_TYPE_STRING, G_TYPE_STRING, G_TYPE_STRING,
                                                       G_TYPE_STRING, G_TYPE_STRING, G_TYPE_STRING);
  GtkWidget *view = gtk_tree_view_new_with_model (GTK_TREE_MODEL (store));
  gtk_tree_selection_set_mode (gtk_tree_view_get_selection (GTK_TREE_VIEW (view)), GTK_SELECTION_BROWSE);
  add_column (GTK_TREE_VIEW (view), _("Wavelength"), COLUMN_WAVELENGTH, 1);
  add_column (GTK_TREE_VIEW (view), _("Published"), COLUMN_PUBLISHED, 1);
  add_column (GTK_TREE_VIEW (view), _("Found"), COLUMN_FOUND, 1);
  add_column (GTK_TREE_VIEW (view), _("Deviation"), COLUMN_DEVIATION, 1);
  add_column (GTK_TREE_VIEW (view), _("Tolerance"), COLUMN_TOLERANCE, 1);
  add_column (GTK_TREE_VIEW (view), _("State"), COLUMN_STATE, 0);
  add_column (GTK_TREE_VIEW (view), _("Source"), COLUMN_SOURCE, 0);
  atk_object_set_name (gtk_widget_get_accessible (view), _("Published values and what was found"));
  return view;
}

void
desk_check_table_fill (GtkWidget *table, const BtInstrumentCheck *check)
{
  GtkListStore *store = GTK_LIST_STORE (gtk_tree_view_get_model (GTK_TREE_VIEW (table)));
  gtk_list_store_clear (store);
  for (guint i = 0; check && i < check->lines->len; i++)
    {
      const BtCheckLine *line = &g_array_index (check->lines, BtCheckLine, i);
      const int digits = check->standard == BT_STANDARD_HOLMIUM ? 2 : 3;
      g_autofree char *wavelength = g_strdup_printf (_("%.2f nm"), line->wavelength_nm);
      g_autofree char *published = g_strdup_printf ("%.*f", digits, line->published);
      g_autofree char *found = isnan (line->found) ? g_strdup ("–") : g_strdup_printf ("%.*f", digits, line->found);
      g_autofree char *deviation = isnan (line->found) ? g_strdup ("–") : g_strdup_printf ("%+.*f", digits, line->found - line->published);
      g_autofree char *tolerance
          = isnan (line->low) ? g_strdup ("–") : g_strdup_printf (_("%.*f to %.*f"), digits, line->low, digits, line->high);
      gtk_list_store_insert_with_values (store, NULL, -1, COLUMN_WAVELENGTH, wavelength, COLUMN_PUBLISHED, published, COLUMN_FOUND, found,
                                         COLUMN_DEVIATION, deviation, COLUMN_TOLERANCE, tolerance, COLUMN_ICON, desk_check_icon (line->state),
                                         COLUMN_STATE, bt_check_state_title (line->state), COLUMN_SOURCE, line->source, -1);
    }
}
