/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_family.c - families of winds: interpolation against direct solves, ends, folds, missing members; and the ejecta of a
 * history along a family.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/ejecta.h"
#include "luxgale/family.h"

#include <stdbool.h>
#include <stdlib.h>

struct setup {
  struct lxg_wind_model model;
  struct lxg_opacity *opacity;
  struct lxg_wind_solver *solver;
  struct lxg_family family;
  double l_edd;
  struct lxg_error error;
};

static struct setup setup(double mass, enum lxg_opacity_formula formula, double base_t) {
  struct setup s = {0};
  s.model.composition = (struct lxg_composition){.hydrogen = 0.5, .helium = 0.48, .metals = 0.02};
  s.model.star.gm = LXG_SOLAR_GM * mass;
  assert_status(lxg_star_dwarf_radius(mass * LXG_SOLAR_MASS, &s.model.star.radius, &s.error), LXG_OK,
                &s.error);
  assert_status(lxg_opacity_create_formula(formula, &s.model.composition, &s.opacity, &s.error), LXG_OK,
                &s.error);
  s.model.opacity = s.opacity;
  assert_status(lxg_wind_solver_create(&s.model, NULL, &s.solver, &s.error), LXG_OK, &s.error);
  s.l_edd = lxg_star_eddington_luminosity(&s.model.star, &s.model.composition);
  const struct lxg_wind_hold hold = {LXG_HELD_BASE_TEMPERATURE, base_t};
  assert_status(lxg_family_trace(s.solver, &hold, NULL, &s.family, &s.error), LXG_OK, &s.error);
  return s;
}

static void teardown(struct setup *s) {
  lxg_family_free(&s->family);
  lxg_wind_solver_destroy(s->solver);
  lxg_opacity_destroy(s->opacity);
}

/* Numbers read between two members agree with a wind solved there: 1e-4 is what a history needs. Places are spread over the
 * whole family, ends included. Direct solves hold the launch radius, which is single-valued near each place. */
START_TEST(interpolation) {
  struct setup s = setup(0.93, _i == 0 ? LXG_OPACITY_REFERENCE : LXG_OPACITY_KRAMERS, 1.05e8);
  ck_assert(s.family.count > 50);
  srand(20260101);
  for (int k = 0; k < 12; k++) {
    const size_t i = (size_t)((double)(s.family.count - 1) * (k + 0.5) / 12.0);
    const double share = 0.2 + 0.6 * (double)rand() / RAND_MAX;
    struct lxg_family_place place;
    lxg_family_at(&s.family, s.family.arc[i] + share * (s.family.arc[i + 1] - s.family.arc[i]), &place);
    const struct lxg_wind_hold hold[2] = {s.family.hold,
                                          {LXG_HELD_MASS_LOSS_RATE, place.value[LXG_FAMILY_MASS_LOSS_RATE]}};
    struct lxg_wind winds[4];
    size_t count;
    assert_status(lxg_family_members(s.solver, hold, LXG_BRANCH_THIN, winds, 4, &count, &s.error), LXG_OK,
                  &s.error);
    ck_assert_uint_eq(count, 1);
    assert_close(winds[0].value[LXG_HELD_TERMINAL_SPEED], place.value[LXG_FAMILY_TERMINAL_SPEED], 1e-4);
    assert_close(winds[0].value[LXG_HELD_BASE_LUMINOSITY], place.value[LXG_FAMILY_BASE_LUMINOSITY], 1e-6);
    assert_close(winds[0].value[LXG_HELD_PHOTOSPHERE_LUMINOSITY],
                 place.value[LXG_FAMILY_PHOTOSPHERE_LUMINOSITY], 1e-5);
    assert_close(winds[0].photosphere.radius, place.value[LXG_FAMILY_PHOTOSPHERE_RADIUS], 1e-4);
    ck_assert(winds[0].residual < 1e-6);
  }
  teardown(&s);
}
END_TEST

