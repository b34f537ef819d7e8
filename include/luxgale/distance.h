/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * distance.h - distance of the star as a probability distribution over positive distances.
 *
 * Three ways to state it: a distance with error, a distance modulus with error, a parallax with error. A parallax is
 * not inverted: the distance follows from its posterior under a space density that falls exponentially (Bailer-Jones
 * 2015, PASP 127, 994; constant-volume-density prior with exponential cut, from memory),
 *   P(r) ~ r^2 exp(-r/length) exp(-(parallax - 1/r)^2/(2 error^2)),  r > 0,
 * which is proper for any parallax, also negative or poor ones.
 *
 * Call order: one of the three init functions, then quantiles at will (immutable, any number of threads).
 */
#ifndef LUXGALE_DISTANCE_H
#define LUXGALE_DISTANCE_H

#include "luxgale/status.h"

enum lxg_distance_kind { LXG_DISTANCE_GIVEN, LXG_DISTANCE_MODULUS, LXG_DISTANCE_PARALLAX };

enum { LXG_DISTANCE_NODES = 1025 }; /* posterior nodes: quantiles good to 1e-5 of the width or better */

/* A distance distribution; plain, caller-owned, nothing to free. */
struct lxg_distance {
  enum lxg_distance_kind kind;
  double value;                          /* as given: [pc], [mag] or [mas] */
  double error;                          /* one sigma, same unit; 0 for an exact distance or modulus */
  double length;                         /* parallax only: scale length of the space density [pc] */
  double mode;                           /* most probable distance [pc] */
  double ln_low, ln_step;                /* parallax only: grid of ln(r/pc) */
  double density[LXG_DISTANCE_NODES];    /* parallax only: density per unit ln r, normalised */
  double cumulative[LXG_DISTANCE_NODES]; /* parallax only: from 0 to 1 */
};

/* Scale length used when the user states none [pc]: 1350 pc, Astraatmadja & Bailer-Jones 2016, ApJ 833, 119 (from memory). */
double lxg_distance_default_length_pc(void);

/* Gaussian in distance [pc] restricted to positive distances. LXG_INPUT "distance-value" unless value > 0, error >= 0. */
enum lxg_status lxg_distance_init_given(double value_pc, double error_pc, struct lxg_distance *distance,
                                        struct lxg_error *error);

/* Gaussian in distance modulus, 5 log10(d/10 pc) [mag], extinction not included. LXG_INPUT "distance-value". */
enum lxg_status lxg_distance_init_modulus(double value_mag, double error_mag, struct lxg_distance *distance,
                                          struct lxg_error *error);

/* Posterior of a parallax [mas], zero-point offset already removed, any sign. LXG_INPUT "distance-value" unless the
 * value is finite and error > 0, "distance-length" unless length > 0. */
enum lxg_status lxg_distance_init_parallax(double value_mas, double error_mas, double length_pc,
                                           struct lxg_distance *distance, struct lxg_error *error);

/* Distance [cm] below which lies the probability 0 < p < 1; feeding a uniform deviate makes a random draw. Always > 0. */
double lxg_distance_quantile(const struct lxg_distance *distance, double p);

/* 5 log10(d/10 pc) [mag] of a distance [cm] > 0, and back. */
double lxg_distance_modulus(double distance_cm);
double lxg_distance_from_modulus(double modulus_mag);

#endif
