/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * compare_schemes.c - which interpolation to use in opacity tables: error at withheld nodes around the iron bump.
 *
 *   compare_schemes DATA
 *
 * Every second node of a published table is withheld, along log T (then the rest is 0.1 dex apart), along log R (1 dex) or
 * both; a bicubic Hermite surface through the others predicts those with 4.9 <= log T <= 5.7 and log R <= -2. The schemes
 * differ in how node slopes are found. Overshoot: how far the surface between nodes leaves the range of the four
 * corners of its cell, at most.
 */
#include "luxgale/opacity_table.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_interp.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>

enum { NODES = 128 };
enum scheme { SPLINE, AKIMA, STEFFEN, HARMONIC, FIVE, FIVE_LIMITED, SCHEMES };
static const char *const name[SCHEMES] = {"natural spline",  "Akima",      "Steffen",
                                          "Fritsch-Butland", "five-point", "five-point, limited"};

static void slopes_gsl(const gsl_interp_type *type, const double *x, const double *f, size_t n, double *m) {
  gsl_interp *interp = gsl_interp_alloc(type, n);
  gsl_interp_init(interp, x, f, n);
  for (size_t i = 0; i < n; i++) {
    gsl_interp_eval_deriv_e(interp, x, f, x[i], NULL, &m[i]);
  }
  gsl_interp_free(interp);
}

/* Derivative at x[i] of the polynomial through up to five nodes around it. */
static double polynomial_slope(const double *x, const double *f, size_t n, size_t i) {
  const size_t span = n < 5 ? n : 5;
  size_t first = i < 2 ? 0 : i - 2;
  first = first + span > n ? n - span : first;
  double sum = 0.0;
  for (size_t k = first; k < first + span; k++) {
    if (k == i) {
      continue;
    }
    double weight = 1.0 / (x[k] - x[i]);
    for (size_t j = first; j < first + span; j++) {
      if (j != k && j != i) {
        weight *= (x[i] - x[j]) / (x[k] - x[j]);
      }
    }
    sum += weight * (f[k] - f[i]);
  }
  return sum;
}

static double limited(double m, double left, double right) {
  if (left * right <= 0.0) {
    return 0.0;
  }
  const double most = 3.0 * fmin(fabs(left), fabs(right));
  return copysign(fmin(m * left > 0.0 ? fabs(m) : 0.0, most), left);
}

static void slopes(enum scheme scheme, const double *x, const double *f, size_t n, double *m) {
  if (scheme == SPLINE || scheme == AKIMA || scheme == STEFFEN) {
    slopes_gsl(scheme == SPLINE  ? gsl_interp_cspline
               : scheme == AKIMA ? gsl_interp_akima
                                 : gsl_interp_steffen,
               x, f, n, m);
    return;
  }
  for (size_t i = 0; i < n; i++) {
    m[i] = polynomial_slope(x, f, n, i);
    const size_t l = i == 0 ? 1 : i,
                 r = i + 1 == n ? n - 2 : i; /* at an end both are the only interval there is */
    const double left = (f[l] - f[l - 1]) / (x[l] - x[l - 1]);
    const double right = (f[r + 1] - f[r]) / (x[r + 1] - x[r]);
    if (scheme == HARMONIC && i > 0 && i + 1 < n) {
      const double hl = x[i] - x[i - 1], hr = x[i + 1] - x[i];
      m[i] = left * right > 0.0 ? 3.0 * (hl + hr) / ((2.0 * hr + hl) / left + (hr + 2.0 * hl) / right) : 0.0;
    } else if (scheme == FIVE_LIMITED || scheme == HARMONIC) {
      m[i] = limited(m[i], left, right);
    }
  }
}

struct surface {
  size_t nt, nr;
  double t[NODES], r[NODES];
  double f[NODES][NODES], ft[NODES][NODES], fr[NODES][NODES], ftr[NODES][NODES];
};

static void along_t(struct surface *s, enum scheme scheme, double from[NODES][NODES],
                    double to[NODES][NODES]) {
  double f[NODES], m[NODES];
  for (size_t j = 0; j < s->nr; j++) {
    for (size_t i = 0; i < s->nt; i++) {
      f[i] = from[i][j];
    }
    slopes(scheme, s->t, f, s->nt, m);
    for (size_t i = 0; i < s->nt; i++) {
      to[i][j] = m[i];
    }
  }
}

static void build(struct surface *s, enum scheme scheme) {
  static double other[NODES][NODES];
  along_t(s, scheme, s->f, s->ft);
  for (size_t i = 0; i < s->nt; i++) {
    slopes(scheme, s->r, s->f[i], s->nr, s->fr[i]);
  }
  along_t(s, scheme, s->fr, s->ftr);
  for (size_t i = 0; i < s->nt; i++) {
    slopes(scheme, s->r, s->ft[i], s->nr, other[i]);
    for (size_t j = 0; j < s->nr; j++) {
      s->ftr[i][j] = 0.5 * (s->ftr[i][j] + other[i][j]);
    }
  }
}

