/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * bench_observer.c - time and memory of `outburst` with errors at the size the program promises: a light curve of 1,000 epochs, 10,000
 * draws, split of the variance over six sources (noise, distance, extinction, zero point, stellar mass, base temperature), two
 * threads, families at other masses and temperatures included. Invented light curve. Bar: 10 s on two cores, that is 20 s of
 * processor time (other work on the machine does not count), and 200 MiB. Exit status 1 when missed.
 */
#include "luxgale/run.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <sys/resource.h>
#include <time.h>
#include <unistd.h>

enum { EPOCHS = 1000 };
static const double time_bar = 20.0;    /* processor time [s] */
static const double memory_bar = 200.0; /* [MiB] */

static int write_case(const char *folder, char *path, size_t size) {
  snprintf(path, size, "%s/light.csv", folder);
  FILE *file = fopen(path, "w");
  if (file == NULL) {
    return 0;
  }
  fputs("time_d,band,magnitude,error\n", file);
  for (int i = 0; i < EPOCHS; i++) {
    fprintf(file, "%.4f,V,%.4f,0.05\n", 0.08 * i, 8.2 + 4.375 * log10(1.0 + 0.08 * i / 7.0));
  }
  fclose(file);
  snprintf(path, size, "%s/case.yaml", folder);
  file = fopen(path, "w");
  if (file == NULL) {
    return 0;
  }
  fputs("case: 1\nstar: {mass: 1.05}\ncomposition: {hydrogen: 0.45, helium: 0.35, cno: 0.18, metals: 0.02}\n"
        "hold: {base_temperature: 1e8}\n"
        "luminosity: {kind: magnitude, file: light.csv, distance: 3.1, distance_error: 0.3, ebv: 0.35, "
        "ebv_error: 0.04, "
        "zero_point_error: 0.02}\n"
        "errors: {draws: 10000, split_draws: 1000, star: {mass: 0.04}, hold: {base_temperature: 1e7}}\n",
        file);
  fclose(file);
  return 1;
}

int main(void) {
  char folder[] = "/tmp/luxgale-bench-XXXXXX", path[128];
  struct lxg_error error = {0};
  struct lxg_case input;
  struct lxg_results results = {0};
  struct timespec start, end;
  if (mkdtemp(folder) == NULL || !write_case(folder, path, sizeof path)) {
    return 3;
  }
  clock_gettime(CLOCK_MONOTONIC, &start);
  enum lxg_status status = lxg_case_read(&input, path, NULL, 0, &error);
  if (status == LXG_OK) {
    status =
        lxg_run_outburst(&input, &(struct lxg_run_options){.threads = 2, .epochs = true}, &results, &error);
    lxg_results_free(&results);
    lxg_case_free(&input);
  }
  clock_gettime(CLOCK_MONOTONIC, &end);
  unlink(path);
  snprintf(path, sizeof path, "%s/light.csv", folder);
  unlink(path);
  rmdir(folder);
  struct rusage usage;
  getrusage(RUSAGE_SELF, &usage);
  const double wall = (double)(end.tv_sec - start.tv_sec) + 1e-9 * (double)(end.tv_nsec - start.tv_nsec);
  const double seconds = (double)clock() / CLOCKS_PER_SEC, mebibytes = (double)usage.ru_maxrss / 1024.0;
  printf("observer: 10000 draws x %d epochs, 6 sources: %.2f s, processor %.2f s (bar %.0f), %.0f MiB (bar "
         "%.0f)%s%s\n",
         EPOCHS, wall, seconds, time_bar, mebibytes, memory_bar, status == LXG_OK ? "" : ": ",
         status == LXG_OK ? "" : error.line[0]);
  return status == LXG_OK && seconds <= time_bar && mebibytes <= memory_bar ? 0 : 1;
}
