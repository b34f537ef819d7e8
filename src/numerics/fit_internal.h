/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fit_internal.h - what the minimisation and the profile interval of fit.h share: one minimisation over the
 * internal coordinates u with some of them held.
 */
#ifndef LUXGALE_NUMERICS_FIT_INTERNAL_H
#define LUXGALE_NUMERICS_FIT_INTERNAL_H

#include "luxgale/fit.h"

/* State of one fit; lives on the caller's stack, arrays are of LXG_FIT_PARAMETERS. */
struct lxg_fit_work {
  const struct lxg_fit_problem *problem;
  const struct lxg_fit_settings *settings;
  size_t rows;       /* residuals, padded with zeros up to the number of free coordinates (GSL needs that) */
  size_t free_count; /* coordinates that move */
  size_t free_index[LXG_FIT_PARAMETERS];
  double u[LXG_FIT_PARAMETERS]; /* all coordinates: held ones stay, free ones are where the minimisation is */
  double *above;                /* residuals at u + h, `rows` */
  double *below;                /* residuals at u - h, `rows` */
  enum lxg_status fatal;        /* a callback's failure that must end everything; LXG_OK so far */
  int iterations;
  int evaluations;
};

/* A held coordinate's index, or this. */
#define LXG_FIT_NONE ((size_t)-1)

/* Checks the problem and makes room. */
enum lxg_status lxg_fit_work_init(struct lxg_fit_work *work, const struct lxg_fit_problem *problem,
                                  const struct lxg_fit_settings *settings, struct lxg_error *error);
void lxg_fit_work_free(struct lxg_fit_work *work);

/* u of a parameter value and back, and dp/du. */
double lxg_fit_inner(const struct lxg_fit_parameter *parameter, double value);
double lxg_fit_outer(const struct lxg_fit_parameter *parameter, double u);
double lxg_fit_scale(const struct lxg_fit_parameter *parameter, double u);

/* chi^2 at work->u; infinity where the model has no answer. */
double lxg_fit_chi2(struct lxg_fit_work *work);

/* Minimises over all coordinates but `held` from work->u. chi2 is infinite if the model has no answer at the
 * start. `jacobian` (rows x free, row-major, may be NULL) and `residual` (rows, may be NULL) are those at the
 * end. */
enum lxg_status lxg_fit_minimise(struct lxg_fit_work *work, size_t held, double *chi2, bool *converged,
                                 double *jacobian, double *residual, struct lxg_error *error);

#endif
