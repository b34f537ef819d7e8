/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_document.c - the tree from YAML and JSON, its refusals with positions, overrides, and writing. That the output means
 * the same to other readers is checked with PyYAML and Python's json in tests/python/check_formats.py (see
 * test_table.c).
 */
#include "helpers.h"
#include "luxgale/document.h"
#include "luxgale/memory.h"
#include "luxgale/output.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>
#include <unistd.h>

static struct lxg_document *parse_as(const char *text, const char *name, enum lxg_document_format format) {
  struct lxg_error error = {0};
  struct lxg_document *document = NULL;
  assert_status(lxg_document_parse(text, strlen(text), name, format, &document, &error), LXG_OK, &error);
  return document;
}

static struct lxg_document *yaml(const char *text) {
  return parse_as(text, "case.yaml", LXG_DOCUMENT_AUTO);
}

static const char case_yaml[] = "case: 1\n"
                                "title: \"a b: c\"\n"
                                "star: {mass: 1.0 Msun, radius: white-dwarf}\n"
                                "hold:\n"
                                "  base_temperature: 1.0e8 K\n"
                                "  base_luminosity: \"1.5 Ledd\"\n"
                                "tables: [a.ecsv, 'b.ecsv']\n"
                                "flag: true\n"
                                "empty: ~\n";

static const char case_json[] = "{\"case\": 1,\n"
                                " \"title\": \"a b: c\",\n"
                                " \"star\": {\"mass\": \"1.0 Msun\", \"radius\": \"white-dwarf\"},\n"
                                " \"hold\": {\n"
                                "  \"base_temperature\": 1.0e8,\n"
                                "  \"base_luminosity\": \"1.5 Ledd\"},\n"
                                " \"tables\": [\"a.ecsv\", \"b.ecsv\"],\n"
                                " \"flag\": true,\n"
                                " \"empty\": null}\n";

/* The same case in both formats gives the same values. */
START_TEST(both_formats_agree) {
  struct lxg_document *const document = parse_as(_i == 0 ? case_yaml : case_json, "case", LXG_DOCUMENT_AUTO);
  struct lxg_node *const root = lxg_document_root(document);
  struct lxg_error error = {0};
  const struct lxg_units_context context = {.eddington_luminosity = 2e38};
  long long version = 0;
  const char *title = NULL;
  double mass = 0.0, temperature = 0.0, luminosity = 0.0, absent = 7.25;
  bool flag = false;
  assert_status(lxg_node_get_integer(root, "case", &version, &error), LXG_OK, &error);
  assert_status(lxg_node_get_text(root, "title", &title, &error), LXG_OK, &error);
  struct lxg_node *const star = lxg_node_find(root, "star");
  struct lxg_node *const hold = lxg_node_find(root, "hold");
  assert_status(lxg_node_get_quantity(star, "mass", LXG_DIMENSION_MASS, NULL, NULL, &mass, &error), LXG_OK,
                &error);
  assert_status(lxg_node_get_quantity(hold, "base_temperature", LXG_DIMENSION_TEMPERATURE, NULL, NULL,
                                      &temperature, &error),
                LXG_OK, &error);
  assert_status(lxg_node_get_quantity(hold, "base_luminosity", LXG_DIMENSION_LUMINOSITY, NULL, &context,
                                      &luminosity, &error),
                LXG_OK, &error);
  assert_status(lxg_node_get_bool(root, "flag", &flag, &error), LXG_OK, &error);
  assert_status(lxg_node_get_number(root, "empty", &absent, &error), LXG_OK, &error);
  assert_status(lxg_node_get_number(root, "nowhere", &absent, &error), LXG_OK, &error);
  ck_assert_int_eq(version, 1);
  ck_assert_str_eq(title, "a b: c");
  assert_close(mass, 1.98840987e33, 1e-8); /* IAU GM over CODATA 2018 G */
  ck_assert(temperature == 1e8 && luminosity == 3e38 && flag && absent == 7.25);
  static const char *const words[] = {"main-sequence", "white-dwarf"};
  size_t index = 9;
  assert_status(lxg_node_get_word(star, "radius", words, 2, &index, &error), LXG_OK, &error);
  ck_assert_uint_eq(index, 1);
  struct lxg_node *item = NULL;
  assert_status(lxg_node_require(root, "tables", &item, &error), LXG_OK, &error);
  assert_status(lxg_node_as_sequence(item, &error), LXG_OK, &error);
  ck_assert_uint_eq(lxg_node_count(item), 2);
  item = lxg_node_next(lxg_node_first(item));
  ck_assert_str_eq(lxg_node_text(item), "b.ecsv");
  char path[40];
  lxg_node_path(item, path, sizeof path);
  ck_assert_str_eq(path, "tables[1]");
  ck_assert_ptr_null(lxg_node_next(item));
  assert_status(lxg_document_check_unused(document, &error), LXG_OK, &error);
  ck_assert_uint_eq(strlen(lxg_document_checksum(document)), 64);
  lxg_document_destroy(document);
}
END_TEST

