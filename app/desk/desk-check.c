#include "desk-check.h"

#include <glib/gi18n.h>
#include <math.h>

#define MARGIN 12

struct _DeskCheck {
  GtkWindow parent;
  DeskWindow *desk; /* weak; it destroys this window with itself */
  GtkWidget *header, *standard, *concentration, *sentence, *icon, *outcome, *table, *flags, *print, *save, *carry;
  BtSpectrum *spectrum;     /* nullable */
  BtInstrumentCheck *check; /* nullable */
};

G_DEFINE_TYPE (DeskCheck, desk_check, GTK_TYPE_WINDOW)

static void
show_outcome (DeskCheck *self, const char *icon, const char *outcome)
{
  gtk_image_set_from_icon_name (GTK_IMAGE (self->icon), icon, GTK_ICON_SIZE_LARGE_TOOLBAR);
  gtk_label_set_text (GTK_LABEL (self->outcome), outcome);
}

/* What the reading itself has to say: how the file was taken, and its flags. */
static void
show_reading (DeskCheck *self)
{
  GString *text = g_string_new (bt_spectrum_get_reading (self->spectrum));
  const GPtrArray *flags = bt_spectrum_get_flags (self->spectrum);
  const char *path = bt_spectrum_get_file (self->spectrum);
  g_autofree char *name = path ? g_filename_display_basename (path) : NULL;
  for (guint i = 0; i < flags->len; i++)
    g_string_append_printf (text, "\n• %s", ((const BtFlag *) g_ptr_array_index (flags, i))->text);
  gtk_label_set_text (GTK_LABEL (self->flags), text->str);
  gtk_header_bar_set_subtitle (GTK_HEADER_BAR (self->header), name);
  g_string_free (text, TRUE);
}

static void
update (DeskCheck *self)
{
  g_autoptr (GError) error = NULL;
  gboolean holmium = gtk_combo_box_get_active (GTK_COMBO_BOX (self->standard)) == 0;
  int chosen = gtk_combo_box_get_active (GTK_COMBO_BOX (self->concentration));
  gtk_widget_set_sensitive (self->concentration, !holmium);
  if (!self->spectrum)
    return;
  g_clear_pointer (&self->check, bt_instrument_check_free);
  self->check = bt_instrument_check (self->spectrum, holmium ? BT_STANDARD_HOLMIUM : BT_STANDARD_DICHROMATE,
                                     bt_instrument_concentrations ()[MAX (chosen, 0)], &error);
  desk_check_table_fill (self->table, self->check);
  show_reading (self);
  if (self->check)
    {
      g_autofree char *summary = bt_instrument_check_summary (self->check);
      show_outcome (self, desk_check_icon (self->check->state), summary);
    }
  else
    show_outcome (self, "dialog-warning-symbolic", error->message);
  gtk_widget_set_sensitive (self->print, self->check != NULL);
  gtk_widget_set_sensitive (self->save, self->check != NULL);
  gtk_widget_set_sensitive (self->carry, self->check != NULL && isfinite (self->check->deviation_u));
}

static void
read_scan (GTask *task, gpointer window, gpointer path, GCancellable *cancellable)
{
  static const BtReadOptions as_stated = BT_READ_OPTIONS_INIT;
  GError *error = NULL;
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_file (path, &as_stated, &error);
  if (spectra)
    g_task_return_pointer (task, g_object_ref (spectra->pdata[0]), g_object_unref);
  else
    g_task_return_error (task, error);
}

static void
on_read (GObject *window, GAsyncResult *result, gpointer data)
{
  DeskCheck *self = DESK_CHECK (window);
  g_autoptr (GError) error = NULL;
  g_autoptr (BtSpectrum) spectrum = g_task_propagate_pointer (G_TASK (result), &error);
  if (!self->desk)
    return;
  if (!spectrum)
    {
      /* What was shown of another file would pass for this one's. */
      g_clear_object (&self->spectrum);
      g_clear_pointer (&self->check, bt_instrument_check_free);
      desk_check_table_fill (self->table, NULL);
      gtk_label_set_text (GTK_LABEL (self->flags), "");
      gtk_header_bar_set_subtitle (GTK_HEADER_BAR (self->header), NULL);
      gtk_widget_set_sensitive (self->print, FALSE);
      gtk_widget_set_sensitive (self->save, FALSE);
      gtk_widget_set_sensitive (self->carry, FALSE);
      show_outcome (self, "dialog-warning-symbolic", error->message);
      return;
    }
  g_set_object (&self->spectrum, spectrum);
  update (self);
}

