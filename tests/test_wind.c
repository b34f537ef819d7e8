/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_wind.c - the steady wind against independent solutions, analytic limits and conservation laws.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/family.h"
#include "luxgale/ivp.h"
#include "luxgale/memory.h"
#include "luxgale/wind.h"
#include "wind/wind_internal.h"

#include <gsl/gsl_sf_lambert.h>

/* Reference winds with the closed-form opacity law. They were solved beside the project with a general-purpose collocation
 * code (tolerance 1e-7, mesh converged to all digits shown) from the same equations; luminosities in L_Edd. */
struct reference {
  double mass, x, z, base_t, log_rc, tc, mdot, lambda, l_ph, l_base, t_ph, r_ph, v_ph, v_inf, m_env;
};

static const struct reference references[] = {
    {1.00, 0.35, 0.02, 1.0e8, 10.3, 410292.9, 3.905990e-5, 0.7476342, 0.7147780, 1.056413, 36255.01, 4.713092,
     667.6978, 650.5136, 1.02769e-5},
    {0.70, 0.50, 0.02, 0.8e8, 10.5, 336208.7, 8.282352e-5, 0.4836913, 0.4748182, 0.8669532, 12315.43,
     26.42353, 203.4525, 183.4462, 4.00179e-5},
    {1.25, 0.55, 0.04, 1.2e8, 10.2, 447547.3, 2.598221e-5, 0.8061609, 0.7629484, 1.154989, 53126.83, 2.366096,
     968.9090, 946.1413, 2.47497e-6},
};
enum { REFERENCES = sizeof references / sizeof references[0] };

static const double digits = 1e-5; /* the references carry six to seven digits */

struct setup {
  struct lxg_opacity *opacity;
  struct lxg_wind_solver *solver;
  double l_edd;
  struct lxg_error error;
};

/* Their white-dwarf radius: R_0 = 7.83e8 cm [(1.44/M)^(2/3) - (M/1.44)^(2/3)]^(1/2). */
static struct setup setup(double mass, double x, double z, enum lxg_opacity_formula formula,
                          const struct lxg_porosity *porosity) {
  struct setup s = {0};
  struct lxg_wind_model model = {
      .star = {.gm = LXG_SOLAR_GM * mass,
               .radius = 7.83e8 * sqrt(pow(1.44 / mass, 2.0 / 3.0) - pow(mass / 1.44, 2.0 / 3.0))},
      .composition = {.hydrogen = x, .helium = 1.0 - x - z, .metals = z}};
  if (porosity != NULL) {
    model.porosity = *porosity;
  }
  assert_status(lxg_opacity_create_formula(formula, &model.composition, &s.opacity, &s.error), LXG_OK,
                &s.error);
  model.opacity = s.opacity;
  assert_status(lxg_wind_solver_create(&model, NULL, &s.solver, &s.error), LXG_OK, &s.error);
  s.l_edd = lxg_star_eddington_luminosity(&model.star, &model.composition);
  return s;
}

static void teardown(struct setup *s) {
  lxg_wind_solver_destroy(s->solver);
  lxg_opacity_destroy(s->opacity);
}

static const double rate_unit = LXG_SOLAR_MASS / LXG_YEAR;

/* Values of the ten quantities that can be held. */
static void held_values(const struct reference *r, double l_edd, double value[LXG_HELD_COUNT]) {
  value[LXG_HELD_BASE_TEMPERATURE] = r->base_t;
  value[LXG_HELD_BASE_LUMINOSITY] = r->l_base * l_edd;
  value[LXG_HELD_LAUNCH_RADIUS] = pow(10.0, r->log_rc);
  value[LXG_HELD_PHOTOSPHERE_LUMINOSITY] = r->l_ph * l_edd;
  value[LXG_HELD_PHOTOSPHERE_TEMPERATURE] = r->t_ph;
  value[LXG_HELD_PHOTOSPHERE_RADIUS] = r->r_ph * LXG_SOLAR_RADIUS;
  value[LXG_HELD_TERMINAL_SPEED] = r->v_inf * LXG_KM;
  value[LXG_HELD_MASS_LOSS_RATE] = r->mdot * rate_unit;
  value[LXG_HELD_ENERGY_RATE] = r->lambda * l_edd;
  value[LXG_HELD_ENVELOPE_MASS] = r->m_env * LXG_SOLAR_MASS;
}

