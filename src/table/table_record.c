/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table_record.c - bytes to records to fields: lines, quotes, limits.
 *
 * A record is a line, or several when a double-quoted field holds line breaks (an odd number of quotes so far). Only the
 * record at hand is in memory.
 */
#include "table/table_internal.h"

#include "luxgale/memory.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

enum { BLOCK = 65536 };

enum lxg_status lxg_table_fail(const struct lxg_table_reader *reader, uint32_t column,
                               struct lxg_error *error, enum lxg_status status, const char *code,
                               const char *format, ...) {
  char text[200];
  va_list arguments;
  va_start(arguments, format);
  vsnprintf(text, sizeof text, format, arguments);
  va_end(arguments);
  if (column > 0) {
    return lxg_error_set(error, status, code, "%.100s:%u:%u: error: %s", reader->name, (unsigned)reader->line,
                         (unsigned)column, text);
  }
  return lxg_error_set(error, status, code, "%.100s:%u: error: %s", reader->name, (unsigned)reader->line,
                       text);
}

/* More bytes at reader->bytes; sets `ended` when there are none. */
static enum lxg_status fill(struct lxg_table_reader *reader, struct lxg_error *error) {
  if (reader->at < reader->have) {
    return LXG_OK;
  }
  if (reader->input == NULL) {
    reader->ended = true;
    return LXG_OK;
  }
  if (reader->block == NULL) {
    reader->block = lxg_alloc(BLOCK, 1);
    if (reader->block == NULL) {
      return lxg_table_memory(reader->table, error);
    }
  }
  reader->bytes = reader->block;
  reader->at = 0;
  const enum lxg_status status = lxg_input_block(reader->input, reader->block, BLOCK, &reader->have, error);
  reader->ended = reader->have == 0;
  return status;
}

/* Appends bytes up to and without the line break; `*complete` tells that it was reached. */
static enum lxg_status take_part(struct lxg_table_reader *reader, bool *complete, struct lxg_error *error) {
  const char *const from = reader->bytes + reader->at;
  const size_t left = reader->have - reader->at;
  const char *const stop = memchr(from, '\n', left);
  const size_t size = stop != NULL ? (size_t)(stop - from) : left;
  if (size > LXG_TABLE_LINE_BYTES - reader->record.size) {
    return lxg_table_fail(reader, 0, error, LXG_LIMIT, "table-limit", "a record of more than %d bytes",
                          LXG_TABLE_LINE_BYTES);
  }
  const char *const zero = memchr(from, '\0', size);
  if (zero != NULL) {
    return lxg_table_fail(reader, (uint32_t)(reader->record.size + (size_t)(zero - from) + 1), error,
                          LXG_INPUT, "table-byte", "a zero byte: this is not a text file");
  }
  lxg_buffer_append(&reader->record, from, size);
  reader->at += size + (stop != NULL ? 1 : 0);
  *complete = stop != NULL;
  return lxg_buffer_status(&reader->record, error);
}

static size_t count_quotes(const char *text, size_t size) {
  size_t count = 0;
  const char *const end = text + size;
  for (const char *at = text; (at = memchr(at, '"', (size_t)(end - at))) != NULL; at++) {
    count++;
  }
  return count;
}

