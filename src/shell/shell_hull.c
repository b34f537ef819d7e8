/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * shell_hull.c - all shells of an epoch (see shell.h): pooling of gas that has crossed, then the exact edges.
 *
 * The departure times are cut into cells, finer towards the samples, each with its mass and mean ballistic
 * distance. Going inward, a cell farther out than the one before it has crossed it: they are pooled with their
 * mean distance, until distances fall inward again (pool-adjacent-violators: the same as the convex hull of int x
 * dM). Pools of several cells are shells. The distance X of a shell then solves (S2) with edges tau(X) from (S3),
 * each edge being where int Mdot (x - X) dtau is largest within a cell of the pool's edge: a crossing of x = X (a
 * quadratic) or a corner of the history. Newton in X; the slope of (S2) is minus the mass. Can fail: memory.
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "shell/shell_internal.h"

#include <math.h>

enum {
  CELL_LEVELS = 20,  /* cells halve in width this often towards each end of a sampling interval */
  CELL_UNIFORM = 32, /* even cells in its middle */
  CELL_MOST = 2 * CELL_LEVELS + CELL_UNIFORM + 2,
  EDGE_ITERATIONS = 100
};

static const double pool_tie = 1e-14; /* relative distance below which cells count as not crossed: rounding */
static const double edge_precision = 4e-16; /* relative change of X that ends Newton: rounding */

/* A run of cells that moves as one. */
struct pool {
  double mass, moment;       /* int Mdot, int Mdot x */
  double first, first_right; /* departure times at the ends of its first cell [s] */
  double last_left, last;    /* and of its last cell */
  size_t cells;
};

/* Ends of the cells of a stretch of unit length, rising from 0 to 1. */
static size_t cell_ends(double end[CELL_MOST]) {
  size_t n = 0;
  end[n++] = 0.0;
  for (int k = CELL_LEVELS; k >= 6; k--) {
    end[n++] = ldexp(1.0, -k);
  }
  for (int k = 1; k < CELL_UNIFORM; k++) {
    end[n++] = (double)k / CELL_UNIFORM;
  }
  for (int k = 6; k <= CELL_LEVELS; k++) {
    end[n++] = 1.0 - ldexp(1.0, -k);
  }
  end[n++] = 1.0;
  return n;
}

static double mean(const struct pool *pool) {
  return pool->moment / pool->mass;
}

/* Adds a cell behind all others and pools it with those that it has crossed. */
static void add_cell(struct pool *pool, size_t *count, struct pool cell) {
  while (*count > 0 && mean(&cell) > mean(&pool[*count - 1]) * (1.0 + pool_tie)) {
    const struct pool *const ahead = &pool[--*count];
    cell = (struct pool){.mass = ahead->mass + cell.mass,
                         .moment = ahead->moment + cell.moment,
                         .first = ahead->first,
                         .first_right = ahead->first_right,
                         .last_left = cell.last_left,
                         .last = cell.last,
                         .cells = ahead->cells + cell.cells};
  }
  pool[(*count)++] = cell;
}

/* All pools of the gas that has left by t. */
static size_t pool_gas(const struct lxg_shell_history *history, double t, struct pool *pool) {
  double end[CELL_MOST];
  const size_t ends = cell_ends(end);
  size_t count = 0;
  for (size_t i = 0; i < history->count && history->segment[i].start < t; i++) {
    const struct lxg_shell_segment *const s = &history->segment[i];
    const double width = fmin(s->end, t) - s->start;
    for (size_t k = 0; s->massive && k + 1 < ends; k++) {
      const double from = s->start + width * end[k];
      const double to = k + 2 == ends ? s->start + width : s->start + width * end[k + 1];
      const struct lxg_shell_sums sums = lxg_shell_sums_piece(s, from, to);
      if (to > from && sums.mass > 0.0) {
        const struct pool cell = {.mass = sums.mass,
                                  .moment = t * sums.moment - sums.delay,
                                  .first = from,
                                  .first_right = to,
                                  .last_left = from,
                                  .last = to,
                                  .cells = 1};
        add_cell(pool, &count, cell);
      }
    }
  }
  return count;
}

