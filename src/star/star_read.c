/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * star_read.c - the section `star` of a case.
 */
#include "luxgale/constants.h"
#include "luxgale/keys.h"
#include "luxgale/star.h"

#include <string.h>

/* Wide enough for any star; outside lies a mistaken unit. */
static const double least_mass_msun = 1e-4, most_mass_msun = 1e4;
static const double least_radius_cm = 1e5, most_radius_cm = 1e5 * LXG_SOLAR_RADIUS;

enum lxg_status lxg_star_read(struct lxg_node *section, struct lxg_star *star, bool *dwarf,
                              struct lxg_error *error) {
  struct lxg_node *mass_node = NULL;
  double mass = 0.0; /* [g] */
  enum lxg_status status = lxg_keys_check(section, "star", error);
  if (status == LXG_OK) {
    status = lxg_node_require(section, "mass", &mass_node, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_as_quantity(mass_node, LXG_DIMENSION_MASS, NULL, NULL, &mass, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_check_range(mass_node, mass / LXG_SOLAR_MASS, least_mass_msun, most_mass_msun, "Msun",
                                  error);
  }
  if (status != LXG_OK) {
    return status;
  }
  star->gm = mass / LXG_SOLAR_MASS * LXG_SOLAR_GM;
  struct lxg_node *radius = lxg_node_find(section, "radius");
  const char *text = lxg_node_text(radius);
  *dwarf = lxg_node_is_none(radius) || (text != NULL && strcmp(text, "white-dwarf") == 0);
  if (*dwarf) {
    status = lxg_star_dwarf_radius(mass, &star->radius, error);
    return status == LXG_INPUT ? lxg_keys_locate(mass_node, error) : status;
  }
  status = lxg_node_as_quantity(radius, LXG_DIMENSION_LENGTH, NULL, NULL, &star->radius, error);
  return status != LXG_OK
             ? status
             : lxg_node_check_range(radius, star->radius, least_radius_cm, most_radius_cm, "cm", error);
}
