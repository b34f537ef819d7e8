/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * root.c - root of a bracketed function by Brent's method through GSL (see numerics.h).
 *
 * Ends and bracket are checked first, so GSL's own complaints cannot arise. Can fail: no sign change, a value that is not
 * finite, iteration limit, memory.
 */
#include "luxgale/numerics.h"

#include <float.h>
#include <gsl/gsl_errno.h>
#include <gsl/gsl_roots.h>
#include <math.h>

enum { ROOT_ITERATIONS = 200 }; /* bisection from 1e308 to rounding takes about 130 */

struct adapter {
  lxg_numerics_function *function;
  const void *parameters;
};

static double call(double x, void *context) {
  const struct adapter *const adapter = context;
  return adapter->function(x, adapter->parameters);
}

static enum lxg_status iterate(gsl_root_fsolver *solver, gsl_function *function, double low, double high,
                               double tolerance, double *root, struct lxg_error *error) {
  if (gsl_root_fsolver_set(solver, function, low, high) != GSL_SUCCESS) {
    return lxg_error_set(error, LXG_BUG, "root-set", "root search in [%.10g, %.10g] refused", low, high);
  }
  for (int i = 0; i < ROOT_ITERATIONS; i++) {
    if (gsl_root_fsolver_iterate(solver) != GSL_SUCCESS) {
      return lxg_error_set(error, LXG_DOMAIN, "root-value", "the function near %.10g is not a finite number",
                           gsl_root_fsolver_root(solver));
    }
    const double x = gsl_root_fsolver_root(solver);
    const double width = gsl_root_fsolver_x_upper(solver) - gsl_root_fsolver_x_lower(solver);
    if (width <= (tolerance + 4.0 * DBL_EPSILON) * fabs(x) || width <= DBL_MIN) {
      *root = x;
      return LXG_OK;
    }
  }
  return lxg_error_set(error, LXG_NOT_CONVERGED, "root-iterations",
                       "%d steps did not narrow the root in [%.10g, %.10g]", ROOT_ITERATIONS, low, high);
}

enum lxg_status lxg_root_find(lxg_numerics_function *function, const void *parameters, double low,
                              double high, double tolerance, double *root, struct lxg_error *error) {
  struct adapter adapter = {function, parameters};
  gsl_function wrapped = {.function = call, .params = &adapter};
  const double at_low = call(low, &adapter), at_high = call(high, &adapter);
  if (!isfinite(at_low) || !isfinite(at_high)) {
    return lxg_error_set(error, LXG_DOMAIN, "root-value",
                         "function = %.10g at %.10g, %.10g at %.10g: not finite", at_low, low, at_high, high);
  }
  if (at_low == 0.0 || at_high == 0.0) {
    *root = at_low == 0.0 ? low : high;
    return LXG_OK;
  }
  if ((at_low > 0.0) == (at_high > 0.0) || !(low < high)) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "root-bracket",
                         "function = %.10g at %.10g, %.10g at %.10g: no change of sign between", at_low, low,
                         at_high, high);
  }
  gsl_root_fsolver *const solver = gsl_root_fsolver_alloc(gsl_root_fsolver_brent);
  if (solver == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "no memory for a root search");
  }
  const enum lxg_status status = iterate(solver, &wrapped, low, high, tolerance, root, error);
  gsl_root_fsolver_free(solver);
  return status;
}
