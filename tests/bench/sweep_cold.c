/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * sweep_cold.c - does the cold start find the winds that exist? Quasi-random stars, compositions and base temperatures; the
 * family of each is traced by continuation, which proves that its members exist; members drawn from it are then asked for by
 * (base temperature, launch radius) alone.
 *
 *   sweep_cold FAMILIES MEMBERS [SKIP]
 *
 * The search is that of the command `wind`: the scan of the cold start, or else a walk along the family of one held value. An
 * answer counts as found when it has the held values, a small residual, and is a wind of the family (or of another branch
 * with the same held values: it is then confirmed on a second mesh). Prints the counts; exit status 1 if a wind is wrong or
 * fewer than 99.5 % are found.
 *
 * Dwarfs: 0.5-1.38 Msun, X 0-0.75, Z 1e-3-0.1, cno 0-0.5, base temperature 3e7-3e8 K, launch radius from 1.5 R_0 to 500 Rsun.
 * Every fifth star: 5-100 Msun, radius 5-50 Rsun, base temperature 2e5-2e6 K.
 */
#include "luxgale/constants.h"
#include "luxgale/family.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_qrng.h>
#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>

struct tally {
  int asked, found, walked, other, missed, wrong, empty, families;
};

static double between(double low, double high, double u) {
  return low * pow(high / low, u);
}

static void draw(const double u[6], bool dwarf, struct lxg_wind_model *model, double *base_t) {
  const double metals = between(1e-3, 0.1, u[2]);
  double x = 0.75 * u[1];
  const double cno = fmin(dwarf ? 0.5 * u[3] : 0.0, 0.98 - metals - x);
  model->composition =
      (struct lxg_composition){.hydrogen = x, .cno = cno, .metals = metals, .helium = 1.0 - x - cno - metals};
  const double mass = dwarf ? 0.5 + 0.88 * u[0] : between(5.0, 100.0, u[0]);
  model->star.gm = LXG_SOLAR_GM * mass;
  model->star.radius = between(5.0, 50.0, u[3]) * LXG_SOLAR_RADIUS;
  if (dwarf) {
    lxg_star_dwarf_radius(mass * LXG_SOLAR_MASS, &model->star.radius, NULL);
  }
  *base_t = dwarf ? between(3e7, 3e8, u[4]) : between(2e5, 2e6, u[4]);
}

/* On a mesh with another number of collocation points: the same held values give that rate, or the wind with that rate and launch
 * radius has that base temperature. */
static bool confirmed(const struct lxg_wind_model *model, const struct lxg_wind_hold hold[2], double rate) {
  struct lxg_wind_options options = lxg_wind_options_default();
  options.stages = 4;
  struct lxg_wind_solver *solver = NULL;
  const struct lxg_wind_hold other[2] = {{LXG_HELD_MASS_LOSS_RATE, rate}, hold[1]};
  struct lxg_wind wind;
  bool good = false;
  if (lxg_wind_solver_create(model, &options, &solver, NULL) == LXG_OK) {
    good = (lxg_wind_solve(solver, other, &wind, NULL) == LXG_OK &&
            fabs(wind.base.temperature / hold[0].value - 1.0) < 1e-4) ||
           (lxg_wind_solve(solver, hold, &wind, NULL) == LXG_OK &&
            fabs(wind.value[LXG_HELD_MASS_LOSS_RATE] / rate - 1.0) < 1e-4);
  }
  lxg_wind_solver_destroy(solver);
  return good;
}

