/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * plots_script.c - the frame of every script (forms, colours, dashes, fonts) and pieces for the bodies (see plots.h).
 *
 * Colours: six of our own, of different lightness and each with its own dash, so that curves stay apart in grey print and for
 * readers who see few colours.
 */
#include "luxgale/text.h"
#include "plots/plots_internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* Up to this many rows each one is marked by a point. */
enum { FEW = 80 };

void lxg_plots_quote(struct lxg_buffer *script, const char *text) {
  lxg_buffer_byte(script, '\'');
  for (const char *c = text; *c != '\0'; c++) {
    const unsigned char byte = (unsigned char)*c;
    if (byte < 0x20 || byte == 0x7f) {
      lxg_buffer_byte(script, ' ');
    } else if (*c == '\'') {
      lxg_buffer_text(script,
                      "\xe2\x80\x99"); /* a doubled quote at the start of a text ends it in gnuplot 5.4 */
    } else {
      lxg_buffer_byte(script, *c);
    }
  }
  lxg_buffer_byte(script, '\'');
}

const struct lxg_plots_table *lxg_plots_find(const struct lxg_plots_input *input, const char *const needs[]) {
  for (size_t t = 0; t < input->tables; t++) {
    const struct lxg_table *table = input->table[t].table;
    bool all = table != NULL && table->rows > 0;
    for (size_t i = 0; all && needs[i] != NULL; i++) {
      double least = 0.0, most = 0.0;
      all = lxg_plots_range(table, needs[i], &least, &most);
    }
    if (all) {
      return &input->table[t];
    }
  }
  return NULL;
}

bool lxg_plots_has(const struct plots_sheet *sheet, const char *column) {
  double least = 0.0, most = 0.0;
  return lxg_plots_range(sheet->data->table, column, &least, &most);
}

static struct lxg_node *find(const struct plots_sheet *sheet, const char *path) {
  struct lxg_node *node = sheet->input->report;
  char key[64];
  while (node != NULL && path != NULL) {
    const char *const dot = strchr(path, '.');
    const size_t length = dot != NULL ? (size_t)(dot - path) : strlen(path);
    snprintf(key, sizeof key, "%.*s", (int)length, path);
    node = lxg_node_find(node, key);
    path = dot != NULL ? dot + 1 : NULL;
  }
  return node;
}

double lxg_plots_number(const struct plots_sheet *sheet, const char *path) {
  const char *const text = lxg_plots_text(sheet, path);
  double value = NAN;
  if (text != NULL) {
    lxg_text_parse_number(text, strlen(text), false, &value);
  }
  return value;
}

const char *lxg_plots_text(const struct plots_sheet *sheet, const char *path) {
  struct lxg_node *const node = find(sheet, path);
  return lxg_node_is_none(node) ? NULL : lxg_node_text(node);
}

bool lxg_plots_range(const struct lxg_table *table, const char *column, double *least, double *most) {
  const struct lxg_column *const found = lxg_table_find(table, column);
  *least = INFINITY;
  *most = -INFINITY;
  for (size_t i = 0; found != NULL && found->type == LXG_COLUMN_NUMBER && i < table->rows; i++) {
    if (isfinite(found->number[i])) {
      *least = fmin(*least, found->number[i]);
      *most = fmax(*most, found->number[i]);
    }
  }
  return *least <= *most;
}

void lxg_plots_curve(struct plots_sheet *sheet, bool first, const char *x, const char *y, int style,
                     const char *title) {
  char low[80], high[80];
  snprintf(low, sizeof low, "%s_lo", y);
  snprintf(high, sizeof high, "%s_hi", y);
  if (lxg_plots_has(sheet, low) && lxg_plots_has(sheet, high)) {
    lxg_buffer_format(sheet->script,
                      "%s'%s.ecsv' using '%s':'%s':'%s' with filledcurves fillstyle transparent solid 0.22 "
                      "noborder ls %d notitle",
                      first ? "" : ", \\\n    ", sheet->data->name, x, low, high, style);
    first = false;
  }
  lxg_buffer_format(sheet->script, "%s'%s.ecsv' using '%s':'%s' with %s ls %d %s", first ? "" : ", \\\n    ",
                    sheet->data->name, x, y, sheet->data->table->rows <= FEW ? "linespoints" : "lines", style,
                    title != NULL ? "title " : "notitle");
  if (title != NULL) {
    lxg_plots_quote(sheet->script, title);
  }
}

