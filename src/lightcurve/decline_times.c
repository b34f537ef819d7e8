/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decline_times.c - peak, gaps, t2 and t3 of a light curve (see lightcurve.h).
 *
 * The used points of one band from the peak on become a track of straight lines; a level is crossed where a line goes from
 * above (brighter) to it or below. Errors: the same over draws with noise on every point.
 */
#include "luxgale/lightcurve.h"
#include "luxgale/memory.h"
#include "luxgale/random.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const double default_gap_days = 3.0;
static const double default_gap_fraction = 0.2;
enum { DEFAULT_DRAWS = 1000, DRAWS_MAX = 100000, LEVELS = 2 };
static const double levels[LEVELS] = {2.0, 3.0}; /* magnitudes below peak */

/* Points from the peak on; element 0 is the peak. */
struct track {
  size_t count;
  double *time; /* [d after peak] */
  double *magnitude;
  double *error;
  double *noisy;    /* magnitudes of one draw */
  double *crossing; /* [LEVELS * draws] */
};

struct lxg_light_decline_options lxg_lightcurve_decline_defaults(void) {
  return (struct lxg_light_decline_options){.band = LXG_BAND_V,
                                            .gap_days = default_gap_days,
                                            .gap_fraction = default_gap_fraction,
                                            .draws = DEFAULT_DRAWS,
                                            .seed = 1};
}

static bool used(const struct lxg_light_point *point, enum lxg_band band) {
  return point->band == band && !point->upper_limit && !point->excluded;
}

/* Counts points and finds the peak. */
static void find_peak(const struct lxg_light_curve *curve, const struct lxg_light_decline_options *options,
                      struct lxg_light_decline *decline) {
  decline->peak_magnitude = INFINITY;
  size_t before = 0; /* used points before the peak */
  for (size_t i = 0; i < curve->count; i++) {
    const struct lxg_light_point *p = &curve->point[i];
    if (p->band != options->band) {
      continue;
    }
    decline->excluded += p->excluded ? 1 : 0;
    decline->limits += p->upper_limit && !p->excluded ? 1 : 0;
    if (!used(p, options->band)) {
      continue;
    }
    if (!options->peak_given && p->magnitude < decline->peak_magnitude) {
      decline->peak_time = p->time;
      decline->peak_magnitude = p->magnitude;
      decline->peak_error = p->error;
      before = decline->used;
    }
    decline->used++;
  }
  if (options->peak_given) {
    decline->peak_time = options->peak_time;
    decline->peak_magnitude = options->peak_magnitude;
    decline->peak_error = options->peak_error;
  } else {
    decline->peak_at_edge = before == 0;
  }
}

/* Lists the gaps between used points; the same rule everywhere, so that dips before the peak are declared too. */
static void find_gaps(const struct lxg_light_curve *curve, const struct lxg_light_decline_options *options,
                      struct lxg_light_decline *decline) {
  bool any = options->peak_given; /* a given peak is a used point, at its place in time */
  double last = options->peak_given ? decline->peak_time : 0.0;
  size_t excluded = 0;
  for (size_t i = 0; i < curve->count; i++) {
    const struct lxg_light_point *p = &curve->point[i];
    if (p->band != options->band || (options->peak_given && p->time <= decline->peak_time)) {
      continue;
    }
    excluded += p->excluded ? 1 : 0;
    if (!used(p, options->band)) {
      continue;
    }
    const double length = p->time - last;
    const double since = p->time - decline->peak_time;
    const bool empty = length > options->gap_days && length > options->gap_fraction * since;
    if (any && (empty || excluded > 0)) {
      if (decline->gap_count < LXG_LIGHT_GAPS_MAX) {
        decline->gap[decline->gap_count] = (struct lxg_light_gap){last, p->time, excluded};
      }
      decline->gap_count++;
    }
    any = true;
    last = p->time;
    excluded = 0;
  }
}

static void fill_track(const struct lxg_light_curve *curve, const struct lxg_light_decline_options *options,
                       const struct lxg_light_decline *decline, struct track *track) {
  track->time[0] = 0.0;
  track->magnitude[0] = decline->peak_magnitude;
  track->error[0] = decline->peak_error;
  track->count = 1;
  for (size_t i = 0; i < curve->count; i++) {
    const struct lxg_light_point *p = &curve->point[i];
    if (used(p, options->band) && p->time > decline->peak_time) {
      track->time[track->count] = p->time - decline->peak_time;
      track->magnitude[track->count] = p->magnitude;
      track->error[track->count] = p->error;
      track->count++;
    }
  }
}

/* First or last downward crossing of a level [d after peak]; NaN if there is none. */
static double crossing(const struct track *track, const double magnitude[], double level, bool last) {
  double found = NAN;
  for (size_t i = 1; i < track->count; i++) {
    if (magnitude[i - 1] < level && magnitude[i] >= level) {
      const double share = (level - magnitude[i - 1]) / (magnitude[i] - magnitude[i - 1]);
      found = track->time[i - 1] + share * (track->time[i] - track->time[i - 1]);
      if (!last) {
        break;
      }
    }
  }
  return found;
}

