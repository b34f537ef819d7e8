/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_opacity.c - the formulas: values against independent evaluation, slopes against finite differences.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/opacity.h"

static struct lxg_opacity *make(enum lxg_opacity_formula formula, double x, double y, double cno, double z) {
  const struct lxg_composition composition = {.hydrogen = x, .helium = y, .cno = cno, .metals = z};
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  assert_status(lxg_opacity_create_formula(formula, &composition, &opacity, &error), LXG_OK, &error);
  return opacity;
}

/* The closed form of reference.c evaluated with mpmath 1.2.1 at 25 digits, slopes by mpmath's differentiation. */
static const struct {
  double x, y, cno, z, rho, t, kappa, by_rho, by_t;
} reference[] = {
    {0.35, 0.33, 0.30, 0.02, 3.7e-9, 1.83e5, 0.8823053110851747, 0.29277547596685, -0.64064342076314},
    {0.70, 0.28, 0.0, 0.02, 2.1e-7, 4.31e4, 34.74837455174619, 0.90367895902368, -3.00659160033},
    {0.55, 0.2637, 0.15, 0.0363, 6.3e-3, 4.17e6, 0.410797798558064, 0.25860222589683, -0.91628727225299},
    {0.47, 0.50, 0.0287, 0.0013, 1.9e2, 1.07e8, 0.2298296095613679, 0.0089352744867782, -0.22325895868848},
    {0.70, 0.299, 0.0, 0.001, 4.4e-10, 1.2e4, 0.2754259621010252, 0.073437684140425, 3.2927614332118},
    {0.31, 0.69, 0.0, 0.0, 8.8e-12, 7.1e4, 0.2628877854724876, 0.0031332845133508, -0.021846654447286},
};

START_TEST(reference_law) {
  struct lxg_opacity *opacity =
      make(LXG_OPACITY_REFERENCE, reference[_i].x, reference[_i].y, reference[_i].cno, reference[_i].z);
  struct lxg_opacity_value value = {0};
  ck_assert_int_eq(lxg_opacity_at(opacity, log(reference[_i].rho), log(reference[_i].t), &value), LXG_OK);
  /* 1e-13: rounding of exponents near 60, times double precision. */
  assert_close(value.kappa, reference[_i].kappa, 1e-13);
  assert_near(value.dlnk_dlnrho, reference[_i].by_rho, 1e-12);
  assert_near(value.dlnk_dlnt, reference[_i].by_t, 1e-12);
  lxg_opacity_destroy(opacity);
}
END_TEST

START_TEST(scattering_is_constant) {
  struct lxg_opacity *opacity = make(LXG_OPACITY_SCATTERING, 0.43, 0.31, 0.24, 0.02);
  struct lxg_opacity_value value = {0};
  ck_assert_int_eq(lxg_opacity_at(opacity, -7.3, 14.1, &value), LXG_OK);
  assert_close(value.kappa, 0.286, 1e-15); /* 0.2 (1 + 0.43) */
  ck_assert(value.dlnk_dlnrho == 0.0 && value.dlnk_dlnt == 0.0);
  lxg_opacity_destroy(opacity);
}
END_TEST

/* Fourth-order central difference of ln kappa; step 3e-6 leaves about 1e-8 of rounding and no truncation. */
static double difference(const struct lxg_opacity *opacity, double ln_rho, double ln_t, double along_rho,
                         double along_t) {
  static const double step = 3e-6;
  static const double node[4] = {-2.0, -1.0, 1.0, 2.0}, weight[4] = {1.0, -8.0, 8.0, -1.0};
  double sum = 0.0;
  for (int i = 0; i < 4; i++) {
    struct lxg_opacity_value value = {0};
    ck_assert_int_eq(
        lxg_opacity_at(opacity, ln_rho + step * node[i] * along_rho, ln_t + step * node[i] * along_t, &value),
        LXG_OK);
    sum += weight[i] * log(value.kappa);
  }
  return sum / (12.0 * step);
}

