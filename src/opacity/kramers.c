/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * kramers.c - the built-in opacity formula: textbook laws plus bumps where bound electrons of one element dominate.
 *
 * With u = log T, l = log R + 5, R = rho/(T/1e6 K)^3, t = l/(1 + (l/5)^2)^(1/2) (log R, limited so that nothing runs
 * away outside the data) and 1/[...] a smooth switch S(u) = 1/(1 + exp(n ln 10 (u_0 + s t - u))):
 *   kappa  = k_es + k_cold + 1/(1/k_hminus + 1/k_rest),   k_rest = (k_ff + k_bf) S_cut + sum of bumps   [cm^2 g^-1]
 *   k_es   = [0.4 X S_H + 0.2 (1 - X) S_He] / {[1 + 2.7e11 rho/T^2] [1 + (T/T_C)^a]}
 *            shape of Paczynski 1983, ApJ 267, 315 (from memory); fully ionised it is 0.2 (1 + X)
 *   k_ff   = (1 + X) 10^c (R/1e-3)^p (T/1e6 K)^q
 *   k_bf   = 10^c 4.34e25 (1 + X) 0.02 (Z'/0.02)^z (Kramers' rho T^-3.5 with fitted powers), Z' = Z + cno
 *   k_hminus = 10^c 2.5e-31 (z_0 + Z/0.02)(X/0.7 + x_0) rho^0.5 T^9
 *            limits the other sources where hydrogen turns neutral (in series, log T < 4)
 *   k_cold = k_0/(1 + (k_0/cap)^2), k_0 = 2.5e-31 (Z/0.02)(X/0.7) rho^0.5 T^9: the textbook law (from memory) below 4500 K
 *   bump   = 10^(a + p l + p_2 t^2 + p_3 t^3) (element)^q ((1 + X)/1.7)^r exp(-((u - u_b - s t)/w)^2),
  *            1/w = (1/w_0)(1 + b t/5), w_0 and b different on the two sides of the peak: with d the distance from it,
 *            the value turns from the cool to the hot one as d/(|d| + 0.05), so that the law has three continuous
 *            derivatives and a solver's mesh need not look for its peaks.
 * Powers of R below one are no accident: the Rosseland mean of scattering plus absorption exceeds the sum of the two
 * means, and the fit of a sum takes that up. Each element's bumps follow its own mass fraction: hydrogen X, helium Y,
 * iron Z alone, deep Z'. Coefficients: kramers.def. Nothing here can fail; the caller checks the domain.
 */
/* Fused multiply-add where the processor has it; see lanes.h. */
#if defined(__GNUC__) && !defined(__clang__)
#pragma GCC optimize("fp-contract=fast")
#else
#pragma STDC FP_CONTRACT ON
#endif

#include "opacity/kramers.h"

#include "luxgale/constants.h"
#include "opacity/lanes.h"

#include <math.h>

_Static_assert(KRAMERS_TERMS % LANES == 0, "terms fill whole lanes");

static const double limit = 5.0; /* dex of R over which t follows l */
static const double turn =
    0.05; /* dex of T over which the width of a bump turns from its cool to its hot value */
static const double pivot = 2.0; /* l at R = 1e-3, where the power laws are anchored */

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

static const double absent = -1e4; /* logarithm of nothing */

