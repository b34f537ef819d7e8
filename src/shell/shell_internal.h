/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * shell_internal.h - the sampled history and its exact integrals, shared by the files of the shell module.
 *
 * Times inside are counted from the first sample (`origin`), so that a late epoch costs no digits.
 */
#ifndef LUXGALE_SHELL_INTERNAL_H
#define LUXGALE_SHELL_INTERNAL_H

#include "luxgale/shell.h"

/* One stretch between two samples at different times: v = speed + speed_slope u, Mdot = rate + rate_slope u, u =
 * tau - start. */
struct lxg_shell_segment {
  double start, end;         /* [s] from the origin */
  double speed, speed_slope; /* [cm s^-1], [cm s^-2] */
  double rate, rate_slope;   /* [g s^-1], [g s^-2] */
  double speed_end;          /* speed at `end` [cm s^-1] */
  bool massive;              /* any gas leaves in it */
};

/* Integrals over departure time. */
struct lxg_shell_sums {
  double mass;   /* int Mdot [g] */
  double moment; /* int Mdot v [g cm s^-1] */
  double delay;  /* int Mdot v tau [g cm] */
  double energy; /* int Mdot v^2/2 [erg] */
};

struct lxg_shell_history {
  double origin; /* time of the first sample [s] */
  double radius; /* r_s [cm] */
  size_t count;  /* segments */
  struct lxg_shell_segment *segment;
  struct lxg_shell_sums *before; /* [count + 1] sums over all earlier segments */
};

/* Index of the segment that holds a departure time (the later one at a sample). */
size_t lxg_shell_segment_of(const struct lxg_shell_history *history, double tau);

/* Sums over [from, to], inside one segment: two-point Gauss, exact for these cubics. */
struct lxg_shell_sums lxg_shell_sums_piece(const struct lxg_shell_segment *segment, double from, double to);

/* Sums over [from, to] across segments. */
struct lxg_shell_sums lxg_shell_sums_range(const struct lxg_shell_history *history, double from, double to);

/* Speed [cm s^-1] at a departure time within a segment. */
double lxg_shell_speed(const struct lxg_shell_segment *segment, double tau);

#endif
