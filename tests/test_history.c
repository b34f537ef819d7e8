/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_history.c - luminosity histories against closed forms: an exponential is a straight line in ln L, which any such
 * interpolant must return exactly, so energy, crossings and time scales are known to rounding.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/history.h"

#include <string.h>

enum { ROWS = 9 };
static const double fold = 3.7e5;       /* e-folding time of the test decline [s] */
static const double brightest = 4.4e38; /* [erg s^-1] */

/* Exponential decline at uneven times, with bounds 20 % below and 30 % above. */
struct columns {
  double time[ROWS], luminosity[ROWS], low[ROWS], high[ROWS];
};

static struct columns decline(void) {
  static const double at[ROWS] = {-2.3e4, 1.7e4, 9.1e4, 1.3e5, 3.9e5, 4.4e5, 6.6e5, 8.3e5, 9.7e5};
  struct columns c = {0};
  for (int i = 0; i < ROWS; i++) {
    c.time[i] = at[i];
    c.luminosity[i] = brightest * exp(-at[i] / fold);
    c.low[i] = 0.8 * c.luminosity[i];
    c.high[i] = 1.3 * c.luminosity[i];
  }
  return c;
}

static struct lxg_history_rows rows_of(const struct columns *c) {
  return (struct lxg_history_rows){.kind = LXG_HISTORY_PHOTOSPHERE,
                                   .gap_fraction = 0.2,
                                   .count = ROWS,
                                   .time = c->time,
                                   .luminosity = c->luminosity,
                                   .low = c->low,
                                   .high = c->high};
}

static struct lxg_history *build(const struct lxg_history_rows *rows) {
  struct lxg_history *history = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_history_create(rows, &history, &error), LXG_OK, &error);
  return history;
}

START_TEST(exponential_rows) {
  const struct columns c = decline();
  const struct lxg_history_rows rows = rows_of(&c);
  struct lxg_history *history = build(&rows);
  struct lxg_history_value value = {0};
  for (double t = -2.3e4; t < 9.7e5; t += 12345.6) {
    ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, t, &value), LXG_OK);
    assert_close(value.luminosity, brightest * exp(-t / fold), 1e-12);
    assert_close(value.time_scale, fold, 1e-9);
    ck_assert(value.dlnl_dt < 0.0);
    ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_HIGH, t, &value), LXG_OK);
    assert_close(value.luminosity, 1.3 * brightest * exp(-t / fold), 1e-12);
  }
  double energy = 0.0;
  ck_assert_int_eq(lxg_history_energy(history, LXG_HISTORY_VALUE, 1.1e4, 8.8e5, &energy, NULL), LXG_OK);
  assert_close(energy, brightest * fold * (exp(-1.1e4 / fold) - exp(-8.8e5 / fold)), 1e-12);
  ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, 9.8e5, &value), LXG_DOMAIN);
  ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, NAN, &value), LXG_DOMAIN);
  lxg_history_destroy(history);
}
END_TEST

/* L falls through the level at fold ln(L_0/level); bounds shift that by fold ln 0.8 and fold ln 1.3. */
START_TEST(one_crossing) {
  const struct columns c = decline();
  const struct lxg_history_rows rows = rows_of(&c);
  struct lxg_history *history = build(&rows);
  const double level = 1.47e38, start = -2.3e4;
  const double factor[] = {1.0, 0.8, 1.3};
  for (int curve = 0; curve < 3; curve++) {
    struct lxg_history_excess excess = {0};
    struct lxg_error error = {0};
    assert_status(lxg_history_excess(history, (enum lxg_history_curve)curve, level, &excess, &error), LXG_OK,
                  &error);
    const double end = fold * log(factor[curve] * brightest / level);
    const double radiated = factor[curve] * brightest * fold * (exp(-start / fold) - exp(-end / fold));
    ck_assert_uint_eq(excess.intervals, 1);
    assert_close(excess.last, end, 1e-12);
    assert_close(excess.first, start, 0.0);
    assert_close(excess.duration, end - start, 1e-12);
    assert_close(excess.radiated, radiated, 1e-12);
    assert_close(excess.energy_above, radiated - level * (end - start), 1e-11);
    assert_close(excess.mean_ratio, radiated / (level * (end - start)), 1e-12);
    assert_close(excess.peak_ratio, factor[curve] * brightest * exp(-start / fold) / level, 1e-12);
    assert_close(excess.peak_time, start, 0.0);
    ck_assert(excess.open_start && !excess.open_end);
  }
  lxg_history_destroy(history);
}
END_TEST

