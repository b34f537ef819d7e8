/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * linefit_grid.c - model speeds of all columns for one mass, on a grid of masses and held values, and between its nodes (see
 * linefit.h).
 */
#include "luxgale/linefit.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "luxgale/speeds.h"

#include <math.h>
#include <string.h>

enum { NODES_LEAST = 4, NODES_MOST = 64 };

size_t lxg_linefit_fitted(const struct lxg_linefit_model *model) {
  return model->history != NULL ? 0 : 1;
}

/* "There is none" is an answer. */
static bool is_answer(enum lxg_status status) {
  return status == LXG_OK || status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED || status == LXG_DOMAIN;
}

size_t lxg_linefit_columns(const struct lxg_linefit_model *model) {
  return model->history != NULL ? 2 * model->lines->count : model->lines->count;
}

/* Columns of one set of winds, and the systems of the rows. */
static enum lxg_status take_speeds(const struct lxg_linefit_model *model, struct lxg_speeds *speeds,
                                   double speed[], struct lxg_line_assignment assignment[],
                                   struct lxg_error *error) {
  const size_t rows = model->lines->count;
  const enum lxg_status status = lxg_lines_assign(model->lines, model->map, lxg_speeds_velocity, speeds,
                                                  &model->assign, assignment, error);
  for (size_t i = 0; i < rows && status == LXG_OK; i++) {
    speed[i] = assignment[i].wind_velocity;
    if (model->history != NULL) {
      speed[rows + i] = assignment[i].shell_velocity;
    }
  }
  return status;
}

/* One family for one held value, followed along the history. */
static enum lxg_status along_history(const struct lxg_linefit_model *model, const struct lxg_star *star,
                                     struct lxg_wind_solver *solver, const struct lxg_family *family,
                                     double speed[], struct lxg_line_assignment assignment[],
                                     struct lxg_error *error) {
  struct lxg_speeds *speeds = NULL;
  const double factor = model->follows ? star->gm / model->wind.star.gm : 1.0; /* L_Edd goes with the mass */
  const struct lxg_speeds_source source = {.family = family,
                                           .history = model->history,
                                           .factor = factor,
                                           .branch = model->branch,
                                           .radius = star->radius};
  enum lxg_status status = lxg_speeds_create(&source, solver, &speeds, error);
  if (status == LXG_OK) {
    status = take_speeds(model, speeds, speed, assignment, error);
  }
  lxg_speeds_destroy(speeds);
  return status;
}

/* One wind of the family, the same for all rows. */
static enum lxg_status one_wind(const struct lxg_linefit_model *model, struct lxg_wind_solver *solver,
                                const struct lxg_family *family, const struct lxg_family_index *index,
                                double held, double speed[], struct lxg_line_assignment assignment[],
                                struct lxg_error *error) {
  struct lxg_family_place place;
  struct lxg_speeds *speeds = NULL;
  if (lxg_family_index_branch(index, held, model->branch, &place) == 0) {
    return LXG_OK; /* the columns stay NaN */
  }
  enum lxg_status status = lxg_speeds_create_single(&family->hold, &place, solver, &speeds, error);
  if (status == LXG_OK) {
    status = take_speeds(model, speeds, speed, assignment, error);
  }
  lxg_speeds_destroy(speeds);
  return status;
}

static enum lxg_status trace(const struct lxg_linefit_model *model, struct lxg_wind_solver *solver,
                             const struct lxg_wind_hold *hold, struct lxg_family *family,
                             struct lxg_error *error) {
  struct lxg_family_options options = lxg_family_options_default();
  options.tolerance = model->family_tolerance;
  options.radius_most = model->radius_most;
  return lxg_family_trace(solver, hold, &options, family, error);
}

/* Two held quantities: one family a mass serves every held value. */
static enum lxg_status single_winds(const struct lxg_linefit_model *model, struct lxg_wind_solver *solver,
                                    size_t count, const double held[], double speed[],
                                    struct lxg_line_assignment assignment[], struct lxg_error *error) {
  struct lxg_family family = {0};
  struct lxg_family_index *index = NULL;
  enum lxg_status status = trace(model, solver, &model->hold[0], &family, error);
  if (status == LXG_OK) {
    status =
        lxg_family_index_create(&family, (enum lxg_family_quantity)model->hold[1].quantity, &index, error);
  }
  for (size_t k = 0; k < count && status == LXG_OK; k++) {
    status = one_wind(model, solver, &family, index, held[k], &speed[k * lxg_linefit_columns(model)],
                      assignment, error);
  }
  lxg_family_index_destroy(index);
  lxg_family_free(&family);
  return status;
}

