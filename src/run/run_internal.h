/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_internal.h - steps that several commands share.
 */
#ifndef LUXGALE_RUN_INTERNAL_H
#define LUXGALE_RUN_INTERNAL_H

#include "luxgale/report.h"
#include "luxgale/run.h"
#include "luxgale/speeds.h"

/* Opens a report with `program`, `case` and `star`. */
enum lxg_status lxg_run_begin(const struct lxg_case *input, const char *command, struct lxg_results *results,
                              struct lxg_error *error);

/* Notes that the physics gave no answer, for the reason that the error holds (NULL: unknown), which is cleared. */
void lxg_run_unanswered(struct lxg_results *results, struct lxg_error *error);

/* LXG_INPUT "hold-count" unless the case holds exactly `count` quantities. */
enum lxg_status lxg_run_require_holds(const struct lxg_case *input, const char *command, size_t count,
                                      struct lxg_error *error);

/* The model behind every wind of the case. */
struct lxg_wind_model lxg_run_model(const struct lxg_case *input);

/* LXG_INPUT unless the case has a history and exactly one held quantity that the history does not give. */
enum lxg_status lxg_run_require_history(const struct lxg_case *input, const char *command,
                                        struct lxg_error *error);

/* Swept shell and velocities of a history, in the report and as tables; nothing without a history. */
enum lxg_status lxg_run_shell(const struct lxg_case *input, const struct lxg_run_options *options,
                              const struct lxg_speeds *speeds, struct lxg_results *results,
                              struct lxg_error *error);

/* Fit of the stellar mass and the held quantity to the case's lines; reports it and adds warnings. */
enum lxg_status lxg_run_fit(const struct lxg_case *input, const struct lxg_run_options *options,
                            const struct lxg_speeds *speeds, struct lxg_node *warnings,
                            struct lxg_results *results, struct lxg_error *error);

/* Computes all line profiles of the case; free with lxg_run_profiles_free. */
enum lxg_status lxg_run_profiles(const struct lxg_case *input, struct lxg_speeds *speeds,
                                 struct lxg_report_profile **profile, size_t *count, struct lxg_error *error);
void lxg_run_profiles_free(struct lxg_report_profile profile[], size_t count);

#endif
