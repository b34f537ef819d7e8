/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_start.c - a first approximation from nothing: the separatrix of the outward march.
 *
 * Given the critical radius and temperature, a trial rate fixes the luminosity there (N = 0), hence the energy rate, and the
 * equations can be marched outward. Outward marching is unstable: a rate too high makes the temperature plunge before the
 * gas is transparent, a rate too low makes it hang on until the gas is transparent before it is cool enough, or
 * stalls the flow. Between the two lies the wind; bisection in the logarithm of the rate finds it to the accuracy that a
 * guess needs. The inner region is then marched inward, which is stable. The result only starts the global solver:
 * nothing of it survives in a solution.
 */
#include "wind/wind_internal.h"

#include "luxgale/constants.h"

#include <math.h>
#include <string.h>

static const double start_offset = 1e-3; /* first step off the critical point, in ln r */
static const double start_reach = 14.0;  /* farthest march outward, in ln r */
static const double start_change = 0.05; /* of ln v over that step at most: cold gas accelerates abruptly */
static const double start_first_step = 1e-2; /* in ln r */
static const double start_coarse = 1e-3;     /* of ln Mdot, before the ends of the marches are compared */
static const double start_close = 1e-3;      /* of ln T: two marches that still are one */
static const double start_agreement = 0.15;  /* of the ends, in ln r */
static const double start_rate_low = -34.0;  /* ln of the lowest rate tried, in units of L_Edd r_c/(G M) */
static const double start_rate_high = 9.0;   /* ln of the highest */
static const double start_rate_step = 0.7;   /* of the scan */
enum { START_STEPS = 1500, START_BISECTIONS = 44, START_SEGMENTS = 12, INNER_STEPS = 2000 };

/* Why an outward march ended. */
enum march_end { MARCH_ON, MARCH_PLUNGED, MARCH_TRANSPARENT, MARCH_STALLED, MARCH_FAILED };

struct march {
  const struct wind_constants *constants;
  double ln_mdot, lambda, ln_end;
  double ended;             /* ln r where the last march ended */
  struct wind_track *track; /* NULL: not recorded */
};

static enum lxg_status slope(const void *context, double ln_r, const double y[], double dydx[]) {
  const struct march *march = context;
  const struct wind_place at = {ln_r, y[0], y[1], march->ln_mdot, march->lambda};
  struct wind_local l;
  const enum lxg_status status = lxg_wind_local(march->constants, &at, &l);
  if (status != LXG_OK || l.w == l.c) {
    return LXG_DOMAIN;
  }
  dydx[0] = l.n / (l.w - l.c);
  dydx[1] = -l.phi;
  return isfinite(dydx[0]) && isfinite(dydx[1]) ? LXG_OK : LXG_DOMAIN;
}

static void record(struct wind_track *track, double ln_r, const double y[], const double dydr[]) {
  if (track != NULL &&
      track->count == WIND_TRACK_POINTS) { /* full: every second point goes, the first and last stay */
    for (size_t i = 1; i < WIND_TRACK_POINTS / 2; i++) {
      track->ln_r[i] = track->ln_r[2 * i];
      memcpy(track->y[i], track->y[2 * i], sizeof track->y[i]);
      memcpy(track->dydr[i], track->dydr[2 * i], sizeof track->dydr[i]);
    }
    track->count = WIND_TRACK_POINTS / 2;
  }
  if (track != NULL) {
    track->ln_r[track->count] = ln_r;
    for (int i = 0; i < 2; i++) {
      track->y[track->count][i] = y[i];
      track->dydr[track->count][i] = dydr[i];
    }
    track->count++;
  }
}

/* Where ln r lies: index of the interval; tracks run outward or inward. */
static size_t track_interval(const struct wind_track *track, double ln_r) {
  const double sense = track->ln_r[track->count - 1] > track->ln_r[0] ? 1.0 : -1.0;
  size_t low = 0, high = track->count - 1;
  while (high - low > 1) {
    const size_t middle = (low + high) / 2;
    if (sense * (track->ln_r[middle] - ln_r) <= 0.0) {
      low = middle;
    } else {
      high = middle;
    }
  }
  return low;
}

