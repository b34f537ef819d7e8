/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_uncertainty.c - the Monte Carlo driver against theory: Gaussian moments and quantiles, coverage of intervals, the
 * variance split of linear and product models, independence of the number of threads, failures, limits.
 *
 * Statistical limits are five standard errors of the quantity tested, from theory (the seed is fixed: a test either
 * passes for ever or fails for ever).
 */
#include "luxgale/uncertainty.h"

#include "helpers.h"

#include <stdio.h>
#include <string.h>

static const struct lxg_uncertainty_source sources[3] = {{"noise", LXG_UNCERTAINTY_EPOCH},
                                                         {"distance", LXG_UNCERTAINTY_CALIBRATION},
                                                         {"mass", LXG_UNCERTAINTY_MODEL}};

/* Linear model: y0 = 3 + 0.4 mean of 10 epochs' noise x sqrt(10) + 2 distance - 1 mass; y1 = product of distance and mass;
 * y2 fails to exist when distance < 0; profile: the ten epochs. */
static enum lxg_status linear(const void *shared, const struct lxg_uncertainty_draw *draw, void *workspace,
                              double outputs[], double profile[], struct lxg_error *error) {
  (void)shared;
  (void)error;
  double *noise = workspace;
  lxg_uncertainty_normals(draw, 0, 10, noise);
  const double distance = lxg_uncertainty_normal(draw, 1, 0);
  const double mass = lxg_uncertainty_normal(draw, 2, 0);
  double sum = 0.0;
  for (int i = 0; i < 10; i++) {
    sum += noise[i];
  }
  outputs[0] = 3.0 + 0.4 * sum / sqrt(10.0) + 2.0 * distance - mass;
  outputs[1] = distance * mass;
  outputs[2] = distance < 0.0 ? NAN : distance;
  for (int i = 0; profile != NULL && i < 10; i++) {
    profile[i] = noise[i] + i;
  }
  return LXG_OK;
}

static struct lxg_uncertainty_problem linear_problem(void) {
  return (struct lxg_uncertainty_problem){.sources = sources,
                                          .source_count = 3,
                                          .output_count = 3,
                                          .profile_count = 10,
                                          .workspace_bytes = 10 * sizeof(double),
                                          .evaluate = linear};
}

static const struct lxg_uncertainty_options plain = {
    .seed = 20150731, .draws = 20000, .split_draws = 6000, .profile_draws = 4000, .threads = 2};

/* Mean 3, variance 0.16 + 4 + 1; standard errors s/sqrt n, s/sqrt(2n), quantiles s sqrt(p(1-p)/n)/phi. */
START_TEST(gaussian_moments) {
  const struct lxg_uncertainty_problem problem = linear_problem();
  struct lxg_uncertainty_result r;
  struct lxg_error error = {0};
  assert_status(lxg_uncertainty_run(&problem, &plain, &r, &error), LXG_OK, &error);
  const double s = sqrt(5.16);
  const double n = sqrt(20000.0);
  const struct lxg_uncertainty_summary *y = &r.summary[0];
  ck_assert_uint_eq(y->count, 20000);
  assert_near(y->mean, 3.0, 5.0 * s / n);
  assert_near(y->sd, s, 5.0 * s / (n * sqrt(2.0)));
  assert_near(y->median, 3.0, 5.0 * s * 1.2533 / n);
  assert_near(y->lo68, 3.0 - 0.994458 * s, 5.0 * s * 1.507 / n); /* phi(0.9945) = 0.2433 */
  assert_near(y->hi68, 3.0 + 0.994458 * s, 5.0 * s * 1.507 / n);
  assert_near(y->lo95, 3.0 - 1.959964 * s, 5.0 * s * 2.672 / n); /* phi(1.96) = 0.05844 */
  assert_near(y->hi95, 3.0 + 1.959964 * s, 5.0 * s * 2.672 / n);
  /* product of two normals: mean 0, variance 1; half of the third output is none: binomial */
  assert_near(r.summary[1].mean, 0.0, 5.0 / n);
  assert_near((double)r.summary[2].count, 10000.0, 5.0 * sqrt(5000.0));
  /* the profile: mean i, deviation 1, from 4000 draws */
  for (int i = 0; i < 10; i++) {
    ck_assert_uint_eq(r.profile[i].count, 4000);
    assert_near(r.profile[i].mean, i, 5.0 / sqrt(4000.0));
    assert_near(r.profile[i].sd, 1.0, 5.0 / sqrt(8000.0));
  }
  ck_assert_uint_eq(r.failed, 0);
  lxg_uncertainty_free(&r);
}
END_TEST

