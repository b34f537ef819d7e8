/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_shell.c - swept shells against the closed form for two constant winds, conservation laws, and a
 * sticky-particle calculation that moves parcels from collision to collision (a different method: events in time,
 * no hull).
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/shell.h"

#include <stdlib.h>
#include <string.h>

static const double km = 1e5, day = 86400.0;

static struct lxg_shell_history *make(size_t count, const double time[], const double speed[],
                                      const double rate[], double radius) {
  struct lxg_shell_history *history = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_shell_create(count, time, speed, rate, radius, &history, &error), LXG_OK, &error);
  return history;
}

/* Slow wind (v1, m1) from 3 d, fast wind (v2, m2) from 20 d until 400 d. */
static const double v1 = 413e5, m1 = 2.3e21, v2 = 1377e5, m2 = 0.71e21, start = 3.0 * 86400.0,
                    jump = 20.0 * 86400.0, stop = 400.0 * 86400.0;

static struct lxg_shell_history *two_winds(double radius) {
  const double time[] = {start, jump, jump, stop}, speed[] = {v1, v1, v2, v2}, rate[] = {m1, m1, m2, m2};
  return make(4, time, speed, rate, radius);
}

/* Momentum balance of a thin shell between two constant winds, m1 (V - v1)^2/v1 = m2 (v2 - V)^2/v2. */
static double balance(void) {
  const double a = sqrt(m1 / v1), b = sqrt(m2 / v2);
  return (a * v1 + b * v2) / (a + b);
}

/* Tolerance 1e-12: closed form on both sides; departure times differ by rounding of t. */
START_TEST(two_constant_winds) {
  const double exact = 1e-12, radius = 4.1e11, v = balance();
  struct lxg_shell_history *history = two_winds(radius);
  struct lxg_error error = {0};
  const double days[] = {20.001, 20.5, 23.0};
  for (int i = 0; i < 3; i++) {
    struct lxg_shell_state s[2];
    size_t count = 0;
    const double t = days[i] * day, dt = t - jump;
    assert_status(lxg_shell_at(history, t, s, 2, &count, &error), LXG_OK, &error);
    ck_assert_int_eq((int)count, 1);
    /* 1e-9 at 20.001 d: dt itself is a difference of times 2e4 times larger, and mass is proportional to dt */
    const double early = i == 0 ? 1e-9 : exact * 100.0;
    assert_close(s[0].speed, v, early);
    assert_close(s[0].radius - radius, v * dt, early);
    assert_close(s[0].mass, dt * (m1 * (v - v1) / v1 + m2 * (v2 - v) / v2), early);
    assert_close(s[0].power_behind, m2 * pow(v2 - v, 3.0) / (2.0 * v2), early);
    assert_close(s[0].power_ahead, m1 * pow(v - v1, 3.0) / (2.0 * v1), early);
    assert_close(s[0].dissipated, dt * (s[0].power_behind + s[0].power_ahead), 10.0 * early);
    assert_close(s[0].column, s[0].mass / (4.0 * LXG_PI * s[0].radius * s[0].radius), exact);
    assert_close(s[0].wind_speed, v2, exact);
  }
  lxg_shell_destroy(history);
}
END_TEST

/* When the slow wind is all swept up, (S2) alone is left. With slow mass A, momentum B and center xA(t) of the
 * slow gas and fast gas from jump to tau = t - X/v2: A (xA - X) + m2 int (v2 (t - tau') - X) dtau' = 0, that is
 * m2 v2 (T - X/v2)^2/2 = A (X - xA), T = t - jump: a quadratic in X solved here. */
START_TEST(slow_wind_used_up) {
  struct lxg_shell_history *history = two_winds(0.0);
  struct lxg_error error = {0};
  const double t = 171.3 * day, big_t = t - jump, a = m1 * (jump - start), middle = 0.5 * (jump + start);
  const double xa = v1 * (t - middle);
  /* y = v2 T - X >= 0: m2 y^2/(2 v2) = A (v2 T - y - xA) */
  const double p = m2 / (2.0 * v2), q = a, r = -a * (v2 * big_t - xa);
  const double y = (-q + sqrt(q * q - 4.0 * p * r)) / (2.0 * p), x = v2 * big_t - y;
  struct lxg_shell_state s;
  size_t count = 0;
  assert_status(lxg_shell_at(history, t, &s, 1, &count, &error), LXG_OK, &error);
  ck_assert_int_eq((int)count, 1);
  assert_close(s.radius, x, 1e-12);
  const double fast = m2 * (big_t - x / v2);
  assert_close(s.mass, a + fast, 1e-12);
  assert_close(s.speed, (a * v1 + fast * v2) / (a + fast), 1e-12);
  ck_assert(s.power_ahead == 0.0 && s.first == start);
  lxg_shell_destroy(history);
}
END_TEST

