/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lines.h - observed line velocities, and what the winds and shells of a case say about them.
 *
 * A row is one measurement: epoch, line, kind of feature, and a wavelength, a half width or a velocity with its
 * error. All become expansion speeds: the speed with which gas in front of the source approaches, positive
 * outward (an absorption at a radial velocity of -600 km/s has the speed 600 km/s). Widths are speeds; an
 * emission peak keeps its radial velocity (negative approaches). Motion of Earth and system is the user's to
 * remove.
 *   (L1) vacuum wavelength = n(lambda_vac) lambda_air, n of Birch & Downs 1994 as adopted by the IAU, in the form of Morton 2000,
 *        ApJS 130, 403 (from memory): n - 1 = 8.34254e-5 + 2.406147e-2/(130 - s^2) + 1.5998e-4/(38.9 - s^2), s = 1 micron/lambda_vac
 *   (L2) q = lambda/lambda_0 (vacuum): v/c = (q^2 - 1)/(q^2 + 1); a half width d: v/c = y/(1 + y^2)^(1/2), y = d/lambda_0
 */
#ifndef LUXGALE_LINES_H
#define LUXGALE_LINES_H

#include "luxgale/checksum.h"
#include "luxgale/status.h"

#include <stdbool.h>
#include <stddef.h>

enum lxg_line_kind {
  LXG_LINE_ABSORPTION,     /* minimum of the absorption */
  LXG_LINE_BLUE_EDGE,      /* where the absorption ends */
  LXG_LINE_HALF_MAXIMUM,   /* half width at half maximum of the emission */
  LXG_LINE_ZERO_INTENSITY, /* half width at zero intensity */
  LXG_LINE_EMISSION_PEAK,  /* peak of the emission */
  LXG_LINE_KINDS
};

enum lxg_line_measure {
  LXG_LINE_WAVELENGTH, /* observed wavelength of the feature [cm]; for widths, of the edge on either side */
  LXG_LINE_HALF_WIDTH, /* half width in wavelength [cm]; widths only */
  LXG_LINE_VELOCITY, /* radial velocity [cm s^-1], negative approaches; for widths, of the edge on either side */
  LXG_LINE_SPEED     /* expansion speed [cm s^-1], > 0; not for emission peaks */
};

enum lxg_line_medium { LXG_LINE_VACUUM, LXG_LINE_AIR };

/* One row as the observer has it. */
struct lxg_line_input {
  double epoch;          /* [s] */
  const char *label;     /* line, e.g. "H beta"; NULL is "" */
  const char *component; /* optional name of the system it belongs to; NULL is "" */
  enum lxg_line_kind kind;
  enum lxg_line_measure measure;
  enum lxg_line_medium medium; /* of rest and observed wavelength and half width */
  double rest;                 /* rest wavelength [cm]; unused when a velocity or speed is given */
  double value;                /* in the unit of `measure` */
  double error;                /* 1 sigma of the value, same unit, > 0 */
  size_t row;                  /* number for messages; 0: place in the array, from 1 */
};

/* One measurement. */
struct lxg_line {
  double epoch;    /* [s] */
  char *label;     /* never NULL */
  char *component; /* "" if none */
  enum lxg_line_kind kind;
  double velocity; /* expansion speed, or radial velocity of an emission peak [cm s^-1] */
  double error;    /* 1 sigma [cm s^-1] */
  size_t row;      /* number for messages */
};

struct lxg_lines {
  size_t count;
  struct lxg_line *line;
};

/* ---- wavelengths ---- */

/* Refractive index of standard air at a vacuum wavelength [cm] (L1). */
double lxg_line_refraction(double vacuum_wavelength);

/* Vacuum wavelength [cm] of an air wavelength [cm] by iteration to rounding. */
double lxg_line_vacuum(double air_wavelength);

/* Radial velocity [cm s^-1] of a wavelength ratio observed/rest, both in vacuum (L2). */
double lxg_line_doppler(double ratio);

/* ---- measurements ---- */

