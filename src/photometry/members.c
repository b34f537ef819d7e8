/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * members.c - all members of a family of winds that have a given absolute magnitude.
 *
 * Each segment between neighbouring nodes is searched for each component of the light by itself (photosphere,
 * free-free): the brighter of two monotonic lights need not be monotonic, each of them is. A root of a component counts
 * for LARGER when the other component is not brighter there. A node that is hit exactly belongs to the segment after it
 * (the last node to the last segment).
 */
#include "luxgale/constants.h"
#include "luxgale/photometry.h"

#include <math.h>
#include <stdbool.h>

enum { BISECTIONS = 55 };

struct place {
  double temperature, radius, mass_loss_rate, speed;
};

static double between(const double values[], size_t segment, double fraction) {
  return values[segment] * pow(values[segment + 1] / values[segment], fraction);
}

static struct place place_at(const struct lxg_photometry_family *family, size_t segment, double fraction) {
  struct place place = {.temperature = between(family->temperature, segment, fraction),
                        .radius = between(family->radius, segment, fraction)};
  if (family->mass_loss_rate != NULL && family->speed != NULL) {
    place.mass_loss_rate = between(family->mass_loss_rate, segment, fraction);
    place.speed = between(family->speed, segment, fraction);
  }
  return place;
}

/* Absolute magnitude of one component at a place. */
static double component(const struct place *place, enum lxg_band band,
                        const struct lxg_light_options *options, enum lxg_light light) {
  if (light == LXG_LIGHT_PHOTOSPHERE) {
    return lxg_photometry_blackbody(band, place->temperature, place->radius);
  }
  struct lxg_freefree_gas gas = options->gas;
  gas.temperature = options->gas_temperature > 0.0 ? options->gas_temperature : place->temperature;
  const struct lxg_freefree_wind wind = {
      .mass_loss_rate = place->mass_loss_rate, .speed = place->speed, .radius = place->radius};
  const double frequency = lxg_band_frequency(band);
  return lxg_photometry_magnitude(band, light == LXG_LIGHT_WHOLE
                                            ? lxg_freefree_wind_whole(&gas, &wind, frequency)
                                            : lxg_freefree_wind_thin(&gas, &wind, frequency));
}

double lxg_photometry_member_magnitude(const struct lxg_photometry_family *family, enum lxg_band band,
                                       const struct lxg_light_options *options, size_t segment,
                                       double fraction, enum lxg_light *served) {
  const struct place place = place_at(family, segment, fraction);
  enum lxg_light light = options->light;
  if (light == LXG_LIGHT_LARGER) {
    const double photosphere = component(&place, band, options, LXG_LIGHT_PHOTOSPHERE);
    const double freefree = component(&place, band, options, LXG_LIGHT_FREEFREE);
    light = freefree < photosphere ? LXG_LIGHT_FREEFREE : LXG_LIGHT_PHOTOSPHERE;
  }
  if (served != NULL) {
    *served = light;
  }
  return component(&place, band, options, light);
}

static bool positive(const double values[], size_t i) {
  return values[i] > 0.0 && isfinite(values[i]);
}

static enum lxg_status check_family(const struct lxg_photometry_family *family,
                                    const struct lxg_light_options *options, struct lxg_error *error) {
  const bool wind = options->light != LXG_LIGHT_PHOTOSPHERE;
  if (family->count < 2) {
    return lxg_error_set(error, LXG_INPUT, "members-family", "family of %zu members: two or more are needed",
                         family->count);
  }
  if (wind && (family->mass_loss_rate == NULL || family->speed == NULL)) {
    return lxg_error_set(error, LXG_INPUT, "members-family",
                         "free-free light needs the mass-loss rate and speed of each member");
  }
  for (size_t i = 0; i < family->count; i++) {
    if (!positive(family->temperature, i) || !positive(family->radius, i) ||
        (wind && (!positive(family->mass_loss_rate, i) || !positive(family->speed, i)))) {
      return lxg_error_set(error, LXG_INPUT, "members-family",
                           "member %zu: all its quantities must be positive", i + 1);
    }
  }
  return LXG_OK;
}

