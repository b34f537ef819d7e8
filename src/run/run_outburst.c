/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_outburst.c - the main job: a luminosity history through a family of winds to the ejecta (see run.h).
 */
#include "luxgale/ejecta.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

/* What the stages fill, one after the other. */
struct outburst {
  struct lxg_history *own;           /* computed from the eruption of the case, or NULL */
  const struct lxg_history *history; /* this or the case's */
  struct lxg_wind_solver *solver;
  struct lxg_family family;
  struct lxg_history_excess excess;  /* above L_Edd */
  struct lxg_observed_course course; /* magnitudes along the family; empty otherwise */
  struct lxg_history *seen;          /* luminosities that follow from magnitudes or colours; NULL otherwise */
  struct lxg_ejecta ejecta;
};

static void outburst_free(struct outburst *outburst) {
  lxg_ejecta_free(&outburst->ejecta);
  lxg_history_destroy(outburst->seen);
  lxg_observed_course_free(&outburst->course);
  lxg_family_free(&outburst->family);
  lxg_wind_solver_destroy(outburst->solver);
  lxg_history_destroy(outburst->own);
}

/* Winds from colours hold both quantities themselves. */
static bool by_colours(const struct lxg_case *input) {
  return input->observed != NULL && input->observed->way == LXG_OBSERVED_COLOURS;
}

static enum lxg_status require(const struct lxg_case *input, struct lxg_error *error) {
  const char *name = lxg_document_name(input->document);
  if (input->history == NULL && input->observed == NULL && !input->history_from_decline) {
    return lxg_error_set(error, LXG_INPUT, "key-missing",
                         "%s: error: luminosity: `outburst` needs a luminosity history", name);
  }
  if (by_colours(input)) {
    if (input->holds > 0) {
      return lxg_error_set(
          error, LXG_INPUT, "hold-count",
          "%s: error: hold: colours give two quantities of each epoch; nothing else can be held", name);
    }
    return !input->errors.wanted
               ? LXG_OK
               : lxg_error_set(
                     error, LXG_INPUT, "errors-colours",
                     "%s: error: errors: not available with light colours, whose winds share no family",
                     name);
  }
  const enum lxg_status status = lxg_run_require_holds(input, "outburst", 1, error);
  if (status != LXG_OK || (input->history == NULL && !input->history_from_decline)) {
    return status;
  }
  if (input->history_from_decline && input->errors.wanted) {
    return lxg_error_set(
        error, LXG_INPUT, "errors-decline",
        "%s: error: errors: not available with luminosity kind decline, whose history is computed", name);
  }
  const enum lxg_held driven = input->history != NULL && input->history->kind == LXG_HISTORY_BASE
                                   ? LXG_HELD_BASE_LUMINOSITY
                                   : LXG_HELD_PHOTOSPHERE_LUMINOSITY;
  if (input->hold[0].quantity == driven) {
    return lxg_error_set(
        error, LXG_INPUT, "hold-dependent",
        "%s: error: hold.%s: the luminosity history gives this already; hold another quantity", name,
        lxg_held_name(driven));
  }
  return LXG_OK;
}

/* From winds to ejecta: by luminosity, by magnitude, or by colours. */
static enum lxg_status eject(const struct lxg_case *input, const struct lxg_ejecta_options *options,
                             struct outburst *outburst, struct lxg_error *error) {
  if (outburst->history != NULL) {
    return lxg_ejecta_compute(&outburst->family, outburst->history, input->star.gm / input->star.radius,
                              options, &outburst->ejecta, error);
  }
  enum lxg_status status =
      by_colours(input)
          ? lxg_run_colours(input, options, outburst->solver, &outburst->family, &outburst->ejecta, error)
          : lxg_run_course(input, options, &outburst->family, &outburst->course, &outburst->ejecta, error);
  return status == LXG_OK ? lxg_run_seen(input, &outburst->ejecta, &outburst->seen, &outburst->excess, error)
                          : status;
}

/* The pipeline: opacity and star -> winds -> family; history -> time above L_Edd; both -> ejecta. */
static enum lxg_status compute(const struct lxg_case *input, const struct lxg_run_options *options,
                               struct outburst *outburst, struct lxg_error *error) {
  const struct lxg_wind_model model = lxg_run_model(input);
  struct lxg_ejecta_options ejecting = lxg_ejecta_options_default();
  ejecting.branch = options->branch;
  struct lxg_family_options limits = lxg_family_options_default();
  outburst->history = input->history;
  enum lxg_status status = LXG_OK;
  if (input->history_from_decline) {
    status = lxg_run_decline_history(input, &outburst->own, &limits, error);
    outburst->history = outburst->own;
  }
  if (status == LXG_OK && outburst->history != NULL) {
    status = lxg_history_excess(outburst->history, LXG_HISTORY_VALUE, input->l_edd, &outburst->excess, error);
  }
  if (status == LXG_OK) {
    status = lxg_wind_solver_create(&model, NULL, &outburst->solver, error);
  }
  if (status == LXG_OK && !by_colours(input)) {
    status = lxg_family_trace(outburst->solver, &input->hold[0], &limits, &outburst->family, error);
  }
  return status == LXG_OK ? eject(input, &ejecting, outburst, error) : status;
}