static void draw_crossings(const struct lxg_light_decline_options *options, struct track *track) {
  struct lxg_random_place place = {.seed = options->seed};
  for (size_t draw = 0; draw < options->draws; draw++) {
    place.draw = (uint32_t)draw;
    lxg_random_normals(&place, 0, track->count, track->noisy);
    for (size_t i = 0; i < track->count; i++) {
      track->noisy[i] = track->magnitude[i] + track->error[i] * track->noisy[i];
    }
    for (size_t l = 0; l < LEVELS; l++) {
      track->crossing[l * options->draws + draw] =
          crossing(track, track->noisy, track->noisy[0] + levels[l], false);
    }
  }
}

static int rising(const void *left, const void *right) {
  const double a = *(const double *)left;
  const double b = *(const double *)right;
  return (a > b) - (a < b);
}

/* Percentile of sorted values, linear between neighbours. */
static double percentile(const double sorted[], size_t count, double p) {
  const double position = p * (double)(count - 1);
  const size_t below = (size_t)position;
  const size_t above = below + 1 < count ? below + 1 : below;
  return sorted[below] + (position - (double)below) * (sorted[above] - sorted[below]);
}

static void set_interval(double drawn[], size_t draws, struct lxg_light_decline_time *time) {
  size_t kept = 0;
  for (size_t i = 0; i < draws; i++) {
    if (isfinite(drawn[i])) {
      drawn[kept++] = drawn[i];
    }
  }
  time->undefined = draws > 0 ? 1.0 - (double)kept / (double)draws : 0.0;
  time->lo68 = NAN;
  time->hi68 = NAN;
  if (kept > 0) {
    qsort(drawn, kept, sizeof drawn[0], rising);
    time->lo68 = percentile(drawn, kept, 0.16);
    time->hi68 = percentile(drawn, kept, 0.84);
  }
}

static void set_time(const struct track *track, const struct lxg_light_decline *decline, double level,
                     struct lxg_light_decline_time *time) {
  const double magnitude = track->magnitude[0] + level;
  time->value = crossing(track, track->magnitude, magnitude, false);
  time->last = crossing(track, track->magnitude, magnitude, true);
  time->at_least = track->time[track->count - 1];
  time->known = isfinite(time->value);
  time->reason = time->known ? "" : track->count < 2 ? "decline-peak-last" : "decline-not-reached";
  const double at = decline->peak_time + time->value;
  for (size_t i = 0; i < decline->gap_count && i < LXG_LIGHT_GAPS_MAX; i++) {
    time->in_gap = time->in_gap || (at > decline->gap[i].from && at < decline->gap[i].to);
  }
}

static enum lxg_status check_options(const struct lxg_light_decline_options *options,
                                     struct lxg_error *error) {
  if (lxg_band_info(options->band) == NULL || options->draws > DRAWS_MAX || !(options->gap_days >= 0.0) ||
      !(options->gap_fraction >= 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "decline-options",
                         "gaps over %g d and a share of %g, %zu draws: not negative, at most %d draws",
                         options->gap_days, options->gap_fraction, options->draws, DRAWS_MAX);
  }
  if (options->peak_given &&
      !(isfinite(options->peak_time) && isfinite(options->peak_magnitude) && options->peak_error >= 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "decline-options",
                         "peak at %g d with %g +- %g mag: finite numbers", options->peak_time,
                         options->peak_magnitude, options->peak_error);
  }
  return LXG_OK;
}

enum lxg_status lxg_lightcurve_decline(const struct lxg_light_curve *curve,
                                       const struct lxg_light_decline_options *options,
                                       struct lxg_light_decline *decline, struct lxg_error *error) {
  memset(decline, 0, sizeof *decline);
  const enum lxg_status status = check_options(options, error);
  if (status != LXG_OK) {
    return status;
  }
  find_peak(curve, options, decline);
  if (decline->used + (options->peak_given ? 1 : 0) < 2) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "decline-points",
                         "%zu usable points in %s (%zu limits, %zu excluded): two or more are needed",
                         decline->used, lxg_band_info(options->band)->name, decline->limits,
                         decline->excluded);
  }
  find_gaps(curve, options, decline);
  const size_t size = decline->used + 1;
  double *memory = lxg_alloc(4 * size + LEVELS * options->draws, sizeof *memory);
  if (memory == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "lightcurve-memory", "no memory for %zu draws", options->draws);
  }
  struct track track = {.time = memory,
                        .magnitude = memory + size,
                        .error = memory + 2 * size,
                        .noisy = memory + 3 * size,
                        .crossing = memory + 4 * size};
  fill_track(curve, options, decline, &track);
  draw_crossings(options, &track);
  struct lxg_light_decline_time *times[LEVELS] = {&decline->t2, &decline->t3};
  for (size_t l = 0; l < LEVELS; l++) {
    set_time(&track, decline, levels[l], times[l]);
    set_interval(track.crossing + l * options->draws, options->draws, times[l]);
  }
  lxg_free(memory);
  return LXG_OK;
}
