/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * star.h - the gravitating body under the wind and the limits that follow from mass and radius alone.
 */
#ifndef LUXGALE_STAR_H
#define LUXGALE_STAR_H

#include "luxgale/composition.h"
#include "luxgale/status.h"

#include <stdbool.h>

/* Mass and radius; everything else is derived from them and from the envelope's composition. */
struct lxg_star {
  double gm;     /* G M [cm^3 s^-2] */
  double radius; /* R_0 [cm]: inside it nothing is computed */
};

/* Largest mass for which the white-dwarf radius exists: M3 = 5.816/mu_e^2 with mu_e = 2 [Msun]. */
double lxg_star_dwarf_limit_msun(void);

/* White-dwarf radius [cm] for a mass [g]: Nauenberg 1972, ApJ 175, 417, R = 0.02251/mu_e Rsun (1 - n^(4/3))^(1/2)
 * n^(-1/3), n = M/M3, mu_e = 2 (constants from memory). LXG_INPUT outside (0, M3). */
enum lxg_status lxg_star_dwarf_radius(double mass, double *radius, struct lxg_error *error);

/* L_Edd = 4 pi G M c / kappa_e, kappa_e = 0.2 (1 + X) [erg s^-1]. */
double lxg_star_eddington_luminosity(const struct lxg_star *star, const struct lxg_composition *composition);

/* (2 G M / R_0)^(1/2) [cm s^-1]. */
double lxg_star_escape_speed(const struct lxg_star *star);

/* Photon-tiring rate L R_0/(G M) [g s^-1] of a luminosity [erg s^-1] (Owocki & Gayley 1997). */
double lxg_star_tiring_rate(const struct lxg_star *star, double luminosity);

/* Envelope mass 4 pi R_0^4 P/(G M) [g] whose weight is the pressure P [dyn cm^-2] at the base (thin shell). */
double lxg_star_envelope_mass(const struct lxg_star *star, double pressure);

struct lxg_node;

/* Reads the section `star` of a case: mass, and a radius or `white-dwarf` (the default; then `*dwarf` is true and the radius
 * follows from the mass). LXG_INPUT with the place in the file. */
enum lxg_status lxg_star_read(struct lxg_node *section, struct lxg_star *star, bool *dwarf,
                              struct lxg_error *error);

#endif
