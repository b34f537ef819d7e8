/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * units.h - the units luxgale reads and writes, as one closed table with CGS factors.
 *
 * A unit belongs to one dimension; the same spelling may stand in two (cm is a length and a wavelength), so every
 * question names the dimension it expects. Spellings are case-sensitive; blanks around '/' do not count. The solar
 * and astronomical factors come from constants.h. An unknown unit is an error that names the nearest known one, never
 * a guess.
 */
#ifndef LUXGALE_UNITS_H
#define LUXGALE_UNITS_H

#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

/* enumerator, name for people, unit of a bare number */
#define LXG_DIMENSION_LIST(X)                                                                                \
  X(LXG_DIMENSION_NONE, "pure number", "")                                                                   \
  X(LXG_DIMENSION_TEMPERATURE, "temperature", "K")                                                           \
  X(LXG_DIMENSION_LUMINOSITY, "luminosity", "erg/s")                                                         \
  X(LXG_DIMENSION_LENGTH, "length", "cm")                                                                    \
  X(LXG_DIMENSION_SPEED, "speed", "km/s")                                                                    \
  X(LXG_DIMENSION_MASS, "mass", "Msun")                                                                      \
  X(LXG_DIMENSION_MASS_RATE, "mass rate", "Msun/yr")                                                         \
  X(LXG_DIMENSION_TIME, "time", "d")                                                                         \
  X(LXG_DIMENSION_WAVELENGTH, "wavelength", "Angstrom")                                                      \
  X(LXG_DIMENSION_FREQUENCY, "frequency", "Hz")                                                              \
  X(LXG_DIMENSION_FLUX_DENSITY, "flux density", "Jy")                                                        \
  X(LXG_DIMENSION_LINE_FLUX, "flux", "erg/s/cm2")                                                            \
  X(LXG_DIMENSION_PRESSURE, "pressure", "dyn/cm2")                                                           \
  X(LXG_DIMENSION_DENSITY, "density", "g/cm3")                                                               \
  X(LXG_DIMENSION_ENERGY, "energy", "erg")                                                                   \
  X(LXG_DIMENSION_MOMENTUM, "momentum", "g cm/s")                                                            \
  X(LXG_DIMENSION_ACCELERATION, "acceleration", "cm/s2")                                                     \
  X(LXG_DIMENSION_OPACITY, "opacity", "cm2/g")                                                               \
  X(LXG_DIMENSION_SPECIFIC_ENERGY, "energy per gram", "erg/g")                                               \
  X(LXG_DIMENSION_SPECIFIC_RATE, "energy rate per gram", "erg/g/s")                                          \
  X(LXG_DIMENSION_MAGNITUDE, "magnitude", "mag")                                                             \
  X(LXG_DIMENSION_ANGLE, "angle", "arcsec")                                                                  \
  X(LXG_DIMENSION_COLUMN, "column density", "cm^-2")                                                         \
  X(LXG_DIMENSION_NUMBER_DENSITY, "number density", "cm^-3")

enum lxg_dimension {
#define LXG_DIMENSION_ENUM(name, text, unit) name,
  LXG_DIMENSION_LIST(LXG_DIMENSION_ENUM)
#undef LXG_DIMENSION_ENUM
      LXG_DIMENSION_COUNT
};

/* What a unit may depend on. NULL in place of a context means that nothing is known. */
struct lxg_units_context {
  double eddington_luminosity; /* L_Edd [erg s^-1] behind the unit Ledd; 0 while not known */
};

/* One row of the table. CGS here means cm, g, s, K and radian; magnitudes and pure numbers are their own unit. */
struct lxg_unit {
  enum lxg_dimension dimension;
  double factor;       /* CGS value of one unit; 0 for Ledd (see context) */
  const char *name;    /* preferred spelling in cases and messages */
  const char *table;   /* spelling that readers of ECSV know; "" where they know none */
  const char *aliases; /* other accepted spellings, separated by '|' */
};

/* Rows of the table, for help texts: 0 <= index < lxg_units_count(). */
size_t lxg_units_count(void);
const struct lxg_unit *lxg_units_row(size_t index);

/* Name for people ("mass rate") and unit of a bare number ("Msun/yr") of a dimension; never NULL. */
const char *lxg_units_dimension(enum lxg_dimension dimension);
const char *lxg_units_default(enum lxg_dimension dimension);

/* Preferred spellings of a dimension joined by ", " into `text` of `size` bytes (always terminated). */
void lxg_units_allowed(enum lxg_dimension dimension, char *text, size_t size);

/* The row behind a spelling, or LXG_INPUT "unit-unknown" (nearest, allowed list) or "unit-dimension" (known unit of
 * another dimension). */
enum lxg_status lxg_units_find(const char *spelling, enum lxg_dimension dimension,
                               const struct lxg_unit **unit, struct lxg_error *error);

/* CGS value of one unit. Besides the errors of lxg_units_find: LXG_INPUT "unit-eddington" when the unit is Ledd and the
 * context holds no luminosity. */
enum lxg_status lxg_units_factor(const char *spelling, enum lxg_dimension dimension,
                                 const struct lxg_units_context *context, double *factor,
                                 struct lxg_error *error);

/* Reads "VALUE" or "VALUE UNIT" into CGS. A bare number is in `default_unit`, or in the dimension's default when that is
 * NULL. LXG_INPUT: "quantity-number" (no finite decimal number in front), "quantity-range" (overflow in CGS), and
 * the errors above. `cgs` is set only on LXG_OK. */
enum lxg_status lxg_units_parse_quantity(const char *text, enum lxg_dimension dimension,
                                         const char *default_unit, const struct lxg_units_context *context,
                                         double *cgs, struct lxg_error *error);

/* Expresses a CGS value in a named unit. Errors of lxg_units_factor. */
enum lxg_status lxg_units_from_cgs(double cgs, const char *spelling, enum lxg_dimension dimension,
                                   const struct lxg_units_context *context, double *value,
                                   struct lxg_error *error);

/* The ECSV spelling of any unit in the table, whatever its dimension; NULL if the spelling is unknown or has none. */
const char *lxg_units_table_spelling(const char *spelling);

#endif
