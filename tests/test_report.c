/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_report.c - reports hold the keys that scripts rely on, in one tree that reads back alike from YAML and JSON.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/report.h"

#include <stdio.h>
#include <string.h>

/* Paths that scripts rely on; the list is part of the interface, so a missing one is a broken promise. */
static const char *const star_paths[] = {"program.name",
                                         "program.version",
                                         "star.mass_msun",
                                         "star.radius_cm",
                                         "star.eddington_luminosity_erg_s",
                                         "star.escape_speed_km_s",
                                         "star.tiring_rate_msun_yr",
                                         "star.ignition_mass_msun"};
static const char *const wind_paths[] = {
    "wind.verdict",
    "wind.mass_loss_rate_msun_yr",
    "wind.energy_rate_erg_s",
    "wind.terminal_speed_km_s",
    "wind.envelope_mass_msun",
    "wind.critical.radius_cm",
    "wind.critical.temperature_k",
    "wind.critical.density_g_cm3",
    "wind.critical.speed_km_s",
    "wind.critical.optical_depth",
    "wind.photosphere.radius_rsun",
    "wind.photosphere.temperature_k",
    "wind.photosphere.luminosity_erg_s",
    "wind.photosphere.luminosity_ledd",
    "wind.photosphere.speed_km_s",
    "wind.base.radius_cm",
    "wind.base.temperature_k",
    "wind.base.density_g_cm3",
    "wind.base.luminosity_erg_s",
    "wind.base.luminosity_ledd",
    "wind.checks.residual_max",
    "wind.checks.mesh_points",
    "wind.checks.newton_steps",
    "wind.checks.flow_time_s",
    "wind.checks.diffusion_time_s",
    "wind.checks.tiring_number",
    "wind.checks.wind_performance",
};
static const char *const ejecta_paths[] = {
    "super_eddington.duration_d",
    "super_eddington.first_d",
    "super_eddington.last_d",
    "super_eddington.peak_ratio",
    "ejecta.mass_msun",
    "ejecta.kinetic_energy_erg",
    "ejecta.momentum_g_cm_s",
    "ejecta.mean_speed_km_s",
    "ejecta.peak_mass_loss_rate_msun_yr",
    "ejecta.peak_terminal_speed_km_s",
    "ejecta.wind_duration_d",
    "energy.radiated_erg",
    "energy.lifting_erg",
    "energy.kinetic_erg",
    "epochs.count",
    "epochs.solved",
    "epochs.none",
};
static const char *const epoch_columns[] = {"time_d",
                                            "luminosity_erg_s",
                                            "luminosity_ledd",
                                            "mass_loss_rate_msun_yr",
                                            "terminal_speed_km_s",
                                            "photosphere_radius_rsun",
                                            "photosphere_temperature_k",
                                            "photosphere_speed_km_s",
                                            "ejected_mass_msun",
                                            "verdict"};

static struct lxg_node *at(struct lxg_document *document, const char *path) {
  char copy[128];
  snprintf(copy, sizeof copy, "%s", path);
  struct lxg_node *node = lxg_document_root(document);
  char *rest = NULL;
  for (char *key = strtok_r(copy, ".", &rest); key != NULL; key = strtok_r(NULL, ".", &rest)) {
    node = lxg_node_find(node, key);
  }
  return node;
}

static double number(struct lxg_document *document, const char *path) {
  double value = NAN;
  struct lxg_error error = {0};
  return lxg_node_as_number(at(document, path), &value, &error) == LXG_OK ? value : (double)NAN;
}

static void assert_paths(struct lxg_document *document, const char *const paths[], size_t count) {
  for (size_t i = 0; i < count; i++) {
    ck_assert_msg(at(document, paths[i]) != NULL, "%s is missing", paths[i]);
  }
}

static struct lxg_document *create(void) {
  struct lxg_document *report = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_report_create("test", &report, &error), LXG_OK, &error);
  return report;
}

