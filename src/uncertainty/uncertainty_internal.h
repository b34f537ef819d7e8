/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * uncertainty_internal.h - what the files of the module share.
 */
#ifndef LUXGALE_UNCERTAINTY_INTERNAL_H
#define LUXGALE_UNCERTAINTY_INTERNAL_H

#include "luxgale/uncertainty.h"

/* Values of all evaluations, one row each: the main draws, then for every row of the split B, A_1, ..., A_sources. */
struct lxg_uncertainty_rows {
  size_t draws, split_draws, sources, outputs;
  const double *values; /* [(draws + split_draws (1 + sources)) * outputs] */
};

/* Correlations of the main draws, [outputs * outputs]. */
void lxg_uncertainty_correlate(const struct lxg_uncertainty_rows *rows, double correlation[]);

/* Sobol indices, [outputs * sources]. */
void lxg_uncertainty_split(const struct lxg_uncertainty_rows *rows, struct lxg_uncertainty_share share[]);

#endif
