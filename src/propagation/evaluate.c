/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * evaluate.c - times at which winds are looked up, and the integrals of one draw over them.
 *
 * The trapezoidal rule; where a wind begins or ends between two times it counts for half their distance. Crossings of the
 * Eddington luminosity are straight in ln L.
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include "propagation/propagation_internal.h"

#include <math.h>

/* ---- times -------------------------------------------------------------------------------------------------------- */

static double epoch_time(const struct engine *engine, size_t i) {
  return engine->input->course != NULL ? engine->input->observed->time[i] : engine->input->history->time[i];
}

static double course_key(const struct lxg_propagation_input *input,
                         const struct lxg_photometry_search *search, const struct sample *sample) {
  const struct lxg_observed_epoch *epoch = &input->course->epoch[sample->epoch];
  const double *arc = input->family->arc;
  double here = 0.0;
  if (sample->fraction == 0.0) {
    return epoch[0].absolute;
  }
  if (!lxg_track_at(input->course->track, sample->time, &here, NULL)) {
    return epoch[0].absolute + sample->fraction * (epoch[1].absolute - epoch[0].absolute);
  }
  size_t low = 0, high = input->family->count - 1;
  while (high - low > 1) {
    const size_t middle = low + (high - low) / 2;
    if (arc[middle] <= here) {
      low = middle;
    } else {
      high = middle;
    }
  }
  return lxg_photometry_member_magnitude(search, low, (here - arc[low]) / (arc[high] - arc[low]), NULL);
}

static void set_keys(struct engine *engine, const struct lxg_photometry_search *search) {
  const struct lxg_propagation_input *input = engine->input;
  for (size_t j = 0; j < engine->samples; j++) {
    struct sample *sample = &engine->sample[j];
    struct lxg_history_value value = {0};
    if (input->course != NULL) {
      sample->key = course_key(input, search, sample);
    } else {
      lxg_history_at(input->history, LXG_HISTORY_VALUE, sample->time, &value);
      sample->key = log(value.luminosity);
    }
  }
  for (size_t i = 0; i < engine->epochs; i++) {
    const struct lxg_history *history = input->history;
    engine->sigma[i] = input->course != NULL  ? input->observed->error[i]
                       : history->low != NULL ? 0.5 * log(history->high[i] / history->low[i])
                                              : 0.0;
  }
}

/* Parts of the interval after epoch i. */
static size_t parts(const struct engine *engine, size_t i) {
  const double span = epoch_time(engine, engine->epochs - 1) - epoch_time(engine, 0);
  const double wish = LXG_PROPAGATION_SAMPLES * (epoch_time(engine, i + 1) - epoch_time(engine, i)) / span;
  return wish > 1.0 ? (size_t)wish : 1;
}

enum lxg_status lxg_propagation_sample(struct engine *engine, struct lxg_error *error) {
  struct lxg_photometry_search search = {0};
  enum lxg_status status = LXG_OK;
  engine->samples = 1;
  for (size_t i = 0; i + 1 < engine->epochs; i++) {
    engine->samples += parts(engine, i);
  }
  engine->sample = lxg_alloc(engine->samples, sizeof *engine->sample);
  engine->sigma = lxg_alloc(engine->epochs, sizeof *engine->sigma);
  if (engine->sample == NULL || engine->sigma == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "%zu times: out of memory", engine->samples);
  }
  size_t j = 0;
  for (size_t i = 0; i < engine->epochs; i++) {
    const size_t n = i + 1 < engine->epochs ? parts(engine, i) : 1;
    const double step = i + 1 < engine->epochs ? epoch_time(engine, i + 1) - epoch_time(engine, i) : 0.0;
    for (size_t k = 0; k < n; k++) {
      const double fraction = (double)k / (double)n;
      engine->sample[j++] =
          (struct sample){.time = epoch_time(engine, i) + fraction * step, .epoch = i, .fraction = fraction};
    }
  }
  if (engine->input->course != NULL) {
    status = lxg_observed_search(engine->input->observed, engine->input->family, &search, error);
  }
  if (status == LXG_OK) {
    set_keys(engine, &search);
  }
  lxg_photometry_search_free(&search);
  return status;
}

/* ---- one draw ------------------------------------------------------------------------------------------------------ */

/* State at one time. */
struct moment {
  double time;
  bool wind;
  double rate, speed, infinity; /* [g s^-1], [cm s^-1], over nominal L_Edd */
  double excess;                /* ln(L/L_Edd); NaN where no luminosity is known */
  struct place place;
};

struct sums {
  double mass, kinetic, momentum, radiated, wind_time, excess_time;
  double peak_rate, peak_speed, peak_excess, windless;
};

static struct moment look_up(const struct engine *engine, const struct members *members, double key,
                             double time) {
  struct moment m = {.time = time, .excess = NAN};
  const bool magnitude = engine->keying.kind == KEY_MAGNITUDE;
  m.wind = lxg_members_find(members, key, engine->input->branch, &m.place);
  if (!magnitude) {
    m.excess = key - members->ln_l_edd;
  }
  if (m.wind) {
    m.rate = exp(lxg_members_number(members, NUMBER_LN_RATE, m.place));
    m.speed = sqrt(fmax(lxg_members_number(members, NUMBER_SPEED_SQ, m.place), 0.0));
    m.infinity = lxg_members_number(members, NUMBER_INFINITY, m.place);
    if (magnitude) {
      m.excess = lxg_members_number(members, NUMBER_LN_LUMINOSITY, m.place) - members->ln_l_edd;
    }
  } else if (!magnitude) {
    m.infinity = exp(key) / engine->input->l_edd;
  }
  return m;
}

