/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run.c - steps that several commands share, and the command `star` (see run.h).
 */
#include "luxgale/run.h"

#include "luxgale/report.h"
#include "run/run_internal.h"

#include <string.h>

void lxg_results_free(struct lxg_results *results) {
  if (results != NULL) {
    lxg_document_destroy(results->report);
    lxg_table_destroy(results->epochs);
    lxg_table_destroy(results->structure);
    *results = (struct lxg_results){0};
  }
}

enum lxg_status lxg_run_begin(const struct lxg_case *input, const char *command, struct lxg_results *results,
                              struct lxg_error *error) {
  *results = (struct lxg_results){.answered = true};
  const enum lxg_status status = lxg_report_create(command, &results->report, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_node *root = lxg_document_root(results->report);
  lxg_case_echo(input, root);
  lxg_report_star(root, &input->star, &input->composition, input->settings.ignition_pressure);
  return LXG_OK;
}

void lxg_run_unanswered(struct lxg_results *results, struct lxg_error *error) {
  results->answered = false;
  if (error != NULL) {
    results->why = *error;
  }
  lxg_error_clear(error);
}

enum lxg_status lxg_run_require_holds(const struct lxg_case *input, const char *command, size_t count,
                                      struct lxg_error *error) {
  if (input->reduction != NULL && strcmp(command, "outburst") != 0) {
    return lxg_error_set(error, LXG_INPUT, "porosity-history",
                         "%s: error: porosity.file: `%s` follows no history; give porosity.factor",
                         lxg_document_name(input->document), command);
  }
  if (input->holds == count) {
    return LXG_OK;
  }
  return lxg_error_set(error, LXG_INPUT, "hold-count", "%s: error: hold: %zu held, but `%s` needs %s",
                       lxg_document_name(input->document), input->holds, command,
                       count == 2 ? "two held quantities" : "exactly one held quantity");
}

struct lxg_wind_model lxg_run_model(const struct lxg_case *input) {
  return (struct lxg_wind_model){.star = input->star,
                                 .composition = input->composition,
                                 .opacity = input->opacity,
                                 .porosity = input->porosity,
                                 .burning = input->burning};
}

enum lxg_status lxg_run_star(const struct lxg_case *input, const struct lxg_run_options *options,
                             struct lxg_results *results, struct lxg_error *error) {
  (void)options;
  const enum lxg_status status = lxg_run_begin(input, "star", results, error);
  if (status != LXG_OK) {
    return status;
  }
  lxg_report_warnings(lxg_document_root(results->report));
  return lxg_document_status(results->report, error);
}
