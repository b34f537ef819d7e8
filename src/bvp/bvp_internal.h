/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bvp_internal.h - storage shared by the files of the collocation solver.
 *
 * Layout of one interval i (h = x[i+1] - x[i]): y[i] node value, k[i][j][a] = dy_a/dx at stage j. Condensed form:
 * k correction = g0 + gy dy_i + gp dp. One elimination step a node holds `rows` rows of width n + n + m: the first n
 * columns belong to y_i, the next n to y_(i+1), then p.
 */
#ifndef LUXGALE_BVP_INTERNAL_H
#define LUXGALE_BVP_INTERNAL_H

#include "luxgale/bvp.h"

#include <stdbool.h>

enum {
  BVP_STAGE_ROWS = LXG_BVP_MAX_UNKNOWNS * LXG_BVP_MAX_STAGES,
  BVP_ROWS = 2 * LXG_BVP_MAX_UNKNOWNS + LXG_BVP_MAX_PARAMETERS + 2 * LXG_BVP_MAX_CONDITIONS,
  BVP_WIDTH = 2 * LXG_BVP_MAX_UNKNOWNS + LXG_BVP_MAX_PARAMETERS,
  BVP_FINAL = LXG_BVP_MAX_UNKNOWNS + LXG_BVP_MAX_PARAMETERS
};

/* Gauss-Legendre collocation on [0, 1]. */
struct bvp_tableau {
  size_t stages;
  double c[LXG_BVP_MAX_STAGES];                     /* nodes */
  double a[LXG_BVP_MAX_STAGES][LXG_BVP_MAX_STAGES]; /* integrals 0..c_j of the Lagrange polynomials */
  double b[LXG_BVP_MAX_STAGES];                     /* weights */
};

/* Off-node sampling places of the residual and the interpolation rows there. */
struct bvp_samples {
  size_t count;
  double theta[LXG_BVP_MAX_STAGES + 1];
  double a[LXG_BVP_MAX_STAGES + 1][LXG_BVP_MAX_STAGES]; /* y weights */
  double l[LXG_BVP_MAX_STAGES + 1][LXG_BVP_MAX_STAGES]; /* dy/dx weights */
};

struct bvp_interval {
  double *lu; /* [ns*ns] factorised stage matrix */
  int *pivot; /* [ns] */
  double *g0; /* [ns] */
  double *gy; /* [ns*n] */
  double *gp; /* [ns*m] */
  double *qy; /* [integrals*n] condensed integral rows */
  double *qp; /* [integrals*m] */
  double *q0; /* [integrals*ns] derivative of the integral against the stage derivatives */
};

struct bvp_step {
  size_t rows; /* rows present at this step (borders last) */
  size_t borders;
  double *matrix; /* [BVP_ROWS*(2n+m)] eliminated in place, multipliers below the pivots */
  int *swap;      /* [n] row exchanged with pivot j */
};

struct lxg_bvp {
  size_t n, m, capacity;
  size_t parameter_limit; /* m of a problem may be smaller */
  size_t pieces, intervals;
  struct bvp_tableau tableau;
  struct bvp_samples samples;
  double *x; /* [capacity+1] */
  double *y; /* [(capacity+1)*n] */
  double *k; /* [capacity*ns] */
  double p[LXG_BVP_MAX_PARAMETERS];
  /* trial copy and corrections */
  double *trial_y, *trial_k;
  double trial_p[LXG_BVP_MAX_PARAMETERS];
  double *dy, *dk, *bar_y, *bar_k;
  double dp[LXG_BVP_MAX_PARAMETERS], bar_p[LXG_BVP_MAX_PARAMETERS];
  /* remeshing */
  double *new_x, *new_y, *new_k, *density;
  /* linear algebra */
  struct bvp_interval *interval;
  struct bvp_step *step;
  double *pool; /* memory behind interval and step */
  int *pool_int;
  double *rhs; /* [(capacity+1)*BVP_ROWS] eliminated right-hand sides */
  double final_matrix[BVP_FINAL * BVP_FINAL];
  int final_pivot[BVP_FINAL];
};

/* Residual vector of a trial: everything the linear solve needs on its right-hand side. */
struct bvp_point {
  const double *y, *k, *p;
};

void lxg_bvp_tableau_init(struct bvp_tableau *tableau, struct bvp_samples *samples, size_t stages);
/* a[l] = integral of Lagrange polynomial l over [0, theta]; l[l] = its value at theta. */
void lxg_bvp_tableau_weights(const struct bvp_tableau *tableau, double theta, double a[], double l[]);

/* Evaluates and factorises the Jacobian at bvp->{y,k,p}; then bvp->{dy,dk,dp} is the Newton correction. */
enum lxg_status lxg_bvp_linear_newton(struct lxg_bvp *bvp, const struct lxg_bvp_problem *problem);
/* Correction at the trial point with the old factorisation; result in bvp->bar_*. */
enum lxg_status lxg_bvp_linear_simplified(struct lxg_bvp *bvp, const struct lxg_bvp_problem *problem);

/* Damped Newton on the present mesh. */
enum lxg_status lxg_bvp_newton(struct lxg_bvp *bvp, const struct lxg_bvp_problem *problem,
                               const struct lxg_bvp_options *options, struct lxg_bvp_statistics *statistics);

/* New mesh for the residual measured by interval: equidistributed, or (`again`, or few fail) the failing intervals split.
 * LXG_LIMIT if the capacity is too small. */
enum lxg_status lxg_bvp_mesh_adapt(struct lxg_bvp *bvp, const double residual[],
                                   const struct lxg_bvp_options *options, bool again);
/* Largest relative residual of each interval into residual[intervals]; returns the largest. */
double lxg_bvp_mesh_residual(const struct lxg_bvp *bvp, const struct lxg_bvp_problem *problem,
                             double residual[], double *worst_x);

#endif
