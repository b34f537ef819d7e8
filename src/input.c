/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * input.c - bounded, checked reading (see input.h).
 */
#include "luxgale/input.h"

#include <errno.h>
#include <fcntl.h>
#include <string.h>
#include <unistd.h>

enum { BLOCK = 65536 };

/* The system's reason, thread-safe. */
static const char *reason(int number, char *text, size_t size) {
  return strerror_r(number, text, size) == 0 ? text : "unknown reason";
}

enum lxg_status lxg_input_open(struct lxg_input *input, const char *path, struct lxg_error *error) {
  input->standard = strcmp(path, "-") == 0;
  input->name = input->standard ? "<stdin>" : path;
  input->file = input->standard ? STDIN_FILENO : -1;
  lxg_checksum_init(&input->checksum);
  if (!input->standard) {
    do {
      input->file = open(path, O_RDONLY | O_CLOEXEC | O_NOCTTY);
    } while (input->file < 0 && errno == EINTR);
  }
  if (input->file < 0) {
    char text[128];
    return lxg_error_set(error, LXG_IO, "read-open", "%s: error: cannot be opened: %s", path,
                         reason(errno, text, sizeof text));
  }
  return LXG_OK;
}

enum lxg_status lxg_input_block(struct lxg_input *input, void *block, size_t size, size_t *got,
                                struct lxg_error *error) {
  ssize_t count = 0;
  do {
    count = read(input->file, block, size);
  } while (count < 0 && errno == EINTR);
  if (count < 0) {
    char text[128];
    return lxg_error_set(error, LXG_IO, "read-failed", "%s: error: cannot be read: %s", input->name,
                         reason(errno, text, sizeof text));
  }
  *got = (size_t)count;
  lxg_checksum_update(&input->checksum, block, *got);
  return LXG_OK;
}

void lxg_input_close(struct lxg_input *input) {
  if (input->file >= 0 && !input->standard) {
    close(input->file); /* nothing was written: its outcome says nothing */
  }
  input->file = -1;
}

/* Appends to `bytes`, or only sums up if that is NULL. */
static enum lxg_status take_all(struct lxg_input *input, size_t limit, struct lxg_buffer *bytes,
                                struct lxg_error *error) {
  char block[BLOCK];
  size_t got = 0;
  do {
    const enum lxg_status status = lxg_input_block(input, block, sizeof block, &got, error);
    if (status != LXG_OK) {
      return status;
    }
    if (bytes != NULL) {
      if (got > limit - bytes->size) {
        return lxg_error_set(error, LXG_LIMIT, "read-size",
                             "%s: error: longer than %zu bytes, the most that is read", input->name, limit);
      }
      lxg_buffer_append(bytes, block, got);
    }
  } while (got > 0);
  return bytes != NULL ? lxg_buffer_status(bytes, error) : LXG_OK;
}

static enum lxg_status read_or_sum(const char *path, size_t limit, struct lxg_buffer *bytes,
                                   char checksum[LXG_CHECKSUM_SIZE], struct lxg_error *error) {
  struct lxg_input input;
  enum lxg_status status = lxg_input_open(&input, path, error);
  if (status != LXG_OK) {
    return status;
  }
  status = take_all(&input, limit, bytes, error);
  if (status == LXG_OK && checksum != NULL) {
    lxg_checksum_finish(&input.checksum, checksum);
  }
  lxg_input_close(&input);
  return status;
}

enum lxg_status lxg_input_read(const char *path, size_t limit, struct lxg_buffer *bytes,
                               char checksum[LXG_CHECKSUM_SIZE], struct lxg_error *error) {
  struct lxg_buffer fresh = {0};
  enum lxg_status status = read_or_sum(path, limit, &fresh, checksum, error);
  if (status == LXG_OK) {
    lxg_buffer_append(bytes, fresh.data, fresh.size);
    status = lxg_buffer_status(bytes, error);
  }
  lxg_buffer_free(&fresh);
  return status;
}

enum lxg_status lxg_input_checksum(const char *path, char checksum[LXG_CHECKSUM_SIZE],
                                   struct lxg_error *error) {
  return read_or_sum(path, 0, NULL, checksum, error);
}