START_TEST(star) {
  const struct lxg_star body = {.gm = 1.1 * LXG_SOLAR_GM, .radius = 4.7896e8};
  const struct lxg_composition mixture = {.hydrogen = 0.7, .helium = 0.28, .metals = 0.02};
  struct lxg_document *report = create();
  lxg_report_star(lxg_document_root(report), &body, &mixture, 2e19);
  assert_paths(report, star_paths, sizeof star_paths / sizeof star_paths[0]);
  /* derived independently, as in test_star.c */
  assert_close(number(report, "star.eddington_luminosity_erg_s"), 1.1 * 1.4705e38, 4e-5);
  assert_close(number(report, "star.ignition_mass_msun"), 4.56e-5, 2e-3);
  assert_close(number(report, "star.escape_speed_km_s"), 7808.0, 1e-3);
  lxg_document_destroy(report);
}
END_TEST

/* A wind of invented numbers: every unit conversion by hand. */
START_TEST(wind) {
  struct lxg_wind solved = {.reason = LXG_WIND_SOLVED, .mesh_points = 77, .newton_steps = 5};
  solved.value[LXG_HELD_MASS_LOSS_RATE] = 2.5e21;
  solved.value[LXG_HELD_TERMINAL_SPEED] = 7.3e7;
  solved.value[LXG_HELD_ENVELOPE_MASS] = 3.1e28;
  solved.photosphere.radius = 3.4e11;
  solved.photosphere.luminosity = 1.3e38;
  solved.critical.optical_depth = 8.5;
  solved.flow_time = 100.0;
  solved.diffusion_time = 130.0;
  struct lxg_document *report = create();
  struct lxg_node *root = lxg_document_root(report);
  lxg_report_wind(root, &solved, 1.7e38);
  struct lxg_node *warnings = lxg_report_warnings(root);
  lxg_report_wind_warnings(warnings, &solved);
  assert_paths(report, wind_paths, sizeof wind_paths / sizeof wind_paths[0]);
  assert_close(number(report, "wind.mass_loss_rate_msun_yr"), 2.5e21 / 1.98840987e33 * 3.15576e7, 1e-8);
  assert_close(number(report, "wind.terminal_speed_km_s"), 730.0, 1e-14);
  assert_close(number(report, "wind.envelope_mass_msun"), 3.1e28 / 1.98840987e33, 1e-8);
  assert_close(number(report, "wind.photosphere.radius_rsun"), 3.4e11 / 6.957e10, 1e-14);
  assert_close(number(report, "wind.photosphere.luminosity_ledd"), 1.3 / 1.7, 1e-14);
  ck_assert_uint_eq(lxg_node_count(warnings), 2);
  ck_assert_str_eq(lxg_node_text(lxg_node_find(lxg_node_first(warnings), "code")), "thin-wind");
  lxg_document_destroy(report);
}
END_TEST

START_TEST(no_wind) {
  struct lxg_wind none = {.reason = LXG_WIND_STAGNATES, .residual = NAN};
  for (int i = 0; i < LXG_HELD_COUNT; i++) {
    none.value[i] = NAN;
  }
  struct lxg_document *report = create();
  struct lxg_node *root = lxg_document_root(report);
  lxg_report_wind(root, &none, 1.7e38);
  struct lxg_node *warnings = lxg_report_warnings(root);
  lxg_report_wind_warnings(warnings, &none);
  ck_assert_str_eq(lxg_node_text(at(report, "wind.verdict")), "none");
  ck_assert_str_eq(lxg_node_text(at(report, "wind.reason_code")), "stagnates");
  ck_assert(lxg_node_is_none(at(report, "wind.mass_loss_rate_msun_yr")));
  ck_assert(lxg_node_is_none(at(report, "wind.checks.residual_max")));
  ck_assert_uint_eq(lxg_node_count(warnings), 0);
  lxg_document_destroy(report);
}
END_TEST

static struct lxg_ejecta_epoch epochs[2];

static struct lxg_ejecta two_epochs(void) {
  epochs[0] = (struct lxg_ejecta_epoch){
      .time = 86400.0, .luminosity = 2.1e38, .reason = LXG_WIND_SOLVED, .members = 1};
  for (int i = 0; i < LXG_FAMILY_COUNT; i++) {
    epochs[0].place.value[i] = 4.5e6 * (i + 1);
  }
  epochs[1] =
      (struct lxg_ejecta_epoch){.time = 172800.0, .luminosity = 0.9e38, .reason = LXG_WIND_BELOW_THIN_END};
  for (int i = 0; i < LXG_FAMILY_COUNT; i++) {
    epochs[1].place.value[i] = NAN;
  }
  return (struct lxg_ejecta){.count = 2,
                             .epoch = epochs,
                             .solved = 1,
                             .none = 1,
                             .unsteady = 1,
                             .mass = 2e28,
                             .kinetic = 3e43,
                             .radiated = 5e44,
                             .lifting = 4e44,
                             .wind_duration = 43200.0};
}

