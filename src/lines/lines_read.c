/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lines_read.c - line measurements from a CSV or ECSV table (columns in lines.h). Every row becomes a
 * lxg_line_input; what is wrong with it is found by lxg_lines_create, so that all bad rows are named together.
 * Can fail: reading, missing columns, bad rows, memory.
 */
#include "luxgale/lines.h"
#include "luxgale/memory.h"
#include "luxgale/table.h"
#include "luxgale/text.h"
#include "luxgale/units.h"

#include <math.h>
#include <string.h>

enum { MEASURES = 4, TEXTS = 4 };
enum { TEXT_LINE, TEXT_KIND, TEXT_COMPONENT, TEXT_MEDIUM };

static const char *const text_names[TEXTS] = {"line", "kind", "component", "medium"};

/* One way of giving a measurement. */
static const struct {
  enum lxg_line_measure measure;
  const char *name, *error_name;
  enum lxg_dimension dimension;
} measures[MEASURES] = {
    {LXG_LINE_WAVELENGTH, "wavelength", "wavelength_error", LXG_DIMENSION_WAVELENGTH},
    {LXG_LINE_HALF_WIDTH, "half_width", "half_width_error", LXG_DIMENSION_WAVELENGTH},
    {LXG_LINE_VELOCITY, "velocity", "velocity_error", LXG_DIMENSION_SPEED},
    {LXG_LINE_SPEED, "speed", "speed_error", LXG_DIMENSION_SPEED},
};

static const char *const known[] = {
    "time",           "line",       "kind",  "component",       "medium",           "wavelength",
    "half_width",     "velocity",   "speed", "rest_wavelength", "wavelength_error", "half_width_error",
    "velocity_error", "speed_error"};
enum { KNOWN = sizeof known / sizeof known[0] };

/* Columns in CGS; NULL where the table has none. */
struct columns {
  double *time, *rest, *value[MEASURES], *error[MEASURES];
  const struct lxg_column *text[TEXTS];
};

static void columns_free(struct columns *columns) {
  lxg_free(columns->time);
  lxg_free(columns->rest);
  for (int k = 0; k < MEASURES; k++) {
    lxg_free(columns->value[k]);
    lxg_free(columns->error[k]);
  }
}

static enum lxg_status optional(const struct lxg_table *table, const char *name, enum lxg_dimension dimension,
                                double **values, struct lxg_error *error) {
  *values = NULL;
  return lxg_table_find(table, name) == NULL
             ? LXG_OK
             : lxg_table_cgs(table, name, dimension, NULL, NULL, true, values, error);
}

/* A column that is not known but looks like one is a slip of the pen, not a note to be passed over. */
static enum lxg_status check_names(const struct lxg_table *table, struct lxg_error *error) {
  for (size_t i = 0; i < table->columns; i++) {
    const char *const name = table->column[i].name;
    const char *const nearest = lxg_text_nearest(name, known, KNOWN);
    if (nearest != NULL && strcmp(nearest, name) != 0) {
      return lxg_error_set(error, LXG_INPUT, "line-column", "%s: column %s is not known: did you mean %s?",
                           table->name, name, nearest);
    }
  }
  return LXG_OK;
}

