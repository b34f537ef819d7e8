/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_coast.c - gas beyond the photosphere, out to the terminal speed at 1000 R_ph.
 *
 * T = T_ph (R_ph/r)^(1/2), phi = 1/2, and the luminosity follows (W2) without radiation enthalpy:
 *   L/L_Edd = lambda' - mdot (w/2 + 5c/2 - 1),  (w - c) dlnv/dlnr = 2c + Gamma + c/2 - 1,
 * with lambda' = lambda - (mdot H)_ph: the luminosity is continuous at the photosphere, where the radiation leaves the gas.
 * An initial-value problem in ln(r/R_ph). Its partials against the values at the photosphere are marched along with it
 * (variational equations), so that a held terminal speed is one exact row of the global system. A flow that slows down to
 * the sound speed falls back: no wind.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"
#include "luxgale/eos.h"
#include "luxgale/ivp.h"
#include "luxgale/memory.h"

#include <math.h>

static const double coast_ratio = 1000.0;    /* terminal speed is read at this many photospheric radii */
static const double coast_tolerance = 1e-10; /* local error of ln v a step */
static const double coast_first_step = 0.05; /* in ln r */
static const double coast_stall = 1.0001;    /* v^2/c_T^2 below which the flow counts as stalled */
enum { COAST_STEPS = 2000 };

struct wind_coast {
  const struct wind_constants *constants;
  struct wind_place from; /* photosphere; its lambda is that of the coasting gas, lambda' */
  struct lxg_ivp *plain, *full;
};

struct coast_local {
  double w, c, n;
  double d_n[WIND_ARGUMENTS];
};

/* Local equations at ln(r/R_ph) = s with speed ln v; partials in the order of WIND_ARGUMENTS at fixed s. */
static enum lxg_status coast_local(const struct wind_coast *coast, double s, double ln_v,
                                   struct coast_local *out) {
  const struct wind_constants *constants = coast->constants;
  const struct wind_place *from = &coast->from;
  const double ln_r = from->ln_r + s, ln_t = from->ln_t - 0.5 * s;
  const double v = exp(ln_v), g = constants->gm / exp(ln_r);
  out->w = v * v / g;
  out->c = constants->c_t2_per_k * exp(ln_t) / g;
  const double ln_rho = from->ln_mdot - WIND_LN_4PI - 2.0 * ln_r - ln_v;
  struct lxg_opacity_value gas;
  enum lxg_status status = lxg_opacity_at(constants->model.opacity, ln_rho, ln_t, &gas);
  if (status != LXG_OK) {
    return status;
  }
  const struct lxg_porosity_gas scale = {.gm = constants->gm, .ct2_per_kelvin = constants->c_t2_per_k};
  struct lxg_porosity_value k;
  status = lxg_porosity_at(&constants->model.porosity, ln_rho, ln_t, ln_r, &gas, &scale, &k);
  if (status != LXG_OK) {
    return status;
  }
  const double mdot = exp(from->ln_mdot) * g / constants->l_edd;
  const double per_gram = 0.5 * out->w + 2.5 * out->c - 1.0;
  const double lhat = from->lambda - mdot * per_gram;
  const double ratio = k.kappa_eff / constants->kappa_e;
  out->n = 2.5 * out->c + ratio * lhat - 1.0;
  const double d_lhat[WIND_ARGUMENTS] = {-mdot * out->w, -mdot * 2.5 * out->c, -mdot, -mdot * per_gram, 1.0};
  const double dlnk[WIND_ARGUMENTS] = {-k.dlnk_dlnrho, k.dlnk_dlnt, k.dlnk_dlnr - 2.0 * k.dlnk_dlnrho,
                                       k.dlnk_dlnrho, 0.0};
  for (int i = 0; i < WIND_ARGUMENTS; i++) {
    const double dc = i == WIND_LNT || i == WIND_LNR ? out->c : 0.0;
    out->d_n[i] = 2.5 * dc + ratio * (d_lhat[i] + lhat * dlnk[i]);
  }
  return LXG_OK;
}

static enum lxg_status slope_plain(const void *context, double s, const double y[], double dyds[]) {
  struct coast_local l;
  const enum lxg_status status = coast_local(context, s, y[0], &l);
  if (status != LXG_OK || !(l.w > l.c)) {
    return LXG_DOMAIN;
  }
  dyds[0] = l.n / (l.w - l.c);
  return LXG_OK;
}

/* y = (ln v, its partials against the five values at the photosphere). */
static enum lxg_status slope_full(const void *context, double s, const double y[], double dyds[]) {
  struct coast_local l;
  const enum lxg_status status = coast_local(context, s, y[0], &l);
  if (status != LXG_OK || !(l.w > l.c)) {
    return LXG_DOMAIN;
  }
  const double denominator = l.w - l.c;
  dyds[0] = l.n / denominator;
  const double by_speed = (l.d_n[WIND_LNV] - 2.0 * l.w * dyds[0]) / denominator;
  for (int i = 0; i < WIND_ARGUMENTS; i++) {
    const double d_denominator = i == WIND_LNT ? -l.c : i == WIND_LNR ? denominator : 0.0;
    const double direct = i == WIND_LNV ? 0.0 : (l.d_n[i] - d_denominator * dyds[0]) / denominator;
    dyds[1 + i] = direct + by_speed * y[1 + i];
  }
  return LXG_OK;
}

