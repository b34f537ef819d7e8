/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * propagation.h - from the errors of a case to the errors of its ejecta: Monte Carlo along any history.
 *
 * Sources of three classes (uncertainty.h): noise of each epoch (independent; between epochs it runs straight in time);
 * calibration shared by all epochs (distance, extinction, zero point, or a scale of the luminosities); choices of the model (mass
 * or radius of the star, mass fractions, held value).
 *
 * Choices of the model change the family of winds. One family is traced at the stated values and two for each uncertain
 * parameter, at LXG_PROPAGATION_REACH sigma to either side; members of different families correspond when they lie at the same
 * share of the arc length between two landmarks: the ends of the family or, for magnitudes, its thin (thick) end and the wind at
 * which the light first turns round. Every number of a member is then the sum of its nominal value and of one
 * parabola in each parameter (products of two parameters are left out). What this costs is measured, not assumed: one more family is
 * traced with all parameters one sigma off at once, and ejected mass and speed from it are compared with the interpolated ones.
 *
 * Integrals take the trapezoidal rule over the epochs and, where epochs are few, over LXG_PROPAGATION_SAMPLES times in all.
 */
#ifndef LUXGALE_PROPAGATION_H
#define LUXGALE_PROPAGATION_H

#include "luxgale/family.h"
#include "luxgale/history.h"
#include "luxgale/observed.h"
#include "luxgale/settings.h"
#include "luxgale/star.h"
#include "luxgale/status.h"
#include "luxgale/uncertainty.h"
#include "luxgale/wind.h"

#include <stdbool.h>
#include <stddef.h>

#define LXG_PROPAGATION_REACH 2.0 /* outer families, in sigma */
#define LXG_PROPAGATION_CHECK_SIGMA                                                                          \
  1.0 /* the family of the check, in sigma of every parameter, signs alternating */
enum { LXG_PROPAGATION_SAMPLES = 1000 }; /* times of the integrals, about; epochs always among them */

/* Uncertain parameters of the model. */
enum lxg_propagation_parameter {
  LXG_PROPAGATION_MASS,
  LXG_PROPAGATION_RADIUS,
  LXG_PROPAGATION_HYDROGEN,
  LXG_PROPAGATION_CNO,
  LXG_PROPAGATION_METALS,
  LXG_PROPAGATION_HELD,
  LXG_PROPAGATION_PARAMETERS
};

/* The section `errors` of a case. */
struct lxg_propagation_plan {
  bool wanted; /* the section is there */
  size_t draws, split_draws;
  uint64_t seed;
  double luminosity_scale;                  /* one sigma of ln L, shared */
  double sigma[LXG_PROPAGATION_PARAMETERS]; /* CGS; 0: exact */
};

/* Headline numbers, in the units of their names. */
#define LXG_PROPAGATION_OUTPUT_LIST(X)                                                                       \
  X(MASS, "ejected_mass_msun")                                                                               \
  X(KINETIC, "kinetic_energy_erg")                                                                           \
  X(MOMENTUM, "momentum_g_cm_s")                                                                             \
  X(SPEED, "mean_speed_km_s")                                                                                \
  X(PEAK_RATE, "peak_mass_loss_rate_msun_yr")                                                                \
  X(PEAK_SPEED, "peak_terminal_speed_km_s")                                                                  \
  X(WIND_DURATION, "wind_duration_d")                                                                        \
  X(LIFTING, "lifting_erg")                                                                                  \
  X(RADIATED, "radiated_erg")                                                                                \
  X(EXCESS_DURATION, "super_eddington_duration_d")                                                           \
  X(EXCESS_PEAK, "super_eddington_peak_ratio")                                                               \
  X(WINDLESS, "epochs_without_wind")
enum lxg_propagation_output {
#define LXG_PROPAGATION_ENUM(name, key) LXG_PROPAGATED_##name,
  LXG_PROPAGATION_OUTPUT_LIST(LXG_PROPAGATION_ENUM)
#undef LXG_PROPAGATION_ENUM
      LXG_PROPAGATED_OUTPUTS
};
const char *lxg_propagation_output_name(enum lxg_propagation_output output);

/* Numbers of each epoch whose intervals are kept: the columns of the epoch table, in its units and order. */
enum { LXG_PROPAGATION_COLUMNS = 8 };
const char *lxg_propagation_column_name(size_t column);

struct lxg_node;

/* Reads the section (NULL: not wanted). LXG_INPUT with the place: "errors-draws", "errors-unheld" for an error of something
 * that the case does not hold, "errors-radius" for the radius of a white dwarf, "value-range". */
enum lxg_status lxg_propagation_read(struct lxg_node *section, const struct lxg_settings *settings,
                                     bool dwarf, const struct lxg_wind_hold hold[], size_t holds,
                                     struct lxg_propagation_plan *plan, struct lxg_error *error);

/* Where a family is traced. */
struct lxg_propagation_node {
  struct lxg_wind_model model;
  struct lxg_wind_hold hold;
};

/* Everything a propagation needs; all borrowed. Exactly one of `history` and `course` drives the winds. */
struct lxg_propagation_input {
  const struct lxg_propagation_plan *plan;
  const struct lxg_family *family; /* at the stated values */
  const struct lxg_star *star;
  double l_edd;                             /* [erg s^-1] */
  const struct lxg_history *history;        /* luminosities; NULL for a course */
  const struct lxg_observed *observed;      /* NULL unless magnitudes */
  const struct lxg_observed_course *course; /* NULL unless members come from magnitudes */
  enum lxg_branch branch;
  size_t parameters;            /* uncertain ones */
  const char *const *parameter; /* [parameters] their names */
  const struct lxg_propagation_node
      *node; /* [2 parameters + 1]: low and high of each, then the check; or NULL */
  unsigned threads;
};

/* What came out. Free with lxg_propagation_free. */
struct lxg_propagation {
  size_t sources;
  struct lxg_uncertainty_source source[LXG_UNCERTAINTY_SOURCES_MAX];
  double nominal[LXG_PROPAGATED_OUTPUTS]; /* every deviate in the middle */
  size_t families;                        /* traced for it */
  double check_mass, check_speed;         /* relative error of the interpolation; NaN without parameters */
  size_t epochs;
  struct lxg_uncertainty_result result; /* profile: epochs times columns, columns fastest */
};

/* LXG_INPUT "errors-none" when nothing has an error; LXG_NO_SOLUTION when a family cannot be traced (the error says at which
 * values) or no draw succeeds; LXG_LIMIT; LXG_MEMORY. Valid to free in every case. */
enum lxg_status lxg_propagation_run(const struct lxg_propagation_input *input,
                                    struct lxg_propagation *propagation, struct lxg_error *error);
void lxg_propagation_free(struct lxg_propagation *propagation);

#endif
