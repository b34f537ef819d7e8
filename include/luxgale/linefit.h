/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * linefit.h - the stellar mass and the held quantity that fit measured line speeds best.
 *
 * Model: the speed of each row as a function of the stellar mass M and of one held quantity h (with a history: the one it
 * needs; with two held quantities: the second). Winds are costly, so the speeds are tabulated on a grid in (ln M, ln h), one
 * family of winds a node (or one a mass, where two are held), and interpolated by a C1 cubic (Catmull-Rom) in ln v. Where a
 * corner of a cell has no wind the cell has no answer. The fit itself is fit.h; its best point is solved once more without the
 * grid, and the largest difference, in sigma, is part of the result. A row has two columns in the grid, the wind's speed for its
 * kind and the swept shell's, so that it may change its system without new winds.
 *
 * A white dwarf's radius follows its mass; any other radius stays. The luminosity of a history stays as it is in erg/s, or stays
 * the same in units of L_Edd. (The base luminosity of a wind lies within a few percent of L_Edd: measured in erg/s it fixes the
 * mass by itself.)
 * Call order: lxg_linefit_grid -> lxg_linefit_run -> lxg_linefit_grid_free.
 */
#ifndef LUXGALE_LINEFIT_H
#define LUXGALE_LINEFIT_H

#include "luxgale/family.h"
#include "luxgale/fit.h"
#include "luxgale/history.h"
#include "luxgale/lines.h"
#include "luxgale/status.h"
#include "luxgale/wind.h"

#include <stdbool.h>
#include <stddef.h>

/* What the speeds depend on; everything is borrowed. */
struct lxg_linefit_model {
  struct lxg_wind_model wind;             /* its star is replaced by that of each mass */
  bool dwarf;                             /* the radius follows the mass */
  struct lxg_wind_hold hold[2];           /* the value of hold[fitted] is replaced */
  size_t holds;                           /* 1 with a history, else 2 */
  const struct lxg_history *history;      /* NULL with two held quantities */
  bool follows;                           /* its luminosity is the same in units of L_Edd for every mass */
  enum lxg_branch branch;                 /* which of several winds */
  double family_tolerance;                /* of the families (family.h) */
  double radius_most;                     /* families end at this photospheric radius [cm] */
  const struct lxg_lines *lines;          /* rows to be compared */
  const struct lxg_line_map *map;         /* which speed a kind is compared with */
  struct lxg_line_assign_settings assign; /* how lxg_linefit_speeds gives rows to wind and shell */
};

/* Columns of the grid: with a history twice the rows, the shell's after the wind's. */
size_t lxg_linefit_columns(const struct lxg_linefit_model *model);

/* Index in hold[] of the fitted quantity: 0 with a history, else 1. */
size_t lxg_linefit_fitted(const struct lxg_linefit_model *model);

/* speed[k * columns + i] [cm s^-1] of column i for mass gm [cm^3 s^-2] and held[k] [CGS]; NaN where there is none, and for rows
 * compared with rest. assignment[rows] (NULL allowed) receives the systems of the rows for the last held value. LXG_INPUT for a mass without a white dwarf; failures of the solver other than "there is none"; LXG_MEMORY. */
enum lxg_status lxg_linefit_speeds(const struct lxg_linefit_model *model, double gm, size_t count,
                                   const double held[], double speed[],
                                   struct lxg_line_assignment assignment[], struct lxg_error *error);

/* Where to look. */
struct lxg_linefit_range {
  double mass_low, mass_high; /* G M [cm^3 s^-2], low < high */
  double held_low, held_high; /* [CGS], 0 < low < high */
  size_t masses, values;      /* nodes of the grid, 4 .. 64 each */
};

struct lxg_linefit_grid {
  struct lxg_linefit_range range;
  size_t columns;
  double *ln_speed; /* [(mass * values + value) * columns + column]; NaN where there is none */
  size_t nodes;     /* with a speed in every column that has one anywhere */
};

/* Fills the grid. LXG_INPUT "linefit-range"; failures of lxg_linefit_speeds. */
enum lxg_status lxg_linefit_grid(const struct lxg_linefit_model *model, const struct lxg_linefit_range *range,
                                 struct lxg_linefit_grid *grid, struct lxg_error *error);
void lxg_linefit_grid_free(struct lxg_linefit_grid *grid);

/* Interpolated speed of a column [cm s^-1]; NaN outside the grid or in a cell without an answer. */
double lxg_linefit_at(const struct lxg_linefit_grid *grid, double gm, double held, size_t column);

enum { LXG_LINEFIT_MASS, LXG_LINEFIT_HELD, LXG_LINEFIT_PARAMETERS };

struct lxg_linefit_result {
  struct lxg_fit_result fit; /* estimate[0] = G M [cm^3 s^-2], [1] = held quantity [CGS] */
  size_t used;               /* columns */
  double start_chi2;         /* at the best node of the grid */
  char warning[256];         /* what the data do not constrain; "" if nothing */
};

/* Chooses use[columns]: for each row the wind's column or the shell's, as they fit best in the best cell of the grid (rows of one
 * component together; components named wind or shell at their word). False if no cell has a speed for every row. */
bool lxg_linefit_start(const struct lxg_linefit_model *model, const struct lxg_linefit_grid *grid,
                       bool use[]);

/* Fits measured speeds velocity[columns] +- error[columns] [cm s^-1]; columns without a model speed anywhere, or use[i] false, are
 * left out. scatter [cm s^-1] is added to each error in quadrature. Starts at the best node. LXG_NO_SOLUTION "linefit-empty" if no
 * node has speeds in all used columns, "linefit-rows" without any; failures of lxg_fit_run. */
enum lxg_status lxg_linefit_run(const struct lxg_linefit_grid *grid, const double velocity[],
                                const double error_1sigma[], const bool use[], double scatter,
                                struct lxg_linefit_result *result, struct lxg_error *error);

/* The next range, within `whole`: smaller, several times the interval of the best point or some cells of the grid to either side;
 * or moved, where the best point lies at an end. False if it would be hardly smaller than the grid's. */
bool lxg_linefit_zoom(const struct lxg_linefit_grid *grid, const struct lxg_linefit_result *result,
                      const struct lxg_linefit_range *whole, struct lxg_linefit_range *range);

struct lxg_node;

/* Reads the section `lines.fit` of a case into a range around the case's own mass [cm^3 s^-2]; held_low and held_high are left as
 * the factors 1/held_factor and held_factor. `*asked` is false when the section is absent; `*follows` as in the model. LXG_INPUT with the place
 * ("linefit-mass", "value-range"). */
enum lxg_status lxg_linefit_read(struct lxg_node *section, double gm, bool dwarf,
                                 struct lxg_linefit_range *range, bool *asked, bool *follows,
                                 struct lxg_error *error);

#endif
