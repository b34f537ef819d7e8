/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * decline_path.c - the path through the steady states: nodes, and cubic interpolation in arc length between them.
 *
 * Slopes at the nodes are those of the parabola through three neighbours, as in family.c; that of the envelope mass is bounded so
 * that the mass falls everywhere.
 */
#include "decline/decline_internal.h"
#include "luxgale/memory.h"

#include <math.h>
#include <string.h>

static const double speed_unit = 1e8; /* of the squared terminal speed [cm s^-1] */
static const double nearest = 1e-4;   /* nodes closer than this in arc length are merged */

/* The slope of a falling curve bounded so that the cubic falls as well (Fritsch & Carlson 1980, SIAM J. Numer. Anal. 17,
 * 238: up to three times the smaller of the neighbouring chords). */
static double falling(const struct path_segment *s, size_t i, double slope) {
  static const double most = 3.0;
  const struct path_node *n = s->node;
  double steepest = -INFINITY;
  if (i > 0) {
    steepest = fmax(steepest, most * (n[i].q[PATH_MASS] - n[i - 1].q[PATH_MASS]) / (n[i].arc - n[i - 1].arc));
  }
  if (i + 1 < s->count) {
    steepest = fmax(steepest, most * (n[i + 1].q[PATH_MASS] - n[i].q[PATH_MASS]) / (n[i + 1].arc - n[i].arc));
  }
  return fmin(fmax(slope, steepest), 0.0);
}

/* Slope of a number at node i against arc length, from the parabola through three neighbours. */
static double parabola_slope(const struct path_segment *s, size_t i, int q) {
  const struct path_node *n = s->node;
  const size_t last = s->count - 1;
  if (last == 1) {
    return (n[1].q[q] - n[0].q[q]) / (n[1].arc - n[0].arc);
  }
  const size_t m = i == 0 ? 1 : i == last ? last - 1 : i;
  const double d0 = n[m].arc - n[m - 1].arc, d1 = n[m + 1].arc - n[m].arc;
  const double s0 = (n[m].q[q] - n[m - 1].q[q]) / d0, s1 = (n[m + 1].q[q] - n[m].q[q]) / d1;
  const double second = (s1 - s0) / (d0 + d1);
  return i == m ? s0 + second * d0 : i < m ? s0 - second * d0 : s1 + second * d1;
}

static double slope_at(const struct path_segment *s, size_t i, int q) {
  const double slope = parabola_slope(s, i, q);
  return q == PATH_MASS ? falling(s, i, slope) : slope;
}

void lxg_decline_path_at(const struct path_segment *segment, size_t i, double u, double q[PATH_COUNT],
                         double *mass_slope) {
  const struct path_node *a = &segment->node[i], *b = a + 1;
  const double h = b->arc - a->arc;
  for (int k = 0; k < PATH_COUNT; k++) {
    const double rise = b->q[k] - a->q[k];
    const double d0 = h * slope_at(segment, i, k), d1 = h * slope_at(segment, i + 1, k);
    const double c2 = 3.0 * rise - 2.0 * d0 - d1, c3 = d0 + d1 - 2.0 * rise;
    q[k] = a->q[k] + u * (d0 + u * (c2 + u * c3));
    if (k == PATH_MASS && mass_slope != NULL) {
      *mass_slope = d0 + u * (2.0 * c2 + 3.0 * u * c3);
    }
  }
}

/* Adds a node unless it coincides with the one before; at rest the mass must fall. */
static void add(struct path_segment *segment, const struct path_node *node) {
  const struct path_node *last = segment->count > 0 ? &segment->node[segment->count - 1] : NULL;
  if (last == NULL || (node->arc - last->arc > nearest &&
                       (segment->phase == LXG_DECLINE_WIND || node->q[PATH_MASS] < last->q[PATH_MASS]))) {
    segment->node[segment->count++] = *node;
  }
}

static struct path_node wind_node(const struct lxg_wind *wind, double arc) {
  const double *value = wind->value, speed = value[LXG_HELD_TERMINAL_SPEED] / speed_unit;
  const struct path_node node = {.arc = arc,
                                 .q = {[PATH_MASS] = log(value[LXG_HELD_ENVELOPE_MASS]),
                                       [PATH_LUMINOSITY] = log(wind->photosphere.luminosity),
                                       [PATH_LIGHT] = log(wind->luminosity_infinity),
                                       [PATH_NUCLEAR] = log(wind->nuclear_luminosity),
                                       [PATH_RADIUS] = log(wind->photosphere.radius),
                                       [PATH_TEMPERATURE] = log(wind->photosphere.temperature),
                                       [PATH_BASE] = log(wind->base.temperature),
                                       [PATH_RATE] = log(value[LXG_HELD_MASS_LOSS_RATE]),
                                       [PATH_SPEED] = log(wind->photosphere.speed),
                                       [PATH_TERMINAL] = speed * speed,
                                       [PATH_DEPTH] = log(wind->critical.optical_depth)}};
  return node;
}

