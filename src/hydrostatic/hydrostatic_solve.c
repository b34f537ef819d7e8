/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * hydrostatic_solve.c - the solver's life, one Newton solve on an adapted mesh, and the numbers of an envelope.
 */
#include "hydrostatic/hydrostatic_internal.h"
#include "luxgale/constants.h"
#include "luxgale/eos.h"
#include "luxgale/memory.h"

#include <math.h>

enum { NEWTON_LIMIT = 30, MESH_LIMIT = 14 };
static const double damping_floor = 1e-3;
static const double march_tolerance = 1e-6; /* local error of the marches that start the search */

struct lxg_hydrostatic_options lxg_hydrostatic_options_default(void) {
  const struct lxg_hydrostatic_options options = {.stages = 5,
                                                  .capacity = 1500,
                                                  .newton_tolerance = 1e-9,
                                                  .residual_tolerance = 1e-6,
                                                  .tolerance = 1e-3,
                                                  .count_most = 400};
  return options;
}

enum lxg_status lxg_hydrostatic_solver_create(const struct lxg_wind_model *model,
                                              const struct lxg_hydrostatic_options *options,
                                              struct lxg_hydrostatic_solver **solver,
                                              struct lxg_error *error) {
  *solver = NULL;
  if (model->burning.law == LXG_BURNING_NONE) {
    return lxg_error_set(error, LXG_INPUT, "hydrostatic-burning",
                         "burning = none: an envelope at rest shines by burning (burning: cno)");
  }
  struct lxg_hydrostatic_solver *made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "solver of envelopes at rest: out of memory");
  }
  made->options = options != NULL ? *options : lxg_hydrostatic_options_default();
  lxg_hydrostatic_constants_init(&made->problem.constants, model);
  lxg_hydrostatic_problem_init(&made->problem);
  struct lxg_bvp **bvps[] = {&made->now, &made->kept, &made->start};
  bool complete = true;
  for (size_t i = 0; i < sizeof bvps / sizeof bvps[0]; i++) {
    *bvps[i] = lxg_bvp_create(STATIC_UNKNOWNS, STATIC_P_COUNT, made->options.stages, made->options.capacity);
    complete = complete && *bvps[i] != NULL;
  }
  made->ivp = lxg_ivp_create(STATIC_UNKNOWNS, LXG_IVP_ORDER_5, march_tolerance);
  if (!complete || made->ivp == NULL) {
    lxg_hydrostatic_solver_destroy(made);
    return lxg_error_set(error, LXG_MEMORY, "memory", "solver of envelopes at rest: out of memory");
  }
  *solver = made;
  return LXG_OK;
}

void lxg_hydrostatic_solver_destroy(struct lxg_hydrostatic_solver *solver) {
  if (solver != NULL) {
    lxg_bvp_destroy(solver->now);
    lxg_bvp_destroy(solver->kept);
    lxg_bvp_destroy(solver->start);
    lxg_ivp_destroy(solver->ivp);
    lxg_free(solver);
  }
}

enum lxg_status lxg_hydrostatic_newton(struct lxg_hydrostatic_solver *solver, const struct static_row *row,
                                       bool fresh) {
  if (!fresh) {
    const enum lxg_status copied = lxg_bvp_copy(solver->now, solver->kept);
    if (copied != LXG_OK) {
      return copied;
    }
  }
  solver->problem.row = *row;
  const struct lxg_bvp_options options = {.newton_tolerance = solver->options.newton_tolerance,
                                          .residual_tolerance = solver->options.residual_tolerance,
                                          .newton_limit = NEWTON_LIMIT,
                                          .mesh_limit = MESH_LIMIT,
                                          .damping_floor = damping_floor};
  struct lxg_bvp_statistics statistics;
  const enum lxg_status status = lxg_bvp_solve(solver->now, &solver->problem.bvp, &options, &statistics);
  solver->newton_steps += statistics.newton_steps;
  if (status == LXG_OK) {
    struct lxg_bvp *swap = solver->kept;
    solver->kept = solver->now;
    solver->now = swap;
    solver->residual = statistics.residual;
  }
  return status;
}

