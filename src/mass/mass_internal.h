/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * mass_internal.h - one row a method: formula, needs, texts.
 */
#ifndef LUXGALE_MASS_INTERNAL_H
#define LUXGALE_MASS_INTERNAL_H

#include "luxgale/mass.h"

/* q[quantity] holds every given value. */
typedef double lxg_mass_formula(const double q[LXG_MASS_QUANTITIES]);

struct lxg_mass_row {
  const char *name;
  lxg_mass_formula *formula; /* M [g] */
  bool upper_bound;
  size_t need_count;
  enum lxg_mass_quantity need[LXG_MASS_NEEDS];
  const char *assumptions;
  const char *source;
};

const struct lxg_mass_row *lxg_mass_row(enum lxg_mass_method method);

#endif
