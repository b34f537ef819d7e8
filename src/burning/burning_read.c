/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * burning_read.c - the section `burning` of a case.
 */
#include "luxgale/burning.h"
#include "luxgale/keys.h"

enum lxg_status lxg_burning_read(struct lxg_node *section, const struct lxg_composition *composition,
                                 struct lxg_burning *burning, struct lxg_error *error) {
  static const char *const laws[] = {"none", "cno"}; /* in the order of the enum */
  size_t law = 0;
  enum lxg_status status = lxg_keys_check(section, "burning", error);
  if (status == LXG_OK) {
    status = lxg_node_get_word(section, "law", laws, sizeof laws / sizeof laws[0], &law, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  status = lxg_burning_init(burning, (enum lxg_burning_law)law, composition, error);
  return status == LXG_OK ? LXG_OK : lxg_keys_locate(section, error);
}
