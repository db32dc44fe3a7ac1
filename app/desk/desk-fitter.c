#include "desk-fitter.h"

#include <glib/gi18n.h>

/* How often it is told how far the fits have come. */
#define PROGRESS_INTERVAL_MS 120

typedef struct {
  DeskFitter *fitter;
  DeskFilm *desk_film;
  BtFilm *film;
  BtRecipe *recipe;
  BtTally *previous;
  BtEffort effort;
  GCancellable *cancellable;
  gint progress_permille; /* atomic */
  gboolean dropped;       /* main thread: nobody waits for it any more */
  BtTally *tally;
  GError *error;
} Job;

typedef struct { Job *running; Job *next; } Queue;

struct _DeskFitter {
  GObject parent;
  GThreadPool *full_pool, *quick_pool;
  GHashTable *queues; /* DeskFilm -> Queue */
  guint n_done;       /* whole fits since the desk was idle */
  guint timer;
};

G_DEFINE_TYPE (DeskFitter, desk_fitter, G_TYPE_OBJECT)

static guint changed_signal;

static void
job_free (Job *job)
{
  g_object_unref (job->desk_film);
  g_object_unref (job->film);
  bt_recipe_free (job->recipe);
  g_clear_pointer (&job->previous, bt_tally_unref);
  g_object_unref (job->cancellable);
  g_clear_pointer (&job->tally, bt_tally_unref);
  g_clear_error (&job->error);
  g_object_unref (job->fitter);
  g_free (job);
}

static void
queue_free (gpointer data)
{
  g_free (data);
}

static void
note_progress (double share, gpointer data)
{
  Job *job = data;
  g_atomic_int_set (&job->progress_permille, (gint) (CLAMP (share, 0, 1) * 1000));
}

static gboolean job_done (gpointer data);

static void
work (gpointer data, gpointer pool_data)
{
  Job *job = data;
  if (!g_cancellable_is_cancelled (job->cancellable))
    job->tally = bt_tally_film (job->film, job->recipe, job->effort, job->previous, note_progress, job, job->cancellable,
                                &job->error);
  g_idle_add_full (G_PRIORITY_DEFAULT, job_done, job, NULL);
}

static gboolean
update_progress (gpointer data)
{
  g_signal_emit (data, changed_signal, 0);
  return G_SOURCE_CONTINUE;
}

static void
start (DeskFitter *self, Queue *queue, Job *job)
{
  queue->running = job;
  desk_film_fit_started (job->desk_film);
  g_thread_pool_push (job->effort == BT_EFFORT_QUICK ? self->quick_pool : self->full_pool, job, NULL);
  if (!self->timer)
    self->timer = g_timeout_add (PROGRESS_INTERVAL_MS, update_progress, self);
}

static void
drop (Job *job)
{
  job->dropped = TRUE;
  g_cancellable_cancel (job->cancellable);
}

static void
remove_queue (DeskFitter *self, DeskFilm *film)
{
  g_hash_table_remove (self->queues, film);
  if (g_hash_table_size (self->queues) == 0)
    {
      g_clear_handle_id (&self->timer, g_source_remove);
      self->n_done = 0;
    }
  g_signal_emit (self, changed_signal, 0);
}

static gboolean
job_done (gpointer data)
{
  Job *job = data;
  DeskFitter *self = job->fitter;
  if (!job->dropped)
    {
      Queue *queue = g_hash_table_lookup (self->queues, job->desk_film);
      Job *next = queue->next;
      self->n_done += job->effort == BT_EFFORT_FULL;
      queue->running = queue->next = NULL;
      desk_film_fit_done (job->desk_film, job->tally, job->effort, job->error);
      /* The film's observers may have asked for another fit meanwhile. */
      queue = g_hash_table_lookup (self->queues, job->desk_film);
      if (next && queue && !queue->running)
        {
          if (job->tally)
            {
              g_clear_pointer (&next->previous, bt_tally_unref);
              next->previous = bt_tally_ref (job->tally);
            }
          start (self, queue, next);
        }
      else if (next)
        job_free (next);
      else if (queue && !queue->running)
        remove_queue (self, job->desk_film);
    }
  job_free (job);
  return G_SOURCE_REMOVE;
}

