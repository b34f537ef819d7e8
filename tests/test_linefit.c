/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_linefit.c - speeds of a case at any time, and the fit of stellar mass and held quantity.
 *
 * Nothing published covers the fit; the oracle is statistics: of many data sets made from winds solved without the grid, with
 * Gaussian noise of known size, the 68.27 % interval must hold the truth in about 68.27 %: in 60 to 76 % of 200, which is 2.4
 * binomial standard deviations to either side.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/ejecta.h"
#include "luxgale/memory.h"
#include "luxgale/random.h"
#include "luxgale/run.h"
#include "luxgale/speeds.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

static void read_text(const char *yaml, struct lxg_case *input) {
  char path[] = "/tmp/luxgale-test-XXXXXX";
  const int file = mkstemp(path);
  ck_assert(file >= 0 && write(file, yaml, strlen(yaml)) == (ssize_t)strlen(yaml));
  close(file);
  struct lxg_error error = {0};
  assert_status(lxg_case_read(input, path, NULL, 0, &error), LXG_OK, &error);
  unlink(path);
}

static const char outburst[] =
    "case: 1\nstar: {mass: 1.05}\ncomposition: {hydrogen: 0.45, helium: 0.35, cno: 0.18, metals: 0.02}\n"
    "hold: {base_temperature: 1.0e8 K}\n"
    "luminosity:\n  kind: formula\n  end: 160 d\n  terms:\n"
    "    - {law: plateau, luminosity: 1.032 Ledd, duration: 6 d, time_scale: 430 d, index: 1.0}\n";

/* The winds and shell of a case. */
struct winds {
  struct lxg_wind_solver *solver;
  struct lxg_family family;
  struct lxg_speeds *speeds;
};

static void solve_winds(const struct lxg_case *input, double radius_most, struct winds *winds) {
  struct lxg_error error = {0};
  const struct lxg_wind_model model = {.star = input->star,
                                       .composition = input->composition,
                                       .opacity = input->opacity,
                                       .porosity = input->porosity};
  struct lxg_family_options options = lxg_family_options_default();
  options.radius_most = radius_most;
  assert_status(lxg_wind_solver_create(&model, NULL, &winds->solver, &error), LXG_OK, &error);
  assert_status(lxg_family_trace(winds->solver, &input->hold[0], &options, &winds->family, &error), LXG_OK,
                &error);
  const struct lxg_speeds_source source = {.family = &winds->family,
                                           .history = input->history,
                                           .factor = 1.0,
                                           .branch = LXG_BRANCH_THIN,
                                           .radius = input->star.radius};
  assert_status(lxg_speeds_create(&source, winds->solver, &winds->speeds, &error), LXG_OK, &error);
}

static void free_winds(struct winds *winds) {
  lxg_speeds_destroy(winds->speeds);
  lxg_family_free(&winds->family);
  lxg_wind_solver_destroy(winds->solver);
}

/* What leaves the star as the shell sees it (trapezoidal in samples) against the adaptive integrals of ejecta.h: two methods. The
 * wind ends within the history, so its edge is covered too. */
START_TEST(mass_and_momentum) {
  const double tolerance = 1e-4; /* trapezoids on the sampling of the shell */
  struct lxg_error error = {0};
  struct lxg_case input;
  struct winds winds = {0};
  struct lxg_ejecta ejecta;
  double mass, momentum, energy;
  const struct lxg_ejecta_options options = lxg_ejecta_options_default();
  read_text(outburst, &input);
  solve_winds(&input, 60.0 * LXG_SOLAR_RADIUS, &winds);
  assert_status(lxg_ejecta_compute(&winds.family, input.history, input.star.gm / input.star.radius, &options,
                                   &ejecta, &error),
                LXG_OK, &error);
  lxg_shell_total(lxg_speeds_shell(winds.speeds), 160.0 * LXG_DAY, &mass, &momentum, &energy);
  ck_assert(ejecta.wind_last < 159.0 * LXG_DAY);
  assert_close(mass, ejecta.mass, tolerance);
  assert_close(momentum, ejecta.momentum, tolerance);
  assert_close(energy, ejecta.kinetic, tolerance);
  lxg_ejecta_free(&ejecta);
  free_winds(&winds);
  lxg_case_free(&input);
}
END_TEST

