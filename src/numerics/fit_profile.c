/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fit_profile.c - profile-likelihood intervals (see fit.h): the parameter is held at a trial value, chi^2
 * minimised over the others, and the value sought where the minimum has risen by settings.rise.
 *
 * Search outward from the best value in steps of one linear sigma, doubled each time, then bisection (the profile
 * is monotone near a minimum but need not be smooth; each trial starts from the last inner point). Can fail:
 * memory, a fatal callback; a lower minimum met on the way is handed back.
 */
#include "numerics/fit_internal.h"

#include <math.h>
#include <string.h>

static const double lower_than_best =
    1e-3; /* chi^2 below the solution by more than this is another minimum */
enum { PROFILE_RESTARTS = 3, PROFILE_STEPS = 64 };

struct side {
  size_t index;
  double best_u;                    /* coordinate of the solution */
  double best;                      /* chi^2 of the solution */
  double step;                      /* first step in u, > 0 */
  double reach;                     /* largest distance in u */
  double sign;                      /* +1 or -1 */
  double inner[LXG_FIT_PARAMETERS]; /* all coordinates at the innermost point known to lie inside */
};

/* Rise of the profile at distance d; infinite without a model. On a finite answer work->u holds the minimum. */
static enum lxg_status rise_at(struct lxg_fit_work *work, const struct side *side, double d, double *rise,
                               struct lxg_error *error) {
  bool converged = false;
  double chi2 = INFINITY;
  memcpy(work->u, side->inner, sizeof work->u);
  work->u[side->index] = side->best_u + side->sign * d;
  const enum lxg_status status = lxg_fit_minimise(work, side->index, &chi2, &converged, NULL, NULL, error);
  *rise = chi2 - side->best;
  return status;
}

static enum lxg_status lower_found(const struct lxg_fit_work *work, struct lxg_fit_result *result,
                                   double rise, struct lxg_error *error) {
  for (size_t j = 0; j < work->problem->parameters; j++) {
    result->estimate[j].value = lxg_fit_outer(&work->problem->parameter[j], work->u[j]);
  }
  result->chi2 += rise;
  return lxg_error_set(error, LXG_NOT_CONVERGED, "fit-profile-lower",
                       "chi^2 = %.10g was met while following a parameter: lower than the solution's by %.3g",
                       result->chi2, -rise);
}

/* Distance and kind of the end on one side. */
static enum lxg_status search(struct lxg_fit_work *work, struct side *side, struct lxg_fit_result *result,
                              double *distance, enum lxg_fit_end *end, struct lxg_error *error) {
  const double wanted = work->settings->rise;
  double inside = 0.0, outside = INFINITY, outside_rise = 0.0, d = fmin(side->step, side->reach);
  for (int i = 0; i < PROFILE_STEPS; i++) {
    double rise = 0.0;
    const enum lxg_status status = rise_at(work, side, d, &rise, error);
    if (status != LXG_OK) {
      return status;
    }
    if (rise < -lower_than_best) {
      return lower_found(work, result, rise, error);
    }
    if (rise < wanted) {
      inside = d;
      memcpy(side->inner, work->u, sizeof side->inner);
    } else {
      outside = d;
      outside_rise = rise;
    }
    if (isfinite(outside) && outside - inside <= work->settings->profile_precision * side->step) {
      break;
    }
    if (!isfinite(outside) && d >= side->reach) {
      *end = LXG_FIT_OPEN;
      *distance = INFINITY;
      return LXG_OK;
    }
    d = isfinite(outside) ? 0.5 * (inside + outside) : fmin(2.0 * d, side->reach);
  }
  *end = isfinite(outside_rise) ? LXG_FIT_CROSSED : LXG_FIT_EDGE;
  *distance = 0.5 * (inside + outside);
  return LXG_OK;
}

static double open_limit(const struct lxg_fit_parameter *parameter, double sign) {
  switch (parameter->kind) {
  case LXG_FIT_POSITIVE:
    return sign < 0.0 ? 0.0 : INFINITY;
  case LXG_FIT_INTERVAL:
    return sign < 0.0 ? parameter->low : parameter->high;
  case LXG_FIT_FREE:
    break;
  }
  return sign * INFINITY;
}

