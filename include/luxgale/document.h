/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document.h - one tree for everything structured: the case read from YAML or JSON, and the report written as either.
 *
 * A node is a scalar, a sequence or a mapping. A scalar keeps its source text, so no digit is lost; its type is what the
 * reader asks for, never what the file format guesses. Plain `true`, `false`, `null` and `~` and plain decimal numbers have
 * their usual meaning, quoted text is always text. Every node remembers file, line and column, and whether somebody used
 * it: a key that nobody asked for is an error, not a silent nothing.
 *
 * Reading refuses anchors, aliases, tags, merge keys, duplicate or non-text keys, second documents, bytes that are not
 * UTF-8, zero bytes, and anything beyond the limits below. Errors read `FILE:LINE:COL: error: key.path = value: ...`.
 *
 * Order of use: read -> override (--set) -> find / require / as_... in each module -> check_unused -> destroy.
 * Or, for output: create -> add_... -> status -> write_yaml / write_json -> destroy.
 */
#ifndef LUXGALE_DOCUMENT_H
#define LUXGALE_DOCUMENT_H

#include "luxgale/status.h"
#include "luxgale/text.h"
#include "luxgale/units.h"

#include <stdbool.h>
#include <stddef.h>

enum {
  LXG_DOCUMENT_BYTES = 4 << 20,         /* largest file */
  LXG_DOCUMENT_SCALAR_BYTES = 64 << 10, /* longest scalar or key */
  LXG_DOCUMENT_DEPTH = 64,              /* deepest nesting, also of a tree that is built */
  LXG_DOCUMENT_NODES = 100000           /* most nodes in a file: a bomb ends within milliseconds and 32 MiB */
};

enum lxg_document_format {
  LXG_DOCUMENT_AUTO, /* by suffix (.json, .yaml, .yml); else JSON if it opens with {" or [ or {}, else YAML */
  LXG_DOCUMENT_YAML,
  LXG_DOCUMENT_JSON,
  LXG_DOCUMENT_HEADER /* YAML inside the comment lines of a table: the tag !!omap is let through (as a sequence) */
};

enum lxg_node_kind { LXG_NODE_SCALAR, LXG_NODE_SEQUENCE, LXG_NODE_MAPPING };

struct lxg_document; /* opaque; owns all its nodes */
struct lxg_node;     /* opaque; lives as long as its document */

/* ---- reading ---------------------------------------------------------------------------------------------------- */

/* Reads a file; `-` is standard input. `*document` is NULL on failure. LXG_INPUT ("document-syntax", "key-duplicate",
 * "document-refused"), LXG_LIMIT ("document-limit"), LXG_IO, LXG_MEMORY. */
enum lxg_status lxg_document_read(const char *path, enum lxg_document_format format,
                                  struct lxg_document **document, struct lxg_error *error);

/* The same from memory; `name` stands for the file in messages and decides LXG_DOCUMENT_AUTO. */
enum lxg_status lxg_document_parse(const char *bytes, size_t size, const char *name,
                                   enum lxg_document_format format, struct lxg_document **document,
                                   struct lxg_error *error);

/* An empty mapping to build on; `name` is used in messages. */
enum lxg_status lxg_document_create(const char *name, struct lxg_document **document,
                                    struct lxg_error *error);

/* NULL is allowed. */
void lxg_document_destroy(struct lxg_document *document);

struct lxg_node *lxg_document_root(struct lxg_document *document);
const char *lxg_document_name(const struct lxg_document *document);

/* SHA-256 of the bytes read, 64 hexadecimal digits; "" for a document that was created. */
const char *lxg_document_checksum(const struct lxg_document *document);

/* Applies "path.to.key=value" (the command line's --set): value is a YAML scalar or flow collection, missing mappings
 * are made, a number in the path picks an existing sequence item. Errors have --set in place of the file. LXG_INPUT
 * ("override-syntax", "override-path" and those of reading). */
enum lxg_status lxg_document_override(struct lxg_document *document, const char *assignment,
                                      struct lxg_error *error);

