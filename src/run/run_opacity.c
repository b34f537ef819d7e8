/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_opacity.c - `opacity at` and `opacity tabulate`: the opacity of a case at points and on a grid (see run.h).
 *
 * Variables are those of opacity tables: log10 T [K] and log10 R, R = rho/(T/1e6 K)^3 [g cm^-3]. A point where the opacity is
 * not defined (a table that refuses it, or the limits of opacity.h) has no value; then the answer is not whole.
 */
#include "luxgale/memory.h"
#include "luxgale/opacity_table.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

/* Values of a range come this close [in steps] to its end and still count. */
static const double end_share = 1e-6;

struct lxg_run_opacity lxg_run_opacity_defaults(void) {
  return (struct lxg_run_opacity){.log_t = {NAN, NAN, NAN},
                                  .log_r = {NAN, NAN, NAN},
                                  .hydrogen = NAN,
                                  .helium = NAN,
                                  .cno = NAN,
                                  .metals = NAN};
}

/* ---- at ---- */

static void note_refused(struct lxg_results *results, size_t refused, size_t all) {
  struct lxg_error why = {0};
  if (refused > 0) {
    lxg_error_set(&why, LXG_DOMAIN, "opacity-outside",
                  "%zu of %zu points lie where the opacity of the case is not defined", refused, all);
    lxg_run_unanswered(results, &why);
  }
}

/* The value, or all NaN where there is none; returns whether there is one. */
static bool point_at(const struct lxg_opacity *opacity, double log_t, double log_r,
                     struct lxg_opacity_point *point) {
  *point = (struct lxg_opacity_point){NAN, NAN, NAN, NAN};
  return lxg_opacity_at_log(opacity, log_t, log_r, point) == LXG_OK;
}

static enum lxg_status one_point(const struct lxg_case *input, const struct lxg_run_opacity *asked,
                                 struct lxg_results *results, struct lxg_error *error) {
  if (isnan(asked->log_t[0]) || isnan(asked->log_r[0]) || !isnan(asked->log_t[1]) ||
      !isnan(asked->log_r[1])) {
    return lxg_error_set(
        error, LXG_USAGE, "opacity-points",
        "opacity at: it needs --points FILE, or --log-t NUMBER together with --log-r NUMBER");
  }
  const enum lxg_status status = lxg_run_begin(input, "opacity at", results, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_opacity_point point;
  note_refused(results, point_at(input->opacity, asked->log_t[0], asked->log_r[0], &point) ? 0 : 1, 1);
  struct lxg_node *root = lxg_document_root(results->report);
  lxg_report_opacity_point(root, input->opacity, asked->log_t[0], asked->log_r[0], &point);
  lxg_report_warnings(root);
  return lxg_document_status(results->report, error);
}

static enum lxg_status many_points(const struct lxg_case *input, const char *path,
                                   struct lxg_results *results, struct lxg_error *error) {
  static const char *const keep[] = {"log_t", "log_r"};
  const struct lxg_table_options reading = {.keep = keep, .keep_count = 2};
  struct lxg_table *points = NULL;
  double *log_t = NULL, *log_r = NULL;
  struct lxg_opacity_point *value = NULL;
  *results = (struct lxg_results){.answered = true};
  enum lxg_status status = lxg_table_read(path, &reading, &points, error);
  if (status == LXG_OK) {
    status = lxg_table_cgs(points, "log_t", LXG_DIMENSION_NONE, "", NULL, false, &log_t, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_cgs(points, "log_r", LXG_DIMENSION_NONE, "", NULL, false, &log_r, error);
  }
  if (status == LXG_OK && (value = lxg_alloc(points->rows, sizeof *value)) == NULL) {
    status = lxg_error_set(error, LXG_MEMORY, "memory", "opacity at: out of memory");
  }
  if (status == LXG_OK) {
    size_t refused = 0;
    for (size_t i = 0; i < points->rows; i++) {
      refused += point_at(input->opacity, log_t[i], log_r[i], &value[i]) ? 0 : 1;
    }
    status = lxg_report_opacity_points_table(log_t, log_r, value, points->rows, &results->epochs, error);
    note_refused(results, refused, points->rows);
  }
  lxg_free(value);
  lxg_free(log_r);
  lxg_free(log_t);
  lxg_table_destroy(points);
  return status;
}

enum lxg_status lxg_run_opacity_at(const struct lxg_case *input, const struct lxg_run_options *options,
                                   struct lxg_results *results, struct lxg_error *error) {
  const struct lxg_run_opacity *asked = &options->opacity;
  const bool point = !isnan(asked->log_t[0]) || !isnan(asked->log_r[0]);
  *results = (struct lxg_results){.answered = true};
  if (asked->points != NULL && point) {
    return lxg_error_set(error, LXG_USAGE, "opacity-points",
                         "opacity at: --points excludes --log-t and --log-r");
  }
  return asked->points != NULL ? many_points(input, asked->points, results, error)
                               : one_point(input, asked, results, error);
}

/* ---- tabulate ---- */

/* The nodes of FIRST:LAST:STEP, to be freed by lxg_free. Decimal steps give decimal nodes: they are rounded to 1e-9. */
static enum lxg_status make_axis(const char *option, const double range[3], double **axis, size_t *count,
                                 struct lxg_error *error) {
  const double steps = (range[1] - range[0]) / range[2];
  if (isnan(steps) || !(range[2] > 0.0) || !(steps >= LXG_OPACITY_GRID_LEAST - 1) ||
      !(steps < LXG_OPACITY_GRID_AXIS - 1)) {
    return lxg_error_set(error, LXG_USAGE, "opacity-axis",
                         "opacity tabulate: --%s FIRST:LAST:STEP is needed, with %d to %d nodes", option,
                         LXG_OPACITY_GRID_LEAST, LXG_OPACITY_GRID_AXIS);
  }
  *count = (size_t)floor(steps + end_share) + 1;
  *axis = lxg_alloc(*count, sizeof **axis);
  if (*axis == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "opacity tabulate: out of memory");
  }
  for (size_t i = 0; i < *count; i++) {
    (*axis)[i] = round((range[0] + range[2] * (double)i) * 1e9) / 1e9;
  }
  return LXG_OK;
}

enum lxg_status lxg_run_opacity_tabulate(const struct lxg_case *input, const struct lxg_run_options *options,
                                         struct lxg_results *results, struct lxg_error *error) {
  *results = (struct lxg_results){.answered = true};
  double *log_t = NULL, *log_r = NULL;
  size_t temperatures = 0, densities = 0;
  struct lxg_opacity_grid *grid = NULL;
  struct lxg_buffer source = {0};
  lxg_buffer_format(&source, "luxgale %s, %s", lxg_report_version(),
                    input->opacity_choice.tables > 0
                        ? "interpolated between tables"
                        : lxg_opacity_formula_name(input->opacity_choice.formula));
  enum lxg_status status = lxg_buffer_status(&source, error);
  if (status == LXG_OK) {
    status = make_axis("log-t", options->opacity.log_t, &log_t, &temperatures, error);
  }
  if (status == LXG_OK) {
    status = make_axis("log-r", options->opacity.log_r, &log_r, &densities, error);
  }
  if (status == LXG_OK) {
    status = lxg_opacity_tabulate(input->opacity, &input->composition, log_t, temperatures, log_r, densities,
                                  source.data, &grid, error);
  }
  if (status == LXG_OK) {
    status = lxg_opacity_grid_table(grid, "opacity", &results->epochs, error);
  }
  lxg_opacity_grid_destroy(grid);
  lxg_buffer_free(&source);
  lxg_free(log_r);
  lxg_free(log_t);
  return status;
}
