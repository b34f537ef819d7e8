/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * ejecta.h - from a luminosity history and a family of winds to the matter thrown out.
 *
 * Quasi-steady: at each time the wind is the member of the family whose key luminosity (at the base or at the photosphere,
 * by the kind of the history) equals L(t). Integrals over time are adaptive, edges between wind and no wind are located, and
 * epochs where the quasi-steady picture fails are counted.
 *
 *   M_ej = int Mdot dt,  E_kin = int Mdot v_inf^2/2 dt,  p = int Mdot v_inf dt,  E_lift = int Mdot G M/R_0 dt
 */
#ifndef LUXGALE_EJECTA_H
#define LUXGALE_EJECTA_H

#include "luxgale/family.h"
#include "luxgale/history.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* One epoch of the history. */
struct lxg_ejecta_epoch {
  double time;                   /* [s] */
  double luminosity;             /* of the history [erg s^-1] */
  double time_scale;             /* L/|dL/dt| [s] */
  enum lxg_wind_reason reason;   /* LXG_WIND_SOLVED, or why there is no wind */
  size_t members;                /* how many members of the family have this luminosity */
  bool porous;                   /* brighter than the limit of the first family: from the second */
  struct lxg_family_place place; /* the wind; NaN without one */
  double mass;                   /* ejected so far [g] */
  bool unsteady;                 /* flow or diffusion time exceeds the time scale of the luminosity */
};

struct lxg_ejecta {
  size_t count;
  struct lxg_ejecta_epoch *epoch; /* [count] */
  size_t solved, none, unsteady;  /* epochs with a wind, without, and with a wind that is not quasi-steady */
  size_t ambiguous;               /* epochs with more than one member */
  double mass;                    /* [g] */
  double kinetic;                 /* [erg] */
  double momentum;                /* [g cm s^-1] */
  double lifting;                 /* [erg] */
  double radiated;                /* light that reaches infinity; without a wind all of L(t) [erg] */
  double mean_speed;              /* momentum/mass [cm s^-1]; NaN without ejecta */
  double peak_rate, peak_rate_time; /* largest Mdot of the epochs [g s^-1], when [s]; NaN without a wind */
  double peak_speed,
      peak_speed_time;          /* largest v_inf of the epochs [cm s^-1], when [s]; NaN without a wind */
  double wind_duration;         /* time with a wind [s] */
  double wind_first, wind_last; /* first and last moment with a wind [s]; NaN without */
  double
      largest_jump; /* largest factor by which Mdot jumps where the chosen branch changes; 1 without jumps */
};

struct lxg_ejecta_options {
  enum lxg_branch branch;
  const struct lxg_family *above; /* winds of epochs brighter than `limit`; NULL: one family for all */
  double limit;                   /* [erg s^-1] */
  struct lxg_family_blend *
      blend; /* winds whose model changes with time; NULL: it does not. Replaces the (first) family, or `above` */
  const struct lxg_history *parameter; /* of the blend: ln of its value at a time is the blend's x */
  double tolerance;                    /* relative error of the integrals over one interval between epochs */
  int depth;                           /* halvings of such an interval at most */
};
struct lxg_ejecta_options lxg_ejecta_options_default(void);

/* Winds and ejecta of a history. `escape_energy` is G M/R_0 [erg g^-1]. LXG_OK even when no epoch has a wind (mass 0);
 * LXG_MEMORY. Free with lxg_ejecta_free. */
enum lxg_status lxg_ejecta_compute(const struct lxg_family *family, const struct lxg_history *history,
                                   double escape_energy, const struct lxg_ejecta_options *options,
                                   struct lxg_ejecta *ejecta, struct lxg_error *error);
void lxg_ejecta_free(struct lxg_ejecta *ejecta);

#endif
