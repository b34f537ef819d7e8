/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * profile.c - checks, the sampled profile, its features, and the photon balance (see profile.h).
 *
 * Features are read off the exact F(x), not off the samples: extrema by golden section about the best sample,
 * edges and half heights by bisection between neighbouring samples. Can fail: bad input, a law without answer,
 * memory.
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "profile/profile_internal.h"

#include <gsl/gsl_sort.h>
#include <math.h>

enum { CHECK_POINTS = 512, RAY_NODES = 512, REFINE_STEPS = 60, VELOCITY_PANELS = 6, CORNERS = 5 };
static const double slowing =
    1e-9; /* dlnv/dlnr below minus this is a deceleration; rounding of a table is less */
static const double golden = 0.618033988749895;

void lxg_profile_defaults(struct lxg_profile_settings *settings) {
  *settings = (struct lxg_profile_settings){.count = 161, .panels = 16, .rays = 400, .edge_depth = 0.01};
}

static bool not_negative(double x) {
  return x >= 0.0 && isfinite(x);
}

static enum lxg_status check(const struct lxg_profile_problem *p, struct lxg_error *error) {
  const struct lxg_profile_settings *const s = &p->settings;
  const struct lxg_profile_line *const line = &p->line;
  if (!(p->flow.inner > 0.0 && p->flow.outer > p->flow.inner && isfinite(p->flow.outer)) ||
      p->flow.law == NULL) {
    return lxg_error_set(error, LXG_INPUT, "profile-flow",
                         "flow from %.10g to %.10g cm: positive, finite and rising", p->flow.inner,
                         p->flow.outer);
  }
  if (!(not_negative(line->strength) && isfinite(line->strength_index) && not_negative(line->emissivity) &&
        not_negative(line->opacity))) {
    return lxg_error_set(error, LXG_INPUT, "profile-line",
                         "line strength %.6g, emissivity %.6g, opacity %.6g: finite and not below 0",
                         line->strength, line->emissivity, line->opacity);
  }
  if (!not_negative(p->core.intensity) || (p->core.transparent && p->core.intensity > 0.0) ||
      (line->kind == LXG_PROFILE_RESONANCE && !(p->core.intensity > 0.0))) {
    return lxg_error_set(
        error, LXG_INPUT, "profile-core",
        "core intensity = %.10g: finite, above 0 for a resonance line, 0 if the core is transparent",
        p->core.intensity);
  }
  if (s->count < 3 || s->count % 2 == 0 || s->panels < 1 || s->rays < 1 ||
      !(s->edge_depth > 0.0 && s->edge_depth < 1.0)) {
    return lxg_error_set(
        error, LXG_INPUT, "profile-settings",
        "count %zu (odd, at least 3), panels %zu, rays %zu (at least 1), edge depth %.6g (0 to 1)", s->count,
        s->panels, s->rays, s->edge_depth);
  }
  return LXG_OK;
}

static enum lxg_status law_failed(const struct lxg_profile_problem *problem, struct lxg_error *error) {
  return lxg_error_set(error, problem->status, "profile-law",
                       "the flow has no possible gas somewhere between %.10g and %.10g cm",
                       problem->flow.inner, problem->flow.outer);
}

/* Largest speed, and whether the flow slows down anywhere. */
static void survey(struct lxg_profile_problem *problem) {
  const double width = log(problem->flow.outer / problem->flow.inner);
  for (int i = 0; i <= CHECK_POINTS && problem->status == LXG_OK; i++) {
    const double r = fmin(problem->flow.inner * exp(width * i / CHECK_POINTS), problem->flow.outer);
    const struct lxg_profile_point point = lxg_profile_at(problem, r);
    problem->largest = fmax(problem->largest, point.speed);
    problem->decelerates = problem->decelerates || point.sigma + 1.0 < -slowing;
  }
}

static enum lxg_status place_nodes(struct lxg_profile_problem *problem, struct lxg_error *error) {
  problem->node_radius = lxg_alloc(RAY_NODES + 1, sizeof(double));
  problem->node_speed = lxg_alloc(RAY_NODES + 1, sizeof(double));
  if (problem->node_radius == NULL || problem->node_speed == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for the rays of a line profile");
  }
  const double width = log(problem->flow.outer / problem->flow.inner);
  problem->nodes = RAY_NODES + 1;
  for (size_t i = 0; i < problem->nodes; i++) {
    const double r = problem->flow.inner * exp(width * (double)i / RAY_NODES);
    problem->node_radius[i] = i == 0 ? problem->flow.inner : fmin(r, problem->flow.outer);
    problem->node_speed[i] = lxg_profile_speed(problem, problem->node_radius[i]);
  }
  return problem->status == LXG_OK ? LXG_OK : law_failed(problem, error);
}

static void problem_free(struct lxg_profile_problem *problem) {
  lxg_free(problem->node_radius);
  lxg_free(problem->node_speed);
}

