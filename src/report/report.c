/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report.c - head of a report, the star, warnings, and the units of held quantities (see report.h).
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

const char *lxg_report_version(void) {
  return LXG_VERSION;
}

enum lxg_status lxg_report_create(const char *command, struct lxg_document **report,
                                  struct lxg_error *error) {
  const enum lxg_status status = lxg_document_create("report", report, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_node *program = lxg_node_add_mapping(lxg_document_root(*report), "program");
  lxg_node_add_text(program, "name", "luxgale");
  lxg_node_add_text(program, "version", LXG_VERSION);
  lxg_node_add_text(program, "command", command);
  return LXG_OK;
}

void lxg_report_star(struct lxg_node *root, const struct lxg_star *star,
                     const struct lxg_composition *composition, double ignition_pressure) {
  const double l_edd = lxg_star_eddington_luminosity(star, composition);
  struct lxg_node *section = lxg_node_add_mapping(root, "star");
  lxg_node_add_number(section, "mass_msun", star->gm / LXG_SOLAR_GM);
  lxg_node_add_number(section, "radius_cm", star->radius);
  lxg_node_add_number(section, "eddington_luminosity_erg_s", l_edd);
  lxg_node_add_number(section, "escape_speed_km_s", lxg_star_escape_speed(star) / LXG_KM);
  lxg_node_add_number(section, "tiring_rate_msun_yr", lxg_star_tiring_rate(star, l_edd) / REPORT_MSUN_YR);
  lxg_node_add_number(section, "ignition_mass_msun",
                      lxg_star_envelope_mass(star, ignition_pressure) / LXG_SOLAR_MASS);
}

struct lxg_node *lxg_report_warnings(struct lxg_node *root) {
  return lxg_node_add_sequence(root, "warnings");
}

struct lxg_node *lxg_report_warn(struct lxg_node *warnings, const char *code, const char *message) {
  struct lxg_node *warning = lxg_node_add_mapping(warnings, NULL);
  lxg_node_add_text(warning, "code", code);
  lxg_node_add_text(warning, "message", message);
  return warning;
}

const struct report_unit *lxg_report_unit(enum lxg_held quantity) {
  static const struct report_unit units[LXG_HELD_COUNT] = {
      [LXG_HELD_BASE_TEMPERATURE] = {"base_temperature_k", "K", 1.0},
      [LXG_HELD_BASE_LUMINOSITY] = {"base_luminosity_erg_s", "erg/s", 1.0},
      [LXG_HELD_LAUNCH_RADIUS] = {"launch_radius_cm", "cm", 1.0},
      [LXG_HELD_PHOTOSPHERE_LUMINOSITY] = {"photosphere_luminosity_erg_s", "erg/s", 1.0},
      [LXG_HELD_PHOTOSPHERE_TEMPERATURE] = {"photosphere_temperature_k", "K", 1.0},
      [LXG_HELD_PHOTOSPHERE_RADIUS] = {"photosphere_radius_rsun", "Rsun", LXG_SOLAR_RADIUS},
      [LXG_HELD_TERMINAL_SPEED] = {"terminal_speed_km_s", "km/s", LXG_KM},
      [LXG_HELD_MASS_LOSS_RATE] = {"mass_loss_rate_msun_yr", "Msun/yr", REPORT_MSUN_YR},
      [LXG_HELD_ENERGY_RATE] = {"energy_rate_erg_s", "erg/s", 1.0},
      [LXG_HELD_ENVELOPE_MASS] = {"envelope_mass_msun", "Msun", LXG_SOLAR_MASS}};
  return &units[quantity];
}

const char *lxg_report_held_name(enum lxg_held quantity) {
  return lxg_report_unit(quantity)->name;
}

void lxg_report_held(struct lxg_node *parent, enum lxg_held quantity, double cgs) {
  const struct report_unit *unit = lxg_report_unit(quantity);
  lxg_node_add_number(parent, unit->name, cgs / unit->factor);
}

enum lxg_status lxg_report_table(const char *name, const struct report_column columns[], size_t count,
                                 size_t rows, struct lxg_table **table, struct lxg_error *error) {
  enum lxg_status status = lxg_table_create(name, table, error);
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    status = lxg_table_add_column(*table, columns[i].name, columns[i].type, columns[i].unit,
                                  columns[i].description, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_add_rows(*table, rows, error);
  }
  if (status != LXG_OK) {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}