/* Mass and momentum of shells and free gas together are those that left, to 1e-10 (in fact to rounding): the
 * distribution after sweeping is summed over everything, and its first moment bracketed by very narrow bins. */
static size_t wavy(size_t count, double *time, double *speed, double *rate) {
  for (size_t i = 0; i < count; i++) {
    const double u = (double)i / (double)(count - 1);
    time[i] = day * (2.0 + 61.7 * u);
    speed[i] = km * (700.0 + 500.0 * u + 260.0 * sin(21.0 * u) + 90.0 * sin(47.0 * u + 1.0));
    rate[i] = 1e21 * (1.3 + sin(9.0 * u) + 0.2 * cos(33.0 * u));
  }
  return count;
}

START_TEST(conservation) {
  double time[97], speed[97], rate[97];
  struct lxg_shell_history *history = make(wavy(97, time, speed, rate), time, speed, rate, 2e11);
  struct lxg_error error = {0};
  for (double days = 5.0; days < 3000.0; days *= 1.7) {
    struct lxg_shell_state s[64];
    size_t count = 0;
    double mass = 0.0, momentum = 0.0, energy = 0.0;
    double edge[2] = {1.0, 1e10}, before[1], after[1], outside[4];
    assert_status(lxg_shell_at(history, days * day, s, 64, &count, &error), LXG_OK, &error);
    lxg_shell_total(history, days * day, &mass, &momentum, &energy);
    assert_status(lxg_shell_distribution(history, days * day, 1, edge, before, after, outside, &error),
                  LXG_OK, &error);
    assert_close(before[0], mass, 1e-12);
    assert_close(after[0], mass, 1e-10);
    for (size_t k = 0; k < count; k++) {
      /* mass and momentum of each shell re-added from the samples by a fine midpoint sum (error ~ n^-2) */
      double m = 0.0, p = 0.0;
      const int n = 20000;
      for (int j = 0; j < n; j++) {
        const double tau = s[k].first + (j + 0.5) / n * (s[k].last - s[k].first);
        const double position = (tau - time[0]) / (time[96] - time[0]) * 96.0;
        const size_t i = (size_t)fmin(95.0, floor(position));
        const double f = position - (double)i;
        const double dm = (rate[i] + f * (rate[i + 1] - rate[i])) * (s[k].last - s[k].first) / n;
        m += dm;
        p += dm * (speed[i] + f * (speed[i + 1] - speed[i]));
      }
      assert_close(s[k].mass, m, 1e-6);
      assert_close(s[k].momentum, p, 1e-6);
      assert_close(s[k].speed, s[k].momentum / s[k].mass, 1e-15);
      ck_assert(s[k].dissipated >= 0.0);
      ck_assert(k == 0 || (s[k].radius < s[k - 1].radius && s[k].first >= s[k - 1].last));
    }
  }
  lxg_shell_destroy(history);
}
END_TEST

/* dX/dt = V and dE/dt = power, by central differences over 1e-3 d of a smooth growing shell: truncation 1e-7. */
START_TEST(motion_and_power) {
  double time[97], speed[97], rate[97];
  struct lxg_shell_history *history = make(wavy(97, time, speed, rate), time, speed, rate, 2e11);
  struct lxg_error error = {0};
  const double h = 1e-3 * day;
  for (int i = 0; i < 6; i++) {
    const double t = (31.37 + 11.3 * i) * day;
    const double times[3] = {t - h, t, t + h};
    struct lxg_shell_state s[3];
    bool exists[3];
    assert_status(lxg_shell_track(history, 3, times, s, exists, &error), LXG_OK, &error);
    ck_assert(exists[0] && exists[1] && exists[2]);
    assert_close((s[2].radius - s[0].radius) / (2.0 * h), s[1].speed, 1e-6);
    const double lost = (s[2].dissipated - s[0].dissipated) / (2.0 * h);
    assert_close(lost, s[1].power_behind + s[1].power_ahead, 1e-4);
  }
  lxg_shell_destroy(history);
}
END_TEST

