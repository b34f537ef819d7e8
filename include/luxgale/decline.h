/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decline.h - a whole eruption from stellar mass and composition: the burning envelope loses mass by its wind and its fire,
 * and passes through steady states until nothing burns.
 *
 *   (D1) dM_env/dt = Mdot_acc - Mdot_wind - L_n/(X Q)
 * along the winds over a burning base (wind.h) from a given start through the end of the wind, then along the envelopes at
 * rest (hydrostatic.h) to the smallest one that burns. Published outburst models find the decay phase close to such a
 * sequence (Kato, Saio & Hachisu 2022, PASJ 74, 1005); the flash before it is not computed.
 *
 * Energy: what leaves is light, lifting Mdot G M/R_0 and kinetic Mdot v_inf^2/2. Burning along the sequence pays for
 * part of it; the rest was stored in the envelope by the flash before the start and is the difference, `stored`.
 *
 * Limits: steady states only; fixed composition; the base stays at R_0; radiative transport; no companion star.
 *
 * Call order: lxg_decline_compute -> (read) -> lxg_decline_free. One call a thread.
 */
#ifndef LUXGALE_DECLINE_H
#define LUXGALE_DECLINE_H

#include "luxgale/family.h"
#include "luxgale/hydrostatic.h"
#include "luxgale/photometry.h"
#include "luxgale/status.h"
#include "luxgale/wind.h"

#include <stdbool.h>
#include <stddef.h>

enum lxg_decline_phase { LXG_DECLINE_WIND, LXG_DECLINE_STATIC };

/* Which light gives a magnitude: the brightest of these. */
enum lxg_decline_light {
  LXG_DECLINE_BLACKBODY, /* photosphere */
  LXG_DECLINE_FREEFREE,  /* wind outside it, as far as its own absorption lets it through */
  LXG_DECLINE_SHELL      /* gas thrown out earlier */
};

/* One moment. Numbers that the phase does not give are NaN (rates: 0). */
struct lxg_decline_state {
  double time; /* since the start [s] */
  enum lxg_decline_phase phase;
  double envelope_mass;                    /* [g] */
  double mass_loss_rate;                   /* wind [g s^-1]; 0 at rest */
  double burning_rate;                     /* L_n/(X Q) [g s^-1] */
  double luminosity;                       /* of the photosphere [erg s^-1] */
  double light;                            /* that reaches infinity [erg s^-1] */
  double nuclear_luminosity;               /* [erg s^-1] */
  double lifting_rate;                     /* Mdot G M/R_0 [erg s^-1] */
  double kinetic_rate;                     /* Mdot v_inf^2/2 [erg s^-1] */
  double photosphere_radius;               /* [cm] */
  double photosphere_temperature;          /* [K] */
  double photosphere_speed;                /* [cm s^-1] */
  double terminal_speed;                   /* [cm s^-1] */
  double base_temperature;                 /* [K] */
  double critical_depth;                   /* optical depth of the critical point */
  double ejected_mass;                     /* so far [g] */
  double burnt_mass;                       /* so far [g] */
  double v_magnitude;                      /* absolute, unreddened [mag] */
  enum lxg_decline_light v_light;          /* which light that is */
  double v_blackbody, v_freefree, v_shell; /* absolute magnitude of each light alone [mag]; infinite: none */
  double v_thin;       /* free-free light without its own absorption, Mdot^2/(v^2 R) [mag]; infinite: none */
  double uv_magnitude; /* the same for 1455 Angstrom [mag] */
  double xray_luminosity; /* of the black photosphere, 0.2 to 1 keV [erg s^-1] */
};

/* Where the eruption starts. */
enum lxg_decline_start {
  LXG_DECLINE_START_IGNITION,   /* envelope mass 4 pi R_0^4 P/(G M) */
  LXG_DECLINE_START_MASS,       /* a given envelope mass */
  LXG_DECLINE_START_TEMPERATURE /* a given photospheric temperature */
};

struct lxg_decline_options {
  enum lxg_decline_start start;
  double start_value;     /* pressure [dyn cm^-2], mass [g] or temperature [K] */
  double accretion_rate;  /* [g s^-1], >= 0 */
  double time_most;       /* stop condition [s]; infinity: none */
  double mass_least;      /* stop condition: envelope mass [g]; 0: none */
  bool wind_only;         /* stop at the end of the wind */
  double thin_depth;      /* optical depth of the critical point at which the wind ends */
  double tolerance;       /* linear interpolation error between neighbouring states, in logarithms */
  double gas_temperature; /* of the electrons outside a hotter photosphere [K]; 0: always the photosphere's */
  double rise;            /* time between outburst and start, for the slopes [s], >= 0 */
};
struct lxg_decline_options lxg_decline_options_default(void);

