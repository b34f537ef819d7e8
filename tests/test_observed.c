/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_observed.c - light curves through winds to ejecta, and their errors, by whole runs of `outburst`.
 *
 * Oracles: a round trip (family -> magnitudes -> history -> the same mass), with Planck's law and the extinction polynomials of
 * Cardelli, Clayton & Mathis 1989 written out here; the check winds of the project's specification (independent collocation); slopes
 * from separate runs against the spread of the Monte Carlo; V1668 Cyg 1978 (data/v1668cyg.h).
 */
#include "data/v1668cyg.h"
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/run.h"

#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

static const double modulus = 13.37, a_v = 1.23; /* [mag] of every invented star here */

/* A number of a report by its path, NaN if absent or null. */
static double number(const struct lxg_results *results, const char *path) {
  char copy[128];
  snprintf(copy, sizeof copy, "%s", path);
  struct lxg_node *node = lxg_document_root(results->report);
  char *rest = NULL;
  for (char *key = strtok_r(copy, ".", &rest); key != NULL; key = strtok_r(NULL, ".", &rest)) {
    node = lxg_node_find(node, key);
  }
  double value = NAN;
  struct lxg_error error = {0};
  return lxg_node_as_number(node, &value, &error) == LXG_OK ? value : (double)NAN;
}

static double cell(const struct lxg_results *results, const char *column, size_t row) {
  const struct lxg_column *found = lxg_table_find(results->epochs, column);
  ck_assert_msg(found != NULL, "no column %s", column);
  return found->number[row];
}

static void write_file(const char *path, const char *text) {
  FILE *file = fopen(path, "w");
  ck_assert_ptr_nonnull(file);
  ck_assert(fputs(text, file) >= 0);
  fclose(file);
}

/* A folder of its own for each test, with case.yaml and light.csv. */
static char folder[] = "/tmp/luxgale-observed-XXXXXX";
static void enter(void) {
  memcpy(folder, "/tmp/luxgale-observed-XXXXXX", sizeof folder);
  ck_assert_ptr_nonnull(mkdtemp(folder));
}
static void leave(void) {
  const char *const names[] = {"case.yaml", "light.csv"};
  char path[128];
  for (size_t i = 0; i < 2; i++) {
    snprintf(path, sizeof path, "%s/%s", folder, names[i]);
    unlink(path);
  }
  rmdir(folder);
}

/* Reads a case; the reference opacity, 1 Msun and R_0 = 5.56e8 cm unless `body` says otherwise. */
static enum lxg_status read_case(const char *body, struct lxg_case *input, struct lxg_error *error) {
  char path[128], text[4096];
  snprintf(path, sizeof path, "%s/case.yaml", folder);
  snprintf(text, sizeof text, "case: 1\nopacity: {formula: reference}\n%s", body);
  write_file(path, text);
  return lxg_case_read(input, path, NULL, 0, error);
}

static void run(const char *body, const struct lxg_run_options *options, struct lxg_case *input,
                struct lxg_results *results) {
  struct lxg_error error = {0};
  assert_status(read_case(body, input, &error), LXG_OK, &error);
  assert_status(lxg_run_outburst(input, options, results, &error), LXG_OK, &error);
}

static void done(struct lxg_case *input, struct lxg_results *results) {
  lxg_results_free(results);
  lxg_case_free(input);
}

static const char *const star = "star: {mass: 1.0}\ncomposition: {hydrogen: 0.35, metals: 0.02}\n";

/* Apparent magnitude of a black sphere: Planck's law, zero fluxes of Bessell 1979, extinction law of CCM89 at R_V = 3.1. */
static double apparent(double wavelength_um, double zero_jy, double temperature, double radius) {
  const double nu = 2.99792458e14 / wavelength_um, x = 6.62607015e-27 * nu / (1.380649e-16 * temperature);
  const double planck = 2.0 * 6.62607015e-27 * nu * nu * nu / (2.99792458e10 * 2.99792458e10) / expm1(x);
  const double flux = LXG_PI * planck * pow(radius / (10.0 * 3.0856775814913673e18), 2.0);
  const double y = 1.0 / wavelength_um - 1.82;
  static const double ca[] = {1.0, 0.17699, -0.50447, -0.02427, 0.72085, 0.01979, -0.77530, 0.32999};
  static const double cb[] = {0.0, 1.41338, 2.28305, 1.07233, -5.38434, -0.62251, 5.30260, -2.09002};
  double a = 0.0, b = 0.0;
  for (int i = 7; i >= 0; i--) {
    a = a * y + ca[i];
    b = b * y + cb[i];
  }
  return -2.5 * log10(flux / (zero_jy * 1e-23)) + modulus + a_v * (a + b / 3.1);
}

