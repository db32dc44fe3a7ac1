/* The report: pages that hold what they should, on both papers, for whole and for partial tallies. */
#include <math.h>
#include <string.h>

#include <glib/gstdio.h>

#include <bandtally/bandtally.h>

typedef struct
{
  BtFilm *film;
  BtTally *tally;
} Graded;

/* @high_nm: end of the instrument's range; @thickness_nm 0: unknown. */
static Graded
grade (double high_nm, double thickness_nm, double limit)
{
  Graded graded;
  BtForecast forecast;
  g_autoptr (GError) error = NULL;
  g_autofree char *text = NULL;
  GBytes *bytes;
  GPtrArray *spectra;
  BtRecipe *recipe = bt_recipe_new ();

  bt_forecast_init (&forecast);
  forecast.high_nm = high_nm;
  forecast.step_nm = 4;
  text = bt_forecast_to_text (&forecast, "Test 1", "Test", &error);
  g_assert_no_error (error);
  bytes = g_bytes_new (text, strlen (text));
  spectra = bt_spectrum_read_bytes (bytes, "test-1.csv", NULL, &error);
  g_assert_no_error (error);
  graded.film = bt_film_new (g_ptr_array_index (spectra, 0));
  bt_film_set_thickness (graded.film, thickness_nm, thickness_nm / 20);
  recipe->window = (BtDiameterWindow){ 1.4, 0.1 };
  recipe->limit = limit;
  graded.tally = bt_tally_film (graded.film, recipe, BT_EFFORT_FULL, NULL, NULL, NULL, NULL, &error);
  g_assert_no_error (error);
  bt_recipe_free (recipe);
  g_ptr_array_unref (spectra);
  g_bytes_unref (bytes);
  return graded;
}

static void
ungrade (Graded graded)
{
  g_object_unref (graded.film);
  bt_tally_unref (graded.tally);
}

static const struct
{
  const char *name;
  double high_nm, thickness_nm, limit;
  BtBound bound;
} films[] = {
  { "whole", 2500, 100, 0.6, BT_BOUND_TWO_SIDED },
  { "no limit", 2500, 100, NAN, BT_BOUND_TWO_SIDED },
  { "no thickness", 2500, 0, 0.6, BT_BOUND_TWO_SIDED },
  { "no S22", 750, 100, 0.6, BT_BOUND_NONE },
  { "no S22, no thickness, no limit", 750, 0, NAN, BT_BOUND_NONE },
};

/* Ink stays within the margins, and there is some on every page. */
static void
check_pages (BtReport *report, BtPaper paper)
{
  double width, height;

  bt_paper_size_pt (paper, &width, &height);
  for (int page = 0; page < bt_report_n_pages (report); page++)
    {
      cairo_surface_t *surface = cairo_recording_surface_create (CAIRO_CONTENT_COLOR_ALPHA, NULL);
      cairo_t *cr = cairo_create (surface);
      double x, y, w, h;

      bt_report_draw_page (report, page, cr);
      g_assert_cmpint (cairo_status (cr), ==, CAIRO_STATUS_SUCCESS);
      cairo_destroy (cr);
      cairo_recording_surface_ink_extents (surface, &x, &y, &w, &h);
      cairo_surface_destroy (surface);
      g_assert_cmpfloat (w, >, width / 2);
      g_assert_cmpfloat (x, >=, 45);
      g_assert_cmpfloat (y, >=, 35);
      g_assert_cmpfloat (x + w, <=, width - 45);
      g_assert_cmpfloat (y + h, <=, height - 30);
    }
}