/* int Mdot (x - X) dtau over [from, to]. */
static double excess(const struct lxg_shell_history *history, double t, double x, double from, double to) {
  const struct lxg_shell_sums s = lxg_shell_sums_range(history, from, to);
  return t * s.moment - s.delay - x * s.mass;
}

/* One edge of a shell. */
struct edge {
  double tau;
  double best;   /* int Mdot (x - X) from the pool's edge to here: the largest found */
  bool crossing; /* x = X there: gas flows in */
  const struct lxg_shell_segment *segment;
};

static void try_label(const struct lxg_shell_history *history, double t, double x, double pivot, double tau,
                      const struct lxg_shell_segment *segment, bool crossing, struct edge *edge) {
  const double value =
      tau == pivot ? 0.0
                   : (tau > pivot ? excess(history, t, x, pivot, tau) : -excess(history, t, x, tau, pivot));
  if (value > edge->best || (crossing && value >= edge->best)) {
    *edge = (struct edge){.tau = tau, .best = value, .crossing = crossing, .segment = segment};
  }
}

/* Both departure times at which gas of this piece is at x: w = t - tau solves v'w^2 - A w + x = 0, A = v + v'w.
 * */
static void try_cell(const struct lxg_shell_history *history, double t, double x, double pivot, double from,
                     double to, struct edge *edge) {
  const struct lxg_shell_segment *const s =
      &history->segment[lxg_shell_segment_of(history, 0.5 * (from + to))];
  const double slope = s->speed_slope, a = s->speed + slope * (t - s->start);
  const double discriminant = a * a - 4.0 * slope * x;
  try_label(history, t, x, pivot, from, s, false, edge);
  try_label(history, t, x, pivot, to, s, false, edge);
  if (discriminant >= 0.0) {
    const double q = 0.5 * (a + copysign(sqrt(discriminant), a));
    const double age[2] = {x / q, slope != 0.0 ? q / slope : INFINITY};
    for (int k = 0; k < 2; k++) {
      const double tau = t - age[k];
      if (tau >= from && tau <= to) {
        try_label(history, t, x, pivot, tau, s, true, edge);
      }
    }
  }
}

static struct edge find_edge(const struct lxg_shell_history *history, double t, double x, double pivot,
                             double from, double to) {
  struct edge edge = {.tau = pivot, .best = -INFINITY};
  if (from < pivot) {
    try_cell(history, t, x, pivot, from, pivot, &edge);
  }
  if (to > pivot) {
    try_cell(history, t, x, pivot, pivot, to, &edge);
  }
  return edge;
}

struct exact_shell {
  double x;
  struct edge oldest, youngest;
};

/* X and both edges of pool `k` of `count`. */
static struct exact_shell refine(const struct lxg_shell_history *history, double t, const struct pool *pool,
                                 size_t k, size_t count) {
  const struct pool *const p = &pool[k];
  const double before = k > 0 && pool[k - 1].last == p->first ? pool[k - 1].last_left : p->first;
  const double after = k + 1 < count && pool[k + 1].first == p->last ? pool[k + 1].first_right : p->last;
  struct exact_shell shell = {.x = mean(p)};
  for (int i = 0; i < EDGE_ITERATIONS; i++) {
    shell.oldest = find_edge(history, t, shell.x, p->first, before, p->first_right);
    shell.youngest = find_edge(history, t, shell.x, p->last, p->last_left, after);
    const struct lxg_shell_sums s = lxg_shell_sums_range(history, shell.oldest.tau, shell.youngest.tau);
    const double step = (t * s.moment - s.delay) / s.mass - shell.x; /* (S2) over its slope, -mass */
    shell.x += step;
    if (!(fabs(step) > edge_precision * shell.x)) {
      break;
    }
  }
  return shell;
}

/* Energy of motion lost per second at an edge: rate of arriving mass Mdot |dtau/dt| times (v - V)^2/2, with
 * dtau/dt = (v - V)/[v - v'(t - tau)]; for a steady wind Mdot (v - V)^3/(2 v). */
