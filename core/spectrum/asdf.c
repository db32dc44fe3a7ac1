/* Ordinates in ASCII squeezed difference form. */
#include "jcamp-private.h"

#include <string.h>

#include <glib/gi18n-lib.h>

typedef enum { FORM_NONE, FORM_PLAIN, FORM_DIFFERENCE, FORM_DUPLICATE } Form;

/* The pseudo-digits: each is delimiter, sign and leading digit in one (table in the standard). */
static gboolean
squeezed (char c, int *digit)
{
  if (c >= '@' && c <= 'I')
    *digit = c - '@';
  else if (c >= 'a' && c <= 'i')
    *digit = -(c - 'a' + 1);
  else
    return FALSE;
  return TRUE;
}

static gboolean
difference (char c, int *digit)
{
  if (c == '%')
    *digit = 0;
  else if (c >= 'J' && c <= 'R')
    *digit = c - 'J' + 1;
  else if (c >= 'j' && c <= 'r')
    *digit = -(c - 'j' + 1);
  else
    return FALSE;
  return TRUE;
}

static gboolean
duplicate (char c, int *digit)
{
  if (c >= 'S' && c <= 'Z')
    *digit = c - 'S' + 1;
  else if (c == 's')
    *digit = 9;
  else
    return FALSE;
  return TRUE;
}

/* E is a squeezed +5 in packed lines and an exponent in others. */
static gboolean
is_packed (const char *at, const char *end)
{
  int digit;

  for (; at < end; at++)
    if (*at != 'E' && *at != 'e' && (squeezed (*at, &digit) || difference (*at, &digit) || duplicate (*at, &digit)))
      return TRUE;
  return FALSE;
}

/* The number behind a leading digit, of which it has the sign. */
static const char *
tail_digits (const char *at, const char *end, int digit, double *value)
{
  *value = ABS (digit);
  for (; at < end && g_ascii_isdigit (*at); at++)
    *value = 10 * *value + (*at - '0');
  if (digit < 0)
    *value = -*value;
  return at;
}

static const char *
plain_number (const char *at, const char *end, gboolean packed, double *value)
{
  const char *stop = at + 1;

  if (packed)
    {
      while (stop < end && (g_ascii_isdigit (*stop) || *stop == '.'))
        stop++;
      end = stop;
    }
  else
    /* An E that no power follows is a squeezed +5 after all. */
    for (; stop < end; stop++)
      if ((*stop | 0x20) == 'e' && !(stop + 1 < end && strchr ("+-0123456789", stop[1]) != NULL))
        end = stop;
  return bt_text_scan_number (at, end, '.', value);
}

static gboolean
broken (GError **error, guint line, const char *what)
{
  g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_FORMAT, _ ("line %u: %s; export the spectrum again."), line, what);
  return FALSE;
}

/* One ordinate, or none where it is the first of its line and repeats the last one of the line before. */
static gboolean
push (BtAsdf *asdf, double value, gboolean first, guint line, gboolean *repeats, GError **error)
{
  if (first && asdf->ends_in_difference && asdf->ordinates->len > 0)
    {
      double *last = &g_array_index (asdf->ordinates, double, asdf->ordinates->len - 1);

      *repeats = TRUE;
      if (!(*last >= value && *last <= value) && asdf->n_failed++ == 0)
        asdf->failed_line = line;
      *last = value;
      return TRUE;
    }
  if (asdf->ordinates->len >= asdf->most)
    return broken (error, line, _ ("it holds more points than are read (as many as the file has bytes, 10 million at most)"));
  g_array_append_val (asdf->ordinates, value);
  return TRUE;
}

gboolean
bt_asdf_line (BtAsdf *asdf, const char *at, const char *end, guint line, double *x, gboolean *repeats, GError **error)
{
  const gboolean packed = is_packed (at, end);
  Form form = FORM_NONE, repeated = FORM_NONE;
  double value = 0, step = 0;

  *repeats = FALSE;
  at = plain_number (at, end, packed, x);
  if (at == NULL)
    return broken (error, line, _ ("a line of the table begins without its abscissa"));
  while (at < end)
    {
      const gboolean first = form == FORM_NONE;
      int digit;

      if (*at == ' ' || *at == '\t' || *at == ',' || *at == ';')
        {
          at++;
          continue;
        }
      if (*at == '?')
        {
          value = (double) NAN;
          at++;
          form = FORM_PLAIN;
        }
      else if (g_ascii_isdigit (*at) || *at == '+' || *at == '-' || *at == '.')
        {
          at = plain_number (at, end, packed, &value);
          if (at == NULL)
            return broken (error, line, _ ("a sign stands without a number behind it"));
          form = FORM_PLAIN;
        }
      else if (squeezed (*at, &digit))
        {
          at = tail_digits (at + 1, end, digit, &value);
          form = FORM_PLAIN;
        }
      else if (difference (*at, &digit))
        {
          if (first)
            return broken (error, line, _ ("the ordinates of a line may not begin with a difference"));
          at = tail_digits (at + 1, end, digit, &step);
          value += step;
          form = FORM_DIFFERENCE;
        }
      else if (duplicate (*at, &digit))
        {
          double count;

          if (first || form == FORM_DUPLICATE)
            return broken (error, line, _ ("a count of repetitions stands where there is nothing to repeat"));
          repeated = form;
          at = tail_digits (at + 1, end, digit, &count);
          for (double k = 1; k < count; k++)
            {
              value += repeated == FORM_DIFFERENCE ? step : 0;
              if (!push (asdf, value, FALSE, line, repeats, error))
                return FALSE;
            }
          form = FORM_DUPLICATE;
          continue;
        }
      else
        return broken (error, line, _ ("the table holds a sign that no number has"));
      if (!push (asdf, value, first, line, repeats, error))
        return FALSE;
    }
  asdf->ends_in_difference = form == FORM_DIFFERENCE || (form == FORM_DUPLICATE && repeated == FORM_DIFFERENCE);
  return TRUE;
}
