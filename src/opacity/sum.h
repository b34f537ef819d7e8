/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * sum.h - a term of the opacity with its derivatives, and the variable R.
 *
 * Derivatives of kappa itself, not of its logarithm: terms that add up are easier to sum that way.
 */
#ifndef LUXGALE_OPACITY_SUM_H
#define LUXGALE_OPACITY_SUM_H

#define LXG_OPACITY_LN_T6 13.815510557964274 /* ln 1e6, the temperature unit of R = rho/(T/1e6 K)^3 */

/* A sum of terms and its derivatives, all [cm^2 g^-1]. */
struct opacity_sum {
  double kappa;
  double by_lnrho; /* d kappa / d ln rho at constant T */
  double by_lnt;   /* d kappa / d ln T at constant rho */
};

/* Adds a term given by its value and its logarithmic slopes. */
static inline void opacity_sum_add(struct opacity_sum *sum, double kappa, double dlnk_dlnrho,
                                   double dlnk_dlnt) {
  sum->kappa += kappa;
  sum->by_lnrho += kappa * dlnk_dlnrho;
  sum->by_lnt += kappa * dlnk_dlnt;
}

/* ln R of ln rho [g cm^-3] and ln T [K] */
static inline double opacity_ln_r(double ln_rho, double ln_t) {
  return ln_rho - 3.0 * (ln_t - LXG_OPACITY_LN_T6);
}

#endif
