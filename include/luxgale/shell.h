/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * shell.h - thin shells swept up where faster later gas overtakes slower earlier gas.
 *
 * Gas leaves the radius r_s at time tau with speed v(tau) and rate Mdot(tau) and coasts: its ballistic distance
 * from r_s at time t is x(tau, t) = v(tau) (t - tau). Where it meets slower gas both stick (momentum is
 * conserved, energy radiated). A shell at time t holds the gas that left between tau_s and tau_f, so with M(tau)
 * and P(tau) the ejected mass and momentum
 *   (S1) mass = M(tau_f) - M(tau_s),  momentum = P(tau_f) - P(tau_s),  speed = momentum/mass
 *   (S2) int_tau_s^tau_f Mdot (x - X) dtau = 0: the centre of mass of sticking gas moves as if it had not stuck
 *   (S3) x(tau_s, t) = x(tau_f, t) = X, unless a jump, the start or the end of the history is swept up
 * (sticky-particle dynamics, E, Rykov & Sinai 1996, Commun. Math. Phys. 177, 349, from memory). All shells of an
 * epoch are the straight pieces of the lower convex hull of int x dM over M; nothing is integrated in time, so
 * mass and momentum are conserved to rounding and shells form, grow and merge without events. v and Mdot are
 * linear between samples (the integrals are then exact); two samples at one time make a jump.
 *
 * The first shell forms at the first caustic, t_c = min(tau + v/v') over rising v, or at once at a jump upward.
 */
#ifndef LUXGALE_SHELL_H
#define LUXGALE_SHELL_H

#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

struct lxg_shell_history; /* opaque: samples and their running integrals; read by any number of threads */

/* One shell at one time. */
struct lxg_shell_state {
  double time;         /* [s] */
  double radius;       /* r_s + X [cm] */
  double speed;        /* [cm s^-1] */
  double mass;         /* [g] */
  double momentum;     /* [g cm s^-1] */
  double column;       /* mass/(4 pi radius^2) [g cm^-2] */
  double first, last;  /* tau_s, tau_f: departure times of the oldest and youngest gas in it [s] */
  double wind_speed;   /* of the gas arriving from behind [cm s^-1]; 0 if none arrives */
  double power_behind; /* energy of motion lost where that gas arrives [erg s^-1] */
  double power_ahead;  /* the same where the shell runs into older gas [erg s^-1] */
  double dissipated;   /* energy of motion lost by its gas since departure [erg] */
};

/* When the first shell forms. */
struct lxg_shell_onset {
  bool forms;
  double time;             /* t_c [s] */
  double radius;           /* [cm] */
  double departure;        /* tau of the gas that is overtaken first [s] */
  const char *reason;      /* why none forms (static text); "" if one does */
  const char *reason_code; /* "shell-no-overtaking", "shell-after-end"; "" if one does */
};

/* Copies `count` >= 2 samples: time[] [s] not falling, at most two samples at one time; speed[] [cm s^-1] > 0;
 * rate[] [g s^-1] >= 0 and not all 0; `radius` r_s [cm] >= 0. LXG_INPUT ("shell-count", "shell-time",
 * "shell-speed", "shell-rate", "shell-radius") with the row named; LXG_MEMORY. */
enum lxg_status lxg_shell_create(size_t count, const double time[], const double speed[], const double rate[],
                                 double radius, struct lxg_shell_history **history, struct lxg_error *error);
void lxg_shell_destroy(struct lxg_shell_history *history);

/* First overtaking up to time `end` [s]; end = infinity asks whether any ever happens. Gas that leaves with zero
 * rate counts for nothing. */
void lxg_shell_first(const struct lxg_shell_history *history, double end, struct lxg_shell_onset *onset);

/* All shells at time t, outermost first; the first `capacity` of them are written, *count is how many there are.
 * Shells whose gas left within 1e-6 of a sampling interval are not seen yet. t before the first sample: none.
 * LXG_INPUT "shell-time" if t is not finite; LXG_MEMORY. */
enum lxg_status lxg_shell_at(const struct lxg_shell_history *history, double t,
                             struct lxg_shell_state state[], size_t capacity, size_t *count,
                             struct lxg_error *error);

/* The most massive shell at each of `count` times. exists[i] false: none at that time (state[i].time is set, the
 * rest 0). */
enum lxg_status lxg_shell_track(const struct lxg_shell_history *history, size_t count, const double time[],
                                struct lxg_shell_state state[], bool exists[], struct lxg_error *error);

/* Mass [g] of the gas that left before t, by speed: bins of edge[0..bins] [cm s^-1] (rising). before[]: speeds at
 * departure; after[]: with the shells' gas at the shells' speeds. Gas at exactly the last edge belongs to the
 * last bin; outside[0], [1]: mass below the first and above the last edge (before); outside[2], [3]: the same
 * after. dM/dv is mass over width. LXG_INPUT "shell-bins". */
enum lxg_status lxg_shell_distribution(const struct lxg_shell_history *history, double t, size_t bins,
                                       const double edge[], double before[], double after[],
                                       double outside[4], struct lxg_error *error);

/* Mass [g], momentum [g cm s^-1] and energy of motion [erg] of all gas that left before t. */
void lxg_shell_total(const struct lxg_shell_history *history, double t, double *mass, double *momentum,
                     double *energy);

#endif
