/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * stress.c - random winds over ranges far wider than any object: each must end solved and right, or with a reason.
 *
 *   stress --cases N [--first I] [--seed S] [--second K] [--again K] [--traps] [--verbose]
 *
 * Case i of seed S is a pure function of (S, i). Even ones are novae: white dwarfs of 0.5 to 1.35 Msun with held values over the
 * range of novae (a pair of them need not have a wind). Odd ones: white dwarfs of 0.3 to 1.4 Msun and stars of 0.3 to 100 Msun and 0.05 to
 * 1000 Rsun; hydrogen 0 to 0.9, core material to 0.5, metals 1e-5 to 0.06; the three formulas, formulas with sources left out, tables
 * with each policy; the four porosity laws; two different held quantities with values over two to eight decades.
 * Judged (bars as constants below):
 *   ending   solved, or a reason code, or refused input with its code; no trap, no signal, within STEPS Newton steps and SECONDS
 *   residual of a solved wind below RESIDUAL, held values met, numbers finite where the header promises them
 *   second   every K-th solved wind on a mesh of another number of stages, by launch radius and mass-loss rate: equal within SECOND
 *   again    every K-th solved wind by two other held quantities, taken from its own values: there is a wind, so a reason that
 *            claims to be a proof of none is false (not-found is honest, and counted)
 * Prints the offending cases with their numbers, and one JSON line; exit status 1 if a bar is broken.
 */
#define _GNU_SOURCE
#include "luxgale/constants.h"
#include "luxgale/opacity_table.h"
#include "luxgale/random.h"
#include "luxgale/wind.h"

#include <fenv.h>
#include <gsl/gsl_errno.h>
#include <math.h>
#include <setjmp.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/time.h>
#include <time.h>

static const double RESIDUAL = 1e-6; /* relative, of (W1)-(W4) off the mesh */
static const double HELD = 1e-7;     /* relative error of a held value */
static const double SECOND = 1e-4;   /* relative difference between two meshes */
static const double SECONDS = 60.0;  /* of processor time: a hang */
enum { STEPS = 20000, STAGES = 7, TABLE_T = 60, TABLE_R = 30, OFFENDERS = 40 };

struct draw {
  struct lxg_random_place place;
  uint64_t index;
};

static double uniform(struct draw *draw, double least, double most) {
  return least + (most - least) * lxg_random_uniform(&draw->place, draw->index++);
}

static double decades(struct draw *draw, double least, double most) {
  return exp(uniform(draw, log(least), log(most)));
}

static int pick(struct draw *draw, int count) {
  return (int)uniform(draw, 0.0, (double)count);
}

/* One random case. */
struct problem {
  struct lxg_wind_model model;
  struct lxg_opacity *opacity;
  struct lxg_wind_hold hold[2];
  double l_edd;
  char text[512];
};

static struct lxg_opacity *table_of(struct draw *draw, const struct lxg_composition *composition) {
  struct lxg_opacity *formula = NULL, *table = NULL;
  struct lxg_opacity_grid *grid = NULL;
  struct lxg_opacity_set set = {0};
  struct lxg_error error = {0};
  double log_t[TABLE_T], log_r[TABLE_R];
  const double top = uniform(draw, 7.0, 8.7);
  for (int i = 0; i < TABLE_T; i++) {
    log_t[i] = 3.5 + (top - 3.5) * i / (TABLE_T - 1);
  }
  for (int i = 0; i < TABLE_R; i++) {
    log_r[i] = -8.0 + 9.0 * i / (TABLE_R - 1);
  }
  struct lxg_opacity_table_options options = lxg_opacity_table_defaults();
  options.outside = (enum lxg_opacity_outside)pick(draw, 3);
  if (lxg_opacity_create_formula(LXG_OPACITY_KRAMERS, composition, &formula, &error) == LXG_OK &&
      lxg_opacity_tabulate(formula, composition, log_t, TABLE_T, log_r, TABLE_R, "formula", &grid, &error) ==
          LXG_OK &&
      lxg_opacity_set_add(&set, grid, &error) == LXG_OK) {
    lxg_opacity_create_table(&set, composition, &options, &table, &error);
  }
  lxg_opacity_destroy(formula);
  lxg_opacity_set_free(&set);
  return table;
}