/* Names as tables spell them: absorption, blue-edge, half-maximum, zero-intensity, emission-peak. */
const char *lxg_line_kind_name(enum lxg_line_kind kind); /* "unknown" out of range */
enum lxg_line_kind lxg_line_kind_find(const char *name); /* LXG_LINE_KINDS if there is none */

/* Checks and converts `count` >= 1 rows. Bad rows are named, not dropped: LXG_INPUT with the first bad row as the
 * cause, the next ones as contexts and their total in the last line ("line-count", "line-epoch", "line-kind",
 * "line-measure", "line-rest", "line-value", "line-error", "line-redward"). Air wavelengths below 2000 Angstrom
 * are refused: there tables are in vacuum. */
enum lxg_status lxg_lines_create(const struct lxg_line_input input[], size_t count, struct lxg_lines **lines,
                                 struct lxg_error *error);
void lxg_lines_destroy(struct lxg_lines *lines);

/* Reads a CSV or ECSV table (table.h); units from its header, else those in brackets. Columns: `time` [d]; `kind`
 * (names above); `line` and `component`, texts, optional; and in each row exactly one of
 *   wavelength, half_width [Angstrom] with rest_wavelength [Angstrom] and `medium`, the text air or vacuum
 *   velocity [km/s]: radial, negative approaches          speed [km/s]: of expansion, positive
 * with its NAME_error. Other columns are passed over unless their name is a near miss of one of these
 * ("line-column"). checksum (NULL allowed) receives the SHA-256 of the file. Errors of lxg_table_read and
 * lxg_table_cgs; bad rows as lxg_lines_create names them, by line of the file. */
enum lxg_status lxg_lines_read(const char *path, struct lxg_lines **lines, char checksum[LXG_CHECKSUM_SIZE],
                               struct lxg_error *error);

/* ---- which model speed a kind is compared with ---- */

enum lxg_line_model {
  LXG_LINE_MODEL_PHOTOSPHERE, /* gas speed at the photosphere */
  LXG_LINE_MODEL_TERMINAL,    /* terminal speed of the wind */
  LXG_LINE_MODEL_DEPTH,       /* gas speed at a given optical depth of the continuum */
  LXG_LINE_MODEL_SHELL,       /* speed of the swept shell */
  LXG_LINE_MODEL_REST,        /* no shift */
  LXG_LINE_MODELS
};

/* The default table: absorption -> photosphere (the densest gas that is seen against the continuum; common
 * practice for optically thick winds, no single source), blue-edge, half-maximum and zero-intensity -> terminal
 * (the edge of the profile of a wind; a shell of constant speed has its half maximum at 0.71 to 1 of it),
 * emission-peak -> rest (symmetric outflow). */
struct lxg_line_map {
  struct {
    enum lxg_line_model model;
    double depth; /* continuum optical depth of `depth` */
  } kind[LXG_LINE_KINDS];
};

void lxg_line_map_default(struct lxg_line_map *map);

/* Overrides one row: kind by name; model "photosphere", "terminal", "shell", "rest" or "depth NUMBER". LXG_INPUT
 * "line-map". */
enum lxg_status lxg_line_map_set(struct lxg_line_map *map, const char *kind, const char *model,
                                 struct lxg_error *error);
const char *lxg_line_model_name(enum lxg_line_model model);

/* Model speed [cm s^-1] at an epoch [s]. LXG_NO_SOLUTION or LXG_DOMAIN: there is none then, with the reason and
 * its code in `reason`; other failures end the comparison. LXG_LINE_MODEL_REST is never asked for. */
typedef enum lxg_status lxg_line_velocity(void *context, double epoch, enum lxg_line_model model,
                                          double depth, double *velocity, struct lxg_error *reason);

/* ---- wind or shell ---- */

enum lxg_line_system { LXG_LINE_WIND, LXG_LINE_SHELL, LXG_LINE_OTHER, LXG_LINE_SYSTEMS };

struct lxg_line_assign_settings {
  double prior[LXG_LINE_SYSTEMS]; /* of a system before its speed is seen (0.45, 0.45, 0.10) */
  double scatter;                 /* what the model speeds may be off by, 1 sigma [cm s^-1] (0) */
  double other_range;             /* speeds of `other` are equally likely from 0 to this [cm s^-1] (1e9) */
};