/* Magnitudes of every epoch of a direct run, in the light of the search. */
static void write_magnitudes(const struct lxg_results *direct, enum lxg_light light) {
  const struct lxg_composition composition = {.hydrogen = 0.35, .helium = 0.63, .metals = 0.02};
  char path[128];
  snprintf(path, sizeof path, "%s/light.csv", folder);
  FILE *file = fopen(path, "w");
  ck_assert_ptr_nonnull(file);
  fputs("time_d,band,magnitude,error\n", file);
  for (size_t i = 0; i < direct->epochs->rows; i++) {
    const double t = cell(direct, "photosphere_temperature_k", i);
    const double r = cell(direct, "photosphere_radius_rsun", i) * LXG_SOLAR_RADIUS;
    const struct lxg_freefree_wind wind = {cell(direct, "mass_loss_rate_msun_yr", i) * LXG_SOLAR_MASS /
                                               LXG_YEAR,
                                           cell(direct, "photosphere_speed_km_s", i) * 1e5, r};
    double magnitude = apparent(0.55, 3640.0, t, r);
    struct lxg_freefree_gas gas;
    ck_assert_int_eq(lxg_freefree_gas_init(&composition, t, 1.0, 1.0, &gas, NULL), LXG_OK);
    const double nu = lxg_band_frequency(LXG_BAND_V), black = lxg_photometry_blackbody(LXG_BAND_V, t, r);
    const double thin = lxg_photometry_magnitude(LXG_BAND_V, lxg_freefree_wind_thin(&gas, &wind, nu));
    if (light == LXG_LIGHT_FREEFREE) {
      magnitude += thin - black;
    } else if (light == LXG_LIGHT_LARGER) {
      magnitude += fmin(thin - black, 0.0);
    } else if (light == LXG_LIGHT_WHOLE) {
      magnitude += lxg_photometry_magnitude(LXG_BAND_V, lxg_freefree_wind_whole(&gas, &wind, nu)) - black;
    }
    fprintf(file, "%.10f,V,%.10f,0.05\n", cell(direct, "time_d", i), magnitude);
  }
  fclose(file);
}

/* A base luminosity that fades through the family, every half day. */
static void write_history(void) {
  char path[128];
  snprintf(path, sizeof path, "%s/light.csv", folder);
  FILE *file = fopen(path, "w");
  ck_assert_ptr_nonnull(file);
  fputs("time,luminosity [Ledd]\n", file);
  for (int i = 0; i <= 120; i++) {
    fprintf(file, "%.3f,%.12f\n", 0.5 * i, 1.0620 * exp(-0.5 * i / 900.0));
  }
  fclose(file);
}

