/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decline_light.c - magnitudes of the states, decline times, slopes.
 *
 * Three lights in a band, of which the brightest counts: the black photosphere; the free-free light of the wind outside
 * it, F3 of freefree.h with the photospheric speed (after Hachisu & Kato 2006, ApJS 167, 59), never above what the wind's own
 * absorption lets through (the radio law, limit of F4); and that of the gas thrown out
 * so far, a uniform shell (F5) whose speeds have the mean and the spread of the terminal speeds, as long as it is outside the
 * photosphere and thin. Hydrogen and helium fully ionised, heavier ions of charge 2.
 */
#include "decline/decline_internal.h"
#include "luxgale/constants.h"
#include "luxgale/freefree.h"

#include <math.h>

static const double helium_charge = 2.0, metal_charge = 2.0; /* of the ions that give free-free light */
static const double least_spread = 0.1; /* least spread of the shell's speeds, over their mean */
static const double shell_thin =
    1.0; /* optical depth above which the thin formula of the shell is not used */
static const double thick_depth =
    5.0;                              /* of the critical point: below it the wind is no longer called thick */
static const double xray_share = 0.1; /* of the largest X-ray luminosity that counts as supersoft source */

/* Speeds of the gas thrown out so far. */
struct speeds {
  double mass, momentum, square;
};

struct lights {
  const struct lxg_composition *composition;
  const struct lxg_decline_options *options;
  struct lxg_freefree_gas gas; /* of the state */
  struct lxg_freefree_gas
      thin; /* of the light without absorption: one temperature, so that Mdot^2/(v^2 R) is its law */
  struct speeds speeds;
};

static void collect(struct speeds *s, const struct lxg_decline_state *a, const struct lxg_decline_state *b) {
  const double mass = b->ejected_mass - a->ejected_mass;
  if (mass > 0.0 && a->phase == LXG_DECLINE_WIND) {
    const double v =
        b->phase == LXG_DECLINE_WIND ? 0.5 * (a->terminal_speed + b->terminal_speed) : a->terminal_speed;
    s->mass += mass;
    s->momentum += mass * v;
    s->square += mass * v * v;
  }
}

/* L_nu of the shell [erg s^-1 Hz^-1]; 0 while there is none that the formula describes. */
static double shell_light(const struct lights *l, const struct lxg_decline_state *state, double age,
                          double frequency) {
  const struct speeds *s = &l->speeds;
  if (!(s->mass > 0.0) || !(age > 0.0)) {
    return 0.0;
  }
  const double mean = s->momentum / s->mass;
  const double spread =
      sqrt(3.0 * fmax(s->square / s->mass - mean * mean, least_spread * least_spread * mean * mean));
  const struct lxg_freefree_shell shell = {
      .mass = s->mass, .speed_inner = fmax(mean - spread, 0.0), .speed_outer = mean + spread};
  if (mean * age <= state->photosphere_radius ||
      lxg_freefree_shell_depth(&l->gas, &shell, age, frequency) > shell_thin) {
    return 0.0;
  }
  return lxg_freefree_shell_thin(&l->gas, &shell, age, frequency);
}

/* The three lights of one band as magnitudes, and the free-free light without absorption; those that are not there are
 * infinitely faint. */
static void band_lights(const struct lights *l, const struct lxg_decline_state *state, enum lxg_band band,
                        double magnitude[3], double *unabsorbed) {
  const double frequency = lxg_band_frequency(band);
  magnitude[LXG_DECLINE_BLACKBODY] =
      lxg_photometry_blackbody(band, state->photosphere_temperature, state->photosphere_radius);
  magnitude[LXG_DECLINE_FREEFREE] = *unabsorbed = INFINITY;
  if (state->phase == LXG_DECLINE_WIND) {
    const struct lxg_freefree_wind wind = {.mass_loss_rate = state->mass_loss_rate,
                                           .speed = state->photosphere_speed,
                                           .radius = state->photosphere_radius};
    const double thin = lxg_freefree_wind_thin(&l->gas, &wind, frequency);
    const double thick = lxg_freefree_wind_thick(&l->gas, &wind, frequency);
    magnitude[LXG_DECLINE_FREEFREE] = lxg_photometry_magnitude(band, fmin(thin, thick));
    *unabsorbed = lxg_photometry_magnitude(band, lxg_freefree_wind_thin(&l->thin, &wind, frequency));
  }
  const double shell = shell_light(l, state, state->time + l->options->rise, frequency);
  magnitude[LXG_DECLINE_SHELL] = shell > 0.0 ? lxg_photometry_magnitude(band, shell) : INFINITY;
}

static enum lxg_decline_light brightest(const double magnitude[3]) {
  enum lxg_decline_light best = LXG_DECLINE_BLACKBODY;
  for (int i = 1; i < 3; i++) {
    best = magnitude[i] < magnitude[best] ? (enum lxg_decline_light)i : best;
  }
  return best;
}

