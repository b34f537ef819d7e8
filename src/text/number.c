/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * number.c - decimal text to double and back, exact and independent of the locale (see text.h).
 *
 * Reading: a number of at most 2^53 times a power of ten of at most 22 is one exact product or quotient (Clinger 1990,
 * "How to read floating point numbers accurately"). Everything else goes to strtod as an integer with an exponent, which
 * holds no decimal point and so means the same in every locale; digits beyond DIGITS_KEPT only matter as "something
 * follows", because no midpoint between two doubles has more than 767 digits.
 * Writing: 15 digits always survive text -> double -> text, so a number that has a short form shows it at 15; otherwise 16
 * or 17 are needed. Denormals have fewer digits and are tried from one upwards.
 */
#include "luxgale/text.h"

#include <ctype.h>
#include <float.h>
#include <limits.h>
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum {
  DIGITS_KEPT = 800,          /* significant digits handed to strtod */
  EXPONENT_LIMIT = 100000000, /* a larger exponent is clipped: zero or overflow either way */
  EXPONENT_FROM = 16,         /* 1e16 and above are written with an exponent ... */
  EXPONENT_BELOW = -4         /* ... and so are numbers below 1e-4 */
};

static const double powers_of_ten[] = {1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,  1e8,  1e9,  1e10, 1e11,
                                       1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22};

/* A decimal number taken apart: 0.DIGITS * 10^exponent, without leading zeros. */
struct decimal {
  bool negative;
  bool more; /* non-zero digits beyond those kept */
  int count; /* digits kept */
  long exponent;
  char digits[DIGITS_KEPT];
};

static bool is_digit(char c) {
  return c >= '0' && c <= '9';
}

static bool word_is(const char *text, size_t size, const char *word) {
  if (strlen(word) != size) {
    return false;
  }
  for (size_t i = 0; i < size; i++) {
    if (tolower((unsigned char)text[i]) != word[i]) {
      return false;
    }
  }
  return true;
}

/* NaN or infinity spelt out, as tables and YAML have it. */
static bool parse_not_finite(const char *text, size_t size, double *value) {
  const bool negative = size > 0 && text[0] == '-';
  const size_t sign = size > 0 && (text[0] == '-' || text[0] == '+') ? 1 : 0;
  const char *word = text + sign;
  const size_t rest = size - sign;
  if (word_is(word, rest, "inf") || word_is(word, rest, ".inf") || word_is(word, rest, "infinity")) {
    *value = negative ? -(double)INFINITY : (double)INFINITY;
    return true;
  }
  if (sign == 0 && (word_is(word, rest, "nan") || word_is(word, rest, ".nan"))) {
    *value = (double)NAN;
    return true;
  }
  return false;
}

static void take_digit(struct decimal *decimal, char digit, bool after_point) {
  if (decimal->count == 0 && digit == '0') {
    decimal->exponent -= after_point ? 1 : 0;
    return;
  }
  if (decimal->count < DIGITS_KEPT) {
    decimal->digits[decimal->count++] = digit;
  } else if (digit != '0') {
    decimal->more = true;
  }
  decimal->exponent += after_point ? 0 : 1;
}

/* The exponent part from text[at] on; returns the place behind it, or 0 if it is malformed. */
static size_t take_exponent(const char *text, size_t size, size_t at, struct decimal *decimal) {
  const bool negative = at < size && text[at] == '-';
  at += at < size && (text[at] == '-' || text[at] == '+') ? 1 : 0;
  if (at >= size || !is_digit(text[at])) {
    return 0;
  }
  long exponent = 0;
  for (; at < size && is_digit(text[at]); at++) {
    exponent = exponent < EXPONENT_LIMIT ? exponent * 10 + (text[at] - '0') : exponent;
  }
  decimal->exponent += negative ? -exponent : exponent;
  return at;
}

static bool take_apart(const char *text, size_t size, struct decimal *decimal) {
  decimal->count = 0;
  decimal->exponent = 0;
  decimal->more = false;
  decimal->negative = size > 0 && text[0] == '-';
  size_t at = size > 0 && (text[0] == '-' || text[0] == '+') ? 1 : 0;
  const size_t first = at;
  for (; at < size && is_digit(text[at]); at++) {
    take_digit(decimal, text[at], false);
  }
  const size_t whole = at - first;
  if (whole > 1 && text[first] == '0') {
    return false;
  }
  size_t fraction = 0;
  if (at < size && text[at] == '.') {
    for (at++; at < size && is_digit(text[at]); at++, fraction++) {
      take_digit(decimal, text[at], true);
    }
  }
  if (whole + fraction == 0) {
    return false;
  }
  if (at < size && (text[at] == 'e' || text[at] == 'E')) {
    at = take_exponent(text, size, at + 1, decimal);
  }
  return at == size;
}

/* The exact product or quotient, when there is one. */
static bool convert_exactly(const struct decimal *decimal, double *value) {
  enum { MOST_DIGITS = 15 }; /* 10^15 < 2^53 */
  const long power = decimal->exponent - decimal->count;
  if (decimal->count > MOST_DIGITS || power > 22 || power < -22 || FLT_EVAL_METHOD != 0) {
    return false;
  }
  int64_t mantissa = 0;
  for (int i = 0; i < decimal->count; i++) {
    mantissa = mantissa * 10 + (decimal->digits[i] - '0');
  }
  *value = power < 0 ? (double)mantissa / powers_of_ten[-power] : (double)mantissa * powers_of_ten[power];
  return true;
}

