/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fit_minimise.c - one trust-region minimisation of chi^2 in internal coordinates (see fit.h), on GSL's
 * multifit_nlinear.
 *
 * A trial point without a model answer returns residuals so large that the step control refuses it and shortens
 * the step. Central differences fall back to one side at the edge of the model's domain. Can fail: memory, a
 * fatal callback.
 */
#include "luxgale/memory.h"
#include "numerics/fit_internal.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_multifit_nlinear.h>
#include <math.h>
#include <string.h>

static const double residual_refused =
    1e10; /* in sigma: larger than any residual a step could be accepted with */

double lxg_fit_inner(const struct lxg_fit_parameter *parameter, double value) {
  switch (parameter->kind) {
  case LXG_FIT_POSITIVE:
    return log(value);
  case LXG_FIT_INTERVAL:
    return log((value - parameter->low) / (parameter->high - value));
  case LXG_FIT_FREE:
    break;
  }
  return value;
}

double lxg_fit_outer(const struct lxg_fit_parameter *parameter, double u) {
  switch (parameter->kind) {
  case LXG_FIT_POSITIVE:
    return exp(u);
  case LXG_FIT_INTERVAL:
    return parameter->low + (parameter->high - parameter->low) / (1.0 + exp(-u));
  case LXG_FIT_FREE:
    break;
  }
  return u;
}

double lxg_fit_scale(const struct lxg_fit_parameter *parameter, double u) {
  switch (parameter->kind) {
  case LXG_FIT_POSITIVE:
    return exp(u);
  case LXG_FIT_INTERVAL: {
    const double half = 0.5 / cosh(0.5 * u); /* e^-u/(1 + e^-u)^2 = 1/[4 cosh^2(u/2)] */
    return (parameter->high - parameter->low) * half * half;
  }
  case LXG_FIT_FREE:
    break;
  }
  return 1.0;
}

static bool no_answer(enum lxg_status status) {
  return status == LXG_DOMAIN || status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED;
}

static void outer_all(const struct lxg_fit_work *work, double *parameter) {
  for (size_t j = 0; j < work->problem->parameters; j++) {
    parameter[j] = lxg_fit_outer(&work->problem->parameter[j], work->u[j]);
  }
}

/* Residuals at work->u; false if there is no model answer (or a fatal failure, noted in the work). */
static bool evaluate(struct lxg_fit_work *work, double *residual) {
  double parameter[LXG_FIT_PARAMETERS];
  outer_all(work, parameter);
  memset(residual, 0, work->rows * sizeof *residual);
  work->evaluations++;
  const enum lxg_status status = work->problem->residual(work->problem->context, parameter, residual);
  if (status != LXG_OK) {
    if (!no_answer(status)) {
      work->fatal = status;
    }
    return false;
  }
  for (size_t i = 0; i < work->problem->residuals; i++) {
    if (!isfinite(residual[i])) {
      return false;
    }
  }
  return true;
}

static double sum_of_squares(const double *residual, size_t count) {
  double sum = 0.0;
  for (size_t i = 0; i < count; i++) {
    sum += residual[i] * residual[i];
  }
  return sum;
}

double lxg_fit_chi2(struct lxg_fit_work *work) {
  return evaluate(work, work->above) ? sum_of_squares(work->above, work->problem->residuals) : INFINITY;
}

static void set_free(struct lxg_fit_work *work, const gsl_vector *x) {
  for (size_t k = 0; k < work->free_count; k++) {
    work->u[work->free_index[k]] = gsl_vector_get(x, k);
  }
}

static int gsl_residual(const gsl_vector *x, void *params, gsl_vector *f) {
  struct lxg_fit_work *work = params;
  set_free(work, x);
  const bool known = evaluate(work, work->above);
  if (work->fatal != LXG_OK) {
    return GSL_EFAILED;
  }
  for (size_t i = 0; i < work->rows; i++) {
    gsl_vector_set(f, i, known ? work->above[i] : residual_refused);
  }
  return GSL_SUCCESS;
}

/* One column by differences about u_j: central, or one-sided against the residuals `here` where one side has no
 * answer. */
static void difference_column(struct lxg_fit_work *work, size_t j, double *here, gsl_vector *column) {
  const double u = work->u[j];
  const double step = work->settings->difference * fmax(1.0, fabs(u));
  work->u[j] = u + step;
  const bool up = evaluate(work, work->above);
  work->u[j] = u - step;
  const bool down = evaluate(work, work->below);
  work->u[j] = u;
  const bool one_sided = up != down;
  const bool known = (up || down) && (!one_sided || evaluate(work, here));
  const double *const high = up ? work->above : here;
  const double *const low = down ? work->below : here;
  const double width = (one_sided ? 1.0 : 2.0) * step;
  for (size_t i = 0; i < work->rows; i++) {
    gsl_vector_set(column, i, known ? (high[i] - low[i]) / width : 0.0);
  }
}