/* Speeds by model: photosphere and terminal as the family has them, the photosphere again at the optical depth that the solved
 * structure has there, and no speed with a reason where there is none. */
START_TEST(speeds_by_model) {
  struct lxg_error error = {0};
  struct lxg_case input;
  struct winds winds = {0};
  struct lxg_family_place place;
  const struct lxg_speeds_structure *structure = NULL;
  double v = 0.0;
  const double t = 37.3 * LXG_DAY;
  read_text(outburst, &input);
  solve_winds(&input, 60.0 * LXG_SOLAR_RADIUS, &winds);
  assert_status(lxg_speeds_at(winds.speeds, t, &place, &error), LXG_OK, &error);
  assert_status(lxg_speeds_structure(winds.speeds, t, &structure, &error), LXG_OK, &error);
  const struct lxg_wind_row *photosphere = &structure->row[structure->photosphere];
  assert_status(lxg_speeds_velocity(winds.speeds, t, LXG_LINE_MODEL_PHOTOSPHERE, 0.0, &v, &error), LXG_OK,
                &error);
  assert_close(v, photosphere->speed, 2e-4); /* the family's interpolation */
  assert_status(lxg_speeds_velocity(winds.speeds, t, LXG_LINE_MODEL_TERMINAL, 0.0, &v, &error), LXG_OK,
                &error);
  assert_close(v, structure->row[structure->count - 1].speed, 2e-4);
  assert_status(
      lxg_speeds_velocity(winds.speeds, t, LXG_LINE_MODEL_DEPTH, photosphere->optical_depth, &v, &error),
      LXG_OK, &error);
  assert_close(v, photosphere->speed, 1e-12);
  error.code[0] = '\0';
  ck_assert_int_eq(lxg_speeds_velocity(winds.speeds, t, LXG_LINE_MODEL_DEPTH, 1e30, &v, &error), LXG_DOMAIN);
  ck_assert_str_eq(error.code, "speeds-depth");
  ck_assert_int_eq(lxg_speeds_velocity(winds.speeds, 7.0 * LXG_DAY, LXG_LINE_MODEL_SHELL, 0.0, &v, &error),
                   LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "speeds-shell");
  ck_assert_int_eq(
      lxg_speeds_velocity(winds.speeds, 161.0 * LXG_DAY, LXG_LINE_MODEL_TERMINAL, 0.0, &v, &error),
      LXG_DOMAIN);
  ck_assert_str_eq(error.code, "speeds-time");
  ck_assert_int_eq(
      lxg_speeds_velocity(winds.speeds, 159.0 * LXG_DAY, LXG_LINE_MODEL_TERMINAL, 0.0, &v, &error),
      LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "below-thin-end");
  free_winds(&winds);
  lxg_case_free(&input);
}
END_TEST

/* ---- round trip --------------------------------------------------------------------------------------------------- */

static const struct {
  double day;
  enum lxg_line_kind kind;
} measured[] = {
    {2.5, LXG_LINE_ABSORPTION},   {2.5, LXG_LINE_BLUE_EDGE},   {21.0, LXG_LINE_ABSORPTION},
    {33.0, LXG_LINE_BLUE_EDGE},   {47.0, LXG_LINE_ABSORPTION}, {62.0, LXG_LINE_ABSORPTION},
    {62.0, LXG_LINE_BLUE_EDGE},   {75.0, LXG_LINE_ABSORPTION}, {83.0, LXG_LINE_BLUE_EDGE},
    {110.0, LXG_LINE_ABSORPTION}, /* declared to be the shell's */
};
enum { ROWS = sizeof measured / sizeof measured[0], SHELL_ROW = ROWS - 1 };

static struct lxg_lines *make_lines(double error_1sigma) {
  struct lxg_line_input input[ROWS];
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  for (size_t i = 0; i < ROWS; i++) {
    input[i] = (struct lxg_line_input){.epoch = measured[i].day * LXG_DAY,
                                       .kind = measured[i].kind,
                                       .measure = LXG_LINE_SPEED,
                                       .value = 6e7,
                                       .error = error_1sigma};
  }
  assert_status(lxg_lines_create(input, ROWS, &lines, &error), LXG_OK, &error);
  return lines;
}

