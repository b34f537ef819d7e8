/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * profile.h - shape of one spectral line of a spherical outflow: Sobolev source function, exact formal integral.
 *
 * Outside a photosphere of radius R (black, intensity I_c) gas flows with speed v(r) and density rho(r). Light of
 * a line meets gas of one resonance surface v_z = v(r) mu = x only (x: velocity towards the observer). With sigma
 * = dlnv/dlnr - 1:
 *   (P1) tau(r, mu) = tau_0/(1 + sigma mu^2), tau_0 = chi r/v; resonance chi = k (r/R)^q rho, recombination chi = a rho^2
 *   (P2) escape probabilities beta = int_0^1 f dmu, beta_c = (1/2) int_mu_c^1 f dmu, f = (1 - e^-tau)/tau,
 *        mu_c = (1 - R^2/r^2)^(1/2)   (Castor 1970, MNRAS 149, 111)
 *   (P3) resonance: pure scattering, S = I_c beta_c/beta; recombination: S = e/a, or emission e rho^2 alone when a = 0
 *   (P4) F(x) = int I 2 pi p dp, I = I_core e^-tau + S (1 - e^-tau) on each ray at its resonance, the core hiding what is behind it.
 * For an outflow that nowhere decelerates the ray integral is taken along the surface, p dp = r (1 + sigma mu^2)
 * dr, and is smooth. A decelerating flow has rays that meet gas of one velocity twice or more: then rays are
 * followed one by one through all their surfaces in order; the source function stays local (radiative coupling
 * between the surfaces is neglected), `coupled` says so and the photon balance shows how much that costs. Photon
 * balance of pure scattering: int (F/F_c - 1) dx = -4 int chi (S/I_c) beta_c (r/R)^2 dr, the photons that fall
 * back on the core: two different integrals, both returned.
 *
 * Intensities are per velocity interval [erg s^-1 cm^-2 sr^-1 (cm/s)^-1]: I_c = B_nu nu/c.
 */
#ifndef LUXGALE_PROFILE_H
#define LUXGALE_PROFILE_H

#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* Gas at one radius. */
struct lxg_profile_gas {
  double speed;   /* v [cm s^-1], > 0 */
  double slope;   /* dlnv/dlnr */
  double density; /* rho [g cm^-3], > 0 */
};

/* Fills the gas at a radius [cm] within the flow; anything but LXG_OK ends the calculation. */
typedef enum lxg_status lxg_profile_law(const void *context, double radius, struct lxg_profile_gas *gas);

struct lxg_profile_flow {
  lxg_profile_law *law;
  const void *context;
  double inner; /* R: the photosphere, where the flow begins [cm] */
  double outer; /* end of the flow [cm] */
};

struct lxg_profile_table; /* opaque: a flow from arrays, ln v and ln rho monotone C1 (Steffen 1990) in ln r */

/* Copies count >= 3 rows of radius [cm] rising, speed [cm s^-1] > 0, density [g cm^-3] > 0. LXG_INPUT
 * ("profile-count", "profile-radius", "profile-speed", "profile-density") with the row named; LXG_MEMORY. */
enum lxg_status lxg_profile_table_create(size_t count, const double radius[], const double speed[],
                                         const double density[], struct lxg_profile_table **table,
                                         struct lxg_error *error);
void lxg_profile_table_destroy(struct lxg_profile_table *table);

/* The flow behind a table, which must outlive it. */
struct lxg_profile_flow lxg_profile_table_flow(const struct lxg_profile_table *table);

enum lxg_profile_kind { LXG_PROFILE_RESONANCE, LXG_PROFILE_RECOMBINATION };

struct lxg_profile_line {
  enum lxg_profile_kind kind;
  double strength;       /* k of a resonance line [cm^3 g^-1 s^-1], >= 0 */
  double strength_index; /* q */
  double emissivity;     /* e of a recombination line [erg cm^3 g^-2 s^-1 sr^-1], >= 0 */
  double opacity;        /* a of a recombination line [cm^6 g^-2 s^-1], >= 0; 0: optically thin */
};

/* k = pi e^2/(m_e c) f lambda n with oscillator strength f, wavelength [cm] and absorbing ions per gram of gas.
 * */
double lxg_profile_strength(double oscillator_strength, double wavelength, double ions_per_gram);

