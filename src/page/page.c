/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * page.c - the HTML page of a report (see page.h).
 */
#include "luxgale/page.h"

#include <ctype.h>
#include <math.h>
#include <string.h>

enum { HEADLINE_DIGITS = 4, TABLE_DIGITS = 6 };

static const char style[] =
    ":root{color-scheme:light "
    "dark;--ink:#1c232b;--soft:#59646f;--paper:#fbfaf7;--card:#ffffff;--line:#d8dbe0;--mark:#1d4e89;--warn:#"
    "9a4312}\n"
    "@media(prefers-color-scheme:dark){:root{--ink:#e4e7ea;--soft:#a3adb7;--paper:#15191e;--card:#1e242b;--"
    "line:#3a434d;--mark:#8db9ec;--warn:#f0a873}}\n"
    "*{box-sizing:border-box}body{margin:0;background:var(--paper);color:var(--ink);font:16px/1.5 "
    "system-ui,sans-serif}\n"
    "main{max-width:60rem;margin:0 auto;padding:1.2rem}h1{font-size:1.6rem;line-height:1.25;margin:.4rem "
    "0;overflow-wrap:anywhere}\n"
    "h2{font-size:1.15rem;margin:2rem 0 .6rem;border-bottom:1px solid "
    "var(--line);padding-bottom:.2rem}p{margin:.3rem 0}.soft{color:var(--soft)}\n"
    ".facts{display:grid;grid-template-columns:repeat(auto-fill,minmax(13rem,1fr));gap:.7rem;margin:0;"
    "padding:0}\n"
    ".facts div{background:var(--card);border:1px solid var(--line);border-radius:.4rem;padding:.6rem "
    ".8rem}\n"
    ".facts dt{color:var(--soft);font-size:.85rem}.facts "
    "dd{margin:0;font-size:1.3rem;font-variant-numeric:tabular-nums}\n"
    ".facts dd small{font-size:.8rem;color:var(--soft)}.facts .range{display:block}\n"
    "figure{margin:1rem 0;break-inside:avoid}figure svg{width:100%;height:auto;background:#fff;border:1px "
    "solid var(--line);border-radius:.4rem}\n"
    "figcaption{color:var(--soft);font-size:.9rem}.warn li{color:var(--warn)}code,pre{font:.85rem/1.45 "
    "ui-monospace,monospace}\n"
    "pre{background:var(--card);border:1px solid "
    "var(--line);border-radius:.4rem;padding:.8rem;overflow-x:auto}\n"
    "table{border-collapse:collapse;width:100%;font-size:.9rem}td{padding:.15rem .4rem;border-bottom:1px "
    "solid var(--line);vertical-align:top;overflow-wrap:anywhere}\n"
    "td:last-child{text-align:right;font-variant-numeric:tabular-nums}td.head{font-weight:600;padding-top:."
    "7rem;text-align:left}\n"
    "@media "
    "print{:root{--ink:#000;--soft:#444;--paper:#fff;--card:#fff;--line:#bbb;--mark:#000;--warn:#000}main{"
    "max-width:none;padding:0}body{font-size:10.5pt}"
    "figure svg{width:74%;border:0}pre{white-space:pre-wrap}h2{break-after:avoid}}\n";

static void escape(struct lxg_buffer *out, const char *text) {
  for (const char *c = text; *c != '\0'; c++) {
    switch (*c) {
    case '&':
      lxg_buffer_text(out, "&amp;");
      break;
    case '<':
      lxg_buffer_text(out, "&lt;");
      break;
    case '>':
      lxg_buffer_text(out, "&gt;");
      break;
    case '"':
      lxg_buffer_text(out, "&quot;");
      break;
    default:
      lxg_buffer_byte(out, (unsigned char)*c < 0x20 && *c != '\n' && *c != '\t' ? ' ' : *c);
    }
  }
}

static struct lxg_node *at(struct lxg_node *node, const char *path) {
  char key[64];
  while (node != NULL && path != NULL) {
    const char *const dot = strchr(path, '.');
    const size_t length = dot != NULL ? (size_t)(dot - path) : strlen(path);
    if (length >= sizeof key) {
      return NULL;
    }
    memcpy(key, path, length);
    key[length] = '\0';
    node = lxg_node_find(node, key);
    path = dot != NULL ? dot + 1 : NULL;
  }
  return node;
}

static double number(struct lxg_node *node) {
  const char *const text = lxg_node_is_none(node) ? NULL : lxg_node_text(node);
  double value = NAN;
  if (text != NULL && !lxg_node_is_quoted(node)) {
    lxg_text_parse_number(text, strlen(text), false, &value);
  }
  return value;
}

/* The neighbour of a key whose name ends in `tail`. */
static struct lxg_node *beside(struct lxg_node *report, const char *path, const char *tail) {
  char longer[96];
  const size_t length = strlen(path), more = strlen(tail);
  if (length + more >= sizeof longer) {
    return NULL;
  }
  memcpy(longer, path, length);
  memcpy(longer + length, tail, more + 1);
  return at(report, longer);
}

static const char *last_of(const char *path) {
  const char *const dot = strrchr(path, '.');
  return dot != NULL ? dot + 1 : path;
}

