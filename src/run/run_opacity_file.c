/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_opacity_file.c - `opacity check` and `opacity import`: table files looked over and taken in (see run.h).
 *
 * A file whose first line declares ECSV is one of our own tables; anything else is read as blocks of a published layout. The
 * composition comes from the file; where it says none, from the options.
 */
#include "luxgale/input.h"
#include "luxgale/opacity_table.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <errno.h>
#include <math.h>
#include <string.h>
#include <sys/stat.h>

static const char *const own_mark = "# %ECSV";

/* Whether the options give a composition, which is then checked. */
static enum lxg_status given_composition(const struct lxg_run_opacity *asked, bool *given,
                                         struct lxg_composition *composition, struct lxg_error *error) {
  *given = !isnan(asked->hydrogen) || !isnan(asked->metals) || !isnan(asked->helium) || !isnan(asked->cno);
  if (!*given) {
    return LXG_OK;
  }
  if (isnan(asked->hydrogen) || isnan(asked->metals)) {
    return lxg_error_set(error, LXG_USAGE, "opacity-composition",
                         "a composition needs both --hydrogen and --metals");
  }
  composition->hydrogen = asked->hydrogen;
  composition->metals = asked->metals;
  composition->cno = isnan(asked->cno) ? 0.0 : asked->cno;
  composition->helium = isnan(asked->helium)
                            ? 1.0 - composition->hydrogen - composition->metals - composition->cno
                            : asked->helium;
  return lxg_composition_check(composition, error);
}

static enum lxg_status is_own(const char *path, bool *own, struct lxg_error *error) {
  struct lxg_input input = {0};
  char block[16] = "";
  size_t got = 0;
  enum lxg_status status = lxg_input_open(&input, path, error);
  if (status == LXG_OK) {
    status = lxg_input_block(&input, block, sizeof block - 1, &got, error);
    lxg_input_close(&input);
  }
  *own = got >= strlen(own_mark) && strncmp(block, own_mark, strlen(own_mark)) == 0;
  return status;
}

/* The tables of a file, own or published. */
static enum lxg_status read_tables(const struct lxg_run_opacity *asked, bool own, struct lxg_opacity_set *set,
                                   struct lxg_error *error) {
  struct lxg_composition composition = {0};
  bool given = false;
  enum lxg_status status = given_composition(asked, &given, &composition, error);
  if (status != LXG_OK) {
    return status;
  }
  if (own) {
    return given ? lxg_error_set(error, LXG_USAGE, "opacity-composition",
                                 "%s says its own composition: none may be given", asked->file)
                 : lxg_opacity_set_read(&asked->file, 1, set, error);
  }
  const struct lxg_opacity_import_options options = {
      .composition = given ? &composition : NULL, .source = asked->source, .date = asked->date};
  return lxg_opacity_import(asked->file, &options, set, error);
}

enum lxg_status lxg_run_opacity_check(const struct lxg_case *input, const struct lxg_run_options *options,
                                      struct lxg_results *results, struct lxg_error *error) {
  (void)input;
  struct lxg_opacity_set set = {0};
  bool own = false;
  *results = (struct lxg_results){.answered = true};
  enum lxg_status status = is_own(options->opacity.file, &own, error);
  if (status == LXG_OK) {
    status = read_tables(&options->opacity, own, &set, error);
  }
  if (status == LXG_OK) {
    status = lxg_report_create("opacity check", &results->report, error);
  }
  if (status == LXG_OK) {
    struct lxg_node *root = lxg_document_root(results->report);
    struct lxg_node *tables = lxg_node_add_sequence(root, "tables");
    struct lxg_node *warnings = lxg_report_warnings(root);
    for (size_t i = 0; i < set.count && status == LXG_OK; i++) {
      struct lxg_opacity_findings findings;
      status = lxg_opacity_check(set.grid[i], NULL, &findings, error);
      if (status == LXG_OK) {
        lxg_report_opacity_findings(tables, warnings, set.grid[i], &findings);
      }
    }
  }
  if (status == LXG_OK) {
    status = lxg_document_status(results->report, error);
  }
  lxg_opacity_set_free(&set);
  return status;
}

static enum lxg_status make_folder(const char *folder, struct lxg_error *error) {
  if (mkdir(folder, 0777) != 0 && errno != EEXIST) {
    return lxg_error_set(error, LXG_IO, "write-folder", "%s: %s", folder, strerror(errno));
  }
  return LXG_OK;
}

enum lxg_status lxg_run_opacity_import(const struct lxg_case *input, const struct lxg_run_options *options,
                                       struct lxg_results *results, struct lxg_error *error) {
  (void)input;
  const struct lxg_run_opacity *asked = &options->opacity;
  struct lxg_opacity_set set = {0};
  bool own = false;
  *results = (struct lxg_results){.answered = true};
  if (asked->folder == NULL || strcmp(asked->folder, "-") == 0) {
    return lxg_error_set(error, LXG_USAGE, "opacity-folder",
                         "opacity import: --output FOLDER says where the tables go");
  }
  enum lxg_status status = is_own(asked->file, &own, error);
  if (status == LXG_OK && own) {
    return lxg_error_set(error, LXG_INPUT, "opacity-own",
                         "%s:1:1: error: this is a table of luxgale's own format already", asked->file);
  }
  if (status == LXG_OK) {
    status = read_tables(asked, own, &set, error);
  }
  if (status == LXG_OK) {
    status = make_folder(asked->folder, error);
  }
  if (status == LXG_OK) {
    status = lxg_opacity_set_write(&set, asked->folder, error);
  }
  if (status == LXG_OK) {
    status = lxg_report_create("opacity import", &results->report, error);
  }
  if (status == LXG_OK) {
    struct lxg_node *root = lxg_document_root(results->report);
    lxg_report_opacity_import(root, &set, asked->folder);
    lxg_report_warnings(root);
    status = lxg_document_status(results->report, error);
  }
  lxg_opacity_set_free(&set);
  return status;
}
