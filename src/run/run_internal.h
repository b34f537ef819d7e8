/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_internal.h - steps that several commands share.
 */
#ifndef LUXGALE_RUN_INTERNAL_H
#define LUXGALE_RUN_INTERNAL_H

#include "luxgale/ejecta.h"
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

/* Tells the caller, if it wants to know, what begins now ("tracing the family of winds"). */
void lxg_run_stage(const struct lxg_run_options *options, const char *doing);

/* The wind phase of the case's eruption as a history of photospheric luminosity (to be destroyed), and limits of the family of
 * winds that just hold it. Errors of lxg_decline_compute; LXG_NO_SOLUTION "decline-no-wind". */
enum lxg_status lxg_run_decline_history(const struct lxg_case *input, struct lxg_history **history,
                                        struct lxg_family_options *limits, struct lxg_error *error);
/* Traces the family of the case's one held quantity. Winds with a held launch radius need no inside: it is left out when there is none, or
 * when the family with it ends below `brightest` (a luminosity at the photosphere [erg s^-1]; 0: whatever there is). */
enum lxg_status lxg_run_trace(const struct lxg_case *input, struct lxg_wind_solver *solver, double brightest,
                              struct lxg_family *family, struct lxg_error *error);

/* The winds of a history. All-zero is empty. */
struct lxg_run_winds {
  struct lxg_family family; /* of all epochs, or of those up to the limit */
  struct lxg_family above;  /* porous winds of brighter epochs; empty unless `two` */
  bool two;
  struct lxg_family_blend
      *blend;               /* porous winds at any factor of `reduction`; NULL: the factor is constant */
  size_t blended;           /* families behind it */
  double blend_error;       /* measured: largest deviation of the rate at equal luminosity */
  double homogeneous_limit; /* [erg s^-1] */
  double limit;             /* where plain hands over to porous [erg s^-1]; infinite unless `two` */
  double plain_rate, porous_rate; /* of both families at the limit [g s^-1]; NaN where there is no wind */
};
enum lxg_status lxg_run_winds(const struct lxg_case *input, enum lxg_branch branch,
                              struct lxg_run_winds *winds, struct lxg_error *error);
/* Families for a changing factor of `reduction`; `middle` is the one traced as a check. */
enum lxg_status lxg_run_blend(const struct lxg_case *input, enum lxg_held key, struct lxg_run_winds *winds,
                              struct lxg_family *middle, struct lxg_error *error);

void lxg_run_winds_free(struct lxg_run_winds *winds);

/* `super_eddington:` by kappa_e, with bounds, and by the opacities of the winds (`ejecta` NULL: there are none). */
enum lxg_status lxg_run_super_eddington(const struct lxg_case *input, const struct lxg_ejecta *ejecta,
                                        struct lxg_history_excess *excess, struct lxg_node *root,
                                        struct lxg_error *error);

/* `driving:` if the case makes a claim. */
enum lxg_status lxg_run_driving(const struct lxg_case *input, const struct lxg_ejecta *ejecta,
                                struct lxg_node *root, struct lxg_error *error);

/* `tiring:` and `porous:` of one wind, or of what was asked for when there is none. */
enum lxg_status lxg_run_wind_limits(const struct lxg_case *input, const struct lxg_wind *wind,
                                    struct lxg_node *section, struct lxg_error *error);

/* Whether the held quantities ask for more lifting than the base luminosity supplies (tiring number above 1). */
bool lxg_run_tired(const struct lxg_case *input);

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

/* Photospheric luminosities of the epochs that have one as a history; NULL without any. */
enum lxg_status lxg_run_seen(const struct lxg_case *input, const struct lxg_ejecta *ejecta,
                             struct lxg_history **history, struct lxg_error *error);

/* `light_curve:` of the report; `mean_speed` of the ejecta [cm s^-1] or NaN. */
enum lxg_status lxg_run_light_curve(const struct lxg_case *input, double mean_speed, struct lxg_node *root,
                                    struct lxg_error *error);

/* Monte Carlo of the case's errors along its history, or along a course (NULL without). Errors of lxg_propagation_run, and
 * "errors-range", "star-dwarf-mass" where a parameter two sigma off is impossible. */
enum lxg_status lxg_run_errors(const struct lxg_case *input, const struct lxg_run_options *options,
                               const struct lxg_family *family, const struct lxg_observed_course *course,
                               struct lxg_propagation *propagation, struct lxg_error *error);

/* LXG_INPUT unless the case has a history and exactly one held quantity that the history does not give. */
enum lxg_status lxg_run_require_history(const struct lxg_case *input, const char *command,
                                        struct lxg_error *error);

/* Speeds of the winds of a history; `solver` for structures, NULL: there are none. */
enum lxg_status lxg_run_speeds(const struct lxg_case *input, enum lxg_branch branch,
                               const struct lxg_run_winds *winds, struct lxg_wind_solver *solver,
                               struct lxg_speeds **speeds, struct lxg_error *error);

/* Swept shell and velocities of a history, in the report and as tables; nothing without a history. */
enum lxg_status lxg_run_shell(const struct lxg_case *input, const struct lxg_run_options *options,
                              const struct lxg_speeds *speeds, struct lxg_results *results,
                              struct lxg_error *error);

/* `swept_shell:` none, where the reduction of the opacity changes with time: the winds of such a history are not followed to a shell.
 * LXG_INPUT "shell-not-available" if one of its tables is asked for. */
enum lxg_status lxg_run_no_shell(const struct lxg_case *input, const struct lxg_run_options *options,
                                 struct lxg_node *root, struct lxg_error *error);

/* Fit of the stellar mass and the held quantity to the case's lines; reports it and adds warnings. */
enum lxg_status lxg_run_fit(const struct lxg_case *input, const struct lxg_run_options *options,
                            const struct lxg_speeds *speeds, struct lxg_node *warnings,
                            struct lxg_results *results, struct lxg_error *error);

/* Computes all line profiles of the case; free with lxg_run_profiles_free. */
enum lxg_status lxg_run_profiles(const struct lxg_case *input, struct lxg_speeds *speeds,
                                 struct lxg_report_profile **profile, size_t *count, struct lxg_error *error);
void lxg_run_profiles_free(struct lxg_report_profile profile[], size_t count);

#endif
