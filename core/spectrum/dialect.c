/* Which signs separate a file's columns and decimals. */
#include "text-private.h"

#include <string.h>

/* Lines that are looked at in each of three places of a long file; short files are looked at whole. */
#define SNIFFED_LINES 8
#define SHORT_FILE 2048
/* Of a long file "all" lines are those in so many slices of it. */
#define LONG_FILE (8u << 20)
#define SLICES 16
/* The fewest rows among the lines looked at that are taken for an answer. */
#define SURE_ROWS 8

/* The longest field over several lines that is taken for one. */
#define RECORD_LINES 64
#define RECORD_BYTES 4000

static gboolean
is_blank (char c)
{
  return c == ' ' || c == '\t';
}

/* Whether a quote here opens a field: it stands behind a delimiter or another field in quotes, not behind words. */
static gboolean
opens (const char *line, const char *quote)
{
  while (quote > line && quote[-1] == ' ')
    quote--;
  return quote == line || strchr ("\t,;|\"", quote[-1]) != NULL;
}

/* The quote that closes the field that begins behind the one at @at, NULL where none does before @end. */
static const char *
closing_quote (const char *at, const char *end)
{
  while ((at = memchr (at + 1, '"', (gsize) (end - at - 1))) != NULL)
    if (at + 1 < end && at[1] == '"')
      at++;
    else
      return at;
  return NULL;
}

/* The quote that is still open at a line's end, or NULL. */
static const char *
open_quote (const char *line, const char *line_end)
{
  const char *at = memchr (line, '"', (gsize) (line_end - line));

  while (at != NULL)
    {
      if (opens (line, at))
        {
          const char *close = closing_quote (at, line_end);

          if (close == NULL)
            return at;
          at = close;
        }
      at = memchr (at + 1, '"', (gsize) (line_end - at - 1));
    }
  return NULL;
}

const char *
bt_text_record_end (const char *at, const char *end, const char **next, guint *lines)
{
  const char *line_end = bt_text_line_end (at, end, next), *quote = open_quote (at, line_end), *record_end = line_end, *record_next = *next;

  for (*lines = 1; quote != NULL && record_next < end;)
    {
      const char *line = record_next, *close;

      record_end = bt_text_line_end (line, end, &record_next);
      if (++*lines > RECORD_LINES || record_end - at > RECORD_BYTES)
        break;
      close = closing_quote (line - 1, record_end);
      if (close == NULL)
        continue;
      if (close + 1 < record_end && strchr (" \t,;|", close[1]) == NULL)
        break;
      quote = open_quote (close + 1, record_end);
      if (quote == NULL)
        {
          *next = record_next;
          return record_end;
        }
    }
  *lines = 1;
  return line_end;
}

char *
bt_text_words (const char *text, gsize n)
{
  GString *words = g_string_sized_new (n);

  for (gsize i = 0; i < n; i++)
    {
      const gboolean breaks = text[i] == '\n' || text[i] == '\r';

      if (text[i] == '"' && i + 1 < n && text[i + 1] == '"')
        i++;
      if (!breaks)
        g_string_append_c (words, text[i]);
      else if (words->len > 0 && words->str[words->len - 1] != ' ')
        g_string_append_c (words, ' ');
    }
  return g_string_free (words, FALSE);
}

static BtField
trimmed (const char *text, const char *end)
{
  while (text < end && is_blank (*text))
    text++;
  while (end > text && is_blank (end[-1]))
    end--;
  if (end - text >= 2 && text[0] == '"' && end[-1] == '"')
    {
      text++;
      end--;
      while (text < end && is_blank (*text))
        text++;
      while (end > text && is_blank (end[-1]))
        end--;
    }
  return (BtField){ text, (gsize) (end - text) };
}

gsize
bt_text_fields (const char *line, const char *end, char delimiter, BtField *fields, gsize max)
{
  gsize count = 0;

  while (count < max)
    {
      const char *start;
      gboolean quoted = FALSE;

      if (delimiter == ' ')
        {
          while (line < end && is_blank (*line))
            line++;
          if (line == end)
            break;
        }
      for (start = line; line < end && (quoted || (delimiter == ' ' ? !is_blank (*line) : *line != delimiter)); line++)
        if (*line == '"')
          quoted = !quoted;
      fields[count++] = trimmed (start, line);
      if (line == end)
        break;
      line++;
    }
  return count;
}

