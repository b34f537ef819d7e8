/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_table.c - CSV and ECSV in, ECSV out. What we write is read by astropy, PyYAML and Python's json in
 * tests/python/check_formats.py, and what astropy writes is read here; if Python or astropy is absent the test fails.
 */
#include "helpers.h"
#include "luxgale/memory.h"
#include "luxgale/output.h"
#include "luxgale/table.h"

#include <float.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

static struct lxg_table *parse_with(const char *text, const struct lxg_table_options *options) {
  struct lxg_table *table = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_table_parse(text, strlen(text), "t.csv", options, &table, &error), LXG_OK, &error);
  return table;
}

static struct lxg_table *parse(const char *text) {
  return parse_with(text, NULL);
}

static double *cgs(const struct lxg_table *table, const char *name, enum lxg_dimension dimension) {
  double *values = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_table_cgs(table, name, dimension, NULL, NULL, true, &values, &error), LXG_OK, &error);
  return values;
}

START_TEST(csv_with_units_and_gaps) {
  struct lxg_table *const table = parse(
      "\xEF\xBB\xBF# invented light curve\r\n\r\ntime [d], \"L, sum\" , L [Lsun],speed (km/s),note\r\n"
      "0.5,1,2.5e4 ,1500,\"a, \"\"b\"\"\"\r\n# pause\r\n  \r\n1.5, 2,,-0.5,\r\n2.5,3,1e5,1,\"two\nlines\"");
  ck_assert_uint_eq(table->rows, 3);
  ck_assert_uint_eq(table->columns, 5);
  double *const time_s = cgs(table, "time", LXG_DIMENSION_TIME);
  ck_assert(time_s[0] == 43200.0 && time_s[2] == 216000.0);
  double *const light = cgs(table, "L", LXG_DIMENSION_LUMINOSITY);
  assert_close(light[0], 2.5e4 * 3.828e33, 1e-15); /* IAU 2015 B3; one rounding */
  ck_assert(isnan(light[1]) && lxg_table_is_missing(lxg_table_find(table, "L"), 1));
  ck_assert(!lxg_table_is_missing(lxg_table_find(table, "L"), 2));
  double *const speed = cgs(table, "speed", LXG_DIMENSION_SPEED);
  ck_assert(speed[0] == 1.5e8 && speed[1] == -5e4);
  const struct lxg_column *const note = lxg_table_find(table, "note");
  ck_assert_int_eq(note->type, LXG_COLUMN_TEXT);
  ck_assert_str_eq(lxg_table_text(table, note, 0), "a, \"b\"");
  ck_assert_str_eq(lxg_table_text(table, note, 1), "");
  ck_assert_str_eq(lxg_table_text(table, note, 2), "two\nlines");
  ck_assert_uint_eq(table->line[0], 4);
  ck_assert_uint_eq(table->line[1], 7);
  ck_assert_uint_eq(table->line[2], 8);
  ck_assert_str_eq(lxg_table_find(table, "L")->unit, "Lsun");
  lxg_free(time_s);
  lxg_free(light);
  lxg_free(speed);
  lxg_table_destroy(table);
}
END_TEST

START_TEST(options_choose_columns_and_types) {
  static const char *const keep[] = {"b", "d", "absent"};
  static const char *const texts[] = {"d"};
  const struct lxg_table_options options = {
      .keep = keep, .keep_count = 3, .texts = texts, .texts_count = 1, .allow_not_finite = true};
  struct lxg_table *const table = parse_with("a,b,c,d\nx,1,3,12\n2,nan,4,13a\n7,-inf,5,\n", &options);
  ck_assert_uint_eq(table->columns, 2);
  const struct lxg_column *const d = lxg_table_find(table, "d");
  ck_assert_str_eq(lxg_table_text(table, d, 0), "12");
  ck_assert_str_eq(lxg_table_text(table, d, 1), "13a");
  ck_assert_str_eq(lxg_table_text(table, d, 2), "");
  double *const b = cgs(table, "b", LXG_DIMENSION_NONE);
  ck_assert(b[0] == 1.0 && isnan(b[1]) && isinf(b[2]));
  ck_assert(!lxg_table_is_missing(lxg_table_find(table, "b"), 1)); /* NaN is a value here, not a gap */
  ck_assert_str_eq(lxg_table_text(table, lxg_table_find(table, "b"), 0), "");
  lxg_free(b);
  lxg_table_destroy(table);
}
END_TEST

