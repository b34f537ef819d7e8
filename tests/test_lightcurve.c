/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_lightcurve.c - decline times against an observed nova and analytic light curves; groups of bands by round trip.
 */
#include "luxgale/lightcurve.h"

#include "data/v1668cyg.h"
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/distance.h"

#include <string.h>

static void add(struct lxg_light_curve *curve, double time, enum lxg_band band, double magnitude,
                double sigma) {
  const struct lxg_light_point point = {
      .time = time, .band = band, .magnitude = magnitude, .error = sigma, .row = curve->count + 1};
  assert_status(lxg_lightcurve_add(curve, &point, NULL), LXG_OK, NULL);
}

static struct lxg_light_curve observed(void) {
  struct lxg_light_curve curve;
  lxg_lightcurve_init(LXG_TIME_JD, 2443000.0, &curve);
  for (size_t i = 0; i < sizeof v1668cyg / sizeof v1668cyg[0]; i++) {
    add(&curve, 2443000.0 + v1668cyg[i].jd, LXG_BAND_V, v1668cyg[i].v, 0.02);
  }
  lxg_lightcurve_sort(&curve);
  return curve;
}

/* t2 = 12.2 and t3 = 24.3 d: Mallama & Skillman 1979 (from memory), from more points than these, so one day is allowed; t3
 * falls into the gap of September 30 to October 7. The reference-work value t3 = 24 d agrees. */
START_TEST(v1668cyg_decline) {
  struct lxg_light_curve curve = observed();
  struct lxg_light_decline_options options = lxg_lightcurve_decline_defaults();
  options.peak_given = true;
  options.peak_time = v1668cyg_peak_jd;
  options.peak_magnitude = v1668cyg_peak_v;
  options.peak_error = 0.1;
  struct lxg_light_decline d;
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  ck_assert(d.t2.known && d.t3.known);
  assert_near(d.t2.value, 12.2, 1.0);
  assert_near(d.t3.value, 24.3, 1.0);
  ck_assert(d.t3.in_gap && !d.t2.in_gap);
  ck_assert(d.t2.lo68 < d.t2.value && d.t2.value < d.t2.hi68 && d.t2.hi68 - d.t2.lo68 < 3.0);
  /* both published relations between t2 and t3 (Hachisu & Kato 2006; Shafter 2026) within their quoted errors: 3.5 d */
  assert_near(d.t3.value, 1.68 * d.t2.value + 1.9, 3.5);
  /* without a stated peak the brightest point is the second one, 1.6 mag too late */
  options.peak_given = false;
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  ck_assert(!d.peak_at_edge);
  assert_close(d.peak_magnitude, 7.82, 1e-12);
  assert_close(lxg_lightcurve_jd(&curve, d.peak_time), 2443772.3, 1e-12);
  lxg_lightcurve_free(&curve);
}
END_TEST

/* Way (a) with BC = 0: luminosity at peak, and the slope of the decline in log time counted from JD 2443759.5 (the star was
 * at 12 mag on JD 2443759.84): F ~ t^-1.75 (Hachisu & Kato 2006) is 4.375 mag per decade; 4.2 to 5.2 is allowed. */
START_TEST(v1668cyg_luminosity) {
  const double modulus = lxg_distance_modulus(3300.0 * LXG_PARSEC);
  /* M_V = -7.5 +- 0.5 (Slovak & Vogt 1979: E(B-V) = 0.38, 3.3 kpc), L = 8.4e4 Lsun for BC = 0, A_V = 1.18 */
  const double peak = v1668cyg_peak_v - modulus - 1.18;
  assert_near(peak, -7.57, 0.005);
  assert_near(peak, -7.5, 0.5);
  assert_close(lxg_photometry_luminosity(peak, 0.0) / LXG_SOLAR_LUMINOSITY, 8.4e4, 0.01);
  const double early = lxg_photometry_luminosity(7.87 - modulus - 1.18, 0.0);
  const double late = lxg_photometry_luminosity(10.75 - modulus - 1.18, 0.0);
  const double slope = 2.5 * log10(early / late) / log10((813.253 - 759.5) / (771.3 - 759.5));
  ck_assert_msg(slope > 4.2 && slope < 5.2, "slope %.3f mag per decade", slope);
}
END_TEST

/* F ~ t^-1.75 from the outburst, maximum 2.7 d after it: t2 = 2.7 (10^(2/4.375) - 1), t3 likewise (exact), and the
 * published relation t3 = (1.68 +- 0.08) t2 + (1.9 +- 1.5) follows from it. Straight lines on a dense grid: 1e-4. */
