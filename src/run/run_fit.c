/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_fit.c - the fit of stellar mass and held quantity to the line speeds of a case (see linefit.h).
 *
 * Every row is taken to belong to the wind or to the shell: first as they fit best in the best cell of the grid, then by the best
 * point, until both agree. Leaving out what fits neither would make any fit look good.
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

/* Difference between interpolated and solved speeds at the best point, in sigma, that needs no finer grid. */
static const double interpolation_aim = 0.1;
enum { ZOOMS = 4, ROUNDS = 6 }; /* finer grids, and changes of system on each, at most */

static struct lxg_linefit_model model_of(const struct lxg_case *input,
                                         const struct lxg_run_options *options) {
  struct lxg_linefit_model model = {.wind = lxg_run_model(input),
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
                                    .assign = input->lines.assign};
  model.assign.prior[LXG_LINE_OTHER] = 0.0;
  if (!(model.assign.prior[LXG_LINE_WIND] + model.assign.prior[LXG_LINE_SHELL] > 0.0)) {
    model.assign.prior[LXG_LINE_WIND] = model.assign.prior[LXG_LINE_SHELL] = 0.5;
  }
  return model;
}

/* What the fit works on: measured speeds for every column, and which column of each row is used. */
struct rows {
  size_t count, columns;
  double *velocity, *sigma;               /* [columns] [cm s^-1] */
  bool *use;                              /* [columns] */
  double *speed;                          /* [columns] at the best point, solved without the grid [cm s^-1] */
  struct lxg_line_assignment *assignment; /* [count] there */
};

static void rows_free(struct rows *rows) {
  lxg_free(rows->velocity);
  lxg_free(rows->sigma);
  lxg_free(rows->use);
  lxg_free(rows->speed);
  lxg_free(rows->assignment);
}

/* Takes the systems of the assignment; true if any row changes. */
static bool take_systems(struct rows *rows) {
  bool changed = false;
  for (size_t i = 0; i < rows->count; i++) {
    const bool shell = rows->columns > rows->count && rows->assignment[i].system == LXG_LINE_SHELL;
    changed = changed || rows->use[i] == shell;
    rows->use[i] = !shell;
    if (rows->columns > rows->count) {
      rows->use[rows->count + i] = shell;
    }
  }
  return changed;
}

/* Rows of the case, of no system yet. */
static enum lxg_status rows_make(const struct lxg_linefit_model *model, struct rows *rows,
                                 struct lxg_error *error) {
  const struct lxg_lines *lines = model->lines;
  *rows = (struct rows){.count = lines->count, .columns = lxg_linefit_columns(model)};
  rows->velocity = lxg_alloc(rows->columns, sizeof *rows->velocity);
  rows->sigma = lxg_alloc(rows->columns, sizeof *rows->sigma);
  rows->use = lxg_alloc(rows->columns, sizeof *rows->use);
  rows->speed = lxg_alloc(rows->columns, sizeof *rows->speed);
  rows->assignment = lxg_alloc(rows->count, sizeof *rows->assignment);
  if (rows->velocity == NULL || rows->sigma == NULL || rows->use == NULL || rows->speed == NULL ||
      rows->assignment == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "fit: out of memory");
  }
  for (size_t i = 0; i < rows->columns; i++) {
    rows->velocity[i] = lines->line[i % lines->count].velocity;
    rows->sigma[i] = lines->line[i % lines->count].error;
  }
  return LXG_OK;
}

