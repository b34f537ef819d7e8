/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * mass_read.c - the section `mass` of a case (see mass.h).
 */
#include "luxgale/keys.h"
#include "luxgale/mass.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { KEY_SIZE = 64 };
static const double jansky = 1e-23; /* [erg s^-1 cm^-2 Hz^-1]: mass.h takes radio fluxes in Jy */
static const char luminosity_key[] = "photosphere_luminosity";

/* Dimension of a key of the section. */
static enum lxg_dimension dimension_of(const char *key) {
  for (size_t i = 0; i < lxg_keys_count(); i++) {
    const struct lxg_key *row = lxg_keys_row(i);
    if (strcmp(row->section, "mass") == 0 && strcmp(row->name, key) == 0) {
      return row->dimension;
    }
  }
  return LXG_DIMENSION_COUNT; /* no such key: the star and its composition give it */
}

static enum lxg_status get(struct lxg_node *section, const char *key, enum lxg_dimension dimension,
                           const struct lxg_units_context *context, double *value, struct lxg_error *error) {
  return dimension == LXG_DIMENSION_NONE
             ? lxg_node_get_number(section, key, value, error)
             : lxg_node_get_quantity(section, key, dimension, NULL, context, value, error);
}

/* A quantity and its error. */
static enum lxg_status read_one(struct lxg_node *section, const char *key,
                                const struct lxg_units_context *context, struct lxg_mass_datum *datum,
                                struct lxg_error *error) {
  const enum lxg_dimension dimension = dimension_of(key);
  char error_key[KEY_SIZE];
  snprintf(error_key, sizeof error_key, "%s_error", key);
  double value = NAN, sigma = NAN;
  enum lxg_status status = get(section, key, dimension, context, &value, error);
  if (status == LXG_OK) {
    status = get(section, error_key, dimension, context, &sigma, error);
  }
  if (status != LXG_OK || (isnan(value) && isnan(sigma))) {
    return status;
  }
  if (isnan(value)) {
    return lxg_node_error(lxg_node_find(section, error_key), error, "mass-error-alone",
                          "an error without its quantity %s", key);
  }
  if (!isnan(sigma) && !(sigma >= 0.0)) {
    return lxg_node_error(lxg_node_find(section, error_key), error, "mass-error", "0 or more");
  }
  *datum = (struct lxg_mass_datum){value, isnan(sigma) ? 0.0 : sigma, true};
  return LXG_OK;
}

enum lxg_status lxg_mass_read(struct lxg_node *section, double l_edd, struct lxg_mass_section *read,
                              struct lxg_error *error) {
  *read = (struct lxg_mass_section){.present = !lxg_node_is_none(section)};
  const struct lxg_units_context context = {.eddington_luminosity = l_edd};
  if (!read->present) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_keys_check(section, "mass", error);
  for (int q = 0; q < LXG_MASS_QUANTITIES && status == LXG_OK; q++) {
    const char *key = lxg_mass_quantity_name((enum lxg_mass_quantity)q);
    struct lxg_mass_datum datum = {0};
    if (dimension_of(key) == LXG_DIMENSION_COUNT) {
      continue;
    }
    status = read_one(section, key, &context, &datum, error);
    if (status == LXG_OK && datum.given) {
      const double unit = q == LXG_MASS_RADIO_FLUX ? jansky : 1.0;
      status = lxg_mass_give(&read->data, (enum lxg_mass_quantity)q, datum.value / unit, datum.error / unit,
                             error);
      if (status != LXG_OK) {
        return lxg_keys_locate(lxg_node_find(section, key), error);
      }
    }
  }
  if (status == LXG_OK) {
    status = read_one(section, luminosity_key, &context, &read->photosphere_luminosity, error);
  }
  if (status == LXG_OK && read->photosphere_luminosity.given && !(read->photosphere_luminosity.value > 0.0)) {
    return lxg_node_error(lxg_node_find(section, luminosity_key), error, "mass-value", "above 0");
  }
  return status;
}
