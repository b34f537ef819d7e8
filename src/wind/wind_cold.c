/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_cold.c - the first wind, with no guess from the user.
 *
 * All winds of a model form one sheet over (critical radius, critical temperature). At one critical radius the temperature is
  * scanned with the separatrix marches of wind_start.c, first from the iron bump towards the target only, then all over; wherever the held quantity passes its target between two approximate
 * winds, the place is narrowed by bisection and made exact by the global solver. The scan includes the edges of the range of
 * temperatures in which winds exist, found by bisection, so a wind close to an edge is not missed.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"

#include <math.h>

static const double scan_t_low = 3.6, scan_t_high = 7.4; /* log10 of the critical temperatures tried [K] */
static const double scan_t_step = 0.1;
static const double usual_t = 5.6;           /* log10 of the critical temperature under the iron bump [K] */
static const double scan_accuracy = 1e-3;    /* of ln Mdot while scanning */
static const double settle_accuracy = 1e-13; /* before the global solver takes over */
static const double close_enough = 0.1; /* of the held quantity (logarithm, or L/L_Edd) before settling */
static const double turning_most = 0.6; /* an extreme of the excess farther from zero is not looked into */
static const double touching = 0.02;    /* an extreme this close to zero is tried */
enum {
  SCAN_POINTS = 128,
  EDGE_BISECTIONS = 5,
  NARROWINGS = 12,
  GUESS_INTERVALS = 32,
  QUICK_STEPS = 12,
  TURNING_STEPS = 9
};

/* Approximate wind at one critical temperature. */
struct candidate {
  double ln_tc, ln_mdot;
  double excess; /* held quantity minus its target */
  bool valid;
};

/* Approximate value of a held kind from the marched tracks, in the units of a row's target; NaN if unknown. */
static double approximate(const struct lxg_wind_solver *solver, int kind, double ln_mdot, double lambda) {
  const struct wind_constants *constants = &solver->problem.constants;
  const struct wind_track *outer = &solver->outer;
  const size_t last = outer->count - 1;
  const double *end = outer->y[last];
  const size_t deep = solver->inner.count - 1;
  if (solver->outer_only && (lxg_wind_row_site(kind) == 0 || kind == LXG_HELD_ENVELOPE_MASS)) {
    return NAN;
  }
  switch (kind) {
  case LXG_HELD_LAUNCH_RADIUS:
    return outer->ln_r[0];
  case LXG_HELD_MASS_LOSS_RATE:
    return ln_mdot;
  case LXG_HELD_ENERGY_RATE:
    return lambda;
  case LXG_HELD_PHOTOSPHERE_LUMINOSITY:
    return 2.0 * outer->ln_r[last] + 4.0 * end[1];
  case LXG_HELD_PHOTOSPHERE_TEMPERATURE:
    return end[1];
  case LXG_HELD_PHOTOSPHERE_RADIUS:
    return outer->ln_r[last];
  case LXG_HELD_TERMINAL_SPEED:
    return end[0];
  case LXG_HELD_BASE_TEMPERATURE:
    return solver->inner.y[deep][1];
  case LXG_HELD_BASE_LUMINOSITY: {
    const struct wind_place at = {constants->ln_r0, solver->inner.y[deep][0], solver->inner.y[deep][1],
                                  ln_mdot, lambda};
    struct wind_local l;
    return lxg_wind_local(constants, &at, &l) == LXG_OK ? l.lhat : NAN;
  }
  case LXG_HELD_ENVELOPE_MASS: { /* trapezoid over the inner track, where the mass is */
    double mass = 0.0;
    for (size_t i = 1; i <= deep; i++) {
      const double dr = fabs(exp(solver->inner.ln_r[i]) - exp(solver->inner.ln_r[i - 1]));
      mass += 0.5 * dr * (exp(ln_mdot - solver->inner.y[i][0]) + exp(ln_mdot - solver->inner.y[i - 1][0]));
    }
    return mass > 0.0 ? log(mass) : NAN;
  }
  case WIND_ROW_CRITICAL_TEMPERATURE:
    return outer->y[0][1];
  default:
    return NAN;
  }
}

