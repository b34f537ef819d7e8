/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * laws.c - photon tiring and the closed wind laws beyond the Eddington limit (see driving.h for equations and papers).
 *
 * Can fail: an Eddington ratio that drives nothing, numbers out of range.
 */
#include "luxgale/constants.h"
#include "luxgale/driving.h"
#include "luxgale/numerics.h"

#include <math.h>

static const double limit_tolerance = 1e-15; /* of the largest m: a few roundings */

double lxg_driving_tiring_number(const struct lxg_star *star, double mass_loss, double luminosity) {
  return mass_loss / lxg_star_tiring_rate(star, luminosity);
}

double lxg_driving_tiring_mass(const struct lxg_star *star, double energy) {
  return star->radius * energy / star->gm;
}

double lxg_driving_flux_law(double gamma, double m, double x) {
  return m == 0.0 ? (gamma - 1.0) * x : -x - expm1(-m * gamma * x) / m;
}

/* 1 - exp(-m Gamma) - m */
static double flux_excess(double m, const void *parameters) {
  const double gamma = *(const double *)parameters;
  return -expm1(-m * gamma) - m;
}

enum lxg_status lxg_driving_flux_limit(double gamma, double *m, struct lxg_error *error) {
  if (!(gamma > 1.0 && isfinite(gamma))) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "driving-gamma",
                         "Eddington ratio = %.10g: radiation lifts nothing unless it is finite and above 1",
                         gamma);
  }
  /* the root m = 0 lies below the bracket: the enthalpy limit is the smaller of the two limits */
  return lxg_root_find(flux_excess, &gamma, lxg_driving_enthalpy_limit(gamma), 1.0, limit_tolerance, m,
                       error);
}

double lxg_driving_enthalpy_law(double gamma, double m) {
  return gamma / (1.0 + m * gamma) - 1.0;
}

double lxg_driving_enthalpy_limit(double gamma) {
  return gamma > 1.0 ? (gamma - 1.0) / gamma : 0.0;
}

/* v from w = v^2/v_esc^2; NaN for a flow that stops */
static double speed_of(const struct lxg_star *star, double w) {
  return w >= 0.0 ? sqrt(w) * lxg_star_escape_speed(star) : NAN;
}

enum lxg_status lxg_driving_estimate_wind(const struct lxg_star *star, double gamma, double luminosity,
                                          double mass_loss, struct lxg_driving_estimate *estimate,
                                          struct lxg_error *error) {
  if (!(gamma > 0.0 && isfinite(gamma) && luminosity > 0.0 && isfinite(luminosity) && mass_loss > 0.0 &&
        isfinite(mass_loss))) {
    return lxg_error_set(
        error, LXG_INPUT, "driving-estimate",
        "Eddington ratio = %.10g, luminosity = %.10g erg/s, rate = %.10g g/s: all finite and above 0", gamma,
        luminosity, mass_loss);
  }
  const double m = lxg_driving_tiring_number(star, mass_loss, luminosity);
  struct lxg_driving_estimate out = {.tiring_number = m, .enthalpy_limit = lxg_driving_enthalpy_limit(gamma)};
  if (gamma > 1.0) {
    const enum lxg_status status = lxg_driving_flux_limit(gamma, &out.flux_limit, error);
    if (status != LXG_OK) {
      return status;
    }
  }
  const double w = lxg_driving_enthalpy_law(gamma, m);
  out.steady = gamma > 1.0 && m <= out.enthalpy_limit;
  out.excess = m / out.enthalpy_limit;
  out.flux_speed = m <= out.flux_limit ? speed_of(star, fmax(0.0, lxg_driving_flux_law(gamma, m, 1.0))) : NAN;
  out.enthalpy_speed = out.steady ? speed_of(star, fmax(0.0, w)) : NAN;
  out.observed_share = out.steady ? 1.0 - m * (w + 1.0) : NAN;
  *estimate = out;
  return LXG_OK;
}

double lxg_driving_porous_rate(double w, double luminosity, double eddington, double sound_speed) {
  return w * fmax(0.0, luminosity - eddington) / (LXG_SPEED_OF_LIGHT * sound_speed);
}

double lxg_driving_porous_number(double mass_loss, double luminosity, double eddington, double sound_speed) {
  return luminosity > eddington ? mass_loss * LXG_SPEED_OF_LIGHT * sound_speed / (luminosity - eddington)
                                : NAN;
}
