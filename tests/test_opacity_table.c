/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_opacity_table.c - importing, interpolating, joining, blending and checking tables; every refusal provoked.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/opacity_table.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct lxg_composition nova = {
    .hydrogen = 0.353, .helium = 0.3269, .cno = 0.30, .metals = 0.0201};
static const struct lxg_composition solar = {.hydrogen = 0.70, .helium = 0.28, .cno = 0.0, .metals = 0.02};

static double ln_rho_of(double log_t, double log_r) {
  return (log_r + 3.0 * (log_t - 6.0)) * LXG_LN10;
}

static struct lxg_opacity_value at(const struct lxg_opacity *opacity, double log_t, double log_r) {
  struct lxg_opacity_value value = {0};
  ck_assert_int_eq(lxg_opacity_at(opacity, ln_rho_of(log_t, log_r), log_t * LXG_LN10, &value), LXG_OK);
  return value;
}

static struct lxg_opacity *formula_of(const struct lxg_composition *composition) {
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, composition, &opacity, &error), LXG_OK,
                &error);
  return opacity;
}

/* ---- import ---- */

/* Invented numbers in the published layout: a hole in the middle, a short row, a sentinel, a falling second block. */
static const char *const layout = "Opacities of an invented gas\n"
                                  "TABLE # 1   X=0.7000 Y=0.2800 Z=0.0200 dXc=0.0000 dXo=0.0000\n"
                                  "\n"
                                  "                log R\n"
                                  "\n"
                                  "logT  -8.0   -7.0   -6.0   -5.0   -4.0\n"
                                  "\n"
                                  "4.00 -0.518 -0.521 -0.513 -0.483 -0.411\n"
                                  "4.10 -0.479        -0.464 -0.444 -0.395\n"
                                  "4.20 -0.474 -0.459 -0.439 -0.412 -0.365\n"
                                  "4.30 -0.466 -0.455 -0.436  9.999  9.999\n"
                                  "4.40 -0.431 -0.423 -0.406\n"
                                  "\n"
                                  "TABLE # 2   X = 0.35 Z = 0.02 dXc=0.1000 dXo=0.0500\n"
                                  "log T -8.0   -7.0   -6.0   -5.0   -4.0\n"
                                  "4.30 -0.5   -0.4   -0.3   -0.2   -0.1\n"
                                  "4.20 -0.51  -0.41  -0.31  -0.21  -0.11\n"
                                  "4.10 -0.52  -0.42  -0.32  -0.22  -0.12\n"
                                  "4.00 -0.53  -0.43  -0.33  -0.23  -0.13\n";

START_TEST(import_layout) {
  struct lxg_error error = {0};
  struct lxg_opacity_set set;
  assert_status(lxg_opacity_import_text(layout, strlen(layout), "layout.txt", NULL, &set, &error), LXG_OK,
                &error);
  ck_assert_uint_eq(set.count, 2);
  const struct lxg_opacity_grid *a = set.grid[0], *b = set.grid[1];
  ck_assert_str_eq(a->source, "Opacities of an invented gas");
  ck_assert_uint_eq(a->temperatures, 5);
  ck_assert_uint_eq(a->densities, 5);
  ck_assert(a->composition.hydrogen == 0.7 && a->composition.metals == 0.02 && a->composition.cno == 0.0);
  assert_close(a->composition.helium, 0.28, 1e-12);
  ck_assert(a->log_t[3] == 4.3 && a->log_r[1] == -7.0 && a->log_kappa[0] == -0.518);
  ck_assert(isnan(a->log_kappa[5 + 1]) && a->log_kappa[5 + 2] == -0.464 && a->log_kappa[5 + 4] == -0.395);
  ck_assert(isnan(a->log_kappa[15 + 3]) && isnan(a->log_kappa[20 + 4]) && a->log_kappa[20 + 2] == -0.406);
  assert_close(b->composition.cno, 0.15, 1e-12);
  assert_close(b->composition.helium, 0.48, 1e-12);
  ck_assert(b->log_t[0] == 4.0 && b->log_t[3] == 4.3 && b->log_kappa[0] == -0.53 && b->log_kappa[19] == -0.1);
  lxg_opacity_set_free(&set);
}
END_TEST

