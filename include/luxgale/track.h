/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * track.h - a course along a family of winds: arc length against time, where a history gives members instead of luminosities.
 *
 * A magnitude picks a member of the family, and the luminosity of the members may turn round between two epochs (visual light
 * moves by magnitudes while the bolometric light hardly does), so luminosity is no key in between. The arc length is: it is
 * single-valued along any family, and neighbouring winds are neighbours in it. Between epochs it follows a monotone C1 cubic
 * (Steffen 1990, A&A 239, 443) in time, so no member is visited that does not lie between those of the epochs. Rows without
 * a member cut the track into stretches; between stretches there is no wind.
 *
 * Call order: lxg_track_create -> lxg_track_at at will (read-only, any number of threads) -> lxg_track_destroy.
 */
#ifndef LUXGALE_TRACK_H
#define LUXGALE_TRACK_H

#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

struct lxg_track; /* opaque, immutable */

/* Track through `count` rows: time [s] strictly increasing, arc length of a family, NaN where there is no wind. Copied.
 * LXG_INPUT "numerics-order" or "numerics-value"; LXG_MEMORY. `*track` is NULL on failure. */
enum lxg_status lxg_track_create(const double time[], const double arc[], size_t count,
                                 struct lxg_track **track, struct lxg_error *error);

/* Arc length at a time [s] and, unless NULL, its slope [s^-1]; false where there is no wind (targets untouched). */
bool lxg_track_at(const struct lxg_track *track, double time, double *arc, double *slope);

/* NULL is allowed. */
void lxg_track_destroy(struct lxg_track *track);

#endif
