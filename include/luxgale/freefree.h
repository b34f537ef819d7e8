/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * freefree.h - thermal free-free light of ionised gas outside the photosphere: of a steady wind and of a detached shell.
 *
 * (F1) 4 pi j_nu = C Z^2 n_e n_i T^(-1/2) exp(-h nu/k T) g,   C = (2^5 pi e^6/(3 m_e c^3)) (2 pi/(3 k m_e))^(1/2)
 *      = 6.842e-38 erg cm^3 s^-1 Hz^-1 K^(1/2)  (Rybicki & Lightman 1979, eq. 5.14, from memory; C is computed here).
 * (F2) g = ln{e + exp[5.960 - (3^(1/2)/pi) ln(Z nu_9 T_4^(-3/2))]}   (Draine 2011, Physics of the Interstellar and
 *      Intergalactic Medium, eq. 10.9, from memory: better than 10 % from radio to the visible).
 * (F3) Gas of density rho: n_e sum Z^2 n_i = Q rho^2, Q = (electrons per gram) (sum over ions of Z^2 per gram).
 *      Steady wind at constant speed v beyond R: rho = Mdot/(4 pi r^2 v). Thin, isothermal, seen around its star:
 *      L_nu = C Q T^(-1/2) exp(-h nu/k T) g Mdot^2/(4 pi v^2 R) w,   w = 1/2 + pi/8.
 *      w is the share of the light that the photosphere does not catch: the integral of
 *      1 - [1 - (1 - u^2)^(1/2)]/2 over u = R/r from 0 to 1. The law Mdot^2/(v^2 R) is that of Hachisu & Kato 2006.
 * (F4) The same wind with its own absorption, alpha = 4 pi j_nu/(4 pi B_nu), around a black disc of the same temperature:
 *      L_nu = 4 pi^2 B_nu R^2 {1 + a^(2/3) gamma(1/3, a) - (1 - exp(-a))},  a = (pi/2) alpha(R) R:
 *      black body for a -> 0 and, for a -> infinity, the radio law of Wright & Barlow 1975 and Panagia & Felli 1975,
 *      4 pi^2 Gamma(1/3) B_nu R^2 a^(2/3).
 * (F5) Shell of mass M between v_in t and v_out t, uniform: L_nu = C Q T^(-1/2) exp(-h nu/k T) g M^2/V, V = (4 pi/3)
 *      (v_out^3 - v_in^3) t^3: it fades as t^-3.
 *
 * Limits: full ionisation to the stated charges, one temperature, Maxwellian electrons, smooth gas (clumps of filling
 * factor f are brighter by 1/f), no bound-free light and no lines.
 */
#ifndef LUXGALE_FREEFREE_H
#define LUXGALE_FREEFREE_H

#include "luxgale/composition.h"

/* The emitting gas; one value for the whole wind. */
struct lxg_freefree_gas {
  double temperature;        /* of the electrons [K] */
  double electrons_per_gram; /* [g^-1] */
  double charges_sq;         /* sum over ions of Z^2 per gram [g^-1] */
  double mean_charge;        /* charge that enters the Gaunt factor: sum Z^2 n_i/n_e */
};

/* A steady wind seen from outside. */
struct lxg_freefree_wind {
  double mass_loss_rate; /* [g s^-1] */
  double speed;          /* constant beyond the photosphere [cm s^-1] */
  double radius;         /* of the photosphere [cm] */
};

/* A detached shell in free expansion. */
struct lxg_freefree_shell {
  double mass;        /* [g] */
  double speed_inner; /* [cm s^-1], 0 for a filled sphere */
  double speed_outer; /* [cm s^-1], above speed_inner */
};

/* Gas of a composition. helium_charge 0, 1 or 2; metal_charge: mean charge of C, N, O and heavier ions (atomic weight 14
 * for `cno`, 16 for `metals`), 0 to 8 (capped at 7 for `cno`). LXG_INPUT "freefree-temperature", "freefree-charge",
 * or "freefree-neutral" when no ion is left. */
enum lxg_status lxg_freefree_gas_init(const struct lxg_composition *composition, double temperature,
                                      double helium_charge, double metal_charge, struct lxg_freefree_gas *gas,
                                      struct lxg_error *error);

/* The constant C of (F1) [erg cm^3 s^-1 Hz^-1 K^(1/2)]. */
double lxg_freefree_constant(void);

/* Gaunt factor (F2); frequency [Hz], temperature [K], charge of the ion. */
double lxg_freefree_gaunt(double frequency, double temperature, double charge);

/* 4 pi j_nu/rho^2 = C Q T^(-1/2) exp(-h nu/k T) g [erg s^-1 Hz^-1 cm^3 g^-2]. */
double lxg_freefree_emission(const struct lxg_freefree_gas *gas, double frequency);

/* Absorption coefficient over rho^2, emission over 4 pi B_nu [cm^5 g^-2]. */
double lxg_freefree_absorption(const struct lxg_freefree_gas *gas, double frequency);

/* L_nu [erg s^-1 Hz^-1] of the thin wind (F3), light that its photosphere catches taken off. */
double lxg_freefree_wind_thin(const struct lxg_freefree_gas *gas, const struct lxg_freefree_wind *wind,
                              double frequency);

/* L_nu [erg s^-1 Hz^-1] of black photosphere and absorbing wind together (F4). */
double lxg_freefree_wind_whole(const struct lxg_freefree_gas *gas, const struct lxg_freefree_wind *wind,
                               double frequency);

/* The radio law: L_nu [erg s^-1 Hz^-1] when the photosphere is hidden deep inside (a -> infinity in F4); radius unused. */
double lxg_freefree_wind_thick(const struct lxg_freefree_gas *gas, const struct lxg_freefree_wind *wind,
                               double frequency);

/* Free-free optical depth along the radius from the photosphere outwards, alpha(R) R/3: (F3) holds while it is << 1. */
double lxg_freefree_wind_depth(const struct lxg_freefree_gas *gas, const struct lxg_freefree_wind *wind,
                               double frequency);

/* L_nu [erg s^-1 Hz^-1] of the thin shell (F5) at an age [s] > 0, and its optical depth along the radius. */
double lxg_freefree_shell_thin(const struct lxg_freefree_gas *gas, const struct lxg_freefree_shell *shell,
                               double age, double frequency);
double lxg_freefree_shell_depth(const struct lxg_freefree_gas *gas, const struct lxg_freefree_shell *shell,
                                double age, double frequency);

#endif