static void draw_opacity(struct draw *draw, struct problem *problem, char *name, size_t size) {
  const struct lxg_composition *composition = &problem->model.composition;
  struct lxg_error error = {0};
  const int kind = pick(draw, 6);
  unsigned omit = kind == 5 ? LXG_OPACITY_BIT(pick(draw, LXG_OPACITY_SOURCES)) : 0u;
  if (kind == 4) {
    problem->opacity = table_of(draw, composition);
    snprintf(name, size, "table");
  } else if (kind == 5) {
    lxg_opacity_create_without(LXG_OPACITY_KRAMERS, omit, composition, &problem->opacity, &error);
    snprintf(name, size, "kramers without %u", omit);
  } else {
    const enum lxg_opacity_formula formula = kind == 3   ? LXG_OPACITY_REFERENCE
                                             : kind == 2 ? LXG_OPACITY_SCATTERING
                                                         : LXG_OPACITY_KRAMERS;
    lxg_opacity_create_formula(formula, composition, &problem->opacity, &error);
    snprintf(name, size, "%s", lxg_opacity_formula_name(formula));
  }
  problem->model.opacity = problem->opacity;
}

static void draw_porosity(struct draw *draw, struct lxg_porosity *porosity) {
  static const enum lxg_porosity_law laws[] = {LXG_POROSITY_NONE, LXG_POROSITY_NONE, LXG_POROSITY_REDUCTION,
                                               LXG_POROSITY_LENGTH, LXG_POROSITY_POWER};
  porosity->law = laws[pick(draw, 5)];
  porosity->factor = decades(draw, 1.0, 20.0);
  porosity->scale = decades(draw, 0.01, 100.0);
  porosity->alpha = decades(draw, 0.2, 5.0);
}

/* A value that a nova may have. */
static double draw_nova_value(struct draw *draw, const struct problem *problem, enum lxg_held quantity) {
  const double l_edd = problem->l_edd;
  switch (quantity) {
  case LXG_HELD_BASE_TEMPERATURE:
    return decades(draw, 6e7, 2e8);
  case LXG_HELD_BASE_LUMINOSITY:
    return l_edd * uniform(draw, 0.9, 1.3);
  case LXG_HELD_LAUNCH_RADIUS:
    return decades(draw, 5e9, 1e11);
  case LXG_HELD_PHOTOSPHERE_LUMINOSITY:
    return l_edd * uniform(draw, 0.5, 1.0);
  case LXG_HELD_PHOTOSPHERE_TEMPERATURE:
    return decades(draw, 6e3, 1e5);
  case LXG_HELD_PHOTOSPHERE_RADIUS:
    return LXG_SOLAR_RADIUS * decades(draw, 0.8, 150.0);
  case LXG_HELD_TERMINAL_SPEED:
    return 1e5 * decades(draw, 150.0, 1500.0);
  case LXG_HELD_MASS_LOSS_RATE:
    return LXG_SOLAR_MASS / LXG_YEAR * decades(draw, 3e-6, 3e-4);
  case LXG_HELD_ENERGY_RATE:
    return l_edd * uniform(draw, 0.5, 1.0);
  case LXG_HELD_ENVELOPE_MASS:
    return LXG_SOLAR_MASS * decades(draw, 5e-7, 1e-4);
  case LXG_HELD_COUNT:
    break;
  }
  return NAN;
}

/* A value of a held quantity, CGS, scaled by the star. */
static double draw_value(struct draw *draw, const struct problem *problem, enum lxg_held quantity) {
  const double radius = problem->model.star.radius, l_edd = problem->l_edd;
  switch (quantity) {
  case LXG_HELD_BASE_TEMPERATURE:
    return decades(draw, 3e6, 5e8);
  case LXG_HELD_BASE_LUMINOSITY:
    return l_edd * decades(draw, 0.1, 10.0);
  case LXG_HELD_LAUNCH_RADIUS:
    return radius * decades(draw, 1.05, 1e3);
  case LXG_HELD_PHOTOSPHERE_LUMINOSITY:
    return l_edd * decades(draw, 0.05, 10.0);
  case LXG_HELD_PHOTOSPHERE_TEMPERATURE:
    return decades(draw, 2e3, 5e5);
  case LXG_HELD_PHOTOSPHERE_RADIUS:
    return radius * decades(draw, 1.2, 1e5);
  case LXG_HELD_TERMINAL_SPEED:
    return 1e5 * decades(draw, 10.0, 6e3);
  case LXG_HELD_MASS_LOSS_RATE:
    return LXG_SOLAR_MASS / LXG_YEAR * decades(draw, 1e-9, 1e-1);
  case LXG_HELD_ENERGY_RATE:
    return l_edd * uniform(draw, -2.0, 4.0);
  case LXG_HELD_ENVELOPE_MASS:
    return LXG_SOLAR_MASS * decades(draw, 1e-9, 1e-1);
  case LXG_HELD_COUNT:
    break;
  }
  return NAN;
}

