/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * units.c - the closed table of units, its spellings and factors (see units.h).
 *
 * Factors follow from constants.h (CODATA 2018, IAU 2012 B2, IAU 2015 B2 and B3) and from the definitions of the units.
 * Table spellings are those of the generic grammar that ECSV readers use: `solMass / yr`, `erg / (s cm2)`.
 */
#include "luxgale/units.h"

#include "luxgale/constants.h"
#include "luxgale/text.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

#define AU 1.495978707e13                  /* [cm], exact (IAU 2012 B2) */
#define ARCSEC (LXG_PI / (180.0 * 3600.0)) /* [radian] */
#define ANGSTROM 1e-8                      /* [cm] */
#define JANSKY 1e-23                       /* [erg s^-1 cm^-2 Hz^-1] */
#define MSUN LXG_SOLAR_MASS
#define LSUN LXG_SOLAR_LUMINOSITY

enum { SPELLING_SIZE = 64 }; /* longest spelling that is looked at */

static const struct lxg_unit table[] = {
    {LXG_DIMENSION_NONE, 1.0, "", "", "1|dimensionless"},
    {LXG_DIMENSION_TEMPERATURE, 1.0, "K", "K", "kelvin|Kelvin"},
    {LXG_DIMENSION_LUMINOSITY, 1.0, "erg/s", "erg / s", "erg s-1|erg s^-1|erg s**-1|ergs/s|erg/sec"},
    {LXG_DIMENSION_LUMINOSITY, LSUN, "Lsun", "solLum", "L_sun|lsun|Lsol"},
    {LXG_DIMENSION_LUMINOSITY, 0.0, "Ledd", "", "L_Edd|LEdd|L_edd"},
    {LXG_DIMENSION_LUMINOSITY, 1e7, "W", "W", "watt"},
    {LXG_DIMENSION_LENGTH, 1.0, "cm", "cm", ""},
    {LXG_DIMENSION_LENGTH, 1e2, "m", "m", ""},
    {LXG_DIMENSION_LENGTH, LXG_KM, "km", "km", ""},
    {LXG_DIMENSION_LENGTH, LXG_SOLAR_RADIUS, "Rsun", "solRad", "R_sun|rsun|Rsol"},
    {LXG_DIMENSION_LENGTH, AU, "AU", "AU", "au"},
    {LXG_DIMENSION_LENGTH, LXG_PARSEC, "pc", "pc", "parsec"},
    {LXG_DIMENSION_LENGTH, 1e3 * LXG_PARSEC, "kpc", "kpc", ""},
    {LXG_DIMENSION_LENGTH, 1e6 * LXG_PARSEC, "Mpc", "Mpc", ""},
    {LXG_DIMENSION_SPEED, LXG_KM, "km/s", "km / s", "km s-1|km s^-1|km s**-1|km/sec|kms"},
    {LXG_DIMENSION_SPEED, 1.0, "cm/s", "cm / s", "cm s-1|cm s^-1|cm s**-1|cm/sec"},
    {LXG_DIMENSION_SPEED, 1e2, "m/s", "m / s", "m s-1|m s^-1|m s**-1|m/sec"},
    {LXG_DIMENSION_MASS, MSUN, "Msun", "solMass", "M_sun|msun|Msol"},
    {LXG_DIMENSION_MASS, 1.0, "g", "g", "gram|grams"},
    {LXG_DIMENSION_MASS, 1e3, "kg", "kg", ""},
    {LXG_DIMENSION_MASS_RATE, MSUN / LXG_YEAR, "Msun/yr", "solMass / yr",
     "Msun yr-1|Msun yr^-1|Msun/year|solMass yr-1|M_sun/yr"},
    {LXG_DIMENSION_MASS_RATE, MSUN / LXG_DAY, "Msun/d", "solMass / d",
     "Msun d-1|Msun d^-1|Msun/day|solMass d-1"},
    {LXG_DIMENSION_MASS_RATE, 1.0, "g/s", "g / s", "g s-1|g s^-1|g s**-1|g/sec"},
    {LXG_DIMENSION_TIME, LXG_DAY, "d", "d", "day|days"},
    {LXG_DIMENSION_TIME, 1.0, "s", "s", "sec|second|seconds"},
    {LXG_DIMENSION_TIME, 60.0, "min", "min", "minute|minutes"},
    {LXG_DIMENSION_TIME, 3600.0, "h", "h", "hr|hour|hours"},
    {LXG_DIMENSION_TIME, LXG_YEAR, "yr", "yr", "year|years|a"},
    {LXG_DIMENSION_WAVELENGTH, ANGSTROM, "Angstrom", "Angstrom",
     "angstrom|Angstroms|angstroms|AA|A|\xC3\x85"},
    {LXG_DIMENSION_WAVELENGTH, 1e-7, "nm", "nm", "nanometer|nanometre"},
    {LXG_DIMENSION_WAVELENGTH, 1e-4, "um", "um", "micron|microns|\xC2\xB5m|\xCE\xBCm"},
    {LXG_DIMENSION_WAVELENGTH, 0.1, "mm", "mm", ""},
    {LXG_DIMENSION_WAVELENGTH, 1.0, "cm", "cm", ""},
    {LXG_DIMENSION_FREQUENCY, 1.0, "Hz", "Hz", "hertz"},
    {LXG_DIMENSION_FREQUENCY, 1e6, "MHz", "MHz", ""},
    {LXG_DIMENSION_FREQUENCY, 1e9, "GHz", "GHz", ""},
    {LXG_DIMENSION_FLUX_DENSITY, JANSKY, "Jy", "Jy", "jansky"},
    {LXG_DIMENSION_FLUX_DENSITY, 1e-3 * JANSKY, "mJy", "mJy", ""},
    {LXG_DIMENSION_FLUX_DENSITY, 1e-6 * JANSKY, "uJy", "uJy", ""},
    {LXG_DIMENSION_FLUX_DENSITY, 1.0, "erg/s/cm2/Hz", "erg / (s cm2 Hz)",
     "erg/(s cm2 Hz)|erg s-1 cm-2 Hz-1|erg s^-1 cm^-2 Hz^-1|erg/cm2/s/Hz"},
    {LXG_DIMENSION_LINE_FLUX, 1.0, "erg/s/cm2", "erg / (s cm2)",
     "erg/s/cm^2|erg/cm2/s|erg/cm^2/s|erg/(s cm2)|erg/(cm2 s)|erg s-1 cm-2|erg s^-1 cm^-2|erg cm-2 s-1|erg "
     "cm^-2 s^-1"},
    {LXG_DIMENSION_LINE_FLUX, 1e3, "W/m2", "W / m2", "W m-2|W m^-2|W/m^2"},
    {LXG_DIMENSION_PRESSURE, 1.0, "dyn/cm2", "dyn / cm2",
     "dyn cm-2|dyn cm^-2|dyn/cm^2|dyne/cm2|dyne/cm^2|erg/cm3|erg/cm^3"},
    {LXG_DIMENSION_DENSITY, 1.0, "g/cm3", "g / cm3", "g/cm^3|g cm-3|g cm^-3|g cm**-3"},
    {LXG_DIMENSION_ENERGY, 1.0, "erg", "erg", "ergs"},
    {LXG_DIMENSION_ENERGY, 1e7, "J", "J", "joule"},
    {LXG_DIMENSION_MOMENTUM, 1.0, "g cm/s", "g cm / s", "g cm s-1|g cm s^-1"},
    {LXG_DIMENSION_ACCELERATION, 1.0, "cm/s2", "cm / s2", "cm/s^2|cm s-2|cm s^-2"},
    {LXG_DIMENSION_OPACITY, 1.0, "cm2/g", "cm2 / g", "cm^2/g|cm2 g-1|cm^2 g^-1|cm**2/g"},
    {LXG_DIMENSION_SPECIFIC_ENERGY, 1.0, "erg/g", "erg / g", "erg g-1|erg g^-1"},
    {LXG_DIMENSION_SPECIFIC_RATE, 1.0, "erg/g/s", "erg / (g s)",
     "erg/s/g|erg/(g s)|erg/(s g)|erg g-1 s-1|erg g^-1 s^-1|erg s-1 g-1"},
    {LXG_DIMENSION_MAGNITUDE, 1.0, "mag", "mag", "mags|magnitude|magnitudes"},
    {LXG_DIMENSION_ANGLE, ARCSEC, "arcsec", "arcsec", "as"},
    {LXG_DIMENSION_ANGLE, 1e-3 * ARCSEC, "mas", "mas", ""},
    {LXG_DIMENSION_ANGLE, LXG_PI / 180.0, "deg", "deg", "degree|degrees"},
    {LXG_DIMENSION_COLUMN, 1.0, "cm^-2", "1 / cm2", "cm-2|cm**-2|1/cm2|1/cm^2"},
    {LXG_DIMENSION_NUMBER_DENSITY, 1.0, "cm^-3", "1 / cm3", "cm-3|cm**-3|1/cm3|1/cm^3"},
};

