/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_decline.c - the section `decline`, its warnings, and the table of states (see report.h).
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>

static const double join_tolerance = 0.02; /* difference at the end of the wind that needs no word */

static const char *light_name(enum lxg_decline_light light) {
  static const char *const names[] = {"black-body", "free-free", "shell"};
  return names[light];
}

static void add_end(struct lxg_node *section, const struct lxg_decline *decline) {
  struct lxg_node *end = lxg_node_add_mapping(section, "end");
  lxg_node_add_text(end, "reason_code", lxg_decline_end_code(decline->end));
  lxg_node_add_text(end, "reason", lxg_decline_end_text(decline->end));
}

static void add_start(struct lxg_node *section, const struct lxg_decline *decline) {
  const struct lxg_decline_state *first = &decline->state[0];
  struct lxg_node *start = lxg_node_add_mapping(section, "start");
  lxg_node_add_number(start, "envelope_mass_msun", first->envelope_mass / LXG_SOLAR_MASS);
  lxg_node_add_number(start, "wanted_mass_msun", decline->wanted_mass / LXG_SOLAR_MASS);
  lxg_node_add_number(start, "photosphere_temperature_k", first->photosphere_temperature);
  lxg_node_add_number(start, "photosphere_radius_rsun", first->photosphere_radius / LXG_SOLAR_RADIUS);
  lxg_node_add_number(start, "luminosity_erg_s", first->luminosity);
  lxg_node_add_number(start, "mass_loss_rate_msun_yr", first->mass_loss_rate / REPORT_MSUN_YR);
  lxg_node_add_number(start, "terminal_speed_km_s", first->terminal_speed / LXG_KM);
}

static void add_join(struct lxg_node *section, const struct lxg_decline_join *join) {
  struct lxg_node *node = lxg_node_add_mapping(section, "join");
  const bool both = join->wind && join->rest;
  const bool close = both && fabs(join->envelope_mass) <= join_tolerance &&
                     fabs(join->luminosity) <= join_tolerance && fabs(join->temperature) <= join_tolerance;
  lxg_node_add_number(node, "envelope_mass_difference", join->envelope_mass);
  lxg_node_add_number(node, "luminosity_difference", join->luminosity);
  lxg_node_add_number(node, "temperature_difference", join->temperature);
  const char *reason =
      close        ? "envelopes at rest continue the winds within 2 %"
      : both       ? "the photosphere of a flow (kappa rho R = 8/3) and that of an atmosphere at rest are "
                     "different places, and next to the largest envelope at rest the temperature changes "
                     "quickly at almost constant mass"
      : join->wind ? "no envelope at rest was found"
                   : "there is no wind";
  lxg_node_add_text(node, "reason", reason);
}

static void add_curve(struct lxg_node *section, const char *key, const struct lxg_decline_curve *curve) {
  struct lxg_node *node = lxg_node_add_mapping(section, key);
  lxg_node_add_number(node, "peak_mag", curve->peak);
  lxg_node_add_number(node, "peak_d", curve->peak_time / LXG_DAY);
  lxg_node_add_number(node, "t2_d", curve->t2 / LXG_DAY);
  lxg_node_add_number(node, "t3_d", curve->t3 / LXG_DAY);
  struct lxg_node *slopes = lxg_node_add_sequence(node, "slopes");
  for (size_t i = 0; i < LXG_DECLINE_SLOPES; i++) {
    struct lxg_node *one = lxg_node_add_mapping(slopes, NULL);
    lxg_node_add_number(one, "from_mag", curve->slope[i].from_mag);
    lxg_node_add_number(one, "to_mag", curve->slope[i].to_mag);
    lxg_node_add_number(one, "dlog_flux_dlog_time", curve->slope[i].slope);
  }
}

static void add_speeds(struct lxg_node *section, const struct lxg_decline *decline) {
  struct lxg_node *speeds = lxg_node_add_mapping(section, "speeds");
  const bool wind = decline->wind_states > 0;
  const struct lxg_decline_state *first = &decline->state[0];
  const struct lxg_decline_state *last = wind ? &decline->state[decline->wind_states - 1] : first;
  lxg_node_add_number(speeds, "terminal_start_km_s", first->terminal_speed / LXG_KM);
  lxg_node_add_number(speeds, "photosphere_start_km_s", first->photosphere_speed / LXG_KM);
  lxg_node_add_number(speeds, "terminal_end_km_s", last->terminal_speed / LXG_KM);
  lxg_node_add_number(speeds, "photosphere_end_km_s", last->photosphere_speed / LXG_KM);
  lxg_node_add_number(speeds, "mean_km_s", decline->mean_speed / LXG_KM);
}

