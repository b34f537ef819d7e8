/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_local.c - the structure equations at one place, scaled by g = G M/r, with exact partial derivatives.
 *
 * With w = v^2/g, c = c_T^2/g, H = (4 a T^4/(3 rho))/g and mdot = Mdot g/L_Edd:
 *   (W1) ln rho = ln Mdot - ln 4 pi - 2 ln r - ln v
 *   (W2) L/L_Edd = lambda - mdot (w/2 + 5c/2 + H - 1)
 *        Gamma = kappa L/(4 pi c G M) = (kappa/kappa_e) L/L_Edd
 *   (W3) phi = -dlnT/dlnr = 3 kappa rho L/(16 pi a c r T^4) = Gamma/H
 *   (W4) (w - c) dlnv/dlnr = N = 2c + Gamma + c phi - 1
 * Partials are against (ln v, ln T, ln r, ln Mdot, lambda), in this order.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"
#include "luxgale/eos.h"

#include <math.h>

void lxg_wind_constants_init(struct wind_constants *constants, const struct lxg_wind_model *model) {
  constants->model = *model;
  constants->gm = model->star.gm;
  constants->c_t2_per_k = lxg_eos_sound_speed_sq_per_k(lxg_composition_mu(&model->composition));
  constants->kappa_e = lxg_composition_kappa_e(&model->composition);
  constants->l_edd = lxg_star_eddington_luminosity(&model->star, &model->composition);
  constants->ln_r0 = log(model->star.radius);
}

/* Opacity with its slopes against ln v, ln T, ln r, ln Mdot. */
static enum lxg_status local_opacity(const struct wind_constants *constants, const struct wind_place *at,
                                     struct wind_local *l, double dlnk[WIND_ARGUMENTS]) {
  struct lxg_opacity_value gas;
  enum lxg_status status = lxg_opacity_at(constants->model.opacity, l->ln_rho, at->ln_t, &gas);
  if (status != LXG_OK) {
    return status;
  }
  const struct lxg_porosity_gas scale = {.gm = constants->gm, .ct2_per_kelvin = constants->c_t2_per_k};
  struct lxg_porosity_value value;
  status = lxg_porosity_at(&constants->model.porosity, l->ln_rho, at->ln_t, at->ln_r, &gas, &scale, &value);
  if (status != LXG_OK) {
    return status;
  }
  l->kappa = value.kappa_eff;
  l->table_weight = gas.table_weight;
  dlnk[WIND_LNV] = -value.dlnk_dlnrho;
  dlnk[WIND_LNT] = value.dlnk_dlnt;
  dlnk[WIND_LNR] = value.dlnk_dlnr - 2.0 * value.dlnk_dlnrho;
  dlnk[WIND_LNMDOT] = value.dlnk_dlnrho;
  dlnk[WIND_LAMBDA] = 0.0;
  return LXG_OK;
}

enum lxg_status lxg_wind_local(const struct wind_constants *constants, const struct wind_place *at,
                               struct wind_local *l) {
  if (!(fabs(at->ln_r) < WIND_LN_MOST && fabs(at->ln_v) < WIND_LN_MOST && fabs(at->ln_t) < WIND_LN_MOST &&
        fabs(at->ln_mdot) < WIND_LN_MOST)) {
    return LXG_DOMAIN; /* a trial far outside physics: refused before anything overflows */
  }
  const double r = exp(at->ln_r), v = exp(at->ln_v), t = exp(at->ln_t), mdot_gs = exp(at->ln_mdot);
  l->ln_rho = at->ln_mdot - WIND_LN_4PI - 2.0 * at->ln_r - at->ln_v;
  l->g = constants->gm / r;
  l->w = v * v / l->g;
  l->c = constants->c_t2_per_k * t / l->g;
  const double t2 = t * t;
  l->h = 4.0 / 3.0 * LXG_RADIATION * t2 * t2 * (4.0 * LXG_PI * r * r * v / mdot_gs) / l->g;
  if (!(l->h > 0.0) || !isfinite(l->h) || !isfinite(l->w) || !(l->c > 0.0)) {
    return LXG_DOMAIN;
  }
  double dlnk[WIND_ARGUMENTS];
  const enum lxg_status status = local_opacity(constants, at, l, dlnk);
  if (status != LXG_OK) {
    return status;
  }
  const double mdot = mdot_gs * l->g / constants->l_edd;
  const double per_gram = 0.5 * l->w + 2.5 * l->c + l->h - 1.0;
  l->mdot = mdot;
  l->lhat = at->lambda - mdot * per_gram;
  const double ratio = l->kappa / constants->kappa_e;
  l->gamma = ratio * l->lhat;
  l->phi = l->gamma / l->h;
  l->n = 2.0 * l->c + l->gamma + l->c * l->phi - 1.0;
  const double d_lhat[WIND_ARGUMENTS] = {-mdot * (l->w + l->h), -mdot * (2.5 * l->c + 4.0 * l->h),
                                         -mdot * (1.0 + 2.0 * l->h), -mdot * (per_gram - l->h), 1.0};
  static const double dlnh[WIND_ARGUMENTS] = {1.0, 4.0, 3.0, -1.0, 0.0};
  for (int i = 0; i < WIND_ARGUMENTS; i++) {
    const double dc = i == WIND_LNT || i == WIND_LNR ? l->c : 0.0;
    l->d_lhat[i] = d_lhat[i];
    l->dlnk[i] = dlnk[i];
    l->d_gamma[i] = ratio * (d_lhat[i] + l->lhat * dlnk[i]);
    l->d_phi[i] = l->d_gamma[i] / l->h - l->phi * dlnh[i];
    l->d_n[i] = (2.0 + l->phi) * dc + l->d_gamma[i] + l->c * l->d_phi[i];
  }
  return LXG_OK;
}

double lxg_wind_critical_slope(const struct wind_local *l) {
  /* L'Hopital at w = c: 2c s^2 + (c phi - N_v) s + (phi N_T - N_r) = 0; the larger root accelerates. */
  const double a = 2.0 * l->c;
  const double b = l->c * l->phi - l->d_n[WIND_LNV];
  const double c = l->phi * l->d_n[WIND_LNT] - l->d_n[WIND_LNR];
  const double root = b * b - 4.0 * a * c;
  return root < 0.0 ? NAN : (-b + sqrt(root)) / (2.0 * a);
}
