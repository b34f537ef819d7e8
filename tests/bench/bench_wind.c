/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bench_wind.c - what a wind costs: medians of processor time, and the share that is opacity alone.
 *
 *   bench_wind                 prints one line a quantity: name, value, unit
 *   bench_wind count WHAT      runs one task once, for instruction counts (valgrind --tool=callgrind): cold, follow, family
 *   bench_wind boundary        prints the boundary values of the wind that the general-purpose solver is timed on
 *
 * The model: 1 Msun, X = 0.35, Z = 0.02; formulas `reference` and `kramers`.
 */
#include "luxgale/constants.h"
#include "luxgale/family.h"

#include <gsl/gsl_errno.h>
#include <pthread.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

enum { REPEATS = 41, EVALUATIONS = 200000 };

struct bench {
  struct lxg_wind_model model;
  struct lxg_opacity *opacity;
  struct lxg_wind_solver *solver;
};

static double now(clockid_t clock) {
  struct timespec time;
  clock_gettime(clock, &time);
  return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

static int ascending(const void *a, const void *b) {
  const double x = *(const double *)a, y = *(const double *)b;
  return (x > y) - (x < y);
}

static double median(double value[], size_t count) {
  qsort(value, count, sizeof *value, ascending);
  return value[count / 2];
}

static struct bench setup(enum lxg_opacity_formula formula) {
  struct bench b = {0};
  b.model.composition = (struct lxg_composition){.hydrogen = 0.35, .helium = 0.63, .metals = 0.02};
  b.model.star = (struct lxg_star){.gm = LXG_SOLAR_GM, .radius = 5.5e8};
  if (lxg_opacity_create_formula(formula, &b.model.composition, &b.opacity, NULL) != LXG_OK) {
    exit(1);
  }
  b.model.opacity = b.opacity;
  if (lxg_wind_solver_create(&b.model, NULL, &b.solver, NULL) != LXG_OK) {
    exit(1);
  }
  return b;
}

static void teardown(struct bench *b) {
  lxg_wind_solver_destroy(b->solver);
  lxg_opacity_destroy(b->opacity);
}

static void must(enum lxg_status status) {
  if (status != LXG_OK) {
    fprintf(stderr, "bench_wind: a wind was not found\n");
    exit(1);
  }
}

static struct lxg_wind solve(const struct bench *b, double radius, bool cold) {
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_BASE_TEMPERATURE, 1e8}, {LXG_HELD_LAUNCH_RADIUS, radius}};
  struct lxg_wind wind;
  must(cold ? lxg_wind_solve(b->solver, hold, &wind, NULL) : lxg_wind_follow(b->solver, hold, &wind, NULL));
  return wind;
}

static double opacity_ns(const struct bench *b) {
  double sample[REPEATS], sum = 0.0;
  for (size_t r = 0; r < REPEATS; r++) {
    const double start = now(CLOCK_PROCESS_CPUTIME_ID);
    for (int i = 0; i < EVALUATIONS / REPEATS; i++) {
      struct lxg_opacity_value value;
      lxg_opacity_at(b->opacity, -18.0 + 2e-3 * i, 12.0 + 1e-3 * i, &value);
      sum += value.kappa;
    }
    sample[r] = (now(CLOCK_PROCESS_CPUTIME_ID) - start) / (EVALUATIONS / REPEATS) * 1e9;
  }
  return sum > 0.0 ? median(sample, REPEATS) : 0.0;
}

static void report(const char *formula, const char *what, double value, const char *unit) {
  printf("%-10s %-34s %10.4g %s\n", formula, what, value, unit);
}

static void *independent(void *argument) {
  struct bench *b = argument;
  for (int i = 0; i < 300; i++) {
    solve(b, 2e10 * (1.0 + 0.01 * (i % 2)), false);
  }
  return NULL;
}

