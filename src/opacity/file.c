/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * file.c - opacity tables in our own files: ECSV, one row a node (see opacity_table.h).
 *
 *   columns  log_t, log_r, log_kappa: decimal logarithms, so without unit (dex and dex(...) are accepted)
 *   meta     kind: "opacity table", composition: {hydrogen, helium, cno, metals}, source, date
 *
 * The rectangle is spanned by all values of log_t and log_r that occur; nodes without a row or with an empty log_kappa are
 * missing. Values that differ by less than 1e-9 dex are one.
 */
#include "luxgale/opacity_table.h"

#include "luxgale/document.h"
#include "luxgale/memory.h"
#include "luxgale/output.h"
#include "luxgale/table.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const double same_node = 1e-9; /* dex */
static const char *const kind = "opacity table";

struct file_column {
  const char *name, *description;
  const char *units[4]; /* accepted */
};

static const struct file_column file_columns[3] = {
    {"log_t", "log10 of the temperature in K", {"", "dex", "dex(K)", "dex(K)"}},
    {"log_r", "log10 of R = rho/(T/1e6 K)^3, rho in g/cm3", {"", "dex", "dex", "dex"}},
    {"log_kappa", "log10 of the Rosseland mean opacity in cm2/g", {"", "dex", "dex(cm2 / g)", "dex(cm2/g)"}},
};

/* ---- writing ---- */

static void write_meta(const struct lxg_opacity_grid *grid, struct lxg_table *table) {
  struct lxg_node *meta = lxg_table_meta(table);
  lxg_node_add_text(meta, "kind", kind);
  struct lxg_node *composition = lxg_node_add_mapping(meta, "composition");
  lxg_node_add_number(composition, "hydrogen", grid->composition.hydrogen);
  lxg_node_add_number(composition, "helium", grid->composition.helium);
  lxg_node_add_number(composition, "cno", grid->composition.cno);
  lxg_node_add_number(composition, "metals", grid->composition.metals);
  lxg_node_add_text(meta, "source", grid->source);
  lxg_node_add_text(meta, "date", grid->date);
}