START_TEST(power_law_decline) {
  struct lxg_light_curve curve;
  lxg_lightcurve_init(LXG_TIME_DAYS, 0.0, &curve);
  for (int i = 0; i < 4000; i++) {
    const double t = 2.7 * pow(10.0, i / 3999.0);
    add(&curve, t, LXG_BAND_V, 4.3 + 4.375 * log10(t / 2.7), 0.01);
  }
  struct lxg_light_decline_options options = lxg_lightcurve_decline_defaults();
  options.draws = 0;
  struct lxg_light_decline d;
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  assert_close(d.t2.value, 2.7 * (pow(10.0, 2.0 / 4.375) - 1.0), 1e-4);
  assert_close(d.t3.value, 2.7 * (pow(10.0, 3.0 / 4.375) - 1.0), 1e-4);
  assert_close(d.t3.value, 1.69266 * d.t2.value + 0.69266 * 2.7, 2e-4);
  assert_near(d.t3.value, 1.68 * d.t2.value + 1.9, 1.5);
  ck_assert(d.peak_at_edge && d.gap_count == 0 && isnan(d.t2.lo68) && d.used == 4000);
  lxg_lightcurve_free(&curve);
}
END_TEST

/* A straight decline of 0.1 mag/d with errors of 0.05 mag, points every 4 d and the level half way between two of them: the
 * error is (0.05^2 + 0.05^2/2)^(1/2)/0.1 = 0.612 d (the peak, and the mean of two points). 20000 draws give it to a per
 * cent, the few earlier crossings by noise are within 3 %. */
START_TEST(decline_error) {
  struct lxg_light_curve curve;
  lxg_lightcurve_init(LXG_TIME_DAYS, 0.0, &curve);
  add(&curve, 0.0, LXG_BAND_V, 5.0, 0.05);
  for (int i = 0; i < 12; i++) {
    const double t = 2.0 + 4.0 * i;
    add(&curve, t, LXG_BAND_V, 5.0 + 0.1 * t, 0.05);
  }
  struct lxg_light_decline_options options = lxg_lightcurve_decline_defaults();
  options.draws = 20000;
  struct lxg_light_decline d;
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  assert_close(d.t2.value, 20.0, 1e-12);
  assert_close((d.t2.hi68 - d.t2.lo68) / (2.0 * 0.994458), sqrt(0.05 * 0.05 * 1.5) / 0.1, 0.03);
  ck_assert(d.t2.undefined == 0.0 && d.gap_count == 4); /* 4 d is over a fifth of 6, 10, 14 and 18 d */
  lxg_lightcurve_free(&curve);
}
END_TEST

/* A dust dip from day 18 to 26: with it the light crosses 2 mag on day 18 and comes back; left out, on day 20. */
START_TEST(dust_dip) {
  struct lxg_light_curve curve;
  lxg_lightcurve_init(LXG_TIME_DAYS, 0.0, &curve);
  for (int t = 0; t <= 40; t += 2) {
    add(&curve, t, LXG_BAND_V, 5.0 + 0.1 * t + (t >= 18 && t <= 26 ? 1.7 : 0.0), 0.01);
  }
  struct lxg_light_decline_options options = lxg_lightcurve_decline_defaults();
  options.draws = 0;
  struct lxg_light_decline d;
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  assert_close(d.t2.value, 16.0 + 2.0 * 0.4 / 1.9, 1e-9);
  assert_close(d.t3.value, 16.0 + 2.0 * 1.4 / 1.9, 1e-9);
  assert_close(d.t3.last, 30.0, 1e-9); /* after the dip the level is crossed for good */
  size_t count = 0;
  assert_status(lxg_lightcurve_exclude(&curve, 18.0, 26.0, &count, NULL), LXG_OK, NULL);
  ck_assert_uint_eq(count, 5);
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  assert_close(d.t2.value, 20.0, 1e-9);
  assert_close(d.t3.value, 30.0, 1e-9);
  ck_assert(d.t2.in_gap && !d.t3.in_gap);
  ck_assert_uint_eq(d.excluded, 5);
  ck_assert_uint_eq(d.gap_count, 1);
  ck_assert_uint_eq(d.gap[0].excluded, 5);
  assert_close(d.gap[0].from, 16.0, 1e-12);
  assert_close(d.gap[0].to, 28.0, 1e-12);
  /* one point left out of an even row: 4 d are no empty gap at day 36, yet the bridge is declared */
  assert_status(lxg_lightcurve_exclude(&curve, 34.0, 34.0, &count, NULL), LXG_OK, NULL);
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  ck_assert_uint_eq(d.gap_count, 2);
  ck_assert_uint_eq(d.gap[1].excluded, 1);
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_lightcurve_exclude(&curve, 26.0, 18.0, NULL, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "lightcurve-window");
  lxg_lightcurve_free(&curve);
}
END_TEST

