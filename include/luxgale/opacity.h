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

/* Value and slopes travel together. */
struct lxg_opacity_value {
  double kappa;       /* [cm^2 g^-1], > 0 */
  double dlnk_dlnrho; /* d ln kappa / d ln rho at constant T */
  double dlnk_dlnt;   /* d ln kappa / d ln T at constant rho */
  double
      table_weight; /* share that came from a table: 1 inside the grid, 0 for the formula, between in the join */
};

enum lxg_opacity_formula { LXG_OPACITY_KRAMERS, LXG_OPACITY_SCATTERING, LXG_OPACITY_REFERENCE };

struct lxg_opacity; /* opaque, immutable once created */

/* Builds the formula for a composition. `*opacity` is NULL on failure. Free with lxg_opacity_destroy. */
enum lxg_status lxg_opacity_create_formula(enum lxg_opacity_formula formula,
                                           const struct lxg_composition *composition,
                                           struct lxg_opacity **opacity, struct lxg_error *error);

/* Opacity at ln rho [g cm^-3] and ln T [K]. LXG_OK, or LXG_DOMAIN when a table refuses a point outside its grid (or
 * when an argument is not finite); then `value` is untouched. Never allocates; thread-safe. */
enum lxg_status lxg_opacity_at(const struct lxg_opacity *opacity, double ln_rho, double ln_t,
                               struct lxg_opacity_value *value);

/* NULL is allowed. */
void lxg_opacity_destroy(struct lxg_opacity *opacity);

#endif