/* One line, appended to the record. */
static enum lxg_status take_line(struct lxg_table_reader *reader, bool *got, struct lxg_error *error) {
  *got = false;
  for (bool complete = false; !complete;) {
    enum lxg_status status = fill(reader, error);
    if (status != LXG_OK) {
      return status;
    }
    if (reader->ended) {
      break;
    }
    *got = true;
    status = take_part(reader, &complete, error);
    if (status != LXG_OK) {
      return status;
    }
  }
  if (*got) {
    reader->lines++;
    if (reader->record.size > 0 && reader->record.data[reader->record.size - 1] == '\r') {
      reader->record.data[--reader->record.size] = '\0';
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_table_record(struct lxg_table_reader *reader, bool *got, struct lxg_error *error) {
  reader->record.size = 0;
  reader->line = reader->lines + 1;
  enum lxg_status status = take_line(reader, got, error);
  size_t counted = 0, quotes = 0;
  while (status == LXG_OK && *got && reader->record.size > 0 && reader->record.data[0] != '#') {
    quotes += count_quotes(reader->record.data + counted, reader->record.size - counted);
    counted = reader->record.size;
    if (quotes % 2 == 0) {
      break;
    }
    bool more = false;
    lxg_buffer_byte(&reader->record, '\n');
    status = take_line(reader, &more, error);
    if (status == LXG_OK && !more) {
      return lxg_table_fail(reader, (uint32_t)(strchr(reader->record.data, '"') - reader->record.data) + 1,
                            error, LXG_INPUT, "table-quote",
                            "a double quote is not closed before the end of the file");
    }
  }
  if (status == LXG_OK && *got && reader->line == 1 && reader->record.size >= 3 &&
      memcmp(reader->record.data, "\xEF\xBB\xBF", 3) == 0) { /* byte order mark */
    reader->record.size -= 3;
    memmove(reader->record.data, reader->record.data + 3, reader->record.size + 1);
  }
  return status;
}

static struct lxg_table_cell *new_cell(struct lxg_table_reader *reader) {
  if (reader->cells == reader->cell_capacity) {
    const size_t capacity = reader->cell_capacity * 2 + 16;
    struct lxg_table_cell *const grown = lxg_realloc(reader->cell, capacity, sizeof *grown);
    if (grown == NULL) {
      return NULL;
    }
    reader->cell = grown;
    reader->cell_capacity = capacity;
  }
  return &reader->cell[reader->cells++];
}

static bool is_blank(char c) {
  return c == ' ' || c == '\t';
}

/* A double-quoted field at `at`; inner quotes are undoubled in place. Returns the place behind the closing quote, or NULL
 * if there is none. */
static char *take_quoted(char *at, const char *end, struct lxg_table_cell *cell) {
  char *to = ++at;
  cell->text = to;
  cell->quoted = true;
  while (at < end) {
    if (*at == '"') {
      if (at + 1 < end && at[1] == '"') {
        at++;
      } else {
        cell->size = (size_t)(to - cell->text);
        return at + 1;
      }
    }
    *to++ = *at++;
  }
  return NULL;
}

static char *take_bare(char *at, const char *end, char delimiter, struct lxg_table_cell *cell) {
  cell->text = at;
  cell->quoted = false;
  while (at < end && *at != delimiter && !(delimiter == ' ' && *at == '\t')) {
    at++;
  }
  const char *last = at;
  while (last > cell->text && is_blank(last[-1])) {
    last--;
  }
  cell->size = (size_t)(last - cell->text);
  return at;
}

enum lxg_status lxg_table_split(struct lxg_table_reader *reader, size_t most, struct lxg_error *error) {
  char *const start = reader->record.data;
  char *const end = start + reader->record.size;
  char *at = start;
  reader->cells = 0;
  for (;;) {
    while (at < end && is_blank(*at)) {
      at++;
    }
    if (reader->delimiter == ' ' && at == end && reader->cells > 0) {
      return LXG_OK;
    }
    const uint32_t column = (uint32_t)(at - start) + 1;
    if (reader->cells >= LXG_TABLE_COLUMNS) {
      return lxg_table_fail(reader, column, error, LXG_LIMIT, "table-limit", "more than %d columns",
                            LXG_TABLE_COLUMNS);
    }
    if (reader->cells >= most) {
      return lxg_table_fail(reader, column, error, LXG_INPUT, "table-ragged",
                            "more than the %zu fields of the header", most);
    }
    struct lxg_table_cell *const cell = new_cell(reader);
    if (cell == NULL) {
      return lxg_table_memory(reader->table, error);
    }
    cell->column = column;
    at = at < end && *at == '"' ? take_quoted(at, end, cell) : take_bare(at, end, reader->delimiter, cell);
    while (at != NULL && at < end && is_blank(*at) && *at != reader->delimiter) {
      at++;
    }
    const bool stray = !cell->quoted && cell->size > 0 && memchr(cell->text, '"', cell->size) != NULL;
    if (at == NULL || stray || (at < end && *at != reader->delimiter && !is_blank(*at))) {
      return lxg_table_fail(reader, column, error, LXG_INPUT, "table-quote",
                            "double quotes must enclose a whole field; inside they are doubled");
    }
    if (at >= end) {
      return LXG_OK;
    }
    at++;
  }
}
