/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_access.c - looking at nodes, their paths, and errors that point at them (see document.h).
 */
#include "document/document_internal.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

enum {
  PATH_SIZE = 120,  /* of a key path in a message */
  SHOWN_BYTES = 60, /* of a value in a message */
  SHOWN_SIZE = SHOWN_BYTES + 8
};

enum lxg_node_kind lxg_node_kind(const struct lxg_node *node) {
  return node != NULL ? node->kind : LXG_NODE_SCALAR;
}

const char *lxg_node_key(const struct lxg_node *node) {
  return node != NULL ? node->key : NULL;
}

const char *lxg_node_text(const struct lxg_node *node) {
  return node != NULL ? node->text : NULL;
}

bool lxg_node_is_quoted(const struct lxg_node *node) {
  return node != NULL && node->quoted;
}

bool lxg_node_is_none(const struct lxg_node *node) {
  if (node == NULL) {
    return true;
  }
  return node->kind == LXG_NODE_SCALAR && !node->quoted &&
         (node->text[0] == '\0' || strcmp(node->text, "~") == 0 || strcmp(node->text, "null") == 0);
}

size_t lxg_node_count(const struct lxg_node *node) {
  return node != NULL ? node->count : 0;
}

unsigned lxg_node_line(const struct lxg_node *node) {
  return node != NULL ? node->line : 0;
}

unsigned lxg_node_column(const struct lxg_node *node) {
  return node != NULL ? node->column : 0;
}

const char *lxg_node_file(const struct lxg_node *node) {
  return node != NULL ? node->source : "";
}

static struct lxg_node *use(struct lxg_node *node) {
  if (node != NULL) {
    node->used = true;
  }
  return node;
}

struct lxg_node *lxg_node_first(struct lxg_node *parent) {
  return use(parent != NULL ? parent->first : NULL);
}

struct lxg_node *lxg_node_next(struct lxg_node *node) {
  return use(node != NULL ? node->next : NULL);
}

/* The next node in the order of the text within the tree under `top`; NULL at its end. `inside` allows children. */
static struct lxg_node *walk(struct lxg_node *node, const struct lxg_node *top, bool inside) {
  if (inside && node->first != NULL) {
    return node->first;
  }
  while (node != top && node->next == NULL) {
    node = node->parent;
  }
  return node == top ? NULL : node->next;
}

void lxg_node_use(struct lxg_node *node) {
  for (struct lxg_node *at = node; at != NULL; at = walk(at, node, true)) {
    at->used = true;
  }
}

/* Place of a node among its siblings. */
static size_t index_of(const struct lxg_node *node) {
  size_t index = 0;
  for (const struct lxg_node *at = node->parent->first; at != node; at = at->next) {
    index++;
  }
  return index;
}

void lxg_node_path(const struct lxg_node *node, char *text, size_t size) {
  const struct lxg_node *chain[LXG_DOCUMENT_DEPTH + 1];
  size_t count = 0;
  for (; node != NULL && node->parent != NULL && count < LXG_DOCUMENT_DEPTH + 1; node = node->parent) {
    chain[count++] = node;
  }
  if (count == 0) {
    snprintf(text, size, "the document");
    return;
  }
  size_t used = 0;
  if (size > 0) {
    text[0] = '\0';
  }
  while (count > 0 && used < size) {
    const struct lxg_node *const part = chain[--count];
    const int written = part->key != NULL
                            ? snprintf(text + used, size - used, "%s%s", used > 0 ? "." : "", part->key)
                            : snprintf(text + used, size - used, "[%zu]", index_of(part));
    used += (size_t)written;
  }
}

/* " = value" of a scalar, shortened at a character and without control characters. */
static void show_value(const struct lxg_node *node, char text[SHOWN_SIZE]) {
  text[0] = '\0';
  if (node->kind != LXG_NODE_SCALAR || node->text == NULL) {
    return;
  }
  size_t used = (size_t)snprintf(text, SHOWN_SIZE, " = ");
  const size_t size = strlen(node->text);
  size_t i = 0;
  while (i < size) {
    const size_t length = lxg_text_utf8(node->text + i, size - i);
    if (length == 0 || used + length > SHOWN_BYTES) {
      break;
    }
    memcpy(text + used, node->text + i, length);
    if ((unsigned char)text[used] < 0x20 || text[used] == 0x7F) {
      text[used] = ' ';
    }
    used += length;
    i += length;
  }
  snprintf(text + used, SHOWN_SIZE - used, "%s", i < size ? "..." : (size == 0 ? "\"\"" : ""));
}

