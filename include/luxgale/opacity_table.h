/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * opacity_table.h - opacities on a grid of log T and log R: reading, importing, writing, checking, tabulating, using.
 *
 * log is log10; T [K]; R = rho/(T/1e6 K)^3 [g cm^-3]; kappa [cm^2 g^-1]. Own files are ECSV with the columns log_t,
 * log_r, log_kappa, one row a node in any order of rows that makes a full rectangle or leaves nodes out (missing), and
 * the composition, source and date under `meta`. Published compilations in blocks (log R across, log T down) come in
 * through lxg_opacity_import; node values are kept as printed.
 *
 * Order of use: read or import -> (check) -> lxg_opacity_create_table -> lxg_opacity_at.
 */
#ifndef LUXGALE_OPACITY_TABLE_H
#define LUXGALE_OPACITY_TABLE_H

#include "luxgale/composition.h"
#include "luxgale/opacity.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

enum {
  LXG_OPACITY_GRID_AXIS = 2000,      /* most nodes along log T or log R */
  LXG_OPACITY_GRID_LEAST = 4,        /* fewest: a cubic needs neighbours */
  LXG_OPACITY_SET = 512,             /* most tables of a set */
  LXG_OPACITY_FILE_BYTES = 64 << 20, /* largest file to import */
  LXG_OPACITY_TEXT = 256             /* longest source or name, with terminator */
};

/* One table. Open to read; made by the functions below. */
struct lxg_opacity_grid {
  struct lxg_composition composition;
  char name[LXG_OPACITY_TEXT];   /* file it came from, for messages */
  char source[LXG_OPACITY_TEXT]; /* where the numbers come from, for people */
  char date[32];                 /* of the source or of the making, YYYY-MM-DD or YYYY; "" if unknown */
  char checksum[65]; /* SHA-256 of the file, 64 hexadecimal digits; "" if it was not read from one */
  size_t line;       /* line of the file where the block starts; 0 if built */
  size_t temperatures, densities;
  double *log_t;     /* [temperatures], increasing */
  double *log_r;     /* [densities], increasing */
  double *log_kappa; /* [temperatures][densities], log R fastest; NaN where missing */
};

/* Tables of one or several compositions. All-zero is a valid empty set. */
struct lxg_opacity_set {
  size_t count;
  struct lxg_opacity_grid **grid; /* [count], owned */
};

/* ---- building ---- */

/* A grid whose axes are zero and whose nodes are missing. LXG_LIMIT "opacity-grid-size", LXG_MEMORY. */
enum lxg_status lxg_opacity_grid_create(size_t temperatures, size_t densities, struct lxg_opacity_grid **grid,
                                        struct lxg_error *error);

/* Axes strictly increasing and plausible, composition valid, values finite or missing and in range, at least one cell
 * whose four corners are known. LXG_INPUT: "opacity-grid-order", "opacity-grid-range", "opacity-grid-empty",
 * "composition-...". */
enum lxg_status lxg_opacity_grid_validate(const struct lxg_opacity_grid *grid, struct lxg_error *error);

/* Frees a grid; NULL is allowed. */
void lxg_opacity_grid_destroy(struct lxg_opacity_grid *grid);

/* Adds a grid, which the set then owns (it is destroyed on failure). LXG_INPUT "opacity-set-duplicate" if the composition is
 * there already, LXG_LIMIT, LXG_MEMORY. */
enum lxg_status lxg_opacity_set_add(struct lxg_opacity_set *set, struct lxg_opacity_grid *grid,
                                    struct lxg_error *error);

/* Frees the grids and leaves an empty set. NULL is allowed. */
void lxg_opacity_set_free(struct lxg_opacity_set *set);

/* ---- published layouts ---- */

