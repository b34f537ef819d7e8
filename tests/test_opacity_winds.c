/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_opacity_winds.c - families of winds on published opacity tables: they run from end to end, and table kinks do not defeat the
 * mesh.
 *
 * Source of the opacities: Iglesias & Rogers 1996, ApJ 464, 943, X = 0.35, Z = 0.02; read as test_opacity_data.c does. Without the
 * file the same is asked of a coarse table of the built-in formula, whose nodes are kinks of the same kind.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/family.h"
#include "luxgale/opacity_table.h"

#include <stdio.h>
#include <stdlib.h>

/* Mixture of the published table. */
static const struct lxg_composition mixture = {.hydrogen = 0.35, .helium = 0.63, .cno = 0.0, .metals = 0.02};

/* What every wind of the families must reach. */
static const double most_residual = 1e-6;

static struct lxg_opacity *coarse_formula(void) {
  struct lxg_opacity *formula = NULL, *table = NULL;
  struct lxg_opacity_grid *grid = NULL;
  struct lxg_opacity_set set = {0};
  struct lxg_error error = {0};
  double log_t[96], log_r[15];
  for (size_t i = 0; i < 96; i++) {
    log_t[i] = 3.75 + 0.05 * (double)i;
  }
  for (size_t j = 0; j < 15; j++) {
    log_r[j] = -8.0 + 0.5 * (double)j;
  }
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &mixture, &formula, &error), LXG_OK, &error);
  assert_status(lxg_opacity_tabulate(formula, &mixture, log_t, 96, log_r, 15, "test", &grid, &error), LXG_OK,
                &error);
  assert_status(lxg_opacity_set_add(&set, grid, &error), LXG_OK, &error);
  const struct lxg_opacity_table_options options = lxg_opacity_table_defaults();
  assert_status(lxg_opacity_create_table(&set, &mixture, &options, &table, &error), LXG_OK, &error);
  lxg_opacity_set_free(&set);
  lxg_opacity_destroy(formula);
  return table;
}

static struct lxg_opacity *published(void) {
  const char *path = getenv("LXG_OPACITY_DATA");
  struct lxg_opacity_set set = {0};
  struct lxg_opacity *table = NULL;
  struct lxg_error error = {0};
  path = path != NULL ? path : "../shared/opacity-data/published-subset.txt";
  const enum lxg_status status = lxg_opacity_import(path, NULL, &set, &error);
  if (status == LXG_IO) {
    printf("opacity_winds: %s is not there, a table of the formula stands in\n", path);
    return coarse_formula();
  }
  assert_status(status, LXG_OK, &error);
  const struct lxg_opacity_table_options options = lxg_opacity_table_defaults();
  assert_status(lxg_opacity_create_table(&set, &mixture, &options, &table, &error), LXG_OK, &error);
  lxg_opacity_set_free(&set);
  return table;
}

static const struct {
  double mass; /* [Msun] */
  enum lxg_wind_reason
      thick; /* 1.25 Msun: the wind grows beyond the search (5000 Rsun) before it stagnates */
} stars[] = {{0.7, LXG_WIND_STAGNATES}, {1.0, LXG_WIND_STAGNATES}, {1.25, LXG_WIND_BEYOND_LIMIT}};

START_TEST(thin_to_thick) {
  struct lxg_error error = {0};
  struct lxg_wind_solver *solver = NULL;
  struct lxg_family family;
  struct lxg_opacity *opacity = published();
  struct lxg_wind_model model = {.composition = mixture, .opacity = opacity};
  model.star.gm = stars[_i].mass * LXG_SOLAR_GM;
  assert_status(lxg_star_dwarf_radius(stars[_i].mass * LXG_SOLAR_MASS, &model.star.radius, &error), LXG_OK,
                &error);
  assert_status(lxg_wind_solver_create(&model, NULL, &solver, &error), LXG_OK, &error);
  struct lxg_family_options options = lxg_family_options_default();
  options.tolerance = 3e-3; /* enough to see the whole family */
  const struct lxg_wind_hold hold = {LXG_HELD_BASE_TEMPERATURE, 1e8};
  assert_status(lxg_family_trace(solver, &hold, &options, &family, &error), LXG_OK, &error);

  ck_assert_int_eq(family.thin_end, LXG_WIND_BELOW_THIN_END);
  ck_assert_int_eq(family.thick_end, stars[_i].thick);
  double worst = 0.0, least = 1.0;
  size_t mesh = 0;
  for (size_t i = 0; i < family.count; i++) {
    worst = fmax(worst, family.wind[i].residual);
    least = fmin(least, family.wind[i].table_share);
    mesh = family.wind[i].mesh_points > mesh ? family.wind[i].mesh_points : mesh;
  }
  printf("opacity_winds: %.2f Msun: %zu winds, largest residual %.1e, largest mesh %zu, least table share "
         "%.2f\n",
         stars[_i].mass, family.count, worst, mesh, least);
  ck_assert_double_lt(worst, most_residual);
  ck_assert_double_gt(least, 0.2);
  /* Optically thick winds of novae span 1e-6 to 1e-4 Msun/yr (common statement, from memory): a family covers two decades. */
  ck_assert_double_gt(family.wind[family.count - 1].value[LXG_HELD_MASS_LOSS_RATE],
                      100.0 * family.wind[0].value[LXG_HELD_MASS_LOSS_RATE]);
  lxg_family_free(&family);
  lxg_wind_solver_destroy(solver);
  lxg_opacity_destroy(opacity);
}
END_TEST

Suite *suite_opacity_winds(void);
Suite *suite_opacity_winds(void) {
  Suite *suite = suite_create("opacity_winds");
  TCase *tests = tcase_create("opacity_winds");
  tcase_set_timeout(tests, 300);
  tcase_add_loop_test(tests, thin_to_thick, 0, sizeof stars / sizeof stars[0]);
  suite_add_tcase(suite, tests);
  return suite;
}
