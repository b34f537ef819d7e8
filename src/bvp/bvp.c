/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bvp.c - workspace of the collocation solver, the solve loop (Newton, measure, remesh), and access to the solution.
 */
#include "luxgale/bvp.h"

#include "bvp/bvp_internal.h"
#include "luxgale/memory.h"

#include <math.h>
#include <string.h>

/* Doubles that one interval and the elimination step at its left node need. */
static size_t interval_doubles(size_t n, size_t m, size_t ns) {
  const size_t q = LXG_BVP_MAX_INTEGRALS;
  return ns * ns + ns + ns * n + ns * m + q * n + q * m + q * ns + BVP_ROWS * (2 * n + m);
}

static void interval_bind(struct lxg_bvp *b, size_t i, double *at, int *whole) {
  const size_t n = b->n, m = b->m, ns = n * b->tableau.stages, q = LXG_BVP_MAX_INTEGRALS;
  struct bvp_interval *interval = &b->interval[i];
  interval->lu = at;
  interval->g0 = interval->lu + ns * ns;
  interval->gy = interval->g0 + ns;
  interval->gp = interval->gy + ns * n;
  interval->qy = interval->gp + ns * m;
  interval->qp = interval->qy + q * n;
  interval->q0 = interval->qp + q * m;
  b->step[i].matrix = interval->q0 + q * ns;
  interval->pivot = whole;
  b->step[i].swap = whole + ns;
}

struct lxg_bvp *lxg_bvp_create(size_t unknowns, size_t parameters, size_t stages, size_t capacity) {
  if (unknowns == 0 || unknowns > LXG_BVP_MAX_UNKNOWNS || parameters > LXG_BVP_MAX_PARAMETERS ||
      stages == 0 || stages > LXG_BVP_MAX_STAGES || capacity == 0) {
    return NULL;
  }
  struct lxg_bvp *b = lxg_alloc(1, sizeof *b);
  if (b == NULL) {
    return NULL;
  }
  b->n = unknowns;
  b->m = parameters;
  b->parameter_limit = parameters;
  b->capacity = capacity;
  lxg_bvp_tableau_init(&b->tableau, &b->samples, stages);
  const size_t nodes = capacity + 1, ns = unknowns * stages;
  struct {
    double **to;
    size_t count;
  } arrays[] = {{&b->x, nodes},
                {&b->y, nodes * unknowns},
                {&b->k, capacity * ns},
                {&b->trial_y, nodes * unknowns},
                {&b->trial_k, capacity * ns},
                {&b->dy, nodes * unknowns},
                {&b->dk, capacity * ns},
                {&b->bar_y, nodes * unknowns},
                {&b->bar_k, capacity * ns},
                {&b->new_x, nodes},
                {&b->new_y, nodes * unknowns},
                {&b->new_k, capacity * ns},
                {&b->density, 2 * nodes},
                {&b->rhs, nodes * BVP_ROWS},
                {&b->pool, capacity * interval_doubles(unknowns, parameters, ns)}};
  for (size_t i = 0; i < sizeof arrays / sizeof arrays[0]; i++) {
    *arrays[i].to = lxg_alloc(arrays[i].count, sizeof(double));
    if (*arrays[i].to == NULL) {
      lxg_bvp_destroy(b);
      return NULL;
    }
  }
  b->pool_int = lxg_alloc(capacity * (ns + unknowns), sizeof(int));
  b->interval = lxg_alloc(capacity, sizeof *b->interval);
  b->step = lxg_alloc(capacity, sizeof *b->step);
  if (b->pool_int == NULL || b->interval == NULL || b->step == NULL) {
    lxg_bvp_destroy(b);
    return NULL;
  }
  for (size_t i = 0; i < capacity; i++) {
    interval_bind(b, i, b->pool + i * interval_doubles(unknowns, parameters, ns),
                  b->pool_int + i * (ns + unknowns));
  }
  return b;
}

void lxg_bvp_destroy(struct lxg_bvp *b) {
  if (b == NULL) {
    return;
  }
  double *arrays[] = {b->x,     b->y,     b->k,     b->trial_y, b->trial_k, b->dy,  b->dk,  b->bar_y,
                      b->bar_k, b->new_x, b->new_y, b->new_k,   b->density, b->rhs, b->pool};
  for (size_t i = 0; i < sizeof arrays / sizeof arrays[0]; i++) {
    lxg_free(arrays[i]);
  }
  lxg_free(b->pool_int);
  lxg_free(b->interval);
  lxg_free(b->step);
  lxg_free(b);
}

enum lxg_status lxg_bvp_copy(struct lxg_bvp *to, const struct lxg_bvp *from) {
  if (to->n != from->n || to->parameter_limit != from->parameter_limit ||
      to->tableau.stages != from->tableau.stages || to->capacity < from->intervals) {
    return LXG_BUG;
  }
  to->pieces = from->pieces;
  to->intervals = from->intervals;
  memcpy(to->x, from->x, (from->intervals + 1) * sizeof(double));
  memcpy(to->y, from->y, (from->intervals + 1) * from->n * sizeof(double));
  memcpy(to->k, from->k, from->intervals * from->n * from->tableau.stages * sizeof(double));
  memcpy(to->p, from->p, sizeof to->p);
  return LXG_OK;
}