/* Correlation of y0 with the half-normal y2 over draws with both: Cov = 2 Var(half normal); and symmetry, unit diagonal. */
START_TEST(correlations) {
  const struct lxg_uncertainty_problem problem = linear_problem();
  struct lxg_uncertainty_result r;
  assert_status(lxg_uncertainty_run(&problem, &plain, &r, NULL), LXG_OK, NULL);
  const double half = 1.0 - 2.0 / 3.14159265358979; /* variance of a half normal */
  const double expected = 2.0 * half / sqrt(half * (4.0 * half + 1.16));
  assert_near(r.correlation[2], expected, 5.0 * (1.0 - expected * expected) / sqrt(1e4));
  assert_near(r.correlation[1], 0.0,
              5.0 * 1.5 / sqrt(2e4)); /* heavy tails of the product: factor below 1.5 */
  for (int i = 0; i < 3; i++) {
    ck_assert(r.correlation[4 * i] == 1.0);
    for (int j = 0; j < 3; j++) {
      ck_assert(r.correlation[3 * i + j] == r.correlation[3 * j + i]);
    }
  }
  lxg_uncertainty_free(&r);
}
END_TEST

/* Linear model: S = T = share of the variance. Product model: S_distance = S_mass = 0, T = 1 for both, noise 0 in both
 * (exactly: T compares equal numbers). */
START_TEST(variance_split) {
  const struct lxg_uncertainty_problem problem = linear_problem();
  struct lxg_uncertainty_result r;
  assert_status(lxg_uncertainty_run(&problem, &plain, &r, NULL), LXG_OK, NULL);
  static const double expected[3] = {0.16 / 5.16, 4.0 / 5.16, 1.0 / 5.16};
  for (int i = 0; i < 3; i++) {
    const struct lxg_uncertainty_share *share = &r.share[i];
    const double r_first = expected[i];
    const double r_total = 1.0 - expected[i];
    assert_near(share->first, expected[i], 5.0 * (1.0 - r_first * r_first) / sqrt(6000.0));
    assert_near(share->total, expected[i], 5.0 * (1.0 - r_total * r_total) / sqrt(6000.0));
    assert_close(share->first_sd, (1.0 - share->first * share->first) / sqrt(6000.0), 1e-9);
  }
  const struct lxg_uncertainty_share *product = &r.share[3];
  assert_near(product[0].first, 0.0, 0.1);
  ck_assert(product[0].total == 0.0);
  for (int i = 1; i < 3; i++) {
    assert_near(product[i].first, 0.0, 0.1); /* heavier tails than Gaussian: 5 x 1.5/sqrt n */
    assert_near(product[i].total, 1.0, 0.1);
  }
  lxg_uncertainty_free(&r);
}
END_TEST

