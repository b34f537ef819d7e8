/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history.c - building a luminosity history from rows, declaring its gaps, evaluating it (see history.h).
 *
 * The interpolant works on ln L: between two rows the luminosity is monotone and positive. Can fail: rows out of order,
 * repeated, not finite or not positive; bounds on the wrong side of the luminosity; memory.
 */
#include "history/history_internal.h"
#include "luxgale/memory.h"
#include "luxgale/numerics.h"

#include <float.h>
#include <math.h>
#include <string.h>

static const double closest =
    64.0 * DBL_EPSILON;       /* of the time: rows nearer than this cannot be told apart */
enum { FIRST_CAPACITY = 64 }; /* times a list starts with */

static size_t row_number(const struct lxg_history_rows *rows, size_t row) {
  return rows->line != NULL ? rows->line[row] : row + 1;
}

static const char *row_word(const struct lxg_history_rows *rows) {
  return rows->line != NULL ? "line" : "row";
}

static enum lxg_status check_time(const struct lxg_history_rows *rows, size_t row, struct lxg_error *error) {
  const double time = rows->time[row];
  const size_t number = row_number(rows, row);
  if (!isfinite(time)) {
    return lxg_error_set(error, LXG_INPUT, "history-time", "%s %zu: time = %.10g s: finite numbers only",
                         row_word(rows), number, time);
  }
  const double before = row > 0 ? rows->time[row - 1] : -INFINITY;
  if (fabs(time - before) <= closest * fmax(fabs(time), fabs(before)) && row > 0) {
    return lxg_error_set(error, LXG_INPUT, "history-duplicate", "%s %zu: time = %.17g s repeats %s %zu",
                         row_word(rows), number, time, row_word(rows), row_number(rows, row - 1));
  }
  if (time < before) {
    return lxg_error_set(error, LXG_INPUT, "history-order",
                         "%s %zu: time = %.10g s after %.10g s in %s %zu: times increase from row to row",
                         row_word(rows), number, time, before, row_word(rows), row_number(rows, row - 1));
  }
  return LXG_OK;
}

static enum lxg_status check_luminosity(const struct lxg_history_rows *rows, size_t row,
                                        struct lxg_error *error) {
  const double luminosity = rows->luminosity[row];
  const size_t number = row_number(rows, row);
  if (!(luminosity > 0.0 && isfinite(luminosity))) {
    return lxg_error_set(error, LXG_INPUT, "history-luminosity",
                         "%s %zu: luminosity = %.10g erg/s: finite and above 0", row_word(rows), number,
                         luminosity);
  }
  if (rows->low == NULL) {
    return LXG_OK;
  }
  const double low = rows->low[row], high = rows->high[row];
  if (!(low > 0.0 && low <= luminosity && high >= luminosity && isfinite(high))) {
    return lxg_error_set(
        error, LXG_INPUT, "history-error",
        "%s %zu: luminosity = %.10g erg/s with bounds %.10g to %.10g: the lower bound is above 0, "
        "the luminosity lies between the bounds",
        row_word(rows), number, luminosity, low, high);
  }
  return LXG_OK;
}

static enum lxg_status check_rows(const struct lxg_history_rows *rows, struct lxg_error *error) {
  if (rows->count == 0) {
    return lxg_error_set(error, LXG_INPUT, "history-empty",
                         "0 rows: a luminosity history needs at least one");
  }
  if ((rows->low == NULL) != (rows->high == NULL)) {
    return lxg_error_set(error, LXG_INPUT, "history-error",
                         "only one of the two luminosity bounds is given: give both or none");
  }
  if (!(rows->gap_fraction > 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "history-gap-fraction", "gap fraction = %.10g: above 0",
                         rows->gap_fraction);
  }
  for (size_t row = 0; row < rows->count; row++) {
    enum lxg_status status = check_time(rows, row, error);
    if (status == LXG_OK) {
      status = check_luminosity(rows, row, error);
    }
    if (status != LXG_OK) {
      return status;
    }
  }
  return LXG_OK;
}

static enum lxg_status out_of_memory(struct lxg_error *error, size_t count) {
  return lxg_error_set(error, LXG_MEMORY, "memory", "no memory for a luminosity history of %zu rows", count);
}

/* Copies a column and makes the interpolant of its logarithm. */
static enum lxg_status take_curve(const struct lxg_history *history, const double column[], double **copy,
                                  struct lxg_steffen **interpolant, struct lxg_error *error) {
  const size_t count = history->count;
  double *const logs = lxg_alloc(count, sizeof *logs);
  *copy = lxg_alloc(count, sizeof **copy);
  enum lxg_status status = LXG_OK;
  if (logs == NULL || *copy == NULL) {
    status = out_of_memory(error, count);
    goto done;
  }
  for (size_t i = 0; i < count; i++) {
    (*copy)[i] = column[i];
    logs[i] = log(column[i]);
  }
  status = lxg_steffen_create(history->time, logs, count, interpolant, error);
done:
  lxg_free(logs);
  return status;
}

