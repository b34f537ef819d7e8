/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fuzz_opacity.c - blocks of published opacities (lxg_opacity_import_text), with and without a given composition.
 */
#include "fuzz.h"
#include "luxgale/opacity_table.h"

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
  const struct lxg_composition composition = {0.7, 0.28, 0.0, 0.02};
  const struct lxg_opacity_import_options given = {
      .composition = &composition, .source = "s", .date = "2001"};
  for (int i = 0; i < 2; i++) {
    struct lxg_opacity_set set = {0};
    struct lxg_error error = {0};
    const enum lxg_status status =
        lxg_opacity_import_text((const char *)data, size, "input", i ? &given : NULL, &set, &error);
    fuzz_explained(status, &error);
    if (status != LXG_OK ? set.count != 0 : set.count == 0) {
      abort();
    }
    for (size_t k = 0; k < set.count; k++) {
      fuzz_explained(lxg_opacity_grid_validate(set.grid[k], &error), &error);
    }
    lxg_opacity_set_free(&set);
  }
  return 0;
}
