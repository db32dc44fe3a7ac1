/* Which signs separate a file's columns and decimals. */
#include "text-private.h"

#include <string.h>

/* Lines about the middle of the file that decide: any preamble is long past by then. */
#define SNIFFED_LINES 200

static gboolean
is_blank (char c)
{
  return c == ' ' || c == '\t';
}

static BtField
trimmed (const char *text, gsize n)
{
  while (n > 0 && is_blank (*text))
    {
      text++;
      n--;
    }
  while (n > 0 && is_blank (text[n - 1]))
    n--;
  if (n >= 2 && text[0] == '"' && text[n - 1] == '"')
    {
      text++;
      n -= 2;
    }
  return (BtField){ text, n };
}

gsize
bt_text_fields (const char *line, char delimiter, BtField *fields, gsize max)
{
  gsize count = 0;

  if (delimiter == ' ')
    {
      while (count < max)
        {
          gsize n;

          line += strspn (line, " \t");
          if (*line == '\0')
            break;
          n = strcspn (line, " \t");
          fields[count++] = trimmed (line, n);
          line += n;
        }
      return count;
    }
  while (count < max)
    {
      const char *start = line;
      gboolean quoted = FALSE;

      for (; *line != '\0' && (quoted || *line != delimiter); line++)
        if (*line == '"')
          quoted = !quoted;
      fields[count++] = trimmed (start, (gsize) (line - start));
      if (*line == '\0')
        break;
      line++;
    }
  /* A delimiter at the end of every line makes no column. */
  while (count > 0 && fields[count - 1].n == 0)
    count--;
  return count;
}

/* Number of fields, or 0 where the line is no row. @clean: whether every field is a number or a missing one. */
static gsize
row_fields (const char *line, BtDialect dialect, gboolean *clean)
{
  BtField fields[BT_MAX_COLUMNS];
  gsize n = bt_text_fields (line, dialect.delimiter, fields, BT_MAX_COLUMNS), numbers = 0, missing = 0;
  double value;

  if (n < 2 || !bt_text_number (fields[0].text, fields[0].n, dialect.decimal, &value))
    return 0;
  for (gsize i = 1; i < n; i++)
    if (bt_text_number (fields[i].text, fields[i].n, dialect.decimal, &value))
      numbers++;
    else if (bt_text_is_missing (fields[i].text, fields[i].n))
      missing++;
  *clean = numbers + missing == n - 1;
  return numbers + missing > 0 ? n : 0;
}

gboolean
bt_text_is_row (const char *line, BtDialect dialect)
{
  gboolean clean;

  return row_fields (line, dialect, &clean) > 0;
}

/* How many of the lines are rows with the commonest number of fields. Clean rows count twice: "1000,5 0,1" passes for three fields
 * between commas too, but then the middle one is no number. */
static gsize
score_of (char *const *lines, gsize n, BtDialect dialect)
{
  gsize counts[BT_MAX_COLUMNS + 1] = { 0 }, best = 0;

  for (gsize i = 0; i < n; i++)
    {
      gboolean clean;
      gsize fields = row_fields (lines[i], dialect, &clean);

      if (fields > 0)
        counts[fields] += clean ? 2 : 1;
    }
  for (gsize f = 2; f <= BT_MAX_COLUMNS; f++)
    best = MAX (best, counts[f]);
  return best;
}

gboolean
bt_text_sniff (char *const *lines, gsize n, BtDialect *dialect)
{
  /* Where two fit equally the earlier one wins: "1;2" before a decimal comma, and blanks last because they occur inside others. */
  static const BtDialect dialects[] = { { '\t', '.' }, { ';', '.' }, { ',', '.' }, { ';', ',' }, { '\t', ',' }, { ' ', '.' }, { ' ', ',' } };
  const gsize start = n > SNIFFED_LINES ? (n - SNIFFED_LINES) / 2 : 0, length = MIN (n, SNIFFED_LINES);
  gsize best = 0;

  for (gsize d = 0; d < G_N_ELEMENTS (dialects); d++)
    {
      gsize score = score_of (lines + start, length, dialects[d]);

      if (score > best)
        {
          best = score;
          *dialect = dialects[d];
        }
    }
  return best > 0;
}
