/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_problem.c - the wind as a boundary-value problem for the collocation solver.
 *
 * Unknowns y = (ln v, ln T) on two pieces: x in [0, 1] from R_0 to r_c, x in [1, 2] from r_c to R_ph, ln r linear in x on
 * each. Parameters p = (ln r_c, ln Mdot, lambda = Lambda/L_Edd, ln R_ph, ln M_env); the last only when the envelope mass is
 * held. A chain that starts at x = 1 leaves the inner piece out. Conditions: v = c_T and N = 0 at r_c; 4 pi R^2 sigma T^4 = L and kappa rho R = 8/3 at R_ph; two held rows, each
 * at the site where its quantity lives.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"

#include <math.h>

/* ln r and its share in (ln r_c, ln R_ph); length of the piece in ln r. */
struct piece_map {
  double ln_r, length;
  double by_rc, by_rph;         /* d ln r */
  double length_rc, length_rph; /* d length */
};

static struct piece_map map_of(const struct wind_constants *constants, size_t piece, double x,
                               const double p[]) {
  struct piece_map map;
  const double t = x - (double)piece;
  if (piece == 0) {
    map.length = p[WIND_P_LNRC] - constants->ln_r0;
    map.ln_r = constants->ln_r0 + t * map.length;
    map.by_rc = t;
    map.by_rph = 0.0;
    map.length_rc = 1.0;
    map.length_rph = 0.0;
  } else {
    map.length = p[WIND_P_LNRPH] - p[WIND_P_LNRC];
    map.ln_r = p[WIND_P_LNRC] + t * map.length;
    map.by_rc = 1.0 - t;
    map.by_rph = t;
    map.length_rc = -1.0;
    map.length_rph = 1.0;
  }
  return map;
}

double lxg_wind_ln_r(const struct wind_constants *constants, double x, const double p[]) {
  return map_of(constants, x < 1.0 ? 0 : 1, x, p).ln_r;
}

static struct wind_place place_at(double ln_r, const double y[], const double p[]) {
  const struct wind_place place = {
      .ln_r = ln_r, .ln_v = y[0], .ln_t = y[1], .ln_mdot = p[WIND_P_LNMDOT], .lambda = p[WIND_P_LAMBDA]};
  return place;
}

static enum lxg_status equation(const void *context, size_t piece, double x, const double y[],
                                const double k[], const double p[], struct lxg_bvp_rows *rows) {
  const struct wind_problem *problem = context;
  const struct piece_map map = map_of(&problem->constants, piece, x, p);
  if (!(map.length > 0.0)) {
    return LXG_DOMAIN;
  }
  const struct wind_place place = place_at(map.ln_r, y, p);
  struct wind_local l;
  const enum lxg_status status = lxg_wind_local(&problem->constants, &place, &l);
  if (status != LXG_OK) {
    return status;
  }
  rows->f[0] = (l.w - l.c) * k[0] - map.length * l.n; /* (W4) */
  rows->f[1] = k[1] + map.length * l.phi;             /* (W3) */
  if (rows->scale != NULL) {
    rows->scale[0] =
        map.length * (1.0 + 2.0 * l.c + fabs(l.gamma) + fabs(l.c * l.phi)) + fabs((l.w - l.c) * k[0]);
    rows->scale[1] = map.length * (1.0 + fabs(l.phi));
  }
  if (rows->fy == NULL) {
    return LXG_OK;
  }
  const size_t m = problem->bvp.parameters;
  rows->fy[0] = 2.0 * l.w * k[0] - map.length * l.d_n[WIND_LNV];
  rows->fy[1] = -l.c * k[0] - map.length * l.d_n[WIND_LNT];
  rows->fy[2] = map.length * l.d_phi[WIND_LNV];
  rows->fy[3] = map.length * l.d_phi[WIND_LNT];
  rows->fk[0] = l.w - l.c;
  rows->fk[3] = 1.0;
  const double dr[2] = {(l.w - l.c) * k[0] - map.length * l.d_n[WIND_LNR], map.length * l.d_phi[WIND_LNR]};
  const double dl[2] = {-l.n, l.phi};
  for (size_t a = 0; a < 2; a++) {
    double *row = rows->fp + a * m;
    row[WIND_P_LNRC] = dr[a] * map.by_rc + dl[a] * map.length_rc;
    row[WIND_P_LNRPH] = dr[a] * map.by_rph + dl[a] * map.length_rph;
    row[WIND_P_LNMDOT] = a == 0 ? -map.length * l.d_n[WIND_LNMDOT] : map.length * l.d_phi[WIND_LNMDOT];
    row[WIND_P_LAMBDA] = a == 0 ? -map.length * l.d_n[WIND_LAMBDA] : map.length * l.d_phi[WIND_LAMBDA];
  }
  return LXG_OK;
}

