/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * magnitude.c - black-body light in bands and in photon-energy ranges: (P1) of photometry.h.
 *
 * Share of a black body above x = E/kT: (15/pi^4) sum_n exp(-n x)(x^3/n + 3x^2/n^2 + 6x/n^3 + 6/n^4); below small x
 * the power series of x^3/(e^x - 1), (15/pi^4) x^3 (1/3 - x/8 + x^2/60 - x^4/5040 + x^6/272160 - x^8/13305600).
 */
#include "luxgale/constants.h"
#include "luxgale/photometry.h"

#include <math.h>

static const double jansky = 1e-23;                             /* [erg s^-1 cm^-2 Hz^-1] */
static const double ten_parsec = 10.0 * LXG_PARSEC;             /* [cm] */
static const double kiloelectronvolt = 1e3 * LXG_ELECTRON_VOLT; /* [erg] */
static const double xray_low_kev = 0.2;                         /* the soft X-ray band */
static const double xray_high_kev = 1.0;
static const double series_switch =
    1.0; /* x: power series below, exponential series above; both good to 1e-9 there */
static const int tail_terms = 40; /* exp(-40) is lost */

double lxg_photometry_planck(double frequency, double temperature) {
  const double x = LXG_PLANCK * frequency / (LXG_BOLTZMANN * temperature);
  return 2.0 * LXG_PLANCK * frequency * frequency * frequency / (LXG_SPEED_OF_LIGHT * LXG_SPEED_OF_LIGHT) /
         expm1(x);
}

/* L_nu of magnitude zero [erg s^-1 Hz^-1]. */
static double zero_density(enum lxg_band band) {
  return 4.0 * LXG_PI * ten_parsec * ten_parsec * lxg_band_info(band)->zero_jy * jansky;
}

double lxg_photometry_magnitude(enum lxg_band band, double luminosity_density) {
  return -2.5 * log10(luminosity_density / zero_density(band));
}

double lxg_photometry_density(enum lxg_band band, double magnitude) {
  return zero_density(band) * pow(10.0, -0.4 * magnitude);
}

/* L_nu of a black sphere of unit radius [erg s^-1 Hz^-1 cm^-2]. */
static double surface_density(enum lxg_band band, double temperature) {
  return 4.0 * LXG_PI * LXG_PI * lxg_photometry_planck(lxg_band_frequency(band), temperature);
}

double lxg_photometry_blackbody(enum lxg_band band, double temperature, double radius) {
  return lxg_photometry_magnitude(band, surface_density(band, temperature)) - 5.0 * log10(radius);
}

double lxg_photometry_blackbody_radius(enum lxg_band band, double temperature, double magnitude) {
  return sqrt(lxg_photometry_density(band, magnitude) / surface_density(band, temperature));
}

double lxg_photometry_stefan(double temperature, double radius) {
  const double t2 = temperature * temperature;
  return 4.0 * LXG_PI * radius * radius * LXG_STEFAN_BOLTZMANN * t2 * t2;
}

static double share_below(double x) {
  const double x2 = x * x;
  return x * x2 *
         (1.0 / 3.0 - x / 8.0 +
          x2 * (1.0 / 60.0 - x2 * (1.0 / 5040.0 - x2 * (1.0 / 272160.0 - x2 / 13305600.0))));
}

static double share_above(double x) {
  double sum = 0.0;
  for (int n = tail_terms; n >= 1; n--) {
    const double i = 1.0 / n;
    sum += exp(-n * x) * (i * (x * x * x + i * (3.0 * x * x + i * (6.0 * x + i * 6.0))));
  }
  return sum;
}

double lxg_photometry_energy_share(double temperature, double energy_low, double energy_high) {
  const double kt = LXG_BOLTZMANN * temperature;
  const double low = energy_low / kt;
  const double high = energy_high / kt;
  const double pi4 = LXG_PI * LXG_PI * LXG_PI * LXG_PI;
  if (high <= series_switch) {
    return 15.0 / pi4 * (share_below(high) - share_below(low));
  }
  const double above = share_above(high);
  return low >= series_switch ? 15.0 / pi4 * (share_above(low) - above)
                              : 1.0 - 15.0 / pi4 * (share_below(low) + above);
}

double lxg_photometry_xray_share(double temperature) {
  return lxg_photometry_energy_share(temperature, xray_low_kev * kiloelectronvolt,
                                     xray_high_kev * kiloelectronvolt);
}
