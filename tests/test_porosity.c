/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_porosity.c - porosity laws against analytic limits, closed forms, finite differences of the value alone, and
 * the mass-loss coefficients of Owocki, Gayley & Shaviv 2004 (numbers evaluated independently of this code from formulas
 * recalled from memory).
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/porosity.h"

static const struct lxg_porosity_gas gas = {.gm = 1.07 * LXG_SOLAR_GM, .ct2_per_kelvin = 1.31e8};

/* One law each, with awkward numbers; alpha near and at 1 included. */
static const struct lxg_porosity laws[] = {
    {.law = LXG_POROSITY_NONE},
    {.law = LXG_POROSITY_REDUCTION, .factor = 2.37},
    {.law = LXG_POROSITY_LENGTH, .scale = 0.73},
    {.law = LXG_POROSITY_POWER, .scale = 1.9, .alpha = 0.5},
    {.law = LXG_POROSITY_POWER, .scale = 0.61, .alpha = 1.0},
    {.law = LXG_POROSITY_POWER, .scale = 0.61, .alpha = 1.0 + 3e-9},
    {.law = LXG_POROSITY_POWER, .scale = 1.13, .alpha = 2.0},
    {.law = LXG_POROSITY_POWER, .scale = 1.13, .alpha = 3.7},
};
enum { LAWS = sizeof laws / sizeof laws[0] };

/* A gas opacity with constant slopes: kappa = 0.41 (rho/1e-8)^0.37 (T/2e5)^-1.83, so its own derivatives are exact. */
static struct lxg_opacity_value gas_opacity(double ln_rho, double ln_t) {
  const double ln_kappa = log(0.41) + 0.37 * (ln_rho - log(1e-8)) - 1.83 * (ln_t - log(2e5));
  return (struct lxg_opacity_value){.kappa = exp(ln_kappa), .dlnk_dlnrho = 0.37, .dlnk_dlnt = -1.83};
}

static struct lxg_porosity_value value_at(const struct lxg_porosity *law, const double x[3]) {
  const struct lxg_opacity_value kappa = gas_opacity(x[0], x[1]);
  struct lxg_porosity_value value = {0};
  ck_assert_int_eq(lxg_porosity_at(law, x[0], x[1], x[2], &kappa, &gas, &value), LXG_OK);
  return value;
}

static double log_kappa(const struct lxg_porosity *law, const double x[3], int axis, double step) {
  double y[3] = {x[0], x[1], x[2]};
  y[axis] += step;
  return log(value_at(law, y).kappa_eff);
}

/* Fourth-order central difference: truncation ~ step^4/30 = 1e-10 times the fifth derivative, rounding ~ 1e-13. */
static double difference(const struct lxg_porosity *law, const double x[3], int axis) {
  const double h = 5e-3;
  return (8.0 * (log_kappa(law, x, axis, h) - log_kappa(law, x, axis, -h)) -
          (log_kappa(law, x, axis, 2.0 * h) - log_kappa(law, x, axis, -2.0 * h))) /
         (12.0 * h);
}

/* Blob depths from 1e-10 to 1e8 along a path that changes all three variables. */
START_TEST(slopes_match_differences) {
  const struct lxg_porosity *law = &laws[_i];
  for (int i = 0; i <= 24; i++) {
    const double x[3] = {log(3.3e-15) + 1.02 * i, log(7.9e5) - 0.11 * i, log(2.7e10) + 0.13 * i};
    const struct lxg_porosity_value value = value_at(law, x);
    assert_near(value.dlnk_dlnrho, difference(law, x, 0), 2e-9);
    assert_near(value.dlnk_dlnt, difference(law, x, 1), 2e-9);
    assert_near(value.dlnk_dlnr, difference(law, x, 2), 2e-9);
  }
}
END_TEST

/* kappa_eff from the definition of tau, written out here: 1e-13 allows for the exponentials of large logarithms. */
START_TEST(depth_definition) {
  const double rho = 4.7e-9, t = 3.1e5, r = 5.9e10;
  const double x[3] = {log(rho), log(t), log(r)};
  const double kappa = gas_opacity(x[0], x[1]).kappa;
  const double tau = kappa * rho * 0.73 * 1.31e8 * t * r * r / (1.07 * LXG_SOLAR_GM);
  assert_close(value_at(&laws[2], x).kappa_eff, kappa * (1.0 - exp(-tau)) / tau, 1e-12);
  const double tau_two = tau * 1.13 / 0.73;
  assert_close(value_at(&laws[6], x).kappa_eff, kappa / (1.0 + tau_two), 1e-12);
  assert_close(value_at(&laws[1], x).kappa_eff, kappa / 2.37, 1e-15);
  assert_close(value_at(&laws[0], x).kappa_eff, kappa, 0.0);
}
END_TEST

/* tau -> 0: f = 1 - tau/2 (length) and 1 - alpha tau/2 (power), slope -tau/2 and -alpha tau/2; second order in tau is 1e-14
 * here. tau -> infinity: f = 1/tau; 1/[(alpha - 1) tau] for alpha > 1; tau^-alpha/(1 - alpha) for alpha < 1. Analytic. */