/* The rate at a given luminosity, which is what a history asks for, against direct solves at that luminosity. */
START_TEST(rate_at_luminosity) {
  struct setup s = setup(1.02, LXG_OPACITY_KRAMERS, 1.0e8);
  struct lxg_family_index *index;
  assert_status(lxg_family_index_create(&s.family, LXG_FAMILY_BASE_LUMINOSITY, &index, &s.error), LXG_OK,
                &s.error);
  const double first = s.family.wind[0].value[LXG_HELD_BASE_LUMINOSITY];
  const struct lxg_wind *last = &s.family.wind[s.family.count - 1];
  for (int k = 1; k <= 6; k++) {
    const double l = first + (last->value[LXG_HELD_BASE_LUMINOSITY] - first) * k / 7.3;
    struct lxg_family_place place;
    ck_assert(lxg_family_index_branch(index, l, LXG_BRANCH_THIN, &place) >= 1);
    assert_close(place.value[LXG_FAMILY_BASE_LUMINOSITY], l, 1e-9);
    const struct lxg_wind_hold hold[2] = {s.family.hold, {LXG_HELD_BASE_LUMINOSITY, l}};
    struct lxg_wind winds[4];
    size_t count;
    assert_status(lxg_family_members(s.solver, hold, LXG_BRANCH_THIN, winds, 4, &count, &s.error), LXG_OK,
                  &s.error);
    assert_close(place.value[LXG_FAMILY_MASS_LOSS_RATE], winds[0].value[LXG_HELD_MASS_LOSS_RATE], 1e-4);
    assert_close(place.value[LXG_FAMILY_TERMINAL_SPEED], winds[0].value[LXG_HELD_TERMINAL_SPEED], 1e-4);
  }
  lxg_family_index_destroy(index);
  teardown(&s);
}
END_TEST

/* What is known of such sequences: as the wind thickens the photosphere grows and cools and L_ph falls while L(R_0) rises
 * (energy goes into lifting); the rate is extremely sensitive to the base luminosity (Glasner & Timmes 1995, ApJ 444, 411);
 * without iron there is no strong wind. V959 Mon: R_ph 5-8 Rsun with 3-4e-5 Msun/yr for 0.9-1.15 Msun (Hachisu & Kato 2018,
 * ApJ 858, 108): a factor two, since composition and base differ. */
START_TEST(physics_of_a_family) {
  struct setup s = setup(1.02, LXG_OPACITY_KRAMERS, 1.0e8);
  ck_assert_int_eq(s.family.thin_end, LXG_WIND_BELOW_THIN_END);
  const struct lxg_wind *thin = &s.family.wind[0], *thick = &s.family.wind[s.family.count * 7 / 10];
  assert_close(thin->critical.optical_depth, 5.0, 1e-3);
  ck_assert(thick->photosphere.radius > 20.0 * thin->photosphere.radius);
  ck_assert(thick->photosphere.temperature < 0.2 * thin->photosphere.temperature);
  ck_assert(thick->photosphere.luminosity < 0.8 * thin->photosphere.luminosity);
  ck_assert(thick->base.luminosity > thin->base.luminosity);
  struct lxg_family_index *index;
  assert_status(lxg_family_index_create(&s.family, LXG_FAMILY_PHOTOSPHERE_RADIUS, &index, &s.error), LXG_OK,
                &s.error);
  struct lxg_family_place place, more;
  ck_assert(lxg_family_index_branch(index, 6.3 * LXG_SOLAR_RADIUS, LXG_BRANCH_THIN, &place) >= 1);
  const double rate = place.value[LXG_FAMILY_MASS_LOSS_RATE] * LXG_YEAR / LXG_SOLAR_MASS;
  ck_assert_msg(rate > 3.5e-5 / 2.0 && rate < 3.5e-5 * 2.0, "rate %g", rate);
  lxg_family_index_destroy(index);
  assert_status(lxg_family_index_create(&s.family, LXG_FAMILY_BASE_LUMINOSITY, &index, &s.error), LXG_OK,
                &s.error);
  const double l = place.value[LXG_FAMILY_BASE_LUMINOSITY];
  ck_assert(lxg_family_index_branch(index, 1.01 * l, LXG_BRANCH_THIN, &more) >= 1);
  const double sensitivity =
      log(more.value[LXG_FAMILY_MASS_LOSS_RATE] / place.value[LXG_FAMILY_MASS_LOSS_RATE]) / log(1.01);
  ck_assert_msg(sensitivity > 10.0, "d ln Mdot/d ln L = %g", sensitivity);
  lxg_family_index_destroy(index);
  teardown(&s);
}
END_TEST

