/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * distance.c - distance distributions and their quantiles (see distance.h).
 *
 * The parallax posterior is put on a grid even in ln r that spans every mode worth its weight, found from the roots of
 * its derivative, r^3/length - 2 r^2 + (parallax r - 1)/error^2 = 0 (r in kpc, parallax in mas). Cumulative function by
 * trapezia, inverted exactly inside a cell (density linear there).
 */
#include "luxgale/distance.h"

#include "luxgale/constants.h"

#include <gsl/gsl_cdf.h>
#include <gsl/gsl_poly.h>
#include <math.h>
#include <string.h>

static const double default_length_pc = 1350.0;
static const double log_density_depth = 40.0; /* the grid ends where the density has fallen by exp(-40) */
static const double edge_growth = 0.02;       /* first step in ln r outwards when the ends are sought */
enum { EDGE_STEPS = 400, EDGE_HALVINGS = 40, POLISH_STEPS = 4 };

double lxg_distance_default_length_pc(void) {
  return default_length_pc;
}

double lxg_distance_modulus(double distance_cm) {
  return 5.0 * log10(distance_cm / (10.0 * LXG_PARSEC));
}

double lxg_distance_from_modulus(double modulus_mag) {
  return 10.0 * LXG_PARSEC * pow(10.0, 0.2 * modulus_mag);
}

enum lxg_status lxg_distance_init_given(double value_pc, double error_pc, struct lxg_distance *distance,
                                        struct lxg_error *error) {
  if (!(value_pc > 0.0 && isfinite(value_pc) && error_pc >= 0.0 && isfinite(error_pc))) {
    return lxg_error_set(error, LXG_INPUT, "distance-value",
                         "distance = %.10g +- %.10g pc: positive with an error of zero or more", value_pc,
                         error_pc);
  }
  memset(distance, 0, sizeof *distance);
  distance->kind = LXG_DISTANCE_GIVEN;
  distance->value = value_pc;
  distance->error = error_pc;
  distance->mode = value_pc;
  return LXG_OK;
}

enum lxg_status lxg_distance_init_modulus(double value_mag, double error_mag, struct lxg_distance *distance,
                                          struct lxg_error *error) {
  if (!(isfinite(value_mag) && fabs(value_mag) <= 60.0 && error_mag >= 0.0 && error_mag <= 60.0)) {
    return lxg_error_set(
        error, LXG_INPUT, "distance-value",
        "distance modulus = %.10g +- %.10g mag: between -60 and 60 with an error of zero or more", value_mag,
        error_mag);
  }
  memset(distance, 0, sizeof *distance);
  distance->kind = LXG_DISTANCE_MODULUS;
  distance->value = value_mag;
  distance->error = error_mag;
  distance->mode = lxg_distance_from_modulus(value_mag) / LXG_PARSEC;
  return LXG_OK;
}

/* ln of the posterior density per unit r (without constant); r [kpc]. */
static double log_posterior(const struct lxg_distance *d, double r) {
  const double pull = (d->value - 1.0 / r) / d->error;
  return 2.0 * log(r) - r / (d->length / 1000.0) - 0.5 * pull * pull;
}

/* Walks in ln r from a mode until the density has dropped to `floor`; +1 outwards, -1 inwards. */
static double edge(const struct lxg_distance *d, double r, double direction, double floor) {
  double inside = log(r);
  double outside = inside;
  double step = edge_growth * direction;
  for (int i = 0; i < EDGE_STEPS && log_posterior(d, exp(outside)) > floor; i++) {
    inside = outside;
    outside += step;
    step *= 1.1;
  }
  for (int i = 0; i < EDGE_HALVINGS; i++) {
    const double middle = 0.5 * (inside + outside);
    if (log_posterior(d, exp(middle)) > floor) {
      inside = middle;
    } else {
      outside = middle;
    }
  }
  return outside;
}

static void tabulate(struct lxg_distance *d, double peak) {
  double sum = 0.0;
  for (int i = 0; i < LXG_DISTANCE_NODES; i++) {
    const double ln_r = d->ln_low + i * d->ln_step;
    d->density[i] = exp(log_posterior(d, exp(ln_r - log(1000.0))) - peak + ln_r); /* dr = r dln r */
    if (i > 0) {
      sum += 0.5 * d->ln_step * (d->density[i - 1] + d->density[i]);
    }
    d->cumulative[i] = sum;
  }
  for (int i = 0; i < LXG_DISTANCE_NODES; i++) {
    d->density[i] /= sum;
    d->cumulative[i] /= sum;
  }
}

