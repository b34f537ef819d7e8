/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lines_wavelength.c - air and vacuum wavelengths and the relativistic Doppler shift (L1, L2 of lines.h). Cannot
 * fail for positive finite wavelengths above 2000 Angstrom.
 */
#include "luxgale/constants.h"
#include "luxgale/lines.h"

#include <math.h>

enum { AIR_ITERATIONS = 20 }; /* the index changes by 1e-8 of the shift each round: three are enough */

double lxg_line_refraction(double vacuum_wavelength) {
  const double s = 1e-4 / vacuum_wavelength; /* 1 micron/lambda */
  const double s2 = s * s;
  return 1.0 + 8.34254e-5 + 2.406147e-2 / (130.0 - s2) + 1.5998e-4 / (38.9 - s2);
}

double lxg_line_vacuum(double air_wavelength) {
  double vacuum = air_wavelength;
  for (int i = 0; i < AIR_ITERATIONS; i++) {
    const double next = air_wavelength * lxg_line_refraction(vacuum);
    if (next == vacuum) {
      break;
    }
    vacuum = next;
  }
  return vacuum;
}

double lxg_line_doppler(double ratio) {
  return LXG_SPEED_OF_LIGHT * (ratio - 1.0) * (ratio + 1.0) / (ratio * ratio + 1.0);
}