static double worst_of(const struct lxg_wind *wind, const struct reference *r, double l_edd) {
  double value[LXG_HELD_COUNT], worst = 0.0;
  held_values(r, l_edd, value);
  for (size_t i = 0; i < LXG_HELD_COUNT; i++) {
    worst = fmax(worst, fabs(wind->value[i] / value[i] - 1.0));
  }
  return fmax(worst, fabs(wind->critical.temperature / r->tc - 1.0));
}

/* Cold start from (base temperature, launch radius): every column comes back. */
START_TEST(reference_winds) {
  const struct reference *r = &references[_i];
  struct setup s = setup(r->mass, r->x, r->z, LXG_OPACITY_REFERENCE, NULL);
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_BASE_TEMPERATURE, r->base_t},
                                        {LXG_HELD_LAUNCH_RADIUS, pow(10.0, r->log_rc)}};
  struct lxg_wind wind;
  assert_status(lxg_wind_solve(s.solver, hold, &wind, &s.error), LXG_OK, &s.error);
  double value[LXG_HELD_COUNT];
  held_values(r, s.l_edd, value);
  for (size_t i = 0; i < LXG_HELD_COUNT; i++) {
    ck_assert_msg(fabs(wind.value[i] / value[i] - 1.0) < digits, "%s = %.9g, expected %.9g",
                  lxg_held_name((enum lxg_held)i), wind.value[i], value[i]);
  }
  assert_close(wind.critical.temperature, r->tc, digits);
  assert_close(wind.photosphere.speed, r->v_ph * LXG_KM, digits);
  ck_assert(wind.residual < 1e-6);
  teardown(&s);
}
END_TEST

/* Any two of the ten quantities select the same wind (and perhaps others: folds). The wind of a reference row, found from
 * (base temperature, launch radius) and agreeing with the row to `digits`, gives the held values in full: the printed seven
 * digits would not do where the rate changes by a third of a percent when a luminosity changes by 1e-5. Pairs are spread
 * over test cases; every pair is met on every row. */
START_TEST(every_pair) {
  size_t pair = 0;
  const struct reference *r = &references[_i % REFERENCES];
  struct setup s = setup(r->mass, r->x, r->z, LXG_OPACITY_REFERENCE, NULL);
  const struct lxg_wind_hold start[2] = {{LXG_HELD_BASE_TEMPERATURE, r->base_t},
                                         {LXG_HELD_LAUNCH_RADIUS, pow(10.0, r->log_rc)}};
  struct lxg_wind row;
  assert_status(lxg_wind_solve(s.solver, start, &row, &s.error), LXG_OK, &s.error);
  ck_assert(worst_of(&row, r, s.l_edd) < digits);
  for (size_t a = 0; a < LXG_HELD_COUNT; a++) {
    for (size_t b = a + 1; b < LXG_HELD_COUNT; b++, pair++) {
      if (pair % 15 != (size_t)_i / REFERENCES) {
        continue;
      }
      const struct lxg_wind_hold hold[2] = {{(enum lxg_held)a, row.value[a]},
                                            {(enum lxg_held)b, row.value[b]}};
      struct lxg_wind winds[8];
      size_t count = 0;
      assert_status(lxg_family_members(s.solver, hold, LXG_BRANCH_THIN, winds, 8, &count, &s.error), LXG_OK,
                    &s.error);
      double best = INFINITY;
      for (size_t i = 0; i < count && i < 8; i++) {
        best = fmin(best, worst_of(&winds[i], r, s.l_edd));
      }
      ck_assert_msg(best < digits, "%s and %s: %zu winds, best off by %.3g", lxg_held_name((enum lxg_held)a),
                    lxg_held_name((enum lxg_held)b), count, best);
    }
  }
  teardown(&s);
}
END_TEST

