#include "desk-app.h"

#include <bandtally/bandtally.h>
#include <glib/gi18n.h>

#include "desk-theme.h"
#include "desk-window.h"

struct _DeskApp {
  GtkApplication parent;
};

G_DEFINE_TYPE (DeskApp, desk_app, GTK_TYPE_APPLICATION)

static const struct { const char *action; const char *accels[3]; } accels[] = {
  { "app.quit", { "<Control>q" } },
  { "app.new-window", { "<Control>n" } },
  { "win.open", { "<Control>o" } },
  { "win.undo", { "<Control>z" } },
  { "win.redo", { "<Control><Shift>z", "<Control>y" } },
  { "win.print", { "<Control>p" } },
  { "win.save-report", { "<Control>s" } },
  { "win.close-film", { "<Control>w" } },
  { "win.zoom-in", { "<Control>plus", "<Control>equal" } },
  { "win.zoom-out", { "<Control>minus" } },
  { "win.zoom-all", { "<Control>0" } },
  { "win.mark", { "<Control>e" } },
  { "win.toggle-quantity", { "<Control>b" } },
  { "win.set-thickness", { "<Control>t" } },
  { "win.set-limit", { "<Control>l" } },
  { "win.refit", { "F5" } },
  { "win.next-film", { "<Control>Page_Down" } },
  { "win.previous-film", { "<Control>Page_Up" } },
  { "win.next-part", { "F6" } },
  { "win.menu", { "F10" } },
};

static GtkWidget *
new_window (DeskApp *self)
{
  GtkWidget *window = desk_window_new (GTK_APPLICATION (self));
  gtk_window_present (GTK_WINDOW (window));
  return window;
}

static void
act_new_window (GSimpleAction *action, GVariant *parameter, gpointer app)
{
  new_window (app);
}

static void
act_quit (GSimpleAction *action, GVariant *parameter, gpointer app)
{
  g_application_quit (app);
}

static void
act_about (GSimpleAction *action, GVariant *parameter, gpointer app)
{
  gtk_show_about_dialog (gtk_application_get_active_window (app), "program-name", "Bandtally", "version", bt_version (),
                         "logo-icon-name", "org.bandtally.Bandtally", "comments",
                         _("Grades films of carbon nanotubes from their UV-Vis-NIR spectra."), "license-type",
                         GTK_LICENSE_GPL_3_0, "title", _("About Bandtally"), NULL);
}

static void
act_dark (GSimpleAction *action, GVariant *state, gpointer app)
{
  desk_theme_set_dark (g_variant_get_boolean (state));
  g_simple_action_set_state (action, state);
}

static const GActionEntry actions[] = {
  { .name = "new-window", .activate = act_new_window },
  { .name = "quit", .activate = act_quit },
  { .name = "about", .activate = act_about },
  { .name = "dark", .state = "false", .change_state = act_dark },
};

static void
load_style (void)
{
  GtkCssProvider *provider = gtk_css_provider_new ();
  gtk_css_provider_load_from_resource (provider, "/org/bandtally/Bandtally/desk.css");
  gtk_style_context_add_provider_for_screen (gdk_screen_get_default (), GTK_STYLE_PROVIDER (provider),
                                             GTK_STYLE_PROVIDER_PRIORITY_APPLICATION);
  g_object_unref (provider);
}

static void
desk_app_startup (GApplication *app)
{
  G_APPLICATION_CLASS (desk_app_parent_class)->startup (app);
  g_set_application_name ("Bandtally");
  gtk_window_set_default_icon_name ("org.bandtally.Bandtally");
  g_action_map_add_action_entries (G_ACTION_MAP (app), actions, G_N_ELEMENTS (actions), app);
  for (guint i = 0; i < G_N_ELEMENTS (accels); i++)
    gtk_application_set_accels_for_action (GTK_APPLICATION (app), accels[i].action, accels[i].accels);
  g_autoptr (GVariant) dark = g_variant_ref_sink (g_variant_new_boolean (desk_theme_get_dark ()));
  g_simple_action_set_state (G_SIMPLE_ACTION (g_action_map_lookup_action (G_ACTION_MAP (app), "dark")), dark);
  load_style ();
}

static void
desk_app_activate (GApplication *app)
{
  new_window (DESK_APP (app));
}

static int
desk_app_command_line (GApplication *app, GApplicationCommandLine *line)
{
  GVariantDict *options = g_application_command_line_get_options_dict (line);
  GtkWindow *active = gtk_application_get_active_window (GTK_APPLICATION (app));
  gboolean fresh = g_variant_dict_contains (options, "new-window") || !DESK_IS_WINDOW (active);
  GtkWidget *window = fresh ? new_window (DESK_APP (app)) : GTK_WIDGET (active);
  g_autofree const char **names = NULL;
  if (g_variant_dict_lookup (options, G_OPTION_REMAINING, "^a&ay", &names))
    {
      g_autoptr (GPtrArray) files = g_ptr_array_new_with_free_func (g_object_unref);
      for (const char **name = names; *name; name++)
        g_ptr_array_add (files, g_application_command_line_create_file_for_arg (line, *name));
      desk_window_open_files (DESK_WINDOW (window), files);
    }
  if (g_variant_dict_contains (options, "demo"))
    desk_window_open_demo (DESK_WINDOW (window));
  gtk_window_present (GTK_WINDOW (window));
  return 0;
}

static int
desk_app_handle_local_options (GApplication *app, GVariantDict *options)
{
  if (g_variant_dict_contains (options, "version"))
    {
      g_print ("bandtally %s\n", bt_version ());
      return 0;
    }
  if (g_variant_dict_contains (options, "new-process"))
    g_application_set_flags (app, g_application_get_flags (app) | G_APPLICATION_NON_UNIQUE);
  return -1;
}

static void
desk_app_class_init (DeskAppClass *class)
{
  GApplicationClass *app_class = G_APPLICATION_CLASS (class);
  app_class->startup = desk_app_startup;
  app_class->activate = desk_app_activate;
  app_class->command_line = desk_app_command_line;
  app_class->handle_local_options = desk_app_handle_local_options;
}

static void
desk_app_init (DeskApp *self)
{
  static const GOptionEntry options[] = {
    { "demo", 0, 0, G_OPTION_ARG_NONE, NULL, N_ ("open the demo lots"), NULL },
    { "new-window", 0, 0, G_OPTION_ARG_NONE, NULL, N_ ("open the files in a window of their own"), NULL },
    { "new-process", 0, 0, G_OPTION_ARG_NONE, NULL, N_ ("do not join a Bandtally that runs already"), NULL },
    { "version", 0, 0, G_OPTION_ARG_NONE, NULL, N_ ("show the version"), NULL },
    { G_OPTION_REMAINING, 0, 0, G_OPTION_ARG_FILENAME_ARRAY, NULL, NULL, N_ ("[FILE…]") },
    { NULL },
  };
  g_application_add_main_option_entries (G_APPLICATION (self), options);
  g_application_set_option_context_summary (G_APPLICATION (self),
                                            _("Grades films of carbon nanotubes from their UV-Vis-NIR spectra."));
}

DeskApp *
desk_app_new (void)
{
  return g_object_new (DESK_TYPE_APP, "application-id", "org.bandtally.Bandtally", "flags",
                       G_APPLICATION_HANDLES_COMMAND_LINE, "resource-base-path", "/org/bandtally/Bandtally", NULL);
}
