/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table_read.c - the rows: one record at a time into the columns that are kept (see table.h).
 */
#include "table/table_internal.h"

#include "luxgale/memory.h"

#include <math.h>
#include <string.h>

/* A column whose first value is no number becomes one of texts; all rows before were missing. */
static bool turn_into_text(struct lxg_table *table, struct lxg_column *column) {
  size_t *const text = lxg_alloc(table->capacity, sizeof *text);
  if (text == NULL) {
    return false;
  }
  lxg_free(column->number);
  column->number = NULL;
  column->text = text;
  column->type = LXG_COLUMN_TEXT;
  return true;
}

/* A field that is no acceptable number: remembered, and an error once somebody asks for the column. */
static bool note_bad(struct lxg_column *column, size_t row, const struct lxg_table_cell *cell) {
  column->number[row] = (double)NAN;
  if (column->bad_row != SIZE_MAX) {
    return true;
  }
  enum { SHOWN = 60 };
  const size_t size = cell->size < SHOWN ? cell->size : SHOWN;
  column->bad_text = lxg_alloc(size + 1, 1);
  if (column->bad_text == NULL) {
    return false;
  }
  for (size_t i = 0; i < size; i++) {
    const char c = cell->text[i];
    column->bad_text[i] = (unsigned char)c < 0x20 || (unsigned char)c > 0x7E ? '?' : c;
  }
  column->bad_row = row;
  return true;
}

static bool is_word(const struct lxg_table_cell *cell, const char *word) {
  return cell->size == strlen(word) && memcmp(cell->text, word, cell->size) == 0;
}

static bool number_of(const struct lxg_table_cell *cell, const struct lxg_table_type *type,
                      bool allow_not_finite, double *value) {
  if (type != NULL && type->truth) {
    *value = is_word(cell, "True") ? 1.0 : 0.0;
    return *value > 0.0 || is_word(cell, "False");
  }
  if (lxg_text_parse_number(cell->text, cell->size, allow_not_finite, value) != LXG_TEXT_NUMBER) {
    return false;
  }
  return type == NULL || !type->whole ||
         (*value >= type->minimum && *value <= type->maximum && *value == floor(*value));
}

static enum lxg_status take_text(struct lxg_table_reader *reader, struct lxg_column *column, size_t row,
                                 const struct lxg_table_cell *cell, struct lxg_error *error) {
  for (size_t i = 0; i < cell->size;) {
    const size_t length = lxg_text_utf8(cell->text + i, cell->size - i);
    if (length == 0) {
      return lxg_table_fail(reader, cell->column, error, LXG_INPUT, "table-byte",
                            "column %.60s: a text that is not UTF-8", column->name);
    }
    i += length;
  }
  const size_t place = lxg_table_keep_text(reader->table, cell->text, cell->size);
  if (place == SIZE_MAX) {
    return lxg_table_memory(reader->table, error);
  }
  column->text[row] = place;
  return LXG_OK;
}

static enum lxg_status take_cell(struct lxg_table_reader *reader, struct lxg_table_field *field,
                                 const struct lxg_table_cell *cell, size_t row, struct lxg_error *error) {
  struct lxg_table *const table = reader->table;
  struct lxg_column *const column = &table->column[field->target];
  const bool missing = cell->size == 0;
  if (!lxg_table_mark(table, column, row, missing)) {
    return lxg_table_memory(table, error);
  }
  if (missing) {
    if (column->type == LXG_COLUMN_NUMBER) {
      column->number[row] = (double)NAN;
    } else {
      column->text[row] = 0;
    }
    return LXG_OK;
  }
  if (!field->decided) {
    double value = 0.0;
    field->decided = true;
    if ((cell->quoted ||
         lxg_text_parse_number(cell->text, cell->size, true, &value) == LXG_TEXT_NOT_A_NUMBER) &&
        !turn_into_text(table, column)) {
      return lxg_table_memory(table, error);
    }
  }
  if (column->type == LXG_COLUMN_TEXT) {
    return take_text(reader, column, row, cell, error);
  }
  const bool allow = reader->options != NULL && reader->options->allow_not_finite;
  if (!number_of(cell, field->type, allow, &column->number[row]) && !note_bad(column, row, cell)) {
    return lxg_table_memory(table, error);
  }
  return LXG_OK;
}

static enum lxg_status take_row(struct lxg_table_reader *reader, struct lxg_error *error) {
  struct lxg_table *const table = reader->table;
  enum lxg_status status = lxg_table_split(reader, reader->fields, error);
  if (status == LXG_OK && reader->cells < reader->fields) {
    status = lxg_table_fail(reader, (uint32_t)reader->record.size + 1, error, LXG_INPUT, "table-ragged",
                            "%zu fields where the header has %zu", reader->cells, reader->fields);
  }
  if (status == LXG_OK) {
    status = lxg_table_reserve(table, table->rows + 1, error);
  }
  for (size_t i = 0; i < reader->fields && status == LXG_OK; i++) {
    if (reader->field[i].target != SIZE_MAX) {
      status = take_cell(reader, &reader->field[i], &reader->cell[i], table->rows, error);
    }
  }
  if (status == LXG_OK) {
    table->line[table->rows++] = reader->line;
  }
  return status;
}

static enum lxg_status take_rows(struct lxg_table_reader *reader, struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (bool got = true; got && status == LXG_OK;) {
    status = lxg_table_record(reader, &got, error);
    const char *const text = reader->record.data;
    const bool content =
        got && reader->record.size > 0 && text[0] != '#' && text[strspn(text, " \t")] != '\0';
    if (status == LXG_OK && content) {
      status = take_row(reader, error);
    }
  }
  return status;
}

static enum lxg_status read_all(struct lxg_table_reader *reader, struct lxg_table **table,
                                struct lxg_error *error) {
  enum lxg_status status = lxg_table_create(reader->name, &reader->table, error);
  if (status != LXG_OK) {
    return status;
  }
  reader->delimiter = ',';
  reader->table->line = lxg_alloc(0, sizeof *reader->table->line);
  status =
      reader->table->line != NULL ? lxg_table_header(reader, error) : lxg_table_memory(reader->table, error);
  if (status == LXG_OK) {
    status = take_rows(reader, error);
  }
  lxg_buffer_free(&reader->record);
  lxg_free(reader->cell);
  lxg_free(reader->field);
  lxg_free(reader->block);
  if (status != LXG_OK) {
    lxg_table_destroy(reader->table);
    return status;
  }
  *table = reader->table;
  return LXG_OK;
}

enum lxg_status lxg_table_read(const char *path, const struct lxg_table_options *options,
                               struct lxg_table **table, struct lxg_error *error) {
  struct lxg_input input;
  *table = NULL;
  enum lxg_status status = lxg_input_open(&input, path, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_table_reader reader = {.input = &input, .name = input.name, .options = options};
  status = read_all(&reader, table, error);
  if (status == LXG_OK) {
    lxg_checksum_finish(&input.checksum, (*table)->checksum);
  }
  lxg_input_close(&input);
  return status;
}

enum lxg_status lxg_table_parse(const char *bytes, size_t size, const char *name,
                                const struct lxg_table_options *options, struct lxg_table **table,
                                struct lxg_error *error) {
  *table = NULL;
  struct lxg_table_reader reader = {.name = name, .bytes = bytes, .have = size, .options = options};
  const enum lxg_status status = read_all(&reader, table, error);
  if (status == LXG_OK) {
    struct lxg_checksum checksum;
    lxg_checksum_init(&checksum);
    lxg_checksum_update(&checksum, bytes, size);
    lxg_checksum_finish(&checksum, (*table)->checksum);
  }
  return status;
}
