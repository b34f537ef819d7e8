/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bvp_newton.c - damped Newton iteration, affine invariant: a step is judged by the correction it leaves, measured with
 * the old Jacobian (Deuflhard 2004, "Newton Methods for Nonlinear Problems", algorithm NLEQ-ERR, sect. 3.3.3).
 */
#include "bvp/bvp_internal.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

static const double near =
    0.05; /* a full step that leaves less than this share of its size is close to the solution */

/* Largest component of y and p parts; the unknowns are expected to be of order one (logarithms). Infinite if any
 * component is not finite. */
static double size_of(const double y[], size_t count, const double p[], size_t m) {
  double largest = 0.0;
  for (size_t i = 0; i < count + m; i++) {
    const double value = fabs(i < count ? y[i] : p[i - count]);
    if (!isfinite(value)) {
      return INFINITY;
    }
    largest = fmax(largest, value);
  }
  return largest;
}

/* max |bar - (1 - lambda) d| */
static double deviation(const struct lxg_bvp *b, size_t count, double lambda) {
  double largest = 0.0;
  for (size_t i = 0; i < count; i++) {
    largest = fmax(largest, fabs(b->bar_y[i] - (1.0 - lambda) * b->dy[i]));
  }
  for (size_t i = 0; i < b->m; i++) {
    largest = fmax(largest, fabs(b->bar_p[i] - (1.0 - lambda) * b->dp[i]));
  }
  return largest;
}

static void trial(struct lxg_bvp *b, size_t count, size_t stages, double lambda) {
  for (size_t i = 0; i < count; i++) {
    b->trial_y[i] = b->y[i] + lambda * b->dy[i];
  }
  for (size_t i = 0; i < stages; i++) {
    b->trial_k[i] = b->k[i] + lambda * b->dk[i];
  }
  for (size_t i = 0; i < b->m; i++) {
    b->trial_p[i] = b->p[i] + lambda * b->dp[i];
  }
}

/* The trial becomes the solution, plus (when `polish`) its own simplified correction. */
static void accept(struct lxg_bvp *b, size_t count, size_t stages, double polish) {
  for (size_t i = 0; i < count; i++) {
    b->y[i] = b->trial_y[i] + polish * b->bar_y[i];
  }
  for (size_t i = 0; i < stages; i++) {
    b->k[i] = b->trial_k[i] + polish * b->bar_k[i];
  }
  for (size_t i = 0; i < b->m; i++) {
    b->p[i] = b->trial_p[i] + (polish > 0.0 ? polish * b->bar_p[i] : 0.0);
  }
}

/* One damped step from the correction already in dy, dk, dp. On LXG_OK the trial was accepted; *bar_size is the size of
 * the simplified correction that remains, *lambda the factor used. */
static enum lxg_status damped_step(struct lxg_bvp *b, const struct lxg_bvp_problem *problem,
                                   const struct lxg_bvp_options *options,
                                   struct lxg_bvp_statistics *statistics, double size, double *lambda,
                                   double *bar_size) {
  const size_t count = (b->intervals + 1) * b->n, stages = b->intervals * b->n * b->tableau.stages;
  double grown_from = 0.0; /* the factor before an increase: an increase is tried once only */
  for (;;) {
    if (!(*lambda >= options->damping_floor)) {
      return LXG_NOT_CONVERGED;
    }
    trial(b, count, stages, *lambda);
    const enum lxg_status status = lxg_bvp_linear_simplified(b, problem);
    *bar_size = status == LXG_OK ? size_of(b->bar_y, count, b->bar_p, b->m) : INFINITY;
    if (status != LXG_OK && status != LXG_DOMAIN) {
      return status;
    }
    if (!isfinite(*bar_size)) {
      *lambda *= 0.5;
      statistics->shortened++;
      continue;
    }
    const double next = 0.5 * size * *lambda * *lambda / fmax(deviation(b, count, *lambda), 1e-300);
    if (*bar_size >= size) {
      *lambda = fmin(next, 0.5 * *lambda);
      statistics->shortened++;
      continue;
    }
    const double wanted = fmin(1.0, next);
    if (grown_from == 0.0 && *lambda < 1.0 && wanted >= 4.0 * *lambda) {
      grown_from = *lambda;
      *lambda = wanted;
      continue;
    }
    return LXG_OK;
  }
}