/* Family -> magnitudes -> the same masses: 1e-3, from the 1e-4 of the family and the two ways of interpolating between epochs. */
START_TEST(round_trip) {
  const double tolerance = 1e-3;
  const enum lxg_light light = (enum lxg_light)_i;
  char body[1024];
  struct lxg_case input;
  struct lxg_results direct = {0}, back = {0};
  enter();
  write_history();
  snprintf(body, sizeof body, "%shold: {base_temperature: 1e8}\nluminosity: {kind: base, file: light.csv}\n",
           star);
  run(body, &(struct lxg_run_options){.epochs = true}, &input, &direct);
  ck_assert(number(&direct, "epochs.none") == 0.0);
  lxg_case_free(&input);
  write_magnitudes(&direct, light);
  snprintf(body, sizeof body,
           "%shold: {base_temperature: 1e8}\nluminosity: {kind: magnitude, file: light.csv, light: %s, "
           "distance_modulus: %.10f, a_v: %.10f}\n",
           star, lxg_observed_way_name((enum lxg_observed_way)light), modulus, a_v);
  run(body, &(struct lxg_run_options){.epochs = true}, &input, &back);
  ck_assert(number(&back, "epochs.none") == 0.0);
  static const char *const paths[] = {
      "ejecta.mass_msun",       "ejecta.kinetic_energy_erg",          "ejecta.mean_speed_km_s",
      "ejecta.momentum_g_cm_s", "ejecta.peak_mass_loss_rate_msun_yr", "energy.radiated_erg",
      "energy.lifting_erg"};
  for (size_t i = 0; i < sizeof paths / sizeof paths[0]; i++) {
    assert_close(number(&back, paths[i]), number(&direct, paths[i]), tolerance);
  }
  for (size_t i = 0; i < back.epochs->rows; i += 17) {
    assert_close(cell(&back, "mass_loss_rate_msun_yr", i), cell(&direct, "mass_loss_rate_msun_yr", i),
                 tolerance);
    const struct lxg_column *served = lxg_table_find(back.epochs, "light");
    const char *word = lxg_table_text(back.epochs, served, i);
    ck_assert(
        strcmp(word, lxg_observed_way_name((enum lxg_observed_way)light)) == 0 ||
        (light == LXG_LIGHT_LARGER && (strcmp(word, "photosphere") == 0 || strcmp(word, "freefree") == 0)));
  }
  lxg_results_free(&direct);
  done(&input, &back);
  leave();
}
END_TEST

/* Two bands, nothing held: the check wind whose photosphere they show, for ten days. Star and wind of the specification. */
START_TEST(colours) {
  const double radius = 7.83e8 * sqrt(pow(1.44 / 0.7, 2.0 / 3.0) - pow(0.7 / 1.44, 2.0 / 3.0));
  const double temperature = 12315.43, photosphere = 26.42353 * LXG_SOLAR_RADIUS;
  char body[1024], path[128], rows[1024];
  struct lxg_case input;
  struct lxg_results results = {0};
  enter();
  snprintf(path, sizeof path, "%s/light.csv", folder);
  const double b = apparent(0.44, 4260.0, temperature, photosphere),
               v = apparent(0.55, 3640.0, temperature, photosphere);
  snprintf(rows, sizeof rows,
           "time_d,band,magnitude,error\n0,V,%.9f,0.01\n0.1,B,%.9f,0.01\n10,V,%.9f,0.01\n10.1,B,%.9f,0.01\n",
           v, b, v, b);
  write_file(path, rows);
  snprintf(
      body, sizeof body,
      "star: {mass: 0.7, radius: %.10g}\ncomposition: {hydrogen: 0.5, metals: 0.02}\n"
      "luminosity: {kind: magnitude, file: light.csv, light: colours, distance_modulus: %.10f, a_v: %.10f}\n",
      radius, modulus, a_v);
  run(body, &(struct lxg_run_options){.epochs = true}, &input, &results);
  ck_assert(number(&results, "epochs.solved") == 2.0);
  /* seven digits of temperature and radius; the luminosity, their fourth power, leaves 1e-6 and the rate a few times that;
   * the fit stops at 1e-6 in ln T: 1e-3 is safe */
  assert_close(cell(&results, "mass_loss_rate_msun_yr", 1), 8.282352e-5, 1e-3);
  assert_close(cell(&results, "terminal_speed_km_s", 0), 183.4462, 1e-3);
  assert_close(cell(&results, "luminosity_ledd", 0), 0.4748182, 1e-3);
  assert_close(number(&results, "ejecta.mass_msun"), 8.282352e-5 * 10.0 / 365.25, 1e-3);
  done(&input, &results);
  leave();
}
END_TEST

