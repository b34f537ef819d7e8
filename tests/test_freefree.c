/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_freefree.c - free-free light against published constants, published radio laws and quadrature by SciPy.
 */
#include "data/photometry_reference.h"
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/freefree.h"

static const struct lxg_composition pure_hydrogen = {.hydrogen = 1.0};

static struct lxg_freefree_gas hydrogen_at(double temperature) {
  struct lxg_freefree_gas gas;
  assert_status(lxg_freefree_gas_init(&pure_hydrogen, temperature, 0.0, 0.0, &gas, NULL), LXG_OK, NULL);
  return gas;
}

/* 6.8e-38 in Rybicki & Lightman 1979, eq. 5.14b; 6.842e-38 with more digits (Osterbrock; both from memory). */
START_TEST(constant) {
  assert_close(lxg_freefree_constant(), 6.842e-38, 1e-4);
}
END_TEST

/* Wright & Barlow 1975: g = 9.77 (1 + 0.13 log10(T^1.5/(Z nu))) (from memory): 4.6896 at 1e4 K, 10 GHz. The two forms
 * agree to one per cent. Visible: between 1 and 1.3 (tables of Karzas & Latter 1961, from memory). */
START_TEST(gaunt) {
  assert_close(lxg_freefree_gaunt(1e10, 1e4, 1.0), 4.6896, 0.01);
  const double visible = lxg_freefree_gaunt(5.45e14, 1e4, 1.0);
  ck_assert(visible > 1.0 && visible < 1.3);
}
END_TEST

START_TEST(wind_thin) {
  const struct lxg_freefree_gas gas = hydrogen_at(reference_freefree[_i].temperature);
  const struct lxg_freefree_wind wind = {.mass_loss_rate =
                                             reference_freefree[_i].mdot_msun_yr * LXG_SOLAR_MASS / LXG_YEAR,
                                         .speed = reference_freefree[_i].speed_km_s * LXG_KM,
                                         .radius = reference_freefree[_i].radius_rsun * LXG_SOLAR_RADIUS};
  const double frequency = reference_freefree[_i].frequency;
  /* Quadrature at 1e-10; constants of the two sides differ in the electron charge's last digits only. */
  assert_close(lxg_freefree_wind_thin(&gas, &wind, frequency), reference_freefree[_i].thin, 1e-8);
  assert_close(lxg_freefree_wind_whole(&gas, &wind, frequency), reference_freefree[_i].whole, 1e-7);
}
END_TEST

/* The shape of the thin law: Mdot^2/(v^2 R), Hachisu & Kato 2006. */
START_TEST(wind_scaling) {
  const struct lxg_freefree_gas gas = hydrogen_at(11300.0);
  const struct lxg_freefree_wind wind = {3e21, 7.3e7, 2.9e12};
  const struct lxg_freefree_wind other = {3e21 * 1.7, 7.3e7 * 1.3, 2.9e12 * 0.61};
  assert_close(lxg_freefree_wind_thin(&gas, &other, 5.4e14) / lxg_freefree_wind_thin(&gas, &wind, 5.4e14),
               1.7 * 1.7 / (1.3 * 1.3 * 0.61), 1e-12);
}
END_TEST

/* Both ends of the closed form, and no seam where the series takes over (a = 1.5 pi depth = 1e-3). */
START_TEST(wind_limits) {
  const struct lxg_freefree_gas gas = hydrogen_at(9400.0);
  const double frequency = 5.45e14;
  struct lxg_freefree_wind wind = {1e20, 6e7, 3e12};
  const double depth = lxg_freefree_wind_depth(&gas, &wind, frequency);
  const double disc =
      lxg_photometry_planck(frequency, 9400.0) * 4.0 * LXG_PI * LXG_PI * wind.radius * wind.radius;
  /* depth scales with Mdot^2 */
  const struct lxg_freefree_wind below = {1e20 * sqrt(0.999e-3 / (1.5 * LXG_PI * depth)), 6e7, 3e12};
  const struct lxg_freefree_wind above = {1e20 * sqrt(1.001e-3 / (1.5 * LXG_PI * depth)), 6e7, 3e12};
  assert_close(lxg_freefree_wind_whole(&gas, &below, frequency) / disc - 1.0, 2.0 * 0.999e-3, 2e-4);
  assert_close((lxg_freefree_wind_whole(&gas, &above, frequency) - disc) /
                   (lxg_freefree_wind_whole(&gas, &below, frequency) - disc),
               1.001 / 0.999, 1e-6);
  wind.mass_loss_rate =
      1e20 * sqrt(1e9 / (1.5 * LXG_PI * depth)); /* a = 1e9: the disc is one part in a million */
  assert_close(lxg_freefree_wind_whole(&gas, &wind, frequency),
               lxg_freefree_wind_thick(&gas, &wind, frequency), 3e-6);
}
END_TEST

/* The radio law against both published formulas (from memory; literature gives 5.097 and 5.12 mJy): 1e-5 Msun/yr, 1000 km/s,
 * mu = 1.2 hydrogen masses an ion, 1e4 K, 10 GHz, 1 kpc. Wright & Barlow print their constant to three
 * digits, Panagia & Felli approximate the Gaunt factor by a power law: 1 %. */