static struct lxg_linefit_model make_model(const struct lxg_case *input, const struct lxg_lines *lines,
                                           const struct lxg_line_map *map) {
  return (struct lxg_linefit_model){.wind = {.star = input->star,
                                             .composition = input->composition,
                                             .opacity = input->opacity,
                                             .porosity = input->porosity},
                                    .dwarf = true,
                                    .hold = {input->hold[0]},
                                    .holds = 1,
                                    .history = input->history,
                                    .follows = true,
                                    .family_tolerance = 1e-3,
                                    .radius_most = 50.0 * LXG_SOLAR_RADIUS,
                                    .lines = lines,
                                    .map = map,
                                    .assign = {.prior = {0.5, 0.5, 0.0}, .other_range = 1e9}};
}

static bool holds(const struct lxg_fit_estimate *estimate, double truth) {
  return estimate->lower <= truth && truth <= estimate->upper;
}

START_TEST(round_trip) {
  enum { RUNS = 200 };
  const double noise = 8e5; /* [cm s^-1] */
  struct lxg_error error = {0};
  struct lxg_case input;
  struct lxg_line_map map;
  bool use[2 * ROWS];
  struct lxg_linefit_grid grid;
  struct lxg_linefit_result result;
  double truth[2 * ROWS], velocity[2 * ROWS], sigma[2 * ROWS];
  read_text(outburst, &input);
  lxg_line_map_default(&map);
  struct lxg_lines *lines = make_lines(noise);
  struct lxg_linefit_model model = make_model(&input, lines, &map);
  const double gm = 1.0041 * input.star.gm, held = 1.0127e8; /* between the nodes of the grid */
  model.family_tolerance = 1e-4;
  assert_status(lxg_linefit_speeds(&model, gm, 1, &held, truth, NULL, &error), LXG_OK, &error);
  model.family_tolerance = 1e-3;
  const struct lxg_linefit_range range = {0.985 * input.star.gm, 1.02 * input.star.gm, 0.88e8, 1.14e8, 5, 6};
  assert_status(lxg_linefit_grid(&model, &range, &grid, &error), LXG_OK, &error);
  for (size_t i = 0; i < 2 * ROWS; i++) {
    use[i] = i < ROWS ? i != SHELL_ROW : i == ROWS + SHELL_ROW;
    ck_assert_msg(!use[i] || (truth[i] > 3e7 && truth[i] < 2e8), "column %zu: %g", i, truth[i]);
    if (use[i]) {
      assert_near(lxg_linefit_at(&grid, gm, held, i), truth[i], 0.15 * noise);
    }
    sigma[i] = noise;
  }
  unsigned inside[2] = {0, 0};
  for (unsigned run = 0; run < RUNS; run++) {
    const struct lxg_random_place place = {.seed = 20260301u, .draw = run};
    for (size_t i = 0; i < 2 * ROWS; i++) {
      velocity[i] = truth[i] + noise * lxg_random_normal(&place, i);
    }
    assert_status(lxg_linefit_run(&grid, velocity, sigma, use, 0.0, &result, &error), LXG_OK, &error);
    inside[0] += holds(&result.fit.estimate[LXG_LINEFIT_MASS], gm);
    inside[1] += holds(&result.fit.estimate[LXG_LINEFIT_HELD], held);
  }
  for (int i = 0; i < 2; i++) {
    ck_assert_msg(inside[i] >= 0.60 * RUNS && inside[i] <= 0.76 * RUNS, "parameter %d: %u of %d runs", i,
                  inside[i], RUNS);
  }
  lxg_linefit_grid_free(&grid);
  lxg_lines_destroy(lines);
  lxg_case_free(&input);
}
END_TEST

/* ---- the grid alone ----------------------------------------------------------------------------------------------- */

