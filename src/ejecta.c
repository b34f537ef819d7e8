/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * ejecta.c - quasi-steady winds along a luminosity history and their integrals (see ejecta.h).
 *
 * Between two epochs the rates are integrated by adaptive Simpson panels. Where one end has a wind and the other has none the
 * edge is found by bisection in time, so a wind that switches on or off between two rows costs no accuracy.
 */
#include "luxgale/ejecta.h"

#include "luxgale/memory.h"

#include <math.h>

static const double edge_share = 1e-9; /* an edge is located to this share of its interval */
static const double jump_factor =
    1.5; /* a panel over which Mdot changes more than this however short is a jump */

/* Rates that are integrated over time. */
enum { RATE_MASS, RATE_KINETIC, RATE_MOMENTUM, RATE_LIFTING, RATE_RADIATED, RATES };

struct engine {
  const struct lxg_family *family;
  const struct lxg_family_index *index;
  const struct lxg_family_index *above; /* of the second family, or NULL */
  const struct lxg_history *history;
  const struct lxg_ejecta_options *options;
  enum lxg_family_quantity key;
  double escape_energy;
  double total[RATES];
  double scale[RATES]; /* running size of each integral, for the error control */
  double wind_time, first, last, largest_jump;
  bool failed; /* memory ran out on the way */
};

/* State at one time. */
struct moment {
  double time, luminosity, time_scale;
  size_t members;
  bool porous; /* beyond the limit of the first family */
  struct lxg_family_place place;
  double rate[RATES];
};

struct lxg_ejecta_options lxg_ejecta_options_default(void) {
  const struct lxg_ejecta_options options = {.branch = LXG_BRANCH_THIN, .tolerance = 1e-6, .depth = 24};
  return options;
}

/* The family of a time. */
static const struct lxg_family *family_at(const struct engine *engine, double time, bool porous) {
  const struct lxg_ejecta_options *options = engine->options;
  if (options->blend == NULL || (options->above != NULL && !porous)) {
    return porous ? options->above : engine->family;
  }
  struct lxg_history_value parameter = {.luminosity = 1.0};
  lxg_history_at(options->parameter, LXG_HISTORY_VALUE, time, &parameter);
  return lxg_family_blend_at(options->blend, log(parameter.luminosity));
}

static struct moment moment_at(struct engine *engine, double time) {
  struct moment m = {.time = time};
  struct lxg_history_value value = {0};
  lxg_history_at(engine->history, LXG_HISTORY_VALUE, time, &value);
  m.luminosity = value.luminosity;
  m.time_scale = value.time_scale;
  m.porous = engine->options->above != NULL && value.luminosity > engine->options->limit;
  const bool changing = engine->options->blend != NULL && (m.porous || engine->options->above == NULL);
  struct lxg_family_index *own = NULL;
  if (changing &&
      lxg_family_index_create(family_at(engine, time, m.porous), engine->key, &own, NULL) != LXG_OK) {
    engine->failed = true; /* out of memory */
  }
  const struct lxg_family_index *index = changing ? own : m.porous ? engine->above : engine->index;
  m.members =
      index == NULL ? 0 : lxg_family_index_branch(index, value.luminosity, engine->options->branch, &m.place);
  lxg_family_index_destroy(own);
  m.rate[RATE_RADIATED] = value.luminosity;
  if (m.members > 0) {
    const double rate = m.place.value[LXG_FAMILY_MASS_LOSS_RATE],
                 v = m.place.value[LXG_FAMILY_TERMINAL_SPEED];
    m.rate[RATE_MASS] = rate;
    m.rate[RATE_KINETIC] = 0.5 * rate * v * v;
    m.rate[RATE_MOMENTUM] = rate * v;
    m.rate[RATE_LIFTING] = rate * engine->escape_energy;
    m.rate[RATE_RADIATED] = m.place.value[LXG_FAMILY_LUMINOSITY_INFINITY];
  }
  return m;
}

static void add_panel(struct engine *engine, const struct moment *a, const struct moment *m,
                      const struct moment *b) {
  const double h = b->time - a->time;
  for (size_t i = 0; i < RATES; i++) {
    engine->total[i] += h / 6.0 * (a->rate[i] + 4.0 * m->rate[i] + b->rate[i]);
    engine->scale[i] = fmax(engine->scale[i], fabs(engine->total[i]));
  }
  if (a->members > 0) {
    engine->wind_time += h;
    engine->first = isnan(engine->first) ? a->time : engine->first;
    engine->last = b->time;
  }
}

