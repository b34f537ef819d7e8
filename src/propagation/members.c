/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * members.c - tables of members: filling, interpolating between families, and finding a member by its key.
 */
#include "luxgale/constants.h"
#include "luxgale/freefree.h"

#include "propagation/propagation_internal.h"

#include <math.h>

static const double base_floor = 1e-6; /* of L_Edd: a base luminosity below it is as good as none */

size_t lxg_members_size(size_t count) {
  return (NUMBERS + 1) * count;
}

void lxg_members_place(struct members *members, size_t count, double *memory) {
  members->count = count;
  for (int i = 0; i < NUMBERS; i++) {
    members->number[i] = memory + (size_t)i * count;
  }
  members->key = memory + (size_t)NUMBERS * count;
}

static void set_numbers(struct members *members, size_t i, const struct lxg_family_place *at, double l_edd) {
  const double speed = at->value[LXG_FAMILY_TERMINAL_SPEED];
  members->number[NUMBER_LN_RATE][i] = log(at->value[LXG_FAMILY_MASS_LOSS_RATE]);
  members->number[NUMBER_SPEED_SQ][i] = speed * speed;
  members->number[NUMBER_LN_LUMINOSITY][i] = log(at->value[LXG_FAMILY_PHOTOSPHERE_LUMINOSITY]);
  members->number[NUMBER_LN_BASE][i] = log(fmax(at->value[LXG_FAMILY_BASE_LUMINOSITY], base_floor * l_edd));
  members->number[NUMBER_LN_TEMPERATURE][i] = log(at->value[LXG_FAMILY_PHOTOSPHERE_TEMPERATURE]);
  members->number[NUMBER_LN_RADIUS][i] = log(at->value[LXG_FAMILY_PHOTOSPHERE_RADIUS]);
  members->number[NUMBER_LN_PHOTOSPHERE_SPEED][i] = log(at->value[LXG_FAMILY_PHOTOSPHERE_SPEED]);
  members->number[NUMBER_INFINITY][i] = at->value[LXG_FAMILY_LUMINOSITY_INFINITY] / l_edd;
}

/* Absolute magnitude of one member in the light that counts. */
static double magnitude(const struct members *members, const struct keying *keying, size_t i) {
  const double temperature = exp(members->number[NUMBER_LN_TEMPERATURE][i]);
  const struct lxg_freefree_wind wind = {.mass_loss_rate = exp(members->number[NUMBER_LN_RATE][i]),
                                         .speed = exp(members->number[NUMBER_LN_PHOTOSPHERE_SPEED][i]),
                                         .radius = exp(members->number[NUMBER_LN_RADIUS][i])};
  const enum lxg_light light = keying->light.light;
  struct lxg_freefree_gas gas = keying->light.gas;
  const bool own = light == LXG_LIGHT_WHOLE || !(keying->light.gas_temperature > 0.0);
  const double frequency = lxg_band_frequency(keying->band);
  const double black = light == LXG_LIGHT_PHOTOSPHERE || light == LXG_LIGHT_LARGER
                           ? lxg_photometry_blackbody(keying->band, temperature, wind.radius)
                           : INFINITY;
  if (light == LXG_LIGHT_PHOTOSPHERE) {
    return black;
  }
  gas.temperature = own ? temperature : keying->light.gas_temperature;
  const double free = light == LXG_LIGHT_WHOLE ? lxg_freefree_wind_whole(&gas, &wind, frequency)
                                               : lxg_freefree_wind_thin(&gas, &wind, frequency);
  return fmin(black, lxg_photometry_magnitude(keying->band, free));
}

/* Key of one member. */
static double key_of(const struct members *members, const struct keying *keying, size_t i) {
  return keying->kind == KEY_BASE          ? members->number[NUMBER_LN_BASE][i]
         : keying->kind == KEY_PHOTOSPHERE ? members->number[NUMBER_LN_LUMINOSITY][i]
                                           : magnitude(members, keying, i);
}

struct reach lxg_members_reach(const struct lxg_family *family, const struct keying *keying,
                               enum lxg_branch branch) {
  struct reach reach = {0, family->count - 1};
  if (keying->kind != KEY_MAGNITUDE) {
    return reach;
  }
  double memory[NUMBERS + 1];
  struct members one;
  struct lxg_observed_turn turn = lxg_observed_turn_begin();
  lxg_members_place(&one, 1, memory);
  for (size_t k = 0; k < family->count && !turn.found; k++) {
    const size_t i = branch == LXG_BRANCH_THIN ? k : family->count - 1 - k;
    struct lxg_family_place at;
    lxg_family_at(family, family->arc[i], &at);
    set_numbers(&one, 0, &at, family->l_edd);
    lxg_observed_turn_next(&turn, i, key_of(&one, keying, 0));
  }
  reach.first = turn.faintest < turn.brightest ? turn.faintest : turn.brightest;
  reach.last = turn.faintest < turn.brightest ? turn.brightest : turn.faintest;
  return reach;
}