/* Marches at (r_c, T_c); false if there is no approximate wind with an inside down to the star (if that is wanted). */
static bool march(struct lxg_wind_solver *solver, double ln_rc, double ln_tc, double accuracy,
                  double *ln_mdot, double *lambda) {
  const struct wind_constants *constants = &solver->problem.constants;
  return lxg_wind_start_outer(constants, solver->ivp, ln_rc, ln_tc, accuracy, &solver->outer,
                              &solver->scratch, ln_mdot, lambda) == LXG_OK &&
         (solver->outer_only ||
          (lxg_wind_start_inner(constants, solver->ivp, ln_rc, ln_tc, *ln_mdot, &solver->inner) == LXG_OK &&
           solver->inner.count >= 2));
}

struct guess_map {
  const struct lxg_wind_solver *solver;
  double ln_rc, ln_rph;
};

static void guess(const void *context, double x, double y[], double k[]) {
  const struct guess_map *map = context;
  const double ln_r0 = map->solver->problem.constants.ln_r0;
  const bool inner = x < 1.0;
  const double length = inner ? map->ln_rc - ln_r0 : map->ln_rph - map->ln_rc;
  const double ln_r = inner ? ln_r0 + x * length : map->ln_rc + (x - 1.0) * length;
  lxg_wind_track_at(inner ? &map->solver->inner : &map->solver->outer, ln_r, y, k);
  k[0] *= length;
  k[1] *= length;
}

/* Change of the structure between two neighbouring points of a track, plus an even share of its length. */
static double change(const struct wind_track *track, size_t i) {
  const double length = fabs(track->ln_r[track->count - 1] - track->ln_r[0]);
  return fabs(track->y[i + 1][0] - track->y[i][0]) + fabs(track->y[i + 1][1] - track->y[i][1]) +
         fabs(track->ln_r[i + 1] - track->ln_r[i]) * 2.0 / length;
}

/* Nodes that cut a track into parts of equal change: shares of its length, 0 at the critical point. */
static void even_nodes(const struct wind_track *track, double node[GUESS_INTERVALS + 1]) {
  double total = 0.0, below = 0.0;
  for (size_t i = 0; i + 1 < track->count; i++) {
    total += change(track, i);
  }
  const double first = track->ln_r[0], length = track->ln_r[track->count - 1] - first;
  size_t i = 0;
  node[0] = 0.0;
  for (size_t j = 1; j < GUESS_INTERVALS; j++) {
    const double wanted = total * (double)j / GUESS_INTERVALS;
    while (i + 2 < track->count && below + change(track, i) < wanted) {
      below += change(track, i++);
    }
    const double share = fmin((wanted - below) / change(track, i), 1.0);
    node[j] = (track->ln_r[i] + share * (track->ln_r[i + 1] - track->ln_r[i]) - first) / length;
  }
  node[GUESS_INTERVALS] = 1.0;
}

/* The mesh of a first guess; returns the number of intervals. */
static size_t guess_nodes(const struct lxg_wind_solver *solver, double nodes[2 * GUESS_INTERVALS + 1]) {
  double inner[GUESS_INTERVALS + 1], outer[GUESS_INTERVALS + 1];
  size_t count = 0;
  if (!solver->outer_only) {
    even_nodes(&solver->inner, inner);
    for (size_t j = 0; j < GUESS_INTERVALS; j++) {
      nodes[count++] = 1.0 - inner[GUESS_INTERVALS - j];
    }
  }
  even_nodes(&solver->outer, outer);
  for (size_t j = 0; j <= GUESS_INTERVALS; j++) {
    nodes[count++] = 1.0 + outer[j];
  }
  return count - 1;
}

