/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_bvp.c - the collocation solver on manufactured problems whose answers are known in closed form.
 */
#include "helpers.h"
#include "luxgale/bvp.h"

#include <stdbool.h>
#include <string.h>

static const struct lxg_bvp_options exact = {1e-12, 0.0, 0.0, 30, 12, 1e-4};

static void zero(const void *context, double x, double y[], double k[]) {
  (void)context;
  (void)x;
  y[0] = y[1] = k[0] = k[1] = 0.0;
}

static void uniform(double nodes[], size_t intervals, double length) {
  for (size_t i = 0; i <= intervals; i++) {
    nodes[i] = length * (double)i / (double)intervals;
  }
}

/* Bratu's problem u'' + e^u = 0, u(0) = u(1) = 0: u = -2 ln[cosh((x - 1/2) t/2)/cosh(t/4)], t = sqrt(2) cosh(t/4)
 * (standard closed form, e.g. Ascher, Mattheij & Russell 1995). Lower branch: t = 1.5171645990507543 (solved with
 * mpmath). */
static const double bratu_t = 1.5171645990507543;

static double bratu(double x) {
  return -2.0 * log(cosh((x - 0.5) * bratu_t / 2.0) / cosh(bratu_t / 4.0));
}

static enum lxg_status bratu_rows(const void *context, size_t piece, double x, const double y[],
                                  const double k[], const double p[], struct lxg_bvp_rows *rows) {
  (void)context;
  (void)piece;
  (void)x;
  (void)p;
  rows->f[0] = k[0] - y[1];
  rows->f[1] = k[1] + exp(y[0]);
  if (rows->scale != NULL) {
    rows->scale[0] = rows->scale[1] = 1.0;
  }
  if (rows->fy != NULL) {
    rows->fy[1] = -1.0;
    rows->fy[2] = exp(y[0]);
    rows->fk[0] = rows->fk[3] = 1.0;
  }
  return LXG_OK;
}

static enum lxg_status ends(const void *context, size_t site, const double y[], const double p[], double f[],
                            double fy[], double fp[]) {
  (void)context;
  (void)site;
  (void)p;
  (void)fp;
  f[0] = y[0];
  fy[0] = 1.0;
  return LXG_OK;
}

static const struct lxg_bvp_problem bratu_problem = {
    .unknowns = 2, .pieces = 1, .conditions = {1, 1}, .equation = bratu_rows, .condition = ends};

static double bratu_error(size_t stages, size_t intervals) {
  struct lxg_bvp *bvp = lxg_bvp_create(2, 0, stages, 512);
  double nodes[513], y[2];
  struct lxg_bvp_statistics statistics;
  uniform(nodes, intervals, 1.0);
  ck_assert_int_eq(lxg_bvp_guess(bvp, nodes, intervals, 1, zero, NULL, NULL), LXG_OK);
  ck_assert_int_eq(lxg_bvp_solve(bvp, &bratu_problem, &exact, &statistics), LXG_OK);
  double worst = 0.0;
  for (size_t i = 0; i <= intervals; i++) {
    lxg_bvp_at(bvp, nodes[i], y, NULL);
    worst = fmax(worst, fabs(y[0] - bratu(nodes[i])));
  }
  lxg_bvp_destroy(bvp);
  return worst;
}

/* Gauss collocation with s stages is of order 2s at the nodes. Meshes are chosen so that the error is above rounding. */
START_TEST(convergence_order) {
  const size_t stages = (size_t)_i + 1;
  const size_t mesh[] = {32, 8, 4, 3};
  const double coarse = bratu_error(stages, mesh[_i]), fine = bratu_error(stages, 2 * mesh[_i]);
  assert_near(log2(coarse / fine), 2.0 * (double)stages, 0.12 * (double)stages);
}
END_TEST

/* Adaptive mesh: the measured residual meets the tolerance and the solution is as accurate as that promises. */
START_TEST(adaptive_mesh) {
  struct lxg_bvp *bvp = lxg_bvp_create(2, 0, 4, 512);
  double nodes[5], y[2];
  struct lxg_bvp_options options = exact;
  options.residual_tolerance = 1e-9;
  struct lxg_bvp_statistics statistics;
  uniform(nodes, 3, 1.0);
  ck_assert_int_eq(lxg_bvp_guess(bvp, nodes, 3, 1, zero, NULL, NULL), LXG_OK);
  ck_assert_int_eq(lxg_bvp_solve(bvp, &bratu_problem, &options, &statistics), LXG_OK);
  ck_assert(statistics.residual <= 1e-9 && statistics.meshes > 1);
  ck_assert(lxg_bvp_residual(bvp, &bratu_problem, NULL) <= 1e-9);
  for (double x = 0.013; x < 1.0; x += 0.0737) {
    lxg_bvp_at(bvp, x, y, NULL);
    assert_near(y[0], bratu(x), 1e-9);
  }
  lxg_bvp_destroy(bvp);
}
END_TEST

