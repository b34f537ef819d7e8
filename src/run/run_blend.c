/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_blend.c - winds whose opacity reduction changes with time: families at a few factors and what lies between them.
 *
 * The factors are Chebyshev points of ln s over the range of the table, both ends included; one more family is traced between two of them
 * to measure the error of the interpolation: the largest deviation of the mass-loss rate at equal luminosity.
 */
#include "luxgale/memory.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

static const size_t least_families = 5;   /* at a range of nothing */
static const double families_per_e = 8.0; /* more for each e-fold of s */
static const size_t most_families = 15;   /* whatever the range */
static const double alike = 1e-9;         /* of ln s: a table that does not vary */
enum { COMPARED = 60 };                   /* luminosities at which the interpolation is checked */

static double brightest_of(const struct lxg_history *history) {
  double most = 0.0;
  for (size_t i = 0; i < history->count && history->kind == LXG_HISTORY_PHOTOSPHERE; i++) {
    most = fmax(most, history->luminosity[i]);
  }
  return most;
}

static enum lxg_status trace(const struct lxg_case *input, double x, struct lxg_family *family,
                             struct lxg_error *error) {
  struct lxg_wind_solver *solver = NULL;
  struct lxg_wind_model model = lxg_run_model(input);
  model.porosity.factor = exp(x);
  enum lxg_status status = lxg_wind_solver_create(&model, NULL, &solver, error);
  if (status == LXG_OK) {
    status = lxg_run_trace(input, solver, brightest_of(input->history), family, error);
  }
  if (status != LXG_OK) {
    lxg_error_context(error, "tracing winds with porosity.factor = %.6g", exp(x));
  }
  lxg_wind_solver_destroy(solver);
  return status;
}

/* Largest deviation of the rate at equal luminosity, thin branch. */
static double deviation(const struct lxg_family *exact, const struct lxg_family *blended, enum lxg_held key) {
  struct lxg_family_index *a = NULL, *b = NULL;
  double worst = 0.0;
  const enum lxg_family_quantity quantity = (enum lxg_family_quantity)key;
  if (lxg_family_index_create(exact, quantity, &a, NULL) == LXG_OK &&
      lxg_family_index_create(blended, quantity, &b, NULL) == LXG_OK) {
    for (size_t i = 1; i < COMPARED; i++) {
      const double value = exact->wind[exact->count * i / COMPARED].value[key];
      struct lxg_family_place p, q;
      if (lxg_family_index_branch(a, value, LXG_BRANCH_THIN, &p) > 0 &&
          lxg_family_index_branch(b, value, LXG_BRANCH_THIN, &q) > 0) {
        worst =
            fmax(worst, fabs(q.value[LXG_FAMILY_MASS_LOSS_RATE] / p.value[LXG_FAMILY_MASS_LOSS_RATE] - 1.0));
      }
    }
  }
  lxg_family_index_destroy(a);
  lxg_family_index_destroy(b);
  return worst;
}

enum lxg_status lxg_run_blend(const struct lxg_case *input, enum lxg_held key, struct lxg_run_winds *winds,
                              struct lxg_family *middle, struct lxg_error *error) {
  const struct lxg_history *factor = input->reduction;
  const struct lxg_history *history = input->history;
  double low = INFINITY, high = -INFINITY, x[16];
  if (factor->time[0] > history->time[0] ||
      factor->time[factor->count - 1] < history->time[history->count - 1]) {
    return lxg_error_set(error, LXG_INPUT, "porosity-span",
                         "%s: error: porosity.file: its times must cover those of the luminosity history",
                         lxg_document_name(input->document));
  }
  for (size_t i = 0; i < factor->count; i++) {
    low = fmin(low, log(factor->luminosity[i]));
    high = fmax(high, log(factor->luminosity[i]));
  }
  const size_t wanted = least_families + (size_t)ceil(families_per_e * (high - low));
  const size_t count = high - low < alike ? 1 : wanted < most_families ? wanted : most_families;
  struct lxg_family *family = lxg_alloc(count, sizeof *family);
  if (family == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "porosity.file: out of memory");
  }
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    const double share = count == 1 ? 0.0 : 0.5 - 0.5 * cos(acos(-1.0) * (double)i / (double)(count - 1));
    x[i] = i + 1 == count && count > 1 ? high : low + share * (high - low);
    status = trace(input, x[i], &family[i], error);
  }
  if (status == LXG_OK) {
    status = lxg_family_blend_create(family, x, count, &winds->blend, error);
  }
  const double between = count == 1 ? low : 0.5 * (x[count / 2] + x[count / 2 - 1]);
  if (status == LXG_OK) {
    status = trace(input, between, middle, error);
  }
  if (status == LXG_OK) {
    winds->blended = count;
    winds->blend_error = deviation(middle, lxg_family_blend_at(winds->blend, between), key);
  }
  for (size_t i = 0; i < count; i++) {
    lxg_family_free(&family[i]);
  }
  lxg_free(family);
  return status;
}