/* LXG_INPUT "key-unused" at the first node that nobody used, with the nearest known key of its mapping. */
enum lxg_status lxg_document_check_unused(struct lxg_document *document, struct lxg_error *error);

/* ---- looking at nodes (a NULL node is an absent one: scalar kind, no children) ------------------------------------ */

enum lxg_node_kind lxg_node_kind(const struct lxg_node *node);
const char *lxg_node_key(const struct lxg_node *node); /* its key in the mapping above; NULL elsewhere */
const char *
lxg_node_text(const struct lxg_node *node);            /* source text of a scalar, unquoted; NULL elsewhere */
bool lxg_node_is_quoted(const struct lxg_node *node);  /* the scalar was quoted, so it is text */
bool lxg_node_is_none(const struct lxg_node *node);    /* absent, or a plain null, ~ or nothing */
size_t lxg_node_count(const struct lxg_node *node);    /* children */
unsigned lxg_node_line(const struct lxg_node *node);   /* from 1; 0 for --set and built nodes */
unsigned lxg_node_column(const struct lxg_node *node); /* from 1 */
const char *lxg_node_file(const struct lxg_node *node); /* file name, or "--set" */
struct lxg_node *
lxg_node_first(struct lxg_node *parent);               /* first child, NULL if none; marks the child used */
struct lxg_node *lxg_node_next(struct lxg_node *node); /* next sibling or NULL; marks it used */

/* Marks a node and everything below as used (for sections that are only echoed). */
void lxg_node_use(struct lxg_node *node);

/* "opacity.tables[2]" into `text` (always terminated); "the document" for the root. */
void lxg_node_path(const struct lxg_node *node, char *text, size_t size);

/* Sets LXG_INPUT with "FILE:LINE:COL: error: PATH = VALUE: " and the given text; returns LXG_INPUT. */
enum lxg_status lxg_node_error(const struct lxg_node *node, struct lxg_error *error, const char *code,
                               const char *format, ...) __attribute__((format(printf, 4, 5)));

/* ---- taking values ------------------------------------------------------------------------------------------------ */

/* Requires a mapping whose keys are all in `known`, which must stay valid as long as the document (a static table); it
 * is kept for the suggestions of lxg_document_check_unused. LXG_INPUT "key-unknown" with the nearest known key, or
 * "kind-mapping". A NULL mapping is fine (an absent section). */
enum lxg_status lxg_node_check_keys(struct lxg_node *mapping, const char *const *known, size_t count,
                                    struct lxg_error *error);

/* Child by key, marked used; NULL if absent (or if `mapping` is NULL or no mapping). */
struct lxg_node *lxg_node_find(struct lxg_node *mapping, const char *key);

/* The same, but LXG_INPUT "key-missing" if absent. */
enum lxg_status lxg_node_require(struct lxg_node *mapping, const char *key, struct lxg_node **child,
                                 struct lxg_error *error);

/* LXG_INPUT "kind-mapping" / "kind-sequence" unless the node is one. */
enum lxg_status lxg_node_as_mapping(struct lxg_node *node, struct lxg_error *error);
enum lxg_status lxg_node_as_sequence(struct lxg_node *node, struct lxg_error *error);

/* Typed values of a scalar; the node is marked used; the target is set only on LXG_OK. LXG_INPUT: "value-number" (plain
 * finite decimal), "value-integer", "value-bool" (plain true or false), "value-text" (not null), "value-word", and the
 * errors of lxg_units_parse_quantity. Text is borrowed from the document. A NULL node is "key-missing". */
enum lxg_status lxg_node_as_number(struct lxg_node *node, double *value, struct lxg_error *error);
enum lxg_status lxg_node_as_integer(struct lxg_node *node, long long *value, struct lxg_error *error);
enum lxg_status lxg_node_as_bool(struct lxg_node *node, bool *value, struct lxg_error *error);
enum lxg_status lxg_node_as_text(struct lxg_node *node, const char **value, struct lxg_error *error);

/* One of `count` words; `*index` is its place in the list, to be cast to the caller's enum. */
enum lxg_status lxg_node_as_word(struct lxg_node *node, const char *const *words, size_t count, size_t *index,
                                 struct lxg_error *error);

