/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family_trace.c - walks a family of winds in both directions from a start wind, through folds, to its physical ends.
 *
 * Step control: with q the interpolated numbers, s the arc length and q'' from divided differences of three neighbours, a
 * linear interpolant errs by (ds)^2 q''/8 between two winds; a step is redone shorter when that exceeds the tolerance and
 * the next one is chosen to meet it.
 */
#include "family/family_internal.h"
#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

static const double first_step = 0.02; /* in the coordinates' norm */
static const double longest_step = 0.25;
static const double shortest_step = 1e-7; /* below it the family has ended */
static const double step_growth = 1.8, step_shrink = 0.4, step_safety = 0.7;
static const double slow_share =
    0.1; /* terminal speeds below this share of the photospheric one are judged as if at it */
static const double touching_radii =
    1.1; /* photospheric over critical radius of a family's end where the two meet */
static const double energy_reserve = 100.0; /* energy rate over a luminosity to be reached */
enum { GROW = 64 };

struct lxg_family_options lxg_family_options_default(void) {
  const struct lxg_family_options options = {.tolerance = 1e-4,
                                             .thin_depth = 5.0,
                                             .radius_most = 1e5 * LXG_SOLAR_RADIUS,
                                             .energy_most = 30.0,
                                             .envelope_most = 0.1,
                                             .count_most = 4000};
  return options;
}

double lxg_family_energy_most(const struct lxg_wind_solver *solver, const struct lxg_wind_hold *target) {
  const struct lxg_wind_model *model = lxg_wind_solver_model(solver);
  const double usual = lxg_family_options_default().energy_most;
  const bool power = target->quantity == LXG_HELD_PHOTOSPHERE_LUMINOSITY ||
                     target->quantity == LXG_HELD_BASE_LUMINOSITY || target->quantity == LXG_HELD_ENERGY_RATE;
  const double share = target->value / lxg_star_eddington_luminosity(&model->star, &model->composition);
  return power ? fmax(usual, energy_reserve * share) : usual;
}

/* One direction's harvest. */
struct trail {
  struct lxg_wind *wind;
  double *arc;
  size_t count, capacity;
  enum lxg_wind_reason end;
};

struct tracer {
  struct lxg_wind_solver *solver;
  const struct lxg_wind_hold *hold;
  const struct lxg_family_options *options;
  double l_edd;
  double star_mass; /* [g] */
  int newton_steps;
  bool entered;               /* the walk has been inside the limits */
  struct family_catch *found; /* winds with a second held value, or NULL */
};

static enum lxg_status trail_add(struct trail *trail, const struct lxg_wind *wind, double arc) {
  if (trail->count == trail->capacity) {
    const size_t capacity = trail->capacity + GROW;
    struct lxg_wind *winds = lxg_realloc(trail->wind, capacity, sizeof *winds);
    if (winds != NULL) {
      trail->wind = winds;
    }
    double *arcs = lxg_realloc(trail->arc, capacity, sizeof *arcs);
    if (arcs != NULL) {
      trail->arc = arcs;
    }
    if (winds == NULL || arcs == NULL) {
      return LXG_MEMORY;
    }
    trail->capacity = capacity;
  }
  trail->wind[trail->count] = *wind;
  trail->arc[trail->count++] = arc;
  return LXG_OK;
}

static void trail_free(struct trail *trail) {
  lxg_free(trail->wind);
  lxg_free(trail->arc);
}

/* Largest error of linear interpolation over a new interval of length d1 after one of length d0. */
static double linear_error(const struct tracer *tracer, const struct lxg_wind *before,
                           const struct lxg_wind *middle, const struct lxg_wind *after, double d0,
                           double d1) {
  double a[LXG_FAMILY_COUNT], b[LXG_FAMILY_COUNT], c[LXG_FAMILY_COUNT];
  lxg_family_numbers(before, tracer->l_edd, a);
  lxg_family_numbers(middle, tracer->l_edd, b);
  lxg_family_numbers(after, tracer->l_edd, c);
  double worst = 0.0;
  for (size_t i = 0; i < LXG_FAMILY_COUNT; i++) {
    const double second = 2.0 * ((c[i] - b[i]) / d1 - (b[i] - a[i]) / d0) / (d0 + d1);
    double error = fabs(second) * d1 * d1 / 8.0;
    if (i == LXG_FAMILY_TERMINAL_SPEED) { /* a square: relative error of its root, above a floor */
      const double floor = slow_share * slow_share * exp(2.0 * (c[LXG_FAMILY_PHOTOSPHERE_SPEED] - log(1e8)));
      error /= 2.0 * fmax(fabs(c[i]), floor);
    }
    worst = fmax(worst, error);
  }
  return worst;
}

static void normalise(double direction[LXG_WIND_COORDINATES]) {
  double sum = 0.0;
  for (size_t i = 0; i < LXG_WIND_COORDINATES; i++) {
    sum += direction[i] * direction[i];
  }
  for (size_t i = 0; i < LXG_WIND_COORDINATES; i++) {
    direction[i] /= sqrt(sum);
  }
}

