/* Flags and lists of them. */
#include <bandtally/flag.h>

G_DEFINE_BOXED_TYPE (BtFlag, bt_flag, bt_flag_copy, bt_flag_free)

BtFlag *
bt_flag_new (const char *code, const char *format, ...)
{
  BtFlag *flag = g_new (BtFlag, 1);
  va_list arguments;

  flag->code = g_strdup (code);
  va_start (arguments, format);
  flag->text = g_strdup_vprintf (format, arguments);
  va_end (arguments);
  return flag;
}

BtFlag *
bt_flag_copy (const BtFlag *flag)
{
  BtFlag *copy = g_new (BtFlag, 1);

  copy->code = g_strdup (flag->code);
  copy->text = g_strdup (flag->text);
  return copy;
}

void
bt_flag_free (BtFlag *flag)
{
  if (flag == NULL)
    return;
  g_free (flag->code);
  g_free (flag->text);
  g_free (flag);
}

GPtrArray *
bt_flags_new (void)
{
  return g_ptr_array_new_with_free_func ((GDestroyNotify) bt_flag_free);
}

const BtFlag *
bt_flags_find (const GPtrArray *flags, const char *code)
{
  for (guint i = 0; flags != NULL && i < flags->len; i++)
    {
      const BtFlag *flag = g_ptr_array_index (flags, i);

      if (g_str_equal (flag->code, code))
        return flag;
    }
  return NULL;
}

/* Two steps are two flags of one code: only the same sentence is said once. */
static gboolean
holds (const GPtrArray *flags, const BtFlag *flag)
{
  for (guint i = 0; i < flags->len; i++)
    {
      const BtFlag *other = g_ptr_array_index (flags, i);

      if (g_str_equal (other->code, flag->code) && g_str_equal (other->text, flag->text))
        return TRUE;
    }
  return FALSE;
}

void
bt_flags_add_all (GPtrArray *flags, const GPtrArray *from)
{
  for (guint i = 0; from != NULL && i < from->len; i++)
    {
      const BtFlag *flag = g_ptr_array_index (from, i);

      if (!holds (flags, flag))
        g_ptr_array_add (flags, bt_flag_copy (flag));
    }
}
