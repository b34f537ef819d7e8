/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_eddington.c - sections of the outburst report about the Eddington limit: how long, by which opacity, tiring, hand-over of winds,
 * and the verdict on a claim (see run.h).
 *
 * The ratio by another opacity than kappa_e is known at the epochs that have a wind; between them it is interpolated like a luminosity.
 * Epochs without a wind are left out.
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

/* kappa L/(4 pi G M c) of an epoch: at the photosphere, or the largest along the wind. */
static double local_ratio(const struct lxg_ejecta_epoch *epoch, double gm, bool photosphere) {
  const double *v = epoch->place.value;
  return photosphere ? v[LXG_FAMILY_PHOTOSPHERE_OPACITY] * v[LXG_FAMILY_PHOTOSPHERE_LUMINOSITY] /
                           (4.0 * LXG_PI * gm * LXG_SPEED_OF_LIGHT)
                     : v[LXG_FAMILY_GAMMA_MAX];
}

static enum lxg_status add_local(struct lxg_node *section, const struct lxg_ejecta *ejecta, double gm,
                                 bool photosphere, struct lxg_error *error) {
  struct lxg_history *history = NULL;
  struct lxg_history_excess excess;
  double *time = lxg_alloc(2 * ejecta->count + 1, sizeof *time);
  if (time == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "super_eddington: out of memory");
  }
  double *ratio = time + ejecta->count;
  size_t count = 0;
  for (size_t i = 0; i < ejecta->count; i++) {
    const double value = local_ratio(&ejecta->epoch[i], gm, photosphere);
    if (value > 0.0 && isfinite(value)) {
      time[count] = ejecta->epoch[i].time;
      ratio[count++] = value;
    }
  }
  const char *name = photosphere ? "photosphere_opacity" : "wind_maximum";
  enum lxg_status status = LXG_OK;
  if (count == 0) {
    lxg_report_excess_local(section, name, NULL);
  } else {
    const struct lxg_history_rows rows = {.kind = LXG_HISTORY_PHOTOSPHERE,
                                          .count = count,
                                          .time = time,
                                          .luminosity = ratio,
                                          .gap_fraction = INFINITY};
    status = lxg_history_create(&rows, &history, error);
    if (status == LXG_OK) {
      status = lxg_history_excess(history, LXG_HISTORY_VALUE, 1.0, &excess, error);
    }
    if (status == LXG_OK) {
      lxg_report_excess_local(section, name, &excess);
    }
  }
  lxg_history_destroy(history);
  lxg_free(time);
  return status;
}

