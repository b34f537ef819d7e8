/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * relations.h - published relations of novae, for plausibility beside a result. Nothing here is ever fed back.
 *
 * Each relation predicts one quantity from one other, with the scatter that its source or a later, larger sample gives. The
 * sources disagree with each other: print them side by side.
 */
#ifndef LUXGALE_RELATIONS_H
#define LUXGALE_RELATIONS_H

#include "luxgale/status.h"

#include <stddef.h>

enum lxg_relation_quantity {
  LXG_RELATION_T2,              /* days to fall 2 mag below peak */
  LXG_RELATION_T3,              /* days to fall 3 mag below peak */
  LXG_RELATION_PEAK_MV,         /* absolute V magnitude at peak */
  LXG_RELATION_MV_DAY15,        /* absolute V magnitude 15 days after peak */
  LXG_RELATION_SPEED_PRINCIPAL, /* principal absorption system [km/s] */
  LXG_RELATION_SPEED_DIFFUSE,   /* diffuse enhanced system [km/s] */
  LXG_RELATION_BV_PEAK,         /* (B-V)_0 at peak */
  LXG_RELATION_BV_T2,           /* (B-V)_0 at t2 */
  LXG_RELATION_XRAY_ON,         /* begin of the supersoft phase [d] */
  LXG_RELATION_XRAY_OFF,        /* end of it [d] */
  LXG_RELATION_NONE,            /* no argument: a constant of the class */
  LXG_RELATION_QUANTITY_COUNT
};

enum lxg_relation_form {
  LXG_RELATION_LINEAR, /* a + b x */
  LXG_RELATION_LOG,    /* a + b log10 x */
  LXG_RELATION_POWER,  /* 10^(a + b log10 x): scatter is in dex */
  LXG_RELATION_ARCTAN  /* a + b arctan((c - log10 x)/d) */
};

struct lxg_relation {
  const char *name;   /* stable word for reports */
  const char *source; /* with a word on what was not re-read */
  enum lxg_relation_quantity argument, result;
  enum lxg_relation_form form;
  double coefficient[4]; /* a, b, c, d */
  double low, high;      /* range of the argument the sample covers [unit of the argument] */
  double scatter;        /* one sigma: [unit of the result], [dex] for POWER */
  const char *scatter_source;
};

/* A measured value against a relation. */
struct lxg_relation_check {
  double predicted;  /* [unit of the result] */
  double lo68, hi68; /* scatter around it */
  double
      sigma; /* (measured - predicted) in units of scatter (and error, in quadrature); NaN if nothing was measured */
};

size_t lxg_relations_count(void);

/* Relation 0 <= index < count; NULL outside. */
const struct lxg_relation *lxg_relations_at(size_t index);

/* Stable word of a quantity, e.g. "peak_mv". */
const char *lxg_relations_quantity(enum lxg_relation_quantity quantity);

/* Prediction at `argument` compared with `measured` +- `error` (NaN measured: prediction alone; error 0 allowed).
 * LXG_NO_SOLUTION "relation-range" when the argument lies outside the sample; LXG_INPUT "relation-value" when it is
 * no number, the error negative, or a POWER's measured value not positive. */
enum lxg_status lxg_relations_check(const struct lxg_relation *relation, double argument, double measured,
                                    double measured_error, struct lxg_relation_check *check,
                                    struct lxg_error *error);

#endif
