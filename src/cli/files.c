/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * files.c - manual pages and the list of report keys, made from the same tables as the help: `luxgale help NAME` prints luxgale.1,
 * luxgale-case.5, report and report.md.
 */
#include "cli.h"

#include "luxgale/keys.h"
#include "luxgale/report.h"
#include "luxgale/text.h"
#include "luxgale/units.h"

#include <string.h>

static const struct {
  const char *path, *sentence;
} report_keys[] = {
#define LXG_REPORT_KEY(path, sentence) {path, sentence},
#include "luxgale/report_keys.def"
#undef LXG_REPORT_KEY
};
enum {
  REPORT_KEYS = sizeof report_keys / sizeof report_keys[0],
  LINE = 60
}; /* LINE: where a line of a manual page may end */

/* ---- manual pages -------------------------------------------------------------------------------------------------- */

/* Text for mdoc in short lines: sentences start lines, backslashes, hyphens and grave accents are escaped, and a line that would
 * start with a dot or quote is guarded. */
static void roff(struct lxg_buffer *out, const char *text) {
  size_t column = 0;
  for (const char *c = text; *c != '\0'; c++) {
    const bool sentence = c > text && c[-1] == '.' && c[0] == ' ' && c[1] >= 'A' && c[1] <= 'Z';
    if (*c == ' ' && (column > LINE || sentence)) {
      lxg_buffer_byte(out, '\n');
      column = 0;
      continue;
    }
    if (column == 0 && (*c == '.' || *c == '\'')) {
      lxg_buffer_text(out, "\\&");
    }
    column++;
    if (*c == '\\') {
      lxg_buffer_text(out, "\\e");
    } else if (*c == '`') {
      lxg_buffer_text(out, "\\(ga");
    } else if (*c == '-') {
      lxg_buffer_text(out, "\\-");
    } else {
      lxg_buffer_byte(out, *c);
    }
  }
  lxg_buffer_byte(out, '\n');
}

static void man_option(struct lxg_buffer *out, const struct cli_option *option) {
  lxg_buffer_text(out, ".It ");
  if (option->letter != 0) {
    lxg_buffer_format(out, "Fl %c , ", option->letter);
  }
  lxg_buffer_format(out, "Fl \\-%s", option->name);
  if (option->argument != NULL) {
    lxg_buffer_format(out, " Ar %s", option->argument);
  }
  lxg_buffer_byte(out, '\n');
  roff(out, option->sentence);
}

void cli_print_manual(struct lxg_buffer *out) {
  lxg_buffer_text(out,
                  ".\\\" SPDX-License-Identifier: GPL-3.0-or-later\n.\\\" Made by `luxgale help luxgale.1`.\n"
                  ".Dd December 1, 2026\n.Dt LUXGALE 1\n.Os\n.Sh NAME\n.Nm luxgale\n"
                  ".Nd radiation-driven winds and ejecta of stellar eruptions\n.Sh SYNOPSIS\n"
                  ".Nm\n.Ar command\n.Op Ar options\n.Ar case\n.Nm\n.Cm help\n.Op Ar topic\n"
                  ".Sh DESCRIPTION\n.Nm\nsolves the steady, optically thick, radiation-driven wind\nover any "
                  "star, composition and opacity,\n"
                  "follows it through a luminosity history,\nand gives ejected mass, energy, momentum and "
                  "speeds,\nor says why there is no wind.\n"
                  ".Pp\nThe\n.Ar case\nis YAML or JSON, see\n.Xr luxgale\\-case 5 ;\n.Sq \\-\nis standard "
                  "input.\n.Pp\nCommands:\n.Bl -tag -width Ds\n");
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    const struct cli_command *const command = cli_command_row(i);
    lxg_buffer_format(out, ".It Cm %s\n", command->name);
    roff(out, command->sentence);
    if (command->needs != NULL) {
      lxg_buffer_text(out, ".br\nThe case needs ");
      roff(out, command->needs);
    }
  }
  lxg_buffer_text(out, ".El\n.Pp\nOptions:\n.Bl -tag -width Ds\n");
  for (size_t i = 0; i < CLI_OPTIONS; i++) {
    man_option(out, cli_option_row(i));
  }
  lxg_buffer_text(out, ".El\n.Pp\nA command refuses options that it does not use;\n.Nm\n.Cm help\n.Ar "
                       "command\nlists those of one command.\n"
                       ".Sh ENVIRONMENT\n.Bl -tag -width Ds\n.It Ev NO_COLOR\nIf set and not empty, messages "
                       "have no colours.\n"
                       ".It Ev TMPDIR\nWhere pictures for\n.Fl \\-html\nare drawn when\n.Fl \\-plots\nis not "
                       "given; else\n.Pa /tmp .\n.El\n"
                       ".Sh EXIT STATUS\n.Bl -tag -width Ds\n.It 0\nDone.\n.It 1\nThe physics gave no "
                       "answer, or only part; the report says why.\n"
                       ".It 2\nBad command line or input.\n.It 3\nReading or writing failed.\n.It 4\nMemory "
                       "or a limit.\n.It 70\nA bug.\n.El\n"
                       ".Pp\nResults are written whole or not at all.\n.Sh EXAMPLES\n");
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    lxg_buffer_text(out, ".Dl ");
    roff(out, cli_command_row(i)->example);
  }
  lxg_buffer_text(out, ".Sh SEE ALSO\n.Xr gnuplot 1 ,\n.Xr luxgale\\-case 5\n");
}

