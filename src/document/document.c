/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document.c - life of a document: memory blocks, reading by format, checksum (see document.h).
 */
#include "luxgale/input.h"
#include "luxgale/memory.h"

#include "document/document_internal.h"

#include <stdarg.h>
#include <stddef.h>
#include <stdio.h>
#include <string.h>

enum { BLOCK_BYTES = 16384, ALIGNMENT = 16 };

struct lxg_document_block {
  struct lxg_document_block *next;
  size_t used, size;
  max_align_t bytes[];
};

void *lxg_document_take(struct lxg_document *document, size_t size) {
  if (size > SIZE_MAX / 4) {
    return NULL;
  }
  const size_t rounded = (size + ALIGNMENT - 1) / ALIGNMENT * ALIGNMENT;
  struct lxg_document_block *block = document->block;
  if (block == NULL || block->size - block->used < rounded) {
    const size_t bytes = rounded > BLOCK_BYTES ? rounded : BLOCK_BYTES;
    block = lxg_alloc(sizeof *block + bytes, 1);
    if (block == NULL) {
      return NULL;
    }
    block->size = bytes;
    block->next = document->block;
    document->block = block;
  }
  void *const memory = (char *)block->bytes + block->used;
  block->used += rounded;
  return memory;
}

char *lxg_document_copy(struct lxg_document *document, const char *bytes, size_t size) {
  char *const copy = lxg_document_take(document, size + 1);
  if (copy != NULL && size > 0) {
    memcpy(copy, bytes, size);
  }
  return copy;
}

struct lxg_node *lxg_document_node(struct lxg_document *document, enum lxg_node_kind kind,
                                   const char *source) {
  struct lxg_node *const node = lxg_document_take(document, sizeof *node);
  if (node != NULL) {
    node->document = document;
    node->kind = kind;
    node->source = source;
  }
  return node;
}

void lxg_document_attach(struct lxg_node *parent, struct lxg_node *child) {
  child->parent = parent;
  if (parent->last != NULL) {
    parent->last->next = child;
  } else {
    parent->first = child;
  }
  parent->last = child;
  parent->count++;
}

enum lxg_status lxg_document_fail(const struct lxg_document_source *source, struct lxg_position position,
                                  struct lxg_error *error, enum lxg_status status, const char *code,
                                  const char *format, ...) {
  char text[LXG_ERROR_LINE_SIZE];
  va_list arguments;
  va_start(arguments, format);
  vsnprintf(text, sizeof text, format, arguments);
  va_end(arguments);
  if (source->placed && position.line > 0) {
    return lxg_error_set(error, status, code, "%.120s:%u:%u: error: %s", source->name,
                         (unsigned)position.line, (unsigned)position.column, text);
  }
  return lxg_error_set(error, status, code, "%.120s: error: %s", source->name, text);
}

struct lxg_position lxg_document_position(const char *bytes, size_t offset) {
  struct lxg_position position = {1, 1};
  for (size_t i = 0; i < offset; i++) {
    if (bytes[i] == '\n') {
      position = (struct lxg_position){position.line + 1, 1};
    } else if (((unsigned char)bytes[i] & 0xC0) != 0x80) {
      position.column++;
    }
  }
  return position;
}

enum lxg_status lxg_document_check_bytes(const struct lxg_document_source *source, struct lxg_error *error) {
  for (size_t i = 0; i < source->size;) {
    const size_t length = lxg_text_utf8(source->bytes + i, source->size - i);
    if (length == 0 || source->bytes[i] == '\0') {
      return lxg_document_fail(source, lxg_document_position(source->bytes, i), error, LXG_INPUT,
                               "document-syntax", "byte 0x%02x: the text must be UTF-8 without zero bytes",
                               (unsigned)(unsigned char)source->bytes[i]);
    }
    i += length;
  }
  return LXG_OK;
}

static bool ends_with(const char *name, const char *suffix) {
  const size_t size = strlen(name), length = strlen(suffix);
  return size >= length && strcmp(name + size - length, suffix) == 0;
}

/* JSON by suffix, or by an opening that YAML cases do not have. */
static bool is_json(const struct lxg_document_source *source, enum lxg_document_format format) {
  if (format != LXG_DOCUMENT_AUTO) {
    return format == LXG_DOCUMENT_JSON;
  }
  if (ends_with(source->name, ".json")) {
    return true;
  }
  if (ends_with(source->name, ".yaml") || ends_with(source->name, ".yml")) {
    return false;
  }
  size_t i = 0;
  while (i < source->size && strchr(" \t\r\n", source->bytes[i]) != NULL) {
    i++;
  }
  if (i < source->size && source->bytes[i] == '{') {
    for (i++; i < source->size && strchr(" \t\r\n", source->bytes[i]) != NULL;) {
      i++;
    }
    return i < source->size && (source->bytes[i] == '"' || source->bytes[i] == '}');
  }
  return i < source->size && source->bytes[i] == '[';
}

