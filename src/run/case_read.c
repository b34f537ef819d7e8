/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * case_read.c - a case document into the structs of the stages; each module reads its own section (see run.h).
 */
#include "luxgale/constants.h"
#include "luxgale/keys.h"
#include "luxgale/run.h"

#include <string.h>

static const long long case_version = 1;
static const double ignition_margin = 1.1; /* over a burning base larger envelopes would have burnt before */

static enum lxg_status read_version(struct lxg_node *root, struct lxg_error *error) {
  struct lxg_node *node = NULL;
  long long version = 0;
  enum lxg_status status = lxg_node_require(root, "case", &node, error);
  if (status == LXG_OK) {
    status = lxg_node_as_integer(node, &version, error);
  }
  if (status == LXG_OK && version != case_version) {
    return lxg_node_error(node, error, "case-version", "this version of luxgale reads case format %lld",
                          case_version);
  }
  return status;
}

/* Sections whose commands are not in this version. */
static enum lxg_status refuse_later(struct lxg_node *root, struct lxg_error *error) {
  static const char *const later[] = {"lines", "errors"};
  for (size_t i = 0; i < sizeof later / sizeof later[0]; i++) {
    struct lxg_node *node = lxg_node_find(root, later[i]);
    if (!lxg_node_is_none(node)) {
      return lxg_keys_refuse(node, error);
    }
  }
  return LXG_OK;
}

/* With burning the luminosity at R_0 is held at zero, unless the case gives the star's own, and families end at the ignition
 * mass. */
static enum lxg_status hold_dark_base(struct lxg_case *input, struct lxg_node *section,
                                      struct lxg_error *error) {
  if (input->burning.law == LXG_BURNING_NONE) {
    return LXG_OK;
  }
  for (size_t i = 0; i < input->holds; i++) {
    if (input->hold[i].quantity == LXG_HELD_BASE_LUMINOSITY) {
      return LXG_OK;
    }
  }
  if (input->holds == 2) {
    return lxg_node_error(section, error, "hold-burning",
                          "with burning the luminosity at R_0 is zero already: hold one quantity at most");
  }
  const double ignition = lxg_star_envelope_mass(&input->star, input->settings.ignition_pressure);
  input->limits.envelope_most = ignition_margin * ignition * LXG_GRAVITATION / input->star.gm;
  input->hold[1] = input->hold[0];
  input->hold[0] = (struct lxg_wind_hold){LXG_HELD_BASE_LUMINOSITY, 0.0};
  input->holds++;
  return LXG_OK;
}

/* `luminosity: {kind: decline}` needs no more than that; every other kind is a history of its own. */
static enum lxg_status read_luminosity(struct lxg_case *input, struct lxg_node *section,
                                       struct lxg_error *error) {
  struct lxg_node *kind = lxg_node_find(section, "kind");
  input->history_from_decline =
      !lxg_node_is_none(kind) && lxg_node_text(kind) != NULL && strcmp(lxg_node_text(kind), "decline") == 0;
  if (!input->history_from_decline) {
    const struct lxg_history_reading reading = {.files = &input->files,
                                                .l_edd = input->l_edd,
                                                .composition = &input->composition,
                                                .gap_fraction = input->settings.gap_fraction};
    return lxg_history_read(section, &reading, &input->history, error);
  }
  for (struct lxg_node *node = lxg_node_first(section); node != NULL; node = lxg_node_next(node)) {
    if (node != kind && !lxg_node_is_none(node)) {
      const enum lxg_status status = lxg_keys_check(section, "luminosity", error);
      return status != LXG_OK
                 ? status
                 : lxg_node_error(node, error, "luminosity-unused", "kind decline has no use for it");
    }
  }
  return LXG_OK;
}

static enum lxg_status read_body(struct lxg_case *input, struct lxg_node *root, struct lxg_error *error) {
  struct lxg_node *star = NULL, *composition = NULL;
  enum lxg_status status = lxg_node_require(root, "star", &star, error);
  if (status == LXG_OK) {
    status = lxg_star_read(star, &input->star, &input->dwarf, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_require(root, "composition", &composition, error);
  }
  if (status == LXG_OK) {
    status = lxg_composition_read(composition, &input->composition, error);
  }
  if (status == LXG_OK) {
    input->l_edd = lxg_star_eddington_luminosity(&input->star, &input->composition);
    status = lxg_opacity_read(lxg_node_find(root, "opacity"), &input->files, &input->composition,
                              &input->opacity_choice, &input->opacity, error);
  }
  if (status == LXG_OK) {
    status = lxg_porosity_read(lxg_node_find(root, "porosity"), &input->porosity, error);
  }
  if (status == LXG_OK) {
    status = lxg_burning_read(lxg_node_find(root, "burning"), &input->composition, &input->burning, error);
  }
  if (status == LXG_OK) {
    status = lxg_decline_read(lxg_node_find(root, "decline"), input->settings.ignition_pressure,
                              &input->decline, error);
  }
  return status;
}

static enum lxg_status read_sections(struct lxg_case *input, struct lxg_error *error) {
  struct lxg_node *root = lxg_document_root(input->document);
  enum lxg_status status = lxg_keys_check(root, "", error);
  if (status == LXG_OK) {
    status = read_version(root, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_text(root, "title", &input->title, error);
  }
  if (status == LXG_OK) {
    status = lxg_settings_read(lxg_node_find(root, "settings"), &input->settings, error);
  }
  if (status == LXG_OK) {
    status = read_body(input, root, error);
  }
  if (status == LXG_OK) {
    status = refuse_later(root, error);
  }
  if (status == LXG_OK) {
    status = lxg_wind_hold_read(lxg_node_find(root, "hold"), &input->star, input->l_edd, input->hold,
                                &input->holds, error);
  }
  if (status == LXG_OK) {
    status = hold_dark_base(input, lxg_node_find(root, "hold"), error);
  }
  if (status == LXG_OK) {
    status = read_luminosity(input, lxg_node_find(root, "luminosity"), error);
  }
  if (status == LXG_OK) {
    status = lxg_history_read_factor(lxg_node_find(root, "porosity"), &input->files, input->history,
                                     &input->reduction, error);
  }
  if (status == LXG_OK) {
    status = lxg_driving_read(lxg_node_find(root, "driving"), &input->claimed, &input->claim, error);
  }
  return status == LXG_OK ? lxg_document_check_unused(input->document, error) : status;
}

enum lxg_status lxg_case_read(struct lxg_case *input, const char *path, const char *const overrides[],
                              size_t count, struct lxg_error *error) {
  memset(input, 0, sizeof *input);
  lxg_settings_init(&input->settings);
  input->limits = lxg_family_options_default();

  enum lxg_status status = lxg_files_init(&input->files, path, error);
  if (status == LXG_OK) {
    status = lxg_document_read(path, LXG_DOCUMENT_AUTO, &input->document, error);
  }
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    status = lxg_document_override(input->document, overrides[i], error);
  }
  if (status == LXG_OK) {
    status = read_sections(input, error);
  }
  if (status != LXG_OK) {
    lxg_case_free(input);
  }
  return status;
}

void lxg_case_free(struct lxg_case *input) {
  if (input != NULL) {
    lxg_history_destroy(input->history);
    lxg_history_destroy(input->reduction);
    lxg_opacity_destroy(input->opacity);
    lxg_files_free(&input->files);
    lxg_document_destroy(input->document);
    memset(input, 0, sizeof *input);
  }
}