/* ---- sticky particles ---- */

struct parcel {
  double m, p, x, t; /* mass, momentum, position at time t */
  int ahead, behind; /* neighbours, -1 at the ends */
};

static double meeting(const struct parcel *ahead, const struct parcel *behind) {
  const double va = ahead->p / ahead->m, vb = behind->p / behind->m;
  if (!(vb > va)) {
    return INFINITY;
  }
  return (ahead->x - va * ahead->t - behind->x + vb * behind->t) / (vb - va);
}

/* Moves parcels to time t: always the earliest meeting of neighbours first. Returns parcels left, compacted. */
static int stick(struct parcel *parcel, int n, double t) {
  for (;;) {
    double earliest = t;
    int who = -1;
    for (int i = parcel[0].behind; i >= 0; i = parcel[i].behind) {
      const double when = meeting(&parcel[parcel[i].ahead], &parcel[i]);
      if (when < earliest) {
        earliest = when;
        who = i;
      }
    }
    if (who < 0) {
      break;
    }
    struct parcel *const b = &parcel[who], *const a = &parcel[b->ahead];
    a->x += a->p / a->m * (earliest - a->t);
    a->t = earliest;
    a->m += b->m;
    a->p += b->p;
    a->behind = b->behind;
    if (b->behind >= 0) {
      parcel[b->behind].ahead = b->ahead;
    }
  }
  int left = 0;
  for (int i = 0; i >= 0 && i < n; i = parcel[i].behind) {
    parcel[left++] = parcel[i];
  }
  return left;
}

/* 1600 parcels of equal departure interval; a shell there is what exceeds 20 parcels. Edges are uncertain by a
 * parcel, so masses agree to 2/20 of the smallest; for the most massive shell to 3e-3, its speed and radius to
 * 1e-3. */
START_TEST(sticky_particles) {
  double time[97], speed[97], rate[97];
  struct lxg_shell_history *history = make(wavy(97, time, speed, rate), time, speed, rate, 0.0);
  struct lxg_error error = {0};
  enum { N = 1600 };
  struct parcel *parcel = malloc(N * sizeof *parcel);
  const double t = (_i == 0 ? 41.0 : _i == 1 ? 80.0 : 300.0) * day, end = fmin(t, time[96]);
  int n = 0;
  for (int j = 0; j < N; j++) {
    const double tau = time[0] + (j + 0.5) / N * (end - time[0]);
    const double position = (tau - time[0]) / (time[96] - time[0]) * 96.0;
    const size_t i = (size_t)fmin(95.0, floor(position));
    const double f = position - (double)i, v = speed[i] + f * (speed[i + 1] - speed[i]);
    const double m = (rate[i] + f * (rate[i + 1] - rate[i])) * (end - time[0]) / N;
    parcel[n] = (struct parcel){.m = m, .p = m * v, .x = 0.0, .t = tau, .ahead = n - 1, .behind = n + 1};
    n++;
  }
  parcel[N - 1].behind = -1;
  const int left = stick(parcel, N, t);
  struct lxg_shell_state s[64];
  size_t count = 0;
  assert_status(lxg_shell_at(history, t, s, 64, &count, &error), LXG_OK, &error);
  double largest = 0.0, total = 0.0;
  for (int i = 0; i < left; i++) {
    total += parcel[i].m;
    largest = fmax(largest, parcel[i].m);
  }
  int seen = 0;
  for (int i = 0; i < left; i++) {
    if (parcel[i].m < 20.0 * total / N) {
      continue;
    }
    const double x = parcel[i].x + parcel[i].p / parcel[i].m * (t - parcel[i].t);
    size_t best = 0;
    for (size_t k = 1; k < count; k++) {
      if (fabs(s[k].radius - x) < fabs(s[best].radius - x)) {
        best = k;
      }
    }
    ck_assert(count > 0);
    const bool main_shell = parcel[i].m == largest;
    assert_close(s[best].mass, parcel[i].m, main_shell ? 3e-3 : 0.1);
    assert_close(s[best].radius, x, main_shell ? 1e-3 : 5e-3);
    assert_close(s[best].speed, parcel[i].p / parcel[i].m, main_shell ? 1e-3 : 1e-2);
    seen++;
  }
  ck_assert_int_ge(seen, 1);
  free(parcel);
  lxg_shell_destroy(history);
}
END_TEST

