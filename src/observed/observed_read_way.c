/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * observed_read_way.c - distance, extinction, and the keys of each way from a magnitude to a wind (see observed.h).
 */
#include "luxgale/constants.h"
#include "luxgale/keys.h"
#include "luxgale/memory.h"
#include "luxgale/table.h"

#include "observed/observed_internal.h"

#include <math.h>

static const double mas = LXG_PI / (180.0 * 3600.0 * 1000.0); /* milliarcsecond [radian] */
static const double standard_r_v = 3.1; /* diffuse interstellar medium, Cardelli et al. 1989 */

static enum lxg_status get(struct lxg_node *section, const char *key, enum lxg_dimension dimension,
                           const char *unit, double factor, double *value, struct lxg_error *error) {
  double cgs = *value * factor;
  const enum lxg_status status = lxg_node_get_quantity(section, key, dimension, unit, NULL, &cgs, error);
  *value = cgs / factor;
  return status;
}

static bool given(struct lxg_node *section, const char *key) {
  return !lxg_node_is_none(lxg_node_find(section, key));
}

/* Gives an error of a module its place in the case. */
static enum lxg_status placed(enum lxg_status status, const struct lxg_node *node, struct lxg_error *error) {
  return status == LXG_INPUT ? lxg_keys_locate(node, error) : status;
}

static enum lxg_status init_distance(struct lxg_node *section, const struct lxg_node *node,
                                     struct lxg_distance *distance, struct lxg_error *error) {
  double value = NAN, sigma = 0.0, length = lxg_distance_default_length_pc();
  enum lxg_status status = LXG_OK;
  if (given(section, "distance")) {
    status = get(section, "distance", LXG_DIMENSION_LENGTH, "kpc", LXG_PARSEC, &value, error);
    if (status == LXG_OK) {
      status = get(section, "distance_error", LXG_DIMENSION_LENGTH, "kpc", LXG_PARSEC, &sigma, error);
    }
    return status == LXG_OK ? placed(lxg_distance_init_given(value, sigma, distance, error), node, error)
                            : status;
  }
  if (given(section, "distance_modulus")) {
    status = get(section, "distance_modulus", LXG_DIMENSION_MAGNITUDE, NULL, 1.0, &value, error);
    if (status == LXG_OK) {
      status = get(section, "distance_modulus_error", LXG_DIMENSION_MAGNITUDE, NULL, 1.0, &sigma, error);
    }
    return status == LXG_OK ? placed(lxg_distance_init_modulus(value, sigma, distance, error), node, error)
                            : status;
  }
  status = get(section, "parallax", LXG_DIMENSION_ANGLE, "mas", mas, &value, error);
  if (status == LXG_OK) {
    status = get(section, "parallax_error", LXG_DIMENSION_ANGLE, "mas", mas, &sigma, error);
  }
  if (status == LXG_OK) {
    status = get(section, "parallax_length", LXG_DIMENSION_LENGTH, "pc", LXG_PARSEC, &length, error);
  }
  return status == LXG_OK
             ? placed(lxg_distance_init_parallax(value, sigma, length, distance, error), node, error)
             : status;
}

static enum lxg_status read_distance(struct lxg_node *section, struct lxg_observed *observed,
                                     struct lxg_error *error) {
  static const char *const keys[] = {"distance", "distance_modulus", "parallax"};
  struct lxg_node *node = section;
  int count = 0;
  for (size_t i = 0; i < 3; i++) {
    if (given(section, keys[i])) {
      node = lxg_node_find(section, keys[i]);
      count++;
    }
  }
  if (count != 1) {
    return lxg_node_error(section, error, "luminosity-distance",
                          "%d distances: exactly one of distance, distance_modulus, parallax is needed",
                          count);
  }
  return init_distance(section, node, &observed->distance, error);
}

