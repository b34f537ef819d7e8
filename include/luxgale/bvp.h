/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bvp.h - boundary-value problems on a chain of pieces, by Gauss collocation with adaptive mesh.
 *
 * The unknowns are n functions y(x) on x in [0, P] (P pieces of unit length, y continuous at the joints 1..P-1) and m
 * free parameters p. The equations are implicit, F(x, y, dy/dx, p) = 0, which lets a coefficient of dy/dx vanish at a
 * joint (a critical point). Conditions f(y, p) = 0 may stand at any site 0..P. An integral row fixes a parameter by
 * integral of q(x, y, p) dx = 1. The count must close: n + m = conditions + integrals.
 *
 * Method: s-stage Gauss collocation, order 2s at the mesh nodes (Ascher, Mattheij & Russell 1995, "Numerical Solution of
 * Boundary Value Problems for ODEs", ch. 5 and 7); stages are condensed interval by interval, the almost-block-diagonal
 * rest is eliminated in one sweep with row pivoting, integrals ride along as bordering rows. Newton's method is
 * globalised by the error-oriented damping of Deuflhard 2004, "Newton Methods for Nonlinear Problems", sect. 3.3.
 *
 * Knows no astrophysics. Nothing is allocated inside the Newton loop. Not thread-safe per workspace: one workspace a
 * thread.
 *
 * Call order: lxg_bvp_create -> lxg_bvp_guess -> lxg_bvp_solve -> lxg_bvp_at ... -> lxg_bvp_destroy.
 */
#ifndef LUXGALE_BVP_H
#define LUXGALE_BVP_H

#include "luxgale/status.h"

#include <stddef.h>

enum {
  LXG_BVP_MAX_UNKNOWNS = 3,
  LXG_BVP_MAX_PARAMETERS = 8,
  LXG_BVP_MAX_STAGES = 8,
  LXG_BVP_MAX_PIECES = 3,
  LXG_BVP_MAX_CONDITIONS = 8, /* at one site */
  LXG_BVP_MAX_INTEGRALS = 2
};

/* What one evaluation of the equations returns; matrices are row-major, derivatives may be NULL together. */
struct lxg_bvp_rows {
  double *f;  /* [n] residuals F */
  double *fy; /* [n*n] dF/dy */
  double *fk; /* [n*n] dF/d(dy/dx) */
  double *fp; /* [n*m] dF/dp */
  double
      *scale; /* [n] size of the largest term of each equation, for relative residuals; NULL if not wanted */
};

/* The problem: sizes and callbacks. A callback returns LXG_OK, LXG_DOMAIN (trial value outside the domain: the step
 * is shortened) or another status (the solve ends with it). Rows arrive zeroed. */
struct lxg_bvp_problem {
  size_t unknowns;                           /* n */
  size_t parameters;                         /* m */
  size_t pieces;                             /* P */
  size_t conditions[LXG_BVP_MAX_PIECES + 1]; /* at site 0..P */
  size_t integrals;                          /* integral rows */
  const void *context;                       /* handed to the callbacks */
  enum lxg_status (*equation)(const void *context, size_t piece, double x, const double y[], const double k[],
                              const double p[], struct lxg_bvp_rows *rows);
  /* f[conditions], fy[conditions*n], fp[conditions*m] */
  enum lxg_status (*condition)(const void *context, size_t site, const double y[], const double p[],
                               double f[], double fy[], double fp[]);
  /* q[integrals], qy[integrals*n], qp[integrals*m]; may be NULL without integrals */
  enum lxg_status (*integrand)(const void *context, size_t piece, double x, const double y[],
                               const double p[], double q[], double qy[], double qp[]);
};

/* Tolerances and limits of one solve. */
struct lxg_bvp_options {
  double newton_tolerance; /* largest correction of any unknown accepted as converged */
  double
      residual_tolerance; /* largest relative residual between the collocation points; <= 0: mesh is kept */
  double residual_aim;  /* what a new mesh aims at: below the tolerance, so that neighbours need no new one */
  int newton_limit;     /* Newton steps a mesh */
  int mesh_limit;       /* meshes */
  double damping_floor; /* smallest damping factor before giving up */
};

/* What a solve did. */
struct lxg_bvp_statistics {
  int newton_steps;  /* Jacobians factorised */
  int shortened;     /* trial steps rejected */
  int meshes;        /* meshes used */
  double correction; /* last Newton correction */
  double residual;   /* largest relative residual found off the mesh; NaN if not measured */
};

struct lxg_bvp; /* opaque: mesh, solution and workspace */

/* Workspace for up to `capacity` intervals; n and stages fixed, m at most `parameters`. NULL if out of memory or sizes beyond the limits. */
struct lxg_bvp *lxg_bvp_create(size_t unknowns, size_t parameters, size_t stages, size_t capacity);
void lxg_bvp_destroy(struct lxg_bvp *bvp);

/* Copies mesh, solution and parameters (capacities and sizes must agree: LXG_BUG otherwise). */
enum lxg_status lxg_bvp_copy(struct lxg_bvp *to, const struct lxg_bvp *from);

/* Sets the mesh (nodes[0..intervals], increasing from a whole number to `pieces`, containing every whole number between) and
 * a guess y(x), dy/dx from a callback. A chain that starts at 1, say, leaves the first piece and site 0 out. */
enum lxg_status lxg_bvp_guess(struct lxg_bvp *bvp, const double nodes[], size_t intervals, size_t pieces,
                              void (*guess)(const void *context, double x, double y[], double k[]),
                              const void *context, const double p[]);

/* Solves from the present contents. LXG_OK; LXG_NOT_CONVERGED, LXG_SINGULAR, LXG_DOMAIN (no step stays in the domain)
 * or LXG_LIMIT (mesh capacity exhausted), with the contents undefined but finite: copy before trying. */
enum lxg_status lxg_bvp_solve(struct lxg_bvp *bvp, const struct lxg_bvp_problem *problem,
                              const struct lxg_bvp_options *options, struct lxg_bvp_statistics *statistics);

/* Largest relative residual |F|/scale of the present solution between the collocation points; NaN outside the domain.
 * `worst_x` (may be NULL) receives its place. */
double lxg_bvp_residual(const struct lxg_bvp *bvp, const struct lxg_bvp_problem *problem, double *worst_x);

/* Solution at x (clipped to the chain); k may be NULL. */
void lxg_bvp_at(const struct lxg_bvp *bvp, double x, double y[], double k[]);

/* Parameters p[m], writable: a continuation step may shift them. */
double *lxg_bvp_parameters(struct lxg_bvp *bvp);
const double *lxg_bvp_parameters_const(const struct lxg_bvp *bvp);

/* Mesh: number of intervals, node positions x[0..intervals], node values y[(intervals+1)*n]. */
size_t lxg_bvp_intervals(const struct lxg_bvp *bvp);
const double *lxg_bvp_nodes(const struct lxg_bvp *bvp);
const double *lxg_bvp_node_values(const struct lxg_bvp *bvp);
size_t lxg_bvp_stages(const struct lxg_bvp *bvp);

/* Visits every collocation point in order of x with its quadrature weight (weights of a piece sum to 1). */
void lxg_bvp_visit(const struct lxg_bvp *bvp,
                   void (*visit)(void *context, size_t piece, double x, double weight, const double y[]),
                   void *context);

#endif
