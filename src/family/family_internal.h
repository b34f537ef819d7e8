/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family_internal.h - what the files of the family module share.
 */
#ifndef LUXGALE_FAMILY_INTERNAL_H
#define LUXGALE_FAMILY_INTERNAL_H

#include "luxgale/family.h"

/* Numbers of a wind as interpolated, each in its scale. */
void lxg_family_numbers(const struct lxg_wind *wind, double l_edd, double number[LXG_FAMILY_COUNT]);

/* A value in the scale of its quantity. */
double lxg_family_number(size_t quantity, double value, double l_edd);

/* Cubic of the interval after member i, q(t) = c0 + c1 t + c2 t^2 + c3 t^3, t in [0, 1]; and its value. */
void lxg_family_cubic(const struct lxg_family *family, size_t i, size_t quantity, double c[4]);
double lxg_family_cubic_at(const double c[4], double t);

#endif