/* A history: one family a held value. */
static enum lxg_status histories(const struct lxg_linefit_model *model, const struct lxg_star *star,
                                 struct lxg_wind_solver *solver, size_t count, const double held[],
                                 double speed[], struct lxg_line_assignment assignment[],
                                 struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (size_t k = 0; k < count && (status == LXG_OK || is_answer(status)); k++) {
    struct lxg_family family = {0};
    const struct lxg_wind_hold hold = {model->hold[0].quantity, held[k]};
    status = trace(model, solver, &hold, &family, error);
    if (status == LXG_OK) {
      status = along_history(model, star, solver, &family, &speed[k * lxg_linefit_columns(model)], assignment,
                             error);
    }
    lxg_family_free(&family);
  }
  return status;
}

enum lxg_status lxg_linefit_speeds(const struct lxg_linefit_model *model, double gm, size_t count,
                                   const double held[], double speed[],
                                   struct lxg_line_assignment assignment[], struct lxg_error *error) {
  struct lxg_line_assignment *own = NULL;
  struct lxg_wind_model wind = model->wind;
  struct lxg_wind_solver *solver = NULL;
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < count * lxg_linefit_columns(model); i++) {
    speed[i] = NAN;
  }
  if (assignment == NULL) {
    assignment = own = lxg_alloc(model->lines->count, sizeof *own);
    if (own == NULL) {
      return lxg_error_set(error, LXG_MEMORY, "memory", "model speeds: out of memory");
    }
  }
  wind.star.gm = gm;
  if (model->dwarf) {
    status = lxg_star_dwarf_radius(gm / LXG_GRAVITATION, &wind.star.radius, error);
  }
  if (status == LXG_OK) {
    status = lxg_wind_solver_create(&wind, NULL, &solver, error);
  }
  if (status == LXG_OK) {
    status = model->history != NULL
                 ? histories(model, &wind.star, solver, count, held, speed, assignment, error)
                 : single_winds(model, solver, count, held, speed, assignment, error);
    if (is_answer(status)) {
      lxg_error_clear(error);
      status = LXG_OK;
    }
  }
  lxg_wind_solver_destroy(solver);
  lxg_free(own);
  return status;
}

/* ---- grid --------------------------------------------------------------------------------------------------------- */

static double node(double low, double high, size_t count, size_t i) {
  return low * pow(high / low, (double)i / (double)(count - 1));
}

static enum lxg_status check_range(const struct lxg_linefit_range *range, struct lxg_error *error) {
  const bool good = range->mass_low > 0.0 && range->mass_high > range->mass_low &&
                    isfinite(range->mass_high) && range->held_low > 0.0 &&
                    range->held_high > range->held_low && isfinite(range->held_high) &&
                    range->masses >= NODES_LEAST && range->masses <= NODES_MOST &&
                    range->values >= NODES_LEAST && range->values <= NODES_MOST;
  return good ? LXG_OK
              : lxg_error_set(error, LXG_INPUT, "linefit-range",
                              "grid of the fit: masses and held values rise from above 0, %d to %d of each",
                              NODES_LEAST, NODES_MOST);
}

/* Nodes that have every speed which any node has. */
static size_t whole_nodes(const struct lxg_linefit_grid *grid) {
  const size_t nodes = grid->range.masses * grid->range.values;
  size_t whole = 0;
  for (size_t k = 0; k < nodes; k++) {
    bool all = true;
    for (size_t i = 0; i < grid->columns && all; i++) {
      bool anywhere = false;
      for (size_t other = 0; other < nodes && !anywhere; other++) {
        anywhere = isfinite(grid->ln_speed[other * grid->columns + i]);
      }
      all = !anywhere || isfinite(grid->ln_speed[k * grid->columns + i]);
    }
    whole += all;
  }
  return whole;
}

