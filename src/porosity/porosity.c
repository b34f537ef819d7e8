/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * porosity.c - the blocking factor f(tau) of each porosity law, its slope, and the wind that starts where it lets the
 * Eddington ratio fall to one (see porosity.h for the laws and their source).
 *
 * With u = ln(1 + tau), z = (1 - alpha) u and g(z) = (e^z - 1)/z the power law is f = g(z) u/tau for every alpha, with no
 * cancellation at small tau or near alpha = 1; its slope is d ln f/d ln tau = tau/[(1 + tau) u g(-z)] - 1.
 * Can fail: a depth that is not finite, fields outside their range, no critical depth below the representable limit.
 */
#include "luxgale/porosity.h"

#include "luxgale/constants.h"

#include <math.h>
#include <stdbool.h>

static const double depth_ln_limit =
    600.0; /* |ln tau*| searched: far outside any envelope, inside the doubles */
static const double depth_tolerance = 1e-14; /* of ln tau*: a few roundings */
enum { DEPTH_ITERATIONS = 200 };             /* bisection alone needs about 60 */

const char *lxg_porosity_law_name(enum lxg_porosity_law law) {
  static const char *const names[] = {"none", "reduction", "length", "power"};
  return (unsigned)law < sizeof names / sizeof names[0] ? names[law] : "unknown";
}

enum lxg_status lxg_porosity_check(const struct lxg_porosity *porosity, struct lxg_error *error) {
  const enum lxg_porosity_law law = porosity->law;
  if ((unsigned)law > LXG_POROSITY_POWER) {
    return lxg_error_set(error, LXG_INPUT, "porosity-law",
                         "porosity law = %d: none, reduction, length, power", (int)law);
  }
  if (law == LXG_POROSITY_REDUCTION && !(porosity->factor >= 1.0 && isfinite(porosity->factor))) {
    return lxg_error_set(
        error, LXG_INPUT, "porosity-factor",
        "porosity factor = %.10g: a reduction divides the opacity by a finite factor of at least 1",
        porosity->factor);
  }
  const bool blobs = law == LXG_POROSITY_LENGTH || law == LXG_POROSITY_POWER;
  if (blobs && !(porosity->scale > 0.0 && isfinite(porosity->scale))) {
    return lxg_error_set(
        error, LXG_INPUT, "porosity-scale",
        "porosity scale = %.10g: the porosity length is a finite positive number of scale heights",
        porosity->scale);
  }
  if (law == LXG_POROSITY_POWER && !(porosity->alpha > 0.0 && isfinite(porosity->alpha))) {
    return lxg_error_set(error, LXG_INPUT, "porosity-alpha",
                         "porosity power = %.10g: the index of the blob depths is finite and above 0",
                         porosity->alpha);
  }
  return LXG_OK;
}

/* (e^z - 1)/z, 1 at z = 0 */
static double expm1_over(double z) {
  return z == 0.0 ? 1.0 : expm1(z) / z;
}

static double factor_length(double tau, double *slope) {
  *slope = tau / expm1(tau) - 1.0;
  return expm1_over(-tau);
}

static double factor_power(double alpha, double tau, double *slope) {
  const double u = log1p(tau);
  const double z = (1.0 - alpha) * u;
  *slope = tau / ((1.0 + tau) * u * expm1_over(-z)) - 1.0;
  return expm1_over(z) * u / tau;
}

double lxg_porosity_factor(const struct lxg_porosity *porosity, double depth, double *slope) {
  double unused = 0.0;
  double *const s = slope != NULL ? slope : &unused;
  *s = 0.0;
  switch (porosity->law) {
  case LXG_POROSITY_REDUCTION:
    return 1.0 / porosity->factor;
  case LXG_POROSITY_LENGTH:
    return depth == 0.0 ? 1.0 : factor_length(depth, s);
  case LXG_POROSITY_POWER:
    return depth == 0.0 ? 1.0 : factor_power(porosity->alpha, depth, s);
  case LXG_POROSITY_NONE:
    break;
  }
  return 1.0;
}

