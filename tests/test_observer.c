/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_observer.c - the whole way of an observer without a wind solver: an invented family whose members differ in mass-loss
 * rate alone, so that the free-free light gives Mdot ~ 10^(-0.2 M) and everything about the ejected mass is known exactly.
 *
 * m = M(Mdot) + modulus + A_V; mass = sum Mdot dt. ln(mass) is linear in all errors to first order:
 *   Var = (0.2 ln 10)^2 [s_modulus^2 + s_A^2 + s_noise^2 sum w^2],  w = share of an epoch in the mass.
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/distance.h"
#include "luxgale/photometry.h"
#include "luxgale/uncertainty.h"

enum { EPOCHS = 40, MEMBERS = 25 };
static const double modulus = 12.6, modulus_error = 0.3;        /* [mag] */
static const double extinction = 1.15, extinction_error = 0.14; /* A_V [mag] */
static const double noise = 0.12;                               /* of each epoch [mag] */
static const double step = 2.0 * LXG_DAY;

static const struct lxg_uncertainty_source sources[3] = {{"noise", LXG_UNCERTAINTY_EPOCH},
                                                         {"distance", LXG_UNCERTAINTY_CALIBRATION},
                                                         {"extinction", LXG_UNCERTAINTY_CALIBRATION}};

struct observation {
  double temperature[MEMBERS], radius[MEMBERS], mass_loss_rate[MEMBERS], speed[MEMBERS];
  struct lxg_photometry_search search;
  struct lxg_distance distance;
  double magnitude[EPOCHS]; /* apparent, without noise */
  double weight[EPOCHS];    /* share of the mass */
  double mass;              /* true [g] */
};

static double true_rate(int epoch) {
  return 3e21 * pow(1.0 + epoch / 6.0, -1.75);
}

static void observe(struct observation *o) {
  const struct lxg_composition nova = {.hydrogen = 0.45, .helium = 0.33, .cno = 0.20, .metals = 0.02};
  struct lxg_light_options options = {.light = LXG_LIGHT_FREEFREE};
  assert_status(lxg_freefree_gas_init(&nova, 1.1e4, 1.0, 1.0, &options.gas, NULL), LXG_OK, NULL);
  for (int i = 0; i < MEMBERS; i++) {
    o->temperature[i] = 1.1e4;
    o->radius[i] = 8.3e11;
    o->mass_loss_rate[i] = 1e18 * pow(10.0, 0.2 * i);
    o->speed[i] = 9.1e7;
  }
  const struct lxg_photometry_family family = {MEMBERS, o->temperature, o->radius, o->mass_loss_rate,
                                               o->speed};
  assert_status(lxg_photometry_search_init(&family, LXG_BAND_V, &options, &o->search, NULL), LXG_OK, NULL);
  assert_status(lxg_distance_init_modulus(modulus, modulus_error, &o->distance, NULL), LXG_OK, NULL);
  double a_band = 0.0;
  assert_status(lxg_extinction_band(LXG_BAND_V, extinction, 3.1, &a_band, NULL), LXG_OK, NULL);
  struct lxg_freefree_gas gas = options.gas;
  o->mass = 0.0;
  for (int i = 0; i < EPOCHS; i++) {
    const struct lxg_freefree_wind wind = {true_rate(i), 9.1e7, 8.3e11};
    const double light = lxg_freefree_wind_thin(&gas, &wind, lxg_band_frequency(LXG_BAND_V));
    o->magnitude[i] = lxg_photometry_magnitude(LXG_BAND_V, light) + modulus + a_band;
    o->mass += true_rate(i) * step;
  }
  for (int i = 0; i < EPOCHS; i++) {
    o->weight[i] = true_rate(i) * step / o->mass;
  }
}

