/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_burning.c - CNO energy generation against numbers derived independently from the formula, from the decay constants
 * behind the beta limit, and against finite differences of the rate alone.
 */
#include "helpers.h"
#include "luxgale/burning.h"
#include "luxgale/constants.h"

static struct lxg_burning_value rate_at(const struct lxg_composition *mix, double rho, double t) {
  struct lxg_burning burning = {0};
  struct lxg_burning_value value = {0};
  struct lxg_error error = {0};
  assert_status(lxg_burning_init(&burning, LXG_BURNING_CNO, mix, &error), LXG_OK, &error);
  ck_assert_int_eq(lxg_burning_at(&burning, log(rho), log(t), &value), LXG_OK);
  return value;
}

/* X = 0.7, X_CNO = 0.01, rho = 100: capture rate evaluated independently, four digits; the beta limit is 5.9e13. */
static const struct lxg_composition one_percent = {.hydrogen = 0.7, .helium = 0.29, .cno = 0.01};
static const struct {
  double t6, capture;
} captures[] = {{15.0, 1.430}, {20.0, 334.6}, {30.0, 3.072e5}, {50.0, 4.694e8}, {80.0, 1.369e11}};

START_TEST(capture_rates) {
  const double expected = 1.0 / (1.0 / captures[_i].capture + 1.0 / 5.9e13);
  const struct lxg_burning_value value = rate_at(&one_percent, 100.0, captures[_i].t6 * 1e6);
  assert_close(value.eps, expected, 4e-4);
  assert_near(value.ln_eps, log(value.eps), 1e-12);
}
END_TEST

/* Mean lives of 14O and 15O (70.621 s, 122.266 s half-lives) and 24.7 MeV a cycle: the limit lies between the values for
 * a catalyst of mass number 15 and 14. Derived here. */
START_TEST(beta_limit) {
  const double cycle = (70.621 + 122.266) / log(2.0);
  const double energy = 24.7e6 * LXG_ELECTRON_VOLT;
  const double low = energy / (15.0 * LXG_ATOMIC_MASS * cycle),
               high = energy / (14.0 * LXG_ATOMIC_MASS * cycle);
  const struct lxg_composition mix = {.hydrogen = 0.43, .helium = 0.31, .cno = 0.24, .metals = 0.02};
  const struct lxg_burning_value value = rate_at(&mix, 3.7e5, 4.1e8);
  const double cno = 0.24 + 0.7 * 0.02;
  ck_assert(value.eps / cno > low && value.eps / cno < high);
  assert_close(value.eps, 5.9e15 * cno, 1e-3);
  ck_assert(value.dlne_dlnrho > 0.0 && value.dlne_dlnrho < 1e-3);
}
END_TEST

/* The two branches cross where the share is one half: near 1.5e8 K at rho = 100, near 0.9e8 K at rho = 1e4 (derived, two
 * digits). */
START_TEST(crossover) {
  ck_assert(rate_at(&one_percent, 100.0, 1.43e8).dlne_dlnrho > 0.5);
  ck_assert(rate_at(&one_percent, 100.0, 1.57e8).dlne_dlnrho < 0.5);
  ck_assert(rate_at(&one_percent, 1e4, 0.85e8).dlne_dlnrho > 0.5);
  ck_assert(rate_at(&one_percent, 1e4, 0.95e8).dlne_dlnrho < 0.5);
}
END_TEST

/* 26.73 MeV per four hydrogen atoms is 6.398e18 erg/g; 25.0 MeV are left after neutrinos, 5.98e18 (derived). */
START_TEST(heat_of_hydrogen) {
  const double per_mev = 1e6 * LXG_ELECTRON_VOLT / (4.0 * LXG_HYDROGEN_MASS);
  assert_close(26.73 * per_mev, 6.398e18, 1e-4);
  assert_close(LXG_BURNING_HEAT, 25.0 * per_mev, 5e-3);
}
END_TEST

static double ln_eps(const struct lxg_burning *burning, double ln_rho, double ln_t) {
  struct lxg_burning_value value = {0};
  ck_assert_int_eq(lxg_burning_at(burning, ln_rho, ln_t, &value), LXG_OK);
  return value.ln_eps;
}

