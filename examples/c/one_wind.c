/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * one_wind.c - the library from C: the wind of a white dwarf with two held quantities, and how it changes without the iron group.
 *
 *   cc one_wind.c $(pkg-config --cflags --libs luxgale gsl) -o one_wind
 *
 * The numbers are invented.
 */
#include <luxgale.h>

#include <gsl/gsl_errno.h>
#include <stdio.h>

/* Star and mixture: 1.05 solar masses; radius of a white dwarf of that mass [cm]. */
static const double mass = 1.05, radius = 5.1788e8;
static const struct lxg_composition mixture = {.hydrogen = 0.45, .helium = 0.35, .cno = 0.18, .metals = 0.02};

static enum lxg_status solve(unsigned omit, struct lxg_wind *wind, struct lxg_error *error) {
  struct lxg_opacity *opacity = NULL;
  struct lxg_wind_solver *solver = NULL;
  struct lxg_wind_model model = {.star = {.gm = mass * LXG_SOLAR_GM, .radius = radius},
                                 .composition = mixture};
  const double l_edd = lxg_star_eddington_luminosity(&model.star, &mixture);
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_BASE_TEMPERATURE, 1.0e8},
                                        {LXG_HELD_BASE_LUMINOSITY, 1.02 * l_edd}};
  enum lxg_status status = lxg_opacity_create_without(LXG_OPACITY_KRAMERS, omit, &mixture, &opacity, error);
  model.opacity = opacity;
  if (status == LXG_OK) {
    status = lxg_wind_solver_create(&model, NULL, &solver, error);
  }
  if (status == LXG_OK) {
    status = lxg_wind_solve(solver, hold, wind, error);
  }
  lxg_wind_solver_destroy(solver);
  lxg_opacity_destroy(opacity);
  return status;
}

int main(void) {
  const unsigned omit[] = {0, LXG_OPACITY_BIT(LXG_OPACITY_SOURCE_IRON)};
  gsl_set_error_handler_off(); /* else GSL ends the process on an error that the library would report */
  for (int i = 0; i < 2; i++) {
    struct lxg_wind wind;
    struct lxg_error error = {0};
    const enum lxg_status status = solve(omit[i], &wind, &error);
    printf("%s: ", i == 0 ? "all sources of opacity" : "without iron");
    if (status == LXG_OK) {
      printf("%.3e Msun/yr, %.0f km/s\n", wind.value[LXG_HELD_MASS_LOSS_RATE] * LXG_YEAR / LXG_SOLAR_MASS,
             wind.value[LXG_HELD_TERMINAL_SPEED] / LXG_KM);
    } else if (status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
      printf("no wind: %s\n", lxg_wind_reason_text(wind.reason));
    } else {
      char text[2048];
      lxg_error_text(&error, text, sizeof text);
      fprintf(stderr, "%s\n", text);
      return lxg_status_exit(status);
    }
  }
  return 0;
}