void cli_print_case_manual(struct lxg_buffer *out) {
  lxg_buffer_text(
      out, ".\\\" SPDX-License-Identifier: GPL-3.0-or-later\n.\\\" Made by `luxgale help luxgale-case.5`.\n"
           ".Dd December 1, 2026\n.Dt LUXGALE-CASE 5\n.Os\n.Sh NAME\n.Nm luxgale-case\n.Nd input of luxgale\n"
           ".Sh DESCRIPTION\nA case is a mapping in YAML or JSON.\nA quantity is a number and a unit; a bare "
           "number is in the unit named here.\n");
  const char *section = NULL;
  for (size_t i = 0; i < lxg_keys_count(); i++) {
    const struct lxg_key *const key = lxg_keys_row(i);
    if (section == NULL || strcmp(section, key->section) != 0) {
      lxg_buffer_text(out, section != NULL ? ".El\n" : "");
      section = key->section;
      const size_t length = strlen(section);
      const bool items = length > 2 && section[length - 1] == ']'; /* "luminosity.terms[]" */
      lxg_buffer_format(out, ".Ss %s%.*s\n.Bl -tag -width Ds\n",
                        length == 0 ? "Top of the case" : (items ? "Items of " : ""),
                        (int)(items ? length - 2 : length), section);
    }
    lxg_buffer_format(out, ".It Li %s\n", key->name);
    roff(out, key->sentence);
    lxg_buffer_format(out, ".br\nKind: %s", lxg_keys_kind(key->kind));
    if (key->kind == LXG_KEY_QUANTITY) {
      lxg_buffer_format(out, " (%s, bare number in %s)", lxg_units_dimension(key->dimension),
                        lxg_units_default(key->dimension));
    }
    if (key->allowed[0] != '\0') {
      lxg_buffer_format(out, ".\n.br\nAllowed:\n");
      roff(out, key->allowed);
    }
    lxg_buffer_text(out, key->allowed[0] != '\0' ? ".br\nDefault: " : ".\n.br\nDefault: ");
    roff(out, key->fallback);
  }
  lxg_buffer_text(out, ".El\n.Sh SEE ALSO\n.Xr luxgale 1\n");
}

/* ---- the report ---------------------------------------------------------------------------------------------------- */

void cli_print_report_markdown(struct lxg_buffer *out) {
  lxg_buffer_text(
      out,
      "# Keys of a report\n\nMade by `make docs` from the table behind `luxgale help report`. A "
      "report is one tree, written as YAML or\n"
      "JSON; `[]` is any item of a list, `*` any name there or below. Every number has its unit in its name "
      "(`_msun_yr`: solar masses per\n"
      "year) and the fewest digits that read back to the same double. A number that the physics "
      "does not give is `null`,\n"
      "with the reason beside it. Columns of tables are described in the head of each table.\n\n"
      "| key | meaning |\n|---|---|\n");
  for (size_t i = 0; i < REPORT_KEYS; i++) {
    lxg_buffer_format(out, "| `%s` | %s |\n", report_keys[i].path, report_keys[i].sentence);
  }
  lxg_buffer_text(out, "\n## Codes\n\n| code | meaning |\n|---|---|\n");
  for (size_t i = 0; cli_reason_code(i) != NULL; i++) {
    lxg_buffer_format(out, "| `%s` | %s |\n", cli_reason_code(i), cli_reason_meaning(i));
  }
}

void cli_print_report(struct lxg_buffer *out) {
  lxg_buffer_text(
      out,
      "Keys of a report; the unit of a number stands in its name. [] is any item of a list, * any name.\n\n");
  for (size_t i = 0; i < REPORT_KEYS; i++) {
    lxg_buffer_format(out, "  %s\n      %s\n", report_keys[i].path, report_keys[i].sentence);
  }
}

bool cli_print_report_key(struct lxg_buffer *out, const char *topic) {
  bool found = false;
  const size_t length = strlen(topic);
  for (size_t i = 0; i < REPORT_KEYS; i++) {
    const char *const path = report_keys[i].path;
    const char *const dot = strrchr(path, '.');
    const bool below = strncmp(path, topic, length) == 0 &&
                       (path[length] == '\0' || path[length] == '.' || path[length] == '[');
    if (below || (dot != NULL && strcmp(dot + 1, topic) == 0)) {
      lxg_buffer_format(out, "%s (of a report)\n  %s\n", path, report_keys[i].sentence);
      found = true;
    }
  }
  return found;
}
