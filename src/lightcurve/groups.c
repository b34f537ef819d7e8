/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * groups.c - points of several bands that agree in time, and the black body behind them (see lightcurve.h).
 */
#include "luxgale/lightcurve.h"

#include <math.h>
#include <string.h>

static bool used(const struct lxg_light_point *point) {
  return !point->upper_limit && !point->excluded;
}

/* Collects the used points from `first` on within the tolerance; returns the index after the last one looked at. */
static size_t collect(const struct lxg_light_curve *curve, size_t first, double tolerance, double floor,
                      struct lxg_light_group *group) {
  double weight[LXG_BAND_COUNT] = {0.0};
  memset(group, 0, sizeof *group);
  const double start = curve->point[first].time;
  size_t i = first;
  for (; i < curve->count && curve->point[i].time - start <= tolerance; i++) {
    const struct lxg_light_point *p = &curve->point[i];
    if (!used(p)) {
      continue;
    }
    const double sigma = fmax(p->error, floor);
    const double w = 1.0 / (sigma * sigma);
    group->bands += group->has[p->band] ? 0 : 1;
    group->has[p->band] = true;
    group->magnitude[p->band] += w * p->magnitude;
    weight[p->band] += w;
    group->time += p->time;
    group->span = p->time - start;
    group->points++;
  }
  for (int band = 0; band < LXG_BAND_COUNT; band++) {
    if (group->has[band]) {
      group->magnitude[band] /= weight[band];
      group->error[band] = 1.0 / sqrt(weight[band]);
    }
  }
  group->time /= (double)group->points;
  return i;
}

enum lxg_status lxg_lightcurve_groups(const struct lxg_light_curve *curve, double tolerance, size_t bands,
                                      double floor, struct lxg_light_group groups[], size_t capacity,
                                      size_t *count, struct lxg_error *error) {
  *count = 0;
  if (!(tolerance >= 0.0 && floor > 0.0) || bands < 1) {
    return lxg_error_set(
        error, LXG_INPUT, "groups-options",
        "tolerance = %.10g d, floor = %.10g mag, %zu bands: not negative, positive, one or more", tolerance,
        floor, bands);
  }
  size_t i = 0;
  while (i < curve->count) {
    if (!used(&curve->point[i])) {
      i++;
      continue;
    }
    struct lxg_light_group group;
    i = collect(curve, i, tolerance, floor, &group);
    if (group.bands < bands) {
      continue;
    }
    if (*count == capacity) {
      return lxg_error_set(error, LXG_LIMIT, "groups-capacity", "more than %zu groups agree within %g d",
                           capacity, tolerance);
    }
    groups[(*count)++] = group;
  }
  return LXG_OK;
}

enum lxg_status lxg_lightcurve_group_state(const struct lxg_light_group *group, double modulus, double a_v,
                                           double r_v, struct lxg_photometry_range range,
                                           struct lxg_photometry_state *state, struct lxg_error *error) {
  struct lxg_photometry_measure measures[LXG_BAND_COUNT];
  size_t count = 0;
  for (int i = 0; i < LXG_BAND_COUNT; i++) {
    if (!group->has[i]) {
      continue;
    }
    double extinction = 0.0;
    const enum lxg_status status = lxg_extinction_band((enum lxg_band)i, a_v, r_v, &extinction, error);
    if (status != LXG_OK) {
      return status;
    }
    measures[count++] =
        (struct lxg_photometry_measure){.band = (enum lxg_band)i,
                                        .magnitude = group->magnitude[i] - modulus - extinction,
                                        .error = group->error[i]};
  }
  if (count < 2) {
    return lxg_error_set(error, LXG_INPUT, "photometry-measures",
                         "%zu bands at %.6g d: a temperature needs two", count, group->time);
  }
  return lxg_photometry_fit(measures, count, range, state, error);
}