/* outputs: ln(mass), distance [pc] */
static enum lxg_status ejected(const void *shared, const struct lxg_uncertainty_draw *draw, void *workspace,
                               double outputs[], double profile[], struct lxg_error *error) {
  const struct observation *o = shared;
  double *drawn = workspace;
  lxg_uncertainty_normals(draw, 0, EPOCHS, drawn);
  const double away = lxg_distance_quantile(&o->distance, lxg_uncertainty_uniform(draw, 1, 0));
  const double a_v = fmax(extinction + extinction_error * lxg_uncertainty_normal(draw, 2, 0), 0.0);
  double a_band = 0.0;
  enum lxg_status status = lxg_extinction_band(LXG_BAND_V, a_v, 3.1, &a_band, error);
  double mass = 0.0;
  for (int i = 0; status == LXG_OK && i < EPOCHS; i++) {
    struct lxg_photometry_member member[2];
    size_t count = 0;
    const double absolute = o->magnitude[i] + noise * drawn[i] - lxg_distance_modulus(away) - a_band;
    status = lxg_photometry_members(&o->search, absolute, member, 2, &count, error);
    if (status == LXG_OK) {
      const double rate = 1e18 * pow(10.0, 0.2 * ((double)member[0].segment + member[0].fraction));
      mass += rate * step;
      if (profile != NULL) {
        profile[i] = rate;
      }
    }
  }
  outputs[0] = log(mass);
  outputs[1] = away / LXG_PARSEC;
  return status;
}

START_TEST(mass_with_error) {
  struct observation o;
  observe(&o);
  double scratch[EPOCHS];
  double outputs[2];
  const struct lxg_uncertainty_draw nominal = lxg_uncertainty_nominal();
  struct lxg_error error = {0};
  assert_status(ejected(&o, &nominal, scratch, outputs, NULL, &error), LXG_OK, &error);
  assert_close(exp(outputs[0]), o.mass, 1e-9); /* round trip of magnitudes to mass */
  assert_close(outputs[1], 10.0 * pow(10.0, 0.2 * modulus), 1e-12);

  const struct lxg_uncertainty_problem problem = {.sources = sources,
                                                  .source_count = 3,
                                                  .output_count = 2,
                                                  .profile_count = EPOCHS,
                                                  .workspace_bytes = sizeof scratch,
                                                  .evaluate = ejected,
                                                  .shared = &o};
  const struct lxg_uncertainty_options options = {
      .seed = 19780912, .draws = 8000, .split_draws = 4000, .profile_draws = 8000, .threads = 2};
  struct lxg_uncertainty_result r;
  assert_status(lxg_uncertainty_run(&problem, &options, &r, &error), LXG_OK, &error);
  ck_assert_uint_eq(r.failed, 0);
  double squares = 0.0;
  for (int i = 0; i < EPOCHS; i++) {
    squares += o.weight[i] * o.weight[i];
  }
  const double per_mag = 0.2 * LXG_LN10;
  const double parts[3] = {noise * noise * squares, modulus_error * modulus_error,
                           extinction_error * extinction_error};
  const double variance = parts[0] + parts[1] + parts[2];
  const double sd = per_mag * sqrt(variance);
  /* five standard errors of a deviation and of a median; noise also lifts the mean by (per_mag noise)^2/2 = 0.0015 */
  assert_close(r.summary[0].sd, sd, 5.0 / sqrt(16000.0));
  assert_near(r.summary[0].median, log(o.mass), 5.0 * 1.2533 * sd / sqrt(8000.0));
  for (int i = 0; i < 3; i++) {
    const double share = parts[i] / variance;
    assert_near(r.share[i].first, share, 5.0 * (1.0 - share * share) / sqrt(4000.0));
    assert_near(r.share[i].total, share, 5.0 * (1.0 - (1.0 - share) * (1.0 - share)) / sqrt(4000.0) + 1e-3);
  }
  ck_assert(r.share[1].total > r.share[0].total &&
            r.share[1].total > r.share[2].total); /* distance dominates */
  /* mass and distance: correlation of their logarithms is (share of distance)^1/2; the distance itself is log-normal, which
   * lowers it by less than a per cent */
  assert_near(r.correlation[1], sqrt(parts[1] / variance), 0.02);
  /* rate at each epoch: log-normal; its 68 % interval has the ratio exp(2 x 0.994458 s) */
  const double epoch_sd = per_mag * sqrt(noise * noise + parts[1] + parts[2]);
  for (int i = 0; i < EPOCHS; i += 13) {
    assert_close(log(r.profile[i].hi68 / r.profile[i].lo68), 2.0 * 0.994458 * epoch_sd,
                 0.08); /* 5 x 1.07/sqrt(8000) */
    assert_close(r.profile[i].median, true_rate(i), 0.06);
  }
  lxg_uncertainty_free(&r);
  lxg_photometry_search_free(&o.search);
}
END_TEST

Suite *suite_observer(void);
Suite *suite_observer(void) {
  Suite *suite = suite_create("observer");
  TCase *tests = tcase_create("observer");
  tcase_add_test(tests, mass_with_error);
  suite_add_tcase(suite, tests);
  return suite;
}
