/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * kramers.c - the built-in opacity formula: textbook laws plus bumps where bound electrons of one element dominate.
 *
 * With u = log T, l = log R + 5, R = rho/(T/1e6 K)^3, t = l/(1 + (l/5)^2)^(1/2) (log R, limited so that nothing runs
 * away outside the data) and 1/[...] a smooth switch S(u) = 1/(1 + exp(n ln 10 (u_0 + s t - u))):
 *   kappa  = k_es + 1/(1/k_hminus + 1/k_rest),   k_rest = (k_ff + k_bf) S_cut + sum of bumps            [cm^2 g^-1]
 *   k_es   = [0.4 X S_H + 0.2 (1 - X) S_He] / {[1 + 2.7e11 rho/T^2] [1 + (T/T_C)^a]}
 *            shape of Paczynski 1983, ApJ 267, 315 (from memory); fully ionised it is 0.2 (1 + X)
 *   k_ff   = (1 + X) 10^c (R/1e-3)^p (T/1e6 K)^q
 *   k_bf   = 10^c 4.34e25 (1 + X) 0.02 (Z'/0.02)^z (Kramers' rho T^-3.5 with fitted powers), Z' = Z + cno
 *   k_hminus = 10^c 2.5e-31 (z_0 + Z/0.02)(X/0.7 + x_0) rho^0.5 T^9
 *   bump   = 10^(a + p l + p_2 t^2 + p_3 t^3) (element)^q ((1 + X)/1.7)^r exp(-((u - u_b - s t)/w)^2),
 *            1/w = (1/w_0)(1 + b t/5), w_0 and b different on the two sides of the peak.
 * Powers of R below one are no accident: the Rosseland mean of scattering plus absorption exceeds the sum of the two
 * means, and the fit of a sum takes that up. Each element's bumps follow its own mass fraction: hydrogen X, helium Y,
 * iron Z alone, deep Z'. Coefficients: kramers.def. Nothing here can fail; the caller checks the domain.
 */
#include "opacity/kramers.h"

#include "luxgale/constants.h"
#include "opacity/fast_exp.h"

#include <math.h>

static const double limit = 5.0;                        /* dex of R over which t follows l */
static const double ln_degenerate = 26.321687795944786; /* ln 2.7e11 */
static const double pivot = 2.0;                        /* l at R = 1e-3, where the power laws are anchored */

const struct kramers_coefficients lxg_opacity_kramers_calibrated = {
    .scalar =
        {
#define KRAMERS_SCALAR(name, value, lowest, highest, meaning) value,
#include "opacity/kramers.def"
        },
    .bump =
        {
#define KRAMERS_BUMP(name, source, ...) {__VA_ARGS__},
#include "opacity/kramers.def"
        },
};

static const enum lxg_opacity_source bump_source[KRAMERS_BUMPS] = {
#define KRAMERS_BUMP(name, source, ...) LXG_OPACITY_SOURCE_##source,
#include "opacity/kramers.def"
};

/* ---- composition ---- */

/* Mass fraction that carries a bump, in units of the mixture at which heights are quoted. */
static double element(enum lxg_opacity_source source, const struct lxg_composition *composition) {
  switch (source) {
  case LXG_OPACITY_SOURCE_HYDROGEN:
    return composition->hydrogen / 0.7;
  case LXG_OPACITY_SOURCE_HELIUM:
    return composition->helium / 0.28;
  case LXG_OPACITY_SOURCE_IRON:
    return composition->metals / 0.02;
  default:
    return (composition->metals + composition->cno) / 0.02;
  }
}