static void
test_papers (void)
{
  for (gsize i = 0; i < G_N_ELEMENTS (films); i++)
    {
      Graded graded = grade (films[i].high_nm, films[i].thickness_nm, films[i].limit);

      g_test_message ("%s", films[i].name);
      g_assert_cmpint (graded.tally->fraction.bound, ==, films[i].bound);
      for (int paper = BT_PAPER_A4; paper <= BT_PAPER_LETTER; paper++)
        {
          BtReport *report = bt_report_new ((BtPaper)paper);

          g_assert_cmpint (bt_report_n_pages (report), ==, 0);
          bt_report_add (report, graded.film, graded.tally);
          g_assert_cmpint (bt_report_n_pages (report), >=, 1);
          g_assert_cmpint (bt_report_n_pages (report), <=, 2);
          check_pages (report, (BtPaper)paper);
          bt_report_free (report);
        }
      ungrade (graded);
    }
}

/* 210 mm by 297 mm (ISO 216) and 8.5 in by 11 in, in points of 1/72 in. */
static void
test_sizes (void)
{
  double width, height;

  bt_paper_size_pt (BT_PAPER_A4, &width, &height);
  g_assert_cmpfloat_with_epsilon (width / 72 * 25.4, 210, 0.01);
  g_assert_cmpfloat_with_epsilon (height / 72 * 25.4, 297, 0.01);
  bt_paper_size_pt (BT_PAPER_LETTER, &width, &height);
  g_assert_cmpfloat (width, ==, 612);
  g_assert_cmpfloat (height, ==, 792);
}

/* A tally without any fit. */
static void
test_no_fit (void)
{
  Graded graded = grade (2500, 0, 0.6);
  BtTally *bare = g_boxed_copy (BT_TYPE_TALLY, graded.tally);
  BtReport *report = bt_report_new (BT_PAPER_A4);
  gsize n = bare->n;

  /* The same tally, as it stands before its fit. */
  bare->n = 0;
  bare->n_tails = 0;
  bare->fraction = (BtFraction){ NAN, NAN, NAN, NAN, 0.95, BT_BOUND_NONE };
  g_array_set_size (bare->bands, 0);
  g_array_set_size (bare->budget, 0);
  g_array_set_size (bare->readings, 0);
  for (int group = 0; group < BT_N_GROUPS; group++)
    bare->groups[group].n_bands = 0;
  bt_report_add (report, graded.film, bare);
  g_assert_cmpint (bt_report_n_pages (report), >=, 1);
  check_pages (report, BT_PAPER_A4);
  bt_report_free (report);
  bare->n = n;
  g_boxed_free (BT_TYPE_TALLY, bare);
  ungrade (graded);
}

/* Names, notes and flags of any length wrap, and go on the next page. */
static void
test_long (void)
{
  Graded graded = grade (2500, 100, 0.6);
  g_autofree char *word = g_strnfill (400, 'W');
  GString *text = g_string_new (NULL);

  for (int i = 0; i < 1500; i++)
    g_string_append (text, "seven words that say nothing at all ");
  bt_film_set_label (graded.film, word);
  bt_film_set_lot (graded.film, word);
  bt_film_set_substrate (graded.film, word);
  bt_film_set_notes (graded.film, "short");
  for (int i = 0; i < 40; i++)
    g_ptr_array_add (graded.tally->flags, bt_flag_new ("long", "%.*s", 10 + 37 * i, text->str));
  for (int i = 0; i < 90; i++)
    g_array_append_val (graded.tally->readings, g_array_index (graded.tally->readings, BtReading, 0));
  for (int paper = BT_PAPER_A4; paper <= BT_PAPER_LETTER; paper++)
    {
      BtReport *report = bt_report_new ((BtPaper)paper);

      bt_report_add (report, graded.film, graded.tally);
      g_assert_cmpint (bt_report_n_pages (report), >, 3);
      check_pages (report, (BtPaper)paper);
      bt_report_free (report);
    }
  /* Notes longer than a page are no reason to lose the rest. */
  bt_film_set_label (graded.film, "Test");
  bt_film_set_notes (graded.film, text->str);
  for (int paper = BT_PAPER_A4; paper <= BT_PAPER_LETTER; paper++)
    {
      BtReport *report = bt_report_new ((BtPaper)paper);

      bt_report_add (report, graded.film, graded.tally);
      check_pages (report, (BtPaper)paper);
      bt_report_free (report);
    }
  g_string_free (text, TRUE);
  ungrade (graded);
}

