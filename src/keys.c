/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * keys.c - rows of keys.def and the check that a section holds no others (see keys.h).
 */
#include "luxgale/keys.h"

#include <string.h>

static const struct lxg_key rows[] = {
#define LXG_KEY(section, name, kind, dimension, allowed, fallback, sentence)                                 \
  {section, name, LXG_KEY_##kind, LXG_DIMENSION_##dimension, allowed, fallback, sentence},
#include "luxgale/keys.def"
#undef LXG_KEY
};

/* The names alone, in the same order: a section's names are a slice. */
static const char *const names[] = {
#define LXG_KEY(section, name, kind, dimension, allowed, fallback, sentence) name,
#include "luxgale/keys.def"
#undef LXG_KEY
};

enum { ROWS = sizeof rows / sizeof rows[0] };

size_t lxg_keys_count(void) {
  return ROWS;
}

const struct lxg_key *lxg_keys_row(size_t index) {
  return index < ROWS ? &rows[index] : NULL;
}

const char *lxg_keys_kind(enum lxg_key_kind kind) {
  static const char *const words[] = {"mapping", "list",    "word", "text",    "file name",
                                      "number",  "integer", "bool", "quantity"};
  return (size_t)kind < sizeof words / sizeof words[0] ? words[kind] : "?";
}

enum lxg_status lxg_keys_check(struct lxg_node *mapping, const char *section, struct lxg_error *error) {
  size_t first = 0;
  while (first < ROWS && strcmp(rows[first].section, section) != 0) {
    first++;
  }
  size_t end = first;
  while (end < ROWS && strcmp(rows[end].section, section) == 0) {
    end++;
  }
  if (first == end) {
    return lxg_error_set(error, LXG_BUG, "keys-section", "%s: no such section in the table of keys", section);
  }
  return lxg_node_check_keys(mapping, names + first, end - first, error);
}

enum lxg_status lxg_keys_locate(const struct lxg_node *node, struct lxg_error *error) {
  if (error == NULL || error->status != LXG_INPUT) {
    return error == NULL ? LXG_INPUT : error->status;
  }
  char code[LXG_ERROR_CODE_SIZE], text[LXG_ERROR_LINE_SIZE];
  memcpy(code, error->code, sizeof code);
  memcpy(text, error->line[0], sizeof text);
  return lxg_node_error(node, error, code, "%s", text);
}

enum lxg_status lxg_keys_refuse(const struct lxg_node *node, struct lxg_error *error) {
  return lxg_node_error(node, error, "not-available",
                        "this version of luxgale knows the key but cannot act on it yet");
}