/* Members that do not exist are missing for the reason at the nearer end, and a value beyond a fold says so. */
START_TEST(missing_members) {
  struct setup s = setup(1.02, LXG_OPACITY_REFERENCE, 1.0e8);
  const double thin = s.family.wind[0].value[LXG_HELD_PHOTOSPHERE_LUMINOSITY];
  const double thick = s.family.wind[s.family.count - 1].value[LXG_HELD_PHOTOSPHERE_LUMINOSITY];
  ck_assert_int_eq(lxg_family_missing(&s.family, LXG_FAMILY_PHOTOSPHERE_LUMINOSITY, 1.3 * thin),
                   LXG_WIND_BELOW_THIN_END);
  ck_assert_int_eq(lxg_family_missing(&s.family, LXG_FAMILY_PHOTOSPHERE_LUMINOSITY, 0.7 * thick),
                   s.family.thick_end);
  const double hottest = s.family.wind[0].photosphere.temperature;
  const struct lxg_wind_hold hold[2] = {s.family.hold, {LXG_HELD_PHOTOSPHERE_TEMPERATURE, 1.6 * hottest}};
  struct lxg_wind winds[2];
  size_t count;
  ck_assert_int_eq(lxg_family_members(s.solver, hold, LXG_BRANCH_THIN, winds, 2, &count, &s.error),
                   LXG_NO_SOLUTION);
  ck_assert_uint_eq(count, 0);
  ck_assert_int_eq(winds[0].reason, LXG_WIND_BELOW_THIN_END);
  ck_assert_str_eq(s.error.code, "below-thin-end");
  /* Brighter than the thin end there is a wind, though not in this family: beyond the gap where flows stagnate, a thick one. */
  const struct lxg_wind_hold bright[2] = {s.family.hold, {LXG_HELD_PHOTOSPHERE_LUMINOSITY, 1.3 * thin}};
  assert_status(lxg_family_members(s.solver, bright, LXG_BRANCH_THIN, winds, 2, &count, &s.error), LXG_OK,
                &s.error);
  ck_assert(winds[0].value[LXG_HELD_ENERGY_RATE] > 2.0 * s.l_edd && winds[0].residual < 1e-6);
  teardown(&s);
}
END_TEST

/* No energy, no wind: what reaches infinity is L + Mdot v^2/2 > 0, summed here from the structure of solved winds, and it never
 * exceeds the energy rate; so none or a negative one is refused as energy-limited. */
START_TEST(energy_limited) {
  struct setup s = setup(1.02, LXG_OPACITY_REFERENCE, 1.0e8);
  for (size_t i = 0; i < s.family.count; i += s.family.count / 9) {
    const struct lxg_wind *wind = &s.family.wind[i];
    const double leaves = wind->luminosity_infinity + 0.5 * wind->value[LXG_HELD_MASS_LOSS_RATE] *
                                                          pow(wind->value[LXG_HELD_TERMINAL_SPEED], 2.0);
    ck_assert(leaves > 0.0 && leaves < wind->value[LXG_HELD_ENERGY_RATE]);
  }
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_ENERGY_RATE, -0.07 * s.l_edd},
                                        {LXG_HELD_LAUNCH_RADIUS, 2e10}};
  struct lxg_wind winds[2];
  size_t count;
  ck_assert_int_eq(lxg_wind_solve(s.solver, hold, &winds[0], &s.error), LXG_NO_SOLUTION);
  ck_assert_str_eq(s.error.code, "energy-limited");
  ck_assert_int_eq(lxg_family_members(s.solver, hold, LXG_BRANCH_THIN, winds, 2, &count, &s.error),
                   LXG_NO_SOLUTION);
  ck_assert_int_eq(winds[0].reason, LXG_WIND_ENERGY_LIMITED);
  teardown(&s);
}
END_TEST

