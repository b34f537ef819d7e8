/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * report_opacity.c - opacities at points, findings about tables, imported tables (see report.h).
 */
#include "luxgale/report.h"

#include "report/report_internal.h"

#include <math.h>

static double log_rho(double log_t, double log_r) {
  return log_r + 3.0 * (log_t - 6.0);
}

void lxg_report_opacity_point(struct lxg_node *root, const struct lxg_opacity *opacity, double log_t,
                              double log_r, const struct lxg_opacity_point *point) {
  struct lxg_node *section = lxg_node_add_mapping(root, "opacity");
  lxg_node_add_number(section, "log_t", log_t);
  lxg_node_add_number(section, "log_r", log_r);
  lxg_node_add_number(section, "temperature_k", pow(10.0, log_t));
  lxg_node_add_number(section, "density_g_cm3", pow(10.0, log_rho(log_t, log_r)));
  lxg_node_add_number(section, "opacity_cm2_g", pow(10.0, point->log_kappa));
  lxg_node_add_number(section, "log_kappa", point->log_kappa);
  lxg_node_add_number(section, "dlogk_dlogt", point->dlogk_dlogt);
  lxg_node_add_number(section, "dlogk_dlogr", point->dlogk_dlogr);
  lxg_node_add_number(section, "table_weight", point->table_weight);
  double share[LXG_OPACITY_SOURCES] = {0}, known = 0.0;
  if (lxg_opacity_shares(opacity, log_rho(log_t, log_r) * LXG_LN10, log_t * LXG_LN10, share, &known) ==
          LXG_OK &&
      known > 0.0) {
    struct lxg_node *shares = lxg_node_add_mapping(section, "shares");
    for (int source = 0; source < LXG_OPACITY_SOURCES; source++) {
      lxg_node_add_number(shares, lxg_opacity_source_name((enum lxg_opacity_source)source), share[source]);
    }
  }
}

enum lxg_status lxg_report_opacity_points_table(const double log_t[], const double log_r[],
                                                const struct lxg_opacity_point point[], size_t count,
                                                struct lxg_table **table, struct lxg_error *error) {
  static const struct report_column columns[] = {
      {"log_t", "", "log10 of the temperature in K", LXG_COLUMN_NUMBER},
      {"log_r", "", "log10 of R = rho/(T/1e6 K)^3, rho in g/cm3", LXG_COLUMN_NUMBER},
      {"log_kappa", "", "log10 of the Rosseland mean opacity in cm2/g", LXG_COLUMN_NUMBER},
      {"dlogk_dlogt", "", "slope at constant R", LXG_COLUMN_NUMBER},
      {"dlogk_dlogr", "", "slope at constant T", LXG_COLUMN_NUMBER},
      {"table_weight", "", "1 inside a table, 0 for the formula", LXG_COLUMN_NUMBER},
  };
  enum { COLUMNS = sizeof columns / sizeof columns[0] };
  enum lxg_status status = lxg_report_table("opacity", columns, COLUMNS, count, table, error);
  for (size_t i = 0; i < count && status == LXG_OK; i++) {
    const double value[COLUMNS] = {log_t[i],
                                   log_r[i],
                                   point[i].log_kappa,
                                   point[i].dlogk_dlogt,
                                   point[i].dlogk_dlogr,
                                   point[i].table_weight};
    for (size_t c = 0; c < COLUMNS && status == LXG_OK; c++) {
      status = lxg_table_set_number(*table, c, i, value[c], error);
    }
  }
  if (status != LXG_OK) {
    lxg_table_destroy(*table);
    *table = NULL;
  }
  return status;
}

static void add_composition(struct lxg_node *section, const struct lxg_composition *composition) {
  struct lxg_node *node = lxg_node_add_mapping(section, "composition");
  lxg_node_add_number(node, "hydrogen", composition->hydrogen);
  lxg_node_add_number(node, "helium", composition->helium);
  lxg_node_add_number(node, "cno", composition->cno);
  lxg_node_add_number(node, "metals", composition->metals);
}

static const char *finding_name(enum lxg_opacity_finding_kind kind) {
  switch (kind) {
  case LXG_OPACITY_FINDING_GAP:
    return "gap";
  case LXG_OPACITY_FINDING_SPIKE:
    return "spike";
  case LXG_OPACITY_FINDING_SLOPE:
    return "slope";
  case LXG_OPACITY_FINDING_DIFFERENCE:
    break;
  }
  return "difference";
}