BtRowKind
bt_text_row (const char *line, const char *end, BtDialect dialect, BtField *fields, gsize *n)
{
  gsize numbers = 0, missing = 0, text = 0;
  double value;

  *n = bt_text_fields (line, end, dialect.delimiter, fields, BT_MAX_COLUMNS);
  if (*n < 2)
    return BT_ROW_NONE;
  for (gsize i = 0; i < *n; i++)
    if (bt_text_number (fields[i].text, fields[i].n, dialect.decimal, &value))
      numbers++;
    else if (numbers == 0 && fields[i].n > 0)
      return BT_ROW_NONE;
    else if (bt_text_is_missing (fields[i].text, fields[i].n))
      missing += numbers > 0 ? 1 : 0;
    else
      text++;
  if (numbers == 0 || numbers + missing < 2)
    return BT_ROW_NONE;
  return text > 0 ? BT_ROW_WITH_TEXT : BT_ROW_STRICT;
}

/* Where several fit equally the earlier one wins: blanks come last because they occur inside others. Decimal commas between commas are
 * possible in quotes. */
static const BtDialect dialects[] = { { '\t', '.' }, { ';', '.' }, { '|', '.' }, { ',', '.' }, { ';', ',' }, { '\t', ',' }, { '|', ',' },
                                      { ' ', '.' },  { ' ', ',' }, { ',', ',' } };

typedef struct { BtDialect dialect; gsize lines, strict, with_text, fields; gboolean even; } Score;

static void
score_lines (const char *at, const char *end, gsize max_lines, Score *score, BtField *fields)
{
  for (gsize i = 0; at < end && i < max_lines; i++)
    {
      guint lines;
      const char *next, *line_end = bt_text_record_end (at, end, &next, &lines);
      gsize n = 0;
      BtRowKind kind = BT_ROW_NONE;

      if (score->dialect.delimiter == ' ' || memchr (at, score->dialect.delimiter, (gsize) (line_end - at)) != NULL)
        kind = bt_text_row (at, line_end, score->dialect, fields, &n);

      if (line_end > at)
        score->lines++;
      if (kind == BT_ROW_STRICT)
        {
          score->even = score->even && (score->strict == 0 || score->fields == n);
          score->strict++;
          score->fields = n;
        }
      else if (kind == BT_ROW_WITH_TEXT)
        score->with_text++;
      at = next;
    }
}

static void
score_text (const BtText *text, gboolean all, Score *score, BtField *fields)
{
  const gsize size = (gsize) (text->end - text->at);

  if (all && size > LONG_FILE)
    {
      for (gsize k = 0; k < SLICES; k++)
        score_lines (text->at + size / SLICES * k, text->at + size / SLICES * k + LONG_FILE / SLICES, G_MAXSIZE, score, fields);
      return;
    }
  if (all || size < SHORT_FILE)
    {
      score_lines (text->at, text->end, G_MAXSIZE, score, fields);
      return;
    }
  for (gsize k = 1; k < 4; k++)
    {
      const char *next;

      bt_text_line_end (text->at + size * k / 4, text->end, &next);
      score_lines (next, text->end, SNIFFED_LINES, score, fields);
    }
}

gboolean
bt_text_sniff (const BtText *text, gboolean all, BtDialect *dialect)
{
  g_autofree BtField *fields = g_new (BtField, BT_MAX_COLUMNS);
  gsize best = 0;

  for (gsize d = 0; d < G_N_ELEMENTS (dialects); d++)
    {
      Score score = { .dialect = dialects[d], .even = TRUE };
      gsize points;

      score_text (text, all, &score, fields);
      /* Rows with words among the numbers count half, so that "400;0,5" is not taken for the columns 400 and 5 of a comma. */
      points = 4 * score.strict + 2 * score.with_text + (score.even ? score.strict : 0);
      if (points > best)
        {
          best = points;
          *dialect = dialects[d];
        }
      /* Every line a row of the same form: nothing behind can fit better. */
      if (score.even && score.strict == score.lines && score.strict >= SURE_ROWS)
        return TRUE;
    }
  return all || (gsize) (text->end - text->at) < SHORT_FILE ? best > 0 : best >= 4 * SURE_ROWS;
}
