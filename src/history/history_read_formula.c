/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history_read_formula.c - `luminosity: {kind: formula, ...}` of a case: a sum of terms over a window of time.
 */
#include "luxgale/composition.h"
#include "luxgale/keys.h"

#include "history/history_reading.h"

#include <math.h>
#include <string.h>

static const double catalyst_share =
    0.7; /* C, N, O among scaled-solar metals: X_CNO = cno + 0.7 Z (docs/physics.md) */

/* Keys of a term by the laws that use them, as bits of enum lxg_formula_law. */
#define LAW(law) (1u << (unsigned)LXG_FORMULA_##law)
static const struct {
  const char *key;
  unsigned laws;     /* that use it */
  unsigned required; /* that need it */
} uses[] = {
    {"luminosity", LAW(CONSTANT) | LAW(PLATEAU) | LAW(EXPONENTIAL) | LAW(POWER),
     LAW(CONSTANT) | LAW(PLATEAU) | LAW(EXPONENTIAL) | LAW(POWER)},
    {"duration", LAW(PLATEAU), LAW(PLATEAU)},
    {"time_scale", LAW(PLATEAU) | LAW(EXPONENTIAL) | LAW(POWER),
     LAW(PLATEAU) | LAW(EXPONENTIAL) | LAW(POWER)},
    {"index", LAW(PLATEAU) | LAW(POWER), LAW(PLATEAU) | LAW(POWER)},
    {"mass", LAW(DECAY) | LAW(HOT_CNO), LAW(DECAY) | LAW(HOT_CNO)},
    {"hydrogen", LAW(HOT_CNO), 0},
    {"cno", LAW(HOT_CNO), 0},
    {"gamma_time", LAW(DECAY), 0},
    {"gamma_lines", LAW(DECAY), 0},
    {"isotopes", LAW(DECAY), LAW(DECAY)},
};

static enum lxg_status check_uses(struct lxg_node *node, enum lxg_formula_law law, struct lxg_error *error) {
  for (size_t i = 0; i < sizeof uses / sizeof uses[0]; i++) {
    struct lxg_node *child = lxg_node_find(node, uses[i].key);
    if (!lxg_node_is_none(child) && !(uses[i].laws & (1u << (unsigned)law))) {
      return lxg_node_error(child, error, "luminosity-unused", "law %s has no use for it",
                            lxg_formula_law_name(law));
    }
    if (uses[i].required & (1u << (unsigned)law)) {
      const enum lxg_status status = lxg_node_require(node, uses[i].key, &child, error);
      if (status != LXG_OK) {
        return status;
      }
    }
  }
  return LXG_OK;
}

/* An isotope that the user describes, under a name of his own. */
static enum lxg_status read_own_isotope(struct lxg_node *node, struct lxg_formula_isotope *place,
                                        struct lxg_error *error) {
  struct lxg_isotope *isotope = &place->isotope;
  *isotope = (struct lxg_isotope){0};
  enum lxg_status status = lxg_keys_check(node, "luminosity.terms[].isotopes[]", error);
  const struct {
    const char *key;
    double *value;
    bool required;
  } numbers[] = {{"mass_fraction", &place->mass_fraction, true},
                 {"mass_number", &isotope->mass_number, true},
                 {"positrons", &isotope->positrons, false},
                 {"positron_mev", &isotope->positron_mev, false},
                 {"gamma_mev", &isotope->gamma_mev, false}};
  struct lxg_node *child = NULL;
  for (size_t i = 0; i < sizeof numbers / sizeof numbers[0] && status == LXG_OK; i++) {
    status = numbers[i].required ? lxg_node_require(node, numbers[i].key, &child, error) : LXG_OK;
    if (status == LXG_OK) {
      status = lxg_node_get_number(node, numbers[i].key, numbers[i].value, error);
    }
  }
  if (status == LXG_OK) {
    status = lxg_node_require(node, "half_life", &child, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_as_quantity(child, LXG_DIMENSION_TIME, NULL, NULL, &isotope->half_life, error);
  }
  const char *name = lxg_node_key(node);
  const size_t length = strlen(name);
  if (status == LXG_OK && length >= sizeof isotope->name) {
    return lxg_node_error(node, error, "isotope-name", "a name has at most %d characters",
                          (int)sizeof isotope->name - 1);
  }
  if (status == LXG_OK) {
    memcpy(isotope->name, name, length + 1);
    status = lxg_decay_check(isotope, error) == LXG_OK ? LXG_OK : lxg_keys_locate(node, error);
  }
  return status;
}

static enum lxg_status read_isotopes(struct lxg_node *mapping, struct lxg_formula_term *term,
                                     struct lxg_error *error) {
  if (lxg_node_is_none(mapping)) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_node_as_mapping(mapping, error);
  for (struct lxg_node *node = status == LXG_OK ? lxg_node_first(mapping) : NULL;
       node != NULL && status == LXG_OK; node = lxg_node_next(node)) {
    const struct lxg_isotope *isotope = lxg_decay_find(lxg_node_key(node));
    const bool own = lxg_node_kind(node) == LXG_NODE_MAPPING;
    if (isotope == NULL && !own) {
      return lxg_node_error(node, error, "isotope-unknown",
                            "there are 13N, 14O, 15O, 17F, 18F, 22Na and 7Be; describe others by a mapping");
    }
    if (term->isotope_count == LXG_FORMULA_ISOTOPES) {
      return lxg_node_error(node, error, "isotope-many", "at most %d isotopes", (int)LXG_FORMULA_ISOTOPES);
    }
    struct lxg_formula_isotope *place = &term->isotope[term->isotope_count++];
    if (own) {
      status = read_own_isotope(node, place, error);
    } else {
      place->isotope = *isotope;
      status = lxg_node_as_number(node, &place->mass_fraction, error);
    }
  }
  return status;
}

static enum lxg_status read_quantities(struct lxg_node *node, double l_edd, struct lxg_formula_term *term,
                                       struct lxg_error *error) {
  const struct lxg_units_context context = {.eddington_luminosity = l_edd};
  const struct {
    const char *key;
    enum lxg_dimension dimension;
    double *value;
  } quantities[] = {{"origin", LXG_DIMENSION_TIME, &term->origin},
                    {"luminosity", LXG_DIMENSION_LUMINOSITY, &term->luminosity},
                    {"duration", LXG_DIMENSION_TIME, &term->duration},
                    {"time_scale", LXG_DIMENSION_TIME, &term->time_scale},
                    {"mass", LXG_DIMENSION_MASS, &term->mass},
                    {"gamma_time", LXG_DIMENSION_TIME, &term->photons.gamma_time}};
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < sizeof quantities / sizeof quantities[0] && status == LXG_OK; i++) {
    status = lxg_node_get_quantity(node, quantities[i].key, quantities[i].dimension, NULL, &context,
                                   quantities[i].value, error);
  }
  const struct {
    const char *key;
    double *value;
  } numbers[] = {{"index", &term->index}, {"hydrogen", &term->hydrogen}, {"cno", &term->cno}};
  for (size_t i = 0; i < sizeof numbers / sizeof numbers[0] && status == LXG_OK; i++) {
    status = lxg_node_get_number(node, numbers[i].key, numbers[i].value, error);
  }
  return status;
}

