/* The tables in a text: which lines are rows, and which rows belong together. */
#include "text-private.h"

#include <string.h>

/* Lines by which a file's rows are estimated, and the longest of them that is looked into. */
#define GUESSED_LINES 8
#define LONGEST_GUESSED 4096

typedef struct {
  const BtText *text;
  BtRows *rows;
  BtTable run;              /* rows with nothing between them but comments */
  GArray *runs;             /* of BtTable */
  BtField *fields;
  const char *run_end;      /* text behind the last row */
  guint line, n_text;       /* lines that are no rows since the last row */
  gboolean in_run;
} Scan;

static gboolean
is_comment (const char *line, const char *end)
{
  while (line < end && (*line == ' ' || *line == '\t' || *line == '"'))
    line++;
  return line == end || *line == '#' || *line == '%' || *line == ';' || *line == '!' || (*line == '/' && line + 1 < end && line[1] == '/');
}

/* Makes room for a row like the widest one before it; wider ones take the slow way once. */
static inline gsize
make_room (BtRows *rows, gsize n)
{
  if (rows->n_values + n > rows->values_room)
    {
      rows->values_room = 2 * rows->values_room + n;
      rows->values = g_renew (double, rows->values, rows->values_room);
    }
  return MIN (rows->values_room - rows->n_values, BT_MAX_COLUMNS);
}

static gboolean
scan_row (Scan *scan, const char *at, const char *line_end, gsize *n)
{
  const BtDialect dialect = scan->rows->dialect;
  double *numbers;

  if (bt_text_row (at, line_end, dialect, scan->fields, n) == BT_ROW_NONE)
    return FALSE;
  make_room (scan->rows, *n);
  numbers = scan->rows->values + scan->rows->n_values;
  for (gsize i = 0; i < *n; i++)
    if (!bt_text_number (scan->fields[i].text, scan->fields[i].n, dialect.decimal, &numbers[i]))
      numbers[i] = (double) NAN;
    else if (i > 0 && scan->fields[i].text[scan->fields[i].n - 1] == '%')
      scan->rows->percent = TRUE;
  return TRUE;
}

static void
end_run (Scan *scan)
{
  if (scan->in_run)
    g_array_append_val (scan->runs, scan->run);
  scan->in_run = FALSE;
}

/* Takes the @n numbers that stand behind the last value as a row. */
static inline void
add_row (Scan *scan, const char *at, gsize n)
{
  BtRows *rows = scan->rows;

  if (!scan->in_run)
    {
      scan->run = (BtTable){ .above = scan->run_end, .top = at, .first_row = rows->n_rows, .first_line = scan->line,
                             .n_skipped = scan->n_text, .least = (guint32) n, .plain = TRUE };
      scan->in_run = TRUE;
    }
  scan->n_text = 0;
  scan->run.least = MIN (scan->run.least, (guint32) n);
  scan->run.most = MAX (scan->run.most, (guint32) n);
  scan->run.n_rows++;
  scan->run.last_line = scan->line;
  if (rows->n_rows == rows->rows_room)
    {
      rows->rows_room = 2 * rows->rows_room;
      rows->rows = g_renew (BtRow, rows->rows, rows->rows_room);
    }
  rows->rows[rows->n_rows++] = (BtRow){ (guint32) rows->n_values, (guint32) n };
  rows->last_line = scan->line;
  rows->n_values += n;
}

static gboolean
is_full (const double *values, gsize n)
{
  for (gsize i = 0; i < n; i++)
    if (isnan (values[i]))
      return FALSE;
  return TRUE;
}

static void
scan_lines (Scan *scan)
{
  const BtText *text = scan->text;
  BtRows *rows = scan->rows;
  const BtDialect dialect = rows->dialect;
  const char *at = text->at, *next, *last_end = text->end;

  while (last_end > at && last_end[-1] != '\n' && last_end[-1] != '\r')
    last_end--;
  for (scan->line = 1; at < text->end && rows->n_values <= rows->most; at = next)
    {
      guint lines = 1;
      gsize n;
      const gsize room = make_room (rows, 8);
      const char *line_end = at < last_end ? bt_text_scan_row (at, text->end, dialect, rows->values + rows->n_values, room, &n) : NULL;

      if (line_end != NULL)
        {
          next = line_end == text->end ? text->end : line_end + (line_end + 1 < text->end && line_end[0] == '\r' && line_end[1] == '\n' ? 2 : 1);
          add_row (scan, at, n);
          scan->run_end = next;
          scan->line++;
          continue;
        }
      line_end = bt_text_record_end (at, text->end, &next, &lines);
      if (scan_row (scan, at, line_end, &n))
        {
          add_row (scan, at, n);
          scan->run.plain = scan->run.plain && is_full (rows->values + rows->n_values - n, n);
          scan->run_end = next;
        }
      else if (at == line_end)
        end_run (scan);
      else if (!is_comment (at, line_end))
        {
          end_run (scan);
          scan->n_text++;
        }
      scan->line += lines;
    }
  end_run (scan);
}

/* The first number of a row. */
static double
x_of (const BtRows *rows, gsize row)
{
  for (gsize c = 0; c < rows->rows[row].n; c++)
    if (!isnan (bt_rows_value (rows, row, c)))
      return bt_rows_value (rows, row, c);
  return (double) NAN;
}

