/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * blend.c - one grid for the composition of a case from the tables of a set.
 *
 * At every node log k = F(case) + sum_k w_k [log k_k - F(k)], F the built-in formula: what is interpolated is the
 * difference to a law that already knows how opacity follows composition, which is far flatter than opacity itself. The
 * weights are linear: first in log10(Z + 0.001) among the tables of equal X, then in X among those values of X whose
 * tables bracket Z. Where several tables share X and Z the one with cno nearest to the case's is taken.
 * Extra cno, which tables of scaled-solar metals do not know, enters through F(case) - unless it is to be ignored: then
 * F(case) is taken with the extra cno as helium. A node is missing if a table that counts there misses it.
 */
#include "opacity/blend.h"

#include "luxgale/memory.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const double same =
    1e-6; /* fractions closer than this are equal: the precision of a composition's sum */
static const double z_soft = 0.001;   /* makes log Z finite at Z = 0 */
static const double axis_same = 1e-9; /* dex */

static double log_z(double z) {
  return log10(z + z_soft);
}

/* ---- weights ---- */

/* False if another table of the same X and Z has a cno nearer to the case's (the first wins a tie). */
static bool best_of_its_kind(const struct lxg_opacity_set *set, size_t k, double cno) {
  const struct lxg_composition *mine = &set->grid[k]->composition;
  for (size_t i = 0; i < set->count; i++) {
    const struct lxg_composition *other = &set->grid[i]->composition;
    if (i != k && fabs(other->hydrogen - mine->hydrogen) < same &&
        fabs(other->metals - mine->metals) < same) {
      const double nearer = fabs(mine->cno - cno) - fabs(other->cno - cno);
      if (nearer > 0.0 || (nearer == 0.0 && i < k)) {
        return false;
      }
    }
  }
  return true;
}

/* Weights in Z of the tables with hydrogen fraction x; false if they do not bracket z. Untouched elsewhere. */
static bool weigh_z(const struct lxg_opacity_set *set, const struct lxg_composition *target, double x,
                    double *weight) {
  size_t low = set->count, high = set->count;
  for (size_t k = 0; k < set->count; k++) {
    const struct lxg_composition *c = &set->grid[k]->composition;
    if (fabs(c->hydrogen - x) >= same || !best_of_its_kind(set, k, target->cno)) {
      continue;
    }
    if (c->metals <= target->metals + same &&
        (low == set->count || c->metals > set->grid[low]->composition.metals)) {
      low = k;
    }
    if (c->metals >= target->metals - same &&
        (high == set->count || c->metals < set->grid[high]->composition.metals)) {
      high = k;
    }
  }
  if (low == set->count || high == set->count) {
    return false;
  }
  const double from = log_z(set->grid[low]->composition.metals),
               to = log_z(set->grid[high]->composition.metals);
  const double share = low == high ? 0.0 : (log_z(target->metals) - from) / (to - from);
  weight[low] += 1.0 - share;
  if (low != high) {
    weight[high] += share;
  }
  return true;
}

/* What the set covers, for a message. */
static enum lxg_status not_covered(const struct lxg_opacity_set *set, const struct lxg_composition *target,
                                   struct lxg_error *error) {
  double least_x = 1.0, most_x = 0.0, least_z = 1.0, most_z = 0.0;
  for (size_t k = 0; k < set->count; k++) {
    least_x = fmin(least_x, set->grid[k]->composition.hydrogen);
    most_x = fmax(most_x, set->grid[k]->composition.hydrogen);
    least_z = fmin(least_z, set->grid[k]->composition.metals);
    most_z = fmax(most_z, set->grid[k]->composition.metals);
  }
  return lxg_error_set(
      error, LXG_INPUT, "opacity-table-composition",
      "X = %.6g, Z = %.6g: the %zu opacity tables lie at X from %.6g to %.6g and Z from %.6g to %.6g "
      "and must bracket both (Z at each X used)",
      target->hydrogen, target->metals, set->count, least_x, most_x, least_z, most_z);
}

static enum lxg_status weigh(const struct lxg_opacity_set *set, const struct lxg_composition *target,
                             double *weight, double *scratch, struct lxg_error *error) {
  const size_t count = set->count;
  double low = -1.0, high = 2.0;
  for (size_t k = 0; k < count; k++) { /* nearest usable X on either side */
    const double x = set->grid[k]->composition.hydrogen;
    memset(scratch, 0, count * sizeof *scratch);
    if (weigh_z(set, target, x, scratch)) {
      low = x <= target->hydrogen + same && x > low ? x : low;
      high = x >= target->hydrogen - same && x < high ? x : high;
    }
  }
  if (low < 0.0 || high > 1.0) {
    return not_covered(set, target, error);
  }
  const bool one = high - low < same;
  const double share = one ? 0.0 : (target->hydrogen - low) / (high - low);
  memset(scratch, 0, count * sizeof *scratch);
  weigh_z(set, target, low, scratch);
  for (size_t k = 0; k < count; k++) {
    weight[k] = (1.0 - share) * scratch[k];
  }
  if (!one) {
    memset(scratch, 0, count * sizeof *scratch);
    weigh_z(set, target, high, scratch);
    for (size_t k = 0; k < count; k++) {
      weight[k] += share * scratch[k];
    }
  }
  return LXG_OK;
}

