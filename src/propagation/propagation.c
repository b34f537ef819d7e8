/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * propagation.c - sources, deviates of a draw, the measured error of the interpolation, and the run (see propagation.h).
 */
#include "luxgale/propagation.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include "propagation/propagation_internal.h"

#include <math.h>
#include <string.h>

static const size_t profile_bytes = (size_t)64 << 20; /* stored draws of the epochs' numbers at most */

const char *lxg_propagation_output_name(enum lxg_propagation_output output) {
  static const char *const names[LXG_PROPAGATED_OUTPUTS] = {
#define PROPAGATION_NAME(name, key) key,
      LXG_PROPAGATION_OUTPUT_LIST(PROPAGATION_NAME)
#undef PROPAGATION_NAME
  };
  return (unsigned)output < LXG_PROPAGATED_OUTPUTS ? names[output] : "?";
}

const char *lxg_propagation_column_name(size_t column) {
  static const char *const names[LXG_PROPAGATION_COLUMNS] = {
      "luminosity_erg_s",        "luminosity_ledd",           "mass_loss_rate_msun_yr", "terminal_speed_km_s",
      "photosphere_radius_rsun", "photosphere_temperature_k", "photosphere_speed_km_s", "ejected_mass_msun"};
  return column < LXG_PROPAGATION_COLUMNS ? names[column] : "?";
}

/* ---- sources ------------------------------------------------------------------------------------------------------- */

static int add_source(struct lxg_propagation *propagation, const char *name, enum lxg_uncertainty_class kind,
                      bool there) {
  if (!there) {
    return -1;
  }
  propagation->source[propagation->sources] = (struct lxg_uncertainty_source){name, kind};
  return (int)propagation->sources++;
}

static enum lxg_status find_sources(struct engine *engine, struct lxg_propagation *propagation,
                                    struct lxg_error *error) {
  const struct lxg_propagation_input *input = engine->input;
  const struct lxg_observed *observed = input->observed;
  bool noisy = false;
  for (size_t i = 0; i < engine->epochs; i++) {
    noisy = noisy || engine->sigma[i] > 0.0;
  }
  const enum lxg_uncertainty_class shared = LXG_UNCERTAINTY_CALIBRATION;
  engine->noise = add_source(propagation, "epoch_noise", LXG_UNCERTAINTY_EPOCH, noisy);
  engine->scale = add_source(propagation, "luminosity_scale", shared, input->plan->luminosity_scale > 0.0);
  engine->distance =
      add_source(propagation, "distance", shared, observed != NULL && observed->distance.error > 0.0);
  engine->extinction =
      add_source(propagation, "extinction", shared, observed != NULL && observed->a_v_error > 0.0);
  engine->zero_point =
      add_source(propagation, "zero_point", shared, observed != NULL && observed->zero_point_error > 0.0);
  engine->model = (int)propagation->sources;
  for (size_t p = 0; p < input->parameters; p++) {
    add_source(propagation, input->parameter[p], LXG_UNCERTAINTY_MODEL, true);
  }
  return propagation->sources > 0
             ? LXG_OK
             : lxg_error_set(
                   error, LXG_INPUT, "errors-none",
                   "errors: nothing in the case has an error: no epoch, no calibration, no parameter");
}

/* ---- one draw ------------------------------------------------------------------------------------------------------ */

/* Shift of every key by the calibration. */
static double calibrate(const struct engine *engine, const struct lxg_uncertainty_draw *draw) {
  const struct lxg_observed *observed = engine->input->observed;
  double shift = 0.0; /* [mag] */
  double other = 0.0; /* of ln L */
  if (engine->scale >= 0) {
    other = engine->input->plan->luminosity_scale * lxg_uncertainty_normal(draw, (size_t)engine->scale, 0);
  }
  if (observed == NULL || draw->nominal) {
    return other;
  }
  double distance = observed->distance.mode * LXG_PARSEC, a_v = observed->a_v;
  if (engine->distance >= 0) {
    distance = lxg_distance_quantile(&observed->distance,
                                     lxg_uncertainty_uniform(draw, (size_t)engine->distance, 0));
  }
  if (engine->extinction >= 0) {
    a_v = fmax(a_v + observed->a_v_error * lxg_uncertainty_normal(draw, (size_t)engine->extinction, 0), 0.0);
  }
  if (engine->zero_point >= 0) {
    shift = observed->zero_point_error * lxg_uncertainty_normal(draw, (size_t)engine->zero_point, 0);
  }
  shift -= lxg_observed_shift(observed, distance, a_v) - lxg_observed_nominal_shift(observed);
  return engine->per_mag * shift + other;
}