START_TEST(default_units) {
  struct lxg_table *const table = parse("t,L [Ledd]\n2,1.5\n");
  const struct lxg_units_context context = {.eddington_luminosity = 2e38};
  struct lxg_error error = {0};
  double *values = NULL;
  assert_status(lxg_table_cgs(table, "t", LXG_DIMENSION_TIME, "h", NULL, false, &values, &error), LXG_OK,
                &error);
  ck_assert(values[0] == 7200.0);
  lxg_free(values);
  assert_status(lxg_table_cgs(table, "L", LXG_DIMENSION_LUMINOSITY, NULL, &context, false, &values, &error),
                LXG_OK, &error);
  ck_assert(values[0] == 3e38);
  lxg_free(values);
  ck_assert_int_eq(lxg_table_cgs(table, "L", LXG_DIMENSION_LUMINOSITY, NULL, NULL, false, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "unit-eddington");
  ck_assert_ptr_null(values);
  lxg_table_destroy(table);
}
END_TEST

static const struct {
  const char *text;
  enum lxg_status status;
  const char *code, *words;
} refused[] = {
    {"", LXG_INPUT, "table-empty", "t.csv:1: error"},
    {"# only\n\n", LXG_INPUT, "table-empty", "no line of column names"},
    {"a,b\n1,2\n3\n", LXG_INPUT, "table-ragged", "t.csv:3:2: error: 1 fields where the header has 2"},
    {"a,b\n1,2,3\n", LXG_INPUT, "table-ragged", "t.csv:2:5: error: more than the 2 fields"},
    {"a,b\n1,\"2\n3,4\n", LXG_INPUT, "table-quote", "t.csv:2:3: error: a double quote is not closed"},
    {"a,b\n1,\"2\"x\n", LXG_INPUT, "table-quote", "t.csv:2:3"},
    {"a,b\n1,2\"x\"\n", LXG_INPUT, "table-quote", "t.csv:2:3"},
    {"1,2\n3,4\n", LXG_INPUT, "table-header", "t.csv:1:1: error: \"1\": the first line must hold the names"},
    {"a,,c\n", LXG_INPUT, "table-header", "t.csv:1:3: error: a column without a name"},
    {"a,b,a\n", LXG_INPUT, "table-header", "two columns are named a"},
    {"a,\xE9\n", LXG_INPUT, "table-byte", "t.csv:1:3: error: a name that is not UTF-8"},
    {"a\nx\ncaf\xE9\n", LXG_INPUT, "table-byte", "t.csv:3:1: error: column a: a text that is not UTF-8"},
    {"# %ECSV 2.0\n# ---\na\n", LXG_INPUT, "table-header", "ECSV version"},
    {"# %ECSV 1.0\n# ---\n# delimiter: ','\na\n", LXG_INPUT, "key-missing", "datatype"},
    {"# %ECSV 1.0\n# ---\n# datatype: [\na\n", LXG_INPUT, "document-syntax", "t.csv:"},
    {"# %ECSV 1.0\n# ---\n# datatype:\n# - {name: a, datatype: double}\na\n", LXG_INPUT, "value-word",
     "t.csv:4:25: error: datatype[0].datatype = double: allowed: float64, float32"},
    {"# %ECSV 1.0\n# ---\n# datatype:\n# - {name: a, datatype: string, subtype: json}\na\n", LXG_INPUT,
     "table-header", "arrays"},
    {"# %ECSV 1.0\n# ---\n# delimiter: '|'\n# datatype:\n# - {name: a, datatype: int8}\na\n", LXG_INPUT,
     "table-header", "t.csv:3:14: error: delimiter = |: must be a comma or a blank"},
    {"# %ECSV 1.0\n# ---\n# datatype:\n# - {name: a, datatype: int8}\n", LXG_INPUT, "table-empty",
     "no line of column names"},
    {"# %ECSV 1.0\n# ---\n# datatype:\n# - {name: a, datatype: int8}\nb\n", LXG_INPUT, "table-header",
     "t.csv:5:1: error: \"b\" stands where the header declares column a"},
    {"# %ECSV 1.0\n# ---\n# datatype:\n# - {name: a, datatype: int8}\n# - {name: b, datatype: int8}\na\n",
     LXG_INPUT, "table-header", "1 names, but the header declares 2 columns"},
    {"# %ECSV 1.0\n# ---\n# datatype: 5\na\n", LXG_INPUT, "kind-sequence", "datatype"},
    {"# %ECSV 1.0\n# ---\n# datatype:\n# - &x {name: a, datatype: int8}\na\n", LXG_INPUT, "document-refused",
     "anchors"},
};

START_TEST(refusals) {
  struct lxg_table *table = (struct lxg_table *)&table;
  struct lxg_error error = {0};
  const char *const text = refused[_i].text;
  const enum lxg_status status = lxg_table_parse(text, strlen(text), "t.csv", NULL, &table, &error);
  ck_assert_msg(status == refused[_i].status, "%s: %s", text, lxg_strerror(status));
  ck_assert_ptr_null(table);
  ck_assert_msg(strcmp(error.code, refused[_i].code) == 0, "%s: %s (%s)", text, error.line[0], error.code);
  ck_assert_msg(strstr(error.line[0], refused[_i].words) != NULL, "%s: %s", text, error.line[0]);
}
END_TEST

START_TEST(limits) {
  struct lxg_table *table = NULL;
  struct lxg_error error = {0};
  struct lxg_buffer text = {0};
  for (int i = 0; i < 1000000; i++) { /* a million columns */
    lxg_buffer_text(&text, "a,");
  }
  ck_assert_int_eq(lxg_table_parse(text.data, text.size, "t.csv", NULL, &table, &error), LXG_LIMIT);
  text.size = 0;
  for (int i = 0; i < LXG_TABLE_COLUMNS + 1; i++) {
    lxg_buffer_format(&text, "%sc%d", i > 0 ? "," : "", i);
  }
  ck_assert_int_eq(lxg_table_parse(text.data, text.size, "t.csv", NULL, &table, &error), LXG_LIMIT);
  ck_assert_ptr_nonnull(strstr(error.line[0], "more than 4096 columns"));
  ck_assert_int_eq(lxg_table_parse("a\n1\0\n", 5, "t.csv", NULL, &table, &error), LXG_INPUT);
  ck_assert_str_eq(error.line[0], "t.csv:2:2: error: a zero byte: this is not a text file");
  ck_assert_int_eq(lxg_table_read("/dev/zero", NULL, &table, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_table_read("/tmp", NULL, &table, &error), LXG_IO);
  ck_assert_int_eq(lxg_table_read("/nowhere/at/all", NULL, &table, &error), LXG_IO);
  ck_assert_ptr_null(table);
  lxg_buffer_free(&text);
}
END_TEST

START_TEST(lookup_errors) {
  struct lxg_table *const table = parse(
      "time [d],lum [erg/s],name,odd [furlong],wild,text\n1,2,V,4,5,\n\n2,,B,4,six,\n3,1e308,\"\",4,nan,x\n");
  double *values = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_table_cgs(table, "tiem", LXG_DIMENSION_TIME, NULL, NULL, false, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(
      error.line[0],
      "t.csv: error: no column tiem, did you mean time?; there are: time, lum, name, odd, wild, text");
  ck_assert_str_eq(error.code, "table-column");
  ck_assert_int_eq(lxg_table_cgs(table, "lum", LXG_DIMENSION_LUMINOSITY, NULL, NULL, false, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.line[0], "t.csv:4: error: column lum: a value is missing");
  ck_assert_int_eq(lxg_table_cgs(table, "lum", LXG_DIMENSION_MASS, NULL, NULL, true, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "unit-dimension");
  ck_assert_ptr_nonnull(strstr(
      error.line[0], "t.csv: error: column lum: unit = erg/s: that is a luminosity, but a mass is due"));
  ck_assert_int_eq(lxg_table_cgs(table, "odd", LXG_DIMENSION_MASS, NULL, NULL, true, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "unit-unknown");
  ck_assert_int_eq(lxg_table_cgs(table, "name", LXG_DIMENSION_MASS, NULL, NULL, true, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.line[0], "t.csv:2: error: column name: \"V\": a number is due");
  ck_assert_int_eq(lxg_table_cgs(table, "text", LXG_DIMENSION_MASS, NULL, NULL, true, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.line[0], "t.csv:5: error: column text: \"x\": a number is due");
  ck_assert_int_eq(lxg_table_cgs(table, "wild", LXG_DIMENSION_NONE, NULL, NULL, true, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.line[0], "t.csv:4: error: column wild: \"six\": a finite decimal number is due");
  ck_assert_ptr_null(values);
  lxg_table_error(table, "time", 2, &error, "code", "what = %d", 5);
  ck_assert_str_eq(error.line[0], "t.csv:5: error: column time: what = 5");
  lxg_table_destroy(table);
}
END_TEST

START_TEST(not_finite_and_overflow) {
  struct lxg_table *const table = parse("a,b [Mpc]\nnan,1e300\n");
  double *values = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_table_cgs(table, "a", LXG_DIMENSION_NONE, NULL, NULL, true, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "table-number");
  ck_assert_int_eq(lxg_table_cgs(table, "b", LXG_DIMENSION_LENGTH, NULL, NULL, true, &values, &error),
                   LXG_INPUT);
  ck_assert_ptr_nonnull(strstr(error.line[0], "t.csv:2: error: column b: too large"));
  lxg_table_destroy(table);
}
END_TEST

/* A header as astropy writes it (blank-separated, !!omap), and a lenient one. */
START_TEST(ecsv_variants) {
  struct lxg_table *table = parse(
      "# %ECSV 1.0\n# ---\n# datatype:\n# - {name: t, unit: d, datatype: float64, description: time}\n"
      "# - {name: n, datatype: int8}\n# - {name: ok, datatype: bool}\n# - {name: band, datatype: string}\n"
      "# meta: !!omap\n# - {source: invented}\n# schema: astropy-2.0\nt n ok band\n1.5 7 True  V\n2.5 \"\" "
      "False \"a b\"\n");
  ck_assert_uint_eq(table->rows, 2);
  double *const t = cgs(table, "t", LXG_DIMENSION_TIME);
  ck_assert(t[1] == 216000.0);
  double *const ok = cgs(table, "ok", LXG_DIMENSION_NONE);
  ck_assert(ok[0] == 1.0 && ok[1] == 0.0);
  ck_assert(lxg_table_is_missing(lxg_table_find(table, "n"), 1));
  ck_assert_str_eq(lxg_table_text(table, lxg_table_find(table, "band"), 1), "a b");
  ck_assert_str_eq(lxg_table_find(table, "t")->description, "time");
  ck_assert_int_eq(lxg_node_kind(lxg_table_meta(table)), LXG_NODE_SEQUENCE);
  lxg_free(t);
  lxg_free(ok);
  lxg_table_destroy(table);
  table = parse(
      "#%ECSV 0.9\n## remark\n#---\n#delimiter: ','\n#datatype:\n#- {name: a, datatype: int8}\na\n300\n5\n");
  double *values = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_table_cgs(table, "a", LXG_DIMENSION_NONE, NULL, NULL, false, &values, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.line[0], "t.csv:8: error: column a: \"300\": a finite decimal number is due");
  lxg_table_destroy(table);
}
END_TEST

START_TEST(builder_errors) {
  struct lxg_table *table = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_table_create("out", &table, &error), LXG_OK, &error);
  static const char *const names[] = {"no", "1a", "a b", "", "_x", "NaN", "Y"};
  for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
    ck_assert_int_eq(lxg_table_add_column(table, names[i], LXG_COLUMN_NUMBER, "", "", &error), LXG_BUG);
  }
  ck_assert_int_eq(lxg_table_add_column(table, "a", LXG_COLUMN_NUMBER, "Ledd", "", &error), LXG_BUG);
  ck_assert_str_eq(error.code, "table-unit");
  assert_status(lxg_table_add_column(table, "a", LXG_COLUMN_NUMBER, "d", "", &error), LXG_OK, &error);
  ck_assert_int_eq(lxg_table_add_column(table, "a", LXG_COLUMN_NUMBER, "", "", &error), LXG_BUG);
  assert_status(lxg_table_add_rows(table, 2, &error), LXG_OK, &error);
  assert_status(lxg_table_add_column(table, "b", LXG_COLUMN_TEXT, "", "", &error), LXG_OK, &error);
  ck_assert(lxg_table_is_missing(lxg_table_find(table, "b"), 1));
  ck_assert_int_eq(lxg_table_set_number(table, 0, 2, 1.0, &error), LXG_BUG);
  ck_assert_int_eq(lxg_table_set_number(table, 1, 0, 1.0, &error), LXG_BUG);
  ck_assert_int_eq(lxg_table_set_text(table, 0, 0, "x", &error), LXG_BUG);
  ck_assert_int_eq(lxg_table_set_text(table, 2, 0, "x", &error), LXG_BUG);
  ck_assert_int_eq(lxg_table_add_rows(table, SIZE_MAX, &error), LXG_LIMIT);
  ck_assert_uint_eq(table->rows, 2);
  lxg_table_error(table, "a", 1, &error, "code", "bad");
  ck_assert_str_eq(error.line[0], "out: error: column a, row 2: bad");
  lxg_table_destroy(table);
  lxg_table_destroy(NULL);
}
END_TEST

/* splitmix64 (Steele, Lea & Flood 2014). */
static uint64_t next_bits(uint64_t *state) {
  uint64_t z = *state += 0x9e3779b97f4a7c15u;
  z = (z ^ z >> 30) * 0xbf58476d1ce4e5b9u;
  z = (z ^ z >> 27) * 0x94d049bb133111ebu;
  return z ^ z >> 31;
}

static double random_double(uint64_t *state) {
  for (;;) {
    const uint64_t bits = next_bits(state);
    double value;
    memcpy(&value, &bits, sizeof value);
    if (isfinite(value)) {
      return value;
    }
  }
}

static const char *const odd_texts[] = {"V",           "a,b", "say \"hi\"",  " padded ", "# no comment",
                                        "line\nbreak", "",    "caf\xC3\xA9", "12",       "nan",
                                        "True"};

enum { ODD_TEXTS = sizeof odd_texts / sizeof odd_texts[0] };

static struct lxg_table *random_table(uint64_t seed, size_t rows) {
  struct lxg_table *table = NULL;
  struct lxg_error error = {0};
  uint64_t state = seed;
  assert_status(lxg_table_create("random", &table, &error), LXG_OK, &error);
  assert_status(
      lxg_table_add_column(table, "time_d", LXG_COLUMN_NUMBER, "d", "time: since start, # 1", &error), LXG_OK,
      &error);
  assert_status(lxg_table_add_column(table, "verdict", LXG_COLUMN_TEXT, "", "\"quoted\"", &error), LXG_OK,
                &error);
  assert_status(lxg_table_add_column(table, "mass_loss_rate", LXG_COLUMN_NUMBER, "Msun/yr", "", &error),
                LXG_OK, &error);
  assert_status(lxg_table_add_column(table, "ratio", LXG_COLUMN_NUMBER, "", "", &error), LXG_OK, &error);
  assert_status(lxg_table_add_rows(table, rows, &error), LXG_OK, &error);
  for (size_t row = 0; row < rows; row++) {
    lxg_table_set_number(table, 0, row, random_double(&state), &error);
    lxg_table_set_text(table, 1, row, odd_texts[next_bits(&state) % ODD_TEXTS], &error);
    lxg_table_set_number(table, 2, row, next_bits(&state) % 5 == 0 ? (double)NAN : random_double(&state),
                         &error);
    lxg_table_set_number(table, 3, row, random_double(&state), &error);
  }
  struct lxg_node *const meta = lxg_table_meta(table);
  lxg_node_add_text(meta, "title", "no");
  lxg_node_add_number(meta, "scale", 1.0e38);
  lxg_node_add_number(meta, "small", 1e-5);
  lxg_node_add_text(lxg_node_add_sequence(lxg_node_add_mapping(meta, "case"), "tables"), NULL, "a: b");
  return table;
}

static void assert_same_tables(const struct lxg_table *a, const struct lxg_table *b) {
  ck_assert_uint_eq(a->rows, b->rows);
  ck_assert_uint_eq(a->columns, b->columns);
  for (size_t i = 0; i < a->columns; i++) {
    const struct lxg_column *const left = &a->column[i], *const right = &b->column[i];
    ck_assert_str_eq(left->name, right->name);
    ck_assert_str_eq(left->unit, right->unit);
    ck_assert_str_eq(left->description, right->description);
    ck_assert_int_eq(left->type, right->type);
    for (size_t row = 0; row < a->rows; row++) {
      ck_assert_int_eq(lxg_table_is_missing(left, row), lxg_table_is_missing(right, row));
      if (left->type == LXG_COLUMN_TEXT) {
        ck_assert_str_eq(lxg_table_text(a, left, row), lxg_table_text(b, right, row));
      } else if (!lxg_table_is_missing(left, row)) {
        ck_assert_msg(memcmp(&left->number[row], &right->number[row], sizeof(double)) == 0, "%a is not %a",
                      left->number[row], right->number[row]);
      }
    }
  }
}

/* Write, read, write again: the same bits, then the same bytes. 300 tables, about 1e5 doubles. */
START_TEST(round_trip) {
  for (uint64_t seed = 1; seed <= 300; seed++) {
    struct lxg_table *const table = random_table(seed, (size_t)(seed % 250));
    struct lxg_table *again = NULL;
    struct lxg_error error = {0};
    struct lxg_buffer first = {0}, second = {0};
    assert_status(lxg_table_write_ecsv(table, &first, &error), LXG_OK, &error);
    assert_status(lxg_table_parse(first.data, first.size, "again", NULL, &again, &error), LXG_OK, &error);
    assert_same_tables(table, again);
    assert_status(lxg_table_write_ecsv(again, &second, &error), LXG_OK, &error);
    ck_assert_str_eq(first.data, second.data);
    lxg_buffer_free(&first);
    lxg_buffer_free(&second);
    lxg_table_destroy(table);
    lxg_table_destroy(again);
  }
}
END_TEST

/* One column with gaps: a gap must not become a blank line. */
START_TEST(lonely_column_keeps_its_gaps) {
  struct lxg_table *table = NULL, *again = NULL;
  struct lxg_error error = {0};
  struct lxg_buffer text = {0};
  assert_status(lxg_table_create("out", &table, &error), LXG_OK, &error);
  assert_status(lxg_table_add_column(table, "a", LXG_COLUMN_NUMBER, "", "", &error), LXG_OK, &error);
  assert_status(lxg_table_add_rows(table, 3, &error), LXG_OK, &error);
  assert_status(lxg_table_set_number(table, 0, 1, 2.5, &error), LXG_OK, &error);
  assert_status(lxg_table_write_ecsv(table, &text, &error), LXG_OK, &error);
  assert_status(lxg_table_parse(text.data, text.size, "again", NULL, &again, &error), LXG_OK, &error);
  assert_same_tables(table, again);
  lxg_buffer_free(&text);
  lxg_table_destroy(table);
  lxg_table_destroy(again);
}
END_TEST

static void write_file(const char *folder, const char *name, const struct lxg_buffer *text) {
  char path[200];
  struct lxg_error error = {0};
  snprintf(path, sizeof path, "%s/%s", folder, name);
  assert_status(lxg_output_write(path, text->data, text->size, &error), LXG_OK, &error);
}

/* bits.txt: one line a value, "hexadecimal bits, text". */
static void write_numbers(const char *folder) {
  struct lxg_buffer bits = {0}, text = {0};
  struct lxg_error error = {0};
  struct lxg_document *document = NULL;
  assert_status(lxg_document_create("numbers", &document, &error), LXG_OK, &error);
  struct lxg_node *const list = lxg_node_add_sequence(lxg_document_root(document), "numbers");
  uint64_t state = 4711;
  for (int i = 0; i < 20000; i++) {
    const double value = i < 2098 ? ldexp(1.0, i - 1074) : random_double(&state);
    uint64_t pattern;
    memcpy(&pattern, &value, sizeof pattern);
    lxg_buffer_format(&bits, "%016llx ", (unsigned long long)pattern);
    lxg_buffer_number(&bits, value);
    lxg_buffer_byte(&bits, '\n');
    lxg_node_add_number(list, NULL, value);
  }
  struct lxg_node *const words = lxg_node_add_sequence(lxg_document_root(document), "words");
  for (size_t i = 0; i < ODD_TEXTS; i++) {
    lxg_node_add_text(words, NULL, odd_texts[i]);
  }
  lxg_node_add_text(words, NULL, "12:30:00");
  lxg_node_add_text(words, NULL, "~");
  lxg_node_add_none(lxg_document_root(document), "no");
  lxg_node_add_bool(lxg_document_root(document), "on", true);
  lxg_node_add_integer(lxg_document_root(document), "points", 9007199254740993);
  write_file(folder, "bits.txt", &bits);
  assert_status(lxg_document_write_yaml(lxg_document_root(document), false, &text, &error), LXG_OK, &error);
  write_file(folder, "numbers.yaml", &text);
  text.size = 0;
  assert_status(lxg_document_write_json(lxg_document_root(document), &text, &error), LXG_OK, &error);
  write_file(folder, "numbers.json", &text);
  lxg_buffer_free(&bits);
  lxg_buffer_free(&text);
  lxg_document_destroy(document);
}

/* units.txt: dimension, factor and table spelling of every unit; units.ecsv: one column of each. */
static void write_units(const char *folder) {
  struct lxg_buffer text = {0};
  struct lxg_error error = {0};
  struct lxg_table *table = NULL;
  assert_status(lxg_table_create("units", &table, &error), LXG_OK, &error);
  for (size_t i = 0; i < lxg_units_count(); i++) {
    const struct lxg_unit *const unit = lxg_units_row(i);
    if (unit->factor > 0.0) {
      char name[24];
      snprintf(name, sizeof name, "c%zu", i);
      lxg_buffer_format(&text, "%s|", lxg_units_dimension(unit->dimension));
      lxg_buffer_number(&text, unit->factor);
      lxg_buffer_format(&text, "|%s|%s\n", unit->table, name);
      assert_status(lxg_table_add_column(table, name, LXG_COLUMN_NUMBER, unit->table, "", &error), LXG_OK,
                    &error);
    }
  }
  write_file(folder, "units.txt", &text);
  text.size = 0;
  assert_status(lxg_table_add_rows(table, 1, &error), LXG_OK, &error);
  for (size_t i = 0; i < table->columns; i++) {
    lxg_table_set_number(table, i, 0, 1.25, &error);
  }
  assert_status(lxg_table_write_ecsv(table, &text, &error), LXG_OK, &error);
  write_file(folder, "units.ecsv", &text);
  lxg_buffer_free(&text);
  lxg_table_destroy(table);
}

START_TEST(python_reads_what_we_write) {
  char folder[] = "/tmp/luxgale-formats-XXXXXX", command[300];
  ck_assert_ptr_nonnull(mkdtemp(folder));
  struct lxg_buffer text = {0};
  struct lxg_error error = {0};
  struct lxg_table *table = random_table(99, 400);
  assert_status(lxg_table_write_ecsv(table, &text, &error), LXG_OK, &error);
  write_file(folder, "random.ecsv", &text);
  text.size = 0;
  for (size_t row = 0; row < table->rows; row++) { /* the same values, but as bits */
    uint64_t bits[3];
    memcpy(&bits[0], &table->column[0].number[row], 8);
    memcpy(&bits[1], &table->column[2].number[row], 8);
    memcpy(&bits[2], &table->column[3].number[row], 8);
    lxg_buffer_format(&text, "%016llx %016llx %016llx %d\n", (unsigned long long)bits[0],
                      (unsigned long long)bits[1], (unsigned long long)bits[2],
                      lxg_table_is_missing(&table->column[2], row) ? 1 : 0);
  }
  write_file(folder, "random.txt", &text);
  write_numbers(folder);
  write_units(folder);
  snprintf(command, sizeof command, "/usr/bin/python3 tests/python/check_formats.py %s", folder);
  ck_assert_msg(system(command) == 0, "tests/python/check_formats.py failed, see above");
  /* and back: what astropy has written */
  lxg_table_destroy(table);
  snprintf(command, sizeof command, "%s/astropy.ecsv", folder);
  assert_status(lxg_table_read(command, NULL, &table, &error), LXG_OK, &error);
  double *const light = cgs(table, "light", LXG_DIMENSION_LUMINOSITY);
  ck_assert_uint_eq(table->rows, 3);
  assert_close(light[1], 2.5 * 3.828e33, 1e-15); /* IAU 2015 B3; one rounding */
  ck_assert(isnan(light[2]));
  ck_assert_str_eq(lxg_table_text(table, lxg_table_find(table, "band"), 1), "a b");
  ck_assert_uint_eq(strlen(table->checksum), 64);
  lxg_free(light);
  lxg_table_destroy(table);
  lxg_buffer_free(&text);
  snprintf(command, sizeof command, "rm -r %s", folder);
  ck_assert_int_eq(system(command), 0);
}
END_TEST

/* Most memory for a million rows of three columns: 24 MB of numbers, 4 MB of line numbers, growth by half [KiB]. The
 * address sanitizer keeps freed memory aside. */
#if defined(__SANITIZE_ADDRESS__)
#define MILLION_KIB (256 * 1024)
#elif defined(__has_feature)
#if __has_feature(address_sanitizer)
#define MILLION_KIB (256 * 1024)
#endif
#endif
#ifndef MILLION_KIB
#define MILLION_KIB (64 * 1024)
#endif

/* A million rows of three columns take about half a second; ten are allowed for a busy machine or a sanitizer. */
START_TEST(a_million_rows) {
  char path[] = "/tmp/luxgale-million-XXXXXX";
  const int file = mkstemp(path);
  FILE *const out = fdopen(file, "w");
  fprintf(out, "time [d],luminosity [erg/s],error\n");
  for (int i = 0; i < 1000000; i++) {
    fprintf(out, "%d.%06d,%d.%015de+38,0.05\n", i / 100, i % 100 * 10000, i % 9 + 1, i);
  }
  ck_assert_int_eq(fclose(out), 0);
  int outcome = 0;
  const pid_t child = fork();
  if (child == 0) {
    struct lxg_table *table = NULL;
    struct rusage before, after;
    getrusage(RUSAGE_SELF, &before);
    const clock_t start = clock();
    const enum lxg_status status = lxg_table_read(path, NULL, &table, NULL);
    const double seconds = (double)(clock() - start) / CLOCKS_PER_SEC;
    getrusage(RUSAGE_SELF, &after);
    const bool right =
        status == LXG_OK && table->rows == 1000000 && table->column[1].number[999999] == 1.000000000999999e38;
    printf("1e6 rows x 3 columns: %.2f s, %ld MiB\n", seconds, (after.ru_maxrss - before.ru_maxrss) / 1024);
    fflush(stdout);
    lxg_table_destroy(table);
    _exit(!right ? 1 : (seconds > 10.0 ? 2 : (after.ru_maxrss - before.ru_maxrss > MILLION_KIB ? 3 : 0)));
  }
  ck_assert_int_eq(waitpid(child, &outcome, 0), child);
  unlink(path);
  ck_assert_msg(WIFEXITED(outcome) && WEXITSTATUS(outcome) == 0, "outcome %d", outcome);
}
END_TEST

/* Every prefix of a table with everything in it is read or refused; nothing else. */
START_TEST(truncated_everywhere) {
  struct lxg_table *const table = random_table(5, 12);
  struct lxg_buffer text = {0};
  struct lxg_error error = {0};
  assert_status(lxg_table_write_ecsv(table, &text, &error), LXG_OK, &error);
  for (size_t size = 0; size < text.size; size++) {
    struct lxg_table *part = NULL;
    const enum lxg_status status = lxg_table_parse(text.data, size, "part", NULL, &part, &error);
    ck_assert(status == LXG_OK || status == LXG_INPUT);
    ck_assert((status == LXG_OK) == (part != NULL));
    lxg_table_destroy(part);
  }
  lxg_buffer_free(&text);
  lxg_table_destroy(table);
}
END_TEST

Suite *suite_table(void);
Suite *suite_table(void) {
  Suite *suite = suite_create("table");
  TCase *tests = tcase_create("table");
  tcase_set_timeout(tests, 180);
  tcase_add_test(tests, csv_with_units_and_gaps);
  tcase_add_test(tests, options_choose_columns_and_types);
  tcase_add_test(tests, default_units);
  tcase_add_loop_test(tests, refusals, 0, sizeof refused / sizeof refused[0]);
  tcase_add_test(tests, limits);
  tcase_add_test(tests, lookup_errors);
  tcase_add_test(tests, not_finite_and_overflow);
  tcase_add_test(tests, ecsv_variants);
  tcase_add_test(tests, builder_errors);
  tcase_add_test(tests, round_trip);
  tcase_add_test(tests, lonely_column_keeps_its_gaps);
  tcase_add_test(tests, python_reads_what_we_write);
  tcase_add_test(tests, a_million_rows);
  tcase_add_test(tests, truncated_everywhere);
  suite_add_tcase(suite, tests);
  return suite;
}
