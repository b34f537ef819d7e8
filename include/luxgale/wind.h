/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind.h - the steady, spherical, radiation-driven, optically thick wind.
 *
 * Equations (docs/physics.md): mass (W1), energy (W2), radiative diffusion (W3), momentum (W4); ideal gas and
 * radiation; regular passage through the critical point v = c_T; photosphere where 4 pi R^2 sigma T^4 = L and
 * kappa rho R = 8/3; beyond it gas coasts in a diluted radiation field to the terminal speed. Two held quantities select
 * one wind. With a burning base (W5) dLambda/dlnr = 4 pi r^3 rho eps below r_c, and Lambda means its value outside;
 * L(R_0) = 0 is then one of the two held quantities. Method: global collocation with the critical radius, the rate and the energy rate as unknowns (bvp.h).
 *
 * Call order: lxg_wind_solver_create -> lxg_wind_solve (cold) or lxg_wind_follow (from the last solution) ->
 * lxg_wind_profile -> lxg_wind_solver_destroy. One solver a thread.
 */
#ifndef LUXGALE_WIND_H
#define LUXGALE_WIND_H

#include "luxgale/burning.h"
#include "luxgale/composition.h"
#include "luxgale/opacity.h"
#include "luxgale/porosity.h"
#include "luxgale/star.h"
#include "luxgale/status.h"
#include "luxgale/units.h"

#include <stdbool.h>
#include <stddef.h>

/* What defines the equations. The opacity must outlive every solver made from the model. */
struct lxg_wind_model {
  struct lxg_star star;
  struct lxg_composition composition;
  const struct lxg_opacity *opacity;
  struct lxg_porosity porosity;
  struct lxg_burning burning; /* zero-initialised: no burning */
};

/* quantity, name in a case, unit here */
#define LXG_HELD_LIST(X)                                                                                     \
  X(LXG_HELD_BASE_TEMPERATURE, base_temperature, "K")                                                        \
  X(LXG_HELD_BASE_LUMINOSITY, base_luminosity, "erg s^-1")                                                   \
  X(LXG_HELD_LAUNCH_RADIUS, launch_radius, "cm")                                                             \
  X(LXG_HELD_PHOTOSPHERE_LUMINOSITY, photosphere_luminosity, "erg s^-1")                                     \
  X(LXG_HELD_PHOTOSPHERE_TEMPERATURE, photosphere_temperature, "K")                                          \
  X(LXG_HELD_PHOTOSPHERE_RADIUS, photosphere_radius, "cm")                                                   \
  X(LXG_HELD_TERMINAL_SPEED, terminal_speed, "cm s^-1")                                                      \
  X(LXG_HELD_MASS_LOSS_RATE, mass_loss_rate, "g s^-1")                                                       \
  X(LXG_HELD_ENERGY_RATE, energy_rate, "erg s^-1")                                                           \
  X(LXG_HELD_ENVELOPE_MASS, envelope_mass, "g")

enum lxg_held {
#define LXG_HELD_ENUM(name, key, unit) name,
  LXG_HELD_LIST(LXG_HELD_ENUM)
#undef LXG_HELD_ENUM
      LXG_HELD_COUNT
};

/* Name of a held quantity as a case spells it; NULL beyond the list. */
const char *lxg_held_name(enum lxg_held quantity);

/* One held quantity. Value in CGS; energy_rate may be of any sign, every other quantity is positive. */
struct lxg_wind_hold {
  enum lxg_held quantity;
  double value;
};

/* Outcome of a search for a wind: name, stable code, sentence. */
#define LXG_WIND_REASON_LIST(X)                                                                              \
  X(LXG_WIND_SOLVED, "solved", "a steady wind was found")                                                    \
  X(LXG_WIND_BELOW_THIN_END, "below-thin-end",                                                               \
    "the family of winds ends where the critical point becomes transparent, before it reaches the held "     \
    "value")                                                                                                 \
  X(LXG_WIND_ABOVE_FOLD, "above-fold",                                                                       \
    "the held value lies beyond the turning point of the family of winds")                                   \
  X(LXG_WIND_ENERGY_LIMITED, "energy-limited",                                                               \
    "lifting the gas would take more than the energy supplied (photon tiring)")                              \
  X(LXG_WIND_STAGNATES, "stagnates", "the flow falls back before it has left the star")                      \
  X(LXG_WIND_PHOTOSPHERE_INSIDE, "photosphere-inside",                                                       \
    "the photosphere would lie inside the critical point")                                                   \
  X(LXG_WIND_OPACITY_EDGE, "opacity-edge", "the wind leaves the range of the opacity table")                 \
  X(LXG_WIND_NO_CRITICAL_POINT, "no-critical-point", "radiation and pressure nowhere balance gravity")       \
  X(LXG_WIND_BEYOND_LIMIT, "beyond-limit",                                                                   \
    "the family of winds goes on beyond the stated limit of the search")                                     \
  X(LXG_WIND_NOT_FOUND, "not-found", "the search ended without a wind and without a proof that there is none")

