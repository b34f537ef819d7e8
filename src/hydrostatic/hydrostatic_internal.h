/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * hydrostatic_internal.h - what the files of the hydrostatic module share.
 */
#ifndef LUXGALE_HYDROSTATIC_INTERNAL_H
#define LUXGALE_HYDROSTATIC_INTERNAL_H

#include "luxgale/bvp.h"
#include "luxgale/hydrostatic.h"
#include "luxgale/ivp.h"

#include <stdbool.h>

/* Unknowns, and the one argument more of the local equations. */
enum {
  STATIC_LNRHO,
  STATIC_LNT,
  STATIC_LUM,
  STATIC_UNKNOWNS,
  STATIC_LNR = STATIC_UNKNOWNS,
  STATIC_ARGUMENTS
};

/* Parameters of the boundary-value problem. */
enum { STATIC_P_LNRPH, STATIC_P_LNMENV, STATIC_P_COUNT };

/* Coordinates of the sequence: ln M_env, ln R_ph, ln T_ph. */
enum { STATIC_C_MASS, STATIC_C_RADIUS, STATIC_C_TEMPERATURE, STATIC_COORDINATES };

/* Numbers that stay the same in an envelope. */
struct static_constants {
  struct lxg_wind_model model;
  double gm;         /* [cm^3 s^-2] */
  double c_t2_per_k; /* c_T^2/T [cm^2 s^-2 K^-1] */
  double kappa_e;    /* [cm^2 g^-1] */
  double l_edd;      /* [erg s^-1] */
  double ln_r0;      /* ln of the stellar radius [cm] */
};

/* Local values in units of g = G M/r, and partials against (ln rho, ln T, L/L_Edd, ln r). */
struct static_local {
  double c;     /* c_T^2/g */
  double kappa; /* effective [cm^2 g^-1] */
  double gamma, phi;
  double rate; /* 4 pi r^3 rho eps/L_Edd */
  double d_lnk[STATIC_ARGUMENTS], d_gamma[STATIC_ARGUMENTS], d_phi[STATIC_ARGUMENTS],
      d_rate[STATIC_ARGUMENTS];
};

/* The row that selects an envelope: direction . (coordinates - origin) = target. */
struct static_row {
  double direction[STATIC_COORDINATES], origin[STATIC_COORDINATES], target;
};

struct static_problem {
  struct static_constants constants;
  struct static_row row;
  struct lxg_bvp_problem bvp;
};

/* A march from the photosphere inward. */
enum { STATIC_TRACK_POINTS = 4096 };
struct static_track {
  size_t count;
  double ln_r[STATIC_TRACK_POINTS];
  double y[STATIC_TRACK_POINTS][STATIC_UNKNOWNS], dydr[STATIC_TRACK_POINTS][STATIC_UNKNOWNS];
};

struct lxg_hydrostatic_solver {
  struct static_problem problem;
  struct lxg_hydrostatic_options options;
  struct lxg_bvp *now, *kept, *start;
  struct lxg_ivp *ivp;
  struct static_track track;
  int newton_steps;
  double residual; /* of the kept envelope */
};

void lxg_hydrostatic_constants_init(struct static_constants *constants, const struct lxg_wind_model *model);
void lxg_hydrostatic_problem_init(struct static_problem *problem);

/* LXG_DOMAIN outside the physical or tabulated domain. */
enum lxg_status lxg_hydrostatic_local(const struct static_constants *constants, double ln_r, const double y[],
                                      struct static_local *local);

/* Solves for the row from the kept envelope (or from `now` when `fresh`); on LXG_OK the result is kept. */
enum lxg_status lxg_hydrostatic_newton(struct lxg_hydrostatic_solver *solver, const struct static_row *row,
                                       bool fresh);

/* Coordinates and numbers of the kept envelope. */
void lxg_hydrostatic_coordinates(const struct lxg_hydrostatic_solver *solver, double c[]);
enum lxg_status lxg_hydrostatic_result(const struct lxg_hydrostatic_solver *solver,
                                       struct lxg_hydrostatic *envelope);

/* A first envelope from nothing; it is kept. LXG_NO_SOLUTION if none is found. */
enum lxg_status lxg_hydrostatic_start(struct lxg_hydrostatic_solver *solver);

#endif
