/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * speeds_internal.h - what the files of the module share.
 */
#ifndef LUXGALE_SPEEDS_INTERNAL_H
#define LUXGALE_SPEEDS_INTERNAL_H

#include "luxgale/speeds.h"

struct lxg_speeds {
  const struct lxg_family *family; /* NULL for a single wind */
  const struct lxg_history *history;
  double factor; /* of its luminosity */
  enum lxg_branch branch;
  struct lxg_wind_solver *solver;
  enum lxg_family_quantity key; /* luminosity of the history */
  struct lxg_family_index *index;
  const struct lxg_family *above; /* see struct lxg_speeds_source */
  struct lxg_family_index *above_index;
  double limit; /* [erg s^-1] */
  struct lxg_shell_history *shell;
  double slowest, fastest;        /* of the gas in it [cm s^-1] */
  struct lxg_wind_hold hold;      /* what all winds share */
  struct lxg_family_place single; /* of a single wind */
  size_t count;
  struct lxg_speeds_structure **structure; /* [count], in order of asking */
};

/* Samples what leaves the star and builds the shell history; leaves it NULL when there is never a wind. */
enum lxg_status lxg_speeds_eject(struct lxg_speeds *speeds, double radius, struct lxg_error *error);

/* The wind at a time inside the history; false if there is none. */
bool lxg_speeds_find(const struct lxg_speeds *speeds, double time, struct lxg_family_place *place);

#endif
