/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lines_compare.c - residuals of the measured speeds and their chi^2 (see lines.h). Can fail: a model failure
 * that is not "there is none", a bad scatter.
 */
#include "luxgale/lines.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_sf_gamma.h>
#include <math.h>
#include <stdio.h>
#include <string.h>

static void leave(struct lxg_line_comparison *result, const char *code, const char *reason) {
  result->compared = false;
  result->velocity = NAN;
  result->residual = NAN;
  snprintf(result->reason_code, sizeof result->reason_code, "%s", code);
  snprintf(result->reason, sizeof result->reason, "%s", reason);
}

static void compare(const struct lxg_line *line, double model, double scatter,
                    struct lxg_line_comparison *result) {
  result->compared = true;
  result->velocity = model;
  result->residual = (line->velocity - model) / hypot(line->error, scatter);
  result->reason_code[0] = '\0';
  result->reason[0] = '\0';
}

static void sum(const struct lxg_lines *lines, const struct lxg_line_comparison result[],
                struct lxg_line_chi2 *chi2) {
  *chi2 = (struct lxg_line_chi2){.p_value = NAN};
  double largest = -1.0;
  for (size_t i = 0; i < lines->count; i++) {
    if (result[i].compared) {
      chi2->compared++;
      chi2->chi2 += result[i].residual * result[i].residual;
      if (fabs(result[i].residual) > largest) {
        largest = fabs(result[i].residual);
        chi2->worst = i;
      }
    } else {
      chi2->left++;
    }
  }
  if (chi2->compared > 0) {
    gsl_sf_result p;
    const int status = gsl_sf_gamma_inc_Q_e(0.5 * (double)chi2->compared, 0.5 * chi2->chi2, &p);
    chi2->p_value = status == GSL_SUCCESS ? p.val : 0.0; /* it fails by underflow only */
  }
}

static enum lxg_status check_scatter(double scatter, struct lxg_error *error) {
  return scatter >= 0.0 && isfinite(scatter)
             ? LXG_OK
             : lxg_error_set(error, LXG_INPUT, "line-scatter",
                             "scatter of the model speeds = %.10g cm/s: finite, not below 0", scatter);
}

/* One row by the map, or by its system. */
static enum lxg_status compare_row(const struct lxg_line *line, const struct lxg_line_map *map,
                                   const struct lxg_line_assignment *assignment, double scatter,
                                   lxg_line_velocity *velocity, void *context,
                                   struct lxg_line_comparison *result, struct lxg_error *error) {
  const enum lxg_line_system system = assignment != NULL ? assignment->system : LXG_LINE_WIND;
  const bool peak = map->kind[line->kind].model == LXG_LINE_MODEL_REST;
  result->model = system == LXG_LINE_SHELL && !peak ? LXG_LINE_MODEL_SHELL : map->kind[line->kind].model;
  if (system == LXG_LINE_OTHER) {
    leave(result, "line-other", "the row fits neither the wind nor the shell");
    return LXG_OK;
  }
  if (result->model == LXG_LINE_MODEL_REST) {
    compare(line, 0.0, scatter, result);
    return LXG_OK;
  }
  struct lxg_error reason = {.status = LXG_OK};
  double model = NAN;
  const enum lxg_status status =
      velocity(context, line->epoch, result->model, map->kind[line->kind].depth, &model, &reason);
  if (status == LXG_NO_SOLUTION || status == LXG_DOMAIN) {
    leave(result, reason.code[0] != '\0' ? reason.code : "line-model-none",
          reason.count > 0 ? reason.line[0] : "the model has no speed at this epoch");
    return LXG_OK;
  }
  if (status != LXG_OK) {
    if (error != NULL) {
      *error = reason;
      error->status = status;
    }
    lxg_error_context(error, "finding the %s speed for row %zu (%s)", lxg_line_model_name(result->model),
                      line->row, line->label);
    return status;
  }
  compare(line, model, scatter, result);
  return LXG_OK;
}

enum lxg_status lxg_lines_compare(const struct lxg_lines *lines, const struct lxg_line_map *map,
                                  const struct lxg_line_assignment assignment[], double scatter,
                                  lxg_line_velocity *velocity, void *context,
                                  struct lxg_line_comparison result[], struct lxg_line_chi2 *chi2,
                                  struct lxg_error *error) {
  enum lxg_status status = check_scatter(scatter, error);
  for (size_t i = 0; i < lines->count && status == LXG_OK; i++) {
    status = compare_row(&lines->line[i], map, assignment != NULL ? &assignment[i] : NULL, scatter, velocity,
                         context, &result[i], error);
  }
  if (status == LXG_OK) {
    sum(lines, result, chi2);
  }
  return status;
}

enum lxg_status lxg_lines_compare_given(const struct lxg_lines *lines, const double model[], double scatter,
                                        struct lxg_line_comparison result[], struct lxg_line_chi2 *chi2,
                                        struct lxg_error *error) {
  const enum lxg_status status = check_scatter(scatter, error);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t i = 0; i < lines->count; i++) {
    result[i].model = LXG_LINE_MODELS;
    if (isfinite(model[i])) {
      compare(&lines->line[i], model[i], scatter, &result[i]);
    } else {
      leave(&result[i], "line-model-none", "the model has no speed at this epoch");
    }
  }
  sum(lines, result, chi2);
  return LXG_OK;
}
