/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * members.c - all members of a family of winds that have a given absolute magnitude.
 *
 * Each component of the light is searched by itself (photosphere, free-free): the brighter of two monotonic lights need not
 * be monotonic, each of them is. A component's magnitudes are cut into runs that only rise or only fall, so that a run is
 * searched by halving; in the segment so found the root is sought. It counts for LARGER when the other component is not
 * brighter there. Magnitudes are nearly straight in the fraction of a segment, so the
 * Illinois form of regula falsi needs five or six evaluations. A node that is hit exactly belongs to the segment after it
 * (the last node to the last segment).
 */
#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "luxgale/photometry.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

static const double fraction_tolerance = 1e-13;  /* of the place in a segment */
static const double magnitude_tolerance = 1e-11; /* [mag] */
enum { ROOT_STEPS = 100, TEMPERATURE = 0, RADIUS, MASS_LOSS_RATE, SPEED, QUANTITIES };

struct place {
  double temperature, radius, mass_loss_rate, speed;
};

static double between(const double ln_values[], size_t segment, double fraction) {
  return exp(ln_values[segment] + fraction * (ln_values[segment + 1] - ln_values[segment]));
}

static struct place place_at(const struct lxg_photometry_search *search, size_t segment, double fraction) {
  struct place place = {.temperature = between(search->ln_quantity[TEMPERATURE], segment, fraction),
                        .radius = between(search->ln_quantity[RADIUS], segment, fraction)};
  if (search->options.light != LXG_LIGHT_PHOTOSPHERE) {
    place.mass_loss_rate = between(search->ln_quantity[MASS_LOSS_RATE], segment, fraction);
    place.speed = between(search->ln_quantity[SPEED], segment, fraction);
  }
  return place;
}

/* Black-body magnitude, offset + 2.5 log10(exp(theta/T) - 1) - 5 log10 R: (P1) with as few logarithms as it takes. */
static double photosphere(const struct lxg_photometry_search *search, size_t segment, double fraction) {
  const double *ln_t = search->ln_quantity[TEMPERATURE] + segment;
  const double *ln_r = search->ln_quantity[RADIUS] + segment;
  const double x = search->theta * exp(-(ln_t[0] + fraction * (ln_t[1] - ln_t[0])));
  const double ln_radius = ln_r[0] + fraction * (ln_r[1] - ln_r[0]);
  return search->offset + 2.5 / LXG_LN10 * (log(expm1(x)) - 2.0 * ln_radius);
}

/* Absolute magnitude of one component at a place. */
static double component(const struct lxg_photometry_search *search, enum lxg_light light, size_t segment,
                        double fraction) {
  if (light == LXG_LIGHT_PHOTOSPHERE) {
    return photosphere(search, segment, fraction);
  }
  const struct place place = place_at(search, segment, fraction);
  const struct lxg_light_options *options = &search->options;
  struct lxg_freefree_gas gas = options->gas;
  const bool own = light == LXG_LIGHT_WHOLE || !(options->gas_temperature > 0.0);
  gas.temperature = own ? place.temperature : options->gas_temperature;
  const struct lxg_freefree_wind wind = {
      .mass_loss_rate = place.mass_loss_rate, .speed = place.speed, .radius = place.radius};
  const double frequency = lxg_band_frequency(search->band);
  return lxg_photometry_magnitude(search->band, light == LXG_LIGHT_WHOLE
                                                    ? lxg_freefree_wind_whole(&gas, &wind, frequency)
                                                    : lxg_freefree_wind_thin(&gas, &wind, frequency));
}

