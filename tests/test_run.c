/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_run.c - whole commands on case files, against numbers from outside.
 *
 * The three check winds were solved independently with a general-purpose collocation code (tolerance 1e-7, all digits shown
 * converged) for the closed-form test opacity; holding other pairs of their columns must return the same winds.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/run.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

/* A number of a report by its path, NaN if absent or null. */
static double number(const struct lxg_results *results, const char *path) {
  char copy[128];
  snprintf(copy, sizeof copy, "%s", path);
  struct lxg_node *node = lxg_document_root(results->report);
  char *rest = NULL;
  for (char *key = strtok_r(copy, ".", &rest); key != NULL; key = strtok_r(NULL, ".", &rest)) {
    node = lxg_node_find(node, key);
  }
  double value = NAN;
  struct lxg_error error = {0};
  return lxg_node_as_number(node, &value, &error) == LXG_OK ? value : (double)NAN;
}

static const char *text(const struct lxg_results *results, const char *section, const char *key) {
  return lxg_node_text(lxg_node_find(lxg_node_find(lxg_document_root(results->report), section), key));
}

/* Reads a case from text, through a file. */
static void read_text(const char *yaml, struct lxg_case *input) {
  char path[] = "/tmp/luxgale-test-XXXXXX";
  const int file = mkstemp(path);
  ck_assert(file >= 0 && write(file, yaml, strlen(yaml)) == (ssize_t)strlen(yaml));
  close(file);
  struct lxg_error error = {0};
  assert_status(lxg_case_read(input, path, NULL, 0, &error), LXG_OK, &error);
  unlink(path);
}

static const struct check_wind {
  double mass, hydrogen, metals, base_temperature, log_launch;
  double critical_temperature, rate, energy, photosphere_luminosity, base_luminosity; /* K, Msun/yr, L_Edd */
  double photosphere_temperature, photosphere_radius, photosphere_speed, terminal_speed,
      envelope; /* K, Rsun, km/s, Msun */
} check_winds[] = {
    {1.00, 0.35, 0.02, 1.0e8, 10.3, 410292.9, 3.905990e-5, 0.7476342, 0.7147780, 1.056413, 36255.01, 4.713092,
     667.6978, 650.5136, 1.02769e-5},
    {0.70, 0.50, 0.02, 0.8e8, 10.5, 336208.7, 8.282352e-5, 0.4836913, 0.4748182, 0.8669532, 12315.43,
     26.42353, 203.4525, 183.4462, 4.00179e-5},
    {1.25, 0.55, 0.04, 1.2e8, 10.2, 447547.3, 2.598221e-5, 0.8061609, 0.7629484, 1.154989, 53126.83, 2.366096,
     968.9090, 946.1413, 2.47497e-6},
};

static void read_check_wind(const struct check_wind *row, const char *hold, const char *more,
                            struct lxg_case *input) {
  /* R_0 of the check winds: 7.83e8 cm [(1.44/M)^(2/3) - (M/1.44)^(2/3)]^(1/2) */
  const double radius = 7.83e8 * sqrt(pow(1.44 / row->mass, 2.0 / 3.0) - pow(row->mass / 1.44, 2.0 / 3.0));
  char yaml[1024];
  snprintf(yaml, sizeof yaml,
           "case: 1\nstar: {mass: %.17g, radius: %.17g}\ncomposition: {hydrogen: %.17g, metals: %.17g}\n"
           "opacity: {formula: reference}\nhold: {%s}\n%s",
           row->mass, radius, row->hydrogen, row->metals, hold, more);
  read_text(yaml, input);
}

