/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_case_read.c - sections of a case into structs, and what is refused with which code.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/document.h"
#include "luxgale/files.h"
#include "luxgale/history.h"
#include "luxgale/keys.h"
#include "luxgale/memory.h"
#include "luxgale/opacity.h"
#include "luxgale/porosity.h"
#include "luxgale/star.h"
#include "luxgale/wind.h"

#include <string.h>

/* Parses one section; the document stays alive until the next call of `drop`. */
static struct lxg_document *document;

static struct lxg_node *section(const char *yaml) {
  struct lxg_error error = {0};
  assert_status(lxg_document_parse(yaml, strlen(yaml), "t.yaml", LXG_DOCUMENT_YAML, &document, &error),
                LXG_OK, &error);
  return lxg_document_root(document);
}

static void drop(void) {
  lxg_document_destroy(document);
  document = NULL;
}

static void assert_refused(enum lxg_status status, const struct lxg_error *error, const char *code) {
  ck_assert_int_eq(status, LXG_INPUT);
  ck_assert_str_eq(error->code, code);
  ck_assert_msg(strncmp(error->line[0], "t.yaml:", 7) == 0, "no place: %s", error->line[0]);
  drop();
}

START_TEST(star) {
  struct lxg_error error = {0};
  struct lxg_star read;
  bool dwarf = false;
  assert_status(lxg_star_read(section("{mass: 0.83 Msun, radius: 2.5 Rsun}"), &read, &dwarf, &error), LXG_OK,
                &error);
  assert_close(read.gm, 0.83 * 1.3271244e26, 1e-15);
  assert_close(read.radius, 2.5 * 6.957e10, 1e-15);
  ck_assert(!dwarf);
  drop();
  assert_status(lxg_star_read(section("{mass: 1.98840987e33 g}"), &read, &dwarf, &error), LXG_OK, &error);
  ck_assert(dwarf);
  assert_close(read.radius, 5.560e8, 3e-4); /* Nauenberg 1972, evaluated independently (see test_star.c) */
  drop();
}
END_TEST

static const struct {
  const char *yaml, *code;
} bad_stars[] = {{"{radius: 1 Rsun}", "key-missing"},
                 {"{mass: 1.46}", "star-dwarf-mass"},
                 {"{mass: 0}", "value-range"},
                 {"{mass: 2e4, radius: 1 Rsun}", "value-range"},
                 {"{mass: 1, radius: 1e4 cm}", "value-range"},
                 {"{mass: 1, radius: dwarf}", "quantity-number"},
                 {"{mass: 1 cm}", "unit-dimension"},
                 {"{mass: 1, weight: 3}", "key-unknown"},
                 {"[1]", "kind-mapping"}};

START_TEST(star_refused) {
  struct lxg_error error = {0};
  struct lxg_star read;
  bool dwarf;
  assert_refused(lxg_star_read(section(bad_stars[_i].yaml), &read, &dwarf, &error), &error,
                 bad_stars[_i].code);
}
END_TEST

START_TEST(composition) {
  struct lxg_error error = {0};
  struct lxg_composition read;
  assert_status(lxg_composition_read(section("{hydrogen: 0.41, cno: 0.17}"), &read, &error), LXG_OK, &error);
  assert_close(read.metals, 0.02, 1e-15);
  assert_close(read.helium, 0.40, 1e-14);
  drop();
  assert_refused(lxg_composition_read(section("{hydrogen: 0.9, cno: 0.2}"), &read, &error), &error,
                 "composition-range");
  assert_refused(lxg_composition_read(section("{hydrogen: 0.4, helium: 0.4}"), &read, &error), &error,
                 "composition-sum");
  assert_refused(lxg_composition_read(section("{helium: 1.0}"), &read, &error), &error, "key-missing");
}
END_TEST

START_TEST(porosity) {
  struct lxg_error error = {0};
  struct lxg_porosity read;
  assert_status(lxg_porosity_read(NULL, &read, &error), LXG_OK, &error);
  ck_assert_int_eq(read.law, LXG_POROSITY_NONE);
  assert_status(lxg_porosity_read(section("{law: length, scale: 1.3, power: 2.5}"), &read, &error), LXG_OK,
                &error);
  ck_assert_int_eq(read.law, LXG_POROSITY_POWER);
  assert_close(read.scale, 1.3, 1e-15);
  assert_close(read.alpha, 2.5, 1e-15);
  drop();
  assert_status(lxg_porosity_read(section("{law: reduction, factor: 1.7}"), &read, &error), LXG_OK, &error);
  ck_assert_int_eq(read.law, LXG_POROSITY_REDUCTION);
  assert_close(read.factor, 1.7, 1e-15);
  drop();
  assert_refused(lxg_porosity_read(section("{law: length}"), &read, &error), &error, "key-missing");
  assert_refused(lxg_porosity_read(section("{law: length, scale: 1, factor: 2}"), &read, &error), &error,
                 "porosity-unused");
  assert_refused(lxg_porosity_read(section("{law: reduction, factor: 0.9}"), &read, &error), &error,
                 "porosity-factor");
}
END_TEST

