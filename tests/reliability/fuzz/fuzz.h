/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fuzz.h - what the fuzz targets share: the entry point of libFuzzer, input as a text, and input as a file.
 *
 * A target hands any bytes to one reader. The reader must return; a failure must be explained (fuzz_explained). Memory
 * and undefined behaviour are watched by the sanitizers, time and memory limits by the driver.
 */
#ifndef LUXGALE_TESTS_FUZZ_H
#define LUXGALE_TESTS_FUZZ_H

#include "luxgale/status.h"

#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size);

/* The bytes as a terminated text in fresh memory, so that reading beyond its end is seen. */
static inline char *fuzz_text(const uint8_t *data, size_t size) {
  char *text = malloc(size + 1);
  if (text == NULL) {
    abort();
  }
  memcpy(text, data, size);
  text[size] = '\0';
  return text;
}

/* Aborts (a crash for the fuzzer) on a failure without code and sentence, and on one that blames the program. */
static inline void fuzz_explained(enum lxg_status status, const struct lxg_error *error) {
  if (status != LXG_OK && (error->status != status || error->code[0] == '\0' || error->count == 0 ||
                           error->line[0][0] == '\0' || status == LXG_BUG)) {
    fprintf(stderr, "status %d [%s]: not explained\n", (int)status, error->code);
    abort();
  }
}

#endif