/* tau = kappa rho eta c_T^2 r^2/(G M): d ln tau = (1 + k_rho) d ln rho + (1 + k_T) d ln T + 2 d ln r */
enum lxg_status lxg_porosity_apply(const struct lxg_porosity *porosity, double ln_rho, double ln_t,
                                   double ln_r, const struct lxg_opacity_value *kappa,
                                   const struct lxg_porosity_gas *gas, struct lxg_porosity_value *value) {
  double depth = 0.0;
  if (porosity->law == LXG_POROSITY_LENGTH || porosity->law == LXG_POROSITY_POWER) {
    depth =
        kappa->kappa * porosity->scale * (gas->ct2_per_kelvin / gas->gm) * exp(ln_rho + ln_t + 2.0 * ln_r);
  }
  if (!isfinite(depth)) {
    return LXG_DOMAIN;
  }
  double slope = 0.0;
  const double factor = lxg_porosity_factor(porosity, depth, &slope);
  value->kappa_eff = kappa->kappa * factor;
  value->dlnk_dlnrho = kappa->dlnk_dlnrho + slope * (1.0 + kappa->dlnk_dlnrho);
  value->dlnk_dlnt = kappa->dlnk_dlnt + slope * (1.0 + kappa->dlnk_dlnt);
  value->dlnk_dlnr = 2.0 * slope;
  return LXG_OK;
}

/* ln(gamma f) at ln tau and its slope; falls monotonically from ln gamma. */
static double excess(const struct lxg_porosity *porosity, double gamma, double ln_tau, double *slope) {
  return log(gamma * lxg_porosity_factor(porosity, exp(ln_tau), slope));
}

/* Newton steps in ln tau kept inside a shrinking bracket: a step that would leave it becomes a bisection. */
static double bracketed_root(const struct lxg_porosity *porosity, double gamma, double low, double high) {
  double x = fmin(fmax(0.0, low), high);
  for (int i = 0; i < DEPTH_ITERATIONS && high - low > depth_tolerance * (1.0 + fabs(x)); i++) {
    double slope = 0.0;
    const double value = excess(porosity, gamma, x, &slope);
    if (value > 0.0) {
      low = x;
    } else {
      high = x;
    }
    const double newton = x - value / slope;
    const double next = newton > low && newton < high ? newton : 0.5 * (low + high);
    if (fabs(next - x) <= depth_tolerance * (1.0 + fabs(x))) {
      return next;
    }
    x = next;
  }
  return x;
}

enum lxg_status lxg_porosity_critical_depth(const struct lxg_porosity *porosity, double gamma, double *depth,
                                            struct lxg_error *error) {
  const enum lxg_status status = lxg_porosity_check(porosity, error);
  if (status != LXG_OK) {
    return status;
  }
  if (porosity->law != LXG_POROSITY_LENGTH && porosity->law != LXG_POROSITY_POWER) {
    return lxg_error_set(error, LXG_INPUT, "porosity-depth-law",
                         "porosity law = %s: only length and power have a depth at which a wind starts",
                         lxg_porosity_law_name(porosity->law));
  }
  if (!(gamma > 1.0 && isfinite(gamma))) {
    return lxg_error_set(error, LXG_INPUT, "porosity-gamma",
                         "Eddington ratio = %.10g: a porous wind needs a finite ratio above 1", gamma);
  }
  double unused = 0.0;
  if (!(excess(porosity, gamma, depth_ln_limit, &unused) < 0.0)) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "porosity-depth",
                         "Eddington ratio = %.10g, porosity power = %.10g: no depth below e^%.0f blocks it",
                         gamma, porosity->alpha, depth_ln_limit);
  }
  *depth = exp(bracketed_root(porosity, gamma, -depth_ln_limit, depth_ln_limit));
  return LXG_OK;
}

enum lxg_status lxg_porosity_mass_loss(const struct lxg_porosity *porosity, double gamma, double luminosity,
                                       double sound_speed, double *mass_loss, struct lxg_error *error) {
  double depth = 0.0;
  const enum lxg_status status = lxg_porosity_critical_depth(porosity, gamma, &depth, error);
  if (status != LXG_OK) {
    return status;
  }
  if (!(luminosity > 0.0 && isfinite(luminosity))) {
    return lxg_error_set(error, LXG_INPUT, "porosity-luminosity",
                         "luminosity = %.10g erg/s: finite and positive", luminosity);
  }
  if (!(sound_speed > 0.0 && isfinite(sound_speed))) {
    return lxg_error_set(error, LXG_INPUT, "porosity-sound-speed",
                         "sound speed = %.10g cm/s: finite and positive", sound_speed);
  }
  *mass_loss = depth / gamma * luminosity / (porosity->scale * sound_speed * LXG_SPEED_OF_LIGHT);
  return LXG_OK;
}
