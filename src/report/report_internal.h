/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_internal.h - columns and units shared by the files of the report module.
 */
#ifndef LUXGALE_REPORT_INTERNAL_H
#define LUXGALE_REPORT_INTERNAL_H

#include "luxgale/constants.h"
#include "luxgale/table.h"
#include "luxgale/wind.h"

#define REPORT_MSUN_YR (LXG_SOLAR_MASS / LXG_YEAR) /* [g s^-1] */

/* One column of a table. */
struct report_column {
  const char *name, *unit, *description;
  enum lxg_column_type type;
};

/* A new table with these columns and `rows` empty rows. */
enum lxg_status lxg_report_table(const char *name, const struct report_column columns[], size_t count,
                                 size_t rows, struct lxg_table **table, struct lxg_error *error);

/* Unit of a held quantity in a report, its spelling in column headers, and its CGS value. */
struct report_unit {
  const char *name; /* quantity with unit, e.g. "terminal_speed_km_s" */
  const char *unit;
  double factor; /* CGS value of one unit */
};
const struct report_unit *lxg_report_unit(enum lxg_held quantity);

#endif
