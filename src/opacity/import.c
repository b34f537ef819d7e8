/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * import.c - the plain layout in which opacity compilations are published: blocks with log R across and log T down.
 *
 * A row with fewer values than its heading has blanks somewhere; which cells are blank follows from the columns of the
 * text, since such files are set in fixed width. Numbers are read as printed and never altered. Everything that is not a
 * heading or a row of a block is text, from which only the composition is taken.
 */
#include "luxgale/memory.h"
#include "luxgale/opacity_table.h"
#include "luxgale/text.h"

#include <ctype.h>
#include <errno.h>
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

static const double usual_sentinel = 9.999;
static const double sentinel_slack = 1e-6; /* printed decimals do not reach further */

/* One word of a line. */
struct word {
  const char *text;
  size_t size;
  size_t column; /* of its first byte, from 1 */
  double value;
};

/* The file as it goes by. */
struct importer {
  const char *name;
  const struct lxg_opacity_import_options *options;
  double sentinel;
  struct lxg_opacity_set *set;
  struct lxg_error *error;
  size_t line;
  char title[LXG_OPACITY_TEXT]; /* first text of the file: its provenance */
  /* composition said above the next block */
  bool has_x, has_y, has_z;
  double x, y, z, cno;
  size_t composition_line;
  /* the block being read */
  bool in_block;
  bool descending;
  size_t block_line, rows, rows_reserved, densities;
  double *log_r, *log_t, *values; /* [densities], [rows], [rows][densities] */
  size_t *ends;                   /* [densities], last text column of each heading value */
  struct word *words;             /* [LXG_OPACITY_GRID_AXIS + 1] */
};

static enum lxg_status fail(const struct importer *in, size_t column, const char *code, const char *text) {
  return lxg_error_set(in->error, strcmp(code, "opacity-import-limit") == 0 ? LXG_LIMIT : LXG_INPUT, code,
                       "%s:%zu:%zu: error: %s", in->name, in->line, column, text);
}

static enum lxg_status out_of_memory(const struct importer *in) {
  return lxg_error_set(in->error, LXG_MEMORY, "memory", "%s: out of memory", in->name);
}

/* ---- words ---- */

/* Splits at blanks, tabs; SIZE_MAX if there are more words than a row may have. */
static size_t split(const char *line, size_t size, struct word *words, size_t most) {
  size_t count = 0;
  size_t at = 0;
  while (at < size) {
    while (at < size && isspace((unsigned char)line[at])) {
      at++;
    }
    const size_t start = at;
    while (at < size && !isspace((unsigned char)line[at])) {
      at++;
    }
    if (at > start) {
      if (count == most) {
        return SIZE_MAX;
      }
      words[count++] = (struct word){line + start, at - start, start + 1, 0.0};
    }
  }
  return count;
}

static bool is_number(struct word *word) {
  return lxg_text_parse_number(word->text, word->size, false, &word->value) == LXG_TEXT_NUMBER;
}

static bool word_is(const struct word *word, const char *text) {
  if (word->size != strlen(text)) {
    return false;
  }
  for (size_t i = 0; i < word->size; i++) {
    if (tolower((unsigned char)word->text[i]) != text[i]) {
      return false;
    }
  }
  return true;
}

/* ---- composition ---- */

/* "X=0.7", "X = 0.7": the value after `key`, which must start a word. */
static bool find_fraction(const char *line, size_t size, const char *key, double *value) {
  const size_t length = strlen(key);
  for (size_t at = 0; at + length < size; at++) {
    if (strncmp(line + at, key, length) != 0 || (at > 0 && isalnum((unsigned char)line[at - 1]))) {
      continue;
    }
    size_t next = at + length;
    while (next < size && line[next] == ' ') {
      next++;
    }
    if (next >= size || line[next] != '=') {
      continue;
    }
    next++;
    while (next < size && line[next] == ' ') {
      next++;
    }
    size_t end = next;
    while (end < size && (isalnum((unsigned char)line[end]) || strchr(".+-", line[end]) != NULL)) {
      end++;
    }
    return lxg_text_parse_number(line + next, end - next, false, value) == LXG_TEXT_NUMBER;
  }
  return false;
}

