/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_observed.c - what an observer brought and what it says by itself: light curve, decline, published relations, and the columns
 * of the epoch table that belong to magnitudes (see report.h). Relations stand beside the result; none is fed back.
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>
#include <string.h>

static void add_distance(struct lxg_node *section, const struct lxg_distance *distance) {
  static const char *const kinds[] = {"distance", "distance_modulus", "parallax"};
  struct lxg_node *node = lxg_node_add_mapping(section, "distance");
  lxg_node_add_text(node, "from", kinds[distance->kind]);
  lxg_node_add_number(node, "most_probable_kpc", distance->mode / 1e3);
  const bool exact = !(distance->error > 0.0);
  static const double levels[] = {0.5, 0.16, 0.84};
  static const char *const names[] = {"median_kpc", "lo68_kpc", "hi68_kpc"};
  for (size_t i = 0; i < 3; i++) {
    const double value = exact ? distance->mode * LXG_PARSEC : lxg_distance_quantile(distance, levels[i]);
    lxg_node_add_number(node, names[i], value / (1e3 * LXG_PARSEC));
  }
}

void lxg_report_observation(struct lxg_node *section, const struct lxg_observed *observed) {
  struct lxg_node *node = lxg_node_add_mapping(section, "luminosity");
  lxg_node_add_text(node, "kind", "magnitude");
  lxg_node_add_text(node, "light", lxg_observed_way_name(observed->way));
  lxg_node_add_text(node, "band", lxg_band_info(observed->band)->name);
  lxg_node_add_integer(node, "points", (long long)observed->curve.count);
  lxg_node_add_integer(node, "excluded_points", (long long)observed->excluded);
  lxg_node_add_integer(node, "epochs", (long long)observed->count);
  lxg_node_add_number(node, "time_zero", observed->curve.zero);
  lxg_node_add_number(node, "first_d", observed->time[0] / LXG_DAY);
  lxg_node_add_number(node, "last_d", observed->time[observed->count - 1] / LXG_DAY);
  add_distance(node, &observed->distance);
  lxg_node_add_number(node, "a_v_mag", observed->a_v);
  lxg_node_add_number(node, "a_v_error_mag", observed->a_v_error);
  lxg_node_add_number(node, "r_v", observed->r_v);
  lxg_node_add_number(node, "a_band_mag", observed->a_band);
  lxg_node_add_number(node, "zero_point_error_mag", observed->zero_point_error);
}

/* ---- decline ------------------------------------------------------------------------------------------------------- */

static void add_decline_time(struct lxg_node *section, const char *name,
                             const struct lxg_light_decline_time *time) {
  struct lxg_node *node = lxg_node_add_mapping(section, name);
  lxg_node_add_number(node, "value_d", time->known ? time->value : NAN);
  lxg_node_add_number(node, "lo68_d", time->lo68);
  lxg_node_add_number(node, "hi68_d", time->hi68);
  lxg_node_add_number(node, "last_crossing_d", time->known ? time->last : NAN);
  lxg_node_add_bool(node, "in_gap", time->in_gap);
  if (!time->known) {
    lxg_node_add_text(node, "reason_code", time->reason);
    lxg_node_add_number(node, "at_least_d", time->at_least);
  }
}

static void add_gaps(struct lxg_node *section, const struct lxg_light_decline *decline) {
  struct lxg_node *list = lxg_node_add_sequence(section, "gaps");
  for (size_t i = 0; i < decline->gap_count && i < LXG_LIGHT_GAPS_MAX; i++) {
    struct lxg_node *gap = lxg_node_add_mapping(list, NULL);
    lxg_node_add_number(gap, "from_d", decline->gap[i].from);
    lxg_node_add_number(gap, "to_d", decline->gap[i].to);
    lxg_node_add_integer(gap, "excluded_points", (long long)decline->gap[i].excluded);
  }
}

/* The measured value of a relation's result, NaN if there is none. */
static double measured(enum lxg_relation_quantity quantity, const struct lxg_light_decline *decline,
                       double peak_absolute, double mean_speed, double *sigma) {
  *sigma = 0.0;
  switch (quantity) {
  case LXG_RELATION_PEAK_MV:
    *sigma = decline->peak_error;
    return peak_absolute;
  case LXG_RELATION_T3:
    return decline->t3.known ? decline->t3.value : (double)NAN;
  case LXG_RELATION_SPEED_PRINCIPAL:
  case LXG_RELATION_SPEED_DIFFUSE:
    return mean_speed;
  default:
    return NAN;
  }
}

