/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * profile_surface.c - the formal integral along the resonance surface of an outflow that nowhere decelerates.
 *
 * At approach velocity x the surface cos = x/v(r) meets each sphere with v(r) >= |x| once; its distance p from
 * the line of sight rises with r, p dp = r (1 + sigma mu^2) dr. What it adds to the continuum is
 *   int 2 pi r (1 + sigma mu^2) (1 - e^-tau) [S - I_c (in front of the core)] dr,
 * from the start (v = |x|, or R) to where p = R, and on to the end; behind the core (x < 0, p < R) nothing is
 * seen. ln r is graded as t^2 at the lower end of each stretch, where S has the square root of mu_c.
 *
 * Thin emission needs no order of the surfaces: in any flow it is int 2 pi r^2 (e rho^2/v) dr over all radii with
 * v(r) >= |x| that are not hidden.
 */
#include "luxgale/constants.h"
#include "profile/profile_internal.h"

#include <math.h>

enum { ROOT_ITERATIONS = 200 };
static const double root_precision = 1e-15; /* of r or ln r: rounding */

/* Line's contribution of the surface at r per unit of ln r; `core` is I_c where the core is behind. */
static double element(struct lxg_profile_problem *problem, double x, double radius, double core) {
  const struct lxg_profile_point point = lxg_profile_at(problem, radius);
  if (!(point.speed > 0.0)) {
    return 0.0;
  }
  const double mu = fmin(1.0, fabs(x) / point.speed);
  const double w = fmax(0.0, 1.0 + point.sigma * mu * mu);
  const double blocked = w > 0.0 ? -expm1(-point.depth / w) * w : 0.0;
  return 2.0 * LXG_PI * radius * radius * (point.thin + blocked * (point.source - core));
}

static double stretch(struct lxg_profile_problem *problem, double x, double from, double to, double core) {
  double sum = 0.0;
  const double low = log(from), width = log(to / from);
  const size_t panels = problem->settings.panels;
  for (size_t k = 0; k < panels && width > 0.0; k++) {
    for (int i = 0; i < LXG_PROFILE_GAUSS; i++) {
      const double t = ((double)k + lxg_profile_node[i]) / (double)panels;
      const double radius = fmin(exp(low + width * t * t), problem->flow.outer);
      sum += lxg_profile_weight[i] * 2.0 * t * element(problem, x, radius, core);
    }
  }
  return sum * width / (double)panels;
}

/* v(r) - |x|, or p^2 - R^2: both rise with r. */
static double beyond(struct lxg_profile_problem *problem, double x, bool core_edge, double radius) {
  const double v = lxg_profile_speed(problem, radius);
  if (!core_edge) {
    return v - fabs(x);
  }
  const double mu = x / v, ratio = radius / problem->flow.inner;
  return ratio * ratio * (1.0 - mu) * (1.0 + mu) - 1.0;
}

/* Smallest radius in [from, outer] where `beyond` is not negative; outer if nowhere. */
static double first_radius(struct lxg_profile_problem *problem, double x, bool core_edge, double from) {
  double low = log(from), high = log(problem->flow.outer);
  if (beyond(problem, x, core_edge, from) >= 0.0) {
    return from;
  }
  if (beyond(problem, x, core_edge, problem->flow.outer) < 0.0) {
    return problem->flow.outer;
  }
  for (int i = 0; i < ROOT_ITERATIONS && high - low > root_precision * fabs(low); i++) {
    const double middle = 0.5 * (low + high);
    if (beyond(problem, x, core_edge, exp(middle)) >= 0.0) {
      high = middle;
    } else {
      low = middle;
    }
  }
  return fmin(exp(high), problem->flow.outer);
}

double lxg_profile_along_surface(struct lxg_profile_problem *problem, double x) {
  if (fabs(x) > problem->outer_speed) {
    return 0.0;
  }
  const double start = first_radius(problem, x, false, problem->flow.inner);
  if (problem->core.transparent) {
    return stretch(problem, x, start, problem->flow.outer, 0.0);
  }
  const double split = first_radius(problem, x, true, start);
  double sum = stretch(problem, x, split, problem->flow.outer, 0.0);
  if (x > 0.0) {
    sum += stretch(problem, x, start, split, problem->core.intensity);
  }
  return sum;
}

/* Does gas at this radius shine at x towards the observer: fast enough, and not behind the core. */
static bool seen(struct lxg_profile_problem *problem, double x, double radius) {
  return beyond(problem, x, false, radius) >= 0.0 &&
         (x >= 0.0 || problem->core.transparent || beyond(problem, x, true, radius) >= 0.0);
}

static double thin_interval(struct lxg_profile_problem *problem, double from, double to) {
  double sum = 0.0;
  const double low = log(from), width = log(to / from);
  for (int i = 0; i < LXG_PROFILE_GAUSS; i++) {
    const double radius = exp(low + width * lxg_profile_node[i]);
    sum += lxg_profile_weight[i] * 2.0 * LXG_PI * radius * radius *
           lxg_profile_at(problem, fmin(radius, problem->flow.outer)).thin;
  }
  return sum * width;
}

double lxg_profile_thin(struct lxg_profile_problem *problem, double x) {
  double sum = 0.0;
  bool here = seen(problem, x, problem->node_radius[0]);
  for (size_t k = 0; k + 1 < problem->nodes; k++) {
    double from = problem->node_radius[k], to = problem->node_radius[k + 1];
    const bool next = seen(problem, x, to);
    if (here != next) {
      double a = from, b = to;
      for (int i = 0; i < ROOT_ITERATIONS && b - a > root_precision * a; i++) {
        const double middle = 0.5 * (a + b);
        *(seen(problem, x, middle) == here ? &a : &b) = middle;
      }
      *(here ? &to : &from) = b;
    }
    sum += here || next ? thin_interval(problem, from, to) : 0.0;
    here = next;
  }
  return sum;
}