/* Exact wind at (r_c, T_c), kept. */
static enum lxg_status settle(struct lxg_wind_solver *solver, double ln_rc, double ln_tc, double ln_mdot) {
  double lambda;
  if (!march(solver, ln_rc, ln_tc, settle_accuracy, &ln_mdot, &lambda)) {
    return LXG_NO_SOLUTION;
  }
  const struct guess_map map = {solver, ln_rc, solver->outer.ln_r[solver->outer.count - 1]};
  double nodes[2 * GUESS_INTERVALS + 1];
  const size_t intervals = guess_nodes(solver, nodes);
  const double p[WIND_P_COUNT] = {ln_rc, ln_mdot, lambda, map.ln_rph, 0.0};
  const enum lxg_status status = lxg_bvp_guess(solver->now, nodes, intervals, 2, guess, &map, p);
  if (status != LXG_OK) {
    return status;
  }
  const struct wind_row row[2] = {{.kind = LXG_HELD_LAUNCH_RADIUS, .target = ln_rc},
                                  {.kind = WIND_ROW_CRITICAL_TEMPERATURE, .target = ln_tc}};
  return lxg_wind_newton(solver, row, 1e-4, true);
}

enum lxg_status lxg_wind_cold_at(struct lxg_wind_solver *solver, double ln_rc, double ln_tc) {
  return settle(solver, ln_rc, ln_tc, NAN);
}

/* Approximate wind at a critical temperature; `ln_mdot` hints at its rate. */
static struct candidate probe(struct lxg_wind_solver *solver, double ln_rc, double ln_tc, double ln_mdot,
                              const struct wind_row *row) {
  struct candidate found = {.ln_tc = ln_tc, .ln_mdot = ln_mdot, .excess = NAN};
  double lambda;
  if (march(solver, ln_rc, ln_tc, scan_accuracy, &found.ln_mdot, &lambda)) {
    found.excess = approximate(solver, row->kind, found.ln_mdot, lambda) - row->target;
  }
  found.valid = isfinite(found.excess);
  solver->probed_below = solver->probed_below || found.excess < 0.0;
  solver->probed_above = solver->probed_above || found.excess > 0.0;

  return found;
}

/* Last valid place between a valid and an invalid temperature. */
static struct candidate edge(struct lxg_wind_solver *solver, double ln_rc, struct candidate valid,
                             double ln_tc_invalid, const struct wind_row *row) {
  double outside = ln_tc_invalid;
  for (int i = 0; i < EDGE_BISECTIONS; i++) {
    const struct candidate middle = probe(solver, ln_rc, 0.5 * (valid.ln_tc + outside), valid.ln_mdot, row);
    if (middle.valid) {
      valid = middle;
    } else {
      outside = middle.ln_tc;
    }
  }
  return valid;
}

/* Scans the critical temperature; candidates in ascending order, invalid ones mark holes. */
static size_t scan(struct lxg_wind_solver *solver, double ln_rc, const struct wind_row *row,
                   struct candidate candidate[SCAN_POINTS]) {
  size_t count = 0;
  struct candidate before = {.valid = false};
  for (double t = scan_t_low; t <= scan_t_high && count + 2 < SCAN_POINTS; t += scan_t_step) {
    const struct candidate now = probe(solver, ln_rc, t * LXG_LN10, before.valid ? before.ln_mdot : NAN, row);
    if (now.valid && !before.valid && count > 0) {
      candidate[count++] = edge(solver, ln_rc, now, before.ln_tc, row);
    } else if (!now.valid && before.valid) {
      candidate[count++] = edge(solver, ln_rc, before, now.ln_tc, row);
    }
    candidate[count++] = now;
    before = now;
  }
  return count;
}

static bool brackets(const struct candidate *a, const struct candidate *b) {
  return a->valid && b->valid && (a->excess <= 0.0) != (b->excess <= 0.0);
}

/* Secant, kept off the ends of its bracket. */
static double between(const struct candidate *a, const struct candidate *b) {
  const double share = a->excess / (a->excess - b->excess);
  return a->ln_tc + fmin(fmax(share, 0.1), 0.9) * (b->ln_tc - a->ln_tc);
}

