/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * grid.c - one opacity table and a set of them: making, judging, tabulating (see opacity_table.h).
 */
#include "luxgale/opacity_table.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "opacity/sum.h"

#include <math.h>
#include <stdio.h>

/* What a logarithm may be: catches T in kelvin, natural logarithms, and sentinels that were not declared. */
static const double log_t_least = 1.0, log_t_most = 12.0;          /* log10 K */
static const double log_r_least = -20.0, log_r_most = 15.0;        /* log10 of R */
static const double log_kappa_least = -15.0, log_kappa_most = 9.5; /* log10 of cm^2 g^-1 */
static const double same_fraction = 1e-9; /* mass fractions closer than this are the same composition */

enum lxg_status lxg_opacity_grid_create(size_t temperatures, size_t densities, struct lxg_opacity_grid **grid,
                                        struct lxg_error *error) {
  *grid = NULL;
  if (temperatures < LXG_OPACITY_GRID_LEAST || densities < LXG_OPACITY_GRID_LEAST ||
      temperatures > LXG_OPACITY_GRID_AXIS || densities > LXG_OPACITY_GRID_AXIS) {
    return lxg_error_set(error, LXG_LIMIT, "opacity-grid-size",
                         "opacity table of %zu log T by %zu log R: an axis has %d to %d nodes", temperatures,
                         densities, LXG_OPACITY_GRID_LEAST, LXG_OPACITY_GRID_AXIS);
  }
  struct lxg_opacity_grid *made = lxg_alloc(1, sizeof *made);
  if (made != NULL) {
    made->temperatures = temperatures;
    made->densities = densities;
    made->log_t = lxg_alloc(temperatures, sizeof *made->log_t);
    made->log_r = lxg_alloc(densities, sizeof *made->log_r);
    made->log_kappa = lxg_alloc(temperatures * densities, sizeof *made->log_kappa);
  }
  if (made == NULL || made->log_t == NULL || made->log_r == NULL || made->log_kappa == NULL) {
    lxg_opacity_grid_destroy(made);
    return lxg_error_set(error, LXG_MEMORY, "memory", "opacity table: out of memory");
  }
  for (size_t i = 0; i < temperatures * densities; i++) {
    made->log_kappa[i] = NAN;
  }
  *grid = made;
  return LXG_OK;
}

void lxg_opacity_grid_destroy(struct lxg_opacity_grid *grid) {
  if (grid != NULL) {
    lxg_free(grid->log_t);
    lxg_free(grid->log_r);
    lxg_free(grid->log_kappa);
    lxg_free(grid);
  }
}

static const char *grid_name(const struct lxg_opacity_grid *grid) {
  return grid->name[0] != '\0' ? grid->name : "opacity table";
}

static enum lxg_status check_axis(const struct lxg_opacity_grid *grid, const char *quantity,
                                  const double *axis, size_t count, double least, double most,
                                  struct lxg_error *error) {
  for (size_t i = 0; i < count; i++) {
    if (!(axis[i] >= least && axis[i] <= most)) {
      return lxg_error_set(error, LXG_INPUT, "opacity-grid-range",
                           "%s: %s = %.8g: a decimal logarithm between %g and %g is needed", grid_name(grid),
                           quantity, axis[i], least, most);
    }
    if (i > 0 && !(axis[i] > axis[i - 1])) {
      return lxg_error_set(error, LXG_INPUT, "opacity-grid-order",
                           "%s: %s = %.8g after %.8g: it must increase", grid_name(grid), quantity, axis[i],
                           axis[i - 1]);
    }
  }
  return LXG_OK;
}

static bool has_cell(const struct lxg_opacity_grid *grid) {
  const size_t n = grid->densities;
  for (size_t i = 0; i + 1 < grid->temperatures; i++) {
    for (size_t j = 0; j + 1 < n; j++) {
      const double *corner = &grid->log_kappa[i * n + j];
      if (!isnan(corner[0] + corner[1] + corner[n] + corner[n + 1])) {
        return true;
      }
    }
  }
  return false;
}

enum lxg_status lxg_opacity_grid_validate(const struct lxg_opacity_grid *grid, struct lxg_error *error) {
  enum lxg_status status = lxg_composition_check(&grid->composition, error);
  if (status != LXG_OK) {
    lxg_error_context(error, "checking the opacity table %s", grid_name(grid));
    return status;
  }
  status = check_axis(grid, "log T", grid->log_t, grid->temperatures, log_t_least, log_t_most, error);
  if (status == LXG_OK) {
    status = check_axis(grid, "log R", grid->log_r, grid->densities, log_r_least, log_r_most, error);
  }
  for (size_t i = 0; status == LXG_OK && i < grid->temperatures * grid->densities; i++) {
    const double value = grid->log_kappa[i];
    if (!isnan(value) && !(value >= log_kappa_least && value <= log_kappa_most)) {
      status =
          lxg_error_set(error, LXG_INPUT, "opacity-grid-range",
                        "%s: log kappa = %.8g at log T = %.8g, log R = %.8g: between %g and %g is possible",
                        grid_name(grid), value, grid->log_t[i / grid->densities],
                        grid->log_r[i % grid->densities], log_kappa_least, log_kappa_most);
    }
  }
  if (status == LXG_OK && !has_cell(grid)) {
    status = lxg_error_set(error, LXG_INPUT, "opacity-grid-empty",
                           "%s: no four neighbouring nodes are all known", grid_name(grid));
  }
  return status;
}

