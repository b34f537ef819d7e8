/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_family.c - the command `family`: all winds that share one held quantity (see run.h).
 */
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

enum lxg_status lxg_run_family(const struct lxg_case *input, const struct lxg_run_options *options,
                               struct lxg_results *results, struct lxg_error *error) {
  struct lxg_wind_solver *solver = NULL;
  struct lxg_family family = {0};
  const struct lxg_wind_model model = lxg_run_model(input);
  enum lxg_status status = lxg_run_begin(input, "family", results, error);
  if (status == LXG_OK) {
    status = lxg_run_require_holds(input, "family", 1, error);
  }
  if (status == LXG_OK) {
    status = lxg_wind_solver_create(&model, NULL, &solver, error);
  }
  if (status == LXG_OK) {
    status = lxg_run_trace(input, solver, 0.0, &family, error);
  }
  struct lxg_node *root = results->report != NULL ? lxg_document_root(results->report) : NULL;
  if (status == LXG_OK) {
    lxg_report_family(root, &family);
    if (options->epochs) {
      status = lxg_report_family_table(&family, &results->epochs, error);
    }
  } else if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    lxg_run_unanswered(results, error);
    lxg_report_no_family(root, &input->hold[0], &results->why);
    status = LXG_OK;
  }
  if (status == LXG_OK) {
    lxg_report_warnings(root);
    status = lxg_document_status(results->report, error);
  }
  lxg_family_free(&family);
  lxg_wind_solver_destroy(solver);
  return status;
}
