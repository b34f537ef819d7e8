/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * hydrostatic_problem.c - the envelope at rest as a boundary-value problem for the collocation solver.
 *
 * Unknowns y = (ln rho, ln T, L/L_Edd) on one piece, ln r linear in x from R_0 to R_ph. With g = G M/r, c = c_T^2/g,
 * H = (4 a T^4/(3 rho))/g, Gamma = (kappa/kappa_e) L/L_Edd, phi = Gamma/H:
 *   (H1) c dlnrho/dlnr = -(1 - Gamma) + c phi    (radiation pressure's part of dP/dr is -rho g Gamma)
 *   (H2) dlnT/dlnr = -phi
 *   (H3) d(L/L_Edd)/dlnr = 4 pi r^3 rho eps/L_Edd
 * Parameters p = (ln R_ph, ln M_env); the mass by an integral row. Conditions: L(R_0) = 0; (H4) twice; one row that selects.
 */
#include "hydrostatic/hydrostatic_internal.h"
#include "luxgale/constants.h"
#include "luxgale/eos.h"

#include <math.h>

static const double ln_4pi = 2.53102424696929079309;

void lxg_hydrostatic_constants_init(struct static_constants *constants, const struct lxg_wind_model *model) {
  constants->model = *model;
  constants->gm = model->star.gm;
  constants->c_t2_per_k = lxg_eos_sound_speed_sq_per_k(lxg_composition_mu(&model->composition));
  constants->kappa_e = lxg_composition_kappa_e(&model->composition);
  constants->l_edd = lxg_star_eddington_luminosity(&model->star, &model->composition);
  constants->ln_r0 = log(model->star.radius);
}

static enum lxg_status local_opacity(const struct static_constants *constants, double ln_r, const double y[],
                                     struct static_local *l) {
  struct lxg_opacity_value gas;
  enum lxg_status status = lxg_opacity_at(constants->model.opacity, y[STATIC_LNRHO], y[STATIC_LNT], &gas);
  if (status != LXG_OK) {
    return status;
  }
  const struct lxg_porosity_gas scale = {.gm = constants->gm, .ct2_per_kelvin = constants->c_t2_per_k};
  struct lxg_porosity_value value;
  status =
      lxg_porosity_at(&constants->model.porosity, y[STATIC_LNRHO], y[STATIC_LNT], ln_r, &gas, &scale, &value);
  if (status != LXG_OK) {
    return status;
  }
  l->kappa = value.kappa_eff;
  l->d_lnk[STATIC_LNRHO] = value.dlnk_dlnrho;
  l->d_lnk[STATIC_LNT] = value.dlnk_dlnt;
  l->d_lnk[STATIC_LUM] = 0.0;
  l->d_lnk[STATIC_LNR] = value.dlnk_dlnr;
  return LXG_OK;
}

enum lxg_status lxg_hydrostatic_local(const struct static_constants *constants, double ln_r, const double y[],
                                      struct static_local *l) {
  enum lxg_status status = local_opacity(constants, ln_r, y, l);
  struct lxg_burning_value burning;
  if (status == LXG_OK) {
    status = lxg_burning_at(&constants->model.burning, y[STATIC_LNRHO], y[STATIC_LNT], &burning);
  }
  if (status != LXG_OK) {
    return status;
  }
  const double t = exp(y[STATIC_LNT]), rho = exp(y[STATIC_LNRHO]), g = constants->gm / exp(ln_r);
  l->c = constants->c_t2_per_k * t / g;
  const double h = lxg_eos_radiation_enthalpy(t, rho) / g;
  const double ratio = l->kappa / constants->kappa_e;
  l->gamma = ratio * y[STATIC_LUM];
  l->phi = l->gamma / h;
  l->rate = exp(ln_4pi + 3.0 * ln_r) * rho * burning.eps / constants->l_edd;
  if (!isfinite(l->c) || !isfinite(l->phi) || !isfinite(l->rate) || !(h > 0.0)) {
    return LXG_DOMAIN;
  }
  static const double dlnh[STATIC_ARGUMENTS] = {-1.0, 4.0, 0.0, 1.0};
  for (int i = 0; i < STATIC_ARGUMENTS; i++) {
    l->d_gamma[i] = i == STATIC_LUM ? ratio : l->gamma * l->d_lnk[i];
    l->d_phi[i] = l->d_gamma[i] / h - l->phi * dlnh[i];
  }
  l->d_rate[STATIC_LNRHO] = l->rate * (1.0 + burning.dlne_dlnrho);
  l->d_rate[STATIC_LNT] = l->rate * burning.dlne_dlnt;
  l->d_rate[STATIC_LUM] = 0.0;
  l->d_rate[STATIC_LNR] = 3.0 * l->rate;
  return LXG_OK;
}

static enum lxg_status equation(const void *context, size_t piece, double x, const double y[],
                                const double k[], const double p[], struct lxg_bvp_rows *rows) {
  (void)piece;
  const struct static_problem *problem = context;
  const double length = p[STATIC_P_LNRPH] - problem->constants.ln_r0;
  if (!(length > 0.0)) {
    return LXG_DOMAIN;
  }
  struct static_local l;
  const enum lxg_status status =
      lxg_hydrostatic_local(&problem->constants, problem->constants.ln_r0 + x * length, y, &l);
  if (status != LXG_OK) {
    return status;
  }
  const double balance = 1.0 - l.gamma - l.c * l.phi;
  rows->f[0] = l.c * k[0] + length * balance; /* (H1) */
  rows->f[1] = k[1] + length * l.phi;         /* (H2) */
  rows->f[2] = k[2] - length * l.rate;        /* (H3) */
  if (rows->scale != NULL) {
    rows->scale[0] = fabs(l.c * k[0]) + length * (1.0 + fabs(l.gamma) + fabs(l.c * l.phi));
    rows->scale[1] = length * (1.0 + fabs(l.phi));
    rows->scale[2] = length * (1.0 + l.rate);
  }
  if (rows->fy == NULL) {
    return LXG_OK;
  }
  double d[STATIC_UNKNOWNS][STATIC_ARGUMENTS];
  for (int i = 0; i < STATIC_ARGUMENTS; i++) {
    const double dc = i == STATIC_LNT || i == STATIC_LNR ? l.c : 0.0;
    d[0][i] = dc * k[0] - length * (l.d_gamma[i] + dc * l.phi + l.c * l.d_phi[i]);
    d[1][i] = length * l.d_phi[i];
    d[2][i] = -length * l.d_rate[i];
  }
  const double by_length[STATIC_UNKNOWNS] = {balance, l.phi, -l.rate};
  for (int a = 0; a < STATIC_UNKNOWNS; a++) {
    for (int b = 0; b < STATIC_UNKNOWNS; b++) {
      rows->fy[a * STATIC_UNKNOWNS + b] = d[a][b];
    }
    rows->fp[a * STATIC_P_COUNT + STATIC_P_LNRPH] = by_length[a] + x * d[a][STATIC_LNR];
  }
  rows->fk[0] = l.c;
  rows->fk[4] = 1.0;
  rows->fk[8] = 1.0;
  return LXG_OK;
}

/* Mass in units of exp(p): integral of 4 pi r^3 rho dlnr = 1. */
static enum lxg_status integrand(const void *context, size_t piece, double x, const double y[],
                                 const double p[], double q[], double qy[], double qp[]) {
  (void)piece;
  const struct static_problem *problem = context;
  const double length = p[STATIC_P_LNRPH] - problem->constants.ln_r0;
  const double ln_r = problem->constants.ln_r0 + x * length;
  const double value = length * exp(ln_4pi + 3.0 * ln_r + y[STATIC_LNRHO] - p[STATIC_P_LNMENV]);
  if (!isfinite(value)) {
    return LXG_DOMAIN;
  }
  q[0] = value;
  qy[STATIC_LNRHO] = value;
  qp[STATIC_P_LNRPH] = value * (3.0 * x + 1.0 / length);
  qp[STATIC_P_LNMENV] = -value;
  return LXG_OK;
}

/* (H4) and the row that selects */
static enum lxg_status surface(const struct static_problem *problem, const double y[], const double p[],
                               double f[], double fy[], double fp[]) {
  const struct static_constants *constants = &problem->constants;
  const double ln_r = p[STATIC_P_LNRPH];
  struct static_local l;
  const enum lxg_status status = lxg_hydrostatic_local(constants, ln_r, y, &l);
  if (status != LXG_OK || !(y[STATIC_LUM] > 0.0) || !(l.gamma < 1.0)) {
    return status != LXG_OK ? status : LXG_DOMAIN;
  }
  f[0] = log(y[STATIC_LUM] * constants->l_edd / (4.0 * LXG_PI * LXG_STEFAN_BOLTZMANN)) - 2.0 * ln_r -
         4.0 * y[STATIC_LNT];
  fy[STATIC_LNT] = -4.0;
  fy[STATIC_LUM] = 1.0 / y[STATIC_LUM];
  fp[STATIC_P_LNRPH] = -2.0;
  double *gy = fy + STATIC_UNKNOWNS, *gp = fp + STATIC_P_COUNT;
  f[1] = y[STATIC_LNRHO] + y[STATIC_LNT] + log(constants->c_t2_per_k) + log(l.kappa) + 2.0 * ln_r -
         log(2.0 / 3.0 * constants->gm) - log(1.0 - l.gamma);
  for (int i = 0; i < STATIC_UNKNOWNS; i++) {
    gy[i] = l.d_lnk[i] + l.d_gamma[i] / (1.0 - l.gamma) + (i == STATIC_LUM ? 0.0 : 1.0);
  }
  gp[STATIC_P_LNRPH] = 2.0 + l.d_lnk[STATIC_LNR] + l.d_gamma[STATIC_LNR] / (1.0 - l.gamma);
  const struct static_row *row = &problem->row;
  f[2] = row->direction[STATIC_C_MASS] * (p[STATIC_P_LNMENV] - row->origin[STATIC_C_MASS]) +
         row->direction[STATIC_C_RADIUS] * (ln_r - row->origin[STATIC_C_RADIUS]) +
         row->direction[STATIC_C_TEMPERATURE] * (y[STATIC_LNT] - row->origin[STATIC_C_TEMPERATURE]) -
         row->target;
  fy[2 * STATIC_UNKNOWNS + STATIC_LNT] = row->direction[STATIC_C_TEMPERATURE];
  fp[2 * STATIC_P_COUNT + STATIC_P_LNRPH] = row->direction[STATIC_C_RADIUS];
  fp[2 * STATIC_P_COUNT + STATIC_P_LNMENV] = row->direction[STATIC_C_MASS];
  return LXG_OK;
}

static enum lxg_status condition(const void *context, size_t site, const double y[], const double p[],
                                 double f[], double fy[], double fp[]) {
  if (site == 0) {
    f[0] = y[STATIC_LUM];
    fy[STATIC_LUM] = 1.0;
    return LXG_OK;
  }
  return surface(context, y, p, f, fy, fp);
}

void lxg_hydrostatic_problem_init(struct static_problem *problem) {
  problem->bvp = (struct lxg_bvp_problem){.unknowns = STATIC_UNKNOWNS,
                                          .parameters = STATIC_P_COUNT,
                                          .pieces = 1,
                                          .conditions = {1, 3},
                                          .integrals = 1,
                                          .context = problem,
                                          .equation = equation,
                                          .condition = condition,
                                          .integrand = integrand};
}
