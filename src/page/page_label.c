/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * page_label.c - keys and numbers of a report for people (see page.h).
 */
#include "luxgale/page.h"

#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <string.h>

/* Ends of key names and the units they stand for; longer ends first. */
static const struct {
  const char *tail, *unit;
} units[] = {{"_msun_yr", "Msun/yr"},
             {"_erg_s", "erg/s"},
             {"_g_cm_s", "g cm/s"},
             {"_g_cm3", "g/cm3"},
             {"_cm2_g", "cm2/g"},
             {"_km_s", "km/s"},
             {"_g_cm2", "g/cm2"},
             {"_dyn_cm2", "dyn/cm2"},
             {"_erg_g", "erg/g"},
             {"_ledd", "L_Edd"},
             {"_lsun", "Lsun"},
             {"_msun", "Msun"},
             {"_rsun", "Rsun"},
             {"_erg", "erg"},
             {"_cm", "cm"},
             {"_kpc", "kpc"},
             {"_pc", "pc"},
             {"_mag", "mag"},
             {"_k", "K"},
             {"_d", "d"},
             {"_s", "s"},
             {"_g", "g"},
             {"_yr", "yr"}};

/* Words that are not what their letters say. */
static const struct {
  const char *from, *to;
} words_of[] = {{"mass loss", "mass-loss"},
                {"super eddington", "super-Eddington"},
                {"eddington", "Eddington"},
                {"cno", "CNO"}};

static void spell(char *words, size_t size) {
  for (char *c = words; *c != '\0'; c++) {
    *c = *c == '_' ? ' ' : *c;
  }
  for (size_t i = 0; i < sizeof words_of / sizeof words_of[0]; i++) {
    char *const at = strstr(words, words_of[i].from);
    if (at != NULL && strlen(words_of[i].from) == strlen(words_of[i].to) && size > 0) {
      memcpy(at, words_of[i].to, strlen(words_of[i].to));
    }
  }
}

const char *lxg_page_label(const char *key, char *words, size_t size) {
  const size_t length = strlen(key);
  for (size_t i = 0; i < sizeof units / sizeof units[0]; i++) {
    const size_t tail = strlen(units[i].tail);
    if (length > tail && strcmp(key + length - tail, units[i].tail) == 0) {
      const bool when = strcmp(units[i].unit, "d") == 0 && strncmp(key, "peak_", 5) == 0;
      snprintf(words, size, "%s%.*s", when ? "time_of_" : "", (int)(length - tail), key);
      spell(words, size);
      return units[i].unit;
    }
  }
  snprintf(words, size, "%s", key);
  spell(words, size);
  return "";
}

/* The digits come from an integer, so that no locale has a say in the decimal point. */
void lxg_page_number(struct lxg_buffer *out, double value, int digits) {
  if (value == 0.0 || !isfinite(value)) {
    lxg_buffer_text(out, value == 0.0 ? "0" : "-");
    return;
  }
  int power = (int)floor(log10(fabs(value)));
  double mantissa = round(fabs(value) / pow(10.0, power - digits + 1));
  if (mantissa >= pow(10.0, digits)) {
    mantissa /= 10.0;
    power++;
  }
  char text[32];
  snprintf(text, sizeof text, "%lld", (long long)mantissa);
  const bool plain = power >= -3 && power < 6;
  const int point = plain ? power + 1 : 1; /* digits before the point */
  lxg_buffer_text(out, value < 0.0 ? "-" : "");
  size_t last = strlen(text); /* trailing zeros behind the point say nothing more */
  while (last > 1 && text[last - 1] == '0' && (int)last > (point > 0 ? point : 0)) {
    last--;
  }
  if (point <= 0) {
    lxg_buffer_text(out, "0.");
    for (int i = point; i < 0; i++) {
      lxg_buffer_byte(out, '0');
    }
  }
  for (size_t i = 0; i < last || (int)i < point; i++) {
    if (point > 0 && (int)i == point) {
      lxg_buffer_byte(out, '.');
    }
    lxg_buffer_byte(out, i < strlen(text) ? text[i] : '0');
  }
  if (!plain) {
    lxg_buffer_format(out, "e%c%02d", power < 0 ? '-' : '+', power < 0 ? -power : power);
  }
}
