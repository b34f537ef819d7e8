/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * profile_table.c - an outflow from arrays (see profile.h): ln v and ln rho over ln r by Steffen's monotone
 * interpolation (Steffen 1990, A&A 239, 443), so a rising speed stays rising and its slope is continuous. Can
 * fail: bad rows, memory.
 */
#include "luxgale/memory.h"
#include "luxgale/profile.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_interp.h>
#include <math.h>

struct lxg_profile_table {
  size_t count;
  double inner, outer;
  double *ln_radius, *ln_speed, *ln_density;
  gsl_interp *speed, *density;
};

static enum lxg_status check_row(size_t i, const double radius[], const double speed[],
                                 const double density[], struct lxg_error *error) {
  const size_t row = i + 1;
  if (!(radius[i] > 0.0 && isfinite(radius[i]) && (i == 0 || radius[i] > radius[i - 1]))) {
    return lxg_error_set(error, LXG_INPUT, "profile-radius",
                         "row %zu: radius = %.10g cm: positive, finite and rising", row, radius[i]);
  }
  if (!(speed[i] > 0.0 && isfinite(speed[i]))) {
    return lxg_error_set(error, LXG_INPUT, "profile-speed", "row %zu: speed = %.10g cm/s: finite and above 0",
                         row, speed[i]);
  }
  if (!(density[i] > 0.0 && isfinite(density[i]))) {
    return lxg_error_set(error, LXG_INPUT, "profile-density",
                         "row %zu: density = %.10g g/cm3: finite and above 0", row, density[i]);
  }
  return LXG_OK;
}

static bool reserve(struct lxg_profile_table *table, size_t count) {
  table->count = count;
  table->ln_radius = lxg_alloc(count, sizeof(double));
  table->ln_speed = lxg_alloc(count, sizeof(double));
  table->ln_density = lxg_alloc(count, sizeof(double));
  table->speed = gsl_interp_alloc(gsl_interp_steffen, count);
  table->density = gsl_interp_alloc(gsl_interp_steffen, count);
  return table->ln_radius != NULL && table->ln_speed != NULL && table->ln_density != NULL &&
         table->speed != NULL && table->density != NULL;
}

enum lxg_status lxg_profile_table_create(size_t count, const double radius[], const double speed[],
                                         const double density[], struct lxg_profile_table **table,
                                         struct lxg_error *error) {
  *table = NULL;
  if (count < 3) {
    return lxg_error_set(error, LXG_INPUT, "profile-count", "rows of the flow = %zu: at least 3", count);
  }
  for (size_t i = 0; i < count; i++) {
    const enum lxg_status status = check_row(i, radius, speed, density, error);
    if (status != LXG_OK) {
      return status;
    }
  }
  struct lxg_profile_table *const made = lxg_alloc(1, sizeof *made);
  if (made == NULL || !reserve(made, count)) {
    lxg_profile_table_destroy(made);
    return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for a flow of %zu rows", count);
  }
  made->inner = radius[0];
  made->outer = radius[count - 1];
  for (size_t i = 0; i < count; i++) {
    made->ln_radius[i] = log(radius[i]);
    made->ln_speed[i] = log(speed[i]);
    made->ln_density[i] = log(density[i]);
  }
  if (gsl_interp_init(made->speed, made->ln_radius, made->ln_speed, count) != GSL_SUCCESS ||
      gsl_interp_init(made->density, made->ln_radius, made->ln_density, count) != GSL_SUCCESS) {
    lxg_profile_table_destroy(made);
    return lxg_error_set(error, LXG_INPUT, "profile-radius",
                         "radii so close that their logarithms are equal");
  }
  *table = made;
  return LXG_OK;
}

void lxg_profile_table_destroy(struct lxg_profile_table *table) {
  if (table != NULL) {
    lxg_free(table->ln_radius);
    lxg_free(table->ln_speed);
    lxg_free(table->ln_density);
    gsl_interp_free(table->speed);
    gsl_interp_free(table->density);
    lxg_free(table);
  }
}

static enum lxg_status table_law(const void *context, double radius, struct lxg_profile_gas *gas) {
  const struct lxg_profile_table *const t = context;
  const double low = t->ln_radius[0], high = t->ln_radius[t->count - 1];
  const double x = fmin(fmax(log(radius), low), high); /* rounding of the logarithm at the ends */
  double ln_v = 0.0, slope = 0.0, ln_rho = 0.0;
  if (gsl_interp_eval_e(t->speed, t->ln_radius, t->ln_speed, x, NULL, &ln_v) != GSL_SUCCESS ||
      gsl_interp_eval_deriv_e(t->speed, t->ln_radius, t->ln_speed, x, NULL, &slope) != GSL_SUCCESS ||
      gsl_interp_eval_e(t->density, t->ln_radius, t->ln_density, x, NULL, &ln_rho) != GSL_SUCCESS) {
    return LXG_DOMAIN;
  }
  *gas = (struct lxg_profile_gas){.speed = exp(ln_v), .slope = slope, .density = exp(ln_rho)};
  return LXG_OK;
}

struct lxg_profile_flow lxg_profile_table_flow(const struct lxg_profile_table *table) {
  return (struct lxg_profile_flow){
      .law = table_law, .context = table, .inner = table->inner, .outer = table->outer};
}
