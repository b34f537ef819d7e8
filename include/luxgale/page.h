/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * page.h - a report as one self-contained HTML page: headline numbers, pictures, warnings and the full input.
 *
 * The page needs nothing but itself: pictures are inline SVG, there is no script and no address of anything elsewhere. It reads on
 * a phone (360 px), in light and dark, and on paper. Every text of the user is escaped.
 */
#ifndef LUXGALE_PAGE_H
#define LUXGALE_PAGE_H

#include "luxgale/document.h"
#include "luxgale/plots.h"
#include "luxgale/status.h"
#include "luxgale/text.h"

#include <stddef.h>

/* What stands on the page. Everything is borrowed. */
struct lxg_page {
  const char *title;       /* text of the user; NULL if none */
  struct lxg_node *report; /* root of the report */
  const struct lxg_picture *picture;
  size_t pictures;
  struct lxg_node *input; /* root of the case as it was given; NULL leaves it out */
};

/* Appends the page. LXG_MEMORY. */
enum lxg_status lxg_page_write(const struct lxg_page *page, struct lxg_buffer *html, struct lxg_error *error);

/* A key of a report as words and unit: "mass_loss_rate_msun_yr" gives "mass-loss rate" and "Msun/yr"; the unit is "" if the name
 * holds none. `words` of `size` bytes is always terminated; the unit is static. */
const char *lxg_page_label(const char *key, char *words, size_t size);

/* Appends a number with `digits` significant digits for people, e.g. "4.55e-06", "639.6". */
void lxg_page_number(struct lxg_buffer *out, double value, int digits);

#endif
