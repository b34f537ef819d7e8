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
  struct lxg_history
      *own; /* of the case's own eruption, or luminosities that magnitudes or colours give; or NULL */
  struct lxg_run_winds winds;
  struct lxg_history_excess excess;  /* above L_Edd */
  struct lxg_observed_course course; /* magnitudes along the family; empty otherwise */
  struct lxg_ejecta ejecta;
  struct lxg_propagation errors;
  struct lxg_speeds *speeds; /* of the same winds: what the shell is made of */
};

static void outburst_free(struct outburst *outburst) {
  lxg_propagation_free(&outburst->errors);
  lxg_speeds_destroy(outburst->speeds);
  lxg_ejecta_free(&outburst->ejecta);
  lxg_observed_course_free(&outburst->course);
  lxg_run_winds_free(&outburst->winds);
  lxg_history_destroy(outburst->own);
}

/* Winds from colours hold both quantities themselves. */
static bool by_colours(const struct lxg_case *input) {
  return input->observed != NULL && input->observed->way == LXG_OBSERVED_COLOURS;
}

/* Winds that differ in kind from epoch to epoch. */
static bool two_kinds(const struct lxg_case *input) {
  return input->porosity.law != LXG_POROSITY_NONE && input->porosity.when == LXG_POROSITY_SUPER_EDDINGTON;
}

/* Where errors, or magnitudes, cannot be followed. */
static enum lxg_status require_simple(const struct lxg_case *input, struct lxg_error *error) {
  const char *name = lxg_document_name(input->document);
  const bool members = input->observed != NULL && input->history == NULL;
  if (two_kinds(input) && (members || input->errors.wanted)) {
    return lxg_error_set(
        error, LXG_INPUT, "porosity-history",
        "%s: error: porosity.when: super-eddington needs a luminosity history without errors", name);
  }
  if (input->errors.wanted && (by_colours(input) || input->history_from_decline)) {
    return lxg_error_set(
        error, LXG_INPUT, "errors-history",
        "%s: error: errors: not available with %s, whose winds share no family of known light", name,
        by_colours(input) ? "light colours" : "luminosity kind decline");
  }
  return LXG_OK;
}

static enum lxg_status require(const struct lxg_case *input, struct lxg_error *error) {
  const enum lxg_status status = require_simple(input, error);
  if (status != LXG_OK || input->observed == NULL || input->history != NULL) {
    return status == LXG_OK ? lxg_run_require_history(input, "outburst", error) : status;
  }
  if (by_colours(input)) {
    return input->holds == 0
               ? LXG_OK
               : lxg_error_set(
                     error, LXG_INPUT, "hold-count",
                     "%s: error: hold: colours give two quantities of each epoch; nothing else can be held",
                     lxg_document_name(input->document));
  }
  return lxg_run_require_holds(input, "outburst", 1, error);
}

/* The winds of magnitudes or colours; their luminosities become the history of the case. */
static enum lxg_status compute_observed(struct lxg_case *input, const struct lxg_ejecta_options *options,
                                        struct outburst *outburst, struct lxg_error *error) {
  const struct lxg_wind_model model = lxg_run_model(input);
  struct lxg_family *family = &outburst->winds.family;
  struct lxg_wind_solver *solver = NULL;
  enum lxg_status status = lxg_wind_solver_create(&model, NULL, &solver, error);
  if (status == LXG_OK && by_colours(input)) {
    status = lxg_run_colours(input, options, solver, family, &outburst->ejecta, error);
  } else if (status == LXG_OK) {
    status = lxg_run_trace(input, solver, 0.0, family, error);
    if (status == LXG_OK) {
      status = lxg_run_course(input, options, family, &outburst->course, &outburst->ejecta, error);
    }
  }
  lxg_wind_solver_destroy(solver);
  if (status == LXG_OK) {
    status = lxg_run_seen(input, &outburst->ejecta, &outburst->own, error);
    input->history = outburst->own;
  }
  return status;
}

