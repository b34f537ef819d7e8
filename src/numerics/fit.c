/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fit.c - checks, best point, covariance and the test of what the data see (see fit.h).
 *
 * With J the Jacobian in u, each column divided by its length d_j: J = U S V^T D. Directions with a singular
 * value below settings.rank are unseen: they are left out of C = D^-1 V S^-2 V^T D^-1, and a parameter that takes
 * part in one (by more than `unseen_share`) has no linear error. The covariance of the parameters follows with
 * dp/du on both sides. Can fail: bad description, no model at the start, iteration limit, memory.
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "numerics/fit_internal.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_linalg.h>
#include <gsl/gsl_sf_gamma.h>
#include <math.h>
#include <stdio.h>
#include <string.h>

static const double unseen_share =
    1e-3; /* a component of an unseen direction smaller than this is rounding */

void lxg_fit_defaults(struct lxg_fit_settings *settings) {
  *settings = (struct lxg_fit_settings){.iterations = 100,
                                        .tolerance = 1e-10,
                                        .decrement = 1e-6,
                                        .difference = 6e-6,
                                        .rank = 1e-6,
                                        .rise = 1.0,
                                        .profile_reach = 64.0,
                                        .profile_reach_u = 40.0,
                                        .profile_precision = 1e-3};
}

