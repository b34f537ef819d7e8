/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_opacity_data.c - the built-in formula against published Rosseland means.
 *
 * Source: Iglesias & Rogers 1996, ApJ 464, 943, seven tables. The tables themselves are not part of the project: their path is in
 * LXG_OPACITY_DATA, else ../shared/opacity-data/published-subset.txt is tried; without them only the few values quoted here
 * are compared, and a line says so.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/opacity_table.h"

#include <stdio.h>
#include <stdlib.h>

static struct lxg_opacity_value at(const struct lxg_opacity *opacity, double log_t, double log_r) {
  struct lxg_opacity_value value = {0};
  const double ln_rho = (log_r + 3.0 * (log_t - 6.0)) * LXG_LN10;
  ck_assert_int_eq(lxg_opacity_at(opacity, ln_rho, log_t * LXG_LN10, &value), LXG_OK);
  return value;
}

/* X = 0.7, Z = 0.02, digits as printed there; 0.1 dex is what the calibration promises at single nodes around the bump. */
static const struct {
  double log_t, log_r, log_kappa;
} quoted[] = {{5.25, -8.0, -0.215}, {5.25, -5.0, 0.384}, {5.25, -3.0, 1.532},
              {4.60, -4.0, 0.738},  {4.90, -3.5, 0.987}, {4.50, -6.0, -0.259}};

START_TEST(quoted_values) {
  const struct lxg_composition solar = {.hydrogen = 0.7, .helium = 0.28, .cno = 0.0, .metals = 0.02};
  struct lxg_opacity *opacity = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &solar, &opacity, &error), LXG_OK, &error);
  assert_near(log10(at(opacity, quoted[_i].log_t, quoted[_i].log_r).kappa), quoted[_i].log_kappa, 0.1);
  lxg_opacity_destroy(opacity);
}
END_TEST

static bool load(struct lxg_opacity_set *set) {
  const char *path = getenv("LXG_OPACITY_DATA");
  struct lxg_error error = {0};
  path = path != NULL ? path : "../shared/opacity-data/published-subset.txt";
  const enum lxg_status status = lxg_opacity_import(path, NULL, set, &error);
  if (status == LXG_IO) {
    printf("opacity_data: %s is not there, published tables are not compared\n", path);
    return false;
  }
  assert_status(status, LXG_OK, &error);
  ck_assert_uint_eq(set->count, 7);
  return true;
}

struct misfit {
  double squares;
  size_t count;
};

static void gather(const struct lxg_opacity *opacity, const struct lxg_opacity_grid *grid, double from,
                   double to, struct misfit *misfit) {
  for (size_t k = 0; k < grid->temperatures * grid->densities; k++) {
    const double log_t = grid->log_t[k / grid->densities], log_r = grid->log_r[k % grid->densities];
    if (log_t > from - 1e-9 && log_t < to + 1e-9 && log_r < -2.0 + 1e-9 && !isnan(grid->log_kappa[k])) {
      const double difference = log10(at(opacity, log_t, log_r).kappa) - grid->log_kappa[k];
      misfit->squares += difference * difference;
      misfit->count++;
    }
  }
}

/* Required accuracy of the calibration, rms in dex over all tables and log R from -8 to -2. */
static const struct {
  double from, to, rms;
} bands[] = {{4.3, 8.5, 0.08}, {4.9, 5.7, 0.05}, {5.75, 8.5, 0.03}};

START_TEST(calibration) {
  struct lxg_opacity_set set;
  struct lxg_error error = {0};
  if (!load(&set)) {
    return;
  }
  struct misfit misfit = {0.0, 0};
  for (size_t k = 0; k < set.count; k++) {
    struct lxg_opacity *opacity = NULL;
    assert_status(
        lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &set.grid[k]->composition, &opacity, &error), LXG_OK,
        &error);
    gather(opacity, set.grid[k], bands[_i].from, bands[_i].to, &misfit);
    lxg_opacity_destroy(opacity);
  }
  lxg_opacity_set_free(&set);
  ck_assert_uint_gt(misfit.count, 1000);
  const double rms = sqrt(misfit.squares / (double)misfit.count);
  ck_assert_msg(rms <= bands[_i].rms, "rms %.4f dex for log T %.2f to %.2f", rms, bands[_i].from,
                bands[_i].to);
}
END_TEST

/* Table 47 (X = 0.35, Z = 0.02) predicted from those at X = 0 and 0.7: interpolation in composition. */
START_TEST(composition_left_out) {
  struct lxg_opacity_set set;
  struct lxg_error error = {0};
  if (!load(&set)) {
    return;
  }
  struct lxg_opacity_set rest = {0};
  struct lxg_opacity_grid *withheld = NULL;
  for (size_t k = 0; k < set.count; k++) {
    const struct lxg_composition *c = &set.grid[k]->composition;
    if (c->hydrogen == 0.35 && c->metals == 0.02) {
      withheld = set.grid[k];
    } else if (c->hydrogen != 0.35) {
      assert_status(lxg_opacity_set_add(&rest, set.grid[k], &error), LXG_OK, &error);
      set.grid[k] = NULL;
    }
  }
  struct lxg_opacity *table = NULL;
  const struct lxg_opacity_table_options options = lxg_opacity_table_defaults();
  assert_status(lxg_opacity_create_table(&rest, &withheld->composition, &options, &table, &error), LXG_OK,
                &error);
  struct misfit misfit = {0.0, 0};
  gather(table, withheld, 4.3, 8.5, &misfit);
  const double rms = sqrt(misfit.squares / (double)misfit.count);
  ck_assert_msg(rms < 0.04, "rms %.4f dex", rms); /* half of what the formula itself may be off */
  printf("opacity_data: composition left out: rms %.4f dex\n", rms);
  lxg_opacity_destroy(table);
  lxg_opacity_set_free(&rest);
  lxg_opacity_set_free(&set);
}
END_TEST

Suite *suite_opacity_data(void);
Suite *suite_opacity_data(void) {
  Suite *suite = suite_create("opacity_data");
  TCase *tests = tcase_create("opacity_data");
  tcase_add_loop_test(tests, quoted_values, 0, sizeof quoted / sizeof quoted[0]);
  tcase_add_loop_test(tests, calibration, 0, sizeof bands / sizeof bands[0]);
  tcase_add_test(tests, composition_left_out);
  suite_add_tcase(suite, tests);
  return suite;
}
