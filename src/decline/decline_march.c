/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decline_march.c - time along the path: (D1) integrated over the interpolated states.
 *
 * Between two nodes dt = -(dM_env/du)/(Mdot_wind + L_n/(X Q) - Mdot_acc) du, by Gauss-Legendre quadrature on each of a few
 * equal parts of the interval, with all sums along with it. The step from the last wind to the first envelope at rest, a small
 * difference in mass, burns at the mean of both rates.
 */
#include "decline/decline_internal.h"
#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include <math.h>

enum { PARTS = 4, GAUSS = 4, GROW = 256 };
static const double gauss_x[GAUSS] = {0.06943184420297371, 0.33000947820757187, 0.66999052179242813,
                                      0.93056815579702629};
static const double gauss_w[GAUSS] = {0.17392742256872693, 0.32607257743127307, 0.32607257743127307,
                                      0.17392742256872693};

/* Sums since the start. */
struct sums {
  double time, ejected, burnt, nuclear, light, lifting, kinetic, momentum;
};

struct marcher {
  const struct path_star *star;
  const struct lxg_decline_options *options;
  struct lxg_decline *decline;
  size_t capacity;
  struct sums sums;
  bool over;
};

static enum lxg_status store(struct marcher *m, const struct lxg_decline_state *state) {
  struct lxg_decline *d = m->decline;
  if (d->count == m->capacity) {
    struct lxg_decline_state *grown = lxg_realloc(d->state, m->capacity + GROW, sizeof *grown);
    if (grown == NULL) {
      return LXG_MEMORY;
    }
    d->state = grown;
    m->capacity += GROW;
  }
  struct lxg_decline_state *to = &d->state[d->count++];
  *to = *state;
  to->time = m->sums.time;
  to->ejected_mass = m->sums.ejected;
  to->burnt_mass = m->sums.burnt;
  return LXG_OK;
}

/* Adds what happens while the mass falls by `mass` in one state. False when the mass does not fall. */
static bool pass(struct sums *s, const struct lxg_decline_state *at, double mass, double accretion) {
  const double rate = at->mass_loss_rate + at->burning_rate - accretion;
  if (!(rate > 0.0) || !(mass >= 0.0)) {
    return false;
  }
  const double dt = mass / rate;
  s->time += dt;
  s->ejected += at->mass_loss_rate * dt;
  s->burnt += at->burning_rate * dt;
  s->nuclear += at->nuclear_luminosity * dt;
  s->light += at->light * dt;
  s->lifting += at->lifting_rate * dt;
  s->kinetic += at->kinetic_rate * dt;
  s->momentum += at->mass_loss_rate > 0.0 ? at->mass_loss_rate * at->terminal_speed * dt : 0.0;
  return true;
}

/* Ends the march by a stop condition inside the last part: all sums shrink to the moment of the stop. */
static bool stopped(struct marcher *m, const struct sums *before, const struct lxg_decline_state *last,
                    struct lxg_decline_state *state) {
  const double late = (m->sums.time - m->options->time_most) / (m->sums.time - before->time);
  const double little =
      (m->options->mass_least - state->envelope_mass) / (last->envelope_mass - state->envelope_mass);
  const double back = fmax(late, little);
  if (!(back > 0.0)) {
    return false;
  }
  const double *a = (const double *)before;
  double *b = (double *)&m->sums;
  for (size_t i = 0; i < sizeof *before / sizeof *a; i++) {
    b[i] += fmin(back, 1.0) * (a[i] - b[i]);
  }
  state->envelope_mass += fmin(back, 1.0) * (last->envelope_mass - state->envelope_mass);
  m->decline->end = LXG_DECLINE_STOPPED;
  return true;
}

/* Why the mass does not fall any further in a state. */
static enum lxg_decline_end why_not(const struct lxg_decline_state *state, double accretion) {
  if (!(state->mass_loss_rate + state->burning_rate > accretion)) {
    return LXG_DECLINE_STEADY;
  }
  return state->phase == LXG_DECLINE_STATIC ? LXG_DECLINE_TURN_OFF : LXG_DECLINE_LOST;
}

