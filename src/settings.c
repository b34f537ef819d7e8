/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * settings.c - defaults, reader and rows, all made from settings.def (see settings.h).
 */
#include "luxgale/settings.h"

#include <stddef.h>

static const struct lxg_setting rows[] = {
#define LXG_SETTING(name, type, value, minimum, maximum, unit, sentence)                                     \
  {#name, LXG_SETTING_##type, (double)(value), (double)(minimum), (double)(maximum), unit, sentence},
#include "luxgale/settings.def"
#undef LXG_SETTING
};

static const char *const names[] = {
#define LXG_SETTING(name, type, value, minimum, maximum, unit, sentence) #name,
#include "luxgale/settings.def"
#undef LXG_SETTING
};

static const size_t offsets[] = {
#define LXG_SETTING(name, type, value, minimum, maximum, unit, sentence) offsetof(struct lxg_settings, name),
#include "luxgale/settings.def"
#undef LXG_SETTING
};

enum { ROWS = sizeof rows / sizeof rows[0] };

void lxg_settings_init(struct lxg_settings *settings) {
#define LXG_SETTING(name, type, value, minimum, maximum, unit, sentence) settings->name = (value);
#include "luxgale/settings.def"
#undef LXG_SETTING
}

static enum lxg_status read_real(struct lxg_node *node, const struct lxg_setting *row, double *field,
                                 struct lxg_error *error) {
  double value = 0.0;
  enum lxg_status status = lxg_node_as_number(node, &value, error);
  if (status == LXG_OK) {
    status = lxg_node_check_range(node, value, row->minimum, row->maximum, row->unit, error);
  }
  if (status == LXG_OK) {
    *field = value;
  }
  return status;
}

static enum lxg_status read_count(struct lxg_node *node, const struct lxg_setting *row, size_t *field,
                                  struct lxg_error *error) {
  long long value = 0;
  enum lxg_status status = lxg_node_as_integer(node, &value, error);
  if (status == LXG_OK) {
    status = lxg_node_check_range(node, (double)value, row->minimum, row->maximum, row->unit, error);
  }
  if (status == LXG_OK) {
    *field = (size_t)value;
  }
  return status;
}

enum lxg_status lxg_settings_read(struct lxg_node *mapping, struct lxg_settings *settings,
                                  struct lxg_error *error) {
  enum lxg_status status = lxg_node_check_keys(mapping, names, ROWS, error);
  for (size_t i = 0; i < ROWS && status == LXG_OK; i++) {
    struct lxg_node *const node = lxg_node_find(mapping, rows[i].name);
    void *const field = (char *)settings + offsets[i];
    if (node != NULL) {
      status = rows[i].type == LXG_SETTING_REAL ? read_real(node, &rows[i], field, error)
                                                : read_count(node, &rows[i], field, error);
    }
  }
  return status;
}

size_t lxg_settings_count(void) {
  return ROWS;
}

const struct lxg_setting *lxg_settings_row(size_t index) {
  return index < ROWS ? &rows[index] : NULL;
}

double lxg_settings_value(const struct lxg_settings *settings, size_t index) {
  const char *const field = (const char *)settings + offsets[index < ROWS ? index : 0];
  return rows[index < ROWS ? index : 0].type == LXG_SETTING_REAL
             ? *(const double *)(const void *)field
             : (double)*(const size_t *)(const void *)field;
}
