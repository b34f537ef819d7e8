/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * status.c - texts and exit codes of the outcomes, and the error chain (see status.h).
 */
#include "luxgale/status.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

struct status_row {
  int exit_status;
  const char *text;
};

static const struct status_row status_table[] = {
#define STATUS_ROW(name, exit_status, text) {exit_status, text},
    LXG_STATUS_LIST(STATUS_ROW)
#undef STATUS_ROW
};

static const struct status_row *status_row(enum lxg_status status) {
  const size_t count = sizeof status_table / sizeof status_table[0];
  const size_t index = (size_t)status;
  return &status_table[index < count ? index : (size_t)LXG_BUG];
}

const char *lxg_strerror(enum lxg_status status) {
  return status_row(status)->text;
}

int lxg_status_exit(enum lxg_status status) {
  return status_row(status)->exit_status;
}

void lxg_error_clear(struct lxg_error *error) {
  if (error != NULL) {
    error->status = LXG_OK;
    error->code[0] = '\0';
    error->count = 0;
  }
}

enum lxg_status lxg_error_set(struct lxg_error *error, enum lxg_status status, const char *code,
                              const char *format, ...) {
  if (error == NULL) {
    return status;
  }
  error->status = status;
  snprintf(error->code, sizeof error->code, "%s", code);
  va_list arguments;
  va_start(arguments, format);
  vsnprintf(error->line[0], sizeof error->line[0], format, arguments);
  va_end(arguments);
  error->count = 1;
  return status;
}

void lxg_error_context(struct lxg_error *error, const char *format, ...) {
  if (error != NULL && error->count < LXG_ERROR_LINES) {
    va_list arguments;
    va_start(arguments, format);
    vsnprintf(error->line[error->count], sizeof error->line[0], format, arguments);
    va_end(arguments);
    error->count++;
  }
}

void lxg_error_text(const struct lxg_error *error, char *text, size_t size) {
  if (size == 0) {
    return;
  }
  text[0] = '\0';
  if (error == NULL) {
    return;
  }
  size_t used = 0;
  for (size_t i = 0; i < error->count && used + 1 < size; i++) {
    const int written =
        snprintf(text + used, size - used, "%s%s", i == 0 ? "" : "\n  while ", error->line[i]);
    used = written < 0 ? size : used + (size_t)written;
  }
  if (error->count == 0) {
    snprintf(text, size, "%s", lxg_strerror(error->status));
  }
}
