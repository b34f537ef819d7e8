/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * hydrostatic_start.c - a first envelope from nothing: shooting inward from a photosphere.
 *
 * At a given photospheric radius a trial luminosity fixes temperature and density there (H4), and the equations are marched
 * inward, which is stable. The brighter the envelope the smaller its share of gas pressure, hence the cooler and thinner its
 * base: too bright a one burns less than it radiates, too faint a one more; bisection in the luminosity gives L(R_0) = 0 well enough to start the global solver, and nothing of it
 * survives in a solution.
 */
#include "hydrostatic/hydrostatic_internal.h"
#include "luxgale/constants.h"

#include <math.h>

static const double start_radii[] = {3.0, 2.0, 5.0, 1.5, 10.0};   /* R_ph/R_0 tried */
static const double start_brightest = 1.6, start_faintest = 0.02; /* L/L_Edd tried */
static const double start_factor = 0.95;                          /* of the luminosity, in the scan */
static const double start_dark = -3.0;       /* L/L_Edd at which a march ends: far too much burning */
static const double start_accuracy = 1e-5;   /* of ln L */
static const double start_first_step = 1e-5; /* in ln r */
enum { START_STEPS = STATIC_TRACK_POINTS - 2, START_BISECTIONS = 50, GUESS_INTERVALS = 60 };

struct march {
  const struct static_constants *constants;
  struct static_track *track; /* NULL: not recorded */
  double last;                /* L/L_Edd at the last point */
};

static enum lxg_status slope(const void *context, double ln_r, const double y[], double dydx[]) {
  const struct march *march = context;
  struct static_local l;
  const enum lxg_status status = lxg_hydrostatic_local(march->constants, ln_r, y, &l);
  if (status == LXG_OK) {
    dydx[STATIC_LNRHO] = l.phi - (1.0 - l.gamma) / l.c;
    dydx[STATIC_LNT] = -l.phi;
    dydx[STATIC_LUM] = l.rate;
  }
  return status;
}

static int watch(void *watcher, double ln_r, const double y[]) {
  struct march *march = watcher;
  struct static_track *track = march->track;
  march->last = y[STATIC_LUM];
  if (track != NULL && track->count < STATIC_TRACK_POINTS) {
    double dydr[STATIC_UNKNOWNS];
    if (slope(march, ln_r, y, dydr) != LXG_OK) {
      return 1;
    }
    const size_t i = track->count++;
    track->ln_r[i] = ln_r;
    for (int a = 0; a < STATIC_UNKNOWNS; a++) {
      track->y[i][a] = y[a];
      track->dydr[i][a] = dydr[a];
    }
  }
  return y[STATIC_LUM] < start_dark;
}

/* ln rho at a photosphere by (H4), by bisection; NaN where Gamma stays above one. */
static double photosphere_density(const struct static_constants *constants, double ln_r, double ln_t,
                                  double lum) {
  double low = -32.0, high = 0.0;
  for (int i = 0; i < START_BISECTIONS; i++) {
    const double middle = 0.5 * (low + high);
    const double y[STATIC_UNKNOWNS] = {middle, ln_t, lum};
    struct static_local l;
    if (lxg_hydrostatic_local(constants, ln_r, y, &l) != LXG_OK) {
      return NAN;
    }
    const double excess =
        middle + ln_t + log(constants->c_t2_per_k * l.kappa) + 2.0 * ln_r - log(2.0 / 3.0 * constants->gm);
    if (l.gamma >= 1.0 || excess > log(1.0 - l.gamma)) {
      high = middle;
    } else {
      low = middle;
    }
  }
  return low > -31.0 ? 0.5 * (low + high) : NAN;
}

/* L(R_0)/L_Edd of the envelope below a photosphere; NaN if there is none. */
static double shoot(struct lxg_hydrostatic_solver *solver, double ln_r, double lum, bool record) {
  const struct static_constants *constants = &solver->problem.constants;
  const double ln_t =
      0.25 * (log(lum * constants->l_edd / (4.0 * LXG_PI * LXG_STEFAN_BOLTZMANN)) - 2.0 * ln_r);
  double y[STATIC_UNKNOWNS] = {photosphere_density(constants, ln_r, ln_t, lum), ln_t, lum};
  if (isnan(y[0])) {
    return NAN;
  }
  struct march march = {.constants = constants, .track = record ? &solver->track : NULL};
  solver->track.count = 0;
  double x = ln_r;
  int stopped = 0;
  const enum lxg_status status = lxg_ivp_march(solver->ivp, slope, &march, watch, &march, &x,
                                               constants->ln_r0, start_first_step, START_STEPS, y, &stopped);
  return status == LXG_OK ? march.last : march.last < 0.0 ? march.last : NAN;
}

