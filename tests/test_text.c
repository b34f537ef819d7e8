/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_text.c - numbers as text in any locale, nearest names, the byte buffer. The reference for reading is strtod in the
 * C locale (correctly rounded in the C library of Debian); known hard cases have their source beside them.
 */
#include "helpers.h"
#include "luxgale/text.h"

#include <float.h>
#include <locale.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

/* splitmix64 (Steele, Lea & Flood 2014): a reproducible stream of bits. */
static uint64_t next_bits(uint64_t *state) {
  uint64_t z = *state += 0x9e3779b97f4a7c15u;
  z = (z ^ z >> 30) * 0xbf58476d1ce4e5b9u;
  z = (z ^ z >> 27) * 0x94d049bb133111ebu;
  return z ^ z >> 31;
}

static double from_bits(uint64_t bits) {
  double value;
  memcpy(&value, &bits, sizeof value);
  return value;
}

static bool same_bits(double a, double b) {
  return memcmp(&a, &b, sizeof a) == 0;
}

static double parse(const char *text) {
  double value = -12345.0;
  ck_assert_msg(lxg_text_parse_number(text, strlen(text), false, &value) == LXG_TEXT_NUMBER, "%s", text);
  return value;
}

static void check_round_trip(double value) {
  char text[LXG_TEXT_NUMBER_SIZE];
  const size_t size = lxg_text_format_number(value, text);
  ck_assert_uint_eq(size, strlen(text));
  ck_assert_msg(strchr(text, '.') != NULL, "no dot in %s", text);
  const char *const exponent = strchr(text, 'e');
  ck_assert_msg(exponent == NULL || exponent[1] == '+' || exponent[1] == '-', "unsigned exponent in %s",
                text);
  ck_assert_msg(same_bits(parse(text), value), "%s is not %a", text, value);
  ck_assert_msg(same_bits(strtod(text, NULL), value), "the C library reads %s as %a", text,
                strtod(text, NULL));
}

/* 1e5 random bit patterns, so every exponent occurs, denormals too. */
START_TEST(random_doubles_round_trip) {
  uint64_t state = 20240229;
  for (int i = 0; i < 100000; i++) {
    const double value = from_bits(next_bits(&state));
    if (isfinite(value)) {
      check_round_trip(value);
    }
  }
  for (int exponent = -1074; exponent < 1024; exponent++) {
    check_round_trip(ldexp(1.0, exponent)); /* asymmetric neighbourhoods */
    check_round_trip(nextafter(ldexp(1.0, exponent), 0.0));
  }
}
END_TEST

/* Digits of a formatted number without leading and trailing zeros. */
static int significant_digits(const char *text) {
  int count = 0, zeros = 0;
  for (const char *at = text + strspn(text, "-0."); *at != '\0' && *at != 'e'; at++) {
    if (*at != '.') {
      zeros = *at == '0' ? zeros + 1 : 0;
      count++;
    }
  }
  return count - zeros;
}

/* Shortest: no text with one significant digit less reads back (checked against the C library's rounding). */
START_TEST(no_shorter_digits) {
  uint64_t state = 77;
  for (int i = 0; i < 20000; i++) {
    const double value = fabs(from_bits(next_bits(&state)));
    if (!isfinite(value) || value == 0.0) {
      continue;
    }
    char text[LXG_TEXT_NUMBER_SIZE], shorter[40];
    lxg_text_format_number(value, text);
    const int digits = significant_digits(text);
    if (digits > 1) {
      snprintf(shorter, sizeof shorter, "%.*e", digits - 2, value);
      ck_assert_msg(!same_bits(strtod(shorter, NULL), value), "%s is longer than %s", text, shorter);
    }
  }
}
END_TEST