static void
open_path (DeskCheck *self, const char *path)
{
  g_autoptr (GTask) task = g_task_new (self, NULL, on_read, NULL);
  g_task_set_task_data (task, g_strdup (path), g_free);
  g_task_run_in_thread (task, read_scan);
}

static void
on_open_response (GtkNativeDialog *dialog, int response, DeskCheck *self)
{
  if (response == GTK_RESPONSE_ACCEPT && self->desk)
    {
      g_autofree char *path = gtk_file_chooser_get_filename (GTK_FILE_CHOOSER (dialog));
      desk_window_keep_folder (self->desk, GTK_FILE_CHOOSER (dialog));
      open_path (self, path);
    }
  g_object_unref (dialog);
}

static void
on_open (GtkButton *button, DeskCheck *self)
{
  GtkFileChooserNative *dialog = gtk_file_chooser_native_new (_("Open the scan of the standard"), GTK_WINDOW (self), GTK_FILE_CHOOSER_ACTION_OPEN,
                                                              _("_Open"), _("_Cancel"));
  desk_window_begin_in_folder (self->desk, GTK_FILE_CHOOSER (dialog));
  g_signal_connect_object (dialog, "response", G_CALLBACK (on_open_response), self, 0);
  gtk_native_dialog_show (GTK_NATIVE_DIALOG (dialog));
}

static void
on_drop (GtkWidget *window, GdkDragContext *context, int x, int y, GtkSelectionData *data, guint info, guint time)
{
  g_auto (GStrv) uris = gtk_selection_data_get_uris (data);
  g_autofree char *path = uris && uris[0] ? g_filename_from_uri (uris[0], NULL, NULL) : NULL;
  if (path)
    open_path (DESK_CHECK (window), path);
  else
    show_outcome (DESK_CHECK (window), "dialog-warning-symbolic", _("This is not a file on this computer: save it here first, then open it."));
  gtk_drag_finish (context, path != NULL, FALSE, time);
}

static BtReport *
new_report (DeskCheck *self, BtPaper paper)
{
  BtReport *report = bt_report_new (paper);
  bt_report_add_check (report, self->check, self->spectrum);
  return report;
}

static void
on_save_response (GtkNativeDialog *dialog, int response, DeskCheck *self)
{
  if (response == GTK_RESPONSE_ACCEPT && self->desk && self->check)
    {
      g_autoptr (GError) error = NULL;
      g_autofree char *path = gtk_file_chooser_get_filename (GTK_FILE_CHOOSER (dialog));
      gboolean letter = g_str_equal (gtk_paper_size_get_default (), GTK_PAPER_NAME_LETTER);
      g_autoptr (BtReport) report = new_report (self, letter ? BT_PAPER_LETTER : BT_PAPER_A4);
      desk_window_keep_folder (self->desk, GTK_FILE_CHOOSER (dialog));
      if (!bt_report_write_pdf (report, path, &error))
        show_outcome (self, "dialog-warning-symbolic", error->message);
    }
  g_object_unref (dialog);
}

static void
on_save (GtkButton *button, DeskCheck *self)
{
  GtkFileChooserNative *dialog = gtk_file_chooser_native_new (_("Save the check as PDF"), GTK_WINDOW (self), GTK_FILE_CHOOSER_ACTION_SAVE,
                                                              _("_Save"), _("_Cancel"));
  desk_window_begin_in_folder (self->desk, GTK_FILE_CHOOSER (dialog));
  gtk_file_chooser_set_do_overwrite_confirmation (GTK_FILE_CHOOSER (dialog), TRUE);
  gtk_file_chooser_set_current_name (GTK_FILE_CHOOSER (dialog), "instrument-check.pdf");
  g_signal_connect_object (dialog, "response", G_CALLBACK (on_save_response), self, 0);
  gtk_native_dialog_show (GTK_NATIVE_DIALOG (dialog));
}

