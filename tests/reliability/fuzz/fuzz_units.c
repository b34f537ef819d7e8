/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fuzz_units.c - quantities and unit strings (units.h): the first byte picks the dimension, the rest is the text.
 */
#include "fuzz.h"
#include "luxgale/units.h"

#include <math.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
  if (size == 0) {
    return 0;
  }
  const enum lxg_dimension dimension = (enum lxg_dimension)(data[0] % LXG_DIMENSION_COUNT);
  const struct lxg_units_context context = {.eddington_luminosity = 1.9e38};
  char *text = fuzz_text(data + 1, size - 1);
  struct lxg_error error = {0};
  double cgs = NAN;
  enum lxg_status status =
      lxg_units_parse_quantity(text, dimension, NULL, data[0] & 128 ? &context : NULL, &cgs, &error);
  fuzz_explained(status, &error);
  if (status == LXG_OK ? !isfinite(cgs) : !isnan(cgs)) {
    abort(); /* set exactly on success, and finite */
  }
  const struct lxg_unit *unit = NULL;
  lxg_error_clear(&error);
  status = lxg_units_find(text, dimension, &unit, &error);
  fuzz_explained(status, &error);
  lxg_units_table_spelling(text);
  free(text);
  return 0;
}
