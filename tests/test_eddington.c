/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_eddington.c - porous winds above the Eddington limit and winds that tire their light.
 *
 * Outside: the check values of a porous wind, solved independently by general-purpose collocation (test_wind.c); closed rates of Owocki,
 * Gayley & Shaviv 2004, ApJ 616, 525 (laws from memory); the tiring problem of Owocki, Townsend & Quataert 2017, MNRAS 472, 3749, solved
 * independently in its own variables (see `tired`).
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/eos.h"
#include "luxgale/family.h"
#include "luxgale/memory.h"
#include "luxgale/random.h"

#include <stdio.h>

static const struct lxg_composition mixture = {.hydrogen = 0.35, .helium = 0.63, .cno = 0.0, .metals = 0.02};

static struct lxg_wind_model model_of(const struct lxg_opacity *opacity, struct lxg_porosity porosity) {
  struct lxg_wind_model model = {.composition = mixture, .opacity = opacity, .porosity = porosity};
  model.star.gm = LXG_SOLAR_GM;
  model.star.radius = 5.56e8; /* a dwarf of one solar mass */
  return model;
}

/* ---- every law, from half to fifty Eddington luminosities ------------------------------------------------------------ */

/* A seeded stream. */
struct draws {
  struct lxg_random_place place;
  uint64_t next;
};

static double log_between(struct draws *draws, double low, double high) {
  return low * pow(high / low, lxg_random_uniform(&draws->place, draws->next++));
}

/* Laws in turn. `reduction` moves the limit, so its luminosities scale with its factor: L/s from 0.96 to 1, which the reduced
 * opacity can carry. The lengths reach 50 L_Edd from their thin end on. */
static struct lxg_porosity draw_law(struct draws *random, int i, double *low, double *high) {
  struct lxg_porosity law = {.law = LXG_POROSITY_REDUCTION};
  *low = 1.2;
  *high = 50.0;
  if (i % 3 == 0) {
    law.factor = log_between(random, 3.0, 12.0);
    *low = 0.96 * law.factor;
    *high = 1.0 * law.factor;
  } else {
    law.law = i % 3 == 1 ? LXG_POROSITY_LENGTH : LXG_POROSITY_POWER;
    law.scale = log_between(random, 0.3, 1.5);
    law.alpha = log_between(random, 0.8, 2.5);
  }
  return law;
}

/* Enthalpy of radiation that the gas takes through the photosphere [erg/s]; the solver's account ends there. */
static double carried(const struct lxg_wind *wind) {
  const struct lxg_wind_site *at = &wind->photosphere;
  return wind->value[LXG_HELD_MASS_LOSS_RATE] * 4.0 * LXG_RADIATION * pow(at->temperature, 4.0) /
         (3.0 * at->density);
}

START_TEST(every_law) {
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  struct draws random = {.place = {.seed = 20260405, .draw = (uint32_t)_i}};
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &mixture, &opacity, &error), LXG_OK, &error);
  double low, high;
  const struct lxg_porosity law = draw_law(&random, _i, &low, &high);
  const struct lxg_wind_model model = model_of(opacity, law);
  const double l_edd = lxg_star_eddington_luminosity(&model.star, &model.composition);
  const struct lxg_wind_hold hold[2] = {
      {LXG_HELD_LAUNCH_RADIUS, log_between(&random, 6e9, 1.2e10)},
      {LXG_HELD_PHOTOSPHERE_LUMINOSITY, l_edd * log_between(&random, low, high)}};
  struct lxg_wind_solver *solver = NULL;
  struct lxg_wind winds[4];
  size_t count = 0;
  assert_status(lxg_wind_solver_create(&model, NULL, &solver, &error), LXG_OK, &error);
  const enum lxg_status status = lxg_family_members(solver, hold, LXG_BRANCH_THIN, winds, 4, &count, &error);
  ck_assert_msg(status == LXG_OK, "%s factor %.3g scale %.3g alpha %.3g, r_c %.3g cm, L %.3g L_Edd: %s",
                lxg_porosity_law_name(law.law), law.factor, law.scale, law.alpha, hold[0].value,
                hold[1].value / l_edd, error.code);
  assert_near(winds[0].value[LXG_HELD_PHOTOSPHERE_LUMINOSITY] / hold[1].value, 1.0, 1e-9);
  ck_assert_double_lt(winds[0].residual, 1e-6);
  /* Energy (W2): what entered is light, motion and the enthalpy of radiation that the gas carries through the photosphere; gas
   * pressure and potential beyond 1000 R_ph are the rest. */
  const double out = winds[0].luminosity_infinity + winds[0].kinetic_rate + carried(&winds[0]);
  assert_near(out / winds[0].value[LXG_HELD_ENERGY_RATE], 1.0, 2e-3);
  lxg_wind_solver_destroy(solver);
  lxg_opacity_destroy(opacity);
}
END_TEST

