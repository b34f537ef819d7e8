/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * surface.c - bicubic Hermite surface with limited node slopes, precomputed cell by cell (see surface.h).
 *
 * Node slopes: derivative of the polynomial through five neighbours, then limited (Fritsch & Carlson 1980, SIAM J. Numer.
 * Anal. 17, 238: within [0, 3] times the smaller neighbouring secant, zero at a local extremum), so that no bump grows
 * between nodes. Cross derivatives: the same applied to the slopes, mean of both orders. Measured against withheld
 * nodes this beats the other schemes that do not overshoot (docs/opacity.md).
 */
#include "opacity/surface.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include <math.h>
#include <string.h>

/* ---- node slopes ---- */

/* Derivative at x[i] of the polynomial through the (up to) five nodes around it; f with a stride. */
static double polynomial_slope(const double *x, const double *f, size_t stride, size_t n, size_t i) {
  const size_t span = n < 5 ? n : 5;
  size_t first = i < 2 ? 0 : i - 2;
  first = first + span > n ? n - span : first;
  double sum = 0.0;
  for (size_t k = first; k < first + span; k++) {
    if (k == i) {
      continue;
    }
    double weight = 1.0 / (x[k] - x[i]);
    for (size_t j = first; j < first + span; j++) {
      if (j != k && j != i) {
        weight *= (x[i] - x[j]) / (x[k] - x[j]);
      }
    }
    sum += weight * (f[k * stride] - f[i * stride]);
  }
  return sum;
}

static void limited_slopes(const double *x, const double *f, size_t stride, size_t n, double *slope) {
  for (size_t i = 0; i < n; i++) {
    const size_t l = i == 0 ? 1 : i;
    const size_t r = i + 1 == n ? n - 2 : i; /* at an end both are the only interval there is */
    const double left = (f[l * stride] - f[(l - 1) * stride]) / (x[l] - x[l - 1]);
    const double right = (f[(r + 1) * stride] - f[r * stride]) / (x[r + 1] - x[r]);
    const double wanted = polynomial_slope(x, f, stride, n, i);
    const double most = 3.0 * fmin(fabs(left), fabs(right));
    const bool turns = left * right <= 0.0 || wanted * left <= 0.0;
    slope[i * stride] = turns ? 0.0 : copysign(fmin(fabs(wanted), most), left);
  }
}

/* Slopes of every node; each array [nt][nr]. `other` is scratch. */
static void node_slopes(const struct surface_nodes *nodes, double *by_t, double *by_r, double *by_tr,
                        double *other) {
  const size_t nt = nodes->nt, nr = nodes->nr;
  for (size_t j = 0; j < nr; j++) {
    limited_slopes(nodes->t, nodes->f + j, nr, nt, by_t + j);
  }
  for (size_t i = 0; i < nt; i++) {
    limited_slopes(nodes->r, nodes->f + i * nr, 1, nr, by_r + i * nr);
  }
  for (size_t j = 0; j < nr; j++) {
    limited_slopes(nodes->t, by_r + j, nr, nt, by_tr + j);
  }
  for (size_t i = 0; i < nt; i++) {
    limited_slopes(nodes->r, by_t + i * nr, 1, nr, other + i * nr);
  }
  for (size_t k = 0; k < nt * nr; k++) {
    by_tr[k] = 0.5 * (by_tr[k] + other[k]);
  }
}

/* On the outer frame of `clamp` the opacity has levelled off: no slope across it. */
static void level_frame(const struct surface_nodes *nodes, double *by_t, double *by_r, double *by_tr) {
  const size_t nt = nodes->nt, nr = nodes->nr;
  for (size_t i = 0; i < nt; i++) {
    for (size_t j = 0; j < nr; j++) {
      const bool rim_t = i == 0 || i + 1 == nt;
      const bool rim_r = j == 0 || j + 1 == nr;
      const size_t k = i * nr + j;
      by_t[k] = rim_t ? 0.0 : by_t[k];
      by_r[k] = rim_r ? 0.0 : by_r[k];
      by_tr[k] = rim_t || rim_r ? 0.0 : by_tr[k];
    }
  }
}

