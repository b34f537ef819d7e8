/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * linefit_read.c - the section `lines.fit` of a case (see linefit.h).
 */
#include "luxgale/constants.h"
#include "luxgale/keys.h"
#include "luxgale/linefit.h"

#include <math.h>

/* Defaults: range of masses around the case's own, factor of the held quantity, nodes of the grid. */
static const double mass_share_low = 0.8, mass_share_high = 1.2, held_factor = 1.4;
static const double dwarf_mass_most = 1.4; /* [Msun]; the radius vanishes at 1.454 */
enum { NODES = 7, NODES_LEAST = 4, NODES_MOST = 64 };

static enum lxg_status read_count(struct lxg_node *section, const char *key, size_t *count,
                                  struct lxg_error *error) {
  long long value = NODES;
  enum lxg_status status = lxg_node_get_integer(section, key, &value, error);
  if (status == LXG_OK) {
    status =
        lxg_node_check_range(lxg_node_find(section, key), (double)value, NODES_LEAST, NODES_MOST, "", error);
  }
  *count = (size_t)value;
  return status;
}

enum lxg_status lxg_linefit_read(struct lxg_node *section, double gm, bool dwarf,
                                 struct lxg_linefit_range *range, bool *asked, bool *follows,
                                 struct lxg_error *error) {
  static const char *const words[] = {"absolute", "eddington"};
  size_t word = 0;
  *asked = !lxg_node_is_none(section);
  *follows = false;
  if (!*asked) {
    return LXG_OK;
  }
  double low = mass_share_low * gm / LXG_GRAVITATION, high = mass_share_high * gm / LXG_GRAVITATION;
  double factor = held_factor;
  if (dwarf) {
    high = fmin(high, fmax(dwarf_mass_most * LXG_SOLAR_MASS, 1.001 * gm / LXG_GRAVITATION));
  }
  enum lxg_status status = lxg_keys_check(section, "lines.fit", error);
  if (status == LXG_OK) {
    status = lxg_node_get_quantity(section, "mass_low", LXG_DIMENSION_MASS, NULL, NULL, &low, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_quantity(section, "mass_high", LXG_DIMENSION_MASS, NULL, NULL, &high, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_number(section, "held_factor", &factor, error);
  }
  if (status == LXG_OK) {
    status = read_count(section, "masses", &range->masses, error);
  }
  if (status == LXG_OK) {
    status = read_count(section, "values", &range->values, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_word(section, "luminosity", words, 2, &word, error);
  }
  *follows = word == 1;
  if (status != LXG_OK) {
    return status;
  }
  const double most = dwarf ? lxg_star_dwarf_limit_msun() * LXG_SOLAR_MASS : INFINITY;
  if (!(low > 0.0 && high > low && high < most)) {
    return lxg_node_error(section, error, "linefit-mass",
                          "masses from %.6g to %.6g Msun: they rise from above 0%s", low / LXG_SOLAR_MASS,
                          high / LXG_SOLAR_MASS, dwarf ? " and stay below the white-dwarf limit" : "");
  }
  if (!(factor > 1.0)) {
    return lxg_node_error(lxg_node_find(section, "held_factor"), error, "value-range", "above 1");
  }
  range->mass_low = low * LXG_GRAVITATION;
  range->mass_high = high * LXG_GRAVITATION;
  range->held_low = 1.0 / factor;
  range->held_high = factor;
  return LXG_OK;
}