/* Below its thin end a porous family has no wind, and says so. */
START_TEST(below_the_thin_end) {
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &mixture, &opacity, &error), LXG_OK, &error);
  const struct lxg_wind_model model =
      model_of(opacity, (struct lxg_porosity){.law = LXG_POROSITY_LENGTH, .scale = 1.0});
  const double l_edd = lxg_star_eddington_luminosity(&model.star, &model.composition);
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_LAUNCH_RADIUS, 1e10},
                                        {LXG_HELD_PHOTOSPHERE_LUMINOSITY, 0.5 * l_edd}};
  struct lxg_wind_solver *solver = NULL;
  struct lxg_wind wind;
  size_t count = 0;
  assert_status(lxg_wind_solver_create(&model, NULL, &solver, &error), LXG_OK, &error);
  ck_assert_int_eq(lxg_family_members(solver, hold, LXG_BRANCH_THIN, &wind, 1, &count, &error),
                   LXG_NO_SOLUTION);
  ck_assert_int_eq(wind.reason, LXG_WIND_BELOW_THIN_END);
  lxg_wind_solver_destroy(solver);
  lxg_opacity_destroy(opacity);
}
END_TEST

/* ---- closed rates ---------------------------------------------------------------------------------------------------- */

static const struct {
  double alpha; /* 0: one blob depth */
  double rate;  /* Mdot eta c_T c/L over its own function of Gamma, below */
} closed[] = {{2.0, 0.0}, {0.5, 0.0}, {1.0, 0.0}, {0.0, 0.0}};

/* Mdot eta c_T c/L of constant opacity and no gas pressure, written out for the two indices that have a closed form. */
static double closed_rate(const struct lxg_porosity *law, double gamma) {
  if (law->alpha == 2.0) {
    return 1.0 - 1.0 / gamma;
  }
  if (law->alpha == 0.5) {
    return 4.0 * (gamma - 1.0);
  }
  double depth = NAN;
  ck_assert_int_eq(lxg_porosity_critical_depth(law, gamma, &depth, NULL), LXG_OK);
  return depth / gamma;
}

/* Deviation of a solved wind from its closed rate at one launch radius; with the pressure terms of (W4) in the balance, Gamma f = 1 -
 * (2 + phi) c_T^2 r/(G M), the rate is exact. */
static double deviation(const struct lxg_wind_model *model, double launch, bool exact) {
  struct lxg_wind_solver *solver = NULL;
  struct lxg_error error = {0};
  struct lxg_wind wind;
  const double l_edd = lxg_star_eddington_luminosity(&model->star, &model->composition);
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_LAUNCH_RADIUS, launch},
                                        {LXG_HELD_PHOTOSPHERE_LUMINOSITY, 3.0 * l_edd}};
  size_t count = 0;
  assert_status(lxg_wind_solver_create(model, NULL, &solver, &error), LXG_OK, &error);
  assert_status(lxg_family_members(solver, hold, LXG_BRANCH_THIN, &wind, 1, &count, &error), LXG_OK, &error);
  const struct lxg_wind_site *c = &wind.critical;
  const double t4 = c->temperature * c->temperature * c->temperature * c->temperature;
  const double phi = 3.0 * c->opacity * c->density * c->luminosity /
                     (16.0 * LXG_PI * LXG_RADIATION * LXG_SPEED_OF_LIGHT * c->radius * t4);
  const double pressure = (2.0 + phi) * c->speed * c->speed * c->radius / model->star.gm;
  double gamma = c->luminosity / l_edd;
  double expected = closed_rate(&model->porosity, exact ? gamma / (1.0 - pressure) : gamma);
  expected /= exact ? 1.0 - pressure : 1.0;
  const double rate = wind.value[LXG_HELD_MASS_LOSS_RATE] * model->porosity.scale * c->speed *
                      LXG_SPEED_OF_LIGHT / c->luminosity;
  lxg_wind_solver_destroy(solver);
  return rate / expected - 1.0;
}

