/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * profile_escape.c - escape probabilities (P2) and the line at one point of the flow (P1, P3 of profile.h).
 *
 * f(tau_0/w), w = 1 + sigma mu^2, changes over mu ~ 1/sigma^(1/2) when the flow is steep and near mu = 1 when the
 * speed is constant (w -> 0): the Gauss panels are graded accordingly. Can fail: a law that fails or gives
 * impossible gas.
 */
#include "luxgale/constants.h"
#include "profile/profile_internal.h"

#include <math.h>

/* Abramowitz & Stegun, table 25.4, n = 8, moved to (0, 1). */
const double lxg_profile_node[LXG_PROFILE_GAUSS] = {
    0.01985507175123188, 0.10166676129318664, 0.23723379504183550, 0.40828267875217510,
    0.59171732124782490, 0.76276620495816450, 0.89833323870681336, 0.98014492824876812};
const double lxg_profile_weight[LXG_PROFILE_GAUSS] = {
    0.05061426814518813, 0.11119051722668724, 0.15685332293894364, 0.18134189168918100,
    0.18134189168918100, 0.15685332293894364, 0.11119051722668724, 0.05061426814518813};

static const double steep = 0.5;         /* sigma beyond +/- this: graded panels */
static const double finest_share = 0.03; /* last panel against that structure: error below 1e-8 */
enum { GRADES = 12, EVEN_PANELS = 3 };

/* (1 - e^-tau)/tau with tau = depth/w; w = 0 is infinite depth. */
static double escape_along(double depth, double sigma, double mu) {
  const double w =
      fabs(1.0 + sigma * mu * mu); /* negative where a decelerating flow turns the gradient round */
  const double tau = depth / w;
  return tau < 1e-300 ? 1.0 : (isfinite(tau) ? -expm1(-tau) / tau : 0.0);
}

static double panel(double depth, double sigma, double from, double to) {
  double sum = 0.0;
  for (int i = 0; i < LXG_PROFILE_GAUSS; i++) {
    sum += lxg_profile_weight[i] * escape_along(depth, sigma, from + (to - from) * lxg_profile_node[i]);
  }
  return sum * (to - from);
}

/* int f dmu over [from, 1]. Near mu = 1 a flow of nearly constant speed has structure down to 1 - mu ~ w(1) or tau_0,
 * whichever is larger; finer panels than that are joined into the last one. */
static double integral(double depth, double sigma, double from) {
  const double finest = finest_share * fmax(1.0 + sigma, fmin(depth, 1.0));
  double sum = 0.0, at = from;
  for (int k = 0; k < GRADES && at < 1.0; k++) {
    double next = 1.0;
    if (sigma > steep) {
      next = 0.5 * ldexp(1.0, k) / sqrt(1.0 + sigma);
    } else if (sigma < -steep) {
      next = 1.0 - ldexp(1.0, -2 * k - 1);
      next = 1.0 - next < finest ? 1.0 : next;
    } else {
      next = (k + 1.0) / EVEN_PANELS;
    }
    if (next > at) {
      next = fmin(next, 1.0);
      sum += panel(depth, sigma, at, next);
      at = next;
    }
  }
  return at < 1.0 ? sum + panel(depth, sigma, at, 1.0) : sum;
}

void lxg_profile_escape(double depth, double sigma, double radius_ratio, double *beta, double *beta_core) {
  const double inverse = 1.0 / radius_ratio;
  const double mu_c = sqrt(fmax(0.0, (1.0 - inverse) * (1.0 + inverse)));
  *beta = integral(depth, sigma, 0.0);
  /* a narrow cone: one panel over 1 - mu_c = (1/ratio)^2/(1 + mu_c) without cancellation */
  if (inverse < 0.1 && sigma > -steep) {
    const double width = inverse * inverse / (1.0 + mu_c);
    double sum = 0.0;
    for (int i = 0; i < LXG_PROFILE_GAUSS; i++) {
      sum += lxg_profile_weight[i] * escape_along(depth, sigma, 1.0 - width * lxg_profile_node[i]);
    }
    *beta_core = 0.5 * width * sum;
  } else {
    *beta_core = 0.5 * integral(depth, sigma, mu_c);
  }
}

double lxg_profile_strength(double oscillator_strength, double wavelength, double ions_per_gram) {
  return LXG_PI * LXG_ELECTRON_CHARGE * LXG_ELECTRON_CHARGE / (LXG_ELECTRON_MASS * LXG_SPEED_OF_LIGHT) *
         oscillator_strength * wavelength * ions_per_gram;
}

static bool get_gas(struct lxg_profile_problem *problem, double radius, struct lxg_profile_gas *gas) {
  if (problem->status == LXG_OK) {
    problem->status = problem->flow.law(problem->flow.context, radius, gas);
    if (problem->status == LXG_OK && !(gas->speed > 0.0 && isfinite(gas->speed) && isfinite(gas->slope) &&
                                       gas->density > 0.0 && isfinite(gas->density))) {
      problem->status = LXG_DOMAIN;
    }
  }
  return problem->status == LXG_OK;
}

double lxg_profile_speed(struct lxg_profile_problem *problem, double radius) {
  struct lxg_profile_gas gas = {0.0, 0.0, 0.0};
  return get_gas(problem, radius, &gas) ? gas.speed : 0.0;
}

struct lxg_profile_point lxg_profile_at(struct lxg_profile_problem *problem, double radius) {
  struct lxg_profile_gas gas = {0.0, 0.0, 0.0};
  struct lxg_profile_point point = {.speed = 0.0};
  if (!get_gas(problem, radius, &gas)) {
    return point;
  }
  const struct lxg_profile_line *const line = &problem->line;
  const double crossing_time = radius / gas.speed;
  point.speed = gas.speed;
  point.sigma = gas.slope - 1.0;
  if (line->kind == LXG_PROFILE_RECOMBINATION) {
    point.rate = line->opacity * gas.density * gas.density;
    point.depth = point.rate * crossing_time;
    point.source = line->opacity > 0.0 ? line->emissivity / line->opacity : 0.0;
    point.thin = line->opacity > 0.0 ? 0.0 : line->emissivity * gas.density * gas.density * crossing_time;
    return point;
  }
  double beta = 1.0;
  point.rate = line->strength * pow(radius / problem->flow.inner, line->strength_index) * gas.density;
  point.depth = point.rate * crossing_time;
  lxg_profile_escape(point.depth, point.sigma, radius / problem->flow.inner, &beta, &point.beta_core);
  point.source = problem->core.intensity * point.beta_core / beta;
  return point;
}
