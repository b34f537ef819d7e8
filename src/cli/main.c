/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * main.c - the program: understand the command line, read the case, run the command, write what it gave.
 *
 * Nothing here computes. GSL's default error handler would abort the process, so it is switched off before anything else.
 */
#include "cli.h"

#include "luxgale/memory.h"

#include <errno.h>
#include <gsl/gsl_errno.h>
#include <signal.h>
#include <stdio.h>
#include <string.h>

/* A place for the table is asked for by --epochs, or by an output that ends in .ecsv. */
static bool wants_table(const struct cli_request *request) {
  const size_t length = strlen(request->output);
  const bool as_table = length >= 5 && strcmp(request->output + length - 5, ".ecsv") == 0;
  return request->epochs != NULL || as_table;
}

static void tell_files(const struct cli_request *request, const struct lxg_case *input) {
  if (request->verbose) {
    fprintf(stderr, "luxgale: read %s\n", request->case_path);
    for (size_t i = 0; i < input->files.count; i++) {
      fprintf(stderr, "luxgale: read %s for %s\n", input->files.file[i].name, input->files.file[i].key);
    }
  }
}

/* 0, or 1 when the physics gave no full answer; else the exit status of the failure. */
static int run(struct cli_request *request, struct lxg_error *error) {
  struct lxg_case input = {0};
  struct lxg_results results = {0};
  enum lxg_status status = LXG_OK;
  if (!(request->command->options & CLI_TAKES_FILE)) {
    status = lxg_case_read(&input, request->case_path, request->set, request->set_count, error);
  }
  if (status != LXG_OK) {
    return lxg_status_exit(status);
  }
  tell_files(request, &input);
  request->run.epochs = wants_table(request);
  request->run.structure = request->structure != NULL;
  status = request->command->run(&input, &request->run, &results, error);
  if (status == LXG_OK) {
    status = cli_write(request, &results, error);
  }
  const int answer = results.answered ? 0 : 1;
  lxg_results_free(&results);
  lxg_case_free(&input);
  return status == LXG_OK ? answer : lxg_status_exit(status);
}

static int dispatch(int argc, char **argv, struct lxg_error *error) {
  if (argc > 1 && strcmp(argv[1], "help") == 0) {
    return lxg_status_exit(cli_help(argc > 2 ? argv[2] : NULL, argc > 3 ? argv[3] : NULL, error));
  }
  struct cli_request request;
  enum lxg_status status = cli_request_read(&request, argc, argv, error);
  int answer = lxg_status_exit(status);
  if (status == LXG_OK && request.help) {
    answer = lxg_status_exit(cli_help(request.command != NULL ? request.command->name : NULL, NULL, error));
  } else if (status == LXG_OK && request.version) {
    answer = lxg_status_exit(cli_version(error));
  } else if (status == LXG_OK) {
    answer = run(&request, error);
  }
  lxg_free(request.set);
  return answer;
}

int main(int argc, char **argv) {
  gsl_set_error_handler_off();
  signal(SIGPIPE, SIG_IGN); /* a failed write is an error with a message, not a death */
  signal(SIGXFSZ, SIG_IGN);
  struct lxg_error error = {0};
  errno = 0;
  const int answer = dispatch(argc, argv, &error);
  const bool reader_left = error.status == LXG_IO && errno == EPIPE;
  if (answer > 1 && !reader_left) {
    cli_complain(&error);
    if (error.status == LXG_USAGE) {
      fputs("Try `luxgale help`.\n", stderr);
    }
  }
  return answer;
}
