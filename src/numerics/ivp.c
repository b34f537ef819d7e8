/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * ivp.c - adaptive marching on top of GSL's odeiv2 steppers (see ivp.h).
 */
#include "luxgale/ivp.h"

#include "luxgale/memory.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_odeiv2.h>
#include <math.h>
#include <stdbool.h>
#include <string.h>

enum { IVP_MAX_DIMENSION = 8 };

static const double step_smallest = 1e-13; /* a step below this share of |x| + 1 ends the march */

struct lxg_ivp {
  size_t dimension;
  gsl_odeiv2_step *step;
  double tolerance;
  lxg_ivp_slope *slope;
  const void *context;
};

static int gsl_slope(double x, const double y[], double dydx[], void *params) {
  const struct lxg_ivp *ivp = params;
  return ivp->slope(ivp->context, x, y, dydx) == LXG_OK ? GSL_SUCCESS : GSL_EDOM;
}

struct lxg_ivp *lxg_ivp_create(size_t dimension, enum lxg_ivp_order order, double tolerance) {
  if (dimension == 0 || dimension > IVP_MAX_DIMENSION) {
    return NULL;
  }
  struct lxg_ivp *ivp = lxg_alloc(1, sizeof *ivp);
  if (ivp == NULL) {
    return NULL;
  }
  ivp->dimension = dimension;
  ivp->step = gsl_odeiv2_step_alloc(order == LXG_IVP_ORDER_8 ? gsl_odeiv2_step_rk8pd : gsl_odeiv2_step_rkf45,
                                    dimension);
  ivp->tolerance = tolerance;
  if (ivp->step == NULL) {
    lxg_ivp_destroy(ivp);
    return NULL;
  }
  return ivp;
}

void lxg_ivp_destroy(struct lxg_ivp *ivp) {
  if (ivp != NULL) {
    if (ivp->step != NULL) {
      gsl_odeiv2_step_free(ivp->step);
    }
    lxg_free(ivp);
  }
}

/* Factor of the next step from the largest error of this one over what it may be: tolerance times max(|y|, 1). The usual law, error ~
 * size^(order + 1), with the customary safety and bounds (common practice, no source). */
static double step_factor(const struct lxg_ivp *ivp, const double y[], const double error[], bool *good) {
  static const double safety = 0.9, least = 0.2, most = 5.0, refuse = 1.1, grow = 0.5;
  const double order = (double)gsl_odeiv2_step_order(ivp->step);
  double worst = 1e-30;
  for (size_t i = 0; i < ivp->dimension; i++) {
    worst = fmax(worst, fabs(error[i]) / (ivp->tolerance * fmax(fabs(y[i]), 1.0)));
  }
  *good = worst <= refuse;
  if (!*good) {
    return fmax(safety / pow(worst, 1.0 / order), least);
  }
  return worst < grow ? fmin(fmax(safety / pow(worst, 1.0 / (order + 1.0)), 1.0), most) : 1.0;
}

/* One accepted step of at most h; on return *h is the next size. */
static enum lxg_status accepted_step(struct lxg_ivp *ivp, const gsl_odeiv2_system *system, double *x,
                                     double *h, double end, double y[]) {
  double kept[IVP_MAX_DIMENSION], error[IVP_MAX_DIMENSION], slope[IVP_MAX_DIMENSION];
  memcpy(kept, y, ivp->dimension * sizeof(double));
  if (gsl_slope(*x, y, slope, ivp) != GSL_SUCCESS) {
    return LXG_DOMAIN;
  }
  for (;;) {
    const double room = end - *x;
    const int last = fabs(*h) >= fabs(room);
    double size = last ? room : *h;
    int status = gsl_odeiv2_step_apply(ivp->step, *x, size, y, error, slope, NULL, system);
    double after[IVP_MAX_DIMENSION];
    if (status == GSL_SUCCESS) {
      status = gsl_slope(*x + size, y, after, ivp);
    }
    if (status != GSL_SUCCESS) {
      *h = 0.25 * size;
    } else {
      bool good;
      *h = size * step_factor(ivp, y, error, &good);
      if (good) {
        *x = last ? end : *x + size;
        return LXG_OK;
      }
    }
    memcpy(y, kept, ivp->dimension * sizeof(double));
    if (!(fabs(*h) > step_smallest * (fabs(*x) + 1.0))) {
      return LXG_DOMAIN;
    }
  }
}

enum lxg_status lxg_ivp_march(struct lxg_ivp *ivp, lxg_ivp_slope *slope, const void *context,
                              lxg_ivp_watch *watch, void *watcher, double *x, double end, double first_step,
                              int step_limit, double y[], int *stopped) {
  ivp->slope = slope;
  ivp->context = context;
  gsl_odeiv2_step_reset(ivp->step);
  const gsl_odeiv2_system system = {.function = gsl_slope, .dimension = ivp->dimension, .params = ivp};
  double h = copysign(fabs(first_step), end - *x);
  *stopped = watch == NULL ? 0 : watch(watcher, *x, y);
  for (int i = 0; *stopped == 0 && *x != end; i++) {
    if (i >= step_limit) {
      return LXG_NOT_CONVERGED;
    }
    const enum lxg_status status = accepted_step(ivp, &system, x, &h, end, y);
    if (status != LXG_OK) {
      return status;
    }
    *stopped = watch == NULL ? 0 : watch(watcher, *x, y);
  }
  return LXG_OK;
}
