/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * observed_internal.h - the steps of reading the section `luminosity` for magnitudes.
 */
#ifndef LUXGALE_OBSERVED_INTERNAL_H
#define LUXGALE_OBSERVED_INTERNAL_H

#include "luxgale/document.h"
#include "luxgale/observed.h"

/* Distance and extinction. */
enum lxg_status lxg_observed_read_calibration(struct lxg_node *section, struct lxg_observed *observed,
                                              struct lxg_error *error);

/* The keys of each way: gas of free-free light, bolometric correction, tolerance of groups. */
enum lxg_status lxg_observed_read_way(struct lxg_node *section, struct lxg_files *files,
                                      const struct lxg_composition *composition,
                                      struct lxg_observed *observed, struct lxg_error *error);

#endif
