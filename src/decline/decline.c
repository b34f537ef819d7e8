/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decline.c - the whole eruption in one function: winds, envelopes at rest, start, join, march in time, light.
 *
 * Can fail: input that no eruption has; a star without burning envelopes. Where a stretch is missing the report says so.
 */
#include "luxgale/decline.h"

#include "decline/decline_internal.h"
#include "luxgale/burning.h"
#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include <math.h>

static const double ignition_pressure = 2e19;    /* at the base when the flash starts [dyn cm^-2] */
static const double usual_gas_temperature = 2e4; /* of the electrons outside the photosphere [K] */
static const double mass_margin = 1.1;           /* winds are traced to this multiple of the start mass */
static const double coolest = 3000.0; /* photosphere at rest at which a sequence without a wind starts [K] */
static const double wind_residual = 1e-5; /* relative residual of the winds off the mesh */

struct lxg_decline_options lxg_decline_options_default(void) {
  const struct lxg_decline_options options = {.start = LXG_DECLINE_START_IGNITION,
                                              .start_value = ignition_pressure,
                                              .time_most = INFINITY,
                                              .thin_depth = 0.7,
                                              .tolerance = 5e-3,
                                              .gas_temperature = usual_gas_temperature};
  return options;
}

struct end_row {
  const char *code, *text;
};

static const struct end_row *end_row(enum lxg_decline_end end) {
  static const struct end_row rows[] = {
#define END_ROW(name, code, text) {code, text},
      LXG_DECLINE_END_LIST(END_ROW)
#undef END_ROW
  };
  return &rows[(int)end >= 0 && (int)end < (int)LXG_DECLINE_END_COUNT ? end : LXG_DECLINE_LOST];
}

const char *lxg_decline_end_code(enum lxg_decline_end end) {
  return end_row(end)->code;
}

const char *lxg_decline_end_text(enum lxg_decline_end end) {
  return end_row(end)->text;
}

static enum lxg_status check(const struct lxg_wind_model *model, const struct lxg_decline_options *options,
                             struct lxg_error *error) {
  if (model->burning.law == LXG_BURNING_NONE) {
    return lxg_error_set(error, LXG_INPUT, "decline-burning",
                         "burning = none: an eruption of its own needs a burning base (burning: cno)");
  }
  if (!isfinite(options->start_value) || !(options->start_value > 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "decline-start",
                         "start = %.10g: a positive pressure, mass or temperature", options->start_value);
  }
  if (!isfinite(options->accretion_rate) || options->accretion_rate < 0.0) {
    return lxg_error_set(error, LXG_INPUT, "decline-accretion", "accretion rate = %.10g g/s: 0 or more",
                         options->accretion_rate);
  }
  if (!(options->time_most > 0.0) || !(options->mass_least >= 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "decline-stop",
                         "stop at %.10g s or %.10g g: a time above 0 and a mass of 0 or more",
                         options->time_most, options->mass_least);
  }
  if (!(options->thin_depth > 0.0) || !(options->tolerance > 0.0) || !(options->gas_temperature >= 0.0) ||
      !(options->rise >= 0.0)) {
    return lxg_error_set(
        error, LXG_INPUT, "decline-options",
        "thin depth %.10g, tolerance %.10g: above 0; gas temperature %.10g K, rise %.10g s: 0 or more",
        options->thin_depth, options->tolerance, options->gas_temperature, options->rise);
  }
  return LXG_OK;
}

/* Envelope mass [g] that the start option asks for; NaN when it asks for a temperature. */
static double wanted_mass(const struct lxg_wind_model *model, const struct lxg_decline_options *options) {
  switch (options->start) {
  case LXG_DECLINE_START_MASS:
    return options->start_value;
  case LXG_DECLINE_START_IGNITION:
    return lxg_star_envelope_mass(&model->star, options->start_value);
  default:
    return NAN;
  }
}