/* Followed beyond the limit of diffusion, a family ends where the photosphere reaches the critical point: kappa rho r = 8/3 at the
 * sonic point itself, read from the last wind. */
START_TEST(photosphere_inside) {
  struct setup s = setup(1.02, LXG_OPACITY_REFERENCE, 1.0e8);
  lxg_family_free(&s.family);
  struct lxg_family_options options = lxg_family_options_default();
  options.thin_depth = 0.0;
  options.tolerance = 1e-2;
  const struct lxg_wind_hold hold = {LXG_HELD_BASE_TEMPERATURE, 1.0e8};
  assert_status(lxg_family_trace(s.solver, &hold, &options, &s.family, &s.error), LXG_OK, &s.error);
  const struct lxg_wind *last = &s.family.wind[0];
  ck_assert_str_eq(lxg_wind_reason_code(s.family.thin_end), "photosphere-inside");
  ck_assert(last->photosphere.radius > last->critical.radius);
  assert_close(last->critical.opacity * last->critical.density * last->critical.radius, 8.0 / 3.0, 0.3);
  teardown(&s);
}
END_TEST

/* The thick end: an own march of the last member's gas with fixed steps (Runge-Kutta, opacity and luminosity as documented) shows the flow
 * at a small part of its photospheric speed by 1000 R_ph, and gas only 3 % slower at the photosphere falls back. */
static double coast_speed(const struct setup *s, const struct lxg_wind *wind, double share) {
  const double ct2 = LXG_BOLTZMANN / (lxg_composition_mu(&s->model.composition) * LXG_ATOMIC_MASS);
  const double rate = wind->value[LXG_HELD_MASS_LOSS_RATE], r0 = wind->photosphere.radius;
  const double t0 = wind->photosphere.temperature, v0 = share * wind->photosphere.speed;
  const double carried = rate * (0.5 * v0 * v0 + 2.5 * ct2 * t0 - s->model.star.gm / r0);
  double v = v0;
  const int steps = 40000;
  const double h = log(1000.0) / steps;
  for (int i = 0; i < steps; i++) { /* midpoint rule in ln r */
    double slope = 0.0, u = v;
    for (int stage = 0; stage < 2; stage++) {
      const double r = r0 * exp((i + 0.5 * stage) * h), t = t0 * sqrt(r0 / r);
      const double rho = rate / (4.0 * LXG_PI * r * r * u), g = s->model.star.gm / r;
      struct lxg_opacity_value k;
      ck_assert_int_eq(lxg_opacity_at(s->opacity, log(rho), log(t), &k), LXG_OK);
      const double l = wind->photosphere.luminosity + carried - rate * (0.5 * u * u + 2.5 * ct2 * t - g);
      const double drive = 2.5 * ct2 * t + k.kappa * l / (4.0 * LXG_PI * LXG_SPEED_OF_LIGHT * r) - g;
      if (u * u < 1.02 * ct2 * t) {
        return 0.0;
      }
      slope = drive / (u * u - ct2 * t) * u;
      u = v + 0.5 * h * slope;
    }
    v += h * slope;
  }
  return v;
}

