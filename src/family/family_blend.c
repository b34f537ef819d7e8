/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family_blend.c - a family for any value of a parameter of the model, between families traced at a few values (see family.h).
 *
 * Places of different families correspond when they have the same mass-loss rate, which runs monotonically from the thin end to
 * the thick end and, unlike the ends themselves, depends smoothly on the parameter. At each rate every number of
 * LXG_FAMILY_LIST, in its scale, is interpolated by the polynomial through all families (barycentric form, Berrut & Trefethen 2004, SIAM
 * Rev. 46, 501). Rates that not every family has are left out.
 */
#include "family/family_internal.h"
#include "luxgale/memory.h"

#include <math.h>

static const double edge_share =
    1e-9; /* kept from the ends of the common range, where rounding may leave a family */

struct lxg_family_blend {
  size_t families;
  double *x;                 /* [families] parameter */
  double *weight;            /* [families] barycentric */
  double *table;             /* [families][LXG_FAMILY_SHARES][LXG_FAMILY_COUNT], each number in its scale */
  struct lxg_family scratch; /* without winds */
};

/* Rates that all families have: ln of the least and the largest. */
static void common_rates(const struct lxg_family family[], size_t count, double *low, double *high) {
  *low = -INFINITY;
  *high = INFINITY;
  for (size_t i = 0; i < count; i++) {
    const size_t last = family[i].count - 1;
    *low = fmax(*low, log(family[i].wind[0].value[LXG_HELD_MASS_LOSS_RATE]));
    *high = fmin(*high, log(family[i].wind[last].value[LXG_HELD_MASS_LOSS_RATE]));
  }
}

/* Numbers of a family at even steps of ln Mdot. False if a rate is missing or met twice. */
static enum lxg_status resample(const struct lxg_family *family, double low, double high, double *table,
                                struct lxg_error *error) {
  struct lxg_family_index *index = NULL;
  enum lxg_status status = lxg_family_index_create(family, LXG_FAMILY_MASS_LOSS_RATE, &index, error);
  const double margin = edge_share * (high - low);
  for (size_t j = 0; j < LXG_FAMILY_SHARES && status == LXG_OK; j++) {
    struct lxg_family_place place;
    const double share = (double)j / (LXG_FAMILY_SHARES - 1);
    const double rate = exp(low + margin + share * (high - low - 2.0 * margin));
    const size_t met = lxg_family_index_branch(index, rate, LXG_BRANCH_THIN, &place);
    if (met != 1) {
      status = lxg_error_set(error, LXG_NO_SOLUTION, "family-blend",
                             "the mass-loss rate does not run monotonically along a family, or families of "
                             "different parameters have no rate in common");
    }
    for (size_t q = 0; q < LXG_FAMILY_COUNT && status == LXG_OK; q++) {
      table[j * LXG_FAMILY_COUNT + q] = lxg_family_number(q, place.value[q], family->l_edd);
    }
  }
  lxg_family_index_destroy(index);
  return status;
}

enum lxg_status lxg_family_blend_create(const struct lxg_family family[], const double x[], size_t count,
                                        struct lxg_family_blend **blend, struct lxg_error *error) {
  struct lxg_family_blend *made = lxg_alloc(1, sizeof *made);
  const size_t nodes = (size_t)LXG_FAMILY_SHARES * LXG_FAMILY_COUNT;
  *blend = NULL;
  if (made != NULL) {
    made->families = count;
    made->x = lxg_alloc(count, sizeof *made->x);
    made->weight = lxg_alloc(count, sizeof *made->weight);
    made->table = lxg_alloc(count * nodes, sizeof *made->table);
    made->scratch = family[0];
    made->scratch.wind = NULL;
    made->scratch.count = LXG_FAMILY_SHARES;
    made->scratch.arc = lxg_alloc(LXG_FAMILY_SHARES, sizeof *made->scratch.arc);
    made->scratch.table = lxg_alloc(nodes, sizeof *made->scratch.table);
  }
  if (made == NULL || made->x == NULL || made->weight == NULL || made->table == NULL ||
      made->scratch.arc == NULL || made->scratch.table == NULL) {
    lxg_family_blend_destroy(made);
    return lxg_error_set(error, LXG_MEMORY, "memory", "families between families: out of memory");
  }
  double low, high;
  common_rates(family, count, &low, &high);
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    made->x[i] = x[i];
    made->weight[i] = 1.0;
    for (size_t k = 0; k < count; k++) {
      made->weight[i] /= k == i ? 1.0 : x[i] - x[k];
    }
    status = resample(&family[i], low, high, &made->table[i * nodes], error);
  }
  if (status != LXG_OK) {
    lxg_family_blend_destroy(made);
    return status;
  }
  for (size_t j = 0; j < LXG_FAMILY_SHARES; j++) {
    made->scratch.arc[j] = (double)j;
  }
  *blend = made;
  return LXG_OK;
}

void lxg_family_blend_destroy(struct lxg_family_blend *blend) {
  if (blend != NULL) {
    lxg_free(blend->scratch.arc);
    lxg_free(blend->scratch.table);
    lxg_free(blend->x);
    lxg_free(blend->weight);
    lxg_free(blend->table);
    lxg_free(blend);
  }
}

const struct lxg_family *lxg_family_blend_at(struct lxg_family_blend *blend, double x) {
  const size_t nodes = (size_t)LXG_FAMILY_SHARES * LXG_FAMILY_COUNT;
  double sum = 0.0;
  for (size_t k = 0; k < nodes; k++) {
    blend->scratch.table[k] = 0.0;
  }
  for (size_t i = 0; i < blend->families; i++) {
    const bool on = x == blend->x[i];
    const double weight = on ? 1.0 : blend->weight[i] / (x - blend->x[i]);
    sum = on ? 1.0 : sum + weight;
    for (size_t k = 0; k < nodes; k++) {
      const double share = weight * blend->table[i * nodes + k];
      blend->scratch.table[k] = on ? share : blend->scratch.table[k] + share;
    }
    if (on) {
      break;
    }
  }
  for (size_t k = 0; k < nodes; k++) {
    blend->scratch.table[k] /= sum;
  }
  return &blend->scratch;
}
