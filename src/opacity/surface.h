/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * surface.h - ln kappa as a C1 bicubic surface over (log T, log R), with its policy beyond the known nodes.
 */
#ifndef LUXGALE_OPACITY_SURFACE_H
#define LUXGALE_OPACITY_SURFACE_H

#include "luxgale/opacity_table.h"

/* One axis with a fast search: `bin` holds the interval in which each bin of the finest step starts. */
struct surface_axis {
  size_t nodes;
  double *node;    /* [nodes], dex */
  double *inverse; /* [nodes - 1], 1/step */
  double first, per_bin;
  size_t bins;
  unsigned short *bin; /* [bins] */
};

/* A cell: ln kappa = sum c[4 i + j] x^i y^j, x and y from 0 to 1 along log T and log R. */
struct surface_cell {
  double c[16];
};

/* How much of a node is the table's: 1 known, 0 the formula's, between in the join. */
struct opacity_surface {
  struct surface_axis t, r;
  struct surface_cell *cell; /* [t.nodes - 1][r.nodes - 1] */
  double *known;             /* [t.nodes][r.nodes] */
  unsigned char *kind;       /* [cells], enum surface_kind */
  enum lxg_opacity_outside outside;
};

enum surface_kind {
  SURFACE_WHOLE,  /* all corners known */
  SURFACE_JOIN,   /* some corners belong to the join, none to the formula alone */
  SURFACE_MIXED,  /* some corners are the formula's: the surface fades into the formula */
  SURFACE_OUTSIDE /* nothing of the table here */
};

/* What a surface says at a point. */
struct surface_value {
  double ln_kappa;
  double by_t, by_r;               /* d ln kappa per dex of log T and of log R */
  double weight;                   /* of the surface against the formula: 1, 0, or between in a mixed cell */
  double weight_by_t, weight_by_r; /* per dex */
  double table;                    /* share that came from known nodes */
};

/* Builds the surface of a validated grid. `formula` gives log10 kappa at a node and fills what the table does not know (join); may be
 * NULL for the other policies. LXG_MEMORY. */
enum lxg_status lxg_opacity_surface_init(struct opacity_surface *surface, const struct lxg_opacity_grid *grid,
                                         enum lxg_opacity_outside outside, double width,
                                         const struct lxg_opacity *formula, struct lxg_error *error);

/* False where the policy is to refuse. */
bool lxg_opacity_surface_at(const struct opacity_surface *surface, double log_t, double log_r,
                            struct surface_value *value);

/* Frees what the surface holds; an all-zero surface is fine. */
void lxg_opacity_surface_free(struct opacity_surface *surface);

/* ---- surface_fill.c: the grid with its margins ---- */

/* A grid grown by the margins of the policy, without holes. */
struct surface_nodes {
  size_t nt, nr;
  double *t, *r; /* axes, dex */
  double *f;     /* [nt][nr] log10 kappa */
  double *known; /* [nt][nr] */
};

enum lxg_status lxg_opacity_surface_fill(struct surface_nodes *nodes, const struct lxg_opacity_grid *grid,
                                         enum lxg_opacity_outside outside, double width,
                                         const struct lxg_opacity *formula, struct lxg_error *error);
void lxg_opacity_surface_nodes_free(struct surface_nodes *nodes);

#endif
