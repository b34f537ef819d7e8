/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_lines.c - wavelengths against published pairs and two other published dispersion formulas, Doppler shifts
 * against identities of special relativity, error propagation against differences, assignment against Bayes' rule
 * written out, and the naming of bad rows.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/lines.h"

#include <gsl/gsl_randist.h>
#include <gsl/gsl_rng.h>
#include <string.h>

static const double km = 1e5, angstrom = 1e-8;

/* Air and vacuum wavelengths of a widely used survey line list (SDSS spectroscopic line table, from memory), 0.01
 * Angstrom. */
static const double pairs[][2] = {{4861.363, 4862.721}, {4958.911, 4960.295}, {5006.843, 5008.239},
                                  {6562.80, 6564.61},   {6716.44, 6718.29},   {6730.82, 6732.68}};

/* Ciddor 1996, Appl. Opt. 35, 1566: n - 1 = 0.05792105/(238.0185 - s^2) + 0.00167917/(57.362 - s^2); Edlen 1953
 * in the form of Morton 1991: n - 1 = 6.4328e-5 + 2.94981e-2/(146 - s^2) + 2.5540e-4/(41 - s^2). Both from
 * memory. */
static double ciddor(double vacuum_angstrom) {
  const double s2 = pow(1e4 / vacuum_angstrom, 2.0);
  return 1.0 + 0.05792105 / (238.0185 - s2) + 0.00167917 / (57.362 - s2);
}

static double edlen(double vacuum_angstrom) {
  const double s2 = pow(1e4 / vacuum_angstrom, 2.0);
  return 1.0 + 6.4328e-5 + 2.94981e-2 / (146.0 - s2) + 2.5540e-4 / (41.0 - s2);
}

START_TEST(air_and_vacuum) {
  for (size_t i = 0; i < sizeof pairs / sizeof pairs[0]; i++) {
    assert_near(lxg_line_vacuum(pairs[i][0] * angstrom) / angstrom, pairs[i][1], 0.01);
  }
  for (double w = 2100.0; w < 25000.0; w *= 1.17) {
    /* The three determinations of the index agree to 2e-8 above 3000 Angstrom and 1e-7 below: 0.03 km/s at worst.
     * */
    const double agreement = w > 3000.0 ? 3e-8 : 1e-7;
    assert_near(lxg_line_refraction(w * angstrom), ciddor(w), agreement);
    assert_near(lxg_line_refraction(w * angstrom), edlen(w), agreement);
    const double air = w / lxg_line_refraction(w * angstrom);
    assert_close(lxg_line_vacuum(air * angstrom), w * angstrom, 1e-15);
  }
}
END_TEST

/* Opposite shifts of one speed multiply to 1; speeds add as (a + b)/(1 + ab); first order v/c = q - 1; 0.6 c has
 * q = 2. */
START_TEST(doppler) {
  const double c = LXG_SPEED_OF_LIGHT;
  assert_close(lxg_line_doppler(2.0), 0.6 * c, 1e-15);
  assert_close(lxg_line_doppler(0.5), -0.6 * c, 1e-15);
  assert_close(lxg_line_doppler(1.0 + 1e-7), 1e-7 * c, 1e-7);
  const double a = lxg_line_doppler(1.37) / c, b = lxg_line_doppler(0.83) / c;
  assert_close(lxg_line_doppler(1.37 * 0.83), c * (a + b) / (1.0 + a * b), 1e-14);
}
END_TEST

static struct lxg_lines *make(const struct lxg_line_input *input, size_t count) {
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_lines_create(input, count, &lines, &error), LXG_OK, &error);
  return lines;
}

/* The first P Cygni line of V1668 Cyg 1978: H alpha at -600 km/s (IAU Circular 3268) in every way of writing it.
 * */
