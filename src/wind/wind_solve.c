/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_solve.c - the solver's life, one Newton solve on an adapted mesh, and continuation between held values.
 *
 * A solve always works on a copy: the last wind stays kept until a better one is complete.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include <math.h>

static const double walk_smallest =
    1.0 / 512.0;                          /* smallest share of the way that a continuation step may have */
static const double walk_residual = 1e-4; /* relative residual that is enough on the way */
enum { NEWTON_LIMIT = 30, MESH_LIMIT = 14, WALK_LIMIT = 400 };
static const double damping_floor = 1e-3;
static const double aim_share = 0.1; /* of the residual tolerance, what a new mesh aims at */

struct lxg_wind_options lxg_wind_options_default(void) {
  const struct lxg_wind_options options = {
      .stages = 5, .capacity = 3000, .newton_tolerance = 1e-8, .residual_tolerance = 8e-7};
  return options;
}

enum lxg_status lxg_wind_solver_create(const struct lxg_wind_model *model,
                                       const struct lxg_wind_options *options,
                                       struct lxg_wind_solver **solver, struct lxg_error *error) {
  *solver = NULL;
  struct lxg_wind_solver *made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "wind solver: out of memory");
  }
  made->options = options != NULL ? *options : lxg_wind_options_default();
  lxg_wind_constants_init(&made->problem.constants, model);
  made->problem.burning_share = 1.0;
  const size_t unknowns = wind_unknowns(&made->problem.constants);
  made->problem.coast = lxg_wind_coast_create(&made->problem.constants);
  made->now = lxg_bvp_create(unknowns, WIND_P_COUNT, made->options.stages, made->options.capacity);
  made->kept = lxg_bvp_create(unknowns, WIND_P_COUNT, made->options.stages, made->options.capacity);
  bool complete = true;
  for (size_t i = 0; i < LXG_WIND_SLOTS; i++) {
    made->slot[i] = lxg_bvp_create(unknowns, WIND_P_COUNT, made->options.stages, made->options.capacity);
    complete = complete && made->slot[i] != NULL;
  }
  made->ivp = lxg_ivp_create(2, LXG_IVP_ORDER_5, 1e-5);
  if (made->problem.coast == NULL || made->now == NULL || made->kept == NULL || !complete ||
      made->ivp == NULL) {
    lxg_wind_solver_destroy(made);
    return lxg_error_set(error, LXG_MEMORY, "memory", "wind solver: out of memory");
  }
  *solver = made;
  return LXG_OK;
}

void lxg_wind_solver_destroy(struct lxg_wind_solver *solver) {
  if (solver != NULL) {
    lxg_wind_coast_destroy(solver->problem.coast);
    lxg_bvp_destroy(solver->now);
    lxg_bvp_destroy(solver->kept);
    for (size_t i = 0; i < LXG_WIND_SLOTS; i++) {
      lxg_bvp_destroy(solver->slot[i]);
    }
    lxg_ivp_destroy(solver->ivp);
    lxg_free(solver);
  }
}

const struct lxg_wind_model *lxg_wind_solver_model(const struct lxg_wind_solver *solver) {
  return &solver->problem.constants.model;
}

void lxg_wind_solver_outer_only(struct lxg_wind_solver *solver, bool outer_only) {
  solver->outer_only = outer_only;
}

