/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bench_uncertainty.c - time and memory of a Monte Carlo of the size the program promises: 10,000 draws of 1,000 epochs, five
 * sources, variance split with 1,000 rows, intervals of 4 columns at every epoch, two threads. Each epoch
 * is found by its V magnitude (black body) in an invented family of 200 members. Bar: 10 s on two
 * cores, that is 20 s of processor time (other work on the machine does not count), and 200 MiB. Exit status 1 when missed.
 */
#include "luxgale/constants.h"
#include "luxgale/photometry.h"
#include "luxgale/uncertainty.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <sys/resource.h>
#include <time.h>

enum { EPOCHS = 1000, MEMBERS = 200, COLUMNS = 4, SOURCES = 5 };
static const double time_bar = 20.0;    /* processor time [s] */
static const double memory_bar = 200.0; /* [MiB] */

static const struct lxg_uncertainty_source sources[SOURCES] = {{"noise", LXG_UNCERTAINTY_EPOCH},
                                                               {"zero point", LXG_UNCERTAINTY_CALIBRATION},
                                                               {"distance", LXG_UNCERTAINTY_CALIBRATION},
                                                               {"extinction", LXG_UNCERTAINTY_CALIBRATION},
                                                               {"mass", LXG_UNCERTAINTY_MODEL}};

/* An invented family: L falls slowly while T falls from 90 000 to 6000 K and the wind thickens. */
struct family {
  double temperature[MEMBERS], radius[MEMBERS], mass_loss_rate[MEMBERS], speed[MEMBERS];
  struct lxg_photometry_search search;
};

static enum lxg_status invent(struct family *f) {
  for (int i = 0; i < MEMBERS; i++) {
    const double s = i / (MEMBERS - 1.0);
    f->temperature[i] = 9e4 * pow(6e3 / 9e4, s);
    const double t2 = f->temperature[i] * f->temperature[i];
    f->radius[i] = sqrt(1.7e38 * (1.0 - 0.4 * s) / (4.0 * LXG_PI * LXG_STEFAN_BOLTZMANN * t2 * t2));
    f->mass_loss_rate[i] = 2e19 * pow(1500.0, s);
    f->speed[i] = 1.9e8 * pow(0.2, s);
  }
  const struct lxg_photometry_family family = {MEMBERS, f->temperature, f->radius, f->mass_loss_rate,
                                               f->speed};
  const struct lxg_light_options options = {.light = LXG_LIGHT_PHOTOSPHERE};
  return lxg_photometry_search_init(&family, LXG_BAND_V, &options, &f->search, NULL);
}

/* Rate and speed at a place, logarithms straight. */
static void look_up(const struct family *f, const struct lxg_photometry_member *m, double value[COLUMNS]) {
  const size_t s = m->segment;
  value[0] = f->mass_loss_rate[s] * pow(f->mass_loss_rate[s + 1] / f->mass_loss_rate[s], m->fraction);
  value[1] = f->speed[s] * pow(f->speed[s + 1] / f->speed[s], m->fraction);
  value[2] = m->luminosity;
  value[3] = m->temperature;
}

static enum lxg_status evaluate(const void *shared, const struct lxg_uncertainty_draw *draw, void *workspace,
                                double outputs[], double profile[], struct lxg_error *error) {
  const struct family *family = shared;
  double *noise = workspace;
  lxg_uncertainty_normals(draw, 0, EPOCHS, noise);
  const double shift = 0.1 * lxg_uncertainty_normal(draw, 1, 0) + 0.2 * lxg_uncertainty_normal(draw, 2, 0) +
                       0.05 * lxg_uncertainty_normal(draw, 3, 0);
  const double scale = exp(0.1 * lxg_uncertainty_normal(draw, 4, 0));
  outputs[0] = 0.0;
  outputs[1] = 0.0;
  for (int i = 0; i < EPOCHS; i++) {
    double value[COLUMNS];
    struct lxg_photometry_member member[4];
    size_t count = 0;
    const double m = -5.3 + 3.5 * i / EPOCHS + shift + 0.05 * noise[i];
    const enum lxg_status status = lxg_photometry_members(&family->search, m, member, 4, &count, error);
    if (status != LXG_OK) {
      return status;
    }
    look_up(family, &member[0], value);
    for (int c = 0; profile != NULL && c < COLUMNS; c++) {
      profile[i * COLUMNS + c] = value[c];
    }
    outputs[0] += scale * value[0];
    outputs[1] += scale * value[0] * value[1] * value[1];
  }
  outputs[2] = outputs[1] / outputs[0];
  return LXG_OK;
}

int main(void) {
  struct family family;
  if (invent(&family) != LXG_OK) {
    return 4;
  }
  const struct lxg_uncertainty_problem problem = {.sources = sources,
                                                  .source_count = SOURCES,
                                                  .output_count = 3,
                                                  .profile_count = EPOCHS * COLUMNS,
                                                  .workspace_bytes = EPOCHS * sizeof(double),
                                                  .evaluate = evaluate,
                                                  .shared = &family};
  const struct lxg_uncertainty_options options = {
      .seed = 1, .draws = 10000, .split_draws = 1000, .profile_draws = 1000, .threads = 2};
  struct lxg_uncertainty_result result;
  struct timespec start;
  struct timespec end;
  clock_gettime(CLOCK_MONOTONIC, &start);
  const enum lxg_status status = lxg_uncertainty_run(&problem, &options, &result, NULL);
  clock_gettime(CLOCK_MONOTONIC, &end);
  struct rusage usage;
  getrusage(RUSAGE_SELF, &usage);
  const double wall = (double)(end.tv_sec - start.tv_sec) + 1e-9 * (double)(end.tv_nsec - start.tv_nsec);
  const double seconds = (double)clock() / CLOCKS_PER_SEC;
  const double mebibytes = (double)usage.ru_maxrss / 1024.0;
  printf("uncertainty: %zu draws x %d epochs: %.2f s, processor %.2f s (bar %.0f), %.0f MiB (bar %.0f), %zu "
         "failed\n",
         options.draws, EPOCHS, wall, seconds, time_bar, mebibytes, memory_bar, result.failed);
  for (int i = 0; status == LXG_OK && i < SOURCES; i++) {
    printf("  %-10s first %.3f +- %.3f, total %.3f +- %.3f\n", sources[i].name, result.share[i].first,
           result.share[i].first_sd, result.share[i].total, result.share[i].total_sd);
  }
  lxg_uncertainty_free(&result);
  lxg_photometry_search_free(&family.search);
  return status == LXG_OK && seconds <= time_bar && mebibytes <= memory_bar ? 0 : 1;
}