void lxg_plots_line(struct plots_sheet *sheet, const char *text, double number, const char *tail) {
  lxg_buffer_text(sheet->script, text);
  lxg_buffer_number(sheet->script, number);
  lxg_buffer_format(sheet->script, "%s\n", tail);
}

static void frame(const struct plots_picture *picture, struct plots_sheet *sheet) {
  lxg_buffer_format(sheet->script,
                    "# %s\n"
                    "# Redraw with `gnuplot %s.gp` in this folder. Columns and units of the data: the head "
                    "of each .ecsv file.\n"
                    "if (!exists('out')) out = ''\n"
                    "set encoding utf8\n"
                    "set datafile separator ','\n"
                    "set datafile missing ''\n"
                    "blue = '#1d4e89'; rust = '#c4511d'; teal = '#2f9e83'; plum = '#7d4b9e'; gold = "
                    "'#c9991c'; grey = '#5c5c5c'\n"
                    "set style line 1 lc rgb blue lw 2.2 dt 1 pt 7 ps 0.45\n"
                    "set style line 2 lc rgb rust lw 2.2 dt (14,5) pt 9 ps 0.6\n"
                    "set style line 3 lc rgb teal lw 2.2 dt (3,4) pt 5 ps 0.5\n"
                    "set style line 4 lc rgb plum lw 2.2 dt (14,4,3,4) pt 13 ps 0.6\n"
                    "set style line 5 lc rgb gold lw 2.2 dt (22,5) pt 11 ps 0.6\n"
                    "set style line 6 lc rgb grey lw 1.4 dt (6,4) pt 6 ps 0.5\n"
                    "set style line 9 lc rgb '#d9dde2' lw 0.7 dt 1\n"
                    "set border 15 lc rgb '#303030' lw 1\n"
                    "set tics nomirror in textcolor rgb '#202020'\n"
                    "set grid ls 9\n"
                    "set key at graph 0.5, graph 1.02 bottom center vertical maxrows 1 Left reverse "
                    "samplen 2.4 width -1 font ',12' textcolor rgb '#202020'\n"
                    "set rmargin 4\nset tmargin at screen 0.85\n",
                    picture->caption, picture->name);
}

static void forms(const struct plots_picture *picture, struct plots_sheet *sheet) {
  lxg_buffer_format(
      sheet->script,
      "do for [kind in 'svg pdf png'] {\n"
      "  if (kind eq 'svg') { set terminal svg enhanced size 760,%d font 'Helvetica,Arial,sans-serif,14' "
      "background '#ffffff' }\n"
      "  if (kind eq 'pdf') { set terminal pdfcairo enhanced size 17.0cm,%d.%dcm font 'Sans,11' }\n"
      "  if (kind eq 'png') { set terminal pngcairo enhanced size 1520,%d font 'Sans,14' fontscale 1.75 "
      "linewidth 2 pointscale 2 }\n"
      "  set output out.'%s.'.kind\n"
      "  set label 9 heading at screen 0.5, screen 0.955 center noenhanced textcolor rgb '#101010'\n",
      picture->height, picture->height * 17 / 760, picture->height * 170 / 760 % 10, 2 * picture->height,
      picture->name);
}

void lxg_plots_script(const struct plots_picture *picture, struct plots_sheet *sheet) {
  frame(picture, sheet);
  if (picture->settings != NULL) {
    picture->settings(sheet);
  }
  if (sheet->input->title != NULL) {
    lxg_buffer_text(sheet->script, "heading = ");
    lxg_plots_quote(sheet->script, sheet->input->title);
    lxg_buffer_text(sheet->script, "\n");
  } else {
    lxg_buffer_text(sheet->script, "heading = ''\n");
  }
  forms(picture, sheet);
  picture->body(sheet);
  lxg_buffer_text(sheet->script, "  unset output\n}\n");
}
