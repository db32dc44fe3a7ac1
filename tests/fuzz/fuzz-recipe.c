/* Whatever the bytes of a recipe: a recipe that writes itself down so that it reads back, or a sentence. */
#include <bandtally/bandtally.h>

#include "fuzz.h"

int
LLVMFuzzerTestOneInput (const uint8_t *data, size_t size)
{
  g_autofree char *text = g_strndup ((const char *) data, size);
  g_autoptr (GError) error = NULL;
  BtRecipe *recipe = bt_recipe_new_from_json (text, -1, &error);

  g_assert_true ((recipe != NULL) == (error == NULL));
  if (recipe != NULL)
    {
      g_autofree char *json = bt_recipe_to_json (recipe);
      BtRecipe *again = bt_recipe_new_from_json (json, -1, &error);

      g_assert_no_error (error);
      bt_recipe_free (again);
      bt_recipe_free (recipe);
    }
  return 0;
}
