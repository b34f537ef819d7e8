/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table.c - life of a table, its columns and rows (see table.h).
 */
#include "table/table_internal.h"

#include "luxgale/memory.h"

#include <math.h>
#include <string.h>
#include <strings.h>

enum lxg_status lxg_table_memory(const struct lxg_table *table, struct lxg_error *error) {
  return lxg_error_set(error, LXG_MEMORY, "memory", "%.120s: error: out of memory at %zu rows", table->name,
                       table->rows);
}

enum lxg_status lxg_table_create(const char *name, struct lxg_table **table, struct lxg_error *error) {
  *table = NULL;
  struct lxg_table *const fresh = lxg_alloc(1, sizeof *fresh);
  char *const copy = fresh != NULL ? lxg_strdup(name) : NULL;
  if (copy == NULL) {
    lxg_free(fresh);
    return lxg_error_set(error, LXG_MEMORY, "memory", "%.120s: error: out of memory", name);
  }
  fresh->name = copy;
  *table = fresh;
  return LXG_OK;
}

void lxg_table_destroy(struct lxg_table *table) {
  if (table == NULL) {
    return;
  }
  for (size_t i = 0; i < table->columns; i++) {
    struct lxg_column *const column = &table->column[i];
    lxg_free(column->name);
    lxg_free(column->unit);
    lxg_free(column->description);
    lxg_free(column->number);
    lxg_free(column->text);
    lxg_free(column->missing);
    lxg_free(column->bad_text);
  }
  lxg_free(table->column);
  lxg_free(table->line);
  lxg_free(table->name);
  lxg_buffer_free(&table->texts);
  lxg_document_destroy(table->document);
  lxg_free(table);
}

static char *copy_bytes(const char *bytes, size_t size) {
  char *const copy = lxg_alloc(size + 1, 1);
  if (copy != NULL && size > 0) {
    memcpy(copy, bytes, size);
  }
  return copy;
}

enum lxg_status lxg_table_new_column(struct lxg_table *table, const char *name, size_t name_size,
                                     const char *unit, size_t unit_size, const char *description,
                                     enum lxg_column_type type, struct lxg_error *error) {
  struct lxg_column *const grown = lxg_realloc(table->column, table->columns + 1, sizeof *grown);
  if (grown == NULL) {
    return lxg_table_memory(table, error);
  }
  table->column = grown;
  struct lxg_column *const column =
      &grown[table->columns++]; /* counted at once, so destroy frees what it has */
  *column = (struct lxg_column){.type = type, .bad_row = SIZE_MAX};
  column->name = copy_bytes(name, name_size);
  column->unit = copy_bytes(unit, unit_size);
  column->description = copy_bytes(description, strlen(description));
  if (type == LXG_COLUMN_NUMBER) {
    column->number = lxg_alloc(table->capacity, sizeof *column->number);
  } else {
    column->text = lxg_alloc(table->capacity, sizeof *column->text);
  }
  if (column->name == NULL || column->unit == NULL || column->description == NULL ||
      (column->number == NULL && column->text == NULL)) {
    return lxg_table_memory(table, error);
  }
  return LXG_OK;
}

/* Grows one array of the table; false if out of memory. */
static bool grow(void **array, size_t rows, size_t size) {
  if (*array == NULL) {
    return true;
  }
  void *const grown = lxg_realloc(*array, rows, size);
  *array = grown != NULL ? grown : *array;
  return grown != NULL;
}

/* New rows hold nothing yet: whoever adds one sets and marks it. */
static bool grow_column(struct lxg_column *column, size_t rows) {
  void *number = column->number, *text = column->text, *missing = column->missing;
  const bool grown = grow(&number, rows, sizeof *column->number) && grow(&text, rows, sizeof *column->text) &&
                     grow(&missing, rows, sizeof *column->missing);
  column->number = number;
  column->text = text;
  column->missing = missing;
  return grown;
}

enum lxg_status lxg_table_reserve(struct lxg_table *table, size_t rows, struct lxg_error *error) {
  if (rows > LXG_TABLE_ROWS) {
    return lxg_error_set(error, LXG_LIMIT, "table-limit", "%.120s: error: more than %d rows", table->name,
                         LXG_TABLE_ROWS);
  }
  if (rows <= table->capacity) {
    return LXG_OK;
  }
  const size_t ample = table->capacity + table->capacity / 2 + 16;
  const size_t capacity = ample > rows ? ample : rows;
  void *line = table->line;
  bool grown = grow(&line, capacity, sizeof *table->line);
  table->line = line;
  for (size_t i = 0; i < table->columns && grown; i++) {
    grown = grow_column(&table->column[i], capacity);
  }
  if (!grown) {
    return lxg_table_memory(table, error);
  }
  table->capacity = capacity;
  return LXG_OK;
}

