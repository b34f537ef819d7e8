/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * members.c - all members of a family of winds that have a given absolute magnitude.
 *
 * Each segment between neighbouring nodes is searched for each component of the light by itself (photosphere,
 * free-free): the brighter of two monotonic lights need not be monotonic, each of them is. A root of a component counts
 * for LARGER when the other component is not brighter there. Magnitudes are nearly straight in the fraction of a segment, so the
 * Illinois form of regula falsi needs five or six evaluations. A node that is hit exactly belongs to the segment after it
 * (the last node to the last segment).
 */
#include "luxgale/memory.h"
#include "luxgale/photometry.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

static const double fraction_tolerance = 1e-13; /* of the place in a segment */
enum { ROOT_STEPS = 100 };

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
  const bool own = light == LXG_LIGHT_WHOLE || !(options->gas_temperature > 0.0);
  gas.temperature = own ? place->temperature : options->gas_temperature;
  const struct lxg_freefree_wind wind = {
      .mass_loss_rate = place->mass_loss_rate, .speed = place->speed, .radius = place->radius};
  const double frequency = lxg_band_frequency(band);
  return lxg_photometry_magnitude(band, light == LXG_LIGHT_WHOLE
                                            ? lxg_freefree_wind_whole(&gas, &wind, frequency)
                                            : lxg_freefree_wind_thin(&gas, &wind, frequency));
}