/* Envelope mass inside R_ph in units of exp(p): integral of 4 pi r^3 rho dlnr = 1. */
static enum lxg_status integrand(const void *context, size_t piece, double x, const double y[],
                                 const double p[], double q[], double qy[], double qp[]) {
  const struct wind_problem *problem = context;
  const struct piece_map map = map_of(&problem->constants, piece, x, p);
  const double value = map.length * exp(p[WIND_P_LNMDOT] + map.ln_r - y[0] - p[WIND_P_LNMENV]);
  if (!isfinite(value)) {
    return LXG_DOMAIN;
  }
  const double by_length = value / map.length;
  q[0] = value;
  qy[0] = -value;
  qp[WIND_P_LNRC] = value * map.by_rc + by_length * map.length_rc;
  qp[WIND_P_LNRPH] = value * map.by_rph + by_length * map.length_rph;
  qp[WIND_P_LNMDOT] = value;
  qp[WIND_P_LNMENV] = -value;
  return LXG_OK;
}

/* One condition row: value, d/dy (2), d/dp (m). */
struct row {
  double f;
  double *fy, *fp;
};

/* Adds the partials of a function of the local arguments to a row; ln r is parameter `radius` (WIND_P_COUNT: fixed). */
static void row_partials(struct row *row, const double partial[WIND_ARGUMENTS], double factor, int radius) {
  row->fy[0] += factor * partial[WIND_LNV];
  row->fy[1] += factor * partial[WIND_LNT];
  row->fp[WIND_P_LNMDOT] += factor * partial[WIND_LNMDOT];
  row->fp[WIND_P_LAMBDA] += factor * partial[WIND_LAMBDA];
  if (radius != WIND_P_COUNT) {
    row->fp[radius] += factor * partial[WIND_LNR];
  }
}

static void parameter_row(struct row *row, const double p[], int parameter, double target) {
  row->f = p[parameter] - target;
  row->fp[parameter] = 1.0;
}

static enum lxg_status held_row(const struct wind_problem *problem, const struct wind_row *held,
                                const struct wind_place *at, const struct wind_local *l, const double p[],
                                struct row *row) {
  switch (held->kind) {
  case LXG_HELD_BASE_TEMPERATURE:
  case LXG_HELD_PHOTOSPHERE_TEMPERATURE:
  case WIND_ROW_CRITICAL_TEMPERATURE:
    row->f = at->ln_t - held->target;
    row->fy[1] = 1.0;
    return LXG_OK;
  case LXG_HELD_BASE_LUMINOSITY:
    row->f = l->lhat - held->target;
    row_partials(row, l->d_lhat, 1.0, WIND_P_COUNT);
    return LXG_OK;
  case LXG_HELD_PHOTOSPHERE_LUMINOSITY: /* at R_ph L = 4 pi R^2 sigma T^4 */
    row->f = 2.0 * p[WIND_P_LNRPH] + 4.0 * at->ln_t - held->target;
    row->fp[WIND_P_LNRPH] = 2.0;
    row->fy[1] = 4.0;
    return LXG_OK;
  case LXG_HELD_TERMINAL_SPEED: {
    double gradient[WIND_ARGUMENTS], ln_speed;
    const enum lxg_status status = lxg_wind_coast_gradient(problem->coast, at, &ln_speed, gradient);
    if (status != LXG_OK) {
      return LXG_DOMAIN;
    }
    row->f = ln_speed - held->target;
    row_partials(row, gradient, 1.0, WIND_P_LNRPH);
    return LXG_OK;
  }
  case LXG_HELD_LAUNCH_RADIUS:
    parameter_row(row, p, WIND_P_LNRC, held->target);
    return LXG_OK;
  case LXG_HELD_PHOTOSPHERE_RADIUS:
    parameter_row(row, p, WIND_P_LNRPH, held->target);
    return LXG_OK;
  case LXG_HELD_MASS_LOSS_RATE:
    parameter_row(row, p, WIND_P_LNMDOT, held->target);
    return LXG_OK;
  case LXG_HELD_ENERGY_RATE:
    parameter_row(row, p, WIND_P_LAMBDA, held->target);
    return LXG_OK;
  case LXG_HELD_ENVELOPE_MASS:
    parameter_row(row, p, WIND_P_LNMENV, held->target);
    return LXG_OK;
  case WIND_ROW_ARC:
    row->f = -held->target;
    for (int i = 0; i < WIND_P_LNMENV; i++) {
      row->f += held->direction[i] * (p[i] - held->origin[i]);
      row->fp[i] = held->direction[i];
    }
    return LXG_OK;
  default:
    return LXG_BUG;
  }
}