static void hermite(double x, double h, double b[4]) {
  b[0] = (1.0 + 2.0 * x) * (1.0 - x) * (1.0 - x);
  b[1] = x * x * (3.0 - 2.0 * x);
  b[2] = h * x * (1.0 - x) * (1.0 - x);
  b[3] = h * x * x * (x - 1.0);
}

static double in_cell(const struct surface *s, size_t i, size_t j, double x, double y) {
  double a[4], b[4];
  hermite(x, s->t[i + 1] - s->t[i], a);
  hermite(y, s->r[j + 1] - s->r[j], b);
  double sum = 0.0;
  for (size_t p = 0; p < 2; p++) {
    for (size_t q = 0; q < 2; q++) {
      sum += a[p] * b[q] * s->f[i + p][j + q] + a[2 + p] * b[q] * s->ft[i + p][j + q] +
             a[p] * b[2 + q] * s->fr[i + p][j + q] + a[2 + p] * b[2 + q] * s->ftr[i + p][j + q];
    }
  }
  return sum;
}

static double at(const struct surface *s, double t, double r) {
  size_t i = 0, j = 0;
  while (i + 2 < s->nt && t > s->t[i + 1] + 1e-9) {
    i++;
  }
  while (j + 2 < s->nr && r > s->r[j + 1] + 1e-9) {
    j++;
  }
  return in_cell(s, i, j, (t - s->t[i]) / (s->t[i + 1] - s->t[i]), (r - s->r[j]) / (s->r[j + 1] - s->r[j]));
}

static double overshoot(const struct surface *s) {
  double worst = 0.0;
  for (size_t i = 0; i + 1 < s->nt; i++) {
    for (size_t j = 0; j + 1 < s->nr; j++) {
      if (s->t[i] < 4.9 || s->t[i + 1] > 5.71 || s->r[j + 1] > -1.99) {
        continue;
      }
      const double a = s->f[i][j], b = s->f[i + 1][j], c = s->f[i][j + 1], d = s->f[i + 1][j + 1];
      const double most = fmax(fmax(a, b), fmax(c, d)), least = fmin(fmin(a, b), fmin(c, d));
      for (int k = 0; k < 100; k++) {
        const double v = in_cell(s, i, j, (k / 10 + 0.5) / 10.0, (k % 10 + 0.5) / 10.0);
        worst = fmax(worst, fmax(v - most, least - v));
      }
    }
  }
  return worst;
}

/* Nodes of 4.2 <= log T <= 6, log R <= 0, where published tables are complete. */
static void thin(const struct lxg_opacity_grid *grid, size_t every_t, size_t every_r, struct surface *s) {
  s->nt = s->nr = 0;
  for (size_t i = 0; i < grid->temperatures && grid->log_t[i] < 6.01; i += every_t) {
    if (grid->log_t[i] < 4.19) {
      continue;
    }
    s->nr = 0;
    s->t[s->nt] = grid->log_t[i];
    for (size_t j = 0; j < grid->densities && grid->log_r[j] < 0.01; j += every_r) {
      s->r[s->nr] = grid->log_r[j];
      s->f[s->nt][s->nr++] = grid->log_kappa[i * grid->densities + j];
    }
    s->nt++;
  }
}

static void compare(const struct lxg_opacity_set *set, size_t every_t, size_t every_r, const char *title) {
  static struct surface s;
  printf("%s\n", title);
  for (int scheme = 0; scheme < SCHEMES; scheme++) {
    double sum = 0.0, most = 0.0, over = 0.0;
    size_t count = 0;
    for (size_t k = 0; k < set->count; k++) {
      const struct lxg_opacity_grid *grid = set->grid[k];
      thin(grid, every_t, every_r, &s);
      build(&s, (enum scheme)scheme);
      over = fmax(over, overshoot(&s));
      for (size_t i = 0; i < grid->temperatures; i++) {
        for (size_t j = 0; j < grid->densities; j++) {
          const double t = grid->log_t[i], r = grid->log_r[j];
          const int withheld = i % every_t != 0 || j % every_r != 0;
          if (withheld && t > 4.899 && t < 5.701 && r < -1.99) {
            const double d = fabs(at(&s, t, r) - grid->log_kappa[i * grid->densities + j]);
            sum += d * d;
            most = fmax(most, d);
            count++;
          }
        }
      }
    }
    printf("  %-20s rms %.5f  largest %.4f  overshoot %.4f dex\n", name[scheme], sqrt(sum / (double)count),
           most, over);
  }
}

int main(int argc, char **argv) {
  struct lxg_opacity_set set;
  struct lxg_error error = {0};
  gsl_set_error_handler_off();
  if (argc < 2 || lxg_opacity_import(argv[1], NULL, &set, &error) != LXG_OK) {
    fprintf(stderr, "%s\n", argc < 2 ? "usage: compare_schemes DATA" : error.line[0]);
    return 2;
  }
  compare(&set, 2, 1, "every second log T withheld");
  compare(&set, 1, 2, "every second log R withheld");
  compare(&set, 2, 2, "both");
  lxg_opacity_set_free(&set);
  return 0;
}
