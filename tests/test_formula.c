/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_formula.c - decay data and luminosity formulas against beta-decay theory, counting of nuclei with Avogadro's number,
 * closed forms and finite differences.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/formula.h"

#include <string.h>

static const double avogadro = 6.02214076e23; /* exact (SI 2019) */
static const double mev = 1.602176634e-6;     /* [erg], exact (SI 2019) */
static const struct lxg_decay_photons trapped = {.gamma_time = INFINITY, .lines = 0};
static const struct lxg_decay_photons escaping = {.gamma_time = 0.0, .lines = 1};

/* Endpoints [MeV] (LNHB and NUBASE evaluations, as noted for each in decay.c; 22Na from memory) and charge of the daughter. */
static const struct {
  const char *name;
  double endpoint, charge, q_ec;
} spectra[] = {{"13N", 1.199, 6.0, 2.2205},  {"14O", 1.8097, 7.0, 5.144}, {"15O", 1.732, 7.0, 2.754},
               {"17F", 1.7385, 8.0, 2.7605}, {"18F", 0.634, 8.0, 1.6555}, {"22Na", 0.546, 10.0, 2.8432}};

/* Allowed positron spectrum p W (W_0 - W)^2 F with the point-charge Fermi function 2 pi y/(e^(2 pi y) - 1), y = alpha Z W/p,
 * integrated with 4000 midpoints; energies in m_e c^2. Measured and exact means agree with it within 1 %. */
static double allowed_mean(double endpoint, double charge) {
  const double w0 = 1.0 + endpoint / 0.51099895;
  double sum = 0.0, moment = 0.0;
  for (int i = 0; i < 4000; i++) {
    const double w = 1.0 + (w0 - 1.0) * (i + 0.5) / 4000.0;
    const double p = sqrt(w * w - 1.0);
    const double y = 2.0 * LXG_PI * charge * w / (p * 137.035999);
    const double rate = p * w * (w0 - w) * (w0 - w) * y / expm1(y);
    sum += rate;
    moment += rate * (w - 1.0);
  }
  return moment / sum * 0.51099895;
}

START_TEST(positron_energies) {
  const struct lxg_isotope *isotope = lxg_decay_find(spectra[_i].name);
  ck_assert_ptr_nonnull(isotope);
  assert_close(isotope->positron_mev, allowed_mean(spectra[_i].endpoint, spectra[_i].charge), 1e-2);
  /* heat left behind stays below the decay energy, neutrino excluded */
  const struct lxg_decay_photons all = {.gamma_time = INFINITY, .lines = 1};
  ck_assert(lxg_decay_heat(isotope, &all, 0.0) < spectra[_i].q_ec * mev);
}
END_TEST

/* Half-lives by NUBASE2020 and LNHB (read), in the units of those tables. */
START_TEST(half_lives) {
  assert_close(lxg_decay_find("13N")->half_life / 60.0, 9.965, 1e-12);
  assert_close(lxg_decay_find("14O")->half_life, 70.621, 1e-4);  /* second evaluation, from memory */
  assert_close(lxg_decay_find("15O")->half_life, 122.266, 4e-4); /* second evaluation, from memory */
  assert_close(lxg_decay_find("17F")->half_life, 64.370, 1e-12);
  assert_close(lxg_decay_find("18F")->half_life / 3600.0, 1.82890, 1e-5);
  assert_close(lxg_decay_find("22Na")->half_life / 3.15576e7, 2.6019,
               1e-4); /* second evaluation, from memory */
  assert_close(lxg_decay_find("7Be")->half_life / 86400.0, 53.22, 1e-12);
  ck_assert_ptr_null(lxg_decay_find("56Ni"));
  ck_assert_uint_eq(lxg_decay_count(), 7);
  ck_assert_ptr_null(lxg_decay_isotope(7));
  for (size_t i = 0; i < lxg_decay_count(); i++) {
    ck_assert_int_eq(lxg_decay_check(lxg_decay_isotope(i), NULL), LXG_OK);
  }
}
END_TEST

/* One gram of 18F, opaque and transparent; 7Be heats by its line alone. Evaluated from counting nuclei. */
START_TEST(heating_per_gram) {
  const double age = 4321.0;
  const double left = exp2(-age / (109.734 * 60.0)) * avogadro / 18.0 * log(2.0) / (109.734 * 60.0);
  const struct lxg_isotope *fluorine = lxg_decay_find("18F");
  assert_close(lxg_decay_luminosity(fluorine, &trapped, 1.0, age, NULL),
               left * 0.9686 * (0.250 + 1.0219979) * mev, 1e-8);
  assert_close(lxg_decay_luminosity(fluorine, &escaping, 1.0, age, NULL), left * 0.9686 * 0.250 * mev, 1e-8);
  const struct lxg_isotope *beryllium = lxg_decay_find("7Be");
  ck_assert(lxg_decay_heat(beryllium, &trapped, age) == 0.0);
  const struct lxg_decay_photons lines = {.gamma_time = INFINITY, .lines = 1};
  assert_close(lxg_decay_heat(beryllium, &lines, age), 0.4776 * 0.1044 * mev, 1e-12);
  /* a gamma-ray depth of one absorbs 1 - 1/e */
  const struct lxg_decay_photons leaking = {.gamma_time = age, .lines = 0};
  assert_close(lxg_decay_heat(fluorine, &leaking, age),
               0.9686 * (0.250 + 1.0219979 * (1.0 - exp(-1.0))) * mev, 1e-8);
}
END_TEST

