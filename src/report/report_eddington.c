/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_eddington.c - beyond the Eddington limit: tiring, porosity, super-Eddington bookkeeping and the verdict on a claim
 * (see report.h; theory and sources in docs/super-eddington.md).
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>

/* ---- one wind ---------------------------------------------------------------------------------------------------- */

void lxg_report_tiring(struct lxg_node *section, const struct lxg_driving_estimate *estimate,
                       const struct lxg_star *foot) {
  struct lxg_node *tiring = lxg_node_add_mapping(section, "tiring");
  lxg_node_add_number(tiring, "foot_radius_cm", foot->radius);
  lxg_node_add_number(tiring, "number", estimate->tiring_number);
  lxg_node_add_number(tiring, "excess", estimate->tiring_number > 1.0 ? estimate->tiring_number : NAN);
  struct lxg_node *laws = lxg_node_add_mapping(tiring, "quick_laws");
  lxg_node_add_number(laws, "flux_limit", estimate->flux_limit);
  lxg_node_add_number(laws, "flux_speed_km_s", estimate->flux_speed / LXG_KM);
  lxg_node_add_number(laws, "enthalpy_limit", estimate->enthalpy_limit);
  lxg_node_add_number(laws, "enthalpy_speed_km_s", estimate->enthalpy_speed / LXG_KM);
  lxg_node_add_number(laws, "observed_share", estimate->observed_share);
  lxg_node_add_text(laws, "steady_wind", estimate->steady ? "yes" : "no");
}

void lxg_report_porous_wind(struct lxg_node *section, const struct lxg_wind *wind,
                            const struct lxg_porosity *porosity, double l_edd) {
  const double rate = wind->value[LXG_HELD_MASS_LOSS_RATE], speed = wind->critical.speed;
  struct lxg_node *node = lxg_node_add_mapping(section, "porous");
  lxg_node_add_text(node, "law", lxg_porosity_law_name(porosity->law));
  lxg_node_add_number(node, "number_w",
                      lxg_driving_porous_number(rate, wind->photosphere.luminosity, l_edd, speed));
  double closed = NAN;
  const double gamma = wind->critical.luminosity / l_edd;
  if (wind->reason == LXG_WIND_SOLVED &&
      (porosity->law == LXG_POROSITY_LENGTH || porosity->law == LXG_POROSITY_POWER) &&
      lxg_porosity_mass_loss(porosity, gamma, wind->critical.luminosity, speed, &closed, NULL) != LXG_OK) {
    closed = NAN;
  }
  lxg_node_add_number(node, "closed_form_rate_msun_yr", closed / REPORT_MSUN_YR);
}

/* ---- a history --------------------------------------------------------------------------------------------------- */

static void add_excess(struct lxg_node *section, const struct lxg_history_excess *excess, bool energies) {
  lxg_node_add_number(section, "duration_d", excess->duration / LXG_DAY);
  lxg_node_add_number(section, "first_d", excess->first / LXG_DAY);
  lxg_node_add_number(section, "last_d", excess->last / LXG_DAY);
  lxg_node_add_integer(section, "intervals", (long long)excess->intervals);
  lxg_node_add_number(section, "peak_ratio", excess->peak_ratio);
  lxg_node_add_number(section, "peak_d", excess->peak_time / LXG_DAY);
  lxg_node_add_number(section, "mean_ratio", excess->mean_ratio);
  if (energies) {
    lxg_node_add_number(section, "radiated_erg", excess->radiated);
    lxg_node_add_number(section, "energy_above_erg", excess->energy_above);
  }
}

struct lxg_node *lxg_report_super_eddington(struct lxg_node *root, const struct lxg_history_excess *excess) {
  struct lxg_node *section = lxg_node_add_mapping(root, "super_eddington");
  add_excess(section, excess, true);
  return section;
}

void lxg_report_excess_bounds(struct lxg_node *section, const struct lxg_history_excess *low,
                              const struct lxg_history_excess *high) {
  lxg_node_add_number(section, "duration_d_lo", low != NULL ? low->duration / LXG_DAY : NAN);
  lxg_node_add_number(section, "duration_d_hi", high != NULL ? high->duration / LXG_DAY : NAN);
}

void lxg_report_excess_local(struct lxg_node *section, const char *name,
                             const struct lxg_history_excess *excess) {
  if (excess == NULL) {
    lxg_node_add_none(section, name);
  } else {
    add_excess(lxg_node_add_mapping(section, name), excess, false);
  }
}

