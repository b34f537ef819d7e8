/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * steffen.c - monotone interpolation (Steffen 1990, A&A 239, 443) through GSL (see numerics.h).
 *
 * GSL needs three points; one and two are a constant and a straight line here. No accelerator is kept, so evaluation is a
 * bisection over read-only data. Can fail: points out of order or not finite, evaluation outside the points, memory.
 */
#include "luxgale/memory.h"
#include "luxgale/numerics.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_interp.h>
#include <math.h>
#include <string.h>

enum { STEFFEN_MIN = 3 }; /* points below which GSL has no such interpolant */

struct lxg_steffen {
  size_t count;
  double *x;
  double *y;
  gsl_interp *interp; /* NULL below STEFFEN_MIN points */
};

static enum lxg_status check_points(const double x[], const double y[], size_t count,
                                    struct lxg_error *error) {
  if (count == 0) {
    return lxg_error_set(error, LXG_INPUT, "numerics-count", "0 points: an interpolant needs at least one");
  }
  for (size_t i = 0; i < count; i++) {
    if (!isfinite(x[i]) || !isfinite(y[i])) {
      return lxg_error_set(error, LXG_INPUT, "numerics-value",
                           "point %zu = (%.10g, %.10g): finite numbers only", i, x[i], y[i]);
    }
    if (i > 0 && !(x[i] > x[i - 1])) {
      return lxg_error_set(error, LXG_INPUT, "numerics-order",
                           "x[%zu] = %.17g after %.17g: strictly increasing", i, x[i], x[i - 1]);
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_steffen_create(const double x[], const double y[], size_t count,
                                   struct lxg_steffen **steffen, struct lxg_error *error) {
  *steffen = NULL;
  const enum lxg_status status = check_points(x, y, count, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_steffen *const made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    goto memory;
  }
  made->count = count;
  made->x = lxg_alloc(count, sizeof *made->x);
  made->y = lxg_alloc(count, sizeof *made->y);
  if (made->x == NULL || made->y == NULL) {
    goto memory;
  }
  memcpy(made->x, x, count * sizeof *x);
  memcpy(made->y, y, count * sizeof *y);
  if (count >= STEFFEN_MIN) {
    made->interp = gsl_interp_alloc(gsl_interp_steffen, count);
    if (made->interp == NULL || gsl_interp_init(made->interp, made->x, made->y, count) != GSL_SUCCESS) {
      goto memory;
    }
  }
  *steffen = made;
  return LXG_OK;
memory:
  lxg_steffen_destroy(made);
  return lxg_error_set(error, LXG_MEMORY, "memory", "no memory for an interpolant of %zu points", count);
}

enum lxg_status lxg_steffen_at(const struct lxg_steffen *steffen, double x, double *value, double *slope) {
  const double *const xs = steffen->x, *const ys = steffen->y;
  const size_t last = steffen->count - 1;
  if (!(x >= xs[0] && x <= xs[last])) {
    return LXG_DOMAIN;
  }
  double y = ys[0], dy = 0.0;
  if (steffen->interp != NULL) {
    if (gsl_interp_eval_e(steffen->interp, xs, ys, x, NULL, &y) != GSL_SUCCESS ||
        (slope != NULL && gsl_interp_eval_deriv_e(steffen->interp, xs, ys, x, NULL, &dy) != GSL_SUCCESS)) {
      return LXG_DOMAIN;
    }
  } else if (last == 1) {
    dy = (ys[1] - ys[0]) / (xs[1] - xs[0]);
    y = x == xs[1] ? ys[1] : ys[0] + dy * (x - xs[0]);
  }
  *value = y;
  if (slope != NULL) {
    *slope = dy;
  }
  return LXG_OK;
}

void lxg_steffen_destroy(struct lxg_steffen *steffen) {
  if (steffen == NULL) {
    return;
  }
  if (steffen->interp != NULL) {
    gsl_interp_free(steffen->interp);
  }
  lxg_free(steffen->x);
  lxg_free(steffen->y);
  lxg_free(steffen);
}