START_TEST(radio_law) {
  struct lxg_freefree_gas gas = hydrogen_at(1e4);
  const double weight = 1.2 * LXG_HYDROGEN_MASS / LXG_ATOMIC_MASS;
  gas.electrons_per_gram /= weight;
  gas.charges_sq /= weight;
  const struct lxg_freefree_wind wind = {1e-5 * LXG_SOLAR_MASS / LXG_YEAR, 1e8, 1.0};
  const double distance = 1e3 * LXG_PARSEC;
  const double flux =
      lxg_freefree_wind_thick(&gas, &wind, 1e10) / (4.0 * LXG_PI * distance * distance) / 1e-26;
  assert_close(flux, 5.097, 0.01);
  assert_close(flux, 5.12, 0.01);
  /* spectrum nu^0.6 (both papers): 0.600 is itself approximate */
  const double slope =
      log(lxg_freefree_wind_thick(&gas, &wind, 1.1e10) / lxg_freefree_wind_thick(&gas, &wind, 1e10)) /
      log(1.1);
  assert_near(slope, 0.6, 0.02);
}
END_TEST

/* A shell fades as t^-3 (Hachisu & Kato 2005) and its light is emission per rho^2 times M^2/V. */
START_TEST(detached_shell) {
  const struct lxg_freefree_gas gas = hydrogen_at(1.7e4);
  const struct lxg_freefree_shell shell = {2.3e28, 4.1e7, 1.3e8};
  const double age = 140.0 * LXG_DAY;
  const double young = lxg_freefree_shell_thin(&gas, &shell, age, 5.45e14);
  assert_close(lxg_freefree_shell_thin(&gas, &shell, 1.9 * age, 5.45e14) / young, pow(1.9, -3.0), 1e-12);
  const double volume = 4.0 * LXG_PI / 3.0 * (pow(1.3e8 * age, 3.0) - pow(4.1e7 * age, 3.0));
  assert_close(young, lxg_freefree_emission(&gas, 5.45e14) * 2.3e28 * 2.3e28 / volume, 1e-12);
  const double rho = 2.3e28 / volume;
  assert_close(lxg_freefree_shell_depth(&gas, &shell, age, 5.45e14),
               lxg_freefree_absorption(&gas, 5.45e14) * rho * rho * 8.9e7 * age, 1e-12);
}
END_TEST

/* Kirchhoff: emission = 4 pi B_nu absorption. */
START_TEST(kirchhoff) {
  const struct lxg_freefree_gas gas = hydrogen_at(23700.0);
  assert_close(lxg_freefree_absorption(&gas, 7.7e14) * 4.0 * LXG_PI * lxg_photometry_planck(7.7e14, 23700.0),
               lxg_freefree_emission(&gas, 7.7e14), 1e-12);
}
END_TEST

/* Charges by hand: X = 0.35, Y = 0.33 (He+), cno = 0.30 (N+), Z = 0.02 (O+). */
START_TEST(gas_of_composition) {
  const struct lxg_composition nova = {.hydrogen = 0.35, .helium = 0.33, .cno = 0.30, .metals = 0.02};
  struct lxg_freefree_gas gas;
  assert_status(lxg_freefree_gas_init(&nova, 9000.0, 1.0, 1.0, &gas, NULL), LXG_OK, NULL);
  const double singly = 0.35 + 0.33 / 4.0 + 0.30 / 14.0 + 0.02 / 16.0;
  assert_close(gas.electrons_per_gram * LXG_ATOMIC_MASS, singly, 1e-12);
  assert_close(gas.charges_sq * LXG_ATOMIC_MASS, singly, 1e-12);
  assert_status(lxg_freefree_gas_init(&nova, 9e4, 2.0, 8.0, &gas, NULL), LXG_OK, NULL);
  assert_close(gas.electrons_per_gram * LXG_ATOMIC_MASS, 0.35 + 0.165 + 0.15 + 0.01, 1e-12);
  assert_close(gas.charges_sq * LXG_ATOMIC_MASS, 0.35 + 0.33 + 0.30 * 3.5 + 0.02 * 4.0, 1e-12);
}
END_TEST

START_TEST(bad_input) {
  struct lxg_freefree_gas gas;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_freefree_gas_init(&pure_hydrogen, 0.0, 0.0, 0.0, &gas, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "freefree-temperature");
  ck_assert_int_eq(lxg_freefree_gas_init(&pure_hydrogen, 1e4, 3.0, 0.0, &gas, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "freefree-charge");
  const struct lxg_composition helium = {.helium = 1.0};
  ck_assert_int_eq(lxg_freefree_gas_init(&helium, 1e4, 0.0, 0.0, &gas, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "freefree-neutral");
}
END_TEST

Suite *suite_freefree(void);
Suite *suite_freefree(void) {
  Suite *suite = suite_create("freefree");
  TCase *tests = tcase_create("freefree");
  tcase_add_test(tests, constant);
  tcase_add_test(tests, gaunt);
  tcase_add_loop_test(tests, wind_thin, 0, sizeof reference_freefree / sizeof reference_freefree[0]);
  tcase_add_test(tests, wind_scaling);
  tcase_add_test(tests, wind_limits);
  tcase_add_test(tests, radio_law);
  tcase_add_test(tests, detached_shell);
  tcase_add_test(tests, kirchhoff);
  tcase_add_test(tests, gas_of_composition);
  tcase_add_test(tests, bad_input);
  suite_add_tcase(suite, tests);
  return suite;
}