#define HEAD "X=0.7 Z=0.02\nlogT -8.0 -7.0 -6.0 -5.0\n"
#define ROWS "4.0 0.1 0.2 0.3 0.4\n4.1 0.1 0.2 0.3 0.4\n4.2 0.1 0.2 0.3 0.4\n4.3 0.1 0.2 0.3 0.4\n"

static const struct {
  const char *text, *code, *place;
} refused[] = {
    {HEAD "4.0 0.1 0.2 0.3 0.4 0.5\n", "opacity-import-count", "bad.txt:3:21:"},
    {HEAD "4.0 0.1 nan 0.3 0.4\n", "opacity-import-number", "bad.txt:3:9:"},
    {HEAD "4.0 0.1 0x2 0.3 0.4\n", "opacity-import-number", "bad.txt:3:9:"},
    {HEAD "4.0 0.1 0.2 0.3 0.4\n4.1 0.1 0.2 0.3 0.4\n4.1 0.1 0.2 0.3 0.4\n", "opacity-import-order",
     "bad.txt:5:1:"},
    {HEAD "4.0 0.1 0.2 0.3 0.4\n4.1 0.1 0.2 0.3 0.4\n4.05 0.1 0.2 0.3 0.4\n", "opacity-import-order",
     "bad.txt:5:1:"},
    {"X=0.7 Z=0.02\nlogT -8.0 -7.0 -7.5 -5.0\n", "opacity-import-order", "bad.txt:2:16:"},
    {"X=0.7 Z=0.02\nlogT -8.0 -7.0 a -5.0\n", "opacity-import-number", "bad.txt:2:16:"},
    {"no composition\nlogT -8.0 -7.0 -6.0 -5.0\n" ROWS, "opacity-import-composition", "bad.txt:2:"},
    {"X=0.7 Y=0.5 Z=0.02\nlogT -8.0 -7.0 -6.0 -5.0\n" ROWS, "opacity-import-composition", "bad.txt:1:"},
    {"X=1.7 Z=0.02\nlogT -8.0 -7.0 -6.0 -5.0\n" ROWS, "composition-range", ""},
    {HEAD ROWS HEAD ROWS, "opacity-set-duplicate", "bad.txt:8:"},
    {HEAD "10000 0.1 0.2 0.3 0.4\n20000 0.1 0.2 0.3 0.4\n30000 1 1 1 1\n40000 1 1 1 1\n",
     "opacity-grid-range", ""},
    {HEAD "4.0 0.1 0.2 0.3 0.4\n4.1 0.1 0.2 0.3 0.4\n", "opacity-grid-size", ""},
    {HEAD "4.0 0.1 0.2 0.3\n", "opacity-import-blank", "bad.txt:3:9:"},
    {HEAD
     "4.0 9.999 0.2 9.999 0.4\n4.1 0.1 9.999 0.3 9.999\n4.2 9.999 0.2 9.999 0.4\n4.3 0.1 9.999 0.3 9.999\n",
     "opacity-grid-empty", ""},
    {"nothing here\n", "opacity-import-empty", "bad.txt:"},
    {"", "opacity-import-empty", "bad.txt:"},
};

START_TEST(import_refuses) {
  struct lxg_error error = {0};
  struct lxg_opacity_set set = {0};
  const char *text = refused[_i].text;
  const enum lxg_status status = lxg_opacity_import_text(text, strlen(text), "bad.txt", NULL, &set, &error);
  ck_assert_msg(status == LXG_INPUT || status == LXG_LIMIT, "accepted: %s", text);
  ck_assert_str_eq(error.code, refused[_i].code);
  ck_assert_msg(strstr(error.line[0], refused[_i].place) != NULL, "%s lacks %s", error.line[0],
                refused[_i].place);
  ck_assert(set.count == 0 && set.grid == NULL);
}
END_TEST

START_TEST(import_a_million_columns) {
  struct lxg_error error = {0};
  struct lxg_opacity_set set;
  const size_t size = 2000000;
  char *text = malloc(size);
  ck_assert_ptr_nonnull(text);
  for (size_t i = 0; i < size; i++) {
    text[i] = i % 2 == 0 ? '1' : ' ';
  }
  memcpy(text, "logT", 4);
  ck_assert_int_eq(lxg_opacity_import_text(text, size, "wide.txt", NULL, &set, &error), LXG_LIMIT);
  ck_assert_str_eq(error.code, "opacity-import-limit");
  free(text);
}
END_TEST

