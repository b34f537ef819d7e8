/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lines_assign.c - which system a measurement belongs to, and how sure that is (see lines.h).
 *
 * ln L_wind, ln L_shell = sum over the component's rows of -(v - model)^2/(2 s^2) - ln(s sqrt(2 pi)); ln L_other
 * = -n ln range; posterior = prior L over their sum. Rows compared with rest wavelengths (emission peaks) carry
 * no information and are left out of the sums. Can fail: priors, a model failure that is not "there is none".
 */
#include "luxgale/constants.h"
#include "luxgale/lines.h"

#include <math.h>
#include <string.h>

void lxg_line_assign_defaults(struct lxg_line_assign_settings *settings) {
  *settings =
      (struct lxg_line_assign_settings){.prior = {0.45, 0.45, 0.10}, .scatter = 0.0, .other_range = 1e9};
}

static enum lxg_status check(const struct lxg_line_assign_settings *settings, struct lxg_error *error) {
  double sum = 0.0;
  bool good = true;
  for (int k = 0; k < LXG_LINE_SYSTEMS; k++) {
    good = good && settings->prior[k] >= 0.0 && isfinite(settings->prior[k]);
    sum += settings->prior[k];
  }
  if (!(good && sum > 0.0 && settings->scatter >= 0.0 && isfinite(settings->scatter) &&
        settings->other_range > 0.0 && isfinite(settings->other_range))) {
    return lxg_error_set(error, LXG_INPUT, "line-prior",
                         "priors %.6g, %.6g, %.6g, scatter %.6g, range %.6g cm/s: finite, not below 0, the "
                         "first three not all "
                         "0, the last above 0",
                         settings->prior[0], settings->prior[1], settings->prior[2], settings->scatter,
                         settings->other_range);
  }
  return LXG_OK;
}

/* A model speed, NaN if there is none at the epoch. */
static enum lxg_status ask(lxg_line_velocity *velocity, void *context, const struct lxg_line *line,
                           enum lxg_line_model model, double depth, double *answer, struct lxg_error *error) {
  struct lxg_error reason = {.status = LXG_OK};
  *answer = NAN;
  const enum lxg_status status = velocity(context, line->epoch, model, depth, answer, &reason);
  if (status == LXG_NO_SOLUTION || status == LXG_DOMAIN) {
    *answer = NAN;
    return LXG_OK;
  }
  if (status != LXG_OK) {
    if (error != NULL) {
      *error = reason;
      error->status = status;
    }
    lxg_error_context(error, "finding the %s speed for row %zu (%s)", lxg_line_model_name(model), line->row,
                      line->label);
  }
  return status;
}

static double ln_gauss(const struct lxg_line *line, double model, double scatter) {
  if (!isfinite(model)) {
    return -INFINITY;
  }
  const double s = hypot(line->error, scatter), d = (line->velocity - model) / s;
  return -0.5 * d * d - log(s) - 0.5 * log(2.0 * LXG_PI);
}

static bool same_component(const struct lxg_line *a, const struct lxg_line *b) {
  return a == b || (a->component[0] != '\0' && strcmp(a->component, b->component) == 0);
}

/* ln(prior L) of each system for the component of row i; false if none of its rows says anything. */
static bool likelihoods(const struct lxg_lines *lines, const struct lxg_line_map *map,
                        const struct lxg_line_assign_settings *settings,
                        const struct lxg_line_assignment *assignment, size_t i,
                        double ln_weight[LXG_LINE_SYSTEMS]) {
  bool informative = false;
  for (int k = 0; k < LXG_LINE_SYSTEMS; k++) {
    ln_weight[k] = log(settings->prior[k]);
  }
  for (size_t j = 0; j < lines->count; j++) {
    const struct lxg_line *const line = &lines->line[j];
    const bool known = isfinite(assignment[j].wind_velocity) || isfinite(assignment[j].shell_velocity);
    if (same_component(&lines->line[i], line) && map->kind[line->kind].model != LXG_LINE_MODEL_REST &&
        known) {
      ln_weight[LXG_LINE_WIND] += ln_gauss(line, assignment[j].wind_velocity, settings->scatter);
      ln_weight[LXG_LINE_SHELL] += ln_gauss(line, assignment[j].shell_velocity, settings->scatter);
      ln_weight[LXG_LINE_OTHER] -= log(settings->other_range);
      informative = true;
    }
  }
  return informative;
}

static void normalise(const double ln_weight[LXG_LINE_SYSTEMS], struct lxg_line_assignment *assignment) {
  double largest = -INFINITY, sum = 0.0;
  for (int k = 0; k < LXG_LINE_SYSTEMS; k++) {
    if (ln_weight[k] > largest) {
      largest = ln_weight[k];
      assignment->system = (enum lxg_line_system)k;
    }
  }
  for (int k = 0; k < LXG_LINE_SYSTEMS; k++) {
    assignment->probability[k] = isfinite(largest) ? exp(ln_weight[k] - largest) : 1.0;
    sum += assignment->probability[k];
  }
  for (int k = 0; k < LXG_LINE_SYSTEMS; k++) {
    assignment->probability[k] /= sum;
  }
}

static void assign_row(const struct lxg_lines *lines, const struct lxg_line_map *map,
                       const struct lxg_line_assign_settings *settings, size_t i,
                       struct lxg_line_assignment assignment[]) {
  struct lxg_line_assignment *const a = &assignment[i];
  double ln_weight[LXG_LINE_SYSTEMS];
  a->informative = likelihoods(lines, map, settings, assignment, i, ln_weight);
  for (int k = 0; k < LXG_LINE_OTHER; k++) {
    if (strcmp(lines->line[i].component, lxg_line_system_name((enum lxg_line_system)k)) == 0) {
      a->declared = true;
      a->system = (enum lxg_line_system)k;
      memset(a->probability, 0, sizeof a->probability);
      a->probability[k] = 1.0;
    }
  }
  if (!a->declared) {
    normalise(ln_weight, a);
  }
}

enum lxg_status lxg_lines_assign(const struct lxg_lines *lines, const struct lxg_line_map *map,
                                 lxg_line_velocity *velocity, void *context,
                                 const struct lxg_line_assign_settings *settings,
                                 struct lxg_line_assignment assignment[], struct lxg_error *error) {
  struct lxg_line_assign_settings used;
  lxg_line_assign_defaults(&used);
  used = settings != NULL ? *settings : used;
  enum lxg_status status = check(&used, error);
  for (size_t i = 0; i < lines->count && status == LXG_OK; i++) {
    const struct lxg_line *const line = &lines->line[i];
    struct lxg_line_assignment *const a = &assignment[i];
    *a = (struct lxg_line_assignment){.wind_velocity = NAN, .shell_velocity = NAN};
    if (map->kind[line->kind].model != LXG_LINE_MODEL_REST) {
      status = ask(velocity, context, line, map->kind[line->kind].model, map->kind[line->kind].depth,
                   &a->wind_velocity, error);
      status = status == LXG_OK
                   ? ask(velocity, context, line, LXG_LINE_MODEL_SHELL, 0.0, &a->shell_velocity, error)
                   : status;
    }
  }
  for (size_t i = 0; i < lines->count && status == LXG_OK; i++) {
    assign_row(lines, map, &used, i, assignment);
  }
  return status;
}