enum lxg_wind_reason {
#define LXG_WIND_REASON_ENUM(name, code, text) name,
  LXG_WIND_REASON_LIST(LXG_WIND_REASON_ENUM)
#undef LXG_WIND_REASON_ENUM
      LXG_WIND_REASON_COUNT
};

/* Stable code and sentence of a reason; never NULL. */
const char *lxg_wind_reason_code(enum lxg_wind_reason reason);
const char *lxg_wind_reason_text(enum lxg_wind_reason reason);

/* One place of a wind. */
struct lxg_wind_site {
  double radius;        /* [cm] */
  double temperature;   /* [K] */
  double density;       /* [g cm^-3] */
  double speed;         /* [cm s^-1] */
  double luminosity;    /* local diffusive luminosity [erg s^-1] */
  double opacity;       /* effective, porosity included [cm^2 g^-1] */
  double optical_depth; /* kappa rho r at this place, the local measure that the photosphere condition uses */
};

/* A solved wind. NaN marks a number that the physics does not give. */
struct lxg_wind {
  enum lxg_wind_reason reason;  /* LXG_WIND_SOLVED, or why there is none (then the numbers are NaN) */
  double value[LXG_HELD_COUNT]; /* all quantities that can be held, CGS */
  struct lxg_wind_site base;    /* at R_0 */
  struct lxg_wind_site
      critical; /* at v = c_T; optical_depth is the integral of kappa rho dr out to R_ph, plus 2/3 */
  struct lxg_wind_site photosphere;
  double
      escape_radius; /* where the flow passes the local escape speed [cm]; NaN if it does not within 1000 R_ph */
  double luminosity_infinity; /* what reaches infinity as light [erg s^-1] */
  double lifting_rate;        /* Mdot G M/R_0 [erg s^-1] */
  double kinetic_rate;        /* Mdot v_inf^2/2 [erg s^-1] */
  double
      nuclear_luminosity;  /* heat of burning between R_0 and r_c, int eps dm [erg s^-1]; 0 without burning */
  double flow_time;        /* from r_c to R_ph [s] */
  double diffusion_time;   /* radiation energy between r_c and R_ph over L_ph [s] */
  double tiring_number;    /* Mdot G M/R_0 over L(R_0) and the heat of burning */
  double wind_performance; /* Mdot v_inf c/L_ph */
  double gamma_max;        /* largest kappa L/(4 pi G M c) along the wind */
  double gamma_max_radius; /* where [cm] */
  double gamma_max_temperature; /* gas temperature there [K] */
  double mach_min, mach_max;    /* v/c_T between R_0 and 1000 R_ph */
  double beta_min, beta_max;    /* gas pressure over total pressure between R_0 and R_ph */
  double
      flux_ratio_max; /* largest L/(4 pi r^2 c a T^4) inside R_ph: 1 would be light that streams freely, 1/4 is the photosphere */
  double table_share; /* share of the mesh whose opacity came from a table */
  double residual;    /* largest relative residual of (W1)-(W4) off the mesh */
  size_t mesh_points; /* mesh intervals */
  int newton_steps;   /* Newton steps of the whole search */
};

/* A result without a wind: all numbers NaN, the reason as given. */
void lxg_wind_none(struct lxg_wind *wind, enum lxg_wind_reason reason);

/* Tunable numbers of the solver. */
struct lxg_wind_options {
  size_t stages;             /* collocation points an interval, 3..8 */
  size_t capacity;           /* mesh intervals at most */
  double newton_tolerance;   /* last correction of ln v, ln T and the parameters */
  double residual_tolerance; /* relative residual off the mesh */
};
struct lxg_wind_options lxg_wind_options_default(void);

struct lxg_wind_solver; /* opaque: mesh, last wind, workspace. One a thread. */

/* Solver for a model, which is copied (not its opacity: it must outlive the solver). NULL options: defaults. */
enum lxg_status lxg_wind_solver_create(const struct lxg_wind_model *model,
                                       const struct lxg_wind_options *options,
                                       struct lxg_wind_solver **solver, struct lxg_error *error);
void lxg_wind_solver_destroy(struct lxg_wind_solver *solver);
const struct lxg_wind_model *lxg_wind_solver_model(const struct lxg_wind_solver *solver);

