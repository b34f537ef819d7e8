/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * photometry.h - magnitudes, colours and extinction against luminosity, radius and temperature.
 *
 * Bands are taken at their effective wavelength. Zero fluxes and wavelengths of the Vega system: Bessell 1979 (PASP 91,
 * 589) for U to I, with the J, H, K of the same compilation (Campins, Rieke & Lebofsky 1985); zero fluxes as
 * tabulated by literature, effective wavelengths and widths from memory. The band at 1455 Angstrom is the narrow
 * ultraviolet band of nova work (Cassatella, Altamore & Gonzalez-Riestra 2002, from memory), on the AB scale.
 * (P1) F_nu = pi B_nu(T) R^2/d^2,  L_nu = 4 pi^2 B_nu R^2,  M = -2.5 log10(L_nu/(4 pi (10 pc)^2 F_0))
 * (P2) m = M + 5 log10(d/10 pc) + A_band,  A_V = R_V E(B-V)
 * (P3) M_bol = -2.5 log10(L/L_0), L_0 = 3.0128e35 erg/s (IAU 2015 B2);  M_bol = M_band + BC
 * Taking a broad band at one wavelength costs a black body at most 0.025 mag from 4000 K upwards (0.06 mag at 3000 K),
 * measured against the mean over a rectangle of the band's width; real stars also have lines and jumps.
 */
#ifndef LUXGALE_PHOTOMETRY_H
#define LUXGALE_PHOTOMETRY_H

#include "luxgale/freefree.h"
#include "luxgale/status.h"

#include <stddef.h>

enum lxg_band {
  LXG_BAND_U,
  LXG_BAND_B,
  LXG_BAND_V,
  LXG_BAND_R,
  LXG_BAND_I,
  LXG_BAND_J,
  LXG_BAND_H,
  LXG_BAND_K,
  LXG_BAND_UV1455, /* narrow band at 1455 Angstrom, AB magnitudes */
  LXG_BAND_COUNT
};

struct lxg_band_info {
  const char *name;
  double wavelength; /* effective [cm] */
  double width;      /* full width over wavelength */
  double zero_jy;    /* flux of magnitude zero [Jy] */
  const char *source;
};

/* Description of a band (static data); NULL outside the enumeration. */
const struct lxg_band_info *lxg_band_info(enum lxg_band band);

/* Band of a name, spelt as in its description. LXG_INPUT "band-unknown", which lists the names. */
enum lxg_status lxg_band_find(const char *name, enum lxg_band *band, struct lxg_error *error);

/* Effective frequency [Hz]. */
double lxg_band_frequency(enum lxg_band band);

/* ---- black body and magnitudes (photometry/magnitude.c) */

/* B_nu [erg s^-1 cm^-2 Hz^-1 sr^-1]; frequency [Hz], temperature [K]. */
double lxg_photometry_planck(double frequency, double temperature);

/* Absolute magnitude of a luminosity density L_nu [erg s^-1 Hz^-1] in a band, and back. */
double lxg_photometry_magnitude(enum lxg_band band, double luminosity_density);
double lxg_photometry_density(enum lxg_band band, double magnitude);

/* Absolute magnitude of a black photosphere of temperature [K] and radius [cm]. */
double lxg_photometry_blackbody(enum lxg_band band, double temperature, double radius);

/* Radius [cm] of the black photosphere of temperature [K] with that absolute magnitude. */
double lxg_photometry_blackbody_radius(enum lxg_band band, double temperature, double magnitude);

/* 4 pi R^2 sigma T^4 [erg s^-1] of a radius [cm] and temperature [K]. */
double lxg_photometry_stefan(double temperature, double radius);

/* Share of a black body's luminosity between two photon energies [erg], low < high. */
double lxg_photometry_energy_share(double temperature, double energy_low, double energy_high);

/* The same in the soft X-ray band, 0.2 to 1 keV. */
double lxg_photometry_xray_share(double temperature);

/* ---- colours (photometry/colour.c) */

/* Temperatures between which a colour is inverted [K]. */
struct lxg_photometry_range {
  double low, high;
};

/* 1000 K to 1e6 K. */
struct lxg_photometry_range lxg_photometry_default_range(void);

/* Magnitude difference first - second of a black body of temperature [K]; first is the bluer band. */
double lxg_photometry_colour(enum lxg_band first, enum lxg_band second, double temperature);

