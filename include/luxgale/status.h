/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * status.h - outcome of every fallible function, and the error report that travels with it.
 *
 * Every function that can fail returns `enum lxg_status`; details go to a caller-owned `struct lxg_error`
 * (NULL is allowed: the caller then only learns the status). An error is a chain of lines: the innermost says
 * which quantity had which value and what is allowed, each outer one says what was being done meanwhile.
 * The library never prints, exits or aborts.
 *
 * Call order: lxg_error_clear -> (work) -> lxg_error_set at the point of failure -> lxg_error_context on the
 * way up -> lxg_error_text for a person.
 */
#ifndef LUXGALE_STATUS_H
#define LUXGALE_STATUS_H

#include <stddef.h>

/* name, exit status of the program, static text */
#define LXG_STATUS_LIST(X)                                                                                   \
  X(LXG_OK, 0, "done")                                                                                       \
  X(LXG_DOMAIN, 1, "a trial value left the physical or tabulated domain")                                    \
  X(LXG_NOT_CONVERGED, 1, "the iteration stopped before it met its tolerance")                               \
  X(LXG_SINGULAR, 1, "the linear system is singular")                                                        \
  X(LXG_NO_SOLUTION, 1, "the physics has no solution here")                                                  \
  X(LXG_USAGE, 2, "the command line is not understood")                                                      \
  X(LXG_INPUT, 2, "the input is not acceptable")                                                             \
  X(LXG_IO, 3, "reading or writing failed")                                                                  \
  X(LXG_MEMORY, 4, "out of memory")                                                                          \
  X(LXG_LIMIT, 4, "a stated limit was exceeded")                                                             \
  X(LXG_INTERRUPTED, 4, "stopped on request")                                                                \
  X(LXG_BUG, 70, "internal error, please report it")

enum lxg_status {
#define LXG_STATUS_ENUM(name, exit_status, text) name,
  LXG_STATUS_LIST(LXG_STATUS_ENUM)
#undef LXG_STATUS_ENUM
};

enum { LXG_ERROR_LINES = 8, LXG_ERROR_LINE_SIZE = 320, LXG_ERROR_CODE_SIZE = 48 };

/* One failure: a stable code for scripts and a chain of lines for people, innermost first. */
struct lxg_error {
  enum lxg_status status;                          /* LXG_OK while nothing failed */
  char code[LXG_ERROR_CODE_SIZE];                  /* stable reason code, e.g. "key-unknown"; "" if none */
  size_t count;                                    /* lines in use */
  char line[LXG_ERROR_LINES][LXG_ERROR_LINE_SIZE]; /* [0] the cause, then its contexts outwards */
};

/* Static one-line text of a status; never NULL. */
const char *lxg_strerror(enum lxg_status status);

/* Exit status that the program returns for a status (0, 1, 2, 3, 4 or 70). */
int lxg_status_exit(enum lxg_status status);

/* Empties the error. NULL is allowed here and below. */
void lxg_error_clear(struct lxg_error *error);

/* Replaces whatever the error holds by a new cause and returns `status`, so that a failing function can end in
 * `return lxg_error_set(error, LXG_INPUT, "code", "...", ...)`. `code` is a stable word, at most 47 characters. */
enum lxg_status lxg_error_set(struct lxg_error *error, enum lxg_status status, const char *code,
                              const char *format, ...) __attribute__((format(printf, 4, 5)));

/* Adds an outer context line ("while ..."). When the chain is full the outermost lines are dropped: the cause
 * always survives. */
void lxg_error_context(struct lxg_error *error, const char *format, ...)
    __attribute__((format(printf, 2, 3)));

/* Writes the chain as one text, cause first, lines joined by "\n  while ", into `text` of `size` bytes (always
 * terminated). */
void lxg_error_text(const struct lxg_error *error, char *text, size_t size);

#endif
