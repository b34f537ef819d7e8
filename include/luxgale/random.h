/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * random.h - random numbers as a pure function of (seed, stream, draw, index): no state, hence the same for any
 * number of threads and any order of evaluation.
 *
 * Generator: Philox4x32 with 10 rounds, Salmon, Moraes, Dror & Shaw 2011 (Proc. SC11, "Parallel random numbers: as easy
 * as 1, 2, 3"). Deviates of a distribution come from its inverse cumulative function, one uniform each.
 */
#ifndef LUXGALE_RANDOM_H
#define LUXGALE_RANDOM_H

#include <stddef.h>
#include <stdint.h>

/* Where in the random field a number stands. */
struct lxg_random_place {
  uint64_t seed;   /* of the run; the key of the generator */
  uint32_t stream; /* one for each source of uncertainty (and each independent copy of it) */
  uint32_t draw;   /* number of the Monte Carlo draw */
};

/* Ten Philox rounds of a 128-bit counter under a 64-bit key: 128 random bits. Never fails. */
void lxg_random_philox(const uint32_t counter[4], const uint32_t key[2], uint32_t bits[4]);

/* The index-th uniform deviate at a place, strictly between 0 and 1, multiples of 2^-54 (53 random bits). */
double lxg_random_uniform(const struct lxg_random_place *place, uint64_t index);

/* The index-th standard normal deviate at a place: inverse normal function of the same uniform deviate. */
double lxg_random_normal(const struct lxg_random_place *place, uint64_t index);

/* Deviates first, first + 1, ..., first + count - 1 at once; same numbers as the function above, half the work. */
void lxg_random_normals(const struct lxg_random_place *place, uint64_t first, size_t count, double values[]);

#endif