/* Temperature [K] of the black body of an unreddened colour [mag]. LXG_NO_SOLUTION with "colour-blue" (bluer than the
 * hottest) or "colour-red"; LXG_INPUT "colour-bands" for two equal bands, "colour-value" for a colour that is no
 * number, "colour-range" for an impossible range. */
enum lxg_status lxg_photometry_colour_temperature(enum lxg_band first, enum lxg_band second, double colour,
                                                  struct lxg_photometry_range range, double *temperature,
                                                  struct lxg_error *error);

/* One unreddened absolute magnitude of a set taken together. */
struct lxg_photometry_measure {
  enum lxg_band band;
  double magnitude; /* absolute, extinction removed [mag] */
  double error;     /* one sigma [mag], > 0 */
};

/* Black body fitted to two or more bands. */
struct lxg_photometry_state {
  double temperature;       /* [K] */
  double radius;            /* [cm] */
  double luminosity;        /* [erg s^-1] */
  double ln_temperature_sd; /* one sigma of ln T from the given errors */
  double ln_luminosity_sd;  /* one sigma of ln L */
  double chi_sq;            /* sum of squared residuals over errors: 0 for two bands */
  size_t degrees;           /* count - 2 */
};

/* Least-squares temperature and radius of `count` >= 2 measures in at least two bands. LXG_INPUT "photometry-measures",
 * LXG_NO_SOLUTION "colour-blue"/"colour-red" when the best temperature lies at an end of the range. */
enum lxg_status lxg_photometry_fit(const struct lxg_photometry_measure measures[], size_t count,
                                   struct lxg_photometry_range range, struct lxg_photometry_state *state,
                                   struct lxg_error *error);

/* ---- bolometric scale (photometry/bolometric.c) */

/* M_bol of a luminosity [erg s^-1], and back (P3). */
double lxg_bolometric_magnitude(double luminosity);
double lxg_bolometric_luminosity(double magnitude);

enum lxg_bolometric_kind { LXG_BOLOMETRIC_GIVEN, LXG_BOLOMETRIC_TABLE, LXG_BOLOMETRIC_BLACKBODY };

/* How a band magnitude becomes bolometric. */
struct lxg_bolometric {
  enum lxg_bolometric_kind kind;
  double correction;  /* GIVEN: BC [mag] */
  size_t count;       /* TABLE: rows, at least 2 */
  const double *keys; /* TABLE: strictly rising (colour, time or ln T: the caller's choice); borrowed */
  const double *corrections; /* TABLE: BC of each key [mag]; borrowed */
};

/* LXG_INPUT "bolometric-table" unless the table has two or more finite rows with rising keys. */
enum lxg_status lxg_bolometric_check(const struct lxg_bolometric *bolometric, struct lxg_error *error);

/* BC [mag] of a black body in a band: M_bol - M_band, whatever its radius. */
double lxg_bolometric_blackbody(enum lxg_band band, double temperature);

/* BC [mag] at a key: GIVEN ignores it, TABLE interpolates linearly, BLACKBODY takes it as temperature [K].
 * LXG_NO_SOLUTION "bolometric-range" outside the table (never extrapolated) or for a temperature not above zero. */
enum lxg_status lxg_bolometric_correction(const struct lxg_bolometric *bolometric, enum lxg_band band,
                                          double key, double *correction, struct lxg_error *error);

/* ---- extinction (photometry/extinction.c) */

enum { LXG_EXTINCTION_RV_MIN = 2, LXG_EXTINCTION_RV_MAX = 6 }; /* R_V for which the law was derived */

/* A(lambda)/A_V for a wavelength [cm] and R_V: Cardelli, Clayton & Mathis 1989, ApJ 345, 245 (coefficients from memory,
 * checked against their table 3). LXG_INPUT "extinction-rv"; LXG_DOMAIN "extinction-wavelength" outside 0.1-3.33 um. */
enum lxg_status lxg_extinction_ratio(double wavelength, double r_v, double *ratio, struct lxg_error *error);

/* A_band [mag] from A_V [mag] >= 0 and R_V; A_V = R_V E(B-V). The law gives A_B - A_V = E(B-V) at 2.27/um and 1.01 E(B-V) at
 * the effective wavelength used here. LXG_INPUT "extinction-value" or "extinction-rv". */
enum lxg_status lxg_extinction_band(enum lxg_band band, double a_v, double r_v, double *a_band,
                                    struct lxg_error *error);