START_TEST(slopes_are_exact) {
  /* A second derivative jumps at the peak of a bump (by up to 40), so a difference across it is off by step times that. */
  static const double tolerance = 2e-5;
  static const enum lxg_opacity_formula formulas[] = {LXG_OPACITY_KRAMERS, LXG_OPACITY_REFERENCE};
  for (size_t f = 0; f < 2; f++) {
    struct lxg_opacity *opacity = make(formulas[f], 0.353, 0.3269, 0.30, 0.0201);
    for (double log_t = 3.03; log_t < 10.0; log_t += 0.0717) {
      for (double log_rho = -24.9; log_rho < 6.0; log_rho += 1.37) {
        struct lxg_opacity_value value = {0};
        const double a = log_rho * LXG_LN10, b = log_t * LXG_LN10;
        ck_assert_int_eq(lxg_opacity_at(opacity, a, b, &value), LXG_OK);
        ck_assert_double_gt(value.kappa, 0.0);
        assert_near(value.dlnk_dlnrho, difference(opacity, a, b, 1.0, 0.0), tolerance);
        assert_near(value.dlnk_dlnt, difference(opacity, a, b, 0.0, 1.0), tolerance);
      }
    }
    lxg_opacity_destroy(opacity);
  }
}
END_TEST

START_TEST(arguments_out_of_reach) {
  struct lxg_opacity *opacity = make(LXG_OPACITY_KRAMERS, 0.7, 0.28, 0.0, 0.02);
  struct lxg_opacity_value value = {.kappa = 17.0};
  ck_assert_int_eq(lxg_opacity_at(opacity, NAN, 11.0, &value), LXG_DOMAIN);
  ck_assert_int_eq(lxg_opacity_at(opacity, -20.0, INFINITY, &value), LXG_DOMAIN);
  ck_assert_int_eq(lxg_opacity_at(opacity, INFINITY, -INFINITY, &value), LXG_DOMAIN);
  ck_assert(value.kappa == 17.0);
  lxg_opacity_destroy(opacity);
  lxg_opacity_destroy(NULL);
}
END_TEST

START_TEST(composition_is_checked) {
  const struct lxg_composition heavy = {.hydrogen = 0.7, .helium = 0.3, .cno = 0.1, .metals = 0.02};
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &heavy, &opacity, &error), LXG_INPUT, &error);
  ck_assert_str_eq(error.code, "composition-sum");
  ck_assert_ptr_null(opacity);
}
END_TEST

static struct lxg_opacity *make_without(unsigned omit, double x, double cno, double z) {
  const struct lxg_composition composition = {
      .hydrogen = x, .helium = 1.0 - x - cno - z, .cno = cno, .metals = z};
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  assert_status(lxg_opacity_create_without(LXG_OPACITY_KRAMERS, omit, &composition, &opacity, &error), LXG_OK,
                &error);
  return opacity;
}

/* The whole domain, also compositions without hydrogen, helium, metals: positive, finite, slopes no wilder than T^150. */
START_TEST(positive_and_finite_everywhere) {
  static const double mixture[][3] = {{0.7, 0.0, 0.02}, {0.0, 0.0, 0.02}, {0.35, 0.3, 0.02}, {1.0, 0.0, 0.0},
                                      {0.0, 0.0, 1.0},  {0.0, 1.0, 0.0},  {0.0, 0.0, 0.0},   {0.3, 0.7, 0.0}};
  for (size_t m = 0; m < sizeof mixture / sizeof mixture[0]; m++) {
    struct lxg_opacity *opacity = make_without(0, mixture[m][0], mixture[m][1], mixture[m][2]);
    for (double log_t = 3.0; log_t <= 10.0; log_t += 0.093) {
      for (double log_rho = -25.0; log_rho <= 6.0; log_rho += 0.71) {
        struct lxg_opacity_value value = {0};
        ck_assert_int_eq(lxg_opacity_at(opacity, log_rho * LXG_LN10, log_t * LXG_LN10, &value), LXG_OK);
        ck_assert(value.kappa > 0.0 && isfinite(value.kappa));
        ck_assert(fabs(value.dlnk_dlnrho) < 150.0 && fabs(value.dlnk_dlnt) < 150.0);
      }
    }
    lxg_opacity_destroy(opacity);
  }
}
END_TEST