static void init_bumps(struct kramers_law *law, const struct kramers_coefficients *coefficients,
                       const struct lxg_composition *composition, unsigned omit) {
  for (size_t b = 0; b < KRAMERS_BUMPS; b++) {
    const double amount = element(bump_source[b], composition);
    const double *c = coefficients->bump[b];
    const size_t i = KRAMERS_FIRST_BUMP + b;
    law->present[i] = (omit & LXG_OPACITY_BIT(bump_source[b])) == 0 && amount > 0.0;
    law->constant[i] = law->present[i] ? LXG_LN10 * c[KRAMERS_log_peak] + c[KRAMERS_element] * log(amount) +
                                             c[KRAMERS_electrons] * log((1.0 + composition->hydrogen) / 1.7)
                                       : absent;
    law->by_l[i] = LXG_LN10 * c[KRAMERS_power];
    law->bend[i] = LXG_LN10 * c[KRAMERS_bend];
    law->twist[i] = LXG_LN10 * c[KRAMERS_twist];
    law->log_t[i] = c[KRAMERS_log_t];
    law->shift[i] = c[KRAMERS_shift];
    const double cool_trend = c[KRAMERS_cool] * c[KRAMERS_cool_trend] / limit;
    const double hot_trend = c[KRAMERS_hot] * c[KRAMERS_hot_trend] / limit;
    law->inverse_middle[i] = 0.5 * (c[KRAMERS_hot] + c[KRAMERS_cool]);
    law->inverse_half[i] = 0.5 * (c[KRAMERS_hot] - c[KRAMERS_cool]);
    law->trend_middle[i] = 0.5 * (hot_trend + cool_trend);
    law->trend_half[i] = 0.5 * (hot_trend - cool_trend);
  }
}

/* scale (R/1e-3)^by_r (T/1e6 K)^by_t; the rest of the term stays zero. */
static void init_power(struct kramers_law *law, size_t i, bool present, double ln_scale, double by_r,
                       double by_t) {
  law->present[i] = present;
  law->constant[i] = present ? ln_scale - LXG_LN10 * pivot * by_r - LXG_OPACITY_LN_T6 * by_t : absent;
  law->by_l[i] = LXG_LN10 * by_r;
  law->by_u[i] = LXG_LN10 * by_t;
}

/* exp(steepness ln 10 (log_t + shift t - u)) */
static void init_switch(struct kramers_law *law, size_t i, double log_t, double shift, double steepness) {
  law->factor_constant[i] = LXG_LN10 * steepness * log_t;
  law->factor_by_t[i] = LXG_LN10 * steepness * shift;
  law->factor_by_u[i] = -LXG_LN10 * steepness;
}

static void init_factors(struct kramers_law *law, const double *c, double hydrogen, double metals) {
  law->factor_constant[KRAMERS_COMPTON] = -LXG_LN10 * c[KRAMERS_es_power] * c[KRAMERS_es_log_t];
  law->factor_by_u[KRAMERS_COMPTON] = LXG_LN10 * c[KRAMERS_es_power];
  /* log rho = l - 5 + 3 (u - 6) = l + 3 u - 23, so 2.7e11 rho/T^2 goes as l + u */
  law->factor_constant[KRAMERS_DEGENERATE] = log(2.7e11) - 23.0 * LXG_LN10;
  law->factor_by_u[KRAMERS_DEGENERATE] = LXG_LN10;
  law->factor_by_l[KRAMERS_DEGENERATE] = LXG_LN10;
  init_switch(law, KRAMERS_HYDROGEN_SWITCH, c[KRAMERS_h_ion_log_t], c[KRAMERS_h_ion_shift],
              c[KRAMERS_h_ion_power]);
  init_switch(law, KRAMERS_HELIUM_SWITCH, c[KRAMERS_he_ion_log_t], c[KRAMERS_he_ion_shift],
              c[KRAMERS_he_ion_power]);
  init_switch(law, KRAMERS_COOL_SWITCH, c[KRAMERS_cut_log_t], c[KRAMERS_cut_shift], c[KRAMERS_cut_power]);
  law->factor_constant[KRAMERS_H_MINUS] = LXG_LN10 * (c[KRAMERS_h_minus_scale] - 11.5) + log(2.5e-31) +
                                          log(c[KRAMERS_h_minus_metals] + metals / 0.02) +
                                          log(hydrogen / 0.7 + c[KRAMERS_h_minus_floor]);
  const double limiting = pow(10.0, c[KRAMERS_h_minus_scale]) * (c[KRAMERS_h_minus_metals] + metals / 0.02) *
                          (hydrogen / 0.7 + c[KRAMERS_h_minus_floor]);
  law->cold_ratio = metals / 0.02 * hydrogen / 0.7 / limiting;
  law->cold_per_cap = law->cold_ratio / c[KRAMERS_h_minus_cap];
  law->factor_by_u[KRAMERS_H_MINUS] = 10.5 * LXG_LN10; /* rho^0.5 T^9 */
  law->factor_by_l[KRAMERS_H_MINUS] = 0.5 * LXG_LN10;
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
  *law = (struct kramers_law){
      .hydrogen_electrons = scattering * 0.4 * x,
      .other_electrons = scattering * 0.2 * (1.0 - x),
      .in_series = kept(omit, LXG_OPACITY_SOURCE_H_MINUS),
  };
  init_power(law, KRAMERS_FREE_FREE, kept(omit, LXG_OPACITY_SOURCE_FREE_FREE),
             LXG_LN10 * c[KRAMERS_ff_scale] + log(1.0 + x), c[KRAMERS_ff_power], c[KRAMERS_ff_tilt]);
  /* 4.34e25 rho T^-3.5 = 43.4 at R = 1e-3 g cm^-3 per (1e6 K)^3 and T = 1e6 K */
  const bool bound = kept(omit, LXG_OPACITY_SOURCE_BOUND_FREE) && heavy > 0.0;
  init_power(law, KRAMERS_BOUND_FREE, bound,
             bound ? LXG_LN10 * c[KRAMERS_bf_scale] + log(43.4 * 0.02 * (1.0 + x)) +
                         c[KRAMERS_bf_metals] * log(heavy)
                   : 0.0,
             c[KRAMERS_bf_power], -0.5 - c[KRAMERS_bf_tilt]);
  init_bumps(law, coefficients, composition, omit);
  init_factors(law, c, x, composition->metals);
}