START_TEST(all_measures_agree) {
  const double rest = 6562.80 * angstrom, vacuum_rest = lxg_line_vacuum(rest);
  const double b = 600.0 * km / LXG_SPEED_OF_LIGHT, q = sqrt((1.0 - b) / (1.0 + b));
  const double vacuum = vacuum_rest * q, air = vacuum / lxg_line_refraction(vacuum);
  const double width = vacuum_rest * b / sqrt(1.0 - b * b); /* half of (1/q - q) */
  const struct lxg_line_input input[] = {
      {.epoch = 1.0,
       .label = "Ha",
       .measure = LXG_LINE_WAVELENGTH,
       .medium = LXG_LINE_VACUUM,
       .rest = vacuum_rest,
       .value = vacuum,
       .error = 0.3 * angstrom},
      {.measure = LXG_LINE_WAVELENGTH,
       .medium = LXG_LINE_AIR,
       .rest = rest,
       .value = air,
       .error = 0.3 * angstrom},
      {.measure = LXG_LINE_VELOCITY, .value = -600.0 * km, .error = 14.0 * km},
      {.measure = LXG_LINE_SPEED, .value = 600.0 * km, .error = 14.0 * km},
      {.kind = LXG_LINE_HALF_MAXIMUM,
       .measure = LXG_LINE_HALF_WIDTH,
       .rest = vacuum_rest,
       .value = width,
       .error = 0.3 * angstrom},
      {.kind = LXG_LINE_ZERO_INTENSITY,
       .measure = LXG_LINE_WAVELENGTH,
       .rest = vacuum_rest,
       .value = vacuum_rest / q,
       .error = 0.3 * angstrom},
      {.kind = LXG_LINE_HALF_MAXIMUM, .measure = LXG_LINE_VELOCITY, .value = -600.0 * km, .error = 14.0 * km},
  };
  struct lxg_lines *lines = make(input, 7);
  for (size_t i = 0; i < lines->count; i++) {
    assert_close(lines->line[i].velocity, 600.0 * km, 1e-11); /* rounding of q - 1 = 2e-3 */
    assert_close(lines->line[i].error, 13.7 * km, 0.025);     /* 0.3 Angstrom of H alpha is 13.7 km/s */
    ck_assert(lines->line[i].row == i + 1);
  }
  ck_assert_str_eq(lines->line[0].label, "Ha");
  ck_assert_str_eq(lines->line[1].component, "");
  lxg_lines_destroy(lines);
}
END_TEST

/* Errors of both spectral measures by differences of the velocity itself, at a tenth of c where relativity
 * matters. */
START_TEST(error_propagation) {
  const double rest = 1548.2 * angstrom, step = 1e-4 * angstrom;
  for (int k = 0; k < 2; k++) {
    struct lxg_line_input input[2];
    for (int i = 0; i < 2; i++) {
      input[i] = (struct lxg_line_input){.kind = k == 0 ? LXG_LINE_BLUE_EDGE : LXG_LINE_HALF_MAXIMUM,
                                         .measure = k == 0 ? LXG_LINE_WAVELENGTH : LXG_LINE_HALF_WIDTH,
                                         .rest = rest,
                                         .value = (k == 0 ? 0.9 : 0.1) * rest + (2 * i - 1) * step,
                                         .error = 2.0 * step};
    }
    struct lxg_lines *lines = make(input, 2);
    assert_close(fabs(lines->line[1].velocity - lines->line[0].velocity), lines->line[0].error, 1e-5);
    lxg_lines_destroy(lines);
  }
}
END_TEST

START_TEST(peaks_keep_their_sign) {
  const struct lxg_line_input input[] = {
      {.kind = LXG_LINE_EMISSION_PEAK, .measure = LXG_LINE_VELOCITY, .value = -37.0 * km, .error = 5.0 * km},
      {.kind = LXG_LINE_EMISSION_PEAK,
       .measure = LXG_LINE_VELOCITY,
       .value = 21.0 * km,
       .error = 5.0 * km,
       .row = 17}};
  struct lxg_lines *lines = make(input, 2);
  ck_assert(lines->line[0].velocity == -37.0 * km && lines->line[1].velocity == 21.0 * km);
  ck_assert(lines->line[1].row == 17);
  lxg_lines_destroy(lines);
}
END_TEST

