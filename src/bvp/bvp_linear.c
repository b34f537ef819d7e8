/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bvp_linear.c - one Newton correction: condense the stages of each interval, eliminate node after node, substitute back.
 *
 * Interval i, stage j:  Y_j = y_i + h sum_l a_jl k_l,  F(Y_j, k_j, p) = 0.
 * Condensed:            dk = g0 + gy dy_i + gp dp.
 * Node rows:            dy_(i+1) - (1 + h b gy) dy_i - h b gp dp = h b (k + g0) - (y_(i+1) - y_i).
 * A sweep from the left eliminates y_i among the rows carried so far and the n new ones, with row pivoting; integral rows
 * are carried last and never serve as pivots before the end. What remains is a dense system for (y_N, p).
 * The factors stay stored, so that the simplified correction of the damping strategy costs only a replay.
 */
#include "bvp/bvp_internal.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

/* In-place LU with row pivoting of a[size*size]; false if a pivot vanishes or is not finite. */
static bool lu_factor(double a[], int pivot[], size_t size) {
  for (size_t j = 0; j < size; j++) {
    size_t best = j;
    for (size_t i = j + 1; i < size; i++) {
      if (fabs(a[i * size + j]) > fabs(a[best * size + j])) {
        best = i;
      }
    }
    pivot[j] = (int)best;
    if (!(fabs(a[best * size + j]) > 0.0) || !isfinite(a[best * size + j])) {
      return false;
    }
    for (size_t c = 0; best != j && c < size; c++) {
      const double swap = a[j * size + c];
      a[j * size + c] = a[best * size + c];
      a[best * size + c] = swap;
    }
    const double inverse = 1.0 / a[j * size + j];
    for (size_t i = j + 1; i < size; i++) {
      const double factor = a[i * size + j] * inverse;
      a[i * size + j] = factor;
      for (size_t c = j + 1; factor != 0.0 && c < size; c++) {
        a[i * size + c] -= factor * a[j * size + c];
      }
    }
  }
  return true;
}

/* Solves with the factors for `columns` right-hand sides stored row-major in b[size*columns]. */
static void lu_solve(const double a[], const int pivot[], size_t size, double b[], size_t columns) {
  for (size_t j = 0; j < size; j++) {
    const size_t best = (size_t)pivot[j];
    for (size_t c = 0; best != j && c < columns; c++) {
      const double swap = b[j * columns + c];
      b[j * columns + c] = b[best * columns + c];
      b[best * columns + c] = swap;
    }
  }
  for (size_t j = 1; j < size; j++) {
    for (size_t i = 0; i < j; i++) {
      const double factor = a[j * size + i];
      for (size_t c = 0; c < columns; c++) {
        b[j * columns + c] -= factor * b[i * columns + c];
      }
    }
  }
  for (size_t j = size; j-- > 0;) {
    for (size_t i = j + 1; i < size; i++) {
      const double factor = a[j * size + i];
      for (size_t c = 0; c < columns; c++) {
        b[j * columns + c] -= factor * b[i * columns + c];
      }
    }
    const double inverse = 1.0 / a[j * size + j];
    for (size_t c = 0; c < columns; c++) {
      b[j * columns + c] *= inverse;
    }
  }
}

/* The same for a single right-hand side. */
static void lu_solve_one(const double a[], const int pivot[], size_t size, double b[]) {
  for (size_t j = 0; j < size; j++) {
    const size_t best = (size_t)pivot[j];
    const double value = b[best];
    b[best] = b[j];
    b[j] = value;
  }
  for (size_t j = 1; j < size; j++) {
    double sum = b[j];
    for (size_t i = 0; i < j; i++) {
      sum -= a[j * size + i] * b[i];
    }
    b[j] = sum;
  }
  for (size_t j = size; j-- > 0;) {
    double sum = b[j];
    for (size_t i = j + 1; i < size; i++) {
      sum -= a[j * size + i] * b[i];
    }
    b[j] = sum / a[j * size + j];
  }
}

/* Stage values of one interval and the state of a sweep. */
struct sweep {
  struct lxg_bvp *bvp;
  const struct lxg_bvp_problem *problem;
  struct bvp_point at;
  bool factor;                       /* new Jacobian, or right-hand side only */
  size_t carried;                    /* ordinary rows carried into the next node */
  double carry[BVP_ROWS][BVP_FINAL]; /* their matrix part: y_i columns, then p */
  double carry_rhs[BVP_ROWS];
  double border[LXG_BVP_MAX_INTEGRALS][BVP_FINAL];
  double border_rhs[LXG_BVP_MAX_INTEGRALS];
};