START_TEST(limits) {
  const double thin = 1e-7, thick = 1e12;
  double slope = 0.0;
  for (int i = 2; i < LAWS; i++) {
    const double alpha = laws[i].law == LXG_POROSITY_LENGTH ? 1.0 : laws[i].alpha;
    assert_near(lxg_porosity_factor(&laws[i], thin, &slope) - 1.0, -0.5 * alpha * thin, 1e-13);
    assert_near(slope, -0.5 * alpha * thin, 1e-13);
    assert_close(lxg_porosity_factor(&laws[i], 0.0, &slope), 1.0, 0.0);
    ck_assert(slope == 0.0);
    assert_close(lxg_porosity_factor(&laws[i], 1e-300, NULL), 1.0, 1e-15);
  }
  assert_close(lxg_porosity_factor(&laws[2], thick, &slope), 1.0 / thick, 1e-14);
  assert_near(slope, -1.0, 1e-15);
  assert_close(lxg_porosity_factor(&laws[3], thick, &slope), 2.0 / sqrt(thick), 2e-6);
  assert_near(slope, -0.5, 1e-6);
  assert_close(lxg_porosity_factor(&laws[6], thick, &slope), 1.0 / thick, 1e-11);
  assert_close(lxg_porosity_factor(&laws[7], thick, &slope), 1.0 / (2.7 * thick), 1e-11);
  assert_near(slope, -1.0, 1e-11);
}
END_TEST

/* Through alpha = 1 the law is continuous: first order, f(1 + d) - f(1) = -d ln^2(1 + tau)/(2 tau). */
START_TEST(smooth_through_unit_index) {
  const double tau = 6.4;
  const struct lxg_porosity unit = {.law = LXG_POROSITY_POWER, .scale = 1.0, .alpha = 1.0};
  for (int i = 3; i < 15; i++) {
    const double d = pow(10.0, -i);
    const struct lxg_porosity near = {.law = LXG_POROSITY_POWER, .scale = 1.0, .alpha = 1.0 + d};
    const double expected = -d * log1p(tau) * log1p(tau) / (2.0 * tau);
    assert_near(lxg_porosity_factor(&near, tau, NULL) - lxg_porosity_factor(&unit, tau, NULL), expected,
                d * d + 4e-16);
  }
  assert_close(lxg_porosity_factor(&unit, tau, NULL), log(7.4) / 6.4, 1e-15);
}
END_TEST

/* Coefficients Mdot eta a c/L: alpha = 2 and 1/2 are closed (Gamma - 1)/Gamma and 4 (Gamma - 1); the alpha = 1 column and
 * its tau* were solved independently to the five decimals printed. */
static const struct {
  double gamma, two, one, one_depth, half;
} coefficients[] = {{1.5, 0.33333, 0.76269, 1.14403, 2.0},
                    {2.0, 0.50000, 1.25643, 2.51286, 4.0},
                    {3.0, 0.66667, 1.90381, 5.71144, 8.0},
                    {5.0, 0.80000, 2.66040, 13.30200, 16.0},
                    {10.0, 0.90000, 3.61495, 36.14950, 36.0}};

static double coefficient(double alpha, double gamma, double *depth) {
  const struct lxg_porosity law = {.law = LXG_POROSITY_POWER, .scale = 0.83, .alpha = alpha};
  const double luminosity = 2.9e38, sound_speed = 2.3e6;
  struct lxg_error error = {0};
  double mass_loss = 0.0;
  assert_status(lxg_porosity_critical_depth(&law, gamma, depth, &error), LXG_OK, &error);
  assert_status(lxg_porosity_mass_loss(&law, gamma, luminosity, sound_speed, &mass_loss, &error), LXG_OK,
                &error);
  return mass_loss * 0.83 * sound_speed * LXG_SPEED_OF_LIGHT / luminosity;
}

START_TEST(mass_loss_coefficients) {
  const double digits = 6e-6; /* half a unit of the fifth decimal */
  const double gamma = coefficients[_i].gamma;
  double depth = 0.0;
  assert_near(coefficient(2.0, gamma, &depth), coefficients[_i].two, digits);
  assert_close(depth, gamma - 1.0, 1e-12);
  assert_near(coefficient(1.0, gamma, &depth), coefficients[_i].one, digits);
  assert_near(depth, coefficients[_i].one_depth, 4.0 * digits);
  assert_close(coefficient(0.5, gamma, &depth), coefficients[_i].half, 1e-12);
  assert_close(depth, 4.0 * gamma * (gamma - 1.0), 1e-12);
}
END_TEST

/* L/(a c) = 1.0133e-3 Msun/yr for 1e6 Lsun and 20 km/s: derived from the constants, five digits. alpha = 1/2 with Gamma =
 * 1.25 and eta = 1 has the coefficient 1. Length law: tau* = gamma (1 - exp(-tau*)), inserted back. */
