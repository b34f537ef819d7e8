/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * burning.h - energy generation of hydrogen by the CNO cycle, from the cold cycle to its beta limit, and its exact slopes.
 *
 *   e   = 8.24e25 X X_CNO rho T9^(-2/3) exp(-15.231 T9^(-1/3) - (T9/0.8)^2)   proton captures (Kippenhahn & Weigert,
 *         Stellar Structure and Evolution; constants from memory)
 *   l   = 5.9e15 X_CNO                                                        waiting for the decays of 14O and 15O (from
 *         memory; the two mean lives with 24.7 MeV a cycle give 5.71e15 to 6.12e15)
 *   eps = e l/(e + l)                                                         [erg g^-1 s^-1]
 * with X_CNO = cno + 0.7 Z: seven tenths of a solar metal mixture by mass are C, N and O.
 */
#ifndef LUXGALE_BURNING_H
#define LUXGALE_BURNING_H

#include "luxgale/composition.h"
#include "luxgale/status.h"

#define LXG_BURNING_HEAT                                                                                     \
  6.0e18 /* Q: heat per gram of hydrogen burnt, neutrinos gone [erg g^-1] (25 MeV per 4 1H) */
#define LXG_BURNING_BETA_LIMIT 5.9e15 /* l/X_CNO [erg g^-1 s^-1] */
#define LXG_BURNING_CNO_OF_METALS 0.7 /* mass fraction of C, N, O in solar metals */

enum lxg_burning_law { LXG_BURNING_NONE, LXG_BURNING_CNO };

/* Made by lxg_burning_init, then read by any number of threads; zero-initialised means no burning. */
struct lxg_burning {
  enum lxg_burning_law law;
  double ln_capture; /* ln(8.24e25 X X_CNO), e in [erg g^-1 s^-1] for rho in [g cm^-3] */
  double ln_limit;   /* ln l, l in [erg g^-1 s^-1] */
};

/* Rate and slopes travel together. Without burning: eps = 0, ln eps = -infinity, slopes 0. */
struct lxg_burning_value {
  double eps;         /* [erg g^-1 s^-1]; underflows to 0 in cold gas, where ln_eps is still exact */
  double ln_eps;      /* ln of eps [erg g^-1 s^-1] */
  double dlne_dlnrho; /* d ln eps/d ln rho at constant T: 1 (captures) to 0 (beta limit) */
  double dlne_dlnt;   /* d ln eps/d ln T at constant rho */
};

/* X_CNO = cno + 0.7 Z. */
double lxg_burning_cno_fraction(const struct lxg_composition *composition);

/* Prepares a law for a composition. LXG_INPUT "burning-fuel" when `cno` is asked of gas without hydrogen or without C, N,
 * O; "burning-law" for an unknown law. */
enum lxg_status lxg_burning_init(struct lxg_burning *burning, enum lxg_burning_law law,
                                 const struct lxg_composition *composition, struct lxg_error *error);

/* Rate at ln rho [g cm^-3] and ln T [K]. LXG_OK, or LXG_DOMAIN when an argument is not finite or the rate has no finite
 * logarithm; then `value` is untouched. The formula is meant for T below about 4e8 K: above, other cycles take over. */
enum lxg_status lxg_burning_at(const struct lxg_burning *burning, double ln_rho, double ln_t,
                               struct lxg_burning_value *value);

struct lxg_node;

/* Reads the section `burning` of a case (NULL: none). LXG_INPUT with the place: unknown key or law, "burning-fuel". */
enum lxg_status lxg_burning_read(struct lxg_node *section, const struct lxg_composition *composition,
                                 struct lxg_burning *burning, struct lxg_error *error);

#endif
