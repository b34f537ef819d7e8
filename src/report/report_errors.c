/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_errors.c - the section `errors`: intervals, where the variance comes from, correlations; and the columns NAME_lo, NAME_hi of
 * the epoch table (see report.h).
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>
#include <stdio.h>

static const double dominant = 0.5; /* share of the variance from which one source is said to dominate */

static const double interpolation_share =
    0.1; /* of the half width of an interval that interpolation may err */

void lxg_report_error_plan(struct lxg_node *section, const struct lxg_propagation_plan *plan) {
  static const struct {
    const char *name;
    double unit;
  } parameters[LXG_PROPAGATION_HELD] = {{"star_mass_msun", LXG_SOLAR_MASS},
                                        {"star_radius_cm", 1.0},
                                        {"hydrogen", 1.0},
                                        {"cno", 1.0},
                                        {"metals", 1.0}};
  if (!plan->wanted) {
    return;
  }
  struct lxg_node *node = lxg_node_add_mapping(section, "errors");
  lxg_node_add_integer(node, "draws", (long long)plan->draws);
  lxg_node_add_integer(node, "split_draws", (long long)plan->split_draws);
  lxg_node_add_integer(node, "seed", (long long)plan->seed);
  lxg_node_add_number(node, "luminosity_scale", plan->luminosity_scale);
  for (int p = 0; p < LXG_PROPAGATION_HELD; p++) {
    if (plan->sigma[p] > 0.0) {
      lxg_node_add_number(node, parameters[p].name, plan->sigma[p] / parameters[p].unit);
    }
  }
  if (plan->sigma[LXG_PROPAGATION_HELD] > 0.0) {
    lxg_node_add_number(node, "held_cgs", plan->sigma[LXG_PROPAGATION_HELD]);
  }
}

static const char *class_name(enum lxg_uncertainty_class kind) {
  static const char *const names[] = {"epoch", "calibration", "model"};
  return names[kind];
}

static void add_summary(struct lxg_node *list, const struct lxg_propagation *errors, size_t i) {
  const struct lxg_uncertainty_summary *summary = &errors->result.summary[i];
  struct lxg_node *node =
      lxg_node_add_mapping(list, lxg_propagation_output_name((enum lxg_propagation_output)i));
  lxg_node_add_number(node, "nominal", errors->nominal[i]);
  lxg_node_add_number(node, "median", summary->median);
  lxg_node_add_number(node, "lo68", summary->lo68);
  lxg_node_add_number(node, "hi68", summary->hi68);
  lxg_node_add_number(node, "lo95", summary->lo95);
  lxg_node_add_number(node, "hi95", summary->hi95);
  lxg_node_add_integer(node, "draws", (long long)summary->count);
}

/* "distance dominates: 81 % of the variance". */
static void add_reading(struct lxg_node *node, const struct lxg_propagation *errors, size_t output) {
  const struct lxg_uncertainty_share *share = errors->result.share + output * errors->result.source_count;
  size_t most = 0;
  for (size_t s = 1; s < errors->sources; s++) {
    most = share[s].total > share[most].total || isnan(share[most].total) ? s : most;
  }
  char text[160];
  const double percent = 100.0 * fmin(fmax(share[most].total, 0.0), 1.0);
  if (isnan(share[most].total)) {
    snprintf(text, sizeof text, "no variance to split");
  } else if (share[most].total >= dominant) {
    snprintf(text, sizeof text, "%s dominates: %.0f %% of the variance", errors->source[most].name, percent);
  } else {
    snprintf(text, sizeof text, "no source dominates: %s has most, %.0f %% of the variance",
             errors->source[most].name, percent);
  }
  lxg_node_add_text(node, "reading", text);
}

static void add_split(struct lxg_node *section, const struct lxg_propagation *errors) {
  struct lxg_node *split = lxg_node_add_mapping(section, "variance");
  for (size_t i = 0; i < LXG_PROPAGATED_OUTPUTS; i++) {
    struct lxg_node *node =
        lxg_node_add_mapping(split, lxg_propagation_output_name((enum lxg_propagation_output)i));
    add_reading(node, errors, i);
    for (size_t s = 0; s < errors->sources; s++) {
      const struct lxg_uncertainty_share *share = &errors->result.share[i * errors->result.source_count + s];
      struct lxg_node *one = lxg_node_add_mapping(node, errors->source[s].name);
      lxg_node_add_number(one, "alone", share->first);
      lxg_node_add_number(one, "alone_sd", share->first_sd);
      lxg_node_add_number(one, "total", share->total);
      lxg_node_add_number(one, "total_sd", share->total_sd);
    }
  }
}

static void add_correlations(struct lxg_node *section, const struct lxg_propagation *errors) {
  struct lxg_node *list = lxg_node_add_mapping(section, "correlations");
  for (size_t i = 0; i < LXG_PROPAGATED_OUTPUTS; i++) {
    struct lxg_node *row =
        lxg_node_add_mapping(list, lxg_propagation_output_name((enum lxg_propagation_output)i));
    for (size_t j = 0; j < i; j++) {
      lxg_node_add_number(row, lxg_propagation_output_name((enum lxg_propagation_output)j),
                          errors->result.correlation[i * LXG_PROPAGATED_OUTPUTS + j]);
    }
  }
}

