/* Flags: what the user must know about a reading or a fit, in one sentence, with what to do. */
#ifndef BANDTALLY_FLAG_H
#define BANDTALLY_FLAG_H

#include <glib-object.h>

G_BEGIN_DECLS

#define BT_TYPE_FLAG (bt_flag_get_type ())

/**
 * BtFlag:
 * @code: short stable identifier, lower case with dashes ("detector-step"); never translated
 * @text: one translated sentence that says what, where and what to do
 *
 * Boxed.
 */
typedef struct { char *code; char *text; } BtFlag;

GType bt_flag_get_type (void);
/* (transfer full): @text is printf-formatted. */
BtFlag *bt_flag_new (const char *code, const char *format, ...) G_GNUC_PRINTF (2, 3);
BtFlag *bt_flag_copy (const BtFlag *flag);
void bt_flag_free (BtFlag *flag);

/* A list of flags is a GPtrArray with bt_flag_free() as its free function. */
GPtrArray *bt_flags_new (void);
/* Appends a copy of every flag of @from that @flags does not hold already, word for word. */
void bt_flags_add_all (GPtrArray *flags, const GPtrArray *from);
/* (nullable): the first flag with @code. */
const BtFlag *bt_flags_find (const GPtrArray *flags, const char *code);

G_END_DECLS

#endif