enum lxg_status lxg_wind_newton(struct lxg_wind_solver *solver, const struct wind_row row[2], double residual,
                                bool fresh) {
  if (!fresh) {
    const enum lxg_status copied = lxg_bvp_copy(solver->now, solver->kept);
    if (copied != LXG_OK) {
      return copied;
    }
  }
  enum lxg_status status = lxg_wind_problem_set(&solver->problem, row, lxg_bvp_nodes(solver->now)[0] >= 1.0);
  if (status != LXG_OK) {
    return status;
  }
  if (solver->problem.bvp.integrals > 0 && solver->have) {
    lxg_bvp_parameters(solver->now)[WIND_P_LNMENV] = lxg_wind_kept_value(solver, LXG_HELD_ENVELOPE_MASS);
  }
  const struct lxg_bvp_options options = {.newton_tolerance = solver->options.newton_tolerance,
                                          .residual_tolerance = residual,
                                          .residual_aim = aim_share * residual,
                                          .newton_limit = NEWTON_LIMIT,
                                          .mesh_limit = MESH_LIMIT,
                                          .damping_floor = damping_floor};
  struct lxg_bvp_statistics statistics;
  status = lxg_bvp_solve(solver->now, &solver->problem.bvp, &options, &statistics);
  solver->newton_steps += statistics.newton_steps;
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_bvp *swap = solver->kept;
  solver->kept = solver->now;
  solver->now = swap;
  solver->have = true;
  solver->residual = statistics.residual;
  return LXG_OK;
}

enum lxg_status lxg_wind_walk(struct lxg_wind_solver *solver, const struct wind_row row[2]) {
  double from[2];
  for (size_t i = 0; i < 2; i++) {
    from[i] = lxg_wind_kept_value(solver, row[i].kind);
    if (!isfinite(from[i])) {
      return LXG_NOT_CONVERGED;
    }
  }
  double done = 0.0, step = 1.0;
  for (int i = 0; done < 1.0; i++) {
    if (i >= WALK_LIMIT || step < walk_smallest) {
      return LXG_NOT_CONVERGED;
    }
    const double next = fmin(1.0, done + step);
    struct wind_row at[2] = {row[0], row[1]};
    for (size_t j = 0; j < 2; j++) {
      at[j].target = next >= 1.0 ? row[j].target : from[j] + next * (row[j].target - from[j]);
    }
    const double residual = next >= 1.0 ? solver->options.residual_tolerance : walk_residual;
    const enum lxg_status status = lxg_wind_newton(solver, at, residual, false);
    if (status == LXG_OK) {
      done = next;
      step *= 2.0;
    } else if (status == LXG_BUG || status == LXG_MEMORY) {
      return status;
    } else {
      step *= 0.5;
    }
  }
  return LXG_OK;
}

struct wind_row lxg_wind_row_of(const struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold) {
  const struct wind_constants *constants = &solver->problem.constants;
  struct wind_row row = {.kind = (int)hold->quantity};
  switch (hold->quantity) {
  case LXG_HELD_BASE_LUMINOSITY:
  case LXG_HELD_ENERGY_RATE:
    row.target = hold->value / constants->l_edd;
    break;
  case LXG_HELD_PHOTOSPHERE_LUMINOSITY:
    row.target = log(hold->value / (4.0 * LXG_PI * LXG_STEFAN_BOLTZMANN));
    break;
  default:
    row.target = log(hold->value);
    break;
  }
  return row;
}

bool lxg_wind_holds_outer(const struct lxg_wind_hold hold[], size_t count) {
  bool radius = false, inner = false;
  for (size_t i = 0; i < count; i++) {
    radius = radius || hold[i].quantity == LXG_HELD_LAUNCH_RADIUS;
    inner = inner || hold[i].quantity == LXG_HELD_BASE_TEMPERATURE ||
            hold[i].quantity == LXG_HELD_BASE_LUMINOSITY || hold[i].quantity == LXG_HELD_ENVELOPE_MASS;
  }
  return radius && !inner;
}

bool lxg_wind_unsupplied(const struct lxg_wind_hold hold[], size_t count) {
  for (size_t i = 0; i < count; i++) {
    if (hold[i].quantity == LXG_HELD_ENERGY_RATE && hold[i].value <= 0.0) {
      return true;
    }
  }
  return false;
}