static void note_text(struct importer *in, const char *line, size_t size) {
  double x, y, z, carbon = 0.0, oxygen = 0.0;
  const bool has_x = find_fraction(line, size, "X", &x);
  const bool has_z = find_fraction(line, size, "Z", &z);
  if (has_x || has_z) {
    const bool has_y = find_fraction(line, size, "Y", &y);
    find_fraction(line, size, "dXc", &carbon);
    find_fraction(line, size, "dXo", &oxygen);
    in->has_x = has_x;
    in->has_y = has_y;
    in->has_z = has_z;
    in->x = has_x ? x : 0.0;
    in->y = has_y ? y : 0.0;
    in->z = has_z ? z : 0.0;
    in->cno = carbon + oxygen;
    in->composition_line = in->line;
  } else if (in->composition_line == 0 && in->block_line == 0) {
    const size_t used = strlen(in->title);
    snprintf(in->title + used, sizeof in->title - used, "%s%.*s", used > 0 ? " " : "", (int)size, line);
  }
}

static enum lxg_status take_composition(const struct importer *in, struct lxg_composition *composition) {
  if (in->has_x && in->has_z) {
    *composition = (struct lxg_composition){in->x, 1.0 - in->x - in->z - in->cno, in->cno, in->z};
    if (in->has_y && fabs(in->y - composition->helium) > 2e-4) {
      return lxg_error_set(in->error, LXG_INPUT, "opacity-import-composition",
                           "%s:%zu:1: error: X + Y + Z + dXc + dXo = %.6g: mass fractions sum to 1", in->name,
                           in->composition_line, in->x + in->y + in->z + in->cno);
    }
    if (composition->helium < 0.0 && composition->helium > -1e-9) {
      composition->helium = 0.0;
    }
  } else if (in->options->composition != NULL) {
    *composition = *in->options->composition;
  } else {
    return lxg_error_set(in->error, LXG_INPUT, "opacity-import-composition",
                         "%s:%zu:1: error: the text above this block does not say X=... and Z=...: give the "
                         "composition",
                         in->name, in->block_line);
  }
  return lxg_composition_check(composition, in->error);
}

/* ---- blocks ---- */

static void copy_rows(const struct importer *in, struct lxg_opacity_grid *grid) {
  for (size_t j = 0; j < in->densities; j++) {
    grid->log_r[j] = in->log_r[j];
  }
  for (size_t i = 0; i < in->rows; i++) {
    const size_t from = in->descending ? in->rows - 1 - i : i;
    grid->log_t[i] = in->log_t[from];
    memcpy(&grid->log_kappa[i * in->densities], &in->values[from * in->densities],
           in->densities * sizeof *grid->log_kappa);
  }
}

static enum lxg_status close_block(struct importer *in) {
  if (!in->in_block) {
    return LXG_OK;
  }
  in->in_block = false;
  struct lxg_composition composition;
  enum lxg_status status = take_composition(in, &composition);
  struct lxg_opacity_grid *grid = NULL;
  if (status == LXG_OK) {
    status = lxg_opacity_grid_create(in->rows, in->densities, &grid, in->error);
  }
  if (status == LXG_OK) {
    grid->composition = composition;
    grid->line = in->block_line;
    snprintf(grid->name, sizeof grid->name, "%s", in->name);
    snprintf(grid->source, sizeof grid->source, "%s",
             in->options->source != NULL ? in->options->source : in->title);
    snprintf(grid->date, sizeof grid->date, "%s", in->options->date != NULL ? in->options->date : "");
    copy_rows(in, grid);
    status = lxg_opacity_grid_validate(grid, in->error);
    if (status == LXG_OK) {
      status = lxg_opacity_set_add(in->set, grid, in->error);
    } else {
      lxg_opacity_grid_destroy(grid);
    }
  }
  if (status != LXG_OK) {
    lxg_error_context(in->error, "importing the block at %s:%zu", in->name, in->block_line);
  }
  in->has_x = in->has_y = in->has_z = false;
  return status;
}

/* The heading `logT v v v ...`; `skip` words belong to its label. */
static enum lxg_status open_block(struct importer *in, struct word *words, size_t count, size_t skip) {
  enum lxg_status status = close_block(in);
  if (status != LXG_OK) {
    return status;
  }
  in->densities = count - skip;
  for (size_t j = 0; j < in->densities; j++) {
    struct word *word = &words[skip + j];
    if (!is_number(word)) {
      return fail(in, word->column, "opacity-import-number", "a value of log R is not a number");
    }
    if (j > 0 && !(word->value > in->log_r[j - 1])) {
      return fail(in, word->column, "opacity-import-order", "log R must increase along the heading");
    }
    in->log_r[j] = word->value;
    in->ends[j] = word->column + word->size;
  }
  in->in_block = true;
  in->descending = false;
  in->block_line = in->line;
  in->rows = 0;
  return LXG_OK;
}

