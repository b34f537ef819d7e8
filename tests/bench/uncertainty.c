/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * uncertainty.c - time and memory of a Monte Carlo of the size the program promises: 10,000 draws of 1,000 epochs, five
 * sources, variance split with 1,000 rows, intervals of 4 columns at every epoch, two threads. Each epoch is looked up in an
 * invented family of 200 members. Bar: 10 s and 200 MiB. Exit status 1 when it is missed.
 */
#include "luxgale/uncertainty.h"
#include "luxgale/memory.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <sys/resource.h>
#include <time.h>

enum { EPOCHS = 1000, MEMBERS = 200, COLUMNS = 4, SOURCES = 5 };
static const double time_bar = 10.0;    /* [s] */
static const double memory_bar = 200.0; /* [MiB] */

static const struct lxg_uncertainty_source sources[SOURCES] = {{"noise", LXG_UNCERTAINTY_EPOCH},
                                                               {"zero point", LXG_UNCERTAINTY_CALIBRATION},
                                                               {"distance", LXG_UNCERTAINTY_CALIBRATION},
                                                               {"extinction", LXG_UNCERTAINTY_CALIBRATION},
                                                               {"mass", LXG_UNCERTAINTY_MODEL}};

struct family {
  double magnitude[MEMBERS]; /* rising */
  double quantity[COLUMNS][MEMBERS];
};

/* Place of x in a rising table. */
static size_t segment(const double table[], double x) {
  size_t low = 0;
  size_t high = MEMBERS - 1;
  while (high - low > 1) {
    const size_t middle = (low + high) / 2;
    if (table[middle] <= x) {
      low = middle;
    } else {
      high = middle;
    }
  }
  return low;
}

static void look_up(const struct family *family, double m, double value[COLUMNS]) {
  const size_t s = segment(family->magnitude, m);
  const double step = family->magnitude[s + 1] - family->magnitude[s];
  const double share = fmin(fmax((m - family->magnitude[s]) / step, 0.0), 1.0);
  for (int c = 0; c < COLUMNS; c++) {
    value[c] = family->quantity[c][s] + share * (family->quantity[c][s + 1] - family->quantity[c][s]);
  }
}

static enum lxg_status evaluate(const void *shared, const struct lxg_uncertainty_draw *draw, void *workspace,
                                double outputs[], double profile[], struct lxg_error *error) {
  double *noise = workspace;
  (void)error;
  lxg_uncertainty_normals(draw, 0, EPOCHS, noise);
  const double shift = 0.1 * lxg_uncertainty_normal(draw, 1, 0) + 0.2 * lxg_uncertainty_normal(draw, 2, 0) +
                       0.05 * lxg_uncertainty_normal(draw, 3, 0);
  const double scale = exp(0.1 * lxg_uncertainty_normal(draw, 4, 0));
  outputs[0] = 0.0;
  outputs[1] = 0.0;
  for (int i = 0; i < EPOCHS; i++) {
    double value[COLUMNS];
    look_up(shared, -8.0 + 6.0 * i / EPOCHS + shift + 0.05 * noise[i], value);
    for (int c = 0; profile != NULL && c < COLUMNS; c++) {
      profile[i * COLUMNS + c] = value[c];
    }
    outputs[0] += scale * value[0];
    outputs[1] += scale * value[0] * value[1] * value[1];
  }
  outputs[2] = outputs[1] / outputs[0];
  return LXG_OK;
}

static struct family *invent(void) {
  struct family *family = lxg_alloc(1, sizeof *family);
  for (int i = 0; family != NULL && i < MEMBERS; i++) {
    family->magnitude[i] = -9.0 + 8.0 * i / (MEMBERS - 1.0);
    for (int c = 0; c < COLUMNS; c++) {
      family->quantity[c][i] = exp(-0.5 * (c + 1) * family->magnitude[i]);
    }
  }
  return family;
}

int main(void) {
  struct family *family = invent();
  if (family == NULL) {
    return 4;
  }
  const struct lxg_uncertainty_problem problem = {.sources = sources,
                                                  .source_count = SOURCES,
                                                  .output_count = 3,
                                                  .profile_count = EPOCHS * COLUMNS,
                                                  .workspace_bytes = EPOCHS * sizeof(double),
                                                  .evaluate = evaluate,
                                                  .shared = family};
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
  const double seconds = (double)(end.tv_sec - start.tv_sec) + 1e-9 * (double)(end.tv_nsec - start.tv_nsec);
  const double mebibytes = (double)usage.ru_maxrss / 1024.0;
  printf("uncertainty: %zu draws x %d epochs: %.2f s (bar %.0f), %.0f MiB (bar %.0f)\n", options.draws,
         EPOCHS, seconds, time_bar, mebibytes, memory_bar);
  for (int i = 0; status == LXG_OK && i < SOURCES; i++) {
    printf("  %-10s first %.3f +- %.3f, total %.3f +- %.3f\n", sources[i].name, result.share[i].first,
           result.share[i].first_sd, result.share[i].total, result.share[i].total_sd);
  }
  lxg_uncertainty_free(&result);
  lxg_free(family);
  return status == LXG_OK && seconds <= time_bar && mebibytes <= memory_bar ? 0 : 1;
}
