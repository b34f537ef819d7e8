/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history_read_factor.c - `porosity: {law: reduction, file: FILE}` of a case: the factor s against time.
 *
 * Columns `time` (days if it names no unit) and `factor` (1 or more). Between rows ln s is interpolated monotonically.
 */
#include "luxgale/files.h"
#include "luxgale/history.h"
#include "luxgale/keys.h"
#include "luxgale/memory.h"
#include "luxgale/table.h"

#include <math.h>

static enum lxg_status build(struct lxg_node *node, const struct lxg_table *table,
                             struct lxg_history **factor, struct lxg_error *error) {
  double *time = NULL, *value = NULL;
  size_t *line = lxg_alloc(table->rows, sizeof *line);
  enum lxg_status status =
      line != NULL ? LXG_OK : lxg_error_set(error, LXG_MEMORY, "memory", "porosity.file: out of memory");
  if (status == LXG_OK) {
    status = lxg_table_cgs(table, "time", LXG_DIMENSION_TIME, NULL, NULL, false, &time, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_cgs(table, "factor", LXG_DIMENSION_NONE, NULL, NULL, false, &value, error);
  }
  for (size_t i = 0; i < table->rows && status == LXG_OK; i++) {
    line[i] = table->line[i];
    if (!(value[i] >= 1.0)) {
      status = lxg_table_error(table, "factor", i, error, "porosity-factor", "a factor is 1 or more");
    }
  }
  if (status == LXG_OK) {
    const struct lxg_history_rows rows = {.kind = LXG_HISTORY_PHOTOSPHERE,
                                          .count = table->rows,
                                          .time = time,
                                          .luminosity = value,
                                          .line = line,
                                          .gap_fraction = INFINITY};
    status = lxg_history_create(&rows, factor, error);
    status = status == LXG_INPUT ? lxg_keys_locate(node, error) : status;
  }
  lxg_free(line);
  lxg_free(time);
  lxg_free(value);
  return status;
}

enum lxg_status lxg_history_read_factor(struct lxg_node *section, struct lxg_files *files,
                                        const struct lxg_history *history, struct lxg_history **factor,
                                        struct lxg_error *error) {
  static const char *const keep[] = {"time", "factor"};
  const struct lxg_table_options options = {.keep = keep, .keep_count = 2};
  struct lxg_node *node = lxg_node_find(section, "file");
  const char *name = NULL;
  char *path = NULL;
  struct lxg_table *table = NULL;
  *factor = NULL;
  if (lxg_node_is_none(node)) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_node_as_text(node, &name, error);
  if (status == LXG_OK) {
    status = lxg_files_resolve(files, name, &path, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_read(path, &options, &table, error);
  }
  if (status == LXG_OK) {
    status = lxg_files_record(files, "porosity.file", name, table->checksum, error);
  }
  if (status == LXG_OK) {
    status = build(node, table, factor, error);
  }
  lxg_table_destroy(table);
  lxg_free(path);
  if (status != LXG_OK || history == NULL) {
    return status;
  }
  const struct lxg_history *f = *factor;
  if (f->time[0] > history->time[0] || f->time[f->count - 1] < history->time[history->count - 1]) {
    lxg_history_destroy(*factor);
    *factor = NULL;
    return lxg_node_error(node, error, "porosity-span",
                          "its times must cover those of the luminosity history");
  }
  return LXG_OK;
}