/* ---- nodes ---- */

static enum lxg_status check_axes(const struct lxg_opacity_set *set, const double *weight, size_t first,
                                  struct lxg_error *error) {
  const struct lxg_opacity_grid *a = set->grid[first];
  for (size_t k = 0; k < set->count; k++) {
    const struct lxg_opacity_grid *b = set->grid[k];
    bool equal = a->temperatures == b->temperatures && a->densities == b->densities;
    for (size_t i = 0; equal && i < a->temperatures; i++) {
      equal = fabs(a->log_t[i] - b->log_t[i]) < axis_same;
    }
    for (size_t j = 0; equal && j < a->densities; j++) {
      equal = fabs(a->log_r[j] - b->log_r[j]) < axis_same;
    }
    if (weight[k] != 0.0 && !equal) {
      return lxg_error_set(
          error, LXG_INPUT, "opacity-table-grid",
          "%s:%zu and %s:%zu: tables that are interpolated between need the same log T and log R", a->name,
          a->line, b->name, b->line);
    }
  }
  return LXG_OK;
}

/* Adds `factor` log10 kappa of the formula for a composition to every node. */
static enum lxg_status add_formula(struct lxg_opacity_grid *grid, const struct lxg_composition *composition,
                                   double factor, struct lxg_error *error) {
  struct lxg_opacity *formula = NULL;
  const enum lxg_status status =
      lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, composition, &formula, error);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t k = 0; k < grid->temperatures * grid->densities; k++) {
    struct lxg_opacity_point point;
    const bool known = lxg_opacity_at_log(formula, grid->log_t[k / grid->densities],
                                          grid->log_r[k % grid->densities], &point) == LXG_OK;
    grid->log_kappa[k] += known ? factor * point.log_kappa : NAN;
  }
  lxg_opacity_destroy(formula);
  return LXG_OK;
}

static bool is_same(const struct lxg_composition *a, const struct lxg_composition *b) {
  return fabs(a->hydrogen - b->hydrogen) < same && fabs(a->cno - b->cno) < same &&
         fabs(a->metals - b->metals) < same;
}

static enum lxg_status combine(const struct lxg_opacity_set *set, const double *weight, size_t first,
                               const struct lxg_composition *target, const struct lxg_composition *law,
                               struct lxg_opacity_grid **grid, struct lxg_error *error) {
  const struct lxg_opacity_grid *model = set->grid[first];
  struct lxg_opacity_grid *made = NULL;
  enum lxg_status status = lxg_opacity_grid_create(model->temperatures, model->densities, &made, error);
  if (status != LXG_OK) {
    return status;
  }
  const size_t nodes = made->temperatures * made->densities;
  memcpy(made->log_t, model->log_t, made->temperatures * sizeof *made->log_t);
  memcpy(made->log_r, model->log_r, made->densities * sizeof *made->log_r);
  snprintf(made->name, sizeof made->name, "%s", model->name);
  snprintf(made->source, sizeof made->source, "%s", model->source);
  snprintf(made->date, sizeof made->date, "%s", model->date);
  made->composition = *target;
  for (size_t i = 0; i < nodes; i++) {
    made->log_kappa[i] = 0.0;
  }
  const bool exact = fabs(weight[first] - 1.0) < 1e-12 && is_same(&model->composition, law);
  for (size_t k = 0; k < set->count && status == LXG_OK; k++) {
    if (weight[k] == 0.0) {
      continue;
    }
    for (size_t i = 0; i < nodes; i++) {
      made->log_kappa[i] += exact ? set->grid[k]->log_kappa[i] : weight[k] * set->grid[k]->log_kappa[i];
    }
    status = exact ? LXG_OK : add_formula(made, &set->grid[k]->composition, -weight[k], error);
  }
  if (status == LXG_OK && !exact) {
    status = add_formula(made, law, 1.0, error);
  }
  if (status != LXG_OK) {
    lxg_opacity_grid_destroy(made);
    return status;
  }
  *grid = made;
  return LXG_OK;
}

enum lxg_status lxg_opacity_blend(const struct lxg_opacity_set *set, const struct lxg_composition *target,
                                  bool ignore_cno, struct lxg_opacity_grid **grid, struct lxg_error *error) {
  *grid = NULL;
  if (set->count == 0) {
    return lxg_error_set(error, LXG_INPUT, "opacity-table-composition", "no opacity table was given");
  }
  double *weight = lxg_alloc(2 * set->count, sizeof *weight);
  if (weight == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "set of opacity tables: out of memory");
  }
  struct lxg_composition law = *target;
  if (ignore_cno) {
    law.helium += law.cno;
    law.cno = 0.0;
  }
  enum lxg_status status = weigh(set, &law, weight, weight + set->count, error);
  size_t first = 0;
  while (status == LXG_OK && weight[first] == 0.0) {
    first++;
  }
  if (status == LXG_OK) {
    status = check_axes(set, weight, first, error);
  }
  if (status == LXG_OK) {
    status = combine(set, weight, first, target, &law, grid, error);
  }
  lxg_free(weight);
  return status;
}
