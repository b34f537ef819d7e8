/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * colour.c - temperature of the black body that has a colour, or that fits several bands at once.
 *
 * The ratio of a black body's light at two frequencies rises strictly with temperature, so a colour has one temperature
 * or none: the root is bracketed in ln T by the stated range and found by bisection. The fit minimises chi^2 over ln T
 * with the radius eliminated (weighted mean of the offsets), first on a grid, then by golden section.
 */
#include "luxgale/constants.h"
#include "luxgale/photometry.h"

#include <math.h>
#include <stdbool.h>

static const double range_low = 1000.0; /* [K] */
static const double range_high = 1e6;   /* [K]: colours in the visible have long since saturated */
enum { BISECTIONS = 60, GRID = 240, GOLDEN_STEPS = 60 };
static const double golden = 0.61803398874989485;
static const double slope_step = 1e-4; /* step in ln T of the numerical slope of a magnitude */

struct lxg_photometry_range lxg_photometry_default_range(void) {
  return (struct lxg_photometry_range){range_low, range_high};
}

double lxg_photometry_colour(enum lxg_band first, enum lxg_band second, double temperature) {
  return lxg_photometry_blackbody(first, temperature, 1.0) -
         lxg_photometry_blackbody(second, temperature, 1.0);
}

static enum lxg_status check_range(struct lxg_photometry_range range, struct lxg_error *error) {
  if (range.low >= 100.0 && range.high > range.low && range.high <= 1e9) {
    return LXG_OK;
  }
  return lxg_error_set(error, LXG_INPUT, "colour-range",
                       "temperatures from %.10g to %.10g K: rising, between 100 and 1e9 K", range.low,
                       range.high);
}

enum lxg_status lxg_photometry_colour_temperature(enum lxg_band first, enum lxg_band second, double colour,
                                                  struct lxg_photometry_range range, double *temperature,
                                                  struct lxg_error *error) {
  const char *name1 = lxg_band_info(first)->name;
  const char *name2 = lxg_band_info(second)->name;
  if (first == second) {
    return lxg_error_set(error, LXG_INPUT, "colour-bands", "colour %s - %s: two different bands are needed",
                         name1, name2);
  }
  if (!isfinite(colour)) {
    return lxg_error_set(error, LXG_INPUT, "colour-value", "colour %s - %s = %g: a finite number", name1,
                         name2, colour);
  }
  const enum lxg_status status = check_range(range, error);
  if (status != LXG_OK) {
    return status;
  }
  /* Falls with temperature when the first band is the bluer one; the sign makes both orders alike. */
  const double sign = lxg_band_frequency(first) > lxg_band_frequency(second) ? 1.0 : -1.0;
  const double cold = lxg_photometry_colour(first, second, range.low);
  const double hot = lxg_photometry_colour(first, second, range.high);
  if (sign * (colour - hot) < 0.0 || sign * (cold - colour) < 0.0) {
    const bool blue = sign * (colour - hot) < 0.0;
    return lxg_error_set(error, LXG_NO_SOLUTION, blue ? "colour-blue" : "colour-red",
                         "colour %s - %s = %.4f mag: a black body between %.5g and %.5g K has %.4f to %.4f",
                         name1, name2, colour, range.low, range.high, cold, hot);
  }
  double low = log(range.low);
  double high = log(range.high);
  for (int i = 0; i < BISECTIONS; i++) {
    const double middle = 0.5 * (low + high);
    if (sign * (lxg_photometry_colour(first, second, exp(middle)) - colour) > 0.0) {
      low = middle;
    } else {
      high = middle;
    }
  }
  *temperature = exp(0.5 * (low + high));
  return LXG_OK;
}

/* chi^2 at ln T; *offset becomes the best -5 log10(R/cm) [mag]. */
static double chi_sq(const struct lxg_photometry_measure measures[], size_t count, double ln_t,
                     double *offset) {
  double weights = 0.0;
  double sum = 0.0;
  for (size_t i = 0; i < count; i++) {
    const double weight = 1.0 / (measures[i].error * measures[i].error);
    weights += weight;
    sum += weight * (measures[i].magnitude - lxg_photometry_blackbody(measures[i].band, exp(ln_t), 1.0));
  }
  *offset = sum / weights;
  double total = 0.0;
  for (size_t i = 0; i < count; i++) {
    const double pull =
        (measures[i].magnitude - *offset - lxg_photometry_blackbody(measures[i].band, exp(ln_t), 1.0)) /
        measures[i].error;
    total += pull * pull;
  }
  return total;
}