static const struct lxg_line_input good = {.epoch = 3.0,
                                           .label = "Hb",
                                           .measure = LXG_LINE_WAVELENGTH,
                                           .medium = LXG_LINE_AIR,
                                           .rest = 4861.36e-8,
                                           .value = 4850.0e-8,
                                           .error = 0.2e-8};

static void refuse(struct lxg_line_input input, const char *code) {
  const struct lxg_line_input rows[2] = {good, input};
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_lines_create(rows, 2, &lines, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, code);
  ck_assert_msg(strstr(error.line[0], "row 2") != NULL, "%s", error.line[0]);
  ck_assert(lines == NULL && error.count == 2);
}

static struct lxg_line_input with(enum lxg_line_kind kind, enum lxg_line_measure measure, double rest,
                                  double value, double sigma) {
  struct lxg_line_input input = good;
  input.kind = kind;
  input.measure = measure;
  input.rest = rest;
  input.value = value;
  input.error = sigma;
  return input;
}

START_TEST(bad_rows_are_refused) {
  struct lxg_line_input epoch = good;
  epoch.epoch = NAN;
  refuse(epoch, "line-epoch");
  refuse(with(LXG_LINE_KINDS, LXG_LINE_SPEED, 0.0, 1e8, 1e6), "line-kind");
  refuse(with(LXG_LINE_ABSORPTION, (enum lxg_line_measure)9, 0.0, 1e8, 1e6), "line-measure");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_HALF_WIDTH, 5e-5, 1e-7, 1e-8), "line-measure");
  refuse(with(LXG_LINE_EMISSION_PEAK, LXG_LINE_SPEED, 0.0, 1e8, 1e6), "line-measure");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_WAVELENGTH, -5e-5, 5e-5, 1e-8), "line-rest");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_WAVELENGTH, 1.9e-5, 1.8e-5, 1e-8), "line-rest");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_WAVELENGTH, 5e-5, 0.0, 1e-8), "line-value");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_WAVELENGTH, 5e-5, 1.9e-5, 1e-8), "line-value");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_VELOCITY, 0.0, -3e10, 1e6), "line-value");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_VELOCITY, 0.0, NAN, 1e6), "line-value");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_SPEED, 0.0, -1e8, 1e6), "line-value");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_VELOCITY, 0.0, -1e8, 0.0), "line-error");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_VELOCITY, 0.0, -1e8, INFINITY), "line-error");
  refuse(with(LXG_LINE_ABSORPTION, LXG_LINE_VELOCITY, 0.0, 1e7, 1e6), "line-redward");
  refuse(with(LXG_LINE_BLUE_EDGE, LXG_LINE_WAVELENGTH, 5e-5, 5.01e-5, 1e-8), "line-redward");
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_lines_create(&good, 0, &lines, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "line-count");
  lxg_lines_destroy(NULL);
}
END_TEST

/* Twelve bad rows among thirty: the first is the cause, more follow, the last line counts them all. */
START_TEST(many_bad_rows_are_counted) {
  struct lxg_line_input rows[30];
  for (int i = 0; i < 30; i++) {
    rows[i] = good;
    if (i % 5 < 2) {
      rows[i].error = -1e-9 * i - 1e-10;
    }
  }
  struct lxg_lines *lines = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_lines_create(rows, 30, &lines, &error), LXG_INPUT);
  ck_assert_int_eq((int)error.count, LXG_ERROR_LINES);
  ck_assert(strstr(error.line[0], "row 1 (Hb)") != NULL && strstr(error.line[1], "row 2 (Hb)") != NULL &&
            strstr(error.line[2], "row 6 (Hb)") != NULL);
  ck_assert_str_eq(error.line[LXG_ERROR_LINES - 1], "checking 30 line measurements, of which 12 are bad");
}
END_TEST

