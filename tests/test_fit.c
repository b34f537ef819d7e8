/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_fit.c - least squares against closed forms (straight line, one-point problems), a certified nonlinear
 * regression problem (NIST StRD "Misra1a", digits from memory, RSS confirmed with SciPy), and the statistics of
 * simulated data.
 */
#include "helpers.h"
#include "luxgale/fit.h"

#include <gsl/gsl_randist.h>
#include <gsl/gsl_rng.h>

struct line_data {
  size_t count;
  double x[64], y[64], sigma[64];
};

static enum lxg_status line_residual(void *context, const double p[], double r[]) {
  const struct line_data *data = context;
  for (size_t i = 0; i < data->count; i++) {
    r[i] = (data->y[i] - p[0] - p[1] * data->x[i]) / data->sigma[i];
  }
  return LXG_OK;
}

static enum lxg_status line_jacobian(void *context, const double p[], double j[]) {
  const struct line_data *data = context;
  (void)p;
  for (size_t i = 0; i < data->count; i++) {
    j[2 * i] = -1.0 / data->sigma[i];
    j[2 * i + 1] = -data->x[i] / data->sigma[i];
  }
  return LXG_OK;
}

static struct line_data a_line(void) {
  struct line_data data = {.count = 11};
  for (size_t i = 0; i < data.count; i++) {
    const double t = (double)i;
    data.x[i] = 0.37 * t + 0.011 * t * t;
    data.sigma[i] = 0.21 + 0.03 * t;
    data.y[i] = -1.93 + 2.71 * data.x[i] + data.sigma[i] * sin(3.7 * t * t);
  }
  return data;
}

/* Weighted straight line: textbook sums (Bevington 1969, ch. 6). In a linear problem the profile interval is +/-
 * sigma exactly; its ends are located to 1e-3 sigma by default. */
START_TEST(straight_line) {
  struct line_data data = a_line();
  double s = 0.0, sx = 0.0, sy = 0.0, sxx = 0.0, sxy = 0.0;
  for (size_t i = 0; i < data.count; i++) {
    const double w = 1.0 / (data.sigma[i] * data.sigma[i]);
    s += w;
    sx += w * data.x[i];
    sy += w * data.y[i];
    sxx += w * data.x[i] * data.x[i];
    sxy += w * data.x[i] * data.y[i];
  }
  const double d = s * sxx - sx * sx;
  const struct lxg_fit_parameter parameter[] = {{.name = "a", .start = 7.0}, {.name = "b", .start = -3.0}};
  const struct lxg_fit_problem problem = {.parameters = 2,
                                          .residuals = data.count,
                                          .parameter = parameter,
                                          .residual = line_residual,
                                          .jacobian = _i == 0 ? NULL : line_jacobian,
                                          .context = &data};
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
  const double differences = 1e-9; /* central differences of a linear model: rounding over the step */
  assert_close(result.estimate[0].value, (sxx * sy - sx * sxy) / d, differences);
  assert_close(result.estimate[1].value, (s * sxy - sx * sy) / d, differences);
  assert_close(result.covariance[0][0], sxx / d, 10.0 * differences);
  assert_close(result.covariance[1][1], s / d, 10.0 * differences);
  assert_close(result.covariance[0][1], -sx / d, 10.0 * differences);
  ck_assert_int_eq((int)result.rank, 2);
  ck_assert_int_eq((int)result.degrees, 9);
  for (int j = 0; j < 2; j++) {
    const struct lxg_fit_estimate *e = &result.estimate[j];
    assert_near((e->upper - e->value) / e->sigma, 1.0, 1e-3);
    assert_near((e->value - e->lower) / e->sigma, 1.0, 1e-3);
    ck_assert(e->constrained && e->lower_end == LXG_FIT_CROSSED && e->upper_end == LXG_FIT_CROSSED);
  }
}
END_TEST

/* NIST StRD Misra1a: y = b1 (1 - exp(-b2 x)). Certified: b1 = 2.3894212918e2 (s.d. 2.7070075241), b2 =
 * 5.5015643181e-4 (s.d. 7.2668688436e-6), RSS = 1.2455138894e-1, start 500, 1e-4; all from memory. s.d. are
 * scaled by RSS/12. */