static void add_list(struct lxg_node *section, const struct lxg_opacity_findings *findings) {
  struct lxg_node *list = lxg_node_add_sequence(section, "findings");
  for (size_t i = 0; i < findings->kept; i++) {
    const struct lxg_opacity_finding *finding = &findings->finding[i];
    struct lxg_node *one = lxg_node_add_mapping(list, NULL);
    lxg_node_add_text(one, "kind", finding_name(finding->kind));
    lxg_node_add_number(one, "log_t", finding->log_t);
    lxg_node_add_number(one, "log_r", finding->log_r);
    lxg_node_add_number(one, "log_kappa", finding->log_kappa);
    lxg_node_add_number(one, "amount", finding->amount);
  }
}

static void warn(struct lxg_node *warnings, const char *code, const char *message, size_t count,
                 const struct lxg_opacity_grid *grid) {
  if (count > 0) {
    struct lxg_node *warning = lxg_report_warn(warnings, code, message);
    lxg_node_add_integer(warning, "nodes", (long long)count);
    lxg_node_add_integer(warning, "line", (long long)grid->line);
  }
}

void lxg_report_opacity_findings(struct lxg_node *tables, struct lxg_node *warnings,
                                 const struct lxg_opacity_grid *grid,
                                 const struct lxg_opacity_findings *findings) {
  struct lxg_node *section = lxg_node_add_mapping(tables, NULL);
  lxg_node_add_text(section, "name", grid->name);
  lxg_node_add_text(section, "source", grid->source);
  lxg_node_add_text(section, "date", grid->date);
  lxg_node_add_text(section, "sha256", grid->checksum);
  lxg_node_add_integer(section, "line", (long long)grid->line);
  add_composition(section, &grid->composition);
  lxg_node_add_integer(section, "nodes", (long long)findings->nodes);
  lxg_node_add_integer(section, "missing", (long long)findings->missing);
  lxg_node_add_number(section, "log_t_least", findings->log_t_least);
  lxg_node_add_number(section, "log_t_most", findings->log_t_most);
  lxg_node_add_number(section, "log_t_step_most", findings->log_t_step_most);
  lxg_node_add_number(section, "log_r_least", findings->log_r_least);
  lxg_node_add_number(section, "log_r_most", findings->log_r_most);
  lxg_node_add_number(section, "log_r_step_most", findings->log_r_step_most);
  lxg_node_add_integer(section, "gaps", (long long)findings->gaps);
  lxg_node_add_integer(section, "spikes", (long long)findings->spikes);
  lxg_node_add_integer(section, "slopes", (long long)findings->slopes);
  lxg_node_add_integer(section, "differences", (long long)findings->differences);
  lxg_node_add_number(section, "formula_rms_dex", findings->formula_rms);
  lxg_node_add_number(section, "formula_most_dex", findings->formula_most);
  add_list(section, findings);
  warn(warnings, "table-gap", "nodes are missing between known ones", findings->gaps, grid);
  warn(warnings, "table-spike", "single nodes stand far off their neighbours", findings->spikes, grid);
  warn(warnings, "table-slope", "the opacity falls with density where it should not", findings->slopes, grid);
  warn(warnings, "table-difference", "the table is far from the built-in formula", findings->differences,
       grid);
}

void lxg_report_opacity_import(struct lxg_node *root, const struct lxg_opacity_set *set, const char *folder) {
  struct lxg_node *section = lxg_node_add_mapping(root, "import");
  lxg_node_add_text(section, "folder", folder);
  lxg_node_add_integer(section, "tables", (long long)set->count);
  struct lxg_node *list = lxg_node_add_sequence(section, "written");
  for (size_t i = 0; i < set->count; i++) {
    struct lxg_node *one = lxg_node_add_mapping(list, NULL);
    lxg_node_add_integer(one, "line", (long long)set->grid[i]->line);
    lxg_node_add_text(one, "source", set->grid[i]->source);
    lxg_node_add_integer(one, "temperatures", (long long)set->grid[i]->temperatures);
    lxg_node_add_integer(one, "densities", (long long)set->grid[i]->densities);
    add_composition(one, &set->grid[i]->composition);
  }
}
