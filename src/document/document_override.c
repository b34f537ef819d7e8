/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_override.c - "path.to.key=value" laid over a document (see lxg_document_override).
 */
#include "document/document_internal.h"

#include <stdio.h>
#include <string.h>

static const char source_name[] = "--set";

enum { SHOWN = 80 }; /* characters of the assignment in a message */

static enum lxg_status bad(struct lxg_error *error, const char *code, const char *assignment,
                           const char *what) {
  return lxg_error_set(error, LXG_INPUT, code, "%s: error: %.*s: %s", source_name, SHOWN, assignment, what);
}

static bool is_key_character(char c) {
  return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '_' || c == '-';
}

/* Length of the path before '=', counting its keys; 0 if it is malformed. */
static size_t path_length(const char *assignment, size_t *keys) {
  size_t length = 0, part = 0;
  *keys = 1;
  for (; assignment[length] != '=' && assignment[length] != '\0'; length++) {
    if (assignment[length] == '.') {
      if (part == 0) {
        return 0;
      }
      part = 0;
      ++*keys;
    } else if (is_key_character(assignment[length])) {
      part++;
    } else {
      return 0;
    }
  }
  return assignment[length] == '=' && part > 0 ? length : 0;
}

/* The value as a detached node; nothing at all is null. */
static enum lxg_status read_value(struct lxg_document *document, const char *value, size_t depth,
                                  struct lxg_node **node, struct lxg_error *error) {
  const struct lxg_document_source source = {
      .name = source_name, .bytes = value, .size = strlen(value), .depth = depth, .flow_only = true};
  if (source.size > LXG_DOCUMENT_BYTES) {
    return lxg_document_fail(&source, (struct lxg_position){0}, error, LXG_LIMIT, "document-limit",
                             "longer than %d bytes", LXG_DOCUMENT_BYTES);
  }
  enum lxg_status status = lxg_document_check_bytes(&source, error);
  if (status == LXG_OK) {
    status = lxg_document_from_yaml(document, &source, node, error);
  }
  if (status == LXG_OK && *node == NULL) {
    *node = lxg_document_node(document, LXG_NODE_SCALAR, source_name);
    if (*node != NULL) {
      (*node)->text = lxg_document_copy(document, "null", 4);
    }
    if (*node == NULL || (*node)->text == NULL) {
      status = lxg_error_set(error, LXG_MEMORY, "memory", "%s: error: out of memory", source_name);
    }
  }
  return status;
}

/* Item of a sequence by its number; NULL if there is none. */
static struct lxg_node *item(const struct lxg_node *sequence, const char *key) {
  long long index = -1;
  if (!lxg_text_parse_integer(key, strlen(key), &index) || index < 0) {
    return NULL;
  }
  struct lxg_node *node = sequence->first;
  for (; node != NULL && index > 0; index--) {
    node = node->next;
  }
  return node;
}

/* Puts `fresh` where `old` is. */
static void exchange(struct lxg_node *old, struct lxg_node *fresh) {
  struct lxg_node *const parent = old->parent;
  fresh->key = old->key;
  fresh->parent = parent;
  fresh->next = old->next;
  fresh->used = old->used;
  if (parent->last == old) {
    parent->last = fresh;
  }
  if (parent->first == old) {
    parent->first = fresh;
    return;
  }
  struct lxg_node *before = parent->first;
  while (before->next != old) {
    before = before->next;
  }
  before->next = fresh;
}

/* One step down the path: `fresh` (the value, or an empty mapping) is hung in where nothing is; `*child` is what stands
 * there now. */
static enum lxg_status descend(struct lxg_node *parent, const char *key, struct lxg_node *fresh, bool last,
                               struct lxg_node **child, const char *assignment, struct lxg_error *error) {
  if (parent->kind == LXG_NODE_SCALAR) {
    return bad(error, "override-path", assignment, "the path leads through a single value");
  }
  struct lxg_node *const old =
      parent->kind == LXG_NODE_MAPPING ? lxg_document_child(parent, key) : item(parent, key);
  if (old == NULL && parent->kind == LXG_NODE_SEQUENCE) {
    return bad(error, "override-path", assignment, "the list has no item of that number");
  }
  if (old != NULL && !last && !lxg_node_is_none(old)) {
    *child = old;
    return LXG_OK;
  }
  if (old != NULL) {
    exchange(old, fresh);
  } else {
    fresh->key = lxg_document_copy(parent->document, key, strlen(key));
    if (fresh->key == NULL) {
      return lxg_error_set(error, LXG_MEMORY, "memory", "%s: error: out of memory", source_name);
    }
    lxg_document_attach(parent, fresh);
  }
  *child = fresh;
  return LXG_OK;
}

static enum lxg_status walk_path(struct lxg_document *document, char *path, struct lxg_node *value,
                                 const char *assignment, struct lxg_error *error) {
  struct lxg_node *node = document->root;
  enum lxg_status status = LXG_OK;
  for (char *key = path; key != NULL && status == LXG_OK;) {
    char *const dot = strchr(key, '.');
    if (dot != NULL) {
      *dot = '\0';
    }
    struct lxg_node *const fresh =
        dot == NULL ? value : lxg_document_node(document, LXG_NODE_MAPPING, source_name);
    if (fresh == NULL) {
      return lxg_error_set(error, LXG_MEMORY, "memory", "%s: error: out of memory", source_name);
    }
    status = descend(node, key, fresh, dot == NULL, &node, assignment, error);
    key = dot != NULL ? dot + 1 : NULL;
  }
  return status;
}

enum lxg_status lxg_document_override(struct lxg_document *document, const char *assignment,
                                      struct lxg_error *error) {
  size_t keys = 0;
  const size_t length = path_length(assignment, &keys);
  if (length == 0) {
    return bad(error, "override-syntax", assignment,
               "must read path.to.key=value with keys of letters, digits, _ and -");
  }
  if (keys >= LXG_DOCUMENT_DEPTH) {
    return bad(error, "override-path", assignment, "the path is too deep");
  }
  struct lxg_node *value = NULL;
  const enum lxg_status status = read_value(document, assignment + length + 1, keys, &value, error);
  if (status != LXG_OK) {
    lxg_error_context(error, "reading --set %.*s", SHOWN, assignment);
    return status;
  }
  char *const path = lxg_document_copy(document, assignment, length);
  if (path == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "%s: error: out of memory", source_name);
  }
  return walk_path(document, path, value, assignment, error);
}
