/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_internal.h - steps that several commands share.
 */
#ifndef LUXGALE_RUN_INTERNAL_H
#define LUXGALE_RUN_INTERNAL_H

#include "luxgale/ejecta.h"
#include "luxgale/report.h"
#include "luxgale/run.h"

/* Opens a report with `program`, `case` and `star`. */
enum lxg_status lxg_run_begin(const struct lxg_case *input, const char *command, struct lxg_results *results,
                              struct lxg_error *error);

/* Notes that the physics gave no answer, for the reason that the error holds (NULL: unknown), which is cleared. */
void lxg_run_unanswered(struct lxg_results *results, struct lxg_error *error);

/* LXG_INPUT "hold-count" unless the case holds exactly `count` quantities. */
enum lxg_status lxg_run_require_holds(const struct lxg_case *input, const char *command, size_t count,
                                      struct lxg_error *error);

/* The wind phase of the case's eruption as a history of photospheric luminosity (to be destroyed), and limits of the family of
 * winds that just hold it. Errors of lxg_decline_compute; LXG_NO_SOLUTION "decline-no-wind". */
enum lxg_status lxg_run_decline_history(const struct lxg_case *input, struct lxg_history **history,
                                        struct lxg_family_options *limits, struct lxg_error *error);

/* The model behind every wind of the case. */
struct lxg_wind_model lxg_run_model(const struct lxg_case *input);

/* Magnitudes along a traced family, and the ejecta. */
enum lxg_status lxg_run_course(const struct lxg_case *input, const struct lxg_ejecta_options *options,
                               const struct lxg_family *family, struct lxg_observed_course *course,
                               struct lxg_ejecta *ejecta, struct lxg_error *error);

/* A wind for every epoch with a colour, gathered into `family`, and the ejecta. */
enum lxg_status lxg_run_colours(const struct lxg_case *input, const struct lxg_ejecta_options *options,
                                struct lxg_wind_solver *solver, struct lxg_family *family,
                                struct lxg_ejecta *ejecta, struct lxg_error *error);

/* Photospheric luminosities of the epochs that have one as a history (NULL without any), and their time above L_Edd. */
enum lxg_status lxg_run_seen(const struct lxg_case *input, const struct lxg_ejecta *ejecta,
                             struct lxg_history **history, struct lxg_history_excess *excess,
                             struct lxg_error *error);

/* `light_curve:` of the report; `mean_speed` of the ejecta [cm s^-1] or NaN. */
enum lxg_status lxg_run_light_curve(const struct lxg_case *input, double mean_speed, struct lxg_node *root,
                                    struct lxg_error *error);

/* Monte Carlo of the case's errors along its history, or along a course (NULL without). Errors of lxg_propagation_run, and
 * "errors-range", "star-dwarf-mass" where a parameter two sigma off is impossible. */
enum lxg_status lxg_run_errors(const struct lxg_case *input, const struct lxg_run_options *options,
                               const struct lxg_family *family, const struct lxg_observed_course *course,
                               struct lxg_propagation *propagation, struct lxg_error *error);

#endif
