/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * mass.h - ejected mass from an expansion speed by every method that the given data allow, side by side.
 *
 * Each method is a product formula M(q_1, q_2, ...) of measured quantities; the methods share inputs and disagree
 * in nature by up to a factor of ten, so the spread is part of the answer. Errors are taken as log-normal and
 * independent: sigma_lnM^2 = sum_i (dlnM/dlnq_i sigma_i/q_i)^2, the slopes exact for the power laws and by
 * central differences where a temperature or frequency enters through a logarithm. A quantity that is not given
 * is named, never guessed.
 */
#ifndef LUXGALE_MASS_H
#define LUXGALE_MASS_H

#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* enumerator, name as a case spells it, CGS unit, meaning */
#define LXG_MASS_QUANTITY_LIST(X)                                                                            \
  X(LXG_MASS_SPEED, "speed", "cm/s", "expansion speed of the outer edge")                                    \
  X(LXG_MASS_AGE, "age", "s", "time since ejection at the epoch of the line or radio measurement")           \
  X(LXG_MASS_WIND_RATE, "wind_rate", "g/s", "mass-loss rate of the steady wind with this speed and light")   \
  X(LXG_MASS_WIND_DURATION, "wind_duration", "s", "time that the wind lasted")                               \
  X(LXG_MASS_RADIATED_ENERGY, "radiated_energy", "erg", "energy radiated in the outburst")                   \
  X(LXG_MASS_STAR_GM, "star_gm", "cm3/s2", "G M of the star")                                                \
  X(LXG_MASS_STAR_RADIUS, "star_radius", "cm", "radius from which the gas is lifted")                        \
  X(LXG_MASS_DIFFUSION_TIME, "diffusion_time", "s", "rise or diffusion time of the light curve")             \
  X(LXG_MASS_OPACITY, "opacity", "cm2/g", "opacity of the ejecta to that light")                             \
  X(LXG_MASS_HBETA_LUMINOSITY, "hbeta_luminosity", "erg/s", "luminosity of H beta, reddening removed")       \
  X(LXG_MASS_HBETA_FLUX, "hbeta_flux", "erg/s/cm2", "flux of H beta, reddening removed")                     \
  X(LXG_MASS_TEMPERATURE, "temperature", "K", "electron temperature of the ionised ejecta")                  \
  X(LXG_MASS_FILLING, "filling_factor", "", "share of the sphere of radius speed x age that is filled")      \
  X(LXG_MASS_ELECTRON_DENSITY, "electron_density", "cm^-3", "electron density of the ejecta")                \
  X(LXG_MASS_HYDROGEN, "hydrogen", "", "hydrogen mass fraction of the ejecta")                               \
  X(LXG_MASS_RADIO_FLUX, "radio_flux", "Jy", "flux density of the optically thick radio source")             \
  X(LXG_MASS_RADIO_FREQUENCY, "radio_frequency", "Hz", "its frequency")                                      \
  X(LXG_MASS_DISTANCE, "distance", "cm", "distance")                                                         \
  X(LXG_MASS_MEAN_WEIGHT, "mean_weight", "", "mean mass per ion in units of the hydrogen atom")              \
  X(LXG_MASS_ION_CHARGE, "ion_charge", "", "rms ionic charge of the radio source")                           \
  X(LXG_MASS_ELECTRONS_PER_ION, "electrons_per_ion", "", "mean number of electrons per ion")                 \
  X(LXG_MASS_XRAY_TIME, "xray_time", "s", "time of X-ray turn-on after ejection")                            \
  X(LXG_MASS_COLUMN, "column", "cm^-2", "hydrogen column that lets the X-rays through")

enum lxg_mass_quantity {
#define LXG_MASS_ENUM(name, key, unit, text) name,
  LXG_MASS_QUANTITY_LIST(LXG_MASS_ENUM)
#undef LXG_MASS_ENUM
      LXG_MASS_QUANTITIES
};

enum lxg_mass_method {
  LXG_MASS_STEADY_WIND,  /* rate x duration */
  LXG_MASS_TIRING,       /* upper bound R E_rad/(G M) */
  LXG_MASS_DIFFUSION,    /* 13.8 c v t_d^2/(2 kappa) */
  LXG_MASS_LINE_VOLUME,  /* recombination line, density from the volume */
  LXG_MASS_LINE_DENSITY, /* recombination line, density given */
  LXG_MASS_RADIO,        /* thermal radio wind x duration */
  LXG_MASS_XRAY,         /* column at X-ray turn-on */
  LXG_MASS_METHODS
};

/* One measured number. */
struct lxg_mass_datum {
  double value; /* > 0, in the CGS unit of the list (Jy for the radio flux) */
  double error; /* 1 sigma, same unit, >= 0 */
  bool given;
};

