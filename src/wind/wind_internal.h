/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_internal.h - what the files of the wind solver share.
 */
#ifndef LUXGALE_WIND_INTERNAL_H
#define LUXGALE_WIND_INTERNAL_H

#include "luxgale/bvp.h"
#include "luxgale/ivp.h"
#include "luxgale/wind.h"

#include <stdbool.h>

#define WIND_LN_MOST                                                                                         \
  150.0 /* largest size of a logarithm that the local equations take; powers up to the fourth are formed */
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
  double table_weight; /* share of the opacity that came from a table */
  double dlnk[WIND_ARGUMENTS], d_lhat[WIND_ARGUMENTS], d_gamma[WIND_ARGUMENTS], d_phi[WIND_ARGUMENTS],
      d_n[WIND_ARGUMENTS];
};

void lxg_wind_constants_init(struct wind_constants *constants, const struct lxg_wind_model *model);

/* LXG_DOMAIN if the place is outside the physical or tabulated domain. */
enum lxg_status lxg_wind_local(const struct wind_constants *constants, const struct wind_place *at,
                               struct wind_local *local);

/* Parameters of the boundary-value problem. */
enum { WIND_P_LNRC, WIND_P_LNMDOT, WIND_P_LAMBDA, WIND_P_LNRPH, WIND_P_LNMENV, WIND_P_COUNT };

/* Kinds of held rows beyond the public ones. */
enum { WIND_ROW_CRITICAL_TEMPERATURE = LXG_HELD_COUNT, WIND_ROW_ARC };

/* One held row. Target: natural logarithm of the CGS value; for luminosities at the base and the energy rate the value
 * over L_Edd; for the photospheric luminosity ln(L/(4 pi sigma)); for the arc the arc length. */
struct wind_row {
  int kind;
  double target;
  double direction[WIND_P_LNMENV], origin[WIND_P_LNMENV]; /* arc only */
};

/* Gas beyond the photosphere (wind_coast.c). */
struct wind_coast;

/* Everything the callbacks need. */
struct wind_problem {
  struct wind_constants constants;
  struct wind_coast *coast;
  struct wind_row row[2];
  struct lxg_bvp_problem bvp;
  struct lxg_bvp_problem plain; /* burning: the two equations and conditions without it */
  double burning_share; /* of the heat of burning that counts: 1 but on the way to a first burning wind */
};

/* Sets the two held rows and the sizes that follow from them. LXG_NO_SOLUTION when a row lives in the inner piece and that
 * is left out. */
enum lxg_status lxg_wind_problem_set(struct wind_problem *problem, const struct wind_row row[2],
                                     bool outer_only);
size_t lxg_wind_row_site(int kind);
double lxg_wind_ln_r(const struct wind_constants *constants, double x, const double p[]);

/* One point of the coasting gas. */
struct wind_coast_point {
  double ln_r, ln_v, ln_t;
};

/* NULL if out of memory. */
struct wind_coast *lxg_wind_coast_create(const struct wind_constants *constants);
void lxg_wind_coast_destroy(struct wind_coast *coast);

/* ln v at 1000 R_ph and its partials against (ln v, ln T, ln R, ln Mdot, lambda) at the photosphere `from`.
 * LXG_NO_SOLUTION when the flow falls back to the sound speed before. */
enum lxg_status lxg_wind_coast_gradient(struct wind_coast *coast, const struct wind_place *from,
                                        double *ln_speed, double gradient[WIND_ARGUMENTS]);

/* The same march without partials, points recorded (up to `capacity`); *count is set. On LXG_NO_SOLUTION the last point is
 * where the flow stalled. */
enum lxg_status lxg_wind_coast_track(struct wind_coast *coast, const struct wind_place *from,
                                     struct wind_coast_point point[], size_t capacity, size_t *count);

/* L/L_Edd of the coasting gas at a point, for the photosphere it comes from. */
double lxg_wind_coast_luminosity(const struct wind_constants *constants, const struct wind_place *photosphere,
                                 const struct wind_coast_point *point);

/* A recorded march, from the critical point away. */
enum { WIND_TRACK_POINTS = 2048 };
struct wind_track {
  size_t count;
  double ln_r[WIND_TRACK_POINTS];
  double y[WIND_TRACK_POINTS][2], dydr[WIND_TRACK_POINTS][2]; /* (ln v, ln T) and slopes against ln r */
};