/* ---- cells ---- */

/* Hermite data of the four corners to powers of x and y; `corner[p][q]` has value, x, y and xy derivative. */
static void cell_coefficients(double corner[2][2][4], struct surface_cell *cell) {
  static const double hermite[4][4] = {{1, 0, 0, 0}, {0, 0, 1, 0}, {-3, 3, -2, -1}, {2, -2, 1, 1}};
  double data[4][4]; /* rows f(0), f(1), f_x(0), f_x(1); columns the same along y */
  for (size_t p = 0; p < 2; p++) {
    for (size_t q = 0; q < 2; q++) {
      data[p][q] = corner[p][q][0];
      data[p + 2][q] = corner[p][q][1];
      data[p][q + 2] = corner[p][q][2];
      data[p + 2][q + 2] = corner[p][q][3];
    }
  }
  for (size_t i = 0; i < 4; i++) {
    for (size_t j = 0; j < 4; j++) {
      double sum = 0.0;
      for (size_t a = 0; a < 4; a++) {
        for (size_t b = 0; b < 4; b++) {
          sum += hermite[i][a] * data[a][b] * hermite[j][b];
        }
      }
      cell->c[4 * i + j] = sum * LXG_LN10;
    }
  }
}

static enum surface_kind kind_of(const double *known, size_t nr, enum lxg_opacity_outside outside) {
  const double corner[4] = {known[0], known[1], known[nr], known[nr + 1]};
  const double least = fmin(fmin(corner[0], corner[1]), fmin(corner[2], corner[3]));
  const double most = fmax(fmax(corner[0], corner[1]), fmax(corner[2], corner[3]));
  if (least == 1.0) {
    return SURFACE_WHOLE;
  }
  if (outside == LXG_OPACITY_REFUSE) {
    return SURFACE_OUTSIDE;
  }
  if (outside == LXG_OPACITY_CLAMP || least > 0.0) {
    return SURFACE_JOIN;
  }
  return most > 0.0 ? SURFACE_MIXED : SURFACE_OUTSIDE;
}

static void fill_cells(struct opacity_surface *surface, const struct surface_nodes *nodes, const double *by_t,
                       const double *by_r, const double *by_tr) {
  const size_t nr = nodes->nr;
  for (size_t i = 0; i + 1 < nodes->nt; i++) {
    const double ht = nodes->t[i + 1] - nodes->t[i];
    for (size_t j = 0; j + 1 < nr; j++) {
      const double hr = nodes->r[j + 1] - nodes->r[j];
      double corner[2][2][4];
      for (size_t p = 0; p < 2; p++) {
        for (size_t q = 0; q < 2; q++) {
          const size_t k = (i + p) * nr + j + q;
          corner[p][q][0] = nodes->f[k];
          corner[p][q][1] = ht * by_t[k];
          corner[p][q][2] = hr * by_r[k];
          corner[p][q][3] = ht * hr * by_tr[k];
        }
      }
      const size_t at = i * (nr - 1) + j;
      cell_coefficients(corner, &surface->cell[at]);
      surface->kind[at] = (unsigned char)kind_of(&nodes->known[i * nr + j], nr, surface->outside);
    }
  }
}

/* ---- building ---- */

