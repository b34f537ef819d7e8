/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_lines.c - line measurements beside the model's speeds, and the fit of mass and held quantity (see report.h).
 */
#include "luxgale/memory.h"
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>
#include <stdio.h>

/* Probability below which the choice between wind and shell is called unsure. */
static const double sure = 0.9;

/* Difference between interpolated and solved speeds, in sigma, above which the fit is warned about. */
static const double interpolation_most = 0.2;

/* ---- lines -------------------------------------------------------------------------------------------------------- */

/* "photosphere", or "depth 0.5". */
static const char *model_text(const struct lxg_line_map *map, size_t kind, char text[48]) {
  const char *name = lxg_line_model_name(map->kind[kind].model);
  if (map->kind[kind].model == LXG_LINE_MODEL_DEPTH) {
    snprintf(text, 48, "%s %.6g", name, map->kind[kind].depth);
    return text;
  }
  return name;
}

static bool is_unsure(const struct lxg_report_lines *lines, size_t i) {
  const struct lxg_line_assignment *one = lines->assignment != NULL ? &lines->assignment[i] : NULL;
  return one != NULL && one->informative && !one->declared && one->probability[one->system] < sure;
}

static void add_row(struct lxg_node *list, const struct lxg_report_lines *lines, size_t i) {
  const struct lxg_line *line = &lines->lines->line[i];
  const struct lxg_line_comparison *compared = &lines->comparison[i];
  struct lxg_node *row = lxg_node_add_mapping(list, NULL);
  lxg_node_add_integer(row, "row", (long long)line->row);
  lxg_node_add_number(row, "time_d", line->epoch / LXG_DAY);
  lxg_node_add_text(row, "line", line->label);
  lxg_node_add_text(row, "kind", lxg_line_kind_name(line->kind));
  lxg_node_add_text(row, "component", line->component);
  lxg_node_add_number(row, "observed_km_s", line->velocity / LXG_KM);
  lxg_node_add_number(row, "error_km_s", line->error / LXG_KM);
  lxg_node_add_text(row, "model", compared->compared ? lxg_line_model_name(compared->model) : NULL);
  lxg_node_add_number(row, "model_km_s", compared->velocity / LXG_KM);
  lxg_node_add_number(row, "residual_sigma", compared->residual);
  if (lines->assignment != NULL) {
    const struct lxg_line_assignment *one = &lines->assignment[i];
    lxg_node_add_text(row, "system", lxg_line_system_name(one->system));
    lxg_node_add_number(row, "probability", one->probability[one->system]);
  }
  if (!compared->compared) {
    lxg_node_add_text(row, "reason_code", compared->reason_code);
    lxg_node_add_text(row, "reason", compared->reason);
  }
}

static void add_systems(struct lxg_node *section, const struct lxg_report_lines *lines) {
  struct lxg_node *systems = lxg_node_add_mapping(section, "systems");
  for (int system = 0; system < LXG_LINE_SYSTEMS; system++) {
    long long count = 0;
    for (size_t i = 0; i < lines->lines->count; i++) {
      count += (int)lines->assignment[i].system == system;
    }
    lxg_node_add_integer(systems, lxg_line_system_name((enum lxg_line_system)system), count);
  }
}

void lxg_report_lines(struct lxg_node *root, const struct lxg_report_lines *lines) {
  static const char *const keys[LXG_LINE_KINDS] = {"absorption", "blue_edge", "half_maximum",
                                                   "zero_intensity", "emission_peak"};
  const struct lxg_line_chi2 *chi2 = lines->chi2;
  struct lxg_node *section = lxg_node_add_mapping(root, "lines");
  lxg_node_add_integer(section, "count", (long long)lines->lines->count);
  lxg_node_add_integer(section, "compared", (long long)chi2->compared);
  lxg_node_add_integer(section, "left", (long long)chi2->left);
  lxg_node_add_number(section, "chi2", chi2->compared > 0 ? chi2->chi2 : (double)NAN);
  lxg_node_add_number(section, "p_value", chi2->p_value);
  if (chi2->compared > 0) {
    lxg_node_add_integer(section, "worst_row", (long long)lines->lines->line[chi2->worst].row);
    lxg_node_add_number(section, "worst_residual_sigma", lines->comparison[chi2->worst].residual);
  } else {
    lxg_node_add_none(section, "worst_row");
    lxg_node_add_none(section, "worst_residual_sigma");
  }
  lxg_node_add_number(section, "scatter_km_s", lines->scatter / LXG_KM);
  struct lxg_node *map = lxg_node_add_mapping(section, "map");
  for (size_t kind = 0; kind < LXG_LINE_KINDS; kind++) {
    char text[48];
    lxg_node_add_text(map, keys[kind], model_text(lines->map, kind, text));
  }
  if (lines->assignment != NULL) {
    add_systems(section, lines);
  }
  struct lxg_node *list = lxg_node_add_sequence(section, "rows");
  for (size_t i = 0; i < lines->lines->count; i++) {
    add_row(list, lines, i);
  }
}

