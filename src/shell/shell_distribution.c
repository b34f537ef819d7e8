/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * shell_distribution.c - ejected mass over speed, dM/dv, as it left and after sweeping (see shell.h).
 *
 * Within a sampling interval the speed is linear in departure time, so each bin takes an interval of departure
 * times and its mass is an exact integral. Can fail: edges out of order, memory.
 */
#include "luxgale/memory.h"
#include "shell/shell_internal.h"

#include <math.h>
#include <string.h>

struct bins {
  size_t count;
  const double *edge;
  double *mass;
  double *outside; /* [2] below, above */
};

/* Bin of one speed; count for none. */
static void put(const struct bins *bins, double speed, double mass) {
  const size_t n = bins->count;
  if (speed < bins->edge[0]) {
    bins->outside[0] += mass;
  } else if (speed > bins->edge[n]) {
    bins->outside[1] += mass;
  } else {
    size_t k = 0;
    while (k + 1 < n && speed >= bins->edge[k + 1]) {
      k++;
    }
    bins->mass[k] += mass;
  }
}

/* Mass in [from, to] of one interval with speeds between low and high. */
static double mass_between(const struct lxg_shell_segment *s, double from, double to, double low,
                           double high) {
  const double at_low = s->start + (low - s->speed) / s->speed_slope;
  const double at_high = s->start + (high - s->speed) / s->speed_slope;
  const double a = fmax(from, fmin(at_low, at_high)), b = fmin(to, fmax(at_low, at_high));
  return b > a ? lxg_shell_sums_piece(s, a, b).mass : 0.0;
}

static void put_piece(const struct bins *bins, const struct lxg_shell_segment *s, double from, double to) {
  if (s->speed_slope == 0.0) {
    put(bins, s->speed, lxg_shell_sums_piece(s, from, to).mass);
    return;
  }
  for (size_t k = 0; k < bins->count; k++) {
    bins->mass[k] += mass_between(s, from, to, bins->edge[k], bins->edge[k + 1]);
  }
  bins->outside[0] += mass_between(s, from, to, -INFINITY, bins->edge[0]);
  bins->outside[1] += mass_between(s, from, to, bins->edge[bins->count], INFINITY);
}

/* Gas that left in [from, to], by its speed at departure. */
static void put_range(const struct lxg_shell_history *history, const struct bins *bins, double from,
                      double to) {
  for (size_t i = 0; i < history->count; i++) {
    const struct lxg_shell_segment *const s = &history->segment[i];
    const double a = fmax(from, s->start), b = fmin(to, s->end);
    if (s->massive && b > a) {
      put_piece(bins, s, a, b);
    }
  }
}

static enum lxg_status swept(const struct lxg_shell_history *history, double t, double seen,
                             const struct bins *bins, struct lxg_error *error) {
  size_t count = 0;
  enum lxg_status status = lxg_shell_at(history, t, NULL, 0, &count, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_shell_state *const state = lxg_alloc(count, sizeof *state);
  if (state == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for %zu shells", count);
  }
  status = lxg_shell_at(history, t, state, count, &count, error);
  double from = 0.0;
  for (size_t k = 0; k < count && status == LXG_OK; k++) {
    put_range(history, bins, from, state[k].first - history->origin);
    put(bins, state[k].speed, state[k].mass);
    from = state[k].last - history->origin;
  }
  if (status == LXG_OK) {
    put_range(history, bins, from, seen);
  }
  lxg_free(state);
  return status;
}

enum lxg_status lxg_shell_distribution(const struct lxg_shell_history *history, double t, size_t bins,
                                       const double edge[], double before[], double after[],
                                       double outside[4], struct lxg_error *error) {
  for (size_t k = 0; k <= bins && bins > 0; k++) {
    if (!isfinite(edge[k]) || (k > 0 && !(edge[k] > edge[k - 1]))) {
      return lxg_error_set(error, LXG_INPUT, "shell-bins",
                           "edge %zu of the speed bins = %.10g cm/s: finite and rising", k + 1, edge[k]);
    }
  }
  if (bins == 0) {
    return lxg_error_set(error, LXG_INPUT, "shell-bins", "speed bins = 0: at least 1");
  }
  memset(before, 0, bins * sizeof *before);
  memset(after, 0, bins * sizeof *after);
  memset(outside, 0, 4 * sizeof *outside);
  const double seen = fmin(t - history->origin, history->segment[history->count - 1].end);
  put_range(history, &(struct bins){bins, edge, before, outside}, 0.0, seen);
  return swept(history, t, seen, &(struct bins){bins, edge, after, outside + 2}, error);
}
