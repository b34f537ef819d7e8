/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * wind_names.c - names of held quantities and codes of verdicts (tables in wind.h).
 */
#include "luxgale/wind.h"

const char *lxg_held_name(enum lxg_held quantity) {
  static const char *const names[] = {
#define HELD_NAME(name, key, unit) #key,
      LXG_HELD_LIST(HELD_NAME)
#undef HELD_NAME
  };
  return (int)quantity >= 0 && (int)quantity < (int)LXG_HELD_COUNT ? names[quantity] : NULL;
}

struct reason_row {
  const char *code, *text;
};

static const struct reason_row *reason_row(enum lxg_wind_reason reason) {
  static const struct reason_row rows[] = {
#define REASON_ROW(name, code, text) {code, text},
      LXG_WIND_REASON_LIST(REASON_ROW)
#undef REASON_ROW
  };
  return &rows[(int)reason >= 0 && (int)reason < (int)LXG_WIND_REASON_COUNT ? reason : LXG_WIND_NOT_FOUND];
}

const char *lxg_wind_reason_code(enum lxg_wind_reason reason) {
  return reason_row(reason)->code;
}

const char *lxg_wind_reason_text(enum lxg_wind_reason reason) {
  return reason_row(reason)->text;
}