/* ---- models ---- */

/* Speeds of a made-up case: photosphere 500 + t, terminal 900 + t, at depth tau 700 - 100 tau, shell 400 from t =
 * 10 s on [km/s]. */
static enum lxg_status speeds(void *context, double epoch, enum lxg_line_model model, double depth,
                              double *velocity, struct lxg_error *reason) {
  if (context != NULL && epoch == *(const double *)context) {
    return lxg_error_set(reason, LXG_MEMORY, "memory", "no room");
  }
  if (model == LXG_LINE_MODEL_SHELL && epoch < 10.0) {
    return lxg_error_set(reason, LXG_NO_SOLUTION, "shell-not-yet", "no shell before 10 s");
  }
  *velocity = km * (model == LXG_LINE_MODEL_PHOTOSPHERE ? 500.0 + epoch
                    : model == LXG_LINE_MODEL_TERMINAL  ? 900.0 + epoch
                    : model == LXG_LINE_MODEL_DEPTH     ? 700.0 - 100.0 * depth
                                                        : 400.0);
  ck_assert(model != LXG_LINE_MODEL_REST);
  return LXG_OK;
}

static struct lxg_line_input row(double epoch, enum lxg_line_kind kind, double speed, double sigma,
                                 const char *component) {
  return (struct lxg_line_input){.epoch = epoch,
                                 .label = "x",
                                 .component = component,
                                 .kind = kind,
                                 .measure = LXG_LINE_VELOCITY,
                                 .value = -speed * km,
                                 .error = sigma * km};
}

START_TEST(map_and_residuals) {
  const struct lxg_line_input input[] = {
      row(20.0, LXG_LINE_ABSORPTION, 500.0, 10.0, NULL), row(20.0, LXG_LINE_BLUE_EDGE, 950.0, 15.0, NULL),
      row(5.0, LXG_LINE_HALF_MAXIMUM, 845.0, 12.0, NULL), row(5.0, LXG_LINE_ZERO_INTENSITY, 905.0, 7.0, NULL),
      row(5.0, LXG_LINE_EMISSION_PEAK, 6.0, 4.0, NULL)};
  struct lxg_lines *lines = make(input, 5);
  struct lxg_line_map map;
  struct lxg_line_comparison r[5];
  struct lxg_line_chi2 chi2;
  struct lxg_error error = {0};
  lxg_line_map_default(&map);
  assert_status(lxg_lines_compare(lines, &map, NULL, 0.0, speeds, NULL, r, &chi2, &error), LXG_OK, &error);
  const double expected[] = {-2.0, 2.0, -5.0, 0.0, -1.5};
  for (int i = 0; i < 5; i++) {
    ck_assert(r[i].compared);
    assert_near(r[i].residual, expected[i], 1e-12);
  }
  assert_close(chi2.chi2, 4.0 + 4.0 + 25.0 + 2.25, 1e-12);
  assert_close(chi2.p_value, 1.341311024574378e-6, 1e-9); /* scipy.stats.chi2.sf(35.25, 5) */
  ck_assert(chi2.compared == 5 && chi2.left == 0 && chi2.worst == 2);
  /* with a model scatter of 5 km/s: sigma^2 = 12^2 + 5^2 = 13^2 */
  assert_status(lxg_lines_compare(lines, &map, NULL, 5.0 * km, speeds, NULL, r, &chi2, &error), LXG_OK,
                &error);
  assert_close(r[2].residual, -60.0 / 13.0, 1e-12);
  assert_status(lxg_line_map_set(&map, "half-maximum", "depth 0.4", &error), LXG_OK, &error);
  assert_status(lxg_line_map_set(&map, "zero-intensity", "shell", &error), LXG_OK, &error);
  assert_status(lxg_lines_compare(lines, &map, NULL, 0.0, speeds, NULL, r, &chi2, &error), LXG_OK, &error);
  assert_near(r[2].residual, (845.0 - 660.0) / 12.0, 1e-12);
  ck_assert(!r[3].compared && isnan(r[3].residual) && chi2.left == 1);
  ck_assert_str_eq(r[3].reason_code, "shell-not-yet");
  ck_assert_str_eq(r[3].reason, "no shell before 10 s");
  const double given[] = {510.0 * km, NAN, 845.0 * km, 905.0 * km, 0.0};
  assert_status(lxg_lines_compare_given(lines, given, 0.0, r, &chi2, &error), LXG_OK, &error);
  assert_near(chi2.chi2, 1.0 + 2.25, 1e-12);
  ck_assert_str_eq(r[1].reason_code, "line-model-none");
  lxg_lines_destroy(lines);
}
END_TEST

