/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * memory.h - the only door to the heap for luxgale's own code.
 *
 * Sizes are checked for overflow, memory comes zeroed, and one place exists where tests make the n-th request fail.
 * All return NULL on failure; the caller turns that into LXG_MEMORY.
 */
#ifndef LUXGALE_MEMORY_H
#define LUXGALE_MEMORY_H

#include <stddef.h>

/* Zeroed memory for `count` objects of `size` bytes; NULL if out of memory or if the product overflows. A request for
 * zero bytes returns a valid pointer that may be freed. */
void *lxg_alloc(size_t count, size_t size);

/* Resizes to `count` objects of `size` bytes, contents kept, growth not zeroed; on failure NULL, old block intact. */
void *lxg_realloc(void *block, size_t count, size_t size);

/* Copy of a string; NULL if out of memory. */
char *lxg_strdup(const char *text);

/* Frees a block; NULL is allowed. */
void lxg_free(void *block);

#endif
