/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bvp_tableau.c - Gauss-Legendre collocation coefficients on [0, 1] for any number of stages.
 *
 * Nodes and weights come from GSL's fixed-order Gauss-Legendre rules; integrals of Lagrange polynomials of degree s-1 are
 * exact with the same rule, so no coefficient is typed in by hand.
 */
#include "bvp/bvp_internal.h"

#include <gsl/gsl_integration.h>

static double lagrange(const struct bvp_tableau *tableau, size_t index, double theta) {
  double value = 1.0;
  for (size_t j = 0; j < tableau->stages; j++) {
    if (j != index) {
      value *= (theta - tableau->c[j]) / (tableau->c[index] - tableau->c[j]);
    }
  }
  return value;
}

void lxg_bvp_tableau_weights(const struct bvp_tableau *tableau, double theta, double a[], double l[]) {
  for (size_t i = 0; i < tableau->stages; i++) {
    double sum = 0.0;
    for (size_t j = 0; j < tableau->stages; j++) {
      sum += tableau->b[j] * lagrange(tableau, i, theta * tableau->c[j]);
    }
    a[i] = theta * sum;
    l[i] = lagrange(tableau, i, theta);
  }
}

void lxg_bvp_tableau_init(struct bvp_tableau *tableau, struct bvp_samples *samples, size_t stages) {
  tableau->stages = stages;
  gsl_integration_glfixed_table *table = gsl_integration_glfixed_table_alloc(stages);
  for (size_t j = 0; table != NULL && j < stages; j++) {
    gsl_integration_glfixed_point(0.0, 1.0, j, &tableau->c[j], &tableau->b[j], table);
  }
  gsl_integration_glfixed_table_free(table);
  double unused[LXG_BVP_MAX_STAGES];
  for (size_t j = 0; j < stages; j++) {
    lxg_bvp_tableau_weights(tableau, tableau->c[j], tableau->a[j], unused);
  }
  /* between the nodes, and near both ends: there the residual polynomial has its extrema */
  samples->count = stages + 1;
  for (size_t j = 0; j <= stages; j++) {
    const double left = j == 0 ? 0.0 : tableau->c[j - 1];
    const double right = j == stages ? 1.0 : tableau->c[j];
    const double share = j == 0 ? 0.1 : j == stages ? 0.9 : 0.5;
    samples->theta[j] = left + share * (right - left);
    lxg_bvp_tableau_weights(tableau, samples->theta[j], samples->a[j], samples->l[j]);
  }
}
