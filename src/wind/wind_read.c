/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_read.c - the section `hold` of a case.
 */
#include "luxgale/keys.h"
#include "luxgale/wind.h"

#include <string.h>

enum lxg_dimension lxg_held_dimension(enum lxg_held quantity) {
  static const enum lxg_dimension dimensions[LXG_HELD_COUNT] = {
      [LXG_HELD_BASE_TEMPERATURE] = LXG_DIMENSION_TEMPERATURE,
      [LXG_HELD_BASE_LUMINOSITY] = LXG_DIMENSION_LUMINOSITY,
      [LXG_HELD_LAUNCH_RADIUS] = LXG_DIMENSION_LENGTH,
      [LXG_HELD_PHOTOSPHERE_LUMINOSITY] = LXG_DIMENSION_LUMINOSITY,
      [LXG_HELD_PHOTOSPHERE_TEMPERATURE] = LXG_DIMENSION_TEMPERATURE,
      [LXG_HELD_PHOTOSPHERE_RADIUS] = LXG_DIMENSION_LENGTH,
      [LXG_HELD_TERMINAL_SPEED] = LXG_DIMENSION_SPEED,
      [LXG_HELD_MASS_LOSS_RATE] = LXG_DIMENSION_MASS_RATE,
      [LXG_HELD_ENERGY_RATE] = LXG_DIMENSION_LUMINOSITY,
      [LXG_HELD_ENVELOPE_MASS] = LXG_DIMENSION_MASS};
  return (size_t)quantity < LXG_HELD_COUNT ? dimensions[quantity] : LXG_DIMENSION_NONE;
}

static enum lxg_status read_one(struct lxg_node *node, const struct lxg_star *star, double l_edd,
                                struct lxg_wind_hold *hold, struct lxg_error *error) {
  size_t quantity = 0;
  while (strcmp(lxg_held_name((enum lxg_held)quantity), lxg_node_key(node)) != 0) {
    quantity++; /* ends: the section's keys were checked */
  }
  hold->quantity = (enum lxg_held)quantity;
  const struct lxg_units_context context = {.eddington_luminosity = l_edd};
  const enum lxg_status status =
      lxg_node_as_quantity(node, lxg_held_dimension(hold->quantity), NULL, &context, &hold->value, error);
  if (status != LXG_OK) {
    return status;
  }
  if (hold->quantity != LXG_HELD_ENERGY_RATE && !(hold->value > 0.0)) {
    return lxg_node_error(node, error, "hold-value", "a held quantity is above zero");
  }
  if (hold->quantity == LXG_HELD_LAUNCH_RADIUS && !(hold->value > star->radius)) {
    return lxg_node_error(node, error, "hold-launch-radius",
                          "it lies outside the star, whose radius is %.6g cm", star->radius);
  }
  return LXG_OK;
}

enum lxg_status lxg_wind_hold_read(struct lxg_node *section, const struct lxg_star *star, double l_edd,
                                   struct lxg_wind_hold hold[2], size_t *count, struct lxg_error *error) {
  *count = 0;
  enum lxg_status status = lxg_keys_check(section, "hold", error);
  for (struct lxg_node *node = lxg_node_first(section); node != NULL && status == LXG_OK;
       node = lxg_node_next(node)) {
    if (lxg_node_is_none(node)) {
      continue; /* null: not held */
    }
    if (*count == 2) {
      return lxg_node_error(node, error, "hold-many",
                            "two quantities are held already: more than two cannot be");
    }
    status = read_one(node, star, l_edd, &hold[*count], error);
    *count += status == LXG_OK;
  }
  return status;
}
