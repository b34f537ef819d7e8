/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * surface_fill.c - gives a table margins and fills its missing nodes, so that one surface serves every policy.
 *
 * join: a missing node at distance d (dex, the larger of the distances in log T and log R) from the nearest known node gets
 *   the formula plus that node's difference to the formula times 1 - 3 q^2 + 2 q^3, q = d/width; from d = width on the
 *   formula alone. Two margins, at width/2 and width, go round the rectangle.
 * clamp: a missing node takes the nearest known value of its row of log T, an empty row that of the nearest row; one margin at
 *   `width` holds the edge value plus half the step that the edge slope would make: the slope dies out over the width.
 * refuse: filled as for clamp so that slopes near holes are mild, no margin; cells with a missing corner are not read.
 */
#include "opacity/surface.h"

#include "luxgale/memory.h"

#include <math.h>

static enum lxg_status allocate(struct surface_nodes *nodes, struct lxg_error *error) {
  nodes->t = lxg_alloc(nodes->nt, sizeof *nodes->t);
  nodes->r = lxg_alloc(nodes->nr, sizeof *nodes->r);
  nodes->f = lxg_alloc(nodes->nt * nodes->nr, sizeof *nodes->f);
  nodes->known = lxg_alloc(nodes->nt * nodes->nr, sizeof *nodes->known);
  if (nodes->t == NULL || nodes->r == NULL || nodes->f == NULL || nodes->known == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "opacity table: out of memory");
  }
  return LXG_OK;
}

void lxg_opacity_surface_nodes_free(struct surface_nodes *nodes) {
  lxg_free(nodes->t);
  lxg_free(nodes->r);
  lxg_free(nodes->f);
  lxg_free(nodes->known);
  *nodes = (struct surface_nodes){0};
}

/* `margin` nodes on each side, the outermost `width` away from the edge. */
static void grow_axis(const double *from, size_t count, size_t margin, double width, double *to) {
  for (size_t i = 0; i < count; i++) {
    to[margin + i] = from[i];
  }
  for (size_t k = 1; k <= margin; k++) {
    const double away = width * (double)k / (double)margin;
    to[margin - k] = from[0] - away;
    to[margin + count - 1 + k] = from[count - 1] + away;
  }
}

/* log10 kappa of the formula; NaN beyond its domain, which margins of a valid grid do not reach. */
static double formula_at(const struct lxg_opacity *formula, double log_t, double log_r) {
  struct lxg_opacity_point point;
  return lxg_opacity_at_log(formula, log_t, log_r, &point) == LXG_OK ? point.log_kappa : NAN;
}

/* ---- join ---- */

struct nearest {
  double distance, offset;
};

/* The nearest known node within `width` and its difference to the formula. Ties keep the first: deterministic. */
static struct nearest find_nearest(const struct surface_nodes *nodes, const double *offset, size_t i,
                                   size_t j, double width) {
  struct nearest best = {INFINITY, 0.0};
  for (size_t a = 0; a < nodes->nt; a++) {
    const double dt = fabs(nodes->t[a] - nodes->t[i]);
    if (dt >= width) {
      continue;
    }
    for (size_t b = 0; b < nodes->nr; b++) {
      const double distance = fmax(dt, fabs(nodes->r[b] - nodes->r[j]));
      if (nodes->known[a * nodes->nr + b] == 1.0 && distance < best.distance && distance < width) {
        best = (struct nearest){distance, offset[a * nodes->nr + b]};
      }
    }
  }
  return best;
}

static enum lxg_status fill_join(struct surface_nodes *nodes, double width, const struct lxg_opacity *formula,
                                 struct lxg_error *error) {
  const size_t count = nodes->nt * nodes->nr;
  double *offset = lxg_alloc(2 * count, sizeof *offset);
  if (offset == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "opacity table: out of memory");
  }
  double *law = offset + count;
  for (size_t k = 0; k < count; k++) {
    law[k] = formula_at(formula, nodes->t[k / nodes->nr], nodes->r[k % nodes->nr]);
    offset[k] = nodes->known[k] == 1.0 ? nodes->f[k] - law[k] : 0.0;
  }
  for (size_t k = 0; k < count; k++) {
    if (nodes->known[k] == 1.0) {
      continue;
    }
    const struct nearest near = find_nearest(nodes, offset, k / nodes->nr, k % nodes->nr, width);
    const double q = fmin(near.distance / width, 1.0);
    const double share = q < 1.0 ? 1.0 - q * q * (3.0 - 2.0 * q) : 0.0;
    nodes->f[k] = law[k] + share * near.offset;
    nodes->known[k] = share < 1.0 ? share : 0.999; /* 1 is kept for nodes of the table itself */
  }
  lxg_free(offset);
  return LXG_OK;
}

