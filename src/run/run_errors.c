/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_errors.c - models of a case with uncertain parameters off their values, and the propagation of all errors (see run.h).
 */
#include "luxgale/constants.h"
#include "run/run_internal.h"

#include <math.h>

enum { NODES_MOST = 2 * LXG_PROPAGATION_PARAMETERS + 1 };

/* The uncertain parameters, and the models around the stated one. */
struct models {
  size_t count;
  enum lxg_propagation_parameter which[LXG_PROPAGATION_PARAMETERS];
  const char *name[LXG_PROPAGATION_PARAMETERS];
  struct lxg_propagation_node node[NODES_MOST];
  struct lxg_opacity *opacity[NODES_MOST]; /* own ones, for other compositions; else NULL */
};

static void models_free(struct models *models) {
  for (size_t i = 0; i < NODES_MOST; i++) {
    lxg_opacity_destroy(models->opacity[i]);
  }
}

static void find_parameters(const struct lxg_case *input, struct models *models) {
  static const char *const names[LXG_PROPAGATION_HELD] = {"star_mass", "star_radius", "hydrogen", "cno",
                                                          "metals"};
  for (int p = 0; p < LXG_PROPAGATION_PARAMETERS; p++) {
    if (input->errors.sigma[p] > 0.0) {
      models->which[models->count] = (enum lxg_propagation_parameter)p;
      models->name[models->count++] =
          p == LXG_PROPAGATION_HELD ? lxg_held_name(input->hold[0].quantity) : names[p];
    }
  }
}

static enum lxg_status move(const struct lxg_case *input, enum lxg_propagation_parameter parameter,
                            double sigmas, struct lxg_propagation_node *node, struct lxg_error *error) {
  const double step = sigmas * input->errors.sigma[parameter];
  struct lxg_composition *composition = &node->model.composition;
  switch (parameter) {
  case LXG_PROPAGATION_MASS:
    node->model.star.gm += step / LXG_SOLAR_MASS * LXG_SOLAR_GM;
    if (input->dwarf) {
      return lxg_star_dwarf_radius(node->model.star.gm / LXG_SOLAR_GM * LXG_SOLAR_MASS,
                                   &node->model.star.radius, error);
    }
    break;
  case LXG_PROPAGATION_RADIUS:
    node->model.star.radius += step;
    break;
  case LXG_PROPAGATION_HYDROGEN:
    composition->hydrogen += step;
    composition->helium -= step;
    break;
  case LXG_PROPAGATION_CNO:
    composition->cno += step;
    composition->helium -= step;
    break;
  case LXG_PROPAGATION_METALS:
    composition->metals += step;
    composition->helium -= step;
    break;
  default:
    node->hold.value += step;
    break;
  }
  const bool possible = node->model.star.gm > 0.0 && node->model.star.radius > 0.0 &&
                        (node->hold.value > 0.0 || node->hold.quantity == LXG_HELD_ENERGY_RATE);
  return possible ? LXG_OK
                  : lxg_error_set(error, LXG_INPUT, "errors-range", "a value that must be above zero is not");
}

/* The model with every parameter so many sigma off. */
static enum lxg_status make_node(const struct lxg_case *input, struct models *models, size_t i,
                                 const double sigmas[], struct lxg_error *error) {
  struct lxg_propagation_node *node = &models->node[i];
  bool other = false;
  *node = (struct lxg_propagation_node){.model = lxg_run_model(input), .hold = input->hold[0]};
  enum lxg_status status = LXG_OK;
  for (size_t p = 0; p < models->count && status == LXG_OK; p++) {
    const enum lxg_propagation_parameter which = models->which[p];
    status = sigmas[p] != 0.0 ? move(input, which, sigmas[p], node, error) : LXG_OK;
    other =
        other || (sigmas[p] != 0.0 && which >= LXG_PROPAGATION_HYDROGEN && which <= LXG_PROPAGATION_METALS);
    if (status != LXG_OK) {
      lxg_error_context(error, "moving %s by %g sigma", models->name[p], sigmas[p]);
    }
  }
  if (status == LXG_OK && other) {
    struct lxg_files files = {0};
    struct lxg_opacity_choice choice;
    status = lxg_composition_check(&node->model.composition, error);
    if (status == LXG_OK) {
      status = lxg_files_init(&files, lxg_document_name(input->document), error);
    }
    if (status == LXG_OK) {
      status = lxg_opacity_read(lxg_node_find(lxg_document_root(input->document), "opacity"), &files,
                                &node->model.composition, &choice, &models->opacity[i], error);
    }
    lxg_files_free(&files);
    node->model.opacity = models->opacity[i];
  }
  return status;
}

static enum lxg_status make_nodes(const struct lxg_case *input, struct models *models,
                                  struct lxg_error *error) {
  double sigmas[LXG_PROPAGATION_PARAMETERS] = {0.0};
  enum lxg_status status = LXG_OK;
  for (size_t p = 0; p < models->count && status == LXG_OK; p++) {
    sigmas[p] = -LXG_PROPAGATION_REACH;
    status = make_node(input, models, 2 * p, sigmas, error);
    sigmas[p] = LXG_PROPAGATION_REACH;
    if (status == LXG_OK) {
      status = make_node(input, models, 2 * p + 1, sigmas, error);
    }
    sigmas[p] = 0.0;
  }
  for (size_t p = 0; p < models->count; p++) {
    sigmas[p] = (p % 2 == 0 ? 1.0 : -1.0) * LXG_PROPAGATION_CHECK_SIGMA;
  }
  return status == LXG_OK && models->count > 0 ? make_node(input, models, 2 * models->count, sigmas, error)
                                               : status;
}

enum lxg_status lxg_run_errors(const struct lxg_case *input, const struct lxg_run_options *options,
                               const struct lxg_family *family, const struct lxg_observed_course *course,
                               struct lxg_propagation *propagation, struct lxg_error *error) {
  struct models models = {0};
  struct lxg_propagation_plan plan = input->errors;
  if (options->seeded) {
    plan.seed = (uint64_t)options->seed;
  }
  find_parameters(input, &models);
  enum lxg_status status = make_nodes(input, &models, error);
  if (status == LXG_OK) {
    const size_t threads = options->threads < 1                             ? 1
                           : options->threads > LXG_UNCERTAINTY_THREADS_MAX ? LXG_UNCERTAINTY_THREADS_MAX
                                                                            : options->threads;
    const struct lxg_propagation_input given = {.plan = &plan,
                                                .family = family,
                                                .star = &input->star,
                                                .l_edd = input->l_edd,
                                                .history = course == NULL ? input->history : NULL,
                                                .observed = input->observed,
                                                .course = course,
                                                .branch = options->branch,
                                                .parameters = models.count,
                                                .parameter = models.name,
                                                .node = models.node,
                                                .threads = (unsigned)threads};
    status = lxg_propagation_run(&given, propagation, error);
  }
  models_free(&models);
  return status;
}
