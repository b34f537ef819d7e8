/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * options.c - the command line into a request, by the table of commands.c.
 */
#include "cli.h"

#include "luxgale/memory.h"
#include "luxgale/text.h"

#include <getopt.h>
#include <stdint.h>
#include <string.h>

enum { CLI_COMMANDS = 32 }; /* room for names of commands in a message */
enum { LONG_BASE = 256 };   /* value of the first long option for getopt_long */

static const long long most_threads = 1024;

/* The table in the form that getopt_long wants. */
static void fill_getopt(struct option longs[CLI_OPTIONS + 1], char shorts[3 * CLI_OPTIONS + 2]) {
  size_t at = 0;
  shorts[at++] = ':';
  for (size_t i = 0; i < CLI_OPTIONS; i++) {
    const struct cli_option *option = cli_option_row(i);
    longs[i] = (struct option){option->name, option->argument != NULL, NULL, LONG_BASE + (int)i};
    if (option->letter != 0) {
      shorts[at++] = option->letter;
      if (option->argument != NULL) {
        shorts[at++] = ':';
      }
    }
  }
  longs[CLI_OPTIONS] = (struct option){0};
  shorts[at] = '\0';
}

static size_t option_of(int got) {
  for (size_t i = 0; i < CLI_OPTIONS; i++) {
    if (got == LONG_BASE + (int)i || (got != 0 && got == cli_option_row(i)->letter)) {
      return i;
    }
  }
  return CLI_OPTIONS;
}

static enum lxg_status bad_value(size_t option, const char *value, struct lxg_error *error) {
  return lxg_error_set(error, LXG_USAGE, "option-value", "--%s %s: it takes %s", cli_option_row(option)->name,
                       value, cli_option_row(option)->argument);
}

static enum lxg_status read_integer(size_t option, const char *text, long long least, long long most,
                                    long long *value, struct lxg_error *error) {
  if (!lxg_text_parse_integer(text, strlen(text), value) || *value < least || *value > most) {
    return lxg_error_set(error, LXG_USAGE, "option-value", "--%s %s: it takes an integer from %lld to %lld",
                         cli_option_row(option)->name, text, least, most);
  }
  return LXG_OK;
}

static enum lxg_status read_number(size_t option, const char *text, size_t length, double *value,
                                   struct lxg_error *error) {
  if (lxg_text_parse_number(text, length, false, value) != LXG_TEXT_NUMBER) {
    return lxg_error_set(error, LXG_USAGE, "option-value", "--%s %s: it takes a number",
                         cli_option_row(option)->name, text);
  }
  return LXG_OK;
}

/* NUMBER, or FIRST:LAST:STEP. */
static enum lxg_status read_axis(size_t option, const char *text, double axis[3], struct lxg_error *error) {
  enum lxg_status status = LXG_OK;
  const char *from = text;
  size_t count = 0;
  for (; count < 3 && status == LXG_OK; count++) {
    const size_t length = strcspn(from, ":");
    status = read_number(option, from, length, &axis[count], error);
    from += length;
    if (*from == '\0') {
      count++;
      break;
    }
    from++;
  }
  if (status == LXG_OK && (*from != '\0' || count == 2)) {
    return lxg_error_set(error, LXG_USAGE, "option-value", "--%s %s: it takes a number or FIRST:LAST:STEP",
                         cli_option_row(option)->name, text);
  }
  return status;
}

static enum lxg_status set_format(struct cli_request *request, const char *value, struct lxg_error *error) {
  const bool json = strcmp(value, "json") == 0;
  if (!json && strcmp(value, "yaml") != 0) {
    return bad_value(CLI_FORMAT, value, error);
  }
  request->format = json ? LXG_DOCUMENT_JSON : LXG_DOCUMENT_YAML;
  return LXG_OK;
}

static enum lxg_status set_branch(struct cli_request *request, const char *value, struct lxg_error *error) {
  const bool thick = strcmp(value, "thick") == 0;
  if (!thick && strcmp(value, "thin") != 0) {
    return bad_value(CLI_BRANCH, value, error);
  }
  request->run.branch = thick ? LXG_BRANCH_THICK : LXG_BRANCH_THIN;
  return LXG_OK;
}

