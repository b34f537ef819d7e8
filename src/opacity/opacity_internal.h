/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * opacity_internal.h - what stands behind the opaque opacity: a formula, and tables laid over it.
 */
#ifndef LUXGALE_OPACITY_INTERNAL_H
#define LUXGALE_OPACITY_INTERNAL_H

#include "luxgale/opacity.h"
#include "opacity/kramers.h"
#include "opacity/sum.h"
#include "opacity/surface.h"

/* The closed-form test law with its composition worked in. */
struct opacity_reference_law {
  double scattering;  /* 0.2 (1 + X) [cm^2 g^-1] */
  double kramers;     /* 4.34e25 Z (1 + X) + 3.68e22 (1 - Z)(1 + X), factor of rho T^-3.5 */
  double metal_bump;  /* 2.0 (Z/0.02)^0.65 [cm^2 g^-1] */
  double helium_bump; /* 0.33 Y^0.5 [cm^2 g^-1] */
};

struct lxg_opacity {
  enum lxg_opacity_formula formula; /* kramers under a table */
  double scattering;                /* 0.2 (1 + X) [cm^2 g^-1] */
  struct opacity_reference_law reference;
  struct kramers_law kramers;
  bool tabulated; /* a surface lies over the formula */
  struct opacity_surface surface;
};

void lxg_opacity_reference_init(struct opacity_reference_law *law, const struct lxg_composition *composition);
struct opacity_sum lxg_opacity_reference_at(const struct opacity_reference_law *law, double ln_rho,
                                            double ln_t);

/* lxg_opacity_at of a tabulated opacity; the arguments are within the domain. */
enum lxg_status lxg_opacity_table_at(const struct lxg_opacity *opacity, double ln_rho, double ln_t,
                                     struct lxg_opacity_value *value);

#endif