START_TEST(closed_rates) {
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_SCATTERING, &mixture, &opacity, &error), LXG_OK,
                &error);
  const double alpha = closed[_i].alpha;
  const struct lxg_porosity law = {
      .law = alpha > 0.0 ? LXG_POROSITY_POWER : LXG_POROSITY_LENGTH, .scale = 1.3, .alpha = alpha};
  const struct lxg_wind_model model = model_of(opacity, law);
  const double near = deviation(&model, 1e9, false), far = deviation(&model, 1e10, false);
  printf("eddington: alpha %.1f: rate off its closed form by %.2e at 1e9 cm, %.2e at 1e10 cm\n", alpha, near,
         far);
  ck_assert_double_lt(fabs(near), 0.04); /* of order Gamma c_T^2 r/(G M) */
  ck_assert_double_lt(fabs(near), fabs(far));
  ck_assert_double_lt(fabs(deviation(&model, 1e9, true)), 1e-7); /* tolerance of the solver */
  lxg_opacity_destroy(opacity);
}
END_TEST

/* ---- photon tiring --------------------------------------------------------------------------------------------------- */

/* The full problem of Owocki, Townsend & Quataert 2017 (constant opacity, no gas pressure, heating concentrated at R), in x = 1 - R/r, w
 * = v^2/v_esc^2, l = diffusive luminosity over L_0: w' = Gamma l - 1; l = 1 - m (w + x) - q w^(1/2)/(1 - x)^2; q' = -4 Gamma m l (1 -
 * x)^2/w^(1/2); w(0) = 0, q(1) = 0. Solved independently twice on grids of 4000 and 8000 points by fixed-point iteration; the two agree to
 * 5e-4 or better. */
static const struct {
  double gamma, m;
  double w_end, l_end;
  double w[3], l[3]; /* at x = 0.25, 0.5, 0.75 */
} tired[] = {
    {2.0, 0.1, 0.66188, 0.83381, {0.1787, 0.3386, 0.4981}, {0.8260, 0.8171, 0.8223}},
    {2.0, 0.3, 0.23142, 0.63058, {0.0770, 0.1240, 0.1729}, {0.6004, 0.5927, 0.6054}},
    {3.0, 0.2, 0.85758, 0.62848, {0.2516, 0.4490, 0.6464}, {0.6073, 0.5925, 0.6034}},
    {5.0, 0.1, 2.31236, 0.66876, {0.6391, 1.1911, 1.7416}, {0.6529, 0.6370, 0.6463}},
    {5.0, 0.5, 0.38144, 0.30928, {0.1431, 0.2037, 0.2750}, {0.2518, 0.2498, 0.2671}},
    {10.0, 0.1, 3.94397, 0.50560, {1.1441, 2.0606, 2.9742}, {0.4804, 0.4610, 0.4734}},
    {10.0, 0.5, 0.61024, 0.19488, {0.2371, 0.3304, 0.4389}, {0.1401, 0.1380, 0.1514}},
};
/* Rounding of the table and its own accuracy. */
static const double accuracy = 2e-4;
enum { PLACES = 3, NUMBERS = 2 * PLACES + 2 };

static const double foot = 1e13; /* [cm] */

/* Escape speed [cm/s] that puts the photosphere, kappa rho r = 8/3, at this many radii of the foot: infinity for the problem. */
static const double far = 500.0;
static double escape_speed_of(size_t row) {
  const double gamma = tired[row].gamma, m = tired[row].m;
  const double w = gamma / (1.0 + m * gamma) - 1.0; /* good enough for a distance */
  return m * gamma * LXG_SPEED_OF_LIGHT / (8.0 / 3.0 * sqrt(w) * far);
}

/* Linear interpolation of w and l at x in a structure. */
static void read_at(const struct lxg_wind_row *rows, size_t count, double x, double escape_speed, double l0,
                    double *w, double *l) {
  for (size_t k = 1; k < count; k++) {
    const double a = 1.0 - foot / rows[k - 1].radius, b = 1.0 - foot / rows[k].radius;
    if (a <= x && b > x) {
      const double s = (x - a) / (b - a);
      const double va = rows[k - 1].speed, vb = rows[k].speed;
      *w = ((1.0 - s) * va * va + s * vb * vb) / (escape_speed * escape_speed);
      *l = ((1.0 - s) * rows[k - 1].luminosity + s * rows[k].luminosity) / l0;
      return;
    }
  }
}

/* The wind with a sound speed of about `cold` escape speeds at its foot: gas made cold by a large mean molecular weight. Blobs block
 * the light below the foot and let all of it push above, which is heating at the foot; their scale is found so that the wind has the
 * wanted rate. */