static void stage_value(const struct sweep *s, size_t i, size_t j, double y[]) {
  const struct lxg_bvp *b = s->bvp;
  const size_t n = b->n, stages = b->tableau.stages;
  const double h = b->x[i + 1] - b->x[i];
  const double *k = s->at.k + i * n * stages;
  for (size_t a = 0; a < n; a++) {
    double sum = 0.0;
    for (size_t l = 0; l < stages; l++) {
      sum += b->tableau.a[j][l] * k[l * n + a];
    }
    y[a] = s->at.y[i * n + a] + h * sum;
  }
}

/* Stage rows of the interval: fills the stage matrix and the right-hand sides [g0 | gy | gp] in `columns`. */
static enum lxg_status stage_rows(struct sweep *s, size_t piece, size_t i, double matrix[], double right[],
                                  size_t columns) {
  const struct lxg_bvp *b = s->bvp;
  const size_t n = b->n, m = b->m, stages = b->tableau.stages, ns = n * stages;
  const double h = b->x[i + 1] - b->x[i];
  for (size_t j = 0; j < stages; j++) {
    double y[LXG_BVP_MAX_UNKNOWNS];
    stage_value(s, i, j, y);
    double f[LXG_BVP_MAX_UNKNOWNS] = {0};
    double fy[LXG_BVP_MAX_UNKNOWNS * LXG_BVP_MAX_UNKNOWNS] = {0};
    double fk[LXG_BVP_MAX_UNKNOWNS * LXG_BVP_MAX_UNKNOWNS] = {0};
    double fp[LXG_BVP_MAX_UNKNOWNS * LXG_BVP_MAX_PARAMETERS] = {0};
    struct lxg_bvp_rows rows = {.f = f};
    if (s->factor) {
      rows.fy = fy;
      rows.fk = fk;
      rows.fp = fp;
    }
    const enum lxg_status status =
        s->problem->equation(s->problem->context, piece, b->x[i] + h * b->tableau.c[j], y,
                             s->at.k + (i * stages + j) * n, s->at.p, &rows);
    if (status != LXG_OK) {
      return status;
    }
    for (size_t a = 0; a < n; a++) {
      double *out = right + (j * n + a) * columns;
      out[0] = -f[a];
      if (!s->factor) {
        continue;
      }
      for (size_t c = 0; c < n; c++) {
        out[1 + c] = -fy[a * n + c];
      }
      for (size_t c = 0; c < m; c++) {
        out[1 + n + c] = -fp[a * m + c];
      }
      double *row = matrix + (j * n + a) * ns;
      for (size_t l = 0; l < stages; l++) {
        const double weight = h * b->tableau.a[j][l];
        for (size_t c = 0; c < n; c++) {
          row[l * n + c] = weight * fy[a * n + c] + (l == j ? fk[a * n + c] : 0.0);
        }
      }
    }
  }
  return LXG_OK;
}

/* Condenses interval i: g0 always, gy, gp and the factors when the Jacobian is new. */
static enum lxg_status condense(struct sweep *s, size_t piece, size_t i) {
  struct lxg_bvp *b = s->bvp;
  struct bvp_interval *interval = &b->interval[i];
  const size_t n = b->n, m = b->m, ns = n * b->tableau.stages;
  const size_t columns = s->factor ? 1 + n + m : 1;
  double right[BVP_STAGE_ROWS * (1 + BVP_FINAL)];
  const enum lxg_status status = stage_rows(s, piece, i, interval->lu, right, columns);
  if (status != LXG_OK) {
    return status;
  }
  if (s->factor && !lu_factor(interval->lu, interval->pivot, ns)) {
    return LXG_SINGULAR;
  }
  if (columns == 1) {
    lu_solve_one(interval->lu, interval->pivot, ns, right);
  } else {
    lu_solve(interval->lu, interval->pivot, ns, right, columns);
  }
  for (size_t a = 0; a < ns; a++) {
    interval->g0[a] = right[a * columns];
    if (s->factor) {
      memcpy(interval->gy + a * n, right + a * columns + 1, n * sizeof(double));
      memcpy(interval->gp + a * m, right + a * columns + 1 + n, m * sizeof(double));
    }
  }
  return LXG_OK;
}

