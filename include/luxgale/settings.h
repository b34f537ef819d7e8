/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * settings.h - the tunables of settings.def as a struct, with defaults, a reader and rows for the help.
 */
#ifndef LUXGALE_SETTINGS_H
#define LUXGALE_SETTINGS_H

#include "luxgale/document.h"
#include "luxgale/status.h"

#include <stddef.h>

#define LXG_SETTING_TYPE_REAL double
#define LXG_SETTING_TYPE_COUNT size_t

/* One field a row of settings.def; units and meaning stand there. */
struct lxg_settings {
#define LXG_SETTING(name, type, value, minimum, maximum, unit, sentence) LXG_SETTING_TYPE_##type name;
#include "luxgale/settings.def"
#undef LXG_SETTING
};

enum lxg_setting_type { LXG_SETTING_REAL, LXG_SETTING_COUNT };

/* One row, for help and documents. */
struct lxg_setting {
  const char *name;
  enum lxg_setting_type type;
  double value;            /* default [unit] */
  double minimum, maximum; /* allowed range, ends included [unit] */
  const char *unit;        /* "" for a pure number */
  const char *sentence;
};

/* Every field at its default. */
void lxg_settings_init(struct lxg_settings *settings);

/* Overwrites the fields named in a mapping (the case's `settings:`; NULL for an absent one). LXG_INPUT: "key-unknown" with
 * the nearest setting, "value-number", "value-integer", "value-range". */
enum lxg_status lxg_settings_read(struct lxg_node *mapping, struct lxg_settings *settings,
                                  struct lxg_error *error);

/* Rows: 0 <= index < lxg_settings_count(). */
size_t lxg_settings_count(void);
const struct lxg_setting *lxg_settings_row(size_t index);

/* Value of a row in a struct, counts as doubles. */
double lxg_settings_value(const struct lxg_settings *settings, size_t index);

#endif