/* Peaks in ln L joined by straight halves: by symmetry of equal steps the interpolant passes the middle of each flank at
 * half the interval, so every crossing of the middle level is known. */
START_TEST(several_intervals) {
  enum { COUNT = 7 };
  double time[COUNT], luminosity[COUNT];
  for (int i = 0; i < COUNT; i++) {
    time[i] = 1.9e5 * i;
    luminosity[i] = i % 2 == 1 ? 9e38 : 1e38;
  }
  const struct lxg_history_rows rows = {
      .count = COUNT, .time = time, .luminosity = luminosity, .gap_fraction = INFINITY};
  struct lxg_history *history = build(&rows);
  struct lxg_history_excess excess = {0};
  ck_assert_int_eq(lxg_history_excess(history, LXG_HISTORY_VALUE, 3e38, &excess, NULL), LXG_OK);
  ck_assert_uint_eq(excess.intervals, 3);
  struct lxg_history_value value = {0};
  ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, excess.first, &value), LXG_OK);
  assert_close(value.luminosity, 3e38, 1e-12);
  ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, excess.last, &value), LXG_OK);
  assert_close(value.luminosity, 3e38, 1e-12);
  assert_close(excess.peak_ratio, 3.0, 1e-14);
  assert_close(excess.peak_time, 1.9e5, 0.0);
  /* inner flanks are symmetric cubics: the two inner dips last exactly one interval each */
  assert_close(excess.duration, (excess.last - excess.first) - 2.0 * 1.9e5, 1e-12);
  ck_assert(!excess.open_start && !excess.open_end);
  /* above everything, below everything */
  ck_assert_int_eq(lxg_history_excess(history, LXG_HISTORY_VALUE, 9.1e38, &excess, NULL), LXG_OK);
  ck_assert(excess.intervals == 0 && excess.duration == 0.0 && isnan(excess.first) &&
            isnan(excess.mean_ratio));
  assert_close(excess.peak_ratio, 9.0 / 9.1, 1e-14);
  ck_assert_int_eq(lxg_history_excess(history, LXG_HISTORY_VALUE, 9e37, &excess, NULL), LXG_OK);
  ck_assert(excess.intervals == 1 && excess.open_start && excess.open_end);
  assert_close(excess.duration, 6.0 * 1.9e5, 1e-14);
  lxg_history_destroy(history);
}
END_TEST

START_TEST(gaps) {
  const struct columns c = decline();
  struct lxg_history_rows rows = rows_of(&c);
  struct lxg_history *history = build(&rows);
  /* span 9.93e5: a fifth is 1.986e5; the intervals 1.3e5-3.9e5 and 4.4e5-6.6e5 exceed it */
  ck_assert_uint_eq(history->gap_count, 2);
  ck_assert_uint_eq(history->gap[1].row, 5);
  assert_close(history->gap[0].start, 1.3e5, 0.0);
  assert_close(history->gap[0].end, 3.9e5, 0.0);
  struct lxg_history_value value = {0};
  ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, 2e5, &value), LXG_OK);
  ck_assert(value.in_gap);
  ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, 3.9e5, &value), LXG_OK);
  ck_assert(!value.in_gap);
  struct lxg_history_excess excess = {0};
  const double level = brightest * exp(-2e5 / fold);
  ck_assert_int_eq(lxg_history_excess(history, LXG_HISTORY_VALUE, level, &excess, NULL), LXG_OK);
  assert_close(excess.in_gaps, 7e4, 1e-10);
  lxg_history_destroy(history);
  rows.gap_fraction = 0.9;
  history = build(&rows);
  ck_assert_uint_eq(history->gap_count, 0);
  lxg_history_destroy(history);
}
END_TEST

