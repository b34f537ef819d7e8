/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * case_echo.c - the section `case` of a report: what was really computed, defaults and derived values filled in (see run.h).
 */
#include "luxgale/constants.h"
#include "luxgale/report.h"
#include "luxgale/run.h"

#include <math.h>

static void echo_opacity(const struct lxg_case *input, struct lxg_node *section) {
  struct lxg_node *opacity = lxg_node_add_mapping(section, "opacity");
  lxg_node_add_text(opacity, "formula", lxg_opacity_formula_name(input->opacity_choice.formula));
  lxg_node_add_integer(opacity, "tables", (long long)input->opacity_choice.tables);
  if (input->opacity_choice.tables > 0) {
    lxg_node_add_text(opacity, "outside", lxg_opacity_outside_name(input->opacity_choice.outside));
  }
  struct lxg_node *omit = lxg_node_add_sequence(opacity, "omit");
  for (int source = 0; source < LXG_OPACITY_SOURCES; source++) {
    if (input->opacity_choice.omit & LXG_OPACITY_BIT(source)) {
      lxg_node_add_text(omit, NULL, lxg_opacity_source_name((enum lxg_opacity_source)source));
    }
  }
}

static void echo_porosity(const struct lxg_case *input, struct lxg_node *section) {
  struct lxg_node *porosity = lxg_node_add_mapping(section, "porosity");
  const enum lxg_porosity_law law = input->porosity.law;
  lxg_node_add_text(porosity, "law",
                    lxg_porosity_law_name(law == LXG_POROSITY_POWER ? LXG_POROSITY_LENGTH : law));
  if (law == LXG_POROSITY_REDUCTION && input->reduction == NULL) {
    lxg_node_add_number(porosity, "factor", input->porosity.factor);
  }
  if (law == LXG_POROSITY_LENGTH || law == LXG_POROSITY_POWER) {
    lxg_node_add_number(porosity, "scale", input->porosity.scale);
  }
  if (law == LXG_POROSITY_POWER) {
    lxg_node_add_number(porosity, "power", input->porosity.alpha);
  }
  if (law != LXG_POROSITY_NONE) {
    lxg_node_add_text(porosity, "when",
                      input->porosity.when == LXG_POROSITY_ALWAYS ? "always" : "super-eddington");
  }
}

static void echo_decline(const struct lxg_case *input, struct lxg_node *section) {
  static const char *const starts[] = {"ignition", "mass", "temperature"};
  if (input->burning.law == LXG_BURNING_NONE) {
    return;
  }
  const struct lxg_decline_options *o = &input->decline;
  struct lxg_node *decline = lxg_node_add_mapping(section, "decline");
  lxg_node_add_text(decline, "start", starts[o->start]);
  lxg_node_add_number(decline, "start_mass_msun",
                      o->start == LXG_DECLINE_START_MASS ? o->start_value / LXG_SOLAR_MASS : (double)NAN);
  lxg_node_add_number(decline, "start_temperature_k",
                      o->start == LXG_DECLINE_START_TEMPERATURE ? o->start_value : (double)NAN);
  lxg_node_add_number(decline, "accretion_rate_msun_yr", o->accretion_rate * LXG_YEAR / LXG_SOLAR_MASS);
  lxg_node_add_text(decline, "stop", o->wind_only ? "wind-end" : "turn-off");
  lxg_node_add_number(decline, "stop_time_d", o->time_most / LXG_DAY);
  lxg_node_add_number(decline, "stop_mass_msun",
                      o->mass_least > 0.0 ? o->mass_least / LXG_SOLAR_MASS : (double)NAN);
  lxg_node_add_number(decline, "gas_temperature_k", o->gas_temperature);
  lxg_node_add_number(decline, "rise_time_d", o->rise / LXG_DAY);
}