/* A bolometric correction turns a magnitude into a luminosity: M_bol = 0 is 3.0128e35 erg/s (IAU 2015 B2). */
START_TEST(correction) {
  char body[1024], path[128];
  struct lxg_case input;
  struct lxg_results results = {0};
  struct lxg_error error = {0};
  enter();
  snprintf(path, sizeof path, "%s/light.csv", folder);
  write_file(
      path,
      "mjd,band,magnitude,error,upper_limit\n60000.5,V,7.5,0.1,0\n60001.5,V,7.6,0.1,0\n60003,B,1,0.1,0\n"
      "60005.5,V,9.5,0.1,0\n60010.5,V,7.7,0.1,0\n60011,V,9,,1\n");
  snprintf(body, sizeof body,
           "%shold: {base_temperature: 1e8}\nluminosity: {kind: magnitude, file: light.csv, light: "
           "correction, correction: "
           "-0.15, distance: 4.0 kpc, ebv: 0, time_zero: 60000, exclude: [[4, 7]]}\n",
           star);
  run(body, &(struct lxg_run_options){.epochs = true}, &input, &results);
  ck_assert_uint_eq(results.epochs->rows, 3); /* V, neither excluded nor a limit */
  const double magnitude = 7.5 - 5.0 * log10(400.0) - 0.15;
  assert_close(cell(&results, "luminosity_erg_s", 0), 3.0128e35 * pow(10.0, -0.4 * magnitude), 1e-12);
  assert_near(cell(&results, "time_d", 2), 10.5, 1e-9);
  ck_assert(number(&results, "light_curve.excluded_points") == 1.0);
  ck_assert(number(&results, "light_curve.upper_limits") == 1.0);
  done(&input, &results);
  /* the same correction from a black body: of T whose B - V is that of 8000 K */
  snprintf(
      body, sizeof body,
      "%shold: {base_temperature: 1e8}\nluminosity: {kind: magnitude, file: light.csv, light: correction, "
      "correction_temperature: 8000 K, distance: 4.0 kpc, ebv: 0}\n",
      star);
  assert_status(read_case(body, &input, &error), LXG_OK, &error);
  const double nu = 2.99792458e14 / 0.55, x = 6.62607015e-27 * nu / (1.380649e-16 * 8000.0);
  const double planck = 2.0 * 6.62607015e-27 * nu * nu * nu / (2.99792458e10 * 2.99792458e10) / expm1(x);
  const double received = 3640e-23 * pow(10.0, -0.4 * 7.5); /* Jy of V = 7.5 */
  const double luminosity =
      4.0 * 5.670374419e-5 * pow(8000.0, 4.0) / planck * received *
      pow(4000.0 * 3.0856775814913673e18, 2.0); /* 4 pi R^2 sigma T^4, f = pi B R^2/d^2 */
  assert_close(input.history->luminosity[0], luminosity, 1e-9);
  lxg_case_free(&input);
  leave();
}
END_TEST

/* The spread of the draws against slopes from separate runs of the whole pipeline. */
START_TEST(errors_are_slopes) {
  const double scale = 4e-4, mass = 1e-3;
  char body[1024], errors[1280];
  double value[4];
  struct lxg_case input;
  struct lxg_results results = {0};
  enter();
  for (int i = 0; i < 4; i++) { /* luminosity up, down; mass up, down */
    const double factor = i == 0 ? 1.0 + scale : i == 1 ? 1.0 - scale : 1.0;
    const double solar = i == 2 ? 1.0 + mass : i == 3 ? 1.0 - mass : 1.0;
    snprintf(body, sizeof body,
             "star: {mass: %.12g}\ncomposition: {hydrogen: 0.35, metals: 0.02}\nhold: {base_temperature: "
             "1e8}\nluminosity: "
             "{kind: formula, end: 60 d, terms: [{law: exponential, luminosity: %.17g erg/s, time_scale: 900 "
             "d}]}\n",
             solar, 1.98e38 * factor);
    run(body, &(struct lxg_run_options){0}, &input, &results);
    value[i] = log(number(&results, "ejecta.mass_msun"));
    done(&input, &results);
  }
  const double by_scale = 0.5 * (value[0] - value[1]), by_mass = 0.5 * (value[2] - value[3]);
  snprintf(body, sizeof body,
           "%shold: {base_temperature: 1e8}\nluminosity: {kind: formula, end: 60 d, terms: [{law: "
           "exponential, luminosity: "
           "1.98e38 erg/s, time_scale: 900 d}]}\n",
           star);
  snprintf(errors, sizeof errors,
           "%serrors: {draws: 4000, split_draws: 1000, seed: 4711, luminosity_scale: %g, star: {mass: %g}}\n",
           body, scale, mass);
  run(errors, &(struct lxg_run_options){.threads = 2}, &input, &results);
  /* a 68 % interval of ln M has the width 2 x 0.99446 sd; five standard errors of it for 4000 draws are 10 % */
  const double width = log(number(&results, "errors.results.ejected_mass_msun.hi68") /
                           number(&results, "errors.results.ejected_mass_msun.lo68"));
  assert_close(width, 2.0 * 0.99446 * hypot(by_scale, by_mass), 0.1);
  const double share = by_scale * by_scale / (by_scale * by_scale + by_mass * by_mass);
  assert_near(number(&results, "errors.variance.ejected_mass_msun.luminosity_scale.total"), share, 0.15);
  ck_assert(fabs(number(&results, "errors.families.interpolation_error_mass")) < 1e-3);
  assert_close(number(&results, "errors.results.ejected_mass_msun.nominal"),
               number(&results, "ejecta.mass_msun"), 1e-3);
  done(&input, &results);
  leave();
}
END_TEST

