/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_handover.c - the winds of a history: one family, or plain winds up to the homogeneous limit and porous ones above.
 *
 * `porosity: {when: super-eddington}`: epochs up to the hand-over luminosity have the plain wind, brighter ones the porous wind. The
 * homogeneous limit is the brightest plain wind of the family and, for luminosities at the photosphere, at most L_Edd: close to it a
 * plain wind of held launch radius swells without bound. The instabilities that make an envelope porous set in below the limit
 * (Shaviv 2001, MNRAS 326, 126; from memory), so plain hands over to porous at the largest luminosity up to the limit at which both
 * have the same mass-loss rate within the setting `handover_jump`; if they never have, at the limit, which is a warning.
 */
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

/* Brightest member in the quantity that the history gives [erg s^-1]. */
static double brightest_of(const struct lxg_family *family, enum lxg_held quantity) {
  double most = 0.0;
  for (size_t i = 0; i < family->count; i++) {
    most = fmax(most, family->wind[i].value[quantity]);
  }
  return most;
}

enum { SAMPLES = 400, BISECTIONS = 40 };
static const double search_depth = 5.0; /* the hand-over is looked for down to the limit over this */

/* Both families by luminosity. */
struct pair {
  struct lxg_family_index *plain, *porous;
  enum lxg_branch branch;
};

/* Mass-loss rate of the wind with that luminosity [g s^-1]; NaN if there is none. */
static double rate_at(const struct lxg_family_index *index, double luminosity, enum lxg_branch branch) {
  struct lxg_family_place place;
  return lxg_family_index_branch(index, luminosity, branch, &place) > 0
             ? place.value[LXG_FAMILY_MASS_LOSS_RATE]
             : NAN;
}

static bool agree(const struct pair *pair, double luminosity, double jump) {
  return fabs(rate_at(pair->porous, luminosity, pair->branch) /
                  rate_at(pair->plain, luminosity, pair->branch) -
              1.0) <= jump;
}

/* The largest luminosity up to the limit at which the rates agree; the limit if there is none. */
static double handover(const struct pair *pair, double limit, double jump) {
  double beyond = limit; /* they do not agree there */
  for (int i = 0; i <= SAMPLES; i++) {
    double luminosity = limit * pow(search_depth, -(double)i / SAMPLES);
    if (agree(pair, luminosity, jump)) {
      for (int k = 0; k < BISECTIONS && i > 0; k++) {
        const double middle = 0.5 * (luminosity + beyond);
        *(agree(pair, middle, jump) ? &luminosity : &beyond) = middle;
      }
      return luminosity;
    }
    beyond = luminosity;
  }
  return limit;
}

static enum lxg_status trace(const struct lxg_case *input, const struct lxg_porosity *porosity,
                             double brightest, struct lxg_family *family, struct lxg_error *error) {
  struct lxg_wind_solver *solver = NULL;
  struct lxg_wind_model model = lxg_run_model(input);
  model.porosity = *porosity;
  enum lxg_status status = lxg_wind_solver_create(&model, NULL, &solver, error);
  if (status == LXG_OK) {
    status = lxg_run_trace(input, solver, brightest, family, error);
  }
  lxg_wind_solver_destroy(solver);
  return status;
}

enum lxg_status lxg_run_winds(const struct lxg_case *input, enum lxg_branch branch,
                              struct lxg_run_winds *winds, struct lxg_error *error) {
  static const struct lxg_porosity plain = {.law = LXG_POROSITY_NONE};
  const struct lxg_history *history = input->history;
  const bool photosphere = history->kind == LXG_HISTORY_PHOTOSPHERE;
  const enum lxg_held key = photosphere ? LXG_HELD_PHOTOSPHERE_LUMINOSITY : LXG_HELD_BASE_LUMINOSITY;
  double brightest = 0.0;
  for (size_t i = 0; i < history->count && photosphere; i++) {
    brightest = fmax(brightest, history->luminosity[i]);
  }
  winds->two =
      input->porosity.law != LXG_POROSITY_NONE && input->porosity.when == LXG_POROSITY_SUPER_EDDINGTON;
  winds->limit = INFINITY;
  if (!winds->two) {
    return input->reduction != NULL ? lxg_run_blend(input, key, winds, &winds->family, error)
                                    : trace(input, &input->porosity, brightest, &winds->family, error);
  }
  if (input->reduction !=
      NULL) { /* at the limit the factor is whatever it is at that time: no common rate to seek */
    winds->porous_rate = NAN;
    enum lxg_status traced = trace(input, &plain, 0.0, &winds->family, error);
    if (traced == LXG_OK) {
      traced = lxg_run_blend(input, key, winds, &winds->above, error);
    }
    if (traced == LXG_OK) {
      const double top = brightest_of(&winds->family, key);
      winds->homogeneous_limit = photosphere ? fmin(top, input->l_edd) : top;
      winds->limit = winds->homogeneous_limit;
      winds->plain_rate = NAN;
    }
    return traced;
  }
  enum lxg_status status = trace(input, &plain, 0.0, &winds->family, error);
  if (status == LXG_OK) {
    status = trace(input, &input->porosity, brightest, &winds->above, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  const double most = brightest_of(&winds->family, key);
  winds->homogeneous_limit = photosphere ? fmin(most, input->l_edd) : most;
  struct pair pair = {.branch = branch};
  status = lxg_family_index_create(&winds->family, (enum lxg_family_quantity)key, &pair.plain, error);
  if (status == LXG_OK) {
    status = lxg_family_index_create(&winds->above, (enum lxg_family_quantity)key, &pair.porous, error);
  }
  if (status == LXG_OK) {
    winds->limit = handover(&pair, winds->homogeneous_limit, input->settings.handover_jump);
    winds->plain_rate = rate_at(pair.plain, winds->limit, branch);
    winds->porous_rate = rate_at(pair.porous, winds->limit, branch);
  }
  lxg_family_index_destroy(pair.plain);
  lxg_family_index_destroy(pair.porous);
  return status;
}

void lxg_run_winds_free(struct lxg_run_winds *winds) {
  lxg_family_free(&winds->family);
  lxg_family_free(&winds->above);
  lxg_family_blend_destroy(winds->blend);
}
