/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_internal.h - what the files of the wind solver share.
 */
#ifndef LUXGALE_WIND_INTERNAL_H
#define LUXGALE_WIND_INTERNAL_H

#include "luxgale/bvp.h"
#include "luxgale/wind.h"

#define WIND_LN_4PI 2.53102424696929079309 /* ln(4 pi) */

/* Arguments of the local equations. */
enum { WIND_LNV, WIND_LNT, WIND_LNR, WIND_LNMDOT, WIND_LAMBDA, WIND_ARGUMENTS };

/* Numbers that stay the same along a wind. */
struct wind_constants {
  struct lxg_wind_model model;
  double gm;         /* [cm^3 s^-2] */
  double c_t2_per_k; /* c_T^2/T [cm^2 s^-2 K^-1] */
  double kappa_e;    /* [cm^2 g^-1] */
  double l_edd;      /* [erg s^-1] */
  double ln_r0;      /* ln of the stellar radius [cm] */
};

/* A place in a wind: natural logarithms of CGS values, lambda = Lambda/L_Edd. */
struct wind_place {
  double ln_r, ln_v, ln_t, ln_mdot, lambda;
};

/* Local values, scaled as in wind_local.c, and their partials. */
struct wind_local {
  double ln_rho; /* [g cm^-3] */
  double g;      /* G M/r [erg g^-1] */
  double w, c, h, kappa, mdot, lhat, gamma, phi, n;
  double dlnk[WIND_ARGUMENTS], d_lhat[WIND_ARGUMENTS], d_gamma[WIND_ARGUMENTS], d_phi[WIND_ARGUMENTS],
      d_n[WIND_ARGUMENTS];
};

void lxg_wind_constants_init(struct wind_constants *constants, const struct lxg_wind_model *model);

/* LXG_DOMAIN if the place is outside the physical or tabulated domain. */
enum lxg_status lxg_wind_local(const struct wind_constants *constants, const struct wind_place *at,
                               struct wind_local *local);

/* dlnv/dlnr at the critical point (accelerating root); NaN if there is none. */
double lxg_wind_critical_slope(const struct wind_local *local);

#endif
