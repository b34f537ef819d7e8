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

/* The member of the wanted branch. */
static void choose(const struct lxg_family *family, const struct lxg_photometry_member members[],
                   enum lxg_branch branch, struct lxg_observed_epoch *epoch) {
  double best = 0.0;
  for (size_t i = 0; i < epoch->members; i++) {
    struct lxg_family_place place;
    const double arc = arc_of(family, &members[i]);
    lxg_family_at(family, arc, &place);
    const double rate = place.value[LXG_FAMILY_MASS_LOSS_RATE];
    if (i == 0 || (branch == LXG_BRANCH_THIN ? rate < best : rate > best)) {
      best = rate;
      epoch->arc = arc;
      epoch->served = members[i].served;
    }
  }
}

/* Magnitude of the thin or thick end. */
static double end_magnitude(const struct lxg_photometry_search *search, bool thick) {
  return thick ? lxg_photometry_member_magnitude(search, search->count - 2, 1.0, NULL)
               : lxg_photometry_member_magnitude(search, 0, 0.0, NULL);
}

static enum lxg_status place_epoch(const struct lxg_photometry_search *search,
                                   const struct lxg_family *family, enum lxg_branch branch,
                                   struct lxg_observed_epoch *epoch, struct lxg_error *error) {
  struct lxg_photometry_member members[MEMBERS_MOST];
  struct lxg_error cause = {0};
  epoch->arc = NAN;
  const enum lxg_status status =
      lxg_photometry_members(search, epoch->absolute, members, MEMBERS_MOST, &epoch->members, &cause);
  if (status == LXG_OK) {
    epoch->reason = LXG_WIND_SOLVED;
    choose(family, members, branch, epoch);
    return LXG_OK;
  }
  if (status != LXG_NO_SOLUTION) {
    return lxg_error_set(error, status, cause.code, "%s", cause.line[0]);
  }
  const bool faint = epoch->absolute > search->faintest;
  const bool thick_is_faint = end_magnitude(search, true) > end_magnitude(search, false);
  epoch->reason = !faint ? LXG_WIND_ABOVE_FOLD : thick_is_faint ? family->thick_end : family->thin_end;
  return LXG_OK;
}

/* Where the wind begins or ends between an epoch with and one without: the last member on the way from the one's magnitude to
 * the other's, searched from its place in the direction in which the family brightens or fades as the light does. */
static void add_end(const struct lxg_photometry_search *search, const struct lxg_family *family,
                    const struct lxg_observed_epoch *with, const struct lxg_observed_epoch *without,
                    double time_with, double time_without, struct rows *rows) {
  const double sign = without->absolute > with->absolute ? 1.0 : -1.0;
  double best = with->absolute, arc = with->arc;
  for (int direction = -1; direction <= 1; direction += 2) {
    size_t i = 0;
    while (i + 1 < family->count && family->arc[i + 1] <= with->arc) {
      i++;
    }
    double last = with->absolute;
    for (size_t k = direction > 0 ? i + 1 : i; k<family->count; k = direction> 0 ? k + 1 : k - 1) {
      const double here = lxg_photometry_member_magnitude(search, k + 1 < family->count ? k : k - 1,
                                                          k + 1 < family->count ? 0.0 : 1.0, NULL);
      if (sign * (here - last) < 0.0) {
        break; /* it turns round */
      }
      last = here;
      if (sign * (here - best) > 0.0) {
        best = here;
        arc = family->arc[k];
      }
      if (k == 0 && direction < 0) {
        break;
      }
    }
  }
  const double share = fmin((best - with->absolute) / (without->absolute - with->absolute), 1.0);
  const double time = time_with + share * (time_without - time_with);
  if (time != time_with && time != time_without) {
    rows->time[rows->count] = time;
    rows->arc[rows->count++] = arc;
  }
}

/* Rows of the track: epochs, and the ends of the wind between them. */
static void fill_rows(const struct lxg_observed *observed, const struct lxg_photometry_search *search,
                      const struct lxg_family *family, const struct lxg_observed_course *course,
                      struct rows *rows) {
  for (size_t i = 0; i < course->count; i++) {
    const struct lxg_observed_epoch *now = &course->epoch[i];
    const struct lxg_observed_epoch *before = i > 0 ? &course->epoch[i - 1] : now;
    if (before->reason == LXG_WIND_SOLVED && now->reason != LXG_WIND_SOLVED) {
      add_end(search, family, before, now, observed->time[i - 1], observed->time[i], rows);
    } else if (before->reason != LXG_WIND_SOLVED && now->reason == LXG_WIND_SOLVED) {
      add_end(search, family, now, before, observed->time[i], observed->time[i - 1], rows);
    }
    rows->time[rows->count] = observed->time[i];
    rows->arc[rows->count++] = now->arc;
  }
}

static enum lxg_status follow(const struct lxg_observed *observed, const struct lxg_family *family,
                              const struct lxg_photometry_search *search, enum lxg_branch branch,
                              struct rows *rows, struct lxg_observed_course *course,
                              struct lxg_error *error) {
  const double shift = lxg_observed_nominal_shift(observed);
  for (size_t i = 0; i < observed->count; i++) {
    course->epoch[i].absolute = observed->magnitude[i] - shift;
    const enum lxg_status status = place_epoch(search, family, branch, &course->epoch[i], error);
    if (status != LXG_OK) {
      return status;
    }
  }
  course->count = observed->count;
  fill_rows(observed, search, family, course, rows);
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
    status = follow(observed, family, &search, branch, &rows, course, error);
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
