/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_distance.c - quantiles of distances against quadrature of the posterior by SciPy (tests/python/photometry_reference.py).
 */
#include "data/photometry_reference.h"
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/distance.h"

static const double posterior_tolerance = 2e-5; /* 1025 nodes, trapezia */

START_TEST(parallax_quantiles) {
  static const double level[5] = {0.025, 0.16, 0.5, 0.84, 0.975};
  struct lxg_distance distance;
  struct lxg_error error = {0};
  assert_status(lxg_distance_init_parallax(reference_posteriors[_i].parallax, reference_posteriors[_i].error,
                                           reference_posteriors[_i].length, &distance, &error),
                LXG_OK, &error);
  for (int k = 0; k < 5; k++) {
    assert_close(lxg_distance_quantile(&distance, level[k]) / LXG_PARSEC,
                 reference_posteriors[_i].quantile[k], posterior_tolerance);
  }
}
END_TEST

/* A very good parallax: Gaussian about 1/parallax, width error/parallax^2; second-order terms are of order 1e-6. */
START_TEST(parallax_excellent) {
  struct lxg_distance distance;
  assert_status(lxg_distance_init_parallax(8.0, 8e-6, 1350.0, &distance, NULL), LXG_OK, NULL);
  assert_close(lxg_distance_quantile(&distance, 0.5) / LXG_PARSEC, 125.0, 1e-9);
  const double width =
      lxg_distance_quantile(&distance, 0.8413447460685429) - lxg_distance_quantile(&distance, 0.5);
  assert_close(width / LXG_PARSEC, 125.0 * 1e-6, 1e-4);
}
END_TEST

/* No information: the prior, a gamma distribution of shape 3, median 2.674060 length (its standard value). */
START_TEST(parallax_useless) {
  struct lxg_distance distance;
  assert_status(lxg_distance_init_parallax(0.0, 1e6, 1000.0, &distance, NULL), LXG_OK, NULL);
  assert_close(lxg_distance_quantile(&distance, 0.5) / LXG_PARSEC, 2674.0603, 1e-4);
}
END_TEST

/* Every draw is a positive distance, however poor the measurement, and quantiles rise. */
START_TEST(always_positive) {
  struct lxg_distance distance[4];
  assert_status(lxg_distance_init_parallax(-1.3, 0.2, 1350.0, &distance[0], NULL), LXG_OK, NULL);
  assert_status(lxg_distance_init_parallax(0.1, 3.0, 500.0, &distance[1], NULL), LXG_OK, NULL);
  assert_status(lxg_distance_init_given(900.0, 1400.0, &distance[2], NULL), LXG_OK, NULL);
  assert_status(lxg_distance_init_modulus(13.15, 0.3, &distance[3], NULL), LXG_OK, NULL);
  for (int k = 0; k < 4; k++) {
    double last = 0.0;
    for (int i = 0; i < 1000; i++) {
      const double d = lxg_distance_quantile(&distance[k], (i + 0.37) / 1000.0);
      ck_assert_msg(d > last, "kind %d, quantile %d: %g after %g", k, i, d, last);
      last = d;
    }
  }
}
END_TEST

/* Half-normal limit: a distance of 1 pc with a huge error is |error| times a half normal, median 0.6744898 error. */
START_TEST(given_truncated) {
  struct lxg_distance distance;
  assert_status(lxg_distance_init_given(1.0, 1e6, &distance, NULL), LXG_OK, NULL);
  assert_close(lxg_distance_quantile(&distance, 0.5) / LXG_PARSEC, 0.6744898e6, 1e-5);
  assert_status(lxg_distance_init_given(3300.0, 600.0, &distance, NULL), LXG_OK, NULL);
  assert_close(lxg_distance_quantile(&distance, 0.16) / LXG_PARSEC, 3300.0 - 0.994457883 * 600.0, 1e-6);
  assert_status(lxg_distance_init_given(3300.0, 0.0, &distance, NULL), LXG_OK, NULL);
  assert_close(lxg_distance_quantile(&distance, 0.01), 3300.0 * LXG_PARSEC, 1e-15);
}
END_TEST

/* 5 log10(3300/10) = 12.5925697; one sigma of a modulus is a factor 10^0.2 of the error. */
START_TEST(modulus) {
  assert_close(lxg_distance_modulus(3300.0 * LXG_PARSEC), 12.5925697, 1e-8);
  assert_close(lxg_distance_from_modulus(12.5925697), 3300.0 * LXG_PARSEC, 1e-7);
  struct lxg_distance distance;
  assert_status(lxg_distance_init_modulus(14.6, 0.2, &distance, NULL), LXG_OK, NULL);
  assert_close(lxg_distance_quantile(&distance, 0.8413447460685429) / lxg_distance_quantile(&distance, 0.5),
               pow(10.0, 0.04), 1e-9);
}
END_TEST

START_TEST(bad_input) {
  struct lxg_distance distance;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_distance_init_given(-2.0, 1.0, &distance, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_distance_init_given(2.0, NAN, &distance, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_distance_init_modulus(NAN, 1.0, &distance, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_distance_init_modulus(12.0, -1.0, &distance, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_distance_init_parallax(0.3, 0.0, 1350.0, &distance, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "distance-value");
  ck_assert_int_eq(lxg_distance_init_parallax(0.3, 0.1, -1.0, &distance, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "distance-length");
}
END_TEST

Suite *suite_distance(void);
Suite *suite_distance(void) {
  Suite *suite = suite_create("distance");
  TCase *tests = tcase_create("distance");
  tcase_add_loop_test(tests, parallax_quantiles, 0,
                      sizeof reference_posteriors / sizeof reference_posteriors[0]);
  tcase_add_test(tests, parallax_excellent);
  tcase_add_test(tests, parallax_useless);
  tcase_add_test(tests, always_positive);
  tcase_add_test(tests, given_truncated);
  tcase_add_test(tests, modulus);
  tcase_add_test(tests, bad_input);
  suite_add_tcase(suite, tests);
  return suite;
}
