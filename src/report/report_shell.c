/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_shell.c - the swept shell against time, and ejected mass against speed (see report.h).
 */
#include "luxgale/memory.h"
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>

enum {
  SHELL_TIMES = 201,  /* of the table */
  VELOCITY_BINS = 100 /* of the distribution */
};

static double step_time(double start, double end, size_t i) {
  return start + (end - start) * (double)i / (double)(SHELL_TIMES - 1);
}

/* The most massive shell at the table's times. */
static enum lxg_status track(const struct lxg_speeds *speeds, double start, double end,
                             struct lxg_shell_state state[SHELL_TIMES], bool exists[SHELL_TIMES],
                             struct lxg_error *error) {
  double time[SHELL_TIMES];
  for (size_t i = 0; i < SHELL_TIMES; i++) {
    time[i] = step_time(start, end, i);
    exists[i] = false;
    state[i] = (struct lxg_shell_state){.time = time[i]};
  }
  const struct lxg_shell_history *history = lxg_speeds_shell(speeds);
  return history != NULL ? lxg_shell_track(history, SHELL_TIMES, time, state, exists, error) : LXG_OK;
}

static void add_state(struct lxg_node *section, const char *key, const struct lxg_shell_state *state,
                      double ejected) {
  struct lxg_node *at = lxg_node_add_mapping(section, key);
  lxg_node_add_number(at, "time_d", state->time / LXG_DAY);
  lxg_node_add_number(at, "mass_msun", state->mass / LXG_SOLAR_MASS);
  lxg_node_add_number(at, "ejected_share", state->mass / ejected);
  lxg_node_add_number(at, "speed_km_s", state->speed / LXG_KM);
  lxg_node_add_number(at, "wind_speed_km_s",
                      state->wind_speed > 0.0 ? state->wind_speed / LXG_KM : (double)NAN);
  lxg_node_add_number(at, "radius_cm", state->radius);
  lxg_node_add_number(at, "column_g_cm2", state->column);
  lxg_node_add_number(at, "power_erg_s", state->power_behind + state->power_ahead);
  lxg_node_add_number(at, "dissipated_erg", state->dissipated);
}

static void add_shell(struct lxg_node *root, const struct lxg_speeds *speeds, double end,
                      const struct lxg_shell_state state[SHELL_TIMES], const bool exists[SHELL_TIMES]) {
  const struct lxg_shell_history *history = lxg_speeds_shell(speeds);
  struct lxg_shell_onset onset = {
      .forms = false, .reason = "no gas leaves the star", .reason_code = "shell-no-gas"};
  struct lxg_node *section = lxg_node_add_mapping(root, "swept_shell");
  if (history != NULL) {
    lxg_shell_first(history, end, &onset);
  }
  lxg_node_add_bool(section, "forms", onset.forms);
  if (!onset.forms) {
    lxg_node_add_text(section, "reason", onset.reason);
    lxg_node_add_text(section, "reason_code", onset.reason_code);
    return;
  }
  lxg_node_add_number(section, "onset_d", onset.time / LXG_DAY);
  lxg_node_add_number(section, "onset_radius_cm", onset.radius);
  lxg_node_add_number(section, "overtaken_gas_left_d", onset.departure / LXG_DAY);
  size_t peak = SHELL_TIMES, last = SHELL_TIMES;
  for (size_t i = 0; i < SHELL_TIMES; i++) {
    const double power = state[i].power_behind + state[i].power_ahead;
    if (exists[i]) {
      peak = peak == SHELL_TIMES || power > state[peak].power_behind + state[peak].power_ahead ? i : peak;
      last = i;
    }
  }
  if (last < SHELL_TIMES) {
    double mass, momentum, energy;
    lxg_shell_total(history, end, &mass, &momentum, &energy);
    add_state(section, "brightest", &state[peak], mass);
    add_state(section, "at_end", &state[last], mass);
  }
}

/* ---- distribution ------------------------------------------------------------------------------------------------- */

struct distribution {
  double edge[VELOCITY_BINS + 1];                     /* [cm s^-1] */
  double before[VELOCITY_BINS], after[VELOCITY_BINS]; /* [g] */
};

