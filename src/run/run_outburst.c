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
  struct lxg_history_excess excess; /* above L_Edd */
  struct lxg_ejecta ejecta;
};

static void outburst_free(struct outburst *outburst) {
  lxg_ejecta_free(&outburst->ejecta);
  lxg_family_free(&outburst->family);
  lxg_wind_solver_destroy(outburst->solver);
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
  if (status != LXG_OK) {
    return status;
  }
  status = lxg_history_excess(outburst->history, LXG_HISTORY_VALUE, input->l_edd, &outburst->excess, error);
  if (status == LXG_OK) {
    status = lxg_wind_solver_create(&model, NULL, &outburst->solver, error);
  }
  if (status == LXG_OK) {
    lxg_run_stage(options, "tracing the family of winds");
    status = lxg_family_trace(outburst->solver, &input->hold[0], &limits, &outburst->family, error);
  }
  if (status == LXG_OK) {
    lxg_run_stage(options, "following the history");
    status = lxg_ejecta_compute(&outburst->family, outburst->history, input->star.gm / input->star.radius,
                                &ejecting, &outburst->ejecta, error);
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
  struct lxg_node *root = results->report != NULL ? lxg_document_root(results->report) : NULL;
  if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    lxg_run_unanswered(results, error);
    lxg_report_super_eddington(root, &outburst.excess);
    lxg_report_no_family(root, &input->hold[0], &results->why);
    lxg_report_warnings(root);
    status = LXG_OK;
  } else if (status == LXG_OK) {
    judge(&outburst.ejecta, results);
    lxg_report_super_eddington(root, &outburst.excess);
    lxg_report_ejecta(root, &outburst.ejecta);
    lxg_report_family(root, &outburst.family);
    lxg_report_ejecta_warnings(lxg_report_warnings(root), &outburst.ejecta, outburst.history,
                               &outburst.excess);
    if (options->epochs || options->pictures) {
      status = lxg_report_epoch_table(&outburst.ejecta, input->l_edd, &results->epochs, error);
    }
    if (status == LXG_OK && options->pictures) {
      status = lxg_report_family_table(&outburst.family, &results->family, error);
    }
  }
  if (status == LXG_OK) {
    status = lxg_document_status(results->report, error);
  }
  outburst_free(&outburst);
  return status;
}