/* Porosity law `length`, eta = 1, held launch radius and a super-Eddington photospheric luminosity: solved beside the
 * project as above. */
START_TEST(porous_reference) {
  const struct lxg_porosity porosity = {.law = LXG_POROSITY_LENGTH, .scale = 1.0};
  struct setup s = setup(1.0, 0.35, 0.02, LXG_OPACITY_REFERENCE, &porosity);
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_LAUNCH_RADIUS, 1e10},
                                        {LXG_HELD_PHOTOSPHERE_LUMINOSITY, 1.5 * s.l_edd}};
  struct lxg_wind winds[4];
  size_t count = 0;
  assert_status(lxg_family_members(s.solver, hold, LXG_BRANCH_THIN, winds, 4, &count, &s.error), LXG_OK,
                &s.error);
  const struct lxg_wind *wind = &winds[0];
  assert_close(wind->critical.temperature, 495447.2, digits);
  assert_close(wind->value[LXG_HELD_MASS_LOSS_RATE], 1.737157e-5 * rate_unit, digits);
  assert_close(wind->value[LXG_HELD_ENERGY_RATE], 1.614523 * s.l_edd, digits);
  assert_close(wind->photosphere.temperature, 99424.04, digits);
  assert_close(wind->photosphere.radius, 0.9078607 * LXG_SOLAR_RADIUS, digits);
  assert_close(wind->photosphere.speed, 1668.475e5, digits);
  assert_close(wind->value[LXG_HELD_TERMINAL_SPEED], 1738.801e5, digits);
  teardown(&s);
}
END_TEST

/* Partial derivatives of the local equations against central differences, at random-looking places. */
static const struct wind_place places[] = {{23.41, 15.93, 12.77, 49.05, 0.713},
                                           {20.63, 3.58, 18.31, 48.2, 0.97},
                                           {26.11, 18.02, 10.91, 50.3, 0.41},
                                           {24.02, 17.3, 12.31, 49.33, 1.62}};

START_TEST(local_partials) {
  const struct lxg_porosity porosity = {
      .law = _i % 2 ? LXG_POROSITY_POWER : LXG_POROSITY_NONE, .scale = 0.7, .alpha = 1.3};
  struct setup s = setup(1.1, 0.43, 0.021, LXG_OPACITY_REFERENCE, &porosity);
  const struct wind_constants *constants = &s.solver->problem.constants;
  struct wind_local at, up, down;
  ck_assert_int_eq(lxg_wind_local(constants, &places[_i], &at), LXG_OK);
  const double step =
      1e-5; /* truncation 1e-10 relative, rounding 1e-11: agreement to 1e-7 of the largest partial */
  for (int i = 0; i < WIND_ARGUMENTS; i++) {
    double value[WIND_ARGUMENTS] = {places[_i].ln_v, places[_i].ln_t, places[_i].ln_r, places[_i].ln_mdot,
                                    places[_i].lambda};
    for (int sign = 0; sign < 2; sign++) {
      value[i] += sign == 0 ? step : -2.0 * step;
      const struct wind_place moved = {value[2], value[0], value[1], value[3], value[4]};
      ck_assert_int_eq(lxg_wind_local(constants, &moved, sign == 0 ? &up : &down), LXG_OK);
    }
    const double scale_n = fabs(at.gamma) + fabs(at.c * at.phi) + fabs(at.mdot * at.h) + 1.0;
    assert_near(at.d_gamma[i], (up.gamma - down.gamma) / (2.0 * step), 1e-6 * scale_n);
    assert_near(at.d_phi[i], (up.phi - down.phi) / (2.0 * step), 1e-6 * scale_n * (1.0 + 1.0 / at.h));
    assert_near(at.d_n[i], (up.n - down.n) / (2.0 * step), 1e-6 * scale_n * (1.0 + at.c / at.h));
    assert_near(at.d_lhat[i], (up.lhat - down.lhat) / (2.0 * step), 1e-6 * (1.0 + fabs(at.mdot * at.h)));
  }
  teardown(&s);
}
END_TEST

