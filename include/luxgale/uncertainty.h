/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * uncertainty.h - seeded Monte Carlo: from stated errors of the input to intervals of every headline number.
 *
 * A problem names its sources of uncertainty, in three classes (noise of each epoch, calibration shared by all epochs,
 * choices of the model), and gives a function that evaluates one draw. That function asks for deviates by source and
 * index; each is a pure function of (seed, source, draw, index) (random.h), so results are bytewise the same for any
 * number of threads. A draw may fail with a reason; failures are counted, never replaced.
 *
 * Results: median, 68 and 95 % intervals, mean and deviation, correlations, and the split of the variance between the
 * sources by Sobol's indices (Sobol 1993) with frozen sources. Of two independent draws A and B and of A_i, which is A with
 * the deviates of source i taken from B,
 *   first order  S_i = r(Y_B, Y_Ai): B and A_i have source i alone in common,
 *   total        T_i = 1 - r(Y_A, Y_Ai): A and A_i have all but source i in common,
 * r(Y, Z) = [<YZ> - m^2]/[<(Y^2 + Z^2)/2> - m^2], m = <(Y + Z)/2> (Janon, Klein, Lagnoux, Nodet & Prieur 2014, from
 * memory); standard error (1 - r^2)/n^(1/2) for n rows. S_i is what source i does alone, T_i what it does with all
 * its interactions; S_i = T_i for an additive model. Cost: split_draws (1 + sources) evaluations beyond the main ones.
 *
 * Call order: fill a problem -> lxg_uncertainty_run -> read the result -> lxg_uncertainty_free.
 */
#ifndef LUXGALE_UNCERTAINTY_H
#define LUXGALE_UNCERTAINTY_H

#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

enum lxg_uncertainty_class {
  LXG_UNCERTAINTY_EPOCH,       /* independent from epoch to epoch */
  LXG_UNCERTAINTY_CALIBRATION, /* one value for all epochs: distance, extinction, zero point */
  LXG_UNCERTAINTY_MODEL        /* one value for all: stellar mass, composition, held quantities */
};

enum {
  LXG_UNCERTAINTY_SOURCES_MAX = 32,
  LXG_UNCERTAINTY_REASONS_MAX = 16, /* distinct reason codes of failed draws that are told apart */
  LXG_UNCERTAINTY_THREADS_MAX = 256
};

/* A source of uncertainty. */
struct lxg_uncertainty_source {
  const char *name; /* as reported, e.g. "distance" */
  enum lxg_uncertainty_class kind;
};

/* One draw, handed to the evaluation; ask it for deviates with the functions below. */
struct lxg_uncertainty_draw {
  uint64_t seed;
  uint32_t number;  /* of the draw */
  uint32_t swapped; /* bit i set: source i takes its second, independent stream */
  bool nominal;     /* every deviate is the middle one: normal 0, uniform 1/2 */
};

/* What to evaluate. Pointers are borrowed until the run returns. */
struct lxg_uncertainty_problem {
  const struct lxg_uncertainty_source *sources;
  size_t source_count; /* 1 to LXG_UNCERTAINTY_SOURCES_MAX */
  size_t output_count; /* headline numbers of one draw, at least 1 */
  size_t
      profile_count; /* further numbers of one draw (epochs times columns) of which only intervals are kept; may be 0 */
  size_t workspace_bytes; /* zeroed scratch memory of one thread; may be 0 */
  /* Evaluates one draw into outputs[output_count] and, when `profile` is not NULL, profile[profile_count]; NaN is "none".
   * `shared` is read only. Any status but LXG_OK fails the draw with the error's code as its reason; LXG_MEMORY, LXG_IO,
   * LXG_LIMIT, LXG_INTERRUPTED and LXG_BUG end the whole run. */
  enum lxg_status (*evaluate)(const void *shared, const struct lxg_uncertainty_draw *draw, void *workspace,
                              double outputs[], double profile[], struct lxg_error *error);
  const void *shared;
};

