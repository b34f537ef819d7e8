/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fit.h - least squares with honest errors: best values, covariance, profile-likelihood intervals, and a plain
 * statement of what the data do not constrain.
 *
 * Minimises chi^2 = sum of squared residuals, each residual in units of its own sigma (so a rise of 1 is the
 * 68.27 % interval of one parameter). Trust-region Levenberg-Marquardt of GSL in internal coordinates u that have
 * no bounds:
 *   free      u = p          positive  u = ln p          interval  u = ln[(p - low)/(high - p)]
 * Covariance from the Jacobian at the minimum (linear theory); the profile interval of a parameter is where the
 * minimum over all others has risen by `rise`: it needs no linear theory. A trial for which the model has no
 * answer is refused by the step control and marks the edge of an interval; it never ends the fit unless the start
 * itself has none.
 */
#ifndef LUXGALE_FIT_H
#define LUXGALE_FIT_H

#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

enum lxg_fit_kind { LXG_FIT_FREE, LXG_FIT_POSITIVE, LXG_FIT_INTERVAL };

/* Numbers of parameters are small by design: no allocation in the descriptions. */
enum { LXG_FIT_PARAMETERS = 16 };

/* One parameter, in the caller's own unit. */
struct lxg_fit_parameter {
  const char *name; /* used in messages */
  enum lxg_fit_kind kind;
  double start; /* inside the open bounds */
  double low;   /* of `interval` only */
  double high;  /* of `interval` only */
};

/* residual[residuals] = (data - model)/sigma at parameter[parameters]. LXG_DOMAIN, LXG_NO_SOLUTION and
 * LXG_NOT_CONVERGED say that the model has no answer there; any other failure ends the fit and is passed on. */
typedef enum lxg_status lxg_fit_residual(void *context, const double parameter[], double residual[]);

/* jacobian[i * parameters + j] = d residual_i / d parameter_j. */
typedef enum lxg_status lxg_fit_jacobian(void *context, const double parameter[], double jacobian[]);

struct lxg_fit_problem {
  size_t parameters; /* 1 .. LXG_FIT_PARAMETERS */
  size_t residuals;  /* at least 1; fewer than `parameters` is answered by "unconstrained" */
  const struct lxg_fit_parameter *parameter;
  lxg_fit_residual *residual;
  lxg_fit_jacobian *jacobian; /* NULL: central differences */
  void *context;
};

/* Numbers that steer the fit; lxg_fit_defaults fills them. */
struct lxg_fit_settings {
  int iterations;    /* trust-region steps allowed in one minimisation (100) */
  double tolerance;  /* relative step and gradient tolerance (1e-10) */
  double decrement;  /* chi^2 that a full Newton step could still win at a point called the minimum (1e-6) */
  double difference; /* step of u in central differences, times max(1, |u|) (6e-6, cube root of rounding) */
  double rank; /* singular value, of the column-scaled Jacobian, below which a direction is unseen (1e-6) */
  double rise; /* rise of chi^2 that ends a profile interval (1: 68.27 %) */
  double profile_reach;     /* an interval wider than this many linear sigmas is open (64) */
  double profile_reach_u;   /* the same in u, for bounded parameters and those without a linear sigma (40) */
  double profile_precision; /* of an interval's end, in linear sigmas (1e-3) */
};

enum lxg_fit_end {
  LXG_FIT_CROSSED, /* chi^2 rises by `rise` there */
  LXG_FIT_OPEN,    /* it never does within reach: the data set no limit on this side */
  LXG_FIT_EDGE     /* the model has no answer beyond: a limit of the physics, not of the data */
};

struct lxg_fit_estimate {
  double value; /* best value */
  double sigma; /* linear 1-sigma error; infinite if not constrained */
  double
      lower; /* ends of the profile interval; -/+ infinity (or the bound) when open; NaN before lxg_fit_profile */
  double upper;
  enum lxg_fit_end lower_end;
  enum lxg_fit_end upper_end;
  bool
      constrained; /* false: some change of this parameter, alone or with others, leaves the residuals as they are */
};

struct lxg_fit_result {
  double chi2;
  long degrees;     /* residuals - parameters; below 1 chi^2 says nothing about the goodness of fit */
  double p_value;   /* chance of a larger chi^2 if the model is right; NaN when degrees < 1 */
  double decrement; /* chi^2 that a Newton step could still win */
  size_t rank;      /* directions of parameter space that the data see */
  int iterations;
  int evaluations; /* calls of the residual function */
  size_t parameters;
  struct lxg_fit_estimate estimate[LXG_FIT_PARAMETERS];
  double covariance[LXG_FIT_PARAMETERS]
                   [LXG_FIT_PARAMETERS]; /* of the parameters; unseen directions left out */
};

void lxg_fit_defaults(struct lxg_fit_settings *settings);

/* Minimum, covariance and flags. settings NULL: defaults. LXG_INPUT ("fit-parameters", "fit-residuals",
 * "fit-start", "fit-bounds"); LXG_NO_SOLUTION ("fit-start-model") if the model has no answer at the start;
 * LXG_NOT_CONVERGED ("fit-iterations") with the best point so far in `result`; LXG_MEMORY. */
enum lxg_status lxg_fit_solve(const struct lxg_fit_problem *problem, const struct lxg_fit_settings *settings,
                              struct lxg_fit_result *result, struct lxg_error *error);

/* Profile interval of parameter `index`, written into result->estimate[index]; `result` is what lxg_fit_solve
 * returned. LXG_NOT_CONVERGED ("fit-profile-lower") if a lower chi^2 than the solution's is met on the way: then
 * result holds that better point and the caller starts again from it (lxg_fit_run does). */
enum lxg_status lxg_fit_profile(const struct lxg_fit_problem *problem,
                                const struct lxg_fit_settings *settings, size_t index,
                                struct lxg_fit_result *result, struct lxg_error *error);

/* lxg_fit_solve, then lxg_fit_profile for every parameter, begun again from any better minimum met (three times
 * at most). */
enum lxg_status lxg_fit_run(const struct lxg_fit_problem *problem, const struct lxg_fit_settings *settings,
                            struct lxg_fit_result *result, struct lxg_error *error);

/* One line for a person: which parameters the data do not constrain, or "" if they constrain all. */
void lxg_fit_warning(const struct lxg_fit_problem *problem, const struct lxg_fit_result *result, char *text,
                     size_t size);

#endif