/* The one column of the heading whose value ends within `slack` text columns of where the word ends; SIZE_MAX if none does or
 * two do. Headings and rows of one file are often set with different widths, but not by more than that. */
static size_t heading_above(const struct importer *in, const struct word *word) {
  static const size_t slack = 2;
  const size_t end = word->column + word->size;
  size_t found = SIZE_MAX;
  for (size_t j = 0; j < in->densities; j++) {
    if (end <= in->ends[j] + slack && in->ends[j] <= end + slack) {
      if (found != SIZE_MAX) {
        return SIZE_MAX;
      }
      found = j;
    }
  }
  return found;
}

static enum lxg_status grow_rows(struct importer *in) {
  if (in->rows < in->rows_reserved) {
    return LXG_OK;
  }
  if (in->rows >= LXG_OPACITY_GRID_AXIS) {
    return fail(in, 1, "opacity-import-limit", "a block has too many values of log T");
  }
  const size_t reserve = in->rows_reserved == 0 ? 128 : 2 * in->rows_reserved;
  double *log_t = lxg_realloc(in->log_t, reserve, sizeof *log_t);
  in->log_t = log_t != NULL ? log_t : in->log_t;
  double *values = lxg_realloc(in->values, reserve * LXG_OPACITY_GRID_AXIS, sizeof *values);
  in->values = values != NULL ? values : in->values;
  if (log_t == NULL || values == NULL) {
    return out_of_memory(in);
  }
  in->rows_reserved = reserve;
  return LXG_OK;
}

/* log T must keep its direction; decreasing tables are turned round at the end. */
static enum lxg_status take_log_t(struct importer *in, const struct word *word) {
  if (in->rows == 1) {
    in->descending = word->value < in->log_t[0];
  }
  if (in->rows > 0) {
    const double step = word->value - in->log_t[in->rows - 1];
    if (!(in->descending ? step < 0.0 : step > 0.0)) {
      return fail(in, word->column, "opacity-import-order",
                  "log T must increase (or decrease) from row to row");
    }
  }
  in->log_t[in->rows] = word->value;
  return LXG_OK;
}

static enum lxg_status add_row(struct importer *in, struct word *words, size_t count) {
  if (count - 1 > in->densities) {
    return fail(in, words[in->densities + 1].column, "opacity-import-count",
                "more values in the row than log R in the heading");
  }
  enum lxg_status status = grow_rows(in);
  if (status == LXG_OK) {
    status = take_log_t(in, &words[0]);
  }
  if (status != LXG_OK) {
    return status;
  }
  double *row = &in->values[in->rows * in->densities];
  for (size_t j = 0; j < in->densities; j++) {
    row[j] = NAN;
  }
  const bool full = count - 1 == in->densities;
  size_t free_column = 0;
  for (size_t k = 1; k < count; k++) {
    if (!is_number(&words[k])) {
      return fail(in, words[k].column, "opacity-import-number", "log kappa is not a finite number");
    }
    const size_t j = full ? k - 1 : heading_above(in, &words[k]);
    if (j == SIZE_MAX || j < free_column) {
      return fail(in, words[k].column, "opacity-import-blank",
                  "fewer values than log R in the heading, and the columns do not tell which are blank");
    }
    free_column = j + 1;
    if (words[k].value < in->sentinel - sentinel_slack) {
      row[j] = words[k].value;
    }
  }
  in->rows++;
  return LXG_OK;
}

/* Words that label the first column of a heading: `logT`, `log T`, `log T\\R`; 0 if the line is no heading. */
static size_t heading_label(struct word *words, size_t count) {
  if (count >= 1 + LXG_OPACITY_GRID_LEAST && word_is(&words[0], "logt")) {
    return 1;
  }
  if (count >= 2 + LXG_OPACITY_GRID_LEAST && word_is(&words[0], "log") && word_is(&words[1], "t")) {
    return 2;
  }
  return 0;
}