/* ---- one point ---- */

/* The point in the variables of the formula. */
struct place {
  double u, l; /* log T, log R + 5 */
  double t;    /* limited l */
  double dt;   /* dt/dl */
};

LXG_LANES_INLINE struct place place_of(double ln_rho, double ln_t) {
  struct place at;
  at.u = ln_t * (1.0 / LXG_LN10);
  at.l = opacity_ln_r(ln_rho, ln_t) * (1.0 / LXG_LN10) + 5.0;
  const double shrink = 1.0 / sqrt(1.0 + at.l * at.l * (1.0 / (limit * limit)));
  at.t = at.l * shrink;
  at.dt = shrink * shrink * shrink;
  return at;
}

/* The four factors of lanes `first` ... */
LXG_LANES_INLINE void factors_at(const struct kramers_law *law, const struct place *at, size_t first,
                                 double factor[LANES]) {
  lanes constant, by_u, by_l, by_t, value;
  lanes_load(&constant, &law->factor_constant[first]);
  lanes_load(&by_u, &law->factor_by_u[first]);
  lanes_load(&by_l, &law->factor_by_l[first]);
  lanes_load(&by_t, &law->factor_by_t[first]);
  const lanes exponent = constant + by_u * at->u + by_l * at->l + by_t * at->t;
  lanes_exp(&value, &exponent);
  memcpy(factor, &value, sizeof value);
}

/* Value and slopes (per dex, of the logarithm) of the four terms of lanes `first` ..., before switching off. */
LXG_LANES_INLINE void terms_at(const struct kramers_law *law, const struct place *at, size_t first,
                               lanes *kappa, lanes *slope_u, lanes *slope_l) {
  lanes log_t, shift, middle, half, trend_middle, trend_half, constant, by_u, by_l, bend, twist;
  lanes_load(&log_t, &law->log_t[first]);
  lanes_load(&shift, &law->shift[first]);
  const lanes distance = at->u - (log_t + shift * at->t);
  lanes size;
  lanes_magnitude(&size, &distance);
  const lanes reach = 1.0 / (size + turn);
  const lanes side = distance * reach; /* from -1, cool, to 1, hot */
  lanes_load(&middle, &law->inverse_middle[first]);
  lanes_load(&half, &law->inverse_half[first]);
  lanes_load(&trend_middle, &law->trend_middle[first]);
  lanes_load(&trend_half, &law->trend_half[first]);
  const lanes trend = trend_middle + side * trend_half;
  const lanes inverse = middle + side * half + trend * at->t;
  const lanes turning = (half + trend_half * at->t) * (turn * reach * reach);
  const lanes offset = distance * inverse;
  const lanes by_distance = inverse + distance * turning; /* of the offset */
  lanes_load(&constant, &law->constant[first]);
  lanes_load(&by_u, &law->by_u[first]);
  lanes_load(&by_l, &law->by_l[first]);
  lanes_load(&bend, &law->bend[first]);
  lanes_load(&twist, &law->twist[first]);
  const lanes bent = bend + twist * at->t;
  const lanes exponent = constant + by_u * at->u + by_l * at->l + (at->t * at->t) * bent - offset * offset;
  lanes_exp_floored(kappa, &exponent);
  const lanes by_t =
      at->t * (2.0 * bent + at->t * twist) - 2.0 * offset * (distance * trend - by_distance * shift);
  *slope_u = by_u - 2.0 * offset * by_distance;
  *slope_l = by_l + by_t * at->dt;
}

