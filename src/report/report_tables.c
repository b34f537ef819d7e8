/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_tables.c - structure of a wind and members of a family as tables, and the section `family` (see report.h).
 */
#include "luxgale/memory.h"
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>
#include <stdio.h>

/* ---- structure --------------------------------------------------------------------------------------------------- */

static const struct report_column structure_columns[] = {
    {"radius_cm", "cm", "distance from the centre", LXG_COLUMN_NUMBER},
    {"speed_km_s", "km/s", "flow speed", LXG_COLUMN_NUMBER},
    {"temperature_k", "K", "gas temperature", LXG_COLUMN_NUMBER},
    {"density_g_cm3", "g/cm3", "mass density", LXG_COLUMN_NUMBER},
    {"luminosity_erg_s", "erg/s", "diffusive luminosity", LXG_COLUMN_NUMBER},
    {"opacity_cm2_g", "cm2/g", "effective opacity, porosity included", LXG_COLUMN_NUMBER},
    {"eddington_ratio", "", "kappa L/(4 pi G M c)", LXG_COLUMN_NUMBER},
    {"optical_depth", "", "from infinity", LXG_COLUMN_NUMBER},
    {"mach", "", "speed over isothermal sound speed", LXG_COLUMN_NUMBER},
    {"gas_pressure_share", "", "gas pressure over total pressure", LXG_COLUMN_NUMBER},
};
enum { STRUCTURE_COLUMNS = sizeof structure_columns / sizeof structure_columns[0] };

static enum lxg_status add_share_columns(struct lxg_table *table, struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (int source = 0; source < LXG_OPACITY_SOURCES && status == LXG_OK; source++) {
    char name[64];
    snprintf(name, sizeof name, "share_%s", lxg_opacity_source_name((enum lxg_opacity_source)source));
    status = lxg_table_add_column(table, name, LXG_COLUMN_NUMBER, "",
                                  "share of this source in the opacity, d ln kappa/d ln k", error);
  }
  return status;
}

static enum lxg_status set_structure_row(struct lxg_table *table, size_t i, const struct lxg_wind_row *row,
                                         const struct lxg_opacity *opacity, struct lxg_error *error) {
  const double number[STRUCTURE_COLUMNS] = {
      row->radius,  row->speed / LXG_KM, row->temperature,   row->density, row->luminosity,
      row->opacity, row->gamma,          row->optical_depth, row->mach,    row->beta};
  enum lxg_status status = LXG_OK;
  for (size_t c = 0; c < STRUCTURE_COLUMNS && status == LXG_OK; c++) {
    status = lxg_table_set_number(table, c, i, number[c], error);
  }
  double share[LXG_OPACITY_SOURCES], known = 0.0;
  const bool shared = opacity != NULL && lxg_opacity_shares(opacity, log(row->density), log(row->temperature),
                                                            share, &known) == LXG_OK;
  for (size_t s = 0; shared && known > 0.0 && s < LXG_OPACITY_SOURCES && status == LXG_OK; s++) {
    status = lxg_table_set_number(table, STRUCTURE_COLUMNS + s, i, share[s], error);
  }
  return status;
}