START_TEST(hold) {
  struct lxg_error error = {0};
  struct lxg_wind_hold read[2];
  size_t count = 0;
  const struct lxg_star body = {.gm = LXG_SOLAR_GM, .radius = 5.6e8};
  struct lxg_node *node = section("{base_luminosity: 1.25 Ledd, terminal_speed: 640}");
  assert_status(lxg_wind_hold_read(node, &body, 1.7e38, read, &count, &error), LXG_OK, &error);
  ck_assert_uint_eq(count, 2);
  ck_assert_int_eq(read[0].quantity, LXG_HELD_BASE_LUMINOSITY);
  assert_close(read[0].value, 1.25 * 1.7e38, 1e-15);
  assert_close(read[1].value, 640e5, 1e-15);
  drop();
  node = section("{mass_loss_rate: 2.5e-5 Msun/yr}");
  assert_status(lxg_wind_hold_read(node, &body, 1.7e38, read, &count, &error), LXG_OK, &error);
  assert_close(read[0].value, 2.5e-5 * 1.98840987e33 / 3.15576e7, 1e-8);
  drop();
  assert_status(lxg_wind_hold_read(section("{energy_rate: -1e36}"), &body, 1.7e38, read, &count, &error),
                LXG_OK, &error);
  drop();
  assert_refused(lxg_wind_hold_read(section("{launch_radius: 5e8 cm}"), &body, 1.7e38, read, &count, &error),
                 &error, "hold-launch-radius");
  assert_refused(lxg_wind_hold_read(section("{base_temperature: -1}"), &body, 1.7e38, read, &count, &error),
                 &error, "hold-value");
  assert_refused(lxg_wind_hold_read(section("{base_temperature: 1e8, terminal_speed: 1, envelope_mass: 1}"),
                                    &body, 1.7e38, read, &count, &error),
                 &error, "hold-many");
}
END_TEST

START_TEST(opacity) {
  struct lxg_error error = {0};
  struct lxg_files files = {0};
  struct lxg_opacity_choice choice;
  struct lxg_opacity *built = NULL;
  const struct lxg_composition mixture = {.hydrogen = 0.45, .helium = 0.35, .cno = 0.18, .metals = 0.02};
  struct lxg_node *node = section("{formula: kramers, omit: [iron, helium]}");
  assert_status(lxg_opacity_read(node, &files, &mixture, &choice, &built, &error), LXG_OK, &error);
  ck_assert_uint_eq(choice.omit,
                    LXG_OPACITY_BIT(LXG_OPACITY_SOURCE_IRON) | LXG_OPACITY_BIT(LXG_OPACITY_SOURCE_HELIUM));
  lxg_opacity_destroy(built);
  drop();
  node = section("{formula: reference, omit: [iron]}");
  assert_refused(lxg_opacity_read(node, &files, &mixture, &choice, &built, &error), &error, "opacity-omit");
  node = section("{omit: [gold]}");
  assert_refused(lxg_opacity_read(node, &files, &mixture, &choice, &built, &error), &error, "opacity-source");
  node = section("{outside: clamp}");
  assert_refused(lxg_opacity_read(node, &files, &mixture, &choice, &built, &error), &error, "opacity-unused");
}
END_TEST

/* exp(-s/tau) over [0, 3 tau]: radiated energy L tau (1 - e^-3), by hand. */
START_TEST(formula_history) {
  struct lxg_error error = {0};
  struct lxg_files files = {0};
  const struct lxg_composition mixture = {.hydrogen = 0.45, .helium = 0.35, .cno = 0.18, .metals = 0.02};
  const struct lxg_history_reading reading = {
      .files = &files, .composition = &mixture, .l_edd = 1.6e38, .gap_fraction = 0.25};
  struct lxg_history *history = NULL;
  struct lxg_node *node =
      section("{kind: formula, at: photosphere, end: 60 d, terms: [{law: exponential, luminosity: "
              "2.5 Ledd, time_scale: 20 d}]}");
  assert_status(lxg_history_read(node, &reading, &history, &error), LXG_OK, &error);
  ck_assert_int_eq(history->kind, LXG_HISTORY_PHOTOSPHERE);
  double energy = 0.0;
  assert_status(lxg_history_energy(history, LXG_HISTORY_VALUE, 0.0, 60.0 * 86400.0, &energy, &error), LXG_OK,
                &error);
  assert_close(energy, 2.5 * 1.6e38 * 20.0 * 86400.0 * (1.0 - exp(-3.0)), 1e-9);
  lxg_history_destroy(history);
  drop();
}
END_TEST

