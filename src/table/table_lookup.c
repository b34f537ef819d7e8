/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table_lookup.c - columns by name, in CGS, with errors that point at file, line and column (see table.h).
 */
#include "table/table_internal.h"

#include "luxgale/memory.h"

#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

enum { SUGGESTED = 64 }; /* most column names compared or listed in a message */

const struct lxg_column *lxg_table_find(const struct lxg_table *table, const char *name) {
  for (size_t i = 0; i < table->columns; i++) {
    if (strcmp(table->column[i].name, name) == 0) {
      return &table->column[i];
    }
  }
  return NULL;
}

enum lxg_status lxg_table_require(const struct lxg_table *table, const char *name,
                                  const struct lxg_column **column, struct lxg_error *error) {
  *column = lxg_table_find(table, name);
  if (*column != NULL) {
    return LXG_OK;
  }
  const char *names[SUGGESTED];
  char list[140] = "";
  size_t count = 0, used = 0;
  for (; count < SUGGESTED && count < table->columns; count++) {
    names[count] = table->column[count].name;
    if (used < sizeof list) {
      used +=
          (size_t)snprintf(list + used, sizeof list - used, "%s%.40s", count > 0 ? ", " : "", names[count]);
    }
  }
  const char *const nearest = lxg_text_nearest(name, names, count);
  return lxg_error_set(error, LXG_INPUT, "table-column",
                       "%.100s: error: no column %.60s%s%.40s%s; there are: %s", table->name, name,
                       nearest != NULL ? ", did you mean " : "", nearest != NULL ? nearest : "",
                       nearest != NULL ? "?" : "", list);
}

enum lxg_status lxg_table_error(const struct lxg_table *table, const char *name, size_t row,
                                struct lxg_error *error, const char *code, const char *format, ...) {
  char text[200];
  va_list arguments;
  va_start(arguments, format);
  vsnprintf(text, sizeof text, format, arguments);
  va_end(arguments);
  if (table->line != NULL && row < table->rows) {
    return lxg_error_set(error, LXG_INPUT, code, "%.100s:%u: error: column %.60s: %s", table->name,
                         (unsigned)table->line[row], name, text);
  }
  return lxg_error_set(error, LXG_INPUT, code, "%.100s: error: column %.60s, row %zu: %s", table->name, name,
                       row + 1, text);
}

bool lxg_table_is_missing(const struct lxg_column *column, size_t row) {
  return column->missing != NULL && column->missing[row] != 0;
}

const char *lxg_table_text(const struct lxg_table *table, const struct lxg_column *column, size_t row) {
  return column->text != NULL && column->text[row] != 0 ? table->texts.data + column->text[row] : "";
}

/* Factor from the column's unit to CGS. */
static enum lxg_status column_factor(const struct lxg_table *table, const struct lxg_column *column,
                                     enum lxg_dimension dimension, const char *default_unit,
                                     const struct lxg_units_context *context, double *factor,
                                     struct lxg_error *error) {
  const char *unit = column->unit;
  if (unit[0] == '\0') {
    unit = default_unit != NULL ? default_unit : lxg_units_default(dimension);
  }
  struct lxg_error inner = {0};
  const enum lxg_status status = lxg_units_factor(unit, dimension, context, factor, &inner);
  return status == LXG_OK ? LXG_OK
                          : lxg_error_set(error, status, inner.code, "%.100s: error: column %.60s: %s",
                                          table->name, column->name, inner.line[0]);
}

static enum lxg_status check_numbers(const struct lxg_table *table, const struct lxg_column *column,
                                     struct lxg_error *error) {
  if (column->type != LXG_COLUMN_NUMBER) {
    size_t row = 0;
    while (row + 1 < table->rows && lxg_table_is_missing(column, row)) {
      row++;
    }
    return lxg_table_error(table, column->name, row, error, "table-type", "\"%.40s\": a number is due",
                           row < table->rows ? lxg_table_text(table, column, row) : "");
  }
  if (column->bad_row != SIZE_MAX) {
    return lxg_table_error(table, column->name, column->bad_row, error, "table-number",
                           "\"%.40s\": a finite decimal number is due", column->bad_text);
  }
  return LXG_OK;
}

static enum lxg_status convert(const struct lxg_table *table, const struct lxg_column *column, double factor,
                               bool allow_missing, double *values, struct lxg_error *error) {
  for (size_t row = 0; row < table->rows; row++) {
    if (lxg_table_is_missing(column, row)) {
      if (!allow_missing) {
        return lxg_table_error(table, column->name, row, error, "table-missing", "a value is missing");
      }
      values[row] = (double)NAN;
      continue;
    }
    values[row] = column->number[row] * factor;
    if (isinf(values[row]) && isfinite(column->number[row])) {
      return lxg_table_error(table, column->name, row, error, "table-number",
                             "too large for a double in CGS units");
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_table_cgs(const struct lxg_table *table, const char *name, enum lxg_dimension dimension,
                              const char *default_unit, const struct lxg_units_context *context,
                              bool allow_missing, double **values, struct lxg_error *error) {
  const struct lxg_column *column = NULL;
  double factor = 0.0;
  *values = NULL;
  enum lxg_status status = lxg_table_require(table, name, &column, error);
  if (status == LXG_OK) {
    status = check_numbers(table, column, error);
  }
  if (status == LXG_OK) {
    status = column_factor(table, column, dimension, default_unit, context, &factor, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  double *const fresh = lxg_alloc(table->rows, sizeof *fresh);
  if (fresh == NULL) {
    return lxg_table_memory(table, error);
  }
  status = convert(table, column, factor, allow_missing, fresh, error);
  if (status != LXG_OK) {
    lxg_free(fresh);
    return status;
  }
  *values = fresh;
  return LXG_OK;
}
