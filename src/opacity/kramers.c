/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * kramers.c - the built-in opacity formula: textbook laws plus bumps where bound electrons of one element dominate.
 *
 *   kappa = 1/(1/k_hminus + 1/k_rest),  k_rest = k_es + k_ff + k_bf + sum of bumps       [cm^2 g^-1]
 *   k_es = 0.2 (1+X) / {[1 + 2.7e11 rho/T^2] [1 + (T/4.5e8)^0.86]} / (1 + (1.1e4/T)^12)   Paczynski 1983, ApJ 267, 315
 *   k_bf + k_ff = [4.34e25 Z' (1+X) + 3.68e22 (1-Z')(1+X)] rho T^-3.5 / (1 + (2e4/T)^8), Z' = Z + cno
 *   k_hminus = 2.5e-31 (Z/0.02) rho^0.5 T^9
 *   bump = A (R/1e-5)^p exp(-((log T - log T_b)/w)^2), w different on the two sides.
 * Nothing here can fail.
 */
#include "opacity/opacity_internal.h"

#include <math.h>

static const double ln_compton_t = 19.924758140728639; /* ln 4.5e8 */
static const double ln_ionised_t = 9.3056505517805076; /* ln 1.1e4 */
static const double ln_kramers_t = 9.9034875525361280; /* ln 2e4 */
static const double ln_bump_r = -11.512925464970228;   /* ln 1e-5 */

void lxg_opacity_kramers_init(struct lxg_opacity_kramers_law *law,
                              const struct lxg_composition *composition) {
  const double x = composition->hydrogen;
  const double z = composition->metals;
  const double heavy = z + composition->cno;
  law->scattering = 0.2 * (1.0 + x);
  law->kramers = (4.34e25 * heavy + 3.68e22 * (1.0 - heavy)) * (1.0 + x);
  law->h_minus = 2.5e-31 * (z + 1e-6) / 0.02;
  const struct lxg_opacity_bump bump[LXG_OPACITY_BUMPS] = {
      {0.9 * x, 0.65, 4.05, 0.12, 0.25},
      {0.33 * sqrt(composition->helium), 0.8, 4.63, 0.25, 0.25},
      {2.0 * pow(z / 0.02, 0.65), 0.42, 5.25, 0.17, 0.21},
      {0.33 * pow(heavy / 0.02, 0.7), 0.6, 6.1, 0.3, 0.35},
  };
  for (size_t i = 0; i < LXG_OPACITY_BUMPS; i++) {
    law->bump[i] = bump[i];
  }
}

static void add_bump(struct lxg_opacity_sum *sum, const struct lxg_opacity_bump *bump, double ln_r,
                     double ln_t) {
  const double distance = ln_t / LXG_LN10 - bump->log_t;
  const double width = distance < 0.0 ? bump->width_cool : bump->width_hot;
  const double offset = distance / width;
  const double kappa = bump->amplitude * exp(bump->power * (ln_r - ln_bump_r) - offset * offset);
  lxg_opacity_sum_add(sum, kappa, bump->power, -3.0 * bump->power - 2.0 * offset / (width * LXG_LN10));
}

struct lxg_opacity_sum lxg_opacity_kramers_at(const struct lxg_opacity_kramers_law *law, double ln_rho,
                                              double ln_t) {
  struct lxg_opacity_sum rest = {0.0, 0.0, 0.0};
  const double ln_r = ln_rho - 3.0 * (ln_t - LXG_OPACITY_LN_T6);

  const double compton = exp(0.86 * (ln_t - ln_compton_t));
  const double degenerate = 2.7e11 * exp(ln_rho - 2.0 * ln_t);
  const double neutral = exp(12.0 * (ln_ionised_t - ln_t));
  lxg_opacity_sum_add(&rest, law->scattering / ((1.0 + compton) * (1.0 + degenerate) * (1.0 + neutral)),
                      -degenerate / (1.0 + degenerate),
                      -0.86 * compton / (1.0 + compton) + 2.0 * degenerate / (1.0 + degenerate) +
                          12.0 * neutral / (1.0 + neutral));

  const double cool = exp(8.0 * (ln_kramers_t - ln_t));
  lxg_opacity_sum_add(&rest, law->kramers * exp(ln_rho - 3.5 * ln_t) / (1.0 + cool), 1.0,
                      -3.5 + 8.0 * cool / (1.0 + cool));
  for (size_t i = 0; i < LXG_OPACITY_BUMPS; i++) {
    add_bump(&rest, &law->bump[i], ln_r, ln_t);
  }

  /* 1/kappa = 1/h + 1/rest: each share of the resistance weighs its own slope. */
  const double h_minus = law->h_minus * exp(0.5 * ln_rho + 9.0 * ln_t);
  const double pass = h_minus / (h_minus + rest.kappa);
  const double block = rest.kappa / (h_minus + rest.kappa);
  const struct lxg_opacity_sum total = {
      .kappa = rest.kappa * pass,
      .by_lnrho = pass * pass * rest.by_lnrho + block * block * 0.5 * h_minus,
      .by_lnt = pass * pass * rest.by_lnt + block * block * 9.0 * h_minus,
  };
  return total;
}