static enum lxg_status distribute(const struct lxg_speeds *speeds, double end, struct distribution *all,
                                  struct lxg_error *error) {
  double slow = 0.0, fast = 0.0, outside[4];
  lxg_speeds_range(speeds, &slow, &fast);
  fast = fast > slow ? fast : slow * (1.0 + 1e-6); /* one speed alone: one narrow range around it */
  for (size_t i = 0; i <= VELOCITY_BINS; i++) {
    all->edge[i] = i == VELOCITY_BINS ? fast : slow + (fast - slow) * (double)i / VELOCITY_BINS;
  }
  return lxg_shell_distribution(lxg_speeds_shell(speeds), end, VELOCITY_BINS, all->edge, all->before,
                                all->after, outside, error);
}

/* Speed below which a share of the mass lies, linear in its bin. */
static double quantile(const double edge[], const double mass[], double share) {
  double total = 0.0, below = 0.0;
  for (size_t i = 0; i < VELOCITY_BINS; i++) {
    total += mass[i];
  }
  for (size_t i = 0; i < VELOCITY_BINS; i++) {
    if (mass[i] > 0.0 && below + mass[i] >= share * total) {
      return edge[i] + (edge[i + 1] - edge[i]) * (share * total - below) / mass[i];
    }
    below += mass[i];
  }
  return NAN;
}

static void add_quantiles(struct lxg_node *section, const char *key, const double edge[],
                          const double mass[]) {
  struct lxg_node *one = lxg_node_add_mapping(section, key);
  lxg_node_add_number(one, "tenth_km_s", quantile(edge, mass, 0.1) / LXG_KM);
  lxg_node_add_number(one, "half_km_s", quantile(edge, mass, 0.5) / LXG_KM);
  lxg_node_add_number(one, "nine_tenths_km_s", quantile(edge, mass, 0.9) / LXG_KM);
}

static enum lxg_status add_distribution(struct lxg_node *root, const struct lxg_speeds *speeds, double end,
                                        struct lxg_error *error) {
  struct distribution all;
  const enum lxg_status status = distribute(speeds, end, &all, error);
  if (status == LXG_OK) {
    struct lxg_node *section = lxg_node_add_mapping(root, "velocity_distribution");
    lxg_node_add_number(section, "time_d", end / LXG_DAY);
    lxg_node_add_number(section, "slowest_km_s", all.edge[0] / LXG_KM);
    lxg_node_add_number(section, "fastest_km_s", all.edge[VELOCITY_BINS] / LXG_KM);
    add_quantiles(section, "mass_below_at_departure", all.edge, all.before);
    add_quantiles(section, "mass_below_with_shell", all.edge, all.after);
  }
  return status;
}

enum lxg_status lxg_report_shell(struct lxg_node *root, const struct lxg_speeds *speeds, double start,
                                 double end, struct lxg_error *error) {
  struct lxg_shell_state state[SHELL_TIMES];
  bool exists[SHELL_TIMES];
  enum lxg_status status = track(speeds, start, end, state, exists, error);
  if (status == LXG_OK) {
    add_shell(root, speeds, end, state, exists);
  }
  if (status == LXG_OK && lxg_speeds_shell(speeds) != NULL) {
    status = add_distribution(root, speeds, end, error);
  }
  return status;
}

/* ---- tables ------------------------------------------------------------------------------------------------------- */

static const struct report_column shell_columns[] = {
    {"time_d", "d", "", LXG_COLUMN_NUMBER},
    {"mass_msun", "Msun", "of the most massive shell", LXG_COLUMN_NUMBER},
    {"speed_km_s", "km/s", "of the shell", LXG_COLUMN_NUMBER},
    {"radius_cm", "cm", "from the centre of the star", LXG_COLUMN_NUMBER},
    {"column_g_cm2", "", "mass per area [g/cm2]", LXG_COLUMN_NUMBER},
    {"wind_speed_km_s", "km/s", "of the gas that arrives from behind", LXG_COLUMN_NUMBER},
    {"power_behind_erg_s", "erg/s", "energy of motion lost where it arrives", LXG_COLUMN_NUMBER},
    {"power_ahead_erg_s", "erg/s", "the same where the shell meets older gas", LXG_COLUMN_NUMBER},
    {"dissipated_erg", "erg", "energy of motion lost by its gas since departure", LXG_COLUMN_NUMBER},
    {"oldest_left_d", "d", "when its oldest gas left the star", LXG_COLUMN_NUMBER},
    {"youngest_left_d", "d", "when its youngest gas did", LXG_COLUMN_NUMBER},
};
enum { SHELL_COLUMNS = sizeof shell_columns / sizeof shell_columns[0] };