/* One interval of a segment. */
static enum lxg_status interval(struct marcher *m, const struct path_segment *segment, size_t i) {
  for (size_t part = 0; part < PARTS && !m->over; part++) {
    const struct sums before = m->sums;
    double q[PATH_COUNT];
    struct lxg_decline_state state = {0};
    for (size_t g = 0; g < GAUSS; g++) {
      double slope = NAN;
      lxg_decline_path_at(segment, i, ((double)part + gauss_x[g]) / PARTS, q, &slope);
      lxg_decline_state_of(m->star, segment->phase, q, &state);
      if (!pass(&m->sums, &state, -slope * state.envelope_mass * gauss_w[g] / PARTS,
                m->options->accretion_rate)) {
        m->sums = before;
        m->over = true;
        m->decline->end = why_not(&state, m->options->accretion_rate);
        return LXG_OK;
      }
    }
    lxg_decline_path_at(segment, i, ((double)part + 1.0) / PARTS, q, NULL);
    lxg_decline_state_of(m->star, segment->phase, q, &state);
    m->over = stopped(m, &before, &m->decline->state[m->decline->count - 1], &state);
    const enum lxg_status status = store(m, &state);
    if (status != LXG_OK) {
      return status;
    }
  }
  return LXG_OK;
}

static enum lxg_status segment_march(struct marcher *m, const struct path_segment *segment) {
  struct lxg_decline_state state = {0};
  if (segment->count == 0 || m->over) {
    return LXG_OK;
  }
  lxg_decline_state_of(m->star, segment->phase, segment->node[0].q, &state);
  if (m->decline->count > 0) { /* from the last wind to the first envelope at rest */
    const struct lxg_decline_state *last = &m->decline->state[m->decline->count - 1];
    struct lxg_decline_state mean = state;
    mean.burning_rate = 0.5 * (last->burning_rate + state.burning_rate);
    mean.nuclear_luminosity = 0.5 * (last->nuclear_luminosity + state.nuclear_luminosity);
    mean.light = 0.5 * (last->light + state.light);
    pass(&m->sums, &mean, fmax(last->envelope_mass - state.envelope_mass, 0.0), m->options->accretion_rate);
  }
  enum lxg_status status = store(m, &state);
  for (size_t i = 0; status == LXG_OK && i + 1 < segment->count && !m->over; i++) {
    status = interval(m, segment, i);
  }
  return status;
}

/* What follows from the sums. */
static void account(const struct marcher *m) {
  struct lxg_decline *d = m->decline;
  const struct sums *s = &m->sums;
  const double spent = s->light + s->lifting + s->kinetic;
  d->ejected_mass = s->ejected;
  d->burnt_mass = s->burnt;
  d->accreted_mass = m->options->accretion_rate * s->time;
  d->remaining_mass = d->state[d->count - 1].envelope_mass;
  d->nuclear = s->nuclear;
  d->light = s->light;
  d->lifting = s->lifting;
  d->kinetic = s->kinetic;
  d->stored = spent - s->nuclear;
  d->light_share = s->light / spent;
  d->lifting_share = s->lifting / spent;
  d->kinetic_share = s->kinetic / spent;
  d->mean_speed = s->ejected > 0.0 ? s->momentum / s->ejected : NAN;
}

enum lxg_status lxg_decline_march(const struct path *path, const struct path_star *star,
                                  const struct lxg_decline_options *options, struct lxg_decline *decline) {
  struct marcher m = {.star = star, .options = options, .decline = decline};
  enum lxg_status status = segment_march(&m, &path->wind);
  decline->wind_states = decline->count;
  decline->wind_duration = m.sums.time;
  if (status == LXG_OK && !m.over && options->wind_only && decline->wind_states > 0) {
    m.over = true;
    decline->end = LXG_DECLINE_WIND_END;
  }
  if (status == LXG_OK) {
    status = segment_march(&m, &path->rest);
  }
  if (status == LXG_OK) {
    account(&m);
    decline->turn_off = decline->end == LXG_DECLINE_TURN_OFF ? m.sums.time : NAN;
  }
  return status;
}