static void draw_problem(uint64_t seed, uint32_t number, struct problem *problem) {
  struct draw draw = {.place = {.seed = seed, .stream = 11, .draw = number}};
  char opacity[64];
  memset(problem, 0, sizeof *problem);
  const bool nova = number % 2 == 0;
  const bool dwarf = nova || pick(&draw, 2) == 0;
  const double mass = nova    ? uniform(&draw, 0.5, 1.35)
                      : dwarf ? uniform(&draw, 0.3, 1.4)
                              : decades(&draw, 0.3, 100.0);
  struct lxg_star *star = &problem->model.star;
  star->gm = LXG_SOLAR_GM * mass;
  star->radius = LXG_SOLAR_RADIUS * decades(&draw, 0.05, 1e3);
  if (dwarf) {
    lxg_star_dwarf_radius(LXG_SOLAR_MASS * mass, &star->radius, NULL);
  }
  struct lxg_composition *mix = &problem->model.composition;
  mix->metals = nova ? uniform(&draw, 0.005, 0.05) : decades(&draw, 1e-5, 0.06);
  mix->cno = pick(&draw, 2) ? uniform(&draw, 0.0, 0.5) : 0.0;
  mix->hydrogen = fmin(uniform(&draw, 0.0, 0.9), 1.0 - mix->metals - mix->cno);
  mix->helium = 1.0 - mix->hydrogen - mix->cno - mix->metals;
  problem->l_edd = lxg_star_eddington_luminosity(star, mix);
  draw_opacity(&draw, problem, opacity, sizeof opacity);
  draw_porosity(&draw, &problem->model.porosity);
  const int first = pick(&draw, LXG_HELD_COUNT);
  const int second = (first + 1 + pick(&draw, LXG_HELD_COUNT - 1)) % LXG_HELD_COUNT;
  problem->hold[0].quantity = (enum lxg_held)first;
  problem->hold[1].quantity = (enum lxg_held)second;
  for (int i = 0; i < 2; i++) {
    problem->hold[i].value = (nova ? draw_nova_value : draw_value)(&draw, problem, problem->hold[i].quantity);
  }
  const struct lxg_porosity *por = &problem->model.porosity;
  snprintf(
      problem->text, sizeof problem->text,
      "M=%.6g Msun R=%.6g Rsun X=%.4f cno=%.4f Z=%.3g opacity=%s porosity=%s(%.4g,%.4g,%.4g) %s=%.6g %s=%.6g",
      mass, star->radius / LXG_SOLAR_RADIUS, mix->hydrogen, mix->cno, mix->metals, opacity,
      lxg_porosity_law_name(por->law), por->factor, por->scale, por->alpha,
      lxg_held_name(problem->hold[0].quantity), problem->hold[0].value,
      lxg_held_name(problem->hold[1].quantity), problem->hold[1].value);
}

/* ---- judging ---- */

static struct {
  long cases, solved, none, refused, skipped;
  long reasons[LXG_WIND_REASON_COUNT];
  long seconds_run, second_unsolved, again_run, again_solved, again_unfound;
  long trapped, hung, crashed, unexplained, residuals, helds, numbers, contradictions, false_proofs,
      many_steps;
  int most_steps;
  double most_residual, most_difference, most_seconds;
} tally;

static sigjmp_buf back;
static volatile sig_atomic_t running;

static void on_signal(int number) {
  if (running) {
    siglongjmp(back, number);
  }
  signal(number, SIG_DFL);
  raise(number);
}

