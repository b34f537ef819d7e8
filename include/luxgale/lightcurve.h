/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lightcurve.h - observed magnitudes against time: container, decline times, epochs with several bands.
 *
 * Times are days after a zero point; the system they came in (days, JD, MJD) is kept. Points can be upper limits (fainter than
 * the stated magnitude) or excluded by the user (a dust dip, a flare); both stay in the container and are counted, none
 * is used for decline times or colours.
 * t_n is the time from peak to the first moment at which the light has fallen n magnitudes below it, straight lines in
 * (time, magnitude) between neighbouring used points of one band.
 *
 * Call order: lxg_lightcurve_init -> add (or read) -> sort -> exclude -> decline, groups -> free.
 */
#ifndef LUXGALE_LIGHTCURVE_H
#define LUXGALE_LIGHTCURVE_H

#include "luxgale/photometry.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

struct lxg_table;

enum lxg_time_system { LXG_TIME_DAYS, LXG_TIME_JD, LXG_TIME_MJD };

struct lxg_light_point {
  double time; /* [d] after the zero point */
  enum lxg_band band;
  double magnitude; /* apparent, as observed [mag] */
  double error;     /* one sigma [mag], 0 if none was stated */
  bool upper_limit; /* the star was fainter than `magnitude` */
  bool excluded;    /* left out by the user */
  size_t row;       /* of the source, 1 is the first; for messages */
};

struct lxg_light_curve {
  enum lxg_time_system system;
  double zero; /* subtracted from the given times [d], in the given system */
  size_t count, capacity;
  struct lxg_light_point *point;
};

/* An empty curve; `zero` in the time system [d]. */
void lxg_lightcurve_init(enum lxg_time_system system, double zero, struct lxg_light_curve *curve);

/* Frees the points; a zeroed curve is allowed. */
void lxg_lightcurve_free(struct lxg_light_curve *curve);

/* Appends a point whose `time` is still in the given system; the zero point is taken off here. LXG_INPUT
 * "lightcurve-time", "lightcurve-magnitude" (-30 to 40) or "lightcurve-error" (0 to 5 mag), naming the row; LXG_MEMORY. */
enum lxg_status lxg_lightcurve_add(struct lxg_light_curve *curve, const struct lxg_light_point *point,
                                   struct lxg_error *error);

/* Sorts by time, then band, then row. */
void lxg_lightcurve_sort(struct lxg_light_curve *curve);

/* Marks the points with from <= time <= to [d after the zero point] as excluded; how many there were goes to *count (may be
 * NULL). LXG_INPUT "lightcurve-window" unless from <= to. */
enum lxg_status lxg_lightcurve_exclude(struct lxg_light_curve *curve, double from, double to, size_t *count,
                                       struct lxg_error *error);

/* Julian date of a time of the curve; NaN in the plain system of days. */
double lxg_lightcurve_jd(const struct lxg_light_curve *curve, double time);

/* What a table does not say. */
struct lxg_lightcurve_options {
  bool
      zero_given; /* else the zero point is 0 for days and the first whole day at or before the data for JD, MJD */
  double zero;          /* [d], in the table's system */
  double default_error; /* [mag] for rows without an error */
  bool band_given;      /* every row is of `band`: the table needs no column for it */
  enum lxg_band band;
};

/* Fills an unset curve from a table with columns: one of time_d, jd, mjd; band (text); magnitude; error, upper_limit,
 * excluded (0 or 1), the last three optional. Sorted. Errors of table.h; "lightcurve-columns" without exactly one time
 * column, "lightcurve-unit" for a time not in d or a magnitude not in mag, "lightcurve-flag" for a flag other than 0 and 1,
 * "band-unknown", and those of lxg_lightcurve_add, each with the line of the file; "lightcurve-empty" for a table without
 * rows. The curve is valid to free in every case. */
enum lxg_status lxg_lightcurve_read(const struct lxg_table *table,
                                    const struct lxg_lightcurve_options *options,
                                    struct lxg_light_curve *curve, struct lxg_error *error);

/* ---- decline (lightcurve/decline_times.c) */

enum { LXG_LIGHT_GAPS_MAX = 64 };

