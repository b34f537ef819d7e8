/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * observed_read.c - the section `luminosity` with `kind: magnitude`: table, windows left out, epochs (see observed.h).
 */
#include "luxgale/constants.h"
#include "luxgale/keys.h"
#include "luxgale/memory.h"
#include "luxgale/table.h"

#include "observed/observed_internal.h"

#include <math.h>
#include <string.h>

static const double default_error =
    0.1; /* [mag] of rows without one: what an eye or a plate gives; common practice, no source */
static const double least_error = 1e-3; /* [mag] weight of a point that claims less */

static enum lxg_status read_band(struct lxg_node *section, struct lxg_observed *observed,
                                 struct lxg_error *error) {
  const char *name = "V";
  enum lxg_status status = lxg_node_get_text(section, "band", &name, error);
  if (status == LXG_OK) {
    status = lxg_band_find(name, &observed->band, error);
  }
  return status == LXG_INPUT ? lxg_keys_locate(lxg_node_find(section, "band"), error) : status;
}

static enum lxg_status read_curve(struct lxg_node *section, const struct lxg_table *table,
                                  struct lxg_observed *observed, struct lxg_error *error) {
  struct lxg_lightcurve_options options = {.default_error = default_error};
  struct lxg_node *zero = lxg_node_find(section, "time_zero");
  options.zero_given = !lxg_node_is_none(zero);
  enum lxg_status status = LXG_OK;
  if (options.zero_given) {
    status = lxg_node_as_number(zero, &options.zero, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_quantity(section, "default_error", LXG_DIMENSION_MAGNITUDE, NULL, NULL,
                                   &options.default_error, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_check_range(lxg_node_find(section, "default_error"), options.default_error, 0.0, 5.0,
                                  "mag", error);
  }
  if (lxg_table_find(table, "band") == NULL) {
    options.band_given = true;
    options.band = observed->band;
  }
  return status == LXG_OK ? lxg_lightcurve_read(table, &options, &observed->curve, error) : status;
}

static enum lxg_status read_file(struct lxg_node *section, struct lxg_files *files,
                                 struct lxg_observed *observed, struct lxg_error *error) {
  struct lxg_node *file = NULL;
  const char *name = NULL;
  char *path = NULL;
  struct lxg_table *table = NULL;
  static const char *const texts[] = {"band"};
  const struct lxg_table_options options = {.texts = texts, .texts_count = 1};
  enum lxg_status status = lxg_node_require(section, "file", &file, error);
  if (status == LXG_OK) {
    status = lxg_node_as_text(file, &name, error);
  }
  if (status == LXG_OK) {
    status = lxg_files_resolve(files, name, &path, error);
  }
  if (status == LXG_OK) {
    status = lxg_table_read(path, &options, &table, error);
  }
  if (status == LXG_OK) {
    status = lxg_files_record(files, "luminosity.file", name, table->checksum, error);
  }
  if (status == LXG_OK) {
    status = read_curve(section, table, observed, error);
  }
  lxg_table_destroy(table);
  lxg_free(path);
  return status;
}

/* One [from, to] of the list `exclude`, in days after the zero point. */
static enum lxg_status read_window(struct lxg_node *item, struct lxg_observed *observed,
                                   struct lxg_error *error) {
  double bound[2] = {0.0, 0.0};
  enum lxg_status status = lxg_node_as_sequence(item, error);
  if (status == LXG_OK && lxg_node_count(item) != 2) {
    return lxg_node_error(item, error, "luminosity-window", "[from, to] in days after the zero point");
  }
  struct lxg_node *node = status == LXG_OK ? lxg_node_first(item) : NULL;
  for (size_t i = 0; i < 2 && status == LXG_OK; i++) {
    status = lxg_node_as_quantity(node, LXG_DIMENSION_TIME, "d", NULL, &bound[i], error);
    node = lxg_node_next(node);
  }
  if (status == LXG_OK) {
    status = lxg_lightcurve_exclude(&observed->curve, bound[0] / LXG_DAY, bound[1] / LXG_DAY, NULL, error);
    observed->windows++;
  }
  return status == LXG_INPUT ? lxg_keys_locate(item, error) : status;
}

static enum lxg_status read_windows(struct lxg_node *section, struct lxg_observed *observed,
                                    struct lxg_error *error) {
  struct lxg_node *list = lxg_node_find(section, "exclude");
  if (lxg_node_is_none(list)) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_node_as_sequence(list, error);
  for (struct lxg_node *item = status == LXG_OK ? lxg_node_first(list) : NULL;
       item != NULL && status == LXG_OK; item = lxg_node_next(item)) {
    if (lxg_node_kind(item) != LXG_NODE_SEQUENCE) {
      return lxg_node_error(item, error, "luminosity-window", "[from, to] in days after the zero point");
    }
    status = read_window(item, observed, error);
  }
  return status;
}

/* A peak that the table does not show. */
static enum lxg_status read_peak(struct lxg_node *section, struct lxg_observed *observed,
                                 struct lxg_error *error) {
  struct lxg_light_decline_options *decline = &observed->decline;
  double time = 0.0;
  *decline = lxg_lightcurve_decline_defaults();
  decline->band = observed->band;
  struct lxg_node *node = lxg_node_find(section, "peak_time");
  if (lxg_node_is_none(node)) {
    return LXG_OK;
  }
  struct lxg_node *magnitude = NULL;
  enum lxg_status status = lxg_node_as_quantity(node, LXG_DIMENSION_TIME, "d", NULL, &time, error);
  if (status == LXG_OK) {
    status = lxg_node_require(section, "peak_magnitude", &magnitude, error);
  }
  if (status == LXG_OK) {
    status =
        lxg_node_as_quantity(magnitude, LXG_DIMENSION_MAGNITUDE, NULL, NULL, &decline->peak_magnitude, error);
  }
  decline->peak_error = default_error;
  if (status == LXG_OK) {
    status = lxg_node_get_quantity(section, "peak_error", LXG_DIMENSION_MAGNITUDE, NULL, NULL,
                                   &decline->peak_error, error);
  }
  decline->peak_given = true;
  decline->peak_time = time / LXG_DAY;
  return status;
}

/* Epochs: groups of points that share a time and, for colours, two bands; else the band of the key. */
static enum lxg_status make_epochs(struct lxg_observed *observed, struct lxg_error *error) {
  const size_t most = observed->curve.count;
  const bool colours = observed->way == LXG_OBSERVED_COLOURS;
  size_t groups = 0;
  observed->group = lxg_alloc(most, sizeof *observed->group);
  observed->time = lxg_alloc(most, sizeof *observed->time);
  observed->magnitude = lxg_alloc(most, sizeof *observed->magnitude);
  observed->error = lxg_alloc(most, sizeof *observed->error);
  if (observed->group == NULL || observed->time == NULL || observed->magnitude == NULL ||
      observed->error == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "light curve of %zu points: out of memory", most);
  }
  const enum lxg_status status =
      lxg_lightcurve_groups(&observed->curve, colours ? observed->together : 0.0, colours ? 2 : 1,
                            least_error, observed->group, most, &groups, error);
  for (size_t i = 0; i < groups && status == LXG_OK; i++) {
    const struct lxg_light_group *group = &observed->group[i];
    if (!colours && !group->has[observed->band]) {
      continue;
    }
    observed->time[observed->count] = group->time * LXG_DAY;
    observed->magnitude[observed->count] =
        group->has[observed->band] ? group->magnitude[observed->band] : NAN;
    observed->error[observed->count] = group->has[observed->band] ? group->error[observed->band] : NAN;
    observed->count++;
  }
  if (!colours) {
    lxg_free(observed->group);
    observed->group = NULL;
  }
  return status;
}

static enum lxg_status read_all(struct lxg_node *section, struct lxg_files *files,
                                const struct lxg_composition *composition, struct lxg_observed *observed,
                                struct lxg_error *error) {
  enum lxg_status status = read_band(section, observed, error);
  if (status == LXG_OK) {
    status = lxg_observed_read_calibration(section, observed, error);
  }
  if (status == LXG_OK) {
    status = lxg_observed_read_way(section, files, composition, observed, error);
  }
  if (status == LXG_OK) {
    status = read_file(section, files, observed, error);
  }
  if (status == LXG_OK) {
    status = read_windows(section, observed, error);
  }
  if (status == LXG_OK) {
    status = read_peak(section, observed, error);
  }
  if (status == LXG_OK) {
    status = make_epochs(observed, error);
  }
  for (size_t i = 0; i < observed->curve.count; i++) {
    observed->excluded += observed->curve.point[i].excluded;
  }
  if (status == LXG_OK && observed->count == 0) {
    return lxg_node_error(lxg_node_find(section, "file"), error, "luminosity-epochs",
                          "no epoch: %s is left that is neither excluded nor an upper limit",
                          observed->way == LXG_OBSERVED_COLOURS ? "no pair of bands that agree in time"
                                                                : "no point in the band");
  }
  return status;
}

enum lxg_status lxg_observed_read(struct lxg_node *section, struct lxg_files *files,
                                  const struct lxg_composition *composition, struct lxg_observed **observed,
                                  struct lxg_error *error) {
  *observed = NULL;
  const char *kind = lxg_node_text(lxg_node_find(section, "kind"));
  if (lxg_node_is_none(section) || kind == NULL || strcmp(kind, "magnitude") != 0) {
    return LXG_OK;
  }
  struct lxg_observed *made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "light curve: out of memory");
  }
  memset(made, 0, sizeof *made);
  const enum lxg_status status = read_all(section, files, composition, made, error);
  if (status != LXG_OK) {
    lxg_observed_destroy(made);
    return status;
  }
  *observed = made;
  return LXG_OK;
}
