/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family_internal.h - what the files of the family module share.
 */
#ifndef LUXGALE_FAMILY_INTERNAL_H
#define LUXGALE_FAMILY_INTERNAL_H

#include "luxgale/family.h"

/* Numbers of a wind as interpolated, each in its scale. */
void lxg_family_numbers(const struct lxg_wind *wind, double l_edd, double number[LXG_FAMILY_COUNT]);

#endif