START_TEST(import_takes_given_composition) {
  static const char *const text = "bare\nlogT -8.0 -7.0 -6.0 -5.0\n" ROWS;
  const struct lxg_opacity_import_options options = {
      .composition = &nova, .source = "a note", .date = "2026"};
  struct lxg_error error = {0};
  struct lxg_opacity_set set;
  assert_status(lxg_opacity_import_text(text, strlen(text), "bare.txt", &options, &set, &error), LXG_OK,
                &error);
  ck_assert(set.grid[0]->composition.cno == nova.cno);
  ck_assert_str_eq(set.grid[0]->source, "a note");
  lxg_opacity_set_free(&set);
  ck_assert_int_eq(lxg_opacity_import("/nonexistent/table.txt", NULL, &set, &error), LXG_IO);
}
END_TEST

/* ---- surface ---- */

/* A grid of the formula plus `offset` dex, with the upper right corner missing if wanted. */
static struct lxg_opacity_grid *grid_of(const struct lxg_composition *composition, double offset,
                                        bool corner) {
  struct lxg_error error = {0};
  struct lxg_opacity_grid *grid = NULL;
  struct lxg_opacity *formula = formula_of(composition);
  double log_t[41], log_r[13];
  for (int i = 0; i < 41; i++) {
    log_t[i] = 4.4 + 0.05 * i;
  }
  for (int j = 0; j < 13; j++) {
    log_r[j] = -8.0 + 0.5 * j;
  }
  assert_status(lxg_opacity_tabulate(formula, composition, log_t, 41, log_r, 13, "test", &grid, &error),
                LXG_OK, &error);
  for (size_t i = 0; i < 41; i++) {
    for (size_t j = 0; j < 13; j++) {
      grid->log_kappa[i * 13 + j] += offset * (1.0 + 0.3 * sin(3.0 * log_t[i]) * cos(log_r[j]));
      if (corner && i > 30 && j + i > 46) {
        grid->log_kappa[i * 13 + j] = NAN;
      }
    }
  }
  lxg_opacity_destroy(formula);
  return grid;
}

static struct lxg_opacity *table_of(struct lxg_opacity_grid *grid, enum lxg_opacity_outside outside,
                                    const struct lxg_composition *composition) {
  struct lxg_error error = {0};
  struct lxg_opacity_set set = {0};
  struct lxg_opacity *table = NULL;
  struct lxg_opacity_table_options options = lxg_opacity_table_defaults();
  options.outside = outside;
  assert_status(lxg_opacity_set_add(&set, grid, &error), LXG_OK, &error);
  assert_status(lxg_opacity_create_table(&set, composition, &options, &table, &error), LXG_OK, &error);
  lxg_opacity_set_free(&set);
  return table;
}

START_TEST(nodes_are_kept) {
  static const enum lxg_opacity_outside outsides[] = {LXG_OPACITY_JOIN, LXG_OPACITY_CLAMP,
                                                      LXG_OPACITY_REFUSE};
  for (size_t o = 0; o < 3; o++) {
    struct lxg_opacity_grid *grid = grid_of(&nova, 0.2, false);
    struct lxg_opacity_grid *copy = grid_of(&nova, 0.2, false);
    struct lxg_opacity *table = table_of(grid, outsides[o], &nova);
    for (size_t k = 0; k < 41 * 13; k++) {
      const struct lxg_opacity_value value = at(table, copy->log_t[k / 13], copy->log_r[k % 13]);
      assert_near(log10(value.kappa), copy->log_kappa[k], 1e-11); /* rounding of log R through ln rho */
      assert_near(value.table_weight, 1.0, 1e-9);
    }
    lxg_opacity_grid_destroy(copy);
    lxg_opacity_destroy(table);
  }
}
END_TEST