START_TEST(decline_none) {
  struct lxg_light_curve curve;
  struct lxg_light_decline d;
  struct lxg_error error = {0};
  lxg_lightcurve_init(LXG_TIME_DAYS, 0.0, &curve);
  struct lxg_light_decline_options options = lxg_lightcurve_decline_defaults();
  ck_assert_int_eq(lxg_lightcurve_decline(&curve, &options, &d, &error), LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "decline-points");
  add(&curve, 1.0, LXG_BAND_V, 6.0, 0.02);
  add(&curve, 5.0, LXG_BAND_V, 5.1, 0.02);
  const struct lxg_light_point limit = {
      .time = 30.0, .band = LXG_BAND_V, .magnitude = 11.0, .error = 0.0, .upper_limit = true, .row = 3};
  assert_status(lxg_lightcurve_add(&curve, &limit, NULL), LXG_OK, NULL);
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  ck_assert(!d.t2.known);
  ck_assert_str_eq(d.t2.reason, "decline-peak-last");
  ck_assert_uint_eq(d.limits, 1);
  add(&curve, 25.0, LXG_BAND_V, 7.6, 0.02);
  add(&curve, 9.0, LXG_BAND_B, 9.9, 0.02);
  lxg_lightcurve_sort(&curve);
  assert_status(lxg_lightcurve_decline(&curve, &options, &d, NULL), LXG_OK, NULL);
  ck_assert(d.t2.known && !d.t3.known);
  assert_close(d.t2.value, 20.0 * 2.0 / 2.5, 1e-12);
  ck_assert_str_eq(d.t3.reason, "decline-not-reached");
  assert_close(d.t3.at_least, 20.0, 1e-12);
  ck_assert(d.t3.undefined == 1.0 && isnan(d.t3.value) && isnan(d.t3.lo68));
  options.gap_days = -1.0;
  ck_assert_int_eq(lxg_lightcurve_decline(&curve, &options, &d, &error), LXG_INPUT);
  options = lxg_lightcurve_decline_defaults();
  options.peak_given = true;
  options.peak_time = NAN;
  ck_assert_int_eq(lxg_lightcurve_decline(&curve, &options, &d, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "decline-options");
  lxg_lightcurve_free(&curve);
}
END_TEST

START_TEST(bad_points) {
  struct lxg_light_curve curve;
  struct lxg_error error = {0};
  lxg_lightcurve_init(LXG_TIME_MJD, 43763.0, &curve);
  struct lxg_light_point point = {.time = NAN, .band = LXG_BAND_V, .magnitude = 7.0, .row = 12};
  ck_assert_int_eq(lxg_lightcurve_add(&curve, &point, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "lightcurve-time");
  point.time = 43764.25;
  point.magnitude = 99.99;
  ck_assert_int_eq(lxg_lightcurve_add(&curve, &point, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "lightcurve-magnitude");
  ck_assert_ptr_nonnull(strstr(error.line[0], "row 12"));
  point.magnitude = 7.0;
  point.error = -0.1;
  ck_assert_int_eq(lxg_lightcurve_add(&curve, &point, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "lightcurve-error");
  point.error = 0.1;
  point.band = LXG_BAND_COUNT;
  ck_assert_int_eq(lxg_lightcurve_add(&curve, &point, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "band-unknown");
  point.band = LXG_BAND_V;
  assert_status(lxg_lightcurve_add(&curve, &point, &error), LXG_OK, &error);
  assert_close(curve.point[0].time, 1.25, 1e-12);
  assert_close(lxg_lightcurve_jd(&curve, 1.25), 2443764.75, 1e-15); /* MJD 0 is JD 2400000.5 */
  lxg_lightcurve_free(&curve);
  lxg_lightcurve_init(LXG_TIME_DAYS, 0.0, &curve);
  ck_assert(isnan(lxg_lightcurve_jd(&curve, 3.0)));
}
END_TEST

/* Invented epochs of a black body of 8700 K and 70 Rsun at 2.9 kpc behind A_V = 1.2, R_V = 3.0; the observer's magnitudes give the
 * body back. Weighted mean of two B values by hand. */
START_TEST(groups) {
  const double modulus = lxg_distance_modulus(2900.0 * LXG_PARSEC);
  static const enum lxg_band bands[3] = {LXG_BAND_B, LXG_BAND_V, LXG_BAND_I};
  struct lxg_light_curve curve;
  lxg_lightcurve_init(LXG_TIME_DAYS, 0.0, &curve);
  for (int i = 0; i < 3; i++) {
    double extinction = 0.0;
    assert_status(lxg_extinction_band(bands[i], 1.2, 3.0, &extinction, NULL), LXG_OK, NULL);
    add(&curve, 4.0 + 0.01 * i, bands[i],
        lxg_photometry_blackbody(bands[i], 8700.0, 70.0 * LXG_SOLAR_RADIUS) + modulus + extinction, 0.03);
  }
  add(&curve, 7.00, LXG_BAND_B, 9.20, 0.10);
  add(&curve, 7.03, LXG_BAND_B, 9.50, 0.05);
  add(&curve, 7.05, LXG_BAND_V, 9.10, 0.0);
  add(&curve, 9.00, LXG_BAND_V, 9.40, 0.05); /* alone */
  add(&curve, 12.0, LXG_BAND_V, 9.80, 0.05);
  const struct lxg_light_point limit = {
      .time = 12.01, .band = LXG_BAND_B, .magnitude = 9.0, .upper_limit = true, .row = 9};
  assert_status(lxg_lightcurve_add(&curve, &limit, NULL), LXG_OK, NULL);
  lxg_lightcurve_sort(&curve);
  struct lxg_light_group found[4];
  size_t count = 0;
  struct lxg_error error = {0};
  assert_status(lxg_lightcurve_groups(&curve, 0.1, 2, 0.01, found, 4, &count, &error), LXG_OK, &error);
  ck_assert_uint_eq(count, 2);
  struct lxg_photometry_state state;
  const struct lxg_photometry_range range = lxg_photometry_default_range();
  assert_status(lxg_lightcurve_group_state(&found[0], modulus, 1.2, 3.0, range, &state, &error), LXG_OK,
                &error);
  assert_close(state.temperature, 8700.0, 1e-6);
  assert_close(state.radius, 70.0 * LXG_SOLAR_RADIUS, 1e-6);
  assert_close(found[1].magnitude[LXG_BAND_B], (9.20 * 100.0 + 9.50 * 400.0) / 500.0, 1e-12);
  assert_close(found[1].error[LXG_BAND_B], 1.0 / sqrt(500.0), 1e-12);
  assert_close(found[1].error[LXG_BAND_V], 0.01, 1e-12);
  assert_close(found[1].span, 0.05, 1e-9);
  assert_close(found[1].time, (7.0 + 7.03 + 7.05) / 3.0, 1e-12);
  assert_status(lxg_lightcurve_groups(&curve, 0.02, 2, 0.01, found, 4, &count, &error), LXG_OK, &error);
  ck_assert_uint_eq(count, 2); /* 7.03 and 7.05 still agree, 7.00 does not */
  ck_assert_uint_eq(found[1].points, 2);
  ck_assert_int_eq(lxg_lightcurve_groups(&curve, 0.1, 1, 0.01, found, 3, &count, &error), LXG_LIMIT);
  ck_assert_str_eq(error.code, "groups-capacity");
  ck_assert_int_eq(lxg_lightcurve_groups(&curve, -0.1, 1, 0.01, found, 3, &count, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "groups-options");
  found[0] =
      (struct lxg_light_group){.bands = 1, .has = {[LXG_BAND_V] = true}, .error = {[LXG_BAND_V] = 0.1}};
  ck_assert_int_eq(lxg_lightcurve_group_state(&found[0], modulus, 1.2, 3.0, range, &state, &error),
                   LXG_INPUT);
  ck_assert_int_eq(lxg_lightcurve_group_state(&found[0], modulus, -1.0, 3.0, range, &state, &error),
                   LXG_INPUT);
  ck_assert_str_eq(error.code, "extinction-value");
  lxg_lightcurve_free(&curve);
}
END_TEST

Suite *suite_lightcurve(void);
Suite *suite_lightcurve(void) {
  Suite *suite = suite_create("lightcurve");
  TCase *tests = tcase_create("lightcurve");
  tcase_add_test(tests, v1668cyg_decline);
  tcase_add_test(tests, v1668cyg_luminosity);
  tcase_add_test(tests, power_law_decline);
  tcase_add_test(tests, decline_error);
  tcase_add_test(tests, dust_dip);
  tcase_add_test(tests, decline_none);
  tcase_add_test(tests, bad_points);
  tcase_add_test(tests, groups);
  suite_add_tcase(suite, tests);
  return suite;
}