/* Is this wind beyond an end of the family? LXG_WIND_SOLVED: no. */
static enum lxg_wind_reason beyond(const struct tracer *tracer, const struct lxg_wind *wind) {
  if (wind->critical.optical_depth < tracer->options->thin_depth) {
    return LXG_WIND_BELOW_THIN_END;
  }
  return wind->photosphere.radius > tracer->options->radius_most ||
                 wind->value[LXG_HELD_ENERGY_RATE] > tracer->options->energy_most * tracer->l_edd ||
                 wind->value[LXG_HELD_ENVELOPE_MASS] > tracer->options->envelope_most * tracer->star_mass
             ? LXG_WIND_BEYOND_LIMIT
             : LXG_WIND_SOLVED;
}

/* One accepted step from the kept wind along `direction`, which is turned to the new chord. Step length is adapted. */
static enum lxg_status accepted(struct tracer *tracer, const struct trail *trail, double direction[],
                                double *step, struct lxg_wind *wind, double *taken,
                                enum lxg_wind_reason *end) {
  double from[LXG_WIND_COORDINATES], to[LXG_WIND_COORDINATES];
  lxg_wind_coordinates(tracer->solver, from);
  if (lxg_wind_mark(tracer->solver, SLOT_STEP) != LXG_OK) {
    return LXG_BUG;
  }
  *end = LXG_WIND_NOT_FOUND;
  double error = 0.0;
  for (;;) {
    if (*step < shortest_step) {
      const struct lxg_wind *last = &trail->wind[trail->count - 1];
      if (last->photosphere.radius < touching_radii * last->critical.radius) {
        *end = LXG_WIND_PHOTOSPHERE_INSIDE;
      }
      return LXG_NO_SOLUTION;
    }
    const enum lxg_status status = lxg_wind_arc(tracer->solver, tracer->hold, direction, *step, wind, NULL);
    tracer->newton_steps += wind->newton_steps;
    const enum lxg_wind_reason reason = status != LXG_OK  ? wind->reason
                                        : tracer->entered ? beyond(tracer, wind)
                                                          : LXG_WIND_SOLVED;
    if (status == LXG_BUG || status == LXG_MEMORY) {
      return status;
    }
    if (reason == LXG_WIND_SOLVED) {
      lxg_wind_coordinates(tracer->solver, to);
      double chord[LXG_WIND_COORDINATES];
      *taken = 0.0;
      for (size_t i = 0; i < LXG_WIND_COORDINATES; i++) {
        chord[i] = to[i] - from[i];
        *taken += chord[i] * chord[i];
      }
      *taken = sqrt(*taken);
      const size_t n = trail->count;
      error = n < 2 ? 0.0
                    : linear_error(tracer, &trail->wind[n - 2], &trail->wind[n - 1], wind,
                                   fabs(trail->arc[n - 1] - trail->arc[n - 2]), *taken);
      if (error <= tracer->options->tolerance) {
        memcpy(direction, chord, sizeof chord);
        normalise(direction);
        break;
      }
    } else {
      *end = reason;
    }
    if (lxg_wind_recall(tracer->solver, SLOT_STEP) != LXG_OK) {
      return LXG_BUG;
    }
    *step *= step_shrink;
  }
  const double factor = step_safety * sqrt(tracer->options->tolerance / fmax(error, 1e-12));
  *step = fmin(longest_step, *step * fmin(fmax(factor, step_shrink), step_growth));
  return LXG_OK;
}

/* A wind with the second held value between two neighbours is solved for itself and stored; the walk then goes on. */
static enum lxg_status catch_member(struct tracer *tracer, const struct lxg_wind *before,
                                    const struct lxg_wind *after) {
  struct family_catch *found = tracer->found;
  if (found == NULL) {
    return LXG_OK;
  }
  const double target = found->target->value;
  const double low = before->value[found->target->quantity] - target;
  const double high = after->value[found->target->quantity] - target;
  if ((low <= 0.0) == (high <= 0.0)) {
    return LXG_OK;
  }
  const struct lxg_wind_hold pair[2] = {*tracer->hold, *found->target};
  struct lxg_wind wind;
  enum lxg_status status = lxg_wind_mark(tracer->solver, SLOT_STEP);
  if (status == LXG_OK && lxg_wind_follow(tracer->solver, pair, &wind, NULL) == LXG_OK) {
    tracer->newton_steps += wind.newton_steps;
    if (found->count < found->capacity) {
      found->wind[found->count] = wind;
    }
    const bool best =
        found->count == 0 || (wind.value[LXG_HELD_MASS_LOSS_RATE] > found->best_rate) == found->thick;
    found->count++;
    if (best) {
      found->best_rate = wind.value[LXG_HELD_MASS_LOSS_RATE];
      status = lxg_wind_mark(tracer->solver, SLOT_BEST);
    }
  }
  return status == LXG_OK ? lxg_wind_recall(tracer->solver, SLOT_STEP) : status;
}

/* Walks from the wind in SLOT_START in one sense of the mass-loss rate (of the launch radius when the rate is held) until the
 * family ends. A start outside the limits is left behind on the way into them. */