static void errors_case(char *body, size_t size) {
  snprintf(body, size,
           "%shold: {base_temperature: 1e8}\nluminosity: {kind: magnitude, file: light.csv, distance: 3 kpc, "
           "distance_error: 0.2 kpc, ebv: 0.3, ebv_error: 0.03, zero_point_error: 0.02}\nerrors: {draws: "
           "200, seed: 9}\n",
           star);
}

/* The same bytes for any number of threads, other ones for another seed; intervals hold the nominal value. */
START_TEST(threads_and_seeds) {
  char body[1024], path[128];
  enter();
  snprintf(path, sizeof path, "%s/light.csv", folder);
  write_file(path,
             "time_d,band,magnitude,error\n0,V,9.6,0.05\n3,V,10.1,0.05\n9,V,11.2,0.05\n20,V,11.9,0.05\n");
  errors_case(body, sizeof body);
  struct lxg_buffer bytes[3] = {{0}, {0}, {0}};
  for (int i = 0; i < 3; i++) {
    struct lxg_error error = {0};
    struct lxg_case input;
    struct lxg_results results = {0};
    run(body,
        &(struct lxg_run_options){.epochs = true, .threads = i == 1 ? 3 : 1, .seeded = i == 2, .seed = 10},
        &input, &results);
    assert_status(lxg_document_write_json(lxg_node_find(lxg_document_root(results.report), "errors"),
                                          &bytes[i], &error),
                  LXG_OK, &error);
    assert_status(lxg_table_write_ecsv(results.epochs, &bytes[i], &error), LXG_OK, &error);
    for (size_t k = 0; k < results.epochs->rows; k++) {
      ck_assert(cell(&results, "mass_loss_rate_msun_yr_lo", k) < cell(&results, "mass_loss_rate_msun_yr", k));
      ck_assert(cell(&results, "mass_loss_rate_msun_yr_hi", k) > cell(&results, "mass_loss_rate_msun_yr", k));
    }
    ck_assert_ptr_nonnull(lxg_node_text(lxg_node_find(
        lxg_node_find(lxg_node_find(lxg_node_find(lxg_document_root(results.report), "errors"), "variance"),
                      "ejected_mass_msun"),
        "reading")));
    done(&input, &results);
  }
  ck_assert_uint_eq(bytes[0].size, bytes[1].size);
  ck_assert_mem_eq(bytes[0].data, bytes[1].data, bytes[0].size);
  ck_assert(bytes[0].size != bytes[2].size || memcmp(bytes[0].data, bytes[2].data, bytes[0].size) != 0);
  for (int i = 0; i < 3; i++) {
    lxg_buffer_free(&bytes[i]);
  }
  leave();
}
END_TEST

/* V1668 Cyg 1978 with distance, reddening and dwarf mass of wind-theory fits: d = 4.1 kpc, 0.95 Msun (Kato & Hachisu 2007, ApJ 657,
 * 1004), E(B-V) = 0.30. The paper's composition is not to hand: X = 0.45, cno = 0.15 is assumed. Observed: absorption at -600 to
 * -1300 km/s; t2, t3 = 12.2, 24.3 d (Mallama & Skillman 1979, from memory); nova ejecta 1e-6 to 1e-4 Msun (Nelson et al. 2019). */