static void offend(uint32_t number, const struct problem *problem, long *count, const char *what,
                   double value) {
  (*count)++;
  if (*count <= OFFENDERS) {
    printf("case %u: %s %.6g: %s\n", number, what, value, problem->text);
  }
}

static double relative(double a, double b) {
  return fabs(a - b) / fmax(fmax(fabs(a), fabs(b)), 1e-300);
}

static void judge_solved(uint32_t number, const struct problem *problem, const struct lxg_wind *wind) {
  tally.most_residual = fmax(tally.most_residual, wind->residual);
  if (!(wind->residual < RESIDUAL)) {
    offend(number, problem, &tally.residuals, "residual", wind->residual);
  }
  for (int i = 0; i < 2; i++) {
    const double got = wind->value[problem->hold[i].quantity];
    const double scale = problem->hold[i].quantity == LXG_HELD_ENERGY_RATE ? problem->l_edd : 0.0;
    const double error = fabs(got - problem->hold[i].value) / fmax(fabs(problem->hold[i].value), scale);
    if (!(error < HELD)) {
      offend(number, problem, &tally.helds, "held value missed by", error);
    }
  }
  const double finite[] = {wind->critical.radius,
                           wind->critical.temperature,
                           wind->critical.speed,
                           wind->photosphere.radius,
                           wind->photosphere.speed,
                           wind->photosphere.luminosity,
                           wind->value[LXG_HELD_MASS_LOSS_RATE],
                           wind->value[LXG_HELD_TERMINAL_SPEED],
                           wind->kinetic_rate,
                           wind->lifting_rate,
                           wind->flow_time};
  for (size_t i = 0; i < sizeof finite / sizeof finite[0]; i++) {
    if (!isfinite(finite[i]) || finite[i] < 0.0) {
      offend(number, problem, &tally.numbers, "not finite or negative, number", (double)i);
    }
  }
}

static void judge_second(uint32_t number, const struct problem *problem, const struct lxg_wind *wind) {
  struct lxg_wind_options options = lxg_wind_options_default();
  struct lxg_wind_solver *solver = NULL;
  struct lxg_error error = {0};
  struct lxg_wind other;
  const struct lxg_wind_hold hold[2] = {{LXG_HELD_LAUNCH_RADIUS, wind->value[LXG_HELD_LAUNCH_RADIUS]},
                                        {LXG_HELD_MASS_LOSS_RATE, wind->value[LXG_HELD_MASS_LOSS_RATE]}};
  options.stages = STAGES;
  tally.seconds_run++;
  if (lxg_wind_solver_create(&problem->model, &options, &solver, &error) == LXG_OK &&
      lxg_wind_solve(solver, hold, &other, &error) == LXG_OK) {
    static const enum lxg_held compared[] = {
        LXG_HELD_PHOTOSPHERE_LUMINOSITY, LXG_HELD_PHOTOSPHERE_TEMPERATURE, LXG_HELD_PHOTOSPHERE_RADIUS,
        LXG_HELD_TERMINAL_SPEED,         LXG_HELD_BASE_TEMPERATURE,        LXG_HELD_ENVELOPE_MASS};
    double most = 0.0;
    for (size_t i = 0; i < sizeof compared / sizeof compared[0]; i++) {
      const double difference = relative(wind->value[compared[i]], other.value[compared[i]]);
      most = isfinite(difference) ? fmax(most, difference) : most;
    }
    tally.most_difference = fmax(tally.most_difference, most);
    if (most > SECOND) {
      offend(number, problem, &tally.contradictions, "a second mesh differs by", most);
    }
  } else {
    tally.second_unsolved++;
    printf("case %u: not found again by launch radius and rate (%s): %s\n", number, error.code,
           problem->text);
  }
  lxg_wind_solver_destroy(solver);
}