void lxg_report_decline(struct lxg_node *root, const struct lxg_decline *decline) {
  struct lxg_node *section = lxg_node_add_mapping(root, "decline");
  lxg_node_add_text(section, "verdict", "solved");
  lxg_node_add_number(section, "wind_duration_d", decline->wind_duration / LXG_DAY);
  lxg_node_add_number(section, "thick_wind_duration_d", decline->thick_duration / LXG_DAY);
  lxg_node_add_number(section, "supersoft_start_d", decline->supersoft_start / LXG_DAY);
  lxg_node_add_number(section, "turnoff_d", decline->turn_off / LXG_DAY);
  lxg_node_add_number(section, "ejected_mass_msun", decline->ejected_mass / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "burnt_mass_msun", decline->burnt_mass / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "ejected_over_burnt", decline->ejected_mass / decline->burnt_mass);
  lxg_node_add_number(section, "accreted_mass_msun", decline->accreted_mass / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "remaining_mass_msun", decline->remaining_mass / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "kinetic_energy_erg", decline->kinetic);
  lxg_node_add_number(section, "light_erg", decline->light);
  lxg_node_add_number(section, "lifting_erg", decline->lifting);
  lxg_node_add_number(section, "nuclear_erg", decline->nuclear);
  lxg_node_add_number(section, "stored_before_erg", decline->stored);
  lxg_node_add_number(section, "light_share", decline->light_share);
  lxg_node_add_number(section, "lifting_share", decline->lifting_share);
  lxg_node_add_number(section, "kinetic_share", decline->kinetic_share);
  lxg_node_add_number(section, "t2_d", decline->v.t2 / LXG_DAY);
  lxg_node_add_number(section, "t3_d", decline->v.t3 / LXG_DAY);
  add_start(section, decline);
  add_speeds(section, decline);
  add_curve(section, "v_light", &decline->v);
  add_curve(section, "thin_free_free_light", &decline->freefree);
  add_join(section, &decline->join);
  add_end(section, decline);
  lxg_node_add_text(section, "thick_end_code",
                    decline->join.wind ? lxg_wind_reason_code(decline->thick_end) : NULL);
  lxg_node_add_integer(section, "states", (long long)decline->count);
  lxg_node_add_integer(section, "newton_steps", decline->newton_steps);
}

void lxg_report_no_decline(struct lxg_node *root, const struct lxg_error *error) {
  struct lxg_node *section = lxg_node_add_mapping(root, "decline");
  lxg_node_add_text(section, "verdict", "none");
  lxg_node_add_text(section, "reason", error->line[0]);
  lxg_node_add_text(section, "reason_code", error->code);
}

void lxg_report_decline_warnings(struct lxg_node *warnings, const struct lxg_decline *decline) {
  if (decline->start_clipped) {
    lxg_report_warn(
        warnings, "start-clipped",
        "the steady states end below the wanted start mass: the eruption starts from the largest one, and "
        "the mass above it is not accounted for");
  }
  if (decline->wind_states == 0) {
    lxg_report_warn(warnings, "no-wind",
                    "the eruption has no wind: the star has none over a burning base, or the start lies "
                    "beyond its end");
  }
  if (decline->wind_duration > decline->thick_duration && decline->wind_states > 0) {
    lxg_report_warn(
        warnings, "thin-wind",
        "towards its end the critical point of the wind has an optical depth below 5: the last winds are "
        "an approximation");
  }
  if (decline->end == LXG_DECLINE_LOST) {
    lxg_report_warn(warnings, "decline-lost", lxg_decline_end_text(decline->end));
  }
}

