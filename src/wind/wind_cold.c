/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_cold.c - the first wind, with no guess from the user.
 *
 * All winds of a model form one sheet over (critical radius, critical temperature). A coarse scan of that plane by the
 * separatrix marches of wind_start.c gives approximate winds; the one whose held quantities come closest to those wanted
 * is made exact by the global solver with (r_c, T_c) held, and continuation does the rest. A held launch radius fixes one
 * coordinate of the plane.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"

#include <math.h>
#include <string.h>

static const double scan_t_low = 3.7, scan_t_high = 7.3; /* log10 of the critical temperatures tried [K] */
static const double scan_t_step = 0.12;
static const double scan_near = 0.5;       /* a candidate this close (sum of logarithms) ends the scan */
enum { SCAN_RADII = 7, GUESS_NODES = 32 }; /* critical radii tried; mesh intervals of a piece at the start */

/* Approximate wind at one point of the plane. */
struct candidate {
  double ln_rc, ln_tc, distance;
};

/* Approximate value of a held kind from the marched tracks, in the units of a row's target; NaN if unknown. */
static double approximate(const struct lxg_wind_solver *solver, int kind, double ln_mdot, double lambda,
                          bool inner) {
  const struct wind_constants *constants = &solver->problem.constants;
  const struct wind_track *outer = &solver->outer;
  const size_t last = outer->count - 1;
  const double *end = outer->y[last];
  const size_t deep = inner ? solver->inner.count - 1 : 0;
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
    return inner ? solver->inner.y[deep][1] : NAN;
  case LXG_HELD_BASE_LUMINOSITY: {
    const struct wind_place at = {constants->ln_r0, solver->inner.y[deep][0], solver->inner.y[deep][1],
                                  ln_mdot, lambda};
    struct wind_local l;
    return inner && lxg_wind_local(constants, &at, &l) == LXG_OK ? l.lhat : NAN;
  }
  case LXG_HELD_ENVELOPE_MASS: { /* trapezoid over the inner track, where the mass is */
    double mass = 0.0;
    for (size_t i = 1; inner && i <= deep; i++) {
      const double dr = fabs(exp(solver->inner.ln_r[i]) - exp(solver->inner.ln_r[i - 1]));
      mass += 0.5 * dr * (exp(ln_mdot - solver->inner.y[i][0]) + exp(ln_mdot - solver->inner.y[i - 1][0]));
    }
    return mass > 0.0 ? log(mass) : NAN;
  }
  default:
    return NAN;
  }
}

static double distance_to(const struct lxg_wind_solver *solver, const struct wind_row row[2], double ln_mdot,
                          double lambda, bool inner) {
  double sum = 0.0;
  for (size_t i = 0; i < 2; i++) {
    const double difference = fabs(approximate(solver, row[i].kind, ln_mdot, lambda, inner) - row[i].target);
    sum += isfinite(difference) ? difference : INFINITY;
  }
  return sum;
}

/* Marches at (r_c, T_c); false if there is no approximate wind with an inside down to the star. */
static bool march(struct lxg_wind_solver *solver, double ln_rc, double ln_tc, double *ln_mdot,
                  double *lambda) {
  const struct wind_constants *constants = &solver->problem.constants;
  return lxg_wind_start_outer(constants, solver->ivp, ln_rc, ln_tc, &solver->outer, &solver->scratch, ln_mdot,
                              lambda) == LXG_OK &&
         lxg_wind_start_inner(constants, solver->ivp, ln_rc, ln_tc, *ln_mdot, &solver->inner) == LXG_OK &&
         solver->inner.count >= 2 && solver->outer.count >= 2;
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

/* Exact wind at (r_c, T_c). */
static enum lxg_status settle(struct lxg_wind_solver *solver, double ln_rc, double ln_tc) {
  double ln_mdot, lambda;
  if (!march(solver, ln_rc, ln_tc, &ln_mdot, &lambda)) {
    return LXG_NO_SOLUTION;
  }
  const struct guess_map map = {solver, ln_rc, solver->outer.ln_r[solver->outer.count - 1]};
  double nodes[2 * GUESS_NODES + 1];
  for (size_t i = 0; i <= 2 * GUESS_NODES; i++) {
    nodes[i] = (double)i / GUESS_NODES;
  }
  const double p[WIND_P_COUNT] = {ln_rc, ln_mdot, lambda, map.ln_rph, 0.0};
  enum lxg_status status = lxg_bvp_guess(solver->now, nodes, 2 * GUESS_NODES, 2, guess, &map, p);
  if (status != LXG_OK) {
    return status;
  }
  const struct wind_row row[2] = {{.kind = LXG_HELD_LAUNCH_RADIUS, .target = ln_rc},
                                  {.kind = WIND_ROW_CRITICAL_TEMPERATURE, .target = ln_tc}};
  return lxg_wind_newton(solver, row, 1e-4, true);
}

/* Scans the critical temperature at one radius; keeps the closest candidates, nearest first. */
static bool scan(struct lxg_wind_solver *solver, const struct wind_row row[2], double ln_rc,
                 struct candidate best[], size_t capacity, size_t *count) {
  for (double t = scan_t_low; t <= scan_t_high; t += scan_t_step) {
    double ln_mdot, lambda;
    struct candidate found = {.ln_rc = ln_rc, .ln_tc = t * LXG_LN10};
    if (!march(solver, found.ln_rc, found.ln_tc, &ln_mdot, &lambda)) {
      continue;
    }
    found.distance = distance_to(solver, row, ln_mdot, lambda, true);
    if (!isfinite(found.distance)) {
      continue;
    }
    size_t at = *count < capacity ? (*count)++ : capacity;
    while (at > 0 && best[at - 1].distance > found.distance) {
      if (at < capacity) {
        best[at] = best[at - 1];
      }
      at--;
    }
    if (at < capacity) {
      best[at] = found;
    }
  }
  return *count > 0 && best[0].distance < scan_near;
}

enum lxg_status lxg_wind_cold(struct lxg_wind_solver *solver, const struct wind_row row[2]) {
  enum { CANDIDATES = 6 };
  struct candidate best[CANDIDATES];
  size_t count = 0;
  double ln_rc = NAN;
  for (size_t i = 0; i < 2; i++) {
    if (row[i].kind == LXG_HELD_LAUNCH_RADIUS) {
      ln_rc = row[i].target;
    }
  }
  if (isfinite(ln_rc)) {
    scan(solver, row, ln_rc, best, CANDIDATES, &count);
  } else {
    static const double decades[SCAN_RADII] = {1.4, 1.0, 1.8, 0.6, 2.4, 3.2, 0.3}; /* log10 of r_c/R_0 */
    for (size_t i = 0; i < SCAN_RADII; i++) {
      if (scan(solver, row, solver->problem.constants.ln_r0 + decades[i] * LXG_LN10, best, CANDIDATES,
               &count)) {
        break;
      }
    }
  }
  enum lxg_status status = LXG_NO_SOLUTION;
  for (size_t i = 0; i < count; i++) {
    status = settle(solver, best[i].ln_rc, best[i].ln_tc);
    if (status == LXG_OK || status == LXG_BUG || status == LXG_MEMORY) {
      break;
    }
  }
  return status;
}
