/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_wind.c - the command `wind`: one wind of two held quantities, and which other winds share them (see run.h).
 *
 * A pair of held values may belong to several winds (the family of the first held quantity may turn round). The cold search finds
 * one of them; the family through it shows them all, and the branch decides which one is reported.
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

enum { MOST_BRANCHES = 16 };

/* Interpolation error of the family that only counts branches: each one found is solved anew. */
static const double branch_tolerance = 0.02;

/* Winds of the family that have the second held value too. */
struct branches {
  size_t count;                 /* all there are */
  size_t listed;                /* of them in `place` */
  bool known;                   /* the family could be traced */
  enum lxg_wind_reason missing; /* why there is none, if the family is known and has none */
  struct lxg_family_place place[MOST_BRANCHES];
};

static enum lxg_status find_branches(const struct lxg_case *input, struct lxg_wind_solver *solver,
                                     struct branches *branches, struct lxg_error *error) {
  struct lxg_family family = {0};
  struct lxg_family_index *index = NULL;
  double arc[MOST_BRANCHES];
  const enum lxg_family_quantity second = (enum lxg_family_quantity)input->hold[1].quantity;
  struct lxg_family_options options = lxg_family_options_default();
  options.tolerance = branch_tolerance;
  enum lxg_status status = lxg_family_trace(solver, &input->hold[0], &options, &family, error);
  if (status == LXG_OK) {
    status = lxg_family_index_create(&family, second, &index, error);
  }
  if (status == LXG_OK) {
    branches->count = lxg_family_index_find(index, input->hold[1].value, arc, MOST_BRANCHES);
    branches->listed = branches->count < MOST_BRANCHES ? branches->count : MOST_BRANCHES;
    for (size_t i = 0; i < branches->listed; i++) {
      lxg_family_at(&family, arc[i], &branches->place[i]);
    }
    branches->known = true;
    branches->missing =
        branches->count > 0 ? LXG_WIND_SOLVED : lxg_family_missing(&family, second, input->hold[1].value);
  }
  lxg_family_index_destroy(index);
  lxg_family_free(&family);
  return status;
}

/* Solves for the wanted branch: from the pair (first held, launch radius) of the family's place on to the pair asked for. */
static enum lxg_status solve_branch(const struct lxg_case *input, struct lxg_wind_solver *solver,
                                    const struct branches *branches, enum lxg_branch branch,
                                    struct lxg_wind *wind, struct lxg_error *error) {
  size_t chosen = 0;
  for (size_t i = 1; i < branches->listed; i++) {
    const double rate = branches->place[i].value[LXG_FAMILY_MASS_LOSS_RATE];
    const double best = branches->place[chosen].value[LXG_FAMILY_MASS_LOSS_RATE];
    if (branch == LXG_BRANCH_THIN ? rate < best : rate > best) {
      chosen = i;
    }
  }
  const enum lxg_held guide =
      input->hold[0].quantity == LXG_HELD_LAUNCH_RADIUS ? LXG_HELD_MASS_LOSS_RATE : LXG_HELD_LAUNCH_RADIUS;
  const struct lxg_wind_hold near[2] = {input->hold[0], {guide, branches->place[chosen].value[guide]}};
  const enum lxg_status status = lxg_wind_solve(solver, near, wind, error);
  return status == LXG_OK ? lxg_wind_follow(solver, input->hold, wind, error) : status;
}

static bool is_answer(enum lxg_status status) {
  return status == LXG_OK || status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED;
}

/* The wind of the wanted branch. A cold search that found nothing and proved nothing is settled by the family of the first held
 * quantity: it passes through the second held value, or ends before it. */