/* A ramp: characteristics of v = a + b (tau - tau_0) first cross at tau_0 + a/b, at a^2/b; a jump at once; across
 * a pause where two straight lines meet. */
START_TEST(first_crossing) {
  struct lxg_shell_onset onset;
  {
    const double time[] = {10.0, 110.0, 190.0}, speed[] = {7e7, 7e7, 9.4e7}, rate[] = {1.0, 2.0, 3.0};
    struct lxg_shell_history *history = make(3, time, speed, rate, 5e9);
    const double slope = 2.4e7 / 80.0;
    lxg_shell_first(history, INFINITY, &onset);
    ck_assert(onset.forms);
    assert_close(onset.time, 110.0 + 7e7 / slope, 1e-14);
    assert_close(onset.radius, 5e9 + 7e7 * 7e7 / slope, 1e-14);
    assert_close(onset.departure, 110.0, 1e-14);
    struct lxg_shell_state s;
    size_t count = 9;
    struct lxg_error error = {0};
    assert_status(lxg_shell_at(history, 0.9999 * onset.time, &s, 1, &count, &error), LXG_OK, &error);
    ck_assert_int_eq((int)count, 0);
    assert_status(lxg_shell_at(history, 1.001 * onset.time, &s, 1, &count, &error), LXG_OK, &error);
    ck_assert_int_eq((int)count, 1);
    assert_close(s.radius, onset.radius, 0.01);
    lxg_shell_first(history, 300.0, &onset);
    ck_assert(!onset.forms);
    ck_assert_str_eq(onset.reason_code, "shell-after-end");
    lxg_shell_destroy(history);
  }
  struct lxg_shell_history *winds = two_winds(1e11);
  lxg_shell_first(winds, INFINITY, &onset);
  ck_assert(onset.forms && onset.time == jump && onset.radius == 1e11);
  lxg_shell_destroy(winds);
  const double time[] = {0.0, 10.0, 10.0, 25.0, 25.0, 30.0}, speed[] = {3e7, 3e7, 9e9, 9e9, 8e7, 8e7};
  const double rate[] = {2.0, 2.0, 0.0, 0.0, 1.0, 1.0};
  struct lxg_shell_history *pause = make(6, time, speed, rate, 0.0);
  lxg_shell_first(pause, INFINITY, &onset);
  assert_close(onset.time, (8e7 * 25.0 - 3e7 * 10.0) / 5e7, 1e-14);
  lxg_shell_destroy(pause);
}
END_TEST

START_TEST(no_overtaking) {
  const double time[] = {0.0, day, 9.0 * day}, speed[] = {2e8, 1.9e8, 0.3e8}, rate[] = {1e20, 3e20, 1e20};
  struct lxg_shell_history *history = make(3, time, speed, rate, 0.0);
  struct lxg_shell_onset onset;
  struct lxg_error error = {0};
  lxg_shell_first(history, INFINITY, &onset);
  ck_assert(!onset.forms && strlen(onset.reason) > 10);
  ck_assert_str_eq(onset.reason_code, "shell-no-overtaking");
  const double times[] = {-5.0 * day, 0.0, day, 500.0 * day};
  struct lxg_shell_state s[4];
  bool exists[4];
  assert_status(lxg_shell_track(history, 4, times, s, exists, &error), LXG_OK, &error);
  for (int i = 0; i < 4; i++) {
    ck_assert(!exists[i] && s[i].time == times[i] && s[i].mass == 0.0);
  }
  lxg_shell_destroy(history);
}
END_TEST

/* Constant rate and a linear ramp of speed: dM/dv = Mdot/|v'| before; afterwards the shell's gas sits in one bin.
 * */
