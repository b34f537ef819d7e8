/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history.h - luminosity against time: interpolation, energy, time above a level, and the times at which to sample it.
 *
 * A history is built from rows (interpolated in ln L by a monotone C1 cubic, Steffen 1990, A&A 239, 443) or from a formula
 * (evaluated exactly; its rows then only mark where it bends). It is read-only once built, so any number of threads may use
 * it. Intervals that are long compared with the whole are declared as gaps: there the interpolation is a guess.
 *
 * Call order: lxg_history_create or lxg_history_create_formula -> (at, energy, excess, sample) -> lxg_history_destroy.
 */
#ifndef LUXGALE_HISTORY_H
#define LUXGALE_HISTORY_H

#include "luxgale/formula.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* Where the luminosity is measured. */
enum lxg_history_kind { LXG_HISTORY_BASE, LXG_HISTORY_PHOTOSPHERE };

/* Which curve of a history with luminosity errors. */
enum lxg_history_curve { LXG_HISTORY_VALUE, LXG_HISTORY_LOW, LXG_HISTORY_HIGH };

/* Rows as they come from a file or another module; borrowed during the call only. */
struct lxg_history_rows {
  enum lxg_history_kind kind;
  size_t count;             /* >= 1 */
  const double *time;       /* [s], strictly increasing */
  const double *luminosity; /* [erg s^-1], > 0 */
  const double *low;   /* lower 68 % bound [erg s^-1], above 0 and at most the luminosity; NULL: no errors */
  const double *high;  /* upper 68 % bound [erg s^-1], at least the luminosity; NULL exactly when `low` is */
  const size_t *line;  /* line of each row in its file, for messages; NULL: rows are numbered from 1 */
  double gap_fraction; /* share of the whole span beyond which an interval is a gap, > 0; INFINITY: no gaps */
};

/* An interval without data, between rows `row` and `row + 1` (from 0). */
struct lxg_history_gap {
  size_t row;
  double start, end; /* [s] */
};

struct lxg_history {
  enum lxg_history_kind kind;
  size_t count;
  double *time;       /* [s] */
  double *luminosity; /* [erg s^-1] */
  double *low;        /* [erg s^-1] or NULL */
  double *high;       /* [erg s^-1] or NULL */
  size_t gap_count;
  struct lxg_history_gap *gap;          /* in order of time */
  struct lxg_formula *formula;          /* exact law, or NULL for rows */
  struct lxg_steffen *ln_luminosity;    /* interpolants of ln L against time; NULL with a formula */
  struct lxg_steffen *ln_low, *ln_high; /* NULL without errors */
};

/* Builds a history from rows; everything is copied. `*history` is NULL on failure. LXG_INPUT names the row: "history-empty",
 * "history-time", "history-order", "history-duplicate", "history-luminosity", "history-error", "history-gap-fraction";
 * LXG_MEMORY. */
enum lxg_status lxg_history_create(const struct lxg_history_rows *rows, struct lxg_history **history,
                                   struct lxg_error *error);

/* Builds a history from a formula over [start, end] [s]. LXG_INPUT "history-window", whatever lxg_formula_check refuses, or
 * "history-formula-value" where the sum is not a finite positive luminosity; LXG_LIMIT "history-rows" when the formula varies
 * too wildly to follow. */
enum lxg_status lxg_history_create_formula(const struct lxg_formula *formula, enum lxg_history_kind kind,
                                           double start, double end, struct lxg_history **history,
                                           struct lxg_error *error);

/* NULL is allowed. */
void lxg_history_destroy(struct lxg_history *history);

struct lxg_history_value {
  double luminosity; /* [erg s^-1] */
  double dlnl_dt;    /* d ln L/dt [s^-1] */
  double time_scale; /* L/|dL/dt| [s]; infinite where L is flat */
  bool in_gap;       /* strictly inside a declared gap */
};

/* Luminosity at a time [s] within the history; LXG_DOMAIN outside, or for a bound of a history without errors; then `value` is
 * untouched. */
enum lxg_status lxg_history_at(const struct lxg_history *history, enum lxg_history_curve curve, double time,
                               struct lxg_history_value *value);

/* Radiated energy int L dt [erg] over [from, to] [s], from <= to, inside the history ("history-range" otherwise), to rounding
 * for rows, to about 1e-10 for formulas. */
