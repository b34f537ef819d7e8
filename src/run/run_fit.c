/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_fit.c - the fit of stellar mass and held quantity to the line speeds of a case (see linefit.h).
 *
 * Rows keep the system that they were given at the case's own mass and held value; rows of neither are left out.
 */
#include "luxgale/memory.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

/* Interpolation error of the families behind the grid: far below the errors of measured speeds. */
static const double family_tolerance = 5e-3;

/* Families of other masses are followed to this times the largest photosphere of the case's own winds: beyond lie winds that are
 * slower than any that could fit. */
static const double radius_factor = 8.0;

/* Difference between interpolated and solved speeds at the best point, in sigma, that needs no finer grid; finer grids at most. */
static const double interpolation_aim = 0.1;
enum { ZOOMS = 4 };

static struct lxg_linefit_model model_of(const struct lxg_case *input, const struct lxg_run_options *options,
                                         const struct lxg_line_assignment *assignment) {
  return (struct lxg_linefit_model){.wind = lxg_run_model(input),
                                    .dwarf = input->dwarf,
                                    .hold = {input->hold[0], input->hold[1]},
                                    .holds = input->holds,
                                    .history = input->history,
                                    .follows = input->fit_follows,
                                    .branch = options->branch,
                                    .family_tolerance = family_tolerance,
                                    .radius_most = lxg_family_options_default().radius_most,
                                    .lines = input->lines.lines,
                                    .map = &input->lines.map,
                                    .assignment = assignment};
}

/* Solves the best point anew and compares it with the grid. */
static enum lxg_status check(const struct lxg_case *input, const struct lxg_linefit_model *model,
                             const struct lxg_linefit_grid *grid, const struct lxg_linefit_result *result,
                             struct lxg_report_fit *report, struct lxg_error *error) {
  const double gm = result->fit.estimate[LXG_LINEFIT_MASS].value;
  const double held = result->fit.estimate[LXG_LINEFIT_HELD].value;
  double *speed = lxg_alloc(grid->rows, sizeof *speed);
  if (speed == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "fit: out of memory");
  }
  const enum lxg_status status = lxg_linefit_speeds(model, gm, 1, &held, speed, error);
  report->checked = status == LXG_OK;
  for (size_t i = 0; i < grid->rows && status == LXG_OK; i++) {
    const double interpolated = lxg_linefit_at(grid, gm, held, i);
    if (isfinite(interpolated)) {
      const double off = fabs(speed[i] - interpolated) /
                         hypot(input->lines.lines->line[i].error, input->lines.assign.scatter);
      report->checked = report->checked && isfinite(off);
      report->interpolation_sigma = fmax(report->interpolation_sigma, off);
    }
  }
  lxg_free(speed);
  return status;
}

static enum lxg_status solve(const struct lxg_case *input, const struct lxg_linefit_grid *grid,
                             struct lxg_linefit_result *result, struct lxg_error *error) {
  double *velocity = lxg_alloc(2 * grid->rows, sizeof *velocity);
  if (velocity == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "fit: out of memory");
  }
  double *const sigma = &velocity[grid->rows];
  for (size_t i = 0; i < grid->rows; i++) {
    velocity[i] = input->lines.lines->line[i].velocity;
    sigma[i] = input->lines.lines->line[i].error;
  }
  const enum lxg_status status =
      lxg_linefit_run(grid, velocity, sigma, NULL, input->lines.assign.scatter, result, error);
  lxg_free(velocity);
  return status;
}

/* Largest photospheric radius of the case's own winds. */
static double largest_radius(const struct lxg_case *input, const struct lxg_speeds *speeds) {
  struct lxg_family_place place;
  double radius = 0.0;
  const size_t count = input->history != NULL ? input->history->count : 1;
  for (size_t i = 0; i < count; i++) {
    const double time = input->history != NULL ? input->history->time[i] : 0.0;
    if (lxg_speeds_at(speeds, time, &place, NULL) == LXG_OK) {
      radius = fmax(radius, place.value[LXG_FAMILY_PHOTOSPHERE_RADIUS]);
    }
  }
  return radius;
}

/* Grid, fit and check, on ever smaller grids until the best point solved anew agrees. `why` tells a fit without answer. */
static enum lxg_status search(const struct lxg_case *input, const struct lxg_linefit_model *model,
                              const struct lxg_linefit_range *whole, struct lxg_linefit_grid *grid,
                              struct lxg_linefit_result *result, struct lxg_report_fit *report,
                              struct lxg_error *why, struct lxg_error *error) {
  struct lxg_linefit_range range = *whole;
  for (report->zooms = 0;; report->zooms++) {
    lxg_linefit_grid_free(grid);
    enum lxg_status status = lxg_linefit_grid(model, &range, grid, error);
    if (status != LXG_OK) {
      return status;
    }
    report->result = NULL;
    report->interpolation_sigma = 0.0;
    lxg_error_clear(why);
    status = solve(input, grid, result, why);
    if (status != LXG_OK) {
      return status;
    }
    report->result = result;
    status = check(input, model, grid, result, report, error);
    if (status != LXG_OK || (report->checked && report->interpolation_sigma <= interpolation_aim) ||
        report->zooms == ZOOMS || !lxg_linefit_zoom(grid, result, whole, &range)) {
      return status;
    }
  }
}

enum lxg_status lxg_run_fit(const struct lxg_case *input, const struct lxg_run_options *options,
                            const struct lxg_speeds *speeds, const struct lxg_line_assignment *assignment,
                            struct lxg_node *warnings, struct lxg_results *results, struct lxg_error *error) {
  struct lxg_linefit_model model = model_of(input, options, assignment);
  const struct lxg_wind_hold *held = &input->hold[lxg_linefit_fitted(&model)];
  struct lxg_linefit_range whole = input->fit;
  struct lxg_linefit_grid grid = {0};
  struct lxg_linefit_result result;
  struct lxg_error why = {0};
  if (!(held->value > 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "linefit-held",
                         "%s: error: hold.%s: a fit searches by factors, so the value is above 0",
                         lxg_document_name(input->document), lxg_held_name(held->quantity));
  }
  model.radius_most = fmin(model.radius_most, radius_factor * largest_radius(input, speeds));
  whole.held_low *= held->value;
  whole.held_high *= held->value;
  struct lxg_report_fit report = {.grid = &grid, .why = &why, .held = held->quantity, .whole = &whole};
  enum lxg_status status = search(input, &model, &whole, &grid, &result, &report, &why, error);
  if (why.status != LXG_OK && status == why.status) {
    if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED || status == LXG_DOMAIN) {
      struct lxg_error told = why;
      lxg_run_unanswered(results, &told);
      status = LXG_OK;
    } else if (error != NULL) {
      *error = why;
    }
  }
  if (status == LXG_OK) {
    lxg_report_fit(lxg_document_root(results->report), &report);
    lxg_report_fit_warnings(warnings, &report);
  }
  lxg_linefit_grid_free(&grid);
  return status;
}