static int jacobian_given(struct lxg_fit_work *work, double *buffer, gsl_matrix *jacobian) {
  const struct lxg_fit_problem *problem = work->problem;
  double parameter[LXG_FIT_PARAMETERS];
  outer_all(work, parameter);
  const enum lxg_status status = problem->jacobian(problem->context, parameter, buffer);
  if (status != LXG_OK) {
    work->fatal = status;
    return GSL_EFAILED;
  }
  gsl_matrix_set_zero(jacobian);
  for (size_t k = 0; k < work->free_count; k++) {
    const size_t j = work->free_index[k];
    const double scale = lxg_fit_scale(&problem->parameter[j], work->u[j]);
    for (size_t i = 0; i < problem->residuals; i++) {
      gsl_matrix_set(jacobian, i, k, buffer[i * problem->parameters + j] * scale);
    }
  }
  return GSL_SUCCESS;
}

static int gsl_jacobian(const gsl_vector *x, void *params, gsl_matrix *jacobian) {
  struct lxg_fit_work *work = params;
  set_free(work, x);
  const size_t width = work->problem->jacobian != NULL ? work->problem->parameters : 1;
  double *const buffer = lxg_alloc(work->rows * width, sizeof *buffer);
  if (buffer == NULL) {
    work->fatal = LXG_MEMORY;
    return GSL_ENOMEM;
  }
  int status = GSL_SUCCESS;
  if (work->problem->jacobian != NULL) {
    status = jacobian_given(work, buffer, jacobian);
  } else {
    for (size_t k = 0; k < work->free_count && work->fatal == LXG_OK; k++) {
      gsl_vector_view column = gsl_matrix_column(jacobian, k);
      difference_column(work, work->free_index[k], buffer, &column.vector);
    }
    status = work->fatal == LXG_OK ? GSL_SUCCESS : GSL_EFAILED;
  }
  lxg_free(buffer);
  return status;
}

/* The driver with its answer sorted into converged or not; the fatal ones are in the work. */
static bool drive(struct lxg_fit_work *work, gsl_multifit_nlinear_workspace *solver,
                  gsl_multifit_nlinear_fdf *fdf, const gsl_vector *start) {
  int info = 0;
  int status = gsl_multifit_nlinear_init(start, fdf, solver);
  if (status == GSL_SUCCESS) {
    const double tolerance = work->settings->tolerance;
    status = gsl_multifit_nlinear_driver((size_t)work->settings->iterations, tolerance, tolerance, 0.0, NULL,
                                         NULL, &info, solver);
    work->iterations += (int)gsl_multifit_nlinear_niter(solver);
  }
  return status == GSL_SUCCESS;
}

static void copy_out(const struct lxg_fit_work *work, gsl_multifit_nlinear_workspace *solver,
                     double *jacobian, double *residual) {
  const gsl_matrix *const j = gsl_multifit_nlinear_jac(solver);
  const gsl_vector *const f = gsl_multifit_nlinear_residual(solver);
  for (size_t i = 0; i < work->rows; i++) {
    for (size_t k = 0; jacobian != NULL && k < work->free_count; k++) {
      jacobian[i * work->free_count + k] = gsl_matrix_get(j, i, k);
    }
    if (residual != NULL) {
      residual[i] = gsl_vector_get(f, i);
    }
  }
}

static void choose_free(struct lxg_fit_work *work, size_t held) {
  work->free_count = 0;
  for (size_t j = 0; j < work->problem->parameters; j++) {
    if (j != held) {
      work->free_index[work->free_count++] = j;
    }
  }
}

enum lxg_status lxg_fit_minimise(struct lxg_fit_work *work, size_t held, double *chi2, bool *converged,
                                 double *jacobian, double *residual, struct lxg_error *error) {
  choose_free(work, held);
  *converged = true;
  *chi2 = lxg_fit_chi2(work);
  if (work->fatal == LXG_OK && isfinite(*chi2) && work->free_count > 0) {
    gsl_multifit_nlinear_parameters parameters = gsl_multifit_nlinear_default_parameters();
    parameters.solver = gsl_multifit_nlinear_solver_svd; /* stands a Jacobian without full rank */
    gsl_multifit_nlinear_workspace *const solver =
        gsl_multifit_nlinear_alloc(gsl_multifit_nlinear_trust, &parameters, work->rows, work->free_count);
    if (solver == NULL) {
      return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory in the least-squares solver");
    }
    double start[LXG_FIT_PARAMETERS] = {0.0};
    for (size_t k = 0; k < work->free_count; k++) {
      start[k] = work->u[work->free_index[k]];
    }
    const gsl_vector_const_view view = gsl_vector_const_view_array(start, work->free_count);
    gsl_multifit_nlinear_fdf fdf = {
        .f = gsl_residual, .df = gsl_jacobian, .n = work->rows, .p = work->free_count, .params = work};
    *converged = drive(work, solver, &fdf, &view.vector);
    if (work->fatal == LXG_OK) {
      set_free(work, gsl_multifit_nlinear_position(solver));
      *chi2 = sum_of_squares(gsl_multifit_nlinear_residual(solver)->data, work->problem->residuals);
      copy_out(work, solver, jacobian, residual);
    }
    gsl_multifit_nlinear_free(solver);
  }
  return work->fatal == LXG_OK
             ? LXG_OK
             : lxg_error_set(error, work->fatal, "fit-callback", "the model behind the fit failed: %s",
                             lxg_strerror(work->fatal));
}
