/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * speeds_structure.c - solved structures of the winds of chosen times (see speeds.h).
 *
 * The place in the family gives the launch radius, from which the solver finds the wind at once; then the luminosity of the
 * history (or nothing, for a single wind) takes its place. Near a fold that last step may not converge: the first wind,
 * exact to the interpolation error of the family, stays.
 */
#include "speeds/speeds_internal.h"

#include "luxgale/memory.h"

static enum lxg_status solve(struct lxg_speeds *speeds, const struct lxg_family_place *place,
                             struct lxg_error *error) {
  const enum lxg_held guide =
      speeds->hold.quantity == LXG_HELD_LAUNCH_RADIUS ? LXG_HELD_MASS_LOSS_RATE : LXG_HELD_LAUNCH_RADIUS;
  const struct lxg_wind_hold near[2] = {speeds->hold, {guide, place->value[guide]}};
  struct lxg_wind wind;
  const enum lxg_status status = lxg_wind_solve(speeds->solver, near, &wind, error);
  if (status == LXG_OK && speeds->family != NULL) {
    const struct lxg_wind_hold held[2] = {speeds->hold,
                                          {(enum lxg_held)speeds->key, place->value[speeds->key]}};
    const enum lxg_status followed = lxg_wind_follow(speeds->solver, held, &wind, NULL);
    return followed == LXG_NO_SOLUTION || followed == LXG_NOT_CONVERGED ? LXG_OK : followed;
  }
  return status;
}

static enum lxg_status make(struct lxg_speeds *speeds, double time, struct lxg_speeds_structure **made,
                            struct lxg_error *error) {
  struct lxg_family_place place;
  size_t critical = 0;
  enum lxg_status status = lxg_speeds_at(speeds, time, &place, error);
  if (status == LXG_OK) {
    status = solve(speeds, &place, error);
  }
  if (status == LXG_OK) {
    *made = lxg_alloc(1, sizeof **made);
    status = *made != NULL ? LXG_OK : lxg_error_set(error, LXG_MEMORY, "memory", "structure: out of memory");
  }
  if (status == LXG_OK) {
    **made = (struct lxg_speeds_structure){.time = time};
    status = lxg_wind_structure(speeds->solver, &(*made)->row, &(*made)->count, &critical,
                                &(*made)->photosphere, error);
  }
  return status;
}

enum lxg_status lxg_speeds_structure(struct lxg_speeds *speeds, double time,
                                     const struct lxg_speeds_structure **structure, struct lxg_error *error) {
  for (size_t i = 0; i < speeds->count; i++) {
    if (speeds->structure[i]->time == time || speeds->family == NULL) {
      *structure = speeds->structure[i];
      return LXG_OK;
    }
  }
  if (speeds->solver == NULL) {
    return lxg_error_set(error, LXG_DOMAIN, "speeds-structure",
                         "structures are not available where plain winds hand over to porous ones");
  }
  struct lxg_speeds_structure *made = NULL;
  enum lxg_status status = make(speeds, time, &made, error);
  if (status == LXG_OK) {
    struct lxg_speeds_structure **grown =
        lxg_realloc(speeds->structure, speeds->count + 1, sizeof *speeds->structure);
    status = grown != NULL ? LXG_OK : lxg_error_set(error, LXG_MEMORY, "memory", "structures: out of memory");
    speeds->structure = grown != NULL ? grown : speeds->structure;
  }
  if (status == LXG_OK) {
    speeds->structure[speeds->count++] = made;
    *structure = made;
  } else if (made != NULL) {
    lxg_free(made->row);
    lxg_free(made);
  }
  return status;
}