/* Two pieces with a critical point of unknown place at the joint, as in a wind: with r = x p on the first piece and
 * r = p + (x - 1)(3 - p) on the second,
 *   (u - r^2) u' = 2 r (u - r^2) + (r - q)   and   w' = w,
 * regular only where u = r^2 and r = q together. Solution: u = r^2 + (r - q) (slope 1 + 2 r at r = q solves the quadratic
 * s = 2r + 1/(s - 2r)), w = w0 e^r. Conditions: at the joint u = r^2 and r = q; w(0) = 0.7; q = 1.3 by u(3) = 9 + 1.7. */
struct critical {
  double end;
};

static enum lxg_status critical_rows(const void *context, size_t piece, double x, const double y[],
                                     const double k[], const double p[], struct lxg_bvp_rows *rows) {
  const struct critical *critical = context;
  const double t = x - (double)piece;
  const double length = piece == 0 ? p[0] : critical->end - p[0];
  const double r = piece == 0 ? t * p[0] : p[0] + t * (critical->end - p[0]);
  const double dr = piece == 0 ? t : 1.0 - t, dl = piece == 0 ? 1.0 : -1.0;
  const double gap = y[0] - r * r;
  if (!(length > 0.0)) {
    return LXG_DOMAIN;
  }
  rows->f[0] = gap * k[0] - length * (2.0 * r * gap + r - p[1]);
  rows->f[1] = k[1] - length * y[1];
  if (rows->scale != NULL) {
    rows->scale[0] = rows->scale[1] = 1.0;
  }
  if (rows->fy != NULL) {
    rows->fy[0] = k[0] - length * 2.0 * r;
    rows->fy[3] = -length;
    rows->fk[0] = gap;
    rows->fk[3] = 1.0;
    const double by_r = -2.0 * r * k[0] - length * (2.0 * gap - 4.0 * r * r + 1.0);
    rows->fp[0] = by_r * dr - dl * (2.0 * r * gap + r - p[1]);
    rows->fp[1] = length;
    rows->fp[2] = -dl * y[1];
  }
  return LXG_OK;
}

static enum lxg_status critical_conditions(const void *context, size_t site, const double y[],
                                           const double p[], double f[], double fy[], double fp[]) {
  const struct critical *critical = context;
  if (site == 0) {
    f[0] = y[1] - 0.7;
    fy[1] = 1.0;
  } else if (site == 1) {
    f[0] = y[0] - p[0] * p[0];
    fy[0] = 1.0;
    fp[0] = -2.0 * p[0];
    f[1] = p[0] - p[1];
    fp[2] = 1.0;
    fp[3] = -1.0;
  } else {
    f[0] = y[0] - critical->end * critical->end - 1.7;
    fy[0] = 1.0;
  }
  return LXG_OK;
}

static void critical_guess(const void *context, double x, double y[], double k[]) {
  const struct critical *critical = context;
  const double r = x < 1.0 ? 1.1 * x : 1.1 + (x - 1.0) * (critical->end - 1.1);
  const double length = x < 1.0 ? 1.1 : critical->end - 1.1;
  y[0] = r * r + 0.8 * (r - 1.1);
  k[0] = length * (2.0 * r + 0.8);
  y[1] = 0.7 * (1.0 + r);
  k[1] = length * 0.7;
}

START_TEST(critical_point_at_joint) {
  const struct critical context = {3.0};
  const struct lxg_bvp_problem problem = {.unknowns = 2,
                                          .parameters = 2,
                                          .pieces = 2,
                                          .conditions = {1, 2, 1},
                                          .context = &context,
                                          .equation = critical_rows,
                                          .condition = critical_conditions};
  struct lxg_bvp *bvp = lxg_bvp_create(2, 2, 5, 256);
  double nodes[17], y[2], k[2];
  uniform(nodes, 16, 2.0);
  const double p[2] = {1.1, 1.1};
  struct lxg_bvp_options options = exact;
  options.residual_tolerance = 1e-10;
  struct lxg_bvp_statistics statistics;
  ck_assert_int_eq(lxg_bvp_guess(bvp, nodes, 16, 2, critical_guess, &context, p), LXG_OK);
  ck_assert_int_eq(lxg_bvp_solve(bvp, &problem, &options, &statistics), LXG_OK);
  assert_close(lxg_bvp_parameters(bvp)[0], 1.3, 1e-10);
  for (double x = 0.05; x < 2.0; x += 0.111) {
    const double r = x < 1.0 ? 1.3 * x : 1.3 + (x - 1.0) * 1.7;
    lxg_bvp_at(bvp, x, y, k);
    assert_near(y[0], r * r + r - 1.3, 1e-9);
    assert_close(y[1], 0.7 * exp(r), 1e-9);
  }
  lxg_bvp_destroy(bvp);
}
END_TEST

