/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * speeds_eject.c - what leaves the star, as the piecewise linear (v_inf, Mdot)(t) that shell.h takes (see speeds.h).
 *
 * The times are those at which integrals of a steep power of L are good, each interval halved a few times more. Where a wind
 * begins or ends between two of them the moment is bisected and stands twice: once with the wind's rate, once with none.
 * Without a wind the speed is that of the nearest wind before (or after); it belongs to no gas.
 */
#include "speeds/speeds_internal.h"

#include "luxgale/memory.h"

#include <math.h>

/* Mdot rises as about the fiftieth power of the base luminosity. */
static const struct lxg_history_sampling sampling = {
    .tolerance = 1e-4, .steepness = 50.0, .max_count = 20001};
enum {
  PARTS = 12,        /* of each interval between sampling times */
  EDGE_HALVINGS = 40 /* of an interval in which a wind begins or ends */
};

struct stream {
  size_t count, capacity;
  double *time, *speed, *rate;
};

static void stream_free(struct stream *stream) {
  lxg_free(stream->time);
  lxg_free(stream->speed);
  lxg_free(stream->rate);
}

static enum lxg_status stream_alloc(struct stream *stream, size_t capacity, struct lxg_error *error) {
  *stream = (struct stream){.capacity = capacity,
                            .time = lxg_alloc(capacity, sizeof *stream->time),
                            .speed = lxg_alloc(capacity, sizeof *stream->speed),
                            .rate = lxg_alloc(capacity, sizeof *stream->rate)};
  return stream->time != NULL && stream->speed != NULL && stream->rate != NULL
             ? LXG_OK
             : lxg_error_set(error, LXG_MEMORY, "memory", "ejection history: out of memory");
}

/* One moment; a windless one has speed 0 for now. */
static void put(struct stream *stream, double time, const struct lxg_family_place *place) {
  stream->time[stream->count] = time;
  stream->speed[stream->count] = place != NULL ? place->value[LXG_FAMILY_TERMINAL_SPEED] : 0.0;
  stream->rate[stream->count] = place != NULL ? place->value[LXG_FAMILY_MASS_LOSS_RATE] : 0.0;
  stream->count++;
}

/* The moment between `before` and `after` at which a wind begins (rising) or ends, twice. */
static void put_edge(const struct lxg_speeds *speeds, double before, double after, bool rising,
                     struct stream *stream) {
  struct lxg_family_place place, last;
  bool any = false;
  for (int i = 0; i < EDGE_HALVINGS; i++) {
    const double middle = 0.5 * (before + after);
    const bool wind = lxg_speeds_find(speeds, middle, &place);
    if (wind) {
      last = place;
      any = true;
    }
    if (wind == rising) {
      after = middle;
    } else {
      before = middle;
    }
  }
  if (any || lxg_speeds_find(speeds, rising ? after : before, &last)) {
    const double edge = rising ? after : before;
    if (edge > stream->time[stream->count - 1]) {
      put(stream, edge, rising ? NULL : &last);
    }
    put(stream, edge, rising ? &last : NULL);
  }
}

static void fill(const struct lxg_speeds *speeds, const struct lxg_history_samples *samples,
                 struct stream *stream) {
  struct lxg_family_place place;
  bool before = false;
  double last = 0.0;
  for (size_t i = 0; i < samples->count; i++) {
    const size_t parts = i + 1 < samples->count ? PARTS : 1;
    for (size_t k = 0; k < parts; k++) {
      const double next = i + 1 < samples->count ? samples->time[i + 1] : samples->time[i];
      const double time = samples->time[i] + (next - samples->time[i]) * (double)k / (double)parts;
      const bool wind = lxg_speeds_find(speeds, time, &place);
      if (stream->count > 0 && wind != before) {
        put_edge(speeds, last, time, wind, stream);
      }
      if (stream->count == 0 || time > stream->time[stream->count - 1]) {
        put(stream, time, wind ? &place : NULL);
      }
      before = wind;
      last = time;
    }
  }
}

/* Notes the range of speeds, and fills in speeds for the windless moments; false if there is no wind at all. */
static bool fill_speeds(struct lxg_speeds *speeds, struct stream *stream) {
  double speed = 0.0;
  for (size_t i = 0; i < stream->count && speed <= 0.0; i++) {
    speed = stream->speed[i];
  }
  speeds->slowest = speeds->fastest = speed;
  for (size_t i = 0; i < stream->count; i++) {
    if (stream->rate[i] > 0.0) {
      speeds->slowest = fmin(speeds->slowest, stream->speed[i]);
      speeds->fastest = fmax(speeds->fastest, stream->speed[i]);
    }
  }
  const bool any = speed > 0.0;
  for (size_t i = 0; i < stream->count; i++) {
    speed = stream->speed[i] > 0.0 ? stream->speed[i] : speed;
    stream->speed[i] = speed;
  }
  return any;
}

enum lxg_status lxg_speeds_eject(struct lxg_speeds *speeds, double radius, struct lxg_error *error) {
  struct lxg_history_samples *samples = NULL;
  struct stream stream = {0};
  enum lxg_status status = lxg_history_sample(speeds->history, &sampling, &samples, error);
  if (status == LXG_OK) {
    status = stream_alloc(&stream, 3 * PARTS * samples->count + 2, error);
  }
  if (status == LXG_OK) {
    fill(speeds, samples, &stream);
    if (fill_speeds(speeds, &stream) && stream.count >= 2) {
      status = lxg_shell_create(stream.count, stream.time, stream.speed, stream.rate, radius, &speeds->shell,
                                error);
    }
  }
  lxg_history_samples_destroy(samples);
  stream_free(&stream);
  return status;
}
