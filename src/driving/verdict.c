/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * verdict.c - weighs a claimed ejecta mass and speed against the light of a history (see driving.h for the rules).
 *
 * Every comparison is one of intervals, so bounds of claim and light decide between met, missed and open; no margin is built
 * in. Can fail: numbers out of range.
 */
#include "luxgale/constants.h"
#include "luxgale/driving.h"

#include <math.h>
#include <stdio.h>

/* A value between two bounds. */
struct range {
  double value, low, high;
};

const char *lxg_driving_answer_name(enum lxg_driving_answer answer) {
  static const char *const names[] = {"undecided", "sufficient", "insufficient"};
  return (unsigned)answer < sizeof names / sizeof names[0] ? names[answer] : "unknown";
}

const char *lxg_driving_outcome_name(enum lxg_driving_outcome outcome) {
  static const char *const names[] = {"open", "met", "missed"};
  return (unsigned)outcome < sizeof names / sizeof names[0] ? names[outcome] : "unknown";
}

const char *lxg_driving_criterion_name(enum lxg_driving_criterion criterion) {
  static const char *const names[] = {"tiring", "energy", "momentum", "wind_mass", "wind_speed"};
  return (unsigned)criterion < LXG_DRIVING_CRITERIA ? names[criterion] : "unknown";
}

enum lxg_status lxg_driving_light_of(const struct lxg_history *history, struct lxg_driving_light *light,
                                     struct lxg_error *error) {
  const double from = history->time[0], to = history->time[history->count - 1];
  const bool bounds = history->low != NULL;
  struct lxg_driving_light out = {.kind = history->kind};
  enum lxg_status status = lxg_history_energy(history, LXG_HISTORY_VALUE, from, to, &out.radiated, error);
  out.radiated_low = out.radiated_high = out.radiated;
  if (status == LXG_OK && bounds) {
    status = lxg_history_energy(history, LXG_HISTORY_LOW, from, to, &out.radiated_low, error);
  }
  if (status == LXG_OK && bounds) {
    status = lxg_history_energy(history, LXG_HISTORY_HIGH, from, to, &out.radiated_high, error);
  }
  if (status == LXG_OK) {
    *light = out;
  }
  return status;
}

static bool ordered(struct range r) {
  return r.low > 0.0 && r.low <= r.value && r.value <= r.high && isfinite(r.high);
}

static enum lxg_status check_input(struct range mass, struct range speed, struct range light,
                                   struct lxg_error *error) {
  if (!ordered(mass)) {
    return lxg_error_set(error, LXG_INPUT, "driving-claim",
                         "claimed mass = %.10g g (%.10g to %.10g): above 0, between its bounds", mass.value,
                         mass.low, mass.high);
  }
  if (!ordered(speed) || speed.high >= LXG_SPEED_OF_LIGHT) {
    return lxg_error_set(
        error, LXG_INPUT, "driving-claim",
        "claimed speed = %.10g cm/s (%.10g to %.10g): above 0, below light, between its bounds", speed.value,
        speed.low, speed.high);
  }
  if (!ordered(light)) {
    return lxg_error_set(error, LXG_INPUT, "driving-light",
                         "radiated energy = %.10g erg (%.10g to %.10g): above 0, between its bounds",
                         light.value, light.low, light.high);
  }
  return LXG_OK;
}

/* Winds may carry nothing at all. */
static bool ordered_or_zero(struct range r) {
  return r.low >= 0.0 && r.low <= r.value && r.value <= r.high && isfinite(r.high);
}

static enum lxg_status check_wind(const struct lxg_driving_wind *wind, struct lxg_error *error) {
  const struct range mass = {wind->mass, wind->mass_low, wind->mass_high};
  const struct range speed = {wind->speed, wind->speed_low, wind->speed_high};
  if (!(ordered_or_zero(mass) && ordered_or_zero(speed) && wind->momentum >= 0.0 &&
        isfinite(wind->momentum))) {
    return lxg_error_set(
        error, LXG_INPUT, "driving-wind",
        "steady winds: mass = %.10g g, speed = %.10g cm/s, momentum = %.10g g cm/s: finite, at least 0, "
        "between their bounds",
        wind->mass, wind->speed, wind->momentum);
  }
  if (!(wind->solved_share >= 0.0 && wind->solved_share <= 1.0)) {
    return lxg_error_set(error, LXG_INPUT, "driving-wind", "solved share of the history = %.10g: 0 to 1",
                         wind->solved_share);
  }
  return LXG_OK;
}

