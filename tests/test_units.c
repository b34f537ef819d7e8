/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_units.c - factors against published values, spellings, and every refusal. The whole table is compared with astropy's
 * own factors in tests/python/check_formats.py (see test_table.c).
 */
#include "helpers.h"
#include "luxgale/units.h"

#include <string.h>

/* Values from IAU 2015 B3 (nominal solar), IAU 2012 B2 (au), IAU 2015 B2 (parsec), CODATA 2018 G, and definitions. */
static const struct {
  const char *text;
  enum lxg_dimension dimension;
  const char *unit;
  double cgs;
} accepted[] = {
    {"1.0 Msun", LXG_DIMENSION_MASS, NULL, 1.98840987e33}, /* IAU GM over CODATA 2018 G */
    {"1.3", LXG_DIMENSION_MASS, NULL, 1.3 * 1.98840987e33},
    {"2.5", LXG_DIMENSION_MASS, "g", 2.5},
    {"-3.5e2 kg", LXG_DIMENSION_MASS, NULL, -3.5e5},
    {"1e-4 solMass / yr", LXG_DIMENSION_MASS_RATE, NULL, 1e-4 * 1.98840987e33 / 3.15576e7},
    {"1e-4 Msun /yr", LXG_DIMENSION_MASS_RATE, NULL, 1e-4 * 1.98840987e33 / 3.15576e7},
    {"0.7 Msun/d", LXG_DIMENSION_MASS_RATE, NULL, 0.7 * 1.98840987e33 / 86400.0},
    {"2 solLum", LXG_DIMENSION_LUMINOSITY, NULL, 7.656e33},
    {"3e38 erg s-1", LXG_DIMENSION_LUMINOSITY, NULL, 3e38},
    {"1.5 Ledd", LXG_DIMENSION_LUMINOSITY, NULL, 1.5 * 1.7e38},
    {"2.37 Rsun", LXG_DIMENSION_LENGTH, NULL, 2.37 * 6.957e10},
    {"1 AU", LXG_DIMENSION_LENGTH, NULL, 1.495978707e13},
    {"3.2 kpc", LXG_DIMENSION_LENGTH, NULL, 3.2 * 3.0856775814913673e21},
    {"1500", LXG_DIMENSION_SPEED, NULL, 1.5e8},
    {"12 days", LXG_DIMENSION_TIME, NULL, 12 * 86400.0},
    {"1.5 h", LXG_DIMENSION_TIME, NULL, 5400.0},
    {"4861.35 AA", LXG_DIMENSION_WAVELENGTH, NULL, 4861.35e-8},
    {"656.28 nm", LXG_DIMENSION_WAVELENGTH, NULL, 656.28e-7},
    {"5 cm", LXG_DIMENSION_WAVELENGTH, NULL, 5.0},
    {"5 cm", LXG_DIMENSION_LENGTH, NULL, 5.0},
    {"4.9 GHz", LXG_DIMENSION_FREQUENCY, NULL, 4.9e9},
    {"12.5 mJy", LXG_DIMENSION_FLUX_DENSITY, NULL, 12.5e-26},
    {"3e-11 erg / (s cm2)", LXG_DIMENSION_LINE_FLUX, NULL, 3e-11},
    {"3e-11 erg/s/cm2", LXG_DIMENSION_LINE_FLUX, NULL, 3e-11},
    {"0.3 mas", LXG_DIMENSION_ANGLE, NULL, 0.3e-3 / 206264.80624709636},
    {"8.3", LXG_DIMENSION_MAGNITUDE, NULL, 8.3},
    {"0.25", LXG_DIMENSION_NONE, NULL, 0.25},
    {"  1e8\tK ", LXG_DIMENSION_TEMPERATURE, NULL, 1e8},
};

START_TEST(accepted_quantities) {
  const struct lxg_units_context context = {.eddington_luminosity = 1.7e38};
  struct lxg_error error = {0};
  double cgs = 0.0;
  const enum lxg_status status = lxg_units_parse_quantity(accepted[_i].text, accepted[_i].dimension,
                                                          accepted[_i].unit, &context, &cgs, &error);
  assert_status(status, LXG_OK, &error);
  assert_close(cgs, accepted[_i].cgs, 1e-8); /* the printed digits of the solar mass */
}
END_TEST