START_TEST(map_refuses) {
  struct lxg_line_map map;
  struct lxg_error error = {0};
  lxg_line_map_default(&map);
  const char *const bad[][2] = {{"trough", "shell"},          {"absorption", "wind"},
                                {"absorption", "depth"},      {"absorption", "depth -1"},
                                {"absorption", "depth 0.5x"}, {"absorption", "depth "}};
  for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++) {
    ck_assert_int_eq(lxg_line_map_set(&map, bad[i][0], bad[i][1], &error), LXG_INPUT);
    ck_assert_str_eq(error.code, "line-map");
  }
  ck_assert(map.kind[LXG_LINE_ABSORPTION].model == LXG_LINE_MODEL_PHOTOSPHERE);
  for (int k = 0; k < LXG_LINE_KINDS; k++) {
    ck_assert_int_eq((int)lxg_line_kind_find(lxg_line_kind_name((enum lxg_line_kind)k)), k);
  }
  ck_assert_int_eq((int)lxg_line_kind_find("edge"), LXG_LINE_KINDS);
  ck_assert_str_eq(lxg_line_kind_name(LXG_LINE_KINDS), "unknown");
  ck_assert_str_eq(lxg_line_model_name(LXG_LINE_MODELS), "unknown");
  ck_assert_str_eq(lxg_line_system_name(LXG_LINE_SYSTEMS), "unknown");
}
END_TEST

/* Posterior of one row by Bayes' rule, written out with the normal density of GSL. */
START_TEST(posterior_of_a_row) {
  const struct lxg_line_input input[] = {row(30.0, LXG_LINE_ABSORPTION, 470.0, 40.0, NULL)};
  struct lxg_lines *lines = make(input, 1);
  struct lxg_line_map map;
  struct lxg_line_assignment a;
  struct lxg_error error = {0};
  const struct lxg_line_assign_settings s = {
      .prior = {0.5, 0.3, 0.2}, .scatter = 30.0 * km, .other_range = 4e8};
  lxg_line_map_default(&map);
  assert_status(lxg_lines_assign(lines, &map, speeds, NULL, &s, &a, &error), LXG_OK, &error);
  const double wind = 0.5 * gsl_ran_gaussian_pdf(60.0 * km, 50.0 * km);
  const double shell = 0.3 * gsl_ran_gaussian_pdf(70.0 * km, 50.0 * km), other = 0.2 / 4e8;
  assert_close(a.probability[LXG_LINE_WIND], wind / (wind + shell + other), 1e-12);
  assert_close(a.probability[LXG_LINE_SHELL], shell / (wind + shell + other), 1e-12);
  assert_close(a.probability[LXG_LINE_OTHER], other / (wind + shell + other), 1e-12);
  ck_assert(a.system == LXG_LINE_WIND && !a.declared && a.informative && a.shell_velocity == 400.0 * km);
  lxg_lines_destroy(lines);
}
END_TEST

/* Named components are judged as one: rows that alone are undecided decide together; a row before there is a
 * shell cannot be it, nor can its component; declared names are taken; peaks tell nothing; a speed far from both
 * is other. */