/* An integral row: y' = a y, y(0) = 1, integral of y = e^p1 with p1 fixed by y(1) = 3 gives a = ln 3 and integral
 * (e^a - 1)/a = 2/ln 3. */
static enum lxg_status growth_rows(const void *context, size_t piece, double x, const double y[],
                                   const double k[], const double p[], struct lxg_bvp_rows *rows) {
  (void)context;
  (void)piece;
  (void)x;
  rows->f[0] = k[0] - p[0] * y[0];
  if (rows->scale != NULL) {
    rows->scale[0] = 1.0;
  }
  if (rows->fy != NULL) {
    rows->fy[0] = -p[0];
    rows->fk[0] = 1.0;
    rows->fp[0] = -y[0];
  }
  return LXG_OK;
}

static enum lxg_status growth_conditions(const void *context, size_t site, const double y[], const double p[],
                                         double f[], double fy[], double fp[]) {
  (void)context;
  (void)p;
  (void)fp;
  f[0] = y[0] - (site == 0 ? 1.0 : 3.0);
  fy[0] = 1.0;
  return LXG_OK;
}

static enum lxg_status growth_integrand(const void *context, size_t piece, double x, const double y[],
                                        const double p[], double q[], double qy[], double qp[]) {
  (void)context;
  (void)piece;
  (void)x;
  q[0] = y[0] * exp(-p[1]);
  qy[0] = exp(-p[1]);
  qp[1] = -q[0];
  return LXG_OK;
}

static void one(const void *context, double x, double y[], double k[]) {
  (void)context;
  (void)x;
  y[0] = 1.0;
  k[0] = 0.5;
}

START_TEST(integral_row) {
  const struct lxg_bvp_problem problem = {.unknowns = 1,
                                          .parameters = 2,
                                          .pieces = 1,
                                          .conditions = {1, 1},
                                          .integrals = 1,
                                          .equation = growth_rows,
                                          .condition = growth_conditions,
                                          .integrand = growth_integrand};
  struct lxg_bvp *bvp = lxg_bvp_create(1, 2, 5, 64);
  double nodes[9];
  uniform(nodes, 8, 1.0);
  const double p[2] = {0.3, 0.1};
  struct lxg_bvp_statistics statistics;
  ck_assert_int_eq(lxg_bvp_guess(bvp, nodes, 8, 1, one, NULL, p), LXG_OK);
  ck_assert_int_eq(lxg_bvp_solve(bvp, &problem, &exact, &statistics), LXG_OK);
  assert_close(lxg_bvp_parameters(bvp)[0], log(3.0), 1e-12);
  assert_close(exp(lxg_bvp_parameters(bvp)[1]), 2.0 / log(3.0), 1e-12);
  lxg_bvp_destroy(bvp);
}
END_TEST

/* A count that does not close is a bug of the caller, a singular problem and a domain that is never left are named. */
START_TEST(named_endings) {
  struct lxg_bvp_problem problem = bratu_problem;
  struct lxg_bvp *bvp = lxg_bvp_create(2, 0, 3, 16);
  double nodes[9];
  struct lxg_bvp_statistics statistics;
  uniform(nodes, 8, 1.0);
  problem.conditions[1] = 0;
  ck_assert_int_eq(lxg_bvp_guess(bvp, nodes, 8, 1, zero, NULL, NULL), LXG_OK);
  ck_assert_int_eq(lxg_bvp_solve(bvp, &problem, &exact, &statistics), LXG_BUG);
  problem = bratu_problem;
  problem.pieces = 2;
  ck_assert_int_eq(lxg_bvp_solve(bvp, &problem, &exact, &statistics), LXG_BUG);
  struct lxg_bvp_options tight = exact;
  tight.residual_tolerance = 1e-15;
  ck_assert_int_eq(lxg_bvp_guess(bvp, nodes, 8, 1, zero, NULL, NULL), LXG_OK);
  ck_assert_int_eq(lxg_bvp_solve(bvp, &bratu_problem, &tight, &statistics), LXG_LIMIT);
  ck_assert_ptr_null(lxg_bvp_create(4, 0, 3, 16));
  ck_assert_ptr_null(lxg_bvp_create(2, 0, 9, 16));
  lxg_bvp_destroy(bvp);
  lxg_bvp_destroy(NULL);
}
END_TEST

Suite *suite_bvp(void);
Suite *suite_bvp(void) {
  Suite *suite = suite_create("bvp");
  TCase *tests = tcase_create("bvp");
  tcase_add_loop_test(tests, convergence_order, 0, 4);
  tcase_add_test(tests, adaptive_mesh);
  tcase_add_test(tests, critical_point_at_joint);
  tcase_add_test(tests, integral_row);
  tcase_add_test(tests, named_endings);
  suite_add_tcase(suite, tests);
  return suite;
}