/* Interval comparison. */
static struct lxg_driving_check compare(struct range need, struct range supply) {
  struct lxg_driving_check check = {.need = need.value,
                                    .need_low = need.low,
                                    .need_high = need.high,
                                    .supply = supply.value,
                                    .supply_low = supply.low,
                                    .supply_high = supply.high,
                                    .ratio = need.value / supply.value};
  if (need.high <= supply.low) {
    check.outcome = LXG_DRIVING_MET;
  } else if (need.low > supply.high) {
    check.outcome = LXG_DRIVING_MISSED;
  } else {
    check.outcome = LXG_DRIVING_OPEN; /* also when there is no supply to compare with (NaN) */
  }
  return check;
}

static struct range times(struct range r, double factor) {
  return (struct range){r.value * factor, r.low * factor, r.high * factor};
}

/* M (G M/R_0 + v^2/2) with mass and speed at the same end */
static struct range energy_need(const struct lxg_star *star, struct range mass, struct range speed) {
  const double depth = star->gm / star->radius;
  return (struct range){mass.value * (depth + 0.5 * speed.value * speed.value),
                        mass.low * (depth + 0.5 * speed.low * speed.low),
                        mass.high * (depth + 0.5 * speed.high * speed.high)};
}

#define SAY(text, ...) (void)snprintf(text, LXG_DRIVING_REASON_SIZE, __VA_ARGS__)

/* Checks that energy conservation decides. At the photosphere a miss proves nothing: it becomes open. */
static void judge_energy(const struct lxg_star *star, struct range mass, struct range energy,
                         const struct lxg_driving_light *light, struct lxg_driving_verdict *verdict) {
  const struct range supply = {light->radiated, light->radiated_low, light->radiated_high};
  struct lxg_driving_check *const tiring = &verdict->check[LXG_DRIVING_TIRING];
  struct lxg_driving_check *const total = &verdict->check[LXG_DRIVING_ENERGY];
  *tiring = compare(mass, times(supply, star->radius / star->gm));
  *total = compare(energy, supply);
  SAY(tiring->reason, "lifting the claimed mass takes %.3g times the radiated energy", tiring->ratio);
  SAY(total->reason, "lifting and kinetic energy are %.3g times the radiated energy", total->ratio);
  if (light->kind == LXG_HISTORY_PHOTOSPHERE) {
    for (int i = LXG_DRIVING_TIRING; i <= LXG_DRIVING_ENERGY; i++) {
      struct lxg_driving_check *const check = &verdict->check[i];
      if (check->outcome == LXG_DRIVING_MISSED) {
        check->outcome = LXG_DRIVING_OPEN;
        SAY(check->reason,
            "the need is %.3g times the light seen, which is what lifting left over: the base must have "
            "given off "
            "%.3g erg",
            check->ratio, verdict->base_energy);
      }
    }
  }
}

static void judge_momentum(struct range momentum, const struct lxg_driving_light *light,
                           const struct lxg_driving_wind *wind, struct lxg_driving_verdict *verdict) {
  const double carried = wind != NULL ? wind->momentum : 0.0;
  const struct range supply = {fmax(light->radiated / LXG_SPEED_OF_LIGHT, carried),
                               fmax(light->radiated_low / LXG_SPEED_OF_LIGHT, carried),
                               fmax(light->radiated_high / LXG_SPEED_OF_LIGHT, carried)};
  struct lxg_driving_check *const check = &verdict->check[LXG_DRIVING_MOMENTUM];
  *check = compare(momentum, supply);
  if (wind != NULL) {
    SAY(check->reason, "every photon must push %.3g times; in the steady winds it pushes %.3g times",
        verdict->scatterings, verdict->wind_scatterings);
  } else {
    SAY(check->reason, "every photon must push %.3g times", verdict->scatterings);
  }
}

