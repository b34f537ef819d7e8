/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * quadrature.c - composite Gauss-Legendre quadrature with GSL's nodes (see numerics.h).
 *
 * Fixed order, so the result is a smooth function of the integrand. Can fail: a value that is not finite, memory.
 */
#include "luxgale/numerics.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_integration.h>
#include <math.h>

enum { GAUSS_POINTS = 16 }; /* exp over 4 e-folds to rounding */

enum lxg_status lxg_quadrature_gauss(lxg_numerics_function *function, const void *parameters, double low,
                                     double high, size_t panels, double *integral, struct lxg_error *error) {
  gsl_integration_glfixed_table *const table = gsl_integration_glfixed_table_alloc(GAUSS_POINTS);
  if (table == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "no memory for a quadrature rule");
  }
  double sum = 0.0;
  for (size_t panel = 0; panel < panels; panel++) {
    const double from = low + (high - low) * ((double)panel / (double)panels);
    const double to = low + (high - low) * ((double)(panel + 1) / (double)panels);
    for (size_t i = 0; i < GAUSS_POINTS; i++) {
      double x = 0.0, weight = 0.0;
      (void)gsl_integration_glfixed_point(from, to, i, &x, &weight,
                                          table); /* fails only for i outside the rule */
      sum += weight * function(x, parameters);
    }
  }
  gsl_integration_glfixed_table_free(table);
  if (!isfinite(sum)) {
    return lxg_error_set(error, LXG_DOMAIN, "quadrature-value", "integrand over [%.10g, %.10g] is not finite",
                         low, high);
  }
  *integral = sum;
  return LXG_OK;
}