/* Whether @run goes on where @table stopped: a line of text among the rows makes no new table. */
static gboolean
continues (const BtRows *rows, const BtTable *table, const BtTable *run)
{
  double first, last;

  /* Behind one or two rows and a text the table proper begins; an empty line is no text. */
  if (table->n_rows < 3 && run->n_skipped > 0)
    return FALSE;
  if (table->n_rows < 2)
    return TRUE;
  first = x_of (rows, table->first_row);
  last = x_of (rows, table->first_row + table->n_rows - 1);
  return (x_of (rows, run->first_row) - last) * (last - first) > 0;
}

/* Joins runs to tables; short ones that stand alone are numbers in a preamble or footer. */
static void
join_runs (BtRows *rows, const GArray *runs)
{
  BtTable table = { .n_rows = 0 }, longest = { .n_rows = 0 };

  for (guint i = 0; i < runs->len; i++)
    {
      const BtTable *run = &g_array_index (runs, BtTable, i);

      if (table.n_rows > 0 && continues (rows, &table, run))
        {
          /* Short runs between the two were blanked. */
          table.n_rows = run->first_row + run->n_rows - table.first_row;
          table.last_line = run->last_line;
          table.n_skipped += run->n_skipped;
          table.least = MIN (table.least, run->least);
          table.most = MAX (table.most, run->most);
          table.plain = table.plain && run->plain;
        }
      else if (table.n_rows >= BT_SPECTRUM_MIN_POINTS && run->n_rows < BT_SPECTRUM_MIN_POINTS)
        {
          for (gsize r = 0; r < run->n_rows; r++)
            rows->rows[run->first_row + r].n = 0;
          table.plain = FALSE;
          continue;
        }
      else
        {
          if (table.n_rows >= BT_SPECTRUM_MIN_POINTS)
            g_array_append_val (rows->tables, table);
          table = *run;
          table.n_skipped = 0;
        }
      if (table.n_rows > longest.n_rows)
        longest = table;
    }
  if (table.n_rows >= BT_SPECTRUM_MIN_POINTS)
    g_array_append_val (rows->tables, table);
  else if (rows->tables->len == 0)
    g_array_append_val (rows->tables, longest);
}

/* Room for the rows and values that the file seems to hold, by the lines in its middle: what is asked for need not grow, nor be paid for in vain. */
static void
guess_room (const BtText *text, BtRows *rows, BtField *fields)
{
  const gsize size = (gsize) (text->end - text->at);
  const char *at, *start;
  gsize lines = 0, n_fields = 2;

  bt_text_line_end (text->at + size / 2, text->end, &start);
  for (at = start; at < text->end && lines < GUESSED_LINES; lines++)
    {
      const char *next, *line_end = bt_text_line_end (at, text->end, &next);

      if (line_end - at < LONGEST_GUESSED)
        n_fields = MAX (n_fields, bt_text_fields (at, line_end, rows->dialect.delimiter, fields, BT_MAX_COLUMNS));
      at = next;
    }
  rows->rows_room = 16 + (lines > 0 ? size / MAX ((gsize) (at - start) / lines, 4) : size / 16) / 8 * 9;
  /* Fields are two bytes at least. */
  rows->values_room = 16 + MIN (rows->rows_room * n_fields, size / 2);
}

static void
read_rows (const BtText *text, BtRows *rows)
{
  Scan scan = { .text = text, .rows = rows, .runs = g_array_new (FALSE, FALSE, sizeof (BtTable)), .run_end = text->at };

  bt_rows_clear (rows);
  scan.fields = g_new (BtField, BT_MAX_COLUMNS);
  guess_room (text, rows, scan.fields);
  rows->rows = g_new (BtRow, rows->rows_room);
  rows->values = g_new (double, rows->values_room);
  rows->tables = g_array_new (FALSE, TRUE, sizeof (BtTable));
  rows->percent = FALSE;
  scan_lines (&scan);
  rows->below = scan.run_end;
  rows->too_many = rows->n_values > rows->most;
  if (rows->n_rows > 0)
    join_runs (rows, scan.runs);
  g_free (scan.fields);
  g_array_unref (scan.runs);
}

gboolean
bt_text_rows (const BtText *text, BtRows *rows)
{
  gsize lines = 0;

  if (bt_text_sniff (text, FALSE, &rows->dialect))
    {
      read_rows (text, rows);
      if (rows->too_many)
        return TRUE;
      if (rows->n_rows > 0)
        {
          for (guint i = 0; i < rows->tables->len; i++)
            lines += g_array_index (rows->tables, BtTable, i).n_rows;
          /* The lines looked at may have held no decimals: what is left over tells. */
          if (lines >= BT_SPECTRUM_MIN_POINTS && lines * 10 >= (gsize) rows->last_line * 9
                                                                 - g_array_index (rows->tables, BtTable, 0).first_line * 9)
            return TRUE;
        }
    }
  if (!bt_text_sniff (text, TRUE, &rows->dialect))
    return FALSE;
  read_rows (text, rows);
  return rows->n_rows > 0;
}

void
bt_rows_clear (BtRows *rows)
{
  g_clear_pointer (&rows->values, g_free);
  g_clear_pointer (&rows->rows, g_free);
  rows->n_values = rows->n_rows = rows->values_room = rows->rows_room = 0;
  g_clear_pointer (&rows->tables, g_array_unref);
}
