/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * checksum.h - SHA-256 (FIPS 180-4) of the bytes of an input, so that a report says exactly what it was made from.
 */
#ifndef LUXGALE_CHECKSUM_H
#define LUXGALE_CHECKSUM_H

#include <stddef.h>
#include <stdint.h>

enum { LXG_CHECKSUM_SIZE = 65 }; /* 64 hexadecimal digits and the terminator */

/* Running state, caller-owned: init, then any number of updates, then finish once. */
struct lxg_checksum {
  uint32_t state[8];
  uint64_t bytes;          /* bytes taken in so far */
  unsigned char block[64]; /* bytes not yet mixed in: bytes % 64 of them */
};

void lxg_checksum_init(struct lxg_checksum *checksum);
void lxg_checksum_update(struct lxg_checksum *checksum, const void *bytes, size_t size);

/* Writes 64 lower-case hexadecimal digits. The state is spent afterwards. */
void lxg_checksum_finish(struct lxg_checksum *checksum, char hex[LXG_CHECKSUM_SIZE]);

#endif