/* A few Newton steps on the cubic: the closed form cancels when the parallax is very good. */
static double polish(const struct lxg_distance *d, double r) {
  const double l = d->length / 1000.0;
  const double weight = 1.0 / (d->error * d->error);
  for (int i = 0; i < POLISH_STEPS; i++) {
    const double value = ((r - 2.0 * l) * r + d->value * weight * l) * r - weight * l;
    const double slope = (3.0 * r - 4.0 * l) * r + d->value * weight * l;
    const double better = r - value / slope;
    if (!isfinite(better) || better <= 0.0 || fabs(better - r) > 0.5 * fabs(r)) {
      break;
    }
    r = better;
  }
  return r;
}

/* Puts the grid over all modes worth their weight. */
static void span(struct lxg_distance *d, const double root[], int roots, double peak) {
  double low = d->mode / 1000.0;
  double high = low;
  for (int i = 0; i < roots; i++) { /* stationary points inside the weighty range belong to it */
    if (root[i] > 0.0 && log_posterior(d, root[i]) > peak - log_density_depth) {
      low = fmin(low, root[i]);
      high = fmax(high, root[i]);
    }
  }
  const double ln_low = edge(d, low, -1.0, peak - log_density_depth);
  const double ln_high = edge(d, high, 1.0, peak - log_density_depth);
  d->ln_low = ln_low + log(1000.0);
  d->ln_step = (ln_high - ln_low) / (LXG_DISTANCE_NODES - 1);
}

enum lxg_status lxg_distance_init_parallax(double value_mas, double error_mas, double length_pc,
                                           struct lxg_distance *distance, struct lxg_error *error) {
  if (!(isfinite(value_mas) && error_mas > 0.0 && isfinite(error_mas))) {
    return lxg_error_set(error, LXG_INPUT, "distance-value",
                         "parallax = %.10g +- %.10g mas: any finite value with a positive error", value_mas,
                         error_mas);
  }
  if (!(length_pc > 0.0 && isfinite(length_pc))) {
    return lxg_error_set(error, LXG_INPUT, "distance-length",
                         "scale length of the space density = %.10g pc: positive", length_pc);
  }
  memset(distance, 0, sizeof *distance);
  distance->kind = LXG_DISTANCE_PARALLAX;
  distance->value = value_mas;
  distance->error = error_mas;
  distance->length = length_pc;
  const double l = length_pc / 1000.0;
  const double weight = 1.0 / (error_mas * error_mas);
  double root[3] = {0.0, 0.0, 0.0};
  const int roots =
      gsl_poly_solve_cubic(-2.0 * l, value_mas * weight * l, -weight * l, &root[0], &root[1], &root[2]);
  double peak = -INFINITY;
  for (int i = 0; i < roots; i++) {
    root[i] = polish(distance, root[i]);
    if (root[i] > 0.0 && log_posterior(distance, root[i]) > peak) {
      peak = log_posterior(distance, root[i]);
      distance->mode = root[i] * 1000.0;
    }
  }
  if (!isfinite(peak)) {
    return lxg_error_set(error, LXG_INPUT, "distance-value",
                         "parallax = %.10g +- %.10g mas: no distance can be told from it (length %.10g pc)",
                         value_mas, error_mas, length_pc);
  }
  span(distance, root, roots, peak);
  tabulate(distance, peak);
  return LXG_OK;
}

/* Inverts the cumulative function: in a cell of density a + (b - a) s the share is (a s + (b - a) s^2/2) step. */
static double posterior_quantile(const struct lxg_distance *d, double p) {
  int below = 0;
  int above = LXG_DISTANCE_NODES - 1;
  while (above - below > 1) {
    const int middle = (below + above) / 2;
    if (d->cumulative[middle] <= p) {
      below = middle;
    } else {
      above = middle;
    }
  }
  const double a = d->density[below];
  const double b = d->density[above];
  const double share = (p - d->cumulative[below]) / d->ln_step;
  const double root = sqrt(fmax(a * a + 2.0 * (b - a) * share, 0.0));
  const double s = a + root > 0.0 ? 2.0 * share / (a + root) : 0.5;
  return exp(d->ln_low + (below + fmin(fmax(s, 0.0), 1.0)) * d->ln_step);
}

double lxg_distance_quantile(const struct lxg_distance *distance, double p) {
  if (distance->kind == LXG_DISTANCE_PARALLAX) {
    return LXG_PARSEC * posterior_quantile(distance, p);
  }
  if (distance->kind == LXG_DISTANCE_MODULUS) {
    return lxg_distance_from_modulus(distance->value + distance->error * gsl_cdf_ugaussian_Pinv(p));
  }
  if (distance->error <= 0.0) {
    return LXG_PARSEC * distance->value;
  }
  /* Upper tail, so that a distance many sigma from zero loses no digits. */
  const double positive = gsl_cdf_ugaussian_P(distance->value / distance->error);
  const double drawn = distance->value + distance->error * gsl_cdf_ugaussian_Qinv((1.0 - p) * positive);
  return LXG_PARSEC * fmax(drawn, distance->value * 1e-12);
}