/* One-sided differences from both sides: value and slopes must be continuous and slopes exact. */
START_TEST(slopes_are_exact_everywhere) {
  static const enum lxg_opacity_outside outsides[] = {LXG_OPACITY_JOIN, LXG_OPACITY_CLAMP};
  static const double step = 1e-6;
  static const double tolerance = 3e-4; /* second derivatives of the hand-over reach 1e2: times the step */
  for (size_t o = 0; o < 2; o++) {
    struct lxg_opacity *table = table_of(grid_of(&nova, 0.2, true), outsides[o], &nova);
    for (double log_t = 3.7; log_t < 7.2; log_t += 0.0125) {
      for (double log_r = -9.0; log_r < -1.0; log_r += 0.125) {
        const double a = ln_rho_of(log_t, log_r), b = log_t * LXG_LN10;
        struct lxg_opacity_value here, before, after;
        ck_assert_int_eq(lxg_opacity_at(table, a, b, &here), LXG_OK);
        ck_assert(here.table_weight >= 0.0 && here.table_weight <= 1.0);
        lxg_opacity_at(table, a - step, b, &before);
        lxg_opacity_at(table, a + step, b, &after);
        assert_near(log(after.kappa / here.kappa) / step, here.dlnk_dlnrho, tolerance);
        assert_near(log(here.kappa / before.kappa) / step, here.dlnk_dlnrho, tolerance);
        lxg_opacity_at(table, a, b - step, &before);
        lxg_opacity_at(table, a, b + step, &after);
        assert_near(log(after.kappa / here.kappa) / step, here.dlnk_dlnt, tolerance);
        assert_near(log(here.kappa / before.kappa) / step, here.dlnk_dlnt, tolerance);
      }
    }
    lxg_opacity_destroy(table);
  }
}
END_TEST

START_TEST(join_ends_in_the_formula) {
  struct lxg_opacity *table = table_of(grid_of(&nova, 0.2, true), LXG_OPACITY_JOIN, &nova);
  struct lxg_opacity *formula = formula_of(&nova);
  static const double far[][2] = {{4.09, -5.1}, {6.71, -4.3}, {5.3, -8.31},
                                  {5.1, -1.69}, {8.0, -1.0},  {4.05, -9.0}};
  for (size_t i = 0; i < sizeof far / sizeof far[0]; i++) {
    const struct lxg_opacity_value a = at(table, far[i][0], far[i][1]), b = at(formula, far[i][0], far[i][1]);
    assert_close(a.kappa, b.kappa, 1e-14);
    ck_assert(a.table_weight == 0.0);
  }
  /* Half-way through the margin: half the table's share, between the two laws. */
  const struct lxg_opacity_value half = at(table, 5.2, -8.15), law = at(formula, 5.2, -8.15);
  assert_near(half.table_weight, 0.5, 1e-9);
  ck_assert(half.kappa > 1.05 * law.kappa && half.kappa < 1.6 * law.kappa);
  lxg_opacity_destroy(formula);
  lxg_opacity_destroy(table);
}
END_TEST

START_TEST(clamp_levels_off) {
  struct lxg_opacity *table = table_of(grid_of(&nova, 0.0, false), LXG_OPACITY_CLAMP, &nova);
  const struct lxg_opacity_value a = at(table, 5.3, -9.0), b = at(table, 5.3, -12.0);
  assert_close(a.kappa, b.kappa, 1e-13);
  assert_near(a.dlnk_dlnrho, 0.0, 1e-12);
  const struct lxg_opacity_value hot = at(table, 7.0, -4.0), hotter = at(table, 8.0, -4.0);
  assert_close(hot.kappa, hotter.kappa, 1e-12);
  /* at constant rho log R falls by 3 per dex of T, so the slope along R stays in d ln kappa/d ln T */
  assert_near(hot.dlnk_dlnt, -3.0 * hot.dlnk_dlnrho, 1e-12);
  ck_assert(hot.table_weight == 0.0);
  lxg_opacity_destroy(table);
}
END_TEST

