/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run.c - the pool that evaluates draws, and the assembly of the result (see uncertainty.h).
 *
 * Work is handed out in blocks in rising order; every evaluation writes to its own row, so threads share nothing but the
 * counter. When one evaluation ends the run, all lower ones are still finished: the error reported is that of the lowest.
 */
#include "luxgale/memory.h"
#include "uncertainty/uncertainty_internal.h"

#include <math.h>
#include <pthread.h>
#include <stdio.h>
#include <string.h>

static const size_t block_size = 8;                             /* draws taken at a time */
static const size_t default_memory = (size_t)160 * 1024 * 1024; /* of stored draws [bytes] */
static const size_t draws_max = 100000000;

/* The whole run; `next`, `fatal_at` and `fatal` are guarded by the lock. */
struct run {
  const struct lxg_uncertainty_problem *problem;
  const struct lxg_uncertainty_options *options;
  size_t jobs;
  double *values;                    /* [jobs * outputs] */
  double *profile;                   /* [profile_draws * profile_count] */
  char (*code)[LXG_ERROR_CODE_SIZE]; /* [draws]: "" or why the draw failed */
  bool *failed;                      /* [jobs] */
  pthread_mutex_t lock;
  size_t next;
  size_t fatal_at; /* lowest evaluation that ended the run, or `jobs` */
  struct lxg_error fatal;
};

static bool ends_run(enum lxg_status status) {
  return status == LXG_MEMORY || status == LXG_IO || status == LXG_LIMIT || status == LXG_INTERRUPTED ||
         status == LXG_BUG;
}

/* Which draw evaluation `job` is: a main draw, or row B, A_1, ... of the split. */
static struct lxg_uncertainty_draw draw_of(const struct run *run, size_t job) {
  struct lxg_uncertainty_draw draw = {.seed = run->options->seed, .number = (uint32_t)job};
  if (job >= run->options->draws) {
    const size_t sources = run->problem->source_count;
    const size_t place = job - run->options->draws;
    const size_t column = place % (1 + sources);
    draw.number = (uint32_t)(place / (1 + sources));
    draw.swapped = column == 0 ? UINT32_MAX : UINT32_C(1) << (column - 1);
  }
  return draw;
}

static void report_fatal(struct run *run, size_t job, const struct lxg_error *error) {
  pthread_mutex_lock(&run->lock);
  if (job < run->fatal_at) {
    run->fatal_at = job;
    run->fatal = *error;
  }
  pthread_mutex_unlock(&run->lock);
}

static void evaluate(struct run *run, size_t job, void *workspace) {
  const struct lxg_uncertainty_problem *problem = run->problem;
  const struct lxg_uncertainty_draw draw = draw_of(run, job);
  double *outputs = run->values + job * problem->output_count;
  double *profile = job < run->options->profile_draws && problem->profile_count > 0
                        ? run->profile + job * problem->profile_count
                        : NULL;
  struct lxg_error error = {0};
  const enum lxg_status status =
      problem->evaluate(problem->shared, &draw, workspace, outputs, profile, &error);
  if (status == LXG_OK) {
    return;
  }
  run->failed[job] = true;
  for (size_t i = 0; i < problem->output_count; i++) {
    outputs[i] = NAN;
  }
  for (size_t i = 0; profile != NULL && i < problem->profile_count; i++) {
    profile[i] = NAN;
  }
  if (error.status != status) { /* a failure that says nothing still has a reason */
    lxg_error_set(&error, status, "unexplained", "draw %zu: %s", job, lxg_strerror(status));
  }
  if (job < run->options->draws) {
    memcpy(run->code[job], error.code, sizeof error.code);
  }
  if (ends_run(status)) {
    report_fatal(run, job, &error);
  }
}

/* Takes the next block; false when nothing is left or the run has ended below it. */
static bool take_block(struct run *run, size_t *first, size_t *last) {
  pthread_mutex_lock(&run->lock);
  *first = run->next;
  *last = run->jobs - run->next < block_size ? run->jobs : run->next + block_size;
  run->next = *last;
  const bool more = *first < run->jobs && *first < run->fatal_at;
  pthread_mutex_unlock(&run->lock);
  return more;
}

