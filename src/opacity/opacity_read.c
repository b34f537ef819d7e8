/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * opacity_read.c - the section `opacity` of a case.
 */
#include "luxgale/files.h"
#include "luxgale/keys.h"
#include "luxgale/memory.h"
#include "luxgale/opacity.h"
#include "luxgale/opacity_table.h"

static const char *const formulas[] = {"kramers", "scattering", "reference"}; /* in the order of the enum */

const char *lxg_opacity_formula_name(enum lxg_opacity_formula formula) {
  return (size_t)formula < sizeof formulas / sizeof formulas[0] ? formulas[formula] : "?";
}

static const char *const outsides[] = {"join", "clamp", "refuse"}; /* in the order of the enum */

const char *lxg_opacity_outside_name(int outside) {
  return outside >= 0 && (size_t)outside < sizeof outsides / sizeof outsides[0] ? outsides[outside] : "?";
}

/* Names of sources to leave out, as a set of bits. */
static enum lxg_status read_omit(struct lxg_node *list, unsigned *omit, struct lxg_error *error) {
  if (lxg_node_is_none(list)) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_node_as_sequence(list, error);
  for (struct lxg_node *item = status == LXG_OK ? lxg_node_first(list) : NULL;
       item != NULL && status == LXG_OK; item = lxg_node_next(item)) {
    const char *name = NULL;
    unsigned bit = 0;
    status = lxg_node_as_text(item, &name, error);
    if (status == LXG_OK && lxg_opacity_source_find(name, &bit, error) != LXG_OK) {
      status = lxg_keys_locate(item, error);
    }
    *omit |= bit;
  }
  return status;
}

/* Reads one table of the list into the set. */
static enum lxg_status read_grid(struct lxg_node *item, struct lxg_files *files, struct lxg_opacity_set *set,
                                 struct lxg_error *error) {
  const char *name = NULL;
  char *path = NULL;
  struct lxg_opacity_grid *grid = NULL;
  enum lxg_status status = lxg_node_as_text(item, &name, error);
  if (status == LXG_OK) {
    status = lxg_files_resolve(files, name, &path, error);
  }
  if (status == LXG_OK) {
    status = lxg_opacity_grid_read(path, &grid, error);
  }
  if (status == LXG_OK) {
    status = lxg_files_record(files, "opacity.tables", name, grid->checksum, error);
    if (status != LXG_OK) {
      lxg_opacity_grid_destroy(grid);
    }
  }
  if (status == LXG_OK && (status = lxg_opacity_set_add(set, grid, error)) == LXG_INPUT) {
    status = lxg_keys_locate(item, error);
  }
  lxg_free(path);
  return status;
}

static enum lxg_status create_from_tables(struct lxg_node *list, struct lxg_files *files,
                                          const struct lxg_composition *composition,
                                          struct lxg_opacity_choice *choice, struct lxg_opacity **opacity,
                                          struct lxg_error *error) {
  struct lxg_opacity_set set = {0};
  struct lxg_opacity_table_options options = lxg_opacity_table_defaults();
  options.outside = (enum lxg_opacity_outside)choice->outside;
  enum lxg_status status = lxg_node_as_sequence(list, error);
  for (struct lxg_node *item = status == LXG_OK ? lxg_node_first(list) : NULL;
       item != NULL && status == LXG_OK; item = lxg_node_next(item)) {
    status = read_grid(item, files, &set, error);
  }
  choice->tables = set.count;
  if (status == LXG_OK) {
    status = lxg_opacity_create_table(&set, composition, &options, opacity, error);
    if (status == LXG_INPUT) {
      status = lxg_keys_locate(list, error);
    }
  }
  lxg_opacity_set_free(&set);
  return status;
}

static enum lxg_status refuse_unused(struct lxg_node *section, const char *key, const char *why,
                                     struct lxg_error *error) {
  struct lxg_node *node = lxg_node_find(section, key);
  return lxg_node_is_none(node) ? LXG_OK : lxg_node_error(node, error, "opacity-unused", "%s", why);
}

enum lxg_status lxg_opacity_read(struct lxg_node *section, struct lxg_files *files,
                                 const struct lxg_composition *composition, struct lxg_opacity_choice *choice,
                                 struct lxg_opacity **opacity, struct lxg_error *error) {
  *choice = (struct lxg_opacity_choice){.formula = LXG_OPACITY_KRAMERS};
  *opacity = NULL;
  size_t formula = LXG_OPACITY_KRAMERS, outside = LXG_OPACITY_JOIN;
  enum lxg_status status = lxg_keys_check(section, "opacity", error);
  if (status == LXG_OK) {
    status = lxg_node_get_word(section, "formula", formulas, sizeof formulas / sizeof formulas[0], &formula,
                               error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_word(section, "outside", outsides, sizeof outsides / sizeof outsides[0], &outside,
                               error);
  }
  choice->formula = (enum lxg_opacity_formula)formula;
  choice->outside = (int)outside;
  struct lxg_node *omit = lxg_node_find(section, "omit"), *tables = lxg_node_find(section, "tables");
  if (status == LXG_OK) {
    status = read_omit(omit, &choice->omit, error);
  }
  if (status == LXG_OK && !lxg_node_is_none(tables)) {
    status =
        refuse_unused(section, "omit", "a table does not know its sources, so none can be left out", error);
    if (status == LXG_OK) {
      status = refuse_unused(section, "formula",
                             "tables are joined to the formula kramers; give one or the other", error);
    }
    return status == LXG_OK ? create_from_tables(tables, files, composition, choice, opacity, error) : status;
  }
  if (status == LXG_OK) {
    status =
        refuse_unused(section, "outside", "it says what holds outside of tables, and there are none", error);
  }
  if (status != LXG_OK) {
    return status;
  }
  status = lxg_opacity_create_without(choice->formula, choice->omit, composition, opacity, error);
  return status == LXG_INPUT ? lxg_keys_locate(omit != NULL ? omit : section, error) : status;
}
