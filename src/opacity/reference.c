/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * reference.c - the closed-form test opacity on which the published check values of the wind equations rest.
 *
 * With log = log10 and R = rho/(T/1e6 K)^3 [g cm^-3], kappa [cm^2 g^-1] is
 *   0.2 (1+X) / (1 + (T/4.5e8)^0.86) / (1 + (1.1e4/T)^12)                       electron scattering
 *   + [4.34e25 Z (1+X) + 3.68e22 (1-Z)(1+X)] rho T^-3.5 / (1 + (2e4/T)^8)       Kramers
 *   + 2.0 (Z/0.02)^0.65 (R/1e-5)^0.42 exp(-((log T - 5.28)/0.21)^2)             iron-like bump
 *   + 0.33 Y^0.5 (R/1e-5)^0.8 exp(-((log T - 4.63)/0.25)^2)                     helium-like bump.
 * It is a yardstick, not a calibration: use `kramers` or tables for results. Nothing here can fail.
 */
#include "opacity/opacity_internal.h"

#include "luxgale/constants.h"

#include <math.h>

static const double ln_compton_t = 19.924758140728639; /* ln 4.5e8 */
static const double ln_ionised_t = 9.3056505517805076; /* ln 1.1e4 */
static const double ln_kramers_t = 9.9034875525361280; /* ln 2e4 */
static const double ln_bump_r = -11.512925464970228;   /* ln 1e-5 */
static const double metal_log_t = 5.28, metal_width = 0.21, metal_power = 0.42;
static const double helium_log_t = 4.63, helium_width = 0.25, helium_power = 0.8;

void lxg_opacity_reference_init(struct opacity_reference_law *law,
                                const struct lxg_composition *composition) {
  const double x1 = 1.0 + composition->hydrogen;
  const double z = composition->metals;
  law->scattering = 0.2 * x1;
  law->kramers = 4.34e25 * z * x1 + 3.68e22 * (1.0 - z) * x1;
  law->metal_bump = 2.0 * pow(z / 0.02, 0.65);
  law->helium_bump = 0.33 * sqrt(composition->helium);
}

/* amplitude (R/1e-5)^power exp(-((log T - log_t)/width)^2) */
static void add_bump(struct opacity_sum *sum, double amplitude, double power, double log_t, double width,
                     double ln_r, double ln_t) {
  const double offset = (ln_t / LXG_LN10 - log_t) / width;
  const double kappa = amplitude * exp(power * (ln_r - ln_bump_r) - offset * offset);
  opacity_sum_add(sum, kappa, power, -3.0 * power - 2.0 * offset / (width * LXG_LN10));
}

struct opacity_sum lxg_opacity_reference_at(const struct opacity_reference_law *law, double ln_rho,
                                            double ln_t) {
  struct opacity_sum sum = {0.0, 0.0, 0.0};
  const double ln_r = opacity_ln_r(ln_rho, ln_t);

  const double compton = exp(0.86 * (ln_t - ln_compton_t));
  const double neutral = exp(12.0 * (ln_ionised_t - ln_t));
  opacity_sum_add(&sum, law->scattering / (1.0 + compton) / (1.0 + neutral), 0.0,
                  -0.86 * compton / (1.0 + compton) + 12.0 * neutral / (1.0 + neutral));

  const double cool = exp(8.0 * (ln_kramers_t - ln_t));
  opacity_sum_add(&sum, law->kramers * exp(ln_rho - 3.5 * ln_t) / (1.0 + cool), 1.0,
                  -3.5 + 8.0 * cool / (1.0 + cool));

  add_bump(&sum, law->metal_bump, metal_power, metal_log_t, metal_width, ln_r, ln_t);
  add_bump(&sum, law->helium_bump, helium_power, helium_log_t, helium_width, ln_r, ln_t);
  return sum;
}
