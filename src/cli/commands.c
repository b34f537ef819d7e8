/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * commands.c - the one table of commands and options behind parsing and help.
 */
#include "cli.h"

#include <string.h>

static const struct cli_command commands[] = {
    {"outburst", "turn a luminosity history into winds and an ejecta report",
     "star, composition, one held quantity and `luminosity`",
     CLI_COMMON | CLI_PICTURES | CLI_BIT(CLI_EPOCHS) | CLI_BIT(CLI_BRANCH), lxg_run_outburst,
     "luxgale outburst --epochs epochs.ecsv -o report.yaml examples/quickstart.yaml"},
    {"wind", "solve one steady wind", "star, composition and two held quantities",
     CLI_COMMON | CLI_PICTURES | CLI_BIT(CLI_STRUCTURE) | CLI_BIT(CLI_BRANCH), lxg_run_wind,
     "luxgale wind --set hold.launch_radius='2e10 cm' examples/wind.yaml"},
    {"family", "trace all winds that share one held quantity, from the thin to the thick end",
     "star, composition and one held quantity", CLI_COMMON | CLI_PICTURES | CLI_BIT(CLI_EPOCHS),
     lxg_run_family, "luxgale family -o family.ecsv examples/quickstart.yaml"},
    {"decline", "a whole eruption over a burning base: wind, its end, turn-off, light curve",
     "star, composition and `burning: {law: cno}`; nothing is held",
     CLI_COMMON | CLI_PICTURES | CLI_BIT(CLI_EPOCHS), lxg_run_decline,
     "luxgale decline --epochs decline.ecsv -o decline.yaml examples/decline.yaml"},
    {"new", "write a commented case to begin with", NULL, CLI_NEW, NULL,
     "luxgale new --for theorist -o my-case.yaml"},
    {"star", "radius, Eddington luminosity, escape speed, tiring rate, ignition mass", "star and composition",
     CLI_COMMON, lxg_run_star, "luxgale star examples/quickstart.yaml"},
};

static const struct cli_option options[CLI_OPTIONS] = {
    [CLI_OUTPUT] = {"output", 'o', "FILE",
                    "Write the report there instead of standard output; FILE.ecsv takes the table."},
    [CLI_FORMAT] = {"format", 0, "yaml|json|text",
                    "Form of the report; else by the suffix of --output, else text on a terminal and yaml "
                    "anywhere else."},
    [CLI_SET] = {"set", 0, "PATH=VALUE",
                 "Replace or add a key of the case, e.g. star.mass='1.1 Msun'; repeatable."},
    [CLI_EPOCHS] = {"epochs", 0, "FILE",
                    "Write the table (ECSV), one row an epoch or a member of the family."},
    [CLI_STRUCTURE] = {"structure", 0, "FILE", "Write the wind's radial structure (ECSV)."},
    [CLI_PLOTS] = {"plots", 0, "FOLDER",
                   "Draw pictures there (SVG, PDF, PNG), their gnuplot scripts and data beside them."},
    [CLI_HTML] = {"html", 0, "FILE",
                  "Write one page with results, pictures, warnings and input, to send or print."},
    [CLI_BRANCH] =
        {"branch", 0, "thin|thick",
         "Where several winds have the held values: the one with the smallest (thin, the default) or largest "
         "(thick) mass-loss rate."},
    [CLI_THREADS] = {"threads", 0, "N",
                     "Threads for independent work; results do not depend on it. Default 1."},
    [CLI_SEED] = {"seed", 0, "N", "Seed of the random numbers in place of the case's errors.seed."},
    [CLI_FOR] = {"for", 0, "spectroscopist|theorist|observer", "For whom the new case is."},
    [CLI_QUIET] = {"quiet", 'q', NULL, "No warnings on standard error; errors are still told."},
    [CLI_VERBOSE] = {"verbose", 'v', NULL, "Tell which files were read and written."},
    [CLI_HELP] = {"help", 'h', NULL, "Explain, and do nothing else."},
    [CLI_VERSION] = {"version", 0, NULL, "Name the version, and do nothing else."},
};

const struct cli_command *cli_command_row(size_t index) {
  return index < sizeof commands / sizeof commands[0] ? &commands[index] : NULL;
}

const struct cli_command *cli_command_find(const char *name) {
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    if (strcmp(commands[i].name, name) == 0) {
      return &commands[i];
    }
  }
  return NULL;
}

const struct cli_option *cli_option_row(size_t index) {
  return index < CLI_OPTIONS ? &options[index] : NULL;
}