/* Fourth-order differences from 1e4 K (ln eps ~ -700) to 1e9 K, on both sides of the crossover. */
START_TEST(slopes_match_differences) {
  const struct lxg_composition mix = {.hydrogen = 0.53, .helium = 0.31, .cno = 0.14, .metals = 0.02};
  struct lxg_burning burning = {0};
  ck_assert_int_eq(lxg_burning_init(&burning, LXG_BURNING_CNO, &mix, NULL), LXG_OK);
  const double h = 1e-3;
  for (double ln_t = log(1e4); ln_t < log(1e9); ln_t += 0.37) {
    for (double ln_rho = -9.3; ln_rho < 14.0; ln_rho += 2.9) {
      struct lxg_burning_value value = {0};
      ck_assert_int_eq(lxg_burning_at(&burning, ln_rho, ln_t, &value), LXG_OK);
      const double by_rho =
          (8.0 * (ln_eps(&burning, ln_rho + h, ln_t) - ln_eps(&burning, ln_rho - h, ln_t)) -
           (ln_eps(&burning, ln_rho + 2 * h, ln_t) - ln_eps(&burning, ln_rho - 2 * h, ln_t))) /
          (12.0 * h);
      const double by_t =
          (8.0 * (ln_eps(&burning, ln_rho, ln_t + h) - ln_eps(&burning, ln_rho, ln_t - h)) -
           (ln_eps(&burning, ln_rho, ln_t + 2 * h) - ln_eps(&burning, ln_rho, ln_t - 2 * h))) /
          (12.0 * h);
      const double noise = 1e-9; /* 700 roundings of 1e-16 over h, and h^4 times the fifth derivative */
      assert_near(value.dlne_dlnrho, by_rho, noise);
      assert_near(value.dlne_dlnt, by_t, noise * (1.0 + fabs(by_t)));
    }
  }
}
END_TEST

START_TEST(no_burning) {
  const struct lxg_burning none = {0};
  struct lxg_burning_value value = {.eps = 3.0};
  ck_assert_int_eq(lxg_burning_at(&none, 1.3, 18.2, &value), LXG_OK);
  ck_assert(value.eps == 0.0 && isinf(value.ln_eps) && value.dlne_dlnrho == 0.0 && value.dlne_dlnt == 0.0);
}
END_TEST

START_TEST(refusals) {
  struct lxg_burning burning = {0};
  struct lxg_error error = {0};
  const struct lxg_composition helium = {.helium = 0.98, .metals = 0.02};
  ck_assert_int_eq(lxg_burning_init(&burning, LXG_BURNING_CNO, &helium, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "burning-fuel");
  ck_assert_int_eq(lxg_burning_init(&burning, LXG_BURNING_NONE, &helium, &error), LXG_OK);
  const struct lxg_composition pure = {.hydrogen = 0.75, .helium = 0.25};
  ck_assert_int_eq(lxg_burning_init(&burning, LXG_BURNING_CNO, &pure, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_burning_init(&burning, (enum lxg_burning_law)5, &pure, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "burning-law");
  ck_assert_int_eq(lxg_burning_init(&burning, LXG_BURNING_CNO, &one_percent, &error), LXG_OK);
  struct lxg_burning_value value = {.eps = 3.0};
  ck_assert_int_eq(lxg_burning_at(&burning, NAN, 18.0, &value), LXG_DOMAIN);
  ck_assert_int_eq(lxg_burning_at(&burning, 1.0, INFINITY, &value), LXG_DOMAIN);
  ck_assert_int_eq(lxg_burning_at(&burning, 1.0, -4e3, &value), LXG_DOMAIN);
  ck_assert(value.eps == 3.0);
}
END_TEST

Suite *suite_burning(void);
Suite *suite_burning(void) {
  Suite *suite = suite_create("burning");
  TCase *tests = tcase_create("burning");
  tcase_add_loop_test(tests, capture_rates, 0, sizeof captures / sizeof captures[0]);
  tcase_add_test(tests, beta_limit);
  tcase_add_test(tests, crossover);
  tcase_add_test(tests, heat_of_hydrogen);
  tcase_add_test(tests, slopes_match_differences);
  tcase_add_test(tests, no_burning);
  tcase_add_test(tests, refusals);
  suite_add_tcase(suite, tests);
  return suite;
}