/* Narrows a sign change of the excess, then solves; the held row is reached by continuation. A place where the global solver
 * fails (next to a fold, say) is narrowed further before it is tried again. */
static enum lxg_status solve_between(struct lxg_wind_solver *solver, double ln_rc, struct candidate a,
                                     struct candidate b, const struct wind_row *row) {
  const struct wind_row pair[2] = {{.kind = LXG_HELD_LAUNCH_RADIUS, .target = ln_rc}, *row};
  double wanted = close_enough;
  enum lxg_status status = LXG_NOT_CONVERGED;
  for (int i = 0; i < NARROWINGS; i++) {
    const struct candidate *best = fabs(a.excess) < fabs(b.excess) ? &a : &b;
    if (fabs(best->excess) <= wanted) {
      status = settle(solver, ln_rc, best->ln_tc, best->ln_mdot);
      if (status == LXG_OK) {
        status = lxg_wind_walk(solver, pair);
      }
      if (status == LXG_OK || status == LXG_BUG || status == LXG_MEMORY) {
        return status;
      }
      wanted *= 0.25;
    }
    const struct candidate middle = probe(solver, ln_rc, between(&a, &b), best->ln_mdot, row);
    if (!middle.valid) {
      break;
    }
    if ((middle.excess > 0.0) == (a.excess > 0.0)) {
      a = middle;
    } else {
      b = middle;
    }
  }
  return status;
}

/* Does the excess, of one sign at three neighbours and least in size at the middle one, change sign between them? Golden-section
 * search for its extreme. On success two brackets a-peak and peak-b exist; `peak` is set. */
static bool turning_point(struct lxg_wind_solver *solver, double ln_rc, const struct candidate *a,
                          const struct candidate *middle, const struct candidate *b,
                          const struct wind_row *row, struct candidate *peak) {
  const double golden = 0.381966;
  const double sign = middle->excess > 0.0 ? 1.0 : -1.0;
  struct candidate left = *a, best = *middle, right = *b;
  for (int i = 0; i < TURNING_STEPS; i++) {
    const bool longer_left = best.ln_tc - left.ln_tc > right.ln_tc - best.ln_tc;
    const double t = longer_left ? best.ln_tc - golden * (best.ln_tc - left.ln_tc)
                                 : best.ln_tc + golden * (right.ln_tc - best.ln_tc);
    const struct candidate now = probe(solver, ln_rc, t, best.ln_mdot, row);
    if (!now.valid) {
      return false;
    }
    if (now.excess * sign <= 0.0) {
      *peak = now;
      return true;
    }
    if (now.excess * sign < best.excess * sign) {
      *(longer_left ? &right : &left) = best;
      best = now;
    } else {
      *(longer_left ? &left : &right) = now;
    }
  }
  *peak = best;
  return fabs(best.excess) < touching; /* as good as reached, within the accuracy of a march */
}

/* The short way: from the usual temperature towards smaller excess until it changes sign. Says nothing when it fails. */
static enum lxg_status quick(struct lxg_wind_solver *solver, double ln_rc, const struct wind_row *row) {
  const double step = scan_t_step * LXG_LN10;
  struct candidate at = probe(solver, ln_rc, usual_t * LXG_LN10, NAN, row);
  if (!at.valid) {
    return LXG_NO_SOLUTION;
  }
  struct candidate next = probe(solver, ln_rc, at.ln_tc + step, at.ln_mdot, row);
  double sense = 1.0;
  if (!next.valid || (!brackets(&at, &next) && fabs(next.excess) > fabs(at.excess))) {
    sense = -1.0;
    next = probe(solver, ln_rc, at.ln_tc - step, at.ln_mdot, row);
  }
  for (int i = 0; i < QUICK_STEPS && next.valid; i++) {
    if (brackets(&at, &next)) {
      return solve_between(solver, ln_rc, at, next, row);
    }
    if (fabs(next.excess) > fabs(at.excess)) {
      break;
    }
    at = next;
    next = probe(solver, ln_rc, at.ln_tc + sense * step, at.ln_mdot, row);
  }
  return LXG_NO_SOLUTION;
}

