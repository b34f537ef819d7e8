/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * speeds.h - the speeds that a case predicts at any time: of the wind, and of the shell that its winds sweep up.
 *
 * The wind of a time is the member of the family whose luminosity (at the base or at the photosphere, by the kind of the
 * history) is L(t), as in ejecta.h; or one and the same wind at all times. Speeds at a continuum optical depth are read
 * from the solved structure of that wind, ln v linear in ln tau between its rows. Swept shell: gas leaves with (v_inf,
 * Mdot)(t), sampled as densely as integrals over Mdot need, edges between wind and no wind located (shell.h); its way is
 * counted from the star, since the launch radius is small beside that of any shell.
 *
 * Call order: lxg_speeds_create or lxg_speeds_create_single -> at, structure, shell_at, velocity -> lxg_speeds_destroy.
 */
#ifndef LUXGALE_SPEEDS_H
#define LUXGALE_SPEEDS_H

#include "luxgale/family.h"
#include "luxgale/history.h"
#include "luxgale/lines.h"
#include "luxgale/shell.h"
#include "luxgale/status.h"
#include "luxgale/wind.h"

#include <stdbool.h>
#include <stddef.h>

struct lxg_speeds; /* opaque; keeps the structures that were asked for. One a thread, as its solver */

/* Winds along a history. All borrowed. */
struct lxg_speeds_source {
  const struct lxg_family *family;
  const struct lxg_family
      *above;   /* winds of epochs brighter than `limit`, as in ejecta.h; NULL: one family for all */
  double limit; /* [erg s^-1] */
  const struct lxg_history *history;
  double factor; /* of its luminosity */
  enum lxg_branch branch;
  double radius; /* where gas starts to coast [cm] */
};

/* The source's parts must outlive the result, not the source itself. `solver` serves structures only; NULL: there are none.
 * LXG_MEMORY, LXG_LIMIT. */
enum lxg_status lxg_speeds_create(const struct lxg_speeds_source *source, struct lxg_wind_solver *solver,
                                  struct lxg_speeds **speeds, struct lxg_error *error);

/* One wind at all times: a place of the family that shares `hold`. No shell. */
enum lxg_status lxg_speeds_create_single(const struct lxg_wind_hold *hold,
                                         const struct lxg_family_place *place, struct lxg_wind_solver *solver,
                                         struct lxg_speeds **speeds, struct lxg_error *error);

/* NULL is allowed. */
void lxg_speeds_destroy(struct lxg_speeds *speeds);

/* Place of a solved wind: the numbers of LXG_FAMILY_LIST, arc 0. */
void lxg_speeds_place(const struct lxg_wind *wind, struct lxg_family_place *place);

/* The wind at a time [s]. LXG_DOMAIN "speeds-time" outside the history; LXG_NO_SOLUTION with the code of the reason when there
 * is no wind then. */
enum lxg_status lxg_speeds_at(const struct lxg_speeds *speeds, double time, struct lxg_family_place *place,
                              struct lxg_error *error);

/* Structure of the wind of a time. */
struct lxg_speeds_structure {
  double time; /* [s] */
  struct lxg_wind_row *row;
  size_t count, photosphere; /* rows, index of the photosphere */
};

/* Solves for it once and keeps it as long as the speeds live. Failures of lxg_speeds_at and of the solver; LXG_DOMAIN
 * "speeds-structure" without a solver. */
enum lxg_status lxg_speeds_structure(struct lxg_speeds *speeds, double time,
                                     const struct lxg_speeds_structure **structure, struct lxg_error *error);

/* What left the star, for shell.h; NULL if nothing ever does or if there is no history. */
const struct lxg_shell_history *lxg_speeds_shell(const struct lxg_speeds *speeds);

/* Slowest and fastest gas that leaves the star [cm s^-1]; false without a shell history. */
bool lxg_speeds_range(const struct lxg_speeds *speeds, double *slowest, double *fastest);

/* Speed of one model at a time; `context` is a struct lxg_speeds. LXG_NO_SOLUTION or LXG_DOMAIN with the reason where there is
 * none ("speeds-shell": no shell then, "speeds-depth": the wind has no such depth, and those of lxg_speeds_at). */
lxg_line_velocity lxg_speeds_velocity;

#endif