/* Isothermal limit (Parker 1958): without radiation (a planet's mass and so cold that its enthalpy, too, is negligible) the equations march along psi - ln psi = 4 ln xi + 4/xi - 3; closed form
 * by Lambert W (Cranmer 2004), here from GSL. */
static const double chilly = 1000.0; /* [K] */

static enum lxg_status parker_slope(const void *context, double ln_r, const double y[], double dydx[]) {
  const struct wind_place at = {ln_r, y[0], log(chilly), 30.0, 1e-12};
  struct wind_local l;
  const enum lxg_status status = lxg_wind_local(context, &at, &l);
  if (status == LXG_OK) {
    dydx[0] = l.n / (l.w - l.c);
  }
  return status;
}

static double parker_mach(double xi) {
  const double argument = -exp(-(4.0 * log(xi) + 4.0 / xi - 3.0));
  return sqrt(xi > 1.0 ? -gsl_sf_lambert_Wm1(argument) : -gsl_sf_lambert_W0(argument));
}

START_TEST(isothermal_wind) {
  struct setup s = setup(1e-4, 0.7, 0.02, LXG_OPACITY_SCATTERING, NULL);
  const struct wind_constants *constants = &s.solver->problem.constants;
  const double c = sqrt(constants->c_t2_per_k * chilly);
  const double ln_rc = log(constants->gm / (2.0 * c * c));
  const struct wind_place critical = {ln_rc, log(c), log(chilly), 30.0, 1e-12};
  struct wind_local l;
  ck_assert_int_eq(lxg_wind_local(constants, &critical, &l), LXG_OK);
  assert_near(l.n, 0.0, 1e-7);
  assert_close(lxg_wind_critical_slope(&l), 1.0, 1e-6);
  struct lxg_ivp *ivp = lxg_ivp_create(1, LXG_IVP_ORDER_8, 1e-12);
  const double goal[] = {2.0, 10.0, 100.0, 0.5, 0.2};
  for (size_t i = 0; i < sizeof goal / sizeof goal[0]; i++) {
    const double offset = goal[i] > 1.0 ? 1.02 : 0.98; /* start a little off the singular point */
    double x = ln_rc + log(offset), y[1] = {log(c * parker_mach(offset))};
    int stopped;
    ck_assert_int_eq(lxg_ivp_march(ivp, parker_slope, constants, NULL, NULL, &x, ln_rc + log(goal[i]), 1e-3,
                                   10000, y, &stopped),
                     LXG_OK);
    assert_close(exp(y[0]) / c, parker_mach(goal[i]), 1e-5);
  }
  lxg_ivp_destroy(ivp);
  teardown(&s);
}
END_TEST

/* Along a solved wind: 4 pi r^2 rho v = Mdot (W1) and L + Mdot (v^2/2 + h - G M/r) = Lambda (W2), rebuilt from the printed
 * columns alone; the diffusion law (W3) and the momentum equation in its dimensional form from finite differences. */