static enum lxg_status fill_table(const struct lxg_opacity_grid *grid, struct lxg_table *table,
                                  struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (size_t c = 0; c < 3 && status == LXG_OK; c++) {
    status = lxg_table_add_column(table, file_columns[c].name, LXG_COLUMN_NUMBER, "",
                                  file_columns[c].description, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_add_rows(table, grid->temperatures * grid->densities, error);
  }
  for (size_t i = 0; i < grid->temperatures * grid->densities && status == LXG_OK; i++) {
    const double value[3] = {grid->log_t[i / grid->densities], grid->log_r[i % grid->densities],
                             grid->log_kappa[i]};
    for (size_t c = 0; c < 3 && status == LXG_OK; c++) {
      status = isnan(value[c]) ? LXG_OK : lxg_table_set_number(table, c, i, value[c], error);
    }
  }
  return status;
}

enum lxg_status lxg_opacity_grid_table(const struct lxg_opacity_grid *grid, const char *name,
                                       struct lxg_table **table, struct lxg_error *error) {
  *table = NULL;
  enum lxg_status status = lxg_opacity_grid_validate(grid, error);
  if (status == LXG_OK) {
    status = lxg_table_create(name, table, error);
  }
  if (status == LXG_OK) {
    write_meta(grid, *table);
    status = fill_table(grid, *table, error);
  }
  if (status != LXG_OK) {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}

enum lxg_status lxg_opacity_grid_write(const struct lxg_opacity_grid *grid, const char *path,
                                       struct lxg_error *error) {
  struct lxg_table *table = NULL;
  struct lxg_buffer buffer = {0};
  enum lxg_status status = lxg_opacity_grid_table(grid, path, &table, error);
  if (status == LXG_OK) {
    status = lxg_table_write_ecsv(table, &buffer, error);
  }
  if (status == LXG_OK) {
    status = lxg_output_write(path, buffer.data, buffer.size, error);
  }
  lxg_buffer_free(&buffer);
  lxg_table_destroy(table);
  if (status != LXG_OK) {
    lxg_error_context(error, "writing the opacity table %s", path);
  }
  return status;
}

/* ---- reading ---- */

/* Child of a mapping, or of an ordered map written as a sequence of one-key mappings. */
static struct lxg_node *find(struct lxg_node *node, const char *key) {
  if (node == NULL || lxg_node_kind(node) == LXG_NODE_MAPPING) {
    return lxg_node_find(node, key);
  }
  if (lxg_node_kind(node) == LXG_NODE_SEQUENCE) {
    for (struct lxg_node *item = lxg_node_first(node); item != NULL; item = lxg_node_next(item)) {
      struct lxg_node *found = lxg_node_find(item, key);
      if (found != NULL) {
        return found;
      }
    }
  }
  return NULL;
}

static enum lxg_status read_fraction(struct lxg_node *composition, const char *key, double *value,
                                     struct lxg_error *error) {
  struct lxg_node *node = find(composition, key);
  return node == NULL ? LXG_OK : lxg_node_as_number(node, value, error);
}

static void copy_text(struct lxg_node *meta, const char *key, char *text, size_t size) {
  const char *found = NULL;
  struct lxg_node *node = find(meta, key);
  if (node != NULL && !lxg_node_is_none(node)) {
    found = lxg_node_text(node);
  }
  snprintf(text, size, "%s", found != NULL ? found : "");
}

static enum lxg_status read_meta(const struct lxg_table *table, struct lxg_opacity_grid *grid,
                                 struct lxg_error *error) {
  struct lxg_node *meta = table->meta;
  struct lxg_node *composition = find(meta, "composition");
  double helium = NAN;
  if (composition == NULL || find(composition, "hydrogen") == NULL || find(composition, "metals") == NULL) {
    return lxg_error_set(
        error, LXG_INPUT, "opacity-table-composition",
        "%s: error: meta.composition with hydrogen, helium, cno and metals is needed in the header",
        table->name);
  }
  struct lxg_composition *c = &grid->composition;
  *c = (struct lxg_composition){0};
  enum lxg_status status = read_fraction(composition, "hydrogen", &c->hydrogen, error);
  if (status == LXG_OK) {
    status = read_fraction(composition, "helium", &helium, error);
  }
  if (status == LXG_OK) {
    status = read_fraction(composition, "cno", &c->cno, error);
  }
  if (status == LXG_OK) {
    status = read_fraction(composition, "metals", &c->metals, error);
  }
  if (status == LXG_OK) {
    c->helium = isnan(helium) ? 1.0 - c->hydrogen - c->cno - c->metals : helium;
    status = lxg_composition_check(c, error);
  }
  if (status != LXG_OK) {
    lxg_error_context(error, "reading meta.composition of %s", table->name);
  }
  copy_text(meta, "source", grid->source, sizeof grid->source);
  copy_text(meta, "date", grid->date, sizeof grid->date);
  return status;
}

static enum lxg_status take_column(const struct lxg_table *table, const struct file_column *wanted,
                                   bool allow_missing, const struct lxg_column **column,
                                   struct lxg_error *error) {
  enum lxg_status status = lxg_table_require(table, wanted->name, column, error);
  if (status != LXG_OK) {
    return status;
  }
  bool fits = false;
  for (size_t k = 0; k < sizeof wanted->units / sizeof wanted->units[0]; k++) {
    fits = fits || strcmp((*column)->unit, wanted->units[k]) == 0;
  }
  if (!fits) {
    return lxg_error_set(error, LXG_INPUT, "opacity-table-unit",
                         "%s: error: column %s has unit %.40s: it is a decimal logarithm, without unit",
                         table->name, wanted->name, (*column)->unit);
  }
  if ((*column)->type != LXG_COLUMN_NUMBER || (*column)->bad_text != NULL) {
    const size_t row = (*column)->bad_text != NULL ? (*column)->bad_row : 0;
    return lxg_table_error(table, wanted->name, row, error, "table-number", "%.40s is not a number",
                           (*column)->bad_text != NULL ? (*column)->bad_text : "a text");
  }
  for (size_t i = 0; i < table->rows && !allow_missing; i++) {
    if (lxg_table_is_missing(*column, i)) {
      return lxg_table_error(table, wanted->name, i, error, "table-missing", "the value is missing");
    }
  }
  return LXG_OK;
}

static int compare_numbers(const void *a, const void *b) {
  const double x = *(const double *)a, y = *(const double *)b;
  return (x > y) - (x < y);
}

/* Distinct values in increasing order; returns their count. `sorted` has room for `count`. */
static size_t distinct(const double *value, size_t count, double *sorted) {
  memcpy(sorted, value, count * sizeof *sorted);
  qsort(sorted, count, sizeof *sorted, compare_numbers);
  size_t kept = 0;
  for (size_t i = 0; i < count; i++) {
    if (kept == 0 || sorted[i] - sorted[kept - 1] > same_node) {
      sorted[kept++] = sorted[i];
    }
  }
  return kept;
}

/* Place of a value among the distinct ones. */
static size_t place_of(const double *axis, size_t count, double value) {
  size_t low = 0, high = count - 1;
  while (low < high) {
    const size_t middle = (low + high) / 2;
    if (axis[middle] < value - same_node) {
      low = middle + 1;
    } else {
      high = middle;
    }
  }
  return low;
}

static enum lxg_status place_rows(const struct lxg_table *table, const struct lxg_column *const column[3],
                                  struct lxg_opacity_grid *grid, struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  const size_t nodes = grid->temperatures * grid->densities;
  unsigned char *taken = lxg_alloc(nodes, 1);
  if (taken == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "opacity table: out of memory");
  }
  for (size_t i = 0; i < table->rows && status == LXG_OK; i++) {
    const size_t at = place_of(grid->log_t, grid->temperatures, column[0]->number[i]) * grid->densities +
                      place_of(grid->log_r, grid->densities, column[1]->number[i]);
    if (taken[at] != 0) {
      status = lxg_table_error(table, "log_t", i, error, "opacity-table-duplicate",
                               "this node (log T, log R) was given in an earlier row");
    }
    taken[at] = 1;
    grid->log_kappa[at] = lxg_table_is_missing(column[2], i) ? NAN : column[2]->number[i];
  }
  lxg_free(taken);
  return status;
}

static enum lxg_status make_grid(const struct lxg_table *table, const struct lxg_column *const column[3],
                                 struct lxg_opacity_grid **grid, struct lxg_error *error) {
  double *log_t = lxg_alloc(2 * table->rows + 1, sizeof *log_t);
  if (log_t == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "opacity table: out of memory");
  }
  double *log_r = log_t + table->rows;
  const size_t temperatures = distinct(column[0]->number, table->rows, log_t);
  const size_t densities = distinct(column[1]->number, table->rows, log_r);
  enum lxg_status status = lxg_opacity_grid_create(temperatures, densities, grid, error);
  if (status == LXG_OK) {
    memcpy((*grid)->log_t, log_t, temperatures * sizeof *log_t);
    memcpy((*grid)->log_r, log_r, densities * sizeof *log_r);
    snprintf((*grid)->name, sizeof(*grid)->name, "%s", table->name);
    snprintf((*grid)->checksum, sizeof(*grid)->checksum, "%s", table->checksum);
    status = place_rows(table, column, *grid, error);
  } else {
    lxg_error_context(error, "finding the grid of %s", table->name);
  }
  lxg_free(log_t);
  return status;
}

