/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_internal.h - the tree behind document.h and the builder that both parsers feed.
 *
 * Nodes and texts live in blocks that belong to the document and are freed with it; nothing is freed one by one, so no
 * tree, however deep, needs recursion to be destroyed.
 */
#ifndef LUXGALE_DOCUMENT_INTERNAL_H
#define LUXGALE_DOCUMENT_INTERNAL_H

#include "luxgale/checksum.h"
#include "luxgale/document.h"

#include <stdint.h>

struct lxg_node {
  struct lxg_document *document;
  const char *source; /* file name or "--set" */
  struct lxg_node *parent, *first, *last, *next;
  char *key;                /* in the mapping above, else NULL */
  char *text;               /* of a scalar, else NULL */
  const char *const *known; /* keys declared by lxg_node_check_keys, else NULL */
  size_t known_count;
  size_t count;                  /* children */
  uint32_t line, column;         /* of the value, from 1; 0: none */
  uint32_t key_line, key_column; /* of the key, from 1; 0: none */
  enum lxg_node_kind kind;
  bool quoted; /* scalar in quotes */
  bool used;
};

struct lxg_document_block; /* see document.c */

struct lxg_document {
  struct lxg_node *root;
  char *name;
  char checksum[LXG_CHECKSUM_SIZE];
  enum lxg_status status; /* first failure of building */
  const char *failure;    /* its static text */
  struct lxg_document_block *block;
};

/* A place in a source. */
struct lxg_position {
  uint32_t line, column; /* from 1; 0: none */
};

/* What a parser is fed with and how strict it is. */
struct lxg_document_source {
  const char *name; /* for messages; lives as long as the document */
  const char *bytes;
  size_t size;
  size_t depth;     /* nesting above the value */
  bool placed;      /* positions mean something to the user */
  bool flow_only;   /* no block collections (--set) */
  bool ordered_tag; /* the tag !!omap is let through */
};

/* Collects parser events into a detached tree; all-zero but for document and source to begin with. */
struct lxg_document_builder {
  struct lxg_document *document;
  const struct lxg_document_source *source;
  struct lxg_node *root;   /* NULL until the first value */
  struct lxg_node *parent; /* open collection, NULL at the top */
  char *key;               /* read, waiting for its value */
  struct lxg_position key_position;
  size_t depth, nodes;
};

/* Zeroed memory that lives as long as the document, or NULL. */
void *lxg_document_take(struct lxg_document *document, size_t size);

/* A detached node, or NULL. */
struct lxg_node *lxg_document_node(struct lxg_document *document, enum lxg_node_kind kind,
                                   const char *source);

/* Terminated copy of bytes, or NULL. */
char *lxg_document_copy(struct lxg_document *document, const char *bytes, size_t size);

/* Appends a detached node. */
void lxg_document_attach(struct lxg_node *parent, struct lxg_node *child);

/* Child by key without marking it; NULL if none. */
struct lxg_node *lxg_document_child(const struct lxg_node *mapping, const char *key);

/* LXG_INPUT or another status with "FILE:LINE:COL: error: " in front. */
enum lxg_status lxg_document_fail(const struct lxg_document_source *source, struct lxg_position position,
                                  struct lxg_error *error, enum lxg_status status, const char *code,
                                  const char *format, ...) __attribute__((format(printf, 6, 7)));

/* Line and column of a byte. */
struct lxg_position lxg_document_position(const char *bytes, size_t offset);

/* Events; each checks the limits and the shape. */
enum lxg_status lxg_builder_open(struct lxg_document_builder *builder, enum lxg_node_kind kind,
                                 struct lxg_position position, struct lxg_error *error);
enum lxg_status lxg_builder_close(struct lxg_document_builder *builder, struct lxg_error *error);
enum lxg_status lxg_builder_key(struct lxg_document_builder *builder, const char *text, size_t size,
                                struct lxg_position position, struct lxg_error *error);
enum lxg_status lxg_builder_scalar(struct lxg_document_builder *builder, const char *text, size_t size,
                                   bool quoted, struct lxg_position position, struct lxg_error *error);

/* Parsers: a detached tree in `*root`. The bytes are valid UTF-8 without zero bytes. */
enum lxg_status lxg_document_from_yaml(struct lxg_document *document,
                                       const struct lxg_document_source *source, struct lxg_node **root,
                                       struct lxg_error *error);
enum lxg_status lxg_document_from_json(struct lxg_document *document,
                                       const struct lxg_document_source *source, struct lxg_node **root,
                                       struct lxg_error *error);

/* LXG_INPUT at the first byte that is zero or not UTF-8. */
enum lxg_status lxg_document_check_bytes(const struct lxg_document_source *source, struct lxg_error *error);

/* The form of a scalar that JSON and both YAML versions read alike as null, bool or number, in `text` or as a static word;
 * NULL if the scalar is text. */
const char *lxg_document_plain(const struct lxg_node *node, struct lxg_buffer *text);

#endif