START_TEST(v1668_cyg) {
  struct lxg_case input;
  struct lxg_results results = {0};
  char path[128];
  enter();
  snprintf(path, sizeof path, "%s/light.csv", folder);
  FILE *file = fopen(path, "w");
  ck_assert_ptr_nonnull(file);
  fputs("time_d,band,magnitude,error\n", file);
  for (size_t i = 0; i < sizeof v1668cyg / sizeof v1668cyg[0]; i++) {
    fprintf(file, "%.3f,V,%.2f,0.02\n", v1668cyg[i].jd - v1668cyg_peak_jd, v1668cyg[i].v);
  }
  fclose(file);
  snprintf(path, sizeof path, "%s/case.yaml", folder);
  write_file(path,
             "case: 1\nstar: {mass: 0.95}\ncomposition: {hydrogen: 0.45, cno: 0.15, metals: 0.02}\nhold: "
             "{base_temperature: 1e8}\nluminosity: {kind: magnitude, file: light.csv, light: whole, "
             "distance: 4.1 kpc, "
             "distance_error: 0.6 kpc, ebv: 0.30, ebv_error: 0.05, peak_time: 0 d, peak_magnitude: 6.2}\n"
             "errors: {draws: 300, split_draws: 100}\n");
  struct lxg_error error = {0};
  assert_status(lxg_case_read(&input, path, NULL, 0, &error), LXG_OK, &error);
  assert_status(lxg_run_outburst(&input, &(struct lxg_run_options){.threads = 2}, &results, &error), LXG_OK,
                &error);
  assert_close(number(&results, "light_curve.t2.value_d"), 12.2, 0.12);
  assert_close(number(&results, "light_curve.t3.value_d"), 24.3, 0.12);
  ck_assert(number(&results, "epochs.none") == 0.0);
  const double fast = number(&results, "ejecta.peak_terminal_speed_km_s");
  ck_assert(fast > 600.0 && fast < 1300.0);
  ck_assert(number(&results, "ejecta.mass_msun") > 1e-6 && number(&results, "ejecta.mass_msun") < 1e-4);
  ck_assert(number(&results, "errors.results.ejected_mass_msun.lo95") > 1e-6);
  ck_assert(number(&results, "errors.results.ejected_mass_msun.hi95") < 1e-4);
  assert_close(number(&results, "light_curve.peak_absolute_mag"), -7.79,
               0.005); /* derived by hand from the same numbers */
  done(&input, &results);
  leave();
}
END_TEST

/* What an observer can get wrong. */
static const struct {
  const char *luminosity, *more, *code;
} wrong[] = {
    {"ebv: 0.1", "", "luminosity-distance"},
    {"distance: 3, parallax: 0.3, parallax_error: 0.1, ebv: 0", "", "luminosity-distance"},
    {"distance: -3, ebv: 0", "", "distance-value"},
    {"parallax: 0.3, ebv: 0", "", "distance-value"},
    {"distance: 3", "", "luminosity-extinction"},
    {"distance: 3, ebv: 0.1, a_v: 0.3", "", "luminosity-extinction"},
    {"distance: 3, ebv: -0.1", "", "extinction-value"},
    {"distance: 3, ebv: 0.1, r_v: 9", "", "extinction-rv"},
    {"distance: 3, ebv: 0.1, band: Q", "", "band-unknown"},
    {"distance: 3, ebv: 0.1, light: candle", "", "value-word"},
    {"distance: 3, ebv: 0.1, light: correction", "", "luminosity-correction"},
    {"distance: 3, ebv: 0.1, correction: 0.1", "", "luminosity-unused"},
    {"distance: 3, ebv: 0.1, together: 1 d", "", "luminosity-unused"},
    {"distance: 3, ebv: 0.1, exclude: [[3]]", "", "luminosity-window"},
    {"distance: 3, ebv: 0.1, exclude: [3, 4]", "", "luminosity-window"},
    {"distance: 3, ebv: 0.1, exclude: [[4, 3]]", "", "lightcurve-window"},
    {"distance: 3, ebv: 0.1, exclude: [[-1, 99]]", "", "luminosity-epochs"},
    {"distance: 3, ebv: 0.1, light: colours", "", "luminosity-epochs"},
    {"distance: 3, ebv: 0.1, peak_time: 0 d", "", "key-missing"},
    {"distance: 3, ebv: 0.1, luminosity_column: x", "", "luminosity-unused"},
    {"distance: 3, ebv: 0.1", "errors: {draws: 1}", "value-range"},
    {"distance: 3, ebv: 0.1", "errors: {draws: 50, split_draws: 60}", "value-range"},
    {"distance: 3, ebv: 0.1", "errors: {star: {mass: -1}}", "errors-sigma"},
    {"distance: 3, ebv: 0.1", "errors: {star: {radius: 1e7}}", "errors-radius"},
    {"distance: 3, ebv: 0.1", "errors: {hold: {terminal_speed: 10}}", "errors-unheld"},
    {"distance: 3, ebv: 0.1", "errors: {distance: 1}", "key-unknown"},
};