static void tired_wind(size_t row, double cold, const struct lxg_opacity *opacity, double number[NUMBERS]) {
  struct lxg_error error = {0};
  const double gamma = tired[row].gamma, m = tired[row].m, escape_speed = escape_speed_of(row);
  const double gm = 0.5 * escape_speed * escape_speed * foot, kappa = 0.2; /* no hydrogen */
  const double l0 = gamma * 4.0 * LXG_PI * gm * LXG_SPEED_OF_LIGHT / kappa;
  const double rate = m * l0 * foot / gm;
  const double t =
      pow(3.0 * gamma * escape_speed * LXG_SPEED_OF_LIGHT / (8.0 * kappa * foot * LXG_RADIATION), 0.25);
  const double mu = lxg_eos_sound_speed_sq_per_k(1.0) * t / (cold * cold * escape_speed * escape_speed);
  struct lxg_wind_model model = {.star = {.gm = gm, .radius = 0.9 * foot},
                                 .composition = {.metals = 2.0 / mu}, /* 1/mu = Z/2 */
                                 .opacity = opacity,
                                 .porosity = {.law = LXG_POROSITY_LENGTH, .scale = 1.0}};
  double depth, before = 0.0, ln_before = 0.0;
  assert_status(lxg_porosity_critical_depth(&model.porosity, gamma, &depth, &error), LXG_OK, &error);
  double ln_scale = log(depth / gamma * l0 / (rate * cold * escape_speed * LXG_SPEED_OF_LIGHT));
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_LAUNCH_RADIUS, foot},
                                        {LXG_HELD_ENERGY_RATE, l0 * (1.0 - m)}};
  for (int i = 0;; i++) {
    struct lxg_wind_solver *solver = NULL;
    struct lxg_wind wind;
    ck_assert_int_lt(i, 12);
    model.porosity.scale = exp(ln_scale);
    assert_status(lxg_wind_solver_create(&model, NULL, &solver, &error), LXG_OK, &error);
    lxg_wind_solver_outer_only(solver, true);
    assert_status(lxg_wind_solve(solver, hold, &wind, &error), LXG_OK, &error);
    const double off = log(wind.value[LXG_HELD_MASS_LOSS_RATE] / rate);
    if (fabs(off) < 1e-7) {
      struct lxg_wind_row *rows = NULL;
      size_t count, critical, photosphere;
      assert_status(lxg_wind_structure(solver, &rows, &count, &critical, &photosphere, &error), LXG_OK,
                    &error);
      for (size_t k = 0; k < PLACES; k++) {
        read_at(rows, count, 0.25 * (double)(k + 1), escape_speed, l0, &number[2 * k], &number[2 * k + 1]);
      }
      const double v = wind.value[LXG_HELD_TERMINAL_SPEED] / escape_speed;
      number[NUMBERS - 2] = v * v;
      number[NUMBERS - 1] = (wind.luminosity_infinity + carried(&wind)) / l0; /* all of it is light at last */
      lxg_free(rows);
      lxg_wind_solver_destroy(solver);
      return;
    }
    const double next = i == 0 ? ln_scale + off : ln_scale - off * (ln_scale - ln_before) / (off - before);
    ln_before = ln_scale;
    before = off;
    ln_scale = next;
    lxg_wind_solver_destroy(solver);
  }
}

/* Cold limit by Richardson extrapolation in the sound speed: the layer in which blobs open is as thick as c_T/v_esc. */
START_TEST(tiring) {
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  const struct lxg_composition pure = {.helium = 1.0};
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_SCATTERING, &pure, &opacity, &error), LXG_OK, &error);
  double warm[NUMBERS], cool[NUMBERS], cold[NUMBERS];
  const size_t row = (size_t)_i;
  tired_wind(row, 4e-3, opacity, warm);
  tired_wind(row, 2e-3, opacity, cool);
  tired_wind(row, 1e-3, opacity, cold);
  double worst = 0.0;
  for (size_t k = 0; k < NUMBERS; k++) {
    const double expected = k == NUMBERS - 2   ? tired[row].w_end
                            : k == NUMBERS - 1 ? tired[row].l_end
                            : k % 2 == 0       ? tired[row].w[k / 2]
                                               : tired[row].l[k / 2];
    const double limit = (8.0 * cold[k] - 6.0 * cool[k] + warm[k]) / 3.0;
    const double off = fabs(limit - expected);
    worst = fmax(worst, off);
    ck_assert_msg(off < accuracy, "Gamma %.0f m %.1f number %zu: %.5f, expected %.5f (%.5f, %.5f, %.5f)",
                  tired[row].gamma, tired[row].m, k, limit, expected, warm[k], cool[k], cold[k]);
  }
  printf("eddington: tiring at Gamma %.0f, m %.1f: largest deviation %.1e\n", tired[row].gamma, tired[row].m,
         worst);
  lxg_opacity_destroy(opacity);
}
END_TEST

/* ---- a reduction that changes with time ------------------------------------------------------------------------------ */