double lxg_photometry_member_magnitude(const struct lxg_photometry_search *search, size_t segment,
                                       double fraction, enum lxg_light *served) {
  double magnitude = component(search, search->light[0], segment, fraction);
  enum lxg_light light = search->light[0];
  if (search->lights == 2) {
    const double other = component(search, search->light[1], segment, fraction);
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

/* Cuts a light into runs: a member at which its slope changes sign ends one and begins the next. */
static void find_runs(const double magnitude[], size_t count, size_t run[], size_t *runs) {
  double direction = 0.0;
  size_t found = 0;
  run[0] = 0;
  for (size_t i = 1; i < count; i++) {
    const double step = magnitude[i] - magnitude[i - 1];
    if (step * direction < 0.0) {
      run[++found] = i - 1;
    }
    direction = step != 0.0 ? step : direction;
  }
  run[++found] = count - 1;
  *runs = found;
}

static void fill(struct lxg_photometry_search *search) {
  const size_t count = search->count;
  search->brightest = INFINITY;
  search->faintest = -INFINITY;
  for (size_t i = 0; i < count; i++) {
    const size_t segment = i + 1 < count ? i : i - 1;
    const double fraction = i == segment ? 0.0 : 1.0;
    double here = INFINITY;
    for (size_t k = 0; k < search->lights; k++) {
      search->magnitude[k][i] = component(search, search->light[k], segment, fraction);
      here = fmin(here, search->magnitude[k][i]);
    }
    search->brightest = fmin(search->brightest, here);
    search->faintest = fmax(search->faintest, here);
  }
  for (size_t k = 0; k < search->lights; k++) {
    find_runs(search->magnitude[k], count, search->run[k], &search->runs[k]);
  }
}

/* Memory of a search, filled with logarithms; false when some is missing. */
static bool allocate(const struct lxg_photometry_family *family, struct lxg_photometry_search *search) {
  const double *const values[QUANTITIES] = {family->temperature, family->radius, family->mass_loss_rate,
                                            family->speed};
  const size_t quantities = search->options.light == LXG_LIGHT_PHOTOSPHERE ? MASS_LOSS_RATE : QUANTITIES;
  for (size_t q = 0; q < quantities; q++) {
    search->ln_quantity[q] = lxg_alloc(family->count, sizeof(double));
    for (size_t i = 0; search->ln_quantity[q] != NULL && i < family->count; i++) {
      search->ln_quantity[q][i] = log(values[q][i]);
    }
    if (search->ln_quantity[q] == NULL) {
      return false;
    }
  }
  for (size_t k = 0; k < search->lights; k++) {
    search->magnitude[k] = lxg_alloc(family->count, sizeof(double));
    search->run[k] = lxg_alloc(family->count + 1, sizeof(size_t));
    if (search->magnitude[k] == NULL || search->run[k] == NULL) {
      return false;
    }
  }
  return true;
}

enum lxg_status lxg_photometry_search_init(const struct lxg_photometry_family *family, enum lxg_band band,
                                           const struct lxg_light_options *options,
                                           struct lxg_photometry_search *search, struct lxg_error *error) {
  memset(search, 0, sizeof *search);
  const enum lxg_status status = check_family(family, options, error);
  if (status != LXG_OK) {
    return status;
  }
  search->count = family->count;
  search->band = band;
  search->theta = LXG_PLANCK * lxg_band_frequency(band) / LXG_BOLTZMANN;
  search->offset = lxg_photometry_blackbody(band, search->theta / log(2.0), 1.0);
  search->options = *options;
  search->lights = options->light == LXG_LIGHT_LARGER ? 2 : 1;
  search->light[0] = options->light == LXG_LIGHT_LARGER ? LXG_LIGHT_PHOTOSPHERE : options->light;
  search->light[1] = LXG_LIGHT_FREEFREE;
  if (!allocate(family, search)) {
    return lxg_error_set(error, LXG_MEMORY, "members-memory", "no memory for %zu members", family->count);
  }
  fill(search);
  return LXG_OK;
}

void lxg_photometry_search_free(struct lxg_photometry_search *search) {
  if (search != NULL) {
    for (size_t k = 0; k < 2; k++) {
      lxg_free(search->magnitude[k]);
      lxg_free(search->run[k]);
    }
    for (size_t q = 0; q < QUANTITIES; q++) {
      lxg_free(search->ln_quantity[q]);
    }
    memset(search, 0, sizeof *search);
  }
}

/* Root of light k in a segment; false when there is none. */
static bool root_in(const struct lxg_photometry_search *search, size_t k, double magnitude, size_t segment,
                    double *fraction) {
  double at_low = search->magnitude[k][segment] - magnitude;
  double at_high = search->magnitude[k][segment + 1] - magnitude;
  const bool final = segment + 2 == search->count;
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
    const double here = component(search, search->light[k], segment, middle) - magnitude;
    *fraction = middle;
    if (fabs(here) < magnitude_tolerance) {
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

/* The segment of a run that may hold the magnitude: the last that begins at or before it; false outside the run. */
static bool segment_in(const double values[], size_t first, size_t last, double magnitude, size_t *segment) {
  const double sign = values[last] >= values[first] ? 1.0 : -1.0;
  if (sign * (magnitude - values[first]) < 0.0 || sign * (values[last] - magnitude) < 0.0) {
    return false;
  }
  size_t low = first;
  size_t high = last;
  while (high - low > 1) {
    const size_t middle = low + (high - low) / 2;
    if (sign * (magnitude - values[middle]) >= 0.0) {
      low = middle;
    } else {
      high = middle;
    }
  }
  *segment = low;
  return true;
}

/* True if light k, whose magnitude is met at a place, is the one that shines there. */
static bool shines(const struct lxg_photometry_search *search, size_t k, double magnitude, size_t segment,
                   double fraction) {
  if (search->lights == 1) {
    return true;
  }
  const double other = component(search, search->light[1 - k], segment, fraction);
  return other > magnitude || (other == magnitude && k == 0);
}

/* Puts a member into its place in the order of the family. */
static void insert(const struct lxg_photometry_search *search, size_t k, size_t segment, double fraction,
                   struct lxg_photometry_member members[], size_t count) {
  size_t i = count;
  while (i > 0 && (members[i - 1].segment > segment ||
                   (members[i - 1].segment == segment && members[i - 1].fraction > fraction))) {
    members[i] = members[i - 1];
    i--;
  }
  const struct place place = place_at(search, segment, fraction);
  members[i] =
      (struct lxg_photometry_member){.segment = segment,
                                     .fraction = fraction,
                                     .temperature = place.temperature,
                                     .radius = place.radius,
                                     .luminosity = lxg_photometry_stefan(place.temperature, place.radius),
                                     .served = search->light[k]};
}

static enum lxg_status none(const struct lxg_photometry_search *search, double magnitude,
                            struct lxg_error *error) {
  return lxg_error_set(error, LXG_NO_SOLUTION,
                       magnitude < search->brightest ? "members-bright" : "members-faint",
                       "absolute %s magnitude %.4f: this family shines between %.4f and %.4f",
                       lxg_band_info(search->band)->name, magnitude, search->brightest, search->faintest);
}

enum lxg_status lxg_photometry_members(const struct lxg_photometry_search *search, double magnitude,
                                       struct lxg_photometry_member members[], size_t capacity, size_t *count,
                                       struct lxg_error *error) {
  *count = 0;
  if (!isfinite(magnitude)) {
    return lxg_error_set(error, LXG_INPUT, "members-magnitude", "absolute magnitude = %g: a finite number",
                         magnitude);
  }
  for (size_t k = 0; k < search->lights; k++) {
    for (size_t r = 0; r < search->runs[k]; r++) {
      size_t segment = 0;
      double fraction = 0.0;
      if (!segment_in(search->magnitude[k], search->run[k][r], search->run[k][r + 1], magnitude, &segment) ||
          !root_in(search, k, magnitude, segment, &fraction) ||
          !shines(search, k, magnitude, segment, fraction)) {
        continue;
      }
      if (*count == capacity) {
        return lxg_error_set(error, LXG_LIMIT, "members-capacity",
                             "more than %zu members have the magnitude %.4f", capacity, magnitude);
      }
      insert(search, k, segment, fraction, members, *count);
      (*count)++;
    }
  }
  return *count > 0 ? LXG_OK : none(search, magnitude, error);
}

size_t lxg_photometry_nearest(const struct lxg_photometry_member members[], size_t count, double place) {
  size_t best = 0;
  double least = INFINITY;
  for (size_t i = 0; i < count; i++) {
    const double away = fabs((double)members[i].segment + members[i].fraction - place);
    if (away < least) {
      least = away;
      best = i;
    }
  }
  return best;
}