static enum lxg_status evaluate(const void *shared, const struct lxg_uncertainty_draw *draw, void *workspace,
                                double outputs[], double profile[], struct lxg_error *error) {
  const struct engine *engine = shared;
  const size_t parameters = engine->input->parameters;
  double *noise = workspace;
  struct members own;
  const struct members *members = &engine->table[0];
  if (engine->noise >= 0) {
    lxg_uncertainty_normals(draw, (size_t)engine->noise, engine->epochs, noise);
    for (size_t i = 0; i < engine->epochs; i++) {
      noise[i] *= engine->sigma[i];
    }
  }
  if (parameters > 0) {
    double displacement[LXG_PROPAGATION_PARAMETERS];
    for (size_t p = 0; p < parameters; p++) {
      displacement[p] = lxg_uncertainty_normal(draw, (size_t)engine->model + p, 0);
    }
    lxg_members_place(&own, engine->table[0].count, noise + engine->epochs);
    lxg_members_combine(engine->table, parameters, displacement, &own);
    const enum lxg_status status = lxg_members_key(&own, &engine->keying, error);
    if (status != LXG_OK) {
      return status;
    }
    members = &own;
  }
  lxg_propagation_integrate(engine, members, engine->noise >= 0 ? noise : NULL, calibrate(engine, draw),
                            outputs, profile);
  return LXG_OK;
}

/* ---- run ------------------------------------------------------------------------------------------------------------ */

/* Memory of the tables and the places of their members: those of the nominal winds. */
static enum lxg_status prepare(struct engine *engine, struct lxg_error *error) {
  const struct lxg_propagation_input *input = engine->input;
  const struct lxg_family *family = input->family;
  const size_t tables = input->parameters > 0 ? 2 * input->parameters + 2 : 1;
  const struct reach reach = lxg_members_reach(family, &engine->keying, input->branch);
  const size_t count = reach.last + 1 - reach.first;
  if (count < 2) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "propagation-family",
                         "a family of %zu winds: errors need two or more", count);
  }
  engine->memory = lxg_alloc(tables * lxg_members_size(count), sizeof(double));
  engine->share = lxg_alloc(count, sizeof(double));
  engine->table = lxg_alloc(tables, sizeof *engine->table);
  if (engine->memory == NULL || engine->share == NULL || engine->table == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "%zu families: out of memory", tables);
  }
  for (size_t t = 0; t < tables; t++) {
    lxg_members_place(&engine->table[t], count, engine->memory + t * lxg_members_size(count));
  }
  lxg_members_shares(family, reach, engine->share);
  lxg_members_fill(&engine->table[0], family, reach, engine->share, input->l_edd, input->l_edd,
                   input->star->gm / input->star->radius);
  enum lxg_status status = lxg_members_key(&engine->table[0], &engine->keying, error);
  if (status == LXG_OK && input->parameters > 0) {
    status = lxg_propagation_trace(input, &engine->keying, engine->share, engine->table + 1, error);
  }
  return status;
}