enum lxg_status lxg_run_super_eddington(const struct lxg_case *input, const struct lxg_ejecta *ejecta,
                                        struct lxg_history_excess *excess, struct lxg_node *root,
                                        struct lxg_error *error) {
  struct lxg_history_excess low, high;
  enum lxg_status status = lxg_history_excess(input->history, LXG_HISTORY_VALUE, input->l_edd, excess, error);
  const bool bounds = input->history->low != NULL;
  if (status == LXG_OK && bounds) {
    status = lxg_history_excess(input->history, LXG_HISTORY_LOW, input->l_edd, &low, error);
  }
  if (status == LXG_OK && bounds) {
    status = lxg_history_excess(input->history, LXG_HISTORY_HIGH, input->l_edd, &high, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_node *section = lxg_report_super_eddington(root, excess);
  lxg_report_excess_bounds(section, bounds ? &low : NULL, bounds ? &high : NULL);
  if (ejecta != NULL) {
    status = add_local(section, ejecta, input->star.gm, true, error);
  }
  if (status == LXG_OK && ejecta != NULL) {
    status = add_local(section, ejecta, input->star.gm, false, error);
  }
  return status;
}

/* Share of the time of the history in which a wind was found, or its absence is certain: below the thin end. */
static double solved_share(const struct lxg_ejecta *ejecta) {
  if (ejecta->count == 1) {
    return ejecta->epoch[0].reason == LXG_WIND_SOLVED ? 1.0 : 0.0;
  }
  double known = 0.0;
  for (size_t i = 0; i < ejecta->count; i++) {
    const enum lxg_wind_reason reason = ejecta->epoch[i].reason;
    const double before = i > 0 ? ejecta->epoch[i].time - ejecta->epoch[i - 1].time : 0.0;
    const double after = i + 1 < ejecta->count ? ejecta->epoch[i + 1].time - ejecta->epoch[i].time : 0.0;
    known += reason == LXG_WIND_SOLVED || reason == LXG_WIND_BELOW_THIN_END ? 0.5 * (before + after) : 0.0;
  }
  return known / (ejecta->epoch[ejecta->count - 1].time - ejecta->epoch[0].time);
}

enum lxg_status lxg_run_driving(const struct lxg_case *input, const struct lxg_ejecta *ejecta,
                                struct lxg_node *root, struct lxg_error *error) {
  struct lxg_driving_light light;
  struct lxg_driving_verdict verdict;
  if (!input->claimed || input->history == NULL) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_driving_light_of(input->history, &light, error);
  if (status != LXG_OK) {
    return status;
  }
  const bool winds = ejecta != NULL && ejecta->solved > 0;
  struct lxg_driving_wind wind = {0};
  if (winds) {
    const double share = solved_share(ejecta);
    wind = (struct lxg_driving_wind){.mass = ejecta->mass,
                                     .mass_low = ejecta->mass,
                                     .mass_high = ejecta->mass,
                                     .speed = ejecta->peak_speed,
                                     .speed_low = ejecta->peak_speed,
                                     .speed_high = ejecta->peak_speed,
                                     .momentum = ejecta->momentum,
                                     .solved_share = fmin(1.0, share)};
  }
  status = lxg_driving_judge(&input->star, &input->claim, &light, winds ? &wind : NULL, &verdict, error);
  if (status == LXG_OK) {
    lxg_report_driving(root, &verdict);
  }
  return status;
}

/* ---- one wind ---------------------------------------------------------------------------------------------------- */

enum lxg_status lxg_run_wind_limits(const struct lxg_case *input, const struct lxg_wind *wind,
                                    struct lxg_node *section, struct lxg_error *error) {
  struct lxg_driving_estimate estimate;
  struct lxg_star foot = input->star;
  double light = wind->base.luminosity, rate = wind->value[LXG_HELD_MASS_LOSS_RATE];
  if (wind->reason == LXG_WIND_SOLVED &&
      !(light > 0.0)) { /* no inside: the wind starts at the launch radius */
    foot.radius = wind->critical.radius;
    light = wind->critical.luminosity;
  }
  for (size_t i = 0; i < input->holds && wind->reason != LXG_WIND_SOLVED; i++) { /* what was asked for */
    light = input->hold[i].quantity == LXG_HELD_BASE_LUMINOSITY ? input->hold[i].value : light;
    rate = input->hold[i].quantity == LXG_HELD_MASS_LOSS_RATE ? input->hold[i].value : rate;
  }
  if (light > 0.0 && isfinite(light) && rate > 0.0 && isfinite(rate)) {
    const enum lxg_status status =
        lxg_driving_estimate_wind(&foot, light / input->l_edd, light, rate, &estimate, error);
    if (status != LXG_OK) {
      return status;
    }
    lxg_report_tiring(section, &estimate, &foot);
  }
  if (input->porosity.law != LXG_POROSITY_NONE && wind->reason == LXG_WIND_SOLVED) {
    lxg_report_porous_wind(section, wind, &input->porosity, input->l_edd);
  }
  return LXG_OK;
}

bool lxg_run_tired(const struct lxg_case *input) {
  double light = NAN, rate = NAN;
  for (size_t i = 0; i < input->holds; i++) {
    light = input->hold[i].quantity == LXG_HELD_BASE_LUMINOSITY ? input->hold[i].value : light;
    rate = input->hold[i].quantity == LXG_HELD_MASS_LOSS_RATE ? input->hold[i].value : rate;
  }
  return lxg_driving_tiring_number(&input->star, rate, light) > 1.0;
}
