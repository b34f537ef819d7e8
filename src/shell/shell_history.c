/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * shell_history.c - the ejection history as straight pieces, its integrals, and the first overtaking (see
 * shell.h).
 *
 * First overtaking: within a piece of rising speed, the gas at its start is caught first, t_c = tau + v/v';
 * between two pieces with gas, parted by a jump or by a pause without gas, t_c = (v_2 tau_2 - v_1 tau_1)/(v_2 -
 * v_1) if v_2 > v_1. Can fail: samples out of order or range, memory.
 */
#include "luxgale/memory.h"
#include "shell/shell_internal.h"

#include <math.h>

static const double gauss_half =
    0.28867513459481288; /* 1/(2 sqrt 3): offset of the two nodes from the middle */

double lxg_shell_speed(const struct lxg_shell_segment *segment, double tau) {
  return segment->speed + segment->speed_slope * (tau - segment->start);
}

struct lxg_shell_sums lxg_shell_sums_piece(const struct lxg_shell_segment *segment, double from, double to) {
  struct lxg_shell_sums sums = {0.0, 0.0, 0.0, 0.0};
  const double width = to - from;
  for (int k = -1; k <= 1; k += 2) {
    const double tau = 0.5 * (from + to) + k * gauss_half * width;
    const double v = lxg_shell_speed(segment, tau);
    const double dm = 0.5 * width * (segment->rate + segment->rate_slope * (tau - segment->start));
    sums.mass += dm;
    sums.moment += dm * v;
    sums.delay += dm * v * tau;
    sums.energy += 0.5 * dm * v * v;
  }
  return sums;
}

static struct lxg_shell_sums add(struct lxg_shell_sums a, struct lxg_shell_sums b) {
  return (struct lxg_shell_sums){a.mass + b.mass, a.moment + b.moment, a.delay + b.delay,
                                 a.energy + b.energy};
}

static struct lxg_shell_sums subtract(struct lxg_shell_sums a, struct lxg_shell_sums b) {
  return (struct lxg_shell_sums){a.mass - b.mass, a.moment - b.moment, a.delay - b.delay,
                                 a.energy - b.energy};
}

size_t lxg_shell_segment_of(const struct lxg_shell_history *history, double tau) {
  size_t low = 0, high = history->count;
  while (high - low > 1) {
    const size_t middle = (low + high) / 2;
    if (tau >= history->segment[middle].start) {
      low = middle;
    } else {
      high = middle;
    }
  }
  return low;
}

struct lxg_shell_sums lxg_shell_sums_range(const struct lxg_shell_history *history, double from, double to) {
  const size_t first = lxg_shell_segment_of(history, from), last = lxg_shell_segment_of(history, to);
  if (first == last) {
    return lxg_shell_sums_piece(&history->segment[first], from, to);
  }
  const struct lxg_shell_segment *const a = &history->segment[first], *const b = &history->segment[last];
  return add(add(lxg_shell_sums_piece(a, from, a->end), lxg_shell_sums_piece(b, b->start, to)),
             subtract(history->before[last], history->before[first + 1]));
}

static enum lxg_status check_row(size_t i, const double time[], const double speed[], const double rate[],
                                 struct lxg_error *error) {
  const size_t row = i + 1;
  if (!isfinite(time[i]) || (i > 0 && !(time[i] >= time[i - 1])) || (i > 1 && !(time[i] > time[i - 2]))) {
    return lxg_error_set(
        error, LXG_INPUT, "shell-time",
        "row %zu: time = %.10g s: finite, not before the row above, at most two rows at one time", row,
        time[i]);
  }
  if (!(speed[i] > 0.0 && isfinite(speed[i]))) {
    return lxg_error_set(error, LXG_INPUT, "shell-speed", "row %zu: speed = %.10g cm/s: finite and above 0",
                         row, speed[i]);
  }
  if (!(rate[i] >= 0.0 && isfinite(rate[i]))) {
    return lxg_error_set(error, LXG_INPUT, "shell-rate", "row %zu: rate = %.10g g/s: finite and not below 0",
                         row, rate[i]);
  }
  return LXG_OK;
}

static enum lxg_status check(size_t count, const double time[], const double speed[], const double rate[],
                             double radius, struct lxg_error *error) {
  if (count < 2) {
    return lxg_error_set(error, LXG_INPUT, "shell-count", "samples of the ejection history = %zu: at least 2",
                         count);
  }
  if (!(radius >= 0.0 && isfinite(radius))) {
    return lxg_error_set(error, LXG_INPUT, "shell-radius",
                         "starting radius = %.10g cm: finite and not below 0", radius);
  }
  double largest = 0.0;
  for (size_t i = 0; i < count; i++) {
    const enum lxg_status status = check_row(i, time, speed, rate, error);
    if (status != LXG_OK) {
      return status;
    }
    if (i > 0 && time[i] > time[i - 1]) {
      largest = fmax(largest, fmax(rate[i], rate[i - 1]));
    }
  }
  if (!(largest > 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "shell-rate", "the rate is 0 in all %zu rows: some gas must leave",
                         count);
  }
  return LXG_OK;
}