/* Adds the interval's share of the integral rows: value and, with a new Jacobian, its linear form in y_i and p. */
static enum lxg_status integrate(struct sweep *s, size_t piece, size_t i) {
  struct lxg_bvp *b = s->bvp;
  struct bvp_interval *interval = &b->interval[i];
  const size_t n = b->n, m = b->m, stages = b->tableau.stages, ns = n * stages, count = s->problem->integrals;
  const double h = b->x[i + 1] - b->x[i];
  if (s->factor) {
    memset(interval->q0, 0, count * ns * sizeof(double));
    memset(interval->qy, 0, count * n * sizeof(double));
    memset(interval->qp, 0, count * m * sizeof(double));
  }
  for (size_t j = 0; j < stages; j++) {
    double y[LXG_BVP_MAX_UNKNOWNS];
    stage_value(s, i, j, y);
    double q[LXG_BVP_MAX_INTEGRALS] = {0};
    double qy[LXG_BVP_MAX_INTEGRALS * LXG_BVP_MAX_UNKNOWNS] = {0};
    double qp[LXG_BVP_MAX_INTEGRALS * LXG_BVP_MAX_PARAMETERS] = {0};
    const enum lxg_status status = s->problem->integrand(
        s->problem->context, piece, b->x[i] + h * b->tableau.c[j], y, s->at.p, q, qy, qp);
    if (status != LXG_OK) {
      return status;
    }
    const double weight = h * b->tableau.b[j];
    for (size_t r = 0; r < count; r++) {
      s->border_rhs[r] -= weight * q[r];
      for (size_t c = 0; s->factor && c < n; c++) {
        interval->qy[r * n + c] += weight * qy[r * n + c];
        for (size_t l = 0; l < stages; l++) {
          interval->q0[r * ns + l * n + c] += weight * qy[r * n + c] * h * b->tableau.a[j][l];
        }
      }
      for (size_t c = 0; s->factor && c < m; c++) {
        interval->qp[r * m + c] += weight * qp[r * m + c];
      }
    }
  }
  for (size_t r = 0; r < count; r++) {
    for (size_t a = 0; a < ns; a++) {
      const double coefficient = interval->q0[r * ns + a];
      s->border_rhs[r] -= coefficient * interval->g0[a];
      for (size_t c = 0; s->factor && c < n; c++) {
        interval->qy[r * n + c] += coefficient * interval->gy[a * n + c];
      }
      for (size_t c = 0; s->factor && c < m; c++) {
        interval->qp[r * m + c] += coefficient * interval->gp[a * m + c];
      }
    }
    for (size_t c = 0; c < n; c++) {
      s->border[r][c] += interval->qy[r * n + c];
    }
    for (size_t c = 0; c < m; c++) {
      s->border[r][n + c] += interval->qp[r * m + c];
    }
  }
  return LXG_OK;
}

/* Conditions at a site become carried rows of its node. */
static enum lxg_status site_rows(struct sweep *s, size_t site, size_t node) {
  const struct lxg_bvp *b = s->bvp;
  const size_t n = b->n, m = b->m, count = s->problem->conditions[site];
  double f[LXG_BVP_MAX_CONDITIONS] = {0};
  double fy[LXG_BVP_MAX_CONDITIONS * LXG_BVP_MAX_UNKNOWNS] = {0};
  double fp[LXG_BVP_MAX_CONDITIONS * LXG_BVP_MAX_PARAMETERS] = {0};
  if (count == 0) {
    return LXG_OK;
  }
  const enum lxg_status status =
      s->problem->condition(s->problem->context, site, s->at.y + node * n, s->at.p, f, fy, fp);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t r = 0; r < count; r++, s->carried++) {
    s->carry_rhs[s->carried] = -f[r];
    memcpy(s->carry[s->carried], fy + r * n, n * sizeof(double));
    memcpy(s->carry[s->carried] + n, fp + r * m, m * sizeof(double));
  }
  return LXG_OK;
}