static enum lxg_status hold_check(const struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                                  struct lxg_error *error) {
  const char *name = lxg_held_name(hold->quantity);
  if (name == NULL) {
    return lxg_error_set(error, LXG_INPUT, "hold-unknown", "held quantity %d does not exist",
                         (int)hold->quantity);
  }
  const bool any_sign = hold->quantity == LXG_HELD_ENERGY_RATE || hold->quantity == LXG_HELD_BASE_LUMINOSITY;
  if (!isfinite(hold->value) || (!any_sign && !(hold->value > 0.0))) {
    return lxg_error_set(error, LXG_INPUT, "hold-value", "%s = %.10g: a held value is a positive number",
                         name, hold->value);
  }
  const double radius = solver->problem.constants.model.star.radius;
  if (hold->quantity == LXG_HELD_LAUNCH_RADIUS && !(hold->value > radius)) {
    return lxg_error_set(error, LXG_INPUT, "hold-launch-radius",
                         "launch_radius = %.10g cm: it lies outside the star's radius, %.10g cm", hold->value,
                         radius);
  }
  return LXG_OK;
}

enum lxg_status lxg_wind_holds_check(const struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                     struct lxg_error *error) {
  for (size_t i = 0; i < 2; i++) {
    const enum lxg_status status = hold_check(solver, &hold[i], error);
    if (status != LXG_OK) {
      return status;
    }
  }
  if (hold[0].quantity == hold[1].quantity) {
    return lxg_error_set(error, LXG_INPUT, "hold-dependent",
                         "%s is held twice: two different quantities select a wind",
                         lxg_held_name(hold[0].quantity));
  }
  return LXG_OK;
}

/* What a failed search has shown. A scan that met winds on one side of the held value only has shown that no wind reaches it; one
 * that met none at all, that nowhere at the critical radii tried radiation and pressure balance gravity. */
static enum lxg_wind_reason why_none(const struct lxg_wind_solver *solver, enum lxg_status status) {
  if (status != LXG_NO_SOLUTION) {
    return LXG_WIND_NOT_FOUND;
  }
  if (solver->have) {
    return LXG_WIND_STAGNATES; /* the structure was solved; only the gas beyond it fell back */
  }
  if (!solver->probed_below && !solver->probed_above) {
    return LXG_WIND_NO_CRITICAL_POINT;
  }
  return solver->probed_below && solver->probed_above ? LXG_WIND_NOT_FOUND : LXG_WIND_ABOVE_FOLD;
}

static enum lxg_status finish(struct lxg_wind_solver *solver, enum lxg_status status, struct lxg_wind *wind,
                              struct lxg_error *error) {
  if (status == LXG_OK) {
    status = lxg_wind_result(solver, wind);
  }
  if (status == LXG_OK) {
    return LXG_OK;
  }
  if (status == LXG_BUG || status == LXG_MEMORY) {
    return lxg_error_set(error, status, "wind-internal", "wind: %s", lxg_strerror(status));
  }
  if (wind->reason == LXG_WIND_SOLVED || wind->reason == LXG_WIND_NOT_FOUND) {
    lxg_wind_none(wind, why_none(solver, status));
  }
  return lxg_error_set(error, LXG_NO_SOLUTION, lxg_wind_reason_code(wind->reason), "%s",
                       lxg_wind_reason_text(wind->reason));
}

/* Critical radii tried when none is held: log10 of r_c/R_0, the usual ones first. */
static const double first_radii[] = {1.4, 1.0, 1.8, 0.6, 2.4, 3.2, 0.3, 4.0};

/* Kinds whose value the scan knows well enough to bracket; the others live at the photosphere and beyond. */
static bool scannable(int kind) {
  return kind == LXG_HELD_BASE_TEMPERATURE || kind == LXG_HELD_BASE_LUMINOSITY ||
         kind == LXG_HELD_MASS_LOSS_RATE || kind == LXG_HELD_ENERGY_RATE || kind == LXG_HELD_ENVELOPE_MASS;
}