static char *
pdf_of (Graded graded, int n_films, gint64 date, gsize *length)
{
  g_autoptr (GError) error = NULL;
  g_autofree char *folder = g_dir_make_tmp ("bandtally-XXXXXX", &error), *path = NULL;
  BtReport *report = bt_report_new (BT_PAPER_A4);
  char *contents;

  g_assert_no_error (error);
  path = g_build_filename (folder, "report.pdf", NULL);
  for (int i = 0; i < n_films; i++)
    bt_report_add (report, graded.film, graded.tally);
  bt_report_set_date (report, date);
  g_assert_true (bt_report_write_pdf (report, path, &error));
  g_assert_no_error (error);
  g_assert_true (g_file_get_contents (path, &contents, length, &error));
  g_unlink (path);
  g_rmdir (folder);
  bt_report_free (report);
  return contents;
}

static void
test_stable (void)
{
  Graded graded = grade (2500, 100, 0.6);
  gsize n_first, n_second, n_later;
  g_autofree char *first = pdf_of (graded, 2, 1000000000, &n_first), *second = pdf_of (graded, 2, 1000000000, &n_second);
  g_autofree char *later = pdf_of (graded, 2, 1100000000, &n_later);

  g_assert_cmpuint (n_first, ==, n_second);
  g_assert_true (memcmp (first, second, n_first) == 0);
  g_assert_true (n_first != n_later || memcmp (first, later, n_first) != 0);
  g_assert_true (g_str_has_prefix (first, "%PDF-"));
  ungrade (graded);
}

/* What is changed after a film was added does not change its pages. */
static void
test_snapshot (void)
{
  Graded graded = grade (2500, 100, 0.6);
  BtReport *report = bt_report_new (BT_PAPER_A4);
  g_autofree char *word = g_strnfill (4000, 'W');
  int n;

  bt_report_add (report, graded.film, graded.tally);
  bt_film_set_label (graded.film, word);
  n = bt_report_n_pages (report);
  g_assert_cmpint (n, <=, 2);
  bt_report_free (report);
  ungrade (graded);
}

static void
test_bad_path (void)
{
  Graded graded = grade (750, 100, NAN);
  BtReport *report = bt_report_new (BT_PAPER_A4);
  g_autofree char *folder = g_dir_make_tmp ("bandtally-XXXXXX", NULL);
  g_autofree char *missing = g_build_filename (folder, "missing", "report.pdf", NULL);
  const char *paths[] = { missing, folder };

  bt_report_add (report, graded.film, graded.tally);
  for (gsize i = 0; i < G_N_ELEMENTS (paths); i++)
    {
      g_autoptr (GError) error = NULL;

      g_assert_false (bt_report_write_pdf (report, paths[i], &error));
      g_assert_nonnull (error);
      g_assert_true (g_str_has_prefix (error->message, paths[i]));
      g_assert_true (g_str_has_suffix (error->message, "."));
      g_assert_nonnull (strstr (error->message, "Choose"));
    }
  g_rmdir (folder);
  bt_report_free (report);
  ungrade (graded);
}

static void
test_empty (void)
{
  BtReport *report = bt_report_new (BT_PAPER_A4);
  g_autoptr (GError) error = NULL;

  g_assert_false (bt_report_write_pdf (report, "never.pdf", &error));
  g_assert_nonnull (error);
  g_assert_false (g_file_test ("never.pdf", G_FILE_TEST_EXISTS));
  bt_report_free (report);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/report/sizes", test_sizes);
  g_test_add_func ("/report/papers", test_papers);
  g_test_add_func ("/report/no-fit", test_no_fit);
  g_test_add_func ("/report/long", test_long);
  g_test_add_func ("/report/stable", test_stable);
  g_test_add_func ("/report/snapshot", test_snapshot);
  g_test_add_func ("/report/bad-path", test_bad_path);
  g_test_add_func ("/report/empty", test_empty);
  return g_test_run ();
}
