/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * porosity.h - effective opacity of a clumped (porous) envelope and its exact logarithmic slopes.
 *
 * Radiation leaks between blobs, so the opacity that drives the flow is kappa f <= kappa. Laws:
 *   none       f = 1
 *   reduction  f = 1/s, a fixed factor s >= 1 (as Kato & Hachisu 2007, ApJ 657, 1004, lower it in bright phases; citation
 *              from memory)
 *   length     f = (1 - exp(-tau))/tau: blobs of one depth tau = kappa rho h
 *   power      f = [(1 + tau)^(1 - alpha) - 1]/[(1 - alpha) tau], alpha = 1: ln(1 + tau)/tau: a power law of blob depths
 *              up to tau = kappa rho h
 * with the porosity length h = eta H, H = c_T^2 r^2/(G M). Owocki, Gayley & Shaviv 2004, ApJ 616, 525 (laws from memory).
 */
#ifndef LUXGALE_POROSITY_H
#define LUXGALE_POROSITY_H

#include "luxgale/opacity.h"
#include "luxgale/status.h"

/* Which epochs of a history are porous; a single wind always is. */
enum lxg_porosity_when {
  LXG_POROSITY_ALWAYS,
  LXG_POROSITY_SUPER_EDDINGTON /* only those brighter than the homogeneous limit (run.h) */
};

enum lxg_porosity_law { LXG_POROSITY_NONE, LXG_POROSITY_REDUCTION, LXG_POROSITY_LENGTH, LXG_POROSITY_POWER };

/* What the user chooses; zero-initialised means no porosity. Fields that the law does not use are ignored. */
struct lxg_porosity {
  enum lxg_porosity_law law;
  double factor; /* s of `reduction`, >= 1 */
  double scale;  /* eta of `length` and `power`: porosity length in gas scale heights, > 0 */
  double
      alpha; /* index of `power`, > 0; smaller is more porous at small depth, slower to block at large depth */
  enum lxg_porosity_when when; /* read by those who follow a history; the laws ignore it */
};

/* What fixes the gas scale height H. */
struct lxg_porosity_gas {
  double gm;             /* G M [cm^3 s^-2] */
  double ct2_per_kelvin; /* k/(mu m_u) [cm^2 s^-2 K^-1], so that c_T^2 = ct2_per_kelvin T */
};

/* Effective opacity and its partials at fixed other two of (ln rho, ln T, ln r). */
struct lxg_porosity_value {
  double kappa_eff;   /* [cm^2 g^-1], > 0 */
  double dlnk_dlnrho; /* d ln kappa_eff / d ln rho */
  double dlnk_dlnt;   /* d ln kappa_eff / d ln T */
  double dlnk_dlnr;   /* d ln kappa_eff / d ln r */
};

/* Law's name as a case spells it: "none", "reduction", "length", "power". Never NULL. */
const char *lxg_porosity_law_name(enum lxg_porosity_law law);

/* Checks the fields that the law uses; LXG_INPUT with the offending one named ("porosity-law", "porosity-factor",
 * "porosity-scale", "porosity-alpha"). The functions below expect a checked law. */
enum lxg_status lxg_porosity_check(const struct lxg_porosity *porosity, struct lxg_error *error);

/* f for a blob depth tau >= 0 and, unless NULL, its slope d ln f/d ln tau in [-1, 0] (absolute accuracy 1e-15). `none` and
 * `reduction` do not depend on tau. NaN for a NaN depth. */
double lxg_porosity_factor(const struct lxg_porosity *porosity, double depth, double *slope);

/* The general path of lxg_porosity_at. */
enum lxg_status lxg_porosity_apply(const struct lxg_porosity *porosity, double ln_rho, double ln_t,
                                   double ln_r, const struct lxg_opacity_value *kappa,
                                   const struct lxg_porosity_gas *gas, struct lxg_porosity_value *value);

/* Effective opacity at ln rho [g cm^-3], ln T [K], ln r [cm] from the opacity of the gas there. LXG_OK, or LXG_DOMAIN when
 * the blob depth is not a finite number; then `value` is untouched. Without porosity the cost is four copies. */
static inline enum lxg_status lxg_porosity_at(const struct lxg_porosity *porosity, double ln_rho, double ln_t,
                                              double ln_r, const struct lxg_opacity_value *kappa,
                                              const struct lxg_porosity_gas *gas,
                                              struct lxg_porosity_value *value) {
  if (porosity->law == LXG_POROSITY_NONE) {
    value->kappa_eff = kappa->kappa;
    value->dlnk_dlnrho = kappa->dlnk_dlnrho;
    value->dlnk_dlnt = kappa->dlnk_dlnt;
    value->dlnk_dlnr = 0.0;
    return LXG_OK;
  }
  return lxg_porosity_apply(porosity, ln_rho, ln_t, ln_r, kappa, gas, value);
}

/* Blob depth tau* at which an Eddington ratio `gamma` > 1 (of the unclumped opacity) is blocked to unity, gamma f(tau*) = 1:
 * there the wind starts. For `length` and `power`. LXG_INPUT ("porosity-gamma", "porosity-depth-law") for other input;
 * LXG_NO_SOLUTION ("porosity-depth") if the depth exceeds e^600. */
enum lxg_status lxg_porosity_critical_depth(const struct lxg_porosity *porosity, double gamma, double *depth,
                                            struct lxg_error *error);

/* Closed mass-loss rate [g s^-1] of a porous envelope of luminosity L [erg s^-1] and isothermal sound speed c_T [cm s^-1]:
 * Mdot = (tau* / gamma) L/(eta c_T c) (Owocki, Gayley & Shaviv 2004). alpha = 2 gives (1 - 1/gamma) L/(eta c_T c), alpha =
 * 1/2 gives 4 (gamma - 1) L/(eta c_T c). Errors as lxg_porosity_critical_depth; tiring is not included. */
enum lxg_status lxg_porosity_mass_loss(const struct lxg_porosity *porosity, double gamma, double luminosity,
                                       double sound_speed, double *mass_loss, struct lxg_error *error);

struct lxg_node;

/* Reads the section `porosity` of a case (NULL: no porosity): law none, reduction (factor) or length (scale and, for a power
 * law of blob depths, power). A number that the law does not use is refused ("porosity-unused"). LXG_INPUT with the place. */
enum lxg_status lxg_porosity_read(struct lxg_node *section, struct lxg_porosity *porosity,
                                  struct lxg_error *error);

#endif