enum lxg_status lxg_report_structure_table(const struct lxg_wind_row *rows, size_t count,
                                           const struct lxg_opacity *opacity, struct lxg_table **table,
                                           struct lxg_error *error) {
  enum lxg_status status =
      lxg_report_table("structure", structure_columns, STRUCTURE_COLUMNS, 0, table, error);
  if (status == LXG_OK) {
    status = add_share_columns(*table, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_add_rows(*table, count, error);
  }
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    status = set_structure_row(*table, i, &rows[i], opacity, error);
  }
  if (status != LXG_OK) {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}

/* ---- family ------------------------------------------------------------------------------------------------------ */

/* Numbers of a family that are not held quantities. */
static const struct {
  enum lxg_family_quantity quantity;
  struct report_unit unit;
  const char *description;
} more[] = {
    {LXG_FAMILY_CRITICAL_TEMPERATURE,
     {"critical_temperature_k", "K", 1.0},
     "temperature of the critical point"},
    {LXG_FAMILY_CRITICAL_DEPTH, {"critical_optical_depth", "", 1.0}, "optical depth of the critical point"},
    {LXG_FAMILY_PHOTOSPHERE_SPEED,
     {"photosphere_speed_km_s", "km/s", LXG_KM},
     "flow speed at the photosphere"},
    {LXG_FAMILY_PHOTOSPHERE_OPACITY,
     {"photosphere_opacity_cm2_g", "cm2/g", 1.0},
     "opacity at the photosphere"},
    {LXG_FAMILY_LUMINOSITY_INFINITY,
     {"luminosity_infinity_erg_s", "erg/s", 1.0},
     "light that reaches infinity"},
    {LXG_FAMILY_GAMMA_MAX, {"eddington_ratio_max", "", 1.0}, "largest kappa L/(4 pi G M c)"},
    {LXG_FAMILY_FLOW_TIME, {"flow_time_s", "s", 1.0}, "from critical point to photosphere"},
    {LXG_FAMILY_NUCLEAR_LUMINOSITY,
     {"nuclear_luminosity_erg_s", "erg/s", 1.0},
     "heat of burning below the critical point"},
    {LXG_FAMILY_DIFFUSION_TIME, {"diffusion_time_s", "s", 1.0}, "radiation energy there over luminosity"},
};
enum { MORE = sizeof more / sizeof more[0], FAMILY_COLUMNS = LXG_HELD_COUNT + MORE };

static const struct report_unit *family_unit(size_t column) {
  return column < LXG_HELD_COUNT ? lxg_report_unit((enum lxg_held)column)
                                 : &more[column - LXG_HELD_COUNT].unit;
}

static double family_number(const struct lxg_family *family, size_t member, size_t column) {
  struct lxg_family_place place;
  lxg_family_at(family, family->arc[member], &place);
  const size_t quantity = column < LXG_HELD_COUNT ? column : (size_t)more[column - LXG_HELD_COUNT].quantity;
  return place.value[quantity] / family_unit(column)->factor;
}

enum lxg_status lxg_report_family_table(const struct lxg_family *family, struct lxg_table **table,
                                        struct lxg_error *error) {
  struct report_column columns[FAMILY_COLUMNS];
  for (size_t c = 0; c < FAMILY_COLUMNS; c++) {
    const struct report_unit *unit = family_unit(c);
    columns[c] = (struct report_column){unit->name, unit->unit,
                                        c < LXG_HELD_COUNT ? "" : more[c - LXG_HELD_COUNT].description,
                                        LXG_COLUMN_NUMBER};
  }
  enum lxg_status status = lxg_report_table("family", columns, FAMILY_COLUMNS, family->count, table, error);
  for (size_t i = 0; i < family->count && status == LXG_OK; i++) {
    for (size_t c = 0; c < FAMILY_COLUMNS && status == LXG_OK; c++) {
      status = lxg_table_set_number(*table, c, i, family_number(family, i, c), error);
    }
  }
  if (status == LXG_OK) {
    struct lxg_node *meta = lxg_table_meta(*table);
    lxg_node_add_text(meta, "held", lxg_report_held_name(family->hold.quantity));
    lxg_node_add_text(meta, "thin_end", lxg_wind_reason_code(family->thin_end));
    lxg_node_add_text(meta, "thick_end", lxg_wind_reason_code(family->thick_end));
  } else {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}

static void add_end(struct lxg_node *section, const char *key, enum lxg_wind_reason reason) {
  struct lxg_node *end = lxg_node_add_mapping(section, key);
  lxg_node_add_text(end, "reason_code", lxg_wind_reason_code(reason));
  lxg_node_add_text(end, "reason", lxg_wind_reason_text(reason));
}

/* The worst of all members. */
static void add_family_checks(struct lxg_node *section, const struct lxg_family *family) {
  double residual = 0.0, share = INFINITY;
  size_t mesh = 0;
  for (size_t i = 0; i < family->count; i++) {
    residual = fmax(residual, family->wind[i].residual);
    share = fmin(share, family->wind[i].table_share);
    mesh = family->wind[i].mesh_points > mesh ? family->wind[i].mesh_points : mesh;
  }
  struct lxg_node *checks = lxg_node_add_mapping(section, "checks");
  lxg_node_add_number(checks, "residual_max", residual);
  lxg_node_add_integer(checks, "mesh_points_max", (long long)mesh);
  lxg_node_add_number(checks, "opacity_table_share_min", share);
}

void lxg_report_family(struct lxg_node *root, const struct lxg_family *family) {
  struct lxg_node *section = lxg_node_add_mapping(root, "family");
  lxg_node_add_text(section, "verdict", "solved");
  lxg_report_held(lxg_node_add_mapping(section, "held"), family->hold.quantity, family->hold.value);
  lxg_node_add_integer(section, "winds", (long long)family->count);
  lxg_node_add_integer(section, "newton_steps", family->newton_steps);
  add_end(section, "thin_end", family->thin_end);
  add_end(section, "thick_end", family->thick_end);
  add_family_checks(section, family);
  struct lxg_node *range = lxg_node_add_mapping(section, "range");
  for (size_t c = 0; c < FAMILY_COLUMNS; c++) {
    double least = INFINITY, most = -INFINITY;
    for (size_t i = 0; i < family->count; i++) {
      const double number = family_number(family, i, c);
      least = fmin(least, number);
      most = fmax(most, number);
    }
    struct lxg_node *pair = lxg_node_add_sequence(range, family_unit(c)->name);
    lxg_node_add_number(pair, NULL, least);
    lxg_node_add_number(pair, NULL, most);
  }
}

void lxg_report_no_family(struct lxg_node *root, const struct lxg_wind_hold *hold,
                          const struct lxg_error *error) {
  struct lxg_node *section = lxg_node_add_mapping(root, "family");
  lxg_node_add_text(section, "verdict", "none");
  lxg_node_add_text(section, "reason", error->line[0]);
  lxg_node_add_text(section, "reason_code", error->code);
  lxg_report_held(lxg_node_add_mapping(section, "held"), hold->quantity, hold->value);
  lxg_node_add_integer(section, "winds", 0);
}