size_t lxg_wind_row_site(int kind) {
  switch (kind) {
  case LXG_HELD_BASE_TEMPERATURE:
  case LXG_HELD_BASE_LUMINOSITY:
    return 0;
  case LXG_HELD_LAUNCH_RADIUS:
  case WIND_ROW_CRITICAL_TEMPERATURE:
    return 1;
  default:
    return 2;
  }
}

/* v = c_T and N = 0 */
static void critical_rows(const struct wind_problem *problem, const struct wind_place *at,
                          const struct wind_local *l, struct row row[2]) {
  row[0].f = 2.0 * at->ln_v - at->ln_t - log(problem->constants.c_t2_per_k);
  row[0].fy[0] = 2.0;
  row[0].fy[1] = -1.0;
  row[1].f = l->n;
  row_partials(&row[1], l->d_n, 1.0, WIND_P_LNRC);
}

/* ln L = ln(4 pi sigma R^2 T^4) and ln(kappa rho R) = ln(8/3) */
static enum lxg_status photosphere_rows(const struct wind_problem *problem, const struct wind_place *at,
                                        const struct wind_local *l, struct row row[2]) {
  if (!(l->lhat > 0.0)) {
    return LXG_DOMAIN;
  }
  row[0].f = log(l->lhat * problem->constants.l_edd / (4.0 * LXG_PI * LXG_STEFAN_BOLTZMANN)) -
             2.0 * at->ln_r - 4.0 * at->ln_t;
  row_partials(&row[0], l->d_lhat, 1.0 / l->lhat, WIND_P_LNRPH);
  row[0].fy[1] -= 4.0;
  row[0].fp[WIND_P_LNRPH] -= 2.0;
  row[1].f = log(l->kappa) + l->ln_rho + at->ln_r - log(8.0 / 3.0);
  const double lnrho[WIND_ARGUMENTS] = {-1.0, 0.0, -2.0, 1.0, 0.0};
  row_partials(&row[1], l->dlnk, 1.0, WIND_P_LNRPH);
  row_partials(&row[1], lnrho, 1.0, WIND_P_LNRPH);
  row[1].fp[WIND_P_LNRPH] += 1.0;
  return LXG_OK;
}

static enum lxg_status condition(const void *context, size_t site, const double y[], const double p[],
                                 double f[], double fy[], double fp[]) {
  const struct wind_problem *problem = context;
  const size_t m = problem->bvp.parameters;
  const double ln_r = site == 0 ? problem->constants.ln_r0 : p[site == 1 ? WIND_P_LNRC : WIND_P_LNRPH];
  const struct wind_place at = place_at(ln_r, y, p);
  struct wind_local l;
  enum lxg_status status = lxg_wind_local(&problem->constants, &at, &l);
  if (status != LXG_OK) {
    return status;
  }
  struct row row[LXG_BVP_MAX_CONDITIONS];
  const size_t count = problem->bvp.conditions[site];
  for (size_t i = 0; i < count; i++) {
    row[i] = (struct row){.f = 0.0, .fy = fy + 2 * i, .fp = fp + m * i};
  }
  size_t used = 0;
  for (size_t i = 0; i < 2; i++) {
    if (lxg_wind_row_site(problem->row[i].kind) == site && status == LXG_OK) {
      status = held_row(problem, &problem->row[i], &at, &l, p, &row[used]);
      used++;
    }
  }
  if (status == LXG_OK && site == 1) {
    critical_rows(problem, &at, &l, row + used);
  } else if (status == LXG_OK && site == 2) {
    status = photosphere_rows(problem, &at, &l, row + used);
  }
  for (size_t i = 0; i < count; i++) {
    f[i] = row[i].f;
  }
  return status;
}

enum lxg_status lxg_wind_problem_set(struct wind_problem *problem, const struct wind_row row[2],
                                     bool outer_only) {
  const bool mass = row[0].kind == LXG_HELD_ENVELOPE_MASS || row[1].kind == LXG_HELD_ENVELOPE_MASS;
  problem->bvp = (struct lxg_bvp_problem){.unknowns = 2,
                                          .parameters = mass ? WIND_P_COUNT : WIND_P_LNMENV,
                                          .pieces = 2,
                                          .conditions = {0, 2, 2},
                                          .integrals = mass ? 1 : 0,
                                          .context = problem,
                                          .equation = equation,
                                          .condition = condition,
                                          .integrand = integrand};
  for (size_t i = 0; i < 2; i++) {
    problem->row[i] = row[i];
    problem->bvp.conditions[lxg_wind_row_site(row[i].kind)]++;
  }
  if (wind_unknowns(&problem->constants) == 3) {
    lxg_wind_burning_extend(problem);
  }
  return outer_only && (mass || problem->bvp.conditions[0] > 0) ? LXG_NO_SOLUTION : LXG_OK;
}
