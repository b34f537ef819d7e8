/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fuzz_set.c - the argument of --set (lxg_document_override), twice on one document.
 */
#include "fuzz.h"
#include "luxgale/document.h"

static const char base[] = "a: 1\nb: {c: [1, 2, {d: x}]}\nhold: {base_temperature: 1e8 K}\n";

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
  struct lxg_document *document = NULL;
  struct lxg_error error = {0};
  if (lxg_document_parse(base, sizeof base - 1, "base", LXG_DOCUMENT_YAML, &document, &error) != LXG_OK) {
    abort();
  }
  char *text = fuzz_text(data, size);
  for (int i = 0; i < 2; i++) {
    lxg_error_clear(&error);
    fuzz_explained(lxg_document_override(document, text, &error), &error);
  }
  struct lxg_buffer yaml = {0};
  lxg_document_write_yaml(lxg_document_root(document), true, &yaml, &error);
  lxg_buffer_free(&yaml);
  lxg_document_destroy(document);
  free(text);
  return 0;
}
