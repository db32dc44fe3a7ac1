/* bandtally: the window. */
#include "../locale.h"
#include "desk-app.h"

int
main (int argc, char **argv)
{
  app_init_locale ();
  g_autoptr (DeskApp) app = desk_app_new ();
  return g_application_run (G_APPLICATION (app), argc, argv);
}