/* A priori damping factor from the last step's simplified correction (still in bar_*) and the new one. */
static double predict(const struct lxg_bvp *b, size_t count, double lambda, double last_size, double last_bar,
                      double size) {
  double change = 0.0;
  for (size_t i = 0; i < count; i++) {
    change = fmax(change, fabs(b->bar_y[i] - b->dy[i]));
  }
  for (size_t i = 0; i < b->m; i++) {
    change = fmax(change, fabs(b->bar_p[i] - b->dp[i]));
  }
  return fmin(1.0, lambda * last_size * last_bar / fmax(change * size, 1e-300));
}

/* Near the solution the old Jacobian serves on: simplified corrections are added while each is much smaller than the last.
 * Starts from an accepted trial whose correction is in bar_*; true once that correction is within the tolerance. */
static bool polish(struct lxg_bvp *b, const struct lxg_bvp_problem *problem,
                   const struct lxg_bvp_options *options, double *bar) {
  static const double contraction = 0.1; /* slower than this a new Jacobian is cheaper */
  const size_t count = (b->intervals + 1) * b->n, stages = b->intervals * b->n * b->tableau.stages;
  for (;;) {
    accept(b, count, stages, 1.0);
    if (*bar <= options->newton_tolerance) {
      return true;
    }
    memcpy(b->trial_y, b->y, count * sizeof(double));
    memcpy(b->trial_k, b->k, stages * sizeof(double));
    memcpy(b->trial_p, b->p, sizeof b->p);
    const double last = *bar;
    if (lxg_bvp_linear_simplified(b, problem) != LXG_OK) {
      return false;
    }
    *bar = size_of(b->bar_y, count, b->bar_p, b->m);
    if (!(*bar <= contraction * last)) {
      return false;
    }
  }
}

enum lxg_status lxg_bvp_newton(struct lxg_bvp *b, const struct lxg_bvp_problem *problem,
                               const struct lxg_bvp_options *options, struct lxg_bvp_statistics *statistics) {
  const size_t count = (b->intervals + 1) * b->n, stages = b->intervals * b->n * b->tableau.stages;
  double lambda = 1.0, last_size = 0.0, last_bar = 0.0;
  for (int iteration = 0; iteration < options->newton_limit; iteration++) {
    enum lxg_status status = lxg_bvp_linear_newton(b, problem);
    statistics->newton_steps++;
    if (status != LXG_OK) {
      return status;
    }
    const double size = size_of(b->dy, count, b->dp, b->m);
    statistics->correction = size;
    if (!isfinite(size)) {
      return LXG_SINGULAR;
    }
    if (iteration > 0 && last_bar > 0.0) {
      lambda = predict(b, count, lambda, last_size, last_bar, size);
    }
    if (size <= options->newton_tolerance) {
      trial(b, count, stages, 1.0);
      memset(b->bar_y, 0, count * sizeof(double));
      memset(b->bar_k, 0, stages * sizeof(double));
      accept(b, count, stages, 0.0);
      return LXG_OK;
    }
    double bar = 0.0;
    status = damped_step(b, problem, options, statistics, size, &lambda, &bar);
    if (status != LXG_OK) {
      return status;
    }
    last_size = size;
    last_bar = bar;
    if (lambda < 1.0 || bar > near * size) {
      accept(b, count, stages, 0.0);
    } else if (polish(b, problem, options, &bar)) {
      statistics->correction = bar;
      return LXG_OK;
    } else {
      lambda = 1.0;
      last_bar = 0.0; /* bar_* has moved on: no prediction from it */
    }
  }
  return LXG_NOT_CONVERGED;
}
