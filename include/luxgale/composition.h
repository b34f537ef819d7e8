/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * composition.h - mass fractions of the ejected gas and the mean weights that follow from them.
 */
#ifndef LUXGALE_COMPOSITION_H
#define LUXGALE_COMPOSITION_H

#include "luxgale/status.h"

/* Mass fractions, sum 1. Metals are scaled solar and carry the iron group; cno is what a dwarf's core adds. */
struct lxg_composition {
  double hydrogen; /* X */
  double helium;   /* Y */
  double cno;      /* extra C, N, O (and Ne), not part of `metals` */
  double metals;   /* Z */
};

enum { LXG_COMPOSITION_SUM_DIGITS = 6 }; /* the four fractions must sum to 1 within 1e-6 */

/* Checks range [0, 1] and sum; LXG_INPUT with the offending fraction named. */
enum lxg_status lxg_composition_check(const struct lxg_composition *composition, struct lxg_error *error);

/* Mean molecular weight mu of the fully ionised gas, 1/mu = 2X + 3Y/4 + (cno + Z)/2 [atomic masses per particle]. */
double lxg_composition_mu(const struct lxg_composition *composition);

/* Reference electron-scattering opacity kappa_e = 0.2 (1 + X) [cm^2 g^-1]. */
double lxg_composition_kappa_e(const struct lxg_composition *composition);

struct lxg_node;

/* Reads the section `composition` of a case. Absent: cno 0, metals 0.02, helium what is left to 1. LXG_INPUT with the place in
 * the file. */
enum lxg_status lxg_composition_read(struct lxg_node *section, struct lxg_composition *composition,
                                     struct lxg_error *error);

#endif