/* Wall time of two solvers one after the other over the same two at once. */
static double two_threads(enum lxg_opacity_formula formula) {
  struct bench b[2] = {setup(formula), setup(formula)};
  double gain[5];
  solve(&b[0], 2e10, true);
  solve(&b[1], 2e10, true);
  for (size_t r = 0; r < 5; r++) {
    double start = now(CLOCK_MONOTONIC);
    independent(&b[0]);
    independent(&b[1]);
    const double serial = now(CLOCK_MONOTONIC) - start;
    pthread_t thread;
    start = now(CLOCK_MONOTONIC);
    if (pthread_create(&thread, NULL, independent, &b[1]) != 0) {
      exit(1);
    }
    independent(&b[0]);
    pthread_join(thread, NULL);
    gain[r] = serial / (now(CLOCK_MONOTONIC) - start);
  }
  teardown(&b[0]);
  teardown(&b[1]);
  return median(gain, 5);
}

static void measure(enum lxg_opacity_formula formula, const char *name) {
  struct bench b = setup(formula);
  double cold[REPEATS], follow[REPEATS], family[5];
  struct lxg_wind wind;
  int steps = 0;
  for (size_t r = 0; r < REPEATS; r++) {
    const double start = now(CLOCK_PROCESS_CPUTIME_ID);
    wind = solve(&b, 2e10 * (1.0 + 0.003 * (double)r), true);
    cold[r] = now(CLOCK_PROCESS_CPUTIME_ID) - start;
  }
  for (size_t r = 0; r < REPEATS; r++) {
    const double start = now(CLOCK_PROCESS_CPUTIME_ID);
    wind = solve(&b, 2e10 * (1.0 + 0.01 * (double)(r % 2)), false);
    follow[r] = now(CLOCK_PROCESS_CPUTIME_ID) - start;
    steps += wind.newton_steps;
  }
  struct lxg_family all;
  for (size_t r = 0; r < 5; r++) {
    const struct lxg_wind_hold hold = {LXG_HELD_BASE_TEMPERATURE, 1e8};
    const double start = now(CLOCK_PROCESS_CPUTIME_ID);
    must(lxg_family_trace(b.solver, &hold, NULL, &all, NULL));
    family[r] = now(CLOCK_PROCESS_CPUTIME_ID) - start;
    lxg_family_free(&all);
  }
  const double opacity = opacity_ns(&b);
  const double from_neighbour = median(follow, REPEATS);
  report(name, "opacity with slopes", opacity, "ns");
  report(name, "one wind, cold", median(cold, REPEATS) * 1e3, "ms");
  report(name, "one wind, from a neighbour", from_neighbour * 1e3, "ms");
  report(name, "  mesh intervals", (double)wind.mesh_points, "");
  report(name, "  Jacobians", (double)steps / REPEATS, "");
  report(name, "  in opacity evaluations", from_neighbour * 1e9 / opacity, "");
  report(name, "  per interval", from_neighbour * 1e9 / (double)wind.mesh_points, "ns");
  report(name, "family, whole range at 1e-4", median(family, 5), "s");
  report(name, "two threads over one", two_threads(formula), "times");
  teardown(&b);
}

static void once(const char *what) {
  struct bench b = setup(LXG_OPACITY_KRAMERS);
  struct lxg_family all = {0};
  const struct lxg_wind_hold hold = {LXG_HELD_BASE_TEMPERATURE, 1e8};
  solve(&b, 2e10, true);
  if (strcmp(what, "follow") == 0) {
    solve(&b, 2.02e10, false);
  } else if (strcmp(what, "family") == 0) {
    must(lxg_family_trace(b.solver, &hold, NULL, &all, NULL));
  }
  lxg_family_free(&all);
  teardown(&b);
}

/* One wind's values where a general-purpose solver needs them. */
static void boundary(void) {
  struct bench b = setup(LXG_OPACITY_REFERENCE);
  const struct lxg_wind w = solve(&b, 2e10, true);
  printf("%.15g %.15g %.15g %.15g %.15g\n", w.critical.radius, w.critical.temperature,
         w.value[LXG_HELD_MASS_LOSS_RATE], w.value[LXG_HELD_ENERGY_RATE], w.photosphere.radius);
  teardown(&b);
}

int main(int argc, char **argv) {
  gsl_set_error_handler_off();
  if (argc > 2 && strcmp(argv[1], "count") == 0) {
    once(argv[2]);
  } else if (argc > 1 && strcmp(argv[1], "boundary") == 0) {
    boundary();
  } else {
    measure(LXG_OPACITY_REFERENCE, "reference");
    measure(LXG_OPACITY_KRAMERS, "kramers");
  }
  return 0;
}