static void init_peaks(struct kramers_law *law, const struct kramers_coefficients *coefficients,
                       const struct lxg_composition *composition, unsigned omit) {
  law->peaks = 0;
  for (size_t i = 0; i < KRAMERS_BUMPS; i++) {
    const double amount = element(bump_source[i], composition);
    if ((omit & LXG_OPACITY_BIT(bump_source[i])) != 0 || !(amount > 0.0)) {
      continue;
    }
    const double *c = coefficients->bump[i];
    law->peak[law->peaks++] = (struct kramers_peak){
        .source = bump_source[i],
        .ln_height = LXG_LN10 * c[KRAMERS_log_peak] + c[KRAMERS_element] * log(amount) +
                     c[KRAMERS_electrons] * log((1.0 + composition->hydrogen) / 1.7),
        .power = LXG_LN10 * c[KRAMERS_power],
        .bend = LXG_LN10 * c[KRAMERS_bend],
        .twist = LXG_LN10 * c[KRAMERS_twist],
        .log_t = c[KRAMERS_log_t],
        .shift = c[KRAMERS_shift],
        .inverse = {c[KRAMERS_cool], c[KRAMERS_hot]},
        .trend = {c[KRAMERS_cool] * c[KRAMERS_cool_trend] / limit,
                  c[KRAMERS_hot] * c[KRAMERS_hot_trend] / limit},
    };
  }
}

static struct kramers_power power_law(double ln_scale, double by_r, double by_log_t) {
  return (struct kramers_power){
      .ln_scale = ln_scale - by_r * LXG_LN10 * pivot - by_log_t * LXG_OPACITY_LN_T6,
      .by_r = by_r * LXG_LN10,
      .by_t = by_log_t * LXG_LN10,
  };
}

static bool kept(unsigned omit, enum lxg_opacity_source source) {
  return (omit & LXG_OPACITY_BIT(source)) == 0;
}

void lxg_opacity_kramers_init(struct kramers_law *law, const struct kramers_coefficients *coefficients,
                              const struct lxg_composition *composition, unsigned omit) {
  const double *c = coefficients->scalar;
  const double x = composition->hydrogen;
  const double heavy = (composition->metals + composition->cno) / 0.02;
  const double scattering = kept(omit, LXG_OPACITY_SOURCE_SCATTERING) ? 1.0 : 0.0;
  law->hydrogen_electrons = scattering * 0.4 * x;
  law->other_electrons = scattering * 0.2 * (1.0 - x);
  law->compton_log_t = c[KRAMERS_es_log_t];
  law->compton_power = LXG_LN10 * c[KRAMERS_es_power];
  law->hydrogen = (struct kramers_switch){c[KRAMERS_h_ion_log_t], c[KRAMERS_h_ion_shift],
                                          LXG_LN10 * c[KRAMERS_h_ion_power]};
  law->helium = (struct kramers_switch){c[KRAMERS_he_ion_log_t], c[KRAMERS_he_ion_shift],
                                        LXG_LN10 * c[KRAMERS_he_ion_power]};
  law->cool =
      (struct kramers_switch){c[KRAMERS_cut_log_t], c[KRAMERS_cut_shift], LXG_LN10 * c[KRAMERS_cut_power]};
  law->free_free =
      power_law(LXG_LN10 * c[KRAMERS_ff_scale] + log(1.0 + x), c[KRAMERS_ff_power], c[KRAMERS_ff_tilt]);
  law->free_free_weight = kept(omit, LXG_OPACITY_SOURCE_FREE_FREE) ? 1.0 : 0.0;
  /* 4.34e25 rho T^-3.5 = 43.4 at R = 1e-3 g cm^-3 per (1e6 K)^3 and T = 1e6 K */
  law->bound_free_weight = kept(omit, LXG_OPACITY_SOURCE_BOUND_FREE) && heavy > 0.0 ? 1.0 : 0.0;
  const double metals = law->bound_free_weight > 0.0 ? c[KRAMERS_bf_metals] * log(heavy) : 0.0;
  law->bound_free = power_law(LXG_LN10 * c[KRAMERS_bf_scale] + log(43.4 * 0.02 * (1.0 + x)) + metals,
                              c[KRAMERS_bf_power], -0.5 - c[KRAMERS_bf_tilt]);
  law->ln_h_minus = LXG_LN10 * c[KRAMERS_h_minus_scale] + log(2.5e-31) +
                    log(c[KRAMERS_h_minus_metals] + composition->metals / 0.02) +
                    log(x / 0.7 + c[KRAMERS_h_minus_floor]);
  law->in_series = kept(omit, LXG_OPACITY_SOURCE_H_MINUS);
  init_peaks(law, coefficients, composition, omit);
}

