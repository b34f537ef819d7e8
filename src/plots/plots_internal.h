/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * plots_internal.h - what the files of the plots module share: a picture's description and the pieces of scripts.
 */
#ifndef LUXGALE_PLOTS_INTERNAL_H
#define LUXGALE_PLOTS_INTERNAL_H

#include "luxgale/plots.h"

#include <stdbool.h>

enum { PLOTS_COLUMNS = 8 }; /* most columns that a picture needs */

/* A picture in the making. */
struct plots_sheet {
  const struct lxg_plots_input *input;
  const struct lxg_plots_table *data; /* the table with the columns it needs */
  struct lxg_buffer *script;
};

/* One row of the table of pictures. */
struct plots_picture {
  const char *name, *caption;
  const char *needs[PLOTS_COLUMNS];            /* columns, NULL at the end */
  int height;                                  /* of the SVG [pixel]; it is 760 wide */
  void (*settings)(struct plots_sheet *sheet); /* before the loop over the forms; may be NULL */
  void (*body)(struct plots_sheet *sheet);     /* the plot itself */
};

/* plots_time.c */
void lxg_plots_luminosity(struct plots_sheet *sheet);
void lxg_plots_rate(struct plots_sheet *sheet);
void lxg_plots_speed(struct plots_sheet *sheet);
void lxg_plots_photosphere(struct plots_sheet *sheet);
void lxg_plots_light(struct plots_sheet *sheet);
void lxg_plots_mass(struct plots_sheet *sheet);

/* plots_wind.c */
void lxg_plots_structure(struct plots_sheet *sheet);
void lxg_plots_family(struct plots_sheet *sheet);
void lxg_plots_map_settings(struct plots_sheet *sheet);
void lxg_plots_map(struct plots_sheet *sheet);
void lxg_plots_distribution(struct plots_sheet *sheet);

/* plots_script.c: the whole script of a picture, and pieces for its body. */
void lxg_plots_script(const struct plots_picture *picture, struct plots_sheet *sheet);

/* The first given table that has the columns (NULL-ended); NULL if none. */
const struct lxg_plots_table *lxg_plots_find(const struct lxg_plots_input *input, const char *const needs[]);
bool lxg_plots_has(const struct plots_sheet *sheet, const char *column);

/* A number of the report by its path "wind.critical.radius_cm"; NaN if absent. */
double lxg_plots_number(const struct plots_sheet *sheet, const char *path);
const char *lxg_plots_text(const struct plots_sheet *sheet, const char *path);

/* Least and greatest finite value of a column; false if there is none. */
bool lxg_plots_range(const struct lxg_table *table, const char *column, double *least, double *most);

/* ", 'FILE.ecsv' using 'x':'y' with lines ls N title 'TITLE'", the comma left out for the first curve, with the interval's
 * band before it where there is one. */
void lxg_plots_curve(struct plots_sheet *sheet, bool first, const char *x, const char *y, int style,
                     const char *title);

/* Appends a line of the script with a number at its end: "TEXT NUMBER TAIL". */
void lxg_plots_line(struct plots_sheet *sheet, const char *text, double number, const char *tail);

/* plots_run.c: draws NAME.gp in `folder`. *drawn is false with a remark when gnuplot is missing or fails. */
enum lxg_status lxg_plots_run(const char *folder, const char *name, struct lxg_picture *picture, bool *drawn,
                              char remark[LXG_PLOTS_REMARK_SIZE], struct lxg_error *error);

#endif
