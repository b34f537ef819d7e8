/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * extinction.c - A(lambda)/A_V = a(x) + b(x)/R_V, x = 1 um/lambda: Cardelli, Clayton & Mathis 1989, ApJ 345, 245, their
 * equations 2 to 5 (coefficients from memory; their table 3 is the test).
 */
#include "luxgale/constants.h"
#include "luxgale/photometry.h"

#include <math.h>

static const double micron = 1e-4;                                                       /* [cm] */
static const double x_min = 0.3, x_optical = 1.1, x_uv = 3.3, x_far = 8.0, x_max = 10.0; /* pieces [1/um] */

/* Powers of y = x - 1.82, from the constant upwards. */
static const double optical_a[8] = {1.0, 0.17699, -0.50447, -0.02427, 0.72085, 0.01979, -0.77530, 0.32999};
static const double optical_b[8] = {0.0, 1.41338, 2.28305, 1.07233, -5.38434, -0.62251, 5.30260, -2.09002};
/* Powers of x - 8. */
static const double far_a[4] = {-1.073, -0.628, 0.137, -0.070};
static const double far_b[4] = {13.670, 4.257, -0.420, 0.374};

static double polynomial(const double c[], int count, double x) {
  double sum = 0.0;
  for (int i = count - 1; i >= 0; i--) {
    sum = sum * x + c[i];
  }
  return sum;
}

static void ultraviolet(double x, double *a, double *b) {
  const double d = fmax(x - 5.9, 0.0);
  const double fa = d * d * (-0.04473 - 0.009779 * d);
  const double fb = d * d * (0.2130 + 0.1207 * d);
  *a = 1.752 - 0.316 * x - 0.104 / ((x - 4.67) * (x - 4.67) + 0.341) + fa;
  *b = -3.090 + 1.825 * x + 1.206 / ((x - 4.62) * (x - 4.62) + 0.263) + fb;
}

enum lxg_status lxg_extinction_ratio(double wavelength, double r_v, double *ratio, struct lxg_error *error) {
  if (!(r_v >= LXG_EXTINCTION_RV_MIN && r_v <= LXG_EXTINCTION_RV_MAX)) {
    return lxg_error_set(error, LXG_INPUT, "extinction-rv", "R_V = %.10g: %d to %d", r_v,
                         LXG_EXTINCTION_RV_MIN, LXG_EXTINCTION_RV_MAX);
  }
  const double x = micron / wavelength;
  if (!(x >= x_min && x <= x_max)) {
    return lxg_error_set(error, LXG_DOMAIN, "extinction-wavelength",
                         "wavelength = %.10g um: the extinction law holds from 0.1 to 3.33 um",
                         wavelength / micron);
  }
  double a = 0.0;
  double b = 0.0;
  if (x < x_optical) {
    const double power = pow(x, 1.61);
    a = 0.574 * power;
    b = -0.527 * power;
  } else if (x < x_uv) {
    a = polynomial(optical_a, 8, x - 1.82);
    b = polynomial(optical_b, 8, x - 1.82);
  } else if (x <= x_far) {
    ultraviolet(x, &a, &b);
  } else {
    a = polynomial(far_a, 4, x - x_far);
    b = polynomial(far_b, 4, x - x_far);
  }
  *ratio = a + b / r_v;
  return LXG_OK;
}

enum lxg_status lxg_extinction_band(enum lxg_band band, double a_v, double r_v, double *a_band,
                                    struct lxg_error *error) {
  if (!(a_v >= 0.0 && isfinite(a_v))) {
    return lxg_error_set(error, LXG_INPUT, "extinction-value", "A_V = %.10g mag: zero or more", a_v);
  }
  double ratio = 0.0;
  const enum lxg_status status = lxg_extinction_ratio(lxg_band_info(band)->wavelength, r_v, &ratio, error);
  if (status == LXG_OK) {
    *a_band = a_v * ratio;
  }
  return status;
}
