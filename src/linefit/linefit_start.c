/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * linefit_start.c - where a fit begins, and which rows are the shell's there (see linefit.h).
 *
 * At the centre of each cell every row, or all rows of one component together, goes to the system that fits better; the cell with
 * the smallest chi^2 of all rows wins. So a first guess far from the truth cannot fix the systems.
 */
#include "luxgale/linefit.h"

#include <math.h>
#include <string.h>

/* Squared residual of a column; infinite where the model has no speed. */
static double square(const struct lxg_linefit_grid *grid, const struct lxg_lines *lines, double scatter,
                     double gm, double held, size_t row, size_t column) {
  const double model = lxg_linefit_at(grid, gm, held, column);
  const double residual = (lines->line[row].velocity - model) / hypot(lines->line[row].error, scatter);
  return isfinite(model) ? residual * residual : (double)INFINITY;
}

/* True if the row, compared with rest, says nothing. */
static bool is_silent(const struct lxg_linefit_model *model, size_t row) {
  return model->map->kind[model->lines->line[row].kind].model == LXG_LINE_MODEL_REST;
}

/* chi^2 of the row's whole component as wind ([0]) and as shell ([1]). */
static void component_chi2(const struct lxg_linefit_model *model, const struct lxg_linefit_grid *grid,
                           double gm, double held, size_t row, double chi2[2]) {
  const struct lxg_lines *lines = model->lines;
  const char *name = lines->line[row].component;
  chi2[0] = chi2[1] = 0.0;
  for (size_t i = 0; i < lines->count; i++) {
    const bool together = i == row || (name[0] != '\0' && strcmp(name, lines->line[i].component) == 0);
    if (together && !is_silent(model, i)) {
      chi2[0] += square(grid, lines, model->assign.scatter, gm, held, i, i);
      chi2[1] += square(grid, lines, model->assign.scatter, gm, held, i, lines->count + i);
    }
  }
}

/* Systems of all rows at one point; returns chi^2, infinite if a row has no speed of either. */
static double systems_at(const struct lxg_linefit_model *model, const struct lxg_linefit_grid *grid,
                         double gm, double held, bool use[]) {
  const struct lxg_lines *lines = model->lines;
  double sum = 0.0;
  for (size_t i = 0; i < lines->count; i++) {
    double chi2[2];
    component_chi2(model, grid, gm, held, i, chi2);
    const char *name = lines->line[i].component;
    const bool declared_wind = strcmp(name, lxg_line_system_name(LXG_LINE_WIND)) == 0;
    const bool declared_shell = strcmp(name, lxg_line_system_name(LXG_LINE_SHELL)) == 0;
    const bool shell = declared_shell || (!declared_wind && chi2[1] < chi2[0]);
    use[i] = !shell;
    use[lines->count + i] = shell;
    if (!is_silent(model, i)) {
      sum += square(grid, lines, model->assign.scatter, gm, held, i, shell ? lines->count + i : i);
    }
  }
  return sum;
}

bool lxg_linefit_start(const struct lxg_linefit_model *model, const struct lxg_linefit_grid *grid,
                       bool use[]) {
  const struct lxg_linefit_range *range = &grid->range;
  const double mass_step = log(range->mass_high / range->mass_low) / (double)(range->masses - 1);
  const double held_step = log(range->held_high / range->held_low) / (double)(range->values - 1);
  double best = INFINITY, gm = 0.0, held = 0.0;
  if (model->history == NULL) { /* no shell: nothing to choose */
    memset(use, true, grid->columns * sizeof *use);
    return true;
  }
  for (size_t m = 0; m + 1 < range->masses; m++) {
    for (size_t k = 0; k + 1 < range->values; k++) {
      const double at_gm = range->mass_low * exp(((double)m + 0.5) * mass_step);
      const double at_held = range->held_low * exp(((double)k + 0.5) * held_step);
      const double chi2 = systems_at(model, grid, at_gm, at_held, use);
      if (chi2 < best) {
        best = chi2;
        gm = at_gm;
        held = at_held;
      }
    }
  }
  if (isfinite(best)) {
    systems_at(model, grid, gm, held, use);
  }
  return isfinite(best);
}