static enum lxg_status apply(struct cli_request *request, size_t option, const char *value,
                             struct lxg_error *error) {
  long long number = 0;
  enum lxg_status status = LXG_OK;
  switch ((enum cli_option_id)option) {
  case CLI_OUTPUT:
    request->output = value;
    break;
  case CLI_FORMAT:
    return set_format(request, value, error);
  case CLI_SET:
    request->set[request->set_count++] = value;
    break;
  case CLI_EPOCHS:
    request->epochs = value;
    break;
  case CLI_STRUCTURE:
    request->structure = value;
    break;
  case CLI_BRANCH:
    return set_branch(request, value, error);
  case CLI_THREADS:
    status = read_integer(option, value, 1, most_threads, &number, error);
    request->run.threads = (size_t)number;
    break;
  case CLI_SEED:
    status = read_integer(option, value, 0, INT64_MAX, &request->run.seed, error);
    request->run.seeded = true;
    break;
  case CLI_POINTS:
    request->run.opacity.points = value;
    break;
  case CLI_LOG_T:
    return read_axis(option, value, request->run.opacity.log_t, error);
  case CLI_LOG_R:
    return read_axis(option, value, request->run.opacity.log_r, error);
  case CLI_HYDROGEN:
    return read_number(option, value, strlen(value), &request->run.opacity.hydrogen, error);
  case CLI_HELIUM:
    return read_number(option, value, strlen(value), &request->run.opacity.helium, error);
  case CLI_CNO:
    return read_number(option, value, strlen(value), &request->run.opacity.cno, error);
  case CLI_METALS:
    return read_number(option, value, strlen(value), &request->run.opacity.metals, error);
  case CLI_SOURCE:
    request->run.opacity.source = value;
    break;
  case CLI_DATE:
    request->run.opacity.date = value;
    break;
  case CLI_QUIET:
    request->quiet = true;
    break;
  case CLI_VERBOSE:
    request->verbose = true;
    break;
  case CLI_HELP:
    request->help = true;
    break;
  case CLI_VERSION:
    request->version = true;
    break;
  case CLI_OPTIONS:
    return lxg_error_set(error, LXG_BUG, "option-table", "an option is missing in the table");
  }
  return status;
}

static enum lxg_status unknown_option(const char *word, struct lxg_error *error) {
  const char *names[CLI_OPTIONS];
  for (size_t i = 0; i < CLI_OPTIONS; i++) {
    names[i] = cli_option_row(i)->name;
  }
  const char *near = lxg_text_nearest(word + strspn(word, "-"), names, CLI_OPTIONS);
  return lxg_error_set(error, LXG_USAGE, "option-unknown", "%s: no such option%s%s%s", word,
                       near != NULL ? "; did you mean --" : "", near != NULL ? near : "",
                       near != NULL ? "?" : "");
}

/* A group of commands without the second word, or with one that does not exist. */
static enum lxg_status unknown_member(const char *group, const char *word, struct lxg_error *error) {
  const char *names[CLI_COMMANDS];
  struct lxg_buffer list = {0};
  size_t count = 0;
  const size_t length = strlen(group);
  for (size_t i = 0; cli_command_row(i) != NULL && count < CLI_COMMANDS; i++) {
    const char *name = cli_command_row(i)->name;
    if (strncmp(name, group, length) == 0 && name[length] == ' ') {
      names[count++] = name + length + 1;
      lxg_buffer_format(&list, "%s%s", list.size > 0 ? ", " : "", name + length + 1);
    }
  }
  const char *near = word != NULL ? lxg_text_nearest(word, names, count) : NULL;
  const enum lxg_status status =
      lxg_error_set(error, LXG_USAGE, word != NULL ? "command-unknown" : "command-missing",
                    "%s%s%s: after `%s` comes one of: %s%s%s%s", group, word != NULL ? " " : "",
                    word != NULL ? word : "", group, list.data != NULL ? list.data : "",
                    near != NULL ? "; did you mean " : "", near != NULL ? near : "", near != NULL ? "?" : "");
  lxg_buffer_free(&list);
  return status;
}