/* All of them; zero-initialised: nothing given. */
struct lxg_mass_data {
  struct lxg_mass_datum datum[LXG_MASS_QUANTITIES];
};

enum { LXG_MASS_NEEDS = 9 }; /* most quantities that a method uses */

struct lxg_mass_estimate {
  enum lxg_mass_method method;
  bool available;          /* all that the method needs was given */
  bool upper_bound;        /* the number is a largest mass, not a value */
  double mass;             /* [g]; NaN when not available */
  double sigma_ln;         /* 1 sigma of ln M from the given errors */
  double lower, upper;     /* M exp(-/+ sigma_ln) [g] */
  const char *assumptions; /* static text */
  const char *source;      /* static text: paper and how it was checked */
  size_t missing_count;
  enum lxg_mass_quantity missing[LXG_MASS_NEEDS]; /* what would have to be given */
};

struct lxg_mass_summary {
  struct lxg_mass_estimate estimate[LXG_MASS_METHODS];
  size_t values;          /* methods that gave a value (bounds not counted) */
  double lowest, highest; /* of those values [g]; NaN if none */
  double spread;          /* highest/lowest; NaN if none */
  double centre;          /* geometric mean of the values [g]; NaN if none */
  double chi2; /* of ln M about its weighted mean, errors as given (at least 1 %); NaN below two values */
  bool bound_broken; /* the geometric mean exceeds the tiring bound by more than its error */
  char reading[320]; /* one line for a person, masses in Msun */
};

const char *lxg_mass_quantity_name(enum lxg_mass_quantity quantity); /* "unknown" out of range */
const char *lxg_mass_quantity_unit(enum lxg_mass_quantity quantity);
const char *lxg_mass_quantity_text(enum lxg_mass_quantity quantity);
const char *lxg_mass_method_name(enum lxg_mass_method method);

/* Index of a quantity by its name; LXG_MASS_QUANTITIES if there is none. */
enum lxg_mass_quantity lxg_mass_quantity_find(const char *name);

/* Gives one quantity. LXG_INPUT "mass-value" or "mass-error" with the quantity named. Fractions (hydrogen,
 * filling_factor) are at most 1; a speed is below c; the temperature lies in 3000 .. 30000 K, where the
 * recombination fit was checked. */
enum lxg_status lxg_mass_give(struct lxg_mass_data *data, enum lxg_mass_quantity quantity, double value,
                              double error_1sigma, struct lxg_error *error);

/* Every method and the comparison. Never fails: what cannot be computed says what is missing. */
void lxg_mass_estimate_all(const struct lxg_mass_data *data, struct lxg_mass_summary *summary);

/* ---- the formulas themselves, CGS ---- */

/* Case-B emissivity 4 pi j(H beta)/(n_e n_p) [erg cm^3 s^-1] at T [K]: alpha_eff = 3.03e-14 T4^(-0.874 - 0.058 ln
 * T4) cm^3/s (Draine 2011, eq. 14.9, from memory) times h nu. Within 1 % of Osterbrock's table at 5000, 10000 and
 * 20000 K. */
double lxg_mass_hbeta_emissivity(double temperature);

/* Free-free Gaunt factor 9.77 [1 + 0.13 log10(T^1.5/(Z nu))] (Spitzer 1962, as Wright & Barlow 1975 use it). */
double lxg_mass_gaunt(double temperature, double charge, double frequency);

/* Radio flux [Jy] of a steady wind: Wright & Barlow 1975, MNRAS 170, 41 (from memory): S = 23.2 (Mdot/(mu
 * v))^(4/3) nu^(2/3) D^-2 (gamma g)^(2/3) Z^(4/3), Mdot in Msun/yr, v in km/s, D in kpc. Arguments here in CGS.
 * */
double lxg_mass_radio_flux(double mass_loss, double speed, double frequency, double temperature,
                           double distance, double mean_weight, double charge, double electrons_per_ion);

/* The same solved for the mass-loss rate [g s^-1] at a flux [Jy]. */
double lxg_mass_radio_rate(double flux, double speed, double frequency, double temperature, double distance,
                           double mean_weight, double charge, double electrons_per_ion);

/* ---- section of a case ---- */

/* The section `mass`. Its own luminosity and speed select the steady wind whose rate the caller finds. */
struct lxg_mass_section {
  bool present;
  struct lxg_mass_data data;                    /* as given */
  struct lxg_mass_datum photosphere_luminosity; /* [erg s^-1] */
};

struct lxg_node;

/* Reads it; absent: all zero. Every quantity NAME may have its 1-sigma error NAME_error. `l_edd` is the unit Ledd. LXG_INPUT
 * with the place ("mass-value", "mass-error", "mass-error-alone": an error without its quantity). */
enum lxg_status lxg_mass_read(struct lxg_node *section, double l_edd, struct lxg_mass_section *read,
                              struct lxg_error *error);

#endif