static bool axis_init(struct surface_axis *axis, const double *node, size_t count) {
  double finest = INFINITY;
  for (size_t i = 0; i + 1 < count; i++) {
    finest = fmin(finest, node[i + 1] - node[i]);
  }
  const double span = node[count - 1] - node[0];
  const double wanted = fmin(span / finest, 60000.0); /* a coarser search is slower, never wrong */
  axis->nodes = count;
  axis->bins = (size_t)wanted + 2;
  axis->first = node[0];
  axis->per_bin = wanted / span;
  axis->node = lxg_alloc(count, sizeof *axis->node);
  axis->inverse = lxg_alloc(count, sizeof *axis->inverse);
  axis->bin = lxg_alloc(axis->bins, sizeof *axis->bin);
  if (axis->node == NULL || axis->inverse == NULL || axis->bin == NULL) {
    return false;
  }
  for (size_t i = 0; i < count; i++) {
    axis->node[i] = node[i];
    axis->inverse[i] = i + 1 < count ? 1.0 / (node[i + 1] - node[i]) : 0.0;
  }
  size_t interval = 0;
  for (size_t b = 0; b < axis->bins; b++) {
    const double start = axis->first + (double)b / axis->per_bin;
    while (interval + 2 < count && node[interval + 1] <= start) {
      interval++;
    }
    axis->bin[b] =
        (unsigned short)(interval > 0 ? interval - 1 : 0); /* one lower: rounding never overshoots */
  }
  return true;
}

static void axis_free(struct surface_axis *axis) {
  lxg_free(axis->node);
  lxg_free(axis->inverse);
  lxg_free(axis->bin);
}

enum lxg_status lxg_opacity_surface_init(struct opacity_surface *surface, const struct lxg_opacity_grid *grid,
                                         enum lxg_opacity_outside outside, double width,
                                         const struct lxg_opacity *formula, struct lxg_error *error) {
  *surface = (struct opacity_surface){.outside = outside};
  struct surface_nodes nodes;
  enum lxg_status status = lxg_opacity_surface_fill(&nodes, grid, outside, width, formula, error);
  const size_t count = nodes.nt * nodes.nr;
  double *slopes = NULL;
  if (status == LXG_OK) {
    slopes = lxg_alloc(4 * count, sizeof *slopes);
    surface->cell = lxg_alloc((nodes.nt - 1) * (nodes.nr - 1), sizeof *surface->cell);
    surface->kind = lxg_alloc((nodes.nt - 1) * (nodes.nr - 1), sizeof *surface->kind);
    surface->known = lxg_alloc(count, sizeof *surface->known);
    if (slopes == NULL || surface->cell == NULL || surface->kind == NULL || surface->known == NULL ||
        !axis_init(&surface->t, nodes.t, nodes.nt) || !axis_init(&surface->r, nodes.r, nodes.nr)) {
      status = lxg_error_set(error, LXG_MEMORY, "memory", "opacity table: out of memory");
    }
  }
  if (status == LXG_OK) {
    node_slopes(&nodes, slopes, slopes + count, slopes + 2 * count, slopes + 3 * count);
    if (outside == LXG_OPACITY_CLAMP) {
      level_frame(&nodes, slopes, slopes + count, slopes + 2 * count);
    }
    memcpy(surface->known, nodes.known, count * sizeof *surface->known);
    fill_cells(surface, &nodes, slopes, slopes + count, slopes + 2 * count);
  } else {
    lxg_opacity_surface_free(surface);
  }
  lxg_free(slopes);
  lxg_opacity_surface_nodes_free(&nodes);
  return status;
}

void lxg_opacity_surface_free(struct opacity_surface *surface) {
  axis_free(&surface->t);
  axis_free(&surface->r);
  lxg_free(surface->cell);
  lxg_free(surface->kind);
  lxg_free(surface->known);
  *surface = (struct opacity_surface){0};
}

/* ---- one point ---- */

static const double edge_slack = 1e-9; /* dex: a point that rounding moved off an edge still lies on it */

/* Interval of the axis; `x` lies on the axis. */
static inline size_t interval_of(const struct surface_axis *axis, double x) {
  size_t i = axis->bin[(size_t)((x - axis->first) * axis->per_bin)];
  while (i + 2 < axis->nodes && axis->node[i + 1] <= x) {
    i++;
  }
  return i;
}

