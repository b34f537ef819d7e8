/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family.h - the one-parameter sequence of winds that share one held quantity, from the thin end to the thick end.
 *
 * Traced by pseudo-arclength continuation, so folds are passed; dense enough that linear interpolation between
 * neighbouring winds errs less than a stated tolerance in every quantity; read by cubic interpolation in the arc length.
 * A value of a second quantity may be met more than once: every crossing is reported.
 *
 * Call order: lxg_family_trace -> lxg_family_index_create -> lxg_family_index_branch, lxg_family_at -> lxg_family_free. A traced family is read-only and may
 * be shared by threads.
 */
#ifndef LUXGALE_FAMILY_H
#define LUXGALE_FAMILY_H

#include "luxgale/status.h"
#include "luxgale/wind.h"

#include <stddef.h>

/* Which of several members with the same value is meant. */
enum lxg_branch {
  LXG_BRANCH_THIN, /* the smallest mass-loss rate */
  LXG_BRANCH_THICK /* the largest */
};

/* How a number is interpolated. */
enum lxg_family_scale {
  LXG_SCALE_SIGNED, /* arsinh(L/L_Edd): of either sign */
  LXG_SCALE_LOG,    /* natural logarithm */
  LXG_SCALE_SQUARE  /* square: the terminal speed goes to zero as a square root where a family stagnates */
};

/* Numbers interpolated along a family: name, key, member of struct lxg_wind, scale. */
#define LXG_FAMILY_LIST(X)                                                                                   \
  X(BASE_TEMPERATURE, base_temperature, value[LXG_HELD_BASE_TEMPERATURE], LXG_SCALE_LOG)                     \
  X(BASE_LUMINOSITY, base_luminosity, value[LXG_HELD_BASE_LUMINOSITY], LXG_SCALE_SIGNED)                     \
  X(LAUNCH_RADIUS, launch_radius, value[LXG_HELD_LAUNCH_RADIUS], LXG_SCALE_LOG)                              \
  X(PHOTOSPHERE_LUMINOSITY, photosphere_luminosity, value[LXG_HELD_PHOTOSPHERE_LUMINOSITY], LXG_SCALE_LOG)   \
  X(PHOTOSPHERE_TEMPERATURE, photosphere_temperature, value[LXG_HELD_PHOTOSPHERE_TEMPERATURE],               \
    LXG_SCALE_LOG)                                                                                           \
  X(PHOTOSPHERE_RADIUS, photosphere_radius, value[LXG_HELD_PHOTOSPHERE_RADIUS], LXG_SCALE_LOG)               \
  X(TERMINAL_SPEED, terminal_speed, value[LXG_HELD_TERMINAL_SPEED], LXG_SCALE_SQUARE)                        \
  X(MASS_LOSS_RATE, mass_loss_rate, value[LXG_HELD_MASS_LOSS_RATE], LXG_SCALE_LOG)                           \
  X(ENERGY_RATE, energy_rate, value[LXG_HELD_ENERGY_RATE], LXG_SCALE_SIGNED)                                 \
  X(ENVELOPE_MASS, envelope_mass, value[LXG_HELD_ENVELOPE_MASS], LXG_SCALE_LOG)                              \
  X(CRITICAL_TEMPERATURE, critical_temperature, critical.temperature, LXG_SCALE_LOG)                         \
  X(CRITICAL_DEPTH, critical_depth, critical.optical_depth, LXG_SCALE_LOG)                                   \
  X(PHOTOSPHERE_SPEED, photosphere_speed, photosphere.speed, LXG_SCALE_LOG)                                  \
  X(PHOTOSPHERE_OPACITY, photosphere_opacity, photosphere.opacity, LXG_SCALE_LOG)                            \
  X(LUMINOSITY_INFINITY, luminosity_infinity, luminosity_infinity, LXG_SCALE_SIGNED)                         \
  X(GAMMA_MAX, gamma_max, gamma_max, LXG_SCALE_LOG)                                                          \
  X(FLOW_TIME, flow_time, flow_time, LXG_SCALE_LOG)                                                          \
  X(DIFFUSION_TIME, diffusion_time, diffusion_time, LXG_SCALE_LOG)                                           \
  X(NUCLEAR_LUMINOSITY, nuclear_luminosity, nuclear_luminosity, LXG_SCALE_SIGNED)

/* The first LXG_HELD_COUNT members stand in the order of enum lxg_held. */
enum lxg_family_quantity {
#define LXG_FAMILY_ENUM(name, key, member, scale) LXG_FAMILY_##name,
  LXG_FAMILY_LIST(LXG_FAMILY_ENUM)
#undef LXG_FAMILY_ENUM
      LXG_FAMILY_COUNT
};

/* One place of a family: the numbers of LXG_FAMILY_LIST in CGS. */
struct lxg_family_place {
  double arc;
  double value[LXG_FAMILY_COUNT];
};