void lxg_report_tiring_history(struct lxg_node *root, const struct lxg_ejecta *ejecta,
                               const struct lxg_star *star) {
  const double escape = star->gm / star->radius; /* [erg g^-1] */
  const double supply = ejecta->radiated + ejecta->lifting + ejecta->kinetic;
  double most = NAN, when = NAN, power = 0.0;
  for (size_t i = 0; i < ejecta->count; i++) {
    const struct lxg_ejecta_epoch *epoch = &ejecta->epoch[i];
    const double rate = epoch->place.value[LXG_FAMILY_MASS_LOSS_RATE],
                 v = epoch->place.value[LXG_FAMILY_TERMINAL_SPEED];
    const double given =
        epoch->place.value[LXG_FAMILY_LUMINOSITY_INFINITY] + rate * (escape + 0.5 * v * v); /* [erg/s] */
    if (rate * escape / given > most || (isnan(most) && isfinite(given))) {
      most = rate * escape / given;
      when = epoch->time;
    }
    power = fmax(power, isfinite(given) ? given : epoch->luminosity);
  }
  struct lxg_node *section = lxg_node_add_mapping(root, "tiring");
  lxg_node_add_number(section, "number_max", most);
  lxg_node_add_number(section, "number_max_d", when / LXG_DAY);
  lxg_node_add_number(section, "number_mean", ejecta->lifting / supply);
  lxg_node_add_number(section, "rate_bound_msun_yr", power / escape / REPORT_MSUN_YR);
  lxg_node_add_number(section, "energy_supplied_erg", supply);
  lxg_node_add_number(section, "mass_bound_msun", supply / escape / LXG_SOLAR_MASS);
}

static double rate_jump(const struct lxg_report_handover *handover) {
  return fabs(handover->porous_rate / handover->plain_rate - 1.0);
}

void lxg_report_handover(struct lxg_node *root, const struct lxg_report_handover *handover) {
  struct lxg_node *section = lxg_node_add_mapping(root, "porosity");
  lxg_node_add_number(section, "homogeneous_limit_erg_s", handover->homogeneous);
  lxg_node_add_number(section, "homogeneous_limit_ledd", handover->homogeneous / handover->l_edd);
  lxg_node_add_number(section, "handover_luminosity_erg_s", handover->limit);
  lxg_node_add_number(section, "handover_luminosity_ledd", handover->limit / handover->l_edd);
  lxg_node_add_number(section, "plain_rate_msun_yr", handover->plain_rate / REPORT_MSUN_YR);
  lxg_node_add_number(section, "porous_rate_msun_yr", handover->porous_rate / REPORT_MSUN_YR);
  lxg_node_add_number(section, "rate_jump", rate_jump(handover));
  lxg_node_add_integer(section, "epochs_plain", (long long)handover->plain);
  lxg_node_add_integer(section, "epochs_porous", (long long)handover->porous);
}

void lxg_report_handover_warnings(struct lxg_node *warnings, const struct lxg_report_handover *handover,
                                  double tolerance) {
  const double jump = rate_jump(handover);
  if (handover->porous == 0) {
    return;
  }
  if (!isfinite(jump)) {
    lxg_report_warn(warnings, "handover-gap",
                    "at the homogeneous limit only one side, plain or porous, has a wind");
  } else if (jump > tolerance * (1.0 + 1e-9)) {
    struct lxg_node *warning = lxg_report_warn(
        warnings, "handover-jump", "the mass-loss rate jumps where plain winds hand over to porous ones");
    lxg_node_add_number(warning, "rate_jump", jump);
    lxg_node_add_number(warning, "tolerance", tolerance);
  }
}

void lxg_report_blend(struct lxg_node *root, size_t families, double deviation) {
  struct lxg_node *section = lxg_node_add_mapping(root, "reduction");
  lxg_node_add_integer(section, "families", (long long)families);
  lxg_node_add_number(section, "rate_error", deviation);
}

void lxg_report_blend_warning(struct lxg_node *warnings, double deviation) {
  struct lxg_node *warning =
      lxg_report_warn(warnings, "blend-error",
                      "winds between the families of several reduction factors are interpolated coarsely");
  lxg_node_add_number(warning, "rate_error", deviation);
}

/* ---- the verdict on a claim -------------------------------------------------------------------------------------- */

static void add_check(struct lxg_node *list, const struct lxg_driving_verdict *verdict, int criterion) {
  const struct lxg_driving_check *check = &verdict->check[criterion];
  static const struct {
    const char *need, *supply;
    double unit;
  } names[LXG_DRIVING_CRITERIA] = {
      [LXG_DRIVING_TIRING] = {"need_msun", "supply_msun", LXG_SOLAR_MASS},
      [LXG_DRIVING_ENERGY] = {"need_erg", "supply_erg", 1.0},
      [LXG_DRIVING_MOMENTUM] = {"need_g_cm_s", "supply_g_cm_s", 1.0},
      [LXG_DRIVING_WIND_MASS] = {"need_msun", "supply_msun", LXG_SOLAR_MASS},
      [LXG_DRIVING_WIND_SPEED] = {"need_km_s", "supply_km_s", LXG_KM},
  };
  struct lxg_node *one = lxg_node_add_mapping(list, NULL);
  lxg_node_add_text(one, "criterion", lxg_driving_criterion_name((enum lxg_driving_criterion)criterion));
  lxg_node_add_text(one, "outcome", lxg_driving_outcome_name(check->outcome));
  lxg_node_add_number(one, names[criterion].need, check->need / names[criterion].unit);
  lxg_node_add_number(one, names[criterion].supply, check->supply / names[criterion].unit);
  lxg_node_add_number(one, "ratio", check->ratio);
  lxg_node_add_text(one, "reason", check->reason);
}