static enum lxg_status check_parameter(const struct lxg_fit_parameter *parameter, struct lxg_error *error) {
  const double start = parameter->start;
  const char *const name = parameter->name != NULL ? parameter->name : "?";
  if (!isfinite(start) || (parameter->kind == LXG_FIT_POSITIVE && !(start > 0.0))) {
    return lxg_error_set(error, LXG_INPUT, "fit-start", "start of %s = %.10g: finite%s", name, start,
                         parameter->kind == LXG_FIT_POSITIVE ? " and above 0" : "");
  }
  if (parameter->kind == LXG_FIT_INTERVAL) {
    if (!(isfinite(parameter->low) && isfinite(parameter->high) && parameter->low < parameter->high)) {
      return lxg_error_set(error, LXG_INPUT, "fit-bounds", "bounds of %s = %.10g, %.10g: finite and rising",
                           name, parameter->low, parameter->high);
    }
    if (!(start > parameter->low && start < parameter->high)) {
      return lxg_error_set(error, LXG_INPUT, "fit-start", "start of %s = %.10g: inside (%.10g, %.10g)", name,
                           start, parameter->low, parameter->high);
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_fit_work_init(struct lxg_fit_work *work, const struct lxg_fit_problem *problem,
                                  const struct lxg_fit_settings *settings, struct lxg_error *error) {
  *work = (struct lxg_fit_work){.problem = problem, .settings = settings, .fatal = LXG_OK};
  if (problem->parameters < 1 || problem->parameters > LXG_FIT_PARAMETERS || problem->parameter == NULL) {
    return lxg_error_set(error, LXG_INPUT, "fit-parameters", "parameters of the fit = %zu: 1 to %d",
                         problem->parameters, (int)LXG_FIT_PARAMETERS);
  }
  if (problem->residuals < 1 || problem->residual == NULL) {
    return lxg_error_set(error, LXG_INPUT, "fit-residuals", "residuals of the fit = %zu: at least 1",
                         problem->residuals);
  }
  for (size_t j = 0; j < problem->parameters; j++) {
    const enum lxg_status status = check_parameter(&problem->parameter[j], error);
    if (status != LXG_OK) {
      return status;
    }
    work->u[j] = lxg_fit_inner(&problem->parameter[j], problem->parameter[j].start);
  }
  work->rows = problem->residuals > problem->parameters ? problem->residuals : problem->parameters;
  work->above = lxg_alloc(work->rows, sizeof *work->above);
  work->below = lxg_alloc(work->rows, sizeof *work->below);
  if (work->above == NULL || work->below == NULL) {
    lxg_fit_work_free(work);
    return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for %zu residuals", work->rows);
  }
  return LXG_OK;
}

void lxg_fit_work_free(struct lxg_fit_work *work) {
  lxg_free(work->above);
  lxg_free(work->below);
  work->above = NULL;
  work->below = NULL;
}

/* Lengths d_j of the columns; each column with a length is divided by it. */
static void scale_columns(gsl_matrix *a, double *length) {
  for (size_t j = 0; j < a->size2; j++) {
    double sum = 0.0;
    for (size_t i = 0; i < a->size1; i++) {
      const double x = gsl_matrix_get(a, i, j);
      sum += x * x;
    }
    length[j] = sqrt(sum);
    for (size_t i = 0; i < a->size1 && length[j] > 0.0; i++) {
      gsl_matrix_set(a, i, j, gsl_matrix_get(a, i, j) / length[j]);
    }
  }
}

/* Adds one seen direction to the covariance (in u) and to the decrement g^T C g = sum_k (u_k . f)^2 of that
 * direction. */
static void add_seen(const double *v, double s, const double *length, size_t count,
                     struct lxg_fit_result *result) {
  for (size_t i = 0; i < count; i++) {
    for (size_t j = 0; j < count; j++) {
      if (length[i] > 0.0 && length[j] > 0.0) {
        result->covariance[i][j] += v[i] * v[j] / (s * s * length[i] * length[j]);
      }
    }
  }
}

static void fill_covariance(const struct lxg_fit_settings *settings, const gsl_matrix *left,
                            const gsl_matrix *v, const gsl_vector *s, const double *length,
                            const double *residual, struct lxg_fit_result *result) {
  const size_t count = v->size1;
  memset(result->covariance, 0, sizeof result->covariance);
  result->rank = 0;
  result->decrement = 0.0;
  for (size_t j = 0; j < count; j++) {
    result->estimate[j].constrained = length[j] > 0.0;
  }
  for (size_t k = 0; k < count; k++) {
    double direction[LXG_FIT_PARAMETERS];
    for (size_t j = 0; j < count; j++) {
      direction[j] = gsl_matrix_get(v, j, k);
    }
    if (gsl_vector_get(s, k) > settings->rank) {
      result->rank++;
      add_seen(direction, gsl_vector_get(s, k), length, count, result);
      double along = 0.0;
      for (size_t i = 0; i < left->size1; i++) {
        along += gsl_matrix_get(left, i, k) * residual[i];
      }
      result->decrement += along * along;
      continue;
    }
    for (size_t j = 0; j < count; j++) {
      if (fabs(direction[j]) > unseen_share) {
        result->estimate[j].constrained = false;
      }
    }
  }
}

/* From u to the parameters: value, dp/du on both sides of the covariance, sigma. */
static void fill_estimates(const struct lxg_fit_work *work, struct lxg_fit_result *result) {
  const struct lxg_fit_problem *problem = work->problem;
  for (size_t i = 0; i < problem->parameters; i++) {
    const double row = lxg_fit_scale(&problem->parameter[i], work->u[i]);
    for (size_t j = 0; j < problem->parameters; j++) {
      result->covariance[i][j] *= row * lxg_fit_scale(&problem->parameter[j], work->u[j]);
    }
    struct lxg_fit_estimate *const estimate = &result->estimate[i];
    estimate->value = lxg_fit_outer(&problem->parameter[i], work->u[i]);
    estimate->sigma = estimate->constrained ? sqrt(result->covariance[i][i]) : INFINITY;
    estimate->lower = NAN;
    estimate->upper = NAN;
    estimate->lower_end = LXG_FIT_OPEN;
    estimate->upper_end = LXG_FIT_OPEN;
  }
}

static enum lxg_status covariance(const struct lxg_fit_work *work, double *jacobian, const double *residual,
                                  struct lxg_fit_result *result, struct lxg_error *error) {
  const size_t count = work->problem->parameters;
  double length[LXG_FIT_PARAMETERS], v_data[LXG_FIT_PARAMETERS * LXG_FIT_PARAMETERS],
      s_data[LXG_FIT_PARAMETERS], room[LXG_FIT_PARAMETERS];
  gsl_matrix_view a = gsl_matrix_view_array(jacobian, work->rows, count);
  gsl_matrix_view v = gsl_matrix_view_array(v_data, count, count);
  gsl_vector_view s = gsl_vector_view_array(s_data, count);
  gsl_vector_view w = gsl_vector_view_array(room, count);
  scale_columns(&a.matrix, length);
  if (gsl_linalg_SV_decomp(&a.matrix, &v.matrix, &s.vector, &w.vector) != GSL_SUCCESS) {
    return lxg_error_set(error, LXG_SINGULAR, "fit-covariance",
                         "the Jacobian at the minimum cannot be decomposed");
  }
  fill_covariance(work->settings, &a.matrix, &v.matrix, &s.vector, length, residual, result);
  fill_estimates(work, result);
  return LXG_OK;
}

static void fill_quality(const struct lxg_fit_work *work, double chi2, struct lxg_fit_result *result) {
  result->parameters = work->problem->parameters;
  result->chi2 = chi2;
  result->degrees = (long)work->problem->residuals - (long)work->problem->parameters;
  result->p_value = NAN;
  gsl_sf_result p;
  if (result->degrees >= 1 &&
      gsl_sf_gamma_inc_Q_e(0.5 * (double)result->degrees, 0.5 * chi2, &p) == GSL_SUCCESS) {
    result->p_value = p.val;
  } else if (result->degrees >= 1 && chi2 > (double)result->degrees) {
    result->p_value = 0.0; /* the only failure is underflow */
  }
  result->iterations += work->iterations;
  result->evaluations += work->evaluations;
}

static enum lxg_status solve(struct lxg_fit_work *work, double *jacobian, double *residual,
                             struct lxg_fit_result *result, struct lxg_error *error) {
  double chi2 = INFINITY;
  bool converged = false;
  enum lxg_status status = lxg_fit_minimise(work, LXG_FIT_NONE, &chi2, &converged, jacobian, residual, error);
  if (status != LXG_OK) {
    return status;
  }
  if (!isfinite(chi2)) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "fit-start-model",
                         "the model has no answer at the starting values of the fit");
  }
  status = covariance(work, jacobian, residual, result, error);
  if (status != LXG_OK) {
    return status;
  }
  fill_quality(work, chi2, result);
  if (!converged && !(result->decrement <= work->settings->decrement)) {
    return lxg_error_set(
        error, LXG_NOT_CONVERGED, "fit-iterations",
        "a Newton step could still lower chi^2 = %.10g by %.3g after %d iterations: at most %.3g", chi2,
        result->decrement, work->iterations, work->settings->decrement);
  }
  return LXG_OK;
}

enum lxg_status lxg_fit_solve(const struct lxg_fit_problem *problem, const struct lxg_fit_settings *settings,
                              struct lxg_fit_result *result, struct lxg_error *error) {
  struct lxg_fit_settings defaults;
  lxg_fit_defaults(&defaults);
  *result = (struct lxg_fit_result){.parameters = 0};
  struct lxg_fit_work work;
  enum lxg_status status = lxg_fit_work_init(&work, problem, settings != NULL ? settings : &defaults, error);
  if (status != LXG_OK) {
    return status;
  }
  double *const jacobian = lxg_alloc(work.rows * problem->parameters, sizeof *jacobian);
  double *const residual = lxg_alloc(work.rows, sizeof *residual);
  if (jacobian != NULL && residual != NULL) {
    status = solve(&work, jacobian, residual, result, error);
  } else {
    status = lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for %zu residuals", work.rows);
  }
  lxg_free(residual);
  lxg_free(jacobian);
  lxg_fit_work_free(&work);
  return status;
}

void lxg_fit_warning(const struct lxg_fit_problem *problem, const struct lxg_fit_result *result, char *text,
                     size_t size) {
  size_t used = 0;
  text[0] = '\0';
  for (size_t j = 0; j < result->parameters && used < size; j++) {
    const struct lxg_fit_estimate *const e = &result->estimate[j];
    const bool profiled = !isnan(e->lower) && !isnan(e->upper);
    const bool open = profiled && (e->lower_end == LXG_FIT_OPEN || e->upper_end == LXG_FIT_OPEN);
    if (!e->constrained || open) {
      const char *const how = !e->constrained                ? "not at all"
                              : e->lower_end != LXG_FIT_OPEN ? "only from below"
                              : e->upper_end != LXG_FIT_OPEN ? "only from above"
                                                             : "on neither side";
      const int n = snprintf(text + used, size - used, "%s%s %s", used == 0 ? "the data constrain " : ", ",
                             problem->parameter[j].name, how);
      used = n < 0 ? size : used + (size_t)n;
    }
  }
}
