/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bench_decline.c - processor time of a whole eruption, and of its two expensive stages, for a few dwarfs.
 *
 * Wanted: at most 1 s with the built-in opacity formula. Best of a few rounds.
 */
#include "luxgale/constants.h"
#include "luxgale/decline.h"

#include <math.h>
#include <stdio.h>
#include <time.h>

enum { ROUNDS = 3 };

static double now(void) {
  struct timespec t;
  clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &t);
  return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

static double time_of_rest(const struct lxg_wind_model *model) {
  struct lxg_hydrostatic_options options = lxg_hydrostatic_options_default();
  options.tolerance = lxg_decline_options_default().tolerance;
  const struct lxg_hydrostatic_limit limit = {.temperature = 3e3, .envelope_mass = INFINITY};
  const double start = now();
  struct lxg_hydrostatic_solver *solver = NULL;
  struct lxg_hydrostatic_family family = {0};
  if (lxg_hydrostatic_solver_create(model, &options, &solver, NULL) == LXG_OK) {
    lxg_hydrostatic_trace(solver, &limit, &family, NULL);
  }
  lxg_hydrostatic_family_free(&family);
  lxg_hydrostatic_solver_destroy(solver);
  return now() - start;
}

int main(void) {
  static const double mass[] = {0.9, 1.05, 1.2, 1.3};
  printf("%-6s %9s %9s %7s %7s\n", "Msun", "whole s", "rest s", "states", "newton");
  for (size_t i = 0; i < sizeof mass / sizeof mass[0]; i++) {
    struct lxg_wind_model model = {
        .star = {.gm = LXG_SOLAR_GM * mass[i]},
        .composition = {.hydrogen = 0.46, .helium = 0.32, .cno = 0.20, .metals = 0.02}};
    struct lxg_opacity *opacity = NULL;
    if (lxg_star_dwarf_radius(mass[i] * LXG_SOLAR_MASS, &model.star.radius, NULL) != LXG_OK ||
        lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &model.composition, &opacity, NULL) != LXG_OK ||
        lxg_burning_init(&model.burning, LXG_BURNING_CNO, &model.composition, NULL) != LXG_OK) {
      return 1;
    }
    model.opacity = opacity;
    double whole = INFINITY, rest = INFINITY;
    struct lxg_decline decline;
    size_t states = 0;
    int steps = 0;
    for (int k = 0; k < ROUNDS; k++) {
      const double start = now();
      if (lxg_decline_compute(&model, NULL, &decline, NULL) != LXG_OK) {
        return 1;
      }
      whole = fmin(whole, now() - start);
      states = decline.count;
      steps = decline.newton_steps;
      lxg_decline_free(&decline);
      rest = fmin(rest, time_of_rest(&model));
    }
    printf("%-6.2f %9.3f %9.3f %7zu %7d\n", mass[i], whole, rest, states, steps);
    lxg_opacity_destroy(opacity);
  }
  return 0;
}
