/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_random.c - the counter-based generator against its published vectors and its deviates against theory.
 */
#include "helpers.h"
#include "luxgale/random.h"

/* Known-answer vectors of Philox4x32-10 as its authors distribute them (Salmon et al. 2011; from memory: three vectors of
 * 128 bits cannot agree by chance). */
static const struct {
  uint32_t counter[4], key[2], bits[4];
} vectors[] = {
    {{0, 0, 0, 0}, {0, 0}, {0x6627e8d5, 0xe169c58d, 0xbc57ac4c, 0x9b00dbd8}},
    {{0xffffffff, 0xffffffff, 0xffffffff, 0xffffffff},
     {0xffffffff, 0xffffffff},
     {0x408f276d, 0x41c83b0e, 0xa20bc7c6, 0x6d5451fd}},
    {{0x243f6a88, 0x85a308d3, 0x13198a2e, 0x03707344},
     {0xa4093822, 0x299f31d0},
     {0xd16cfe09, 0x94fdcceb, 0x5001e420, 0x24126ea1}},
};

START_TEST(philox_vectors) {
  uint32_t bits[4] = {0};
  lxg_random_philox(vectors[_i].counter, vectors[_i].key, bits);
  for (int i = 0; i < 4; i++) {
    ck_assert_uint_eq(bits[i], vectors[_i].bits[i]);
  }
}
END_TEST

/* Moments of the standard normal: 0, 1, 0, 3; limits are five standard errors of n = 400000 draws (1/n, 2/n, 15/n, 96/n). */
START_TEST(normal_moments) {
  const struct lxg_random_place place = {.seed = 0x9d2c5680efc60000u, .stream = 5, .draw = 71};
  const int n = 400000;
  double sum[5] = {0.0};
  for (int i = 0; i < n; i++) {
    const double x = lxg_random_normal(&place, (uint64_t)i);
    sum[1] += x;
    sum[2] += x * x;
    sum[3] += x * x * x;
    sum[4] += x * x * x * x;
  }
  assert_near(sum[1] / n, 0.0, 5.0 * sqrt(1.0 / n));
  assert_near(sum[2] / n, 1.0, 5.0 * sqrt(2.0 / n));
  assert_near(sum[3] / n, 0.0, 5.0 * sqrt(15.0 / n));
  assert_near(sum[4] / n, 3.0, 5.0 * sqrt(96.0 / n));
}
END_TEST

/* Chi-square of 64 equal cells over draws (not indices): 63 degrees, 99.99 % below 116. */
START_TEST(uniform_over_draws) {
  int cell[64] = {0};
  const int n = 64000;
  for (int i = 0; i < n; i++) {
    const struct lxg_random_place place = {.seed = 17, .stream = 3, .draw = (uint32_t)i};
    const double u = lxg_random_uniform(&place, 0);
    ck_assert(u > 0.0 && u < 1.0);
    cell[(int)(64.0 * u)]++;
  }
  double chi_sq = 0.0;
  for (int i = 0; i < 64; i++) {
    chi_sq += (cell[i] - 1000.0) * (cell[i] - 1000.0) / 1000.0;
  }
  ck_assert_msg(chi_sq < 116.0 && chi_sq > 25.0, "chi^2 = %g", chi_sq);
}
END_TEST

/* Streams, draws, seeds and indices are all independent fields: no correlation beyond five standard errors. */
START_TEST(fields_independent) {
  const struct lxg_random_place base = {.seed = 4242, .stream = 2, .draw = 9};
  struct lxg_random_place other[3] = {base, base, base};
  other[0].seed++;
  other[1].stream++;
  other[2].draw++;
  const int n = 20000;
  for (int k = 0; k < 3; k++) {
    double product = 0.0;
    for (int i = 0; i < n; i++) {
      product += lxg_random_normal(&base, (uint64_t)i) * lxg_random_normal(&other[k], (uint64_t)i);
    }
    assert_near(product / n, 0.0, 5.0 / sqrt(n));
  }
}
END_TEST

/* The bulk function gives the very numbers of the single one, wherever it starts. */
START_TEST(bulk_same) {
  const struct lxg_random_place place = {.seed = 77, .stream = 1, .draw = 123456};
  double values[11];
  for (uint64_t first = 0; first < 4; first++) {
    lxg_random_normals(&place, first, 11, values);
    for (uint64_t i = 0; i < 11; i++) {
      ck_assert(values[i] == lxg_random_normal(&place, first + i));
    }
  }
}
END_TEST

Suite *suite_random(void);
Suite *suite_random(void) {
  Suite *suite = suite_create("random");
  TCase *tests = tcase_create("random");
  tcase_add_loop_test(tests, philox_vectors, 0, sizeof vectors / sizeof vectors[0]);
  tcase_add_test(tests, normal_moments);
  tcase_add_test(tests, uniform_over_draws);
  tcase_add_test(tests, fields_independent);
  tcase_add_test(tests, bulk_same);
  suite_add_tcase(suite, tests);
  return suite;
}