START_TEST(conservation) {
  struct setup s = setup(1.0, 0.35, 0.02, LXG_OPACITY_REFERENCE, NULL);
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_BASE_TEMPERATURE, 1.07e8},
                                        {LXG_HELD_LAUNCH_RADIUS, 2.3e10}};
  struct lxg_wind wind;
  assert_status(lxg_wind_solve(s.solver, hold, &wind, &s.error), LXG_OK, &s.error);
  struct lxg_wind_row *row;
  size_t count, critical, photosphere;
  assert_status(lxg_wind_structure(s.solver, &row, &count, &critical, &photosphere, &s.error), LXG_OK,
                &s.error);
  const double rate = wind.value[LXG_HELD_MASS_LOSS_RATE], energy = wind.value[LXG_HELD_ENERGY_RATE];
  const double ct2 = LXG_BOLTZMANN / (LXG_ATOMIC_MASS / (2.0 * 0.35 + 0.75 * 0.63 + 0.01));
  for (size_t i = 0; i <= photosphere; i++) {
    assert_close(4.0 * LXG_PI * row[i].radius * row[i].radius * row[i].density * row[i].speed, rate, 1e-12);
    const double enthalpy = 2.5 * ct2 * row[i].temperature +
                            4.0 / 3.0 * LXG_RADIATION * pow(row[i].temperature, 4.0) / row[i].density;
    const double carried =
        rate * (0.5 * row[i].speed * row[i].speed + enthalpy - LXG_SOLAR_GM / row[i].radius);
    assert_near(row[i].luminosity + carried, energy,
                1e-11 * (fabs(energy) + rate * LXG_SOLAR_GM / row[i].radius));
  }
  assert_close(row[critical].mach, 1.0, 1e-9);
  assert_close(row[critical].radius, 2.3e10, 1e-9);
  assert_close(4.0 * LXG_PI * LXG_STEFAN_BOLTZMANN * pow(row[photosphere].radius, 2.0) *
                   pow(row[photosphere].temperature, 4.0),
               row[photosphere].luminosity, 1e-8);
  assert_close(row[photosphere].opacity * row[photosphere].density * row[photosphere].radius, 8.0 / 3.0,
               1e-8);
  /* total: light at infinity, lifting and motion make up the energy rate at the base */
  const double at_infinity = wind.luminosity_infinity + wind.kinetic_rate;
  const double gas =
      2.5 * rate * ct2 * row[count - 1].temperature - rate * LXG_SOLAR_GM / row[count - 1].radius;
  const double radiation =
      rate * 4.0 / 3.0 * LXG_RADIATION * pow(wind.photosphere.temperature, 4.0) / wind.photosphere.density;
  assert_close(at_infinity + gas + radiation, energy, 1e-9);
  for (size_t i = critical + 4; i + 2 < photosphere; i += 5) {
    const double dr = row[i + 1].radius - row[i - 1].radius;
    const double gradient = -16.0 * LXG_PI * LXG_RADIATION * LXG_SPEED_OF_LIGHT * pow(row[i].radius, 2.0) *
                            pow(row[i].temperature, 3.0) / (3.0 * row[i].opacity * row[i].density) *
                            (row[i + 1].temperature - row[i - 1].temperature) / dr;
    assert_close(gradient, row[i].luminosity, 0.02); /* second-order differences over two rows */
  }
  lxg_free(row);
  teardown(&s);
}
END_TEST

/* Mesh independence: three, four and six collocation points an interval and tolerances a hundred times apart agree far
 * better than the tolerance of the coarser. */
START_TEST(mesh_independence) {
  double rate[3];
  const size_t stages[] = {3, 4, 6};
  for (size_t i = 0; i < 3; i++) {
    struct setup s = setup(1.25, 0.55, 0.04, LXG_OPACITY_REFERENCE, NULL);
    struct lxg_wind_options options = lxg_wind_options_default();
    options.stages = stages[i];
    options.residual_tolerance = i == 1 ? 1e-8 : 1e-6;
    const struct lxg_wind_model model = *lxg_wind_solver_model(s.solver);
    lxg_wind_solver_destroy(s.solver);
    assert_status(lxg_wind_solver_create(&model, &options, &s.solver, &s.error), LXG_OK, &s.error);
    const struct lxg_wind_hold hold[2] = {{LXG_HELD_BASE_TEMPERATURE, 1.13e8},
                                          {LXG_HELD_LAUNCH_RADIUS, 3.1e10}};
    struct lxg_wind wind;
    assert_status(lxg_wind_solve(s.solver, hold, &wind, &s.error), LXG_OK, &s.error);
    rate[i] = wind.value[LXG_HELD_MASS_LOSS_RATE];
    teardown(&s);
  }
  assert_close(rate[0], rate[1], 1e-6);
  assert_close(rate[2], rate[1], 1e-6);
}
END_TEST

