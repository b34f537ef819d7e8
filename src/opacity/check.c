/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * check.c - looks an opacity table over: holes, spikes, suspicious slopes, distance from the built-in formula.
 *
 * Spike: a node off the straight line through its two neighbours by more than the limit along log T and along log R,
 * with the same sign: a bump of nature is sharp along log T only. Slope: at fixed T kappa of a gas rises with density
 * or stays flat; degenerate gas (2.7e11 rho/T^2 > 0.1) and cool gas (log T < 4.3), where it may fall, are left alone. The
 * comparison with the formula is for people: it says where a table is unusual, not that it is wrong.
 */
#include "luxgale/opacity_table.h"

#include <math.h>
#include <string.h>

static const double cool_log_t =
    4.3; /* below it dissociation and partial ionisation make kappa fall with rho */
static const double degenerate_share = 0.1; /* of 2.7e11 rho/T^2 */
static const double compared_log_r = -2.0;  /* the formula is calibrated up to here */

struct lxg_opacity_check_options lxg_opacity_check_defaults(void) {
  return (struct lxg_opacity_check_options){.spike = 0.3, .slope = -0.05, .difference = 0.3};
}

static double node(const struct lxg_opacity_grid *grid, size_t i, size_t j) {
  return grid->log_kappa[i * grid->densities + j];
}

static void add(struct lxg_opacity_findings *findings, const struct lxg_opacity_grid *grid,
                enum lxg_opacity_finding_kind kind, size_t i, size_t j, double amount) {
  if (findings->kept < LXG_OPACITY_FINDINGS) {
    findings->finding[findings->kept++] = (struct lxg_opacity_finding){.kind = kind,
                                                                       .temperature = i,
                                                                       .density = j,
                                                                       .log_t = grid->log_t[i],
                                                                       .log_r = grid->log_r[j],
                                                                       .log_kappa = node(grid, i, j),
                                                                       .amount = amount};
  }
}

static void note_extent(const struct lxg_opacity_grid *grid, struct lxg_opacity_findings *findings) {
  findings->nodes = grid->temperatures * grid->densities;
  findings->log_t_least = grid->log_t[0];
  findings->log_t_most = grid->log_t[grid->temperatures - 1];
  findings->log_r_least = grid->log_r[0];
  findings->log_r_most = grid->log_r[grid->densities - 1];
  for (size_t i = 0; i + 1 < grid->temperatures; i++) {
    findings->log_t_step_most = fmax(findings->log_t_step_most, grid->log_t[i + 1] - grid->log_t[i]);
  }
  for (size_t j = 0; j + 1 < grid->densities; j++) {
    findings->log_r_step_most = fmax(findings->log_r_step_most, grid->log_r[j + 1] - grid->log_r[j]);
  }
}

/* True if a known node lies on both sides along one axis; `step` is the distance of neighbours in memory. */
static bool enclosed(const double *value, size_t step, size_t count, size_t at) {
  bool before = false;
  bool after = false;
  for (size_t k = 0; k < count; k++) {
    const bool known = !isnan(value[k * step]);
    before = before || (k < at && known);
    after = after || (k > at && known);
  }
  return before && after;
}

static void look_for_gap(const struct lxg_opacity_grid *grid, size_t i, size_t j,
                         struct lxg_opacity_findings *findings) {
  findings->missing++;
  const size_t nr = grid->densities;
  if (enclosed(&grid->log_kappa[i * nr], 1, nr, j) ||
      enclosed(&grid->log_kappa[j], nr, grid->temperatures, i)) {
    findings->gaps++;
    add(findings, grid, LXG_OPACITY_FINDING_GAP, i, j, 0.0);
  }
}

/* Height of the middle of three nodes over the line through the others; NaN if one is missing. */
static double height(const double *x, double before, double middle, double after) {
  const double share = (x[1] - x[0]) / (x[2] - x[0]);
  return middle - (before + share * (after - before));
}

