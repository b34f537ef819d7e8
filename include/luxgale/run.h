/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run.h - a case read into structs, and one function a command that turns it into results.
 *
 * Each command is the pipeline of its job, readable from top to bottom: star and composition, opacity, wind, family, history,
 * ejecta, report. Results are documents and tables in memory; writing them is the caller's business.
 *
 * Call order: lxg_case_read -> lxg_run_... -> (write) -> lxg_results_free -> lxg_case_free.
 */
#ifndef LUXGALE_RUN_H
#define LUXGALE_RUN_H

#include "luxgale/burning.h"
#include "luxgale/composition.h"
#include "luxgale/decline.h"
#include "luxgale/document.h"
#include "luxgale/driving.h"
#include "luxgale/family.h"
#include "luxgale/files.h"
#include "luxgale/history.h"
#include "luxgale/opacity.h"
#include "luxgale/porosity.h"
#include "luxgale/settings.h"
#include "luxgale/star.h"
#include "luxgale/status.h"
#include "luxgale/table.h"
#include "luxgale/wind.h"

#include <stdbool.h>
#include <stddef.h>

/* A case, read and checked. Absent sections have their defaults; an absent history is NULL. */
struct lxg_case {
  struct lxg_document *document; /* the input itself, kept for its texts */
  const char *title;             /* NULL if none; borrowed from the document */
  struct lxg_files files;        /* what the case refers to, with checksums */
  struct lxg_composition composition;
  struct lxg_star star;
  bool dwarf;   /* the radius was derived from the mass */
  double l_edd; /* [erg s^-1] */
  struct lxg_opacity_choice opacity_choice;
  struct lxg_opacity *opacity;
  struct lxg_porosity porosity;
  struct lxg_burning burning;
  struct lxg_wind_hold hold[2]; /* in the order of the case; with burning the dark base comes first */
  size_t holds;
  struct lxg_history *history;
  struct lxg_history *reduction; /* factor of the law `reduction` against time; NULL: constant */
  bool history_from_decline; /* the history is the wind phase of the eruption, computed when it is needed */
  struct lxg_decline_options decline;
  struct lxg_family_options limits; /* of the families that are traced */
  bool claimed;                     /* the case says what was ejected */
  struct lxg_driving_claim claim;   /* used if `claimed` */
  struct lxg_settings settings;
};

/* Reads and checks a case file ("-": standard input) with `count` overrides "path.to.key=value" applied. Every section that
 * is present is checked, used by the command or not. LXG_INPUT with file:line:column, LXG_IO, LXG_MEMORY. On failure nothing
 * is left to free. */
enum lxg_status lxg_case_read(struct lxg_case *input, const char *path, const char *const overrides[],
                              size_t count, struct lxg_error *error);

/* NULL is allowed. */
void lxg_case_free(struct lxg_case *input);

/* `case:` of a report: the fully resolved input, in the units of the key names, and the checksums of the files read. */
void lxg_case_echo(const struct lxg_case *input, struct lxg_node *root);

/* What the commands `opacity ...` are asked for; lxg_run_opacity_defaults fills it with "nothing". */
struct lxg_run_opacity {
  const char *file;          /* check, import: the table to read; the other two read a case */
  const char *points;        /* at: file of points, or NULL for the one point below */
  const char *folder;        /* import: where the tables go; made if it does not exist */
  const char *source, *date; /* import: provenance; NULL: from the file, unknown */
  double log_t[3], log_r[3]; /* tabulate: first, last, step; at: the first; NaN if not given */
  double hydrogen, helium, cno,
      metals; /* check, import: composition of a file that does not say it; NaN if not given */
};
struct lxg_run_opacity lxg_run_opacity_defaults(void);

/* What a command is asked for beyond the case. All-zero is the default. */
struct lxg_run_options {
  enum lxg_branch branch;         /* which of several winds with the same held values */
  bool epochs;                    /* fill results.epochs */
  bool structure;                 /* fill results.structure */
  size_t threads;                 /* threads for independent work; 0 means 1. Results do not depend on it */
  bool seeded;                    /* take `seed` in place of the case's errors.seed */
  long long seed;                 /* of the random numbers, >= 0 */
  struct lxg_run_opacity opacity; /* used by the commands `opacity ...` alone */
};

/* What a command gives. */
struct lxg_results {
  struct lxg_document *report; /* NULL if the command gives nothing but the table `epochs` */
  struct lxg_table *epochs;    /* one row an epoch, a member, a point, a node; NULL if not asked for */
  struct lxg_table *structure; /* NULL if not asked for, or if there is no wind */
  bool answered;               /* false: the physics gave no answer, or only part; the report says why */
  struct lxg_error why;        /* the reason then */
};

/* NULL is allowed. */
void lxg_results_free(struct lxg_results *results);

/* `star`: what follows from mass, radius and composition alone. */
enum lxg_status lxg_run_star(const struct lxg_case *input, const struct lxg_run_options *options,
                             struct lxg_results *results, struct lxg_error *error);

/* `wind`: the wind of two held quantities; every branch that has them is listed. */
enum lxg_status lxg_run_wind(const struct lxg_case *input, const struct lxg_run_options *options,
                             struct lxg_results *results, struct lxg_error *error);

/* `family`: all winds that share one held quantity; epochs is their table. */
enum lxg_status lxg_run_family(const struct lxg_case *input, const struct lxg_run_options *options,
                               struct lxg_results *results, struct lxg_error *error);

/* `decline`: a whole eruption over a burning base; epochs is the table of its states. */
enum lxg_status lxg_run_decline(const struct lxg_case *input, const struct lxg_run_options *options,
                                struct lxg_results *results, struct lxg_error *error);

/* `outburst`: a luminosity history through a family of winds to the ejecta. */
enum lxg_status lxg_run_outburst(const struct lxg_case *input, const struct lxg_run_options *options,
                                 struct lxg_results *results, struct lxg_error *error);

/* `opacity at`: values and slopes at one point (report) or many (table `epochs` alone). LXG_INPUT "opacity-points" without either. */
enum lxg_status lxg_run_opacity_at(const struct lxg_case *input, const struct lxg_run_options *options,
                                   struct lxg_results *results, struct lxg_error *error);

/* `opacity tabulate`: the opacity of the case on a grid, as a table that a case may name. LXG_INPUT "opacity-axis". */
enum lxg_status lxg_run_opacity_tabulate(const struct lxg_case *input, const struct lxg_run_options *options,
                                         struct lxg_results *results, struct lxg_error *error);

/* `opacity check`: grid, gaps, spikes, slopes of a table (own or published layout). `input` is not used and may be NULL. */
enum lxg_status lxg_run_opacity_check(const struct lxg_case *input, const struct lxg_run_options *options,
                                      struct lxg_results *results, struct lxg_error *error);

/* `opacity import`: a published layout into own tables, written to a folder. `input` is not used and may be NULL. */
enum lxg_status lxg_run_opacity_import(const struct lxg_case *input, const struct lxg_run_options *options,
                                       struct lxg_results *results, struct lxg_error *error);

#endif