static const struct {
  double value;
  const char *text;
} forms[] = {{0.0, "0.0"},
             {-0.0, "-0.0"},
             {1.0, "1.0"},
             {-123456.0, "-123456.0"},
             {0.1, "0.1"},
             {1.25e38, "1.25e+38"},
             {1e-5, "1.0e-05"},
             {0.0001, "0.0001"},
             {-0.00012345, "-0.00012345"},
             {1e16, "1.0e+16"},
             {9999999999999998.0, "9999999999999998.0"},
             {123456789.125, "123456789.125"},
             {5e-324, "5.0e-324"},
             {DBL_MAX, "1.7976931348623157e+308"},
             {2.2250738585072014e-308, "2.2250738585072014e-308"},
             {9007199254740993.0, "9007199254740992.0"},
             {5.684341886080802e-14, "5.684341886080802e-14"}}; /* 2^-44: 16 digits only from above */

START_TEST(formatted_forms) {
  char text[LXG_TEXT_NUMBER_SIZE];
  lxg_text_format_number(forms[_i].value, text);
  ck_assert_str_eq(text, forms[_i].text);
}
END_TEST

START_TEST(not_finite_forms) {
  char text[LXG_TEXT_NUMBER_SIZE];
  lxg_text_format_number((double)NAN, text);
  ck_assert_str_eq(text, "nan");
  lxg_text_format_number(-(double)INFINITY, text);
  ck_assert_str_eq(text, "-inf");
}
END_TEST

/* Halfway cases and the like; the expected values are hexadecimal constants of the compiler. */
START_TEST(hard_readings) {
  ck_assert(same_bits(parse("2.2250738585072011e-308"),
                      0x0.fffffffffffffp-1022));           /* the 2011 denormal bug of PHP and Java */
  ck_assert(same_bits(parse("9007199254740993"), 0x1p53)); /* tie to even */
  ck_assert(same_bits(parse("9007199254740993.00000000000000000000000000000001"), 0x1.0000000000001p53));
  ck_assert(same_bits(parse("1e23"), 0x1.52d02c7e14af6p76));
  ck_assert(same_bits(parse("+.5"), 0.5));
  ck_assert(same_bits(parse("5."), 5.0));
  ck_assert(same_bits(parse("-0"), -0.0));
  ck_assert(same_bits(parse("1e-400"), 0.0));
  ck_assert(same_bits(parse("0e999999999999999"), 0.0));
  ck_assert(same_bits(parse("0.000001E+6"), 1.0));
  /* 900 digits: half an ulp above one, then a one far behind. */
  char text[1000] = "1.00000000000000011102230246251565404236316680908203125";
  const size_t size = strlen(text);
  ck_assert(same_bits(parse(text), 1.0));
  memset(text + size, '0', 850);
  strcpy(text + size + 850, "1");
  ck_assert(same_bits(parse(text), 1.0 + DBL_EPSILON));
}
END_TEST

static const struct {
  const char *text;
  enum lxg_text_parse expected;
} refused[] = {
    {"", LXG_TEXT_NOT_A_NUMBER},      {".", LXG_TEXT_NOT_A_NUMBER},     {"+", LXG_TEXT_NOT_A_NUMBER},
    {"010", LXG_TEXT_NOT_A_NUMBER},   {"00", LXG_TEXT_NOT_A_NUMBER},    {"-01.5", LXG_TEXT_NOT_A_NUMBER},
    {"0x10", LXG_TEXT_NOT_A_NUMBER},  {"1_000", LXG_TEXT_NOT_A_NUMBER}, {"12:30", LXG_TEXT_NOT_A_NUMBER},
    {"1e", LXG_TEXT_NOT_A_NUMBER},    {"1e+", LXG_TEXT_NOT_A_NUMBER},   {"1d5", LXG_TEXT_NOT_A_NUMBER},
    {" 1", LXG_TEXT_NOT_A_NUMBER},    {"1 ", LXG_TEXT_NOT_A_NUMBER},    {"1,5", LXG_TEXT_NOT_A_NUMBER},
    {"1.5.2", LXG_TEXT_NOT_A_NUMBER}, {"--1", LXG_TEXT_NOT_A_NUMBER},   {"true", LXG_TEXT_NOT_A_NUMBER},
    {"e5", LXG_TEXT_NOT_A_NUMBER},    {"1e999", LXG_TEXT_OVERFLOW},     {"-1e309", LXG_TEXT_OVERFLOW},
    {"nan", LXG_TEXT_NOT_FINITE},     {"NaN", LXG_TEXT_NOT_FINITE},     {"-inf", LXG_TEXT_NOT_FINITE},
    {".inf", LXG_TEXT_NOT_FINITE},    {"Infinity", LXG_TEXT_NOT_FINITE}};

