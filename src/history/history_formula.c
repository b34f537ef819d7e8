/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history_formula.c - rows that follow a luminosity formula closely enough to find its extrema and crossings (history.h).
 *
 * Between breaks of the formula each stretch is cut into a few pieces, and a piece is halved until ln L changes by a small
 * amount across it and is nearly straight. Values are always taken from the formula; the rows are only marks. Can fail: a
 * window that is empty, a luminosity that is zero or infinite somewhere, too many rows, memory.
 */
#include "history/history_internal.h"
#include "luxgale/memory.h"

#include <math.h>

static const double step_ln = 0.25; /* largest change of ln L between rows */
static const double bend_ln =
    0.01; /* largest distance of ln L from a straight line at the middle of a piece */
static const double shortest = 1e-12;     /* of the window: a step of the formula is not resolved further */
enum { PIECES = 16, ROW_LIMIT = 100000 }; /* first pieces of a stretch; rows in all */

static enum lxg_status log_at(const struct lxg_formula *formula, double time, double *ln_l,
                              struct lxg_error *error) {
  const double luminosity = lxg_formula_at(formula, time, NULL);
  if (!(luminosity > 0.0 && isfinite(luminosity))) {
    return lxg_error_set(
        error, LXG_INPUT, "history-formula-value",
        "the luminosity formula gives %.10g erg/s at %.10g s: finite and above 0 over the whole window",
        luminosity, time);
  }
  *ln_l = log(luminosity);
  return LXG_OK;
}

struct tracer {
  const struct lxg_formula *formula;
  double floor; /* shortest piece [s] */
  struct lxg_history_times *times;
  struct lxg_error *error;
};

struct point {
  double time, ln_l;
};

/* Appends the rows of (a, b]: depth is bounded by `floor`. */
static enum lxg_status trace(const struct tracer *tracer, struct point a, struct point b) {
  struct point middle = {.time = 0.5 * (a.time + b.time)};
  enum lxg_status status = log_at(tracer->formula, middle.time, &middle.ln_l, tracer->error);
  if (status != LXG_OK) {
    return status;
  }
  const bool close =
      fabs(b.ln_l - a.ln_l) <= step_ln && fabs(middle.ln_l - 0.5 * (a.ln_l + b.ln_l)) <= bend_ln;
  if (close || b.time - a.time <= tracer->floor) {
    return lxg_history_times_push(tracer->times, b.time, tracer->error);
  }
  if (tracer->times->count >= ROW_LIMIT) {
    return lxg_error_set(tracer->error, LXG_LIMIT, "history-rows",
                         "the luminosity formula needs more than %d rows: choose a window that starts later",
                         ROW_LIMIT);
  }
  status = trace(tracer, a, middle);
  return status == LXG_OK ? trace(tracer, middle, b) : status;
}

/* One stretch between breaks, in PIECES. */
static enum lxg_status trace_stretch(const struct tracer *tracer, double from, double to) {
  struct point a = {.time = from};
  enum lxg_status status = log_at(tracer->formula, from, &a.ln_l, tracer->error);
  for (int i = 1; i <= PIECES && status == LXG_OK; i++) {
    struct point b = {.time = i == PIECES ? to : from + (to - from) * i / PIECES};
    status = log_at(tracer->formula, b.time, &b.ln_l, tracer->error);
    if (status == LXG_OK) {
      status = trace(tracer, a, b);
    }
    a = b;
  }
  return status;
}

static enum lxg_status trace_window(const struct lxg_formula *formula, double start, double end,
                                    struct lxg_history_times *times, struct lxg_error *error) {
  const struct tracer tracer = {formula, lxg_history_shortest(start, end, shortest), times, error};
  double breaks[LXG_FORMULA_BREAKS];
  const size_t count = lxg_formula_breaks(formula, start, end, breaks);
  enum lxg_status status = lxg_history_times_push(times, start, error);
  double from = start;
  for (size_t i = 0; i <= count && status == LXG_OK; i++) {
    const double to = i < count ? breaks[i] : end;
    status = trace_stretch(&tracer, from, to);
    from = to;
  }
  return status;
}

enum lxg_status lxg_history_create_formula(const struct lxg_formula *formula, enum lxg_history_kind kind,
                                           double start, double end, struct lxg_history **history,
                                           struct lxg_error *error) {
  *history = NULL;
  if (!(start < end && isfinite(start) && isfinite(end))) {
    return lxg_error_set(error, LXG_INPUT, "history-window",
                         "window = %.10g to %.10g s: finite, the end after the start", start, end);
  }
  enum lxg_status status = lxg_formula_check(formula, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_history_times times = {0};
  struct lxg_history *made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "no memory for a luminosity history");
  }
  made->kind = kind;
  status = trace_window(formula, start, end, &times, error);
  made->time = times.time;
  made->count = times.count;
  if (status != LXG_OK) {
    goto done;
  }
  made->formula = lxg_alloc(1, sizeof *made->formula);
  made->luminosity = lxg_alloc(times.count, sizeof *made->luminosity);
  if (made->formula == NULL || made->luminosity == NULL) {
    status = lxg_error_set(error, LXG_MEMORY, "memory", "no memory for a luminosity history of %zu rows",
                           times.count);
    goto done;
  }
  *made->formula = *formula;
  for (size_t i = 0; i < times.count; i++) {
    made->luminosity[i] = lxg_formula_at(formula, times.time[i], NULL);
  }
done:
  if (status != LXG_OK) {
    lxg_history_destroy(made);
    made = NULL;
  }
  *history = made;
  return status;
}