static bool settled(enum lxg_status status) {
  return status == LXG_OK || status == LXG_BUG || status == LXG_MEMORY;
}

/* Tries the brackets of a scan in the order of their rates. */
static enum lxg_status solve_brackets(struct lxg_wind_solver *solver, double ln_rc,
                                      const struct candidate candidate[], size_t count,
                                      const struct wind_row *row) {
  bool tried[SCAN_POINTS] = {false};
  enum lxg_status status = LXG_NO_SOLUTION;
  while (!settled(status)) {
    size_t best = SCAN_POINTS;
    for (size_t i = 0; i + 1 < count; i++) {
      if (!tried[i] && brackets(&candidate[i], &candidate[i + 1]) &&
          (best == SCAN_POINTS || candidate[i].ln_mdot < candidate[best].ln_mdot)) {
        best = i;
      }
    }
    if (best == SCAN_POINTS) {
      break;
    }
    tried[best] = true;
    status = solve_between(solver, ln_rc, candidate[best], candidate[best + 1], row);
  }
  return status;
}

enum lxg_status lxg_wind_cold(struct lxg_wind_solver *solver, double ln_rc, const struct wind_row *row) {
  if (quick(solver, ln_rc, row) == LXG_OK) {
    return LXG_OK;
  }
  struct candidate candidate[SCAN_POINTS];
  const size_t count = scan(solver, ln_rc, row, candidate);
  enum lxg_status status = solve_brackets(solver, ln_rc, candidate, count, row);
  for (size_t i = 0; i + 2 < count && !settled(status); i++) {
    const struct candidate *a = &candidate[i], *middle = a + 1, *b = a + 2;
    struct candidate peak;
    const bool least = a->valid && middle->valid && b->valid && fabs(middle->excess) < turning_most &&
                       (a->excess > 0.0) == (middle->excess > 0.0) &&
                       (b->excess > 0.0) == (middle->excess > 0.0) &&
                       fabs(middle->excess) <= fabs(a->excess) && fabs(middle->excess) <= fabs(b->excess);
    if (!least || !turning_point(solver, ln_rc, a, middle, b, row, &peak)) {
      continue;
    }
    status = brackets(a, &peak) ? solve_between(solver, ln_rc, *a, peak, row) : LXG_NOT_CONVERGED;
    if (!settled(status)) {
      status = brackets(&peak, b) ? solve_between(solver, ln_rc, peak, *b, row)
                                  : solve_between(solver, ln_rc, peak, peak, row);
    }
  }
  return status;
}

enum lxg_status lxg_wind_cold_any(struct lxg_wind_solver *solver, double ln_rc) {
  const struct wind_row row = {.kind = WIND_ROW_CRITICAL_TEMPERATURE, .target = usual_t * LXG_LN10};
  struct candidate candidate[SCAN_POINTS];
  const size_t count = scan(solver, ln_rc, &row, candidate);
  enum lxg_status status = LXG_NO_SOLUTION;
  for (size_t tries = 0; tries < count && status != LXG_OK; tries++) {
    size_t best = SCAN_POINTS;
    for (size_t i = 0; i < count; i++) {
      if (candidate[i].valid &&
          (best == SCAN_POINTS || fabs(candidate[i].excess) < fabs(candidate[best].excess))) {
        best = i;
      }
    }
    if (best == SCAN_POINTS) {
      break;
    }
    candidate[best].valid = false;
    status = settle(solver, ln_rc, candidate[best].ln_tc, candidate[best].ln_mdot);
    if (status == LXG_BUG || status == LXG_MEMORY) {
      break;
    }
  }
  return status;
}
