/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * opacity.h - Rosseland mean opacity and its exact logarithmic slopes.
 *
 * An opacity source is built once for a composition and then read by any number of threads. Sources: the built-in
 * formula (`kramers`), electron scattering alone (`scattering`), the closed-form test law (`reference`), and tables on
 * a grid of log T and log R, R = rho/(T/1e6 K)^3. All are C1 in (ln rho, ln T).
 */
#ifndef LUXGALE_OPACITY_H
#define LUXGALE_OPACITY_H

#include "luxgale/composition.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* Value and slopes travel together. */
struct lxg_opacity_value {
  double kappa;        /* [cm^2 g^-1], > 0 */
  double dlnk_dlnrho;  /* d ln kappa / d ln rho at constant T */
  double dlnk_dlnt;    /* d ln kappa / d ln T at constant rho */
  double table_weight; /* share from a table: 1 inside the grid, 0 for the formula, between in the join */
};

enum lxg_opacity_formula { LXG_OPACITY_KRAMERS, LXG_OPACITY_SCATTERING, LXG_OPACITY_REFERENCE };

/* What absorbs or scatters. Names for people and for `omit`: lxg_opacity_source_name. */
enum lxg_opacity_source {
  LXG_OPACITY_SOURCE_SCATTERING, /* free electrons */
  LXG_OPACITY_SOURCE_FREE_FREE,
  LXG_OPACITY_SOURCE_BOUND_FREE, /* metals of all kinds, Z + cno */
  LXG_OPACITY_SOURCE_H_MINUS,    /* of cool gas; in series with the rest near log T = 4 */
  LXG_OPACITY_SOURCE_HYDROGEN,   /* bumps from here on */
  LXG_OPACITY_SOURCE_HELIUM,
  LXG_OPACITY_SOURCE_IRON, /* follows Z alone */
  LXG_OPACITY_SOURCE_DEEP, /* inner shells of carbon to iron, Z + cno */
  LXG_OPACITY_SOURCES
};

/* The bit of a source in a set of sources. */
#define LXG_OPACITY_BIT(source) (1u << (unsigned)(source))

/* Where the formulas are defined: everything outside is LXG_DOMAIN. */
#define LXG_OPACITY_LEAST_T 10.0    /* [K] */
#define LXG_OPACITY_MOST_T 1e12     /* [K] */
#define LXG_OPACITY_LEAST_RHO 1e-40 /* [g cm^-3] */
#define LXG_OPACITY_MOST_RHO 1e12   /* [g cm^-3] */

struct lxg_opacity; /* opaque, immutable once created */

/* "scattering", "free_free", "bound_free", "h_minus", "hydrogen", "helium", "iron", "deep"; never NULL. */
const char *lxg_opacity_source_name(enum lxg_opacity_source source);

/* The bit of the source of that name. LXG_INPUT "opacity-source" with the names there are. */
enum lxg_status lxg_opacity_source_find(const char *name, unsigned *bit, struct lxg_error *error);

/* "kramers", "scattering" or "reference". LXG_INPUT "opacity-formula" with the names there are. */
enum lxg_status lxg_opacity_formula_find(const char *name, enum lxg_opacity_formula *formula,
                                         struct lxg_error *error);

/* Builds the formula for a composition. `*opacity` is NULL on failure. Free with lxg_opacity_destroy. */
enum lxg_status lxg_opacity_create_formula(enum lxg_opacity_formula formula,
                                           const struct lxg_composition *composition,
                                           struct lxg_opacity **opacity, struct lxg_error *error);

/* The same without the sources in `omit` (LXG_OPACITY_BIT ...; only `kramers` is made of sources): experiments such as "no
 * iron". LXG_INPUT "opacity-omit" for another formula, or when nothing is left for this composition. */
enum lxg_status lxg_opacity_create_without(enum lxg_opacity_formula formula, unsigned omit,
                                           const struct lxg_composition *composition,
                                           struct lxg_opacity **opacity, struct lxg_error *error);

/* The share of each source at a point; they sum to 1. A source in series with H-minus (log T < 4) has what passes of it,
 * H-minus what it adds and what it holds back. A table and the reference law do not know their sources: `known` is the part
 * of kappa that the shares describe and sum to, 1 for the formula, 0 for a table. LXG_DOMAIN as lxg_opacity_at. */
enum lxg_status lxg_opacity_shares(const struct lxg_opacity *opacity, double ln_rho, double ln_t,
                                   double share[LXG_OPACITY_SOURCES], double *known);

/* Opacity at ln rho [g cm^-3] and ln T [K]. LXG_OK, or LXG_DOMAIN when a table refuses a point outside its grid (or
 * when an argument is not finite or outside the limits above); then `value` is untouched. Never allocates; thread-safe. */
enum lxg_status lxg_opacity_at(const struct lxg_opacity *opacity, double ln_rho, double ln_t,
                               struct lxg_opacity_value *value);

/* NULL is allowed. */
void lxg_opacity_destroy(struct lxg_opacity *opacity);

struct lxg_node;
struct lxg_files;

/* What a case says about opacity. */
struct lxg_opacity_choice {
  enum lxg_opacity_formula formula;
  unsigned omit; /* LXG_OPACITY_BIT of the sources left out */
  size_t tables; /* how many tables were read; 0: the formula alone */
  int outside;   /* enum lxg_opacity_outside of opacity_table.h; used with tables only */
};

/* "kramers", "scattering", "reference"; "join", "clamp", "refuse"; never NULL. */
const char *lxg_opacity_formula_name(enum lxg_opacity_formula formula);
const char *lxg_opacity_outside_name(int outside);

/* Reads the section `opacity` of a case (NULL: the formula `kramers`), with the tables it names, and builds what it asks for.
 * LXG_INPUT with the place ("opacity-unused" for keys that exclude one another); LXG_IO, LXG_MEMORY. */
enum lxg_status lxg_opacity_read(struct lxg_node *section, struct lxg_files *files,
                                 const struct lxg_composition *composition, struct lxg_opacity_choice *choice,
                                 struct lxg_opacity **opacity, struct lxg_error *error);

#endif