static double power(double t, const struct edge *edge, double shell_speed) {
  if (!edge->crossing) {
    return 0.0;
  }
  const struct lxg_shell_segment *const s = edge->segment;
  const double v = lxg_shell_speed(s, edge->tau);
  const double rate = s->rate + s->rate_slope * (edge->tau - s->start);
  const double difference = v - shell_speed;
  const double spreading = v - s->speed_slope * (t - edge->tau);
  return 0.5 * rate * fabs(difference / spreading) * difference * difference;
}

static struct lxg_shell_state describe(const struct lxg_shell_history *history, double t,
                                       const struct exact_shell *shell) {
  const struct lxg_shell_sums s = lxg_shell_sums_range(history, shell->oldest.tau, shell->youngest.tau);
  struct lxg_shell_state state = {.time = t + history->origin,
                                  .radius = history->radius + shell->x,
                                  .mass = s.mass,
                                  .momentum = s.moment,
                                  .speed = s.moment / s.mass,
                                  .first = shell->oldest.tau + history->origin,
                                  .last = shell->youngest.tau + history->origin};
  state.column = s.mass / (4.0 * LXG_PI * state.radius * state.radius);
  state.wind_speed =
      shell->youngest.crossing ? lxg_shell_speed(shell->youngest.segment, shell->youngest.tau) : 0.0;
  state.power_behind = power(t, &shell->youngest, state.speed);
  state.power_ahead = power(t, &shell->oldest, state.speed);
  state.dissipated = s.energy - 0.5 * s.mass * state.speed * state.speed;
  return state;
}

static struct pool *make_room(const struct lxg_shell_history *history, struct lxg_error *error) {
  struct pool *const pool = lxg_alloc(history->count * CELL_MOST, sizeof *pool);
  if (pool == NULL) {
    lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for the shells of %zu intervals",
                  history->count);
  }
  return pool;
}

enum lxg_status lxg_shell_at(const struct lxg_shell_history *history, double t,
                             struct lxg_shell_state state[], size_t capacity, size_t *count,
                             struct lxg_error *error) {
  *count = 0;
  if (!isfinite(t)) {
    return lxg_error_set(error, LXG_INPUT, "shell-time", "epoch = %.10g s: finite", t);
  }
  struct pool *const pool = make_room(history, error);
  if (pool == NULL) {
    return LXG_MEMORY;
  }
  const double inner = t - history->origin;
  const size_t pools = pool_gas(history, inner, pool);
  for (size_t k = 0; k < pools; k++) {
    if (pool[k].cells > 1) {
      if (*count < capacity) {
        const struct exact_shell shell = refine(history, inner, pool, k, pools);
        state[*count] = describe(history, inner, &shell);
      }
      ++*count;
    }
  }
  lxg_free(pool);
  return LXG_OK;
}

enum lxg_status lxg_shell_track(const struct lxg_shell_history *history, size_t count, const double time[],
                                struct lxg_shell_state state[], bool exists[], struct lxg_error *error) {
  struct pool *const pool = make_room(history, error);
  if (pool == NULL) {
    return LXG_MEMORY;
  }
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    state[i] = (struct lxg_shell_state){.time = time[i]};
    exists[i] = false;
    if (!isfinite(time[i])) {
      status = lxg_error_set(error, LXG_INPUT, "shell-time", "epoch %zu = %.10g s: finite", i + 1, time[i]);
      break;
    }
    const double inner = time[i] - history->origin;
    const size_t pools = pool_gas(history, inner, pool);
    size_t largest = pools;
    for (size_t k = 0; k < pools; k++) {
      if (pool[k].cells > 1 && (largest == pools || pool[k].mass > pool[largest].mass)) {
        largest = k;
      }
    }
    if (largest < pools) {
      const struct exact_shell shell = refine(history, inner, pool, largest, pools);
      state[i] = describe(history, inner, &shell);
      exists[i] = true;
    }
  }
  lxg_free(pool);
  return status;
}
