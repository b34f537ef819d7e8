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
  struct lxg_history *own; /* computed from the eruption of the case, or NULL */
  struct lxg_run_winds winds;
  struct lxg_history_excess excess; /* above L_Edd */
  struct lxg_ejecta ejecta;
};

static void outburst_free(struct outburst *outburst) {
  lxg_ejecta_free(&outburst->ejecta);
  lxg_run_winds_free(&outburst->winds);
  lxg_history_destroy(outburst->own);
}

static enum lxg_status require(const struct lxg_case *input, struct lxg_error *error) {
  if (input->history == NULL && !input->history_from_decline) {
    return lxg_error_set(error, LXG_INPUT, "key-missing",
                         "%s: error: luminosity: `outburst` needs a luminosity history",
                         lxg_document_name(input->document));
  }
  const enum lxg_held driven = input->history != NULL && input->history->kind == LXG_HISTORY_BASE
                                   ? LXG_HELD_BASE_LUMINOSITY
                                   : LXG_HELD_PHOTOSPHERE_LUMINOSITY;
  const enum lxg_status status = lxg_run_require_holds(input, "outburst", 1, error);
  if (status == LXG_OK && input->hold[0].quantity == driven) {
    return lxg_error_set(
        error, LXG_INPUT, "hold-dependent",
        "%s: error: hold.%s: the luminosity history gives this already; hold another quantity",
        lxg_document_name(input->document), lxg_held_name(driven));
  }
  return status;
}

/* The pipeline: opacity and star -> winds of the history -> ejecta. */
static enum lxg_status compute(const struct lxg_case *input, const struct lxg_run_options *options,
                               struct outburst *outburst, struct lxg_error *error) {
  struct lxg_ejecta_options ejecting = lxg_ejecta_options_default();
  ejecting.branch = options->branch;
  const enum lxg_status status = lxg_run_winds(input, options->branch, &outburst->winds, error);
  if (status != LXG_OK) {
    return status;
  }
  ejecting.limit = outburst->winds.limit;
  ejecting.blend = outburst->winds.blend;
  ejecting.parameter = input->reduction;
  ejecting.above = outburst->winds.two ? &outburst->winds.above : NULL;
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

/* The report of a history whose winds are known. */
static enum lxg_status report(const struct lxg_case *input, struct outburst *outburst, struct lxg_node *root,
                              struct lxg_error *error) {
  enum lxg_status status = lxg_run_super_eddington(input, &outburst->ejecta, &outburst->excess, root, error);
  if (status == LXG_OK) {
    lxg_report_ejecta(root, &outburst->ejecta);
    lxg_report_tiring_history(root, &outburst->ejecta, &input->star);
    status = lxg_run_driving(input, &outburst->ejecta, root, error);
  }
  if (status == LXG_OK) {
    const struct lxg_report_handover handover = handover_of(input, outburst);
    if (outburst->winds.two) {
      lxg_report_handover(root, &handover);
    }
    if (outburst->winds.blend != NULL) {
      lxg_report_blend(root, outburst->winds.blended, outburst->winds.blend_error);
    }
    lxg_report_family(root, &outburst->winds.family);
    struct lxg_node *warnings = lxg_report_warnings(root);
    if (outburst->winds.two) {
      lxg_report_handover_warnings(warnings, &handover, input->settings.handover_jump);
    }
    if (outburst->winds.blend != NULL && outburst->winds.blend_error > input->settings.blend_error) {
      lxg_report_blend_warning(warnings, outburst->winds.blend_error);
    }
    lxg_report_ejecta_warnings(warnings, &outburst->ejecta, input->history, &outburst->excess);
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
    if (epoch->reason != LXG_WIND_SOLVED && (epoch->luminosity > faintest || ejecta->solved == 0)) {
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
    status = compute(input, options, &outburst, error);
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
      status = lxg_run_driving(input, NULL, root, error);
      lxg_report_warnings(root);
    }
  } else if (status == LXG_OK) {
    judge(&outburst.ejecta, results);
    status = report(input, &outburst, root, error);
    if (status == LXG_OK && options->epochs) {
      status = lxg_report_epoch_table(&outburst.ejecta, input->l_edd, &results->epochs, error);
    }
    if (status == LXG_OK && options->epochs) {
      const struct lxg_wind_model model = lxg_run_model(input);
      status = lxg_report_epoch_flow(results->epochs, &outburst.ejecta, &model, error);
    }
  }
  if (status == LXG_OK) {
    status = lxg_document_status(results->report, error);
  }
  outburst_free(&outburst);
  return status;
}
