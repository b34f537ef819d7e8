/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * progress.c - one line on a terminal while a command takes more than a second: what is being done and for how long.
 *
 * A thread of its own writes it, so that no stage of the computation need know about it. The line is removed before anything else is
 * written. Nothing is written when standard error is no terminal, or with --quiet.
 */
#include "cli.h"

#include "luxgale/memory.h"

#include <pthread.h>
#include <signal.h>
#include <stdatomic.h>
#include <stdbool.h>
#include <stdio.h>
#include <time.h>
#include <unistd.h>

enum { FIRST_MS = 1000, STEP_MS = 250, MS_NS = 1000000, MS_S = 1000 };

struct cli_progress {
  pthread_t thread;
  pthread_mutex_t lock;
  pthread_cond_t wake;
  bool ended;                  /* under the lock */
  _Atomic(const char *) doing; /* static text */
};

static void *show(void *argument) {
  struct cli_progress *progress = argument;
  struct timespec when;
  bool shown = false;
  clock_gettime(CLOCK_REALTIME, &when);
  const time_t start = when.tv_sec;
  pthread_mutex_lock(&progress->lock);
  for (int wait = FIRST_MS; !progress->ended; wait = STEP_MS) {
    clock_gettime(CLOCK_REALTIME, &when);
    const long long ns = when.tv_nsec + (long long)(wait % MS_S) * MS_NS;
    when.tv_sec += wait / MS_S + (time_t)(ns / (MS_NS * MS_S));
    when.tv_nsec = (long)(ns % (MS_NS * MS_S));
    pthread_cond_timedwait(&progress->wake, &progress->lock, &when);
    if (!progress->ended) {
      clock_gettime(CLOCK_REALTIME, &when);
      fprintf(stderr, "\r\033[Kluxgale: %s, %lld s", atomic_load(&progress->doing),
              (long long)(when.tv_sec - start));
      fflush(stderr);
      shown = true;
    }
  }
  pthread_mutex_unlock(&progress->lock);
  if (shown) {
    fputs("\r\033[K", stderr);
    fflush(stderr);
  }
  return NULL;
}

void cli_progress_stage(void *progress, const char *doing) {
  atomic_store(&((struct cli_progress *)progress)->doing, doing);
}

struct cli_progress *cli_progress_start(const struct cli_request *request) {
  if (request->quiet || !isatty(STDERR_FILENO)) {
    return NULL;
  }
  struct cli_progress *const progress = lxg_alloc(1, sizeof *progress);
  if (progress == NULL) {
    return NULL;
  }
  sigset_t all, before; /* signals are the main thread's business */
  sigfillset(&all);
  pthread_mutex_init(&progress->lock, NULL);
  pthread_cond_init(&progress->wake, NULL);
  progress->ended = false;
  atomic_init(&progress->doing, "working");
  pthread_sigmask(SIG_SETMASK, &all, &before);
  const int failed = pthread_create(&progress->thread, NULL, show, progress);
  pthread_sigmask(SIG_SETMASK, &before, NULL);
  if (failed != 0) {
    lxg_free(progress);
    return NULL;
  }
  return progress;
}

void cli_progress_stop(struct cli_progress *progress) {
  if (progress != NULL) {
    pthread_mutex_lock(&progress->lock);
    progress->ended = true;
    pthread_cond_signal(&progress->wake);
    pthread_mutex_unlock(&progress->lock);
    pthread_join(progress->thread, NULL);
    pthread_cond_destroy(&progress->wake);
    pthread_mutex_destroy(&progress->lock);
    lxg_free(progress);
  }
}
