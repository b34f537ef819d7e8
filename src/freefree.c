/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * freefree.c - equations (F1) to (F5) of freefree.h.
 *
 * (F4) in detail: a ray that passes the centre at p > R meets the depth integral alpha(r) ds = (pi/2) alpha(R) R^4/p^3, so
 * with x = p/R the light is 4 pi^2 B R^2 [1 + 2 int_1^inf (1 - exp(-a/x^3)) x dx]; substitution u = a/x^3 and one
 * integration by parts give the incomplete gamma function. Rays with p < R end on a disc of the same temperature and
 * carry B whatever lies in front.
 */
#include "luxgale/freefree.h"

#include "luxgale/constants.h"

#include <gsl/gsl_math.h>
#include <gsl/gsl_sf_gamma.h>
#include <math.h>

static const double cno_weight = 14.0;    /* mean atomic weight of C, N, O: nitrogen */
static const double metals_weight = 16.0; /* mean atomic weight of solar metals: oxygen leads by mass */
static const double cno_charge_max = 7.0;
static const double metals_charge_max = 8.0;
static const double escaping_share = 0.5 + LXG_PI / 8.0; /* w of (F3) */
static const double series_limit = 1e-3; /* below it (F4) is summed as a series: the closed form cancels */

enum lxg_status lxg_freefree_gas_init(const struct lxg_composition *composition, double temperature,
                                      double helium_charge, double metal_charge, struct lxg_freefree_gas *gas,
                                      struct lxg_error *error) {
  if (!(temperature > 0.0 && isfinite(temperature))) {
    return lxg_error_set(error, LXG_INPUT, "freefree-temperature", "gas temperature = %.10g K: positive",
                         temperature);
  }
  if (!(helium_charge >= 0.0 && helium_charge <= 2.0 && metal_charge >= 0.0 &&
        metal_charge <= metals_charge_max)) {
    return lxg_error_set(error, LXG_INPUT, "freefree-charge",
                         "charges of helium = %.10g and metals = %.10g: 0 to 2 and 0 to %g", helium_charge,
                         metal_charge, metals_charge_max);
  }
  const double cno_charge = fmin(metal_charge, cno_charge_max);
  const double ions[4] = {composition->hydrogen, composition->helium / 4.0, composition->cno / cno_weight,
                          composition->metals / metals_weight};
  const double charge[4] = {1.0, helium_charge, cno_charge, metal_charge};
  double electrons = 0.0;
  double squares = 0.0;
  for (int i = 0; i < 4; i++) {
    electrons += ions[i] * charge[i];
    squares += ions[i] * charge[i] * charge[i];
  }
  if (!(electrons > 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "freefree-neutral",
                         "electrons per atomic mass = %.10g: the gas must be ionised to shine", electrons);
  }
  gas->temperature = temperature;
  gas->electrons_per_gram = electrons / LXG_ATOMIC_MASS;
  gas->charges_sq = squares / LXG_ATOMIC_MASS;
  gas->mean_charge = squares / electrons;
  return LXG_OK;
}

double lxg_freefree_constant(void) {
  const double e2 = LXG_ELECTRON_CHARGE * LXG_ELECTRON_CHARGE;
  const double c3 = LXG_SPEED_OF_LIGHT * LXG_SPEED_OF_LIGHT * LXG_SPEED_OF_LIGHT;
  return 32.0 * LXG_PI * e2 * e2 * e2 / (3.0 * LXG_ELECTRON_MASS * c3) *
         sqrt(2.0 * LXG_PI / (3.0 * LXG_BOLTZMANN * LXG_ELECTRON_MASS));
}

double lxg_freefree_gaunt(double frequency, double temperature, double charge) {
  const double t4 = temperature / 1e4;
  const double scale = charge * frequency / 1e9 / (t4 * sqrt(t4));
  return log(M_E + exp(5.960) * pow(scale, -sqrt(3.0) / LXG_PI));
}

double lxg_freefree_emission(const struct lxg_freefree_gas *gas, double frequency) {
  const double t = gas->temperature;
  return lxg_freefree_constant() * gas->electrons_per_gram * gas->charges_sq / sqrt(t) *
         exp(-LXG_PLANCK * frequency / (LXG_BOLTZMANN * t)) *
         lxg_freefree_gaunt(frequency, t, gas->mean_charge);
}

/* B_nu [erg s^-1 cm^-2 Hz^-1 sr^-1]. */
static double planck(double frequency, double temperature) {
  const double x = LXG_PLANCK * frequency / (LXG_BOLTZMANN * temperature);
  return 2.0 * LXG_PLANCK * frequency * frequency * frequency / (LXG_SPEED_OF_LIGHT * LXG_SPEED_OF_LIGHT) /
         expm1(x);
}