/* Cubic Hermite interpolation in the track, which runs inward. */
static void guess(const void *context, double x, double y[], double k[]) {
  const struct lxg_hydrostatic_solver *solver = context;
  const struct static_track *track = &solver->track;
  const double ln_r0 = solver->problem.constants.ln_r0, length = track->ln_r[0] - ln_r0;
  const double ln_r = ln_r0 + x * length;
  size_t low = 0, high = track->count - 1;
  while (high - low > 1) {
    const size_t middle = (low + high) / 2;
    if (track->ln_r[middle] >= ln_r) {
      low = middle;
    } else {
      high = middle;
    }
  }
  const double h = track->ln_r[low + 1] - track->ln_r[low];
  const double t = fmin(fmax((ln_r - track->ln_r[low]) / h, 0.0), 1.0);
  for (int a = 0; a < STATIC_UNKNOWNS; a++) {
    const double rise = track->y[low + 1][a] - track->y[low][a];
    const double d0 = h * track->dydr[low][a], d1 = h * track->dydr[low + 1][a];
    const double c2 = 3.0 * rise - 2.0 * d0 - d1, c3 = d0 + d1 - 2.0 * rise;
    y[a] = track->y[low][a] + t * (d0 + t * (c2 + t * c3));
    k[a] = length * (d0 + t * (2.0 * c2 + 3.0 * t * c3)) / h;
  }
}

static double track_mass(const struct static_track *track) {
  double mass = 0.0;
  for (size_t i = 1; i < track->count; i++) {
    const double a = 3.0 * track->ln_r[i - 1] + track->y[i - 1][0], b = 3.0 * track->ln_r[i] + track->y[i][0];
    mass += 0.5 * 4.0 * LXG_PI * (exp(a) + exp(b)) * (track->ln_r[i - 1] - track->ln_r[i]);
  }
  return mass;
}

/* The global solution for the photospheric radius of the track. */
static enum lxg_status settle(struct lxg_hydrostatic_solver *solver) {
  const struct static_track *track = &solver->track;
  const size_t last = track->count - 1, intervals = last < GUESS_INTERVALS ? last : GUESS_INTERVALS;
  const double length = track->ln_r[0] - solver->problem.constants.ln_r0;
  double nodes[GUESS_INTERVALS + 1];
  for (size_t i = 0; i <= intervals; i++) { /* at steps of the march, which knew where to be careful */
    const size_t from = last - last * i / intervals;
    nodes[i] = (track->ln_r[from] - solver->problem.constants.ln_r0) / length;
  }
  nodes[0] = 0.0;
  nodes[intervals] = 1.0;
  const double p[STATIC_P_COUNT] = {track->ln_r[0], log(track_mass(track))};
  const enum lxg_status status = lxg_bvp_guess(solver->now, nodes, intervals, 1, guess, solver, p);
  const struct static_row row = {.direction = {[STATIC_C_RADIUS] = 1.0}, .target = track->ln_r[0]};
  return status == LXG_OK ? lxg_hydrostatic_newton(solver, &row, true) : status;
}

/* Envelope at one radius. */
static enum lxg_status start_at(struct lxg_hydrostatic_solver *solver, double ln_r) {
  double bright = NAN, faint = NAN;
  for (double lum = start_brightest; lum > start_faintest && isnan(faint); lum *= start_factor) {
    const double left = shoot(solver, ln_r, lum, false);
    if (left > 0.0) {
      bright = lum;
    } else if (left <= 0.0 && isfinite(bright)) {
      faint = lum;
    }
  }
  if (isnan(faint)) {
    return LXG_NO_SOLUTION;
  }
  while (log(bright / faint) > start_accuracy) {
    const double middle = sqrt(bright * faint), left = shoot(solver, ln_r, middle, false);
    if (isnan(left)) {
      return LXG_NO_SOLUTION;
    }
    if (left > 0.0) {
      bright = middle;
    } else {
      faint = middle;
    }
  }
  shoot(solver, ln_r, bright, true);
  return solver->track.count >= 8 ? settle(solver) : LXG_NO_SOLUTION;
}

enum lxg_status lxg_hydrostatic_start(struct lxg_hydrostatic_solver *solver) {
  enum lxg_status status = LXG_NO_SOLUTION;
  for (size_t i = 0; i < sizeof start_radii / sizeof start_radii[0]; i++) {
    status = start_at(solver, solver->problem.constants.ln_r0 + log(start_radii[i]));
    if (status == LXG_OK || status == LXG_BUG || status == LXG_MEMORY) {
      break;
    }
  }
  return status;
}