/* Rows of the elimination step at node i: carried, then the interval's n rows, then borders. */
static void step_load(struct sweep *s, size_t i, double rhs[]) {
  struct lxg_bvp *b = s->bvp;
  struct bvp_step *step = &b->step[i];
  const struct bvp_interval *interval = &b->interval[i];
  const size_t n = b->n, m = b->m, stages = b->tableau.stages, width = 2 * n + m,
               borders = s->problem->integrals;
  const double h = b->x[i + 1] - b->x[i];
  step->borders = borders;
  step->rows = s->carried + n + borders;
  if (s->factor) {
    memset(step->matrix, 0, step->rows * width * sizeof(double));
  }
  for (size_t r = 0; r < s->carried + borders; r++) {
    const bool ordinary = r < s->carried;
    const double *from = ordinary ? s->carry[r] : s->border[r - s->carried];
    const size_t row = ordinary ? r : r + n;
    rhs[row] = ordinary ? s->carry_rhs[r] : s->border_rhs[r - s->carried];
    if (s->factor) {
      memcpy(step->matrix + row * width, from, n * sizeof(double));
      memcpy(step->matrix + row * width + 2 * n, from + n, m * sizeof(double));
    }
  }
  const double *k = s->at.k + i * n * stages;
  for (size_t a = 0; a < n; a++) {
    double *row = step->matrix + (s->carried + a) * width;
    double sum = s->at.y[i * n + a] - s->at.y[(i + 1) * n + a];
    for (size_t j = 0; j < stages; j++) {
      const double weight = h * b->tableau.b[j];
      const size_t stage = j * n + a;
      sum += weight * (k[stage] + interval->g0[stage]);
      for (size_t c = 0; s->factor && c < n; c++) {
        row[c] -= weight * interval->gy[stage * n + c];
      }
      for (size_t c = 0; s->factor && c < m; c++) {
        row[2 * n + c] -= weight * interval->gp[stage * m + c];
      }
    }
    if (s->factor) {
      row[a] -= 1.0;
      row[n + a] += 1.0;
    }
    rhs[s->carried + a] = sum;
  }
}

/* Eliminates the first n columns; borders are reduced but never chosen as pivot. */
static enum lxg_status step_factor(struct bvp_step *step, size_t n, size_t width) {
  double *a = step->matrix;
  for (size_t j = 0; j < n; j++) {
    size_t best = j;
    for (size_t i = j + 1; i < step->rows - step->borders; i++) {
      if (fabs(a[i * width + j]) > fabs(a[best * width + j])) {
        best = i;
      }
    }
    step->swap[j] = (int)best;
    if (!(fabs(a[best * width + j]) > 0.0) || !isfinite(a[best * width + j])) {
      return LXG_SINGULAR;
    }
    for (size_t c = 0; best != j && c < width; c++) {
      const double swap = a[j * width + c];
      a[j * width + c] = a[best * width + c];
      a[best * width + c] = swap;
    }
    const double inverse = 1.0 / a[j * width + j];
    for (size_t i = j + 1; i < step->rows; i++) {
      const double factor = a[i * width + j] * inverse;
      a[i * width + j] = factor;
      for (size_t c = j + 1; factor != 0.0 && c < width; c++) {
        a[i * width + c] -= factor * a[j * width + c];
      }
    }
  }
  return LXG_OK;
}

/* The same operations on a right-hand side: all exchanges first, since the stored multipliers moved with their rows. */
static void step_replay(const struct bvp_step *step, size_t n, size_t width, double rhs[]) {
  for (size_t j = 0; j < n; j++) {
    const size_t best = (size_t)step->swap[j];
    const double value = rhs[best];
    rhs[best] = rhs[j];
    rhs[j] = value;
  }
  for (size_t j = 0; j < n; j++) {
    for (size_t i = j + 1; i < step->rows; i++) {
      rhs[i] -= step->matrix[i * width + j] * rhs[j];
    }
  }
}

/* Rows left over by step i become the carried rows and borders of node i+1. */
static void step_unload(struct sweep *s, size_t i, const double rhs[]) {
  const struct lxg_bvp *b = s->bvp;
  const struct bvp_step *step = &b->step[i];
  const size_t n = b->n, m = b->m, width = 2 * n + m;
  s->carried = step->rows - step->borders - n;
  for (size_t r = n; r < step->rows; r++) {
    const bool ordinary = r < step->rows - step->borders;
    const size_t to = ordinary ? r - n : r - n - s->carried;
    double *row = ordinary ? s->carry[to] : s->border[to];
    memcpy(row, step->matrix + r * width + n, (n + m) * sizeof(double));
    if (ordinary) {
      s->carry_rhs[to] = rhs[r];
    } else {
      s->border_rhs[to] = rhs[r];
    }
  }
}

