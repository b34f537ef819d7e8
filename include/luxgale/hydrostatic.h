/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * hydrostatic.h - a burning envelope at rest: what is left on the star when its wind has stopped, or without any wind.
 *
 *   (H1) dP/dr = -G M rho/r^2,   P = rho c_T^2 + a T^4/3
 *   (H2) -dlnT/dlnr = 3 kappa rho L/(16 pi a c r T^4)        (W3)
 *   (H3) dL/dlnr = 4 pi r^3 rho eps,   L(R_0) = 0            (W5 at rest)
 *   (H4) at R_ph: L = 4 pi R_ph^2 sigma T^4 and P_gas = (2/3)(G M/R_ph^2)(1 - Gamma)/kappa,  Gamma = kappa L/(4 pi G M c)
 * with the opacity, gas, burning and porosity of the wind model. One number selects an envelope. The sequence in
 * envelope mass runs from the largest envelope that can be at rest, where the iron bump brings Gamma near one (a fold, where
 * the winds begin), to the smallest one that burns steadily: there the mass has its minimum and the star turns off. Radiative transport only, no degeneracy, no gravity of the envelope itself.
 *
 * Call order: lxg_hydrostatic_solver_create -> lxg_hydrostatic_trace -> lxg_hydrostatic_family_free,
 * lxg_hydrostatic_solver_destroy. One solver a thread.
 */
#ifndef LUXGALE_HYDROSTATIC_H
#define LUXGALE_HYDROSTATIC_H

#include "luxgale/status.h"
#include "luxgale/wind.h"

#include <stddef.h>

/* One envelope. */
struct lxg_hydrostatic {
  double envelope_mass;       /* between R_0 and R_ph [g] */
  double luminosity;          /* at the photosphere [erg s^-1] */
  double nuclear_luminosity;  /* int eps dm [erg s^-1]: the same but for the mesh error and a luminous core */
  double radius;              /* R_ph [cm] */
  double temperature;         /* at R_ph [K] */
  double photosphere_density; /* [g cm^-3] */
  double photosphere_opacity; /* effective [cm^2 g^-1] */
  double base_temperature;    /* at R_0 [K] */
  double base_density;        /* at R_0 [g cm^-3] */
  double gamma_max;           /* largest kappa L/(4 pi G M c) in the envelope */
  double beta_min;            /* smallest gas pressure over total pressure */
  double residual;            /* largest relative residual of (H1)-(H3) off the mesh */
  size_t mesh_points;         /* mesh intervals */
};

/* How a traced sequence ends. */
enum lxg_hydrostatic_end {
  LXG_HYDROSTATIC_FOLD,    /* hot end: smallest envelope mass, turn-off; cool end: largest mass at rest */
  LXG_HYDROSTATIC_REACHED, /* the stated limit */
  LXG_HYDROSTATIC_LOST /* no further envelope was found: at the cool end radiation pressure lifts the photosphere */
};

/* A traced sequence, from the largest envelope to the turn-off. */
struct lxg_hydrostatic_family {
  size_t count;
  struct lxg_hydrostatic *envelope; /* [count], envelope mass falling */
  enum lxg_hydrostatic_end cool_end, hot_end;
  int newton_steps; /* spent in all */
};

struct lxg_hydrostatic_options {
  size_t stages;             /* collocation points an interval, 3..8 */
  size_t capacity;           /* mesh intervals at most */
  double newton_tolerance;   /* last correction of the unknowns and parameters */
  double residual_tolerance; /* relative residual off the mesh */
  double tolerance;          /* linear interpolation error between neighbours of a sequence, in logarithms */
  size_t count_most;         /* envelopes at most, in each direction */
};
struct lxg_hydrostatic_options lxg_hydrostatic_options_default(void);

/* Where the sequence ends at its cool side: at the first envelope cooler or more massive than this. */
struct lxg_hydrostatic_limit {
  double temperature;   /* of the photosphere [K] */
  double envelope_mass; /* [g]; infinity: not limited */
};

struct lxg_hydrostatic_solver; /* opaque */

/* Solver for a model, which is copied (not its opacity). NULL options: defaults. LXG_INPUT "hydrostatic-burning" for a model
 * that does not burn: nothing would select its envelopes. */
enum lxg_status lxg_hydrostatic_solver_create(const struct lxg_wind_model *model,
                                              const struct lxg_hydrostatic_options *options,
                                              struct lxg_hydrostatic_solver **solver,
                                              struct lxg_error *error);
void lxg_hydrostatic_solver_destroy(struct lxg_hydrostatic_solver *solver);

/* The sequence from the limit to the turn-off. When it reaches the limit the last envelope before it is solved for the limit
 * itself. LXG_NO_SOLUTION "hydrostatic-none" when no envelope is found. */
enum lxg_status lxg_hydrostatic_trace(struct lxg_hydrostatic_solver *solver,
                                      const struct lxg_hydrostatic_limit *limit,
                                      struct lxg_hydrostatic_family *family, struct lxg_error *error);
void lxg_hydrostatic_family_free(struct lxg_hydrostatic_family *family);

/* One row of an envelope's structure. */
struct lxg_hydrostatic_row {
  double radius;      /* [cm] */
  double temperature; /* [K] */
  double density;     /* [g cm^-3] */
  double luminosity;  /* [erg s^-1] */
};

/* Structure of the envelope the solver keeps (the last one solved), R_0 to R_ph, at the mesh nodes; up to `capacity` rows.
 * Returns how many there are. */
size_t lxg_hydrostatic_structure(const struct lxg_hydrostatic_solver *solver,
                                 struct lxg_hydrostatic_row rows[], size_t capacity);

#endif