/* Terms of every law with awkward numbers; times in seconds. */
static struct lxg_formula every_law(void) {
  struct lxg_formula formula = {
      .count = 6,
      .term = {{.law = LXG_FORMULA_CONSTANT, .origin = -4e3, .luminosity = 3.1e36},
               {.law = LXG_FORMULA_PLATEAU,
                .luminosity = 2.7e38,
                .duration = 3.3e4,
                .time_scale = 5.1e4,
                .index = 1.75},
               {.law = LXG_FORMULA_EXPONENTIAL, .origin = 70.0, .luminosity = 8e37, .time_scale = 2.3e4},
               {.law = LXG_FORMULA_POWER, .luminosity = 4e37, .time_scale = 1.9e4, .index = 1.3},
               {.law = LXG_FORMULA_DECAY,
                .mass = 3e28,
                .photons = {.gamma_time = 9e3, .lines = 1},
                .isotope_count = 2},
               {.law = LXG_FORMULA_HOT_CNO, .origin = 1.7, .mass = 4e22, .hydrogen = 0.43, .cno = 0.13}}};
  formula.term[4].isotope[0] = (struct lxg_formula_isotope){*lxg_decay_find("13N"), 3e-4};
  formula.term[4].isotope[1] = (struct lxg_formula_isotope){*lxg_decay_find("18F"), 7e-4};
  return formula;
}

/* Slopes by fourth-order differences, each law alone and their sum, away from breaks. */
START_TEST(slopes_match_differences) {
  const struct lxg_formula all = every_law();
  ck_assert_int_eq(lxg_formula_check(&all, NULL), LXG_OK);
  for (size_t i = 0; i <= all.count; i++) {
    struct lxg_formula one = {.count = 1, .term = {all.term[i % all.count]}};
    const struct lxg_formula *formula = i < all.count ? &one : &all;
    for (double t = 207.0; t < 2e5; t *= 1.7) {
      const double h = 2e-4 * t;
      double slope = 0.0;
      const double value = lxg_formula_at(formula, t, &slope);
      const double difference =
          (8.0 * (lxg_formula_at(formula, t + h, NULL) - lxg_formula_at(formula, t - h, NULL)) -
           (lxg_formula_at(formula, t + 2.0 * h, NULL) - lxg_formula_at(formula, t - 2.0 * h, NULL))) /
          (12.0 * h);
      const double x =
          value > 0.0 ? fabs(slope) * t / value : 0.0; /* truncation of an exponential: (h/t)^4 x^5/30 */
      assert_near(slope * t, difference * t, value * (1e-9 + 1.6e-15 * pow(x, 5.0)));
    }
  }
}
END_TEST

/* Laws at single points, in closed form; before the origin nothing shines. */
START_TEST(values) {
  const struct lxg_formula all = every_law();
  struct lxg_formula one = {.count = 1, .term = {all.term[1]}};
  assert_close(lxg_formula_at(&one, 3.2e4, NULL), 2.7e38, 0.0);
  assert_close(lxg_formula_at(&one, 3.3e4 + 1.02e5, NULL), 2.7e38 * pow(3.0, -1.75), 1e-14);
  one.term[0].index = 0.0;
  assert_close(lxg_formula_at(&one, 3.3e4 + 1.02e5, NULL), 2.7e38 * exp(-2.0), 1e-14);
  ck_assert(lxg_formula_at(&one, -1.0, NULL) == 0.0);
  one.term[0] = all.term[2];
  assert_close(lxg_formula_at(&one, 70.0 + 2.3e4, NULL), 8e37 * exp(-1.0), 1e-14);
  one.term[0] = all.term[3];
  assert_close(lxg_formula_at(&one, 1.9e5, NULL), 4e37 * pow(10.0, -1.3), 1e-14);
  /* beta-limited burning: 5.9e15 erg/g/s per unit CNO until X * 6.0e18 erg/g are spent */
  one.term[0] = all.term[5];
  const double lasts = 0.43 * 6.0e18 / (5.9e15 * 0.13);
  assert_close(lxg_formula_at(&one, 1.7 + 0.999 * lasts, NULL), 5.9e15 * 0.13 * 4e22, 1e-14);
  ck_assert(lxg_formula_at(&one, 1.7 + 1.001 * lasts, NULL) == 0.0);
  assert_close(lxg_formula_hot_cno_time(&all.term[5]), lasts, 1e-14);
}
END_TEST

