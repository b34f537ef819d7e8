/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decay.h - beta-unstable isotopes of a nova envelope: half-lives and the energy each decay leaves in the gas.
 *
 * Positrons stop on the spot: their mean kinetic energy is local heat. Photons (511 keV pairs of the annihilation and, on
 * request, nuclear gamma lines) are absorbed while the envelope is opaque to them; with the time t_gamma at which a
 * freely expanding envelope has a gamma-ray depth of one, the absorbed share is 1 - exp(-(t_gamma/t)^2) (common practice for
 * supernova remnants, from memory). Neutrinos escape: their share of the decay energy is never counted.
 * All listed decays end in stable nuclei or in ones that live longer than any eruption.
 */
#ifndef LUXGALE_DECAY_H
#define LUXGALE_DECAY_H

#include "luxgale/status.h"

#include <stddef.h>

enum { LXG_DECAY_NAME_SIZE = 16 };

/* One isotope. A user may fill his own; the source of each built-in number stands beside it in decay.c. */
struct lxg_isotope {
  char name[LXG_DECAY_NAME_SIZE]; /* e.g. "18F"; for messages */
  double mass_number;             /* A [atomic masses per nucleus], > 0 */
  double half_life;               /* [s], > 0 */
  double positrons;               /* beta-plus decays per decay, 0 to 1; the rest are electron captures */
  double positron_mev;            /* mean kinetic energy of a positron [MeV], >= 0 */
  double gamma_mev;               /* nuclear gamma lines per decay, annihilation not included [MeV], >= 0 */
};

/* What happens to the photons of a decay. */
struct lxg_decay_photons {
  double
      gamma_time; /* t_gamma [s] after the mixture was made: 0 = all photons escape, INFINITY = all are absorbed */
  int lines;      /* 1: nuclear gamma lines heat as the annihilation photons do; 0: they are left out */
};

/* Number of built-in isotopes, and the i-th one (NULL beyond the end): 13N 14O 15O 17F 18F 22Na 7Be. */
size_t lxg_decay_count(void);
const struct lxg_isotope *lxg_decay_isotope(size_t index);

/* Built-in isotope by name; NULL if there is none. */
const struct lxg_isotope *lxg_decay_find(const char *name);

/* Range check of a user-defined isotope; LXG_INPUT "isotope-..." with the offending field. */
enum lxg_status lxg_decay_check(const struct lxg_isotope *isotope, struct lxg_error *error);

/* Heat per decay [erg] at `age` >= 0 [s]. */
double lxg_decay_heat(const struct lxg_isotope *isotope, const struct lxg_decay_photons *photons, double age);

/* Heating rate [erg s^-1] of a mass [g] of the isotope (its mass at age 0) at `age` >= 0 [s] and, unless NULL, its exact time
 * derivative [erg s^-2]. */
double lxg_decay_luminosity(const struct lxg_isotope *isotope, const struct lxg_decay_photons *photons,
                            double mass, double age, double *rate_of_change);

#endif
