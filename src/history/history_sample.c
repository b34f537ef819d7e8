/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history_sample.c - times at which a history must be sampled so that integrals over it converge (see history.h).
 *
 * A panel is accepted when Simpson's rule on it and on its two halves agree for L^p and L^-p: their difference is 15 times the
 * error of the halves (Richardson), and any smooth F(L) between these powers is covered. Rows are panel ends, so kinks of the
 * interpolant never fall inside one. Can fail: settings out of range, more times than allowed, memory.
 */
#include "history/history_internal.h"
#include "luxgale/memory.h"

#include <math.h>

static const double shortest =
    1e-13; /* of the span: below, a panel is a step of the formula and is taken as it is */

struct lxg_history_sampling lxg_history_sampling_default(void) {
  return (struct lxg_history_sampling){.tolerance = 1e-5, .steepness = 5.0, .max_count = 100000};
}

struct sampler {
  const struct lxg_history *history;
  const struct lxg_history_sampling *sampling;
  double floor; /* shortest panel [s] */
  struct lxg_history_times *times;
  struct lxg_error *error;
};

static enum lxg_status log_at(const struct sampler *sampler, double time, double *ln_l) {
  struct lxg_history_value value = {0};
  if (lxg_history_at(sampler->history, LXG_HISTORY_VALUE, time, &value) != LXG_OK) {
    return lxg_error_set(sampler->error, LXG_DOMAIN, "history-value", "no luminosity at %.10g s", time);
  }
  *ln_l = log(value.luminosity);
  return LXG_OK;
}

/* Relative difference of Simpson's rule on five equidistant points and on their halves, for L^power. */
static double disagreement(const double ln_l[5], double power) {
  double f[5];
  for (int i = 0; i < 5; i++) {
    f[i] = exp(power * (ln_l[i] - ln_l[2]));
  }
  const double one = (f[0] + 4.0 * f[2] + f[4]) / 6.0;
  const double two = (f[0] + 4.0 * f[1] + 2.0 * f[2] + 4.0 * f[3] + f[4]) / 12.0;
  return fabs(one - two) / two;
}

/* Appends middle and end of each panel of (a, b]; `ends` are ln L at a, the middle and b. */
static enum lxg_status refine(const struct sampler *sampler, double a, double b, const double ends[3]) {
  const double middle = 0.5 * (a + b);
  double ln_l[5] = {ends[0], 0.0, ends[1], 0.0, ends[2]};
  enum lxg_status status = log_at(sampler, 0.5 * (a + middle), &ln_l[1]);
  if (status == LXG_OK) {
    status = log_at(sampler, 0.5 * (middle + b), &ln_l[3]);
  }
  if (status != LXG_OK) {
    return status;
  }
  const double power = sampler->sampling->steepness, tolerance = sampler->sampling->tolerance;
  const bool good = disagreement(ln_l, power) <= tolerance && disagreement(ln_l, -power) <= tolerance;
  if (!good && b - a > sampler->floor) {
    status = refine(sampler, a, middle, ln_l);
    return status == LXG_OK ? refine(sampler, middle, b, ln_l + 2) : status;
  }
  if (sampler->times->count + 2 > sampler->sampling->max_count) {
    return lxg_error_set(sampler->error, LXG_LIMIT, "history-samples",
                         "more than %zu samples needed at %.10g s: allow more or ask for less accuracy",
                         sampler->sampling->max_count, a);
  }
  status = lxg_history_times_push(sampler->times, middle, sampler->error);
  return status == LXG_OK ? lxg_history_times_push(sampler->times, b, sampler->error) : status;
}

static enum lxg_status find_times(const struct sampler *sampler) {
  const struct lxg_history *const history = sampler->history;
  enum lxg_status status = lxg_history_times_push(sampler->times, history->time[0], sampler->error);
  for (size_t i = 0; i + 1 < history->count && status == LXG_OK; i++) {
    const double a = history->time[i], b = history->time[i + 1];
    double ends[3];
    status = log_at(sampler, a, &ends[0]);
    if (status == LXG_OK) {
      status = log_at(sampler, 0.5 * (a + b), &ends[1]);
    }
    if (status == LXG_OK) {
      status = log_at(sampler, b, &ends[2]);
    }
    if (status == LXG_OK) {
      status = refine(sampler, a, b, ends);
    }
  }
  return status;
}

static enum lxg_status fill(const struct sampler *sampler, struct lxg_history_samples *samples) {
  const size_t count = samples->count;
  samples->luminosity = lxg_alloc(count, sizeof *samples->luminosity);
  samples->weight = lxg_alloc(count, sizeof *samples->weight);
  if (samples->luminosity == NULL || samples->weight == NULL) {
    return lxg_error_set(sampler->error, LXG_MEMORY, "memory", "no memory for %zu samples", count);
  }
  for (size_t i = 0; i < count; i++) {
    double ln_l = 0.0;
    const enum lxg_status status = log_at(sampler, samples->time[i], &ln_l);
    if (status != LXG_OK) {
      return status;
    }
    samples->luminosity[i] = exp(ln_l);
  }
  for (size_t i = 0; i + 2 < count; i += 2) {
    const double width = samples->time[i + 2] - samples->time[i];
    samples->weight[i] += width / 6.0;
    samples->weight[i + 1] += 4.0 * width / 6.0;
    samples->weight[i + 2] += width / 6.0;
  }
  return LXG_OK;
}

enum lxg_status lxg_history_sample(const struct lxg_history *history,
                                   const struct lxg_history_sampling *sampling,
                                   struct lxg_history_samples **samples, struct lxg_error *error) {
  *samples = NULL;
  if (!(sampling->tolerance >= 1e-12 && sampling->tolerance <= 0.1 && sampling->steepness >= 0.1 &&
        sampling->steepness <= 50.0 && sampling->max_count >= 3)) {
    return lxg_error_set(
        error, LXG_INPUT, "history-sampling",
        "tolerance = %.10g (1e-12 to 0.1), steepness = %.10g (0.1 to 50), max_count = %zu (at least 3)",
        sampling->tolerance, sampling->steepness, sampling->max_count);
  }
  struct lxg_history_samples *made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "no memory for samples of a luminosity history");
  }
  struct lxg_history_times times = {0};
  const double floor = lxg_history_shortest(history->time[0], history->time[history->count - 1], shortest);
  const struct sampler sampler = {history, sampling, floor, &times, error};
  enum lxg_status status = find_times(&sampler);
  made->time = times.time;
  made->count = times.count;
  if (status == LXG_OK) {
    status = fill(&sampler, made);
  }
  if (status != LXG_OK) {
    lxg_history_samples_destroy(made);
    made = NULL;
  }
  *samples = made;
  return status;
}

void lxg_history_samples_destroy(struct lxg_history_samples *samples) {
  if (samples == NULL) {
    return;
  }
  lxg_free(samples->time);
  lxg_free(samples->luminosity);
  lxg_free(samples->weight);
  lxg_free(samples);
}
