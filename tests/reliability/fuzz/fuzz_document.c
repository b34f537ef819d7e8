/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fuzz_document.c - documents (document.h). FUZZ_FORMAT is the format. What was read is written in both formats and read
 * again; the third text must equal the second.
 */
#include "fuzz.h"
#include "luxgale/document.h"
#include "luxgale/text.h"

static void again(const struct lxg_buffer *first, bool json) {
  struct lxg_document *document = NULL;
  struct lxg_error error = {0};
  struct lxg_buffer second = {0};
  const enum lxg_document_format format = json ? LXG_DOCUMENT_JSON : LXG_DOCUMENT_YAML;
  const enum lxg_status status =
      lxg_document_parse(first->data, first->size, "again", format, &document, &error);
  fuzz_explained(status, &error);
  if (status == LXG_LIMIT || status == LXG_MEMORY) {
    return; /* escapes made a text longer than a reader takes */
  }
  if (status != LXG_OK) {
    fprintf(stderr, "%s\n%s\n", error.line[0], first->data);
    abort();
  }
  if (json) {
    lxg_document_write_json(lxg_document_root(document), &second, &error);
  } else {
    lxg_document_write_yaml(lxg_document_root(document), false, &second, &error);
  }
  if (first->size != second.size || memcmp(first->data, second.data, first->size) != 0) {
    fprintf(stderr, "%s\nbecame\n%s\n", first->data, second.data);
    abort();
  }
  lxg_buffer_free(&second);
  lxg_document_destroy(document);
}

static void walk(struct lxg_node *node, int *left) {
  char path[64];
  double number = 0.0;
  bool flag = false;
  long long integer = 0;
  struct lxg_error error = {0};
  lxg_node_path(node, path, sizeof path);
  if (lxg_node_kind(node) == LXG_NODE_SCALAR) {
    fuzz_explained(lxg_node_as_number(node, &number, &error), &error);
    fuzz_explained(lxg_node_as_integer(node, &integer, &error), &error);
    fuzz_explained(lxg_node_as_bool(node, &flag, &error), &error);
  }
  for (struct lxg_node *child = lxg_node_first(node); child != NULL && (*left)-- > 0;
       child = lxg_node_next(child)) {
    walk(child, left);
  }
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
  struct lxg_document *document = NULL;
  struct lxg_error error = {0};
  const enum lxg_status status =
      lxg_document_parse((const char *)data, size, "input", FUZZ_FORMAT, &document, &error);
  fuzz_explained(status, &error);
  if ((status == LXG_OK) != (document != NULL)) {
    abort();
  }
  if (status == LXG_OK) {
    int left = 200;
    struct lxg_node *root = lxg_document_root(document);
    struct lxg_buffer yaml = {0}, json = {0};
    lxg_document_check_unused(document, &error);
    walk(root, &left);
    lxg_document_write_yaml(root, false, &yaml, &error);
    lxg_document_write_json(root, &json, &error);
    again(&yaml, false);
    again(&json, true);
    lxg_buffer_free(&yaml);
    lxg_buffer_free(&json);
  }
  lxg_document_destroy(document);
  return 0;
}
