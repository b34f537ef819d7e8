/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decay.c - nuclear data of beta-unstable isotopes and the heat of their decays (see decay.h).
 *
 * Marks: [R] read in the source named, [M] from memory, [D] derived from the beta spectrum. Sources: NUBASE2020 (Kondev et al.
 * 2021, Chinese Physics C 45, 030001) and the TUNL and LNHB evaluations for half-lives; Conti & Eriksson 2016, EJNMMI Physics
 * 3, 8, for positron energies. Derived means: allowed spectrum with the Fermi function, from the endpoint.
 */
#include "luxgale/decay.h"

#include "luxgale/constants.h"

#include <math.h>
#include <string.h>

#define MINUTE 60.0
static const double annihilation_mev = 2.0 * 0.51099895; /* two photons of m_e c^2 (CODATA 2018) */
static const double erg_per_mev = 1e6 * LXG_ELECTRON_VOLT;

static const struct lxg_isotope isotopes[] = {
    /* 9.965(4) min [R]; beta+ 99.8 % [R]; mean 0.492 MeV [R] */
    {"13N", 13.0, 9.965 * MINUTE, 0.998, 0.492, 0.0},
    /* 70.62 s [R]; beta+ 99.9 % [M]; mean 0.7718 MeV [D], endpoint 1.8097 [R]; 2.313 MeV in 99.4 % [R] */
    {"14O", 14.0, 70.62, 0.999, 0.7718, 2.313 * 0.994},
    /* 122.24 s [R]; beta+ 99.9 % [R]; mean 0.735 MeV [R] */
    {"15O", 15.0, 122.24, 0.999, 0.735, 0.0},
    /* 64.370(27) s [R]; beta+ 99.85 % [M]; mean 0.7402 MeV [D], endpoint 1.7385 [D] */
    {"17F", 17.0, 64.370, 0.9985, 0.7402, 0.0},
    /* 109.734(8) min [R]; beta+ 96.86(19) % [R]; mean 0.250 MeV [R] */
    {"18F", 18.0, 109.734 * MINUTE, 0.9686, 0.250, 0.0},
    /* 2.6018 yr [R]; beta+ about 90 % [R]; mean 0.2163 MeV [D], endpoint 0.546 [M]; 1.2745 MeV [R] in 99.94 % [M] */
    {"22Na", 22.0, 2.6018 * LXG_YEAR, 0.90, 0.2163, 1.2745 * 0.9994},
    /* 53.22 d [R]; electron capture only [R]; 0.4776 MeV in 10.44 % [M] */
    {"7Be", 7.0, 53.22 * LXG_DAY, 0.0, 0.0, 0.4776 * 0.1044},
};

size_t lxg_decay_count(void) {
  return sizeof isotopes / sizeof isotopes[0];
}

const struct lxg_isotope *lxg_decay_isotope(size_t index) {
  return index < lxg_decay_count() ? &isotopes[index] : NULL;
}

const struct lxg_isotope *lxg_decay_find(const char *name) {
  for (size_t i = 0; i < lxg_decay_count(); i++) {
    if (strcmp(isotopes[i].name, name) == 0) {
      return &isotopes[i];
    }
  }
  return NULL;
}

enum lxg_status lxg_decay_check(const struct lxg_isotope *isotope, struct lxg_error *error) {
  const struct {
    const char *code, *name, *allowed;
    double value, low, high;
    int open; /* 1: the lower end is excluded */
  } field[] = {
      {"isotope-mass-number", "mass number", "above 0, below 400", isotope->mass_number, 0.0, 400.0, 1},
      {"isotope-half-life", "half-life [s]", "finite, above 0", isotope->half_life, 0.0, 1e300, 1},
      {"isotope-positrons", "positrons per decay", "0 to 1", isotope->positrons, 0.0, 1.0, 0},
      {"isotope-positron-energy", "positron energy [MeV]", "0 to 100", isotope->positron_mev, 0.0, 100.0, 0},
      {"isotope-gamma-energy", "gamma energy [MeV]", "0 to 100", isotope->gamma_mev, 0.0, 100.0, 0},
  };
  for (size_t i = 0; i < sizeof field / sizeof field[0]; i++) {
    const double value = field[i].value;
    if (!(value >= field[i].low && value <= field[i].high) || (field[i].open && value == field[i].low)) {
      return lxg_error_set(error, LXG_INPUT, field[i].code, "%.15s: %s = %.10g: %s", isotope->name,
                           field[i].name, value, field[i].allowed);
    }
  }
  return LXG_OK;
}

/* 1 - exp(-(t_gamma/t)^2) and its derivative by t */
static double absorbed(double gamma_time, double age, double *slope) {
  *slope = 0.0;
  if (gamma_time == 0.0) {
    return 0.0;
  }
  const double depth = age > 0.0 && isfinite(gamma_time) ? (gamma_time / age) * (gamma_time / age) : INFINITY;
  if (!isfinite(depth)) {
    return 1.0;
  }
  *slope = -2.0 * depth / age * exp(-depth);
  return -expm1(-depth);
}

/* Heat per decay [erg] and its derivative by time [erg s^-1]. */
static double heat(const struct lxg_isotope *isotope, const struct lxg_decay_photons *photons, double age,
                   double *slope) {
  const double local = isotope->positrons * isotope->positron_mev;
  const double rays = isotope->positrons * annihilation_mev + (photons->lines ? isotope->gamma_mev : 0.0);
  double share_slope = 0.0;
  const double share = absorbed(photons->gamma_time, age, &share_slope);
  *slope = rays * share_slope * erg_per_mev;
  return (local + rays * share) * erg_per_mev;
}

double lxg_decay_heat(const struct lxg_isotope *isotope, const struct lxg_decay_photons *photons,
                      double age) {
  double unused = 0.0;
  return heat(isotope, photons, age, &unused);
}

/* L = (M/A m_u) lambda exp(-lambda t) E(t) */
double lxg_decay_luminosity(const struct lxg_isotope *isotope, const struct lxg_decay_photons *photons,
                            double mass, double age, double *rate_of_change) {
  const double lambda = log(2.0) / isotope->half_life;
  const double activity = mass / (isotope->mass_number * LXG_ATOMIC_MASS) * lambda * exp(-lambda * age);
  double heat_slope = 0.0;
  const double energy = heat(isotope, photons, age, &heat_slope);
  if (rate_of_change != NULL) {
    *rate_of_change = activity * (heat_slope - lambda * energy);
  }
  return activity * energy;
}