START_TEST(single_row) {
  const double time = 3.3e5, luminosity = 2.2e38;
  const struct lxg_history_rows rows = {
      .count = 1, .time = &time, .luminosity = &luminosity, .gap_fraction = 0.2};
  struct lxg_history *history = build(&rows);
  struct lxg_history_value value = {0};
  ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, time, &value), LXG_OK);
  assert_close(value.luminosity, luminosity, 1e-14);
  ck_assert(isinf(value.time_scale));
  double energy = -1.0;
  ck_assert_int_eq(lxg_history_energy(history, LXG_HISTORY_VALUE, time, time, &energy, NULL), LXG_OK);
  ck_assert(energy == 0.0);
  struct lxg_history_excess excess = {0};
  ck_assert_int_eq(lxg_history_excess(history, LXG_HISTORY_VALUE, 1.1e38, &excess, NULL), LXG_OK);
  ck_assert(excess.intervals == 1 && excess.duration == 0.0);
  assert_close(excess.mean_ratio, 2.0, 1e-14);
  struct lxg_history_samples *samples = NULL;
  const struct lxg_history_sampling sampling = lxg_history_sampling_default();
  ck_assert_int_eq(lxg_history_sample(history, &sampling, &samples, NULL), LXG_OK);
  ck_assert_uint_eq(samples->count, 1);
  assert_close(samples->luminosity[0], luminosity, 1e-14);
  lxg_history_samples_destroy(samples);
  lxg_history_destroy(history);
}
END_TEST

/* Sum of weight L^p, and the same with every panel halved (luminosity looked up again). */
static void two_sums(const struct lxg_history *history, const struct lxg_history_samples *s, double p,
                     double sums[2]) {
  sums[0] = sums[1] = 0.0;
  for (size_t i = 0; i < s->count; i++) {
    sums[0] += s->weight[i] * pow(s->luminosity[i] / 1e38, p);
  }
  for (size_t i = 0; i + 1 < s->count; i++) {
    static const double simpson[3] = {1.0 / 6.0, 4.0 / 6.0, 1.0 / 6.0};
    for (int k = 0; k < 3; k++) {
      struct lxg_history_value value = {0};
      const double t = s->time[i] + 0.5 * k * (s->time[i + 1] - s->time[i]);
      ck_assert_int_eq(lxg_history_at(history, LXG_HISTORY_VALUE, t, &value), LXG_OK);
      sums[1] += (s->time[i + 1] - s->time[i]) * simpson[k] * pow(value.luminosity / 1e38, p);
    }
  }
}

/* Halving changes integrals of smooth functions of L by less than 1e-4 (asked for; met with a wide margin), and the integral
 * of the exponential itself is the closed form. */
