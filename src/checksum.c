/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * checksum.c - SHA-256 as defined in FIPS 180-4, sections 4.1.2, 4.2.2, 5.1.1, 5.3.3 and 6.2 (see checksum.h).
 */
#include "luxgale/checksum.h"

#include <string.h>

/* K: first 32 bits of the fractional parts of the cube roots of the first 64 primes (FIPS 180-4, 4.2.2). */
static const uint32_t round_constant[64] = {
    0x428a2f98, 0x71374491, 0xb5c0fbcf, 0xe9b5dba5, 0x3956c25b, 0x59f111f1, 0x923f82a4, 0xab1c5ed5,
    0xd807aa98, 0x12835b01, 0x243185be, 0x550c7dc3, 0x72be5d74, 0x80deb1fe, 0x9bdc06a7, 0xc19bf174,
    0xe49b69c1, 0xefbe4786, 0x0fc19dc6, 0x240ca1cc, 0x2de92c6f, 0x4a7484aa, 0x5cb0a9dc, 0x76f988da,
    0x983e5152, 0xa831c66d, 0xb00327c8, 0xbf597fc7, 0xc6e00bf3, 0xd5a79147, 0x06ca6351, 0x14292967,
    0x27b70a85, 0x2e1b2138, 0x4d2c6dfc, 0x53380d13, 0x650a7354, 0x766a0abb, 0x81c2c92e, 0x92722c85,
    0xa2bfe8a1, 0xa81a664b, 0xc24b8b70, 0xc76c51a3, 0xd192e819, 0xd6990624, 0xf40e3585, 0x106aa070,
    0x19a4c116, 0x1e376c08, 0x2748774c, 0x34b0bcb5, 0x391c0cb3, 0x4ed8aa4a, 0x5b9cca4f, 0x682e6ff3,
    0x748f82ee, 0x78a5636f, 0x84c87814, 0x8cc70208, 0x90befffa, 0xa4506ceb, 0xbef9a3f7, 0xc67178f2};

static uint32_t rotate(uint32_t word, unsigned bits) {
  return word >> bits | word << (32 - bits);
}

static void mix_block(uint32_t state[8], const unsigned char block[64]) {
  uint32_t w[64];
  for (size_t t = 0; t < 16; t++) {
    w[t] = (uint32_t)block[4 * t] << 24 | (uint32_t)block[4 * t + 1] << 16 | (uint32_t)block[4 * t + 2] << 8 |
           (uint32_t)block[4 * t + 3];
  }
  for (size_t t = 16; t < 64; t++) {
    const uint32_t s0 = rotate(w[t - 15], 7) ^ rotate(w[t - 15], 18) ^ w[t - 15] >> 3;
    const uint32_t s1 = rotate(w[t - 2], 17) ^ rotate(w[t - 2], 19) ^ w[t - 2] >> 10;
    w[t] = s1 + w[t - 7] + s0 + w[t - 16];
  }
  uint32_t v[8]; /* a ... h */
  memcpy(v, state, sizeof v);
  for (size_t t = 0; t < 64; t++) {
    const uint32_t big1 = rotate(v[4], 6) ^ rotate(v[4], 11) ^ rotate(v[4], 25);
    const uint32_t choose = (v[4] & v[5]) ^ (~v[4] & v[6]);
    const uint32_t t1 = v[7] + big1 + choose + round_constant[t] + w[t];
    const uint32_t big0 = rotate(v[0], 2) ^ rotate(v[0], 13) ^ rotate(v[0], 22);
    const uint32_t majority = (v[0] & v[1]) ^ (v[0] & v[2]) ^ (v[1] & v[2]);
    memmove(v + 1, v, 7 * sizeof v[0]);
    v[4] += t1;
    v[0] = t1 + big0 + majority;
  }
  for (size_t i = 0; i < 8; i++) {
    state[i] += v[i];
  }
}

void lxg_checksum_init(struct lxg_checksum *checksum) {
  *checksum = (struct lxg_checksum){.state = {0x6a09e667, 0xbb67ae85, 0x3c6ef372, 0xa54ff53a, 0x510e527f,
                                              0x9b05688c, 0x1f83d9ab, 0x5be0cd19}};
}

void lxg_checksum_update(struct lxg_checksum *checksum, const void *bytes, size_t size) {
  const unsigned char *from = bytes;
  while (size > 0) {
    const size_t used = (size_t)(checksum->bytes % 64);
    const size_t take = size < 64 - used ? size : 64 - used;
    memcpy(checksum->block + used, from, take);
    checksum->bytes += take;
    from += take;
    size -= take;
    if (used + take == 64) {
      mix_block(checksum->state, checksum->block);
    }
  }
}

void lxg_checksum_finish(struct lxg_checksum *checksum, char hex[LXG_CHECKSUM_SIZE]) {
  static const char digit[] = "0123456789abcdef";
  const uint64_t bits = checksum->bytes * 8;
  lxg_checksum_update(checksum, "\x80", 1);
  while (checksum->bytes % 64 != 56) {
    lxg_checksum_update(checksum, "", 1);
  }
  unsigned char length[8];
  for (size_t i = 0; i < 8; i++) {
    length[i] = (unsigned char)(bits >> (56 - 8 * i));
  }
  lxg_checksum_update(checksum, length, sizeof length);
  for (size_t i = 0; i < 64; i++) {
    hex[i] = digit[checksum->state[i / 8] >> (28 - 4 * (i % 8)) & 15];
  }
  hex[64] = '\0';
}