static void *work(void *argument) {
  struct run *run = argument;
  struct lxg_error error = {0};
  size_t first = 0;
  size_t last = 0;
  void *workspace = lxg_alloc(run->problem->workspace_bytes, 1);
  if (workspace == NULL) {
    lxg_error_set(&error, LXG_MEMORY, "uncertainty-workspace", "%zu bytes of workspace: out of memory",
                  run->problem->workspace_bytes);
    report_fatal(run, 0, &error);
    return NULL;
  }
  while (take_block(run, &first, &last)) {
    if (run->options->interrupted != NULL && run->options->interrupted()) {
      lxg_error_set(&error, LXG_INTERRUPTED, "interrupted", "stopped on request at draw %zu of %zu", first,
                    run->jobs);
      report_fatal(run, first, &error);
      break;
    }
    for (size_t job = first; job < last; job++) {
      evaluate(run, job, workspace);
    }
  }
  lxg_free(workspace);
  return NULL;
}

/* The calling thread works too; threads that cannot be started are done without. */
static void run_pool(struct run *run) {
  pthread_t thread[LXG_UNCERTAINTY_THREADS_MAX];
  unsigned started = 0;
  while (started + 1 < run->options->threads && pthread_create(&thread[started], NULL, work, run) == 0) {
    started++;
  }
  work(run);
  for (unsigned i = 0; i < started; i++) {
    pthread_join(thread[i], NULL);
  }
}

static enum lxg_status check(const struct lxg_uncertainty_problem *problem,
                             const struct lxg_uncertainty_options *options, struct lxg_error *error) {
  if (problem->source_count < 1 || problem->source_count > LXG_UNCERTAINTY_SOURCES_MAX ||
      problem->output_count < 1 || problem->evaluate == NULL) {
    return lxg_error_set(
        error, LXG_INPUT, "uncertainty-problem",
        "%zu sources and %zu outputs: 1 to %d sources, 1 output or more and a function are needed",
        problem->source_count, problem->output_count, LXG_UNCERTAINTY_SOURCES_MAX);
  }
  if (options->draws < 2 || options->draws > draws_max || options->split_draws > options->draws ||
      options->profile_draws > options->draws || options->threads < 1 ||
      options->threads > LXG_UNCERTAINTY_THREADS_MAX) {
    return lxg_error_set(
        error, LXG_INPUT, "uncertainty-options",
        "%zu draws (split %zu, profile %zu), %u threads: 2 to %zu draws, the others not above "
        "it, 1 to %d threads",
        options->draws, options->split_draws, options->profile_draws, options->threads, draws_max,
        LXG_UNCERTAINTY_THREADS_MAX);
  }
  const double rows =
      (double)options->draws + (double)options->split_draws * (double)(1 + problem->source_count);
  const double bytes = rows * ((double)problem->output_count * sizeof(double) + 1.0) +
                       (double)options->draws * LXG_ERROR_CODE_SIZE +
                       (double)options->profile_draws * (double)problem->profile_count * sizeof(double);
  const size_t limit = options->memory_bytes > 0 ? options->memory_bytes : default_memory;
  if (bytes > (double)limit) {
    return lxg_error_set(error, LXG_LIMIT, "uncertainty-memory",
                         "draws would take %.0f MiB: at most %.0f MiB are allowed", bytes / 1048576.0,
                         (double)limit / 1048576.0);
  }
  return LXG_OK;
}

static void count_failures(const struct run *run, struct lxg_uncertainty_result *result) {
  for (size_t draw = 0; draw < result->draws; draw++) {
    if (!run->failed[draw]) {
      continue;
    }
    result->failed++;
    size_t i = 0;
    while (i < result->reason_count && strcmp(result->reason[i].code, run->code[draw]) != 0) {
      i++;
    }
    if (i == LXG_UNCERTAINTY_REASONS_MAX) {
      i--;
      snprintf(result->reason[i].code, sizeof result->reason[i].code, "other");
    } else if (i == result->reason_count) {
      memcpy(result->reason[i].code, run->code[draw], sizeof result->reason[i].code);
      result->reason_count++;
    }
    result->reason[i].count++;
  }
  const size_t width = 1 + result->source_count;
  for (size_t row = 0; row < result->split_draws; row++) {
    bool failed = run->failed[row];
    for (size_t i = 0; i < width; i++) {
      failed = failed || run->failed[result->draws + row * width + i];
    }
    result->split_failed += failed ? 1 : 0;
  }
}

/* Summaries of outputs and profile; `column` holds one number of every draw. */
static void summarise(const struct run *run, struct lxg_uncertainty_result *result, double column[]) {
  for (size_t i = 0; i < result->output_count; i++) {
    for (size_t k = 0; k < result->draws; k++) {
      column[k] = run->values[k * result->output_count + i];
    }
    result->summary[i] = lxg_uncertainty_summarise(column, result->draws);
  }
  for (size_t i = 0; result->profile != NULL && i < result->profile_count; i++) {
    for (size_t k = 0; k < result->profile_draws; k++) {
      column[k] = run->profile[k * result->profile_count + i];
    }
    result->profile[i] = lxg_uncertainty_summarise(column, result->profile_draws);
  }
}

