/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * observed_course.c - epochs with a magnitude among the members of a family, and the track through them (see observed.h).
 *
 * Members are found with logarithms straight between neighbouring winds, which the family is dense enough for (to its
 * tolerance, 1e-4); the place is then the same share of the arc length between them.
 */
#include "luxgale/memory.h"
#include "luxgale/observed.h"

#include <math.h>

enum { MEMBERS_MOST = 32 };

/* Time and arc length of epochs and of the ends of the wind between them. */
struct rows {
  size_t count;
  double *time, *arc;
};

enum lxg_status lxg_observed_search(const struct lxg_observed *observed, const struct lxg_family *family,
                                    struct lxg_photometry_search *search, struct lxg_error *error) {
  const size_t count = family->count;
  double *values = lxg_alloc(4 * count, sizeof *values);
  if (values == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "family of %zu winds: out of memory", count);
  }
  for (size_t i = 0; i < count; i++) {
    const struct lxg_wind *wind = &family->wind[i];
    values[i] = wind->value[LXG_HELD_PHOTOSPHERE_TEMPERATURE];
    values[count + i] = wind->value[LXG_HELD_PHOTOSPHERE_RADIUS];
    values[2 * count + i] = wind->value[LXG_HELD_MASS_LOSS_RATE];
    values[3 * count + i] = wind->photosphere.speed;
  }
  const struct lxg_photometry_family given = {count, values, values + count, values + 2 * count,
                                              values + 3 * count};
  const enum lxg_status status =
      lxg_photometry_search_init(&given, observed->band, &observed->light, search, error);
  lxg_free(values);
  return status;
}

static double arc_of(const struct lxg_family *family, const struct lxg_photometry_member *member) {
  const double *arc = family->arc + member->segment;
  return arc[0] + member->fraction * (arc[1] - arc[0]);
}

/* A family in the light of the observation, and the branch along which members are taken: winds `first` to `last`. */
struct branch {
  const struct lxg_family *family;
  const struct lxg_photometry_search *search;
  size_t first, last;
  double bright, faint; /* magnitudes of its ends [mag] */
  enum lxg_wind_reason faint_reason;
};

/* Magnitude of wind i. */
static double magnitude_of(const struct lxg_photometry_search *search, size_t i) {
  const bool inner = i + 1 < search->count;
  return lxg_photometry_member_magnitude(search, inner ? i : i - 1, inner ? 0.0 : 1.0, NULL);
}

struct lxg_observed_turn lxg_observed_turn_begin(void) {
  return (struct lxg_observed_turn){.faint = -INFINITY, .bright = INFINITY};
}

void lxg_observed_turn_next(struct lxg_observed_turn *turn, size_t wind, double magnitude) {
  if (!turn->rising && magnitude > turn->faint) { /* still fading from the end: the branch begins here */
    turn->faintest = turn->brightest = wind;
    turn->faint = turn->bright = magnitude;
  }
  if (magnitude < turn->bright) {
    turn->brightest = wind;
    turn->bright = magnitude;
    turn->rising = turn->rising || turn->faint - magnitude > LXG_OBSERVED_TURN_MAG;
  }
  turn->found = turn->rising && magnitude > turn->bright + LXG_OBSERVED_TURN_MAG;
}

/* The branch from the thin or thick end. */
static struct branch find_branch(const struct lxg_photometry_search *search, const struct lxg_family *family,
                                 enum lxg_branch which) {
  const bool thin = which == LXG_BRANCH_THIN;
  struct lxg_observed_turn turn = lxg_observed_turn_begin();
  for (size_t k = 0; k < family->count && !turn.found; k++) {
    const size_t i = thin ? k : family->count - 1 - k;
    lxg_observed_turn_next(&turn, i, magnitude_of(search, i));
  }
  return (struct branch){.family = family,
                         .search = search,
                         .first = turn.faintest < turn.brightest ? turn.faintest : turn.brightest,
                         .last = turn.faintest < turn.brightest ? turn.brightest : turn.faintest,
                         .bright = turn.bright,
                         .faint = turn.faint,
                         .faint_reason = thin ? family->thin_end : family->thick_end};
}

/* The member on the branch; false if all lie elsewhere. */
static bool choose(const struct branch *branch, const struct lxg_photometry_member members[], size_t count,
                   struct lxg_observed_epoch *epoch) {
  for (size_t i = 0; i < count; i++) {
    const double arc = arc_of(branch->family, &members[i]);
    if (arc >= branch->family->arc[branch->first] && arc <= branch->family->arc[branch->last]) {
      epoch->arc = arc;
      epoch->served = members[i].served;
      return true;
    }
  }
  return false;
}