/* Cubic Hermite interpolation in a track; beyond its last point the last slopes (bounded) go on. */
void lxg_wind_track_at(const struct wind_track *track, double ln_r, double y[2], double dydr[2]);

/* Approximate outer structure for a critical radius and temperature (wind_start.c), the rate to `accuracy` in its logarithm;
 * *ln_mdot is a hint on entry (NaN: none). LXG_NO_SOLUTION when no rate separates the two kinds of march. */
enum lxg_status lxg_wind_start_outer(const struct wind_constants *constants, struct lxg_ivp *ivp,
                                     double ln_rc, double ln_tc, double accuracy, struct wind_track *track,
                                     struct wind_track *scratch, double *ln_mdot, double *lambda);

/* Inner structure for the same point and rate. */
enum lxg_status lxg_wind_start_inner(const struct wind_constants *constants, struct lxg_ivp *ivp,
                                     double ln_rc, double ln_tc, double ln_mdot, struct wind_track *track);

/* The solver's state (wind_solve.c); the other files read it. */
struct lxg_wind_solver {
  struct wind_problem problem;
  struct lxg_wind_options options;
  struct lxg_bvp *now;                  /* being worked on */
  struct lxg_bvp *kept;                 /* last wind solved */
  struct lxg_bvp *slot[LXG_WIND_SLOTS]; /* set aside by lxg_wind_mark */
  struct lxg_ivp *ivp;
  struct wind_track outer, inner, scratch;
  bool have;                       /* `kept` holds a wind */
  bool outer_only;                 /* new winds are solved outside the critical point only */
  bool probed_below, probed_above; /* scans since the search began met winds below and above the held value */
  int newton_steps;                /* since the search began */
  double residual;                 /* of the kept wind */
};

/* Present value of a held kind in the units of a row's target, from the kept wind; NaN if it has none. */
double lxg_wind_kept_value(const struct lxg_wind_solver *solver, int kind);

/* Solves the global problem for two rows from the kept wind (or from `now` when `fresh`), on an adapted mesh; on LXG_OK
 * the result is kept. `residual` is the tolerance off the mesh. */
enum lxg_status lxg_wind_newton(struct lxg_wind_solver *solver, const struct wind_row row[2], double residual,
                                bool fresh);

/* Continuation from the kept wind to two rows, in as many steps as it takes. */
enum lxg_status lxg_wind_walk(struct lxg_wind_solver *solver, const struct wind_row row[2]);

/* Row of a held quantity. */
struct wind_row lxg_wind_row_of(const struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold);

/* A first wind at launch radius exp(ln_rc) with one held row, by the scan of wind_cold.c; it is kept. Of several the one nearest
 * to the iron bump is preferred, then the one with the smallest rate. LXG_NO_SOLUTION if the scan sees none. */
enum lxg_status lxg_wind_cold(struct lxg_wind_solver *solver, double ln_rc, const struct wind_row *row);

/* Unknowns of a model: ln v, ln T, and lambda where it varies. */
static inline size_t wind_unknowns(const struct wind_constants *constants) {
  return constants->model.burning.law == LXG_BURNING_NONE ? 2 : 3;
}

/* Turns the problem just set into the one with a burning base (wind_burning.c). */
void lxg_wind_burning_extend(struct wind_problem *problem);

/* Heat of burning per ln r, 4 pi r^3 rho eps/L_Edd, and (unless NULL) its partials; 0 without burning. */
enum lxg_status lxg_wind_burning_rate(const struct wind_constants *constants, const struct wind_place *at,
                                      double *rate, double partial[WIND_ARGUMENTS]);

/* A first burning wind with luminosity `base` (in L_Edd) at R_0; it is kept. */
enum lxg_status lxg_wind_burning_first(struct lxg_wind_solver *solver, double base);

/* The wind at that launch radius and critical temperature, without a scan; it is kept. */
enum lxg_status lxg_wind_cold_at(struct lxg_wind_solver *solver, double ln_rc, double ln_tc);

/* Any wind at that launch radius, the one whose critical temperature is nearest to the iron bump first; it is kept. */
enum lxg_status lxg_wind_cold_any(struct lxg_wind_solver *solver, double ln_rc);

/* Every number of the kept wind (wind_result.c). */
enum lxg_status lxg_wind_result(const struct lxg_wind_solver *solver, struct lxg_wind *wind);

/* dlnv/dlnr at the critical point (accelerating root); NaN if there is none. */
double lxg_wind_critical_slope(const struct wind_local *local);

#endif