START_TEST(components) {
  const struct lxg_line_input input[] = {row(50.0, LXG_LINE_ABSORPTION, 425.0, 60.0, "principal"),
                                         row(51.0, LXG_LINE_ABSORPTION, 470.0, 60.0, "principal"),
                                         row(52.0, LXG_LINE_ABSORPTION, 380.0, 60.0, "principal"),
                                         row(53.0, LXG_LINE_ABSORPTION, 400.0, 60.0, "principal"),
                                         row(5.0, LXG_LINE_ABSORPTION, 400.0, 60.0, "early"),
                                         row(60.0, LXG_LINE_ABSORPTION, 400.0, 60.0, "early"),
                                         row(50.0, LXG_LINE_ABSORPTION, 400.0, 10.0, "wind"),
                                         row(50.0, LXG_LINE_EMISSION_PEAK, 0.0, 5.0, NULL),
                                         row(50.0, LXG_LINE_ABSORPTION, 2400.0, 60.0, NULL)};
  enum { N = 9 };
  struct lxg_lines *lines = make(input, N);
  struct lxg_line_map map;
  struct lxg_line_assignment a[N];
  struct lxg_line_comparison r[N];
  struct lxg_line_chi2 chi2;
  struct lxg_error error = {0};
  lxg_line_map_default(&map);
  assert_status(lxg_lines_assign(lines, &map, speeds, NULL, NULL, a, &error), LXG_OK, &error);
  for (int i = 0; i < 4; i++) {
    ck_assert(a[i].system == LXG_LINE_SHELL && a[i].probability[LXG_LINE_SHELL] > 0.99);
    ck_assert(a[i].probability[LXG_LINE_SHELL] == a[0].probability[LXG_LINE_SHELL]);
  }
  ck_assert(a[4].probability[LXG_LINE_SHELL] == 0.0 && a[5].probability[LXG_LINE_SHELL] == 0.0);
  ck_assert(a[5].system == LXG_LINE_WIND && isnan(a[4].shell_velocity));
  ck_assert(a[6].declared && a[6].system == LXG_LINE_WIND && a[6].probability[LXG_LINE_WIND] == 1.0);
  ck_assert(!a[7].informative);
  assert_close(a[7].probability[LXG_LINE_WIND], 0.45, 1e-14);
  ck_assert(a[8].system == LXG_LINE_OTHER && a[8].probability[LXG_LINE_OTHER] > 0.999);
  assert_status(lxg_lines_compare(lines, &map, a, 0.0, speeds, NULL, r, &chi2, &error), LXG_OK, &error);
  ck_assert(r[0].model == LXG_LINE_MODEL_SHELL && r[4].model == LXG_LINE_MODEL_PHOTOSPHERE);
  assert_near(r[0].residual, 25.0 / 60.0, 1e-12);
  assert_near(r[6].residual, -15.0, 1e-12);
  ck_assert_str_eq(r[8].reason_code, "line-other");
  ck_assert(r[7].compared && r[7].velocity == 0.0);
  lxg_lines_destroy(lines);
}
END_TEST

/* Calibration: 4000 rows drawn from wind, shell or neither with the priors; where the posterior of the shell lies
 * in a band, the share of true shells is its mean, within 4 binomial standard deviations. */
