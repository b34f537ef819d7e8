/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family_members.c - all winds that share two held quantities.
 *
 * One of the two spans a family, which is walked coarsely from end to end; wherever the other passes its value the wind is
 * solved for both. Folds of the second quantity therefore show up as several winds, and a value that no member reaches
  * is missing for the reason at which the family ends, once the family of the other quantity and a cold search have found no wind either.

 */
#include "family/family_internal.h"

#include <math.h>
#include <stdbool.h>

static const double coarse = 1e-2; /* linear interpolation error that a walk between crossings may have */

/* How well a quantity starts a family: smaller is better. */
static int rank(enum lxg_held quantity) {
  static const enum lxg_held order[] = {
      LXG_HELD_BASE_TEMPERATURE,       LXG_HELD_LAUNCH_RADIUS,  LXG_HELD_MASS_LOSS_RATE,
      LXG_HELD_ENVELOPE_MASS,          LXG_HELD_ENERGY_RATE,    LXG_HELD_BASE_LUMINOSITY,
      LXG_HELD_PHOTOSPHERE_LUMINOSITY, LXG_HELD_TERMINAL_SPEED, LXG_HELD_PHOTOSPHERE_RADIUS,
      LXG_HELD_PHOTOSPHERE_TEMPERATURE};
  int i = 0;
  while (i < (int)LXG_HELD_COUNT && order[i] != quantity) {
    i++;
  }
  return i;
}

/* Walks the family of hold[first] and catches the winds with the other held value. */
static enum lxg_status search(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                              size_t first, struct family_catch *found, struct lxg_wind *winds,
                              struct lxg_error *error) {
  struct lxg_family_options options = lxg_family_options_default();
  options.tolerance = coarse;
  options.energy_most = lxg_family_energy_most(solver, &hold[1 - first]);
  struct lxg_family family;
  const enum lxg_status status =
      lxg_family_trace_catching(solver, &hold[first], &options, found, &family, error);
  if (status != LXG_OK) {
    winds[0].reason = LXG_WIND_NOT_FOUND;
    return status;
  }
  if (found->count == 0) {
    const struct lxg_wind_hold *other = &hold[1 - first];
    winds[0].reason = lxg_family_missing(&family, (enum lxg_family_quantity)other->quantity, other->value);
    lxg_family_free(&family);
    return lxg_error_set(error, LXG_NO_SOLUTION, lxg_wind_reason_code(winds[0].reason), "%s",
                         lxg_wind_reason_text(winds[0].reason));
  }
  lxg_family_free(&family);
  return LXG_OK;
}

/* Winds with one base temperature or one launch radius form few families, which the two walks and the cold search cover (a base temperature
 * may have a second one beyond the gap where flows stagnate); with other quantities held nothing is known about their number. */
static bool one_family(const struct lxg_wind_hold hold[2]) {
  for (size_t i = 0; i < 2; i++) {
    if (hold[i].quantity == LXG_HELD_BASE_TEMPERATURE || hold[i].quantity == LXG_HELD_LAUNCH_RADIUS) {
      return true;
    }
  }
  return false;
}

/* A family that does not pass the other value is no proof while another one may: the family of the other quantity is walked, and a cold
 * search tried. */
static enum lxg_status search_otherwise(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                        size_t first, struct family_catch *found, struct lxg_wind *winds) {
  const enum lxg_wind_reason reason = winds[0].reason;
  found->target = &hold[first];
  enum lxg_status status = search(solver, hold, 1 - first, found, winds, NULL);
  struct lxg_wind apart;
  if (status != LXG_OK && lxg_wind_solve(solver, hold, &apart, NULL) == LXG_OK) {
    winds[0] = apart;
    found->count = 1;
    found->best_rate = apart.value[LXG_HELD_MASS_LOSS_RATE];
    status = lxg_wind_mark(solver, SLOT_BEST);
  }
  if (status != LXG_OK) {
    winds[0].reason = reason;
  }
  return status;
}

enum lxg_status lxg_family_members(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                   enum lxg_branch branch, struct lxg_wind winds[], size_t capacity,
                                   size_t *count, struct lxg_error *error) {
  const size_t first = rank(hold[0].quantity) <= rank(hold[1].quantity) ? 0 : 1;
  *count = 0;
  enum lxg_status status = lxg_wind_holds_check(solver, hold, error);
  if (status != LXG_OK) {
    return status;
  }
  if (lxg_wind_unsupplied(hold, 2)) {
    lxg_wind_none(&winds[0], LXG_WIND_ENERGY_LIMITED);
    return lxg_error_set(error, LXG_NO_SOLUTION, lxg_wind_reason_code(LXG_WIND_ENERGY_LIMITED), "%s",
                         lxg_wind_reason_text(LXG_WIND_ENERGY_LIMITED));
  }
  struct family_catch found = {
      .target = &hold[1 - first], .wind = winds, .capacity = capacity, .thick = branch == LXG_BRANCH_THICK};
  status = search(solver, hold, first, &found, winds, error);
  if (status == LXG_NO_SOLUTION && lxg_wind_holds_outer(hold, 2)) {
    lxg_wind_solver_outer_only(solver, true);
    status = search(solver, hold, first, &found, winds, error);
    lxg_wind_solver_outer_only(solver, false);
  }
  if (status == LXG_NO_SOLUTION && search_otherwise(solver, hold, first, &found, winds) == LXG_OK) {
    lxg_error_clear(error);
    status = LXG_OK;
  } else if (status == LXG_NO_SOLUTION && !one_family(hold)) {
    winds[0].reason = LXG_WIND_NOT_FOUND; /* the family walked may not be the only one: nothing is shown */
    lxg_error_set(error, LXG_NO_SOLUTION, lxg_wind_reason_code(LXG_WIND_NOT_FOUND), "%s",
                  lxg_wind_reason_text(LXG_WIND_NOT_FOUND));
  }
  *count = found.count;
  if (status != LXG_OK) {
    return status;
  }
  for (size_t i = 1; i < found.count && i < capacity; i++) {
    if (winds[i].value[LXG_HELD_MASS_LOSS_RATE] == found.best_rate) {
      const struct lxg_wind swap = winds[0];
      winds[0] = winds[i];
      winds[i] = swap;
    }
  }
  return lxg_wind_recall(solver, SLOT_BEST);
}