/* Dense end of the sweep: carried rows and borders determine (y_N, p). */
static enum lxg_status finish(struct sweep *s, double last[]) {
  struct lxg_bvp *b = s->bvp;
  const size_t size = b->n + b->m, borders = s->problem->integrals;
  if (s->carried + borders != size) {
    return LXG_BUG; /* conditions, integrals and unknowns do not count up */
  }
  for (size_t r = 0; r < size; r++) {
    const bool ordinary = r < s->carried;
    last[r] = ordinary ? s->carry_rhs[r] : s->border_rhs[r - s->carried];
    if (s->factor) {
      memcpy(b->final_matrix + r * size, ordinary ? s->carry[r] : s->border[r - s->carried],
             size * sizeof(double));
    }
  }
  if (s->factor && !lu_factor(b->final_matrix, b->final_pivot, size)) {
    return LXG_SINGULAR;
  }
  lu_solve_one(b->final_matrix, b->final_pivot, size, last);
  return LXG_OK;
}

static void substitute_back(const struct sweep *s, const double last[], double dy[], double dk[],
                            double dp[]) {
  const struct lxg_bvp *b = s->bvp;
  const size_t n = b->n, m = b->m, ns = n * b->tableau.stages, width = 2 * n + m;
  memcpy(dy + b->intervals * n, last, n * sizeof(double));
  memcpy(dp, last + n, m * sizeof(double));
  for (size_t i = b->intervals; i-- > 0;) {
    const double *matrix = b->step[i].matrix;
    const double *rhs = b->rhs + i * BVP_ROWS;
    double *y = dy + i * n;
    for (size_t j = n; j-- > 0;) {
      double sum = rhs[j];
      for (size_t c = j + 1; c < n; c++) {
        sum -= matrix[j * width + c] * y[c];
      }
      for (size_t c = 0; c < n; c++) {
        sum -= matrix[j * width + n + c] * y[n + c];
      }
      for (size_t c = 0; c < m; c++) {
        sum -= matrix[j * width + 2 * n + c] * dp[c];
      }
      y[j] = sum / matrix[j * width + j];
    }
    const struct bvp_interval *interval = &b->interval[i];
    for (size_t a = 0; a < ns; a++) {
      double sum = interval->g0[a];
      for (size_t c = 0; c < n; c++) {
        sum += interval->gy[a * n + c] * y[c];
      }
      for (size_t c = 0; c < m; c++) {
        sum += interval->gp[a * m + c] * dp[c];
      }
      dk[i * ns + a] = sum;
    }
  }
}

static enum lxg_status correction(struct sweep *s, double dy[], double dk[], double dp[]) {
  struct lxg_bvp *b = s->bvp;
  const size_t n = b->n, width = 2 * n + b->m;
  size_t piece = (size_t)b->x[0];
  for (size_t r = 0; r < s->problem->integrals; r++) {
    memset(s->border[r], 0, sizeof s->border[r]);
    s->border_rhs[r] = 1.0;
  }
  enum lxg_status status = site_rows(s, piece, 0);
  for (size_t i = 0; status == LXG_OK && i < b->intervals; i++) {
    double *rhs = b->rhs + i * BVP_ROWS;
    status = condense(s, piece, i);
    if (status == LXG_OK && s->problem->integrals > 0) {
      status = integrate(s, piece, i);
    }
    if (status != LXG_OK) {
      break;
    }
    step_load(s, i, rhs);
    if (s->factor && step_factor(&b->step[i], n, width) != LXG_OK) {
      return LXG_SINGULAR;
    }
    step_replay(&b->step[i], n, width, rhs);
    step_unload(s, i, rhs);
    if (b->x[i + 1] >= (double)(piece + 1)) {
      piece++;
      status = site_rows(s, piece, i + 1);
    }
  }
  double last[BVP_FINAL];
  if (status == LXG_OK) {
    status = finish(s, last);
  }
  if (status == LXG_OK) {
    substitute_back(s, last, dy, dk, dp);
  }
  return status;
}

enum lxg_status lxg_bvp_linear_newton(struct lxg_bvp *bvp, const struct lxg_bvp_problem *problem) {
  struct sweep sweep = {.bvp = bvp, .problem = problem, .at = {bvp->y, bvp->k, bvp->p}, .factor = true};
  return correction(&sweep, bvp->dy, bvp->dk, bvp->dp);
}

enum lxg_status lxg_bvp_linear_simplified(struct lxg_bvp *bvp, const struct lxg_bvp_problem *problem) {
  struct sweep sweep = {
      .bvp = bvp, .problem = problem, .at = {bvp->trial_y, bvp->trial_k, bvp->trial_p}, .factor = false};
  return correction(&sweep, bvp->bar_y, bvp->bar_k, bvp->bar_p);
}
