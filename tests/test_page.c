/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_page.c - numbers and labels for people, and the page of a hostile report. Oracle for digits: printf of the C library.
 */
#include "helpers.h"
#include "luxgale/page.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static double back(double value, int digits) {
  struct lxg_buffer out = {0};
  lxg_page_number(&out, value, digits);
  const double read = strtod(out.data, NULL);
  lxg_buffer_free(&out);
  return read;
}

START_TEST(numbers) {
  const double values[] = {4.5512e-6, 639.617, 1.0,    0.0123456, 99999.6, 123456.7, 9.9999e37, -2.385,
                           1e-3,      999.96,  1234.6, 7.0e-300,  1e22,    0.5,      100.0,     31.227203};
  for (size_t i = 0; i < sizeof values / sizeof values[0]; i++) {
    for (int digits = 3; digits <= 6; digits++) {
      char text[64];
      snprintf(text, sizeof text, "%.*e", digits - 1, values[i]);
      assert_close(back(values[i], digits), strtod(text, NULL),
                   1e-12); /* same decimal digits; only their sum rounds */
    }
  }
  struct lxg_buffer out = {0};
  lxg_page_number(&out, 639.617, 4);
  lxg_buffer_byte(&out, ' ');
  lxg_page_number(&out, 4.5512e-6, 4);
  lxg_buffer_byte(&out, ' ');
  lxg_page_number(&out, 0.0, 4);
  lxg_buffer_byte(&out, ' ');
  lxg_page_number(&out, 123456.0, 3);
  lxg_buffer_byte(&out, ' ');
  lxg_page_number(&out, 0.01050, 4);
  ck_assert_str_eq(out.data, "639.6 4.551e-06 0 123000 0.0105");
  lxg_buffer_free(&out);
}
END_TEST

START_TEST(labels) {
  static const struct {
    const char *key, *words, *unit;
  } rows[] = {{"mass_loss_rate_msun_yr", "mass-loss rate", "Msun/yr"},
              {"eddington_luminosity_erg_s", "Eddington luminosity", "erg/s"},
              {"momentum_g_cm_s", "momentum", "g cm/s"},
              {"peak_mass_loss_rate_d", "time of peak mass-loss rate", "d"},
              {"kinetic_share", "kinetic share", ""},
              {"temperature_k", "temperature", "K"},
              {"verdict", "verdict", ""}};
  for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
    char words[64];
    ck_assert_str_eq(lxg_page_label(rows[i].key, words, sizeof words), rows[i].unit);
    ck_assert_str_eq(words, rows[i].words);
  }
  char tight[6];
  lxg_page_label("mass_loss_rate_msun_yr", tight, sizeof tight);
  ck_assert_uint_lt(strlen(tight), sizeof tight);
}
END_TEST

START_TEST(hostile_report) {
  struct lxg_document *report = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_document_create("report", &report, &error), LXG_OK);
  struct lxg_node *root = lxg_document_root(report);
  struct lxg_node *ejecta = lxg_node_add_mapping(root, "ejecta");
  lxg_node_add_text(ejecta, "reason", "<script>alert(1)</script> & \"more\"");
  lxg_node_add_number(ejecta, "mass_msun", 2.385e-5);
  lxg_node_add_number(ejecta, "mass_msun_lo", 1.2e-5);
  lxg_node_add_number(ejecta, "mass_msun_hi", 4.1e-5);
  lxg_node_add_sequence(root, "warnings");
  char svg[] = "<?xml version=\"1.0\"?><!DOCTYPE svg><svg><g id=\"a\"/><use xlink:href='#a'/></svg>";
  const struct lxg_picture picture = {"speed", "A picture.", svg, sizeof svg - 1};
  const struct lxg_page page = {"</title><b>", root, &picture, 1, root};
  struct lxg_buffer html = {0};
  assert_status(lxg_page_write(&page, &html, &error), LXG_OK, &error);
  ck_assert_ptr_null(strstr(html.data, "<script"));
  ck_assert_ptr_null(strstr(html.data, "</title><b>"));
  ck_assert_ptr_nonnull(strstr(html.data, "&lt;script&gt;alert(1)&lt;/script&gt; &amp; &quot;more&quot;"));
  ck_assert_ptr_nonnull(strstr(html.data, "68 %: 1.2e-05 to 4.1e-05"));
  ck_assert_ptr_nonnull(strstr(html.data, "<svg><g id=\"speed-a\"/><use xlink:href='#speed-a'/></svg>"));
  ck_assert_ptr_null(strstr(html.data, "<?xml"));
  lxg_buffer_free(&html);
  lxg_document_destroy(report);
}
END_TEST

Suite *suite_page(void);
Suite *suite_page(void) {
  Suite *suite = suite_create("page");
  TCase *tests = tcase_create("page");
  tcase_add_test(tests, numbers);
  tcase_add_test(tests, labels);
  tcase_add_test(tests, hostile_report);
  suite_add_tcase(suite, tests);
  return suite;
}
