/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * help.c - help texts, made from the tables of commands, options, keys, units, settings and verdicts.
 */
#include "cli.h"

#include "luxgale/decline.h"
#include "luxgale/keys.h"
#include "luxgale/output.h"
#include "luxgale/report.h"
#include "luxgale/settings.h"
#include "luxgale/text.h"
#include "luxgale/units.h"

#include <string.h>

enum { OPTION_WIDTH = 26, KEY_WIDTH = 26 };

static void pad(struct lxg_buffer *out, size_t from, size_t width) {
  const size_t used = out->size - from;
  for (size_t i = used; i < width; i++) {
    lxg_buffer_byte(out, ' ');
  }
}

static void print_option(struct lxg_buffer *out, const struct cli_option *option) {
  const size_t from = out->size;
  lxg_buffer_format(out, option->letter != 0 ? "  -%c, " : "      ", option->letter);
  lxg_buffer_format(out, "--%s%s%s", option->name, option->argument != NULL ? " " : "",
                    option->argument != NULL ? option->argument : "");
  pad(out, from, OPTION_WIDTH);
  lxg_buffer_format(out, "  %s\n", option->sentence);
}

static void print_general(struct lxg_buffer *out) {
  lxg_buffer_text(
      out,
      "Usage: luxgale COMMAND [OPTIONS] CASE\n"
      "       luxgale help [COMMAND | case | KEY | units | settings | reasons]\n\n"
      "Radiation-driven winds and ejecta of stellar eruptions. CASE is YAML or JSON; - is standard input.\n\n"
      "Commands:\n");
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    const size_t from = out->size;
    lxg_buffer_format(out, "  %s", cli_command_row(i)->name);
    pad(out, from, 20);
    lxg_buffer_format(out, "%s\n", cli_command_row(i)->sentence);
  }
  lxg_buffer_text(out, "\nOptions of every command:\n");
  for (size_t i = 0; i < CLI_OPTIONS; i++) {
    if (CLI_COMMON & CLI_BIT(i)) {
      print_option(out, cli_option_row(i));
    }
  }
  lxg_buffer_text(
      out,
      "\nExit status: 0 done; 1 the physics gave no answer or only part (the report says why); 2 bad command "
      "line or\ninput; 3 reading or writing failed; 4 memory or a limit; 70 a bug.\n");
}

static void print_command(struct lxg_buffer *out, const struct cli_command *command) {
  const bool file = (command->options & CLI_TAKES_FILE) != 0;
  lxg_buffer_format(out, "Usage: luxgale %s [OPTIONS] %s\n\n%s: %s.\nThe %s %s.\n\nOptions:\n", command->name,
                    file ? "FILE" : "CASE", command->name, command->sentence,
                    file ? "file holds" : "case needs", command->needs);
  for (size_t i = 0; i < CLI_OPTIONS; i++) {
    if (command->options & CLI_BIT(i)) {
      print_option(out, cli_option_row(i));
    }
  }
  lxg_buffer_format(out, "\nExample:\n  %s\n", command->example);
}

static void key_path(const struct lxg_key *key, struct lxg_buffer *out) {
  lxg_buffer_format(out, "%s%s%s", key->section, key->section[0] != '\0' ? "." : "", key->name);
}

/* "quantity (mass; a bare number is in Msun)" */
static void print_kind(struct lxg_buffer *out, const struct lxg_key *key) {
  lxg_buffer_text(out, lxg_keys_kind(key->kind));
  if (key->kind == LXG_KEY_QUANTITY) {
    lxg_buffer_format(out, " (%s; a bare number is in %s)", lxg_units_dimension(key->dimension),
                      lxg_units_default(key->dimension));
  }
}

static void print_key(struct lxg_buffer *out, const struct lxg_key *key) {
  key_path(key, out);
  lxg_buffer_format(out, "\n  %s\n  kind: ", key->sentence);
  print_kind(out, key);
  if (key->kind == LXG_KEY_QUANTITY) {
    char units[512];
    lxg_units_allowed(key->dimension, units, sizeof units);
    lxg_buffer_format(out, "\n  units: %s", units);
  }
  if (key->allowed[0] != '\0') {
    lxg_buffer_format(out, "\n  allowed: %s", key->allowed);
  }
  lxg_buffer_format(out, "\n  default: %s\n", key->fallback);
}

