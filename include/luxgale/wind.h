/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind.h - the steady, spherical, radiation-driven, optically thick wind.
 *
 * Equations (docs/physics.md): mass (W1), energy (W2), radiative diffusion (W3), momentum (W4); ideal gas and
 * radiation; regular passage through the critical point v = c_T; photosphere where 4 pi R^2 sigma T^4 = L and
 * kappa rho R = 8/3; beyond it gas coasts in a diluted radiation field to the terminal speed. Two held quantities select
 * one wind. Method: global collocation with the critical radius, the rate and the energy rate as unknowns (bvp.h).
 *
 * Call order: lxg_wind_solver_create -> lxg_wind_solve (cold) or lxg_wind_follow (from the last solution) ->
 * lxg_wind_profile -> lxg_wind_solver_destroy. One solver a thread.
 */
#ifndef LUXGALE_WIND_H
#define LUXGALE_WIND_H

#include "luxgale/composition.h"
#include "luxgale/opacity.h"
#include "luxgale/porosity.h"
#include "luxgale/star.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* What defines the equations. The opacity must outlive every solver made from the model. */
struct lxg_wind_model {
  struct lxg_star star;
  struct lxg_composition composition;
  const struct lxg_opacity *opacity;
  struct lxg_porosity porosity;
};

/* name of the quantity in a case, its unit here */
#define LXG_HELD_LIST(X)                                                                                     \
  X(LXG_HELD_BASE_TEMPERATURE, base_temperature, "K")                                                        \
  X(LXG_HELD_BASE_LUMINOSITY, base_luminosity, "erg s^-1")                                                   \
  X(LXG_HELD_LAUNCH_RADIUS, launch_radius, "cm")                                                             \
  X(LXG_HELD_PHOTOSPHERE_LUMINOSITY, photosphere_luminosity, "erg s^-1")                                     \
  X(LXG_HELD_PHOTOSPHERE_TEMPERATURE, photosphere_temperature, "K")                                          \
  X(LXG_HELD_PHOTOSPHERE_RADIUS, photosphere_radius, "cm")                                                   \
  X(LXG_HELD_TERMINAL_SPEED, terminal_speed, "cm s^-1")                                                      \
  X(LXG_HELD_MASS_LOSS_RATE, mass_loss_rate, "g s^-1")                                                       \
  X(LXG_HELD_ENERGY_RATE, energy_rate, "erg s^-1")                                                           \
  X(LXG_HELD_ENVELOPE_MASS, envelope_mass, "g")

enum lxg_held {
#define LXG_HELD_ENUM(name, key, unit) name,
  LXG_HELD_LIST(LXG_HELD_ENUM)
#undef LXG_HELD_ENUM
      LXG_HELD_COUNT
};

#endif
