/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lanes.h - four numbers at a time, and their exponentials.
 *
 * One opacity needs about fourteen exponentials; done one by one they cost three times what the formula may. Vector types of
 * GCC and Clang become whatever registers the machine has; results do not depend on which (no fused operations).
 * exp x = 2^k exp r with |r| <= ln 2/2 and the Taylor polynomial of degree 13: relative error below 1e-15. Rounding to the
 * nearest integer adds 1.5 2^52 and needs the default rounding mode. Arguments are kept above -600; the caller keeps them below
 * 700.
 */
#ifndef LUXGALE_OPACITY_LANES_H
#define LUXGALE_OPACITY_LANES_H

#include <stddef.h>
#include <stdint.h>
#include <string.h>

enum { LANES = 4 };

/* The one place where a type has a name of its own: vector types cannot be written otherwise. */
typedef double lanes __attribute__((vector_size(32)));
typedef int64_t lane_bits __attribute__((vector_size(32)));

#define LXG_LANES_INLINE static inline __attribute__((always_inline))

/* Whole registers of the machine that runs it: chosen once, when the program starts. */
#if defined(__x86_64__) && defined(__gnu_linux__) && !defined(__SANITIZE_ADDRESS__) &&                       \
    !defined(__clang__) && !defined(LXG_ONE_TARGET)
#define LXG_LANES_TARGETS __attribute__((target_clones("avx2", "default")))
#else
#define LXG_LANES_TARGETS
#endif

LXG_LANES_INLINE void lanes_load(lanes *to, const double from[LANES]) {
  memcpy(to, from, sizeof *to);
}

/* Where `mask` is all ones `a`, where zero `b`. */
LXG_LANES_INLINE void lanes_choose(lanes *to, const lane_bits *mask, const lanes *a, const lanes *b) {
  *to = (lanes)((*mask & (lane_bits)*a) | (~*mask & (lane_bits)*b));
}

LXG_LANES_INLINE double lanes_sum(const lanes *x) {
  return ((*x)[0] + (*x)[1]) + ((*x)[2] + (*x)[3]);
}

LXG_LANES_INLINE void lanes_exp(lanes *to, const lanes *from) {
  static const double shift = 0x1.8p52;
  static const double least = -600.0;
  const lanes floor = {least, least, least, least};
  const lane_bits low = *from < floor;
  lanes x;
  lanes_choose(&x, &low, &floor, from);
  const lanes shifted = x * 1.4426950408889634 + shift; /* 1/ln 2 */
  const lanes k = shifted - shift;
  const lanes r = (x - k * 0x1.62e42fefa0000p-1) - k * 0x1.cf79abc9e3b3ap-40; /* ln 2 in two parts */
  const lanes r2 = r * r;
  const lanes r4 = r2 * r2;
  const lanes a = (1.0 + r) + r2 * (1.0 / 2.0 + r * (1.0 / 6.0));
  const lanes b = (1.0 / 24.0 + r * (1.0 / 120.0)) + r2 * (1.0 / 720.0 + r * (1.0 / 5040.0));
  const lanes c = (1.0 / 40320.0 + r * (1.0 / 362880.0)) + r2 * (1.0 / 3628800.0 + r * (1.0 / 39916800.0));
  const lanes d = 1.0 / 479001600.0 + r * (1.0 / 6227020800.0);
  const lanes p = (a + r4 * b) + (r4 * r4) * (c + r4 * d);
  const lane_bits scale = ((lane_bits)shifted + 1023) << 52;
  *to = p * (lanes)scale;
}

#endif
