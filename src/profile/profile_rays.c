/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * profile_rays.c - the formal integral ray by ray, for flows in which one ray may meet gas of one velocity
 * several times.
 *
 * On the ray at distance p the approach velocity is v_z = v(r) z/r. Each sign change of v_z - x between
 * neighbouring radial nodes is a resonance, found by the secant rule; surfaces are passed from the far end to the
 * near one,
 *   I <- I e^-tau + S (1 - e^-tau),  tau = tau_0/|1 + sigma mu^2|,
 * starting from I_c on the core. Rays: Gauss panels in p inside the core and, graded outward, outside it.
 */
#include "luxgale/constants.h"
#include "profile/profile_internal.h"

#include <math.h>

enum { SECANT_STEPS = 40 };
static const double secant_precision = 1e-12; /* of r */

/* Approach velocity on the ray at radius r, on the near (side > 0) or far half. */
static double towards(struct lxg_profile_problem *problem, double p, double side, double radius) {
  const double ratio = p / radius;
  return side * lxg_profile_speed(problem, radius) * sqrt(fmax(0.0, (1.0 - ratio) * (1.0 + ratio)));
}

/* Passes the resonance between radii a and b, where v_z - x has the signs of fa and fb. */
static double pass(struct lxg_profile_problem *problem, double x, double p, double side, double a, double b,
                   double fa, double fb, double intensity) {
  for (int i = 0; i < SECANT_STEPS && fabs(b - a) > secant_precision * a; i++) {
    double r = (a * fb - b * fa) / (fb - fa);
    if (i % 3 == 2 || !(r > fmin(a, b) && r < fmax(a, b))) {
      r = 0.5 * (a + b);
    }
    const double f = towards(problem, p, side, r) - x;
    if ((f < 0.0) == (fa < 0.0)) {
      a = r;
      fa = f;
    } else {
      b = r;
      fb = f;
    }
  }
  const double radius = 0.5 * (a + b);
  const struct lxg_profile_point point = lxg_profile_at(problem, radius);
  const double mu2 = fmax(0.0, 1.0 - (p / radius) * (p / radius));
  const double w = fabs(1.0 + point.sigma * mu2);
  const double blocked = w > 0.0 ? -expm1(-point.depth / w) : 1.0;
  return intensity + blocked * (point.source - intensity) + (w > 0.0 ? point.thin / w : 0.0);
}

/* Walks one half of a ray over the radial nodes: outward on the near half, inward on the far half. */
static double walk(struct lxg_profile_problem *problem, double x, double p, double side, double intensity) {
  const size_t n = problem->nodes;
  const double start = fmax(p, problem->flow.inner);
  double radius = side > 0.0 ? start : problem->node_radius[n - 1];
  double f = towards(problem, p, side, radius) - x;
  for (size_t i = 0; i < n; i++) {
    const size_t k = side > 0.0 ? i : n - 1 - i;
    double next = problem->node_radius[k];
    if (next <= start) {
      if (side > 0.0) {
        continue;
      }
      next = start;
    }
    const double ratio = p / next;
    const double v = next == start ? lxg_profile_speed(problem, start) : problem->node_speed[k];
    const double g = side * v * sqrt(fmax(0.0, (1.0 - ratio) * (1.0 + ratio))) - x;
    if ((f < 0.0) != (g < 0.0)) {
      intensity = pass(problem, x, p, side, radius, next, f, g, intensity);
    }
    if (next == start) {
      break;
    }
    radius = next;
    f = g;
  }
  return intensity;
}

/* I - (I_c on the core) of one ray. */
static double ray(struct lxg_profile_problem *problem, double x, double p) {
  const bool on_core = p < problem->flow.inner && !problem->core.transparent;
  const double background = on_core ? problem->core.intensity : 0.0;
  double intensity = background;
  if (x < 0.0) {
    return on_core ? 0.0 : walk(problem, x, p, -1.0, 0.0);
  }
  intensity = walk(problem, x, p, 1.0, intensity);
  return intensity - background;
}

double lxg_profile_by_rays(struct lxg_profile_problem *problem, double x) {
  const size_t panels = (problem->settings.rays + 2 * LXG_PROFILE_GAUSS - 1) / (2 * LXG_PROFILE_GAUSS);
  const double inner = problem->flow.inner, width = log(problem->flow.outer / inner);
  double sum = 0.0;
  for (size_t k = 0; k < panels; k++) {
    for (int i = 0; i < LXG_PROFILE_GAUSS; i++) {
      const double t = ((double)k + lxg_profile_node[i]) / (double)panels;
      const double on = inner * t, off = inner * exp(width * t);
      sum += lxg_profile_weight[i] *
             (inner * on * ray(problem, x, on) + width * off * off * ray(problem, x, off));
    }
  }
  return 2.0 * LXG_PI * sum / (double)panels;
}
