/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * reasons.c - what the codes of reports and messages mean and what to try, for `luxgale help reason CODE`.
 */
#include "cli.h"

#include "luxgale/text.h"
#include "luxgale/wind.h"

#include <string.h>

/* Codes with advice. The meaning of a wind's reason comes from the library, NULL here. */
static const struct {
  const char *code, *meaning, *advice;
} codes[] = {
    {"solved", NULL, "Nothing to do."},
    {"below-thin-end", NULL,
     "Fainter than any optically thick wind of the family: at such epochs the star rests. If the light curve "
     "says otherwise, hold "
     "another quantity, or look at `luxgale family` for the range of each number."},
    {"above-fold", NULL,
     "Hold a value on this side of the turning point; `luxgale family` lists the range of each quantity."},
    {"energy-limited", NULL,
     "The rate would have to be smaller, or the star's potential shallower: compare the "
     "`tiring_rate_msun_yr` of `luxgale star`."},
    {"stagnates", NULL,
     "The gas needs more opacity far out or more light there: try another composition or a larger "
     "luminosity."},
    {"photosphere-inside", NULL,
     "The wind is not optically thick: hold a larger rate or a smaller photospheric temperature."},
    {"opacity-edge", NULL,
     "Use tables that reach further, or `opacity.outside: join` to pass to the formula."},
    {"no-critical-point", NULL,
     "No shell of gas feels more light than weight: raise the luminosity, or check `opacity.omit` and "
     "`porosity`."},
    {"beyond-limit", NULL, "The held value is far out on the family; check its unit."},
    {"not-found", NULL,
     "Neither found nor excluded. Hold the quantity in another way (e.g. `launch_radius` in place of a "
     "speed) or start nearer by."},
    {"thin-wind", "the critical point is not deep enough for radiative diffusion to be a good description",
     "Trust order of magnitude only where `critical_optical_depth` is below 10; the epochs or members are "
     "marked in the table."},
    {"not-steady", "the luminosity changes faster than gas or light crosses the wind",
     "A steady wind is an approximation there; compare `flow_time_d` and `diffusion_time_d` of the table "
     "with your time scale."},
    {"several-branches", "several winds have the same luminosity; the chosen branch was taken",
     "Run again with `--branch thick`: the difference is part of the error."},
    {"branches-unknown", "the family could not be searched for other winds with the held values",
     "The reported wind is a solution; whether it is the only one is not known."},
    {"luminosity-gap", "long pause without data; luminosities there are a guess",
     "Add points, or read the result as if nothing were known about the pause; `settings.gap_fraction` says "
     "what counts as long."},
    {"super-eddington-open",
     "the luminosity exceeds L_Edd at an end of the history: the duration is a lower limit",
     "Add earlier or later points."},
    {"table-share", "part of the wind took its opacity from the formula, outside the tables",
     "Use tables that reach further, or accept the join; `checks` has the share."},
    {"trapped-light", "gas crosses from the critical point to the photosphere faster than light diffuses",
     "The radiation is carried along: the wind is still a solution, but its light answers slowly to changes "
     "at the base."},
    {"handover-gap", "at the homogeneous limit only one side, plain or porous, has a wind",
     "Epochs near the limit have no wind or a doubtful one; another launch radius or porosity may close the "
     "gap."},
    {"handover-jump", "the mass-loss rate jumps where plain winds hand over to porous ones",
     "The size of the jump is part of the error near the limit; `settings.handover_jump` says what is "
     "tolerated."},
    {"start-clipped",
     "the steady states end below the wanted start mass: the eruption starts from the largest one",
     "The mass above it left in some other way, or the mixture is not that of the eruption; see "
     "docs/decline.md."},
    {"decline-lost", "the sequence of states was lost before the turn-off",
     "The report holds the eruption up to there."},
    {"pictures-missing", "a picture could not be drawn",
     "Install gnuplot, or run `gnuplot NAME.gp` by hand in the folder of --plots."},
    {"key-unknown", "the case has a key that luxgale does not know",
     "See `luxgale help case`; the message names the nearest key."},
    {"key-unused", "the case has a key that has no effect here",
     "Remove it, or choose the law that uses it."},
    {"key-duplicate", "a key stands twice in one mapping", "Keep one of them."},
    {"key-missing", "a key that is needed is absent", "`luxgale help KEY` says what it takes."},
    {"hold-count", "too few or too many quantities are held",
     "Two for `wind`, one for `outburst` and `family`."},
    {"hold-dependent", "the held quantities follow from one another",
     "Hold another quantity: `luxgale help hold`."},
    {"unit-unknown", "a unit that luxgale does not know", "See `luxgale help units`."},
    {"unit-dimension", "a unit of another kind of quantity", "See `luxgale help units`."},
};
enum { CODES = sizeof codes / sizeof codes[0] };

static const char *meaning_of(size_t index) {
  for (int reason = 0; reason < LXG_WIND_REASON_COUNT; reason++) {
    if (strcmp(lxg_wind_reason_code((enum lxg_wind_reason)reason), codes[index].code) == 0) {
      return lxg_wind_reason_text((enum lxg_wind_reason)reason);
    }
  }
  return codes[index].meaning != NULL ? codes[index].meaning : "";
}

const char *cli_reason_code(size_t index) {
  return index < CODES ? codes[index].code : NULL;
}

const char *cli_reason_meaning(size_t index) {
  return meaning_of(index);
}

enum lxg_status cli_reason_explain(struct lxg_buffer *out, const char *code, struct lxg_error *error) {
  const char *names[CODES];
  for (size_t i = 0; i < CODES; i++) {
    names[i] = codes[i].code;
    if (strcmp(codes[i].code, code) == 0) {
      lxg_buffer_format(out, "%s: %s.\n  %s\n", code, meaning_of(i), codes[i].advice);
      return LXG_OK;
    }
  }
  const char *const near = lxg_text_nearest(code, names, CODES);
  return lxg_error_set(error, LXG_USAGE, "help-unknown",
                       "help reason %s: no explanation beyond the message itself%s%s%s `luxgale help "
                       "reasons` lists those there are",
                       code, near != NULL ? "; did you mean " : "", near != NULL ? near : "",
                       near != NULL ? "?" : ".");
}
