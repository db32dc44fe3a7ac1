/* Colours. Groups take the colour-blind-safe set of Okabe and Ito (2008), lightened on a dark ground; no colour is ever the only mark. */
#include "palette.h"

#define RGB(hex) { ((hex) >> 16 & 255) / 255.0, ((hex) >> 8 & 255) / 255.0, ((hex) & 255) / 255.0 }

static const BtPalette palettes[] = {
  [BT_THEME_LIGHT] = { RGB (0xffffff), RGB (0x2b2f36), RGB (0xd5d8de), RGB (0x17191d), RGB (0x8f2d56), RGB (0x7c828d), RGB (0x5d7fa3),
                       RGB (0xeceef2),
                       { RGB (0x0072b2), RGB (0x009e73), RGB (0xd55e00), RGB (0xcc79a7), RGB (0x56b4e9), RGB (0xe69f00) } },
  [BT_THEME_DARK] = { RGB (0x1e2024), RGB (0xe6e8ec), RGB (0x44484f), RGB (0xf5f6f8), RGB (0xf08ab0), RGB (0x9aa1ac), RGB (0x86a9cf),
                      RGB (0x2c2f35),
                      { RGB (0x4fa8e0), RGB (0x35c79a), RGB (0xf58a3c), RGB (0xe3a3c6), RGB (0x8fd0f5), RGB (0xf2bd4a) } },
  [BT_THEME_PRINT] = { RGB (0xffffff), RGB (0x000000), RGB (0xd0d0d0), RGB (0x000000), RGB (0x7a1f47), RGB (0x6a6a6a), RGB (0x5d7fa3),
                       RGB (0xf0f0f0),
                       { RGB (0x0072b2), RGB (0x009e73), RGB (0xd55e00), RGB (0xcc79a7), RGB (0x56b4e9), RGB (0xe69f00) } },
};

const BtPalette *
bt_palette_get (BtTheme theme)
{
  return &palettes[theme];
}

void
bt_colour_set (cairo_t *cr, BtColour colour, double alpha)
{
  cairo_set_source_rgba (cr, colour.r, colour.g, colour.b, alpha);
}
