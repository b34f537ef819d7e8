/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_structure.c - the profile of a wind, row by row, from the star through the photosphere to 1000 R_ph.
 *
 * Inside the photosphere rows stand at the mesh nodes and at equal steps between them; beyond it at the accepted steps of the
 * coasting march. The optical depth is summed inward, kappa rho r taken as a power of r between rows; beyond 1000 R_ph the
 * density falls as r^-2 at constant opacity, which leaves kappa rho r.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"
#include "luxgale/eos.h"
#include "luxgale/memory.h"

#include <math.h>

enum { ROWS_PER_INTERVAL = 4, COAST_ROWS = 512 };

static enum lxg_status row_at(const struct lxg_wind_solver *solver, const struct wind_place *at,
                              struct lxg_wind_row *row) {
  const struct wind_constants *constants = &solver->problem.constants;
  struct wind_local l;
  const enum lxg_status status = lxg_wind_local(constants, at, &l);
  if (status == LXG_OK) {
    const double t = exp(at->ln_t), rho = exp(l.ln_rho);
    *row = (struct lxg_wind_row){.radius = exp(at->ln_r),
                                 .speed = exp(at->ln_v),
                                 .temperature = t,
                                 .density = rho,
                                 .luminosity = l.lhat * constants->l_edd,
                                 .opacity = l.kappa,
                                 .gamma = l.gamma,
                                 .mach = sqrt(l.w / l.c),
                                 .beta = lxg_eos_beta(l.c * l.g, t, rho)};
  }
  return status;
}

/* Beyond the photosphere the radiation has left the gas: luminosity from (W2) without radiation enthalpy. */
static enum lxg_status coast_rows(const struct lxg_wind_solver *solver, const struct wind_place *photosphere,
                                  struct lxg_wind_row rows[], size_t *count) {
  const struct wind_constants *constants = &solver->problem.constants;
  struct wind_coast_point point[COAST_ROWS];
  const enum lxg_status status =
      lxg_wind_coast_track(solver->problem.coast, photosphere, point, COAST_ROWS, count);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t i = 0; i < *count; i++) {
    const struct wind_place at = {point[i].ln_r, point[i].ln_v, point[i].ln_t, photosphere->ln_mdot,
                                  photosphere->lambda};
    const double l = lxg_wind_coast_luminosity(constants, photosphere, &point[i]);
    if (row_at(solver, &at, &rows[i]) != LXG_OK) {
      return LXG_DOMAIN;
    }
    rows[i].luminosity = l * constants->l_edd;
    rows[i].gamma = rows[i].opacity / constants->kappa_e * l;
  }
  return LXG_OK;
}

static void sum_depth(struct lxg_wind_row rows[], size_t count) {
  double depth = rows[count - 1].opacity * rows[count - 1].density * rows[count - 1].radius;
  rows[count - 1].optical_depth = depth;
  for (size_t i = count - 1; i-- > 0;) {
    const double a = rows[i].opacity * rows[i].density * rows[i].radius;
    const double b = rows[i + 1].opacity * rows[i + 1].density * rows[i + 1].radius;
    const double dlnr = log(rows[i + 1].radius / rows[i].radius);
    const double slope = log(b / a);
    depth += fabs(slope) > 1e-6 ? (b - a) / slope * dlnr : 0.5 * (a + b) * dlnr;
    rows[i].optical_depth = depth;
  }
}

static enum lxg_status fill(const struct lxg_wind_solver *solver, struct lxg_wind_row rows[], size_t *count,
                            size_t *critical, size_t *photosphere) {
  const double *nodes = lxg_bvp_nodes(solver->kept), *p = lxg_bvp_parameters_const(solver->kept);
  const size_t intervals = lxg_bvp_intervals(solver->kept);
  const bool burning = wind_unknowns(&solver->problem.constants) == 3;
  size_t n = 0;
  struct wind_place at = {0};
  for (size_t i = 0; i <= intervals; i++) {
    const size_t parts = i < intervals ? ROWS_PER_INTERVAL : 1;
    for (size_t j = 0; j < parts; j++) {
      const double h = i < intervals ? nodes[i + 1] - nodes[i] : 0.0;
      const double x = nodes[i] + h * (double)j / (double)parts;
      double y[LXG_BVP_MAX_UNKNOWNS];
      lxg_bvp_at(solver->kept, x, y, NULL);
      at = (struct wind_place){lxg_wind_ln_r(&solver->problem.constants, x, p), y[0], y[1], p[WIND_P_LNMDOT],
                               burning ? y[2] : p[WIND_P_LAMBDA]};
      if (x == 1.0) {
        *critical = n;
      }
      const enum lxg_status status = row_at(solver, &at, &rows[n++]);
      if (status != LXG_OK) {
        return status;
      }
    }
  }
  *photosphere = n - 1;
  size_t beyond = 0;
  const enum lxg_status status = coast_rows(solver, &at, rows + n - 1, &beyond);
  *count = n - 1 + beyond;
  if (status == LXG_OK) {
    sum_depth(rows, *count);
  }
  return status;
}

enum lxg_status lxg_wind_structure(const struct lxg_wind_solver *solver, struct lxg_wind_row **rows,
                                   size_t *count, size_t *critical, size_t *photosphere,
                                   struct lxg_error *error) {
  *rows = NULL;
  *count = *critical = *photosphere = 0;
  if (!solver->have) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "wind-none",
                         "there is no wind whose structure could be given");
  }
  const size_t most = ROWS_PER_INTERVAL * lxg_bvp_intervals(solver->kept) + 1 + COAST_ROWS;
  struct lxg_wind_row *made = lxg_alloc(most, sizeof *made);
  if (made == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "structure of a wind: out of memory for %zu rows",
                         most);
  }
  const enum lxg_status status = fill(solver, made, count, critical, photosphere);
  if (status != LXG_OK) {
    lxg_free(made);
    *count = 0;
    return lxg_error_set(error, status, "wind-structure", "structure of a wind: %s", lxg_strerror(status));
  }
  *rows = made;
  return LXG_OK;
}
