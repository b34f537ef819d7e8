/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fuzz_file.c - readers that take the name of a file. FUZZ_FILE picks one: a whole case (1), line measurements (2), an own
 * opacity table (3). The file lives in memory; the working folder is one where a case finds nothing to read.
 */
#define _GNU_SOURCE
#include "fuzz.h"
#include "luxgale/lines.h"
#include "luxgale/opacity_table.h"
#include "luxgale/run.h"

#include <gsl/gsl_errno.h>
#include <sys/mman.h>
#include <unistd.h>

static enum lxg_status read_it(const char *path, struct lxg_error *error) {
#if FUZZ_FILE == 1
  struct lxg_case input;
  const enum lxg_status status = lxg_case_read(&input, path, NULL, 0, error);
  if (status == LXG_OK) {
    struct lxg_document *document = NULL;
    lxg_document_create("echo", &document, error);
    lxg_case_echo(&input, lxg_document_root(document));
    const enum lxg_status echoed = lxg_document_status(document, error);
    lxg_document_destroy(document);
    lxg_case_free(&input);
    return echoed;
  }
#elif FUZZ_FILE == 2
  struct lxg_lines *lines = NULL;
  const enum lxg_status status = lxg_lines_read(path, &lines, NULL, error);
  lxg_lines_destroy(lines);
#else
  struct lxg_opacity_grid *grid = NULL;
  const enum lxg_status status = lxg_opacity_grid_read(path, &grid, error);
  lxg_opacity_grid_destroy(grid);
#endif
  return status;
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
  static int file = -1; /* one for the whole run */
  char path[64];
  struct lxg_error error = {0};
  if (file < 0) {
    gsl_set_error_handler_off();
    file = memfd_create("input", 0);
  }
  if (file < 0 || ftruncate(file, 0) != 0 || pwrite(file, data, size, 0) != (ssize_t)size) {
    abort();
  }
  snprintf(path, sizeof path, "/proc/self/fd/%d", file);
  fuzz_explained(read_it(path, &error), &error);
  return 0;
}