/* The error at the node's key or at its value. */
static enum lxg_status error_at(const struct lxg_node *node, bool at_key, struct lxg_error *error,
                                const char *code, const char *text) {
  char path[PATH_SIZE];
  char value[SHOWN_SIZE] = "";
  lxg_node_path(node, path, sizeof path);
  if (!at_key) {
    show_value(node, value);
  }
  const uint32_t line = at_key && node->key_line > 0 ? node->key_line : node->line;
  const uint32_t column = at_key && node->key_line > 0 ? node->key_column : node->column;
  if (line > 0) {
    return lxg_error_set(error, LXG_INPUT, code, "%.100s:%u:%u: error: %s%s: %s", node->source,
                         (unsigned)line, (unsigned)column, path, value, text);
  }
  return lxg_error_set(error, LXG_INPUT, code, "%.100s: error: %s%s: %s", node->source, path, value, text);
}

enum lxg_status lxg_node_error(const struct lxg_node *node, struct lxg_error *error, const char *code,
                               const char *format, ...) {
  char text[LXG_ERROR_LINE_SIZE];
  va_list arguments;
  va_start(arguments, format);
  vsnprintf(text, sizeof text, format, arguments);
  va_end(arguments);
  if (node == NULL) {
    return lxg_error_set(error, LXG_INPUT, code, "%s", text);
  }
  return error_at(node, false, error, code, text);
}

struct lxg_node *lxg_document_child(const struct lxg_node *mapping, const char *key) {
  if (mapping == NULL || mapping->kind != LXG_NODE_MAPPING) {
    return NULL;
  }
  struct lxg_node *child = mapping->first;
  while (child != NULL && strcmp(child->key, key) != 0) {
    child = child->next;
  }
  return child;
}

struct lxg_node *lxg_node_find(struct lxg_node *mapping, const char *key) {
  return use(lxg_document_child(mapping, key));
}

enum lxg_status lxg_node_require(struct lxg_node *mapping, const char *key, struct lxg_node **child,
                                 struct lxg_error *error) {
  *child = lxg_node_find(mapping, key);
  if (*child != NULL) {
    return LXG_OK;
  }
  if (mapping == NULL) {
    return lxg_error_set(error, LXG_INPUT, "key-missing", "error: key %s is missing", key);
  }
  if (mapping->kind != LXG_NODE_MAPPING) {
    return lxg_node_as_mapping(mapping, error);
  }
  return lxg_node_error(mapping, error, "key-missing", "key %s is missing", key);
}

static bool is_known(const struct lxg_node *child, const char *const *known, size_t count) {
  for (size_t i = 0; i < count; i++) {
    if (strcmp(known[i], child->key) == 0) {
      return true;
    }
  }
  return false;
}

/* "did you mean X?" and the keys there are, as far as they fit. */
static void suggest(const struct lxg_node *child, const char *what, char *text, size_t size) {
  const struct lxg_node *const mapping = child->parent;
  const char *const nearest = lxg_text_nearest(child->key, mapping->known, mapping->known_count);
  size_t used = (size_t)snprintf(text, size, "%s", what);
  if (nearest != NULL && strcmp(nearest, child->key) != 0) {
    snprintf(text + used, size - used, "; did you mean %s?", nearest);
    return;
  }
  for (size_t i = 0; i < mapping->known_count && used < size; i++) {
    used += (size_t)snprintf(text + used, size - used, "%s%s", i == 0 ? "; known here: " : ", ",
                             mapping->known[i]);
  }
}

enum lxg_status lxg_node_check_keys(struct lxg_node *mapping, const char *const *known, size_t count,
                                    struct lxg_error *error) {
  if (mapping == NULL) {
    return LXG_OK;
  }
  const enum lxg_status status = lxg_node_as_mapping(mapping, error);
  if (status != LXG_OK) {
    return status;
  }
  mapping->known = known;
  mapping->known_count = count;
  for (const struct lxg_node *child = mapping->first; child != NULL; child = child->next) {
    if (!is_known(child, known, count)) {
      char text[160];
      suggest(child, "unknown key", text, sizeof text);
      return error_at(child, true, error, "key-unknown", text);
    }
  }
  return LXG_OK;
}

enum lxg_status lxg_document_check_unused(struct lxg_document *document, struct lxg_error *error) {
  struct lxg_node *const root = document->root;
  for (struct lxg_node *node = root; node != NULL; node = walk(node, root, true)) {
    if (!node->used) {
      char text[160];
      if (node->key != NULL) {
        suggest(node, "nothing in this case uses this key", text, sizeof text);
      } else {
        snprintf(text, sizeof text, "nothing in this case uses this value");
      }
      return error_at(node, true, error, "key-unused", text);
    }
  }
  return LXG_OK;
}
