/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * formula.c - value and slope of each luminosity term and of their sum (see formula.h for the laws).
 *
 * One small function a law, each returning L and dL/dt at s = t - origin >= 0. Can fail: fields outside their range.
 */
#include "luxgale/formula.h"

#include "luxgale/burning.h"

#include <math.h>
#include <stdbool.h>

static const char *const law_names[] = {"constant", "plateau", "exponential", "power", "decay", "hot_cno"};
enum { LAWS = sizeof law_names / sizeof law_names[0] };

const char *lxg_formula_law_name(enum lxg_formula_law law) {
  return (unsigned)law < LAWS ? law_names[law] : "unknown";
}

/* Which fields a law reads, and what they may be. */
enum { CONSTANT = 1, PLATEAU = 2, EXPONENTIAL = 4, POWER = 8, DECAY = 16, HOT_CNO = 32 };

struct rule {
  unsigned laws;
  const char *code, *name, *allowed;
  double value;
  bool accepted; /* finite is checked for all */
};

static enum lxg_status check_fields(const struct lxg_formula_term *term, struct lxg_error *error) {
  const struct rule rules[] = {
      {CONSTANT | PLATEAU | EXPONENTIAL | POWER, "formula-luminosity", "luminosity [erg/s]",
       "finite, above 0", term->luminosity, term->luminosity > 0.0},
      {CONSTANT | PLATEAU | EXPONENTIAL | POWER | DECAY | HOT_CNO, "formula-origin", "origin [s]", "finite",
       term->origin, true},
      {PLATEAU, "formula-duration", "duration [s]", "finite, at least 0", term->duration,
       term->duration >= 0.0},
      {PLATEAU | POWER, "formula-time-scale", "time scale [s]", "finite, above 0", term->time_scale,
       term->time_scale > 0.0},
      {EXPONENTIAL, "formula-time-scale", "time scale [s]", "finite, not 0", term->time_scale,
       term->time_scale != 0.0},
      {PLATEAU, "formula-index", "index", "finite, at least 0", term->index, term->index >= 0.0},
      {POWER, "formula-index", "index", "finite", term->index, true},
      {DECAY | HOT_CNO, "formula-mass", "envelope mass [g]", "finite, above 0", term->mass, term->mass > 0.0},
      {HOT_CNO, "formula-hydrogen", "hydrogen", "above 0, at most 1", term->hydrogen,
       term->hydrogen > 0.0 && term->hydrogen <= 1.0},
      {HOT_CNO, "formula-cno", "C+N+O", "above 0, at most 1", term->cno, term->cno > 0.0 && term->cno <= 1.0},
  };
  for (size_t i = 0; i < sizeof rules / sizeof rules[0]; i++) {
    if ((rules[i].laws & (1u << term->law)) != 0 && !(rules[i].accepted && isfinite(rules[i].value))) {
      return lxg_error_set(error, LXG_INPUT, rules[i].code, "%s = %.10g: %s", rules[i].name, rules[i].value,
                           rules[i].allowed);
    }
  }
  return LXG_OK;
}

static enum lxg_status check_isotopes(const struct lxg_formula_term *term, struct lxg_error *error) {
  if (term->isotope_count < 1 || term->isotope_count > LXG_FORMULA_ISOTOPES) {
    return lxg_error_set(error, LXG_INPUT, "formula-isotopes", "%zu isotopes: 1 to %d", term->isotope_count,
                         LXG_FORMULA_ISOTOPES);
  }
  if (!(term->photons.gamma_time >= 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "formula-gamma-time",
                         "gamma_time = %.10g s: at least 0 (infinite: opaque for ever)",
                         term->photons.gamma_time);
  }
  double sum = 0.0, heat = 0.0;
  for (size_t i = 0; i < term->isotope_count; i++) {
    const struct lxg_formula_isotope *const part = &term->isotope[i];
    const enum lxg_status status = lxg_decay_check(&part->isotope, error);
    if (status != LXG_OK) {
      return status;
    }
    sum += part->mass_fraction;
    heat += part->mass_fraction * lxg_decay_heat(&part->isotope, &term->photons, 0.0);
    if (!(part->mass_fraction >= 0.0 && sum <= 1.0)) {
      return lxg_error_set(error, LXG_INPUT, "formula-mass-fraction",
                           "mass fraction of %.15s = %.10g (sum %.10g): at least 0, sum at most 1",
                           part->isotope.name, part->mass_fraction, sum);
    }
  }
  if (!(heat > 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "formula-no-heat",
                         "these isotopes leave no energy in the envelope");
  }
  return LXG_OK;
}

