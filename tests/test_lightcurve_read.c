/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_lightcurve_read.c - light curves from tables: CSV and ECSV, time systems, flags, and every error with its line.
 */
#include "helpers.h"
#include "luxgale/lightcurve.h"
#include "luxgale/table.h"

#include <string.h>

/* Reads a text as a light curve; returns the status, fills code and message. */
static enum lxg_status read_text(const char *text, const struct lxg_lightcurve_options *options,
                                 struct lxg_light_curve *curve, struct lxg_error *error) {
  static const char *const texts[1] = {"band"};
  const struct lxg_table_options table_options = {.texts = texts, .texts_count = 1};
  struct lxg_table *table = NULL;
  assert_status(lxg_table_parse(text, strlen(text), "nova.csv", &table_options, &table, error), LXG_OK,
                error);
  const enum lxg_status status = lxg_lightcurve_read(table, options, curve, error);
  lxg_table_destroy(table);
  return status;
}

START_TEST(csv_days) {
  const struct lxg_lightcurve_options options = {.default_error = 0.07};
  struct lxg_light_curve curve;
  struct lxg_error error = {0};
  assert_status(read_text("time_d,band,magnitude,error,upper_limit,excluded\n"
                          "3.25,V,8.13,0.02,0,0\n"
                          "1.50,V,7.42,,0,1\n"
                          "2.00,B,7.91,0.05,,\n"
                          "9.75,K,6.60,0.11,1,0\n",
                          &options, &curve, &error),
                LXG_OK, &error);
  ck_assert_uint_eq(curve.count, 4);
  ck_assert_int_eq(curve.system, LXG_TIME_DAYS);
  ck_assert(curve.zero == 0.0);
  ck_assert(curve.point[0].time == 1.5 && curve.point[0].excluded && curve.point[0].error == 0.07);
  ck_assert(curve.point[1].band == LXG_BAND_B && curve.point[1].error == 0.05 && !curve.point[1].upper_limit);
  ck_assert(curve.point[2].magnitude == 8.13 && curve.point[2].row == 1);
  ck_assert(curve.point[3].band == LXG_BAND_K && curve.point[3].upper_limit && !curve.point[3].excluded);
  lxg_lightcurve_free(&curve);
}
END_TEST

START_TEST(ecsv_jd) {
  const struct lxg_lightcurve_options options = {.band_given = true, .band = LXG_BAND_V};
  struct lxg_light_curve curve;
  struct lxg_error error = {0};
  const char *text = "# %ECSV 1.0\n"
                     "# ---\n"
                     "# datatype:\n"
                     "# - {name: jd, unit: d, datatype: float64}\n"
                     "# - {name: magnitude, unit: mag, datatype: float64}\n"
                     "jd magnitude\n"
                     "2443771.300 7.87\n"
                     "2443763.550 6.0\n";
  assert_status(read_text(text, &options, &curve, &error), LXG_OK, &error);
  ck_assert_uint_eq(curve.count, 2);
  assert_close(curve.zero, 2443763.0, 1e-15);
  assert_near(curve.point[0].time, 0.55, 1e-8);
  assert_close(lxg_lightcurve_jd(&curve, curve.point[1].time), 2443771.3, 1e-14);
  lxg_lightcurve_free(&curve);
  const struct lxg_lightcurve_options given = {
      .band_given = true, .band = LXG_BAND_V, .zero_given = true, .zero = 2443759.5};
  assert_status(read_text(text, &given, &curve, &error), LXG_OK, &error);
  assert_near(curve.point[1].time, 11.8, 1e-8);
  lxg_lightcurve_free(&curve);
}
END_TEST

/* Every mistake, its code and the line it is found on. */
static const struct {
  const char *text, *code, *place;
} mistakes[] = {
    {"time_d,jd,band,magnitude\n1,2,V,7\n", "lightcurve-columns", "nova.csv"},
    {"epoch,band,magnitude\n1,V,7\n", "lightcurve-columns", "nova.csv"},
    {"time_d,magnitude\n1,7\n", "table-column", "band"},
    {"time_d,band\n1,V\n", "table-column", "magnitude"},
    {"time_d,band,magnitude\n1,V,7.2\n2,W,7.3\n", "band-unknown", "nova.csv:3"},
    {"time_d,band,magnitude\n1,V,7.2\n2,V,bright\n", "table-number", "nova.csv:3"},
    {"time_d,band,magnitude\n1,V,7.2\n2,V,99.9\n", "lightcurve-magnitude", "nova.csv:3"},
    {"time_d,band,magnitude\n1,V,7.2\n2,V,\n", "table-missing", "nova.csv:3"},
    {"time_d,band,magnitude\n,V,7.2\n", "table-missing", "nova.csv:2"},
    {"time_d,band,magnitude,error\n1,V,7.2,-0.1\n", "lightcurve-error", "nova.csv:2"},
    {"time_d,band,magnitude,upper_limit\n1,V,7.2,2\n", "lightcurve-flag", "nova.csv:2"},
    {"time_d [s],band,magnitude\n1,V,7.2\n", "lightcurve-unit", "time_d"},
    {"time_d,band,magnitude [Jy]\n1,V,7.2\n", "lightcurve-unit", "magnitude"},
};

START_TEST(errors) {
  const struct lxg_lightcurve_options options = {0};
  struct lxg_light_curve curve;
  struct lxg_error error = {0};
  ck_assert_int_eq(read_text(mistakes[_i].text, &options, &curve, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, mistakes[_i].code);
  ck_assert_msg(strstr(error.line[0], mistakes[_i].place) != NULL, "'%s' does not name %s", error.line[0],
                mistakes[_i].place);
  lxg_lightcurve_free(&curve);
}
END_TEST

START_TEST(no_rows) {
  const struct lxg_lightcurve_options options = {0};
  struct lxg_table *table = NULL;
  struct lxg_light_curve curve;
  struct lxg_error error = {0};
  assert_status(lxg_table_create("empty", &table, &error), LXG_OK, &error);
  ck_assert_int_eq(lxg_lightcurve_read(table, &options, &curve, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "lightcurve-empty");
  lxg_table_destroy(table);
}
END_TEST

Suite *suite_lightcurve_read(void);
Suite *suite_lightcurve_read(void) {
  Suite *suite = suite_create("lightcurve_read");
  TCase *tests = tcase_create("lightcurve_read");
  tcase_add_test(tests, csv_days);
  tcase_add_test(tests, ecsv_jd);
  tcase_add_loop_test(tests, errors, 0, sizeof mistakes / sizeof mistakes[0]);
  tcase_add_test(tests, no_rows);
  suite_add_tcase(suite, tests);
  return suite;
}
