/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * text.h - numbers as text, a growable byte buffer, and the nearest known name for error messages.
 *
 * Nothing here depends on the locale of the process or changes it. A number written by lxg_text_format_number has the
 * fewest digits that read back to the same double and a form that readers of YAML 1.1, YAML 1.2, JSON, CSV and ECSV
 * all take for a floating-point number.
 */
#ifndef LUXGALE_TEXT_H
#define LUXGALE_TEXT_H

#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* LXG_TEXT_NUMBER_SIZE holds any formatted number and its terminator. */
enum { LXG_TEXT_NUMBER_SIZE = 32 };

enum lxg_text_parse {
  LXG_TEXT_NUMBER,       /* read */
  LXG_TEXT_NOT_A_NUMBER, /* not of the form [+-]digits.digits[e[+-]digits], either side optional */
  LXG_TEXT_OVERFLOW,     /* of that form, but larger than any double */
  LXG_TEXT_NOT_FINITE /* nan, inf, +inf or -inf (any case, also .nan, infinity) where that is not allowed */
};

/* Reads `size` bytes, all of them, as a decimal number. Refused: blanks, hexadecimal, a leading zero before another
 * digit (`010`), `_`, `12:30`, an exponent letter other than e or E, a lone dot. A value that underflows becomes the
 * nearest double (a denormal or zero). `value` is set only for LXG_TEXT_NUMBER. With `allow_not_finite` nan and inf
 * are numbers too. Correctly rounded. */
enum lxg_text_parse lxg_text_parse_number(const char *text, size_t size, bool allow_not_finite,
                                          double *value);

/* Reads `size` bytes as an integer [+-]digits without leading zeros; false if it is none or does not fit. */
bool lxg_text_parse_integer(const char *text, size_t size, long long *value);

/* Writes the shortest digits that read back to `value`: `0.0`, `123.5`, `1.25e+38`, `1.0e-05`. Always with a dot; an
 * exponent (from 1e16 and below 1e-4) is signed and has two digits or more. Not finite: `nan`, `inf`, `-inf`, which only
 * table data may hold. Returns the length. */
size_t lxg_text_format_number(double value, char text[LXG_TEXT_NUMBER_SIZE]);

/* The name nearest to `word` by edits (insert, delete, replace, swap; case does not count), or NULL when none is closer
 * than about a third of the word. Linear in `count`. */
const char *lxg_text_nearest(const char *word, const char *const *names, size_t count);

/* Bytes of the valid UTF-8 sequence that starts at `text` (1 to 4), or 0 if there is none within `size` bytes. */
size_t lxg_text_utf8(const char *text, size_t size);

/* A growable block of bytes, always followed by a terminating zero that is not counted. All-zero is a valid empty
 * buffer. The first failed append is remembered and later ones do nothing, so a writer checks once at its end. */
struct lxg_buffer {
  char *data;      /* NULL while nothing was appended */
  size_t size;     /* bytes in use */
  size_t capacity; /* bytes reserved */
  bool failed;     /* an append ran out of memory */
};

void lxg_buffer_append(struct lxg_buffer *buffer, const void *bytes, size_t size);
void lxg_buffer_text(struct lxg_buffer *buffer, const char *text);
void lxg_buffer_byte(struct lxg_buffer *buffer, char byte);

/* Appends a number in the form of lxg_text_format_number. */
void lxg_buffer_number(struct lxg_buffer *buffer, double value);

/* Appends formatted text. No floating-point conversions (they follow the locale): use lxg_buffer_number. */
void lxg_buffer_format(struct lxg_buffer *buffer, const char *format, ...)
    __attribute__((format(printf, 2, 3)));

/* LXG_OK, or LXG_MEMORY if any append failed. */
enum lxg_status lxg_buffer_status(const struct lxg_buffer *buffer, struct lxg_error *error);

/* Frees the bytes and leaves an empty buffer. NULL is allowed. */
void lxg_buffer_free(struct lxg_buffer *buffer);

#endif