enum lxg_status lxg_history_energy(const struct lxg_history *history, enum lxg_history_curve curve,
                                   double from, double to, double *energy, struct lxg_error *error);

/* The time spent above a level. Crossings are roots of the interpolant or formula itself. */
struct lxg_history_excess {
  size_t intervals;    /* separate stretches of time with L > level */
  double duration;     /* total [s] */
  double first, last;  /* first and last moment above [s]; NaN when never */
  double radiated;     /* int L dt while above [erg] */
  double energy_above; /* int (L - level) dt while above [erg] */
  double mean_ratio;   /* time average of L/level while above; NaN when never */
  double peak_ratio;   /* largest L/level of the whole history, above or not */
  double peak_time;    /* when that is [s]; the first time, if several */
  double in_gaps;      /* part of `duration` that lies in declared gaps [s] */
  bool open_start;     /* already above at the first row: first and duration are limits only */
  bool open_end;       /* still above at the last row */
};

/* Bookkeeping against a level [erg s^-1], finite and > 0 ("history-level" otherwise). For a level that changes with time
 * build a history of the ratio and use level 1. Also LXG_INPUT "history-curve" for a bound that the history lacks. */
enum lxg_status lxg_history_excess(const struct lxg_history *history, enum lxg_history_curve curve,
                                   double level, struct lxg_history_excess *excess, struct lxg_error *error);

/* How finely to sample. */
struct lxg_history_sampling {
  double tolerance; /* relative error of one Simpson panel for L^steepness and L^-steepness, 1e-12 to 0.1 */
  double steepness; /* power of L up to which integrals are to converge, 0.1 to 50 */
  size_t max_count; /* most times to return, >= 3 */
};

/* Default: halving the step changes integrals of L^p, |p| <= 5, by much less than 1e-4. */
struct lxg_history_sampling lxg_history_sampling_default(void);

/* Times at which to evaluate something that depends on L. They come in panels of three (ends shared): int F dt is the sum of
 * weight[i] F(L(time[i])) (Simpson). Every row and every break of a formula is a panel end. */
struct lxg_history_samples {
  size_t count;       /* odd: 2 panels + 1; 1 for a single row */
  double *time;       /* [s], strictly increasing */
  double *luminosity; /* [erg s^-1] */
  double *weight;     /* [s], > 0; 0 for a single row */
};

/* Samples the main curve. `*samples` is NULL on failure. LXG_INPUT "history-sampling"; LXG_LIMIT "history-samples" when
 * max_count does not suffice; LXG_MEMORY. Free with lxg_history_samples_destroy. */
enum lxg_status lxg_history_sample(const struct lxg_history *history,
                                   const struct lxg_history_sampling *sampling,
                                   struct lxg_history_samples **samples, struct lxg_error *error);

/* NULL is allowed. */
void lxg_history_samples_destroy(struct lxg_history_samples *samples);

struct lxg_node;
struct lxg_files;
struct lxg_composition;

/* What reading a history needs from the rest of the case; all borrowed. */
struct lxg_history_reading {
  struct lxg_files *files;                   /* where names start; the file read is recorded here */
  const struct lxg_composition *composition; /* defaults of a formula */
  double l_edd;                              /* the unit Ledd [erg s^-1] */
  double gap_fraction;                       /* as in struct lxg_history_rows */
};

/* Reads the section `luminosity` of a case; absent: `*history` is NULL and LXG_OK. LXG_INPUT with the place in the case or in the
 * table ("luminosity-unused" for a key that the kind has no use for, "not-available", those of documents, tables and
 * histories), LXG_IO, LXG_MEMORY. */
enum lxg_status lxg_history_read(struct lxg_node *section, const struct lxg_history_reading *reading,
                                 struct lxg_history **history, struct lxg_error *error);

/* Reads the table of `porosity.file`, the factor of the law `reduction` against time: a history whose "luminosity" is the factor [1]. No file:
 * `*factor` is NULL. It must cover `history` (unless NULL): "porosity-span"; "porosity-factor" for one below 1; others as above. */
enum lxg_status lxg_history_read_factor(struct lxg_node *section, struct lxg_files *files,
                                        const struct lxg_history *history, struct lxg_history **factor,
                                        struct lxg_error *error);

#endif