void lxg_wind_track_at(const struct wind_track *track, double ln_r, double y[2], double dydr[2]) {
  static const double slope_most = 2.0; /* beyond the end of a track */
  const size_t i = track_interval(track, ln_r);
  const double h = track->ln_r[i + 1] - track->ln_r[i];
  const double t = (ln_r - track->ln_r[i]) / h;
  for (int a = 0; a < 2; a++) {
    const double y0 = track->y[i][a], y1 = track->y[i + 1][a];
    const double d0 = h * track->dydr[i][a], d1 = h * track->dydr[i + 1][a];
    if (t > 1.0) {
      dydr[a] = fmin(fmax(track->dydr[i + 1][a], -slope_most), slope_most);
      y[a] = y1 + dydr[a] * (ln_r - track->ln_r[i + 1]);
    } else {
      y[a] = y0 + t * (d0 + t * (3.0 * (y1 - y0) - 2.0 * d0 - d1 + t * (2.0 * (y0 - y1) + d0 + d1)));
      dydr[a] =
          (d0 + t * (2.0 * (3.0 * (y1 - y0) - 2.0 * d0 - d1) + 3.0 * t * (2.0 * (y0 - y1) + d0 + d1))) / h;
    }
  }
}

static int watch_outward(void *watcher, double ln_r, const double y[]) {
  const struct march *march = watcher;
  const struct wind_place at = {ln_r, y[0], y[1], march->ln_mdot, march->lambda};
  struct wind_local l;
  if (lxg_wind_local(march->constants, &at, &l) != LXG_OK) {
    return MARCH_FAILED;
  }
  const double dydr[2] = {l.n / (l.w - l.c), -l.phi};
  record(march->track, ln_r, y, dydr);
  const double black_body = 4.0 * LXG_PI * LXG_STEFAN_BOLTZMANN * exp(2.0 * ln_r + 4.0 * y[1]);
  if (l.w < l.c) {
    return MARCH_STALLED;
  }
  if (l.lhat <= 0.0) {
    return MARCH_TRANSPARENT;
  }
  if (black_body <= l.lhat * march->constants->l_edd) {
    return MARCH_PLUNGED;
  }
  return l.kappa * exp(l.ln_rho + ln_r) <= 8.0 / 3.0 ? MARCH_TRANSPARENT : MARCH_ON;
}

static int watch_inward(void *watcher, double ln_r, const double y[]) {
  const struct march *march = watcher;
  double dydr[2];
  if (slope(march, ln_r, y, dydr) != LXG_OK) {
    return MARCH_FAILED;
  }
  record(march->track, ln_r, y, dydr);
  return MARCH_ON;
}

/* Energy rate from N = 0 at the critical point, and the accelerating slope there. */
static bool critical_point(struct march *march, double ln_rc, double ln_tc, double slope_at[2],
                           double *ln_vc) {
  const struct wind_constants *constants = march->constants;
  *ln_vc = 0.5 * (log(constants->c_t2_per_k) + ln_tc);
  struct wind_place at = {ln_rc, *ln_vc, ln_tc, march->ln_mdot, 0.0};
  struct wind_local l;
  if (lxg_wind_local(constants, &at, &l) != LXG_OK) {
    return false;
  }
  const double gamma = (1.0 - 2.0 * l.c) / (1.0 + l.c / l.h);
  if (!(gamma > 0.0)) {
    return false;
  }
  march->lambda = gamma * constants->kappa_e / l.kappa + l.mdot * (0.5 * l.w + 2.5 * l.c + l.h - 1.0);
  at.lambda = march->lambda;
  if (lxg_wind_local(constants, &at, &l) != LXG_OK) {
    return false;
  }
  slope_at[0] = lxg_wind_critical_slope(&l);
  slope_at[1] = -l.phi;
  return isfinite(slope_at[0]);
}

