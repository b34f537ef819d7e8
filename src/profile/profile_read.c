/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * profile_read.c - the list `lines.profiles` of a case (see profile.h).
 */
#include "luxgale/keys.h"
#include "luxgale/memory.h"
#include "luxgale/profile.h"

#include <math.h>
#include <string.h>

enum { POINTS = 161, POINTS_LEAST = 11, POINTS_MOST = 4001 };

/* Optional number, NaN if absent; `least` is allowed, or only above it. */
static enum lxg_status get(struct lxg_node *item, const char *key, double *value, bool zero,
                           struct lxg_error *error) {
  *value = NAN;
  const enum lxg_status status = lxg_node_get_number(item, key, value, error);
  if (status == LXG_OK && !isnan(*value) && !(zero ? *value >= 0.0 : *value > 0.0)) {
    return lxg_node_error(lxg_node_find(item, key), error, "profile-value", "%s",
                          zero ? "0 or more" : "above 0");
  }
  return status;
}

static enum lxg_status refuse(struct lxg_node *item, const char *const keys[], size_t count, const char *kind,
                              struct lxg_error *error) {
  for (size_t i = 0; i < count; i++) {
    struct lxg_node *node = lxg_node_find(item, keys[i]);
    if (!lxg_node_is_none(node)) {
      return lxg_node_error(node, error, "profile-unused", "a %s line has no use for it", kind);
    }
  }
  return LXG_OK;
}

/* Exactly one of strength, optical_depth, oscillator_strength. */
static enum lxg_status read_resonance(struct lxg_node *item, struct lxg_profile_request *request,
                                      struct lxg_error *error) {
  static const char *const unused[] = {"emissivity", "opacity"};
  double strength = NAN, oscillator = NAN, ions = NAN;
  enum lxg_status status = refuse(item, unused, 2, "resonance", error);
  if (status == LXG_OK) {
    status = get(item, "strength", &strength, true, error);
  }
  if (status == LXG_OK) {
    status = get(item, "optical_depth", &request->optical_depth, true, error);
  }
  if (status == LXG_OK) {
    status = get(item, "oscillator_strength", &oscillator, false, error);
  }
  if (status == LXG_OK) {
    status = get(item, "ions_per_gram", &ions, false, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_number(item, "index", &request->line.strength_index, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  if (!isnan(strength) + !isnan(request->optical_depth) + !isnan(oscillator) != 1 ||
      isnan(oscillator) != isnan(ions) || (!isnan(oscillator) && isnan(request->wavelength))) {
    return lxg_node_error(
        item, error, "profile-strength",
        "one of strength, optical_depth, or oscillator_strength with wavelength and ions_per_gram");
  }
  request->line.strength = !isnan(oscillator) ? lxg_profile_strength(oscillator, request->wavelength, ions)
                           : isnan(strength)  ? 0.0
                                              : strength;
  return LXG_OK;
}

static enum lxg_status read_recombination(struct lxg_node *item, struct lxg_profile_request *request,
                                          struct lxg_error *error) {
  static const char *const unused[] = {"strength", "optical_depth", "oscillator_strength", "ions_per_gram",
                                       "index"};
  struct lxg_node *needed = NULL;
  enum lxg_status status = refuse(item, unused, 5, "recombination", error);
  if (status == LXG_OK) {
    status = lxg_node_require(item, "emissivity", &needed, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_require(item, "wavelength", &needed, error);
  }
  if (status == LXG_OK) {
    status = get(item, "emissivity", &request->line.emissivity, false, error);
  }
  if (status == LXG_OK) {
    status = get(item, "opacity", &request->line.opacity, true, error);
  }
  request->line.opacity = isnan(request->line.opacity) ? 0.0 : request->line.opacity;
  return status;
}

static enum lxg_status read_times(struct lxg_node *list, struct lxg_profile_request *request,
                                  struct lxg_error *error) {
  if (lxg_node_is_none(list)) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_node_as_sequence(list, error);
  if (status == LXG_OK && lxg_node_count(list) > 0) {
    request->time = lxg_alloc(lxg_node_count(list), sizeof *request->time);
    status = request->time != NULL ? LXG_OK
                                   : lxg_error_set(error, LXG_MEMORY, "memory", "profiles: out of memory");
  }
  for (struct lxg_node *item = lxg_node_first(list); item != NULL && status == LXG_OK;
       item = lxg_node_next(item)) {
    status =
        lxg_node_as_quantity(item, LXG_DIMENSION_TIME, NULL, NULL, &request->time[request->count++], error);
  }
  return status;
}

static enum lxg_status read_one(struct lxg_node *item, struct lxg_profile_request *request,
                                struct lxg_error *error) {
  static const char *const kinds[] = {"resonance", "recombination"};
  *request = (struct lxg_profile_request){.label = "line", .optical_depth = NAN, .wavelength = NAN};
  struct lxg_node *kind = NULL;
  size_t which = 0;
  long long points = POINTS;
  enum lxg_status status = lxg_keys_check(item, "lines.profiles[]", error);
  if (status == LXG_OK) {
    status = lxg_node_require(item, "kind", &kind, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_as_word(kind, kinds, 2, &which, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_text(item, "label", &request->label, error);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_integer(item, "points", &points, error);
  }
  if (status == LXG_OK && (points < POINTS_LEAST || points > POINTS_MOST || points % 2 == 0)) {
    return lxg_node_error(lxg_node_find(item, "points"), error, "profile-points", "odd, %d to %d",
                          POINTS_LEAST, POINTS_MOST);
  }
  if (status == LXG_OK) {
    status = lxg_node_get_quantity(item, "wavelength", LXG_DIMENSION_WAVELENGTH, NULL, NULL,
                                   &request->wavelength, error);
  }
  if (status == LXG_OK && request->wavelength <= 0.0) {
    return lxg_node_error(lxg_node_find(item, "wavelength"), error, "profile-value", "above 0");
  }
  if (status == LXG_OK) {
    request->points = (size_t)points;
    status = read_times(lxg_node_find(item, "times"), request, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  request->line.kind = (enum lxg_profile_kind)which;
  return request->line.kind == LXG_PROFILE_RESONANCE ? read_resonance(item, request, error)
                                                     : read_recombination(item, request, error);
}

enum lxg_status lxg_profile_requests_read(struct lxg_node *list, struct lxg_profile_requests *requests,
                                          struct lxg_error *error) {
  *requests = (struct lxg_profile_requests){.count = 0};
  if (lxg_node_is_none(list)) {
    return LXG_OK;
  }
  enum lxg_status status = lxg_node_as_sequence(list, error);
  if (status == LXG_OK && lxg_node_count(list) > 0) {
    requests->request = lxg_alloc(lxg_node_count(list), sizeof *requests->request);
    status = requests->request != NULL
                 ? LXG_OK
                 : lxg_error_set(error, LXG_MEMORY, "memory", "profiles: out of memory");
  }
  for (struct lxg_node *item = lxg_node_first(list); item != NULL && status == LXG_OK;
       item = lxg_node_next(item)) {
    status = read_one(item, &requests->request[requests->count++], error);
  }
  return status;
}

void lxg_profile_requests_free(struct lxg_profile_requests *requests) {
  for (size_t i = 0; i < requests->count; i++) {
    lxg_free(requests->request[i].time);
  }
  lxg_free(requests->request);
  *requests = (struct lxg_profile_requests){.count = 0};
}
