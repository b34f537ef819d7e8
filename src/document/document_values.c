/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_values.c - scalars taken as number, integer, bool, text, word or quantity (see document.h).
 */
#include "document/document_internal.h"

#include <stdio.h>
#include <string.h>

static enum lxg_status missing(struct lxg_error *error) {
  return lxg_error_set(error, LXG_INPUT, "key-missing", "error: a value is missing");
}

enum lxg_status lxg_node_as_mapping(struct lxg_node *node, struct lxg_error *error) {
  if (node == NULL) {
    return missing(error);
  }
  node->used = true;
  return node->kind == LXG_NODE_MAPPING
             ? LXG_OK
             : lxg_node_error(node, error, "kind-mapping", "must be a mapping {key: value, ...}");
}

enum lxg_status lxg_node_as_sequence(struct lxg_node *node, struct lxg_error *error) {
  if (node == NULL) {
    return missing(error);
  }
  node->used = true;
  return node->kind == LXG_NODE_SEQUENCE
             ? LXG_OK
             : lxg_node_error(node, error, "kind-sequence", "must be a list [value, ...]");
}

static enum lxg_status as_scalar(struct lxg_node *node, struct lxg_error *error) {
  if (node == NULL) {
    return missing(error);
  }
  node->used = true;
  return node->kind == LXG_NODE_SCALAR
             ? LXG_OK
             : lxg_node_error(node, error, "kind-scalar", "must be a single value, not a %s",
                              node->kind == LXG_NODE_MAPPING ? "mapping" : "list");
}

enum lxg_status lxg_node_as_number(struct lxg_node *node, double *value, struct lxg_error *error) {
  const enum lxg_status status = as_scalar(node, error);
  if (status != LXG_OK) {
    return status;
  }
  if (node->quoted) {
    return lxg_node_error(node, error, "value-number", "must be a number without quotes");
  }
  switch (lxg_text_parse_number(node->text, strlen(node->text), false, value)) {
  case LXG_TEXT_NUMBER:
    return LXG_OK;
  case LXG_TEXT_OVERFLOW:
    return lxg_node_error(node, error, "value-number", "is larger than any double");
  case LXG_TEXT_NOT_FINITE:
    return lxg_node_error(node, error, "value-number", "must be finite");
  default:
    return lxg_node_error(node, error, "value-number", "must be a decimal number such as 1.5 or 2e-3");
  }
}

enum lxg_status lxg_node_as_integer(struct lxg_node *node, long long *value, struct lxg_error *error) {
  const enum lxg_status status = as_scalar(node, error);
  if (status != LXG_OK) {
    return status;
  }
  if (node->quoted || !lxg_text_parse_integer(node->text, strlen(node->text), value)) {
    return lxg_node_error(node, error, "value-integer", "must be a whole number");
  }
  return LXG_OK;
}

enum lxg_status lxg_node_as_bool(struct lxg_node *node, bool *value, struct lxg_error *error) {
  const enum lxg_status status = as_scalar(node, error);
  if (status != LXG_OK) {
    return status;
  }
  const bool yes = strcmp(node->text, "true") == 0;
  if (node->quoted || (!yes && strcmp(node->text, "false") != 0)) {
    return lxg_node_error(node, error, "value-bool", "must be true or false");
  }
  *value = yes;
  return LXG_OK;
}

enum lxg_status lxg_node_as_text(struct lxg_node *node, const char **value, struct lxg_error *error) {
  const enum lxg_status status = as_scalar(node, error);
  if (status != LXG_OK) {
    return status;
  }
  if (lxg_node_is_none(node)) {
    return lxg_node_error(node, error, "value-text", "must be a text");
  }
  *value = node->text;
  return LXG_OK;
}

