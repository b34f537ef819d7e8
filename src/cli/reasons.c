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
    {"streaming-light",
     "somewhere inside the photosphere light comes close to streaming freely: diffusion overstates it",
     "Speeds and rates of such winds are upper estimates; `radiation_flux_share_max` says how close it "
     "comes."},
    {"fast-flow", "terms of first order in v/c, which the equations leave out, are no longer small",
     "Expect errors of order v/c in the energy that the gas takes up."},
    {"no-wind",
     "the eruption has no wind: the star has none over a burning base, or the start lies beyond its end",
     "A heavier dwarf, more `cno` or a larger start mass may have one."},
    {"blend-error", "winds between the families of several reduction factors are interpolated coarsely",
     "Give more reduction factors; `rate_error` estimates what the interpolation costs."},
    {"assignment-unsure", "the speeds do not decide whether some rows belong to the wind or to the shell",
     "The table has the probabilities; name the component in the input if you know it."},
    {"line-left", "some rows were not compared with a model",
     "Each row says why in its column `reason_code`."},
    {"fit-none", "the fit found no wind to compare with", "Widen the ranges of mass and held value."},
    {"fit-unconstrained", "the data do not bound the fitted numbers",
     "Add epochs or lines, or fix one of the two numbers."},
    {"fit-unsettled", "at the best point some rows would belong to another system, wind or shell",
     "Run again with the components named."},
    {"fit-interpolation", "the best point solved anew differs from the interpolated speeds",
     "Take more masses and values."},
    {"mass-bound-broken", "the methods' mean exceeds what the radiated energy can lift",
     "One of the measured quantities, or an assumption behind a method, is off: compare the methods one by "
     "one."},
    {"mass-no-wind", "no steady wind has this luminosity and speed",
     "The steady-wind method is left out; the others stand."},
    {"errors-interpolation",
     "results interpolated between families of winds differ from a family traced for a test by more than "
     "they may",
     "Smaller errors of the model parameters, or fewer of them, make the interpolation better."},
    {"errors-failed", "some draws of the error propagation failed; the intervals are those of the others",
     "The reason of the most frequent failure stands beside the warning."},
    {"errors-windless", "within the errors some epochs lose their wind, which then adds no mass",
     "Intervals of the mass reach too low; hold another quantity, or narrow the errors of the luminosity."},
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
