/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * completions.c - completion of the command line in bash, zsh and fish, made from the tables of commands and options:
 * `luxgale help completion.bash` and so on.
 */
#include "cli.h"

#include "luxgale/text.h"

#include <string.h>

static const char *const topics[] = {"case", "report", "units", "settings", "reasons", "reason"};
enum { TOPICS = sizeof topics / sizeof topics[0] };

/* Words of an option's argument that is a choice ("a|b"): separated by blanks; nothing for other arguments. */
static void choices(struct lxg_buffer *out, const struct cli_option *option) {
  for (const char *c = option->argument; *c != '\0'; c++) {
    lxg_buffer_byte(out, *c == '|' ? ' ' : *c);
  }
}

static bool is_choice(const struct cli_option *option) {
  return option->argument != NULL && strchr(option->argument, '|') != NULL;
}

/* Length of a command's first word. */
static size_t first_word(const struct cli_command *command) {
  return strcspn(command->name, " ");
}

/* A command of one word, or the first of a group of two-word commands. */
static bool opens(size_t row) {
  const struct cli_command *const command = cli_command_row(row);
  const size_t length = first_word(command);
  return row == 0 || strncmp(cli_command_row(row - 1)->name, command->name, length + 1) != 0;
}

static bool is_group(const struct cli_command *command) {
  return command->name[first_word(command)] != '\0';
}

/* First words of the commands, each once. */
static void command_names(struct lxg_buffer *out) {
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    if (opens(i)) {
      lxg_buffer_format(out, "%.*s ", (int)first_word(cli_command_row(i)), cli_command_row(i)->name);
    }
  }
  lxg_buffer_text(out, "help");
}

/* Second words of the group that opens at `from`. */
static void member_names(struct lxg_buffer *out, size_t from) {
  const size_t length = first_word(cli_command_row(from)) + 1;
  for (size_t i = from; cli_command_row(i) != NULL; i++) {
    if (strncmp(cli_command_row(i)->name, cli_command_row(from)->name, length) == 0) {
      lxg_buffer_format(out, "%s%s", i > from ? " " : "", cli_command_row(i)->name + length);
    }
  }
}

static void topic_names(struct lxg_buffer *out) {
  command_names(out);
  for (size_t i = 0; i < TOPICS; i++) {
    lxg_buffer_format(out, " %s", topics[i]);
  }
}

/* Text inside single quotes of a shell, without the characters that zsh's _arguments reads. */
static void shell(struct lxg_buffer *out, const char *text) {
  for (const char *c = text; *c != '\0'; c++) {
    if (*c == '\'') {
      lxg_buffer_text(out, "\xe2\x80\x99");
    } else {
      lxg_buffer_byte(out, strchr("[]:`", *c) != NULL ? ' ' : *c);
    }
  }
}

/* ---- bash ---------------------------------------------------------------------------------------------------------- */

static void bash_arguments(struct lxg_buffer *out) {
  for (size_t i = 0; i < CLI_OPTIONS; i++) {
    const struct cli_option *const option = cli_option_row(i);
    if (is_choice(option)) {
      lxg_buffer_format(out, "    --%s) words='", option->name);
      choices(out, option);
      lxg_buffer_text(out, "' ;;\n");
    } else if (option->argument != NULL) {
      lxg_buffer_format(out, "    --%s) COMPREPLY=($(compgen -f -- \"$word\")); return ;;\n", option->name);
    }
  }
}

static void bash_options(struct lxg_buffer *out) {
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    const struct cli_command *const command = cli_command_row(i);
    lxg_buffer_format(out, "      '%s'%s) words='", command->name, is_group(command) ? "" : "\\ *");
    for (size_t o = 0; o < CLI_OPTIONS; o++) {
      if (command->options & CLI_BIT(o)) {
        lxg_buffer_format(out, "--%s ", cli_option_row(o)->name);
      }
    }
    lxg_buffer_text(out, "' ;;\n");
  }
}

void cli_print_bash(struct lxg_buffer *out) {
  lxg_buffer_text(out,
                  "# bash completion for luxgale, made by `luxgale help completion.bash`.\n_luxgale() {\n"
                  "  local word=${COMP_WORDS[COMP_CWORD]} before=${COMP_WORDS[COMP_CWORD-1]} words=\n"
                  "  COMPREPLY=()\n  case $before in\n");
  bash_arguments(out);
  lxg_buffer_text(out, "    help) words='");
  topic_names(out);
  lxg_buffer_text(out, "' ;;\n");
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    if (opens(i) && is_group(cli_command_row(i))) {
      lxg_buffer_format(out, "    %.*s) words='", (int)first_word(cli_command_row(i)),
                        cli_command_row(i)->name);
      member_names(out, i);
      lxg_buffer_text(out, "' ;;\n");
    }
  }
  lxg_buffer_text(out, "  esac\n  if [ -z \"$words\" ] && [ \"$COMP_CWORD\" -eq 1 ]; then\n    words='");
  command_names(out);
  lxg_buffer_text(out, " --help --version'\n  elif [ -z \"$words\" ] && [[ $word == -* ]]; then\n"
                       "    case \"${COMP_WORDS[1]} ${COMP_WORDS[2]}\" in\n");
  bash_options(out);
  lxg_buffer_text(out, "    esac\n  fi\n  if [ -n \"$words\" ]; then\n"
                       "    COMPREPLY=($(compgen -W \"$words\" -- \"$word\"))\n  else\n"
                       "    COMPREPLY=($(compgen -f -- \"$word\"))\n  fi\n}\n"
                       "complete -o filenames -F _luxgale luxgale\n");
}