enum { ROWS = sizeof table / sizeof table[0] };

static const char *const dimension_names[] = {
#define DIMENSION_NAME(name, text, unit) text,
    LXG_DIMENSION_LIST(DIMENSION_NAME)
#undef DIMENSION_NAME
};

static const char *const dimension_units[] = {
#define DIMENSION_UNIT(name, text, unit) unit,
    LXG_DIMENSION_LIST(DIMENSION_UNIT)
#undef DIMENSION_UNIT
};

size_t lxg_units_count(void) {
  return ROWS;
}

const struct lxg_unit *lxg_units_row(size_t index) {
  return index < ROWS ? &table[index] : NULL;
}

const char *lxg_units_dimension(enum lxg_dimension dimension) {
  return (size_t)dimension < LXG_DIMENSION_COUNT ? dimension_names[dimension] : "unknown dimension";
}

const char *lxg_units_default(enum lxg_dimension dimension) {
  return (size_t)dimension < LXG_DIMENSION_COUNT ? dimension_units[dimension] : "";
}

void lxg_units_allowed(enum lxg_dimension dimension, char *text, size_t size) {
  size_t used = 0;
  if (size > 0) {
    text[0] = '\0';
  }
  for (size_t i = 0; i < ROWS && used < size; i++) {
    if (table[i].dimension == dimension) {
      const char *const name = table[i].name[0] == '\0' ? "no unit" : table[i].name;
      const int written = snprintf(text + used, size - used, "%s%s", used > 0 ? ", " : "", name);
      used += (size_t)written;
    }
  }
}