/* Follow: a neighbour found by continuation is the wind a cold start finds. */
START_TEST(follow_agrees_with_cold) {
  struct setup s = setup(0.9, 0.5, 0.02, LXG_OPACITY_REFERENCE, NULL);
  const struct lxg_wind_hold first[2] = {{LXG_HELD_BASE_TEMPERATURE, 1.0e8}, {LXG_HELD_LAUNCH_RADIUS, 2e10}};
  const struct lxg_wind_hold second[2] = {{LXG_HELD_BASE_TEMPERATURE, 0.83e8},
                                          {LXG_HELD_LAUNCH_RADIUS, 6.1e10}};
  struct lxg_wind cold, warm;
  assert_status(lxg_wind_solve(s.solver, second, &cold, &s.error), LXG_OK, &s.error);
  assert_status(lxg_wind_solve(s.solver, first, &warm, &s.error), LXG_OK, &s.error);
  assert_status(lxg_wind_follow(s.solver, second, &warm, &s.error), LXG_OK, &s.error);
  for (size_t i = 0; i < LXG_HELD_COUNT; i++) {
    assert_close(warm.value[i], cold.value[i], 1e-6);
  }
  teardown(&s);
}
END_TEST

START_TEST(bad_holds) {
  struct setup s = setup(1.0, 0.35, 0.02, LXG_OPACITY_REFERENCE, NULL);
  const struct {
    struct lxg_wind_hold hold[2];
    const char *code;
  } bad[] = {{{{LXG_HELD_BASE_TEMPERATURE, 1e8}, {LXG_HELD_BASE_TEMPERATURE, 1e8}}, "hold-dependent"},
             {{{LXG_HELD_BASE_TEMPERATURE, 1e8}, {LXG_HELD_LAUNCH_RADIUS, 4e8}}, "hold-launch-radius"},
             {{{LXG_HELD_BASE_TEMPERATURE, -1e8}, {LXG_HELD_LAUNCH_RADIUS, 4e10}}, "hold-value"},
             {{{LXG_HELD_MASS_LOSS_RATE, NAN}, {LXG_HELD_LAUNCH_RADIUS, 4e10}}, "hold-value"},
             {{{(enum lxg_held)99, 1.0}, {LXG_HELD_LAUNCH_RADIUS, 4e10}}, "hold-unknown"}};
  for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++) {
    struct lxg_wind wind;
    ck_assert_int_eq(lxg_wind_solve(s.solver, bad[i].hold, &wind, &s.error), LXG_INPUT);
    ck_assert_str_eq(s.error.code, bad[i].code);
    ck_assert(isnan(wind.value[LXG_HELD_MASS_LOSS_RATE]));
  }
  struct lxg_wind wind;
  struct lxg_wind_row *row;
  size_t count, critical, photosphere;
  ck_assert_int_eq(lxg_wind_follow(s.solver, bad[0].hold, &wind, &s.error), LXG_INPUT);
  ck_assert_int_eq(lxg_wind_structure(s.solver, &row, &count, &critical, &photosphere, &s.error),
                   LXG_NO_SOLUTION);
  teardown(&s);
}
END_TEST

Suite *suite_wind(void);
Suite *suite_wind(void) {
  Suite *suite = suite_create("wind");
  TCase *quick = tcase_create("wind-quick"); /* CK_RUN_CASE=wind-quick: those that take seconds */
  TCase *tests = tcase_create("wind");
  tcase_set_timeout(quick, 300);
  tcase_set_timeout(tests, 300);
  tcase_add_loop_test(quick, reference_winds, 0, REFERENCES);
  tcase_add_loop_test(tests, every_pair, 0, 15 * REFERENCES);
  tcase_add_test(tests, porous_reference);
  tcase_add_loop_test(quick, local_partials, 0, sizeof places / sizeof places[0]);
  tcase_add_test(quick, isothermal_wind);
  tcase_add_test(quick, conservation);
  tcase_add_test(tests, mesh_independence);
  tcase_add_test(tests, follow_agrees_with_cold);
  tcase_add_test(quick, bad_holds);
  suite_add_tcase(suite, quick);
  suite_add_tcase(suite, tests);
  return suite;
}