static enum lxg_status place_epoch(const struct branch *branch, struct lxg_observed_epoch *epoch,
                                   struct lxg_error *error) {
  struct lxg_photometry_member members[MEMBERS_MOST];
  struct lxg_error cause = {0};
  epoch->arc = NAN;
  const enum lxg_status status =
      lxg_photometry_members(branch->search, epoch->absolute, members, MEMBERS_MOST, &epoch->members, &cause);
  if (status != LXG_OK && status != LXG_NO_SOLUTION) {
    return lxg_error_set(error, status, cause.code, "%s", cause.line[0]);
  }
  epoch->reason = status == LXG_OK && choose(branch, members, epoch->members, epoch) ? LXG_WIND_SOLVED
                  : epoch->absolute > branch->faint                                  ? branch->faint_reason
                                                                                     : LXG_WIND_ABOVE_FOLD;
  return LXG_OK;
}

/* Where the wind begins or ends between an epoch with and one without: the end of the branch on that side, when the
 * magnitude, straight in time, passes it. */
static void add_end(const struct branch *branch, const struct lxg_observed_epoch *with,
                    const struct lxg_observed_epoch *without, double time_with, double time_without,
                    struct rows *rows) {
  const bool fades = without->absolute > with->absolute;
  const double end = fades ? branch->faint : branch->bright;
  const bool at_first = (magnitude_of(branch->search, branch->first) == end);
  const double share = fmin((end - with->absolute) / (without->absolute - with->absolute), 1.0);
  const double time = time_with + share * (time_without - time_with);
  if (time != time_with && time != time_without) {
    rows->time[rows->count] = time;
    rows->arc[rows->count++] = branch->family->arc[at_first ? branch->first : branch->last];
  }
}

/* Rows of the track: epochs, and the ends of the wind between them. */
static void fill_rows(const struct lxg_observed *observed, const struct branch *branch,
                      const struct lxg_observed_course *course, struct rows *rows) {
  for (size_t i = 0; i < course->count; i++) {
    const struct lxg_observed_epoch *now = &course->epoch[i];
    const struct lxg_observed_epoch *before = i > 0 ? &course->epoch[i - 1] : now;
    if (before->reason == LXG_WIND_SOLVED && now->reason != LXG_WIND_SOLVED) {
      add_end(branch, before, now, observed->time[i - 1], observed->time[i], rows);
    } else if (before->reason != LXG_WIND_SOLVED && now->reason == LXG_WIND_SOLVED) {
      add_end(branch, now, before, observed->time[i], observed->time[i - 1], rows);
    }
    rows->time[rows->count] = observed->time[i];
    rows->arc[rows->count++] = now->arc;
  }
}

static enum lxg_status follow(const struct lxg_observed *observed, const struct branch *branch,
                              struct rows *rows, struct lxg_observed_course *course,
                              struct lxg_error *error) {
  const double shift = lxg_observed_nominal_shift(observed);
  for (size_t i = 0; i < observed->count; i++) {
    course->epoch[i].absolute = observed->magnitude[i] - shift;
    const enum lxg_status status = place_epoch(branch, &course->epoch[i], error);
    if (status != LXG_OK) {
      return status;
    }
  }
  course->count = observed->count;
  fill_rows(observed, branch, course, rows);
  return lxg_track_create(rows->time, rows->arc, rows->count, &course->track, error);
}

enum lxg_status lxg_observed_follow(const struct lxg_observed *observed, const struct lxg_family *family,
                                    enum lxg_branch branch, struct lxg_observed_course *course,
                                    struct lxg_error *error) {
  struct lxg_photometry_search search = {0};
  struct rows rows = {0};
  *course = (struct lxg_observed_course){0};
  course->epoch = lxg_alloc(observed->count, sizeof *course->epoch);
  rows.time = lxg_alloc(2 * observed->count, sizeof *rows.time);
  rows.arc = lxg_alloc(2 * observed->count, sizeof *rows.arc);
  enum lxg_status status = LXG_OK;
  if (course->epoch == NULL || rows.time == NULL || rows.arc == NULL) {
    status = lxg_error_set(error, LXG_MEMORY, "memory", "%zu epochs: out of memory", observed->count);
  }
  if (status == LXG_OK) {
    status = lxg_observed_search(observed, family, &search, error);
  }
  if (status == LXG_OK) {
    const struct branch taken = find_branch(&search, family, branch);
    status = follow(observed, &taken, &rows, course, error);
  }
  lxg_photometry_search_free(&search);
  lxg_free(rows.time);
  lxg_free(rows.arc);
  if (status != LXG_OK) {
    lxg_observed_course_free(course);
  }
  return status;
}

void lxg_observed_course_free(struct lxg_observed_course *course) {
  if (course != NULL) {
    lxg_free(course->epoch);
    lxg_track_destroy(course->track);
    *course = (struct lxg_observed_course){0};
  }
}
