/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lanes.h - four numbers at a time, and their exponentials.
 *
 * One opacity needs about fourteen exponentials; done one by one they cost three times what the formula may. Vector types of
 * GCC and Clang become whatever registers the machine has. With GCC on x86-64 a second version of the function uses the wide
 * registers and fused multiply-add where the processor has them (chosen once, at start), so the last two digits may differ
 * between processors, and never between runs on one.
 * exp x = 2^k exp r with |r| <= ln 2/2 and the polynomial 1 + r + r^2 q(r) of degree 9 of least largest relative error
 * (1.7e-14, found by the exchange method at 40 digits). Rounding to the nearest integer adds 1.5 2^52 and needs the
 * default rounding mode. The caller keeps arguments within 700.
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

/* Clang 14 cannot call such a function from another file; under the sanitizers the choice comes too early. */
#if defined(__x86_64__) && defined(__gnu_linux__) && !defined(__clang__) &&                                  \
    !defined(__SANITIZE_ADDRESS__) && !defined(__SANITIZE_THREAD__)
#define LXG_LANES_TARGETS __attribute__((target_clones("arch=x86-64-v4", "arch=x86-64-v3", "default")))
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

/* Without the sign bits. */
LXG_LANES_INLINE void lanes_magnitude(lanes *to, const lanes *from) {
  static const int64_t mask = INT64_MAX;
  *to = (lanes)((lane_bits)*from & (lane_bits){mask, mask, mask, mask});
}

LXG_LANES_INLINE double lanes_sum(const lanes *x) {
  return ((*x)[0] + (*x)[1]) + ((*x)[2] + (*x)[3]);
}

LXG_LANES_INLINE void lanes_exp(lanes *to, const lanes *from) {
  static const double shift = 0x1.8p52;
  const lanes x = *from;
  const lanes shifted = x * 1.4426950408889634 + shift; /* 1/ln 2 */
  const lanes k = shifted - shift;
  const lanes r = x - k * 0x1.62e42fefa39efp-1; /* ln 2 */
  const lanes r2 = r * r;
  const lanes r4 = r2 * r2;
  const lanes a = (1.0 + r) + r2 * (0x1.fffffffff13c7p-2 + r * 0x1.5555555589fadp-3);
  const lanes b = (0x1.5555557df50fbp-5 + r * 0x1.1111108e187a7p-7) +
                  r2 * (0x1.6c163bdba6f8cp-10 + r * 0x1.a01b73aa5fad3p-13);
  const lanes c = 0x1.a16e43f3db2ccp-16 + r * 0x1.710176a3dde7bp-19;
  const lanes p = a + r4 * (b + r4 * c);
  const lane_bits scale = ((lane_bits)shifted + 1023) << 52;
  *to = p * (lanes)scale;
}

/* The same for arguments that may lie far below: those under -600 count as -600. */
LXG_LANES_INLINE void lanes_exp_floored(lanes *to, const lanes *from) {
  static const double least = -600.0;
  const lanes floor = {least, least, least, least};
  const lane_bits low = *from < floor;
  lanes x;
  lanes_choose(&x, &low, &floor, from);
  lanes_exp(to, &x);
}

#endif