static void
on_begin_print (GtkPrintOperation *operation, GtkPrintContext *context, DeskCheck *self)
{
  BtReport *report = new_report (self, desk_paper_of (gtk_print_context_get_page_setup (context)));
  g_object_set_data_full (G_OBJECT (operation), "report", report, (GDestroyNotify) bt_report_free);
  gtk_print_operation_set_n_pages (operation, bt_report_n_pages (report));
}

static void
on_draw_page (GtkPrintOperation *operation, GtkPrintContext *context, int page, DeskCheck *self)
{
  cairo_t *cr = gtk_print_context_get_cairo_context (context);
  double width, height;
  bt_paper_size_pt (desk_paper_of (gtk_print_context_get_page_setup (context)), &width, &height);
  double scale = MIN (gtk_print_context_get_width (context) / width, gtk_print_context_get_height (context) / height);
  cairo_scale (cr, scale, scale);
  bt_report_draw_page (g_object_get_data (G_OBJECT (operation), "report"), page, cr);
}

static void
on_print (GtkButton *button, DeskCheck *self)
{
  g_autoptr (GError) error = NULL;
  g_autoptr (GtkPrintOperation) operation = gtk_print_operation_new ();
  gtk_print_operation_set_job_name (operation, _("Check of the instrument"));
  gtk_print_operation_set_unit (operation, GTK_UNIT_POINTS);
  gtk_print_operation_set_use_full_page (operation, TRUE);
  if (self->desk->print_settings)
    gtk_print_operation_set_print_settings (operation, self->desk->print_settings);
  if (self->desk->page_setup)
    gtk_print_operation_set_default_page_setup (operation, self->desk->page_setup);
  g_signal_connect (operation, "begin-print", G_CALLBACK (on_begin_print), self);
  g_signal_connect (operation, "draw-page", G_CALLBACK (on_draw_page), self);
  if (gtk_print_operation_run (operation, GTK_PRINT_OPERATION_ACTION_PRINT_DIALOG, GTK_WINDOW (self), &error) == GTK_PRINT_OPERATION_RESULT_ERROR)
    {
      g_autofree char *sentence = g_strdup_printf (_("The report could not be printed: %s"), error->message);
      show_outcome (self, "dialog-warning-symbolic", sentence);
    }
}

/* Into the recipe of the film that is on the bench now. */
static void
on_carry (GtkButton *button, DeskCheck *self)
{
  if (!self->desk->film)
    {
      gtk_label_set_text (GTK_LABEL (self->sentence), _("There is no film on the bench: open one, then carry the uncertainty into its recipe."));
      return;
    }
  g_autoptr (GError) error = NULL;
  g_autofree char *film = desk_film_dup_title (self->desk->film), *sentence = NULL;
  g_autoptr (BtRecipe) recipe = bt_recipe_copy (desk_edition_get_recipe (desk_film_get_edition (self->desk->film)));
  if (!bt_recipe_take_check (recipe, self->check) || !bt_recipe_check (recipe, &error))
    sentence = g_strdup (error ? error->message : _("Nothing of the standard was found: there is nothing to carry."));
  else
    {
      desk_history_edit (self->desk->history, self->desk->film, _("Carry the check into the recipe"), NULL, recipe, FALSE);
      sentence = self->check->standard == BT_STANDARD_HOLMIUM
                     ? g_strdup_printf (_("%s: its recipe now has a wavelength uncertainty of %.2f nm."), film, recipe->wavelength_u_nm)
                     : g_strdup_printf (_("%s: its recipe now has a photometric uncertainty of %.4f."), film, recipe->photometric_u);
    }
  gtk_label_set_text (GTK_LABEL (self->sentence), sentence);
}

static gboolean
on_key (GtkWidget *widget, GdkEventKey *event, gpointer data)
{
  if (event->keyval != GDK_KEY_Escape)
    return GDK_EVENT_PROPAGATE;
  gtk_window_close (GTK_WINDOW (widget));
  return GDK_EVENT_STOP;
}

static void
desk_check_dispose (GObject *object)
{
  DeskCheck *self = DESK_CHECK (object);
  g_clear_weak_pointer (&self->desk);
  g_clear_object (&self->spectrum);
  g_clear_pointer (&self->check, bt_instrument_check_free);
  G_OBJECT_CLASS (desk_check_parent_class)->dispose (object);
}

static void
desk_check_class_init (DeskCheckClass *class)
{
  G_OBJECT_CLASS (class)->dispose = desk_check_dispose;
}

