/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_burning.c - the wind over a burning base: lambda = Lambda/L_Edd as a third unknown.
 *
 *   (W5) d lambda/dlnr = s 4 pi r^3 rho eps/L_Edd below r_c, 0 outside,  s = 1
 * The first two equations and all conditions are those of wind_problem.c with the local lambda in the place of the
 * parameter; the parameter Lambda of the outside is tied to lambda(R_ph) by one more condition. The luminosity at R_0, which is
 * zero where all light comes from the shell, is one of the two held rows.
 *
 * A first wind: among the winds that do not burn, at one launch radius, the one whose base temperature would make the shell
 * give just the luminosity L_0 that is fed in at R_0. Then s goes from 0 to 1 while the luminosity at R_0 goes from L_0 to
 * its own value: the source moves from below the base into the shell.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

static const double start_temperature = 1.0e8; /* base temperature of the first wind without burning [K] */
static const double start_power = 8.0;     /* heat of the shell against base temperature, for the search */
static const double start_match = 0.05;    /* of ln(heat/L_0): near enough to begin */
static const double start_stride = 0.15;   /* longest step of ln(base temperature) in the search */
static const double start_residual = 1e-4; /* relative residual on the way */
static const double start_smallest = 1.0 / 256.0;            /* smallest step of s */
static const double start_critical[] = {5.6, 5.5, 5.7, 5.4}; /* log10 of critical temperatures tried [K] */
static const double start_radii[] = {1.4, 1.0, 0.7, 1.8};    /* log10(r_c/R_0) tried */
enum { START_SEARCH = 24 };

enum lxg_status lxg_wind_burning_rate(const struct wind_constants *constants, const struct wind_place *at,
                                      double *rate, double partial[WIND_ARGUMENTS]) {
  const double ln_rho = at->ln_mdot - WIND_LN_4PI - 2.0 * at->ln_r - at->ln_v;
  struct lxg_burning_value burning;
  const enum lxg_status status = lxg_burning_at(&constants->model.burning, ln_rho, at->ln_t, &burning);
  if (status != LXG_OK) {
    return status;
  }
  *rate = exp(at->ln_mdot + at->ln_r - at->ln_v) * burning.eps / constants->l_edd;
  if (!isfinite(*rate)) {
    return LXG_DOMAIN;
  }
  if (partial != NULL) {
    partial[WIND_LNV] = -*rate * (1.0 + burning.dlne_dlnrho);
    partial[WIND_LNT] = *rate * burning.dlne_dlnt;
    partial[WIND_LNR] = *rate * (1.0 - 2.0 * burning.dlne_dlnrho);
    partial[WIND_LNMDOT] = *rate * (1.0 + burning.dlne_dlnrho);
    partial[WIND_LAMBDA] = 0.0;
  }
  return LXG_OK;
}

/* Parameters with the local lambda in the place of Lambda. */
static void with_lambda(const double p[], size_t m, double lambda, double local[LXG_BVP_MAX_PARAMETERS]) {
  memcpy(local, p, m * sizeof(double));
  local[WIND_P_LAMBDA] = lambda;
}

/* One row of partials of the plain problem, moved: what belonged to the parameter Lambda belongs to the third unknown. */
static void move_row(const double plain_y[2], const double plain_p[], size_t m, double fy[3], double fp[]) {
  fy[0] = plain_y[0];
  fy[1] = plain_y[1];
  fy[2] = plain_p[WIND_P_LAMBDA];
  memcpy(fp, plain_p, m * sizeof(double));
  fp[WIND_P_LAMBDA] = 0.0;
}

/* (W5) */
static enum lxg_status source_row(const struct wind_problem *problem, size_t piece, double x,
                                  const double y[], const double k[], const double p[],
                                  struct lxg_bvp_rows *rows) {
  const struct wind_constants *constants = &problem->constants;
  const size_t m = problem->bvp.parameters;
  const double length = piece == 0 ? p[WIND_P_LNRC] - constants->ln_r0 : p[WIND_P_LNRPH] - p[WIND_P_LNRC];
  double rate = 0.0, partial[WIND_ARGUMENTS] = {0.0};
  if (piece == 0) {
    const struct wind_place at = {lxg_wind_ln_r(constants, x, p), y[0], y[1], p[WIND_P_LNMDOT], y[2]};
    const enum lxg_status status =
        lxg_wind_burning_rate(constants, &at, &rate, rows->fy != NULL ? partial : NULL);
    if (status != LXG_OK) {
      return status;
    }
  }
  const double share = problem->burning_share;
  rows->f[2] = k[2] - share * length * rate;
  if (rows->scale != NULL) {
    rows->scale[2] = length * (1.0 + share * rate);
  }
  if (rows->fy != NULL) {
    rows->fk[8] = 1.0;
    rows->fy[6] = -share * length * partial[WIND_LNV];
    rows->fy[7] = -share * length * partial[WIND_LNT];
    if (piece == 0) { /* ln r = ln R_0 + x length */
      rows->fp[2 * m + WIND_P_LNRC] = -share * (rate + length * x * partial[WIND_LNR]);
      rows->fp[2 * m + WIND_P_LNMDOT] = -share * length * partial[WIND_LNMDOT];
    }
  }
  return LXG_OK;
}

