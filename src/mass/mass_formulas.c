/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * mass_formulas.c - the formula of each method (see mass.h), CGS.
 *
 *   steady wind    M = Mdot t
 *   tiring         M < R E_rad/(G M_star)                           Owocki & Gayley 1997: light cannot lift more
 *   diffusion      t_d^2 = 2 kappa M/(13.8 c v)                     Arnett 1982, ApJ 253, 785 (from memory)
 *   line, volume   L = eps(T) n_e n_p f V, V = 4 pi (v t)^3/3, n_p = X rho/m_H, n_e = (1 + X) rho/(2 m_H)
 *   line, density  M_H = m_H L/(eps(T) n_e), M = M_H/X
 *   radio          Mdot of Wright & Barlow 1975 times the duration of the wind
 *   X-rays         M = 4 pi/3 m_H N_H (v t)^2 f'/X, f' = 2.4        (f' from memory)
 */
#include "luxgale/constants.h"
#include "mass/mass_internal.h"

#include <math.h>

static const double arnett_constant =
    13.8; /* eigenvalue factor of the diffusing uniform sphere (Arnett 1982) */
static const double hbeta_energy = 4.0863e-12; /* h nu of H beta, 4862.7 Angstrom in vacuum [erg] */
static const double xray_shape = 2.4;          /* f': density falling outward against a uniform sphere */
static const double radio_constant = 23.2;     /* of Wright & Barlow in Msun/yr, km/s, Hz, kpc, Jy */

double lxg_mass_hbeta_emissivity(double temperature) {
  const double ln_t4 = log(temperature / 1e4);
  return 3.03e-14 * exp((-0.874 - 0.058 * ln_t4) * ln_t4) * hbeta_energy;
}

double lxg_mass_gaunt(double temperature, double charge, double frequency) {
  return 9.77 * (1.0 + 0.13 * log10(pow(temperature, 1.5) / (charge * frequency)));
}

/* What multiplies (Mdot/(mu v))^(4/3) D^-2: 23.2 (nu gamma g)^(2/3) Z^(4/3) */
static double radio_factor(double frequency, double temperature, double charge, double electrons_per_ion) {
  const double g = lxg_mass_gaunt(temperature, charge, frequency);
  return radio_constant * pow(frequency * electrons_per_ion * g, 2.0 / 3.0) * pow(charge, 4.0 / 3.0);
}

double lxg_mass_radio_flux(double mass_loss, double speed, double frequency, double temperature,
                           double distance, double mean_weight, double charge, double electrons_per_ion) {
  const double rate = mass_loss / LXG_SOLAR_MASS * LXG_YEAR;
  const double kpc = distance / (1e3 * LXG_PARSEC);
  return radio_factor(frequency, temperature, charge, electrons_per_ion) *
         pow(rate / (mean_weight * speed / LXG_KM), 4.0 / 3.0) / (kpc * kpc);
}

double lxg_mass_radio_rate(double flux, double speed, double frequency, double temperature, double distance,
                           double mean_weight, double charge, double electrons_per_ion) {
  const double kpc = distance / (1e3 * LXG_PARSEC);
  const double factor = radio_factor(frequency, temperature, charge, electrons_per_ion);
  const double rate = pow(flux * kpc * kpc / factor, 0.75) * mean_weight * speed / LXG_KM;
  return rate * LXG_SOLAR_MASS / LXG_YEAR;
}

static double steady_wind(const double q[]) {
  return q[LXG_MASS_WIND_RATE] * q[LXG_MASS_WIND_DURATION];
}

static double tiring(const double q[]) {
  return q[LXG_MASS_STAR_RADIUS] * q[LXG_MASS_RADIATED_ENERGY] / q[LXG_MASS_STAR_GM];
}

static double diffusion(const double q[]) {
  const double t = q[LXG_MASS_DIFFUSION_TIME];
  return arnett_constant * LXG_SPEED_OF_LIGHT * q[LXG_MASS_SPEED] * t * t / (2.0 * q[LXG_MASS_OPACITY]);
}

static double line_volume(const double q[]) {
  const double x = q[LXG_MASS_HYDROGEN];
  const double radius = q[LXG_MASS_SPEED] * q[LXG_MASS_AGE];
  const double volume = q[LXG_MASS_FILLING] * 4.0 * LXG_PI / 3.0 * radius * radius * radius;
  const double emissivity = lxg_mass_hbeta_emissivity(q[LXG_MASS_TEMPERATURE]) * 0.5 * x * (1.0 + x);
  return LXG_HYDROGEN_MASS * sqrt(q[LXG_MASS_HBETA_LUMINOSITY] * volume / emissivity);
}

static double line_density(const double q[]) {
  return LXG_HYDROGEN_MASS * q[LXG_MASS_HBETA_LUMINOSITY] /
         (lxg_mass_hbeta_emissivity(q[LXG_MASS_TEMPERATURE]) * q[LXG_MASS_ELECTRON_DENSITY] *
          q[LXG_MASS_HYDROGEN]);
}

static double radio(const double q[]) {
  return q[LXG_MASS_WIND_DURATION] *
         lxg_mass_radio_rate(q[LXG_MASS_RADIO_FLUX], q[LXG_MASS_SPEED], q[LXG_MASS_RADIO_FREQUENCY],
                             q[LXG_MASS_TEMPERATURE], q[LXG_MASS_DISTANCE], q[LXG_MASS_MEAN_WEIGHT],
                             q[LXG_MASS_ION_CHARGE], q[LXG_MASS_ELECTRONS_PER_ION]);
}

static double xray(const double q[]) {
  const double radius = q[LXG_MASS_SPEED] * q[LXG_MASS_XRAY_TIME];
  return 4.0 * LXG_PI / 3.0 * LXG_HYDROGEN_MASS * q[LXG_MASS_COLUMN] * radius * radius * xray_shape /
         q[LXG_MASS_HYDROGEN];
}

static const struct lxg_mass_row rows[LXG_MASS_METHODS] = {
    [LXG_MASS_STEADY_WIND] = {.name = "steady_wind",
                              .formula = steady_wind,
                              .need_count = 2,
                              .need = {LXG_MASS_WIND_RATE, LXG_MASS_WIND_DURATION},
                              .assumptions =
                                  "a steady optically thick wind with the given light and speed for "
                                  "the whole duration; the rate in fact changes by decades",
                              .source = "definition; the rate comes from the wind equations"},
    [LXG_MASS_TIRING] = {.name = "tiring_bound",
                         .formula = tiring,
                         .upper_bound = true,
                         .need_count = 3,
                         .need = {LXG_MASS_STAR_RADIUS, LXG_MASS_RADIATED_ENERGY, LXG_MASS_STAR_GM},
                         .assumptions =
                             "all gas is lifted from the given radius by no more energy than was "
                             "radiated; an upper bound only if light did the lifting and less than "
                             "half of the energy went into it",
                         .source = "Owocki & Gayley 1997; rate coefficient 0.03185 Msun/yr checked"},
    [LXG_MASS_DIFFUSION] = {.name = "diffusion_time",
                            .formula = diffusion,
                            .need_count = 3,
                            .need = {LXG_MASS_SPEED, LXG_MASS_DIFFUSION_TIME, LXG_MASS_OPACITY},
                            .assumptions =
                                "one homologous shell with constant opacity whose stored light leaks "
                                "out; a wind fed for days breaks this, the mass is then too large",
                            .source = "Arnett 1982, ApJ 253, 785 (from memory)"},
    [LXG_MASS_LINE_VOLUME] = {.name = "recombination_volume",
                              .formula = line_volume,
                              .need_count = 6,
                              .need = {LXG_MASS_SPEED, LXG_MASS_AGE, LXG_MASS_HBETA_LUMINOSITY,
                                       LXG_MASS_TEMPERATURE, LXG_MASS_FILLING, LXG_MASS_HYDROGEN},
                              .assumptions =
                                  "fully ionised gas of one density and temperature fills the given "
                                  "share of a sphere of radius speed x age; case B, no self-absorption",
                              .source =
                                  "Draine 2011, eq. 14.9 (from memory), checked with Osterbrock's table"},
    [LXG_MASS_LINE_DENSITY] = {.name = "recombination_density",
                               .formula = line_density,
                               .need_count = 4,
                               .need = {LXG_MASS_HBETA_LUMINOSITY, LXG_MASS_TEMPERATURE,
                                        LXG_MASS_ELECTRON_DENSITY, LXG_MASS_HYDROGEN},
                               .assumptions =
                                   "the given electron density is that of the gas that emits the line; "
                                   "denser clumps shine more and weigh less; case B",
                               .source =
                                   "Draine 2011, eq. 14.9 (from memory), checked with Osterbrock's table"},
    [LXG_MASS_RADIO] = {.name = "thermal_radio",
                        .formula = radio,
                        .need_count = 9,
                        .need = {LXG_MASS_WIND_DURATION, LXG_MASS_SPEED, LXG_MASS_RADIO_FLUX,
                                 LXG_MASS_RADIO_FREQUENCY, LXG_MASS_TEMPERATURE, LXG_MASS_DISTANCE,
                                 LXG_MASS_MEAN_WEIGHT, LXG_MASS_ION_CHARGE, LXG_MASS_ELECTRONS_PER_ION},
                        .assumptions =
                            "a steady, smooth, fully ionised, isothermal wind still blowing when the "
                            "radio source is optically thick (flux rising as nu^0.6); clumps lower it",
                        .source = "Wright & Barlow 1975, MNRAS 170, 41 (from memory), checked with Panagia & "
                                  "Felli 1975, A&A 39, 1"},
    [LXG_MASS_XRAY] = {.name = "xray_turn_on",
                       .formula = xray,
                       .need_count = 4,
                       .need = {LXG_MASS_SPEED, LXG_MASS_XRAY_TIME, LXG_MASS_COLUMN, LXG_MASS_HYDROGEN},
                       .assumptions =
                           "a full sphere of gas expanding at the given speed absorbs as neutral gas "
                           "until its column falls to the given one; shape factor 2.4",
                       .source = "shape factor from memory; number of 4 pi/3 m_H N_H (v t)^2 f' checked"},
};

const struct lxg_mass_row *lxg_mass_row(enum lxg_mass_method method) {
  return &rows[method];
}
