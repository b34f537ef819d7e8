/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * mass.c - which methods the data allow, their errors, and the comparison (see mass.h).
 *
 * One quantity may be derived: the H beta luminosity from flux and distance (4 pi D^2 F); its error carries that
 * of the distance. Nothing else is filled in. Can fail: a value or error outside its range (lxg_mass_give).
 */
#include "luxgale/constants.h"
#include "mass/mass_internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const double slope_step =
    1e-4; /* of ln q in central differences: error 1e-9 for these smooth formulas */
static const double smallest_sigma = 0.01; /* of ln M in chi^2: no formula here is better than one per cent */
static const double temperature_low = 3000.0, temperature_high = 30000.0; /* [K] */

static const struct {
  const char *name, *unit, *text;
} quantities[LXG_MASS_QUANTITIES] = {
#define QUANTITY_ROW(id, key, unit, text) {key, unit, text},
    LXG_MASS_QUANTITY_LIST(QUANTITY_ROW)
#undef QUANTITY_ROW
};

const char *lxg_mass_quantity_name(enum lxg_mass_quantity quantity) {
  return (unsigned)quantity < LXG_MASS_QUANTITIES ? quantities[quantity].name : "unknown";
}

const char *lxg_mass_quantity_unit(enum lxg_mass_quantity quantity) {
  return (unsigned)quantity < LXG_MASS_QUANTITIES ? quantities[quantity].unit : "";
}

const char *lxg_mass_quantity_text(enum lxg_mass_quantity quantity) {
  return (unsigned)quantity < LXG_MASS_QUANTITIES ? quantities[quantity].text : "";
}

const char *lxg_mass_method_name(enum lxg_mass_method method) {
  return (unsigned)method < LXG_MASS_METHODS ? lxg_mass_row(method)->name : "unknown";
}

enum lxg_mass_quantity lxg_mass_quantity_find(const char *name) {
  int found = 0;
  while (found < LXG_MASS_QUANTITIES && strcmp(quantities[found].name, name) != 0) {
    found++;
  }
  return (enum lxg_mass_quantity)found;
}

/* Range of a value besides being positive and finite. */
static void range_of(enum lxg_mass_quantity quantity, double *low, double *high, const char **text) {
  *low = 0.0;
  *high = INFINITY;
  *text = "finite and above 0";
  if (quantity == LXG_MASS_HYDROGEN || quantity == LXG_MASS_FILLING) {
    *high = 1.0;
    *text = "above 0 and at most 1";
  } else if (quantity == LXG_MASS_SPEED) {
    *high = LXG_SPEED_OF_LIGHT;
    *text = "above 0 and at most the speed of light";
  } else if (quantity == LXG_MASS_TEMPERATURE) {
    *low = temperature_low;
    *high = temperature_high;
    *text = "3000 to 30000 K";
  }
}

enum lxg_status lxg_mass_give(struct lxg_mass_data *data, enum lxg_mass_quantity quantity, double value,
                              double error_1sigma, struct lxg_error *error) {
  if ((unsigned)quantity >= LXG_MASS_QUANTITIES) {
    return lxg_error_set(error, LXG_INPUT, "mass-quantity", "quantity %d: not one of the %d known",
                         (int)quantity, (int)LXG_MASS_QUANTITIES);
  }
  double low = 0.0, high = 0.0;
  const char *text = NULL;
  range_of(quantity, &low, &high, &text);
  if (!(value > 0.0 && isfinite(value) && value >= low && value <= high)) {
    return lxg_error_set(error, LXG_INPUT, "mass-value", "%s = %.10g %s: %s", quantities[quantity].name,
                         value, quantities[quantity].unit, text);
  }
  if (!(error_1sigma >= 0.0 && isfinite(error_1sigma))) {
    return lxg_error_set(error, LXG_INPUT, "mass-error", "error of %s = %.10g %s: finite and not below 0",
                         quantities[quantity].name, error_1sigma, quantities[quantity].unit);
  }
  data->datum[quantity] = (struct lxg_mass_datum){.value = value, .error = error_1sigma, .given = true};
  return LXG_OK;
}

/* L = 4 pi D^2 F when only flux and distance are given. */
static void derive(struct lxg_mass_data *data) {
  const struct lxg_mass_datum *const flux = &data->datum[LXG_MASS_HBETA_FLUX];
  const struct lxg_mass_datum *const distance = &data->datum[LXG_MASS_DISTANCE];
  struct lxg_mass_datum *const luminosity = &data->datum[LXG_MASS_HBETA_LUMINOSITY];
  if (!luminosity->given && flux->given && distance->given) {
    luminosity->value = 4.0 * LXG_PI * distance->value * distance->value * flux->value;
    luminosity->error =
        luminosity->value * hypot(flux->error / flux->value, 2.0 * distance->error / distance->value);
    luminosity->given = true;
  }
}