START_TEST(posterior_is_calibrated) {
  enum { N = 4000 };
  static struct lxg_line_input input[N];
  static struct lxg_line_assignment a[N];
  static bool shell[N];
  gsl_rng *rng = gsl_rng_alloc(gsl_rng_mt19937);
  gsl_rng_set(rng, 4711);
  const struct lxg_line_assign_settings s = {.prior = {0.3, 0.5, 0.2}, .other_range = 1500.0 * km};
  for (int i = 0; i < N; i++) {
    const double u = gsl_rng_uniform(rng), sigma = 30.0 + 90.0 * gsl_rng_uniform(rng);
    shell[i] = u >= 0.3 && u < 0.8;
    const double centre = u < 0.3 ? 530.0 : 400.0;
    const double v = u < 0.8 ? centre + gsl_ran_gaussian(rng, sigma) : 1500.0 * gsl_rng_uniform(rng);
    input[i] = row(30.0, LXG_LINE_ABSORPTION, fmax(v, 1e-3), sigma, NULL);
  }
  gsl_rng_free(rng);
  struct lxg_lines *lines = make(input, N);
  struct lxg_line_map map;
  struct lxg_error error = {0};
  lxg_line_map_default(&map);
  assert_status(lxg_lines_assign(lines, &map, speeds, NULL, &s, a, &error), LXG_OK, &error);
  for (double low = 0.0; low < 0.95; low += 0.2) {
    double sum = 0.0, spread = 0.0;
    int true_shells = 0, count = 0;
    for (int i = 0; i < N; i++) {
      const double p = a[i].probability[LXG_LINE_SHELL];
      if (p >= low && p < low + 0.2) {
        sum += p;
        spread += p * (1.0 - p);
        true_shells += shell[i];
        count++;
      }
    }
    ck_assert_int_gt(count, 50);
    assert_near(true_shells, sum, 4.0 * sqrt(spread));
  }
  lxg_lines_destroy(lines);
}
END_TEST

START_TEST(failures_pass_through) {
  const struct lxg_line_input input[] = {row(20.0, LXG_LINE_ABSORPTION, 500.0, 10.0, NULL),
                                         row(21.0, LXG_LINE_ABSORPTION, 500.0, 10.0, NULL)};
  struct lxg_lines *lines = make(input, 2);
  struct lxg_line_map map;
  struct lxg_line_comparison r[2];
  struct lxg_line_assignment a[2];
  struct lxg_line_chi2 chi2;
  struct lxg_error error = {0};
  double fail_at = 21.0;
  lxg_line_map_default(&map);
  ck_assert_int_eq(lxg_lines_compare(lines, &map, NULL, 0.0, speeds, &fail_at, r, &chi2, &error), LXG_MEMORY);
  ck_assert_str_eq(error.code, "memory");
  ck_assert(strstr(error.line[1], "row 2") != NULL);
  ck_assert_int_eq(lxg_lines_assign(lines, &map, speeds, &fail_at, NULL, a, &error), LXG_MEMORY);
  ck_assert_int_eq(lxg_lines_compare(lines, &map, NULL, -1.0, speeds, NULL, r, &chi2, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "line-scatter");
  ck_assert_int_eq(lxg_lines_compare_given(lines, &fail_at, NAN, r, &chi2, &error), LXG_INPUT);
  struct lxg_line_assign_settings s;
  lxg_line_assign_defaults(&s);
  s.prior[1] = -0.1;
  ck_assert_int_eq(lxg_lines_assign(lines, &map, speeds, NULL, &s, a, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, "line-prior");
  lxg_lines_destroy(lines);
}
END_TEST

Suite *suite_lines(void);
Suite *suite_lines(void) {
  Suite *suite = suite_create("lines");
  TCase *tests = tcase_create("lines");
  tcase_add_test(tests, air_and_vacuum);
  tcase_add_test(tests, doppler);
  tcase_add_test(tests, all_measures_agree);
  tcase_add_test(tests, error_propagation);
  tcase_add_test(tests, peaks_keep_their_sign);
  tcase_add_test(tests, bad_rows_are_refused);
  tcase_add_test(tests, many_bad_rows_are_counted);
  tcase_add_test(tests, map_and_residuals);
  tcase_add_test(tests, map_refuses);
  tcase_add_test(tests, posterior_of_a_row);
  tcase_add_test(tests, components);
  tcase_add_test(tests, posterior_is_calibrated);
  tcase_add_test(tests, failures_pass_through);
  suite_add_tcase(suite, tests);
  return suite;
}