static const double misra_x[] = {77.6,  114.9, 141.1, 190.8, 239.9, 289.0, 332.8,
                                 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760.0};
static const double misra_y[] = {10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02,
                                 44.82, 50.76, 55.05, 61.01, 66.40, 75.47, 81.78};

static enum lxg_status misra_residual(void *context, const double p[], double r[]) {
  (void)context;
  for (int i = 0; i < 14; i++) {
    r[i] = misra_y[i] - p[0] * (1.0 - exp(-p[1] * misra_x[i]));
  }
  return LXG_OK;
}

START_TEST(certified_problem) {
  struct lxg_fit_parameter parameter[] = {{.name = "b1", .kind = LXG_FIT_POSITIVE, .start = 500.0},
                                          {.name = "b2", .kind = LXG_FIT_POSITIVE, .start = 1e-4}};
  if (_i == 1) { /* the same minimum in other coordinates */
    parameter[0] = (struct lxg_fit_parameter){
        .name = "b1", .kind = LXG_FIT_INTERVAL, .start = 500.0, .low = 100.0, .high = 900.0};
  }
  const struct lxg_fit_problem problem = {
      .parameters = 2, .residuals = 14, .parameter = parameter, .residual = misra_residual};
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
  const double scale = sqrt(result.chi2 / 12.0);
  assert_close(result.chi2, 1.2455138894e-1, 1e-9);
  assert_close(result.estimate[0].value, 2.3894212918e2, 1e-7); /* differences of second order */
  assert_close(result.estimate[1].value, 5.5015643181e-4, 1e-7);
  assert_close(result.estimate[0].sigma * scale, 2.7070075241, 1e-5);
  assert_close(result.estimate[1].sigma * scale, 7.2668688436e-6, 1e-5);
}
END_TEST

struct point {
  double y, sigma, limit;
};

/* One datum y = p^2 +/- sigma, and no model above `limit`. */
static enum lxg_status square_residual(void *context, const double p[], double r[]) {
  const struct point *point = context;
  if (p[0] > point->limit) {
    return LXG_NO_SOLUTION;
  }
  r[0] = (point->y - p[0] * p[0]) / point->sigma;
  return LXG_OK;
}

/* chi^2 = 1 exactly at sqrt(y +/- sigma); beyond the model's domain the interval ends at its edge. Bisection to
 * 1e-3 sigma. */
START_TEST(profile_of_one_point) {
  struct point point = {.y = 3.1, .sigma = 1.3, .limit = INFINITY};
  const struct lxg_fit_parameter parameter = {.name = "p", .kind = LXG_FIT_POSITIVE, .start = 0.4};
  const struct lxg_fit_problem problem = {.parameters = 1,
                                          .residuals = 1,
                                          .parameter = &parameter,
                                          .residual = square_residual,
                                          .context = &point};
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
  assert_close(result.estimate[0].value, sqrt(3.1), 1e-6);
  assert_close(result.estimate[0].sigma, 1.3 / (2.0 * sqrt(3.1)), 1e-6);
  assert_near(result.estimate[0].lower, sqrt(1.8), 1e-3);
  assert_near(result.estimate[0].upper, sqrt(4.4), 1e-3);
  ck_assert(isnan(result.p_value) && result.degrees == 0);
  point.limit = 1.9;
  assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
  assert_near(result.estimate[0].upper, 1.9, 1e-3);
  ck_assert(result.estimate[0].upper_end == LXG_FIT_EDGE && result.estimate[0].lower_end == LXG_FIT_CROSSED);
}
END_TEST

/* Only the sum of two parameters is seen. */
static enum lxg_status sum_residual(void *context, const double p[], double r[]) {
  (void)context;
  for (int i = 0; i < 5; i++) {
    r[i] = (4.2 + 0.1 * i - p[0] - p[1]) / 0.3 + 0.0 * p[2];
  }
  r[5] = (p[2] - 6.5) / 0.7;
  return LXG_OK;
}