/* Derivatives per dex of u and l to those of ln rho and ln T. */
LXG_LANES_INLINE struct opacity_sum per_dex(double kappa, double by_u, double by_l) {
  return (struct opacity_sum){kappa, by_l * (1.0 / LXG_LN10), (by_u - 3.0 * by_l) * (1.0 / LXG_LN10)};
}

/* Scattering on free electrons, with the declines at high T and high density. */
LXG_LANES_INLINE struct opacity_sum scattering_at(const struct kramers_law *law, const struct place *at,
                                                  const double factor[LANES]) {
  lanes f;
  lanes_load(&f, factor);
  const lanes left = 1.0 / (1.0 + f); /* what each of the four factors leaves */
  const lanes lost = f * left;
  const double reduced = left[KRAMERS_COMPTON] * left[KRAMERS_DEGENERATE];
  const double from_h = law->hydrogen_electrons * reduced * left[KRAMERS_HYDROGEN_SWITCH];
  const double from_he = law->other_electrons * reduced * left[KRAMERS_HELIUM_SWITCH];
  const double h = from_h * lost[KRAMERS_HYDROGEN_SWITCH], he = from_he * lost[KRAMERS_HELIUM_SWITCH];
  const double kappa = from_h + from_he;
  const double recoil = law->factor_by_u[KRAMERS_COMPTON] * lost[KRAMERS_COMPTON];
  const double crowded = LXG_LN10 * lost[KRAMERS_DEGENERATE];
  const double by_u = -(law->factor_by_u[KRAMERS_HYDROGEN_SWITCH] * h +
                        law->factor_by_u[KRAMERS_HELIUM_SWITCH] * he + kappa * (recoil + crowded));
  const double by_l = -(at->dt * (law->factor_by_t[KRAMERS_HYDROGEN_SWITCH] * h +
                                  law->factor_by_t[KRAMERS_HELIUM_SWITCH] * he) +
                        kappa * crowded);
  return per_dex(kappa, by_u, by_l);
}

/* kappa of k_rest and its slopes: all terms, the power laws switched off when cool. */
LXG_LANES_INLINE struct opacity_sum rest_at(const struct kramers_law *law, const struct place *at,
                                            double cool) {
  const double on = 1.0 / (1.0 + cool);
  const double off_u = -law->factor_by_u[KRAMERS_COOL_SWITCH] * cool * on;
  const double off_l = -law->factor_by_t[KRAMERS_COOL_SWITCH] * at->dt * cool * on;
  const lanes fade = {on, on, 1.0, 1.0}, fade_u = {off_u, off_u, 0.0, 0.0}, fade_l = {off_l, off_l, 0.0, 0.0};
  lanes kappa, slope_u, slope_l;
  terms_at(law, at, 0, &kappa, &slope_u, &slope_l);
  kappa *= fade;
  lanes by_u = kappa * (slope_u + fade_u);
  lanes by_l = kappa * (slope_l + fade_l);
  lanes total = kappa;
  for (size_t first = LANES; first < KRAMERS_TERMS; first += LANES) {
    terms_at(law, at, first, &kappa, &slope_u, &slope_l);
    total += kappa;
    by_u += kappa * slope_u;
    by_l += kappa * slope_l;
  }
  return per_dex(lanes_sum(&total), lanes_sum(&by_u), lanes_sum(&by_l));
}

