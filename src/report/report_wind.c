/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_wind.c - the section `wind` and its warnings (see report.h).
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

static void add_verdict(struct lxg_node *section, const struct lxg_wind *wind) {
  const bool solved = wind->reason == LXG_WIND_SOLVED;
  lxg_node_add_text(section, "verdict", solved ? "solved" : "none");
  if (!solved) {
    lxg_node_add_text(section, "reason", lxg_wind_reason_text(wind->reason));
    lxg_node_add_text(section, "reason_code", lxg_wind_reason_code(wind->reason));
  }
}

static void add_sites(struct lxg_node *section, const struct lxg_wind *wind, double l_edd) {
  struct lxg_node *critical = lxg_node_add_mapping(section, "critical");
  lxg_node_add_number(critical, "radius_cm", wind->critical.radius);
  lxg_node_add_number(critical, "temperature_k", wind->critical.temperature);
  lxg_node_add_number(critical, "density_g_cm3", wind->critical.density);
  lxg_node_add_number(critical, "speed_km_s", wind->critical.speed / LXG_KM);
  lxg_node_add_number(critical, "optical_depth", wind->critical.optical_depth);
  lxg_node_add_number(critical, "luminosity_erg_s", wind->critical.luminosity);
  lxg_node_add_number(critical, "opacity_cm2_g", wind->critical.opacity);

  const struct lxg_wind_site *at = &wind->photosphere;
  struct lxg_node *photosphere = lxg_node_add_mapping(section, "photosphere");
  lxg_node_add_number(photosphere, "radius_rsun", at->radius / LXG_SOLAR_RADIUS);
  lxg_node_add_number(photosphere, "temperature_k", at->temperature);
  lxg_node_add_number(photosphere, "luminosity_erg_s", at->luminosity);
  lxg_node_add_number(photosphere, "luminosity_ledd", at->luminosity / l_edd);
  lxg_node_add_number(photosphere, "speed_km_s", at->speed / LXG_KM);
  lxg_node_add_number(photosphere, "density_g_cm3", at->density);
  lxg_node_add_number(photosphere, "opacity_cm2_g", at->opacity);

  struct lxg_node *base = lxg_node_add_mapping(section, "base");
  lxg_node_add_number(base, "radius_cm", wind->base.radius);
  lxg_node_add_number(base, "temperature_k", wind->base.temperature);
  lxg_node_add_number(base, "density_g_cm3", wind->base.density);
  lxg_node_add_number(base, "luminosity_erg_s", wind->base.luminosity);
  lxg_node_add_number(base, "luminosity_ledd", wind->base.luminosity / l_edd);
}

static void add_checks(struct lxg_node *section, const struct lxg_wind *wind) {
  const bool solved = wind->reason == LXG_WIND_SOLVED;
  struct lxg_node *checks = lxg_node_add_mapping(section, "checks");
  lxg_node_add_number(checks, "residual_max", wind->residual);
  if (solved) {
    lxg_node_add_integer(checks, "mesh_points", (long long)wind->mesh_points);
  } else {
    lxg_node_add_none(checks, "mesh_points");
  }
  lxg_node_add_integer(checks, "newton_steps", wind->newton_steps);
  lxg_node_add_number(checks, "flow_time_s", wind->flow_time);
  lxg_node_add_number(checks, "diffusion_time_s", wind->diffusion_time);
  lxg_node_add_number(checks, "tiring_number", wind->tiring_number);
  lxg_node_add_number(checks, "wind_performance", wind->wind_performance);
  lxg_node_add_number(checks, "mach_min", wind->mach_min);
  lxg_node_add_number(checks, "mach_max", wind->mach_max);
  lxg_node_add_number(checks, "gas_pressure_share_min", wind->beta_min);
  lxg_node_add_number(checks, "gas_pressure_share_max", wind->beta_max);
  lxg_node_add_number(checks, "radiation_flux_share_max", wind->flux_ratio_max);
  lxg_node_add_number(checks, "opacity_table_share", wind->table_share);
  struct lxg_node *peak = lxg_node_add_mapping(section, "eddington_ratio_peak");
  lxg_node_add_number(peak, "value", wind->gamma_max);
  lxg_node_add_number(peak, "radius_cm", wind->gamma_max_radius);
  lxg_node_add_number(peak, "temperature_k", wind->gamma_max_temperature);
}

