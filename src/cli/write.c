/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * write.c - results to files, and messages to standard error.
 */
#include "cli.h"

#include "luxgale/output.h"
#include "luxgale/table.h"
#include "luxgale/text.h"

#include <stdio.h>
#include <string.h>

static bool has_suffix(const char *path, const char *suffix) {
  const size_t length = strlen(path), tail = strlen(suffix);
  return length >= tail && strcmp(path + length - tail, suffix) == 0;
}

void cli_complain(const struct lxg_error *error) {
  const char *text = error->count > 0 ? error->line[0] : lxg_strerror(error->status);
  const bool placed = strstr(text, ": error: ") != NULL; /* FILE:LINE:COL: error: ... */
  fprintf(stderr, "luxgale: %s%s%s%s%s\n", placed ? "" : "error: ", text, error->code[0] != '\0' ? " [" : "",
          error->code, error->code[0] != '\0' ? "]" : "");
  for (size_t i = 1; i < error->count; i++) {
    fprintf(stderr, "luxgale:   while %s\n", error->line[i]);
  }
}

static enum lxg_status put(const struct cli_request *request, const char *path, struct lxg_buffer *bytes,
                           enum lxg_status status, struct lxg_error *error) {
  if (status == LXG_OK) {
    status = lxg_buffer_status(bytes, error);
  }
  if (status == LXG_OK) {
    status = lxg_output_write(path, bytes->data, bytes->size, error);
  }
  if (status == LXG_OK && request->verbose) {
    fprintf(stderr, "luxgale: wrote %s\n", strcmp(path, "-") == 0 ? "standard output" : path);
  }
  lxg_buffer_free(bytes);
  return status;
}

static enum lxg_status write_table(const struct cli_request *request, const char *path,
                                   const struct lxg_table *table, struct lxg_error *error) {
  struct lxg_buffer bytes = {0};
  return put(request, path, &bytes, lxg_table_write_ecsv(table, &bytes, error), error);
}

static enum lxg_status write_report(const struct cli_request *request, const struct lxg_document *report,
                                    struct lxg_error *error) {
  struct lxg_buffer bytes = {0};
  struct lxg_node *root = lxg_document_root((struct lxg_document *)report);
  const bool folder = (request->command->options & CLI_TAKES_FOLDER) != 0;
  const char *place = folder ? "-" : request->output;
  const bool json = request->format == LXG_DOCUMENT_JSON ||
                    (request->format == LXG_DOCUMENT_AUTO && has_suffix(place, ".json"));
  const enum lxg_status status = json ? lxg_document_write_json(root, &bytes, error)
                                      : lxg_document_write_yaml(root, false, &bytes, error);
  return put(request, place, &bytes, status, error);
}

static void tell_warnings(struct lxg_document *report) {
  struct lxg_node *list = report != NULL ? lxg_node_find(lxg_document_root(report), "warnings") : NULL;
  for (struct lxg_node *warning = lxg_node_first(list); warning != NULL; warning = lxg_node_next(warning)) {
    fprintf(stderr, "luxgale: warning: %s [%s]\n", lxg_node_text(lxg_node_find(warning, "message")),
            lxg_node_text(lxg_node_find(warning, "code")));
  }
}

enum lxg_status cli_write(const struct cli_request *request, struct lxg_results *results,
                          struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  if (request->epochs != NULL && results->epochs != NULL) {
    status = write_table(request, request->epochs, results->epochs, error);
  }
  if (status == LXG_OK && request->structure != NULL && results->structure != NULL) {
    status = write_table(request, request->structure, results->structure, error);
  }
  if (status == LXG_OK) {
    const bool as_table = has_suffix(request->output, ".ecsv") || results->report == NULL;
    if (as_table && results->epochs != NULL) {
      status = write_table(request, request->output, results->epochs, error);
    } else if (!as_table) {
      status = write_report(request, results->report, error);
    }
  }
  if (status == LXG_OK && !request->quiet) {
    tell_warnings(results->report);
  }
  if (!results->answered) {
    fprintf(stderr, "luxgale: %s: no answer: %s [%s]\n", request->case_path, results->why.line[0],
            results->why.code);
  }
  return status;
}
