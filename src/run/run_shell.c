/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_shell.c - the swept shell of a luminosity history in the report and in its tables (see shell.h, speeds.h).
 */
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

enum lxg_status lxg_run_speeds(const struct lxg_case *input, enum lxg_branch branch,
                               const struct lxg_run_winds *winds, struct lxg_wind_solver *solver,
                               struct lxg_speeds **speeds, struct lxg_error *error) {
  const struct lxg_speeds_source source = {.family = &winds->family,
                                           .above = winds->two ? &winds->above : NULL,
                                           .limit = winds->limit,
                                           .history = input->history,
                                           .factor = 1.0,
                                           .branch = branch,
                                           .radius = input->star.radius};
  return lxg_speeds_create(&source, winds->two ? NULL : solver, speeds, error);
}

enum lxg_status lxg_run_shell(const struct lxg_case *input, const struct lxg_run_options *options,
                              const struct lxg_speeds *speeds, struct lxg_results *results,
                              struct lxg_error *error) {
  const struct lxg_history *history = input->history;
  if (history == NULL) {
    return !options->shell && !options->velocities
               ? LXG_OK
               : lxg_error_set(error, LXG_INPUT, "key-missing",
                               "%s: error: luminosity: a swept shell needs a luminosity history",
                               lxg_document_name(input->document));
  }
  const double start = history->time[0], end = history->time[history->count - 1];
  enum lxg_status status = lxg_report_shell(lxg_document_root(results->report), speeds, start, end, error);
  if (status == LXG_OK && (options->shell || options->pictures)) {
    status = lxg_report_shell_table(speeds, start, end, &results->shell, error);
  }
  if (status == LXG_OK && (options->velocities || options->pictures)) {
    status = lxg_report_velocity_table(speeds, end, &results->velocities, error);
  }
  return status;
}

enum lxg_status lxg_run_no_shell(const struct lxg_case *input, const struct lxg_run_options *options,
                                 struct lxg_node *root, struct lxg_error *error) {
  static const char reason[] =
      "computed only where the winds follow one luminosity history at a constant reduction of the opacity";
  if (options->shell || options->velocities) {
    return lxg_error_set(error, LXG_INPUT, "shell-not-available", "%s: error: swept shells are %s",
                         lxg_document_name(input->document), reason);
  }
  struct lxg_node *section = lxg_node_add_mapping(root, "swept_shell");
  lxg_node_add_none(section, "forms");
  lxg_node_add_text(section, "reason", reason);
  lxg_node_add_text(section, "reason_code", "shell-not-available");
  return LXG_OK;
}