static void echo_history(const struct lxg_case *input, struct lxg_node *section) {
  const struct lxg_history *history = input->history;
  if (input->history_from_decline) {
    lxg_node_add_text(lxg_node_add_mapping(section, "luminosity"), "kind", "decline");
  }
  if (history == NULL) {
    return;
  }
  struct lxg_node *luminosity = lxg_node_add_mapping(section, "luminosity");
  lxg_node_add_text(luminosity, "kind", history->kind == LXG_HISTORY_BASE ? "base" : "photosphere");
  lxg_node_add_text(luminosity, "source", history->formula != NULL ? "formula" : "table");
  lxg_node_add_integer(luminosity, "rows", (long long)history->count);
  lxg_node_add_number(luminosity, "first_d", history->time[0] / LXG_DAY);
  lxg_node_add_number(luminosity, "last_d", history->time[history->count - 1] / LXG_DAY);
}

static void echo_driving(const struct lxg_case *input, struct lxg_node *section) {
  if (input->claimed) {
    const struct lxg_driving_claim *claim = &input->claim;
    struct lxg_node *driving = lxg_node_add_mapping(section, "driving");
    lxg_node_add_number(driving, "mass_msun", claim->mass / LXG_SOLAR_MASS);
    lxg_node_add_number(driving, "mass_error_msun", (claim->mass_high - claim->mass) / LXG_SOLAR_MASS);
    lxg_node_add_number(driving, "speed_km_s", claim->speed / LXG_KM);
    lxg_node_add_number(driving, "speed_error_km_s", (claim->speed_high - claim->speed) / LXG_KM);
  }
}

static void echo_settings(const struct lxg_case *input, struct lxg_node *section) {
  struct lxg_node *settings = lxg_node_add_mapping(section, "settings");
  for (size_t i = 0; i < lxg_settings_count(); i++) {
    const double value = lxg_settings_value(&input->settings, i);
    if (lxg_settings_row(i)->type == LXG_SETTING_COUNT) {
      lxg_node_add_integer(settings, lxg_settings_row(i)->name, (long long)value);
    } else {
      lxg_node_add_number(settings, lxg_settings_row(i)->name, value);
    }
  }
}

static void echo_files(const struct lxg_case *input, struct lxg_node *section) {
  struct lxg_node *files = lxg_node_add_sequence(section, "files");
  struct lxg_node *own = lxg_node_add_mapping(files, NULL);
  lxg_node_add_text(own, "key", "case");
  lxg_node_add_text(own, "name", lxg_document_name(input->document));
  lxg_node_add_text(own, "sha256", lxg_document_checksum(input->document));
  for (size_t i = 0; i < input->files.count; i++) {
    struct lxg_node *file = lxg_node_add_mapping(files, NULL);
    lxg_node_add_text(file, "key", input->files.file[i].key);
    lxg_node_add_text(file, "name", input->files.file[i].name);
    lxg_node_add_text(file, "sha256", input->files.file[i].checksum);
  }
}

void lxg_case_echo(const struct lxg_case *input, struct lxg_node *root) {
  struct lxg_node *section = lxg_node_add_mapping(root, "case");
  lxg_node_add_text(section, "title", input->title);
  struct lxg_node *star = lxg_node_add_mapping(section, "star");
  lxg_node_add_number(star, "mass_msun", input->star.gm / LXG_SOLAR_GM);
  lxg_node_add_number(star, "radius_cm", input->star.radius);
  lxg_node_add_text(star, "radius_from", input->dwarf ? "white-dwarf" : "case");
  struct lxg_node *composition = lxg_node_add_mapping(section, "composition");
  lxg_node_add_number(composition, "hydrogen", input->composition.hydrogen);
  lxg_node_add_number(composition, "helium", input->composition.helium);
  lxg_node_add_number(composition, "cno", input->composition.cno);
  lxg_node_add_number(composition, "metals", input->composition.metals);
  echo_opacity(input, section);
  echo_porosity(input, section);
  lxg_node_add_text(lxg_node_add_mapping(section, "burning"), "law",
                    input->burning.law == LXG_BURNING_CNO ? "cno" : "none");
  echo_decline(input, section);
  struct lxg_node *hold = lxg_node_add_mapping(section, "hold");
  for (size_t i = 0; i < input->holds; i++) {
    lxg_report_held(hold, input->hold[i].quantity, input->hold[i].value);
  }
  echo_history(input, section);
  echo_driving(input, section);
  echo_settings(input, section);
  echo_files(input, section);
}
