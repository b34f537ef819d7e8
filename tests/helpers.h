/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * helpers.h - assertions shared by the test suites. Each tests/test_NAME.c defines `Suite *suite_NAME(void)`; the
 * Makefile collects them, so a new file needs no registration.
 */
#ifndef LUXGALE_TESTS_HELPERS_H
#define LUXGALE_TESTS_HELPERS_H

#include <check.h>
#include <math.h>

/* |value - expected| <= tolerance * |expected|; a NaN fails. */
#define assert_close(value, expected, tolerance)                                                             \
  do {                                                                                                       \
    const double assert_value_ = (value);                                                                    \
    const double assert_expected_ = (expected);                                                              \
    ck_assert_msg(fabs(assert_value_ - assert_expected_) <= (tolerance)*fabs(assert_expected_),              \
                  "%s = %.12g, expected %.12g within %.2g (off by %.2g)", #value, assert_value_,             \
                  assert_expected_, (double)(tolerance), assert_value_ / assert_expected_ - 1.0);            \
  } while (0)

/* |value - expected| <= tolerance (absolute); a NaN fails. */
#define assert_near(value, expected, tolerance)                                                              \
  do {                                                                                                       \
    const double assert_value_ = (value);                                                                    \
    const double assert_expected_ = (expected);                                                              \
    ck_assert_msg(fabs(assert_value_ - assert_expected_) <= (tolerance),                                     \
                  "%s = %.12g, expected %.12g within %.2g", #value, assert_value_, assert_expected_,         \
                  (double)(tolerance));                                                                      \
  } while (0)

/* Status must be `expected`; prints the error chain otherwise. */
#define assert_status(call, expected, error)                                                                 \
  do {                                                                                                       \
    const enum lxg_status assert_status_ = (call);                                                           \
    char assert_text_[2048];                                                                                 \
    lxg_error_text((error), assert_text_, sizeof assert_text_);                                              \
    ck_assert_msg(assert_status_ == (expected), "%s: %s\n%s", #call, lxg_strerror(assert_status_),           \
                  assert_status_ == LXG_OK ? "" : assert_text_);                                             \
  } while (0)

#endif