/* Root of one component in a segment; false when there is none. */
static bool root_in(const struct lxg_photometry_family *family, enum lxg_band band,
                    const struct lxg_light_options *options, enum lxg_light light, double magnitude,
                    size_t segment, double *fraction) {
  const struct place start = place_at(family, segment, 0.0);
  const struct place end = place_at(family, segment, 1.0);
  const double first = component(&start, band, options, light) - magnitude;
  const double last = component(&end, band, options, light) - magnitude;
  const bool final = segment + 2 == family->count;
  if (first == 0.0 || (last == 0.0 && final)) {
    *fraction = first == 0.0 ? 0.0 : 1.0;
    return true;
  }
  if (!(first * last < 0.0)) {
    return false;
  }
  double low = 0.0;
  double high = 1.0;
  for (int i = 0; i < BISECTIONS; i++) {
    const double middle = 0.5 * (low + high);
    const struct place place = place_at(family, segment, middle);
    if ((component(&place, band, options, light) - magnitude) * first > 0.0) {
      low = middle;
    } else {
      high = middle;
    }
  }
  *fraction = 0.5 * (low + high);
  return true;
}

/* Roots of a segment in rising order, at most two. */
static size_t segment_roots(const struct lxg_photometry_family *family, enum lxg_band band,
                            const struct lxg_light_options *options, double magnitude, size_t segment,
                            double fraction[2], enum lxg_light light[2]) {
  if (options->light != LXG_LIGHT_LARGER) {
    light[0] = options->light;
    return root_in(family, band, options, light[0], magnitude, segment, &fraction[0]) ? 1 : 0;
  }
  static const enum lxg_light lights[2] = {LXG_LIGHT_PHOTOSPHERE, LXG_LIGHT_FREEFREE};
  size_t found = 0;
  for (int i = 0; i < 2; i++) {
    double at = 0.0;
    if (!root_in(family, band, options, lights[i], magnitude, segment, &at)) {
      continue;
    }
    const struct place place = place_at(family, segment, at);
    const double other = component(&place, band, options, lights[1 - i]);
    if (other > magnitude || (other == magnitude && i == 0)) {
      fraction[found] = at;
      light[found] = lights[i];
      found++;
    }
  }
  if (found == 2 && fraction[1] < fraction[0]) {
    const double at = fraction[0];
    fraction[0] = fraction[1];
    fraction[1] = at;
    light[0] = LXG_LIGHT_FREEFREE;
    light[1] = LXG_LIGHT_PHOTOSPHERE;
  }
  return found;
}

static enum lxg_status none_found(const struct lxg_photometry_family *family, enum lxg_band band,
                                  const struct lxg_light_options *options, double magnitude,
                                  struct lxg_error *error) {
  double brightest = INFINITY;
  double faintest = -INFINITY;
  for (size_t i = 0; i < family->count; i++) {
    const size_t segment = i + 1 < family->count ? i : i - 1;
    const double here =
        lxg_photometry_member_magnitude(family, band, options, segment, i == segment ? 0.0 : 1.0, NULL);
    brightest = fmin(brightest, here);
    faintest = fmax(faintest, here);
  }
  return lxg_error_set(error, LXG_NO_SOLUTION, magnitude < brightest ? "members-bright" : "members-faint",
                       "absolute %s magnitude %.4f: this family shines between %.4f and %.4f",
                       lxg_band_info(band)->name, magnitude, brightest, faintest);
}

enum lxg_status lxg_photometry_members(const struct lxg_photometry_family *family, enum lxg_band band,
                                       const struct lxg_light_options *options, double magnitude,
                                       struct lxg_photometry_member members[], size_t capacity, size_t *count,
                                       struct lxg_error *error) {
  *count = 0;
  const enum lxg_status status = check_family(family, options, error);
  if (status != LXG_OK) {
    return status;
  }
  if (!isfinite(magnitude)) {
    return lxg_error_set(error, LXG_INPUT, "members-magnitude", "absolute magnitude = %g: a finite number",
                         magnitude);
  }
  for (size_t segment = 0; segment + 1 < family->count; segment++) {
    double fraction[2] = {0.0, 0.0};
    enum lxg_light light[2] = {options->light, options->light};
    const size_t found = segment_roots(family, band, options, magnitude, segment, fraction, light);
    for (size_t i = 0; i < found; i++) {
      if (*count == capacity) {
        return lxg_error_set(error, LXG_LIMIT, "members-capacity",
                             "more than %zu members have the magnitude %.4f", capacity, magnitude);
      }
      const struct place place = place_at(family, segment, fraction[i]);
      members[*count] =
          (struct lxg_photometry_member){.segment = segment,
                                         .fraction = fraction[i],
                                         .temperature = place.temperature,
                                         .radius = place.radius,
                                         .luminosity = lxg_photometry_stefan(place.temperature, place.radius),
                                         .served = light[i]};
      (*count)++;
    }
  }
  return *count > 0 ? LXG_OK : none_found(family, band, options, magnitude, error);
}
