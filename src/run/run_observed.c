/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_observed.c - a light curve through winds to ejecta: along a family by magnitude, or wind by wind from colours (see run.h).
 *
 * From colours each epoch gives luminosity and temperature of the photosphere, which select a wind without any assumption about its
 * base. The winds, in order of time, are gathered into a sequence whose arc length is the time, and the ejecta follow it.
 */
#include "luxgale/memory.h"
#include "luxgale/track.h"
#include "run/run_internal.h"

#include <math.h>

static double escape_energy(const struct lxg_case *input) {
  return input->star.gm / input->star.radius;
}

/* What the ejecta module cannot know: why an epoch has no wind, and how many members have its magnitude. */
static void complete(const struct lxg_observed_course *course, struct lxg_ejecta *ejecta) {
  ejecta->ambiguous = 0;
  for (size_t i = 0; i < course->count; i++) {
    ejecta->epoch[i].reason = course->epoch[i].reason;
    ejecta->epoch[i].members = course->epoch[i].members;
    ejecta->ambiguous += course->epoch[i].members > 1;
  }
}

enum lxg_status lxg_run_course(const struct lxg_case *input, const struct lxg_ejecta_options *options,
                               const struct lxg_family *family, struct lxg_observed_course *course,
                               struct lxg_ejecta *ejecta, struct lxg_error *error) {
  const struct lxg_observed *observed = input->observed;
  enum lxg_status status = lxg_observed_follow(observed, family, options->branch, course, error);
  if (status == LXG_OK) {
    status = lxg_ejecta_follow(family, course->track, observed->time, observed->count, escape_energy(input),
                               options, ejecta, error);
  }
  if (status == LXG_OK) {
    complete(course, ejecta);
  }
  return status;
}

/* ---- colours ------------------------------------------------------------------------------------------------------- */

/* Winds of the epochs. */
struct sequence {
  size_t count, solved;
  struct lxg_wind *wind;        /* [solved] */
  double *arc;                  /* [solved] time of each [s] */
  double *row;                  /* [count] the same, NaN without a wind */
  double *luminosity;           /* [count] of the black body [erg s^-1], NaN without */
  enum lxg_wind_reason *reason; /* [count] */
};

static void sequence_free(struct sequence *sequence) {
  lxg_free(sequence->wind);
  lxg_free(sequence->arc);
  lxg_free(sequence->row);
  lxg_free(sequence->luminosity);
  lxg_free(sequence->reason);
}

/* The wind of one epoch: from that of the epoch before, else from nothing. */
static enum lxg_status solve_epoch(struct lxg_wind_solver *solver, const struct lxg_wind_hold hold[2],
                                   enum lxg_branch branch, bool near, struct lxg_wind *wind,
                                   struct lxg_error *error) {
  enum { BRANCHES = 8 };
  struct lxg_wind winds[BRANCHES];
  size_t count = 0;
  if (near && lxg_wind_follow(solver, hold, wind, error) == LXG_OK) {
    return LXG_OK;
  }
  lxg_error_clear(error);
  const enum lxg_status status = lxg_family_members(solver, hold, branch, winds, BRANCHES, &count, error);
  *wind = winds[0];
  return status;
}

static enum lxg_status solve_all(const struct lxg_case *input, enum lxg_branch branch,
                                 struct lxg_wind_solver *solver, struct sequence *sequence,
                                 struct lxg_error *error) {
  bool near = false;
  for (size_t i = 0; i < sequence->count; i++) {
    struct lxg_photometry_state state = {0};
    struct lxg_wind *wind = &sequence->wind[sequence->solved];
    sequence->row[i] = sequence->luminosity[i] = NAN;
    sequence->reason[i] = LXG_WIND_NOT_FOUND;
    enum lxg_status status = lxg_observed_state(input->observed, i, &state, error);
    if (status == LXG_OK) {
      sequence->luminosity[i] = state.luminosity;
      const struct lxg_wind_hold hold[2] = {{LXG_HELD_PHOTOSPHERE_LUMINOSITY, state.luminosity},
                                            {LXG_HELD_PHOTOSPHERE_TEMPERATURE, state.temperature}};
      status = solve_epoch(solver, hold, branch, near, wind, error);
      near = status == LXG_OK;
      sequence->reason[i] = status == LXG_OK ? LXG_WIND_SOLVED : wind->reason;
    }
    if (status == LXG_OK) {
      sequence->arc[sequence->solved++] = input->observed->time[i];
      sequence->row[i] = input->observed->time[i];
    } else if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
      lxg_error_clear(error);
      sequence->reason[i] = sequence->reason[i] == LXG_WIND_SOLVED ? LXG_WIND_NOT_FOUND : sequence->reason[i];
    } else {
      return status;
    }
  }
  return LXG_OK;
}