/* All bytes of samples, summaries, correlations, shares and profile agree for 1, 2 and 3 threads. */
START_TEST(same_bytes) {
  const struct lxg_uncertainty_problem problem = linear_problem();
  struct lxg_uncertainty_options options = plain;
  options.draws = 1003;
  options.split_draws = 301;
  options.profile_draws = 407;
  options.threads = 1;
  struct lxg_uncertainty_result one;
  assert_status(lxg_uncertainty_run(&problem, &options, &one, NULL), LXG_OK, NULL);
  for (unsigned threads = 2; threads <= 3; threads++) {
    struct lxg_uncertainty_result more;
    options.threads = threads;
    assert_status(lxg_uncertainty_run(&problem, &options, &more, NULL), LXG_OK, NULL);
    ck_assert(memcmp(one.samples, more.samples, 1003 * 3 * sizeof(double)) == 0);
    ck_assert(memcmp(one.summary, more.summary, 3 * sizeof *one.summary) == 0);
    ck_assert(memcmp(one.correlation, more.correlation, 9 * sizeof(double)) == 0);
    ck_assert(memcmp(one.share, more.share, 9 * sizeof *one.share) == 0);
    ck_assert(memcmp(one.profile, more.profile, 10 * sizeof *one.profile) == 0);
    lxg_uncertainty_free(&more);
  }
  options.seed++;
  struct lxg_uncertainty_result other;
  assert_status(lxg_uncertainty_run(&problem, &options, &other, NULL), LXG_OK, NULL);
  ck_assert(memcmp(one.samples, other.samples, 1003 * 3 * sizeof(double)) != 0);
  lxg_uncertainty_free(&other);
  lxg_uncertainty_free(&one);
}
END_TEST

/* An observer with true value 7.31 and 12 epochs of error 0.25 reports mean +- interval: over 400 invented data sets the 68 %
 * interval holds the truth in 68 % of cases (binomial error 0.023), the 95 % one in 95 % (0.011). */
struct observed {
  double value[12];
};

static enum lxg_status average(const void *shared, const struct lxg_uncertainty_draw *draw, void *workspace,
                               double outputs[], double profile[], struct lxg_error *error) {
  const struct observed *data = shared;
  (void)workspace;
  (void)profile;
  (void)error;
  double noise[12];
  lxg_uncertainty_normals(draw, 0, 12, noise);
  outputs[0] = 0.0;
  for (int i = 0; i < 12; i++) {
    outputs[0] += (data->value[i] + 0.25 * noise[i]) / 12.0;
  }
  return LXG_OK;
}

START_TEST(coverage) {
  int inside68 = 0;
  int inside95 = 0;
  enum { SETS = 400 };
  for (uint32_t set = 0; set < SETS; set++) {
    struct observed data;
    const struct lxg_uncertainty_draw truth = {.seed = 555, .number = set};
    lxg_uncertainty_normals(&truth, 7, 12, data.value);
    for (int i = 0; i < 12; i++) {
      data.value[i] = 7.31 + 0.25 * data.value[i];
    }
    const struct lxg_uncertainty_problem problem = {
        .sources = sources, .source_count = 1, .output_count = 1, .evaluate = average, .shared = &data};
    const struct lxg_uncertainty_options options = {.seed = 1000 + set, .draws = 2000, .threads = 1};
    struct lxg_uncertainty_result r;
    assert_status(lxg_uncertainty_run(&problem, &options, &r, NULL), LXG_OK, NULL);
    inside68 += r.summary[0].lo68 < 7.31 && 7.31 < r.summary[0].hi68 ? 1 : 0;
    inside95 += r.summary[0].lo95 < 7.31 && 7.31 < r.summary[0].hi95 ? 1 : 0;
    ck_assert_ptr_null(r.share);
    ck_assert_ptr_null(r.profile);
    lxg_uncertainty_free(&r);
  }
  assert_near(inside68 / (double)SETS, 0.68, 4.0 * 0.0233);
  assert_near(inside95 / (double)SETS, 0.95, 4.0 * 0.0109);
}
END_TEST

/* The nominal draw is the middle of every source. */
START_TEST(nominal) {
  const struct lxg_uncertainty_draw draw = lxg_uncertainty_nominal();
  double noise[10];
  double outputs[3];
  ck_assert_int_eq(linear(NULL, &draw, noise, outputs, NULL, NULL), LXG_OK);
  ck_assert(outputs[0] == 3.0);
  ck_assert(lxg_uncertainty_uniform(&draw, 2, 5) == 0.5);
}
END_TEST