START_TEST(refuse_refuses) {
  struct lxg_opacity *table = table_of(grid_of(&nova, 0.0, true), LXG_OPACITY_REFUSE, &nova);
  struct lxg_opacity_value value = {.kappa = 3.0};
  static const double out[][2] = {{4.39, -5.0}, {6.41, -5.0}, {5.0, -8.01},
                                  {5.0, -1.99}, {6.38, -2.2}, {6.2, -2.01}};
  for (size_t i = 0; i < sizeof out / sizeof out[0]; i++) {
    ck_assert_int_eq(lxg_opacity_at(table, ln_rho_of(out[i][0], out[i][1]), out[i][0] * LXG_LN10, &value),
                     LXG_DOMAIN);
  }
  ck_assert(value.kappa == 3.0);
  ck_assert_int_eq(lxg_opacity_at(table, ln_rho_of(5.25, -4.3), 5.25 * LXG_LN10, &value), LXG_OK);
  lxg_opacity_destroy(table);
}
END_TEST

/* A step and a lone peak: monotone data stay monotone, nothing leaves the range of its cell (Fritsch & Carlson 1980). */
START_TEST(no_overshoot) {
  struct lxg_opacity_grid *grid = grid_of(&solar, 0.0, false);
  for (size_t i = 0; i < 41; i++) {
    for (size_t j = 0; j < 13; j++) {
      grid->log_kappa[i * 13 + j] = i == 20 && j == 6 ? 1.7 : i < 11 ? -0.5 : i < 30 ? 0.4 : -0.2;
    }
  }
  struct lxg_opacity *table = table_of(grid, LXG_OPACITY_REFUSE, &solar);
  for (double log_t = 4.4; log_t < 6.4; log_t += 0.00317) {
    const double value = log10(at(table, log_t, -5.0).kappa);
    ck_assert(value >= -0.5 - 1e-12 && value <= 1.7 + 1e-12);
    if (log_t > 4.95 && log_t < 5.35) {
      assert_near(value, 0.4, 1e-12); /* flat data are flat */
    }
  }
  lxg_opacity_destroy(table);
}
END_TEST

/* ---- blending ---- */