/* Why the sequence ends: name, stable code, sentence. */
#define LXG_DECLINE_END_LIST(X)                                                                              \
  X(LXG_DECLINE_TURN_OFF, "turn-off", "the envelope reached the smallest mass that burns steadily")          \
  X(LXG_DECLINE_STEADY, "steady-burning",                                                                    \
    "burning no longer outruns accretion: the envelope stops shrinking")                                     \
  X(LXG_DECLINE_STOPPED, "stopped", "a stop condition of the case was met")                                  \
  X(LXG_DECLINE_WIND_END, "wind-end", "the wind ended and nothing was asked beyond")                         \
  X(LXG_DECLINE_LOST, "lost", "the sequence of envelopes could not be followed to the turn-off")

enum lxg_decline_end {
#define LXG_DECLINE_END_ENUM(name, code, text) name,
  LXG_DECLINE_END_LIST(LXG_DECLINE_END_ENUM)
#undef LXG_DECLINE_END_ENUM
      LXG_DECLINE_END_COUNT
};

/* Stable code and sentence; never NULL. */
const char *lxg_decline_end_code(enum lxg_decline_end end);
const char *lxg_decline_end_text(enum lxg_decline_end end);

/* How the envelopes at rest follow the wind: value at rest over value at the end of the wind, minus one. */
struct lxg_decline_join {
  bool wind, rest; /* both must be there for the differences to be numbers */
  double envelope_mass, luminosity, temperature;
};

/* Mean slope dlog F/dlog t of a light curve, t since outburst, between two depths below its maximum. */
struct lxg_decline_slope {
  double from_mag, to_mag; /* below maximum [mag] */
  double slope;            /* NaN if the stretch is not there */
};
enum { LXG_DECLINE_SLOPES = 3 };

/* One light curve in V: its maximum, its decline, its slopes. NaN where it does not go so far. */
struct lxg_decline_curve {
  double peak, peak_time; /* [mag], [s] */
  double t2, t3;          /* first fall by 2 and 3 mag after it [s] */
  struct lxg_decline_slope slope[LXG_DECLINE_SLOPES];
};

struct lxg_decline {
  size_t count;
  struct lxg_decline_state *state; /* [count], time rising */
  enum lxg_decline_end end;
  double
      wanted_mass; /* envelope mass that the start option asks for [g]; NaN when a temperature was asked for */
  bool start_clipped;             /* the steady states end before that: the start is the largest one */
  enum lxg_wind_reason thick_end; /* why the winds end there */
  struct lxg_decline_join join;
  size_t wind_states;     /* states with a wind: the first ones */
  double wind_duration;   /* [s]; 0 without a wind */
  double thick_duration;  /* until the optical depth of the critical point falls to 5 [s]; 0 without */
  double supersoft_start; /* first time at rest with a tenth of the largest X-ray luminosity [s]; NaN */
  double turn_off;        /* [s]; NaN unless the end is turn-off */
  double ejected_mass, burnt_mass, accreted_mass, remaining_mass; /* [g] */
  double nuclear;                                                 /* int L_n dt [erg] */
  double light, lifting, kinetic;                                 /* [erg] */
  double stored;                                    /* light + lifting + kinetic - nuclear [erg] */
  double light_share, lifting_share, kinetic_share; /* of light + lifting + kinetic */
  double mean_speed;                                /* mass-weighted v_inf [cm s^-1]; NaN without ejecta */
  struct lxg_decline_curve v;                       /* of v_magnitude */
  struct lxg_decline_curve freefree;                /* of v_thin, as long as there is a wind */
  int newton_steps;
};

/* The eruption of a model with burning. NULL options: defaults. LXG_INPUT "decline-burning", "decline-start",
 * "decline-accretion", "decline-stop", "decline-options" for impossible input; LXG_NO_SOLUTION "decline-none" when there is
 * neither wind nor envelope at rest, "decline-start-outside" when no state has the start temperature. */
enum lxg_status lxg_decline_compute(const struct lxg_wind_model *model,
                                    const struct lxg_decline_options *options, struct lxg_decline *decline,
                                    struct lxg_error *error);
void lxg_decline_free(struct lxg_decline *decline);

struct lxg_node;

/* Reads the section `decline` of a case (NULL: defaults); without another start it is the ignition mass of the pressure [dyn
 * cm^-2]. LXG_INPUT with the place: unknown keys, "value-range", "decline-start" for two starts. */
enum lxg_status lxg_decline_read(struct lxg_node *section, double ignition_pressure,
                                 struct lxg_decline_options *options, struct lxg_error *error);

#endif