/* Fails with one of `kinds` reasons where the uniform deviate is below 0.25; ends the run at draw `fatal` if above zero. */
struct failing {
  int kinds;
  uint32_t fatal;
};

static enum lxg_status failing(const void *shared, const struct lxg_uncertainty_draw *draw, void *workspace,
                               double outputs[], double profile[], struct lxg_error *error) {
  const struct failing *how = shared;
  (void)workspace;
  (void)profile;
  outputs[0] = lxg_uncertainty_uniform(draw, 0, 0);
  if (how->fatal > 0 && draw->number >= how->fatal) {
    return lxg_error_set(error, LXG_IO, "disk", "draw %u", draw->number);
  }
  if (how->kinds < 0) {
    return LXG_NO_SOLUTION; /* says nothing */
  }
  if (outputs[0] < 0.25) {
    char code[32];
    snprintf(code, sizeof code, "reason-%u", draw->number % (unsigned)how->kinds);
    return lxg_error_set(error, LXG_NO_SOLUTION, code, "too small");
  }
  return LXG_OK;
}

static enum lxg_status run_failing(const struct failing *how, struct lxg_uncertainty_result *r,
                                   struct lxg_error *error) {
  const struct lxg_uncertainty_problem problem = {
      .sources = sources, .source_count = 1, .output_count = 1, .evaluate = failing, .shared = how};
  const struct lxg_uncertainty_options options = {.seed = 3, .draws = 4000, .split_draws = 500, .threads = 2};
  return lxg_uncertainty_run(&problem, &options, r, error);
}

START_TEST(failures_counted) {
  struct lxg_uncertainty_result r;
  struct failing how = {.kinds = 3};
  assert_status(run_failing(&how, &r, NULL), LXG_OK, NULL);
  assert_near((double)r.failed, 1000.0, 5.0 * sqrt(4000.0 * 0.25 * 0.75));
  ck_assert_uint_eq(r.summary[0].count, 4000 - r.failed);
  assert_near(r.summary[0].median, 0.625, 0.03); /* what is left is uniform from 0.25 to 1 */
  ck_assert_uint_eq(r.reason_count, 3);
  size_t sum = 0;
  for (size_t i = 0; i < r.reason_count; i++) {
    ck_assert(strncmp(r.reason[i].code, "reason-", 7) == 0);
    sum += r.reason[i].count;
  }
  ck_assert_uint_eq(sum, r.failed);
  /* a row of the split has B and A_1, which are the same draw here, and A: left out with probability 1 - 0.75^2 */
  assert_near((double)r.split_failed, 500.0 * (1.0 - 0.5625), 5.0 * sqrt(500.0 * 0.5625 * 0.4375));
  lxg_uncertainty_free(&r);
  how.kinds = 40; /* more kinds than can be told apart: the rest is "other", the sum stays */
  assert_status(run_failing(&how, &r, NULL), LXG_OK, NULL);
  ck_assert_uint_eq(r.reason_count, LXG_UNCERTAINTY_REASONS_MAX);
  ck_assert_str_eq(r.reason[LXG_UNCERTAINTY_REASONS_MAX - 1].code, "other");
  sum = 0;
  for (size_t i = 0; i < r.reason_count; i++) {
    sum += r.reason[i].count;
  }
  ck_assert_uint_eq(sum, r.failed);
  lxg_uncertainty_free(&r);
}
END_TEST

START_TEST(all_failed) {
  struct lxg_uncertainty_result r;
  struct lxg_error error = {0};
  const struct failing how = {.kinds = -1};
  ck_assert_int_eq(run_failing(&how, &r, &error), LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "uncertainty-all-failed");
  ck_assert_uint_eq(r.failed, 4000);
  ck_assert_str_eq(r.reason[0].code, "unexplained");
  ck_assert(isnan(r.summary[0].median) && isnan(r.share[0].total));
  lxg_uncertainty_free(&r);
}
END_TEST

