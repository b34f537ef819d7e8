/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * observed.h - an observed light curve with distance and extinction, and the way from its magnitudes to winds.
 *
 * M = m - 5 log10(d/10 pc) - A_band. Ways from there (docs/photometry.md has the limits of each):
 *   photosphere, freefree, larger, whole: the member of a family whose light has that magnitude in the band (photometry.h);
 *   correction: L = L_0 10^(-0.4 (M + BC)) with a given, tabulated or black-body bolometric correction: a luminosity history;
 *   colours: temperature and luminosity of a black body through two or more bands at a time: each epoch is a wind by itself.
 *
 * A magnitude may belong to several members. Members are taken along one branch only: from the thin end of the family (or from the
 * thick end) to its first maximum of light, so no epoch jumps to a wind of another kind. A maximum counts when the light fades
 * by LXG_OBSERVED_TURN_MAG beyond it; an initial fading at the end of the family is passed over. A magnitude brighter than the
 * branch is "above-fold", one fainter names the end of the family. Between an epoch with and one without a wind the end is
 * put where the magnitude, straight in time, passes the end of the branch.
 *
 * Call order: lxg_observed_read -> (history | track | states) -> lxg_observed_destroy. Read-only once read.
 */
#ifndef LUXGALE_OBSERVED_H
#define LUXGALE_OBSERVED_H

#include "luxgale/composition.h"
#include "luxgale/distance.h"
#include "luxgale/family.h"
#include "luxgale/files.h"
#include "luxgale/history.h"
#include "luxgale/lightcurve.h"
#include "luxgale/photometry.h"
#include "luxgale/status.h"
#include "luxgale/track.h"

#include <stdbool.h>
#include <stddef.h>

/* How magnitudes become winds; the first four in the order of enum lxg_light. */
enum lxg_observed_way {
  LXG_OBSERVED_PHOTOSPHERE,
  LXG_OBSERVED_FREEFREE,
  LXG_OBSERVED_LARGER,
  LXG_OBSERVED_WHOLE,
  LXG_OBSERVED_CORRECTION,
  LXG_OBSERVED_COLOURS,
  LXG_OBSERVED_WAYS
};

/* Everything the section `luminosity` says with `kind: magnitude`. */
struct lxg_observed {
  struct lxg_light_curve curve; /* all points, excluded ones marked */
  enum lxg_band band;           /* of the key magnitude and of the decline times */
  enum lxg_observed_way way;
  struct lxg_distance distance;
  double a_v, a_v_error; /* [mag] */
  double r_v;
  double a_ratio;                   /* A_band/A_V of the law */
  double a_band;                    /* extinction in the band [mag] */
  double zero_point_error;          /* shared by all points [mag] */
  size_t windows;                   /* stretches of time left out by the case */
  size_t excluded;                  /* points left out, by windows or by the table */
  struct lxg_light_options light;   /* the first four ways */
  struct lxg_bolometric correction; /* CORRECTION; a table is owned */
  double correction_temperature;    /* of a black-body correction [K] */
  double *table_time, *table_value; /* of that table: [d], [mag] */
  double together;                  /* COLOURS: points of several bands agree within this [d] */
  struct lxg_light_decline_options decline;
  size_t count;                  /* epochs: used points of the band (COLOURS: groups) */
  double *time;                  /* [s] after the zero point, strictly increasing */
  double *magnitude;             /* apparent, in the band [mag] */
  double *error;                 /* one sigma of each epoch alone [mag] */
  struct lxg_light_group *group; /* COLOURS: [count]; else NULL */
};

/* Word of a way in a case, e.g. "photosphere"; never NULL. */
const char *lxg_observed_way_name(enum lxg_observed_way way);

struct lxg_node;

/* Reads the section; `*observed` is NULL with LXG_OK unless its kind is `magnitude`. LXG_INPUT with the place:
 * "luminosity-distance", "luminosity-extinction", "luminosity-correction", "luminosity-unused", "luminosity-epochs", and the
 * errors of keys, tables, light curves, distances, gas; LXG_IO, LXG_MEMORY. */
enum lxg_status lxg_observed_read(struct lxg_node *section, struct lxg_files *files,
                                  const struct lxg_composition *composition, struct lxg_observed **observed,
                                  struct lxg_error *error);

/* NULL is allowed. */
void lxg_observed_destroy(struct lxg_observed *observed);

/* What is taken off an apparent magnitude of the band at a distance [cm] and extinction A_V [mag] to make it absolute [mag]. */
double lxg_observed_shift(const struct lxg_observed *observed, double distance, double a_v);

/* The same at the stated values (the most probable distance). */
double lxg_observed_nominal_shift(const struct lxg_observed *observed);

/* Way CORRECTION: photospheric luminosities with the errors of the epochs. LXG_INPUT, LXG_NO_SOLUTION "bolometric-range". */
enum lxg_status lxg_observed_history(const struct lxg_observed *observed, double gap_fraction,
                                     struct lxg_history **history, struct lxg_error *error);

/* One epoch among the members of a family. */
struct lxg_observed_epoch {
  double absolute;             /* magnitude [mag] */
  enum lxg_wind_reason reason; /* LXG_WIND_SOLVED, or why no member shines so */
  size_t members;              /* that have the magnitude */
  double arc;                  /* of the one chosen; NaN without */
  enum lxg_light served;       /* which light it was */
};

/* The epochs along a family. Free with lxg_observed_course_free. */
struct lxg_observed_course {
  size_t count;
  struct lxg_observed_epoch *epoch; /* [count] */
  struct lxg_track *track;
};

/* The first four ways. LXG_OK even when no epoch has a member; LXG_MEMORY, LXG_LIMIT "members-capacity". */
enum lxg_status lxg_observed_follow(const struct lxg_observed *observed, const struct lxg_family *family,
                                    enum lxg_branch branch, struct lxg_observed_course *course,
                                    struct lxg_error *error);
void lxg_observed_course_free(struct lxg_observed_course *course);

/* Way COLOURS: luminosity and temperature of the black body of epoch i. LXG_NO_SOLUTION "colour-blue", "colour-red". */
enum lxg_status lxg_observed_state(const struct lxg_observed *observed, size_t i,
                                   struct lxg_photometry_state *state, struct lxg_error *error);

#define LXG_OBSERVED_TURN_MAG 0.05 /* well above interpolation errors, below what a light curve shows */

/* Search for the branch: feed the magnitudes of the winds one by one from the wanted end until `found`. */
struct lxg_observed_turn {
  bool found;                 /* the light has turned round for good */
  bool rising;                /* it has brightened by more than the limit */
  size_t faintest, brightest; /* winds at the ends of the branch */
  double faint, bright;       /* their magnitudes [mag] */
};
struct lxg_observed_turn lxg_observed_turn_begin(void);
void lxg_observed_turn_next(struct lxg_observed_turn *turn, size_t wind, double magnitude);

/* A family prepared for the light and band of the observation. */
enum lxg_status lxg_observed_search(const struct lxg_observed *observed, const struct lxg_family *family,
                                    struct lxg_photometry_search *search, struct lxg_error *error);

#endif
