/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * pictures.c - what --plots and --html ask for.
 */
#include "cli.h"

#include "luxgale/output.h"
#include "luxgale/page.h"
#include "luxgale/plots.h"
#include "luxgale/report.h"

static enum lxg_status write_page(const struct cli_request *request, const struct lxg_case *input,
                                  struct lxg_results *results, const struct lxg_plots *plots,
                                  struct lxg_error *error) {
  struct lxg_buffer bytes = {0};
  const struct lxg_page page = {.title = input->title,
                                .report = lxg_document_root(results->report),
                                .picture = plots->picture,
                                .pictures = plots->count,
                                .input = lxg_document_root(input->document)};
  enum lxg_status status = lxg_page_write(&page, &bytes, error);
  if (status == LXG_OK) {
    status = lxg_output_write(request->html, bytes.data, bytes.size, error);
  }
  lxg_buffer_free(&bytes);
  return status;
}

enum lxg_status cli_pictures(const struct cli_request *request, const struct lxg_case *input,
                             struct lxg_results *results, struct lxg_error *error) {
  if (request->plots == NULL && request->html == NULL) {
    return LXG_OK;
  }
  const bool members = results->epochs != NULL && lxg_table_find(results->epochs, "time_d") == NULL;
  const struct lxg_plots_table tables[] = {{members ? "family" : "epochs", results->epochs},
                                           {"family", results->family},
                                           {"structure", results->structure},
                                           {"opacity-map", results->map},
                                           {"shell", results->shell},
                                           {"velocities", results->velocities}};
  const struct lxg_plots_input drawing = {.title = input->title,
                                          .report = lxg_document_root(results->report),
                                          .table = tables,
                                          .tables = sizeof tables / sizeof tables[0]};
  struct lxg_plots plots = {0};
  enum lxg_status status = request->plots != NULL ? lxg_plots_draw(&drawing, request->plots, &plots, error)
                                                  : lxg_plots_draw_inside(&drawing, &plots, error);
  if (status == LXG_OK && plots.remark[0] != '\0') {
    lxg_report_warn(lxg_node_find(lxg_document_root(results->report), "warnings"), "pictures-missing",
                    plots.remark);
  }
  if (status == LXG_OK && request->html != NULL) {
    status = write_page(request, input, results, &plots, error);
  }
  lxg_plots_free(&plots);
  return status;
}