START_TEST(blend_follows_the_formula) {
  static const struct lxg_composition corner[] = {
      {0.2, 0.79, 0.0, 0.01}, {0.2, 0.76, 0.0, 0.04}, {0.7, 0.29, 0.0, 0.01}, {0.7, 0.26, 0.0, 0.04}};
  static const double offset[] = {0.1, 0.1, 0.3, 0.3};
  struct lxg_error error = {0};
  struct lxg_opacity_set set = {0};
  for (size_t k = 0; k < 4; k++) {
    struct lxg_opacity_grid *grid = grid_of(&corner[k], 0.0, false);
    for (size_t i = 0; i < 41 * 13; i++) {
      grid->log_kappa[i] += offset[k];
    }
    assert_status(lxg_opacity_set_add(&set, grid, &error), LXG_OK, &error);
  }
  struct lxg_opacity_table_options options = lxg_opacity_table_defaults();
  struct lxg_opacity *table = NULL;
  assert_status(lxg_opacity_create_table(&set, &nova, &options, &table, &error), LXG_OK, &error);
  struct lxg_opacity *formula = formula_of(&nova);
  /* (0.353 - 0.2)/0.5 of the way from 0.1 to 0.3 dex, at a node */
  const double expected = 0.1 + 0.2 * (nova.hydrogen - 0.2) / 0.5;
  assert_near(log10(at(table, 5.25, -4.0).kappa / at(formula, 5.25, -4.0).kappa), expected, 1e-10);
  lxg_opacity_destroy(table);

  options.ignore_cno = true;
  assert_status(lxg_opacity_create_table(&set, &nova, &options, &table, &error), LXG_OK, &error);
  const struct lxg_composition as_helium = {nova.hydrogen, nova.helium + nova.cno, 0.0, nova.metals};
  struct lxg_opacity *helium = formula_of(&as_helium);
  assert_near(log10(at(table, 5.25, -4.0).kappa / at(helium, 5.25, -4.0).kappa), expected, 1e-10);
  lxg_opacity_destroy(helium);
  lxg_opacity_destroy(table);
  lxg_opacity_destroy(formula);

  const struct lxg_composition rich = {0.5, 0.44, 0.0, 0.06}, poor = {0.1, 0.88, 0.0, 0.02};
  ck_assert_int_eq(lxg_opacity_create_table(&set, &rich, &options, &table, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "opacity-table-composition");
  ck_assert_int_eq(lxg_opacity_create_table(&set, &poor, &options, &table, &error), LXG_INPUT);
  ck_assert_ptr_null(table);
  set.grid[3]->log_t[4] += 0.01;
  ck_assert_int_eq(lxg_opacity_create_table(&set, &nova, &options, &table, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "opacity-table-grid");
  options.width = 0.0;
  ck_assert_int_eq(lxg_opacity_create_table(&set, &nova, &options, &table, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "opacity-table-width");
  lxg_opacity_set_free(&set);
  ck_assert_int_eq(lxg_opacity_create_table(&set, &nova, &(struct lxg_opacity_table_options){.width = 0.3},
                                            &table, &error),
                   LXG_INPUT);
}
END_TEST

START_TEST(grid_limits) {
  struct lxg_error error = {0};
  struct lxg_opacity_grid *grid = NULL;
  ck_assert_int_eq(lxg_opacity_grid_create(3, 8, &grid, &error), LXG_LIMIT);
  ck_assert_int_eq(lxg_opacity_grid_create(8, LXG_OPACITY_GRID_AXIS + 1, &grid, &error), LXG_LIMIT);
  grid = grid_of(&nova, 0.0, false);
  grid->log_kappa[17] = 77.0;
  ck_assert_int_eq(lxg_opacity_grid_validate(grid, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "opacity-grid-range");
  grid->log_kappa[17] = 0.0;
  grid->log_r[3] = grid->log_r[2];
  ck_assert_int_eq(lxg_opacity_grid_validate(grid, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "opacity-grid-order");
  lxg_opacity_grid_destroy(grid);
}
END_TEST

/* ---- checking ---- */

START_TEST(check_finds_what_was_put_in) {
  struct lxg_error error = {0};
  static struct lxg_opacity_findings findings;
  struct lxg_opacity_grid *grid = grid_of(&nova, 0.0, true);
  assert_status(lxg_opacity_check(grid, NULL, &findings, &error), LXG_OK, &error);
  ck_assert_uint_eq(findings.spikes + findings.gaps + findings.slopes + findings.differences, 0);
  ck_assert_uint_eq(findings.missing, 21); /* rows 35 to 40 miss 1 to 6 nodes */
  assert_near(findings.formula_rms, 0.0, 1e-12);
  grid->log_kappa[13 * 10 + 5] += 0.5;
  grid->log_kappa[13 * 20 + 3] = NAN;
  grid->log_kappa[13 * 25 + 0] += 0.2;
  assert_status(lxg_opacity_check(grid, NULL, &findings, &error), LXG_OK, &error);
  ck_assert_uint_eq(findings.spikes, 1);
  ck_assert_uint_eq(findings.gaps, 1);
  ck_assert_uint_eq(findings.slopes, 2); /* behind the spike, and behind the raised edge */
  ck_assert_uint_eq(findings.differences, 1);
  assert_near(findings.formula_most, 0.5, 1e-12);
  assert_near(findings.log_r_step_most, 0.5, 1e-12);
  grid->composition.hydrogen = 0.9;
  ck_assert_int_eq(lxg_opacity_check(grid, NULL, &findings, &error), LXG_INPUT);
  lxg_opacity_grid_destroy(grid);
}
END_TEST

Suite *suite_opacity_table(void);
Suite *suite_opacity_table(void) {
  Suite *suite = suite_create("opacity_table");
  TCase *tests = tcase_create("opacity_table");
  tcase_add_test(tests, import_layout);
  tcase_add_loop_test(tests, import_refuses, 0, sizeof refused / sizeof refused[0]);
  tcase_add_test(tests, import_a_million_columns);
  tcase_add_test(tests, import_takes_given_composition);
  tcase_add_test(tests, nodes_are_kept);
  tcase_add_test(tests, slopes_are_exact_everywhere);
  tcase_add_test(tests, join_ends_in_the_formula);
  tcase_add_test(tests, clamp_levels_off);
  tcase_add_test(tests, refuse_refuses);
  tcase_add_test(tests, no_overshoot);
  tcase_add_test(tests, blend_follows_the_formula);
  tcase_add_test(tests, grid_limits);
  tcase_add_test(tests, check_finds_what_was_put_in);
  suite_add_tcase(suite, tests);
  return suite;
}
