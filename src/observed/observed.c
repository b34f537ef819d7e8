/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * observed.c - magnitudes of the epochs as luminosities or black bodies (see observed.h).
 */
#include "luxgale/observed.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include <math.h>

const char *lxg_observed_way_name(enum lxg_observed_way way) {
  static const char *const names[LXG_OBSERVED_WAYS] = {"photosphere", "freefree",   "larger",
                                                       "whole",       "correction", "colours"};
  return (unsigned)way < LXG_OBSERVED_WAYS ? names[way] : "?";
}

void lxg_observed_destroy(struct lxg_observed *observed) {
  if (observed != NULL) {
    lxg_lightcurve_free(&observed->curve);
    lxg_free(observed->table_time);
    lxg_free(observed->table_value);
    lxg_free(observed->time);
    lxg_free(observed->magnitude);
    lxg_free(observed->error);
    lxg_free(observed->group);
    lxg_free(observed);
  }
}

double lxg_observed_shift(const struct lxg_observed *observed, double distance, double a_v) {
  return lxg_distance_modulus(distance) + observed->a_ratio * a_v; /* the law is linear in A_V */
}

double lxg_observed_nominal_shift(const struct lxg_observed *observed) {
  return lxg_observed_shift(observed, observed->distance.mode * LXG_PARSEC, observed->a_v);
}

/* Luminosities of the epochs, and their bounds, from magnitudes. */
static enum lxg_status fill(const struct lxg_observed *observed, double value[], double low[], double high[],
                            struct lxg_error *error) {
  const double shift = lxg_observed_nominal_shift(observed);
  for (size_t i = 0; i < observed->count; i++) {
    double correction = 0.0;
    const bool table = observed->correction.kind == LXG_BOLOMETRIC_TABLE;
    const double key = table ? observed->time[i] / LXG_DAY : observed->correction_temperature;
    const enum lxg_status status =
        lxg_bolometric_correction(&observed->correction, observed->band, key, &correction, error);
    if (status != LXG_OK) {
      lxg_error_context(error, "taking the bolometric correction at %.6g d", observed->time[i] / LXG_DAY);
      return status;
    }
    value[i] = lxg_photometry_luminosity(observed->magnitude[i] - shift, correction);
    const double factor = exp(0.4 * LXG_LN10 * observed->error[i]);
    low[i] = value[i] / factor;
    high[i] = value[i] * factor;
  }
  return LXG_OK;
}

enum lxg_status lxg_observed_history(const struct lxg_observed *observed, double gap_fraction,
                                     struct lxg_history **history, struct lxg_error *error) {
  const size_t count = observed->count;
  double *values = lxg_alloc(3 * count, sizeof *values);
  *history = NULL;
  if (values == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "%zu epochs: out of memory", count);
  }
  enum lxg_status status = fill(observed, values, values + count, values + 2 * count, error);
  if (status == LXG_OK) {
    const struct lxg_history_rows rows = {.kind = LXG_HISTORY_PHOTOSPHERE,
                                          .count = count,
                                          .time = observed->time,
                                          .luminosity = values,
                                          .low = values + count,
                                          .high = values + 2 * count,
                                          .gap_fraction = gap_fraction};
    status = lxg_history_create(&rows, history, error);
  }
  lxg_free(values);
  return status;
}

enum lxg_status lxg_observed_state(const struct lxg_observed *observed, size_t i,
                                   struct lxg_photometry_state *state, struct lxg_error *error) {
  return lxg_lightcurve_group_state(&observed->group[i],
                                    lxg_distance_modulus(observed->distance.mode * LXG_PARSEC), observed->a_v,
                                    observed->r_v, lxg_photometry_default_range(), state, error);
}
