/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * porosity_read.c - the section `porosity` of a case.
 */
#include "luxgale/keys.h"
#include "luxgale/porosity.h"

/* A number that the law needs, or that it has no use for. */
static enum lxg_status read_number(struct lxg_node *section, const char *key, bool used, bool needed,
                                   double *value, struct lxg_error *error) {
  struct lxg_node *node = lxg_node_find(section, key);
  if (node != NULL && !used) {
    return lxg_node_error(node, error, "porosity-unused", "the chosen law of porosity has no use for it");
  }
  if (lxg_node_is_none(node) && !needed) {
    return LXG_OK;
  }
  const enum lxg_status status = lxg_node_require(section, key, &node, error);
  return status != LXG_OK ? status : lxg_node_as_number(node, value, error);
}

static enum lxg_status read_when(struct lxg_node *section, struct lxg_porosity *porosity,
                                 struct lxg_error *error) {
  static const char *const words[] = {"always", "super-eddington"}; /* in the order of the enum */
  size_t when = LXG_POROSITY_ALWAYS;
  const enum lxg_status status = lxg_node_get_word(section, "when", words, 2, &when, error);
  porosity->when = (enum lxg_porosity_when)when;
  if (status == LXG_OK && porosity->law == LXG_POROSITY_NONE &&
      !lxg_node_is_none(lxg_node_find(section, "when"))) {
    return lxg_node_error(lxg_node_find(section, "when"), error, "porosity-unused",
                          "there is no porosity to apply");
  }
  return status;
}

enum lxg_status lxg_porosity_read(struct lxg_node *section, struct lxg_porosity *porosity,
                                  struct lxg_error *error) {
  static const char *const laws[] = {"none", "reduction", "length"}; /* in the order of the enum */
  *porosity = (struct lxg_porosity){.law = LXG_POROSITY_NONE};
  size_t law = 0;
  enum lxg_status status = lxg_keys_check(section, "porosity", error);
  if (status == LXG_OK) {
    status = lxg_node_get_word(section, "law", laws, sizeof laws / sizeof laws[0], &law, error);
  }
  porosity->law = (enum lxg_porosity_law)law;
  const bool reduction = porosity->law == LXG_POROSITY_REDUCTION,
             length = porosity->law == LXG_POROSITY_LENGTH;
  struct lxg_node *table = lxg_node_find(section, "file");
  const bool file = !lxg_node_is_none(table); /* then the factor follows the history (history.h) */
  if (status == LXG_OK && file && !reduction) {
    return lxg_node_error(table, error, "porosity-unused", "the chosen law of porosity has no use for it");
  }
  if (status == LXG_OK) {
    porosity->factor = 1.0;
    status = read_number(section, "factor", reduction && !file, reduction && !file, &porosity->factor, error);
  }
  if (status == LXG_OK) {
    status = read_number(section, "scale", length, length, &porosity->scale, error);
  }
  if (status == LXG_OK) {
    status = read_number(section, "power", length, false, &porosity->alpha, error);
  }
  if (status == LXG_OK) {
    status = read_when(section, porosity, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  if (!lxg_node_is_none(lxg_node_find(section, "power"))) {
    porosity->law = LXG_POROSITY_POWER;
  }
  return lxg_porosity_check(porosity, error) == LXG_OK ? LXG_OK : lxg_keys_locate(section, error);
}
