/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_builder.c - parser events become a tree; limits and duplicate keys are watched here, once for both formats.
 */
#include "document/document_internal.h"

#include "luxgale/memory.h"

#include <stdlib.h>
#include <string.h>

static enum lxg_status out_of_memory(const struct lxg_document_builder *builder, struct lxg_error *error) {
  return lxg_document_fail(builder->source, (struct lxg_position){0}, error, LXG_MEMORY, "memory",
                           "out of memory");
}

/* A node for the next value, hung into the open collection. */
static enum lxg_status place(struct lxg_document_builder *builder, enum lxg_node_kind kind,
                             struct lxg_position position, struct lxg_node **node, struct lxg_error *error) {
  if (++builder->nodes > LXG_DOCUMENT_NODES) {
    return lxg_document_fail(builder->source, position, error, LXG_LIMIT, "document-limit",
                             "more than %d values", LXG_DOCUMENT_NODES);
  }
  *node = lxg_document_node(builder->document, kind, builder->source->name);
  if (*node == NULL) {
    return out_of_memory(builder, error);
  }
  if (builder->source->placed) {
    (*node)->line = position.line;
    (*node)->column = position.column;
  }
  (*node)->key = builder->key;
  if (builder->key != NULL && builder->source->placed) {
    (*node)->key_line = builder->key_position.line;
    (*node)->key_column = builder->key_position.column;
  }
  builder->key = NULL;
  if (builder->parent != NULL) {
    lxg_document_attach(builder->parent, *node);
  } else {
    builder->root = *node;
  }
  return LXG_OK;
}

enum lxg_status lxg_builder_open(struct lxg_document_builder *builder, enum lxg_node_kind kind,
                                 struct lxg_position position, struct lxg_error *error) {
  if (builder->source->depth + builder->depth >= LXG_DOCUMENT_DEPTH) {
    return lxg_document_fail(builder->source, position, error, LXG_LIMIT, "document-limit",
                             "nested deeper than %d levels", LXG_DOCUMENT_DEPTH);
  }
  struct lxg_node *node = NULL;
  const enum lxg_status status = place(builder, kind, position, &node, error);
  if (status == LXG_OK) {
    builder->parent = node;
    builder->depth++;
  }
  return status;
}

/* By key, and the earlier one first where keys are equal. */
static int compare_keys(const void *a, const void *b) {
  const struct lxg_node *const left = *(struct lxg_node *const *)a;
  const struct lxg_node *const right = *(struct lxg_node *const *)b;
  const int order = strcmp(left->key, right->key);
  if (order != 0) {
    return order;
  }
  if (left->key_line != right->key_line) {
    return left->key_line < right->key_line ? -1 : 1;
  }
  return left->key_column < right->key_column ? -1 : left->key_column > right->key_column;
}

static enum lxg_status check_duplicates(const struct lxg_document_builder *builder,
                                        const struct lxg_node *mapping, struct lxg_error *error) {
  if (mapping->count < 2) {
    return LXG_OK;
  }
  const struct lxg_node **const sorted = lxg_alloc(mapping->count, sizeof *sorted);
  if (sorted == NULL) {
    return out_of_memory(builder, error);
  }
  size_t count = 0;
  for (const struct lxg_node *child = mapping->first; child != NULL; child = child->next) {
    sorted[count++] = child;
  }
  qsort(sorted, count, sizeof *sorted, compare_keys);
  enum lxg_status status = LXG_OK;
  for (size_t i = 1; i < count && status == LXG_OK; i++) {
    if (strcmp(sorted[i - 1]->key, sorted[i]->key) == 0) {
      const struct lxg_position position = {sorted[i]->key_line, sorted[i]->key_column};
      status = lxg_document_fail(builder->source, position, error, LXG_INPUT, "key-duplicate",
                                 "key %.80s stands here for the second time, first on line %u",
                                 sorted[i]->key, (unsigned)sorted[i - 1]->key_line);
    }
  }
  lxg_free(sorted);
  return status;
}

enum lxg_status lxg_builder_close(struct lxg_document_builder *builder, struct lxg_error *error) {
  const struct lxg_node *const closed = builder->parent;
  builder->parent = closed->parent;
  builder->depth--;
  return closed->kind == LXG_NODE_MAPPING ? check_duplicates(builder, closed, error) : LXG_OK;
}

static enum lxg_status check_text(const struct lxg_document_builder *builder, const char *text, size_t size,
                                  struct lxg_position position, struct lxg_error *error) {
  if (size > LXG_DOCUMENT_SCALAR_BYTES) {
    return lxg_document_fail(builder->source, position, error, LXG_LIMIT, "document-limit",
                             "a text of %zu bytes, at most %d are read", size, LXG_DOCUMENT_SCALAR_BYTES);
  }
  if (size > 0 && memchr(text, '\0', size) != NULL) {
    return lxg_document_fail(builder->source, position, error, LXG_INPUT, "document-refused",
                             "a text that holds the character zero");
  }
  return LXG_OK;
}

enum lxg_status lxg_builder_key(struct lxg_document_builder *builder, const char *text, size_t size,
                                struct lxg_position position, struct lxg_error *error) {
  const enum lxg_status status = check_text(builder, text, size, position, error);
  if (status != LXG_OK) {
    return status;
  }
  if (size == 0) {
    return lxg_document_fail(builder->source, position, error, LXG_INPUT, "document-refused", "an empty key");
  }
  builder->key = lxg_document_copy(builder->document, text, size);
  builder->key_position = position;
  return builder->key != NULL ? LXG_OK : out_of_memory(builder, error);
}

enum lxg_status lxg_builder_scalar(struct lxg_document_builder *builder, const char *text, size_t size,
                                   bool quoted, struct lxg_position position, struct lxg_error *error) {
  enum lxg_status status = check_text(builder, text, size, position, error);
  struct lxg_node *node = NULL;
  if (status == LXG_OK) {
    status = place(builder, LXG_NODE_SCALAR, position, &node, error);
  }
  if (status == LXG_OK) {
    node->quoted = quoted;
    node->text = lxg_document_copy(builder->document, text, size);
    status = node->text != NULL ? LXG_OK : out_of_memory(builder, error);
  }
  return status;
}
