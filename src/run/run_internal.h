/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_internal.h - steps that several commands share.
 */
#ifndef LUXGALE_RUN_INTERNAL_H
#define LUXGALE_RUN_INTERNAL_H

#include "luxgale/ejecta.h"
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

#endif