void lxg_members_shares(const struct lxg_family *family, struct reach reach, double share[]) {
  const double start = family->arc[reach.first], end = family->arc[reach.last];
  for (size_t i = reach.first; i <= reach.last; i++) {
    share[i - reach.first] = (family->arc[i] - start) / (end - start);
  }
}

void lxg_members_fill(struct members *members, const struct lxg_family *family, struct reach reach,
                      const double share[], double l_edd, double own_l_edd, double escape) {
  const double start = family->arc[reach.first], end = family->arc[reach.last];
  for (size_t i = 0; i < members->count; i++) {
    struct lxg_family_place at;
    lxg_family_at(family, start + share[i] * (end - start), &at);
    set_numbers(members, i, &at, l_edd);
  }
  members->ln_l_edd = log(own_l_edd);
  members->ln_escape = log(escape);
}

enum lxg_status lxg_members_key(struct members *members, const struct keying *keying,
                                struct lxg_error *error) {
  double direction = 0.0;
  members->runs = 0;
  members->run[0] = 0;
  for (size_t i = 0; i < members->count; i++) {
    members->key[i] = key_of(members, keying, i);
    const double step = i > 0 ? members->key[i] - members->key[i - 1] : 0.0;
    if (step * direction < 0.0) {
      if (members->runs + 1 == RUNS_MOST) {
        return lxg_error_set(error, LXG_LIMIT, "propagation-runs",
                             "the key turns round more than %d times along the family", RUNS_MOST - 1);
      }
      members->run[++members->runs] = i - 1;
    }
    direction = step != 0.0 ? step : direction;
  }
  members->run[++members->runs] = members->count - 1;
  return LXG_OK;
}

double lxg_members_number(const struct members *members, int number, struct place place) {
  const double *value = members->number[number] + place.segment;
  return value[0] + place.fraction * (value[1] - value[0]);
}

/* Binary search in one run; false outside it. */
static bool find_in(const double key[], size_t first, size_t last, double wanted, struct place *place) {
  const double sign = key[last] >= key[first] ? 1.0 : -1.0;
  if (sign * (wanted - key[first]) < 0.0 || sign * (key[last] - wanted) < 0.0 || first == last) {
    return false;
  }
  size_t low = first, high = last;
  while (high - low > 1) {
    const size_t middle = low + (high - low) / 2;
    if (sign * (wanted - key[middle]) >= 0.0) {
      low = middle;
    } else {
      high = middle;
    }
  }
  const double step = key[high] - key[low];
  place->segment = low;
  place->fraction = step != 0.0 ? (wanted - key[low]) / step : 0.0;
  return true;
}

bool lxg_members_find(const struct members *members, double key, enum lxg_branch branch,
                      struct place *place) {
  bool found = false;
  double best = 0.0;
  for (size_t r = 0; r < members->runs; r++) {
    struct place here;
    if (!find_in(members->key, members->run[r], members->run[r + 1], key, &here)) {
      continue;
    }
    const double rate = lxg_members_number(members, NUMBER_LN_RATE, here);
    if (!found || (branch == LXG_BRANCH_THIN ? rate < best : rate > best)) {
      *place = here;
      best = rate;
    }
    found = true;
  }
  return found;
}

void lxg_members_combine(const struct members table[], size_t parameters, const double displacement[],
                         struct members *sum) {
  double weight[1 + 2 * LXG_PROPAGATION_PARAMETERS] = {1.0};
  for (size_t p = 0; p < parameters; p++) { /* Lagrange's parabola through -1, 0, 1 */
    const double x = displacement[p] / LXG_PROPAGATION_REACH;
    weight[1 + 2 * p] = 0.5 * x * (x - 1.0);
    weight[2 + 2 * p] = 0.5 * x * (x + 1.0);
    weight[0] -= x * x;
  }
  const size_t tables = 1 + 2 * parameters;
  sum->ln_l_edd = sum->ln_escape = 0.0;
  for (size_t t = 0; t < tables; t++) {
    sum->ln_l_edd += weight[t] * table[t].ln_l_edd;
    sum->ln_escape += weight[t] * table[t].ln_escape;
  }
  /* the numbers of a table stand one behind the other */
  const size_t size = (size_t)NUMBERS * sum->count;
  double *to = sum->number[0];
  for (size_t i = 0; i < size; i++) {
    to[i] = weight[0] * table[0].number[0][i];
  }
  for (size_t t = 1; t < tables; t++) {
    const double *from = table[t].number[0];
    for (size_t i = 0; i < size; i++) {
      to[i] += weight[t] * from[i];
    }
  }
}
