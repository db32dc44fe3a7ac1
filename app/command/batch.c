/* Grading of many files on several threads. */
#include "batch.h"

#include <glib/gi18n.h>
#include <math.h>
#include <signal.h>
#include <string.h>
#include <unistd.h>

/* How often an interrupt is looked for. */
#define POLL_US 100000

/* One file. Belongs to a worker until it is pushed to the queue, then to the main thread. */
typedef struct
{
  const char *file;
  BatchResult result;
  gboolean done;
} Job;

typedef struct
{
  const BatchSettings *settings;
  GCancellable *cancellable;
  GAsyncQueue *finished;
} Batch;

static volatile sig_atomic_t interrupted;

static void
on_interrupt (int number)
{
  interrupted = 1;
}

static void
result_init (BatchResult *result)
{
  result->films = g_ptr_array_new_with_free_func (g_object_unref);
  result->tallies = g_ptr_array_new_with_free_func ((GDestroyNotify) bt_tally_unref);
  result->failures = g_ptr_array_new_with_free_func ((GDestroyNotify) bt_failure_free);
}

void
batch_result_clear (BatchResult *result)
{
  g_ptr_array_unref (result->films);
  g_ptr_array_unref (result->tallies);
  g_ptr_array_unref (result->failures);
}

/* Errors of reading name their file already; those of the fit need not. Takes @error. */
static void
add_failure (BatchResult *result, const char *file, const char *title, GError *error)
{
  char *name = g_filename_display_name (file);
  char *base = g_filename_display_basename (file);
  char *reason;

  if (strstr (error->message, base) != NULL)
    reason = g_strdup (error->message);
  else if (title != NULL)
    reason = g_strdup_printf ("%s (%s): %s", name, title, error->message);
  else
    reason = g_strdup_printf ("%s: %s", name, error->message);
  g_ptr_array_add (result->failures, bt_failure_new (file, reason));
  g_free (reason);
  g_free (base);
  g_free (name);
  g_error_free (error);
}

/* What the user states takes the place of what the file says. */
static void
state_film (BtFilm *film, const BatchSettings *settings)
{
  if (settings->thicknesses_nm != NULL)
    bt_film_set_thickness_readings (film, (const double *)(void *)settings->thicknesses_nm->data, settings->thicknesses_nm->len);
  if (!isnan (settings->thickness_u_nm))
    bt_film_set_thickness (film, bt_film_get_thickness_nm (film), settings->thickness_u_nm);
  if (!isnan (settings->sheet_resistance_ohm))
    bt_film_set_sheet_resistance (film, settings->sheet_resistance_ohm, 0);
  if (!isnan (settings->sheet_resistance_u_ohm))
    bt_film_set_sheet_resistance (film, bt_film_get_sheet_resistance_ohm (film), settings->sheet_resistance_u_ohm);
  bt_film_set_blank (film, settings->blank);
  bt_film_set_reflectance (film, settings->reflectance);
  if (settings->substrate != NULL)
    bt_film_set_substrate (film, settings->substrate);
}

static void
grade_file (Job *job, const BatchSettings *settings, GCancellable *cancellable)
{
  GError *error = NULL;
  GPtrArray *spectra = bt_spectrum_read_file (job->file, &settings->reading, &error);

  if (spectra == NULL)
    {
      add_failure (&job->result, job->file, NULL, error);
      return;
    }
  for (guint i = 0; i < spectra->len; i++)
    {
      BtSpectrum *spectrum = g_ptr_array_index (spectra, i);
      BtFilm *film = bt_film_new (spectrum);
      BtTally *tally;

      state_film (film, settings);
      tally = bt_tally_film (film, settings->recipe, BT_EFFORT_FULL, NULL, NULL, NULL, cancellable, &error);
      if (tally != NULL)
        {
          g_ptr_array_add (job->result.films, g_object_ref (film));
          g_ptr_array_add (job->result.tallies, tally);
        }
      else
        add_failure (&job->result, job->file, spectra->len > 1 ? bt_spectrum_get_title (spectrum) : NULL,
                     g_steal_pointer (&error));
      g_object_unref (film);
    }
  g_ptr_array_unref (spectra);
}

