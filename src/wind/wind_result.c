/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_result.c - every number of a solved wind: sites, integrals along it, extremes, times and checks.
 *
 * Integrals run over the collocation points with their weights, so they have the order of the solution itself.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"
#include "luxgale/eos.h"

#include <math.h>

enum { COAST_POINTS = 512 };

void lxg_wind_none(struct lxg_wind *wind, enum lxg_wind_reason reason) {
  const struct lxg_wind_site nowhere = {NAN, NAN, NAN, NAN, NAN, NAN, NAN};
  *wind = (struct lxg_wind){.reason = reason,
                            .base = nowhere,
                            .critical = nowhere,
                            .photosphere = nowhere,
                            .escape_radius = NAN,
                            .luminosity_infinity = NAN,
                            .lifting_rate = NAN,
                            .kinetic_rate = NAN,
                            .nuclear_luminosity = NAN,
                            .flow_time = NAN,
                            .diffusion_time = NAN,
                            .tiring_number = NAN,
                            .wind_performance = NAN,
                            .gamma_max = NAN,
                            .gamma_max_radius = NAN,
                            .gamma_max_temperature = NAN,
                            .mach_min = NAN,
                            .mach_max = NAN,
                            .beta_min = NAN,
                            .beta_max = NAN,
                            .flux_ratio_max = NAN,
                            .table_share = NAN,
                            .residual = NAN};
  for (size_t i = 0; i < LXG_HELD_COUNT; i++) {
    wind->value[i] = NAN;
  }
}

static struct wind_place place_of(const struct lxg_wind_solver *solver, double x, const double y[]) {
  const double *p = lxg_bvp_parameters_const(solver->kept);
  const struct wind_place place = {lxg_wind_ln_r(&solver->problem.constants, x, p), y[0], y[1],
                                   p[WIND_P_LNMDOT],
                                   wind_unknowns(&solver->problem.constants) == 3 ? y[2] : p[WIND_P_LAMBDA]};
  return place;
}

static struct wind_place place_at(const struct lxg_wind_solver *solver, double x) {
  double y[LXG_BVP_MAX_UNKNOWNS];
  lxg_bvp_at(solver->kept, x, y, NULL);
  return place_of(solver, x, y);
}

/* Sums and extremes gathered in one visit of the wind. */
struct gather {
  const struct lxg_wind_solver *solver;
  struct lxg_wind *wind;
  double length[2]; /* of the pieces, in ln r */
  double mass;      /* [g] */
  double burning;   /* heat [L_Edd] */
  double depth;     /* integral of kappa rho dr over the outer piece */
  double flow_time; /* over the outer piece [s] */
  double radiation; /* energy of radiation in the outer piece [erg] */
  double table_share, weights;
  bool inside; /* the inner piece was solved */
  bool failed;
};

static void extremes(double value, double *low, double *high) {
  *low = isnan(*low) ? value : fmin(*low, value);
  *high = isnan(*high) ? value : fmax(*high, value);
}

static void visit(void *context, size_t piece, double x, double weight, const double y[]) {
  struct gather *g = context;
  const struct wind_place at = place_of(g->solver, x, y);
  struct wind_local l;
  double burning = 0.0;
  if (lxg_wind_local(&g->solver->problem.constants, &at, &l) != LXG_OK ||
      (piece == 0 && lxg_wind_burning_rate(&g->solver->problem.constants, &at, &burning, NULL) != LXG_OK)) {
    g->failed = true;
    return;
  }
  const double r = exp(at.ln_r), t = exp(at.ln_t), rho = exp(l.ln_rho), dlnr = weight * g->length[piece];
  g->mass += 4.0 * LXG_PI * r * r * r * rho * dlnr;
  g->burning += burning * dlnr;
  g->table_share += weight * l.table_weight;
  g->weights += weight;
  if (piece == 1) {
    g->depth += l.kappa * rho * r * dlnr;
    g->flow_time += r / exp(at.ln_v) * dlnr;
    g->radiation += 4.0 * LXG_PI * r * r * r * LXG_RADIATION * pow(t, 4.0) * dlnr;
  }
  struct lxg_wind *wind = g->wind;
  const double c_t2 = l.c * l.g;
  extremes(sqrt(l.w / l.c), &wind->mach_min, &wind->mach_max);
  extremes(lxg_eos_beta(c_t2, t, rho), &wind->beta_min, &wind->beta_max);
  const double flux_ratio = l.lhat * g->solver->problem.constants.l_edd /
                            (4.0 * LXG_PI * r * r * LXG_SPEED_OF_LIGHT * LXG_RADIATION * pow(t, 4.0));
  wind->flux_ratio_max = isnan(wind->flux_ratio_max) ? flux_ratio : fmax(wind->flux_ratio_max, flux_ratio);
  if (!(wind->gamma_max >= l.gamma)) {
    wind->gamma_max = l.gamma;
    wind->gamma_max_radius = r;
    wind->gamma_max_temperature = t;
  }
  if (isnan(wind->escape_radius) && l.w >= 2.0) {
    wind->escape_radius = r;
  }
}