static void look_for_spike(const struct lxg_opacity_grid *grid, size_t i, size_t j, double limit,
                           struct lxg_opacity_findings *findings) {
  if (i == 0 || j == 0 || i + 1 == grid->temperatures || j + 1 == grid->densities) {
    return;
  }
  const double middle = node(grid, i, j);
  const double t = height(&grid->log_t[i - 1], node(grid, i - 1, j), middle, node(grid, i + 1, j));
  const double r = height(&grid->log_r[j - 1], node(grid, i, j - 1), middle, node(grid, i, j + 1));
  if (t * r > 0.0 && fmin(fabs(t), fabs(r)) > limit) {
    findings->spikes++;
    add(findings, grid, LXG_OPACITY_FINDING_SPIKE, i, j, fabs(t) < fabs(r) ? t : r);
  }
}

static void look_at_slope(const struct lxg_opacity_grid *grid, size_t i, size_t j, double limit,
                          struct lxg_opacity_findings *findings) {
  if (j + 1 == grid->densities || grid->log_t[i] < cool_log_t) {
    return;
  }
  const double log_rho = grid->log_r[j + 1] + 3.0 * (grid->log_t[i] - 6.0);
  if (2.7e11 * pow(10.0, log_rho - 2.0 * grid->log_t[i]) > degenerate_share) {
    return;
  }
  const double slope = (node(grid, i, j + 1) - node(grid, i, j)) / (grid->log_r[j + 1] - grid->log_r[j]);
  if (slope < limit) {
    findings->slopes++;
    add(findings, grid, LXG_OPACITY_FINDING_SLOPE, i, j, slope);
  }
}

/* Sum of squares and count of the differences within the calibrated range. */
struct comparison {
  double squares;
  size_t count;
};

static void compare(const struct lxg_opacity_grid *grid, const struct lxg_opacity *formula, size_t i,
                    size_t j, double limit, struct comparison *comparison,
                    struct lxg_opacity_findings *findings) {
  struct lxg_opacity_point point;
  if (grid->log_r[j] > compared_log_r + 1e-9 || grid->log_t[i] < cool_log_t - 1e-9 ||
      lxg_opacity_at_log(formula, grid->log_t[i], grid->log_r[j], &point) != LXG_OK) {
    return;
  }
  const double difference = node(grid, i, j) - point.log_kappa;
  comparison->squares += difference * difference;
  comparison->count++;
  if (fabs(difference) > fabs(findings->formula_most)) {
    findings->formula_most = difference;
  }
  if (fabs(difference) > limit) {
    findings->differences++;
    add(findings, grid, LXG_OPACITY_FINDING_DIFFERENCE, i, j, difference);
  }
}

enum lxg_status lxg_opacity_check(const struct lxg_opacity_grid *grid,
                                  const struct lxg_opacity_check_options *options,
                                  struct lxg_opacity_findings *findings, struct lxg_error *error) {
  memset(findings, 0, sizeof *findings);
  const struct lxg_opacity_check_options limits = options != NULL ? *options : lxg_opacity_check_defaults();
  enum lxg_status status = lxg_opacity_grid_validate(grid, error);
  struct lxg_opacity *formula = NULL;
  if (status == LXG_OK) {
    status = lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &grid->composition, &formula, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  note_extent(grid, findings);
  struct comparison comparison = {0.0, 0};
  for (size_t i = 0; i < grid->temperatures; i++) {
    for (size_t j = 0; j < grid->densities; j++) {
      if (isnan(node(grid, i, j))) {
        look_for_gap(grid, i, j, findings);
        continue;
      }
      look_for_spike(grid, i, j, limits.spike, findings);
      look_at_slope(grid, i, j, limits.slope, findings);
      compare(grid, formula, i, j, limits.difference, &comparison, findings);
    }
  }
  findings->formula_rms = comparison.count > 0 ? sqrt(comparison.squares / (double)comparison.count) : 0.0;
  lxg_opacity_destroy(formula);
  return LXG_OK;
}