/* How to read a published file; all-zero is the usual layout. */
struct lxg_opacity_import_options {
  const struct lxg_composition *composition; /* of a file whose blocks do not say theirs; NULL: they must */
  const char *source;                        /* provenance to keep; NULL: the first lines of the file */
  const char *date;                          /* "" if NULL */
  double sentinel;                           /* a value this large means missing; 0 means 9.999 */
};

/* Reads every block of a file. A block starts at a line `logT` (or `log T`) followed by the values of log R; then come
 * rows of log T and log kappa, blanks or the sentinel for missing values, until another heading or the end. The
 * composition is taken from the text above the block (X=0.7 Z=0.02, Y= optional, dXc= and dXo= count as cno), else from
 * the options. LXG_INPUT with FILE:LINE:COL: "opacity-import-number", "-count", "-order", "-composition", "-range", "-empty",
 * "-blank" (which cell is blank cannot be told), "opacity-set-duplicate"; LXG_LIMIT "opacity-import-limit"; LXG_IO; LXG_MEMORY.
 * On failure `set` is empty. */
enum lxg_status lxg_opacity_import(const char *path, const struct lxg_opacity_import_options *options,
                                   struct lxg_opacity_set *set, struct lxg_error *error);

/* The same from memory; `name` stands for the file in messages. */
enum lxg_status lxg_opacity_import_text(const char *text, size_t size, const char *name,
                                        const struct lxg_opacity_import_options *options,
                                        struct lxg_opacity_set *set, struct lxg_error *error);

/* ---- use ---- */

enum lxg_opacity_outside {
  LXG_OPACITY_JOIN,  /* over `width` beyond the last known node the table turns smoothly into the formula */
  LXG_OPACITY_CLAMP, /* the opacity levels off within `width` and stays constant in log R, log T beyond */
  LXG_OPACITY_REFUSE /* LXG_DOMAIN outside, and in cells with a missing corner */
};

/* All-zero but for the width is the usual choice; lxg_opacity_table_defaults fills it. */
struct lxg_opacity_table_options {
  enum lxg_opacity_outside outside;
  double width; /* [dex], 0.02 to 3, of log T and of log R alike */
  bool
      ignore_cno; /* true: the composition's extra cno counts as helium, so tables of scaled-solar metals are used as
                        they are; false: its effect is taken from the built-in formula */
};

struct lxg_opacity_table_options lxg_opacity_table_defaults(void);

/* An opacity for one composition from a set of tables (which may be freed afterwards). The tables must bracket X and Z:
 * LXG_INPUT "opacity-table-composition" says what they cover; "opacity-table-grid" if their axes differ; "opacity-table-width".
 * What is interpolated in X and Z, once, at the nodes, is the difference to the built-in formula (docs/opacity.md); a table of
 * exactly this composition is used as it is. C1 in ln rho and ln T for each policy. */
enum lxg_status lxg_opacity_create_table(const struct lxg_opacity_set *set,
                                         const struct lxg_composition *composition,
                                         const struct lxg_opacity_table_options *options,
                                         struct lxg_opacity **opacity, struct lxg_error *error);

/* An opacity in the variables of tables. */
struct lxg_opacity_point {
  double log_kappa;   /* log10 of [cm^2 g^-1] */
  double dlogk_dlogt; /* at constant R */
  double dlogk_dlogr; /* at constant T */
  double table_weight;
};

/* Any opacity at log10 T [K] and log10 R. Status and guarantees of lxg_opacity_at. */
enum lxg_status lxg_opacity_at_log(const struct lxg_opacity *opacity, double log_t, double log_r,
                                   struct lxg_opacity_point *point);

/* Evaluates any opacity on a grid: a table of its own (node values as lxg_opacity_at gives them; missing where it refuses).
 * Axes are copied. LXG_INPUT as lxg_opacity_grid_validate, LXG_MEMORY. */
enum lxg_status lxg_opacity_tabulate(const struct lxg_opacity *opacity,
                                     const struct lxg_composition *composition, const double *log_t,
                                     size_t temperatures, const double *log_r, size_t densities,
                                     const char *source, struct lxg_opacity_grid **grid,
                                     struct lxg_error *error);

