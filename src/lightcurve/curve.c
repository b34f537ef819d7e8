/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * curve.c - the container of an observed light curve (see lightcurve.h).
 */
#include "luxgale/lightcurve.h"
#include "luxgale/memory.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const double mjd_zero = 2400000.5;                        /* JD of MJD 0 */
static const double magnitude_min = -30.0, magnitude_max = 40.0; /* nothing in the sky is outside */
static const double error_max = 5.0;                             /* a larger "error" is a column mix-up */
enum { FIRST_CAPACITY = 64 };

void lxg_lightcurve_init(enum lxg_time_system system, double zero, struct lxg_light_curve *curve) {
  memset(curve, 0, sizeof *curve);
  curve->system = system;
  curve->zero = zero;
}

void lxg_lightcurve_free(struct lxg_light_curve *curve) {
  if (curve != NULL) {
    lxg_free(curve->point);
    memset(curve, 0, sizeof *curve);
  }
}

static enum lxg_status check_point(const struct lxg_light_point *p, struct lxg_error *error) {
  if (!isfinite(p->time)) {
    return lxg_error_set(error, LXG_INPUT, "lightcurve-time", "row %zu: time = %g: a finite number", p->row,
                         p->time);
  }
  if (!(p->magnitude >= magnitude_min && p->magnitude <= magnitude_max)) {
    return lxg_error_set(error, LXG_INPUT, "lightcurve-magnitude", "row %zu: magnitude = %.10g: %g to %g",
                         p->row, p->magnitude, magnitude_min, magnitude_max);
  }
  if (!(p->error >= 0.0 && p->error <= error_max)) {
    return lxg_error_set(error, LXG_INPUT, "lightcurve-error", "row %zu: error = %.10g mag: 0 to %g", p->row,
                         p->error, error_max);
  }
  if (lxg_band_info(p->band) == NULL) {
    return lxg_error_set(error, LXG_INPUT, "band-unknown", "row %zu: no such band", p->row);
  }
  return LXG_OK;
}

enum lxg_status lxg_lightcurve_add(struct lxg_light_curve *curve, const struct lxg_light_point *point,
                                   struct lxg_error *error) {
  const enum lxg_status status = check_point(point, error);
  if (status != LXG_OK) {
    return status;
  }
  if (curve->count == curve->capacity) {
    const size_t capacity = curve->capacity == 0 ? FIRST_CAPACITY : 2 * curve->capacity;
    struct lxg_light_point *more = lxg_realloc(curve->point, capacity, sizeof *more);
    if (more == NULL) {
      return lxg_error_set(error, LXG_MEMORY, "lightcurve-memory", "no memory for %zu points", capacity);
    }
    curve->point = more;
    curve->capacity = capacity;
  }
  curve->point[curve->count] = *point;
  curve->point[curve->count].time -= curve->zero;
  curve->count++;
  return LXG_OK;
}

static int earlier(const void *left, const void *right) {
  const struct lxg_light_point *a = left;
  const struct lxg_light_point *b = right;
  if (a->time != b->time) {
    return a->time < b->time ? -1 : 1;
  }
  if (a->band != b->band) {
    return a->band < b->band ? -1 : 1;
  }
  return (a->row > b->row) - (a->row < b->row);
}

void lxg_lightcurve_sort(struct lxg_light_curve *curve) {
  if (curve->count > 1) {
    qsort(curve->point, curve->count, sizeof curve->point[0], earlier);
  }
}

enum lxg_status lxg_lightcurve_exclude(struct lxg_light_curve *curve, double from, double to, size_t *count,
                                       struct lxg_error *error) {
  if (!(from <= to)) {
    return lxg_error_set(error, LXG_INPUT, "lightcurve-window",
                         "window from %.10g to %.10g d: it must not be reversed", from, to);
  }
  size_t marked = 0;
  for (size_t i = 0; i < curve->count; i++) {
    if (curve->point[i].time >= from && curve->point[i].time <= to) {
      curve->point[i].excluded = true;
      marked++;
    }
  }
  if (count != NULL) {
    *count = marked;
  }
  return LXG_OK;
}

double lxg_lightcurve_jd(const struct lxg_light_curve *curve, double time) {
  if (curve->system == LXG_TIME_DAYS) {
    return NAN;
  }
  return time + curve->zero + (curve->system == LXG_TIME_MJD ? mjd_zero : 0.0);
}