/* One march from r_c; `direction` +1 outward, -1 inward to ln_end. */
static enum march_end march_from(struct march *march, struct lxg_ivp *ivp, double ln_rc, double ln_tc,
                                 int direction) {
  double at[2], y[2], ln_vc;
  if (march->track != NULL) {
    march->track->count = 0;
  }
  if (!critical_point(march, ln_rc, ln_tc, at, &ln_vc)) {
    return MARCH_STALLED;
  }
  const double critical[2] = {ln_vc, ln_tc};
  record(march->track, ln_rc, critical, at);
  const double offset = direction * fmin(start_offset, start_change / fabs(at[0]));
  double ln_r = ln_rc + offset;
  y[0] = ln_vc + at[0] * offset;
  y[1] = ln_tc + at[1] * offset;
  int stopped = MARCH_ON;
  const enum lxg_status status = lxg_ivp_march(
      ivp, slope, march, direction > 0 ? watch_outward : watch_inward, march, &ln_r, march->ln_end,
      fmin(start_first_step, 10.0 * fabs(offset)), direction > 0 ? START_STEPS : INNER_STEPS, y, &stopped);
  march->ended = ln_r;
  return status == LXG_OK ? (enum march_end)stopped : MARCH_FAILED;
}

/* Cuts a track where it parts from the other one that brackets the separatrix. */
static void keep_common(struct wind_track *track, const struct wind_track *other) {
  static const double parted = 0.1; /* in ln T */
  const double end = other->count > 0 ? other->ln_r[other->count - 1] : -INFINITY;
  size_t keep = track->count;
  for (size_t i = 1; i < track->count && other->count > 1; i++) {
    double y[2], dydr[2];
    lxg_wind_track_at(other, track->ln_r[i], y, dydr);
    if (track->ln_r[i] > end || fabs(y[1] - track->y[i][1]) > parted) {
      keep = i;
      break;
    }
  }
  if (keep >= 4) {
    track->count = keep;
  }
}

/* Brackets the separatrix: walks up from below in the logarithm of the rate until the temperature plunges. */
static bool bracket(struct march *march, struct lxg_ivp *ivp, double ln_rc, double ln_tc, double from,
                    double step, double unit, double *low, double *high) {
  march->ln_mdot = from;
  double sense = march_from(march, ivp, ln_rc, ln_tc, 1) == MARCH_PLUNGED ? -1.0 : 1.0;
  for (double x = from + sense * step; x > unit + start_rate_low && x < unit + start_rate_high;
       x += sense * step) {
    march->ln_mdot = x;
    const bool plunged = march_from(march, ivp, ln_rc, ln_tc, 1) == MARCH_PLUNGED;
    if (plunged == (sense > 0.0)) {
      *low = plunged ? x - step : x;
      *high = plunged ? x : x + step;
      return true;
    }
  }
  return false;
}

/* One march onward from point `from` of a track with its temperature raised by `shift` in the logarithm; recorded behind that
 * point if `track` of the march is set. */
static enum march_end march_on(struct march *march, struct lxg_ivp *ivp, const struct wind_track *base,
                               size_t from, double shift) {
  double ln_r = base->ln_r[from];
  double y[2] = {base->y[from][0], base->y[from][1] + shift};
  if (march->track != NULL) {
    march->track->count = 0;
  }
  int stopped = MARCH_ON;
  const enum lxg_status status = lxg_ivp_march(ivp, slope, march, watch_outward, march, &ln_r, march->ln_end,
                                               start_first_step, START_STEPS, y, &stopped);
  march->ended = ln_r;
  return status == LXG_OK ? (enum march_end)stopped : MARCH_FAILED;
}

/* Where a track that brackets the separatrix still agrees closely with the other one. */
static size_t last_agreement(const struct wind_track *track, const struct wind_track *other) {
  size_t last = 0;
  for (size_t i = 1; i < track->count && other->count > 1; i++) {
    double y[2], dydr[2];
    lxg_wind_track_at(other, track->ln_r[i], y, dydr);
    if (track->ln_r[i] > other->ln_r[other->count - 1] || fabs(y[1] - track->y[i][1]) > start_close) {
      break;
    }
    last = i;
  }
  return last;
}

/* The rate is known to the last bit and the marches still part before the photosphere: from the last point where they agree the
 * temperature is bisected in the same way, and the track goes on. One further segment; false if that leads nowhere. */