/* Blanks become one, and none stay at the ends, beside '/' and inside brackets. False if the result is too long. */
static bool normalise(const char *spelling, char text[SPELLING_SIZE]) {
  size_t used = 0;
  bool blank = false;
  for (const char *at = spelling; *at != '\0'; at++) {
    if (*at == ' ' || *at == '\t') {
      blank = used > 0;
      continue;
    }
    const bool tight =
        used > 0 && (*at == '/' || *at == ')' || text[used - 1] == '/' || text[used - 1] == '(');
    if (used + 2 >= SPELLING_SIZE) {
      return false;
    }
    if (blank && !tight) {
      text[used++] = ' ';
    }
    blank = false;
    text[used++] = *at;
  }
  text[used] = '\0';
  return true;
}

static bool row_has(const struct lxg_unit *unit, const char *text) {
  char other[SPELLING_SIZE];
  if (strcmp(unit->name, text) == 0 || (normalise(unit->table, other) && strcmp(other, text) == 0)) {
    return text[0] != '\0' || unit->dimension == LXG_DIMENSION_NONE;
  }
  const size_t size = strlen(text);
  for (const char *at = unit->aliases; *at != '\0';) {
    const size_t length = strcspn(at, "|");
    if (length == size && memcmp(at, text, size) == 0) {
      return size > 0;
    }
    at += length + (at[length] == '|' ? 1 : 0);
  }
  return false;
}

/* Row of a normalised spelling; `any` looks through all dimensions. */
static const struct lxg_unit *row_of(const char *text, enum lxg_dimension dimension, bool any) {
  for (size_t i = 0; i < ROWS; i++) {
    if ((any || table[i].dimension == dimension) && row_has(&table[i], text)) {
      return &table[i];
    }
  }
  return NULL;
}

static enum lxg_status unknown_unit(const char *spelling, enum lxg_dimension dimension,
                                    struct lxg_error *error) {
  const char *names[ROWS];
  size_t count = 0;
  for (size_t i = 0; i < ROWS; i++) {
    if (table[i].dimension == dimension && table[i].name[0] != '\0') {
      names[count++] = table[i].name;
    }
  }
  const char *const nearest = lxg_text_nearest(spelling, names, count);
  char allowed[160];
  lxg_units_allowed(dimension, allowed, sizeof allowed);
  return lxg_error_set(error, LXG_INPUT, "unit-unknown", "unit = %.40s: unknown%s%s%s; units of a %s: %s",
                       spelling, nearest != NULL ? ", did you mean " : "", nearest != NULL ? nearest : "",
                       nearest != NULL ? "?" : "", lxg_units_dimension(dimension), allowed);
}

