/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_ejecta.c - sections and warnings of the main job, and the table of epochs (see report.h).
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>

static void add_ejecta(struct lxg_node *root, const struct lxg_ejecta *ejecta) {
  struct lxg_node *section = lxg_node_add_mapping(root, "ejecta");
  const bool any = ejecta->solved > 0;
  lxg_node_add_text(section, "verdict", any ? "solved" : "none");
  if (!any && ejecta->count > 0) {
    const enum lxg_wind_reason reason = ejecta->epoch[0].reason;
    lxg_node_add_text(section, "reason", lxg_wind_reason_text(reason));
    lxg_node_add_text(section, "reason_code", lxg_wind_reason_code(reason));
  }
  lxg_node_add_number(section, "mass_msun", ejecta->mass / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "kinetic_energy_erg", ejecta->kinetic);
  lxg_node_add_number(section, "momentum_g_cm_s", ejecta->momentum);
  lxg_node_add_number(section, "mean_speed_km_s", ejecta->mean_speed / LXG_KM);
  lxg_node_add_number(section, "peak_mass_loss_rate_msun_yr", ejecta->peak_rate / REPORT_MSUN_YR);
  lxg_node_add_number(section, "peak_mass_loss_rate_d", ejecta->peak_rate_time / LXG_DAY);
  lxg_node_add_number(section, "peak_terminal_speed_km_s", ejecta->peak_speed / LXG_KM);
  lxg_node_add_number(section, "peak_terminal_speed_d", ejecta->peak_speed_time / LXG_DAY);
  lxg_node_add_number(section, "wind_duration_d", ejecta->wind_duration / LXG_DAY);
  lxg_node_add_number(section, "wind_first_d", ejecta->wind_first / LXG_DAY);
  lxg_node_add_number(section, "wind_last_d", ejecta->wind_last / LXG_DAY);
}

static void add_energy(struct lxg_node *root, const struct lxg_ejecta *ejecta) {
  const double total = ejecta->radiated + ejecta->lifting + ejecta->kinetic;
  struct lxg_node *section = lxg_node_add_mapping(root, "energy");
  lxg_node_add_number(section, "radiated_erg", ejecta->radiated);
  lxg_node_add_number(section, "lifting_erg", ejecta->lifting);
  lxg_node_add_number(section, "kinetic_erg", ejecta->kinetic);
  lxg_node_add_number(section, "radiated_share", ejecta->radiated / total);
  lxg_node_add_number(section, "lifting_share", ejecta->lifting / total);
  lxg_node_add_number(section, "kinetic_share", ejecta->kinetic / total);
}

static void add_epochs(struct lxg_node *root, const struct lxg_ejecta *ejecta) {
  struct lxg_node *section = lxg_node_add_mapping(root, "epochs");
  lxg_node_add_integer(section, "count", (long long)ejecta->count);
  lxg_node_add_integer(section, "solved", (long long)ejecta->solved);
  lxg_node_add_integer(section, "none", (long long)ejecta->none);
  struct lxg_node *list = lxg_node_add_sequence(section, "none_reasons");
  for (int reason = LXG_WIND_SOLVED + 1; reason < LXG_WIND_REASON_COUNT; reason++) {
    long long count = 0;
    for (size_t i = 0; i < ejecta->count; i++) {
      count += (int)ejecta->epoch[i].reason == reason;
    }
    if (count > 0) {
      struct lxg_node *one = lxg_node_add_mapping(list, NULL);
      lxg_node_add_text(one, "reason_code", lxg_wind_reason_code((enum lxg_wind_reason)reason));
      lxg_node_add_text(one, "reason", lxg_wind_reason_text((enum lxg_wind_reason)reason));
      lxg_node_add_integer(one, "count", count);
    }
  }
}

void lxg_report_ejecta(struct lxg_node *root, const struct lxg_ejecta *ejecta) {
  add_ejecta(root, ejecta);
  add_energy(root, ejecta);
  add_epochs(root, ejecta);
}

/* ---- warnings ---------------------------------------------------------------------------------------------------- */

static void warn_count(struct lxg_node *warnings, const char *code, const char *message, size_t count) {
  if (count > 0) {
    lxg_node_add_integer(lxg_report_warn(warnings, code, message), "epochs", (long long)count);
  }
}

static size_t thin_epochs(const struct lxg_ejecta *ejecta) {
  size_t count = 0;
  for (size_t i = 0; i < ejecta->count; i++) {
    const struct lxg_ejecta_epoch *epoch = &ejecta->epoch[i];
    count += epoch->reason == LXG_WIND_SOLVED &&
             epoch->place.value[LXG_FAMILY_CRITICAL_DEPTH] < LXG_REPORT_THIN_DEPTH;
  }
  return count;
}

void lxg_report_ejecta_warnings(struct lxg_node *warnings, const struct lxg_ejecta *ejecta,
                                const struct lxg_history *history, const struct lxg_history_excess *excess) {
  warn_count(warnings, "thin-wind",
             "the critical point is not deep enough for radiative diffusion to be a good description",
             thin_epochs(ejecta));
  warn_count(
      warnings, "not-steady",
      "the luminosity changes faster than gas or light crosses the wind: a steady wind is an approximation",
      ejecta->unsteady);
  warn_count(warnings, "several-branches", "several winds have the luminosity; the chosen branch was taken",
             ejecta->ambiguous);
  for (size_t i = 0; i < history->gap_count; i++) {
    struct lxg_node *gap = lxg_report_warn(warnings, "luminosity-gap",
                                           "long pause without data; luminosities there are a guess");
    lxg_node_add_number(gap, "from_d", history->gap[i].start / LXG_DAY);
    lxg_node_add_number(gap, "to_d", history->gap[i].end / LXG_DAY);
  }
  if (excess->open_start || excess->open_end) {
    lxg_report_warn(warnings, "super-eddington-open",
                    "the luminosity exceeds L_Edd at an end of the history: the duration is a lower limit");
  }
}

