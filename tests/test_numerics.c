/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_numerics.c - interpolation, roots and quadrature against closed forms, and Steffen's slopes against the formulas of the
 * 1990 paper written out here.
 */
#include "helpers.h"
#include "luxgale/numerics.h"

static const double xs[] = {-1.3, 0.4, 0.9, 2.7, 3.1, 7.4};
static const double ys[] = {2.1, 2.9, 7.3, 6.8, 6.8, -1.6};
enum { POINTS = sizeof xs / sizeof xs[0] };

static double sign(double x) {
  return x > 0.0 ? 1.0 : x < 0.0 ? -1.0 : 0.0;
}

/* Steffen 1990, A&A 239, 443: y' = (sgn s1 + sgn s2) min(|s1|, |s2|, |p|/2), p the parabola's slope. */
static double steffen_slope(size_t i) {
  const double h1 = xs[i] - xs[i - 1], h2 = xs[i + 1] - xs[i];
  const double s1 = (ys[i] - ys[i - 1]) / h1, s2 = (ys[i + 1] - ys[i]) / h2;
  const double p = (s1 * h2 + s2 * h1) / (h1 + h2);
  return (sign(s1) + sign(s2)) * fmin(fmin(fabs(s1), fabs(s2)), 0.5 * fabs(p));
}

START_TEST(steffen_slopes) {
  struct lxg_steffen *steffen = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_steffen_create(xs, ys, POINTS, &steffen, &error), LXG_OK, &error);
  double y = 0.0, slope = 0.0;
  for (size_t i = 0; i < POINTS; i++) {
    ck_assert_int_eq(lxg_steffen_at(steffen, xs[i], &y, &slope), LXG_OK);
    assert_near(y, ys[i], 1e-14);
    if (i > 0 && i + 1 < POINTS) {
      assert_near(slope, steffen_slope(i), 1e-13);
    }
  }
  for (size_t i = 0; i + 1 < POINTS; i++) { /* monotone between points */
    double before = ys[i];
    for (int k = 1; k <= 50; k++) {
      ck_assert_int_eq(lxg_steffen_at(steffen, xs[i] + (xs[i + 1] - xs[i]) * k / 50.0, &y, NULL), LXG_OK);
      ck_assert((y - before) * sign(ys[i + 1] - ys[i]) >= -1e-14);
      before = y;
    }
  }
  y = 17.0;
  ck_assert_int_eq(lxg_steffen_at(steffen, 7.5, &y, &slope), LXG_DOMAIN);
  ck_assert_int_eq(lxg_steffen_at(steffen, NAN, &y, &slope), LXG_DOMAIN);
  ck_assert(y == 17.0);
  lxg_steffen_destroy(steffen);
  lxg_steffen_destroy(NULL);
}
END_TEST

START_TEST(steffen_few_points) {
  struct lxg_steffen *steffen = NULL;
  double y = 0.0, slope = -1.0;
  ck_assert_int_eq(lxg_steffen_create(xs, ys, 1, &steffen, NULL), LXG_OK);
  ck_assert_int_eq(lxg_steffen_at(steffen, -1.3, &y, &slope), LXG_OK);
  ck_assert(y == 2.1 && slope == 0.0);
  ck_assert_int_eq(lxg_steffen_at(steffen, -1.2, &y, NULL), LXG_DOMAIN);
  lxg_steffen_destroy(steffen);
  ck_assert_int_eq(lxg_steffen_create(xs, ys, 2, &steffen, NULL), LXG_OK);
  ck_assert_int_eq(lxg_steffen_at(steffen, 0.1, &y, &slope), LXG_OK);
  assert_close(y, 2.1 + 0.8 * 1.4 / 1.7, 1e-14);
  assert_close(slope, 0.8 / 1.7, 1e-14);
  lxg_steffen_destroy(steffen);
}
END_TEST

START_TEST(steffen_refuses) {
  struct lxg_steffen *steffen = NULL;
  struct lxg_error error = {0};
  const double same[] = {0.3, 0.9, 0.9}, bad[] = {0.3, NAN, 1.4};
  ck_assert_int_eq(lxg_steffen_create(xs, ys, 0, &steffen, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "numerics-count");
  ck_assert_int_eq(lxg_steffen_create(same, ys, 3, &steffen, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "numerics-order");
  ck_assert_int_eq(lxg_steffen_create(xs, bad, 3, &steffen, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "numerics-value");
  ck_assert_ptr_null(steffen);
}
END_TEST

static double cosine_gap(double x, const void *parameters) {
  return cos(x) - *(const double *)parameters * x;
}

static double exponential(double x, const void *parameters) {
  return exp(*(const double *)parameters * x);
}

static double logarithm(double x, const void *parameters) {
  return log(x) + *(const double *)parameters;
}

/* cos x = x at 0.739085133215160641655 (Dottie's number, published to many digits). */
START_TEST(roots) {
  struct lxg_error error = {0};
  double root = 0.0;
  const double one = 1.0, zero = 0.0;
  assert_status(lxg_root_find(cosine_gap, &one, -0.3, 2.9, 1e-15, &root, &error), LXG_OK, &error);
  assert_close(root, 0.739085133215160641655, 4e-15);
  assert_status(lxg_root_find(logarithm, &zero, 1.0, 2.9, 1e-15, &root, &error), LXG_OK, &error);
  ck_assert(root == 1.0);
  ck_assert_int_eq(lxg_root_find(cosine_gap, &one, 1.3, 2.9, 1e-15, &root, &error), LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "root-bracket");
  ck_assert_int_eq(lxg_root_find(logarithm, &zero, -1.3, 2.9, 1e-15, &root, &error), LXG_DOMAIN);
  ck_assert_str_eq(error.code, "root-value");
}
END_TEST

/* int exp(a x) dx in closed form: 4 e-folds a panel are integrated to rounding. */
START_TEST(quadrature) {
  struct lxg_error error = {0};
  double integral = 0.0;
  const double a = -2.37;
  assert_status(lxg_quadrature_gauss(exponential, &a, -0.7, 0.9, 1, &integral, &error), LXG_OK, &error);
  assert_close(integral, (exp(a * 0.9) - exp(-a * 0.7)) / a, 1e-14);
  assert_status(lxg_quadrature_gauss(exponential, &a, -0.7, 16.2, 12, &integral, &error), LXG_OK, &error);
  assert_close(integral, (exp(a * 16.2) - exp(-a * 0.7)) / a, 1e-14);
  ck_assert_int_eq(lxg_quadrature_gauss(logarithm, &a, -0.7, 0.9, 1, &integral, &error), LXG_DOMAIN);
  ck_assert_str_eq(error.code, "quadrature-value");
}
END_TEST

Suite *suite_numerics(void);
Suite *suite_numerics(void) {
  Suite *suite = suite_create("numerics");
  TCase *tests = tcase_create("numerics");
  tcase_add_test(tests, steffen_slopes);
  tcase_add_test(tests, steffen_few_points);
  tcase_add_test(tests, steffen_refuses);
  tcase_add_test(tests, roots);
  tcase_add_test(tests, quadrature);
  suite_add_tcase(suite, tests);
  return suite;
}
