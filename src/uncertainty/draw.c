/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * draw.c - deviates of one draw: a thin layer that gives every source two streams of random.h, one for A and one for B.
 */
#include "luxgale/random.h"
#include "luxgale/uncertainty.h"

static struct lxg_random_place place_of(const struct lxg_uncertainty_draw *draw, size_t source) {
  const uint32_t second = (draw->swapped >> source) & 1u;
  return (struct lxg_random_place){
      .seed = draw->seed, .stream = 2u * (uint32_t)source + second, .draw = draw->number};
}

double lxg_uncertainty_uniform(const struct lxg_uncertainty_draw *draw, size_t source, uint64_t index) {
  const struct lxg_random_place place = place_of(draw, source);
  return draw->nominal ? 0.5 : lxg_random_uniform(&place, index);
}

double lxg_uncertainty_normal(const struct lxg_uncertainty_draw *draw, size_t source, uint64_t index) {
  const struct lxg_random_place place = place_of(draw, source);
  return draw->nominal ? 0.0 : lxg_random_normal(&place, index);
}

void lxg_uncertainty_normals(const struct lxg_uncertainty_draw *draw, size_t source, size_t count,
                             double values[]) {
  if (draw->nominal) {
    for (size_t i = 0; i < count; i++) {
      values[i] = 0.0;
    }
    return;
  }
  const struct lxg_random_place place = place_of(draw, source);
  lxg_random_normals(&place, 0, count, values);
}

struct lxg_uncertainty_draw lxg_uncertainty_nominal(void) {
  return (struct lxg_uncertainty_draw){.nominal = true};
}
