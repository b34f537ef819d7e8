/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * answer.c - a command's results behind texts and arrays (see answer.h).
 */
#include "luxgale/answer.h"

#include "luxgale/memory.h"
#include "luxgale/run.h"
#include "luxgale/text.h"

#include <string.h>

enum { TABLES = 7 };

struct lxg_answer {
  struct lxg_results results;
  struct lxg_buffer report; /* JSON */
  size_t tables;
  const char *name[TABLES];
  const struct lxg_table *table[TABLES];
};

static const struct {
  const char *name;
  enum lxg_status (*run)(const struct lxg_case *input, const struct lxg_run_options *options,
                         struct lxg_results *results, struct lxg_error *error);
} commands[] = {{"outburst", lxg_run_outburst}, {"wind", lxg_run_wind},   {"family", lxg_run_family},
                {"decline", lxg_run_decline},   {"lines", lxg_run_lines}, {"mass", lxg_run_mass},
                {"star", lxg_run_star}};
enum { COMMANDS = sizeof commands / sizeof commands[0] };

static void add_table(struct lxg_answer *answer, const char *name, const struct lxg_table *table) {
  if (table != NULL) {
    answer->name[answer->tables] = name;
    answer->table[answer->tables++] = table;
  }
}

static enum lxg_status fill(struct lxg_answer *answer, size_t command, const struct lxg_case *input,
                            struct lxg_error *error) {
  const struct lxg_run_options options = {.epochs = true, .structure = true, .pictures = true};
  struct lxg_results *const results = &answer->results;
  enum lxg_status status = commands[command].run(input, &options, results, error);
  if (status == LXG_OK) {
    status = lxg_document_write_json(lxg_document_root(results->report), &answer->report, error);
  }
  if (status == LXG_OK) {
    status = lxg_buffer_status(&answer->report, error);
  }
  const bool members = results->epochs != NULL && lxg_table_find(results->epochs, "time_d") == NULL;
  add_table(answer, members ? "family" : "epochs", results->epochs);
  add_table(answer, "family", results->family);
  add_table(answer, "structure", results->structure);
  add_table(answer, "opacity-map", results->map);
  add_table(answer, "profiles", results->profiles);
  add_table(answer, "shell", results->shell);
  add_table(answer, "velocities", results->velocities);
  return status;
}

static enum lxg_status find_command(const char *name, size_t *command, struct lxg_error *error) {
  const char *names[COMMANDS];
  for (size_t i = 0; i < (size_t)COMMANDS; i++) {
    names[i] = commands[i].name;
    if (strcmp(names[i], name) == 0) {
      *command = i;
      return LXG_OK;
    }
  }
  const char *const near = lxg_text_nearest(name, names, COMMANDS);
  return lxg_error_set(error, LXG_USAGE, "command-unknown", "%s: no such command%s%s%s", name,
                       near != NULL ? "; did you mean " : "", near != NULL ? near : "",
                       near != NULL ? "?" : "");
}

enum lxg_status lxg_answer_create(const char *command, const char *path, const char *const overrides[],
                                  size_t count, struct lxg_answer **answer, struct lxg_error *error) {
  struct lxg_case input;
  size_t row = 0;
  *answer = NULL;
  enum lxg_status status = find_command(command, &row, error);
  if (status == LXG_OK) {
    status = lxg_case_read(&input, path, overrides, count, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_answer *const made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    status = lxg_error_set(error, LXG_MEMORY, "memory", "answer: out of memory");
  } else {
    *made = (struct lxg_answer){0};
    status = fill(made, row, &input, error);
  }
  lxg_case_free(&input);
  if (status != LXG_OK) {
    lxg_answer_destroy(made);
    return status;
  }
  *answer = made;
  return LXG_OK;
}

void lxg_answer_destroy(struct lxg_answer *answer) {
  if (answer != NULL) {
    lxg_results_free(&answer->results);
    lxg_buffer_free(&answer->report);
    lxg_free(answer);
  }
}

int lxg_answer_full(const struct lxg_answer *answer) {
  return answer->results.answered ? 1 : 0;
}

const char *lxg_answer_report(const struct lxg_answer *answer) {
  return answer->report.data;
}

const char *lxg_answer_table(const struct lxg_answer *answer, size_t index) {
  return index < answer->tables ? answer->name[index] : NULL;
}

static const struct lxg_table *find(const struct lxg_answer *answer, const char *table) {
  for (size_t i = 0; i < answer->tables; i++) {
    if (strcmp(answer->name[i], table) == 0) {
      return answer->table[i];
    }
  }
  return NULL;
}

const char *lxg_answer_column_name(const struct lxg_answer *answer, const char *table, size_t index) {
  const struct lxg_table *const found = find(answer, table);
  return found != NULL && index < found->columns ? found->column[index].name : NULL;
}

const char *lxg_answer_column_unit(const struct lxg_answer *answer, const char *table, size_t index) {
  const struct lxg_table *const found = find(answer, table);
  return found != NULL && index < found->columns ? found->column[index].unit : NULL;
}

const double *lxg_answer_column(const struct lxg_answer *answer, const char *table, const char *column,
                                size_t *rows) {
  const struct lxg_table *const found = find(answer, table);
  const struct lxg_column *const here = found != NULL ? lxg_table_find(found, column) : NULL;
  *rows = found != NULL ? found->rows : 0;
  return here != NULL ? here->number : NULL;
}

const char *lxg_answer_text(const struct lxg_answer *answer, const char *table, const char *column,
                            size_t row) {
  const struct lxg_table *const found = find(answer, table);
  const struct lxg_column *const here = found != NULL ? lxg_table_find(found, column) : NULL;
  return here != NULL && here->type == LXG_COLUMN_TEXT && row < found->rows ? lxg_table_text(found, here, row)
                                                                            : NULL;
}