/* Any wind with one held row at one critical radius, kept. */
static enum lxg_status first_at(struct lxg_wind_solver *solver, double ln_rc, const struct wind_row *row) {
  if (scannable(row->kind)) {
    return lxg_wind_cold(solver, ln_rc, row);
  }
  enum lxg_status status = lxg_wind_cold_any(solver, ln_rc);
  if (status == LXG_OK) {
    const struct wind_row pair[2] = {{.kind = LXG_HELD_LAUNCH_RADIUS, .target = ln_rc}, *row};
    status = lxg_wind_walk(solver, pair);
  }
  return status;
}

/* Any wind with one held row, kept. */
static enum lxg_status first_wind(struct lxg_wind_solver *solver, const struct wind_row *row) {
  if (row->kind == LXG_HELD_LAUNCH_RADIUS) {
    return lxg_wind_cold_any(solver, row->target);
  }
  enum lxg_status status = LXG_NO_SOLUTION;
  for (size_t i = 0; i < sizeof first_radii / sizeof first_radii[0]; i++) {
    status = first_at(solver, solver->problem.constants.ln_r0 + first_radii[i] * LXG_LN10, row);
    if (status == LXG_OK || status == LXG_BUG || status == LXG_MEMORY) {
      break;
    }
  }
  return status;
}

/* Any burning wind, dark at R_0 unless a base luminosity is among the `count` held rows. */
static enum lxg_status burning_wind(struct lxg_wind_solver *solver, const struct wind_row row[],
                                    size_t count) {
  double base = 0.0;
  for (size_t i = 0; i < count; i++) {
    base = row[i].kind == LXG_HELD_BASE_LUMINOSITY ? row[i].target : base;
  }
  return lxg_wind_burning_first(solver, base);
}

/* The same with one held row of any kind, dark at R_0. */
static enum lxg_status burning_first(struct lxg_wind_solver *solver, const struct wind_row *row) {
  enum lxg_status status = burning_wind(solver, row, 1);
  if (status == LXG_OK && row->kind != LXG_HELD_BASE_LUMINOSITY) {
    const struct wind_row pair[2] = {{.kind = LXG_HELD_BASE_LUMINOSITY}, *row};
    status = lxg_wind_walk(solver, pair);
  }
  return status;
}

enum lxg_status lxg_wind_first(struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                               struct lxg_wind *wind, struct lxg_error *error) {
  lxg_wind_none(wind, LXG_WIND_NOT_FOUND);
  enum lxg_status status = hold_check(solver, hold, error);
  if (status != LXG_OK) {
    return status;
  }
  if (lxg_wind_unsupplied(hold, 1)) {
    lxg_wind_none(wind, LXG_WIND_ENERGY_LIMITED);
    return finish(solver, LXG_NO_SOLUTION, wind, error);
  }
  solver->have = false;
  solver->probed_below = solver->probed_above = false;
  solver->newton_steps = 0;
  const struct wind_row row = lxg_wind_row_of(solver, hold);
  if (wind_unknowns(&solver->problem.constants) == 3) {
    return finish(solver, burning_first(solver, &row), wind, error);
  }
  return finish(solver, first_wind(solver, &row), wind, error);
}

