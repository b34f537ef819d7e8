/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_opacity_file.c - opacity tables in our own files: what is written comes back, what is wrong is refused.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/opacity_table.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

static char path[] = "/tmp/luxgale-opacity-XXXXXX";

static void make_path(void) {
  snprintf(path, sizeof path, "/tmp/luxgale-opacity-XXXXXX");
  const int file = mkstemp(path);
  ck_assert_int_ge(file, 0);
  close(file);
}

static void remove_path(void) {
  unlink(path);
}

static void write_text(const char *text) {
  FILE *file = fopen(path, "wb");
  ck_assert_ptr_nonnull(file);
  fputs(text, file);
  fclose(file);
}

/* Numbers with many digits, and holes. */
START_TEST(round_trip) {
  struct lxg_error error = {0};
  struct lxg_opacity_grid *grid = NULL, *back = NULL;
  assert_status(lxg_opacity_grid_create(5, 4, &grid, &error), LXG_OK, &error);
  grid->composition =
      (struct lxg_composition){.hydrogen = 0.3537, .helium = 0.3263, .cno = 0.3, .metals = 0.02};
  snprintf(grid->source, sizeof grid->source, "invented: \"quoted\", with a comma # and a hash");
  snprintf(grid->date, sizeof grid->date, "2026-02-03");
  for (size_t i = 0; i < 5; i++) {
    grid->log_t[i] = 4.0 + 0.1 * (double)i + 1.0 / 3e3;
  }
  for (size_t j = 0; j < 4; j++) {
    grid->log_r[j] = -7.0 + 0.5 * (double)j;
  }
  for (size_t k = 0; k < 20; k++) {
    grid->log_kappa[k] = k == 3 || k == 19 ? NAN : -0.5 + 1.0 / (3.0 + (double)k);
  }
  assert_status(lxg_opacity_grid_write(grid, path, &error), LXG_OK, &error);
  assert_status(lxg_opacity_grid_read(path, &back, &error), LXG_OK, &error);
  ck_assert_uint_eq(back->temperatures, 5);
  ck_assert_uint_eq(back->densities, 4);
  for (size_t k = 0; k < 20; k++) {
    ck_assert(back->log_kappa[k] == grid->log_kappa[k] ||
              (isnan(back->log_kappa[k]) && isnan(grid->log_kappa[k])));
  }
  for (size_t i = 0; i < 5; i++) {
    ck_assert(back->log_t[i] == grid->log_t[i]);
  }
  ck_assert(back->composition.hydrogen == 0.3537 && back->composition.cno == 0.3 &&
            back->composition.metals == 0.02);
  ck_assert_str_eq(back->source, grid->source);
  ck_assert_str_eq(back->date, grid->date);
  ck_assert_uint_eq(strlen(back->checksum), 64);
  lxg_opacity_grid_destroy(grid);
  lxg_opacity_grid_destroy(back);
}
END_TEST

#define COLUMNS(unit)                                                                                        \
  "# %ECSV 1.0\n# ---\n# delimiter: ','\n# datatype:\n# - {name: log_t, datatype: float64" unit "}\n"        \
  "# - {name: log_r, datatype: float64}\n# - {name: log_kappa, datatype: float64}\n"
#define META "# meta: {composition: {hydrogen: 0.7, helium: 0.28, cno: 0.0, metals: 0.02}}\n"
#define NAMES "log_t,log_r,log_kappa\n"
#define BLOCK                                                                                                \
  "4.0,-8.0,0.1\n4.0,-7.0,0.1\n4.0,-6.0,0.1\n4.0,-5.0,0.1\n4.1,-8.0,0.1\n4.1,-7.0,0.1\n4.1,-6.0,0.1\n4.1,-"  \
  "5.0,0.1\n"                                                                                                \
  "4.2,-8.0,0.1\n4.2,-7.0,0.1\n4.2,-6.0,0.1\n4.2,-5.0,0.1\n4.3,-8.0,0.1\n4.3,-7.0,0.1\n4.3,-6.0,0.1\n"