/* ---- which member of a family of winds has this magnitude (photometry/members.c) */

/* A family along its own order; arrays of `count` >= 2 positive values, borrowed. */
struct lxg_photometry_family {
  size_t count;
  const double *temperature;    /* of the photosphere [K] */
  const double *radius;         /* [cm] */
  const double *mass_loss_rate; /* [g s^-1]; NULL when only the photosphere's light is wanted */
  const double *speed;          /* of the wind near its photosphere [cm s^-1]; NULL likewise */
};

/* Which light is compared with the magnitude. */
enum lxg_light {
  LXG_LIGHT_PHOTOSPHERE, /* black body */
  LXG_LIGHT_FREEFREE,    /* thin wind outside the photosphere (F3) */
  LXG_LIGHT_LARGER,      /* the brighter of these two */
  LXG_LIGHT_WHOLE        /* photosphere and absorbing wind together (F4) */
};

/* Gas of the free-free light; its temperature is the photosphere's unless stated. */
struct lxg_light_options {
  enum lxg_light light;
  struct lxg_freefree_gas gas; /* used by all but PHOTOSPHERE */
  double gas_temperature;      /* [K]; 0: temperature of each photosphere (WHOLE: always that) */
};

/* A member: where it stands and what it shines with. */
struct lxg_photometry_member {
  size_t segment;        /* between nodes segment and segment + 1 */
  double fraction;       /* 0 to 1, ln of each quantity linear in it */
  double temperature;    /* [K] */
  double radius;         /* [cm] */
  double luminosity;     /* 4 pi R^2 sigma T^4 [erg s^-1] */
  enum lxg_light served; /* PHOTOSPHERE or FREEFREE when LARGER was asked; else as asked */
};

/* A family prepared for searching in one band: logarithms of its quantities and magnitudes of its members for each light
 * that counts. */
struct lxg_photometry_search {
  size_t count; /* members */
  enum lxg_band band;
  struct lxg_light_options options;
  size_t lights;           /* 1, or 2 for LARGER */
  enum lxg_light light[2]; /* which they are */
  double *magnitude[2];    /* [count] of each light [mag] */
  double *ln_quantity
      [4];        /* [count]: ln of temperature, radius, mass-loss rate, speed; the last two may be NULL */
  size_t runs[2]; /* stretches of each light that only rise or only fall */
  size_t *run[2]; /* [runs + 1] members at which they begin, and the last member */
  double theta;   /* h nu/k of the band [K] */
  double offset;  /* magnitude of a black body with R = 1 cm where exp(theta/T) = 2 [mag] */
  double brightest, faintest; /* over the members [mag] */
};

/* Checks and prepares. LXG_INPUT "members-family" for a bad family; LXG_MEMORY. Valid to free in every case. */
enum lxg_status lxg_photometry_search_init(const struct lxg_photometry_family *family, enum lxg_band band,
                                           const struct lxg_light_options *options,
                                           struct lxg_photometry_search *search, struct lxg_error *error);

/* Frees what the search holds; a zeroed one is allowed. */
void lxg_photometry_search_free(struct lxg_photometry_search *search);

/* Absolute magnitude at a place of the family; *served may be NULL. */
double lxg_photometry_member_magnitude(const struct lxg_photometry_search *search, size_t segment,
                                       double fraction, enum lxg_light *served);

/* All members whose absolute unreddened magnitude is `magnitude`, in the order of the family. Within a segment each
 * light is taken as monotonic (nodes dense enough). Well under 1 us each; no allocation; any number of threads.
 * LXG_INPUT "members-magnitude" for a magnitude that is no number; LXG_NO_SOLUTION "members-bright" or "members-faint" when
 * the family never shines so; LXG_LIMIT "members-capacity" when more than `capacity` exist (`members` is then full). */
enum lxg_status lxg_photometry_members(const struct lxg_photometry_search *search, double magnitude,
                                       struct lxg_photometry_member members[], size_t capacity, size_t *count,
                                       struct lxg_error *error);

/* Index of the member nearest to a place `segment + fraction` of the family, so that a caller can follow one branch from epoch to
 * epoch; count >= 1. */
size_t lxg_photometry_nearest(const struct lxg_photometry_member members[], size_t count, double place);

/* Way (a): L [erg s^-1] = L_0 10^(-0.4 (M_band + BC)). */
double lxg_photometry_luminosity(double magnitude, double correction);

#endif
