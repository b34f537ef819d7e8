/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * burning.c - CNO energy generation in logarithms (see burning.h for the formula and its source).
 *
 * ln eps = ln e - ln(1 + e/l), and each slope of ln e is multiplied by the share l/(e + l) of the capture branch. Nothing
 * overflows: the ratio e/l enters through its logarithm. Can fail: fuel missing, arguments not finite.
 */
#include "luxgale/burning.h"

#include <math.h>

static const double capture_rate = 8.24e25;   /* [erg g^-1 s^-1 per g cm^-3] */
static const double capture_barrier = 15.231; /* Coulomb barrier of 14N + p at T9 = 1 */
static const double capture_cut_t9 = 0.8;     /* T9 where the high-temperature cut sets in */

double lxg_burning_cno_fraction(const struct lxg_composition *composition) {
  return composition->cno + LXG_BURNING_CNO_OF_METALS * composition->metals;
}

enum lxg_status lxg_burning_init(struct lxg_burning *burning, enum lxg_burning_law law,
                                 const struct lxg_composition *composition, struct lxg_error *error) {
  if (law != LXG_BURNING_NONE && law != LXG_BURNING_CNO) {
    return lxg_error_set(error, LXG_INPUT, "burning-law", "burning law = %d: none or cno", (int)law);
  }
  *burning = (struct lxg_burning){.law = law};
  if (law == LXG_BURNING_NONE) {
    return LXG_OK;
  }
  const double hydrogen = composition->hydrogen;
  const double cno = lxg_burning_cno_fraction(composition);
  if (!(hydrogen > 0.0 && cno > 0.0)) {
    burning->law = LXG_BURNING_NONE;
    return lxg_error_set(error, LXG_INPUT, "burning-fuel",
                         "hydrogen = %.10g, C+N+O = %.10g: burning by the CNO cycle needs both above 0",
                         hydrogen, cno);
  }
  burning->ln_capture = log(capture_rate * hydrogen * cno);
  burning->ln_limit = log(LXG_BURNING_BETA_LIMIT * cno);
  return LXG_OK;
}

enum lxg_status lxg_burning_at(const struct lxg_burning *burning, double ln_rho, double ln_t,
                               struct lxg_burning_value *value) {
  if (!isfinite(ln_rho) || !isfinite(ln_t)) {
    return LXG_DOMAIN;
  }
  if (burning->law == LXG_BURNING_NONE) {
    *value = (struct lxg_burning_value){.eps = 0.0, .ln_eps = -INFINITY};
    return LXG_OK;
  }
  const double ln_t9 = ln_t - 9.0 * log(10.0);
  const double barrier = capture_barrier * exp(-ln_t9 / 3.0);
  const double cut = exp(2.0 * (ln_t9 - log(capture_cut_t9)));
  const double ln_e = burning->ln_capture + ln_rho - 2.0 / 3.0 * ln_t9 - barrier - cut;
  if (!isfinite(ln_e)) {
    return LXG_DOMAIN;
  }
  const double ln_ratio = ln_e - burning->ln_limit; /* ln(e/l) */
  const double ln_one_plus = fmax(ln_ratio, 0.0) + log1p(exp(-fabs(ln_ratio)));
  const double capture_share = 1.0 / (1.0 + exp(ln_ratio)); /* l/(e + l) */
  value->ln_eps = ln_e - ln_one_plus;
  value->eps = exp(value->ln_eps);
  value->dlne_dlnrho = capture_share;
  value->dlne_dlnt = capture_share * (-2.0 / 3.0 + barrier / 3.0 - 2.0 * cut);
  return LXG_OK;
}
