/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fit_kramers.c - calibrates the built-in opacity on published tables and prints the rows of kramers.def.
 *
 *   fit_kramers DATA [ROUNDS]        fit all tables, then leave each table out in turn
 *   fit_kramers DATA 0               no fit: only the errors of the coefficients now in kramers.def
 *
 * Minimises sum ((log k_formula - log k_table)/s)^2 by Levenberg-Marquardt (GSL multifit_nlinear, numerical Jacobian), where
 * s is the accuracy wanted: 0.03 dex above log T 5.7, 0.05 from 4.9, 0.09 from 4.3, 0.2 below; beyond log R = -2 three to
 * twelve times that. Bounds of kramers.def are kept by v = middle + half q/(1 + q^2)^(1/2). Weak pulls keep the powers of mass
 * fractions near 0.7 +- 0.2, those of (1 + X) near 1 +- 0.7 and the bump of He+ near log T = 5.22 +- 0.03, so that a composition left out is met by physics, not
 * by chance. Nothing random: the same data give the same rows.
 */
#include "luxgale/constants.h"
#include "luxgale/opacity_table.h"
#include "opacity/kramers.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_multifit_nlinear.h>
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

enum { PARAMETERS = KRAMERS_SCALARS + KRAMERS_BUMPS * KRAMERS_FIELDS, PULLS = 2 * KRAMERS_BUMPS + 1 };

/* He+ absorbs beyond 54.4 eV; the Rosseland weight peaks at 3.8 kT, so its bump belongs near log T = 5.22. Left alone the
 * fit may move it to cooler gas, where it would do the work of hydrogen. */
static const double helium_log_t = 5.22;

struct bound {
  const char *name;
  double lowest, highest;
};

static const struct bound scalar_bound[KRAMERS_SCALARS] = {
#define KRAMERS_SCALAR(name, value, lowest, highest, meaning) {#name, lowest, highest},
#include "opacity/kramers.def"
};
static const struct bound field_bound[KRAMERS_FIELDS] = {
#define KRAMERS_FIELD(name, lowest, highest, meaning) {#name, lowest, highest},
#include "opacity/kramers.def"
};
static const char *const bump_name[KRAMERS_BUMPS] = {
#define KRAMERS_BUMP(name, source, ...) #name ", " #source,
#include "opacity/kramers.def"
};

struct point {
  size_t table;
  double ln_rho, ln_t, log_t, log_r, log_kappa, error;
};

struct problem {
  const struct lxg_opacity_set *set;
  struct point *point;
  size_t points;
  double *scratch; /* [points] */
  size_t left_out; /* table; SIZE_MAX for none */
};

static const struct bound *bound_of(size_t i) {
  return i < KRAMERS_SCALARS ? &scalar_bound[i] : &field_bound[(i - KRAMERS_SCALARS) % KRAMERS_FIELDS];
}

static double *value_of(struct kramers_coefficients *c, size_t i) {
  return i < KRAMERS_SCALARS
             ? &c->scalar[i]
             : &c->bump[(i - KRAMERS_SCALARS) / KRAMERS_FIELDS][(i - KRAMERS_SCALARS) % KRAMERS_FIELDS];
}

static void decode(const gsl_vector *q, struct kramers_coefficients *c) {
  for (size_t i = 0; i < PARAMETERS; i++) {
    const struct bound *b = bound_of(i);
    const double s = gsl_vector_get(q, i);
    *value_of(c, i) = 0.5 * (b->lowest + b->highest) + 0.5 * (b->highest - b->lowest) * s / sqrt(1.0 + s * s);
  }
  c->bump[KRAMERS_BUMP_hydrogen][KRAMERS_electrons] =
      0.0; /* X and 1 + X tell the same of hydrogen's own bump */
}

static void encode(const struct kramers_coefficients *c, gsl_vector *q) {
  struct kramers_coefficients copy = *c;
  for (size_t i = 0; i < PARAMETERS; i++) {
    const struct bound *b = bound_of(i);
    double s = (2.0 * *value_of(&copy, i) - b->lowest - b->highest) / (b->highest - b->lowest);
    s = fmax(-0.999, fmin(0.999, s));
    gsl_vector_set(q, i, s / sqrt(1.0 - s * s));
  }
}