/* Integrates from a to b, which both have a wind or both have none, with m between them. */
static void integrate(struct engine *engine, const struct moment *a, const struct moment *m,
                      const struct moment *b, int depth) {
  const struct moment left = moment_at(engine, 0.5 * (a->time + m->time));
  const struct moment right = moment_at(engine, 0.5 * (m->time + b->time));
  const double h = b->time - a->time;
  bool good = true;
  for (size_t i = 0; i < RATES; i++) {
    const double coarse = h / 6.0 * (a->rate[i] + 4.0 * m->rate[i] + b->rate[i]);
    const double fine =
        h / 12.0 * (a->rate[i] + 4.0 * left.rate[i] + 2.0 * m->rate[i] + 4.0 * right.rate[i] + b->rate[i]);
    good = good && fabs(fine - coarse) <=
                       15.0 * engine->options->tolerance * fmax(fabs(fine), 1e-3 * engine->scale[i]);
  }
  if (good || depth <= 0) {
    if (!good) {
      const double low = fmin(a->rate[RATE_MASS], b->rate[RATE_MASS]);
      const double high = fmax(a->rate[RATE_MASS], b->rate[RATE_MASS]);
      engine->largest_jump = low > 0.0 && high > jump_factor * low ? fmax(engine->largest_jump, high / low)
                                                                   : engine->largest_jump;
    }
    add_panel(engine, a, &left, m);
    add_panel(engine, m, &right, b);
    return;
  }
  integrate(engine, a, &left, m, depth - 1);
  integrate(engine, m, &right, b, depth - 1);
}

/* What kind of wind there is: 0 none, 1 of the first family, 2 of the second, 3 none of the second. */
static int regime(const struct moment *m) {
  return m->members > 0 ? 1 + m->porous : 3 * m->porous;
}

/* Narrows an edge between two regimes in time; `high` is the first moment of the other side. */
static void find_edge(struct engine *engine, const struct moment *a, const struct moment *b,
                      struct moment *low, struct moment *high) {
  *low = *a;
  *high = *b;
  while (high->time - low->time > edge_share * (b->time - a->time)) {
    const struct moment middle = moment_at(engine, 0.5 * (low->time + high->time));
    if (middle.time <= low->time || middle.time >= high->time) {
      break;
    }
    if (regime(&middle) == regime(a)) {
      *low = middle;
    } else {
      *high = middle;
    }
  }
}

/* Integrates from a to b, cutting at edges between regimes. The middle is looked at, so that a wind between two windless epochs
 * is not missed unless it is shorter than half their distance. */
static void cover(struct engine *engine, const struct moment *a, const struct moment *b, int depth) {
  const struct moment m = moment_at(engine, 0.5 * (a->time + b->time));
  if (regime(a) == regime(&m) && regime(&m) == regime(b)) {
    integrate(engine, a, &m, b, engine->options->depth);
    return;
  }
  if (regime(a) == regime(b)) {
    if (depth > 0) {
      cover(engine, a, &m, depth - 1);
      cover(engine, &m, b, depth - 1);
    }
    return;
  }
  struct moment low, high;
  find_edge(engine, a, b, &low, &high);
  const struct moment first = moment_at(engine, 0.5 * (a->time + low.time));
  if (low.time > a->time) {
    integrate(engine, a, &first, &low, engine->options->depth);
  }
  if (b->time > high.time && (depth > 0 || regime(&high) == regime(b))) {
    if (regime(&high) == regime(b)) {
      const struct moment second = moment_at(engine, 0.5 * (high.time + b->time));
      integrate(engine, &high, &second, b, engine->options->depth);
    } else {
      cover(engine, &high, b, depth - 1); /* a third regime lies between */
    }
  }
}

static void epoch_fill(const struct engine *engine, const struct moment *m, struct lxg_ejecta_epoch *epoch) {
  *epoch = (struct lxg_ejecta_epoch){.time = m->time,
                                     .luminosity = m->luminosity,
                                     .time_scale = m->time_scale,
                                     .reason = LXG_WIND_SOLVED,
                                     .members = m->members,
                                     .porous = m->porous,
                                     .place = m->place,
                                     .mass = engine->total[RATE_MASS]};
  if (m->members == 0) {
    epoch->reason =
        lxg_family_missing(m->porous ? engine->options->above : engine->family, engine->key, m->luminosity);
    epoch->place.arc = NAN;
    for (size_t i = 0; i < LXG_FAMILY_COUNT; i++) {
      epoch->place.value[i] = NAN;
    }
    return;
  }
  const double slowest =
      fmax(m->place.value[LXG_FAMILY_FLOW_TIME], m->place.value[LXG_FAMILY_DIFFUSION_TIME]);
  epoch->unsteady = slowest > m->time_scale;
}