static void print_case(struct lxg_buffer *out) {
  lxg_buffer_text(out,
                  "Keys of a case. A quantity is \"VALUE UNIT\"; a bare number is in the unit named here.\n"
                  "`luxgale help KEY` says more about one of them.\n");
  const char *section = NULL;
  for (size_t i = 0; i < lxg_keys_count(); i++) {
    const struct lxg_key *key = lxg_keys_row(i);
    if (section == NULL || strcmp(section, key->section) != 0) {
      section = key->section;
      lxg_buffer_format(out, "\n%s:\n", section[0] != '\0' ? section : "top of the case");
    }
    const size_t from = out->size;
    lxg_buffer_format(out, "  %s", key->name);
    pad(out, from, KEY_WIDTH);
    lxg_buffer_format(out, "  %s\n", key->sentence);
    pad(out, out->size, KEY_WIDTH + 2);
    print_kind(out, key);
    lxg_buffer_format(out, "; %s%sdefault: %s\n", key->allowed, key->allowed[0] != '\0' ? "; " : "",
                      key->fallback);
  }
}

/* The same as a document (docs/inputs.md). */
static void print_markdown(struct lxg_buffer *out) {
  lxg_buffer_text(
      out, "# Keys of a case\n\nMade by `make docs` from the table behind `luxgale help case`. A quantity is "
           "`\"VALUE UNIT\"`; a bare number is in the unit\nnamed here.\n");
  const char *section = NULL;
  for (size_t i = 0; i < lxg_keys_count(); i++) {
    const struct lxg_key *key = lxg_keys_row(i);
    if (section == NULL || strcmp(section, key->section) != 0) {
      section = key->section;
      lxg_buffer_format(out,
                        "\n## %s\n\n| key | kind | allowed | default | meaning |\n|---|---|---|---|---|\n",
                        section[0] != '\0' ? section : "Top of the case");
    }
    lxg_buffer_format(out, "| `%s` | ", key->name);
    print_kind(out, key);
    lxg_buffer_text(out, " | ");
    for (const char *c = key->allowed; *c != '\0'; c++) {
      lxg_buffer_text(out, *c == '|' ? "\\" : "");
      lxg_buffer_byte(out, *c);
    }
    lxg_buffer_format(out, " | %s | %s |\n", key->fallback, key->sentence);
  }
  lxg_buffer_text(out,
                  "\n## settings\n\n| key | default | range | unit | meaning |\n|---|---|---|---|---|\n");
  for (size_t i = 0; i < lxg_settings_count(); i++) {
    const struct lxg_setting *row = lxg_settings_row(i);
    lxg_buffer_format(out, "| `%s` | ", row->name);
    lxg_buffer_number(out, row->value);
    lxg_buffer_text(out, " | ");
    lxg_buffer_number(out, row->minimum);
    lxg_buffer_text(out, " to ");
    lxg_buffer_number(out, row->maximum);
    lxg_buffer_format(out, " | %s | %s |\n", row->unit, row->sentence);
  }
}

static void print_units(struct lxg_buffer *out) {
  lxg_buffer_text(out, "Units of quantities; the first of each line is that of a bare number.\n\n");
  for (int d = 0; d < LXG_DIMENSION_COUNT; d++) {
    char units[512];
    lxg_units_allowed((enum lxg_dimension)d, units, sizeof units);
    const size_t from = out->size;
    lxg_buffer_format(out, "  %s", lxg_units_dimension((enum lxg_dimension)d));
    pad(out, from, KEY_WIDTH);
    lxg_buffer_format(out, "  %s: %s\n", lxg_units_default((enum lxg_dimension)d), units);
  }
}

static void print_settings(struct lxg_buffer *out) {
  lxg_buffer_text(out, "Tolerances and limits, set under `settings:` of a case.\n\n");
  for (size_t i = 0; i < lxg_settings_count(); i++) {
    const struct lxg_setting *row = lxg_settings_row(i);
    lxg_buffer_format(out, "  %s = ", row->name);
    lxg_buffer_number(out, row->value);
    lxg_buffer_format(out, "%s%s (from ", row->unit[0] != '\0' ? " " : "", row->unit);
    lxg_buffer_number(out, row->minimum);
    lxg_buffer_text(out, " to ");
    lxg_buffer_number(out, row->maximum);
    lxg_buffer_format(out, ")\n      %s\n", row->sentence);
  }
}

static void print_reasons(struct lxg_buffer *out) {
  lxg_buffer_text(out, "Why there may be no wind: the reason_code of a report.\n\n");
  for (int reason = 0; reason < LXG_WIND_REASON_COUNT; reason++) {
    const size_t from = out->size;
    lxg_buffer_format(out, "  %s", lxg_wind_reason_code((enum lxg_wind_reason)reason));
    pad(out, from, KEY_WIDTH);
    lxg_buffer_format(out, "  %s\n", lxg_wind_reason_text((enum lxg_wind_reason)reason));
  }
  lxg_buffer_text(out, "\nWhere a whole eruption ends (`decline`):\n\n");
  for (int end = 0; end < LXG_DECLINE_END_COUNT; end++) {
    const size_t from = out->size;
    lxg_buffer_format(out, "  %s", lxg_decline_end_code((enum lxg_decline_end)end));
    pad(out, from, KEY_WIDTH);
    lxg_buffer_format(out, "  %s\n", lxg_decline_end_text((enum lxg_decline_end)end));
  }
}