static enum lxg_status parse_into(struct lxg_document *document, const char *bytes, size_t size,
                                  enum lxg_document_format format, struct lxg_error *error) {
  const bool marked = size >= 3 && memcmp(bytes, "\xEF\xBB\xBF", 3) == 0; /* byte order mark */
  const struct lxg_document_source source = {.name = document->name,
                                             .bytes = marked ? bytes + 3 : bytes,
                                             .size = marked ? size - 3 : size,
                                             .placed = true,
                                             .ordered_tag = format == LXG_DOCUMENT_HEADER};
  if (size > LXG_DOCUMENT_BYTES) {
    return lxg_document_fail(&source, (struct lxg_position){0}, error, LXG_LIMIT, "document-limit",
                             "longer than %d bytes", LXG_DOCUMENT_BYTES);
  }
  enum lxg_status status = lxg_document_check_bytes(&source, error);
  if (status == LXG_OK) {
    status = is_json(&source, format) ? lxg_document_from_json(document, &source, &document->root, error)
                                      : lxg_document_from_yaml(document, &source, &document->root, error);
  }
  if (status == LXG_OK && document->root == NULL) {
    status = lxg_document_fail(&source, (struct lxg_position){0}, error, LXG_INPUT, "document-syntax",
                               "the document is empty");
  }
  if (status == LXG_OK) {
    document->root->used = true;
  }
  return status;
}

/* A document without root. */
static struct lxg_document *allocate(const char *name) {
  struct lxg_document *document = lxg_alloc(1, sizeof *document);
  if (document != NULL) {
    document->name = lxg_strdup(name);
    if (document->name == NULL) {
      lxg_free(document);
      document = NULL;
    }
  }
  return document;
}

static enum lxg_status out_of_memory(const char *name, struct lxg_error *error) {
  return lxg_error_set(error, LXG_MEMORY, "memory", "%.120s: error: out of memory", name);
}

enum lxg_status lxg_document_parse(const char *bytes, size_t size, const char *name,
                                   enum lxg_document_format format, struct lxg_document **document,
                                   struct lxg_error *error) {
  *document = NULL;
  struct lxg_document *const fresh = allocate(name);
  if (fresh == NULL) {
    return out_of_memory(name, error);
  }
  struct lxg_checksum checksum;
  lxg_checksum_init(&checksum);
  lxg_checksum_update(&checksum, bytes, size);
  lxg_checksum_finish(&checksum, fresh->checksum);
  const enum lxg_status status = parse_into(fresh, bytes, size, format, error);
  if (status != LXG_OK) {
    lxg_document_destroy(fresh);
    return status;
  }
  *document = fresh;
  return LXG_OK;
}

enum lxg_status lxg_document_read(const char *path, enum lxg_document_format format,
                                  struct lxg_document **document, struct lxg_error *error) {
  struct lxg_buffer bytes = {0};
  *document = NULL;
  enum lxg_status status = lxg_input_read(path, LXG_DOCUMENT_BYTES, &bytes, NULL, error);
  if (status == LXG_OK) {
    const char *const name = strcmp(path, "-") == 0 ? "<stdin>" : path;
    status = lxg_document_parse(bytes.size > 0 ? bytes.data : "", bytes.size, name, format, document, error);
  }
  lxg_buffer_free(&bytes);
  return status;
}

enum lxg_status lxg_document_create(const char *name, struct lxg_document **document,
                                    struct lxg_error *error) {
  struct lxg_document *const fresh = allocate(name);
  *document = NULL;
  if (fresh != NULL) {
    fresh->root = lxg_document_node(fresh, LXG_NODE_MAPPING, fresh->name);
  }
  if (fresh == NULL || fresh->root == NULL) {
    lxg_document_destroy(fresh);
    return out_of_memory(name, error);
  }
  fresh->root->used = true;
  *document = fresh;
  return LXG_OK;
}

void lxg_document_destroy(struct lxg_document *document) {
  if (document == NULL) {
    return;
  }
  for (struct lxg_document_block *block = document->block; block != NULL;) {
    struct lxg_document_block *const next = block->next;
    lxg_free(block);
    block = next;
  }
  lxg_free(document->name);
  lxg_free(document);
}

struct lxg_node *lxg_document_root(struct lxg_document *document) {
  return document != NULL ? document->root : NULL;
}

const char *lxg_document_name(const struct lxg_document *document) {
  return document->name;
}

const char *lxg_document_checksum(const struct lxg_document *document) {
  return document->checksum;
}