bool lxg_table_mark(struct lxg_table *table, struct lxg_column *column, size_t row, bool missing) {
  if (column->missing == NULL) {
    if (!missing) {
      return true;
    }
    column->missing = lxg_alloc(table->capacity, sizeof *column->missing);
    if (column->missing == NULL) {
      return false;
    }
  }
  column->missing[row] = missing ? 1 : 0;
  return true;
}

size_t lxg_table_keep_text(struct lxg_table *table, const char *text, size_t size) {
  if (table->texts.size == 0) {
    lxg_buffer_byte(&table->texts, '\0'); /* place 0 is the empty text */
  }
  const size_t place = table->texts.size;
  lxg_buffer_append(&table->texts, text, size);
  lxg_buffer_byte(&table->texts, '\0');
  return table->texts.failed ? SIZE_MAX : place;
}

static bool is_portable_name(const char *name) {
  static const char *const words[] = {"y",    "n",     "yes",  "no",  "on", "off",
                                      "true", "false", "null", "nan", "inf"};
  for (size_t i = 0; i < sizeof words / sizeof words[0]; i++) {
    if (strcasecmp(name, words[i]) == 0) {
      return false;
    }
  }
  const bool letter = (name[0] >= 'a' && name[0] <= 'z') || (name[0] >= 'A' && name[0] <= 'Z');
  return letter &&
         strspn(name, "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_") == strlen(name);
}

enum lxg_status lxg_table_add_column(struct lxg_table *table, const char *name, enum lxg_column_type type,
                                     const char *unit, const char *description, struct lxg_error *error) {
  if (!is_portable_name(name) || lxg_table_find(table, name) != NULL) {
    return lxg_error_set(error, LXG_BUG, "table-name",
                         "%.120s: error: column name %.60s is not portable or stands twice", table->name,
                         name);
  }
  const char *const spelling = lxg_units_table_spelling(unit);
  if (spelling == NULL) {
    return lxg_error_set(error, LXG_BUG, "table-unit",
                         "%.120s: error: column %.60s: unit %.40s has no spelling for tables", table->name,
                         name, unit);
  }
  const enum lxg_status status =
      lxg_table_new_column(table, name, strlen(name), spelling, strlen(spelling), description, type, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_column *const column = &table->column[table->columns - 1];
  for (size_t row = 0; row < table->rows; row++) {
    if (type == LXG_COLUMN_NUMBER) {
      column->number[row] = (double)NAN;
    }
    if (!lxg_table_mark(table, column, row, true)) {
      return lxg_table_memory(table, error);
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_table_add_rows(struct lxg_table *table, size_t count, struct lxg_error *error) {
  if (count > LXG_TABLE_ROWS) {
    count = (size_t)LXG_TABLE_ROWS + 1 - table->rows; /* refused below */
  }
  const enum lxg_status status = lxg_table_reserve(table, table->rows + count, error);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t i = 0; i < table->columns; i++) {
    struct lxg_column *const column = &table->column[i];
    for (size_t row = table->rows; row < table->rows + count; row++) {
      if (column->type == LXG_COLUMN_NUMBER) {
        column->number[row] = (double)NAN;
      } else {
        column->text[row] = 0;
      }
      if (!lxg_table_mark(table, column, row, true)) {
        return lxg_table_memory(table, error);
      }
    }
  }
  table->rows += count;
  return LXG_OK;
}

static enum lxg_status check_place(const struct lxg_table *table, size_t column, size_t row,
                                   enum lxg_column_type type, struct lxg_error *error) {
  if (column >= table->columns || row >= table->rows || table->column[column].type != type) {
    return lxg_error_set(error, LXG_BUG, "table-place", "%.120s: error: no such field: column %zu, row %zu",
                         table->name, column, row);
  }
  return LXG_OK;
}

enum lxg_status lxg_table_set_number(struct lxg_table *table, size_t column, size_t row, double value,
                                     struct lxg_error *error) {
  const enum lxg_status status = check_place(table, column, row, LXG_COLUMN_NUMBER, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_column *const target = &table->column[column];
  target->number[row] = isfinite(value) ? value : (double)NAN;
  return lxg_table_mark(table, target, row, !isfinite(value)) ? LXG_OK : lxg_table_memory(table, error);
}

enum lxg_status lxg_table_set_text(struct lxg_table *table, size_t column, size_t row, const char *text,
                                   struct lxg_error *error) {
  const enum lxg_status status = check_place(table, column, row, LXG_COLUMN_TEXT, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_column *const target = &table->column[column];
  const bool missing = text == NULL || text[0] == '\0';
  const size_t place = missing ? 0 : lxg_table_keep_text(table, text, strlen(text));
  if (place == SIZE_MAX || !lxg_table_mark(table, target, row, missing)) {
    return lxg_table_memory(table, error);
  }
  target->text[row] = place;
  return LXG_OK;
}

struct lxg_node *lxg_table_meta(struct lxg_table *table) {
  if (table->document == NULL && lxg_document_create(table->name, &table->document, NULL) == LXG_OK) {
    table->meta = lxg_document_root(table->document);
  }
  return table->meta;
}