static enum lxg_status find_gaps(struct lxg_history *history, double fraction, struct lxg_error *error) {
  const size_t count = history->count;
  const double span = history->time[count - 1] - history->time[0];
  const double longest = span > 0.0 ? fraction * span : INFINITY;
  for (int pass = 0; pass < 2; pass++) { /* count, then store */
    size_t found = 0;
    for (size_t i = 0; i + 1 < count; i++) {
      if (history->time[i + 1] - history->time[i] > longest) {
        if (pass == 1) {
          history->gap[found] = (struct lxg_history_gap){i, history->time[i], history->time[i + 1]};
        }
        found++;
      }
    }
    if (pass == 0) {
      history->gap_count = found;
      history->gap = lxg_alloc(found, sizeof *history->gap);
      if (history->gap == NULL) {
        return out_of_memory(error, count);
      }
    }
  }
  return LXG_OK;
}

static enum lxg_status fill(struct lxg_history *history, const struct lxg_history_rows *rows,
                            struct lxg_error *error) {
  history->kind = rows->kind;
  history->count = rows->count;
  history->time = lxg_alloc(rows->count, sizeof *history->time);
  if (history->time == NULL) {
    return out_of_memory(error, rows->count);
  }
  memcpy(history->time, rows->time, rows->count * sizeof *rows->time);
  enum lxg_status status =
      take_curve(history, rows->luminosity, &history->luminosity, &history->ln_luminosity, error);
  if (status == LXG_OK && rows->low != NULL) {
    status = take_curve(history, rows->low, &history->low, &history->ln_low, error);
  }
  if (status == LXG_OK && rows->high != NULL) {
    status = take_curve(history, rows->high, &history->high, &history->ln_high, error);
  }
  if (status == LXG_OK) {
    status = find_gaps(history, rows->gap_fraction, error);
  }
  return status;
}

enum lxg_status lxg_history_create(const struct lxg_history_rows *rows, struct lxg_history **history,
                                   struct lxg_error *error) {
  *history = NULL;
  enum lxg_status status = check_rows(rows, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_history *made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    return out_of_memory(error, rows->count);
  }
  status = fill(made, rows, error);
  if (status != LXG_OK) {
    lxg_history_destroy(made);
    made = NULL;
  }
  *history = made;
  return status;
}

void lxg_history_destroy(struct lxg_history *history) {
  if (history == NULL) {
    return;
  }
  lxg_steffen_destroy(history->ln_luminosity);
  lxg_steffen_destroy(history->ln_low);
  lxg_steffen_destroy(history->ln_high);
  lxg_free(history->time);
  lxg_free(history->luminosity);
  lxg_free(history->low);
  lxg_free(history->high);
  lxg_free(history->gap);
  lxg_free(history->formula);
  lxg_free(history);
}

static const struct lxg_steffen *curve_of(const struct lxg_history *history, enum lxg_history_curve curve) {
  switch (curve) {
  case LXG_HISTORY_VALUE:
    return history->ln_luminosity;
  case LXG_HISTORY_LOW:
    return history->ln_low;
  case LXG_HISTORY_HIGH:
    return history->ln_high;
  }
  return NULL;
}

bool lxg_history_has(const struct lxg_history *history, enum lxg_history_curve curve) {
  return curve_of(history, curve) != NULL || (history->formula != NULL && curve == LXG_HISTORY_VALUE);
}

static bool in_gap(const struct lxg_history *history, double time) {
  for (size_t i = 0; i < history->gap_count; i++) {
    if (time > history->gap[i].start && time < history->gap[i].end) {
      return true;
    }
  }
  return false;
}

enum lxg_status lxg_history_at(const struct lxg_history *history, enum lxg_history_curve curve, double time,
                               struct lxg_history_value *value) {
  if (!lxg_history_has(history, curve) ||
      !(time >= history->time[0] && time <= history->time[history->count - 1])) {
    return LXG_DOMAIN;
  }
  double luminosity = 0.0, slope = 0.0;
  if (history->formula != NULL) {
    luminosity = lxg_formula_at(history->formula, time, &slope);
    slope /= luminosity;
    if (!(luminosity > 0.0 && isfinite(luminosity))) {
      return LXG_DOMAIN;
    }
  } else {
    const enum lxg_status status = lxg_steffen_at(curve_of(history, curve), time, &luminosity, &slope);
    if (status != LXG_OK) {
      return status;
    }
    luminosity = exp(luminosity);
  }
  value->luminosity = luminosity;
  value->dlnl_dt = slope;
  value->time_scale = slope == 0.0 ? INFINITY : 1.0 / fabs(slope);
  value->in_gap = in_gap(history, time);
  return LXG_OK;
}

enum lxg_status lxg_history_times_push(struct lxg_history_times *times, double time,
                                       struct lxg_error *error) {
  if (times->count == times->capacity) {
    const size_t capacity = times->capacity == 0 ? FIRST_CAPACITY : 2 * times->capacity;
    double *const grown = lxg_realloc(times->time, capacity, sizeof *grown);
    if (grown == NULL) {
      return out_of_memory(error, capacity);
    }
    times->time = grown;
    times->capacity = capacity;
  }
  times->time[times->count++] = time;
  return LXG_OK;
}

double lxg_history_shortest(double start, double end, double share) {
  return fmax(share * (end - start), 16.0 * DBL_EPSILON * fmax(fabs(start), fabs(end)));
}