/* Solves the best point anew and compares it with the grid. */
static enum lxg_status check(const struct lxg_linefit_model *model, const struct lxg_linefit_grid *grid,
                             const struct lxg_linefit_result *result, struct rows *rows,
                             struct lxg_report_fit *report, struct lxg_error *error) {
  const double gm = result->fit.estimate[LXG_LINEFIT_MASS].value;
  const double held = result->fit.estimate[LXG_LINEFIT_HELD].value;
  const enum lxg_status status =
      lxg_linefit_speeds(model, gm, 1, &held, rows->speed, rows->assignment, error);
  report->checked = status == LXG_OK;
  report->interpolation_sigma = 0.0;
  for (size_t i = 0; i < grid->columns && status == LXG_OK; i++) {
    const double interpolated = lxg_linefit_at(grid, gm, held, i);
    if (rows->use[i] && isfinite(interpolated)) {
      const double off = fabs(rows->speed[i] - interpolated) / hypot(rows->sigma[i], model->assign.scatter);
      report->checked = report->checked && isfinite(off);
      report->interpolation_sigma = fmax(report->interpolation_sigma, off);
    }
  }
  return status;
}

/* Fit on one grid, repeated while rows change their system at the best point. `why` tells a fit without answer. */
static enum lxg_status fit_rows(const struct lxg_linefit_model *model, const struct lxg_linefit_grid *grid,
                                struct rows *rows, struct lxg_linefit_result *result,
                                struct lxg_report_fit *report, struct lxg_error *why,
                                struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (int round = 0; round < ROUNDS && status == LXG_OK; round++) {
    report->result = NULL;
    lxg_error_clear(why);
    status =
        lxg_linefit_run(grid, rows->velocity, rows->sigma, rows->use, model->assign.scatter, result, why);
    if (status == LXG_OK) {
      report->result = result;
      status = check(model, grid, result, rows, report, error);
    }
    report->settled = status == LXG_OK && !take_systems(rows);
    if (report->settled) {
      return status;
    }
  }
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

/* True if an interval ends where a cell has no answer: a finer grid comes nearer to where winds end. */
static bool is_cut(const struct lxg_linefit_result *result) {
  bool cut = false;
  for (size_t i = 0; i < LXG_LINEFIT_PARAMETERS; i++) {
    const struct lxg_fit_estimate *estimate = &result->fit.estimate[i];
    cut = cut || estimate->lower_end == LXG_FIT_EDGE || estimate->upper_end == LXG_FIT_EDGE;
  }
  return cut;
}

/* Grid, fit and check, on ever smaller grids until the best point solved anew agrees. `why` tells a fit without answer. */
static enum lxg_status search(const struct lxg_linefit_model *model, const struct lxg_linefit_range *whole,
                              struct rows *rows, struct lxg_linefit_grid *grid,
                              struct lxg_linefit_result *result, struct lxg_report_fit *report,
                              struct lxg_error *why, struct lxg_error *error) {
  struct lxg_linefit_range range = *whole;
  for (report->zooms = 0;; report->zooms++) {
    lxg_linefit_grid_free(grid);
    enum lxg_status status = lxg_linefit_grid(model, &range, grid, error);
    if (status != LXG_OK) {
      return status;
    }
    if (!lxg_linefit_start(model, grid, rows->use)) {
      report->result = NULL;
      return lxg_error_set(why, LXG_NO_SOLUTION, "linefit-empty",
                           "nowhere in the searched range do winds and shells give a speed for every row");
    }
    status = fit_rows(model, grid, rows, result, report, why, error);
    if (status != LXG_OK || report->result == NULL ||
        (report->checked && report->interpolation_sigma <= interpolation_aim && !is_cut(result)) ||
        report->zooms == ZOOMS || !lxg_linefit_zoom(grid, result, whole, &range)) {
      return status;
    }
  }
}

enum lxg_status lxg_run_fit(const struct lxg_case *input, const struct lxg_run_options *options,
                            const struct lxg_speeds *speeds, struct lxg_node *warnings,
                            struct lxg_results *results, struct lxg_error *error) {
  struct lxg_linefit_model model = model_of(input, options);
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
  struct rows rows;
  enum lxg_status status = rows_make(&model, &rows, error);
  if (status == LXG_OK) {
    status = search(&model, &whole, &rows, &grid, &result, &report, &why, error);
  }
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
  rows_free(&rows);
  return status;
}
