/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history_excess.c - radiated energy, and the bookkeeping of the time a history spends above a level (see history.h).
 *
 * Between two rows the curve is monotone (or nearly straight, for a formula), so each interval has at most one crossing: the
 * root of ln(L/level). Energies are Gauss-Legendre sums on panels over which ln L changes little. Can fail: a range outside
 * the history, a level that is not positive, a curve the history does not have.
 */
#include "history/history_internal.h"
#include "luxgale/numerics.h"

#include <math.h>

static const double panel_ln = 4.0;         /* e-folds of L that one 16-point panel integrates to rounding */
static const double crossing_width = 1e-13; /* of the interval between two rows */

/* One stretch of a curve, as the integrand and the crossing search see it. */
struct stretch {
  const struct lxg_history *history;
  enum lxg_history_curve curve;
  double from, to; /* [s] */
  double level;    /* [erg s^-1] */
};

static double luminosity_at(const struct lxg_history *history, enum lxg_history_curve curve, double time) {
  struct lxg_history_value value = {.luminosity = NAN};
  (void)lxg_history_at(history, curve, time,
                       &value); /* a refusal leaves the NaN, which callers meet as LXG_DOMAIN */
  return value.luminosity;
}

static double integrand(double time, const void *parameters) {
  const struct stretch *const stretch = parameters;
  return luminosity_at(stretch->history, stretch->curve, time);
}

static double log_ratio(double share, const void *parameters) {
  const struct stretch *const s = parameters;
  const double time = share >= 1.0 ? s->to : s->from + (s->to - s->from) * share;
  return log(luminosity_at(s->history, s->curve, time) / s->level);
}

static enum lxg_status require_curve(const struct lxg_history *history, enum lxg_history_curve curve,
                                     struct lxg_error *error) {
  if (!lxg_history_has(history, curve)) {
    return lxg_error_set(error, LXG_INPUT, "history-curve", "this luminosity history has no error bounds");
  }
  return LXG_OK;
}

enum lxg_status lxg_history_energy(const struct lxg_history *history, enum lxg_history_curve curve,
                                   double from, double to, double *energy, struct lxg_error *error) {
  const size_t last = history->count - 1;
  if (!(from >= history->time[0] && from <= to && to <= history->time[last])) {
    return lxg_error_set(error, LXG_INPUT, "history-range",
                         "range = %.10g to %.10g s: inside %.10g to %.10g s", from, to, history->time[0],
                         history->time[last]);
  }
  enum lxg_status status = require_curve(history, curve, error);
  double sum = 0.0;
  for (size_t i = 0; i < last && status == LXG_OK; i++) {
    const double a = fmax(from, history->time[i]), b = fmin(to, history->time[i + 1]);
    if (!(a < b)) {
      continue;
    }
    const struct stretch stretch = {history, curve, a, b, 0.0};
    const double change = fabs(log(luminosity_at(history, curve, b) / luminosity_at(history, curve, a)));
    double part = 0.0;
    status = lxg_quadrature_gauss(integrand, &stretch, a, b, 1 + (size_t)(change / panel_ln), &part, error);
    sum += part;
  }
  if (status == LXG_OK) {
    *energy = sum;
  }
  return status;
}

static double gap_overlap(const struct lxg_history *history, double start, double end) {
  double sum = 0.0;
  for (size_t i = 0; i < history->gap_count; i++) {
    sum += fmax(0.0, fmin(end, history->gap[i].end) - fmax(start, history->gap[i].start));
  }
  return sum;
}

/* Adds one finished stretch above the level. */
static enum lxg_status add_stretch(const struct stretch *base, double start, double end,
                                   struct lxg_history_excess *excess, struct lxg_error *error) {
  double radiated = 0.0;
  const enum lxg_status status = lxg_history_energy(base->history, base->curve, start, end, &radiated, error);
  if (status != LXG_OK) {
    return status;
  }
  if (excess->intervals == 0) {
    excess->first = start;
  }
  excess->last = end;
  excess->intervals++;
  excess->duration += end - start;
  excess->radiated += radiated;
  excess->energy_above += radiated - base->level * (end - start);
  excess->in_gaps += gap_overlap(base->history, start, end);
  return LXG_OK;
}

static void find_peak(const struct stretch *base, struct lxg_history_excess *excess) {
  for (size_t i = 0; i < base->history->count; i++) {
    const double ratio = luminosity_at(base->history, base->curve, base->history->time[i]) / base->level;
    if (ratio > excess->peak_ratio) {
      excess->peak_ratio = ratio;
      excess->peak_time = base->history->time[i];
    }
  }
}

static bool above(const struct stretch *base, double time) {
  return luminosity_at(base->history, base->curve, time) > base->level;
}

/* Walks the rows, opening and closing stretches at the crossings. */
static enum lxg_status walk(const struct stretch *base, struct lxg_history_excess *excess,
                            struct lxg_error *error) {
  const double *const time = base->history->time;
  const size_t last = base->history->count - 1;
  bool open = above(base, time[0]);
  double start = time[0];
  excess->open_start = open;
  for (size_t i = 0; i < last; i++) {
    if (above(base, time[i + 1]) == open) {
      continue;
    }
    struct stretch piece = *base;
    piece.from = time[i];
    piece.to = time[i + 1];
    double share = 0.0;
    enum lxg_status status = lxg_root_find(log_ratio, &piece, 0.0, 1.0, crossing_width, &share, error);
    const double crossing = share >= 1.0 ? piece.to : piece.from + (piece.to - piece.from) * share;
    if (status == LXG_OK && open) {
      status = add_stretch(base, start, crossing, excess, error);
    }
    if (status != LXG_OK) {
      return status;
    }
    start = crossing;
    open = !open;
  }
  excess->open_end = open;
  return open ? add_stretch(base, start, time[last], excess, error) : LXG_OK;
}

enum lxg_status lxg_history_excess(const struct lxg_history *history, enum lxg_history_curve curve,
                                   double level, struct lxg_history_excess *excess, struct lxg_error *error) {
  if (!(level > 0.0 && isfinite(level))) {
    return lxg_error_set(error, LXG_INPUT, "history-level", "level = %.10g erg/s: finite and above 0", level);
  }
  enum lxg_status status = require_curve(history, curve, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_history_excess found = {.first = NAN, .last = NAN, .mean_ratio = NAN};
  const struct stretch base = {.history = history, .curve = curve, .level = level};
  find_peak(&base, &found);
  status = walk(&base, &found, error);
  if (status != LXG_OK) {
    lxg_error_context(error, "finding when the luminosity exceeds %.6g erg/s", level);
    return status;
  }
  if (found.intervals > 0) {
    found.mean_ratio = found.duration > 0.0 ? found.radiated / (level * found.duration) : found.peak_ratio;
  }
  *excess = found;
  return LXG_OK;
}