/* ---- zsh ----------------------------------------------------------------------------------------------------------- */

static void zsh_option(struct lxg_buffer *out, const struct cli_option *option) {
  lxg_buffer_format(out, " \\\n      '--%s[", option->name);
  shell(out, option->sentence);
  lxg_buffer_byte(out, ']');
  if (is_choice(option)) {
    lxg_buffer_format(out, ":%s:(", option->name);
    choices(out, option);
    lxg_buffer_byte(out, ')');
  } else if (option->argument != NULL) {
    lxg_buffer_format(out, ":%s:_files", option->name);
  }
  lxg_buffer_byte(out, '\'');
}

static void zsh_commands(struct lxg_buffer *out) {
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    const struct cli_command *const command = cli_command_row(i);
    const bool two = is_group(command);
    lxg_buffer_format(out, "    '%s'%s) shift %swords; (( CURRENT -= %d )); _arguments", command->name,
                      two ? "" : "\\ *", two ? "2 " : "", two ? 2 : 1);
    for (size_t o = 0; o < CLI_OPTIONS; o++) {
      if (command->options & CLI_BIT(o)) {
        zsh_option(out, cli_option_row(o));
      }
    }
    lxg_buffer_text(out, command->needs != NULL ? " \\\n      '*:case:_files' ;;\n" : " ;;\n");
  }
}

void cli_print_zsh(struct lxg_buffer *out) {
  lxg_buffer_text(out,
                  "#compdef luxgale\n# zsh completion for luxgale, made by `luxgale help completion.zsh`.\n"
                  "_luxgale() {\n  if (( CURRENT == 2 )); then\n    compadd ");
  command_names(out);
  lxg_buffer_text(
      out,
      "\n    return\n  fi\n  if (( CURRENT == 3 )); then\n    case ${words[2]} in\n      help) compadd ");
  topic_names(out);
  lxg_buffer_text(out, "; return ;;\n");
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    if (opens(i) && is_group(cli_command_row(i))) {
      lxg_buffer_format(out, "      %.*s) compadd ", (int)first_word(cli_command_row(i)),
                        cli_command_row(i)->name);
      member_names(out, i);
      lxg_buffer_text(out, "; return ;;\n");
    }
  }
  lxg_buffer_text(out, "    esac\n  fi\n  case \"${words[2]} ${words[3]}\" in\n");
  zsh_commands(out);
  lxg_buffer_text(out, "  esac\n}\n_luxgale \"$@\"\n");
}

/* ---- fish ---------------------------------------------------------------------------------------------------------- */

/* "__fish_seen_subcommand_from wind", or both words of a group. */
static void fish_condition(struct lxg_buffer *out, const struct cli_command *command) {
  const size_t length = first_word(command);
  lxg_buffer_format(out, "'__fish_seen_subcommand_from %.*s", (int)length, command->name);
  if (is_group(command)) {
    lxg_buffer_format(out, "; and __fish_seen_subcommand_from %s", command->name + length + 1);
  }
  lxg_buffer_byte(out, '\'');
}

static void fish_option(struct lxg_buffer *out, const struct cli_command *command,
                        const struct cli_option *option) {
  lxg_buffer_text(out, "complete -c luxgale -n ");
  fish_condition(out, command);
  lxg_buffer_format(out, " -l %s", option->name);
  if (option->letter != 0) {
    lxg_buffer_format(out, " -s %c", option->letter);
  }
  if (is_choice(option)) {
    lxg_buffer_text(out, " -x -a '");
    choices(out, option);
    lxg_buffer_byte(out, '\'');
  } else if (option->argument != NULL) {
    lxg_buffer_text(out, " -r");
  }
  lxg_buffer_text(out, " -d '");
  shell(out, option->sentence);
  lxg_buffer_text(out, "'\n");
}

void cli_print_fish(struct lxg_buffer *out) {
  lxg_buffer_text(out, "# fish completion for luxgale, made by `luxgale help completion.fish`.\n"
                       "complete -c luxgale -n __fish_use_subcommand -f -a '");
  command_names(out);
  lxg_buffer_text(out, "'\ncomplete -c luxgale -n '__fish_seen_subcommand_from help' -f -a '");
  topic_names(out);
  lxg_buffer_text(out, "'\n");
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    const struct cli_command *const command = cli_command_row(i);
    if (opens(i) && is_group(command)) {
      lxg_buffer_format(out, "complete -c luxgale -n '__fish_seen_subcommand_from %.*s' -f -a '",
                        (int)first_word(command), command->name);
      member_names(out, i);
      lxg_buffer_text(out, "'\n");
    }
    for (size_t o = 0; o < CLI_OPTIONS; o++) {
      if (command->options & CLI_BIT(o)) {
        fish_option(out, command, cli_option_row(o));
      }
    }
  }
}
