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

enum {
  KRAMERS_FREE_FREE, /* lanes of the terms that add up: the two power laws, then the bumps */
  KRAMERS_BOUND_FREE,
  KRAMERS_FIRST_BUMP,
  KRAMERS_TERMS = KRAMERS_FIRST_BUMP + KRAMERS_BUMPS
};

enum {
  KRAMERS_COMPTON, /* lanes of the exponentials in factors */
  KRAMERS_DEGENERATE,
  KRAMERS_HYDROGEN_SWITCH,
  KRAMERS_HELIUM_SWITCH,
  KRAMERS_COOL_SWITCH,
  KRAMERS_H_MINUS,
  KRAMERS_FACTORS = 8 /* two spare */
};

/* The formula for one composition. Term i is
 *   exp(constant + by_u u + by_l l + bend t^2 + twist t^3 - ((u - log_t - shift t) (inverse + trend t))^2) [cm^2 g^-1],
 * inverse and trend of the side of the peak; the power laws have inverse = trend = 0 and are switched off when cool.
 * Factor i is exp(constant + by_u u + by_l l + by_t t). u = log T, l = log R + 5, t the limited l. */
struct kramers_law {
  double hydrogen_electrons; /* 0.4 X [cm^2 g^-1]; 0 if scattering is omitted */
  double other_electrons;    /* 0.2 (1 - X) [cm^2 g^-1] */
  bool in_series;            /* false if h_minus is omitted */
  double cold_ratio;         /* textbook H-minus over the H-minus that limits */
  double cold_per_cap;       /* the same over the cap [g cm^-2] */
  bool present[KRAMERS_TERMS];
  double constant[KRAMERS_TERMS], by_u[KRAMERS_TERMS], by_l[KRAMERS_TERMS];
  double bend[KRAMERS_TERMS], twist[KRAMERS_TERMS];
  double log_t[KRAMERS_TERMS], shift[KRAMERS_TERMS];
  double inverse_middle[KRAMERS_TERMS], inverse_half[KRAMERS_TERMS];
  double trend_middle[KRAMERS_TERMS], trend_half[KRAMERS_TERMS];
  double factor_constant[KRAMERS_FACTORS], factor_by_u[KRAMERS_FACTORS], factor_by_l[KRAMERS_FACTORS],
      factor_by_t[KRAMERS_FACTORS];
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
