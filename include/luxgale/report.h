/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report.h - results as documents and tables: one tree that is written as YAML or JSON, and ECSV tables.
 *
 * Every key and column carries its unit in its name. A number that the physics does not give is null (empty in a table)
 * and the reason stands beside it. Sections are added in the order in which a reader wants them; failures of memory are
 * remembered by the document (lxg_document_status) or returned by the tables.
 *
 * Call order: lxg_report_create -> sections -> lxg_report_warnings -> lxg_report_warn ... -> write with document.h.
 */
#ifndef LUXGALE_REPORT_H
#define LUXGALE_REPORT_H

#include "luxgale/composition.h"
#include "luxgale/decline.h"
#include "luxgale/document.h"
#include "luxgale/driving.h"
#include "luxgale/ejecta.h"
#include "luxgale/family.h"
#include "luxgale/history.h"
#include "luxgale/opacity.h"
#include "luxgale/opacity_table.h"
#include "luxgale/star.h"
#include "luxgale/status.h"
#include "luxgale/table.h"
#include "luxgale/wind.h"

#include <stddef.h>

/* Critical optical depth below which diffusion is a doubtful description of the light (warning `thin-wind`). */
#define LXG_REPORT_THIN_DEPTH 10.0
#define LXG_REPORT_FLUX_LIMIT                                                                                \
  (1.0 / 3.0) /* share of c a T^4 above which a diffusive flux is doubtful (common practice, no source) */
#define LXG_REPORT_SPEED_LIMIT 0.03 /* of the speed of light (common practice, no source) */

/* Version of the program, e.g. "0.1.0". */
const char *lxg_report_version(void);

/* A report that opens with `program: {name, version, command}`. */
enum lxg_status lxg_report_create(const char *command, struct lxg_document **report, struct lxg_error *error);

/* `star:` mass, radius, Eddington luminosity, escape speed, tiring rate at L_Edd, ignition mass for a base pressure [dyn
 * cm^-2]. */
void lxg_report_star(struct lxg_node *root, const struct lxg_star *star,
                     const struct lxg_composition *composition, double ignition_pressure);

/* `wind:` verdict and numbers; `l_edd` [erg s^-1]. Returns the section, to which a caller may add. */
struct lxg_node *lxg_report_wind(struct lxg_node *root, const struct lxg_wind *wind, double l_edd);

/* `family:` what is held, how many winds, where it ends and why, and the range of each number. */
void lxg_report_family(struct lxg_node *root, const struct lxg_family *family);

/* `family:` when there is not even one wind: verdict none and the reason that the error holds. */
void lxg_report_no_family(struct lxg_node *root, const struct lxg_wind_hold *hold,
                          const struct lxg_error *error);

/* `super_eddington:` time above L_Edd by kappa_e. Returns the section. */
struct lxg_node *lxg_report_super_eddington(struct lxg_node *root, const struct lxg_history_excess *excess);

/* In it: the duration by the lower and the upper bounds of the luminosity (NULL: no errors), and the same bookkeeping by another opacity
 * (NULL: no epoch has a wind). */
void lxg_report_excess_bounds(struct lxg_node *section, const struct lxg_history_excess *low,
                              const struct lxg_history_excess *high);
void lxg_report_excess_local(struct lxg_node *section, const char *name,
                             const struct lxg_history_excess *excess);

/* `tiring:` of one wind whose foot is the radius of `foot`: number and the quick laws. `excess` is the number where it exceeds 1. */
void lxg_report_tiring(struct lxg_node *section, const struct lxg_driving_estimate *estimate,
                       const struct lxg_star *foot);

/* `porous:` of one solved wind: law, W = Mdot c c_T/(L_ph - L_Edd), and the closed form of its rate. */
void lxg_report_porous_wind(struct lxg_node *section, const struct lxg_wind *wind,
                            const struct lxg_porosity *porosity, double l_edd);

/* `tiring:` of a history: largest and mean number, the rate that its largest power could lift, and the mass that its energy could. */
void lxg_report_tiring_history(struct lxg_node *root, const struct lxg_ejecta *ejecta,
                               const struct lxg_star *star);

/* Where plain winds hand over to porous ones. Rates are NaN where one side has no wind. */
struct lxg_report_handover {
  double homogeneous;             /* the homogeneous limit [erg s^-1] */
  double limit;                   /* [erg s^-1] */
  double l_edd;                   /* [erg s^-1] */
  double plain_rate, porous_rate; /* there [g s^-1] */
  size_t plain, porous;           /* epochs */
};

