/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * linefit.c - least squares on a grid of model speeds (see linefit.h).
 */
#include "luxgale/linefit.h"

#include "luxgale/memory.h"

#include <math.h>
#include <string.h>

/* What the residual function reads. */
struct problem {
  const struct lxg_linefit_grid *grid;
  const double *velocity, *sigma; /* [used], scatter included */
  const size_t *column;           /* [used] place of each in the grid */
  size_t used;
};

static enum lxg_status residuals(void *context, const double parameter[], double residual[]) {
  const struct problem *problem = context;
  for (size_t i = 0; i < problem->used; i++) {
    const double model = lxg_linefit_at(problem->grid, parameter[LXG_LINEFIT_MASS],
                                        parameter[LXG_LINEFIT_HELD], problem->column[i]);
    if (!isfinite(model)) {
      return LXG_NO_SOLUTION;
    }
    residual[i] = (problem->velocity[i] - model) / problem->sigma[i];
  }
  return LXG_OK;
}

static bool has_speeds(const struct lxg_linefit_grid *grid, size_t column) {
  for (size_t k = 0; k < grid->range.masses * grid->range.values; k++) {
    if (isfinite(grid->ln_speed[k * grid->columns + column])) {
      return true;
    }
  }
  return false;
}

/* Best of all cell centres: the start of the fit. False if no cell has all speeds. */
static bool best_start(const struct problem *problem, double residual[], double start[2], double *chi2) {
  const struct lxg_linefit_range *range = &problem->grid->range;
  bool found = false;
  for (size_t m = 0; m + 1 < range->masses; m++) {
    for (size_t k = 0; k + 1 < range->values; k++) {
      const double at[2] = {range->mass_low * pow(range->mass_high / range->mass_low,
                                                  ((double)m + 0.5) / (double)(range->masses - 1)),
                            range->held_low * pow(range->held_high / range->held_low,
                                                  ((double)k + 0.5) / (double)(range->values - 1))};
      if (residuals((void *)problem, at, residual) != LXG_OK) {
        continue;
      }
      double sum = 0.0;
      for (size_t i = 0; i < problem->used; i++) {
        sum += residual[i] * residual[i];
      }
      if (!found || sum < *chi2) {
        found = true;
        *chi2 = sum;
        memcpy(start, at, sizeof at);
      }
    }
  }
  return found;
}

static enum lxg_status solve(const struct problem *problem, double residual[],
                             struct lxg_linefit_result *result, struct lxg_error *error) {
  const struct lxg_linefit_range *range = &problem->grid->range;
  double start[2] = {0.0, 0.0};
  if (!best_start(problem, residual, start, &result->start_chi2)) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "linefit-empty",
                         "nowhere in the searched range do winds and shells give a speed for all %zu rows",
                         problem->used);
  }
  const struct lxg_fit_parameter parameter[LXG_LINEFIT_PARAMETERS] = {
      {"stellar mass", LXG_FIT_INTERVAL, start[0], range->mass_low, range->mass_high},
      {"held quantity", LXG_FIT_INTERVAL, start[1], range->held_low, range->held_high}};
  const struct lxg_fit_problem fit = {.parameters = LXG_LINEFIT_PARAMETERS,
                                      .residuals = problem->used,
                                      .parameter = parameter,
                                      .residual = residuals,
                                      .context = (void *)problem};
  const enum lxg_status status = lxg_fit_run(&fit, NULL, &result->fit, error);
  if (status == LXG_OK) {
    lxg_fit_warning(&fit, &result->fit, result->warning, sizeof result->warning);
  }
  return status;
}

enum lxg_status lxg_linefit_run(const struct lxg_linefit_grid *grid, const double velocity[],
                                const double error_1sigma[], const bool use[], double scatter,
                                struct lxg_linefit_result *result, struct lxg_error *error) {
  memset(result, 0, sizeof *result);
  double *number = lxg_alloc(3 * grid->columns, sizeof *number);
  size_t *column = lxg_alloc(grid->columns, sizeof *column);
  enum lxg_status status = number != NULL && column != NULL
                               ? LXG_OK
                               : lxg_error_set(error, LXG_MEMORY, "memory", "fit of lines: out of memory");
  if (status == LXG_OK) {
    double *const sigma = &number[grid->columns], *const residual = &number[2 * grid->columns];
    for (size_t i = 0; i < grid->columns; i++) {
      if ((use == NULL || use[i]) && has_speeds(grid, i)) {
        number[result->used] = velocity[i];
        sigma[result->used] = hypot(error_1sigma[i], scatter);
        column[result->used++] = i;
      }
    }
    const struct problem problem = {grid, number, sigma, column, result->used};
    status = result->used > 0 ? solve(&problem, residual, result, error)
                              : lxg_error_set(error, LXG_NO_SOLUTION, "linefit-rows",
                                              "no row has a model speed in the searched range");
  }
  lxg_free(column);
  lxg_free(number);
  return status;
}

/* ---- zoom --------------------------------------------------------------------------------------------------------- */

static const double zoom_intervals = 6.0; /* half width in half intervals of 68 % */
static const double zoom_cells = 1.5;     /* half width in cells of the grid at least */
static const double zoom_least = 0.7;     /* a range that shrinks less than this is not worth its winds */

/* One parameter: new ends of the range; true if it shrinks, or moves because the best point lies at an end that is none of the
 * whole range. */
static bool narrow(const struct lxg_fit_estimate *estimate, double low, double high, size_t nodes,
                   double whole_low, double whole_high, double *new_low, double *new_high) {
  const double width = log(high / low), cell = width / (double)(nodes - 1), value = estimate->value;
  const bool closed = estimate->lower_end == LXG_FIT_CROSSED && estimate->upper_end == LXG_FIT_CROSSED;
  const bool at_end = (low > whole_low && log(value / low) < 0.5 * cell) ||
                      (high < whole_high && log(high / value) < 0.5 * cell);
  const double intervals = closed ? zoom_intervals * 0.5 * log(estimate->upper / estimate->lower) : 0.0;
  const double half = at_end ? 0.5 * width : fmin(0.5 * width, fmax(intervals, zoom_cells * cell));
  *new_low = fmax(whole_low, value * exp(-half));
  *new_high = fmin(whole_high, value * exp(half));
  return at_end || log(*new_high / *new_low) < zoom_least * width;
}

bool lxg_linefit_zoom(const struct lxg_linefit_grid *grid, const struct lxg_linefit_result *result,
                      const struct lxg_linefit_range *whole, struct lxg_linefit_range *range) {
  const struct lxg_linefit_range *old = &grid->range;
  *range = *whole;
  const bool mass =
      narrow(&result->fit.estimate[LXG_LINEFIT_MASS], old->mass_low, old->mass_high, old->masses,
             whole->mass_low, whole->mass_high, &range->mass_low, &range->mass_high);
  const bool held =
      narrow(&result->fit.estimate[LXG_LINEFIT_HELD], old->held_low, old->held_high, old->values,
             whole->held_low, whole->held_high, &range->held_low, &range->held_high);
  return mass || held;
}
