/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fast_exp.h - exponential that the compiler can interleave with its neighbours.
 *
 * One opacity needs about a dozen exponentials; a library call each would cost more than everything else together.
 * exp x = 2^k 2^(j/32) exp r with |r| <= ln 2/64 and a Taylor polynomial of degree 5: relative error below 3e-15
 * (remainder 2.6e-15). The rounding to the nearest integer adds 1.5 2^52 and so needs the default rounding mode.
 * The caller keeps |x| <= 700; nothing is checked here.
 */
#ifndef LUXGALE_OPACITY_FAST_EXP_H
#define LUXGALE_OPACITY_FAST_EXP_H

#include <stdint.h>
#include <string.h>

#define LXG_FAST_EXP_LIMIT 700.0 /* largest |x|: 2^k stays a normal number */

/* 2^(j/32), correctly rounded */
static const double lxg_fast_exp_root[32] = {
    0x1.0000000000000p+0, 0x1.059b0d3158574p+0, 0x1.0b5586cf9890fp+0, 0x1.11301d0125b51p+0,
    0x1.172b83c7d517bp+0, 0x1.1d4873168b9aap+0, 0x1.2387a6e756238p+0, 0x1.29e9df51fdee1p+0,
    0x1.306fe0a31b715p+0, 0x1.371a7373aa9cbp+0, 0x1.3dea64c123422p+0, 0x1.44e086061892dp+0,
    0x1.4bfdad5362a27p+0, 0x1.5342b569d4f82p+0, 0x1.5ab07dd485429p+0, 0x1.6247eb03a5585p+0,
    0x1.6a09e667f3bcdp+0, 0x1.71f75e8ec5f74p+0, 0x1.7a11473eb0187p+0, 0x1.82589994cce13p+0,
    0x1.8ace5422aa0dbp+0, 0x1.93737b0cdc5e5p+0, 0x1.9c49182a3f090p+0, 0x1.a5503b23e255dp+0,
    0x1.ae89f995ad3adp+0, 0x1.b7f76f2fb5e47p+0, 0x1.c199bdd85529cp+0, 0x1.cb720dcef9069p+0,
    0x1.d5818dcfba487p+0, 0x1.dfc97337b9b5fp+0, 0x1.ea4afa2a490dap+0, 0x1.f50765b6e4540p+0,
};

static inline double lxg_fast_exp(double x) {
  static const double shift = 0x1.8p52;
  static const double per_step = 32.0 * 1.4426950408889634; /* 32/ln 2 */
  static const double step_high = 0x1.62e42fefa0000p-6;     /* ln 2/32, upper bits */
  static const double step_low = 0x1.cf79abc9e3b3ap-45;     /* ln 2/32, the rest */
  const double shifted = x * per_step + shift;
  uint64_t bits;
  memcpy(&bits, &shifted, sizeof bits);
  const double steps = shifted - shift;
  const double r = (x - steps * step_high) - steps * step_low;
  const double r2 = r * r;
  const double tail = r + r2 * ((0.5 + r * (1.0 / 6.0)) + r2 * (1.0 / 24.0 + r * (1.0 / 120.0)));
  uint64_t scale_bits;
  memcpy(&scale_bits, &lxg_fast_exp_root[bits & 31u], sizeof scale_bits);
  scale_bits += (bits >> 5) << 52;
  double scale;
  memcpy(&scale, &scale_bits, sizeof scale);
  return scale + scale * tail;
}

#endif