START_TEST(unseen_directions_are_named) {
  const struct lxg_fit_parameter parameter[] = {
      {.name = "mass", .start = 1.0}, {.name = "held", .start = 2.0}, {.name = "other", .start = 3.0}};
  const struct lxg_fit_problem problem = {
      .parameters = 3, .residuals = 6, .parameter = parameter, .residual = sum_residual};
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  char text[256];
  assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
  ck_assert_int_eq((int)result.rank, 2);
  ck_assert(!result.estimate[0].constrained && !result.estimate[1].constrained &&
            result.estimate[2].constrained);
  ck_assert(isinf(result.estimate[0].sigma) && isinf(result.estimate[0].upper) &&
            isinf(result.estimate[1].lower));
  assert_close(result.estimate[0].value + result.estimate[1].value, 4.4, 1e-8);
  assert_close(result.estimate[2].sigma, 0.7, 1e-8);
  lxg_fit_warning(&problem, &result, text, sizeof text);
  ck_assert_str_eq(text, "the data constrain mass not at all, held not at all");
}
END_TEST

/* Fewer data than parameters: the fit answers, and says what is not seen. */
START_TEST(fewer_data_than_parameters) {
  struct line_data data = {.count = 1, .x = {2.0}, .y = {5.0}, .sigma = {0.5}};
  const struct lxg_fit_parameter parameter[] = {{.name = "a", .start = 0.0}, {.name = "b", .start = 0.0}};
  const struct lxg_fit_problem problem = {
      .parameters = 2, .residuals = 1, .parameter = parameter, .residual = line_residual, .context = &data};
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
  ck_assert_int_eq((int)result.rank, 1);
  assert_near(result.chi2, 0.0, 1e-12);
  ck_assert(!result.estimate[0].constrained && !result.estimate[1].constrained);
}
END_TEST

/* A positive quantity whose datum is below zero, y = -0.4 +/- 1 with p > 0: chi^2 = (0.4 + p)^2, least at p -> 0
 * (0.16); it has risen by 1 at p = sqrt(1.16) - 0.4. Below there is no limit. */
static enum lxg_status limit_residual(void *context, const double p[], double r[]) {
  (void)context;
  r[0] = -0.4 - p[0];
  return LXG_OK;
}

START_TEST(upper_limit) {
  const struct lxg_fit_parameter parameter = {.name = "p", .kind = LXG_FIT_POSITIVE, .start = 0.8};
  const struct lxg_fit_problem problem = {
      .parameters = 1, .residuals = 1, .parameter = &parameter, .residual = limit_residual};
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  char text[256];
  assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
  assert_near(result.estimate[0].upper, sqrt(1.16) - 0.4, 2e-3);
  ck_assert(result.estimate[0].lower == 0.0 && result.estimate[0].lower_end == LXG_FIT_OPEN);
  lxg_fit_warning(&problem, &result, text, sizeof text);
  ck_assert_str_eq(text, "the data constrain p only from above");
}
END_TEST

/* chi^2 of a quartic with two valleys: (p^2 - 4)^2 + (p - 1)/4 ...: start in the higher one; the profile crosses
 * a barrier of less than 1 and the fit begins again in the lower valley near p = -1. */
static enum lxg_status valleys_residual(void *context, const double p[], double r[]) {
  (void)context;
  r[0] = 0.8 * (p[0] * p[0] - 1.0);
  r[1] = 0.2 * (p[0] + 2.0);
  return LXG_OK;
}

START_TEST(lower_minimum_is_taken) {
  const struct lxg_fit_parameter parameter = {.name = "p", .start = 0.9};
  const struct lxg_fit_problem problem = {
      .parameters = 1, .residuals = 2, .parameter = &parameter, .residual = valleys_residual};
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  ck_assert_int_eq(lxg_fit_solve(&problem, NULL, &result, &error), LXG_OK);
  ck_assert(result.estimate[0].value > 0.0);
  assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
  ck_assert(result.estimate[0].value < -0.9);
}
END_TEST

/* Coverage: 400 seeded straight lines with Gaussian noise; the truth lies in the 68.27 % profile interval that
 * often, within 2.6 binomial standard deviations (0.0233). */