/* ---- clamp and refuse ---- */

/* Nearest known value along one row; NaN if the row has none. */
static double nearest_in_row(const double *f, const double *known, const double *r, size_t count, size_t j) {
  double best = NAN;
  double least = INFINITY;
  for (size_t b = 0; b < count; b++) {
    if (known[b] == 1.0 && fabs(r[b] - r[j]) < least) {
      least = fabs(r[b] - r[j]);
      best = f[b];
    }
  }
  return best;
}

static void fill_holes(struct surface_nodes *nodes, size_t margin) {
  const size_t nr = nodes->nr;
  const size_t first = margin, last = nodes->nt - margin;
  for (size_t i = first; i < last; i++) {
    for (size_t j = margin; j < nr - margin; j++) {
      if (nodes->known[i * nr + j] != 1.0) {
        nodes->f[i * nr + j] = nearest_in_row(&nodes->f[i * nr], &nodes->known[i * nr], nodes->r, nr, j);
      }
    }
  }
  for (size_t pass = 0; pass < 2; pass++) { /* empty rows: from the row below, then from the row above */
    for (size_t k = first + 1; k < last; k++) {
      const size_t i = pass == 0 ? k : first + last - 1 - k;
      const size_t from = pass == 0 ? i - 1 : i + 1;
      for (size_t j = margin; j < nr - margin; j++) {
        if (isnan(nodes->f[i * nr + j])) {
          nodes->f[i * nr + j] = nodes->f[from * nr + j];
        }
      }
    }
  }
}

/* Value at the outer node of a margin: half the step of the edge's slope. `edge` and `inner` are its two last nodes. */
static double level_off(double edge, double inner, double step, double width) {
  return edge + 0.5 * width * (edge - inner) / step;
}

static void fill_margins(struct surface_nodes *nodes) {
  const size_t nt = nodes->nt, nr = nodes->nr;
  const double *t = nodes->t, *r = nodes->r;
  for (size_t i = 1; i + 1 < nt; i++) {
    double *row = &nodes->f[i * nr];
    row[0] = level_off(row[1], row[2], r[2] - r[1], r[1] - r[0]);
    row[nr - 1] = level_off(row[nr - 2], row[nr - 3], r[nr - 2] - r[nr - 3], r[nr - 1] - r[nr - 2]);
  }
  for (size_t j = 0; j < nr; j++) {
    double *f = &nodes->f[j];
    f[0] = level_off(f[nr], f[2 * nr], t[2] - t[1], t[1] - t[0]);
    f[(nt - 1) * nr] =
        level_off(f[(nt - 2) * nr], f[(nt - 3) * nr], t[nt - 2] - t[nt - 3], t[nt - 1] - t[nt - 2]);
  }
}

enum lxg_status lxg_opacity_surface_fill(struct surface_nodes *nodes, const struct lxg_opacity_grid *grid,
                                         enum lxg_opacity_outside outside, double width,
                                         const struct lxg_opacity *formula, struct lxg_error *error) {
  const size_t margin = outside == LXG_OPACITY_JOIN ? 2 : outside == LXG_OPACITY_CLAMP ? 1 : 0;
  *nodes = (struct surface_nodes){.nt = grid->temperatures + 2 * margin, .nr = grid->densities + 2 * margin};
  enum lxg_status status = allocate(nodes, error);
  if (status != LXG_OK) {
    return status;
  }
  grow_axis(grid->log_t, grid->temperatures, margin, width, nodes->t);
  grow_axis(grid->log_r, grid->densities, margin, width, nodes->r);
  for (size_t k = 0; k < nodes->nt * nodes->nr; k++) {
    nodes->f[k] = NAN;
  }
  for (size_t i = 0; i < grid->temperatures; i++) {
    for (size_t j = 0; j < grid->densities; j++) {
      const size_t k = (i + margin) * nodes->nr + j + margin;
      nodes->f[k] = grid->log_kappa[i * grid->densities + j];
      nodes->known[k] = isnan(nodes->f[k]) ? 0.0 : 1.0;
    }
  }
  if (outside == LXG_OPACITY_JOIN) {
    return fill_join(nodes, width, formula, error);
  }
  fill_holes(nodes, margin);
  if (outside == LXG_OPACITY_CLAMP) {
    fill_margins(nodes);
  }
  return LXG_OK;
}
