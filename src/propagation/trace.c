/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * trace.c - the families at other values of the model, traced once, a few at a time.
 */
#include "propagation/propagation_internal.h"

#include <pthread.h>
#include <string.h>

/* Linear interpolation error of these families: far below the errors they serve for, and four times fewer winds. */
static const double family_tolerance = 1e-3;

/* Families that one thread traces: every `stride`-th from `first`. */
struct share {
  const struct lxg_propagation_input *input;
  const struct keying *keying;
  const double *place;   /* of each member */
  struct members *table; /* the first belongs to node 0 */
  size_t first, stride, count;
  enum lxg_status status;
  size_t failed; /* node that failed */
  struct lxg_error error;
};

static enum lxg_status trace_one(const struct share *share, size_t i, struct lxg_error *error) {
  const struct lxg_propagation_node *node = &share->input->node[i];
  struct lxg_family_options options = lxg_family_options_default();
  struct lxg_wind_solver *solver = NULL;
  struct lxg_family family = {0};
  options.tolerance = family_tolerance;
  enum lxg_status status = lxg_wind_solver_create(&node->model, NULL, &solver, error);
  if (status == LXG_OK) {
    status = lxg_family_trace(solver, &node->hold, &options, &family, error);
  }
  if (status == LXG_OK) {
    const struct lxg_star *star = &node->model.star;
    lxg_members_fill(&share->table[i], &family,
                     lxg_members_reach(&family, share->keying, share->input->branch), share->place,
                     share->input->l_edd, lxg_star_eddington_luminosity(star, &node->model.composition),
                     star->gm / star->radius);
  }
  lxg_family_free(&family);
  lxg_wind_solver_destroy(solver);
  return status;
}

static void *trace_share(void *argument) {
  struct share *share = argument;
  for (size_t i = share->first; i < share->count && share->status == LXG_OK; i += share->stride) {
    share->status = trace_one(share, i, &share->error);
    share->failed = i;
  }
  return NULL;
}

enum lxg_status lxg_propagation_trace(const struct lxg_propagation_input *input, const struct keying *keying,
                                      const double place[], struct members table[], struct lxg_error *error) {
  enum { THREADS_MOST = 2 * LXG_PROPAGATION_PARAMETERS + 1 };
  const size_t count = 2 * input->parameters + 1;
  const size_t threads = input->threads < count ? input->threads : count;
  struct share share[THREADS_MOST];
  pthread_t thread[THREADS_MOST];
  bool started[THREADS_MOST] = {false};
  for (size_t i = 0; i < threads; i++) {
    share[i] = (struct share){.input = input,
                              .keying = keying,
                              .place = place,
                              .table = table,
                              .first = i,
                              .stride = threads,
                              .count = count,
                              .failed = count};
    started[i] = i > 0 && pthread_create(&thread[i], NULL, trace_share, &share[i]) == 0;
  }
  for (size_t i = 0; i < threads; i++) { /* what could not be started is done here */
    if (!started[i]) {
      trace_share(&share[i]);
    }
  }
  const struct share *worst = NULL; /* the lowest node that failed, whatever the number of threads */
  for (size_t i = 0; i < threads; i++) {
    if (started[i]) {
      pthread_join(thread[i], NULL);
    }
    if (share[i].status != LXG_OK && (worst == NULL || share[i].failed < worst->failed)) {
      worst = &share[i];
    }
  }
  if (worst == NULL) {
    return LXG_OK;
  }
  if (error != NULL) {
    *error = worst->error;
  }
  if (worst->failed + 1 == count) {
    lxg_error_context(error, "tracing the family with every parameter one sigma off");
  } else {
    lxg_error_context(error, "tracing the family with %s two sigma %s its value",
                      input->parameter[worst->failed / 2], worst->failed % 2 == 0 ? "below" : "above");
  }
  return worst->status;
}