static enum lxg_status walk(struct tracer *tracer, const struct lxg_wind *start, double sense,
                            struct trail *trail) {
  enum lxg_status status = lxg_wind_recall(tracer->solver, SLOT_START);
  if (status == LXG_OK) {
    status = trail_add(trail, start, 0.0);
  }
  tracer->entered = beyond(tracer, start) == LXG_WIND_SOLVED;
  double direction[LXG_WIND_COORDINATES] = {0.0};
  direction[tracer->hold->quantity == LXG_HELD_MASS_LOSS_RATE ? 0 : 1] = sense;
  double step = first_step, arc = 0.0;
  trail->end = LXG_WIND_BEYOND_LIMIT; /* unless a step fails: the count ran out */
  while (status == LXG_OK && trail->count < tracer->options->count_most) {
    struct lxg_wind wind;
    double taken = 0.0;
    status = accepted(tracer, trail, direction, &step, &wind, &taken, &trail->end);
    if (status != LXG_OK) {
      break;
    }
    const struct lxg_wind before = trail->wind[trail->count - 1];
    if (!tracer->entered && beyond(tracer, &wind) == LXG_WIND_SOLVED) {
      tracer->entered = true;
      trail->count = 0;
      arc = -taken;
    }
    arc += taken;
    status = trail_add(trail, &wind, arc);
    if (status == LXG_OK) {
      status = catch_member(tracer, &before, &wind);
    }
  }
  if (!tracer->entered) {
    trail->count = 0;
    trail->end = beyond(tracer, start);
  }
  return status == LXG_NO_SOLUTION ? LXG_OK : status;
}

/* Joins the two trails, thin to thick, and fills the interpolation table. Both start at the same wind unless one is empty. */
static enum lxg_status join(struct lxg_family *family, const struct trail *thin, const struct trail *thick,
                            double l_edd) {
  const size_t shared = thin->count > 0 && thick->count > 0 ? 1 : 0;
  const size_t count = thin->count + thick->count - shared;
  family->wind = lxg_alloc(count, sizeof *family->wind);
  family->arc = lxg_alloc(count, sizeof *family->arc);
  family->table = lxg_alloc(count * LXG_FAMILY_COUNT, sizeof *family->table);
  if (family->wind == NULL || family->arc == NULL || family->table == NULL) {
    return LXG_MEMORY;
  }
  family->count = count;
  family->l_edd = l_edd;
  const double whole = thin->count > 0 ? thin->arc[thin->count - 1] : 0.0;
  for (size_t i = 0; i < count; i++) {
    const bool first = i < thin->count;
    const size_t from = first ? thin->count - 1 - i : i - thin->count + shared;
    family->wind[i] = first ? thin->wind[from] : thick->wind[from];
    family->arc[i] = first ? whole - thin->arc[from] : whole + thick->arc[from];
    lxg_family_numbers(&family->wind[i], l_edd, family->table + i * LXG_FAMILY_COUNT);
  }
  family->thin_end = thin->end;
  family->thick_end = thick->end;
  return LXG_OK;
}

enum lxg_status lxg_family_trace_catching(struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                                          const struct lxg_family_options *options,
                                          struct family_catch *found, struct lxg_family *family,
                                          struct lxg_error *error) {
  const struct lxg_family_options standard = lxg_family_options_default();
  const struct lxg_wind_model *model = lxg_wind_solver_model(solver);
  struct tracer tracer = {.solver = solver,
                          .hold = hold,
                          .options = options != NULL ? options : &standard,
                          .l_edd = lxg_star_eddington_luminosity(&model->star, &model->composition),
                          .star_mass = model->star.gm / LXG_GRAVITATION,
                          .found = found};
  struct trail thin = {0}, thick = {0};
  struct lxg_wind first;
  *family = (struct lxg_family){.hold = *hold};
  enum lxg_status status = lxg_wind_first(solver, hold, &first, error);
  if (status != LXG_OK) {
    lxg_error_context(error, "looking for a first member of the family of winds with %s = %.6g (CGS)",
                      lxg_held_name(hold->quantity), hold->value);
    return status;
  }
  status = lxg_wind_mark(solver, SLOT_START);
  if (status == LXG_OK) {
    status = walk(&tracer, &first, 1.0, &thick);
  }
  if (status == LXG_OK) {
    status = walk(&tracer, &first, -1.0, &thin);
  }
  if (status == LXG_OK) {
    status = thin.count + thick.count == 0 ? LXG_NO_SOLUTION : join(family, &thin, &thick, tracer.l_edd);
  }
  family->newton_steps = tracer.newton_steps;
  trail_free(&thin);
  trail_free(&thick);
  if (status != LXG_OK) {
    lxg_family_free(family);
    return lxg_error_set(error, status, "family", "tracing the family of winds: %s", lxg_strerror(status));
  }
  return LXG_OK;
}

enum lxg_status lxg_family_trace(struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                                 const struct lxg_family_options *options, struct lxg_family *family,
                                 struct lxg_error *error) {
  return lxg_family_trace_catching(solver, hold, options, NULL, family, error);
}
