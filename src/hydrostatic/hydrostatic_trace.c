/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * hydrostatic_trace.c - the sequence of envelopes at rest, by pseudo-arclength in (ln M_env, ln R_ph, ln T_ph).
 *
 * From a first envelope in both senses: towards larger mass to the stated limit or the largest mass, towards smaller mass
 * to the smallest. Beyond the largest mass lie bloated envelopes that the iron bump holds at Gamma = 1; beyond the smallest, faint
 * ones that are unstable. The place of a fold is found by a parabola through the last three members. Step control as in family_trace.c: the error of linear
 * interpolation between neighbours stays below the tolerance.
 */
#include "hydrostatic/hydrostatic_internal.h"
#include "luxgale/memory.h"

#include <math.h>
#include <string.h>

static const double first_step = 0.02, longest_step = 0.3, shortest_step = 1e-5;
static const double step_growth = 1.8, step_shrink = 0.4, step_safety = 0.7;

struct member {
  struct lxg_hydrostatic envelope;
  double c[STATIC_COORDINATES];
  double arc;
};

/* One direction's harvest. */
struct trail {
  struct member *member; /* [capacity] */
  size_t count, capacity;
  enum lxg_hydrostatic_end end;
};

static double norm(const double a[]) {
  double sum = 0.0;
  for (int i = 0; i < STATIC_COORDINATES; i++) {
    sum += a[i] * a[i];
  }
  return sqrt(sum);
}

/* The kept envelope as a member, `arc` from the one before. */
static enum lxg_status member_of(const struct lxg_hydrostatic_solver *solver, const struct member *before,
                                 struct member *member) {
  lxg_hydrostatic_coordinates(solver, member->c);
  member->arc = 0.0;
  if (before != NULL) {
    double chord[STATIC_COORDINATES];
    for (int i = 0; i < STATIC_COORDINATES; i++) {
      chord[i] = member->c[i] - before->c[i];
    }
    member->arc = before->arc + norm(chord);
  }
  return lxg_hydrostatic_result(solver, &member->envelope);
}

static double linear_error(const struct member *a, const struct member *b, const struct member *c) {
  double worst = 0.0;
  const double d0 = b->arc - a->arc, d1 = c->arc - b->arc;
  const double u[] = {a->c[0], a->c[1], a->c[2], log(a->envelope.nuclear_luminosity)};
  const double v[] = {b->c[0], b->c[1], b->c[2], log(b->envelope.nuclear_luminosity)};
  const double w[] = {c->c[0], c->c[1], c->c[2], log(c->envelope.nuclear_luminosity)};
  for (int i = 0; i < STATIC_COORDINATES + 1; i++) {
    const double second = 2.0 * ((w[i] - v[i]) / d1 - (v[i] - u[i]) / d0) / (d0 + d1);
    worst = fmax(worst, fabs(second) * d1 * d1 / 8.0);
  }
  return worst;
}

/* One accepted step from the last member along `direction`, which turns to the new chord. */
static enum lxg_status accepted(struct lxg_hydrostatic_solver *solver, struct trail *trail,
                                double direction[], double *step) {
  const struct member *last = &trail->member[trail->count - 1];
  struct member *next = &trail->member[trail->count];
  for (;; *step *= step_shrink) {
    if (*step < shortest_step) {
      return LXG_NO_SOLUTION;
    }
    struct static_row row = {.target = *step};
    memcpy(row.direction, direction, sizeof row.direction);
    memcpy(row.origin, last->c, sizeof row.origin);
    if (lxg_bvp_copy(solver->start, solver->kept) != LXG_OK) {
      return LXG_BUG;
    }
    enum lxg_status status = lxg_hydrostatic_newton(solver, &row, false);
    if (status == LXG_BUG || status == LXG_MEMORY) {
      return status;
    }
    if (status != LXG_OK) {
      continue;
    }
    status = member_of(solver, last, next);
    const double error = status != LXG_OK   ? INFINITY
                         : trail->count < 2 ? 0.0
                                            : linear_error(last - 1, last, next);
    if (error <= solver->options.tolerance) {
      const double factor = step_safety * sqrt(solver->options.tolerance / fmax(error, 1e-12));
      for (int i = 0; i < STATIC_COORDINATES; i++) {
        direction[i] = (next->c[i] - last->c[i]) / (next->arc - last->arc);
      }
      *step = fmin(longest_step, *step * fmin(fmax(factor, step_shrink), step_growth));
      trail->count++;
      return LXG_OK;
    }
    if (lxg_bvp_copy(solver->kept, solver->start) != LXG_OK) {
      return LXG_BUG;
    }
  }
}

/* The last member replaced by the envelope at the extreme of the parabola of ln M_env through the last three. */
static enum lxg_status refine_fold(struct lxg_hydrostatic_solver *solver, struct trail *trail) {
  const size_t n = trail->count;
  if (n < 3) {
    return LXG_OK;
  }
  const struct member *a = &trail->member[n - 3], *b = a + 1;
  struct member *c = &trail->member[n - 1];
  const double s0 = (b->c[0] - a->c[0]) / (b->arc - a->arc), s1 = (c->c[0] - b->c[0]) / (c->arc - b->arc);
  const double second = (s1 - s0) / (c->arc - a->arc);
  const double bottom = 0.5 * (a->arc + b->arc) - 0.5 * s0 / second;
  const double t = (bottom - b->arc) / (c->arc - b->arc);
  if (!(t > 0.0 && t < 1.0)) { /* the extreme is the middle one, or before it: the last is superfluous */
    trail->count = n - 1;
    return LXG_OK;
  }
  struct static_row row = {.target = 0.0};
  for (int i = 0; i < STATIC_COORDINATES; i++) {
    row.direction[i] = c->c[i] - b->c[i];
    row.origin[i] = b->c[i] + t * row.direction[i];
  }
  const enum lxg_status status = lxg_hydrostatic_newton(solver, &row, false);
  if (status == LXG_BUG || status == LXG_MEMORY) {
    return status;
  }
  if (status != LXG_OK || member_of(solver, b, c) != LXG_OK) { /* the middle one is the best there is */
    trail->count = n - 1;
  }
  return LXG_OK;
}