enum lxg_status lxg_node_as_word(struct lxg_node *node, const char *const *words, size_t count, size_t *index,
                                 struct lxg_error *error) {
  const enum lxg_status status = as_scalar(node, error);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t i = 0; i < count; i++) {
    if (strcmp(words[i], node->text) == 0) {
      *index = i;
      return LXG_OK;
    }
  }
  char list[160] = "";
  size_t used = 0;
  for (size_t i = 0; i < count && used < sizeof list; i++) {
    used += (size_t)snprintf(list + used, sizeof list - used, "%s%s", i > 0 ? ", " : "", words[i]);
  }
  const char *const nearest = lxg_text_nearest(node->text, words, count);
  return nearest != NULL
             ? lxg_node_error(node, error, "value-word", "did you mean %s? allowed: %s", nearest, list)
             : lxg_node_error(node, error, "value-word", "allowed: %s", list);
}

enum lxg_status lxg_node_as_quantity(struct lxg_node *node, enum lxg_dimension dimension,
                                     const char *default_unit, const struct lxg_units_context *context,
                                     double *cgs, struct lxg_error *error) {
  enum lxg_status status = as_scalar(node, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_error inner = {0};
  status = lxg_units_parse_quantity(node->text, dimension, default_unit, context, cgs, &inner);
  return status == LXG_OK ? LXG_OK : lxg_node_error(node, error, inner.code, "%s", inner.line[0]);
}

/* The optional child, NULL if absent or null. */
static struct lxg_node *optional(struct lxg_node *mapping, const char *key) {
  struct lxg_node *const child = lxg_node_find(mapping, key);
  return lxg_node_is_none(child) ? NULL : child;
}

enum lxg_status lxg_node_get_number(struct lxg_node *mapping, const char *key, double *value,
                                    struct lxg_error *error) {
  struct lxg_node *const child = optional(mapping, key);
  return child == NULL ? LXG_OK : lxg_node_as_number(child, value, error);
}

enum lxg_status lxg_node_get_integer(struct lxg_node *mapping, const char *key, long long *value,
                                     struct lxg_error *error) {
  struct lxg_node *const child = optional(mapping, key);
  return child == NULL ? LXG_OK : lxg_node_as_integer(child, value, error);
}

enum lxg_status lxg_node_get_bool(struct lxg_node *mapping, const char *key, bool *value,
                                  struct lxg_error *error) {
  struct lxg_node *const child = optional(mapping, key);
  return child == NULL ? LXG_OK : lxg_node_as_bool(child, value, error);
}

enum lxg_status lxg_node_get_text(struct lxg_node *mapping, const char *key, const char **value,
                                  struct lxg_error *error) {
  struct lxg_node *const child = optional(mapping, key);
  return child == NULL ? LXG_OK : lxg_node_as_text(child, value, error);
}

enum lxg_status lxg_node_get_word(struct lxg_node *mapping, const char *key, const char *const *words,
                                  size_t count, size_t *index, struct lxg_error *error) {
  struct lxg_node *const child = optional(mapping, key);
  return child == NULL ? LXG_OK : lxg_node_as_word(child, words, count, index, error);
}

enum lxg_status lxg_node_get_quantity(struct lxg_node *mapping, const char *key, enum lxg_dimension dimension,
                                      const char *default_unit, const struct lxg_units_context *context,
                                      double *cgs, struct lxg_error *error) {
  struct lxg_node *const child = optional(mapping, key);
  return child == NULL ? LXG_OK : lxg_node_as_quantity(child, dimension, default_unit, context, cgs, error);
}

enum lxg_status lxg_node_check_range(const struct lxg_node *node, double value, double minimum,
                                     double maximum, const char *unit, struct lxg_error *error) {
  if (node == NULL || (value >= minimum && value <= maximum)) {
    return LXG_OK;
  }
  char low[LXG_TEXT_NUMBER_SIZE], high[LXG_TEXT_NUMBER_SIZE];
  lxg_text_format_number(minimum, low);
  lxg_text_format_number(maximum, high);
  return lxg_node_error(node, error, "value-range", "must lie between %s and %s%s%s", low, high,
                        unit[0] != '\0' ? " " : "", unit);
}
