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

/* Fourth-order central difference of ln kappa; step 1e-3 leaves about 1e-9 of truncation and 1e-12 of rounding. */
static double difference(const struct lxg_opacity *opacity, double ln_rho, double ln_t, double along_rho,
                         double along_t) {
  static const double step = 1e-3;
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
  /* A bump's second derivative jumps at its peak, so a difference across it is only first order: 2e-5. */
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

Suite *suite_opacity(void);
Suite *suite_opacity(void) {
  Suite *suite = suite_create("opacity");
  TCase *tests = tcase_create("opacity");
  tcase_add_loop_test(tests, reference_law, 0, sizeof reference / sizeof reference[0]);
  tcase_add_test(tests, scattering_is_constant);
  tcase_add_test(tests, slopes_are_exact);
  tcase_add_test(tests, arguments_out_of_reach);
  tcase_add_test(tests, composition_is_checked);
  suite_add_tcase(suite, tests);
  return suite;
}