/* First step and reach in u: by the linear sigma, or fixed ones for a parameter without. */
static void set_scale(const struct lxg_fit_work *work, const struct lxg_fit_estimate *estimate,
                      struct side *side) {
  const struct lxg_fit_parameter *const parameter = &work->problem->parameter[side->index];
  const double sigma = estimate->sigma / lxg_fit_scale(parameter, side->best_u);
  const double unit = parameter->kind == LXG_FIT_FREE ? fmax(1.0, fabs(side->best_u)) : 1.0;
  const bool linear = isfinite(sigma) && sigma > 0.0;
  side->step = linear ? sigma : 0.1 * unit;
  side->reach = linear ? work->settings->profile_reach * sigma : work->settings->profile_reach_u * unit;
  if (parameter->kind !=
      LXG_FIT_FREE) { /* u is a logarithm: a step of 1 is large whatever the linear sigma */
    side->step = fmin(side->step, 1.0);
    side->reach = work->settings->profile_reach_u;
  }
}

static enum lxg_status profile(struct lxg_fit_work *work, size_t index, struct lxg_fit_result *result,
                               struct lxg_error *error) {
  const struct lxg_fit_parameter *const parameter = &work->problem->parameter[index];
  struct lxg_fit_estimate *const estimate = &result->estimate[index];
  double best[LXG_FIT_PARAMETERS] = {0.0};
  for (size_t j = 0; j < work->problem->parameters; j++) {
    best[j] = lxg_fit_inner(&work->problem->parameter[j], result->estimate[j].value);
  }
  for (int k = 0; k < 2; k++) {
    struct side side = {
        .index = index, .best_u = best[index], .best = result->chi2, .sign = k == 0 ? -1.0 : 1.0};
    memcpy(side.inner, best, sizeof side.inner);
    set_scale(work, estimate, &side);
    double distance = 0.0;
    enum lxg_fit_end end = LXG_FIT_OPEN;
    const enum lxg_status status = search(work, &side, result, &distance, &end, error);
    if (status != LXG_OK) {
      return status;
    }
    const double limit = isfinite(distance) ? lxg_fit_outer(parameter, side.best_u + side.sign * distance)
                                            : open_limit(parameter, side.sign);
    *(k == 0 ? &estimate->lower : &estimate->upper) = limit;
    *(k == 0 ? &estimate->lower_end : &estimate->upper_end) = end;
  }
  return LXG_OK;
}

enum lxg_status lxg_fit_profile(const struct lxg_fit_problem *problem,
                                const struct lxg_fit_settings *settings, size_t index,
                                struct lxg_fit_result *result, struct lxg_error *error) {
  struct lxg_fit_settings defaults;
  lxg_fit_defaults(&defaults);
  if (index >= problem->parameters || result->parameters != problem->parameters) {
    return lxg_error_set(error, LXG_INPUT, "fit-parameters",
                         "parameter %zu of a result with %zu: solve first", index, result->parameters);
  }
  struct lxg_fit_work work;
  enum lxg_status status = lxg_fit_work_init(&work, problem, settings != NULL ? settings : &defaults, error);
  if (status == LXG_OK) {
    status = profile(&work, index, result, error);
    result->iterations += work.iterations;
    result->evaluations += work.evaluations;
    lxg_fit_work_free(&work);
  }
  return status;
}

static enum lxg_status profile_all(const struct lxg_fit_problem *problem,
                                   const struct lxg_fit_settings *settings, struct lxg_fit_result *result,
                                   struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (size_t j = 0; j < problem->parameters && status == LXG_OK; j++) {
    status = lxg_fit_profile(problem, settings, j, result, error);
  }
  return status;
}

enum lxg_status lxg_fit_run(const struct lxg_fit_problem *problem, const struct lxg_fit_settings *settings,
                            struct lxg_fit_result *result, struct lxg_error *error) {
  enum lxg_status status = lxg_fit_solve(problem, settings, result, error);
  if (status != LXG_OK) {
    return status;
  }
  status = profile_all(problem, settings, result, error);
  for (int i = 0; i < PROFILE_RESTARTS && status == LXG_NOT_CONVERGED; i++) {
    struct lxg_fit_parameter parameter[LXG_FIT_PARAMETERS];
    struct lxg_fit_problem again = *problem;
    again.parameter = parameter;
    const int iterations = result->iterations, evaluations = result->evaluations;
    for (size_t j = 0; j < problem->parameters; j++) {
      parameter[j] = problem->parameter[j];
      parameter[j].start = result->estimate[j].value;
    }
    lxg_error_clear(error);
    status = lxg_fit_solve(&again, settings, result, error);
    result->iterations += iterations;
    result->evaluations += evaluations;
    status = status == LXG_OK ? profile_all(problem, settings, result, error) : status;
  }
  return status;
}
