/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_profiles.c - spectral lines in the winds of chosen epochs (see profile.h).
 *
 * The flow is the wind outside its photosphere, whose black-body light is the continuum. For a resonance line only the ratio
 * to that continuum matters, so its intensity may be 1; a recombination line adds light of its own and needs B_nu nu/c.
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "luxgale/report.h"
#include "luxgale/run.h"
#include "run/run_internal.h"

#include <math.h>

/* B_nu nu/c of a black body [erg s^-1 cm^-2 sr^-1 (cm/s)^-1]. */
static double black_body(double temperature, double wavelength) {
  const double nu = LXG_SPEED_OF_LIGHT / wavelength;
  return 2.0 * LXG_PLANCK * nu * nu * nu * nu /
         (LXG_SPEED_OF_LIGHT * LXG_SPEED_OF_LIGHT * LXG_SPEED_OF_LIGHT) /
         expm1(LXG_PLANCK * nu / (LXG_BOLTZMANN * temperature));
}

/* Rows from the photosphere outward as a flow; rows that repeat a radius are passed over. */
static enum lxg_status make_flow(const struct lxg_speeds_structure *structure,
                                 struct lxg_profile_table **table, struct lxg_error *error) {
  const size_t most = structure->count - structure->photosphere;
  double *radius = lxg_alloc(3 * most, sizeof *radius);
  if (radius == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "profile: out of memory");
  }
  double *const speed = &radius[most], *const density = &radius[2 * most];
  size_t count = 0;
  for (size_t i = structure->photosphere; i < structure->count; i++) {
    if (count == 0 || structure->row[i].radius > radius[count - 1]) {
      radius[count] = structure->row[i].radius;
      speed[count] = structure->row[i].speed;
      density[count++] = structure->row[i].density;
    }
  }
  const enum lxg_status status = lxg_profile_table_create(count, radius, speed, density, table, error);
  lxg_free(radius);
  return status;
}

static enum lxg_status compute(const struct lxg_speeds_structure *structure, struct lxg_report_profile *one,
                               struct lxg_error *error) {
  const struct lxg_profile_request *request = one->request;
  const struct lxg_wind_row *photosphere = &structure->row[structure->photosphere];
  struct lxg_profile_table *table = NULL;
  struct lxg_profile_settings settings;
  struct lxg_profile_line line = request->line;
  lxg_profile_defaults(&settings);
  settings.count = request->points;
  if (!isnan(request->optical_depth)) { /* tau_0 = k rho r/v at the photosphere */
    line.strength =
        request->optical_depth * photosphere->speed / (photosphere->density * photosphere->radius);
  }
  one->strength = line.strength;
  one->photosphere_speed = photosphere->speed;
  one->terminal_speed = structure->row[structure->count - 1].speed;
  const struct lxg_profile_core core = {
      .intensity =
          isnan(request->wavelength) ? 1.0 : black_body(photosphere->temperature, request->wavelength)};
  enum lxg_status status = make_flow(structure, &table, error);
  if (status == LXG_OK) {
    const struct lxg_profile_flow flow = lxg_profile_table_flow(table);
    status = lxg_profile_compute(&flow, &line, &core, &settings, &one->profile, error);
  }
  lxg_profile_table_destroy(table);
  one->computed = status == LXG_OK;
  return status;
}

/* One line at one epoch; an epoch without a wind is noted, not an error. */
static enum lxg_status run_one(struct lxg_speeds *speeds, struct lxg_report_profile *one,
                               struct lxg_error *error) {
  const struct lxg_speeds_structure *structure = NULL;
  enum lxg_status status =
      lxg_speeds_structure(speeds, isnan(one->time) ? 0.0 : one->time, &structure, &one->why);
  if (status == LXG_OK) {
    status = compute(structure, one, &one->why);
  }
  if (status == LXG_OK || status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED || status == LXG_DOMAIN) {
    return LXG_OK;
  }
  if (error != NULL) {
    *error = one->why;
  }
  lxg_error_context(error, "computing the profile of %s", one->request->label);
  return status;
}

enum lxg_status lxg_run_profiles(const struct lxg_case *input, struct lxg_speeds *speeds,
                                 struct lxg_report_profile **profile, size_t *count,
                                 struct lxg_error *error) {
  const struct lxg_profile_requests *requests = &input->profiles;
  size_t all = 0;
  *profile = NULL;
  *count = 0;
  for (size_t i = 0; i < requests->count; i++) {
    if (input->history != NULL && requests->request[i].count == 0) {
      return lxg_error_set(
          error, LXG_INPUT, "key-missing",
          "%s: error: lines.profiles[%zu].times: with a luminosity history it names the epochs",
          lxg_document_name(input->document), i);
    }
    all += input->history != NULL ? requests->request[i].count : 1;
  }
  if (all == 0) {
    return lxg_error_set(error, LXG_INPUT, "key-missing", "%s: error: lines.profiles: no line is asked for",
                         lxg_document_name(input->document));
  }
  *profile = lxg_alloc(all, sizeof **profile);
  if (*profile == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "profiles: out of memory");
  }
  enum lxg_status status = LXG_OK;
  for (size_t i = 0; i < requests->count; i++) {
    const struct lxg_profile_request *request = &requests->request[i];
    const size_t times = input->history != NULL ? request->count : 1;
    for (size_t k = 0; k < times && status == LXG_OK; k++) {
      struct lxg_report_profile *one = &(*profile)[(*count)++];
      *one = (struct lxg_report_profile){.request = request,
                                         .time = input->history != NULL ? request->time[k] : (double)NAN};
      status = run_one(speeds, one, error);
    }
  }
  return status;
}

void lxg_run_profiles_free(struct lxg_report_profile profile[], size_t count) {
  for (size_t i = 0; i < count; i++) {
    if (profile[i].computed) {
      lxg_profile_free(&profile[i].profile);
    }
  }
  lxg_free(profile);
}