static double wanted_error(double log_t, double log_r) {
  const double error = log_t > 5.701 ? 0.03 : log_t > 4.899 ? 0.05 : log_t > 4.299 ? 0.09 : 0.2;
  return log_r <= -2.0 + 1e-9 ? error : error * fmin(fmax(3.0 + 3.0 * (log_r + 2.0), 3.0), 12.0);
}

static void misfits(const struct problem *p, const struct kramers_coefficients *c, double *difference) {
  struct kramers_law law = {0};
  size_t table = SIZE_MAX;
  for (size_t i = 0; i < p->points; i++) {
    const struct point *at = &p->point[i];
    if (at->table != table) {
      table = at->table;
      lxg_opacity_kramers_init(&law, c, &p->set->grid[table]->composition, 0);
    }
    difference[i] = log10(lxg_opacity_kramers_at(&law, at->ln_rho, at->ln_t).kappa) - at->log_kappa;
  }
}

static int residuals(const gsl_vector *q, void *data, gsl_vector *f) {
  const struct problem *p = data;
  struct kramers_coefficients c;
  decode(q, &c);
  misfits(p, &c, p->scratch);
  for (size_t i = 0; i < p->points; i++) { /* `f` may be a column of the Jacobian, with a stride */
    gsl_vector_set(f, i, p->point[i].table == p->left_out ? 0.0 : p->scratch[i] / p->point[i].error);
  }
  for (size_t b = 0; b < KRAMERS_BUMPS; b++) {
    gsl_vector_set(f, p->points + 2 * b, (c.bump[b][KRAMERS_element] - 0.7) / 0.2);
    gsl_vector_set(f, p->points + 2 * b + 1,
                   b == KRAMERS_BUMP_hydrogen ? 0.0 : (c.bump[b][KRAMERS_electrons] - 1.0) / 0.7);
  }
  gsl_vector_set(f, p->points + PULLS - 1,
                 (c.bump[KRAMERS_BUMP_helium2][KRAMERS_log_t] - helium_log_t) / 0.03);
  return GSL_SUCCESS;
}

static void fit(struct problem *p, struct kramers_coefficients *c, size_t rounds) {
  gsl_multifit_nlinear_parameters options = gsl_multifit_nlinear_default_parameters();
  options.scale = gsl_multifit_nlinear_scale_levenberg;
  options.solver = gsl_multifit_nlinear_solver_cholesky;
  gsl_multifit_nlinear_fdf fdf = {.f = residuals, .n = p->points + PULLS, .p = PARAMETERS, .params = p};
  gsl_multifit_nlinear_workspace *w =
      gsl_multifit_nlinear_alloc(gsl_multifit_nlinear_trust, &options, fdf.n, fdf.p);
  gsl_vector *q = gsl_vector_alloc(PARAMETERS);
  encode(c, q);
  gsl_multifit_nlinear_init(q, &fdf, w);
  int info = 0;
  gsl_multifit_nlinear_driver(rounds, 1e-6, 1e-8, 1e-6, NULL, NULL, &info, w);
  decode(gsl_multifit_nlinear_position(w), c);
  gsl_vector_free(q);
  gsl_multifit_nlinear_free(w);
}

/* rms [dex] over log R <= -2 of a band of log T, of one table or (SIZE_MAX) all */
static double rms(const struct problem *p, const double *difference, size_t table, double from, double to) {
  double sum = 0.0;
  size_t count = 0;
  for (size_t i = 0; i < p->points; i++) {
    const struct point *at = &p->point[i];
    if ((table == SIZE_MAX || at->table == table) && at->log_r <= -2.0 + 1e-9 && at->log_t >= from - 1e-9 &&
        at->log_t <= to + 1e-9) {
      sum += difference[i] * difference[i];
      count++;
    }
  }
  return sqrt(sum / (double)count);
}