/* With `outer_only` the cold starts that follow leave out everything inside the critical point: a held launch radius does not
 * need it, and a super-Eddington porous wind may have no static inside at all. Base quantities and the envelope mass are
 * then NaN. Off at first. */
void lxg_wind_solver_outer_only(struct lxg_wind_solver *solver, bool outer_only);

/* True if the launch radius is held and nothing inside it: then the winds need no inside. */
bool lxg_wind_holds_outer(const struct lxg_wind_hold hold[], size_t count);

/* LXG_INPUT when two held quantities are out of range or are the same one ("hold-value", "hold-dependent", ...). */
enum lxg_status lxg_wind_holds_check(const struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                     struct lxg_error *error);

/* Held values that no wind can have for want of energy: what reaches infinity, L + Mdot v^2/2, comes out of the energy rate, so that is
 * positive. */
bool lxg_wind_unsupplied(const struct lxg_wind_hold hold[], size_t count);

/* Any wind with one held quantity, from nothing: where a family may start. Returns as lxg_wind_solve. */
enum lxg_status lxg_wind_first(struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                               struct lxg_wind *wind, struct lxg_error *error);

/* A wind for two held quantities, from nothing. LXG_OK: wind->reason is LXG_WIND_SOLVED and the solver keeps the wind.
 * LXG_NO_SOLUTION or LXG_NOT_CONVERGED: wind->reason says why. LXG_INPUT: the two are not independent or out of range. */
enum lxg_status lxg_wind_solve(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                               struct lxg_wind *wind, struct lxg_error *error);

/* The same from the wind the solver keeps, by continuation; LXG_NOT_CONVERGED leaves that wind kept. */
enum lxg_status lxg_wind_follow(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                struct lxg_wind *wind, struct lxg_error *error);

/* Coordinates in which a family of winds is a smooth curve: ln r_c, ln Mdot, arsinh(Lambda/L_Edd), ln R_ph. */
enum { LXG_WIND_COORDINATES = 4 };

/* Coordinates of the wind the solver keeps. */
void lxg_wind_coordinates(const struct lxg_wind_solver *solver, double coordinates[LXG_WIND_COORDINATES]);

/* One step of pseudo-arclength continuation: the wind with `hold` whose coordinates, projected on `direction`, lie `length`
 * beyond those of the wind the solver keeps. Passes folds. Returns as lxg_wind_follow; a flow that stagnates beyond its
 * photosphere returns LXG_NO_SOLUTION with its structure kept. */
enum lxg_status lxg_wind_arc(struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                             const double direction[LXG_WIND_COORDINATES], double length,
                             struct lxg_wind *wind, struct lxg_error *error);

/* Sets the kept wind aside in one of the slots, and takes it back. */
enum { LXG_WIND_SLOTS = 3 };
enum lxg_status lxg_wind_mark(struct lxg_wind_solver *solver, size_t slot);
enum lxg_status lxg_wind_recall(struct lxg_wind_solver *solver, size_t slot);

/* One row of a wind's structure. */
struct lxg_wind_row {
  double radius;        /* [cm] */
  double speed;         /* [cm s^-1] */
  double temperature;   /* [K] */
  double density;       /* [g cm^-3] */
  double luminosity;    /* [erg s^-1] */
  double opacity;       /* effective [cm^2 g^-1] */
  double gamma;         /* kappa L/(4 pi G M c) */
  double optical_depth; /* from infinity */
  double mach;          /* v/c_T */
  double beta;          /* gas pressure over total pressure */
};

/* Structure of the wind the solver keeps, from R_0 through R_ph to 1000 R_ph. `*rows` is allocated (lxg_free). Indices of
 * the critical point and the photosphere are returned. LXG_NO_SOLUTION if no wind is kept. */
enum lxg_status lxg_wind_structure(const struct lxg_wind_solver *solver, struct lxg_wind_row **rows,
                                   size_t *count, size_t *critical, size_t *photosphere,
                                   struct lxg_error *error);

struct lxg_node;

/* Reads the section `hold` of a case (NULL: nothing held): at most two quantities, in the order of the case. LXG_INPUT with the
 * place: "hold-value", "hold-launch-radius" (inside the star), "hold-many" and those of reading. `l_edd` is the unit Ledd. */
enum lxg_status lxg_wind_hold_read(struct lxg_node *section, const struct lxg_star *star, double l_edd,
                                   struct lxg_wind_hold hold[2], size_t *count, struct lxg_error *error);

/* Dimension of a held quantity, in which a case and a report give it. */
enum lxg_dimension lxg_held_dimension(enum lxg_held quantity);

#endif