START_TEST(refused_numbers) {
  double value = 4.25;
  const char *const text = refused[_i].text;
  ck_assert_msg(lxg_text_parse_number(text, strlen(text), false, &value) == refused[_i].expected, "'%s'",
                text);
  ck_assert(value == 4.25);
}
END_TEST

START_TEST(not_finite_where_allowed) {
  double value = 0.0;
  ck_assert_int_eq(lxg_text_parse_number("nan", 3, true, &value), LXG_TEXT_NUMBER);
  ck_assert(isnan(value));
  ck_assert_int_eq(lxg_text_parse_number("-inf", 4, true, &value), LXG_TEXT_NUMBER);
  ck_assert(isinf(value) && value < 0.0);
  ck_assert_int_eq(lxg_text_parse_number("1e999", 5, true, &value), LXG_TEXT_OVERFLOW);
}
END_TEST

START_TEST(integers) {
  long long value = 0;
  ck_assert(lxg_text_parse_integer("-9223372036854775808", 20, &value) && value == INT64_MIN);
  ck_assert(lxg_text_parse_integer("9223372036854775807", 19, &value) && value == INT64_MAX);
  ck_assert(lxg_text_parse_integer("+17", 3, &value) && value == 17);
  ck_assert(!lxg_text_parse_integer("9223372036854775808", 19, &value));
  ck_assert(!lxg_text_parse_integer("-9223372036854775809", 20, &value));
  ck_assert(!lxg_text_parse_integer("010", 3, &value));
  ck_assert(!lxg_text_parse_integer("1.0", 3, &value));
  ck_assert(!lxg_text_parse_integer("-", 1, &value));
  ck_assert(!lxg_text_parse_integer("", 0, &value));
}
END_TEST

/* A German locale writes 1,5; it is built for the test because Debian ships the sources alone. */
START_TEST(german_locale) {
  char folder[] = "/tmp/luxgale-locale-XXXXXX";
  ck_assert_ptr_nonnull(mkdtemp(folder));
  char command[200];
  snprintf(command, sizeof command, "localedef -i de_DE -f UTF-8 %s/de_DE.UTF-8 >/dev/null 2>&1", folder);
  ck_assert_msg(system(command) == 0, "localedef is needed (package locales)");
  setenv("LOCPATH", folder, 1);
  ck_assert_ptr_nonnull(setlocale(LC_ALL, "de_DE.UTF-8"));
  char decimal[8];
  snprintf(decimal, sizeof decimal, "%.1f", 1.5);
  ck_assert_str_eq(decimal, "1,5"); /* so the locale is really at work */
  char text[LXG_TEXT_NUMBER_SIZE];
  lxg_text_format_number(-1234.5678, text);
  ck_assert_str_eq(text, "-1234.5678");
  lxg_text_format_number(6.62607015e-27, text);
  ck_assert_str_eq(text, "6.62607015e-27");
  ck_assert(same_bits(parse("0.1234567890123456789"), 0x1.f9add3746f65fp-4));
  ck_assert(same_bits(parse("1.7976931348623157e308"), DBL_MAX));
  setlocale(LC_ALL, "C");
  snprintf(command, sizeof command, "rm -r %s", folder);
  ck_assert(system(command) == 0);
}
END_TEST