/* `place` must be in the message; code "" leaves the code to the table reader. */
static const struct {
  const char *text, *code, *place;
} refused[] = {
    {COLUMNS("") NAMES BLOCK, "opacity-table-composition", ""},
    {COLUMNS(", unit: K") META NAMES BLOCK, "opacity-table-unit", "log_t"},
    {COLUMNS("") META NAMES BLOCK "4.0,-8.0,0.3\n", "opacity-table-duplicate", ":25"},
    {COLUMNS("") META NAMES BLOCK "4.0,-8.0,0.3,0.4\n", "", ":25"},
    {COLUMNS("") META NAMES BLOCK "4.3,-5.0,nan\n", "", ":25"},
    {COLUMNS("") META NAMES BLOCK ",-5.0,0.1\n", "table-missing", ":25"},
    {COLUMNS("") META NAMES "4.0,-8.0,0.1\n", "opacity-grid-size", ""},
    {COLUMNS("") "# meta: {composition: {hydrogen: 0.7, helium: 0.48, cno: 0.0, metals: 0.02}}\n" NAMES BLOCK,
     "composition-sum", ""},
    {COLUMNS("") META NAMES BLOCK "40000.0,-5.0,0.1\n", "opacity-grid-range", "log T"},
    {"", "", ""},
};

START_TEST(bad_files) {
  struct lxg_error error = {0};
  struct lxg_opacity_grid *grid = NULL;
  write_text(refused[_i].text);
  const enum lxg_status status = lxg_opacity_grid_read(path, &grid, &error);
  ck_assert_msg(status == LXG_INPUT || status == LXG_LIMIT, "accepted %d", _i);
  ck_assert_ptr_null(grid);
  if (refused[_i].code[0] != '\0') {
    ck_assert_str_eq(error.code, refused[_i].code);
  }
  ck_assert_msg(strstr(error.line[0], refused[_i].place) != NULL, "%s lacks %s", error.line[0],
                refused[_i].place);
}
END_TEST

/* The tables that come with the program are what the formula says, to the five decimals kept. */
START_TEST(shipped_tables) {
  static const char *const names[] = {"nova-x35-cno50", "nova-x35-cno30", "nova-x45-cno20",
                                      "nova-x55-cno20", "nova-x55-cno10", "nova-x65-cno06"};
  char file[128];
  struct lxg_error error = {0};
  struct lxg_opacity_grid *grid = NULL;
  static struct lxg_opacity_findings findings;
  snprintf(file, sizeof file, "opacity/%s.ecsv", names[_i]);
  assert_status(lxg_opacity_grid_read(file, &grid, &error), LXG_OK, &error);
  struct lxg_opacity_check_options limits = lxg_opacity_check_defaults();
  limits.spike = 0.35; /* at log T 3.65, log R 0 the grid's step leaves 0.30 dex of H-minus' true bend */
  assert_status(lxg_opacity_check(grid, &limits, &findings, &error), LXG_OK, &error);
  ck_assert(fabs(findings.formula_most) < 1e-5);
  ck_assert_uint_eq(findings.missing + findings.gaps + findings.spikes, 0);
  ck_assert(strlen(grid->source) > 20 && strlen(grid->date) == 10);
  lxg_opacity_grid_destroy(grid);
}
END_TEST

START_TEST(no_such_file) {
  struct lxg_error error = {0};
  struct lxg_opacity_grid *grid = NULL;
  ck_assert_int_eq(lxg_opacity_grid_read("/nonexistent/a.ecsv", &grid, &error), LXG_IO);
  ck_assert_ptr_null(grid);
}
END_TEST

Suite *suite_opacity_file(void);
Suite *suite_opacity_file(void) {
  Suite *suite = suite_create("opacity_file");
  TCase *tests = tcase_create("opacity_file");
  tcase_add_checked_fixture(tests, make_path, remove_path);
  tcase_add_test(tests, round_trip);
  tcase_add_loop_test(tests, bad_files, 0, sizeof refused / sizeof refused[0]);
  tcase_add_loop_test(tests, shipped_tables, 0, 6);
  tcase_add_test(tests, no_such_file);
  suite_add_tcase(suite, tests);
  return suite;
}