/* Powers to value and slopes by nested multiplication. */
static inline void cell_at(const struct surface_cell *cell, double x, double y, struct surface_value *value) {
  double p[4], q[4];
  for (size_t i = 0; i < 4; i++) {
    const double *c = &cell->c[4 * i];
    p[i] = c[0] + y * (c[1] + y * (c[2] + y * c[3]));
    q[i] = c[1] + y * (2.0 * c[2] + y * 3.0 * c[3]);
  }
  value->ln_kappa = p[0] + x * (p[1] + x * (p[2] + x * p[3]));
  value->by_t = p[1] + x * (2.0 * p[2] + x * 3.0 * p[3]);
  value->by_r = q[0] + x * (q[1] + x * (q[2] + x * q[3]));
}

/* Blend of four corners with zero slope at each: 3 x^2 - 2 x^3 along both sides. */
static double corner_blend(const double corner[4], double x, double y, double *by_x, double *by_y) {
  const double sx = x * x * (3.0 - 2.0 * x), sy = y * y * (3.0 - 2.0 * y);
  const double low = corner[0] + sy * (corner[1] - corner[0]);
  const double high = corner[2] + sy * (corner[3] - corner[2]);
  *by_x = 6.0 * x * (1.0 - x) * (high - low);
  *by_y = 6.0 * y * (1.0 - y) * ((1.0 - sx) * (corner[1] - corner[0]) + sx * (corner[3] - corner[2]));
  return low + sx * (high - low);
}

static void blend_at(const struct opacity_surface *surface, size_t i, size_t j, enum surface_kind kind,
                     double x, double y, struct surface_value *value) {
  const double *known = &surface->known[i * surface->r.nodes + j];
  const double share[4] = {known[0], known[1], known[surface->r.nodes], known[surface->r.nodes + 1]};
  double unused_x, unused_y;
  value->table = corner_blend(share, x, y, &unused_x, &unused_y);
  if (kind == SURFACE_MIXED) {
    const double present[4] = {share[0] > 0.0, share[1] > 0.0, share[2] > 0.0, share[3] > 0.0};
    double by_x, by_y;
    value->weight = corner_blend(present, x, y, &by_x, &by_y);
    value->weight_by_t = by_x * surface->t.inverse[i];
    value->weight_by_r = by_y * surface->r.inverse[j];
  }
}

bool lxg_opacity_surface_at(const struct opacity_surface *surface, double log_t, double log_r,
                            struct surface_value *value) {
  const double least_t = surface->t.node[0], most_t = surface->t.node[surface->t.nodes - 1];
  const double least_r = surface->r.node[0], most_r = surface->r.node[surface->r.nodes - 1];
  const bool beyond_t = log_t < least_t - edge_slack || log_t > most_t + edge_slack;
  const bool beyond_r = log_r < least_r - edge_slack || log_r > most_r + edge_slack;
  const bool beyond = beyond_t || beyond_r;
  if (beyond && surface->outside != LXG_OPACITY_CLAMP) {
    value->weight = value->table = 0.0;
    return surface->outside == LXG_OPACITY_JOIN;
  }
  const double u = fmin(fmax(log_t, least_t), most_t);
  const double l = fmin(fmax(log_r, least_r), most_r);
  const size_t i = interval_of(&surface->t, u);
  const size_t j = interval_of(&surface->r, l);
  const size_t at = i * (surface->r.nodes - 1) + j;
  const enum surface_kind kind = (enum surface_kind)surface->kind[at];
  if (kind == SURFACE_OUTSIDE) {
    value->weight = value->table = 0.0;
    return surface->outside != LXG_OPACITY_REFUSE;
  }
  const double x = (u - surface->t.node[i]) * surface->t.inverse[i];
  const double y = (l - surface->r.node[j]) * surface->r.inverse[j];
  cell_at(&surface->cell[at], x, y, value);
  value->by_t = beyond_t ? 0.0 : value->by_t * surface->t.inverse[i];
  value->by_r = beyond_r ? 0.0 : value->by_r * surface->r.inverse[j];
  value->weight = 1.0;
  value->table = beyond ? 0.0 : 1.0;
  if (kind != SURFACE_WHOLE && !beyond) {
    blend_at(surface, i, j, kind, x, y, value);
  }
  return true;
}