enum lxg_status lxg_linefit_grid(const struct lxg_linefit_model *model, const struct lxg_linefit_range *range,
                                 struct lxg_linefit_grid *grid, struct lxg_error *error) {
  double held[NODES_MOST];
  memset(grid, 0, sizeof *grid);
  enum lxg_status status = check_range(range, error);
  if (status != LXG_OK) {
    return status;
  }
  grid->range = *range;
  grid->columns = lxg_linefit_columns(model);
  const size_t stride = range->values * grid->columns;
  grid->ln_speed = lxg_alloc(range->masses * stride, sizeof *grid->ln_speed);
  if (grid->ln_speed == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "grid of the fit: out of memory");
  }
  for (size_t k = 0; k < range->values; k++) {
    held[k] = node(range->held_low, range->held_high, range->values, k);
  }
  for (size_t m = 0; m < range->masses && status == LXG_OK; m++) {
    status = lxg_linefit_speeds(model, node(range->mass_low, range->mass_high, range->masses, m),
                                range->values, held, &grid->ln_speed[m * stride], NULL, error);
  }
  for (size_t i = 0; i < range->masses * stride && status == LXG_OK; i++) {
    grid->ln_speed[i] = grid->ln_speed[i] > 0.0 ? log(grid->ln_speed[i]) : (double)NAN;
  }
  if (status == LXG_OK) {
    grid->nodes = whole_nodes(grid);
  } else {
    lxg_linefit_grid_free(grid);
  }
  return status;
}

void lxg_linefit_grid_free(struct lxg_linefit_grid *grid) {
  if (grid != NULL) {
    lxg_free(grid->ln_speed);
    memset(grid, 0, sizeof *grid);
  }
}

/* ---- between the nodes -------------------------------------------------------------------------------------------- */

/* Cubic through the middle two of four values at equal steps, slopes from their neighbours; a missing neighbour is put on the
 * parabola (or line) of the others. */
static double cubic(const double y[4], double t) {
  const double b = y[1], c = y[2];
  const double a = isfinite(y[0]) ? y[0] : isfinite(y[3]) ? 3.0 * b - 3.0 * c + y[3] : 2.0 * b - c;
  const double d = isfinite(y[3]) ? y[3] : 3.0 * c - 3.0 * b + a;
  const double left = 0.5 * (c - a), right = 0.5 * (d - b), rise = c - b;
  return b + t * (left + t * (3.0 * rise - 2.0 * left - right + t * (left + right - 2.0 * rise)));
}

/* Cell and place in it of a value between `low` and `high`; false outside. */
static bool locate(double low, double high, size_t count, double value, size_t *cell, double *t) {
  const double at = log(value / low) / log(high / low) * (double)(count - 1);
  if (!(at >= 0.0) || at > (double)(count - 1)) {
    return false;
  }
  *cell = at >= (double)(count - 1) ? count - 2 : (size_t)at;
  *t = at - (double)*cell;
  return true;
}

/* ln v of a column at node (m, k); NaN beyond the grid. m and k are one larger than the node, so that -1 can be said. */
static double value_at(const struct lxg_linefit_grid *grid, size_t m, size_t k, size_t column) {
  if (m == 0 || k == 0 || m > grid->range.masses || k > grid->range.values) {
    return NAN;
  }
  return grid->ln_speed[((m - 1) * grid->range.values + k - 1) * grid->columns + column];
}

double lxg_linefit_at(const struct lxg_linefit_grid *grid, double gm, double held, size_t column) {
  const struct lxg_linefit_range *range = &grid->range;
  size_t m = 0, k = 0;
  double s = 0.0, t = 0.0, line[4];
  if (!locate(range->mass_low, range->mass_high, range->masses, gm, &m, &s) ||
      !locate(range->held_low, range->held_high, range->values, held, &k, &t)) {
    return NAN;
  }
  for (size_t i = 0; i < 4; i++) {
    const double y[4] = {value_at(grid, m + i, k, column), value_at(grid, m + i, k + 1, column),
                         value_at(grid, m + i, k + 2, column), value_at(grid, m + i, k + 3, column)};
    line[i] = isfinite(y[1]) && isfinite(y[2]) ? cubic(y, t) : (double)NAN;
  }
  return isfinite(line[1]) && isfinite(line[2]) ? exp(cubic(line, s)) : (double)NAN;
}
