/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table_header.c - names, units and types of the columns from a CSV line or an ECSV header.
 *
 * ECSV: Astropy Proposal for Enhancement 6, version 1.0; read leniently (0.9, no blank after #, ## comments), written
 * strictly (table_write.c). The header lines go to the YAML reader with "# " replaced by two blanks, so its positions
 * are those of the file.
 */
#include "table/table_internal.h"

#include "luxgale/memory.h"

#include <float.h>
#include <string.h>

static const struct lxg_table_type types[] = {
    {"float64", LXG_COLUMN_NUMBER, false, false, 0.0, 0.0},
    {"float32", LXG_COLUMN_NUMBER, false, false, 0.0, 0.0},
    {"float16", LXG_COLUMN_NUMBER, false, false, 0.0, 0.0},
    {"float128", LXG_COLUMN_NUMBER, false, false, 0.0, 0.0},
    {"int8", LXG_COLUMN_NUMBER, true, false, -128.0, 127.0},
    {"int16", LXG_COLUMN_NUMBER, true, false, -32768.0, 32767.0},
    {"int32", LXG_COLUMN_NUMBER, true, false, -2147483648.0, 2147483647.0},
    {"int64", LXG_COLUMN_NUMBER, true, false, -9223372036854775808.0, 9223372036854775807.0},
    {"uint8", LXG_COLUMN_NUMBER, true, false, 0.0, 255.0},
    {"uint16", LXG_COLUMN_NUMBER, true, false, 0.0, 65535.0},
    {"uint32", LXG_COLUMN_NUMBER, true, false, 0.0, 4294967295.0},
    {"uint64", LXG_COLUMN_NUMBER, true, false, 0.0, 18446744073709551615.0},
    {"bool", LXG_COLUMN_NUMBER, false, true, 0.0, 0.0},
    {"string", LXG_COLUMN_TEXT, false, false, 0.0, 0.0},
};

enum { TYPES = sizeof types / sizeof types[0] };

static bool listed(const char *name, const char *const *names, size_t count) {
  for (size_t i = 0; i < count; i++) {
    if (strcmp(names[i], name) == 0) {
      return true;
    }
  }
  return false;
}

/* Sets up field number `reader->fields`; its column exists in the table if it is kept. */
static enum lxg_status add_field(struct lxg_table_reader *reader, const char *name, size_t name_size,
                                 const char *unit, size_t unit_size, const char *description,
                                 const struct lxg_table_type *type, struct lxg_error *error) {
  const struct lxg_table_options *const options = reader->options;
  struct lxg_table *const table = reader->table;
  if (reader->fields >= LXG_TABLE_COLUMNS) {
    return lxg_table_fail(reader, 0, error, LXG_LIMIT, "table-limit", "more than %d columns",
                          LXG_TABLE_COLUMNS);
  }
  struct lxg_table_field *const grown = lxg_realloc(reader->field, reader->fields + 1, sizeof *grown);
  if (grown == NULL) {
    return lxg_table_memory(table, error);
  }
  reader->field = grown;
  struct lxg_table_field *const field = &grown[reader->fields++];
  *field = (struct lxg_table_field){.target = table->columns, .type = type, .decided = type != NULL};
  const enum lxg_status status = lxg_table_new_column(table, name, name_size, unit, unit_size, description,
                                                      type != NULL ? type->type : LXG_COLUMN_NUMBER, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_column *const column = &table->column[field->target];
  if (type == NULL && options != NULL && listed(column->name, options->texts, options->texts_count)) {
    lxg_free(column->number);
    column->number = NULL;
    column->type = LXG_COLUMN_TEXT;
    column->text = lxg_alloc(table->capacity, sizeof *column->text);
    field->decided = true;
    return column->text != NULL ? LXG_OK : lxg_table_memory(table, error);
  }
  return LXG_OK;
}

/* "name [unit]" or "name (unit)" taken apart; without brackets the unit is empty. */
static void take_unit(const struct lxg_table_cell *cell, size_t *name_size, const char **unit,
                      size_t *unit_size) {
  *name_size = cell->size;
  *unit = "";
  *unit_size = 0;
  const char close = cell->size > 0 ? cell->text[cell->size - 1] : '\0';
  if (close != ']' && close != ')') {
    return;
  }
  const char *const open = memchr(cell->text, close == ']' ? '[' : '(', cell->size);
  if (open == NULL || open == cell->text) {
    return;
  }
  *unit = open + 1;
  *unit_size = (size_t)(cell->text + cell->size - 1 - *unit);
  *name_size = (size_t)(open - cell->text);
  while (*name_size > 0 && (cell->text[*name_size - 1] == ' ' || cell->text[*name_size - 1] == '\t')) {
    --*name_size;
  }
}

static enum lxg_status csv_header(struct lxg_table_reader *reader, struct lxg_error *error) {
  enum lxg_status status = lxg_table_split(reader, LXG_TABLE_COLUMNS, error);
  for (size_t i = 0; i < reader->cells && status == LXG_OK; i++) {
    const struct lxg_table_cell *const cell = &reader->cell[i];
    double number = 0.0;
    if (cell->size == 0) {
      return lxg_table_fail(reader, cell->column, error, LXG_INPUT, "table-header",
                            "a column without a name");
    }
    if (!cell->quoted && lxg_text_parse_number(cell->text, cell->size, false, &number) == LXG_TEXT_NUMBER) {
      return lxg_table_fail(reader, cell->column, error, LXG_INPUT, "table-header",
                            "\"%.*s\": the first line must hold the names of the columns, not values",
                            (int)(cell->size < 40 ? cell->size : 40), cell->text);
    }
    for (size_t byte = 0; byte < cell->size;) {
      const size_t length = lxg_text_utf8(cell->text + byte, cell->size - byte);
      if (length == 0) {
        return lxg_table_fail(reader, cell->column, error, LXG_INPUT, "table-byte",
                              "a name that is not UTF-8");
      }
      byte += length;
    }
    size_t name_size = 0, unit_size = 0;
    const char *unit = "";
    take_unit(cell, &name_size, &unit, &unit_size);
    status = add_field(reader, cell->text, name_size, unit, unit_size, "", NULL, error);
  }
  return status;
}

/* Drops the columns that nobody wants; every field is then left with its place or SIZE_MAX. */
static void keep_wanted(struct lxg_table_reader *reader) {
  const struct lxg_table_options *const options = reader->options;
  struct lxg_table *const table = reader->table;
  if (options == NULL || options->keep == NULL) {
    return;
  }
  size_t kept = 0;
  for (size_t i = 0; i < reader->fields; i++) {
    struct lxg_column *const column = &table->column[i];
    if (listed(column->name, options->keep, options->keep_count)) {
      const struct lxg_column moved = *column;
      reader->field[i].target = kept;
      table->column[kept++] = moved;
      continue;
    }
    reader->field[i].target = SIZE_MAX;
    lxg_free(column->name);
    lxg_free(column->unit);
    lxg_free(column->description);
    lxg_free(column->number);
    lxg_free(column->text);
  }
  table->columns = kept;
}

static enum lxg_status check_names(const struct lxg_table_reader *reader, struct lxg_error *error) {
  const struct lxg_table *const table = reader->table;
  for (size_t i = 0; i < table->columns; i++) {
    for (size_t j = 0; j < i; j++) {
      if (strcmp(table->column[i].name, table->column[j].name) == 0) {
        return lxg_table_fail(reader, 0, error, LXG_INPUT, "table-header", "two columns are named %.60s",
                              table->column[i].name);
      }
    }
  }
  return LXG_OK;
}

/* The comment lines from the first record on, as YAML; stops before the line of names, which is then the record. */
static enum lxg_status collect_header(struct lxg_table_reader *reader, struct lxg_buffer *yaml, bool *got,
                                      struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  *got = true;
  while (status == LXG_OK && *got && reader->record.size > 0 && reader->record.data[0] == '#') {
    const char *const line = reader->record.data + 1;
    const char *const text = line[0] == ' ' ? line + 1 : line;
    if (reader->line > 1 && line[0] != '#' && strcmp(text, "---") != 0) {
      lxg_buffer_text(yaml, "  ");
      lxg_buffer_text(yaml, text);
    }
    lxg_buffer_byte(yaml, '\n');
    if (yaml->size > LXG_DOCUMENT_BYTES) {
      return lxg_table_fail(reader, 0, error, LXG_LIMIT, "table-limit", "a header of more than %d bytes",
                            LXG_DOCUMENT_BYTES);
    }
    status = lxg_table_record(reader, got, error);
  }
  return status == LXG_OK ? lxg_buffer_status(yaml, error) : status;
}

static enum lxg_status take_type(struct lxg_node *column, const struct lxg_table_type **type,
                                 struct lxg_error *error) {
  const char *names[TYPES];
  for (size_t i = 0; i < TYPES; i++) {
    names[i] = types[i].name;
  }
  struct lxg_node *node = NULL;
  size_t index = 0;
  enum lxg_status status = lxg_node_require(column, "datatype", &node, error);
  if (status == LXG_OK) {
    status = lxg_node_as_word(node, names, TYPES, &index, error);
  }
  struct lxg_node *const subtype = lxg_node_find(column, "subtype");
  if (status == LXG_OK && subtype != NULL) {
    status = lxg_node_error(subtype, error, "table-header", "columns of arrays or JSON are not read");
  }
  *type = &types[index];
  return status;
}

static enum lxg_status take_columns(struct lxg_table_reader *reader, struct lxg_node *root,
                                    struct lxg_error *error) {
  struct lxg_node *list = NULL;
  enum lxg_status status = lxg_node_require(root, "datatype", &list, error);
  if (status == LXG_OK) {
    status = lxg_node_as_sequence(list, error);
  }
  for (struct lxg_node *item = lxg_node_first(list); item != NULL && status == LXG_OK;
       item = lxg_node_next(item)) {
    const char *name = "", *unit = "", *description = "";
    const struct lxg_table_type *type = NULL;
    struct lxg_node *node = NULL;
    status = lxg_node_require(item, "name", &node, error);
    if (status == LXG_OK) {
      status = lxg_node_as_text(node, &name, error);
    }
    if (status == LXG_OK) {
      status = lxg_node_get_text(item, "unit", &unit, error);
    }
    if (status == LXG_OK) {
      status = lxg_node_get_text(item, "description", &description, error);
    }
    if (status == LXG_OK) {
      status = take_type(item, &type, error);
    }
    if (status == LXG_OK) {
      status = add_field(reader, name, strlen(name), unit, strlen(unit), description, type, error);
    }
  }
  return status;
}

static enum lxg_status take_delimiter(struct lxg_table_reader *reader, struct lxg_node *root,
                                      struct lxg_error *error) {
  const char *delimiter = " ";
  struct lxg_node *const node = lxg_node_find(root, "delimiter");
  const enum lxg_status status = node != NULL ? lxg_node_as_text(node, &delimiter, error) : LXG_OK;
  if (status == LXG_OK && strcmp(delimiter, ",") != 0 && strcmp(delimiter, " ") != 0) {
    return lxg_node_error(node, error, "table-header", "must be a comma or a blank");
  }
  reader->delimiter = delimiter[0];
  return status;
}

/* The line of names must repeat those of the header in text and order. */
static enum lxg_status compare_names(struct lxg_table_reader *reader, struct lxg_error *error) {
  enum lxg_status status = lxg_table_split(reader, reader->fields, error);
  if (status == LXG_OK && reader->cells != reader->fields) {
    status = lxg_table_fail(reader, 0, error, LXG_INPUT, "table-header",
                            "%zu names, but the header declares %zu columns", reader->cells, reader->fields);
  }
  for (size_t i = 0; i < reader->fields && status == LXG_OK; i++) {
    const struct lxg_table_cell *const cell = &reader->cell[i];
    const char *const name = reader->table->column[i].name;
    if (strlen(name) != cell->size || memcmp(name, cell->text, cell->size) != 0) {
      status = lxg_table_fail(reader, cell->column, error, LXG_INPUT, "table-header",
                              "\"%.*s\" stands where the header declares column %.60s",
                              (int)(cell->size < 40 ? cell->size : 40), cell->text, name);
    }
  }
  return status;
}

static enum lxg_status skip_to_content(struct lxg_table_reader *reader, bool *got, struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  while (status == LXG_OK && *got &&
         (reader->record.size == 0 || reader->record.data[0] == '#' ||
          strspn(reader->record.data, " \t") == reader->record.size)) {
    status = lxg_table_record(reader, got, error);
  }
  return status;
}

/* Versions 0.9 and 1.x are known; anything else may mean something else. */
static enum lxg_status check_version(const struct lxg_table_reader *reader, struct lxg_error *error) {
  const char *const at = strstr(reader->record.data, "%ECSV") + 5;
  const char *const version = at + strspn(at, " ");
  if (strncmp(version, "0.9", 3) != 0 && strncmp(version, "1.", 2) != 0) {
    return lxg_table_fail(reader, 1, error, LXG_INPUT, "table-header",
                          "ECSV version \"%.20s\": 0.9 and 1.x are read", version);
  }
  return LXG_OK;
}

static enum lxg_status ecsv_header(struct lxg_table_reader *reader, struct lxg_error *error) {
  struct lxg_buffer yaml = {0};
  struct lxg_table *const table = reader->table;
  bool got = true;
  enum lxg_status status = check_version(reader, error);
  if (status == LXG_OK) {
    status = collect_header(reader, &yaml, &got, error);
  }
  if (status == LXG_OK) {
    status =
        lxg_document_parse(yaml.data, yaml.size, reader->name, LXG_DOCUMENT_HEADER, &table->document, error);
  }
  lxg_buffer_free(&yaml);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_node *const root = lxg_document_root(table->document);
  table->meta = lxg_node_find(root, "meta");
  status = lxg_node_as_mapping(root, error);
  if (status == LXG_OK) {
    status = take_delimiter(reader, root, error);
  }
  if (status == LXG_OK) {
    status = take_columns(reader, root, error);
  }
  if (status == LXG_OK) {
    status = skip_to_content(reader, &got, error);
  }
  if (status == LXG_OK && (!got || reader->fields == 0)) {
    return lxg_table_fail(reader, 0, error, LXG_INPUT, "table-empty", "no line of column names");
  }
  return status == LXG_OK ? compare_names(reader, error) : status;
}

enum lxg_status lxg_table_header(struct lxg_table_reader *reader, struct lxg_error *error) {
  bool got = false;
  enum lxg_status status = lxg_table_record(reader, &got, error);
  if (status != LXG_OK) {
    return status;
  }
  const char *const first = got && reader->record.size > 0 ? reader->record.data : "";
  if (strncmp(first, "# %ECSV", 7) == 0 || strncmp(first, "#%ECSV", 6) == 0) {
    status = ecsv_header(reader, error);
  } else {
    status = skip_to_content(reader, &got, error);
    if (status == LXG_OK && !got) {
      return lxg_table_fail(reader, 0, error, LXG_INPUT, "table-empty", "no line of column names");
    }
    status = status == LXG_OK ? csv_header(reader, error) : status;
  }
  if (status == LXG_OK) {
    status = check_names(reader, error);
  }
  if (status == LXG_OK) {
    keep_wanted(reader);
  }
  return status;
}