/* The error reported is that of the lowest draw, whatever the threads. */
START_TEST(run_ended) {
  for (int i = 0; i < 20; i++) {
    struct lxg_uncertainty_result r;
    struct lxg_error error = {0};
    const struct failing how = {.kinds = 3, .fatal = 1237};
    ck_assert_int_eq(run_failing(&how, &r, &error), LXG_IO);
    ck_assert_str_eq(error.code, "disk");
    ck_assert_str_eq(error.line[0], "draw 1237");
    lxg_uncertainty_free(&r);
  }
}
END_TEST

static bool stop(void) {
  return true;
}

START_TEST(bad_options) {
  struct lxg_uncertainty_problem problem = linear_problem();
  struct lxg_uncertainty_options options = plain;
  struct lxg_uncertainty_result r;
  struct lxg_error error = {0};
  options.memory_bytes = 100000;
  ck_assert_int_eq(lxg_uncertainty_run(&problem, &options, &r, &error), LXG_LIMIT);
  ck_assert_str_eq(error.code, "uncertainty-memory");
  options.memory_bytes = 0;
  options.interrupted = stop;
  ck_assert_int_eq(lxg_uncertainty_run(&problem, &options, &r, &error), LXG_INTERRUPTED);
  lxg_uncertainty_free(&r);
  options = plain;
  options.draws = 1;
  ck_assert_int_eq(lxg_uncertainty_run(&problem, &options, &r, &error), LXG_INPUT);
  options = plain;
  options.threads = 0;
  ck_assert_int_eq(lxg_uncertainty_run(&problem, &options, &r, &error), LXG_INPUT);
  options = plain;
  options.split_draws = options.draws + 1;
  ck_assert_int_eq(lxg_uncertainty_run(&problem, &options, &r, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "uncertainty-options");
  problem.source_count = 0;
  ck_assert_int_eq(lxg_uncertainty_run(&problem, &plain, &r, &error), LXG_INPUT);
  problem.source_count = LXG_UNCERTAINTY_SOURCES_MAX + 1;
  ck_assert_int_eq(lxg_uncertainty_run(&problem, &plain, &r, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "uncertainty-problem");
  lxg_uncertainty_free(&r);
  lxg_uncertainty_free(NULL);
}
END_TEST

/* Quantiles of 1, 2, ..., 101 with a NaN among them: position p (n - 1). */
START_TEST(summary_exact) {
  double values[102];
  for (int i = 0; i < 101; i++) {
    values[(i * 37) % 101] = i + 1.0;
  }
  values[101] = NAN;
  const struct lxg_uncertainty_summary s = lxg_uncertainty_summarise(values, 102);
  ck_assert_uint_eq(s.count, 101);
  assert_close(s.median, 51.0, 1e-14);
  assert_close(s.lo68, 17.0, 1e-14);
  assert_close(s.hi95, 98.5, 1e-14);
  assert_close(s.sd, sqrt(101.0 * 102.0 / 12.0), 1e-14);
  ck_assert(isnan(lxg_uncertainty_summarise(values, 0).median));
}
END_TEST

Suite *suite_uncertainty(void);
Suite *suite_uncertainty(void) {
  Suite *suite = suite_create("uncertainty");
  TCase *tests = tcase_create("uncertainty");
  tcase_set_timeout(tests, 60.0);
  tcase_add_test(tests, gaussian_moments);
  tcase_add_test(tests, correlations);
  tcase_add_test(tests, variance_split);
  tcase_add_test(tests, same_bytes);
  tcase_add_test(tests, coverage);
  tcase_add_test(tests, nominal);
  tcase_add_test(tests, failures_counted);
  tcase_add_test(tests, all_failed);
  tcase_add_test(tests, run_ended);
  tcase_add_test(tests, bad_options);
  tcase_add_test(tests, summary_exact);
  suite_add_tcase(suite, tests);
  return suite;
}