static enum lxg_status site_of(const struct lxg_wind_solver *solver, const struct wind_place *at,
                               struct lxg_wind_site *site) {
  struct wind_local l;
  const enum lxg_status status = lxg_wind_local(&solver->problem.constants, at, &l);
  if (status == LXG_OK) {
    *site = (struct lxg_wind_site){.radius = exp(at->ln_r),
                                   .temperature = exp(at->ln_t),
                                   .density = exp(l.ln_rho),
                                   .speed = exp(at->ln_v),
                                   .luminosity = l.lhat * solver->problem.constants.l_edd,
                                   .opacity = l.kappa,
                                   .optical_depth = l.kappa * exp(l.ln_rho + at->ln_r)};
  }
  return status;
}

/* Terminal speed, luminosity at infinity, and where the coasting gas passes the escape speed. */
static enum lxg_status coast(const struct lxg_wind_solver *solver, const struct wind_place *photosphere,
                             struct lxg_wind *wind) {
  const struct wind_constants *constants = &solver->problem.constants;
  struct wind_coast_point point[COAST_POINTS];
  size_t count = 0;
  const enum lxg_status status =
      lxg_wind_coast_track(solver->problem.coast, photosphere, point, COAST_POINTS, &count);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t i = 0; i < count; i++) {
    const double v = exp(point[i].ln_v), r = exp(point[i].ln_r);
    extremes(v / sqrt(constants->c_t2_per_k * exp(point[i].ln_t)), &wind->mach_min, &wind->mach_max);
    if (isnan(wind->escape_radius) && v * v * r >= 2.0 * constants->gm) {
      wind->escape_radius = r;
    }
  }
  const struct wind_coast_point *last = &point[count - 1];
  const double v = exp(last->ln_v);
  wind->value[LXG_HELD_TERMINAL_SPEED] = v;
  wind->luminosity_infinity = constants->l_edd * lxg_wind_coast_luminosity(constants, photosphere, last);
  return LXG_OK;
}

static void derived(const struct lxg_wind_solver *solver, const struct gather *g, struct lxg_wind *wind) {
  const struct wind_constants *constants = &solver->problem.constants;
  const double *p = lxg_bvp_parameters_const(solver->kept);
  double *value = wind->value;
  const double rate = exp(p[WIND_P_LNMDOT]);
  value[LXG_HELD_BASE_TEMPERATURE] = wind->base.temperature;
  value[LXG_HELD_BASE_LUMINOSITY] = wind->base.luminosity;
  value[LXG_HELD_LAUNCH_RADIUS] = wind->critical.radius;
  value[LXG_HELD_PHOTOSPHERE_LUMINOSITY] = wind->photosphere.luminosity;
  value[LXG_HELD_PHOTOSPHERE_TEMPERATURE] = wind->photosphere.temperature;
  value[LXG_HELD_PHOTOSPHERE_RADIUS] = wind->photosphere.radius;
  value[LXG_HELD_MASS_LOSS_RATE] = rate;
  value[LXG_HELD_ENERGY_RATE] = p[WIND_P_LAMBDA] * constants->l_edd;
  value[LXG_HELD_ENVELOPE_MASS] = g->inside ? g->mass : NAN;
  const double v = value[LXG_HELD_TERMINAL_SPEED];
  wind->critical.optical_depth = g->depth + 2.0 / 3.0;
  wind->lifting_rate = rate * constants->gm / constants->model.star.radius;
  wind->kinetic_rate = 0.5 * rate * v * v;
  wind->flow_time = g->flow_time;
  wind->diffusion_time = g->radiation / wind->photosphere.luminosity;
  wind->nuclear_luminosity = g->burning * constants->l_edd;
  wind->tiring_number = wind->lifting_rate / (wind->base.luminosity + wind->nuclear_luminosity);
  wind->wind_performance = rate * v * LXG_SPEED_OF_LIGHT / wind->photosphere.luminosity;
  wind->table_share = g->table_share / g->weights;
  wind->residual = solver->residual;
  wind->mesh_points = lxg_bvp_intervals(solver->kept);
  wind->newton_steps = solver->newton_steps;
}