struct recorder {
  const struct wind_coast *coast;
  struct wind_coast_point *point;
  size_t capacity, count;
};

static int watch(void *watcher, double s, const double y[]) {
  struct recorder *recorder = watcher;
  const struct wind_coast *coast = recorder->coast;
  const struct wind_coast_point point = {
      .ln_r = coast->from.ln_r + s, .ln_v = y[0], .ln_t = coast->from.ln_t - 0.5 * s};
  if (recorder->count < recorder->capacity) {
    recorder->point[recorder->count++] = point;
  } else if (recorder->capacity > 0) {
    recorder->point[recorder->capacity - 1] = point;
  }
  return exp(2.0 * point.ln_v - point.ln_t) < coast_stall * coast->constants->c_t2_per_k;
}

struct wind_coast *lxg_wind_coast_create(const struct wind_constants *constants) {
  struct wind_coast *coast = lxg_alloc(1, sizeof *coast);
  if (coast == NULL) {
    return NULL;
  }
  coast->constants = constants;
  coast->plain = lxg_ivp_create(1, LXG_IVP_ORDER_8, coast_tolerance);
  coast->full = lxg_ivp_create(1 + WIND_ARGUMENTS, LXG_IVP_ORDER_8, coast_tolerance);
  if (coast->plain == NULL || coast->full == NULL) {
    lxg_wind_coast_destroy(coast);
    return NULL;
  }
  return coast;
}

void lxg_wind_coast_destroy(struct wind_coast *coast) {
  if (coast != NULL) {
    lxg_ivp_destroy(coast->plain);
    lxg_ivp_destroy(coast->full);
    lxg_free(coast);
  }
}

/* (mdot H)_ph = Mdot 4 a T^4/(3 rho L_Edd): radiation enthalpy that the gas carries to the photosphere. */
static double carried(const struct wind_constants *constants, const struct wind_place *from) {
  const double rho = exp(from->ln_mdot - WIND_LN_4PI - 2.0 * from->ln_r - from->ln_v);
  return exp(from->ln_mdot) * lxg_eos_radiation_enthalpy(exp(from->ln_t), rho) / constants->l_edd;
}

double lxg_wind_coast_luminosity(const struct wind_constants *constants, const struct wind_place *photosphere,
                                 const struct wind_coast_point *point) {
  const double g = constants->gm / exp(point->ln_r);
  const double v = exp(point->ln_v), c_t2 = constants->c_t2_per_k * exp(point->ln_t);
  return photosphere->lambda - carried(constants, photosphere) -
         exp(photosphere->ln_mdot) / constants->l_edd * (0.5 * v * v + 2.5 * c_t2 - g);
}

static enum lxg_status march(struct wind_coast *coast, struct lxg_ivp *ivp, lxg_ivp_slope *slope,
                             const struct wind_place *from, struct recorder *recorder, double y[]) {
  coast->from = *from;
  coast->from.lambda -= carried(coast->constants, from);
  double s = 0.0;
  int stalled = 0;
  const enum lxg_status status = lxg_ivp_march(ivp, slope, coast, watch, recorder, &s, log(coast_ratio),
                                               coast_first_step, COAST_STEPS, y, &stalled);
  return status != LXG_OK || stalled ? LXG_NO_SOLUTION : LXG_OK;
}

enum lxg_status lxg_wind_coast_gradient(struct wind_coast *coast, const struct wind_place *from,
                                        double *ln_speed, double gradient[WIND_ARGUMENTS]) {
  double y[1 + WIND_ARGUMENTS] = {from->ln_v, 1.0};
  struct recorder recorder = {.coast = coast};
  const enum lxg_status status = march(coast, coast->full, slope_full, from, &recorder, y);
  *ln_speed = y[0];
  /* lambda' depends on the photosphere as lambda - (mdot H)_ph, and mdot H as v T^4 R^2 */
  static const double power[WIND_ARGUMENTS] = {1.0, 4.0, 2.0, 0.0, 0.0};
  const double enthalpy = carried(coast->constants, from);
  for (int i = 0; i < WIND_ARGUMENTS; i++) {
    gradient[i] = y[1 + i] - power[i] * enthalpy * y[1 + WIND_LAMBDA];
  }
  return status;
}

enum lxg_status lxg_wind_coast_track(struct wind_coast *coast, const struct wind_place *from,
                                     struct wind_coast_point point[], size_t capacity, size_t *count) {
  double y[1] = {from->ln_v};
  struct recorder recorder = {.coast = coast, .point = point, .capacity = capacity};
  const enum lxg_status status = march(coast, coast->plain, slope_plain, from, &recorder, y);
  *count = recorder.count;
  return status;
}
