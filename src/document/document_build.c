/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_build.c - trees made by the program: reports, table headers (see document.h).
 */
#include "document/document_internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { TEXT_LIMIT = 1 << 24 }; /* longest text taken in [bytes] */

static struct lxg_node *fail(struct lxg_document *document, enum lxg_status status, const char *text) {
  if (document->status == LXG_OK) {
    document->status = status;
    document->failure = text;
  }
  return NULL;
}

enum lxg_status lxg_document_status(const struct lxg_document *document, struct lxg_error *error) {
  if (document == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory");
  }
  return document->status == LXG_OK ? LXG_OK
                                    : lxg_error_set(error, document->status, "document-build",
                                                    "%.120s: error: %s", document->name, document->failure);
}

static size_t depth_of(const struct lxg_node *node) {
  size_t depth = 0;
  for (; node != NULL; node = node->parent) {
    depth++;
  }
  return depth;
}

/* A new child, or NULL with the failure noted. */
static struct lxg_node *add(struct lxg_node *parent, const char *key, enum lxg_node_kind kind,
                            const char *text, size_t size, bool quoted) {
  if (parent == NULL) {
    return NULL;
  }
  struct lxg_document *const document = parent->document;
  const bool in_mapping = parent->kind == LXG_NODE_MAPPING;
  if (parent->kind == LXG_NODE_SCALAR || in_mapping != (key != NULL)) {
    return fail(document, LXG_BUG, "a key is needed in a mapping and nowhere else");
  }
  if (in_mapping && (key[0] == '\0' || lxg_document_child(parent, key) != NULL)) {
    return fail(document, LXG_BUG, "a key was given twice or is empty");
  }
  if (kind != LXG_NODE_SCALAR && depth_of(parent) >= LXG_DOCUMENT_DEPTH) {
    return fail(document, LXG_LIMIT, "the tree is nested too deep");
  }
  struct lxg_node *const node = lxg_document_node(document, kind, document->name);
  if (node != NULL) {
    node->key = key != NULL ? lxg_document_copy(document, key, strlen(key)) : NULL;
    node->text = kind == LXG_NODE_SCALAR ? lxg_document_copy(document, text, size) : NULL;
  }
  if (node == NULL || (key != NULL && node->key == NULL) || (kind == LXG_NODE_SCALAR && node->text == NULL)) {
    return fail(document, LXG_MEMORY, "out of memory");
  }
  node->quoted = quoted;
  node->used = true;
  lxg_document_attach(parent, node);
  return node;
}

struct lxg_node *lxg_node_add_mapping(struct lxg_node *parent, const char *key) {
  return add(parent, key, LXG_NODE_MAPPING, NULL, 0, false);
}

struct lxg_node *lxg_node_add_sequence(struct lxg_node *parent, const char *key) {
  return add(parent, key, LXG_NODE_SEQUENCE, NULL, 0, false);
}

struct lxg_node *lxg_node_add_none(struct lxg_node *parent, const char *key) {
  return add(parent, key, LXG_NODE_SCALAR, "null", 4, false);
}

struct lxg_node *lxg_node_add_number(struct lxg_node *parent, const char *key, double value) {
  if (!isfinite(value)) {
    return lxg_node_add_none(parent, key);
  }
  char text[LXG_TEXT_NUMBER_SIZE];
  const size_t size = lxg_text_format_number(value, text);
  return add(parent, key, LXG_NODE_SCALAR, text, size, false);
}

struct lxg_node *lxg_node_add_integer(struct lxg_node *parent, const char *key, long long value) {
  char text[32];
  const int size = snprintf(text, sizeof text, "%lld", value);
  return add(parent, key, LXG_NODE_SCALAR, text, (size_t)size, false);
}

struct lxg_node *lxg_node_add_bool(struct lxg_node *parent, const char *key, bool value) {
  return add(parent, key, LXG_NODE_SCALAR, value ? "true" : "false", value ? 4 : 5, false);
}

struct lxg_node *lxg_node_add_text(struct lxg_node *parent, const char *key, const char *text) {
  if (text == NULL || parent == NULL) {
    return lxg_node_add_none(parent, key);
  }
  const size_t size = strlen(text);
  if (size > TEXT_LIMIT) {
    return fail(parent->document, LXG_LIMIT, "a text is too long");
  }
  struct lxg_buffer clean = {0};
  for (size_t i = 0; i < size;) {
    const size_t length = lxg_text_utf8(text + i, size - i);
    lxg_buffer_append(&clean, length > 0 ? text + i : "\xEF\xBF\xBD", length > 0 ? length : 3);
    i += length > 0 ? length : 1;
  }
  struct lxg_node *const node =
      clean.failed ? fail(parent->document, LXG_MEMORY, "out of memory")
                   : add(parent, key, LXG_NODE_SCALAR, size > 0 ? clean.data : "", clean.size, true);
  lxg_buffer_free(&clean);
  return node;
}

struct lxg_node *lxg_node_add_copy(struct lxg_node *parent, const char *key, const struct lxg_node *node) {
  if (node == NULL) {
    return lxg_node_add_none(parent, key);
  }
  if (node->kind == LXG_NODE_SCALAR) {
    return add(parent, key, LXG_NODE_SCALAR, node->text, strlen(node->text), node->quoted);
  }
  /* The original is walked in the order of its text; `to` follows it in the copy. */
  struct lxg_node *const top = add(parent, key, node->kind, NULL, 0, false);
  struct lxg_node *to = top;
  const struct lxg_node *from = node->first;
  while (from != NULL && to != NULL) {
    const size_t size = from->text != NULL ? strlen(from->text) : 0;
    struct lxg_node *const made = add(to, from->key, from->kind, from->text, size, from->quoted);
    if (made == NULL) {
      return NULL;
    }
    if (from->first != NULL) {
      from = from->first;
      to = made;
      continue;
    }
    while (from != node && from->next == NULL) {
      from = from->parent;
      to = from != node ? to->parent : NULL;
    }
    from = from == node ? NULL : from->next;
  }
  return top;
}
