/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bands.c - the bands: effective wavelengths, widths, zero fluxes (sources in photometry.h).
 */
#include "luxgale/constants.h"
#include "luxgale/photometry.h"

#include <string.h>

#define VEGA "Bessell 1979, PASP 91, 589 (wavelength, width: from memory)"
#define NEAR_IR "Campins, Rieke & Lebofsky 1985, AJ 90, 896 (wavelength, width: from memory)"
#define NARROW_UV "AB zero flux; band: Cassatella et al. 2002, A&A 384, 1023 (from memory)"

static const struct lxg_band_info bands[LXG_BAND_COUNT] = {
    [LXG_BAND_U] = {"U", 0.36e-4, 0.15, 1810.0, VEGA},
    [LXG_BAND_B] = {"B", 0.44e-4, 0.22, 4260.0, VEGA},
    [LXG_BAND_V] = {"V", 0.55e-4, 0.16, 3640.0, VEGA},
    [LXG_BAND_R] = {"R", 0.64e-4, 0.23, 3080.0, VEGA},
    [LXG_BAND_I] = {"I", 0.79e-4, 0.19, 2550.0, VEGA},
    [LXG_BAND_J] = {"J", 1.26e-4, 0.16, 1600.0, NEAR_IR},
    [LXG_BAND_H] = {"H", 1.60e-4, 0.23, 1080.0, NEAR_IR},
    [LXG_BAND_K] = {"K", 2.22e-4, 0.23, 670.0, NEAR_IR},
    [LXG_BAND_UV1455] = {"uv1455", 0.1455e-4, 0.0137, 3631.0, NARROW_UV},
};

const struct lxg_band_info *lxg_band_info(enum lxg_band band) {
  return (unsigned)band < LXG_BAND_COUNT ? &bands[band] : NULL;
}

enum lxg_status lxg_band_find(const char *name, enum lxg_band *band, struct lxg_error *error) {
  for (unsigned i = 0; i < LXG_BAND_COUNT; i++) {
    if (strcmp(name, bands[i].name) == 0) {
      *band = (enum lxg_band)i;
      return LXG_OK;
    }
  }
  return lxg_error_set(error, LXG_INPUT, "band-unknown",
                       "band = '%.32s': one of U B V R I J H K uv1455, spelt so", name);
}

double lxg_band_frequency(enum lxg_band band) {
  return LXG_SPEED_OF_LIGHT / bands[band].wavelength;
}
