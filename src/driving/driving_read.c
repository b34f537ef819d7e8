/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * driving_read.c - the section `driving` of a case: what somebody says was ejected.
 */
#include "luxgale/constants.h"
#include "luxgale/driving.h"
#include "luxgale/keys.h"

/* A positive quantity and its bounds, value plus and minus the standard error. */
static enum lxg_status read_pair(struct lxg_node *section, const char *key, const char *error_key,
                                 enum lxg_dimension dimension, double *value, double *low, double *high,
                                 struct lxg_error *error) {
  struct lxg_node *node = NULL;
  double sigma = 0.0;
  enum lxg_status status = lxg_node_require(section, key, &node, error);
  if (status == LXG_OK) {
    status = lxg_node_as_quantity(node, dimension, NULL, NULL, value, error);
  }
  if (status == LXG_OK && !(*value > 0.0)) {
    return lxg_node_error(node, error, "driving-claim", "it is above zero");
  }
  if (status == LXG_OK) {
    status = lxg_node_get_quantity(section, error_key, dimension, NULL, NULL, &sigma, error);
  }
  if (status == LXG_OK && !(sigma >= 0.0 && sigma < *value)) {
    return lxg_node_error(lxg_node_find(section, error_key), error, "driving-claim",
                          "a standard error is 0 or more and below its value");
  }
  *low = *value - sigma;
  *high = *value + sigma;
  return status;
}

enum lxg_status lxg_driving_read(struct lxg_node *section, bool *given, struct lxg_driving_claim *claim,
                                 struct lxg_error *error) {
  *given = !lxg_node_is_none(section);
  *claim = (struct lxg_driving_claim){0};
  if (!*given) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_keys_check(section, "driving", error);
  if (status == LXG_OK) {
    status = read_pair(section, "mass", "mass_error", LXG_DIMENSION_MASS, &claim->mass, &claim->mass_low,
                       &claim->mass_high, error);
  }
  if (status == LXG_OK) {
    status = read_pair(section, "speed", "speed_error", LXG_DIMENSION_SPEED, &claim->speed, &claim->speed_low,
                       &claim->speed_high, error);
  }
  if (status == LXG_OK && !(claim->speed_high < LXG_SPEED_OF_LIGHT)) {
    return lxg_node_error(lxg_node_find(section, "speed"), error, "driving-claim",
                          "it is below the speed of light");
  }
  return status;
}