START_TEST(sampling_converges) {
  struct columns c = decline();
  for (int i = 0; i < ROWS && _i == 1; i++) {
    c.luminosity[i] *= 1.0 + 0.6 * sin(7.0 * i); /* bumpy */
    c.low[i] = c.high[i] = c.luminosity[i];
  }
  const struct lxg_history_rows rows = rows_of(&c);
  struct lxg_history *history = build(&rows);
  struct lxg_history_samples *samples = NULL;
  struct lxg_error error = {0};
  const struct lxg_history_sampling sampling = lxg_history_sampling_default();
  assert_status(lxg_history_sample(history, &sampling, &samples, &error), LXG_OK, &error);
  const double powers[] = {-5.0, -1.3, 0.4, 1.0, 2.7, 5.0};
  for (size_t k = 0; k < sizeof powers / sizeof powers[0]; k++) {
    double sums[2];
    two_sums(history, samples, powers[k], sums);
    assert_close(sums[0], sums[1], 1e-5);
    if (_i == 0) {
      const double rate = -powers[k] / fold;
      const double exact = pow(brightest / 1e38, powers[k]) * (exp(rate * 9.7e5) - exp(rate * -2.3e4)) / rate;
      assert_close(sums[0], exact, 1e-5);
    }
  }
  ck_assert(samples->count < 1500);
  ck_assert(samples->time[0] == c.time[0] && samples->time[samples->count - 1] == c.time[ROWS - 1]);
  for (size_t i = 1; i < samples->count; i++) {
    ck_assert(samples->time[i] > samples->time[i - 1] && samples->weight[i] > 0.0);
  }
  lxg_history_samples_destroy(samples);
  struct lxg_history_sampling tight = sampling;
  tight.max_count = 20;
  ck_assert_int_eq(lxg_history_sample(history, &tight, &samples, &error), LXG_LIMIT);
  ck_assert_str_eq(error.code, "history-samples");
  ck_assert_ptr_null(samples);
  tight.tolerance = 0.0;
  ck_assert_int_eq(lxg_history_sample(history, &tight, &samples, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "history-sampling");
  lxg_history_destroy(history);
}
END_TEST

/* Plateau, then t^-1.75-like decline, on top of 18F heating: energies and crossing in closed form. */
START_TEST(formula_history) {
  const double plateau = 3.1e38, lasts = 2.2e5, scale = 1.1e5, index = 1.75, end = 2.9e6, mass = 4e27,
               x = 2e-3;
  struct lxg_formula formula = {.count = 2,
                                .term = {{.law = LXG_FORMULA_PLATEAU,
                                          .luminosity = plateau,
                                          .duration = lasts,
                                          .time_scale = scale,
                                          .index = index},
                                         {.law = LXG_FORMULA_DECAY,
                                          .mass = mass,
                                          .photons = {.gamma_time = INFINITY},
                                          .isotope_count = 1,
                                          .isotope = {{*lxg_decay_find("18F"), x}}}}};
  struct lxg_history *history = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_history_create_formula(&formula, LXG_HISTORY_BASE, 0.0, end, &history, &error), LXG_OK,
                &error);
  const double fall = plateau * scale / (index - 1.0) * (1.0 - pow(1.0 + (end - lasts) / scale, 1.0 - index));
  const double nuclei = mass * x / (18.0 * LXG_ATOMIC_MASS);
  const double heat =
      nuclei * 0.9686 * (0.250 + 2.0 * 0.51099895) * 1e6 * LXG_ELECTRON_VOLT; /* all has decayed */
  double energy = 0.0;
  assert_status(lxg_history_energy(history, LXG_HISTORY_VALUE, 0.0, end, &energy, &error), LXG_OK, &error);
  assert_close(energy, plateau * lasts + fall + heat, 1e-10);
  /* the isotope is gone when the decline passes the level */
  struct lxg_history_excess excess = {0};
  const double level = 4e37;
  assert_status(lxg_history_excess(history, LXG_HISTORY_VALUE, level, &excess, &error), LXG_OK, &error);
  assert_close(excess.last, lasts + scale * (pow(plateau / level, 1.0 / index) - 1.0), 1e-10);
  ck_assert(excess.intervals == 1 && history->gap_count == 0 && history->kind == LXG_HISTORY_BASE);
  struct lxg_history_samples *samples = NULL;
  const struct lxg_history_sampling sampling = lxg_history_sampling_default();
  assert_status(lxg_history_sample(history, &sampling, &samples, &error), LXG_OK, &error);
  double sums[2];
  two_sums(history, samples, 1.0, sums);
  assert_close(sums[0] * 1e38, energy, 1e-5);
  lxg_history_samples_destroy(samples);
  ck_assert_int_eq(lxg_history_excess(history, LXG_HISTORY_LOW, level, &excess, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "history-curve");
  lxg_history_destroy(history);
}
END_TEST

/* Beta-limited burning stops at once when the hydrogen is gone; a faint constant keeps the luminosity positive. Seconds counted
 * from a far epoch, so that roundings of time are coarse. */
START_TEST(formula_with_a_step) {
  const double origin = 2.1e11, floor = 3e36, mass = 1e22;
  const struct lxg_formula formula = {
      .count = 2,
      .term = {{.law = LXG_FORMULA_CONSTANT, .origin = origin, .luminosity = floor},
               {.law = LXG_FORMULA_HOT_CNO, .origin = origin, .mass = mass, .hydrogen = 0.4, .cno = 0.2}}};
  const double lasts = 0.4 * 6.0e18 / (5.9e15 * 0.2), burning = 5.9e15 * 0.2 * mass;
  struct lxg_history *history = NULL;
  struct lxg_error error = {0};
  assert_status(
      lxg_history_create_formula(&formula, LXG_HISTORY_BASE, origin, origin + 5e3, &history, &error), LXG_OK,
      &error);
  struct lxg_history_excess excess = {0};
  assert_status(lxg_history_excess(history, LXG_HISTORY_VALUE, 2.0 * floor, &excess, &error), LXG_OK, &error);
  const double rounding = 1e-3 / lasts; /* 16 roundings of 2e11 s */
  assert_close(excess.duration, lasts, rounding);
  assert_close(excess.radiated, (burning + floor) * lasts, rounding);
  struct lxg_history_samples *samples = NULL;
  const struct lxg_history_sampling sampling = lxg_history_sampling_default();
  assert_status(lxg_history_sample(history, &sampling, &samples, &error), LXG_OK, &error);
  ck_assert(samples->count < 3000);
  lxg_history_samples_destroy(samples);
  lxg_history_destroy(history);
}
END_TEST

static void expect_refused(const struct lxg_history_rows *rows, const char *code, const char *text) {
  struct lxg_history *history = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_history_create(rows, &history, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, code);
  ck_assert_msg(strstr(error.line[0], text) != NULL, "%s lacks %s", error.line[0], text);
  ck_assert_ptr_null(history);
}

START_TEST(rows_refused) {
  const struct columns good = decline();
  struct columns bad = good;
  struct lxg_history_rows rows = rows_of(&bad);
  bad.time[4] = bad.time[3];
  expect_refused(&rows, "history-duplicate", "row 5");
  bad.time[4] = bad.time[2] - 1.0;
  expect_refused(&rows, "history-order", "row 5");
  bad.time[4] = INFINITY;
  expect_refused(&rows, "history-time", "row 5");
  bad = good;
  bad.luminosity[7] = 0.0;
  expect_refused(&rows, "history-luminosity", "row 8");
  bad.luminosity[7] = NAN;
  expect_refused(&rows, "history-luminosity", "row 8");
  bad = good;
  bad.low[2] = 1.01 * bad.luminosity[2];
  expect_refused(&rows, "history-error", "row 3");
  bad.low[2] = 0.0;
  expect_refused(&rows, "history-error", "row 3");
  bad = good;
  bad.high[0] = NAN;
  expect_refused(&rows, "history-error", "row 1");
  static const size_t lines[ROWS] = {12, 13, 14, 17, 18, 19, 20, 21, 22};
  rows.line = lines;
  bad = good;
  bad.luminosity[3] = -4.0;
  expect_refused(&rows, "history-luminosity", "line 17");
  bad = good;
  rows.high = NULL;
  expect_refused(&rows, "history-error", "both");
  rows = rows_of(&good);
  rows.gap_fraction = 0.0;
  expect_refused(&rows, "history-gap-fraction", "gap fraction");
  rows.count = 0;
  expect_refused(&rows, "history-empty", "at least one");
}
END_TEST

START_TEST(formula_and_calls_refused) {
  struct lxg_formula formula = {
      .count = 1,
      .term = {{.law = LXG_FORMULA_EXPONENTIAL, .origin = 5.0, .luminosity = 1e38, .time_scale = 1e5}}};
  struct lxg_history *history = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_history_create_formula(&formula, LXG_HISTORY_BASE, 0.0, 1e5, &history, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "history-formula-value"); /* nothing shines before the origin */
  ck_assert_int_eq(lxg_history_create_formula(&formula, LXG_HISTORY_BASE, 5.0, 5.0, &history, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "history-window");
  formula.term[0].luminosity = -1.0;
  ck_assert_int_eq(lxg_history_create_formula(&formula, LXG_HISTORY_BASE, 5.0, 9.0, &history, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "formula-luminosity");
  formula.term[0] = (struct lxg_formula_term){
      .law = LXG_FORMULA_POWER, .luminosity = 1e38, .time_scale = 1e5, .index = 1.2};
  ck_assert_int_eq(lxg_history_create_formula(&formula, LXG_HISTORY_BASE, 0.0, 9.0, &history, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "history-formula-value"); /* infinite at the origin */
  ck_assert_ptr_null(history);
  struct columns c = decline();
  struct lxg_history_rows rows = rows_of(&c);
  rows.low = rows.high = NULL;
  history = build(&rows);
  double energy = 0.0;
  struct lxg_history_excess excess = {0};
  ck_assert_int_eq(lxg_history_energy(history, LXG_HISTORY_VALUE, -1e6, 0.0, &energy, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "history-range");
  ck_assert_int_eq(lxg_history_energy(history, LXG_HISTORY_HIGH, 0.0, 1e5, &energy, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "history-curve");
  ck_assert_int_eq(lxg_history_excess(history, LXG_HISTORY_VALUE, 0.0, &excess, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "history-level");
  lxg_history_destroy(history);
  lxg_history_destroy(NULL);
  lxg_history_samples_destroy(NULL);
}
END_TEST

Suite *suite_history(void);
Suite *suite_history(void) {
  Suite *suite = suite_create("history");
  TCase *tests = tcase_create("history");
  tcase_add_test(tests, exponential_rows);
  tcase_add_test(tests, one_crossing);
  tcase_add_test(tests, several_intervals);
  tcase_add_test(tests, gaps);
  tcase_add_test(tests, single_row);
  tcase_add_loop_test(tests, sampling_converges, 0, 2);
  tcase_add_test(tests, formula_history);
  tcase_add_test(tests, formula_with_a_step);
  tcase_add_test(tests, rows_refused);
  tcase_add_test(tests, formula_and_calls_refused);
  suite_add_tcase(suite, tests);
  return suite;
}