/* Every number of a check wind; 1e-5 as published there, speeds and envelope mass included. */
static void assert_check_wind(const struct lxg_results *results, const struct check_wind *row, double l_edd) {
  const double tolerance = 1e-5;
  assert_close(number(results, "wind.critical.temperature_k"), row->critical_temperature, tolerance);
  assert_close(number(results, "wind.mass_loss_rate_msun_yr"), row->rate, tolerance);
  assert_close(number(results, "wind.energy_rate_erg_s") / l_edd, row->energy, tolerance);
  assert_close(number(results, "wind.photosphere.luminosity_ledd"), row->photosphere_luminosity, tolerance);
  assert_close(number(results, "wind.base.luminosity_ledd"), row->base_luminosity, tolerance);
  assert_close(number(results, "wind.photosphere.temperature_k"), row->photosphere_temperature, tolerance);
  assert_close(number(results, "wind.photosphere.radius_rsun"), row->photosphere_radius, tolerance);
  assert_close(number(results, "wind.photosphere.speed_km_s"), row->photosphere_speed, tolerance);
  assert_close(number(results, "wind.terminal_speed_km_s"), row->terminal_speed, tolerance);
  assert_close(number(results, "wind.envelope_mass_msun"), row->envelope, tolerance);
  ck_assert(number(results, "wind.checks.residual_max") < 1e-6);
}

START_TEST(check_wind) {
  const struct check_wind *row = &check_winds[_i];
  struct lxg_error error = {0};
  struct lxg_case input;
  struct lxg_results results = {0};
  char hold[128];
  snprintf(hold, sizeof hold, "base_temperature: %.17g, launch_radius: %.17g", row->base_temperature,
           pow(10.0, row->log_launch));
  read_check_wind(row, hold, "", &input);
  assert_status(lxg_run_wind(&input, &(struct lxg_run_options){0}, &results, &error), LXG_OK, &error);
  ck_assert(results.answered);
  assert_check_wind(&results, row, input.l_edd);
  lxg_results_free(&results);
  lxg_case_free(&input);
}
END_TEST

/* A constant base luminosity for ten days: ten days of the check wind. The rate rises as about the fiftieth power of the base
 * luminosity, whose seven digits thus leave 1e-5, and the family interpolates to 1e-4. */
START_TEST(constant_outburst) {
  const struct check_wind *row = &check_winds[0];
  const double tolerance = 2e-4, days = 10.0;
  struct lxg_error error = {0};
  struct lxg_case input;
  struct lxg_results results = {0};
  read_check_wind(
      row, "base_temperature: 1e8",
      "luminosity: {kind: formula, end: 10 d, terms: [{law: constant, luminosity: 1.056413 Ledd}]}\n",
      &input);
  assert_status(lxg_run_outburst(&input, &(struct lxg_run_options){.epochs = true}, &results, &error), LXG_OK,
                &error);
  ck_assert(results.answered);
  const double mass = row->rate * days / 365.25;                                           /* [Msun] */
  const double kinetic = 0.5 * mass * 1.98840987e33 * pow(row->terminal_speed * 1e5, 2.0); /* [erg] */
  assert_close(number(&results, "ejecta.mass_msun"), mass, tolerance);
  assert_close(number(&results, "ejecta.mean_speed_km_s"), row->terminal_speed, tolerance);
  assert_close(number(&results, "ejecta.kinetic_energy_erg"), kinetic, 3.0 * tolerance);
  assert_close(number(&results, "ejecta.wind_duration_d"), days, 1e-12);
  assert_close(number(&results, "super_eddington.duration_d"), days, 1e-12);
  assert_close(number(&results, "super_eddington.peak_ratio"), 1.056413, 1e-12);
  const struct lxg_column *verdict = lxg_table_find(results.epochs, "verdict");
  ck_assert_ptr_nonnull(verdict);
  ck_assert_str_eq(lxg_table_text(results.epochs, verdict, 0), "solved");
  lxg_results_free(&results);
  lxg_case_free(&input);
}
END_TEST

