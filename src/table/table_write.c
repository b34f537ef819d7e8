/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table_write.c - a table as ECSV 1.0 (Astropy Proposal for Enhancement 6): ASCII header, comma-separated rows.
 */
#include "table/table_internal.h"

#include <math.h>
#include <string.h>

/* The header as a tree: delimiter, datatype, meta. */
static enum lxg_status build_header(const struct lxg_table *table, struct lxg_document *document,
                                    struct lxg_error *error) {
  struct lxg_node *const root = lxg_document_root(document);
  lxg_node_add_text(root, "delimiter", ",");
  struct lxg_node *const list = lxg_node_add_sequence(root, "datatype");
  for (size_t i = 0; i < table->columns; i++) {
    const struct lxg_column *const column = &table->column[i];
    const char *const known = lxg_units_table_spelling(column->unit);
    struct lxg_node *const item = lxg_node_add_mapping(list, NULL);
    lxg_node_add_text(item, "name", column->name);
    if (column->unit[0] != '\0') {
      lxg_node_add_text(item, "unit", known != NULL ? known : column->unit);
    }
    lxg_node_add_text(item, "datatype", column->type == LXG_COLUMN_NUMBER ? "float64" : "string");
    if (column->description[0] != '\0') {
      lxg_node_add_text(item, "description", column->description);
    }
  }
  if (table->meta != NULL && lxg_node_count(table->meta) > 0) {
    lxg_node_add_copy(root, "meta", table->meta);
  }
  return lxg_document_status(document, error);
}

/* YAML lines behind "# ". */
static void comment_lines(struct lxg_buffer *buffer, const struct lxg_buffer *yaml) {
  const char *const end = yaml->data + yaml->size;
  for (const char *at = yaml->data; at < end;) {
    const char *const stop = memchr(at, '\n', (size_t)(end - at));
    const size_t size = stop != NULL ? (size_t)(stop - at) : (size_t)(end - at);
    lxg_buffer_text(buffer, "# ");
    lxg_buffer_append(buffer, at, size);
    lxg_buffer_byte(buffer, '\n');
    at += size + 1;
  }
}

static enum lxg_status write_header(const struct lxg_table *table, struct lxg_buffer *buffer,
                                    struct lxg_error *error) {
  struct lxg_document *document = NULL;
  struct lxg_buffer yaml = {0};
  enum lxg_status status = LXG_OK;
  if (table->document != NULL) {
    status = lxg_document_status(table->document, error);
  }
  if (status == LXG_OK) {
    status = lxg_document_create(table->name, &document, error);
  }
  if (status == LXG_OK) {
    status = build_header(table, document, error);
  }
  if (status == LXG_OK) {
    status = lxg_document_write_yaml(lxg_document_root(document), true, &yaml, error);
  }
  if (status == LXG_OK) {
    lxg_buffer_text(buffer, "# %ECSV 1.0\n# ---\n");
    comment_lines(buffer, &yaml);
  }
  lxg_buffer_free(&yaml);
  lxg_document_destroy(document);
  return status;
}

/* A text field, quoted where a reader could take it for something else. */
static void write_text(struct lxg_buffer *buffer, const char *text) {
  const size_t size = strlen(text);
  const bool bare = size > 0 && strcspn(text, ",\"\r\n") == size && text[0] != '#' && text[0] != ' ' &&
                    text[0] != '\t' && text[size - 1] != ' ' && text[size - 1] != '\t';
  if (bare) {
    lxg_buffer_append(buffer, text, size);
    return;
  }
  lxg_buffer_byte(buffer, '"');
  for (size_t i = 0; i < size; i++) {
    lxg_buffer_text(buffer, text[i] == '"' ? "\"" : "");
    lxg_buffer_byte(buffer, text[i]);
  }
  lxg_buffer_byte(buffer, '"');
}

static void write_field(const struct lxg_table *table, const struct lxg_column *column, size_t row,
                        struct lxg_buffer *buffer) {
  if (lxg_table_is_missing(column, row)) {
    lxg_buffer_text(buffer, table->columns == 1 ? "\"\"" : ""); /* a blank line would be no row at all */
  } else if (column->type == LXG_COLUMN_NUMBER) {
    lxg_buffer_number(buffer, column->number[row]);
  } else {
    write_text(buffer, lxg_table_text(table, column, row));
  }
}

enum lxg_status lxg_table_write_ecsv(const struct lxg_table *table, struct lxg_buffer *buffer,
                                     struct lxg_error *error) {
  const enum lxg_status status = write_header(table, buffer, error);
  if (status != LXG_OK) {
    return status;
  }
  for (size_t i = 0; i < table->columns; i++) {
    lxg_buffer_text(buffer, i > 0 ? "," : "");
    write_text(buffer, table->column[i].name);
  }
  lxg_buffer_byte(buffer, '\n');
  for (size_t row = 0; row < table->rows; row++) {
    for (size_t i = 0; i < table->columns; i++) {
      lxg_buffer_text(buffer, i > 0 ? "," : "");
      write_field(table, &table->column[i], row, buffer);
    }
    lxg_buffer_byte(buffer, '\n');
  }
  return lxg_buffer_status(buffer, error);
}