void lxg_report_lines_warnings(struct lxg_node *warnings, const struct lxg_report_lines *lines) {
  long long unsure = 0;
  for (size_t i = 0; i < lines->lines->count; i++) {
    unsure += is_unsure(lines, i);
  }
  if (unsure > 0) {
    struct lxg_node *warning = lxg_report_warn(warnings, "assignment-unsure",
                                               "rows whose system, wind or shell, the speeds do not decide");
    lxg_node_add_integer(warning, "rows", unsure);
    lxg_node_add_number(warning, "probability_below", sure);
  }
  if (lines->chi2->left > 0) {
    lxg_node_add_integer(lxg_report_warn(warnings, "line-left", "rows that were not compared; each says why"),
                         "rows", (long long)lines->chi2->left);
  }
}

static const struct report_column line_columns[] = {
    {"row", "", "line of the file", LXG_COLUMN_NUMBER},
    {"time_d", "d", "epoch", LXG_COLUMN_NUMBER},
    {"line", "", "", LXG_COLUMN_TEXT},
    {"kind", "", "feature of the profile", LXG_COLUMN_TEXT},
    {"component", "", "name given by the observer", LXG_COLUMN_TEXT},
    {"observed_km_s", "km/s", "expansion speed; radial velocity of an emission peak", LXG_COLUMN_NUMBER},
    {"error_km_s", "km/s", "1 sigma", LXG_COLUMN_NUMBER},
    {"model", "", "speed it is compared with", LXG_COLUMN_TEXT},
    {"model_km_s", "km/s", "", LXG_COLUMN_NUMBER},
    {"residual_sigma", "", "(observed - model)/sigma", LXG_COLUMN_NUMBER},
    {"system", "", "wind, shell or other", LXG_COLUMN_TEXT},
    {"p_wind", "", "probability of the wind", LXG_COLUMN_NUMBER},
    {"p_shell", "", "of the swept shell", LXG_COLUMN_NUMBER},
    {"p_other", "", "of neither", LXG_COLUMN_NUMBER},
    {"wind_km_s", "km/s", "the wind's speed for this kind", LXG_COLUMN_NUMBER},
    {"shell_km_s", "km/s", "the shell's speed", LXG_COLUMN_NUMBER},
    {"reason_code", "", "why the row was not compared", LXG_COLUMN_TEXT},
};
enum { LINE_COLUMNS = sizeof line_columns / sizeof line_columns[0] };

static enum lxg_status set_line(struct lxg_table *table, size_t i, const struct lxg_report_lines *lines,
                                struct lxg_error *error) {
  static const struct lxg_line_assignment none = {
      .probability = {NAN, NAN, NAN}, .wind_velocity = NAN, .shell_velocity = NAN};
  const struct lxg_line *line = &lines->lines->line[i];
  const struct lxg_line_comparison *compared = &lines->comparison[i];
  const struct lxg_line_assignment *one = lines->assignment != NULL ? &lines->assignment[i] : &none;
  const char *const texts[LINE_COLUMNS] = {
      [2] = line->label,
      [3] = lxg_line_kind_name(line->kind),
      [4] = line->component,
      [7] = compared->compared ? lxg_line_model_name(compared->model) : "",
      [10] = lines->assignment != NULL ? lxg_line_system_name(one->system) : "",
      [16] = compared->reason_code};
  const double numbers[LINE_COLUMNS] = {(double)line->row,
                                        line->epoch / LXG_DAY,
                                        NAN,
                                        NAN,
                                        NAN,
                                        line->velocity / LXG_KM,
                                        line->error / LXG_KM,
                                        NAN,
                                        compared->velocity / LXG_KM,
                                        compared->residual,
                                        NAN,
                                        one->probability[LXG_LINE_WIND],
                                        one->probability[LXG_LINE_SHELL],
                                        one->probability[LXG_LINE_OTHER],
                                        one->wind_velocity / LXG_KM,
                                        one->shell_velocity / LXG_KM,
                                        NAN};
  enum lxg_status status = LXG_OK;
  for (size_t c = 0; c < LINE_COLUMNS && status == LXG_OK; c++) {
    status = line_columns[c].type == LXG_COLUMN_TEXT ? lxg_table_set_text(table, c, i, texts[c], error)
                                                     : lxg_table_set_number(table, c, i, numbers[c], error);
  }
  return status;
}

