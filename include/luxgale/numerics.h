/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * numerics.h - interpolation, bracketed roots and quadrature in one variable; knows no astrophysics.
 *
 * Thin wrappers over GSL: statuses are translated, its error handler is never needed (a caller of GSL in the same process
 * should still switch it off, see DEVELOPERS.md). Everything is reentrant; objects are read-only once created.
 */
#ifndef LUXGALE_NUMERICS_H
#define LUXGALE_NUMERICS_H

#include "luxgale/status.h"

#include <stddef.h>

/* A function of one variable with its parameters; must not write to shared state. A non-finite value means "outside the
 * domain". */
typedef double lxg_numerics_function(double x, const void *parameters);

struct lxg_steffen; /* opaque, immutable: monotone C1 piecewise cubic (Steffen 1990, A&A 239, 443) */

/* Interpolant through `count` >= 1 points with strictly increasing finite `x` and finite `y`; both are copied. One point gives
 * a constant, two a straight line. Between two points the curve is monotone, so it never leaves their range. LXG_INPUT
 * "numerics-order" or "numerics-value" names the offending point (counted from 0). */
enum lxg_status lxg_steffen_create(const double x[], const double y[], size_t count,
                                   struct lxg_steffen **steffen, struct lxg_error *error);

/* Value and, unless NULL, slope at x in [x[0], x[count - 1]]; LXG_DOMAIN outside, outputs untouched. Thread-safe. */
enum lxg_status lxg_steffen_at(const struct lxg_steffen *steffen, double x, double *value, double *slope);

/* NULL is allowed. */
void lxg_steffen_destroy(struct lxg_steffen *steffen);

/* Root of a continuous function in [low, high], whose values there differ in sign (or one is zero), by Brent's method to a
 * width of `tolerance` |root| plus rounding. LXG_NO_SOLUTION "root-bracket" without a sign change; LXG_DOMAIN "root-value"
 * when the function is not finite; LXG_NOT_CONVERGED "root-iterations". */
enum lxg_status lxg_root_find(lxg_numerics_function *function, const void *parameters, double low,
                              double high, double tolerance, double *root, struct lxg_error *error);

/* Integral over [low, high] by 16-point Gauss-Legendre on `panels` >= 1 equal panels: exact for polynomials of degree 31 on
 * each. LXG_DOMAIN "quadrature-value" when the function is not finite somewhere. */
enum lxg_status lxg_quadrature_gauss(lxg_numerics_function *function, const void *parameters, double low,
                                     double high, size_t panels, double *integral, struct lxg_error *error);

#endif
