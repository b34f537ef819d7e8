/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bench_opacity.c - time of one opacity with both slopes, for each source, beside that of exp().
 *
 * Points run along a wind-like path through the (rho, T) plane, so branches and caches behave as in a solver. Processor
 * time, least of several rounds; the ratio to exp() measured in the same run is what can be compared between machines.
 */
#include "luxgale/constants.h"
#include "luxgale/opacity_table.h"

#include <math.h>
#include <stdio.h>
#include <time.h>

enum { POINTS = 4096, REPEATS = 40, ROUNDS = 9 };

static double ln_rho[POINTS], ln_t[POINTS];
static volatile double sink;

static double now_ns(void) {
  struct timespec t;
  clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &t);
  return 1e9 * (double)t.tv_sec + (double)t.tv_nsec;
}

static void run(const struct lxg_opacity *opacity) {
  double sum = 0.0;
  for (int k = 0; k < REPEATS; k++) {
    for (int i = 0; i < POINTS; i++) {
      struct lxg_opacity_value value;
      if (opacity == NULL) {
        sum += exp(-0.1 * ln_t[i]);
      } else if (lxg_opacity_at(opacity, ln_rho[i], ln_t[i], &value) == LXG_OK) {
        sum += value.kappa + value.dlnk_dlnrho + value.dlnk_dlnt;
      }
    }
  }
  sink = sum;
}

static double time_of(const struct lxg_opacity *opacity) {
  double best = INFINITY;
  for (int k = 0; k < ROUNDS; k++) {
    const double start = now_ns();
    run(opacity);
    best = fmin(best, (now_ns() - start) / ((double)REPEATS * POINTS));
  }
  return best;
}

/* A table of the formula itself: the values do not matter here. */
static struct lxg_opacity *table_of(const struct lxg_opacity *formula,
                                    const struct lxg_composition *composition) {
  double log_t[77], log_r[19];
  for (int i = 0; i < 77; i++) {
    log_t[i] = 3.75 + 0.065 * i;
  }
  for (int j = 0; j < 19; j++) {
    log_r[j] = -8.0 + 0.5 * j;
  }
  struct lxg_opacity_set set = {0};
  struct lxg_opacity_grid *grid = NULL;
  struct lxg_opacity *table = NULL;
  const struct lxg_opacity_table_options options = lxg_opacity_table_defaults();
  if (lxg_opacity_tabulate(formula, composition, log_t, 77, log_r, 19, "formula", &grid, NULL) == LXG_OK &&
      lxg_opacity_set_add(&set, grid, NULL) == LXG_OK) {
    lxg_opacity_create_table(&set, composition, &options, &table, NULL);
  }
  lxg_opacity_set_free(&set);
  return table;
}

int main(void) {
  static const char *const name[] = {"kramers", "scattering", "reference"};
  const struct lxg_composition composition = {.hydrogen = 0.35, .helium = 0.33, .cno = 0.30, .metals = 0.02};
  for (int i = 0; i < POINTS; i++) {
    const double path = (double)i / POINTS;
    ln_t[i] = LXG_LN10 * (8.0 - 3.9 * path);
    ln_rho[i] = LXG_LN10 * (1.0 - 12.0 * path + 0.3 * sin(40.0 * path));
  }
  const double reference = time_of(NULL);
  printf("%-12s %6.1f ns\n", "exp()", reference);
  for (int f = 0; f < 3; f++) {
    struct lxg_opacity *opacity = NULL;
    if (lxg_opacity_create_formula((enum lxg_opacity_formula)f, &composition, &opacity, NULL) != LXG_OK) {
      return 1;
    }
    const double time = time_of(opacity);
    printf("%-12s %6.1f ns  %5.1f exp()\n", name[f], time, time / reference);
    if (f == 0) {
      struct lxg_opacity *table = table_of(opacity, &composition);
      const double table_time = time_of(table);
      printf("%-12s %6.1f ns  %5.1f exp()\n", "table", table_time, table_time / reference);
      lxg_opacity_destroy(table);
    }
    lxg_opacity_destroy(opacity);
  }
  return 0;
}
