/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * driving.h - can radiation do it? Photon tiring, closed wind laws beyond the Eddington limit, and the verdict on a claim.
 *
 * A wind of rate Mdot lifted out of R_0 by a base luminosity L spends the share m = Mdot G M/(R_0 L) of the light on lifting
 * alone: m < 1 is the tiring limit (Owocki & Gayley 1997). With Gamma = kappa L/(4 pi G M c) at the base, x = 1 - R_0/r, w =
 * v^2/v_esc^2(R_0), constant opacity and no gas pressure:
 *   flux law      w(x) = -x + [1 - exp(-m Gamma x)]/m              (Owocki, Gayley & Shaviv 2004, ApJ 616, 525)
 *   enthalpy law  w_inf = Gamma/(1 + m Gamma) - 1, m <= 1 - 1/Gamma (Owocki, Townsend & Quataert 2017, MNRAS 472, 3749: the
 *                 light also carries radiation enthalpy along)
 * Porous flow above the Eddington limit: Mdot = W (L - L_Edd)/(c c_T) (Shaviv 2001, MNRAS 326, 126; W of order 1 to 10, from
 * memory).
 */
#ifndef LUXGALE_DRIVING_H
#define LUXGALE_DRIVING_H

#include "luxgale/history.h"
#include "luxgale/star.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* ---- photon tiring ---- */

/* m = Mdot G M/(R_0 L) for a mass-loss rate [g s^-1] and a base luminosity [erg s^-1]. */
double lxg_driving_tiring_number(const struct lxg_star *star, double mass_loss, double luminosity);

/* Mass [g] that an energy [erg] can lift from R_0 at most: R_0 E/(G M). */
double lxg_driving_tiring_mass(const struct lxg_star *star, double energy);

/* w at x in [0, 1] by the flux law, m >= 0; m = 0 gives (Gamma - 1) x. Negative: the flow does not get there. */
double lxg_driving_flux_law(double gamma, double m, double x);

/* Largest m for which the flux law reaches infinity: 1 - exp(-m Gamma) = m. LXG_NO_SOLUTION "driving-gamma" unless Gamma > 1 and
 * finite. */
enum lxg_status lxg_driving_flux_limit(double gamma, double *m, struct lxg_error *error);

/* w_inf by the enthalpy law; negative above its limit. */
double lxg_driving_enthalpy_law(double gamma, double m);

/* Largest m of the enthalpy law, 1 - 1/Gamma; 0 for Gamma <= 1. */
double lxg_driving_enthalpy_limit(double gamma);

/* Quick estimates beside a full solution. Speeds are NaN where there is no steady wind. */
struct lxg_driving_estimate {
  double tiring_number;  /* m */
  double flux_limit;     /* largest m of the flux law; 0 for Gamma <= 1 */
  double enthalpy_limit; /* largest m of the enthalpy law */
  double flux_speed;     /* terminal speed by the flux law [cm s^-1] */
  double enthalpy_speed; /* terminal speed by the enthalpy law [cm s^-1] */
  double
      observed_share; /* light left at infinity over base luminosity, 1 - m (w_inf + 1) by the enthalpy law */
  double excess; /* m over the enthalpy limit; above 1 (infinite for Gamma <= 1) there is no steady wind */
  bool steady;   /* m <= enthalpy limit and Gamma > 1 */
};

/* Estimates for a base Eddington ratio, base luminosity [erg s^-1] and mass-loss rate [g s^-1], all finite and > 0; else
 * LXG_INPUT "driving-estimate". */
enum lxg_status lxg_driving_estimate_wind(const struct lxg_star *star, double gamma, double luminosity,
                                          double mass_loss, struct lxg_driving_estimate *estimate,
                                          struct lxg_error *error);

/* ---- flow above the Eddington limit ---- */

/* Mdot = W (L - L_Edd)/(c c_T) [g s^-1], 0 below L_Edd; luminosities [erg s^-1], c_T [cm s^-1]. */
double lxg_driving_porous_rate(double w, double luminosity, double eddington, double sound_speed);

/* W = Mdot c c_T/(L - L_Edd) of a wind; NaN where L <= L_Edd. */
double lxg_driving_porous_number(double mass_loss, double luminosity, double eddington, double sound_speed);

/* ---- the verdict ---- */

/* What somebody says was ejected, with 68 % bounds (equal to the value when not known). */
struct lxg_driving_claim {
  double mass, mass_low, mass_high;    /* [g], > 0 */
  double speed, speed_low, speed_high; /* terminal speed [cm s^-1], > 0, below c */
};

/* What the light of a history offers. */
struct lxg_driving_light {
  enum lxg_history_kind kind; /* base: all the energy there was; photosphere: what was left */
  double radiated, radiated_low, radiated_high; /* int L dt [erg] */
};

