/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_mass.c - the command `mass`: every method of mass.h that the case allows (see run.h).
 *
 * What the case knows anyway is taken from it: G M and radius of the star, hydrogen of the composition, radiated energy of a
 * photospheric luminosity history. The rate of the steady wind is solved for: the wind with the given luminosity at the
 * photosphere and the given speed far away; its error follows from the slopes of ln Mdot with ln L and ln v at that wind.
 */
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

enum { MOST_WINDS = 16 };

/* Step of ln L and ln v for the slopes: small, and far above the solver's tolerance. */
static const double slope_step = 2e-3;

static enum lxg_status give_unless_given(struct lxg_mass_data *data, enum lxg_mass_quantity quantity,
                                         double value, struct lxg_error *error) {
  return data->datum[quantity].given ? LXG_OK : lxg_mass_give(data, quantity, value, 0.0, error);
}

static enum lxg_status take_from_case(const struct lxg_case *input, struct lxg_mass_data *data,
                                      struct lxg_error *error) {
  const struct lxg_history *history = input->history;
  double energy = 0.0;
  enum lxg_status status = give_unless_given(data, LXG_MASS_STAR_GM, input->star.gm, error);
  if (status == LXG_OK) {
    status = give_unless_given(data, LXG_MASS_STAR_RADIUS, input->star.radius, error);
  }
  if (status == LXG_OK && input->composition.hydrogen > 0.0) {
    status = give_unless_given(data, LXG_MASS_HYDROGEN, input->composition.hydrogen, error);
  }
  if (status == LXG_OK && history != NULL && history->kind == LXG_HISTORY_PHOTOSPHERE && history->count > 1) {
    status = lxg_history_energy(history, LXG_HISTORY_VALUE, history->time[0],
                                history->time[history->count - 1], &energy, error);
    if (status == LXG_OK) {
      status = give_unless_given(data, LXG_MASS_RADIATED_ENERGY, energy, error);
    }
  }
  return status;
}

/* d ln Mdot/d ln q of the kept wind for held quantity `which`; the wind stays kept. */
static enum lxg_status slope(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2], size_t which,
                             double *slope, struct lxg_error *error) {
  double rate[2];
  for (int side = 0; side < 2; side++) {
    struct lxg_wind_hold near[2] = {hold[0], hold[1]};
    struct lxg_wind wind;
    near[which].value *= exp(side == 0 ? -slope_step : slope_step);
    enum lxg_status status = lxg_wind_mark(solver, 0);
    if (status == LXG_OK) {
      status = lxg_wind_follow(solver, near, &wind, error);
    }
    if (status != LXG_OK) {
      return status;
    }
    rate[side] = wind.value[LXG_HELD_MASS_LOSS_RATE];
    status = lxg_wind_recall(solver, 0);
    if (status != LXG_OK) {
      return status;
    }
  }
  *slope = log(rate[1] / rate[0]) / (2.0 * slope_step);
  return LXG_OK;
}

/* Rate of the wind with both held values, and its error. */
static enum lxg_status find_rate(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                 const double share[2], enum lxg_branch branch,
                                 struct lxg_report_steady *steady, struct lxg_error *error) {
  struct lxg_wind winds[MOST_WINDS];
  double variance = 0.0;
  enum lxg_status status = lxg_family_members(solver, hold, branch, winds, MOST_WINDS, &steady->winds, error);
  for (size_t i = 0; i < 2 && status == LXG_OK; i++) {
    double power = 0.0;
    if (share[i] > 0.0) {
      status = slope(solver, hold, i, &power, error);
    }
    variance += power * power * share[i] * share[i];
  }
  if (status == LXG_OK) {
    steady->solved = true;
    steady->rate = winds[0].value[LXG_HELD_MASS_LOSS_RATE];
    steady->error = steady->rate * sqrt(variance);
  }
  return status;
}

static enum lxg_status steady_wind(const struct lxg_case *input, const struct lxg_run_options *options,
                                   struct lxg_mass_data *data, struct lxg_report_steady *steady,
                                   struct lxg_error *error) {
  const struct lxg_mass_datum *light = &input->mass.photosphere_luminosity;
  const struct lxg_mass_datum *speed = &data->datum[LXG_MASS_SPEED];
  steady->asked = light->given && speed->given;
  if (!steady->asked) {
    return LXG_OK;
  }
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_PHOTOSPHERE_LUMINOSITY, light->value},
                                        {LXG_HELD_TERMINAL_SPEED, speed->value}};
  const double share[2] = {light->error / light->value, speed->error / speed->value};
  const struct lxg_wind_model model = lxg_run_model(input);
  struct lxg_wind_solver *solver = NULL;
  enum lxg_status status = lxg_wind_solver_create(&model, NULL, &solver, error);
  if (status == LXG_OK) {
    status = find_rate(solver, hold, share, options->branch, steady, &steady->why);
    if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
      status = LXG_OK; /* said in the report */
    } else if (status != LXG_OK && error != NULL) {
      *error = steady->why;
    }
  }
  lxg_wind_solver_destroy(solver);
  return status == LXG_OK && steady->solved
             ? lxg_mass_give(data, LXG_MASS_WIND_RATE, steady->rate, steady->error, error)
             : status;
}

enum lxg_status lxg_run_mass(const struct lxg_case *input, const struct lxg_run_options *options,
                             struct lxg_results *results, struct lxg_error *error) {
  struct lxg_mass_data data = input->mass.data;
  struct lxg_mass_summary summary;
  struct lxg_report_steady steady = {0};
  enum lxg_status status = lxg_run_begin(input, "mass", results, error);
  if (status == LXG_OK && !input->mass.present) {
    status = lxg_error_set(error, LXG_INPUT, "key-missing", "%s: error: mass: `mass` needs this section",
                           lxg_document_name(input->document));
  }
  if (status == LXG_OK) {
    status = take_from_case(input, &data, error);
  }
  if (status == LXG_OK) {
    status = steady_wind(input, options, &data, &steady, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  lxg_mass_estimate_all(&data, &summary);
  struct lxg_node *root = lxg_document_root(results->report);
  lxg_report_mass(root, &data, &summary, &steady);
  lxg_report_mass_warnings(lxg_report_warnings(root), &summary, &steady);
  if (summary.values == 0) {
    struct lxg_error why = {0};
    lxg_error_set(&why, LXG_NO_SOLUTION, "mass-none", "no method has all that it needs: %s", summary.reading);
    lxg_run_unanswered(results, &why);
  }
  return lxg_document_status(results->report, error);
}