static void
work (gpointer data, gpointer batch_data)
{
  Job *job = data;
  Batch *batch = batch_data;

  if (g_cancellable_is_cancelled (batch->cancellable))
    add_failure (&job->result, job->file, NULL,
                 g_error_new_literal (BT_TALLY_ERROR, BT_TALLY_ERROR_CANCELLED, _ ("not graded: interrupted.")));
  else
    grade_file (job, batch->settings, batch->cancellable);
  g_async_queue_push (batch->finished, job);
}

static void
show_progress (guint n_done, guint n_all)
{
  g_printerr ("\r\033[K");
  if (n_done < n_all)
    g_printerr (_ ("%u of %u files"), n_done, n_all);
}

/* Moves a finished file's outcome to the whole. What an interrupt left undone is counted, not told file by file. */
static void
gather (Job *job, BatchResult *result)
{
  for (guint i = 0; i < job->result.failures->len && !interrupted; i++)
    complain (((const BtFailure *) g_ptr_array_index (job->result.failures, i))->reason);
  g_ptr_array_extend_and_steal (result->films, g_steal_pointer (&job->result.films));
  g_ptr_array_extend_and_steal (result->tallies, g_steal_pointer (&job->result.tallies));
  g_ptr_array_extend_and_steal (result->failures, g_steal_pointer (&job->result.failures));
}

/* Takes the workers' results until all are there; hands them on in the files' order. */
static void
collect (Batch *batch, Job *jobs, guint n_jobs, BatchResult *result)
{
  gboolean progress = n_jobs > 1 && isatty (STDERR_FILENO);
  guint n_gathered = 0;

  for (guint n_done = 0; n_done < n_jobs;)
    {
      Job *job = g_async_queue_timeout_pop (batch->finished, POLL_US);

      if (interrupted && !g_cancellable_is_cancelled (batch->cancellable))
        g_cancellable_cancel (batch->cancellable);
      if (job == NULL)
        continue;
      job->done = TRUE;
      n_done++;
      if (progress)
        g_printerr ("\r\033[K");
      while (n_gathered < n_jobs && jobs[n_gathered].done)
        gather (&jobs[n_gathered++], result);
      if (progress)
        show_progress (n_done, n_jobs);
    }
}

/* What a spectrum finds out about itself only when asked is asked for before threads share it. */
static void
prepare_shared (BtSpectrum *spectrum)
{
  gsize n;

  if (spectrum == NULL)
    return;
  bt_spectrum_get_noise (spectrum, &n);
  bt_spectrum_get_steps (spectrum, &n);
  bt_spectrum_get_saturated (spectrum, &n);
}

void
batch_grade (char **files, const BatchSettings *settings, BatchResult *result)
{
  Batch batch = { settings, g_cancellable_new (), g_async_queue_new () };
  guint n_jobs = g_strv_length (files);
  Job *jobs = g_new0 (Job, n_jobs);
  GThreadPool *pool = g_thread_pool_new (work, &batch, settings->jobs, TRUE, NULL);
  struct sigaction action = { .sa_handler = on_interrupt, .sa_flags = (int)SA_RESETHAND };
  struct sigaction before;

  prepare_shared (settings->blank);
  result_init (result);
  sigaction (SIGINT, &action, &before);
  for (guint i = 0; i < n_jobs; i++)
    {
      jobs[i].file = files[i];
      result_init (&jobs[i].result);
      g_thread_pool_push (pool, &jobs[i], NULL);
    }
  collect (&batch, jobs, n_jobs, result);
  sigaction (SIGINT, &before, NULL);
  if (interrupted)
    {
      char *sentence = g_strdup_printf (
          ngettext ("Interrupted; %u file was not graded.", "Interrupted; %u files were not graded.", result->failures->len),
          result->failures->len);

      complain (sentence);
      g_free (sentence);
    }
  g_thread_pool_free (pool, FALSE, TRUE);
  g_free (jobs);
  g_async_queue_unref (batch.finished);
  g_object_unref (batch.cancellable);
}