static enum lxg_status follow_sequence(const struct lxg_case *input, const struct lxg_ejecta_options *options,
                                       const struct sequence *sequence, struct lxg_family *family,
                                       struct lxg_ejecta *ejecta, struct lxg_error *error) {
  const struct lxg_observed *observed = input->observed;
  struct lxg_track *track = NULL;
  enum lxg_status status =
      lxg_family_gather(sequence->wind, sequence->arc, sequence->solved, input->l_edd, family, error);
  for (size_t i = sequence->solved; i-- > 0;) { /* a family begins at arc length 0 */
    family->arc[i] -= sequence->solved > 0 ? sequence->arc[0] : 0.0;
  }
  for (size_t i = 0; i < sequence->count; i++) {
    sequence->row[i] -= sequence->solved > 0 ? sequence->arc[0] : 0.0;
  }
  if (status == LXG_OK) {
    status = lxg_track_create(observed->time, sequence->row, sequence->count, &track, error);
  }
  if (status == LXG_OK) {
    status = lxg_ejecta_follow(family, track, observed->time, sequence->count, escape_energy(input), options,
                               ejecta, error);
  }
  for (size_t i = 0; i < sequence->count && status == LXG_OK; i++) {
    ejecta->epoch[i].reason = sequence->reason[i];
    ejecta->epoch[i].luminosity = sequence->luminosity[i];
  }
  lxg_track_destroy(track);
  return status;
}

enum lxg_status lxg_run_colours(const struct lxg_case *input, const struct lxg_ejecta_options *options,
                                struct lxg_wind_solver *solver, struct lxg_family *family,
                                struct lxg_ejecta *ejecta, struct lxg_error *error) {
  const size_t count = input->observed->count;
  struct sequence sequence = {.count = count,
                              .wind = lxg_alloc(count, sizeof *sequence.wind),
                              .arc = lxg_alloc(count, sizeof *sequence.arc),
                              .row = lxg_alloc(count, sizeof *sequence.row),
                              .luminosity = lxg_alloc(count, sizeof *sequence.luminosity),
                              .reason = lxg_alloc(count, sizeof *sequence.reason)};
  enum lxg_status status = LXG_OK;
  if (sequence.wind == NULL || sequence.arc == NULL || sequence.row == NULL || sequence.luminosity == NULL ||
      sequence.reason == NULL) {
    status = lxg_error_set(error, LXG_MEMORY, "memory", "%zu epochs: out of memory", count);
  }
  if (status == LXG_OK) {
    status = solve_all(input, options->branch, solver, &sequence, error);
  }
  if (status == LXG_OK) {
    status = follow_sequence(input, options, &sequence, family, ejecta, error);
  }
  sequence_free(&sequence);
  return status;
}

/* ---- luminosities -------------------------------------------------------------------------------------------------- */

enum lxg_status lxg_run_seen(const struct lxg_case *input, const struct lxg_ejecta *ejecta,
                             struct lxg_history **history, struct lxg_error *error) {
  double *values = lxg_alloc(2 * ejecta->count, sizeof *values);
  size_t count = 0;
  *history = NULL;
  if (values == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "%zu epochs: out of memory", ejecta->count);
  }
  for (size_t i = 0; i < ejecta->count; i++) {
    if (ejecta->epoch[i].luminosity > 0.0) {
      values[count] = ejecta->epoch[i].time;
      values[ejecta->count + count++] = ejecta->epoch[i].luminosity;
    }
  }
  enum lxg_status status = LXG_OK;
  if (count > 0) {
    const struct lxg_history_rows rows = {.kind = LXG_HISTORY_PHOTOSPHERE,
                                          .count = count,
                                          .time = values,
                                          .luminosity = values + ejecta->count,
                                          .gap_fraction = input->settings.gap_fraction};
    status = lxg_history_create(&rows, history, error);
  }
  lxg_free(values);
  return status;
}

enum lxg_status lxg_run_light_curve(const struct lxg_case *input, double mean_speed, struct lxg_node *root,
                                    struct lxg_error *error) {
  struct lxg_light_decline decline;
  const enum lxg_status status =
      lxg_lightcurve_decline(&input->observed->curve, &input->observed->decline, &decline, error);
  if (status == LXG_OK) {
    lxg_report_light_curve(root, input->observed, &decline, mean_speed);
  } else if (status == LXG_NO_SOLUTION || status == LXG_INPUT) {
    lxg_report_no_light_curve(root, error);
    lxg_error_clear(error);
    return LXG_OK;
  }
  return status;
}