START_TEST(stagnation) {
  struct setup s = setup(1.02, LXG_OPACITY_REFERENCE, 1.0e8);
  ck_assert_int_eq(s.family.thick_end, LXG_WIND_STAGNATES);
  const struct lxg_wind *last = &s.family.wind[s.family.count - 1],
                        *middle = &s.family.wind[s.family.count / 2];
  assert_close(coast_speed(&s, middle, 1.0), middle->value[LXG_HELD_TERMINAL_SPEED], 1e-4);
  ck_assert(last->value[LXG_HELD_TERMINAL_SPEED] < 0.15 * last->photosphere.speed);
  ck_assert(coast_speed(&s, last, 0.97) == 0.0);
  teardown(&s);
}
END_TEST

/* Beyond a fold: along the winds with one launch radius the photospheric temperature has a largest value; there are two winds just below
 * it and none above. The largest value is read off the members, not off the search. */
START_TEST(above_fold) {
  struct setup s = setup(1.02, LXG_OPACITY_REFERENCE, 1.0e8);
  lxg_family_free(&s.family);
  const struct lxg_wind_hold radius = {LXG_HELD_LAUNCH_RADIUS, 2.1e10};
  assert_status(lxg_family_trace(s.solver, &radius, NULL, &s.family, &s.error), LXG_OK, &s.error);
  double hottest = 0.0;
  size_t at = 0;
  for (size_t i = 0; i < s.family.count; i++) {
    if (s.family.wind[i].photosphere.temperature > hottest) {
      hottest = s.family.wind[i].photosphere.temperature;
      at = i;
    }
  }
  ck_assert(at > 0 && at + 1 < s.family.count);
  struct lxg_wind winds[4];
  size_t count;
  const struct lxg_wind_hold below[2] = {radius, {LXG_HELD_PHOTOSPHERE_TEMPERATURE, 0.97 * hottest}};
  const struct lxg_wind_hold above[2] = {radius, {LXG_HELD_PHOTOSPHERE_TEMPERATURE, 1.03 * hottest}};
  assert_status(lxg_family_members(s.solver, below, LXG_BRANCH_THICK, winds, 4, &count, &s.error), LXG_OK,
                &s.error);
  ck_assert_uint_eq(count, 2);
  ck_assert(winds[0].value[LXG_HELD_MASS_LOSS_RATE] > winds[1].value[LXG_HELD_MASS_LOSS_RATE]);
  ck_assert_int_eq(lxg_family_members(s.solver, above, LXG_BRANCH_THIN, winds, 4, &count, &s.error),
                   LXG_NO_SOLUTION);
  ck_assert_str_eq(s.error.code, "above-fold");
  teardown(&s);
}
END_TEST

/* ---- ejecta along a history ---- */

/* A history of base luminosities that a function of time gives. */
static struct lxg_history *history_of(double (*l)(double t, double l_edd), double l_edd, size_t count,
                                      double days) {
  double *time = calloc(count, sizeof *time), *luminosity = calloc(count, sizeof *luminosity);
  for (size_t i = 0; i < count; i++) {
    time[i] = days * LXG_DAY * (double)i / (double)(count - 1);
    luminosity[i] = l(time[i] / (days * LXG_DAY), l_edd);
  }
  const struct lxg_history_rows rows = {.kind = LXG_HISTORY_BASE,
                                        .count = count,
                                        .time = time,
                                        .luminosity = luminosity,
                                        .gap_fraction = INFINITY};
  struct lxg_history *history = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_history_create(&rows, &history, &error), LXG_OK, &error);
  free(time);
  free(luminosity);
  return history;
}

static double steady(double t, double l_edd) {
  (void)t;
  return 1.0 * l_edd;
}

static double fading(double t, double l_edd) {
  return l_edd * 1.06 * exp(-0.25 * t);
}

