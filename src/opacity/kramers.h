/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * kramers.h - the built-in formula: its coefficients, and the law they make for one composition.
 *
 * Kept apart from the public header so that the calibration program can vary the coefficients.
 */
#ifndef LUXGALE_OPACITY_KRAMERS_H
#define LUXGALE_OPACITY_KRAMERS_H

#include "luxgale/composition.h"
#include "luxgale/opacity.h"
#include "opacity/sum.h"

enum kramers_scalar {
#define KRAMERS_SCALAR(name, value, lowest, highest, meaning) KRAMERS_##name,
#include "opacity/kramers.def"
  KRAMERS_SCALARS
};

enum kramers_field {
#define KRAMERS_FIELD(name, lowest, highest, meaning) KRAMERS_##name,
#include "opacity/kramers.def"
  KRAMERS_FIELDS
};

enum kramers_bump {
#define KRAMERS_BUMP(name, source, ...) KRAMERS_BUMP_##name,
#include "opacity/kramers.def"
  KRAMERS_BUMPS
};

/* Units and meaning of each number: kramers.def. */
struct kramers_coefficients {
  double scalar[KRAMERS_SCALARS];
  double bump[KRAMERS_BUMPS][KRAMERS_FIELDS];
};

extern const struct kramers_coefficients lxg_opacity_kramers_calibrated;

/* exp(ln_scale + by_r l + by_t u), l = log R + 5, u = log T */
struct kramers_power {
  double ln_scale; /* ln of [cm^2 g^-1] */
  double by_r;     /* per dex */
  double by_t;     /* per dex */
};

/* 1/(1 + exp(steepness (log_t + shift t - u))), t the limited log R: 0 when cool, 1 when hot */
struct kramers_switch {
  double log_t;     /* log T of the middle at R = 1e-5 */
  double shift;     /* per dex */
  double steepness; /* per dex */
};

/* One bump with its composition worked in. */
struct kramers_peak {
  enum lxg_opacity_source source;
  double ln_height;          /* ln of [cm^2 g^-1] */
  double power, bend, twist; /* of l, t^2, t^3, times ln 10 */
  double log_t, shift;       /* position and its change with t */
  double inverse[2];         /* 1/width per dex: cool side, hot side */
  double trend[2];           /* change of 1/width per dex of t */
};

/* The formula for one composition. Sources that are omitted or absent from the gas have weight or count zero. */
struct kramers_law {
  double hydrogen_electrons; /* 0.4 X [cm^2 g^-1] */
  double other_electrons;    /* 0.2 (1 - X) [cm^2 g^-1] */
  double compton_log_t, compton_power;
  struct kramers_switch hydrogen, helium, cool;
  struct kramers_power free_free, bound_free;
  double free_free_weight, bound_free_weight; /* 1, or 0 if omitted or absent */
  double ln_h_minus;                          /* ln of the factor of rho^0.5 T^9 */
  bool in_series;                             /* false if h_minus is omitted */
  size_t peaks;
  struct kramers_peak peak[KRAMERS_BUMPS];
};

/* `omit` has the bits LXG_OPACITY_BIT(source). */
void lxg_opacity_kramers_init(struct kramers_law *law, const struct kramers_coefficients *coefficients,
                              const struct lxg_composition *composition, unsigned omit);

/* kappa and its derivatives; the caller keeps the arguments within the domain of opacity.h. */
struct opacity_sum lxg_opacity_kramers_at(const struct kramers_law *law, double ln_rho, double ln_t);

/* The share of each source, d ln kappa/d ln k_source; they sum to 1. */
void lxg_opacity_kramers_shares(const struct kramers_law *law, double ln_rho, double ln_t,
                                double share[LXG_OPACITY_SOURCES]);

#endif
