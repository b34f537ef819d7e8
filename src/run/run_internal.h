/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_internal.h - steps that several commands share.
 */
#ifndef LUXGALE_RUN_INTERNAL_H
#define LUXGALE_RUN_INTERNAL_H

#include "luxgale/run.h"

/* Opens a report with `program`, `case` and `star`. */
enum lxg_status lxg_run_begin(const struct lxg_case *input, const char *command, struct lxg_results *results,
                              struct lxg_error *error);

/* Notes that the physics gave no answer, for the reason that the error holds (NULL: unknown), which is cleared. */
void lxg_run_unanswered(struct lxg_results *results, struct lxg_error *error);

/* LXG_INPUT "hold-count" unless the case holds exactly `count` quantities. */
enum lxg_status lxg_run_require_holds(const struct lxg_case *input, const char *command, size_t count,
                                      struct lxg_error *error);

/* Tells the caller, if it wants to know, what begins now ("tracing the family of winds"). */
void lxg_run_stage(const struct lxg_run_options *options, const char *doing);

/* The wind phase of the case's eruption as a history of photospheric luminosity (to be destroyed), and limits of the family of
 * winds that just hold it. Errors of lxg_decline_compute; LXG_NO_SOLUTION "decline-no-wind". */
enum lxg_status lxg_run_decline_history(const struct lxg_case *input, struct lxg_history **history,
                                        struct lxg_family_options *limits, struct lxg_error *error);

/* The model behind every wind of the case. */
struct lxg_wind_model lxg_run_model(const struct lxg_case *input);

#endif
