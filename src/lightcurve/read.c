/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * read.c - a light curve from a table (see lightcurve.h).
 */
#include "luxgale/lightcurve.h"
#include "luxgale/table.h"

#include <math.h>
#include <string.h>

/* Columns of the table; NULL where the table has none. */
struct columns {
  const struct lxg_column *time, *band, *magnitude, *error, *upper_limit, *excluded;
};

static enum lxg_status find_time(const struct lxg_table *table, struct columns *columns,
                                 enum lxg_time_system *system, struct lxg_error *error) {
  static const char *const names[3] = {"time_d", "jd", "mjd"};
  size_t found = 0;
  for (size_t i = 0; i < 3; i++) {
    const struct lxg_column *column = lxg_table_find(table, names[i]);
    if (column != NULL) {
      columns->time = column;
      *system = (enum lxg_time_system)i;
      found++;
    }
  }
  if (found != 1) {
    return lxg_error_set(error, LXG_INPUT, "lightcurve-columns",
                         "%s: %zu time columns: exactly one of time_d, jd, mjd is needed", table->name,
                         found);
  }
  return LXG_OK;
}

static enum lxg_status check_number_column(const struct lxg_table *table, const struct lxg_column *column,
                                           struct lxg_error *error) {
  if (column == NULL) {
    return LXG_OK;
  }
  if (column->type != LXG_COLUMN_NUMBER) {
    return lxg_error_set(error, LXG_INPUT, "table-type", "%s: column %s holds texts: numbers are needed",
                         table->name, column->name);
  }
  if (column->bad_row != SIZE_MAX) {
    return lxg_table_error(table, column->name, column->bad_row, error, "table-number",
                           "'%.40s' is no number", column->bad_text);
  }
  return LXG_OK;
}

/* Magnitudes and days have no other unit here; a header that says so is welcome, one that says otherwise is an error. */
static enum lxg_status check_unit(const struct lxg_table *table, const struct lxg_column *column,
                                  const char *unit, struct lxg_error *error) {
  if (column == NULL || column->unit[0] == '\0' || strcmp(column->unit, unit) == 0) {
    return LXG_OK;
  }
  return lxg_error_set(error, LXG_INPUT, "lightcurve-unit", "%s: column %s in '%.32s': it must be in %s",
                       table->name, column->name, column->unit, unit);
}

static enum lxg_status find_columns(const struct lxg_table *table,
                                    const struct lxg_lightcurve_options *options, struct columns *columns,
                                    struct lxg_error *error) {
  enum lxg_status status = lxg_table_require(table, "magnitude", &columns->magnitude, error);
  if (status == LXG_OK && !options->band_given) {
    status = lxg_table_require(table, "band", &columns->band, error);
  }
  columns->error = lxg_table_find(table, "error");
  columns->upper_limit = lxg_table_find(table, "upper_limit");
  columns->excluded = lxg_table_find(table, "excluded");
  const struct lxg_column *numbers[5] = {columns->time, columns->magnitude, columns->error,
                                         columns->upper_limit, columns->excluded};
  for (size_t i = 0; status == LXG_OK && i < 5; i++) {
    status = check_number_column(table, numbers[i], error);
  }
  if (status == LXG_OK) {
    status = check_unit(table, columns->time, "d", error);
  }
  if (status == LXG_OK) {
    status = check_unit(table, columns->magnitude, "mag", error);
  }
  if (status == LXG_OK) {
    status = check_unit(table, columns->error, "mag", error);
  }
  if (status == LXG_OK && columns->band != NULL && columns->band->type != LXG_COLUMN_TEXT) {
    status = lxg_error_set(error, LXG_INPUT, "table-type", "%s: column band holds numbers: names are needed",
                           table->name);
  }
  return status;
}

static enum lxg_status read_flag(const struct lxg_table *table, const struct lxg_column *column, size_t row,
                                 bool *flag, struct lxg_error *error) {
  *flag = false;
  if (column == NULL || lxg_table_is_missing(column, row)) {
    return LXG_OK;
  }
  const double value = column->number[row];
  if (value != 0.0 && value != 1.0) {
    return lxg_table_error(table, column->name, row, error, "lightcurve-flag", "%.10g: 0 or 1", value);
  }
  *flag = value != 0.0;
  return LXG_OK;
}

/* One row as a point; its time is still in the table's system. */
static enum lxg_status read_row(const struct lxg_table *table, const struct columns *columns,
                                const struct lxg_lightcurve_options *options, size_t row,
                                struct lxg_light_point *point, struct lxg_error *error) {
  const struct lxg_column *needed[2] = {columns->time, columns->magnitude};
  for (size_t i = 0; i < 2; i++) {
    if (lxg_table_is_missing(needed[i], row)) {
      return lxg_table_error(table, needed[i]->name, row, error, "table-missing", "a value is needed");
    }
  }
  *point = (struct lxg_light_point){.time = columns->time->number[row],
                                    .band = options->band,
                                    .magnitude = columns->magnitude->number[row],
                                    .error = options->default_error,
                                    .row = row + 1};
  if (columns->error != NULL && !lxg_table_is_missing(columns->error, row)) {
    point->error = columns->error->number[row];
  }
  if (columns->band != NULL) {
    struct lxg_error cause = {0};
    if (lxg_band_find(lxg_table_text(table, columns->band, row), &point->band, &cause) != LXG_OK) {
      return lxg_table_error(table, "band", row, error, cause.code, "%s", cause.line[0]);
    }
  }
  enum lxg_status status = read_flag(table, columns->upper_limit, row, &point->upper_limit, error);
  if (status == LXG_OK) {
    status = read_flag(table, columns->excluded, row, &point->excluded, error);
  }
  return status;
}

static double first_whole_day(const struct lxg_column *time, size_t rows) {
  double first = INFINITY;
  for (size_t i = 0; i < rows; i++) {
    first = fmin(first, time->number[i]); /* fmin passes over NaN */
  }
  return isfinite(first) ? floor(first) : 0.0;
}

enum lxg_status lxg_lightcurve_read(const struct lxg_table *table,
                                    const struct lxg_lightcurve_options *options,
                                    struct lxg_light_curve *curve, struct lxg_error *error) {
  memset(curve, 0, sizeof *curve);
  if (table->rows == 0) {
    return lxg_error_set(error, LXG_INPUT, "lightcurve-empty", "%s: no rows", table->name);
  }
  struct columns columns = {0};
  enum lxg_time_system system = LXG_TIME_DAYS;
  enum lxg_status status = find_time(table, &columns, &system, error);
  if (status == LXG_OK) {
    status = find_columns(table, options, &columns, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  const double natural = system == LXG_TIME_DAYS ? 0.0 : first_whole_day(columns.time, table->rows);
  lxg_lightcurve_init(system, options->zero_given ? options->zero : natural, curve);
  for (size_t row = 0; row < table->rows; row++) {
    struct lxg_light_point point;
    struct lxg_error cause = {0};
    status = read_row(table, &columns, options, row, &point, error);
    if (status != LXG_OK) {
      return status;
    }
    status = lxg_lightcurve_add(curve, &point, &cause);
    if (status == LXG_INPUT) {
      const char *name = strcmp(cause.code, "lightcurve-time") == 0    ? columns.time->name
                         : strcmp(cause.code, "lightcurve-error") == 0 ? "error"
                                                                       : "magnitude";
      return lxg_table_error(table, name, row, error, cause.code, "%s", cause.line[0]);
    }
    if (status != LXG_OK) {
      return lxg_error_set(error, status, cause.code, "%s", cause.line[0]);
    }
  }
  lxg_lightcurve_sort(curve);
  return LXG_OK;
}
