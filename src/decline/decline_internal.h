/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decline_internal.h - what the files of the decline module share.
 */
#ifndef LUXGALE_DECLINE_INTERNAL_H
#define LUXGALE_DECLINE_INTERNAL_H

#include "luxgale/decline.h"

/* Numbers interpolated along the path. Logarithms; the terminal speed as its square [1e8 cm/s]^2; those from PATH_RATE on
 * exist with a wind only. */
enum {
  PATH_MASS,
  PATH_LUMINOSITY,
  PATH_LIGHT,
  PATH_NUCLEAR,
  PATH_RADIUS,
  PATH_TEMPERATURE,
  PATH_BASE,
  PATH_RATE,
  PATH_SPEED,
  PATH_TERMINAL,
  PATH_DEPTH,
  PATH_COUNT
};

/* One steady state on the path. */
struct path_node {
  double arc;
  double q[PATH_COUNT];
};

/* A smooth stretch: winds, or envelopes at rest, in the order of time. */
struct path_segment {
  enum lxg_decline_phase phase;
  struct path_node *node; /* [count] */
  size_t count;
};

/* The whole path; either stretch may be empty. */
struct path {
  struct path_segment wind, rest;
};

/* What the march needs to know of the star. */
struct path_star {
  double escape_energy; /* G M/R_0 [erg g^-1] */
  double heat_per_gram; /* X Q [erg g^-1] */
};

/* Numbers at the fraction u of interval i of a segment, and (unless NULL) the slope of ln M_env against u. */
void lxg_decline_path_at(const struct path_segment *segment, size_t i, double u, double q[PATH_COUNT],
                         double *mass_slope);

/* Stretches from a family of winds, thick to thin, and from a sequence at rest; nodes closer than rounding are merged. */
enum lxg_status lxg_decline_path_wind(const struct lxg_family *family, struct path_segment *segment);
enum lxg_status lxg_decline_path_rest(const struct lxg_hydrostatic_family *family,
                                      struct path_segment *segment);
void lxg_decline_path_free(struct path *path);

/* Drops what comes before the first of: the largest mass (seen from the thin end), a mass, a temperature. Returns true if the
 * start was found on this stretch. */
bool lxg_decline_path_start(struct path_segment *segment, int quantity, double value);

/* State from the numbers of a node: everything but time, sums and light. */
void lxg_decline_state_of(const struct path_star *star, enum lxg_decline_phase phase,
                          const double q[PATH_COUNT], struct lxg_decline_state *state);

/* Marches in time along the path; fills states, sums and the end. */
enum lxg_status lxg_decline_march(const struct path *path, const struct path_star *star,
                                  const struct lxg_decline_options *options, struct lxg_decline *decline);

/* Magnitudes of every state, decline times and slopes. */
enum lxg_status lxg_decline_photometry(const struct lxg_composition *composition,
                                       const struct lxg_decline_options *options, struct lxg_decline *decline,
                                       struct lxg_error *error);

#endif