/* ---- epochs ------------------------------------------------------------------------------------------------------ */

static const struct report_column epoch_columns[] = {
    {"time_d", "d", "time of the epoch", LXG_COLUMN_NUMBER},
    {"luminosity_erg_s", "erg/s", "luminosity of the history", LXG_COLUMN_NUMBER},
    {"luminosity_ledd", "", "the same over the Eddington luminosity", LXG_COLUMN_NUMBER},
    {"mass_loss_rate_msun_yr", "Msun/yr", "", LXG_COLUMN_NUMBER},
    {"terminal_speed_km_s", "km/s", "speed at 1000 photospheric radii", LXG_COLUMN_NUMBER},
    {"photosphere_radius_rsun", "Rsun", "", LXG_COLUMN_NUMBER},
    {"photosphere_temperature_k", "K", "", LXG_COLUMN_NUMBER},
    {"photosphere_speed_km_s", "km/s", "", LXG_COLUMN_NUMBER},
    {"ejected_mass_msun", "Msun", "thrown out up to this epoch", LXG_COLUMN_NUMBER},
    {"verdict", "", "solved, or none: no wind at this epoch", LXG_COLUMN_TEXT},
    {"reason_code", "", "why there is no wind", LXG_COLUMN_TEXT},
    {"members", "", "winds of the family that have this luminosity", LXG_COLUMN_NUMBER},
    {"steady", "", "no where the luminosity changes faster than the wind can follow", LXG_COLUMN_TEXT},
    {"base_luminosity_erg_s", "erg/s", "diffusive luminosity at R_0", LXG_COLUMN_NUMBER},
    {"photosphere_luminosity_erg_s", "erg/s", "", LXG_COLUMN_NUMBER},
    {"luminosity_infinity_erg_s", "erg/s", "light that reaches infinity", LXG_COLUMN_NUMBER},
    {"envelope_mass_msun", "Msun", "between R_0 and the photosphere", LXG_COLUMN_NUMBER},
    {"critical_optical_depth", "", "optical depth of the critical point", LXG_COLUMN_NUMBER},
    {"flow_time_d", "d", "from critical point to photosphere", LXG_COLUMN_NUMBER},
    {"diffusion_time_d", "d", "radiation energy there over luminosity", LXG_COLUMN_NUMBER},
};
enum { EPOCH_COLUMNS = sizeof epoch_columns / sizeof epoch_columns[0] };

static enum lxg_status set_epoch(struct lxg_table *table, size_t i, const struct lxg_ejecta_epoch *epoch,
                                 double l_edd, struct lxg_error *error) {
  const bool solved = epoch->reason == LXG_WIND_SOLVED;
  const double *value = epoch->place.value;
  const char *const texts[EPOCH_COLUMNS] = {[9] = solved ? "solved" : "none",
                                            [10] = solved ? "" : lxg_wind_reason_code(epoch->reason),
                                            [12] = !solved           ? ""
                                                   : epoch->unsteady ? "no"
                                                                     : "yes"};
  const double numbers[EPOCH_COLUMNS] = {epoch->time / LXG_DAY,
                                         epoch->luminosity,
                                         epoch->luminosity / l_edd,
                                         value[LXG_FAMILY_MASS_LOSS_RATE] / REPORT_MSUN_YR,
                                         value[LXG_FAMILY_TERMINAL_SPEED] / LXG_KM,
                                         value[LXG_FAMILY_PHOTOSPHERE_RADIUS] / LXG_SOLAR_RADIUS,
                                         value[LXG_FAMILY_PHOTOSPHERE_TEMPERATURE],
                                         value[LXG_FAMILY_PHOTOSPHERE_SPEED] / LXG_KM,
                                         epoch->mass / LXG_SOLAR_MASS,
                                         NAN,
                                         NAN,
                                         (double)epoch->members,
                                         NAN,
                                         value[LXG_FAMILY_BASE_LUMINOSITY],
                                         value[LXG_FAMILY_PHOTOSPHERE_LUMINOSITY],
                                         value[LXG_FAMILY_LUMINOSITY_INFINITY],
                                         value[LXG_FAMILY_ENVELOPE_MASS] / LXG_SOLAR_MASS,
                                         value[LXG_FAMILY_CRITICAL_DEPTH],
                                         value[LXG_FAMILY_FLOW_TIME] / LXG_DAY,
                                         value[LXG_FAMILY_DIFFUSION_TIME] / LXG_DAY};
  enum lxg_status status = LXG_OK;
  for (size_t c = 0; c < EPOCH_COLUMNS && status == LXG_OK; c++) {
    status = epoch_columns[c].type == LXG_COLUMN_TEXT ? lxg_table_set_text(table, c, i, texts[c], error)
                                                      : lxg_table_set_number(table, c, i, numbers[c], error);
  }
  return status;
}

enum lxg_status lxg_report_epoch_table(const struct lxg_ejecta *ejecta, double l_edd,
                                       struct lxg_table **table, struct lxg_error *error) {
  enum lxg_status status =
      lxg_report_table("epochs", epoch_columns, EPOCH_COLUMNS, ejecta->count, table, error);
  for (size_t i = 0; i < ejecta->count && status == LXG_OK; i++) {
    status = set_epoch(*table, i, &ejecta->epoch[i], l_edd, error);
  }
  if (status == LXG_OK) {
    lxg_node_add_number(lxg_table_meta(*table), "eddington_luminosity_erg_s", l_edd);
  } else {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}
