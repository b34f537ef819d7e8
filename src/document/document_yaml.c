/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_yaml.c - YAML events of libyaml become tree nodes; what a case does not need is refused by name.
 *
 * The event interface is used because the document interface of libyaml resolves aliases into graphs with loops. libyaml
 * itself has no depth limit and slows down quadratically with depth; stopping at our own depth keeps that harmless.
 */
#include "document/document_internal.h"

#include <string.h>
#include <yaml.h>

static const char ordered_map[] = "tag:yaml.org,2002:omap";

static struct lxg_position position_of(yaml_mark_t mark) {
  const struct lxg_position position = {(uint32_t)mark.line + 1, (uint32_t)mark.column + 1};
  return position;
}

static enum lxg_status refuse(const struct lxg_document_builder *builder, const yaml_event_t *event,
                              struct lxg_error *error, const char *what) {
  return lxg_document_fail(builder->source, position_of(event->start_mark), error, LXG_INPUT,
                           "document-refused", "%s", what);
}

static enum lxg_status check_decoration(const struct lxg_document_builder *builder, const yaml_event_t *event,
                                        const yaml_char_t *anchor, const yaml_char_t *tag,
                                        struct lxg_error *error) {
  if (anchor != NULL) {
    return refuse(builder, event, error, "anchors (&name) are not read: write the value out");
  }
  if (tag != NULL && !(builder->source->ordered_tag && strcmp((const char *)tag, ordered_map) == 0)) {
    return refuse(builder, event, error, "tags (!name) are not read");
  }
  return LXG_OK;
}

static bool key_is_due(const struct lxg_document_builder *builder) {
  return builder->parent != NULL && builder->parent->kind == LXG_NODE_MAPPING && builder->key == NULL;
}

static enum lxg_status take_scalar(struct lxg_document_builder *builder, const yaml_event_t *event,
                                   struct lxg_error *error) {
  const char *const text = (const char *)event->data.scalar.value;
  const size_t size = event->data.scalar.length;
  const bool plain = event->data.scalar.style == YAML_PLAIN_SCALAR_STYLE;
  const struct lxg_position position = position_of(event->start_mark);
  const enum lxg_status status =
      check_decoration(builder, event, event->data.scalar.anchor, event->data.scalar.tag, error);
  if (status != LXG_OK) {
    return status;
  }
  if (key_is_due(builder)) {
    if (plain && strcmp(text, "<<") == 0) {
      return refuse(builder, event, error, "merge keys (<<) are not read");
    }
    return lxg_builder_key(builder, text, size, position, error);
  }
  return lxg_builder_scalar(builder, text, size, !plain, position, error);
}

static enum lxg_status take_start(struct lxg_document_builder *builder, const yaml_event_t *event,
                                  struct lxg_error *error) {
  const bool mapping = event->type == YAML_MAPPING_START_EVENT;
  const yaml_char_t *const anchor =
      mapping ? event->data.mapping_start.anchor : event->data.sequence_start.anchor;
  const yaml_char_t *const tag = mapping ? event->data.mapping_start.tag : event->data.sequence_start.tag;
  const bool flow = mapping ? event->data.mapping_start.style == YAML_FLOW_MAPPING_STYLE
                            : event->data.sequence_start.style == YAML_FLOW_SEQUENCE_STYLE;
  const enum lxg_status status = check_decoration(builder, event, anchor, tag, error);
  if (status != LXG_OK) {
    return status;
  }
  if (key_is_due(builder)) {
    return refuse(builder, event, error, "a key must be a text, not a collection");
  }
  if (builder->source->flow_only && !flow) {
    return refuse(builder, event, error,
                  "the value must be a scalar, [..] or {..}; put quotes around a text with ': ' or '- '");
  }
  return lxg_builder_open(builder, mapping ? LXG_NODE_MAPPING : LXG_NODE_SEQUENCE,
                          position_of(event->start_mark), error);
}

static enum lxg_status take_event(struct lxg_document_builder *builder, const yaml_event_t *event,
                                  struct lxg_error *error) {
  switch (event->type) {
  case YAML_DOCUMENT_START_EVENT:
    if (builder->root != NULL) {
      return refuse(builder, event, error, "a second document: one file holds one document");
    }
    if (event->data.document_start.tag_directives.start != event->data.document_start.tag_directives.end) {
      return refuse(builder, event, error, "tag directives are not read");
    }
    return LXG_OK;
  case YAML_ALIAS_EVENT:
    return refuse(builder, event, error, "aliases (*name) are not read: write the value out");
  case YAML_SCALAR_EVENT:
    return take_scalar(builder, event, error);
  case YAML_SEQUENCE_START_EVENT:
  case YAML_MAPPING_START_EVENT:
    return take_start(builder, event, error);
  case YAML_SEQUENCE_END_EVENT:
  case YAML_MAPPING_END_EVENT:
    return lxg_builder_close(builder, error);
  default:
    return LXG_OK;
  }
}

static enum lxg_status syntax_error(const struct lxg_document_builder *builder, const yaml_parser_t *parser,
                                    struct lxg_error *error) {
  if (parser->error == YAML_MEMORY_ERROR) {
    return lxg_document_fail(builder->source, (struct lxg_position){0}, error, LXG_MEMORY, "memory",
                             "out of memory");
  }
  const size_t offset =
      parser->problem_offset < builder->source->size ? parser->problem_offset : builder->source->size;
  const struct lxg_position position = parser->error == YAML_READER_ERROR
                                           ? lxg_document_position(builder->source->bytes, offset)
                                           : position_of(parser->problem_mark);
  return lxg_document_fail(builder->source, position, error, LXG_INPUT, "document-syntax",
                           "not readable as YAML: %s%s%s", parser->problem != NULL ? parser->problem : "?",
                           parser->context != NULL ? " " : "",
                           parser->context != NULL ? parser->context : "");
}

enum lxg_status lxg_document_from_yaml(struct lxg_document *document,
                                       const struct lxg_document_source *source, struct lxg_node **root,
                                       struct lxg_error *error) {
  struct lxg_document_builder builder = {.document = document, .source = source};
  yaml_parser_t parser;
  if (yaml_parser_initialize(&parser) == 0) {
    return lxg_document_fail(source, (struct lxg_position){0}, error, LXG_MEMORY, "memory", "out of memory");
  }
  yaml_parser_set_encoding(&parser, YAML_UTF8_ENCODING);
  yaml_parser_set_input_string(&parser, (const unsigned char *)source->bytes, source->size);
  enum lxg_status status = LXG_OK;
  bool more = true;
  while (more && status == LXG_OK) {
    yaml_event_t event;
    if (yaml_parser_parse(&parser, &event) == 0) {
      status = syntax_error(&builder, &parser, error);
      break;
    }
    more = event.type != YAML_STREAM_END_EVENT;
    status = take_event(&builder, &event, error);
    yaml_event_delete(&event);
  }
  yaml_parser_delete(&parser);
  *root = status == LXG_OK ? builder.root : NULL;
  return status;
}
