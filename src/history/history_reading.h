/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * history_reading.h - the two halves of reading the section `luminosity`: from a table, from a formula.
 */
#ifndef LUXGALE_HISTORY_READING_H
#define LUXGALE_HISTORY_READING_H

#include "luxgale/document.h"
#include "luxgale/history.h"

/* kind: formula. Terms, window and place; LXG_INPUT with the place in the file. */
enum lxg_status lxg_history_read_formula(struct lxg_node *section, const struct lxg_history_reading *reading,
                                         struct lxg_history **history, struct lxg_error *error);

#endif