double lxg_freefree_absorption(const struct lxg_freefree_gas *gas, double frequency) {
  const double t = gas->temperature;
  const double x = LXG_PLANCK * frequency / (LXG_BOLTZMANN * t);
  const double c2 = LXG_SPEED_OF_LIGHT * LXG_SPEED_OF_LIGHT;
  /* exp(-x)/B_nu written with 1 - exp(-x), so that a cold gas far on the Wien side keeps a finite absorption. */
  const double kernel = -expm1(-x) * c2 / (2.0 * LXG_PLANCK * frequency * frequency * frequency);
  return lxg_freefree_constant() * gas->electrons_per_gram * gas->charges_sq / sqrt(t) *
         lxg_freefree_gaunt(frequency, t, gas->mean_charge) * kernel / (4.0 * LXG_PI);
}

/* rho^2 r^4 = (Mdot/(4 pi v))^2 [g^2 cm^-2]. */
static double density_sq(const struct lxg_freefree_wind *wind) {
  const double flux = wind->mass_loss_rate / (4.0 * LXG_PI * wind->speed);
  return flux * flux;
}

double lxg_freefree_wind_thin(const struct lxg_freefree_gas *gas, const struct lxg_freefree_wind *wind,
                              double frequency) {
  return lxg_freefree_emission(gas, frequency) * 4.0 * LXG_PI * density_sq(wind) / wind->radius *
         escaping_share;
}

double lxg_freefree_wind_depth(const struct lxg_freefree_gas *gas, const struct lxg_freefree_wind *wind,
                               double frequency) {
  const double r3 = wind->radius * wind->radius * wind->radius;
  return lxg_freefree_absorption(gas, frequency) * density_sq(wind) / (3.0 * r3);
}

/* Area of the wind's halo in units of the disc: 2 int_1^inf (1 - exp(-a/x^3)) x dx. */
static double halo(double a) {
  if (a < series_limit) {
    return a * (2.0 - a / 4.0 + 2.0 * a * a / 42.0); /* termwise integration, next term a^4/120 */
  }
  if (!(a >= 0.0)) {
    return NAN; /* a wind that is no number */
  }
  gsl_sf_result share = {0.0, 0.0};
  if (a > 700.0) { /* the complete function to all digits */
    share.val = 1.0;
  } else if (gsl_sf_gamma_inc_P_e(1.0 / 3.0, a, &share) != 0) {
    return NAN;
  }
  const double gamma_third = 2.678938534707747633; /* Gamma(1/3) */
  return cbrt(a * a) * gamma_third * share.val + expm1(-a);
}

double lxg_freefree_wind_whole(const struct lxg_freefree_gas *gas, const struct lxg_freefree_wind *wind,
                               double frequency) {
  const double a = 1.5 * LXG_PI * lxg_freefree_wind_depth(gas, wind, frequency);
  return 4.0 * LXG_PI * LXG_PI * planck(frequency, gas->temperature) * wind->radius * wind->radius *
         (1.0 + halo(a));
}

double lxg_freefree_wind_thick(const struct lxg_freefree_gas *gas, const struct lxg_freefree_wind *wind,
                               double frequency) {
  const double ar3 = 0.5 * LXG_PI * lxg_freefree_absorption(gas, frequency) * density_sq(wind); /* a R^3 */
  const double gamma_third = 2.678938534707747633;
  return 4.0 * LXG_PI * LXG_PI * gamma_third * planck(frequency, gas->temperature) * cbrt(ar3 * ar3);
}

static double shell_volume(const struct lxg_freefree_shell *shell, double age) {
  const double vi = shell->speed_inner;
  const double vo = shell->speed_outer;
  return 4.0 * LXG_PI / 3.0 * (vo - vi) * (vo * vo + vo * vi + vi * vi) * age * age * age;
}

double lxg_freefree_shell_thin(const struct lxg_freefree_gas *gas, const struct lxg_freefree_shell *shell,
                               double age, double frequency) {
  return lxg_freefree_emission(gas, frequency) * shell->mass * shell->mass / shell_volume(shell, age);
}

double lxg_freefree_shell_depth(const struct lxg_freefree_gas *gas, const struct lxg_freefree_shell *shell,
                                double age, double frequency) {
  const double rho = shell->mass / shell_volume(shell, age);
  return lxg_freefree_absorption(gas, frequency) * rho * rho * (shell->speed_outer - shell->speed_inner) *
         age;
}
