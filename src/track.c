/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * track.c - stretches of a track and the search among them (see track.h).
 */
#include "luxgale/track.h"

#include "luxgale/memory.h"
#include "luxgale/numerics.h"

#include <math.h>

/* Rows with a wind that follow one another. */
struct stretch {
  double first, last; /* [s] */
  struct lxg_steffen *arc;
};

struct lxg_track {
  size_t count;
  struct stretch *stretch; /* [count] in order of time */
};

/* First row of the next stretch at or after `i`, and the row after its end; false when there is none. */
static bool next_stretch(const double arc[], size_t count, size_t *i, size_t *end) {
  while (*i < count && isnan(arc[*i])) {
    (*i)++;
  }
  *end = *i;
  while (*end < count && !isnan(arc[*end])) {
    (*end)++;
  }
  return *i < count;
}

enum lxg_status lxg_track_create(const double time[], const double arc[], size_t count,
                                 struct lxg_track **track, struct lxg_error *error) {
  struct lxg_track *made = lxg_alloc(1, sizeof *made);
  *track = NULL;
  if (made != NULL) {
    made->stretch = lxg_alloc(count, sizeof *made->stretch);
  }
  if (made == NULL || made->stretch == NULL) {
    lxg_track_destroy(made);
    return lxg_error_set(error, LXG_MEMORY, "memory", "track of %zu rows: out of memory", count);
  }
  size_t end = 0;
  for (size_t i = 0; next_stretch(arc, count, &i, &end); i = end) {
    struct stretch *stretch = &made->stretch[made->count];
    const enum lxg_status status = lxg_steffen_create(time + i, arc + i, end - i, &stretch->arc, error);
    if (status != LXG_OK) {
      lxg_track_destroy(made);
      return status;
    }
    stretch->first = time[i];
    stretch->last = time[end - 1];
    made->count++;
  }
  *track = made;
  return LXG_OK;
}

bool lxg_track_at(const struct lxg_track *track, double time, double *arc, double *slope) {
  size_t low = 0, high = track->count;
  while (high - low > 1) {
    const size_t middle = low + (high - low) / 2;
    if (track->stretch[middle].first <= time) {
      low = middle;
    } else {
      high = middle;
    }
  }
  return high > low && lxg_steffen_at(track->stretch[low].arc, time, arc, slope) == LXG_OK;
}

void lxg_track_destroy(struct lxg_track *track) {
  if (track != NULL) {
    for (size_t i = 0; i < track->count; i++) {
      lxg_steffen_destroy(track->stretch[i].arc);
    }
    lxg_free(track->stretch);
    lxg_free(track);
  }
}