void lxg_report_driving(struct lxg_node *root, const struct lxg_driving_verdict *verdict) {
  struct lxg_node *section = lxg_node_add_mapping(root, "driving");
  lxg_node_add_text(section, "verdict", lxg_driving_answer_name(verdict->answer));
  lxg_node_add_text(section, "reason", verdict->reason);
  lxg_node_add_number(section, "lifting_erg", verdict->lifting);
  lxg_node_add_number(section, "kinetic_erg", verdict->kinetic);
  lxg_node_add_number(section, "momentum_g_cm_s", verdict->momentum);
  lxg_node_add_number(section, "light_momentum_g_cm_s", verdict->light_momentum);
  lxg_node_add_number(section, "scatterings", verdict->scatterings);
  lxg_node_add_number(section, "wind_scatterings", verdict->wind_scatterings);
  lxg_node_add_number(section, "tiring_mass_msun", verdict->tiring_mass / LXG_SOLAR_MASS);
  lxg_node_add_number(section, "base_energy_erg", verdict->base_energy);
  struct lxg_node *checks = lxg_node_add_sequence(section, "checks");
  for (int i = 0; i < LXG_DRIVING_CRITERIA; i++) {
    add_check(checks, verdict, i);
  }
}

/* ---- columns of the table of epochs ------------------------------------------------------------------------------ */

enum lxg_status lxg_report_epoch_flow(struct lxg_table *table, const struct lxg_ejecta *ejecta,
                                      const struct lxg_wind_model *model, struct lxg_error *error) {
  static const struct report_column columns[] = {
      {"flow", "", "plain or porous", LXG_COLUMN_TEXT},
      {"number_w", "", "Mdot c c_T/(L - L_Edd), where L is above L_Edd", LXG_COLUMN_NUMBER},
      {"tiring_number", "", "Mdot G M/R_0 over the power supplied", LXG_COLUMN_NUMBER},
      {"eddington_ratio_photosphere", "", "with the opacity of the photosphere", LXG_COLUMN_NUMBER},
      {"eddington_ratio_max", "", "largest along the wind", LXG_COLUMN_NUMBER}};
  enum { COLUMNS = sizeof columns / sizeof columns[0] };
  const size_t first = table->columns;
  const double gm = model->star.gm, escape = gm / model->star.radius;
  const double l_edd = lxg_star_eddington_luminosity(&model->star, &model->composition);
  const double ct2 = LXG_BOLTZMANN / (lxg_composition_mu(&model->composition) * LXG_ATOMIC_MASS);
  const bool always = model->porosity.law != LXG_POROSITY_NONE && model->porosity.when == LXG_POROSITY_ALWAYS;
  enum lxg_status status = LXG_OK;
  for (size_t c = 0; c < COLUMNS && status == LXG_OK; c++) {
    status = lxg_table_add_column(table, columns[c].name, columns[c].type, columns[c].unit,
                                  columns[c].description, error);
  }
  for (size_t i = 0; i < ejecta->count && status == LXG_OK; i++) {
    const struct lxg_ejecta_epoch *epoch = &ejecta->epoch[i];
    const double *v = epoch->place.value;
    const double rate = v[LXG_FAMILY_MASS_LOSS_RATE], light = v[LXG_FAMILY_PHOTOSPHERE_LUMINOSITY];
    const double kinetic = 0.5 * v[LXG_FAMILY_TERMINAL_SPEED] * v[LXG_FAMILY_TERMINAL_SPEED];
    const double numbers[COLUMNS] = {
        NAN, lxg_driving_porous_number(rate, light, l_edd, sqrt(ct2 * v[LXG_FAMILY_CRITICAL_TEMPERATURE])),
        rate * escape / (v[LXG_FAMILY_LUMINOSITY_INFINITY] + rate * (escape + kinetic)),
        v[LXG_FAMILY_PHOTOSPHERE_OPACITY] * light / (4.0 * LXG_PI * gm * LXG_SPEED_OF_LIGHT),
        v[LXG_FAMILY_GAMMA_MAX]};
    status = lxg_table_set_text(table, first, i, epoch->porous || always ? "porous" : "plain", error);
    for (size_t c = 1; c < COLUMNS && status == LXG_OK; c++) {
      status = lxg_table_set_number(table, first + c, i, numbers[c], error);
    }
  }
  return status;
}