static void fill(struct lxg_shell_history *history, size_t count, const double time[], const double speed[],
                 const double rate[]) {
  for (size_t i = 0; i + 1 < count; i++) {
    const double width = time[i + 1] - time[i];
    if (width > 0.0) {
      struct lxg_shell_segment *const s = &history->segment[history->count];
      *s = (struct lxg_shell_segment){.start = time[i] - history->origin,
                                      .end = time[i + 1] - history->origin,
                                      .speed = speed[i],
                                      .speed_slope = (speed[i + 1] - speed[i]) / width,
                                      .rate = rate[i],
                                      .rate_slope = (rate[i + 1] - rate[i]) / width,
                                      .speed_end = speed[i + 1],
                                      .massive = rate[i] > 0.0 || rate[i + 1] > 0.0};
      history->before[history->count + 1] =
          add(history->before[history->count], lxg_shell_sums_piece(s, s->start, s->end));
      history->count++;
    }
  }
}

enum lxg_status lxg_shell_create(size_t count, const double time[], const double speed[], const double rate[],
                                 double radius, struct lxg_shell_history **history, struct lxg_error *error) {
  *history = NULL;
  const enum lxg_status status = check(count, time, speed, rate, radius, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_shell_history *const made = lxg_alloc(1, sizeof *made);
  if (made != NULL) {
    made->origin = time[0];
    made->radius = radius;
    made->segment = lxg_alloc(count, sizeof *made->segment);
    made->before = lxg_alloc(count + 1, sizeof *made->before);
  }
  if (made == NULL || made->segment == NULL || made->before == NULL) {
    lxg_shell_destroy(made);
    return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for an ejection history of %zu rows",
                         count);
  }
  fill(made, count, time, speed, rate);
  *history = made;
  return LXG_OK;
}

void lxg_shell_destroy(struct lxg_shell_history *history) {
  if (history != NULL) {
    lxg_free(history->segment);
    lxg_free(history->before);
    lxg_free(history);
  }
}

/* Takes the crossing at `time` of gas that left at tau with speed v, if it is the earliest so far. */
static void take(const struct lxg_shell_history *history, double time, double tau, double v,
                 struct lxg_shell_onset *onset) {
  if (!onset->forms || time + history->origin < onset->time) {
    onset->forms = true;
    onset->time = time + history->origin;
    onset->departure = tau + history->origin;
    onset->radius = history->radius + v * (time - tau);
  }
}

void lxg_shell_first(const struct lxg_shell_history *history, double end, struct lxg_shell_onset *onset) {
  *onset = (struct lxg_shell_onset){.forms = false, .reason = "", .reason_code = ""};
  const struct lxg_shell_segment *ahead = NULL; /* last piece with gas before this one */
  for (size_t i = 0; i < history->count; i++) {
    const struct lxg_shell_segment *const s = &history->segment[i];
    if (!s->massive) {
      continue;
    }
    if (ahead != NULL && s->speed > ahead->speed_end) {
      const double v1 = ahead->speed_end, v2 = s->speed;
      take(history, s->start + v1 * (s->start - ahead->end) / (v2 - v1), ahead->end, v1, onset);
    }
    if (s->speed_slope > 0.0) {
      take(history, s->start + s->speed / s->speed_slope, s->start, s->speed, onset);
    }
    ahead = s;
  }
  if (!onset->forms) {
    onset->reason = "no gas is faster than gas that left before it";
    onset->reason_code = "shell-no-overtaking";
  } else if (onset->time > end) {
    onset->forms = false;
    onset->reason = "faster gas catches slower gas only after the last epoch asked for";
    onset->reason_code = "shell-after-end";
  }
}

void lxg_shell_total(const struct lxg_shell_history *history, double t, double *mass, double *momentum,
                     double *energy) {
  struct lxg_shell_sums sums = {0.0, 0.0, 0.0, 0.0};
  const double seen = fmin(t - history->origin, history->segment[history->count - 1].end);
  if (seen > 0.0) {
    sums = lxg_shell_sums_range(history, 0.0, seen);
  }
  *mass = sums.mass;
  *momentum = sums.moment;
  *energy = sums.energy;
}