START_TEST(refused) {
  char body[1024], path[128];
  struct lxg_case input;
  struct lxg_error error = {0};
  enter();
  snprintf(path, sizeof path, "%s/light.csv", folder);
  write_file(path, "time_d,band,magnitude,error\n0,V,9.6,0.05\n3,V,10.1,0.05\n");
  snprintf(body, sizeof body,
           "%shold: {base_temperature: 1e8}\nluminosity: {kind: magnitude, file: light.csv, %s}\n%s\n", star,
           wrong[_i].luminosity, wrong[_i].more);
  ck_assert_int_eq(read_case(body, &input, &error), LXG_INPUT);
  ck_assert_msg(strcmp(error.code, wrong[_i].code) == 0, "%s: code %s: %s", wrong[_i].luminosity, error.code,
                error.line[0]);
  ck_assert_msg(strstr(error.line[0], "case.yaml:") != NULL, "no place in: %s", error.line[0]);
  leave();
}
END_TEST

/* What only the run can see: impossible parameters, a light without a family, nothing uncertain. */
START_TEST(refused_later) {
  static const struct {
    const char *tail, *code;
  } rows[] = {{"errors: {draws: 50, star: {mass: 0.3}}", "star-dwarf-mass"},
              {"errors: {draws: 50, composition: {hydrogen: 0.4}}", NULL},
              {"errors: {draws: 50, hold: {base_temperature: 6e7}}", "errors-range"}};
  char body[1024], path[128];
  enter();
  snprintf(path, sizeof path, "%s/light.csv", folder);
  write_file(path, "time_d,band,magnitude,error\n0,V,9.6,0.05\n3,V,10.1,0.05\n");
  for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
    struct lxg_case input;
    struct lxg_error error = {0};
    struct lxg_results results = {0};
    snprintf(body, sizeof body,
             "%shold: {base_temperature: 1e8}\nluminosity: {kind: magnitude, file: light.csv, distance: 3, "
             "ebv: 0}\n%s\n",
             star, rows[i].tail);
    assert_status(read_case(body, &input, &error), LXG_OK, &error);
    ck_assert_int_eq(lxg_run_outburst(&input, &(struct lxg_run_options){0}, &results, &error), LXG_INPUT);
    ck_assert(rows[i].code == NULL || strcmp(error.code, rows[i].code) == 0);
    done(&input, &results);
  }
  leave();
}
END_TEST

Suite *suite_observed(void);
Suite *suite_observed(void) {
  Suite *suite = suite_create("observed");
  TCase *tests = tcase_create("observed");
  tcase_set_timeout(tests, 240);
  tcase_add_loop_test(tests, round_trip, LXG_LIGHT_PHOTOSPHERE, LXG_LIGHT_WHOLE + 1);
  tcase_add_test(tests, colours);
  tcase_add_test(tests, correction);
  tcase_add_test(tests, errors_are_slopes);
  tcase_add_test(tests, threads_and_seeds);
  tcase_add_test(tests, v1668_cyg);
  tcase_add_loop_test(tests, refused, 0, sizeof wrong / sizeof wrong[0]);
  tcase_add_test(tests, refused_later);
  suite_add_tcase(suite, tests);
  return suite;
}
