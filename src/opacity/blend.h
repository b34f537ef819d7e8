/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * blend.h - one grid for the composition of a case from the tables of a set (see blend.c).
 */
#ifndef LUXGALE_OPACITY_BLEND_H
#define LUXGALE_OPACITY_BLEND_H

#include "luxgale/opacity_table.h"

/* LXG_INPUT "opacity-table-composition" (X and Z not bracketed), "opacity-table-grid" (axes differ); LXG_MEMORY. */
enum lxg_status lxg_opacity_blend(const struct lxg_opacity_set *set, const struct lxg_composition *target,
                                  bool ignore_cno, struct lxg_opacity_grid **grid, struct lxg_error *error);

#endif
