/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table.c - an opacity that reads a table where there is one and the built-in formula elsewhere.
 */
#include "luxgale/opacity_table.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "opacity/blend.h"
#include "opacity/opacity_internal.h"

#include <math.h>

static const double width_least = 0.02, width_most = 3.0; /* dex: a finest table step; half a table */

struct lxg_opacity_table_options lxg_opacity_table_defaults(void) {
  return (struct lxg_opacity_table_options){.outside = LXG_OPACITY_JOIN, .width = 0.3, .ignore_cno = false};
}

static enum lxg_status check_inputs(const struct lxg_opacity_set *set,
                                    const struct lxg_opacity_table_options *options,
                                    struct lxg_error *error) {
  if (!(options->width >= width_least && options->width <= width_most)) {
    return lxg_error_set(error, LXG_INPUT, "opacity-table-width",
                         "width = %.6g dex: the hand-over at the edge of a table takes %g to %g dex",
                         options->width, width_least, width_most);
  }
  for (size_t k = 0; k < set->count; k++) {
    const enum lxg_status status = lxg_opacity_grid_validate(set->grid[k], error);
    if (status != LXG_OK) {
      return status;
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_opacity_create_table(const struct lxg_opacity_set *set,
                                         const struct lxg_composition *composition,
                                         const struct lxg_opacity_table_options *options,
                                         struct lxg_opacity **opacity, struct lxg_error *error) {
  *opacity = NULL;
  struct lxg_opacity *made = NULL;
  struct lxg_opacity_grid *grid = NULL;
  enum lxg_status status = check_inputs(set, options, error);
  if (status == LXG_OK) {
    status = lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, composition, &made, error);
  }
  if (status == LXG_OK) {
    status = lxg_opacity_blend(set, composition, options->ignore_cno, &grid, error);
  }
  if (status == LXG_OK) {
    status = lxg_opacity_grid_validate(grid, error);
  }
  if (status == LXG_OK) {
    status = lxg_opacity_surface_init(&made->surface, grid, options->outside, options->width, made, error);
    made->tabulated = status == LXG_OK;
  }
  lxg_opacity_grid_destroy(grid);
  if (status != LXG_OK) {
    lxg_opacity_destroy(made);
    lxg_error_context(error, "preparing the opacity tables");
    return status;
  }
  *opacity = made;
  return LXG_OK;
}

/* ln k = F + w (G - F), F the formula and G the surface, all with their slopes. */
static void fade(const struct surface_value *surface, struct opacity_sum formula,
                 struct lxg_opacity_value *value) {
  const double f = log(formula.kappa);
  const double difference = surface->ln_kappa - f;
  const double w = surface->weight;
  const double by_r = (w * surface->by_r + surface->weight_by_r * difference) / LXG_LN10;
  const double by_t = (w * surface->by_t + surface->weight_by_t * difference) / LXG_LN10;
  value->kappa = exp(f + w * difference);
  value->dlnk_dlnrho = by_r + (1.0 - w) * formula.by_lnrho / formula.kappa;
  value->dlnk_dlnt = by_t - 3.0 * by_r + (1.0 - w) * formula.by_lnt / formula.kappa;
}

enum lxg_status lxg_opacity_table_at(const struct lxg_opacity *opacity, double ln_rho, double ln_t,
                                     struct lxg_opacity_value *value) {
  struct surface_value surface;
  const double log_t = ln_t * (1.0 / LXG_LN10);
  const double log_r = opacity_ln_r(ln_rho, ln_t) * (1.0 / LXG_LN10);
  if (!lxg_opacity_surface_at(&opacity->surface, log_t, log_r, &surface)) {
    return LXG_DOMAIN;
  }
  if (surface.weight == 1.0) {
    const double by_r = surface.by_r * (1.0 / LXG_LN10);
    value->kappa = exp(surface.ln_kappa);
    value->dlnk_dlnrho = by_r;
    value->dlnk_dlnt = surface.by_t * (1.0 / LXG_LN10) - 3.0 * by_r;
  } else {
    const struct opacity_sum formula = lxg_opacity_kramers_at(&opacity->kramers, ln_rho, ln_t);
    if (surface.weight > 0.0) {
      fade(&surface, formula, value);
    } else {
      value->kappa = formula.kappa;
      value->dlnk_dlnrho = formula.by_lnrho / formula.kappa;
      value->dlnk_dlnt = formula.by_lnt / formula.kappa;
    }
  }
  value->table_weight = surface.table;
  return LXG_OK;
}