static enum lxg_status gas_of(struct lights *l, double temperature, struct lxg_error *error) {
  const double given = l->options->gas_temperature;
  const double t = given > 0.0 ? fmin(given, temperature) : temperature;
  const enum lxg_status status =
      lxg_freefree_gas_init(l->composition, t, helium_charge, metal_charge, &l->gas, error);
  return status != LXG_OK ? status
                          : lxg_freefree_gas_init(l->composition, given > 0.0 ? given : temperature,
                                                  helium_charge, metal_charge, &l->thin, error);
}

/* Which magnitude of a state a curve follows. */
typedef double magnitude_of(const struct lxg_decline_state *state);

static double brightest_v(const struct lxg_decline_state *state) {
  return state->v_magnitude;
}

static double thin_v(const struct lxg_decline_state *state) {
  return state->v_thin;
}

/* First time after state `from` at which the curve has fallen to a magnitude, linear between states; NaN if never. */
static double fall_time(const struct lxg_decline *d, magnitude_of *curve, size_t from, double magnitude) {
  for (size_t i = from + 1; i < d->count; i++) {
    const double a = curve(&d->state[i - 1]), b = curve(&d->state[i]);
    if (isinf(b)) {
      return NAN;
    }
    if (b >= magnitude) {
      const double u = (magnitude - a) / (b - a);
      return d->state[i - 1].time + u * (d->state[i].time - d->state[i - 1].time);
    }
  }
  return NAN;
}

static struct lxg_decline_curve curve_of(const struct lxg_decline *d, magnitude_of *curve, double rise) {
  size_t peak = 0;
  for (size_t i = 1; i < d->count; i++) {
    peak = curve(&d->state[i]) < curve(&d->state[peak]) ? i : peak;
  }
  struct lxg_decline_curve out = {.peak = curve(&d->state[peak]), .peak_time = d->state[peak].time};
  out.t2 = fall_time(d, curve, peak, out.peak + 2.0) - out.peak_time;
  out.t3 = fall_time(d, curve, peak, out.peak + 3.0) - out.peak_time;
  static const double bound[LXG_DECLINE_SLOPES][2] = {{0.0, 2.0}, {2.0, 6.0}, {6.0, 10.0}};
  for (size_t i = 0; i < LXG_DECLINE_SLOPES; i++) {
    const double a = (i == 0 ? out.peak_time : fall_time(d, curve, peak, out.peak + bound[i][0])) + rise;
    const double b = fall_time(d, curve, peak, out.peak + bound[i][1]) + rise;
    const double flux = -0.4 * (bound[i][1] - bound[i][0]);
    out.slope[i] = (struct lxg_decline_slope){bound[i][0], bound[i][1], a > 0.0 ? flux / log10(b / a) : NAN};
  }
  if (isinf(out.peak)) {
    out.peak = out.peak_time = NAN;
  }
  return out;
}

static void marks(struct lxg_decline *d) {
  double most = 0.0;
  d->supersoft_start = NAN;
  d->thick_duration = 0.0;
  for (size_t i = 0; i < d->count; i++) {
    const struct lxg_decline_state *s = &d->state[i];
    most = fmax(most, s->xray_luminosity);
    if (s->phase == LXG_DECLINE_WIND && s->critical_depth >= thick_depth) {
      d->thick_duration = s->time;
    }
  }
  for (size_t i = 0; i < d->count && isnan(d->supersoft_start); i++) {
    const struct lxg_decline_state *s = &d->state[i];
    if (s->phase == LXG_DECLINE_STATIC && s->xray_luminosity >= xray_share * most) {
      d->supersoft_start = s->time;
    }
  }
}

enum lxg_status lxg_decline_photometry(const struct lxg_composition *composition,
                                       const struct lxg_decline_options *options, struct lxg_decline *decline,
                                       struct lxg_error *error) {
  struct lights lights = {.composition = composition, .options = options};
  for (size_t i = 0; i < decline->count; i++) {
    struct lxg_decline_state *state = &decline->state[i];
    if (i > 0) {
      collect(&lights.speeds, state - 1, state);
    }
    const enum lxg_status status = gas_of(&lights, state->photosphere_temperature, error);
    if (status != LXG_OK) {
      return status;
    }
    double magnitude[3], thin;
    band_lights(&lights, state, LXG_BAND_UV1455, magnitude, &thin);
    state->uv_magnitude = magnitude[brightest(magnitude)];
    band_lights(&lights, state, LXG_BAND_V, magnitude, &state->v_thin);
    state->v_blackbody = magnitude[LXG_DECLINE_BLACKBODY];
    state->v_freefree = magnitude[LXG_DECLINE_FREEFREE];
    state->v_shell = magnitude[LXG_DECLINE_SHELL];
    state->v_light = brightest(magnitude);
    state->v_magnitude = magnitude[state->v_light];
    state->xray_luminosity = state->luminosity * lxg_photometry_xray_share(state->photosphere_temperature);
  }
  decline->v = curve_of(decline, brightest_v, options->rise);
  decline->freefree = curve_of(decline, thin_v, options->rise);
  marks(decline);
  return LXG_OK;
}
