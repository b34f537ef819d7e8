/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family_gather.c - winds that were solved one by one as a family, so that whatever reads a family reads them (see family.h).
 */
#include "family/family_internal.h"
#include "luxgale/memory.h"

#include <math.h>
#include <string.h>

enum lxg_status lxg_family_gather(const struct lxg_wind winds[], const double arc[], size_t count,
                                  double l_edd, struct lxg_family *family, struct lxg_error *error) {
  *family =
      (struct lxg_family){.l_edd = l_edd, .thin_end = LXG_WIND_NOT_FOUND, .thick_end = LXG_WIND_NOT_FOUND};
  family->wind = lxg_alloc(count, sizeof *family->wind);
  family->arc = lxg_alloc(count, sizeof *family->arc);
  family->table = lxg_alloc(count * LXG_FAMILY_COUNT, sizeof *family->table);
  if (family->wind == NULL || family->arc == NULL || family->table == NULL) {
    lxg_family_free(family);
    return lxg_error_set(error, LXG_MEMORY, "memory", "%zu winds: out of memory", count);
  }
  for (size_t i = 0; i < count; i++) {
    family->wind[i] = winds[i];
    family->arc[i] = arc[i];
    family->newton_steps += winds[i].newton_steps;
    lxg_family_numbers(&winds[i], l_edd, family->table + i * LXG_FAMILY_COUNT);
  }
  family->count = count;
  return LXG_OK;
}
