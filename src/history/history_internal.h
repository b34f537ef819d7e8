/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history_internal.h - shared by the files of src/history only.
 */
#ifndef LUXGALE_HISTORY_INTERNAL_H
#define LUXGALE_HISTORY_INTERNAL_H

#include "luxgale/history.h"

/* A growing list of increasing times [s]. */
struct lxg_history_times {
  size_t count, capacity;
  double *time;
};

/* Appends one; LXG_MEMORY on failure. */
enum lxg_status lxg_history_times_push(struct lxg_history_times *times, double time, struct lxg_error *error);

/* Shortest piece [s] into which [start, end] may be cut: `share` of its length, but never below a few roundings of time. */
double lxg_history_shortest(double start, double end, double share);

/* True when the history has this curve. */
bool lxg_history_has(const struct lxg_history *history, enum lxg_history_curve curve);

#endif