/* One headline number with its interval; nothing where the report has none. */
static void fact(struct lxg_buffer *html, struct lxg_node *report, const char *path, const char *name) {
  const double value = number(at(report, path));
  if (!isfinite(value)) {
    return;
  }
  char words[64];
  const char *const unit = lxg_page_label(last_of(path), words, sizeof words);
  lxg_buffer_format(html, "<div><dt>%s</dt><dd>", name);
  lxg_page_number(html, value, HEADLINE_DIGITS);
  lxg_buffer_format(html, " <small>%s</small>", unit);
  const double low = number(beside(report, path, "_lo")), high = number(beside(report, path, "_hi"));
  if (isfinite(low) && isfinite(high)) {
    lxg_buffer_text(html, "<small class=\"range\">68 %: ");
    lxg_page_number(html, low, HEADLINE_DIGITS - 1);
    lxg_buffer_text(html, " to ");
    lxg_page_number(html, high, HEADLINE_DIGITS - 1);
    lxg_buffer_text(html, "</small>");
  }
  lxg_buffer_text(html, "</dd></div>\n");
}

static void headline(struct lxg_buffer *html, struct lxg_node *report) {
  static const struct {
    const char *path, *name;
  } facts[] = {{"ejecta.mass_msun", "ejected mass"},
               {"ejecta.mean_speed_km_s", "mean speed of the ejecta"},
               {"ejecta.kinetic_energy_erg", "kinetic energy"},
               {"ejecta.wind_duration_d", "duration of the wind"},
               {"ejecta.peak_mass_loss_rate_msun_yr", "largest mass-loss rate"},
               {"ejecta.peak_terminal_speed_km_s", "largest terminal speed"},
               {"super_eddington.duration_d", "above the Eddington luminosity"},
               {"super_eddington.peak_ratio", "peak luminosity over Eddington"},
               {"decline.ejected_mass_msun", "ejected mass"},
               {"decline.burnt_mass_msun", "burnt mass"},
               {"decline.wind_duration_d", "duration of the wind"},
               {"decline.turnoff_d", "turn-off"},
               {"wind.mass_loss_rate_msun_yr", "mass-loss rate"},
               {"wind.terminal_speed_km_s", "terminal speed"},
               {"wind.photosphere.luminosity_ledd", "photospheric luminosity"},
               {"wind.photosphere.radius_rsun", "photospheric radius"},
               {"wind.photosphere.temperature_k", "photospheric temperature"},
               {"wind.envelope_mass_msun", "envelope mass"},
               {"star.mass_msun", "mass of the star"},
               {"star.eddington_luminosity_erg_s", "Eddington luminosity"}};
  static const char *const sections[] = {"ejecta", "decline", "wind", "family"};
  for (size_t i = 0; i < sizeof sections / sizeof sections[0]; i++) {
    struct lxg_node *const section = lxg_node_find(report, sections[i]);
    const char *const reason = lxg_node_text(lxg_node_find(section, "reason"));
    if (reason != NULL) {
      lxg_buffer_text(html, "<p><strong>No answer:</strong> ");
      escape(html, reason);
      lxg_buffer_text(html, ".</p>\n");
    }
  }
  lxg_buffer_text(html, "<dl class=\"facts\">\n");
  for (size_t i = 0; i < sizeof facts / sizeof facts[0]; i++) {
    fact(html, report, facts[i].path, facts[i].name);
  }
  lxg_buffer_text(html, "</dl>\n");
}

/* The SVG element with its identifiers made unique on the page by the picture's name. */
static void inline_svg(struct lxg_buffer *html, const struct lxg_picture *picture) {
  static const char *const before[] = {"id=\"", "id='", "href=\"#", "href='#", "url(#"};
  const char *c = strstr(picture->svg, "<svg");
  while (c != NULL && *c != '\0') {
    size_t length = 0;
    for (size_t i = 0; i < sizeof before / sizeof before[0] && length == 0; i++) {
      const size_t size = strlen(before[i]);
      length = strncmp(c, before[i], size) == 0 ? size : 0;
    }
    if (length > 0) {
      lxg_buffer_append(html, c, length);
      lxg_buffer_format(html, "%s-", picture->name);
      c += length;
    } else {
      lxg_buffer_byte(html, *c++);
    }
  }
}

static void pictures(const struct lxg_page *page, struct lxg_buffer *html) {
  if (page->pictures > 0) {
    lxg_buffer_text(html, "<h2>Pictures</h2>\n");
  }
  for (size_t i = 0; i < page->pictures; i++) {
    const struct lxg_picture *picture = &page->picture[i];
    lxg_buffer_format(html, "<figure id=\"%s\" role=\"group\" aria-label=\"%s\">\n", picture->name,
                      picture->caption);
    inline_svg(html, picture);
    lxg_buffer_format(html, "<figcaption>%s</figcaption></figure>\n", picture->caption);
  }
}