/* ---- one point ---- */

/* The point in the variables of the formula. */
struct place {
  double u, l; /* log T, log R + 5 */
  double t;    /* limited l */
  double dt;   /* dt/dl */
};

static inline struct place place_of(double ln_rho, double ln_t) {
  struct place at;
  at.u = ln_t * (1.0 / LXG_LN10);
  at.l = opacity_ln_r(ln_rho, ln_t) * (1.0 / LXG_LN10) + 5.0;
  const double shrink = 1.0 / sqrt(1.0 + at.l * at.l * (1.0 / (limit * limit)));
  at.t = at.l * shrink;
  at.dt = shrink * shrink * shrink;
  return at;
}

/* A term from its value and the derivatives of its logarithm with respect to u and l [per dex]. */
static inline struct opacity_sum term(double kappa, double by_u, double by_l) {
  const double per_dex = kappa * (1.0 / LXG_LN10);
  return (struct opacity_sum){kappa, per_dex * by_l, per_dex * (by_u - 3.0 * by_l)};
}

static inline void accumulate(struct opacity_sum *sum, struct opacity_sum more) {
  sum->kappa += more.kappa;
  sum->by_lnrho += more.by_lnrho;
  sum->by_lnt += more.by_lnt;
}

/* Value S and slopes of ln S per dex. */
struct switched {
  double value, by_u, by_l;
};

static inline struct switched switch_at(const struct kramers_switch *s, const struct place *at) {
  const double w = lxg_fast_exp(s->steepness * (s->log_t + s->shift * at->t - at->u));
  const double value = 1.0 / (1.0 + w);
  const double slope = s->steepness * w * value;
  return (struct switched){value, slope, -slope * s->shift * at->dt};
}

/* Scattering on free electrons, with the declines at high T and high density. */
static inline struct opacity_sum scattering(const struct kramers_law *law, const struct place *at,
                                            double ln_rho, double ln_t) {
  const struct switched h = switch_at(&law->hydrogen, at);
  const struct switched he = switch_at(&law->helium, at);
  const double from_h = law->hydrogen_electrons * h.value;
  const double from_he = law->other_electrons * he.value;
  const double compton = lxg_fast_exp(law->compton_power * (at->u - law->compton_log_t));
  const double degenerate = lxg_fast_exp(ln_degenerate + ln_rho - 2.0 * ln_t);
  const double c = 1.0 / (1.0 + compton);
  const double d = 1.0 / (1.0 + degenerate);
  const double electrons = from_h + from_he;
  struct opacity_sum sum = term(from_h, h.by_u, h.by_l);
  accumulate(&sum, term(from_he, he.by_u, he.by_l));
  const double factor = c * d;
  const double lost = degenerate * d; /* -d ln/d ln rho of the density factor */
  sum.kappa = electrons * factor;
  sum.by_lnrho = factor * (sum.by_lnrho - electrons * lost);
  sum.by_lnt = factor * (sum.by_lnt + electrons * (2.0 * lost - law->compton_power / LXG_LN10 * compton * c));
  return sum;
}

static inline struct opacity_sum power_at(const struct kramers_power *power, double weight,
                                          const struct switched *cool, const struct place *at) {
  const double kappa =
      weight * cool->value * lxg_fast_exp(power->ln_scale + power->by_r * at->l + power->by_t * at->u);
  return term(kappa, power->by_t + cool->by_u, power->by_r + cool->by_l);
}

