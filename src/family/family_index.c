/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * family_index.c - which members of a family have a given value of one quantity: an index built once, read often.
 *
 * The interpolating cubics are cut at their extremes into monotone stretches, consecutive stretches of one sense form a
 * run; a query is a binary search in each run and a root of one cubic, so both members next to a fold are found.
 */
#include "family/family_internal.h"
#include "luxgale/memory.h"

#include <math.h>
#include <stdbool.h>

/* Monotone part t0..t1 of the cubic of one interval. */
struct stretch {
  size_t interval;
  double t0, t1, q0, q1;
};

struct run {
  size_t first, last; /* stretches */
  bool rising;
};

struct lxg_family_index {
  const struct lxg_family *family;
  size_t quantity;
  size_t stretches, runs;
  struct stretch *stretch;
  struct run *run;
};

/* Monotone stretches of the cubic in [0, 1]: cuts[0] = 0 ... cuts[n-1] = 1; at most 4 cuts. */
static size_t cut_at_extremes(const double c[4], double cuts[4]) {
  size_t n = 0;
  cuts[n++] = 0.0;
  const double a = 3.0 * c[3], b = 2.0 * c[2], d = b * b - 4.0 * a * c[1];
  if (d > 0.0) {
    const double s = -0.5 * (b + copysign(sqrt(d), b));
    double t[2] = {a != 0.0 ? s / a : NAN, s != 0.0 ? c[1] / s : NAN};
    if (t[1] < t[0]) {
      const double swap = t[0];
      t[0] = t[1];
      t[1] = swap;
    }
    for (size_t i = 0; i < 2; i++) {
      if (t[i] > 0.0 && t[i] < 1.0) {
        cuts[n++] = t[i];
      }
    }
  }
  cuts[n++] = 1.0;
  return n;
}

static void add_stretch(struct lxg_family_index *index, size_t interval, const double c[4], double t0,
                        double t1) {
  const struct stretch stretch = {interval, t0, t1, lxg_family_cubic_at(c, t0), lxg_family_cubic_at(c, t1)};
  if (stretch.q0 == stretch.q1) {
    return; /* constant: the held quantity itself */
  }
  const bool rising = stretch.q1 > stretch.q0;
  if (index->runs == 0 || index->run[index->runs - 1].rising != rising) {
    index->run[index->runs++] = (struct run){index->stretches, index->stretches, rising};
  }
  index->run[index->runs - 1].last = index->stretches;
  index->stretch[index->stretches++] = stretch;
}

enum lxg_status lxg_family_index_create(const struct lxg_family *family, enum lxg_family_quantity quantity,
                                        struct lxg_family_index **index, struct lxg_error *error) {
  *index = NULL;
  const size_t intervals = family->count < 2 ? 0 : family->count - 1;
  struct lxg_family_index *made = lxg_alloc(1, sizeof *made);
  if (made != NULL) {
    made->family = family;
    made->quantity = (size_t)quantity;
    made->stretch = lxg_alloc(3 * intervals, sizeof *made->stretch);
    made->run = lxg_alloc(3 * intervals, sizeof *made->run);
  }
  if (made == NULL || made->stretch == NULL || made->run == NULL) {
    lxg_family_index_destroy(made);
    return lxg_error_set(error, LXG_MEMORY, "memory", "index of a family: out of memory");
  }
  for (size_t i = 0; i < intervals; i++) {
    double c[4], cuts[4];
    lxg_family_cubic(family, i, made->quantity, c);
    const size_t n = cut_at_extremes(c, cuts);
    for (size_t j = 0; j + 1 < n; j++) {
      add_stretch(made, i, c, cuts[j], cuts[j + 1]);
    }
  }
  *index = made;
  return LXG_OK;
}

void lxg_family_index_destroy(struct lxg_family_index *index) {
  if (index != NULL) {
    lxg_free(index->stretch);
    lxg_free(index->run);
    lxg_free(index);
  }
}

/* Root of the cubic minus `wanted` in the stretch: Newton's method kept inside a shrinking bracket. */
static double root_in(const double c[4], double wanted, double t0, double t1, bool rising) {
  double t = 0.5 * (t0 + t1);
  for (int i = 0; i < 80 && t1 - t0 > 1e-15; i++) {
    const double value = lxg_family_cubic_at(c, t) - wanted;
    if (value == 0.0) {
      return t;
    }
    if ((value > 0.0) == rising) {
      t1 = t;
    } else {
      t0 = t;
    }
    const double slope = c[1] + t * (2.0 * c[2] + t * 3.0 * c[3]);
    const double next = t - value / slope;
    if (fabs(next - t) < 1e-16) {
      return t;
    }
    t = next > t0 && next < t1 ? next : 0.5 * (t0 + t1);
  }
  return t;
}

static double root_of_run(const struct lxg_family_index *index, const struct run *run, double wanted) {
  size_t low = run->first, high = run->last;
  while (low < high) {
    const size_t middle = (low + high) / 2;
    const bool before = run->rising ? index->stretch[middle].q1 < wanted : index->stretch[middle].q1 > wanted;
    if (before) {
      low = middle + 1;
    } else {
      high = middle;
    }
  }
  const struct stretch *stretch = &index->stretch[low];
  double c[4];
  lxg_family_cubic(index->family, stretch->interval, index->quantity, c);
  const double t = root_in(c, wanted, stretch->t0, stretch->t1, run->rising);
  const double *arc = index->family->arc + stretch->interval;
  return arc[0] + t * (arc[1] - arc[0]);
}

size_t lxg_family_index_find(const struct lxg_family_index *index, double value, double arc[],
                             size_t capacity) {
  const double wanted = lxg_family_number(index->quantity, value, index->family->l_edd);
  size_t found = 0;
  for (size_t r = 0; r < index->runs; r++) {
    const struct run *run = &index->run[r];
    const double start = index->stretch[run->first].q0, end = index->stretch[run->last].q1;
    const bool inside = run->rising ? wanted >= start && wanted <= end : wanted <= start && wanted >= end;
    if (!inside || (r > 0 && wanted == start)) {
      continue; /* a value at a joint belongs to the run before */
    }
    if (found < capacity) {
      arc[found] = root_of_run(index, run, wanted);
    }
    found++;
  }
  return found;
}

size_t lxg_family_index_branch(const struct lxg_family_index *index, double value, enum lxg_branch branch,
                               struct lxg_family_place *place) {
  enum { CROSSINGS = 16 };
  double arc[CROSSINGS];
  const size_t found = lxg_family_index_find(index, value, arc, CROSSINGS);
  for (size_t i = 0; i < found && i < CROSSINGS; i++) {
    struct lxg_family_place candidate;
    lxg_family_at(index->family, arc[i], &candidate);
    const double rate = candidate.value[LXG_FAMILY_MASS_LOSS_RATE];
    const double best = place->value[LXG_FAMILY_MASS_LOSS_RATE];
    if (i == 0 || (branch == LXG_BRANCH_THIN ? rate < best : rate > best)) {
      *place = candidate;
    }
  }
  return found;
}