START_TEST(speed_distribution) {
  const double time[] = {0.0, 40.0 * day}, speed[] = {5e7, 13e7}, rate[] = {3e21, 3e21};
  struct lxg_shell_history *history = make(2, time, speed, rate, 0.0);
  struct lxg_error error = {0};
  double edge[9], before[8], after[8], outside[4];
  for (int k = 0; k <= 8; k++) {
    edge[k] = 6e7 + 0.8e7 * k; /* 6e7 .. 12.4e7 */
  }
  assert_status(lxg_shell_distribution(history, 41.0 * day, 8, edge, before, after, outside, &error), LXG_OK,
                &error);
  const double per_speed = 3e21 * 40.0 * day / 8e7;
  for (int k = 0; k < 8; k++) {
    assert_close(before[k], per_speed * 0.8e7, 1e-12);
  }
  assert_close(outside[0], per_speed * 1e7, 1e-12);
  assert_close(outside[1], per_speed * 0.6e7, 1e-12);
  struct lxg_shell_state s;
  size_t count = 0;
  double sum = outside[2] + outside[3];
  assert_status(lxg_shell_at(history, 41.0 * day, &s, 1, &count, &error), LXG_OK, &error);
  ck_assert_int_eq((int)count, 1);
  for (int k = 0; k < 8; k++) {
    sum += after[k];
    if (s.speed >= edge[k] && s.speed < edge[k + 1]) {
      ck_assert(after[k] >= s.mass * (1.0 - 1e-12));
    }
  }
  assert_close(sum, 3e21 * 40.0 * day, 1e-12);
  ck_assert_int_eq(lxg_shell_distribution(history, day, 0, edge, before, after, outside, &error), LXG_INPUT);
  edge[3] = edge[2];
  ck_assert_int_eq(lxg_shell_distribution(history, day, 8, edge, before, after, outside, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "shell-bins");
  lxg_shell_destroy(history);
}
END_TEST

static void refuse(size_t count, const double t[], const double v[], const double m[], double radius,
                   const char *code, const char *word) {
  struct lxg_shell_history *history = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_shell_create(count, t, v, m, radius, &history, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, code);
  ck_assert_msg(strstr(error.line[0], word) != NULL, "%s", error.line[0]);
  ck_assert(history == NULL);
}

START_TEST(bad_input) {
  const double t[] = {0.0, 1.0, 2.0}, v[] = {1e7, 1e7, 1e7}, m[] = {1.0, 1.0, 1.0};
  refuse(1, t, v, m, 0.0, "shell-count", "1");
  refuse(3, t, v, m, -1.0, "shell-radius", "-1");
  refuse(3, (double[]){0.0, 1.0, 0.5}, v, m, 0.0, "shell-time", "row 3");
  refuse(3, (double[]){1.0, 1.0, 1.0}, v, m, 0.0, "shell-time", "row 3");
  refuse(3, (double[]){0.0, NAN, 0.5}, v, m, 0.0, "shell-time", "row 2");
  refuse(3, t, (double[]){1e7, 0.0, 1e7}, m, 0.0, "shell-speed", "row 2");
  refuse(3, t, v, (double[]){1.0, 1.0, -1e-9}, 0.0, "shell-rate", "row 3");
  refuse(3, t, v, (double[]){0.0, 0.0, 0.0}, 0.0, "shell-rate", "all 3");
  struct lxg_shell_history *history = make(3, t, v, m, 0.0);
  struct lxg_error error = {0};
  struct lxg_shell_state s;
  bool exists = true;
  size_t count = 0;
  const double when = NAN;
  ck_assert_int_eq(lxg_shell_at(history, INFINITY, &s, 1, &count, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_shell_track(history, 1, &when, &s, &exists, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "shell-time");
  lxg_shell_destroy(history);
  lxg_shell_destroy(NULL);
}
END_TEST

Suite *suite_shell(void);
Suite *suite_shell(void) {
  Suite *suite = suite_create("shell");
  TCase *tests = tcase_create("shell");
  tcase_add_test(tests, two_constant_winds);
  tcase_add_test(tests, slow_wind_used_up);
  tcase_add_test(tests, conservation);
  tcase_add_test(tests, motion_and_power);
  tcase_add_loop_test(tests, sticky_particles, 0, 3);
  tcase_add_test(tests, first_crossing);
  tcase_add_test(tests, no_overtaking);
  tcase_add_test(tests, speed_distribution);
  tcase_add_test(tests, bad_input);
  suite_add_tcase(suite, tests);
  return suite;
}