static enum lxg_status read_term(struct lxg_node *node, const struct lxg_history_reading *reading,
                                 struct lxg_formula_term *term, struct lxg_error *error) {
  static const char *const laws[] = {"constant", "plateau", "exponential", "power", "decay", "hot_cno"};
  struct lxg_node *law_node = NULL;
  size_t law = 0;
  bool lines = false;
  enum lxg_status status = lxg_keys_check(node, "luminosity.terms[]", error);
  if (status == LXG_OK) {
    status = lxg_node_require(node, "law", &law_node, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_as_word(law_node, laws, sizeof laws / sizeof laws[0], &law, error);
  }
  *term = (struct lxg_formula_term){.law = (enum lxg_formula_law)law,
                                    .hydrogen = reading->composition->hydrogen,
                                    .cno = reading->composition->cno +
                                           catalyst_share * reading->composition->metals,
                                    .photons = {.gamma_time = INFINITY}};
  if (status == LXG_OK) {
    status = check_uses(node, term->law, error);
  }
  if (status == LXG_OK) {
    status = read_quantities(node, reading->l_edd, term, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_bool(node, "gamma_lines", &lines, error);
  }
  term->photons.lines = lines;
  return status == LXG_OK ? read_isotopes(lxg_node_find(node, "isotopes"), term, error) : status;
}

static enum lxg_status read_terms(struct lxg_node *list, const struct lxg_history_reading *reading,
                                  struct lxg_formula *formula, struct lxg_error *error) {
  enum lxg_status status = lxg_node_as_sequence(list, error);
  for (struct lxg_node *node = status == LXG_OK ? lxg_node_first(list) : NULL;
       node != NULL && status == LXG_OK; node = lxg_node_next(node)) {
    if (formula->count == LXG_FORMULA_TERMS) {
      return lxg_node_error(node, error, "formula-many", "at most %d terms", (int)LXG_FORMULA_TERMS);
    }
    status = read_term(node, reading, &formula->term[formula->count++], error);
  }
  return status;
}

enum lxg_status lxg_history_read_formula(struct lxg_node *section, const struct lxg_history_reading *reading,
                                         struct lxg_history **history, struct lxg_error *error) {
  static const char *const places[] = {"base", "photosphere"};
  struct lxg_formula formula = {0};
  struct lxg_node *end_node = NULL, *terms = NULL;
  size_t at = 0;
  double start = 0.0, end = 0.0; /* [s] */
  enum lxg_status status = lxg_node_get_word(section, "at", places, 2, &at, error);
  if (status == LXG_OK) {
    status = lxg_node_get_quantity(section, "start", LXG_DIMENSION_TIME, NULL, NULL, &start, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_require(section, "end", &end_node, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_as_quantity(end_node, LXG_DIMENSION_TIME, NULL, NULL, &end, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_require(section, "terms", &terms, error);
  }
  if (status == LXG_OK) {
    status = read_terms(terms, reading, &formula, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  const enum lxg_history_kind kind = at == 0 ? LXG_HISTORY_BASE : LXG_HISTORY_PHOTOSPHERE;
  status = lxg_history_create_formula(&formula, kind, start, end, history, error);
  return status == LXG_INPUT ? lxg_keys_locate(terms, error) : status;
}
