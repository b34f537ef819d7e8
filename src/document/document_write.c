/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_write.c - a tree as YAML (libyaml's emitter) and as JSON (RFC 8259); see document.h.
 *
 * A scalar is written plain only if both YAML versions and JSON read it alike: null, true, false, an integer, or a float
 * with a dot and a signed exponent. Everything else is text in double quotes. Small collections of scalars stay on one
 * line. Recursion is bounded: no tree is deeper than LXG_DOCUMENT_DEPTH.
 */
#include "document/document_internal.h"

#include <string.h>
#include <strings.h>
#include <yaml.h>

enum { LINE_ITEMS = 8 }; /* most scalars of a collection written on one line */

/* -?(0|[1-9][0-9]*): an integer everywhere. */
static bool is_integer(const char *text) {
  const char *const digits = text + (text[0] == '-' ? 1 : 0);
  const size_t count = strspn(digits, "0123456789");
  return count > 0 && digits[count] == '\0' && (digits[0] != '0' || count == 1);
}

const char *lxg_document_plain(const struct lxg_node *node, struct lxg_buffer *text) {
  if (lxg_node_is_none(node)) {
    return "null";
  }
  if (node->quoted) {
    return NULL;
  }
  if (strcmp(node->text, "true") == 0 || strcmp(node->text, "false") == 0 || is_integer(node->text)) {
    return node->text;
  }
  double value = 0.0;
  if (lxg_text_parse_number(node->text, strlen(node->text), false, &value) != LXG_TEXT_NUMBER) {
    return NULL;
  }
  if (node->text[0] == '+' && is_integer(node->text + 1) && node->text[1] != '-') {
    return node->text + 1;
  }
  text->size = 0;
  lxg_buffer_number(text, value);
  return text->failed ? NULL : text->data;
}

static bool fits_a_line(const struct lxg_node *node) {
  if (node->count > LINE_ITEMS) {
    return false;
  }
  for (const struct lxg_node *child = node->first; child != NULL; child = child->next) {
    if (child->kind != LXG_NODE_SCALAR) {
      return false;
    }
  }
  return true;
}

/* ---- YAML ---- */

struct yaml_writer {
  yaml_emitter_t emitter;
  struct lxg_buffer *out;
  struct lxg_buffer number; /* scratch */
};

static int take_bytes(void *data, unsigned char *bytes, size_t size) {
  struct lxg_buffer *const out = data;
  lxg_buffer_append(out, bytes, size);
  return out->failed ? 0 : 1;
}

/* A key that no YAML reader takes for anything but text. */
static bool is_plain_key(const char *key) {
  static const char *const words[] = {"y",    "n",     "yes",  "no",  "on", "off",
                                      "true", "false", "null", "nan", "inf"};
  for (size_t i = 0; i < sizeof words / sizeof words[0]; i++) {
    if (strcasecmp(key, words[i]) == 0) {
      return false;
    }
  }
  const bool letter = (key[0] >= 'a' && key[0] <= 'z') || (key[0] >= 'A' && key[0] <= 'Z');
  return letter &&
         strspn(key, "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_") == strlen(key);
}

static bool emit_scalar(struct yaml_writer *writer, const char *text, bool plain) {
  yaml_event_t event;
  return yaml_scalar_event_initialize(&event, NULL, NULL, (const yaml_char_t *)text, (int)strlen(text), 1, 1,
                                      plain ? YAML_PLAIN_SCALAR_STYLE : YAML_DOUBLE_QUOTED_SCALAR_STYLE) !=
             0 &&
         yaml_emitter_emit(&writer->emitter, &event) != 0;
}

static bool emit_start(struct yaml_writer *writer, const struct lxg_node *node) {
  yaml_event_t event;
  const bool flow = fits_a_line(node) && (node->kind == LXG_NODE_SEQUENCE || node->count == 0 ||
                                          (node->parent != NULL && node->parent->kind == LXG_NODE_SEQUENCE));
  const int made =
      node->kind == LXG_NODE_MAPPING
          ? yaml_mapping_start_event_initialize(&event, NULL, NULL, 1,
                                                flow ? YAML_FLOW_MAPPING_STYLE : YAML_BLOCK_MAPPING_STYLE)
          : yaml_sequence_start_event_initialize(&event, NULL, NULL, 1,
                                                 flow ? YAML_FLOW_SEQUENCE_STYLE : YAML_BLOCK_SEQUENCE_STYLE);
  return made != 0 && yaml_emitter_emit(&writer->emitter, &event) != 0;
}

static bool emit_end(struct yaml_writer *writer, const struct lxg_node *node) {
  yaml_event_t event;
  const int made = node->kind == LXG_NODE_MAPPING ? yaml_mapping_end_event_initialize(&event)
                                                  : yaml_sequence_end_event_initialize(&event);
  return made != 0 && yaml_emitter_emit(&writer->emitter, &event) != 0;
}

static bool emit_node(struct yaml_writer *writer, const struct lxg_node *node) {
  if (node->kind == LXG_NODE_SCALAR) {
    const char *const plain = lxg_document_plain(node, &writer->number);
    return !writer->number.failed && emit_scalar(writer, plain != NULL ? plain : node->text, plain != NULL);
  }
  if (!emit_start(writer, node)) {
    return false;
  }
  for (const struct lxg_node *child = node->first; child != NULL; child = child->next) {
    if (child->key != NULL && !emit_scalar(writer, child->key, is_plain_key(child->key))) {
      return false;
    }
    if (!emit_node(writer, child)) {
      return false;
    }
  }
  return emit_end(writer, node);
}

static bool emit_document(struct yaml_writer *writer, const struct lxg_node *node) {
  yaml_event_t event;
  return yaml_stream_start_event_initialize(&event, YAML_UTF8_ENCODING) != 0 &&
         yaml_emitter_emit(&writer->emitter, &event) != 0 &&
         yaml_document_start_event_initialize(&event, NULL, NULL, NULL, 1) != 0 &&
         yaml_emitter_emit(&writer->emitter, &event) != 0 && emit_node(writer, node) &&
         yaml_document_end_event_initialize(&event, 1) != 0 &&
         yaml_emitter_emit(&writer->emitter, &event) != 0 && yaml_stream_end_event_initialize(&event) != 0 &&
         yaml_emitter_emit(&writer->emitter, &event) != 0;
}

enum lxg_status lxg_document_write_yaml(const struct lxg_node *node, bool ascii, struct lxg_buffer *buffer,
                                        struct lxg_error *error) {
  struct yaml_writer writer = {.out = buffer};
  bool written = yaml_emitter_initialize(&writer.emitter) != 0;
  if (written) {
    yaml_emitter_set_output(&writer.emitter, take_bytes, buffer);
    yaml_emitter_set_unicode(&writer.emitter, ascii ? 0 : 1);
    yaml_emitter_set_width(&writer.emitter, -1);
    written = emit_document(&writer, node);
    yaml_emitter_delete(&writer.emitter);
  }
  lxg_buffer_free(&writer.number);
  return written ? lxg_buffer_status(buffer, error)
                 : lxg_error_set(error, LXG_MEMORY, "memory", "out of memory while writing YAML");
}

/* ---- JSON ---- */

static void json_text(struct lxg_buffer *out, const char *text) {
  lxg_buffer_byte(out, '"');
  for (; *text != '\0'; text++) {
    const unsigned char byte = (unsigned char)*text;
    if (byte == '"' || byte == '\\') {
      lxg_buffer_byte(out, '\\');
      lxg_buffer_byte(out, *text);
    } else if (byte < 0x20 || byte == 0x7F) {
      lxg_buffer_format(out, "\\u%04x", (unsigned)byte);
    } else {
      lxg_buffer_byte(out, *text);
    }
  }
  lxg_buffer_byte(out, '"');
}

static void json_indent(struct lxg_buffer *out, bool line, size_t depth) {
  if (line) {
    return;
  }
  lxg_buffer_byte(out, '\n');
  for (size_t i = 0; i < depth; i++) {
    lxg_buffer_text(out, "  ");
  }
}

static void json_node(struct lxg_buffer *out, struct lxg_buffer *number, const struct lxg_node *node,
                      size_t depth) {
  if (node->kind == LXG_NODE_SCALAR) {
    const char *const plain = lxg_document_plain(node, number);
    if (plain != NULL) {
      lxg_buffer_text(out, plain);
    } else {
      json_text(out, node->text);
    }
    return;
  }
  const bool mapping = node->kind == LXG_NODE_MAPPING;
  const bool line = fits_a_line(node) && (!mapping || node->count == 0);
  lxg_buffer_byte(out, mapping ? '{' : '[');
  for (const struct lxg_node *child = node->first; child != NULL; child = child->next) {
    json_indent(out, line, depth + 1);
    if (mapping) {
      json_text(out, child->key);
      lxg_buffer_text(out, ": ");
    }
    json_node(out, number, child, depth + 1);
    lxg_buffer_text(out, child->next != NULL ? (line ? ", " : ",") : "");
  }
  json_indent(out, line, depth);
  lxg_buffer_byte(out, mapping ? '}' : ']');
}

enum lxg_status lxg_document_write_json(const struct lxg_node *node, struct lxg_buffer *buffer,
                                        struct lxg_error *error) {
  struct lxg_buffer number = {0};
  json_node(buffer, &number, node, 0);
  lxg_buffer_byte(buffer, '\n');
  buffer->failed = buffer->failed || number.failed;
  lxg_buffer_free(&number);
  return lxg_buffer_status(buffer, error);
}
