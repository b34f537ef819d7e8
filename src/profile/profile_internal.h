/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * profile_internal.h - what the files of the profile module share: the checked problem and the two formal
 * integrals.
 */
#ifndef LUXGALE_PROFILE_INTERNAL_H
#define LUXGALE_PROFILE_INTERNAL_H

#include "luxgale/profile.h"

enum { LXG_PROFILE_GAUSS = 8 };

/* Nodes in (0, 1) and weights of the eight-point Gauss rule. */
extern const double lxg_profile_node[LXG_PROFILE_GAUSS];
extern const double lxg_profile_weight[LXG_PROFILE_GAUSS];

/* One problem, checked; the first failure of the law is kept in `status`. */
struct lxg_profile_problem {
  struct lxg_profile_flow flow;
  struct lxg_profile_line line;
  struct lxg_profile_core core;
  struct lxg_profile_settings settings;
  bool decelerates;
  double inner_speed; /* v(R) [cm s^-1] */
  double outer_speed; /* v(outer) [cm s^-1] */
  double largest;     /* largest v [cm s^-1] */
  enum lxg_status status;
  size_t nodes;        /* radial nodes of a decelerating flow */
  double *node_radius; /* [nodes] */
  double *node_speed;  /* [nodes] */
};

/* Line at one point of the flow. */
struct lxg_profile_point {
  double speed;
  double sigma;
  double rate;      /* chi [s^-1] */
  double depth;     /* tau_0 */
  double source;    /* S; 0 for a thin recombination line */
  double thin;      /* e rho^2 r/v: tau_0 S of a thin recombination line; 0 else */
  double beta_core; /* resonance only */
};

/* Gas and line at a radius; a failing law sets problem->status and gives an empty point. */
struct lxg_profile_point lxg_profile_at(struct lxg_profile_problem *problem, double radius);

/* Speed only. */
double lxg_profile_speed(struct lxg_profile_problem *problem, double radius);

/* What the line adds to the continuum flux at approach velocity x, along the resonance surface. */
double lxg_profile_along_surface(struct lxg_profile_problem *problem, double x);
/* The same for a thin recombination line in any flow; needs the radial nodes. */
double lxg_profile_thin(struct lxg_profile_problem *problem, double x);

/* The same ray by ray. */
double lxg_profile_by_rays(struct lxg_profile_problem *problem, double x);

#endif