static int
compare_jobs (gconstpointer a, gconstpointer b, gpointer data)
{
  /* What nobody waits for goes first: it only has to be thrown away. */
  return ((const Job *) b)->dropped - ((const Job *) a)->dropped;
}

static void
desk_fitter_finalize (GObject *object)
{
  DeskFitter *self = DESK_FITTER (object);
  g_clear_handle_id (&self->timer, g_source_remove);
  g_thread_pool_free (self->full_pool, FALSE, TRUE);
  g_thread_pool_free (self->quick_pool, FALSE, TRUE);
  g_hash_table_unref (self->queues);
  G_OBJECT_CLASS (desk_fitter_parent_class)->finalize (object);
}

static void
desk_fitter_class_init (DeskFitterClass *class)
{
  G_OBJECT_CLASS (class)->finalize = desk_fitter_finalize;
  changed_signal = g_signal_new ("changed", G_TYPE_FROM_CLASS (class), G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
}

static void
desk_fitter_init (DeskFitter *self)
{
  int threads = MAX (1, (int) g_get_num_processors () - 1);
  self->full_pool = g_thread_pool_new (work, NULL, threads, FALSE, NULL);
  g_thread_pool_set_sort_function (self->full_pool, compare_jobs, NULL);
  self->quick_pool = g_thread_pool_new (work, NULL, 1, FALSE, NULL);
  self->queues = g_hash_table_new_full (NULL, NULL, NULL, queue_free);
}

DeskFitter *
desk_fitter_new (void)
{
  return g_object_new (DESK_TYPE_FITTER, NULL);
}

void
desk_fitter_request (DeskFitter *self, DeskFilm *film, BtEffort effort)
{
  Job *job = g_new0 (Job, 1);
  BtTally *tally = desk_film_get_tally (film);
  job->fitter = g_object_ref (self);
  job->desk_film = g_object_ref (film);
  job->film = g_object_ref (desk_film_get_film (film));
  job->recipe = bt_recipe_copy (desk_film_get_recipe (film));
  job->previous = tally ? bt_tally_ref (tally) : NULL;
  job->effort = effort;
  job->cancellable = g_cancellable_new ();

  Queue *queue = g_hash_table_lookup (self->queues, film);
  if (!queue)
    {
      queue = g_new0 (Queue, 1);
      g_hash_table_insert (self->queues, film, queue);
    }
  g_clear_pointer (&queue->next, job_free);
  /* A quick fit is let finish, so that the picture follows the hand even while the hand never rests. */
  if (queue->running && queue->running->effort == BT_EFFORT_QUICK && effort == BT_EFFORT_QUICK)
    {
      queue->next = job;
      return;
    }
  if (queue->running)
    drop (queue->running);
  start (self, queue, job);
  g_signal_emit (self, changed_signal, 0);
}

void
desk_fitter_cancel (DeskFitter *self, DeskFilm *film)
{
  Queue *queue = g_hash_table_lookup (self->queues, film);
  if (!queue)
    return;
  if (queue->running)
    drop (queue->running);
  g_clear_pointer (&queue->next, job_free);
  remove_queue (self, film);
}

void
desk_fitter_cancel_all (DeskFitter *self)
{
  g_autoptr (GList) films = g_hash_table_get_keys (self->queues);
  for (GList *l = films; l; l = l->next)
    {
      g_autoptr (DeskFilm) film = g_object_ref (l->data);
      g_autoptr (GError) error = g_error_new_literal (BT_TALLY_ERROR, BT_TALLY_ERROR_CANCELLED,
                                                      _("The fit was cancelled. Choose “Fit again” to have it after all."));
      desk_fitter_cancel (self, film);
      desk_film_fit_done (film, NULL, BT_EFFORT_FULL, error);
    }
}

guint
desk_fitter_get_n_open (DeskFitter *self)
{
  return g_hash_table_size (self->queues);
}

double
desk_fitter_get_progress (DeskFitter *self)
{
  GHashTableIter iter;
  gpointer value;
  double done = self->n_done;
  guint n = self->n_done;
  g_hash_table_iter_init (&iter, self->queues);
  while (g_hash_table_iter_next (&iter, NULL, &value))
    {
      Job *job = ((Queue *) value)->running;
      n++;
      if (job)
        done += g_atomic_int_get (&job->progress_permille) / 1000.0;
    }
  return n ? done / n : 0;
}
