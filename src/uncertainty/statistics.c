/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * statistics.c - summaries, correlations and Sobol indices of stored draws. All sums run in the order of the draws, so
 * that the bytes of a result do not depend on the number of threads.
 */
#include "uncertainty/uncertainty_internal.h"

#include <math.h>
#include <stdlib.h>

static int rising(const void *left, const void *right) {
  const double a = *(const double *)left;
  const double b = *(const double *)right;
  return (a > b) - (a < b);
}

/* Quantile of sorted values: position p (n - 1), linear between neighbours. */
static double quantile(const double sorted[], size_t count, double p) {
  const double position = p * (double)(count - 1);
  const size_t below = (size_t)position;
  const double rest = position - (double)below;
  return rest > 0.0 ? sorted[below] + rest * (sorted[below + 1] - sorted[below]) : sorted[below];
}

struct lxg_uncertainty_summary lxg_uncertainty_summarise(double values[], size_t count) {
  struct lxg_uncertainty_summary s = {0, NAN, NAN, NAN, NAN, NAN, NAN, NAN};
  size_t kept = 0;
  double sum = 0.0;
  for (size_t i = 0; i < count; i++) {
    if (isfinite(values[i])) {
      sum += values[i];
      values[kept++] = values[i];
    }
  }
  s.count = kept;
  if (kept == 0) {
    return s;
  }
  s.mean = sum / (double)kept;
  double squares = 0.0;
  for (size_t i = 0; i < kept; i++) {
    squares += (values[i] - s.mean) * (values[i] - s.mean);
  }
  s.sd = kept > 1 ? sqrt(squares / (double)(kept - 1)) : NAN;
  qsort(values, kept, sizeof values[0], rising);
  s.median = quantile(values, kept, 0.5);
  s.lo68 = quantile(values, kept, 0.16);
  s.hi68 = quantile(values, kept, 0.84);
  s.lo95 = quantile(values, kept, 0.025);
  s.hi95 = quantile(values, kept, 0.975);
  return s;
}

/* A column of the row table: value k is at first[k * stride]. */
struct column {
  const double *first;
  size_t stride;
};

/* Means over the rows in which both columns hold a number. */
struct moments {
  size_t count;
  double mean_y, mean_z, var_y, var_z, covariance;
};

static struct moments joint_moments(struct column y, struct column z, size_t rows) {
  struct moments m = {0, 0.0, 0.0, 0.0, 0.0, 0.0};
  for (size_t k = 0; k < rows; k++) {
    const double a = y.first[k * y.stride];
    const double b = z.first[k * z.stride];
    if (isfinite(a) && isfinite(b)) {
      m.count++;
      m.mean_y += a;
      m.mean_z += b;
    }
  }
  const double n = (double)m.count;
  m.mean_y /= n;
  m.mean_z /= n;
  for (size_t k = 0; k < rows; k++) {
    const double a = y.first[k * y.stride] - m.mean_y;
    const double b = z.first[k * z.stride] - m.mean_z;
    if (isfinite(a) && isfinite(b)) {
      m.var_y += a * a / n;
      m.var_z += b * b / n;
      m.covariance += a * b / n;
    }
  }
  return m;
}

void lxg_uncertainty_correlate(const struct lxg_uncertainty_rows *rows, double correlation[]) {
  const size_t n = rows->outputs;
  for (size_t i = 0; i < n; i++) {
    for (size_t j = i; j < n; j++) {
      const struct column y = {rows->values + i, n};
      const struct column z = {rows->values + j, n};
      const struct moments m = joint_moments(y, z, rows->draws);
      const double scale = sqrt(m.var_y) * sqrt(m.var_z);
      double value = NAN;
      if (m.count >= 3 && scale > 0.0) {
        value = i == j ? 1.0 : fmin(fmax(m.covariance / scale, -1.0), 1.0);
      }
      correlation[i * n + j] = value;
      correlation[j * n + i] = value;
    }
  }
}

/* r(Y, Z) of uncertainty.h, written about the common mean so that nothing cancels; *sd its standard error. */
static double frozen_correlation(struct column y, struct column z, size_t rows, double *sd) {
  const struct moments m = joint_moments(y, z, rows);
  const double half = 0.5 * (m.mean_y - m.mean_z);
  const double variance = 0.5 * (m.var_y + m.var_z) + half * half;
  if (m.count < 3 || !(variance > 0.0)) {
    *sd = NAN;
    return NAN;
  }
  const double r = (m.covariance - half * half) / variance;
  *sd = (1.0 - r * r) / sqrt((double)m.count);
  return r;
}

void lxg_uncertainty_split(const struct lxg_uncertainty_rows *rows, struct lxg_uncertainty_share share[]) {
  const size_t n = rows->outputs;
  const size_t stride = n * (1 + rows->sources);
  const double *split = rows->values + rows->draws * n;
  for (size_t output = 0; output < n; output++) {
    const struct column a = {rows->values + output, n};
    const struct column b = {split + output, stride};
    for (size_t i = 0; i < rows->sources; i++) {
      const struct column ai = {split + (1 + i) * n + output, stride};
      struct lxg_uncertainty_share *s = &share[output * rows->sources + i];
      s->first = frozen_correlation(b, ai, rows->split_draws, &s->first_sd);
      s->total = 1.0 - frozen_correlation(a, ai, rows->split_draws, &s->total_sd);
    }
  }
}