static enum lxg_status set_numbers(struct lxg_table *table, size_t row, const double number[], size_t count,
                                   struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  for (size_t c = 0; c < count && status == LXG_OK; c++) {
    status = lxg_table_set_number(table, c, row, number[c], error);
  }
  return status;
}

enum lxg_status lxg_report_shell_table(const struct lxg_speeds *speeds, double start, double end,
                                       struct lxg_table **table, struct lxg_error *error) {
  struct lxg_shell_state state[SHELL_TIMES];
  bool exists[SHELL_TIMES];
  const size_t rows = lxg_speeds_shell(speeds) != NULL ? SHELL_TIMES : 0;
  enum lxg_status status = lxg_report_table("shell", shell_columns, SHELL_COLUMNS, rows, table, error);
  if (status == LXG_OK) {
    status = track(speeds, start, end, state, exists, error);
  }
  for (size_t i = 0; i < rows && status == LXG_OK; i++) {
    const struct lxg_shell_state *s = &state[i];
    const double number[SHELL_COLUMNS] = {
        s->time / LXG_DAY, s->mass / LXG_SOLAR_MASS,
        s->speed / LXG_KM, s->radius,
        s->column,         s->wind_speed > 0.0 ? s->wind_speed / LXG_KM : (double)NAN,
        s->power_behind,   s->power_ahead,
        s->dissipated,     s->first / LXG_DAY,
        s->last / LXG_DAY};
    status = set_numbers(*table, i, number, exists[i] ? SHELL_COLUMNS : 1, error);
  }
  if (status != LXG_OK) {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}

static const struct report_column velocity_columns[] = {
    {"speed_low_km_s", "km/s", "lower edge of the bin", LXG_COLUMN_NUMBER},
    {"speed_high_km_s", "km/s", "upper edge", LXG_COLUMN_NUMBER},
    {"mass_at_departure_msun", "Msun", "that left the star with such a speed", LXG_COLUMN_NUMBER},
    {"mass_with_shell_msun", "Msun", "the same with the gas of shells at their speeds", LXG_COLUMN_NUMBER},
    {"dmdv_at_departure", "", "mass over width of the bin [Msun per km/s]", LXG_COLUMN_NUMBER},
    {"dmdv_with_shell", "", "the same with shells [Msun per km/s]", LXG_COLUMN_NUMBER},
};
enum { VELOCITY_COLUMNS = sizeof velocity_columns / sizeof velocity_columns[0] };

enum lxg_status lxg_report_velocity_table(const struct lxg_speeds *speeds, double end,
                                          struct lxg_table **table, struct lxg_error *error) {
  struct distribution all;
  const size_t rows = lxg_speeds_shell(speeds) != NULL ? VELOCITY_BINS : 0;
  enum lxg_status status =
      lxg_report_table("velocities", velocity_columns, VELOCITY_COLUMNS, rows, table, error);
  if (status == LXG_OK && rows > 0) {
    status = distribute(speeds, end, &all, error);
  }
  for (size_t i = 0; i < rows && status == LXG_OK; i++) {
    const double low = all.edge[i] / LXG_KM, high = all.edge[i + 1] / LXG_KM;
    const double before = all.before[i] / LXG_SOLAR_MASS, after = all.after[i] / LXG_SOLAR_MASS;
    const double number[VELOCITY_COLUMNS] = {
        low, high, before, after, before / (high - low), after / (high - low)};
    status = set_numbers(*table, i, number, VELOCITY_COLUMNS, error);
  }
  if (status == LXG_OK) {
    lxg_node_add_number(lxg_table_meta(*table), "time_d", end / LXG_DAY);
  } else {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}