void lxg_report_errors(struct lxg_node *root, const struct lxg_propagation_plan *plan,
                       const struct lxg_propagation *errors) {
  struct lxg_node *section = lxg_node_add_mapping(root, "errors");
  const struct lxg_uncertainty_result *result = &errors->result;
  lxg_node_add_text(section, "verdict", "solved");
  lxg_node_add_integer(section, "draws", (long long)result->draws);
  lxg_node_add_integer(section, "failed_draws", (long long)result->failed);
  lxg_node_add_integer(section, "seed", (long long)plan->seed);
  struct lxg_node *sources = lxg_node_add_sequence(section, "sources");
  for (size_t s = 0; s < errors->sources; s++) {
    struct lxg_node *one = lxg_node_add_mapping(sources, NULL);
    lxg_node_add_text(one, "name", errors->source[s].name);
    lxg_node_add_text(one, "class", class_name(errors->source[s].kind));
  }
  struct lxg_node *model = lxg_node_add_mapping(section, "families");
  lxg_node_add_integer(model, "count", (long long)errors->families);
  lxg_node_add_number(model, "interpolation_error_mass", errors->check_mass);
  lxg_node_add_number(model, "interpolation_error_speed", errors->check_speed);
  struct lxg_node *results = lxg_node_add_mapping(section, "results");
  for (size_t i = 0; i < LXG_PROPAGATED_OUTPUTS; i++) {
    add_summary(results, errors, i);
  }
  if (result->share != NULL) {
    add_split(section, errors);
  }
  add_correlations(section, errors);
}

void lxg_report_error_warnings(struct lxg_node *warnings, const struct lxg_propagation *errors,
                               size_t windless) {
  const struct lxg_uncertainty_result *result = &errors->result;
  if (result->summary == NULL) {
    return;
  }
  const struct lxg_uncertainty_summary *mass = &result->summary[LXG_PROPAGATED_MASS];
  const double half = 0.5 * (mass->hi68 - mass->lo68) / mass->median;
  if (fabs(errors->check_mass) > interpolation_share * half) {
    struct lxg_node *warning = lxg_report_warn(
        warnings, "errors-interpolation",
        "interpolating between families errs by more than a tenth of the 68 % interval of the ejected mass");
    lxg_node_add_number(warning, "interpolation_error_mass", errors->check_mass);
  }
  if (result->failed > 0) {
    struct lxg_node *warning =
        lxg_report_warn(warnings, "errors-failed", "draws failed; the intervals are those of the others");
    lxg_node_add_integer(warning, "draws", (long long)result->failed);
    lxg_node_add_text(warning, "reason_code", result->reason[0].code);
  }
  const double without = result->summary[LXG_PROPAGATED_WINDLESS].hi68;
  if (without > (double)windless) {
    struct lxg_node *warning = lxg_report_warn(warnings, "errors-windless",
                                               "within the errors epochs lose their wind, which then adds no "
                                               "mass: intervals of the mass reach too low");
    lxg_node_add_number(warning, "epochs", without);
  }
}

void lxg_report_no_errors(struct lxg_node *root, const struct lxg_error *error) {
  struct lxg_node *section = lxg_node_add_mapping(root, "errors");
  lxg_node_add_text(section, "verdict", "none");
  lxg_node_add_text(section, "reason", error->line[0]);
  lxg_node_add_text(section, "reason_code", error->code);
  if (error->count > 1) {
    lxg_node_add_text(section, "while", error->line[1]);
  }
}

enum lxg_status lxg_report_error_columns(const struct lxg_propagation *errors, struct lxg_table *table,
                                         struct lxg_error *error) {
  if (errors->result.profile == NULL) {
    return LXG_OK;
  }
  for (size_t c = 0; c < LXG_PROPAGATION_COLUMNS; c++) {
    const char *name = lxg_propagation_column_name(c);
    const struct lxg_column *nominal = lxg_table_find(table, name);
    for (int side = 0; side < 2; side++) {
      char full[64];
      const size_t column = table->columns;
      snprintf(full, sizeof full, "%s_%s", name, side == 0 ? "lo" : "hi");
      enum lxg_status status =
          lxg_table_add_column(table, full, LXG_COLUMN_NUMBER, nominal != NULL ? nominal->unit : "",
                               side == 0 ? "16th percentile" : "84th percentile", error);
      for (size_t i = 0; i < errors->epochs && status == LXG_OK; i++) {
        const struct lxg_uncertainty_summary *summary =
            &errors->result.profile[i * LXG_PROPAGATION_COLUMNS + c];
        status = lxg_table_set_number(table, column, i, side == 0 ? summary->lo68 : summary->hi68, error);
      }
      if (status != LXG_OK) {
        return status;
      }
      nominal = lxg_table_find(table, name); /* adding may move the columns */
    }
  }
  return LXG_OK;
}
