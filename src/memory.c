/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * memory.c - checked, zeroing allocation (see memory.h).
 */
#include "luxgale/memory.h"

#include <stdint.h>
#include <stdlib.h>
#include <string.h>

void *lxg_alloc(size_t count, size_t size) {
  return count == 0 || size == 0 ? calloc(1, 1) : calloc(count, size);
}

void *lxg_realloc(void *block, size_t count, size_t size) {
  if (size != 0 && count > SIZE_MAX / size) {
    return NULL;
  }
  const size_t bytes = count * size;
  return realloc(block, bytes == 0 ? 1 : bytes);
}

char *lxg_strdup(const char *text) {
  const size_t size = strlen(text) + 1;
  char *copy = lxg_alloc(size, 1);
  if (copy != NULL) {
    memcpy(copy, text, size);
  }
  return copy;
}

void lxg_free(void *block) {
  free(block);
}
