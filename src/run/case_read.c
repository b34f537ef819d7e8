/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * case_read.c - a case document into the structs of the stages; each module reads its own section (see run.h).
 */
#include "luxgale/keys.h"
#include "luxgale/run.h"

#include <string.h>

static const long long case_version = 1;

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
  static const char *const later[] = {"errors"};
  for (size_t i = 0; i < sizeof later / sizeof later[0]; i++) {
    struct lxg_node *node = lxg_node_find(root, later[i]);
    if (!lxg_node_is_none(node)) {
      return lxg_keys_refuse(node, error);
    }
  }
  static const char *const laws[] = {"none", "cno"};
  struct lxg_node *burning = lxg_node_find(root, "burning");
  size_t law = 0;
  enum lxg_status status = lxg_keys_check(burning, "burning", error);
  if (status == LXG_OK) {
    status = lxg_node_get_word(burning, "law", laws, 2, &law, error);
  }
  if (status == LXG_OK && law != 0) {
    return lxg_keys_refuse(lxg_node_find(burning, "law"), error);
  }
  return status;
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
  return status;
}

static enum lxg_status read_observations(struct lxg_case *input, struct lxg_node *root,
                                         struct lxg_error *error) {
  struct lxg_node *lines = lxg_node_find(root, "lines");
  enum lxg_status status = lxg_lines_section_read(lines, &input->files, &input->lines, error);
  if (status == LXG_OK) {
    status = lxg_linefit_read(lxg_node_find(lines, "fit"), input->star.gm, input->dwarf, &input->fit,
                              &input->fit_asked, &input->fit_follows, error);
  }
  if (status == LXG_OK) {
    status = lxg_profile_requests_read(lxg_node_find(lines, "profiles"), &input->profiles, error);
  }
  return status == LXG_OK ? lxg_mass_read(lxg_node_find(root, "mass"), input->l_edd, &input->mass, error)
                          : status;
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
    const struct lxg_history_reading reading = {.files = &input->files,
                                                .l_edd = input->l_edd,
                                                .composition = &input->composition,
                                                .gap_fraction = input->settings.gap_fraction};
    status = lxg_history_read(lxg_node_find(root, "luminosity"), &reading, &input->history, error);
  }
  if (status == LXG_OK) {
    status = read_observations(input, root, error);
  }
  return status == LXG_OK ? lxg_document_check_unused(input->document, error) : status;
}

enum lxg_status lxg_case_read(struct lxg_case *input, const char *path, const char *const overrides[],
                              size_t count, struct lxg_error *error) {
  memset(input, 0, sizeof *input);
  lxg_settings_init(&input->settings);
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
    lxg_lines_section_free(&input->lines);
    lxg_profile_requests_free(&input->profiles);
    lxg_opacity_destroy(input->opacity);
    lxg_files_free(&input->files);
    lxg_document_destroy(input->document);
    memset(input, 0, sizeof *input);
  }
}