/* A quantity in CGS: a plain number in `default_unit` (NULL: the dimension's), or "VALUE UNIT", quoted or not. */
enum lxg_status lxg_node_as_quantity(struct lxg_node *node, enum lxg_dimension dimension,
                                     const char *default_unit, const struct lxg_units_context *context,
                                     double *cgs, struct lxg_error *error);

/* Optional children: absent or null leaves `*value` as the caller initialised it. */
enum lxg_status lxg_node_get_number(struct lxg_node *mapping, const char *key, double *value,
                                    struct lxg_error *error);
enum lxg_status lxg_node_get_integer(struct lxg_node *mapping, const char *key, long long *value,
                                     struct lxg_error *error);
enum lxg_status lxg_node_get_bool(struct lxg_node *mapping, const char *key, bool *value,
                                  struct lxg_error *error);
enum lxg_status lxg_node_get_text(struct lxg_node *mapping, const char *key, const char **value,
                                  struct lxg_error *error);
enum lxg_status lxg_node_get_word(struct lxg_node *mapping, const char *key, const char *const *words,
                                  size_t count, size_t *index, struct lxg_error *error);
enum lxg_status lxg_node_get_quantity(struct lxg_node *mapping, const char *key, enum lxg_dimension dimension,
                                      const char *default_unit, const struct lxg_units_context *context,
                                      double *cgs, struct lxg_error *error);

/* LXG_INPUT "value-range" unless minimum <= value <= maximum (all three in `unit`, "" for a pure number). A NULL node
 * passes: defaults are not checked. */
enum lxg_status lxg_node_check_range(const struct lxg_node *node, double value, double minimum,
                                     double maximum, const char *unit, struct lxg_error *error);

/* ---- building ------------------------------------------------------------------------------------------------------ */

/* Each adds a child at the end of `parent` and returns it: `key` names it in a mapping and is NULL in a sequence. A number
 * that is not finite becomes null, as does a NULL text; bytes of a text that are not UTF-8 become U+FFFD. A failure
 * (memory, key given twice, depth) is remembered in the document and returns NULL; adding to NULL does nothing, so a
 * builder checks lxg_document_status once at its end. Built nodes count as used. */
struct lxg_node *lxg_node_add_mapping(struct lxg_node *parent, const char *key);
struct lxg_node *lxg_node_add_sequence(struct lxg_node *parent, const char *key);
struct lxg_node *lxg_node_add_number(struct lxg_node *parent, const char *key, double value);
struct lxg_node *lxg_node_add_integer(struct lxg_node *parent, const char *key, long long value);
struct lxg_node *lxg_node_add_text(struct lxg_node *parent, const char *key, const char *text);
struct lxg_node *lxg_node_add_bool(struct lxg_node *parent, const char *key, bool value);
struct lxg_node *lxg_node_add_none(struct lxg_node *parent, const char *key);

/* Deep copy of a node of this or another document. */
struct lxg_node *lxg_node_add_copy(struct lxg_node *parent, const char *key, const struct lxg_node *node);

/* LXG_OK, or the first failure of building: LXG_MEMORY, LXG_LIMIT (depth) or LXG_BUG (a key twice or in the wrong place). */
enum lxg_status lxg_document_status(const struct lxg_document *document, struct lxg_error *error);

/* ---- writing ------------------------------------------------------------------------------------------------------- */

/* Appends the tree below `node` as YAML that readers of 1.1 and 1.2 take alike: every text double-quoted, floats as in
 * text.h, none as null. With `ascii` everything else is escaped. LXG_MEMORY. */
enum lxg_status lxg_document_write_yaml(const struct lxg_node *node, bool ascii, struct lxg_buffer *buffer,
                                        struct lxg_error *error);

/* Appends the tree as JSON (RFC 8259), indented by two blanks. LXG_MEMORY. */
enum lxg_status lxg_document_write_json(const struct lxg_node *node, struct lxg_buffer *buffer,
                                        struct lxg_error *error);

#endif
