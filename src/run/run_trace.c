/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_trace.c - the family of a case, with or without its inside.
 *
 * A held launch radius fixes the wind from there outwards. Whether a steady flow continues inside, down to the star, is a question of its
 * own: above the Eddington limit a porous envelope may have none. Such winds have no base quantities and no envelope mass.
 */
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

static double brightest_of(const struct lxg_family *family) {
  double most = 0.0;
  for (size_t i = 0; i < family->count; i++) {
    most = fmax(most, family->wind[i].value[LXG_HELD_PHOTOSPHERE_LUMINOSITY]);
  }
  return most;
}

enum lxg_status lxg_run_trace(const struct lxg_case *input, struct lxg_wind_solver *solver, double brightest,
                              struct lxg_family *family, struct lxg_error *error) {
  const struct lxg_wind_hold *hold = &input->hold[0];
  const struct lxg_wind_hold target = {LXG_HELD_PHOTOSPHERE_LUMINOSITY, brightest};
  struct lxg_family_options options = input->limits;
  struct lxg_family outer = {0};
  enum lxg_status status = lxg_family_trace(solver, hold, &options, family, error);
  const bool enough = status == LXG_OK && brightest_of(family) >= brightest;
  if (enough || !lxg_wind_holds_outer(hold, 1) || (status != LXG_OK && status != LXG_NO_SOLUTION)) {
    return status;
  }
  options.energy_most = lxg_family_energy_most(solver, &target);
  lxg_wind_solver_outer_only(solver, true);
  const enum lxg_status outside =
      lxg_family_trace(solver, hold, &options, &outer, status == LXG_OK ? NULL : error);
  if (outside == LXG_OK && (status != LXG_OK || brightest_of(&outer) > brightest_of(family))) {
    lxg_family_free(family);
    *family = outer;
    lxg_error_clear(error);
    return LXG_OK;
  }
  lxg_wind_solver_outer_only(solver, false);
  if (outside == LXG_OK) {
    lxg_family_free(&outer);
  }
  return status;
}
