/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * cli.h - the parts of the program: one table of commands and options, the request they form, help and writing.
 */
#ifndef LUXGALE_CLI_H
#define LUXGALE_CLI_H

#include "luxgale/document.h"
#include "luxgale/run.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* Options, in the order of the table; a command names those it takes as bits. */
enum cli_option_id {
  CLI_OUTPUT,
  CLI_FORMAT,
  CLI_SET,
  CLI_EPOCHS,
  CLI_STRUCTURE,
  CLI_BRANCH,
  CLI_THREADS,
  CLI_SEED,
  CLI_POINTS,
  CLI_LOG_T,
  CLI_LOG_R,
  CLI_HYDROGEN,
  CLI_HELIUM,
  CLI_CNO,
  CLI_METALS,
  CLI_SOURCE,
  CLI_DATE,
  CLI_QUIET,
  CLI_VERBOSE,
  CLI_HELP,
  CLI_VERSION,
  CLI_OPTIONS
};
#define CLI_BIT(option) (1ull << (unsigned)(option))

/* Not options: what is special about a command. */
#define CLI_TAKES_FILE (1ull << 63) /* its operand is a file of its own kind, not a case */
#define CLI_TAKES_FOLDER                                                                                     \
  (1ull << 62) /* --output is a folder for what it makes; the report goes to standard output */

/* Options that every command takes. */
#define CLI_COMMON                                                                                           \
  (CLI_BIT(CLI_OUTPUT) | CLI_BIT(CLI_FORMAT) | CLI_BIT(CLI_SET) | CLI_BIT(CLI_THREADS) | CLI_BIT(CLI_SEED) | \
   CLI_BIT(CLI_QUIET) | CLI_BIT(CLI_VERBOSE) | CLI_BIT(CLI_HELP) | CLI_BIT(CLI_VERSION))

struct cli_option {
  const char *name;     /* after -- */
  char letter;          /* after -, 0 if none */
  const char *argument; /* name of the argument, NULL if none */
  const char *sentence;
};

struct cli_command {
  const char *name; /* one word, or two: a group and what it does */
  const char *sentence;
  const char *needs;          /* what the case must hold */
  unsigned long long options; /* bits, common ones included */
  enum lxg_status (*run)(const struct lxg_case *input, const struct lxg_run_options *options,
                         struct lxg_results *results, struct lxg_error *error);
  const char *example;
};

/* Rows: NULL beyond the end. */
const struct cli_command *cli_command_row(size_t index);
const struct cli_command *cli_command_find(const char *name);

/* The command of one or two words; `*words` is how many it has. NULL if there is none. */
const struct cli_command *cli_command_match(const char *first, const char *second, int *words);
const struct cli_option *cli_option_row(size_t index);

/* A command line, understood. Texts are borrowed from argv. */
struct cli_request {
  const struct cli_command *command;
  const char *case_path;
  const char *output; /* "-" by default */
  enum lxg_document_format format;
  const char **set; /* overrides, to be freed by lxg_free */
  size_t set_count;
  const char *epochs, *structure; /* files, NULL if not asked for */
  bool quiet, verbose;
  bool help, version;
  struct lxg_run_options run;
};

/* Understands argv[1...]. LXG_USAGE with a sentence. */
enum lxg_status cli_request_read(struct cli_request *request, int argc, char **argv, struct lxg_error *error);

/* Prints the general help, or that of a topic: a command, case, units, settings, reasons, or the path of a key;
 * `second` is the second word of a command, or NULL. LXG_USAGE for an unknown one. */
enum lxg_status cli_help(const char *topic, const char *second, struct lxg_error *error);
enum lxg_status cli_version(struct lxg_error *error);

/* Prints "luxgale: FILE:LINE:COL: error: text [code]" and its contexts. */
void cli_complain(const struct lxg_error *error);

/* Writes what a command gave to the places that were asked for. */
enum lxg_status cli_write(const struct cli_request *request, struct lxg_results *results,
                          struct lxg_error *error);

#endif