/* The corners of the domain are inside, a step beyond is not. */
START_TEST(domain_ends_where_stated) {
  struct lxg_opacity *opacity = make_without(0, 0.353, 0.2, 0.0201);
  const double rho[2] = {log(LXG_OPACITY_LEAST_RHO), log(LXG_OPACITY_MOST_RHO)};
  const double t[2] = {log(LXG_OPACITY_LEAST_T), log(LXG_OPACITY_MOST_T)};
  for (int i = 0; i < 4; i++) {
    struct lxg_opacity_value value = {0};
    const double a = rho[i % 2], b = t[i / 2];
    const double in_a = i % 2 == 0 ? 1e-9 : -1e-9, in_b = i / 2 == 0 ? 1e-9 : -1e-9;
    ck_assert_int_eq(lxg_opacity_at(opacity, a + in_a, b + in_b, &value), LXG_OK);
    ck_assert(value.kappa > 0.0 && isfinite(value.kappa) && isfinite(value.dlnk_dlnrho) &&
              isfinite(value.dlnk_dlnt));
    ck_assert_int_eq(lxg_opacity_at(opacity, a - in_a, b + in_b, &value), LXG_DOMAIN);
    ck_assert_int_eq(lxg_opacity_at(opacity, a + in_a, b - in_b, &value), LXG_DOMAIN);
  }
  lxg_opacity_destroy(opacity);
}
END_TEST

/* Limits that need no table: thin hot gas scatters with 0.2 (1 + X), declining with T as the exact Rosseland mean of Compton
 * scattering, 1/(1 + (kT/39.4 keV)^0.976) for 2 to 300 keV (Poutanen 2017, ApJ 835, 119; fit from memory). */
START_TEST(scattering_limit) {
  static const double kev = 1.160451812e7; /* K */
  struct lxg_opacity *opacity = make_without(0, 0.7, 0.0, 0.0);
  struct lxg_opacity_value value = {0};
  for (double t = 2.0 * kev; t < 300.0 * kev; t *= 1.7) {
    ck_assert_int_eq(lxg_opacity_at(opacity, log(1e-8 * t / kev), log(t), &value), LXG_OK);
    assert_close(value.kappa, 0.34 / (1.0 + pow(t / kev / 39.4, 0.976)), 0.02);
  }
  /* degeneracy: the factor of Paczynski 1983, ApJ 267, 315, at rho = 1e6, T = 3e8 */
  ck_assert_int_eq(lxg_opacity_at(opacity, log(1e6), log(3e8), &value), LXG_OK);
  ck_assert_double_gt(value.kappa, 0.34 / (1.0 + 2.7e11 * 1e6 / 9e16) * 0.5);
  ck_assert_double_lt(value.dlnk_dlnrho, 0.0 + 0.7);
  lxg_opacity_destroy(opacity);
}
END_TEST

/* Below 4500 K the textbook law 2.5e-31 (Z/0.02) rho^0.5 T^9 (from memory) is met. */
START_TEST(cool_limit) {
  struct lxg_opacity *opacity = make_without(0, 0.7, 0.0, 0.02);
  struct lxg_opacity_value value = {0};
  for (double rho = 1e-10; rho < 8e-9; rho *= 4.3) {
    ck_assert_int_eq(lxg_opacity_at(opacity, log(rho), log(3400.0), &value), LXG_OK);
    assert_close(value.kappa, 2.5e-31 * sqrt(rho) * pow(3400.0, 9.0), 0.1);
    assert_near(value.dlnk_dlnrho, 0.5, 0.05);
    assert_near(value.dlnk_dlnt, 9.0, 0.9);
  }
  lxg_opacity_destroy(opacity);
}
END_TEST

START_TEST(shares_and_omission) {
  double share[LXG_OPACITY_SOURCES], known = 0.0;
  static const double point[][2] = {{5.25, -7.9}, {4.6, -6.1}, {3.7, -9.2},
                                    {6.3, -1.3},  {7.9, 1.7},  {4.0, -8.5}};
  struct lxg_opacity *whole = make_without(0, 0.353, 0.2, 0.0201);
  for (size_t i = 0; i < sizeof point / sizeof point[0]; i++) {
    const double a = point[i][1] * LXG_LN10, b = point[i][0] * LXG_LN10;
    struct lxg_opacity_value all = {0}, part = {0};
    ck_assert_int_eq(lxg_opacity_shares(whole, a, b, share, &known), LXG_OK);
    ck_assert_int_eq(lxg_opacity_at(whole, a, b, &all), LXG_OK);
    double sum = 0.0;
    for (size_t s = 0; s < LXG_OPACITY_SOURCES; s++) {
      ck_assert(share[s] >= 0.0 && share[s] <= 1.0);
      sum += share[s];
      if (s == LXG_OPACITY_SOURCE_H_MINUS) {
        continue; /* in series: without it more absorbs, not less */
      }
      struct lxg_opacity *without = make_without(LXG_OPACITY_BIT(s), 0.353, 0.2, 0.0201);
      ck_assert_int_eq(lxg_opacity_at(without, a, b, &part), LXG_OK);
      if (point[i][0] > 4.5) { /* nothing in series there: what is left is what the others give */
        assert_close(part.kappa, all.kappa * (1.0 - share[s]), 1e-5);
      }
      lxg_opacity_destroy(without);
    }
    assert_near(sum, 1.0, 1e-12);
    assert_near(known, 1.0, 0.0);
  }
  ck_assert_int_eq(lxg_opacity_shares(whole, NAN, 11.0, share, &known), LXG_DOMAIN);
  lxg_opacity_destroy(whole);
}
END_TEST