static const struct {
  const char *text;
  enum lxg_dimension dimension;
  const char *code, *words;
} refused[] = {
    {"1.0 Msum", LXG_DIMENSION_MASS, "unit-unknown", "did you mean Msun?"},
    {"1.0 parsecs/fortnight", LXG_DIMENSION_SPEED, "unit-unknown", "km/s, cm/s, m/s"},
    {"1.0 kms/h", LXG_DIMENSION_SPEED, "unit-unknown", "km/s"},
    {"3 km/s", LXG_DIMENSION_MASS, "unit-dimension", "that is a speed, but a mass is due"},
    {"3 K", LXG_DIMENSION_NONE, "unit-dimension", "temperature"},
    {"1 Ledd", LXG_DIMENSION_LUMINOSITY, "unit-eddington", "mass and composition"},
    {"", LXG_DIMENSION_MASS, "quantity-number", "VALUE UNIT"},
    {"Msun", LXG_DIMENSION_MASS, "quantity-number", "VALUE UNIT"},
    {"1.0Msun", LXG_DIMENSION_MASS, "quantity-number", "VALUE UNIT"},
    {"0x10 g", LXG_DIMENSION_MASS, "quantity-number", "VALUE UNIT"},
    {"010 g", LXG_DIMENSION_MASS, "quantity-number", "VALUE UNIT"},
    {"nan g", LXG_DIMENSION_MASS, "quantity-number", "finite"},
    {"1e999 g", LXG_DIMENSION_MASS, "quantity-number", "too large"},
    {"1e300 Msun", LXG_DIMENSION_MASS, "quantity-range", "too large"},
    {"1e-320 uJy", LXG_DIMENSION_FLUX_DENSITY, "quantity-range", "too small"},
    {"1 xxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxx",
     LXG_DIMENSION_MASS, "unit-unknown", "units of a mass"},
};

START_TEST(refused_quantities) {
  struct lxg_error error = {0};
  double cgs = -7.5;
  ck_assert_int_eq(
      lxg_units_parse_quantity(refused[_i].text, refused[_i].dimension, NULL, NULL, &cgs, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, refused[_i].code);
  ck_assert_msg(strstr(error.line[0], refused[_i].words) != NULL, "%s", error.line[0]);
  ck_assert(cgs == -7.5);
}
END_TEST

/* Every spelling of every row finds its own row, and every default is known. */
START_TEST(table_is_consistent) {
  struct lxg_error error = {0};
  for (size_t i = 0; i < lxg_units_count(); i++) {
    const struct lxg_unit *const row = lxg_units_row(i);
    char list[256];
    ck_assert_msg(strlen(row->aliases) < sizeof list - 80, "%s", row->name);
    strcpy(list, row->aliases);
    strcat(list, "|");
    strcat(list, row->name);
    if (row->table[0] != '\0') {
      strcat(list, "|");
      strcat(list, row->table);
    }
    for (const char *spelling = strtok(list, "|"); spelling != NULL; spelling = strtok(NULL, "|")) {
      const struct lxg_unit *found = NULL;
      assert_status(lxg_units_find(spelling, row->dimension, &found, &error), LXG_OK, &error);
      ck_assert_msg(found == row, "%s leads to %s, not %s", spelling, found->name, row->name);
    }
  }
  ck_assert_ptr_null(lxg_units_row(lxg_units_count()));
  for (int dimension = 0; dimension < LXG_DIMENSION_COUNT; dimension++) {
    const enum lxg_dimension which = (enum lxg_dimension)dimension;
    const struct lxg_unit *found = NULL;
    assert_status(lxg_units_find(lxg_units_default(which), which, &found, &error), LXG_OK, &error);
  }
}
END_TEST

START_TEST(back_from_cgs) {
  struct lxg_error error = {0};
  double value = 0.0;
  assert_status(lxg_units_from_cgs(3.976819738e33, "Msun", LXG_DIMENSION_MASS, NULL, &value, &error), LXG_OK,
                &error);
  assert_close(value, 2.0, 1e-8);
  ck_assert_int_eq(lxg_units_from_cgs(1.0, "Ledd", LXG_DIMENSION_LUMINOSITY, NULL, &value, &error),
                   LXG_INPUT);
  ck_assert_str_eq(lxg_units_table_spelling("Msun/yr"), "solMass / yr");
  ck_assert_str_eq(lxg_units_table_spelling(""), "");
  ck_assert_ptr_null(lxg_units_table_spelling("Ledd"));
  ck_assert_ptr_null(lxg_units_table_spelling("furlong"));
}
END_TEST

START_TEST(allowed_list_is_bounded) {
  char text[12];
  lxg_units_allowed(LXG_DIMENSION_LENGTH, text, sizeof text);
  ck_assert_str_eq(text, "cm, m, km, ");
  ck_assert_str_eq(lxg_units_dimension((enum lxg_dimension)999), "unknown dimension");
}
END_TEST

Suite *suite_units(void);
Suite *suite_units(void) {
  Suite *suite = suite_create("units");
  TCase *tests = tcase_create("units");
  tcase_add_loop_test(tests, accepted_quantities, 0, sizeof accepted / sizeof accepted[0]);
  tcase_add_loop_test(tests, refused_quantities, 0, sizeof refused / sizeof refused[0]);
  tcase_add_test(tests, table_is_consistent);
  tcase_add_test(tests, back_from_cgs);
  tcase_add_test(tests, allowed_list_is_bounded);
  suite_add_tcase(suite, tests);
  return suite;
}