static double convert(const struct decimal *decimal) {
  double value = 0.0;
  if (!convert_exactly(decimal, &value)) {
    char text[DIGITS_KEPT + 32];
    memcpy(text, decimal->digits, (size_t)decimal->count);
    size_t size = (size_t)decimal->count;
    text[size] = '1'; /* stands for whatever follows */
    size += decimal->more ? 1 : 0;
    snprintf(text + size, sizeof text - size, "e%ld", decimal->exponent - (long)size);
    value = strtod(text, NULL);
  }
  return decimal->negative ? -value : value;
}

enum lxg_text_parse lxg_text_parse_number(const char *text, size_t size, bool allow_not_finite,
                                          double *value) {
  struct decimal decimal;
  if (!take_apart(text, size, &decimal)) {
    double special = 0.0;
    if (!parse_not_finite(text, size, &special)) {
      return LXG_TEXT_NOT_A_NUMBER;
    }
    if (!allow_not_finite) {
      return LXG_TEXT_NOT_FINITE;
    }
    *value = special;
    return LXG_TEXT_NUMBER;
  }
  const double number = convert(&decimal);
  if (isinf(number)) {
    return LXG_TEXT_OVERFLOW;
  }
  *value = number;
  return LXG_TEXT_NUMBER;
}

bool lxg_text_parse_integer(const char *text, size_t size, long long *value) {
  const bool negative = size > 0 && text[0] == '-';
  const size_t first = size > 0 && (text[0] == '-' || text[0] == '+') ? 1 : 0;
  if (first == size || (text[first] == '0' && size - first > 1)) {
    return false;
  }
  long long sum = 0; /* kept negative: its range is the larger one */
  for (size_t i = first; i < size; i++) {
    if (!is_digit(text[i])) {
      return false;
    }
    const int digit = text[i] - '0';
    if (sum < (LLONG_MIN + digit) / 10) {
      return false;
    }
    sum = sum * 10 - digit;
  }
  if (!negative && sum == LLONG_MIN) {
    return false;
  }
  *value = negative ? sum : -sum;
  return true;
}

/* Decimal digits of |value| > 0 with `precision` of them; the value is d.ddd * 10^exponent. */
struct rounded {
  int count;
  int exponent;
  char digits[24];
};

static void round_to(double value, int precision, struct rounded *rounded) {
  char text[64];
  snprintf(text, sizeof text, "%.*e", precision - 1, fabs(value));
  const char *at = text;
  rounded->count = 0;
  for (; *at != 'e' && *at != '\0'; at++) {
    if (is_digit(*at)) { /* whatever the locale puts for the point is passed over */
      rounded->digits[rounded->count++] = *at;
    }
  }
  rounded->exponent = (int)strtol(*at == 'e' ? at + 1 : at, NULL, 10);
}

static bool reads_back(const struct rounded *rounded, double value) {
  struct decimal decimal = {.count = rounded->count, .exponent = rounded->exponent + 1};
  memcpy(decimal.digits, rounded->digits, (size_t)rounded->count);
  return convert(&decimal) == fabs(value);
}

/* At a power of two the doubles below lie closer than those above: the next decimal upwards may read back although the
 * nearest one does not. */
static bool next_reads_back(struct rounded *rounded, double value) {
  struct rounded next = *rounded;
  if (next.digits[next.count - 1] == '9') {
    return false; /* it would be a shorter number, which has been tried */
  }
  next.digits[next.count - 1]++;
  if (!reads_back(&next, value)) {
    return false;
  }
  *rounded = next;
  return true;
}

static void shortest(double value, struct rounded *rounded) {
  for (int precision = fabs(value) < DBL_MIN ? 1 : DBL_DIG; precision <= DBL_DECIMAL_DIG; precision++) {
    round_to(value, precision, rounded);
    if (reads_back(rounded, value) || next_reads_back(rounded, value)) {
      break;
    }
  }
  while (rounded->count > 1 && rounded->digits[rounded->count - 1] == '0') {
    rounded->count--;
  }
}

/* d.ddde+XX */
static size_t lay_out_exponent(const struct rounded *rounded, char *text, size_t size) {
  const int written =
      snprintf(text, size, "%c.%.*se%c%02d", rounded->digits[0], rounded->count > 1 ? rounded->count - 1 : 1,
               rounded->count > 1 ? rounded->digits + 1 : "0", rounded->exponent < 0 ? '-' : '+',
               abs(rounded->exponent));
  return (size_t)written;
}

/* ddd.ddd or 0.000ddd */
static size_t lay_out_plain(const struct rounded *rounded, char *text) {
  size_t used = 0;
  const int from = rounded->exponent < 0 ? rounded->exponent : 0;
  const int to = rounded->count - 1 > rounded->exponent + 1 ? rounded->count - 1 : rounded->exponent + 1;
  for (int i = from; i <= to; i++) {
    text[used++] = i >= 0 && i < rounded->count ? rounded->digits[i] : '0';
    if (i == rounded->exponent || (rounded->exponent < 0 && i == from)) {
      text[used++] = '.';
    }
  }
  text[used] = '\0';
  return used;
}

size_t lxg_text_format_number(double value, char text[LXG_TEXT_NUMBER_SIZE]) {
  if (!isfinite(value)) {
    return (size_t)snprintf(text, LXG_TEXT_NUMBER_SIZE, "%s",
                            isnan(value) ? "nan" : (value < 0.0 ? "-inf" : "inf"));
  }
  const size_t sign = signbit(value) ? 1 : 0;
  text[0] = '-';
  struct rounded rounded = {.count = 1, .exponent = 0, .digits = "0"};
  if (value != 0.0) {
    shortest(value, &rounded);
  }
  if (rounded.exponent >= EXPONENT_FROM || rounded.exponent < EXPONENT_BELOW) {
    return sign + lay_out_exponent(&rounded, text + sign, LXG_TEXT_NUMBER_SIZE - sign);
  }
  return sign + lay_out_plain(&rounded, text + sign);
}
