/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * composition_read.c - the section `composition` of a case.
 */
#include "luxgale/composition.h"
#include "luxgale/keys.h"

static const double default_metals = 0.02; /* scaled-solar, as in the nova literature */

static enum lxg_status read_fraction(struct lxg_node *section, const char *name, double *fraction,
                                     struct lxg_error *error) {
  const enum lxg_status status = lxg_node_get_number(section, name, fraction, error);
  return status != LXG_OK
             ? status
             : lxg_node_check_range(lxg_node_find(section, name), *fraction, 0.0, 1.0, "", error);
}

enum lxg_status lxg_composition_read(struct lxg_node *section, struct lxg_composition *composition,
                                     struct lxg_error *error) {
  *composition = (struct lxg_composition){.metals = default_metals};
  struct lxg_node *hydrogen = NULL;
  enum lxg_status status = lxg_keys_check(section, "composition", error);
  if (status == LXG_OK) {
    status = lxg_node_require(section, "hydrogen", &hydrogen, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_as_number(hydrogen, &composition->hydrogen, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_check_range(hydrogen, composition->hydrogen, 0.0, 1.0, "", error);
  }
  if (status == LXG_OK) {
    status = read_fraction(section, "cno", &composition->cno, error);
  }
  if (status == LXG_OK) {
    status = read_fraction(section, "metals", &composition->metals, error);
  }
  const double rest = 1.0 - composition->hydrogen - composition->cno - composition->metals;
  composition->helium = rest;
  if (status == LXG_OK) {
    status = read_fraction(section, "helium", &composition->helium, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  if (lxg_composition_check(composition, error) != LXG_OK) {
    return lxg_keys_locate(section, error);
  }
  return LXG_OK;
}
