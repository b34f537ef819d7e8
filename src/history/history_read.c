/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history_read.c - the section `luminosity` of a case: a table of time and luminosity, or a formula.
 *
 * Errors of a luminosity column are standard errors: the 68 % bounds are luminosity - error and luminosity + error, and an error
 * as large as the luminosity is refused (a lower bound must stay above zero).
 */
#include "luxgale/files.h"
#include "luxgale/history.h"
#include "luxgale/keys.h"
#include "luxgale/memory.h"
#include "luxgale/table.h"

#include "history/history_reading.h"

static const char *const kinds[] = {"base", "photosphere", "magnitude", "formula", "decline"};
enum { KIND_MAGNITUDE = 2, KIND_FORMULA = 3, KIND_DECLINE = 4, KINDS = 5 };

/* Names and units of the columns, as the case gives them. */
struct columns {
  const char *time, *time_unit, *luminosity, *luminosity_unit, *error;
  bool error_named;
};

/* Columns in CGS. */
struct rows {
  size_t count;
  double *time, *luminosity, *error; /* `error` NULL if there is none */
  double *low, *high;
  size_t *line;
};

static void free_rows(struct rows *rows) {
  lxg_free(rows->time);
  lxg_free(rows->luminosity);
  lxg_free(rows->error);
  lxg_free(rows->low);
  lxg_free(rows->high);
  lxg_free(rows->line);
}

static enum lxg_status read_columns(struct lxg_node *section, struct columns *columns,
                                    struct lxg_error *error) {
  *columns = (struct columns){.time = "time", .luminosity = "luminosity", .error = "luminosity_error"};
  columns->error_named = !lxg_node_is_none(lxg_node_find(section, "error_column"));
  const struct {
    const char *key;
    const char **text;
  } texts[] = {{"time_column", &columns->time},
               {"time_unit", &columns->time_unit},
               {"luminosity_column", &columns->luminosity},
               {"luminosity_unit", &columns->luminosity_unit},
               {"error_column", &columns->error}};
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < sizeof texts / sizeof texts[0] && status == LXG_OK; i++) {
    status = lxg_node_get_text(section, texts[i].key, texts[i].text, error);
  }
  return status;
}

/* Bounds from standard errors, and line numbers for messages. */
static enum lxg_status fill_bounds(const struct lxg_table *table, const struct columns *columns,
                                   struct rows *rows, struct lxg_error *error) {
  rows->line = lxg_alloc(rows->count, sizeof *rows->line);
  rows->low = rows->error != NULL ? lxg_alloc(rows->count, sizeof *rows->low) : NULL;
  rows->high = rows->error != NULL ? lxg_alloc(rows->count, sizeof *rows->high) : NULL;
  if (rows->line == NULL || (rows->error != NULL && (rows->low == NULL || rows->high == NULL))) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "luminosity history: out of memory");
  }
  for (size_t i = 0; i < rows->count; i++) {
    rows->line[i] = table->line != NULL ? table->line[i] : i + 1;
    if (rows->error == NULL) {
      continue;
    }
    if (!(rows->error[i] >= 0.0 && rows->error[i] < rows->luminosity[i])) {
      return lxg_table_error(table, columns->error, i, error, "history-error",
                             "a standard error is zero or more and below the luminosity");
    }
    rows->low[i] = rows->luminosity[i] - rows->error[i];
    rows->high[i] = rows->luminosity[i] + rows->error[i];
  }
  return LXG_OK;
}

static enum lxg_status fill_rows(const struct lxg_table *table, const struct columns *columns, double l_edd,
                                 struct rows *rows, struct lxg_error *error) {
  const struct lxg_units_context context = {.eddington_luminosity = l_edd};
  rows->count = table->rows;
  enum lxg_status status = lxg_table_cgs(table, columns->time, LXG_DIMENSION_TIME, columns->time_unit,
                                         &context, false, &rows->time, error);
  if (status == LXG_OK) {
    status = lxg_table_cgs(table, columns->luminosity, LXG_DIMENSION_LUMINOSITY, columns->luminosity_unit,
                           &context, false, &rows->luminosity, error);
  }
  if (status == LXG_OK && (columns->error_named || lxg_table_find(table, columns->error) != NULL)) {
    const struct lxg_column *luminosity = lxg_table_find(table, columns->luminosity);
    const char *unit = luminosity->unit[0] != '\0' ? luminosity->unit : columns->luminosity_unit;
    status = lxg_table_cgs(table, columns->error, LXG_DIMENSION_LUMINOSITY, unit, &context, false,
                           &rows->error, error);
  }
  return status == LXG_OK ? fill_bounds(table, columns, rows, error) : status;
}

