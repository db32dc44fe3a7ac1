#include <bandtally/bandtally.h>

#include "bt-config.h"

const char *
bt_version (void)
{
  return BT_VERSION;
}
