/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * commands.c - the one table of commands and options behind parsing and help.
 */
#include "cli.h"

#include <string.h>

/* What commands about table files take: no case, so nothing to set and nothing random. */
#define CLI_COMPOSITION                                                                                      \
  (CLI_BIT(CLI_OUTPUT) | CLI_BIT(CLI_FORMAT) | CLI_BIT(CLI_HYDROGEN) | CLI_BIT(CLI_HELIUM) |                 \
   CLI_BIT(CLI_CNO) | CLI_BIT(CLI_METALS) | CLI_BIT(CLI_QUIET) | CLI_BIT(CLI_VERBOSE) | CLI_BIT(CLI_HELP) |  \
   CLI_BIT(CLI_VERSION))

static const struct cli_command commands[] = {
    {"outburst", "turn a luminosity history into winds and an ejecta report",
     "star, composition, one held quantity and `luminosity`",
     CLI_COMMON | CLI_BIT(CLI_EPOCHS) | CLI_BIT(CLI_BRANCH), lxg_run_outburst,
     "luxgale outburst --epochs epochs.ecsv -o report.yaml examples/quickstart.yaml"},
    {"wind", "solve one steady wind", "star, composition and two held quantities",
     CLI_COMMON | CLI_BIT(CLI_STRUCTURE) | CLI_BIT(CLI_BRANCH), lxg_run_wind,
     "luxgale wind --set hold.launch_radius='2e10 cm' examples/wind.yaml"},
    {"family", "trace all winds that share one held quantity, from the thin to the thick end",
     "star, composition and one held quantity", CLI_COMMON | CLI_BIT(CLI_EPOCHS), lxg_run_family,
     "luxgale family -o family.ecsv examples/quickstart.yaml"},
    {"decline", "a whole eruption over a burning base: wind, its end, turn-off, light curve",
     "star, composition and `burning: {law: cno}`; nothing is held", CLI_COMMON | CLI_BIT(CLI_EPOCHS),
     lxg_run_decline, "luxgale decline --epochs decline.ecsv -o decline.yaml examples/decline.yaml"},
    {"star", "radius, Eddington luminosity, escape speed, tiring rate, ignition mass", "star and composition",
     CLI_COMMON, lxg_run_star, "luxgale star examples/quickstart.yaml"},
    {"opacity at", "opacity and its slopes at one point (--log-t, --log-r) or at the points of a table",
     "star, composition and `opacity`",
     CLI_COMMON | CLI_BIT(CLI_POINTS) | CLI_BIT(CLI_LOG_T) | CLI_BIT(CLI_LOG_R), lxg_run_opacity_at,
     "luxgale opacity at --log-t 5.25 --log-r -4 examples/quickstart.yaml"},
    {"opacity tabulate", "write the opacity of a case on a grid (--log-t, --log-r as FIRST:LAST:STEP)",
     "star, composition and `opacity`", CLI_COMMON | CLI_BIT(CLI_LOG_T) | CLI_BIT(CLI_LOG_R),
     lxg_run_opacity_tabulate,
     "luxgale opacity tabulate --log-t 3.8:8.5:0.05 --log-r -8:-1:0.5 -o table.ecsv "
     "examples/quickstart.yaml"},
    {"opacity check", "look a table over: grid, gaps, spikes, slopes, distance from the built-in formula",
     "a table of its own format or of a published layout", CLI_COMPOSITION | CLI_TAKES_FILE,
     lxg_run_opacity_check, "luxgale opacity check opacity/nova-x35-cno30.ecsv"},
    {"opacity import", "turn tables of a published layout into tables that a case may name (-o FOLDER)",
     "blocks of log R across and log T down",
     CLI_COMPOSITION | CLI_BIT(CLI_SOURCE) | CLI_BIT(CLI_DATE) | CLI_TAKES_FILE | CLI_TAKES_FOLDER,
     lxg_run_opacity_import, "luxgale opacity import --date 1996 published.txt -o tables"},
};

static const struct cli_option options[CLI_OPTIONS] = {
    [CLI_OUTPUT] = {"output", 'o', "FILE",
                    "Write the report there instead of standard output; FILE.ecsv takes the table."},
    [CLI_FORMAT] = {"format", 0, "yaml|json",
                    "Form of the report; else by the suffix of --output, else yaml."},
    [CLI_SET] = {"set", 0, "PATH=VALUE",
                 "Replace or add a key of the case, e.g. star.mass='1.1 Msun'; repeatable."},
    [CLI_EPOCHS] = {"epochs", 0, "FILE",
                    "Write the table (ECSV), one row an epoch or a member of the family."},
    [CLI_STRUCTURE] = {"structure", 0, "FILE", "Write the wind's radial structure (ECSV)."},
    [CLI_BRANCH] =
        {"branch", 0, "thin|thick",
         "Where several winds have the held values: the one with the smallest (thin, the default) or largest "
         "(thick) mass-loss rate."},
    [CLI_THREADS] = {"threads", 0, "N",
                     "Threads for independent work; results do not depend on it. Default 1."},
    [CLI_SEED] = {"seed", 0, "N", "Seed of the random numbers in place of the case's errors.seed."},
    [CLI_POINTS] = {"points", 0, "FILE", "Table (ECSV or CSV) of points with the columns log_t and log_r."},
    [CLI_LOG_T] = {"log-t", 0, "NUMBER", "log10 of T in K; for a grid FIRST:LAST:STEP."},
    [CLI_LOG_R] = {"log-r", 0, "NUMBER", "log10 of R = rho/(T/1e6 K)^3; for a grid FIRST:LAST:STEP."},
    [CLI_HYDROGEN] = {"hydrogen", 0, "X", "Mass fraction, where the file does not say it."},
    [CLI_HELIUM] = {"helium", 0, "Y", "Mass fraction; what the others leave if absent."},
    [CLI_CNO] = {"cno", 0, "C", "Mass fraction of extra carbon, nitrogen, oxygen; 0 if absent."},
    [CLI_METALS] = {"metals", 0, "Z",
                    "Mass fraction of scaled-solar metals, where the file does not say it."},
    [CLI_SOURCE] = {"source", 0, "TEXT", "Where the tables come from; else the first lines of the file."},
    [CLI_DATE] = {"date", 0, "DATE", "Date of the source, as YYYY or YYYY-MM-DD."},
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

const struct cli_command *cli_command_match(const char *first, const char *second, int *words) {
  const size_t length = strlen(first);
  for (size_t i = 0; cli_command_row(i) != NULL; i++) {
    const char *name = commands[i].name;
    if (strcmp(name, first) == 0) {
      *words = 1;
      return &commands[i];
    }
    if (second != NULL && strncmp(name, first, length) == 0 && name[length] == ' ' &&
        strcmp(name + length + 1, second) == 0) {
      *words = 2;
      return &commands[i];
    }
  }
  return NULL;
}

const struct cli_option *cli_option_row(size_t index) {
  return index < CLI_OPTIONS ? &options[index] : NULL;
}
