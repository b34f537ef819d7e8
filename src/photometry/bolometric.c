/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bolometric.c - the bolometric scale and three ways to a bolometric correction: (P3) of photometry.h.
 */
#include "luxgale/constants.h"
#include "luxgale/photometry.h"

#include <math.h>

double lxg_bolometric_magnitude(double luminosity) {
  return -2.5 * log10(luminosity / LXG_BOLOMETRIC_ZERO);
}

double lxg_bolometric_luminosity(double magnitude) {
  return LXG_BOLOMETRIC_ZERO * pow(10.0, -0.4 * magnitude);
}

double lxg_photometry_luminosity(double magnitude, double correction) {
  return lxg_bolometric_luminosity(magnitude + correction);
}

double lxg_bolometric_blackbody(enum lxg_band band, double temperature) {
  const double radius = LXG_SOLAR_RADIUS; /* cancels */
  return lxg_bolometric_magnitude(lxg_photometry_stefan(temperature, radius)) -
         lxg_photometry_blackbody(band, temperature, radius);
}

enum lxg_status lxg_bolometric_check(const struct lxg_bolometric *bolometric, struct lxg_error *error) {
  if (bolometric->kind == LXG_BOLOMETRIC_GIVEN && !isfinite(bolometric->correction)) {
    return lxg_error_set(error, LXG_INPUT, "bolometric-value", "bolometric correction = %g: a finite number",
                         bolometric->correction);
  }
  if (bolometric->kind != LXG_BOLOMETRIC_TABLE) {
    return LXG_OK;
  }
  if (bolometric->count < 2) {
    return lxg_error_set(error, LXG_INPUT, "bolometric-table", "table of %zu rows: two or more are needed",
                         bolometric->count);
  }
  for (size_t i = 0; i < bolometric->count; i++) {
    const double key = bolometric->keys[i];
    if (!isfinite(key) || !isfinite(bolometric->corrections[i]) ||
        (i > 0 && key <= bolometric->keys[i - 1])) {
      return lxg_error_set(error, LXG_INPUT, "bolometric-table",
                           "row %zu: key %.10g, correction %.10g: finite, keys rising", i + 1, key,
                           bolometric->corrections[i]);
    }
  }
  return LXG_OK;
}

static double table_value(const struct lxg_bolometric *table, double key) {
  size_t i = 1;
  while (i + 1 < table->count && table->keys[i] < key) {
    i++;
  }
  const double share = (key - table->keys[i - 1]) / (table->keys[i] - table->keys[i - 1]);
  return table->corrections[i - 1] + share * (table->corrections[i] - table->corrections[i - 1]);
}

enum lxg_status lxg_bolometric_correction(const struct lxg_bolometric *bolometric, enum lxg_band band,
                                          double key, double *correction, struct lxg_error *error) {
  if (bolometric->kind == LXG_BOLOMETRIC_GIVEN) {
    *correction = bolometric->correction;
    return LXG_OK;
  }
  if (bolometric->kind == LXG_BOLOMETRIC_BLACKBODY) {
    if (!(key > 0.0 && isfinite(key))) {
      return lxg_error_set(error, LXG_NO_SOLUTION, "bolometric-range", "temperature = %.10g K: positive",
                           key);
    }
    *correction = lxg_bolometric_blackbody(band, key);
    return LXG_OK;
  }
  const double first = bolometric->keys[0];
  const double last = bolometric->keys[bolometric->count - 1];
  if (!(key >= first && key <= last)) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "bolometric-range",
                         "key = %.10g: the table of corrections spans %.10g to %.10g and is not extrapolated",
                         key, first, last);
  }
  *correction = table_value(bolometric, key);
  return LXG_OK;
}
