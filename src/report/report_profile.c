/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_profile.c - computed line profiles (see report.h).
 */
#include "luxgale/memory.h"
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>

static void add_measures(struct lxg_node *section, const struct lxg_report_profile *one) {
  const struct lxg_profile *profile = &one->profile;
  lxg_node_add_number(section, "photosphere_speed_km_s", one->photosphere_speed / LXG_KM);
  lxg_node_add_number(section, "terminal_speed_km_s", one->terminal_speed / LXG_KM);
  lxg_node_add_number(section, "absorption_km_s", profile->absorption_speed / LXG_KM);
  lxg_node_add_number(section, "absorption_depth", profile->absorption_depth);
  lxg_node_add_number(section, "blue_edge_km_s", profile->blue_edge / LXG_KM);
  lxg_node_add_number(section, "emission_peak_km_s", profile->emission_velocity / LXG_KM);
  lxg_node_add_number(section, "emission_height", profile->emission_height / profile->continuum);
  lxg_node_add_number(section, "half_maximum_km_s", profile->emission_half_width / LXG_KM);
  lxg_node_add_number(section, "zero_intensity_km_s", profile->largest_speed / LXG_KM);
  lxg_node_add_number(section, "equivalent_width_km_s", profile->line_flux / profile->continuum / LXG_KM);
  lxg_node_add_number(section, "balance_width_km_s", profile->expected_flux / profile->continuum / LXG_KM);
  lxg_node_add_bool(section, "coupling_neglected", profile->coupled);
}

void lxg_report_profiles(struct lxg_node *root, const struct lxg_report_profile profiles[], size_t count) {
  struct lxg_node *list = lxg_node_add_sequence(root, "profiles");
  for (size_t i = 0; i < count; i++) {
    const struct lxg_report_profile *one = &profiles[i];
    struct lxg_node *section = lxg_node_add_mapping(list, NULL);
    lxg_node_add_text(section, "label", one->request->label);
    lxg_node_add_text(section, "kind",
                      one->request->line.kind == LXG_PROFILE_RESONANCE ? "resonance" : "recombination");
    lxg_node_add_number(section, "time_d", one->time / LXG_DAY);
    lxg_node_add_text(section, "verdict", one->computed ? "solved" : "none");
    if (!one->computed) {
      lxg_node_add_text(section, "reason", one->why.line[0]);
      lxg_node_add_text(section, "reason_code", one->why.code);
      continue;
    }
    if (one->request->line.kind == LXG_PROFILE_RESONANCE) {
      lxg_node_add_number(section, "strength_cm3_g_s", one->strength);
    }
    add_measures(section, one);
  }
}

static const struct report_column profile_columns[] = {
    {"label", "", "of the line", LXG_COLUMN_TEXT},
    {"time_d", "d", "epoch", LXG_COLUMN_NUMBER},
    {"velocity_km_s", "km/s", "radial; negative approaches", LXG_COLUMN_NUMBER},
    {"flux_ratio", "", "flux over the continuum of the photosphere", LXG_COLUMN_NUMBER},
};
enum { PROFILE_COLUMNS = sizeof profile_columns / sizeof profile_columns[0] };

static enum lxg_status set_points(struct lxg_table *table, size_t first, const struct lxg_report_profile *one,
                                  struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (size_t k = 0; k < one->profile.count && status == LXG_OK; k++) {
    const double number[PROFILE_COLUMNS] = {NAN, one->time / LXG_DAY, one->profile.velocity[k] / LXG_KM,
                                            one->profile.flux[k] / one->profile.continuum};
    status = lxg_table_set_text(table, 0, first + k, one->request->label, error);
    for (size_t c = 1; c < PROFILE_COLUMNS && status == LXG_OK; c++) {
      status = lxg_table_set_number(table, c, first + k, number[c], error);
    }
  }
  return status;
}

enum lxg_status lxg_report_profile_table(const struct lxg_report_profile profiles[], size_t count,
                                         struct lxg_table **table, struct lxg_error *error) {
  size_t rows = 0, first = 0;
  for (size_t i = 0; i < count; i++) {
    rows += profiles[i].computed ? profiles[i].profile.count : 0;
  }
  enum lxg_status status = lxg_report_table("profiles", profile_columns, PROFILE_COLUMNS, rows, table, error);
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    if (profiles[i].computed) {
      status = set_points(*table, first, &profiles[i], error);
      first += profiles[i].profile.count;
    }
  }
  if (status != LXG_OK) {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}