/* Limits of L (s/t)^-n for s -> 0: infinite for n > 0, L for n = 0 (with slope 0), zero for n < 0 (analysis). */
START_TEST(power_at_its_origin) {
  struct lxg_formula formula = {
      .count = 1, .term = {{.law = LXG_FORMULA_POWER, .luminosity = 4e37, .time_scale = 1.9e4}}};
  double slope = NAN;
  ck_assert_double_eq(lxg_formula_at(&formula, 0.0, &slope), 4e37);
  ck_assert_double_eq(slope, 0.0);
  formula.term[0].index = -1.3;
  ck_assert_double_eq(lxg_formula_at(&formula, 0.0, &slope), 0.0);
  formula.term[0].index = 1.3;
  ck_assert_double_eq(lxg_formula_at(&formula, 0.0, &slope), (double)INFINITY);
}
END_TEST

START_TEST(breaks) {
  const struct lxg_formula all = every_law();
  double list[LXG_FORMULA_BREAKS];
  ck_assert_uint_eq(lxg_formula_breaks(&all, 0.0, 1e6, list), 4);
  assert_close(list[0], 1.7, 0.0);
  assert_close(list[1], 70.0, 0.0);
  assert_close(list[2], 1.7 + 0.43 * 6.0e18 / (5.9e15 * 0.13), 1e-14);
  assert_close(list[3], 3.3e4, 0.0);
  ck_assert_uint_eq(lxg_formula_breaks(&all, 3.3e4, 1e6, list), 0);
}
END_TEST

static void expect_refused(const struct lxg_formula *formula, const char *code) {
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_formula_check(formula, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, code);
}

START_TEST(refusals) {
  const struct lxg_formula good = every_law();
  struct lxg_formula bad = good;
  bad.count = 0;
  expect_refused(&bad, "formula-terms");
  bad.count = LXG_FORMULA_TERMS + 1;
  expect_refused(&bad, "formula-terms");
#define EXPECT(term_, field_, value_, code_)                                                                 \
  do {                                                                                                       \
    bad = good;                                                                                              \
    bad.term[term_].field_ = value_;                                                                         \
    expect_refused(&bad, code_);                                                                             \
  } while (0)
  EXPECT(0, law, (enum lxg_formula_law)17, "formula-law");
  EXPECT(0, luminosity, 0.0, "formula-luminosity");
  EXPECT(0, origin, NAN, "formula-origin");
  EXPECT(1, duration, -1.0, "formula-duration");
  EXPECT(1, time_scale, 0.0, "formula-time-scale");
  EXPECT(1, index, -0.1, "formula-index");
  EXPECT(2, time_scale, 0.0, "formula-time-scale");
  EXPECT(2, luminosity, INFINITY, "formula-luminosity");
  EXPECT(3, time_scale, -2.0, "formula-time-scale");
  EXPECT(3, index, NAN, "formula-index");
  EXPECT(4, mass, 0.0, "formula-mass");
  EXPECT(4, isotope_count, 0, "formula-isotopes");
  EXPECT(4, isotope_count, LXG_FORMULA_ISOTOPES + 1, "formula-isotopes");
  EXPECT(4, photons.gamma_time, NAN, "formula-gamma-time");
  EXPECT(4, isotope[1].mass_fraction, 1.2, "formula-mass-fraction");
  EXPECT(4, isotope[0].mass_fraction, -1e-9, "formula-mass-fraction");
  EXPECT(4, isotope[0].isotope.half_life, 0.0, "isotope-half-life");
  EXPECT(4, isotope[0].isotope.mass_number, -13.0, "isotope-mass-number");
  EXPECT(4, isotope[0].isotope.positrons, 1.1, "isotope-positrons");
  EXPECT(4, isotope[0].isotope.positron_mev, NAN, "isotope-positron-energy");
  EXPECT(4, isotope[0].isotope.gamma_mev, -0.1, "isotope-gamma-energy");
  EXPECT(5, hydrogen, 0.0, "formula-hydrogen");
  EXPECT(5, cno, 1.01, "formula-cno");
#undef EXPECT
  bad = good;
  bad.term[4].photons = escaping;
  bad.term[4].isotope_count = 1;
  bad.term[4].isotope[0].isotope = *lxg_decay_find("7Be");
  expect_refused(&bad, "formula-no-heat");
  struct lxg_error error = {0};
  bad = good;
  bad.term[2].time_scale = 0.0;
  ck_assert_int_eq(lxg_formula_check(&bad, &error), LXG_INPUT);
  char text[1024];
  lxg_error_text(&error, text, sizeof text);
  ck_assert_ptr_nonnull(strstr(text, "term 3 (exponential)"));
  ck_assert_str_eq(lxg_formula_law_name((enum lxg_formula_law)77), "unknown");
}
END_TEST

Suite *suite_formula(void);
Suite *suite_formula(void) {
  Suite *suite = suite_create("formula");
  TCase *tests = tcase_create("formula");
  tcase_add_loop_test(tests, positron_energies, 0, sizeof spectra / sizeof spectra[0]);
  tcase_add_test(tests, half_lives);
  tcase_add_test(tests, heating_per_gram);
  tcase_add_test(tests, slopes_match_differences);
  tcase_add_test(tests, values);
  tcase_add_test(tests, power_at_its_origin);
  tcase_add_test(tests, breaks);
  tcase_add_test(tests, refusals);
  suite_add_tcase(suite, tests);
  return suite;
}