enum lxg_status lxg_formula_check(const struct lxg_formula *formula, struct lxg_error *error) {
  if (formula->count < 1 || formula->count > LXG_FORMULA_TERMS) {
    return lxg_error_set(error, LXG_INPUT, "formula-terms", "%zu terms: 1 to %d", formula->count,
                         LXG_FORMULA_TERMS);
  }
  for (size_t i = 0; i < formula->count; i++) {
    const struct lxg_formula_term *const term = &formula->term[i];
    if ((unsigned)term->law >= LAWS) {
      return lxg_error_set(error, LXG_INPUT, "formula-law", "term %zu: unknown law %d", i + 1,
                           (int)term->law);
    }
    enum lxg_status status = check_fields(term, error);
    if (status == LXG_OK && term->law == LXG_FORMULA_DECAY) {
      status = check_isotopes(term, error);
    }
    if (status != LXG_OK) {
      lxg_error_context(error, "reading term %zu (%s) of the luminosity formula", i + 1,
                        lxg_formula_law_name(term->law));
      return status;
    }
  }
  return LXG_OK;
}

static double plateau(const struct lxg_formula_term *term, double s, double *slope) {
  if (s < term->duration) {
    *slope = 0.0;
    return term->luminosity;
  }
  const double x = (s - term->duration) / term->time_scale;
  const bool exponential = term->index == 0.0;
  const double value = term->luminosity * (exponential ? exp(-x) : pow(1.0 + x, -term->index));
  *slope = -value / term->time_scale * (exponential ? 1.0 : term->index / (1.0 + x));
  return value;
}

/* At its origin a power law is infinite, zero or, with index 0, its constant. */
static double power(const struct lxg_formula_term *term, double s, double *slope) {
  if (s == 0.0) {
    *slope = 0.0;
    return term->index > 0.0 ? (double)INFINITY : term->index < 0.0 ? 0.0 : term->luminosity;
  }
  const double value = term->luminosity * pow(s / term->time_scale, -term->index);
  *slope = -term->index * value / s;
  return value;
}

static double decay(const struct lxg_formula_term *term, double s, double *slope) {
  double value = 0.0;
  *slope = 0.0;
  for (size_t i = 0; i < term->isotope_count; i++) {
    double one = 0.0;
    value += lxg_decay_luminosity(&term->isotope[i].isotope, &term->photons,
                                  term->mass * term->isotope[i].mass_fraction, s, &one);
    *slope += one;
  }
  return value;
}

double lxg_formula_hot_cno_time(const struct lxg_formula_term *term) {
  return term->hydrogen * LXG_BURNING_HEAT / (LXG_BURNING_BETA_LIMIT * term->cno);
}

static double term_at(const struct lxg_formula_term *term, double time, double *slope) {
  const double s = time - term->origin;
  *slope = 0.0;
  if (s < 0.0) {
    return 0.0;
  }
  switch (term->law) {
  case LXG_FORMULA_CONSTANT:
    return term->luminosity;
  case LXG_FORMULA_PLATEAU:
    return plateau(term, s, slope);
  case LXG_FORMULA_EXPONENTIAL: {
    const double value = term->luminosity * exp(-s / term->time_scale);
    *slope = -value / term->time_scale;
    return value;
  }
  case LXG_FORMULA_POWER:
    return power(term, s, slope);
  case LXG_FORMULA_DECAY:
    return decay(term, s, slope);
  case LXG_FORMULA_HOT_CNO:
    return s < lxg_formula_hot_cno_time(term) ? LXG_BURNING_BETA_LIMIT * term->cno * term->mass : 0.0;
  }
  return 0.0;
}

double lxg_formula_at(const struct lxg_formula *formula, double time, double *slope) {
  double value = 0.0, sum = 0.0;
  for (size_t i = 0; i < formula->count; i++) {
    double one = 0.0;
    value += term_at(&formula->term[i], time, &one);
    sum += one;
  }
  if (slope != NULL) {
    *slope = sum;
  }
  return value;
}

/* Insertion keeps the short list ordered and free of repeats. */
static size_t insert(double list[], size_t count, double value) {
  size_t at = count;
  while (at > 0 && list[at - 1] >= value) {
    at--;
  }
  if (at < count && list[at] == value) {
    return count;
  }
  for (size_t i = count; i > at; i--) {
    list[i] = list[i - 1];
  }
  list[at] = value;
  return count + 1;
}

size_t lxg_formula_breaks(const struct lxg_formula *formula, double start, double end,
                          double breaks[LXG_FORMULA_BREAKS]) {
  size_t count = 0;
  for (size_t i = 0; i < formula->count; i++) {
    const struct lxg_formula_term *const term = &formula->term[i];
    const double second = term->law == LXG_FORMULA_PLATEAU   ? term->origin + term->duration
                          : term->law == LXG_FORMULA_HOT_CNO ? term->origin + lxg_formula_hot_cno_time(term)
                                                             : term->origin;
    const double both[] = {term->origin, second};
    for (size_t k = 0; k < 2; k++) {
      if (both[k] > start && both[k] < end) {
        count = insert(breaks, count, both[k]);
      }
    }
  }
  return count;
}