static void judge_again(uint32_t number, const struct problem *problem, const struct lxg_wind *wind,
                        uint64_t seed) {
  struct draw draw = {.place = {.seed = seed, .stream = 12, .draw = number}};
  const int first = pick(&draw, LXG_HELD_COUNT);
  const int second = (first + 1 + pick(&draw, LXG_HELD_COUNT - 1)) % LXG_HELD_COUNT;
  const struct lxg_wind_hold hold[2] = {{(enum lxg_held)first, wind->value[first]},
                                        {(enum lxg_held)second, wind->value[second]}};
  struct lxg_wind_solver *solver = NULL;
  struct lxg_error error = {0};
  struct lxg_wind other;
  if (!isfinite(hold[0].value) || !isfinite(hold[1].value) ||
      lxg_wind_solver_create(&problem->model, NULL, &solver, &error) != LXG_OK) {
    return;
  }
  const enum lxg_status status = lxg_wind_solve(solver, hold, &other, &error);
  if (status == LXG_OK || status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) {
    tally.again_run++;
    tally.again_solved += status == LXG_OK;
    if (status != LXG_OK && other.reason == LXG_WIND_NOT_FOUND) {
      tally.again_unfound++;
      printf("case %u: again by %s=%.17g %s=%.17g: not found: %s\n", number, lxg_held_name(hold[0].quantity),
             hold[0].value, lxg_held_name(hold[1].quantity), hold[1].value, problem->text);
    } else if (status != LXG_OK) {
      printf("case %u: again by %s=%.17g %s=%.17g: said to be %s: ", number, lxg_held_name(hold[0].quantity),
             hold[0].value, lxg_held_name(hold[1].quantity), hold[1].value,
             lxg_wind_reason_code(other.reason));
      offend(number, problem, &tally.false_proofs, "false proof", (double)other.reason);
    }
  }
  lxg_wind_solver_destroy(solver);
}

struct plan {
  uint32_t first, cases;
  uint64_t seed;
  long second, again;
  bool traps, verbose;
};

static void solve_one(uint32_t number, const struct problem *problem, const struct plan *plan) {
  struct lxg_wind_solver *solver = NULL;
  struct lxg_error error = {0};
  struct lxg_wind wind = {0};
  enum lxg_status status = lxg_wind_solver_create(&problem->model, NULL, &solver, &error);
  if (status == LXG_OK) {
    status = lxg_wind_solve(solver, problem->hold, &wind, &error);
  }
  if (status == LXG_INPUT && error.code[0] != '\0') {
    tally.refused++;
  } else if (status == LXG_OK && wind.reason == LXG_WIND_SOLVED) {
    tally.solved++;
    judge_solved(number, problem, &wind);
  } else if ((status == LXG_NO_SOLUTION || status == LXG_NOT_CONVERGED) && wind.reason != LXG_WIND_SOLVED &&
             error.code[0] != '\0') {
    tally.none++;
    tally.reasons[wind.reason]++;
  } else {
    offend(number, problem, &tally.unexplained, "status", (double)status);
  }
  if (wind.newton_steps > STEPS) {
    offend(number, problem, &tally.many_steps, "Newton steps", (double)wind.newton_steps);
  }
  tally.most_steps = wind.newton_steps > tally.most_steps ? wind.newton_steps : tally.most_steps;
  if (plan->verbose) {
    printf("case %u: %s [%s] %d steps, residual %.2g: %s\n", number, lxg_wind_reason_code(wind.reason),
           error.code, wind.newton_steps, wind.residual, problem->text);
  }
  lxg_wind_solver_destroy(solver);
  if (status == LXG_OK && plan->second > 0 && tally.solved % plan->second == 0) {
    judge_second(number, problem, &wind);
  }
  if (status == LXG_OK && plan->again > 0 && tally.solved % plan->again == 0) {
    judge_again(number, problem, &wind, plan->seed);
  }
}

/* A case may end by a trap or a time-out; then its memory is lost, and the next case goes on. */
static void guarded(uint32_t number, const struct problem *problem, const struct plan *plan) {
  const struct itimerval limit = {.it_value = {.tv_sec = (time_t)SECONDS}}, off = {0};
  const clock_t start = clock();
  const int caught = sigsetjmp(back, 1);
  if (caught == 0) {
    running = 1;
    setitimer(ITIMER_VIRTUAL, &limit, NULL);
    feclearexcept(FE_ALL_EXCEPT);
    if (plan->traps) {
      feenableexcept(FE_DIVBYZERO | FE_INVALID | FE_OVERFLOW);
    }
    solve_one(number, problem, plan);
  }
  running = 0;
  setitimer(ITIMER_VIRTUAL, &off, NULL);
  fedisableexcept(FE_ALL_EXCEPT);
  const double seconds = (double)(clock() - start) / CLOCKS_PER_SEC;
  tally.most_seconds = fmax(tally.most_seconds, seconds);
  if (caught == SIGFPE) {
    offend(number, problem, &tally.trapped, "floating-point trap", 0.0);
  } else if (caught == SIGVTALRM) {
    offend(number, problem, &tally.hung, "more seconds than", SECONDS);
  } else if (caught != 0) {
    offend(number, problem, &tally.crashed, "signal", (double)caught);
  }
}