START_TEST(interval_coverage) {
  gsl_rng *rng = gsl_rng_alloc(gsl_rng_mt19937);
  gsl_rng_set(rng, 20260101);
  int inside = 0;
  const int draws = 400;
  for (int k = 0; k < draws; k++) {
    struct line_data data = a_line();
    for (size_t i = 0; i < data.count; i++) {
      data.y[i] = 0.7 + exp(0.3) * data.x[i] + gsl_ran_gaussian(rng, data.sigma[i]);
    }
    const struct lxg_fit_parameter parameter[] = {{.name = "a", .start = 0.0},
                                                  {.name = "b", .kind = LXG_FIT_POSITIVE, .start = 1.0}};
    const struct lxg_fit_problem problem = {.parameters = 2,
                                            .residuals = data.count,
                                            .parameter = parameter,
                                            .residual = line_residual,
                                            .context = &data};
    struct lxg_error error = {0};
    struct lxg_fit_result result;
    assert_status(lxg_fit_run(&problem, NULL, &result, &error), LXG_OK, &error);
    inside += result.estimate[1].lower <= exp(0.3) && exp(0.3) <= result.estimate[1].upper;
  }
  gsl_rng_free(rng);
  assert_near(inside / (double)draws, 0.6827, 0.0605);
}
END_TEST

static enum lxg_status broken_residual(void *context, const double p[], double r[]) {
  (void)p;
  (void)r;
  return *(const enum lxg_status *)context;
}

static void expect_failure(const struct lxg_fit_problem *problem, enum lxg_status status, const char *code) {
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  ck_assert_int_eq(lxg_fit_run(problem, NULL, &result, &error), status);
  ck_assert_str_eq(error.code, code);
}

START_TEST(failures_are_named) {
  struct lxg_fit_parameter parameter = {.name = "p", .kind = LXG_FIT_POSITIVE, .start = -1.0};
  enum lxg_status answer = LXG_NO_SOLUTION;
  struct lxg_fit_problem problem = {.parameters = 1,
                                    .residuals = 1,
                                    .parameter = &parameter,
                                    .residual = broken_residual,
                                    .context = &answer};
  expect_failure(&problem, LXG_INPUT, "fit-start");
  parameter = (struct lxg_fit_parameter){
      .name = "p", .kind = LXG_FIT_INTERVAL, .start = 1.0, .low = 2.0, .high = 1.0};
  expect_failure(&problem, LXG_INPUT, "fit-bounds");
  parameter.high = 3.0;
  expect_failure(&problem, LXG_INPUT, "fit-start");
  parameter.start = 2.5;
  expect_failure(&problem, LXG_NO_SOLUTION, "fit-start-model");
  answer = LXG_IO;
  expect_failure(&problem, LXG_IO, "fit-callback");
  problem.residuals = 0;
  expect_failure(&problem, LXG_INPUT, "fit-residuals");
  problem.parameters = LXG_FIT_PARAMETERS + 1;
  expect_failure(&problem, LXG_INPUT, "fit-parameters");
  struct lxg_fit_settings settings;
  lxg_fit_defaults(&settings);
  settings.iterations = 1;
  const struct lxg_fit_parameter misra[] = {{.name = "b1", .kind = LXG_FIT_POSITIVE, .start = 500.0},
                                            {.name = "b2", .kind = LXG_FIT_POSITIVE, .start = 1e-4}};
  const struct lxg_fit_problem hard = {
      .parameters = 2, .residuals = 14, .parameter = misra, .residual = misra_residual};
  struct lxg_error error = {0};
  struct lxg_fit_result result;
  ck_assert_int_eq(lxg_fit_solve(&hard, &settings, &result, &error), LXG_NOT_CONVERGED);
  ck_assert_str_eq(error.code, "fit-iterations");
  ck_assert_int_eq(lxg_fit_profile(&hard, NULL, 2, &result, &error), LXG_INPUT);
}
END_TEST

Suite *suite_fit(void);
Suite *suite_fit(void) {
  Suite *suite = suite_create("fit");
  TCase *tests = tcase_create("fit");
  tcase_add_loop_test(tests, straight_line, 0, 2);
  tcase_add_loop_test(tests, certified_problem, 0, 2);
  tcase_add_test(tests, profile_of_one_point);
  tcase_add_test(tests, unseen_directions_are_named);
  tcase_add_test(tests, fewer_data_than_parameters);
  tcase_add_test(tests, upper_limit);
  tcase_add_test(tests, lower_minimum_is_taken);
  tcase_add_test(tests, interval_coverage);
  tcase_add_test(tests, failures_are_named);
  suite_add_tcase(suite, tests);
  return suite;
}
