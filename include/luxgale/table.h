/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * table.h - columns of numbers and texts with units, read from CSV and ECSV and written as ECSV 1.0.
 *
 * CSV: comma-separated, a first line of names, each optionally followed by its unit as `name [unit]` or `name (unit)`;
 * lines that start with # are comments. ECSV (Astropy Proposal for Enhancement 6): a YAML header in comment lines
 * declares names, units and types; versions 0.9 and 1.x are read, comma or blank as delimiter. In both a field may be
 * double-quoted and an empty field is a missing value. Memory while reading is 8 bytes a number kept plus one line.
 *
 * Errors read `FILE:LINE:COL: error: ...` or `FILE:LINE: error: column NAME ...`; codes begin with "table-".
 */
#ifndef LUXGALE_TABLE_H
#define LUXGALE_TABLE_H

#include "luxgale/checksum.h"
#include "luxgale/document.h"
#include "luxgale/status.h"
#include "luxgale/text.h"
#include "luxgale/units.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

enum {
  LXG_TABLE_COLUMNS = 4096,       /* most columns of a file */
  LXG_TABLE_LINE_BYTES = 1 << 20, /* longest record */
  LXG_TABLE_ROWS = 50000000       /* most rows of a file */
};

enum lxg_column_type { LXG_COLUMN_NUMBER, LXG_COLUMN_TEXT };

struct lxg_column {
  char *name;
  char *unit;        /* as written in the file; "" if none */
  char *description; /* "" if none */
  enum lxg_column_type type;
  double *number;         /* [rows], in `unit`; NaN where missing; NULL in a text column */
  size_t *text;           /* [rows], place in the table's `texts`; NULL in a number column */
  unsigned char *missing; /* [rows], 1 where the field was empty; NULL if no value is missing */
  size_t bad_row;         /* first row of a CSV number column whose field is text; SIZE_MAX if none */
  char *bad_text;         /* that field */
};

struct lxg_table {
  char *name; /* file, for messages */
  size_t rows;
  size_t columns;
  size_t capacity; /* rows that memory is reserved for */
  struct lxg_column *column;
  uint32_t *line;                   /* [rows], line of the file; NULL in a table that was built */
  struct lxg_buffer texts;          /* all text fields, each terminated */
  struct lxg_document *document;    /* holds the ECSV header, or the meta of a built table; NULL if none */
  struct lxg_node *meta;            /* mapping under `meta`; NULL if none */
  char checksum[LXG_CHECKSUM_SIZE]; /* SHA-256 of the file; "" if built */
};

/* What to take from a file; all-zero takes every column and refuses nan and inf. A field that
 * is no number, or not finite, in a column of numbers is an error once lxg_table_cgs asks for that column. */
struct lxg_table_options {
  const char *const *keep; /* names of the columns to keep (absent ones are no error); NULL keeps all */
  size_t keep_count;
  const char *const *texts; /* columns of a CSV file that are text even if they look like numbers */
  size_t texts_count;
  bool allow_not_finite; /* nan and inf are values */
};

/* ---- reading ---- */

/* Reads a file; `-` is standard input; ECSV is recognised by its first line. `options` may be NULL. `*table` is NULL on
 * failure. LXG_INPUT (table-header, table-ragged, table-quote, table-byte, table-empty), LXG_LIMIT (table-limit), LXG_IO, LXG_MEMORY. */
enum lxg_status lxg_table_read(const char *path, const struct lxg_table_options *options,
                               struct lxg_table **table, struct lxg_error *error);

/* The same from memory. */
enum lxg_status lxg_table_parse(const char *bytes, size_t size, const char *name,
                                const struct lxg_table_options *options, struct lxg_table **table,
                                struct lxg_error *error);

/* NULL is allowed. */
void lxg_table_destroy(struct lxg_table *table);

/* ---- looking up ---- */

/* The column of that name, or NULL. */
const struct lxg_column *lxg_table_find(const struct lxg_table *table, const char *name);

/* The same, but LXG_INPUT "table-column" with the nearest name and those present. */
enum lxg_status lxg_table_require(const struct lxg_table *table, const char *name,
                                  const struct lxg_column **column, struct lxg_error *error);

/* A fresh array [rows] of the column in CGS, to be freed by lxg_free. The unit is the header's, else `default_unit`, else
 * the dimension's default. Missing values are NaN if `allow_missing`, else LXG_INPUT "table-missing". Other errors:
 * "table-column", "table-number" (a text where a number is due), "table-type" (a text column), those of lxg_units_factor. */
enum lxg_status lxg_table_cgs(const struct lxg_table *table, const char *name, enum lxg_dimension dimension,
                              const char *default_unit, const struct lxg_units_context *context,
                              bool allow_missing, double **values, struct lxg_error *error);

/* Text of one field of a text column; "" if missing. */
const char *lxg_table_text(const struct lxg_table *table, const struct lxg_column *column, size_t row);

/* True if the field was empty. */
bool lxg_table_is_missing(const struct lxg_column *column, size_t row);

/* Sets LXG_INPUT with "FILE:LINE: error: column NAME: " (row number in a built table) and the given text. */
enum lxg_status lxg_table_error(const struct lxg_table *table, const char *name, size_t row,
                                struct lxg_error *error, const char *code, const char *format, ...)
    __attribute__((format(printf, 6, 7)));

/* ---- building and writing ---- */

/* An empty table. */
enum lxg_status lxg_table_create(const char *name, struct lxg_table **table, struct lxg_error *error);

/* Adds a column whose rows are all missing; its place is the number of columns before. `unit` is any spelling of
 * units.h, written in the form ECSV readers know; "" for none. Names are [A-Za-z][A-Za-z0-9_]* and not a YAML word
 * (yes, no, null, ...); else LXG_BUG "table-name" or "table-unit". */
enum lxg_status lxg_table_add_column(struct lxg_table *table, const char *name, enum lxg_column_type type,
                                     const char *unit, const char *description, struct lxg_error *error);

/* Appends `count` rows of missing values. LXG_MEMORY, LXG_LIMIT. */
enum lxg_status lxg_table_add_rows(struct lxg_table *table, size_t count, struct lxg_error *error);

/* Sets one number (in the column's unit); a number that is not finite counts as missing. Out of range: LXG_BUG. */
enum lxg_status lxg_table_set_number(struct lxg_table *table, size_t column, size_t row, double value,
                                     struct lxg_error *error);

/* Sets one text (copied); NULL or "" is missing. */
enum lxg_status lxg_table_set_text(struct lxg_table *table, size_t column, size_t row, const char *text,
                                   struct lxg_error *error);

/* The mapping written under `meta`, made on first use; NULL if out of memory. */
struct lxg_node *lxg_table_meta(struct lxg_table *table);

/* Appends the table as ECSV 1.0. LXG_MEMORY, or the failure of the meta document. */
enum lxg_status lxg_table_write_ecsv(const struct lxg_table *table, struct lxg_buffer *buffer,
                                     struct lxg_error *error);

#endif
