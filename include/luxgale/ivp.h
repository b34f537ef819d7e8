/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * ivp.h - initial-value problems dy/dx = f(x, y), marched with adaptive steps (GSL's embedded Runge-Kutta methods).
 *
 * A watcher sees every accepted step and may end the march: events, recording and limits are its business.
 */
#ifndef LUXGALE_IVP_H
#define LUXGALE_IVP_H

#include "luxgale/status.h"

#include <stddef.h>

struct lxg_ivp; /* opaque workspace, one a thread */

enum lxg_ivp_order { LXG_IVP_ORDER_5, LXG_IVP_ORDER_8 }; /* Fehlberg 4(5); Prince-Dormand 8(9) */

/* f: derivatives dydx[dimension]; anything but LXG_OK makes the step shorter, and ends the march when it is tiny. */
typedef enum lxg_status lxg_ivp_slope(const void *context, double x, const double y[], double dydx[]);

/* Called after each accepted step (and once at the start). Return 0 to go on, anything else to stop there. */
typedef int lxg_ivp_watch(void *watcher, double x, const double y[]);

/* NULL if out of memory. `tolerance` is the local error a step, relative to max(|y|, 1). */
struct lxg_ivp *lxg_ivp_create(size_t dimension, enum lxg_ivp_order order, double tolerance);
void lxg_ivp_destroy(struct lxg_ivp *ivp);

/* Marches y from x to `end` (either direction). On return x and y are where the march stopped.
 * LXG_OK: reached the end or was stopped by the watcher (*stopped holds its answer). LXG_DOMAIN: the slope failed and no
 * shorter step helped. LXG_NOT_CONVERGED: more than `step_limit` steps. */
enum lxg_status lxg_ivp_march(struct lxg_ivp *ivp, lxg_ivp_slope *slope, const void *context,
                              lxg_ivp_watch *watch, void *watcher, double *x, double end, double first_step,
                              int step_limit, double y[], int *stopped);

#endif