static void count_epoch(struct lxg_ejecta *ejecta, const struct lxg_ejecta_epoch *epoch) {
  if (epoch->reason != LXG_WIND_SOLVED) {
    ejecta->none++;
    return;
  }
  ejecta->solved++;
  ejecta->unsteady += epoch->unsteady;
  ejecta->ambiguous += epoch->members > 1;
  const double rate = epoch->place.value[LXG_FAMILY_MASS_LOSS_RATE];
  const double speed = epoch->place.value[LXG_FAMILY_TERMINAL_SPEED];
  if (!(ejecta->peak_rate >= rate)) {
    ejecta->peak_rate = rate;
    ejecta->peak_rate_time = epoch->time;
  }
  if (!(ejecta->peak_speed >= speed)) {
    ejecta->peak_speed = speed;
    ejecta->peak_speed_time = epoch->time;
  }
}

static void conclude(const struct engine *engine, struct lxg_ejecta *ejecta) {
  ejecta->mass = engine->total[RATE_MASS];
  ejecta->kinetic = engine->total[RATE_KINETIC];
  ejecta->momentum = engine->total[RATE_MOMENTUM];
  ejecta->lifting = engine->total[RATE_LIFTING];
  ejecta->radiated = engine->total[RATE_RADIATED];
  ejecta->mean_speed = ejecta->mass > 0.0 ? ejecta->momentum / ejecta->mass : NAN;
  ejecta->wind_duration = engine->wind_time;
  ejecta->wind_first = engine->first;
  ejecta->wind_last = engine->last;
  ejecta->largest_jump = engine->largest_jump;
}

enum lxg_status lxg_ejecta_compute(const struct lxg_family *family, const struct lxg_history *history,
                                   double escape_energy, const struct lxg_ejecta_options *options,
                                   struct lxg_ejecta *ejecta, struct lxg_error *error) {
  const struct lxg_ejecta_options standard = lxg_ejecta_options_default();
  struct lxg_family_index *index = NULL, *above = NULL;
  struct engine engine = {.family = family,
                          .history = history,
                          .options = options != NULL ? options : &standard,
                          .key = history->kind == LXG_HISTORY_BASE ? LXG_FAMILY_BASE_LUMINOSITY
                                                                   : LXG_FAMILY_PHOTOSPHERE_LUMINOSITY,
                          .escape_energy = escape_energy,
                          .first = NAN,
                          .last = NAN,
                          .largest_jump = 1.0};
  *ejecta =
      (struct lxg_ejecta){.peak_rate = NAN, .peak_rate_time = NAN, .peak_speed = NAN, .peak_speed_time = NAN};
  enum lxg_status status = lxg_family_index_create(family, engine.key, &index, error);
  if (status == LXG_OK && engine.options->above != NULL) {
    status = lxg_family_index_create(engine.options->above, engine.key, &above, error);
  }
  if (status != LXG_OK) {
    lxg_family_index_destroy(index);
    return status;
  }
  ejecta->epoch = lxg_alloc(history->count, sizeof *ejecta->epoch);
  if (ejecta->epoch == NULL) {
    lxg_family_index_destroy(above);
    lxg_family_index_destroy(index);
    return lxg_error_set(error, LXG_MEMORY, "memory", "ejecta: out of memory for %zu epochs", history->count);
  }
  engine.index = index;
  engine.above = above;
  ejecta->count = history->count;
  struct moment before = {0};
  for (size_t i = 0; i < history->count; i++) {
    const struct moment now = moment_at(&engine, history->time[i]);
    if (i > 0) {
      cover(&engine, &before, &now, engine.options->depth / 4);
    }
    epoch_fill(&engine, &now, &ejecta->epoch[i]);
    count_epoch(ejecta, &ejecta->epoch[i]);
    before = now;
  }
  conclude(&engine, ejecta);
  lxg_family_index_destroy(above);
  lxg_family_index_destroy(index);
  if (engine.failed) {
    lxg_ejecta_free(ejecta);
    return lxg_error_set(error, LXG_MEMORY, "memory", "ejecta: out of memory");
  }
  return LXG_OK;
}

void lxg_ejecta_free(struct lxg_ejecta *ejecta) {
  if (ejecta != NULL) {
    lxg_free(ejecta->epoch);
    ejecta->epoch = NULL;
    ejecta->count = 0;
  }
}