static enum lxg_status assemble(const struct run *run, struct lxg_uncertainty_result *result,
                                struct lxg_error *error) {
  double *column = lxg_alloc(result->draws, sizeof *column);
  if (column == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "uncertainty-memory", "no memory for %zu draws", result->draws);
  }
  summarise(run, result, column);
  lxg_free(column);
  count_failures(run, result);
  const struct lxg_uncertainty_rows rows = {.draws = result->draws,
                                            .split_draws = result->split_draws,
                                            .sources = result->source_count,
                                            .outputs = result->output_count,
                                            .values = run->values};
  lxg_uncertainty_correlate(&rows, result->correlation);
  if (result->share != NULL) {
    lxg_uncertainty_split(&rows, result->share);
  }
  if (result->draws - result->failed < 2) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "uncertainty-all-failed",
                         "%zu of %zu draws failed, the first with '%s': no interval can be given",
                         result->failed, result->draws,
                         result->reason_count > 0 ? result->reason[0].code : "");
  }
  return LXG_OK;
}

/* All memory of the run and of its result; false when some of it is missing. */
static bool allocate(struct run *run, struct lxg_uncertainty_result *result) {
  const size_t outputs = result->output_count;
  const size_t profiles = result->profile_draws > 0 ? result->profile_count : 0;
  run->values = lxg_alloc(run->jobs * outputs, sizeof *run->values);
  result->samples = run->values; /* the main draws stand first */
  run->code = lxg_alloc(result->draws, sizeof *run->code);
  run->failed = lxg_alloc(run->jobs, sizeof *run->failed);
  run->profile = lxg_alloc(result->profile_draws * profiles, sizeof *run->profile);
  result->summary = lxg_alloc(outputs, sizeof *result->summary);
  result->correlation = lxg_alloc(outputs * outputs, sizeof *result->correlation);
  result->profile = profiles > 0 ? lxg_alloc(profiles, sizeof *result->profile) : NULL;
  result->share =
      result->split_draws > 0 ? lxg_alloc(outputs * result->source_count, sizeof *result->share) : NULL;
  return run->values != NULL && run->code != NULL && run->failed != NULL && run->profile != NULL &&
         result->summary != NULL && result->correlation != NULL &&
         (profiles == 0 || result->profile != NULL) && (result->split_draws == 0 || result->share != NULL);
}

enum lxg_status lxg_uncertainty_run(const struct lxg_uncertainty_problem *problem,
                                    const struct lxg_uncertainty_options *options,
                                    struct lxg_uncertainty_result *result, struct lxg_error *error) {
  memset(result, 0, sizeof *result);
  enum lxg_status status = check(problem, options, error);
  if (status != LXG_OK) {
    return status;
  }
  result->draws = options->draws;
  result->split_draws = options->split_draws;
  result->output_count = problem->output_count;
  result->source_count = problem->source_count;
  result->profile_count = problem->profile_count;
  result->profile_draws = options->profile_draws;
  struct run run = {.problem = problem, .options = options};
  run.jobs = options->draws + options->split_draws * (1 + problem->source_count);
  run.fatal_at = run.jobs;
  if (!allocate(&run, result) || pthread_mutex_init(&run.lock, NULL) != 0) {
    status =
        lxg_error_set(error, LXG_MEMORY, "uncertainty-memory", "no memory for %zu draws", options->draws);
    goto done;
  }
  run_pool(&run);
  pthread_mutex_destroy(&run.lock);
  if (run.fatal_at < run.jobs) {
    status = run.fatal.status;
    if (error != NULL) {
      *error = run.fatal;
    }
    lxg_error_context(error, "evaluating draw %zu of %zu", run.fatal_at, run.jobs);
  } else {
    status = assemble(&run, result, error);
  }
done:
  lxg_free(run.code);
  lxg_free(run.failed);
  lxg_free(run.profile);
  return status;
}

void lxg_uncertainty_free(struct lxg_uncertainty_result *result) {
  if (result == NULL) {
    return;
  }
  lxg_free(result->summary);
  lxg_free(result->correlation);
  lxg_free(result->share);
  lxg_free(result->profile);
  lxg_free(result->samples);
  memset(result, 0, sizeof *result);
}
