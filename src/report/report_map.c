/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_map.c - the opacity on a regular grid of log T and log R around a wind (see report.h).
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>

enum { MAP_T = 121, MAP_R = 81 }; /* nodes: fine enough for a picture */

static const double margin = 0.4;  /* dex around the wind */
static const double digits = 1e-4; /* values are rounded to this: a picture shows no more */

static const struct report_column columns[] = {
    {"log_temperature", "", "log10 of T in K", LXG_COLUMN_NUMBER},
    {"log_r", "", "log10 of R = rho/(T/1e6 K)^3 in g/cm3", LXG_COLUMN_NUMBER},
    {"log_opacity", "", "log10 of the opacity in cm2/g", LXG_COLUMN_NUMBER},
};

static double rounded(double value) {
  return round(value / digits) * digits;
}

static double log_r(double temperature, double density) {
  return log10(density / pow(temperature / 1e6, 3.0));
}

enum lxg_status lxg_report_opacity_map(const struct lxg_opacity *opacity, const struct lxg_wind_row *rows,
                                       size_t count, struct lxg_table **table, struct lxg_error *error) {
  double t[2] = {INFINITY, -INFINITY}, r[2] = {INFINITY, -INFINITY};
  for (size_t i = 0; i < count; i++) {
    const double here = log_r(rows[i].temperature, rows[i].density);
    t[0] = fmin(t[0], log10(rows[i].temperature) - margin);
    t[1] = fmax(t[1], log10(rows[i].temperature) + margin);
    r[0] = fmin(r[0], here - margin);
    r[1] = fmax(r[1], here + margin);
  }
  enum lxg_status status = lxg_report_table("opacity-map", columns, 3, (size_t)MAP_T * MAP_R, table, error);
  for (size_t i = 0; i < (size_t)MAP_T * MAP_R && status == LXG_OK; i++) {
    const double here[2] = {rounded(t[0] + (t[1] - t[0]) * (double)(i / MAP_R) / (MAP_T - 1)),
                            rounded(r[0] + (r[1] - r[0]) * (double)(i % MAP_R) / (MAP_R - 1))};
    struct lxg_opacity_value value = {.kappa = NAN};
    lxg_opacity_at(opacity, (here[1] + 3.0 * here[0] - 18.0) * LXG_LN10, here[0] * LXG_LN10, &value);
    status = lxg_table_set_number(*table, 0, i, here[0], error);
    status = status == LXG_OK ? lxg_table_set_number(*table, 1, i, here[1], error) : status;
    status =
        status == LXG_OK ? lxg_table_set_number(*table, 2, i, rounded(log10(value.kappa)), error) : status;
  }
  if (status != LXG_OK) {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}