static void print_errors(const struct problem *p, const struct kramers_coefficients *c, size_t table,
                         const char *title, double *difference) {
  misfits(p, c, difference);
  printf("%-28s 4.3-8.5: %.4f  4.9-5.7: %.4f  5.75-8.5: %.4f  below 4.3: %.4f\n", title,
         rms(p, difference, table, 4.3, 8.5), rms(p, difference, table, 4.9, 5.7),
         rms(p, difference, table, 5.71, 8.5), rms(p, difference, table, 3.7, 4.29));
}

static void print_rows(const struct kramers_coefficients *c) {
  for (size_t i = 0; i < KRAMERS_SCALARS; i++) {
    printf("%-16s %.6g\n", scalar_bound[i].name, c->scalar[i]);
  }
  for (size_t b = 0; b < KRAMERS_BUMPS; b++) {
    printf("KRAMERS_BUMP(%s", bump_name[b]);
    for (size_t i = 0; i < KRAMERS_FIELDS; i++) {
      printf(", %.6g", c->bump[b][i]);
    }
    printf(")\n");
  }
}

static void collect(struct problem *p) {
  for (size_t k = 0; k < p->set->count; k++) {
    const struct lxg_opacity_grid *grid = p->set->grid[k];
    for (size_t i = 0; i < grid->temperatures * grid->densities; i++) {
      const double u = grid->log_t[i / grid->densities];
      const double l = grid->log_r[i % grid->densities];
      if (isnan(grid->log_kappa[i]) || u > 8.51) { /* the last row, log T = 8.7, has edge artefacts */
        continue;
      }
      p->point[p->points++] = (struct point){.table = k,
                                             .ln_t = u * LXG_LN10,
                                             .ln_rho = (l + 3.0 * (u - 6.0)) * LXG_LN10,
                                             .log_t = u,
                                             .log_r = l,
                                             .log_kappa = grid->log_kappa[i],
                                             .error = wanted_error(u, l)};
    }
  }
}

int main(int argc, char **argv) {
  struct lxg_opacity_set set;
  struct lxg_error error = {0};
  gsl_set_error_handler_off();
  if (argc < 2 || lxg_opacity_import(argv[1], NULL, &set, &error) != LXG_OK) {
    fprintf(stderr, "%s\n", argc < 2 ? "usage: fit_kramers DATA [ROUNDS]" : error.line[0]);
    return 2;
  }
  size_t nodes = 0;
  for (size_t k = 0; k < set.count; k++) {
    nodes += set.grid[k]->temperatures * set.grid[k]->densities;
  }
  struct problem p = {.set = &set,
                      .point = calloc(nodes, sizeof(struct point)),
                      .scratch = calloc(nodes, sizeof(double)),
                      .left_out = SIZE_MAX};
  double *difference = calloc(nodes, sizeof *difference);
  if (p.point == NULL || p.scratch == NULL || difference == NULL) {
    return 4;
  }
  const size_t rounds = argc > 2 ? strtoul(argv[2], NULL, 10) : 60;
  struct kramers_coefficients best = lxg_opacity_kramers_calibrated;
  collect(&p);
  print_errors(&p, &best, SIZE_MAX, "start, all", difference);
  if (rounds > 0) {
    fit(&p, &best, rounds);
    print_rows(&best);
  }
  print_errors(&p, &best, SIZE_MAX, "all", difference);
  for (size_t k = 0; k < set.count; k++) {
    char title[64];
    snprintf(title, sizeof title, "X = %.2f, Z = %.3f", set.grid[k]->composition.hydrogen,
             set.grid[k]->composition.metals);
    print_errors(&p, &best, k, title, difference);
    if (rounds > 0) {
      struct kramers_coefficients without = best;
      p.left_out = k;
      fit(&p, &without, rounds / 2 + 1);
      print_errors(&p, &without, k, "   when left out of the fit", difference);
      fflush(stdout);
    }
  }
  free(p.point);
  free(p.scratch);
  free(difference);
  lxg_opacity_set_free(&set);
  return 0;
}