/* Interpolated against traced, all parameters off at once. */
static enum lxg_status check_interpolation(const struct engine *engine, struct lxg_propagation *propagation,
                                           struct lxg_error *error) {
  const size_t parameters = engine->input->parameters, count = engine->table[0].count;
  struct members *traced = &engine->table[2 * parameters + 1];
  struct members own;
  double displacement[LXG_PROPAGATION_PARAMETERS], interpolated[LXG_PROPAGATED_OUTPUTS],
      direct[LXG_PROPAGATED_OUTPUTS];
  double *memory = lxg_alloc(lxg_members_size(count), sizeof *memory);
  if (memory == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "check of the interpolation: out of memory");
  }
  for (size_t p = 0; p < parameters; p++) {
    displacement[p] = (p % 2 == 0 ? 1.0 : -1.0) * LXG_PROPAGATION_CHECK_SIGMA;
  }
  lxg_members_place(&own, count, memory);
  lxg_members_combine(engine->table, parameters, displacement, &own);
  enum lxg_status status = lxg_members_key(&own, &engine->keying, error);
  if (status == LXG_OK) {
    status = lxg_members_key(traced, &engine->keying, error);
  }
  if (status == LXG_OK) {
    lxg_propagation_integrate(engine, &own, NULL, 0.0, interpolated, NULL);
    lxg_propagation_integrate(engine, traced, NULL, 0.0, direct, NULL);
    propagation->check_mass = interpolated[LXG_PROPAGATED_MASS] / direct[LXG_PROPAGATED_MASS] - 1.0;
    propagation->check_speed = interpolated[LXG_PROPAGATED_SPEED] / direct[LXG_PROPAGATED_SPEED] - 1.0;
  }
  lxg_free(memory);
  return status;
}

static enum lxg_status run(struct engine *engine, struct lxg_propagation *propagation,
                           struct lxg_error *error) {
  const struct lxg_propagation_plan *plan = engine->input->plan;
  const size_t epochs = engine->epochs;
  const size_t most = profile_bytes / (epochs * LXG_PROPAGATION_COLUMNS * sizeof(double));
  const struct lxg_uncertainty_problem problem = {
      .sources = propagation->source,
      .source_count = propagation->sources,
      .output_count = LXG_PROPAGATED_OUTPUTS,
      .profile_count = epochs * LXG_PROPAGATION_COLUMNS,
      .workspace_bytes = (epochs + lxg_members_size(engine->table[0].count)) * sizeof(double),
      .evaluate = evaluate,
      .shared = engine};
  const struct lxg_uncertainty_options options = {.seed = plan->seed,
                                                  .draws = plan->draws,
                                                  .split_draws = plan->split_draws,
                                                  .profile_draws = plan->draws < most ? plan->draws : most,
                                                  .threads = engine->input->threads};
  return lxg_uncertainty_run(&problem, &options, &propagation->result, error);
}

enum lxg_status lxg_propagation_run(const struct lxg_propagation_input *input,
                                    struct lxg_propagation *propagation, struct lxg_error *error) {
  *propagation = (struct lxg_propagation){.check_mass = NAN, .check_speed = NAN};
  struct engine engine = {.input = input, .per_mag = 1.0};
  if (input->course != NULL) {
    engine.keying = (struct keying){KEY_MAGNITUDE, input->observed->band, input->observed->light};
    engine.epochs = input->course->count;
  } else {
    engine.keying.kind = input->history->kind == LXG_HISTORY_BASE ? KEY_BASE : KEY_PHOTOSPHERE;
    engine.epochs = input->history->count;
    engine.per_mag = -0.4 * LXG_LN10;
  }
  propagation->epochs = engine.epochs;
  enum lxg_status status = lxg_propagation_sample(&engine, error);
  if (status == LXG_OK) {
    status = find_sources(&engine, propagation, error);
  }
  if (status == LXG_OK) {
    status = prepare(&engine, error);
  }
  if (status == LXG_OK) {
    propagation->families = input->parameters > 0 ? 2 * input->parameters + 2 : 1;
    lxg_propagation_integrate(&engine, &engine.table[0], NULL, 0.0, propagation->nominal, NULL);
  }
  if (status == LXG_OK && input->parameters > 0) {
    status = check_interpolation(&engine, propagation, error);
  }
  if (status == LXG_OK) {
    status = run(&engine, propagation, error);
  }
  lxg_free(engine.memory);
  lxg_free(engine.share);
  lxg_free(engine.table);
  lxg_free(engine.sample);
  lxg_free(engine.sigma);
  return status;
}

void lxg_propagation_free(struct lxg_propagation *propagation) {
  if (propagation != NULL) {
    lxg_uncertainty_free(&propagation->result);
  }
}
