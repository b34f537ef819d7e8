/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_settings.c - defaults, overrides and refusals of the list of tunables.
 */
#include "helpers.h"
#include "luxgale/settings.h"

#include <string.h>

static enum lxg_status read_text(const char *text, struct lxg_settings *settings, struct lxg_error *error) {
  struct lxg_document *document = NULL;
  enum lxg_status status =
      lxg_document_parse(text, strlen(text), "case.yaml", LXG_DOCUMENT_YAML, &document, error);
  ck_assert_int_eq(status, LXG_OK);
  lxg_settings_init(settings);
  status = lxg_settings_read(lxg_node_find(lxg_document_root(document), "settings"), settings, error);
  lxg_document_destroy(document);
  return status;
}

START_TEST(defaults_lie_in_range) {
  struct lxg_settings settings;
  lxg_settings_init(&settings);
  ck_assert_uint_ge(lxg_settings_count(), 2);
  for (size_t i = 0; i < lxg_settings_count(); i++) {
    const struct lxg_setting *const row = lxg_settings_row(i);
    ck_assert_msg(row->value >= row->minimum && row->value <= row->maximum, "%s", row->name);
    ck_assert_msg(row->sentence[strlen(row->sentence) - 1] == '.', "%s", row->name);
    ck_assert(lxg_settings_value(&settings, i) == row->value);
  }
  ck_assert_ptr_null(lxg_settings_row(lxg_settings_count()));
}
END_TEST

START_TEST(values_are_taken) {
  struct lxg_settings settings;
  struct lxg_error error = {0};
  assert_status(read_text("settings: {gap_fraction: 0.375, draws_maximum: 4321}", &settings, &error), LXG_OK,
                &error);
  ck_assert(settings.gap_fraction == 0.375);
  ck_assert_uint_eq(settings.draws_maximum, 4321);
  assert_status(read_text("other: 1", &settings, &error), LXG_OK, &error);
  ck_assert(settings.gap_fraction == 0.25);
}
END_TEST

static const struct {
  const char *text, *code, *words;
} refused[] = {
    {"settings: {gap_fractoin: 1}", "key-unknown",
     "case.yaml:1:12: error: settings.gap_fractoin: unknown key; did you mean gap_fraction?"},
    {"settings: {gap_fraction: wide}", "value-number", "case.yaml:1:26: error: settings.gap_fraction = wide"},
    {"settings: {gap_fraction: -1}", "value-range", "must lie between 0.001 and 1000.0"},
    {"settings: {draws_maximum: 1.5}", "value-integer", "whole number"},
    {"settings: {draws_maximum: 0}", "value-range", "must lie between 1.0"},
    {"settings: [1]", "kind-mapping", "settings: must be a mapping"},
};

START_TEST(refusals) {
  struct lxg_settings settings;
  struct lxg_error error = {0};
  ck_assert_int_eq(read_text(refused[_i].text, &settings, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, refused[_i].code);
  ck_assert_msg(strstr(error.line[0], refused[_i].words) != NULL, "%s", error.line[0]);
  ck_assert(settings.gap_fraction == 0.25);
}
END_TEST

Suite *suite_settings(void);
Suite *suite_settings(void) {
  Suite *suite = suite_create("settings");
  TCase *tests = tcase_create("settings");
  tcase_add_test(tests, defaults_lie_in_range);
  tcase_add_test(tests, values_are_taken);
  tcase_add_loop_test(tests, refusals, 0, sizeof refused / sizeof refused[0]);
  suite_add_tcase(suite, tests);
  return suite;
}