/* A grid filled with ln v = 17 + 0.3 ln M' + 0.2 ln h' - 0.1 ln M' ln h' (bilinear: the cubic is then exact). */
static void fill_grid(struct lxg_linefit_grid *grid, size_t columns) {
  grid->range = (struct lxg_linefit_range){1e26, 1.7e26, 3.0, 9.0, 5, 4};
  grid->columns = columns;
  grid->ln_speed = lxg_alloc(5 * 4 * columns, sizeof *grid->ln_speed);
  for (size_t m = 0; m < 5; m++) {
    for (size_t k = 0; k < 4; k++) {
      const double x = (double)m / 4.0 * log(1.7), y = (double)k / 3.0 * log(3.0);
      for (size_t i = 0; i < columns; i++) {
        grid->ln_speed[(m * 4 + k) * columns + i] = 17.0 + 0.3 * x + 0.2 * (double)i * y - 0.1 * x * y;
      }
    }
  }
}

START_TEST(interpolation) {
  struct lxg_linefit_grid grid = {0};
  fill_grid(&grid, 2);
  const double x = log(1.43), y = log(2.2);
  assert_close(log(lxg_linefit_at(&grid, 1.43e26, 6.6, 1)), 17.0 + 0.3 * x + 0.2 * y - 0.1 * x * y, 1e-14);
  ck_assert(isnan(lxg_linefit_at(&grid, 0.99e26, 6.6, 1)) && isnan(lxg_linefit_at(&grid, 1.2e26, 9.1, 1)));
  assert_close(log(lxg_linefit_at(&grid, 1.7e26, 9.0, 0)), 17.0 + 0.3 * log(1.7) - 0.1 * log(1.7) * log(3.0),
               1e-14);
  grid.ln_speed[(2 * 4 + 1) * 2 + 1] =
      NAN; /* a node without a wind: no answer in its four cells, the others as before */
  ck_assert(isnan(lxg_linefit_at(&grid, 1.25e26, 4.0, 1)) &&
            isfinite(lxg_linefit_at(&grid, 1.25e26, 4.0, 0)));
  assert_close(log(lxg_linefit_at(&grid, 1.05e26, 8.0, 1)),
               17.0 + 0.3 * log(1.05) + 0.2 * log(8.0 / 3.0) - 0.1 * log(1.05) * log(8.0 / 3.0), 1e-14);
  lxg_linefit_grid_free(&grid);
}
END_TEST

/* Rows that all say the same: one direction of (M, h) stays free, and that is said. */
START_TEST(unconstrained) {
  struct lxg_error error = {0};
  struct lxg_linefit_grid grid = {0};
  struct lxg_linefit_result result;
  fill_grid(&grid, 2);
  const double v = lxg_linefit_at(&grid, 1.3e26, 5.0, 1), sigma[2] = {1e5, 1e5}, velocity[2] = {v, v};
  const bool use[2] = {false, true};
  assert_status(lxg_linefit_run(&grid, velocity, sigma, use, 0.0, &result, &error), LXG_OK, &error);
  ck_assert_int_eq((int)result.used, 1);
  ck_assert_str_ne(result.warning, "");
  ck_assert(!result.fit.estimate[0].constrained || !result.fit.estimate[1].constrained);
  const bool none[2] = {false, false};
  ck_assert_int_eq(lxg_linefit_run(&grid, velocity, sigma, none, 0.0, &result, &error), LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "linefit-rows");
  for (size_t k = 0; k < 20; k++) { /* each row somewhere, both nowhere */
    grid.ln_speed[2 * k + k % 2] = NAN;
  }
  ck_assert_int_eq(lxg_linefit_run(&grid, velocity, sigma, NULL, 0.0, &result, &error), LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "linefit-empty");
  lxg_linefit_grid_free(&grid);
}
END_TEST

Suite *suite_linefit(void);
Suite *suite_linefit(void) {
  Suite *suite = suite_create("linefit");
  TCase *speeds = tcase_create("speeds");
  tcase_set_timeout(speeds, 300);
  tcase_add_test(speeds, mass_and_momentum);
  tcase_add_test(speeds, speeds_by_model);
  suite_add_tcase(suite, speeds);
  TCase *fit = tcase_create("fit");
  tcase_set_timeout(fit, 900);
  tcase_add_test(fit, interpolation);
  tcase_add_test(fit, unconstrained);
  tcase_add_test(fit, round_trip);
  suite_add_tcase(suite, fit);
  return suite;
}
