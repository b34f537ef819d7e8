/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decline_read.c - the section `decline` of a case: where the eruption starts, what feeds it, where it stops.
 */
#include "luxgale/decline.h"
#include "luxgale/keys.h"

#include <math.h>

/* A quantity that lies above zero if it is given. */
static enum lxg_status read_positive(struct lxg_node *section, const char *key, enum lxg_dimension dimension,
                                     bool *given, double *value, struct lxg_error *error) {
  struct lxg_node *node = lxg_node_find(section, key);
  *given = !lxg_node_is_none(node);
  if (!*given) {
    return LXG_OK;
  }
  const enum lxg_status status = lxg_node_as_quantity(node, dimension, NULL, NULL, value, error);
  if (status == LXG_OK && !(*value > 0.0)) {
    return lxg_node_error(node, error, "value-range", "it lies above zero");
  }
  return status;
}

/* A quantity of zero or more. */
static enum lxg_status read_nonnegative(struct lxg_node *section, const char *key,
                                        enum lxg_dimension dimension, double *value,
                                        struct lxg_error *error) {
  struct lxg_node *node = lxg_node_find(section, key);
  const enum lxg_status status = lxg_node_get_quantity(section, key, dimension, NULL, NULL, value, error);
  if (status == LXG_OK && !lxg_node_is_none(node) && !(*value >= 0.0)) {
    return lxg_node_error(node, error, "value-range", "it is zero or more");
  }
  return status;
}

static enum lxg_status read_start(struct lxg_node *section, struct lxg_decline_options *options,
                                  struct lxg_error *error) {
  bool mass = false, temperature = false;
  double value = 0.0;
  enum lxg_status status = read_positive(section, "start_mass", LXG_DIMENSION_MASS, &mass, &value, error);
  if (status == LXG_OK && mass) {
    options->start = LXG_DECLINE_START_MASS;
    options->start_value = value;
  }
  if (status == LXG_OK) {
    status =
        read_positive(section, "start_temperature", LXG_DIMENSION_TEMPERATURE, &temperature, &value, error);
  }
  if (status == LXG_OK && temperature) {
    if (mass) {
      return lxg_node_error(lxg_node_find(section, "start_temperature"), error, "decline-start",
                            "start_mass is given already: one of the two");
    }
    options->start = LXG_DECLINE_START_TEMPERATURE;
    options->start_value = value;
  }
  return status;
}

static enum lxg_status read_stop(struct lxg_node *section, struct lxg_decline_options *options,
                                 struct lxg_error *error) {
  static const char *const stops[] = {"turn-off", "wind-end"};
  bool given = false;
  size_t stop = 0;
  enum lxg_status status =
      read_positive(section, "stop_time", LXG_DIMENSION_TIME, &given, &options->time_most, error);
  if (status == LXG_OK) {
    status = read_positive(section, "stop_mass", LXG_DIMENSION_MASS, &given, &options->mass_least, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_word(section, "stop", stops, 2, &stop, error);
  }
  options->wind_only = stop == 1;
  return status;
}

enum lxg_status lxg_decline_read(struct lxg_node *section, double ignition_pressure,
                                 struct lxg_decline_options *options, struct lxg_error *error) {
  *options = lxg_decline_options_default();
  options->start_value = ignition_pressure;
  bool given = false;
  enum lxg_status status = lxg_keys_check(section, "decline", error);
  if (status == LXG_OK) {
    status = read_start(section, options, error);
  }
  if (status == LXG_OK) {
    status =
        read_nonnegative(section, "accretion_rate", LXG_DIMENSION_MASS_RATE, &options->accretion_rate, error);
  }
  if (status == LXG_OK) {
    status = read_stop(section, options, error);
  }
  if (status == LXG_OK) {
    status = read_positive(section, "gas_temperature", LXG_DIMENSION_TEMPERATURE, &given,
                           &options->gas_temperature, error);
  }
  if (status == LXG_OK) {
    status = read_nonnegative(section, "rise_time", LXG_DIMENSION_TIME, &options->rise, error);
  }
  return status;
}