static enum lxg_status problem_init(struct lxg_profile_problem *problem, const struct lxg_profile_flow *flow,
                                    const struct lxg_profile_line *line, const struct lxg_profile_core *core,
                                    const struct lxg_profile_settings *settings, struct lxg_error *error) {
  *problem = (struct lxg_profile_problem){.flow = *flow, .line = *line, .core = *core, .status = LXG_OK};
  if (settings != NULL) {
    problem->settings = *settings;
  } else {
    lxg_profile_defaults(&problem->settings);
  }
  const enum lxg_status status = check(problem, error);
  if (status != LXG_OK) {
    return status;
  }
  survey(problem);
  problem->inner_speed = lxg_profile_speed(problem, flow->inner);
  problem->outer_speed = lxg_profile_speed(problem, flow->outer);
  if (problem->status != LXG_OK) {
    return law_failed(problem, error);
  }
  return problem->decelerates || problem->settings.by_rays ? place_nodes(problem, error) : LXG_OK;
}

static double continuum(const struct lxg_profile_problem *problem) {
  return LXG_PI * problem->flow.inner * problem->flow.inner * problem->core.intensity;
}

/* F - F_c at a radial velocity. */
static double added(struct lxg_profile_problem *problem, double velocity) {
  const bool thin = problem->line.kind == LXG_PROFILE_RECOMBINATION && problem->line.opacity == 0.0;
  if (problem->node_radius == NULL) {
    return lxg_profile_along_surface(problem, -velocity);
  }
  return thin ? lxg_profile_thin(problem, -velocity) : lxg_profile_by_rays(problem, -velocity);
}

enum lxg_status lxg_profile_flux(const struct lxg_profile_flow *flow, const struct lxg_profile_line *line,
                                 const struct lxg_profile_core *core,
                                 const struct lxg_profile_settings *settings, double velocity, double *flux,
                                 struct lxg_error *error) {
  struct lxg_profile_problem problem;
  enum lxg_status status = problem_init(&problem, flow, line, core, settings, error);
  if (status == LXG_OK) {
    const double value = continuum(&problem) + added(&problem, velocity);
    status = problem.status == LXG_OK ? LXG_OK : law_failed(&problem, error);
    if (status == LXG_OK) {
      *flux = value;
    }
  }
  problem_free(&problem);
  return status;
}

/* Extremum of sign * (F - F_c) between two velocities by golden section. */
static double extremum(struct lxg_profile_problem *problem, double a, double b, double sign) {
  double c = b - golden * (b - a), d = a + golden * (b - a);
  double fc = sign * added(problem, c), fd = sign * added(problem, d);
  for (int i = 0; i < REFINE_STEPS && fabs(b - a) > 1e-9 * problem->largest; i++) {
    if (fc > fd) {
      b = d;
      d = c;
      fd = fc;
      c = b - golden * (b - a);
      fc = sign * added(problem, c);
    } else {
      a = c;
      c = d;
      fc = fd;
      d = a + golden * (b - a);
      fd = sign * added(problem, d);
    }
  }
  return 0.5 * (a + b);
}

/* Velocity between `low` and `high` where F - F_c = level; they lie on different sides of it. */
static double crossing(struct lxg_profile_problem *problem, double low, double high, double level) {
  const bool below = added(problem, low) < level;
  for (int i = 0; i < REFINE_STEPS && fabs(high - low) > 1e-12 * problem->largest; i++) {
    const double middle = 0.5 * (low + high);
    if ((added(problem, middle) < level) == below) {
      low = middle;
    } else {
      high = middle;
    }
  }
  return 0.5 * (low + high);
}

static void find_absorption(struct lxg_profile_problem *problem, struct lxg_profile *profile) {
  const double limit = profile->continuum * (1.0 - problem->settings.edge_depth);
  const size_t n = profile->count;
  size_t deepest = 0, edge = n;
  for (size_t i = 0; i < n / 2; i++) {
    deepest = profile->flux[i] < profile->flux[deepest] ? i : deepest;
    edge = edge == n && profile->flux[i] < limit ? i : edge;
  }
  profile->has_absorption = edge < n;
  profile->absorption_speed = profile->absorption_depth = profile->blue_edge = NAN;
  if (profile->has_absorption) {
    const double left = profile->velocity[deepest > 0 ? deepest - 1 : 0],
                 right = profile->velocity[deepest + 1];
    const double v = extremum(problem, left, right, -1.0);
    profile->absorption_speed = -v;
    profile->absorption_depth = -added(problem, v) / profile->continuum;
    profile->blue_edge = edge == 0 ? -profile->velocity[0]
                                   : -crossing(problem, profile->velocity[edge - 1], profile->velocity[edge],
                                               limit - profile->continuum);
  }
}