/* Share of an interval in which a straight line is above zero. */
static double above(double a, double b) {
  if (isnan(a) || isnan(b)) {
    return 0.0;
  }
  if (a > 0.0 && b > 0.0) {
    return 1.0;
  }
  return a <= 0.0 && b <= 0.0 ? 0.0 : fmax(a, b) / fabs(a - b);
}

static void add_panel(const struct moment *a, const struct moment *b, struct sums *sums) {
  const double h = 0.5 * (b->time - a->time);
  sums->mass += h * (a->rate + b->rate);
  sums->momentum += h * (a->rate * a->speed + b->rate * b->speed);
  sums->kinetic += 0.5 * h * (a->rate * a->speed * a->speed + b->rate * b->speed * b->speed);
  sums->radiated += h * (a->infinity + b->infinity);
  sums->wind_time += h * (a->wind + b->wind);
  sums->excess_time += 2.0 * h * above(a->excess, b->excess);
}

static void set_profile(const struct members *members, const struct moment *m, double luminosity, double mass,
                        double column[]) {
  const double year = LXG_SOLAR_MASS / LXG_YEAR;
  column[0] = luminosity;
  column[1] = exp(m->excess);
  for (int i = 2; i < LXG_PROPAGATION_COLUMNS - 1; i++) {
    column[i] = NAN;
  }
  if (m->wind) {
    column[2] = m->rate / year;
    column[3] = m->speed / LXG_KM;
    column[4] = exp(lxg_members_number(members, NUMBER_LN_RADIUS, m->place)) / LXG_SOLAR_RADIUS;
    column[5] = exp(lxg_members_number(members, NUMBER_LN_TEMPERATURE, m->place));
    column[6] = exp(lxg_members_number(members, NUMBER_LN_PHOTOSPHERE_SPEED, m->place)) / LXG_KM;
  }
  column[LXG_PROPAGATION_COLUMNS - 1] = mass / LXG_SOLAR_MASS;
}

static void conclude(const struct engine *engine, const struct members *members, const struct sums *sums,
                     double outputs[]) {
  const double year = LXG_SOLAR_MASS / LXG_YEAR;
  outputs[LXG_PROPAGATED_MASS] = sums->mass / LXG_SOLAR_MASS;
  outputs[LXG_PROPAGATED_KINETIC] = sums->kinetic;
  outputs[LXG_PROPAGATED_MOMENTUM] = sums->momentum;
  outputs[LXG_PROPAGATED_SPEED] = sums->mass > 0.0 ? sums->momentum / sums->mass / LXG_KM : NAN;
  outputs[LXG_PROPAGATED_PEAK_RATE] = sums->peak_rate > 0.0 ? sums->peak_rate / year : NAN;
  outputs[LXG_PROPAGATED_PEAK_SPEED] = sums->peak_rate > 0.0 ? sums->peak_speed / LXG_KM : NAN;
  outputs[LXG_PROPAGATED_WIND_DURATION] = sums->wind_time / LXG_DAY;
  outputs[LXG_PROPAGATED_LIFTING] = sums->mass * exp(members->ln_escape);
  outputs[LXG_PROPAGATED_RADIATED] = sums->radiated * engine->input->l_edd;
  outputs[LXG_PROPAGATED_EXCESS_DURATION] = sums->excess_time / LXG_DAY;
  outputs[LXG_PROPAGATED_EXCESS_PEAK] = isfinite(sums->peak_excess) ? exp(sums->peak_excess) : NAN;
  outputs[LXG_PROPAGATED_WINDLESS] = sums->windless;
}

void lxg_propagation_integrate(const struct engine *engine, const struct members *members,
                               const double noise[], double shift, double outputs[], double profile[]) {
  struct sums sums = {.peak_excess = -INFINITY};
  struct moment before = {0};
  for (size_t j = 0; j < engine->samples; j++) {
    const struct sample *sample = &engine->sample[j];
    double key = sample->key + shift;
    if (noise != NULL) {
      const double *here = noise + sample->epoch;
      key += sample->fraction > 0.0 ? here[0] + sample->fraction * (here[1] - here[0]) : here[0];
    }
    const struct moment now = look_up(engine, members, key, sample->time);
    if (j > 0) {
      add_panel(&before, &now, &sums);
    }
    if (sample->fraction == 0.0) {
      sums.windless += now.wind ? 0.0 : 1.0;
      sums.peak_rate = fmax(sums.peak_rate, now.rate);
      sums.peak_speed = fmax(sums.peak_speed, now.speed);
      sums.peak_excess = fmax(sums.peak_excess, now.excess); /* fmax passes over NaN */
      if (profile != NULL) {
        set_profile(members, &now, exp(now.excess + members->ln_l_edd), sums.mass,
                    profile + sample->epoch * LXG_PROPAGATION_COLUMNS);
      }
    }
    before = now;
  }
  conclude(engine, members, &sums, outputs);
}
