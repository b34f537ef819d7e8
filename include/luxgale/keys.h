/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * keys.h - the table of all keys of a case (keys.def), as rows for the readers, for the help and for the documents.
 */
#ifndef LUXGALE_KEYS_H
#define LUXGALE_KEYS_H

#include "luxgale/document.h"
#include "luxgale/status.h"
#include "luxgale/units.h"

#include <stddef.h>

/* What stands behind a key. */
enum lxg_key_kind {
  LXG_KEY_MAPPING,
  LXG_KEY_LIST,
  LXG_KEY_WORD,
  LXG_KEY_TEXT,
  LXG_KEY_FILE,
  LXG_KEY_NUMBER,
  LXG_KEY_INTEGER,
  LXG_KEY_BOOL,
  LXG_KEY_QUANTITY /* "VALUE UNIT", or a bare number in the dimension's default unit */
};

/* One key. All texts are static. */
struct lxg_key {
  const char *section; /* "" at the top; "luminosity.terms[]" for the items of a list */
  const char *name;
  enum lxg_key_kind kind;
  enum lxg_dimension dimension; /* of a quantity */
  const char *allowed;          /* words or range, for people */
  const char *fallback;         /* default, for people */
  const char *sentence;
};

size_t lxg_keys_count(void);
const struct lxg_key *lxg_keys_row(size_t index);

/* Word for a kind ("quantity"); never NULL. */
const char *lxg_keys_kind(enum lxg_key_kind kind);

/* Requires a mapping all of whose keys are rows of `section` (NULL: an absent section, fine). LXG_INPUT "key-unknown" with the
 * nearest known key, "kind-mapping"; LXG_BUG for a section that has no rows. */
enum lxg_status lxg_keys_check(struct lxg_node *mapping, const char *section, struct lxg_error *error);

/* Puts the place of `node` in front of an input error that a check without knowledge of the file has set, keeping its code;
 * other errors stay as they are. Returns the error's status. */
enum lxg_status lxg_keys_locate(const struct lxg_node *node, struct lxg_error *error);

/* LXG_INPUT "not-available": the key is part of the format, but this version cannot act on it. */
enum lxg_status lxg_keys_refuse(const struct lxg_node *node, struct lxg_error *error);

#endif