enum lxg_status lxg_wind_result(const struct lxg_wind_solver *solver, struct lxg_wind *wind) {
  lxg_wind_none(wind, LXG_WIND_SOLVED);
  const double *p = lxg_bvp_parameters_const(solver->kept);
  struct gather g = {
      .solver = solver,
      .wind = wind,
      .length = {p[WIND_P_LNRC] - solver->problem.constants.ln_r0, p[WIND_P_LNRPH] - p[WIND_P_LNRC]}};
  lxg_bvp_visit(solver->kept, visit, &g);
  const struct wind_place critical = place_at(solver, 1.0), photosphere = place_at(solver, 2.0);
  g.inside = lxg_bvp_nodes(solver->kept)[0] < 1.0;
  if (g.inside) {
    const struct wind_place base = place_at(solver, 0.0);
    g.failed = g.failed || site_of(solver, &base, &wind->base) != LXG_OK;
  }
  if (g.failed || site_of(solver, &critical, &wind->critical) != LXG_OK ||
      site_of(solver, &photosphere, &wind->photosphere) != LXG_OK) {
    return LXG_DOMAIN;
  }
  if (coast(solver, &photosphere, wind) != LXG_OK) {
    lxg_wind_none(wind, LXG_WIND_STAGNATES);
    return LXG_NO_SOLUTION;
  }
  derived(solver, &g, wind);
  return LXG_OK;
}

struct mass_sum {
  const struct lxg_wind_solver *solver;
  double length[2], sum;
};

static void visit_mass(void *context, size_t piece, double x, double weight, const double y[]) {
  struct mass_sum *s = context;
  const struct wind_place at = place_of(s->solver, x, y);
  s->sum += weight * s->length[piece] * exp(at.ln_mdot + at.ln_r - at.ln_v);
}

double lxg_wind_kept_value(const struct lxg_wind_solver *solver, int kind) {
  const double *p = lxg_bvp_parameters_const(solver->kept);
  const bool inside = lxg_bvp_nodes(solver->kept)[0] < 1.0;
  if (!inside && (lxg_wind_row_site(kind) == 0 || kind == LXG_HELD_ENVELOPE_MASS)) {
    return NAN;
  }
  const struct wind_place base = place_at(solver, 0.0), photosphere = place_at(solver, 2.0);
  struct wind_local l;
  double gradient[WIND_ARGUMENTS], ln_speed;
  switch (kind) {
  case LXG_HELD_BASE_TEMPERATURE:
    return base.ln_t;
  case LXG_HELD_BASE_LUMINOSITY:
    return lxg_wind_local(&solver->problem.constants, &base, &l) == LXG_OK ? l.lhat : NAN;
  case LXG_HELD_LAUNCH_RADIUS:
    return p[WIND_P_LNRC];
  case LXG_HELD_PHOTOSPHERE_LUMINOSITY:
    return 2.0 * p[WIND_P_LNRPH] + 4.0 * photosphere.ln_t;
  case LXG_HELD_PHOTOSPHERE_TEMPERATURE:
    return photosphere.ln_t;
  case LXG_HELD_PHOTOSPHERE_RADIUS:
    return p[WIND_P_LNRPH];
  case LXG_HELD_TERMINAL_SPEED:
    return lxg_wind_coast_gradient(solver->problem.coast, &photosphere, &ln_speed, gradient) == LXG_OK
               ? ln_speed
               : NAN;
  case LXG_HELD_MASS_LOSS_RATE:
    return p[WIND_P_LNMDOT];
  case LXG_HELD_ENERGY_RATE:
    return p[WIND_P_LAMBDA];
  case LXG_HELD_ENVELOPE_MASS: {
    struct mass_sum s = {
        solver, {p[WIND_P_LNRC] - solver->problem.constants.ln_r0, p[WIND_P_LNRPH] - p[WIND_P_LNRC]}, 0.0};
    lxg_bvp_visit(solver->kept, visit_mass, &s);
    return log(s.sum);
  }
  case WIND_ROW_CRITICAL_TEMPERATURE:
    return place_at(solver, 1.0).ln_t;
  default:
    return NAN;
  }
}
