/* Numbers for people, and text in columns. */
#include <bandtally/table.h>
#include <math.h>
#include <string.h>

#include "columns-private.h"

typedef struct
{
  double value, u;
  const char *expected;
} UncertainRow;

/* The notation is that of JCGM 100:2008, 7.2.2; the rows are worked by hand. */
static const UncertainRow uncertain_rows[] = {
  { 0.661, 0.026, "0.661(26)" },
  { 152000, 3100, "152000(3100)" },
  { 1402.4, 25, "1402(25)" },
  { 1523456, 3100, "1.5235(31)e6" },
  { 2, 4000000, "0.0(40)e6" },
  { 14020, 250, "14020(250)" },
  { 12.34, 4.5, "12.3(45)" },
  { 1.23456, 0.0996, "1.23(10)" }, /* 0.0996 rounds up to 0.10 */
  { 0.02, 0.035, "0.020(35)" },
  { -0.0123, 0.0045, "-0.0123(45)" },
  { -0.00001, 0.035, "0.000(35)" },
  { 0, 0.01, "0.000(10)" },
  { 9.9996, 0.0012, "9.9996(12)" },
  { 99999.7, 1.2, "99999.7(12)" },
  { 999999.7, 12, "1.000000(12)e6" },
  { 1.5e-7, 2.5e-9, "1.500(25)e-7" },
  { 3, 400, "0(400)" },
  { 0.5, 0, "0.5000" },
  { 0.5, NAN, "0.5000" },
  { 0.5, INFINITY, "0.5000" },
  { 0.5, 1e-25, "0.500000000000000" },
  { NAN, 0.1, "-" },
  { NAN, NAN, "-" },
};

static void
test_uncertain (void)
{
  for (gsize i = 0; i < G_N_ELEMENTS (uncertain_rows); i++)
    {
      char *text = bt_format_uncertain (uncertain_rows[i].value, uncertain_rows[i].u);

      g_assert_cmpstr (text, ==, uncertain_rows[i].expected);
      g_free (text);
    }
}

/* Reading the text back gives the value within half a unit of its last place, and u within 5 %. */
static void
test_uncertain_reads_back (void)
{
  for (int i = 0; i < 2000; i++)
    {
      double value = g_test_rand_double_range (-1, 1) * pow (10, g_test_rand_int_range (-9, 9));
      double u = fabs (value) * g_test_rand_double_range (0.1, 1) * pow (10, g_test_rand_int_range (-10, 5));
      char *text = bt_format_uncertain (value, u);
      char *bracket = strchr (text, '('), *point = strchr (text, '.');
      double exponent = strchr (text, 'e') != NULL ? g_ascii_strtod (strchr (text, 'e') + 1, NULL) : 0;
      double places = point != NULL && point < bracket ? (double) (bracket - point - 1) : 0;
      double last = (double) strcspn (bracket + 1, ")") - 2; /* zeros before the point are not among the two digits */
      double unit = pow (10, exponent - places);

      g_assert_nonnull (bracket);
      g_assert_cmpfloat_with_epsilon (g_ascii_strtod (text, NULL) * pow (10, exponent), value, 0.5001 * unit * pow (10, last));
      g_assert_cmpfloat_with_epsilon (g_ascii_strtod (bracket + 1, NULL) * unit, u, 0.0501 * u);
      g_free (text);
    }
}

typedef struct
{
  double value;
  int digits;
  const char *expected;
} NumberRow;

static const NumberRow number_rows[] = {
  { 0.661234, 3, "0.661" },
  { 1550, 4, "1550" },
  { 15234, 3, "15200" },
  { 152340, 3, "152000" },
  { 1523400, 3, "1.52e6" },
  { 0.00012345, 2, "0.00012" },
  { 0.000012345, 2, "1.2e-5" },
  { 0, 4, "0" },
  { -0.5, 2, "-0.50" },
  { 9.999, 3, "10.0" },
  { 999999.9, 3, "1.00e6" },
  { NAN, 3, "-" },
  { INFINITY, 3, "inf" },
  { -INFINITY, 3, "-inf" },
  { 1.0, 1, "1" },
};

static void
test_number (void)
{
  for (gsize i = 0; i < G_N_ELEMENTS (number_rows); i++)
    {
      char *text = bt_format_number (number_rows[i].value, number_rows[i].digits, FALSE);

      g_assert_cmpstr (text, ==, number_rows[i].expected);
      g_free (text);
    }
}

/* Fewest digits, and the same double again. */
static void
test_exact (void)
{
  char *text = bt_format_exact (0.95);

  g_assert_cmpstr (text, ==, "0.95");
  g_free (text);
  for (int i = 0; i < 2000; i++)
    {
      double value = g_test_rand_double_range (-1, 1) * pow (10, g_test_rand_int_range (-300, 300));

      text = bt_format_exact (value);
      g_assert_true (g_ascii_strtod (text, NULL) == value);
      g_free (text);
    }
}

static void
test_columns (void)
{
  BtColumns *columns = bt_columns_new (3);
  GString *out = g_string_new (NULL);
  static const char *const cells[] = { "Film", "Area", "Verdict", "A-1", "12.5", "accepted", "größer", "3", "" };

  for (gsize i = 0; i < G_N_ELEMENTS (cells); i++)
    bt_columns_take (columns, g_strdup (cells[i]));
  bt_columns_set_right (columns, 1, TRUE);
  bt_columns_append (columns, 3, 1, out);
  g_assert_cmpstr (out->str, ==, " Film    Area  Verdict\n A-1     12.5  accepted\n größer     3\n");
  g_assert_cmpint (bt_columns_width (columns, 3), ==, 6 + 2 + 4 + 2 + 8);
  g_assert_cmpint (bt_columns_width (columns, 1), ==, 6);
  g_string_free (out, TRUE);
  bt_columns_free (columns);
}

static void
test_wrapped (void)
{
  GString *out = g_string_new (NULL);

  bt_text_append_wrapped (out, "- ", "one two three four", 11);
  g_assert_cmpstr (out->str, ==, "- one two\n  three\n  four\n");
  g_string_truncate (out, 0);
  bt_text_append_wrapped (out, "- ", "unbreakablelongword x", 8);
  g_assert_cmpstr (out->str, ==, "- unbreakablelongword\n  x\n");
  g_string_truncate (out, 0);
  bt_text_append_wrapped (out, "- ", "one two three four", 0);
  g_assert_cmpstr (out->str, ==, "- one two three four\n");
  g_string_free (out, TRUE);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/format/uncertain", test_uncertain);
  g_test_add_func ("/format/uncertain-reads-back", test_uncertain_reads_back);
  g_test_add_func ("/format/number", test_number);
  g_test_add_func ("/format/exact", test_exact);
  g_test_add_func ("/columns/align", test_columns);
  g_test_add_func ("/columns/wrapped", test_wrapped);
  return g_test_run ();
}