enum lxg_status lxg_wind_solve(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                               struct lxg_wind *wind, struct lxg_error *error) {
  lxg_wind_none(wind, LXG_WIND_NOT_FOUND);
  enum lxg_status status = lxg_wind_holds_check(solver, hold, error);
  if (status != LXG_OK) {
    return status;
  }
  if (lxg_wind_unsupplied(hold, 2)) {
    lxg_wind_none(wind, LXG_WIND_ENERGY_LIMITED);
    return finish(solver, LXG_NO_SOLUTION, wind, error);
  }
  solver->have = false;
  solver->probed_below = solver->probed_above = false;
  solver->newton_steps = 0;
  const struct wind_row row[2] = {lxg_wind_row_of(solver, &hold[0]), lxg_wind_row_of(solver, &hold[1])};
  if (wind_unknowns(&solver->problem.constants) == 3) {
    status = burning_wind(solver, row, 2);
    return finish(solver, status == LXG_OK ? lxg_wind_walk(solver, row) : status, wind, error);
  }
  const size_t radius = row[0].kind == LXG_HELD_LAUNCH_RADIUS ? 0 : 1;
  if (row[radius].kind == LXG_HELD_LAUNCH_RADIUS) {
    status = first_at(solver, row[radius].target, &row[1 - radius]);
    const bool shown_none = status == LXG_NO_SOLUTION && solver->probed_below != solver->probed_above;
    if (status != LXG_OK && status != LXG_BUG && status != LXG_MEMORY && !shown_none && !solver->outer_only) {
      status = first_wind(solver, &row[1 - radius]); /* at another radius, and from there */
      status = status == LXG_OK ? lxg_wind_walk(solver, row) : status;
    }

  } else {
    status = first_wind(solver, &row[scannable(row[0].kind) ? 0 : 1]);
    if (status == LXG_OK) {
      status = lxg_wind_walk(solver, row);
    }
  }
  return finish(solver, status, wind, error);
}

enum lxg_status lxg_wind_follow(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                struct lxg_wind *wind, struct lxg_error *error) {
  lxg_wind_none(wind, LXG_WIND_NOT_FOUND);
  enum lxg_status status = lxg_wind_holds_check(solver, hold, error);
  if (status != LXG_OK) {
    return status;
  }
  if (!solver->have) {
    return lxg_error_set(error, LXG_NOT_CONVERGED, "wind-no-neighbour",
                         "there is no wind yet to follow from");
  }
  solver->newton_steps = 0;
  const struct wind_row row[2] = {lxg_wind_row_of(solver, &hold[0]), lxg_wind_row_of(solver, &hold[1])};
  return finish(solver, lxg_wind_walk(solver, row), wind, error);
}

void lxg_wind_coordinates(const struct lxg_wind_solver *solver, double coordinates[LXG_WIND_COORDINATES]) {
  const double *p = lxg_bvp_parameters_const(solver->kept);
  for (size_t i = 0; i < LXG_WIND_COORDINATES; i++) {
    coordinates[i] = i == WIND_P_LAMBDA ? asinh(p[i]) : p[i];
  }
}

enum lxg_status lxg_wind_arc(struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                             const double direction[LXG_WIND_COORDINATES], double length,
                             struct lxg_wind *wind, struct lxg_error *error) {
  lxg_wind_none(wind, LXG_WIND_NOT_FOUND);
  if (!solver->have) {
    return lxg_error_set(error, LXG_NOT_CONVERGED, "wind-no-neighbour",
                         "there is no wind yet to follow from");
  }
  struct wind_row row[2] = {lxg_wind_row_of(solver, hold), {.kind = WIND_ROW_ARC, .target = length}};
  const double *p = lxg_bvp_parameters_const(solver->kept);
  for (size_t i = 0; i < LXG_WIND_COORDINATES; i++) { /* d arsinh(lambda) = d lambda/(1 + lambda^2)^(1/2) */
    row[1].direction[i] = direction[i] / (i == WIND_P_LAMBDA ? hypot(1.0, p[i]) : 1.0);
    row[1].origin[i] = p[i];
  }
  solver->newton_steps = 0;
  return finish(solver, lxg_wind_newton(solver, row, solver->options.residual_tolerance, false), wind, error);
}

enum lxg_status lxg_wind_mark(struct lxg_wind_solver *solver, size_t slot) {
  return slot < LXG_WIND_SLOTS ? lxg_bvp_copy(solver->slot[slot], solver->kept) : LXG_BUG;
}

enum lxg_status lxg_wind_recall(struct lxg_wind_solver *solver, size_t slot) {
  return slot < LXG_WIND_SLOTS ? lxg_bvp_copy(solver->kept, solver->slot[slot]) : LXG_BUG;
}