static void warnings(struct lxg_node *report, struct lxg_buffer *html) {
  struct lxg_node *const list = lxg_node_find(report, "warnings");
  lxg_buffer_text(html, "<h2>Warnings</h2>\n");
  if (lxg_node_count(list) == 0) {
    lxg_buffer_text(html, "<p>None.</p>\n");
    return;
  }
  lxg_buffer_text(html, "<ul class=\"warn\">\n");
  for (struct lxg_node *one = lxg_node_first(list); one != NULL; one = lxg_node_next(one)) {
    const char *const message = lxg_node_text(lxg_node_find(one, "message"));
    const char *const code = lxg_node_text(lxg_node_find(one, "code"));
    lxg_buffer_text(html, "<li>");
    escape(html, message != NULL ? message : "");
    lxg_buffer_text(html, " <code>");
    escape(html, code != NULL ? code : "");
    lxg_buffer_text(html, "</code></li>\n");
  }
  lxg_buffer_text(html, "</ul>\n");
}

/* Rows for everything below a node; sections become headings. */
static void rows(struct lxg_node *node, const char *path, struct lxg_buffer *html) {
  for (struct lxg_node *child = lxg_node_first(node); child != NULL; child = lxg_node_next(child)) {
    const char *const key = lxg_node_key(child);
    if (lxg_node_kind(child) == LXG_NODE_MAPPING && key != NULL) {
      struct lxg_buffer below = {0};
      lxg_buffer_format(&below, "%s%s%s", path, path[0] != '\0' ? " / " : "", key);
      if (!below.failed) {
        lxg_buffer_text(html, "<tr><td class=\"head\" colspan=\"2\">");
        escape(html, below.data);
        lxg_buffer_text(html, "</td></tr>\n");
        rows(child, below.data, html);
      }
      lxg_buffer_free(&below);
    } else if (lxg_node_kind(child) == LXG_NODE_SCALAR && key != NULL) {
      char words[96];
      const char *const unit = lxg_page_label(key, words, sizeof words);
      const double value = number(child);
      lxg_buffer_text(html, "<tr><td>");
      escape(html, words);
      lxg_buffer_text(html, "</td><td>");
      if (isfinite(value)) {
        lxg_page_number(html, value, TABLE_DIGITS);
        lxg_buffer_format(html, "%s%s", unit[0] != '\0' ? " " : "", unit);
      } else {
        escape(html, lxg_node_is_none(child) ? "none" : lxg_node_text(child));
      }
      lxg_buffer_text(html, "</td></tr>\n");
    }
  }
}

/* Every section of the report but the echo of the input and the lists. */
static void details(struct lxg_node *report, struct lxg_buffer *html) {
  lxg_buffer_text(html, "<h2>All numbers</h2>\n<table>\n");
  for (struct lxg_node *child = lxg_node_first(report); child != NULL; child = lxg_node_next(child)) {
    const char *const key = lxg_node_key(child);
    if (lxg_node_kind(child) == LXG_NODE_MAPPING && strcmp(key, "case") != 0 && strcmp(key, "program") != 0) {
      lxg_buffer_format(html, "<tr><td class=\"head\" colspan=\"2\">%s</td></tr>\n", key);
      rows(child, key, html);
    }
  }
  lxg_buffer_text(html, "</table>\n");
}

static enum lxg_status document(struct lxg_node *node, const char *title, struct lxg_buffer *html,
                                struct lxg_error *error) {
  struct lxg_buffer yaml = {0};
  const enum lxg_status status = lxg_document_write_yaml(node, false, &yaml, error);
  if (status == LXG_OK) {
    lxg_buffer_format(html, "<h2>%s</h2>\n<pre>", title);
    escape(html, yaml.data != NULL ? yaml.data : "");
    lxg_buffer_text(html, "</pre>\n");
  }
  lxg_buffer_free(&yaml);
  return status;
}

enum lxg_status lxg_page_write(const struct lxg_page *page, struct lxg_buffer *html,
                               struct lxg_error *error) {
  const char *const command = lxg_node_text(at(page->report, "program.command"));
  const char *const version = lxg_node_text(at(page->report, "program.version"));
  const char *const title = page->title != NULL && page->title[0] != '\0' ? page->title : "luxgale report";
  lxg_buffer_text(html, "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n"
                        "<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n"
                        "<link rel=\"icon\" href=\"data:,\">\n<title>");
  escape(html, title);
  lxg_buffer_format(html, "</title>\n<style>\n%s</style>\n</head>\n<body>\n<main>\n<h1>", style);
  escape(html, title);
  lxg_buffer_format(html, "</h1>\n<p class=\"soft\">luxgale %s, command <code>%s</code></p>\n",
                    version != NULL ? version : "", command != NULL ? command : "");
  headline(html, page->report);
  warnings(page->report, html);
  pictures(page, html);
  details(page->report, html);
  enum lxg_status status = LXG_OK;
  if (page->input != NULL) {
    status = document(page->input, "Input", html, error);
  }
  struct lxg_node *const echo = lxg_node_find(page->report, "case");
  if (status == LXG_OK && echo != NULL) {
    status = document(echo, "Input as it was understood, with checksums", html, error);
  }
  lxg_buffer_text(html, "</main>\n</body>\n</html>\n");
  return status == LXG_OK ? lxg_buffer_status(html, error) : status;
}
