/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_lines.c - the command `lines`: measured speeds against the model's, line profiles, fit (see run.h).
 *
 * With a luminosity history the winds of the epochs are members of the family of the one held quantity, and faster later gas
 * may have swept up a shell: each row is first given to one of them. Without a history two held quantities make one wind, with
 * which every row is compared.
 */
#include "luxgale/memory.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "luxgale/speeds.h"
#include "run/run_internal.h"

#include <math.h>

enum { MOST_WINDS = 16 };

/* What the stages fill, one after the other. */
struct spectrum {
  struct lxg_wind_solver *solver;
  struct lxg_history *own;    /* computed from the eruption of the case, or NULL */
  struct lxg_run_winds along; /* the history */
  struct lxg_speeds *speeds;
  size_t winds; /* that share both held values; 1 with a history */
  struct lxg_line_assignment *assignment;
  struct lxg_line_comparison *comparison;
  struct lxg_line_chi2 chi2;
  struct lxg_report_profile *profile;
  size_t profiles;
};

static void spectrum_free(struct spectrum *spectrum) {
  lxg_run_profiles_free(spectrum->profile, spectrum->profiles);
  lxg_free(spectrum->assignment);
  lxg_free(spectrum->comparison);
  lxg_speeds_destroy(spectrum->speeds);
  lxg_run_winds_free(&spectrum->along);
  lxg_wind_solver_destroy(spectrum->solver);
  lxg_history_destroy(spectrum->own);
}

static enum lxg_status require(const struct lxg_case *input, struct lxg_error *error) {
  if (input->lines.lines == NULL && input->profiles.count == 0) {
    return lxg_error_set(error, LXG_INPUT, "key-missing",
                         "%s: error: lines: `lines` needs lines.file or lines.profiles",
                         lxg_document_name(input->document));
  }
  if (input->fit_asked && input->lines.lines == NULL) {
    return lxg_error_set(error, LXG_INPUT, "key-missing", "%s: error: lines.file: a fit needs measured lines",
                         lxg_document_name(input->document));
  }
  return input->history == NULL && !input->history_from_decline
             ? lxg_run_require_holds(input, "lines", 2, error)
             : lxg_run_require_history(input, "lines", error);
}

/* The winds: a family followed along the history, or one wind. */
static enum lxg_status find_winds(const struct lxg_case *input, const struct lxg_run_options *options,
                                  struct spectrum *spectrum, struct lxg_error *error) {
  const struct lxg_wind_model model = lxg_run_model(input);
  enum lxg_status status = lxg_wind_solver_create(&model, NULL, &spectrum->solver, error);
  if (status != LXG_OK) {
    return status;
  }
  if (input->history != NULL) {
    spectrum->winds = 1;
    status = lxg_run_winds(input, options->branch, &spectrum->along, error);
    return status == LXG_OK ? lxg_run_speeds(input, options->branch, &spectrum->along, spectrum->solver,
                                             &spectrum->speeds, error)
                            : status;
  }
  struct lxg_wind winds[MOST_WINDS];
  struct lxg_family_place place;
  status = lxg_family_members(spectrum->solver, input->hold, options->branch, winds, MOST_WINDS,
                              &spectrum->winds, error);
  if (status == LXG_OK) {
    lxg_speeds_place(&winds[0], &place);
    status = lxg_speeds_create_single(&input->hold[0], &place, spectrum->solver, &spectrum->speeds, error);
  }
  return status;
}

/* Which system each row belongs to, and its residual. */
static enum lxg_status compare(const struct lxg_case *input, struct spectrum *spectrum,
                               struct lxg_error *error) {
  const struct lxg_lines *lines = input->lines.lines;
  enum lxg_status status = LXG_OK;
  spectrum->comparison = lxg_alloc(lines->count, sizeof *spectrum->comparison);
  if (input->history != NULL) {
    spectrum->assignment = lxg_alloc(lines->count, sizeof *spectrum->assignment);
  }
  if (spectrum->comparison == NULL || (input->history != NULL && spectrum->assignment == NULL)) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "lines: out of memory");
  }
  if (input->history != NULL) {
    status = lxg_lines_assign(lines, &input->lines.map, lxg_speeds_velocity, spectrum->speeds,
                              &input->lines.assign, spectrum->assignment, error);
  }
  return status == LXG_OK ? lxg_lines_compare(lines, &input->lines.map, spectrum->assignment,
                                              input->lines.assign.scatter, lxg_speeds_velocity,
                                              spectrum->speeds, spectrum->comparison, &spectrum->chi2, error)
                          : status;
}