/* The pipeline: opacity and star -> winds of the history -> ejecta. */
static enum lxg_status compute(struct lxg_case *input, const struct lxg_run_options *options,
                               struct outburst *outburst, struct lxg_error *error) {
  struct lxg_ejecta_options ejecting = lxg_ejecta_options_default();
  ejecting.branch = options->branch;
  if (input->history == NULL) {
    return compute_observed(input, &ejecting, outburst, error);
  }
  lxg_run_stage(options, "tracing the family of winds");
  const enum lxg_status status = lxg_run_winds(input, options->branch, &outburst->winds, error);
  if (status != LXG_OK) {
    return status;
  }
  ejecting.limit = outburst->winds.limit;
  ejecting.blend = outburst->winds.blend;
  ejecting.parameter = input->reduction;
  ejecting.above = outburst->winds.two ? &outburst->winds.above : NULL;
  lxg_run_stage(options, "following the history");
  return lxg_ejecta_compute(&outburst->winds.family, input->history, input->star.gm / input->star.radius,
                            &ejecting, &outburst->ejecta, error);
}

static struct lxg_report_handover handover_of(const struct lxg_case *input, const struct outburst *outburst) {
  struct lxg_report_handover handover = {.homogeneous = outburst->winds.homogeneous_limit,
                                         .limit = outburst->winds.limit,
                                         .l_edd = input->l_edd,
                                         .plain_rate = outburst->winds.plain_rate,
                                         .porous_rate = outburst->winds.porous_rate};
  for (size_t i = 0; i < outburst->ejecta.count; i++) {
    handover.porous += outburst->ejecta.epoch[i].porous;
  }
  handover.plain = outburst->ejecta.count - handover.porous;
  return handover;
}

/* The epoch table, if it is asked for. */
static enum lxg_status tabulate(const struct lxg_case *input, const struct lxg_run_options *options,
                                const struct outburst *outburst, struct lxg_results *results,
                                struct lxg_error *error) {
  if (!options->epochs && !options->pictures) {
    return LXG_OK;
  }
  const struct lxg_wind_model model = lxg_run_model(input);
  const struct lxg_observed_course *course = outburst->course.count > 0 ? &outburst->course : NULL;
  enum lxg_status status = lxg_report_epoch_table(&outburst->ejecta, input->l_edd, &results->epochs, error);
  if (status == LXG_OK) {
    status = lxg_report_epoch_flow(results->epochs, &outburst->ejecta, &model, error);
  }
  if (status == LXG_OK && input->observed != NULL) {
    status = lxg_report_observed_columns(input->observed, course, results->epochs, error);
  }
  if (status == LXG_OK && options->pictures && outburst->winds.family.count > 0) {
    status = lxg_report_family_table(&outburst->winds.family, &results->family, error);
  }
  return status;
}

/* Monte Carlo into the report and the table; no answer there is one of the physics. */
static enum lxg_status add_errors(const struct lxg_case *input, const struct lxg_run_options *options,
                                  struct outburst *outburst, struct lxg_results *results,
                                  struct lxg_error *error) {
  struct lxg_node *root = lxg_document_root(results->report);
  const struct lxg_observed_course *course = outburst->course.count > 0 ? &outburst->course : NULL;
  const enum lxg_status status =
      lxg_run_errors(input, options, &outburst->winds.family, course, &outburst->errors, error);
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
  lxg_report_errors(root, &plan, &outburst->errors);
  return results->epochs != NULL ? lxg_report_error_columns(&outburst->errors, results->epochs, error)
                                 : LXG_OK;
}

/* What the light is by itself, and which light served. */
/* The shell that later, faster gas sweeps up, where the winds follow one luminosity history. */
static enum lxg_status add_shell(const struct lxg_case *input, const struct lxg_run_options *options,
                                 struct outburst *outburst, struct lxg_results *results,
                                 struct lxg_error *error) {
  const bool members = input->observed != NULL && input->observed->way != LXG_OBSERVED_CORRECTION;
  if (input->reduction != NULL || members) {
    return lxg_run_no_shell(input, options, lxg_document_root(results->report), error);
  }
  const enum lxg_status status =
      lxg_run_speeds(input, options->branch, &outburst->winds, NULL, &outburst->speeds, error);
  return status == LXG_OK ? lxg_run_shell(input, options, outburst->speeds, results, error) : status;
}

static enum lxg_status add_light(const struct lxg_case *input, const struct outburst *outburst,
                                 struct lxg_node *root, struct lxg_error *error) {
  if (input->observed == NULL) {
    return LXG_OK;
  }
  lxg_report_served(root, input->observed, outburst->course.count > 0 ? &outburst->course : NULL);
  return lxg_run_light_curve(input, outburst->ejecta.mean_speed, root, error);
}

