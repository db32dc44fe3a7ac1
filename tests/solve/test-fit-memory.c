/* A solve allocates before it begins and never again: as often in three iterations as in thirty. Counts by standing in front of
 * the C library's allocator. */
#include <bandtally/fit.h>

#include <math.h>
#include <stdlib.h>

static volatile int counting, count;

extern void *__libc_malloc (size_t size);
extern void *__libc_calloc (size_t n, size_t size);
extern void *__libc_realloc (void *old, size_t size);
extern void *__libc_memalign (size_t alignment, size_t size);
void *malloc (size_t size);

void *
malloc (size_t size)
{
  count += counting;
  return __libc_malloc (size);
}

void *
calloc (size_t n, size_t size)
{
  count += counting;
  return __libc_calloc (n, size);
}

void *
realloc (void *old, size_t size)
{
  count += counting;
  return __libc_realloc (old, size);
}

int
posix_memalign (void **out, size_t alignment, size_t size)
{
  count += counting;
  *out = __libc_memalign (alignment, size);
  return *out == NULL ? 12 : 0;
}

static int
allocations (BtFit *fit, guint iterations, guint *made)
{
  const BtFitOptions options = { .max_iterations = iterations, .tolerance = 1e-15 };
  BtFitResult *result;

  count = 0;
  counting = 1;
  result = bt_fit_solve (fit, &options, NULL, NULL);
  counting = 0;
  *made = result->iterations;
  bt_fit_result_unref (result);
  return count;
}

static void
test_memory (void)
{
  double x[200], y[200];
  g_autoptr (BtFit) fit = NULL;
  guint few, many;
  int at_few, at_many;

  for (int i = 0; i < 200; i++)
    {
      x[i] = i / 100.0;
      y[i] = 0.1 * sin (3 * x[i]) + exp (-pow ((x[i] - 0.9) / 0.3, 2)) + 0.4 * exp (-pow ((x[i] - 1.3) / 0.2, 2));
    }
  fit = bt_fit_new (x, y, NULL, 200);
  for (int b = 0; b < 3; b++)
    bt_fit_add_shape (fit, BT_SHAPE_GAUSSIAN, (double[]){ 0.4 + 0.5 * b, 0.7 }, 2);
  allocations (fit, 3, &few); /* what GLib sets up once */
  at_few = allocations (fit, 3, &few);
  at_many = allocations (fit, 200, &many);
  g_assert_cmpint (at_few, >, 10);
  g_assert_cmpuint (many, >, few + 5);
  g_assert_cmpint (at_many, ==, at_few);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/fit/memory", test_memory);
  return g_test_run ();
}