/* The winds; an empty stretch when the star has none. */
static enum lxg_status winds(const struct lxg_wind_model *model, const struct lxg_decline_options *options,
                             struct lxg_decline *decline, struct path_segment *segment,
                             struct lxg_error *error) {
  struct lxg_wind_options solver_options = lxg_wind_options_default();
  solver_options.residual_tolerance = wind_residual;
  struct lxg_wind_solver *solver = NULL;
  enum lxg_status status = lxg_wind_solver_create(model, &solver_options, &solver, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_family_options family_options = lxg_family_options_default();
  family_options.tolerance = options->tolerance;
  family_options.thin_depth = options->thin_depth;
  const double mass = isnan(decline->wanted_mass) ? lxg_star_envelope_mass(&model->star, ignition_pressure)
                                                  : decline->wanted_mass;
  family_options.envelope_most = mass_margin * mass * LXG_GRAVITATION / model->star.gm;
  const struct lxg_wind_hold hold = {LXG_HELD_BASE_LUMINOSITY, 0.0};
  struct lxg_family family;
  status = lxg_family_trace(solver, &hold, &family_options, &family, NULL);
  decline->thick_end = LXG_WIND_NOT_FOUND;
  if (status == LXG_OK) {
    decline->thick_end = family.thick_end;
    decline->newton_steps += family.newton_steps;
    status = lxg_decline_path_wind(&family, segment);
    lxg_family_free(&family);
  } else if (status != LXG_MEMORY && status != LXG_BUG) {
    status = LXG_OK;
  }
  lxg_wind_solver_destroy(solver);
  return status == LXG_OK ? LXG_OK
                          : lxg_error_set(error, status, "decline-wind", "winds: %s", lxg_strerror(status));
}

/* Envelopes at rest, from `most` [g] down; an empty stretch when the star has none. */
static enum lxg_status rests(const struct lxg_wind_model *model, const struct lxg_decline_options *options,
                             double most, struct lxg_decline *decline, struct path_segment *segment,
                             struct lxg_error *error) {
  struct lxg_hydrostatic_options solver_options = lxg_hydrostatic_options_default();
  solver_options.tolerance = options->tolerance;
  struct lxg_hydrostatic_solver *solver = NULL;
  enum lxg_status status = lxg_hydrostatic_solver_create(model, &solver_options, &solver, error);
  if (status != LXG_OK) {
    return status;
  }
  const struct lxg_hydrostatic_limit limit = {.temperature = coolest, .envelope_mass = most};
  struct lxg_hydrostatic_family family;
  status = lxg_hydrostatic_trace(solver, &limit, &family, error);
  if (status == LXG_OK) {
    decline->newton_steps += family.newton_steps;
    decline->end = family.hot_end == LXG_HYDROSTATIC_FOLD ? LXG_DECLINE_TURN_OFF : LXG_DECLINE_LOST;
    status = lxg_decline_path_rest(&family, segment);
    lxg_hydrostatic_family_free(&family);
  } else if (status == LXG_NO_SOLUTION) {
    lxg_error_clear(error);
    decline->end = LXG_DECLINE_LOST;
    status = LXG_OK;
  }
  lxg_hydrostatic_solver_destroy(solver);
  return status;
}

/* Cuts the path at the start. */
static enum lxg_status start(const struct lxg_decline_options *options, struct lxg_decline *decline,
                             struct path *path, struct lxg_error *error) {
  const bool by_temperature = options->start == LXG_DECLINE_START_TEMPERATURE;
  const int quantity = by_temperature ? PATH_TEMPERATURE : PATH_MASS;
  const double value = log(by_temperature ? options->start_value : decline->wanted_mass);
  struct path_segment *rest = &path->rest;
  const bool small =
      rest->count > 0 && (rest->node[0].q[quantity] - value) * (by_temperature ? -1.0 : 1.0) > 0.0;
  if (small) { /* the eruption has no wind any more */
    path->wind.count = 0;
  }
  if (path->wind.count == 0 ? lxg_decline_path_start(rest, quantity, value)
                            : lxg_decline_path_start(&path->wind, quantity, value)) {
    return LXG_OK;
  }
  if (by_temperature) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "decline-start-outside",
                         "start temperature = %.10g K: no steady state of this star has it",
                         options->start_value);
  }
  const struct path_segment *first = path->wind.count > 0 ? &path->wind : rest;
  if (value < first->node[first->count - 1].q[PATH_MASS]) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "decline-start-outside",
                         "start mass = %.10g g: below the smallest envelope that burns",
                         decline->wanted_mass);
  }
  decline->start_clipped = value > first->node[0].q[PATH_MASS];
  return LXG_OK;
}

