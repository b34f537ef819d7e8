/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_star.c - composition and star against published and derived numbers.
 */
#include "helpers.h"
#include "luxgale/composition.h"
#include "luxgale/constants.h"
#include "luxgale/star.h"

static const struct lxg_composition solar = {.hydrogen = 0.70, .helium = 0.28, .cno = 0.0, .metals = 0.02};

/* Eddington luminosity per solar mass for kappa = 0.34: computed independently from CODATA constants to the digits
 * shown. */
START_TEST(eddington_luminosity) {
  const struct lxg_star star = {.gm = LXG_SOLAR_GM, .radius = 6e8};
  assert_close(lxg_star_eddington_luminosity(&star, &solar), 1.4705e38, 4e-5);
}
END_TEST

/* Nauenberg 1972 radii, evaluated independently from the formula; digits as printed there. The cold-star integrations
 * of the ideal degenerate gas bracket them from above within 3 %. */
static const struct {
  double mass_msun, radius_cm, ideal_cm;
} dwarfs[] = {{0.5, 9.737e8, 9.809e8}, {0.7, 7.884e8, 7.985e8}, {1.0, 5.560e8, 5.716e8},
              {1.2, 3.967e8, 4.165e8}, {1.3, 3.027e8, 3.245e8}, {1.38, 2.067e8, 2.294e8}};

START_TEST(dwarf_radius) {
  struct lxg_error error = {0};
  double radius = 0.0;
  assert_status(lxg_star_dwarf_radius(dwarfs[_i].mass_msun * LXG_SOLAR_MASS, &radius, &error), LXG_OK,
                &error);
  assert_close(radius, dwarfs[_i].radius_cm, 3e-4);
  ck_assert(radius < dwarfs[_i].ideal_cm && radius > 0.89 * dwarfs[_i].ideal_cm);
}
END_TEST

START_TEST(dwarf_too_heavy) {
  struct lxg_error error = {0};
  double radius = 0.0;
  ck_assert_int_eq(lxg_star_dwarf_radius(1.46 * LXG_SOLAR_MASS, &radius, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_star_dwarf_radius(NAN, &radius, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "star-dwarf-mass");
}
END_TEST

/* Mdot_tir = 0.0318479 (L/1e6 Lsun)(R/Rsun)/(M/Msun) Msun/yr: derived coefficient. */
START_TEST(tiring_rate) {
  const struct lxg_star star = {.gm = 2.5 * LXG_SOLAR_GM, .radius = 3.7 * LXG_SOLAR_RADIUS};
  const double rate = lxg_star_tiring_rate(&star, 1.3e6 * LXG_SOLAR_LUMINOSITY) / LXG_SOLAR_MASS * LXG_YEAR;
  assert_close(rate, 0.0318479 * 1.3 * 3.7 / 2.5, 2e-6);
}
END_TEST

/* Ignition masses for P = 2e19 with the Nauenberg radius: evaluated independently, digits as printed. */
START_TEST(ignition_mass) {
  struct lxg_star star = {.gm = 1.1 * LXG_SOLAR_GM, .radius = 0.0};
  struct lxg_error error = {0};
  assert_status(lxg_star_dwarf_radius(1.1 * LXG_SOLAR_MASS, &star.radius, &error), LXG_OK, &error);
  assert_close(lxg_star_envelope_mass(&star, 2e19) / LXG_SOLAR_MASS, 4.56e-5, 2e-3);
  assert_close(lxg_star_escape_speed(&star), 7808e5, 1e-3);
}
END_TEST

/* Pure hydrogen, helium and metals: mu = 1/2, 4/3, 2. */
START_TEST(mean_weights) {
  const struct lxg_composition hydrogen = {.hydrogen = 1.0};
  const struct lxg_composition helium = {.helium = 1.0};
  const struct lxg_composition metals = {.cno = 0.4, .metals = 0.6};
  assert_close(lxg_composition_mu(&hydrogen), 0.5, 1e-15);
  assert_close(lxg_composition_mu(&helium), 4.0 / 3.0, 1e-15);
  assert_close(lxg_composition_mu(&metals), 2.0, 1e-15);
}
END_TEST

START_TEST(composition_errors) {
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_composition_check(&solar, &error), LXG_OK);
  const struct lxg_composition heavy = {.hydrogen = 0.7, .helium = 0.28, .cno = 0.1, .metals = 0.02};
  ck_assert_int_eq(lxg_composition_check(&heavy, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "composition-sum");
  const struct lxg_composition negative = {.hydrogen = 0.7, .helium = 0.32, .cno = 0.0, .metals = -0.02};
  ck_assert_int_eq(lxg_composition_check(&negative, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "composition-range");
  const struct lxg_composition unknown = {.hydrogen = NAN, .helium = 0.32, .cno = 0.0, .metals = 0.02};
  ck_assert_int_eq(lxg_composition_check(&unknown, &error), LXG_INPUT);
}
END_TEST

Suite *suite_star(void);
Suite *suite_star(void) {
  Suite *suite = suite_create("star");
  TCase *tests = tcase_create("star");
  tcase_add_test(tests, eddington_luminosity);
  tcase_add_loop_test(tests, dwarf_radius, 0, sizeof dwarfs / sizeof dwarfs[0]);
  tcase_add_test(tests, dwarf_too_heavy);
  tcase_add_test(tests, tiring_rate);
  tcase_add_test(tests, ignition_mass);
  tcase_add_test(tests, mean_weights);
  tcase_add_test(tests, composition_errors);
  suite_add_tcase(suite, tests);
  return suite;
}
