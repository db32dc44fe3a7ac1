/* Language and number formats of the programs. */
#ifndef BANDTALLY_APP_LOCALE_H
#define BANDTALLY_APP_LOCALE_H

/* Takes the user's locale and finds the translations, in the build folder where the program runs from there. Call first. */
void app_init_locale (void);
/* Where the program's data (demo lots, recipes) are: beside the sources where it runs from the build folder, else as installed. */
const char *app_data_dir (void);

#endif
