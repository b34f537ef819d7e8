/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * input.h - bounded reading of files and of standard input, with the checksum of what was read.
 *
 * `-` is standard input. Every failure is LXG_IO ("read-open", "read-failed") with the file and the system's reason, or
 * LXG_LIMIT ("read-size") for more bytes than the caller allows.
 */
#ifndef LUXGALE_INPUT_H
#define LUXGALE_INPUT_H

#include "luxgale/checksum.h"
#include "luxgale/status.h"
#include "luxgale/text.h"

#include <stdbool.h>
#include <stddef.h>

/* An open input. Caller-owned: open, block until nothing comes, close. */
struct lxg_input {
  const char *name;             /* path as given, or "<stdin>"; borrowed from the caller */
  int file;                     /* descriptor, -1 while closed */
  bool standard;                /* standard input: not closed by us */
  struct lxg_checksum checksum; /* of all bytes handed out */
};

/* Opens `path`; the string must live as long as the input. */
enum lxg_status lxg_input_open(struct lxg_input *input, const char *path, struct lxg_error *error);

/* Reads up to `size` bytes; `*got` = 0 at the end. Interrupted reads are taken up again. */
enum lxg_status lxg_input_block(struct lxg_input *input, void *block, size_t size, size_t *got,
                                struct lxg_error *error);

/* Closes; harmless when closed already. */
void lxg_input_close(struct lxg_input *input);

/* Appends a whole file of at most `limit` bytes to `bytes`; `checksum` may be NULL. */
enum lxg_status lxg_input_read(const char *path, size_t limit, struct lxg_buffer *bytes,
                               char checksum[LXG_CHECKSUM_SIZE], struct lxg_error *error);

/* Checksum of the bytes of a file of any length. */
enum lxg_status lxg_input_checksum(const char *path, char checksum[LXG_CHECKSUM_SIZE],
                                   struct lxg_error *error);

#endif
