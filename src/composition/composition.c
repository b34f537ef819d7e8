/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * composition.c - mean weights of a fully ionised mixture (see composition.h).
 */
#include "luxgale/composition.h"

#include <math.h>

enum lxg_status lxg_composition_check(const struct lxg_composition *composition, struct lxg_error *error) {
  const struct {
    const char *name;
    double value;
  } fraction[] = {{"hydrogen", composition->hydrogen},
                  {"helium", composition->helium},
                  {"cno", composition->cno},
                  {"metals", composition->metals}};
  double sum = 0.0;
  for (size_t i = 0; i < sizeof fraction / sizeof fraction[0]; i++) {
    if (!(fraction[i].value >= 0.0 && fraction[i].value <= 1.0)) {
      return lxg_error_set(error, LXG_INPUT, "composition-range",
                           "%s = %.10g: a mass fraction lies between 0 and 1", fraction[i].name,
                           fraction[i].value);
    }
    sum += fraction[i].value;
  }
  if (!(fabs(sum - 1.0) <= pow(10.0, -LXG_COMPOSITION_SUM_DIGITS))) {
    return lxg_error_set(error, LXG_INPUT, "composition-sum",
                         "hydrogen + helium + cno + metals = %.10g: mass fractions sum to 1 within 1e-%d",
                         sum, LXG_COMPOSITION_SUM_DIGITS);
  }
  return LXG_OK;
}

double lxg_composition_mu(const struct lxg_composition *composition) {
  return 1.0 / (2.0 * composition->hydrogen + 0.75 * composition->helium +
                0.5 * (composition->cno + composition->metals));
}

double lxg_composition_kappa_e(const struct lxg_composition *composition) {
  return 0.2 * (1.0 + composition->hydrogen);
}
