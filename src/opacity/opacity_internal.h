/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * opacity_internal.h - what the files of src/opacity share: the laws behind one opaque opacity.
 *
 * Every law answers with a `lxg_opacity_sum`: kappa and its derivatives with respect to ln rho and ln T, all three in
 * cm^2 g^-1, because terms that add up are easier to sum than logarithmic slopes.
 */
#ifndef LUXGALE_OPACITY_INTERNAL_H
#define LUXGALE_OPACITY_INTERNAL_H

#include "luxgale/constants.h"
#include "luxgale/opacity.h"

#define LXG_OPACITY_LN_T6 13.815510557964274 /* ln 1e6, the temperature unit of R = rho/(T/1e6 K)^3 */

/* A sum of terms and its derivatives, all [cm^2 g^-1]. */
struct lxg_opacity_sum {
  double kappa;
  double by_lnrho; /* d kappa / d ln rho at constant T */
  double by_lnt;   /* d kappa / d ln T at constant rho */
};

static inline void lxg_opacity_sum_add(struct lxg_opacity_sum *sum, double kappa, double dlnk_dlnrho,
                                       double dlnk_dlnt) {
  sum->kappa += kappa;
  sum->by_lnrho += kappa * dlnk_dlnrho;
  sum->by_lnt += kappa * dlnk_dlnt;
}

/* The closed-form test law with its composition worked in. */
struct lxg_opacity_reference_law {
  double scattering;  /* 0.2 (1 + X) [cm^2 g^-1] */
  double kramers;     /* 4.34e25 Z (1 + X) + 3.68e22 (1 - Z)(1 + X), factor of rho T^-3.5 */
  double metal_bump;  /* 2.0 (Z/0.02)^0.65 [cm^2 g^-1] */
  double helium_bump; /* 0.33 Y^0.5 [cm^2 g^-1] */
};

void lxg_opacity_reference_init(struct lxg_opacity_reference_law *law,
                                const struct lxg_composition *composition);
struct lxg_opacity_sum lxg_opacity_reference_at(const struct lxg_opacity_reference_law *law, double ln_rho,
                                                double ln_t);

enum { LXG_OPACITY_BUMPS = 4 };

/* amplitude (R/1e-5)^power exp(-((log T - log_t)/width)^2) with a width on each side of the peak */
struct lxg_opacity_bump {
  double amplitude;  /* [cm^2 g^-1] */
  double power;      /* of R */
  double log_t;      /* log10 T [K] of the peak */
  double width_cool; /* dex, below the peak */
  double width_hot;  /* dex, above it */
};

/* The built-in formula with its composition worked in. */
struct lxg_opacity_kramers_law {
  double scattering; /* 0.2 (1 + X) [cm^2 g^-1] */
  double kramers;    /* factor of rho T^-3.5 */
  double h_minus;    /* factor of rho^0.5 T^9 */
  struct lxg_opacity_bump bump[LXG_OPACITY_BUMPS];
};

void lxg_opacity_kramers_init(struct lxg_opacity_kramers_law *law, const struct lxg_composition *composition);
struct lxg_opacity_sum lxg_opacity_kramers_at(const struct lxg_opacity_kramers_law *law, double ln_rho,
                                              double ln_t);

#endif
