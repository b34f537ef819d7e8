/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * make_tables.c - writes the opacity tables that come with the program, from the built-in formula.
 *
 *   make_tables DIRECTORY [DATE]
 *
 * Six mixtures of the kind found in nova envelopes: hydrogen 0.35 to 0.65, extra carbon, nitrogen and oxygen 0.06 to 0.50,
 * solar metals. Values are rounded to 1e-5 dex, far below the error of the formula, so that the files do not depend on the
 * processor that made them.
 */
#include "luxgale/opacity_table.h"

#include <math.h>
#include <stdio.h>

enum { TEMPERATURES = 107, DENSITIES = 19 };

static const struct {
  const char *name;
  struct lxg_composition composition;
} tables[] = {
    {"nova-x35-cno50", {.hydrogen = 0.35, .helium = 0.13, .cno = 0.50, .metals = 0.02}},
    {"nova-x35-cno30", {.hydrogen = 0.35, .helium = 0.33, .cno = 0.30, .metals = 0.02}},
    {"nova-x45-cno20", {.hydrogen = 0.45, .helium = 0.33, .cno = 0.20, .metals = 0.02}},
    {"nova-x55-cno20", {.hydrogen = 0.55, .helium = 0.23, .cno = 0.20, .metals = 0.02}},
    {"nova-x55-cno10", {.hydrogen = 0.55, .helium = 0.33, .cno = 0.10, .metals = 0.02}},
    {"nova-x65-cno06", {.hydrogen = 0.65, .helium = 0.27, .cno = 0.06, .metals = 0.02}},
};

static enum lxg_status write_one(const char *directory, const char *date, size_t k, struct lxg_error *error) {
  double log_t[TEMPERATURES], log_r[DENSITIES];
  for (int i = 0; i < TEMPERATURES; i++) {
    log_t[i] = (340 + 5 * i) / 100.0;
  }
  for (int j = 0; j < DENSITIES; j++) {
    log_r[j] = (-80 + 5 * j) / 10.0;
  }
  const struct lxg_composition *composition = &tables[k].composition;
  struct lxg_opacity *formula = NULL;
  struct lxg_opacity_grid *grid = NULL;
  enum lxg_status status = lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, composition, &formula, error);
  if (status == LXG_OK) {
    status = lxg_opacity_tabulate(formula, composition, log_t, TEMPERATURES, log_r, DENSITIES,
                                  "luxgale " LXG_VERSION
                                  ", built-in formula kramers, calibrated on Iglesias & Rogers 1996, "
                                  "ApJ 464, 943; extra cno by the formula's own law, not calibrated",
                                  &grid, error);
  }
  if (status == LXG_OK) {
    char path[1024];
    snprintf(path, sizeof path, "%s/%s.ecsv", directory, tables[k].name);
    snprintf(grid->date, sizeof grid->date, "%s", date);
    for (size_t i = 0; i < (size_t)TEMPERATURES * DENSITIES; i++) {
      grid->log_kappa[i] = round(grid->log_kappa[i] * 1e5) / 1e5;
    }
    status = lxg_opacity_grid_write(grid, path, error);
  }
  lxg_opacity_grid_destroy(grid);
  lxg_opacity_destroy(formula);
  return status;
}

int main(int argc, char **argv) {
  struct lxg_error error = {0};
  if (argc < 2) {
    fprintf(stderr, "usage: make_tables DIRECTORY [DATE]\n");
    return 2;
  }
  for (size_t k = 0; k < sizeof tables / sizeof tables[0]; k++) {
    if (write_one(argv[1], argc > 2 ? argv[2] : "", k, &error) != LXG_OK) {
      char text[2048];
      lxg_error_text(&error, text, sizeof text);
      fprintf(stderr, "make_tables: %s\n", text);
      return 1;
    }
  }
  return 0;
}