static bool beyond(const struct member *member, const struct lxg_hydrostatic_limit *limit) {
  return member->envelope.temperature < limit->temperature ||
         member->envelope.envelope_mass > limit->envelope_mass;
}

/* The last member, which lies beyond the limit, replaced by the one at the limit: first in mass, else in temperature. */
static enum lxg_status refine_limit(struct lxg_hydrostatic_solver *solver, struct trail *trail,
                                    const struct lxg_hydrostatic_limit *limit) {
  const struct member *before = &trail->member[trail->count - 2];
  struct member *last = &trail->member[trail->count - 1];
  struct static_row row = {.target = 0.0};
  if (last->envelope.envelope_mass > limit->envelope_mass) {
    row.direction[STATIC_C_MASS] = 1.0;
    row.origin[STATIC_C_MASS] = log(limit->envelope_mass);
  } else {
    row.direction[STATIC_C_TEMPERATURE] = 1.0;
    row.origin[STATIC_C_TEMPERATURE] = log(limit->temperature);
  }
  const enum lxg_status status = lxg_hydrostatic_newton(solver, &row, false);
  return status == LXG_OK ? member_of(solver, before, last) : LXG_OK;
}

static enum lxg_status walk(struct lxg_hydrostatic_solver *solver, const struct lxg_hydrostatic_limit *limit,
                            double sense, struct trail *trail) {
  double direction[STATIC_COORDINATES] = {[STATIC_C_TEMPERATURE] = -sense}, step = first_step;
  trail->end = LXG_HYDROSTATIC_LOST;
  while (trail->count < trail->capacity) {
    const enum lxg_status status = accepted(solver, trail, direction, &step);
    if (status != LXG_OK) {
      return status == LXG_NO_SOLUTION ? LXG_OK : status;
    }
    const struct member *last = &trail->member[trail->count - 1];
    if (sense > 0.0 && beyond(last, limit)) {
      trail->end = LXG_HYDROSTATIC_REACHED;
      return refine_limit(solver, trail, limit);
    }
    if (sense * (last->c[STATIC_C_MASS] - (last - 1)->c[STATIC_C_MASS]) < 0.0) {
      trail->end = LXG_HYDROSTATIC_FOLD;
      return refine_fold(solver, trail);
    }
  }
  return LXG_OK;
}

/* Joins the two trails (which share their first member), largest envelope first; members beyond the limit are left out. */
static enum lxg_status join(struct lxg_hydrostatic_family *family, const struct trail *up,
                            const struct trail *down) {
  const size_t count = up->count + down->count - 1;
  family->envelope = lxg_alloc(count, sizeof *family->envelope);
  if (family->envelope == NULL) {
    return LXG_MEMORY;
  }
  for (size_t i = 0; i < count; i++) {
    family->envelope[i] =
        i < up->count ? up->member[up->count - 1 - i].envelope : down->member[i - up->count + 1].envelope;
  }
  family->count = count;
  family->cool_end = up->end;
  family->hot_end = down->end;
  return LXG_OK;
}

enum lxg_status lxg_hydrostatic_trace(struct lxg_hydrostatic_solver *solver,
                                      const struct lxg_hydrostatic_limit *limit,
                                      struct lxg_hydrostatic_family *family, struct lxg_error *error) {
  *family = (struct lxg_hydrostatic_family){0};
  solver->newton_steps = 0;
  const size_t capacity = solver->options.count_most + 2;
  struct trail up = {.member = lxg_alloc(capacity, sizeof *up.member), .capacity = capacity - 1};
  struct trail down = {.member = lxg_alloc(capacity, sizeof *down.member), .capacity = capacity - 1};
  struct lxg_bvp *first =
      lxg_bvp_create(STATIC_UNKNOWNS, STATIC_P_COUNT, solver->options.stages, solver->options.capacity);
  enum lxg_status status =
      up.member == NULL || down.member == NULL || first == NULL ? LXG_MEMORY : lxg_hydrostatic_start(solver);
  if (status == LXG_OK) {
    status = lxg_bvp_copy(first, solver->kept);
  }
  if (status == LXG_OK) {
    status = member_of(solver, NULL, &up.member[0]);
    up.count = down.count = 1;
    down.member[0] = up.member[0];
  }
  if (status == LXG_OK) {
    status = walk(solver, limit, 1.0, &up);
  }
  if (status == LXG_OK) {
    status = lxg_bvp_copy(solver->kept, first);
  }
  if (status == LXG_OK) {
    status = walk(solver, limit, -1.0, &down);
  }
  if (status == LXG_OK) {
    status = join(family, &up, &down);
  }
  family->newton_steps = solver->newton_steps;
  lxg_bvp_destroy(first);
  lxg_free(up.member);
  lxg_free(down.member);
  if (status != LXG_OK && status != LXG_MEMORY && status != LXG_BUG) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "hydrostatic-none",
                         "no burning envelope at rest was found on this star: %s", lxg_strerror(status));
  }
  return status == LXG_OK ? LXG_OK
                          : lxg_error_set(error, status, "hydrostatic", "sequence of envelopes at rest: %s",
                                          lxg_strerror(status));
}

void lxg_hydrostatic_family_free(struct lxg_hydrostatic_family *family) {
  if (family != NULL) {
    lxg_free(family->envelope);
    *family = (struct lxg_hydrostatic_family){0};
  }
}