double lxg_photometry_member_magnitude(const struct lxg_photometry_search *search, size_t segment,
                                       double fraction, enum lxg_light *served) {
  const struct place place = place_at(&search->family, segment, fraction);
  double magnitude = component(&place, search->band, &search->options, search->light[0]);
  enum lxg_light light = search->light[0];
  if (search->lights == 2) {
    const double other = component(&place, search->band, &search->options, search->light[1]);
    if (other < magnitude) {
      magnitude = other;
      light = search->light[1];
    }
  }
  if (served != NULL) {
    *served = light;
  }
  return magnitude;
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

static void fill(struct lxg_photometry_search *search) {
  const size_t count = search->family.count;
  search->brightest = INFINITY;
  search->faintest = -INFINITY;
  for (size_t i = 0; i < count; i++) {
    const size_t segment = i + 1 < count ? i : i - 1;
    const struct place place = place_at(&search->family, segment, i == segment ? 0.0 : 1.0);
    double here = INFINITY;
    for (size_t k = 0; k < search->lights; k++) {
      search->magnitude[k][i] = component(&place, search->band, &search->options, search->light[k]);
      here = fmin(here, search->magnitude[k][i]);
    }
    search->brightest = fmin(search->brightest, here);
    search->faintest = fmax(search->faintest, here);
  }
}

enum lxg_status lxg_photometry_search_init(const struct lxg_photometry_family *family, enum lxg_band band,
                                           const struct lxg_light_options *options,
                                           struct lxg_photometry_search *search, struct lxg_error *error) {
  memset(search, 0, sizeof *search);
  const enum lxg_status status = check_family(family, options, error);
  if (status != LXG_OK) {
    return status;
  }
  search->family = *family;
  search->band = band;
  search->options = *options;
  search->lights = options->light == LXG_LIGHT_LARGER ? 2 : 1;
  search->light[0] = options->light == LXG_LIGHT_LARGER ? LXG_LIGHT_PHOTOSPHERE : options->light;
  search->light[1] = LXG_LIGHT_FREEFREE;
  for (size_t k = 0; k < search->lights; k++) {
    search->magnitude[k] = lxg_alloc(family->count, sizeof(double));
    if (search->magnitude[k] == NULL) {
      return lxg_error_set(error, LXG_MEMORY, "members-memory", "no memory for %zu members", family->count);
    }
  }
  fill(search);
  return LXG_OK;
}

void lxg_photometry_search_free(struct lxg_photometry_search *search) {
  if (search != NULL) {
    lxg_free(search->magnitude[0]);
    lxg_free(search->magnitude[1]);
    memset(search, 0, sizeof *search);
  }
}

/* Root of light k in a segment; false when there is none. */
static bool root_in(const struct lxg_photometry_search *search, size_t k, double magnitude, size_t segment,
                    double *fraction) {
  double at_low = search->magnitude[k][segment] - magnitude;
  double at_high = search->magnitude[k][segment + 1] - magnitude;
  const bool final = segment + 2 == search->family.count;
  if (at_low == 0.0 || (at_high == 0.0 && final)) {
    *fraction = at_low == 0.0 ? 0.0 : 1.0;
    return true;
  }
  if (!(at_low * at_high < 0.0)) {
    return false;
  }
  double low = 0.0;
  double high = 1.0;
  int side = 0; /* which end stayed last time: its value is halved when it stays again */
  for (int i = 0; i < ROOT_STEPS && high - low > fraction_tolerance; i++) {
    const double middle = (low * at_high - high * at_low) / (at_high - at_low);
    const struct place place = place_at(&search->family, segment, middle);
    const double here = component(&place, search->band, &search->options, search->light[k]) - magnitude;
    *fraction = middle;
    if (fabs(here) < fraction_tolerance) {
      return true;
    }
    if (here * at_low < 0.0) {
      high = middle;
      at_high = here;
      at_low *= side == 1 ? 0.5 : 1.0;
      side = 1;
    } else {
      low = middle;
      at_low = here;
      at_high *= side == -1 ? 0.5 : 1.0;
      side = -1;
    }
  }
  return true;
}

/* Roots of a segment in rising order, at most two. */
static size_t segment_roots(const struct lxg_photometry_search *search, double magnitude, size_t segment,
                            double fraction[2], enum lxg_light light[2]) {
  size_t found = 0;
  for (size_t k = 0; k < search->lights; k++) {
    double at = 0.0;
    if (!root_in(search, k, magnitude, segment, &at)) {
      continue;
    }
    bool shines = true;
    if (search->lights == 2) {
      const struct place place = place_at(&search->family, segment, at);
      const double other = component(&place, search->band, &search->options, search->light[1 - k]);
      shines = other > magnitude || (other == magnitude && k == 0);
    }
    if (shines) {
      fraction[found] = at;
      light[found] = search->light[k];
      found++;
    }
  }
  if (found == 2 && fraction[1] < fraction[0]) {
    const double at = fraction[0];
    const enum lxg_light which = light[0];
    fraction[0] = fraction[1];
    light[0] = light[1];
    fraction[1] = at;
    light[1] = which;
  }
  return found;
}

enum lxg_status lxg_photometry_members(const struct lxg_photometry_search *search, double magnitude,
                                       struct lxg_photometry_member members[], size_t capacity, size_t *count,
                                       struct lxg_error *error) {
  *count = 0;
  if (!isfinite(magnitude)) {
    return lxg_error_set(error, LXG_INPUT, "members-magnitude", "absolute magnitude = %g: a finite number",
                         magnitude);
  }
  for (size_t segment = 0; segment + 1 < search->family.count; segment++) {
    double fraction[2] = {0.0, 0.0};
    enum lxg_light light[2] = {search->light[0], search->light[0]};
    const size_t found = segment_roots(search, magnitude, segment, fraction, light);
    for (size_t i = 0; i < found; i++) {
      if (*count == capacity) {
        return lxg_error_set(error, LXG_LIMIT, "members-capacity",
                             "more than %zu members have the magnitude %.4f", capacity, magnitude);
      }
      const struct place place = place_at(&search->family, segment, fraction[i]);
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
  if (*count > 0) {
    return LXG_OK;
  }
  return lxg_error_set(error, LXG_NO_SOLUTION,
                       magnitude < search->brightest ? "members-bright" : "members-faint",
                       "absolute %s magnitude %.4f: this family shines between %.4f and %.4f",
                       lxg_band_info(search->band)->name, magnitude, search->brightest, search->faintest);
}