static void trace_reduced(const struct lxg_opacity *opacity, double ln_factor, struct lxg_family *family) {
  struct lxg_error error = {0};
  struct lxg_wind_solver *solver = NULL;
  const struct lxg_wind_model model =
      model_of(opacity, (struct lxg_porosity){.law = LXG_POROSITY_REDUCTION, .factor = exp(ln_factor)});
  const struct lxg_wind_hold hold = {LXG_HELD_BASE_TEMPERATURE, 1e8};
  assert_status(lxg_wind_solver_create(&model, NULL, &solver, &error), LXG_OK, &error);
  assert_status(lxg_family_trace(solver, &hold, NULL, family, &error), LXG_OK, &error);
  lxg_wind_solver_destroy(solver);
}

/* Families between families against one traced in place. No source outside: this is accuracy of interpolation alone, where a light
 * curve asks for it: rate and speed at equal base luminosity. */
START_TEST(between_families) {
  enum { FAMILIES = 6 };
  struct lxg_error error = {0};
  struct lxg_opacity *opacity = NULL;
  struct lxg_family family[FAMILIES], direct;
  struct lxg_family_blend *blend = NULL;
  struct lxg_family_index *a = NULL, *b = NULL;
  double x[FAMILIES];
  const double widest = log(1.4), asked = log(1.17);
  assert_status(lxg_opacity_create_formula(LXG_OPACITY_REFERENCE, &mixture, &opacity, &error), LXG_OK,
                &error);
  for (int i = 0; i < FAMILIES; i++) {
    x[i] = widest * (0.5 - 0.5 * cos(LXG_PI * i / (FAMILIES - 1)));
    trace_reduced(opacity, x[i], &family[i]);
  }
  trace_reduced(opacity, asked, &direct);
  assert_status(lxg_family_blend_create(family, x, FAMILIES, &blend, &error), LXG_OK, &error);
  assert_status(lxg_family_index_create(&direct, LXG_FAMILY_BASE_LUMINOSITY, &a, &error), LXG_OK, &error);
  assert_status(
      lxg_family_index_create(lxg_family_blend_at(blend, asked), LXG_FAMILY_BASE_LUMINOSITY, &b, &error),
      LXG_OK, &error);
  size_t compared = 0;
  for (size_t i = direct.count / 10; i < direct.count - direct.count / 10; i += 7) {
    struct lxg_family_place p, q;
    const double value = direct.wind[i].value[LXG_HELD_BASE_LUMINOSITY];
    if (lxg_family_index_branch(a, value, LXG_BRANCH_THIN, &p) == 1 &&
        lxg_family_index_branch(b, value, LXG_BRANCH_THIN, &q) == 1) {
      assert_close(q.value[LXG_FAMILY_MASS_LOSS_RATE], p.value[LXG_FAMILY_MASS_LOSS_RATE], 1e-4);
      assert_close(q.value[LXG_FAMILY_TERMINAL_SPEED], p.value[LXG_FAMILY_TERMINAL_SPEED], 1e-4);
      compared++;
    }
  }
  ck_assert_uint_gt(compared, 20);
  lxg_family_index_destroy(a);
  lxg_family_index_destroy(b);
  lxg_family_blend_destroy(blend);
  /* Families without a rate in common: the thin end of one against the thick end of the other. */
  struct lxg_family parts[2] = {family[0], family[0]};
  const size_t half = family[0].count / 2;
  parts[0].count = half;
  parts[1].wind += half + 1;
  parts[1].table += (half + 1) * LXG_FAMILY_COUNT;
  parts[1].arc += half + 1;
  parts[1].count -= half + 1;
  ck_assert_int_eq(lxg_family_blend_create(parts, x, 2, &blend, &error), LXG_NO_SOLUTION);
  ck_assert_str_eq(error.code, "family-blend");
  for (int i = 0; i < FAMILIES; i++) {
    lxg_family_free(&family[i]);
  }
  lxg_family_free(&direct);
  lxg_opacity_destroy(opacity);
}
END_TEST

Suite *suite_eddington(void);
Suite *suite_eddington(void) {
  Suite *suite = suite_create("eddington");
  TCase *tests = tcase_create("eddington");
  tcase_set_timeout(tests, 300);
  tcase_add_loop_test(tests, every_law, 0, 24);
  tcase_add_test(tests, below_the_thin_end);
  tcase_add_loop_test(tests, closed_rates, 0, sizeof closed / sizeof closed[0]);
  tcase_add_loop_test(tests, tiring, 0, sizeof tired / sizeof tired[0]);
  tcase_add_test(tests, between_families);
  suite_add_tcase(suite, tests);
  return suite;
}