static long report(const struct plan *plan) {
  const long broken = tally.trapped + tally.hung + tally.crashed + tally.unexplained + tally.residuals +
                      tally.helds + tally.numbers + tally.contradictions + tally.false_proofs +
                      tally.many_steps;
  printf(
      "{\"seed\": %llu, \"cases\": %ld, \"solved\": %ld, \"none\": %ld, \"refused\": %ld, \"skipped\": %ld, "
      "\"reasons\": {",
      (unsigned long long)plan->seed, tally.cases, tally.solved, tally.none, tally.refused, tally.skipped);
  for (int i = 1; i < LXG_WIND_REASON_COUNT; i++) {
    printf("%s\"%s\": %ld", i > 1 ? ", " : "", lxg_wind_reason_code((enum lxg_wind_reason)i),
           tally.reasons[i]);
  }
  printf("}, \"second_meshes\": %ld, \"second_unsolved\": %ld, \"again\": %ld, \"again_solved\": %ld, "
         "\"again_not_found\": %ld, \"most_steps\": %d, \"most_residual\": %.3g, \"most_difference\": %.3g, "
         "\"most_seconds\": %.2f, ",
         tally.seconds_run, tally.second_unsolved, tally.again_run, tally.again_solved, tally.again_unfound,
         tally.most_steps, tally.most_residual, tally.most_difference, tally.most_seconds);
  printf("\"trapped\": %ld, \"hung\": %ld, \"crashed\": %ld, \"unexplained\": %ld, \"residuals\": %ld, "
         "\"held_missed\": %ld, \"not_finite\": %ld, \"contradictions\": %ld, \"false_proofs\": %ld, "
         "\"many_steps\": %ld}\n",
         tally.trapped, tally.hung, tally.crashed, tally.unexplained, tally.residuals, tally.helds,
         tally.numbers, tally.contradictions, tally.false_proofs, tally.many_steps);
  return broken;
}

int main(int argc, char **argv) {
  struct plan plan = {.cases = 150, .seed = 1};
  for (int i = 1; i < argc; i++) {
    const long long value = i + 1 < argc ? atoll(argv[i + 1]) : 0;
    const char *const word = argv[i];
    plan.traps = plan.traps || strcmp(word, "--traps") == 0;
    plan.verbose = plan.verbose || strcmp(word, "--verbose") == 0;
    plan.cases = strcmp(word, "--cases") == 0 ? (uint32_t)value : plan.cases;
    plan.first = strcmp(word, "--first") == 0 ? (uint32_t)value : plan.first;
    plan.seed = strcmp(word, "--seed") == 0 ? (uint64_t)value : plan.seed;
    plan.second = strcmp(word, "--second") == 0 ? (long)value : plan.second;
    plan.again = strcmp(word, "--again") == 0 ? (long)value : plan.again;
  }
  gsl_set_error_handler_off();
  const int caught[] = {SIGFPE, SIGVTALRM, SIGSEGV, SIGBUS, SIGABRT};
  for (size_t i = 0; i < sizeof caught / sizeof caught[0]; i++) {
    signal(caught[i], on_signal);
  }
  for (uint32_t i = 0; i < plan.cases; i++) {
    struct problem problem;
    draw_problem(plan.seed, plan.first + i, &problem);
    tally.cases++;
    if (problem.opacity == NULL) {
      tally.skipped++; /* nothing absorbs when its one source is left out */
    } else {
      guarded(plan.first + i, &problem, &plan);
    }
    lxg_opacity_destroy(problem.opacity);
    fflush(stdout);
  }
  return report(&plan) > 0;
}