/* An answer is whole when every epoch without a wind is fainter than all epochs that have one. */
static void judge(const struct lxg_ejecta *ejecta, struct lxg_results *results) {
  double faintest = INFINITY; /* with a wind [erg s^-1] */
  for (size_t i = 0; i < ejecta->count; i++) {
    if (ejecta->epoch[i].reason == LXG_WIND_SOLVED) {
      faintest = fmin(faintest, ejecta->epoch[i].luminosity);
    }
  }
  for (size_t i = 0; i < ejecta->count; i++) {
    const struct lxg_ejecta_epoch *epoch = &ejecta->epoch[i];
    const bool bright =
        isnan(epoch->luminosity) ? epoch->reason == LXG_WIND_ABOVE_FOLD : epoch->luminosity > faintest;
    if (epoch->reason != LXG_WIND_SOLVED && (bright || ejecta->solved == 0)) {
      struct lxg_error why = {0};
      lxg_error_set(&why, LXG_NO_SOLUTION, lxg_wind_reason_code(epoch->reason), "%s: %s",
                    ejecta->solved == 0 ? "no epoch has a wind" : "a bright epoch has no wind",
                    lxg_wind_reason_text(epoch->reason));
      lxg_run_unanswered(results, &why);
      return;
    }
  }
}

/* Monte Carlo into the report and the table; no answer there is one of the physics. */
static enum lxg_status add_errors(const struct lxg_case *input, const struct lxg_run_options *options,
                                  const struct outburst *outburst, struct lxg_propagation *errors,
                                  struct lxg_results *results, struct lxg_error *error) {
  struct lxg_node *root = lxg_document_root(results->report);
  const struct lxg_observed_course *course = outburst->course.count > 0 ? &outburst->course : NULL;
  const enum lxg_status status = lxg_run_errors(input, options, &outburst->family, course, errors, error);
  if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    lxg_report_no_errors(root, error);
    lxg_run_unanswered(results, error);
    return LXG_OK;
  }
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_propagation_plan plan = input->errors;
  plan.seed = options->seeded ? (uint64_t)options->seed : plan.seed;
  lxg_report_errors(root, &plan, errors);
  return results->epochs != NULL ? lxg_report_error_columns(errors, results->epochs, error) : LXG_OK;
}

/* Everything that follows from a computed outburst. */
static enum lxg_status report(const struct lxg_case *input, const struct lxg_run_options *options,
                              const struct outburst *outburst, struct lxg_results *results,
                              struct lxg_error *error) {
  struct lxg_node *root = lxg_document_root(results->report);
  const struct lxg_observed_course *course = outburst->course.count > 0 ? &outburst->course : NULL;
  struct lxg_propagation errors = {0};
  enum lxg_status status = LXG_OK;
  judge(&outburst->ejecta, results);
  lxg_report_super_eddington(root, &outburst->excess);
  lxg_report_ejecta(root, &outburst->ejecta);
  if (input->observed != NULL) {
    lxg_report_served(root, input->observed, course);
    status = lxg_run_light_curve(input, outburst->ejecta.mean_speed, root, error);
  }
  if (!by_colours(input)) {
    lxg_report_family(root, &outburst->family);
  }
  if (options->epochs && status == LXG_OK) {
    status = lxg_report_epoch_table(&outburst->ejecta, input->l_edd, &results->epochs, error);
    if (status == LXG_OK && input->observed != NULL) {
      status = lxg_report_observed_columns(input->observed, course, results->epochs, error);
    }
  }
  if (input->errors.wanted && status == LXG_OK) {
    status = add_errors(input, options, outburst, &errors, results, error);
  }
  const struct lxg_history *history = outburst->history != NULL ? outburst->history : outburst->seen;
  struct lxg_node *warnings = lxg_report_warnings(root);
  lxg_report_ejecta_warnings(warnings, &outburst->ejecta, history, &outburst->excess);
  lxg_report_error_warnings(warnings, &errors, outburst->ejecta.none);
  lxg_propagation_free(&errors);
  return status;
}

enum lxg_status lxg_run_outburst(const struct lxg_case *input, const struct lxg_run_options *options,
                                 struct lxg_results *results, struct lxg_error *error) {
  struct outburst outburst = {0};
  enum lxg_status status = lxg_run_begin(input, "outburst", results, error);
  if (status == LXG_OK) {
    status = require(input, error);
  }
  if (status == LXG_OK) {
    status = compute(input, options, &outburst, error);
  }
  if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    struct lxg_node *root = lxg_document_root(results->report);
    lxg_run_unanswered(results, error);
    if (outburst.history != NULL) {
      lxg_report_super_eddington(root, &outburst.excess);
    }
    lxg_report_no_family(root, &input->hold[0], &results->why);
    lxg_report_warnings(root);
    status = LXG_OK;
  } else if (status == LXG_OK) {
    status = report(input, options, &outburst, results, error);
  }
  if (status == LXG_OK) {
    status = lxg_document_status(results->report, error);
  }
  outburst_free(&outburst);
  return status;
}