static enum lxg_status search(const struct lxg_case *input, const struct lxg_run_options *options,
                              struct lxg_wind_solver *solver, struct branches *branches,
                              struct lxg_wind *wind, struct lxg_error *error) {
  const enum lxg_status cold = lxg_wind_solve(solver, input->hold, wind, error);
  if (!is_answer(cold) || (cold != LXG_OK && wind->reason != LXG_WIND_NOT_FOUND)) {
    return cold;
  }
  const int steps = wind->newton_steps;
  lxg_run_stage(options, "searching other winds with these values");
  enum lxg_status status = find_branches(input, solver, branches, error);
  if (!is_answer(status)) {
    return status;
  }
  if (branches->listed > 0) {
    status = solve_branch(input, solver, branches, options->branch, wind, error);
    wind->newton_steps += steps;
    if (status == LXG_OK || !is_answer(status)) {
      return status;
    }
  }
  if (cold != LXG_OK && branches->known && branches->count == 0) {
    wind->reason = branches->missing;
    return lxg_error_set(error, LXG_NO_SOLUTION, lxg_wind_reason_code(wind->reason), "%s",
                         lxg_wind_reason_text(wind->reason));
  }
  return lxg_wind_solve(solver, input->hold, wind, error); /* as the cold search said */
}

static void report_branches(struct lxg_node *section, const struct branches *branches) {
  struct lxg_node *list = lxg_node_add_sequence(section, "branches");
  for (size_t i = 0; i < branches->listed; i++) {
    const double *value = branches->place[i].value;
    struct lxg_node *one = lxg_node_add_mapping(list, NULL);
    lxg_report_held(one, LXG_HELD_MASS_LOSS_RATE, value[LXG_FAMILY_MASS_LOSS_RATE]);
    lxg_report_held(one, LXG_HELD_TERMINAL_SPEED, value[LXG_FAMILY_TERMINAL_SPEED]);
    lxg_report_held(one, LXG_HELD_PHOTOSPHERE_LUMINOSITY, value[LXG_FAMILY_PHOTOSPHERE_LUMINOSITY]);
  }
}

static enum lxg_status add_structure(const struct lxg_case *input, const struct lxg_run_options *options,
                                     struct lxg_wind_solver *solver, struct lxg_results *results,
                                     struct lxg_error *error) {
  struct lxg_wind_row *rows = NULL;
  size_t count = 0, critical = 0, photosphere = 0;
  enum lxg_status status = lxg_wind_structure(solver, &rows, &count, &critical, &photosphere, error);
  if (status == LXG_OK) {
    status = lxg_report_structure_table(rows, count, input->opacity, &results->structure, error);
  }
  if (status == LXG_OK && options->pictures) {
    status = lxg_report_opacity_map(input->opacity, rows, photosphere + 1, &results->map, error);
  }
  lxg_free(rows);
  return status;
}

enum lxg_status lxg_run_wind(const struct lxg_case *input, const struct lxg_run_options *options,
                             struct lxg_results *results, struct lxg_error *error) {
  struct lxg_wind_solver *solver = NULL;
  const struct lxg_wind_model model = lxg_run_model(input);
  struct lxg_wind wind;
  struct branches branches = {0};
  enum lxg_status status = lxg_run_begin(input, "wind", results, error);
  if (status == LXG_OK) {
    status = lxg_run_require_holds(input, "wind", 2, error);
  }
  if (status == LXG_OK) {
    status = lxg_wind_solver_create(&model, NULL, &solver, error);
  }
  if (status == LXG_OK) {
    lxg_run_stage(options, "searching the wind");
    status = search(input, options, solver, &branches, &wind, error);
  }
  if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    lxg_run_unanswered(results, error);
    status = LXG_OK; /* an answer of the physics: the verdict says why */
  }
  if (status == LXG_OK) {
    struct lxg_node *root = lxg_document_root(results->report);
    struct lxg_node *section = lxg_report_wind(root, &wind, input->l_edd);
    report_branches(section, &branches);
    struct lxg_node *warnings = lxg_report_warnings(root);
    lxg_report_wind_warnings(warnings, &wind);
    if (results->answered && branches.listed == 0) {
      lxg_report_warn(
          warnings, "branches-unknown",
          "the family of the first held quantity could not be searched for other winds with the held values");
    }
    status = lxg_document_status(results->report, error);
  }
  if (status == LXG_OK && results->answered && (options->structure || options->pictures)) {
    status = add_structure(input, options, solver, results, error);
  }
  lxg_wind_solver_destroy(solver);
  return status;
}
