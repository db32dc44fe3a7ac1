/* Numbers as the window shows them. */
#pragma once

#include <bandtally/bandtally.h>

G_BEGIN_DECLS

/* "1.52(3) × 10⁵ cm⁻¹", "0.661(26)", "–" where there is none. @unit may be empty. (transfer full) */
char *desk_text_uncertain (double value, double u, const char *unit);
/* The same without an uncertainty. (transfer full) */
char *desk_text_number (double value, int digits, const char *unit);
/* 0.661 as "66.1 %". (transfer full) */
char *desk_text_percent (double share, int decimals);
/* "61.0 to 71.2 %", "at least 93 %". (transfer full) (nullable) where there is no fraction */
char *desk_text_interval (const BtFraction *fraction);
/* Name of the icon that stands for a verdict: shapes that differ without colour. */
const char *desk_verdict_icon (BtVerdict verdict);

G_END_DECLS