static enum lxg_status get_columns(const struct lxg_table *table, struct columns *columns,
                                   struct lxg_error *error) {
  enum lxg_status status = check_names(table, error);
  if (status == LXG_OK) {
    status = lxg_table_cgs(table, "time", LXG_DIMENSION_TIME, NULL, NULL, true, &columns->time, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_require(table, "kind", &columns->text[TEXT_KIND], error);
  }
  if (status == LXG_OK) {
    status = optional(table, "rest_wavelength", LXG_DIMENSION_WAVELENGTH, &columns->rest, error);
  }
  for (int k = 0; k < MEASURES && status == LXG_OK; k++) {
    status = optional(table, measures[k].name, measures[k].dimension, &columns->value[k], error);
    if (status == LXG_OK) {
      status = optional(table, measures[k].error_name, measures[k].dimension, &columns->error[k], error);
    }
  }
  for (int k = 0; k < TEXTS && status == LXG_OK; k++) {
    columns->text[k] = lxg_table_find(table, text_names[k]);
    if (columns->text[k] != NULL && columns->text[k]->type != LXG_COLUMN_TEXT) {
      status = lxg_error_set(error, LXG_INPUT, "table-type", "%s: column %s holds numbers: texts are due",
                             table->name, text_names[k]);
    }
  }
  return status;
}

static const char *text_of(const struct lxg_table *table, const struct columns *columns, int which,
                           size_t row) {
  return columns->text[which] != NULL ? lxg_table_text(table, columns->text[which], row) : "";
}

/* One row; what cannot be read becomes a value that lxg_lines_create refuses. */
static struct lxg_line_input input_of(const struct lxg_table *table, const struct columns *columns,
                                      size_t row) {
  struct lxg_line_input in = {.epoch = columns->time[row],
                              .label = text_of(table, columns, TEXT_LINE, row),
                              .component = text_of(table, columns, TEXT_COMPONENT, row),
                              .kind = lxg_line_kind_find(text_of(table, columns, TEXT_KIND, row)),
                              .rest = columns->rest != NULL ? columns->rest[row] : NAN,
                              .value = NAN,
                              .error = NAN,
                              .row = table->line != NULL ? table->line[row] : row + 1};
  const char *const medium = text_of(table, columns, TEXT_MEDIUM, row);
  const bool air = strcmp(medium, "air") == 0, vacuum = strcmp(medium, "vacuum") == 0;
  in.medium = air ? LXG_LINE_AIR : LXG_LINE_VACUUM;
  int given = 0;
  for (int k = 0; k < MEASURES; k++) {
    if (columns->value[k] != NULL && !isnan(columns->value[k][row])) {
      given++;
      in.measure = measures[k].measure;
      in.value = columns->value[k][row];
      in.error = columns->error[k] != NULL ? columns->error[k][row] : NAN;
    }
  }
  const bool declared = air || vacuum || in.measure == LXG_LINE_VELOCITY || in.measure == LXG_LINE_SPEED;
  if (given != 1 || !declared) {
    in.measure = (enum lxg_line_measure)MEASURES; /* refused: "line-measure" */
  }
  return in;
}

static enum lxg_status from_table(const struct lxg_table *table, struct lxg_lines **lines,
                                  struct lxg_error *error) {
  struct columns columns = {.time = NULL};
  struct lxg_line_input *input = NULL;
  enum lxg_status status = get_columns(table, &columns, error);
  if (status == LXG_OK) {
    input = lxg_alloc(table->rows, sizeof *input);
    if (input == NULL) {
      status =
          lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for %zu line measurements", table->rows);
    }
  }
  if (status == LXG_OK) {
    for (size_t i = 0; i < table->rows; i++) {
      input[i] = input_of(table, &columns, i);
    }
    status = lxg_lines_create(input, table->rows, lines, error);
  }
  lxg_free(input);
  columns_free(&columns);
  return status;
}

enum lxg_status lxg_lines_read(const char *path, struct lxg_lines **lines, char checksum[LXG_CHECKSUM_SIZE],
                               struct lxg_error *error) {
  *lines = NULL;
  const struct lxg_table_options options = {.texts = text_names, .texts_count = TEXTS};
  struct lxg_table *table = NULL;
  enum lxg_status status = lxg_table_read(path, &options, &table, error);
  if (status == LXG_OK) {
    if (checksum != NULL) {
      memcpy(checksum, table->checksum, LXG_CHECKSUM_SIZE);
    }
    status = from_table(table, lines, error);
    if (status != LXG_OK) {
      lxg_error_context(error, "reading line measurements from %s (rows are lines of the file)", path);
    }
  }
  lxg_table_destroy(table);
  return status;
}