static enum lxg_status report_lines(const struct lxg_case *input, const struct lxg_run_options *options,
                                    const struct spectrum *spectrum, struct lxg_node *warnings,
                                    struct lxg_results *results, struct lxg_error *error) {
  const struct lxg_report_lines report = {.lines = input->lines.lines,
                                          .map = &input->lines.map,
                                          .assignment = spectrum->assignment,
                                          .comparison = spectrum->comparison,
                                          .chi2 = &spectrum->chi2,
                                          .scatter = input->lines.assign.scatter};
  lxg_report_lines(lxg_document_root(results->report), &report);
  lxg_report_lines_warnings(warnings, &report);
  if (spectrum->chi2.compared == 0) {
    struct lxg_error why = {0};
    lxg_error_set(&why, LXG_NO_SOLUTION, "line-none-compared", "no row has a model speed: %s",
                  spectrum->comparison[0].reason);
    lxg_run_unanswered(results, &why);
  }
  enum lxg_status status = LXG_OK;
  if (options->epochs) {
    status = lxg_report_lines_table(&report, &results->epochs, error);
  }
  if (status == LXG_OK && input->fit_asked && spectrum->along.two) {
    return lxg_error_set(error, LXG_INPUT, "linefit-porous",
                         "%s: error: lines.fit: not available where plain winds hand over to porous ones",
                         lxg_document_name(input->document));
  }
  if (status == LXG_OK && input->fit_asked) {
    status = lxg_run_fit(input, options, spectrum->speeds, warnings, results, error);
  }
  return status;
}

static enum lxg_status report_profiles(const struct lxg_case *input, const struct lxg_run_options *options,
                                       struct spectrum *spectrum, struct lxg_results *results,
                                       struct lxg_error *error) {
  enum lxg_status status =
      lxg_run_profiles(input, spectrum->speeds, &spectrum->profile, &spectrum->profiles, error);
  if (status != LXG_OK) {
    return status;
  }
  lxg_report_profiles(lxg_document_root(results->report), spectrum->profile, spectrum->profiles);
  for (size_t i = 0; i < spectrum->profiles; i++) {
    if (!spectrum->profile[i].computed) {
      lxg_run_unanswered(results, &spectrum->profile[i].why);
    }
  }
  return options->profiles
             ? lxg_report_profile_table(spectrum->profile, spectrum->profiles, &results->profiles, error)
             : LXG_OK;
}

/* Everything that follows from the winds. Warnings are collected beside the report, where they stand last. */
static enum lxg_status report(const struct lxg_case *input, const struct lxg_run_options *options,
                              struct spectrum *spectrum, struct lxg_node *warnings,
                              struct lxg_results *results, struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  if (spectrum->winds > 1) {
    lxg_node_add_integer(lxg_report_warn(warnings, "several-branches",
                                         "several winds have the held values; the chosen branch was taken"),
                         "winds", (long long)spectrum->winds);
  }
  if (input->lines.lines != NULL) {
    status = compare(input, spectrum, error);
    if (status == LXG_OK) {
      status = report_lines(input, options, spectrum, warnings, results, error);
    }
  }
  if (status == LXG_OK && (input->profiles.count > 0 || options->profiles)) {
    status = report_profiles(input, options, spectrum, results, error);
  }
  return status == LXG_OK ? lxg_run_shell(input, options, spectrum->speeds, results, error) : status;
}

enum lxg_status lxg_run_lines(const struct lxg_case *given, const struct lxg_run_options *options,
                              struct lxg_results *results, struct lxg_error *error) {
  struct spectrum spectrum = {0};
  struct lxg_case completed = *given; /* with the history of its own eruption, where it asks for that */
  const struct lxg_case *input = &completed;
  struct lxg_document *aside = NULL; /* warnings on their way */
  enum lxg_status status = lxg_run_begin(input, "lines", results, error);
  if (status == LXG_OK) {
    status = require(input, error);
  }
  if (status == LXG_OK) {
    status = lxg_document_create("warnings", &aside, error);
  }
  if (status == LXG_OK && given->history_from_decline) {
    status = lxg_run_decline_history(given, &spectrum.own, &completed.limits, error);
    completed.history = spectrum.own;
  }
  if (status == LXG_OK) {
    status = find_winds(input, options, &spectrum, error);
  }
  struct lxg_node *root = results->report != NULL ? lxg_document_root(results->report) : NULL;
  struct lxg_node *warnings = aside != NULL ? lxg_report_warnings(lxg_document_root(aside)) : NULL;
  if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    lxg_run_unanswered(results, error);
    lxg_report_no_family(root, &input->hold[0], &results->why);
    status = LXG_OK;
  } else if (status == LXG_OK) {
    status = report(input, options, &spectrum, warnings, results, error);
  }
  if (status == LXG_OK) {
    lxg_node_add_copy(root, "warnings", warnings);
    status = lxg_document_status(aside, error);
  }
  if (status == LXG_OK) {
    status = lxg_document_status(results->report, error);
  }
  lxg_document_destroy(aside);
  spectrum_free(&spectrum);
  return status;
}