/* A traced family: winds in order of arc length, from the thin end (index 0) to the thick end. */
struct lxg_family {
  struct lxg_wind_hold hold; /* what all members share */
  size_t count;
  struct lxg_wind *wind;         /* [count] */
  double *arc;                   /* [count] increasing, arc[0] = 0 */
  double *table;                 /* [count * LXG_FAMILY_COUNT] interpolated numbers, logarithms where so */
  enum lxg_wind_reason thin_end; /* why the family ends there */
  enum lxg_wind_reason thick_end;
  double l_edd;     /* unit of the signed luminosities in the table [erg s^-1] */
  int newton_steps; /* spent in all */
};

struct lxg_family_options {
  double
      tolerance; /* largest relative error of linear interpolation between neighbours (signed luminosities: of max(|L|, L_Edd);
                         * terminal speeds below a tenth of the photospheric speed: of that tenth) */
  double thin_depth;  /* the thin end: critical optical depth below which diffusion is no description */
  double radius_most; /* the thick end at the latest: photospheric radius [cm] */
  double energy_most; /* the thick end at the latest: energy rate in units of L_Edd */
  double
      envelope_most; /* the thick end at the latest: envelope mass over the star's; its own gravity is neglected */
  size_t count_most; /* winds at most */
};
struct lxg_family_options lxg_family_options_default(void);

/* An energy_most under which a family can reach a held luminosity or energy rate, however much of it lifts the gas: the default, or a
 * hundred times that value over L_Edd (porous winds of 50 L_Edd carry up to 80 times their light). */
double lxg_family_energy_most(const struct lxg_wind_solver *solver, const struct lxg_wind_hold *target);

/* Traces the family of `hold`.
 * LXG_NO_SOLUTION when not even one wind is found; the error carries the reason. */
enum lxg_status lxg_family_trace(struct lxg_wind_solver *solver, const struct lxg_wind_hold *hold,
                                 const struct lxg_family_options *options, struct lxg_family *family,
                                 struct lxg_error *error);
void lxg_family_free(struct lxg_family *family);

/* Which members have a given value of one quantity. Refers to the family, which must outlive it; read-only once made. */
struct lxg_family_index;
enum lxg_status lxg_family_index_create(const struct lxg_family *family, enum lxg_family_quantity quantity,
                                        struct lxg_family_index **index, struct lxg_error *error);
void lxg_family_index_destroy(struct lxg_family_index *index);

/* Arc lengths at which the quantity takes a value [CGS], at most `capacity` of them, thin to thick; returns how many there
 * are. */
size_t lxg_family_index_find(const struct lxg_family_index *index, double value, double arc[],
                             size_t capacity);

/* The member of the wanted branch; returns how many members have the value (0: `place` is untouched). */
size_t lxg_family_index_branch(const struct lxg_family_index *index, double value, enum lxg_branch branch,
                               struct lxg_family_place *place);

/* Why no member has that value: LXG_WIND_BELOW_THIN_END when the thin end lies nearer to it, the thick end's reason or
 * LXG_WIND_ABOVE_FOLD otherwise. */
enum lxg_wind_reason lxg_family_missing(const struct lxg_family *family, enum lxg_family_quantity quantity,
                                        double value);

/* Numbers at an arc length (clipped to the family). */
void lxg_family_at(const struct lxg_family *family, double arc, struct lxg_family_place *place);

/* Families at any value of a model's parameter, interpolated between families traced at `count` distinct values x (Chebyshev points are best; a
 * logarithm where the parameter spans much). The families may be freed afterwards. LXG_MEMORY; LXG_NO_SOLUTION "family-blend" when mass-loss rates turn round
 * along a family or are not shared by all. */
enum { LXG_FAMILY_SHARES = 400 }; /* places of an interpolated family */
struct lxg_family_blend;
enum lxg_status lxg_family_blend_create(const struct lxg_family family[], const double x[], size_t count,
                                        struct lxg_family_blend **blend, struct lxg_error *error);
void lxg_family_blend_destroy(struct lxg_family_blend *blend);

/* The family at x within the values: it has no winds, only what lxg_family_at, lxg_family_missing and an index read. Owned by the blend and
 * overwritten by the next call. */
const struct lxg_family *lxg_family_blend_at(struct lxg_family_blend *blend, double x);

/* Every wind with two held quantities that one family connects: winds[0] is the one of the wanted branch, which the solver
 * keeps; the others follow in no order (at most `capacity` in all; *count may be larger). LXG_NO_SOLUTION: none, and
 * winds[0].reason says why. LXG_INPUT: the two are not independent or out of range. */
enum lxg_status lxg_family_members(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                   enum lxg_branch branch, struct lxg_wind winds[], size_t capacity,
                                   size_t *count, struct lxg_error *error);

/* Key of a quantity, e.g. "mass_loss_rate"; NULL beyond the list. */
const char *lxg_family_key(enum lxg_family_quantity quantity);

#endif
