/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lines_section.c - the section `lines` of a case: the file, what its kinds are compared with, priors (see lines.h).
 */
#include "luxgale/files.h"
#include "luxgale/keys.h"
#include "luxgale/lines.h"
#include "luxgale/memory.h"

#include <math.h>
#include <string.h>

/* Kinds as keys of `map`, in the order of the enum; tables spell them with a hyphen. */
static const char *const map_keys[LXG_LINE_KINDS] = {"absorption", "blue_edge", "half_maximum",
                                                     "zero_intensity", "emission_peak"};

static enum lxg_status read_map(struct lxg_node *section, struct lxg_line_map *map, struct lxg_error *error) {
  enum lxg_status status = lxg_keys_check(section, "lines.map", error);
  for (int kind = 0; kind < LXG_LINE_KINDS && status == LXG_OK; kind++) {
    const char *model = NULL;
    status = lxg_node_get_text(section, map_keys[kind], &model, error);
    if (status == LXG_OK && model != NULL) {
      status = lxg_line_map_set(map, lxg_line_kind_name((enum lxg_line_kind)kind), model, error);
      if (status != LXG_OK) {
        return lxg_keys_locate(lxg_node_find(section, map_keys[kind]), error);
      }
    }
  }
  return status;
}

static enum lxg_status read_priors(struct lxg_node *section, double prior[LXG_LINE_SYSTEMS],
                                   struct lxg_error *error) {
  double sum = 0.0;
  enum lxg_status status = lxg_keys_check(section, "lines.priors", error);
  for (int system = 0; system < LXG_LINE_SYSTEMS && status == LXG_OK; system++) {
    const char *key = lxg_line_system_name((enum lxg_line_system)system);
    status = lxg_node_get_number(section, key, &prior[system], error);
    if (status == LXG_OK && !(prior[system] >= 0.0)) {
      return lxg_node_error(lxg_node_find(section, key), error, "line-prior", "a prior is 0 or more");
    }
    sum += prior[system];
  }
  if (status == LXG_OK && !(sum > 0.0)) {
    return lxg_node_error(section, error, "line-prior", "not all priors can be 0");
  }
  for (int system = 0; system < LXG_LINE_SYSTEMS && status == LXG_OK; system++) {
    prior[system] /= sum;
  }
  return status;
}

static enum lxg_status read_file(struct lxg_node *node, struct lxg_files *files, struct lxg_lines **lines,
                                 struct lxg_error *error) {
  const char *name = NULL;
  char *path = NULL;
  char checksum[LXG_CHECKSUM_SIZE];
  enum lxg_status status = lxg_node_as_text(node, &name, error);
  if (status == LXG_OK) {
    status = lxg_files_resolve(files, name, &path, error);
  }
  if (status == LXG_OK) {
    status = lxg_lines_read(path, lines, checksum, error);
  }
  if (status == LXG_OK) {
    status = lxg_files_record(files, "lines.file", name, checksum, error);
  }
  lxg_free(path);
  return status;
}

enum lxg_status lxg_lines_section_read(struct lxg_node *section, struct lxg_files *files,
                                       struct lxg_lines_section *read, struct lxg_error *error) {
  *read = (struct lxg_lines_section){.lines = NULL};
  lxg_line_map_default(&read->map);
  lxg_line_assign_defaults(&read->assign);
  if (lxg_node_is_none(section)) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_keys_check(section, "lines", error);
  if (status == LXG_OK) {
    status = lxg_node_get_quantity(section, "scatter", LXG_DIMENSION_SPEED, NULL, NULL, &read->assign.scatter,
                                   error);
  }
  if (status == LXG_OK && !(read->assign.scatter >= 0.0)) {
    return lxg_node_error(lxg_node_find(section, "scatter"), error, "line-scatter", "0 or more");
  }
  if (status == LXG_OK && !lxg_node_is_none(lxg_node_find(section, "map"))) {
    status = read_map(lxg_node_find(section, "map"), &read->map, error);
  }
  if (status == LXG_OK && !lxg_node_is_none(lxg_node_find(section, "priors"))) {
    status = read_priors(lxg_node_find(section, "priors"), read->assign.prior, error);
  }
  struct lxg_node *file = lxg_node_find(section, "file");
  if (status == LXG_OK && !lxg_node_is_none(file)) {
    status = read_file(file, files, &read->lines, error);
  }
  return status;
}

void lxg_lines_section_free(struct lxg_lines_section *section) {
  lxg_lines_destroy(section->lines);
  section->lines = NULL;
}
