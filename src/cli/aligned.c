/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * aligned.c - a report as aligned text for people on a terminal; `case` is left out, they have just written it.
 */
#include "cli.h"

#include "luxgale/page.h"
#include "luxgale/text.h"

#include <math.h>
#include <string.h>

enum { WORDS = 36, DIGITS = 5 };

static void number(struct lxg_buffer *out, const struct lxg_node *node) {
  const char *const text = lxg_node_text(node);
  double value = NAN;
  const bool plain = text != NULL && !lxg_node_is_quoted(node) &&
                     lxg_text_parse_number(text, strlen(text), false, &value) == LXG_TEXT_NUMBER;
  long long whole = 0;
  if (lxg_node_is_none(node)) {
    lxg_buffer_text(out, "none");
  } else if (plain && !lxg_text_parse_integer(text, strlen(text), &whole)) {
    lxg_page_number(out, value, DIGITS);
  } else {
    lxg_buffer_text(out, text);
  }
}

/* "  words        value unit" */
static void row(struct lxg_buffer *out, struct lxg_node *node, int indent) {
  char words[96];
  const char *const unit = lxg_page_label(lxg_node_key(node), words, sizeof words);
  lxg_buffer_format(out, "%*s%-*s", indent, "", WORDS - indent, words);
  if (lxg_node_kind(node) == LXG_NODE_SCALAR) {
    number(out, node);
  } else {
    for (struct lxg_node *item = lxg_node_first(node); item != NULL; item = lxg_node_next(item)) {
      number(out, item);
      lxg_buffer_text(out, lxg_node_next(item) != NULL ? " to " : "");
    }
  }
  lxg_buffer_format(out, "%s%s\n", unit[0] != '\0' ? " " : "", unit);
}

static bool is_pair(struct lxg_node *node) {
  return lxg_node_kind(node) == LXG_NODE_SEQUENCE && lxg_node_count(node) == 2 &&
         lxg_node_kind(lxg_node_first(node)) == LXG_NODE_SCALAR;
}

static void section(struct lxg_buffer *out, struct lxg_node *node, int indent) {
  for (struct lxg_node *child = lxg_node_first(node); child != NULL; child = lxg_node_next(child)) {
    if (lxg_node_key(child) == NULL) { /* an item of a list */
      section(out, child, indent);
      lxg_buffer_text(out,
                      lxg_node_next(child) != NULL && lxg_node_kind(child) == LXG_NODE_MAPPING ? "\n" : "");
    } else if (lxg_node_kind(child) == LXG_NODE_SCALAR || is_pair(child)) {
      row(out, child, indent);
    } else if (lxg_node_count(child) > 0) {
      lxg_buffer_format(out, "%*s%s\n", indent, "", lxg_node_key(child));
      section(out, child, indent + 2);
    }
  }
}

void cli_aligned(struct lxg_buffer *out, struct lxg_node *report) {
  for (struct lxg_node *child = lxg_node_first(report); child != NULL; child = lxg_node_next(child)) {
    const char *const key = lxg_node_key(child);
    const bool shown =
        strcmp(key, "case") != 0 && strcmp(key, "program") != 0 && strcmp(key, "warnings") != 0;
    if (shown && lxg_node_count(child) > 0) {
      lxg_buffer_format(out, "%s%s\n", out->size > 0 ? "\n" : "", key);
      section(out, child, 2);
    }
  }
}