enum lxg_status lxg_bvp_guess(struct lxg_bvp *b, const double nodes[], size_t intervals, size_t pieces,
                              void (*guess)(const void *context, double x, double y[], double k[]),
                              const void *context, const double p[]) {
  if (intervals > b->capacity || pieces == 0 || pieces > LXG_BVP_MAX_PIECES) {
    return LXG_LIMIT;
  }
  const size_t n = b->n, stages = b->tableau.stages;
  b->pieces = pieces;
  b->intervals = intervals;
  memcpy(b->x, nodes, (intervals + 1) * sizeof(double));
  if (b->m > 0) {
    memcpy(b->p, p, b->m * sizeof(double));
  }
  double unused[LXG_BVP_MAX_UNKNOWNS];
  for (size_t i = 0; i <= intervals; i++) {
    guess(context, nodes[i], b->y + i * n, unused);
  }
  for (size_t i = 0; i < intervals; i++) {
    for (size_t j = 0; j < stages; j++) {
      guess(context, nodes[i] + (nodes[i + 1] - nodes[i]) * b->tableau.c[j], unused,
            b->k + (i * stages + j) * n);
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_bvp_solve(struct lxg_bvp *b, const struct lxg_bvp_problem *problem,
                              const struct lxg_bvp_options *options, struct lxg_bvp_statistics *statistics) {
  *statistics = (struct lxg_bvp_statistics){.residual = NAN};
  if (problem->unknowns != b->n || problem->parameters > b->parameter_limit || problem->pieces != b->pieces) {
    return LXG_BUG;
  }
  b->m = problem->parameters;
  for (;;) {
    enum lxg_status status = lxg_bvp_newton(b, problem, options, statistics);
    statistics->meshes++;
    if (status != LXG_OK) {
      return status;
    }
    double *residual = b->density + b->capacity + 1;
    statistics->residual = lxg_bvp_mesh_residual(b, problem, residual, NULL);
    if (options->residual_tolerance <= 0.0 || statistics->residual <= options->residual_tolerance) {
      return LXG_OK;
    }
    if (isnan(statistics->residual)) {
      return LXG_DOMAIN;
    }
    if (statistics->meshes >= options->mesh_limit) {
      return LXG_LIMIT;
    }
    status = lxg_bvp_mesh_adapt(b, residual, options, statistics->meshes > 1);
    if (status != LXG_OK) {
      return status;
    }
  }
}

double lxg_bvp_residual(const struct lxg_bvp *b, const struct lxg_bvp_problem *problem, double *worst_x) {
  return lxg_bvp_mesh_residual(b, problem, NULL, worst_x);
}

void lxg_bvp_at(const struct lxg_bvp *b, double x, double y[], double k[]) {
  const size_t n = b->n, stages = b->tableau.stages;
  size_t low = 0, high = b->intervals;
  while (high - low > 1) {
    const size_t middle = (low + high) / 2;
    if (b->x[middle] <= x) {
      low = middle;
    } else {
      high = middle;
    }
  }
  const double h = b->x[low + 1] - b->x[low];
  const double theta = fmin(fmax((x - b->x[low]) / h, 0.0), 1.0);
  double a[LXG_BVP_MAX_STAGES], l[LXG_BVP_MAX_STAGES];
  lxg_bvp_tableau_weights(&b->tableau, theta, a, l);
  for (size_t c = 0; c < n; c++) {
    double value = 0.0, slope = 0.0;
    for (size_t j = 0; j < stages; j++) {
      const double stage = b->k[(low * stages + j) * n + c];
      value += a[j] * stage;
      slope += l[j] * stage;
    }
    y[c] = b->y[low * n + c] + h * value;
    if (k != NULL) {
      k[c] = slope;
    }
  }
}

double *lxg_bvp_parameters(struct lxg_bvp *b) {
  return b->p;
}

const double *lxg_bvp_parameters_const(const struct lxg_bvp *b) {
  return b->p;
}

size_t lxg_bvp_intervals(const struct lxg_bvp *b) {
  return b->intervals;
}

const double *lxg_bvp_nodes(const struct lxg_bvp *b) {
  return b->x;
}

const double *lxg_bvp_node_values(const struct lxg_bvp *b) {
  return b->y;
}

size_t lxg_bvp_stages(const struct lxg_bvp *b) {
  return b->tableau.stages;
}

void lxg_bvp_visit(const struct lxg_bvp *b,
                   void (*visit)(void *context, size_t piece, double x, double weight, const double y[]),
                   void *context) {
  const size_t n = b->n, stages = b->tableau.stages;
  size_t piece = (size_t)b->x[0];
  for (size_t i = 0; i < b->intervals; i++) {
    const double h = b->x[i + 1] - b->x[i];
    for (size_t j = 0; j < stages; j++) {
      double y[LXG_BVP_MAX_UNKNOWNS];
      for (size_t a = 0; a < n; a++) {
        double sum = 0.0;
        for (size_t l = 0; l < stages; l++) {
          sum += b->tableau.a[j][l] * b->k[(i * stages + l) * n + a];
        }
        y[a] = b->y[i * n + a] + h * sum;
      }
      visit(context, piece, b->x[i] + h * b->tableau.c[j], h * b->tableau.b[j], y);
    }
    if (b->x[i + 1] >= (double)(piece + 1)) {
      piece++;
    }
  }
}