/* `porosity:`, and its warnings: handover-gap, handover-jump (a jump by more than the share `tolerance`). */
void lxg_report_handover(struct lxg_node *root, const struct lxg_report_handover *handover);
void lxg_report_handover_warnings(struct lxg_node *warnings, const struct lxg_report_handover *handover,
                                  double tolerance);

/* `reduction:` winds between families of several factors, and the warning blend-error. */
void lxg_report_blend(struct lxg_node *root, size_t families, double deviation);
void lxg_report_blend_warning(struct lxg_node *warnings, double deviation);

/* `driving:` can the light have thrown out what is claimed? */
void lxg_report_driving(struct lxg_node *root, const struct lxg_driving_verdict *verdict);

/* Columns that say how each epoch flows: plain or porous, W, tiring number, local Eddington ratios. */
enum lxg_status lxg_report_epoch_flow(struct lxg_table *table, const struct lxg_ejecta *ejecta,
                                      const struct lxg_wind_model *model, struct lxg_error *error);

/* `ejecta:`, `energy:`, `epochs:`. */
void lxg_report_ejecta(struct lxg_node *root, const struct lxg_ejecta *ejecta);

/* Warnings about the ejecta and the history: thin-wind, not-steady, several-branches, luminosity-gap, super-eddington-open. */
void lxg_report_ejecta_warnings(struct lxg_node *warnings, const struct lxg_ejecta *ejecta,
                                const struct lxg_history *history, const struct lxg_history_excess *excess);

/* `decline:` the numbers of a whole eruption; or verdict none with the reason that the error holds. */
void lxg_report_decline(struct lxg_node *root, const struct lxg_decline *decline);
void lxg_report_no_decline(struct lxg_node *root, const struct lxg_error *error);

/* Warnings about it: start-clipped, no-wind, thin-wind, decline-lost. */
void lxg_report_decline_warnings(struct lxg_node *warnings, const struct lxg_decline *decline);

/* One row a state; the columns that scripts rely on come first. `l_edd` [erg s^-1]. */
enum lxg_status lxg_report_decline_table(const struct lxg_decline *decline, double l_edd,
                                         struct lxg_table **table, struct lxg_error *error);

/* `warnings: []`, to be added last. */
struct lxg_node *lxg_report_warnings(struct lxg_node *root);

/* One warning {code, message}; returns it so that numbers can be added. */
struct lxg_node *lxg_report_warn(struct lxg_node *warnings, const char *code, const char *message);

/* Warnings about one wind: thin-wind, table-share. Nothing for a wind that was not solved. */
void lxg_report_wind_warnings(struct lxg_node *warnings, const struct lxg_wind *wind);

/* A held quantity in a report: name with unit ("base_temperature_k") and value there. */
void lxg_report_held(struct lxg_node *parent, enum lxg_held quantity, double cgs);
const char *lxg_report_held_name(enum lxg_held quantity);

/* Structure of a wind: one row a radius, with the share of each opacity source. */
enum lxg_status lxg_report_structure_table(const struct lxg_wind_row *rows, size_t count,
                                           const struct lxg_opacity *opacity, struct lxg_table **table,
                                           struct lxg_error *error);

/* All members of a family, thin end first. */
enum lxg_status lxg_report_family_table(const struct lxg_family *family, struct lxg_table **table,
                                        struct lxg_error *error);

/* One row an epoch; the columns that scripts rely on come first. `l_edd` [erg s^-1]. */
enum lxg_status lxg_report_epoch_table(const struct lxg_ejecta *ejecta, double l_edd,
                                       struct lxg_table **table, struct lxg_error *error);

/* `opacity:` at one point (log10 T, log10 R): value, slopes and, for the formula, the share of each source. */
void lxg_report_opacity_point(struct lxg_node *root, const struct lxg_opacity *opacity, double log_t,
                              double log_r, const struct lxg_opacity_point *point);

/* Opacities at many points, one row each. */
enum lxg_status lxg_report_opacity_points_table(const double log_t[], const double log_r[],
                                                const struct lxg_opacity_point point[], size_t count,
                                                struct lxg_table **table, struct lxg_error *error);

/* One item of `tables:` and its warnings: table-gap, table-spike, table-slope, table-difference. */
void lxg_report_opacity_findings(struct lxg_node *tables, struct lxg_node *warnings,
                                 const struct lxg_opacity_grid *grid,
                                 const struct lxg_opacity_findings *findings);

/* `import:` which tables a file held and where they were written. */
void lxg_report_opacity_import(struct lxg_node *root, const struct lxg_opacity_set *set, const char *folder);

#endif
