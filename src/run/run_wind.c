/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_wind.c - the command `wind`: one wind of two held quantities, and which other winds share them (see run.h).
 *
 * A pair of held values may belong to several winds (the family that one of them spans may turn round). Walking that family
 * finds them all, and the branch decides which one is reported.
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

enum { MOST_BRANCHES = 16 };

/* All winds with the held values, the reported one first. */
struct branches {
  size_t listed;
  bool traced; /* the family shows them all; else only a cold search found the one listed */
  struct lxg_wind wind[MOST_BRANCHES];
};

static bool is_answer(enum lxg_status status) {
  return status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED;
}

/* The family that one of the held values spans passes every wind it connects; should it pass none, a cold search may still know
 * one that lies apart from it. */
static enum lxg_status search(const struct lxg_case *input, const struct lxg_run_options *options,
                              struct lxg_wind_solver *solver, struct branches *branches,
                              struct lxg_error *error) {
  size_t count = 0;
  const enum lxg_status status =
      lxg_family_members(solver, input->hold, options->branch, branches->wind, MOST_BRANCHES, &count, error);
  branches->listed = count < MOST_BRANCHES ? count : MOST_BRANCHES;
  branches->traced = status == LXG_OK;
  if (!is_answer(status)) {
    return status;
  }
  struct lxg_wind apart;
  struct lxg_error ignored = {0};
  if (lxg_wind_solve(solver, input->hold, &apart, &ignored) == LXG_OK) {
    branches->wind[0] = apart;
    branches->listed = 1;
    return LXG_OK;
  }
  const enum lxg_wind_reason reason = branches->wind[0].reason;
  lxg_wind_none(&branches->wind[0], reason == LXG_WIND_SOLVED ? apart.reason : reason);
  if (lxg_run_tired(input)) {
    branches->wind[0].reason = LXG_WIND_ENERGY_LIMITED;
    return lxg_error_set(error, LXG_NO_SOLUTION, lxg_wind_reason_code(LXG_WIND_ENERGY_LIMITED), "%s",
                         lxg_wind_reason_text(LXG_WIND_ENERGY_LIMITED));
  }
  return status;
}

static void report_branches(struct lxg_node *section, const struct branches *branches) {
  struct lxg_node *list = lxg_node_add_sequence(section, "branches");
  for (size_t i = 0; i < branches->listed; i++) {
    const double *value = branches->wind[i].value;
    struct lxg_node *one = lxg_node_add_mapping(list, NULL);
    lxg_report_held(one, LXG_HELD_MASS_LOSS_RATE, value[LXG_HELD_MASS_LOSS_RATE]);
    lxg_report_held(one, LXG_HELD_TERMINAL_SPEED, value[LXG_HELD_TERMINAL_SPEED]);
    lxg_report_held(one, LXG_HELD_PHOTOSPHERE_LUMINOSITY, value[LXG_HELD_PHOTOSPHERE_LUMINOSITY]);
  }
}

static enum lxg_status add_structure(const struct lxg_case *input, struct lxg_wind_solver *solver,
                                     struct lxg_results *results, struct lxg_error *error) {
  struct lxg_wind_row *rows = NULL;
  size_t count = 0, critical = 0, photosphere = 0;
  enum lxg_status status = lxg_wind_structure(solver, &rows, &count, &critical, &photosphere, error);
  if (status == LXG_OK) {
    status = lxg_report_structure_table(rows, count, input->opacity, &results->structure, error);
  }
  lxg_free(rows);
  return status;
}

enum lxg_status lxg_run_wind(const struct lxg_case *input, const struct lxg_run_options *options,
                             struct lxg_results *results, struct lxg_error *error) {
  struct lxg_wind_solver *solver = NULL;
  const struct lxg_wind_model model = lxg_run_model(input);
  struct branches branches = {0};
  enum lxg_status status = lxg_run_begin(input, "wind", results, error);
  if (status == LXG_OK) {
    status = lxg_run_require_holds(input, "wind", 2, error);
  }
  if (status == LXG_OK) {
    status = lxg_wind_solver_create(&model, NULL, &solver, error);
  }
  if (status == LXG_OK) {
    status = search(input, options, solver, &branches, error);
  }
  if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    lxg_run_unanswered(results, error);
    status = LXG_OK; /* an answer of the physics: the verdict says why */
  }
  if (status == LXG_OK) {
    struct lxg_node *root = lxg_document_root(results->report);
    struct lxg_node *section = lxg_report_wind(root, &branches.wind[0], input->l_edd);
    report_branches(section, &branches);
    status = lxg_run_wind_limits(input, &branches.wind[0], section, error);
    struct lxg_node *warnings = lxg_report_warnings(root);
    lxg_report_wind_warnings(warnings, &branches.wind[0]);
    if (results->answered && !branches.traced) {
      lxg_report_warn(
          warnings, "branches-unknown",
          "the family of the first held quantity could not be searched for other winds with the held values");
    }
    status = status == LXG_OK ? lxg_document_status(results->report, error) : status;
  }
  if (status == LXG_OK && results->answered && options->structure) {
    status = add_structure(input, solver, results, error);
  }
  lxg_wind_solver_destroy(solver);
  return status;
}