struct lxg_profile_core {
  double intensity; /* I_c, >= 0; above 0 for a resonance line */
  bool transparent; /* the far side is seen through the core (an old shell); needs I_c = 0 */
};

struct lxg_profile_settings {
  size_t count;  /* velocities of the profile, odd (161) */
  size_t panels; /* of eight Gauss points on each smooth stretch of an integral (16) */
  size_t rays;   /* rays through a decelerating flow (400) */
  bool
      by_rays; /* follow rays even where the surface integral would do: a second method, slower and coarser */
  double edge_depth; /* depth below the continuum, as a share of it, that counts as absorption (0.01) */
};

struct lxg_profile {
  size_t count;
  double *velocity;         /* radial velocity [cm s^-1]: negative approaches; rising, symmetric about 0 */
  double *flux;             /* F [erg s^-1 sr^-1 (cm/s)^-1] */
  double continuum;         /* pi R^2 I_c, same unit */
  bool has_absorption;      /* somewhere at least edge_depth below the continuum */
  double absorption_speed;  /* of the deepest point [cm s^-1, positive]; NaN if none */
  double absorption_depth;  /* 1 - F/F_c there; NaN if none */
  double blue_edge;         /* largest speed still edge_depth below the continuum [cm s^-1]; NaN if none */
  bool has_emission;        /* somewhere above the continuum */
  double emission_velocity; /* radial velocity of the highest point [cm s^-1]; NaN if none */
  double emission_height;   /* F - F_c there; NaN if none */
  double
      emission_half_width; /* distance from line centre, on the receding side, of half that height [cm s^-1]; NaN if none */
  double largest_speed; /* half width at zero intensity [cm s^-1] */
  double line_flux;     /* int (F - F_c) dv [erg s^-1 sr^-1] */
  double expected_flux; /* the same from the photon balance, resonance only; NaN else */
  bool coupled;         /* a decelerating flow: coupling of resonance surfaces neglected */
};

void lxg_profile_defaults(struct lxg_profile_settings *settings);

/* F at one radial velocity. settings NULL: defaults. Errors as lxg_profile_compute. */
enum lxg_status lxg_profile_flux(const struct lxg_profile_flow *flow, const struct lxg_profile_line *line,
                                 const struct lxg_profile_core *core,
                                 const struct lxg_profile_settings *settings, double velocity, double *flux,
                                 struct lxg_error *error);

/* The whole profile; `profile` is overwritten and later freed by lxg_profile_free. LXG_INPUT ("profile-flow",
 * "profile-line", "profile-core", "profile-settings"); LXG_DOMAIN ("profile-law") if the law fails or gives
 * impossible gas; LXG_MEMORY. */
enum lxg_status lxg_profile_compute(const struct lxg_profile_flow *flow, const struct lxg_profile_line *line,
                                    const struct lxg_profile_core *core,
                                    const struct lxg_profile_settings *settings, struct lxg_profile *profile,
                                    struct lxg_error *error);
void lxg_profile_free(struct lxg_profile *profile);

/* beta and beta_c of (P2) for tau_0, sigma and r/R, by Gauss quadrature graded to the structure of f. */
void lxg_profile_escape(double depth, double sigma, double radius_ratio, double *beta, double *beta_core);

/* ---- section of a case ---- */

/* One line asked for: an item of `lines.profiles`. */
struct lxg_profile_request {
  const char *label; /* borrowed from the document */
  struct lxg_profile_line line;
  double
      optical_depth; /* Sobolev depth tau_0 at the photosphere that fixes the strength; NaN: the strength is given */
  double wavelength; /* [cm]; NaN if not given */
  size_t points;     /* velocities of the profile */
  size_t count;      /* epochs */
  double *time;      /* [count] [s] */
};

struct lxg_profile_requests {
  size_t count;
  struct lxg_profile_request *request;
};

struct lxg_node;

/* Reads the list `lines.profiles`; absent: none. LXG_INPUT with the place: "profile-strength" (none, or more than one way to
 * say how strong the line is), "profile-unused" (a key of the other kind), "profile-value", "profile-points". */
enum lxg_status lxg_profile_requests_read(struct lxg_node *list, struct lxg_profile_requests *requests,
                                          struct lxg_error *error);
void lxg_profile_requests_free(struct lxg_profile_requests *requests);

#endif