static void find_emission(struct lxg_profile_problem *problem, struct lxg_profile *profile) {
  const size_t n = profile->count;
  size_t highest = 0;
  for (size_t i = 0; i < n; i++) {
    highest = profile->flux[i] > profile->flux[highest] ? i : highest;
  }
  profile->has_emission = profile->flux[highest] > profile->continuum;
  profile->emission_velocity = profile->emission_height = profile->emission_half_width = NAN;
  if (!profile->has_emission) {
    return;
  }
  const double left = profile->velocity[highest > 0 ? highest - 1 : 0];
  const double right = profile->velocity[highest + 1 < n ? highest + 1 : n - 1];
  const double v = extremum(problem, left, right, 1.0);
  profile->emission_velocity = v;
  profile->emission_height = fmax(added(problem, v), profile->flux[highest] - profile->continuum);
  const double half = 0.5 * profile->emission_height;
  for (size_t i = n - 1; i > n / 2; i--) {
    if (profile->flux[i - 1] - profile->continuum >= half) {
      profile->emission_half_width = crossing(problem, profile->velocity[i - 1], profile->velocity[i], half);
      break;
    }
  }
}

/* int (F - F_c) dv by Gauss panels; F has corners at 0, at the speeds of the inner and outer ends, and where the
 * core just covers the surface at the outer end, x = v (1 - R^2/r^2)^(1/2); it bends sharply above the inner
 * speed: graded as t^2 there. */
static double line_flux(struct lxg_profile_problem *problem) {
  const double v1 = problem->inner_speed, v2 = problem->outer_speed,
               ratio = problem->flow.inner / problem->flow.outer;
  double corner[] = {0.0, v1, v2 * sqrt((1.0 - ratio) * (1.0 + ratio)), v2, problem->largest};
  gsl_sort(corner, 1, CORNERS);
  double sum = 0.0;
  for (int s = 0; s + 1 < CORNERS; s++) {
    const double width = corner[s + 1] - corner[s];
    for (int k = 0; k < VELOCITY_PANELS && width > 0.0; k++) {
      for (int i = 0; i < LXG_PROFILE_GAUSS; i++) {
        const double t = (k + lxg_profile_node[i]) / VELOCITY_PANELS;
        const double v = corner[s] + width * t * t;
        sum += lxg_profile_weight[i] * 2.0 * t * width / VELOCITY_PANELS *
               (added(problem, v) + added(problem, -v));
      }
    }
  }
  return sum;
}

/* - int 4 pi r^2 chi S beta_c dr: what pure scattering sends back to the core, per steradian. */
static double returned(struct lxg_profile_problem *problem) {
  const double width = log(problem->flow.outer / problem->flow.inner);
  const size_t panels = 4 * problem->settings.panels;
  double sum = 0.0;
  for (size_t k = 0; k < panels; k++) {
    for (int i = 0; i < LXG_PROFILE_GAUSS; i++) {
      const double t = ((double)k + lxg_profile_node[i]) / (double)panels;
      const double r = problem->flow.inner * exp(width * t * t);
      const struct lxg_profile_point point = lxg_profile_at(problem, fmin(r, problem->flow.outer));
      sum -= lxg_profile_weight[i] * 2.0 * t * 4.0 * LXG_PI * r * r * r * point.rate * point.source *
             point.beta_core;
    }
  }
  return sum * width / (double)panels;
}

static enum lxg_status fill(struct lxg_profile_problem *problem, struct lxg_profile *profile,
                            struct lxg_error *error) {
  const size_t n = problem->settings.count;
  profile->count = n;
  profile->velocity = lxg_alloc(n, sizeof *profile->velocity);
  profile->flux = lxg_alloc(n, sizeof *profile->flux);
  if (profile->velocity == NULL || profile->flux == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for a line profile of %zu velocities",
                         n);
  }
  profile->continuum = continuum(problem);
  profile->largest_speed = problem->largest;
  profile->coupled = problem->decelerates && problem->line.kind == LXG_PROFILE_RESONANCE;
  for (size_t i = 0; i < n; i++) {
    const double centre = 0.5 * (double)(n - 1);
    profile->velocity[i] = ((double)i - centre) / centre * problem->largest;
    profile->flux[i] = profile->continuum + added(problem, profile->velocity[i]);
  }
  find_absorption(problem, profile);
  find_emission(problem, profile);
  profile->line_flux = line_flux(problem);
  profile->expected_flux = problem->line.kind == LXG_PROFILE_RESONANCE ? returned(problem) : NAN;
  return problem->status == LXG_OK ? LXG_OK : law_failed(problem, error);
}

enum lxg_status lxg_profile_compute(const struct lxg_profile_flow *flow, const struct lxg_profile_line *line,
                                    const struct lxg_profile_core *core,
                                    const struct lxg_profile_settings *settings, struct lxg_profile *profile,
                                    struct lxg_error *error) {
  struct lxg_profile_problem problem;
  *profile = (struct lxg_profile){.count = 0};
  enum lxg_status status = problem_init(&problem, flow, line, core, settings, error);
  if (status == LXG_OK) {
    status = fill(&problem, profile, error);
  }
  problem_free(&problem);
  if (status != LXG_OK) {
    lxg_profile_free(profile);
  }
  return status;
}

void lxg_profile_free(struct lxg_profile *profile) {
  lxg_free(profile->velocity);
  lxg_free(profile->flux);
  *profile = (struct lxg_profile){.count = 0};
}