static void ask(struct lxg_wind_solver *solver, const struct lxg_wind *member, struct tally *tally) {
  const struct lxg_wind_model *model = lxg_wind_solver_model(solver);
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_BASE_TEMPERATURE, member->value[LXG_HELD_BASE_TEMPERATURE]},
                                        {LXG_HELD_LAUNCH_RADIUS, member->value[LXG_HELD_LAUNCH_RADIUS]}};
  struct lxg_wind wind;
  tally->asked++;
  struct lxg_wind winds[8];
  size_t count = 0;
  if (lxg_wind_solve(solver, hold, &wind, NULL) != LXG_OK &&
      lxg_family_members(solver, hold, LXG_BRANCH_THIN, winds, 8, &count, NULL) == LXG_OK) {
    tally->walked++; /* what the command does: walk the family of one held value */
    wind = winds[0];
  }
  if (wind.reason != LXG_WIND_SOLVED) {
    tally->missed++;
    printf("missed: M %.4f Msun, R_0 %.4g cm, X %.4f cno %.4f Z %.5f, T_b %.5g K, r_c %.5g cm, rate %.4g "
           "g/s: %s\n",
           model->star.gm / LXG_SOLAR_GM, model->star.radius, model->composition.hydrogen,
           model->composition.cno, model->composition.metals, hold[0].value, hold[1].value,
           member->value[LXG_HELD_MASS_LOSS_RATE], lxg_wind_reason_code(wind.reason));
    return;
  }
  const bool held = fabs(wind.base.temperature / hold[0].value - 1.0) < 1e-6 &&
                    fabs(wind.critical.radius / hold[1].value - 1.0) < 1e-6 && wind.residual < 1e-6;
  const double rate = wind.value[LXG_HELD_MASS_LOSS_RATE];
  const bool same = fabs(rate / member->value[LXG_HELD_MASS_LOSS_RATE] - 1.0) < 1e-3;
  if (!held || (!same && !confirmed(model, hold, rate))) {
    tally->wrong++;
    printf("wrong: T_b %.6g K, r_c %.6g cm: rate %.6g, member has %.6g g/s\n", hold[0].value, hold[1].value,
           rate, member->value[LXG_HELD_MASS_LOSS_RATE]);
    return;
  }
  tally->found++;
  tally->other += !same;
}

static void family(const double u[6], bool dwarf, int members, struct tally *tally) {
  struct lxg_wind_model model = {0};
  double base_t;
  draw(u, dwarf, &model, &base_t);
  struct lxg_opacity *opacity = NULL;
  struct lxg_wind_solver *solver = NULL;
  struct lxg_family all = {0};
  struct lxg_family_options options = lxg_family_options_default();
  options.tolerance = 1e-2;
  const struct lxg_wind_hold hold = {LXG_HELD_BASE_TEMPERATURE, base_t};
  tally->families++;
  if (lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, &model.composition, &opacity, NULL) == LXG_OK) {
    model.opacity = opacity;
    if (lxg_wind_solver_create(&model, NULL, &solver, NULL) == LXG_OK &&
        lxg_family_trace(solver, &hold, &options, &all, NULL) == LXG_OK) {
      for (int i = 0; i < members; i++) {
        const size_t at = (size_t)(fmod(u[5] + 0.618034 * i, 1.0) * (double)all.count);
        const double radius = all.wind[at].value[LXG_HELD_LAUNCH_RADIUS];
        if (radius >= 1.5 * model.star.radius && radius <= 500.0 * LXG_SOLAR_RADIUS) {
          ask(solver, &all.wind[at], tally);
        }
      }
    } else {
      tally->empty++;
    }
  }
  lxg_family_free(&all);
  lxg_wind_solver_destroy(solver);
  lxg_opacity_destroy(opacity);
}

int main(int argc, char **argv) {
  const int families = argc > 1 ? atoi(argv[1]) : 10, members = argc > 2 ? atoi(argv[2]) : 5;
  const int skip = argc > 3 ? atoi(argv[3]) : 0;
  gsl_set_error_handler_off();
  gsl_qrng *sequence = gsl_qrng_alloc(gsl_qrng_sobol, 6);
  struct tally tally = {0};
  for (int i = 0; sequence != NULL && i < skip + families; i++) {
    double u[6];
    gsl_qrng_get(sequence, u);
    if (i >= skip) {
      family(u, i % 5 != 4, members, &tally);
    }
  }
  gsl_qrng_free(sequence);
  printf("%d families (%d without a wind), %d winds asked for: %d found (%d by walking a family, %d on "
         "another branch), "
         "%d missed, %d wrong\n",
         tally.families, tally.empty, tally.asked, tally.found, tally.walked, tally.other, tally.missed,
         tally.wrong);
  return tally.wrong == 0 && tally.asked > 0 && tally.missed <= 0.005 * tally.asked ? 0 : 1;
}
