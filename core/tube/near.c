/* The transitions that lie nearest to an energy. */
#include <bandtally/tube.h>

#include <math.h>
#include <stdlib.h>

typedef struct
{
  BtTubeLine line;
  double distance_ev;
} Candidate;

static int
compare_candidates (const void *a, const void *b)
{
  double da = ((const Candidate *) a)->distance_ev, db = ((const Candidate *) b)->distance_ev;

  return (da > db) - (da < db);
}

static void
add_lines (GArray *candidates, BtTube tube, double energy_ev, double shift_ev)
{
  for (BtGroup group = 0; group < BT_N_GROUPS; group++)
    for (int branch = 0; branch < 2; branch++)
      {
        double line_ev = bt_tube_energy_ev (tube, group, branch, BT_REFERENCE_EMPIRICAL) - shift_ev;
        Candidate candidate = { { tube, group, branch, line_ev }, fabs (line_ev - energy_ev) };

        if (!isnan (line_ev))
          g_array_append_val (candidates, candidate);
      }
}

GArray *
bt_tube_lines_near (double energy_ev, double low_nm, double high_nm, double shift_ev, guint most)
{
  GArray *near = g_array_new (FALSE, FALSE, sizeof (BtTubeLine));
  GArray *candidates = g_array_new (FALSE, FALSE, sizeof (Candidate));
  GArray *tubes = bt_tubes_in_diameter (low_nm, high_nm);

  for (guint i = 0; i < tubes->len; i++)
    add_lines (candidates, g_array_index (tubes, BtTube, i), energy_ev, shift_ev);
  if (candidates->len > 0)
    qsort (candidates->data, candidates->len, sizeof (Candidate), compare_candidates);
  for (guint i = 0; i < MIN (most, candidates->len); i++)
    g_array_append_val (near, g_array_index (candidates, Candidate, i).line);
  g_array_unref (tubes);
  g_array_unref (candidates);
  return near;
}
