/* JCAMP-DX, after R. S. McDonald and P. A. Wilks, Appl. Spectrosc. 42, 151 (1988). Private to core/spectrum. */
#ifndef BANDTALLY_JCAMP_PRIVATE_H
#define BANDTALLY_JCAMP_PRIVATE_H

#include "spectrum-private.h"
#include "text-private.h"

/* Whether the text begins with a labelled record. */
G_GNUC_INTERNAL gboolean bt_jcamp_is (const BtText *text);
/* Appends every spectrum of the file. FALSE with @error set where there is none. */
G_GNUC_INTERNAL gboolean bt_jcamp_read (const BtText *text, const BtReadOptions *options, BtSource *source, GPtrArray *spectra, GError **error);

/* Abscissa @i of @n in equal steps from @first to @last. Where the ends are decimals of few places it is the double nearest to the decimal that
 * the steps lead to. */
G_GNUC_INTERNAL double bt_jcamp_abscissa (double first, double last, gsize n, gsize i);

/**
 * BtAsdf:
 * @ordinates: (element-type double): so far; NAN for a missing one ("?")
 * @most: more ordinates than these are refused
 * @ends_in_difference: the line before ended with a difference, so the next one repeats its last ordinate
 * @n_failed: lines whose repeated ordinate differed; @failed_line is the first of them
 *
 * State of reading the ordinates of (X++(Y..Y)), in any of the forms AFFN, PAC, SQZ, DIF and DUP.
 */
typedef struct {
  GArray *ordinates;
  gsize most;
  gboolean ends_in_difference;
  guint n_failed, failed_line;
} BtAsdf;
/* Reads a line: its abscissa to @x, its ordinates to @asdf->ordinates without the one that only repeats (then @repeats). FALSE with @error set
 * where the line breaks the rules. */
G_GNUC_INTERNAL gboolean bt_asdf_line (BtAsdf *asdf, const char *at, const char *end, guint line, double *x, gboolean *repeats, GError **error);

#endif