/* What steady winds that follow the history carry; bounds equal the value when not known. */
struct lxg_driving_wind {
  double mass, mass_low, mass_high;    /* int Mdot dt [g] */
  double speed, speed_low, speed_high; /* largest terminal speed [cm s^-1] */
  double momentum;                     /* int Mdot v_inf dt [g cm s^-1] */
  double
      solved_share; /* share of the time of the history in which a steady wind, or its certain absence, was found: 0
                        * to 1; below 1 the totals are lower limits */
};

enum lxg_driving_answer { LXG_DRIVING_UNDECIDED, LXG_DRIVING_SUFFICIENT, LXG_DRIVING_INSUFFICIENT };
enum lxg_driving_outcome { LXG_DRIVING_OPEN, LXG_DRIVING_MET, LXG_DRIVING_MISSED };

/* Needs compared with supplies, in this order. */
enum lxg_driving_criterion {
  LXG_DRIVING_TIRING, /* mass against the tiring bound R_0 E/(G M) [g] */
  LXG_DRIVING_ENERGY, /* lifting + kinetic energy against the light [erg] */
  LXG_DRIVING_MOMENTUM, /* M v against E/c, or the momentum of the steady winds when that is larger [g cm s^-1] */
  LXG_DRIVING_WIND_MASS,  /* mass against the mass of the steady winds [g] */
  LXG_DRIVING_WIND_SPEED, /* speed against their largest terminal speed [cm s^-1] */
  LXG_DRIVING_CRITERIA
};

enum { LXG_DRIVING_REASON_SIZE = 256 };

struct lxg_driving_check {
  enum lxg_driving_outcome outcome;
  double need, need_low, need_high;       /* from the claim and its bounds; unit of the criterion */
  double supply, supply_low, supply_high; /* NaN when there is none to compare with */
  double ratio;                           /* need/supply */
  char reason[LXG_DRIVING_REASON_SIZE];   /* one sentence */
};

struct lxg_driving_verdict {
  enum lxg_driving_answer answer;
  char reason[LXG_DRIVING_REASON_SIZE]; /* one sentence: which check decides */
  double lifting;                       /* M G M/R_0 of the claimed mass [erg] */
  double kinetic;                       /* M v^2/2 [erg] */
  double momentum;                      /* M v [g cm s^-1] */
  double light_momentum;                /* E/c: every photon pushes once [g cm s^-1] */
  double scatterings;                   /* M v c/E: pushes per photon that the claim needs */
  double wind_scatterings;              /* the same for the steady winds; NaN without */
  double tiring_mass;                   /* R_0 E/(G M) [g] */
  double base_energy; /* energy the base gives off if the claim holds: E (base), E + needs (photosphere) */
  struct lxg_driving_check check[LXG_DRIVING_CRITERIA];
};

/* Names for reports: "undecided", "sufficient", "insufficient"; "open", "met", "missed"; "tiring", "energy", "momentum",
 * "wind_mass", "wind_speed". Never NULL. */
const char *lxg_driving_answer_name(enum lxg_driving_answer answer);
const char *lxg_driving_outcome_name(enum lxg_driving_outcome outcome);
const char *lxg_driving_criterion_name(enum lxg_driving_criterion criterion);

/* Energy of a history with its bounds (equal to the value without errors). Errors of lxg_history_energy. */
enum lxg_status lxg_driving_light_of(const struct lxg_history *history, struct lxg_driving_light *light,
                                     struct lxg_error *error);

/* Compares a claim with the light and, unless NULL, with the steady winds of the history.
 *
 * A check is met when the high end of the need stays below the low end of the supply, missed when the low end of the need
 * exceeds the high end of the supply, open in between. Insufficient: energy conservation is violated (tiring or energy missed,
 * light counted at the base), or steady winds known over the whole history carry too little mass or stay too slow. Sufficient: every check is
 * met. Anything else is undecided: light counted at the photosphere is what lifting left over, so it cannot refute a claim by
 * itself; a missed momentum asks for more scatterings than the winds have, which only a wind model can judge.
 * LXG_INPUT "driving-claim", "driving-light", "driving-wind" for numbers out of range. */
enum lxg_status lxg_driving_judge(const struct lxg_star *star, const struct lxg_driving_claim *claim,
                                  const struct lxg_driving_light *light, const struct lxg_driving_wind *wind,
                                  struct lxg_driving_verdict *verdict, struct lxg_error *error);

struct lxg_node;

/* Reads the section `driving` of a case: mass and speed of the claim, and their standard errors. Absent: `*given` is false. LXG_INPUT with
 * the place ("driving-claim" for an error as large as its value). */
enum lxg_status lxg_driving_read(struct lxg_node *section, bool *given, struct lxg_driving_claim *claim,
                                 struct lxg_error *error);

#endif
