/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * starter.c - `luxgale new`: commented cases to begin with, one for each kind of reader. All values are invented.
 */
#include "cli.h"

#include "luxgale/output.h"
#include "luxgale/text.h"

#include <string.h>
#include <unistd.h>

static const char theorist[] =
    "# An energy history and an opacity: can the light throw matter out, how much, how fast?\n"
    "#   luxgale outburst --plots pictures THIS-FILE\n"
    "#   luxgale outburst --set opacity.omit='[iron]' THIS-FILE     what does the iron group do?\n"
    "# All values are invented. `luxgale help KEY` explains each key, `luxgale help units` the units.\n"
    "case: 1\n"
    "title: \"invented burning shell\"\n"
    "star:\n"
    "  mass: 1.0 Msun\n"
    "  radius: white-dwarf            # derived from the mass; or a length, for any other star\n"
    "composition:                     # mass fractions of the envelope\n"
    "  hydrogen: 0.45\n"
    "  helium: 0.35\n"
    "  cno: 0.18                      # added by the dwarf's core\n"
    "  metals: 0.02                   # scaled solar; the iron bump follows them\n"
    "opacity:\n"
    "  formula: kramers               # or tables: [my-table.ecsv]\n"
    "hold:                            # one quantity makes the winds a family; the history picks the member\n"
    "  base_temperature: 1.0e8 K\n"
    "luminosity:\n"
    "  kind: formula                  # or base, with file: history.ecsv (columns time [d], luminosity "
    "[erg/s])\n"
    "  at: base\n"
    "  start: 0 d\n"
    "  end: 150 d\n"
    "  terms:\n"
    "    - {law: plateau, luminosity: 1.02 Ledd, duration: 10 d, time_scale: 420 d, index: 1.0}\n";

static const char spectroscopist[] =
    "# Line velocities: which wind is behind them?\n"
    "#   luxgale wind --structure structure.ecsv --plots pictures THIS-FILE\n"
    "# All values are invented. `luxgale help hold` lists what may be held; any two quantities select one "
    "wind.\n"
    "case: 1\n"
    "title: \"invented line velocities\"\n"
    "star: {mass: 1.0 Msun}           # radius: that of a white dwarf of this mass\n"
    "composition: {hydrogen: 0.45, helium: 0.35, cno: 0.18, metals: 0.02}\n"
    "hold:\n"
    "  terminal_speed: 650 km/s       # from the blue edges of the absorption lines\n"
    "  photosphere_luminosity: 0.62 Ledd   # from brightness and distance; erg/s and Lsun are units too\n";

static const char observer[] =
    "# A light curve: how much mass was thrown out?\n"
    "#   luxgale outburst --html report.html THIS-FILE\n"
    "# All values are invented. Put your own luminosities in a table with columns "
    "time [d] and luminosity [erg/s] and replace the\n"
    "# section `luminosity` by: {kind: photosphere, file: history.csv}\n"
    "case: 1\n"
    "title: \"invented light curve\"\n"
    "star: {mass: 1.0 Msun}           # try --set star.mass='0.8 Msun': the mass "
    "of the star is part of the error\n"
    "composition: {hydrogen: 0.45, helium: 0.35, cno: 0.18, metals: 0.02}\n"
    "hold: {base_temperature: 1.0e8 K}\n"
    "luminosity:\n"
    "  kind: formula\n"
    "  at: photosphere                # what reaches the observer: it rises while the wind thins out\n"
    "  start: 0 d\n"
    "  end: 60 d\n"
    "  terms:\n"
    "    - {law: constant, luminosity: 0.55 Ledd}\n"
    "    - {law: exponential, luminosity: 0.05 Ledd, time_scale: -40 d}\n";

static const struct {
  const char *name, *text;
} starters[] = {{"spectroscopist", spectroscopist}, {"theorist", theorist}, {"observer", observer}};
enum { STARTERS = sizeof starters / sizeof starters[0] };

static const char *text_for(const char *name) {
  for (size_t i = 0; i < STARTERS; i++) {
    if (name != NULL && strcmp(starters[i].name, name) == 0) {
      return starters[i].text;
    }
  }
  return NULL;
}

enum lxg_status cli_new(const struct cli_request *request, struct lxg_error *error) {
  const char *const text = text_for(request->reader);
  if (text == NULL) {
    return lxg_error_set(error, LXG_USAGE, "option-value",
                         "--for %s: it takes spectroscopist, theorist or observer",
                         request->reader != NULL ? request->reader : "is missing");
  }
  if (strcmp(request->output, "-") != 0 && access(request->output, F_OK) == 0) {
    return lxg_error_set(error, LXG_USAGE, "file-exists", "%s: it exists already; `new` overwrites nothing",
                         request->output);
  }
  return lxg_output_write(request->output, text, strlen(text), error);
}