START_TEST(ejecta) {
  const struct lxg_ejecta given = two_epochs();
  const struct lxg_history_excess excess = {.duration = 86400.0 * 3.5, .peak_ratio = 1.25, .open_end = true};
  const struct lxg_history history = {.gap_count = 0};
  struct lxg_document *report = create();
  struct lxg_node *root = lxg_document_root(report);
  lxg_report_super_eddington(root, &excess);
  lxg_report_ejecta(root, &given);
  lxg_report_ejecta_warnings(lxg_report_warnings(root), &given, &history, &excess);
  assert_paths(report, ejecta_paths, sizeof ejecta_paths / sizeof ejecta_paths[0]);
  assert_close(number(report, "super_eddington.duration_d"), 3.5, 1e-14);
  assert_close(number(report, "ejecta.mass_msun"), 2e28 / 1.98840987e33, 1e-8);
  assert_close(number(report, "ejecta.wind_duration_d"), 0.5, 1e-14);
  assert_close(number(report, "energy.lifting_share"), 4e44 / 9.3e44, 1e-14);
  ck_assert_uint_eq(lxg_node_count(at(report, "epochs.none_reasons")), 1);
  ck_assert_uint_eq(lxg_node_count(at(report, "warnings")), 2); /* not-steady, super-eddington-open */
  lxg_document_destroy(report);
}
END_TEST

/* Written as YAML and as JSON, read back: the same numbers to the last bit. */
START_TEST(reads_back) {
  const struct lxg_ejecta given = two_epochs();
  struct lxg_document *report = create(), *again[2] = {NULL, NULL};
  struct lxg_error error = {0};
  lxg_report_ejecta(lxg_document_root(report), &given);
  for (int json = 0; json < 2; json++) {
    struct lxg_buffer bytes = {0};
    assert_status(json ? lxg_document_write_json(lxg_document_root(report), &bytes, &error)
                       : lxg_document_write_yaml(lxg_document_root(report), false, &bytes, &error),
                  LXG_OK, &error);
    assert_status(lxg_document_parse(bytes.data, bytes.size, "r",
                                     json ? LXG_DOCUMENT_JSON : LXG_DOCUMENT_YAML, &again[json], &error),
                  LXG_OK, &error);
    ck_assert(number(again[json], "ejecta.mass_msun") == given.mass / LXG_SOLAR_MASS);
    ck_assert(number(again[json], "energy.kinetic_erg") == given.kinetic);
    lxg_buffer_free(&bytes);
    lxg_document_destroy(again[json]);
  }
  lxg_document_destroy(report);
}
END_TEST

START_TEST(epoch_table) {
  const struct lxg_ejecta given = two_epochs();
  struct lxg_table *table = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_report_epoch_table(&given, 1.5e38, &table, &error), LXG_OK, &error);
  for (size_t i = 0; i < sizeof epoch_columns / sizeof epoch_columns[0]; i++) {
    ck_assert_str_eq(table->column[i].name, epoch_columns[i]);
  }
  assert_close(table->column[0].number[1], 2.0, 1e-15);
  assert_close(table->column[2].number[0], 1.4, 1e-14);
  assert_close(table->column[4].number[0], 4.5e6 * (LXG_FAMILY_TERMINAL_SPEED + 1) / 1e5, 1e-14);
  ck_assert(lxg_table_is_missing(&table->column[3], 1));
  ck_assert_str_eq(lxg_table_text(table, &table->column[9], 1), "none");
  ck_assert_str_eq(lxg_table_text(table, &table->column[10], 1), "below-thin-end");
  lxg_table_destroy(table);
}
END_TEST

Suite *suite_report(void);
Suite *suite_report(void) {
  Suite *suite = suite_create("report");
  TCase *tests = tcase_create("report");
  tcase_add_test(tests, star);
  tcase_add_test(tests, wind);
  tcase_add_test(tests, no_wind);
  tcase_add_test(tests, ejecta);
  tcase_add_test(tests, reads_back);
  tcase_add_test(tests, epoch_table);
  suite_add_tcase(suite, tests);
  return suite;
}