static enum lxg_status equation(const void *context, size_t piece, double x, const double y[],
                                const double k[], const double p[], struct lxg_bvp_rows *rows) {
  const struct wind_problem *problem = context;
  const size_t m = problem->bvp.parameters;
  double local[LXG_BVP_MAX_PARAMETERS], fy[4] = {0.0}, fk[4] = {0.0}, fp[2 * LXG_BVP_MAX_PARAMETERS] = {0.0};
  with_lambda(p, m, y[2], local);
  const bool partials = rows->fy != NULL;
  struct lxg_bvp_rows plain = {.f = rows->f,
                               .fy = partials ? fy : NULL,
                               .fk = partials ? fk : NULL,
                               .fp = partials ? fp : NULL,
                               .scale = rows->scale};
  const enum lxg_status status = problem->plain.equation(context, piece, x, y, k, local, &plain);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t a = 0; partials && a < 2; a++) {
    move_row(fy + 2 * a, fp + m * a, m, rows->fy + 3 * a, rows->fp + m * a);
    rows->fk[3 * a] = fk[2 * a];
    rows->fk[3 * a + 1] = fk[2 * a + 1];
  }
  return source_row(problem, piece, x, y, k, p, rows);
}

static enum lxg_status condition(const void *context, size_t site, const double y[], const double p[],
                                 double f[], double fy[], double fp[]) {
  const struct wind_problem *problem = context;
  const size_t m = problem->bvp.parameters, count = problem->bvp.conditions[site];
  double local[LXG_BVP_MAX_PARAMETERS],
      plain_y[2 * LXG_BVP_MAX_CONDITIONS] = {0.0},
                  plain_p[LXG_BVP_MAX_PARAMETERS * LXG_BVP_MAX_CONDITIONS] = {0.0};
  with_lambda(p, m, y[2], local);
  const enum lxg_status status = problem->plain.condition(context, site, y, local, f, plain_y, plain_p);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t i = 0; i < count; i++) {
    move_row(plain_y + 2 * i, plain_p + m * i, m, fy + 3 * i, fp + m * i);
  }
  if (site == 2) { /* the last row: Lambda is lambda(R_ph) */
    const size_t i = count - 1;
    f[i] = y[2] - p[WIND_P_LAMBDA];
    fy[3 * i + 2] = 1.0;
    fp[m * i + WIND_P_LAMBDA] = -1.0;
  }
  return LXG_OK;
}

void lxg_wind_burning_extend(struct wind_problem *problem) {
  problem->plain = problem->bvp;
  problem->bvp.unknowns = 3;
  problem->bvp.conditions[2]++;
  problem->bvp.equation = equation;
  problem->bvp.condition = condition;
}

/* Heat that the shell of a wind would give. */
struct heat {
  const struct wind_constants *constants; /* of the burning model */
  const double *p;
  double sum; /* [L_Edd] */
};

static void visit(void *context, size_t piece, double x, double weight, const double y[]) {
  struct heat *heat = context;
  if (piece == 0) {
    const double *p = heat->p;
    const struct wind_place at = {lxg_wind_ln_r(heat->constants, x, p), y[0], y[1], p[WIND_P_LNMDOT], 0.0};
    double rate = NAN;
    if (lxg_wind_burning_rate(heat->constants, &at, &rate, NULL) != LXG_OK) {
      rate = NAN;
    }
    heat->sum += weight * (p[WIND_P_LNRC] - heat->constants->ln_r0) * rate;
  }
}

/* Searches among winds without burning, at one launch radius, for the one whose shell would give `base` less than its own
 * luminosity at R_0; `plain` keeps it. */