/* The iron bump is the same for the same Z whatever the extra cno; it grows with Z. */
START_TEST(iron_follows_metals_alone) {
  double share[LXG_OPACITY_SOURCES], known = 0.0, iron[3];
  static const double mixture[3][2] = {{0.0, 0.02}, {0.3, 0.02}, {0.0, 0.04}};
  for (size_t m = 0; m < 3; m++) {
    struct lxg_opacity *opacity = make_without(0, 0.35, mixture[m][0], mixture[m][1]);
    struct lxg_opacity_value value = {0};
    const double a = log(2.3e-8), b = 5.27 * LXG_LN10;
    ck_assert_int_eq(lxg_opacity_at(opacity, a, b, &value), LXG_OK);
    ck_assert_int_eq(lxg_opacity_shares(opacity, a, b, share, &known), LXG_OK);
    iron[m] = value.kappa * share[LXG_OPACITY_SOURCE_IRON];
    ck_assert(share[LXG_OPACITY_SOURCE_IRON] > 0.2);
    lxg_opacity_destroy(opacity);
  }
  assert_close(iron[1], iron[0], 1e-9);
  ck_assert(iron[2] > 1.3 * iron[0] && iron[2] < 2.0 * iron[0]);
}
END_TEST

START_TEST(names_and_refusals) {
  const struct lxg_composition metals = {.hydrogen = 0.7, .helium = 0.28, .cno = 0.0, .metals = 0.02};
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  unsigned bit = 0;
  for (unsigned s = 0; s < LXG_OPACITY_SOURCES; s++) {
    assert_status(lxg_opacity_source_find(lxg_opacity_source_name((enum lxg_opacity_source)s), &bit, &error),
                  LXG_OK, &error);
    ck_assert_uint_eq(bit, LXG_OPACITY_BIT(s));
  }
  ck_assert_int_eq(lxg_opacity_source_find("steel", &bit, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "opacity-source");
  enum lxg_opacity_formula formula = LXG_OPACITY_KRAMERS;
  assert_status(lxg_opacity_formula_find("reference", &formula, &error), LXG_OK, &error);
  ck_assert_int_eq(formula, LXG_OPACITY_REFERENCE);
  ck_assert_int_eq(lxg_opacity_formula_find("kramer", &formula, &error), LXG_INPUT);
  ck_assert_int_eq(lxg_opacity_create_without(LXG_OPACITY_REFERENCE, 1u, &metals, &opacity, &error),
                   LXG_INPUT);
  ck_assert_int_eq(lxg_opacity_create_without(LXG_OPACITY_KRAMERS, 1u << 20, &metals, &opacity, &error),
                   LXG_INPUT);
  ck_assert_int_eq(lxg_opacity_create_without(LXG_OPACITY_KRAMERS, 0x7u, &metals, &opacity, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "opacity-omit");
  ck_assert_ptr_null(opacity);
}
END_TEST

Suite *suite_opacity(void);
Suite *suite_opacity(void) {
  Suite *suite = suite_create("opacity");
  TCase *tests = tcase_create("opacity");
  tcase_add_loop_test(tests, reference_law, 0, sizeof reference / sizeof reference[0]);
  tcase_add_test(tests, scattering_is_constant);
  tcase_add_test(tests, slopes_are_exact);
  tcase_add_test(tests, positive_and_finite_everywhere);
  tcase_add_test(tests, domain_ends_where_stated);
  tcase_add_test(tests, scattering_limit);
  tcase_add_test(tests, cool_limit);
  tcase_add_test(tests, shares_and_omission);
  tcase_add_test(tests, iron_follows_metals_alone);
  tcase_add_test(tests, names_and_refusals);
  tcase_add_test(tests, arguments_out_of_reach);
  tcase_add_test(tests, composition_is_checked);
  suite_add_tcase(suite, tests);
  return suite;
}