START_TEST(nearest_names) {
  static const char *const names[] = {"mass", "radius", "composition", "opacity"};
  static const char *const close[] = {"time_s", "times", "time"};
  ck_assert_str_eq(lxg_text_nearest("time_", close, 3), "time_s"); /* the first of equals */
  ck_assert_str_eq(lxg_text_nearest("tme", close, 3), "time");     /* the nearest of three */
  ck_assert_str_eq(lxg_text_nearest("mas", names, 4), "mass");
  ck_assert_str_eq(lxg_text_nearest("raduis", names, 4), "radius");
  ck_assert_str_eq(lxg_text_nearest("Opacities", names, 4), "opacity");
  ck_assert_str_eq(lxg_text_nearest("compostion", names, 4), "composition");
  ck_assert_ptr_null(lxg_text_nearest("luminosity", names, 4));
  ck_assert_ptr_null(lxg_text_nearest("", names, 4));
  ck_assert_ptr_null(lxg_text_nearest("mass", names, 0));
  char longest[300];
  memset(longest, 'm', sizeof longest - 1);
  longest[sizeof longest - 1] = '\0';
  ck_assert_ptr_null(lxg_text_nearest(longest, names, 4));
}
END_TEST

/* Table 3-7 of the Unicode standard. */
START_TEST(utf8_sequences) {
  ck_assert_uint_eq(lxg_text_utf8("a", 1), 1);
  ck_assert_uint_eq(lxg_text_utf8("\xC3\xA9", 2), 2);
  ck_assert_uint_eq(lxg_text_utf8("\xE2\x82\xAC", 3), 3);
  ck_assert_uint_eq(lxg_text_utf8("\xF0\x9F\x98\x80", 4), 4);
  static const char *const bad[] = {"\x80",
                                    "\xC0\x80",
                                    "\xC3",
                                    "\xC3(",
                                    "\xE0\x80\x80",
                                    "\xED\xA0\x80",
                                    "\xF0\x80\x80\x80",
                                    "\xF4\x90\x80\x80",
                                    "\xF5\x80\x80\x80"};
  for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++) {
    ck_assert_uint_eq(lxg_text_utf8(bad[i], strlen(bad[i])), 0);
  }
  ck_assert_uint_eq(lxg_text_utf8("", 0), 0);
}
END_TEST

START_TEST(buffer_grows) {
  struct lxg_buffer buffer = {0};
  struct lxg_error error = {0};
  for (int i = 0; i < 1000; i++) {
    lxg_buffer_format(&buffer, "%d,", i);
  }
  lxg_buffer_number(&buffer, 0.25);
  lxg_buffer_byte(&buffer, '!');
  assert_status(lxg_buffer_status(&buffer, &error), LXG_OK, &error);
  ck_assert_uint_eq(buffer.size, 2890 + 1000 + 4 + 1);
  ck_assert_str_eq(buffer.data + buffer.size - 9, "999,0.25!");
  lxg_buffer_append(&buffer, "x", SIZE_MAX - 8); /* refused before anything is read */
  ck_assert_int_eq(lxg_buffer_status(&buffer, &error), LXG_MEMORY);
  lxg_buffer_text(&buffer, "more");
  ck_assert_uint_eq(buffer.size, 3895);
  lxg_buffer_free(&buffer);
  ck_assert_ptr_null(buffer.data);
  lxg_buffer_free(NULL);
}
END_TEST

Suite *suite_text(void);
Suite *suite_text(void) {
  Suite *suite = suite_create("text");
  TCase *tests = tcase_create("text");
  tcase_set_timeout(tests, 60);
  tcase_add_test(tests, random_doubles_round_trip);
  tcase_add_test(tests, no_shorter_digits);
  tcase_add_loop_test(tests, formatted_forms, 0, sizeof forms / sizeof forms[0]);
  tcase_add_test(tests, not_finite_forms);
  tcase_add_test(tests, hard_readings);
  tcase_add_loop_test(tests, refused_numbers, 0, sizeof refused / sizeof refused[0]);
  tcase_add_test(tests, not_finite_where_allowed);
  tcase_add_test(tests, integers);
  tcase_add_test(tests, german_locale);
  tcase_add_test(tests, nearest_names);
  tcase_add_test(tests, utf8_sequences);
  tcase_add_test(tests, buffer_grows);
  suite_add_tcase(suite, tests);
  return suite;
}