struct lxg_uncertainty_options {
  uint64_t seed;
  size_t draws;              /* at least 2 */
  size_t split_draws;        /* for the split of the variance, at most `draws`; 0: no split */
  size_t profile_draws;      /* the first so many draws feed the intervals of the profile, at most `draws` */
  size_t memory_bytes;       /* limit for stored draws; 0: 160 MiB */
  unsigned threads;          /* 1 to LXG_UNCERTAINTY_THREADS_MAX; results do not depend on it */
  bool (*interrupted)(void); /* asked before each block of draws; NULL: never */
};

/* Distribution of one number; quantiles by linear interpolation between order statistics, NaN when no draw gave it. */
struct lxg_uncertainty_summary {
  size_t count; /* draws that gave a number */
  double mean, sd;
  double median, lo68, hi68, lo95, hi95; /* percentiles 50; 16, 84; 2.5, 97.5 */
};

/* Share of a source in the variance of one output (estimates scatter: slightly below 0 or above 1 is possible). */
struct lxg_uncertainty_share {
  double first, total;       /* S_i, T_i; NaN when not estimable */
  double first_sd, total_sd; /* their standard errors */
};

struct lxg_uncertainty_reason {
  char code[LXG_ERROR_CODE_SIZE]; /* "other" for the last one when there are too many kinds */
  size_t count;
};

/* Everything a run found. Plain; free with lxg_uncertainty_free. */
struct lxg_uncertainty_result {
  size_t draws, failed; /* main draws, and those of them that failed */
  size_t split_draws,
      split_failed; /* rows of the split, and rows left out because one of their draws failed */
  size_t output_count, source_count, profile_count, profile_draws;
  struct lxg_uncertainty_summary *summary; /* [output_count] */
  double *correlation;                     /* [output_count * output_count], Pearson, NaN when undefined */
  struct lxg_uncertainty_share *share;     /* [output_count * source_count], NULL without a split */
  struct lxg_uncertainty_summary *profile; /* [profile_count], NULL without */
  double *samples;                         /* [draws * output_count], NaN where failed or none */
  size_t reason_count;
  struct lxg_uncertainty_reason reason[LXG_UNCERTAINTY_REASONS_MAX]; /* by first appearance */
};

/* Uniform (0, 1) and standard normal deviates of a source; `index` tells epochs (or parameters) of one source apart. */
double lxg_uncertainty_uniform(const struct lxg_uncertainty_draw *draw, size_t source, uint64_t index);
double lxg_uncertainty_normal(const struct lxg_uncertainty_draw *draw, size_t source, uint64_t index);

/* Normal deviates 0 to count - 1 of a source at once: same numbers, half the cost. */
void lxg_uncertainty_normals(const struct lxg_uncertainty_draw *draw, size_t source, size_t count,
                             double values[]);

/* The draw in which every deviate is the middle one: the answer to the input as stated. */
struct lxg_uncertainty_draw lxg_uncertainty_nominal(void);

/* Runs the problem. LXG_INPUT "uncertainty-options" or "uncertainty-problem"; LXG_LIMIT "uncertainty-memory" when the draws
 * would need more than the stated memory; LXG_NO_SOLUTION "uncertainty-all-failed" when fewer than two draws succeed (the
 * result then still holds the reasons); LXG_MEMORY; or the status that ended the run (of the lowest draw that asked for it). The
 * result is valid to free in every case. */
enum lxg_status lxg_uncertainty_run(const struct lxg_uncertainty_problem *problem,
                                    const struct lxg_uncertainty_options *options,
                                    struct lxg_uncertainty_result *result, struct lxg_error *error);

/* Summary of `count` values, NaN left out; sorts `values` in place. */
struct lxg_uncertainty_summary lxg_uncertainty_summarise(double values[], size_t count);

/* Frees what the result holds; a zeroed or half-built one is allowed. */
void lxg_uncertainty_free(struct lxg_uncertainty_result *result);

#endif