/* Totals of winds that cover only part of the history are lower limits: a miss becomes open. */
static void judge_wind(struct range mass, struct range speed, const struct lxg_driving_wind *wind,
                       struct lxg_driving_verdict *verdict) {
  struct lxg_driving_check *const by_mass = &verdict->check[LXG_DRIVING_WIND_MASS];
  struct lxg_driving_check *const by_speed = &verdict->check[LXG_DRIVING_WIND_SPEED];
  const struct range none = {NAN, NAN, NAN};
  *by_mass = compare(mass, wind != NULL ? (struct range){wind->mass, wind->mass_low, wind->mass_high} : none);
  *by_speed =
      compare(speed, wind != NULL ? (struct range){wind->speed, wind->speed_low, wind->speed_high} : none);
  if (wind == NULL) {
    SAY(by_mass->reason, "no steady wind was computed to compare with");
    SAY(by_speed->reason, "no steady wind was computed to compare with");
    return;
  }
  SAY(by_mass->reason, "the claimed mass is %.3g times what the steady winds carry off", by_mass->ratio);
  SAY(by_speed->reason, "the claimed speed is %.3g times the fastest terminal speed", by_speed->ratio);
  for (int i = LXG_DRIVING_WIND_MASS; i <= LXG_DRIVING_WIND_SPEED; i++) {
    struct lxg_driving_check *const check = &verdict->check[i];
    if (check->outcome == LXG_DRIVING_MISSED && wind->solved_share < 1.0) {
      check->outcome = LXG_DRIVING_OPEN;
      SAY(check->reason, "the need is %.3g times what the winds give, but they cover %.3g of the time only",
          check->ratio, wind->solved_share);
    }
  }
}

static void conclude(struct lxg_driving_verdict *verdict) {
  static const enum lxg_driving_criterion hard[] = {LXG_DRIVING_TIRING, LXG_DRIVING_ENERGY,
                                                    LXG_DRIVING_WIND_MASS, LXG_DRIVING_WIND_SPEED};
  for (size_t i = 0; i < sizeof hard / sizeof hard[0]; i++) {
    if (verdict->check[hard[i]].outcome == LXG_DRIVING_MISSED) {
      verdict->answer = LXG_DRIVING_INSUFFICIENT;
      SAY(verdict->reason, "%.200s", verdict->check[hard[i]].reason);
      return;
    }
  }
  for (int i = 0; i < LXG_DRIVING_CRITERIA; i++) {
    if (verdict->check[i].outcome != LXG_DRIVING_MET) {
      verdict->answer = LXG_DRIVING_UNDECIDED;
      SAY(verdict->reason, "%s: %.200s", lxg_driving_criterion_name((enum lxg_driving_criterion)i),
          verdict->check[i].reason);
      return;
    }
  }
  verdict->answer = LXG_DRIVING_SUFFICIENT;
  SAY(verdict->reason,
      "steady winds carry off %.3g times the claimed mass, at up to %.3g times the claimed speed",
      1.0 / verdict->check[LXG_DRIVING_WIND_MASS].ratio, 1.0 / verdict->check[LXG_DRIVING_WIND_SPEED].ratio);
}

enum lxg_status lxg_driving_judge(const struct lxg_star *star, const struct lxg_driving_claim *claim,
                                  const struct lxg_driving_light *light, const struct lxg_driving_wind *wind,
                                  struct lxg_driving_verdict *verdict, struct lxg_error *error) {
  const struct range mass = {claim->mass, claim->mass_low, claim->mass_high};
  const struct range speed = {claim->speed, claim->speed_low, claim->speed_high};
  const struct range energy_light = {light->radiated, light->radiated_low, light->radiated_high};
  enum lxg_status status = check_input(mass, speed, energy_light, error);
  if (status == LXG_OK && wind != NULL) {
    status = check_wind(wind, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  const struct range energy = energy_need(star, mass, speed);
  const struct range momentum = {mass.value * speed.value, mass.low * speed.low, mass.high * speed.high};
  struct lxg_driving_verdict out = {
      .lifting = mass.value * star->gm / star->radius,
      .kinetic = 0.5 * mass.value * speed.value * speed.value,
      .momentum = momentum.value,
      .light_momentum = light->radiated / LXG_SPEED_OF_LIGHT,
      .tiring_mass = lxg_driving_tiring_mass(star, light->radiated),
      .base_energy = light->radiated + (light->kind == LXG_HISTORY_PHOTOSPHERE ? energy.value : 0.0),
  };
  out.scatterings = out.momentum / out.light_momentum;
  out.wind_scatterings = wind != NULL ? wind->momentum / out.light_momentum : NAN;
  judge_energy(star, mass, energy, light, &out);
  judge_momentum(momentum, light, wind, &out);
  judge_wind(mass, speed, wind, &out);
  conclude(&out);
  *verdict = out;
  return LXG_OK;
}
