/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family_internal.h - what the files of the family module share.
 */
#ifndef LUXGALE_FAMILY_INTERNAL_H
#define LUXGALE_FAMILY_INTERNAL_H

#include "luxgale/family.h"

#include <stdbool.h>

/* Numbers of a wind as interpolated, each in its scale. */
void lxg_family_numbers(const struct lxg_wind *wind, double l_edd, double number[LXG_FAMILY_COUNT]);

/* Slots of the wind solver that the family module uses. */
enum { SLOT_STEP, SLOT_START, SLOT_BEST };

/* Winds caught on the way that have a second held value. */
struct family_catch {
  const struct lxg_wind_hold *target;
  struct lxg_wind *wind; /* [capacity] */
  size_t capacity, count;
  bool thick;       /* the best is the one with the largest rate, else the smallest */
  double best_rate; /* the best one is in SLOT_BEST */
};

/* lxg_family_trace, catching (`found` may be NULL). */
enum lxg_status lxg_family_trace_catching(struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                                          const struct lxg_family_options *options,
                                          struct family_catch *found, struct lxg_family *family,
                                          struct lxg_error *error);

/* A value in the scale of its quantity. */
double lxg_family_number(size_t quantity, double value, double l_edd);

/* Cubic of the interval after member i, q(t) = c0 + c1 t + c2 t^2 + c3 t^3, t in [0, 1]; and its value. */
void lxg_family_cubic(const struct lxg_family *family, size_t i, size_t quantity, double c[4]);
double lxg_family_cubic_at(const double c[4], double t);

#endif