/* ---- sets ---- */

static bool same_composition(const struct lxg_composition *a, const struct lxg_composition *b) {
  return fabs(a->hydrogen - b->hydrogen) < same_fraction && fabs(a->cno - b->cno) < same_fraction &&
         fabs(a->metals - b->metals) < same_fraction;
}

enum lxg_status lxg_opacity_set_add(struct lxg_opacity_set *set, struct lxg_opacity_grid *grid,
                                    struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < set->count && status == LXG_OK; i++) {
    if (same_composition(&set->grid[i]->composition, &grid->composition)) {
      status = lxg_error_set(
          error, LXG_INPUT, "opacity-set-duplicate",
          "%s:%zu: X = %.8g, cno = %.8g, Z = %.8g: this composition was given before, at %s:%zu",
          grid_name(grid), grid->line, grid->composition.hydrogen, grid->composition.cno,
          grid->composition.metals, grid_name(set->grid[i]), set->grid[i]->line);
    }
  }
  if (status == LXG_OK && set->count >= LXG_OPACITY_SET) {
    status = lxg_error_set(error, LXG_LIMIT, "opacity-set-size", "%s: a set holds at most %d opacity tables",
                           grid_name(grid), LXG_OPACITY_SET);
  }
  if (status == LXG_OK) {
    struct lxg_opacity_grid **grown = lxg_realloc(set->grid, set->count + 1, sizeof *grown);
    if (grown == NULL) {
      status = lxg_error_set(error, LXG_MEMORY, "memory", "set of opacity tables: out of memory");
    } else {
      set->grid = grown;
      set->grid[set->count++] = grid;
    }
  }
  if (status != LXG_OK) {
    lxg_opacity_grid_destroy(grid);
  }
  return status;
}

void lxg_opacity_set_free(struct lxg_opacity_set *set) {
  if (set != NULL) {
    for (size_t i = 0; i < set->count; i++) {
      lxg_opacity_grid_destroy(set->grid[i]);
    }
    lxg_free(set->grid);
    set->grid = NULL;
    set->count = 0;
  }
}

/* ---- tabulating ---- */

enum lxg_status lxg_opacity_at_log(const struct lxg_opacity *opacity, double log_t, double log_r,
                                   struct lxg_opacity_point *point) {
  struct lxg_opacity_value value;
  const double ln_t = log_t * LXG_LN10;
  const double ln_rho = log_r * LXG_LN10 + 3.0 * (ln_t - LXG_OPACITY_LN_T6);
  const enum lxg_status status = lxg_opacity_at(opacity, ln_rho, ln_t, &value);
  if (status == LXG_OK) {
    point->log_kappa = log10(value.kappa);
    point->dlogk_dlogr = value.dlnk_dlnrho;
    point->dlogk_dlogt = value.dlnk_dlnt + 3.0 * value.dlnk_dlnrho;
    point->table_weight = value.table_weight;
  }
  return status;
}

enum lxg_status lxg_opacity_tabulate(const struct lxg_opacity *opacity,
                                     const struct lxg_composition *composition, const double *log_t,
                                     size_t temperatures, const double *log_r, size_t densities,
                                     const char *source, struct lxg_opacity_grid **grid,
                                     struct lxg_error *error) {
  struct lxg_opacity_grid *made = NULL;
  enum lxg_status status = lxg_opacity_grid_create(temperatures, densities, &made, error);
  *grid = NULL;
  if (status != LXG_OK) {
    return status;
  }
  made->composition = *composition;
  snprintf(made->source, sizeof made->source, "%s", source == NULL ? "" : source);
  for (size_t j = 0; j < densities; j++) {
    made->log_r[j] = log_r[j];
  }
  for (size_t i = 0; i < temperatures; i++) {
    made->log_t[i] = log_t[i];
    for (size_t j = 0; j < densities; j++) {
      struct lxg_opacity_point point;
      if (lxg_opacity_at_log(opacity, log_t[i], log_r[j], &point) == LXG_OK) {
        made->log_kappa[i * densities + j] = point.log_kappa;
      }
    }
  }
  status = lxg_opacity_grid_validate(made, error);
  if (status != LXG_OK) {
    lxg_opacity_grid_destroy(made);
    return status;
  }
  *grid = made;
  return LXG_OK;
}