enum lxg_status lxg_report_lines_table(const struct lxg_report_lines *lines, struct lxg_table **table,
                                       struct lxg_error *error) {
  enum lxg_status status =
      lxg_report_table("lines", line_columns, LINE_COLUMNS, lines->lines->count, table, error);
  for (size_t i = 0; i < lines->lines->count && status == LXG_OK; i++) {
    status = set_line(*table, i, lines, error);
  }
  if (status != LXG_OK) {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}

/* ---- fit ---------------------------------------------------------------------------------------------------------- */

static const char *end_text(enum lxg_fit_end end) {
  static const char *const texts[] = {
      [LXG_FIT_CROSSED] = "crossed", [LXG_FIT_OPEN] = "open", [LXG_FIT_EDGE] = "no-wind"};
  return texts[end];
}

/* One parameter under NAME_UNIT, its error and interval beside it. */
static void add_parameter(struct lxg_node *section, const char *name, double unit,
                          const struct lxg_fit_estimate *estimate) {
  struct lxg_node *one = lxg_node_add_mapping(section, name);
  lxg_node_add_number(one, "value", estimate->value / unit);
  lxg_node_add_number(one, "sigma", estimate->sigma / unit);
  lxg_node_add_number(one, "lo68", estimate->lower / unit);
  lxg_node_add_number(one, "hi68", estimate->upper / unit);
  lxg_node_add_text(one, "lo68_end", end_text(estimate->lower_end));
  lxg_node_add_text(one, "hi68_end", end_text(estimate->upper_end));
  lxg_node_add_bool(one, "constrained", estimate->constrained);
}

static void add_range(struct lxg_node *section, const char *key, const struct lxg_report_fit *fit,
                      const struct lxg_linefit_range *range) {
  const struct report_unit *unit = lxg_report_unit(fit->held);
  struct lxg_node *searched = lxg_node_add_mapping(section, key);
  struct lxg_node *pair = lxg_node_add_sequence(searched, "mass_msun");
  lxg_node_add_number(pair, NULL, range->mass_low / LXG_SOLAR_GM);
  lxg_node_add_number(pair, NULL, range->mass_high / LXG_SOLAR_GM);
  pair = lxg_node_add_sequence(searched, unit->name);
  lxg_node_add_number(pair, NULL, range->held_low / unit->factor);
  lxg_node_add_number(pair, NULL, range->held_high / unit->factor);
}

static void add_searched(struct lxg_node *section, const struct lxg_report_fit *fit) {
  const struct lxg_linefit_range *range = &fit->grid->range;
  add_range(section, "searched", fit, fit->whole);
  add_range(section, "grid", fit, range);
  lxg_node_add_integer(section, "grid_nodes", (long long)(range->masses * range->values));
  lxg_node_add_integer(section, "grid_nodes_with_all_speeds", (long long)fit->grid->nodes);
  lxg_node_add_integer(section, "grid_zooms", fit->zooms);
}

void lxg_report_fit(struct lxg_node *root, const struct lxg_report_fit *fit) {
  struct lxg_node *section = lxg_node_add_mapping(root, "fit");
  lxg_node_add_text(section, "verdict", fit->result != NULL ? "solved" : "none");
  if (fit->result == NULL) {
    lxg_node_add_text(section, "reason", fit->why->line[0]);
    lxg_node_add_text(section, "reason_code", fit->why->code);
    add_searched(section, fit);
    return;
  }
  const struct lxg_fit_result *result = &fit->result->fit;
  const struct report_unit *unit = lxg_report_unit(fit->held);
  const double *mass = result->covariance[LXG_LINEFIT_MASS], *held = result->covariance[LXG_LINEFIT_HELD];
  add_parameter(section, "mass_msun", LXG_SOLAR_GM, &result->estimate[LXG_LINEFIT_MASS]);
  add_parameter(section, unit->name, unit->factor, &result->estimate[LXG_LINEFIT_HELD]);
  lxg_node_add_number(section, "correlation",
                      mass[LXG_LINEFIT_HELD] / sqrt(mass[LXG_LINEFIT_MASS] * held[LXG_LINEFIT_HELD]));
  lxg_node_add_integer(section, "rows", (long long)fit->result->used);
  lxg_node_add_number(section, "chi2", result->chi2);
  lxg_node_add_integer(section, "degrees", result->degrees);
  lxg_node_add_number(section, "p_value", result->p_value);
  lxg_node_add_integer(section, "iterations", result->iterations);
  lxg_node_add_number(section, "interpolation_sigma", fit->checked ? fit->interpolation_sigma : (double)NAN);
  add_searched(section, fit);
}

void lxg_report_fit_warnings(struct lxg_node *warnings, const struct lxg_report_fit *fit) {
  if (fit->result == NULL) {
    lxg_report_warn(warnings, "fit-none", fit->why->line[0]);
    return;
  }
  if (fit->result->warning[0] != '\0') {
    lxg_report_warn(warnings, "fit-unconstrained", fit->result->warning);
  }
  if (!fit->settled) {
    lxg_report_warn(warnings, "fit-unsettled",
                    "at the best point some rows would belong to another system, wind or shell");
  }
  if (!fit->checked || fit->interpolation_sigma > interpolation_most) {
    struct lxg_node *warning = lxg_report_warn(
        warnings, "fit-interpolation",
        "the best point solved anew differs from the interpolated speeds; take more masses and values");
    lxg_node_add_number(warning, "sigma", fit->checked ? fit->interpolation_sigma : (double)NAN);
  }
}
