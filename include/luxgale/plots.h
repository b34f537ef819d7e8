/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * plots.h - pictures of results: a gnuplot script and its data written into a folder, drawn as SVG, PDF and PNG.
 *
 * A picture is known by the columns that it needs: it is drawn when one of the given tables has them all. So every command whose
 * table has `time_d` and `mass_loss_rate_msun_yr` gets the picture of the mass-loss rate. Columns NAME_lo and NAME_hi
 * draw an interval around NAME.
 *
 * Scripts and data stay beside the pictures, so that a reader restyles and redraws them with `gnuplot NAME.gp`. gnuplot is started
 * directly, without a shell and without the user's start-up file; text of the user stands in single quotes, where gnuplot runs
 * nothing. A picture appears under its name only when it is whole: size and first bytes are checked. A gnuplot that is missing or
 * fails is a remark, not an error: the scripts are there.
 *
 * Call order: lxg_plots_draw -> lxg_plots_free.
 */
#ifndef LUXGALE_PLOTS_H
#define LUXGALE_PLOTS_H

#include "luxgale/document.h"
#include "luxgale/status.h"
#include "luxgale/table.h"

#include <stddef.h>

enum { LXG_PLOTS_MOST = 16, LXG_PLOTS_REMARK_SIZE = 256 };

/* One table, which is written as NAME.ecsv if a picture uses it. */
struct lxg_plots_table {
  const char *name;
  const struct lxg_table *table; /* NULL: absent */
};

/* What there is to draw. Everything is borrowed. */
struct lxg_plots_input {
  const char *title;       /* text of the user above each picture; NULL if none */
  struct lxg_node *report; /* root of the report: marks and lines that are no columns */
  const struct lxg_plots_table *table;
  size_t tables;
};

/* One picture that was drawn. */
struct lxg_picture {
  const char *name;    /* of its files, without suffix (static) */
  const char *caption; /* one sentence (static) */
  char *svg;           /* the SVG file's text, terminated */
  size_t size;         /* its bytes */
};

struct lxg_plots {
  size_t count;
  struct lxg_picture picture[LXG_PLOTS_MOST];
  size_t scripts;                     /* written */
  char remark[LXG_PLOTS_REMARK_SIZE]; /* why pictures are missing; "" if none is */
};

/* Writes scripts and data into `folder` (made if absent; its parent must exist) and draws them. LXG_IO: the folder or a script cannot
 * be written; LXG_MEMORY; LXG_INTERRUPTED: a signal to stop arrived meanwhile, nothing half drawn is left. */
enum lxg_status lxg_plots_draw(const struct lxg_plots_input *input, const char *folder,
                               struct lxg_plots *plots, struct lxg_error *error);

/* The same in a temporary folder that is removed again: only the SVG texts are kept. */
enum lxg_status lxg_plots_draw_inside(const struct lxg_plots_input *input, struct lxg_plots *plots,
                                      struct lxg_error *error);

/* NULL is allowed. */
void lxg_plots_free(struct lxg_plots *plots);

/* Appends `text` in gnuplot's single quotes: a single quote becomes the typographic one (U+2019), control
 * characters become blanks. Inside them gnuplot neither runs
 * commands nor replaces anything. */
void lxg_plots_quote(struct lxg_buffer *script, const char *text);

#endif
