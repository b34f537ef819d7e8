/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_mass.c - ejected mass by several methods, side by side (see report.h).
 */
#include "luxgale/memory.h"
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>

static void add_given(struct lxg_node *section, const struct lxg_mass_data *data) {
  struct lxg_node *list = lxg_node_add_sequence(section, "given");
  for (int q = 0; q < LXG_MASS_QUANTITIES; q++) {
    const struct lxg_mass_datum *datum = &data->datum[q];
    if (datum->given) {
      struct lxg_node *one = lxg_node_add_mapping(list, NULL);
      lxg_node_add_text(one, "quantity", lxg_mass_quantity_name((enum lxg_mass_quantity)q));
      lxg_node_add_number(one, "value", datum->value);
      lxg_node_add_number(one, "error", datum->error);
      lxg_node_add_text(one, "unit", lxg_mass_quantity_unit((enum lxg_mass_quantity)q));
    }
  }
}

static void add_method(struct lxg_node *list, const struct lxg_mass_estimate *estimate) {
  struct lxg_node *one = lxg_node_add_mapping(list, NULL);
  lxg_node_add_text(one, "method", lxg_mass_method_name(estimate->method));
  lxg_node_add_bool(one, "available", estimate->available);
  lxg_node_add_bool(one, "upper_bound", estimate->upper_bound);
  lxg_node_add_number(one, "mass_msun", estimate->mass / LXG_SOLAR_MASS);
  lxg_node_add_number(one, "lo68_msun", estimate->available ? estimate->lower / LXG_SOLAR_MASS : (double)NAN);
  lxg_node_add_number(one, "hi68_msun", estimate->available ? estimate->upper / LXG_SOLAR_MASS : (double)NAN);
  lxg_node_add_text(one, "assumptions", estimate->assumptions);
  lxg_node_add_text(one, "source", estimate->source);
  struct lxg_node *missing = lxg_node_add_sequence(one, "missing");
  for (size_t i = 0; i < estimate->missing_count; i++) {
    lxg_node_add_text(missing, NULL, lxg_mass_quantity_name(estimate->missing[i]));
  }
}

static void add_steady(struct lxg_node *section, const struct lxg_report_steady *steady) {
  struct lxg_node *one = lxg_node_add_mapping(section, "steady_wind");
  lxg_node_add_text(one, "verdict", steady->solved ? "solved" : "none");
  if (!steady->solved) {
    lxg_node_add_text(one, "reason",
                      steady->asked ? steady->why.line[0]
                                    : "photosphere_luminosity and speed select the wind; not both are given");
    lxg_node_add_text(one, "reason_code", steady->asked ? steady->why.code : "mass-not-given");
    return;
  }
  lxg_node_add_number(one, "mass_loss_rate_msun_yr", steady->rate / REPORT_MSUN_YR);
  lxg_node_add_number(one, "mass_loss_rate_error_msun_yr", steady->error / REPORT_MSUN_YR);
  lxg_node_add_integer(one, "winds", (long long)steady->winds);
}

void lxg_report_mass(struct lxg_node *root, const struct lxg_mass_data *data,
                     const struct lxg_mass_summary *summary, const struct lxg_report_steady *steady) {
  struct lxg_node *section = lxg_node_add_mapping(root, "mass");
  lxg_node_add_text(section, "reading", summary->reading);
  lxg_node_add_integer(section, "values", (long long)summary->values);
  lxg_node_add_number(section, "lowest_msun", summary->lowest / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "highest_msun", summary->highest / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "centre_msun", summary->centre / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "spread", summary->spread);
  lxg_node_add_number(section, "chi2", summary->chi2);
  lxg_node_add_bool(section, "bound_broken", summary->bound_broken);
  add_steady(section, steady);
  struct lxg_node *list = lxg_node_add_sequence(section, "methods");
  for (int method = 0; method < LXG_MASS_METHODS; method++) {
    add_method(list, &summary->estimate[method]);
  }
  add_given(section, data);
}

void lxg_report_mass_warnings(struct lxg_node *warnings, const struct lxg_mass_summary *summary,
                              const struct lxg_report_steady *steady) {
  if (summary->bound_broken) {
    lxg_report_warn(warnings, "mass-bound-broken",
                    "the methods' mean exceeds what the radiated energy can lift");
  }
  if (steady->asked && !steady->solved) {
    lxg_node_add_text(
        lxg_report_warn(warnings, "mass-no-wind", "no steady wind has this luminosity and speed"),
        "reason_code", steady->why.code);
  }
  if (steady->solved && steady->winds > 1) {
    lxg_node_add_integer(
        lxg_report_warn(warnings, "several-branches",
                        "several winds have this luminosity and speed; the chosen branch was taken"),
        "winds", (long long)steady->winds);
  }
}