struct lxg_light_decline_options {
  enum lxg_band band;
  bool peak_given;                   /* else the brightest used point is the peak */
  double peak_time;                  /* [d] after the zero point */
  double peak_magnitude, peak_error; /* [mag] */
  double gap_days;     /* a stretch without used points counts as a gap if longer than this [d] ... */
  double gap_fraction; /* ... and longer than this share of the time since peak at its end */
  size_t draws;        /* for the errors, at most 100000; 0: none */
  uint64_t seed;
};

/* A stretch between two used points. */
struct lxg_light_gap {
  double from, to; /* [d] after the zero point */
  size_t excluded; /* points inside that the user left out; > 0 makes it a gap whatever its length */
};

struct lxg_light_decline_time {
  bool known;
  const char *reason; /* stable code if not known: "decline-not-reached", "decline-peak-last"; "" if known */
  double value;       /* first crossing [d after peak] */
  double last;        /* last crossing: larger if the light wandered about the level [d after peak] */
  double lo68, hi68;  /* 16th and 84th percentile over the draws; NaN without draws */
  double undefined;   /* share of draws in which the level was not reached */
  double at_least;    /* if not known: time from peak to the last used point [d] */
  bool in_gap;        /* the first crossing lies in a gap: its error is larger than stated */
};

struct lxg_light_decline {
  double peak_time;      /* [d] after the zero point */
  double peak_magnitude; /* [mag] */
  double peak_error;     /* [mag] */
  bool peak_at_edge;     /* the peak is the first used point: the true one may be earlier and brighter */
  size_t used, limits, excluded; /* points of the band */
  struct lxg_light_decline_time t2, t3;
  size_t gap_count; /* all; the first LXG_LIGHT_GAPS_MAX are listed */
  struct lxg_light_gap gap[LXG_LIGHT_GAPS_MAX];
};

/* Gaps longer than 3 d and a fifth of the time since peak; 1000 draws with seed 1; V. */
struct lxg_light_decline_options lxg_lightcurve_decline_defaults(void);

/* Decline times of a sorted curve. In each draw every magnitude gets Gaussian noise of its own error, the peak stays where
 * it is. A level that is never reached is "none" with a reason, no failure. LXG_INPUT "decline-options";
 * LXG_NO_SOLUTION "decline-points" with fewer than two used points at or after peak; LXG_MEMORY. */
enum lxg_status lxg_lightcurve_decline(const struct lxg_light_curve *curve,
                                       const struct lxg_light_decline_options *options,
                                       struct lxg_light_decline *decline, struct lxg_error *error);

/* ---- several bands at once (lightcurve/groups.c) */

/* Used points that agree in time; several of one band are averaged with weights 1/error^2. */
struct lxg_light_group {
  double time;                      /* mean of the points [d after the zero point] */
  double span;                      /* last minus first [d] */
  size_t points, bands;             /* how many went in, in how many bands */
  bool has[LXG_BAND_COUNT];         /* bands present */
  double magnitude[LXG_BAND_COUNT]; /* [mag] */
  double error[LXG_BAND_COUNT];     /* [mag] */
};

/* Groups of a sorted curve that span at most `tolerance` [d] and hold at least `bands` >= 1 bands: from the earliest point
 * not yet taken, every used point within the tolerance. A point without error counts with `floor` [mag] > 0, which is also the
 * least error of any. LXG_INPUT "groups-options"; LXG_LIMIT "groups-capacity" when more than `capacity` exist. */
enum lxg_status lxg_lightcurve_groups(const struct lxg_light_curve *curve, double tolerance, size_t bands,
                                      double floor, struct lxg_light_group groups[], size_t capacity,
                                      size_t *count, struct lxg_error *error);

/* Black body of a group: magnitudes made absolute with distance modulus [mag], A_V [mag] and R_V, then lxg_photometry_fit,
 * whose errors it returns besides those of the extinction law. */
enum lxg_status lxg_lightcurve_group_state(const struct lxg_light_group *group, double modulus, double a_v,
                                           double r_v, struct lxg_photometry_range range,
                                           struct lxg_photometry_state *state, struct lxg_error *error);

#endif
