/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * eos.h - ideal gas plus black-body radiation in equilibrium.
 *
 * c_T^2 = k T/(mu m_u);  P = rho c_T^2 + a T^4/3;  h = 5/2 c_T^2 + 4 a T^4/(3 rho).
 */
#ifndef LUXGALE_EOS_H
#define LUXGALE_EOS_H

#include "luxgale/constants.h"

/* Square of the isothermal sound speed per kelvin, k/(mu m_u) [cm^2 s^-2 K^-1]. */
static inline double lxg_eos_sound_speed_sq_per_k(double mu) {
  return LXG_BOLTZMANN / (mu * LXG_ATOMIC_MASS);
}

/* Radiation enthalpy per gram 4 a T^4/(3 rho) [erg g^-1]; T [K], rho [g cm^-3]. */
static inline double lxg_eos_radiation_enthalpy(double temperature, double density) {
  const double t2 = temperature * temperature;
  return 4.0 / 3.0 * LXG_RADIATION * t2 * t2 / density;
}

/* Gas pressure over total pressure, beta; c_t2 is the squared isothermal sound speed [cm^2 s^-2]. */
static inline double lxg_eos_beta(double c_t2, double temperature, double density) {
  const double gas = density * c_t2;
  const double t2 = temperature * temperature;
  return gas / (gas + LXG_RADIATION * t2 * t2 / 3.0);
}

#endif