static enum lxg_status matched(const struct lxg_wind_solver *solver, struct lxg_wind_solver *plain,
                               double ln_rc, double base, bool thorough) {
  const struct wind_constants *constants = &solver->problem.constants;
  struct lxg_wind wind;
  double ln_t = log(start_temperature), above = NAN, below = NAN;
  struct lxg_wind_hold hold[2] = {{LXG_HELD_BASE_TEMPERATURE, start_temperature},
                                  {LXG_HELD_LAUNCH_RADIUS, exp(ln_rc)}};
  enum lxg_status status = LXG_NO_SOLUTION;
  for (size_t i = 0; i < sizeof start_critical / sizeof start_critical[0] && status != LXG_OK; i++) {
    plain->have = false;
    status = lxg_wind_cold_at(plain, ln_rc, start_critical[i] * LXG_LN10);
  }
  if (status == LXG_OK) {
    status = lxg_wind_follow(plain, hold, &wind, NULL);
  }
  if (status != LXG_OK && thorough) {
    status = lxg_wind_solve(plain, hold, &wind, NULL);
  }
  for (int i = 0; status == LXG_OK && i < START_SEARCH; i++) {
    struct heat heat = {constants, lxg_bvp_parameters_const(plain->kept), 0.0};
    lxg_bvp_visit(plain->kept, visit, &heat);
    const double excess = log(heat.sum / (wind.base.luminosity / constants->l_edd - base));
    if (fabs(excess) < start_match) {
      return LXG_OK;
    }
    if (!isfinite(excess)) {
      return LXG_NO_SOLUTION;
    }
    if (excess > 0.0) {
      above = ln_t;
    } else {
      below = ln_t;
    }
    const double step = fmin(fmax(-excess / start_power, -start_stride), start_stride);
    ln_t = isfinite(above) && isfinite(below) ? 0.5 * (above + below) : ln_t + step;
    hold[0].value = exp(ln_t);
    status = lxg_wind_follow(plain, hold, &wind, NULL);
  }
  return status == LXG_OK ? LXG_NOT_CONVERGED : status;
}

static void guess(const void *context, double x, double y[], double k[]) {
  const struct lxg_wind_solver *plain = context;
  lxg_bvp_at(plain->kept, x, y, k);
  y[2] = lxg_bvp_parameters_const(plain->kept)[WIND_P_LAMBDA];
  k[2] = 0.0;
}

/* Moves the source of light from below R_0 into the shell, at a constant launch radius. */
static enum lxg_status kindle(struct lxg_wind_solver *solver, const struct lxg_wind_solver *plain,
                              double base) {
  const double *p = lxg_bvp_parameters_const(plain->kept);
  enum lxg_status status = lxg_bvp_guess(solver->now, lxg_bvp_nodes(plain->kept),
                                         lxg_bvp_intervals(plain->kept), 2, guess, plain, p);
  struct wind_row row[2] = {
      {.kind = LXG_HELD_LAUNCH_RADIUS, .target = p[WIND_P_LNRC]},
      {.kind = LXG_HELD_BASE_LUMINOSITY, .target = lxg_wind_kept_value(plain, LXG_HELD_BASE_LUMINOSITY)}};
  const double fed = row[1].target;
  double done = 0.0, step = 0.25;
  solver->problem.burning_share = 0.0;
  if (status == LXG_OK) {
    status = lxg_wind_newton(solver, row, start_residual, true);
  }
  while (status == LXG_OK && done < 1.0) {
    const double next = fmin(1.0, done + step);
    solver->problem.burning_share = next;
    row[1].target = fed + next * (base - fed);
    const enum lxg_status tried = lxg_wind_newton(
        solver, row, next >= 1.0 ? solver->options.residual_tolerance : start_residual, false);
    if (tried == LXG_OK) {
      done = next;
      step *= 2.0;
    } else {
      step *= 0.5;
      status = tried == LXG_BUG || tried == LXG_MEMORY || step < start_smallest ? tried : LXG_OK;
    }
  }
  solver->problem.burning_share = 1.0;
  return status;
}

enum lxg_status lxg_wind_burning_first(struct lxg_wind_solver *solver, double base) {
  struct lxg_wind_model model = solver->problem.constants.model;
  model.burning = (struct lxg_burning){.law = LXG_BURNING_NONE};
  struct lxg_wind_solver *plain = NULL;
  enum lxg_status status = lxg_wind_solver_create(&model, &solver->options, &plain, NULL);
  if (status != LXG_OK) {
    return status;
  }
  const size_t radii = sizeof start_radii / sizeof start_radii[0];
  for (size_t i = 0; i <= radii; i++) { /* quick tries at every radius, then a thorough one at the first */
    const double ln_rc = solver->problem.constants.ln_r0 + start_radii[i % radii] * LXG_LN10;
    status = matched(solver, plain, ln_rc, base, i >= radii);
    if (status == LXG_OK) {
      status = kindle(solver, plain, base);
    }
    if (status == LXG_OK || status == LXG_BUG || status == LXG_MEMORY) {
      break;
    }
  }
  solver->newton_steps += plain->newton_steps;
  lxg_wind_solver_destroy(plain);
  return status;
}