static bool extend(struct march *march, struct lxg_ivp *ivp, struct wind_track *track,
                   struct wind_track *scratch) {
  const size_t from = last_agreement(track, scratch);
  march->track = NULL;
  double low = 0.0, high = 0.0; /* shifts that plunge and that hang on */
  for (double reach = 1e-7; reach < 0.2 && !(low < 0.0 && high > 0.0); reach *= 10.0) {
    low = march_on(march, ivp, track, from, -reach) == MARCH_PLUNGED ? -reach : 0.0;
    high = march_on(march, ivp, track, from, reach) != MARCH_PLUNGED ? reach : 0.0;
  }
  if (!(low < 0.0 && high > 0.0)) {
    return false;
  }
  for (int i = 0; i < START_BISECTIONS; i++) {
    const double middle = 0.5 * (low + high);
    if (march_on(march, ivp, track, from, middle) == MARCH_PLUNGED) {
      low = middle;
    } else {
      high = middle;
    }
  }
  struct wind_track *piece = scratch;
  march->track = piece;
  march_on(march, ivp, track, from, low);
  const double end_low = march->ended;
  track->count = from; /* the piece starts with the point itself */
  for (size_t i = 0; i < piece->count && track->count < WIND_TRACK_POINTS; i++) {
    record(track, piece->ln_r[i], piece->y[i], piece->dydr[i]);
  }
  march->track = NULL;
  struct wind_track *ahead = scratch;
  march->track = ahead;
  const struct wind_track start = {
      .count = 1, .ln_r = {track->ln_r[from]}, .y = {{track->y[from][0], track->y[from][1]}}};
  march_on(march, ivp, &start, 0, high - low);
  return fabs(march->ended - end_low) > start_agreement && track->count > from + 2;
}

static void extend_all(struct march *march, struct lxg_ivp *ivp, struct wind_track *track,
                       struct wind_track *scratch) {
  for (int i = 0; i < START_SEGMENTS && extend(march, ivp, track, scratch); i++) {
  }
  keep_common(track, scratch);
}

enum lxg_status lxg_wind_start_outer(const struct wind_constants *constants, struct lxg_ivp *ivp,
                                     double ln_rc, double ln_tc, double accuracy, struct wind_track *track,
                                     struct wind_track *scratch, double *ln_mdot, double *lambda) {
  struct march march = {.constants = constants, .ln_end = ln_rc + start_reach};
  const double unit = log(constants->l_edd / constants->gm) + ln_rc;
  double low, high;
  const bool hinted = isfinite(*ln_mdot);
  if (!(hinted && bracket(&march, ivp, ln_rc, ln_tc, *ln_mdot, 0.5, unit, &low, &high)) &&
      !bracket(&march, ivp, ln_rc, ln_tc, unit + start_rate_low + start_rate_step, start_rate_step, unit,
               &low, &high)) {
    return LXG_NO_SOLUTION;
  }
  double end_low = -INFINITY, end_high = INFINITY;
  for (int i = 0; i < START_BISECTIONS && high - low > accuracy; i++) {
    march.ln_mdot = 0.5 * (low + high);
    if (march_from(&march, ivp, ln_rc, ln_tc, 1) == MARCH_PLUNGED) {
      high = march.ln_mdot;
      end_high = march.ended;
    } else {
      low = march.ln_mdot;
      end_low = march.ended;
    }
    if (high - low < start_coarse && fabs(end_high - end_low) < start_agreement) {
      break; /* both sides reach the photosphere: no more is needed from a guess */
    }
  }
  march.track = scratch;
  march.ln_mdot = low;
  march_from(&march, ivp, ln_rc, ln_tc, 1);
  march.track = track;
  march.ln_mdot = high;
  march_from(&march, ivp, ln_rc, ln_tc, 1);
  *ln_mdot = march.ln_mdot;
  *lambda = march.lambda;
  if (accuracy < start_coarse && fabs(end_high - end_low) >= start_agreement) {
    extend_all(&march, ivp, track, scratch);
  } else {
    keep_common(track, scratch);
  }
  return track->count >= 2 ? LXG_OK : LXG_NO_SOLUTION;
}

enum lxg_status lxg_wind_start_inner(const struct wind_constants *constants, struct lxg_ivp *ivp,
                                     double ln_rc, double ln_tc, double ln_mdot, struct wind_track *track) {
  struct march march = {
      .constants = constants, .ln_mdot = ln_mdot, .ln_end = constants->ln_r0, .track = track};
  return march_from(&march, ivp, ln_rc, ln_tc, -1) == MARCH_ON ? LXG_OK : LXG_NO_SOLUTION;
}