/* What follows the wind begins where the wind ends, or at the largest envelope at rest if that is smaller. */
static void join(struct path *path, struct lxg_decline_join *join) {
  *join = (struct lxg_decline_join){path->wind.count > 0, path->rest.count > 0, NAN, NAN, NAN};
  if (!join->wind || !join->rest) {
    return;
  }
  const double *end = path->wind.node[path->wind.count - 1].q;
  if (path->rest.node[0].q[PATH_MASS] > end[PATH_MASS]) {
    lxg_decline_path_start(&path->rest, PATH_MASS, end[PATH_MASS]);
  }
  const double *begin = path->rest.node[0].q;
  join->envelope_mass = expm1(begin[PATH_MASS] - end[PATH_MASS]);
  join->luminosity = expm1(begin[PATH_LUMINOSITY] - end[PATH_LUMINOSITY]);
  join->temperature = expm1(begin[PATH_TEMPERATURE] - end[PATH_TEMPERATURE]);
}

/* Both stretches of the path, cut at the start and joined. */
static enum lxg_status path_of(const struct lxg_wind_model *model, const struct lxg_decline_options *options,
                               struct lxg_decline *decline, struct path *path, struct lxg_error *error) {
  enum lxg_status status = winds(model, options, decline, &path->wind, error);
  if (status == LXG_OK) {
    const double most = path->wind.count > 0 ? INFINITY : mass_margin * decline->wanted_mass;
    status = rests(model, options, isfinite(most) ? most : INFINITY, decline, &path->rest, error);
  }
  if (status == LXG_OK && path->wind.count + path->rest.count == 0) {
    status = lxg_error_set(error, LXG_NO_SOLUTION, "decline-none",
                           "no burning envelope was found on this star, neither with a wind nor at rest");
  }
  if (status == LXG_OK) {
    status = start(options, decline, path, error);
  }
  if (status == LXG_OK) {
    join(path, &decline->join);
  }
  return status;
}

enum lxg_status lxg_decline_compute(const struct lxg_wind_model *model,
                                    const struct lxg_decline_options *options, struct lxg_decline *decline,
                                    struct lxg_error *error) {
  const struct lxg_decline_options standard = lxg_decline_options_default();
  options = options != NULL ? options : &standard;
  *decline = (struct lxg_decline){.end = LXG_DECLINE_LOST, .turn_off = NAN};
  enum lxg_status status = check(model, options, error);
  if (status != LXG_OK) {
    return status;
  }
  decline->wanted_mass = wanted_mass(model, options);
  const struct path_star star = {.escape_energy = model->star.gm / model->star.radius,
                                 .heat_per_gram = model->composition.hydrogen * LXG_BURNING_HEAT};
  struct path path = {0};
  status = path_of(model, options, decline, &path, error);
  if (status == LXG_OK) {
    status = lxg_decline_march(&path, &star, options, decline);
    if (status == LXG_OK) {
      status = lxg_decline_photometry(&model->composition, options, decline, error);
    } else {
      lxg_error_set(error, status, "decline", "march along the eruption: %s", lxg_strerror(status));
    }
  }
  lxg_decline_path_free(&path);
  if (status != LXG_OK) {
    lxg_decline_free(decline);
  }
  return status;
}

void lxg_decline_free(struct lxg_decline *decline) {
  if (decline != NULL) {
    lxg_free(decline->state);
    decline->state = NULL;
    decline->count = decline->wind_states = 0;
  }
}