enum lxg_status lxg_units_find(const char *spelling, enum lxg_dimension dimension,
                               const struct lxg_unit **unit, struct lxg_error *error) {
  char text[SPELLING_SIZE];
  *unit = NULL;
  if (!normalise(spelling, text)) {
    return unknown_unit(spelling, dimension, error);
  }
  *unit = row_of(text, dimension, false);
  if (*unit != NULL) {
    return LXG_OK;
  }
  const struct lxg_unit *const other = row_of(text, dimension, true);
  if (other == NULL) {
    return unknown_unit(text, dimension, error);
  }
  char allowed[160];
  lxg_units_allowed(dimension, allowed, sizeof allowed);
  return lxg_error_set(error, LXG_INPUT, "unit-dimension", "unit = %s: that is a %s, but a %s is due: %s",
                       text[0] == '\0' ? "none" : text, lxg_units_dimension(other->dimension),
                       lxg_units_dimension(dimension), allowed);
}

enum lxg_status lxg_units_factor(const char *spelling, enum lxg_dimension dimension,
                                 const struct lxg_units_context *context, double *factor,
                                 struct lxg_error *error) {
  const struct lxg_unit *unit = NULL;
  const enum lxg_status status = lxg_units_find(spelling, dimension, &unit, error);
  if (status != LXG_OK) {
    return status;
  }
  if (unit->factor > 0.0) {
    *factor = unit->factor;
    return LXG_OK;
  }
  if (context == NULL || !(context->eddington_luminosity > 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "unit-eddington",
                         "unit = Ledd: needs the mass and composition of the star, which are not known here; "
                         "give erg/s or Lsun");
  }
  *factor = context->eddington_luminosity;
  return LXG_OK;
}

enum lxg_status lxg_units_parse_quantity(const char *text, enum lxg_dimension dimension,
                                         const char *default_unit, const struct lxg_units_context *context,
                                         double *cgs, struct lxg_error *error) {
  const char *const start = text + strspn(text, " \t");
  const size_t length = strcspn(start, " \t");
  double number = 0.0;
  const enum lxg_text_parse parsed = lxg_text_parse_number(start, length, false, &number);
  if (parsed != LXG_TEXT_NUMBER) {
    return lxg_error_set(error, LXG_INPUT, "quantity-number",
                         "\"%.60s\": %s; write \"VALUE UNIT\", e.g. \"1.5 %s\"", text,
                         parsed == LXG_TEXT_OVERFLOW     ? "the number is too large"
                         : parsed == LXG_TEXT_NOT_FINITE ? "the number must be finite"
                                                         : "does not begin with a decimal number and a blank",
                         lxg_units_default(dimension));
  }
  const char *unit = start + length + strspn(start + length, " \t");
  if (*unit == '\0') {
    unit = default_unit != NULL ? default_unit : lxg_units_default(dimension);
  }
  double factor = 0.0;
  const enum lxg_status status = lxg_units_factor(unit, dimension, context, &factor, error);
  if (status != LXG_OK) {
    return status;
  }
  const double value = number * factor;
  if (!isfinite(value) || (value == 0.0 && number != 0.0)) {
    return lxg_error_set(error, LXG_INPUT, "quantity-range", "\"%.60s\": too %s for a double in CGS units",
                         text, value == 0.0 ? "small" : "large");
  }
  *cgs = value;
  return LXG_OK;
}

enum lxg_status lxg_units_from_cgs(double cgs, const char *spelling, enum lxg_dimension dimension,
                                   const struct lxg_units_context *context, double *value,
                                   struct lxg_error *error) {
  double factor = 0.0;
  const enum lxg_status status = lxg_units_factor(spelling, dimension, context, &factor, error);
  if (status == LXG_OK) {
    *value = cgs / factor;
  }
  return status;
}

const char *lxg_units_table_spelling(const char *spelling) {
  char text[SPELLING_SIZE];
  const struct lxg_unit *const unit =
      normalise(spelling, text) ? row_of(text, LXG_DIMENSION_NONE, true) : NULL;
  if (unit == NULL || (unit->table[0] == '\0' && unit->dimension != LXG_DIMENSION_NONE)) {
    return NULL;
  }
  return unit->table;
}