/* Puts H-minus of strength h in series with the rest and adds what it gives to cool gas. */
LXG_LANES_INLINE void add_h_minus(const struct kramers_law *law, double h, struct opacity_sum *rest) {
  /* 1/kappa = 1/h + 1/rest: each part of the resistance weighs its own slope. */
  const double both = 1.0 / (h + rest->kappa);
  const double pass = h * both;
  const double block = rest->kappa * both;
  const double q2 = (law->cold_per_cap * h) * (law->cold_per_cap * h);
  const double shrink = 1.0 / (1.0 + q2);
  const double cold = law->cold_ratio * h * shrink;
  const double by_h = block * block * h + cold * (1.0 - q2) * shrink; /* d kappa/d ln h */
  rest->kappa = rest->kappa * pass + cold;
  rest->by_lnrho = pass * pass * rest->by_lnrho + 0.5 * by_h;
  rest->by_lnt = pass * pass * rest->by_lnt + 9.0 * by_h;
}

LXG_LANES_TARGETS struct opacity_sum lxg_opacity_kramers_at(const struct kramers_law *law, double ln_rho,
                                                            double ln_t) {
  const struct place at = place_of(ln_rho, ln_t);
  double factor[KRAMERS_FACTORS];
  factors_at(law, &at, 0, factor);
  factors_at(law, &at, LANES, factor + LANES);
  struct opacity_sum rest = rest_at(law, &at, factor[KRAMERS_COOL_SWITCH]);
  if (law->in_series) {
    add_h_minus(law, factor[KRAMERS_H_MINUS], &rest);
  }
  const struct opacity_sum electrons = scattering_at(law, &at, factor);
  rest.kappa += electrons.kappa;
  rest.by_lnrho += electrons.by_lnrho;
  rest.by_lnt += electrons.by_lnt;
  return rest;
}

void lxg_opacity_kramers_shares(const struct kramers_law *law, double ln_rho, double ln_t,
                                double share[LXG_OPACITY_SOURCES]) {
  const struct place at = place_of(ln_rho, ln_t);
  double factor[KRAMERS_FACTORS], term[KRAMERS_TERMS];
  factors_at(law, &at, 0, factor);
  factors_at(law, &at, LANES, factor + LANES);
  for (size_t first = 0; first < KRAMERS_TERMS; first += LANES) {
    lanes kappa, slope_u, slope_l;
    terms_at(law, &at, first, &kappa, &slope_u, &slope_l);
    memcpy(&term[first], &kappa, sizeof kappa);
  }
  for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
    share[i] = 0.0;
  }
  const double on = 1.0 / (1.0 + factor[KRAMERS_COOL_SWITCH]);
  share[LXG_OPACITY_SOURCE_FREE_FREE] = law->present[KRAMERS_FREE_FREE] ? on * term[KRAMERS_FREE_FREE] : 0.0;
  share[LXG_OPACITY_SOURCE_BOUND_FREE] =
      law->present[KRAMERS_BOUND_FREE] ? on * term[KRAMERS_BOUND_FREE] : 0.0;
  for (size_t b = 0; b < KRAMERS_BUMPS; b++) {
    if (law->present[KRAMERS_FIRST_BUMP + b]) {
      share[bump_source[b]] += term[KRAMERS_FIRST_BUMP + b];
    }
  }
  double rest = 0.0;
  for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
    rest += share[i];
  }
  const double h = factor[KRAMERS_H_MINUS];
  const double pass = law->in_series ? h / (h + rest) : 1.0;
  const double q = law->cold_per_cap * h;
  const double cold = law->in_series ? law->cold_ratio * h / (1.0 + q * q) : 0.0;
  const double electrons = scattering_at(law, &at, factor).kappa;
  const double kappa = electrons + cold + pass * rest;
  /* d ln kappa/d ln k_i: a term in series with another acts through the square of what it lets pass. */
  for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
    share[i] *= pass * pass / kappa;
  }
  share[LXG_OPACITY_SOURCE_H_MINUS] = (pass * (1.0 - pass) * rest + cold) / kappa;
  share[LXG_OPACITY_SOURCE_SCATTERING] = electrons / kappa;
}