static enum lxg_status unknown_command(const char *word, const char *second, struct lxg_error *error) {
  const char *names[CLI_COMMANDS + 1];
  size_t count = 0;
  for (size_t i = 0; cli_command_row(i) != NULL && count < CLI_COMMANDS; i++) {
    const char *name = cli_command_row(i)->name;
    const size_t length = strlen(word);
    if (strncmp(name, word, length) == 0 && name[length] == ' ') {
      return unknown_member(word, second, error);
    }
    names[count++] = name;
  }
  names[count++] = "help";
  const char *near = lxg_text_nearest(word, names, count);
  return lxg_error_set(error, LXG_USAGE, "command-unknown", "%s: no such command%s%s%s", word,
                       near != NULL ? "; did you mean " : "", near != NULL ? near : "",
                       near != NULL ? "?" : "");
}

/* Operands are the command, of one word or two, and after it the case or the file. */
static enum lxg_status take_operands(struct cli_request *request, int count, char **operand,
                                     struct lxg_error *error) {
  if (count == 0) {
    return request->help || request->version
               ? LXG_OK
               : lxg_error_set(error, LXG_USAGE, "command-missing", "a command is missing");
  }
  int words = 0;
  request->command = cli_command_match(operand[0], count > 1 ? operand[1] : NULL, &words);
  if (request->command == NULL) {
    return unknown_command(operand[0], count > 1 ? operand[1] : NULL, error);
  }
  const bool file = (request->command->options & CLI_TAKES_FILE) != 0;
  if (count == words) {
    return request->help || request->version
               ? LXG_OK
               : lxg_error_set(error, LXG_USAGE, file ? "file-missing" : "case-missing",
                               file ? "%s: the file is missing"
                                    : "%s: the case file is missing (`-` for standard input)",
                               request->command->name);
  }
  if (count > words + 1) {
    return lxg_error_set(error, LXG_USAGE, "operand-extra", "%s: one %s at a time", operand[words + 1],
                         file ? "file" : "case");
  }
  request->case_path = operand[words];
  request->run.opacity.file = operand[words];
  request->run.opacity.folder = request->command->options & CLI_TAKES_FOLDER ? request->output : NULL;
  return LXG_OK;
}

/* Options that the command does not know, and two results for one standard output. */
static enum lxg_status check(const struct cli_request *request, unsigned long long used,
                             struct lxg_error *error) {
  if (request->command == NULL) {
    return LXG_OK;
  }
  for (size_t i = 0; i < CLI_OPTIONS; i++) {
    if ((used & CLI_BIT(i)) && !(request->command->options & CLI_BIT(i))) {
      return lxg_error_set(error, LXG_USAGE, "option-command", "--%s: `%s` does not take it",
                           cli_option_row(i)->name, request->command->name);
    }
  }
  const char *const places[] = {request->output, request->epochs, request->structure};
  for (size_t i = 0; i < 3; i++) {
    for (size_t j = i + 1; j < 3; j++) {
      if (places[i] != NULL && places[j] != NULL && strcmp(places[i], places[j]) == 0) {
        return lxg_error_set(error, LXG_USAGE, "output-twice", "%s: two results cannot go to one place",
                             places[i]);
      }
    }
  }
  return LXG_OK;
}

enum lxg_status cli_request_read(struct cli_request *request, int argc, char **argv,
                                 struct lxg_error *error) {
  *request = (struct cli_request){.output = "-", .format = LXG_DOCUMENT_AUTO};
  request->run.opacity = lxg_run_opacity_defaults();
  request->set = lxg_alloc((size_t)argc, sizeof *request->set);
  if (request->set == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "command line: out of memory");
  }
  struct option longs[CLI_OPTIONS + 1];
  char shorts[3 * CLI_OPTIONS + 2];
  fill_getopt(longs, shorts);
  unsigned long long used = 0;
  enum lxg_status status = LXG_OK;
  opterr = 0;
  for (int got = 0; status == LXG_OK && (got = getopt_long(argc, argv, shorts, longs, NULL)) != -1;) {
    const char *word = argv[optind - 1];
    const size_t option = option_of(got);
    if (got == ':') {
      status = lxg_error_set(error, LXG_USAGE, "option-argument", "%s: its argument is missing", word);
    } else if (option == CLI_OPTIONS) {
      status = unknown_option(word, error);
    } else {
      used |= CLI_BIT(option);
      status = apply(request, option, optarg, error);
    }
  }
  if (status == LXG_OK) {
    status = take_operands(request, argc - optind, argv + optind, error);
  }
  return status == LXG_OK ? check(request, used, error) : status;
}