static enum lxg_status read_extinction(struct lxg_node *section, struct lxg_observed *observed,
                                       struct lxg_error *error) {
  const bool ebv = given(section, "ebv"), a_v = given(section, "a_v");
  observed->r_v = standard_r_v;
  if (ebv == a_v) {
    return lxg_node_error(section, error, "luminosity-extinction",
                          "%s: exactly one of ebv and a_v is needed (0 for none)",
                          ebv ? "two extinctions" : "no extinction");
  }
  struct lxg_node *node = lxg_node_find(section, ebv ? "ebv" : "a_v");
  enum lxg_status status = lxg_node_get_number(section, "r_v", &observed->r_v, error);
  if (status == LXG_OK) {
    status = get(section, ebv ? "ebv" : "a_v", LXG_DIMENSION_MAGNITUDE, NULL, 1.0, &observed->a_v, error);
  }
  if (status == LXG_OK) {
    status = get(section, ebv ? "ebv_error" : "a_v_error", LXG_DIMENSION_MAGNITUDE, NULL, 1.0,
                 &observed->a_v_error, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_check_range(lxg_node_find(section, ebv ? "ebv_error" : "a_v_error"),
                                  observed->a_v_error, 0.0, 10.0, "mag", error);
  }
  if (status != LXG_OK) {
    return status;
  }
  if (ebv) {
    observed->a_v *= observed->r_v;
    observed->a_v_error *= observed->r_v;
  }
  status = lxg_extinction_band(observed->band, observed->a_v, observed->r_v, &observed->a_band, error);
  if (status == LXG_OK) {
    status = lxg_extinction_band(observed->band, 1.0, observed->r_v, &observed->a_ratio, error);
  }
  return status == LXG_INPUT ? lxg_keys_locate(node, error) : status;
}

enum lxg_status lxg_observed_read_calibration(struct lxg_node *section, struct lxg_observed *observed,
                                              struct lxg_error *error) {
  enum lxg_status status = read_distance(section, observed, error);
  if (status == LXG_OK) {
    status = read_extinction(section, observed, error);
  }
  if (status == LXG_OK) {
    status = get(section, "zero_point_error", LXG_DIMENSION_MAGNITUDE, NULL, 1.0, &observed->zero_point_error,
                 error);
  }
  return status == LXG_OK ? lxg_node_check_range(lxg_node_find(section, "zero_point_error"),
                                                 observed->zero_point_error, 0.0, 5.0, "mag", error)
                          : status;
}

/* Gas of the free-free light: of the wind's own composition, singly ionised helium and metals unless stated. */
static enum lxg_status read_gas(struct lxg_node *section, const struct lxg_composition *composition,
                                struct lxg_observed *observed, struct lxg_error *error) {
  const double any_temperature = 1e4; /* [K] replaced by the photosphere's unless stated */
  double helium = 1.0, metals = 1.0;
  struct lxg_light_options *light = &observed->light;
  enum lxg_status status =
      get(section, "gas_temperature", LXG_DIMENSION_TEMPERATURE, NULL, 1.0, &light->gas_temperature, error);
  if (status == LXG_OK && given(section, "gas_temperature") && !(light->gas_temperature > 0.0)) {
    return lxg_node_error(lxg_node_find(section, "gas_temperature"), error, "freefree-temperature",
                          "above zero");
  }
  if (status == LXG_OK) {
    status = lxg_node_get_number(section, "helium_charge", &helium, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_number(section, "metal_charge", &metals, error);
  }
  if (status == LXG_OK) {
    status = lxg_freefree_gas_init(composition,
                                   light->gas_temperature > 0.0 ? light->gas_temperature : any_temperature,
                                   helium, metals, &light->gas, error);
    return status == LXG_INPUT ? lxg_keys_locate(section, error) : status;
  }
  return status;
}

/* A table with time_d and correction. */
static enum lxg_status read_correction_table(struct lxg_node *node, struct lxg_files *files,
                                             struct lxg_observed *observed, struct lxg_error *error) {
  const char *name = NULL;
  char *path = NULL;
  struct lxg_table *table = NULL;
  enum lxg_status status = lxg_node_as_text(node, &name, error);
  if (status == LXG_OK) {
    status = lxg_files_resolve(files, name, &path, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_read(path, NULL, &table, error);
  }
  if (status == LXG_OK) {
    status = lxg_files_record(files, "luminosity.correction_file", name, table->checksum, error);
  }
  if (status == LXG_OK) {
    status =
        lxg_table_cgs(table, "time_d", LXG_DIMENSION_TIME, "d", NULL, false, &observed->table_time, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_cgs(table, "correction", LXG_DIMENSION_MAGNITUDE, "mag", NULL, false,
                           &observed->table_value, error);
  }
  if (status == LXG_OK) {
    for (size_t i = 0; i < table->rows; i++) {
      observed->table_time[i] /= LXG_DAY;
    }
    observed->correction = (struct lxg_bolometric){.kind = LXG_BOLOMETRIC_TABLE,
                                                   .count = table->rows,
                                                   .keys = observed->table_time,
                                                   .corrections = observed->table_value};
    status = lxg_bolometric_check(&observed->correction, error);
    status = status == LXG_INPUT ? lxg_keys_locate(node, error) : status;
  }
  lxg_table_destroy(table);
  lxg_free(path);
  return status;
}

/* The black body behind a temperature or an unreddened B - V. */
static enum lxg_status read_correction_blackbody(struct lxg_node *section, struct lxg_observed *observed,
                                                 struct lxg_error *error) {
  double *temperature = &observed->correction_temperature;
  struct lxg_node *colour = lxg_node_find(section, "correction_colour");
  double value = 0.0;
  observed->correction.kind = LXG_BOLOMETRIC_BLACKBODY;
  if (lxg_node_is_none(colour)) {
    enum lxg_status status =
        get(section, "correction_temperature", LXG_DIMENSION_TEMPERATURE, NULL, 1.0, temperature, error);
    return status == LXG_OK ? lxg_node_check_range(lxg_node_find(section, "correction_temperature"),
                                                   *temperature, 1e3, 1e6, "K", error)
                            : status;
  }
  enum lxg_status status = lxg_node_as_quantity(colour, LXG_DIMENSION_MAGNITUDE, NULL, NULL, &value, error);
  if (status == LXG_OK) {
    status = lxg_photometry_colour_temperature(LXG_BAND_B, LXG_BAND_V, value, lxg_photometry_default_range(),
                                               temperature, error);
    if (status == LXG_NO_SOLUTION) {
      return lxg_node_error(colour, error, "luminosity-correction", "no black body has this B - V");
    }
  }
  return status;
}

static enum lxg_status read_correction(struct lxg_node *section, struct lxg_files *files,
                                       struct lxg_observed *observed, struct lxg_error *error) {
  static const char *const keys[] = {"correction", "correction_temperature", "correction_colour",
                                     "correction_file"};
  int count = 0;
  for (size_t i = 0; i < 4; i++) {
    count += given(section, keys[i]);
  }
  if (count != 1) {
    return lxg_node_error(section, error, "luminosity-correction",
                          "%d given: light correction needs exactly one of correction, "
                          "correction_temperature, correction_colour, correction_file",
                          count);
  }
  if (given(section, "correction_file")) {
    return read_correction_table(lxg_node_find(section, "correction_file"), files, observed, error);
  }
  if (given(section, "correction")) {
    observed->correction.kind = LXG_BOLOMETRIC_GIVEN;
    return get(section, "correction", LXG_DIMENSION_MAGNITUDE, NULL, 1.0, &observed->correction.correction,
               error);
  }
  return read_correction_blackbody(section, observed, error);
}

/* Keys of another way would be silently without effect. */
static enum lxg_status refuse_keys(struct lxg_node *section, enum lxg_observed_way way,
                                   struct lxg_error *error) {
  static const struct {
    const char *key;
    unsigned ways; /* bits of those that use it */
  } uses[] = {
      {"gas_temperature", 1u << LXG_OBSERVED_FREEFREE | 1u << LXG_OBSERVED_LARGER},
      {"helium_charge", 1u << LXG_OBSERVED_FREEFREE | 1u << LXG_OBSERVED_LARGER | 1u << LXG_OBSERVED_WHOLE},
      {"metal_charge", 1u << LXG_OBSERVED_FREEFREE | 1u << LXG_OBSERVED_LARGER | 1u << LXG_OBSERVED_WHOLE},
      {"correction", 1u << LXG_OBSERVED_CORRECTION},
      {"correction_temperature", 1u << LXG_OBSERVED_CORRECTION},
      {"correction_colour", 1u << LXG_OBSERVED_CORRECTION},
      {"correction_file", 1u << LXG_OBSERVED_CORRECTION},
      {"together", 1u << LXG_OBSERVED_COLOURS}};
  for (size_t i = 0; i < sizeof uses / sizeof uses[0]; i++) {
    if (given(section, uses[i].key) && !(uses[i].ways & (1u << (unsigned)way))) {
      return lxg_node_error(lxg_node_find(section, uses[i].key), error, "luminosity-unused",
                            "light %s has no use for it", lxg_observed_way_name(way));
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_observed_read_way(struct lxg_node *section, struct lxg_files *files,
                                      const struct lxg_composition *composition,
                                      struct lxg_observed *observed, struct lxg_error *error) {
  const char *names[LXG_OBSERVED_WAYS];
  for (int i = 0; i < LXG_OBSERVED_WAYS; i++) {
    names[i] = lxg_observed_way_name((enum lxg_observed_way)i);
  }
  size_t way = LXG_OBSERVED_PHOTOSPHERE;
  enum lxg_status status = lxg_node_get_word(section, "light", names, LXG_OBSERVED_WAYS, &way, error);
  observed->way = (enum lxg_observed_way)way;
  if (status == LXG_OK) {
    status = refuse_keys(section, observed->way, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  if (observed->way == LXG_OBSERVED_CORRECTION) {
    return read_correction(section, files, observed, error);
  }
  if (observed->way == LXG_OBSERVED_COLOURS) {
    double together = 0.5 * LXG_DAY;
    status = lxg_node_get_quantity(section, "together", LXG_DIMENSION_TIME, NULL, NULL, &together, error);
    observed->together = together / LXG_DAY;
    return status == LXG_OK ? lxg_node_check_range(lxg_node_find(section, "together"), observed->together,
                                                   0.0, 1e3, "d", error)
                            : status;
  }
  observed->light.light = (enum lxg_light)observed->way;
  return read_gas(section, composition, observed, error);
}