/* Prints every key whose path is the topic or lies below it; false if there is none. */
static bool print_keys_at(struct lxg_buffer *out, const char *topic) {
  bool found = false;
  const size_t length = strlen(topic);
  for (size_t i = 0; i < lxg_keys_count(); i++) {
    struct lxg_buffer path = {0};
    key_path(lxg_keys_row(i), &path);
    const bool match = path.data != NULL && strncmp(path.data, topic, length) == 0 &&
                       (path.data[length] == '\0' || path.data[length] == '.' || path.data[length] == '[');
    lxg_buffer_free(&path);
    if (match) {
      print_key(out, lxg_keys_row(i));
      found = true;
    }
  }
  return found;
}

static bool print_setting_at(struct lxg_buffer *out, const char *topic) {
  static const char prefix[] = "settings.";
  const bool prefixed = strncmp(topic, prefix, sizeof prefix - 1) == 0;
  for (size_t i = 0; prefixed && i < lxg_settings_count(); i++) {
    if (strcmp(lxg_settings_row(i)->name, topic + sizeof prefix - 1) == 0) {
      lxg_buffer_format(out, "%s\n  %s\n", topic, lxg_settings_row(i)->sentence);
      return true;
    }
  }
  return false;
}

/* The command of that name, of one word or two, or all of a group. */
static bool print_commands(struct lxg_buffer *out, const char *topic, const char *second) {
  int words = 0;
  const struct cli_command *command = cli_command_match(topic, second, &words);
  if (command != NULL) {
    print_command(out, command);
    return true;
  }
  bool found = false;
  const size_t length = strlen(topic);
  for (size_t i = 0; cli_command_row(i) != NULL && second == NULL; i++) {
    const char *name = cli_command_row(i)->name;
    if (strncmp(name, topic, length) == 0 && name[length] == ' ') {
      lxg_buffer_text(out, found ? "\n" : "");
      print_command(out, cli_command_row(i));
      found = true;
    }
  }
  if (found) {
    lxg_buffer_text(out, "\nKeys of the case:\n\n");
    print_keys_at(out, topic);
  }
  return found;
}

static enum lxg_status print_topic(struct lxg_buffer *out, const char *topic, const char *second,
                                   struct lxg_error *error) {
  static const struct {
    const char *name;
    void (*print)(struct lxg_buffer *out);
  } topics[] = {{"case", print_case},
                {"units", print_units},
                {"settings", print_settings},
                {"reasons", print_reasons},
                {"case.md", print_markdown}};
  for (size_t i = 0; i < sizeof topics / sizeof topics[0]; i++) {
    if (strcmp(topics[i].name, topic) == 0) {
      topics[i].print(out);
      return LXG_OK;
    }
  }
  if (print_commands(out, topic, second)) {
    return LXG_OK;
  }
  if (print_keys_at(out, topic) || print_setting_at(out, topic)) {
    return LXG_OK;
  }
  return lxg_error_set(
      error, LXG_USAGE, "help-unknown",
      "help %s: no such topic; there are the commands, case, units, settings, reasons, and every key", topic);
}

static enum lxg_status show(struct lxg_buffer *out, enum lxg_status status, struct lxg_error *error) {
  if (status == LXG_OK) {
    status = lxg_buffer_status(out, error);
  }
  if (status == LXG_OK) {
    status = lxg_output_write("-", out->data, out->size, error);
  }
  lxg_buffer_free(out);
  return status;
}

enum lxg_status cli_help(const char *topic, const char *second, struct lxg_error *error) {
  struct lxg_buffer out = {0};
  enum lxg_status status = LXG_OK;
  if (topic == NULL) {
    print_general(&out);
  } else {
    status = print_topic(&out, topic, second, error);
  }
  return show(&out, status, error);
}

enum lxg_status cli_version(struct lxg_error *error) {
  struct lxg_buffer out = {0};
  lxg_buffer_format(&out,
                    "luxgale %s\nLicence GPL-3.0-or-later: free software, without any warranty as far as the "
                    "law permits.\n",
                    lxg_report_version());
  return show(&out, LXG_OK, error);
}