static GtkWidget *
text_label (const char *text)
{
  GtkWidget *label = gtk_label_new (text);
  gtk_label_set_line_wrap (GTK_LABEL (label), TRUE);
  gtk_label_set_selectable (GTK_LABEL (label), TRUE);
  gtk_widget_set_can_focus (label, FALSE);
  gtk_label_set_xalign (GTK_LABEL (label), 0);
  return label;
}

static void
build_header (DeskCheck *self)
{
  GtkWidget *open = gtk_button_new_with_mnemonic (_("_Open scan…"));
  self->header = gtk_header_bar_new ();
  self->print = gtk_button_new_with_mnemonic (_("_Print…"));
  self->save = gtk_button_new_with_mnemonic (_("_Save PDF…"));
  gtk_header_bar_set_title (GTK_HEADER_BAR (self->header), _("Check the instrument"));
  gtk_header_bar_set_show_close_button (GTK_HEADER_BAR (self->header), TRUE);
  gtk_header_bar_pack_start (GTK_HEADER_BAR (self->header), open);
  gtk_header_bar_pack_end (GTK_HEADER_BAR (self->header), self->print);
  gtk_header_bar_pack_end (GTK_HEADER_BAR (self->header), self->save);
  gtk_widget_set_sensitive (self->print, FALSE);
  gtk_widget_set_sensitive (self->save, FALSE);
  gtk_window_set_titlebar (GTK_WINDOW (self), self->header);
  gtk_window_set_title (GTK_WINDOW (self), _("Check the instrument"));
  g_signal_connect (open, "clicked", G_CALLBACK (on_open), self);
  g_signal_connect (self->print, "clicked", G_CALLBACK (on_print), self);
  g_signal_connect (self->save, "clicked", G_CALLBACK (on_save), self);
}

static GtkWidget *
build_choice (DeskCheck *self)
{
  GtkWidget *box = gtk_box_new (GTK_ORIENTATION_HORIZONTAL, MARGIN);
  GtkWidget *label = gtk_label_new_with_mnemonic (_("S_tandard")), *strength = gtk_label_new_with_mnemonic (_("_Concentration"));
  self->standard = gtk_combo_box_text_new ();
  gtk_combo_box_text_append_text (GTK_COMBO_BOX_TEXT (self->standard), _("Holmium oxide in perchloric acid: wavelengths"));
  gtk_combo_box_text_append_text (GTK_COMBO_BOX_TEXT (self->standard), _("Potassium dichromate: absorbances"));
  gtk_combo_box_set_active (GTK_COMBO_BOX (self->standard), 0);
  self->concentration = gtk_combo_box_text_new ();
  for (const double *known = bt_instrument_concentrations (); *known > 0; known++)
    {
      g_autofree char *text = g_strdup_printf (_("%g mg/L"), *known);
      gtk_combo_box_text_append_text (GTK_COMBO_BOX_TEXT (self->concentration), text);
      if (*known == 60)
        gtk_combo_box_set_active (GTK_COMBO_BOX (self->concentration), (int) (known - bt_instrument_concentrations ()));
    }
  gtk_label_set_mnemonic_widget (GTK_LABEL (label), self->standard);
  gtk_label_set_mnemonic_widget (GTK_LABEL (strength), self->concentration);
  atk_object_set_name (gtk_widget_get_accessible (self->standard), _("Standard"));
  atk_object_set_name (gtk_widget_get_accessible (self->concentration), _("Concentration of dichromate"));
  gtk_container_add (GTK_CONTAINER (box), label);
  gtk_container_add (GTK_CONTAINER (box), self->standard);
  gtk_container_add (GTK_CONTAINER (box), strength);
  gtk_container_add (GTK_CONTAINER (box), self->concentration);
  g_signal_connect_swapped (self->standard, "changed", G_CALLBACK (update), self);
  g_signal_connect_swapped (self->concentration, "changed", G_CALLBACK (update), self);
  return box;
}

static GtkWidget *
build_outcome (DeskCheck *self)
{
  GtkWidget *box = gtk_box_new (GTK_ORIENTATION_HORIZONTAL, MARGIN);
  self->icon = gtk_image_new ();
  self->outcome = text_label (NULL);
  gtk_widget_set_valign (self->icon, GTK_ALIGN_START);
  gtk_container_add (GTK_CONTAINER (box), self->icon);
  gtk_box_pack_start (GTK_BOX (box), self->outcome, TRUE, TRUE, 0);
  return box;
}