/* Errors of ln T and ln L from the normal matrix in (ln T, offset); ln L = 4 ln T - 0.4 ln(10) offset + constant. */
static void set_errors(const struct lxg_photometry_measure measures[], size_t count, double ln_t,
                       struct lxg_photometry_state *state) {
  double tt = 0.0;
  double to = 0.0;
  double oo = 0.0;
  for (size_t i = 0; i < count; i++) {
    const double weight = 1.0 / (measures[i].error * measures[i].error);
    const double slope = (lxg_photometry_blackbody(measures[i].band, exp(ln_t + slope_step), 1.0) -
                          lxg_photometry_blackbody(measures[i].band, exp(ln_t - slope_step), 1.0)) /
                         (2.0 * slope_step);
    tt += weight * slope * slope;
    to += weight * slope;
    oo += weight;
  }
  const double determinant = tt * oo - to * to;
  const double per_mag = 0.4 * LXG_LN10;
  state->ln_temperature_sd = sqrt(oo / determinant);
  state->ln_luminosity_sd = sqrt((16.0 * oo + 8.0 * per_mag * to + per_mag * per_mag * tt) / determinant);
}

static enum lxg_status check_measures(const struct lxg_photometry_measure measures[], size_t count,
                                      struct lxg_error *error) {
  bool two = false;
  for (size_t i = 0; i < count; i++) {
    if (!(isfinite(measures[i].magnitude) && measures[i].error > 0.0 && isfinite(measures[i].error))) {
      return lxg_error_set(error, LXG_INPUT, "photometry-measures",
                           "measure %zu: %.10g +- %.10g mag: finite with a positive error", i + 1,
                           measures[i].magnitude, measures[i].error);
    }
    two = two || measures[i].band != measures[0].band;
  }
  if (!two) {
    return lxg_error_set(error, LXG_INPUT, "photometry-measures",
                         "%zu measures in one band: a temperature needs two bands", count);
  }
  return LXG_OK;
}

/* Grid minimum, then golden section between its neighbours; false when it lies at an end (index in *end). */
static bool minimise(const struct lxg_photometry_measure measures[], size_t count,
                     struct lxg_photometry_range range, double *ln_t, int *end) {
  const double step = log(range.high / range.low) / GRID;
  double offset = 0.0;
  double best = INFINITY;
  int at = 0;
  for (int i = 0; i <= GRID; i++) {
    const double value = chi_sq(measures, count, log(range.low) + i * step, &offset);
    if (value < best) {
      best = value;
      at = i;
    }
  }
  *end = at;
  if (at == 0 || at == GRID) {
    return false;
  }
  double low = log(range.low) + (at - 1) * step;
  double high = low + 2.0 * step;
  for (int i = 0; i < GOLDEN_STEPS; i++) {
    const double inner = high - golden * (high - low);
    const double outer = low + golden * (high - low);
    if (chi_sq(measures, count, inner, &offset) < chi_sq(measures, count, outer, &offset)) {
      high = outer;
    } else {
      low = inner;
    }
  }
  *ln_t = 0.5 * (low + high);
  return true;
}

enum lxg_status lxg_photometry_fit(const struct lxg_photometry_measure measures[], size_t count,
                                   struct lxg_photometry_range range, struct lxg_photometry_state *state,
                                   struct lxg_error *error) {
  enum lxg_status status = check_measures(measures, count, error);
  if (status == LXG_OK) {
    status = check_range(range, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  double ln_t = 0.0;
  int end = 0;
  if (!minimise(measures, count, range, &ln_t, &end)) {
    return lxg_error_set(error, LXG_NO_SOLUTION, end == 0 ? "colour-red" : "colour-blue",
                         "best temperature of %zu measures lies at the end %.5g K of the range", count,
                         end == 0 ? range.low : range.high);
  }
  double offset = 0.0;
  state->chi_sq = chi_sq(measures, count, ln_t, &offset);
  state->degrees = count - 2;
  state->temperature = exp(ln_t);
  state->radius = pow(10.0, -0.2 * offset);
  state->luminosity = lxg_photometry_stefan(state->temperature, state->radius);
  set_errors(measures, count, ln_t, state);
  return LXG_OK;
}