/* Reads the file, records it, and takes its columns. */
static enum lxg_status read_file(struct lxg_node *node, const struct columns *columns,
                                 const struct lxg_history_reading *reading, struct rows *rows,
                                 struct lxg_error *error) {
  const char *name = NULL;
  char *path = NULL;
  struct lxg_table *table = NULL;
  const char *const keep[] = {columns->time, columns->luminosity, columns->error};
  const struct lxg_table_options options = {.keep = keep, .keep_count = sizeof keep / sizeof keep[0]};
  enum lxg_status status = lxg_node_as_text(node, &name, error);
  if (status == LXG_OK) {
    status = lxg_files_resolve(reading->files, name, &path, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_read(path, &options, &table, error);
  }
  if (status == LXG_OK) {
    status = lxg_files_record(reading->files, "luminosity.file", name, table->checksum, error);
  }
  if (status == LXG_OK) {
    status = fill_rows(table, columns, reading->l_edd, rows, error);
  }
  lxg_table_destroy(table);
  lxg_free(path);
  return status;
}

static enum lxg_status read_table(struct lxg_node *section, enum lxg_history_kind kind,
                                  const struct lxg_history_reading *reading, struct lxg_history **history,
                                  struct lxg_error *error) {
  struct columns columns;
  struct rows rows = {0};
  struct lxg_node *file = NULL;
  enum lxg_status status = read_columns(section, &columns, error);
  if (status == LXG_OK) {
    status = lxg_node_require(section, "file", &file, error);
  }
  if (status == LXG_OK) {
    status = read_file(file, &columns, reading, &rows, error);
  }
  if (status == LXG_OK) {
    const struct lxg_history_rows given = {.kind = kind,
                                           .count = rows.count,
                                           .time = rows.time,
                                           .luminosity = rows.luminosity,
                                           .low = rows.low,
                                           .high = rows.high,
                                           .line = rows.line,
                                           .gap_fraction = reading->gap_fraction};
    status = lxg_history_create(&given, history, error);
    if (status == LXG_INPUT) {
      status = lxg_keys_locate(file, error);
    }
  }
  free_rows(&rows);
  return status;
}

/* A key of the other kind would be silently without effect. */
static enum lxg_status refuse_keys(struct lxg_node *section, const char *const keys[], size_t count,
                                   const char *kind, struct lxg_error *error) {
  for (size_t i = 0; i < count; i++) {
    struct lxg_node *node = lxg_node_find(section, keys[i]);
    if (!lxg_node_is_none(node)) {
      return lxg_node_error(node, error, "luminosity-unused", "kind %s has no use for it", kind);
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_history_read(struct lxg_node *section, const struct lxg_history_reading *reading,
                                 struct lxg_history **history, struct lxg_error *error) {
  static const char *const of_formula[] = {"at", "start", "end", "terms"};
  static const char *const of_table[] = {
      "file", "time_column", "time_unit", "luminosity_column", "luminosity_unit", "error_column"};
  *history = NULL;
  if (lxg_node_is_none(section)) {
    return LXG_OK;
  }
  struct lxg_node *node = NULL;
  size_t kind = 0;
  enum lxg_status status = lxg_keys_check(section, "luminosity", error);
  if (status == LXG_OK) {
    status = lxg_node_require(section, "kind", &node, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_as_word(node, kinds, KINDS, &kind, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  if (kind == KIND_MAGNITUDE || kind == KIND_DECLINE) { /* an eruption is the business of a whole case */
    return lxg_keys_refuse(node, error);
  }
  if (kind == KIND_FORMULA) {
    status = refuse_keys(section, of_table, sizeof of_table / sizeof of_table[0], kinds[kind], error);
    return status == LXG_OK ? lxg_history_read_formula(section, reading, history, error) : status;
  }
  status = refuse_keys(section, of_formula, sizeof of_formula / sizeof of_formula[0], kinds[kind], error);
  return status == LXG_OK ? read_table(section, kind == 0 ? LXG_HISTORY_BASE : LXG_HISTORY_PHOTOSPHERE,
                                       reading, history, error)
                          : status;
}