static const struct {
  const char *yaml, *code;
} bad_histories[] = {
    {"{file: a.csv}", "key-missing"},
    {"{kind: base, end: 3}", "luminosity-unused"},
    {"{kind: formula, end: 3, terms: [{law: constant}]}", "key-missing"},
    {"{kind: formula, end: 3, terms: [{law: constant, luminosity: 1, index: 2}]}", "luminosity-unused"},
    {"{kind: formula, end: 3, terms: [{law: decay, mass: 1e-5, isotopes: {56Ni: 1}}]}", "isotope-unknown"},
    {"{kind: formula, end: 3, terms: 4}", "kind-sequence"},
};

START_TEST(history_refused) {
  struct lxg_error error = {0};
  struct lxg_files files = {0};
  const struct lxg_composition mixture = {.hydrogen = 0.45, .helium = 0.35, .cno = 0.18, .metals = 0.02};
  const struct lxg_history_reading reading = {.files = &files, .composition = &mixture, .l_edd = 1.6e38};
  struct lxg_history *history = NULL;
  assert_refused(lxg_history_read(section(bad_histories[_i].yaml), &reading, &history, &error), &error,
                 bad_histories[_i].code);
  ck_assert_ptr_null(history);
}
END_TEST

/* Rows of one section stand together, and every key has a sentence: the readers rely on the first, users on the second. */
START_TEST(keys_table) {
  for (size_t i = 0; i < lxg_keys_count(); i++) {
    const struct lxg_key *key = lxg_keys_row(i);
    ck_assert(strlen(key->sentence) > 5 && strlen(key->fallback) > 0);
    for (size_t j = i + 2; j < lxg_keys_count(); j++) {
      if (strcmp(lxg_keys_row(j)->section, key->section) == 0) {
        ck_assert_str_eq(lxg_keys_row(j - 1)->section, key->section);
      }
    }
  }
  for (int held = 0; held < LXG_HELD_COUNT; held++) {
    bool found = false;
    for (size_t i = 0; i < lxg_keys_count(); i++) {
      const struct lxg_key *key = lxg_keys_row(i);
      if (strcmp(key->section, "hold") == 0 && strcmp(key->name, lxg_held_name((enum lxg_held)held)) == 0) {
        found = key->dimension == lxg_held_dimension((enum lxg_held)held);
      }
    }
    ck_assert_msg(found, "%s", lxg_held_name((enum lxg_held)held));
  }
}
END_TEST

START_TEST(files) {
  struct lxg_error error = {0};
  struct lxg_files list;
  char *path = NULL;
  assert_status(lxg_files_init(&list, "a/b/case.yaml", &error), LXG_OK, &error);
  assert_status(lxg_files_resolve(&list, "h.csv", &path, &error), LXG_OK, &error);
  ck_assert_str_eq(path, "a/b/h.csv");
  lxg_free(path);
  assert_status(lxg_files_resolve(&list, "/x/h.csv", &path, &error), LXG_OK, &error);
  ck_assert_str_eq(path, "/x/h.csv");
  lxg_free(path);
  assert_status(lxg_files_record(&list, "luminosity.file", "h.csv", "abc", &error), LXG_OK, &error);
  ck_assert_uint_eq(list.count, 1);
  ck_assert_str_eq(list.file[0].checksum, "abc");
  lxg_files_free(&list);
  assert_status(lxg_files_init(&list, "-", &error), LXG_OK, &error);
  ck_assert_ptr_null(list.folder);
}
END_TEST

Suite *suite_case_read(void);
Suite *suite_case_read(void) {
  Suite *suite = suite_create("case_read");
  TCase *tests = tcase_create("case_read");
  tcase_add_test(tests, star);
  tcase_add_loop_test(tests, star_refused, 0, sizeof bad_stars / sizeof bad_stars[0]);
  tcase_add_test(tests, composition);
  tcase_add_test(tests, porosity);
  tcase_add_test(tests, hold);
  tcase_add_test(tests, opacity);
  tcase_add_test(tests, formula_history);
  tcase_add_loop_test(tests, history_refused, 0, sizeof bad_histories / sizeof bad_histories[0]);
  tcase_add_test(tests, keys_table);
  tcase_add_test(tests, files);
  suite_add_tcase(suite, tests);
  return suite;
}