static const struct report_column columns[] = {
    {"time_d", "d", "since the start", LXG_COLUMN_NUMBER},
    {"phase", "", "wind or static", LXG_COLUMN_TEXT},
    {"envelope_mass_msun", "Msun", "between R_0 and the photosphere", LXG_COLUMN_NUMBER},
    {"mass_loss_rate_msun_yr", "Msun/yr", "of the wind", LXG_COLUMN_NUMBER},
    {"burning_rate_msun_yr", "Msun/yr", "envelope mass used up, L_n/(X Q)", LXG_COLUMN_NUMBER},
    {"luminosity_erg_s", "erg/s", "of the photosphere", LXG_COLUMN_NUMBER},
    {"luminosity_ledd", "", "the same over the Eddington luminosity", LXG_COLUMN_NUMBER},
    {"nuclear_luminosity_erg_s", "erg/s", "", LXG_COLUMN_NUMBER},
    {"photosphere_radius_rsun", "Rsun", "", LXG_COLUMN_NUMBER},
    {"photosphere_temperature_k", "K", "", LXG_COLUMN_NUMBER},
    {"photosphere_speed_km_s", "km/s", "", LXG_COLUMN_NUMBER},
    {"terminal_speed_km_s", "km/s", "speed at 1000 photospheric radii", LXG_COLUMN_NUMBER},
    {"light_erg_s", "erg/s", "light that reaches infinity", LXG_COLUMN_NUMBER},
    {"lifting_rate_erg_s", "erg/s", "Mdot G M/R_0", LXG_COLUMN_NUMBER},
    {"kinetic_rate_erg_s", "erg/s", "Mdot v_inf^2/2", LXG_COLUMN_NUMBER},
    {"base_temperature_k", "K", "at R_0", LXG_COLUMN_NUMBER},
    {"critical_optical_depth", "", "optical depth of the critical point", LXG_COLUMN_NUMBER},
    {"ejected_mass_msun", "Msun", "thrown out so far", LXG_COLUMN_NUMBER},
    {"burnt_mass_msun", "Msun", "burnt so far", LXG_COLUMN_NUMBER},
    {"v_mag", "mag", "absolute, the brightest of three lights", LXG_COLUMN_NUMBER},
    {"v_light", "", "which light that is", LXG_COLUMN_TEXT},
    {"v_black_body_mag", "mag", "photosphere alone", LXG_COLUMN_NUMBER},
    {"v_free_free_mag", "mag", "wind, with its own absorption", LXG_COLUMN_NUMBER},
    {"v_shell_mag", "mag", "gas thrown out so far", LXG_COLUMN_NUMBER},
    {"v_thin_free_free_mag", "mag", "wind, without absorption: Mdot^2/(v^2 R)", LXG_COLUMN_NUMBER},
    {"uv1455_mag", "mag", "absolute AB magnitude at 1455 Angstrom", LXG_COLUMN_NUMBER},
    {"xray_luminosity_erg_s", "erg/s", "black photosphere, 0.2 to 1 keV", LXG_COLUMN_NUMBER},
};
enum { COLUMNS = sizeof columns / sizeof columns[0] };

static double finite(double value) {
  return isfinite(value) ? value : (double)NAN;
}

static enum lxg_status set_row(struct lxg_table *table, size_t i, const struct lxg_decline_state *s,
                               double l_edd, struct lxg_error *error) {
  const char *const texts[COLUMNS] = {
      [1] = s->phase == LXG_DECLINE_WIND ? "wind" : "static", [20] = light_name(s->v_light)};
  const double numbers[COLUMNS] = {s->time / LXG_DAY,
                                   NAN,
                                   s->envelope_mass / LXG_SOLAR_MASS,
                                   s->mass_loss_rate / REPORT_MSUN_YR,
                                   s->burning_rate / REPORT_MSUN_YR,
                                   s->luminosity,
                                   s->luminosity / l_edd,
                                   s->nuclear_luminosity,
                                   s->photosphere_radius / LXG_SOLAR_RADIUS,
                                   s->photosphere_temperature,
                                   s->photosphere_speed / LXG_KM,
                                   s->terminal_speed / LXG_KM,
                                   s->light,
                                   s->lifting_rate,
                                   s->kinetic_rate,
                                   s->base_temperature,
                                   s->critical_depth,
                                   s->ejected_mass / LXG_SOLAR_MASS,
                                   s->burnt_mass / LXG_SOLAR_MASS,
                                   s->v_magnitude,
                                   NAN,
                                   s->v_blackbody,
                                   finite(s->v_freefree),
                                   finite(s->v_shell),
                                   finite(s->v_thin),
                                   s->uv_magnitude,
                                   s->xray_luminosity};
  enum lxg_status status = LXG_OK;
  for (size_t c = 0; c < COLUMNS && status == LXG_OK; c++) {
    status = columns[c].type == LXG_COLUMN_TEXT ? lxg_table_set_text(table, c, i, texts[c], error)
                                                : lxg_table_set_number(table, c, i, numbers[c], error);
  }
  return status;
}

enum lxg_status lxg_report_decline_table(const struct lxg_decline *decline, double l_edd,
                                         struct lxg_table **table, struct lxg_error *error) {
  enum lxg_status status = lxg_report_table("decline", columns, COLUMNS, decline->count, table, error);
  for (size_t i = 0; i < decline->count && status == LXG_OK; i++) {
    status = set_row(*table, i, &decline->state[i], l_edd, error);
  }
  if (status == LXG_OK) {
    struct lxg_node *meta = lxg_table_meta(*table);
    lxg_node_add_number(meta, "eddington_luminosity_erg_s", l_edd);
    lxg_node_add_text(meta, "end", lxg_decline_end_code(decline->end));
  } else {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}