/* dlnM/dlnq by central differences of ln M. */
static double slope(const struct lxg_mass_row *row, double q[], enum lxg_mass_quantity quantity) {
  const double kept = q[quantity];
  q[quantity] = kept * exp(slope_step);
  const double up = log(row->formula(q));
  q[quantity] = kept * exp(-slope_step);
  const double down = log(row->formula(q));
  q[quantity] = kept;
  return (up - down) / (2.0 * slope_step);
}

static void find_missing(const struct lxg_mass_data *data, const struct lxg_mass_row *row,
                         struct lxg_mass_estimate *estimate) {
  for (size_t i = 0; i < row->need_count; i++) {
    if (!data->datum[row->need[i]].given) {
      estimate->missing[estimate->missing_count++] = row->need[i];
    }
  }
}

static void estimate_one(const struct lxg_mass_data *data, enum lxg_mass_method method,
                         struct lxg_mass_estimate *estimate) {
  const struct lxg_mass_row *const row = lxg_mass_row(method);
  *estimate = (struct lxg_mass_estimate){.method = method,
                                         .upper_bound = row->upper_bound,
                                         .mass = NAN,
                                         .sigma_ln = NAN,
                                         .lower = NAN,
                                         .upper = NAN,
                                         .assumptions = row->assumptions,
                                         .source = row->source};
  find_missing(data, row, estimate);
  estimate->available = estimate->missing_count == 0;
  if (!estimate->available) {
    return;
  }
  double q[LXG_MASS_QUANTITIES], variance = 0.0;
  for (int i = 0; i < LXG_MASS_QUANTITIES; i++) {
    q[i] = data->datum[i].value;
  }
  for (size_t i = 0; i < row->need_count; i++) {
    const struct lxg_mass_datum *const datum = &data->datum[row->need[i]];
    const double part = slope(row, q, row->need[i]) * datum->error / datum->value;
    variance += part * part;
  }
  estimate->mass = row->formula(q);
  estimate->sigma_ln = sqrt(variance);
  estimate->lower = estimate->mass * exp(-estimate->sigma_ln);
  estimate->upper = estimate->mass * exp(estimate->sigma_ln);
}

static void compare(struct lxg_mass_summary *summary) {
  double sum = 0.0, weights = 0.0, weighted = 0.0, squares = 0.0;
  summary->lowest = summary->highest = summary->spread = summary->centre = summary->chi2 = NAN;
  for (int i = 0; i < LXG_MASS_METHODS; i++) {
    const struct lxg_mass_estimate *const e = &summary->estimate[i];
    if (e->available && !e->upper_bound) {
      const double ln_mass = log(e->mass);
      const double sigma = fmax(e->sigma_ln, smallest_sigma);
      const double weight = 1.0 / (sigma * sigma);
      summary->values++;
      summary->lowest = fmin(summary->lowest, e->mass); /* fmin passes over NaN */
      summary->highest = fmax(summary->highest, e->mass);
      sum += ln_mass;
      weights += weight;
      weighted += weight * ln_mass;
      squares += weight * ln_mass * ln_mass;
    }
  }
  if (summary->values > 0) {
    summary->spread = summary->highest / summary->lowest;
    summary->centre = exp(sum / (double)summary->values);
  }
  if (summary->values > 1) {
    summary->chi2 = fmax(0.0, squares - weighted * weighted / weights);
  }
  const struct lxg_mass_estimate *const bound = &summary->estimate[LXG_MASS_TIRING];
  summary->bound_broken = bound->available && summary->centre > bound->upper;
}

static void read_aloud(struct lxg_mass_summary *summary) {
  char *const text = summary->reading;
  const size_t size = sizeof summary->reading;
  const struct lxg_mass_estimate *const bound = &summary->estimate[LXG_MASS_TIRING];
  int used = 0;
  if (summary->values == 0) {
    used = snprintf(text, size, "no method gives a mass with these data");
  } else if (summary->values == 1) {
    used = snprintf(text, size, "one method gives %.2g Msun; nothing to compare it with",
                    summary->centre / LXG_SOLAR_MASS);
  } else {
    const bool agree = summary->chi2 <= 2.0 * (double)(summary->values - 1);
    used = snprintf(text, size, "%zu methods give %.2g to %.2g Msun (a factor %.2g); %s", summary->values,
                    summary->lowest / LXG_SOLAR_MASS, summary->highest / LXG_SOLAR_MASS, summary->spread,
                    agree ? "within the given errors they agree"
                          : "they differ by more than the given errors: the assumptions disagree");
  }
  if (bound->available && used > 0 && (size_t)used < size) {
    snprintf(text + used, size - (size_t)used, "; light can lift at most %.2g Msun%s",
             bound->mass / LXG_SOLAR_MASS, summary->bound_broken ? ", less than their mean" : "");
  }
}

void lxg_mass_estimate_all(const struct lxg_mass_data *data, struct lxg_mass_summary *summary) {
  struct lxg_mass_data full = *data;
  derive(&full);
  *summary = (struct lxg_mass_summary){.values = 0};
  for (int i = 0; i < LXG_MASS_METHODS; i++) {
    estimate_one(&full, (enum lxg_mass_method)i, &summary->estimate[i]);
  }
  compare(summary);
  read_aloud(summary);
}