enum lxg_status lxg_opacity_grid_read(const char *path, struct lxg_opacity_grid **grid,
                                      struct lxg_error *error) {
  *grid = NULL;
  struct lxg_table *table = NULL;
  struct lxg_opacity_grid *made = NULL;
  const struct lxg_column *column[3] = {NULL, NULL, NULL};
  enum lxg_status status = lxg_table_read(path, NULL, &table, error);
  for (size_t c = 0; c < 3 && status == LXG_OK; c++) {
    status = take_column(table, &file_columns[c], c == 2, &column[c], error);
  }
  if (status == LXG_OK) {
    status = make_grid(table, column, &made, error);
  }
  if (status == LXG_OK) {
    status = read_meta(table, made, error);
  }
  if (status == LXG_OK) {
    status = lxg_opacity_grid_validate(made, error);
  }
  lxg_table_destroy(table);
  if (status != LXG_OK) {
    lxg_opacity_grid_destroy(made);
    lxg_error_context(error, "reading the opacity table %s", path);
    return status;
  }
  *grid = made;
  return LXG_OK;
}

/* ---- sets ---- */

enum lxg_status lxg_opacity_set_read(const char *const *paths, size_t count, struct lxg_opacity_set *set,
                                     struct lxg_error *error) {
  *set = (struct lxg_opacity_set){0};
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    struct lxg_opacity_grid *grid = NULL;
    status = lxg_opacity_grid_read(paths[i], &grid, error);
    if (status == LXG_OK) {
      status = lxg_opacity_set_add(set, grid, error);
    }
  }
  if (status != LXG_OK) {
    lxg_opacity_set_free(set);
  }
  return status;
}

/* A fraction with a number of decimals, whatever the locale. */
static void append_fraction(struct lxg_buffer *buffer, const char *name, double value, unsigned decimals) {
  const long long scale = decimals == 4 ? 10000 : 1000000000;
  lxg_buffer_format(buffer, "%s%lld.%0*lld", name, llround(value * (double)scale) / scale, (int)decimals,
                    llround(value * (double)scale) % scale);
}

static void append_name(struct lxg_buffer *buffer, const struct lxg_composition *composition,
                        unsigned decimals) {
  append_fraction(buffer, "x", composition->hydrogen, decimals);
  append_fraction(buffer, "-cno", composition->cno, decimals);
  append_fraction(buffer, "-z", composition->metals, decimals);
  lxg_buffer_text(buffer, ".ecsv");
}

/* True if four decimals do not tell the grid from another of the set. */
static bool needs_digits(const struct lxg_opacity_set *set, size_t k) {
  const struct lxg_composition *a = &set->grid[k]->composition;
  for (size_t i = 0; i < set->count; i++) {
    const struct lxg_composition *b = &set->grid[i]->composition;
    if (i != k && llround(a->hydrogen * 1e4) == llround(b->hydrogen * 1e4) &&
        llround(a->cno * 1e4) == llround(b->cno * 1e4) &&
        llround(a->metals * 1e4) == llround(b->metals * 1e4)) {
      return true;
    }
  }
  return false;
}

enum lxg_status lxg_opacity_set_write(const struct lxg_opacity_set *set, const char *directory,
                                      struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (size_t k = 0; k < set->count && status == LXG_OK; k++) {
    struct lxg_buffer path = {0};
    lxg_buffer_text(&path, directory);
    lxg_buffer_byte(&path, '/');
    append_name(&path, &set->grid[k]->composition, needs_digits(set, k) ? 9 : 4);
    status = lxg_buffer_status(&path, error);
    if (status == LXG_OK) {
      status = lxg_opacity_grid_write(set->grid[k], path.data, error);
    }
    lxg_buffer_free(&path);
  }
  return status;
}