START_TEST(positions_are_kept) {
  struct lxg_document *const document =
      _i == 0 ? yaml("# note\nstar:\n  \xC3\xA9: {mass: 1}\n")
              : parse_as("\n{\"star\":\n  {\"\xC3\xA9\": 4, \"mass\": 1}}", "x.json", LXG_DOCUMENT_AUTO);
  struct lxg_node *node = lxg_node_find(lxg_document_root(document), "star");
  node = lxg_node_first(node);
  node = _i == 0 ? lxg_node_first(node) : lxg_node_next(node);
  ck_assert_str_eq(lxg_node_key(node), "mass");
  ck_assert_uint_eq(lxg_node_line(node), 3);
  ck_assert_uint_eq(lxg_node_column(node), _i == 0 ? 13 : 20); /* characters, not bytes */
  lxg_document_destroy(document);
}
END_TEST

static const struct {
  const char *text;
  enum lxg_document_format format;
  enum lxg_status status;
  const char *code, *words;
} refused[] = {
    {"", LXG_DOCUMENT_YAML, LXG_INPUT, "document-syntax", "empty"},
    {"# nothing\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-syntax", "empty"},
    {"a: 1\nb: [1, 2\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-syntax", "f:3:1: error"},
    {"a: 1\n\tb: 2\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-syntax", "f:2:1: error"},
    {"a: 1\nb: 2\na: 3\n", LXG_DOCUMENT_YAML, LXG_INPUT, "key-duplicate",
     "f:3:1: error: key a stands here for the second time, first on line 1"},
    {"a: {b: 1, c: 2, b: 3}\n", LXG_DOCUMENT_YAML, LXG_INPUT, "key-duplicate", "f:1:17"},
    {"a: &x 1\nb: *x\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "f:1:4: error: anchors"},
    {"a: [*x]\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "f:1:5: error: aliases"},
    {"a: !!float 1\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "f:1:4: error: tags"},
    {"a: ! 1\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "tags"},
    {"a: !!omap []\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "tags"},
    {"a: &x {b: 1}\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "anchors"},
    {"%TAG !e! tag:e,2000:\n---\na: 1\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "tag directives"},
    {"a: {<<: 1}\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "f:1:5: error: merge keys"},
    {"a: 1\n---\nb: 2\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused",
     "f:2:1: error: a second document"},
    {"? [a]\n: 1\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "a key must be a text"},
    {"? {a: 1}\n: 1\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "a key must be a text"},
    {"\"\": 1\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "an empty key"},
    {"a: \"\\0\"\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-refused", "character zero"},
    {"a: 1\nb: \x80\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-syntax", "f:2:4: error: byte 0x80"},
    {"a: 1\nb: \x01\n", LXG_DOCUMENT_YAML, LXG_INPUT, "document-syntax", "f:2:4: error"},
    {"\xFF\xFE{", LXG_DOCUMENT_YAML, LXG_INPUT, "document-syntax", "f:1:1: error: byte 0xff"},
    {"", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax",
     "f:1:1: error: not readable as JSON: the text ends"},
    {"{\"a\": 1,\n \"a\": 2}", LXG_DOCUMENT_JSON, LXG_INPUT, "key-duplicate", "f:2:2: error"},
    {"{\"a\": 01}", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:7"},
    {"[1.]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:2"},
    {"[1e]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:2"},
    {"[.5]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:2"},
    {"[+1]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:2"},
    {"[-]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:2"},
    {"[NaN]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:2"},
    {"[1,]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:4"},
    {"[,1]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:2"},
    {"[1 2]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax",
     "f:1:4: error: not readable as JSON: a comma or ]"},
    {"{\"a\" 1}", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "a colon is due"},
    {"{a: 1}", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "a key in double quotes"},
    {"{\"a\": 1,}", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:9"},
    {"{\"a\": 1", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "a comma or }"},
    {"[1]]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax",
     "f:1:4: error: not readable as JSON: something follows"},
    {"[1}", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:3"},
    {"[tru]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:2"},
    {"[truer]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:6"},
    {"[\"a", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "without closing quote"},
    {"[\"a\\", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "unknown escape"},
    {"[\"\\x\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "unknown escape"},
    {"[\"a\nb\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "control character"},
    {"[\"\\u0000\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "other than zero"},
    {"[\"\\u12g4\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "four hexadecimal digits"},
    {"[\"\\ud800\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "\\u needs"},
    {"[\"\\ud800\\u0041\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "surrogate"},
    {"[\"\\ud800\\n\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "surrogate"},
    {"[\"\\udc00\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "\\u needs"},
    {"[\"\xC3(\"]", LXG_DOCUMENT_JSON, LXG_INPUT, "document-syntax", "f:1:3: error: byte 0xc3"},
    {"{\"\": 1}", LXG_DOCUMENT_JSON, LXG_INPUT, "document-refused", "an empty key"},
};

START_TEST(refusals) {
  struct lxg_document *document = (struct lxg_document *)&document;
  struct lxg_error error = {0};
  const char *const text = refused[_i].text;
  ck_assert_msg(lxg_document_parse(text, strlen(text), "f", refused[_i].format, &document, &error) ==
                    refused[_i].status,
                "%s", text);
  ck_assert_ptr_null(document);
  ck_assert_msg(strcmp(error.code, refused[_i].code) == 0, "%s: %s (%s)", text, error.line[0], error.code);
  ck_assert_msg(strstr(error.line[0], refused[_i].words) != NULL, "%s: %s", text, error.line[0]);
}
END_TEST

START_TEST(zero_byte_is_refused) {
  struct lxg_document *document = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_document_parse("a: 1\0b", 6, "f", LXG_DOCUMENT_YAML, &document, &error), LXG_INPUT);
  ck_assert_ptr_nonnull(strstr(error.line[0], "f:1:5: error: byte 0x00"));
}
END_TEST

/* Text of `head`, then `unit` many times. */
static char *repeated(const char *head, const char *unit, size_t times, size_t *size) {
  const size_t length = strlen(unit);
  *size = strlen(head) + length * times;
  char *const text = lxg_alloc(*size + 1, 1);
  ck_assert_ptr_nonnull(text);
  strcpy(text, head);
  for (size_t i = 0; i < times; i++) {
    memcpy(text + strlen(head) + i * length, unit, length);
  }
  return text;
}

static const struct {
  const char *head, *unit;
  size_t times;
  enum lxg_document_format format;
} bombs[] = {{"", "[", 1000000, LXG_DOCUMENT_YAML},   {"", "{a: ", 400000, LXG_DOCUMENT_YAML},
             {"", "- ", 1000000, LXG_DOCUMENT_YAML},  {"", "? ", 1000000, LXG_DOCUMENT_YAML},
             {"[", "1,", 1000000, LXG_DOCUMENT_YAML}, {"[", "[", 1000000, LXG_DOCUMENT_JSON},
             {"[", "1,", 1000000, LXG_DOCUMENT_JSON}, {"a: ", "x", 100000, LXG_DOCUMENT_YAML},
             {"[\"", "x", 5000000, LXG_DOCUMENT_JSON}};

/* Refused within the second that the scorecard allows ten times over. */
START_TEST(bombs_are_refused_quickly) {
  struct lxg_document *document = NULL;
  struct lxg_error error = {0};
  size_t size = 0;
  char *const text = repeated(bombs[_i].head, bombs[_i].unit, bombs[_i].times, &size);
  const clock_t start = clock();
  const enum lxg_status status = lxg_document_parse(text, size, "bomb", bombs[_i].format, &document, &error);
  const double seconds = (double)(clock() - start) / CLOCKS_PER_SEC;
  lxg_free(text);
  ck_assert_msg(status == LXG_LIMIT || status == LXG_INPUT, "%s", error.line[0]);
  ck_assert_msg(seconds < 1.0, "%g s", seconds);
}
END_TEST

/* Many keys are no trouble as long as they differ; the duplicate is found among them. */
START_TEST(many_keys) {
  struct lxg_buffer text = {0};
  for (int i = 0; i < 40000; i++) {
    lxg_buffer_format(&text, "k%d: %d\n", i, i);
  }
  struct lxg_error error = {0};
  struct lxg_document *document = NULL;
  assert_status(lxg_document_parse(text.data, text.size, "f", LXG_DOCUMENT_YAML, &document, &error), LXG_OK,
                &error);
  ck_assert_uint_eq(lxg_node_count(lxg_document_root(document)), 40000);
  lxg_document_destroy(document);
  lxg_buffer_text(&text, "k17: 1\n");
  ck_assert_int_eq(lxg_document_parse(text.data, text.size, "f", LXG_DOCUMENT_YAML, &document, &error),
                   LXG_INPUT);
  ck_assert_ptr_nonnull(
      strstr(error.line[0], "f:40001:1: error: key k17 stands here for the second time, first on line 18"));
  lxg_buffer_free(&text);
}
END_TEST

START_TEST(depth_limit_is_exact) {
  for (int over = 0; over < 2; over++) {
    struct lxg_buffer text = {0};
    for (int i = 0; i < LXG_DOCUMENT_DEPTH + over; i++) {
      lxg_buffer_byte(&text, '[');
    }
    for (int i = 0; i < LXG_DOCUMENT_DEPTH + over; i++) {
      lxg_buffer_byte(&text, ']');
    }
    struct lxg_error error = {0};
    struct lxg_document *document = NULL;
    for (int format = 0; format < 2; format++) {
      ck_assert_int_eq(lxg_document_parse(text.data, text.size, "f",
                                          format == 0 ? LXG_DOCUMENT_YAML : LXG_DOCUMENT_JSON, &document,
                                          &error),
                       over == 0 ? LXG_OK : LXG_LIMIT);
      lxg_document_destroy(document);
    }
    lxg_buffer_free(&text);
  }
}
END_TEST

/* YAML 1.1 words and odd numbers stay text: nothing is guessed. */
START_TEST(types_are_asked_not_guessed) {
  struct lxg_document *const document = yaml("a: yes\nb: 010\nc: 12:30:00\nd: \"5\"\ne: 1_000\nf: [1]\ng: "
                                             "null\nh: .inf\ni: 1e999\nj: 0x1F\nk: True\nl: 7.5\n");
  struct lxg_node *const root = lxg_document_root(document);
  struct lxg_error error = {0};
  bool flag = false;
  double number = -3.5;
  long long whole = 4;
  const char *text = "kept";
  static const char *const not_numbers[] = {"a", "b", "c", "d", "e", "g", "h", "i", "j"};
  for (size_t i = 0; i < sizeof not_numbers / sizeof not_numbers[0]; i++) {
    ck_assert_int_eq(lxg_node_as_number(lxg_node_find(root, not_numbers[i]), &number, &error), LXG_INPUT);
    ck_assert_str_eq(error.code, "value-number");
  }
  ck_assert_int_eq(lxg_node_as_number(lxg_node_find(root, "f"), &number, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "kind-scalar");
  ck_assert_int_eq(lxg_node_as_bool(lxg_node_find(root, "a"), &flag, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_node_as_bool(lxg_node_find(root, "k"), &flag, &error), LXG_INPUT);
  ck_assert_str_eq(error.line[0], "case.yaml:11:4: error: k = True: must be true or false");
  ck_assert_int_eq(lxg_node_as_integer(lxg_node_find(root, "l"), &whole, &error), LXG_INPUT);
  ck_assert_str_eq(error.line[0], "case.yaml:12:4: error: l = 7.5: must be a whole number");
  ck_assert_int_eq(lxg_node_as_integer(lxg_node_find(root, "d"), &whole, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_node_as_text(lxg_node_find(root, "g"), &text, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "value-text");
  ck_assert(number == -3.5 && whole == 4);
  ck_assert_str_eq(text, "kept");
  ck_assert_int_eq(lxg_node_as_number(NULL, &number, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "key-missing");
  ck_assert_int_eq(lxg_node_as_mapping(NULL, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_node_as_sequence(lxg_node_find(root, "a"), &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "kind-sequence");
  lxg_document_destroy(document);
}
END_TEST

START_TEST(errors_name_place_path_and_choice) {
  struct lxg_document *const document =
      yaml("star:\n  mass: 1.0 Msum\n  kind: whitedwarf\n  note: \"line\\nbreak and a very long text that "
           "goes on and on and on and on\"\n");
  struct lxg_node *const star = lxg_node_find(lxg_document_root(document), "star");
  struct lxg_error error = {0};
  double mass = 0.0;
  ck_assert_int_eq(lxg_node_get_quantity(star, "mass", LXG_DIMENSION_MASS, NULL, NULL, &mass, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "unit-unknown");
  ck_assert_str_eq(error.line[0],
                   "case.yaml:2:9: error: star.mass = 1.0 Msum: unit = Msum: unknown, did you mean Msun?; "
                   "units of a mass: Msun, g, kg");
  static const char *const words[] = {"white-dwarf", "giant"};
  size_t index = 0;
  ck_assert_int_eq(lxg_node_get_word(star, "kind", words, 2, &index, &error), LXG_INPUT);
  ck_assert_str_eq(
      error.line[0],
      "case.yaml:3:9: error: star.kind = whitedwarf: did you mean white-dwarf? allowed: white-dwarf, giant");
  ck_assert_int_eq(lxg_node_get_word(star, "note", words, 2, &index, &error), LXG_INPUT);
  ck_assert_ptr_null(strchr(error.line[0], '\n'));
  ck_assert_ptr_nonnull(strstr(error.line[0], "...: allowed: white-dwarf, giant"));
  struct lxg_node *child = NULL;
  ck_assert_int_eq(lxg_node_require(star, "radius", &child, &error), LXG_INPUT);
  ck_assert_str_eq(error.line[0], "case.yaml:2:3: error: star: key radius is missing");
  ck_assert_int_eq(lxg_node_require(lxg_node_find(star, "mass"), "x", &child, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "kind-mapping");
  ck_assert_int_eq(lxg_node_require(NULL, "x", &child, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_node_check_range(lxg_node_find(star, "mass"), 2.0, 0.5, 1.4, "Msun", &error),
                   LXG_INPUT);
  ck_assert_ptr_nonnull(strstr(error.line[0], "must lie between 0.5 and 1.4 Msun"));
  ck_assert_int_eq(lxg_node_check_range(lxg_node_find(star, "mass"), (double)NAN, 0.5, 1.4, "Msun", &error),
                   LXG_INPUT);
  ck_assert_int_eq(lxg_node_check_range(NULL, 2.0, 0.5, 1.4, "Msun", &error), LXG_OK);
  lxg_document_destroy(document);
}
END_TEST

START_TEST(unknown_and_unused_keys) {
  static const char *const root_keys[] = {"case", "star", "errors"};
  static const char *const star_keys[] = {"mass", "radius"};
  struct lxg_error error = {0};
  struct lxg_document *document = yaml("case: 1\nstra: {mass: 1}\n");
  ck_assert_int_eq(lxg_node_check_keys(lxg_document_root(document), root_keys, 3, &error), LXG_INPUT);
  ck_assert_str_eq(error.line[0], "case.yaml:2:1: error: stra: unknown key; did you mean star?");
  lxg_document_destroy(document);

  document = yaml("case: 1\nstar:\n  mass: 1\n  radius: 2\nerrors: [{a: 1}]\n");
  struct lxg_node *const root = lxg_document_root(document);
  double value = 0.0;
  assert_status(lxg_node_check_keys(root, root_keys, 3, &error), LXG_OK, &error);
  assert_status(lxg_node_get_number(root, "case", &value, &error), LXG_OK, &error);
  struct lxg_node *const star = lxg_node_find(root, "star");
  assert_status(lxg_node_check_keys(star, star_keys, 2, &error), LXG_OK, &error);
  assert_status(lxg_node_get_number(star, "mass", &value, &error), LXG_OK, &error);
  ck_assert_int_eq(lxg_document_check_unused(document, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "key-unused");
  ck_assert_str_eq(
      error.line[0],
      "case.yaml:4:3: error: star.radius: nothing in this case uses this key; known here: mass, radius");
  lxg_node_find(star, "radius");
  struct lxg_node *const errors = lxg_node_find(root, "errors");
  ck_assert_int_eq(lxg_document_check_unused(document, &error), LXG_INPUT);
  ck_assert_str_eq(error.line[0], "case.yaml:5:10: error: errors[0]: nothing in this case uses this value");
  lxg_node_first(errors);
  ck_assert_int_eq(lxg_document_check_unused(document, &error), LXG_INPUT);
  ck_assert_ptr_nonnull(strstr(error.line[0], "errors[0].a"));
  lxg_node_use(errors);
  assert_status(lxg_document_check_unused(document, &error), LXG_OK, &error);
  assert_status(lxg_node_check_keys(NULL, star_keys, 2, &error), LXG_OK, &error);
  lxg_document_destroy(document);
}
END_TEST

static double number_at(struct lxg_document *document, const char *first, const char *second) {
  double value = (double)NAN;
  lxg_node_as_number(lxg_node_find(lxg_node_find(lxg_document_root(document), first), second), &value, NULL);
  return value;
}

START_TEST(overrides_change_the_tree) {
  struct lxg_document *const document = yaml("star: {mass: 1, radius: 2}\nlist: [1, {a: 5}]\nnone: ~\n");
  struct lxg_error error = {0};
  assert_status(lxg_document_override(document, "star.mass=1.25", &error), LXG_OK, &error);
  assert_status(lxg_document_override(document, "star.speed=3.5e2", &error), LXG_OK, &error);
  assert_status(lxg_document_override(document, "none.deep=4", &error), LXG_OK, &error);
  assert_status(lxg_document_override(document, "errors.a.b={c: [1, 2], d: \"x: y\"}", &error), LXG_OK,
                &error);
  assert_status(lxg_document_override(document, "list.1.a=6", &error), LXG_OK, &error);
  assert_status(lxg_document_override(document, "list.0=white-dwarf", &error), LXG_OK, &error);
  assert_status(lxg_document_override(document, "star.radius=", &error), LXG_OK, &error);
  assert_status(lxg_document_override(document, "star.last=a=b", &error), LXG_OK, &error);
  ck_assert(number_at(document, "star", "mass") == 1.25);
  ck_assert(number_at(document, "star", "speed") == 350.0);
  ck_assert(number_at(document, "none", "deep") == 4.0);
  struct lxg_buffer text = {0};
  assert_status(lxg_document_write_json(lxg_document_root(document), &text, &error), LXG_OK, &error);
  ck_assert_str_eq(
      text.data,
      "{\n  \"star\": {\n    \"mass\": 1.25,\n    \"radius\": null,\n    \"speed\": 350.0,\n"
      "    \"last\": \"a=b\"\n  },\n  \"list\": [\n    \"white-dwarf\",\n    {\n      \"a\": 6\n    }\n  ],\n"
      "  \"none\": {\n    \"deep\": 4\n  },\n  \"errors\": {\n    \"a\": {\n      \"b\": {\n"
      "        \"c\": [1, 2],\n        \"d\": \"x: y\"\n      }\n    }\n  }\n}\n");
  lxg_buffer_free(&text);
  double value = 0.0;
  ck_assert_int_eq(
      lxg_node_as_number(lxg_node_find(lxg_node_find(lxg_document_root(document), "star"), "last"), &value,
                         &error),
      LXG_INPUT);
  ck_assert_ptr_nonnull(strstr(error.line[0], "--set: error: star.last = a=b: must be a decimal number"));
  lxg_document_destroy(document);
}
END_TEST

static const struct {
  const char *assignment, *code;
} bad_overrides[] = {
    {"star.mass", "override-syntax"},
    {"=1", "override-syntax"},
    {"star..mass=1", "override-syntax"},
    {".a=1", "override-syntax"},
    {"a.=1", "override-syntax"},
    {"a b=1", "override-syntax"},
    {"star.mass.x=1", "override-path"},
    {"list.7=1", "override-path"},
    {"list.x=1", "override-path"},
    {"list.-1=1", "override-path"},
    {"star=[1", "document-syntax"},
    {"star=a: b", "document-refused"},
    {"star=- b", "document-refused"},
    {"star=&a 1", "document-refused"},
    {"star={a: 1, a: 2}", "key-duplicate"},
    {"star=\x80", "document-syntax"},
    {"star=1\n---\n2", "document-refused"},
};

START_TEST(refused_overrides) {
  struct lxg_document *const document = yaml("star: {mass: 1}\nlist: [1]\n");
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_document_override(document, bad_overrides[_i].assignment, &error), LXG_INPUT);
  ck_assert_msg(strcmp(error.code, bad_overrides[_i].code) == 0, "%s: %s", error.code, error.line[0]);
  ck_assert_msg(strncmp(error.line[0], "--set: error: ", 14) == 0, "%s", error.line[0]);
  ck_assert(number_at(document, "star", "mass") == 1.0);
  lxg_document_destroy(document);
}
END_TEST

START_TEST(override_depth_is_bounded) {
  struct lxg_document *const document = yaml("a: 1\n");
  struct lxg_error error = {0};
  struct lxg_buffer text = {0};
  for (int i = 0; i < 40; i++) {
    lxg_buffer_text(&text, i > 0 ? ".k" : "k");
  }
  lxg_buffer_byte(&text, '=');
  for (int i = 0; i < 30; i++) {
    lxg_buffer_byte(&text, '[');
  }
  ck_assert_int_eq(lxg_document_override(document, text.data, &error), LXG_LIMIT);
  text.size = 0;
  for (int i = 0; i < 100; i++) {
    lxg_buffer_text(&text, i > 0 ? ".k" : "k");
  }
  lxg_buffer_text(&text, "=1");
  ck_assert_int_eq(lxg_document_override(document, text.data, &error), LXG_INPUT);
  lxg_buffer_free(&text);
  lxg_document_destroy(document);
}
END_TEST

START_TEST(writing_is_safe_for_both_yaml_versions) {
  struct lxg_document *document = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_document_create("report", &document, &error), LXG_OK, &error);
  struct lxg_node *const root = lxg_document_root(document);
  lxg_node_add_text(root, "verdict", "no");
  lxg_node_add_text(root, "time", "12:30:00");
  lxg_node_add_text(root, "empty", "");
  lxg_node_add_text(root, "name", "nova \xC3\xA9\n\"x\"\\");
  lxg_node_add_text(root, "latin", "caf\xE9");
  lxg_node_add_text(root, "nothing", NULL);
  lxg_node_add_number(root, "luminosity_erg_s", 1.25e38);
  lxg_node_add_number(root, "unknown", (double)NAN);
  lxg_node_add_integer(root, "points", -9007199254740993);
  lxg_node_add_bool(root, "yes", true);
  lxg_node_add_mapping(root, "nil");
  struct lxg_node *const list = lxg_node_add_sequence(root, "list");
  lxg_node_add_number(list, NULL, 0.1);
  lxg_node_add_number(lxg_node_add_mapping(lxg_node_add_sequence(root, "deep"), NULL), "a", 2.0);
  assert_status(lxg_document_status(document, &error), LXG_OK, &error);
  struct lxg_buffer text = {0};
  assert_status(lxg_document_write_yaml(root, false, &text, &error), LXG_OK, &error);
  ck_assert_str_eq(
      text.data, "verdict: \"no\"\ntime: \"12:30:00\"\nempty: \"\"\nname: \"nova \xC3\xA9\\n\\\"x\\\"\\\\\"\n"
                 "latin: \"caf\xEF\xBF\xBD\"\nnothing: null\nluminosity_erg_s: 1.25e+38\nunknown: null\n"
                 "points: -9007199254740993\n\"yes\": true\nnil: {}\nlist: [0.1]\ndeep:\n- {a: 2.0}\n");
  struct lxg_document *again = NULL;
  assert_status(lxg_document_parse(text.data, text.size, "again", LXG_DOCUMENT_YAML, &again, &error), LXG_OK,
                &error);
  struct lxg_buffer first = {0}, second = {0};
  assert_status(lxg_document_write_json(root, &first, &error), LXG_OK, &error);
  assert_status(lxg_document_write_json(lxg_document_root(again), &second, &error), LXG_OK, &error);
  ck_assert_str_eq(first.data, second.data);
  text.size = 0;
  assert_status(lxg_document_write_yaml(root, true, &text, &error), LXG_OK, &error);
  for (size_t i = 0; i < text.size; i++) {
    ck_assert((unsigned char)text.data[i] < 0x80);
  }
  lxg_buffer_free(&text);
  lxg_buffer_free(&first);
  lxg_buffer_free(&second);
  lxg_document_destroy(again);
  lxg_document_destroy(document);
}
END_TEST

/* Digits of a JSON number survive reading and writing, where the value is the same double. */
START_TEST(digits_survive) {
  static const char text[] = "[1e5, 9007199254740993, -0, 0.1000000000000000055511151231257827, 1E-7, "
                             "123456789012345678901234567890]";
  struct lxg_document *const document = parse_as(text, "n.json", LXG_DOCUMENT_AUTO);
  struct lxg_error error = {0};
  struct lxg_buffer out = {0};
  ck_assert_str_eq(lxg_node_text(lxg_node_next(lxg_node_first(lxg_document_root(document)))),
                   "9007199254740993");
  assert_status(lxg_document_write_json(lxg_document_root(document), &out, &error), LXG_OK, &error);
  ck_assert_str_eq(out.data,
                   "[100000.0, 9007199254740993, -0, 0.1, 1.0e-07, 123456789012345678901234567890]\n");
  lxg_buffer_free(&out);
  lxg_document_destroy(document);
}
END_TEST

START_TEST(builder_failures_stick) {
  struct lxg_error error = {0};
  for (int fault = 0; fault < 5; fault++) {
    struct lxg_document *document = NULL;
    assert_status(lxg_document_create("report", &document, &error), LXG_OK, &error);
    struct lxg_node *node = lxg_document_root(document);
    lxg_node_add_number(node, "a", 1.0);
    if (fault == 0) {
      ck_assert_ptr_null(lxg_node_add_number(node, "a", 2.0)); /* twice */
    } else if (fault == 1) {
      ck_assert_ptr_null(lxg_node_add_number(node, NULL, 2.0)); /* no key in a mapping */
    } else if (fault == 2) {
      ck_assert_ptr_null(
          lxg_node_add_text(lxg_node_add_sequence(node, "s"), "k", "x")); /* key in a sequence */
    } else if (fault == 3) {
      ck_assert_ptr_null(lxg_node_add_bool(lxg_node_add_none(node, "s"), "k", true)); /* under a scalar */
    } else {
      while (node != NULL) { /* too deep */
        node = lxg_node_add_mapping(node, "m");
      }
    }
    ck_assert_ptr_null(lxg_node_add_mapping(NULL, "x"));
    ck_assert_int_eq(lxg_document_status(document, &error), fault < 4 ? LXG_BUG : LXG_LIMIT);
    lxg_document_destroy(document);
  }
  ck_assert_int_eq(lxg_document_status(NULL, &error), LXG_MEMORY);
  lxg_document_destroy(NULL);
}
END_TEST

START_TEST(copies_are_deep) {
  struct lxg_document *const source = yaml(case_yaml);
  struct lxg_document *document = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_document_create("report", &document, &error), LXG_OK, &error);
  lxg_node_add_copy(lxg_document_root(document), "case", lxg_document_root(source));
  lxg_node_add_copy(lxg_document_root(document), "none", NULL);
  lxg_node_add_copy(lxg_document_root(document), "flag", lxg_node_find(lxg_document_root(source), "flag"));
  assert_status(lxg_document_status(document, &error), LXG_OK, &error);
  struct lxg_buffer expected = {0}, copied = {0};
  assert_status(lxg_document_write_json(lxg_document_root(source), &expected, &error), LXG_OK, &error);
  lxg_document_destroy(source);
  struct lxg_node *const copy = lxg_node_find(lxg_document_root(document), "case");
  assert_status(lxg_document_write_json(copy, &copied, &error), LXG_OK, &error);
  ck_assert_str_eq(copied.data, expected.data);
  lxg_buffer_free(&expected);
  lxg_buffer_free(&copied);
  lxg_document_destroy(document);
}
END_TEST

/* Files and standard input. */
START_TEST(files_are_read) {
  char path[] = "/tmp/luxgale-document-XXXXXX";
  const int file = mkstemp(path);
  ck_assert_int_ge(file, 0);
  struct lxg_error error = {0};
  assert_status(lxg_output_write(path, case_json, strlen(case_json), &error), LXG_OK, &error);
  struct lxg_document *document = NULL;
  assert_status(lxg_document_read(path, LXG_DOCUMENT_AUTO, &document, &error), LXG_OK, &error);
  ck_assert_str_eq(lxg_document_name(document), path);
  lxg_document_destroy(document);
  const int saved = dup(STDIN_FILENO);
  close(file);
  ck_assert_ptr_nonnull(freopen(path, "r", stdin));
  assert_status(lxg_document_read("-", LXG_DOCUMENT_AUTO, &document, &error), LXG_OK, &error);
  ck_assert_str_eq(lxg_node_file(lxg_document_root(document)), "<stdin>");
  lxg_document_destroy(document);
  dup2(saved, STDIN_FILENO);
  close(saved);
  unlink(path);
  ck_assert_int_eq(lxg_document_read(path, LXG_DOCUMENT_AUTO, &document, &error), LXG_IO);
  ck_assert_int_eq(lxg_document_read("/dev/zero", LXG_DOCUMENT_AUTO, &document, &error), LXG_LIMIT);
  ck_assert_ptr_null(document);
}
END_TEST

/* Every prefix of both cases is read or refused; nothing else. */
START_TEST(truncated_everywhere) {
  static const char *const cases[] = {case_yaml, case_json};
  for (size_t which = 0; which < 2; which++) {
    for (size_t size = 0; size < strlen(cases[which]); size++) {
      struct lxg_document *document = NULL;
      struct lxg_error error = {0};
      const enum lxg_status status = lxg_document_parse(
          cases[which], size, "f", which == 0 ? LXG_DOCUMENT_YAML : LXG_DOCUMENT_JSON, &document, &error);
      ck_assert(status == LXG_INPUT || (status == LXG_OK && (which == 0 || size + 1 == strlen(case_json))));
      lxg_document_destroy(document);
    }
  }
}
END_TEST

Suite *suite_document(void);
Suite *suite_document(void) {
  Suite *suite = suite_create("document");
  TCase *tests = tcase_create("document");
  tcase_set_timeout(tests, 60);
  tcase_add_loop_test(tests, both_formats_agree, 0, 2);
  tcase_add_loop_test(tests, positions_are_kept, 0, 2);
  tcase_add_loop_test(tests, refusals, 0, sizeof refused / sizeof refused[0]);
  tcase_add_test(tests, zero_byte_is_refused);
  tcase_add_loop_test(tests, bombs_are_refused_quickly, 0, sizeof bombs / sizeof bombs[0]);
  tcase_add_test(tests, many_keys);
  tcase_add_test(tests, depth_limit_is_exact);
  tcase_add_test(tests, types_are_asked_not_guessed);
  tcase_add_test(tests, errors_name_place_path_and_choice);
  tcase_add_test(tests, unknown_and_unused_keys);
  tcase_add_test(tests, overrides_change_the_tree);
  tcase_add_loop_test(tests, refused_overrides, 0, sizeof bad_overrides / sizeof bad_overrides[0]);
  tcase_add_test(tests, override_depth_is_bounded);
  tcase_add_test(tests, writing_is_safe_for_both_yaml_versions);
  tcase_add_test(tests, digits_survive);
  tcase_add_test(tests, builder_failures_stick);
  tcase_add_test(tests, copies_are_deep);
  tcase_add_test(tests, files_are_read);
  tcase_add_test(tests, truncated_everywhere);
  suite_add_tcase(suite, tests);
  return suite;
}