/* Families, and warnings last of all. */
static void conclude(const struct lxg_case *input, const struct outburst *outburst, struct lxg_node *root) {
  const struct lxg_report_handover handover = handover_of(input, outburst);
  if (outburst->winds.two) {
    lxg_report_handover(root, &handover);
  }
  if (outburst->winds.blend != NULL) {
    lxg_report_blend(root, outburst->winds.blended, outburst->winds.blend_error);
  }
  if (!by_colours(input)) {
    lxg_report_family(root, &outburst->winds.family);
  }
  struct lxg_node *warnings = lxg_report_warnings(root);
  if (outburst->winds.two) {
    lxg_report_handover_warnings(warnings, &handover, input->settings.handover_jump);
  }
  if (outburst->winds.blend != NULL && outburst->winds.blend_error > input->settings.blend_error) {
    lxg_report_blend_warning(warnings, outburst->winds.blend_error);
  }
  lxg_report_ejecta_warnings(warnings, &outburst->ejecta, input->history, &outburst->excess);
  lxg_report_error_warnings(warnings, &outburst->errors, outburst->ejecta.none);
}

/* The report of a history whose winds are known. */
static enum lxg_status report(const struct lxg_case *input, const struct lxg_run_options *options,
                              struct outburst *outburst, struct lxg_results *results,
                              struct lxg_error *error) {
  struct lxg_node *root = lxg_document_root(results->report);
  enum lxg_status status = LXG_OK;
  if (input->history != NULL) {
    status = lxg_run_super_eddington(input, &outburst->ejecta, &outburst->excess, root, error);
  }
  if (status == LXG_OK) {
    lxg_report_ejecta(root, &outburst->ejecta);
    lxg_report_tiring_history(root, &outburst->ejecta, &input->star);
    status = input->history != NULL ? lxg_run_driving(input, &outburst->ejecta, root, error) : LXG_OK;
  }
  if (status == LXG_OK) {
    status = add_light(input, outburst, root, error);
  }
  if (status == LXG_OK) {
    status = add_shell(input, options, outburst, results, error);
  }
  if (status == LXG_OK) {
    status = tabulate(input, options, outburst, results, error);
  }
  if (status == LXG_OK && input->errors.wanted) {
    status = add_errors(input, options, outburst, results, error);
  }
  if (status == LXG_OK) {
    conclude(input, outburst, root);
  }
  return status;
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

/* The case with the history of its own eruption, where it asks for that: borrowed from `outburst`. */
static enum lxg_status with_history(const struct lxg_case *given, struct lxg_case *input,
                                    struct outburst *outburst, struct lxg_error *error) {
  if (!given->history_from_decline) {
    return LXG_OK;
  }
  const enum lxg_status status = lxg_run_decline_history(given, &outburst->own, &input->limits, error);
  input->history = outburst->own;
  return status;
}

enum lxg_status lxg_run_outburst(const struct lxg_case *given, const struct lxg_run_options *options,
                                 struct lxg_results *results, struct lxg_error *error) {
  struct outburst outburst = {0};
  struct lxg_case completed = *given;
  const struct lxg_case *input = &completed;
  enum lxg_status status = lxg_run_begin(given, "outburst", results, error);
  if (status == LXG_OK) {
    status = require(given, error);
  }
  if (status == LXG_OK) {
    status = with_history(given, &completed, &outburst, error);
  }
  if (status == LXG_OK) {
    status = compute(&completed, options, &outburst, error);
  }
  struct lxg_node *root = results->report != NULL ? lxg_document_root(results->report) : NULL;
  if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    lxg_run_unanswered(results, error);
    status = LXG_OK;
    if (input->history != NULL) {
      status = lxg_run_super_eddington(input, NULL, &outburst.excess, root, error);
    }
    if (status == LXG_OK) {
      lxg_report_no_family(root, &input->hold[0], &results->why);
      status = input->history != NULL ? lxg_run_driving(input, NULL, root, error) : LXG_OK;
      lxg_report_warnings(root);
    }
  } else if (status == LXG_OK) {
    judge(&outburst.ejecta, results);
    status = report(input, options, &outburst, results, error);
  }
  if (status == LXG_OK) {
    status = lxg_document_status(results->report, error);
  }
  outburst_free(&outburst);
  return status;
}
