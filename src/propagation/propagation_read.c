/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * propagation_read.c - the section `errors` of a case: an error stands under the same path as what it belongs to.
 */
#include "luxgale/constants.h"
#include "luxgale/keys.h"
#include "luxgale/propagation.h"

#include <string.h>

static const long long standard_draws = 1000, standard_split = 1000, standard_seed = 1;

static enum lxg_status read_counts(struct lxg_node *section, const struct lxg_settings *settings,
                                   struct lxg_propagation_plan *plan, struct lxg_error *error) {
  long long draws = standard_draws, seed = standard_seed;
  const double most = (double)settings->draws_maximum;
  enum lxg_status status = lxg_node_get_integer(section, "draws", &draws, error);
  if (status == LXG_OK) {
    status = lxg_node_check_range(lxg_node_find(section, "draws"), (double)draws, 2.0, most, "", error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_integer(section, "seed", &seed, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_check_range(lxg_node_find(section, "seed"), (double)seed, 0.0, 9e18, "", error);
  }
  long long split = draws < standard_split ? draws : standard_split;
  if (status == LXG_OK) {
    status = lxg_node_get_integer(section, "split_draws", &split, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_check_range(lxg_node_find(section, "split_draws"), (double)split, 0.0, (double)draws,
                                  "", error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_number(section, "luminosity_scale", &plan->luminosity_scale, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_check_range(lxg_node_find(section, "luminosity_scale"), plan->luminosity_scale, 0.0,
                                  1.0, "", error);
  }
  plan->draws = (size_t)draws;
  plan->split_draws = (size_t)split;
  plan->seed = (uint64_t)seed;
  return status;
}

/* One sigma above zero; absent: 0. */
static enum lxg_status read_sigma(struct lxg_node *section, const char *key, enum lxg_dimension dimension,
                                  double *sigma, struct lxg_error *error) {
  struct lxg_node *node = lxg_node_find(section, key);
  if (lxg_node_is_none(node)) {
    return LXG_OK;
  }
  const enum lxg_status status = lxg_node_as_quantity(node, dimension, NULL, NULL, sigma, error);
  if (status == LXG_OK && !(*sigma > 0.0)) {
    return lxg_node_error(node, error, "errors-sigma", "an error is above zero; leave out what is exact");
  }
  return status;
}

static enum lxg_status read_star(struct lxg_node *section, bool dwarf, struct lxg_propagation_plan *plan,
                                 struct lxg_error *error) {
  enum lxg_status status = lxg_keys_check(section, "errors.star", error);
  if (status == LXG_OK) {
    status = read_sigma(section, "mass", LXG_DIMENSION_MASS, &plan->sigma[LXG_PROPAGATION_MASS], error);
  }
  if (status == LXG_OK && dwarf && !lxg_node_is_none(lxg_node_find(section, "radius"))) {
    return lxg_node_error(lxg_node_find(section, "radius"), error, "errors-radius",
                          "the radius of a white dwarf follows its mass");
  }
  return status == LXG_OK ? read_sigma(section, "radius", LXG_DIMENSION_LENGTH,
                                       &plan->sigma[LXG_PROPAGATION_RADIUS], error)
                          : status;
}

static enum lxg_status read_composition(struct lxg_node *section, struct lxg_propagation_plan *plan,
                                        struct lxg_error *error) {
  static const char *const keys[] = {"hydrogen", "cno", "metals"};
  enum lxg_status status = lxg_keys_check(section, "errors.composition", error);
  for (size_t i = 0; i < 3 && status == LXG_OK; i++) {
    status =
        read_sigma(section, keys[i], LXG_DIMENSION_NONE, &plan->sigma[LXG_PROPAGATION_HYDROGEN + i], error);
  }
  return status;
}

static enum lxg_status read_hold(struct lxg_node *section, const struct lxg_wind_hold hold[], size_t holds,
                                 struct lxg_propagation_plan *plan, struct lxg_error *error) {
  enum lxg_status status = lxg_keys_check(section, "errors.hold", error);
  for (struct lxg_node *node = lxg_node_first(section); node != NULL && status == LXG_OK;
       node = lxg_node_next(node)) {
    if (holds != 1 || strcmp(lxg_node_key(node), lxg_held_name(hold[0].quantity)) != 0) {
      return lxg_node_error(node, error, "errors-unheld", "the case does not hold it%s",
                            holds == 2 ? " alone" : "");
    }
    status = read_sigma(section, lxg_node_key(node), lxg_held_dimension(hold[0].quantity),
                        &plan->sigma[LXG_PROPAGATION_HELD], error);
  }
  return status;
}

enum lxg_status lxg_propagation_read(struct lxg_node *section, const struct lxg_settings *settings,
                                     bool dwarf, const struct lxg_wind_hold hold[], size_t holds,
                                     struct lxg_propagation_plan *plan, struct lxg_error *error) {
  *plan = (struct lxg_propagation_plan){0};
  if (lxg_node_is_none(section)) {
    return LXG_OK;
  }
  plan->wanted = true;
  enum lxg_status status = lxg_keys_check(section, "errors", error);
  if (status == LXG_OK) {
    status = read_counts(section, settings, plan, error);
  }
  if (status == LXG_OK) {
    status = read_star(lxg_node_find(section, "star"), dwarf, plan, error);
  }
  if (status == LXG_OK) {
    status = read_composition(lxg_node_find(section, "composition"), plan, error);
  }
  return status == LXG_OK ? read_hold(lxg_node_find(section, "hold"), hold, holds, plan, error) : status;
}