/* ---- own files ---- */

/* Reads an own file. LXG_INPUT with file and line: those of lxg_table_read and "opacity-table-composition" (missing),
 * "opacity-table-unit", "opacity-table-duplicate", "opacity-grid-..."; LXG_IO, LXG_MEMORY. */
enum lxg_status lxg_opacity_grid_read(const char *path, struct lxg_opacity_grid **grid,
                                      struct lxg_error *error);

struct lxg_table;

/* A grid as the table that an own file holds, to be destroyed by lxg_table_destroy. Errors of lxg_opacity_grid_validate, LXG_MEMORY. */
enum lxg_status lxg_opacity_grid_table(const struct lxg_opacity_grid *grid, const char *name,
                                       struct lxg_table **table, struct lxg_error *error);

/* Writes an own file in one step (the old one stays if anything fails). Missing nodes are left empty. */
enum lxg_status lxg_opacity_grid_write(const struct lxg_opacity_grid *grid, const char *path,
                                       struct lxg_error *error);

/* Reads own files into a set. Errors as above and "opacity-set-duplicate"; on failure `set` is empty. */
enum lxg_status lxg_opacity_set_read(const char *const *paths, size_t count, struct lxg_opacity_set *set,
                                     struct lxg_error *error);

/* Writes each grid of a set into a folder that exists, as x0.7000-cno0.0000-z0.0200.ecsv (mass fractions, four decimals; more
 * where two would share a name). Errors as lxg_opacity_grid_write. */
enum lxg_status lxg_opacity_set_write(const struct lxg_opacity_set *set, const char *directory,
                                      struct lxg_error *error);

/* ---- checking ---- */

enum lxg_opacity_finding_kind {
  LXG_OPACITY_FINDING_GAP,       /* a missing node with known ones on both sides in log R or log T */
  LXG_OPACITY_FINDING_SPIKE,     /* a node far off the line through its neighbours, on both axes */
  LXG_OPACITY_FINDING_SLOPE,     /* kappa falls with R where it should not: d log kappa/d log R < limit */
  LXG_OPACITY_FINDING_DIFFERENCE /* far from the built-in formula of the same composition */
};

struct lxg_opacity_finding {
  enum lxg_opacity_finding_kind kind;
  size_t temperature, density; /* node */
  double log_t, log_r;
  double log_kappa; /* NaN if missing */
  double amount;    /* spike and difference [dex]; slope; 0 for a gap */
};

enum { LXG_OPACITY_FINDINGS = 200 }; /* kept in detail; all are counted */

/* What a table looks like. */
struct lxg_opacity_findings {
  size_t nodes, missing; /* of the rectangle; how many are not known */
  double log_t_least, log_t_most, log_r_least, log_r_most;
  double log_t_step_most, log_r_step_most;  /* widest steps [dex] */
  size_t gaps, spikes, slopes, differences; /* counts */
  double formula_rms;  /* [dex] difference to the built-in formula, log R <= -2 and log T >= 4.3 */
  double formula_most; /* [dex] largest of those, with sign */
  size_t kept;
  struct lxg_opacity_finding finding[LXG_OPACITY_FINDINGS];
};

/* Limits of the checks; defaults by lxg_opacity_check_defaults. */
struct lxg_opacity_check_options {
  double spike;      /* [dex] */
  double slope;      /* least d log kappa/d log R */
  double difference; /* [dex] */
};

struct lxg_opacity_check_options lxg_opacity_check_defaults(void);

/* Looks a table over; findings are no failure. `options` may be NULL. LXG_INPUT as lxg_opacity_grid_validate. */
enum lxg_status lxg_opacity_check(const struct lxg_opacity_grid *grid,
                                  const struct lxg_opacity_check_options *options,
                                  struct lxg_opacity_findings *findings, struct lxg_error *error);

#endif