/* Too faint for any wind: said with a reason, the report still whole. */
START_TEST(faint_outburst) {
  struct lxg_error error = {0};
  struct lxg_case input;
  struct lxg_results results = {0};
  read_check_wind(&check_winds[0], "base_temperature: 1e8",
                  "luminosity: {kind: formula, end: 10 d, terms: [{law: constant, luminosity: 0.2 Ledd}]}\n",
                  &input);
  assert_status(lxg_run_outburst(&input, &(struct lxg_run_options){0}, &results, &error), LXG_OK, &error);
  ck_assert(!results.answered);
  ck_assert_str_eq(text(&results, "ejecta", "verdict"), "none");
  ck_assert_str_eq(text(&results, "ejecta", "reason_code"), "below-thin-end");
  ck_assert_str_eq(results.why.code, "below-thin-end");
  assert_near(number(&results, "ejecta.mass_msun"), 0.0, 0.0);
  assert_near(number(&results, "super_eddington.duration_d"), 0.0, 0.0);
  lxg_results_free(&results);
  lxg_case_free(&input);
}
END_TEST

/* What a command needs of the case. */
START_TEST(commands_refuse) {
  struct lxg_error error = {0};
  struct lxg_case input;
  struct lxg_results results = {0};
  const struct lxg_run_options options = {0};
  read_check_wind(&check_winds[0], "base_temperature: 1e8", "", &input);
  ck_assert_int_eq(lxg_run_wind(&input, &options, &results, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "hold-count");
  lxg_results_free(&results);
  ck_assert_int_eq(lxg_run_outburst(&input, &options, &results, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "key-missing");
  lxg_results_free(&results);
  lxg_case_free(&input);
  read_check_wind(&check_winds[0], "base_luminosity: 1e38",
                  "luminosity: {kind: formula, end: 10 d, terms: [{law: constant, luminosity: 1 Ledd}]}\n",
                  &input);
  ck_assert_int_eq(lxg_run_outburst(&input, &options, &results, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "hold-dependent");
  lxg_results_free(&results);
  lxg_case_free(&input);
}
END_TEST

/* The wind phase of an eruption, taken as a luminosity history, must throw out what the eruption itself says: the mass is summed
 * along the luminosity there and along the envelope mass here. 1e-3: the spacing of the states. */
START_TEST(eruption_as_history) {
  struct lxg_case input;
  read_text("case: 1\nstar: {mass: 1.19}\ncomposition: {hydrogen: 0.47, cno: 0.17, metals: 0.02}\n"
            "burning: {law: cno}\ndecline: {start_temperature: 1.9e4 K}\nluminosity: {kind: decline}\n",
            &input);
  struct lxg_error error = {0};
  const struct lxg_run_options options = {.branch = LXG_BRANCH_THIN};
  struct lxg_results whole = {0}, outburst = {0};
  assert_status(lxg_run_decline(&input, &options, &whole, &error), LXG_OK, &error);
  assert_status(lxg_run_outburst(&input, &options, &outburst, &error), LXG_OK, &error);
  ck_assert(whole.answered && outburst.answered);
  assert_close(number(&outburst, "ejecta.mass_msun"), number(&whole, "decline.ejected_mass_msun"), 1e-3);
  assert_close(number(&outburst, "ejecta.kinetic_energy_erg"), number(&whole, "decline.kinetic_energy_erg"),
               1e-3);
  assert_close(number(&outburst, "ejecta.wind_duration_d"), number(&whole, "decline.wind_duration_d"), 1e-3);
  ck_assert_str_eq(text(&whole, "decline", "verdict"), "solved");
  lxg_results_free(&whole);
  lxg_results_free(&outburst);
  lxg_case_free(&input);
}
END_TEST

Suite *suite_run(void);
Suite *suite_run(void) {
  Suite *suite = suite_create("run");
  TCase *tests = tcase_create("run");
  tcase_set_timeout(tests, 60);
  tcase_add_loop_test(tests, check_wind, 0, sizeof check_winds / sizeof check_winds[0]);
  tcase_add_test(tests, constant_outburst);
  tcase_add_test(tests, faint_outburst);
  tcase_add_test(tests, commands_refuse);
  tcase_add_test(tests, eruption_as_history);
  suite_add_tcase(suite, tests);
  return suite;
}