/* To which system a row belongs: the slow system is the shell, the fast one the wind. */
struct lxg_line_assignment {
  enum lxg_line_system system;          /* the most probable */
  double probability[LXG_LINE_SYSTEMS]; /* posterior, sum 1 */
  bool declared;                        /* component was named "wind" or "shell": taken at its word */
  bool informative;     /* false: the row (and its component) says nothing; probabilities are the priors */
  double wind_velocity; /* model speeds compared [cm s^-1]; NaN if there is none at the epoch */
  double shell_velocity;
};

void lxg_line_assign_defaults(struct lxg_line_assign_settings *settings);

/* Posterior by Bayes' rule: each system's likelihood is Gaussian in (speed - model) with variance error^2 +
 * scatter^2, `other` is flat. Rows that share a component name are one system and are judged together; unnamed
 * rows one by one. A system without a speed at some epoch of the component cannot be it. settings NULL: defaults.
 * LXG_INPUT "line-prior"; failures of the model; LXG_MEMORY. */
enum lxg_status lxg_lines_assign(const struct lxg_lines *lines, const struct lxg_line_map *map,
                                 lxg_line_velocity *velocity, void *context,
                                 const struct lxg_line_assign_settings *settings,
                                 struct lxg_line_assignment assignment[], struct lxg_error *error);

/* Name of a system: wind, shell, other. */
const char *lxg_line_system_name(enum lxg_line_system system);

/* ---- comparison ---- */

struct lxg_line_comparison {
  enum lxg_line_model model; /* what the row was compared with */
  bool compared;             /* false: no model speed at the epoch, or the row belongs to neither system */
  double velocity;           /* model speed [cm s^-1]; NaN if not compared */
  double residual; /* (observed - model)/sigma, sigma^2 = error^2 + scatter^2; NaN if not compared */
  char reason_code[LXG_ERROR_CODE_SIZE]; /* why not compared; "" if it was */
  char reason[LXG_ERROR_LINE_SIZE];
};

struct lxg_line_chi2 {
  size_t compared; /* rows with a residual */
  size_t left;     /* rows without */
  double chi2;     /* sum of squared residuals */
  double p_value;  /* chance of a larger one, `compared` degrees of freedom; NaN if none compared */
  size_t worst;    /* index of the row with the largest |residual|; meaningless if none compared */
};

/* Residuals with model speeds from a function. assignment NULL: every row by the map; else rows of the shell are
 * compared with the shell's speed and rows of `other` are left out (code "line-other"). scatter [cm s^-1] >= 0.
 * Failures of the model other than "none"; LXG_INPUT "line-scatter". */
enum lxg_status lxg_lines_compare(const struct lxg_lines *lines, const struct lxg_line_map *map,
                                  const struct lxg_line_assignment assignment[], double scatter,
                                  lxg_line_velocity *velocity, void *context,
                                  struct lxg_line_comparison result[], struct lxg_line_chi2 *chi2,
                                  struct lxg_error *error);

/* The same with model speeds given row by row [cm s^-1]; NaN where there is none (code "line-model-none"). */
enum lxg_status lxg_lines_compare_given(const struct lxg_lines *lines, const double model[], double scatter,
                                        struct lxg_line_comparison result[], struct lxg_line_chi2 *chi2,
                                        struct lxg_error *error);

/* ---- section of a case ---- */

/* The section `lines`, but for `fit` and `profiles`, which other modules read. */
struct lxg_lines_section {
  struct lxg_lines *lines; /* NULL if no file is given */
  struct lxg_line_map map;
  struct lxg_line_assign_settings assign; /* scatter included */
};

struct lxg_node;
struct lxg_files;

/* Reads it; absent: defaults, no lines. LXG_INPUT with the place: "line-map", "line-prior", "line-scatter", and those of
 * lxg_lines_read. */
enum lxg_status lxg_lines_section_read(struct lxg_node *section, struct lxg_files *files,
                                       struct lxg_lines_section *read, struct lxg_error *error);
void lxg_lines_section_free(struct lxg_lines_section *section);

#endif