/* Relations whose argument the light curve gives, in V alone: that is what they were derived for. */
static void add_relations(struct lxg_node *section, const struct lxg_light_decline *decline,
                          double peak_absolute, double mean_speed) {
  struct lxg_node *list = lxg_node_add_sequence(section, "relations");
  for (size_t i = 0; i < lxg_relations_count(); i++) {
    const struct lxg_relation *relation = lxg_relations_at(i);
    const bool by_t2 = relation->argument == LXG_RELATION_T2, by_t3 = relation->argument == LXG_RELATION_T3;
    if ((by_t2 && !decline->t2.known) || (by_t3 && !decline->t3.known) || (!by_t2 && !by_t3)) {
      continue;
    }
    struct lxg_relation_check check;
    struct lxg_error why = {0};
    double sigma = 0.0;
    const double argument = by_t2 ? decline->t2.value : decline->t3.value;
    const double value = measured(relation->result, decline, peak_absolute, mean_speed, &sigma);
    struct lxg_node *node = lxg_node_add_mapping(list, NULL);
    lxg_node_add_text(node, "name", relation->name);
    lxg_node_add_text(node, "source", relation->source);
    lxg_node_add_text(node, "predicts", lxg_relations_quantity(relation->result));
    if (lxg_relations_check(relation, argument, value, sigma, &check, &why) != LXG_OK) {
      lxg_node_add_text(node, "reason", why.line[0]);
      continue;
    }
    lxg_node_add_number(node, "predicted", check.predicted);
    lxg_node_add_number(node, "lo68", check.lo68);
    lxg_node_add_number(node, "hi68", check.hi68);
    lxg_node_add_number(node, "here", value);
    lxg_node_add_number(node, "sigma", check.sigma);
  }
}

void lxg_report_light_curve(struct lxg_node *root, const struct lxg_observed *observed,
                            const struct lxg_light_decline *decline, double mean_speed) {
  struct lxg_node *section = lxg_node_add_mapping(root, "light_curve");
  const double absolute = decline->peak_magnitude - lxg_observed_nominal_shift(observed);
  lxg_node_add_text(section, "band", lxg_band_info(observed->band)->name);
  lxg_node_add_number(section, "peak_d", decline->peak_time);
  lxg_node_add_number(section, "peak_mag", decline->peak_magnitude);
  lxg_node_add_number(section, "peak_error_mag", decline->peak_error);
  lxg_node_add_number(section, "peak_absolute_mag", absolute);
  lxg_node_add_bool(section, "peak_at_edge", decline->peak_at_edge);
  lxg_node_add_integer(section, "used_points", (long long)decline->used);
  lxg_node_add_integer(section, "upper_limits", (long long)decline->limits);
  lxg_node_add_integer(section, "excluded_points", (long long)decline->excluded);
  add_decline_time(section, "t2", &decline->t2);
  add_decline_time(section, "t3", &decline->t3);
  add_gaps(section, decline);
  if (observed->band == LXG_BAND_V) {
    add_relations(section, decline, absolute, mean_speed / LXG_KM);
  }
}

void lxg_report_no_light_curve(struct lxg_node *root, const struct lxg_error *error) {
  struct lxg_node *section = lxg_node_add_mapping(root, "light_curve");
  lxg_node_add_text(section, "verdict", "none");
  lxg_node_add_text(section, "reason", error->line[0]);
  lxg_node_add_text(section, "reason_code", error->code);
}

/* ---- epochs --------------------------------------------------------------------------------------------------------- */

static const char *served(const struct lxg_observed *observed, const struct lxg_observed_course *course,
                          size_t i) {
  if (course == NULL) {
    return lxg_observed_way_name(observed->way);
  }
  return course->epoch[i].reason == LXG_WIND_SOLVED
             ? lxg_observed_way_name((enum lxg_observed_way)course->epoch[i].served)
             : NULL;
}

enum lxg_status lxg_report_observed_columns(const struct lxg_observed *observed,
                                            const struct lxg_observed_course *course, struct lxg_table *table,
                                            struct lxg_error *error) {
  const size_t first = table->columns;
  const double shift = lxg_observed_nominal_shift(observed);
  enum lxg_status status = lxg_table_add_column(table, "absolute_magnitude_mag", LXG_COLUMN_NUMBER, "mag",
                                                "without extinction", error);
  if (status == LXG_OK) {
    status = lxg_table_add_column(table, "light", LXG_COLUMN_TEXT, "",
                                  "which light served: see docs/photometry.md", error);
  }
  for (size_t i = 0; i < observed->count && status == LXG_OK; i++) {
    status = lxg_table_set_number(table, first, i, observed->magnitude[i] - shift, error);
    if (status == LXG_OK) {
      status = lxg_table_set_text(table, first + 1, i, served(observed, course, i), error);
    }
  }
  return status;
}

void lxg_report_served(struct lxg_node *root, const struct lxg_observed *observed,
                       const struct lxg_observed_course *course) {
  struct lxg_node *section = lxg_node_add_mapping(root, "light");
  for (int way = 0; way < LXG_OBSERVED_WAYS; way++) {
    long long count = 0;
    for (size_t i = 0; i < observed->count; i++) {
      const char *name = served(observed, course, i);
      count += name != NULL && strcmp(name, lxg_observed_way_name((enum lxg_observed_way)way)) == 0;
    }
    if (count > 0) {
      lxg_node_add_integer(section, lxg_observed_way_name((enum lxg_observed_way)way), count);
    }
  }
}
