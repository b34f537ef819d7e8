/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * answer.h - one command on one case as one opaque object: the door for other languages.
 *
 * Nothing here depends on the layout of a struct: texts, numbers and arrays only. Arrays belong to the answer and live as long as it.
 * GSL's error handler must be off (gsl_set_error_handler_off), as for every use of the library.
 *
 * Call order: lxg_answer_create -> lxg_answer_report, lxg_answer_column ... -> lxg_answer_destroy.
 */
#ifndef LUXGALE_ANSWER_H
#define LUXGALE_ANSWER_H

#include "luxgale/status.h"

#include <stddef.h>

struct lxg_answer; /* opaque */

/* Runs `command` ("star", "wind", "family", "outburst", ...) on the case in the file `path`, with `count` overrides
 * "path.to.key=value", and every table filled. Physics without an answer is LXG_OK: the report says why. LXG_USAGE
 * "command-unknown"; else the errors of reading and running. `*answer` is NULL on failure. */
enum lxg_status lxg_answer_create(const char *command, const char *path, const char *const overrides[],
                                  size_t count, struct lxg_answer **answer, struct lxg_error *error);

/* NULL is allowed. */
void lxg_answer_destroy(struct lxg_answer *answer);

/* 1 if the physics gave a full answer, else 0. */
int lxg_answer_full(const struct lxg_answer *answer);

/* The report as JSON text. */
const char *lxg_answer_report(const struct lxg_answer *answer);

/* Names of the tables there are ("epochs", "structure", "family", "opacity-map"): NULL beyond the end. */
const char *lxg_answer_table(const struct lxg_answer *answer, size_t index);

/* Name and unit of a table's column ("" for none): NULL beyond the end, or for an unknown table. */
const char *lxg_answer_column_name(const struct lxg_answer *answer, const char *table, size_t index);
const char *lxg_answer_column_unit(const struct lxg_answer *answer, const char *table, size_t index);

/* Numbers of a column in its unit, NaN where missing; NULL for texts or an unknown name. `*rows` is set in any case. */
const double *lxg_answer_column(const struct lxg_answer *answer, const char *table, const char *column,
                                size_t *rows);

/* One field of a column of texts ("" if missing); NULL for numbers or an unknown place. */
const char *lxg_answer_text(const struct lxg_answer *answer, const char *table, const char *column,
                            size_t row);

#endif
