/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_lines_read.c - tables of line measurements: CSV and ECSV with units, each way of giving a measurement, and what is
 * refused. The numbers are checked against lxg_lines_create and unit factors written out here.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/lines.h"

#include <stdio.h>
#include <string.h>
#include <unistd.h>

/* Writes the text to a new file and reads it back as lines. */
static enum lxg_status read_text(const char *text, struct lxg_lines **lines, char checksum[LXG_CHECKSUM_SIZE],
                                 struct lxg_error *error) {
  char path[64];
  snprintf(path, sizeof path, "/tmp/luxgale-lines-%ld.csv", (long)getpid());
  FILE *const file = fopen(path, "w");
  ck_assert(file != NULL && fputs(text, file) >= 0 && fclose(file) == 0);
  const enum lxg_status status = lxg_lines_read(path, lines, checksum, error);
  unlink(path);
  return status;
}

START_TEST(comma_separated) {
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  char checksum[LXG_CHECKSUM_SIZE] = "";
  assert_status(
      read_text("# invented numbers\n"
                "time,line,kind,component,rest_wavelength,wavelength,wavelength_error,medium,velocity,"
                "velocity_error,speed,speed_error,half_width,half_width_error,note\n"
                "2.5,H beta,absorption,principal,4861.363,4848.0,0.4,air,,,,,,,first\n"
                "2.5,,blue-edge,,,,,,-1310,25,,,,,\n"
                "7,Na D,absorption,,,,,,,,655.5,8,,,\n"
                "9,H alpha,half-maximum,,6564.61,,,vacuum,,,,,21.5,0.6,\n"
                "9,H alpha,emission-peak,,,,,,-31,4,,,,,\n",
                &lines, checksum, &error),
      LXG_OK, &error);
  ck_assert_int_eq((int)lines->count, 5);
  ck_assert_int_eq((int)strlen(checksum), 64);
  const double c = LXG_SPEED_OF_LIGHT, q = lxg_line_vacuum(4848.0e-8) / lxg_line_vacuum(4861.363e-8);
  assert_close(lines->line[0].velocity, c * (1.0 - q * q) / (1.0 + q * q), 1e-11);
  assert_close(lines->line[0].epoch, 2.5 * LXG_DAY, 1e-15);
  ck_assert_str_eq(lines->line[0].component, "principal");
  assert_close(lines->line[1].velocity, 1310e5, 1e-14);
  assert_close(lines->line[2].velocity, 655.5e5, 1e-14);
  assert_close(lines->line[2].error, 8e5, 1e-14);
  assert_close(lines->line[3].velocity, c * 21.5 / hypot(21.5, 6564.61), 1e-13);
  assert_close(lines->line[4].velocity, -31e5, 1e-14);
  ck_assert_str_eq(lines->line[2].label, "Na D");
  ck_assert(lines->line[0].row == 3 && lines->line[4].row == 7); /* lines of the file */
  lxg_lines_destroy(lines);
}
END_TEST

START_TEST(enhanced_with_units) {
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  assert_status(read_text("# %ECSV 1.0\n# ---\n# datatype:\n"
                          "# - {name: time, unit: s, datatype: float64}\n"
                          "# - {name: kind, datatype: string}\n"
                          "# - {name: speed, unit: cm / s, datatype: float64}\n"
                          "# - {name: speed_error, unit: km / s, datatype: float64}\n"
                          "time kind speed speed_error\n"
                          "86400.0 zero-intensity 2.5e8 30.0\n",
                          &lines, NULL, &error),
                LXG_OK, &error);
  assert_close(lines->line[0].epoch, 86400.0, 1e-15);
  assert_close(lines->line[0].velocity, 2.5e8, 1e-15);
  assert_close(lines->line[0].error, 3e6, 1e-15);
  lxg_lines_destroy(lines);
}
END_TEST

static void refuse(const char *text, const char *code, const char *word) {
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  char chain[2048];
  ck_assert_int_eq(read_text(text, &lines, NULL, &error), LXG_INPUT);
  lxg_error_text(&error, chain, sizeof chain);
  ck_assert_msg(strcmp(error.code, code) == 0, "%s: %s", error.code, chain);
  ck_assert_msg(strstr(chain, word) != NULL, "%s", chain);
  ck_assert(lines == NULL);
}

START_TEST(bad_tables) {
  refuse("time,kind,speed,speed_error\n1,absorption,500,10\n2,trough,500,10\n3,absorption,500,\n",
         "line-kind", "row 3");
  refuse("time,kind,speed,speed_error\n1,absorption,500,10\n2,trough,500,10\n3,absorption,500,\n",
         "line-kind", "row 4");
  refuse("time,kind,speed,speed_error\n1,absorption,,10\n", "line-measure", "row 2");
  refuse("time,kind,speed,speed_error,velocity,velocity_error\n1,absorption,500,10,-500,10\n", "line-measure",
         "row 2");
  refuse("time,kind,rest_wavelength,wavelength,wavelength_error\n1,absorption,5000,4990,1\n", "line-measure",
         "air");
  refuse("time,kind,rest_wavelength,wavelength,wavelength_error,medium\n1,absorption,5000,4990,1,water\n",
         "line-measure", "air");
  refuse("time,kind,wavelength,wavelength_error,medium\n1,absorption,4990,1,air\n", "line-rest", "row 2");
  refuse("time,kind,speed\n1,absorption,500\n", "line-error", "row 2");
  refuse("time,kind,speed,speed_error\n,absorption,500,10\n", "line-epoch", "row 2");
  refuse("time,kind,speeed,speed_error\n1,absorption,500,10\n", "line-column", "did you mean speed?");
  refuse("kind,speed,speed_error\nabsorption,500,10\n", "table-column", "time");
  refuse("time,speed,speed_error\n1,500,10\n", "table-column", "kind");
  refuse("time,kind,speed [parsec],speed_error\n1,absorption,500,10\n", "unit-dimension", "parsec");
}
END_TEST

START_TEST(no_such_file) {
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_lines_read("/nonexistent/lines.csv", &lines, NULL, &error), LXG_IO);
  ck_assert(lines == NULL);
}
END_TEST

Suite *suite_lines_read(void);
Suite *suite_lines_read(void) {
  Suite *suite = suite_create("lines_read");
  TCase *tests = tcase_create("lines_read");
  tcase_add_test(tests, comma_separated);
  tcase_add_test(tests, enhanced_with_units);
  tcase_add_test(tests, bad_tables);
  tcase_add_test(tests, no_such_file);
  suite_add_tcase(suite, tests);
  return suite;
}