static inline struct opacity_sum peak_at(const struct kramers_peak *peak, const struct place *at) {
  const double distance = at->u - (peak->log_t + peak->shift * at->t);
  const int side = distance > 0.0;
  const double inverse = peak->inverse[side] + peak->trend[side] * at->t;
  const double offset = distance * inverse;
  const double exponent = peak->ln_height + peak->power * at->l +
                          at->t * at->t * (peak->bend + peak->twist * at->t) - offset * offset;
  if (exponent < -LXG_FAST_EXP_LIMIT) {
    return (struct opacity_sum){0.0, 0.0, 0.0}; /* far below the smallest opacity any other term leaves */
  }
  const double by_t = at->t * (2.0 * peak->bend + 3.0 * peak->twist * at->t) -
                      2.0 * offset * (distance * peak->trend[side] - inverse * peak->shift);
  return term(lxg_fast_exp(exponent), -2.0 * offset * inverse, peak->power + by_t * at->dt);
}

/* 2.5e-31-like factor times rho^0.5 T^9 */
static inline double h_minus_at(const struct kramers_law *law, double ln_rho, double ln_t) {
  return lxg_fast_exp(law->ln_h_minus + 0.5 * ln_rho + 9.0 * ln_t);
}

struct opacity_sum lxg_opacity_kramers_at(const struct kramers_law *law, double ln_rho, double ln_t) {
  const struct place at = place_of(ln_rho, ln_t);
  const struct switched cool = switch_at(&law->cool, &at);
  struct opacity_sum rest = power_at(&law->free_free, law->free_free_weight, &cool, &at);
  accumulate(&rest, power_at(&law->bound_free, law->bound_free_weight, &cool, &at));
  for (size_t i = 0; i < law->peaks; i++) {
    accumulate(&rest, peak_at(&law->peak[i], &at));
  }
  if (law->in_series) {
    /* 1/kappa = 1/h + 1/rest: each part of the resistance weighs its own slope. */
    const double h = h_minus_at(law, ln_rho, ln_t);
    const double both = 1.0 / (h + rest.kappa);
    const double pass = h * both;
    const double block = rest.kappa * both;
    rest.kappa *= pass;
    rest.by_lnrho = pass * pass * rest.by_lnrho + block * block * 0.5 * h;
    rest.by_lnt = pass * pass * rest.by_lnt + block * block * 9.0 * h;
  }
  accumulate(&rest, scattering(law, &at, ln_rho, ln_t));
  return rest;
}

void lxg_opacity_kramers_shares(const struct kramers_law *law, double ln_rho, double ln_t,
                                double share[LXG_OPACITY_SOURCES]) {
  const struct place at = place_of(ln_rho, ln_t);
  const struct switched cool = switch_at(&law->cool, &at);
  for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
    share[i] = 0.0;
  }
  share[LXG_OPACITY_SOURCE_FREE_FREE] = power_at(&law->free_free, law->free_free_weight, &cool, &at).kappa;
  share[LXG_OPACITY_SOURCE_BOUND_FREE] = power_at(&law->bound_free, law->bound_free_weight, &cool, &at).kappa;
  for (size_t i = 0; i < law->peaks; i++) {
    share[law->peak[i].source] += peak_at(&law->peak[i], &at).kappa;
  }
  double rest = 0.0;
  for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
    rest += share[i];
  }
  double pass = 1.0;
  if (law->in_series) {
    const double h = h_minus_at(law, ln_rho, ln_t);
    pass = h / (h + rest);
  }
  const double electrons = scattering(law, &at, ln_rho, ln_t).kappa;
  const double kappa = electrons + pass * rest;
  /* d ln kappa/d ln k_i: a term in series with another acts through the square of what it lets pass. */
  for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
    share[i] *= pass * pass / kappa;
  }
  share[LXG_OPACITY_SOURCE_H_MINUS] = pass * (1.0 - pass) * rest / kappa;
  share[LXG_OPACITY_SOURCE_SCATTERING] = electrons / kappa;
}