static enum lxg_status take_line(struct importer *in, const char *line, size_t size) {
  const size_t count = split(line, size, in->words, LXG_OPACITY_GRID_AXIS + 1);
  if (count == SIZE_MAX) {
    return fail(in, 1, "opacity-import-limit", "more than 2000 columns");
  }
  if (count == 0) {
    return LXG_OK;
  }
  const size_t label = heading_label(in->words, count);
  if (label > 0) {
    return open_block(in, in->words, count, label);
  }
  if (in->in_block && is_number(&in->words[0])) {
    return add_row(in, in->words, count);
  }
  if (in->in_block && in->rows == 0) {
    return fail(in, in->words[0].column, "opacity-import-number", "log T is not a number");
  }
  const enum lxg_status status = close_block(in);
  if (status == LXG_OK) {
    note_text(in, line, size);
  }
  return status;
}

static enum lxg_status take_text(struct importer *in, const char *text, size_t size) {
  enum lxg_status status = LXG_OK;
  size_t at = 0;
  while (status == LXG_OK && at < size) {
    const char *end = memchr(text + at, '\n', size - at);
    const size_t length = end == NULL ? size - at : (size_t)(end - (text + at));
    in->line++;
    status = take_line(in, text + at, length);
    at += length + 1;
  }
  if (status == LXG_OK) {
    status = close_block(in);
  }
  if (status == LXG_OK && in->set->count == 0) {
    status = lxg_error_set(
        in->error, LXG_INPUT, "opacity-import-empty",
        "%s: no block found: a block starts with a line `logT` followed by the values of log R", in->name);
  }
  return status;
}

enum lxg_status lxg_opacity_import_text(const char *text, size_t size, const char *name,
                                        const struct lxg_opacity_import_options *options,
                                        struct lxg_opacity_set *set, struct lxg_error *error) {
  static const struct lxg_opacity_import_options usual = {0};
  struct importer in = {
      .name = name, .options = options != NULL ? options : &usual, .set = set, .error = error};
  in.sentinel = in.options->sentinel != 0.0 ? in.options->sentinel : usual_sentinel;
  *set = (struct lxg_opacity_set){0};
  in.log_r = lxg_alloc(LXG_OPACITY_GRID_AXIS + 1, sizeof *in.log_r);
  in.ends = lxg_alloc(LXG_OPACITY_GRID_AXIS + 1, sizeof *in.ends);
  in.words = lxg_alloc(LXG_OPACITY_GRID_AXIS + 1, sizeof *in.words);
  const bool ready = in.log_r != NULL && in.ends != NULL && in.words != NULL;
  const enum lxg_status status = ready ? take_text(&in, text, size) : out_of_memory(&in);
  lxg_free(in.log_r);
  lxg_free(in.ends);
  lxg_free(in.words);
  lxg_free(in.log_t);
  lxg_free(in.values);
  if (status != LXG_OK) {
    lxg_opacity_set_free(set);
  }
  return status;
}

enum lxg_status lxg_opacity_import(const char *path, const struct lxg_opacity_import_options *options,
                                   struct lxg_opacity_set *set, struct lxg_error *error) {
  *set = (struct lxg_opacity_set){0};
  FILE *file = fopen(path, "rb");
  if (file == NULL) {
    return lxg_error_set(error, LXG_IO, "read-open", "%s: %s", path, strerror(errno));
  }
  struct lxg_buffer buffer = {0};
  char block[16384];
  size_t got = 0;
  while (buffer.size <= LXG_OPACITY_FILE_BYTES && (got = fread(block, 1, sizeof block, file)) > 0) {
    lxg_buffer_append(&buffer, block, got);
  }
  const bool failed = ferror(file) != 0;
  fclose(file);
  enum lxg_status status = lxg_buffer_status(&buffer, error);
  if (failed) {
    status = lxg_error_set(error, LXG_IO, "read-failed", "%s: reading failed", path);
  } else if (buffer.size > LXG_OPACITY_FILE_BYTES) {
    status = lxg_error_set(error, LXG_LIMIT, "opacity-import-limit", "%s: larger than %d bytes", path,
                           LXG_OPACITY_FILE_BYTES);
  } else if (status == LXG_OK) {
    status = lxg_opacity_import_text(buffer.data != NULL ? buffer.data : "", buffer.size, path, options, set,
                                     error);
  }
  lxg_buffer_free(&buffer);
  return status;
}