static void add_energy(struct lxg_node *section, const struct lxg_wind *wind) {
  const double total = wind->luminosity_infinity + wind->lifting_rate + wind->kinetic_rate;
  struct lxg_node *energy = lxg_node_add_mapping(section, "energy");
  lxg_node_add_number(energy, "light_erg_s", wind->luminosity_infinity);
  lxg_node_add_number(energy, "lifting_erg_s", wind->lifting_rate);
  lxg_node_add_number(energy, "kinetic_erg_s", wind->kinetic_rate);
  lxg_node_add_number(energy, "nuclear_erg_s", wind->nuclear_luminosity);
  lxg_node_add_number(energy, "light_share", wind->luminosity_infinity / total);
  lxg_node_add_number(energy, "lifting_share", wind->lifting_rate / total);
  lxg_node_add_number(energy, "kinetic_share", wind->kinetic_rate / total);
}

struct lxg_node *lxg_report_wind(struct lxg_node *root, const struct lxg_wind *wind, double l_edd) {
  struct lxg_node *section = lxg_node_add_mapping(root, "wind");
  add_verdict(section, wind);
  lxg_report_held(section, LXG_HELD_MASS_LOSS_RATE, wind->value[LXG_HELD_MASS_LOSS_RATE]);
  lxg_report_held(section, LXG_HELD_ENERGY_RATE, wind->value[LXG_HELD_ENERGY_RATE]);
  lxg_report_held(section, LXG_HELD_TERMINAL_SPEED, wind->value[LXG_HELD_TERMINAL_SPEED]);
  lxg_report_held(section, LXG_HELD_ENVELOPE_MASS, wind->value[LXG_HELD_ENVELOPE_MASS]);
  lxg_node_add_number(section, "escape_radius_rsun", wind->escape_radius / LXG_SOLAR_RADIUS);
  add_sites(section, wind, l_edd);
  add_energy(section, wind);
  add_checks(section, wind);
  return section;
}

void lxg_report_wind_warnings(struct lxg_node *warnings, const struct lxg_wind *wind) {
  if (wind->reason != LXG_WIND_SOLVED) {
    return;
  }
  if (wind->critical.optical_depth < LXG_REPORT_THIN_DEPTH) {
    struct lxg_node *warning = lxg_report_warn(
        warnings, "thin-wind",
        "the critical point is not deep enough for radiative diffusion to be a good description");
    lxg_node_add_number(warning, "optical_depth", wind->critical.optical_depth);
    lxg_node_add_number(warning, "limit", LXG_REPORT_THIN_DEPTH);
  }
  if (wind->flux_ratio_max > LXG_REPORT_FLUX_LIMIT) {
    struct lxg_node *warning = lxg_report_warn(
        warnings, "streaming-light",
        "somewhere inside the photosphere light comes close to streaming freely: diffusion overstates it");
    lxg_node_add_number(warning, "radiation_flux_share_max", wind->flux_ratio_max);
    lxg_node_add_number(warning, "limit", LXG_REPORT_FLUX_LIMIT);
  }
  if (wind->value[LXG_HELD_TERMINAL_SPEED] > LXG_REPORT_SPEED_LIMIT * LXG_SPEED_OF_LIGHT) {
    struct lxg_node *warning =
        lxg_report_warn(warnings, "fast-flow",
                        "terms of first order in v/c, which the equations leave out, are no longer small");
    lxg_node_add_number(warning, "terminal_speed_km_s", wind->value[LXG_HELD_TERMINAL_SPEED] / LXG_KM);
  }
  if (wind->table_share > 0.0 && wind->table_share < 1.0) {
    struct lxg_node *warning =
        lxg_report_warn(warnings, "table-share",
                        "part of the wind lies outside the opacity table, where other opacities hold");
    lxg_node_add_number(warning, "opacity_table_share", wind->table_share);
  }
  if (wind->diffusion_time > wind->flow_time) {
    struct lxg_node *warning =
        lxg_report_warn(warnings, "trapped-light",
                        "gas crosses from the critical point to the photosphere faster than light diffuses");
    lxg_node_add_number(warning, "flow_time_s", wind->flow_time);
    lxg_node_add_number(warning, "diffusion_time_s", wind->diffusion_time);
  }
}