START_TEST(mass_loss_in_solar_units) {
  const struct lxg_porosity half = {.law = LXG_POROSITY_POWER, .scale = 1.0, .alpha = 0.5};
  const struct lxg_porosity length = {.law = LXG_POROSITY_LENGTH, .scale = 1.0};
  struct lxg_error error = {0};
  double rate = 0.0, depth = 0.0;
  assert_status(lxg_porosity_mass_loss(&half, 1.25, 1e6 * LXG_SOLAR_LUMINOSITY, 2e6, &rate, &error), LXG_OK,
                &error);
  assert_close(rate / LXG_SOLAR_MASS * LXG_YEAR, 1.0133e-3, 5e-5);
  for (double gamma = 1.0 + 1e-9; gamma < 1e4; gamma = 1.0 + 7.0 * (gamma - 1.0)) {
    assert_status(lxg_porosity_critical_depth(&length, gamma, &depth, &error), LXG_OK, &error);
    assert_close(gamma * -expm1(-depth), depth, 1e-13);
  }
}
END_TEST

static void expect_refused(const struct lxg_porosity *law, const char *code) {
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_porosity_check(law, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, code);
}

START_TEST(check_refuses) {
  const double bad[] = {0.0, -1.3, NAN, INFINITY};
  for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++) {
    expect_refused(&(struct lxg_porosity){.law = LXG_POROSITY_REDUCTION, .factor = bad[i]},
                   "porosity-factor");
    expect_refused(&(struct lxg_porosity){.law = LXG_POROSITY_LENGTH, .scale = bad[i]}, "porosity-scale");
    expect_refused(&(struct lxg_porosity){.law = LXG_POROSITY_POWER, .scale = 1.0, .alpha = bad[i]},
                   "porosity-alpha");
  }
  expect_refused(&(struct lxg_porosity){.law = LXG_POROSITY_REDUCTION, .factor = 0.999}, "porosity-factor");
  expect_refused(&(struct lxg_porosity){.law = (enum lxg_porosity_law)7}, "porosity-law");
  for (int i = 0; i < LAWS; i++) {
    ck_assert_int_eq(lxg_porosity_check(&laws[i], NULL), LXG_OK);
  }
}
END_TEST

START_TEST(failures_are_named) {
  struct lxg_error error = {0};
  double out = -3.5;
  const struct lxg_porosity *length = &laws[2];
  ck_assert_int_eq(lxg_porosity_critical_depth(length, 1.0, &out, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "porosity-gamma");
  ck_assert_int_eq(lxg_porosity_critical_depth(length, NAN, &out, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_porosity_critical_depth(&laws[1], 1.5, &out, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "porosity-depth-law");
  const struct lxg_porosity flat = {.law = LXG_POROSITY_POWER, .scale = 1.0, .alpha = 1e-3};
  ck_assert_int_eq(lxg_porosity_critical_depth(&flat, 10.0, &out, &error), LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "porosity-depth");
  const struct lxg_porosity wrong = {.law = LXG_POROSITY_LENGTH, .scale = -1.0};
  ck_assert_int_eq(lxg_porosity_mass_loss(&wrong, 1.5, 1e38, 2e6, &out, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_porosity_mass_loss(length, 1.5, -1e38, 2e6, &out, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "porosity-luminosity");
  ck_assert_int_eq(lxg_porosity_mass_loss(length, 1.5, 1e38, INFINITY, &out, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "porosity-sound-speed");
  ck_assert(out == -3.5);
  const struct lxg_opacity_value kappa = {.kappa = 0.3};
  struct lxg_porosity_value value = {.kappa_eff = 17.0};
  ck_assert_int_eq(lxg_porosity_at(length, 900.0, 12.0, 24.0, &kappa, &gas, &value), LXG_DOMAIN);
  ck_assert_int_eq(lxg_porosity_at(length, NAN, 12.0, 24.0, &kappa, &gas, &value), LXG_DOMAIN);
  ck_assert(value.kappa_eff == 17.0);
  ck_assert_str_eq(lxg_porosity_law_name(LXG_POROSITY_POWER), "power");
  ck_assert_str_eq(lxg_porosity_law_name((enum lxg_porosity_law)9), "unknown");
}
END_TEST

Suite *suite_porosity(void);
Suite *suite_porosity(void) {
  Suite *suite = suite_create("porosity");
  TCase *tests = tcase_create("porosity");
  tcase_add_loop_test(tests, slopes_match_differences, 0, LAWS);
  tcase_add_test(tests, depth_definition);
  tcase_add_test(tests, limits);
  tcase_add_test(tests, smooth_through_unit_index);
  tcase_add_loop_test(tests, mass_loss_coefficients, 0, sizeof coefficients / sizeof coefficients[0]);
  tcase_add_test(tests, mass_loss_in_solar_units);
  tcase_add_test(tests, check_refuses);
  tcase_add_test(tests, failures_are_named);
  suite_add_tcase(suite, tests);
  return suite;
}
