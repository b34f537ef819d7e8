/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * random.c - Philox4x32-10 and deviates by inversion (see random.h).
 *
 * A 128-bit block gives two uniforms of 53 bits. Counter words: draw, stream, low and high half of index/2.
 */
#include "luxgale/random.h"

#include <gsl/gsl_cdf.h>

enum { PHILOX_ROUNDS = 10 };

static const uint32_t multiplier[2] = {0xD2511F53u, 0xCD9E8D57u};
static const uint32_t weyl[2] = {0x9E3779B9u, 0xBB67AE85u}; /* key increments: golden ratio, sqrt(3) - 1 */

void lxg_random_philox(const uint32_t counter[4], const uint32_t key[2], uint32_t bits[4]) {
  uint32_t c[4] = {counter[0], counter[1], counter[2], counter[3]};
  uint32_t k[2] = {key[0], key[1]};
  for (int round = 0; round < PHILOX_ROUNDS; round++) {
    const uint64_t p0 = (uint64_t)multiplier[0] * c[0];
    const uint64_t p1 = (uint64_t)multiplier[1] * c[2];
    const uint32_t x0 = (uint32_t)(p1 >> 32) ^ c[1] ^ k[0];
    const uint32_t x2 = (uint32_t)(p0 >> 32) ^ c[3] ^ k[1];
    c[0] = x0;
    c[1] = (uint32_t)p1;
    c[2] = x2;
    c[3] = (uint32_t)p0;
    k[0] += weyl[0];
    k[1] += weyl[1];
  }
  for (int i = 0; i < 4; i++) {
    bits[i] = c[i];
  }
}

/* The centre of one of 2^53 equal cells of (0, 1). */
static double cell_centre(uint32_t high, uint32_t low) {
  const uint64_t cell = (((uint64_t)high << 32) | low) >> 11;
  return ((double)cell + 0.5) * 0x1p-53;
}

static void uniform_pair(const struct lxg_random_place *place, uint64_t pair, double values[2]) {
  const uint32_t counter[4] = {place->draw, place->stream, (uint32_t)pair, (uint32_t)(pair >> 32)};
  const uint32_t key[2] = {(uint32_t)place->seed, (uint32_t)(place->seed >> 32)};
  uint32_t bits[4];
  lxg_random_philox(counter, key, bits);
  values[0] = cell_centre(bits[0], bits[1]);
  values[1] = cell_centre(bits[2], bits[3]);
}

double lxg_random_uniform(const struct lxg_random_place *place, uint64_t index) {
  double pair[2];
  uniform_pair(place, index / 2, pair);
  return pair[index % 2];
}

double lxg_random_normal(const struct lxg_random_place *place, uint64_t index) {
  return gsl_cdf_ugaussian_Pinv(lxg_random_uniform(place, index));
}

void lxg_random_normals(const struct lxg_random_place *place, uint64_t first, size_t count, double values[]) {
  double pair[2] = {0.0, 0.0};
  for (size_t i = 0; i < count; i++) {
    const uint64_t index = first + i;
    if (i == 0 || index % 2 == 0) {
      uniform_pair(place, index / 2, pair);
    }
    values[i] = gsl_cdf_ugaussian_Pinv(pair[index % 2]);
  }
}