/* Constant luminosity: M = Mdot t, E = Mdot v^2 t/2, p = Mdot v t, E_lift = M G M/R_0, exactly. */
START_TEST(steady_history) {
  struct setup s = setup(1.02, LXG_OPACITY_REFERENCE, 1.0e8);
  struct lxg_history *history = history_of(steady, s.l_edd, 3, 10.0);
  struct lxg_ejecta ejecta;
  const double depth = s.model.star.gm / s.model.star.radius;
  assert_status(lxg_ejecta_compute(&s.family, history, depth, NULL, &ejecta, &s.error), LXG_OK, &s.error);
  const struct lxg_wind_hold hold[2] = {s.family.hold, {LXG_HELD_BASE_LUMINOSITY, s.l_edd}};
  struct lxg_wind winds[2];
  size_t count;
  assert_status(lxg_family_members(s.solver, hold, LXG_BRANCH_THIN, winds, 2, &count, &s.error), LXG_OK,
                &s.error);
  const double rate = winds[0].value[LXG_HELD_MASS_LOSS_RATE], v = winds[0].value[LXG_HELD_TERMINAL_SPEED];
  const double t = 10.0 * LXG_DAY;
  assert_close(ejecta.mass, rate * t, 1e-4);
  assert_close(ejecta.kinetic, 0.5 * rate * v * v * t, 2e-4);
  assert_close(ejecta.momentum, rate * v * t, 2e-4);
  assert_close(ejecta.lifting, ejecta.mass * depth, 1e-12);
  assert_close(ejecta.radiated, winds[0].luminosity_infinity * t, 1e-5);
  assert_close(ejecta.wind_duration, t, 1e-9);
  ck_assert_uint_eq(ejecta.solved, 3);
  lxg_ejecta_free(&ejecta);
  lxg_history_destroy(history);
  teardown(&s);
}
END_TEST

/* Halving the sampling of a smooth history changes mass and energy by less than 1e-4, although the wind ends inside it;
 * the end is where the luminosity reaches that of the thin end. */
START_TEST(sampling_converges) {
  struct setup s = setup(1.02, LXG_OPACITY_REFERENCE, 1.0e8);
  const double depth = s.model.star.gm / s.model.star.radius;
  struct lxg_ejecta coarse, fine;
  struct lxg_history *few = history_of(fading, s.l_edd, 33, 80.0),
                     *many = history_of(fading, s.l_edd, 65, 80.0);
  assert_status(lxg_ejecta_compute(&s.family, few, depth, NULL, &coarse, &s.error), LXG_OK, &s.error);
  assert_status(lxg_ejecta_compute(&s.family, many, depth, NULL, &fine, &s.error), LXG_OK, &s.error);
  assert_close(coarse.mass, fine.mass, 1e-4);
  assert_close(coarse.kinetic, fine.kinetic, 1e-4);
  assert_close(coarse.wind_duration, fine.wind_duration, 1e-5);
  ck_assert(coarse.none > 0 && coarse.solved > 0);
  const double end = s.family.wind[0].value[LXG_HELD_BASE_LUMINOSITY];
  assert_close(fine.wind_last, 80.0 * LXG_DAY * log(1.06 * s.l_edd / end) / 0.25, 1e-5);
  for (size_t i = 1; i < fine.count; i++) {
    ck_assert(fine.epoch[i].mass >= fine.epoch[i - 1].mass);
  }
  assert_close(fine.epoch[fine.count - 1].mass, fine.mass, 1e-12);
  lxg_ejecta_free(&coarse);
  lxg_ejecta_free(&fine);
  lxg_history_destroy(few);
  lxg_history_destroy(many);
  teardown(&s);
}
END_TEST

Suite *suite_family(void);
Suite *suite_family(void) {
  Suite *suite = suite_create("family");
  TCase *tests = tcase_create("family");
  tcase_set_timeout(tests, 300);
  tcase_add_loop_test(tests, interpolation, 0, 2);
  tcase_add_test(tests, rate_at_luminosity);
  tcase_add_test(tests, physics_of_a_family);
  tcase_add_test(tests, missing_members);
  tcase_add_test(tests, energy_limited);
  tcase_add_test(tests, photosphere_inside);
  tcase_add_test(tests, stagnation);
  tcase_add_test(tests, above_fold);
  tcase_add_test(tests, steady_history);
  tcase_add_test(tests, sampling_converges);
  suite_add_tcase(suite, tests);
  return suite;
}
