/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * star.c - white-dwarf radius and the limits set by mass and radius (see star.h).
 */
#include "luxgale/star.h"

#include "luxgale/constants.h"

#include <math.h>

static const double dwarf_mu_e = 2.0; /* nucleons per electron in a carbon-oxygen or oxygen-neon dwarf */

double lxg_star_dwarf_limit_msun(void) {
  return 5.816 / (dwarf_mu_e * dwarf_mu_e);
}

enum lxg_status lxg_star_dwarf_radius(double mass, double *radius, struct lxg_error *error) {
  const double mass_msun = mass / LXG_SOLAR_MASS;
  const double limit = lxg_star_dwarf_limit_msun();
  if (!(mass_msun > 0.0 && mass_msun < limit)) {
    return lxg_error_set(
        error, LXG_INPUT, "star-dwarf-mass",
        "mass = %.10g Msun: a white dwarf lies between 0 and %.4g Msun; give the radius of any other star",
        mass_msun, limit);
  }
  const double n = mass_msun / limit;
  *radius = 0.02251 / dwarf_mu_e * LXG_SOLAR_RADIUS * sqrt(1.0 - pow(n, 4.0 / 3.0)) / cbrt(n);
  return LXG_OK;
}

double lxg_star_eddington_luminosity(const struct lxg_star *star, const struct lxg_composition *composition) {
  return 4.0 * LXG_PI * star->gm * LXG_SPEED_OF_LIGHT / lxg_composition_kappa_e(composition);
}

double lxg_star_escape_speed(const struct lxg_star *star) {
  return sqrt(2.0 * star->gm / star->radius);
}

double lxg_star_tiring_rate(const struct lxg_star *star, double luminosity) {
  return luminosity * star->radius / star->gm;
}

double lxg_star_envelope_mass(const struct lxg_star *star, double pressure) {
  return 4.0 * LXG_PI * pow(star->radius, 4.0) * pressure / star->gm;
}