enum lxg_status lxg_decline_path_wind(const struct lxg_family *family, struct path_segment *segment) {
  *segment = (struct path_segment){.phase = LXG_DECLINE_WIND};
  segment->node = lxg_alloc(family->count, sizeof *segment->node);
  if (segment->node == NULL) {
    return LXG_MEMORY;
  }
  const double whole = family->count > 0 ? family->arc[family->count - 1] : 0.0;
  for (size_t i = family->count; i-- > 0;) {
    const struct path_node node = wind_node(&family->wind[i], whole - family->arc[i]);
    add(segment, &node);
  }
  return LXG_OK;
}

enum lxg_status lxg_decline_path_rest(const struct lxg_hydrostatic_family *family,
                                      struct path_segment *segment) {
  *segment = (struct path_segment){.phase = LXG_DECLINE_STATIC};
  segment->node = lxg_alloc(family->count, sizeof *segment->node);
  if (segment->node == NULL) {
    return LXG_MEMORY;
  }
  double arc = 0.0;
  for (size_t i = 0; i < family->count; i++) {
    const struct lxg_hydrostatic *e = &family->envelope[i];
    struct path_node node = {.q = {[PATH_MASS] = log(e->envelope_mass),
                                   [PATH_LUMINOSITY] = log(e->luminosity),
                                   [PATH_LIGHT] = log(e->luminosity),
                                   [PATH_NUCLEAR] = log(e->nuclear_luminosity),
                                   [PATH_RADIUS] = log(e->radius),
                                   [PATH_TEMPERATURE] = log(e->temperature),
                                   [PATH_BASE] = log(e->base_temperature)}};
    if (i > 0) {
      const struct lxg_hydrostatic *before = e - 1;
      arc += hypot(log(e->envelope_mass / before->envelope_mass),
                   hypot(log(e->radius / before->radius), log(e->temperature / before->temperature)));
    }
    node.arc = arc;
    add(segment, &node);
  }
  return LXG_OK;
}

void lxg_decline_path_free(struct path *path) {
  lxg_free(path->wind.node);
  lxg_free(path->rest.node);
  *path = (struct path){0};
}

/* Fraction of interval i where the number takes a value that it brackets, by bisection. */
static double crossing(const struct path_segment *segment, size_t i, int quantity, double value) {
  enum { HALVINGS = 60 };
  double low = 0.0, high = 1.0;
  const bool rising = segment->node[i + 1].q[quantity] > segment->node[i].q[quantity];
  for (int k = 0; k < HALVINGS; k++) {
    const double u = 0.5 * (low + high);
    double q[PATH_COUNT];
    lxg_decline_path_at(segment, i, u, q, NULL);
    if ((q[quantity] > value) == rising) {
      high = u;
    } else {
      low = u;
    }
  }
  return 0.5 * (low + high);
}

static void drop(struct path_segment *segment, size_t first) {
  memmove(segment->node, segment->node + first, (segment->count - first) * sizeof *segment->node);
  segment->count -= first;
}

bool lxg_decline_path_start(struct path_segment *segment, int quantity, double value) {
  size_t i = segment->count;
  while (i-- > 1) { /* from the thin end */
    const struct path_node *after = &segment->node[i], *before = after - 1;
    if (before->q[PATH_MASS] <= after->q[PATH_MASS]) { /* the largest mass: time cannot pass it */
      drop(segment, i);
      return false;
    }
    if ((before->q[quantity] - value) * (after->q[quantity] - value) <= 0.0) {
      const double u = crossing(segment, i - 1, quantity, value);
      struct path_node start = {.arc = before->arc + u * (after->arc - before->arc)};
      lxg_decline_path_at(segment, i - 1, u, start.q, NULL);
      drop(segment, i - 1);
      if (segment->node[1].arc - start.arc > nearest) {
        segment->node[0] = start;
      } else {
        drop(segment, 1);
      }
      return true;
    }
  }
  return false;
}

void lxg_decline_state_of(const struct path_star *star, enum lxg_decline_phase phase,
                          const double q[PATH_COUNT], struct lxg_decline_state *state) {
  const bool wind = phase == LXG_DECLINE_WIND;
  const double rate = wind ? exp(q[PATH_RATE]) : 0.0;
  const double terminal = wind ? speed_unit * sqrt(fmax(q[PATH_TERMINAL], 0.0)) : NAN;
  state->phase = phase;
  state->envelope_mass = exp(q[PATH_MASS]);
  state->mass_loss_rate = rate;
  state->nuclear_luminosity = exp(q[PATH_NUCLEAR]);
  state->burning_rate = state->nuclear_luminosity / star->heat_per_gram;
  state->luminosity = exp(q[PATH_LUMINOSITY]);
  state->light = exp(q[PATH_LIGHT]);
  state->lifting_rate = rate * star->escape_energy;
  state->kinetic_rate = wind ? 0.5 * rate * terminal * terminal : 0.0;
  state->photosphere_radius = exp(q[PATH_RADIUS]);
  state->photosphere_temperature = exp(q[PATH_TEMPERATURE]);
  state->photosphere_speed = wind ? exp(q[PATH_SPEED]) : NAN;
  state->terminal_speed = terminal;
  state->base_temperature = exp(q[PATH_BASE]);
  state->critical_depth = wind ? exp(q[PATH_DEPTH]) : NAN;
}