void lxg_hydrostatic_coordinates(const struct lxg_hydrostatic_solver *solver, double c[]) {
  const double *p = lxg_bvp_parameters_const(solver->kept);
  double y[STATIC_UNKNOWNS];
  lxg_bvp_at(solver->kept, 1.0, y, NULL);
  c[STATIC_C_MASS] = p[STATIC_P_LNMENV];
  c[STATIC_C_RADIUS] = p[STATIC_P_LNRPH];
  c[STATIC_C_TEMPERATURE] = y[STATIC_LNT];
}

struct gather {
  const struct static_constants *constants;
  double length;
  double heat; /* [L_Edd] */
  double gamma_max, beta_min;
  bool failed;
};

static void visit(void *context, size_t piece, double x, double weight, const double y[]) {
  (void)piece;
  struct gather *g = context;
  struct static_local l;
  if (lxg_hydrostatic_local(g->constants, g->constants->ln_r0 + x * g->length, y, &l) != LXG_OK) {
    g->failed = true;
    return;
  }
  const double t = exp(y[STATIC_LNT]);
  g->heat += weight * g->length * l.rate;
  g->gamma_max = fmax(g->gamma_max, l.gamma);
  g->beta_min = fmin(g->beta_min, lxg_eos_beta(g->constants->c_t2_per_k * t, t, exp(y[STATIC_LNRHO])));
}

enum lxg_status lxg_hydrostatic_result(const struct lxg_hydrostatic_solver *solver,
                                       struct lxg_hydrostatic *envelope) {
  const struct static_constants *constants = &solver->problem.constants;
  const double *p = lxg_bvp_parameters_const(solver->kept);
  struct gather g = {.constants = constants,
                     .length = p[STATIC_P_LNRPH] - constants->ln_r0,
                     .gamma_max = 0.0,
                     .beta_min = 1.0};
  lxg_bvp_visit(solver->kept, visit, &g);
  double base[STATIC_UNKNOWNS], top[STATIC_UNKNOWNS];
  lxg_bvp_at(solver->kept, 0.0, base, NULL);
  lxg_bvp_at(solver->kept, 1.0, top, NULL);
  struct static_local l;
  if (g.failed || lxg_hydrostatic_local(constants, p[STATIC_P_LNRPH], top, &l) != LXG_OK) {
    return LXG_DOMAIN;
  }
  *envelope = (struct lxg_hydrostatic){.envelope_mass = exp(p[STATIC_P_LNMENV]),
                                       .luminosity = top[STATIC_LUM] * constants->l_edd,
                                       .nuclear_luminosity = g.heat * constants->l_edd,
                                       .radius = exp(p[STATIC_P_LNRPH]),
                                       .temperature = exp(top[STATIC_LNT]),
                                       .photosphere_density = exp(top[STATIC_LNRHO]),
                                       .photosphere_opacity = l.kappa,
                                       .base_temperature = exp(base[STATIC_LNT]),
                                       .base_density = exp(base[STATIC_LNRHO]),
                                       .gamma_max = g.gamma_max,
                                       .beta_min = g.beta_min,
                                       .residual = solver->residual,
                                       .mesh_points = lxg_bvp_intervals(solver->kept)};
  return LXG_OK;
}

size_t lxg_hydrostatic_structure(const struct lxg_hydrostatic_solver *solver,
                                 struct lxg_hydrostatic_row rows[], size_t capacity) {
  const struct static_constants *constants = &solver->problem.constants;
  const double length = lxg_bvp_parameters_const(solver->kept)[STATIC_P_LNRPH] - constants->ln_r0;
  const double *x = lxg_bvp_nodes(solver->kept), *y = lxg_bvp_node_values(solver->kept);
  const size_t count = lxg_bvp_intervals(solver->kept) + 1;
  for (size_t i = 0; i < count && i < capacity; i++) {
    const double *at = y + i * STATIC_UNKNOWNS;
    rows[i] = (struct lxg_hydrostatic_row){.radius = exp(constants->ln_r0 + x[i] * length),
                                           .temperature = exp(at[STATIC_LNT]),
                                           .density = exp(at[STATIC_LNRHO]),
                                           .luminosity = at[STATIC_LUM] * constants->l_edd};
  }
  return count;
}