static GtkWidget *
build_carry (DeskCheck *self)
{
  GtkWidget *box = gtk_box_new (GTK_ORIENTATION_HORIZONTAL, MARGIN);
  self->carry = gtk_button_new_with_mnemonic (_("Ca_rry into the recipe"));
  self->sentence = text_label (_("The recipe of the film on the bench takes the standard uncertainty; this can be undone."));
  gtk_widget_set_sensitive (self->carry, FALSE);
  gtk_widget_set_valign (self->carry, GTK_ALIGN_CENTER);
  gtk_container_add (GTK_CONTAINER (box), self->carry);
  gtk_box_pack_start (GTK_BOX (box), self->sentence, TRUE, TRUE, 0);
  g_signal_connect (self->carry, "clicked", G_CALLBACK (on_carry), self);
  return box;
}

static void
desk_check_init (DeskCheck *self)
{
  GtkWidget *box = gtk_box_new (GTK_ORIENTATION_VERTICAL, MARGIN), *scroller = gtk_scrolled_window_new (NULL, NULL), *caution;
  build_header (self);
  self->table = desk_check_table_new ();
  self->flags = text_label (NULL);
  caution = text_label (bt_instrument_check_caution ());
  gtk_style_context_add_class (gtk_widget_get_style_context (self->flags), "desk-detail");
  gtk_style_context_add_class (gtk_widget_get_style_context (caution), "desk-detail");
  gtk_scrolled_window_set_shadow_type (GTK_SCROLLED_WINDOW (scroller), GTK_SHADOW_IN);
  gtk_container_add (GTK_CONTAINER (scroller), self->table);
  gtk_widget_set_vexpand (scroller, TRUE);
  gtk_container_set_border_width (GTK_CONTAINER (box), MARGIN);
  gtk_container_add (GTK_CONTAINER (box), build_choice (self));
  gtk_container_add (GTK_CONTAINER (box), build_outcome (self));
  gtk_container_add (GTK_CONTAINER (box), scroller);
  gtk_container_add (GTK_CONTAINER (box), self->flags);
  gtk_container_add (GTK_CONTAINER (box), build_carry (self));
  gtk_container_add (GTK_CONTAINER (box), caution);
  gtk_container_add (GTK_CONTAINER (self), box);
  gtk_window_set_default_size (GTK_WINDOW (self), 900, 620);
  show_outcome (self, "document-open-symbolic", _("Open the scan of a published standard, or drop its file here."));
  update (self);
  gtk_drag_dest_set (GTK_WIDGET (self), GTK_DEST_DEFAULT_ALL, NULL, 0, GDK_ACTION_COPY);
  gtk_drag_dest_add_uri_targets (GTK_WIDGET (self));
  g_signal_connect (self, "drag-data-received", G_CALLBACK (on_drop), NULL);
  g_signal_connect (self, "key-press-event", G_CALLBACK (on_key), NULL);
  gtk_widget_show_all (self->header);
  gtk_widget_show_all (box);
}

static void
forget (GtkWidget *check, DeskWindow *parent)
{
  g_object_set_data (G_OBJECT (parent), "desk-check", NULL);
}

void
desk_check_show (DeskWindow *parent)
{
  DeskCheck *self = g_object_get_data (G_OBJECT (parent), "desk-check");
  if (!self)
    {
      self = g_object_new (DESK_TYPE_CHECK, "transient-for", parent, "destroy-with-parent", TRUE, NULL);
      g_set_weak_pointer (&self->desk, parent);
      g_object_set_data (G_OBJECT (parent), "desk-check", self);
      g_signal_connect_object (self, "destroy", G_CALLBACK (forget), parent, 0);
    }
  gtk_window_present (GTK_WINDOW (self));
}

static void
act_check (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_check_show (window);
}

void
desk_window_add_check_actions (DeskWindow *self)
{
  static const GActionEntry entries[] = { { .name = "check-instrument", .activate = act_check } };
  g_action_map_add_action_entries (G_ACTION_MAP (self), entries, G_N_ELEMENTS (entries), self);
}
