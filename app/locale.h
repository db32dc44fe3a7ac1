/* Language and number formats of the programs. */
#ifndef BANDTALLY_APP_LOCALE_H
#define BANDTALLY_APP_LOCALE_H

/* Takes the user's locale and finds the translations, in the build folder where the program runs from there. Call first. */
void app_init_locale (void);

#endif
