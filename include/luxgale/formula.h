/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * formula.h - luminosity against time as a sum of simple terms, with exact slopes.
 *
 * Terms, with s = t - origin >= 0 (before its origin a term is zero):
 *   constant     L
 *   plateau      L up to s = duration, then L [1 + (s - duration)/time_scale]^(-index), or L exp(-(s - duration)/time_scale)
 *                when index = 0
 *   exponential  L exp(-s/time_scale); a negative time scale rises
 *   power        L (s/time_scale)^(-index), s > 0
 *   decay        heating by radioactive isotopes mixed through an envelope (decay.h)
 *   hot_cno      beta-limited burning: 5.9e15 X_CNO erg/g/s in an envelope until its hydrogen is used up (burning.h)
 */
#ifndef LUXGALE_FORMULA_H
#define LUXGALE_FORMULA_H

#include "luxgale/decay.h"
#include "luxgale/status.h"

#include <stddef.h>

enum lxg_formula_law {
  LXG_FORMULA_CONSTANT,
  LXG_FORMULA_PLATEAU,
  LXG_FORMULA_EXPONENTIAL,
  LXG_FORMULA_POWER,
  LXG_FORMULA_DECAY,
  LXG_FORMULA_HOT_CNO
};

enum { LXG_FORMULA_ISOTOPES = 12, LXG_FORMULA_TERMS = 8, LXG_FORMULA_BREAKS = 2 * LXG_FORMULA_TERMS };

/* One isotope and its mass fraction in the envelope at the term's origin. */
struct lxg_formula_isotope {
  struct lxg_isotope isotope;
  double mass_fraction; /* 0 to 1 */
};

/* One term; fields its law does not use are ignored. */
struct lxg_formula_term {
  enum lxg_formula_law law;
  double origin;     /* time at which the term starts [s] */
  double luminosity; /* L [erg s^-1], > 0 */
  double duration;   /* plateau [s], >= 0 */
  double time_scale; /* [s]; plateau and power > 0, exponential not 0 */
  double index;      /* plateau >= 0, power any finite */
  double mass;       /* decay, hot_cno: envelope mass [g], > 0 */
  double hydrogen;   /* hot_cno: hydrogen mass fraction, above 0 to 1 */
  double cno;        /* hot_cno: X_CNO, mass fraction of C, N, O that catalyses, above 0 to 1 */
  struct lxg_decay_photons photons; /* decay: gamma_time counts from `origin` */
  size_t isotope_count;             /* decay: 1 to LXG_FORMULA_ISOTOPES */
  struct lxg_formula_isotope isotope[LXG_FORMULA_ISOTOPES];
};

/* Sum of 1 to LXG_FORMULA_TERMS terms. */
struct lxg_formula {
  size_t count;
  struct lxg_formula_term term[LXG_FORMULA_TERMS];
};

/* Law's name as a case spells it ("constant", ..., "hot_cno"). Never NULL. */
const char *lxg_formula_law_name(enum lxg_formula_law law);

/* Checks every term; LXG_INPUT "formula-..." or "isotope-..." with the term (counted from 1) and the field named. */
enum lxg_status lxg_formula_check(const struct lxg_formula *formula, struct lxg_error *error);

/* Luminosity [erg s^-1] at a time [s] and, unless NULL, dL/dt [erg s^-2], of a checked formula. At a break the value and the
 * slope are those of the later side. A power law with positive index is infinite at its own origin. */
double lxg_formula_at(const struct lxg_formula *formula, double time, double *slope);

/* Times strictly inside (start, end) at which the formula has a step or a kink, increasing, at most LXG_FORMULA_BREAKS;
 * returns how many. */
size_t lxg_formula_breaks(const struct lxg_formula *formula, double start, double end,
                          double breaks[LXG_FORMULA_BREAKS]);

/* How long beta-limited burning lasts: X Q/(5.9e15 X_CNO) [s]. */
double lxg_formula_hot_cno_time(const struct lxg_formula_term *term);

#endif
