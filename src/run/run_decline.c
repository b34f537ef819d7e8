/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_decline.c - the command `decline`, and its wind phase as a luminosity history for other commands (see run.h).
 */
#include "luxgale/constants.h"
#include "luxgale/decline.h"
#include "luxgale/memory.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

static const double mass_margin = 1.1; /* winds of a little more than the start mass belong to the family */

/* Nothing may be held: the burning base and the envelope mass decide everything. */
static enum lxg_status require(const struct lxg_case *input, struct lxg_error *error) {
  const char *name = lxg_document_name(input->document);
  if (input->burning.law == LXG_BURNING_NONE) {
    return lxg_error_set(
        error, LXG_INPUT, "decline-burning",
        "%s: error: burning.law = none: `decline` needs a burning base (burning: {law: cno})", name);
  }
  if (input->holds != 1 || input->hold[0].quantity != LXG_HELD_BASE_LUMINOSITY ||
      input->hold[0].value != 0.0) {
    return lxg_error_set(
        error, LXG_INPUT, "hold-count",
        "%s: error: hold: `decline` holds nothing, the envelope mass runs through the eruption", name);
  }
  return LXG_OK;
}

static enum lxg_status compute(const struct lxg_case *input, struct lxg_decline *decline,
                               struct lxg_error *error) {
  const struct lxg_wind_model model = lxg_run_model(input);
  const enum lxg_status status = require(input, error);
  return status == LXG_OK ? lxg_decline_compute(&model, &input->decline, decline, error) : status;
}

enum lxg_status lxg_run_decline(const struct lxg_case *input, const struct lxg_run_options *options,
                                struct lxg_results *results, struct lxg_error *error) {
  struct lxg_decline decline = {0};
  enum lxg_status status = lxg_run_begin(input, "decline", results, error);
  if (status == LXG_OK) {
    status = compute(input, &decline, error);
  }
  struct lxg_node *root = results->report != NULL ? lxg_document_root(results->report) : NULL;
  if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    lxg_run_unanswered(results, error);
    lxg_report_no_decline(root, &results->why);
    lxg_report_warnings(root);
    status = LXG_OK;
  } else if (status == LXG_OK) {
    lxg_report_decline(root, &decline);
    lxg_report_decline_warnings(lxg_report_warnings(root), &decline);
    if (decline.end == LXG_DECLINE_LOST) {
      struct lxg_error why = {0};
      lxg_error_set(&why, LXG_NO_SOLUTION, lxg_decline_end_code(decline.end), "%s",
                    lxg_decline_end_text(decline.end));
      lxg_run_unanswered(results, &why);
    }
    if (options->epochs) {
      status = lxg_report_decline_table(&decline, input->l_edd, &results->epochs, error);
    }
  }
  if (status == LXG_OK) {
    status = lxg_document_status(results->report, error);
  }
  lxg_decline_free(&decline);
  return status;
}

/* Times and photospheric luminosities of the wind phase; the caller frees both. */
static enum lxg_status wind_phase(const struct lxg_decline *decline, double **time, double **luminosity,
                                  struct lxg_error *error) {
  *time = lxg_alloc(decline->wind_states, sizeof **time);
  *luminosity = lxg_alloc(decline->wind_states, sizeof **luminosity);
  if (*time == NULL || *luminosity == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "history of a decline: out of memory");
  }
  for (size_t i = 0; i < decline->wind_states; i++) {
    (*time)[i] = decline->state[i].time;
    (*luminosity)[i] = decline->state[i].luminosity;
  }
  return LXG_OK;
}

enum lxg_status lxg_run_decline_history(const struct lxg_case *input, struct lxg_history **history,
                                        struct lxg_family_options *limits, struct lxg_error *error) {
  *history = NULL;
  struct lxg_decline decline = {0};
  double *time = NULL, *luminosity = NULL;
  enum lxg_status status = compute(input, &decline, error);
  if (status == LXG_OK && decline.wind_states < 2) {
    status = lxg_error_set(error, LXG_NO_SOLUTION, "decline-no-wind", "the eruption of the case has no wind");
  }
  if (status == LXG_OK) {
    limits->thin_depth = input->decline.thin_depth;
    limits->envelope_most = mass_margin * decline.state[0].envelope_mass * LXG_GRAVITATION / input->star.gm;
    status = wind_phase(&decline, &time, &luminosity, error);
  }
  if (status == LXG_OK) {
    const struct lxg_history_rows rows = {.kind = LXG_HISTORY_PHOTOSPHERE,
                                          .count = decline.wind_states,
                                          .time = time,
                                          .luminosity = luminosity,
                                          .gap_fraction = input->settings.gap_fraction};
    status = lxg_history_create(&rows, history, error);
  }
  lxg_free(time);
  lxg_free(luminosity);
  lxg_decline_free(&decline);
  return status;
}
