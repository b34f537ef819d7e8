/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bvp_mesh.c - residual off the mesh, and the mesh that equidistributes it.
 *
 * Between its s collocation points the residual of an interval scales as h^s. With e_i the residual measured in interval i
 * and t the aim, the interval wants (e_i/t)^(1/s) parts; the piecewise constant density
 * of wanted parts is smoothed (neighbours differ by a bounded ratio) and integrated for the new nodes (Ascher, Mattheij &
 * Russell 1995, sect. 9.2). That law fails around a kink of the equations (a table's cell edge, say), where moving nodes about
 * would never end; so a second and later remeshing, or one where few intervals fail, only splits the failing intervals.
 */
#include "bvp/bvp_internal.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

static const double parts_least =
    0.45; /* an interval shrinks to this many parts at the least in one remeshing */
static const double parts_most = 6.0;      /* ... and at the most */
static const double split_most = 4.0;      /* parts of a failing interval in a splitting */
static const double few_share = 0.15;      /* failing intervals that count as few */
static const double waste_most = 2.0;      /* intervals over wanted parts that are tolerated */
static const double neighbour_ratio = 2.5; /* largest ratio of neighbouring densities */

static void sample(const struct lxg_bvp *b, size_t i, size_t j, double y[], double k[]) {
  const size_t n = b->n, stages = b->tableau.stages;
  const double h = b->x[i + 1] - b->x[i];
  const double *stage = b->k + i * n * stages;
  for (size_t a = 0; a < n; a++) {
    double value = 0.0, slope = 0.0;
    for (size_t l = 0; l < stages; l++) {
      value += b->samples.a[j][l] * stage[l * n + a];
      slope += b->samples.l[j][l] * stage[l * n + a];
    }
    y[a] = b->y[i * n + a] + h * value;
    k[a] = slope;
  }
}

double lxg_bvp_mesh_residual(const struct lxg_bvp *b, const struct lxg_bvp_problem *problem,
                             double residual[], double *worst_x) {
  double largest = 0.0;
  size_t piece = (size_t)b->x[0];
  for (size_t i = 0; i < b->intervals; i++) {
    double worst = 0.0;
    for (size_t j = 0; j < b->samples.count; j++) {
      double y[LXG_BVP_MAX_UNKNOWNS], k[LXG_BVP_MAX_UNKNOWNS];
      sample(b, i, j, y, k);
      double f[LXG_BVP_MAX_UNKNOWNS] = {0}, scale[LXG_BVP_MAX_UNKNOWNS] = {0};
      struct lxg_bvp_rows rows = {.f = f, .scale = scale};
      const double x = b->x[i] + (b->x[i + 1] - b->x[i]) * b->samples.theta[j];
      if (problem->equation(problem->context, piece, x, y, k, b->p, &rows) != LXG_OK) {
        return NAN;
      }
      for (size_t a = 0; a < b->n; a++) {
        worst = fmax(worst, fabs(f[a]) / scale[a]);
      }
    }
    if (residual != NULL) {
      residual[i] = worst;
    }
    if (worst_x != NULL && worst > largest) {
      *worst_x = b->x[i];
    }
    largest = fmax(largest, worst);
    if (b->x[i + 1] >= (double)(piece + 1)) {
      piece++;
    }
  }
  return largest;
}

/* Wanted parts per unit of x in each interval, smoothed within each piece. */
static void wanted_density(const struct lxg_bvp *b, const double residual[], double aim, double density[]) {
  const double power = 1.0 / (double)b->tableau.stages;
  for (size_t i = 0; i < b->intervals; i++) {
    const double parts = pow(residual[i] / aim + 1e-300, power);
    density[i] = fmin(fmax(parts, parts_least), parts_most) / (b->x[i + 1] - b->x[i]);
  }
  for (size_t i = 1; i < b->intervals; i++) {
    if (b->x[i] != floor(b->x[i])) {
      density[i] = fmax(density[i], density[i - 1] / neighbour_ratio);
    }
  }
  for (size_t i = b->intervals - 1; i-- > 0;) {
    if (b->x[i + 1] != floor(b->x[i + 1])) {
      density[i] = fmax(density[i], density[i + 1] / neighbour_ratio);
    }
  }
}

/* New nodes of one piece, intervals first..last-1 of the old mesh; false when the capacity is exhausted. */
static int piece_nodes(const struct lxg_bvp *b, const double density[], size_t first, size_t last,
                       double new_x[], size_t *count) {
  double total = 0.0;
  for (size_t i = first; i < last; i++) {
    total += density[i] * (b->x[i + 1] - b->x[i]);
  }
  const size_t parts = (size_t)fmax(ceil(total), 3.0);
  if (*count + parts > b->capacity) {
    return 0;
  }
  double below = 0.0; /* integral of the density up to node i */
  size_t i = first;
  for (size_t j = 1; j < parts; j++) {
    const double wanted = total * (double)j / (double)parts;
    while (i + 1 < last && below + density[i] * (b->x[i + 1] - b->x[i]) < wanted) {
      below += density[i] * (b->x[i + 1] - b->x[i]);
      i++;
    }
    new_x[*count + j] = b->x[i] + (wanted - below) / density[i];
  }
  new_x[*count + parts] = b->x[last];
  *count += parts;
  return 1;
}

/* Values and stage slopes of the old solution on the new mesh. */
static void transfer(struct lxg_bvp *b, size_t count) {
  const size_t n = b->n, stages = b->tableau.stages;
  for (size_t i = 0; i <= count; i++) {
    lxg_bvp_at(b, b->new_x[i], b->new_y + i * n, NULL);
  }
  for (size_t i = 0; i < count; i++) {
    const double h = b->new_x[i + 1] - b->new_x[i];
    for (size_t j = 0; j < stages; j++) {
      double unused[LXG_BVP_MAX_UNKNOWNS];
      lxg_bvp_at(b, b->new_x[i] + h * b->tableau.c[j], unused, b->new_k + (i * stages + j) * n);
    }
  }
  memcpy(b->x, b->new_x, (count + 1) * sizeof(double));
  memcpy(b->y, b->new_y, (count + 1) * n * sizeof(double));
  memcpy(b->k, b->new_k, count * n * stages * sizeof(double));
  b->intervals = count;
}

/* Splits the intervals whose residual is too large; the others stay. */
static enum lxg_status split(struct lxg_bvp *b, const double residual[], double tolerance, double aim) {
  const double power = 1.0 / (double)b->tableau.stages;
  size_t count = 0;
  b->new_x[0] = b->x[0];
  for (size_t i = 0; i < b->intervals; i++) {
    const double wanted = ceil(pow(residual[i] / aim + 1e-300, power));
    const size_t parts = residual[i] > tolerance ? (size_t)fmin(fmax(wanted, 2.0), split_most) : 1;
    if (count + parts > b->capacity) {
      return LXG_LIMIT;
    }
    for (size_t j = 1; j < parts; j++) {
      b->new_x[count + j] = b->x[i] + (b->x[i + 1] - b->x[i]) * (double)j / (double)parts;
    }
    count += parts;
    b->new_x[count] = b->x[i + 1];
  }
  transfer(b, count);
  return LXG_OK;
}

/* Few intervals fail, and the mesh is not much finer than it need be. */
static bool nearly_good(const struct lxg_bvp *b, const double residual[], double tolerance, double aim) {
  const double power = 1.0 / (double)b->tableau.stages;
  double wanted = 0.0;
  size_t failing = 0;
  for (size_t i = 0; i < b->intervals; i++) {
    wanted += fmax(pow(residual[i] / aim + 1e-300, power), 0.2);
    failing += residual[i] > tolerance;
  }
  return (double)failing <= few_share * (double)b->intervals && (double)b->intervals <= waste_most * wanted;
}

enum lxg_status lxg_bvp_mesh_adapt(struct lxg_bvp *b, const double residual[],
                                   const struct lxg_bvp_options *options, bool again) {
  const double tolerance = options->residual_tolerance;
  const double aim = options->residual_aim > 0.0 ? fmin(options->residual_aim, tolerance) : 0.3 * tolerance;
  if (again || nearly_good(b, residual, tolerance, aim)) {
    return split(b, residual, tolerance, aim);
  }
  wanted_density(b, residual, aim, b->density);
  size_t count = 0;
  size_t first = 0;
  b->new_x[0] = b->x[0];
  for (size_t piece = (size_t)b->x[0] + 1; piece <= b->pieces; piece++) {
    size_t last = first + 1;
    while (b->x[last] < (double)piece) {
      last++;
    }
    if (!piece_nodes(b, b->density, first, last, b->new_x, &count)) {
      return LXG_LIMIT;
    }
    first = last;
  }
  transfer(b, count);
  return LXG_OK;
}
