/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family.c - reading a traced family: interpolation in arc length, and why a value is missing.
 *
 * Between neighbours every number follows a cubic Hermite polynomial in the arc length whose slopes are those of the parabola
 * through three neighbours; its error is far below that of the linear interpolant to which the family was refined.
 */
#include "luxgale/family.h"

#include "family/family_internal.h"
#include "luxgale/memory.h"

#include <math.h>
#include <stdbool.h>

static const double speed_unit = 1e8; /* of the squared scale [cm s^-1] */

static const enum lxg_family_scale scale_of[LXG_FAMILY_COUNT] = {
#define FAMILY_SCALE(name, key, member, scale) scale,
    LXG_FAMILY_LIST(FAMILY_SCALE)
#undef FAMILY_SCALE
};

const char *lxg_family_key(enum lxg_family_quantity quantity) {
  static const char *const keys[] = {
#define FAMILY_KEY(name, key, member, scale) #key,
      LXG_FAMILY_LIST(FAMILY_KEY)
#undef FAMILY_KEY
  };
  return (int)quantity >= 0 && (int)quantity < (int)LXG_FAMILY_COUNT ? keys[quantity] : NULL;
}

double lxg_family_number(size_t quantity, double value, double l_edd) {
  switch (scale_of[quantity]) {
  case LXG_SCALE_LOG:
    return log(value);
  case LXG_SCALE_SQUARE:
    return value * value / (speed_unit * speed_unit);
  default:
    return asinh(value / l_edd);
  }
}

static double from_number(size_t quantity, double number, double l_edd) {
  switch (scale_of[quantity]) {
  case LXG_SCALE_LOG:
    return exp(number);
  case LXG_SCALE_SQUARE:
    return speed_unit * sqrt(fmax(number, 0.0));
  default:
    return sinh(number) * l_edd;
  }
}

void lxg_family_numbers(const struct lxg_wind *wind, double l_edd, double number[LXG_FAMILY_COUNT]) {
  const double value[LXG_FAMILY_COUNT] = {
#define FAMILY_VALUE(name, key, member, scale) wind->member,
      LXG_FAMILY_LIST(FAMILY_VALUE)
#undef FAMILY_VALUE
  };
  for (size_t i = 0; i < LXG_FAMILY_COUNT; i++) {
    number[i] = lxg_family_number(i, value[i], l_edd);
  }
}

void lxg_family_free(struct lxg_family *family) {
  if (family != NULL) {
    lxg_free(family->wind);
    lxg_free(family->arc);
    lxg_free(family->table);
    *family = (struct lxg_family){.hold = family->hold};
  }
}

static double number_at(const struct lxg_family *family, size_t i, size_t quantity) {
  return family->table[i * LXG_FAMILY_COUNT + quantity];
}

/* Slope at member i of the parabola through it and its neighbours (one-sided at the ends). */
static double slope_at(const struct lxg_family *family, size_t i, size_t quantity) {
  const size_t last = family->count - 1;
  if (last == 0) {
    return 0.0;
  }
  const size_t middle = i == 0 ? 1 : i == last ? last - 1 : i;
  if (last == 1) {
    return (number_at(family, 1, quantity) - number_at(family, 0, quantity)) /
           (family->arc[1] - family->arc[0]);
  }
  const double d0 = family->arc[middle] - family->arc[middle - 1],
               d1 = family->arc[middle + 1] - family->arc[middle];
  const double s0 = (number_at(family, middle, quantity) - number_at(family, middle - 1, quantity)) / d0;
  const double s1 = (number_at(family, middle + 1, quantity) - number_at(family, middle, quantity)) / d1;
  const double second = (s1 - s0) / (d0 + d1);
  return i == middle ? s0 + second * d0 : i < middle ? s0 - second * d0 : s1 + second * d1;
}

/* Cubic of one interval, q(t) = c0 + c1 t + c2 t^2 + c3 t^3, t in [0, 1]. */
void lxg_family_cubic(const struct lxg_family *family, size_t i, size_t quantity, double c[4]) {
  const double h = family->arc[i + 1] - family->arc[i];
  const double q0 = number_at(family, i, quantity), q1 = number_at(family, i + 1, quantity);
  const double d0 = h * slope_at(family, i, quantity), d1 = h * slope_at(family, i + 1, quantity);
  c[0] = q0;
  c[1] = d0;
  c[2] = 3.0 * (q1 - q0) - 2.0 * d0 - d1;
  c[3] = 2.0 * (q0 - q1) + d0 + d1;
}

double lxg_family_cubic_at(const double c[4], double t) {
  return c[0] + t * (c[1] + t * (c[2] + t * c[3]));
}

static size_t interval_of(const struct lxg_family *family, double arc) {
  size_t low = 0, high = family->count - 1;
  while (high - low > 1) {
    const size_t middle = (low + high) / 2;
    if (family->arc[middle] <= arc) {
      low = middle;
    } else {
      high = middle;
    }
  }
  return low;
}

void lxg_family_at(const struct lxg_family *family, double arc, struct lxg_family_place *place) {
  const bool single = family->count < 2;
  const size_t i = single ? 0 : interval_of(family, arc);
  const double h = single ? 1.0 : family->arc[i + 1] - family->arc[i];
  const double t = single ? 0.0 : fmin(fmax((arc - family->arc[i]) / h, 0.0), 1.0);
  place->arc = arc;
  for (size_t q = 0; q < LXG_FAMILY_COUNT; q++) {
    double c[4] = {number_at(family, i, q)};
    if (!single) {
      lxg_family_cubic(family, i, q, c);
    }
    place->value[q] = from_number(q, lxg_family_cubic_at(c, t), family->l_edd);
  }
}

enum lxg_wind_reason lxg_family_missing(const struct lxg_family *family, enum lxg_family_quantity quantity,
                                        double value) {
  const size_t q = (size_t)quantity;
  const double wanted = lxg_family_number(q, value, family->l_edd);
  size_t nearest = 0;
  for (size_t i = 1; i < family->count; i++) {
    if (fabs(number_at(family, i, q) - wanted) < fabs(number_at(family, nearest, q) - wanted)) {
      nearest = i;
    }
  }
  if (nearest == 0) {
    return family->thin_end;
  }
  return nearest == family->count - 1 ? family->thick_end : LXG_WIND_ABOVE_FOLD;
}
