/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table_internal.h - what the files of the table module share.
 */
#ifndef LUXGALE_TABLE_INTERNAL_H
#define LUXGALE_TABLE_INTERNAL_H

#include "luxgale/input.h"
#include "luxgale/table.h"

/* One field of a record, without its quotes. */
struct lxg_table_cell {
  char *text;
  size_t size;
  uint32_t column; /* byte of the record where it begins, from 1 */
  bool quoted;
};

/* Type of an ECSV column as declared; the range is checked. */
struct lxg_table_type {
  const char *name;
  enum lxg_column_type type;
  bool whole, truth;       /* integer; True or False */
  double minimum, maximum; /* of integers */
};

/* A column of the file while it is read. */
struct lxg_table_field {
  size_t target;                     /* place in the table, SIZE_MAX if it is not kept */
  const struct lxg_table_type *type; /* NULL in a CSV file: the first value decides */
  bool decided;
};

/* The bytes of a file or of memory as records. */
struct lxg_table_reader {
  struct lxg_input *input; /* NULL when reading from memory */
  const char *name;
  char *block;       /* what `input` is read into */
  const char *bytes; /* block, or the memory itself */
  size_t at, have;
  bool ended;
  char delimiter; /* ',' or ' ' */
  uint32_t line;  /* first line of the record at hand, from 1 */
  uint32_t lines; /* lines read so far */
  struct lxg_buffer record;
  struct lxg_table_cell *cell;
  size_t cells, cell_capacity;
  struct lxg_table_field *field; /* [fields] */
  size_t fields;
  const struct lxg_table_options *options;
  struct lxg_table *table;
};

/* "FILE:LINE:COL: error: " and the text; column 0 is left out. */
enum lxg_status lxg_table_fail(const struct lxg_table_reader *reader, uint32_t column,
                               struct lxg_error *error, enum lxg_status status, const char *code,
                               const char *format, ...) __attribute__((format(printf, 6, 7)));

/* Reads the next line, or the next record when quotes span lines; `*got` is false at the end. */
enum lxg_status lxg_table_record(struct lxg_table_reader *reader, bool *got, struct lxg_error *error);

/* Splits the record into at most `most` cells; LXG_INPUT "table-ragged" beyond. */
enum lxg_status lxg_table_split(struct lxg_table_reader *reader, size_t most, struct lxg_error *error);

/* Reads the header and sets up fields and columns. */
enum lxg_status lxg_table_header(struct lxg_table_reader *reader, struct lxg_error *error);

/* Appends a column without checks; its strings are copied. */
enum lxg_status lxg_table_new_column(struct lxg_table *table, const char *name, size_t name_size,
                                     const char *unit, size_t unit_size, const char *description,
                                     enum lxg_column_type type, struct lxg_error *error);

/* Room for `rows` rows in every column. */
enum lxg_status lxg_table_reserve(struct lxg_table *table, size_t rows, struct lxg_error *error);

/* Marks a field of the table as missing or not; false if out of memory. */
bool lxg_table_mark(struct lxg_table *table, struct lxg_column *column, size_t row, bool missing);

/* Keeps a text and returns its place; SIZE_MAX if out of memory. */
size_t lxg_table_keep_text(struct lxg_table *table, const char *text, size_t size);

enum lxg_status lxg_table_memory(const struct lxg_table *table, struct lxg_error *error);

#endif
